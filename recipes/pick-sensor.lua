-- Which sensor class fits a part's gap, with the reason for every refusal.

return {
  entrefer = 1,
  title = "Picking a sensor",
  purpose = "Tries every sensor class in a part's gap: height, range, signal, bandwidth, temperature.",
  version = "1",
  inputs = {
    { name = "core", default = "ETD 44/22/15" }, { name = "material", default = "PW3b" },
    { name = "turns", unit = "1", default = 14, min = 1 },
    { name = "gap", unit = "m", default = "2.2 mm" },
    { name = "nominal", unit = "A", default = "12 A", help = "nominal current" },
    { name = "trip", unit = "A", default = "20 A", help = "largest current to be read" },
    { name = "temperature", unit = "degC", default = 100, help = "of the core and the sensor's place" },
    { name = "clearance", unit = "m", default = "0.4 mm", help = "adhesive, films, assembly" },
    { name = "bandwidth", unit = "Hz", default = "100 kHz", help = "least" },
  },
  results = { { name = "sensor", help = "the best that fits, or none" },
    { name = "range_used", unit = "1", help = "share of its range at the nominal current" },
    { name = "flux_density_per_ampere", unit = "T/A" } },
  run = function(ef, input, page)
    local part = ef.part { core = input.core, material = input.material,
      gaps = { { length = input.gap } }, windings = { { turns = input.turns } } }
    local function field(current)
      return part:solve { current = current, temperature = input.temperature }
        .gaps[1].centre_flux_density
    end
    local candidates = {}
    for i, name in ipairs(ef.sensors()) do candidates[i] = ef.sensor(name) end
    local facts = { height = input.gap, nominal = field(input.nominal), trip = field(input.trip),
      hot = input.temperature, gaps = 1 }
    local chosen, tried = ef.design.pick_sensor(facts, { candidates = candidates,
      clearance = input.clearance, stacked = 1, least_use = 0.3, most_use = 0.8,
      bandwidth = input.bandwidth })
    local rows = {}
    for i, entry in ipairs(tried) do
      local reasons = {}
      for k, refusal in ipairs(entry.refusals) do reasons[k] = refusal.reason end
      rows[i] = { entry.sensor.name, #reasons == 0 and "fits" or "refused",
        100 * facts.nominal / entry.sensor.range, table.concat(reasons, "; ") }
    end
    page:heading("Sensors")
    page:value("flux density at the nominal current", facts.nominal, "T")
    page:value("flux density at the trip current", facts.trip, "T")
    page:table("sensors", { columns = { { name = "sensor" }, { name = "result" },
      { name = "range used, nominal", unit = "%", digits = 2 }, { name = "reason" } }, rows = rows })
    page:prose(chosen and ("Best use of its range: **%s**. The class's figures are generic: replace them"
      .. " by your supplier's data."):format(chosen.sensor.name)
      or "None fits: a longer gap with more turns, a pocket in the pole, or another way of sensing.")
    page:caution("A reading taken from the flux falls short exactly when the core saturates: it is no"
      .. " sole means of protection. Not validated on hardware.")
    return { sensor = chosen and chosen.sensor.name or "none",
      range_used = chosen and chosen.use or 0,
      flux_density_per_ampere = facts.nominal / input.nominal }
  end,
}
