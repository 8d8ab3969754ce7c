-- Deviation of the ladder from a finite-element solution of the plane; figures, no timing.
local section = require "tests.bench.support.section"

if not section.available() then
  print "  skipped: FreeFem++ is not installed"
  return
end

local mm = 1e-3
local cases = {}

local function add(shape, label, case)
  case.shape, case.label = shape, ("%s, %s, %g mm"):format(shape, label, case.gap / mm)
  cases[#cases + 1] = case
end

local post = "E 42/21/15"
for _, gap in ipairs { 0.4, 0.8, 1.6, 3, 5 } do add(post, "centre", { gap = gap * mm }) end
for _, z in ipairs { 8, 13 } do
  add(post, ("centre at %g mm"):format(z), { gap = 0.8 * mm, position = z * mm })
end
for _, count in ipairs { 2, 4, 8 } do
  add(post, count .. " in the centre", { gap = 0.4 * mm, count = count })
end
for _, gap in ipairs { 0.4, 0.8, 1.6, 3 } do add(post, "spacer", { gap = gap * mm, all = true }) end
for _, gap in ipairs { 0.3, 1 } do
  add("flat", "centre", { gap = gap * mm })
  add("flat", "spacer", { gap = gap * mm, all = true })
end
for _, clearance in ipairs { 1, 2 } do
  add(post, ("centre, winding %g mm off the leg"):format(clearance),
    { gap = 1.6 * mm, clearance = clearance * mm })
end

print(("  %-54s %12s %12s %9s %9s"):format("", "ladder", "elements", "off", "field off"))
for _, case in ipairs(cases) do
  local c = section.compare(case)
  print(("  %-54s %9.4f uH/m %9.4f uH/m %+8.2f%% %+8.2f%%"):format(case.label, c.ladder * 1e6,
    c.elements * 1e6, 100 * c.deviation, 100 * c.field))
end
