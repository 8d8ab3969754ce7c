-- Recipes run in a state of their own: hostile ones end with a clear error within their limits and leave
-- the host as it was; a normal one gives the same as ever.
local core = require "entrefer.core"
local data_file = require "entrefer.data_file"
local ef = require "entrefer"
local hostile = require "tests.reference.hostile"
local lfs = require "lfs"
local recipe = require "entrefer.recipe"
local support = require "tests.support"
local near, refuses = support.near, support.refuses

local small = { memory = 128 * 1024 * 1024, instructions = 100000000, seconds = 20 }

local function whole(body)
  return "return { entrefer = 1, title = 't', purpose = 'p',\nresults = { { name = 'x', unit = '1' } },\n"
    .. "run = function(ef, input, page) " .. body .. "\nend }\n"
end

local function write(path, text)
  local file = assert(io.open(path, "wb"))
  file:write(text)
  file:close()
end

local function in_folder(f)
  local folder = os.tmpname()
  os.remove(folder)
  assert(lfs.mkdir(folder))
  local done, err = pcall(f, folder)
  os.execute(("rm -r '%s'"):format(folder))
  if not done then error(err, 0) end
end

-- What a recipe could have changed in the host.
local function host_state()
  local names, seen = {}, {}
  for _, name in ipairs { "_G", "string", "table", "math", "io", "os", "debug", "package" } do
    for key, value in pairs(_G[name]) do seen[name .. "." .. tostring(key)] = value end
  end
  for key, value in pairs(ef) do seen["ef." .. key] = value end
  seen.path, seen.cpath, seen.locale = package.path, package.cpath, os.setlocale()
  seen.text = getmetatable("").__index
  for key in pairs(seen) do names[#names + 1] = key end
  return seen, #names
end

describe("a hostile recipe", function()
  local before, count
  setup(function() before, count = host_state() end)

  for _, attempt in ipairs(hostile) do
    it("comes to nothing: " .. attempt.name, function()
      local text = attempt.text or whole(attempt.run)
      if attempt.stage == "load" then
        local err = refuses("", attempt.message, recipe.parse, text, "recipe")
        assert.is_nil(err.message:find("\n", 1, true))
        return
      end
      local loaded = recipe.parse(text, "recipe")
      local started = os.clock()
      if attempt.message then
        refuses("", attempt.message, recipe.run, loaded, {}, small)
      else
        local x = recipe.run(loaded, {}, small).x
        local expected = attempt.gives == "same" and recipe.run(loaded, {}, small).x or attempt.gives
        assert.equal(expected, x)
      end
      -- Far above what 1e8 steps take, also under sanitizers; a run that escaped its limits never ends.
      assert.is_true(os.clock() - started < 60)
      local after, number = host_state()
      assert.equal(count, number)
      for key, value in pairs(before) do assert.equal(value, after[key], key) end
    end)
  end

  it("does not move the host's random numbers", function()
    math.randomseed(7)
    local first = { math.random(), math.random() }
    math.randomseed(7)
    local one = math.random()
    recipe.run(recipe.parse(whole "math.random() return { x = 1 }", "r"))
    assert.equal(first[1], one)
    assert.equal(first[2], math.random())
  end)

  it("keeps its memory within the limit and gives all of it back", function()
    collectgarbage()
    collectgarbage()
    local loaded = recipe.parse(whole "local t = {} while true do t = { t } end", "r")
    local held = collectgarbage("count")
    refuses("memory", "65536 KiB", recipe.run, loaded, {}, { memory = 64 * 1024 * 1024 })
    collectgarbage()
    collectgarbage()
    -- The sources of the library, read once, stay: about 300 KiB.
    assert.is_true(collectgarbage("count") - held < 2048)
  end)

  it("is stopped by processor time", function()
    local loaded = recipe.parse(whole "while true do end", "r")
    local err = refuses("seconds", "processor time", recipe.run, loaded, {}, { seconds = 0.2 })
    assert.equal("limit", err.code)
  end)

  it("is stopped by processor time inside the core's solver too", function()
    local loaded = recipe.parse(whole [[
      local part = ef.part { core = "E 42/21/15", material = "PW3b", gaps = { { length = 1e-3 } },
        windings = { { turns = 20 } } }
      while true do part:solve { current = 5, temperature = 25 } end]], "r")
    refuses("seconds", "processor time", recipe.run, loaded, {}, { seconds = 0.2 })
  end)

  it("can't have its error table used against the host", function()
    local err = refuses("", "told", recipe.run, recipe.parse(whole
      "error({ message = 'told', code = 'mine', allowed = {} })", "r"))
    assert.equal("mine", err.code)
    assert.is_nil(err.allowed)
  end)

  it("puts no control characters on the page", function()
    local _, page = recipe.run(recipe.parse(whole
      "page:prose('a\\27[2Jb\\194\\155c') return { x = 1 }", "r"))
    for _, text in ipairs { page:text(), page:markdown(), page:html({}) } do
      assert.is_nil(text:find("[\0-\8\11-\31\127]"))
      assert.is_nil(text:find("\194\155", 1, true))
    end
  end)

  it("gets no limits that make no sense", function()
    local loaded = recipe.parse(whole "return { x = 1 }", "r")
    refuses("run options memory", "above 0", recipe.run, loaded, {}, { memory = 0 })
    refuses("run options seconds", "above 0", recipe.run, loaded, {}, { seconds = "5" })
    refuses("hours", "no field", recipe.run, loaded, {}, { hours = 1 })
    refuses("memory", "too much memory", recipe.run, loaded, {}, { memory = 100000 })
  end)
end)

describe("the files of a recipe", function()
  local reader = [[
return { entrefer = 1, title = "t", purpose = "p", version = "3",
  inputs = { { name = "spec", kind = "data" }, { name = "ask" } },
  results = { { name = "x", unit = "1" } },
  run = function(ef, input)
    local m = ef.material { file = input.ask, temperature = 25 }
    return { x = m:saturation(25) }
  end }
]]
  local curve = "H [A/m],B [T]\n100,0.2\n1000,0.4\n5000,0.45\n"

  local function prepared(f)
    in_folder(function(folder)
      lfs.mkdir(folder .. "/in")
      lfs.mkdir(folder .. "/in/sub")
      for _, name in ipairs { "in/a.csv", "in/unnamed.csv", "in/sub/b.csv", "outside.csv", "in/.c.csv" } do
        write(folder .. "/" .. name, curve)
      end
      lfs.link("../outside.csv", folder .. "/in/link.csv", true)
      lfs.link("..", folder .. "/in/up", true)
      os.execute(("mkfifo '%s/in/pipe.csv'"):format(folder))
      write(folder .. "/in/spec.lua", [[return { "a.csv", "sub/b.csv", "../outside.csv", "link.csv",
        "up/outside.csv", ".c.csv", "sub/../a.csv", "/etc/passwd", "missing.csv", "pipe.csv", "sub" }]])
      f(recipe.parse(reader, "reader"), folder .. "/in/spec.lua", folder)
    end)
  end

  it("are those that a granted data file names, in its folder or below", function()
    prepared(function(loaded, spec)
      for _, name in ipairs { "a.csv", "sub/b.csv" } do
        local results = recipe.run(loaded, { spec = spec, ask = "spec/" .. name })
        assert.is_true(results.x > 0.3)
      end
    end)
  end)

  it("are no others: unnamed, above, through links, hidden, no plain files", function()
    prepared(function(loaded, spec, folder)
      for _, name in ipairs { "spec/unnamed.csv", "spec/../outside.csv", "spec/link.csv",
        "spec/up/outside.csv", "spec/.c.csv", "spec/sub/../a.csv", "spec//etc/passwd", "/etc/passwd",
        "spec/missing.csv", "spec/pipe.csv", "spec/sub", "ask/a.csv", folder .. "/in/a.csv",
        "spec/a.csv\0", "a.csv" } do
        refuses("curve file", "can't be read", recipe.run, loaded, { spec = spec, ask = name })
      end
    end)
  end)

  it("are one file for an input of kind file, also by a link that the user names", function()
    prepared(function(_, _, folder)
      local loaded = recipe.parse(reader:gsub('{ name = "spec", kind = "data" }',
        '{ name = "curve", kind = "file" }'):gsub("input.ask", "input.curve .. input.ask"), "reader")
      assert.is_true(recipe.run(loaded, { curve = folder .. "/in/link.csv", ask = "" }).x > 0.3)
      refuses("curve file", "not granted", recipe.run, loaded,
        { curve = folder .. "/in/a.csv", ask = "/../unnamed.csv" })
    end)
  end)

  it("stand in the provenance with their SHA-256", function()
    -- FIPS 180-4's example, "abc", and the empty text.
    assert.equal("ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad", core.sha256("abc"))
    assert.equal("e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855", core.sha256(""))
    prepared(function(loaded, spec)
      local _, _, from = recipe.run(loaded, { spec = spec, ask = "spec/a.csv" })
      assert.equal(ef.version, from.entrefer)
      assert.same({ name = "reader", sha256 = core.sha256(reader), version = "3" }, from.recipe)
      assert.equal("spec/spec.lua", from.files[1].name)
      assert.same({ name = "spec/a.csv", sha256 = core.sha256(curve) }, from.files[2])
      assert.equal(2, #from.files)
      assert.same({ spec = "spec/spec.lua", ask = "spec/a.csv" }, from.inputs)
    end)
  end)

  it("agree with sha256sum at every length around a block's end", function()
    in_folder(function(folder)
      for size = 54, 130 do
        local text = ("%d "):rep(40):format(table.unpack((function()
          local list = {}
          for i = 1, 40 do list[i] = i * size end
          return list
        end)())):sub(1, size)
        write(folder .. "/x", text)
        local pipe = io.popen(("sha256sum '%s/x'"):format(folder))
        local expected = pipe:read("a"):match("^%x+")
        pipe:close()
        assert.equal(expected, core.sha256(text), "size " .. size)
      end
    end)
  end)
end)

describe("data files", function()
  it("are evaluated without anything in reach", function()
    refuses("", "index a string value", data_file.evaluate, "return ('x'):rep(9)", "d")
    refuses("", "global 'os'", data_file.evaluate, "return os.time()", "d")
    refuses("", "runs too long", data_file.evaluate, "while true do end", "d")
    refuses("", "too much memory", data_file.evaluate, "local s = 'x' while true do s = s .. s end", "d")
    refuses("", "_ENV", data_file.evaluate, "local _ENV <const> = 1 return x", "d")
    refuses("", "function", data_file.evaluate, "return { function() end }", "d")
    refuses("", "holds itself", data_file.evaluate, "local t = {} t.t = t return t", "d")
    refuses("", "d:2:", data_file.evaluate, "return {\n1 2 }", "d")
  end)

  it("come back as they are", function()
    local t = data_file.evaluate("return { 1, 2.5, 'a\\0b', true, false, { x = { -1 } }, [7] = 1 << 62,"
      .. " [0.5] = 'half', n = 0x1p-1074 }", "d")
    assert.same({ 1, 2.5, "a\0b", true, false, { x = { -1 } }, [7] = 1 << 62, [0.5] = "half",
      n = 0x1p-1074 }, t)
    assert.equal("integer", math.type(t[1]))
    assert.equal("float", math.type(t[2]))
  end)
end)

-- The isolated state's own matcher against the interpreter's, which is the outside value here.
describe("patterns inside", function()
  local function answers(list, inside)
    local code = [[local list = ... local out = {}
      local function shown(...) local t = table.pack(...) for i = 1, t.n do t[i] = tostring(t[i]) end
        return table.concat(t, "\1") end
      for i, q in ipairs(list) do
        local all = {}
        local function add(f, ...)
          local r = table.pack(pcall(f, ...))
          all[#all + 1] = r[1] and shown(table.unpack(r, 2, r.n)) or "error"
        end
        add(string.find, q[1], q[2], q[3]) add(string.match, q[1], q[2], q[3])
        add(string.find, q[1], q[2], q[3], true) add(string.gsub, q[1], q[2], q[4])
        add(string.gsub, q[1], q[2], q[4], 2) add(string.gsub, q[1], q[2], { a = "A", [1] = 2 })
        add(string.gsub, q[1], q[2], function(x, y) return y or #tostring(x) > 1 and x end)
        add(function() local found = {}
          for a, b in string.gmatch(q[1], q[2]) do found[#found + 1] = shown(a, b) end
          return table.concat(found, "\2") end)
        out[i] = table.concat(all, "\3")
      end
      return out]]
    if not inside then return assert(load(code))(list) end
    return core.isolated { text = code, name = "patterns", request = list, memory = 2 ^ 28,
      instructions = 2e9, seconds = 100, result = 2 ^ 26 }
  end

  it("find, match, gmatch and gsub as Lua's own do", function()
    local random = support.stream(11)
    local pieces = { "a", "b", ".", "%a", "%d", "%s", "[ab]", "[^a]", "[a-c%d]", "[]]", "[^]x]", "%w", "%%",
      "(", ")", "()", "*", "+", "-", "?", "^", "$", "%1", "%2", "%bab", "%f[a]", "%f[%A]", "%A", "%x", "[",
      "]", "%", "c", "[%a-]", "[a-]", "%g", "%U", "%z", "%.", "" }
    local letters = { "a", "b", "c", "1", " ", "x", "]", "-", "^", "$", "%", "\0", "\255", "A", "(", "ab" }
    local with = { "%0", "<%1>", "%%", "x", "%2", "%", "", "%a" }
    local function pick(list) return list[1 + math.floor(random() * #list)] end
    local function joined(list, most)
      local parts = {}
      for i = 1, math.floor(random() * most) do parts[i] = pick(list) end
      return table.concat(parts)
    end
    local list = {}
    for i = 1, 20000 do
      list[i] = { joined(letters, 14), joined(pieces, 7), math.floor(random() * 12) - 5, pick(with) }
    end
    local expected, given = answers(list), answers(list, true)
    local errors = 0
    for i, q in ipairs(list) do
      assert.equal(expected[i], given[i], ("%q %q %d %q"):format(q[1], q[2], q[3], q[4]))
      if expected[i]:find("error") then errors = errors + 1 end
    end
    -- Both kinds must occur, or the test tries nothing.
    assert.is_true(errors > 1000 and errors < 19000)
  end)
end)

describe("a normal recipe", function()
  local text = [[
return { entrefer = 1, title = "Inductance", purpose = "p", version = "1", author = "a",
  inputs = { { name = "current", unit = "A", default = "5 A", min = 0, max = "20 A" },
    { name = "turns", kind = "integer", default = 20, min = 1, max = 100 },
    { name = "leg", choices = { "centre", "all" }, default = "centre" },
    { name = "note", default = "none" }, { name = "curve", kind = "table" } },
  results = { { name = "inductance", unit = "H" }, { name = "note" }, { name = "sum", unit = "1" },
    { name = "order" } },
  run = function(ef, input, page)
    local part = ef.part { core = "E 42/21/15", material = "PW3b",
      gaps = { { leg = input.leg, length = "1.6 mm" } }, windings = { { turns = input.turns } } }
    local s = part:solve { current = input.current, temperature = 85 }
    page:value("inductance", s.inductance, "H")
    local sum, order = 0, {}
    for key, value in pairs(input.curve) do sum = sum + value order[#order + 1] = key end
    return { inductance = s.inductance, note = input.note .. math.type(input.turns), sum = sum,
      order = table.concat(order) }
  end }
]]
  local curve = { d = 1, a = 2, c = 3, b = 4, e = 5, z = 6, y = 7 }

  it("gives what the library gives, to the last bit", function()
    local results, page = ef.run_recipe(text, { current = 8, curve = curve })
    local part = ef.part { core = "E 42/21/15", material = "PW3b",
      gaps = { { leg = "centre", length = "1.6 mm" } }, windings = { { turns = 20 } } }
    local expected = part:solve { current = 8, temperature = 85 }.inductance
    assert.equal(expected, results.inductance)
    assert.equal("noneinteger", results.note)
    assert.equal(28, results.sum)
    assert.is_truthy(page:text():find(ef.format(expected, "H", 4, { ascii = true }), 1, true))
  end)

  it("walks tables in the same order in every run", function()
    for _ = 1, 5 do assert.equal("abcdeyz", ef.run_recipe(text, { curve = curve }).order) end
  end)

  it("gets its inputs checked", function()
    local loaded = recipe.parse(text, "recipe")
    local function bad(field, pattern, values)
      values.curve = values.curve or curve
      refuses(field, pattern, recipe.run, loaded, values)
    end
    bad("input current", "from 0 to 20", { current = "25 A" })
    bad("input current", "quantity in A", { current = "5 V" })
    bad("input turns", "whole number", { turns = 2.5 })
    bad("input turns", "from 1 to 100", { turns = 0 })
    bad("input leg", "centre", { leg = "center" })
    bad("input note", "text", { note = {} })
    bad("currant", "did you mean", { currant = 5 })
    bad("input curve", "can't be read", { curve = "/nonexistent.lua" })
    bad("request", "object", { curve = { ef.core "E 42/21/15" } })
    refuses("input curve", "missing", recipe.run, loaded, {})
    near(recipe.run(loaded, { turns = "30", curve = curve }).inductance,
      recipe.run(loaded, { turns = 30, curve = curve }).inductance, 0)
  end)

  it("is checked without being run", function()
    in_folder(function(folder)
      local path = folder .. "/r.lua"
      write(path, text)
      local report = recipe.check(path)
      assert.is_true(report.passed)
      assert.equal("Inductance", report.recipe.title)
      assert.is_truthy(table.concat(report.remarks, "\n"):find("input turns has no help", 1, true))
      write(path, (text:gsub('"integer", default = 20', '"integer", default = 200')))
      report = recipe.check(path)
      assert.is_false(report.passed)
      assert.is_truthy(report.problem.message:find("from 1 to 100", 1, true))
      write(path, "return { entrefer = 1, title = 't', purpose = 'p', run = 5 }")
      assert.is_truthy(recipe.check(path).problem.message:find("a function", 1, true))
    end)
  end)
end)

describe("a run in a child process", function()
  local limits = { seconds = 0, memory = 1e9, result = 1e6 }

  it("gives the same", function()
    local loaded = recipe.load("recipes/size-gap.lua")
    local here, page = recipe.run(loaded)
    local there, other = recipe.run(loaded, {}, { process = true })
    assert.same(here, there)
    assert.equal(page:markdown(), other:markdown())
  end)

  it("hands errors over as they are", function()
    local text = whole "ef.core 'nothing'"
    local one = refuses("", "nothing", recipe.run, recipe.parse(text, "r"))
    local two = refuses("", "nothing", recipe.run, recipe.parse(text, "r"), {}, { process = true })
    assert.equal(one.code, two.code)
    assert.equal(one.field, two.field)
    assert.equal(one.message, two.message)
    local endless = recipe.parse(whole "while true do end", "r")
    refuses("instructions", "runs too long", recipe.run, endless, {},
      { process = true, instructions = 1e6 })
  end)

  it("is ended by the system when its own limits fail", function()
    refuses("process", "processor time", core.child, limits, function() while true do end end)
    refuses("process", "ended without an answer", core.child, { seconds = 5, memory = 1, result = 9 },
      function() os.execute("kill -ABRT $PPID") return 1 end)
    refuses("process", "stopped", core.child, { seconds = 5, memory = 1, result = 9 },
      function() os.execute("kill -TERM $PPID") return 1 end)
    -- Under the address sanitizer, whose shadow takes terabytes, the address space stays unlimited.
    if not package.cpath:find("sanitize", 1, true) then
      assert.equal("not enough memory", core.child({ seconds = 5, memory = 1, result = 1e6 },
        function() return (select(2, pcall(string.rep, "x", 3 << 29))) end))
    end
    -- A long answer goes through the pipe whole, or not at all.
    assert.equal(300000, #core.child({ seconds = 5, memory = 1, result = 1e6 },
      function() return ("x"):rep(300000) end))
  end)

  it("can't write files", function()
    in_folder(function(folder)
      local path = folder .. "/x"
      refuses("process", "ended without an answer", core.child, { seconds = 5, memory = 1, result = 9 },
        function() write(path, "text") return 1 end)
      assert.equal(0, lfs.attributes(path, "size"))
    end)
  end)

  it("ends with the command when that is interrupted, and nothing is written", function()
    in_folder(function(folder)
      write(folder .. "/endless.lua", whole "while true do end")
      local _, _, code = os.execute(("timeout -s INT 1 /usr/bin/lua5.4 lua/bin/entrefer run"
        .. " %s/endless.lua --out %s/out >%s/log 2>&1"):format(folder, folder, folder))
      assert.is_true(code ~= 0)
      assert.is_nil(lfs.attributes(folder .. "/out"))
    end)
  end)
end)
