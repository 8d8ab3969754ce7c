/* Safeguarded Newton for one unknown. */
#ifndef EF_NUM_ROOT_H
#define EF_NUM_ROOT_H

#include "context.h"

/* Writes f(x) and df/dx. A derivative that is NaN is replaced by the secant through the last two
 * points; one of 0 leads to a bisection. */
typedef void (*ef_function)(void *user, double x, double *value, double *derivative);

/* Root of f in [low, high], where f(low) and f(high) differ in sign (or one is zero).
 * Newton steps inside a shrinking bracket; a step that leaves the bracket or does not halve the
 * interval fast enough is replaced by a bisection, so it always ends. The root is found to the
 * last few ulp of x. EF_BAD_VALUE when there is no change of sign, EF_NOT_CONVERGED when f gives
 * NaN. */
ef_status ef_root(ef_context *context, ef_function f, void *user, double low, double high,
                  double *root);

#endif
