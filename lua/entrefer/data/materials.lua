--- Material cards. Every curve here is INVENTED in the shape that is usual for its class: a
-- representative curve, to be replaced by your supplier's data (`ef.material "curves.csv"`).
-- Class names PW1..PW5 and IS are those of IEC 61332 (from memory). h in A/m, b in T, temperature in
-- degrees Celsius, coercive_field in A/m, resistivity in ohm metre, density in kg/m3.
local representative = "representative curve, replace by your supplier's data"

local ferrite_h = { 0, 10, 20, 40, 60, 100, 150, 250, 500, 1200 }

local function ferrite(temperature, initial_permeability, saturation, coercive_field, b)
  return { temperature = temperature, initial_permeability = initial_permeability,
    saturation = saturation, coercive_field = coercive_field, h = ferrite_h, b = b,
    -- A closed core of power ferrite keeps about a quarter of its saturation (invented, as all here).
    remanence = 0.25 * saturation }
end

return {
  {
    name = "PW2b", kind = "curve", group = "power ferrite",
    description = "manganese-zinc power ferrite for 25 kHz to 200 kHz (IEC 61332 class)",
    curves = {
      ferrite(-40, 1600, 0.58, 25,
        { 0, 0.0205, 0.045, 0.12, 0.205, 0.340, 0.420, 0.480, 0.530, 0.565 }),
      ferrite(25, 2300, 0.51, 16,
        { 0, 0.031, 0.070, 0.170, 0.250, 0.340, 0.385, 0.425, 0.463, 0.493 }),
      ferrite(60, 2900, 0.46, 13,
        { 0, 0.040, 0.089, 0.190, 0.256, 0.320, 0.352, 0.383, 0.414, 0.441 }),
      ferrite(100, 3500, 0.40, 10,
        { 0, 0.049, 0.108, 0.202, 0.250, 0.292, 0.315, 0.338, 0.362, 0.384 }),
      ferrite(120, 3300, 0.37, 10,
        { 0, 0.046, 0.101, 0.187, 0.231, 0.269, 0.290, 0.311, 0.333, 0.354 }),
    },
    resistivity = 5, density = 4800, curie_temperature = 210,
    uncertainty = { initial_permeability = 0.25, saturation = 0.03 },
  },
  {
    name = "PW3b", kind = "curve", group = "power ferrite",
    description = "manganese-zinc power ferrite for 100 kHz to 300 kHz (IEC 61332 class)",
    curves = {
      ferrite(-40, 1400, 0.57, 28,
        { 0, 0.0178, 0.038, 0.100, 0.178, 0.315, 0.402, 0.467, 0.519, 0.555 }),
      ferrite(25, 2000, 0.50, 17,
        { 0, 0.0265, 0.059, 0.148, 0.228, 0.323, 0.372, 0.415, 0.454, 0.484 }),
      ferrite(60, 2500, 0.455, 14,
        { 0, 0.034, 0.075, 0.168, 0.237, 0.307, 0.343, 0.376, 0.408, 0.436 }),
      ferrite(100, 3000, 0.40, 11,
        { 0, 0.0415, 0.092, 0.181, 0.234, 0.283, 0.309, 0.334, 0.360, 0.383 }),
      ferrite(120, 2900, 0.37, 11,
        { 0, 0.040, 0.088, 0.170, 0.217, 0.261, 0.285, 0.308, 0.331, 0.353 }),
    },
    resistivity = 6, density = 4800, curie_temperature = 220,
    uncertainty = { initial_permeability = 0.25, saturation = 0.03 },
  },
  {
    name = "PW4a", kind = "curve", group = "power ferrite",
    description = "manganese-zinc power ferrite for 300 kHz to 1 MHz (IEC 61332 class)",
    curves = {
      ferrite(-40, 1000, 0.55, 45,
        { 0, 0.0127, 0.026, 0.059, 0.103, 0.214, 0.318, 0.418, 0.492, 0.534 }),
      ferrite(25, 1400, 0.49, 32,
        { 0, 0.018, 0.038, 0.090, 0.150, 0.252, 0.321, 0.385, 0.437, 0.472 }),
      ferrite(60, 1700, 0.45, 27,
        { 0, 0.0225, 0.047, 0.110, 0.172, 0.256, 0.309, 0.358, 0.400, 0.431 }),
      ferrite(100, 2000, 0.40, 23,
        { 0, 0.027, 0.058, 0.127, 0.182, 0.247, 0.284, 0.321, 0.355, 0.381 }),
      ferrite(120, 2000, 0.375, 23,
        { 0, 0.027, 0.057, 0.123, 0.173, 0.231, 0.265, 0.299, 0.331, 0.357 }),
    },
    resistivity = 8, density = 4750, curie_temperature = 240,
    uncertainty = { initial_permeability = 0.25, saturation = 0.03 },
  },
  {
    name = "IS10", kind = "curve", group = "high-permeability ferrite",
    description = "manganese-zinc ferrite of high permeability for chokes and concentrators",
    curves = {
      ferrite(-20, 7500, 0.46, 8,
        { 0, 0.110, 0.200, 0.290, 0.335, 0.378, 0.400, 0.420, 0.438, 0.450 }),
      ferrite(25, 10000, 0.39, 6,
        { 0, 0.134, 0.213, 0.276, 0.303, 0.328, 0.343, 0.357, 0.371, 0.381 }),
      ferrite(60, 11000, 0.31, 5,
        { 0, 0.132, 0.186, 0.228, 0.246, 0.264, 0.275, 0.285, 0.295, 0.303 }),
      ferrite(100, 9000, 0.20, 4,
        { 0, 0.091, 0.122, 0.146, 0.158, 0.169, 0.176, 0.183, 0.190, 0.195 }),
    },
    resistivity = 0.2, density = 4900, curie_temperature = 130,
    uncertainty = { initial_permeability = 0.30, saturation = 0.04 },
  },
  {
    name = "silicon steel", kind = "curve", group = "silicon steel",
    description = "grain-oriented silicon steel sheet along the rolling direction, 0.23 mm",
    curves = {
      { temperature = 25, initial_permeability = 1500, saturation = 2.03,
        coercive_field = 6, remanence = 1.4,
        h = { 0, 5, 10, 20, 40, 80, 200, 800, 3000, 10000 },
        b = { 0, 0.03, 0.40, 1.05, 1.38, 1.57, 1.74, 1.88, 1.95, 2.01 } },
    },
    resistivity = 0.48e-6, density = 7650, curie_temperature = 745,
    uncertainty = { initial_permeability = 0.4, saturation = 0.02 },
    note = "one temperature: saturation falls by about 2 % up to 120 degC",
  },
  {
    name = "nickel-iron", kind = "curve", group = "nickel-iron",
    description = "nickel-iron strip with about 50 % nickel, 0.1 mm",
    curves = {
      { temperature = 25, initial_permeability = 6000, saturation = 1.55,
        coercive_field = 5, remanence = 0.9,
        h = { 0, 2, 5, 10, 20, 50, 150, 500, 2000 },
        b = { 0, 0.02, 0.18, 0.62, 1.02, 1.27, 1.40, 1.49, 1.535 } },
    },
    resistivity = 0.45e-6, density = 8250, curie_temperature = 450,
    uncertainty = { initial_permeability = 0.4, saturation = 0.03 },
    note = "one temperature: saturation falls by about 6 % up to 120 degC",
  },
  {
    name = "nanocrystalline", kind = "langevin", group = "nanocrystalline ribbon",
    description = "nanocrystalline ribbon annealed for a flat loop, 0.02 mm",
    curves = {
      { temperature = -40, initial_permeability = 31000, saturation = 1.25,
        coercive_field = 1.2, remanence = 0.1 },
      { temperature = 25, initial_permeability = 30000, saturation = 1.22,
        coercive_field = 1.2, remanence = 0.1 },
      { temperature = 120, initial_permeability = 27000, saturation = 1.12,
        coercive_field = 1.2, remanence = 0.1 },
    },
    resistivity = 1.15e-6, density = 7350, curie_temperature = 570,
    uncertainty = { initial_permeability = 0.2, saturation = 0.03 },
  },
  {
    name = "iron powder", kind = "froelich", group = "iron powder",
    description = "iron powder of relative permeability 75: distributed gap, soft saturation",
    curves = {
      { temperature = -40, initial_permeability = 74, saturation = 1.42,
        coercive_field = 400, remanence = 0.04 },
      { temperature = 25, initial_permeability = 75, saturation = 1.40,
        coercive_field = 400, remanence = 0.04 },
      { temperature = 120, initial_permeability = 77, saturation = 1.36,
        coercive_field = 400, remanence = 0.04 },
    },
    resistivity = 0.5, density = 7000, curie_temperature = 750,
    uncertainty = { initial_permeability = 0.1, saturation = 0.1 },
  },
  representative = representative,
}
