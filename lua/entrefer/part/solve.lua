--- Solving a part's network and naming the results.
-- @module entrefer.part.solve
local core = require "entrefer.core"
local estimate = require "entrefer.part.estimate"
local fail = require "entrefer.fail"
local object = require "entrefer.object"
local quantity = require "entrefer.quantity"

local solve = {}

local mu0 = core.mu0
local request_fields = { "current", "temperature", "remanence", "only", "warm" }
local scalar_names = { "flux_linkage", "inductance", "incremental_inductance", "energy",
  "coenergy", "core_flux_density", "gap_flux_density" }

local function number(value, unit, field)
  if type(value) == "number" and value == value and value - value == 0 then return value end
  return quantity.read(value, unit, field)
end

--- Currents as the solver wants them: a number for one winding, else a list.
function solve.currents(part, current, into)
  local count = #part.windings
  if count == 1 and type(current) ~= "table" then return number(current, "A", "current") end
  if type(current) ~= "table" then
    fail("current", current, ("a list of %d currents, one for each winding"):format(count))
  end
  local list = into or {}
  for i = 1, count do
    if current[i] == nil then
      fail("number of currents", #current, count .. ", one for each winding")
    end
    list[i] = number(current[i], "A", "current")
  end
  if #current > count then
    fail("number of currents", #current, count .. ", one for each winding")
  end
  return list
end

--- Temperatures of a request: one number, or `{ core=, winding=, sensor= }`; default 25 degC.
function solve.temperatures(value)
  if type(value) ~= "table" then
    local t = number(value or 25, "degC", "temperature")
    return t, t, t
  end
  fail.fields(value, { "core", "winding", "sensor" }, "temperature")
  local at_core = number(value.core or 25, "degC", "temperature of the core")
  return at_core, number(value.winding or at_core, "degC", "temperature of the winding"),
    number(value.sensor or at_core, "degC", "temperature of the sensor")
end

local function check_request(at)
  if type(at) ~= "table" then fail("request", at, "a table such as { current = 12 }") end
  for key in pairs(at) do
    if key ~= "current" and key ~= "temperature" then
      fail.fields(at, request_fields, "solve")
      return
    end
  end
end

local function run(part, at, warm)
  local current = solve.currents(part, at.current)
  local temperature = solve.temperatures(at.temperature)
  local card = part.material
  local law = card:law(temperature)
  local coercive
  if at.remanence and at.remanence ~= 0 then
    local share = quantity.read(at.remanence, "1", "remanence", { min = -1, max = 1 })
    local field = card:coercive_field_at(temperature)
    if not field then
      fail.text("remanence", ("remanence needs a coercive field, which %s doesn't give")
        :format(tostring(card)))
    end
    coercive = share * field
  end
  local iterations, residual = part.solver:solve(current, law, warm, coercive)
  return current, temperature, law, iterations, residual
end

local function limb_record(part, limb)
  local largest, where, mean, drop = part.solver:span(limb.first, limb.last)
  return { flux_density = largest, position = part.positions[where], mean = mean, drop = drop }
end

local function unit_record(solver, unit)
  local drop, flux, _, _, force = solver:element(unit.element)
  local plain = mu0 * drop / unit.length
  return { flux_density = plain * unit.face, centre_flux_density = plain * unit.centre_field,
    flux = flux, drop = drop, force = force }
end

-- The entry's first gap speaks for it; entries with several gaps carry all of them.
local function gap_record(solver, entry)
  local record = unit_record(solver, entry.units[1])
  if #entry.units > 1 then
    record.units = {}
    for i, unit in ipairs(entry.units) do
      local one = unit_record(solver, unit)
      one.leg, one.position = unit.leg, unit.z
      record.units[i] = one
    end
  end
  return record
end

-- Turns around one window: of a winding on both outer legs, those of one leg.
local function window_turns(part, winding)
  local outer = part.topology == "three_leg" and winding.legs.left and winding.legs.right
  return outer and winding.turns / 2 or winding.turns
end

-- With several windings the plain estimate counts the ampere-turns that aid winding 1.
local function ampere_turns(part, current)
  local sum = 0
  for i, winding in ipairs(part.windings) do
    local _, share = next(winding.legs)
    local one = type(current) == "number" and current or current[i]
    sum = sum + (share < 0 and -1 or 1) * window_turns(part, winding) * one
  end
  return sum
end

local function estimate_record(part, current, law, result)
  local turns = window_turns(part, part.windings[1])
  local plain = estimate.at(part.plain, turns, ampere_turns(part, current) / turns,
    law:permeability())
  local first = result.gaps[1]
  local inductance = type(result.inductance) == "table" and result.inductance[1][1]
    or result.inductance
  plain.ratio = {
    inductance = inductance / plain.inductance,
    flux_density = plain.flux_density ~= 0 and first
      and first.centre_flux_density / plain.flux_density or nil,
    core_flux_density = plain.flux_density ~= 0
      and result.core_flux_density / plain.flux_density or nil,
  }
  return plain
end

local function largest_limb(result, part)
  local largest, name = 0, part.limbs[1].name
  for _, limb in ipairs(part.limbs) do
    local density = result[limb.name].flux_density
    if math.abs(density) > math.abs(largest) * (1 + 1e-12) then largest, name = density, limb.name end
  end
  return largest, name
end

local function linkages(part)
  local solver = part.solver
  if #part.windings == 1 then return solver:linkage(1) end
  local list = {}
  for i = 1, #part.windings do list[i] = solver:linkage(i) end
  return list
end

local function full_record(part, current, temperature, law, iterations, residual)
  local solver = part.solver
  local result = {
    current = current, temperature = temperature,
    flux_linkage = linkages(part),
    inductance = solver:inductance(false),
    incremental_inductance = solver:inductance(true),
    limbs = {}, gaps = {}, warnings = object.snapshot(part.notes),
    method = object.snapshot(part.method),
    error = { residual = residual, iterations = iterations },
  }
  result.energy, result.coenergy = solver:energy()
  for _, limb in ipairs(part.limbs) do result.limbs[limb.name] = limb_record(part, limb) end
  for i, entry in ipairs(part.gap_entries) do result.gaps[i] = gap_record(solver, entry) end
  result.core_flux_density, result.core_flux_density_limb = largest_limb(result.limbs, part)
  result.estimate = estimate_record(part, current, law, result)
  return result
end

local scalars = {
  flux_linkage = linkages,
  inductance = function(part) return part.solver:inductance(false) end,
  incremental_inductance = function(part) return part.solver:inductance(true) end,
  energy = function(part) return (part.solver:energy()) end,
  coenergy = function(part) return select(2, part.solver:energy()) end,
  core_flux_density = function(part)
    local largest = 0
    for _, limb in ipairs(part.limbs) do
      local density = part.solver:span(limb.first, limb.last)
      if math.abs(density) > math.abs(largest) then largest = density end
    end
    return largest
  end,
  gap_flux_density = function(part)
    local entry = part.gap_entries[1]
    if not entry then return nil end
    local unit = entry.units[1]
    return mu0 * part.solver:element(unit.element) / unit.length * unit.centre_field
  end,
}

local function names_of(only)
  if type(only) ~= "table" then fail("only", only, "a list of names") end
  return only
end

local function pick(name)
  return scalars[name] or fail.unknown("only", tostring(name), scalar_names)
end

--- See `part:solve` in `entrefer.part`.
function solve.once(part, at)
  check_request(at)
  local current, temperature, law, iterations, residual = run(part, at, at.warm)
  if at.only then
    local result = {}
    for _, name in ipairs(names_of(at.only)) do result[name] = pick(name)(part) end
    return result
  end
  return full_record(part, current, temperature, law, iterations, residual)
end

local function sweep_points(range)
  if type(range) ~= "table" then
    fail("current", range, "a list of currents or { from =, to =, points = }")
  end
  if range.from == nil then return range end
  fail.fields(range, { "from", "to", "points" }, "current")
  local from, to = number(range.from, "A", "current from"), number(range.to, "A", "current to")
  local points = quantity.read(range.points or 41, "1", "points",
    { integer = true, min = 2, max = 1000000 })
  local list = {}
  for i = 1, points do list[i] = from + (to - from) * (i - 1) / (points - 1) end
  return list
end

local sweep_default = { "flux_linkage", "inductance", "incremental_inductance",
  "core_flux_density", "gap_flux_density" }

--- See `part:sweep` in `entrefer.part`.
function solve.sweep(part, at)
  fail.fields(at, request_fields, "sweep")
  local temperature = solve.temperatures(at.temperature)
  local names = names_of(at.only or sweep_default)
  local readers, columns = {}, { current = {}, temperature = temperature }
  for i, name in ipairs(names) do
    readers[i] = pick(name)
    columns[name] = {}
  end
  local request = { temperature = temperature, remanence = at.remanence }
  for i, value in ipairs(sweep_points(at.current)) do
    request.current = value
    -- Each point starts from the one before: fewer steps, the same minimum.
    columns.current[i] = run(part, request, i > 1)
    for k, name in ipairs(names) do columns[name][i] = readers[k](part) end
  end
  return columns
end

return solve
