--- Recipes: one file that returns a self-describing table. A recipe never runs in its user's Lua state:
-- it is described, and run, in fresh ones with limits, and plain data come back.
-- @module entrefer.recipe
local core = require "entrefer.core"
local data_file = require "entrefer.data_file"
local fail = require "entrefer.fail"
local inputs = require "entrefer.recipe.inputs"
local page = require "entrefer.page"
local sandbox = require "entrefer.sandbox"

local recipe = {}

--- Version of the recipe format.
recipe.format = 1

local top_fields = { "entrefer", "title", "purpose", "author", "version", "inputs", "results", "run" }
local longest_result = 4096

local function check_result(result, index)
  local label = "result " .. index
  fail.fields(result, { "name", "unit", "help" }, label)
  if type(result.name) ~= "string" or #result.name > 64 or not result.name:match("^%a[%w_]*$") then
    fail(label .. " name", result.name, "a letter, then letters, digits and _")
  end
  inputs.check_text(result.unit, label .. " unit", 32)
  inputs.check_text(result.help, label .. " help", 1000)
end

local function check(described, name)
  if described.kind ~= "table" then fail(name, described.kind, "a table returned by the recipe") end
  local loaded = described.fields
  fail.fields(loaded, top_fields, name)
  if loaded.entrefer ~= recipe.format then
    fail("recipe entrefer", loaded.entrefer, recipe.format .. ", the recipe format")
  end
  for _, field in ipairs { "title", "purpose" } do
    if type(loaded[field]) ~= "string" then fail("recipe " .. field, loaded[field], "text") end
  end
  for _, field in ipairs { "title", "purpose", "author", "version" } do
    inputs.check_text(loaded[field], "recipe " .. field, 1000)
  end
  if loaded.run ~= "function" then fail("recipe run", loaded.run, "a function") end
  loaded.inputs, loaded.results = loaded.inputs or {}, loaded.results or {}
  inputs.check(loaded.inputs)
  if type(loaded.results) ~= "table" then fail("recipe results", loaded.results, "a list") end
  for i, result in ipairs(loaded.results) do check_result(result, i) end
  return loaded
end

--- Reads and checks a recipe's text without running its flow.
-- @string text Lua source (never byte code)
-- @string name shown in messages
-- @treturn table `title`, `purpose`, `author`, `version`, `inputs`, `results`, and `text`, `name`,
--   `sha256`
-- @raise an error table
function recipe.parse(text, name)
  data_file.refuse_env(text, name)
  local loaded = check(sandbox.describe(text, name), name)
  loaded.run, loaded.text, loaded.name, loaded.sha256 = nil, text, name, core.sha256(text)
  return loaded
end

--- Reads and checks a recipe file without running its flow.
-- @string path
-- @treturn table as `parse`
-- @raise an error table
function recipe.load(path)
  return recipe.parse(data_file.read_text(path, "recipe file"), path:match("[^/]*$"))
end

--- Checks a recipe file and says what a reader of it would miss.
-- @string path
-- @treturn table `passed`; `problem` (the error table, when it did not pass); `remarks` (list of texts);
--   `recipe` (as `load` gives it, when it passed)
function recipe.check(path)
  local loaded, problem = fail.try(recipe.load, path)
  if not loaded then return { passed = false, problem = problem, remarks = {} } end
  local remarks = {}
  if not loaded.version then remarks[1] = "the recipe states no version" end
  for _, input in ipairs(loaded.inputs) do
    if not input.help then remarks[#remarks + 1] = ("input %s has no help"):format(input.name) end
    if input.kind == "quantity" and not (input.min or input.max) then
      remarks[#remarks + 1] = ("input %s has no range"):format(input.name)
    end
  end
  if #loaded.results == 0 then remarks[#remarks + 1] = "the recipe declares no results" end
  return { passed = true, remarks = remarks, recipe = loaded }
end

local function check_value(declared, value)
  local field = "result " .. declared.name
  local kind = type(value)
  if declared.unit then
    if kind ~= "number" or value - value ~= 0 then
      fail(field, value, "a finite number in " .. declared.unit)
    end
  elseif kind == "number" then
    if value - value ~= 0 then fail(field, value, "a finite number") end
  elseif kind == "string" then
    inputs.check_text(value, field, longest_result)
  elseif kind ~= "boolean" then
    fail(field, value, "a number, text or boolean")
  end
end

local function check_results(loaded, results)
  if type(results) ~= "table" then fail("recipe results", results, "a table of results") end
  local by_name = {}
  for _, declared in ipairs(loaded.results) do by_name[declared.name] = declared end
  for name, value in pairs(results) do
    if not by_name[name] then
      fail.text("result", ("result %s is not declared"):format(tostring(name):sub(1, 64)))
    end
    check_value(by_name[name], value)
  end
  return results
end

local function provenance(loaded, read, grants, files)
  local shown, listed = {}, {}
  for _, input in ipairs(loaded.inputs) do
    local grant, value = grants[input.name], read[input.name]
    if grant then listed[#listed + 1] = { name = grant.name, sha256 = core.sha256(grant.text) } end
    shown[input.name] = grant and grant.name or type(value) == "table" and "a table" or value
  end
  for _, file in ipairs(files) do
    local seen = false
    for _, one in ipairs(listed) do seen = seen or one.name == file.name end
    if not seen then listed[#listed + 1] = file end
  end
  return { entrefer = core.version, format = recipe.format, hash = "SHA-256",
    recipe = { name = loaded.name, sha256 = loaded.sha256, version = loaded.version },
    inputs = shown, files = listed }
end

--- Runs a recipe in a state of its own.
-- @tparam table loaded from `recipe.load`
-- @tparam[opt] table values inputs by name: numbers in SI, text with units, paths of data files
-- @tparam[opt] table options `memory` (bytes, default 256 MiB), `instructions` (default 2e9), `seconds`
--   (of processor time, default 120), `process` (true: in a child process, as the command does; POSIX)
-- @treturn table results as the recipe declares them
-- @treturn page rebuilt from plain data: `text()`, `markdown()`, `html()`, `save(folder)`
-- @treturn table provenance: `entrefer` (version), `format`, `recipe = { name, sha256, version }`,
--   `inputs`, `files` (list of `{ name, sha256 }` of every file that was read)
-- @raise an error table; code "limit" when a limit was reached
function recipe.run(loaded, values, options)
  local read, grants = inputs.read_all(loaded.inputs, values or {})
  local results, story, files = sandbox.run(loaded, read, grants, options or {})
  return check_results(loaded, results), page.from(story), provenance(loaded, read, grants, files)
end

--- Reads, checks and runs a recipe: `ef.run_recipe`.
-- @string recipe_file path of a recipe, or its text (which has more than one line)
-- @tparam[opt] table values as in `run`
-- @tparam[opt] table options as in `run`
-- @return as `run`
function recipe.run_file(recipe_file, values, options)
  if type(recipe_file) ~= "string" then fail("recipe", recipe_file, "a path, or the recipe's text") end
  local loaded = recipe_file:find("\n", 1, true) and recipe.parse(recipe_file, "recipe")
    or recipe.load(recipe_file)
  return recipe.run(loaded, values, options)
end

return recipe
