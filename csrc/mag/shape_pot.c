/* Pot cores: a round shell around a round post. Letters: d1, d2 shell's outer and inner diameter,
 * d3, d4 post's diameter and hole, h1, h2 outer and window height of the pair, n slots of width g
 * in the shell. */
#include "shape_internal.h"

#include <math.h>

static ef_status check_slots(ef_context *context, double count, double width, double inner) {
  if (count != floor(count))
    return ef_fail(context, EF_BAD_VALUE, "dimension n", count, "a whole number of slots");
  if (count > 0 && width <= 0)
    return ef_fail(context, EF_BAD_VALUE, "dimension g", width,
                   "above 0 where slots are given (n)");
  if (count <= 0 && width > 0)
    return ef_fail(context, EF_BAD_VALUE, "dimension n", count,
                   "at least 1 where a slot width is given (g)");
  if (count <= 0) return EF_OK;
  double most = count > 2 ? inner * sin(EF_PI / count) : inner;
  return ef_shape_between(context, "g", width, (ef_shape_bound){"0", 0},
                          (ef_shape_bound){"the width that leaves some shell", most});
}

static ef_status check(ef_context *context, const double *d) {
  ef_status status = ef_shape_between(context, "d2", d[1], (ef_shape_bound){"d3", d[2]},
                                      (ef_shape_bound){"d1", d[0]});
  if (status == EF_OK && d[3] > 0)
    status = ef_shape_between(context, "d4", d[3], (ef_shape_bound){"0", 0},
                              (ef_shape_bound){"d3", d[2]});
  if (status == EF_OK)
    status = ef_shape_between(context, "h2", d[5], (ef_shape_bound){"0", 0},
                              (ef_shape_bound){"h1", d[4]});
  return status == EF_OK ? check_slots(context, d[6], d[7], d[1]) : status;
}

/* IEC 60205 (from memory): effective length within 1 %, area within 3 % of published tables. */
ef_status ef_shape_pot(ef_context *context, const double *d, ef_core_geometry *g) {
  ef_status status = check(context, d);
  if (status != EF_OK) return status;
  double r4 = d[0] / 2, r3 = d[1] / 2, r2 = d[2] / 2, r1 = d[3] / 2;
  double yoke = (d[4] - d[5]) / 2, slots = d[6] * d[7];
  double ring = r4 * r4 - r3 * r3, post = r2 * r2 - r1 * r1;
  double inward = r2 - sqrt((r1 * r1 + r2 * r2) / 2), outward = sqrt((r3 * r3 + r4 * r4) / 2) - r3;
  const ef_shape_shell shell = {
      .outer_height = d[4],
      .window_height = d[5],
      .post_area = EF_PI * post,
      .shell_area = EF_PI * ring - slots * (r4 - r3),
      .yoke_c1 = log(r3 / r2) / (EF_PI * yoke),
      .yoke_c2 = (r3 - r2) / (2 * EF_PI * EF_PI * r3 * r2 * yoke * yoke),
      .yoke_inner_area = 2 * EF_PI * r2 * yoke,
      .yoke_outer_area = (2 * EF_PI * r3 - slots) * yoke,
      .centre_corner = {EF_PI / 4 * (2 * inward + yoke), EF_PI / 2 * (post + 2 * r2 * yoke)},
      .outer_corner = {EF_PI / 4 * (2 * outward + yoke),
                       EF_PI / 2 * (ring + 2 * r3 * yoke) - slots / 2 * (r4 - r3 + yoke)},
      .shell_thickness = r4 - r3,
      .post_diameter = d[2],
      .post_hole = d[3],
      .window_diameter = d[1]};
  status = ef_shape_set_shell(context, &shell, g);
  if (status != EF_OK) return status;
  double slot = 2 * asin(d[7] / d[1]);
  g->window_leakage = ef_shape_coaxial_leakage(d[1], d[2], d[6] / 2, slot);
  ef_shape_set_box(g, d[0], d[0], d[4]);
  g->outer_surface = EF_PI * d[0] * (d[0] / 2 + d[4]);
  return EF_OK;
}
