-- What tests/fuzz/host.c runs while memory is refused: everything that the module allocates for.
local core = require "entrefer.core"

local function reading(values)
  return setmetatable({}, { __index = function(_, key) return values[key] end })
end

return function()
  local material = core.material { kind = "curve", curves = {
    { temperature = 0, h = { 0, 10, 100 }, b = { 0, 0.1, 0.3 } },
    { temperature = 100, h = { 0, 10, 50, 100 }, b = { 0, 0.1, 0.2, 0.25 } } } }
  local law = material:law(40)
  local net = core.network { nodes = 2, windings = 2, laws = 1, branches = {
    reading { from = 1, to = 2, turns = { 3, 2 }, elements = { { law = 1, length = 0.1, area = 1e-4 } } },
    { from = 2, to = 1, elements = { { permeance = 1e-7, by_length = -1e-4 } } } } }
  net:solve({ 1, 2 }, { law })
  net:inductance(true)
  net:sensitivity { elements = { { element = 1, area = 1e-4 } }, turns = { { 1 } } }
  core.fit_law("froelich", { 10, 100, 1000 }, { 0.1, 0.25, 0.4 })
  core.shape("ring", { d1 = 0.025, d2 = 0.015, h = 0.01 })
  core.shape_effective { { length = 0.1, area = 1e-4 } }
  core.pocket({ diameter = 4e-3, depth = 1e-3 }, 1e-3)
  local failed, err = pcall(core.gap, "conformal", { pole = { shape = "hexagon" } })
  assert(failed == false and err)
  core.ring_ladder({ outer_diameter = 0.038, inner_diameter = 0.026, height = 0.008, gap = 0.004 }, 4)
  core.sha256("abc")
  local limits = { name = "n", memory = 1e7, instructions = 1e6, seconds = 10, result = 1e6 }
  local function isolated(bare, text, answer)
    limits.bare, limits.text, limits.answer, limits.request = bare, text, answer, { 1, "a" }
    return core.isolated(limits)
  end
  assert(isolated(true, "return { 1, { x = 2 } }")[2].x == 2)
  assert(isolated(false, "local q, ask = ... return (ask(q[2], 'b'):gsub('b', 'x'))",
    function(a, b) return a .. b end) == "ax")
  failed = pcall(isolated, false, "error { message = 'm', code = 'c' }")
  assert(failed == false)
end
