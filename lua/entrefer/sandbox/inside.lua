--- The first code in a recipe's own state: opens the library there, gives the recipe what it may use,
-- runs it and hands plain data back. Called as a chunk with the request and `ask(what, argument)`, the
-- one way to the host, by `entrefer.sandbox`.
--
-- What guards the host is the state itself, made by `core.isolated`. What stands here keeps a recipe
-- from spoiling its own run: it gets copies of the standard libraries, and the page's functions
-- without the page.
local request, ask = ...
local globals = _G
local load, loaded = load, globals.loaded

for _, name in ipairs { "collectgarbage", "dofile", "load", "loaded", "loadfile", "print", "warn",
  "xpcall" } do
  globals[name] = nil
end

-- The library's `require`: its own files only, each as the host reads it.
function globals.require(name)
  if loaded[name] == nil then
    local text, why = ask("module", name)
    if not text then error(("module %s is not there for recipes: %s"):format(name, why), 0) end
    local chunk = assert(load(text, "=" .. name, "t"))
    loaded[name] = chunk(name) or true
  end
  return loaded[name]
end

-- Files of the library: reads are asked for, nothing is written.
local reading = {}
reading.__index = reading

function reading:read(format)
  if self.text == "" then return format == "a" and "" or nil end
  local size = math.type(format) == "integer" and format or #self.text
  local text = self.text:sub(1, size)
  self.text = self.text:sub(size + 1)
  return text
end

function reading.close() return true end

local function open(name, mode)
  if (mode or "r"):find("[wa+]") then
    return nil, name .. ": a recipe writes no files, its page does"
  end
  local text, why = ask("file", name)
  if not text then return nil, why end
  return setmetatable({ text = text }, reading)
end

globals.io = { open = open }

-- Keys in an order that is the same in every run: numbers, then text, then the rest as it comes.
local rank = { number = 1, string = 2 }

local function sorted_keys(t)
  local keys, others = {}, {}
  for key in pairs(t) do
    local list = rank[type(key)] and keys or others
    list[#list + 1] = key
  end
  table.sort(keys, function(a, b)
    if type(a) ~= type(b) then return rank[type(a)] < rank[type(b)] end
    return a < b
  end)
  return table.move(others, 1, #others, #keys + 1, keys)
end

local function pairs_in_order(t)
  local keys, at = sorted_keys(t), 0
  return function()
    local value
    repeat
      at = at + 1
      if keys[at] == nil then return nil end
      value = t[keys[at]]
    until value ~= nil
    return keys[at], value
  end
end

-- xpcall whose handler runs when the error is over. Lua's own runs it inside, and where the error comes
-- from the hook that counts, no hook would count the handler.
local function xpcall_afterwards(f, handler, ...)
  local results = table.pack(pcall(f, ...))
  if results[1] then return table.unpack(results, 1, results.n) end
  local _, handled = pcall(handler, results[2])
  return false, handled
end

local function environment()
  local env = { pairs = pairs_in_order, xpcall = xpcall_afterwards }
  for _, name in ipairs { "assert", "error", "ipairs", "next", "pcall", "select", "tonumber",
    "tostring", "type" } do
    env[name] = _G[name]
  end
  for name, skip in pairs { string = {}, table = {}, math = { randomseed = true }, utf8 = {} } do
    env[name] = {}
    for key, value in pairs(_G[name]) do
      if not skip[key] then env[name][key] = value end
    end
  end
  return env
end

local function evaluate()
  local chunk, message = load(request.text, "=" .. request.name, "t", environment())
  if not chunk then error(message, 0) end
  return chunk()
end

-- What the recipe says about itself; its functions stay here.
local function describe()
  local recipe = evaluate()
  if type(recipe) ~= "table" then return { kind = type(recipe) } end
  local fields = {}
  for key, value in pairs(recipe) do fields[key] = value end
  fields.run = type(recipe.run)
  return { kind = "table", fields = fields }
end

-- The page's functions for the recipe. What is given to them is copied, and the page stays out of
-- reach, so that its own checks hold for what it hands over.
local function page_for_recipe(page, methods, snapshot)
  local kept = { new = true, from = true, plain = true, save = true, text = true, markdown = true,
    html = true, pictures = true }
  local face = {}
  for name, method in pairs(methods) do
    if type(method) == "function" and not kept[name] then
      face[name] = function(_, ...)
        local given = table.pack(...)
        for i = 1, given.n do given[i] = snapshot(given[i]) end
        return method(page, table.unpack(given, 1, given.n))
      end
    end
  end
  return face
end

-- The host renders the page again with the same code: what takes too long there does so here, where
-- time is counted.
local function render(page)
  local write = require "entrefer.write"
  page:text()
  page:markdown()
  page:html({})
  for _, item in ipairs(page.items) do
    if item.kind == "table" then
      local made = write.table { columns = item.columns, rows = item.rows }
      made:csv()
      made:json()
    end
  end
end

local function run()
  local methods = require "entrefer.page"
  local page = methods.new(request.title)
  local face = page_for_recipe(page, methods, require "entrefer.object".snapshot)
  local ef = require "entrefer"
  function ef.run_recipe() error("a recipe can't run recipes", 0) end
  local results = evaluate().run(ef, request.inputs, face)
  render(page)
  return { results = results, page = page:plain() }
end

return request.mode == "run" and run() or describe()
