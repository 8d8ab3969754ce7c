/* Cores with a round post between two shell halves and an opening on either side: RM and PQ.
 *
 * RM letters: a side of the square, b diagonal over the legs, d2 inner diameter of the shell, d3
 * post diameter, d4 hole, h1, h2 outer and window height of the pair, e width of the opening.
 * PQ letters: A overall width, 2B height of the pair, C depth, 2D window height of the pair, E
 * inner diameter of the legs, F post diameter, G opening between the legs, J opening at the post.
 */
#include "shape_internal.h"

#include <math.h>

/* A yoke between post and legs: half angle of the flux at the post and of the legs (rad), area of
 * a quarter of the plate that it really has. */
typedef struct {
  double post, shell, at_post, at_shell, plate_quarter, yoke;
} open_yoke;

/* IEC 60205 (from memory): a plate narrower than the full ring (K) and paths longer than the
 * shortest one (f). */
static void spread_yoke(const open_yoke *y, ef_shape_shell *shell) {
  double full = EF_PI / 16 * (y->shell * y->shell - y->post * y->post);
  double share = y->plate_quarter / full;
  double shortest = (y->shell - y->post) / 2;
  double longest = sqrt(y->shell * y->shell + y->post * y->post -
                        2 * y->shell * y->post * cos(y->at_post - y->at_shell)) /
                   2;
  double stretch = (shortest + longest) / (2 * shortest);
  double section = share * EF_PI * y->yoke;
  shell->yoke_c1 = stretch * log(y->shell / y->post) / section;
  shell->yoke_c2 = stretch * (1 / y->post - 1 / y->shell) / (section * section);
  shell->yoke_inner_area = 2 * y->at_post * y->post * y->yoke;
  shell->yoke_outer_area = 2 * y->at_shell * y->shell * y->yoke;
}

static ef_status no_section(ef_context *context, const char *field, double value) {
  return ef_fail(context, EF_BAD_VALUE, field, value,
                 "a narrower opening; this one leaves no iron between post and legs");
}

static ef_status check_rm(ef_context *context, const double *d) {
  const ef_shape_bound none = {"0", 0};
  ef_status status = ef_shape_between(context, "d2", d[2], (ef_shape_bound){"d3", d[3]},
                                      (ef_shape_bound){"a", d[0]});
  if (status == EF_OK)
    status = ef_shape_between(context, "b", d[1], (ef_shape_bound){"d2", d[2]},
                              (ef_shape_bound){"the square's diagonal", 1.4142135624 * d[0]});
  if (status == EF_OK && d[4] > 0)
    status = ef_shape_between(context, "d4", d[4], none, (ef_shape_bound){"d3", d[3]});
  if (status == EF_OK)
    status = ef_shape_between(context, "h2", d[6], none, (ef_shape_bound){"h1", d[5]});
  if (status == EF_OK)
    status = ef_shape_between(context, "e", d[7], none, (ef_shape_bound){"d2", d[2]});
  return status;
}

/* IEC 60205 (from memory), the variant whose flux leaves the post all around: effective length
 * within -3 % to 0, area within -4 % to +6 % of published tables. */
ef_status ef_shape_rm(ef_context *context, const double *d, ef_core_geometry *g) {
  ef_status status = check_rm(context, d);
  if (status != EF_OK) return status;
  double a = d[0], d2 = d[2], d3 = d[3], d4 = d[4], e = d[7], yoke = (d[5] - d[6]) / 2;
  double beta = EF_PI / 2 - asin(e / d2), cut = a * sqrt(2) - d[1];
  double legs = a * a / 2 * (1 + tan(beta - EF_PI / 4)) - beta / 2 * d2 * d2 - cut * cut / 2;
  double plate = (beta / 2 * d2 * d2 + e * e / 2 * tan(beta) - EF_PI / 4 * d3 * d3) / 4;
  if (legs <= 0 || plate <= 0) return no_section(context, "dimension e", e);
  double post = EF_PI / 4 * (d3 * d3 - d4 * d4);
  ef_shape_shell shell = {.outer_height = d[5],
                          .window_height = d[6],
                          .post_area = post,
                          .shell_area = legs,
                          .shell_thickness = (a - d2) / 2,
                          .post_diameter = d3,
                          .post_hole = d4,
                          .window_diameter = d2};
  spread_yoke(&(open_yoke){d3, d2, EF_PI / 2, beta, plate, yoke}, &shell);
  shell.centre_corner = (ef_section){EF_PI / 4 * (yoke + d3 - sqrt((d3 * d3 + d4 * d4) / 2)),
                                     (post + shell.yoke_inner_area) / 2};
  shell.outer_corner =
      (ef_section){EF_PI / 4 * (yoke + (a - d2) / 2), (legs + shell.yoke_outer_area) / 2};
  status = ef_shape_set_shell(context, &shell, g);
  if (status != EF_OK) return status;
  g->window_leakage = ef_shape_coaxial_leakage(d2, d3, 1, EF_PI - 2 * beta);
  ef_shape_set_box(g, a, a, d[5]);
  return EF_OK;
}

static ef_status check_pq(ef_context *context, const double *d) {
  const ef_shape_bound none = {"0", 0};
  double c = d[2], e = d[4];
  ef_status status = ef_shape_between(context, "2D", d[3], none, (ef_shape_bound){"2B", d[1]});
  if (status == EF_OK)
    status =
        ef_shape_between(context, "E", e, (ef_shape_bound){"F", d[5]}, (ef_shape_bound){"A", d[0]});
  if (status == EF_OK)
    status = ef_shape_between(context, "J", d[7], none, (ef_shape_bound){"F", d[5]});
  if (status != EF_OK) return status;
  const ef_shape_bound least = {"the opening where the legs' face is as wide as C",
                                c < e ? sqrt(e * e - c * c) : 0};
  return ef_shape_between(context, "G", d[6], least, (ef_shape_bound){"E", e});
}

/* IEC 60205 (from memory, reconstructed): within 5 % of published tables of the sizes 20, 26, 50.
 */
ef_status ef_shape_pq(ef_context *context, const double *d, ef_core_geometry *g) {
  ef_status status = check_pq(context, d);
  if (status != EF_OK) return status;
  double a = d[0], c = d[2], e = d[4], f = d[5], opening = d[6], j = d[7];
  double yoke = (d[1] - d[3]) / 2;
  double beta = acos(opening / e), alpha = acos(j / f);
  double face = e * sin(beta), chord = f * sin(alpha);
  double legs = c * (a - opening) - beta * e * e / 2 + opening * face / 2;
  double plate = (beta * e * e - alpha * f * f + opening * chord - j * face) / 8;
  if (plate <= 0) return no_section(context, "dimension G", opening);
  double post = EF_PI / 4 * f * f;
  ef_shape_shell shell = {.outer_height = d[1],
                          .window_height = d[3],
                          .post_area = post,
                          .shell_area = legs,
                          .shell_thickness = (a - e) / 2,
                          .post_diameter = f,
                          .window_diameter = e};
  spread_yoke(&(open_yoke){f, e, alpha, beta, plate, yoke}, &shell);
  shell.centre_corner =
      (ef_section){EF_PI / 4 * (yoke + (1 - sqrt(0.5)) * f), (post + shell.yoke_inner_area) / 2};
  shell.outer_corner =
      (ef_section){EF_PI / 4 * (yoke + (a - e) / 2), (legs + shell.yoke_outer_area) / 2};
  status = ef_shape_set_shell(context, &shell, g);
  if (status != EF_OK) return status;
  g->window_leakage = ef_shape_coaxial_leakage(e, f, 1, EF_PI - 2 * beta);
  ef_shape_set_box(g, a, c, d[1]);
  return EF_OK;
}
