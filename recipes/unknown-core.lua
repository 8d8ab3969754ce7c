-- Inductance measured with two known spacers, read back into the core's own joint gap and its effective
-- permeability: what an unmarked core is good for.

-- Inductance of the core with a spacer on top of an unknown joint gap and an unknown permeability.
local function inductance(ef, input, joint, permeability, spacer)
  local part = ef.part { core = input.core,
    material = { name = "unknown", initial_permeability = permeability },
    gaps = { { leg = "all", kind = "spacer", length = joint + spacer } },
    windings = { { turns = input.turns } } }
  return part:solve { current = 0 }.inductance, part
end

-- Newton in the logarithms of both unknowns; each measurement fixes one equation. The derivatives come
-- from the part itself.
local function fit(ef, input)
  local joint, permeability = 10e-6, 2000
  for _ = 1, 60 do
    local rows = {}
    for i, measured in ipairs { { input.spacer_1, input.inductance_1 },
      { input.spacer_2, input.inductance_2 } } do
      local value, part = inductance(ef, input, joint, permeability, measured[1])
      local gap = part:derivatives { current = 0, by = { gap = 1 } }
      local mu = part:derivatives { current = 0, by = { permeability = true } }
      rows[i] = { gap.incremental_inductance * joint / value, mu.incremental_inductance / value,
        math.log(measured[2] / value) }
    end
    local a, b = rows[1], rows[2]
    local determinant = a[1] * b[2] - a[2] * b[1]
    local dg = (a[3] * b[2] - a[2] * b[3]) / determinant
    local dm = (a[1] * b[3] - a[3] * b[1]) / determinant
    local most = math.max(math.abs(dg), math.abs(dm), 1)
    joint, permeability = joint * math.exp(dg / most), permeability * math.exp(dm / most)
    if not (joint > 1e-9 and joint < 5e-3 and permeability > 5 and permeability < 1e6) then
      return nil
    end
    if math.abs(dg) + math.abs(dm) < 1e-9 then return joint, permeability end
  end
end

return {
  entrefer = 1,
  title = "An unknown core",
  purpose = "Reads two inductance measurements back into joint gap and permeability.",
  version = "1",
  inputs = {
    { name = "core", default = "E 42/21/15", help = "size whose dimensions the core has" },
    { name = "turns", unit = "1", default = 20, min = 1, help = "test winding on the centre leg" },
    { name = "spacer_1", unit = "m", default = "0.05 mm", min = 0, help = "film in all legs" },
    { name = "inductance_1", unit = "H", default = "564 uH" },
    { name = "spacer_2", unit = "m", default = "0.5 mm", min = 0 },
    { name = "inductance_2", unit = "H", default = "113 uH" },
  },
  results = { { name = "joint_gap", unit = "m", help = "in each leg, beside the spacer" },
    { name = "permeability", unit = "1", help = "relative, initial" } },
  run = function(ef, input, page)
    local joint, permeability = fit(ef, input)
    if not joint then
      error("the two inductances fit no core of these dimensions: check turns, spacers and size", 0)
    end
    page:heading("What the core is")
    page:value("joint gap in each leg", joint, "m", "lapped faces: 2 to 10 um, common practice, no source")
    page:value("relative permeability", permeability, "1")
    page:prose(permeability < 400 and "A powder core or a damaged ferrite: the permeability is low."
      or permeability < 5000 and "In the range of power ferrites." or
      "In the range of ferrites for chokes and filters: their saturation is lower and falls early"
      .. " with temperature; do not use it as a power core before measuring that.")
    page:prose("Measure at 0.1 V or less and 10 kHz, so that the foot of the curve is seen and not its"
      .. " slope further up.")
    return { joint_gap = joint, permeability = permeability }
  end,
}
