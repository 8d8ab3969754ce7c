-- Which sizes can do it: for each core of a family the fewest turns that keep the flux density, the gap
-- for the inductance, and whether the copper fits.

local function wire_for(ef, input)
  local strand = ef.wire { round = "0.1 mm" }
  local strands = math.ceil(input.current / input.current_density / strand.copper_area)
  return strands > 1 and ef.wire { litz = { strands = strands, strand = "0.1 mm" } } or strand
end

-- The fewest turns whose core stays below its flux density with the gap that gives the inductance.
local function fewest_turns(ef, input, core, wire)
  local first = math.max(1, math.floor(0.8 * input.inductance * input.current
    / (input.flux_density * core.geometry.minimum_area)))
  local reason = "no turns found"
  for turns = first, first + 40 do
    local start = (core.geometry.window_height or 10e-3) / 20
    local part, err = ef.try(ef.part, { core = core, material = input.material,
      gaps = { { length = start } }, windings = { { turns = turns, wire = wire } } })
    if not part then return nil, ("%d turns do not fit"):format(turns), err end
    local length, gapped = ef.try(part.gap_for, part, { inductance = input.inductance,
      current = input.current, temperature = input.temperature })
    if length then
      local s = gapped:solve { current = input.current, temperature = input.temperature }
      if s.core_flux_density <= input.flux_density then return gapped, turns, s end
      reason = ("%.0f mT with %d turns"):format(1e3 * s.core_flux_density, turns)
    else
      reason = ("the inductance is out of reach with %d turns"):format(turns)
    end
  end
  return nil, reason
end

return {
  entrefer = 1,
  title = "Choosing a core",
  purpose = "Tries every size of a family for an inductance and current, and lists what each would need.",
  version = "1",
  inputs = {
    { name = "family", default = "ETD", choices = { "E", "ETD", "EER", "EC", "PQ", "RM", "pot", "EFD" },
      help = "shape of the core" },
    { name = "material", default = "PW3b", help = "a material card" },
    { name = "inductance", unit = "H", default = "60 uH", help = "least, at the current" },
    { name = "current", unit = "A", default = "15 A", help = "largest current" },
    { name = "temperature", unit = "degC", default = 100 },
    { name = "flux_density", unit = "T", default = "0.31 T", help = "most in the core" },
    { name = "current_density", unit = "A/m2", default = "6 A/mm2" },
  },
  results = { { name = "core", help = "smallest that works" }, { name = "turns", unit = "1" },
    { name = "gap", unit = "m" }, { name = "works", unit = "1", help = "sizes that work" } },
  run = function(ef, input, page)
    local wire, rows, best, works = wire_for(ef, input), {}, nil, 0
    for _, name in ipairs(ef.cores(input.family)) do
      local core = ef.core(name)
      local part, turns, s = fewest_turns(ef, input, core, wire)
      local volume = core.geometry.effective_volume
      if part then
        local length = part.gap_entries[1].length
        works = works + 1
        rows[#rows + 1] = { name, volume * 1e6, turns, length * 1e3, s.core_flux_density * 1e3,
          s.gaps[1].centre_flux_density / input.current * 1e3, part.fill * 100, "works" }
        if not best or volume < best.volume then
          best = { name = name, volume = volume, turns = turns, gap = length }
        end
      else
        rows[#rows + 1] = { name, volume * 1e6, nil, nil, nil, nil, nil, turns }
      end
    end
    page:heading("Sizes")
    page:value("wire", wire.name, nil, "for the current density at the largest current")
    page:table("cores", { columns = { { name = "core" }, { name = "volume", unit = "cm3", digits = 3 },
      { name = "turns", digits = 0 }, { name = "gap", unit = "mm", digits = 3 },
      { name = "core flux density", unit = "mT", digits = 3 },
      { name = "in the gap", unit = "mT/A", digits = 3 },
      { name = "window filled", unit = "%", digits = 2 }, { name = "result" } }, rows = rows })
    page:prose(best and ("Smallest that works: **%s** with %d turns and a gap of %.2f mm. The copper is"
      .. " sized by current density alone: losses and temperature decide later."):format(best.name,
      best.turns, best.gap * 1e3) or "No size of this family works.")
    return { core = best and best.name or "none", turns = best and best.turns or 0,
      gap = best and best.gap or 0, works = works }
  end,
}
