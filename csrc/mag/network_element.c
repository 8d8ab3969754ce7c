/* One element of a network: its flux, its coenergy, its permeabilities. */
#include "network_internal.h"

void ef_element_evaluate(ef_network *n, size_t index) {
  const ef_element *e = &n->element[index];
  double drop = n->drop[index];
  if (e->law == EF_NO_LAW) {
    n->flux[index] = e->permeance * drop;
    n->tangent[index] = e->permeance;
    return;
  }
  double inverse = n->inverse_length[index], h = drop * inverse;
  ef_law_point p =
      ef_law_at(&n->law[e->law], h + n->offset[e->law] * e->remanence, &n->hint[index]);
  double density = EF_MU0 * h + p.polarisation;
  n->density[index] = density;
  n->flux[index] = e->area * density + e->bypass * drop;
  n->tangent[index] = e->area * inverse * (EF_MU0 + p.slope) + e->bypass;
}

double ef_element_secant(const ef_network *n, size_t i) {
  const ef_element *e = &n->element[i];
  if (e->law == EF_NO_LAW) return e->permeance;
  double h = n->drop[i] / e->length + n->offset[e->law] * e->remanence;
  size_t hint = n->hint[i];
  ef_law_point p = ef_law_at(&n->law[e->law], h, &hint);
  double slope = h != 0 ? p.polarisation / h : p.slope;
  return e->area / e->length * (EF_MU0 + slope) + e->bypass;
}

double ef_element_coenergy(const ef_network *n, size_t i) {
  const ef_element *e = &n->element[i];
  double u = n->drop[i];
  if (e->law == EF_NO_LAW) return e->permeance * u * u / 2;
  const ef_law *law = &n->law[e->law];
  double h = u / e->length, shift = n->offset[e->law] * e->remanence;
  double density =
      EF_MU0 * h * h / 2 + ef_law_coenergy(law, h + shift) - ef_law_coenergy(law, shift);
  return e->area * e->length * density + e->bypass * u * u / 2;
}
