--- Picking a sensor for a part's gap, with the reason for every refusal.
-- @module entrefer.design.sensing
local sensing = {}

local function mm(length) return ("%.2f mm"):format(length * 1e3) end
local function mt(density) return ("%.0f mT"):format(density * 1e3) end

--- Clear height that a sensor needs in the gap, m: packages at their thickest, plus clearance
-- (adhesive, films, assembly).
function sensing.height(sensor, rules)
  return rules.stacked * sensor:room().max + rules.clearance
end

--- What speaks against a sensor.
-- @tparam sensor sensor
-- @tparam table facts `height` (m, clear height at the sensor), `nominal`, `trip` (T at the element),
--   `hot` (degC), `gaps` (opposed gaps of the part)
-- @tparam table rules `requirements.sensing`
-- @treturn table list of `{ limit, reason }`, empty when the sensor fits
function sensing.refusals(sensor, facts, rules)
  local list = {}
  local function refuse(limit, text, ...)
    list[#list + 1] = { limit = limit, reason = text:format(...) }
  end
  local needed = sensing.height(sensor, rules)
  if needed > facts.height then
    refuse("height", "needs %s of clear height, the gap has %s", mm(needed), mm(facts.height))
  end
  if facts.trip > rules.most_use * sensor.range then
    refuse("range", "%s at the trip current is %.0f %% of its %s range; at most %.0f %%",
      mt(facts.trip), 100 * facts.trip / sensor.range, mt(sensor.range), 100 * rules.most_use)
  end
  if facts.nominal < rules.least_use * sensor.range then
    refuse("signal", "%s at the nominal current is %.0f %% of its %s range; at least %.0f %%",
      mt(facts.nominal), 100 * facts.nominal / sensor.range, mt(sensor.range),
      100 * rules.least_use)
  end
  if rules.bandwidth and (sensor.bandwidth or 0) < rules.bandwidth then
    refuse("bandwidth", "bandwidth %.0f kHz; at least %.0f kHz", (sensor.bandwidth or 0) / 1e3,
      rules.bandwidth / 1e3)
  end
  local die = facts.hot + (sensor.self_heating or 0)
  if die > sensor.temperature_range[2] then
    refuse("temperature", "die at %.0f degC with its own heating; at most %.0f degC", die,
      sensor.temperature_range[2])
  end
  if sensor.elements == 2 and facts.gaps < 2 then
    refuse("arrangement", "its two elements need two opposed gaps; the part has one")
  end
  return list
end

local function better(a, b)
  if not b then return true end
  if a.use ~= b.use then return a.use > b.use end
  return a.order < b.order
end

--- Tries every candidate. Of those that fit, the one whose range is used best at the nominal current
-- is chosen; of equal ones the first in the list.
-- @treturn table|nil chosen `{ sensor, use (share of the range at the nominal current) }`
-- @treturn table list of `{ sensor, refusals }` in the order of the candidates
function sensing.pick(facts, rules)
  local chosen, tried = nil, {}
  for i, sensor in ipairs(rules.candidates) do
    local refusals = sensing.refusals(sensor, facts, rules)
    tried[i] = { sensor = sensor, refusals = refusals }
    local entry = { sensor = sensor, use = facts.nominal / sensor.range, order = i }
    if #refusals == 0 and better(entry, chosen) then chosen = entry end
  end
  return chosen, tried
end

return sensing
