/* Effective parameters: the sums of IEC 60205 over the sections of a path. */
#include "shape_internal.h"

#include <math.h>
#include <stdio.h>

static ef_status check_section(ef_context *context, size_t index, const ef_section *section) {
  char field[EF_FIELD_SIZE];
  snprintf(field, sizeof field, "length of section %zu", index + 1);
  ef_status status = ef_require_positive(context, field, section->length);
  if (status != EF_OK) return status;
  snprintf(field, sizeof field, "area of section %zu", index + 1);
  return ef_require_positive(context, field, section->area);
}

ef_status ef_shape_effective(ef_context *context, size_t count, const ef_section *sections,
                             ef_core_geometry *geometry) {
  if (count == 0)
    return ef_fail(context, EF_BAD_VALUE, "number of sections", 0, "at least one section");
  double c1 = 0, c2 = 0, volume = 0, smallest = INFINITY;
  for (size_t i = 0; i < count; i++) {
    ef_status status = check_section(context, i, &sections[i]);
    if (status != EF_OK) return status;
    double length = sections[i].length, area = sections[i].area;
    c1 += length / area;
    c2 += length / area / area;
    volume += length * area;
    smallest = fmin(smallest, area);
  }
  double length = c1 / c2 * c1, area = c1 / c2;
  double effective = length * area;
  if (!isfinite(effective) || effective <= 0 || !isfinite(volume))
    return ef_fail_message(context, EF_BAD_VALUE, "sections",
                           "the sections are too large, too small or too unequal to add up");
  geometry->c1 = c1;
  geometry->c2 = c2;
  geometry->effective_length = length;
  geometry->effective_area = area;
  geometry->effective_volume = effective;
  geometry->minimum_area = smallest;
  geometry->iron_volume = volume;
  return EF_OK;
}

static ef_section scaled(ef_section section, double lengths, double areas) {
  return (ef_section){lengths * section.length, areas * section.area};
}

ef_status ef_shape_sum(ef_context *context, ef_core_geometry *g) {
  /* Two equal loops in parallel are one series path with both areas added. */
  if (g->topology == EF_TOPOLOGY_THREE_LEG) {
    const ef_section path[] = {g->centre_leg, scaled(g->outer_leg, 1, 2), scaled(g->yoke, 2, 2),
                               scaled(g->centre_corner, 2, 2), scaled(g->outer_corner, 2, 2)};
    return ef_shape_effective(context, 5, path, g);
  }
  const ef_section path[] = {scaled(g->outer_leg, 2, 1), scaled(g->yoke, 2, 1),
                             scaled(g->outer_corner, 4, 1)};
  return ef_shape_effective(context, 3, path, g);
}

ef_pole ef_shape_rectangle_pole(double width, double depth) {
  return (ef_pole){.shape = EF_POLE_RECTANGLE, .width = width, .depth = depth};
}

ef_pole ef_shape_round_pole(double diameter, double hole) {
  return (ef_pole){.shape = EF_POLE_ROUND, .width = diameter, .depth = diameter, .hole = hole};
}

void ef_shape_set_box(ef_core_geometry *g, double width, double depth, double height) {
  g->envelope_width = width;
  g->envelope_depth = depth;
  g->envelope_height = height;
  g->outer_surface = 2 * (width * depth + width * height + depth * height);
}
