/* Flux density on the middle plane of a gap: where a sensor sits. */
#include <math.h>

#include "gap.h"

/* x/l = (2/pi)(atanh b - 1/b). With b = tanh y: y - coth y = pi x/2, which rises and is concave, so
 * Newton's method climbs to the root from any start below it. */
double ef_gap_midplane_edge(double x) {
  double t = EF_PI / 2 * x;
  if (isnan(t)) return t;
  if (t < -1e8) return -1 / t;
  double y = t >= 0 ? t + 1 : 1 / (1 - t);
  for (int i = 0; i < 100 && y < 40; i++) {
    double tangent = tanh(y), sine = sinh(y);
    double next = y - (y - 1 / tangent - t) * sine * sine / (1 + sine * sine);
    if (!(next > y)) break;
    y = next;
  }
  return tanh(y);
}

static double between_edges(double position, double width, double half_length) {
  return ef_gap_midplane_edge((width / 2 - position) / half_length) *
         ef_gap_midplane_edge((width / 2 + position) / half_length);
}

double ef_gap_midplane(const ef_gap_geometry *geometry, double x, double y, int *valid) {
  const ef_pole *pole = &geometry->pole;
  double length = geometry->length, half = length / 2;
  if (pole->shape == EF_POLE_ROUND) {
    double radius = hypot(x, y);
    *valid = pole->width >= 1.5 * length && radius - pole->width / 2 <= length;
    return between_edges(radius, pole->width, half);
  }
  double beyond = hypot(fmax(fabs(x) - pole->width / 2, 0), fmax(fabs(y) - pole->depth / 2, 0));
  *valid = fmin(pole->width, pole->depth) >= 1.5 * length && beyond <= length;
  return between_edges(x, pole->width, half) * between_edges(y, pole->depth, half);
}
