/* What a round pocket on the axis of a gap does to its field and its permeance. */
#include "pocket.h"

#include <math.h>

#include "pocket_internal.h"

/* Radii beyond which more depth changes nothing at the gap: the slowest mode falls as
 * exp(-2.405 depth / radius), to 4e-9 here. */
#define DEEP_RADII 8.0

/* Gaps outside these shares of the diameter belong to no pocket, and the series do not reach
 * them. */
#define SHORTEST_GAP 1e-3
#define LONGEST_GAP  5.0

/* Relative step of the central difference over the gap's length; its error is about 1e-6. */
#define DIFFERENCE 1e-3

static ef_status check(ef_context *context, const ef_pocket *pocket, double gap_length) {
  ef_status status = ef_require_positive(context, "pocket diameter", pocket->diameter);
  if (status == EF_OK) status = ef_require_positive(context, "gap length", gap_length);
  if (status != EF_OK) return status;
  if (!pocket->through && !(isfinite(pocket->depth) && pocket->depth >= 0))
    return ef_fail(context, EF_BAD_VALUE, "pocket depth", pocket->depth, "0 or more");
  if (gap_length < SHORTEST_GAP * pocket->diameter || gap_length > LONGEST_GAP * pocket->diameter)
    return ef_fail(context, EF_OUT_OF_RANGE, "gap length", gap_length,
                   "0.001 to 5 times the pocket's diameter");
  return EF_OK;
}

static ef_status solve(ef_context *context, const ef_pocket *pocket, double gap_length,
                       ef_pocket_modes *modes) {
  double radius = pocket->diameter / 2, deep = DEEP_RADII * radius;
  double depth = pocket->through ? deep : fmin(pocket->depth, deep);
  return ef_pocket_modes_solve(context, radius, gap_length, depth, modes);
}

/* Lost permeance at another gap length. */
static ef_status loss_at(ef_context *context, const ef_pocket *pocket, double gap_length,
                         double *loss) {
  ef_pocket_modes modes;
  double outside;
  ef_status status = solve(context, pocket, gap_length, &modes);
  if (status != EF_OK) return status;
  *loss = EF_MU0 * EF_PI * modes.radius * modes.radius / gap_length *
          ef_pocket_modes_loss(&modes, &outside);
  return EF_OK;
}

ef_status ef_pocket_evaluate(ef_context *context, const ef_pocket *pocket, double gap_length,
                             ef_pocket_result *result) {
  ef_status status = check(context, pocket, gap_length);
  if (status != EF_OK) return status;
  ef_pocket_modes modes;
  double step = DIFFERENCE * gap_length, below = 0, above = 0, outside;
  status = loss_at(context, pocket, gap_length - step, &below);
  if (status == EF_OK) status = loss_at(context, pocket, gap_length + step, &above);
  if (status == EF_OK) status = solve(context, pocket, gap_length, &modes);
  if (status != EF_OK) return status;
  double loss = ef_pocket_modes_loss(&modes, &outside);
  result->centre_field = ef_pocket_modes_field(&modes, 0, 0);
  result->mean_field = 1 - (loss - outside);
  result->permeance_loss = EF_MU0 * EF_PI * modes.radius * modes.radius / gap_length * loss;
  result->loss_by_length = (above - below) / (2 * step);
  result->local_length = pocket->through ? HUGE_VAL : gap_length + 2 * pocket->depth;
  return EF_OK;
}

ef_status ef_pocket_field(ef_context *context, const ef_pocket *pocket, double gap_length, double r,
                          double z, double *relative) {
  ef_status status = check(context, pocket, gap_length);
  if (status != EF_OK) return status;
  double height = fabs(z) - gap_length / 2;
  if (!(r >= 0 && r <= 0.999 * pocket->diameter / 2))
    return ef_fail(context, EF_BAD_VALUE, "r", r, "0 to 0.999 of the pocket's radius");
  if (!(pocket->through ? isfinite(z) : height <= pocket->depth))
    return ef_fail(context, EF_BAD_VALUE, "z", z, "a height between the pocket's floors");
  ef_pocket_modes modes;
  status = solve(context, pocket, gap_length, &modes);
  if (status != EF_OK) return status;
  *relative = height <= modes.depth ? ef_pocket_modes_field(&modes, r, z) : 0;
  return EF_OK;
}
