/* The nonlinear reluctance network: any topology of iron limbs, gaps, leakage paths and windings.
 *
 * A branch joins two nodes and is a chain of elements that carry the same flux; windings act on
 * branches. An element is a piece of iron (with an air path beside it) or a linear permeance. For
 * each element flux is a rising function of the drop u of magnetic potential, so the coenergy
 * sum(integral of flux du) is strictly convex in the potentials and has one minimum: there the
 * fluxes balance at every node. Newton's method with a line search finds it from any start.
 *
 * Sign: flux is positive from a branch's `from` to its `to`; turns are positive when positive
 * current drives flux that way. */
#ifndef EF_MAG_NETWORK_H
#define EF_MAG_NETWORK_H

#include "law.h"

#define EF_NO_LAW ((size_t)-1)

typedef struct {
  size_t law;       /* index into the laws given to ef_network_solve; EF_NO_LAW: linear */
  double length;    /* m, iron only */
  double area;      /* m2, iron only */
  double bypass;    /* H, permeance of the air beside the iron from end to end, >= 0 */
  double remanence; /* -1..1, share and sign of the law's coercive field; iron only */
  double permeance; /* H, linear element only */
  double by_length; /* H/m, derivative of `permeance` to a gap's length (for its force), or 0 */
} ef_element;

typedef struct {
  size_t from, to;     /* nodes */
  size_t first, count; /* its elements, contiguous; every element belongs to one branch */
} ef_branch;

typedef struct {
  size_t winding, branch;
  double turns; /* any finite number: a share of a distributed winding need not be whole */
} ef_turns;

/* What a network is made of. The arrays are copied. */
typedef struct {
  size_t nodes, branches, elements, windings, couplings, laws;
  const ef_branch *branch;
  const ef_element *element;
  const ef_turns *coupling;
} ef_network_spec;

typedef struct ef_network ef_network;

/* Checks, orders and allocates: nothing is allocated after this.
 * EF_BAD_VALUE names the element, branch or winding and the field: lengths, areas and permeances
 * must be finite and positive, indices in range, every node connected, each element in one branch.
 */
ef_status ef_network_create(ef_context *context, const ef_network_spec *spec, ef_network **network);
void ef_network_release(ef_context *context, ef_network *network);

typedef struct {
  const ef_law *law;            /* one per law of the spec */
  const double *coercive_field; /* A/m, one per law, or NULL for none: remanence as a source */
  const double *current;        /* A, one per winding */
  int warm;                     /* 1: start from this network's last solution */
} ef_network_input;

typedef struct {
  int iterations;  /* Newton steps */
  double residual; /* largest imbalance at a node / sum of the flux magnitudes there */
} ef_network_report;

/* Solves. Converged when the imbalance at every node (and along every chain) is below
 * context->tolerance times the sum of the flux magnitudes there, or below the rounding floor of 16
 * eps times the largest such sum in the network (a dead end carries nothing but rounding), or times
 * the largest flux that a coercive field alone would drive through an element.
 * EF_NOT_CONVERGED after context->max_iterations, EF_CANCELLED by context->progress (called before
 * each step), EF_BAD_VALUE for a current that is not finite. After a failure the network holds no
 * solution and the questions below answer EF_BAD_VALUE. */
ef_status ef_network_solve(ef_context *context, ef_network *network, const ef_network_input *input,
                           ef_network_report *report);

/* Solution, one entry per element: drop (A), flux through iron and bypass (Wb), flux density in the
 * iron (T, 0 for a linear element), field strength in the iron (A/m, 0 for a linear element). */
typedef struct {
  const double *drop, *flux, *flux_density, *field;
  const double *potential; /* A, one per node */
  size_t nodes;
} ef_network_solution;
ef_status ef_network_get(ef_context *context, const ef_network *network,
                         ef_network_solution *solution);

/* Facts of a run of iron elements `first` to `last`, a limb. */
typedef struct {
  double largest; /* T, the flux density of the largest magnitude, with its sign */
  size_t where;   /* its element; of equal ones the first */
  double mean;    /* T, mean weighted by length */
  double drop;    /* A, sum of the drops */
} ef_span;
ef_status ef_network_span(ef_context *context, const ef_network *network, size_t first, size_t last,
                          ef_span *span);

/* The couplings as the network holds them; returns their number. coupling may be NULL. */
size_t ef_network_couplings(const ef_network *network, const ef_turns **coupling);

/* Flux linkage of a winding, Wb. The network must hold a solution. */
double ef_network_linkage(const ef_network *network, size_t winding);

/* Inductance matrix, windings x windings, row-major, H: incremental (d linkage / d current), or
 * apparent (permeabilities frozen at the operating point; with one winding and no remanence this is
 * linkage / current, and its limit at 0 A). */
ef_status ef_network_inductance(ef_context *context, ef_network *network, int incremental,
                                double *matrix);

/* Energy and coenergy, J. Without remanence energy + coenergy = sum of linkage times current. */
ef_status ef_network_energy(ef_context *context, const ef_network *network, double *energy,
                            double *coenergy);

/* Attractive force of the faces of a gap element, N: -u^2/2 dP/dlength. */
double ef_network_force(const ef_network *network, size_t element);

/* A change of the network's parameters; derivatives are taken along it. */
typedef struct {
  size_t element;
  double length, area, bypass, permeance; /* derivative of each field along the parameter */
  double stretch; /* of the field axis: J(H) becomes J((1 + stretch) H), which multiplies the
                     initial permeability and keeps the saturation */
} ef_element_change;

typedef struct {
  size_t elements, couplings;
  const ef_element_change *element;
  const double *turns; /* NULL, or change of turns for each coupling of the spec */
} ef_direction;

/* Derivatives of the results along a direction, from the factorisation of the solution. Arrays are
 * the caller's; any may be NULL. */
typedef struct {
  double *linkage;                    /* windings */
  double *incremental;                /* windings x windings */
  double *flux, *flux_density, *drop; /* elements */
  double energy, coenergy;
} ef_sensitivity;
ef_status ef_network_sensitivity(ef_context *context, ef_network *network,
                                 const ef_direction *direction, ef_sensitivity *result);

#endif
