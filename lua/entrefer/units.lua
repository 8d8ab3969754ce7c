--- Units of measurement: the text of a unit to its factor and dimension.
--
-- A unit is a product of terms with one "/" at most: `A/m`, `ohm m`, `mV/mT`, `g/cm3`, `nT/rtHz`,
-- `kg m^2/s3`. A term is a unit with an optional SI prefix and an optional whole power. Below the
-- "/" a degree Celsius is a kelvin: `30 ppm/degC`.
-- @module entrefer.units
local units = {}

-- Exponents of m, kg, s, A, K; a noise density has a half power of the second.
local function dim(m, kg, s, a, k) return { m or 0, kg or 0, s or 0, a or 0, k or 0 } end

local base = {
  m = { 1, dim(1) }, g = { 1e-3, dim(0, 1) }, s = { 1, dim(0, 0, 1) }, A = { 1, dim(0, 0, 0, 1) },
  K = { 1, dim(0, 0, 0, 0, 1) }, Hz = { 1, dim(0, 0, -1) }, N = { 1, dim(1, 1, -2) },
  Pa = { 1, dim(-1, 1, -2) }, J = { 1, dim(2, 1, -2) }, W = { 1, dim(2, 1, -3) },
  V = { 1, dim(2, 1, -3, -1) }, ohm = { 1, dim(2, 1, -3, -2) }, ["\u{3A9}"] = { 1, dim(2, 1, -3, -2) },
  F = { 1, dim(-2, -1, 4, 2) }, H = { 1, dim(2, 1, -2, -2) }, Wb = { 1, dim(2, 1, -2, -1) },
  T = { 1, dim(0, 1, -2, -1) }, S = { 1, dim(-2, -1, 3, 2) }, rad = { 1, dim() },
  rtHz = { 1, dim(0, 0, -0.5) }, ["\u{221A}Hz"] = { 1, dim(0, 0, -0.5) },
  -- Gauss and oersted, for charts in the older system (ISO 80000-6, from memory).
  G = { 1e-4, dim(0, 1, -2, -1) }, Oe = { 1000 / (4 * math.pi), dim(-1, 0, 0, 1) },
}

-- These take no prefix.
local fixed = {
  ["1"] = { 1, dim() }, ["%"] = { 1e-2, dim() }, ppm = { 1e-6, dim() },
  turns = { 1, dim() }, turn = { 1, dim() },
  deg = { math.pi / 180, dim() }, ["\u{B0}"] = { math.pi / 180, dim() },
  min = { 60, dim(0, 0, 1) }, h = { 3600, dim(0, 0, 1) },
  ["in"] = { 25.4e-3, dim(1) }, mil = { 25.4e-6, dim(1) },
}

local prefixes = { T = 1e12, G = 1e9, M = 1e6, k = 1e3, d = 1e-1, c = 1e-2, m = 1e-3, u = 1e-6,
  ["\u{B5}"] = 1e-6, ["\u{3BC}"] = 1e-6, n = 1e-9, p = 1e-12, f = 1e-15 }

local kelvin = { degC = true, ["\u{B0}C"] = true }

local function find(symbol)
  local unit = fixed[symbol] or base[symbol]
  if unit then return unit[1], unit[2] end
  for prefix, factor in pairs(prefixes) do
    if symbol:sub(1, #prefix) == prefix then
      local known = base[symbol:sub(#prefix + 1)]
      if known then return factor * known[1], known[2] end
    end
  end
end

local function add_term(term, sign, total)
  local symbol, power = term:match("^(.-)%^?(%-?%d+)$")
  if not symbol or symbol == "" then symbol, power = term, "1" end
  if sign < 0 and kelvin[symbol] then symbol = "K" end
  local factor, dimension = find(symbol)
  if not factor then return false end
  local exponent = sign * tonumber(power)
  total.factor = total.factor * factor ^ exponent
  for i = 1, 5 do total[i] = total[i] + exponent * dimension[i] end
  return true
end

local cache = {}

--- Parses a unit.
-- @string text
-- @treturn table|nil `{ factor (to SI), exponents of m, kg, s, A, K }`; nil when it is no unit
function units.parse(text)
  local known = cache[text]
  if known then return known end
  local total = { 0, 0, 0, 0, 0, factor = 1 }
  local top, bottom = text:match("^([^/]+)/([^/]+)$")
  for term in (top or text):gmatch("%S+") do
    if not add_term(term, 1, total) then return nil end
  end
  for term in (bottom or ""):gmatch("%S+") do
    if not add_term(term, -1, total) then return nil end
  end
  if not (top or text):match("%S") or not top and text:find("/", 1, true) then return nil end
  cache[text] = total
  return total
end

--- Whether two parsed units measure the same thing.
function units.alike(a, b)
  for i = 1, 5 do
    if a[i] ~= b[i] then return false end
  end
  return true
end

return units
