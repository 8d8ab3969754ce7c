-- Recipes that try to run for ever, eat memory, break out, or change what the next run sees. Each entry:
--   name     what is tried
--   run      body of run(ef, input, page), or `text`, a whole recipe
--   message  pattern of the error that must end it, or
--   gives    what the run's result `x` must be: the attempt came to nothing
--   stage    "load" when it must be refused before the flow runs
-- General knowledge of Lua 5.4's standard library and virtual machine; no outside list.
local hostile = {
  -- Time.
  { name = "endless loop", run = "while true do end", message = "runs too long" },
  { name = "endless loop that catches errors",
    run = "while true do pcall(function() while true do end end) end", message = "runs too long" },
  { name = "endless loop in an error handler",
    run = "xpcall(error, function() while true do end end) while true do end",
    message = "runs too long" },
  { name = "error handler that fails for ever",
    run = "local function h() return h(error('again')) end while true do xpcall(error, h) end",
    message = "runs too long" },
  { name = "endless goto", run = "::a:: goto a", message = "runs too long" },
  { name = "endless recursion", run = "local function f() return 1 + f() end f()",
    message = "stack overflow" },
  { name = "endless tail calls", run = "local function f() return f() end f()",
    message = "runs too long" },
  { name = "endless numeric loop", run = "for i = 1, math.maxinteger do end",
    message = "runs too long" },
  { name = "endless callback of gsub",
    run = "string.gsub('aaaa', 'a', function() while true do end end)", message = "runs too long" },
  { name = "comparator that never ends",
    run = "table.sort({ 3, 2, 1 }, function() while true do end end)", message = "runs too long" },
  { name = "comparator without order",
    run = "local t = {} for i = 1, 1000 do t[i] = i end table.sort(t, function() return true end)",
    message = "invalid order function" },
  { name = "comparator that changes its list",
    run = "local t = {} for i = 1, 1000 do t[i] = i end"
      .. " table.sort(t, function(a, b) t[#t] = nil return a < b end)", message = "nil" },
  { name = "catastrophic pattern",
    run = "return { x = #(('a'):rep(40):match(('a?'):rep(40) .. ('a'):rep(40) .. 'b') or '') }",
    message = "too many steps" },
  { name = "catastrophic pattern, tried again for ever",
    run = "local s = ('a'):rep(5000)"
      .. " while true do pcall(string.find, s, '.-.-.-.-.-.-.-b') end", message = "runs too long" },
  { name = "catastrophic pattern by a method of text",
    run = "return { x = #(('x'):rep(100000):gsub('x*x*x*x*y', '')) }", message = "too many steps" },
  { name = "catastrophic pattern in gmatch",
    run = "for _ in ('x'):rep(100000):gmatch('x*x*x*x*y') do end", message = "too many steps" },
  { name = "plain search of a repeated text",
    run = "local s = ('a'):rep(4000000) return { x = s:find(s:sub(1, 2000000) .. 'b', 1, true) and 1 or 0 }",
    message = "too many steps" },
  { name = "table.move over all integers", run = "table.move({}, 1, math.maxinteger - 1, 2)",
    message = "range is too long" },
  { name = "table.insert into a list with an enormous border",
    run = "local t = {} local k = 1 while k > 0 do t[k] = 1 k = k * 2 end"
      .. " for i = 1, 9 do t[i] = 1 end table.insert(t, 1, 0)", message = "list is too long" },
  { name = "table.remove from a list with an enormous border",
    run = "local t = {} local k = 1 while k > 0 do t[k] = 1 k = k * 2 end"
      .. " for i = 1, 9 do t[i] = 1 end table.remove(t, 1)", message = "list is too long" },
  { name = "table.unpack of an enormous range", run = "table.unpack({}, 1, 1e9)",
    message = "too many results" },
  { name = "table.concat of an enormous range", run = "table.concat({}, '', 1, math.maxinteger)",
    message = "range is too long" },
  { name = "a page that takes too long to render",
    run = "page:prose(('\\n'):rep(100000) .. 'x') return { x = 1 }", message = "too many steps" },

  -- Memory.
  { name = "doubling a text", run = "local s = 'x' while true do s = s .. s end",
    message = "too much memory" },
  { name = "string.rep", run = "return { x = #('x'):rep(1 << 40) }", message = "longer than" },
  { name = "string.rep with a separator", run = "return { x = #(''):rep(1 << 40, 'x') }",
    message = "longer than" },
  { name = "one endless table", run = "local t = {} for i = 1, 1e12 do t[i] = i end",
    message = "too much memory" },
  { name = "many tables", run = "local t = {} while true do t = { t } end",
    message = "too much memory" },
  { name = "many tables, errors caught",
    run = "local t = {} while true do pcall(function() while true do t[#t + 1] = {} end end) end",
    message = "runs too long" },
  { name = "many closures",
    run = "local t = {} while true do local a, b = t, {} t = function() return a, b end end",
    message = "too much memory" },
  { name = "string.format with a great width", run = "return { x = #('%1000000d'):format(1) }",
    message = "invalid conversion" },
  { name = "string.format repeated",
    run = "local t = {} for i = 1, 100000 do t[i] = 1 end local s = ('%99d'):rep(100000)"
      .. " local all = {} while true do all[#all + 1] = s:format(table.unpack(t)) end",
    message = "too much memory" },
  { name = "string.pack with a great size", run = "return { x = #string.pack('c2000000000', 'x') }",
    message = "too much memory" },
  { name = "table.concat of long texts",
    run = "local s, t = ('x'):rep(1000000), {} for i = 1, 1000 do t[i] = s end"
      .. " return { x = #table.concat(t) }", message = "too much memory" },
  { name = "gsub that grows its text",
    run = "local s = 'x' while true do s = s:gsub('x', 'xxxxxxxx') end", message = "too much memory" },
  { name = "gsub whose replacement calls gsub",
    run = "local function f(c) return (c:gsub('.', f)) end return { x = #f('x') }",
    message = "stack overflow" },
  { name = "a curve of many points in the core",
    run = "local x = {} for i = 1, 3000000 do x[i] = i end local kept = {}"
      .. " while true do kept[#kept + 1] = ef.curve { x = x, y = x } end", message = "memory" },
  { name = "nested pattern captures",
    run = "return { x = #(('('):rep(100) .. 'x' .. (')'):rep(100)):rep(2):match(('('):rep(40)) }",
    message = "captures" },
  { name = "deeply nested pattern",
    run = "return { x = #(('a'):rep(1000):match(('a?'):rep(1000))) }", message = "too complex" },
  { name = "source nested too deep", text = "return " .. ("("):rep(10000) .. "1" .. (")"):rep(10000) .. "\n",
    stage = "load", message = "overflow" },
  { name = "source with too many values", stage = "load",
    text = "return { entrefer = 1, title = 't', purpose = ('x'):rep(1 << 30),\nrun = 1 }",
    message = "longer than" },
  { name = "endless description", text = "while true do\nend", stage = "load",
    message = "runs too long" },

  -- Ways out.
  { name = "byte code", text = string.dump(function() return {} end) .. "\n", stage = "load",
    message = "binary chunk" },
  { name = "names of the standard library that reach outside",
    run = "local found = 0 for _, name in ipairs { 'io', 'os', 'debug', 'package', 'require', 'load',"
      .. " 'loadfile', 'dofile', 'loadstring', 'collectgarbage', 'coroutine', 'rawset', 'rawget',"
      .. " 'rawequal', 'rawlen', 'getmetatable', 'setmetatable', '_G', 'print', 'warn', 'loaded',"
      .. " 'newproxy', 'setfenv', 'getfenv', 'arg' } do"
      .. " local seen = ({ io = io, os = os, debug = debug, package = package, require = require,"
      .. " load = load, loadfile = loadfile, dofile = dofile, collectgarbage = collectgarbage,"
      .. " coroutine = coroutine, rawset = rawset, rawget = rawget, rawequal = rawequal,"
      .. " rawlen = rawlen, getmetatable = getmetatable, setmetatable = setmetatable, _G = _G,"
      .. " print = print, warn = warn, loaded = loaded, arg = arg })[name]"
      .. " if seen ~= nil then found = found + 1 end end return { x = found }", gives = 0 },
  { name = "string.dump", run = "return { x = #string.dump(function() end) }", message = "dump" },
  { name = "string.dump by a method", run = "return { x = #('').dump(function() end) }",
    message = "dump" },
  { name = "_ENV", text = "local _ENV <const> = {}\nx = 1", stage = "load", message = "_ENV" },
  { name = "_ENV as an upvalue", run = "return { x = _ENV and 1 }", stage = "load",
    message = "_ENV" },
  { name = "the metatable of text", run = "return { x = getmetatable('').__index and 1 }",
    message = "getmetatable" },
  { name = "the metatable of an object", run = "ef.part.__index = nil", message = "index" },
  { name = "changing an object",
    run = "local c = ef.core 'E 42/21/15' c.name = 'x'", message = "can't be changed" },
  { name = "the error table's metatable",
    run = "local _, e = pcall(ef.core, 'nothing') e.message = { } error(e)",
    message = "without a message" },
  { name = "an error that is a table", run = "error({})", message = "without a message" },
  { name = "an error that is a function", run = "error(print or function() end)",
    message = "without a message" },
  { name = "an error that is nothing", run = "error()", message = "without a message" },
  { name = "an error whose fields are tables",
    run = "error({ message = 'told', code = {}, field = {}, value = {} })", message = "told" },
  { name = "an error that is endless text", run = "error(('x'):rep(1000000), 0)", message = "^x+" },
  { name = "an error that pretends to be a limit",
    run = "error({ code = 'limit', message = 'pretended' })", message = "pretended" },
  { name = "a to-be-closed variable of its own",
    run = "local c <close> = { } return { x = 1 }", message = "non%-closable" },
  { name = "coroutine by another name", run = "return { x = coroutine and 1 or 0 }", gives = 0 },
  { name = "tostring shows no address",
    run = "return { x = tostring({}):find('0x') and 1 or ('%s'):format(ef):find('0x') and 1 or 0 }",
    gives = 0 },
  { name = "string.format shows no address", run = "return { x = #('%p'):format({}) }",
    message = "addresses" },
  { name = "string.format shows no address, with a width",
    run = "return { x = #('%-20p'):format({}) }", message = "addresses" },
  { name = "calling run_recipe inside",
    run = "ef.run_recipe('x')", message = "can't run recipes" },
  { name = "the page's own module", run = "return { x = page.__index and 1 or page.save and 1 or 0 }",
    gives = 0 },
  { name = "page functions on something else", run = "page.heading(nil, {})", message = "heading" },

  -- Files.
  { name = "a password file as a material", run = "ef.material { file = '/etc/passwd' }",
    message = "not granted" },
  { name = "a curve file by an absolute path", run = "ef.material '/tmp/x.csv'",
    message = "not granted" },
  { name = "a file of the working folder", run = "ef.material { file = 'README.md' }",
    message = "not granted" },
  { name = "a path that leads up", run = "ef.material { file = 'spec/../README.md' }",
    message = "not granted" },
  { name = "a spec that names a password file",
    run = "ef.design.requirements({ material = '/etc/passwd.csv', current = { nominal = 1 },"
      .. " inductance = 1e-3, cores = { 'E 42/21/15' } }, '')", message = "not granted" },
  { name = "saving the page", run = "page:save('/tmp')", message = "save" },
  { name = "a table that names a file elsewhere",
    run = "page:table('../../x', { columns = { { name = 'a' } }, rows = {} })",
    message = "page name" },

  -- Results.
  { name = "a result that holds itself", run = "local t = {} t[1] = t return { x = t }",
    message = "holds itself" },
  { name = "a deep result", run = "local t = {} for _ = 1, 1000 do t = { t } end return { x = t }",
    message = "deep" },
  { name = "a huge result",
    run = "local s, t = ('x'):rep(1000000), {} for i = 1, 200 do t[i] = s end return { x = t }",
    message = "limit on what" },
  { name = "a function as result", run = "return { x = function() end }", message = "function" },
  { name = "an object as result", run = "return { x = ef.core 'E 42/21/15' }", message = "object" },
  { name = "a table as key", run = "return { [{}] = 1 }", message = "key" },
  { name = "nan", run = "return { x = 0 / 0 }", message = "finite number" },
  { name = "infinity", run = "return { x = math.huge }", message = "finite number" },
  { name = "text for a number", run = "return { x = '1' }", message = "finite number" },
  { name = "a result that is not declared", run = "return { y = 1 }", message = "not declared" },
  { name = "no results", run = "return 5", message = "a table of results" },
  { name = "a page that holds a function",
    run = "page:table('t', { columns = { { name = 'a', digits = function() end } }, rows = {} })"
      .. " return { x = 1 }", message = "function" },
  { name = "a list changed after it was checked",
    run = "local s = { columns = { { name = 'a' } }, rows = { { 1 } } } page:table('t', s)"
      .. " s.rows[1][1] = function() end return { x = 1 }", gives = 1 },

  -- The next run.
  { name = "changing the library",
    run = "ef.core = nil ef.part = function() return 'mine' end string.format = nil table.sort = nil"
      .. " math.floor = nil for key in pairs(ef.design) do ef.design[key] = nil end"
      .. " return { x = 1 }", gives = 1 },
  { name = "the library after that",
    run = "return { x = (ef.core and ef.part and string.format and table.sort and math.floor"
      .. " and ef.design.inductor) and 1 or 0 }", gives = 1 },
  { name = "a global variable", run = "left = 1 return { x = 1 }", gives = 1 },
  { name = "a global variable after that", run = "return { x = left and 1 or 0 }", gives = 0 },
  { name = "the random numbers", run = "return { x = math.random(1 << 30) }", gives = "same" },

  -- Declarations.
  { name = "a file input with a default", stage = "load", message = "the user says which file",
    text = "return { entrefer = 1, title = 't', purpose = 'p', run = function() end,\n"
      .. " inputs = { { name = 'f', kind = 'file', default = '/etc/passwd' } } }" },
  { name = "a title that a terminal obeys", stage = "load", message = "control characters",
    text = "return { entrefer = 1, title = '\\27[2J', purpose = 'p',\n run = function() end }" },
  { name = "a title without end", stage = "load", message = "at most",
    text = "return { entrefer = 1, title = ('x'):rep(5000), purpose = 'p',\n run = function() end }" },
  { name = "a description without end", stage = "load", message = "limit on what",
    text = "return { entrefer = 1, title = ('x'):rep(500000), purpose = 'p',\n run = function() end }" },
  { name = "another format", stage = "load", message = "recipe format",
    text = "return { entrefer = 2, title = 't', purpose = 'p',\n run = function() end }" },
  { name = "functions among the declarations", stage = "load", message = "function",
    text = "return { entrefer = 1, title = 't', purpose = 'p',\n inputs = { { name = print } },"
      .. " results = { { name = function() end } }, run = function() end }" },
}

return hostile
