--- Usual coil former sizes by core family, in mm: `wall` of the tube, `flange` at each end, `clearance`
-- left between the full winding and the core's outer leg. The first row whose `up_to` (width of the
-- window, mm) is not exceeded holds. Common practice, no source. The rows of ETD and PQ were chosen so
-- that windows and mean turns of a handbook's table come out (docs/methods/stackup.md); the other
-- families take them over by likeness. Replace by your supplier's drawing.
local usual = { { up_to = 5, wall = 0.9, flange = 1.2, clearance = 0.45 },
  { wall = 1.2, flange = 1.4, clearance = 0.7 } }
local short_post = { { up_to = 5, wall = 0.9, flange = 1.2, clearance = 0.45 },
  { wall = 1.2, flange = 1.2, clearance = 0.5 } }
local low = { { wall = 0.7, flange = 0.7, clearance = 0.3 } }

return {
  source = "common practice, no source; replace by your supplier's drawing",
  E = usual, ETD = usual, EER = usual, EC = usual, U = usual,
  PQ = short_post, RM = short_post, pot = short_post, EP = short_post,
  EFD = low,
  -- The winding is a board: its cut-out clears the leg, its surface clears the yokes.
  ["planar E"] = { { wall = 0.4, flange = 0.2, clearance = 0.4 } },
  -- Tape or coating; `hole` is the share of the bore's diameter that the winding shuttle needs.
  ring = { { wall = 0.4, flange = 0, clearance = 0, hole = 0.4 } },
}
