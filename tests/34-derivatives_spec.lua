-- Derivatives of a part, against differences of parts built anew.
local core = require "entrefer.core"
local ef = require "entrefer"
local support = require "tests.support"
local near, refuses, slope = support.near, support.refuses, support.slope

-- A smooth law: a measured curve has kinks in its second derivative, which differences step over.
local soft = { kind = "froelich", initial_permeability = 2000, saturation = 0.4, coercive_field = 10 }

local rows = {
  { name = "three legs", core = "E 42/21/15", gaps = { { length = 1.6e-3 } } },
  { name = "two legs", core = "U 25/20/13", gaps = { { length = 0.6e-3, leg = "all" } } },
  { name = "one of two legs", core = "U 25/20/13", gaps = { { length = 0.6e-3, leg = "right" } } },
  { name = "spacer", core = "E 42/21/15", gaps = { { length = 0.7e-3, leg = "all", kind = "spacer" } } },
  { name = "several gaps", core = "ETD 39/20/13", gaps = { { length = 0.4e-3, count = 3 } } },
  -- The hole's lost flux has a derivative by central differences (1e-6), which the reference differences
  -- again with 1e-3 for the force.
  { name = "shell", core = "P 26/16", gaps = { { length = 0.4e-3 } }, by_gap = 1e-3 },
  { name = "partly wound", core = "E 42/21/15", gaps = { { length = 1e-3 } },
    span = { -10e-3, 4e-3 } },
  { name = "custom", gaps = { { length = 1e-3, leg = "post", kind = "spacer" } },
    core = { shape = "custom", sections = {
      { name = "post", length = 40e-3, area = 200e-6, pole = { shape = "round", diameter = 16e-3 } },
      { name = "frame", length = 110e-3, area = 230e-6 } } } },
  -- A ring's boundary solution moves in small steps (1e-7 of a permeance) when a pair of panels passes
  -- from one quadrature to the next, or a panel from one sector to its neighbour.
  { name = "ring", core = "R 25.3/14.8/10", gaps = { { length = 1e-3 } }, by_gap = 1e-3 },
  { name = "ring with two gaps", core = "R 40/24/16", gaps = { { length = 1e-3, count = 2 } },
    by_gap = 1e-3 },
}

local function build(row, changes)
  local spec = { core = row.core, material = soft, gaps = row.gaps,
    windings = { { turns = 20, span = row.span } } }
  for key, value in pairs(changes or {}) do spec[key] = value end
  return ef.part(spec)
end

-- Currents that bring the core to about 0.1 T, near its knee and far beyond.
local function currents(part)
  local easy = 0.1 / math.abs(part:solve { current = 1 }.core_flux_density)
  return { easy, 5 * easy, 60 * easy }
end

local scalars = { "flux_linkage", "inductance", "incremental_inductance", "energy", "coenergy" }

-- Compares with differences over a rebuilding function; quantities that hardly move are compared
-- against the size of what would be a full change.
local function compare(got, build_at, current, x, step, tolerance, label)
  local base, solved = build_at(x):solve { current = current }, {}
  local function solved_at(at)
    solved[at] = solved[at] or build_at(at):solve { current = current }
    return solved[at]
  end
  local function check(value, scale, read, what)
    local numeric = slope(function(at) return read(solved_at(at)) end, x, step)
    local size = math.max(math.abs(numeric), math.abs(scale) / x * 1e-2)
    assert(math.abs(value - numeric) <= tolerance * size, ("%s, %s: expected %.10g, got %.10g")
      :format(label, what, numeric, value))
  end
  for _, name in ipairs(scalars) do
    check(got[name], base[name], function(s) return s[name] end, name)
  end
  for name, limb in pairs(base.limbs) do
    check(got.limbs[name].flux_density, limb.flux_density,
      function(s) return s.limbs[name].flux_density end, name)
  end
  for i, gap in ipairs(base.gaps) do
    for _, name in ipairs { "centre_flux_density", "flux", "force" } do
      check(got.gaps[i][name], gap[name], function(s) return s.gaps[i][name] end, "gap " .. name)
    end
  end
end

describe("the derivative by", function()
  it("a gap's length is that of rebuilt parts", function()
    for _, row in ipairs(rows) do
      local length = row.gaps[1].length
      local function build_at(x)
        local gap = {}
        for key, value in pairs(row.gaps[1]) do gap[key] = value end
        gap.length = x
        return build(row, { gaps = { gap } })
      end
      local part = build(row)
      for _, current in ipairs(currents(part)) do
        -- 1e-6: geometry by central differences of 1e-4 (1e-8 and more where a term cancels), the
        -- reference of fourth order with 1e-3 (1e-9), rounding of both (1e-8).
        compare(part:derivatives { current = current, by = { gap = 1 } }, build_at, current, length,
          1e-3 * length, row.by_gap or 1e-6, row.name)
      end
    end
  end)

  it("turns is that of rebuilt parts", function()
    for _, row in ipairs(rows) do
      local part = build(row)
      for _, current in ipairs(currents(part)) do
        -- Both sides exact but for the fourth-order difference with 1e-3 and rounding.
        compare(part:derivatives { current = current, by = { turns = 1 } },
          function(x) return part:with { turns = x } end, current, 20, 0.02, 1e-7, row.name)
      end
    end
  end)

  it("permeability is that of a material with a steeper foot and the same saturation", function()
    for _, row in ipairs(rows) do
      local part = build(row)
      for _, current in ipairs(currents(part)) do
        compare(part:derivatives { current = current, by = { permeability = true } }, function(x)
          -- The susceptibility is stretched; the library's permeability is 1 more.
          return build(row, { material = { kind = "froelich", saturation = 0.4,
            initial_permeability = 1 + 1999 * x } })
        end, current, 1, 2e-3, 1e-7, row.name)
      end
    end
  end)
end)

-- The part's own network with the iron of some elements scaled; the air beside it stays.
local function with_area(part, first, last, scale)
  local branches, number = {}, 0
  for i, branch in ipairs(part.branches) do
    branches[i] = { from = branch.from, to = branch.to, turns = branch.turns, elements = {} }
    for k, element in ipairs(branch.elements) do
      number = number + 1
      local copy = {}
      for key, value in pairs(element) do copy[key] = value end
      if copy.law and number >= first and number <= last then copy.area = scale * copy.area end
      branches[i].elements[k] = copy
    end
  end
  local nodes = 0
  for _, branch in ipairs(branches) do nodes = math.max(nodes, branch.from, branch.to) end
  return core.network { nodes = nodes, windings = #part.windings, laws = 1, branches = branches }
end

describe("the derivative by area", function()
  local function check(row, by, first, last)
    local part = build(row)
    local law = part.material:law(25)
    for _, current in ipairs(currents(part)) do
      local got = part:derivatives { current = current, by = { area = by } }
      local function numeric(read)
        return slope(function(x)
          local net = with_area(part, first, last, x)
          net:solve(current, law)
          return read(net)
        end, 1, 2e-3)
      end
      near(numeric(function(net) return net:linkage(1) end), got.flux_linkage, 1e-7, row.name)
      near(numeric(function(net) return net:inductance(true) end), got.incremental_inductance, 1e-6,
        row.name)
      near(numeric(function(net) return (net:energy()) end), got.energy, 1e-6, row.name)
      near(numeric(function(net) return select(2, net:energy()) end), got.coenergy, 1e-7, row.name)
      local unit = part.gap_entries[1].units[1]
      near(numeric(function(net) return select(2, net:element(unit.element)) end), got.gaps[1].flux,
        1e-6, row.name)
      near(numeric(function(net) return select(5, net:element(unit.element)) end), got.gaps[1].force,
        1e-6, row.name)
    end
  end

  it("of all iron is that of a network with scaled areas", function()
    for _, row in ipairs(rows) do check(row, "all", 1, math.huge) end
  end)

  it("of one limb is that of a network with this limb scaled", function()
    for _, name in ipairs { "centre", "left", "yoke_top_right" } do
      local limb
      for _, one in ipairs(build(rows[1]).limbs) do if one.name == name then limb = one end end
      check(rows[1], name, limb.first, limb.last)
    end
  end)

  it("of all limbs is the sum of those of each", function()
    local part = build(rows[1])
    for _, current in ipairs(currents(part)) do
      local sum = 0
      for _, limb in ipairs(part.limbs) do
        sum = sum + part:derivatives { current = current, by = { area = limb.name } }.flux_linkage
      end
      near(part:derivatives { current = current, by = { area = "all" } }.flux_linkage, sum, 1e-10)
    end
  end)
end)

describe("derivatives", function()
  it("scale with the turns as the linear circuit does", function()
    -- L ~ N^2, so dL/dN = 2 L/N; d linkage/dN = 2 linkage/N; coenergy the same.
    for _, row in ipairs(rows) do
      local part = build(row, { material = { initial_permeability = 2000 } })
      local s, d = part:solve { current = 3 }, part:derivatives { current = 3, by = { turns = 1 } }
      near(2 * s.inductance / 20, d.inductance, 1e-10, row.name)
      near(2 * s.flux_linkage / 20, d.flux_linkage, 1e-10, row.name)
      near(2 * s.coenergy / 20, d.coenergy, 1e-10, row.name)
      near(2 * s.incremental_inductance / 20, d.incremental_inductance, 1e-10, row.name)
    end
  end)

  it("of coenergy by the gap are the force where the gap is all that changes", function()
    local part = build(rows[8])
    for _, current in ipairs(currents(part)) do
      near(-part:solve { current = current }.gaps[1].force,
        part:derivatives { current = current, by = { gap = 1 } }.coenergy, 1e-7)
    end
  end)

  it("of energy and coenergy add up to that of linkage times current", function()
    for _, row in ipairs(rows) do
      local part = build(row)
      for _, by in ipairs { { gap = 1 }, { turns = 1 }, { area = "all" }, { permeability = true } } do
        for _, current in ipairs(currents(part)) do
          local d = part:derivatives { current = current, by = by }
          near(d.flux_linkage * current, d.energy + d.coenergy, 1e-9, row.name)
        end
      end
    end
  end)

  it("at no current are the limits of those at a small one", function()
    for _, row in ipairs(rows) do
      local part = build(row)
      for _, by in ipairs { { gap = 1 }, { turns = 1 }, { area = "all" }, { permeability = true } } do
        local zero = part:derivatives { current = 0, by = by }
        near(part:derivatives { current = 1e-7, by = by }.inductance, zero.inductance, 1e-6, row.name)
        near(zero.inductance, zero.incremental_inductance, 1e-12, row.name)
        assert.equal(0, zero.flux_linkage)
      end
    end
  end)

  it("say that a longer gap lowers inductance and more iron or permeability raises it", function()
    for _, row in ipairs(rows) do
      local part = build(row)
      local current = currents(part)[1]
      local function of(by) return part:derivatives { current = current, by = by }.inductance end
      assert.is_true(of { gap = 1 } < 0 and of { area = "all" } > 0 and of { permeability = true } > 0
        and of { turns = 1 } > 0, row.name)
    end
  end)

  it("of one gap by another are those of rebuilt parts", function()
    local function gaps_at(first)
      return { { length = first, position = -2e-3 }, { length = 0.7e-3, position = 1e-3 },
        { length = 0.3e-3, leg = "left", position = 1e-3 } }
    end
    local row = { core = "E 42/21/15", name = "neighbours", gaps = gaps_at(1e-3) }
    local part = build(row)
    for _, current in ipairs(currents(part)) do
      compare(part:derivatives { current = current, by = { gap = 1 } },
        function(x) return build(row, { gaps = gaps_at(x) }) end, current, 1e-3, 1e-6, 1e-6, row.name)
    end
  end)

  it("of several windings are lists and a matrix in rows", function()
    local function part_with(turns)
      return ef.part { core = "E 42/21/15", material = soft, gaps = { { length = 1e-3 } },
        windings = { { turns = 20 }, { turns = turns, leg = "left" } } }
    end
    local part, at = part_with(9), { 20, -15 }
    local d = part:derivatives { current = at, by = { turns = 2 } }
    for a = 1, 2 do
      near(slope(function(n) return part_with(n):solve { current = at }.flux_linkage[a] end, 9, 0.01),
        d.flux_linkage[a], 1e-7)
      for b = 1, 2 do
        near(slope(function(n)
          return part_with(n):solve { current = at }.incremental_inductance[a][b]
        end, 9, 0.01), d.incremental_inductance[2 * (a - 1) + b], 1e-6)
      end
    end
    assert.is_nil(d.inductance)
  end)

  it("hold where a winding ends at the gap's edge", function()
    -- As the gap grows, its edge moves under the winding, which has a kink there: the derivative lies
    -- between those of both sides.
    local function at(length)
      return ef.part { core = "E 42/21/15", material = soft, gaps = { { length = length } },
        windings = { { turns = 20, span = { -0.5e-3, 0.5e-3 } } } }
    end
    local part, current = at(1e-3), 3
    local value = part:solve { current = current }.flux_linkage
    local below = (value - at(0.999e-3):solve { current = current }.flux_linkage) / 1e-6
    local above = (at(1.001e-3):solve { current = current }.flux_linkage - value) / 1e-6
    local d = part:derivatives { current = current, by = { gap = 1 } }.flux_linkage
    local low, high = math.min(below, above), math.max(below, above)
    assert.is_true(d > low - 1e-2 * math.abs(low) and d < high + 1e-2 * math.abs(high))
  end)

  it("follow the temperature", function()
    local part = build(rows[1], { material = "PW3b" })
    for _, temperature in ipairs { 25, 100 } do
      local numeric = slope(function(n)
        return part:with { turns = n }:solve { current = 10, temperature = temperature }.flux_linkage
      end, 20, 1e-3)
      -- 1e-5: the curve's slope has corners.
      near(numeric, part:derivatives { current = 10, temperature = temperature, by = { turns = 1 } }
        .flux_linkage, 1e-5)
    end
    refuses("^temperature$", "from %-40 to 120", part.derivatives, part, { current = 1,
      temperature = 200, by = { gap = 1 } })
  end)

  it("refuse parameters that are not there", function()
    local part = build(rows[1])
    local function by(value) return part.derivatives, part, { current = 1, by = value } end
    refuses("^gap$", "1 to 1", by { gap = 2 })
    refuses("^gap$", "1 to 1", by { gap = "centre" })
    refuses("^winding$", "1 to 1", by { turns = 0 })
    refuses("^limb$", "did you mean \"centre\"", by { area = "center" })
    refuses("^permeabilty$", "did you mean \"permeability\"", by { permeabilty = true })
    refuses("^by$", "names no parameter", by {})
    refuses("^by$", "a table", by "gap")
    refuses("^by$", "a table", by(nil))
    refuses("^gap$", "has no gap", function()
      return build { core = "E 42/21/15", gaps = {} }:derivatives { current = 1, by = { gap = 1 } }
    end)
    refuses("^remanence$", "no field", part.derivatives, part, { current = 1, remanence = 1,
      by = { gap = 1 } })
  end)
end)
