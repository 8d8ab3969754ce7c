local fail = require "entrefer.fail"
local reference = require "tests.reference.wires"
local support = require "tests.support"
local table_of_sizes = require "entrefer.data.wires"
local wire = require "entrefer.wire"
local near, refuses = support.near, support.refuses

local function mm(value) return value * 1e-3 end

describe("copper", function()
  it("has the resistivity of IEC 60028 against temperature", function()
    for _, row in ipairs(reference.resistivity) do
      near(row[2], wire.copper_resistivity(row[1]), 3e-5, row[1] .. " degC")
    end
  end)

  it("follows the rule (234.5 + T)/254.5 of machine builders within its rounding", function()
    -- The same law with the inferred temperature of no resistance rounded to 0.1 K (common practice).
    for temperature = -40, 155, 15 do
      local ratio = wire.copper_resistivity(temperature) / wire.copper_resistivity(20)
      near((234.5 + temperature) / 254.5, ratio, 2.5e-4)
    end
  end)

  it("is refused where the linear law is not used", function()
    local w = wire.new { round = "1 mm" }
    refuses("temperature of copper", "from %-60 to 220", wire.copper_resistivity, 300)
    refuses("temperature of copper", "from %-60 to 220", w.resistance_per_length, w, "-100 degC")
    refuses("temperature of copper", "degC", w.resistance_per_length, w, "3 V")
  end)
end)

describe("an AWG size", function()
  it("has the diameter and resistance of the handbook table", function()
    for _, row in ipairs(reference.awg) do
      near(mm(row[2]), wire.awg_diameter(row[1]), 5e-4, "AWG " .. row[1])
      local w = wire.new { awg = row[1], overall = "15 mm" }
      near(row[3] * 1e-3, w:resistance_per_length(20), 5e-4, "AWG " .. row[1])
    end
  end)

  it("doubles its area every three numbers, nearly", function()
    -- 92^(6/39) = 2.0050: the rule of thumb behind the gauge.
    for size = -3, 40 do
      near(2, (wire.awg_diameter(size) / wire.awg_diameter(size + 3)) ^ 2, 3e-3)
    end
  end)

  it("is a whole number of the gauge", function()
    refuses("wire awg", "whole number", wire.new, { awg = 14.5 })
    refuses("wire awg", "from %-3 to 56", wire.new, { awg = 60 })
    assert.equal("AWG 14, grade 1", wire.new({ awg = "14" }).name)
  end)
end)

describe("enamelled round wire", function()
  it("has the overall diameter that was read in the standard", function()
    local size, overall = table.unpack(reference.smallest_found)
    near(mm(overall), wire.new({ round = mm(size), grade = 1 }).overall_diameter, 1e-12)
  end)

  it("meets the standard's sizes between those in the table", function()
    for _, row in ipairs(reference.between_sizes) do
      for grade = 1, 2 do
        local w = wire.new { round = mm(row[1]), grade = grade }
        -- The table's own rounding at three sizes, up to 1.5 um.
        local off = math.abs(w.overall_diameter - mm(row[1 + grade]))
        assert(off < 1.5e-6, ("%.3f mm grade %d: off by %.2g m"):format(row[1], grade, off))
      end
    end
  end)

  it("grows with the conductor and with the grade", function()
    local before = { 0, 0 }
    for step = 0, 200 do
      local diameter = 0.05e-3 * 40 ^ (step / 200)
      local overall = {}
      for grade = 1, 2 do
        overall[grade] = wire.new({ round = diameter, grade = grade }).overall_diameter
        assert(overall[grade] > before[grade])
      end
      assert(overall[2] > overall[1] and overall[1] > diameter)
      before = overall
    end
  end)

  it("comes from a table whose largest diameters exceed conductor and least enamel", function()
    for i, row in ipairs(table_of_sizes) do
      for grade = 1, 2 do assert(row[1 + grade] > row[1] + row[3 + grade], "row " .. i) end
      assert(row[5] > row[4] and (i == 1 or row[1] > table_of_sizes[i - 1][1]), "row " .. i)
    end
  end)

  it("outside the table needs its overall diameter", function()
    local err = refuses("wire conductor diameter", "give overall", wire.new, { round = "3 mm" })
    assert.equal("wire conductor diameter is \"3 mm\"; allowed: from 0.05 mm to 2 mm, the table of "
      .. "enamelled wire, or give overall", err.message)
    refuses("wire conductor diameter", "give overall", wire.new, { awg = 48 })
    local w = wire.new { round = "3 mm", overall = "3.1 mm" }
    near(3.1e-3, w.overall_diameter, 1e-15)
    refuses("wire overall diameter", "at least 0.003", wire.new { round = "1 mm" }.with, w,
      { overall = "2.9 mm" })
  end)
end)

describe("litz", function()
  local bundle = wire.new { litz = { strands = 200, strand = "0.1 mm", grade = 1 } }

  it("has the copper and the resistance of its strands in parallel", function()
    local strand = wire.new { round = "0.1 mm", grade = 1 }
    near(200 * strand.copper_area, bundle.copper_area, 1e-15)
    near(strand:resistance_per_length(85) / 200, bundle:resistance_per_length(85), 1e-14)
  end)

  it("fills its circle less than the densest packing of equal circles", function()
    -- pi/(2 sqrt 3), Thue's theorem.
    local strand = wire.new { round = "0.1 mm", grade = 1 }
    local share = 200 * (strand.overall_diameter / bundle.overall_diameter) ^ 2
    assert(share < math.pi / (2 * math.sqrt(3)), share)
  end)

  it("grows with the root of the number of strands, and by its serving", function()
    local twice = wire.new { litz = { strands = 800, strand = "0.1 mm", grade = 1 } }
    near(2 * bundle.overall_diameter, twice.overall_diameter, 1e-12)
    local served = wire.new { litz = { strands = 200, strand = "0.1 mm", serving = "40 um" } }
    near(bundle.overall_diameter + 80e-6, served.overall_diameter, 1e-12)
  end)

  it("takes a round wire as its strand", function()
    local fine = wire.new { litz = { strands = 130, strand = { awg = 48, overall = "0.04 mm" } } }
    near(130 * math.pi / 4 * wire.awg_diameter(48) ^ 2, fine.copper_area, 1e-14)
    refuses("litz strand", "round wire", wire.new, { litz = { strands = 7, strand = bundle } })
  end)

  it("names what is wrong", function()
    refuses("litz strands", "whole number", wire.new, { litz = { strands = 2.5, strand = 1e-4 } })
    refuses("litz strands", "at least 2", wire.new, { litz = { strands = 1, strand = 1e-4 } })
    refuses("strans", "did you mean \"strands\"", wire.new, { litz = { strans = 2 } })
    refuses("wire overall diameter", "at least", bundle.with, bundle, { overall = "1 mm" })
  end)
end)

describe("foil", function()
  it("has the area of its cross-section, insulation outside the copper", function()
    local f = wire.new { foil = { thickness = "0.2 mm", breadth = "25 mm", insulation = "50 um" } }
    near(5e-6, f.copper_area, 1e-14)
    near(6.25e-6, f.overall_area, 1e-14)
    -- 1 m of 5 mm2 at 20 degC: 1/58/5 ohm (IEC 60028).
    near(1 / 290, f:resistance_per_length(), 1e-14)
    refuses("foil breadth", "missing", wire.new, { foil = { thickness = 1e-4 } })
  end)
end)

describe("a wire", function()
  it("is of one kind, given by known fields", function()
    refuses("wire", "names no kind", wire.new, { grade = 2 })
    refuses("wire", "one of round, awg, litz or foil", wire.new, { round = 1e-3, awg = 18 })
    refuses("rund", "did you mean \"round\"", wire.new, { rund = 1e-3 })
    refuses("wire grade", "1 or 2", wire.new, { round = 1e-3, grade = 3 })
    refuses("wire", "a table", wire.new, "1.6 mm")
    refuses("winding 1 wire", "a wire", wire.of, 3, "winding 1 wire")
  end)

  it("can't be changed, but copied with changes", function()
    local given = { round = "1 mm", grade = 1 }
    local w = wire.new(given)
    given.grade = 2
    assert.equal(w.overall_diameter, w:with({}).overall_diameter)
    assert.is_nil(select(1, fail.try(function() w.grade = 2 end)))
    assert(w:with({ grade = 2 }).overall_diameter > w.overall_diameter)
    assert.equal(w, wire.of(w))
  end)
end)
