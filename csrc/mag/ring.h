/* Leakage of a gapped ring: where a slim ring loses its flux on the way from the back to the gap.
 * A boundary solution with charges on the whole surface of the ring (iron infinitely permeable),
 * reduced to the numbers that the network's ladder needs. */
#ifndef EF_MAG_RING_H
#define EF_MAG_RING_H

#include "../num/context.h"

typedef struct {
  double outer_diameter, inner_diameter, height; /* m */
  double gap; /* m, length of one gap between its faces, which are parallel planes (one straight saw
                 cut or ground faces): not wedge-shaped */
  int gaps;   /* 1, or 2 at 180 degrees */
} ef_ring_geometry;

#define EF_MAX_RING_SECTORS 64

/* Ladder of one half of a gap's share of the ring: `count` sectors from the gap's face to the
 * middle of the iron (the symmetry plane). */
typedef struct {
  size_t count;
  double *angle;   /* count + 1 boundaries, rad from the middle of the gap */
  double *leakage; /* count, H: flux leaving the sector's surface (all sides but the pole face) per
                      ampere of magnetic potential difference between its middle and the
                      surroundings */
  double face_permeance;  /* H, flux of the pole face / magnetomotive force across the gap */
  double face_by_length;  /* H/m, its derivative with respect to the gap's length, estimated by that
                             of the uniform part, -mu0 area/gap^2: what a face carries above the
                             uniform flux hardly depends on the gap */
  double centre_field;    /* flux density in the middle of the gap / (mu0 u / gap) */
  double radial_slope;    /* d(ln flux density)/dr there, 1/m, in the middle plane */
  double axial_curvature; /* (1/B) d2B/ds2 there, 1/m2, s straight along the gap's flux (the gap
                             frame's z, tangent to the ring) */
  double error;           /* relative, estimated from a coarser panelling, of the back-to-gap
                             ratio */
} ef_ring_ladder;

/* Ladder of a ring whose free-space field is that of a straight conductor on its axis (far return)
 * or of a uniform winding. The middle of sector i, m_i, stands at the potential
 * u (span - m_i)/(2 span) when u is the magnetomotive force across one gap and span = pi/gaps; with
 * leakage[i] times that potential plus face_permeance times u the ladder returns exactly the flux
 * that the boundary solution has in the middle of the iron.
 *  sectors  1 to EF_MAX_RING_SECTORS; narrow ones stand at the gap. The surface is divided into at
 *           least 20 steps along the iron whatever their number.
 *  ladder   out; its arrays are allocated from the context and freed by ef_ring_ladder_release
 * EF_BAD_VALUE: "ring outer diameter", "ring inner diameter", "ring height", "gap" (must be below
 * half of the mean diameter and 0.9 of the inner diameter), "gaps", "sectors";
 * EF_OUT_OF_RANGE "ring": dimensions so extreme that the result overflows.
 * Method: surface charges on flat panels, collocation, dense solve (LAPACKE); exact in the limit of
 * fine panels for infinitely permeable iron. Back-to-gap ratio within 0.6 % of a 3-D finite-volume
 * solution on twelve rings with ratios from 2 to 13. Corner radii, a busbar off the axis and a near
 * return conductor are not in it. */
ef_status ef_ring_ladder_build(ef_context *context, const ef_ring_geometry *ring, size_t sectors,
                               ef_ring_ladder *ladder);
void ef_ring_ladder_release(ef_context *context, ef_ring_ladder *ladder);

#endif
