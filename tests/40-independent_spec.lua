-- The network against solutions that share no code with it: SciPy's root finder on the same
-- equations, and finite elements on the field that the network stands for. Both are skipped with a
-- word where the tool is missing: `sh tests/tools/setup.sh reference` installs them.
local ef = require "entrefer"
local pot = require "tests.bench.support.pot"
local scipy = require "tests.bench.support.scipy"
local section = require "tests.bench.support.section"
local support = require "tests.support"
local near, stream = support.near, support.stream

local mm = 1e-3
local temperature = 100 -- the temperature of a curve: the law passes through the card's points

-- A law for the library and the same for SciPy.
local function laws()
  local ferrite = ef.material "PW3b"
  local froelich = { initial_permeability = 2300, saturation = 0.45 }
  local linear = { initial_permeability = 60 }
  return { ferrite, ef.material { kind = "froelich", initial_permeability = 2300,
    saturation = 0.45 }, ef.material(linear) }, { scipy.law(ferrite, temperature), froelich, linear }
end

-- A random network of 4 to 8 nodes with two windings: a loop through all nodes, so that it is
-- connected, and chords. Lengths, areas and gaps are those of parts in the hand.
local function random_network(seed)
  local random = stream(seed)
  local function between(low, high) return low * (high / low) ^ random() end
  local materials, plain = laws()
  local nodes = 4 + math.floor(5 * random())
  local spec, branches = { windings = { "1", "2" }, limbs = {}, paths = {} }, {}
  local limbs, paths = {}, {}
  for i = 1, 2 * nodes do
    local from = (i - 1) % nodes + 1
    local to = i <= nodes and from % nodes + 1 or (from + math.floor((nodes - 2) * random())) % nodes
      + 1
    local turns = { math.floor(11 * random()) - 5, math.floor(11 * random()) - 5 }
    local entry = { name = "b" .. i, from = "n" .. from, to = "n" .. to,
      turns = { ["1"] = turns[1], ["2"] = turns[2] } }
    local element
    if i <= nodes and i % 3 ~= 0 then
      local law = 1 + math.floor(3 * random())
      element = { law = law, length = between(5e-3, 80e-3), area = between(20e-6, 300e-6),
        bypass = between(1e-9, 1e-8) }
      entry.length, entry.area, entry.bypass = element.length, element.area, element.bypass
      entry.material = materials[law]
      spec.limbs[#spec.limbs + 1] = entry
      limbs[#limbs + 1] = { from = from, to = to, elements = { element }, turns = turns,
        name = entry.name, kind = "limbs" }
    else
      element = { permeance = between(1e-9, 3e-7) }
      entry.permeance = element.permeance
      spec.paths[#spec.paths + 1] = entry
      paths[#paths + 1] = { from = from, to = to, elements = { element }, turns = turns,
        name = entry.name, kind = "paths" }
    end
  end
  for _, list in ipairs { limbs, paths } do
    for _, branch in ipairs(list) do branches[#branches + 1] = branch end
  end
  return ef.network(spec), { nodes = nodes, laws = plain, branches = scipy.branches(branches, 2) },
    branches
end

local function compare(network, point, branches, currents)
  local solved = network:solve { current = currents, temperature = temperature }
  -- The root finder's own residual must be small enough for the comparison to say something.
  assert(point.residual < 1e-11, ("SciPy's residual is %g"):format(point.residual))
  local largest = 0
  for _, flux in ipairs(point.flux) do largest = math.max(largest, math.abs(flux)) end
  -- A residual of 1e-11 grows by the ratio of permeances in a loop, up to about 1e3 here.
  for i, branch in ipairs(branches) do
    local flux = solved[branch.kind][branch.name].flux
    assert(math.abs(flux - point.flux[i]) < 1e-8 * largest, ("flux of %s: %.12g, SciPy %.12g")
      :format(branch.name, flux, point.flux[i]))
  end
  for w = 1, 2 do
    assert(math.abs(solved.flux_linkage[w] - point.linkage[w]) < 1e-7 * largest)
  end
end

describe("random networks", function()
  it("have the fluxes that SciPy's root finder gives", function()
    if not scipy.available() then
      pending(scipy.python .. " has no scipy: nothing compared")
      return
    end
    for seed = 1, 6 do
      local network, spec, branches = random_network(seed)
      -- From the foot of the curves to well past the knee.
      spec.currents = { { 0.05, 0 }, { 2, -1 }, { 20, 10 } }
      local file = os.tmpname()
      local points = scipy.solve(spec, file)
      os.remove(file)
      assert.equal(3, #points)
      for i, point in ipairs(points) do compare(network, point, branches, spec.currents[i]) end
    end
  end)
end)

local function agree(method, key, case, tolerance, field)
  if not section.available() then
    pending "FreeFem++ is not installed: nothing compared"
    return
  end
  local c = method.compare(case)
  near(c.elements, c[key], tolerance, "inductance")
  assert(math.abs(c.field) < field, ("flux density in the middle of the gap is off by %.3g")
    :format(c.field))
end

describe("the ladder of an E core", function()
  -- What the method neglects: edges are those of a single corner (gap < window), the air behind the
  -- outer legs' yokes. Finite elements: below 0.1 %, see the first case.
  local function agrees(...) agree(section, "ladder", ...) end

  it("is judged by finite elements that have converged", function()
    if not section.available() then
      pending "FreeFem++ is not installed: nothing compared"
      return
    end
    local case = { shape = "E 42/21/15", gap = 0.4 * mm }
    near(section.compare(case, 24).elements, section.compare(case, 12).elements, 1.5e-3)
  end)

  it("carries the field's inductance with a gap in the centre leg", function()
    for _, gap in ipairs { 0.4, 1.6, 3 } do
      agrees({ shape = "E 42/21/15", gap = gap * mm }, 0.005, 0.005)
    end
    -- A gap of half the window's width: the corner's field is no longer small there.
    agrees({ shape = "E 42/21/15", gap = 5 * mm }, 0.01, 0.005)
    agrees({ shape = "flat", gap = 1 * mm }, 0.005, 0.005)
  end)

  it("does so with a gap near the yoke and with several gaps", function()
    agrees({ shape = "E 42/21/15", gap = 0.8 * mm, position = 13 * mm }, 0.005, 0.005)
    agrees({ shape = "E 42/21/15", gap = 0.4 * mm, count = 4 }, 0.005, 0.005)
    agrees({ shape = "E 42/21/15", gap = 0.4 * mm, count = 8 }, 0.005, 0.005)
  end)

  it("does so with a spacer", function()
    -- The outer walls' reach is a fit to 1 %; the network shares the field between the gaps to 1 %.
    agrees({ shape = "E 42/21/15", gap = 0.4 * mm, all = true }, 0.005, 0.006)
    agrees({ shape = "E 42/21/15", gap = 1.6 * mm, all = true }, 0.005, 0.015)
    agrees({ shape = "flat", gap = 0.3 * mm, all = true }, 0.008, 0.004)
  end)
end)

describe("a pot core", function()
  local function agrees(...) agree(pot, "part", ...) end

  it("carries the field's inductance with a gap in the post", function()
    -- The plane closed forms around a round post: see docs/methods/network.md. Finite elements: 0.1 %.
    for _, shape in ipairs { "P 26/16", "P 36/22", "as ETD 49" } do
      for _, gap in ipairs { 0.5, 1, 2.4 } do
        agrees({ shape = shape, gap = gap * mm }, 0.008, 0.004)
      end
    end
    agrees({ shape = "P 36/22", gap = 1 * mm, position = 3.7 * mm }, 0.008, 0.004)
  end)

  it("takes the hole through its post into account", function()
    -- Mode sum of the hole (docs/methods/gap.md) for infinitely permeable iron: the iron's own drop along
    -- the hole adds up to 1 % to the field on the axis.
    for _, gap in ipairs { 0.5, 1, 2.4 } do
      local case = { shape = "P 36/22 with hole", gap = gap * mm }
      agrees(case, 0.008, 0.015)
      if section.available() then
        local beside = pot.compare(case).beside
        assert(math.abs(beside) < 0.004, ("beside the hole the field is off by %.3g"):format(beside))
      end
    end
  end)

  it("reads low with a wide, low window, but not in the field of the gap", function()
    agrees({ shape = "wide window", gap = 1 * mm }, 0.035, 0.004)
  end)

  it("does so with a spacer", function()
    agrees({ shape = "P 36/22", gap = 0.5 * mm, all = true }, 0.006, 0.006)
    agrees({ shape = "P 36/22", gap = 2.4 * mm, all = true }, 0.02, 0.025)
  end)
end)
