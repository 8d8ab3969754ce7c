--- Numbers as text, the same on every machine: a decimal point whatever the locale, no minus zero,
-- no infinities.
-- @module entrefer.number
local fail = require "entrefer.fail"

local number = {}

local function check(value)
  if type(value) ~= "number" or value ~= value or value - value ~= 0 then
    fail("number", value, "a finite number")
  end
  return value + 0.0
end

-- string.format follows the C locale's decimal point.
local function tidy(text)
  text = text:gsub(",", ".")
  if text:match("^%-[0.]+$") then text = text:sub(2) end
  return text
end

--- Fixed decimals, rounded as the C library does (1.25 to one decimal is "1.2": ties to even).
function number.fixed(value, decimals)
  return tidy(("%." .. decimals .. "f"):format(check(value)))
end

--- Significant digits, plain notation between 1e-4 and 1e7, else with an exponent.
function number.significant(value, digits)
  value = check(value)
  if value == 0 then return digits > 1 and "0." .. ("0"):rep(digits - 1) or "0" end
  local scientific = ("%." .. digits - 1 .. "e"):format(value):gsub(",", ".")
  local mantissa, exponent = scientific:match("^(.-)e([+-]%d+)$")
  exponent = tonumber(exponent)
  if exponent < -4 or exponent >= 7 then return mantissa .. "e" .. ("%d"):format(exponent) end
  if exponent >= digits - 1 then
    -- Digits beyond the significant ones are rounded away too.
    return tidy(("%.0f"):format(tonumber(scientific)))
  end
  return tidy(("%." .. digits - 1 - exponent .. "f"):format(value))
end

--- The nearest number with so many significant digits, as a number.
function number.round(value, digits)
  return tonumber((("%." .. digits - 1 .. "e"):format(check(value)):gsub(",", ".")))
end

--- At most so many significant digits, without trailing zeros; integers (Lua's kind) stay whole.
function number.rounded(value, digits)
  if math.type(value) == "integer" then return number.exact(value) end
  return number.exact(number.round(value, digits))
end

--- The shortest text that reads back as the same number.
function number.exact(value)
  if math.type(value) == "integer" then return ("%d"):format(value) end
  value = check(value)
  if value == math.floor(value) and math.abs(value) < 1e15 then
    return tidy(("%.0f"):format(value))
  end
  for digits = 15, 17 do
    local text = ("%." .. digits .. "g"):format(value)
    text = text:gsub(",", ".")
    if tonumber(text) == value then return text end
  end
end

return number
