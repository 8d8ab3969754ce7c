--- Collects the nodes, branches and limbs of a part's network.
-- @module entrefer.part.builder
local builder = {}
builder.__index = builder

--- @number windings number of windings
function builder.new(windings)
  return setmetatable({ nodes = 0, windings = windings, branches = {}, elements = 0, limbs = {},
    limb_names = {}, positions = {} }, builder)
end

--- A new node; returns its number.
function builder:node()
  self.nodes = self.nodes + 1
  return self.nodes
end

--- Adds a branch with its elements; returns the number of its first element.
function builder:branch(from, to, elements, turns)
  -- Turns of 0 are kept: a longer gap may bring the winding's end onto this branch.
  self.branches[#self.branches + 1] = { from = from, to = to, elements = elements, turns = turns }
  local first = self.elements + 1
  self.elements = self.elements + #elements
  return first
end

--- Adds a linear path between nodes, skipped when its permeance is 0.
function builder:path(from, to, permeance)
  if permeance > 0 then self:branch(from, to, { { permeance = permeance } }) end
end

--- An iron element: all iron of a part has the same material.
function builder.iron(length, area, bypass)
  return { law = 1, length = length, area = area, bypass = bypass, remanence = 1 }
end

--- Starts a limb: the elements added until `finish_limb` belong to it.
function builder:start_limb(name)
  self.open = { name = name, first = self.elements + 1 }
end

--- Notes where along the limb the element lies (m from its middle; ring: rad from the gap).
function builder:at(element, position)
  self.positions[element] = position
end

function builder:finish_limb()
  local limb = self.open
  limb.last = self.elements
  self.limbs[#self.limbs + 1] = limb
  self.limb_names[limb.name] = limb
  self.open = nil
end

--- What the solver wants.
function builder:spec()
  return { nodes = self.nodes, windings = self.windings, laws = 1, branches = self.branches }
end

return builder
