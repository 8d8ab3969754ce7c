--- Other programs, run from the specs and the bench.
local process = {}

-- A sanitized Lua module brings its runtime and the plain BLAS by the environment; other programs must
-- not get them.
local clean = "unset LD_PRELOAD LD_LIBRARY_PATH; "

--- Runs a shell command.
-- @treturn boolean whether it ended well
-- @treturn string what it printed, standard error included
-- @treturn integer exit code
function process.run(command)
  local pipe = assert(io.popen(clean .. command .. " 2>&1"))
  local text = pipe:read "a"
  local done, _, code = pipe:close()
  return done == true, text, code
end

return process
