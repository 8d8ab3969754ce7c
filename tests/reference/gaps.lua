--- Published and independently computed values for gaps, pockets and gapped rings.
-- Each list states its source; "own solution" marks numbers that were computed for this project by
-- a method that shares nothing with the library's.
return {
  --- W. T. McLyman's factor F = 1 + lg/sqrt(A) ln(2 G/lg), Transformer and Inductor Design Handbook
  -- (formula from memory), evaluated: area mm2, G mm, lg mm, F.
  handbook = {
    { 178, 30.3, 0.5, 1.17979174 }, { 178, 30.3, 1, 1.30762991 }, { 178, 30.3, 2, 1.51135266 },
    { 354, 37.8, 0.5, 1.13336788 }, { 354, 37.8, 1, 1.22989541 }, { 354, 37.8, 2, 1.38611010 },
  },

  --- (a + g)(b + g)/(a b) of L. W. Matsch, Capacitors, Magnetic Circuits, and Transformers, ch.
  -- 3-12, for a = 11.95 mm, b = 14.95 mm: g mm, factor.
  added_length = { { 0.5, 1.07668518 }, { 1, 1.15616910 }, { 2, 1.32353312 } },

  --- One free edge with a wall of height h above a plane at distance l: exact permeance of face and
  -- wall, and its asymptote (2/pi)(1 + ln(pi h/(4 l))). Schwarz-Christoffel map as in F. W. Carter
  -- (1901); numbers by root finding in the map: h/l, exact, asymptote.
  free_edge = {
    { 1, 0.8887116125, 0.4828350511 }, { 2, 1.1673281030, 0.9241062514 },
    { 5, 1.6198869407, 1.5074350486 }, { 10, 2.0083134387, 1.9487062489 },
    { 20, 2.4207454772, 2.3899774492 }, { 50, 2.9858633853, 2.9733062463 },
    { 100, 3.4208993771, 3.4145774466 },
  },

  --- Flux density on the plane under that edge, from the same map: x/l, B/B0.
  midplane_edge = {
    { -4, 0.1552858283 }, { -2, 0.2906264518 }, { -1, 0.4781525378 }, { -0.5, 0.6445871849 },
    { 0, 0.8335565596 }, { 0.25, 0.9047761750 }, { 0.5, 0.9505472437 }, { 1, 0.9886341015 },
    { 1.5, 0.9975831647 }, { 2, 0.9994951760 },
  },

  --- Type 1 gap (pole against pole) of J. Muehlethaler, J. W. Kolar, A. Ecklebe, "A novel approach
  -- for 3D air gap reluctance calculations", ICPE-ECCE Asia 2011 (formulas from memory), for
  -- a = 11.95 mm, t = 14.95 mm, lg = 1 mm, h = 14.65 mm.
  type_1 = { sigma_a = 0.819443141, sigma_t = 0.850249505, reluctance = 3.10346070e6,
             fringing = 1.43527390 },

  --- Round post of radius 1 between two wide iron plates a distance W apart, gap lg in the middle:
  -- flux of face and wall relative to the uniform flux of the face. Own solution: mode matching
  -- with an edge-singular basis, good to 1e-4: lg, W, factor.
  round_post = {
    { 0.02, 2, 1.0672 }, { 0.02, 4, 1.0804 }, { 0.05, 1, 1.1107 }, { 0.05, 2, 1.1386 },
    { 0.05, 4, 1.1715 }, { 0.1, 1, 1.1764 }, { 0.1, 2, 1.2321 }, { 0.1, 4, 1.2980 },
    { 0.2, 1, 1.2605 }, { 0.2, 2, 1.3723 }, { 0.2, 4, 1.5043 }, { 0.4, 1, 1.3271 },
    { 0.4, 2, 1.5537 }, { 0.4, 4, 1.8182 },
  },

  --- Square post of side 2, otherwise the same. Own solution: 3-D finite differences with
  -- Richardson extrapolation, good to 2e-3.
  square_post = {
    { 0.2, 2, 1.3576 }, { 0.2, 1, 1.2538 }, { 0.4, 2, 1.5289 }, { 0.4, 4, 1.7661 },
  },

  --- Mid-plane field in that round post, W = 2, relative to mu0 u/lg: lg, r, B/B0. Own mode
  -- matching, good to 2e-4.
  round_post_field = {
    { 0.1, 0.8, 0.999999 }, { 0.1, 0.9, 0.999453 }, { 0.1, 0.95, 0.988009 },
    { 0.2, 0.8, 0.999407 }, { 0.2, 0.9, 0.987423 }, { 0.2, 0.95, 0.946699 },
    { 0.4, 0.8, 0.986356 }, { 0.4, 0.9, 0.944019 }, { 0.4, 0.95, 0.894946 },
    { 0.4, 0, 1.000000 }, { 0.4, 0.5, 0.999839 },
  },

  --- Two-dimensional edge with a yoke at half-window height 10 over half gap 0.1: permeance by mode
  -- matching in planar form (own solution, 2e-5).
  edge_near_yoke = { reach = 10, half_length = 0.1, permeance = 3.12711 },

  --- Corner of two channels (pole corner against an outer corner). Own solution: 2-D finite
  -- differences on 10, 20 and 40 cells per half gap, extrapolated with the order 4/3 of the corner,
  -- good to 2e-4: reach/l, permeance. The first is the corner discontinuity of a strip line.
  edge_near_leg = { { 1, 0.55869 }, { 2, 0.64352 }, { 4, 0.87343 } },

  --- Round pocket of radius 1 in two poles of radius 3: gap, depth, field in the middle / uniform,
  -- lost flux / (uniform flux of the mouth), of it in the mouth. Own solution: axisymmetric finite
  -- volumes with 24, 48 and 96 cells per radius, extrapolated with order 4/3, good to 1e-3.
  pocket = {
    { 0.5, 1, 0.3221, 0.4798, 0.4511 }, { 1, 1, 0.5688, 0.3108, 0.2630 },
    { 2, 1, 0.8307, 0.1743, 0.1100 },
  },

  --- Gapped rings with a current on the axis, faces parallel: flux density in the iron opposite the
  -- gap (mean) over that in the middle of the gap. Own solution: 3-D finite volumes in cylindrical
  -- coordinates (potential, iron infinitely permeable, graded cells cut at the pole face, far limit
  -- 20 mean radii) on three grids, refined 1.5 times each, and extrapolated linearly in the cell
  -- size; `spread` is the extrapolation's share. Finest grids from 3 to 7 million cells (radius x
  -- angle x height). Dimensions in mm.
  rings = {
    { outer = 38, inner = 26, height = 8, gap = 4.5, gaps = 1, ratio = 6.427, spread = 0.0016,
      centre = 0.9893, slope = -4.2, grids = { 6.4067, 6.4115, 6.4166 }, finest = "221x111x143" },
    { outer = 38, inner = 26, height = 8, gap = 4.5, gaps = 2, ratio = 4.529, spread = 0.0019,
      centre = 0.9893, slope = -4.2, grids = { 4.5128, 4.5167, 4.5209 }, finest = "221x90x143" },
    { outer = 38, inner = 26, height = 8, gap = 1.5, gaps = 1, ratio = 3.133, spread = 0.0009,
      grids = { 3.1261, 3.1290, 3.1304 }, finest = "294x131x179" },
    { outer = 25, inner = 15, height = 10, gap = 1, gaps = 1, ratio = 2.225, spread = 0.0012,
      grids = { 2.2196, 2.2210, 2.2223 }, finest = "296x130x189" },
    { outer = 25, inner = 15, height = 10, gap = 2.5, gaps = 1, ratio = 3.594, spread = 0.0013,
      grids = { 3.5837, 3.5866, 3.5889 }, finest = "236x114x158" },
    { outer = 40, inner = 24, height = 16, gap = 3, gaps = 1, ratio = 3.057, spread = 0.0013,
      grids = { 3.0499, 3.0509, 3.0529 }, finest = "255x119x167" },
    { outer = 63, inner = 38, height = 25, gap = 6, gaps = 1, ratio = 3.523, spread = 0.0014,
      grids = { 3.5127, 3.5160, 3.5184 }, finest = "239x115x159" },
    { outer = 63, inner = 38, height = 25, gap = 3, gaps = 2, ratio = 2.040, spread = 0.0010,
      grids = { 2.0363, 2.0369, 2.0379 }, finest = "285x106x183" },
    { outer = 50, inner = 42, height = 5, gap = 3, gaps = 1, ratio = 10.018, spread = 0.0011,
      grids = { 9.9937, 10.0017, 10.0070 }, finest = "250x126x156" },
    { outer = 20, inner = 10, height = 7, gap = 2, gaps = 1, ratio = 3.292, spread = 0.0005,
      grids = { 3.2864, 3.2893, 3.2901 }, finest = "239x112x154" },
    { outer = 36, inner = 23, height = 30, gap = 3, gaps = 1, ratio = 2.766, spread = 0.0005,
      grids = { 2.7610, 2.7644, 2.7651 }, finest = "246x117x176" },
    { outer = 60, inner = 50, height = 12, gap = 8, gaps = 1, ratio = 12.602, spread = 0.0002,
      centre = 0.9197, slope = -16.2, grids = { 12.5833, 12.5971, 12.5986 },
      finest = "231x125x156" },
  },
}
