#include "bessel.h"

#include <math.h>

#include "context.h"

double ef_bessel_i_scaled(int order, double x) {
  double term = 1, sum = 1;
  if (x < 20) {
    /* All terms are positive: nothing cancels. */
    for (int k = 1; term > 1e-17 * sum; k++) {
      term *= x * x / (4.0 * k * (k + order));
      sum += term;
    }
    return exp(-x) * (order ? x / 2 : 1) * sum;
  }
  /* The terms fall until k is about 2 x, below exp(-40): the sum ends long before. */
  for (int k = 1; fabs(term) > 1e-17; k++) {
    double odd = 2.0 * k - 1;
    term *= (odd * odd - 4.0 * order) / (8 * x * k);
    sum += term;
  }
  return sum / sqrt(2 * EF_PI * x);
}

double ef_bessel_k_ratio(double x) {
  double step = fmin(0.1, 0.5 / sqrt(x)), zero = 0.5, one = 0.5;
  for (int i = 1;; i++) {
    double t = i * step, s = sinh(t / 2), exponent = 2 * x * s * s;
    if (exponent > 40 + t) break;
    double weight = exp(-exponent);
    zero += weight;
    one += weight * cosh(t);
  }
  return one / zero;
}
