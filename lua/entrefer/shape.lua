--- Cores: a size of the catalogue, a standard shape with own dimensions, or a chain of sections.
--
--    local core = ef.core "E 42/21/15"
--    local ring = ef.core { shape = "ring", dimensions = { d1 = "38 mm", d2 = "26 mm", h = "8 mm" } }
--
-- Effective parameters follow IEC 60205 (formulas from memory; see `csrc/mag/shape.h`).
-- @module entrefer.shape
local catalogue = require "entrefer.data.cores"
local core = require "entrefer.core"
local fail = require "entrefer.fail"
local object = require "entrefer.object"
local quantity = require "entrefer.quantity"

local shape = {}

local spec_fields = { "name", "shape", "dimensions", "sections", "stack", "source", "note" }
local section_fields = { "name", "length", "area", "pole" }
local pole_fields = { "shape", "diameter", "hole", "width", "depth", "corner" }
-- The dimension that grows when equal cores stand side by side.
local stack_letters = { ring = "h", U = "C", E = "C", ["planar E"] = "C" }

local methods = {}
local make, fields_of = object.class("core", methods)

-- A read-only view of plain data; pairs, ipairs and # work as on the data.
local function frozen(data)
  if type(data) ~= "table" then return data end
  local copy = {}
  for key, value in pairs(data) do copy[key] = frozen(value) end
  return setmetatable({}, {
    __index = copy, __metatable = "protected",
    __len = function() return #copy end,
    __pairs = function() return next, copy, nil end,
    __newindex = function(_, key)
      fail.text(tostring(key), ("%s of a core can't be changed; use :with{ ... } to get a copy")
        :format(tostring(key)))
    end,
  })
end

local function read_dimensions(spec)
  if type(spec.dimensions) ~= "table" then
    local letters = table.concat(core.shape_letters(spec.shape), ", ")
    fail("dimensions", spec.dimensions, "a table of " .. letters)
  end
  local read = {}
  for letter, value in pairs(spec.dimensions) do
    local unit = letter == "n" and "1" or "m" -- n counts slots
    read[letter] = quantity.read(value, unit, "dimension " .. tostring(letter))
  end
  return read
end

local function read_stack(spec, dimensions)
  local stack = quantity.read(spec.stack or 1, "1", "stack", { min = 1, max = 100 })
  if stack % 1 ~= 0 then fail("stack", stack, "a whole number of cores") end
  if stack == 1 then return 1, dimensions end
  local letter = stack_letters[spec.shape]
  if not letter then
    fail("stack", stack, ("1 for shape %s; more for ring, U, E and planar E"):format(spec.shape))
  end
  if (dimensions.r0 or 0) > 0 then fail("stack", stack, "1 for a ring with corner radius r0") end
  local stacked = {}
  for key, value in pairs(dimensions) do stacked[key] = value end
  if stacked[letter] then stacked[letter] = stack * stacked[letter] end
  return stack, stacked
end

local function read_pole(pole, label)
  if pole == nil then return nil end
  if type(pole) ~= "table" then fail(label, pole, "a table") end
  fail.fields(pole, pole_fields, label)
  local function size(field, options)
    return quantity.read(pole[field] or 0, "m", label .. " " .. field, options)
  end
  local positive, free = { positive = true }, { min = 0 }
  if pole.shape == "round" then
    local diameter = size("diameter", positive)
    return { shape = "round", width = diameter, depth = diameter, hole = size("hole", free),
      corner = 0 }
  elseif pole.shape == "rectangle" then
    return { shape = "rectangle", width = size("width", positive), depth = size("depth", positive),
      hole = 0, corner = size("corner", free) }
  end
  fail.unknown(label .. " shape", tostring(pole.shape), { "round", "rectangle" })
end

local function read_sections(list)
  if type(list) ~= "table" or #list == 0 then
    fail("sections", list, "a list of { name, length, area }")
  end
  local read, seen = {}, {}
  for i, entry in ipairs(list) do
    local label = "section " .. i
    if type(entry) ~= "table" then fail(label, entry, "a table") end
    fail.fields(entry, section_fields, label)
    local name = entry.name or label
    if seen[name] then fail(label .. " name", name, "a name that no other section has") end
    seen[name] = true
    read[i] = { name = name, pole = read_pole(entry.pole, label .. " pole"),
      length = quantity.read(entry.length, "m", label .. " length", { positive = true }),
      area = quantity.read(entry.area, "m2", label .. " area", { positive = true }) }
  end
  return read
end

local function build_custom(spec)
  if spec.dimensions ~= nil or spec.stack ~= nil then
    local field = spec.stack ~= nil and "stack" or "dimensions"
    fail.text(field, field .. " is not for shape custom; give sections")
  end
  local sections = read_sections(spec.sections)
  local geometry = core.shape_effective(sections)
  return make { name = spec.name or "custom core", shape = "custom", sections = frozen(sections),
    geometry = frozen(geometry), stack = 1, source = spec.source or "user", note = spec.note,
    spec = frozen(spec) }
end

local function agreement_of(geometry, published)
  if not published then return nil end
  local agreement = {}
  for key, value in pairs(published) do agreement[key] = geometry[key] / value - 1 end
  return agreement
end

-- `card`: confidence and published values of a catalogue size whose dimensions are unchanged.
local function build(spec, card)
  fail.fields(spec, spec_fields, "core")
  if spec.shape == "custom" then return build_custom(spec) end
  local families = core.shape_families()
  local known = {}
  for _, family in ipairs(families) do known[family] = true end
  if not known[spec.shape] then
    families[#families + 1] = "custom"
    fail.unknown("shape", tostring(spec.shape), families)
  end
  if spec.sections ~= nil then
    fail.text("sections", "sections are for shape custom only; give dimensions")
  end
  local dimensions = read_dimensions(spec)
  local stack, stacked = read_stack(spec, dimensions)
  local geometry = core.shape(spec.shape, stacked)
  local published = stack == 1 and card and card.published or nil
  return make { name = spec.name or spec.shape .. " core", shape = spec.shape, stack = stack,
    dimensions = frozen(dimensions), geometry = frozen(geometry), source = spec.source or "user",
    confidence = card and card.confidence, note = spec.note, published = frozen(published),
    agreement = frozen(agreement_of(geometry, published)), spec = frozen(spec), card = card }
end

local published_fields = { "effective_length", "effective_area", "effective_volume", "minimum_area" }
local published_units = { 1e-3, 1e-6, 1e-9, 1e-6 } -- the data are in mm, mm2, mm3

local function published_of(size)
  if not size.published then return nil end
  local published = {}
  for i, value in ipairs(size.published) do
    published[published_fields[i]] = value * published_units[i]
  end
  return published
end

local function from_catalogue(group, size)
  local dimensions = {}
  for letter, value in pairs(size.dimensions) do
    dimensions[letter] = letter == "n" and value or value * 1e-3
  end
  local notes = { group.note }
  notes[#notes + 1] = size.note
  return build({ name = size.name, shape = group.shape, dimensions = dimensions,
    source = group.source, note = notes[1] and table.concat(notes, "; ") or nil },
    { confidence = size.confidence, published = published_of(size) })
end

local function plain(name)
  return (name:lower():gsub("%s+", ""))
end

-- The size of that name, or the only one that the name begins ("ETD 39" for "ETD 39/20/13").
local function size_named(name)
  local wanted, names, begun = plain(name), {}, {}
  for _, group in ipairs(catalogue) do
    for _, size in ipairs(group.sizes) do
      local label = plain(size.name)
      if label == wanted then return group, size end
      if label:sub(1, #wanted + 1) == wanted .. "/" then begun[#begun + 1] = { group, size } end
      names[#names + 1] = size.name
    end
  end
  if #begun == 1 then return begun[1][1], begun[1][2] end
  fail.unknown("core", name, names)
end

--- A core set (both halves).
-- @tparam string|table spec the name of a size, spaces and case ignored ("E 42/21/15"; "ETD 39" where
--   only one size begins so), or a table:
--
--   - `shape`: a family ("ring", "U", "E", "planar E", "ETD", "EER", "EC", "EFD", "EP", "PQ", "RM",
--     "pot") with `dimensions`: mean dimensions by letter (m, or strings with a unit; see
--     `shape.letters`), and `stack`: number of equal cores side by side (ring, U, E, planar E; areas
--     and depth grow with it). A planar E against a plate as thick as its yoke is the pair with half
--     the window depth: give D/2 and B - D/2.
--   - `shape = "custom"` with `sections`: the closed path as a list of `{ name, length (m), area (m2),
--     pole }`; `pole`, where a gap goes: `{ shape = "round", diameter, hole }` or
--     `{ shape = "rectangle", width, depth, corner }` (m).
--   - `name`, `source`, `note`: free text.
-- @treturn core immutable: `name`, `shape`, `dimensions` (m), `stack`, `geometry` (SI, the fields of
--   `ef_core_geometry` in `csrc/mag/shape.h`; custom: effective parameters only), `sections` (custom),
--   `source`, `confidence` ("high", "medium", "low"; catalogue sizes only), `note`, `published`
--   (`effective_length`, `effective_area`, `effective_volume`, `minimum_area` from memory of published
--   tables, or nil), `agreement` (relative difference of the computed from the published values)
-- @raise an error table naming the dimension and what is allowed; an unknown name gets the nearest
function shape.new(spec)
  if type(spec) == "table" then return build(spec) end
  if type(spec) ~= "string" then fail("core", spec, "the name of a size or a table") end
  return from_catalogue(size_named(spec))
end

--- The core itself, or a new one from what `shape.new` takes.
-- @param value core, string or table
-- @string[opt="core"] field name for messages
-- @treturn core
function shape.of(value, field)
  if value == nil then fail.text(field or "core", (field or "core") .. " is missing") end
  if type(value) == "table" and fields_of(value) then return value end
  return shape.new(value)
end

local function natural_key(name)
  return (name:gsub("%d+%.?%d*", function(digits) return ("%09.3f"):format(tonumber(digits)) end))
end

--- Names of the catalogue's sizes, sorted by family letters and size.
-- @string[opt] family only this family's
-- @treturn table list
-- @raise an error table for an unknown family
function shape.names(family)
  local names, known = {}, core.shape_families()
  local found = family == nil
  for _, name in ipairs(known) do found = found or name == family end
  if not found then fail.unknown("shape", tostring(family), known) end
  for _, group in ipairs(catalogue) do
    if family == nil or group.shape == family then
      for _, size in ipairs(group.sizes) do names[#names + 1] = size.name end
    end
  end
  table.sort(names, function(a, b) return natural_key(a) < natural_key(b) end)
  return names
end

--- The dimension letters of a family; an optional one ends in "?".
-- @string family
-- @treturn table list
shape.letters = core.shape_letters

--- The families that have dimensions ("custom" has none).
-- @treturn table list
shape.families = core.shape_families

--- A changed copy. `dimensions` are merged letter by letter while the shape stays; changed ones end the
-- claim to a catalogue size: name, confidence and published values go.
-- @tparam table changes fields as in `shape.new`
-- @treturn core
function methods:with(changes)
  local fields = fields_of(self)
  fail.fields(changes, spec_fields, "core")
  local spec, card = {}, fields.card
  for key, value in pairs(fields.spec) do spec[key] = value end
  if changes.shape ~= nil and changes.shape ~= spec.shape then
    spec = { shape = spec.shape }
    card = nil
  elseif type(changes.dimensions) == "table" and spec.dimensions then
    spec.dimensions = {}
    for letter, value in pairs(fields.spec.dimensions) do spec.dimensions[letter] = value end
    for letter, value in pairs(changes.dimensions) do spec.dimensions[letter] = value end
    if card then spec.source, spec.name = "changed from " .. fields.name, nil end
    card = nil
  end
  for key, value in pairs(changes) do
    if key ~= "dimensions" or type(value) ~= "table" or not spec.dimensions then
      spec[key] = value
    end
  end
  return build(spec, card)
end

return shape
