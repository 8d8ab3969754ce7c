--- Closed-form solutions of a gapped ring, NI = H lc + B lg / mu0 (no fringing): iron path 59 mm, gap
-- 1 mm, initial relative permeability 2000, saturation polarisation 0.4 T. The formulas are exact;
-- the values were computed from them with a residual below 1e-13 and are printed to ten digits.
return {
  iron = 59e-3, gap = 1e-3, permeability = 2000, saturation = 0.4,
  -- B = mu0 H + H/(a + b |H|): { NI (A), H (A/m), B (T), dB/dNI (T/A) }
  froelich = {
    { 50, 28.47820756, 0.06072043358, 0.001207158763 },
    { 100, 68.64079144, 0.120574569, 0.001185078489 },
    { 200, 225.2584017, 0.234626397, 0.001072596749 },
    { 300, 689.8033102, 0.3258480066, 0.0006876854011 },
    { 400, 1793.998046, 0.3696449631, 0.0002449562199 },
    { 500, 3274.208899, 0.385563488, 0.0001035724838 },
    { 800, 8130.078764, 0.4025327102, 3.595126573e-05 },
  },
  -- B = mu0 H + Js (coth(H/h) - h/H), h = Js / (3 (mui - 1) mu0): { H (A/m), B (T), NI (A) }
  langevin = {
    { 10, 0.02507349867, 20.54285627 },
    { 50, 0.1188101702, 97.49612938 },
    { 100, 0.2067278934, 170.4088306 },
    { 200, 0.2945219812, 246.1731458 },
    { 500, 0.3581657744, 314.5192672 },
    { 1000, 0.3800253623, 361.4145746 },
  },
  -- Linear ring 25/15/10: le 60.180226 mm, Ae 48.926778 mm2, 20 turns, R = (le - lg)/(mu0 mur Ae) +
  -- lg/(mu0 Ae): { mur, lg (m), R (A/Wb), L (H), B at 1 A (T) }
  linear = {
    { 2000, 0.001, 1.67458763e+07, 2.38864776e-05, 2.44104337e-02 },
    { 2000, 0.0001, 2.11505105e+06, 1.89120731e-04, 1.93269143e-01 },
    { 100, 0.001, 2.58900347e+07, 1.54499600e-05, 1.57888589e-02 },
  },
  -- Remanence: I0 = Hc le / N and B0 = mu0 Hc le / lg for lg >> le/mur (standard result, from
  -- memory; follows from Hc le + B lg/mu0 = 0): { Hc (A/m), le (m), lg (m), N, B0 (T), I0 (A) }
  remanence = {
    { 15, 0.097, 0.001, 20, 1.828407e-03, 0.072750 },
    { 12, 0.0922, 0.0005, 30, 2.780686e-03, 0.036880 },
    { 20, 0.0602, 0.002, 10, 7.564955e-04, 0.120400 },
  },
}
