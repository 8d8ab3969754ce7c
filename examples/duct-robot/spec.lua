-- INVENTED demo scenario: the tether converter of a duct-inspection robot. The gap that the
-- inductance wants is shorter than any sensor package, so a pocket in the pole faces is allowed. All
-- figures are made up.
return {
  title = "Duct robot, tether buck",
  purpose = "buck inductor whose gap is shorter than the sensor",
  current = { nominal = "3.5 A", peak = "4.3 A", trip = "5.1 A" },
  inductance = "175 uH",
  temperatures = { 25, 100 },
  material = "PW2b",
  cores = { "RM 8", "RM 10", "RM 12", "P 30/19", "PQ 26/20" },
  limits = { saturation_share = 0.85, current_density = "5 A/mm2", nonlinearity = "8 %" },
  sensing = { clearance = "0.40 mm", bandwidth = "100 kHz", range_use = { 0.3, 0.85 },
    pocket = { diameter = "5 mm", depth_most = "0.9 mm" } },
  gap = { step = "0.01 mm", tolerance = "0.03 mm" },
  wire = { strand = "0.1 mm", grade = 1 },
  sweep = { to = "6 A", points = 13 },
}
