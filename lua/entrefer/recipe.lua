--- Recipes: one file that returns a self-describing table, checked before it runs, and run with
-- nothing in reach but the library, its inputs and its page.
-- @module entrefer.recipe
local data_file = require "entrefer.data_file"
local fail = require "entrefer.fail"
local page_module = require "entrefer.page"
local quantity = require "entrefer.quantity"

local recipe = {}

local top_fields = { "entrefer", "title", "purpose", "author", "version", "inputs", "results", "run" }
local input_fields = { "name", "unit", "default", "min", "max", "help", "kind", "choices" }
local kinds = { quantity = true, text = true, choice = true, data = true }

-- The safe part of the standard library; a recipe gets its own copies.
local function environment()
  local env = {}
  for _, name in ipairs { "assert", "error", "ipairs", "next", "pairs", "pcall", "select",
    "tonumber", "tostring", "type", "xpcall" } do
    env[name] = _G[name]
  end
  for name, skip in pairs { string = { dump = true }, table = {}, math = { randomseed = true } } do
    env[name] = {}
    for key, value in pairs(_G[name]) do
      if not skip[key] then env[name][key] = value end
    end
  end
  return env
end

local function check_input(input, index)
  local label = "input " .. index
  if type(input) ~= "table" then fail(label, input, "a table") end
  fail.fields(input, input_fields, label)
  if type(input.name) ~= "string" or not input.name:match("^%a[%w_]*$") then
    fail(label .. " name", input.name, "a letter, then letters, digits and _")
  end
  input.kind = input.kind or (input.choices and "choice") or (input.unit and "quantity") or "text"
  if not kinds[input.kind] then
    fail.unknown(label .. " kind", tostring(input.kind), { "quantity", "text", "choice", "data" })
  end
  if input.kind == "quantity" and type(input.unit) ~= "string" then
    fail(label .. " unit", input.unit, "a unit such as \"A\", or \"1\" for a plain number")
  end
  if input.kind == "choice" and type(input.choices) ~= "table" then
    fail(label .. " choices", input.choices, "a list")
  end
end

local function check(loaded, name)
  if type(loaded) ~= "table" then fail(name, loaded, "a table returned by the recipe") end
  fail.fields(loaded, top_fields, name)
  if loaded.entrefer ~= 1 then fail("recipe entrefer", loaded.entrefer, "1, the recipe format") end
  for _, field in ipairs { "title", "purpose" } do
    if type(loaded[field]) ~= "string" then fail("recipe " .. field, loaded[field], "text") end
  end
  if type(loaded.run) ~= "function" then fail("recipe run", loaded.run, "a function") end
  loaded.inputs, loaded.results = loaded.inputs or {}, loaded.results or {}
  for i, input in ipairs(loaded.inputs) do check_input(input, i) end
  for i, result in ipairs(loaded.results) do
    fail.fields(result, { "name", "unit", "help" }, "result " .. i)
  end
  return loaded
end

--- Reads and checks a recipe file without running its flow.
-- @string path
-- @treturn table the recipe
-- @raise an error table
function recipe.load(path)
  local name = path:match("[^/]*$")
  return check(data_file.evaluate(data_file.read_text(path, "recipe file"), name, environment()),
    name)
end

local function read_input(input, value)
  local label = "input " .. input.name
  if value == nil then value = input.default end
  if value == nil then
    fail.text(label, ("%s is missing; allowed: %s"):format(label, input.help or input.kind))
  end
  if input.kind == "quantity" then
    return quantity.read(tonumber(value) or value, input.unit, label,
      { min = input.min and quantity.read(input.min, input.unit, label),
        max = input.max and quantity.read(input.max, input.unit, label) })
  elseif input.kind == "choice" then
    for _, choice in ipairs(input.choices) do
      if choice == value then return value end
    end
    fail.unknown(label, tostring(value), input.choices)
  elseif input.kind == "data" then
    return { table = data_file.read(value, label), folder = data_file.folder(value) }
  end
  return tostring(value)
end

local function read_inputs(loaded, values)
  local inputs, known = {}, {}
  for _, input in ipairs(loaded.inputs) do
    known[#known + 1] = input.name
    inputs[input.name] = read_input(input, values[input.name])
  end
  for name in pairs(values) do
    local found = false
    for _, one in ipairs(known) do found = found or one == name end
    if not found then fail.unknown("input", tostring(name), known) end
  end
  return inputs
end

local function check_results(loaded, results)
  if type(results) ~= "table" then fail("recipe results", results, "a table of results") end
  for _, declared in ipairs(loaded.results) do
    local value = results[declared.name]
    if declared.unit and value ~= nil and (type(value) ~= "number" or value ~= value) then
      fail("result " .. declared.name, value, "a number in " .. declared.unit)
    end
  end
  for name in pairs(results) do
    local found = false
    for _, declared in ipairs(loaded.results) do found = found or declared.name == name end
    if not found then fail.text("result", ("result %s is not declared"):format(tostring(name))) end
  end
  return results
end

--- Runs a recipe.
-- @tparam table loaded from `recipe.load`
-- @tparam table values inputs by name: numbers in SI, text with units, paths of data files
-- @treturn table results as the recipe declares them
-- @treturn page
function recipe.run(loaded, values)
  local inputs = read_inputs(loaded, values or {})
  local page = page_module.new(loaded.title)
  return check_results(loaded, loaded.run(require "entrefer", inputs, page)), page
end

return recipe
