/* Derivatives along a change of parameters. The solution satisfies the balance of the fluxes
 * f(u, p); its change follows from the tangent matrix: f_u du + f_p dp balances too. The
 * incremental inductance L = sum(k v v) over the elements, v the drops' response to the currents,
 * is itself a minimum over v, so only the explicit change of the tangents k (and of the turns)
 * enters. */
#include <string.h>

#include "network_internal.h"

/* What the parameter does to one element at a fixed drop. */
typedef struct {
  double flux, density, coenergy; /* partial derivatives */
} explicit_change;

static ef_law_point law_point(const ef_network *n, size_t i, double *h, double *shift) {
  const ef_element *e = &n->element[i];
  size_t hint = n->hint[i];
  *h = n->drop[i] / e->length;
  *shift = n->offset[e->law] * e->remanence;
  return ef_law_at(&n->law[e->law], *h + *shift, &hint);
}

static explicit_change element_change(const ef_network *n, const ef_element_change *c) {
  const ef_element *e = &n->element[c->element];
  double u = n->drop[c->element];
  if (e->law == EF_NO_LAW) return (explicit_change){c->permeance * u, 0, c->permeance * u * u / 2};
  double h, shift;
  ef_law_point p = law_point(n, c->element, &h, &shift);
  const ef_law *law = &n->law[e->law];
  double b = EF_MU0 * h + p.polarisation;
  double stored = ef_law_coenergy(law, h + shift) - ef_law_coenergy(law, shift);
  double density = EF_MU0 * h * h / 2 + stored;
  explicit_change d;
  d.density = -(EF_MU0 + p.slope) * h * c->length / e->length + p.slope * h * c->stretch;
  d.flux = c->area * b + e->area * d.density + c->bypass * u;
  d.coenergy = c->area * e->length * density + c->length * e->area * (density - b * h) +
               c->bypass * u * u / 2 +
               c->stretch * e->area * e->length * (h * p.polarisation - stored);
  return d;
}

/* Full change of an element's tangent, given the full change of its drop. */
static double tangent_change(const ef_network *n, size_t i, const ef_element_change *c,
                             double drop_change) {
  const ef_element *e = &n->element[i];
  double length = c ? c->length : 0, area = c ? c->area : 0, stretch = c ? c->stretch : 0;
  if (e->law == EF_NO_LAW) return c ? c->permeance : 0;
  double h, shift;
  ef_law_point p = law_point(n, i, &h, &shift);
  double h_change = drop_change / e->length - h * length / e->length;
  double second = ef_law_curvature(&n->law[e->law], h + shift);
  double mu = EF_MU0 + p.slope;
  return area * mu / e->length - e->area * mu * length / (e->length * e->length) +
         (c ? c->bypass : 0) +
         e->area / e->length * (second * (h_change + h * stretch) + p.slope * stretch);
}

static const ef_element_change *change_of(const ef_direction *d, size_t element) {
  for (size_t i = 0; i < d->elements; i++)
    if (d->element[i].element == element) return &d->element[i];
  return NULL;
}

/* Change of the drops (into n->step) and of the chains' fluxes (into n->chain_flux). */
static void solve_change(ef_network *n, const ef_direction *d) {
  memset(n->chain_flux, 0, n->branches * sizeof *n->chain_flux);
  memset(n->step, 0, n->elements * sizeof *n->step); /* holds the explicit change of flux first */
  if (d->turns)
    for (size_t i = 0; i < d->couplings; i++)
      n->chain_flux[n->coupling[i].branch] += d->turns[i] * n->current[n->coupling[i].winding];
  for (size_t i = 0; i < d->elements; i++)
    n->step[d->element[i].element] += element_change(n, &d->element[i]).flux;
  for (size_t k = 0; k < n->branches; k++) {
    const ef_branch *b = &n->branch[k];
    for (size_t i = b->first; i < b->first + b->count; i++)
      n->chain_flux[k] += n->step[i] / n->tangent[i];
    n->chain_flux[k] *= n->chain_permeance[k];
  }
  ef_network_settle(n);
  for (size_t k = 0; k < n->branches; k++) {
    const ef_branch *b = &n->branch[k];
    for (size_t i = b->first; i < b->first + b->count; i++)
      n->step[i] = (n->chain_flux[k] - n->step[i]) / n->tangent[i];
  }
}

static void element_results(const ef_network *n, const ef_direction *d, ef_sensitivity *result) {
  for (size_t k = 0; k < n->branches; k++)
    for (size_t i = n->branch[k].first; i < n->branch[k].first + n->branch[k].count; i++) {
      if (result->flux) result->flux[i] = n->chain_flux[k];
      if (result->drop) result->drop[i] = n->step[i];
      if (!result->flux_density) continue;
      const ef_element *e = &n->element[i];
      const ef_element_change *c = change_of(d, i);
      double density = c ? element_change(n, c).density : 0;
      if (e->law != EF_NO_LAW) density += (n->tangent[i] - e->bypass) / e->area * n->step[i];
      result->flux_density[i] = density;
    }
}

static void inductance_results(const ef_network *n, const ef_direction *d, double *matrix) {
  size_t count = n->windings;
  memset(matrix, 0, count * count * sizeof *matrix);
  for (size_t i = 0; i < n->elements; i++) {
    double change = tangent_change(n, i, change_of(d, i), n->step[i]);
    for (size_t w = 0; w < count; w++)
      for (size_t v = 0; v < count; v++)
        matrix[w * count + v] +=
            change * n->response[w * n->elements + i] * n->response[v * n->elements + i];
  }
  if (!d->turns) return;
  for (size_t i = 0; i < d->couplings; i++) {
    const ef_turns *t = &n->coupling[i];
    size_t e = n->branch[t->branch].first;
    for (size_t v = 0; v < count; v++) {
      double flux = d->turns[i] * n->tangent[e] * n->response[v * n->elements + e];
      matrix[t->winding * count + v] += flux;
      matrix[v * count + t->winding] += flux;
    }
  }
}

static double coenergy_change(const ef_network *n, const ef_direction *d) {
  double sum = 0;
  for (size_t i = 0; i < d->elements; i++)
    sum += element_change(n, &d->element[i]).coenergy;
  if (d->turns)
    for (size_t i = 0; i < d->couplings; i++)
      sum += d->turns[i] * n->current[n->coupling[i].winding] *
             n->flux[n->branch[n->coupling[i].branch].first];
  return sum;
}

static double linkage_change(const ef_network *n, const ef_direction *d, size_t winding) {
  double sum = 0;
  for (size_t i = 0; i < n->couplings; i++) {
    const ef_turns *t = &n->coupling[i];
    if (t->winding != winding) continue;
    sum += t->turns * n->chain_flux[t->branch];
    if (d->turns) sum += d->turns[i] * n->flux[n->branch[t->branch].first];
  }
  return sum;
}

static ef_status check_direction(ef_context *context, const ef_network *n, const ef_direction *d) {
  for (size_t i = 0; i < d->elements; i++)
    if (d->element[i].element >= n->elements)
      return ef_fail(context, EF_BAD_VALUE, "element of a direction",
                     (double)d->element[i].element + 1, "the number of an element");
  if (d->turns && d->couplings != n->couplings)
    return ef_fail(context, EF_BAD_VALUE, "number of turns of a direction", (double)d->couplings,
                   "one for each coupling");
  return EF_OK;
}

ef_status ef_network_sensitivity(ef_context *context, ef_network *n, const ef_direction *direction,
                                 ef_sensitivity *result) {
  ef_status status = check_direction(context, n, direction);
  if (status == EF_OK) status = ef_network_inductance(context, n, 1, n->inductance);
  if (status != EF_OK) return status;
  solve_change(n, direction);
  double product = 0;
  for (size_t w = 0; w < n->windings; w++) {
    double change = linkage_change(n, direction, w);
    product += change * n->current[w];
    if (result->linkage) result->linkage[w] = change;
  }
  element_results(n, direction, result);
  result->coenergy = coenergy_change(n, direction);
  result->energy = product - result->coenergy;
  if (result->incremental) inductance_results(n, direction, result->incremental);
  return EF_OK;
}
