--- The gap that a sensor needs against the gap that an inductance wants, and the ways to bring them
-- together, each worked out with a part of its own.
-- @module entrefer.stackup.ways
local fail = require "entrefer.fail"
local part_module = require "entrefer.part"
local places = require "entrefer.stackup.places"
local quantity = require "entrefer.quantity"
local trial = require "entrefer.stackup.trial"
local turns = require "entrefer.stackup.turns"

local ways = {}

local request_fields = { "part", "inductance", "current", "trip", "temperature", "flux_density",
  "basis", "cores", "sensors", "pocket", "beside", "range_use", "resistance_ratio" }
local pocket_fields = { "diameter", "most_depth", "step", "tolerance" }
-- Common practice, no source: a pocket for a three-lead plate package and what a grinder holds.
local pocket_default = { diameter = 5e-3, most_depth = 1e-3, step = 0.05e-3, tolerance = 0.05e-3 }

local function read_pocket(given)
  given = given or {}
  fail.fields(given, pocket_fields, "pocket")
  local read = {}
  for name, default in pairs(pocket_default) do
    read[name] = quantity.read(given[name] or default, "m", "pocket " .. name, { positive = true })
  end
  return read
end

local function read_part(value)
  local part = part_module.of(value, "part")
  if #part.windings ~= 1 then fail("number of windings", #part.windings, "one") end
  if #part.gap_entries ~= 1 then
    fail("number of gaps", #part.gap_entries, "one entry: the gap that takes the sensor")
  end
  if part.gap_entries[1].pocket then
    fail.text("gap 1 pocket", "the part has a pocket already; give it without: the pocket is one of the"
      .. " ways worked out")
  end
  return part
end

local function read_request(request)
  fail.fields(request, request_fields, "ways_out")
  local current = quantity.read(request.current, "A", "current", { positive = true })
  local part = read_part(request.part)
  local temperature = quantity.read(request.temperature or 100, "degC", "temperature")
  return {
    part = part, current = current, temperature = temperature, basis = request.basis or "worst case",
    inductance = quantity.read(request.inductance, "H", "inductance", { positive = true }),
    trip = quantity.read(request.trip or current, "A", "trip", { min = current }),
    -- Four fifths of saturation, as in the design flow.
    flux_density = quantity.read(request.flux_density or 0.8 * part.material:saturation(temperature),
      "T", "flux_density", { positive = true }),
    range_use = quantity.read(request.range_use or 0.8, "1", "range_use", { positive = true, max = 1 }),
    -- Above four times the copper loss another core is cheaper (common practice, no source).
    resistance_ratio = quantity.read(request.resistance_ratio or 4, "1", "resistance_ratio", { min = 1 }),
    beside = quantity.read(request.beside or 1e-3, "m", "beside", { positive = true }),
    pocket = read_pocket(request.pocket), cores = request.cores, sensors = request.sensors,
  }
end

local methods_in_order = { turns.as_wanted, turns.longer_gap, turns.more_turns, turns.smaller_core,
  places.pocket, places.beside, places.outer_leg, places.other_count, places.thinner_sensor }

--- Works out the ways.
-- @param stack stack-up
-- @tparam table request
--   `part` (core, material, one gap entry, one winding; the gap's length is of no account), `inductance`
--   (H) wanted at `current` (A), `trip` (A; default the current), `temperature` (degC of the hot part,
--   default 100), `flux_density` (T, limit in the core at the trip current; default 80 % of saturation),
--   `basis` ("worst case", default, or "root sum square"), `range_use` (share of a sensor's range that
--   the trip current may use, default 0.8), `resistance_ratio` (most times the resistance of the part
--   given, default 4), `cores` (list; default the smaller sizes of the family),
--   `sensors` (list; default the generic classes), `pocket` = `{ diameter, most_depth, step, tolerance }`
--   (m; default 5, 1, 0.05, 0.05 mm), `beside` (m from the pole's edge to the element, default 1 mm)
-- @treturn table `needed` (m, smallest gap by the basis), `wanted` (m, gap for the inductance at the
--   turns given), `fits`, `saturates` (whether that gap leaves the core above its limit), `limit` (T),
--   `basis`, `ways` = list of `{ name, feasible, why, turns, gap (m, each),
--   core (name), sensor (name), inductance (H, at the current), flux_density_per_ampere (T/A at the
--   element, from the current), core_flux_density (T, at the trip current), clear_height (m; nil beside
--   the gap), needed (m), resistance_ratio (dc, to the part given, with the same share of the window
--   filled by copper), same_wire_fits (nil without a wire), range_needed (T), range_fits, share (of the
--   field in the gap, beside), effect (pocket: of the depth tolerance), part }`; a way that can't be
--   built has its reason and no numbers
-- @raise an error table naming the field, or when the inductance is out of reach of any gap
function ways.out(stack, request)
  fail.fields(request or {}, request_fields, "ways_out")
  local read = read_request(request or {})
  local context = trial.prepare(stack, read)
  local list = {}
  for i, way in ipairs(methods_in_order) do list[i] = way(context) end
  return { needed = context.needed, wanted = context.wanted, fits = list[1].feasible,
    saturates = context.saturates, limit = read.flux_density, basis = read.basis, ways = list }
end

return ways
