--- An E core's section in the plane: the library's ladder against a finite-element solution
-- (tests/bench/support/e_section.edp). The library's part is 3-D; with a depth of 100 m what happens in
-- front of and behind the core is below 1e-4 of the whole.
local ef = require "entrefer"
local run = require "tests.process".run

local section = {}

local depth, permeability = 100, 5000

section.shapes = {
  ["E 42/21/15"] = { A = 42.15e-3, B = 21e-3, C = depth, D = 15.15e-3, E = 30.1e-3, F = 11.95e-3 },
  -- As of a planar core: windows much wider than high (invented).
  flat = { A = 52.15e-3, B = 9.85e-3, C = depth, D = 4e-3, E = 40.1e-3, F = 11.95e-3 },
}

--- Whether FreeFem++ can be called.
function section.available()
  return (run "command -v FreeFem++")
end

local function elements(case, dimensions, divisions)
  local height = 2 * dimensions.D + (case.all and case.gap or 0)
  local count = case.count or 1
  local arguments = { post = dimensions.F, window = (dimensions.E - dimensions.F) / 2,
    leg = (dimensions.A - dimensions.E) / 2, yoke = dimensions.B - dimensions.D, height = height,
    gap = case.gap, gaps = count, z = case.position or 0, pitch = height / count,
    all = case.all and 1 or 0, clearance = case.clearance or 0, mur = permeability,
    divisions = divisions }
  local command = { "FreeFem++ -nw -v 0 tests/bench/support/e_section.edp" }
  for name, value in pairs(arguments) do
    command[#command + 1] = ("-%s %.12g"):format(name, value)
  end
  local done, text = run(table.concat(command, " "))
  assert(done and text:find "permeance", text)
  local densities = {}
  for value in text:gmatch "density (%S+)" do densities[#densities + 1] = tonumber(value) end
  return tonumber(text:match "permeance (%S+)"), densities
end

--- Compares one build, one turn and one ampere.
-- @tparam table case `shape`, `gap` (m), `count`, `position` (m), `all` (spacer in all legs),
--   `clearance` (m, of the winding to the centre leg; the ladder knows none)
-- @int[opt=16] divisions of the finite elements between two lines of the core
-- @treturn table `ladder`, `elements` (H per metre of depth), `deviation`; `field` = largest deviation
--   of the flux density in the middle of the centre gaps
function section.compare(case, divisions)
  local dimensions = section.shapes[case.shape]
  local part = ef.part { core = { shape = "E", dimensions = dimensions },
    material = { initial_permeability = permeability }, windings = { { turns = 1 } },
    gaps = { { leg = case.all and "all" or "centre", kind = case.all and "spacer" or "ground",
      length = case.gap, count = case.count, position = case.position } } }
  local solved = part:solve { current = 1 }
  local permeance, densities = elements(case, dimensions, divisions or 16)
  local ladder, field = solved.inductance / depth, 0
  local units = solved.gaps[1].units or { solved.gaps[1] }
  for i, density in ipairs(densities) do
    local off = units[i].centre_flux_density / density - 1
    if math.abs(off) > math.abs(field) then field = off end
  end
  return { ladder = ladder, elements = permeance, deviation = ladder / permeance - 1, field = field }
end

return section
