local fail = require "entrefer.fail"
local number = require "entrefer.number"
local quantity = require "entrefer.quantity"
local support = require "tests.support"
local near, refuses, stream = support.near, support.refuses, support.stream

-- Text, unit asked for, SI value. Prefixes and coherent units: the SI Brochure (BIPM, 9th ed. 2019).
local accepted = {
  { "1.2 mm", "m", 1.2e-3 }, { "47 uH", "H", 47e-6 }, { "47 \u{B5}H", "H", 47e-6 },
  { "47 \u{3BC}H", "H", 47e-6 }, { "10 mV/mT", "V/T", 10 }, { "2.5 %", "1", 0.025 },
  { "1e-3 m", "m", 1e-3 }, { "0.3 T", "T", 0.3 }, { "100 A/m", "A/m", 100 },
  { "16.7 uohm m", "ohm m", 16.7e-6 }, { "16.7 \u{B5}\u{3A9} m", "ohm m", 16.7e-6 },
  { "4.85 g/cm3", "kg/m3", 4850 }, { "300 mm2", "m2", 300e-6 }, { "300 mm^2", "m2", 300e-6 },
  { "12 A", "A", 12 }, { "5 V", "V", 5 }, { "110 kHz", "Hz", 110e3 }, { "3 us", "s", 3e-6 },
  { "30 ppm/K", "1/K", 30e-6 }, { "0.39 %/K", "1/K", 3.9e-3 }, { "30 ppm/degC", "1/K", 30e-6 },
  { "100 nT/rtHz", "T/rtHz", 100e-9 }, { "100 nT/\u{221A}Hz", "T/rtHz", 100e-9 },
  { "6 A/mm2", "A/m2", 6e6 }, { "1.2 kA/cm", "A/m", 120e3 }, { "2 cm-1", "1/m", 200 },
  { "3 mT m2", "Wb", 3e-3 }, { "3 mT*m^2", "Wb", 3e-3 }, { "3 mT\u{B7}m2", "Wb", 3e-3 },
  { "1 V s", "Wb", 1 }, { "1 Wb/A", "H", 1 }, { "1 J/A^2", "H", 1 }, { "1 N m", "J", 1 },
  { "1 kg m2/s3", "W", 1 }, { "1 V/A", "ohm", 1 }, { "1 1/ohm", "S", 1 }, { "1 A s/V", "F", 1 },
  { "90 deg", "rad", math.pi / 2 }, { "2 min", "s", 120 }, { "1 h", "s", 3600 },
  { "24 turns", "1", 24 }, { "24", "1", 24 }, { "1.2mm", "m", 1.2e-3 }, { " 5 V ", "V", 5 },
  { "-.5 mT", "T", -0.5e-3 }, { "+5 V", "V", 5 }, { "5E3 Hz", "Hz", 5000 },
  { "\u{2212}5\u{A0}mT", "T", -5e-3 },
  -- Exact by definition: the inch, and ISO 80000-6 (from memory) for the older magnetic units.
  { "62 mil", "m", 62 * 25.4e-6 }, { "1 in", "m", 25.4e-3 }, { "3 kG", "T", 0.3 },
  { "1 Oe", "A/m", 1000 / (4 * math.pi) },
  -- Temperatures stay in degrees Celsius; 0 degC = 273.15 K by definition.
  { "85 degC", "degC", 85 }, { "85 \u{B0}C", "degC", 85 }, { "-40 \u{B0}C", "degC", -40 },
  { "273.15 K", "degC", 0 },
}

-- Text that is no such quantity, with the unit asked for.
local refused = {
  { "3 V", "m" }, { "1.2", "m" }, { "mm", "m" }, { "", "m" }, { "1,2 mm", "m" }, { "1.2.3 mm", "m" },
  { "1.2 qm", "m" }, { "1.2 m-", "m" }, { "1.2 m^", "m" }, { "1 m/s/s", "m/s2" }, { "1 /", "1" },
  { "inf m", "m" }, { "nan m", "m" }, { "1e400 m", "m" }, { "0x10 m", "m" }, { "1 m m", "m" },
  { "5 degC", "m" }, { "5 degC", "K" }, { "5 V", "degC" }, { "3 T/Hz", "T/rtHz" }, { "1 kmin", "s" },
  { "5 eV", "V" }, { "1 k%", "1" }, { "1 mm\0", "m" }, { "\xff mm", "m" },
}

describe("a quantity", function()
  it("is read from a number in SI units or text with its unit", function()
    for _, case in ipairs(accepted) do
      local text, unit, value = table.unpack(case)
      near(value + 1e-12, quantity.read(text, unit, "field") + 1e-12, 1e-14, text)
    end
    assert.equal(1.2e-3, quantity.read(1.2e-3, "m", "field"))
  end)

  it("of another dimension, or no quantity at all, is refused with the field's name", function()
    for _, case in ipairs(refused) do
      refuses("gap length", "; allowed: ", quantity.read, case[1], case[2], "gap length")
    end
    local err = refuses("gap length", "", quantity.read, "3 V", "m", "gap length")
    assert.equal("gap length is \"3 V\"; allowed: a quantity in m such as \"1.2 mm\"", err.message)
    assert.equal("bad_value", err.code)
    assert.equal("3 V", err.value)
  end)

  it("is a finite number or text, nothing else", function()
    for _, value in ipairs { 1 / 0, -1 / 0, 0 / 0 } do
      refuses("gap", "a finite number", quantity.read, value, "m", "gap")
    end
    for _, value in ipairs { true, {}, print } do
      refuses("gap", "a quantity in m", quantity.read, value, "m", "gap")
    end
    refuses("gap", "missing", quantity.read, nil, "m", "gap")
    refuses("gap, unit", "a unit such as", quantity.read, "5 m", "metre", "gap")
  end)

  it("is held to its limits, ends included", function()
    local limits = { min = 1e-3, max = 2e-3 }
    assert.equal(2e-3, quantity.read("2 mm", "m", "gap", limits))
    refuses("gap", "from 0.001 to 0.002", quantity.read, "2.1 mm", "m", "gap", limits)
    refuses("gap", "at least 0.001", quantity.read, 0, "m", "gap", { min = 1e-3 })
    refuses("gap", "at most 0.002", quantity.read, 1, "m", "gap", { max = 2e-3 })
    refuses("gap", "above 0", quantity.read, "0 mm", "m", "gap", { positive = true })
    refuses("turns", "a whole number", quantity.read, 2.5, "1", "turns", { integer = true })
  end)

  it("never crashes on broken text", function()
    local next_number, alphabet = stream(7), "0123456789.eE+-/^ mVTAkuH%\u{B5}\0\"\n"
    for _ = 1, 5000 do
      local letters = {}
      for i = 1, math.floor(next_number() * 12) do
        local at = 1 + math.floor(next_number() * #alphabet)
        letters[i] = alphabet:sub(at, at)
      end
      local value, err = fail.try(quantity.read, table.concat(letters), "m", "field")
      assert(math.type(value) or err.code == "bad_value", tostring(err))
    end
  end)
end)

describe("a quantity as text", function()
  it("has an engineering prefix and the digits asked for", function()
    local cases = {
      { 1.6e-3, "m", 3, "1.60 mm" }, { 47e-6, "H", 3, "47.0 \u{B5}H" }, { 999.96, "A", 4, "1.000 kA" },
      { 999.94, "A", 4, "999.9 A" }, { 0, "m", 4, "0 m" }, { -0.0, "m", 4, "0 m" },
      { -3e-7, "T", 3, "-300 nT" }, { 85, "degC", 4, "85 \u{B0}C" }, { 85.127, "degC", 4, "85.13 \u{B0}C" },
      { 0.3, "1", 4, "0.3000" }, { 7, "1", 4, "7" }, { 300e-6, "m2", 3, "0.000300 m2" },
      { 150e-9, "T/rtHz", 3, "150 nT/rtHz" }, { 100, "A/m", 3, "100 A/m" },
    }
    for _, case in ipairs(cases) do
      assert.equal(case[4], quantity.format(case[1], case[2], case[3]))
    end
    assert.equal("47.0 uH", quantity.format(47e-6, "H", 3, { ascii = true }))
    assert.equal("85 degC", quantity.format(85, "degC", 3, { ascii = true }))
  end)

  it("reads back within its last digit", function()
    local next_number = stream(11)
    for _, unit in ipairs { "m", "H", "T", "V/T", "A/m", "m2", "T/rtHz", "1" } do
      for _ = 1, 200 do
        local value = (next_number() - 0.5) * 10 ^ (24 * next_number() - 12)
        near(value, quantity.read(quantity.format(value, unit, 5), unit, "field"), 0.5001e-4)
      end
    end
  end)

  it("is refused for what is no finite number", function()
    for _, value in ipairs { 1 / 0, 0 / 0, "3" } do
      refuses("value", "a finite number", quantity.format, value, "m")
    end
  end)
end)

describe("a number as text", function()
  it("has the significant digits, decimals or exactness asked for", function()
    assert.equal("12.35", number.significant(12.3456, 4))
    assert.equal("10.00", number.significant(9.9996, 4))
    assert.equal("1235000", number.significant(1234567, 4))
    assert.equal("1.235e8", number.significant(123456789, 4))
    assert.equal("1.000e-5", number.significant(1e-5, 4))
    assert.equal("0", number.fixed(-0.0, 0))
    assert.equal("0.0", number.fixed(-0.04, 1))
    assert.equal("2.50", number.fixed(2.5, 2))
    assert.equal("0.1", number.rounded(0.1 + 1e-9, 6))
    assert.equal("9007199254740993", number.rounded(9007199254740993, 6))
    for _, value in ipairs { 1 / 0, 0 / 0, "3" } do
      refuses("number", "a finite number", number.exact, value)
    end
  end)

  it("when exact reads back as the same number", function()
    local next_number = stream(13)
    for _ = 1, 2000 do
      local value = (next_number() - 0.5) * 10 ^ (600 * next_number() - 300)
      assert.equal(value, tonumber(number.exact(value)))
    end
    for _, value in ipairs { 0.1, 1 / 3, 2 ^ 53, 1e22, 5e-324, 1.7976931348623157e308 } do
      assert.equal(value, tonumber(number.exact(value)))
    end
    assert.equal("0", number.exact(-0.0))
    assert.equal("9007199254740993", number.exact(9007199254740993))
  end)

  it("has a point even where the C library writes a comma", function()
    local plain = string.format
    -- What string.format gives in a locale with a decimal comma.
    local function comma(text, ...)
      return (plain(text, ...):gsub("(%d)%.(%d)", "%1,%2"))
    end
    local texts = {}
    -- luacheck: push ignore 122
    string.format = comma
    local done, err = pcall(function()
      texts = { number.fixed(1.5, 2), number.significant(1.5, 4), number.significant(1.5e-9, 4),
        number.exact(0.1), quantity.format(1.6e-3, "m", 3) }
    end)
    string.format = plain
    -- luacheck: pop
    assert(done, err)
    assert.same({ "1.50", "1.500", "1.500e-9", "0.1", "1.60 mm" }, texts)
  end)
end)

describe("an error", function()
  it("prints as its message and holds its parts", function()
    local err = refuses("gap length", "", fail, "gap length", -1, "a number above 0")
    assert.same({ "bad_value", -1, "a number above 0", "gap length is -1; allowed: a number above 0" },
      { err.code, err.value, err.allowed, tostring(err) })
  end)

  it("stays on one line of readable length whatever the value", function()
    for _, value in ipairs { "a\nb\0c", ("\u{B5}"):rep(1000), {}, 0 / 0, 1 / 0, 2 ^ 70, false } do
      local err = refuses("field", "allowed", fail, "field", value, "something else")
      assert(not err.message:find("[\0-\31]") and #err.message < 160, err.message)
      assert(utf8.len(err.message))
    end
  end)

  it("suggests the nearest known name", function()
    local known = { "centre", "left", "right", "outer" }
    local err = refuses("leg", "did you mean \"centre\"", fail.unknown, "leg", "center", known)
    assert.equal("leg \"center\" is unknown, did you mean \"centre\"?; allowed: centre, left, right, outer",
      err.message)
    local many = {}
    for i = 1, 40 do many[i] = "size " .. i end
    refuses("core", "one of 40 names", fail.unknown, "core", "size41", many)
    refuses("lenght", "did you mean \"length\"", fail.fields, { lenght = 1 }, { "leg", "length" }, "gap")
    refuses("gap", "a table", fail.fields, "1 mm", { "length" }, "gap")
    fail.fields({ length = 1 }, { "leg", "length" }, "gap")
  end)

  it("comes back from try instead of being raised", function()
    local value, err = fail.try(fail.value, "gap", 1, "2")
    assert.is_nil(value)
    assert.equal("gap", err.field)
    assert.same({ n = 2, 1 }, table.pack(fail.try(function() return 1, nil end)))
    local _, plain = fail.try(error, "broken")
    assert.equal("error", plain.code)
    assert.is_truthy(tostring(plain):find("broken", 1, true))
  end)
end)
