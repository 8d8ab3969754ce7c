/* EP cores: a shell around a round post, open at the front. Letters (those of PQ, as the standard's
 * were not at hand): A overall width, 2B height of the pair, C overall depth, 2D window height of
 * the pair, E window diameter, F post diameter, G distance of the post's axis from the front. */
#include "shape_internal.h"

#include <math.h>

static ef_status check(ef_context *context, const double *d) {
  ef_status status =
      ef_shape_between(context, "2D", d[3], (ef_shape_bound){"0", 0}, (ef_shape_bound){"2B", d[1]});
  if (status == EF_OK)
    status = ef_shape_between(context, "E", d[4], (ef_shape_bound){"F", d[5]},
                              (ef_shape_bound){"A", d[0]});
  if (status != EF_OK) return status;
  double least = d[5] / 2, most = d[2] - d[4] / 2;
  if (most <= least)
    return ef_shape_between(context, "C", d[2], (ef_shape_bound){"E/2 + F/2", d[4] / 2 + least},
                            (ef_shape_bound){NULL, INFINITY});
  if (d[6] >= least && d[6] < most) return EF_OK;
  return ef_shape_between(context, "G", d[6], (ef_shape_bound){"or equal to F/2", least},
                          (ef_shape_bound){"C - E/2", most});
}

/* Reconstructed from first principles, no published check: the flux spreads from the post over the
 * angle that the shell covers, a half circle and the two straight sides up to the front; the shell
 * is replaced by a sector of that angle with the shell's own area, then treated as a pot core. Four
 * sizes with tables held from memory only: effective length within 1 %, area 2 % to 3 % low. */
ef_status ef_shape_ep(ef_context *context, const double *d, ef_core_geometry *g) {
  ef_status status = check(context, d);
  if (status != EF_OK) return status;
  double inner = d[4] / 2, post = d[5] / 2, front = d[6], yoke = (d[1] - d[3]) / 2;
  double angle = EF_PI + 2 * atan(front / inner);
  double post_area = EF_PI * post * post;
  double shell_area = d[0] * d[2] - EF_PI / 2 * inner * inner - d[4] * front;
  double outer = sqrt(inner * inner + 2 * shell_area / angle);
  double inward = post * (1 - sqrt(0.5));
  double outward = sqrt((inner * inner + outer * outer) / 2) - inner;
  double near = angle * post * yoke, far = angle * inner * yoke;
  const ef_shape_shell shell = {
      .outer_height = d[1],
      .window_height = d[3],
      .post_area = post_area,
      .shell_area = shell_area,
      .yoke_c1 = 2 * log(inner / post) / (angle * yoke),
      .yoke_c2 = 2 * (1 / post - 1 / inner) / (angle * yoke * angle * yoke),
      .yoke_inner_area = near,
      .yoke_outer_area = far,
      .centre_corner = {EF_PI / 4 * (2 * inward + yoke), (post_area + near) / 2},
      .outer_corner = {EF_PI / 4 * (2 * outward + yoke), (shell_area + far) / 2},
      .shell_thickness = outer - inner,
      .post_diameter = d[5],
      .window_diameter = d[4]};
  status = ef_shape_set_shell(context, &shell, g);
  if (status != EF_OK) return status;
  g->window_leakage = ef_shape_coaxial_leakage(d[4], d[5], 0.5, 2 * EF_PI - angle);
  ef_shape_set_box(g, d[0], d[2], d[1]);
  return EF_OK;
}
