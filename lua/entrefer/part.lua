--- A part: core, material, gaps and windings, with one nonlinear model behind all questions.
--
--    local part = ef.part{
--      core = ef.core "E 42/21/15", material = ef.material "PW3b",
--      gaps = { { leg = "centre", length = "1.6 mm" } },
--      windings = { { turns = 24, leg = "centre", wire = ef.wire{ round = "1.6 mm", grade = 2 } } },
--    }
--    local s = part:solve{ current = 12, temperature = 85 }
--
-- @module entrefer.part
local bobbin = require "entrefer.bobbin"
local core_solver = require "entrefer.core"
local derivatives = require "entrefer.part.derivatives"
local estimate = require "entrefer.part.estimate"
local fail = require "entrefer.fail"
local gaps = require "entrefer.part.gaps"
local inverse = require "entrefer.part.inverse"
local ladder = require "entrefer.part.ladder"
local loop = require "entrefer.part.loop"
local material = require "entrefer.material"
local object = require "entrefer.object"
local path = require "entrefer.part.path"
local quantity = require "entrefer.quantity"
local ring = require "entrefer.part.ring"
local shape = require "entrefer.shape"
local solve = require "entrefer.part.solve"
local windings = require "entrefer.part.windings"

local part = {}

local fields = { "core", "material", "gaps", "windings", "bobbin", "name", "note" }
local with_fields = { "turns", "gap", table.unpack(fields) }

local methods = {}
local make, fields_of = object.class("part", methods)

local function list_of(value, field)
  if value ~= nil and type(value) ~= "table" then fail(field, value, "a list of tables") end
  return value or {}
end

local function read_bobbin(given, core_set)
  fail.fields(given or {}, { "wall", "clearance", "flange" }, "bobbin")
  local read = bobbin.defaults(core_set)
  for name, value in pairs(given or {}) do
    read[name] = quantity.read(value, "m", "bobbin " .. name, { min = 0 })
  end
  return read
end

-- Where a gap or a winding goes when the user names no leg.
local default_leg = {
  three_leg = { gap = "centre", winding = "centre" }, two_leg = { gap = "all", winding = "left" },
  ring = { gap = "ring", winding = "ring" },
}

local function defaults_of(core_set)
  local topology = core_set.geometry.topology
  if topology then return default_leg[topology] end
  local first = core_set.sections[1].name
  return { gap = first, winding = first }
end

local function read_gaps(list, core_set)
  local entries, default = {}, defaults_of(core_set).gap
  for i, entry in ipairs(list) do entries[i] = gaps.read(entry, i, core_set, default) end
  return entries
end

-- Gaps of rings and loops have no height on a leg: one unit for each.
local function plain_units(entries)
  local units = {}
  for _, entry in ipairs(entries) do
    entry.units = {}
    for _ = 1, entry.count do
      local unit = { entry = entry, leg = entry.legs[1], length = entry.length, z = 0 }
      entry.units[#entry.units + 1] = unit
      units[#units + 1] = unit
    end
  end
  return units
end

local function build_network(self)
  local geometry = self.core.geometry
  if self.topology == "ring" then return ring.build(geometry, self.units, self.windings) end
  if self.topology == "loop" then
    return loop.build(self.core.sections, self.units, self.windings)
  end
  return ladder.build(geometry, self.core.shape, self.units, self.height, self.windings)
end

local function collect_notes(self)
  local notes, method = {}, { network = "nonlinear reluctance network", gaps = {} }
  for i, entry in ipairs(self.gap_entries) do
    method.gaps[i] = entry.units[1].method
    for _, note in ipairs(entry.units[1].notes) do notes[#notes + 1] = note end
  end
  if #self.material.curves == 1 then
    notes[#notes + 1] = ("%s has one curve, at %g degC: used at every temperature"):format(
      tostring(self.material), self.material.curves[1].temperature)
  end
  return notes, method
end

--- Builds a part.
-- @tparam table spec
--   `core`: from `ef.core`, or what it takes; `material`: from `ef.material`, or what it takes;
--   `gaps`: list of `{ leg = "centre" | "left" | "right" | "outer" | "all" (a ring needs none),
--   length (m, of each gap), kind = "ground" | "spacer" | "sawn", count = 1, position (m from the
--   leg's middle), tolerance (m, for the flow and records), pocket = { diameter, depth } or
--   { diameter, through = true },
--   method = "conformal" | "handbook" | "added length" | "plain", or permeance (H) given }`;
--   `windings`: list of `{ turns, leg, wire, span = { from, to } (m), reverse, name; on a ring angle
--   and extent (rad) }`: positive current in any winding aids winding 1 unless `reverse`;
--   `bobbin` = { wall, clearance, flange } (m; default: the family's usual, see `entrefer.bobbin`);
--   `name`, `note`
-- @treturn part with `core`, `material`, `gap_entries`, `windings`, `fill` (share of the window),
--   `core_mass` (kg, when the material gives its density)
-- @raise an error table naming the field: unknown legs, a gap longer than its leg, a build that does
--   not fit the window...
function part.new(spec)
  if type(spec) ~= "table" then fail("part", spec, "a table") end
  fail.fields(spec, fields, "part")
  local self = { spec = object.snapshot(spec), fields_of = fields_of, name = spec.name,
    note = spec.note, core = shape.of(spec.core, "core"),
    material = material.of(spec.material, "material") }
  self.bobbin = read_bobbin(spec.bobbin, self.core)
  self.topology = self.core.geometry.topology or "loop"
  self.gap_entries = read_gaps(list_of(spec.gaps, "gaps"), self.core)
  if self.topology == "ring" or self.topology == "loop" then
    self.units, self.height = plain_units(self.gap_entries), self.core.geometry.window_height or 0
  else
    self.units, self.height = gaps.expand(self.gap_entries, self.core.geometry.window_height)
  end
  self.windings = windings.read(list_of(spec.windings, "windings"), self.core, self.height,
    defaults_of(self.core).winding)
  self.fill = windings.check(self.windings, self.core.geometry, self.bobbin, self.height)
  local net = build_network(self)
  self.solver = core_solver.network(net:spec())
  self.limbs, self.positions, self.branches = net.limbs, net.positions, net.branches
  self.plain = estimate.prepare(self)
  self.notes, self.method = collect_notes(self)
  local volume, density = self.core.geometry.iron_volume, self.material.density
  self.core_mass = volume and density and volume * density
  return make(self)
end

--- The part itself, or a new one from a table.
function part.of(value, field)
  if type(value) == "table" and fields_of(value) then return value end
  if type(value) ~= "table" then fail(field or "part", value, "a part") end
  return part.new(value)
end

--- A changed copy: fields of `part.new`, and the shortcuts `turns` (of winding 1) and `gap` (length
-- of gap 1, m).
-- @tparam table changes
-- @treturn part
function methods:with(changes)
  fail.fields(changes, with_fields, "part")
  local spec, direct = fields_of(self).spec, {}
  local function first_changed(list, key, value)
    if not list or not list[1] then
      fail.text(key, ("there is no first entry whose %s could be changed"):format(key))
    end
    local copy = object.changed(list, {})
    copy[1] = object.changed(list[1], { [key] = value })
    return copy
  end
  for key, value in pairs(changes) do
    if key == "turns" then
      direct.windings = first_changed(changes.windings or spec.windings, "turns", value)
    elseif key == "gap" then
      direct.gaps = first_changed(changes.gaps or spec.gaps, "length", value)
    elseif direct[key] == nil then
      direct[key] = value
    end
  end
  return part.new(object.changed(spec, direct))
end

--- Solves one operating point.
-- @tparam table at `current` (A; a list for several windings), `temperature` (degC; default 25),
--   `remanence` (share of the coercive field retained, -1..1), `only` (list of result names: just
--   those, faster)
-- @treturn table `flux_linkage` (Wb), `inductance` (H, flux linkage / current; its limit at 0 A;
--   matrix for several windings), `incremental_inductance` (H), `energy`, `coenergy` (J),
--   `limbs[name] = { flux_density (T, mean over the section, largest along the limb), position (m
--   from the leg's middle; ring: rad from the gap), mean (T, along the limb), drop (A) }`,
--   `gaps[i] = { flux_density (T, mean over the pole face), centre_flux_density (T, on the axis),
--   flux (Wb), drop (A), force (N) }`, `core_flux_density` (T, largest of the limbs) and
--   `core_flux_density_limb`, `estimate` (plain series circuit, with `ratio`), `error`, `method`,
--   `warnings`
-- @raise an error table; a failed solve never gives a number
function methods:solve(at)
  return solve.once(fields_of(self), at)
end

--- Solves a range of currents at one temperature.
-- @tparam table at as `solve`, with `current` a list or `{ from, to, points }`
-- @treturn table struct of arrays: `current`, and one array for each name in `only` (default flux
--   linkage, both inductances, core and gap flux density)
function methods:sweep(at)
  return solve.sweep(fields_of(self), at)
end

--- The core's flux density along the magnetic path; see `entrefer.part.path`.
-- @tparam table at `current`, `temperature`
-- @treturn table struct of arrays `distance` (m), `flux_density` (T), `limb`
function methods:path(at)
  fail.fields(at, { "current", "temperature" }, "path")
  return path.along(fields_of(self), at)
end

--- Derivatives of the results; see `entrefer.part.derivatives`.
function methods:derivatives(at)
  return derivatives.at(self, fields_of(self), at)
end

--- The length of gap 1 that gives a wanted inductance; see `entrefer.part.inverse`.
function methods:gap_for(at)
  return inverse.gap(self, fields_of(self), at)
end

--- The turns of winding 1 that give a wanted inductance; see `entrefer.part.inverse`.
function methods:turns_for(at)
  return inverse.turns(self, fields_of(self), at)
end

--- The current at a fallen inductance or at a flux density; see `entrefer.part.inverse`.
function methods:current_for(at)
  return inverse.current(self, fields_of(self), at)
end

return part
