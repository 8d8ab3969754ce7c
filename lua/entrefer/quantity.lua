--- Quantities: numbers in SI units, or text with a unit, read with one function.
-- @module entrefer.quantity
local fail = require "entrefer.fail"
local number = require "entrefer.number"
local units = require "entrefer.units"

local quantity = {}

local examples = { m = "1.2 mm", m2 = "178 mm2", m3 = "17.3 cm3", H = "47 uH", A = "12 A",
  T = "300 mT", degC = "85 degC", V = "5 V", Hz = "110 kHz", s = "1.5 us", ohm = "3 mohm",
  ["A/m"] = "100 A/m", ["V/T"] = "20 mV/mT", ["1"] = "2.5 %", ["A/m2"] = "6 A/mm2",
  ["kg/m3"] = "4.8 g/cm3", ["ohm m"] = "5 ohm m", ["T/rtHz"] = "150 nT/rtHz", ["1/K"] = "30 ppm/K",
  K = "10 K", rad = "30 deg" }

local function describe(unit)
  local example = examples[unit]
  return ("a quantity in %s%s"):format(unit, example and (" such as %q"):format(example) or "")
end

local celsius = { degC = true, ["\u{B0}C"] = true, C = true }

-- Data sheets are typeset: minus signs, and spaces that don't break.
local typeset = { ["\u{2212}"] = "-", ["\u{A0}"] = " ", ["\u{2009}"] = " ", ["\u{202F}"] = " ",
  ["\u{B7}"] = " ", ["\u{22C5}"] = " ", ["*"] = " " }

local function parse(given_text, unit, field)
  local text = given_text:gsub(utf8.charpattern, typeset)
  local digits, rest = text:match("^%s*([+-]?[%d.]+[eE]?[+-]?%d*)%s*(.-)%s*$")
  -- "5e" of "5eV" is no exponent: give the letter back to the unit.
  if digits and not tonumber(digits) then
    digits, rest = text:match("^%s*([+-]?[%d.]+)%s*(.-)%s*$")
  end
  local value = digits and tonumber(digits)
  if not value then fail(field, given_text, describe(unit)) end
  if rest == "" then
    if unit == "1" then return value end
    fail(field, given_text, describe(unit) .. ", with its unit")
  end
  if unit == "degC" then
    if celsius[rest] then return value end
    if rest == "K" then return value - 273.15 end
    fail(field, given_text, describe(unit))
  end
  local given, wanted = units.parse(rest), units.parse(unit)
  if not wanted then fail(field .. ", unit", unit, "a unit such as \"A/m\", or \"1\"") end
  if not given or not units.alike(given, wanted) then fail(field, given_text, describe(unit)) end
  return value * given.factor / wanted.factor
end

local function check_limits(value, unit, field, options)
  if options.positive and value <= 0 then fail(field, value, "a number above 0") end
  if options.integer and value ~= math.floor(value) then fail(field, value, "a whole number") end
  if options.min and value < options.min or options.max and value > options.max then
    local low = options.min and number.rounded(options.min, 6)
    local high = options.max and number.rounded(options.max, 6)
    local range = low and high and ("from %s to %s"):format(low, high)
      or low and "at least " .. low or "at most " .. high
    fail(field, value, unit == "1" and range or range .. " " .. unit)
  end
  return value
end

--- Reads a quantity.
-- @tparam number|string value a number in SI units (temperatures in degrees Celsius), or text with a
--   unit: "1.2 mm", "47 uH", "10 mV/mT", "85 degC", "2.5 %"
-- @string unit the unit of the result: "m", "H", "V/T", "degC", "1"...
-- @string field named in errors
-- @tparam[opt] table options `positive`, `integer` (booleans), `min`, `max` (in `unit`)
-- @treturn number
-- @raise an error table: not finite, wrong dimension, outside the limits
function quantity.read(value, unit, field, options)
  local kind = type(value)
  if kind == "string" then
    value = parse(value, unit, field)
  elseif kind ~= "number" then
    if value == nil then fail.text(field, ("%s is missing; allowed: %s"):format(field, describe(unit))) end
    fail(field, value, describe(unit))
  end
  if value ~= value or value - value ~= 0 then fail(field, value, "a finite number") end
  if options then return check_limits(value, unit, field, options) end
  return value
end

local prefixed = { m = true, H = true, A = true, T = true, V = true, Hz = true, s = true, ohm = true,
  Wb = true, J = true, N = true, W = true, F = true, ["V/T"] = true, ["T/A"] = true,
  ["T/rtHz"] = true }
local steps = { { 1e9, "G" }, { 1e6, "M" }, { 1e3, "k" }, { 1, "" }, { 1e-3, "m" }, { 1e-6, "u" },
  { 1e-9, "n" }, { 1e-12, "p" } }

--- Writes a quantity with an engineering prefix.
-- @number value in SI units
-- @string unit
-- @tparam[opt=4] integer digits significant digits
-- @tparam[opt] table options `ascii` = true writes "u" for micro and "degC"
-- @treturn string "1.600 mm", "47.00 µH", "85 °C", "0.3000"
-- @raise an error table for NaN and infinities
function quantity.format(value, unit, digits, options)
  digits = digits or 4
  local ascii = options and options.ascii
  if type(value) ~= "number" or value - value ~= 0 then fail("value", value, "a finite number") end
  if unit == "1" or unit == nil then
    -- A count is shown as one.
    if value % 1 == 0 then return number.exact(value) end
    return number.significant(value, digits)
  end
  if unit == "degC" then
    return number.rounded(value, digits) .. (ascii and " degC" or " \u{B0}C")
  end
  if not prefixed[unit] or value == 0 then
    return (value == 0 and "0" or number.significant(value, digits)) .. " " .. unit
  end
  -- Rounded first, so that 999.96 with four digits becomes 1.000 k and not 1000.
  local rounded = number.round(value, digits)
  local chosen = steps[#steps]
  for _, step in ipairs(steps) do
    if math.abs(rounded) >= step[1] * (1 - 1e-12) then
      chosen = step
      break
    end
  end
  local prefix = chosen[2] == "u" and not ascii and "\u{B5}" or chosen[2]
  return number.significant(value / chosen[1], digits) .. " " .. prefix .. unit
end

return quantity
