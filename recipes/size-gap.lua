-- The gap for a wanted inductance, by the nonlinear network, beside what the formulas would grind.

local function by_method(ef, part, input)
  local rows = {}
  for _, method in ipairs(ef.gap_methods()) do
    local variant = part:with { gaps = { { length = input.start, method = method } } }
    local length, err = ef.try(variant.gap_for, variant, { inductance = input.inductance,
      current = input.current, temperature = input.temperature })
    if length then
      local ground = part:with { gap = length }
        :solve { current = input.current, temperature = input.temperature }
      rows[#rows + 1] = { method, length * 1e3, ground.inductance * 1e6,
        100 * (ground.inductance / input.inductance - 1) }
    else
      rows[#rows + 1] = { method .. ": " .. err.message }
    end
  end
  return { columns = { { name = "gap formula" }, { name = "gap", unit = "mm", digits = 4 },
    { name = "inductance it would give", unit = "uH", digits = 4 },
    { name = "error", unit = "%", digits = 3 } }, rows = rows }
end

local function sensitivities(part, input, length)
  local function by(parameter)
    return part:derivatives { current = input.current, temperature = input.temperature,
      by = parameter }
  end
  local gap, turns, permeability = by { gap = 1 }, by { turns = 1 }, by { permeability = true }
  local s = part:solve { current = input.current, temperature = input.temperature }
  local field = s.gaps[1].centre_flux_density
  local function row(name, change, d)
    return { name, 100 * d.inductance * change / s.inductance,
      100 * d.gaps[1].centre_flux_density * change / field }
  end
  return { columns = { { name = "a change of" }, { name = "moves inductance by", unit = "%", digits = 3 },
    { name = "moves the field in the gap by", unit = "%", digits = 3 } },
    rows = { row("1 % of the gap", 0.01 * length, gap),
      row("+0.05 mm of the gap", 0.05e-3, gap), row("one turn more", 1, turns),
      row("+10 % initial permeability", 0.1, permeability) } }, s
end

return {
  entrefer = 1,
  title = "Sizing the gap",
  purpose = "Finds the gap for a wanted inductance and shows what each formula would have ground.",
  version = "1",
  inputs = {
    { name = "core", default = "ETD 39/20/13", help = "a size of the catalogue" },
    { name = "material", default = "PW3b", help = "a material card" },
    { name = "turns", unit = "1", default = 24, min = 1, max = 1000, help = "turns on the centre leg" },
    { name = "inductance", unit = "H", default = "120 uH", help = "wanted: flux linkage / current" },
    { name = "current", unit = "A", default = "8 A", help = "where it is wanted" },
    { name = "temperature", unit = "degC", default = 100, help = "of the core" },
    { name = "start", unit = "m", default = "1 mm", help = "any gap to start from" },
  },
  results = {
    { name = "gap", unit = "m" }, { name = "inductance", unit = "H" },
    { name = "core_flux_density", unit = "T" }, { name = "flux_density_per_ampere", unit = "T/A" },
  },
  run = function(ef, input, page)
    local first = ef.part { core = input.core, material = input.material,
      gaps = { { length = input.start } }, windings = { { turns = input.turns } } }
    local length, part = first:gap_for { inductance = input.inductance, current = input.current,
      temperature = input.temperature }
    page:heading("The gap")
    page:value("gap", length, "m", "longer of the two that give this inductance: not saturated")
    local moved, s = sensitivities(part, input, length)
    page:value("core flux density", s.core_flux_density, "T", "in the " .. s.core_flux_density_limb)
    page:value("field in the gap's middle", s.gaps[1].centre_flux_density, "T",
      ("plain estimate %s"):format(ef.format(s.estimate.flux_density, "T", 4, { ascii = true })))
    for _, warning in ipairs(s.warnings) do page:prose("Note: " .. warning .. ".") end
    page:heading("What each formula would have ground")
    page:table("formulas", by_method(ef, part, input))
    page:prose("All gaps are then judged by the network with conformal edges; the formulas differ by"
      .. " what they leave out of the fringing flux.")
    page:heading("What moves it")
    page:table("sensitivities", moved)
    page:caution("Grinding makes ferrite dust: keep it out of lungs and eyes. Specify either the gap's"
      .. " length or the inductance factor, never both; a part with a sensor wants the length.")
    return { gap = length, inductance = s.inductance, core_flux_density = s.core_flux_density,
      flux_density_per_ampere = s.gaps[1].centre_flux_density / input.current }
  end,
}
