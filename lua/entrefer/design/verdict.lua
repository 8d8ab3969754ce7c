--- The first page: pass or fail for each limit, its margin, the first limit to break, what to change.
-- @module entrefer.design.verdict
local verdict = {}

-- What an engineer would change when a limit is short, by the limit's key.
local change = {
  inductance = "more turns, or a shorter gap if the core has flux density to spare",
  flux_density = "more turns with a longer gap, a core with more area, or a lower trip current",
  height = "a thinner package, a longer gap with more turns, or a pocket in the pole",
  range = "a sensor with a larger range, or a longer gap with more turns",
  signal = "a sensor with a smaller range, or a shorter gap",
  bandwidth = "a faster sensor, or a sense winding for the high band",
  fill = "thinner wire, fewer turns, or a core with more window",
  resistance = "more copper area, fewer turns, or a core with a shorter turn",
  nonlinearity = "a longer gap with more turns, a thicker core, or a table in the firmware",
  turns = "a larger core, or a higher allowed flux density",
}

-- A concentrator has one turn and a gap set by its sensors: a shorter gap only saturates it sooner.
local change_of_concentrator = {
  flux_density = "two gaps with a sensor in each, a thicker section, or a material with a higher"
    .. " saturation; not a shorter gap",
  height = "a thinner package, or a longer gap",
  range = "a sensor with a larger range, or a longer gap",
  signal = "another sensor class, or more turns",
}
change_of_concentrator.nonlinearity = change_of_concentrator.flux_density

--- One line of the verdict.
-- @string key of the limit
-- @string name what is limited
-- @number value, limit in the unit
-- @string unit
-- @string sense "at least" or "at most"
-- @string[opt="inductor"] kind "inductor" or "concentrator": what can be changed
-- @treturn table `{ key, name, value, limit, unit, sense, passed, margin (share of the limit), change }`
function verdict.line(key, name, value, limit, unit, sense, kind)
  local margin = sense == "at least" and value / limit - 1 or 1 - value / limit
  local advice = kind == "concentrator" and change_of_concentrator or change
  return { key = key, name = name, value = value, limit = limit, unit = unit, sense = sense,
    passed = margin >= 0, margin = margin, change = advice[key] or change[key] }
end

--- Puts lines together.
-- @tparam table lines
-- @treturn table `{ passed, lines, first (the line with the least margin), failed (list) }`
function verdict.of(lines)
  local result = { passed = true, lines = lines, failed = {} }
  for _, line in ipairs(lines) do
    if not line.passed then
      result.passed = false
      result.failed[#result.failed + 1] = line
    end
    if not result.first or line.margin < result.first.margin then result.first = line end
  end
  return result
end

return verdict
