-- Finding cores, materials, sensors and wires; own folders of cards.
local ef = require "entrefer"
local lfs = require "lfs"
local support = require "tests.support"
local near, refuses = support.near, support.refuses

local function names(list)
  local out = {}
  for i, record in ipairs(list) do out[i] = record.name end
  return table.concat(out, ", ")
end

describe("find", function()
  it("gives the sizes that a limit leaves, from the smallest", function()
    -- Effective areas of the tables (IEC 63093-6, from memory): 76, 97.1, 125, 173, 211, 280, 368 mm2.
    assert.equal("ETD 39/20/13, ETD 44/22/15, ETD 49/25/16, ETD 54/28/19, ETD 59/31/22",
      names(ef.catalogue.find { kind = "core", shape = "ETD", min_area = "120 mm2" }))
    assert.equal("ETD 44/22/15, ETD 39/20/13", names(ef.catalogue.find { kind = "core", shape = "ETD",
      min_area = 1.2e-4, max_area = "2 cm2", descending = true }))
  end)

  it("agrees with every core looked at one by one", function()
    local found = ef.catalogue.find { kind = "core", max_volume = "10 cm3", min_window = "100 mm2",
      min_post = "8 mm" }
    local seen, count = {}, 0
    for _, record in ipairs(found) do seen[record.name] = true end
    for _, name in ipairs(ef.cores()) do
      local g = ef.core(name).geometry
      local pole = g.topology == "three_leg" and g.centre_pole or g.outer_pole
      local fits = g.effective_volume <= 10e-6 and g.window_area >= 100e-6
        and math.min(pole.width, pole.depth) >= 8e-3
      assert.equal(fits, seen[name] or false, name)
      count = count + (fits and 1 or 0)
    end
    assert(count == #found and count > 3)
    for i = 2, #found do assert(found[i - 1].volume <= found[i].volume) end
  end)

  it("keeps the limit itself", function()
    local area = ef.core "RM 10".geometry.effective_area
    assert.equal("RM 10", names(ef.catalogue.find { kind = "core", shape = "RM", min_area = area,
      max_area = area }))
  end)

  it("gives plain records with source and confidence", function()
    local record = ef.catalogue.find { kind = "core", name = "etd39" }[1]
    assert.equal("ETD 39/20/13", record.name)
    assert.equal("high", record.confidence)
    assert(record.source:find("IEC 63093-6", 1, true) and getmetatable(record) == nil)
    local trusted = ef.catalogue.find { kind = "core", confidence = "high" }
    for _, one in ipairs(trusted) do assert.equal("high", one.confidence) end
    assert(#trusted < #ef.catalogue.find { kind = "core", confidence = "medium" })
  end)

  it("reads material figures at a temperature", function()
    local function of(temperature)
      return ef.catalogue.find { kind = "material", name = "PW3b", temperature = temperature }[1]
    end
    near(ef.material "PW3b":saturation(100), of("100 degC").saturation, 1e-12)
    assert(of(100).saturation < of(25).saturation)
    for _, record in ipairs(ef.catalogue.find { kind = "material", group = "power ferrite",
      min_saturation = "0.38 T", temperature = 100 }) do
      assert(record.saturation >= 0.38 and record.group == "power ferrite")
    end
  end)

  it("finds sensors by room and axis, wires by section", function()
    assert.equal("thin linear Hall, 100 mT, thin linear Hall, 300 mT",
      names(ef.catalogue.find { kind = "sensor", max_room = "1 mm" }))
    for _, record in ipairs(ef.catalogue.find { kind = "sensor", axis = "in-plane" }) do
      assert.equal("in-plane", ef.sensor(record.name).axis)
    end
    -- ASTM B258: AWG 18 is 1.024 mm, AWG 20 0.812 mm.
    assert.equal("AWG 20, grade 1, AWG 19, grade 1, AWG 18, grade 1", names(ef.catalogue.find {
      kind = "wire", series = "AWG", grade = 1, min_diameter = "0.81 mm", max_diameter = "1.03 mm" }))
    local wire = ef.catalogue.find { kind = "wire", series = "metric", grade = 2, min_area = "0.78 mm2" }[1]
    near(1e-3, wire.diameter, 1e-12)
    -- IEC 60028: 1/58 ohm mm2/m.
    near(1 / 58 / (math.pi / 4), wire.resistance, 1e-9)
  end)

  it("takes a function and an order", function()
    local wide = ef.catalogue.find { kind = "core", shape = "E", by = "window_width", descending = true,
      where = function(record) return record.window_width > 2 * record.post end }
    for i, record in ipairs(wide) do
      assert(record.window_width > 2 * record.post)
      assert(i == 1 or wide[i - 1].window_width >= record.window_width)
    end
    assert.equal(0, #ef.catalogue.find { kind = "core", where = function() return false end })
  end)

  it("refuses what it does not know, with the nearest name", function()
    local function bad(field, pattern, query) refuses(field, pattern, ef.catalogue.find, query) end
    bad("find", "a table", nil)
    bad("find kind", "core, material, sensor, wire", {})
    bad("find kind", "did you mean \"core\"", { kind = "cor" })
    bad("min_aera", "did you mean \"min_area\"", { kind = "core", min_aera = 1 })
    bad("shape", "no field", { kind = "sensor", shape = "ETD" })
    bad("find shape", "did you mean \"ETD\"", { kind = "core", shape = "ETTD" })
    bad("find min_area", "a quantity in m2", { kind = "core", min_area = "3 mm" })
    bad("find min_area", "finite", { kind = "core", min_area = 0 / 0 })
    bad("find by", "did you mean \"volume\"", { kind = "core", by = "volum" })
    bad("find confidence", "high, low, medium", { kind = "core", confidence = "best" })
    bad("find where", "a function", { kind = "core", where = "area > 1" })
    bad("find grade", "1, 2", { kind = "wire", grade = 3 })
  end)
end)

describe("a folder of cards", function()
  local folder

  before_each(function()
    folder = os.tmpname()
    os.remove(folder)
    assert(lfs.mkdir(folder))
  end)

  after_each(function()
    for name in lfs.dir(folder) do
      if name ~= "." and name ~= ".." then os.remove(folder .. "/" .. name) end
    end
    lfs.rmdir(folder)
  end)

  local function card(name, text)
    local file = assert(io.open(folder .. "/" .. name, "w"))
    file:write(text)
    file:close()
  end

  it("gives objects of its own", function()
    card("post.lua", [[return { kind = "core", name = "post 16", shape = "ETD", source = "drawing 7",
      dimensions = { A = "44 mm", B = "22.3 mm", C = "16 mm", D = "16.5 mm", E = "33 mm", F = "16 mm" } }]])
    card("mine.lua", [[return { kind = "material", name = "batch 9", initial_permeability = 2200,
      saturation = "0.4 T" }]])
    card("points.csv", "# a curve\n")
    card("hall.lua", [[return { kind = "sensor", name = "bench Hall", sensitivity = "12 mV/mT",
      range = "150 mT", thickness = "1.2 mm" }]])
    card("litz.lua", [[return { kind = "wire", name = "bundle", litz = { strands = 40,
      strand = "0.1 mm" } }]])
    local mine = ef.catalogue.load(folder)
    local part = ef.part { core = mine.core "Post 16", material = mine.material "batch 9",
      gaps = { { length = "1 mm" } }, windings = { { turns = 10, wire = mine.wire "bundle" } } }
    assert(part:solve { current = 1 }.inductance > 0)
    assert.equal(12, mine.sensor "bench Hall".sensitivity)
    assert.equal("post 16", table.concat(mine.names "core", ", "))
    local record = mine.find { kind = "core" }[1]
    assert(record.source == "drawing 7" and record.confidence == nil)
    assert.equal(0, #mine.find { kind = "sensor", max_range = "100 mT" })
    assert.equal("bundle", mine.find { kind = "wire", min_area = "0.3 mm2" }[1].name)
  end)

  it("leaves the library's own catalogue alone", function()
    card("a.lua", [[return { kind = "sensor", name = "bench Hall", sensitivity = 10, range = 0.1,
      thickness = 1e-3 }]])
    ef.catalogue.load(folder)
    refuses("sensor", "unknown", ef.sensor, "bench Hall")
    assert.equal(0, #ef.catalogue.find { kind = "sensor", name = "bench" })
  end)

  it("reads a material's points beside its card", function()
    card("m.csv", "H [A/m], B [T]\n50, 0.12\n200, 0.3\n1000, 0.42\n")
    card("m.lua", [[return { kind = "material", name = "measured", file = "m.csv" }]])
    local measured, err = ef.try(ef.catalogue.load, folder)
    assert(measured, err and err.message)
    near(0.3, measured.material "measured":flux_density(200, 25), 1e-9)
  end)

  it("names the file and the field of a mistake", function()
    local function bad(text, field, pattern)
      card("bad.lua", text)
      local err = refuses(field, pattern, ef.catalogue.load, folder)
      assert(err.message:find("bad.lua", 1, true), err.message)
    end
    bad([[return { kind = "sensor", name = "x", sensitivity = 10, range = -1, thickness = 1e-3 }]],
      "card bad.lua, sensor range", "above 0")
    bad([[return { kind = "sensor", name = "x", sensitivty = 10 }]], "sensitivty", "sensitivity")
    bad([[return { kind = "sensor", name = "x", range = 1, thickness = 1e-3 }]], "sensor sensitivity",
      "missing")
    bad([[return { kind = "cores", name = "x" }]], "kind", "did you mean \"core\"")
    bad([[return { kind = "core" }]], "name", "a name")
    bad([[return { kind = "core", name = "x", shape = "ETD", dimensions = { A = 1 } }]], "dimension",
      "dimension")
    bad([[return 7]], "card bad.lua", "a table")
    bad([[return { kind = ]], "bad.lua", "bad.lua:1")
    bad([[return os.getenv "HOME"]], "bad.lua", "os")
    bad([[while true do end]], "instructions", "runs too long")
  end)

  it("refuses two cards of one name, no cards, no folder", function()
    local text = [[return { kind = "wire", name = "same", round = "1 mm" }]]
    card("a.lua", text)
    card("b.lua", text)
    refuses("card b.lua, name", "card a.lua", ef.catalogue.load, folder)
    os.remove(folder .. "/b.lua")
    local mine = ef.catalogue.load(folder .. "/")
    refuses("wire", "did you mean \"same\"", mine.wire, "sam")
    refuses("core", "no core card", mine.core, "E 42")
    refuses("kind", "did you mean \"wire\"", mine.names, "wires")
    refuses("core", "name of a card", mine.core, 3)
    os.remove(folder .. "/a.lua")
    refuses("cards", "card files", ef.catalogue.load, folder)
    refuses("cards", "a folder", ef.catalogue.load, folder .. "/nowhere")
    refuses("cards", "path", ef.catalogue.load, 1)
  end)
end)
