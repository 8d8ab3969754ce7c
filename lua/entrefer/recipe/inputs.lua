--- A recipe's inputs: what it may declare, and what a user's values become. A file is an input that the
-- user names: naming it is what lets the recipe read it.
-- @module entrefer.recipe.inputs
local data_file = require "entrefer.data_file"
local fail = require "entrefer.fail"
local quantity = require "entrefer.quantity"

local inputs = {}

local fields = { "name", "unit", "default", "min", "max", "help", "kind", "choices" }
local kinds = { "quantity", "integer", "text", "choice", "data", "file", "table" }
local reads_files = { data = true, file = true, table = true }
local longest_text = 64 * 1024
local most_choices = 100

--- Checks a text that a recipe declares: short, on one line, nothing that a terminal would obey.
function inputs.check_text(value, field, most)
  if value == nil then return end
  if type(value) ~= "string" then fail(field, value, "text") end
  if #value > most then fail(field, value, ("at most %d bytes"):format(most)) end
  if value:find("[\0-\31\127]") or not utf8.len(value) then
    fail(field, value, "text in UTF-8 without control characters")
  end
end

local function check_choices(input, label)
  if type(input.choices) ~= "table" or #input.choices == 0 or #input.choices > most_choices then
    fail(label .. " choices", input.choices, ("a list of 1 to %d texts"):format(most_choices))
  end
  for i, choice in ipairs(input.choices) do
    if type(choice) ~= "string" then fail(("%s choice %d"):format(label, i), choice, "text") end
    inputs.check_text(choice, ("%s choice %d"):format(label, i), 200)
  end
end

local function kind_of(input)
  if input.kind ~= nil then return input.kind end
  return input.choices and "choice" or input.unit and "quantity" or "text"
end

local function check_one(input, label)
  fail.fields(input, fields, label)
  if type(input.name) ~= "string" or #input.name > 64 or not input.name:match("^%a[%w_]*$") then
    fail(label .. " name", input.name, "a letter, then letters, digits and _")
  end
  input.kind = kind_of(input)
  local known = false
  for _, kind in ipairs(kinds) do known = known or kind == input.kind end
  if not known then fail.unknown(label .. " kind", tostring(input.kind):sub(1, 64), kinds) end
  inputs.check_text(input.unit, label .. " unit", 32)
  inputs.check_text(input.help, label .. " help", 1000)
  if input.kind == "quantity" and not input.unit then
    fail(label .. " unit", input.unit, "a unit such as \"A\", or \"1\" for a plain number")
  end
  if input.kind == "choice" then check_choices(input, label) end
  for _, name in ipairs { "default", "min", "max" } do
    if type(input[name]) == "string" then
      inputs.check_text(input[name], ("%s %s"):format(label, name), 1000)
    elseif input[name] ~= nil and type(input[name]) ~= "number" then
      fail(("%s %s"):format(label, name), input[name], "a number or text")
    end
  end
  if reads_files[input.kind] and input.default ~= nil then
    fail(label .. " default", input.default, "none: the user says which file may be read")
  end
end

--- Checks a recipe's list of inputs and fills in their kinds.
-- @tparam table list
-- @raise an error table naming the input
function inputs.check(list)
  if type(list) ~= "table" then fail("recipe inputs", list, "a list") end
  local seen = {}
  for i, input in ipairs(list) do
    check_one(input, "input " .. i)
    if seen[input.name] then fail(("input %d name"):format(i), input.name, "a name not used before") end
    seen[input.name] = true
    if input.default ~= nil then inputs.read(input, input.default) end
  end
end

local function read_quantity(input, value, label)
  return quantity.read(tonumber(value) or value, input.unit, label,
    { min = input.min and quantity.read(input.min, input.unit, label .. " min"),
      max = input.max and quantity.read(input.max, input.unit, label .. " max") })
end

local function read_integer(input, value, label)
  local number = quantity.read(tonumber(value) or value, "1", label,
    { integer = true, min = tonumber(input.min), max = tonumber(input.max) })
  return math.tointeger(number) or fail(label, value, "a whole number")
end

local function read_choice(input, value, label)
  for _, choice in ipairs(input.choices) do
    if choice == value then return value end
  end
  fail.unknown(label, tostring(value), input.choices)
end

local function read_text(_, value, label)
  local kind = type(value)
  if kind ~= "string" and kind ~= "number" and kind ~= "boolean" then fail(label, value, "text") end
  local text = tostring(value)
  if #text > longest_text then fail(label, text, ("at most %d bytes"):format(longest_text)) end
  return text
end

local function base_name(path) return path:match("[^/]*$") end

-- All text in a table: what a data file names.
local function collect_text(value, names)
  if type(value) == "string" then names[value] = true end
  if type(value) == "table" then
    for _, item in pairs(value) do collect_text(item, names) end
  end
  return names
end

local function read_data(input, value, label)
  if type(value) == "table" then return { table = value, folder = "" } end
  if type(value) ~= "string" then fail(label, value, "a path, or a table") end
  local text = data_file.read_text(value, label)
  local read = data_file.parse(text, base_name(value), label)
  local folder = data_file.folder(value)
  return { table = read, folder = input.name .. "/" },
    { folder = folder == "" and "." or folder, names = collect_text(read, {}), text = text,
      name = input.name .. "/" .. base_name(value) }
end

local function read_table(input, value, label)
  local read, grant = read_data(input, value, label)
  return read.table, grant and { names = {}, text = grant.text, name = grant.name }
end

local function read_file(input, value, label)
  if type(value) ~= "string" then fail(label, value, "a path") end
  local name, text = base_name(value), data_file.read_text(value, label)
  local path = input.name .. "/" .. name
  return path, { path = value, names = { [name] = true }, text = text, name = path }
end

local readers = { quantity = read_quantity, integer = read_integer, choice = read_choice,
  text = read_text, data = read_data, table = read_table, file = read_file }

--- Reads one value.
-- @tparam table input its declaration, checked
-- @param value a number, text (from the command line everything is text), a table, nil for the default
-- @return what the recipe gets: see docs/recipes.md
-- @treturn ?table what the user grants with it: `{ folder | path, names, text, name }`
-- @raise an error table naming the input
function inputs.read(input, value)
  local label = "input " .. input.name
  if value == nil then value = input.default end
  if value == nil then
    fail.text(label, ("%s is missing; allowed: %s"):format(label, input.help or input.kind))
  end
  return readers[input.kind](input, value, label)
end

--- Reads all values.
-- @tparam table list declarations
-- @tparam table values by name
-- @treturn table what the recipe gets, by name
-- @treturn table grants by name
-- @raise an error table naming the input, or the unknown name
function inputs.read_all(list, values)
  local read, grants, known = {}, {}, {}
  for i, input in ipairs(list) do
    known[i] = input.name
    read[input.name], grants[input.name] = inputs.read(input, values[input.name])
  end
  fail.fields(values, known, "inputs")
  return read, grants
end

return inputs
