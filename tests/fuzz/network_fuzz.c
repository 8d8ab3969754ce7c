/* Networks from random bytes: whatever the spec, the answer is a solution that balances or a
 * refusal with a message, and nothing stays behind. The byte generator is splitmix64 on a counter
 * (public domain algorithm, from memory), so a run repeats. Usage: network_fuzz [runs [seed]] */
#include "counting.h"

#include <math.h>
#include <stdint.h>

enum { MOST = 12, RUNS = 20000 };

typedef struct {
  uint64_t counter;
  int tame; /* 1: no wild numbers and indices, so that the spec is likely to be accepted */
} bytes;

static uint64_t next_bits(bytes *b) {
  uint64_t z = b->counter += 0x9E3779B97F4A7C15u;
  z = (z ^ (z >> 30)) * 0xBF58476D1CE4E5B9u;
  z = (z ^ (z >> 27)) * 0x94D049BB133111EBu;
  return z ^ (z >> 31);
}

static size_t below(bytes *b, size_t limit) {
  return (size_t)(next_bits(b) % limit);
}

/* Mostly a sensible magnitude between 1e-9 and 1, now and then any bit pattern. */
static double number(bytes *b) {
  if (!b->tame && below(b, 60) == 0) {
    uint64_t bits = next_bits(b);
    double any;
    memcpy(&any, &bits, sizeof any);
    return any;
  }
  return pow(10, (double)(next_bits(b) >> 11) * 0x1p-53 * 9 - 9);
}

static size_t index_of(bytes *b, size_t count) {
  if (b->tame) return below(b, count);
  return below(b, 200) == 0 ? (size_t)next_bits(b) : below(b, count + (below(b, 40) == 0));
}

typedef struct {
  ef_branch branch[MOST];
  ef_element element[3 * MOST];
  ef_turns coupling[MOST];
  ef_network_spec spec;
} random_spec;

static void make_element(bytes *b, const ef_network_spec *spec, ef_element *e) {
  *e = (ef_element){.law = EF_NO_LAW, .permeance = number(b), .by_length = -number(b)};
  if (below(b, 2)) return;
  *e = (ef_element){.law = index_of(b, spec->laws),
                    .length = number(b),
                    .area = number(b),
                    .bypass = below(b, 2) ? 0 : number(b),
                    .remanence = (double)below(b, 3) - 1};
}

/* The first branches go round all nodes, so that a tame network hangs together. */
static void make_branch(bytes *b, const ef_network_spec *s, size_t k, ef_branch *branch) {
  size_t count = b->tame || below(b, 20) ? 1 + below(b, 3) : 0;
  *branch = (ef_branch){k % s->nodes, (k + 1) % s->nodes, s->elements, count};
  if (k >= s->nodes) branch->to = (branch->from + 1 + below(b, s->nodes - 1)) % s->nodes;
  if (b->tame || below(b, 10)) return;
  branch->from = index_of(b, s->nodes);
  branch->to = index_of(b, s->nodes);
  if (below(b, 5) == 0) branch->count = (size_t)next_bits(b);
  if (below(b, 5) == 0) branch->first = (size_t)next_bits(b);
}

static void make_spec(bytes *b, random_spec *r) {
  ef_network_spec *s = &r->spec;
  memset(r, 0, sizeof *r);
  b->tame = below(b, 2) == 0;
  s->nodes = 2 + below(b, 6);
  s->branches = b->tame ? s->nodes + below(b, MOST + 1 - s->nodes) : below(b, MOST + 1);
  s->windings = below(b, 4);
  s->laws = below(b, 3) + 1;
  s->couplings = s->windings && s->branches ? below(b, MOST + 1) : 0;
  for (size_t k = 0; k < s->branches; k++) {
    make_branch(b, s, k, &r->branch[k]);
    size_t count = r->branch[k].count <= 3 ? r->branch[k].count : 1;
    for (size_t i = 0; i < count; i++)
      make_element(b, s, &r->element[s->elements++]);
  }
  for (size_t i = 0; i < s->couplings; i++)
    r->coupling[i] =
        (ef_turns){index_of(b, s->windings), index_of(b, s->branches), number(b) * 1e3};
  s->branch = r->branch;
  s->element = r->element;
  s->coupling = r->coupling;
}

typedef struct {
  size_t solved, refused, unsolved, wrong;
} tally;

/* 1 when energies and linkages of a solution fit together. Without remanence only, and for tame
 * networks: 300 decades of magnitudes leave no digits to compare. */
static int consistent(ef_context *context, ef_network *n, const ef_network_spec *spec,
                      const double *current) {
  double energy, coenergy, product = 0, size = 0, matrix[16];
  if (ef_network_energy(context, n, &energy, &coenergy) != EF_OK) return 0;
  for (size_t w = 0; w < spec->windings; w++) {
    double term = ef_network_linkage(n, w) * current[w];
    product += term;
    size += fabs(term);
  }
  if (spec->windings && ef_network_inductance(context, n, 1, matrix) != EF_OK) return 0;
  return !isfinite(size) || fabs(energy + coenergy - product) <= 1e-6 * size + 1e-300;
}

static void solve(ef_context *context, bytes *b, const random_spec *r, ef_network *network,
                  tally *t) {
  ef_law law[3];
  double current[4], coercive[3] = {0, 0, 0};
  for (size_t i = 0; i < 3; i++) {
    ef_law_kind kind = i == 0 ? EF_LAW_LINEAR : i == 1 ? EF_LAW_FROELICH : EF_LAW_LANGEVIN;
    if (ef_law_closed(context, kind, 10 + 3000 * (double)i, 0.4, &law[i]) != EF_OK) t->wrong++;
  }
  for (size_t w = 0; w < r->spec.windings; w++)
    current[w] = (below(b, 2) ? 1 : -1) * number(b) * 1e3;
  int remanent = below(b, 3) == 0;
  for (size_t i = 0; remanent && i < 3; i++)
    coercive[i] = number(b) * 100;
  const ef_network_input input = {law, remanent ? coercive : NULL, current, 0};
  ef_network_report report;
  ef_status status = ef_network_solve(context, network, &input, &report);
  ef_network_solution solution;
  if (status == EF_OK) {
    t->solved++;
    if (b->tame && !remanent && !consistent(context, network, &r->spec, current)) t->wrong++;
  } else {
    t->unsolved++;
    /* A failed solve never gives a number. */
    if (!context->message[0] || ef_network_get(context, network, &solution) != EF_BAD_VALUE)
      t->wrong++;
  }
}

int main(int count, char **argument) {
  size_t runs = count > 1 ? (size_t)strtoul(argument[1], NULL, 10) : RUNS;
  bytes b = {count > 2 ? strtoull(argument[2], NULL, 10) : 1, 0};
  tally t = {0, 0, 0, 0};
  for (size_t i = 0; i < runs; i++) {
    random_spec r;
    ef_context context;
    counting c;
    ef_network *network = NULL;
    make_spec(&b, &r);
    /* Now and then memory runs out as well. */
    counting_context(&context, &c, below(&b, 10) ? 0 : 1 + below(&b, 10));
    ef_status status = ef_network_create(&context, &r.spec, &network);
    if (status == EF_OK) {
      solve(&context, &b, &r, network, &t);
      ef_network_release(&context, network);
    } else {
      t.refused++;
      if (!context.message[0]) t.wrong++;
    }
    if (c.live || c.wrong) t.wrong++;
  }
  printf("%zu runs: %zu solved, %zu refused, %zu not solved, %zu wrong\n", runs, t.solved,
         t.refused, t.unsolved, t.wrong);
  return t.wrong > 0;
}
