/* Leakage of a gapped ring by surface charges.
 *
 * Total field = field of the current on the axis, I/(2 pi r) along phi, minus grad psi, where psi
 * is the potential of charges on the iron's surface. Infinitely permeable iron carries no field,
 * so there psi = I (phi - middle of the iron)/(2 pi): harmonic, so the charges cancel the
 * current's field in the whole interior and the flux density that leaves the iron is mu0 times the
 * charge density. psi = (1/(4 pi)) integral of density / distance is imposed at the middle of each
 * panel. All potentials are per ampere of magnetomotive force across one gap; the sign is chosen
 * so that flux and potential are positive in the computed half. */
#include <lapacke.h>
#include <math.h>
#include <string.h>

#include "ring_internal.h"

#define LEAST_STEPS 20
#define LEAST_ERROR 0.002

typedef struct {
  ef_ring_mesh mesh;
  double *density; /* per panel, 1/m */
} ring_solution;

/* Potential that a unit density on a panel and its images has at a point. */
static double panel_potential(const ef_ring_mesh *mesh, const ef_ring_panel *panel,
                              const ef_ring_image *image, size_t images) {
  double sum = 0;
  for (size_t k = 0; k < images; k++)
    for (size_t i = 0; i < panel->count; i++)
      sum += image[k].charge_sign *
             ef_rectangle_potential(&mesh->rectangle[panel->first + i], image[k].point);
  return sum;
}

static ef_status solve_density(ef_context *context, ring_solution *s) {
  const ef_ring_mesh *mesh = &s->mesh;
  size_t n = mesh->panels;
  double *matrix = ef_allocate(context, n * n, sizeof *matrix);
  lapack_int *pivot = ef_allocate(context, n, sizeof *pivot);
  ef_status status = matrix && pivot ? EF_OK : EF_NO_MEMORY;
  for (size_t i = 0; status == EF_OK && i < n; i++) {
    ef_ring_image image[EF_MAX_RING_IMAGES];
    size_t images = ef_ring_images(mesh->ring.gaps, mesh->panel[i].point, image);
    for (size_t j = 0; j < n; j++)
      matrix[i + j * n] = panel_potential(mesh, &mesh->panel[j], image, images);
    s->density[i] = mesh->panel[i].potential;
  }
  if (status == EF_OK && LAPACKE_dgesv_work(LAPACK_COL_MAJOR, (lapack_int)n, 1, matrix,
                                            (lapack_int)n, pivot, s->density, (lapack_int)n) != 0)
    status = ef_fail_message(context, EF_SINGULAR, "ring",
                             "the ring's panels give no unique charge; check its dimensions");
  ef_release(context, matrix, n * n, sizeof *matrix);
  ef_release(context, pivot, n, sizeof *pivot);
  return status;
}

static void solution_release(ef_context *context, ring_solution *s) {
  ef_release(context, s->density, s->mesh.panel_room, sizeof *s->density);
  ef_ring_mesh_release(context, &s->mesh);
}

static ef_status solution_build(ef_context *context, const ef_ring_geometry *ring,
                                const ef_ring_division *division, ring_solution *s) {
  s->density = NULL;
  ef_status status = ef_ring_mesh_build(context, ring, division, &s->mesh);
  if (status == EF_OK) {
    s->density = ef_allocate(context, s->mesh.panel_room, sizeof *s->density);
    status = s->density ? solve_density(context, s) : EF_NO_MEMORY;
  }
  if (status != EF_OK) solution_release(context, s);
  return status;
}

/* Field along the gap (y) at (x, y, 0) per ampere across the gap, 1/m. */
static double field_in_gap(const ring_solution *s, double x, double y) {
  const ef_ring_mesh *mesh = &s->mesh;
  double point[3] = {x, y, 0}, sum = 0;
  ef_ring_image image[EF_MAX_RING_IMAGES];
  size_t images = ef_ring_images(mesh->ring.gaps, point, image);
  for (size_t i = 0; i < mesh->panels; i++)
    for (size_t k = 0; k < images; k++)
      for (size_t r = 0; r < mesh->panel[i].count; r++) {
        double field[3] = {0, 0, 0};
        ef_rectangle_add_field(&mesh->rectangle[mesh->panel[i].first + r], image[k].point,
                               s->density[i], field);
        sum += image[k].charge_sign * image[k].y_sign * field[1];
      }
  double current = mesh->ring.gaps;
  /* The computed half has positive charge, so its field runs toward -y like the flux it feeds. */
  return current * x / (2 * EF_PI * (x * x + y * y)) - sum;
}

/* Flux that leaves a panel and its mirror image in z. */
static double panel_flux(const ring_solution *s, size_t panel) {
  return EF_MU0 * 2 * s->density[panel] * s->mesh.panel[panel].area;
}

static double mean_radius(const ef_ring_geometry *ring) {
  return (ring->outer_diameter + ring->inner_diameter) / 4;
}

/* Mean flux density in the middle of the iron over that in the middle of the gap. */
static double back_to_gap(const ring_solution *s) {
  const ef_ring_geometry *ring = &s->mesh.ring;
  double flux = 0, area = (ring->outer_diameter - ring->inner_diameter) / 2 * ring->height;
  for (size_t i = 0; i < s->mesh.panels; i++)
    flux += panel_flux(s, i);
  return flux / area / (EF_MU0 * field_in_gap(s, mean_radius(ring), 0));
}

static void fill_centre(const ring_solution *s, ef_ring_ladder *ladder) {
  const ef_ring_geometry *ring = &s->mesh.ring;
  double x = mean_radius(ring), width = (ring->outer_diameter - ring->inner_diameter) / 2;
  double step = fmin(ring->gap, width) / 8;
  double centre = field_in_gap(s, x, 0);
  ladder->centre_field = centre * ring->gap;
  ladder->radial_slope =
      (field_in_gap(s, x + step, 0) - field_in_gap(s, x - step, 0)) / (2 * step * centre);
  ladder->axial_curvature = 2 * (field_in_gap(s, x, step) - centre) / (step * step * centre);
}

static void fill_ladder(const ring_solution *s, size_t per_sector, ef_ring_ladder *ladder) {
  const ef_ring_mesh *mesh = &s->mesh;
  const ef_ring_geometry *ring = &mesh->ring;
  double x = mean_radius(ring);
  for (size_t k = 0; k <= ladder->count; k++)
    ladder->angle[k] = ef_ring_angle(mesh, mesh->share[k * per_sector], x);
  double face_area = 0;
  for (size_t i = 0; i < mesh->panels; i++) {
    const ef_ring_panel *panel = &mesh->panel[i];
    if (panel->sector == EF_FACE_PANEL) {
      ladder->face_permeance += panel_flux(s, i);
      face_area += 2 * panel->area;
    } else
      ladder->leakage[panel->sector] += panel_flux(s, i);
  }
  for (size_t k = 0; k < ladder->count; k++) {
    double middle = (ladder->angle[k] + ladder->angle[k + 1]) / 2;
    ladder->leakage[k] /= (mesh->span - middle) / (2 * mesh->span);
  }
  ladder->face_by_length = -EF_MU0 * face_area / (ring->gap * ring->gap);
  fill_centre(s, ladder);
}

static ef_status check_ring(ef_context *context, const ef_ring_geometry *ring, size_t sectors) {
  ef_status status = ef_require_positive(context, "ring outer diameter", ring->outer_diameter);
  if (status == EF_OK)
    status = ef_require_positive(context, "ring inner diameter", ring->inner_diameter);
  if (status == EF_OK) status = ef_require_positive(context, "ring height", ring->height);
  if (status == EF_OK) status = ef_require_positive(context, "gap", ring->gap);
  if (status != EF_OK) return status;
  if (ring->inner_diameter >= ring->outer_diameter)
    return ef_fail(context, EF_BAD_VALUE, "ring inner diameter", ring->inner_diameter,
                   "a diameter below the outer diameter");
  if (ring->gap >= mean_radius(ring) || ring->gap >= 0.9 * ring->inner_diameter)
    return ef_fail(context, EF_BAD_VALUE, "gap", ring->gap,
                   "a length below half of the mean diameter and 0.9 of the inner diameter");
  if (ring->gaps != 1 && ring->gaps != 2)
    return ef_fail(context, EF_BAD_VALUE, "gaps", ring->gaps, "1, or 2 at 180 degrees");
  if (sectors < 1 || sectors > EF_MAX_RING_SECTORS)
    return ef_fail(context, EF_BAD_VALUE, "sectors", (double)sectors, "1 to 64");
  return EF_OK;
}

/* Relative error of the back-to-gap ratio: the change from a panelling with about 2/3 of the panels
 * each way, doubled (the error falls with the first power of the panel's size), and not below what
 * flat panels and far quadrature cost. */
static ef_status estimate_error(ef_context *context, const ring_solution *fine, double *error) {
  ef_ring_division coarse = {fine->mesh.steps * 2 / 3, 1, 3, 2};
  ring_solution s;
  ef_status status = solution_build(context, &fine->mesh.ring, &coarse, &s);
  if (status != EF_OK) return status;
  double change = back_to_gap(&s) / back_to_gap(fine) - 1;
  *error = fmax(2 * fabs(change), LEAST_ERROR);
  solution_release(context, &s);
  if (!isfinite(change))
    return ef_fail_message(context, EF_OUT_OF_RANGE, "ring",
                           "the ring's dimensions are too large or too small for a finite result");
  return EF_OK;
}

ef_status ef_ring_ladder_build(ef_context *context, const ef_ring_geometry *ring, size_t sectors,
                               ef_ring_ladder *ladder) {
  memset(ladder, 0, sizeof *ladder);
  ef_status status = check_ring(context, ring, sectors);
  if (status != EF_OK) return status;
  ef_ring_division division = {sectors, (LEAST_STEPS + sectors - 1) / sectors, 5, 3};
  ring_solution s;
  status = solution_build(context, ring, &division, &s);
  if (status != EF_OK) return status;
  ladder->count = sectors;
  ladder->angle = ef_allocate(context, sectors + 1, sizeof *ladder->angle);
  ladder->leakage = ef_allocate(context, sectors, sizeof *ladder->leakage);
  status = ladder->angle && ladder->leakage ? EF_OK : EF_NO_MEMORY;
  if (status == EF_OK) {
    fill_ladder(&s, division.panels_per_sector, ladder);
    status = estimate_error(context, &s, &ladder->error);
  }
  solution_release(context, &s);
  if (status != EF_OK) ef_ring_ladder_release(context, ladder);
  return status;
}

void ef_ring_ladder_release(ef_context *context, ef_ring_ladder *ladder) {
  ef_release(context, ladder->angle, ladder->count + 1, sizeof *ladder->angle);
  ef_release(context, ladder->leakage, ladder->count, sizeof *ladder->leakage);
  memset(ladder, 0, sizeof *ladder);
}
