--- Data files: Lua text that returns a table, evaluated in an empty state of its own. Nothing of the
-- host is in reach, not even the methods of text, and a file that never ends is stopped.
-- @module entrefer.data_file
local core = require "entrefer.core"
local fail = require "entrefer.fail"

local data_file = {}

--- Largest file that is read, bytes.
data_file.most_bytes = 4 * 1024 * 1024

local limits = { memory = 64 * 1024 * 1024, instructions = 10000000, seconds = 10,
  result = 16 * 1024 * 1024 }

--- Reads the text of a file.
-- @string path
-- @string field for messages
-- @treturn string
-- @raise an error table: can't be read, too large
function data_file.read_text(path, field)
  local file, message = io.open(path, "rb")
  if not file then fail.text(field, ("%s can't be read: %s"):format(field, message)) end
  local text = file:read(data_file.most_bytes + 1)
  file:close()
  if not text then fail.text(field, ("%s is empty or no file: %s"):format(field, path)) end
  if #text > data_file.most_bytes then
    fail(field, #text .. " bytes", ("at most %d bytes"):format(data_file.most_bytes))
  end
  return text
end

--- Refuses text that names _ENV: no file needs it, and compilers of Lua up to 5.4.4 could be led into
-- wrong code by it.
-- @string text
-- @string name shown in messages
function data_file.refuse_env(text, name)
  if text:find("%f[%w_]_ENV%f[^%w_]") then
    fail.text(name, name .. " names _ENV; allowed: plain Lua without it")
  end
end

--- Evaluates the text of a data file.
-- @string text
-- @string name shown in messages
-- @return what the text returns: plain data
-- @raise an error table with the line of a mistake; its code is "limit" for a text that runs on or
--   needs too much memory
function data_file.evaluate(text, name)
  data_file.refuse_env(text, name)
  return core.isolated { text = text, name = name, bare = true, memory = limits.memory,
    instructions = limits.instructions, seconds = limits.seconds, result = limits.result }
end

--- Evaluates the text of a data file that must return a table.
-- @string text
-- @string name shown in messages
-- @string field for messages
-- @treturn table
function data_file.parse(text, name, field)
  local value = data_file.evaluate(text, name)
  if type(value) ~= "table" then
    fail.text(field, ("%s returns %s; allowed: a table"):format(name, type(value)))
  end
  return value
end

--- Reads a data file that returns a table.
-- @string path
-- @string[opt="data file"] field for messages
-- @treturn table
function data_file.read(path, field)
  field = field or "data file"
  if type(path) ~= "string" then fail(field, path, "a path") end
  return data_file.parse(data_file.read_text(path, field), path:match("[^/]*$"), field)
end

--- The folder of a path, with its slash, or "".
function data_file.folder(path)
  return path:match("^(.*/)") or ""
end

return data_file
