-- Inverse questions: the answers are put back into the solution.
local ef = require "entrefer"
local support = require "tests.support"
local near, refuses = support.near, support.refuses

local cores = {
  { core = "E 42/21/15", gaps = { { length = "1 mm" } } },
  { core = "ETD 39/20/13", gaps = { { length = "0.5 mm", count = 3 } } },
  { core = "U 25/20/13", gaps = { { length = "0.5 mm", leg = "all" } } },
  { core = "E 42/21/15", gaps = { { length = "0.5 mm", leg = "all", kind = "spacer" } } },
  { core = "R 25.3/14.8/10", gaps = { { length = "1 mm" } } },
  { core = "P 26/16", gaps = { { length = "0.4 mm" } } },
}

local function build(row, turns)
  return ef.part { core = row.core, material = "PW3b", gaps = row.gaps,
    windings = { { turns = turns or 20 } } }
end

-- Roots are found to the rounding of their argument; the solutions are good to 1e-12.
local tolerance = 1e-9

describe("gap_for", function()
  it("gives a gap with the wanted inductance at current and temperature", function()
    for _, row in ipairs(cores) do
      local part = build(row)
      local current = 0.15 / part:solve { current = 1, temperature = 100 }.core_flux_density
      for _, kind in ipairs { "inductance", "incremental_inductance" } do
        local target = 0.9 * part:solve { current = current, temperature = 100 }[kind]
        local length, changed = part:gap_for { inductance = target, current = current,
          temperature = 100, incremental = kind == "incremental_inductance" }
        near(target, changed:solve { current = current, temperature = 100 }[kind], tolerance, row.core)
        near(length, changed.gap_entries[1].length, 1e-15)
        near(target, part:with { gap = length }:solve { current = current, temperature = 100 }[kind],
          tolerance, row.core)
      end
    end
  end)

  it("finds the gap it started from", function()
    for _, row in ipairs(cores) do
      local part = build(row)
      local length = part:gap_for { inductance = part:solve { current = 0 }.inductance }
      near(part.gap_entries[1].length, length, 1e-8, row.core)
    end
  end)

  it("wants a longer gap for less inductance and for more turns", function()
    local part, last = build(cores[1]), 0
    for _, target in ipairs { "120 uH", "90 uH", "60 uH", "40 uH" } do
      local length = part:gap_for { inductance = target, current = 5 }
      assert.is_true(length > last)
      last = length
    end
    last = 0
    for _, turns in ipairs { 20, 24, 30 } do
      local length = part:with { turns = turns }:gap_for { inductance = "60 uH", current = 5 }
      assert.is_true(length > last)
      last = length
    end
  end)

  it("takes the longer of two gaps, where the core has room", function()
    -- At a saturating current the incremental inductance rises with the gap, then falls.
    local part = build(cores[1])
    local function value(length)
      return part:with { gap = length }:solve { current = 20, temperature = 100 }.incremental_inductance
    end
    assert.is_true(value(0.1e-3) < value(4e-3) and value(3e-3) > value(4e-3))
    local length = part:gap_for { inductance = value(4e-3), current = 20, temperature = 100,
      incremental = true }
    near(4e-3, length, 1e-8)
    assert.is_true(value(length * 1.01) < value(length))
  end)

  it("keeps to the room that a gap has where it stands", function()
    for _, gaps in ipairs { { { length = 1e-3, position = 12e-3 } },
      { { length = 1e-3 }, { length = 1e-3, position = 4e-3 } } } do
      local part = build { core = "E 42/21/15", gaps = gaps }
      local target = 0.9 * part:solve { current = 5 }.inductance
      local length, changed = part:gap_for { inductance = target, current = 5 }
      near(target, changed:solve { current = 5 }.inductance, tolerance)
      assert.is_true(length > 1e-3)
      -- A range given by hand is taken at its word.
      refuses("^gap %d position$", "allowed", part.gap_for, part, { inductance = target, current = 5,
        longest = 9e-3 })
    end
  end)

  it("says what can be had when nothing gives it", function()
    local part = build(cores[1])
    local err = refuses("^inductance$", "from .* H %(gap .* to .* H", part.gap_for, part,
      { inductance = "10 mH", current = 5 })
    assert.equal(10e-3, err.value)
    refuses("^inductance$", "at this current", part.gap_for, part, { inductance = "100 nH", current = 5 })
    refuses("^inductance$", "at this current", part.gap_for, part, { inductance = "150 uH", current = 60,
      temperature = 100 })
    refuses("^number of gaps$", "at least one", build { core = "E 42/21/15" }.gap_for,
      build { core = "E 42/21/15" }, { inductance = "1 mH" })
    refuses("^longest$", "at least", part.gap_for, part, { inductance = 1e-4, shortest = 1e-3,
      longest = 5e-4 })
  end)
end)

describe("turns_for", function()
  it("gives turns with the wanted inductance", function()
    for _, row in ipairs(cores) do
      local part = build(row)
      for _, kind in ipairs { "inductance", "incremental_inductance" } do
        local target = 2.3 * part:solve { current = 0 }[kind]
        local whole, exact = part:turns_for { inductance = target, current = 1, temperature = 60,
          incremental = kind == "incremental_inductance" }
        near(target, part:with { turns = exact }:solve { current = 1, temperature = 60 }[kind], tolerance,
          row.core)
        assert.is_true(math.type(whole) == "integer" and whole >= exact and whole - exact < 1)
      end
    end
  end)

  it("finds the turns it started from, and does not round a whole number up", function()
    local part = build(cores[1], 24)
    local whole, exact = part:turns_for { inductance = part:solve { current = 3 }.inductance, current = 3 }
    near(24, exact, 1e-9)
    assert.equal(24, whole)
  end)

  it("rises with the wanted inductance, as its root at no current", function()
    local part, one = build(cores[1]), nil
    for _, factor in ipairs { 1, 4, 9, 16 } do
      local _, exact = part:turns_for { inductance = factor * 1e-6 }
      one = one or exact
      near(math.sqrt(factor) * one, exact, 1e-9)
    end
  end)

  it("refuses what no number of turns gives, and what does not fit", function()
    local part = build(cores[1])
    refuses("^inductance$", "allowed: below .* turns give", part.turns_for, part,
      { inductance = 1e6, current = 2000 })
    local wound = part:with { windings = { { turns = 20, wire = { round = "1 mm", grade = 1 } } } }
    refuses("^winding 1 turns$", "window", wound.turns_for, wound, { inductance = "20 mH" })
    assert.is_true(wound:turns_for { inductance = "200 uH" } > 20)
  end)
end)

describe("current_for", function()
  it("gives the current at a flux density of the core or of a limb", function()
    for _, row in ipairs(cores) do
      local part, last = build(row), 0
      for _, density in ipairs { 0.05, 0.2, 0.3, 0.36 } do
        local current = part:current_for { flux_density = density, temperature = 100 }
        local s = part:solve { current = current, temperature = 100 }
        near(density, math.abs(s.core_flux_density), tolerance, row.core)
        assert.is_true(current > last)
        last = current
      end
    end
    local part = build(cores[1])
    local current = part:current_for { flux_density = 0.2, limb = "left" }
    near(0.2, math.abs(part:solve { current = current }.limbs.left.flux_density), tolerance)
    assert.is_true(current > part:current_for { flux_density = 0.1, limb = "left" })
  end)

  it("gives the current at which the inductance has dropped", function()
    for _, row in ipairs(cores) do
      local part = build(row)
      for _, kind in ipairs { "inductance", "incremental_inductance" } do
        local last = 0
        for _, drop in ipairs { 0.1, 0.2, 0.5 } do
          local current = part:current_for { drop = drop, temperature = 100,
            incremental = kind == "incremental_inductance" }
          local zero = part:solve { current = 0, temperature = 100 }[kind]
          near(zero * (1 - drop), part:solve { current = current, temperature = 100 }[kind], tolerance,
            row.core)
          assert.is_true(current > last)
          last = current
        end
      end
      -- The incremental inductance falls first.
      assert.is_true(part:current_for { drop = 0.2, incremental = true }
        < part:current_for { drop = 0.2 })
    end
  end)

  it("is lower when the core is hot and saturates earlier", function()
    local part = build(cores[1])
    assert.is_true(part:current_for { drop = 0.2, temperature = 100 }
      < part:current_for { drop = 0.2, temperature = 25 })
  end)

  it("says so when the limit is never reached", function()
    local part = build(cores[1]):with { material = { initial_permeability = 2000 } }
    refuses("^drop$", "never reached", part.current_for, part, { drop = 0.1 })
    part = build(cores[1])
    -- More than is left of the inductance without a core.
    refuses("^drop$", "never reached", part.current_for, part, { drop = 0.99 })
    refuses("^flux density$", "never reached", part.current_for, part, { flux_density = 1e9 })
  end)

  it("refuses a question that is none", function()
    local part = build(cores[1])
    refuses("^drop$", "one of drop or flux_density", part.current_for, part, {})
    refuses("^drop$", "one of drop or flux_density", part.current_for, part, { drop = 0.1,
      flux_density = 0.1 })
    refuses("^drop$", "above 0", part.current_for, part, { drop = 0 })
    refuses("^drop$", "at most", part.current_for, part, { drop = 1 })
    refuses("^flux density$", "above 0", part.current_for, part, { flux_density = -0.1 })
    refuses("^limb$", "did you mean \"left\"", part.current_for, part, { flux_density = 0.1, limb = "lefd" })
    refuses("^number of windings$", "one winding", function()
      local two = part:with { windings = { { turns = 3 }, { turns = 4 } } }
      return two:current_for { drop = 0.1 }
    end)
  end)
end)
