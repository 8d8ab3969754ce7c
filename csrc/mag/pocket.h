/* A round blind pocket or through hole in the pole faces, on the gap's axis, for the sensor or its
 * leads. Iron infinitely permeable; the pole is wide (its own edge is not near, see
 * ef_pocket_evaluate). */
#ifndef EF_MAG_POCKET_H
#define EF_MAG_POCKET_H

#include "../num/context.h"

typedef struct {
  double diameter; /* m */
  double depth;    /* m, in EACH pole face; ignored for a through hole */
  int through;     /* 1: hole through both poles */
} ef_pocket;

typedef struct {
  double centre_field;   /* flux density in the middle of the pocket / (mu0 u / gap length), u the
                            gap's magnetomotive force */
  double mean_field;     /* mean over the pocket's mouth in the middle plane, same base */
  double permeance_loss; /* H, what the pocket takes off the gap's permeance, rim included */
  double loss_by_length; /* H/m, its derivative with respect to the gap's length, depth held */
  double local_length; /* m, clear height at the axis: length + 2 depth; a through hole: HUGE_VAL */
} ef_pocket_result;

/* Field and permeance of a pocket by mode matching: modes of the cylinder with two floors inside,
 * of the gap between two wide faces outside, matched on the cylinder's wall between the faces. A
 * through hole is a pocket eight radii deep (the slowest mode falls as exp(-2.405 depth/radius)).
 *  gap_length  m
 * EF_BAD_VALUE: "pocket diameter", "pocket depth" (0 or more), "gap length"; EF_OUT_OF_RANGE "gap
 * length" outside 0.001 to 5 times the diameter; EF_SINGULAR "pocket" where the numbers overflow.
 * Source: separation of variables, any textbook of potential theory; the derivation stands in
 * pocket_modes.c.
 * Error against finite differences and against many more modes: centre field below 0.0002 of the
 * base for gaps up to one diameter and 0.0015 up to five, loss below 0.7 % up to two (2.1 % at five
 * diameters). The pole must reach at least one gap length beyond the mouth all around: nearer, the
 * pole's edge and the pocket's rim share their fields and the losses overlap. */
ef_status ef_pocket_evaluate(ef_context *context, const ef_pocket *pocket, double gap_length,
                             ef_pocket_result *result);

/* Flux density along the axis at radius r (m, up to 0.999 of the pocket's radius) and height z (m,
 * from the middle plane, between the floors), relative to mu0 u / gap length. EF_BAD_VALUE "r" or
 * "z" outside, and as ef_pocket_evaluate. Within a tenth of the radius of the rim, where the iron's
 * edge makes the true field infinite, the few modes smooth it. */
ef_status ef_pocket_field(ef_context *context, const ef_pocket *pocket, double gap_length, double r,
                          double z, double *relative);

#endif
