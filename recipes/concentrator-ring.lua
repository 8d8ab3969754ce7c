-- A gapped ring around a straight conductor: what the sensor sees, where the ring saturates, and what a
-- thicker section or a second gap does.

local function facts(ef, input, outer, height, gaps)
  local part = ef.part {
    core = { shape = "ring", dimensions = { d1 = outer, d2 = input.inner, h = height } },
    material = input.material, gaps = { { length = input.gap, count = gaps } },
    windings = { { turns = 1 } } }
  local small = part:solve { current = input.current * 1e-3, temperature = input.temperature }
  local s = part:solve { current = input.current, temperature = input.temperature }
  local per_ampere = small.gaps[1].centre_flux_density / (input.current * 1e-3)
  local shortfall = 1 - s.gaps[1].centre_flux_density / input.current / per_ampere
  return part, s, per_ampere, shortfall
end

return {
  entrefer = 1,
  title = "Concentrator ring",
  purpose = "Shows how a slim gapped ring leaks and saturates, and which way out helps.",
  version = "1",
  inputs = {
    { name = "outer", unit = "m", default = "38 mm" }, { name = "inner", unit = "m", default = "26 mm" },
    { name = "height", unit = "m", default = "8 mm" }, { name = "gap", unit = "m", default = "4.5 mm" },
    { name = "material", default = "PW3b" },
    { name = "current", unit = "A", default = "300 A", min = "1 mA", help = "largest current to be read" },
    { name = "temperature", unit = "degC", default = 85 },
  },
  results = { { name = "flux_density_per_ampere", unit = "T/A" },
    { name = "ratio", unit = "1", help = "ring opposite the gap over middle of the gap, small current" },
    { name = "shortfall", unit = "1", help = "of the reading at the current" } },
  run = function(ef, input, page)
    local radial = (input.outer - input.inner) / 2
    local variants = {
      { "as given, one gap", input.outer, input.height, 1 },
      { "two gaps at 180 degrees, a sensor in each", input.outer, input.height, 2 },
      { "one gap, 1.5 x as thick and 2 x as tall", input.inner + 3 * radial, 2 * input.height, 1 },
    }
    local rows, result = {}, nil
    for i, v in ipairs(variants) do
      local part, s, per_ampere, shortfall = facts(ef, input, v[2], v[3], v[4])
      local small = part:solve { current = input.current * 1e-3, temperature = input.temperature }
      local ratio = small.core_flux_density / small.gaps[1].centre_flux_density
      rows[i] = { v[1], per_ampere * 1e6, ratio, s.core_flux_density * 1e3, 100 * shortfall,
        100 * (s.gaps[1].centre_flux_density / s.estimate.flux_density - 1) }
      result = result or { flux_density_per_ampere = per_ampere, ratio = ratio, shortfall = shortfall }
    end
    page:heading("Arrangements")
    page:table("arrangements", { columns = { { name = "arrangement" },
      { name = "in the gap, small current", unit = "uT/A", digits = 4 },
      { name = "ring over gap, small current", digits = 3 },
      { name = "ring at the current", unit = "mT", digits = 3 },
      { name = "shortfall at the current", unit = "%", digits = 3 },
      { name = "off the plain estimate, at the current", unit = "%", digits = 3 } }, rows = rows })
    page:prose(("The back of the ring carries %.1f times the flux density of the gap: what the gap sees"
      .. " is only the part of the flux that has not leaked on the way. mu0 I / gap says nothing about"
      .. " the ring's saturation."):format(result.ratio))
    page:prose("A shorter gap makes it worse: the flux in the gap rises and the ring's with it.")
    page:caution("The bar's insulation, creepage and clearance must be confirmed to the code in force by"
      .. " a qualified person. Not validated on hardware.")
    return result
  end,
}
