--- A reluctance network of any topology, with named nodes and limbs. Parts build theirs with it;
-- use it directly for a magnetic circuit that no standard core has.
-- @module entrefer.network
local core = require "entrefer.core"
local fail = require "entrefer.fail"
local quantity = require "entrefer.quantity"
local material = require "entrefer.material"
local object = require "entrefer.object"

local network = {}

local element_fields = {
  iron = { "name", "from", "to", "length", "area", "bypass", "remanence", "material", "turns" },
  path = { "name", "from", "to", "permeance", "turns" },
}

local methods = {}
local make = object.class("network", methods)

local function numbered_nodes(list)
  local number, count = {}, 0
  for _, entry in ipairs(list) do
    for _, node in ipairs { entry.from, entry.to } do
      if type(node) ~= "string" then
        fail("node", node, "a name (text)")
      end
      if not number[node] then
        count = count + 1
        number[node] = count
      end
    end
  end
  return number, count
end

local function read_iron(entry, label, laws)
  local card = material.of(entry.material, label .. " material")
  if not laws[card] then
    laws.count = laws.count + 1
    laws[laws.count], laws[card] = card, laws.count
  end
  return {
    law = laws[card],
    length = quantity.read(entry.length, "m", label .. " length", { positive = true }),
    area = quantity.read(entry.area, "m2", label .. " area", { positive = true }),
    bypass = entry.bypass and quantity.read(entry.bypass, "H", label .. " bypass", { min = 0 }),
    remanence = entry.remanence,
  }
end

local function read_turns(entry, label, windings)
  local turns
  for winding, value in pairs(entry.turns or {}) do
    turns = turns or {}
    local index = windings[winding]
    if not index then fail.unknown(label .. " turns", tostring(winding), windings.names) end
    turns[index] = quantity.read(value, "1", label .. " turns of " .. tostring(winding))
  end
  return turns
end

local function read_windings(list)
  local windings = { names = {} }
  for i, name in ipairs(list) do
    windings[name], windings.names[i] = i, name
  end
  return windings
end

--- Builds a network.
-- @tparam table spec
--   `windings`: list of names;
--   `limbs`: list of `{ name, from, to, length (m), area (m2), material [, bypass (H), remanence
--   (-1..1), turns = { [winding] = number } ] }`, positive flux runs from `from` to `to`;
--   `paths`: list of `{ name, from, to, permeance (H) [, turns] }` for gaps and leakage.
-- @treturn network
-- @raise an error table that names the limb and field
function network.new(spec)
  fail.fields(spec, { "windings", "limbs", "paths" }, "network")
  local entries, branches = {}, {}
  for _, kind in ipairs { "limbs", "paths" } do
    for i, entry in ipairs(spec[kind] or {}) do
      local iron = kind == "limbs"
      local label = tostring(entry.name or (iron and "limb " or "path ") .. i)
      fail.fields(entry, iron and element_fields.iron or element_fields.path, label)
      entries[#entries + 1] = { entry = entry, iron = iron, label = label, from = entry.from,
        to = entry.to }
    end
  end
  local node, count = numbered_nodes(entries)
  local windings, laws = read_windings(spec.windings or {}), { count = 0 }
  for i, item in ipairs(entries) do
    local entry = item.entry
    local element = item.iron and read_iron(entry, item.label, laws) or
      { permeance = quantity.read(entry.permeance, "H", item.label .. " permeance",
        { positive = true }) }
    branches[i] = { from = node[entry.from], to = node[entry.to], elements = { element },
      turns = read_turns(entry, item.label, windings) }
  end
  return make {
    solver = core.network { nodes = count, windings = #windings.names, laws = laws.count,
      branches = branches },
    entries = entries, laws = laws, windings = windings, nodes = node,
  }
end

--- Solves the network.
-- @tparam table at `current`: A, a number or a list with one per winding; `temperature`: degC
--   (default 25); `remanence`: share of the coercive field retained, -1..1 (default 0)
-- @treturn table `limbs[name] = { flux, flux_density, field_strength, drop }`, `paths[name] = {
--   flux, drop }`, `flux_linkage` (list), `inductance` and `incremental_inductance` (number for one
--   winding, else matrices), `energy`, `coenergy`, `iterations`
-- @raise an error table; a failed solve never gives a number
function methods:solve(at)
  fail.fields(at, { "current", "temperature", "remanence" }, "solve")
  local temperature = quantity.read(at.temperature or 25, "degC", "temperature")
  local currents = type(at.current) == "table" and at.current or { at.current }
  local amperes, laws, coercive = {}, {}, {}
  for i, value in ipairs(currents) do amperes[i] = quantity.read(value, "A", "current") end
  if #amperes ~= #self.windings.names then
    fail("number of currents", #amperes, #self.windings.names .. ", one for each winding")
  end
  for i = 1, self.laws.count do
    laws[i] = self.laws[i]:law(temperature)
    coercive[i] = (at.remanence or 0) * (self.laws[i]:coercive_field_at(temperature) or 0)
  end
  local solver = self.solver
  local iterations = solver:solve(amperes, laws, false, at.remanence and coercive or nil)
  local energy, coenergy = solver:energy()
  local result = { limbs = {}, paths = {}, flux_linkage = {}, iterations = iterations,
    energy = energy, coenergy = coenergy,
    inductance = #amperes > 0 and solver:inductance(false) or nil,
    incremental_inductance = #amperes > 0 and solver:inductance(true) or nil }
  for i, item in ipairs(self.entries) do
    local drop, flux, density, field = solver:element(i)
    local record = { flux = flux, drop = drop }
    if item.iron then record.flux_density, record.field_strength = density, field end
    result[item.iron and "limbs" or "paths"][item.label] = record
  end
  for i = 1, #amperes do result.flux_linkage[i] = solver:linkage(i) end
  return result
end

return network
