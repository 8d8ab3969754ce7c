--- Monotone curves through points: a calibration table, a characteristic read off a chart.
-- @module entrefer.curve
local core = require "entrefer.core"
local fail = require "entrefer.fail"

local curve = {}

--- A curve that never falls: cubic between the points, monotone between any two of them.
-- @tparam table spec `x` (list, strictly rising), `y` (list, not falling), optional `first_slope`,
--   `last_slope` (0 or more; limited to the monotone region)
-- @return object with `at(x)` (value, slope, second derivative), `integral(x)` (from the first point),
--   `inverse(y)`; each refuses what lies outside the points
-- @raise an error table naming the point
function curve.new(spec)
  fail.fields(spec, { "x", "y", "first_slope", "last_slope" }, "curve")
  return core.curve(spec)
end

return curve
