/* The inside of the ring's boundary solution, shared by ring*.c only. */
#ifndef EF_MAG_RING_INTERNAL_H
#define EF_MAG_RING_INTERNAL_H

#include "ring.h"

/* A flat rectangle in space that carries a uniform surface charge of density one. */
typedef struct {
  double centre[3];
  double across[3], along[3]; /* perpendicular unit vectors of its sides */
  double half_across, half_along;
} ef_rectangle;

#define EF_FACE_PANEL ((size_t)-1)

/* A piece of the ring's surface with one unknown density. A wide piece of a curved side is made of
 * several flat rectangles. */
typedef struct {
  size_t first, count; /* its rectangles */
  size_t sector;       /* 0 at the gap, or EF_FACE_PANEL */
  double point[3];     /* its middle, where the potential is prescribed */
  double potential;    /* there, per ampere across the gap */
  double area;         /* m2 */
} ef_ring_panel;

/* Division of the quarter of a ring's share (half the height, gap to symmetry plane). */
typedef struct {
  size_t sectors, panels_per_sector;
  size_t across; /* strips across the radial width of the top, and panels across the pole face */
  size_t side;   /* strips up each half side, and panels up the half pole face */
} ef_ring_division;

typedef struct {
  ef_ring_geometry ring;
  double span; /* rad from the middle of the gap to the symmetry plane in the iron */
  size_t steps, panels, rectangles, panel_room, rectangle_room;
  double *share; /* steps + 1 bounds from 0 at the pole face to 1 at the symmetry plane */
  ef_ring_panel *panel;
  ef_rectangle *rectangle;
} ef_ring_mesh;

/* Angle (rad, from the middle of the gap) at `share` of the way through the iron, at radius r:
 * the pole face is a plane, so the angle where the iron begins depends on the radius. */
double ef_ring_angle(const ef_ring_mesh *mesh, double share, double r);

/* Panels of a division; freed with ef_ring_mesh_release, also after a failure. */
ef_status ef_ring_mesh_build(ef_context *context, const ef_ring_geometry *ring,
                             const ef_ring_division *division, ef_ring_mesh *mesh);
void ef_ring_mesh_release(ef_context *context, ef_ring_mesh *mesh);

/* Potential (1/(4 pi)) integral dA / distance of a rectangle at a point, m. */
double ef_rectangle_potential(const ef_rectangle *rectangle, const double point[3]);

/* Adds weight times the field (minus the gradient of that potential, no unit) to field[3]. */
void ef_rectangle_add_field(const ef_rectangle *rectangle, const double point[3], double weight,
                            double field[3]);

/* One of the mirror images of a solution, seen as a mirrored point of observation. */
typedef struct {
  double point[3];
  double x_sign, y_sign, z_sign; /* of the mirrored coordinates */
  double charge_sign;
} ef_ring_image;

#define EF_MAX_RING_IMAGES 8

/* Images of a point for one or two gaps; returns how many. The charge is odd across the middle of
 * a gap, even in z, and has the period of the gaps. */
size_t ef_ring_images(int gaps, const double point[3], ef_ring_image image[EF_MAX_RING_IMAGES]);

#endif
