--- Tables of a part against current at several temperatures.
-- @module entrefer.design.tables
local tables = {}

local columns = {
  { name = "temperature", unit = "degC", digits = 0 },
  { name = "current", unit = "A", digits = 4 },
  { name = "inductance", unit = "uH", digits = 4, scale = 1e6 },
  { name = "incremental inductance", unit = "uH", digits = 4, scale = 1e6 },
  { name = "core flux density", unit = "mT", digits = 4, scale = 1e3 },
  { name = "gap flux density", unit = "mT", digits = 4, scale = 1e3 },
  { name = "sensor flux density", unit = "mT", digits = 4, scale = 1e3 },
  { name = "sensor voltage", unit = "V", digits = 4 },
  { name = "plain estimate of gap flux density", unit = "mT", digits = 4, scale = 1e3 },
}

--- Rows of one part, sensor and list of temperatures, from 0 A.
-- @tparam probe probe
-- @tparam table temperatures degC
-- @tparam table sweep `to` (A), `points`
-- @treturn table columns, for `entrefer.write`
-- @treturn table rows
-- @treturn table raw SI values: list of `{ temperature, sweep, voltage = {...} }`
function tables.against_current(probe, temperatures, sweep)
  local rows, raw = {}, {}
  local part, sensor = probe.part, probe.sensor
  for _, temperature in ipairs(temperatures) do
    local s = part:sweep { temperature = temperature,
      current = { from = 0, to = sweep.to, points = sweep.points } }
    local voltages, plain = {}, part:solve { current = sweep.to, temperature = temperature }.estimate
    for i, current in ipairs(s.current) do
      local at_sensor = s.gap_flux_density[i] * probe.relative_field
      voltages[i] = sensor:voltage(at_sensor)
      local values = { temperature, current, s.inductance[i], s.incremental_inductance[i],
        s.core_flux_density[i], s.gap_flux_density[i], at_sensor, voltages[i],
        plain.flux_density * current / sweep.to }
      for k, column in ipairs(columns) do values[k] = values[k] * (column.scale or 1) end
      rows[#rows + 1] = values
    end
    raw[#raw + 1] = { temperature = temperature, sweep = s, voltage = voltages }
  end
  return columns, rows, raw
end

return tables
