/* The pocket's inside, shared by pocket*.c only. */
#ifndef EF_MAG_POCKET_INTERNAL_H
#define EF_MAG_POCKET_INTERNAL_H

#include "pocket.h"

#define EF_POCKET_MODES 8

/* Flux density along the axis on the cylinder that carries the wall, between the faces and relative
 * to mu0 u / gap: 1 + sum over m of wall[m - 1] cos(2 pi m z / gap). */
typedef struct {
  double radius, gap, depth; /* m */
  double wall[EF_POCKET_MODES];
  double gain; /* share of pi radius^2 that the wall's departure from 1 adds to the lost flux */
} ef_pocket_modes;

/* Solves for the wall's field. */
ef_status ef_pocket_modes_solve(ef_context *context, double radius, double gap, double depth,
                                ef_pocket_modes *modes);

/* Relative flux density at (r, z) inside the pocket, r < radius. */
double ef_pocket_modes_field(const ef_pocket_modes *modes, double r, double z);

/* Flux that the pocket takes off the gap, relative to the uniform flux through its mouth; of it,
 * *outside the share lost beyond the mouth's radius in the middle plane. */
double ef_pocket_modes_loss(const ef_pocket_modes *modes, double *outside);

#endif
