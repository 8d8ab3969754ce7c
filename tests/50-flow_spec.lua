-- The first flow, through the command line, on the example projects.
local cjson = require "cjson"
local ef = require "entrefer"
local lfs = require "lfs"
local command = require "tests.command"
local support = require "tests.support"
local near = support.near
local read, write, entrefer = command.read, command.write, command.entrefer
local fresh_folder, remove_folder = command.fresh_folder, command.remove_folder

-- Records are rounded to six digits, so that a last digit of a maths library does not show.
local six_digits = 5e-6

local function run_example(name, folder)
  local code, out, err = entrefer(("run part-from-spec spec=examples/%s/spec.lua --out %s"):format(
    name, folder))
  assert.equal(0, code, err)
  return out, cjson.decode(read(folder .. "/results.json"))
end

-- RFC 4180 reader: records of cells.
local function parse_csv(text)
  local rows, row, at = {}, {}, 1
  while at <= #text do
    local cell
    if text:sub(at, at) == '"' then
      local stop = at + 1
      repeat
        stop = text:find('"', stop, true)
        local doubled = text:sub(stop + 1, stop + 1) == '"'
        stop = doubled and stop + 2 or stop
      until not doubled
      cell, at = text:sub(at + 1, stop - 1):gsub('""', '"'), stop + 1
    else
      local stop = text:find("[,\r]", at)
      cell, at = text:sub(at, stop - 1), stop
    end
    row[#row + 1] = cell
    if text:sub(at, at) == "," then
      at = at + 1
    else
      assert(text:sub(at, at + 1) == "\r\n", "a record ends with CR LF")
      rows[#rows + 1], row, at = row, {}, at + 2
    end
  end
  return rows
end

describe("the orchard-cart project", function()
  local folder, out, results
  setup(function()
    folder = fresh_folder()
    out, results = run_example("orchard-cart", folder)
  end)
  teardown(function() remove_folder(folder) end)

  it("opens with its verdict and passes", function()
    assert.is_truthy(out:find("Verdict\n%-+\nOrchard cart[^\n]*PASS"))
    assert.equal("pass", results.passed)
    assert.is_truthy(out:find("First limit to break", 1, true))
    assert.is_truthy(out:find("CAUTION", 1, true))
  end)

  it("gives the results that stand in the project", function()
    local expected = cjson.decode(read("examples/orchard-cart/expected.json"))
    for name, value in pairs(expected) do
      if type(value) == "number" then
        -- Six digits in both; a unit in the last of them.
        near(value, results[name], 2 * six_digits, name)
      else
        assert.equal(value, results[name])
      end
    end
  end)

  it("keeps every limit by the numbers themselves", function()
    -- Worked again from the spec, not from the flow: L = (Vh - Vl) Vl / Vh / (f dI).
    local wanted = (57 - 25) * 25 / 57 / (110e3 * 17)
    local part = ef.part {
      core = results.core,
      material = { file = "examples/orchard-cart/power-ferrite.csv" },
      gaps = { { length = results.gap } }, windings = { { turns = results.turns } },
    }
    local peak = part:solve { current = 47, temperature = 100 }
    near(results.inductance, peak.inductance, six_digits)
    -- Ripple is held by the incremental inductance, at the worst temperature, the gap too long.
    local function least(length)
      local worst = math.huge
      for _, temperature in ipairs { -20, 25, 100 } do
        worst = math.min(worst, part:with { gap = length }
          :solve { current = 47, temperature = temperature }.incremental_inductance)
      end
      return worst
    end
    assert.is_true(least(results.gap + 0.05e-3) >= wanted)
    -- One step more and it would be short.
    assert.is_true(least(results.gap + 0.10e-3) < wanted)
    local trip = part:with { gap = results.gap - 0.05e-3 }:solve { current = 58, temperature = 100 }
    assert.is_true(trip.core_flux_density <= 0.8 * part.material:saturation(100))
  end)

  it("writes the same table as text, Markdown, CSV and JSON", function()
    local csv = parse_csv(read(folder .. "/against-current.csv"))
    local json = cjson.decode(read(folder .. "/against-current.json"))
    local text = read(folder .. "/against-current.txt")
    local markdown = read(folder .. "/against-current.md")
    assert.equal(3 * 16 + 1, #csv)
    assert.equal(#csv - 1, #json.rows)
    assert.equal("temperature [degC]", csv[1][1])
    for i, row in ipairs(json.rows) do
      for k, value in ipairs(row) do
        if type(value) == "number" then assert.equal(value, tonumber(csv[i + 1][k])) end
      end
    end
    local _, lines = text:gsub("\n", "")
    assert.is_true(lines >= #csv + 1)
    local _, bars = markdown:gsub("\n|", "")
    assert.equal(#csv, bars)
  end)

  it("has a table that the library gives point by point", function()
    local csv = parse_csv(read(folder .. "/against-current.csv"))
    local part = ef.part { core = results.core,
      material = { file = "examples/orchard-cart/power-ferrite.csv" },
      gaps = { { length = results.gap } }, windings = { { turns = results.turns } } }
    local probe = ef.probe { part = part, sensor = results.sensor }
    for _, i in ipairs { 5, 20, 30, 49 } do
      local temperature, current = tonumber(csv[i][1]), tonumber(csv[i][2])
      local s = part:solve { current = current, temperature = temperature }
      -- The sweep starts each point from the one before: the same minimum to the solver's tolerance.
      near(s.inductance * 1e6, tonumber(csv[i][3]), six_digits)
      near(probe:read { current = current, temperature = temperature }.voltage, tonumber(csv[i][8]),
        six_digits)
    end
  end)

  it("is the same to the byte in another folder and under another locale", function()
    local other = fresh_folder()
    local code = entrefer("run part-from-spec spec=examples/orchard-cart/spec.lua --out " .. other,
      "LC_ALL=de_DE.UTF-8 TZ=Asia/Tokyo")
    assert.equal(0, code)
    for entry in lfs.dir(folder) do
      if entry ~= "." and entry ~= ".." then
        assert.equal(read(folder .. "/" .. entry), read(other .. "/" .. entry), entry)
      end
    end
    remove_folder(other)
  end)

  it("leaves no temporary file behind", function()
    for entry in lfs.dir(folder) do assert.is_nil(entry:match("%.part$")) end
  end)
end)

describe("the canal-barge project", function()
  it("fails as asked, says why, and finds two gaps", function()
    local folder = fresh_folder()
    local out, results = run_example("canal-barge", folder)
    assert.equal("fail", results.passed)
    assert.equal("two gaps, a sensor in each", results.recommended)
    assert.is_truthy(out:find("180 degrees from the gap", 1, true))
    -- A shorter gap saturates the ring sooner: the wrong reflex is shown as such.
    local rows = cjson.decode(read(folder .. "/arrangements.json")).rows
    local as_asked, half = rows[1], rows[4]
    assert.is_true(tonumber(half[7]) < tonumber(as_asked[7]))
    remove_folder(folder)
  end)
end)

describe("the duct-robot project", function()
  it("takes a pocket where the gap is shorter than the package", function()
    local folder = fresh_folder()
    local out, results = run_example("duct-robot", folder)
    assert.equal("pass", results.passed)
    assert.is_truthy(out:find("with a pocket of", 1, true))
    local sensor = ef.sensor(results.sensor)
    assert.is_true(results.gap < sensor.thickness.min + 0.4e-3)
    remove_folder(folder)
  end)
end)

describe("the command", function()
  it("lists and describes recipes", function()
    local code, out = entrefer("list")
    assert.equal(0, code)
    assert.is_truthy(out:find("part-from-spec", 1, true))
    local described, text = entrefer("describe part-from-spec")
    assert.equal(0, described)
    assert.is_truthy(text:find("spec", 1, true) and text:find("inductance", 1, true))
  end)

  local function refuses(arguments, expected_code, pattern)
    local code, out, err = entrefer(arguments)
    assert.equal(expected_code, code, out .. err)
    assert.is_truthy(err:find(pattern), err)
    assert.is_nil(err:find("traceback", 1, true))
  end

  it("says in one line what is wrong", function()
    refuses("", 2, "entrefer: ")
    refuses("runn x", 2, "entrefer: ")
    refuses("run nowhere", 1, "there is no recipe nowhere")
    refuses("run part-from-spec", 1, "spec is missing")
    refuses("run part-from-spec spec=/nonexistent.lua", 1, "can't be read")
    refuses("run part-from-spec spec", 1, "name=value")
    refuses("run part-from-spec spec=examples/orchard-cart/spec.lua colour=red", 1, "colour")
    refuses("run part-from-spec spec=README.md", 1, "README.md")
  end)

  it("refuses inputs of recipes that would leave nothing to compute", function()
    refuses("run wrong-gap current=0", 1, "input current is 0; allowed: at least 0.001 A")
    refuses("run concentrator-ring current=0", 1, "input current is 0")
    refuses("run compare-parts current=0", 1, "input current is 0")
    refuses("run tolerance-corners cold=120", 1, "input cold is 120; allowed: at most hot, 100 degC")
    refuses("run tolerance-corners gap_tolerance='2 mm'", 1, "allowed: below the gap")
    refuses("run turns-gap-map turns_from=30", 1, "input turns_from is 30; allowed: below turns_to, 22")
    refuses("run turns-gap-map gap_from='5 mm'", 1, "input gap_from is 0.005")
    refuses("run turns-gap-map turns_from=8.5", 1, "a whole number")
  end)

  local function with_spec(text, pattern)
    local folder = fresh_folder()
    write(folder .. "/spec.lua", text)
    local out_folder = folder .. "/out"
    local code, _, err = entrefer(("run part-from-spec spec=%s/spec.lua --out %s"):format(folder,
      out_folder))
    assert.equal(1, code)
    assert.is_truthy(err:find(pattern), err)
    assert.is_nil(lfs.attributes(out_folder), "nothing is written after a refusal")
    remove_folder(folder)
  end

  it("refuses bad specs by field and writes nothing", function()
    local good = 'current = { nominal = "3 A" }, inductance = "100 uH", material = "PW3b",'
      .. ' cores = { "E 25/13/7" }'
    with_spec("return 5", "table")
    with_spec("return {", "spec.lua")
    with_spec("while true do end", "too long")
    with_spec('return { os.execute("true") }', "os")
    with_spec("return { " .. good .. ', colour = "red" }', "colour")
    with_spec("return { " .. good:gsub('"100 uH"', '"100 V"') .. " }", "inductance")
    with_spec("return { " .. good:gsub('"3 A"', '"-3 A"') .. " }", "current nominal")
    with_spec("return { " .. good:gsub("PW3b", "PW33") .. " }", "PW3b")
    with_spec("return { " .. good:gsub("E 25/13/7", "E 25/13/8") .. " }", "E 25/13/7")
    with_spec("return { " .. good:gsub('inductance = "100 uH",', "") .. " }", "inductance is missing")
    with_spec('return { current = { nominal = "3 A", peak = "2 A" }, inductance = 1e-4,'
      .. ' material = "PW3b", cores = { "E 25/13/7" } }', "current peak")
    with_spec('return { current = { nominal = "3 A" }, converter = { high = "12 V", low = "24 V",'
      .. ' frequency = "1 MHz", ripple = "1 A" }, material = "PW3b", cores = { "E 25/13/7" } }',
      "converter low")
    with_spec('return { kind = "concentrator", current = { nominal = "3 A" }, material = "PW3b",'
      .. ' cores = { "E 25/13/7" } }', "ring")
  end)

  it("says when no core can do it, with the reason for each", function()
    local folder = fresh_folder()
    write(folder .. "/spec.lua", 'return { current = { nominal = "50 A" }, inductance = "1 mH",'
      .. ' material = "PW3b", cores = { "E 25/13/7", "RM 8" } }')
    local code, out = entrefer(("run part-from-spec spec=%s/spec.lua"):format(folder))
    assert.equal(0, code)
    assert.is_truthy(out:find("FAIL", 1, true))
    assert.is_truthy(out:find("Cores refused", 1, true))
    assert.is_truthy(out:find("RM 8", 1, true))
    remove_folder(folder)
  end)
end)

describe("entrefer compare", function()
  it("says what moved and by how much", function()
    local old, new = command.fresh_folder(), command.fresh_folder()
    for i, made in ipairs { "1.5 mm", "1.65 mm" } do
      local code, _, err = entrefer(("run wrong-gap drawn='1.5 mm' made='%s' --out %s"):format(made,
        i == 1 and old or new))
      assert.equal(0, code, err)
    end
    local code, out = entrefer(("compare %s %s"):format(old, new))
    assert.equal(0, code)
    assert.is_truthy(out:find("3 of 3 results moved", 1, true), out)
    local same, text = entrefer(("compare %s %s/results.json"):format(old, old))
    assert.equal(0, same)
    assert.is_truthy(text:find("0 of 3 results moved", 1, true), text)
    command.remove_folder(old)
    command.remove_folder(new)
  end)

  it("refuses what is no record", function()
    local code, _, err = entrefer("compare README.md /nonexistent")
    assert.equal(1, code)
    assert.is_truthy(err:find("can't be read", 1, true), err)
  end)
end)

describe("entrefer check", function()
  it("passes every recipe that comes along, and refuses a broken one", function()
    for entry in lfs.dir("recipes") do
      if entry:match("%.lua$") then assert.equal(0, (entrefer("check recipes/" .. entry))) end
    end
    local folder = fresh_folder()
    write(folder .. "/bad.lua", "return { entrefer = 1, title = 5 }")
    local code, _, err = entrefer("check " .. folder .. "/bad.lua")
    assert.equal(1, code)
    assert.is_truthy(err:find("title", 1, true), err)
    remove_folder(folder)
  end)
end)
