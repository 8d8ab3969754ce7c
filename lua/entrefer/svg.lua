--- Small pictures as plain data (shapes in real lengths), and their SVG text. A picture may come from
-- anywhere: writing it out checks every number, escapes every text and knows a short list of styles.
-- @module entrefer.svg
local fail = require "entrefer.fail"
local number = require "entrefer.number"

local svg = {}

local escapes = { ["&"] = "&amp;", ["<"] = "&lt;", [">"] = "&gt;", ['"'] = "&quot;", ["'"] = "&#39;" }

--- Text as it may stand in SVG and HTML.
function svg.escape(text)
  return (tostring(text):gsub("[&<>\"']", escapes):gsub("[%z\1-\8\11\12\14-\31]", ""))
end

--- A new picture.
-- @tparam table box `left`, `bottom`, `width`, `height` in m; y points up
-- @number pixels width of the picture in user units
-- @string title text alternative
-- @treturn table `{ box, pixels, title, shapes = {} }`; add shapes as `{ kind = "rectangle", left,
--   bottom, width, height }`, `{ kind = "line", x1, y1, x2, y2 }`, `{ kind = "polygon", points = {
--   { x, y } } }` or `{ kind = "text", x, y, text, size, anchor }`, each with `style` and `tip`
function svg.new(box, pixels, title)
  return { box = box, pixels = pixels, title = title, shapes = {} }
end

local styles = {
  iron = 'fill="#c9ced6" stroke="#222" stroke-width="1"',
  copper = 'fill="#f3d9c4" stroke="#8a4b1f" stroke-width="1" stroke-dasharray="4 2"',
  sensor = 'fill="#2b6cb0" stroke="#12324f" stroke-width="1"',
  pocket = 'fill="#fff" stroke="#222" stroke-width="1" stroke-dasharray="3 2"',
  dimension = 'stroke="#444" stroke-width="0.8"',
  guide = 'stroke="#444" stroke-width="0.8" stroke-dasharray="2 3"',
}
local anchors = { start = true, middle = true, ["end"] = true }

local function tip_of(shape)
  return shape.tip and "<title>" .. svg.escape(shape.tip) .. "</title>" or ""
end

local function style_of(shape)
  return styles[shape.style] or fail.text("picture style", ("picture style %s is unknown"):format(
    tostring(shape.style)))
end

-- Writers get the shape and two functions from metres to user units.
local writers = {}

function writers.rectangle(s, x, y, length)
  return ('<rect x="%s" y="%s" width="%s" height="%s" %s>%s</rect>'):format(x(s.left),
    y(s.bottom + s.height), length(s.width), length(s.height), style_of(s), tip_of(s))
end

function writers.line(s, x, y)
  return ('<line x1="%s" y1="%s" x2="%s" y2="%s" %s/>'):format(x(s.x1), y(s.y1), x(s.x2), y(s.y2),
    style_of(s))
end

function writers.polygon(s, x, y)
  local list = {}
  for i, point in ipairs(s.points) do list[i] = x(point[1]) .. "," .. y(point[2]) end
  return ('<polygon points="%s" %s>%s</polygon>'):format(table.concat(list, " "), style_of(s),
    tip_of(s))
end

function writers.text(s, x, y)
  return ('<text x="%s" y="%s" font-size="%s" text-anchor="%s">%s</text>'):format(x(s.x), y(s.y),
    number.fixed(s.size or 12, 1), anchors[s.anchor] and s.anchor or "start", svg.escape(s.text))
end

--- A picture as SVG text.
-- @tparam table picture from `svg.new`
-- @treturn string
-- @raise an error table when a shape or number is not what it should be
function svg.write(picture)
  local box = picture.box
  local scale = picture.pixels / box.width
  local function length(value) return number.fixed(value * scale, 2) end
  local function x(value) return length(value - box.left) end
  local function y(value) return length(box.bottom + box.height - value) end
  local parts = {}
  for i, shape in ipairs(picture.shapes) do
    local writer = writers[shape.kind]
    if not writer then fail("picture shape " .. i, shape.kind, "rectangle, line, polygon or text") end
    parts[i] = writer(shape, x, y, length)
  end
  return ('<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 %s %s" role="img" font-family='
    .. '"sans-serif"><title>%s</title>\n<rect width="100%%" height="100%%" fill="#fff"/>\n%s\n</svg>\n')
    :format(length(box.width), length(box.height), svg.escape(picture.title),
    table.concat(parts, "\n"))
end

return svg
