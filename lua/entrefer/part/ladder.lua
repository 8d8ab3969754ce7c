--- Networks of cores with two or three legs: legs cut into bays at every gap, windows as ladders of
-- leakage, yokes as chains with their corners.
--
-- In each bay the winding's magnetomotive force is spread along the leg, so the leakage across the
-- window varies linearly and its energy quadratically: Simpson's weights 1/6, 4/6, 1/6 at the bay's
-- ends and middle are exact for that. Iron that saturates is by-passed by the air beside it: inside
-- the winding's mean turn on a wound leg, through quarter-circle flux tubes (area = girth times
-- length / pi, the potential falling linearly along the limb) elsewhere.
-- @module entrefer.part.ladder
local core = require "entrefer.core"
local builder = require "entrefer.part.builder"
local gaps = require "entrefer.part.gaps"

local ladder = {}

local shell_families = { pot = true, PQ = true, RM = true, EP = true }

-- Legs of a geometry, and which face each other across a window.
local function legs_of(geometry)
  local outer = { section = geometry.outer_leg, pole = geometry.outer_pole }
  if geometry.topology == "two_leg" then
    return { { name = "left", section = outer.section, pole = outer.pole },
      { name = "right", section = outer.section, pole = outer.pole } }, { { "left", "right" } }
  end
  return { { name = "centre", section = geometry.centre_leg, pole = geometry.centre_pole },
    { name = "left", section = outer.section, pole = outer.pole },
    { name = "right", section = outer.section, pole = outer.pole } },
    { { "centre", "left" }, { "centre", "right" } }
end

-- Heights at which the legs are cut: the ends and every gap's middle.
local function levels(units, height)
  local list = { -height / 2, height / 2 }
  for _, unit in ipairs(units) do list[#list + 1] = unit.z end
  table.sort(list)
  local distinct = { list[1] }
  for i = 2, #list do
    if list[i] - distinct[#distinct] > 1e-9 * height then distinct[#distinct + 1] = list[i] end
  end
  return distinct
end

local function gap_at(leg_units, z, height)
  for _, unit in ipairs(leg_units or {}) do
    if math.abs(unit.z - z) <= 1e-9 * height then return unit end
  end
end

-- Turns of each winding on a stretch of a leg, `sign` by the leg's direction.
local function turns_on(leg, low, high, windings)
  local turns
  for i, winding in ipairs(windings) do
    local share = winding.legs[leg.name]
    if share then
      local from, to = winding.span[1], winding.span[2]
      local overlap = math.max(0, math.min(high, to) - math.max(low, from)) / (to - from)
      turns = turns or {}
      turns[i] = share * winding.turns * overlap
    end
  end
  return turns
end

local function mean_turn_air(pole, window_width, leg_area)
  local offset = window_width -- half the window on either side
  if pole.shape == "round" then return math.pi / 4 * (pole.width + offset) ^ 2 - leg_area end
  return (pole.width + offset) * (pole.depth + offset) - leg_area
end

local function leg_air(leg, geometry, height)
  if leg.wound then return mean_turn_air(leg.pole, geometry.window_width, leg.section.area) end
  local girth = 2 * leg.pole.width + leg.pole.depth -- the sides that do not face the window
  return girth * height / math.pi
end

-- One leg from bottom to top. Positive flux runs up in the leg of winding 1, down in the others, so
-- that winding 1 drives positive flux everywhere. Fills leg.below[i], leg.above[i] (nodes at level
-- i) and leg.middle[i] (node in the middle of bay i).
local function build_leg(net, leg, context)
  local z, height = context.levels, context.height
  local air = leg_air(leg, context.geometry, height)
  leg.below, leg.above, leg.middle = {}, {}, {}
  local function branch(from, to, elements, turns)
    if leg.up then return net:branch(from, to, elements, turns) end
    return net:branch(to, from, elements, turns)
  end
  net:start_limb(leg.name)
  leg.below[1] = net:node()
  leg.above[1] = leg.below[1]
  for bay = 1, #z - 1 do
    local under, over = leg.gap_at[bay], leg.gap_at[bay + 1]
    local low = z[bay] + (under and under.length / 2 or 0)
    local high = z[bay + 1] - (over and over.length / 2 or 0)
    local middle, half = (low + high) / 2, (high - low) / 2
    leg.middle[bay], leg.below[bay + 1] = net:node(), net:node()
    local ends = { leg.above[bay], leg.middle[bay], leg.below[bay + 1] }
    for part = 1, 2 do
      local from = part == 1 and low or middle
      local element = branch(ends[part], ends[part + 1],
        { builder.iron(half, leg.section.area, core.mu0 * air / half) },
        turns_on(leg, from, from + half, context.windings))
      net:at(element, from + half / 2)
    end
    leg.above[bay + 1] = leg.below[bay + 1]
    if over then
      leg.above[bay + 1] = net:node()
      over.element = branch(leg.below[bay + 1], leg.above[bay + 1],
        { { permeance = over.permeance, by_length = over.by_length } },
        turns_on(leg, high, high + over.length, context.windings))
      net:at(over.element, over.z)
    end
  end
  net:finish_limb()
end

local simpson = { 1 / 6, 4 / 6, 1 / 6 }

local function build_window(net, a, b, context)
  local z = context.levels
  for bay = 1, #z - 1 do
    local function taken(level)
      local one, other = a.gap_at[level], b.gap_at[level]
      return math.max(one and one.length or 0, other and other.length or 0) / 2
    end
    local free = z[bay + 1] - z[bay] - taken(bay) - taken(bay + 1)
    local permeance = core.mu0 * context.geometry.window_leakage * math.max(free, 0)
    net:path(a.above[bay], b.above[bay], simpson[1] * permeance)
    net:path(a.middle[bay], b.middle[bay], simpson[2] * permeance)
    net:path(a.below[bay + 1], b.below[bay + 1], simpson[3] * permeance)
  end
end

local function yoke_chain(geometry, outward)
  local girth = geometry.outer_pole.depth + 2 * (geometry.half_height - geometry.window_height / 2)
  local function piece(section)
    return builder.iron(section.length, section.area,
      core.mu0 * girth * geometry.yoke.length / math.pi / section.length)
  end
  local inner = geometry.topology == "two_leg" and geometry.outer_corner or geometry.centre_corner
  local chain = { piece(inner), piece(geometry.yoke), piece(geometry.outer_corner) }
  if not outward then chain[1], chain[3] = chain[3], chain[1] end
  return chain
end

-- Yokes lead from the leg of winding 1 outward at the top and back at the bottom.
local function build_yokes(net, pairs_of_legs, by_name, geometry)
  local last = function(leg) return leg.below[#leg.below] end
  for _, pair in ipairs(pairs_of_legs) do
    local near, far = by_name[pair[1]], by_name[pair[2]]
    local suffix = geometry.topology == "three_leg" and "_" .. far.name or ""
    local outward = not far.up
    if not outward then near, far = far, near end
    net:start_limb("yoke_top" .. suffix)
    net:branch(last(near), last(far), yoke_chain(geometry, outward))
    net:finish_limb()
    net:start_limb("yoke_bottom" .. suffix)
    net:branch(far.below[1], near.below[1], yoke_chain(geometry, not outward))
    net:finish_limb()
  end
end

local function evaluate_gaps(legs, pairs_of_legs, by_name, context)
  local geometry = context.geometry
  local yoke = geometry.half_height - geometry.window_height / 2
  local facing = {}
  for _, pair in ipairs(pairs_of_legs) do
    for i = 1, 2 do
      local list = facing[pair[i]] or {}
      list[#list + 1] = by_name[pair[3 - i]]
      facing[pair[i]] = list
    end
  end
  local shell = shell_families[context.family]
  local spread = gaps.spread(shell, context.height / 2 + yoke, geometry.envelope_width / 2)
  for _, leg in ipairs(legs) do
    for i, unit in ipairs(leg.units) do
      local before, after = leg.units[i - 1], leg.units[i + 1]
      local sides = {}
      for side, other in ipairs(facing[leg.name]) do
        local across = gap_at(other.units, unit.z, context.height)
        sides[side] = { same = across ~= nil and other.up == leg.up,
          share = unit.length / (unit.length + (across and across.length or 0)) }
      end
      local edges = gaps.edges {
        length = unit.length,
        below = unit.z - unit.length / 2 - (before and before.z + before.length / 2
          or -context.height / 2),
        above = (after and after.z - after.length / 2 or context.height / 2)
          - unit.z - unit.length / 2,
        below_gap = before ~= nil, above_gap = after ~= nil, wound = leg.wound, yoke = yoke,
        spread = spread,
        window_width = geometry.window_width, facing = sides,
        shell = shell and leg.name == "centre", closed = shell and leg.name ~= "centre",
      }
      gaps.evaluate(unit, leg.pole, edges, context.height)
    end
  end
end

--- Builds the network of a two- or three-leg core.
-- @tparam table geometry of the core
-- @string family shape name of the core
-- @tparam table units from `gaps.expand`
-- @number height of the legs, m
-- @tparam table windings list of `{ turns, legs = { [leg] = share }, span = { from, to } }`
-- @treturn table builder with `limbs`
function ladder.build(geometry, family, units, height, windings)
  local net = builder.new(#windings)
  local legs, pairs_of_legs = legs_of(geometry)
  local context = { geometry = geometry, family = family, height = height, windings = windings,
    levels = levels(units, height) }
  local by_name, first = {}, windings[1] and windings[1].first_leg or legs[1].name
  for _, leg in ipairs(legs) do
    by_name[leg.name] = leg
    leg.units = units.by_leg[leg.name] or {}
    -- A winding on both outer legs drives them the same way; around two legs it drives them in turn.
    leg.up = leg.name == first or #legs == 3 and windings[1].legs[leg.name] ~= nil
    leg.gap_at = {}
    for i, z in ipairs(context.levels) do leg.gap_at[i] = gap_at(leg.units, z, height) end
    for _, winding in ipairs(windings) do leg.wound = leg.wound or winding.legs[leg.name] ~= nil end
  end
  evaluate_gaps(legs, pairs_of_legs, by_name, context)
  for _, leg in ipairs(legs) do build_leg(net, leg, context) end
  for _, pair in ipairs(pairs_of_legs) do
    build_window(net, by_name[pair[1]], by_name[pair[2]], context)
  end
  build_yokes(net, pairs_of_legs, by_name, geometry)
  return net
end

return ladder
