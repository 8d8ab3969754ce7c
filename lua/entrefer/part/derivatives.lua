--- Derivatives of a part's results with respect to its gap lengths, turns, iron areas and
-- permeability, from the factorisation of the solution (no differences).
-- @module entrefer.part.derivatives
local core = require "entrefer.core"
local fail = require "entrefer.fail"
local object = require "entrefer.object"
local solve = require "entrefer.part.solve"

local derivatives = {}

-- Elements of the branches, with their numbers.
local function each_element(part, visit)
  local number = 0
  for index, branch in ipairs(part.branches) do
    for _, element in ipairs(branch.elements) do
      number = number + 1
      visit(number, element, index)
    end
  end
end

-- The part with gap `index` changed to a length.
local function with_gap(part, fields, index, length)
  local list = object.changed(fields.spec.gaps, {})
  list[index] = object.changed(list[index], { length = length })
  return part:with { gaps = list }
end

local element_parameters = { "length", "area", "bypass", "permeance", "by_length" }

local function compare_elements(lower, upper, step)
  local changes, above = {}, {}
  each_element(upper, function(number, element) above[number] = element end)
  each_element(lower, function(number, element)
    local change, other = { element = number }, above[number]
    for _, name in ipairs(element_parameters) do
      if element[name] then change[name] = (other[name] - element[name]) / step end
    end
    changes[number] = change
  end)
  return changes
end

local function compare_turns(lower, upper, windings, step)
  local turns = {}
  for number, branch in ipairs(lower.branches) do
    local below, above = branch.turns or {}, upper.branches[number].turns or {}
    turns[number] = {}
    for winding = 1, windings do
      turns[number][winding] = ((above[winding] or 0) - (below[winding] or 0)) / step
    end
  end
  return turns
end

-- A longer gap changes its own permeance, the iron beside it, the rungs of the ladder and the turns
-- that lie over it. All of that is explicit geometry, built by one piece of code: its derivative is
-- taken there by a central difference of 1e-4 of the length (error about 1e-8; of a ring, whose boundary
-- solution moves in small steps, below 1e-3); the response of the solution to it comes from the
-- factorisation.
local function gap_direction(part, fields, index)
  local entry = fields.gap_entries[index]
  if not entry then
    fail("gap", index, #fields.gap_entries > 0 and ("a gap of the part, 1 to %d"):format(
      #fields.gap_entries) or "none: the part has no gap")
  end
  local half = 1e-4 * entry.length
  local lower = fields.fields_of(with_gap(part, fields, index, entry.length - half))
  local upper = fields.fields_of(with_gap(part, fields, index, entry.length + half))
  local function centre_field(changed) return changed.gap_entries[index].units[1].centre_field end
  return { centre_field = (centre_field(upper) - centre_field(lower)) / (2 * half),
    elements = compare_elements(lower, upper, 2 * half),
    turns = compare_turns(lower, upper, #fields.windings, 2 * half) }
end

local function turns_direction(part, index)
  local winding = part.windings[index]
  if not winding then
    fail("winding", index, ("a winding of the part, 1 to %d"):format(#part.windings))
  end
  local turns = {}
  for number, branch in ipairs(part.branches) do
    local here = branch.turns and branch.turns[index]
    if here then turns[number] = { [index] = here / winding.turns } end
  end
  return { turns = turns }
end

local function iron_direction(part, field, limb)
  local changes = {}
  each_element(part, function(number, element)
    if element.law and (not limb or number >= limb.first and number <= limb.last) then
      changes[#changes + 1] = { element = number, [field] = field == "area" and element.area or 1 }
    end
  end)
  return { elements = changes }
end

local function limb_named(part, name)
  local names = {}
  for i, limb in ipairs(part.limbs) do
    names[i] = limb.name
    if limb.name == name then return limb end
  end
  fail.unknown("limb", tostring(name), names)
end

local function direction(whole, part, by)
  fail.fields(by, { "gap", "turns", "area", "permeability" }, "by")
  if by.gap then return gap_direction(whole, part, by.gap) end
  if by.turns then return turns_direction(part, by.turns) end
  if by.permeability then return iron_direction(part, "stretch") end
  if by.area == "all" then return iron_direction(part, "area") end
  if by.area then return iron_direction(part, "area", limb_named(part, by.area)) end
  fail.text("by", "by names no parameter; allowed: { gap = 1 }, { turns = 1 }, { area = \"centre\" },"
    .. " { permeability = true }")
end

-- Flux density in the middle of a gap: mu0 u k / length, k the field relative to the plain one. Force:
-- -u^2/2 dP/dlength.
local function gap_record(part, index, raw, by, way)
  local unit = part.gap_entries[index].units[1]
  local drop, _, _, _, force = part.solver:element(unit.element)
  local factor = core.mu0 * unit.centre_field / unit.length
  local record = {
    centre_flux_density = factor * raw.drop[unit.element], flux = raw.flux[unit.element],
    force = drop ~= 0 and 2 * force / drop * raw.drop[unit.element] or 0,
  }
  if by.gap == index then
    record.centre_flux_density = record.centre_flux_density
      + core.mu0 * drop / unit.length * (way.centre_field - unit.centre_field / unit.length)
  end
  -- A neighbour's length changes this gap's edges, so its permeance too.
  local change = by.gap and way.elements[unit.element].by_length or 0
  record.force = record.force - drop ^ 2 / 2 * change
  return record
end

--- Derivatives at an operating point.
-- @tparam table at `current`, `temperature` as in `part:solve`, and `by` = one of
--   `{ gap = index }` (per metre of the gap's length), `{ turns = index }` (per turn of a winding,
--   its distribution kept), `{ area = limb name or "all" }` (relative change of the iron's area: per
--   1), `{ permeability = true }` (relative change of the initial permeability with the saturation
--   held: per 1)
-- @treturn table derivative of `flux_linkage`, `incremental_inductance` (numbers for one winding,
--   else lists / row-major list), `inductance` (one winding), `energy`, `coenergy`,
--   `limbs[name].flux_density`, `gaps[i].centre_flux_density`, `.flux` and `.force`
function derivatives.at(whole, part, at)
  fail.fields(at, { "current", "temperature", "by" }, "derivatives")
  local by = at.by
  if type(by) ~= "table" then fail("by", by, "a table such as { gap = 1 }") end
  local way = direction(whole, part, by)
  local temperature = solve.temperatures(at.temperature)
  local current = solve.currents(part, at.current)
  part.solver:solve(current, part.material:law(temperature), false)
  local raw = part.solver:sensitivity(way)
  local single = #part.windings == 1
  local result = {
    flux_linkage = single and raw.linkage[1] or raw.linkage,
    incremental_inductance = single and raw.incremental[1] or raw.incremental,
    energy = raw.energy, coenergy = raw.coenergy, limbs = {}, gaps = {},
  }
  if single and current ~= 0 then result.inductance = raw.linkage[1] / current end
  if single and current == 0 then result.inductance = raw.incremental[1] end
  for _, limb in ipairs(part.limbs) do
    local _, where = part.solver:span(limb.first, limb.last)
    result.limbs[limb.name] = { flux_density = raw.flux_density[where] }
  end
  for i = 1, #part.gap_entries do result.gaps[i] = gap_record(part, i, raw, by, way) end
  return result
end

return derivatives
