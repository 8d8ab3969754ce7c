-- Stack-up of a sensor in a gap, the ways out, and bobbins.
local core = require "entrefer.core"
local ef = require "entrefer"
local recipe = require "entrefer.recipe"
local reference = require "tests.reference.stackup"
local support = require "tests.support"
local near, refuses = support.near, support.refuses

-- Sums of a few decimal numbers: rounding only.
local exact = 1e-9

local function spec(changes)
  local s = { sensor = "linear Hall, 100 mT", gap_tolerance = "0.05 mm", clearance = "0.1 mm",
    adhesive = { thickness = "0.1 mm", tolerance = "0.05 mm" },
    insulation = { { name = "film", thickness = "0.05 mm", tolerance = "5 um" } },
    temperature = { low = 25, high = 25, assembly = 25 } }
  for key, value in pairs(changes or {}) do s[key] = value end
  return s
end

describe("the stack", function()
  it("adds to the sums worked by hand", function()
    for name, stacked in pairs { single = 1, double = 2 } do
      local stack, hand = ef.stack_up(spec { stacked = stacked }), reference.sums[name]
      near(hand.nominal * 1e-3, stack.nominal, exact, name .. " nominal")
      near(hand.worst_case * 1e-3, stack.worst_case, exact, name .. " worst case")
      -- Given with eight digits.
      near(hand.root_sum_square * 1e-3, stack.root_sum_square, 5e-8, name .. " root sum square")
      assert.equal(0, stack.thermal)
    end
  end)

  it("moves with temperature by the hand sum of every row", function()
    local stack = ef.stack_up(spec { temperature = { low = -40, high = 110, assembly = 25 },
      leg_height = "30 mm" })
    local by_name, total = {}, 0
    for _, item in ipairs(stack.items) do
      by_name[item.item] = item.thermal * 1e6
      total = total + item.thermal
    end
    local hot = reference.hot
    near(hot.package, by_name["sensor package"], exact)
    near(hot.adhesive, by_name.adhesive, exact)
    near(hot.film, by_name.film, exact)
    near(hot.opening, by_name["gap opens with the core"], exact)
    near(hot.closing, by_name["warm leg closes the gap"], exact)
    near(hot.sum * 1e-6, stack.thermal, exact)
    near(total, stack.thermal, 1e-12)
    assert.equal(110, stack.temperature_of_thermal)
    near(reference.sums.single.worst_case * 1e-3 + hot.sum * 1e-6, stack.worst_case, exact)
  end)

  it("is governed by the cold where a spacer shrinks more than the package", function()
    local stack = ef.stack_up(spec { gap_kind = "spacer",
      temperature = { low = -40, high = 110, assembly = 25 } })
    assert.equal(-40, stack.temperature_of_thermal)
    near(reference.cold_spacer * 1e-6, stack.thermal, exact)
  end)

  it("doesn't move when everything expands alike", function()
    local e = 11e-6
    local stack = ef.stack_up(spec { temperature = { low = -40, high = 125, assembly = 25 },
      -- The clearance is air: it has no expansion of its own.
      clearance = 0, expansion = { core = e, package = e, adhesive = e, insulation = e } })
    assert(math.abs(stack.thermal) < 1e-15)
  end)

  it("has a root sum square between the nominal sum and the worst case, equal for one tolerance", function()
    local stack = ef.stack_up(spec())
    assert(stack.nominal < stack.root_sum_square and stack.root_sum_square < stack.worst_case)
    local single = ef.stack_up(spec { adhesive = { thickness = 0 }, insulation = {},
      sensor = ef.sensor("linear Hall, 100 mT"):with { thickness = "1.55 mm" } })
    near(single.worst_case, single.root_sum_square, 1e-12)
  end)

  it("takes a standing height for an in-plane sensor", function()
    -- 3.0 + 0.1 + 0.05 + 0.1, +- (0.1 + 0.05 + 0.005 + 0.05)
    near(3.455e-3, ef.stack_up(spec { sensor = "TMR, 100 mT" }).worst_case, exact)
  end)

  it("places the element as by hand", function()
    local hand = reference.element
    local open = ef.stack_up(spec { gap = "2 mm" }).elements[1]
    near(hand.open.position * 1e-3, open.position, exact)
    near(hand.open.tolerance * 1e-3, open.tolerance, exact)
    near(hand.open.tolerance_rss * 1e-3, open.tolerance_rss, 2e-6)
    local glued = ef.stack_up(spec { gap = "2 mm", element_side = "glued" }).elements[1]
    near(hand.glued.position * 1e-3, glued.position, exact)
    near(hand.glued.tolerance * 1e-3, glued.tolerance, exact)
    near(hand.second * 1e-3, ef.stack_up(spec { stacked = 2 }):places("4 mm")[2].position, exact)
  end)

  it("says where the element is only assumed", function()
    local card = { sensitivity = 20, range = 0.1, thickness = "1.5 mm" }
    local stack = ef.stack_up(spec { sensor = card, gap = "2 mm" })
    assert(stack.notes[1]:find("no element depth", 1, true))
    near(-1e-3 + 0.15e-3 + 0.75e-3, stack.elements[1].position, exact)
  end)

  it("refuses what makes no stack", function()
    local function bad(field, pattern, changes) refuses(field, pattern, ef.stack_up, spec(changes)) end
    refuses("stack_up", "a table", ef.stack_up, 3)
    refuses("sensor", "missing", ef.stack_up, {})
    bad("stakced", "did you mean \"stacked\"", { stakced = 2 })
    bad("stacked", "from 1 to 4", { stacked = 5 })
    bad("stacked", "a whole number", { stacked = 1.5 })
    bad("clearance", "at least 0", { clearance = -1e-3 })
    bad("clearance", "a quantity in m", { clearance = "1 A" })
    bad("adhesive tolerance", "from 0 to 0.0001", { adhesive = { thickness = 1e-4, tolerance = 2e-4 } })
    bad("adhesive layers", "from 2 to 5", { stacked = 2, adhesive = { layers = 1 } })
    bad("insulation 1 side", "glued, open", { insulation = { { thickness = 1e-4, side = "top" } } })
    bad("insulation 1 thickness", "missing", { insulation = { {} } })
    bad("insulation", "a list", { insulation = "film" })
    bad("temperature low", "at most temperature high", { temperature = { low = 130 } })
    bad("gap_kind", "ground, spacer, sawn", { gap_kind = "cut" })
    bad("element_side", "open, glued", { element_side = "up" })
    bad("gap_tolerance", "finite", { gap_tolerance = 0 / 0 })
    bad("expansion core", "from %-0.001 to 0.001", { expansion = { core = 1 } })
    bad("sensor element depth", "thickness", { sensor = ef.sensor("linear Hall, 100 mT")
      :with { element_depth = "2 mm" } })
    refuses("basis", "worst case, root sum square", function()
      ef.stack_up(spec()):smallest_gap("average")
    end)
  end)
end)

local function part(changes)
  local p = { core = "ETD 39/20/13", material = "PW3b", gaps = { { length = "1 mm" } },
    windings = { { turns = 31 } } }
  for key, value in pairs(changes or {}) do p[key] = value end
  return ef.part(p)
end

local function request(changes)
  local r = { part = part(), inductance = "180 uH", current = 4.4, trip = 5.2, temperature = 100 }
  for key, value in pairs(changes or {}) do r[key] = value end
  return r
end

local function named(found, name)
  for _, way in ipairs(found.ways) do
    if way.name == name then return way end
  end
  error("no way is called " .. name)
end

describe("the ways out", function()
  local stack = ef.stack_up(spec())
  local found = stack:ways_out(request())

  it("start from the gap that the inductance wants", function()
    near(part():gap_for { inductance = 180e-6, current = 4.4, temperature = 100 }, found.wanted, 1e-9)
    near(stack.worst_case, found.needed, 1e-12)
    assert.equal(false, found.fits)
    assert(found.ways[1].why:find("clear height", 1, true))
  end)

  it("give figures that the part itself confirms", function()
    local feasible = 0
    for _, way in ipairs(found.ways) do
      if way.part then
        local s = way.part:solve { current = 4.4, temperature = 100 }
        local t = way.part:solve { current = 5.2, temperature = 100 }
        near(s.inductance, way.inductance, 1e-12, way.name)
        near(t.core_flux_density, way.core_flux_density, 1e-12, way.name)
        if way.feasible then
          feasible = feasible + 1
          near(180e-6, s.inductance, 1e-3, way.name)
          assert(t.core_flux_density <= found.limit)
          assert(not way.clear_height or way.clear_height >= way.needed * (1 - 1e-9), way.name)
        else
          assert(way.why ~= "", way.name)
        end
      end
    end
    assert(feasible >= 4)
  end)

  it("read at the element by the probe's own field", function()
    local way = named(found, "more turns, longer gap")
    local probe = ef.probe { part = way.part, sensor = stack.sensor,
      position = { z = stack:places(way.gap)[1].position } }
    near(probe:read { current = 4.4, temperature = 100 }.flux_density / 4.4,
      way.flux_density_per_ampere, 1e-9)
  end)

  it("pay for a longer gap with fewer turns than the square root of the lengths, by fringing", function()
    local way = named(found, "more turns, longer gap")
    local ratio = way.turns / 31
    near(ratio ^ 2, way.resistance_ratio, 1e-12)
    assert(ratio > 1 and ratio < math.sqrt(way.gap / found.wanted))
    -- Same flux linkage: turns times core flux density stay; what fringes past the largest section and
    -- leaks along the leg moves it by some per cent.
    near(31 * found.ways[1].core_flux_density, way.turns * way.core_flux_density, 0.05)
  end)

  it("lose inductance less than in proportion when only the gap grows", function()
    local way = named(found, "longer gap, same turns")
    assert(not way.feasible and way.why:find("inductance %d+%.%d %% short"))
    assert(way.inductance > 180e-6 * found.wanted / way.gap and way.inductance < 180e-6)
  end)

  it("find two gaps in series shorter than half of one: each fringes less", function()
    local way = named(found, "two gaps in series")
    assert(not way.feasible and 2 * way.gap < found.wanted)
  end)

  it("find outer gaps longer than the centre's: they fringe more, the window leaks", function()
    assert(named(found, "gap in the outer legs").gap > found.wanted)
  end)

  it("take the next smaller core of the family with a lower section and more turns", function()
    local way, base = named(found, "smaller core"), ef.core "ETD 39/20/13"
    assert.equal("ETD 34/17/11", way.core)
    assert(ef.core(way.core).geometry.effective_area < base.geometry.effective_area)
    assert(way.turns > named(found, "more turns, longer gap").turns)
  end)

  it("count the pocket's depth tolerance in the room and in the reading", function()
    local way = named(found, "pocket in the pole faces")
    near(stack.worst_case + 0.1e-3, way.needed, 1e-9)
    near(way.gap + 2 * way.pocket.depth, way.clear_height, 1e-12)
    local rss = stack:ways_out(request { basis = "root sum square" })
    near(stack.nominal + math.sqrt(stack.tolerance_rss ^ 2 + 2 * 0.05e-3 ^ 2),
      named(rss, "pocket in the pole faces").needed, 1e-9)
    -- At a constant magnetomotive force the reading follows the pocket's own field, at the element.
    local z = stack:places(way.clear_height)[1].position
    local function field(depth)
      return core.pocket_field({ diameter = 5e-3, depth = depth, through = false }, way.gap, 0, z)
    end
    local slope = (field(way.pocket.depth + 0.05e-3) - field(way.pocket.depth - 0.05e-3)) / 2
      / field(way.pocket.depth)
    -- In the part the element rides with the floor and the gap's magnetomotive force moves by a few per
    -- mille.
    near(slope, way.effect.flux_density_per_ampere, 0.05)
    assert(way.effect.flux_density_per_ampere < -0.01)
    assert(math.abs(way.effect.inductance) < 0.2 * math.abs(way.effect.flux_density_per_ampere))
  end)

  it("fall off beside the pole and say where the profile ends", function()
    local close = named(stack:ways_out(request { beside = "0.5 mm" }),
      "in the fringing field beside the gap")
    local way = named(found, "in the fringing field beside the gap")
    assert(1 > close.share and close.share > way.share and way.share > 0)
    assert(way.place_effect < 0 and way.clear_height == nil)
    local far = named(stack:ways_out(request { beside = "3 mm" }),
      "in the fringing field beside the gap")
    assert(not far.feasible and far.why:find("field solution needed", 1, true))
  end)

  it("pick a thinner class that the gap takes, and say when a range is short", function()
    local way = named(found, "thinner sensor")
    assert(way.feasible and way.range_fits and way.sensor:find("^thin linear Hall"))
    local none = stack:ways_out(request { sensors = { "linear Hall, 100 mT" } })
    assert(named(none, "thinner sensor").why:find("no class in the list", 1, true))
    local short = named(found, "more turns, longer gap")
    near(way.range_needed * 0.8, way.part:solve { current = 5.2, temperature = 100 }
      .gaps[1].centre_flux_density, 1e-2)
    assert(not short.range_fits and short.why:find("needs a range", 1, true))
  end)

  it("say when nothing is called for", function()
    local easy = stack:ways_out(request { part = part { windings = { { turns = 60 } } } })
    assert(easy.fits and easy.wanted > easy.needed and easy.ways[1].feasible)
    assert(named(easy, "more turns, longer gap").why:find("not called for", 1, true))
  end)

  it("add turns until the core is within its limit", function()
    local many = stack:ways_out(request { trip = 8 })
    assert(many.saturates)
    local way = named(many, "more turns, longer gap")
    assert(way.core_flux_density <= many.limit and way.gap >= many.needed)
    assert(not named(many, "thinner sensor").feasible)
  end)

  it("know legs by core: one leg of a two-leg core, none on a ring", function()
    local u = stack:ways_out(request { part = part { core = "U 25/20/13" } })
    local one = named(u, "gap in one leg only")
    assert(one.gap > 1.9 * u.wanted)
    local ring = stack:ways_out { part = part { core = "R 25/15/10" }, inductance = "100 uH", current = 1 }
    assert(not named(ring, "gap in another leg").feasible)
    assert(not named(ring, "pocket in the pole faces").feasible)
  end)

  it("check the wire that is given", function()
    local thick = part { windings = { { turns = 31, wire = { round = "1.8 mm" } } } }
    local way = named(stack:ways_out(request { part = thick }), "more turns, longer gap")
    assert.equal(true, way.same_wire_fits)
    local small = named(stack:ways_out(request { part = thick }), "smaller core")
    assert.equal(false, small.same_wire_fits)
    assert(small.why:find("thinner wire", 1, true))
  end)

  it("refuse what asks no question", function()
    local function bad(field, pattern, changes)
      refuses(field, pattern, function() stack:ways_out(request(changes)) end)
    end
    bad("tripp", "did you mean \"trip\"", { tripp = 6 })
    bad("trip", "at least 4.4", { trip = 3 })
    bad("inductance", "at this current", { inductance = "10 mH" })
    bad("basis", "worst case", { basis = "mean" })
    bad("cores", "a list", { cores = "ETD 34" })
    bad("sensors", "a list", { sensors = "TMR" })
    bad("pocket diameter", "above 0", { pocket = { diameter = 0 } })
    bad("gap 1 pocket", "without", { part = part { gaps = { { length = 1e-3,
      pocket = { diameter = 4e-3, depth = 1e-4 } } } } })
    bad("number of gaps", "one entry", { part = part { gaps = { { length = 1e-3 },
      { length = 1e-3, leg = "outer" } } } })
    bad("number of windings", "one", { part = part { windings = { { turns = 9 }, { turns = 9 } } } })
    refuses("current", "missing", function() stack:ways_out { part = part(), inductance = 1e-4 } end)
    refuses("part", "a part", function() stack:ways_out { inductance = 1e-4, current = 1 } end)
  end)
end)

describe("a bobbin", function()
  it("leaves the windows and mean turns of the handbook's table", function()
    for _, row in ipairs(reference.handbook) do
      local bobbin = ef.bobbin(row[1])
      -- The rules of ETD and PQ were chosen by this table: one wall, flange and clearance per family
      -- where real bobbins grow with size; 5 % is what that leaves, 2.5 % of the mean turn.
      near(row[2] * 1e-4, bobbin.area, 0.05, row[1] .. " window")
      near(row[3] * 1e-2, bobbin:mean_turn { thickness = bobbin.depth }, 0.025, row[1] .. " turn")
    end
  end)

  it("has the mean turn of a circle and of a rectangle by hand", function()
    local round = ef.bobbin("ETD 39/20/13", { wall = "1 mm" })
    near(math.pi * (12.5 + 2 * 1 + 2) * 1e-3, round:mean_turn { thickness = "2 mm" }, exact)
    -- Leg 11.95 x 14.95. An even tube: straight 2 (11.95 + 14.95), arcs of radius 1 + 1.
    local even = ef.bobbin("E 42/21/15", { wall = "1 mm" })
    near((53.8 + 2 * math.pi * 2) * 1e-3, even:mean_turn { thickness = "2 mm" }, exact)
    -- A sharp tube: straight 2 (13.95 + 16.95), arcs of radius 1.
    local sharp = ef.bobbin("E 42/21/15", { wall = "1 mm", corner = 0 })
    near((61.8 + 2 * math.pi) * 1e-3, sharp:mean_turn { thickness = "2 mm" }, exact)
  end)

  it("counts layers", function()
    local bobbin = ef.bobbin "ETD 39/20/13"
    local wire = ef.wire { round = "1 mm" }
    local per_layer = math.floor(bobbin.breadth / wire.overall_diameter)
    local one, built = bobbin:mean_turn { turns = per_layer, wire = wire }
    assert.equal(1, built.layers)
    local _, two = bobbin:mean_turn { turns = per_layer + 1, wire = wire, interlayer = "0.05 mm" }
    assert.equal(2, two.layers)
    near(2 * wire.overall_diameter + 0.05e-3, two.thickness, exact)
    near(one, bobbin:mean_turn { layers = 1, wire = wire }, exact)
    -- On top of another layer every turn is longer by 2 pi times what lies below.
    near(one + 2 * math.pi * 1e-3, bobbin:mean_turn { layers = 1, wire = wire, start = "1 mm" }, exact)
    local _, foil = bobbin:mean_turn { turns = 10,
      wire = { foil = { thickness = "0.1 mm", breadth = "24 mm", insulation = "0.05 mm" } } }
    near(10 * 0.15e-3, foil.thickness, exact)
  end)

  it("gives a part its room", function()
    local bobbin = ef.bobbin("ETD 39/20/13", { margin = "2 mm" })
    local built = part { bobbin = bobbin:for_part(), windings = { { turns = 20,
      wire = { round = "1 mm" } } } }
    near(20 * ef.wire { round = "1 mm" }.overall_diameter ^ 2 / bobbin.area, built.fill, exact)
  end)

  it("has the windows of its core", function()
    assert.equal(2, #ef.bobbin("ETD 39/20/13").windows)
    assert.equal(1, #ef.bobbin("U 25/20/13").windows)
    local one, both = ef.bobbin("U 25/20/13"), ef.bobbin("U 25/20/13", { wound_legs = 2 })
    -- Window 8.4: wall and clearance once, or walls twice and the clearance shared.
    near(8.4e-3 - one.wall - one.clearance, one.depth, exact)
    near((8.4e-3 - both.clearance) / 2 - both.wall, both.depth, exact)
    local ring = ef.bobbin("R 25/15/10", { wall = "0.5 mm", hole = 0.4 })
    near(7.5e-3 * 0.6 - 0.5e-3, ring.depth, exact)
    near(math.pi * (7.0e-3 ^ 2 - 3.0e-3 ^ 2), ring.area, exact)
    for _, name in ipairs(ef.cores()) do
      local bobbin = ef.bobbin(name)
      assert(bobbin.area < bobbin.windows[1].core_area and bobbin.depth > 0, name)
    end
  end)

  it("refuses what is no bobbin", function()
    local function bad(field, pattern, core_name, overrides)
      refuses(field, pattern, ef.bobbin, core_name, overrides)
    end
    bad("wal", "did you mean \"wall\"", "ETD 39", { wal = 1 })
    bad("bobbin wall", "less", "ETD 39", { wall = "9 mm" })
    bad("bobbin flange", "below", "ETD 39", { flange = "15 mm" })
    bad("bobbin corner", "rectangular", "ETD 39", { corner = 1e-3 })
    bad("bobbin corner", "at most", "E 42/21/15", { corner = "20 mm" })
    bad("bobbin hole", "ring", "ETD 39", { hole = 0.5 })
    bad("bobbin wound_legs", "two%-leg", "ETD 39", { wound_legs = 2 })
    bad("core", "a family", { shape = "custom", sections = { { length = 0.1, area = 1e-4 } } })
    local bobbin = ef.bobbin "ETD 39"
    refuses("mean_turn thickness", "at most", bobbin.mean_turn, bobbin, { thickness = "9 mm" })
    refuses("mean_turn", "one of thickness", bobbin.mean_turn, bobbin, {})
    refuses("mean_turn", "one of thickness", bobbin.mean_turn, bobbin, { thickness = 1e-3, layers = 2 })
    refuses("mean_turn wire", "a wire", bobbin.mean_turn, bobbin, { layers = 2 })
    refuses("mean_turn wire", "breadth", bobbin.mean_turn, bobbin,
      { turns = 2, wire = { round = "1 mm", overall = "40 mm" } })
  end)
end)

describe("the recipe", function()
  local loaded = recipe.load "recipes/gap-stack-up.lua"

  it("opens with a verdict and shows stack and ways", function()
    local results, page = recipe.run(loaded, {})
    assert.equal("ways out", results.outcome)
    assert(results.needed_gap > results.wanted_gap and results.ways_that_work >= 4)
    local text = page:text()
    assert(text:find("Verdict", 1, true) < text:find("Ways out", 1, true))
    assert(text:find("sum, root sum square", 1, true) and text:find("thinner sensor", 1, true))
  end)

  it("passes when the gap is long enough, and says when nothing works", function()
    assert.equal("fits", (recipe.run(loaded, { turns = 60 })).outcome)
    local results, page = recipe.run(loaded, { sensor = "TMR, 100 mT", stacked = 4 })
    assert.equal("no way", results.outcome)
    assert.equal("none", results.least_copper)
    assert(page:text():find("None of the ways out works", 1, true))
  end)

  it("runs without film and glue", function()
    local results = recipe.run(loaded, { film = 0, adhesive = 0 })
    assert(results.worst_case < 1.81e-3)
  end)
end)
