-- Tolerance corners: gap, permeability and temperature at their ends, in all combinations.

local function corner(ef, input, gap, permeability, temperature)
  local part = ef.part { core = input.core, gaps = { { length = gap } },
    material = ef.material(input.material):stretched(permeability),
    windings = { { turns = input.turns } } }
  local s = part:solve { current = input.current, temperature = temperature }
  return s.inductance, s.gaps[1].centre_flux_density / input.current, s.core_flux_density
end

local function spread(rows, column)
  local low, high = math.huge, -math.huge
  for _, row in ipairs(rows) do
    low, high = math.min(low, row[column]), math.max(high, row[column])
  end
  return low, high
end

return {
  entrefer = 1,
  title = "Tolerance corners",
  purpose = "Works out inductance, reading and saturation at all corners of the tolerances.",
  version = "1",
  inputs = {
    { name = "core", default = "ETD 39/20/13" }, { name = "material", default = "PW3b" },
    { name = "turns", unit = "1", default = 16, min = 1 },
    { name = "gap", unit = "m", default = "1.5 mm" },
    { name = "gap_tolerance", unit = "m", default = "0.05 mm", min = 0, help = "either way" },
    { name = "permeability_tolerance", unit = "1", default = 0.25, min = 0, max = 0.9,
      help = "share, either way" },
    { name = "cold", unit = "degC", default = -20 }, { name = "hot", unit = "degC", default = 100 },
    { name = "current", unit = "A", default = "12 A", min = "1 mA" },
  },
  results = { { name = "inductance_least", unit = "H" }, { name = "inductance_most", unit = "H" },
    { name = "reading_spread", unit = "1", help = "(most - least) / nominal" },
    { name = "core_flux_density_most", unit = "T" } },
  run = function(ef, input, page)
    if input.cold > input.hot then
      error(("input cold is %g; allowed: at most hot, %g degC"):format(input.cold, input.hot), 0)
    end
    if input.gap_tolerance >= input.gap then
      error(("input gap_tolerance is %g; allowed: below the gap, %g m"):format(input.gap_tolerance,
        input.gap), 0)
    end
    local rows = {}
    for _, gap in ipairs { input.gap - input.gap_tolerance, input.gap + input.gap_tolerance } do
      for _, mu in ipairs { 1 - input.permeability_tolerance, 1 + input.permeability_tolerance } do
        for _, temperature in ipairs { input.cold, input.hot } do
          local inductance, reading, core = corner(ef, input, gap, mu, temperature)
          rows[#rows + 1] = { gap * 1e3, mu, temperature, inductance * 1e6, reading * 1e3, core * 1e3 }
        end
      end
    end
    local middle = { corner(ef, input, input.gap, 1, (input.cold + input.hot) / 2) }
    page:heading("Corners")
    page:table("corners", { columns = { { name = "gap", unit = "mm", digits = 4 },
      { name = "permeability factor", digits = 3 }, { name = "temperature", unit = "degC", digits = 0 },
      { name = "inductance", unit = "uH", digits = 4 },
      { name = "field in the gap", unit = "mT/A", digits = 4 },
      { name = "core flux density", unit = "mT", digits = 4 } }, rows = rows })
    local least, most = spread(rows, 4)
    local low, high = spread(rows, 5)
    local _, core = spread(rows, 6)
    page:heading("Spread")
    page:value("nominal inductance", middle[1], "H", "at the middle of the temperatures")
    page:value("least inductance", least * 1e-6, "H",
      ("%+.1f %%"):format(100 * (least * 1e-6 / middle[1] - 1)))
    page:value("most inductance", most * 1e-6, "H",
      ("%+.1f %%"):format(100 * (most * 1e-6 / middle[1] - 1)))
    page:value("least reading per ampere", low * 1e-3, "T/A",
      ("%+.1f %%"):format(100 * (low * 1e-3 / middle[2] - 1)))
    page:value("most reading per ampere", high * 1e-3, "T/A",
      ("%+.1f %%"):format(100 * (high * 1e-3 / middle[2] - 1)))
    page:value("most core flux density", core * 1e-3, "T")
    page:prose("Corners are the worst case; they do not say how likely it is.")
    return { inductance_least = least * 1e-6, inductance_most = most * 1e-6,
      reading_spread = (high - low) * 1e-3 / middle[2], core_flux_density_most = core * 1e-3 }
  end,
}
