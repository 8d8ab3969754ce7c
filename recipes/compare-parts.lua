-- Two parts for the same job, side by side.

local function describe(ef, core, material, turns, gap, input)
  local part = ef.part { core = core, material = material, gaps = { { length = gap } },
    windings = { { turns = turns } } }
  local s = part:solve { current = input.current, temperature = input.temperature }
  local g = part.core.geometry
  return {
    { "inductance, uH", s.inductance * 1e6 },
    { "incremental inductance, uH", s.incremental_inductance * 1e6 },
    { "inductance over the plain estimate", s.estimate.ratio.inductance },
    { "largest core flux density, mT", s.core_flux_density * 1e3 },
    { "core over plain estimate", s.estimate.ratio.core_flux_density },
    { "field in the gap per ampere, mT/A", s.gaps[1].centre_flux_density / input.current * 1e3 },
    { "current at 10 % less inductance, A",
      part:current_for { drop = 0.1, temperature = input.temperature } },
    { "energy stored, mJ", s.energy * 1e3 },
    { "force on the gap's faces, N", s.gaps[1].force },
    { "core volume, cm3", g.effective_volume * 1e6 },
    { "core mass, g", part.core_mass and part.core_mass * 1e3 or nil },
    { "window of one side, mm2", g.window_area * 1e6 },
    { "turns squared over window (copper resistance at equal fill), 1/mm2",
      turns * turns / (g.window_area * 1e6) },
  }, s
end

return {
  entrefer = 1,
  title = "Comparing two parts",
  purpose = "Puts two parts for the same current side by side.",
  version = "1",
  inputs = {
    { name = "core_a", default = "ETD 44/22/15" }, { name = "core_b", default = "PQ 50/50" },
    { name = "material_a", default = "PW3b" }, { name = "material_b", default = "PW3b" },
    { name = "turns_a", unit = "1", default = 12, min = 1 },
    { name = "turns_b", unit = "1", default = 9, min = 1 },
    { name = "gap_a", unit = "m", default = "2.0 mm" }, { name = "gap_b", unit = "m", default = "2.4 mm" },
    { name = "current", unit = "A", default = "25 A", min = "1 mA" },
    { name = "temperature", unit = "degC", default = 100 },
  },
  results = { { name = "inductance_a", unit = "H" }, { name = "inductance_b", unit = "H" },
    { name = "core_flux_density_a", unit = "T" }, { name = "core_flux_density_b", unit = "T" } },
  run = function(ef, input, page)
    local a, sa = describe(ef, input.core_a, input.material_a, input.turns_a, input.gap_a, input)
    local b, sb = describe(ef, input.core_b, input.material_b, input.turns_b, input.gap_b, input)
    local rows = {}
    for i, row in ipairs(a) do
      local change = row[2] and b[i][2] and 100 * (b[i][2] / row[2] - 1)
      rows[i] = { row[1], row[2], b[i][2], change }
    end
    page:heading("Side by side")
    page:table("comparison", { columns = { { name = "quantity" },
      { name = "A: " .. input.core_a, digits = 4 }, { name = "B: " .. input.core_b, digits = 4 },
      { name = "B against A", unit = "%", digits = 3 } }, rows = rows })
    for _, pair in ipairs { { "A", sa }, { "B", sb } } do
      for _, warning in ipairs(pair[2].warnings) do page:prose(pair[1] .. ": " .. warning .. ".") end
    end
    return { inductance_a = sa.inductance, inductance_b = sb.inductance,
      core_flux_density_a = sa.core_flux_density, core_flux_density_b = sb.core_flux_density }
  end,
}
