--- JSON text with sorted keys and exact numbers, so that equal records are equal bytes. (Common JSON
-- libraries write keys in the table's own order, which changes from run to run.)
-- @module entrefer.json
local fail = require "entrefer.fail"
local number = require "entrefer.number"

local json = {}

--- Stands for null.
json.null = setmetatable({}, { __tostring = function() return "null" end })

local array_meta = {}

--- Marks a table as an array (needed for empty ones).
function json.array(list) return setmetatable(list, array_meta) end

local short = { ['"'] = '\\"', ["\\"] = "\\\\", ["\n"] = "\\n", ["\r"] = "\\r", ["\t"] = "\\t" }

local function text_of(value)
  if not utf8.len(value) then fail("text of a record", value, "text in UTF-8") end
  -- Spelled out: what %c means depends on the locale.
  local escaped = value:gsub('[\0-\31"\\\127]', function(c)
    return short[c] or ("\\u%04x"):format(c:byte())
  end)
  return '"' .. escaped .. '"'
end

local encode

local longest_line = 100

-- On one line where it fits, else one part per line.
local function join(parts, open, close, indent)
  local line = open .. table.concat(parts, ", ") .. close
  if #line + #indent <= longest_line and not line:find("\n", 1, true) then return line end
  local inner = "\n" .. indent .. "  "
  return open:sub(1, 1) .. inner .. table.concat(parts, "," .. inner) .. "\n" .. indent
    .. close:sub(-1)
end

local function encode_array(list, indent, seen)
  local parts, inner, keys = {}, indent .. "  ", 0
  for _ in pairs(list) do keys = keys + 1 end
  if keys ~= #list then fail.text("record", "a list of the record has holes or named fields too") end
  for i = 1, #list do parts[i] = encode(list[i], inner, seen) end
  return join(parts, "[", "]", indent)
end

local function encode_record(record, indent, seen)
  local keys, inner = {}, indent .. "  "
  for key in pairs(record) do
    if type(key) ~= "string" then fail("key of a record", key, "text") end
    keys[#keys + 1] = key
  end
  if #keys == 0 then return "{}" end
  table.sort(keys)
  for i, key in ipairs(keys) do
    keys[i] = text_of(key) .. ": " .. encode(record[key], inner, seen)
  end
  return join(keys, "{ ", " }", indent)
end

function encode(value, indent, seen)
  local kind = type(value)
  if value == json.null then return "null" end
  if kind == "number" then
    return seen.digits and number.rounded(value, seen.digits) or number.exact(value)
  end
  if kind == "string" then return text_of(value) end
  if kind == "boolean" then return tostring(value) end
  if kind ~= "table" then fail("value of a record", value, "a number, text, boolean or table") end
  if seen[value] then fail.text("record", "the record contains itself") end
  seen[value] = true
  local is_array = getmetatable(value) == array_meta or #value > 0
  local text = (is_array and encode_array or encode_record)(value, indent, seen)
  seen[value] = nil
  return text
end

--- Encodes plain data.
-- @param value number, text (UTF-8), boolean, list or table with text keys
-- @tparam[opt] integer digits significant digits of numbers (default: all)
-- @treturn string
-- @raise an error table for anything else, for NaN and infinities, and for cycles
function json.encode(value, digits)
  return encode(value, "", { digits = digits })
end

return json
