#include "band.h"

#include <lapacke.h>
#include <math.h>

static size_t least(size_t a, size_t b) {
  return a < b ? a : b;
}

/* LDL' without square roots; the diagonal of the band holds 1/D. Inlined with a constant width, the
 * loops over the few entries of a column become straight code. */
static inline int factor_width(const ef_band *m, size_t width) {
  size_t stride = width + 1;
  for (size_t j = 0; j < m->size; j++) {
    double *column = m->band + j * stride;
    double pivot = column[0];
    if (!(pivot > 0) || !isfinite(pivot)) return 0;
    double inverse = 1 / pivot;
    column[0] = inverse;
    if (j + width < m->size) {
      for (size_t k = 1; k <= width; k++) {
        double multiplier = column[k] * inverse;
        double *target = column + k * stride - k;
        for (size_t i = k; i <= width; i++)
          target[i] -= multiplier * column[i];
      }
    } else {
      for (size_t k = 1; j + k < m->size; k++) {
        double multiplier = column[k] * inverse;
        double *target = column + k * stride - k;
        for (size_t i = k; j + i < m->size; i++)
          target[i] -= multiplier * column[i];
      }
    }
    for (size_t k = 1; k <= width; k++)
      column[k] *= inverse;
  }
  return 1;
}

static int factor_small(const ef_band *m) {
  switch (m->width) {
  case 2:
    return factor_width(m, 2);
  case 3:
    return factor_width(m, 3);
  case 4:
    return factor_width(m, 4);
  case 5:
    return factor_width(m, 5);
  default:
    return factor_width(m, m->width);
  }
}

static void solve_small(const ef_band *m, double *rhs) {
  size_t stride = m->width + 1;
  for (size_t j = 0; j < m->size; j++) {
    const double *column = m->band + j * stride;
    size_t below = least(m->width, m->size - 1 - j);
    for (size_t k = 1; k <= below; k++)
      rhs[j + k] -= column[k] * rhs[j];
  }
  for (size_t j = m->size; j-- > 0;) {
    const double *column = m->band + j * stride;
    size_t below = least(m->width, m->size - 1 - j);
    double sum = rhs[j] * column[0];
    for (size_t k = 1; k <= below; k++)
      sum -= column[k] * rhs[j + k];
    rhs[j] = sum;
  }
}

ef_status ef_band_factor(ef_context *context, ef_band *matrix) {
  int done;
  if (matrix->size <= EF_BAND_SMALL)
    done = factor_small(matrix);
  else
    done = LAPACKE_dpbtrf_work(LAPACK_COL_MAJOR, 'L', (lapack_int)matrix->size,
                               (lapack_int)matrix->width, matrix->band,
                               (lapack_int)(matrix->width + 1)) == 0;
  if (done) return EF_OK;
  return ef_fail_message(context, EF_SINGULAR, "matrix",
                         "the system of equations is not positive definite");
}

void ef_band_solve(const ef_band *factor, double *rhs) {
  if (factor->size <= EF_BAND_SMALL) {
    solve_small(factor, rhs);
    return;
  }
  LAPACKE_dpbtrs_work(LAPACK_COL_MAJOR, 'L', (lapack_int)factor->size, (lapack_int)factor->width, 1,
                      factor->band, (lapack_int)(factor->width + 1), rhs, (lapack_int)factor->size);
}
