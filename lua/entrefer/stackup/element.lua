--- Where the sensing element sits in the gap.
-- @module entrefer.stackup.element
local fail = require "entrefer.fail"

local element = {}

-- Distance of the element from the side of the package that is glued, and its half width.
local function inside(self, notes)
  local sensor, room = self.sensor, self.sensor:room()
  local middle, half = (room.min + room.max) / 2, (room.max - room.min) / 2
  if sensor.axis ~= "normal" then
    notes[#notes + 1] = "the element of a standing sensor is taken in the middle of its height"
    return middle / 2, half / 2
  end
  if not sensor.element_depth then
    notes[#notes + 1] = "no element depth is given: the element is taken in the middle of the package"
    return middle / 2, half / 2
  end
  if sensor.element_depth > room.max then
    fail("sensor element depth", sensor.element_depth, ("at most %.4g m, the package's thickness")
      :format(room.max))
  end
  if self.element_side == "glued" then return sensor.element_depth, 0 end
  return middle - sensor.element_depth, half
end

--- Places of the elements of a stack in a gap, at assembly temperature (movements with temperature are
-- some micrometres).
-- @number gap m, nominal
-- @treturn table list of `{ position, tolerance, tolerance_rss }`, m
-- @treturn table notes
function element.places(self, gap)
  local notes, places = {}, {}
  local depth, own = inside(self, notes)
  local room = self.sensor:room()
  local thickness, half = (room.min + room.max) / 2, (room.max - room.min) / 2
  local base, widths = -gap / 2, { self.gap_tolerance / 2 }
  for _, film in ipairs(self.insulation) do
    if film.side == "glued" then
      base = base + film.thickness
      widths[#widths + 1] = film.tolerance
    end
  end
  for k = 1, self.stacked do
    base = base + self.adhesive.thickness
    widths[#widths + 1] = self.adhesive.tolerance
    local worst, squares = own, own ^ 2
    for _, width in ipairs(widths) do worst, squares = worst + width, squares + width ^ 2 end
    places[k] = { position = base + depth, tolerance = worst, tolerance_rss = math.sqrt(squares) }
    base = base + thickness
    widths[#widths + 1] = half
  end
  return places, notes
end

return element
