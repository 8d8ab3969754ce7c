--- Published values for winding wire. "From memory": the document was not at hand.
return {
  --- American wire gauge, ASTM B258 (from memory, as in handbook tables for annealed copper at
  -- 20 degC): number, diameter in mm, resistance in ohm/km. Four or five digits: rel 5e-4.
  awg = {
    { -3, 11.684, 0.1608 }, { 10, 2.588, 3.277 }, { 14, 1.628, 8.286 }, { 18, 1.024, 20.95 },
    { 20, 0.8118, 33.31 }, { 24, 0.5106, 84.22 }, { 28, 0.3211, 212.9 }, { 30, 0.2546, 338.6 },
    { 36, 0.1270, 1361 }, { 40, 0.07987, 3441 },
  },

  --- Resistivity of annealed copper against temperature, ohm m: IEC 60028 (1925), 1/58 ohm mm2/m and
  -- 0.00393 per kelvin at 20 degC, evaluated with 1.7241e-8 ohm m, i.e. rel 3e-5.
  resistivity = {
    { 0, 1.588586e-8 }, { 25, 1.757979e-8 }, { 60, 1.995129e-8 }, { 100, 2.266157e-8 },
    { 125, 2.435550e-8 }, { 155, 2.638821e-8 },
  },

  --- IEC 60317-0-1, Table 1: sizes of the R 40 series between those the library holds; conductor,
  -- maximum overall diameter grade 1 and grade 2, mm (from memory). The library interpolates them;
  -- the table is rounded to 0.001 mm.
  between_sizes = {
    { 0.280, 0.312, 0.329 }, { 0.355, 0.392, 0.411 }, { 0.450, 0.491, 0.513 },
    { 0.560, 0.606, 0.630 }, { 0.710, 0.762, 0.789 }, { 0.900, 0.959, 0.989 },
    { 1.120, 1.184, 1.217 }, { 1.400, 1.468, 1.502 }, { 1.800, 1.872, 1.909 },
  },

  --- The one cell of IEC 60317-0-1, Table 1 that was read in a copy of the table, mm.
  smallest_found = { 0.100, 0.117 },
}
