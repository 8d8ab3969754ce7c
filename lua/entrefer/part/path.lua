--- The core's flux density along the magnetic path: once around through the leg of winding 1, a yoke, an
-- outer leg and back; a ring from its first gap around; a custom core section by section.
-- @module entrefer.part.path
local solve = require "entrefer.part.solve"

local path = {}

-- Limbs in the order of the path, and whether a limb's elements (listed from the bottom up) are passed
-- backwards.
local routes = {
  three_leg = { { "centre" }, { "yoke_top_right" }, { "right", true }, { "yoke_bottom_right" } },
  two_leg = { { "left" }, { "yoke_top" }, { "right", true }, { "yoke_bottom" } },
  ring = { { "ring" } },
}

local function route_of(part)
  if routes[part.topology] then return routes[part.topology] end
  local route = {}
  for i, limb in ipairs(part.limbs) do route[i] = { limb.name } end
  return route
end

local function elements_of(part)
  local list = {}
  for _, branch in ipairs(part.branches) do
    for _, element in ipairs(branch.elements) do list[#list + 1] = element end
  end
  return list
end

-- Length of the gap that a linear element stands for.
local function gap_length(part, number)
  for _, unit in ipairs(part.units) do
    if unit.element == number then return unit.length end
  end
  return 0
end

local function limb_named(part, name)
  for _, limb in ipairs(part.limbs) do
    if limb.name == name then return limb end
  end
end

--- Flux density along the path.
-- @tparam table part fields of a part
-- @tparam table at `current`, `temperature` as in `part:solve`
-- @treturn table struct of arrays `distance` (m from the start, ends of each piece of iron),
--   `flux_density` (T, absolute, mean over the section), `limb` (name)
function path.along(part, at)
  solve.once(part, { current = at.current, temperature = at.temperature, only = {} })
  local elements, here = elements_of(part), 0
  local result = { distance = {}, flux_density = {}, limb = {} }
  local function add(name, density)
    local n = #result.distance + 1
    result.distance[n], result.flux_density[n], result.limb[n] = here, density, name
  end
  for _, stop in ipairs(route_of(part)) do
    local limb = limb_named(part, stop[1])
    local from, to, step = limb.first, limb.last, 1
    if stop[2] then from, to, step = to, from, -1 end
    for number = from, to, step do
      local element = elements[number]
      if element.law then
        local _, _, density = part.solver:element(number)
        add(limb.name, math.abs(density))
        here = here + element.length
        add(limb.name, math.abs(density))
      else
        here = here + gap_length(part, number)
      end
    end
  end
  return result
end

return path
