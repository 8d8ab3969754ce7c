--- Errors: tables `{ code, field, value, allowed, message }` that print as their message.
-- @module entrefer.fail
local fail = {}

local meta = { __name = "entrefer.error", __tostring = function(self) return self.message end }

local function raise(code, field, value, allowed, message)
  error(setmetatable({ code = code, field = field, value = value, allowed = allowed,
    message = message }, meta), 0)
end

local longest_shown = 80

-- On one line, not endless, with a decimal point whatever the locale.
local function show(value)
  if type(value) == "string" then
    local text = value:gsub("[\0-\31\127]+", " ")
    if #text > longest_shown then
      text = text:sub(1, longest_shown):gsub("[\xC2-\xFD][\x80-\xBF]*$", "") .. "..."
    end
    return '"' .. text .. '"'
  end
  if value ~= value then return "nan" end
  if type(value) == "number" and value == math.floor(value) and math.abs(value) < 1e15 then
    return ("%d"):format(value)
  end
  if type(value) == "number" then return (("%.6g"):format(value):gsub(",", ".")) end
  if type(value) == "table" then return "a table" end
  return tostring(value)
end

--- Raises "FIELD is VALUE; allowed: ALLOWED".
-- @string field
-- @param value
-- @string allowed
function fail.value(field, value, allowed)
  raise("bad_value", field, value, allowed, ("%s is %s; allowed: %s"):format(field, show(value),
    allowed))
end

--- Raises a sentence about a field.
function fail.text(field, message)
  raise("bad_value", field, nil, nil, message)
end

--- Raises a sentence about a field with a code of its own.
function fail.coded(code, field, message)
  raise(code, field, nil, nil, message)
end

-- Number of single-letter edits between two words (Levenshtein distance).
local function distance(a, b)
  local row = {}
  for j = 0, #b do row[j] = j end
  for i = 1, #a do
    local diagonal
    diagonal, row[0] = row[0], i
    for j = 1, #b do
      local cost = a:byte(i) == b:byte(j) and 0 or 1
      diagonal, row[j] = row[j], math.min(row[j] + 1, row[j - 1] + 1, diagonal + cost)
    end
  end
  return row[#b]
end

local function plain(word) return (word:lower():gsub("[%s_]+", " ")) end

-- The known name with the fewest edits, letter case and spaces aside; none beyond three edits or half of
-- the name: such a suggestion would only puzzle.
local function nearest(name, known)
  local wanted = plain(name):sub(1, 64)
  local best, least = nil, math.max(3, #wanted / 2)
  for _, candidate in ipairs(known) do
    local edits = distance(wanted, plain(candidate):sub(1, 64))
    if edits < least or not best and edits == least then best, least = candidate, edits end
  end
  return best
end

local short_list = 12

--- Raises for an unknown name, with the nearest known one suggested and short lists shown whole.
-- @string field
-- @string name
-- @tparam table known list of names
function fail.unknown(field, name, known)
  local best = nearest(name, known)
  local allowed = #known <= short_list and table.concat(known, ", ")
    or ("one of %d names"):format(#known)
  raise("bad_value", field, name, allowed, ("%s %q is unknown%s; allowed: %s"):format(field, name,
    best and (", did you mean %q?"):format(best) or "", allowed))
end

--- Raises when a table has a key that is not in the list, suggesting the nearest.
-- @tparam table given
-- @tparam table known list of names
-- @string what is described, for the message
function fail.fields(given, known, what)
  if type(given) ~= "table" then fail.value(what, given, "a table") end
  local unknown
  for key in pairs(given) do
    local found = false
    for i = 1, #known do
      if known[i] == key then
        found = true
        break
      end
    end
    -- The first in alphabetical order, so that the message does not depend on the table's order.
    if not found and (not unknown or tostring(key) < unknown) then unknown = tostring(key) end
  end
  if unknown then
    local best = nearest(unknown, known)
    raise("bad_value", unknown, nil, table.concat(known, ", "),
      ("%s has no field %q%s; allowed: %s"):format(what, unknown,
        best and (", did you mean %q?"):format(best) or "", table.concat(known, ", ")))
  end
end

--- Calls f; returns its results, or nil and the error table.
-- @func f
-- @param ... arguments
function fail.try(f, ...)
  local results = table.pack(pcall(f, ...))
  if results[1] then return table.unpack(results, 2, results.n) end
  local err = results[2]
  if type(err) ~= "table" then
    err = setmetatable({ code = "error", message = tostring(err) }, meta)
  end
  return nil, err
end

return setmetatable(fail, { __call = function(_, ...) return fail.value(...) end })
