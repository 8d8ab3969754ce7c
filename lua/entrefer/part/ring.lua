--- Network of a gapped ring: sectors of iron, each leaking to the surroundings (one node), so that
-- the core's flux grows from the gap to the back. The ladder's permeances come from a boundary
-- solution of the ring (`entrefer.core.ring_ladder`).
-- @module entrefer.part.ring
local core = require "entrefer.core"
local builder = require "entrefer.part.builder"
local fail = require "entrefer.fail"

local ring = {}

local sectors_per_half = 16

local function wrap(angle)
  return angle - 2 * math.pi * math.floor(angle / (2 * math.pi))
end

-- Length of the part of [low, high] inside the arc that starts at `start` and has the given extent;
-- everything in rad, arcs shorter than a turn.
local function overlap(low, high, start, extent)
  local sum = 0
  for turn = -1, 1 do
    local from = start + 2 * math.pi * turn
    sum = sum + math.max(0, math.min(high, from + extent) - math.max(low, from))
  end
  return sum
end

local function turns_on(low, high, windings)
  local turns
  for i, winding in ipairs(windings) do
    local share = winding.legs.ring
    if share then
      local extent = winding.extent
      local part = extent >= 2 * math.pi * (1 - 1e-12) and (high - low) / (2 * math.pi)
        or overlap(low, high, wrap(winding.angle - extent / 2), extent) / extent
      turns = turns or {}
      turns[i] = share * winding.turns * part
    end
  end
  return turns
end

-- The real cross-section, so that flux density is the mean over it; the length that keeps the core's
-- reluctance C1 (IEC 60205), a little more than the effective length.
local function iron_of(geometry)
  local area = geometry.outer_pole.width * geometry.outer_pole.depth
  return function(angle)
    return builder.iron(geometry.c1 * area * angle / (2 * math.pi), area)
  end
end

-- A ring without a gap: no leakage, two halves so that there are two nodes.
local function build_closed(net, geometry, windings)
  local iron, a, b = iron_of(geometry), net:node(), net:node()
  net:start_limb("ring")
  for half = 0, 1 do
    local low = half * math.pi
    local element = net:branch(half == 0 and a or b, half == 0 and b or a, { iron(math.pi) },
      turns_on(low, low + math.pi, windings))
    net:at(element, low + math.pi / 2)
  end
  net:finish_limb()
end

local function note_gap(unit, ladder, geometry)
  unit.notes, unit.pole, unit.local_length = {}, geometry.outer_pole, unit.length
  unit.method, unit.permeance, unit.by_length = "ring boundary solution", ladder.face_permeance,
    ladder.face_by_length
  unit.plain_permeance = core.mu0 * geometry.outer_pole.width * geometry.outer_pole.depth
    / unit.length
  unit.fringing = unit.permeance / unit.plain_permeance
  unit.face, unit.centre_field = unit.fringing, ladder.centre_field
  unit.radial_slope, unit.error = ladder.radial_slope, ladder.error
  if unit.entry.permeance then
    unit.method, unit.permeance = "given", unit.entry.permeance
    unit.by_length = unit.entry.by_length or -unit.permeance / unit.length
  end
end

-- The sectors between two gap middles, from angle `start` on. Returns the nodes in the middles of the
-- first and last sector.
local function build_arc(net, ladder, start, surroundings, iron, windings)
  local angle, count = ladder.angle, #ladder.leakage
  local period = 2 * angle[count + 1]
  local middles, leak = {}, {}
  for i = 1, count do
    middles[i] = (angle[i] + angle[i + 1]) / 2
    middles[2 * count + 1 - i] = period - middles[i]
    leak[i], leak[2 * count + 1 - i] = ladder.leakage[i], ladder.leakage[i]
  end
  local first = net:node()
  net:path(first, surroundings, leak[1])
  local node = first
  for i = 2, 2 * count do
    local low, high = start + middles[i - 1], start + middles[i]
    local next_node = net:node()
    local element = net:branch(node, next_node, { iron(high - low) },
      turns_on(low, high, windings))
    net:at(element, (low + high) / 2)
    net.later[#net.later + 1] = { next_node, leak[i] }
    node = next_node
  end
  return first, node, middles[1]
end

-- One gap between the last node of the arc before and the first of the arc after, with the iron of
-- the half sectors on both sides.
local function build_gap(net, unit, from, to, middle, half_gap, iron, windings, centre)
  local side = iron(middle - half_gap)
  local first = net:branch(from, to,
    { side, { permeance = unit.permeance, by_length = unit.by_length }, iron(middle - half_gap) },
    turns_on(centre - middle, centre + middle, windings))
  unit.element = first + 1
  net:at(first, centre - (middle + half_gap) / 2)
  net:at(first + 2, centre + (middle + half_gap) / 2)
end

local function check(units, geometry)
  if #units > 2 then
    fail("number of gaps", #units, "one gap in a ring, or two of equal length (count = 2)")
  end
  local mean = (geometry.ring_outer_diameter + geometry.ring_inner_diameter) / 2
  for _, unit in ipairs(units) do
    if unit.entry.pocket then
      fail.text(unit.entry.label .. " pocket", "a pocket is for cores with legs, not for a ring")
    end
    if unit.length >= mean / 2 then
      fail(unit.entry.label .. " length", unit.length,
        ("below %.4g m, half of the ring's mean diameter"):format(mean / 2))
    end
  end
  if units[2] and units[2].length ~= units[1].length then
    fail(units[2].entry.label .. " length", units[2].length,
      "that of the first gap: two gaps of a ring are equal and 180 degrees apart")
  end
end

--- Builds the network of a ring. Angles run from the middle of the first gap.
-- @tparam table geometry
-- @tparam table units list of `{ entry, length }` (none, one, or two at 180 degrees)
-- @tparam table windings list of `{ turns, legs, angle, extent }` (rad)
function ring.build(geometry, units, windings)
  local net = builder.new(#windings)
  if #units == 0 then
    build_closed(net, geometry, windings)
    return net
  end
  check(units, geometry)
  local ladder = core.ring_ladder({ outer_diameter = geometry.ring_outer_diameter,
    inner_diameter = geometry.ring_inner_diameter, height = geometry.ring_height,
    gap = units[1].length, gaps = #units }, sectors_per_half)
  for _, unit in ipairs(units) do note_gap(unit, ladder, geometry) end
  local iron, surroundings = iron_of(geometry), net:node()
  net.later = {}
  net:start_limb("ring")
  local arcs, period = {}, 2 * math.pi / #units
  for i = 1, #units do
    local first, last, middle = build_arc(net, ladder, (i - 1) * period, surroundings, iron,
      windings)
    arcs[i] = { first = first, last = last, middle = middle }
  end
  for i, unit in ipairs(units) do
    local before = arcs[(i - 2) % #units + 1]
    build_gap(net, unit, before.last, arcs[i].first, arcs[i].middle, ladder.angle[1], iron,
      windings, (i - 1) * period)
  end
  net:finish_limb()
  for _, rung in ipairs(net.later) do net:path(rung[1], surroundings, rung[2]) end
  return net
end

return ring
