/* The network's inside, shared by network*.c only. */
#ifndef EF_MAG_NETWORK_INTERNAL_H
#define EF_MAG_NETWORK_INTERNAL_H

#include "../num/band.h"
#include "network.h"

/* What the tangent matrix in `matrix` stands for. */
typedef enum { EF_FACTOR_NONE, EF_FACTOR_INCREMENTAL, EF_FACTOR_APPARENT } ef_factor_kind;

struct ef_network {
  size_t nodes, branches, elements, windings, couplings, laws, unknowns;
  ef_branch *branch;
  ef_element *element;
  ef_turns *coupling;
  size_t *place;  /* nodes: index in the equations; the reference node has the spare place behind
                     them, where writing does no harm and reading gives 0 */
  size_t *corner; /* branches: entry of the band that couples its two nodes, or the spare one */
  size_t *bent, *straight; /* branches with iron; those of one linear element, which never change */
  size_t bents, straights;
  size_t *hint;    /* elements: piece of the curve last used */
  ef_law *law;     /* laws of the last solve; their arrays stay with the caller */
  double *offset;  /* laws: coercive field of the last solve */
  double *current; /* windings */
  double *source, *chain_permeance, *chain_flux;           /* branches */
  double *drop, *flux, *density, *field, *tangent, *yield; /* elements */
  double *inverse_length;                                  /* elements, 1/m */
  double *step;                                            /* elements: change of drop */
  double *potential, *balance, *magnitude;                 /* nodes */
  double *unknown;                                         /* unknowns and the spare place */
  double *base;       /* the straight branches' part of the matrix */
  double *response;   /* windings x elements: d drop / d current */
  double *inductance; /* windings x windings, scratch */
  ef_band matrix;
  ef_factor_kind factored;
  int solved;
  int magnetised;  /* whether a coercive field was at work in the last solve */
  double *numbers; /* the block behind all arrays of doubles */
  size_t number_count;
};

/* Flux, flux density and tangent of one element at its present drop. */
void ef_element_evaluate(ef_network *n, size_t element);

/* Flux / drop at the operating point; where the drop vanishes the tangent is its limit. With
 * remanence the drop is taken from the point where the iron is at rest (H + Hc). */
double ef_element_secant(const ef_network *n, size_t element);

/* Coenergy of one element at its present drop, J. */
double ef_element_coenergy(const ef_network *n, size_t element);

/* What never changes: the lengths' inverses, the straight branches and their part of the matrix. */
void ef_network_prepare(ef_network *n);

/* Condenses chains: permeance of each bent branch from the elements' tangents, whose inverses are
 * left in n->yield. */
void ef_network_condense(ef_network *n, const double *tangent);

/* Fills n->matrix from the branches' permeances and factorises it. */
ef_status ef_network_factor(ef_context *context, ef_network *n, ef_factor_kind kind);

/* Brings the branches' fluxes in n->chain_flux, driven by some change, into balance at the nodes
 * with the factor at hand. The second pass refines: in a stiff loop the flux is a small difference
 * of large terms. */
void ef_network_settle(ef_network *n);

/* Entries of the band and the spare one behind them. */
static inline size_t ef_network_band_size(const ef_network *n) {
  return (n->matrix.width + 1) * (n->unknowns + 1);
}

/* Right-hand side n->unknown: cleared, filled with the flux leaving along each branch (positive
 * from
 * -> to), then solved in place with the factor at hand. */
void ef_network_clear_rhs(ef_network *n);
void ef_network_solve_rhs(ef_network *n);

static inline void ef_network_add_rhs(ef_network *n, size_t branch, double flux) {
  n->unknown[n->place[n->branch[branch].from]] -= flux;
  n->unknown[n->place[n->branch[branch].to]] += flux;
}

/* Difference of potential from - to of a branch in the solved n->unknown. */
static inline double ef_network_unknown_drop(const ef_network *n, size_t branch) {
  return n->unknown[n->place[n->branch[branch].from]] - n->unknown[n->place[n->branch[branch].to]];
}

#endif
