/* Symmetric positive definite systems with a small bandwidth. */
#ifndef EF_NUM_BAND_H
#define EF_NUM_BAND_H

#include "context.h"

/* Lower band storage, column-major: entry (i, j), i >= j, at band[(i - j) + j * (width + 1)]. */
typedef struct {
  size_t size;  /* unknowns */
  size_t width; /* sub-diagonals */
  double *band; /* (width + 1) * size, owned by the caller */
} ef_band;

/* Up to this many unknowns an own LDL' is used: there the call into LAPACK costs several times the
 * arithmetic (see the bench). */
#define EF_BAND_SMALL 16

/* Factorises in place: band holds the matrix before and the factor after.
 * EF_SINGULAR when a pivot is not positive. Above EF_BAND_SMALL by LAPACKE_dpbtrf_work. */
ef_status ef_band_factor(ef_context *context, ef_band *matrix);

/* Solves with the factor in place; rhs has size entries. */
void ef_band_solve(const ef_band *factor, double *rhs);

#endif
