--- Running the command line from the specs.
local lfs = require "lfs"

local command = {}

local lua = "/usr/bin/lua5.4"

--- The text of a file.
function command.read(path)
  local file = assert(io.open(path, "rb"))
  local text = file:read("a")
  file:close()
  return text
end

--- Makes a file.
function command.write(path, text)
  local file = assert(io.open(path, "wb"))
  file:write(text)
  file:close()
end

--- Makes an empty folder; returns its path.
function command.fresh_folder()
  local name = os.tmpname()
  os.remove(name)
  assert(lfs.mkdir(name))
  return name
end

--- Removes a folder with all that is in it.
function command.remove_folder(folder)
  for entry in lfs.dir(folder) do
    local path = folder .. "/" .. entry
    if entry ~= "." and entry ~= ".." then
      if lfs.attributes(path, "mode") == "directory" then command.remove_folder(path) else os.remove(path) end
    end
  end
  lfs.rmdir(folder)
end

--- Runs the command; returns exit code, standard output, standard error. `prefix` stands before it, e.g.
-- to set the environment.
function command.entrefer(arguments, prefix)
  local out, err = os.tmpname(), os.tmpname()
  local _, _, code = os.execute(("%s %s lua/bin/entrefer %s >%s 2>%s"):format(prefix or "", lua,
    arguments, out, err))
  local texts = { command.read(out), command.read(err) }
  os.remove(out)
  os.remove(err)
  return code, texts[1], texts[2]
end

return command
