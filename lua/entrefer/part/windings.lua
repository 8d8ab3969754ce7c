--- The windings of a part: which leg, how many turns, and whether they fit the window.
-- @module entrefer.part.windings
local fail = require "entrefer.fail"
local gaps = require "entrefer.part.gaps"
local quantity = require "entrefer.quantity"
local wire = require "entrefer.wire"

local windings = {}

local fields = { "name", "turns", "leg", "wire", "span", "angle", "extent", "reverse" }

local function read_span(entry, label, height)
  if entry.span == nil then return { -height / 2, height / 2 } end
  if type(entry.span) ~= "table" then fail(label .. " span", entry.span, "a list { from, to }") end
  local from = quantity.read(entry.span[1], "m", label .. " span, start")
  local to = quantity.read(entry.span[2], "m", label .. " span, end")
  if from < -height / 2 or to > height / 2 or from >= to then
    fail(label .. " span", ("%.4g to %.4g m"):format(from, to),
      ("rising, within %.4g to %.4g m along the leg"):format(-height / 2, height / 2))
  end
  return { from, to }
end

local function shares(legs, entry, label)
  local share = {}
  if #legs == 3 then
    fail(label .. " leg", entry.leg, "\"centre\", \"left\", \"right\" or \"outer\"")
  end
  for _, leg in ipairs(legs) do share[leg] = (entry.reverse and -1 or 1) / #legs end
  return share
end

--- Reads the list of windings.
-- @tparam table list the user's entries
-- @tparam core core_set
-- @number height of the legs, m
-- @string default_leg
-- @treturn table list of `{ name, turns, legs = { [leg] = share }, first_leg, span, angle, extent,
--   wire }`
function windings.read(list, core_set, height, default_leg)
  local read = {}
  for i, entry in ipairs(list) do
    local label = "winding " .. i
    if type(entry) ~= "table" then fail(label, entry, "a table") end
    fail.fields(entry, fields, label)
    local legs = gaps.legs(core_set, entry.leg or default_leg, label .. " leg")
    read[i] = {
      label = label, name = entry.name or label, legs = shares(legs, entry, label),
      first_leg = legs[1],
      turns = quantity.read(entry.turns, "1", label .. " turns", { positive = true }),
      span = read_span(entry, label, height),
      angle = quantity.read(entry.angle or 0, "rad", label .. " angle"),
      extent = quantity.read(entry.extent or 2 * math.pi, "rad", label .. " extent",
        { positive = true, max = 2 * math.pi }),
      wire = entry.wire and wire.of(entry.wire, label .. " wire"),
    }
  end
  if #read == 0 then fail.text("windings", "windings is empty; allowed: at least one winding") end
  return read
end

--- Room for windings in one window: breadth and depth in m after the bobbin's walls.
-- @tparam table geometry
-- @tparam table bobbin `{ wall, clearance, flange }` in m
function windings.room(geometry, bobbin, height)
  if geometry.topology == "ring" then
    local radius = geometry.ring_inner_diameter / 2 - bobbin.wall
    return { area = math.pi * math.max(radius, 0) ^ 2, radius = radius }
  end
  local breadth = height - 2 * bobbin.flange
  local depth = geometry.window_width - bobbin.wall - bobbin.clearance
  return { breadth = breadth, depth = depth, area = math.max(breadth, 0) * math.max(depth, 0) }
end

local function check_ring(winding, room, diameter)
  -- One pass through the hole per turn; hexagonal packing can't beat pi/4 over square cells.
  local needed = winding.turns * diameter ^ 2
  if needed > room.area then
    fail(winding.label .. " turns", winding.turns,
      ("at most %d of a wire of %.3g mm through the ring's hole"):format(
        math.floor(room.area / diameter ^ 2), diameter * 1e3))
  end
end

local function check_layers(winding, room, diameter, share)
  local per_layer = math.floor(room.breadth * (winding.span[2] - winding.span[1])
    / winding.full_height / diameter + 1e-9)
  local layers = per_layer > 0 and math.ceil(winding.turns * share / per_layer - 1e-9) or math.huge
  winding.turns_per_layer, winding.layers = per_layer, layers
  if layers * diameter > room.depth then
    local most = math.max(0, math.floor(room.depth / diameter)) * math.max(0, per_layer)
    fail(winding.label .. " turns", winding.turns,
      ("at most %d of a wire of %.3g mm in a window of %.3g mm by %.3g mm after the bobbin"):format(
        most, diameter * 1e3, room.breadth * 1e3, room.depth * 1e3))
  end
end

--- Refuses a build that the window can't hold. Windings without a wire are not checked. Layers of
-- round wire are counted in a square pattern (common practice, no source; conservative).
-- @treturn number share of the window's area that the wires' squares fill
function windings.check(read, geometry, bobbin, height)
  if not geometry.topology then return nil end -- a custom core's window is unknown
  local room = windings.room(geometry, bobbin, height)
  local filled = 0
  for _, winding in ipairs(read) do
    if winding.wire then
      local diameter = winding.wire.overall_diameter or math.sqrt(winding.wire.overall_area)
      local share = 0
      for _, part in pairs(winding.legs) do share = math.max(share, math.abs(part)) end
      winding.full_height = height
      if geometry.topology == "ring" then
        check_ring(winding, room, diameter)
      else
        check_layers(winding, room, diameter, share)
      end
      filled = filled + winding.turns * share * diameter ^ 2
    end
  end
  if filled > room.area then
    fail("windings", ("%.3g mm2 of wire"):format(filled * 1e6),
      ("at most %.3g mm2, the window after the bobbin"):format(room.area * 1e6))
  end
  return room.area > 0 and filled / room.area or nil
end

return windings
