local ef = require "entrefer"
local support = require "tests.support"
local near, refuses, slope = support.near, support.refuses, support.slope

local mu0 = ef.mu0

local function points(overrides)
  local spec = { kind = "curve", temperature = 25, initial_permeability = 2000, saturation = 0.5,
    points = { h = { 0, 20, 60, 150, 500, 1200 }, b = { 0, 0.06, 0.22, 0.37, 0.45, 0.48 } } }
  for key, value in pairs(overrides or {}) do spec[key] = value end
  return ef.material(spec)
end

local laws = {
  linear = ef.material { initial_permeability = 2000 },
  froelich = ef.material { kind = "froelich", initial_permeability = 2000, saturation = 0.4 },
  langevin = ef.material { kind = "langevin", initial_permeability = 2000, saturation = 0.4 },
  curve = points(),
  card = ef.material "PW3b",
}

describe("a material", function()
  it("passes through its measured points", function()
    local m = points()
    for i, h in ipairs { 0, 20, 60, 150, 500, 1200 } do
      local b = ({ 0, 0.06, 0.22, 0.37, 0.45, 0.48 })[i]
      near(b + 1, m:flux_density(h) + 1, 1e-15)
    end
  end)

  it("follows the Langevin law in closed form", function()
    -- B = mu0 H + Js (coth(H/h) - h/H), h = Js / (3 (mui - 1) mu0): evaluated here with the
    -- mathematical library, which is good to 1e-12 at these arguments.
    local h0 = 0.4 / (3 * 1999 * mu0)
    for _, h in ipairs { 30, 100, 400, 5000 } do
      local x = h / h0
      local coth = (math.exp(x) + math.exp(-x)) / (math.exp(x) - math.exp(-x))
      near(mu0 * h + 0.4 * (coth - 1 / x), laws.langevin:flux_density(h), 1e-12)
    end
  end)

  for name, m in pairs(laws) do
    it("has dB/dH that is the slope of B, and never below mu0: " .. name, function()
      for _, h in ipairs { 0.3, 7, 33, 90, 300, 1100, 2500, 4e4, 3e6 } do
        local step = h * 1e-3
        -- Fourth-order differences at 1e-3: about 1e-9 on smooth pieces; a point of the curve inside
        -- the stencil costs more.
        near(slope(function(x) return m:flux_density(x) end, h, step),
          mu0 * m:differential_permeability(h), 2e-4, name .. " at " .. h)
        assert.is_true(m:differential_permeability(h) >= 1)
      end
    end)

    it("is odd in H, and its inverse returns the field: " .. name, function()
      for _, h in ipairs { 1e-6, 3, 90, 1500, 1e6 } do
        assert.equal(m:flux_density(h), -m:flux_density(-h))
        near(h, m:field_strength(m:flux_density(h)), 1e-11)
        near(-h, m:field_strength(m:flux_density(-h)), 1e-11)
      end
    end)

    it("rises everywhere: " .. name, function()
      local before = -math.huge
      for i = -400, 400 do
        local h = i * math.abs(i)
        local b = m:flux_density(h)
        assert.is_true(b > before)
        before = b
      end
    end)
  end

  it("falls toward mu0 in deep saturation, from above", function()
    for _, name in ipairs { "froelich", "langevin", "curve", "card" } do
      local high, higher = laws[name]:differential_permeability(1e5),
        laws[name]:differential_permeability(1e7)
      assert.is_true(high >= higher and higher >= 1 and higher < 1 + 1e-4, name)
      near(laws[name]:saturation() + mu0 * 1e9, laws[name]:flux_density(1e9), 1e-6)
    end
  end)

  it("keeps a fitted saturation at or above its last point", function()
    local m = points { saturation = false or nil }
    assert.is_true(m:saturation() >= 0.48 - mu0 * 1200)
  end)

  it("takes the initial permeability that is given", function()
    near(2000, points():differential_permeability(0), 1e-12)
    near(2000, points():permeability(0), 1e-12)
  end)

  it("interpolates between temperatures, exact at the curves and between them elsewhere", function()
    local m = ef.material "PW3b"
    near(0.309, m:flux_density(150, 100), 1e-12)
    near(0.372, m:flux_density(150, 25), 1e-12)
    local b = m:flux_density(150, 80)
    assert.is_true(b < m:flux_density(150, 60) and b > m:flux_density(150, 100))
  end)

  it("refuses a temperature outside its curves", function()
    local err = refuses("temperature", "120", function() ef.material "PW3b":law(150) end)
    assert.equal("out_of_range", err.code)
  end)

  it("fits closed laws to points of the same law", function()
    for _, kind in ipairs { "froelich", "langevin" } do
      local h, b = {}, {}
      for i, x in ipairs { 5, 20, 60, 120, 300, 900 } do
        h[i], b[i] = x, laws[kind]:flux_density(x)
      end
      local fitted, rms = ef.fit_material(kind, { h = h, b = b })
      -- Noise-free data: only rounding is left.
      near(2000, fitted:permeability(0), 1e-7)
      near(0.4, fitted:saturation(), 1e-7)
      assert.is_true(rms < 1e-9)
    end
  end)

  it("lists eight classes, each marked as representative", function()
    assert.is_true(#ef.materials() >= 8)
    for _, name in ipairs(ef.materials()) do
      assert.is_truthy(ef.material(name).source:find("replace by your supplier's data", 1, true))
    end
  end)
end)

describe("a curve file", function()
  local curve_file = require "entrefer.curve_file"

  it("reads units from the heading, groups temperatures and adds the origin", function()
    local curves = curve_file.parse("# invented\nB [mT],temperature [degC],H [kA/m]\n60,100,0.02\n"
      .. "220,100,0.06\n370,100,0.15\n70,25,0.02\n260,25,0.06\n400,25,0.15\n", "x.csv")
    assert.equal(2, #curves)
    assert.equal(25, curves[1].temperature)
    near(60, curves[1].h[3], 1e-12)
    near(0.26, curves[1].b[3], 1e-12)
    assert.equal(0, curves[1].h[1])
  end)

  it("names the line that is wrong", function()
    refuses("x.csv line 3", "a number", curve_file.parse, "H [A/m],B [T]\n1,0.1\n2,abc\n", "x.csv")
    refuses("x.csv line 2", "the curve from the origin", curve_file.parse,
      "H [A/m],B [T]\n-1,0.1\n", "x.csv")
    refuses("x.csv line 1", "H %[unit%]", curve_file.parse, "field;density\n1;2\n", "x.csv")
    refuses("x.csv", "no points", curve_file.parse, "H [A/m],B [T]\n", "x.csv")
    refuses("curve file", "can't be read", curve_file.read, "/nonexistent/x.csv")
  end)
end)

describe("bad material data", function()
  it("is refused with the field and what is allowed", function()
    local nan = 0 / 0
    refuses("initial permeability", "at least 1", ef.material, { initial_permeability = 0.5 })
    refuses("initial permeability", "finite", ef.material, { initial_permeability = nan })
    refuses("saturation", "above 0", ef.material,
      { kind = "froelich", initial_permeability = 100, saturation = -1 })
    refuses("flux density of point 3", "mu0 times", points,
      { points = { h = { 0, 10, 20, 30 }, b = { 0, 0.1, 0.09, 0.2 } } })
    refuses("field strength of point 3", "above 10", points,
      { points = { h = { 0, 10, 10, 30 }, b = { 0, 0.1, 0.12, 0.2 } } })
    refuses("number of points", "at least 3", points, { points = { h = { 0, 10 }, b = { 0, 0.1 } } })
    refuses("saturation", "last point", points, { saturation = 0.3 })
    refuses("number of flux densities", "as many", points,
      { points = { h = { 0, 10, 20 }, b = { 0, 0.1 } } })
    refuses("permeabillity", "initial_permeability", ef.material, { permeabillity = 100 })
    local err = refuses("material", "PW3b", ef.material, "PW3")
    assert.equal("bad_value", err.code)
    refuses("number of points to fit", "at least 3", ef.fit_material, "langevin",
      { h = { 1, 2 }, b = { 0.1, 0.2 } })
  end)

  it("leaves an object unchanged", function()
    refuses("name", "can't be changed", function() laws.curve.name = "other" end)
  end)
end)
