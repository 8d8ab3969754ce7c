--- Data files: Lua text that returns a table, read with an empty environment. Nothing of the host is
-- in reach, and a file that never ends is stopped.
-- @module entrefer.data_file
local fail = require "entrefer.fail"

local data_file = {}

local most_bytes = 4 * 1024 * 1024
local most_steps = 10 * 1000 * 1000

local function read_text(path, field)
  local file, message = io.open(path, "rb")
  if not file then fail.text(field, ("%s can't be read: %s"):format(field, message)) end
  local text = file:read(most_bytes + 1)
  file:close()
  if not text then fail.text(field, ("%s is empty or no file: %s"):format(field, path)) end
  if #text > most_bytes then
    fail(field, #text .. " bytes", ("at most %d bytes"):format(most_bytes))
  end
  return text
end

--- Evaluates the text of a data file.
-- @string text
-- @string name shown in messages
-- @tparam[opt] table env the environment (default empty)
-- @return what the text returns
-- @raise an error table with the line of a mistake
function data_file.evaluate(text, name, env)
  local chunk, message = load(text, "=" .. name, "t", env or {})
  if not chunk then fail.text(name, ("%s: %s"):format(name, message)) end
  local thread = coroutine.create(chunk)
  debug.sethook(thread, function()
    error(name .. " runs too long; allowed: a table, not a program", 0)
  end, "", most_steps)
  local done, value = coroutine.resume(thread)
  if not done then fail.text(name, tostring(value)) end
  if coroutine.status(thread) ~= "dead" then fail.text(name, name .. " did not return a value") end
  return value
end

--- Reads a data file that returns a table.
-- @string path
-- @string[opt="data file"] field for messages
-- @treturn table
function data_file.read(path, field)
  field = field or "data file"
  if type(path) ~= "string" then fail(field, path, "a path") end
  local value = data_file.evaluate(read_text(path, field), path:match("[^/]*$"))
  if type(value) ~= "table" then
    fail.text(field, ("%s returns %s; allowed: a table"):format(path, type(value)))
  end
  return value
end

--- The folder of a path, with its slash, or "".
function data_file.folder(path)
  return path:match("^(.*/)") or ""
end

data_file.read_text = read_text

return data_file
