/* Panels of a gapped ring's surface: the upper half between the middle of a gap and the symmetry
 * plane in the iron. x points radially through the middle of the gap, y along its flux, z along the
 * ring's axis. */
#include <math.h>
#include <string.h>

#include "ring_internal.h"

/* rad: a flat piece then leaves the circle by 0.3 % of its radius. */
#define WIDEST_RECTANGLE 0.15

double ef_ring_angle(const ef_ring_mesh *mesh, double share, double r) {
  double start = asin(mesh->ring.gap / (2 * r));
  return start + share * (mesh->span - start);
}

/* Bounds of steps that grow geometrically from `first`, in units of the whole. The growth is
 * limited, so few steps begin wider than asked. */
static void graded_bounds(size_t steps, double first, double *bound) {
  const double largest_growth = 1.5;
  double low = 1, high = largest_growth;
  if ((double)steps * first >= 1) high = 1;
  for (int i = 0; i < 60 && high > low; i++) {
    double q = (low + high) / 2;
    double sum = first * (pow(q, (double)steps) - 1) / (q - 1);
    *(sum < 1 ? &low : &high) = q;
  }
  double size = 1, sum = 0;
  for (size_t k = 0; k < steps; k++) {
    bound[k] = sum;
    sum += size;
    size *= high;
  }
  for (size_t k = 0; k < steps; k++)
    bound[k] /= sum;
  bound[steps] = 1;
}

/* Bound k of n strips refined toward both ends, or toward the upper end only, of [low, high]:
 * there the charge density grows without limit. */
static double both_ends(size_t k, size_t n, double low, double high) {
  return low + (high - low) * (1 - cos(EF_PI * (double)k / (double)n)) / 2;
}

static double upper_end(size_t k, size_t n, double high) {
  return high * sin(EF_PI / 2 * (double)k / (double)n);
}

static ef_rectangle *add_rectangle(ef_ring_mesh *mesh, double angle, double r, double z) {
  ef_rectangle *rectangle = &mesh->rectangle[mesh->rectangles++];
  double c = cos(angle), s = sin(angle);
  *rectangle = (ef_rectangle){.centre = {r * c, r * s, z}, .across = {-s, c, 0}};
  return rectangle;
}

static ef_ring_panel *add_panel(ef_ring_mesh *mesh, size_t sector, double angle, double r,
                                double z) {
  ef_ring_panel *panel = &mesh->panel[mesh->panels++];
  *panel = (ef_ring_panel){.first = mesh->rectangles,
                           .sector = sector,
                           .point = {r * cos(angle), r * sin(angle), z},
                           .potential = (mesh->span - angle) / (2 * mesh->span)};
  return panel;
}

/* Adds step k of a strip: on the top where radial_half > 0, else on a side of half height
 * axial_half. */
static void add_side_panel(ef_ring_mesh *mesh, size_t sector, size_t k, double r, double z,
                           double radial_half, double axial_half) {
  double begin = ef_ring_angle(mesh, mesh->share[k], r);
  double width = ef_ring_angle(mesh, mesh->share[k + 1], r) - begin;
  ef_ring_panel *panel = add_panel(mesh, sector, begin + width / 2, r, z);
  /* An odd number keeps the panel's middle on a rectangle. */
  panel->count = 2 * (size_t)(width / (2 * WIDEST_RECTANGLE)) + 1;
  for (size_t i = 0; i < panel->count; i++) {
    double part = width / (double)panel->count;
    double angle = begin + ((double)i + 0.5) * part;
    ef_rectangle *rectangle = add_rectangle(mesh, angle, r, z);
    int top = radial_half > 0;
    rectangle->along[0] = top ? cos(angle) : 0;
    rectangle->along[1] = top ? sin(angle) : 0;
    rectangle->along[2] = top ? 0 : 1;
    rectangle->half_across = r * part / 2;
    rectangle->half_along = top ? radial_half : axial_half;
  }
  panel->area = width * r * 2 * (radial_half > 0 ? radial_half : axial_half);
}

static void add_sides(ef_ring_mesh *mesh, const ef_ring_division *d) {
  double inner = mesh->ring.inner_diameter / 2, outer = mesh->ring.outer_diameter / 2;
  double top = mesh->ring.height / 2;
  for (size_t k = 0; k < mesh->steps; k++) {
    size_t sector = k / d->panels_per_sector;
    for (size_t i = 0; i < d->side; i++) {
      double low = upper_end(i, d->side, top), high = upper_end(i + 1, d->side, top);
      add_side_panel(mesh, sector, k, inner, (low + high) / 2, 0, (high - low) / 2);
      add_side_panel(mesh, sector, k, outer, (low + high) / 2, 0, (high - low) / 2);
    }
    for (size_t i = 0; i < d->across; i++) {
      double low = both_ends(i, d->across, inner, outer);
      double high = both_ends(i + 1, d->across, inner, outer);
      add_side_panel(mesh, sector, k, (low + high) / 2, top, (high - low) / 2, 0);
    }
  }
}

static void add_face(ef_ring_mesh *mesh, const ef_ring_division *d) {
  double half_gap = mesh->ring.gap / 2, top = mesh->ring.height / 2;
  double inner = mesh->ring.inner_diameter / 2, outer = mesh->ring.outer_diameter / 2;
  double begin = sqrt(inner * inner - half_gap * half_gap);
  double end = sqrt(outer * outer - half_gap * half_gap);
  for (size_t i = 0; i < d->across; i++)
    for (size_t j = 0; j < d->side; j++) {
      double x1 = both_ends(i, d->across, begin, end), x2 = both_ends(i + 1, d->across, begin, end);
      double z1 = upper_end(j, d->side, top), z2 = upper_end(j + 1, d->side, top);
      double x = (x1 + x2) / 2, z = (z1 + z2) / 2;
      ef_ring_panel *panel =
          add_panel(mesh, EF_FACE_PANEL, atan2(half_gap, x), hypot(x, half_gap), z);
      panel->count = 1;
      panel->area = (x2 - x1) * (z2 - z1);
      mesh->rectangle[mesh->rectangles++] = (ef_rectangle){.centre = {x, half_gap, z},
                                                           .across = {1, 0, 0},
                                                           .along = {0, 0, 1},
                                                           .half_across = (x2 - x1) / 2,
                                                           .half_along = (z2 - z1) / 2};
    }
}

ef_status ef_ring_mesh_build(ef_context *context, const ef_ring_geometry *ring,
                             const ef_ring_division *d, ef_ring_mesh *mesh) {
  memset(mesh, 0, sizeof *mesh);
  mesh->ring = *ring;
  mesh->span = EF_PI / ring->gaps;
  mesh->steps = d->sectors * d->panels_per_sector;
  size_t strips = 2 * d->side + d->across;
  mesh->panel_room = mesh->steps * strips + d->across * d->side;
  /* A strip of total angle below pi needs at most that many extra rectangles. */
  mesh->rectangle_room = mesh->panel_room + strips * ((size_t)(mesh->span / WIDEST_RECTANGLE) + 2);
  mesh->share = ef_allocate(context, mesh->steps + 1, sizeof *mesh->share);
  mesh->panel = ef_allocate(context, mesh->panel_room, sizeof *mesh->panel);
  mesh->rectangle = ef_allocate(context, mesh->rectangle_room, sizeof *mesh->rectangle);
  if (!mesh->share || !mesh->panel || !mesh->rectangle) return EF_NO_MEMORY;
  double mean_radius = (ring->outer_diameter + ring->inner_diameter) / 4;
  double width = (ring->outer_diameter - ring->inner_diameter) / 2;
  double smallest = fmin(ring->gap, fmin(width, ring->height));
  double first = 0.1 * smallest / (mean_radius * mesh->span);
  graded_bounds(mesh->steps, first, mesh->share);
  add_sides(mesh, d);
  add_face(mesh, d);
  return EF_OK;
}

void ef_ring_mesh_release(ef_context *context, ef_ring_mesh *mesh) {
  ef_release(context, mesh->share, mesh->steps + 1, sizeof *mesh->share);
  ef_release(context, mesh->panel, mesh->panel_room, sizeof *mesh->panel);
  ef_release(context, mesh->rectangle, mesh->rectangle_room, sizeof *mesh->rectangle);
  memset(mesh, 0, sizeof *mesh);
}
