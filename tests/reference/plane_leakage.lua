--- Leakage across a window by brute force: Laplace's equation in the plane across the legs, by finite
-- differences. Independent of the library; slow and good to about 2 %.
local plane = {}

-- Potential of the iron at a point, or nil in air. `half` is half a grid step: a face lies at the
-- nearest grid line.
local contains = {
  E = function(d, x, y, half)
    if y >= d.C / 2 + half or x >= d.A / 2 + half then return nil end
    return x < d.F / 2 + half and 1 or x > d.E / 2 - half and 0 or nil
  end,
  U = function(d, x, y, half)
    return y < d.C / 2 + half and x > d.E / 2 - half and x < d.A / 2 + half and 0.5 or nil
  end,
  ETD = function(d, x, y, half)
    local radius = math.sqrt(x * x + y * y)
    if radius < d.F / 2 + half then return 1 end
    return x < d.A / 2 + half and y < d.C / 2 + half and radius > d.E / 2 - half and 0 or nil
  end,
}

function contains.PQ(d, x, y, half)
  local potential = contains.ETD(d, x, y, half)
  if potential == 0 and x <= d.G / 2 - half then return nil end
  return potential
end

-- Potentials on an n by n grid of a quarter plane; `held[i][j]` marks iron.
local function grid(potential_at, n, step, odd)
  local u, held = {}, {}
  for i = 0, n do
    u[i], held[i] = {}, {}
    for j = 0, n do
      local value = potential_at(i * step, j * step, step / 2)
      if odd and i == 0 then value = 0 end
      u[i][j], held[i][j] = value or 0.2, value ~= nil
    end
  end
  return u, held
end

local function relax(u, held, n)
  local factor = 2 / (1 + math.pi / n)
  for _ = 1, 4 * n do
    for i = 0, n do
      local left, here, right = u[i > 0 and i - 1 or 1], u[i], u[i < n and i + 1 or n - 1]
      for j = 0, n do
        if not held[i][j] then
          local mean = (left[j] + right[j] + here[j > 0 and j - 1 or 1]
            + here[j < n and j + 1 or n - 1]) / 4
          here[j] = here[j] + factor * (mean - here[j])
        end
      end
    end
  end
end

-- Sum of the squared potential steps: the permeance / mu0 of the quarter at a potential of 1.
local function energy(u, n)
  local sum = 0
  for i = 0, n do
    for j = 0, n do
      if i < n then
        sum = sum + (u[i + 1][j] - u[i][j]) ^ 2 * ((j == 0 or j == n) and 0.5 or 1)
      end
      if j < n then
        sum = sum + (u[i][j + 1] - u[i][j]) ^ 2 * ((i == 0 or i == n) and 0.5 or 1)
      end
    end
  end
  return sum
end

--- Leakage permeance across one window per unit of leg length, divided by mu0.
-- @string shape "E", "U", "ETD" or "PQ"
-- @tparam table d dimensions by letter, m
-- @number n grid lines each way; the plane reaches to three times the core's larger half size
function plane.leakage(shape, d, n)
  local odd = shape == "U"
  local step = math.max(d.A, d.C) * 1.5 / n
  local u, held = grid(function(x, y, half) return contains[shape](d, x, y, half) end, n, step, odd)
  relax(u, held, n)
  return (odd and 4 or 2) * energy(u, n)
end

return plane
