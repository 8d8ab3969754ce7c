--- Ways out by turns, gap length and core size.
-- @module entrefer.stackup.turns
local fail = require "entrefer.fail"
local shape = require "entrefer.shape"
local trial = require "entrefer.stackup.trial"

local turns = {}

--- The gap that the inductance wants, with the turns given.
function turns.as_wanted(context)
  return trial.judge(context, context.part, { name = "as the inductance wants" })
end

--- The gap that the sensor needs, with the turns given: what it costs in inductance.
function turns.longer_gap(context)
  local name = "longer gap, same turns"
  if context.needed <= context.wanted then
    return trial.not_called_for(name)
  end
  local part, err = fail.try(trial.part, context, { gap = { length = context.needed } })
  if not part then return trial.impossible(name, err.message) end
  return trial.judge(context, part, { name = name })
end

-- The turns that give the inductance with the sensor's gap in a core.
local function least_turns(context, core)
  local request = context.request
  local start, err = fail.try(trial.part, context, { core = core, gap = { length = context.needed } })
  if not start then return nil, err.message end
  local whole, refused = fail.try(start.turns_for, start, { inductance = request.inductance,
    current = request.current, temperature = request.temperature })
  if not whole then return nil, refused.message end
  return whole, start
end

local most_steps = 12

-- The gap is the one for the whole number of turns, a little longer than needed; while the core is over
-- its limit the turns rise by as much as it is over.
local function wound_for(context, name, core)
  local whole, start = least_turns(context, core)
  if not whole then return nil, start end
  if not core then whole = math.max(whole, math.floor(context.turns) + 1) end
  local record
  for _ = 1, most_steps do
    local part, why = trial.gapped(context, start:with { turns = whole })
    if not part then return record, why end
    record = trial.judge(context, part, { name = name })
    local over = record.core_flux_density / context.request.flux_density
    if over <= 1 then return record end
    whole = math.max(whole + 1, math.ceil(whole * over))
  end
  return record
end

--- More turns with a longer gap in the same core.
function turns.more_turns(context)
  local name = "more turns, longer gap"
  if context.fits then return trial.not_called_for(name) end
  local record, why = wound_for(context, name, nil)
  return record or trial.impossible(name, why)
end

local function smaller_cores(context)
  local own, list = context.part.core, {}
  local given = context.request.cores
  if given ~= nil and type(given) ~= "table" then fail("cores", given, "a list of cores") end
  if not given and own.shape == "custom" then return {} end
  for _, entry in ipairs(given or shape.names(own.shape)) do
    local core = shape.of(entry, "cores")
    if core.geometry.effective_volume < own.geometry.effective_volume * (1 - 1e-9) then
      list[#list + 1] = core
    end
  end
  table.sort(list, function(a, b)
    return a.geometry.effective_volume > b.geometry.effective_volume
  end)
  return list
end

--- The next smaller core that works: a smaller section wants a longer gap for the same energy.
function turns.smaller_core(context)
  local name = "smaller core"
  local list = smaller_cores(context)
  if #list == 0 then return trial.impossible(name, "no smaller core in the list") end
  local first, refused
  for _, core in ipairs(list) do
    local record, why = wound_for(context, name, core)
    if record and record.feasible then return record end
    first = first or record
    refused = refused or ("%s: %s"):format(core.name, record and record.why or why)
  end
  if not first then return trial.impossible(name, "none of the smaller cores works; " .. refused) end
  first.why = ("none of %d smaller cores works; nearest, %s"):format(#list, refused)
  return first
end

return turns
