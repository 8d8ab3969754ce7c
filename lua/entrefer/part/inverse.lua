--- Inverse questions: the gap or the turns for a wanted inductance, the current at a limit.
-- @module entrefer.part.inverse
local core = require "entrefer.core"
local fail = require "entrefer.fail"
local quantity = require "entrefer.quantity"

local inverse = {}

local function inductance_of(part, at, kind)
  return part:solve { current = at.current, temperature = at.temperature, only = { kind } }[kind]
end

local function read_target(fields, at, what)
  fail.fields(at, { "inductance", "current", "temperature", "incremental", "shortest", "longest" },
    what)
  if #fields.windings > 1 then
    fail("number of windings", #fields.windings, "one: the question is about one winding")
  end
  return quantity.read(at.inductance, "H", "inductance", { positive = true }), {
    current = quantity.read(at.current or 0, "A", "current"), temperature = at.temperature,
  }, at.incremental and "incremental_inductance" or "inductance"
end

-- A short gap saturates the core and a long one has little permeance: incremental inductance has a
-- maximum between them (the chord inductance mostly falls all the way). The wanted gap lies beyond it,
-- where the core still has room.
local function peak_of(values)
  local peak = 1
  for i = 2, #values do
    if values[i] > values[peak] then peak = i end
  end
  return peak
end

-- A gap off the leg's middle or beside another has less room than a third of the leg.
local function longest_buildable(part, longest, shortest)
  while longest > shortest and not pcall(part.with, part, { gap = longest }) do
    longest = 0.9 * longest
  end
  return longest
end

--- The length of gap 1 for a wanted inductance at a current and temperature.
-- Of the two lengths that can give it, the longer is returned: there the core is not saturated.
-- @tparam table at `inductance` (H), `current` (A), `temperature` (degC), `incremental` (true: the
--   incremental inductance is meant), `shortest`, `longest` (m; default a thousandth and a third of
--   the leg's length, as far as there is room; of a ring's mean diameter)
-- @treturn number gap length, m
-- @treturn part with that gap
-- @raise an error table when no gap in the range gives it, with the most that can be had
function inverse.gap(part, fields, at)
  local target, request, kind = read_target(fields, at, "gap_for")
  if not fields.gap_entries[1] then
    fail("number of gaps", 0, "at least one: gap 1 is the one that is changed")
  end
  if fields.gap_entries[1].permeance then
    fail.text("gap 1 permeance", "the permeance of gap 1 is given, so its length changes nothing")
  end
  local geometry = fields.core.geometry
  local scale = geometry.window_height or geometry.effective_length / 4
  local shortest = quantity.read(at.shortest or scale / 1000, "m", "shortest", { positive = true })
  local longest = quantity.read(at.longest or longest_buildable(part,
    scale / 3 / fields.gap_entries[1].count, shortest), "m", "longest", { min = shortest })
  local function value(length)
    return inductance_of(part:with { gap = length }, request, kind)
  end
  local lengths, values, steps = {}, {}, 24
  for i = 0, steps do
    lengths[i + 1] = shortest * (longest / shortest) ^ (i / steps)
    values[i + 1] = value(lengths[i + 1])
  end
  local peak = peak_of(values)
  if target > values[peak] or target < values[#values] then
    fail("inductance", target, ("from %.4g H (gap %.4g m) to %.4g H (gap %.4g m) at this current")
      :format(values[#values], longest, values[peak], lengths[peak]))
  end
  local length = core.root(function(l) return value(l) - target end, lengths[peak], longest)
  return length, part:with { gap = length }
end

--- The turns of winding 1 for a wanted inductance at a current and temperature, the gaps kept.
-- @tparam table at as `gap_for`
-- @treturn integer turns, rounded up
-- @treturn number turns, exact
-- @raise an error table when the build no longer fits the window or a million turns don't give it
function inverse.turns(part, fields, at)
  local target, request, kind = read_target(fields, at, "turns_for")
  -- The question is about the network: the window is checked with the whole number at the end.
  local spec = {}
  for key, value in pairs(fields.spec.windings[1]) do spec[key] = value end
  spec.wire = nil
  local bare = part:with { windings = { spec } }
  local function value(turns)
    return inductance_of(bare:with { turns = turns }, request, kind)
  end
  local low, high = 1e-3, math.max(1, fields.windings[1].turns)
  while value(high) < target do
    if high > 1e6 then
      fail("inductance", target, ("below %.4g H, what %.4g turns give"):format(value(high), high))
    end
    low, high = high, 2 * high
  end
  local exact = core.root(function(turns) return value(turns) - target end, low, high)
  local whole = math.ceil(exact - 1e-9)
  part:with { turns = whole }
  return whole, exact
end

-- The largest current up to which a rising question stays below its limit.
local function first_crossing(question, start, what)
  local low, high = 0, start
  while question(high) < 0 do
    low, high = high, 2 * high
    if high > start * 1e9 then
      fail.text(what, ("the limit for %s is never reached at any current"):format(what))
    end
  end
  return core.root(question, low, high)
end

-- A current at which the plain estimate gives 0.01 T: small for any magnetic part.
local function small_current(fields)
  local path = fields.plain.gap > 0 and fields.plain.gap or fields.plain.iron / 1000
  return 0.01 / core.mu0 * path / fields.windings[1].turns
end

--- The current at which inductance has dropped by a share, or the core reaches a flux density.
-- @tparam table at `temperature` (degC) and either `drop` (share of the inductance at 0 A, 0..1;
--   `incremental` = true for the incremental one) or `flux_density` (T, largest of all limbs, or of
--   `limb`)
-- @treturn number current, A
function inverse.current(part, fields, at)
  fail.fields(at, { "temperature", "drop", "incremental", "flux_density", "limb" }, "current_for")
  if (at.drop == nil) == (at.flux_density == nil) then
    fail.text("drop", "give one of drop or flux_density")
  end
  if #fields.windings > 1 then
    fail("number of windings", #fields.windings, "one: the question is about one winding")
  end
  local start = small_current(fields)
  if at.drop then
    local drop = quantity.read(at.drop, "1", "drop", { positive = true, max = 0.99 })
    local kind = at.incremental and "incremental_inductance" or "inductance"
    local function value(current)
      return inductance_of(part, { current = current, temperature = at.temperature }, kind)
    end
    -- A measured curve may rise at first (its foot is flatter than what follows): the drop counts
    -- from the inductance at 0 A.
    local initial = value(0)
    return first_crossing(function(current) return initial * (1 - drop) - value(current) end, start,
      "drop")
  end
  local limit = quantity.read(at.flux_density, "T", "flux density", { positive = true })
  return first_crossing(function(current)
    local solved = part:solve { current = current, temperature = at.temperature }
    if not at.limb then return math.abs(solved.core_flux_density) - limit end
    local limb = solved.limbs[at.limb]
    if not limb then
      local names = {}
      for name in pairs(solved.limbs) do names[#names + 1] = name end
      table.sort(names)
      fail.unknown("limb", tostring(at.limb), names)
    end
    return math.abs(limb.flux_density) - limit
  end, start, "flux density")
end

return inverse
