-- The gap came out longer or shorter than drawn: what that does to inductance, saturation and reading.

local function facts(part, input)
  local s = part:solve { current = input.current, temperature = input.temperature }
  return {
    inductance = s.inductance, core = s.core_flux_density,
    per_ampere = s.gaps[1].centre_flux_density / input.current,
    knee = part:current_for { drop = 0.1, temperature = input.temperature },
  }
end

return {
  entrefer = 1,
  title = "What a wrong gap does",
  purpose = "Compares the drawn gap with the one that was made, in inductance, reading and saturation.",
  version = "1",
  inputs = {
    { name = "core", default = "E 42/21/15", help = "a size of the catalogue" },
    { name = "material", default = "PW3b", help = "a material card" },
    { name = "turns", unit = "1", default = 20, min = 1, max = 1000, help = "turns on the centre leg" },
    { name = "drawn", unit = "m", default = "1.5 mm", help = "the gap on the drawing" },
    { name = "made", unit = "m", default = "1.72 mm", help = "the gap that was ground or sawn" },
    { name = "current", unit = "A", default = "12 A", min = "1 mA", help = "operating current" },
    { name = "temperature", unit = "degC", default = 85, help = "of the core" },
  },
  results = {
    { name = "inductance_change", unit = "1" }, { name = "reading_change", unit = "1" },
    { name = "knee_change", unit = "1", help = "of the current at 10 % less inductance" },
  },
  run = function(ef, input, page)
    local function with(length)
      return ef.part { core = input.core, material = input.material,
        gaps = { { length = length } }, windings = { { turns = input.turns } } }
    end
    local drawn, made = facts(with(input.drawn), input), facts(with(input.made), input)
    local function change(name) return made[name] / drawn[name] - 1 end
    local function row(label, name, scale)
      return { label, drawn[name] * scale, made[name] * scale, 100 * change(name) }
    end
    page:heading("Drawn and made")
    page:table("comparison", { columns = { { name = "quantity" }, { name = "drawn", digits = 4 },
      { name = "made", digits = 4 }, { name = "change", unit = "%", digits = 3 } },
      rows = {
        { "gap, mm", input.drawn * 1e3, input.made * 1e3, 100 * (input.made / input.drawn - 1) },
        row("inductance, uH", "inductance", 1e6),
        row("field in the gap per ampere, mT/A", "per_ampere", 1e3),
        row("core flux density, mT", "core", 1e3),
        row("current at 10 % less inductance, A", "knee", 1) } })
    page:prose(("The reading moves by %.1f %%, the inductance by %.1f %%: fringing softens the"
      .. " inductance but not the field in the middle. A lot whose two changes have this ratio has a"
      .. " wrong gap; one where both move alike has a crack, a joint or another permeability; one where"
      .. " only the reading moves has its sensor misplaced."):format(100 * change("per_ampere"),
      100 * change("inductance")))
    page:prose(change("per_ampere") < 0 and "A two-point calibration of each part takes the change of"
      .. " the reading out; the ripple current grows with the lost inductance and stays."
      or "A two-point calibration takes the change of the reading out; the earlier saturation stays.")
    return { inductance_change = change("inductance"), reading_change = change("per_ampere"),
      knee_change = change("knee") }
  end,
}
