-- Turns against gap: which pairs give the inductance, keep the core out of saturation, take the sensor
-- and stay within its range.

local function judge(ef, input, sensor, turns, length)
  local part = ef.part { core = input.core, material = input.material,
    gaps = { { length = length } }, windings = { { turns = turns } } }
  local s = part:solve { current = input.current, temperature = input.temperature }
  local field = s.gaps[1].centre_flux_density
  local lost = {}
  if s.inductance < input.inductance then lost[#lost + 1] = "L" end
  if s.core_flux_density > input.flux_density then lost[#lost + 1] = "B" end
  if sensor:room().max + input.clearance > length then lost[#lost + 1] = "h" end
  if field > 0.8 * sensor.range then lost[#lost + 1] = "R" end
  return lost, s, field
end

local function steps(from, to, count)
  local list = {}
  for i = 1, count do list[i] = from + (to - from) * (i - 1) / (count - 1) end
  return list
end

return {
  entrefer = 1,
  title = "Turns against gap",
  purpose = "Maps turns and gap with the limit lines: inductance, saturation, sensor height, range.",
  version = "1",
  inputs = {
    { name = "core", default = "ETD 44/22/15", help = "a size of the catalogue" },
    { name = "material", default = "PW3b", help = "a material card" },
    { name = "sensor", default = "linear Hall, 300 mT", help = "a sensor class" },
    { name = "inductance", unit = "H", default = "40 uH", min = "1 nH", help = "least, at the current" },
    { name = "current", unit = "A", default = "20 A", min = "1 mA", help = "largest that must hold" },
    { name = "temperature", unit = "degC", default = 100, help = "of the core" },
    { name = "flux_density", unit = "T", default = "0.32 T", min = "1 mT", help = "most in the core" },
    { name = "clearance", unit = "m", default = "0.4 mm", min = 0, help = "adhesive, films, assembly" },
    { name = "gap_from", unit = "m", default = "0.5 mm", min = "1 um" },
    { name = "gap_to", unit = "m", default = "4 mm", min = "1 um" },
    { name = "turns_from", kind = "integer", default = 8, min = 1, max = 500 },
    { name = "turns_to", kind = "integer", default = 22, min = 1, max = 500 },
  },
  results = { { name = "turns", unit = "1", help = "fewest that keep all limits; 0 for none" },
    { name = "gap", unit = "m" }, { name = "feasible", unit = "1", help = "pairs that keep all limits" } },
  run = function(ef, input, page)
    for _, name in ipairs { "gap", "turns" } do
      local from, to = input[name .. "_from"], input[name .. "_to"]
      if from >= to then
        error(("input %s_from is %g; allowed: below %s_to, %g"):format(name, from, name, to), 0)
      end
    end
    local sensor = ef.sensor(input.sensor)
    local gaps = steps(input.gap_from, input.gap_to, 8)
    local columns, rows, points = { { name = "turns", digits = 0 } }, {}, {}
    for k, length in ipairs(gaps) do columns[k + 1] = { name = ("%.2f mm"):format(length * 1e3) } end
    local best, feasible = nil, 0
    for turns = input.turns_from, input.turns_to do
      local row = { turns }
      for k, length in ipairs(gaps) do
        local lost, s, field = judge(ef, input, sensor, turns, length)
        row[k + 1] = #lost == 0 and "ok" or table.concat(lost, " ")
        points[#points + 1] = { turns, length * 1e3, s.inductance * 1e6, s.core_flux_density * 1e3,
          field * 1e3, #lost == 0 and "ok" or table.concat(lost, " ") }
        if #lost == 0 then
          feasible = feasible + 1
          best = best or { turns = turns, gap = length }
        end
      end
      rows[#rows + 1] = row
    end
    page:heading("Map")
    page:prose("ok: all limits kept. L: too little inductance; B: the core saturates; h: the sensor does"
      .. " not fit the gap; R: beyond 80 % of the sensor's range.")
    page:table("map", { columns = columns, rows = rows })
    page:prose(best and ("Fewest turns that keep all limits: %d with a gap of %.2f mm. Copper resistance"
      .. " grows with the square of the turns at a given window."):format(best.turns, best.gap * 1e3)
      or "No pair on this map keeps all limits: another core, a thinner sensor or a pocket.")
    page:heading("Points")
    page:table("points", { columns = { { name = "turns", digits = 0 },
      { name = "gap", unit = "mm", digits = 3 }, { name = "inductance", unit = "uH", digits = 4 },
      { name = "core flux density", unit = "mT", digits = 4 },
      { name = "field in the gap", unit = "mT", digits = 4 }, { name = "limits broken" } },
      rows = points })
    return { turns = best and best.turns or 0, gap = best and best.gap or 0, feasible = feasible }
  end,
}
