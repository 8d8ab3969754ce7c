--- The coil former as a set of rules: what it leaves of the window, and the mean turn of a build.
--
--    local bobbin = ef.bobbin(ef.core "ETD 39/20/13", { wall = "1 mm" })
--    local turn = bobbin:mean_turn { turns = 40, wire = { round = "0.8 mm" } }
--
-- @module entrefer.bobbin
local fail = require "entrefer.fail"
local object = require "entrefer.object"
local quantity = require "entrefer.quantity"
local rules = require "entrefer.data.bobbins"
local shape = require "entrefer.shape"
local wire_module = require "entrefer.wire"

local bobbin = {}

local lengths = { "wall", "flange", "margin", "clearance", "corner" }
local override_fields = { "wall", "flange", "margin", "clearance", "corner", "hole", "wound_legs" }
local build_fields = { "thickness", "layers", "turns", "wire", "interlayer", "start" }

local methods = {}
local make, fields_of = object.class("bobbin", methods)

local function rule_for(core)
  for _, row in ipairs(rules[core.shape] or {}) do
    if not row.up_to or core.geometry.window_width * 1e3 <= row.up_to then return row end
  end
  fail.text("core", ("%s has no window of known size; a bobbin needs a core of a family"):format(
    tostring(core)))
end

--- What the family's rule takes off a window, unchecked: the start of every part without a bobbin of its
-- own. A custom core has no known window and gets none.
-- @tparam core core
-- @treturn table `{ wall, clearance, flange }` in m
function bobbin.defaults(core)
  local row = rules[core.shape] and rule_for(core) or {}
  return { wall = (row.wall or 0) * 1e-3, clearance = (row.clearance or 0) * 1e-3,
    flange = (row.flange or 0) * 1e-3 }
end

local function wound_pole(geometry)
  return geometry.topology == "three_leg" and geometry.centre_pole or geometry.outer_pole
end

local function read_lengths(core, overrides)
  local row, read = rule_for(core), {}
  for _, name in ipairs(lengths) do
    local given = overrides[name]
    read[name] = given ~= nil and quantity.read(given, "m", "bobbin " .. name, { min = 0 })
      or (row[name] or 0) * 1e-3
  end
  -- A tube of even thickness around a sharp leg has the wall as its outer corner radius.
  if overrides.corner == nil then read.corner = read.wall end
  read.hole = quantity.read(overrides.hole or row.hole or 0, "1", "bobbin hole", { min = 0, max = 1 })
  read.wound_legs = quantity.read(overrides.wound_legs or 1, "1", "bobbin wound_legs",
    { integer = true, min = 1, max = 2 })
  return read
end

local function check_place(read, core, overrides)
  local geometry = core.geometry
  local pole = wound_pole(geometry)
  if overrides.corner ~= nil and (geometry.topology == "ring" or pole.shape == "round") then
    fail("bobbin corner", read.corner, "nothing: only a rectangular leg's bobbin has corners")
  end
  if read.corner > math.min(pole.width, pole.depth) / 2 + read.wall then
    fail("bobbin corner", read.corner, ("at most %.4g m, half the tube's smaller side"):format(
      math.min(pole.width, pole.depth) / 2 + read.wall))
  end
  if read.wound_legs == 2 and geometry.topology ~= "two_leg" then
    fail("bobbin wound_legs", 2, "1: only a two-leg core has two windings side by side")
  end
  if geometry.topology ~= "ring" and read.hole > 0 then
    fail("bobbin hole", read.hole, "nothing: only a ring leaves a hole for the shuttle")
  end
end

-- Breadth along the leg, depth across the window, and the area for wire.
local function room_in(read, geometry)
  if geometry.topology == "ring" then
    local radius = geometry.ring_inner_diameter / 2
    local breadth, depth = 2 * math.pi * (radius - read.wall), radius * (1 - read.hole) - read.wall
    -- The room narrows inwards: an annulus.
    return breadth, depth, (breadth - math.pi * depth) * depth
  end
  local width = geometry.window_width
  local depth = read.wound_legs == 2 and (width - read.clearance) / 2 - read.wall
    or width - read.wall - read.clearance
  local breadth = geometry.window_height - 2 * (read.flange + read.margin)
  return breadth, depth, breadth * depth
end

local function windows_of(core, breadth, depth, area)
  local geometry = core.geometry
  local names = geometry.topology == "three_leg" and { "left", "right" }
    or { geometry.topology == "ring" and "bore" or "window" }
  local windows = {}
  for i, name in ipairs(names) do
    windows[i] = { name = name, breadth = breadth, depth = depth, area = area,
      core_area = geometry.topology == "ring" and math.pi / 4 * geometry.ring_inner_diameter ^ 2
        or geometry.window_area }
  end
  return windows
end

--- A bobbin for a core.
-- Rules by family are common practice without a source (`source` says so); give the drawing's sizes.
-- @tparam core|string|table core from `ef.core`, or what it takes; not custom
-- @tparam[opt] table overrides `wall` (m, of the tube), `flange` (m, at each end), `margin` (m, kept
--   free of wire inside each flange, for creepage; default 0), `clearance` (m, between the full winding
--   and the core), `corner` (m, outer corner radius of the tube of a rectangular leg; default the wall),
--   `hole` (ring: share of the bore's diameter left open for the shuttle), `wound_legs` (two-leg cores:
--   1, or 2 when both legs carry a winding in the same window)
-- @treturn bobbin with those, `breadth` and `depth` (m, for wire, along and across the leg; of a ring
--   around the bore and radially), `area` (m2), `windows` = list of `{ name, breadth, depth, area,
--   core_area }` (a three-leg core has two, both filled by each turn), `core`, `source`
-- @raise an error table: unknown field, nothing left of the window
function bobbin.new(core, overrides)
  core, overrides = shape.of(core, "core"), overrides or {}
  fail.fields(overrides, override_fields, "bobbin")
  local read = read_lengths(core, overrides)
  check_place(read, core, overrides)
  local breadth, depth, area = room_in(read, core.geometry)
  if breadth <= 0 then
    fail("bobbin flange", read.flange + read.margin, ("with the margin below %.4g m, half the window")
      :format(core.geometry.window_height / 2))
  end
  if depth <= 0 then
    fail("bobbin wall", read.wall, ("less: wall and clearance leave nothing of %.4g m"):format(
      core.geometry.window_width))
  end
  read.core, read.breadth, read.depth, read.area = core, breadth, depth, area
  read.windows = windows_of(core, breadth, depth, area)
  read.source = next(overrides) and "user; the rest " .. rules.source or rules.source
  read.overrides = object.snapshot(overrides)
  return make(read)
end

local function read_wire(value)
  local wire = wire_module.of(value, "mean_turn wire")
  if wire.kind == "foil" then return wire.thickness + wire.insulation, wire end
  return wire.overall_diameter, wire
end

local function layers_of(self, build)
  if build.layers ~= nil then
    return quantity.read(build.layers, "1", "mean_turn layers", { positive = true, integer = true })
  end
  local turns = quantity.read(build.turns, "1", "mean_turn turns", { positive = true })
  local pitch, wire = read_wire(build.wire)
  if wire.kind == "foil" then return math.ceil(turns) end
  local per_layer = math.floor(self.breadth / pitch + 1e-9)
  if per_layer < 1 then
    fail("mean_turn wire", pitch, ("at most %.4g m, the breadth of the bobbin"):format(self.breadth))
  end
  return math.ceil(turns / per_layer - 1e-9)
end

local function build_of(self, build)
  fail.fields(build, build_fields, "mean_turn")
  local given = 0
  for _, name in ipairs { "thickness", "layers", "turns" } do
    if build[name] ~= nil then given = given + 1 end
  end
  if given ~= 1 then
    fail.text("mean_turn", "mean_turn wants one of thickness, layers with wire, or turns with wire")
  end
  if build.thickness ~= nil then
    return quantity.read(build.thickness, "m", "mean_turn thickness", { min = 0 })
  end
  local pitch = read_wire(build.wire)
  local layers = layers_of(self, build)
  local between = quantity.read(build.interlayer or 0, "m", "mean_turn interlayer", { min = 0 })
  return layers * pitch + (layers - 1) * between, layers
end

--- Mean length of a turn of a build: the turn through the middle of its thickness. It runs straight
-- along the sides and in arcs around the corners. On a ring the build of the bore is taken all around
-- (outside it is thinner: the length is on the long side).
-- @tparam table build one of `thickness` (m), `layers` with `wire`, `turns` with `wire` (layers of the
--   full breadth, in a square pattern); `interlayer` (m, insulation between layers), `start` (m, from
--   the tube to the first layer: what lies underneath)
-- @treturn number m
-- @treturn table `{ thickness (m), layers (nil when a thickness was given) }`
-- @raise an error table when the build is deeper than the bobbin
function methods:mean_turn(build)
  local self_fields = fields_of(self)
  local thickness, layers = build_of(self_fields, build)
  local start = quantity.read(build.start or 0, "m", "mean_turn start", { min = 0 })
  if start + thickness > self_fields.depth * (1 + 1e-9) then
    fail("mean_turn thickness", start + thickness, ("at most %.4g m, the depth of the bobbin"):format(
      self_fields.depth))
  end
  local geometry, wall, corner = self_fields.core.geometry, self_fields.wall, self_fields.corner
  local sharper = 0
  if geometry.topology == "ring" or wound_pole(geometry).shape == "rectangle" then
    sharper = (8 - 2 * math.pi) * (wall - corner)
  end
  local length = geometry.inner_turn + 2 * math.pi * (wall + start + thickness / 2) + sharper
  return length, { thickness = thickness, layers = layers }
end

--- The table that `ef.part` takes as `bobbin`: wall, clearance and flange (the margin included), m.
function methods:for_part()
  local fields = fields_of(self)
  return { wall = fields.wall, clearance = fields.clearance, flange = fields.flange + fields.margin }
end

--- A changed copy.
-- @tparam table changes as the overrides of `new`
-- @treturn bobbin
function methods:with(changes)
  local fields = fields_of(self)
  return bobbin.new(fields.core, object.changed(fields.overrides, changes))
end

return bobbin
