--- One trial part judged for a sensor in its gap.
-- @module entrefer.stackup.trial
local bobbin_module = require "entrefer.bobbin"
local fail = require "entrefer.fail"
local object = require "entrefer.object"
local part_module = require "entrefer.part"
local probe_module = require "entrefer.probe"

local trial = {}

local function mm(length) return ("%.2f mm"):format(length * 1e3) end

-- A winding without its wire: the network doesn't ask for it, and the window is judged apart.
local function bare_winding(spec, turns)
  local copy = object.changed(spec, { turns = turns })
  copy.wire = nil
  return copy
end

--- A part like the one given, without wire.
-- @tparam table changes `core`, `turns`, `gap` = fields of the gap entry that change
function trial.part(context, changes)
  local given = context.request.part
  local spec = given.spec
  return part_module.new { core = changes.core or given.core, material = given.material,
    bobbin = not changes.core and spec.bobbin or nil,
    gaps = { object.changed(spec.gaps[1], changes.gap or {}) },
    windings = { bare_winding(spec.windings[1], changes.turns or context.turns) } }
end

--- The part with the gap for the wanted inductance, or nil and the reason.
function trial.gapped(context, part)
  local request = context.request
  local length, found = fail.try(part.gap_for, part, { inductance = request.inductance,
    current = request.current, temperature = request.temperature })
  if not length then return nil, "no gap there gives the inductance: " .. found.message end
  return found
end

--- What all ways share.
function trial.prepare(stack, request)
  local context = { stack = stack, request = request, turns = request.part.windings[1].turns,
    needed = stack:smallest_gap(request.basis) }
  local start = trial.part(context, {})
  local wanted, part = start:gap_for { inductance = request.inductance, current = request.current,
    temperature = request.temperature }
  context.wanted, context.part = wanted, part
  local tripped = part:solve { current = request.trip, temperature = request.temperature }
  context.saturates = math.abs(tripped.core_flux_density) > request.flux_density
  context.fits = wanted >= context.needed and not context.saturates
  return context
end

-- Mean turn and window of the usual bobbin: for the ratio of resistances between cores.
local function copper_figure(core)
  local bobbin = fail.try(bobbin_module.new, core)
  if not bobbin then return nil end
  return bobbin:mean_turn { thickness = bobbin.depth } / bobbin.area
end

local function resistance_ratio(context, part)
  local ratio = (part.windings[1].turns / context.turns) ^ 2
  if part.core == context.part.core then return ratio end
  local own, base = copper_figure(part.core), copper_figure(context.part.core)
  return own and base and ratio * own / base or nil
end

local function same_wire_fits(context, part)
  local wire = context.request.part.windings[1].wire
  if not wire then return nil end
  local spec = part.spec
  local winding = object.changed(spec.windings[1], { wire = wire })
  return fail.try(part_module.new, object.changed(spec, { windings = { winding } })) ~= nil
end

-- Field at the element over the field in the gap's middle.
local function relative_field(part, stack, height)
  local place = stack:places(height)[1]
  local probe = fail.try(probe_module.new, { part = part, sensor = stack.sensor,
    position = { z = place.position } })
  return probe and probe.relative_field or 1
end

local function reasons(context, record)
  local list, request = {}, context.request
  if record.clear_height and record.clear_height < record.needed * (1 - 1e-9) then
    list[#list + 1] = ("clear height %s, needs %s"):format(mm(record.clear_height), mm(record.needed))
  end
  if record.inductance < request.inductance * 0.999 then
    list[#list + 1] = ("inductance %.1f %% short"):format(
      100 * (1 - record.inductance / request.inductance))
  end
  if record.core_flux_density > request.flux_density then
    list[#list + 1] = ("core at %.0f mT at the trip current, limit %.0f mT"):format(
      1e3 * record.core_flux_density, 1e3 * request.flux_density)
  end
  if record.resistance_ratio and record.resistance_ratio > request.resistance_ratio then
    list[#list + 1] = ("%.1f times the winding's resistance, at most %.1f times"):format(
      record.resistance_ratio, request.resistance_ratio)
  end
  return list
end

-- What a feasible way still asks for.
local function remarks(record)
  local list = {}
  if not record.range_fits then
    list[#list + 1] = ("the sensor needs a range of %.0f mT, this class has %.0f mT"):format(
      1e3 * record.range_needed, 1e3 * record.range)
  end
  if record.same_wire_fits == false then list[#list + 1] = "thinner wire: this one no longer fits" end
  return list
end

--- Judges a part.
-- @tparam table options `name`, `stack` (default the context's), `needed` (m), `relative` (field at the
--   element over the gap's middle, where it isn't in the stack's place), `outside` = true (not in the
--   gap: no clear height), `note` (text), and fields that go into the record as they are under `extra`
function trial.judge(context, part, options)
  local request, stack = context.request, options.stack or context.stack
  local solved = part:solve { current = request.current, temperature = request.temperature }
  local tripped = part:solve { current = request.trip, temperature = request.temperature }
  local height = part.gap_entries[1].units[1].local_length
  local relative = options.relative or relative_field(part, stack, height)
  local function at_element(result) return math.abs(result.gaps[1].centre_flux_density) * relative end
  local record = object.changed(options.extra or {}, {
    name = options.name, part = part, core = part.core.name, sensor = stack.sensor.name,
    turns = part.windings[1].turns, gap = part.gap_entries[1].length,
    inductance = solved.inductance, flux_density_per_ampere = at_element(solved) / request.current,
    core_flux_density = math.abs(tripped.core_flux_density),
    clear_height = not options.outside and height or nil, needed = options.needed or context.needed,
    resistance_ratio = resistance_ratio(context, part), same_wire_fits = same_wire_fits(context, part),
    range = stack.sensor.range, range_needed = at_element(tripped) / request.range_use,
    warnings = solved.warnings,
  })
  record.range_fits = record.range_needed <= record.range
  local against = reasons(context, record)
  for _, reason in ipairs(options.against or {}) do against[#against + 1] = reason end
  record.feasible = #against == 0
  local said = record.feasible and remarks(record) or against
  if options.note then said[#said + 1] = options.note end
  record.why = table.concat(said, "; ")
  return record
end

--- A way that can't be built.
function trial.impossible(name, why)
  return { name = name, feasible = false, why = why }
end

--- A way that nobody needs, as the gap that the inductance wants takes the sensor.
function trial.not_called_for(name)
  return trial.impossible(name, "not called for: the gap that the inductance wants takes the sensor")
end

trial.mm = mm

return trial
