/* Newton's method on the coenergy. The unknowns are the nodes' potentials; the drops inside a chain
 * follow by condensation: with the tangent k = d flux/d u of each element, a chain with drop U and
 * fluxes f carries the flux K (U + sum((f - k u)/k)) + ..., K = 1/sum(1/k), so it acts as one
 * branch. */
#include <float.h>
#include <math.h>
#include <string.h>

#include "network_internal.h"

static void evaluate(ef_network *n) {
  for (size_t m = 0; m < n->bents; m++) {
    const ef_branch *b = &n->branch[n->bent[m]];
    for (size_t i = b->first; i < b->first + b->count; i++)
      ef_element_evaluate(n, i);
  }
  for (size_t m = 0; m < n->straights; m++) {
    size_t i = n->branch[n->straight[m]].first;
    n->flux[i] = n->tangent[i] * n->drop[i];
  }
}

static double potential_drop(const ef_network *n, size_t k) {
  return n->potential[n->branch[k].from] - n->potential[n->branch[k].to] + n->source[k];
}

/* Flux that each branch would carry with the nodes' potentials as they are. With `fit` the drops of
 * a chain are brought to its branch's drop. */
static void drive_branches(ef_network *n, int fit) {
  for (size_t m = 0; m < n->bents; m++) {
    size_t k = n->bent[m];
    const ef_branch *b = &n->branch[k];
    double sum = 0, excess = 0;
    for (size_t i = b->first; i < b->first + b->count; i++) {
      sum += n->flux[i] * n->yield[i];
      excess += n->drop[i];
    }
    double lacking = fit ? potential_drop(n, k) - excess : 0;
    n->chain_flux[k] = n->chain_permeance[k] * (lacking + sum);
    ef_network_add_rhs(n, k, n->chain_flux[k]);
  }
  for (size_t m = 0; m < n->straights; m++) {
    size_t k = n->straight[m], i = n->branch[k].first;
    double lacking = fit ? potential_drop(n, k) - n->drop[i] : 0;
    n->chain_flux[k] = n->flux[i] + n->chain_permeance[k] * lacking;
    ef_network_add_rhs(n, k, n->chain_flux[k]);
  }
}

/* One Newton step from the present drops: n->step per element; the change of the potentials is left
 * in n->unknown. With `fit` a start that does not fit the sources is mended by the first full step.
 * Later steps only add changes: a stiff branch would turn the rounding of its two large potentials
 * into flux again and again. */
static ef_status newton_step(ef_context *context, ef_network *n, int fit) {
  ef_network_condense(n, n->tangent);
  ef_network_clear_rhs(n);
  drive_branches(n, fit);
  ef_status status = ef_network_factor(context, n, EF_FACTOR_INCREMENTAL);
  if (status != EF_OK) return status;
  ef_network_solve_rhs(n);
  for (size_t k = 0; k < n->branches; k++) {
    const ef_branch *b = &n->branch[k];
    double flux = n->chain_flux[k] + n->chain_permeance[k] * ef_network_unknown_drop(n, k);
    for (size_t i = b->first; i < b->first + b->count; i++)
      n->step[i] = (flux - n->flux[i]) * n->yield[i];
  }
  return EF_OK;
}

static void move(ef_network *n, double share) {
  for (size_t i = 0; i < n->elements; i++)
    n->drop[i] += share * n->step[i];
  for (size_t i = 0; i < n->nodes; i++)
    n->potential[i] += share * n->unknown[n->place[i]];
  evaluate(n);
}

/* Derivative of the coenergy along the step, and the size of its terms. */
static double slope_along(const ef_network *n, double *size) {
  double sum = 0, magnitude = 0;
  for (size_t i = 0; i < n->elements; i++) {
    double term = n->flux[i] * n->step[i];
    sum += term;
    magnitude += fabs(term);
  }
  *size = magnitude;
  return sum;
}

static double total_coenergy(const ef_network *n) {
  double sum = 0;
  for (size_t i = 0; i < n->elements; i++)
    sum += ef_element_coenergy(n, i);
  return sum;
}

/* Steps that may end past the minimum before the line search becomes strict. */
enum { TRUSTING_STEPS = 20 };

/* Moves along the step. The coenergy is convex, so while its slope along the step stays negative it
 * has fallen. A little past the minimum (slope below a tenth of the first, as near the solution) is
 * taken too, for a limited number of steps, after which the coenergy must not have risen beyond
 * rounding. Otherwise the fall is checked (Armijo) and the step shortened by the secant of the
 * slope, which makes the method converge from anywhere. A step that has fallen but ends far past
 * the minimum is at first taken as it is; later it is shortened too, or two knees on either side of
 * the minimum would throw the iterates to and fro (the curvature condition of Wolfe). */
static void line_search(ef_network *n, int trusting) {
  double size, start_slope = slope_along(n, &size), share = 1;
  double rounding = 64 * DBL_EPSILON * size, small = -0.1 * start_slope;
  double before = NAN;
  for (int i = 0; i < 60; i++) {
    move(n, share);
    double slope = slope_along(n, &size);
    if (slope <= rounding || start_slope >= -rounding || (trusting && slope <= small)) return;
    double after = total_coenergy(n);
    move(n, -share);
    if (isnan(before)) before = total_coenergy(n);
    double allowed = slope <= small ? 64 * DBL_EPSILON * before : 1e-4 * share * start_slope;
    if (after <= before + allowed && (trusting || slope <= small)) {
      move(n, share);
      return;
    }
    double secant = start_slope / (start_slope - slope);
    share *= fmin(fmax(secant, 0.1), 0.9);
  }
  move(n, share);
}

static double larger(double a, double b) {
  return a > b ? a : b;
}

/* Sums up each node's flux balance and flux magnitudes; returns the largest magnitude. */
static double sum_up_nodes(ef_network *n) {
  double largest = 0;
  memset(n->balance, 0, n->nodes * sizeof *n->balance);
  memset(n->magnitude, 0, n->nodes * sizeof *n->magnitude);
  for (size_t k = 0; k < n->branches; k++) {
    const ef_branch *b = &n->branch[k];
    double out = n->flux[b->first], in = n->flux[b->first + b->count - 1];
    n->balance[b->from] -= out;
    n->balance[b->to] += in;
    n->magnitude[b->from] += fabs(out);
    n->magnitude[b->to] += fabs(in);
  }
  for (size_t i = 0; i < n->nodes; i++)
    largest = larger(largest, n->magnitude[i]);
  return largest;
}

static int chains_agree(const ef_network *n, double tolerance, double floor) {
  for (size_t k = 0; k < n->branches; k++) {
    const ef_branch *b = &n->branch[k];
    double out = n->flux[b->first], limit = tolerance * fabs(out) + floor;
    for (size_t i = b->first + 1; i < b->first + b->count; i++)
      if (!(fabs(n->flux[i] - out) <= limit)) return 0;
  }
  return 1;
}

/* Largest flux that a coercive field alone would drive through an element: what remains of it is a
 * difference, good to its rounding. */
static double coercive_flux(const ef_network *n) {
  double largest = 0;
  if (!n->magnetised) return 0;
  for (size_t i = 0; i < n->elements; i++) {
    const ef_element *e = &n->element[i];
    if (e->law != EF_NO_LAW)
      largest = larger(largest, n->tangent[i] * e->length * fabs(n->offset[e->law] * e->remanence));
  }
  return largest;
}

/* Largest flux that the strongest source could drive through the best path. Where the sources stand
 * in no loop the flux is zero and only its rounding is left, which has no scale of its own. */
static double drivable_flux(const ef_network *n) {
  double source = 0, permeance = 0;
  for (size_t k = 0; k < n->branches; k++) {
    source = larger(source, fabs(n->source[k]));
    permeance = larger(permeance, n->chain_permeance[k]);
  }
  return source * permeance;
}

/* Sums up the nodes; returns the flux against which rounding is judged. */
static double flux_scale(ef_network *n) {
  return larger(sum_up_nodes(n), coercive_flux(n));
}

/* Clears what rounding has left in a network that carries no flux; returns the flux scale. */
static double clear_residue(ef_network *n) {
  double scale = flux_scale(n);
  if (scale > 16 * DBL_EPSILON * DBL_EPSILON * drivable_flux(n)) return scale;
  memset(n->drop, 0, n->elements * sizeof *n->drop);
  evaluate(n);
  return flux_scale(n);
}

/* Largest imbalance of the nodes as summed up, relative to the flux magnitudes; *met tells whether
 * every node and chain is within its limit. */
static double imbalance(const ef_network *n, double scale, double tolerance, int *met) {
  double floor = 16 * DBL_EPSILON * scale, worst = 0;
  *met = chains_agree(n, tolerance, floor);
  for (size_t i = 0; i < n->nodes; i++) {
    double off = fabs(n->balance[i]);
    if (!(off <= tolerance * n->magnitude[i] + floor)) *met = 0;
    if (n->magnitude[i] > 0) worst = larger(worst, off / n->magnitude[i]);
  }
  return worst;
}

static ef_status take_input(ef_context *context, ef_network *n, const ef_network_input *input) {
  for (size_t i = 0; i < n->windings; i++)
    if (!isfinite(input->current[i]))
      return ef_fail(context, EF_BAD_VALUE, "current", input->current[i], "a finite number");
  n->magnetised = 0;
  for (size_t i = 0; i < n->laws; i++) {
    double offset = input->coercive_field ? input->coercive_field[i] : 0;
    if (!isfinite(offset))
      return ef_fail(context, EF_BAD_VALUE, "coercive field", offset, "a finite number");
    n->law[i] = input->law[i];
    n->offset[i] = offset;
    n->magnetised |= offset != 0;
  }
  memcpy(n->current, input->current, n->windings * sizeof *n->current);
  memset(n->source, 0, n->branches * sizeof *n->source);
  for (size_t i = 0; i < n->couplings; i++)
    n->source[n->coupling[i].branch] += n->coupling[i].turns * n->current[n->coupling[i].winding];
  return EF_OK;
}

ef_status ef_network_solve(ef_context *context, ef_network *n, const ef_network_input *input,
                           ef_network_report *report) {
  int warm = input->warm && n->solved, met = 0;
  n->solved = 0;
  n->factored = EF_FACTOR_NONE;
  ef_status status = take_input(context, n, input);
  if (status != EF_OK) return status;
  if (!warm) {
    memset(n->drop, 0, n->elements * sizeof *n->drop);
    memset(n->potential, 0, n->nodes * sizeof *n->potential);
  }
  evaluate(n);
  for (int i = 0; i <= context->max_iterations; i++) {
    if (context->progress &&
        context->progress(context->progress_user, (double)i / context->max_iterations))
      return ef_fail_message(context, EF_CANCELLED, "network", "the solution was cancelled");
    /* The first full step makes the start fit the sources; from there every step is a descent. */
    status = newton_step(context, n, i == 0);
    if (status != EF_OK) return status;
    if (i == 0)
      move(n, 1);
    else
      line_search(n, i <= TRUSTING_STEPS);
    double residual = imbalance(n, clear_residue(n), context->tolerance, &met);
    if (!isfinite(residual)) break;
    if (met) {
      n->solved = 1;
      n->factored = EF_FACTOR_NONE; /* the factor belongs to the point before the last step */
      *report = (ef_network_report){i + 1, residual};
      return EF_OK;
    }
  }
  return ef_fail(context, EF_NOT_CONVERGED, "number of Newton steps",
                 (double)context->max_iterations, "convergence; no result is given");
}
