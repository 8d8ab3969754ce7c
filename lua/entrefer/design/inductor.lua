--- The inductor flow: choose core, turns, gap, wire and sensor, and judge the result.
-- @module entrefer.design.inductor
local bobbin = require "entrefer.bobbin"
local candidates = require "entrefer.design.candidates"
local linearity = require "entrefer.design.linearity"
local sensing = require "entrefer.design.sensing"
local verdict = require "entrefer.design.verdict"

local inductor = {}

local function mean_turn(design)
  local part = design.part
  return (bobbin.new(part.core, part.bobbin):mean_turn { turns = design.turns,
    wire = design.wire })
end

--- DC resistance of the winding at a temperature (degC), ohm, with the mean turn of its own build.
function inductor.resistance(design, temperature)
  return design.turns * mean_turn(design) * design.wire:resistance_per_length(temperature)
end

local function flux_lines(req, design)
  local facts, rules = design.facts, req.sensing
  local sensor = design.chosen.sensor
  local least, temperature = candidates.least_inductance(req, design.part)
  return {
    verdict.line("inductance", ("%s at the peak current, %g degC, long gap"):format(
      req.inductance_kind:gsub("_", " "), temperature), least, req.inductance, "H", "at least"),
    verdict.line("flux_density", "flux density of the core at the trip current, hot, short gap",
      facts.core_trip, req.flux_density_limit, "T", "at most"),
    verdict.line("height", "clear height for the sensor, short gap", facts.height,
      sensing.height(sensor, rules), "m", "at least"),
    verdict.line("range", "flux density at the sensor, trip current", facts.trip,
      rules.most_use * sensor.range, "T", "at most"),
    verdict.line("signal", "flux density at the sensor, nominal current", facts.nominal,
      rules.least_use * sensor.range, "T", "at least"),
    verdict.line("nonlinearity", "shortfall of the reading at the trip current, hot",
      math.max(linearity.shortfall(facts.short, req.current.trip, req.hot), 0),
      req.limits.nonlinearity, "1", "at most"),
  }
end

local function judge(req, design)
  local at_peak = design.part:solve { current = req.current.peak, temperature = req.hot }
  local lines = flux_lines(req, design)
  if req.sensing.bandwidth then
    lines[#lines + 1] = verdict.line("bandwidth", "bandwidth of the sensor",
      design.chosen.sensor.bandwidth or 0, req.sensing.bandwidth, "Hz", "at least")
  end
  lines[#lines + 1] = verdict.line("fill", "share of the window filled by the wire",
    design.part.fill, 1, "1", "at most")
  if req.limits.resistance then
    lines[#lines + 1] = verdict.line("resistance", "winding resistance, hot",
      inductor.resistance(design, req.hot), req.limits.resistance, "ohm", "at most")
  end
  return verdict.of(lines), at_peak
end

--- Runs the flow.
-- @tparam table req from `requirements.read`
-- @treturn table `{ design (nil when no core works), refused = list of { core, reason }, verdict,
--   at_peak, at_trip, resistance, mean_turn, rivals }`
function inductor.run(req)
  local design, refused = candidates.search(req)
  if not design then
    local line = verdict.line("turns", "cores that can do it", 0, 1, "1", "at least")
    return { refused = refused, verdict = verdict.of { line } }
  end
  local judged, at_peak = judge(req, design)
  return {
    design = design, refused = refused, verdict = judged, at_peak = at_peak,
    at_trip = design.part:solve { current = req.current.trip, temperature = req.hot },
    resistance = inductor.resistance(design, req.hot), mean_turn = mean_turn(design),
    rival = design.rival,
  }
end

return inductor
