--- The plain series circuit, for comparison: all magnetomotive force in the gaps, no fringing, no
-- leakage. This is the rule of thumb that the network is there to correct.
-- @module entrefer.part.estimate
local core = require "entrefer.core"

local estimate = {}

local function pole_area(pole)
  local hole = math.pi / 4 * (pole.hole or 0) ^ 2
  if pole.shape == "round" then return math.pi / 4 * pole.width ^ 2 - hole end
  return pole.width * pole.depth - hole
end

-- Area that the flux of winding 1 has in a gap: with the winding on the centre leg, that of both outer
-- legs where both are gapped.
local function gap_area(part, entry)
  local area, winding = pole_area(entry.units[1].pole), part.windings[1]
  local shared = part.topology == "three_leg" and #entry.legs == 2 and winding and winding.legs.centre
  return shared and 2 * area or area
end

-- Total gap length of the series path through winding 1, and the area of its first gap.
local function series_gap(part)
  local length, area = 0, nil
  for _, entry in ipairs(part.gap_entries) do
    local unit = entry.units[1]
    local times = #entry.units
    if part.topology == "three_leg" then
      -- The outer legs are in parallel: one of them counts.
      local seen = {}
      times = 0
      for _, u in ipairs(entry.units) do
        local leg = u.leg == "right" and "left" or u.leg
        if not seen[leg] then
          seen[leg] = true
          times = times + entry.count
        end
      end
    end
    length = length + times * unit.length
    area = area or gap_area(part, entry)
  end
  return length, area
end

--- Constants of the estimate, worked out once per part.
-- @treturn table `{ field (T per ampere-turn), area (m2), path (m) }`
function estimate.prepare(part)
  local gap, area = series_gap(part)
  local geometry = part.core.geometry
  return { gap = gap, area = area or geometry.effective_area, iron = geometry.effective_length }
end

--- mu0 N I / gap and what follows from it; a part without a gap: mu0 mu_i N I / le.
-- @treturn table `{ flux_density, inductance, flux_linkage }`
function estimate.at(constants, turns, current, initial_permeability)
  local path = constants.gap > 0 and constants.gap or constants.iron / initial_permeability
  local density = core.mu0 * turns * current / path
  return {
    flux_density = density,
    flux_linkage = turns * constants.area * density,
    inductance = core.mu0 * turns * turns * constants.area / path,
  }
end

return estimate
