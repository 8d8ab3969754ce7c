--- Magnetic sensors: generic classes and own cards, and the static law from flux density to voltage.
-- @module entrefer.sensor
local cards = require "entrefer.data.sensors"
local fail = require "entrefer.fail"
local object = require "entrefer.object"
local quantity = require "entrefer.quantity"

local sensor = {}

-- name = { unit, options }; a table of quantities has its keys listed under `parts`.
local schema = {
  sensitivity = { "V/T", { positive = true } }, range = { "T", { positive = true } },
  supply = { "V", { positive = true } }, offset = { "V" },
  element_depth = { "m", { min = 0 } }, noise_density = { "T/rtHz", { min = 0 } },
  bandwidth = { "Hz", { positive = true } }, delay = { "s", { min = 0 } },
  gain_tolerance = { "1", { min = 0 } }, gain_drift = { "1/K", { min = 0 } },
  offset_drift = { "T", { min = 0 } }, life = { "1", { min = 0 } },
  hysteresis = { "1", { min = 0 } }, self_heating = { "K", { min = 0 } },
  gain_match = { "1", { min = 0 } }, headroom = { "V", { min = 0 } },
  elements = { "1", { integer = true, min = 1, max = 2 } },
  sign = { "1", { min = -1, max = 1 } },
}
local other_fields = { "name", "axis", "ratiometric", "thickness", "standing_height",
  "temperature_range", "package", "note", "source", "die", "pad" }
local required = { "sensitivity", "range", "thickness" }

local known = {}
for name in pairs(schema) do known[#known + 1] = name end
for _, name in ipairs(other_fields) do known[#known + 1] = name end
table.sort(known)

local methods = {}
local make, fields_of = object.class("sensor", methods)

local function read_limits(value, field)
  if type(value) ~= "table" then
    local one = quantity.read(value, "m", field, { positive = true })
    return { min = one, nom = one, max = one }
  end
  fail.fields(value, { "min", "nom", "max" }, field)
  local read = {}
  for _, key in ipairs { "min", "nom", "max" } do
    read[key] = quantity.read(value[key], "m", field .. " " .. key, { positive = true })
  end
  if not (read.min <= read.nom and read.nom <= read.max) then
    fail(field, read.nom, "min <= nom <= max")
  end
  return read
end

local function read_temperatures(range)
  range = range or { -40, 125 }
  if type(range) ~= "table" then fail("sensor temperature range", range, "a list { low, high }") end
  local low = quantity.read(range[1], "degC", "sensor temperature range, low")
  return { low, quantity.read(range[2], "degC", "sensor temperature range, high", { min = low }) }
end

local function build(spec)
  fail.fields(spec, known, "sensor")
  for _, name in ipairs(required) do
    if spec[name] == nil then fail.text("sensor " .. name, ("sensor %s is missing"):format(name)) end
  end
  local read = { spec = object.snapshot(spec) }
  for _, name in ipairs(other_fields) do read[name] = spec[name] end
  for name, rule in pairs(schema) do
    if spec[name] ~= nil then
      read[name] = quantity.read(spec[name], rule[1], "sensor " .. name:gsub("_", " "), rule[2])
    end
  end
  read.axis = read.axis or "normal"
  if read.axis ~= "normal" and read.axis ~= "in-plane" then
    fail.unknown("sensor axis", tostring(read.axis), { "normal", "in-plane" })
  end
  read.thickness = read_limits(spec.thickness, "sensor thickness")
  if spec.standing_height then
    read.standing_height = read_limits(spec.standing_height, "sensor standing height")
  end
  read.temperature_range = read_temperatures(spec.temperature_range)
  read.supply = read.supply or 5
  read.offset = read.offset or read.supply / 2
  read.sign, read.headroom = read.sign or 1, read.headroom or 0.2
  read.elements = read.elements or 1
  read.source = spec.source or "user"
  return make(read)
end

--- A sensor.
-- @tparam string|table spec the name of a generic class ("linear Hall, 100 mT"), or a table:
--   required `sensitivity` (V/T), `range` (T, full scale either way), `thickness` (m, or `{ min, nom,
--   max }`); optional `axis` ("normal" to the package or "in-plane"), `standing_height` (m: room that
--   an in-plane sensor takes across the gap), `element_depth` (m below the package's face), `supply`
--   (V), `ratiometric`, `offset` (V at zero field; default half the supply), `headroom` (V to the
--   rails), `noise_density` (T/rtHz), `bandwidth` (Hz), `delay` (s), `gain_tolerance`, `gain_drift`
--   (1/K), `offset_drift` (T), `life` (share), `hysteresis`, `self_heating` (K), `sign`, `elements`,
--   `temperature_range` ({ low, high } degC), `die`, `pad`, `note`
-- @treturn sensor
-- @raise an error table naming the field
function sensor.new(spec)
  if type(spec) == "table" then return build(spec) end
  if type(spec) ~= "string" then fail("sensor", spec, "the name of a class or a table") end
  return build(object.changed(object.named(cards, spec, "sensor"), { source = cards.source }))
end

--- The sensor itself, or a new one from what `sensor.new` takes.
function sensor.of(value, field)
  if value == nil then fail.text(field or "sensor", (field or "sensor") .. " is missing") end
  if type(value) == "table" and fields_of(value) then return value end
  return sensor.new(value)
end

--- Names of the generic classes.
function sensor.names()
  local names = {}
  for i, card in ipairs(cards) do names[i] = card.name end
  return names
end

--- Room that the package takes along the flux, m: its thickness for a normal axis; an in-plane
-- sensor stands across the gap.
-- @treturn table `{ min, nom, max }`
function methods:room()
  local fields = fields_of(self)
  if fields.axis == "normal" then return fields.thickness end
  return fields.standing_height or fields.thickness
end

--- Output for a flux density along the sensitive axis.
-- @number flux_density T
-- @tparam[opt] table at `supply` (V; a ratiometric sensor scales with it)
-- @treturn number voltage, V, limited to the rails less the headroom
-- @treturn boolean whether the flux density is beyond the range or the output at a rail
function methods:voltage(flux_density, at)
  local fields = fields_of(self)
  flux_density = quantity.read(flux_density, "T", "flux density")
  local supply = at and at.supply and
    quantity.read(at.supply, "V", "supply", { positive = true }) or fields.supply
  local scale = fields.ratiometric and supply / fields.supply or 1
  local free = scale * (fields.offset + fields.sign * fields.sensitivity * flux_density)
  local low, high = fields.headroom, supply - fields.headroom
  local voltage = math.min(math.max(free, low), high)
  return voltage, voltage ~= free or math.abs(flux_density) > fields.range
end

--- A changed copy.
function methods:with(changes)
  return build(object.changed(fields_of(self).spec, changes))
end

return sensor
