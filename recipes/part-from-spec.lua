-- From a spec file to a part, a sensor and written tables.

local function percent(share) return ("%+.1f %%"):format(100 * share) end

local function verdict_table(ef, verdict)
  local rows = {}
  for i, line in ipairs(verdict.lines) do
    rows[i] = { line.passed and "pass" or "FAIL", line.name,
      ef.format(line.value, line.unit, 4, { ascii = true }), line.sense,
      ef.format(line.limit, line.unit, 4, { ascii = true }), percent(line.margin) }
  end
  return { columns = { { name = "verdict" }, { name = "limit on" }, { name = "value" },
    { name = "sense" }, { name = "limit" }, { name = "margin" } }, rows = rows }
end

local function open_with_verdict(ef, page, verdict, title)
  page:heading("Verdict")
  page:prose(("%s: %s."):format(title, verdict.passed and "PASS, every limit is kept"
    or ("FAIL, %d of %d limits are broken"):format(#verdict.failed, #verdict.lines)))
  page:table("verdict", verdict_table(ef, verdict))
  local first = verdict.first
  page:prose(("%s: %s (margin %s). What would change it: %s."):format(verdict.passed
    and "First limit to break" or "Worst limit", first.name, percent(first.margin), first.change))
end

local function sensor_table(tried)
  local rows = {}
  for i, entry in ipairs(tried) do
    local reasons = {}
    for k, refusal in ipairs(entry.refusals) do reasons[k] = refusal.reason end
    rows[i] = { entry.sensor.name, #reasons == 0 and "fits" or "refused",
      table.concat(reasons, "; ") }
  end
  return { columns = { { name = "sensor" }, { name = "result" }, { name = "reason" } },
    rows = rows }
end

local function scaled(list, factor)
  local out = {}
  for i, value in ipairs(list) do out[i] = value * factor end
  return out
end

local function limit(name, to, value)
  return { name = name, kind = "limit", x = { 0, to }, y = { value, value } }
end

-- Inductance, flux densities and sensor voltage, hot, with the plain estimate and the limits.
local function pictures(page, probe, req, raw, to)
  local hot, part = raw[#raw], probe.part
  local plain = part:solve { current = to, temperature = req.hot }.estimate
  local x = { label = "current", unit = "A", from = 0, to = to }
  if req.inductance then
    local series = { limit("least, from the spec", to, req.inductance * 1e6),
      limit("plain estimate", to, plain.inductance * 1e6) }
    for _, one in ipairs(raw) do
      series[#series + 1] = { name = ("%g degC"):format(one.temperature), x = one.sweep.current,
        y = scaled(one.sweep.inductance, 1e6) }
    end
    page:plot("inductance", { title = "Inductance", x = x,
      y = { label = "flux linkage / current", unit = "uH", from = 0 }, series = series,
      alt = "Inductance against current at each temperature, with the least of the spec and the plain"
        .. " estimate" })
  end
  page:plot("flux-density", { title = ("Flux density at %g degC"):format(req.hot), x = x,
    y = { label = "flux density", unit = "mT", from = 0 },
    alt = "Flux density of the core and in the gap against current, with the limit and the plain"
      .. " estimate",
    series = {
      { name = "core, largest", x = hot.sweep.current, y = scaled(hot.sweep.core_flux_density, 1e3) },
      { name = "middle of the gap", x = hot.sweep.current,
        y = scaled(hot.sweep.gap_flux_density, 1e3) },
      { name = "plain estimate", x = { 0, to }, y = { 0, plain.flux_density * 1e3 } },
      limit("limit of the core", to, req.flux_density_limit * 1e3) } })
  local around = part:path { current = req.current.trip, temperature = req.hot }
  local along = scaled(around.distance, 1e3)
  page:plot("flux-density-along-the-path", { title = "Core flux density along the path, trip current",
    x = { label = "distance along the path", unit = "mm", from = 0, to = along[#along] },
    y = { label = "mean over the section", unit = "mT", from = 0 },
    alt = "Flux density of the core along the magnetic path at the trip current, hot, with its limit",
    series = { { name = "core", x = along, y = scaled(around.flux_density, 1e3) },
      limit("limit of the core", along[#along], req.flux_density_limit * 1e3) } })
  local voltages = {}
  for i, one in ipairs(raw) do
    voltages[i] = { name = ("%g degC"):format(one.temperature), x = one.sweep.current,
      y = one.voltage }
  end
  page:plot("sensor-voltage", { title = "Sensor voltage", x = x, series = voltages,
    y = { label = "voltage", unit = "V" },
    alt = "Sensor voltage against current at each temperature" })
end

local function against_current(ef, page, probe, req)
  local sweep = { to = req.sweep.to and ef.quantity(req.sweep.to, "A", "sweep to")
    or 1.25 * req.current.trip, points = req.sweep.points or 11 }
  local columns, rows, raw = ef.design.against_current(probe, req.temperatures, sweep)
  page:heading("Against current and temperature")
  pictures(page, probe, req, raw, sweep.to)
  page:table("against-current", { columns = columns, rows = rows })
end

local function cautions(page)
  page:heading("Cautions")
  page:caution("Energy is stored in the inductor: breaking its current makes a high voltage. A"
    .. " saturated inductor no longer limits the current.")
  page:caution("A reading taken from the flux falls short exactly when the core saturates: it is no"
    .. " sole means of protection.")
  page:caution("Insulation, creepage and clearance (IEC 60664-1; IEC 60664-4 above 30 kHz; the"
    .. " product's own standard) must be confirmed to the code in force by a qualified person."
    .. " Ferrite counts as a conductor.")
  page:caution("Losses are not part of this flow: a long gap with a large ripple heats the copper near"
    .. " it; keep the winding about one gap length away.")
  page:caution("Cores and windings get hot. Grinding ferrite makes dust: keep it out of lungs and"
    .. " eyes. Computed from a model; not validated on hardware.")
end

local function beside(ef, page, label, value, plain, unit)
  page:value(label, value, unit, ("plain estimate %s, ratio %.3f"):format(
    ef.format(plain, unit, 4, { ascii = true }), value / plain))
end

local function inductor_page(ef, page, req, result)
  local design = result.design
  page:heading("The part")
  page:value("core", design.part.core.name)
  page:value("material", req.material.name, nil, req.material.source)
  page:value("turns", ("%d"):format(design.turns))
  page:value("gap", design.gap, "m", design.pocket and ("with a pocket of %.2f mm by %.2f mm in each"
    .. " pole face"):format(design.pocket.diameter * 1e3, design.pocket.depth * 1e3) or nil)
  page:value("wire", design.wire.name or tostring(design.wire))
  page:value("winding resistance, hot", result.resistance, "ohm", ("dc, mean turn %.1f mm"):format(
    1e3 * result.mean_turn))
  page:value("sensor", design.chosen.sensor.name, nil, "generic class, replace by your supplier's data")
  page:drawing("section", design.part, design.probe, "The part and its sensor, to scale. Winding block"
    .. " by the bobbin's rule set.")
  page:prose(("Judged with the gap off by its tolerance of %.2f mm either way, each limit at its worse"
    .. " end. The network itself is good to about 1 %% for a centre gap in two dimensions; open sides"
    .. " and fringing in three add a few per cent: leave that much margin or measure."):format(
    1e3 * req.gap.tolerance))
  local s = result.at_peak
  page:heading("Headline results at the peak current, hot")
  beside(ef, page, "inductance", s.inductance, s.estimate.inductance, "H")
  beside(ef, page, "flux density in the gap's middle", s.gaps[1].centre_flux_density,
    s.estimate.flux_density, "T")
  beside(ef, page, "flux density of the core (" .. s.core_flux_density_limb .. ")",
    s.core_flux_density, s.estimate.flux_density, "T")
  page:value("energy stored", s.energy, "J")
  page:value("force on the gap's faces", s.gaps[1].force, "N")
  page:value("method", s.method.gaps[1], nil, s.method.network)
  for _, warning in ipairs(s.warnings) do page:prose("Note: " .. warning .. ".") end
  if result.rival then
    page:prose(("Without a pocket: %d turns and a gap of %.2f mm would take a sensor; copper resistance"
      .. " grows by about %.2f times."):format(result.rival.turns, result.rival.gap * 1e3,
      (result.rival.turns / design.turns) ^ 2))
  end
  page:heading("Sensors tried in this gap")
  page:table("sensors", sensor_table(design.tried))
end

local function refused_cores(page, refused)
  if #refused == 0 then return end
  local rows = {}
  for i, entry in ipairs(refused) do rows[i] = { entry.core.name, entry.reason } end
  page:heading("Cores refused")
  page:table("cores-refused", { columns = { { name = "core" }, { name = "reason" } }, rows = rows })
end

local function run_inductor(ef, page, req)
  local result = ef.design.inductor(req)
  open_with_verdict(ef, page, result.verdict, req.title)
  if result.design then inductor_page(ef, page, req, result) end
  refused_cores(page, result.refused)
  if not result.design then
    cautions(page)
    return { passed = "no core works" }
  end
  against_current(ef, page, result.design.probe, req)
  cautions(page)
  local s = result.at_peak
  return {
    passed = result.verdict.passed and "pass" or "fail", core = result.design.part.core.name,
    sensor = result.design.chosen.sensor.name, turns = result.design.turns,
    gap = result.design.gap, inductance = s.inductance,
    flux_density_per_ampere = s.gaps[1].centre_flux_density * result.design.probe.relative_field
      / req.current.peak,
    core_flux_density = math.abs(result.at_trip.core_flux_density),
    resistance = result.resistance,
  }
end

local function variant_table(items)
  local rows = {}
  for i, item in ipairs(items) do
    rows[i] = { item.name, item.length * 1e3, item.gaps, item.per_ampere * 1e6,
      item.facts.core_trip * 1e3, item.shortfall * 100, item.linear_to
        and ("%.0f"):format(item.linear_to) or "beyond 4 x trip",
      item.chosen and item.chosen.sensor.name or "none",
      item.verdict.passed and "pass" or "FAIL" }
  end
  return { columns = { { name = "arrangement" }, { name = "gap", unit = "mm", digits = 3 },
    { name = "gaps", digits = 0 }, { name = "at the sensor", unit = "uT/A", digits = 4 },
    { name = "ring at trip", unit = "mT", digits = 3 },
    { name = "shortfall at trip", unit = "%", digits = 3 },
    { name = "linear within 2 % to", unit = "A" }, { name = "sensor" }, { name = "verdict" } },
    rows = rows }
end

local function run_concentrator(ef, page, req)
  local result = ef.design.concentrator(req)
  local asked = result.items[1]
  open_with_verdict(ef, page, result.verdict, req.title .. ", as asked")
  page:heading("Ways out, side by side")
  page:table("arrangements", variant_table(result.items))
  page:prose(result.recommended and ("Recommended: %s."):format(result.recommended.name)
    or "None of these works: use a shunt, or a core of another material and size.")
  local s = asked.at_trip
  page:heading("As asked, at the trip current, hot")
  beside(ef, page, "flux density in the gap's middle", s.gaps[1].centre_flux_density,
    s.estimate.flux_density, "T")
  beside(ef, page, "flux density of the ring, largest", s.core_flux_density,
    s.estimate.flux_density, "T")
  page:value("where the ring saturates first", ("%.0f degrees from the gap"):format(
    math.deg(asked.facts.position)))
  page:drawing("section", result.shown.part, result.probe, "The ring and its sensor, to scale: "
    .. result.shown.name .. ".")
  page:heading("Sensors tried: " .. result.shown.name)
  page:table("sensors", sensor_table(result.shown.tried))
  if result.probe then against_current(ef, page, result.probe, req) end
  cautions(page)
  return { passed = result.verdict.passed and "pass" or "fail", core = result.shown.core.name,
    sensor = result.shown.chosen and result.shown.chosen.sensor.name or "none",
    recommended = result.recommended and result.recommended.name or "none",
    gap = result.shown.length, flux_density_per_ampere = result.shown.per_ampere,
    core_flux_density = asked.facts.core_trip }
end

return {
  entrefer = 1,
  title = "Part from a spec",
  purpose = "Chooses core, gap, turns and sensor for a spec, judges them and writes the tables.",
  version = "1",
  inputs = {
    { name = "spec", kind = "data", help = "path of a spec file, see docs/spec.md" },
  },
  results = {
    { name = "passed", help = "pass or fail" },
    { name = "core" }, { name = "sensor" }, { name = "recommended" },
    { name = "turns", unit = "1" },
    { name = "gap", unit = "m" },
    { name = "inductance", unit = "H", help = "at the peak current, hot" },
    { name = "flux_density_per_ampere", unit = "T/A", help = "at the sensor" },
    { name = "core_flux_density", unit = "T", help = "at the trip current, hot" },
    { name = "resistance", unit = "ohm", help = "of the winding, dc, hot" },
  },
  run = function(ef, input, page)
    local req = ef.design.requirements(input.spec.table, input.spec.folder)
    page:retitle(req.title)
    if req.kind == "concentrator" then return run_concentrator(ef, page, req) end
    return run_inductor(ef, page, req)
  end,
}
