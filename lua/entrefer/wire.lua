--- Winding wire: enamelled round, AWG, litz, foil; copper area, overall size, resistance.
--
-- Copper: IEC 60028, 1/58 ohm mm2/m at 20 degC, 0.00393 per kelvin. Enamel: IEC 60317-0-1 (from
-- memory). AWG: ASTM B258, d = 0.127 mm * 92^((36 - n)/39).
-- @module entrefer.wire
local enamel = require "entrefer.data.wires"
local fail = require "entrefer.fail"
local number = require "entrefer.number"
local object = require "entrefer.object"
local quantity = require "entrefer.quantity"

local wire = {}

local resistivity_20, temperature_coefficient = 1e-6 / 58, 0.00393
-- Where the linear law is used (common practice, no source).
local copper_range = { min = -60, max = 220 }

local fields = { "round", "awg", "litz", "foil", "grade", "overall", "name" }
local methods = {}
local make, fields_of = object.class("wire", methods)

--- Resistivity of annealed copper (IEC 60028).
-- @tparam number|string temperature degC, from -60 to 220
-- @treturn number ohm m
-- @raise an error table outside that range
function wire.copper_resistivity(temperature)
  local degrees = quantity.read(temperature, "degC", "temperature of copper", copper_range)
  return resistivity_20 * (1 + temperature_coefficient * (degrees - 20))
end

local function read_awg(value)
  return quantity.read(value, "1", "wire awg", { integer = true, min = -3, max = 56 })
end

--- Conductor diameter of an AWG number (ASTM B258).
-- @tparam integer awg -3 to 56; 0, -1, -2, -3 stand for 1/0 to 4/0
-- @treturn number m
function wire.awg_diameter(awg)
  return 0.127e-3 * 92 ^ ((36 - read_awg(awg)) / 39)
end

-- Largest overall diameter: the increase over the conductor varies smoothly, so it is interpolated
-- between the table's sizes on a logarithmic scale.
local function enamelled_diameter(conductor, grade)
  local mm = conductor * 1e3
  local first, last = enamel[1][1], enamel[#enamel][1]
  if mm < first * (1 - 1e-9) or mm > last * (1 + 1e-9) then
    fail("wire conductor diameter", number.rounded(mm, 4) .. " mm",
      ("from %s mm to %s mm, the table of enamelled wire, or give overall"):format(
        number.rounded(first, 4), number.rounded(last, 4)))
  end
  for i = 2, #enamel do
    local low, high = enamel[i - 1], enamel[i]
    if mm <= high[1] * (1 + 1e-9) then
      local share = math.log(mm / low[1]) / math.log(high[1] / low[1])
      local a, b = low[1 + grade] - low[1], high[1 + grade] - high[1]
      return (mm + a * (b / a) ^ share) * 1e-3
    end
  end
end

local function read_grade(spec)
  local grade = spec.grade or 1
  if grade ~= 1 and grade ~= 2 then fail("wire grade", grade, "1 or 2") end
  return grade
end

local function round_wire(spec, diameter, label)
  local grade = read_grade(spec)
  local overall = spec.overall and quantity.read(spec.overall, "m", "wire overall diameter",
    { min = diameter }) or enamelled_diameter(diameter, grade)
  return { kind = "round", name = spec.name or ("%s, grade %d"):format(label, grade),
    conductor_diameter = diameter, overall_diameter = overall,
    copper_area = math.pi / 4 * diameter ^ 2, grade = grade, spec = spec }
end

-- Share of the bundle's circle that the strands fill, their enamel included (common practice, no
-- source; real bundles lie between about 0.5 and 0.7: give `overall` where it is known).
local litz_packing = 0.60

local function litz_wire(spec)
  local litz = spec.litz
  fail.fields(litz, { "strands", "strand", "grade", "serving" }, "litz")
  local strands = quantity.read(litz.strands, "1", "litz strands", { integer = true, min = 2 })
  local strand = type(litz.strand) == "table" and wire.of(litz.strand, "litz strand")
    or wire.new { round = litz.strand, grade = litz.grade or spec.grade or 1 }
  if strand.kind ~= "round" then fail("litz strand", strand.kind, "a round wire") end
  local serving = quantity.read(litz.serving or 0, "m", "litz serving", { min = 0 })
  local diameter = strand.overall_diameter * math.sqrt(strands / litz_packing) + 2 * serving
  local copper_area = strands * strand.copper_area
  return { kind = "litz", strands = strands, strand = strand, serving = serving,
    name = spec.name or ("litz %d x %s mm"):format(strands,
      number.rounded(strand.conductor_diameter * 1e3, 3)),
    -- A circle holds at least its own copper.
    overall_diameter = spec.overall and quantity.read(spec.overall, "m", "wire overall diameter",
      { min = math.sqrt(4 / math.pi * copper_area) }) or diameter,
    copper_area = copper_area, spec = spec }
end

local function foil(spec)
  fail.fields(spec.foil, { "thickness", "breadth", "insulation" }, "foil")
  local thickness = quantity.read(spec.foil.thickness, "m", "foil thickness", { positive = true })
  local breadth = quantity.read(spec.foil.breadth, "m", "foil breadth", { positive = true })
  local insulation = quantity.read(spec.foil.insulation or 0, "m", "foil insulation", { min = 0 })
  return { kind = "foil", thickness = thickness, breadth = breadth, insulation = insulation,
    name = spec.name or ("foil %s mm x %s mm"):format(number.rounded(thickness * 1e3, 3),
      number.rounded(breadth * 1e3, 3)),
    overall_area = (thickness + insulation) * breadth, copper_area = thickness * breadth,
    spec = spec }
end

--- A wire.
-- @tparam table spec one of `round` (m, conductor diameter) with `grade` (1 or 2, IEC 60317-0-1),
--   `awg` (number) with `grade`; `litz` = `{ strands, strand, grade, serving }` with strand a
--   conductor diameter (m) or a round wire and serving the thickness of the covering (m); `foil` =
--   `{ thickness, breadth, insulation }` (m, insulation per layer); optional `overall` (m, largest
--   overall diameter; round, AWG, litz) and `name`
-- @treturn wire with `kind`, `copper_area` (m2), `overall_diameter` (m; foil: `overall_area`, m2);
--   round and AWG: `conductor_diameter`; litz: `strands`, `strand`; foil: `thickness`, `breadth`
-- @raise an error table naming the field
function wire.new(spec)
  if type(spec) ~= "table" then
    fail("wire", spec, "a table with round, awg, litz or foil")
  end
  fail.fields(spec, fields, "wire")
  local given
  -- A copy: what the caller does to its table later must not show in `with`.
  local kept = {}
  for key, value in pairs(spec) do kept[key] = value end
  spec = kept
  for _, kind in ipairs { "round", "awg", "litz", "foil" } do
    if spec[kind] ~= nil then
      if given then fail("wire", kind, "one of round, awg, litz or foil") end
      given = kind
    end
  end
  if given == "round" then
    local diameter = quantity.read(spec.round, "m", "wire conductor diameter", { positive = true })
    return make(round_wire(spec, diameter, ("round %s mm"):format(
      number.rounded(diameter * 1e3, 4))))
  elseif given == "awg" then
    return make(round_wire(spec, wire.awg_diameter(spec.awg),
      ("AWG %d"):format(read_awg(spec.awg))))
  elseif given == "litz" then
    return make(litz_wire(spec))
  elseif given == "foil" then
    return make(foil(spec))
  end
  fail.text("wire", "wire names no kind; allowed: round, awg, litz or foil")
end

--- The wire itself, or a new one from a table.
-- @tparam wire|table value
-- @string[opt="wire"] field named in errors
-- @treturn wire
function wire.of(value, field)
  if type(value) == "table" and fields_of(value) then return value end
  if type(value) ~= "table" then fail(field or "wire", value, "a wire") end
  return wire.new(value)
end

--- DC resistance per length. Litz: of the strands laid straight; the lay makes it some per cent more.
-- @tparam[opt=20] number|string temperature degC, from -60 to 220
-- @treturn number ohm/m
-- @raise an error table outside that range
function methods:resistance_per_length(temperature)
  return wire.copper_resistivity(temperature or 20) / fields_of(self).copper_area
end

--- A changed copy.
-- @tparam table changes fields as in `new`
-- @treturn wire
function methods:with(changes)
  local spec = {}
  for key, value in pairs(fields_of(self).spec) do spec[key] = value end
  for key, value in pairs(changes) do spec[key] = value end
  return wire.new(spec)
end

return wire
