--- Rows and sums of a stack.
-- @module entrefer.stackup.sums
local fail = require "entrefer.fail"

local sums = {}

-- Packages count from the middle of their range.
local function package_row(self)
  local room = self.sensor:room()
  return { item = self.sensor.axis == "normal" and "sensor package" or "sensor, standing",
    count = self.stacked, nominal = (room.min + room.max) / 2, tolerance = (room.max - room.min) / 2,
    expansion = self.expansion.package }
end

local function layer_rows(self)
  local rows = { package_row(self) }
  if self.adhesive.thickness > 0 then
    rows[#rows + 1] = { item = "adhesive", count = self.adhesive.layers,
      nominal = self.adhesive.thickness, tolerance = self.adhesive.tolerance,
      expansion = self.expansion.adhesive }
  end
  for _, film in ipairs(self.insulation) do
    rows[#rows + 1] = { item = film.name, count = 1, nominal = film.thickness,
      tolerance = film.tolerance, expansion = film.expansion }
  end
  rows[#rows + 1] = { item = "clearance", count = 1, nominal = self.clearance, tolerance = 0,
    expansion = 0 }
  rows[#rows + 1] = { item = "tolerance of the gap", count = 1, nominal = 0,
    tolerance = self.gap_tolerance, expansion = 0 }
  return rows
end

-- Movement of every row at a temperature, and their sum. The gap opens with what sets its length, by
-- its share of the sum of the nominal sizes: what that leaves out is below 1e-3 of the tolerances.
local function movement(self, rows, nominal, temperature)
  local rise = temperature - self.temperature.assembly
  local opening = self.gap_kind == "spacer" and self.expansion.spacer or self.expansion.core
  local moved, total = {}, -nominal * opening * rise
  for i, row in ipairs(rows) do
    moved[i] = row.count * row.nominal * row.expansion * rise
    total = total + moved[i]
  end
  return moved, -nominal * opening * rise, total
end

-- The closing by a warm post belongs to every state with current; at assembly nothing has moved.
local function governing(self, rows, nominal)
  local closing = self.leg_height and self.expansion.core * self.leg_height * self.post_rise or 0
  local best = { total = 0, temperature = self.temperature.assembly, moved = {}, opening = 0,
    closing = 0 }
  for _, temperature in ipairs { self.temperature.low, self.temperature.high } do
    local moved, opening, total = movement(self, rows, nominal, temperature)
    if total + closing > best.total then
      best = { total = total + closing, temperature = temperature, moved = moved, opening = opening,
        closing = closing }
    end
  end
  return best
end

--- Rows and sums of a stack that has been read.
-- @treturn table the fields `items` to `root_sum_square` of `entrefer.stackup`
function sums.of(self)
  local rows = layer_rows(self)
  local nominal, tolerance, squares = 0, 0, 0
  for _, row in ipairs(rows) do
    nominal = nominal + row.count * row.nominal
    tolerance = tolerance + row.count * row.tolerance
    squares = squares + row.count * row.tolerance ^ 2
  end
  local state = governing(self, rows, nominal)
  local items = {}
  for i, row in ipairs(rows) do
    items[i] = { item = row.item, count = row.count, nominal = row.nominal,
      tolerance = row.tolerance, thermal = state.moved[i] or 0 }
  end
  items[#items + 1] = { item = self.gap_kind == "spacer" and "gap opens with its spacer"
    or "gap opens with the core", count = 1, nominal = 0, tolerance = 0, thermal = state.opening }
  if self.leg_height then
    items[#items + 1] = { item = "warm leg closes the gap", count = 1, nominal = 0, tolerance = 0,
      thermal = state.closing }
  end
  local spread = math.sqrt(squares)
  return { items = items, nominal = nominal, tolerance = tolerance, tolerance_rss = spread,
    thermal = state.total, temperature_of_thermal = state.temperature,
    worst_case = nominal + tolerance + state.total,
    root_sum_square = nominal + spread + state.total }
end

--- Smallest gap, with extra independent tolerances.
function sums.smallest_gap(self, basis, extra)
  local worst, squares = self.tolerance, self.tolerance_rss ^ 2
  for _, tolerance in ipairs(extra or {}) do
    worst, squares = worst + tolerance, squares + tolerance ^ 2
  end
  if basis == "worst case" then return self.nominal + worst + self.thermal end
  if basis == "root sum square" then return self.nominal + math.sqrt(squares) + self.thermal end
  fail.unknown("basis", tostring(basis), { "worst case", "root sum square" })
end

return sums
