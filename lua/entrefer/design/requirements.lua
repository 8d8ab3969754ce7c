--- The spec of a part, checked and in SI units: what the converter asks for, what may be used.
-- @module entrefer.design.requirements
local fail = require "entrefer.fail"
local material = require "entrefer.material"
local quantity = require "entrefer.quantity"
local shape = require "entrefer.shape"
local sensor = require "entrefer.sensor"

local requirements = {}

local known = {
  top = { "title", "purpose", "note", "kind", "current", "inductance", "converter", "temperatures",
    "material", "cores", "limits", "sensing", "gap", "wire", "sweep", "turns" },
  current = { "nominal", "peak", "trip" },
  converter = { "high", "low", "frequency", "ripple" },
  limits = { "flux_density", "saturation_share", "current_density", "resistance", "nonlinearity",
    "volume" },
  sensing = { "candidates", "clearance", "bandwidth", "range_use", "pocket", "stacked" },
  pocket = { "diameter", "depth_most" },
  gap = { "step", "tolerance", "count", "kind", "length" },
  wire = { "strand", "grade" },
  sweep = { "to", "points" },
}

local function section(spec, name)
  local value = spec[name] or {}
  if type(value) ~= "table" then fail(name, value, "a table") end
  fail.fields(value, known[name], name)
  return value
end

local function list_of(value, default, field, allowed)
  if value == nil then return default end
  if type(value) ~= "table" then fail(field, value, allowed) end
  return value
end

local function text_of(value, field)
  if value ~= nil and type(value) ~= "string" then fail(field, value, "text") end
  return value
end

local function positive(value, unit, field)
  if value == nil then fail.text(field, field .. " is missing") end
  return quantity.read(value, unit, field, { positive = true })
end

local function optional(value, unit, field, default)
  if value == nil then return default end
  return quantity.read(value, unit, field, { positive = true })
end

local function read_currents(spec)
  local given = section(spec, "current")
  local nominal = positive(given.nominal, "A", "current nominal")
  local peak = optional(given.peak, "A", "current peak", nominal)
  local trip = optional(given.trip, "A", "current trip", peak)
  if peak < nominal then fail("current peak", peak, ("at least the nominal %g A"):format(nominal)) end
  if trip < peak then fail("current trip", trip, ("at least the peak %g A"):format(peak)) end
  return { nominal = nominal, peak = peak, trip = trip }
end

-- The inductance, and which of the two is meant: what a spec gives is flux linkage / current; what holds
-- the ripple (buck-type, worst at the given pair of voltages) is the incremental inductance.
local function inductance_for(spec)
  if spec.inductance ~= nil and spec.converter ~= nil then
    fail.text("inductance", "inductance and converter are both given; allowed: one of them")
  end
  if spec.inductance ~= nil then return positive(spec.inductance, "H", "inductance"), "inductance" end
  if spec.converter == nil then
    fail.text("inductance", "inductance is missing; allowed: inductance, or converter with high, low,"
      .. " frequency and ripple")
  end
  local c = section(spec, "converter")
  local high, low = positive(c.high, "V", "converter high"), positive(c.low, "V", "converter low")
  local frequency = positive(c.frequency, "Hz", "converter frequency")
  local ripple = positive(c.ripple, "A", "converter ripple")
  if low >= high then fail("converter low", low, ("below converter high, %g V"):format(high)) end
  return (high - low) * low / high / (frequency * ripple), "incremental_inductance"
end

local function read_temperatures(spec)
  local list = {}
  local given = list_of(spec.temperatures, { 25, 100 }, "temperatures", "a list such as { 25, 100 }")
  for i, value in ipairs(given) do
    list[i] = quantity.read(value, "degC", "temperature " .. i)
  end
  if #list == 0 then fail.text("temperatures", "temperatures is empty; allowed: at least one") end
  table.sort(list)
  return list
end

local function read_limits(spec)
  local given = section(spec, "limits")
  local share = quantity.read(given.saturation_share or 0.8, "1", "limits saturation_share",
    { positive = true, max = 1 })
  return {
    flux_density = given.flux_density and positive(given.flux_density, "T", "limits flux_density"),
    saturation_share = share,
    current_density = optional(given.current_density, "A/m2", "limits current_density", 6e6),
    resistance = optional(given.resistance, "ohm", "limits resistance"),
    nonlinearity = quantity.read(given.nonlinearity or 0.05, "1", "limits nonlinearity",
      { positive = true, max = 1 }),
    volume = optional(given.volume, "m3", "limits volume"),
  }
end

local function read_sensing(spec)
  local given = section(spec, "sensing")
  local list = {}
  local names = list_of(given.candidates, sensor.names(), "sensing candidates",
    "a list of sensor classes or sensor tables")
  for i, entry in ipairs(names) do
    list[i] = sensor.of(entry, "sensing candidate " .. i)
  end
  if #list == 0 then fail.text("sensing", "sensing candidates is empty; allowed: at least one") end
  local use = list_of(given.range_use, { 0.3, 0.8 }, "sensing range_use", "a pair such as { 0.3, 0.8 }")
  local least = quantity.read(use[1], "1", "sensing range_use, least", { min = 0, max = 1 })
  local most = quantity.read(use[2], "1", "sensing range_use, most", { positive = true, max = 1 })
  if least >= most then
    fail("sensing range_use, least", least, ("below the most, %g"):format(most))
  end
  local pocket = given.pocket and section(given, "pocket")
  return {
    candidates = list,
    clearance = quantity.read(given.clearance or 0.4e-3, "m", "sensing clearance", { min = 0 }),
    bandwidth = optional(given.bandwidth, "Hz", "sensing bandwidth"),
    least_use = least, most_use = most,
    stacked = quantity.read(given.stacked or 1, "1", "sensing stacked",
      { integer = true, min = 1, max = 4 }),
    pocket = pocket and {
      diameter = positive(pocket.diameter, "m", "pocket diameter"),
      depth_most = positive(pocket.depth_most, "m", "pocket depth_most"),
    },
  }
end

local function read_cores(spec)
  local cores = {}
  if type(spec.cores) ~= "table" or #spec.cores == 0 then
    fail("cores", spec.cores, "a list of sizes, families or core tables")
  end
  for _, entry in ipairs(spec.cores) do
    if type(entry) == "string" and entry:match("^family ") then
      for _, name in ipairs(shape.names(entry:match("^family%s+(.-)%s*$"))) do
        cores[#cores + 1] = shape.new(name)
      end
    else
      cores[#cores + 1] = shape.of(entry, "cores")
    end
  end
  table.sort(cores, function(a, b)
    local va, vb = a.geometry.effective_volume, b.geometry.effective_volume
    if va ~= vb then return va < vb end
    return tostring(a.name) < tostring(b.name)
  end)
  return cores
end

local function read_material(spec, folder)
  if type(spec.material) == "string" and spec.material:match("%.[cC][sS][vV]$") then
    return material.new { file = folder .. spec.material }
  end
  if type(spec.material) == "table" and spec.material.file then
    local copy = {}
    for key, value in pairs(spec.material) do copy[key] = value end
    copy.file = folder .. copy.file
    return material.new(copy)
  end
  return material.of(spec.material, "material")
end

--- Checks a spec.
-- @tparam table spec see docs/spec.md
-- @string[opt=""] folder that file names in the spec are relative to
-- @treturn table requirements in SI units
-- @raise an error table naming the field
function requirements.read(spec, folder)
  fail.fields(spec, known.top, "spec")
  local kind = spec.kind or "inductor"
  if kind ~= "inductor" and kind ~= "concentrator" then
    fail.unknown("spec kind", tostring(kind), { "inductor", "concentrator" })
  end
  local gap, wire = section(spec, "gap"), section(spec, "wire")
  local read = {
    title = text_of(spec.title, "title") or "untitled", purpose = text_of(spec.purpose, "purpose"),
    note = text_of(spec.note, "note"), kind = kind,
    current = read_currents(spec), temperatures = read_temperatures(spec),
    material = read_material(spec, folder or ""), cores = read_cores(spec),
    limits = read_limits(spec), sensing = read_sensing(spec),
    gap = {
      step = optional(gap.step, "m", "gap step", 0.05e-3),
      tolerance = optional(gap.tolerance, "m", "gap tolerance", 0.05e-3),
      count = quantity.read(gap.count or 1, "1", "gap count", { integer = true, min = 1, max = 8 }),
      kind = gap.kind, length = optional(gap.length, "m", "gap length"),
    },
    wire = {
      strand = optional(wire.strand, "m", "wire strand", 0.1e-3), grade = wire.grade or 1,
    },
    sweep = section(spec, "sweep"),
  }
  read.hot = read.temperatures[#read.temperatures]
  if kind == "inductor" then
    read.inductance, read.inductance_kind = inductance_for(spec)
  end
  read.turns = quantity.read(spec.turns or 1, "1", "turns", { positive = true })
  read.flux_density_limit = read.limits.flux_density
    or read.limits.saturation_share * read.material:saturation(read.hot)
  return read
end

return requirements
