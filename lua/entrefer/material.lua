--- Magnetic materials: B = mu0 H + J(H), with J from measured curves or a closed law, at any
-- temperature between the given ones.
-- @module entrefer.material
local core = require "entrefer.core"
local cards = require "entrefer.data.materials"
local curve_file = require "entrefer.curve_file"
local fail = require "entrefer.fail"
local object = require "entrefer.object"
local quantity = require "entrefer.quantity"

local material = {}

local card_fields = { "name", "kind", "group", "description", "curves", "points", "temperature",
  "initial_permeability", "saturation", "coercive_field", "remanence", "resistivity", "density",
  "curie_temperature", "uncertainty", "note", "source", "file" }
local curve_fields = { "temperature", "initial_permeability", "saturation", "coercive_field",
  "remanence", "h", "b" }
local kinds = { "linear", "froelich", "langevin", "curve" }

local methods = {}
local make, fields_of = object.class("material", methods)

local function read_list(values, unit, field)
  if type(values) ~= "table" then fail(field, values, "a list of numbers") end
  local list = {}
  for i, value in ipairs(values) do
    list[i] = quantity.read(value, unit, ("%s, point %d"):format(field, i))
  end
  return list
end

local function optional(value, unit, field, options)
  if value == nil then return nil end
  return quantity.read(value, unit, field, options)
end

local function read_curve(curve, kind, label)
  fail.fields(curve, curve_fields, label)
  local read = {
    temperature = quantity.read(curve.temperature or 25, "degC", label .. " temperature"),
    initial_permeability = optional(curve.initial_permeability, "1",
      label .. " initial permeability", { min = 1 }),
    saturation = optional(curve.saturation, "T", label .. " saturation", { positive = true }),
    coercive_field = optional(curve.coercive_field, "A/m", label .. " coercive field", { min = 0 }),
    remanence = optional(curve.remanence, "T", label .. " remanence", { min = 0 }),
  }
  if kind == "curve" then
    read.h = read_list(curve.h, "A/m", label .. " field strength")
    read.b = read_list(curve.b, "T", label .. " flux density")
  elseif not read.initial_permeability or kind ~= "linear" and not read.saturation then
    fail.text(label, ("%s needs initial_permeability%s"):format(label,
      kind == "linear" and "" or " and saturation"))
  end
  return read
end

-- A card may give one curve's fields directly instead of a list of curves.
local function curve_list(spec)
  if spec.file then
    return curve_file.read(spec.file, optional(spec.temperature, "degC", "temperature")), "curve"
  end
  local kind = spec.kind or (spec.points and "curve") or (spec.curves and "curve")
    or (spec.saturation and "froelich") or "linear"
  if spec.curves then return spec.curves, kind end
  local points = spec.points or {}
  return { { temperature = spec.temperature, initial_permeability = spec.initial_permeability,
    saturation = spec.saturation, coercive_field = spec.coercive_field,
    remanence = spec.remanence, h = points.h, b = points.b } }, kind
end

local function build(spec)
  fail.fields(spec, card_fields, "material")
  local list, kind = curve_list(spec)
  local known = {}
  for _, name in ipairs(kinds) do known[name] = true end
  if not known[kind] then fail.unknown("material kind", tostring(kind), kinds) end
  local curves = {}
  for i, curve in ipairs(list) do
    curves[i] = read_curve(curve, kind, #list > 1 and "material curve " .. i or "material")
    if spec.file then
      curves[i].coercive_field = optional(spec.coercive_field, "A/m", "material coercive field")
      curves[i].remanence = optional(spec.remanence, "T", "material remanence")
    end
  end
  return make {
    name = spec.name or spec.file and spec.file:match("[^/]*$") or "unnamed", kind = kind,
    group = spec.group, description = spec.description, curves = curves,
    resistivity = optional(spec.resistivity, "ohm m", "material resistivity", { positive = true }),
    density = optional(spec.density, "kg/m3", "material density", { positive = true }),
    curie_temperature = optional(spec.curie_temperature, "degC", "material Curie temperature"),
    uncertainty = spec.uncertainty, note = spec.note,
    source = spec.source or spec.file and "file " .. spec.file:match("[^/]*$") or "user",
    temperature_range = { curves[1] and curves[1].temperature,
      curves[#curves] and curves[#curves].temperature },
    solver = core.material { kind = kind, curves = curves }, laws = {}, spec = object.snapshot(spec),
  }
end

--- A material.
-- @tparam string|table spec the name of a card ("PW3b"), a path to a CSV file of digitised points
--   (ends in ".csv", see `entrefer.curve_file`), or a table: `name`; `kind` = "curve", "froelich",
--   "langevin" or "linear"; `curves` = list of `{ temperature (degC), initial_permeability, saturation
--   (T), coercive_field (A/m), remanence (T), h (list, A/m), b (list, T) }`, or the fields of one
--   curve directly (`points` = `{ h, b }`); or `file` with the fields that a file doesn't hold;
--   `resistivity` (ohm m), `density` (kg/m3), `curie_temperature` (degC), `uncertainty`, `note`,
--   `source`
-- @treturn material
-- @raise an error table naming the field
function material.new(spec)
  if type(spec) == "table" then return build(spec) end
  if type(spec) ~= "string" then fail("material", spec, "a name, a CSV file or a table") end
  if spec:match("%.[cC][sS][vV]$") then return build { file = spec } end
  return build(object.changed(object.named(cards, spec, "material"),
    { source = cards.representative }))
end

--- The material itself, or a new one from what `material.new` takes.
function material.of(value, field)
  if value == nil then fail.text(field or "material", (field or "material") .. " is missing") end
  if type(value) == "table" and fields_of(value) then return value end
  return material.new(value)
end

--- Names of the cards, in the order of the data.
-- @treturn table list
function material.names()
  local names = {}
  for i, card in ipairs(cards) do names[i] = card.name end
  return names
end

--- Fits a closed law to measured points by least squares.
-- @string kind "froelich" or "langevin"
-- @tparam table points `{ h = list (A/m), b = list (T) }`, at least 3 points above H = 0
-- @treturn material
-- @treturn number rms error, T
function material.fit(kind, points)
  local h = read_list(points.h, "A/m", "field strength")
  local b = read_list(points.b, "T", "flux density")
  local permeability, saturation, rms = core.fit_law(kind, h, b)
  return build { name = "fitted " .. kind, kind = kind, initial_permeability = permeability,
    saturation = saturation, source = "least-squares fit" }, rms
end

local most_laws = 32

--- The law at a temperature (a solver object; remembered).
-- @number temperature degC, inside `temperature_range` when the material has several curves
function methods:law(temperature)
  local fields = fields_of(self)
  local law = fields.laws[temperature]
  if law then return law end
  law = fields.solver:law(temperature)
  local count = 0
  for _ in pairs(fields.laws) do count = count + 1 end
  if count >= most_laws then fields.laws = {} end
  fields.laws[temperature] = law
  return law
end

-- A figure of the curves at a temperature, linear between them, held outside; nil when not given.
local function between_curves(curves, name, temperature)
  local first, last = curves[1], curves[#curves]
  if temperature <= first.temperature then return first[name] end
  if temperature >= last.temperature then return last[name] end
  for i = 2, #curves do
    local a, b = curves[i - 1], curves[i]
    if temperature <= b.temperature and a[name] and b[name] then
      local share = (temperature - a.temperature) / (b.temperature - a.temperature)
      return a[name] + share * (b[name] - a[name])
    end
  end
end

--- Coercive field at a temperature (degC), A/m; nil when not given.
function methods:coercive_field_at(temperature)
  return between_curves(fields_of(self).curves, "coercive_field", temperature)
end

--- Remanent flux density of a closed core at a temperature (degC), T; nil when not given.
function methods:remanence_at(temperature)
  return between_curves(fields_of(self).curves, "remanence", temperature)
end

--- Flux density (T) at a field strength (A/m) and temperature (degC).
function methods:flux_density(field_strength, temperature)
  return (self:law(temperature or 25):at(field_strength))
end

--- Field strength (A/m) at a flux density (T) and temperature (degC).
function methods:field_strength(flux_density, temperature)
  return self:law(temperature or 25):field(flux_density)
end

--- Relative differential permeability dB/dH / mu0; never below 1.
function methods:differential_permeability(field_strength, temperature)
  local _, slope = self:law(temperature or 25):at(field_strength)
  return slope / core.mu0
end

--- Relative permeability B / (mu0 H); at H = 0 the initial one.
function methods:permeability(field_strength, temperature)
  local law = self:law(temperature or 25)
  if field_strength == 0 then return law:permeability() end
  return law:at(field_strength) / (core.mu0 * field_strength)
end

--- Saturation polarisation, T.
function methods:saturation(temperature)
  return self:law(temperature or 25):saturation()
end

--- A copy whose polarisation follows J(factor H): the initial permeability is multiplied (less the
-- vacuum's part), the saturation stays. For tolerances of the permeability.
-- @number factor above 0
-- @treturn material
function methods:stretched(factor)
  factor = quantity.read(factor, "1", "factor", { positive = true })
  local fields, curves = fields_of(self), {}
  for i, curve in ipairs(fields.curves) do
    local copy = object.changed(curve, {})
    if curve.initial_permeability then
      copy.initial_permeability = 1 + factor * (curve.initial_permeability - 1)
    end
    if curve.h then
      copy.h, copy.b = {}, {}
      for k, h in ipairs(curve.h) do
        copy.h[k] = h / factor
        copy.b[k] = curve.b[k] + core.mu0 * (h / factor - h)
      end
    end
    curves[i] = copy
  end
  return build { name = ("%s, permeability x %g"):format(fields.name, factor), kind = fields.kind,
    curves = curves, density = fields.density, resistivity = fields.resistivity,
    curie_temperature = fields.curie_temperature, source = fields.source, note = fields.note }
end

--- A changed copy.
function methods:with(changes)
  return build(object.changed(fields_of(self).spec, changes))
end

return material
