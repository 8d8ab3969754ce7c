--- The concentrator flow: a gapped ring around a straight conductor, judged as asked, with the ways
-- out when the back of the ring saturates.
--
-- A slim ring leaks along its whole circumference: its back carries several times the flux density of
-- the gap, so mu0 N I / gap says nothing about its saturation.
-- @module entrefer.design.concentrator
local fail = require "entrefer.fail"
local linearity = require "entrefer.design.linearity"
local part_module = require "entrefer.part"
local probe_module = require "entrefer.probe"
local sensing = require "entrefer.design.sensing"
local shape = require "entrefer.shape"
local verdict = require "entrefer.design.verdict"

local concentrator = {}

local function rules_with(rules, stacked)
  local copy = {}
  for key, value in pairs(rules) do copy[key] = value end
  copy.stacked = stacked
  return copy
end

-- Largest clear height that any candidate needs when the spec doesn't give the gap.
local function height_for(rules)
  local least = math.huge
  for _, sensor in ipairs(rules.candidates) do
    least = math.min(least, sensing.height(sensor, rules))
  end
  return least
end

local function densities(req, part)
  local function at(current)
    local solved = part:solve { current = current, temperature = req.hot }
    return math.abs(solved.gaps[1].centre_flux_density), solved
  end
  local nominal = at(req.current.nominal)
  local trip, solved = at(req.current.trip)
  return nominal, trip, solved
end

local function assess(req, variant)
  local part = part_module.new { core = variant.core, material = req.material,
    gaps = { { length = variant.length, count = variant.gaps } },
    windings = { { turns = req.turns } } }
  local nominal, trip, solved = densities(req, part)
  local facts = { nominal = nominal, trip = trip, core_trip = math.abs(solved.core_flux_density),
    limb = solved.core_flux_density_limb, position = solved.limbs.ring.position, hot = req.hot,
    gaps = variant.gaps, height = variant.length }
  local chosen, tried = sensing.pick(facts, variant.rules)
  return { name = variant.name, part = part, facts = facts, chosen = chosen, tried = tried,
    at_trip = solved, length = variant.length, gaps = variant.gaps, core = variant.core,
    per_ampere = part:solve { current = req.current.nominal * 1e-3, temperature = req.hot }
      .gaps[1].centre_flux_density / (req.current.nominal * 1e-3),
    shortfall = linearity.shortfall(part, req.current.trip, req.hot),
    linear_to = linearity.limit(part, 0.02, req.hot, 4 * req.current.trip) }
end

-- Half as thick again radially and twice as tall: three times the section.
local function thicker(core)
  local g = core.geometry
  local radial = (g.ring_outer_diameter - g.ring_inner_diameter) / 2
  return shape.new { shape = "ring", name = "thicker section", dimensions = {
    d1 = g.ring_inner_diameter + 3 * radial, d2 = g.ring_inner_diameter, h = 2 * g.ring_height } }
end

local function variants(req, core)
  local rules = req.sensing
  local length = req.gap.length or height_for(rules)
  local one_each = rules_with(rules, 1)
  return {
    { name = "as asked", core = core, length = length, gaps = req.gap.count, rules = rules },
    { name = "two gaps, a sensor in each", core = core, length = length, gaps = 2,
      rules = one_each },
    { name = "one gap, section 1.5 x as thick and 2 x as tall", core = thicker(core),
      length = length, gaps = 1, rules = rules },
    { name = "half the gap, one sensor", core = core, length = length / 2, gaps = 1,
      rules = one_each },
  }
end

local function lines_for(req, item, rules)
  local function line(key, name, value, limit, unit, sense)
    return verdict.line(key, name, value, limit, unit, sense, "concentrator")
  end
  local lines = {
    line("flux_density", "flux density of the ring at the trip current, hot",
      item.facts.core_trip, req.flux_density_limit, "T", "at most"),
    line("nonlinearity", "shortfall of the reading at the trip current, hot",
      math.max(item.shortfall, 0), req.limits.nonlinearity, "1", "at most"),
  }
  if not item.chosen then
    lines[#lines + 1] = line("signal", "sensors that fit", 0, 1, "1", "at least")
    return lines
  end
  local sensor = item.chosen.sensor
  lines[#lines + 1] = line("height", "clear height for the sensors", item.facts.height,
    sensing.height(sensor, rules), "m", "at least")
  lines[#lines + 1] = line("range", "flux density at the sensor, trip current", item.facts.trip,
    rules.most_use * sensor.range, "T", "at most")
  return lines
end

--- Runs the flow.
-- @tparam table req from `requirements.read`, kind "concentrator", with one ring in `cores`
-- @treturn table `{ items = list of variants assessed, verdict (of the first), recommended }`
function concentrator.run(req)
  local core = req.cores[1]
  if not core or core.geometry.topology ~= "ring" then
    fail("cores", core and core.name, "one ring, for a concentrator")
  end
  local items, recommended = {}, nil
  for i, variant in ipairs(variants(req, core)) do
    local item = assess(req, variant)
    item.verdict = verdict.of(lines_for(req, item, variant.rules))
    items[i] = item
    if item.verdict.passed and not recommended then recommended = item end
  end
  local shown = recommended or items[1]
  local sensor = shown.chosen and shown.chosen.sensor or req.sensing.candidates[1]
  local placed = fail.try(probe_module.new, { part = shown.part, sensor = sensor })
  return { items = items, verdict = items[1].verdict, recommended = recommended, shown = shown,
    probe = placed }
end

return concentrator
