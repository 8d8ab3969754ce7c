--- Line plots as SVG, drawn by gnuplot, all plots of a page by one process.
--
-- A plot is plain data: `title`, `x` and `y` = { label, unit, from, to }, `series` = list of `{ name,
-- x = {...}, y = {...}, kind = "line" | "points" | "limit" }`, `alt` (text alternative). Lines differ
-- by dash as well as by colour, so that they can be told apart in black and white.
-- @module entrefer.plot
local fail = require "entrefer.fail"
local number = require "entrefer.number"
local svg = require "entrefer.svg"

local plot = {}

local colours = { "#1f4e79", "#b3541e", "#2e7d4f", "#6b3fa0", "#7a6a00", "#8c1c3f" }
local most_points = 20000

local function check_axis(axis, label)
  if type(axis) ~= "table" or type(axis.label) ~= "string" then
    fail(label, axis, "a table { label, unit }")
  end
  return axis
end

--- Checks a plot.
-- @tparam table spec see above
-- @treturn table the same
-- @raise an error table naming the series and field
function plot.check(spec)
  fail.fields(spec, { "title", "x", "y", "series", "alt" }, "plot")
  if type(spec.title) ~= "string" then fail("plot title", spec.title, "text") end
  check_axis(spec.x, "plot x")
  check_axis(spec.y, "plot y")
  if type(spec.series) ~= "table" or #spec.series == 0 then
    fail("plot series", spec.series, "a list with at least one series")
  end
  for i, series in ipairs(spec.series) do
    local label = "series " .. i
    fail.fields(series, { "name", "x", "y", "kind" }, label)
    if type(series.name) ~= "string" then fail(label .. " name", series.name, "text") end
    if type(series.x) ~= "table" or type(series.y) ~= "table" or #series.x ~= #series.y
      or #series.x == 0 or #series.x > most_points then
      fail(label .. " points", type(series.x) == "table" and #series.x or series.x,
        ("as many x as y, 1 to %d"):format(most_points))
    end
    for k = 1, #series.x do
      number.significant(series.x[k], 6) -- refuses what is no finite number
      number.significant(series.y[k], 6)
    end
  end
  return spec
end

-- Text for gnuplot: single quotes, in which nothing is expanded; back quotes, which elsewhere would run
-- a command, are taken out all the same.
local function clean(text) return (text:gsub("[%c`]", " ")) end

local function quoted(text) return "'" .. clean(text):gsub("'", "''") .. "' noenhanced" end

local function axis_text(axis)
  return axis.unit and axis.unit ~= "1" and ("%s [%s]"):format(axis.label, axis.unit) or axis.label
end

local function range_of(axis)
  return ("[%s:%s]"):format(axis.from and number.exact(axis.from) or "",
    axis.to and number.exact(axis.to) or "")
end

-- The data block of a series; its third column is what the pointer shows.
local function data_block(series, index, spec)
  local lines = { ("$d%d << ENDOFDATA"):format(index) }
  for k = 1, #series.x do
    local tip = ("%s: %s %s at %s %s"):format(series.name, number.significant(series.y[k], 4),
      spec.y.unit or "", number.significant(series.x[k], 4), spec.x.unit or "")
    lines[#lines + 1] = ('%s %s "%s"'):format(number.exact(series.x[k]), number.exact(series.y[k]),
      clean(tip):gsub('[\\"]', " "))
  end
  lines[#lines + 1] = "ENDOFDATA"
  return table.concat(lines, "\n")
end

local function draw_series(series, index)
  local colour = colours[(index - 1) % #colours + 1]
  local dash = series.kind == "limit" and 3 or (index - 1) % 5 + 1
  local style = series.kind == "points" and ("with points pt %d ps 0.6 lc rgb '%s'"):format(index + 4,
    colour) or ("with lines lw %s dt %d lc rgb '%s'"):format(series.kind == "limit" and "1.2" or "2",
    dash, colour)
  local drawn = ("$d%d using 1:2 %s title %s"):format(index, style, quoted(series.name))
  if series.kind == "limit" then return drawn end
  return drawn .. (", $d%d using 1:2:3 with labels hypertext point pt 7 ps 0.25 lc rgb '%s' notitle")
    :format(index, colour)
end

local function script_of(spec, path)
  local lines = { "reset", ("set output '%s'"):format(path),
    "set title " .. quoted(spec.title), "set xlabel " .. quoted(axis_text(spec.x)),
    "set ylabel " .. quoted(axis_text(spec.y)), "set xrange " .. range_of(spec.x),
    "set yrange " .. range_of(spec.y), "set grid lc rgb '#cccccc' lw 0.5",
    "set key outside bottom center horizontal", "set border lc rgb '#333333'" }
  local drawn = {}
  for i, series in ipairs(spec.series) do
    lines[#lines + 1] = data_block(series, i, spec)
    drawn[i] = draw_series(series, i)
  end
  lines[#lines + 1] = "plot " .. table.concat(drawn, ", ")
  lines[#lines + 1] = "unset output"
  return table.concat(lines, "\n")
end

local function read_and_remove(path)
  local file = io.open(path, "rb")
  if not file then return nil end
  local text = file:read("a")
  file:close()
  os.remove(path)
  return text
end

-- Only the picture: no prologue, no description of the tool, a title for readers without the picture.
local function tidy(text, spec)
  text = text:gsub("^.-<svg", "<svg", 1):gsub("<desc>.-</desc>", "", 1)
  text = text:gsub("<title>.-</title>", "", 1)
  return (text:gsub("(<svg.->)", function(head)
    head = head:gsub('%s+width="[^"]*"', "", 1):gsub('%s+height="[^"]*"', "", 1)
    return head .. "\n<title>" .. svg.escape(spec.alt or spec.title) .. "</title>"
  end, 1))
end

--- Draws plots.
-- @tparam table list of plots
-- @treturn table list of SVG texts, in order; empty when they could not be drawn
-- @treturn string|nil why not
-- @raise an error table for a bad plot
function plot.render(list)
  if #list == 0 then return {} end
  local base = os.tmpname()
  os.remove(base)
  local lines = { "set terminal svg size 720,430 dynamic enhanced font 'sans-serif,13'"
    .. " background rgb 'white'" }
  for i, spec in ipairs(list) do
    lines[#lines + 1] = script_of(plot.check(spec), ("%s-%d.svg"):format(base, i))
  end
  local script = base .. ".gp"
  local file = assert(io.open(script, "wb"))
  file:write(table.concat(lines, "\n"), "\n")
  file:close()
  -- What a host preloads for itself is not for gnuplot.
  local pipe = io.popen(("LC_ALL=C env -u LD_PRELOAD gnuplot '%s' 2>&1"):format(script))
  local output = pipe:read("a")
  local done = pipe:close()
  os.remove(script)
  local pictures = {}
  for i, spec in ipairs(list) do
    local text = read_and_remove(("%s-%d.svg"):format(base, i))
    if done and text and text:find("</svg>", 1, true) then pictures[i] = tidy(text, spec) end
  end
  if #pictures == #list then return pictures end
  return {}, ("the plots could not be drawn (package gnuplot-nox): %s"):format(
    output:gsub("%s+", " "):sub(1, 200))
end

return plot
