local ef = require "entrefer"
local support = require "tests.support"
local rings = require "tests.reference.rings"
local near, refuses, slope, stream = support.near, support.refuses, support.slope, support.stream

local mu0 = ef.mu0
local area = 50e-6

local function gapped_ring(material, iron, gap, turns)
  return ef.network { windings = { "w" },
    limbs = { { name = "iron", from = "a", to = "b", length = iron, area = area,
      material = material, remanence = 1, turns = { w = turns } } },
    paths = { { name = "gap", from = "b", to = "a", permeance = mu0 * area / gap } } }
end

local function closed_law(kind)
  return ef.material { kind = kind, initial_permeability = rings.permeability,
    saturation = rings.saturation }
end

describe("a gapped ring", function()
  it("solves the Froelich law as the closed form does", function()
    local ring = gapped_ring(closed_law "froelich", rings.iron, rings.gap, 1)
    for _, row in ipairs(rings.froelich) do
      local s = ring:solve { current = row[1] }
      -- The reference has ten digits.
      near(row[2], s.limbs.iron.field_strength, 1e-8)
      near(row[3], s.limbs.iron.flux_density, 1e-9)
      near(row[4], s.incremental_inductance / area, 1e-8)
    end
  end)

  it("solves the Langevin law as the parametric form does", function()
    local ring = gapped_ring(closed_law "langevin", rings.iron, rings.gap, 1)
    for _, row in ipairs(rings.langevin) do
      local s = ring:solve { current = row[3] }
      near(row[1], s.limbs.iron.field_strength, 1e-8)
      near(row[2], s.limbs.iron.flux_density, 1e-8)
    end
  end)

  it("is the textbook formula while it is linear", function()
    local le, ae, turns = 60.180226e-3, 48.926778e-6, 20
    for _, row in ipairs(rings.linear) do
      local ring = ef.network { windings = { "w" },
        limbs = { { name = "iron", from = "a", to = "b", length = le - row[2], area = ae,
          material = { initial_permeability = row[1] }, turns = { w = turns } } },
        paths = { { name = "gap", from = "b", to = "a", permeance = mu0 * ae / row[2] } } }
      local s = ring:solve { current = 1 }
      near(row[3], turns * 1 / s.paths.gap.flux, 1e-7)
      near(row[4], s.inductance, 1e-7)
      near(row[5], s.limbs.iron.flux_density, 1e-7)
    end
  end)

  it("keeps a remanent reading that does not depend on the gap", function()
    for _, row in ipairs(rings.remanence) do
      local hc, le, lg, turns = row[1], row[2], row[3], row[4]
      -- A high permeability, as the closed form assumes le/mur << lg.
      local material = ef.material { initial_permeability = 1e6, coercive_field = hc }
      local ring = gapped_ring(material, le, lg, turns)
      near(row[5], ring:solve { current = 0, remanence = 1 }.limbs.iron.flux_density, 1e-3)
      local offset = ring:solve { current = 0, remanence = 1 }.flux_linkage[1]
        / ring:solve { current = 1 }.flux_linkage[1]
      near(row[6], offset, 1e-3)
    end
  end)

  it("behaves alike at a hundredth and a hundred times the size", function()
    local material = closed_law "langevin"
    local function solved(scale)
      local ring = ef.network { windings = { "w" },
        limbs = { { name = "iron", from = "a", to = "b", length = 59e-3 * scale,
          area = area * scale ^ 2, material = material, turns = { w = 10 } } },
        paths = { { name = "gap", from = "b", to = "a", permeance = mu0 * area / 1e-3 * scale } } }
      return ring:solve { current = 30 * scale }
    end
    local one = solved(1)
    for _, scale in ipairs { 1e-2, 1e2, 1e4 } do
      local s = solved(scale)
      near(one.limbs.iron.flux_density, s.limbs.iron.flux_density, 1e-12)
      near(one.inductance * scale, s.inductance, 1e-12)
    end
  end)
end)

-- A random network: a ladder of nodes with extra branches, iron of three kinds of law, air paths of
-- four decades, windings anywhere, currents from microamperes to a million.
local materials = {
  closed_law "froelich", closed_law "langevin", ef.material "PW3b", ef.material "nickel-iron",
  ef.material { initial_permeability = 1e5 },
}

local function pick(random, list) return list[1 + math.floor(random() * #list)] end
local function decades(random, low, high) return low * (high / low) ^ random() end

local function random_network(random)
  local nodes = 2 + math.floor(random() * 12)
  local limbs, paths, windings = {}, {}, {}
  for i = 1, 1 + math.floor(random() * 3) do windings[i] = "w" .. i end
  local function turns()
    if random() < 0.5 then return nil end
    return { [pick(random, windings)] = math.floor(random() * 100) - 20 }
  end
  local function add(from, to)
    if random() < 0.6 then
      limbs[#limbs + 1] = { from = "n" .. from, to = "n" .. to, material = pick(random, materials),
        length = decades(random, 1e-4, 1), area = decades(random, 1e-7, 1e-2), turns = turns(),
        bypass = random() < 0.3 and decades(random, 1e-10, 1e-7) or nil }
    else
      paths[#paths + 1] = { from = "n" .. from, to = "n" .. to, turns = turns(),
        permeance = decades(random, 1e-11, 1e-6) }
    end
  end
  for i = 2, nodes do add(1 + math.floor(random() * (i - 1)), i) end
  for _ = 1, 1 + math.floor(random() * nodes) do
    local a, b = 1 + math.floor(random() * nodes), 1 + math.floor(random() * nodes)
    if a ~= b then add(a, b) end
  end
  local currents = {}
  for i = 1, #windings do currents[i] = (random() - 0.5) * decades(random, 1e-6, 1e6) end
  return ef.network { windings = windings, limbs = limbs, paths = paths }, currents, limbs
end

describe("random networks", function()
  local function converge(seed, count)
    local random, most = stream(seed), 0
    for i = 1, count do
      local net, currents = random_network(random)
      local s = net:solve { current = currents }
      most = math.max(most, s.iterations)
      assert.is_true(s.energy >= 0 and s.energy < math.huge, "energy of network " .. i)
    end
    -- Deep saturation doubles the field in each step, so the decades of current bound the number.
    assert.is_true(most <= 80, "iterations: " .. most)
  end

  it("all converge from a cold start", function() converge(20261, 3000) end)
  it("all converge, a hundred thousand of them #slow", function() converge(20262, 100000) end)

  it("store energy + coenergy = sum of linkage times current", function()
    local random = stream(77)
    for _ = 1, 300 do
      local net, currents = random_network(random)
      local s = net:solve { current = currents }
      local product, size = 0, 0
      for i, current in ipairs(currents) do
        product = product + s.flux_linkage[i] * current
        size = size + math.abs(s.flux_linkage[i] * current)
      end
      if size > 0 then
        assert.is_true(math.abs(s.energy + s.coenergy - product) <= 1e-9 * size)
      end
    end
  end)

  it("have symmetric inductance matrices with positive energy", function()
    local random = stream(5)
    for _ = 1, 200 do
      local net, currents = random_network(random)
      local s = net:solve { current = currents }
      if #currents > 1 then
        for _, matrix in ipairs { s.inductance, s.incremental_inductance } do
          for i = 1, #currents do
            -- A winding on a dead end has no inductance but rounding.
            assert.is_true(matrix[i][i] >= -1e-24)
            for k = 1, i - 1 do
              local scale = math.sqrt(math.max(matrix[i][i] * matrix[k][k], 0)) + 1e-20
              assert.is_true(math.abs(matrix[i][k] - matrix[k][i]) <= 1e-9 * scale)
              assert.is_true(math.abs(matrix[i][k]) <= scale * (1 + 1e-9))
            end
          end
        end
      end
    end
  end)

  it("have an iron that never falls below mu0 in its share", function()
    local random = stream(9)
    for _ = 1, 200 do
      local net, currents, limbs = random_network(random)
      local s = net:solve { current = currents }
      for i in ipairs(limbs) do
        local limb = s.limbs["limb " .. i]
        assert.is_true(math.abs(limb.flux_density)
          >= mu0 * math.abs(limb.field_strength) * (1 - 1e-9))
      end
    end
  end)
end)

describe("inductance", function()
  local net = ef.network { windings = { "a", "b" },
    limbs = {
      { name = "left", from = "bottom", to = "top", length = 0.05, area = 1e-4, material = "PW3b",
        turns = { a = 20 } },
      { name = "right", from = "top", to = "bottom", length = 0.05, area = 8e-5, material = "PW3b",
        turns = { b = 35 } } },
    paths = { { name = "leak", from = "top", to = "bottom", permeance = 2e-8 },
      { name = "shunt", from = "top", to = "bottom", permeance = 1e-8, turns = { a = 3 } } } }

  it("is the slope of flux linkage over current, in both windings", function()
    for _, i in ipairs { 0.2, 2, 12 } do
      local s = net:solve { current = { i, 0.4 }, temperature = 100 }
      for row = 1, 2 do
        local function linkage(x)
          return net:solve { current = { x, 0.4 }, temperature = 100 }.flux_linkage[row]
        end
        -- Fourth order at 0.1 %: the points of the measured curve limit it to about 1e-5.
        near(slope(linkage, i, i * 1e-3), s.incremental_inductance[row][1], 1e-4)
      end
    end
  end)

  it("times the currents gives the flux linkage when permeabilities are frozen", function()
    local s = net:solve { current = { 3, -1 } }
    for row = 1, 2 do
      near(s.flux_linkage[row], 3 * s.inductance[row][1] - s.inductance[row][2], 1e-9)
    end
  end)

  it("grows with the square of the turns in the linear range", function()
    local material = { initial_permeability = 500 }
    local one = gapped_ring(material, 0.1, 1e-3, 10):solve { current = 1 }
    local two = gapped_ring(material, 0.1, 1e-3, 20):solve { current = 1 }
    near(4 * one.inductance, two.inductance, 1e-12)
  end)
end)

describe("a saturated core", function()
  it("sends flux around itself", function()
    local function solved(bypass)
      return ef.network { windings = { "w" },
        limbs = { { name = "iron", from = "a", to = "b", length = 0.05, area = 1e-4,
          material = "PW3b", bypass = bypass, turns = { w = 50 } },
          { name = "back", from = "b", to = "a", length = 0.1, area = 4e-3, material = "PW3b" } } }
        :solve { current = 400 }
    end
    local with, without = solved(1e-8), solved(nil)
    assert.is_true(with.incremental_inductance > 2 * without.incremental_inductance)
    -- What is left without a by-pass is the iron's own mu0, in series with the back.
    near(50 ^ 2 * mu0 * 1e-4 / 0.05, without.incremental_inductance, 0.2)
  end)
end)

describe("a bad network", function()
  local limb = { name = "iron", from = "a", to = "b", length = 0.1, area = 1e-4, material = "PW3b" }
  local function with(changes, path)
    local copy = {}
    for k, v in pairs(limb) do copy[k] = v end
    for k, v in pairs(changes) do copy[k] = v end
    return ef.network, { windings = { "w" }, limbs = { copy },
      paths = { path or { from = "b", to = "a", permeance = 1e-8 } } }
  end

  it("is refused with the limb and the field named", function()
    refuses("iron length", "length", with { length = 0 })
    refuses("iron area", "area", with { area = -1 })
    refuses("iron length", "length", with { length = 0 / 0 })
    refuses("iron area", "m2", with { area = "3 V" })
    refuses("iron turns", "w", with { turns = { x = 3 } })
    refuses("permeance", "permeance", with({}, { from = "b", to = "a", permeance = 1 / 0 }))
    refuses("node", "paths", with({}, { from = "c", to = "d", permeance = 1e-8 }))
    refuses("lenght", "length", with { lenght = 1 })
    refuses("material", "PW3b", with { material = "PW9" })
    refuses("end node", "another", with { to = "a" })
    local net = ef.network { windings = { "w" }, limbs = { limb },
      paths = { { from = "b", to = "a", permeance = 1e-8 } } }
    refuses("current", "finite", net.solve, net, { current = 0 / 0 })
    refuses("number of currents", "one for each", net.solve, net, { current = { 1, 2 } })
    refuses("temperature", "120", net.solve, net, { current = 1, temperature = 500 })
  end)
end)
