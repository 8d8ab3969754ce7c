/* What the cores with a shell around a round post have in common. */
#include "shape_internal.h"

#include <math.h>

/* The two arms of a yoke share its angle, so each section is half of the whole. */
static ef_section half_of(ef_section both, double length) {
  return (ef_section){both.length * length, both.area / 2};
}

ef_status ef_shape_set_shell(ef_context *context, const ef_shape_shell *shell,
                             ef_core_geometry *g) {
  double c1 = shell->yoke_c1, c2 = shell->yoke_c2;
  const ef_section outer = {shell->window_height, shell->shell_area};
  const ef_section yokes = {c1 * c1 / c2, c1 / c2};
  g->topology = EF_TOPOLOGY_THREE_LEG;
  g->centre_leg = (ef_section){shell->window_height, shell->post_area};
  g->outer_leg = half_of(outer, 1);
  g->yoke = half_of(yokes, 0.5);
  g->centre_corner = half_of(shell->centre_corner, 0.5);
  g->outer_corner = half_of(shell->outer_corner, 0.5);
  ef_status status = ef_shape_sum(context, g);
  if (status != EF_OK) return status;
  g->minimum_area = fmin(g->minimum_area, fmin(shell->yoke_inner_area, shell->yoke_outer_area));
  g->centre_pole = ef_shape_round_pole(shell->post_diameter, shell->post_hole);
  g->outer_pole =
      ef_shape_rectangle_pole(shell->shell_thickness, g->outer_leg.area / shell->shell_thickness);
  g->half_height = shell->outer_height / 2;
  g->window_height = shell->window_height;
  g->window_width = (shell->window_diameter - shell->post_diameter) / 2;
  g->window_area = g->window_height * g->window_width;
  g->inner_turn = EF_PI * shell->post_diameter;
  return EF_OK;
}
