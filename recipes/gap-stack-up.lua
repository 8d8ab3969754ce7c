-- Does the sensor go into the gap that the inductance wants? The stack added up, and the ways out.

local function stack_for(ef, input, core)
  local films = {}
  if input.film > 0 then
    films[1] = { name = "insulating film", thickness = input.film,
      tolerance = math.min(input.film_tolerance, input.film) }
  end
  return ef.stack_up {
    sensor = input.sensor, stacked = input.stacked, insulation = films, clearance = input.clearance,
    adhesive = { thickness = input.adhesive,
      tolerance = math.min(input.adhesive_tolerance, input.adhesive) },
    gap_tolerance = input.gap_tolerance,
    -- A ring has no post that could run warmer than other legs.
    leg_height = core.geometry.topology ~= "ring" and core.geometry.window_height or nil,
    temperature = { low = input.low, high = input.high, assembly = input.assembly },
  }
end

local function stack_table(stack)
  local rows = {}
  for i, item in ipairs(stack.items) do
    rows[i] = { item.item, item.count, item.nominal * 1e3, item.tolerance * 1e3, item.thermal * 1e6 }
  end
  rows[#rows + 1] = { "sum, worst case", nil, stack.nominal * 1e3, stack.tolerance * 1e3,
    stack.thermal * 1e6 }
  rows[#rows + 1] = { "sum, root sum square", nil, stack.nominal * 1e3, stack.tolerance_rss * 1e3,
    stack.thermal * 1e6 }
  return { columns = { { name = "item" }, { name = "count", digits = 0 },
    { name = "nominal, each", unit = "mm", digits = 3 },
    { name = "tolerance +-, each", unit = "mm", digits = 2 },
    { name = "moves with temperature, all", unit = "um", digits = 2 } }, rows = rows }
end

local function answer(way)
  if not way.feasible then return "no" end
  return way.range_fits and "yes" or "other range"
end

local function scaled(value, factor) return value and value * factor end

local function ways_table(ways)
  local rows = {}
  for i, way in ipairs(ways) do
    rows[i] = { way.name, answer(way), way.turns, scaled(way.gap, 1e3), scaled(way.clear_height, 1e3),
      scaled(way.inductance, 1e6), scaled(way.flux_density_per_ampere, 1e3),
      scaled(way.core_flux_density, 1e3), way.resistance_ratio }
  end
  return { columns = { { name = "way" }, { name = "works" }, { name = "turns", digits = 0 },
    { name = "gap", unit = "mm", digits = 3 }, { name = "clear height", unit = "mm", digits = 3 },
    { name = "inductance", unit = "uH", digits = 4 }, { name = "at the sensor", unit = "mT/A", digits = 3 },
    { name = "core at trip", unit = "mT", digits = 3 },
    { name = "dc resistance, ratio", unit = "1", digits = 3 } }, rows = rows }
end

local function reasons_table(ways)
  local rows = {}
  for i, way in ipairs(ways) do
    rows[i] = { way.name, way.core or "", way.sensor or "", way.why == "" and "nothing against it"
      or way.why }
  end
  return { columns = { { name = "way" }, { name = "core" }, { name = "sensor" }, { name = "why" } },
    rows = rows }
end

local function working(ways)
  local names = {}
  for _, way in ipairs(ways) do
    if way.feasible then
      names[#names + 1] = way.name .. (way.range_fits and "" or " (with another range)")
    end
  end
  return names
end

local function verdict(page, input, found)
  local names = working(found.ways)
  page:heading("Verdict")
  if found.fits then
    page:prose(("PASS: the inductance wants a gap of %.2f mm, the sensor needs %.2f mm (%s). It goes in as"
      .. " it is."):format(found.wanted * 1e3, found.needed * 1e3, input.basis))
    local first = found.ways[1]
    if first.why ~= "" then page:prose("It asks for more: " .. first.why .. ".") end
    return "fits"
  end
  page:prose(("FAIL as it is: the inductance wants a gap of %.2f mm, the sensor needs %.2f mm (%s).")
    :format(found.wanted * 1e3, found.needed * 1e3, input.basis))
  if found.saturates then
    page:prose(("With these turns the core is above its limit of %.0f mT at the trip current: a way that"
      .. " keeps the turns and the core can't work."):format(found.limit * 1e3))
  end
  if #names == 0 then
    page:prose("None of the ways out works: take another core, another sensor, a concentrator of its own"
      .. " or a shunt.")
    return "no way"
  end
  page:prose(("%d of the %d ways out work: %s."):format(#names, #found.ways - 1,
    table.concat(names, "; ")))
  return "ways out"
end

local function notes(page, stack, ways)
  local said = {}
  local function say(text)
    if not said[text] then page:prose("Note: " .. text .. ".") end
    said[text] = true
  end
  for _, note in ipairs(stack.notes) do say(note) end
  for _, way in ipairs(ways) do
    for _, warning in ipairs(way.warnings or {}) do say(way.name .. ": " .. warning) end
  end
end

local function show_stack(page, stack, found)
  page:heading("The stack")
  page:table("stack", stack_table(stack))
  page:value("smallest gap, worst case", stack.worst_case, "m")
  page:value("smallest gap, root sum square", stack.root_sum_square, "m",
    "if the tolerances are independent")
  page:value("movement is largest at", stack.temperature_of_thermal, "degC")
  for i, place in ipairs(stack:places(math.max(found.needed, found.wanted))) do
    page:value(#stack.elements > 1 and "element " .. i or "element", ("%+.2f mm from the gap's middle,"
      .. " +-%.2f mm"):format(place.position * 1e3, place.tolerance * 1e3), nil,
      ("in a gap of %.2f mm, away from the glued face"):format(
        1e3 * math.max(found.needed, found.wanted)))
  end
end

local function cautions(page)
  page:heading("Cautions")
  page:caution("Films and glue in this stack are counted for their thickness, not as insulation: creepage"
    .. " and clearance (IEC 60664-1; the product's own standard) must be confirmed by a qualified person."
    .. " Ferrite counts as a conductor.")
  page:caution("Specify the gap's length, or the pocket's depth, on the drawing, not the inductance factor:"
    .. " the reading follows the length. Grinding ferrite makes dust: keep it out of lungs and eyes.")
  page:caution("A reading taken from the flux falls short exactly when the core saturates: it is no sole"
    .. " means of protection. Expansion, glue line and bobbin sizes are common practice without a source."
    .. " Computed from a model; not validated on hardware.")
end

-- Of the working ways the one with the least winding resistance, the first of equal ones.
local function least_copper(ways)
  local least
  for _, way in ipairs(ways) do
    if way.feasible and (not least or (way.resistance_ratio or 1) < (least.resistance_ratio or 1)) then
      least = way
    end
  end
  return least
end

local function draw(ef, page, stack, way)
  if not way or not way.clear_height or way.name == "thinner sensor" then return end
  page:heading("Section: " .. way.name)
  page:drawing("section", way.part, ef.probe { part = way.part, sensor = stack.sensor,
    position = { z = stack:places(way.clear_height)[1].position } })
end

local function results(found, stack, outcome, least)
  return { outcome = outcome, ways_that_work = #working(found.ways), wanted_gap = found.wanted,
    needed_gap = found.needed, worst_case = stack.worst_case, root_sum_square = stack.root_sum_square,
    least_copper = least and least.name or "none",
    flux_density_per_ampere = least and least.flux_density_per_ampere }
end

return {
  entrefer = 1,
  title = "Gap stack-up",
  purpose = "Adds up what a sensor needs in the gap and compares the ways to make room for it.",
  version = "1",
  inputs = {
    { name = "core", default = "ETD 39/20/13", help = "a size of the catalogue" },
    { name = "material", default = "PW3b", help = "a material card" },
    { name = "turns", unit = "1", default = 31, min = 1, max = 1000, help = "turns of the winding" },
    { name = "wire", unit = "m", default = 0, min = 0,
      help = "conductor diameter of round wire, checked to fit; 0: not checked" },
    { name = "inductance", unit = "H", default = "180 uH", min = "1 nH", max = "10 H",
      help = "wanted: flux linkage / current" },
    { name = "current", unit = "A", default = "4.4 A", min = "1 mA", max = "10 kA",
      help = "where the inductance is wanted" },
    { name = "trip", unit = "A", default = "5.2 A", min = "1 mA", max = "10 kA",
      help = "highest current to be read" },
    { name = "hot", unit = "degC", default = 100, min = -60, max = 250,
      help = "temperature of the core" },
    { name = "sensor", default = "linear Hall, 120 mT", help = "a sensor class" },
    { name = "stacked", unit = "1", default = 1, min = 1, max = 4, help = "sensors on top of each other" },
    { name = "adhesive", unit = "m", default = "0.1 mm", min = 0, help = "glue line below each sensor" },
    { name = "adhesive_tolerance", unit = "m", default = "0.05 mm", min = 0, help = "of the glue line" },
    { name = "film", unit = "m", default = "0.05 mm", min = 0, help = "insulating film, 0 for none" },
    { name = "film_tolerance", unit = "m", default = "5 um", min = 0, help = "of the film" },
    { name = "clearance", unit = "m", default = "0.1 mm", min = 0, help = "air that must remain" },
    { name = "gap_tolerance", unit = "m", default = "0.05 mm", min = 0, help = "half width" },
    { name = "low", unit = "degC", default = -40, min = -60, max = 250,
      help = "coldest use" },
    { name = "high", unit = "degC", default = 110, min = -60, max = 250,
      help = "hottest gap" },
    { name = "assembly", unit = "degC", default = 25, min = -60, max = 250,
      help = "where sizes are measured" },
    { name = "basis", default = "worst case", choices = { "worst case", "root sum square" },
      help = "which sum must go in" },
    { name = "pocket", unit = "m", default = "5 mm", min = "0.1 mm", max = "50 mm",
      help = "diameter of a pocket that takes the sensor" },
    { name = "pocket_tolerance", unit = "m", default = "0.05 mm", min = "1 um", max = "1 mm",
      help = "of its depth, each face" },
    { name = "beside", unit = "m", default = "1 mm", min = "1 um", max = "50 mm",
      help = "from the pole's edge to an element outside" },
  },
  results = {
    { name = "outcome", help = "fits, ways out, or no way" },
    { name = "ways_that_work", unit = "1" },
    { name = "wanted_gap", unit = "m", help = "for the inductance" },
    { name = "needed_gap", unit = "m", help = "for the sensor, by the basis" },
    { name = "worst_case", unit = "m" }, { name = "root_sum_square", unit = "m" },
    { name = "least_copper", help = "the working way with the least winding resistance" },
    { name = "flux_density_per_ampere", unit = "T/A", help = "at the sensor, that way" },
  },
  run = function(ef, input, page)
    local core = ef.core(input.core)
    local part = ef.part { core = core, material = input.material, gaps = { { length = "0.5 mm" } },
      windings = { { turns = input.turns, wire = input.wire > 0 and { round = input.wire } or nil } } }
    local stack = stack_for(ef, input, core)
    local found = stack:ways_out { part = part, inductance = input.inductance, current = input.current,
      trip = input.trip, temperature = input.hot, basis = input.basis, beside = input.beside,
      pocket = { diameter = input.pocket, tolerance = input.pocket_tolerance } }
    local outcome = verdict(page, input, found)
    page:heading("Ways out, side by side")
    page:table("ways", ways_table(found.ways))
    page:table("reasons", reasons_table(found.ways), "Why, and what each asks for")
    page:prose("Resistance ratio: dc, against the turns given, with the same share of the window filled by"
      .. " copper. \"other range\": room and core are right, the sensor class needs another range."
      .. (input.wire > 0 and "" or " No wire is given: whether the windings fit is not checked."))
    notes(page, stack, found.ways)
    show_stack(page, stack, found)
    local least = least_copper(found.ways)
    draw(ef, page, stack, least)
    cautions(page)
    return results(found, stack, outcome, least)
  end,
}
