--- entrefer: gapped magnetic parts that carry power and measure their own current with a magnetic
-- sensor in the gap.
--
-- Any quantity may be a number in SI units (temperatures in degrees Celsius) or text with its unit:
-- `"1.6 mm"`, `"47 uH"`. Objects are immutable; `object:with{...}` gives a changed copy. Errors are
-- tables `{ code, field, value, allowed, message }` that print as their message; `ef.try` returns
-- them instead of raising.
--
--    local ef = require "entrefer"
--
-- @module entrefer
local bobbin = require "entrefer.bobbin"
local catalogue = require "entrefer.catalogue"
local concentrator = require "entrefer.design.concentrator"
local core = require "entrefer.core"
local curve = require "entrefer.curve"
local fail = require "entrefer.fail"
local inductor = require "entrefer.design.inductor"
local material = require "entrefer.material"
local network = require "entrefer.network"
local part = require "entrefer.part"
local probe = require "entrefer.probe"
local quantity = require "entrefer.quantity"
local recipe = require "entrefer.recipe"
local requirements = require "entrefer.design.requirements"
local sensing = require "entrefer.design.sensing"
local sensor = require "entrefer.sensor"
local shape = require "entrefer.shape"
local stackup = require "entrefer.stackup"
local tables = require "entrefer.design.tables"
local wire = require "entrefer.wire"

return {
  --- Version of the library.
  version = core.version,
  --- Magnetic constant, H/m (4 pi 1e-7).
  mu0 = core.mu0,
  --- A core: `ef.core "E 42/21/15"` or `ef.core{ shape = ..., dimensions = ... }`.
  core = shape.new,
  --- Names of the catalogue's cores, optionally of one family.
  cores = shape.names,
  --- A material: a card's name, a CSV file of digitised points, or a table.
  material = material.new,
  --- Names of the material cards.
  materials = material.names,
  --- Least-squares fit of a closed law to measured points.
  fit_material = material.fit,
  --- A monotone curve through points: value, slope, integral, inverse.
  curve = curve.new,
  --- A wire: round, AWG, litz or foil.
  wire = wire.new,
  --- A part: core, material, gaps, windings.
  part = part.new,
  --- A reluctance network of any topology.
  network = network.new,
  --- A magnetic sensor: a generic class's name or a table.
  sensor = sensor.new,
  --- Names of the sensor classes.
  sensors = sensor.names,
  --- A sensor placed in a part's gap.
  probe = probe.new,
  --- The stack of a sensor in a gap: smallest gap, place of the element, ways out.
  stack_up = stackup.new,
  --- A coil former by rules: room for wire, mean turn.
  bobbin = bobbin.new,
  --- Finding cores, materials, sensors and wires: `find(query)`; own folders of cards: `load(folder)`.
  catalogue = catalogue,
  --- Permeance of one gap by a named method: `ef.gap_permeance("conformal", geometry)`.
  gap_permeance = core.gap,
  --- Names of the gap methods.
  gap_methods = core.gap_methods,
  --- Reads a quantity: `ef.quantity("1.2 mm", "m")`.
  quantity = function(value, unit, field) return quantity.read(value, unit, field or "quantity") end,
  --- Writes a quantity with an engineering prefix: `ef.format(1.2e-3, "m")`.
  format = quantity.format,
  --- The steps of a design flow: `requirements(spec, folder)`, `inductor(req)`, `concentrator(req)`,
  -- `against_current(probe, temperatures, sweep)`, `pick_sensor(facts, rules)`.
  design = {
    requirements = requirements.read,
    inductor = inductor.run,
    concentrator = concentrator.run,
    against_current = tables.against_current,
    pick_sensor = sensing.pick,
  },
  --- Runs a recipe, a path or its text, in a state of its own: `ef.run_recipe(recipe, inputs, options)`
  -- gives results, page and provenance; see `entrefer.recipe`.
  run_recipe = recipe.run_file,
  --- `ef.try(f, ...)`: f's results, or nil and the error table.
  try = fail.try,
}
