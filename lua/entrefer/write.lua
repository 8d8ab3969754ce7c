--- Tables and records as aligned text, Markdown, CSV and JSON, and files that are whole or not there.
-- The same input gives the same bytes on every machine.
-- @module entrefer.write
local fail = require "entrefer.fail"
local json = require "entrefer.json"
local number = require "entrefer.number"

local write = {}

local made = {}
made.__index = made

local function heading(column)
  if column.unit and column.unit ~= "1" then return ("%s [%s]"):format(column.name, column.unit) end
  return column.name
end

-- Records keep fewer digits than a double has, so that the last digits of a maths library, which
-- differ between machines, do not show.
local record_digits = 6

local function cell_text(value, column)
  if value == nil then return "" end
  if type(value) ~= "number" then return tostring(value) end
  if column.digits == 0 then return number.fixed(value, 0) end
  return number.significant(value, column.digits or 4)
end

local function check_columns(columns)
  if type(columns) ~= "table" or #columns == 0 then fail("columns", columns, "a list of columns") end
  for i, column in ipairs(columns) do
    local label = "column " .. i
    if type(column) ~= "table" then fail(label, column, "a table { name, unit, digits }") end
    if type(column.name) ~= "string" then fail(label .. " name", column.name, "text") end
    if column.unit ~= nil and type(column.unit) ~= "string" then
      fail(label .. " unit", column.unit, "text")
    end
  end
end

local function check_row(row, columns, label)
  if type(row) ~= "table" then fail(label, row, "a list of cells") end
  for key, value in pairs(row) do
    if math.type(key) ~= "integer" or key < 1 or key > #columns then
      fail(label .. ", cell", key, ("1 to %d"):format(#columns))
    end
    local kind = type(value)
    if kind == "number" and value - value ~= 0 then
      fail(("%s, %s"):format(label, columns[key].name), value, "a finite number")
    elseif kind ~= "number" and kind ~= "string" and kind ~= "boolean" then
      fail(("%s, %s"):format(label, columns[key].name), value, "a number, text or boolean")
    end
  end
end

--- A table.
-- @tparam table spec `columns`: list of `{ name, unit, digits }`, significant digits (default 4; 0:
--   whole numbers) for `text` and `markdown`; `rows`: list of lists of numbers in the column's unit,
--   text, booleans or nil
-- @treturn table with methods `text`, `markdown`, `csv`, `json`
-- @raise an error table that names the row and column of what can't be written
function write.table(spec)
  fail.fields(spec, { "columns", "rows" }, "table")
  check_columns(spec.columns)
  if type(spec.rows) ~= "table" then fail("rows", spec.rows, "a list of rows") end
  for i, row in ipairs(spec.rows) do check_row(row, spec.columns, "row " .. i) end
  return setmetatable({ columns = spec.columns, rows = spec.rows }, made)
end

local function is_numeric(self, index)
  for _, row in ipairs(self.rows) do
    if row[index] ~= nil then return type(row[index]) == "number" end
  end
  return false
end

local function pad(text, width, right)
  local gap = (" "):rep(width - (utf8.len(text) or #text))
  return right and gap .. text or text .. gap
end

local function all_cells(self, escape)
  local lines = { {} }
  for k, column in ipairs(self.columns) do lines[1][k] = escape(heading(column)) end
  for i, row in ipairs(self.rows) do
    local line = {}
    for k, column in ipairs(self.columns) do line[k] = escape(cell_text(row[k], column)) end
    lines[i + 1] = line
  end
  local widths = {}
  for k in ipairs(self.columns) do
    widths[k] = 3
    for _, line in ipairs(lines) do
      widths[k] = math.max(widths[k], utf8.len(line[k]) or #line[k])
    end
  end
  return lines, widths
end

local function one_line(text) return (text:gsub("[\0-\31\127]+", " ")) end

-- Breaks text at spaces into lines of at most `width` characters; a longer word stands alone.
local function wrap(text, width)
  local lines, line = {}, ""
  for word in text:gmatch("%S+") do
    local joined = line == "" and word or line .. " " .. word
    if line ~= "" and (utf8.len(joined) or #joined) > width then
      lines[#lines + 1], line = line, word
    else
      line = joined
    end
  end
  lines[#lines + 1] = line
  return lines
end

local widest_text = 64

-- One row as lines of the terminal: long text continues below, in its own column.
local function row_lines(self, cells, widths)
  local wrapped, height, out = {}, 1, {}
  for k, text in ipairs(cells) do
    wrapped[k] = wrap(text, widths[k])
    height = math.max(height, #wrapped[k])
  end
  for i = 1, height do
    local parts = {}
    for k in ipairs(cells) do
      parts[k] = pad(wrapped[k][i] or "", widths[k], is_numeric(self, k))
    end
    out[i] = (table.concat(parts, "  "):gsub("%s+$", ""))
  end
  return table.concat(out, "\n")
end

--- Aligned columns for the terminal; headings and long text are wrapped inside their column.
function made:text()
  local lines = all_cells(self, one_line)
  local widths = {}
  for k in ipairs(self.columns) do
    -- A number's heading may take several lines, so that the column is as wide as its figures.
    local most, widest = is_numeric(self, k) and 12 or widest_text, 3
    for _, line in ipairs(lines) do
      for _, piece in ipairs(wrap(line[k], most)) do
        widest = math.max(widest, utf8.len(piece) or #piece)
      end
    end
    widths[k] = widest
  end
  local out, rules = {}, {}
  for i, line in ipairs(lines) do out[i] = row_lines(self, line, widths) end
  for k, width in ipairs(widths) do rules[k] = ("-"):rep(width) end
  table.insert(out, 2, table.concat(rules, "  "))
  return table.concat(out, "\n") .. "\n"
end

-- What would end the cell or turn its text into markup. A bracket alone (a unit's) is left as it is.
local function escape_markdown(text)
  return (one_line(text):gsub("[\\|*_`<]", "\\%0"):gsub("%](%s*[%(%[])", "\\]%1"))
end

--- A Markdown table.
function made:markdown()
  local lines, widths = all_cells(self, escape_markdown)
  local out = {}
  for i, line in ipairs(lines) do
    local cells = {}
    for k, text in ipairs(line) do cells[k] = pad(text, widths[k], is_numeric(self, k)) end
    out[#out + 1] = "| " .. table.concat(cells, " | ") .. " |"
    if i == 1 then
      local rules = {}
      for k, width in ipairs(widths) do
        rules[k] = ("-"):rep(width - 1) .. (is_numeric(self, k) and ":" or "-")
      end
      out[#out + 1] = "| " .. table.concat(rules, " | ") .. " |"
    end
  end
  return table.concat(out, "\n") .. "\n"
end

-- RFC 4180; text that a spreadsheet would take for a formula gets an apostrophe in front. A signed
-- number or percentage is none.
local function is_formula(text)
  return text:match("^[=+%-@\t\r]") and not text:match("^[+-]%d+%.?%d*%s?%%?$")
end

local function escape_csv(value)
  if type(value) == "number" then return number.rounded(value, record_digits) end
  local text = value == nil and "" or tostring(value)
  if is_formula(text) then text = "'" .. text end
  if text:find('[",\r\n]') then text = '"' .. text:gsub('"', '""') .. '"' end
  return text
end

--- Comma-separated values after RFC 4180, numbers with six significant digits.
function made:csv()
  local out, cells = {}, {}
  for k, column in ipairs(self.columns) do cells[k] = escape_csv(heading(column)) end
  out[1] = table.concat(cells, ",")
  for i, row in ipairs(self.rows) do
    local line = {}
    for k in ipairs(self.columns) do line[k] = escape_csv(row[k]) end
    out[i + 1] = table.concat(line, ",")
  end
  return table.concat(out, "\r\n") .. "\r\n"
end

--- JSON: `{ "columns": [{ "name", "unit" }], "rows": [[...]] }`, numbers as in `csv`.
function made:json()
  local columns, rows = {}, {}
  for k, column in ipairs(self.columns) do columns[k] = { name = column.name, unit = column.unit } end
  for i, row in ipairs(self.rows) do
    rows[i] = {}
    for k in ipairs(self.columns) do rows[i][k] = row[k] == nil and json.null or row[k] end
  end
  return write.json { columns = columns, rows = json.array(rows) }
end

--- A record as JSON with sorted keys, numbers with six significant digits (integers whole).
-- @param value number, text, boolean, list or table with text keys
-- @treturn string
function write.json(value)
  return json.encode(value, record_digits) .. "\n"
end

--- Writes a file: first under a temporary name beside it, then renamed, so that it is whole or not
-- there.
-- @string path
-- @string text
-- @raise an error table; the temporary file is removed
function write.file(path, text)
  local temporary = path .. ".part"
  local file, message = io.open(temporary, "wb")
  if not file then fail.text("output file", ("%s can't be written: %s"):format(path, message)) end
  local written, why = file:write(text)
  local closed, close_why = file:close()
  if not (written and closed) then
    os.remove(temporary)
    fail.text("output file", ("%s can't be written: %s"):format(path, why or close_why))
  end
  local renamed, rename_why = os.rename(temporary, path)
  if not renamed then
    os.remove(temporary)
    fail.text("output file", ("%s can't be written: %s"):format(path, rename_why))
  end
end

return write
