/* The magnetisation law of one material at one temperature: B = mu0 H + J(H), J odd, monotone and
 * bounded by the saturation polarisation, so that dB/dH never falls below mu0. */
#ifndef EF_MAG_LAW_H
#define EF_MAG_LAW_H

#include "../num/curve.h"

typedef enum {
  EF_LAW_LINEAR,   /* J = mu0 chi H, no saturation */
  EF_LAW_FROELICH, /* J = H / (1/(mu0 chi) + |H|/Js) */
  EF_LAW_LANGEVIN, /* J = Js (coth(H/h) - h/H), h = Js / (3 mu0 chi) */
  EF_LAW_CURVE     /* monotone cubic through points, then an approach to Js */
} ef_law_kind;

typedef struct {
  ef_law_kind kind;
  double susceptibility; /* chi = initial relative permeability - 1 */
  double saturation;     /* Js, T; HUGE_VAL for a linear law */
  ef_curve curve;        /* J over H for H >= 0, first point (0, 0); arrays owned elsewhere */
} ef_law;

typedef struct {
  double polarisation; /* J, T */
  double slope;        /* dJ/dH, H/m, >= 0 */
} ef_law_point;

/* Law with closed form. initial_permeability >= 1 (relative); saturation Js in T (ignored by the
 * linear law). EF_BAD_VALUE names "initial permeability" or "saturation polarisation". */
ef_status ef_law_closed(ef_context *context, ef_law_kind kind, double initial_permeability,
                        double saturation, ef_law *law);

/* Law through points. h, j: count values each, h[0] = j[0] = 0, and storage:
 * EF_CURVE_STORAGE(count) doubles, all kept by the caller as long as the law is used.
 * initial_permeability: relative, or 0 to take it from the points. saturation: Js in T, or 0 to fit
 * it to the last two points by the law of approach J = Js - a/H (never below the last point).
 * EF_BAD_VALUE names the point or field. */
ef_status ef_law_points(ef_context *context, size_t count, const double *h, const double *j,
                        double *slope, double initial_permeability, double saturation, ef_law *law);

/* J and dJ/dH of a closed law, or of a curve beyond its points. */
ef_law_point ef_law_beyond(const ef_law *law, double h);

/* J and dJ/dH at field strength h (A/m, any finite value). *hint: the piece last used, 0 at first
 * (speeds up repeated calls; the result does not depend on it). Inline: it is the inner loop of the
 * network. */
static inline ef_law_point ef_law_at(const ef_law *law, double h, size_t *hint) {
  const ef_curve *curve = &law->curve;
  double x = h < 0 ? -h : h;
  if (law->kind != EF_LAW_CURVE || x >= curve->x[curve->count - 1]) return ef_law_beyond(law, h);
  *hint = ef_curve_piece_near(curve, *hint, x);
  ef_curve_point p = ef_curve_at(curve, *hint, x);
  return (ef_law_point){h < 0 ? -p.value : p.value, p.first};
}

/* d2J/dH2 at h (odd in h; one-sided at the points of a curve). */
double ef_law_curvature(const ef_law *law, double h);

/* Coenergy density of the polarisation, integral of J dH from 0 to h, J/m3; even in h. */
double ef_law_coenergy(const ef_law *law, double h);

/* Field strength for a flux density b (T), by safeguarded Newton; exact to rounding for any finite
 * b. EF_BAD_VALUE when b is not finite. */
ef_status ef_law_field(ef_context *context, const ef_law *law, double b, double *h);

/* Least-squares fit of a Froelich or Langevin law to measured points (h > 0 in A/m, b in T): the
 * sum of (J(h) - (b - mu0 h))^2 is least, by damped Gauss-Newton in the logarithms of chi and Js.
 *  rms_error  out, T
 * EF_BAD_VALUE: fewer than 3 points, not finite, h <= 0, b <= mu0 h; EF_NOT_CONVERGED otherwise. */
ef_status ef_law_fit(ef_context *context, ef_law_kind kind, size_t count, const double *h,
                     const double *b, ef_law *law, double *rms_error);

#endif
