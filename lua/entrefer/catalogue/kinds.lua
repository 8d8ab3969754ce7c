--- What a catalogue knows of each kind: the figures that can be limited with their units, the choices,
-- and how a record is made from an object.
-- @module entrefer.catalogue.kinds
local material = require "entrefer.material"
local shape = require "entrefer.shape"

local kinds = {}

local function post_of(geometry)
  local pole = geometry.topology == "three_leg" and geometry.centre_pole or geometry.outer_pole
  return pole and math.min(pole.width, pole.depth)
end

kinds.core = {
  figures = { area = "m2", minimum_area = "m2", length = "m", volume = "m3", window = "m2",
    window_width = "m", window_height = "m", post = "m", height = "m" },
  settings = {}, order = "volume",
  choices = { shape = function()
    local list = shape.families()
    list[#list + 1] = "custom"
    return list
  end },
  describe = function(core)
    local g = core.geometry
    return { kind = "core", name = core.name, shape = core.shape, area = g.effective_area,
      minimum_area = g.minimum_area, length = g.effective_length, volume = g.effective_volume,
      window = g.window_area, window_width = g.window_width, window_height = g.window_height,
      post = post_of(g), height = g.envelope_height, source = core.source,
      confidence = core.confidence, note = core.note }
  end,
}

local function groups()
  local list, seen = {}, {}
  for _, name in ipairs(material.names()) do
    local group = material.new(name).group
    if group and not seen[group] then
      seen[group] = true
      list[#list + 1] = group
    end
  end
  return list
end

kinds.material = {
  figures = { permeability = "1", saturation = "T", coercive_field = "A/m", resistivity = "ohm m",
    curie_temperature = "degC" },
  settings = { temperature = "degC" }, order = "permeability", choices = { group = groups },
  describe = function(item, settings)
    local range = item.temperature_range
    -- Cards of one curve answer at its temperature alone.
    local at = math.min(math.max(settings.temperature or 25, range[1]), range[2])
    return { kind = "material", name = item.name, group = item.group, description = item.description,
      temperature = at, permeability = item:permeability(0, at), saturation = item:saturation(at),
      coercive_field = item:coercive_field_at(at), resistivity = item.resistivity,
      curie_temperature = item.curie_temperature, source = item.source, confidence = "low",
      note = item.note }
  end,
}

kinds.sensor = {
  figures = { range = "T", sensitivity = "V/T", room = "m", bandwidth = "Hz", delay = "s",
    noise = "T/rtHz", gain_drift = "1/K", offset_drift = "T", temperature = "degC" },
  settings = {}, order = "range",
  choices = { axis = function() return { "normal", "in-plane" } end },
  describe = function(item)
    return { kind = "sensor", name = item.name, axis = item.axis, range = item.range,
      sensitivity = item.sensitivity, room = item:room().max, bandwidth = item.bandwidth,
      delay = item.delay, noise = item.noise_density, gain_drift = item.gain_drift,
      offset_drift = item.offset_drift, temperature = item.temperature_range[2],
      elements = item.elements, package = item.package, source = item.source,
      confidence = "low", note = item.note }
  end,
}

kinds.wire = {
  figures = { diameter = "m", overall = "m", area = "m2", resistance = "ohm/m" },
  settings = {}, order = "diameter",
  choices = { grade = function() return { 1, 2 } end,
    series = function() return { "metric", "AWG" } end },
  describe = function(item)
    return { kind = "wire", name = item.name, series = item.spec.awg and "AWG" or "metric",
      grade = item.grade, diameter = item.conductor_diameter,
      overall = item.overall_diameter, area = item.copper_area,
      resistance = item:resistance_per_length(20), confidence = "medium",
      source = item.spec.overall and "user" or "IEC 60317-0-1, ASTM B258, from memory" }
  end,
}

return kinds
