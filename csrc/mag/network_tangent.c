/* The linear part of the network's method: chains condensed to branches, the tangent matrix of the
 * nodes, right-hand sides. */
#include <string.h>

#include "network_internal.h"

void ef_network_condense(ef_network *n, const double *tangent) {
  for (size_t k = 0; k < n->branches; k++) {
    const ef_branch *b = &n->branch[k];
    double reluctance = 0;
    for (size_t i = b->first; i < b->first + b->count; i++)
      reluctance += n->yield[i] = 1 / tangent[i];
    n->chain_permeance[k] = 1 / reluctance;
  }
}

ef_status ef_network_factor(ef_context *context, ef_network *n, ef_factor_kind kind) {
  size_t stride = n->matrix.width + 1;
  double *band = n->matrix.band;
  memset(band, 0, stride * n->unknowns * sizeof *band);
  for (size_t k = 0; k < n->branches; k++) {
    size_t a = n->place[n->branch[k].from], b = n->place[n->branch[k].to];
    double p = n->chain_permeance[k];
    if (a != EF_GROUND) band[a * stride] += p;
    if (b != EF_GROUND) band[b * stride] += p;
    if (a == EF_GROUND || b == EF_GROUND) continue;
    size_t row = a > b ? a : b, column = a > b ? b : a;
    band[row - column + column * stride] -= p;
  }
  n->factored = EF_FACTOR_NONE;
  ef_status status = ef_band_factor(context, &n->matrix);
  if (status == EF_OK) n->factored = kind;
  return status;
}

void ef_network_clear_rhs(ef_network *n) {
  memset(n->unknown, 0, n->unknowns * sizeof *n->unknown);
}

void ef_network_add_rhs(ef_network *n, size_t branch, double flux) {
  size_t a = n->place[n->branch[branch].from], b = n->place[n->branch[branch].to];
  if (a != EF_GROUND) n->unknown[a] -= flux;
  if (b != EF_GROUND) n->unknown[b] += flux;
}

double ef_network_unknown_drop(const ef_network *n, size_t branch) {
  size_t a = n->place[n->branch[branch].from], b = n->place[n->branch[branch].to];
  return (a == EF_GROUND ? 0 : n->unknown[a]) - (b == EF_GROUND ? 0 : n->unknown[b]);
}

void ef_network_settle(ef_network *n) {
  for (int pass = 0; pass < 2; pass++) {
    ef_network_clear_rhs(n);
    for (size_t k = 0; k < n->branches; k++)
      if (n->chain_flux[k] != 0) ef_network_add_rhs(n, k, n->chain_flux[k]);
    ef_band_solve(&n->matrix, n->unknown);
    for (size_t k = 0; k < n->branches; k++)
      n->chain_flux[k] += n->chain_permeance[k] * ef_network_unknown_drop(n, k);
  }
}
