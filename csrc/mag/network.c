/* Building a network: checks, node ordering, memory. */
#include <math.h>
#include <stdio.h>
#include <string.h>

#include "network_internal.h"

static ef_status bad(ef_context *context, const char *what, size_t index, const char *field,
                     double value, const char *allowed) {
  char name[EF_FIELD_SIZE];
  snprintf(name, sizeof name, "%s %zu, %s", what, index + 1, field);
  return ef_fail(context, EF_BAD_VALUE, name, value, allowed);
}

static int positive(double x) {
  return isfinite(x) && x > 0;
}

static ef_status check_element(ef_context *context, const ef_network_spec *spec, size_t i) {
  static const char above[] = "a finite number above 0";
  const ef_element *e = &spec->element[i];
  if (e->law == EF_NO_LAW) {
    if (!positive(e->permeance))
      return bad(context, "element", i, "permeance", e->permeance, above);
    return isfinite(e->by_length) ? EF_OK
                                  : bad(context, "element", i, "derivative of the permeance",
                                        e->by_length, "a finite number");
  }
  if (e->law >= spec->laws)
    return bad(context, "element", i, "law", (double)e->law + 1, "the number of a given law");
  if (!positive(e->length)) return bad(context, "element", i, "length", e->length, above);
  if (!positive(e->area)) return bad(context, "element", i, "area", e->area, above);
  if (!isfinite(e->bypass) || e->bypass < 0)
    return bad(context, "element", i, "bypass", e->bypass, "a finite number, at least 0");
  if (!(fabs(e->remanence) <= 1))
    return bad(context, "element", i, "remanence", e->remanence, "from -1 to 1");
  return EF_OK;
}

static ef_status check_branches(ef_context *context, const ef_network_spec *spec) {
  size_t next = 0;
  for (size_t k = 0; k < spec->branches; k++) {
    const ef_branch *b = &spec->branch[k];
    if (b->from >= spec->nodes || b->to >= spec->nodes)
      return bad(context, "branch", k, "node",
                 (double)(b->from >= spec->nodes ? b->from : b->to) + 1, "the number of a node");
    if (b->from == b->to)
      return bad(context, "branch", k, "end node", (double)b->to + 1,
                 "another node than its start");
    if (b->first != next || b->count == 0 || b->count > spec->elements - next)
      return bad(context, "branch", k, "first element", (double)b->first + 1,
                 "the element after those of the branch before, with at least one element");
    next += b->count;
  }
  if (next != spec->elements)
    return ef_fail(context, EF_BAD_VALUE, "number of elements", (double)spec->elements,
                   "each element in one branch");
  return EF_OK;
}

static ef_status check_spec(ef_context *context, const ef_network_spec *spec) {
  if (spec->nodes < 2)
    return ef_fail(context, EF_BAD_VALUE, "number of nodes", (double)spec->nodes, "at least 2");
  for (size_t i = 0; i < spec->elements; i++) {
    ef_status status = check_element(context, spec, i);
    if (status != EF_OK) return status;
  }
  for (size_t i = 0; i < spec->couplings; i++) {
    const ef_turns *t = &spec->coupling[i];
    if (t->winding >= spec->windings || t->branch >= spec->branches)
      return bad(context, "coupling", i, "winding or branch", (double)t->winding + 1,
                 "the number of a winding and of a branch");
    if (!isfinite(t->turns))
      return bad(context, "coupling", i, "turns", t->turns, "a finite number");
  }
  return check_branches(context, spec);
}

#define NOWHERE ((size_t)-1)

/* The other end of a branch at `node`, or NOWHERE when the branch does not touch it. */
static size_t other_end(const ef_branch *b, size_t node) {
  if (b->from == node) return b->to;
  return b->to == node ? b->from : NOWHERE;
}

static void count_branches(const ef_network *n, size_t *degree) {
  memset(degree, 0, n->nodes * sizeof *degree);
  for (size_t k = 0; k < n->branches; k++) {
    degree[n->branch[k].from]++;
    degree[n->branch[k].to]++;
  }
}

/* The node with the most branches is the reference: it leaves the equations, and with it most of
 * the coupling (the surroundings of a ladder touch every rung). The others are numbered in the
 * reverse order of a breadth-first walk (Cuthill and McKee 1969, reversed), which keeps ladders and
 * rings in a narrow band. */
static void number_nodes(ef_network *n, const size_t *degree, size_t *queue) {
  size_t ground = 0, tail = 0, placed = 0;
  const size_t unvisited = NOWHERE;
  for (size_t i = 1; i < n->nodes; i++)
    if (degree[i] > degree[ground]) ground = i;
  for (size_t i = 0; i < n->nodes; i++)
    n->place[i] = unvisited;
  n->place[ground] = n->unknowns;
  while (placed < n->unknowns) {
    /* Without the reference node the rest may fall apart: start again in each part. */
    size_t start = NOWHERE;
    for (size_t i = 0; i < n->nodes; i++)
      if (n->place[i] == unvisited && (start == NOWHERE || degree[i] < degree[start])) start = i;
    size_t head = tail;
    queue[tail++] = start;
    n->place[start] = placed++;
    for (; head < tail; head++)
      for (size_t k = 0; k < n->branches; k++) {
        size_t other = other_end(&n->branch[k], queue[head]);
        if (other == NOWHERE || n->place[other] != unvisited) continue;
        n->place[other] = placed++;
        queue[tail++] = other;
      }
  }
  for (size_t i = 0; i < n->nodes; i++)
    if (i != ground) n->place[i] = n->unknowns - 1 - n->place[i];
}

/* A node that no path joins to node 0, or NOWHERE: it would make the equations singular. */
static size_t find_lost_node(const ef_network *n, size_t *queue, size_t *seen) {
  size_t tail = 1;
  memset(seen, 0, n->nodes * sizeof *seen);
  queue[0] = 0;
  seen[0] = 1;
  for (size_t head = 0; head < tail; head++)
    for (size_t k = 0; k < n->branches; k++) {
      size_t other = other_end(&n->branch[k], queue[head]);
      if (other == NOWHERE || seen[other]) continue;
      seen[other] = 1;
      queue[tail++] = other;
    }
  for (size_t i = 0; i < n->nodes; i++)
    if (!seen[i]) return i;
  return NOWHERE;
}

static ef_status order_nodes(ef_context *context, ef_network *n) {
  size_t *work = ef_allocate(context, 2 * n->nodes, sizeof *work);
  if (!work) return EF_NO_MEMORY;
  size_t lost = find_lost_node(n, work, work + n->nodes);
  count_branches(n, work + n->nodes);
  number_nodes(n, work + n->nodes, work);
  ef_release(context, work, 2 * n->nodes, sizeof *work);
  if (lost == NOWHERE) return EF_OK;
  return bad(context, "node", lost, "number of paths to the first node", 0, "at least 1");
}

static size_t band_width(const ef_network *n) {
  size_t width = 0;
  for (size_t k = 0; k < n->branches; k++) {
    size_t a = n->place[n->branch[k].from], b = n->place[n->branch[k].to];
    if (a == n->unknowns || b == n->unknowns) continue;
    size_t apart = a > b ? a - b : b - a;
    if (apart > width) width = apart;
  }
  return width;
}

/* Where each branch couples its nodes in the band, and which branches are bent or straight. */
static void sort_branches(ef_network *n) {
  size_t stride = n->matrix.width + 1;
  for (size_t k = 0; k < n->branches; k++) {
    const ef_branch *b = &n->branch[k];
    size_t a = n->place[b->from], c = n->place[b->to];
    size_t row = a > c ? a : c, column = a > c ? c : a;
    n->corner[k] = row == n->unknowns ? n->unknowns * stride : row - column + column * stride;
    if (b->count == 1 && n->element[b->first].law == EF_NO_LAW)
      n->straight[n->straights++] = k;
    else
      n->bent[n->bents++] = k;
  }
}

/* Hands out consecutive parts of one block. */
static double *take(double **next, size_t count) {
  double *here = *next;
  *next += count;
  return here;
}

static ef_status allocate_numbers(ef_context *context, ef_network *n) {
  n->matrix.size = n->unknowns;
  n->matrix.width = band_width(n);
  size_t band = ef_network_band_size(n);
  n->number_count = n->laws + n->windings + 3 * n->branches + 8 * n->elements + 3 * n->nodes +
                    n->unknowns + 1 + n->windings * (n->elements + n->windings) + 2 * band;
  n->numbers = ef_allocate(context, n->number_count, sizeof(double));
  if (!n->numbers) return EF_NO_MEMORY;
  double *next = n->numbers;
  n->offset = take(&next, n->laws);
  n->current = take(&next, n->windings);
  n->source = take(&next, n->branches);
  n->chain_permeance = take(&next, n->branches);
  n->chain_flux = take(&next, n->branches);
  n->drop = take(&next, n->elements);
  n->flux = take(&next, n->elements);
  n->density = take(&next, n->elements);
  n->field = take(&next, n->elements);
  n->tangent = take(&next, n->elements);
  n->yield = take(&next, n->elements);
  n->step = take(&next, n->elements);
  n->inverse_length = take(&next, n->elements);
  n->potential = take(&next, n->nodes);
  n->balance = take(&next, n->nodes);
  n->magnitude = take(&next, n->nodes);
  n->unknown = take(&next, n->unknowns + 1);
  n->response = take(&next, n->windings * n->elements);
  n->inductance = take(&next, n->windings * n->windings);
  n->matrix.band = take(&next, band);
  n->base = take(&next, band);
  return EF_OK;
}

static ef_status allocate_lists(ef_context *context, ef_network *n, const ef_network_spec *spec) {
  n->branch = ef_allocate(context, n->branches, sizeof *n->branch);
  n->element = ef_allocate(context, n->elements, sizeof *n->element);
  n->coupling = ef_allocate(context, n->couplings, sizeof *n->coupling);
  n->place = ef_allocate(context, n->nodes, sizeof *n->place);
  n->hint = ef_allocate(context, n->elements, sizeof *n->hint);
  n->corner = ef_allocate(context, 3 * n->branches, sizeof *n->corner);
  n->law = ef_allocate(context, n->laws, sizeof *n->law);
  if (!n->branch || !n->element || !n->coupling || !n->place || !n->hint || !n->corner || !n->law)
    return EF_NO_MEMORY;
  n->bent = n->corner + n->branches;
  n->straight = n->bent + n->branches;
  memcpy(n->branch, spec->branch, n->branches * sizeof *n->branch);
  memcpy(n->element, spec->element, n->elements * sizeof *n->element);
  if (n->couplings) memcpy(n->coupling, spec->coupling, n->couplings * sizeof *n->coupling);
  return EF_OK;
}

ef_status ef_network_create(ef_context *context, const ef_network_spec *spec,
                            ef_network **network) {
  ef_status status = check_spec(context, spec);
  if (status != EF_OK) return status;
  ef_network *n = ef_allocate(context, 1, sizeof *n);
  if (!n) return EF_NO_MEMORY;
  *n = (ef_network){.nodes = spec->nodes,
                    .branches = spec->branches,
                    .elements = spec->elements,
                    .windings = spec->windings,
                    .couplings = spec->couplings,
                    .laws = spec->laws,
                    .unknowns = spec->nodes - 1};
  status = allocate_lists(context, n, spec);
  if (status == EF_OK) status = order_nodes(context, n);
  if (status == EF_OK) status = allocate_numbers(context, n);
  if (status != EF_OK) {
    ef_network_release(context, n);
    return status;
  }
  sort_branches(n);
  ef_network_prepare(n);
  *network = n;
  return EF_OK;
}

void ef_network_release(ef_context *context, ef_network *n) {
  if (!n) return;
  ef_release(context, n->branch, n->branches, sizeof *n->branch);
  ef_release(context, n->element, n->elements, sizeof *n->element);
  ef_release(context, n->coupling, n->couplings, sizeof *n->coupling);
  ef_release(context, n->place, n->nodes, sizeof *n->place);
  ef_release(context, n->hint, n->elements, sizeof *n->hint);
  ef_release(context, n->corner, 3 * n->branches, sizeof *n->corner);
  ef_release(context, n->law, n->laws, sizeof *n->law);
  ef_release(context, n->numbers, n->number_count, sizeof(double));
  ef_release(context, n, 1, sizeof *n);
}
