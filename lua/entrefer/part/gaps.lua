--- The gaps of a part: from the user's entries to single gaps with a place on a leg, and the
-- permeance of each.
-- @module entrefer.part.gaps
local core = require "entrefer.core"
local fail = require "entrefer.fail"
local quantity = require "entrefer.quantity"

local gaps = {}

local entry_fields = { "leg", "length", "kind", "count", "position", "tolerance", "pocket",
  "method", "permeance", "by_length", "name" }
local kinds = { ground = true, spacer = true, sawn = true }

local legs_of = {
  three_leg = { centre = { "centre" }, left = { "left" }, right = { "right" },
    outer = { "left", "right" }, all = { "centre", "left", "right" } },
  two_leg = { left = { "left" }, right = { "right" }, all = { "left", "right" } },
  ring = { ring = { "ring" } },
}

--- The legs that a name stands for on a core; raises with the names the core has.
-- @tparam core core
-- @string name of a leg or group of legs; of a custom core: of a section
-- @string field for the message
-- @treturn table list of legs
function gaps.legs(core_set, name, field)
  local known = legs_of[core_set.geometry.topology]
  if not known then
    known = {}
    for _, section in ipairs(core_set.sections) do known[section.name] = { section.name } end
  end
  if known[name] then return known[name] end
  local names = {}
  for leg in pairs(known) do names[#names + 1] = leg end
  table.sort(names)
  fail.unknown(field, tostring(name), names)
end

local function read_pocket(pocket, label)
  if pocket == nil then return nil end
  fail.fields(pocket, { "diameter", "depth", "through" }, label)
  local through = pocket.through == true
  return {
    diameter = quantity.read(pocket.diameter, "m", label .. " diameter", { positive = true }),
    depth = through and 0 or
      quantity.read(pocket.depth, "m", label .. " depth", { positive = true }),
    through = through,
  }
end

local function check_choice(value, allowed, field)
  if allowed[value] then return value end
  local names = {}
  for name in pairs(allowed) do names[#names + 1] = name end
  table.sort(names)
  fail.unknown(field, tostring(value), names)
end

local methods = {}
for _, name in ipairs(core.gap_methods()) do methods[name] = true end

--- Reads one entry of a part's gap list.
-- @tparam table entry see `entrefer.part`
-- @number index of the entry, for messages
-- @tparam core core_set
-- @string default_leg
function gaps.read(entry, index, core_set, default_leg)
  local label = "gap " .. index
  if type(entry) ~= "table" then fail(label, entry, "a table") end
  fail.fields(entry, entry_fields, label)
  local topology = core_set.geometry.topology
  local leg = entry.leg or default_leg
  local kind = check_choice(entry.kind or (topology == "ring" and "sawn" or "ground"), kinds,
    label .. " kind")
  local has_legs = topology == "three_leg" or topology == "two_leg"
  if kind == "spacer" and has_legs and leg ~= "all" then
    fail(label .. " leg", leg, "\"all\" for a spacer: it lifts the halves apart on every leg")
  end
  return {
    label = label, leg = leg, legs = gaps.legs(core_set, leg, label .. " leg"), kind = kind,
    length = quantity.read(entry.length, "m", label .. " length", { positive = true }),
    count = quantity.read(entry.count or 1, "1", label .. " count",
      { positive = true, integer = true, max = 64 }),
    position = quantity.read(entry.position or 0, "m", label .. " position"),
    tolerance = entry.tolerance and quantity.read(entry.tolerance, "m", label .. " tolerance",
      { min = 0 }),
    pocket = read_pocket(entry.pocket, label .. " pocket"),
    method = check_choice(entry.method or "conformal", methods, label .. " method"),
    permeance = entry.permeance and
      quantity.read(entry.permeance, "H", label .. " permeance", { positive = true }),
    by_length = entry.by_length,
  }
end

local function place_on_leg(entry, leg, height, units)
  local pitch = height / entry.count
  for i = 1, entry.count do
    units[#units + 1] = { entry = entry, leg = leg, length = entry.length,
      z = entry.position + pitch * (i - (entry.count + 1) / 2) }
  end
end

local function check_leg(leg, units, height)
  local edge, before = -height / 2, nil
  for _, unit in ipairs(units) do
    local label = unit.entry.label
    if unit.length >= height then
      fail(label .. " length", unit.length,
        ("below %.4g m, the length of the %s leg"):format(height, leg))
    end
    if unit.z - unit.length / 2 <= edge then
      fail(label .. " position", unit.z, before and ("clear of %s on the %s leg")
        :format(before.entry.label, leg) or ("inside the %s leg, which is %.4g m long")
        :format(leg, height))
    end
    edge, before = unit.z + unit.length / 2, unit
  end
  if before and edge >= height / 2 then
    fail(before.entry.label .. " position", before.z,
      ("inside the %s leg, which is %.4g m long"):format(leg, height))
  end
end

--- Expands the entries to single gaps on legs.
-- @tparam table entries from `gaps.read`
-- @number window_height m, length of the legs without spacers
-- @treturn table units: list of `{ entry, leg, z, length }`; `units.by_leg[leg]` sorted by z
-- @treturn number height of the legs with spacers, m
function gaps.expand(entries, window_height)
  local height = window_height
  for _, entry in ipairs(entries) do
    if entry.kind == "spacer" then height = height + entry.length * entry.count end
  end
  local units = { by_leg = {} }
  for _, entry in ipairs(entries) do
    entry.units = {}
    for _, leg in ipairs(entry.legs) do
      local first = #units + 1
      place_on_leg(entry, leg, height, units)
      for i = first, #units do
        local unit = units[i]
        entry.units[#entry.units + 1] = unit
        local list = units.by_leg[leg] or {}
        list[#list + 1] = unit
        units.by_leg[leg] = list
      end
    end
  end
  for leg, list in pairs(units.by_leg) do
    table.sort(list, function(a, b) return a.z < b.z end)
    check_leg(leg, list, height)
  end
  return units, height
end

-- With the winding along the leg the potential of a side wall falls linearly to zero at the yoke;
-- integrating 2/(pi y) (1 - y/h) gives the edge of a wall of height h/e at full potential. A
-- neighbouring gap takes over half of the iron between. Without a winding the wall keeps its
-- potential, up to the outer face of the yoke, and that face goes on giving flux: `spread` times the
-- wall (see `gaps.spread`).
local function free_reach(iron, to_gap, wound, yoke, spread)
  local share = to_gap and iron / 2 or iron
  if wound then return share / math.exp(1) end
  return to_gap and share or (share + yoke) * spread
end

--- How much further an unwound outer wall reaches than its own height, since the flux of a core with
-- spacers also leaves the backs of its yokes. A fit to own finite-element solutions of two bodies at
-- opposite potentials (docs/methods/network.md): cylinders with half height over radius from 0.25 to 2,
-- to 1 %; for open cores the plane body as high as half its width.
-- @bool closed whether the core is a closed shell
-- @number half_height m, of the core with its spacer
-- @number radius m, outer
-- @treturn number
function gaps.spread(closed, half_height, radius)
  return closed and math.exp(1.75 + 0.5 * half_height / radius) or 3.4
end

-- Distance from a gap's middle to that of its neighbour; a yoke mirrors the gap.
local function pitch(iron, to_gap, length)
  return to_gap and iron + length or 2 * iron + length
end

-- Neighbours at a pitch T add -(4/pi) sum ln(1 - q^m) to an edge across a window of width w, q =
-- exp(-pi T/w), which is the same as lengthening its reach by this factor (docs/methods/network.md).
-- The sum is held below T = w/20, where gaps would have to be shorter still for it to apply.
local function crowding(distance, window_width)
  local q = math.exp(-math.pi * math.max(distance / window_width, 0.05))
  local product, power = 1, q
  while power > 1e-9 do
    product, power = product * (1 - power), power * q
  end
  return product ^ -2
end

-- A winding that fills the window drives flux across it evenly (the ladder's rungs). What a gap adds
-- is the corner of a leg at the potential of the gap's middle; of two gaps that face each other in
-- one loop each has its share of the window, as their walls have opposite potentials. Walls of equal
-- potential, in a window without a winding, make a slot.
local function window_edge(facing, window_width, crowd)
  if facing.same then return { kind = "near yoke", reach = window_width } end
  return { kind = "near leg", reach = window_width * facing.share * crowd }
end

--- The edges of one gap.
-- @tparam table around `length` of the gap, m; `below`, `above`: iron to the next gap or yoke, m;
--   `below_gap`, `above_gap`: whether that is a gap; `wound`; `yoke` thickness, m; `spread` from
--   `gaps.spread`; `window_width`, m;
--   `facing`: for the sides x_low, x_high: nil = open side, else the leg across the window as
--   `{ share = this gap's part of the length of both gaps at this height, same = true where a gap
--   faces it and both legs carry flux the same way }`; `shell`: the facing leg goes all around;
--   `closed`: the pole goes on in the depth direction
function gaps.edges(around)
  local reach = math.min(
    free_reach(around.below, around.below_gap, around.wound, around.yoke, around.spread),
    free_reach(around.above, around.above_gap, around.wound, around.yoke, around.spread))
  local free = { kind = "free exact", reach = reach }
  local width = around.window_width
  local below = pitch(around.below, around.below_gap, around.length)
  local above = pitch(around.above, around.above_gap, around.length)
  local crowd = math.sqrt(crowding(below, width) * crowding(above, width))
  local function side(facing)
    if facing == nil then return free end
    return window_edge(facing, width, crowd)
  end
  local x_low, x_high = side(around.facing[1]), side(around.facing[2])
  local y = around.shell and x_high or around.closed and { kind = "none", reach = reach } or free
  return { x_low = x_low, x_high = x_high, y_low = y, y_high = y }
end

-- The user's pocket, or the pole's own centre hole. A gap of less than 0.001 or more than 5 diameters is
-- out of the mode sum's range: then the hole is only taken off the area (`core.gap`).
local function pocket_of(unit, pole)
  local pocket, hole, label = unit.entry.pocket, pole.hole or 0, unit.entry.label
  if not pocket then
    if hole == 0 or unit.length < 1e-3 * hole or unit.length > 5 * hole then return nil end
    return { diameter = hole, depth = 0, through = true }
  end
  local most = math.min(pole.width, pole.depth)
  if pocket.diameter >= most then
    fail(label .. " pocket diameter", pocket.diameter,
      ("below %.4g m, the width of the pole"):format(most))
  end
  if pocket.diameter < hole then
    fail(label .. " pocket diameter", pocket.diameter,
      ("at least %.4g m, the hole that the pole has"):format(hole))
  end
  return pocket
end

local function solid(pole)
  local copy = {}
  for key, value in pairs(pole) do copy[key] = value end
  copy.hole = 0
  return copy
end

local function apply_pocket(unit, pocket, label)
  local result = core.pocket(pocket, unit.length)
  -- A permeance that is given was measured or solved with the pole's own hole.
  if unit.entry.pocket or not unit.entry.permeance then
    if result.permeance_loss >= unit.permeance then
      fail(label .. " pocket diameter", pocket.diameter, "a pocket that leaves some of the gap")
    end
    unit.permeance = unit.permeance - result.permeance_loss
    unit.by_length = unit.by_length - result.loss_by_length
  end
  unit.centre_field = result.centre_field
  -- A package seldom goes into the pole's own hole: beside it the gap has its plain height.
  if unit.entry.pocket then unit.local_length = result.local_length end
  unit.notes[#unit.notes + 1] = unit.entry.pocket
    and label .. ": pocket or hole by an approximate mode sum"
    or label .. ": the middle lies in the pole's hole, where the field is weak; place a sensor beside it"
end

--- Fills in a gap's permeance (H), its derivative by length (H/m), the field in its middle and on
-- its pole face relative to mu0 u / length, and notes about validity.
function gaps.evaluate(unit, pole, edges, winding_length)
  local entry = unit.entry
  unit.notes, unit.pole = {}, pole
  unit.pocket = pocket_of(unit, pole)
  unit.shape = { pole = unit.pocket and solid(pole) or pole, length = unit.length, edges = edges,
    winding_length = winding_length }
  local result = core.gap(entry.method, unit.shape)
  unit.method, unit.fringing, unit.face = entry.method, result.fringing, result.face
  unit.permeance, unit.by_length = result.permeance, result.permeance_by_length
  unit.plain_permeance = result.permeance / result.fringing
  if not result.valid then unit.notes[1] = entry.label .. ": " .. result.note end
  if entry.permeance then
    unit.method, unit.permeance = "given", entry.permeance
    unit.by_length = entry.by_length or -entry.permeance / unit.length
    unit.fringing = unit.permeance / unit.plain_permeance
  end
  unit.centre_field, unit.local_length = 1, unit.length
  if unit.pocket then apply_pocket(unit, unit.pocket, entry.label) end
end

return gaps
