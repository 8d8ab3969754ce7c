--- Network of a custom core: a closed series of sections, without leakage (its geometry is unknown).
-- @module entrefer.part.loop
local core = require "entrefer.core"
local builder = require "entrefer.part.builder"
local fail = require "entrefer.fail"
local gaps = require "entrefer.part.gaps"

local loop = {}

-- Without a given pole: a square of the same area, with free edges half as high as the section.
local function pole_of(section)
  if section.pole then return section.pole end
  local side = math.sqrt(section.area)
  return { shape = "rectangle", width = side, depth = side }
end

local function turns_of(name, windings)
  local turns
  for i, winding in ipairs(windings) do
    if winding.legs[name] then
      turns = turns or {}
      turns[i] = winding.legs[name] * winding.turns
    end
  end
  return turns
end

local function check_length(section, taken)
  if taken >= section.length then
    fail("gap length", taken, ("below %.4g m, the length of %s"):format(section.length,
      section.name))
  end
end

-- The linear elements of a section's gaps, and the length of iron they take.
local function gap_elements(section, units)
  local elements, taken = {}, 0
  local edge = { kind = "free exact", reach = section.length / 2 }
  for _, unit in ipairs(units) do
    if unit.leg == section.name then
      gaps.evaluate(unit, pole_of(section),
        { x_low = edge, x_high = edge, y_low = edge, y_high = edge }, section.length)
      if not section.pole then
        unit.notes[#unit.notes + 1] = unit.entry.label .. ": pole taken as a square"
      end
      if unit.entry.kind ~= "spacer" then taken = taken + unit.length end
      elements[#elements + 1] = { permeance = unit.permeance, by_length = unit.by_length }
    end
  end
  check_length(section, taken)
  return elements, taken
end

--- Builds the loop.
-- @tparam table sections list of `{ name, length, area [, pole] }` (m, m2)
-- @tparam table units list of `{ entry, leg, length }`, legs being section names
-- @tparam table windings list of `{ turns, legs }`
function loop.build(sections, units, windings)
  local net = builder.new(#windings)
  local nodes = {}
  -- A loop needs two nodes: a single section is closed by half of its own iron.
  for i = 1, math.max(#sections, 2) do nodes[i] = net:node() end
  for i, section in ipairs(sections) do
    local elements, taken = gap_elements(section, units)
    local pieces = #sections == 1 and 2 or 1
    local length = (section.length - taken) / pieces
    local function iron()
      return builder.iron(length, section.area,
        core.mu0 * 4 * math.sqrt(section.area) / math.pi * section.length / length)
    end
    table.insert(elements, 1, iron())
    net:start_limb(section.name)
    local turns = turns_of(section.name, windings)
    local first = net:branch(nodes[i], nodes[i % #nodes + 1], elements, turns)
    if pieces == 2 then net:branch(nodes[2], nodes[1], { iron() }) end
    local element = first
    for _, unit in ipairs(units) do
      if unit.leg == section.name then
        element = element + 1
        unit.element = element
      end
    end
    net:at(first, 0)
    net:finish_limb()
  end
  return net
end

return loop
