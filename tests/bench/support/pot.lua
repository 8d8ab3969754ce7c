--- A pot core without slots: the library against an axisymmetric finite-element solution
-- (tests/bench/support/pot_section.edp). Nothing is left out by either but what the library's edges
-- approximate.
local ef = require "entrefer"
local run = require "tests.process".run

local pot = {}

local permeability = 3000

--- Sizes, m; those with a name of the trade have its proportions, without slots; hole only where it says so.
pot.shapes = {
  ["P 26/16"] = { d1 = 25.5e-3, d2 = 21.6e-3, d3 = 11.3e-3, h1 = 16.1e-3, h2 = 11.2e-3 },
  ["P 36/22"] = { d1 = 35.6e-3, d2 = 30.4e-3, d3 = 16e-3, h1 = 22e-3, h2 = 14.8e-3 },
  ["P 36/22 with hole"] = { d1 = 35.6e-3, d2 = 30.4e-3, d3 = 16e-3, d4 = 5.4e-3, h1 = 22e-3,
    h2 = 14.8e-3 },
  ["as ETD 49"] = { d1 = 45e-3, d2 = 36.1e-3, d3 = 16.4e-3, h1 = 49.4e-3, h2 = 35.4e-3 },
  ["wide window"] = { d1 = 50e-3, d2 = 44e-3, d3 = 16e-3, h1 = 18e-3, h2 = 10e-3 },
}

local function elements(case, d, divisions)
  local spacer = case.all and case.gap or 0
  local command = ("FreeFem++ -nw -v 0 tests/bench/support/pot_section.edp -d1 %.12g -d2 %.12g -d3 %.12g"
    .. " -hole %.12g -h1 %.12g -h2 %.12g -gap %.12g -z %.12g -all %d -mur %g -divisions %d"):format(d.d1,
    d.d2, d.d3, d.d4 or 0, d.h1 + spacer, d.h2 + spacer, case.gap, case.position or 0,
    case.all and 1 or 0, permeability, divisions)
  local done, text = run(command)
  assert(done and text:find "permeance", text)
  return tonumber(text:match "permeance (%S+)"), tonumber(text:match "density (%S+)"),
    tonumber(text:match "beside (%S+)")
end

-- Flux density half way between hole and rim.
local function beside_hole(part, d)
  local probe = ef.probe { part = part, sensor = { range = 1, sensitivity = 1,
    thickness = "1 um" }, position = { x = ((d.d4 or 0) + d.d3) / 4 } }
  return probe:read { current = 1 }.flux_density
end

--- Compares one build, one turn and one ampere.
-- @tparam table case `shape`, `gap` (m), `position` (m), `all` (spacer)
-- @int[opt=14] divisions of the finite elements between two lines of the core
-- @treturn table `part`, `elements` (H), `deviation` of the inductance, `field` = deviation of the flux
--   density in the middle of the post's gap, `beside` = the same half way between hole and rim
function pot.compare(case, divisions)
  local dimensions = pot.shapes[case.shape]
  local part = ef.part { core = { shape = "pot", dimensions = dimensions },
    material = { initial_permeability = permeability }, windings = { { turns = 1 } },
    gaps = { { leg = case.all and "all" or "centre", kind = case.all and "spacer" or "ground",
      length = case.gap, position = case.position } } }
  local solved = part:solve { current = 1 }
  local permeance, density, beside = elements(case, dimensions, divisions or 14)
  return { part = solved.inductance, elements = permeance,
    deviation = solved.inductance / permeance - 1,
    field = solved.gaps[1].centre_flux_density / density - 1,
    beside = beside_hole(part, dimensions) / beside - 1 }
end

return pot
