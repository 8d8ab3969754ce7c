-- Deviation of a pot core's inductance from an axisymmetric finite-element solution; figures, no timing.
local pot = require "tests.bench.support.pot"
local section = require "tests.bench.support.section"

if not section.available() then
  print "  skipped: FreeFem++ is not installed"
  return
end

print(("  %-34s %11s %11s %9s %9s"):format("", "part", "elements", "off", "field off"))
for _, shape in ipairs { "P 26/16", "P 36/22", "P 36/22 with hole", "as ETD 49", "wide window" } do
  for _, all in ipairs { false, true } do
    for _, gap in ipairs { 0.5, 1, 2.4 } do
      local c = pot.compare { shape = shape, gap = gap * 1e-3, all = all }
      print(("  %-34s %8.2f nH %8.2f nH %+8.2f%% %+8.2f%%"):format(("%s, %s, %g mm"):format(shape,
        all and "spacer" or "centre", gap), c.part * 1e9, c.elements * 1e9, 100 * c.deviation,
        100 * c.field))
    end
  end
end
