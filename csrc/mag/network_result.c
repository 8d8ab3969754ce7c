/* Questions to a solved network. */
#include <math.h>

#include "network_internal.h"

static ef_status require_solution(ef_context *context, const ef_network *n) {
  if (n->solved) return EF_OK;
  return ef_fail_message(context, EF_BAD_VALUE, "network", "the network holds no solution");
}

ef_status ef_network_get(ef_context *context, const ef_network *n, ef_network_solution *solution) {
  ef_status status = require_solution(context, n);
  if (status != EF_OK) return status;
  for (size_t i = 0; i < n->elements; i++) {
    const ef_element *e = &n->element[i];
    n->field[i] = e->law == EF_NO_LAW ? 0 : n->drop[i] / e->length;
  }
  *solution = (ef_network_solution){n->drop, n->flux, n->density, n->field, n->potential, n->nodes};
  return EF_OK;
}

ef_status ef_network_span(ef_context *context, const ef_network *n, size_t first, size_t last,
                          ef_span *span) {
  ef_status status = require_solution(context, n);
  if (status != EF_OK) return status;
  double length = 0;
  ef_span s = {0, first, 0, 0};
  for (size_t i = first; i <= last; i++) {
    double weight = n->element[i].law == EF_NO_LAW ? 0 : n->element[i].length;
    double b = n->density[i];
    if (fabs(b) > fabs(s.largest) * (1 + 1e-12)) {
      s.largest = b;
      s.where = i;
    }
    length += weight;
    s.mean += weight * b;
    s.drop += n->drop[i];
  }
  if (length > 0) s.mean /= length;
  *span = s;
  return EF_OK;
}

size_t ef_network_couplings(const ef_network *n, const ef_turns **coupling) {
  if (coupling) *coupling = n->coupling;
  return n->couplings;
}

double ef_network_linkage(const ef_network *n, size_t winding) {
  double sum = 0;
  for (size_t i = 0; i < n->couplings; i++)
    if (n->coupling[i].winding == winding)
      sum += n->coupling[i].turns * n->flux[n->branch[n->coupling[i].branch].first];
  return sum;
}

static ef_status prepare(ef_context *context, ef_network *n, ef_factor_kind kind) {
  ef_status status = require_solution(context, n);
  if (status != EF_OK || n->factored == kind) return status;
  if (kind == EF_FACTOR_INCREMENTAL) {
    ef_network_condense(n, n->tangent);
  } else {
    for (size_t i = 0; i < n->elements; i++)
      n->step[i] = ef_element_secant(n, i);
    ef_network_condense(n, n->step);
  }
  return ef_network_factor(context, n, kind);
}

/* Change of each branch's flux for one ampere more in a winding, into chain_flux. */
static void branch_response(ef_network *n, size_t winding) {
  for (size_t k = 0; k < n->branches; k++)
    n->chain_flux[k] = 0;
  for (size_t i = 0; i < n->couplings; i++)
    if (n->coupling[i].winding == winding)
      n->chain_flux[n->coupling[i].branch] += n->coupling[i].turns;
  for (size_t k = 0; k < n->branches; k++)
    n->chain_flux[k] *= n->chain_permeance[k];
  ef_network_settle(n);
}

ef_status ef_network_inductance(ef_context *context, ef_network *n, int incremental,
                                double *matrix) {
  ef_status status = prepare(context, n, incremental ? EF_FACTOR_INCREMENTAL : EF_FACTOR_APPARENT);
  if (status != EF_OK) return status;
  for (size_t v = 0; v < n->windings; v++) {
    branch_response(n, v);
    for (size_t w = 0; w < n->windings; w++)
      matrix[w * n->windings + v] = 0;
    for (size_t i = 0; i < n->couplings; i++)
      matrix[n->coupling[i].winding * n->windings + v] +=
          n->coupling[i].turns * n->chain_flux[n->coupling[i].branch];
    if (!incremental) continue;
    for (size_t k = 0; k < n->branches; k++)
      for (size_t i = n->branch[k].first; i < n->branch[k].first + n->branch[k].count; i++)
        n->response[v * n->elements + i] = n->chain_flux[k] / n->tangent[i];
  }
  return EF_OK;
}

ef_status ef_network_energy(ef_context *context, const ef_network *n, double *energy,
                            double *coenergy) {
  ef_status status = require_solution(context, n);
  if (status != EF_OK) return status;
  double sum = 0, product = 0;
  for (size_t i = 0; i < n->elements; i++) {
    sum += ef_element_coenergy(n, i);
    product += n->flux[i] * n->drop[i];
  }
  *coenergy = sum;
  *energy = product - sum;
  return EF_OK;
}

double ef_network_force(const ef_network *n, size_t element) {
  double u = n->drop[element];
  return -u * u / 2 * n->element[element].by_length;
}
