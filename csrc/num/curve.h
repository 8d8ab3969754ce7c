/* Monotone piecewise-cubic curves through given points. */
#ifndef EF_NUM_CURVE_H
#define EF_NUM_CURVE_H

#include "context.h"

/* A view of a curve: the arrays belong to the caller. x strictly increasing, y non-decreasing. On
 * piece i, with d = x - x[i]: y[i] + d (slope[i] + d (square[i] + d cube[i])). */
typedef struct {
  size_t count; /* points, at least 2 */
  const double *x;
  const double *y;
  const double *slope;  /* dy/dx at the points */
  const double *square; /* coefficients of the pieces, count - 1 used */
  const double *cube;
  const double *area; /* integral of y from the first point to point i */
} ef_curve;

typedef struct {
  double value, first, second; /* y, dy/dx, d2y/dx2 (of the piece; jumps at the points) */
} ef_curve_point;

/* Doubles of storage that a curve needs behind its points. */
#define EF_CURVE_STORAGE(count) (4 * (count))

/* A curve with slopes that keep the Hermite cubic monotone between any two points.
 *  x, y         count values each, count >= 2, kept by the caller as long as the curve is used
 *  first_slope, last_slope  slope wanted at an end (limited to the monotone region), or a negative
 *               number to take it from the points
 *  storage      EF_CURVE_STORAGE(count) doubles, kept by the caller like the points
 *  curve        out
 * EF_BAD_VALUE names "x" (not finite, not strictly increasing), "y" (not finite, decreasing) or
 * "count". `name` prefixes the field in messages, e.g. "curve".
 * Source: F. N. Fritsch, R. E. Carlson, Monotone piecewise cubic interpolation, SIAM J. Numer.
 * Anal. 17 (1980) 238 (region of monotonicity alpha^2 + beta^2 <= 9); interior slopes are weighted
 * harmonic means (Fritsch, Butland, SIAM J. Sci. Stat. Comput. 5 (1984) 300). Both from memory. */
ef_status ef_curve_build(ef_context *context, const char *name, size_t count, const double *x,
                         const double *y, double first_slope, double last_slope, double *storage,
                         ef_curve *curve);

/* Index of the piece that holds x: 0 for x below the first point, count - 2 beyond the last. */
size_t ef_curve_piece(const ef_curve *curve, double x);

/* The same when the piece is likely `hint` or one beside it, as in an iteration. */
static inline size_t ef_curve_piece_near(const ef_curve *curve, size_t hint, double x) {
  const double *at = curve->x;
  if (hint + 1 < curve->count) {
    if (x >= at[hint]) {
      if (x < at[hint + 1]) return hint;
      if (hint + 2 < curve->count && x < at[hint + 2]) return hint + 1;
    } else if (hint > 0 && x >= at[hint - 1]) {
      return hint - 1;
    }
  }
  return ef_curve_piece(curve, x);
}

/* Value and derivatives at x, which must lie within the points (the end pieces go on otherwise). */
static inline ef_curve_point ef_curve_at(const ef_curve *curve, size_t piece, double x) {
  double d = x - curve->x[piece], m = curve->slope[piece];
  double c2 = curve->square[piece], c3 = curve->cube[piece];
  ef_curve_point p = {curve->y[piece] + d * (m + d * (c2 + d * c3)), m + d * (2 * c2 + 3 * d * c3),
                      2 * c2 + 6 * d * c3};
  /* Rounding must not turn a flat end into a falling one. */
  if (p.first < 0) p.first = 0;
  return p;
}

/* Integral of the curve from its first point to x in `piece`. */
double ef_curve_integral(const ef_curve *curve, size_t piece, double x);

/* x with y(x) = y. EF_OUT_OF_RANGE when y is not within the points' range. On a flat stretch the
 * left end is returned. Error below 4 ulp of x or of the stretch. */
ef_status ef_curve_inverse(ef_context *context, const ef_curve *curve, double y, double *x);

#endif
