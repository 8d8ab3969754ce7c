#include "curve.h"

#include <math.h>
#include <stdio.h>

#include "root.h"

static ef_status check_points(ef_context *context, const char *name, size_t count, const double *x,
                              const double *y) {
  char field[EF_FIELD_SIZE], allowed[EF_ALLOWED_SIZE];
  if (count < 2) {
    snprintf(field, sizeof field, "number of points of %s", name);
    return ef_fail(context, EF_BAD_VALUE, field, (double)count, "at least 2");
  }
  for (size_t i = 0; i < count; i++) {
    if (!isfinite(x[i]) || !isfinite(y[i])) {
      snprintf(field, sizeof field, "%s, point %zu", name, i + 1);
      return ef_fail(context, EF_BAD_VALUE, field, isfinite(x[i]) ? y[i] : x[i], "finite numbers");
    }
    if (i > 0 && !(x[i] > x[i - 1])) {
      snprintf(field, sizeof field, "%s, abscissa of point %zu", name, i + 1);
      snprintf(allowed, sizeof allowed, "above %.6g, that of the point before", x[i - 1]);
      return ef_fail(context, EF_BAD_VALUE, field, x[i], allowed);
    }
    if (i > 0 && y[i] < y[i - 1]) {
      snprintf(field, sizeof field, "%s, ordinate of point %zu", name, i + 1);
      snprintf(allowed, sizeof allowed, "at least %.6g, that of the point before", y[i - 1]);
      return ef_fail(context, EF_BAD_VALUE, field, y[i], allowed);
    }
  }
  return EF_OK;
}

static double secant(const double *x, const double *y, size_t i) {
  return (y[i + 1] - y[i]) / (x[i + 1] - x[i]);
}

/* Slope at an end: the secants, which live in the middles of the steps, go on geometrically. It has
 * the order of the three-point formula but stays positive where a bent curve would turn that
 * negative, as at the foot and at the saturated end of a magnetisation curve. */
static double end_slope(double near_step, double far_step, double near_secant, double far_secant) {
  if (near_secant == 0 || far_secant == 0) return near_secant;
  double slope = near_secant * pow(near_secant / far_secant, near_step / (near_step + far_step));
  return fmin(slope, 3 * near_secant);
}

/* A wanted end slope, limited so that the piece next to it stays monotone: the circle
 * alpha^2 + beta^2 <= 9 around the secant. */
static double limit_slope(double wanted, double secant, double other_slope) {
  return fmin(wanted, sqrt(fmax(9 * secant * secant - other_slope * other_slope, 0)));
}

static void find_slopes(size_t count, const double *x, const double *y, double first_slope,
                        double last_slope, double *slope) {
  size_t last = count - 1;
  if (count == 2) {
    slope[0] = slope[1] = secant(x, y, 0);
  } else {
    for (size_t i = 1; i < last; i++) {
      double left = secant(x, y, i - 1), right = secant(x, y, i);
      double before = x[i] - x[i - 1], after = x[i + 1] - x[i];
      double weight_left = before + 2 * after, weight_right = 2 * before + after;
      slope[i] = left > 0 && right > 0
                     ? (weight_left + weight_right) / (weight_left / left + weight_right / right)
                     : 0;
    }
    slope[0] = end_slope(x[1] - x[0], x[2] - x[1], secant(x, y, 0), secant(x, y, 1));
    slope[last] = end_slope(x[last] - x[last - 1], x[last - 1] - x[last - 2],
                            secant(x, y, last - 1), secant(x, y, last - 2));
  }
  if (first_slope >= 0) slope[0] = limit_slope(first_slope, secant(x, y, 0), slope[1]);
  if (last_slope >= 0)
    slope[last] = limit_slope(last_slope, secant(x, y, last - 1), slope[last - 1]);
}

ef_status ef_curve_build(ef_context *context, const char *name, size_t count, const double *x,
                         const double *y, double first_slope, double last_slope, double *storage,
                         ef_curve *curve) {
  ef_status status = check_points(context, name, count, x, y);
  if (status != EF_OK) return status;
  double *slope = storage, *square = slope + count, *cube = square + count, *area = cube + count;
  find_slopes(count, x, y, first_slope, last_slope, slope);
  *curve = (ef_curve){count, x, y, slope, square, cube, area};
  area[0] = 0;
  for (size_t i = 0; i + 1 < count; i++) {
    double step = x[i + 1] - x[i], s = secant(x, y, i);
    square[i] = (3 * s - 2 * slope[i] - slope[i + 1]) / step;
    cube[i] = (slope[i] + slope[i + 1] - 2 * s) / (step * step);
    area[i + 1] = ef_curve_integral(curve, i, x[i + 1]);
  }
  return EF_OK;
}

size_t ef_curve_piece(const ef_curve *curve, double x) {
  size_t low = 0, high = curve->count - 1;
  while (high - low > 1) {
    size_t middle = (low + high) / 2;
    if (x < curve->x[middle])
      high = middle;
    else
      low = middle;
  }
  return low;
}

double ef_curve_integral(const ef_curve *curve, size_t piece, double x) {
  double d = x - curve->x[piece];
  return curve->area[piece] +
         d * (curve->y[piece] + d * (curve->slope[piece] / 2 +
                                     d * (curve->square[piece] / 3 + d * curve->cube[piece] / 4)));
}

typedef struct {
  const ef_curve *curve;
  size_t piece;
  double target;
} inverse_problem;

static void inverse_residual(void *user, double x, double *value, double *derivative) {
  const inverse_problem *p = user;
  ef_curve_point at = ef_curve_at(p->curve, p->piece, x);
  *value = at.value - p->target;
  *derivative = at.first;
}

ef_status ef_curve_inverse(ef_context *context, const ef_curve *curve, double y, double *x) {
  const double *ys = curve->y;
  size_t last = curve->count - 1;
  if (!(y >= ys[0] && y <= ys[last])) {
    char allowed[EF_ALLOWED_SIZE];
    snprintf(allowed, sizeof allowed, "from %.6g to %.6g, the range of the curve", ys[0], ys[last]);
    return ef_fail(context, EF_OUT_OF_RANGE, "ordinate", y, allowed);
  }
  /* The ordinates are sorted, so the same bisection finds the piece. */
  ef_curve by_ordinate = {.count = curve->count, .x = ys, .y = curve->x};
  size_t piece = ef_curve_piece(&by_ordinate, y);
  while (piece > 0 && ys[piece] == y)
    piece--;
  if (ys[piece] == y) {
    *x = curve->x[piece];
    return EF_OK;
  }
  inverse_problem problem = {curve, piece, y};
  return ef_root(context, inverse_residual, &problem, curve->x[piece], curve->x[piece + 1], x);
}
