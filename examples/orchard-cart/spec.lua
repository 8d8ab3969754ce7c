-- INVENTED demo scenario: the 48 V / 24 V exchanger of a battery-electric orchard cart. The inductor
-- carries 38 A either way and measures it with a sensor in its own gap. All figures are made up.
return {
  title = "Orchard cart, 48 V to 24 V exchanger",
  purpose = "bidirectional buck/boost inductor with its own current sensor",
  current = { nominal = "38 A", peak = "47 A", trip = "58 A" },
  converter = { high = "57 V", low = "25 V", frequency = "110 kHz", ripple = "17 A" },
  temperatures = { -20, 25, 100 },
  material = { file = "power-ferrite.csv", name = "orchard power ferrite (invented data)",
    coercive_field = "14 A/m", density = "4.8 g/cm3", resistivity = "5 ohm m" },
  cores = { "family ETD", "family RM", "family pot", "PQ 26/25", "PQ 50/50" },
  limits = { saturation_share = 0.8, current_density = "6 A/mm2", nonlinearity = "5 %" },
  sensing = { clearance = "0.40 mm", bandwidth = "100 kHz", range_use = { 0.3, 0.8 } },
  gap = { step = "0.05 mm", tolerance = "0.05 mm" },
  wire = { strand = "0.1 mm", grade = 1 },
  sweep = { to = "75 A", points = 16 },
}
