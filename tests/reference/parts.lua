--- Parts for the specs of whole parts: one of every shape, with gaps that its legs allow.
-- The planar E and the custom core have no catalogue size; their dimensions are invented.
local custom = {
  shape = "custom",
  sections = {
    { name = "post", length = "40 mm", area = "200 mm2",
      pole = { shape = "round", diameter = "16 mm" } },
    { name = "frame", length = "110 mm", area = "230 mm2" },
  },
}

local planar = { shape = "planar E", dimensions = { A = "43.2 mm", B = "9.5 mm", C = "27.9 mm",
  D = "5.4 mm", E = "34.7 mm", F = "8.1 mm" } }

return {
  every = {
    { shape = "ring", core = "R 25.3/14.8/10", gaps = { { length = "1 mm" } } },
    { shape = "U", core = "U 25/20/13", gaps = { { length = "0.5 mm", leg = "all" } } },
    { shape = "E", core = "E 42/21/15", gaps = { { length = "1.6 mm" } } },
    { shape = "planar E", core = planar, gaps = { { length = "0.4 mm" } } },
    { shape = "ETD", core = "ETD 39/20/13", gaps = { { length = "1 mm" } } },
    { shape = "EER", core = "ER 35/21/11", gaps = { { length = "1 mm" } } },
    { shape = "EC", core = "EC 52", gaps = { { length = "1 mm" } } },
    { shape = "EFD", core = "EFD 25/13/9", gaps = { { length = "0.5 mm" } } },
    { shape = "EP", core = "EP 20", gaps = { { length = "0.3 mm" } } },
    { shape = "PQ", core = "PQ 50/50", gaps = { { length = "2 mm" } } },
    { shape = "RM", core = "RM 10", gaps = { { length = "0.5 mm" } } },
    { shape = "pot", core = "P 26/16", gaps = { { length = "0.4 mm" } } },
    { shape = "custom", core = custom, gaps = { { length = "1 mm", leg = "post" } } },
  },

  --- Remanence: I0 = Hc le / N (standard result for gaps long against le/mur; from memory).
  remanent_current = function(coercive_field, path, turns) return coercive_field * path / turns end,

  --- Pull between two pole faces: F = B2 A / (2 mu0) (textbook, from memory).
  pull = function(density, area, mu0) return density ^ 2 * area / (2 * mu0) end,

  --- Ring 38/26/8 mm with a gap of 4.5 mm, straight conductor, relative permeability 2000: ratio of
  -- the flux density opposite the gap to that in its middle, by an own 3-D finite-volume solution of
  -- a coarser grid, given with two digits.
  ring_at_2000 = 6.3,
}
