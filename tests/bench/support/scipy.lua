--- Hands a network to SciPy's root finder (tests/bench/network_scipy.py) in a process of its own.
local json = require "entrefer.json"
local run = require "tests.process".run

local scipy = { python = "/usr/bin/python3" }

--- Whether that Python has SciPy.
function scipy.available()
  return (run(scipy.python .. " -c 'import scipy'"))
end

--- The curve or closed law of a material card at the temperature of one of its curves, where the
-- library's law passes through the given points.
function scipy.law(material, temperature)
  for _, curve in ipairs(material.curves) do
    if curve.temperature == temperature then
      return { initial_permeability = curve.initial_permeability, saturation = curve.saturation,
        h = curve.h, b = curve.b }
    end
  end
  error(("no curve at %g degC"):format(temperature))
end

--- Branches as the script wants them: turns a full list, 0 where a winding is absent.
function scipy.branches(branches, windings)
  local list = {}
  for i, branch in ipairs(branches) do
    local turns = {}
    for w = 1, windings do turns[w] = branch.turns and branch.turns[w] or 0 end
    list[i] = { from = branch.from, to = branch.to, elements = branch.elements, turns = turns }
  end
  return list
end

--- Solves.
-- @tparam table spec `{ nodes, laws, branches, currents }`, see the script
-- @string file where the JSON text is put
-- @int[opt] repetitions times each point and gives `seconds` and `differences`
-- @treturn table one `{ linkage = list, flux = list, residual, calls, seconds,
--   differences }` per point
function scipy.solve(spec, file, repetitions)
  local out = assert(io.open(file, "w"))
  out:write(json.encode(spec))
  out:close()
  local done, text = run(("%s tests/bench/network_scipy.py '%s' %s"):format(scipy.python, file,
    repetitions or ""))
  assert(done, text)
  local points = {}
  for name, rest in text:gmatch "(%a+) ([^\n]+)" do
    if name == "point" then
      points[#points + 1] = {}
    elseif name == "linkage" or name == "flux" then
      local list = {}
      for word in rest:gmatch "%S+" do list[#list + 1] = tonumber(word) end
      points[#points][name] = list
    else
      points[#points][name] = tonumber(rest)
    end
  end
  return points
end

return scipy
