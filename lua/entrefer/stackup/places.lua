--- Ways out by the sensor's place, its package, or the gap's arrangement.
-- @module entrefer.stackup.places
local core_solver = require "entrefer.core"
local fail = require "entrefer.fail"
local object = require "entrefer.object"
local sensor_module = require "entrefer.sensor"
local trial = require "entrefer.stackup.trial"

local places = {}

local function pocketed(context, depth)
  local pocket = { diameter = context.request.pocket.diameter, depth = depth }
  local part, err = fail.try(trial.part, context, { gap = { length = context.wanted,
    pocket = pocket } })
  if not part then return nil, err.message end
  return trial.gapped(context, part)
end

-- The least depth that gives the room: the pocket takes some permeance off, so the gap shrinks a little.
local function deep_enough(context, needed)
  local rules = context.request.pocket
  local steps = math.max(1, math.ceil((needed - context.wanted) / 2 / rules.step - 1e-9))
  local part, why
  for step = steps, math.floor(rules.most_depth / rules.step + 1e-9) do
    part, why = pocketed(context, step * rules.step)
    if not part then return nil, why end
    if part.gap_entries[1].units[1].local_length >= needed then return part end
  end
  return nil, why or ("%s of clear height needs pockets deeper than %s in each face"):format(
    trial.mm(needed), trial.mm(rules.most_depth))
end

-- Change of reading and inductance when both pockets come out deeper by the tolerance, gap held.
local function depth_effect(context, part, record)
  local pocket = part.gap_entries[1].pocket
  local change = math.min(context.request.pocket.tolerance, pocket.depth / 2)
  local function with_depth(depth)
    return trial.judge(context, trial.part(context, { gap = { length = record.gap,
      pocket = { diameter = pocket.diameter, depth = depth } } }), { name = record.name })
  end
  local deeper, flatter = with_depth(pocket.depth + change), with_depth(pocket.depth - change)
  local function half(name) return (deeper[name] - flatter[name]) / 2 / record[name] end
  return { depth = change, flux_density_per_ampere = half "flux_density_per_ampere",
    inductance = half "inductance" }
end

--- A blind pocket in each pole face.
function places.pocket(context)
  local name, rules = "pocket in the pole faces", context.request.pocket
  local pole = context.part.gap_entries[1].units[1].pole
  if context.part.topology == "ring" or not pole then
    return trial.impossible(name, "a ring's section is too small and its gap is sawn")
  end
  local needed = context.stack:smallest_gap(context.request.basis, { rules.tolerance, rules.tolerance })
  if needed <= context.wanted then
    return trial.not_called_for(name)
  end
  local part, why = deep_enough(context, needed)
  if not part then return trial.impossible(name, why) end
  local pocket = part.gap_entries[1].pocket
  local record = trial.judge(context, part, { name = name, needed = needed })
  record.pocket, record.effect = pocket, depth_effect(context, part, record)
  local text = ("%s deep in each face, diameter %s; depth +%s moves the reading by %+.1f %%, the"
    .. " inductance by %+.1f %%"):format(trial.mm(pocket.depth), trial.mm(pocket.diameter),
    trial.mm(record.effect.depth), 100 * record.effect.flux_density_per_ampere,
    100 * record.effect.inductance)
  if math.min(pole.width, pole.depth) - pocket.diameter < 2 * record.gap then
    text = text .. "; the rim is within a gap's length of the pole's edge: check by a field solution"
  end
  record.why = record.why == "" and text or record.why .. "; " .. text
  return record
end

-- Flat legs have an open side without winding in front; a round post only its window.
local function place_beside(unit, distance)
  local pole = unit.pole
  if pole.shape == "round" then return pole.width / 2 + distance, 0 end
  return 0, pole.depth / 2 + distance
end

--- The fringing field beside the gap that the inductance wants.
function places.beside(context)
  local name, distance = "in the fringing field beside the gap", context.request.beside
  local unit = context.part.gap_entries[1].units[1]
  if not unit.shape then
    return trial.impossible(name, "no closed field profile beside a gap of this core")
  end
  local function share(at)
    local x, y = place_beside(unit, at)
    return core_solver.gap_midplane(unit.shape, x, y)
  end
  local relative, valid = share(distance)
  local step = math.min(0.2e-3, distance / 2)
  local slope = (share(distance + step) - share(distance - step)) / 2 / relative
  local against = {}
  if not valid then
    against[1] = ("%s from the edge is outside the closed profile (one gap length): field solution"
      .. " needed"):format(trial.mm(distance))
  end
  if context.stack.stacked > 1 then
    against[#against + 1] = ("only one of %d elements lies in the gap's middle plane"):format(
      context.stack.stacked)
  end
  return trial.judge(context, context.part, { name = name, relative = relative, outside = true,
    against = against, extra = { share = relative, place_effect = slope },
    note = ("element %s outside the pole: %.0f %% of the gap's field; %+.1f %% for %s farther out; the"
      .. " winding's own field is not in it and wire must stay clear"):format(trial.mm(distance),
      100 * relative, 100 * slope, trial.mm(step)) })
end

-- The gap moved to other legs, with the length that gives the inductance there.
local function rearranged(context, name, gap, note)
  local start, err = fail.try(trial.part, context, { gap = object.changed({ length = context.wanted },
    gap) })
  if not start then return trial.impossible(name, err.message) end
  local part, why = trial.gapped(context, start)
  if not part then return trial.impossible(name, why) end
  return trial.judge(context, part, { name = name, note = note })
end

--- The gap in the outer legs of a three-leg core, in one leg only of a two-leg core.
function places.outer_leg(context)
  local topology = context.part.topology
  if topology == "three_leg" then
    return rearranged(context, "gap in the outer legs", { leg = "outer", kind = "ground" },
      "each outer leg has a gap of this length; nothing shields it from outside fields")
  elseif topology == "two_leg" and #context.part.gap_entries[1].units > 1 then
    return rearranged(context, "gap in one leg only", { leg = "left", kind = "ground" },
      "the whole gap in one place")
  end
  return trial.impossible("gap in another leg", "the core has no other leg for it")
end

--- Two gaps in series instead of one, or one instead of several.
function places.other_count(context)
  local count = context.part.gap_entries[1].count
  if count > 1 then
    return rearranged(context, "one gap instead of " .. count, { count = 1 }, "the whole gap in one place")
  end
  local several = #context.part.gap_entries[1].units > 1
  return rearranged(context, several and "two gaps in each leg" or "two gaps in series", { count = 2 },
    "each is about half as long; the flux density in each is about the same")
end

local function fitting(context, list)
  local best
  for _, entry in ipairs(list) do
    local sensor = sensor_module.of(entry, "sensors")
    local stack = context.stack:with { sensor = sensor }
    local needed = stack:smallest_gap(context.request.basis)
    if sensor.elements == 1 and needed <= context.wanted then
      local record = trial.judge(context, context.part, { name = "thinner sensor", stack = stack,
        needed = needed })
      -- Of those whose range holds the trip current the smallest, else the largest there is.
      local better = not best or record.range_fits and (not best.range_fits or record.range < best.range)
        or not record.range_fits and not best.range_fits and record.range > best.range
      if better then best = record end
    end
  end
  return best
end

--- Another sensor class that the wanted gap takes.
function places.thinner_sensor(context)
  if context.wanted >= context.needed then return trial.not_called_for "thinner sensor" end
  local given = context.request.sensors
  if given ~= nil and type(given) ~= "table" then fail("sensors", given, "a list of sensors") end
  local best = fitting(context, given or sensor_module.names())
  if best then return best end
  return trial.impossible("thinner sensor", ("no class in the list goes into %s"):format(
    trial.mm(context.wanted)))
end

return places
