--- Sums worked by hand, and a handbook's windows and mean turns, for the specs of stack-up and bobbins.
-- Lengths in mm, movements in um.
return {
  -- Package 1.50/1.55/1.60, one glue line 0.10 +- 0.05, film 0.05 +- 0.005, clearance 0.10, gap +- 0.05.
  sums = {
    single = {
      nominal = 1.80,          -- 1.55 + 0.10 + 0.05 + 0.10
      worst_case = 1.955,      -- 1.80 + (0.05 + 0.05 + 0.005 + 0.05)
      root_sum_square = 1.8867468, -- 1.80 + sqrt(0.0025 + 0.0025 + 0.000025 + 0.0025)
    },
    -- Two packages, a glue line below each.
    double = {
      nominal = 3.45,          -- 2 x 1.55 + 2 x 0.10 + 0.05 + 0.10
      worst_case = 3.705,      -- 3.45 + (2 x 0.05 + 2 x 0.05 + 0.005 + 0.05)
      root_sum_square = 3.5619151, -- 3.45 + sqrt(2 x 0.0025 + 2 x 0.0025 + 0.000025 + 0.0025)
    },
  },
  -- 25 to 110 degC, rise 85 K; expansions 15, 60, 50, 11 per million and kelvin; leg of 30 mm, 15 K over
  -- the outer legs.
  hot = {
    package = 1.97625, -- 1550 x 15e-6 x 85
    adhesive = 0.51,   -- 100 x 60e-6 x 85
    film = 0.2125,     -- 50 x 50e-6 x 85
    opening = -1.683,  -- -1800 x 11e-6 x 85
    closing = 4.95,    -- 30000 x 11e-6 x 15
    sum = 5.96575,
  },
  -- A spacer of 60 per million and kelvin, no warm leg: the cold end governs, 25 to -40 degC, -65 K.
  cold_spacer = 4.95625, -- 1800 x 60e-6 x 65 - 1550 x 15e-6 x 65 - 100 x 60e-6 x 65 - 50 x 50e-6 x 65
  -- In a gap of 2.00 the package lies on film and glue from -1.00 + 0.05 + 0.10 = -0.85; the element is
  -- 0.5 below the marked face.
  element = {
    open = { position = 0.20,  -- -0.85 + 1.55 - 0.5
      tolerance = 0.13,        -- film 0.005 + glue 0.05 + package 0.05 + half the gap's 0.025
      tolerance_rss = 0.0751665 }, -- sqrt(0.000025 + 0.0025 + 0.0025 + 0.000625)
    glued = { position = -0.35, -- -0.85 + 0.5
      tolerance = 0.08 },      -- film 0.005 + glue 0.05 + half the gap's 0.025
    -- Of two packages the upper one: -0.85 + 1.55 + 0.10 + 1.05 in a gap of 4.00, base a millimetre lower.
    second = 0.85,
  },

  --- Window for wire (cm2) and mean turn (cm). R. W. Erickson and D. Maksimovic, Fundamentals of Power
  -- Electronics, 2nd ed. 2001, Appendix D (rows from memory). Windows are of the table's own bobbins.
  handbook = {
    { "ETD 29/16/10", 0.903, 5.33 }, { "ETD 34/17/11", 1.23, 6.00 }, { "ETD 39/20/13", 1.74, 6.86 },
    { "ETD 44/22/15", 2.13, 7.62 }, { "ETD 49/25/16", 2.71, 8.51 }, { "PQ 20/16", 0.256, 4.40 },
    { "PQ 20/20", 0.384, 4.40 }, { "PQ 26/20", 0.333, 5.62 }, { "PQ 26/25", 0.503, 5.62 },
    { "PQ 32/20", 0.471, 6.71 }, { "PQ 32/30", 0.995, 6.71 }, { "PQ 35/35", 1.61, 7.52 },
    { "PQ 40/40", 2.50, 8.39 },
  },
}
