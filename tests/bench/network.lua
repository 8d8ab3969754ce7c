-- Times the part network against its targets, and against SciPy's root finder on the same equations.
local ef = require "entrefer"
local scipy = require "tests.bench.support.scipy"

local temperature = 100 -- a curve of the card, so that SciPy gets the same law from its points

-- Seconds per call: least and median of the repetitions.
local function seconds(f, calls, repetitions)
  local times = {}
  for i = 1, repetitions do
    local start = os.clock()
    for _ = 1, calls do f() end
    times[i] = (os.clock() - start) / calls
  end
  table.sort(times)
  return times[1], times[(repetitions + 1) // 2]
end

local function line(what, least, median, target)
  local verdict = target and ("target %8.4g us  %s"):format(target * 1e6,
    median <= target and "met" or "missed") or ""
  print(("  %-44s %10.2f %10.2f us  %s"):format(what, least * 1e6, median * 1e6, verdict))
end

local function measure(what, target, calls, repetitions, f)
  local least, median = seconds(f, calls, repetitions)
  line(what, least, median, target)
  return median
end

local function choke()
  return ef.part { core = "E 42/21/15", material = "PW3b",
    gaps = { { leg = "centre", length = "1.6 mm" } }, windings = { { turns = 24 } } }
end

local function ring()
  return ef.part { core = { shape = "ring", dimensions = { d1 = "40 mm", d2 = "24 mm", h = "16 mm" } },
    material = "PW3b", gaps = { { length = "1.6 mm" } }, windings = { { turns = 1 } } }
end

local part = choke()
local currents, solved = { 12, 30 }, {}

print(("  %-44s %10s %10s"):format("", "least", "median"))
for i, current in ipairs(currents) do
  local at = { current = current, temperature = temperature }
  local some = { current = current, temperature = temperature,
    only = { "flux_linkage", "gap_flux_density" } }
  measure(("%g A, full record"):format(current), 20e-6, 2000, 9, function() part:solve(at) end)
  solved[i] = measure(("%g A, two results"):format(current), 10e-6, 2000, 9,
    function() part:solve(some) end)
end
local range = { current = { from = 0, to = 40, points = 1000 }, temperature = temperature }
measure("sweep, 1000 points, five results", 10e-3, 1, 9, function() part:sweep(range) end)
measure("part", nil, 20, 9, choke)
measure("ring part", nil, 1, 9, ring)
local wanted = { inductance = 100e-6, current = 12, temperature = temperature }
measure("gap for an inductance", nil, 1, 9, function() part:gap_for(wanted) end)

local function nodes_of(branches)
  local most = 0
  for _, branch in ipairs(branches) do most = math.max(most, branch.from, branch.to) end
  return most
end

if not scipy.available() then
  print("  comparison with SciPy skipped: " .. scipy.python .. " has no scipy")
  return
end
os.execute "mkdir -p build/bench"
local points = scipy.solve({ nodes = nodes_of(part.branches), laws = { scipy.law(part.material,
  temperature) }, branches = scipy.branches(part.branches, 1),
  currents = { { currents[1] }, { currents[2] } } }, "build/bench/network.json", 200)
for i, point in ipairs(points) do
  local at = { current = currents[i], temperature = temperature }
  local off = part:solve(at).flux_linkage / point.linkage[1] - 1
  print(("  %g A: SciPy's answer in %d calls, flux linkage off by %.1e"):format(currents[i],
    point.calls, off))
  for _, way in ipairs { "seconds", "differences" } do
    local ratio = point[way] / solved[i]
    print(("    %-42s %10.0f us, ratio %.0f  target 500  %s"):format(way == "seconds"
      and "with the analytic Jacobian" or "with the finder's own differences", point[way] * 1e6,
      ratio, ratio >= 500 and "met" or "missed"))
  end
  assert(math.abs(off) < 1e-8, "the two solutions differ")
end
