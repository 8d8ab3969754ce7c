--- The section of a part drawn to scale: core, gaps, windings, sensor, with the main dimensions.
-- Round legs are cut through their axis. Where a winding block sits follows the bobbin's rule set.
-- @module entrefer.drawing
local svg = require "entrefer.svg"

local drawing = {}

local function add(picture, shape) picture.shapes[#picture.shapes + 1] = shape end

local function rectangle(picture, left, bottom, width, height, style, tip)
  add(picture, { kind = "rectangle", left = left, bottom = bottom, width = width, height = height,
    style = style, tip = tip })
end

local function line(picture, x1, y1, x2, y2, style)
  add(picture, { kind = "line", x1 = x1, y1 = y1, x2 = x2, y2 = y2, style = style or "dimension" })
end

local function text(picture, x, y, words, anchor)
  add(picture, { kind = "text", x = x, y = y, text = words, anchor = anchor })
end

-- Length of one user unit, m.
local function unit_of(picture) return picture.box.width / picture.pixels end

local function mm(length) return ("%.2f mm"):format(length * 1e3) end

-- Horizontal places of the legs and the core's outline.
local function layout(part)
  local g = part.core.geometry
  local window = g.window_width
  local outer = g.outer_pole.width
  if g.topology == "two_leg" then
    local half = window / 2
    return { legs = { left = { -half - outer, outer }, right = { half, outer } },
      windows = { { -half, window } }, half_width = half + outer }
  end
  local post = g.centre_pole.width / 2
  return { legs = { centre = { -post, 2 * post }, left = { -post - window - outer, outer },
    right = { post + window, outer } },
    windows = { { -post - window, window }, { post, window } },
    half_width = post + window + outer }
end

-- The pieces of iron of one leg between its gaps.
local function draw_leg(picture, leg, name, part, height)
  local low = -height / 2
  for _, unit in ipairs(part.units.by_leg[name] or {}) do
    rectangle(picture, leg[1], low, leg[2], unit.z - unit.length / 2 - low, "iron", name .. " leg")
    low = unit.z + unit.length / 2
  end
  rectangle(picture, leg[1], low, leg[2], height / 2 - low, "iron", name .. " leg")
end

local function draw_yokes(picture, place, part, height)
  local g = part.core.geometry
  local yoke = g.half_height - g.window_height / 2
  for _, bottom in ipairs { height / 2, -height / 2 - yoke } do
    rectangle(picture, -place.half_width, bottom, 2 * place.half_width, yoke, "iron", "yoke")
  end
  return yoke
end

-- A winding's block on both sides of its leg, as deep as its wire needs or the whole room.
local function draw_windings(picture, place, part, height)
  local bobbin, g = part.bobbin, part.core.geometry
  for _, winding in ipairs(part.windings) do
    for name in pairs(winding.legs) do
      local leg = place.legs[name]
      local span = winding.span
      local low = math.max(span[1], -height / 2 + bobbin.flange)
      local high = math.min(span[2], height / 2 - bobbin.flange)
      local diameter = winding.wire and winding.wire.overall_diameter
      local room = g.window_width - bobbin.wall - bobbin.clearance
      local depth = diameter and winding.layers and winding.layers * diameter or room
      local tip = ("%s: %g turns"):format(winding.name, winding.turns)
      for _, left in ipairs { leg[1] - bobbin.wall - depth, leg[1] + leg[2] + bobbin.wall } do
        rectangle(picture, left, low, depth, high - low, "copper", tip)
      end
    end
  end
end

local function draw_pocket(picture, unit, leg)
  local pocket = unit.entry.pocket
  if not pocket then return end
  local middle, depth = leg[1] + leg[2] / 2, pocket.through and unit.length or pocket.depth
  rectangle(picture, middle - pocket.diameter / 2, unit.z - unit.length / 2 - depth,
    pocket.diameter, unit.length + 2 * depth, "pocket", "pocket")
end

local function draw_sensor(picture, place, probe)
  local unit, sensor = probe.unit, probe.sensor
  local leg = place.legs[unit.leg]
  local thickness = sensor:room().nom
  local width = math.min(leg[2] * 0.4, 4e-3)
  local x = leg[1] + leg[2] / 2 + probe.position.x
  rectangle(picture, x - width / 2, unit.z + probe.position.z - thickness / 2, width, thickness,
    "sensor", sensor.name)
end

-- A dimension line between two heights at x, with its text beside it.
local function height_dimension(picture, x, low, high, words)
  local tick = 4 * unit_of(picture)
  line(picture, x, low, x, high)
  for _, y in ipairs { low, high } do line(picture, x - tick, y, x + tick, y) end
  text(picture, x + 2 * tick, (low + high) / 2 - tick, words)
end

local function draw_dimensions(picture, place, part, height, yoke)
  local one, edge = unit_of(picture), place.half_width
  height_dimension(picture, edge + 10 * one, -height / 2 - yoke, height / 2 + yoke,
    mm(height + 2 * yoke))
  local below = -height / 2 - yoke - 14 * one
  line(picture, -edge, below, edge, below)
  text(picture, 0, below - 14 * one, mm(2 * edge), "middle")
  for i, entry in ipairs(part.gap_entries) do
    local gap = entry.units[1]
    local leg = place.legs[gap.leg]
    line(picture, leg[1] + leg[2], gap.z, -edge - 6 * one, gap.z, "guide")
    text(picture, -edge - 8 * one, gap.z - 4 * one, ("gap %d: %s%s"):format(i, mm(entry.length),
      #entry.units > 1 and " each" or ""), "end")
  end
end

local function draw_legs_core(part, probe)
  local place, height = layout(part), part.height
  local g = part.core.geometry
  local yoke = g.half_height - g.window_height / 2
  local width = 2 * place.half_width
  local box = { left = -place.half_width - 0.45 * width, width = 1.75 * width }
  box.height = height + 2 * yoke + 0.16 * width
  box.bottom = -box.height / 2 - 0.02 * width
  local picture = svg.new(box, 640, ("Section of %s to scale"):format(part.core.name))
  draw_yokes(picture, place, part, height)
  for _, name in ipairs { "centre", "left", "right" } do
    if place.legs[name] then draw_leg(picture, place.legs[name], name, part, height) end
  end
  for _, unit in ipairs(part.units) do draw_pocket(picture, unit, place.legs[unit.leg]) end
  draw_windings(picture, place, part, height)
  if probe then draw_sensor(picture, place, probe) end
  draw_dimensions(picture, place, part, height, yoke)
  return picture
end

-- An arc as points, from one angle to another.
local function arc(radius, from, to, points)
  local steps = 48
  for i = 0, steps do
    local angle = from + (to - from) * i / steps
    points[#points + 1] = { radius * math.cos(angle), radius * math.sin(angle) }
  end
end

local function draw_ring(part, probe)
  local g = part.core.geometry
  local outer, inner = g.ring_outer_diameter / 2, g.ring_inner_diameter / 2
  local box = { left = -1.3 * outer, bottom = -1.25 * outer, width = 2.6 * outer, height = 2.5 * outer }
  local picture = svg.new(box, 480, ("Ring %s to scale"):format(part.core.name))
  local count = math.max(#part.units, 1)
  local length = part.units[1] and part.units[1].length or 0
  for i = 1, count do
    local start = math.pi / 2 + (i - 1) * 2 * math.pi / count
    local points, after = {}, 2 * math.pi / count
    arc(outer, start + math.asin(length / 2 / outer), start + after - math.asin(length / 2 / outer),
      points)
    arc(inner, start + after - math.asin(length / 2 / inner), start + math.asin(length / 2 / inner),
      points)
    add(picture, { kind = "polygon", points = points, style = "iron", tip = "ring" })
  end
  if probe then
    local thickness, middle = probe.sensor:room().nom, (outer + inner) / 2 + probe.position.x
    local width = (outer - inner) * 0.6
    rectangle(picture, -thickness / 2, middle - width / 2, thickness, width, "sensor",
      probe.sensor.name)
  end
  text(picture, 0, -1.18 * outer, ("outside %s, inside %s, height %s%s"):format(mm(2 * outer),
    mm(2 * inner), mm(g.ring_height), length > 0 and ", gap " .. mm(length) or ""), "middle")
  return picture
end

--- The section of a part, to scale.
-- @tparam part part on a core with legs, or a ring
-- @tparam[opt] probe probe the sensor to draw in its gap
-- @treturn table picture of `entrefer.svg`, or nil for a custom core, whose shape is unknown
function drawing.section(part, probe)
  if part.topology == "ring" then return draw_ring(part, probe) end
  if part.topology == "loop" then return nil end
  return draw_legs_core(part, probe)
end

return drawing
