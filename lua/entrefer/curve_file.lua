--- Digitised magnetisation curves from a CSV file: columns H, B and (if there are several
-- temperatures) temperature, in any order, with the unit in the heading:
--
--    H [A/m], B [mT], temperature [degC]
--
-- Lines that start with # are comments. A missing point at H = 0, B = 0 is added.
-- @module entrefer.curve_file
local fail = require "entrefer.fail"
local quantity = require "entrefer.quantity"

local curve_file = {}

local column_of = { h = "h", b = "b", t = "temperature" }
local unit_of = { h = "A/m", b = "T", temperature = "degC" }

local function split(line)
  local cells = {}
  for cell in (line .. ","):gmatch("([^,;\t]*)[,;\t]") do
    cells[#cells + 1] = cell:match("^%s*(.-)%s*$")
  end
  return cells
end

local function read_heading(line, where)
  local columns, seen = {}, {}
  for i, cell in ipairs(split(line)) do
    local name, unit = cell:match("^\"?%s*(%a+)[^%[%(]*[%[%(]%s*(.-)%s*[%]%)]\"?$")
    local key = name and column_of[name:sub(1, 1):lower()]
    if not key or seen[key] then
      fail(where .. ", heading", cell,
        "one each of H [unit], B [unit] and, for several temperatures, temperature [degC]")
    end
    seen[key] = true
    columns[i] = { key = key, unit = unit }
  end
  if not (seen.h and seen.b) then
    fail(where .. ", heading", line, "at least the columns H [unit] and B [unit]")
  end
  return columns
end

local function read_row(line, columns, where)
  local cells, row = split(line), {}
  for i, column in ipairs(columns) do
    local number = tonumber(cells[i])
    if not number then fail(where .. ", column " .. i, cells[i], "a number") end
    row[column.key] = quantity.read(("%.17g %s"):format(number, column.unit), unit_of[column.key],
      where .. ", column " .. i)
  end
  if row.h < 0 then
    fail(where .. ", H", row.h, "0 or more: the curve from the origin, not the loop")
  end
  return row
end

local function group(rows, default_temperature)
  local curves, by_temperature = {}, {}
  for _, row in ipairs(rows) do
    local t = row.temperature or default_temperature
    local curve = by_temperature[t]
    if not curve then
      curve = { temperature = t, h = {}, b = {} }
      by_temperature[t], curves[#curves + 1] = curve, curve
      if row.h > 0 then curve.h[1], curve.b[1] = 0, 0 end
    end
    curve.h[#curve.h + 1], curve.b[#curve.b + 1] = row.h, row.b
  end
  table.sort(curves, function(a, b) return a.temperature < b.temperature end)
  return curves
end

--- Parses the text of a curve file.
-- @string text
-- @string name file name, for messages
-- @tparam[opt=25] number temperature degC, of a file without a temperature column
-- @treturn table list of `{ temperature, h = {A/m}, b = {T} }`, sorted by temperature
-- @raise an error table that names the line
function curve_file.parse(text, name, temperature)
  local columns, rows, number = nil, {}, 0
  for line in (text:gsub("^\239\187\191", "") .. "\n"):gmatch("(.-)\r?\n") do
    number = number + 1
    local where = ("%s line %d"):format(name, number)
    if not line:match("^%s*#") and line:match("%S") then
      if columns then
        rows[#rows + 1] = read_row(line, columns, where)
      else
        columns = read_heading(line, where)
      end
    end
  end
  if #rows == 0 then
    fail.text(name, name .. " holds no points; allowed: a heading and rows of numbers")
  end
  return group(rows, temperature or 25)
end

--- Reads a curve file.
-- @string path
-- @tparam[opt=25] number temperature degC, of a file without a temperature column
-- @treturn table as `parse`
function curve_file.read(path, temperature)
  local file, message = io.open(path, "rb")
  if not file then fail.text("curve file", "the curve file can't be read: " .. tostring(message)) end
  local text = file:read("a")
  file:close()
  return curve_file.parse(text or "", path:match("[^/]*$"), temperature)
end

return curve_file
