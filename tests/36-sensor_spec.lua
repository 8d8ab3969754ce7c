-- Sensors, and what they read in a part's gap.
local ef = require "entrefer"
local support = require "tests.support"
local gaps = require "tests.reference.gaps"
local near, refuses = support.near, support.refuses
local mu0 = ef.mu0

local linear = { initial_permeability = 2000 }
-- The edges' tails in the middle of a pole of six gap lengths are exp(-6 pi) = 1e-8: values there are
-- compared within 1e-7.
local thin = "thin linear Hall, 300 mT"

local function e_part(gap, changes)
  local spec = { core = "E 42/21/15", material = linear, gaps = { gap or { length = 2e-3 } },
    windings = { { turns = 24 } } }
  for key, value in pairs(changes or {}) do spec[key] = value end
  return ef.part(spec)
end

local function place(part, changes)
  local spec = { part = part, sensor = thin }
  for key, value in pairs(changes or {}) do spec[key] = value end
  return ef.probe(spec)
end

describe("a sensor", function()
  it("of every class reads its offset at no field and full scale at its range", function()
    local names = ef.sensors()
    assert.is_true(#names >= 10)
    for _, name in ipairs(names) do
      local sensor = ef.sensor(name)
      assert.equal(name, sensor.name)
      near(sensor.supply / 2, sensor:voltage(0), 1e-12, name)
      local full, clipped = sensor:voltage(sensor.range)
      near(sensor.supply / 2 + sensor.sensitivity * sensor.range, full, 1e-12, name)
      assert.is_false(clipped)
      assert.is_true(sensor.thickness.min <= sensor.thickness.nom
        and sensor.thickness.nom <= sensor.thickness.max)
      assert.is_true(sensor.source:find("no source") ~= nil, name)
    end
  end)

  it("follows V = offset + S B between the rails", function()
    local sensor = ef.sensor { sensitivity = "20 mV/mT", range = "100 mT", thickness = "1 mm",
      supply = "5 V", headroom = "0.5 V", offset = "2 V" }
    near(3, sensor:voltage(0.05), 1e-12)
    near(1, sensor:voltage(-0.05), 1e-12)
    local high, at_high = sensor:voltage(1)
    local low, at_low = sensor:voltage(-1)
    near(4.5, high, 1e-12)
    near(0.5, low, 1e-12)
    assert.is_true(at_high and at_low)
    -- Beyond the range it says so even where the rail is not reached.
    local free, beyond = sensor:voltage(0.11)
    near(4.2, free, 1e-12)
    assert.is_true(beyond)
    assert.is_false(select(2, sensor:voltage(0.1)))
  end)

  it("turns round with its sign", function()
    local plus = ef.sensor { sensitivity = 20, range = 0.1, thickness = 1e-3 }
    local minus = plus:with { sign = -1 }
    near(plus:voltage(0.03) - 2.5, 2.5 - minus:voltage(0.03), 1e-12)
    near(plus:voltage(-0.03), minus:voltage(0.03), 1e-12)
  end)

  it("scales with the supply when it is ratiometric, and only then", function()
    local sensor = ef.sensor "linear Hall, 100 mT"
    assert.is_true(sensor.ratiometric)
    near(1.1 * sensor:voltage(0.04), sensor:voltage(0.04, { supply = "5.5 V" }), 1e-12)
    -- The rails move too.
    near(5.5 - sensor.headroom, sensor:voltage(10, { supply = 5.5 }), 1e-12)
    local fixed = ef.sensor "fixed-gain linear Hall, 100 mT"
    near(fixed:voltage(0.04), fixed:voltage(0.04, { supply = 5.5 }), 1e-12)
    refuses("^supply$", "above 0", sensor.voltage, sensor, 0.04, { supply = 0 })
    refuses("^flux density$", "finite", sensor.voltage, sensor, 0 / 0)
    refuses("^flux density$", "missing", sensor.voltage, sensor)
  end)

  it("takes the room of its axis", function()
    local flat, standing = ef.sensor "linear Hall, 100 mT", ef.sensor "TMR, 20 mT"
    near(flat.thickness.max, flat:room().max, 1e-12)
    near(standing.standing_height.max, standing:room().max, 1e-12)
    assert.is_true(standing:room().max > standing.thickness.max)
  end)

  it("comes as a matched pair of two elements", function()
    local pair = ef.sensor "differential Hall pair, 100 mT"
    assert.equal(2, pair.elements)
    assert.is_true(pair.gain_match > 0)
    assert.equal(1, ef.sensor "linear Hall, 100 mT".elements)
    -- In the two gaps of a ring both elements see the same field along the flux.
    local part = ef.part { core = "R 40/24/16", material = linear, windings = { { turns = 10 } },
      gaps = { { length = 2e-3, count = 2 } } }
    local units = part:solve { current = 5 }.gaps[1].units
    near(units[1].centre_flux_density, units[2].centre_flux_density, 1e-9)
    near(units[1].centre_flux_density, place(part, { sensor = pair }):read { current = 5 }.flux_density,
      1e-9)
  end)

  it("refuses cards that cannot be", function()
    local function card(changes)
      local spec = { sensitivity = 20, range = 0.1, thickness = 1e-3 }
      for key, value in pairs(changes) do spec[key] = value end
      return ef.sensor, spec
    end
    refuses("^sensor range$", "above 0", card { range = 0 })
    refuses("^sensor sensitivity$", "V/T", card { sensitivity = "20 mV" })
    refuses("^sensor thickness min$", "missing", card { thickness = { nom = 1e-3, max = 2e-3 } })
    refuses("^sensor thickness$", "min <= nom <= max", card { thickness = { min = 2e-3, nom = 1e-3,
      max = 3e-3 } })
    refuses("^sensor axis$", "did you mean \"normal\"", card { axis = "norml" })
    refuses("^sensor sign$", "from %-1 to 1", card { sign = 2 })
    refuses("^sensor elements$", "from 1 to 2", card { elements = 3 })
    refuses("^sensor temperature range$", "low, high", card { temperature_range = 5 })
    refuses("temperature range, high", "at least", card { temperature_range = { 50, 20 } })
    refuses("^sensor thickness$", "missing", ef.sensor, { sensitivity = 20, range = 0.1 })
    refuses("^sensivity$", "did you mean \"sensitivity\"", card { sensivity = 3 })
    refuses("^sensor$", "did you mean \"linear Hall, 100 mT\"", ef.sensor, "linear hal, 100 mT")
  end)
end)

describe("a probe in the middle of a gap", function()
  it("reads mu0 u / g in volts, by hand", function()
    local part = e_part()
    local s = part:solve { current = 6 }
    local density = mu0 * s.gaps[1].drop / 2e-3
    local r = place(part, { sensor = "thin linear Hall, 100 mT" }):read { current = 6 }
    near(density, r.flux_density, 1e-7)
    near(2.5 + 20 * density, r.voltage, 1e-7)
    assert.is_false(r.clipped)
    near(mu0 * 24 * 6 / 2e-3, r.estimate, 1e-12)
    near(r.flux_density / r.estimate, r.ratio, 1e-12)
    assert.same({}, r.warnings)
  end)

  it("is positive for positive current in winding 1, and turns with the current", function()
    local part = e_part()
    local probe = place(part)
    local plus, minus = probe:read { current = 5 }, probe:read { current = -5 }
    assert.is_true(plus.flux_density > 0 and plus.voltage > 2.5)
    near(plus.flux_density, -minus.flux_density, 1e-11)
    near(plus.voltage - 2.5, 2.5 - minus.voltage, 1e-10)
    -- A second winding aids it unless it is reversed.
    local two = e_part(nil, { windings = { { turns = 24 }, { turns = 24, reverse = true } } })
    assert.is_true(place(two):read { current = { 0, 5 } }.flux_density < 0)
  end)

  it("clips at the rail, not at the field", function()
    local part = e_part()
    local probe = place(part, { sensor = "thin linear Hall, 100 mT" })
    local r = probe:read { current = 40 }
    assert.is_true(r.clipped and r.flux_density > 0.1)
    near(4.8, r.voltage, 1e-12)
    near(5.3, probe:read { current = 40, supply = 5.5 }.voltage, 1e-12)
  end)

  it("reads the cosine of its tilt", function()
    local part = e_part()
    local straight = place(part):read { current = 6 }.flux_density
    for _, tilt in ipairs { 10, 45, 60 } do
      near(straight * math.cos(math.rad(tilt)),
        place(part, { tilt = tilt .. " deg" }):read { current = 6 }.flux_density, 1e-12)
    end
    assert.is_true(math.abs(place(part, { tilt = math.pi / 2 }):read { current = 6 }.flux_density)
      < 1e-15)
    refuses("^tilt$", "from", place, part, { tilt = 2 })
  end)

  it("knows which leg of a gap in several it sits in", function()
    local part = e_part { length = 1e-3, leg = "all", kind = "spacer" }
    local units = part:solve { current = 6 }.gaps[1].units
    for i, leg in ipairs { "centre", "left", "right" } do
      local probe = place(part, { leg = leg })
      near(units[i].centre_flux_density, probe:read { current = 6 }.flux_density, 1e-7)
    end
    refuses("^probe leg$", "did you mean \"left\"", place, part, { leg = "lefft" })
  end)

  it("keeps the remanent offset", function()
    local part = e_part(nil, { material = { initial_permeability = 2000, coercive_field = 15 } })
    local probe = place(part)
    near(part:solve { current = 0, remanence = 0.5 }.gaps[1].centre_flux_density,
      probe:read { current = 0, remanence = 0.5 }.flux_density, 1e-7)
  end)

  it("takes core and sensor temperatures apart", function()
    local part = e_part(nil, { material = "PW3b" })
    local probe = place(part, { sensor = "TMR, 100 mT" , gap = 1, part = e_part({ length = 3.2e-3 },
      { material = "PW3b" }) })
    local hot = probe:read { current = 20, temperature = { core = 100, sensor = 40 } }
    near(hot.flux_density, probe:read { current = 20, temperature = 100 }.flux_density, 1e-12)
    assert.same({}, hot.warnings)
    local warned = probe:read { current = 20, temperature = { core = 100, sensor = 150 } }
    assert.is_truthy(table.concat(warned.warnings):find("sensor temperature 150 degC is outside"))
  end)
end)

describe("a probe off the middle", function()
  it("reads the fall toward a straight edge", function()
    -- One edge of the conformal map (tests/reference/gaps.lua). The pole is 11.95 mm wide, the gap 1 mm:
    -- the other edges are at least 14 half gaps away, exp(-14 pi) off.
    local part = e_part { length = 1e-3 }
    for _, row in ipairs(gaps.midplane_edge) do
      local from_edge, expected = row[1], row[2]
      if from_edge >= -2 then
        for _, side in ipairs { 1, -1 } do
          local x = side * (11.95e-3 / 2 - from_edge * 0.5e-3)
          local probe = place(part, { position = { x = x } })
          near(expected, probe.relative_field, 1e-6)
          local y = side * (14.95e-3 / 2 - from_edge * 0.5e-3)
          near(expected, place(part, { position = { y = y } }).relative_field, 1e-6)
        end
      end
    end
  end)

  it("reads the field of a round post as mode matching does", function()
    -- Radius 8 mm stands for 1. The closed profile is a straight edge's: 1.2 % up to 0.05 radii from the
    -- round edge (docs/methods/gap.md).
    for _, row in ipairs(gaps.round_post_field) do
      local part = ef.part { material = linear, windings = { { turns = 20, leg = "frame" } },
        gaps = { { leg = "post", length = row[1] * 8e-3 } },
        core = { shape = "custom", sections = {
          { name = "post", length = 40e-3, area = math.pi * 64e-6,
            pole = { shape = "round", diameter = 16e-3 } },
          { name = "frame", length = 110e-3, area = 230e-6 } } } }
      local probe = place(part, { position = { x = row[2] * 8e-3 } })
      near(row[3], probe.relative_field, 0.012)
      near(probe.relative_field, place(part, { position = { x = row[2] * 4.8e-3, y = -row[2] * 6.4e-3 } })
        .relative_field, 1e-9)
    end
  end)

  it("reads the radial slope in a ring's gap", function()
    local row = gaps.rings[1]
    local part = ef.part { core = { shape = "ring", dimensions = { d1 = row.outer * 1e-3,
      d2 = row.inner * 1e-3, h = row.height * 1e-3 } }, material = linear,
      gaps = { { length = row.gap * 1e-3 } }, windings = { { turns = 1 } } }
    -- 3-D finite volumes: field in the middle relative to mu0 u/g, and its slope in 1/m. The slope is a
    -- small difference of large terms: 1 per metre.
    local s = part:solve { current = 10 }
    near(row.centre, s.gaps[1].centre_flux_density / (mu0 * s.gaps[1].drop / (row.gap * 1e-3)), 2e-3)
    local slope = (place(part, { position = { x = 1e-3 } }).relative_field - 1) / 1e-3
    assert.is_true(math.abs(slope - row.slope) < 1)
    near(slope, -(place(part, { position = { x = -1e-3 } }).relative_field - 1) / 1e-3, 1e-9)
  end)

  it("warns where the closed profile does not hold", function()
    local part = e_part { length = 2e-3 }
    local function warned(position)
      return #place(part, { position = position }).warnings > 0
    end
    assert.is_false(warned { x = 3e-3, y = 2e-3, z = 0.4e-3 })
    -- A quarter of the gap from the middle plane, one gap length outside the pole.
    assert.is_true(warned { z = 0.6e-3 })
    assert.is_true(warned { x = 11.95e-3 / 2 + 2.1e-3 })
    assert.is_false(warned { x = 11.95e-3 / 2 + 1.9e-3 })
    local text = place(part, { position = { z = 0.6e-3 } }):read { current = 1 }.warnings[1]
    assert.is_truthy(text:find("outside the range"))
  end)

  it("gives a changed copy", function()
    local probe = place(e_part(), { position = { x = 5.5e-3 } })
    near(1, probe:with { position = {} }.relative_field, 1e-7)
    assert.is_true(probe.relative_field < 0.99)
  end)
end)

describe("a probe in a pocket", function()
  it("reads what finite volumes read on the axis", function()
    -- Pocket of radius 2 mm in a pole of 3 radii: gap and depth in radii. The reference is good to 1e-3,
    -- the mode sum to 1e-3.
    for _, row in ipairs(gaps.pocket) do
      local gap = row[1] * 2e-3
      local part = e_part { length = gap, pocket = { diameter = 4e-3, depth = row[2] * 2e-3 } }
      local s = part:solve { current = 6 }
      near(row[3] * mu0 * s.gaps[1].drop / gap, place(part):read { current = 6 }.flux_density, 2e-3)
    end
  end)

  it("has a field that is flat on the axis and joins the plain one far from it", function()
    local part = e_part { length = 1e-3, pocket = { diameter = 3e-3, depth = 1e-3 } }
    local function relative(position) return place(part, { position = position }).relative_field end
    near(1, relative {}, 1e-9)
    assert.is_true(relative { x = 1e-3 } > 1)
    near(relative { x = 1e-3 }, relative { y = -1e-3 }, 1e-12)
    near(relative { z = 0.3e-3 }, relative { z = -0.3e-3 }, 1e-12)
    -- 3 mm from the axis the gap has its own field again: relative to the pocket's middle that is more.
    local s = part:solve { current = 6 }
    near(mu0 * s.gaps[1].drop / 1e-3,
      place(part, { position = { x = 3e-3 } }):read { current = 6 }.flux_density, 1e-3)
  end)
end)

describe("the package", function()
  it("must not be thicker than the gap", function()
    local sensor = "linear Hall, 100 mT" -- 1.60 mm at most
    local err = refuses("^sensor thickness$", "the clear height of the gap", place,
      e_part { length = "1.5 mm" }, { sensor = sensor })
    near(1.6e-3, err.value, 1e-12)
    assert.is_truthy(err.allowed:find("0.0015"))
    near(1, place(e_part { length = "1.65 mm" }, { sensor = sensor }).relative_field, 1e-7)
    -- A pocket makes room.
    near(1, place(e_part { length = "1.5 mm", pocket = { diameter = "5 mm", depth = "0.1 mm" } },
      { sensor = sensor }).relative_field, 1e-12)
    -- An in-plane sensor stands across the gap.
    refuses("^sensor thickness$", "clear height", place, e_part { length = "2 mm" },
      { sensor = "TMR, 20 mT" })
  end)

  it("must lie inside the gap", function()
    refuses("^position z$", "within 0.001 m", place, e_part { length = 2e-3 }, { position = { z = 1.1e-3 } })
    refuses("^position x$", "in m", place, e_part(), { position = { x = "3 V" } })
    refuses("^w$", "no field", place, e_part(), { position = { w = 1 } })
  end)

  it("must be in a gap that is there", function()
    refuses("^probe gap$", "1 to 1", place, e_part(), { gap = 2 })
    refuses("^probe gap$", "whole number", place, e_part(), { gap = 1.5 })
    refuses("^probe gap$", "has no gap", ef.probe, { sensor = thin,
      part = e_part(nil, { gaps = {} }) })
    refuses("^part$", "a part", ef.probe, { sensor = thin })
    refuses("^sensor$", "missing", ef.probe, { part = e_part() })
  end)
end)
