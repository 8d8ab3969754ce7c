/* Ring cores. */
#include "shape_internal.h"

#include <math.h>

/* IEC 60205 (from memory): C1 = 2 pi/(h ln(d1/d2)), C2 = 4 pi (1/d2 - 1/d1)/(h2 ln(d1/d2)3);
 * rounded edges shorten the height to h - 2 (4 - pi) r0^2/(d1 - d2), the same loss of section. */
ef_status ef_shape_ring(ef_context *context, const double *d, ef_core_geometry *g) {
  double outer = d[0], inner = d[1], height = d[2], corner = d[3];
  double radial = (outer - inner) / 2;
  ef_status status = ef_shape_between(context, "d2", inner, (ef_shape_bound){"0", 0},
                                      (ef_shape_bound){"d1", outer});
  if (status != EF_OK) return status;
  double most = fmin(height, radial) / 2;
  if (corner > most)
    return ef_shape_between(context, "r0", corner, (ef_shape_bound){"0", 0},
                            (ef_shape_bound){"half of the section's smaller side", most});
  double missing = (4 - EF_PI) * corner * corner;
  double even_height = height - missing / radial;
  double ratio = log1p((outer - inner) / inner);
  double c1 = 2 * EF_PI / (even_height * ratio);
  double c2 = 2 * c1 * (outer - inner) / (outer * inner) / (even_height * ratio * ratio);
  g->topology = EF_TOPOLOGY_RING;
  g->yoke = (ef_section){c1 * c1 / c2, c1 / c2};
  status = ef_shape_effective(context, 1, &g->yoke, g);
  if (status != EF_OK) return status;
  g->minimum_area = height * radial - missing;
  g->iron_volume = EF_PI * (outer + inner) / 2 * g->minimum_area;
  g->outer_pole = ef_shape_rectangle_pole(radial, height);
  g->outer_pole.corner = corner;
  g->window_height = inner;
  g->window_width = inner / 2;
  g->window_area = EF_PI / 4 * inner * inner;
  g->inner_turn = 2 * (radial + height) - 2 * (4 - EF_PI) * corner;
  g->ring_outer_diameter = outer;
  g->ring_inner_diameter = inner;
  g->ring_height = height;
  g->envelope_width = g->envelope_depth = outer;
  g->envelope_height = height;
  g->outer_surface = EF_PI * (outer + inner) * (radial + height);
  return EF_OK;
}
