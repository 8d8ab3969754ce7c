--- A sensor placed in the gap of a part: what it reads at a current and temperature.
--
-- The flux density at the element is not the gap's mean: it is the field in the middle of the gap
-- (pocket and ring included) times the fall toward the pole's edge, by the conformal profile of the
-- middle plane. Fringing makes the gap's permeance larger and this field smaller.
-- @module entrefer.probe
local core = require "entrefer.core"
local fail = require "entrefer.fail"
local object = require "entrefer.object"
local part_module = require "entrefer.part"
local quantity = require "entrefer.quantity"
local sensor_module = require "entrefer.sensor"
local solve = require "entrefer.part.solve"

local probe = {}

local fields = { "part", "sensor", "gap", "leg", "position", "tilt" }
local methods = {}
local make, fields_of = object.class("probe", methods)

local function find_unit(part, spec)
  local index = quantity.read(spec.gap or 1, "1", "probe gap", { integer = true, min = 1 })
  local entry = part.gap_entries[index]
  if not entry then
    fail("probe gap", index, #part.gap_entries > 0
      and ("a gap of the part, 1 to %d"):format(#part.gap_entries) or "none: the part has no gap")
  end
  if not spec.leg then return entry.units[1], index end
  local legs = {}
  for i, unit in ipairs(entry.units) do
    legs[i] = unit.leg
    if unit.leg == spec.leg then return unit, index end
  end
  fail.unknown("probe leg", tostring(spec.leg), legs)
end

-- Beside the pole the package has all the room it wants.
local function beside_pole(unit, place)
  local pole = unit.pole
  if pole.shape == "round" then return place.x ^ 2 + place.y ^ 2 > (pole.width / 2) ^ 2 end
  return math.abs(place.x) > pole.width / 2 or math.abs(place.y) > pole.depth / 2
end

local function check_room(sensor, unit, place)
  local room = sensor:room()
  if room.max > unit.local_length and not beside_pole(unit, place) then
    fail("sensor thickness", room.max, ("at most %.4g m, the clear height of the gap%s"):format(
      unit.local_length, unit.entry.pocket and " with its pocket" or ""))
  end
end

-- Flux density at (x, y, z) relative to the middle of the gap.
local function profile(part, unit, place)
  local x, y, z = place.x, place.y, place.z
  if unit.radial_slope then
    return 1 + unit.radial_slope * x, math.abs(x) <= unit.pole.width / 4
      and math.abs(y) <= unit.pole.depth / 4
  end
  local pocket = unit.pocket
  local radius = math.sqrt(x * x + y * y)
  if pocket and radius < pocket.diameter / 2 then
    return core.pocket_field(pocket, unit.length, radius, z) / unit.centre_field, true
  end
  local relative, valid = core.gap_midplane(unit.shape, x, y)
  -- Beside a pocket the gap has its plain height again.
  return relative / unit.centre_field, valid and math.abs(z) <= unit.length / 4 and part ~= nil
end

--- Places a sensor.
-- @tparam table spec `part`, `sensor` (objects, or what their constructors take), `gap` (index,
--   default 1), `leg` (of a gap in several legs), `position` = { x, y, z } (m from the middle of the
--   gap: x across the leg in the plane of the section, ring: radially outward; z along the flux),
--   `tilt` (rad against the flux)
-- @treturn probe with `part`, `sensor`, `relative_field` (field at the element relative to the
--   middle of the gap) and `warnings`
-- @raise an error table when the package is thicker than the gap, or the gap isn't there
function probe.new(spec)
  if type(spec) ~= "table" then fail("probe", spec, "a table") end
  fail.fields(spec, fields, "probe")
  local part = part_module.of(spec.part, "part")
  local sensor = sensor_module.of(spec.sensor, "sensor")
  local unit, index = find_unit(part, spec)
  local place = {}
  fail.fields(spec.position or {}, { "x", "y", "z" }, "position")
  for _, axis in ipairs { "x", "y", "z" } do
    place[axis] = quantity.read((spec.position or {})[axis] or 0, "m", "position " .. axis)
  end
  check_room(sensor, unit, place)
  if math.abs(place.z) > unit.local_length / 2 then
    fail("position z", place.z, ("within %.4g m of the gap's middle"):format(unit.local_length / 2))
  end
  local tilt = quantity.read(spec.tilt or 0, "rad", "tilt", { min = -math.pi / 2, max = math.pi / 2 })
  local relative, valid = profile(part, unit, place)
  local warnings = {}
  if not valid then
    warnings[1] = "the place is outside the range of the closed field profile: use a field solution"
  end
  return make { part = part, sensor = sensor, gap = index, unit = unit, position = place,
    tilt = tilt, relative_field = relative * math.cos(tilt), warnings = warnings,
    spec = object.snapshot(spec) }
end

--- Reads the sensor.
-- @tparam table at `current` (A), `temperature` (degC, or { core=, sensor= }), `remanence`,
--   `supply` (V)
-- @treturn table `voltage` (V), `flux_density` (T, at the element along its axis), `clipped`,
--   `estimate` (mu0 N I / gap, T), `ratio` (flux density / estimate), `warnings`
-- @raise an error table
function methods:read(at)
  fail.fields(at, { "current", "temperature", "remanence", "supply" }, "read")
  local self_fields = fields_of(self)
  local _, _, at_sensor = solve.temperatures(at.temperature)
  local solved = self_fields.part:solve { current = at.current, temperature = at.temperature,
    remanence = at.remanence }
  local unit = self_fields.unit
  local record = solved.gaps[self_fields.gap]
  if record.units then
    for _, one in ipairs(record.units) do
      if one.leg == unit.leg and one.position == unit.z then record = one end
    end
  end
  local density = record.centre_flux_density * self_fields.relative_field
  local voltage, clipped = self_fields.sensor:voltage(density, at)
  local warnings = { table.unpack(self_fields.warnings) }
  local range = self_fields.sensor.temperature_range
  if at_sensor < range[1] or at_sensor > range[2] then
    warnings[#warnings + 1] = ("sensor temperature %g degC is outside %g to %g degC"):format(at_sensor,
      range[1], range[2])
  end
  return { voltage = voltage, flux_density = density, clipped = clipped,
    estimate = solved.estimate.flux_density,
    ratio = solved.estimate.flux_density ~= 0 and density / solved.estimate.flux_density or nil,
    warnings = warnings }
end

--- A changed copy.
function methods:with(changes)
  return probe.new(object.changed(fields_of(self).spec, changes))
end

return probe
