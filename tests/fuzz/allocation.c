/* Every allocation refused once: each builder must answer EF_NO_MEMORY, keep nothing, and say so;
 * the solution itself must not allocate. Prints one line per builder; exit code 1 when anything is
 * off. */
#include "counting.h"

#include <math.h>

static int failures;

static void expect(int held, const char *what, const char *condition, size_t n) {
  if (held) return;
  failures++;
  printf("%s: not %s (allocation %zu refused)\n", what, condition, n);
}

static const double field[] = {0, 10, 20, 40, 100, 250, 1200};
static const double other_field[] = {0, 15, 30, 90, 200, 1000};
static const double cold[] = {0, 0.03, 0.06, 0.15, 0.33, 0.42, 0.49};
static const double hot[] = {0, 0.07, 0.14, 0.27, 0.31, 0.37};

static ef_status build_material(ef_context *context, ef_material **material) {
  const ef_material_curve curve[] = {
      {.temperature = 25, .count = 7, .h = field, .b = cold},
      {.temperature = 60, .count = 7, .h = field, .b = cold},
      {.temperature = 100, .saturation = 0.4, .count = 6, .h = other_field, .b = hot},
  };
  return ef_material_create(context, EF_LAW_CURVE, 3, curve, material);
}

/* Two windows: iron, a gap, leakage, two windings. */
static ef_status build_network(ef_context *context, ef_network **network) {
  const ef_element element[] = {
      {.law = 0, .length = 0.03, .area = 2e-4, .bypass = 1e-9, .remanence = 1},
      {.law = EF_NO_LAW, .permeance = 2e-7, .by_length = -1e-4},
      {.law = 0, .length = 0.07, .area = 1e-4},
      {.law = 0, .length = 0.07, .area = 1e-4},
      {.law = EF_NO_LAW, .permeance = 3e-8},
  };
  const ef_branch branch[] = {{0, 1, 0, 2}, {1, 2, 2, 1}, {2, 0, 3, 1}, {1, 0, 4, 1}};
  const ef_turns coupling[] = {{0, 0, 20}, {1, 2, -5}};
  const ef_network_spec spec = {.nodes = 3,
                                .branches = 4,
                                .elements = 5,
                                .windings = 2,
                                .couplings = 2,
                                .laws = 1,
                                .branch = branch,
                                .element = element,
                                .coupling = coupling};
  return ef_network_create(context, &spec, network);
}

static ef_status try_material(ef_context *context) {
  ef_material *material = NULL;
  ef_status status = build_material(context, &material);
  if (status == EF_OK) ef_material_release(context, material);
  return status;
}

static ef_status try_network(ef_context *context) {
  ef_network *network = NULL;
  ef_status status = build_network(context, &network);
  if (status == EF_OK) ef_network_release(context, network);
  return status;
}

static ef_status try_ring(ef_context *context) {
  const ef_ring_geometry ring = {0.038, 0.026, 0.008, 0.0045, 1};
  ef_ring_ladder ladder;
  ef_status status = ef_ring_ladder_build(context, &ring, 8, &ladder);
  if (status == EF_OK) ef_ring_ladder_release(context, &ladder);
  return status;
}

static void refuse_each(const char *what, ef_status (*attempt)(ef_context *)) {
  ef_context context;
  counting c;
  counting_context(&context, &c, 0);
  expect(attempt(&context) == EF_OK, what, "built when nothing is refused", 0);
  expect(c.live == 0 && c.wrong == 0, what, "given back whole", 0);
  size_t total = c.calls;
  expect(total > 0, what, "allocating through the context", 0);
  for (size_t n = 1; n <= total; n++) {
    counting_context(&context, &c, n);
    expect(attempt(&context) == EF_NO_MEMORY, what, "answered with EF_NO_MEMORY", n);
    expect(c.live == 0, what, "without a leak", n);
    expect(c.wrong == 0, what, "given back with its size", n);
    expect(strcmp(context.field, "memory") == 0 && context.message[0], what, "explained", n);
  }
  printf("%s: %zu allocations refused\n", what, total);
}

/* Solves and asks everything; returns the number of allocations that took. */
static size_t solve_all(ef_context *context, const counting *c, ef_network *network,
                        const ef_law *law) {
  size_t before = c->calls;
  for (int step = 0; step < 50; step++) {
    const double current[] = {step * step * 0.2, -0.5 * step}, coercive[] = {step % 3 * 5.0};
    const ef_network_input input = {law, coercive, current, step % 2};
    ef_network_report report;
    expect(ef_network_solve(context, network, &input, &report) == EF_OK, "solve", "solved", 0);
    double matrix[4], linkage[2], incremental[4], energy, coenergy;
    const ef_element_change change = {.element = 0, .area = 1e-6, .stretch = 0.1};
    const double turns[] = {1, 0};
    const ef_direction direction = {1, 2, &change, turns};
    ef_sensitivity result = {.linkage = linkage, .incremental = incremental};
    ef_network_solution solution;
    ef_span span;
    ef_status status = ef_network_inductance(context, network, 0, matrix);
    if (status == EF_OK) status = ef_network_inductance(context, network, 1, matrix);
    if (status == EF_OK) status = ef_network_energy(context, network, &energy, &coenergy);
    if (status == EF_OK) status = ef_network_get(context, network, &solution);
    if (status == EF_OK) status = ef_network_span(context, network, 2, 3, &span);
    if (status == EF_OK) status = ef_network_sensitivity(context, network, &direction, &result);
    expect(status == EF_OK, "solve", "answered", 0);
    expect(isfinite(linkage[0]) && isfinite(incremental[3]) && isfinite(energy), "solve", "finite",
           0);
  }
  return c->calls - before;
}

static void solve_without_memory(void) {
  ef_context context;
  counting c;
  counting_context(&context, &c, 0);
  ef_material *material = NULL;
  ef_network *network = NULL;
  if (build_material(&context, &material) != EF_OK || build_network(&context, &network) != EF_OK) {
    expect(0, "solve", "built", 0);
    return;
  }
  double storage[256];
  ef_law law;
  expect(ef_material_law_size(material) <= 256, "solve", "small enough a law", 0);
  size_t before = c.calls;
  expect(ef_material_law(&context, material, 70, storage, &law) == EF_OK, "law", "found", 0);
  size_t for_law = c.calls - before, for_solving = solve_all(&context, &c, network, &law);
  expect(for_solving == 0, "solve", "without allocations", 0);
  ef_network_release(&context, network);
  ef_material_release(&context, material);
  expect(c.live == 0 && c.wrong == 0, "solve", "given back whole", 0);
  printf("law: %zu allocations\nsolve: %zu allocations in 50 solutions\n", for_law, for_solving);
}

int main(void) {
  refuse_each("material", try_material);
  refuse_each("network", try_network);
  refuse_each("ring", try_ring);
  solve_without_memory();
  return failures > 0;
}
