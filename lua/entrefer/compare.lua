--- What moved between two runs of a recipe: results and where they came from.
-- @module entrefer.compare
local data_file = require "entrefer.data_file"
local fail = require "entrefer.fail"
local write = require "entrefer.write"

local compare = {}

local function decode(text, path)
  local cjson = require "cjson"
  local done, value = pcall(cjson.decode, text)
  if not done or type(value) ~= "table" then
    fail.text("results file", ("%s is no record in JSON"):format(path))
  end
  return value, cjson.null
end

local function read_record(path)
  return decode(data_file.read_text(path, "results file"), path)
end

-- A folder stands for the results in it.
local function locate(path)
  if path:match("%.json$") then return path, path:gsub("[^/]*$", "provenance.json") end
  return path .. "/results.json", path .. "/provenance.json"
end

-- Every number and text of a record, nested ones as "a.b".
local function flatten(value, prefix, out)
  for key, item in pairs(value) do
    local name = prefix .. tostring(key)
    if type(item) == "table" then flatten(item, name .. ".", out) else out[name] = item end
  end
  return out
end

local function names_of(a, b)
  local names, seen = {}, {}
  for _, record in ipairs { a, b } do
    for name in pairs(record) do
      if not seen[name] then
        seen[name] = true
        names[#names + 1] = name
      end
    end
  end
  table.sort(names)
  return names
end

local function as_cell(value)
  if type(value) == "number" or value == nil then return value end
  return tostring(value)
end

local function row_of(name, old, new)
  local change
  if type(old) == "number" and type(new) == "number" and old ~= 0 then
    change = 100 * (new / old - 1)
  end
  return { name, as_cell(old), as_cell(new), change, old == new and "same"
    or old == nil and "new" or new == nil and "gone" or "moved" }
end

local function compare_records(old, new)
  local a, b = flatten(old, "", {}), flatten(new, "", {})
  local rows, moved = {}, 0
  for i, name in ipairs(names_of(a, b)) do
    rows[i] = row_of(name, a[name], b[name])
    if rows[i][5] ~= "same" then moved = moved + 1 end
  end
  return rows, moved
end

local function optional_record(path)
  local file = io.open(path, "rb")
  if not file then return {} end
  file:close()
  return (read_record(path))
end

--- Compares two runs.
-- @string old folder of a run, or its results.json
-- @string new the same
-- @treturn table `{ results = table of entrefer.write, provenance = the same, moved = number of
--   results that moved }`
-- @raise an error table when a record can't be read
function compare.runs(old, new)
  local old_results, old_origin = locate(old)
  local new_results, new_origin = locate(new)
  local rows, moved = compare_records(read_record(old_results), read_record(new_results))
  local origin = compare_records(optional_record(old_origin), optional_record(new_origin))
  local different = {}
  for _, row in ipairs(origin) do
    if row[5] ~= "same" then different[#different + 1] = { row[1], row[2], row[3] } end
  end
  return { moved = moved,
    results = write.table { columns = { { name = "result" }, { name = "old", digits = 6 },
      { name = "new", digits = 6 }, { name = "change", unit = "%", digits = 3 }, { name = "" } },
      rows = rows },
    provenance = write.table { columns = { { name = "origin" }, { name = "old" }, { name = "new" } },
      rows = different } }
end

return compare
