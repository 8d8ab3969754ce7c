/* Cores with a round centre post and outer legs with a cylindrical inner face: ETD, EER, EC.
 * Letters: A overall width, B height of one half, C depth, D window depth of one half, E diameter
 * of the outer legs' inner face, F diameter of the post. */
#include "shape_internal.h"

#include <math.h>

/* IEC 60205 with the mean distance of the cylindrical face from the axis; reconstructed from
 * memory, within 0.5 % of the published tables of seven ETD sizes. EC: the same form; its outer
 * legs' grooves are ignored; reconstructed, no published check (four sizes with tables held from
 * memory only: effective length 3 % to 4 % short, area 1 % to 4 % high). */
ef_status ef_shape_round_post(ef_context *context, const double *d, ef_core_geometry *g) {
  double a = d[0], b = d[1], c = d[2], depth = d[3], e = d[4], f = d[5];
  const ef_shape_bound none = {"0", 0};
  ef_status status = ef_shape_between(context, "D", depth, none, (ef_shape_bound){"B", b});
  if (status != EF_OK) return status;
  status = ef_shape_between(context, "E", e, (ef_shape_bound){"F", f}, (ef_shape_bound){"A", a});
  if (status != EF_OK) return status;
  status = ef_shape_between(context, "C", c, none, (ef_shape_bound){"E", e});
  if (status != EF_OK) return status;
  double half_angle = asin(c / e);
  double face = (c * sqrt(e * e - c * c) + e * e * half_angle) / (4 * c);
  status = ef_shape_between(context, "F", f, none,
                            (ef_shape_bound){"the outer legs' mean distance", 2 * face});
  if (status != EF_OK) return status;
  double leg = a / 2 - face, window = (e - f) / 2;
  const ef_shape_frame frame = {.depth = c,
                                .window_depth = depth,
                                .leg = leg,
                                .yoke = b - depth,
                                .arm = face - f / 2,
                                .half_post = f / 2,
                                .post_area = EF_PI / 4 * f * f};
  status = ef_shape_set_frame(context, &frame, g);
  if (status != EF_OK) return status;
  g->centre_pole = ef_shape_round_pole(f, 0);
  g->window_width = window;
  g->window_area = 2 * depth * window;
  g->window_leakage = ef_shape_coaxial_leakage(e, f, 1, EF_PI - 2 * half_angle);
  g->inner_turn = EF_PI * f;
  ef_shape_set_box(g, a, c, 2 * b);
  return EF_OK;
}
