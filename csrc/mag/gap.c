/* Permeance of a gap between two poles by four methods, each with its derivative. */
#include "gap.h"

#include <math.h>
#include <stdio.h>

#include "gap_internal.h"

/* Fringing factor F of a method and its derivative with respect to the gap's length, 1/m. */
typedef struct {
  double factor, by_length;
  const char *note; /* NULL inside the range of validity */
} fringing;

static const char *const method_names[] = {"plain", "added length", "handbook", "conformal"};

const char *ef_gap_method_name(ef_gap_method method) {
  return method < EF_GAP_METHOD_COUNT ? method_names[method] : NULL;
}

static int is_round(const ef_pole *pole) {
  return pole->shape == EF_POLE_ROUND;
}

static double depth_of(const ef_pole *pole) {
  return is_round(pole) ? pole->width : pole->depth;
}

static double pole_area(const ef_pole *pole) {
  double hole = EF_PI / 4 * pole->hole * pole->hole;
  if (is_round(pole)) return EF_PI / 4 * pole->width * pole->width - hole;
  return pole->width * pole->depth - (4 - EF_PI) * pole->corner * pole->corner - hole;
}

static ef_status check_geometry(ef_context *context, const ef_gap_geometry *g) {
  const ef_pole *pole = &g->pole;
  ef_status status = ef_require_positive(context, "gap length", g->length);
  if (status == EF_OK)
    status =
        ef_require_positive(context, is_round(pole) ? "pole diameter" : "pole width", pole->width);
  if (status == EF_OK && !is_round(pole))
    status = ef_require_positive(context, "pole depth", pole->depth);
  if (status != EF_OK) return status;
  double side = fmin(pole->width, depth_of(pole));
  if (!(pole->hole >= 0 && pole->hole < side))
    return ef_fail(context, EF_BAD_VALUE, "pole hole", pole->hole,
                   "0 or a diameter below the pole's smaller side");
  if (!is_round(pole) && !(pole->corner >= 0 && pole->corner <= side / 2))
    return ef_fail(context, EF_BAD_VALUE, "pole corner", pole->corner,
                   "0 to half of the pole's smaller side");
  return EF_OK;
}

/* F = (1 + length e1/width)(1 + length e2/depth), e and its derivative for each direction. */
static fringing product(const ef_gap_geometry *g, const double e[2], const double by_length[2]) {
  double side[2] = {g->pole.width, depth_of(&g->pole)}, f[2], df[2];
  for (int i = 0; i < 2; i++) {
    f[i] = 1 + g->length * e[i] / side[i];
    df[i] = (e[i] + g->length * by_length[i]) / side[i];
  }
  return (fringing){f[0] * f[1], df[0] * f[1] + f[0] * df[1], NULL};
}

static fringing added_length(const ef_gap_geometry *g) {
  static const double one[2] = {1, 1}, zero[2] = {0, 0};
  fringing f = product(g, one, zero);
  if (g->length > 0.1 * fmin(g->pole.width, depth_of(&g->pole)))
    f.note = "added length holds for gaps up to 0.1 of the pole's smaller side; beyond it falls "
             "more than 20 % short";
  return f;
}

static ef_status handbook(ef_context *context, const ef_gap_geometry *g, fringing *f) {
  ef_status status = ef_require_positive(context, "winding length", g->winding_length);
  if (status != EF_OK) return status;
  double root = sqrt(pole_area(&g->pole)), logarithm = log(2 * g->winding_length / g->length);
  *f = (fringing){1 + g->length / root * logarithm, (logarithm - 1) / root, NULL};
  if (!(f->factor > 0))
    return ef_fail(context, EF_OUT_OF_RANGE, "gap length", g->length,
                   "a length at which the handbook factor is positive");
  if (g->length > g->winding_length / 2.5 || g->length > 0.25 * root)
    f->note = "the handbook factor is checked for gaps up to 0.4 of the winding length and 0.25 of "
              "the root of the area; beyond them its error is unknown";
  return EF_OK;
}

/* The note that one edge asks for, or NULL. */
static const char *edge_note(const ef_edge *edge, double half_length) {
  if (edge->reach >= 5 * half_length) return NULL;
  if (edge->kind == EF_EDGE_FREE)
    return "a wall below 2.5 gap lengths: the free edge's asymptote is more than 7 % low, take "
           "\"free exact\"";
  if (edge->kind == EF_EDGE_FREE_EXACT)
    return "a wall below 2.5 gap lengths: the product of the two directions is 2 to 9 % high for "
           "thin poles";
  return NULL;
}

/* Each edge draws (2/pi)(1 - ln 2) more through the face than its uniform flux (high wall). */
static double face_factor(const ef_gap_geometry *g) {
  const ef_edge *edge[4] = {&g->x_low, &g->x_high, &g->y_low, &g->y_high};
  const double excess = 2 / EF_PI * (1 - log(2.0)), none[2] = {0, 0};
  double e[2] = {0, 0};
  for (int i = 0; i < 4; i++)
    if (edge[i]->kind != EF_EDGE_NONE) e[i / 2] += excess / 2;
  return product(g, e, none).factor;
}

static ef_status conformal(ef_context *context, const ef_gap_geometry *g, fringing *f) {
  const ef_edge *edge[4] = {&g->x_low, &g->x_high, &g->y_low, &g->y_high};
  static const char *const field[4] = {"edge x_low reach", "edge x_high reach", "edge y_low reach",
                                       "edge y_high reach"};
  double e[2] = {0, 0}, slope[2] = {0, 0};
  const char *note = NULL;
  for (int i = 0; i < 4; i++) {
    double p, by_half_length;
    ef_status status =
        ef_gap_named_edge(context, field[i], edge[i], g->length / 2, &p, &by_half_length);
    if (status != EF_OK) return status;
    e[i / 2] += p / 2;
    slope[i / 2] += by_half_length / 4;
    if (!note) note = edge_note(edge[i], g->length / 2);
  }
  if (is_round(&g->pole)) {
    e[0] = e[1] = (e[0] + e[1]) / 2;
    slope[0] = slope[1] = (slope[0] + slope[1]) / 2;
  }
  *f = product(g, e, slope);
  if (fmin(g->pole.width, depth_of(&g->pole)) < g->length)
    note = "a pole narrower than its gap: the two edges' fields overlap and the permeance is too "
           "high";
  f->note = note;
  return EF_OK;
}

ef_status ef_gap_evaluate(ef_context *context, ef_gap_method method,
                          const ef_gap_geometry *geometry, ef_gap_permeance *result) {
  ef_status status = check_geometry(context, geometry);
  fringing f = {1, 0, NULL};
  if (status != EF_OK) return status;
  switch (method) {
  case EF_GAP_PLAIN:
    break;
  case EF_GAP_ADD_LENGTH:
    f = added_length(geometry);
    break;
  case EF_GAP_HANDBOOK:
    status = handbook(context, geometry, &f);
    break;
  case EF_GAP_CONFORMAL:
    status = conformal(context, geometry, &f);
    break;
  default:
    return ef_fail(context, EF_BAD_VALUE, "gap method", (double)method, "0 to 3");
  }
  if (status != EF_OK) return status;
  result->valid = !f.note;
  if (result->valid && geometry->pole.hole > 0 && method != EF_GAP_PLAIN)
    f.note = "approximate: the pole's hole is only taken off its area";
  double base = EF_MU0 * pole_area(&geometry->pole) / geometry->length;
  if (!isfinite(base * f.factor / geometry->length))
    return ef_fail(context, EF_OUT_OF_RANGE, "gap length", geometry->length,
                   "a length that gives a finite permeance");
  result->permeance = base * f.factor;
  result->permeance_by_length = base * (f.by_length - f.factor / geometry->length);
  result->fringing = f.factor;
  result->face = method == EF_GAP_PLAIN ? 1 : face_factor(geometry);
  snprintf(result->note, sizeof result->note, "%s", f.note ? f.note : "");
  return EF_OK;
}
