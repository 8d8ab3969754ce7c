--- How far the flux density at the sensor stays proportional to the current.
-- @module entrefer.design.linearity
local core = require "entrefer.core"

local linearity = {}

local function per_ampere(part, current, temperature)
  local request = { current = current, temperature = temperature, only = { "gap_flux_density" } }
  return part:solve(request).gap_flux_density / current
end

--- Shortfall of the reading at a current against the slope at small currents, share (positive: the
-- reading falls short, as it does when the core saturates).
function linearity.shortfall(part, current, temperature)
  return 1 - per_ampere(part, current, temperature) / per_ampere(part, current * 1e-4, temperature)
end

--- The current at which the reading falls short by a share, up to `most`; nil when it never does.
-- @tparam part part
-- @number share e.g. 0.02
-- @number temperature degC
-- @number most A
function linearity.limit(part, share, temperature, most)
  local function excess(current) return linearity.shortfall(part, current, temperature) - share end
  -- A curved foot makes the reading rise first, so the shortfall is looked for from above zero.
  local low, high = most / 1024, most / 1024
  while excess(high) < 0 do
    if high >= most then return nil end
    low, high = high, math.min(2 * high, most)
  end
  if low == high then return low end
  return core.root(excess, low, high)
end

return linearity
