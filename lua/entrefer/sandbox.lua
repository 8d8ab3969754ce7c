--- Runs recipes in a Lua state of their own, with limits, and decides what they may read. The state is
-- made by the C module (`core.isolated`); `entrefer.sandbox.inside` is the first code in it.
-- @module entrefer.sandbox
local core = require "entrefer.core"
local data_file = require "entrefer.data_file"
local fail = require "entrefer.fail"

local sandbox = {}

local mebibyte = 1024 * 1024

--- Limits of a run, unless the caller sets others: bytes of memory, instructions (about 10 to 20 s of
-- plain Lua), seconds of processor time, bytes of results and page.
sandbox.limits = { memory = 256 * mebibyte, instructions = 2000000000, seconds = 120,
  result = 64 * mebibyte }

-- A description is a table of a few lines.
local description = { memory = 16 * mebibyte, instructions = 10000000, seconds = 5,
  result = 256 * 1024 }

-- The library's source files, read once: they do not change while it runs.
local sources = {}

local function source_of(name)
  if not name:match("^entrefer%.[%w_.]+$") and name ~= "entrefer" or name:find("..", 1, true) then
    return nil, "only the library's own modules are"
  end
  if not sources[name] then
    local path, why = package.searchpath(name, package.path)
    if not path then return nil, (why:gsub("%s+", " ")) end
    local text, err = fail.try(data_file.read_text, path, "module " .. name)
    if not text then return nil, err.message end
    sources[name] = text
  end
  return sources[name]
end

-- What the user granted. `grant.folder` and the names below it that a data file gives, or `grant.path`,
-- one file, under the name `grant.name`.
local function read_granted(grants, path)
  local input, name = path:match("^(%a[%w_]*)/(.+)$")
  local grant = input and grants[input]
  if not grant or not grant.names[name] then
    return nil, path .. ": not granted to this recipe (it may read the files given as its inputs, and"
      .. " files that a data file among them names, in the same folder or below)"
  end
  if grant.path then
    local text, err = fail.try(data_file.read_text, grant.path, "input " .. input)
    return text, err and err.message
  end
  local text, why = core.read_below(grant.folder, name, data_file.most_bytes)
  if not text then return nil, path .. ": " .. why end
  return text
end

local function isolated(request, limits, answer)
  return core.isolated { text = source_of "entrefer.sandbox.inside", name = request.name,
    request = request, answer = answer, memory = limits.memory, result = limits.result,
    instructions = limits.instructions, seconds = limits.seconds }
end

--- What a recipe's text says about itself; its flow is not run.
-- @string text
-- @string name shown in messages
-- @treturn table `kind` (the type of what the text returns) and `fields`, with `run` = the type of run
-- @raise an error table
function sandbox.describe(text, name)
  return isolated({ mode = "describe", text = text, name = name }, description)
end

-- The same in a child process, whose own limits stand behind those of the state: its clock starts
-- earlier and it holds the interpreter too. An error crosses as its fields.
local function in_child(f, limits)
  local answer = core.child({ seconds = limits.seconds + 5, memory = 2 * limits.memory,
    result = 2 * limits.result }, function()
    local done, err = fail.try(f)
    if done then return { done = done } end
    return { code = err.code, field = err.field, message = err.message }
  end)
  if type(answer) ~= "table" then fail.text("process", "the result can't be handed over: " .. answer) end
  return answer.done or fail.coded(answer.code, answer.field, answer.message)
end

local option_names = { "memory", "instructions", "seconds", "process" }

local function read_limits(options)
  fail.fields(options, option_names, "run options")
  local limits = {}
  for name, value in pairs(sandbox.limits) do limits[name] = value end
  for name, value in pairs(options) do
    if name == "process" then
      if type(value) ~= "boolean" then fail("run options process", value, "true or false") end
    elseif type(value) ~= "number" or not (value > 0 and value < 1e15) then
      fail("run options " .. name, value, "a number above 0")
    end
    limits[name] = value
  end
  return limits
end

-- What moves a cursor or changes colours has no place in a report: text of a page as it may be shown.
local function printable(value)
  if type(value) == "string" then
    return (value:gsub("[\0-\8\11-\31\127]", "?"):gsub("\xC2[\x80-\x9F]", "?"))
  end
  if type(value) ~= "table" then return value end
  local copy = {}
  for key, item in pairs(value) do copy[printable(key)] = printable(item) end
  return copy
end

--- Runs a recipe's text.
-- @tparam table recipe `text`, `name`, `title`
-- @tparam table inputs plain data
-- @tparam table grants by input's name: `{ folder, names }` or `{ path, names }`
-- @tparam table options `memory` (bytes), `instructions`, `seconds`, see `sandbox.limits`; `process` =
--   true: in a child process, with limits of the operating system too
-- @return what its run returned: plain data, not yet checked
-- @treturn table the page as plain data
-- @treturn table list of `{ name, sha256 }`, the granted files that were read
-- @raise an error table; its code is "limit" when a limit was reached
function sandbox.run(recipe, inputs, grants, options)
  local read, seen = {}, {}
  local function answer(what, argument)
    if what == "module" then return source_of(argument) end
    if what ~= "file" then return nil, "no such question" end
    local text, why = read_granted(grants, argument)
    if text and not seen[argument] then
      seen[argument] = true
      read[#read + 1] = { name = argument, sha256 = core.sha256(text) }
    end
    return text, why
  end
  local request = { mode = "run", text = recipe.text, name = recipe.name, title = recipe.title,
    inputs = inputs }
  local limits = read_limits(options)
  local function work()
    local crossed = isolated(request, limits, answer)
    table.sort(read, function(a, b) return a.name < b.name end)
    return { crossed = crossed, read = read }
  end
  local done = options.process and in_child(work, limits) or work()
  return done.crossed.results, printable(done.crossed.page), done.read
end

return sandbox
