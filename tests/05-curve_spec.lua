local ef = require "entrefer"
local support = require "tests.support"
local near, refuses = support.near, support.refuses

local function sampled(f, points, from, to)
  local x, y = {}, {}
  for i = 1, points do
    x[i] = from + (to - from) * (i - 1) / (points - 1)
    y[i] = f(x[i])
  end
  return ef.curve { x = x, y = y }
end

describe("a monotone curve", function()
  it("passes through its points and never falls between them", function()
    local random = support.stream(11)
    for _ = 1, 200 do
      local x, y = { 0 }, { 0 }
      for i = 2, 3 + math.floor(random() * 12) do
        x[i] = x[i - 1] + 10 ^ (6 * random() - 3)
        -- A third of the stretches are flat.
        y[i] = y[i - 1] + math.max(0, random() - 1 / 3) * 10 ^ (4 * random() - 2)
      end
      local c = ef.curve { x = x, y = y }
      for i = 1, #x do assert.is_true(math.abs(c:at(x[i]) - y[i]) <= 1e-12 * (1 + y[#y])) end
      local before = -1
      for i = 0, 400 do
        local value, slope = c:at(math.min(x[#x], x[#x] * i / 400))
        assert.is_true(value >= before - 1e-12 * (1 + y[#y]) and slope >= 0)
        before = value
      end
    end
  end)

  it("reproduces a straight line", function()
    local c = sampled(function(x) return 3 * x + 1 end, 7, -2, 5)
    for _, x in ipairs { -1.9, 0.3, 4.7 } do
      local value, slope = c:at(x)
      near(3 * x + 1, value, 1e-14)
      near(3, slope, 1e-13)
    end
  end)

  it("converges with at least the second order on a smooth function", function()
    -- Harmonic mean slopes are of second order where the curvature keeps its sign, the cubic then of
    -- third; at the ends a little less.
    local function worst(points)
      local c, most = sampled(math.exp, points, 0, 2), 0
      for i = 0, 1000 do most = math.max(most, math.abs(c:at(2 * i / 1000) - math.exp(2 * i / 1000))) end
      return most
    end
    local coarse, fine = worst(17), worst(65)
    assert.is_true(math.log(coarse / fine) / math.log(4) >= 2)
  end)

  it("has an inverse and an integral that belong to it", function()
    local c = sampled(function(x) return math.atan(x) end, 40, 0, 10)
    for _, x in ipairs { 0, 0.01, 0.7, 3.3, 9.999, 10 } do
      near(x + 1, c:inverse(c:at(x)) + 1, 1e-12)
      -- Simpson's rule on 2000 steps of the curve itself: exact to rounding on cubics but at points.
      local sum, n = 0, 2000
      for i = 0, n do
        local weight = (i == 0 or i == n) and 1 or (i % 2 == 1 and 4 or 2)
        sum = sum + weight * c:at(x * i / n)
      end
      near(sum * x / n / 3 + 1, c:integral(x) + 1, 1e-9)
    end
  end)

  it("answers the left end of a flat stretch", function()
    local c = ef.curve { x = { 0, 1, 2, 3, 4 }, y = { 0, 1, 1, 1, 2 } }
    assert.equal(1, c:inverse(1))
  end)

  it("keeps wanted end slopes inside the monotone region", function()
    local c = ef.curve { x = { 0, 1, 2 }, y = { 0, 1, 2 }, first_slope = 100 }
    local _, slope = c:at(0)
    assert.is_true(slope <= 3)
    _, slope = ef.curve { x = { 0, 1, 2 }, y = { 0, 1, 2 }, first_slope = 2 }:at(0)
    near(2, slope, 1e-15)
  end)

  it("refuses what is no curve", function()
    refuses("abscissa of point 3", "above 1", ef.curve, { x = { 0, 1, 1 }, y = { 0, 1, 2 } })
    refuses("ordinate of point 2", "at least 1", ef.curve, { x = { 0, 1 }, y = { 1, 0 } })
    refuses("number of points", "at least 2", ef.curve, { x = { 0 }, y = { 0 } })
    refuses("point 2", "finite", ef.curve, { x = { 0, 1 }, y = { 0, 0 / 0 } })
    refuses("x", "missing", ef.curve, { y = { 0, 1 } })
    refuses("y", "no number", ef.curve, { x = { 0, 1 }, y = { 0, "1" } })
    refuses("number of ordinates", "as many", ef.curve, { x = { 0, 1 }, y = { 0 } })
    refuses("z", "x, y", ef.curve, { x = { 0, 1 }, y = { 0, 1 }, z = 1 })
    local c = ef.curve { x = { 0, 1 }, y = { 0, 1 } }
    refuses("abscissa", "range of the curve", c.at, c, 1.5)
    refuses("abscissa", "range of the curve", c.at, c, 0 / 0)
    refuses("ordinate", "range of the curve", c.inverse, c, -1)
  end)
end)
