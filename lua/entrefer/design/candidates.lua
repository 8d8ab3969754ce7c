--- From requirements to a part: turns, gap and wire for one core, and the search over cores.
--
-- For one core the turns rise from the fewest that the flux density could allow. Each count gets the
-- gap that gives the wanted inductance at the peak current, at the worst temperature and with the gap
-- ground too long by its tolerance; the first count whose core stays within its flux density at the
-- trip current with the gap ground too short, whose winding fits, and whose gap takes a sensor is the
-- answer: fewer turns saturate, more cost copper. Where only the sensor's
-- height is in the way, more turns with a longer gap are tried first, then a pocket if the spec allows
-- one.
-- @module entrefer.design.candidates
local fail = require "entrefer.fail"
local part_module = require "entrefer.part"
local probe_module = require "entrefer.probe"
local sensing = require "entrefer.design.sensing"
local wire_module = require "entrefer.wire"

local candidates = {}

local most_turns_tried = 60

-- A bundle of strands for the nominal current at the allowed current density.
local function wire_for(req)
  local strand = wire_module.new { round = req.wire.strand, grade = req.wire.grade }
  local area = req.current.nominal / req.limits.current_density
  local strands = math.max(1, math.ceil(area / strand.copper_area))
  if strands == 1 then return strand end
  return wire_module.new { litz = { strands = strands, strand = req.wire.strand,
    grade = req.wire.grade } }
end

local function new_part(req, core, turns, length, pocket, wire)
  return part_module.new { core = core, material = req.material,
    gaps = { { length = length, count = req.gap.count, kind = req.gap.kind, pocket = pocket,
      tolerance = req.gap.tolerance } },
    windings = { { turns = turns, wire = wire } } }
end

-- The part with its gap off by the tolerance, up or down.
local function off_by(req, part, sign)
  return part:with { gap = part.gap_entries[1].length + sign * req.gap.tolerance }
end

-- The least inductance at the peak current: of all temperatures, with the gap ground too long. A spec by
-- its ripple means the incremental inductance.
function candidates.least_inductance(req, part)
  local long, least, at = off_by(req, part, 1), math.huge, nil
  for _, temperature in ipairs(req.temperatures) do
    local value = long:solve { current = req.current.peak, temperature = temperature,
      only = { req.inductance_kind } }[req.inductance_kind]
    if value < least then least, at = value, temperature end
  end
  return least, at
end

-- Flux densities at the element and in the core, and the clear height, each with the gap at its worse
-- end.
local function facts_of(req, part)
  local short, long = off_by(req, part, -1), off_by(req, part, 1)
  local at_trip = short:solve { current = req.current.trip, temperature = req.hot }
  local nominal = long:solve { current = req.current.nominal, temperature = req.hot }
  return { nominal = math.abs(nominal.gaps[1].centre_flux_density),
    trip = math.abs(at_trip.gaps[1].centre_flux_density),
    core_trip = math.abs(at_trip.core_flux_density), limb = at_trip.core_flux_density_limb,
    hot = req.hot, gaps = #part.gap_entries[1].units,
    height = short.gap_entries[1].units[1].local_length, short = short }
end

local function try_sensors(req, part)
  local facts = facts_of(req, part)
  local chosen, tried = sensing.pick(facts, req.sensing)
  return { part = part, facts = facts, chosen = chosen, tried = tried }
end

-- A pocket just deep enough for the lowest candidate, as far as the spec allows.
local function try_pocket(req, core, turns, length, wire)
  local rules = req.sensing.pocket
  local pole = core.geometry.centre_pole
  if not rules or not pole or rules.diameter >= math.min(pole.width, pole.depth) then return nil end
  local heights, seen = {}, {}
  for _, sensor in ipairs(req.sensing.candidates) do
    local height = sensing.height(sensor, req.sensing)
    if not seen[height] then
      seen[height] = true
      heights[#heights + 1] = height
    end
  end
  table.sort(heights)
  for _, height in ipairs(heights) do
    local depth = math.ceil((height - length) / 2 / req.gap.step - 1e-9) * req.gap.step
    if depth > 0 and depth <= rules.depth_most then
      local pocket = { diameter = rules.diameter, depth = depth }
      local done, part = pcall(new_part, req, core, turns, length, pocket, wire)
      if done then
        -- The pocket takes some permeance off: the gap that gives the inductance moves a little.
        local found, refined = candidates.gap(req, part, length)
        local result = found and try_sensors(req, refined) or nil
        if result and result.chosen then return result end
      end
    end
  end
end

--- The gap for the wanted inductance at the worst temperature, less its tolerance, rounded down to the
-- spec's step (each keeps the inductance).
-- @treturn boolean whether a gap was found
-- @treturn part|table the part, or the error
function candidates.gap(req, part, near)
  local shortest = math.huge
  for _, temperature in ipairs(req.temperatures) do
    local length, err = fail.try(part.gap_for, part, { inductance = req.inductance,
      incremental = req.inductance_kind == "incremental_inductance", current = req.current.peak,
      temperature = temperature, shortest = near and near / 3, longest = near and near * 3 })
    if not length then return false, err end
    shortest = math.min(shortest, length)
  end
  local step = req.gap.step
  local rounded = math.floor((shortest - req.gap.tolerance) / step + 1e-9) * step
  if rounded <= req.gap.tolerance then
    return false, ("a gap of %.3f mm, which its tolerance of %.3f mm leaves nothing of"):format(
      shortest * 1e3, req.gap.tolerance * 1e3)
  end
  return true, part:with { gap = rounded }
end

local function first_turns(req, core)
  local area = core.geometry.minimum_area
  return math.max(1, math.floor(0.8 * req.inductance * req.current.trip
    / (req.flux_density_limit * area)))
end

-- One count of turns. Returns a design, or nil and the reason; `stop` when more turns can't help.
local function with_turns(req, core, turns, wire)
  local start = core.geometry.window_height / 20
  local part, err = fail.try(new_part, req, core, turns, start, nil, wire)
  if not part then
    return nil, ("%d turns do not fit: %s"):format(turns, err.allowed or err.message), true
  end
  local found, gapped = candidates.gap(req, part)
  if not found then return nil, "the inductance is out of reach: " .. tostring(gapped) end
  local design = try_sensors(req, gapped)
  if design.facts.core_trip > req.flux_density_limit then
    return nil, ("%d turns: %.0f mT in the %s at the trip current, above %.0f mT"):format(turns,
      1e3 * design.facts.core_trip, design.facts.limb, 1e3 * req.flux_density_limit)
  end
  design.turns, design.wire = turns, wire
  design.gap = gapped.gap_entries[1].length
  if design.chosen then return design end
  return nil, design
end

local function height_reason(design)
  local text = {}
  for _, entry in ipairs(design.tried) do
    text[#text + 1] = ("%s: %s"):format(entry.sensor.name, entry.refusals[1].reason)
  end
  return ("%d turns, gap %.2f mm, but no sensor: %s"):format(design.turns, design.gap * 1e3,
    table.concat(text, "; "))
end

-- All turns of one core; keeps the first design without a sensor for the pocket.
local function search_turns(req, core, wire)
  local reason, bare
  local first = first_turns(req, core)
  for turns = first, first + most_turns_tried do
    local design, why, stop = with_turns(req, core, turns, wire)
    if design then return design, nil, bare end
    if type(why) == "table" then
      bare = bare or why
    else
      reason = reason or why
      if stop then
        return nil, bare and height_reason(bare) .. ("; %d turns no longer fit"):format(turns)
          or why, bare
      end
    end
  end
  return nil, bare and height_reason(bare) or reason, bare
end

local function finish(req, design)
  design.probe = probe_module.new { part = design.part, sensor = design.chosen.sensor }
  design.req = req
  return design
end

--- The best part with one core.
-- @tparam table req from `requirements.read`
-- @tparam core core
-- @treturn table|nil design `{ part, turns, gap, wire, facts, chosen, tried, probe, pocket }`
-- @treturn string|nil reason why there is none
function candidates.with_core(req, core)
  if req.limits.volume and core.geometry.effective_volume > req.limits.volume then
    return nil, ("%.0f mm3, above the limit of %.0f mm3"):format(
      1e9 * core.geometry.effective_volume, 1e9 * req.limits.volume)
  end
  local pole = core.geometry.centre_pole
  if pole and (pole.hole or 0) > 0 then
    return nil, ("its post has a hole of %.1f mm, where a sensor on the axis sees little"):format(
      pole.hole * 1e3)
  end
  local wire = wire_for(req)
  local design, reason, bare = search_turns(req, core, wire)
  if bare and req.sensing.pocket then
    -- Fewer turns than any gap that takes the package: compare, and take the pocket when it wins
    -- copper.
    local pocketed = try_pocket(req, core, bare.turns, bare.gap, wire)
    if pocketed and pocketed.facts.core_trip <= req.flux_density_limit then
      pocketed.turns, pocketed.wire = bare.turns, wire
      pocketed.gap = pocketed.part.gap_entries[1].length
      pocketed.pocket = pocketed.part.gap_entries[1].pocket
      pocketed.rival = design
      design = pocketed
    end
  end
  if not design then return nil, reason end
  return finish(req, design)
end

--- Tries the cores from the smallest and takes the first that works.
-- @tparam table req
-- @treturn table|nil design
-- @treturn table list of `{ core, reason }` for the cores refused on the way
function candidates.search(req)
  local refused = {}
  for _, core in ipairs(req.cores) do
    local design, reason = candidates.with_core(req, core)
    if design then return design, refused end
    refused[#refused + 1] = { core = core, reason = reason }
  end
  return nil, refused
end

return candidates
