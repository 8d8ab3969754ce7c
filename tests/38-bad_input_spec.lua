-- Bad input: every error names the field, the value and what is allowed; nothing crashes the C core.
local core = require "entrefer.core"
local ef = require "entrefer"
local support = require "tests.support"
local refuses, stream = support.refuses, support.stream

local nan, infinity = 0 / 0, math.huge

local function spec(changes)
  local s = { core = "E 42/21/15", material = "PW3b", gaps = { { length = "1.6 mm" } },
    windings = { { turns = 24 } } }
  for key, value in pairs(changes or {}) do s[key] = value end
  return s
end

local function gap(changes)
  local g = { length = 1e-3 }
  for key, value in pairs(changes) do g[key] = value end
  return spec { gaps = { g } }
end

local function winding(changes)
  local w = { turns = 24 }
  for key, value in pairs(changes) do w[key] = value end
  return spec { windings = { w } }
end

-- The message names field, value and what is allowed.
local function refuses_whole(field, value, allowed, f, ...)
  local err = refuses("^" .. field .. "$", "allowed: ", f, ...)
  local name = err.field:gsub("%p", "%%%0")
  assert(err.message:find(name .. " is " .. value .. "; allowed: .*" .. allowed),
    ("expected %q is %q; allowed: %q, got %q"):format(err.field, value, allowed, err.message))
end

describe("a spec for the flow", function()
  local function read(changes)
    local s = { current = { nominal = 3 }, inductance = 1e-4, material = "PW3b", cores = { "E 25/13/7" } }
    for key, value in pairs(changes) do s[key] = value end
    return ef.design.requirements(s)
  end

  it("is refused by field where a value has the wrong kind or order", function()
    refuses_whole("temperatures", "25", "a list", read, { temperatures = 25 })
    refuses_whole("sensing candidates", '"all"', "a list", read, { sensing = { candidates = "all" } })
    refuses_whole("sensing range_use", "0.8", "a pair", read, { sensing = { range_use = 0.8 } })
    refuses_whole("sensing range_use, least", "0.8", "below the most, 0.3", read,
      { sensing = { range_use = { 0.8, 0.3 } } })
    refuses_whole("limits nonlinearity", "5", "at most 1", read, { limits = { nonlinearity = "500 %" } })
    refuses_whole("title", "5", "text", read, { title = 5 })
    refuses("^inductance$", "both given", read, { converter = { high = 24, low = 12, frequency = 1e5,
      ripple = 1 } })
  end)

  it("names a known word only where it is close", function()
    refuses("^core$", '"E 42/21/16" is unknown, did you mean "E 42/21/15"', ef.core, "E 42/21/16")
    refuses("^core$", '"/etc/passwd" is unknown; allowed', ef.core, "/etc/passwd")
  end)

  it("gets limits with their unit", function()
    refuses("^sensing clearance$", "at least 0 m$", read, { sensing = { clearance = -1e-3 } })
  end)
end)

describe("numbers that are none", function()
  local bad = { { nan, "%-?nan", "a finite number" }, { infinity, "inf", "a finite number" },
    { -infinity, "%-inf", "a finite number" }, { -1, "%-1", "above 0" }, { 0, "0", "above 0" } }

  it("are refused as lengths, turns and pockets", function()
    for _, row in ipairs(bad) do
      local value, shown, allowed = table.unpack(row)
      refuses_whole("gap 1 length", shown, allowed, ef.part, gap { length = value })
      refuses_whole("gap 1 permeance", shown, allowed, ef.part, gap { permeance = value })
      refuses_whole("gap 1 pocket diameter", shown, allowed, ef.part,
        gap { pocket = { diameter = value, depth = 1e-3 } })
      refuses_whole("gap 1 pocket depth", shown, allowed, ef.part,
        gap { pocket = { diameter = 2e-3, depth = value } })
      refuses_whole("winding 1 turns", shown, allowed, ef.part, winding { turns = value })
      refuses_whole("winding 1 extent", shown, allowed, ef.part, winding { extent = value })
      refuses_whole("inductance", shown, allowed, function()
        return ef.part(spec()):gap_for { inductance = value }
      end)
      refuses_whole("section 1 length", shown, allowed, ef.core, { shape = "custom",
        sections = { { length = value, area = 1e-4 } } })
      refuses_whole("section 1 area", shown, allowed, ef.core, { shape = "custom",
        sections = { { length = 0.1, area = value } } })
    end
  end)

  it("are refused where zero or negative is allowed", function()
    for _, row in ipairs { bad[1], bad[2], bad[3] } do
      local value, shown, allowed = table.unpack(row)
      refuses_whole("gap 1 position", shown, allowed, ef.part, gap { position = value })
      refuses_whole("gap 1 tolerance", shown, allowed, ef.part, gap { tolerance = value })
      refuses_whole("gap 1 count", shown, allowed, ef.part, gap { count = value })
      refuses_whole("winding 1 angle", shown, allowed, ef.part, winding { angle = value })
      refuses_whole("winding 1 span, start", shown, allowed, ef.part, winding { span = { value, 1e-3 } })
      refuses_whole("bobbin wall", shown, allowed, ef.part, spec { bobbin = { wall = value } })
      local part = ef.part(spec())
      refuses_whole("current", shown, allowed, part.solve, part, { current = value })
      refuses_whole("temperature", shown, allowed, part.solve, part, { current = 1, temperature = value })
      refuses_whole("remanence", shown, allowed, part.solve, part, { current = 1, remanence = value })
      refuses_whole("current", shown, allowed, part.derivatives, part, { current = value,
        by = { gap = 1 } })
      refuses_whole("current from", shown, allowed, part.sweep, part, { current = { from = value, to = 1 } })
      refuses_whole("current", shown, allowed, part.sweep, part, { current = { 1, value } })
    end
    refuses_whole("gap 1 tolerance", "%-0.001", "at least 0", ef.part, gap { tolerance = -1e-3 })
    refuses_whole("bobbin wall", "%-0.001", "at least 0", ef.part, spec { bobbin = { wall = -1e-3 } })
  end)

  it("are refused as dimensions of every family", function()
    local shape = require "entrefer.shape"
    for _, family in ipairs(shape.families()) do
      local name = ef.cores(family)[1]
      local dimensions = {}
      for letter, value in pairs(name and ef.core(name).dimensions or { A = 0.0432, B = 0.0095, C = 0.0279,
        D = 0.0054, E = 0.0347, F = 0.0081 }) do dimensions[letter] = value end
      for letter, value in pairs(dimensions) do
        for _, bad_value in ipairs { nan, infinity, -1 } do
          dimensions[letter] = bad_value
          refuses("^dimension " .. letter .. "$", "allowed", ef.core, { shape = family,
            dimensions = dimensions })
        end
        dimensions[letter] = value
      end
    end
  end)

  it("with a unit of another kind are refused", function()
    refuses_whole("gap 1 length", '"1.6 mH"', 'in m such as "1.2 mm"', ef.part, gap { length = "1.6 mH" })
    refuses_whole("gap 1 length", '"1.6"', "with its unit", ef.part, gap { length = "1.6" })
    refuses_whole("gap 1 length", '"long"', "in m", ef.part, gap { length = "long" })
    refuses_whole("gap 1 permeance", '"3 nT"', "in H", ef.part, gap { permeance = "3 nT" })
    refuses_whole("winding 1 turns", '"24 mm"', "in 1", ef.part, winding { turns = "24 mm" })
    refuses_whole("winding 1 angle", '"3 mm"', "in rad", ef.part, winding { angle = "3 mm" })
    local part = ef.part(spec())
    refuses_whole("current", '"12 V"', 'in A such as "12 A"', part.solve, part, { current = "12 V" })
    refuses_whole("temperature", '"12 V"', "in degC", part.solve, part, { current = 1,
      temperature = "12 V" })
    refuses_whole("inductance", '"47 uF"', "in H", part.gap_for, part, { inductance = "47 uF" })
    refuses_whole("dimension A", '"42 s"', "in m", ef.core, { shape = "E", dimensions = { A = "42 s" } })
  end)
end)

describe("unknown names", function()
  it("come back with the nearest known one", function()
    local part = ef.part(spec())
    for _, row in ipairs {
      { "core", "E 42/21/15", ef.core, "E 42/21/51" },
      { "core", "E 42/21/15", ef.part, spec { core = "E 42/21/16" } },
      { "material", "PW3b", ef.material, "PW3c" },
      { "material", "nanocrystalline", ef.part, spec { material = "nanocristalline" } },
      { "sensor", "linear Hall, 100 mT", ef.sensor, "linear Hal, 100 mT" },
      { "shape", "planar E", ef.core, { shape = "planer E", dimensions = {} } },
      { "gap 1 leg", "centre", ef.part, gap { leg = "center" } },
      { "winding 1 leg", "outer", ef.part, winding { leg = "outher" } },
      { "gap 1 kind", "spacer", ef.part, gap { kind = "spaced" } },
      { "gap 1 method", "conformal", ef.part, gap { method = "conform" } },
      { "only", "inductance", part.solve, part, { current = 1, only = { "inductence" } } },
      { "only", "energy", part.sweep, part, { current = { 1 }, only = { "energie" } } },
      { "section 1 pole shape", "round", ef.core, { shape = "custom",
        sections = { { length = 0.1, area = 1e-4, pole = { shape = "rund", diameter = 1e-2 } } } } },
    } do
      refuses("^" .. row[1] .. "$", 'did you mean "' .. row[2] .. '"', table.unpack(row, 3))
    end
  end)

  it("of fields come back with the nearest known one", function()
    local part = ef.part(spec())
    local probe = ef.probe { part = part, sensor = "thin linear Hall, 100 mT" }
    for _, row in ipairs {
      { "windngs", "windings", ef.part, spec { windngs = {} } },
      { "lenght", "length", ef.part, gap { lenght = 1 } },
      { "trns", "turns", ef.part, winding { trns = 1 } },
      { "flang", "flange", ef.part, spec { bobbin = { flang = 1 } } },
      { "diametre", "diameter", ef.part, gap { pocket = { diametre = 1 } } },
      { "curent", "current", part.solve, part, { curent = 1 } },
      { "curent", "current", part.sweep, part, { curent = 1 } },
      { "curent", "current", part.derivatives, part, { curent = 1 } },
      { "curent", "current", part.gap_for, part, { curent = 1 } },
      { "curent", "current", probe.read, probe, { curent = 1 } },
      { "dropp", "drop", part.current_for, part, { dropp = 1 } },
      { "cor", "core", part.solve, part, { current = 1, temperature = { cor = 1 } } },
      { "poinst", "points", part.sweep, part, { current = { from = 0, to = 1, poinst = 2 } } },
      { "turn", "turns", part.with, part, { turn = 2 } },
      { "positon", "position", ef.probe, { part = part, sensor = "x", positon = {} } },
      { "dimension", "dimensions", ef.core, { shape = "E", dimension = {} } },
      { "kid", "kind", ef.material, { kid = "linear" } },
    } do
      refuses("^" .. row[1] .. "$", 'did you mean "' .. row[2] .. '"', table.unpack(row, 3))
    end
  end)
end)

describe("a part that cannot be built", function()
  it("has a leg that its core does not have", function()
    refuses("^winding 1 leg$", "allowed: all, left, right", ef.part, spec { core = "U 25/20/13",
      gaps = {}, windings = { { turns = 1, leg = "centre" } } })
    refuses("^gap 1 leg$", "allowed: all, left, right", ef.part, spec { core = "U 25/20/13",
      gaps = { { length = 1e-3, leg = "centre" } } })
    refuses("^winding 1 leg$", "allowed: ring", ef.part, spec { core = "R 25/15/10", gaps = {},
      windings = { { turns = 1, leg = "left" } } })
    local custom = { shape = "custom", sections = { { name = "post", length = 0.1, area = 1e-4 } } }
    refuses("^gap 1 leg$", 'did you mean "post"', ef.part, spec { core = custom,
      gaps = { { length = 1e-3, leg = "past" } } })
    refuses("^winding 1 leg$", 'did you mean "post"', ef.part, spec { core = custom, gaps = {},
      windings = { { turns = 1, leg = "past" } } })
    refuses("^winding 1 leg$", '"outer"', ef.part, winding { leg = "all" })
  end)

  it("has a gap longer than its leg, outside it, or over another", function()
    -- The window of this core is 30.3 mm high.
    refuses_whole("gap 1 length", "0.031", "below 0.0303 m, the length of the centre leg", ef.part,
      gap { length = 31e-3 })
    refuses("^gap 1 position$", "inside the centre leg", ef.part, gap { position = 15e-3 })
    refuses("^gap 1 position$", "inside the centre leg", ef.part, gap { position = -15e-3 })
    refuses("^gap %d position$", "clear of gap %d on the centre leg", ef.part, spec { gaps = {
      { length = 2e-3 }, { length = 2e-3, position = 1.5e-3 } } })
    refuses("^gap 1 position$", "inside the centre leg", ef.part, gap { length = 8e-3, count = 4 })
    refuses("^gap 1 count$", "at most 64", ef.part, gap { length = 1e-5, count = 65 })
    refuses("^gap 1 count$", "whole", ef.part, gap { count = 1.5 })
    refuses("^gap length$", "below 0.1 m, the length of post", ef.part, spec { windings = { { turns = 1 } },
      core = { shape = "custom", sections = { { name = "post", length = 0.1, area = 1e-4 } } },
      gaps = { { length = 0.11 } } })
  end)

  it("has a spacer that is not in all legs", function()
    refuses_whole("gap 1 leg", '"centre"', "\"all\" for a spacer", ef.part, gap { kind = "spacer" })
    refuses_whole("gap 1 leg", '"outer"', "\"all\" for a spacer", ef.part,
      gap { kind = "spacer", leg = "outer" })
  end)

  it("has a ring's gap that a ring cannot have", function()
    local function ring(list) return spec { core = "R 25/15/10", gaps = list } end
    refuses("^gap 1 length$", "half of the ring's mean diameter", ef.part, ring { { length = 10e-3 } })
    refuses("^number of gaps$", "one gap in a ring, or two", ef.part, ring { { length = 1e-3, count = 3 } })
    refuses("^gap 2 length$", "two gaps of a ring are equal", ef.part, ring { { length = 1e-3 },
      { length = 2e-3 } })
    refuses("^gap 1 pocket$", "cores with legs", ef.part, ring { { length = 1e-3,
      pocket = { diameter = 1e-3, depth = 1e-3 } } })
  end)

  it("has a pocket as wide as its pole", function()
    refuses("^gap 1 pocket diameter$", "below 0.01195 m, the width of the pole", ef.part,
      gap { pocket = { diameter = 12e-3, depth = 1e-3 } })
  end)

  it("has no windings, or some that do not fit", function()
    refuses("^windings$", "at least one winding", ef.part, spec { windings = {} })
    refuses("^windings$", "at least one winding", ef.part, { core = "E 42/21/15", material = "PW3b" })
    local wire = { round = "2 mm", grade = 1 }
    refuses("^winding 1 turns$", "at most %d+ of a wire", ef.part, winding { turns = 400, wire = wire })
    refuses("^windings$", "at most .* mm2, the window after the bobbin", ef.part, spec { windings = {
      { turns = 30, wire = wire }, { turns = 30, wire = wire } } })
    refuses("^winding 1 turns$", "through the ring's hole", ef.part, spec { core = "R 10/6/4", gaps = {},
      windings = { { turns = 50, wire = wire } } })
    refuses("^winding 1 span$", "rising, within", ef.part, winding { span = { 2e-3, 1e-3 } })
    refuses("^winding 1 span$", "rising, within", ef.part, winding { span = { -20e-3, 1e-3 } })
    refuses("^winding 1 extent$", "at most 6.28319", ef.part, winding { extent = 7 })
  end)

  it("has a list or a table where none is, or none where one is", function()
    for _, value in ipairs { 5, "x", true } do
      refuses("^gaps$", "allowed: a list", ef.part, spec { gaps = value })
      refuses("^windings$", "allowed: a list", ef.part, spec { windings = value })
      refuses("^gap 1$", "allowed: a table", ef.part, spec { gaps = { value } })
      refuses("^winding 1$", "allowed: a table", ef.part, spec { windings = { value } })
      refuses("^winding 1 span$", "allowed: a list", ef.part, winding { span = value })
      refuses("^gap 1 pocket$", "allowed: a table", ef.part, gap { pocket = value })
      refuses("^bobbin$", "allowed: a table", ef.part, spec { bobbin = value })
      refuses("^part$", "allowed: a table", ef.part, value)
      refuses("^probe$", "allowed: a table", ef.probe, value)
    end
    refuses("^core$", "missing", ef.part, { material = "PW3b" })
    refuses("^material$", "missing", ef.part, { core = "E 42/21/15" })
    refuses("^core$", "a table", ef.part, spec { core = 5 })
    refuses("^material$", "a table", ef.part, spec { material = 5 })
  end)
end)

describe("a question that cannot be answered", function()
  local part = ef.part(spec())

  it("has the wrong number of currents", function()
    refuses_whole("number of currents", "2", "1, one for each winding", part.solve, part,
      { current = { 1, 2 } })
    refuses_whole("number of currents", "0", "1, one for each winding", part.solve, part, { current = {} })
    local two = ef.part(spec { windings = { { turns = 1 }, { turns = 2 } } })
    refuses("^current$", "a list of 2 currents", two.solve, two, { current = 1 })
    refuses_whole("number of currents", "1", "2, one for each winding", two.solve, two, { current = { 1 } })
    refuses_whole("number of currents", "3", "2, one for each winding", two.solve, two,
      { current = { 1, 2, 3 } })
    refuses("^number of windings$", "one winding", two.gap_for, two, { inductance = 1e-6 })
    refuses("^current$", "missing", part.solve, part, {})
  end)

  it("lies outside the material's temperatures", function()
    refuses_whole("temperature", "121", "from %-40 to 120", part.solve, part, { current = 1,
      temperature = 121 })
    refuses_whole("temperature", "%-41", "from %-40 to 120", part.sweep, part, { current = { 1 },
      temperature = -41 })
    refuses("^remanence$", "from %-1 to 1", part.solve, part, { current = 1, remanence = 1.5 })
    local plain = ef.part(spec { material = { initial_permeability = 2000 } })
    refuses("^remanence$", "needs a coercive field", plain.solve, plain, { current = 1, remanence = 1 })
  end)

  it("is none at all", function()
    for _, value in ipairs { 5, "x", true } do
      refuses("^request$", "a table", part.solve, part, value)
      refuses("^sweep$", "a table", part.sweep, part, value)
      refuses("^derivatives$", "a table", part.derivatives, part, value)
      refuses("^gap_for$", "a table", part.gap_for, part, value)
      refuses("^turns_for$", "a table", part.turns_for, part, value)
      refuses("^current_for$", "a table", part.current_for, part, value)
      refuses("^part$", "a table", part.with, part, value)
      refuses("^only$", "a list", part.solve, part, { current = 1, only = value })
      refuses("^only$", "a list", part.sweep, part, { current = { 1 }, only = value })
      refuses("^current$", "a list", part.sweep, part, { current = value })
    end
    refuses("^points$", "from 2 to", part.sweep, part, { current = { from = 0, to = 1, points = 1 } })
    refuses("^length$", "no first entry", function()
      return ef.part(spec { gaps = {} }):with { gap = 1e-3 }
    end)
  end)

  it("asks an ungapped part for its gap", function()
    local closed = ef.part(spec { gaps = {} })
    assert.same({}, closed:solve { current = 1 }.gaps)
    assert.is_nil(closed:solve { current = 1, only = { "gap_flux_density" } }.gap_flux_density)
  end)
end)

describe("objects", function()
  it("cannot be changed", function()
    local part = ef.part(spec())
    local sensor = ef.sensor "linear Hall, 100 mT"
    local probe = ef.probe { part = part, sensor = "thin linear Hall, 100 mT" }
    for name, object in pairs { part = part, sensor = sensor, probe = probe, core = ef.core "PQ 50/50",
      material = ef.material "PW3b" } do
      refuses("^name$", ("a %s can't be changed; use :with"):format(name), function()
        object.name = "other"
      end)
      refuses("^novel$", "can't be changed", function() object.novel = 1 end)
    end
    refuses("^effective_area$", "can't be changed", function() part.core.geometry.effective_area = 1 end)
    refuses("^A$", "can't be changed", function() part.core.dimensions.A = 1 end)
  end)

  it("do not follow the tables they were built from", function()
    local s = spec { gaps = { { length = 1e-3 } } }
    local part = ef.part(s)
    local before = part:solve { current = 5 }.inductance
    s.gaps[1].length, s.windings[1].turns, s.windings[2] = 3e-3, 99, { turns = 5 }
    assert.equal(before, part:solve { current = 5 }.inductance)
    assert.equal(before, part:with { name = "copy" }:solve { current = 5 }.inductance)
  end)

  it("do not follow what is done to their results", function()
    local part = ef.part(spec { material = "nickel-iron" })
    local s = part:solve { current = 5 }
    s.warnings[1], s.method.gaps[1], s.limbs.centre.flux_density = "mine", "mine", 7
    local again = part:solve { current = 5 }
    assert.is_nil(again.warnings[1]:find("mine"))
    assert.equal("conformal", again.method.gaps[1])
    assert.is_true(again.limbs.centre.flux_density ~= 7)
  end)

  it("are not spoilt by a failed question", function()
    local part = ef.part(spec())
    local before = part:solve { current = 5 }
    pcall(part.solve, part, { current = nan })
    pcall(part.solve, part, { current = 5, temperature = 500 })
    pcall(part.solve, part, { current = 5, remanence = 7 })
    assert.equal(before.inductance, part:solve { current = 5 }.inductance)
  end)
end)

-- What a careless or hostile caller may hand to the C module.
local strange = { nil, true, false, 0, 1, -1, 2, 0.5, 1e300, -1e300, 1e-320, nan, infinity, -infinity,
  math.maxinteger, math.mininteger, "", "x", "1.5", ("y"):rep(5000), {}, { {} }, { 1, 2, 3 },
  { nan, nan }, { nodes = 2 }, function() end, coroutine.create(function() end), io.stdout,
  "ring", "conformal", "curve", "free" }
local strange_count = 32

-- Only a Lua error or a result may come; the value of the error does not matter here, its being text
-- or an error table does.
local function survives(f, ...)
  local done, err = pcall(f, ...)
  if not done then
    assert(type(err) == "string" or type(err) == "table" and type(err.message) == "string",
      "an error that is neither text nor a table: " .. tostring(err))
  end
end

local function simple_network()
  return core.network { nodes = 2, windings = 1, laws = 1, branches = {
    { from = 1, to = 2, turns = { 3 }, elements = { { law = 1, length = 0.1, area = 1e-4 } } },
    { from = 2, to = 1, elements = { { permeance = 1e-7, by_length = -1e-4 } } } } }
end

local function simple_material()
  return core.material { kind = "curve", curves = {
    { temperature = 0, h = { 0, 10, 100 }, b = { 0, 0.1, 0.3 } },
    { temperature = 100, h = { 0, 10, 100 }, b = { 0, 0.1, 0.25 } } } }
end

-- A proxy whose fields come from a function of how often each was asked for.
local function changing(fields)
  local asked = {}
  return setmetatable({}, { __index = function(_, key)
    asked[key] = (asked[key] or 0) + 1
    local value = fields[key]
    if type(value) == "function" then return value(asked[key]) end
    return value
  end })
end

local function closed(object)
  do local closing <close> = object end -- luacheck: ignore
  return object
end

describe("the C module", function()
  it("survives strange arguments in every place", function()
    for _, f in pairs(core) do
      if type(f) == "function" then
        survives(f)
        for i = 1, strange_count do
          survives(f, strange[i])
          for k = 1, strange_count do
            survives(f, strange[i], strange[k])
            survives(f, strange[i], strange[k], strange[(7 * i + k) % strange_count + 1])
            survives(f, strange[i], strange[k], strange[(5 * i + 3 * k) % strange_count + 1],
              strange[(i + 11 * k) % strange_count + 1])
          end
        end
      end
    end
  end)

  it("survives strange arguments to methods, of open and closed objects and of each other's", function()
    local objects = { simple_network, simple_material, function() return simple_material():law(50) end }
    for owner, make in ipairs(objects) do
      local methods = { "solve", "linkage", "inductance", "energy", "element", "span", "potential",
        "sensitivity", "law", "at", "field", "coenergy", "curvature", "saturation", "permeability" }
      for _, name in ipairs(methods) do
        local method = make()[name]
        if method then
          local whole = make()
          for i = 1, strange_count do
            survives(method, strange[i], strange[i])
            for k = 1, strange_count do
              survives(method, whole, strange[i], strange[k])
              survives(method, whole, strange[i], strange[k], strange[(3 * i + k) % strange_count + 1],
                strange[(i + 5 * k) % strange_count + 1])
            end
          end
          for other, make_other in ipairs(objects) do
            if other ~= owner then assert.is_false((pcall(method, make_other(), 1, 1))) end
          end
        end
      end
    end
  end)

  it("refuses a closed network and a closed material, but keeps the laws of one", function()
    local net, material = simple_network(), simple_material()
    local law = material:law(25)
    net:solve(1, law)
    closed(net)
    closed(net)
    for _, call in ipairs { { "solve", 1, law }, { "linkage", 1 }, { "inductance" }, { "energy" },
      { "element", 1 }, { "span", 1, 1 }, { "potential", 1 }, { "sensitivity", {} } } do
      refuses("^network$", "closed", net[call[1]], net, table.unpack(call, 2))
    end
    closed(material)
    refuses("^material$", "closed", material.law, material, 25)
    assert.is_true(law:at(50) > 0.1)
  end)

  it("gives no answer before the first solution or after a failed one", function()
    local net, law = simple_network(), simple_material():law(25)
    local function empty()
      for _, call in ipairs { { "linkage", 1 }, { "inductance", true }, { "energy" }, { "element", 1 },
        { "span", 1, 1 }, { "potential", 1 }, { "sensitivity", {} } } do
        refuses("^network$", "no solution", net[call[1]], net, table.unpack(call, 2))
      end
    end
    empty()
    net:solve(1, law)
    assert.is_true(net:linkage(1) > 0)
    refuses("^current$", "finite", net.solve, net, nan, law)
    empty()
  end)

  it("refuses missing fields and huge counts", function()
    local function network(changes)
      local s = { nodes = 2, windings = 1, laws = 0, branches = {
        { from = 1, to = 2, turns = { 3 }, elements = { { permeance = 1e-7 } } },
        { from = 2, to = 1, elements = { { permeance = 1e-7 } } } } }
      for key, value in pairs(changes) do s[key] = value end
      return core.network, s
    end
    for _, name in ipairs { "nodes", "windings", "laws" } do
      refuses("^" .. name .. "$", "from 0 to", network { [name] = 1e9 })
      refuses("^" .. name .. "$", "from 0 to", network { [name] = -1 })
      refuses("^" .. name .. "$", "from 0 to", network { [name] = 1.5 })
      refuses("^" .. name .. "$", "finite", network { [name] = nan })
      refuses("^" .. name .. "$", "finite", network { [name] = "2" })
    end
    refuses("^branches$", "missing", network { branches = 5 })
    refuses("^branches$", "no table", network { branches = { 1 } })
    refuses("node", "allowed", network { nodes = 3 })
    local function branch(changes)
      local b = { from = 1, to = 2, elements = { { permeance = 1e-7 } } }
      for key, value in pairs(changes) do b[key] = value end
      return network { branches = { b, { from = 2, to = 1, elements = { { permeance = 1e-7 } } } } }
    end
    refuses("^branch from$", "finite", branch { from = "a" })
    refuses("^branch to$", "from 0 to 4096", branch { to = 5000 })
    for _, to in ipairs { 0, 3, 4096 } do refuses("node", "allowed", branch { to = to }) end
    refuses("^elements$", "missing", branch { elements = 3 })
    refuses("^elements$", "no table", branch { elements = { 3 } })
    refuses("element", "allowed", branch { elements = {} })
    for _, value in ipairs { 0, -1 } do
      refuses("permeance", "above 0", branch { elements = { { permeance = value } } })
    end
    refuses("law", "allowed", branch { elements = { { law = 1, length = 1, area = 1 } } })
    refuses("^element 1, ", "allowed", branch { elements = { { law = 0, length = 1, area = 1 } } })
    survives(branch { turns = { nan } })
    refuses("turns", "finite", branch { turns = { nan } })
    survives(branch { turns = { "x" } })
    survives(branch { turns = { [300] = 5, x = 2 } })
  end)

  it("is not led astray by fields that change while they are read", function()
    local element = { permeance = 1e-7 }
    local function long(count)
      local list = {}
      for i = 1, count do list[i] = element end
      return list
    end
    local back = { from = 2, to = 1, elements = { element } }
    local function network(branch, windings)
      return core.network, { nodes = 2, windings = windings or 1, laws = 0, branches = { branch, back } }
    end
    -- Counted as one, read as ten thousand, and the other way round.
    refuses("^branches$", "changed", network(changing { from = 1, to = 2, elements = function(time)
      return long(time == 1 and 1 or 10000)
    end }))
    refuses("^branches$", "changed", network(changing { from = 1, to = 2, elements = function(time)
      return long(time == 1 and 100 or 1)
    end }))
    local many = {}
    for i = 1, 256 do many[i] = 1 end
    refuses("^branches$", "changed", network(changing { from = 1, to = 2, elements = { element },
      turns = function(time) return time == 1 and {} or many end }, 256))
    -- A branch that takes the list apart.
    local list = { false, back }
    list[1] = changing { to = 2, elements = { element }, from = function()
      list[2] = nil
      return 1
    end }
    refuses("^branches$", "changed", core.network, { nodes = 2, windings = 1, laws = 0, branches = list })
    -- A second argument is none of its business.
    assert.is_truthy(core.network({ nodes = 2, windings = 0, laws = 0,
      branches = { { from = 1, to = 2, elements = { element } }, back } }, 7))
  end)

  it("is not led astray by an argument that closes its object", function()
    local law = simple_material():law(25)
    for _, direction in ipairs { "turns", "elements" } do
      local net = simple_network()
      net:solve(1, law)
      refuses("^network$", "closed", net.sensitivity, net, changing { [direction] = function()
        closed(net)
        return {}
      end })
    end
    local net = simple_network()
    net:solve(1, law)
    refuses("^network$", "closed", net.sensitivity, net, { elements = { changing { element = function()
      closed(net)
      return 1
    end } } })
  end)

  it("keeps the laws of a solution alive", function()
    local net = simple_network()
    local laws = { simple_material():law(25) }
    net:solve({ 5 }, laws)
    local before = net:sensitivity { elements = { { element = 1, area = 1e-4 } } }.incremental[1]
    laws[1] = nil
    for _ = 1, 3 do
      collectgarbage()
      local filler = {}
      for i = 1, 2000 do filler[i] = ("z"):rep(100 + i % 50) end
      assert.equal(2000, #filler)
    end
    assert.equal(before, net:sensitivity { elements = { { element = 1, area = 1e-4 } } }.incremental[1])
  end)

  it("survives the errors and strange values of a function whose root it looks for", function()
    survives(core.root, function() error { "mine" , message = "mine" } end, 0, 1)
    survives(core.root, function() return nan end, 0, 1)
    survives(core.root, function() return "x", {} end, 0, 1)
    survives(core.root, function(x) return x - 0.3, nan end, 0, 1)
    survives(core.root, function(x) return x - 0.3, 0 end, -infinity, infinity)
    survives(core.root, coroutine.wrap(function() while true do coroutine.yield(1) end end), 0, 1)
    survives(core.root, function(x) return x > 0.3 and 1 or -1 end, 0, 1)
    local depth = 0
    survives(core.root, function(x)
      depth = depth + 1
      if depth < 300 then core.root(function() return x - 0.5 end, 0, 1) end
      return x - 0.5
    end, 0, 1)
    assert.equal(0.25, core.root(function(x) return x - 0.25 end, 0, 1))
  end)

  it("survives random specs of networks, gaps, pockets, rings and shapes", function()
    local random = stream(7)
    local function number()
      local kind = random()
      if kind < 0.05 then return strange[1 + math.floor(random() * strange_count)] end
      return (random() < 0.1 and -1 or 1) * 10 ^ (random() * 12 - 8)
    end
    local function small(most) return math.floor(random() * (most + 1)) end
    local edges = { "free", "free exact", "near yoke", "near leg", "none" }
    local function edge() return { kind = edges[1 + small(4)], reach = number() } end
    for _ = 1, 4000 do
      local geometry = { pole = { shape = random() < 0.5 and "round" or "rectangle", diameter = number(),
        width = number(), depth = number(), corner = number(), hole = random() < 0.5 and number() or nil },
        length = number(), winding_length = number(),
        edges = { x_low = edge(), x_high = edge(), y_low = edge(), y_high = edge() } }
      survives(core.gap, core.gap_methods()[1 + small(3)], geometry)
      survives(core.gap_midplane, geometry, number(), number())
      survives(core.gap_edge, edges[1 + small(4)], number(), number())
      local pocket = { diameter = number(), depth = number(), through = random() < 0.3 }
      survives(core.pocket, pocket, number())
      survives(core.pocket_field, pocket, number(), number(), number())
      local branches = {}
      for i = 1, small(5) do
        local elements = {}
        for k = 1, small(3) do
          elements[k] = random() < 0.5 and { permeance = number(), by_length = number() }
            or { law = small(2), length = number(), area = number(), bypass = number(),
              remanence = number() }
        end
        branches[i] = { from = small(4), to = small(4), elements = elements, turns = { number() } }
      end
      local done, net = pcall(core.network, { nodes = small(4), windings = small(2), laws = small(2),
        branches = branches })
      if done then survives(net.solve, net, { number(), number() }, simple_material():law(50)) end
      survives(core.fit_law, random() < 0.5 and "froelich" or "langevin",
        { number(), number(), number(), number() }, { number(), number(), number(), number() })
      survives(core.material, { kind = "curve", curves = { { temperature = number(),
        h = { 0, number(), number() }, b = { 0, number(), number() } } } })
    end
    for _, family in ipairs(core.shape_families()) do
      for _ = 1, 300 do
        local dimensions = {}
        for _, letter in ipairs(core.shape_letters(family)) do
          dimensions[(letter:gsub("%?", ""))] = number()
        end
        survives(core.shape, family, dimensions)
      end
    end
    for _ = 1, 40 do
      survives(core.ring_ladder, { outer_diameter = number(), inner_diameter = number(), height = number(),
        gap = number(), gaps = small(3) }, 1 + small(70))
    end
  end)
end)
