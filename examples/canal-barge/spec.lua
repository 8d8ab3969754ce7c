-- INVENTED demo scenario: the main battery bar of an electric canal barge, measured by a slim gapped
-- ring with two redundant sensors back to back. All figures are made up.
return {
  title = "Canal barge, 96 V main bar",
  purpose = "flux concentrator around a straight bar",
  kind = "concentrator",
  current = { nominal = "280 A", peak = "420 A", trip = "560 A" },
  turns = 1,
  temperatures = { -20, 25, 100 },
  material = "PW3b",
  cores = { { shape = "ring", name = "ring 38/26/8", dimensions = { d1 = "38 mm", d2 = "26 mm",
    h = "8 mm" } } },
  limits = { saturation_share = 0.9, nonlinearity = "2 %" },
  sensing = { clearance = "1.2 mm", stacked = 2, range_use = { 0.15, 0.9 } },
  gap = { length = "4.5 mm", count = 1 },
  sweep = { to = "600 A", points = 13 },
}
