--- The stack of a sensor in a gap: package, glue, films, tolerances and temperature added up to the
-- smallest gap that takes it, and the place of the sensing element in that gap.
--
--    local stack = ef.stack_up { sensor = "linear Hall, 100 mT", gap_tolerance = "0.05 mm" }
--    print(stack.worst_case, stack.root_sum_square)
--    local ways = stack:ways_out { part = part, inductance = "180 uH", current = 4.4, trip = 5.2 }
--
-- @module entrefer.stackup
local element = require "entrefer.stackup.element"
local fail = require "entrefer.fail"
local object = require "entrefer.object"
local quantity = require "entrefer.quantity"
local sensor_module = require "entrefer.sensor"
local sums = require "entrefer.stackup.sums"
local ways = require "entrefer.stackup.ways"

local stackup = {}

-- Expansion per kelvin. Common practice, no source: manganese-zinc ferrite 10 to 12e-6, mould compound
-- below its glass transition, filled and unfilled epoxy, polymer film, glass-fibre board through its
-- thickness 50e-6 to 70e-6.
local expansion_default = { core = 11e-6, package = 15e-6, adhesive = 60e-6, insulation = 50e-6,
  spacer = 60e-6 }
local temperature_default = { low = -40, high = 110, assembly = 25 }
-- Glue line and free air to the other face: common practice, no source.
local adhesive_default = { thickness = 0.10e-3, tolerance = 0.05e-3 }
local clearance_default, gap_tolerance_default = 0.10e-3, 0.05e-3
-- A wound post runs warmer than the outer legs: common practice, no source.
local post_rise_default = 15

local fields = { "sensor", "stacked", "adhesive", "insulation", "clearance", "gap_tolerance",
  "gap_kind", "temperature", "expansion", "leg_height", "post_rise", "gap", "element_side" }

local methods = {}
local make, fields_of = object.class("stack-up", methods)

local function table_of(value, known, field)
  if value == nil then return {} end
  fail.fields(value, known, field)
  return value
end

local function read_expansion(spec)
  local known = { "core", "package", "adhesive", "insulation", "spacer" }
  local given, read = table_of(spec.expansion, known, "expansion"), {}
  for _, name in ipairs(known) do
    read[name] = quantity.read(given[name] or expansion_default[name], "1/K", "expansion " .. name,
      { min = -1e-3, max = 1e-3 })
  end
  return read
end

local function read_temperature(spec)
  local given = table_of(spec.temperature, { "low", "high", "assembly" }, "temperature")
  local read = {}
  for _, name in ipairs { "low", "high", "assembly" } do
    read[name] = quantity.read(given[name] or temperature_default[name], "degC",
      "temperature " .. name, { min = -273.15, max = 1000 })
  end
  if read.low > read.high then
    fail("temperature low", read.low, ("at most temperature high, %g degC"):format(read.high))
  end
  return read
end

local function read_adhesive(spec, stacked)
  local given = table_of(spec.adhesive, { "thickness", "tolerance", "layers" }, "adhesive")
  local thickness = quantity.read(given.thickness or adhesive_default.thickness, "m",
    "adhesive thickness", { min = 0 })
  return { thickness = thickness,
    tolerance = quantity.read(given.tolerance or math.min(adhesive_default.tolerance, thickness), "m",
      "adhesive tolerance", { min = 0, max = thickness }),
    layers = quantity.read(given.layers or stacked, "1", "adhesive layers",
      { integer = true, min = stacked, max = 2 * stacked + 1 }) }
end

local function read_insulation(spec, expansion)
  local list = {}
  if spec.insulation ~= nil and type(spec.insulation) ~= "table" then
    fail("insulation", spec.insulation, "a list of { thickness, tolerance, side }")
  end
  for i, entry in ipairs(spec.insulation or {}) do
    local label = "insulation " .. i
    fail.fields(entry, { "name", "thickness", "tolerance", "side", "expansion" }, label)
    local thickness = quantity.read(entry.thickness, "m", label .. " thickness", { positive = true })
    local side = entry.side or "glued"
    if side ~= "glued" and side ~= "open" then
      fail.unknown(label .. " side", tostring(side), { "glued", "open" })
    end
    list[i] = { name = entry.name or label, thickness = thickness, side = side,
      tolerance = quantity.read(entry.tolerance or 0, "m", label .. " tolerance",
        { min = 0, max = thickness }),
      expansion = quantity.read(entry.expansion or expansion.insulation, "1/K", label .. " expansion") }
  end
  return list
end

local function read_choice(value, default, field, known)
  value = value or default
  for _, one in ipairs(known) do
    if one == value then return value end
  end
  fail.unknown(field, tostring(value), known)
end

local function read_spec(spec)
  local stacked = quantity.read(spec.stacked or 1, "1", "stacked", { integer = true, min = 1, max = 4 })
  local expansion = read_expansion(spec)
  return {
    sensor = sensor_module.of(spec.sensor, "sensor"), stacked = stacked, expansion = expansion,
    adhesive = read_adhesive(spec, stacked), insulation = read_insulation(spec, expansion),
    temperature = read_temperature(spec),
    clearance = quantity.read(spec.clearance or clearance_default, "m", "clearance", { min = 0 }),
    gap_tolerance = quantity.read(spec.gap_tolerance or gap_tolerance_default, "m", "gap_tolerance",
      { min = 0 }),
    gap_kind = read_choice(spec.gap_kind, "ground", "gap_kind", { "ground", "spacer", "sawn" }),
    element_side = read_choice(spec.element_side, "open", "element_side", { "open", "glued" }),
    leg_height = spec.leg_height and quantity.read(spec.leg_height, "m", "leg_height",
      { positive = true }),
    post_rise = quantity.read(spec.post_rise or post_rise_default, "K", "post_rise"),
  }
end

--- Adds up the stack of a sensor in a gap.
--
-- Tolerances are half widths around the middle of each range. Worst case adds them; the root sum square
-- takes them as independent and of one coverage. Movements with temperature are systematic: they add
-- with their sign in both. Beside the glue on one face there is only the clearance to the other.
-- @tparam table spec
--   `sensor` (object, class or table; a normal axis takes its thickness, an in-plane one its standing
--   height); `stacked` (packages on top of each other, 1 to 4); `adhesive` = `{ thickness, tolerance (m),
--   layers (default one below each package) }`; `insulation` = list of `{ name, thickness, tolerance (m),
--   side = "glued" | "open", expansion (1/K) }`; `clearance` (m, air that must remain); `gap_tolerance`
--   (m, half width); `gap_kind` ("ground", "spacer", "sawn": a spacer's expansion opens a gap, else the
--   core's); `temperature` = `{ low, high, assembly }` (degC); `expansion` = `{ core, package, adhesive,
--   insulation, spacer }` (1/K; defaults common practice, no source); `leg_height` (m, of the gapped leg,
--   without it no closing by its warmth) and `post_rise` (K, leg over the outer legs); `gap` (m, the gap
--   in which the element's place is wanted; default the worst case); `element_side` ("open": the face
--   from which the element's depth counts looks away from the glue)
-- @treturn stack-up `items` = list of `{ item, count, nominal (m, each), tolerance (m, each), thermal (m,
--   of all) }`, `nominal`, `tolerance` (worst), `tolerance_rss`, `thermal` (m), `temperature_of_thermal`
--   (degC at which it is largest), `worst_case`, `root_sum_square` (m, smallest nominal gap), `elements`
--   = list of `{ position (m from the gap's middle, positive away from the glued face), tolerance,
--   tolerance_rss (m) }`, `notes`
-- @raise an error table naming the field
function stackup.new(spec)
  if type(spec) ~= "table" then fail("stack_up", spec, "a table with sensor") end
  fail.fields(spec, fields, "stack_up")
  local self = read_spec(spec)
  self.spec = object.snapshot(spec)
  for name, value in pairs(sums.of(self)) do self[name] = value end
  self.gap = spec.gap and quantity.read(spec.gap, "m", "gap", { positive = true }) or self.worst_case
  self.elements, self.notes = element.places(self, self.gap)
  return make(self)
end

--- The element's place in another gap.
-- @tparam number|string gap m
-- @treturn table list as `elements`
function methods:places(gap)
  return (element.places(fields_of(self), quantity.read(gap, "m", "gap", { positive = true })))
end

--- Smallest gap with independent extra tolerances in the stack.
-- @string basis "worst case" or "root sum square"
-- @tparam[opt] table extra list of half widths, m
-- @treturn number m
function methods:smallest_gap(basis, extra)
  return sums.smallest_gap(fields_of(self), basis, extra)
end

--- Compares the smallest gap with the gap that the inductance wants, and works out the ways to bring
-- them together, each from a part of its own; see `entrefer.stackup.ways`.
function methods:ways_out(request)
  return ways.out(self, request)
end

--- A changed copy.
-- @tparam table changes fields as in `new`
-- @treturn stack-up
function methods:with(changes)
  fail.fields(changes, fields, "stack_up")
  return stackup.new(object.changed(fields_of(self).spec, changes))
end

return stackup
