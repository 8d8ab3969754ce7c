--- Generic sensor classes. The figures are what is usual for a class (common practice, no source):
-- replace them by your supplier's data. SI units; temperatures in degrees Celsius; sensitivity in
-- V/T, range and offset drift in T (full scale either way), noise in T per root hertz, drifts per
-- kelvin, life as a share.
local function hall(range, fields)
  local card = {
    range = range, sensitivity = 2 / range, axis = "normal", supply = 5, ratiometric = true,
    thickness = { min = 1.50e-3, nom = 1.55e-3, max = 1.60e-3 }, element_depth = 0.5e-3,
    noise_density = 150e-9, bandwidth = 200e3, delay = 1.5e-6, gain_tolerance = 0.025,
    gain_drift = 250e-6, offset_drift = 0.3e-3, life = 0.015, temperature_range = { -40, 150 },
    self_heating = 9, package = "three-lead plate package",
  }
  for key, value in pairs(fields) do card[key] = value end
  return card
end

local function tmr(range, fields)
  local card = {
    range = range, sensitivity = 2 / range, axis = "in-plane", supply = 5, ratiometric = true,
    thickness = { min = 1.35e-3, nom = 1.45e-3, max = 1.55e-3 }, element_depth = 0.7e-3,
    standing_height = { min = 2.9e-3, nom = 3.0e-3, max = 3.1e-3 },
    noise_density = 8e-9, bandwidth = 1e6, delay = 0.2e-6, gain_tolerance = 0.02,
    gain_drift = 800e-6, offset_drift = 0.1e-3, life = 0.01, hysteresis = 0.003,
    temperature_range = { -40, 125 }, self_heating = 3, package = "small outline package",
  }
  for key, value in pairs(fields) do card[key] = value end
  return card
end

return {
  hall(0.05, { name = "linear Hall, 50 mT", offset_drift = 0.2e-3 }),
  hall(0.10, { name = "linear Hall, 100 mT" }),
  hall(0.12, { name = "linear Hall, 120 mT" }),
  hall(0.20, { name = "linear Hall, 200 mT" }),
  hall(0.30, { name = "linear Hall, 300 mT", offset_drift = 0.4e-3 }),
  hall(0.10, { name = "fast linear Hall, 100 mT", bandwidth = 400e3, delay = 0.6e-6,
    noise_density = 250e-9 }),
  hall(0.10, { name = "thin linear Hall, 100 mT", package = "wafer-level package",
    thickness = { min = 0.50e-3, nom = 0.55e-3, max = 0.60e-3 }, element_depth = 0.1e-3,
    self_heating = 12 }),
  hall(0.30, { name = "thin linear Hall, 300 mT", package = "wafer-level package",
    thickness = { min = 0.50e-3, nom = 0.55e-3, max = 0.60e-3 }, element_depth = 0.1e-3,
    offset_drift = 0.4e-3, self_heating = 12 }),
  hall(0.10, { name = "fixed-gain linear Hall, 100 mT", ratiometric = false }),
  hall(0.10, { name = "in-plane Hall, 100 mT", axis = "in-plane",
    thickness = { min = 0.9e-3, nom = 1.0e-3, max = 1.1e-3 },
    standing_height = { min = 2.9e-3, nom = 3.0e-3, max = 3.1e-3 }, bandwidth = 120e3,
    delay = 3e-6, package = "small outline package" }),
  tmr(0.02, { name = "TMR, 20 mT" }),
  tmr(0.10, { name = "TMR, 100 mT", noise_density = 20e-9 }),
  hall(0.10, { name = "differential Hall pair, 100 mT", elements = 2,
    note = "two elements in opposed gaps, read as a difference: a uniform external field cancels to"
      .. " the match of their gains", gain_match = 0.01 }),
  tmr(0.02, { name = "differential TMR pair, 20 mT", elements = 2,
    note = "two elements in opposed gaps, read as a difference: a uniform external field cancels to"
      .. " the match of their gains", gain_match = 0.01 }),
  source = "generic class, common practice, no source; replace by your supplier's data",
}
