/* Least-squares fit of the closed laws. Both have the form J = Js f(mu0 chi H / Js), so with
 * p = ln chi, q = ln Js: dJ/dp = H dJ/dH and dJ/dq = J - H dJ/dH. */
#include <math.h>

#include "law.h"

typedef struct {
  size_t count;
  const double *h, *b;
} fit_points;

static ef_status check_points(ef_context *context, const fit_points *points) {
  if (points->count < 3)
    return ef_fail(context, EF_BAD_VALUE, "number of points to fit", (double)points->count,
                   "at least 3");
  for (size_t i = 0; i < points->count; i++) {
    ef_status status = ef_require_positive(context, "field strength of a point", points->h[i]);
    if (status != EF_OK) return status;
    if (!isfinite(points->b[i]) || points->b[i] <= EF_MU0 * points->h[i])
      return ef_fail(context, EF_BAD_VALUE, "flux density of a point", points->b[i],
                     "a finite number above mu0 H");
  }
  return EF_OK;
}

/* Normal equations of the linearised problem at `law`; returns the sum of squares. */
static double linearise(const fit_points *points, const ef_law *law, double normal[3],
                        double gradient[2]) {
  double sum = 0;
  size_t hint = 0;
  normal[0] = normal[1] = normal[2] = gradient[0] = gradient[1] = 0;
  for (size_t i = 0; i < points->count; i++) {
    double h = points->h[i];
    ef_law_point at = ef_law_at(law, h, &hint);
    double residual = at.polarisation - (points->b[i] - EF_MU0 * h);
    double by_chi = h * at.slope, by_js = at.polarisation - by_chi;
    sum += residual * residual;
    normal[0] += by_chi * by_chi;
    normal[1] += by_chi * by_js;
    normal[2] += by_js * by_js;
    gradient[0] += by_chi * residual;
    gradient[1] += by_js * residual;
  }
  return sum;
}

/* Starting values: the steepest chord for chi, a little above the highest polarisation for Js. */
static ef_law starting_law(const fit_points *points, ef_law_kind kind) {
  ef_law law = {.kind = kind};
  for (size_t i = 0; i < points->count; i++) {
    double j = points->b[i] - EF_MU0 * points->h[i];
    law.susceptibility = fmax(law.susceptibility, j / points->h[i] / EF_MU0);
    law.saturation = fmax(law.saturation, 1.1 * j);
  }
  return law;
}

ef_status ef_law_fit(ef_context *context, ef_law_kind kind, size_t count, const double *h,
                     const double *b, ef_law *law, double *rms_error) {
  fit_points points = {count, h, b};
  if (kind != EF_LAW_FROELICH && kind != EF_LAW_LANGEVIN)
    return ef_fail_message(context, EF_BAD_VALUE, "law",
                           "only Froelich and Langevin can be fitted");
  ef_status status = check_points(context, &points);
  if (status != EF_OK) return status;
  ef_law now = starting_law(&points, kind);
  double normal[3], gradient[2], damping = 1e-3;
  double sum = linearise(&points, &now, normal, gradient);
  for (int i = 0; i < context->max_iterations; i++) {
    double a = normal[0] * (1 + damping), c = normal[2] * (1 + damping);
    double determinant = a * c - normal[1] * normal[1];
    double dp = -(c * gradient[0] - normal[1] * gradient[1]) / determinant;
    double dq = -(a * gradient[1] - normal[1] * gradient[0]) / determinant;
    ef_law next = now;
    next.susceptibility *= exp(dp);
    next.saturation *= exp(dq);
    double next_normal[3], next_gradient[2];
    double next_sum = linearise(&points, &next, next_normal, next_gradient);
    int better = next_sum <= sum;
    if (better) {
      now = next;
      sum = next_sum;
      for (int k = 0; k < 3; k++)
        normal[k] = next_normal[k];
      gradient[0] = next_gradient[0], gradient[1] = next_gradient[1];
    }
    if (fabs(dp) + fabs(dq) < 1e-10 && isfinite(now.susceptibility)) {
      *law = now;
      *rms_error = sqrt(sum / (double)count);
      return EF_OK;
    }
    damping = better ? damping / 4 : damping * 8;
  }
  return ef_fail_message(context, EF_NOT_CONVERGED, "law",
                         "the fit did not converge; the points do not determine the law");
}
