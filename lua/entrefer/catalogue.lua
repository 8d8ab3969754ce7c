--- The catalogue: what the library and the user's own folders of cards hold, found by figures.
--
--    local list = ef.catalogue.find { kind = "core", shape = "ETD", min_area = "120 mm2" }
--    local mine = ef.catalogue.load "cards"
--    local core = mine.core "post 16"
--
-- @module entrefer.catalogue
local data_file = require "entrefer.data_file"
local enamel = require "entrefer.data.wires"
local fail = require "entrefer.fail"
local kinds = require "entrefer.catalogue.kinds"
local material = require "entrefer.material"
local object = require "entrefer.object"
local quantity = require "entrefer.quantity"
local sensor = require "entrefer.sensor"
local shape = require "entrefer.shape"
local wire = require "entrefer.wire"

local catalogue = {}

local constructors = { core = shape.new, material = material.new, sensor = sensor.new,
  wire = wire.new }
local trust = { high = 3, medium = 2, low = 1 }

-- The library's own objects of a kind, built anew: nothing is kept between calls.
local library = {
  core = function()
    local list = {}
    for i, name in ipairs(shape.names()) do list[i] = shape.new(name) end
    return list
  end,
  material = function()
    local list = {}
    for i, name in ipairs(material.names()) do list[i] = material.new(name) end
    return list
  end,
  sensor = function()
    local list = {}
    for i, name in ipairs(sensor.names()) do list[i] = sensor.new(name) end
    return list
  end,
  wire = function()
    local list = {}
    for _, row in ipairs(enamel) do
      for grade = 1, 2 do list[#list + 1] = wire.new { round = row[1] * 1e-3, grade = grade } end
    end
    for awg = 13, 44 do -- the sizes that the table of enamel covers
      for grade = 1, 2 do list[#list + 1] = wire.new { awg = awg, grade = grade } end
    end
    return list
  end,
}

local function sorted_names(set)
  local names = {}
  for name in pairs(set) do names[#names + 1] = name end
  table.sort(names)
  return names
end

local function kind_of(name, field)
  if not kinds[name] then fail.unknown(field, tostring(name), sorted_names(kinds)) end
  return kinds[name]
end

local function known_filters(kind)
  local known = { "kind", "name", "where", "by", "descending", "confidence" }
  for figure in pairs(kind.figures) do
    known[#known + 1], known[#known + 2] = "min_" .. figure, "max_" .. figure
  end
  for choice in pairs(kind.choices) do known[#known + 1] = choice end
  for setting in pairs(kind.settings) do known[#known + 1] = setting end
  table.sort(known)
  return known
end

local function plain(text) return (tostring(text):lower():gsub("%s+", "")) end

local function read_choice(query, choice, known)
  local value = query[choice]
  local list = known()
  for i, one in ipairs(list) do
    if one == value then return value end
    list[i] = tostring(one)
  end
  fail.unknown("find " .. choice, tostring(value), list)
end

-- Tests, each a function of a record.
local function tests_of(query, kind)
  local tests = {}
  local function limit(prefix, figure, unit, keeps)
    local given = query[prefix .. figure]
    if given == nil then return end
    local value = quantity.read(given, unit, "find " .. prefix .. figure)
    tests[#tests + 1] = function(record)
      return record[figure] ~= nil and keeps(record[figure], value)
    end
  end
  for _, figure in ipairs(sorted_names(kind.figures)) do
    local unit = kind.figures[figure]
    limit("min_", figure, unit, function(a, b) return a >= b * (1 - 1e-12) end)
    limit("max_", figure, unit, function(a, b) return a <= b * (1 + 1e-12) end)
  end
  for choice, known in pairs(kind.choices) do
    if query[choice] ~= nil then
      local value = read_choice(query, choice, known)
      tests[#tests + 1] = function(record) return record[choice] == value end
    end
  end
  if query.name ~= nil then
    local wanted = plain(query.name)
    tests[#tests + 1] = function(record) return plain(record.name):find(wanted, 1, true) ~= nil end
  end
  if query.confidence ~= nil then
    local least = trust[query.confidence]
    if not least then fail.unknown("find confidence", tostring(query.confidence), sorted_names(trust)) end
    tests[#tests + 1] = function(record) return (trust[record.confidence] or 0) >= least end
  end
  return tests
end

local function read_where(query)
  if query.where ~= nil and type(query.where) ~= "function" then
    fail("find where", query.where, "a function of a record")
  end
  return query.where
end

local function sort_records(list, query, kind)
  local by = query.by or kind.order
  if by ~= "name" and not kind.figures[by] then
    local known = sorted_names(kind.figures)
    known[#known + 1] = "name"
    fail.unknown("find by", tostring(by), known)
  end
  local sign = query.descending and -1 or 1
  table.sort(list, function(a, b)
    local va, vb = a[by], b[by]
    if va ~= vb then
      -- What has no such figure stands last.
      if va == nil or vb == nil then return vb == nil end
      if by == "name" then return (va < vb) == (sign > 0) end
      return sign * va < sign * vb
    end
    return a.name < b.name
  end)
end

-- `own`: the cards are the user's, whose confidence the library can't judge.
local function search(objects, query, own)
  if type(query) ~= "table" then fail("find", query, "a table with kind") end
  local kind = kind_of(query.kind, "find kind")
  fail.fields(query, known_filters(kind), "find")
  local settings = {}
  for name, unit in pairs(kind.settings) do
    if query[name] ~= nil then settings[name] = quantity.read(query[name], unit, "find " .. name) end
  end
  local tests, where, found = tests_of(query, kind), read_where(query), {}
  for _, item in ipairs(objects(query.kind)) do
    local record = kind.describe(item, settings)
    if own then record.confidence = nil end
    local keep = true
    for _, test in ipairs(tests) do keep = keep and test(record) end
    if keep and (not where or where(record)) then found[#found + 1] = record end
  end
  sort_records(found, query, kind)
  return found
end

--- Finds cores, materials, sensors or wires by their figures.
-- @tparam table query
--   `kind`: "core", "material", "sensor" or "wire";
--   `min_FIGURE`, `max_FIGURE`: limits on any figure of the kind (numbers in SI or text with a unit):
--   core: `area`, `minimum_area`, `length`, `volume`, `window` (m2, of one window), `window_width`,
--   `window_height`, `post` (m, smaller side of the wound leg), `height` (m, of the set along the leg);
--   material: `permeability` (initial), `saturation` (T), `coercive_field` (A/m), `resistivity` (ohm m),
--   `curie_temperature` (degC), at `temperature` (default 25 degC); sensor: `range` (T), `sensitivity`
--   (V/T), `room` (m, along the flux, thickest), `bandwidth` (Hz), `delay` (s), `noise` (T/rtHz),
--   `gain_drift` (1/K), `offset_drift` (T), `temperature` (degC, highest); wire: `diameter`, `overall`
--   (m), `area` (m2), `resistance` (ohm/m at 20 degC);
--   choices: core `shape`; sensor `axis`; wire `grade` (1, 2), `series` ("metric", "AWG"); material
--   `group`;
--   `name`: a piece of the name; `confidence`: "high" or "medium" = at least that much; `where`: a
--   function of a record that returns true to keep it; `by`: the figure, or "name", to sort by (default
--   core volume, material permeability, sensor range, wire diameter); `descending`
-- @treturn table list of plain records: `kind`, `name`, the figures (nil where the card lacks one: a
--   limit on it then drops the card), `source`, `confidence` (nil for own
--   cards), `note`
-- @raise an error table; an unknown filter gets the nearest known one
function catalogue.find(query)
  return search(function(kind) return library[kind]() end, query)
end

-- The folder's Lua files in alphabetical order.
local function card_files(folder)
  local found, lfs = pcall(require, "lfs")
  if not found then
    fail.text("cards", "a folder of cards is listed by the package luafilesystem (lfs): "
      .. tostring(lfs):match("[^\n]*"))
  end
  if lfs.attributes(folder, "mode") ~= "directory" then fail("cards", folder, "a folder") end
  local files = {}
  for name in lfs.dir(folder) do
    if name:match("%.lua$") then files[#files + 1] = name end
  end
  table.sort(files)
  if #files == 0 then fail("cards", folder, "a folder with card files, NAME.lua") end
  return files
end

local function prepared(card, folder)
  local spec = object.changed(card, {})
  spec.kind = nil
  -- The material's own field of that name is what its curves are.
  if card.kind == "material" then
    spec.kind = card.curve_kind
    spec.curve_kind = nil
    if type(spec.file) == "string" and not spec.file:match("^/") then spec.file = folder .. spec.file end
  end
  return spec
end

local function read_card(folder, file)
  local card = data_file.read(folder .. file, "card " .. file)
  local item, err = fail.try(function()
    kind_of(card.kind, "kind")
    if type(card.name) ~= "string" or card.name == "" then fail("name", card.name, "a name, as text") end
    return constructors[card.kind](prepared(card, folder))
  end)
  if not item then fail.text(("card %s, %s"):format(file, tostring(err.field)),
    ("card %s: %s"):format(file, err.message)) end
  return card.kind, item
end

local function getter(kind, items)
  return function(name)
    if type(name) ~= "string" then fail(kind, name, "the name of a card") end
    local names = {}
    for i, item in ipairs(items) do
      if plain(item.name) == plain(name) then return item end
      names[i] = item.name
    end
    if #names == 0 then fail(kind, name, ("none: the folder has no %s card"):format(kind)) end
    fail.unknown(kind, name, names)
  end
end

--- Loads a folder of cards. A card is a file NAME.lua that returns a table: `kind` = "core", "material",
-- "sensor" or "wire", `name`, and the fields of `ef.core`, `ef.material`, `ef.sensor` or `ef.wire`. A
-- material's curves are given as there (its law's kind as `curve_kind`); a `file` of digitised points is
-- looked for in the same folder. Card files are read as data: no function of Lua is in their reach.
-- @string folder
-- @treturn table a catalogue of these cards alone: `core(name)`, `material(name)`, `sensor(name)`,
--   `wire(name)` give the objects, `names(kind)` the names, `find(query)` as above. The library's own
--   catalogue is not changed.
-- @raise an error table naming the file and the field
function catalogue.load(folder)
  if type(folder) ~= "string" then fail("cards", folder, "the path of a folder") end
  local slashed = folder:gsub("/*$", "/")
  local items, seen = { core = {}, material = {}, sensor = {}, wire = {} }, {}
  for _, file in ipairs(card_files(folder)) do
    local kind, item = read_card(slashed, file)
    local key = kind .. " " .. plain(item.name)
    if seen[key] then
      fail.text(("card %s, name"):format(file), ("card %s: name %q is already that of card %s"):format(
        file, item.name, seen[key]))
    end
    seen[key] = file
    items[kind][#items[kind] + 1] = item
  end
  local loaded = { find = function(query)
    return search(function(kind) return items[kind] end, query, true)
  end }
  for kind, list in pairs(items) do loaded[kind] = getter(kind, list) end
  function loaded.names(kind)
    kind_of(kind, "kind")
    local names = {}
    for i, item in ipairs(items[kind]) do names[i] = item.name end
    table.sort(names)
    return names
  end
  return loaded
end

return catalogue
