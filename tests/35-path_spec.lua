local ef = require "entrefer"
local support = require "tests.support"
local near, refuses = support.near, support.refuses

local function part_of(core, changes)
  local spec = { core = core, material = "PW3b", gaps = { { length = "1 mm" } },
    windings = { { turns = 12 } } }
  for key, value in pairs(changes or {}) do spec[key] = value end
  return ef.part(spec)
end

describe("the path", function()
  it("is as long as the core's sections say, gap included", function()
    for _, core in ipairs { "E 42/21/15", "ETD 39/20/13", "P 30/19" } do
      local g = ef.core(core).geometry
      local p = part_of(core):path { current = 5 }
      -- One loop: both legs, two yoke arms, two corners at each end of them.
      local length = g.centre_leg.length + g.outer_leg.length
        + 2 * (g.yoke.length + g.centre_corner.length + g.outer_corner.length)
      near(length, p.distance[#p.distance], 1e-12)
    end
    local u = part_of("U 25/20/13"):path { current = 5 }
    -- A U core of one section all around: the effective length is that of the loop (IEC 60205).
    near(ef.core "U 25/20/13".geometry.effective_length, u.distance[#u.distance], 1e-3)
  end)

  it("shows the limbs' own largest flux densities", function()
    local part = part_of "E 42/21/15"
    local s = part:solve { current = 20, temperature = 60 }
    local p = part:path { current = 20, temperature = 60 }
    local most = {}
    for i, name in ipairs(p.limb) do
      most[name] = math.max(most[name] or 0, p.flux_density[i])
    end
    for name, value in pairs(most) do near(math.abs(s.limbs[name].flux_density), value, 1e-12) end
  end)

  it("rises from the gap to the back of a ring", function()
    local part = part_of({ shape = "ring", dimensions = { d1 = "38 mm", d2 = "26 mm", h = "8 mm" } },
      { gaps = { { length = "4.5 mm" } }, windings = { { turns = 1 } } })
    local p = part:path { current = 20 }
    local half = math.floor(#p.distance / 2)
    for i = 3, half - 1, 2 do assert.is_true(p.flux_density[i] >= p.flux_density[i - 2]) end
  end)

  it("refuses what it doesn't know", function()
    local part = part_of "E 42/21/15"
    refuses("currant", "current", part.path, part, { currant = 5 })
  end)
end)
