-- Memory of the C core: every allocation refused once, no allocation while solving, and networks from
-- random bytes. The programs in tests/fuzz are built against the library that these specs run with.
local process = require "tests.process"

local has_compiler = os.execute("command -v ${CC:-cc} >/dev/null 2>&1")

local function run(command)
  local done, text, code = process.run(command)
  assert(done, ("%s ended with %s:\n%s"):format(command, tostring(code), text))
  return text
end

-- build/lua/entrefer/core.so stands beside build/libentrefer.a.
local function build_folder()
  local module = assert(package.searchpath("entrefer.core", package.cpath))
  return assert(module:match("^(.*)/lua/entrefer/core%.so$"), "the module is not in a build folder")
end

local function build(name, libraries)
  local folder = build_folder()
  local sanitized = folder:find("sanitize", 1, true)
    and "-g -fsanitize=address,undefined -fno-sanitize-recover=undefined" or ""
  local program = ("%s/fuzz-%s"):format(folder, name)
  run(("${CC:-cc} -std=c11 -O1 -Wall -Wextra -Wpedantic -Wconversion -Werror %s tests/fuzz/%s.c"
    .. " %s/libentrefer.a $(pkg-config --libs lapacke) -lm %s -o %s"):format(sanitized, name, folder,
    libraries or "", program))
  return program:sub(1, 1) == "/" and program or "./" .. program
end

describe("the C core's memory", function()
  local check = has_compiler and it or function(what)
    pending(what .. " (skipped: no C compiler)")
  end

  check("is refused one allocation after the other without a leak, and not asked for by a solution",
    function()
      local text = run(build "allocation")
      for _, builder in ipairs { "material", "network", "ring" } do
        local refused = tonumber(text:match(builder .. ": (%d+) allocations refused"))
        assert.is_true(refused and refused >= 2, text)
      end
      assert.is_truthy(text:find("solve: 0 allocations in 50 solutions", 1, true))
    end)

  check("stays whole with networks from random bytes", function()
    local program = build "network_fuzz"
    for seed = 1, 3 do
      local text = run(("%s 5000 %d"):format(program, seed))
      local solved, refused, unsolved, wrong =
        text:match("(%d+) solved, (%d+) refused, (%d+) not solved, (%d+) wrong")
      assert.equal("0", wrong, text)
      -- Both kinds must occur, or the test tries nothing.
      assert.is_true(tonumber(solved) > 1000 and tonumber(refused) > 1000, text)
      assert.equal(5000, solved + refused + unsolved)
    end
  end)

  check("is given back by the Lua module whenever Lua runs out of it", function()
    local host = build("host", "$(pkg-config --cflags --libs lua5.4)")
    local text = run(("%s tests/fuzz/host.lua '%s'"):format(host, package.cpath))
    local refused = tonumber(text:match("^(%d+) allocations refused"))
    assert.is_true(refused and refused > 100, text)
  end)
end)
