--- Immutable objects: a constructor fills a plain table once; after that it can only be read.
-- @module entrefer.object
local fail = require "entrefer.fail"

local object = {}

--- A class of immutable objects.
-- @string name trade name of the kind, used in messages and by `tostring`
-- @tparam table methods functions found on every object
-- @treturn function `make(fields)`: an object that reads `fields` and `methods`, and refuses writes
-- @treturn function `fields_of(object)`: the table behind an object, or nil for anything else
function object.class(name, methods)
  local store = setmetatable({}, { __mode = "k" })
  local meta = { __name = name, __metatable = "protected" }
  function meta.__index(self, key)
    local value = store[self][key]
    if value == nil then return methods[key] end
    return value
  end
  function meta.__newindex(_, key)
    fail.text(tostring(key), ("a %s can't be changed; use :with{ %s = ... } to get a changed copy")
      :format(name, tostring(key)))
  end
  function meta.__pairs(self)
    return next, store[self], nil
  end
  function meta.__tostring(self)
    local label = store[self].name
    return label and ("%s %q"):format(name, label) or name
  end
  local function make(fields)
    if fields.name ~= nil and type(fields.name) ~= "string" then
      fail(name .. " name", fields.name, "text")
    end
    local self = setmetatable({}, meta)
    store[self] = fields
    return self
  end
  return make, function(self) return store[self] end
end

--- A copy of plain data, tables inside included; objects in it stay the same objects. What a user
-- changes in his table later does not reach into what was built from it.
function object.snapshot(value)
  if type(value) ~= "table" or getmetatable(value) ~= nil then return value end
  local copy = {}
  for key, item in pairs(value) do copy[key] = object.snapshot(item) end
  return copy
end

--- A shallow copy of a table with some entries changed.
function object.changed(original, changes)
  local copy = {}
  for key, value in pairs(original) do copy[key] = value end
  for key, value in pairs(changes) do copy[key] = value end
  return copy
end

local function plain(name) return (name:lower():gsub("%s+", "")) end

--- The card of a name, letter case and spaces aside.
-- @tparam table cards list of tables with `name`
-- @string name
-- @string field for the message
-- @raise an error table that suggests the nearest name
function object.named(cards, name, field)
  local names = {}
  for i, card in ipairs(cards) do
    names[i] = card.name
    if plain(card.name) == plain(name) then return card end
  end
  fail.unknown(field, name, names)
end

return object
