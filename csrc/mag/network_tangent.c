/* The linear part of the network's method: chains condensed to branches, the tangent matrix of the
 * nodes, right-hand sides. */
#include <string.h>

#include "network_internal.h"

static void add_to_matrix(const ef_network *n, size_t k, double *band) {
  size_t stride = n->matrix.width + 1;
  double p = n->chain_permeance[k];
  band[n->place[n->branch[k].from] * stride] += p;
  band[n->place[n->branch[k].to] * stride] += p;
  band[n->corner[k]] -= p;
}

void ef_network_prepare(ef_network *n) {
  for (size_t i = 0; i < n->elements; i++)
    if (n->element[i].law != EF_NO_LAW) n->inverse_length[i] = 1 / n->element[i].length;
  for (size_t m = 0; m < n->straights; m++) {
    size_t k = n->straight[m], i = n->branch[k].first;
    n->tangent[i] = n->chain_permeance[k] = n->element[i].permeance;
    n->yield[i] = 1 / n->tangent[i];
    add_to_matrix(n, k, n->base);
  }
}

void ef_network_condense(ef_network *n, const double *tangent) {
  for (size_t m = 0; m < n->bents; m++) {
    const ef_branch *b = &n->branch[n->bent[m]];
    double reluctance = 0;
    for (size_t i = b->first; i < b->first + b->count; i++)
      reluctance += n->yield[i] = 1 / tangent[i];
    n->chain_permeance[n->bent[m]] = 1 / reluctance;
  }
}

ef_status ef_network_factor(ef_context *context, ef_network *n, ef_factor_kind kind) {
  memcpy(n->matrix.band, n->base, ef_network_band_size(n) * sizeof *n->base);
  for (size_t m = 0; m < n->bents; m++)
    add_to_matrix(n, n->bent[m], n->matrix.band);
  n->factored = EF_FACTOR_NONE;
  ef_status status = ef_band_factor(context, &n->matrix);
  if (status == EF_OK) n->factored = kind;
  return status;
}

void ef_network_clear_rhs(ef_network *n) {
  memset(n->unknown, 0, (n->unknowns + 1) * sizeof *n->unknown);
}

void ef_network_solve_rhs(ef_network *n) {
  n->unknown[n->unknowns] = 0;
  ef_band_solve(&n->matrix, n->unknown);
}

void ef_network_settle(ef_network *n) {
  for (int pass = 0; pass < 2; pass++) {
    ef_network_clear_rhs(n);
    for (size_t k = 0; k < n->branches; k++)
      if (n->chain_flux[k] != 0) ef_network_add_rhs(n, k, n->chain_flux[k]);
    ef_network_solve_rhs(n);
    for (size_t k = 0; k < n->branches; k++)
      n->chain_flux[k] += n->chain_permeance[k] * ef_network_unknown_drop(n, k);
  }
}
