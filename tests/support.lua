--- Helpers shared by the specs.
local support = {}

--- Asserts that two numbers agree within a relative tolerance.
function support.near(expected, actual, tolerance, what)
  assert(type(actual) == "number" and actual == actual,
    ("%s: expected a number near %.12g, got %s"):format(what or "value", expected, tostring(actual)))
  local scale = math.max(math.abs(expected), 1e-300)
  local off = math.abs(actual - expected) / scale
  assert(off <= tolerance, ("%s: expected %.12g within %.3g, got %.12g (off by %.3g)"):format(
    what or "value", expected, tolerance, actual, off))
end

--- Asserts that a call raises an error table whose field and message match the patterns.
function support.refuses(field, pattern, f, ...)
  local done, err = pcall(f, ...)
  assert(not done, ("expected an error about %s, got a result"):format(field))
  assert(type(err) == "table", "expected an error table, got: " .. tostring(err))
  assert(type(err.message) == "string" and tostring(err) == err.message,
    "the error has no message that it prints as")
  assert(tostring(err.field):find(field), ("expected field %q, got %q: %s"):format(field,
    tostring(err.field), err.message))
  assert(err.message:find(pattern), ("expected a message with %q, got %q"):format(pattern,
    err.message))
  return err
end

--- Central difference of fourth order; for checking derivatives that are not differences themselves.
function support.slope(f, x, step)
  return (8 * (f(x + step) - f(x - step)) - (f(x + 2 * step) - f(x - 2 * step))) / (12 * step)
end

--- A small generator of repeatable pseudo-random numbers in [0, 1): splitmix64 on a counter.
function support.stream(seed)
  local counter = seed
  return function()
    counter = counter + 0x9E3779B97F4A7C15
    local z = counter
    z = (z ~ (z >> 30)) * 0xBF58476D1CE4E5B9
    z = (z ~ (z >> 27)) * 0x94D049BB133111EB
    z = z ~ (z >> 31)
    return (z >> 11) * 2.0 ^ -53
  end
end

return support
