#include "law.h"

#include <math.h>

#include "../num/root.h"

ef_status ef_law_closed(ef_context *context, ef_law_kind kind, double initial_permeability,
                        double saturation, ef_law *law) {
  if (!isfinite(initial_permeability) || initial_permeability < 1)
    return ef_fail(context, EF_BAD_VALUE, "initial permeability", initial_permeability,
                   "a finite number, at least 1");
  if (kind == EF_LAW_LINEAR)
    saturation = HUGE_VAL;
  else if (!isfinite(saturation) || saturation <= 0)
    return ef_fail(context, EF_BAD_VALUE, "saturation polarisation", saturation,
                   "a finite number above 0 T");
  *law =
      (ef_law){.kind = kind, .susceptibility = initial_permeability - 1, .saturation = saturation};
  return EF_OK;
}

/* Js from the law of approach J = Js - a/H through the last two points. */
static double approach_saturation(size_t count, const double *h, const double *j) {
  double j1 = j[count - 2], j2 = j[count - 1], h1 = h[count - 2], h2 = h[count - 1];
  return fmax(j2, (j2 * h2 - j1 * h1) / (h2 - h1));
}

ef_status ef_law_points(ef_context *context, size_t count, const double *h, const double *j,
                        double *storage, double initial_permeability, double saturation,
                        ef_law *law) {
  if (count < 3)
    return ef_fail(context, EF_BAD_VALUE, "number of points of the curve", (double)count,
                   "at least 3, the first at H = 0");
  if (h[0] != 0 || j[0] != 0)
    return ef_fail(context, EF_BAD_VALUE, "first point of the curve", h[0] != 0 ? h[0] : j[0],
                   "H = 0 and B = 0");
  double wanted = saturation;
  if (saturation != 0 && !(isfinite(saturation) && saturation >= j[count - 1]))
    return ef_fail(context, EF_BAD_VALUE, "saturation polarisation", saturation,
                   "at least the polarisation of the last point of the curve");
  /* At the foot the given permeability, at the end the slope of the law of approach. */
  if (wanted == 0) wanted = approach_saturation(count, h, j);
  double first = initial_permeability > 0 ? EF_MU0 * (initial_permeability - 1) : -1;
  double last = fmax(wanted - j[count - 1], 0) / h[count - 1];
  ef_law made = {.kind = EF_LAW_CURVE, .saturation = wanted};
  ef_status status =
      ef_curve_build(context, "curve of J(H)", count, h, j, first, last, storage, &made.curve);
  if (status != EF_OK) return status;
  /* A curve that ends at Js with a slope would have to exceed it. */
  if (wanted <= j[count - 1] * (1 + 1e-12)) storage[count - 1] = 0;
  made.susceptibility = made.curve.slope[0] / EF_MU0;
  *law = made;
  return EF_OK;
}

/* coth(x) - 1/x and its derivative, by series where the difference cancels. */
static void langevin(double x, double *value, double *derivative) {
  if (x < 0.3) {
    double s = x * x;
    *value =
        x *
        (1.0 / 3 +
         s * (-1.0 / 45 +
              s * (2.0 / 945 +
                   s * (-1.0 / 4725 + s * (2.0 / 93555 + s * (-1382.0 / 638512875 +
                                                              s * (4.0 / 18243225 -
                                                                   s * 3617.0 / 162820783125)))))));
    *derivative =
        1.0 / 3 + s * (-3.0 / 45 +
                       s * (10.0 / 945 +
                            s * (-7.0 / 4725 +
                                 s * (18.0 / 93555 + s * (-11 * 1382.0 / 638512875 +
                                                          s * (52.0 / 18243225 -
                                                               s * 15 * 3617.0 / 162820783125))))));
    return;
  }
  double t = exp(-2 * x), coth = (1 + t) / (1 - t);
  *value = coth - 1 / x;
  *derivative = 1 / (x * x) - 4 * t / ((1 - t) * (1 - t));
}

/* Beyond the last point J approaches Js along a hyperbola with the same value and slope. */
typedef struct {
  double room, rate; /* Js - J of the last point; its slope divided by room */
} tail;

static tail curve_tail(const ef_law *law) {
  size_t last = law->curve.count - 1;
  double room = law->saturation - law->curve.y[last];
  tail t = {room, room > 0 ? law->curve.slope[last] / room : 0};
  return t;
}

static double last_field(const ef_law *law) {
  return law->curve.x[law->curve.count - 1];
}

static ef_law_point tail_at(const ef_law *law, double h) {
  tail t = curve_tail(law);
  double shrink = 1 / (1 + t.rate * (h - last_field(law)));
  return (ef_law_point){law->saturation - t.room * shrink, t.room * t.rate * shrink * shrink};
}

ef_law_point ef_law_beyond(const ef_law *law, double h) {
  double x = fabs(h), chi = EF_MU0 * law->susceptibility;
  ef_law_point p = {0, 0};
  switch (law->kind) {
  case EF_LAW_LINEAR:
    return (ef_law_point){chi * h, chi};
  case EF_LAW_FROELICH: {
    double shrink = 1 / (1 + chi * x / law->saturation);
    p = (ef_law_point){chi * x * shrink, chi * shrink * shrink};
    break;
  }
  case EF_LAW_LANGEVIN: {
    double scale = 3 * chi / law->saturation;
    langevin(scale * x, &p.polarisation, &p.slope);
    p.polarisation *= law->saturation;
    p.slope *= law->saturation * scale;
    break;
  }
  case EF_LAW_CURVE:
    p = tail_at(law, x);
    break;
  }
  if (h < 0) p.polarisation = -p.polarisation;
  return p;
}

static double langevin_curvature(double x) {
  if (x < 0.3) {
    double s = x * x;
    return x * (-6.0 / 45 +
                s * (40.0 / 945 +
                     s * (-42.0 / 4725 + s * (144.0 / 93555 + s * (-110 * 1382.0 / 638512875 +
                                                                   s * 624.0 / 18243225)))));
  }
  double t = exp(-2 * x), gap = 1 - t;
  return -2 / (x * x * x) + 8 * t * (1 + t) / (gap * gap * gap);
}

double ef_law_curvature(const ef_law *law, double h) {
  double x = fabs(h), chi = EF_MU0 * law->susceptibility, second = 0;
  switch (law->kind) {
  case EF_LAW_LINEAR:
    break;
  case EF_LAW_FROELICH:
    second = -2 * chi * chi / law->saturation / pow(1 + chi * x / law->saturation, 3);
    break;
  case EF_LAW_LANGEVIN: {
    double scale = 3 * chi / law->saturation;
    second = law->saturation * scale * scale * langevin_curvature(scale * x);
    break;
  }
  case EF_LAW_CURVE:
    if (x >= last_field(law)) {
      tail t = curve_tail(law);
      second = -2 * t.room * t.rate * t.rate / pow(1 + t.rate * (x - last_field(law)), 3);
    } else {
      second = ef_curve_at(&law->curve, ef_curve_piece(&law->curve, x), x).second;
    }
    break;
  }
  return h < 0 ? -second : second;
}

/* ln(sinh(x)/x) without overflow or cancellation. */
static double log_sinhc(double x) {
  if (x < 0.05) return x * x / 6 * (1 - x * x / 30 * (1 - x * x * 4 / 63));
  return x + log1p(-exp(-2 * x)) - log(2 * x);
}

static double curve_coenergy(const ef_law *law, double x) {
  const ef_curve *curve = &law->curve;
  double end = fmin(x, last_field(law));
  double sum = ef_curve_integral(curve, ef_curve_piece(curve, end), end);
  if (x > end) {
    tail t = curve_tail(law);
    double past = x - end;
    sum += law->saturation * past -
           (t.rate > 0 ? t.room / t.rate * log1p(t.rate * past) : t.room * past);
  }
  return sum;
}

double ef_law_coenergy(const ef_law *law, double h) {
  double x = fabs(h), chi = EF_MU0 * law->susceptibility;
  switch (law->kind) {
  case EF_LAW_LINEAR:
    return chi * x * x / 2;
  case EF_LAW_FROELICH: {
    double y = chi * x / law->saturation; /* y - ln(1 + y) cancels for small y */
    double shape = y < 1e-3 ? y * y * (0.5 - y * (1.0 / 3 - y * (0.25 - y / 5))) : y - log1p(y);
    return chi > 0 ? law->saturation * law->saturation / chi * shape : 0;
  }
  case EF_LAW_LANGEVIN: {
    double scale = 3 * chi / law->saturation;
    return scale > 0 ? law->saturation / scale * log_sinhc(scale * x) : 0;
  }
  case EF_LAW_CURVE:
    return curve_coenergy(law, x);
  }
  return 0;
}

typedef struct {
  const ef_law *law;
  double target;
  size_t hint;
} field_problem;

static void field_residual(void *user, double h, double *value, double *derivative) {
  field_problem *p = user;
  ef_law_point at = ef_law_at(p->law, h, &p->hint);
  *value = at.polarisation + EF_MU0 * h - p->target;
  *derivative = at.slope + EF_MU0;
}

ef_status ef_law_field(ef_context *context, const ef_law *law, double b, double *h) {
  if (!isfinite(b)) return ef_fail(context, EF_BAD_VALUE, "flux density", b, "a finite number");
  field_problem problem = {law, fabs(b), 0};
  double root = 0;
  /* J >= 0 bounds the root from above by that of B = mu0 H. */
  ef_status status =
      b == 0 ? EF_OK : ef_root(context, field_residual, &problem, 0, fabs(b) / EF_MU0, &root);
  if (status == EF_OK) *h = b < 0 ? -root : root;
  return status;
}
