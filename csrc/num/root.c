#include "root.h"

#include <float.h>
#include <math.h>

/* Newton's step when it stays inside the bracket, else (or when asked) the middle. */
static double next_point(double x, double value, double slope, double low, double high,
                         int bisect) {
  double middle = low + (high - low) / 2;
  if (bisect || slope == 0 || isnan(slope)) return middle;
  double step = x - value / slope;
  return step > low && step < high ? step : middle;
}

ef_status ef_root(ef_context *context, ef_function f, void *user, double low, double high,
                  double *root) {
  double at_low, at_high, slope;
  f(user, low, &at_low, &slope);
  f(user, high, &at_high, &slope);
  if (at_low == 0 || at_high == 0) {
    *root = at_low == 0 ? low : high;
    return EF_OK;
  }
  if (!((at_low < 0 && at_high > 0) || (at_low > 0 && at_high < 0)))
    return ef_fail_message(context, EF_BAD_VALUE, "bracket",
                           "the function does not change sign between the bounds");
  double sign = at_low < 0 ? 1 : -1, value = at_high, x = high;
  double last_x = low, last_value = at_low, width = high - low;
  for (int i = 0; i < 2200; i++) { /* more than all halvings of the double range */
    int slow = i % 3 == 2 && high - low > width / 2;
    if (i % 3 == 2) width = high - low;
    if (isnan(slope)) slope = (value - last_value) / (x - last_x);
    double next = next_point(x, value, slope, low, high, slow);
    double moved = fabs(next - x);
    last_x = x;
    last_value = value;
    x = next;
    f(user, x, &value, &slope);
    if (isnan(value))
      return ef_fail_message(context, EF_NOT_CONVERGED, "function",
                             "the function gives no number inside the bounds");
    if (sign * value < 0)
      low = x;
    else
      high = x;
    double resolution = 2 * DBL_EPSILON * fabs(x) + DBL_MIN;
    if (value == 0 || high - low <= resolution || (i > 0 && moved <= resolution)) {
      *root = x;
      return EF_OK;
    }
  }
  return ef_fail_message(context, EF_NOT_CONVERGED, "root", "the root was not found");
}
