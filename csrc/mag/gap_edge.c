/* Two-dimensional permeance of one pole edge over the mid-plane of its gap, by conformal mapping.
 */
#include <math.h>

#include "gap_internal.h"

/* s >= 0 with s - atan s = t, t > 0. The function rises and is convex, so Newton's method comes
 * down to the root from any start above it. */
static double wall_parameter(double t) {
  double s = t + EF_PI / 2;
  for (int i = 0; i < 100; i++) {
    double value = s - atan(s);
    /* The series keeps the digits that the difference would lose. */
    if (s < 0.05)
      value = s * s * s *
              (1.0 / 3 - s * s * (1.0 / 5 - s * s * (1.0 / 7 - s * s * (1.0 / 9 - s * s / 11))));
    double next = s - (value - t) * (1 + s * s) / (s * s);
    if (!(next < s)) break;
    s = next;
  }
  return s;
}

static void free_edge(double reach, double l, double *permeance, double *by_length) {
  *permeance = 2 / EF_PI * (1 + log(EF_PI * reach / (4 * l)));
  *by_length = -2 / (EF_PI * l);
}

static void free_edge_exact(double reach, double l, double *permeance, double *by_length) {
  double s = wall_parameter(EF_PI / 2 * reach / l);
  *permeance = 2 / EF_PI * (1 - log(2.0)) + log1p(s * s) / EF_PI;
  *by_length = -reach / (l * l * s);
}

/* Step from a channel of height l (under the pole) to one of height `reach` (beside it). With
 * dz/dt ~ sqrt((t - a^2)/(t - 1))/t, a = l/reach, the wall carries (2/pi) ln(1/a) and the face
 * (1/pi) ln((1 - a^2)/4) + (2/(pi a)) atanh a more than its uniform flux. */
static void edge_near_yoke(double reach, double l, double *permeance, double *by_length) {
  double a = l / reach;
  *permeance = 2 / EF_PI * (atanh(a) / a + log1p(-a * a) / 2 - log(2 * a));
  *by_length = -2 / EF_PI * atanh(a) / (a * a) / reach;
}

/* Corner of two channels of heights l (under the pole) and `reach` (along its wall), both bounded
 * by an outer corner at the mid-plane's potential; uniform flux measured from the pole's corner. */
static void edge_near_leg(double reach, double l, double *permeance, double *by_length) {
  double a = l / reach;
  *permeance = 2 / EF_PI * (a * atan(1 / a) + atan(a) / a + log((a + 1 / a) / 4));
  *by_length = 2 / EF_PI * (atan(1 / a) - atan(a) / (a * a)) / reach;
}

ef_status ef_gap_named_edge(ef_context *context, const char *field, const ef_edge *edge,
                            double half_length, double *permeance, double *by_length) {
  ef_status status = ef_require_positive(context, "half length of the gap", half_length);
  if (status == EF_OK && edge->kind == EF_EDGE_NONE) {
    *permeance = 0;
    if (by_length) *by_length = 0;
    return EF_OK;
  }
  if (status == EF_OK) status = ef_require_positive(context, field, edge->reach);
  if (status != EF_OK) return status;
  double p = NAN, slope = NAN;
  switch (edge->kind) {
  case EF_EDGE_FREE:
    free_edge(edge->reach, half_length, &p, &slope);
    break;
  case EF_EDGE_FREE_EXACT:
    free_edge_exact(edge->reach, half_length, &p, &slope);
    break;
  case EF_EDGE_NEAR_YOKE:
    if (edge->reach <= half_length)
      return ef_fail(context, EF_BAD_VALUE, field, edge->reach,
                     "a height above half the gap's length");
    edge_near_yoke(edge->reach, half_length, &p, &slope);
    break;
  case EF_EDGE_NEAR_LEG:
    edge_near_leg(edge->reach, half_length, &p, &slope);
    break;
  default:
    return ef_fail(context, EF_BAD_VALUE, "edge kind", (double)edge->kind, "0 to 4");
  }
  if (!(isfinite(p) && isfinite(slope) && p > 0))
    return ef_fail(context, EF_OUT_OF_RANGE, field, edge->reach,
                   "a reach at which the edge's formula is positive and finite (a free wall: above "
                   "0.47 of half the gap)");
  *permeance = p;
  if (by_length) *by_length = slope;
  return EF_OK;
}

ef_status ef_gap_edge(ef_context *context, const ef_edge *edge, double half_length,
                      double *permeance, double *by_length) {
  return ef_gap_named_edge(context, "edge reach", edge, half_length, permeance, by_length);
}
