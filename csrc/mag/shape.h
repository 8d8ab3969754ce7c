/* Core shapes: from the dimensions of a core set (both halves) to its effective parameters by
 * IEC 60205, and to the limbs, poles and window that the reluctance network and the gap need. */
#ifndef EF_MAG_SHAPE_H
#define EF_MAG_SHAPE_H

#include "../num/context.h"

typedef enum {
  EF_SHAPE_RING,
  EF_SHAPE_U,
  EF_SHAPE_E,
  EF_SHAPE_PLANAR_E,
  EF_SHAPE_ETD,
  EF_SHAPE_EER,
  EF_SHAPE_EC,
  EF_SHAPE_EFD,
  EF_SHAPE_EP,
  EF_SHAPE_PQ,
  EF_SHAPE_RM,
  EF_SHAPE_POT,
  EF_SHAPE_COUNT
} ef_shape_family;

/* How the limbs hang together: one closed ring; two legs and two yokes; one centre leg between two
 * outer legs (of a pot-like core: the two halves of its shell). */
typedef enum { EF_TOPOLOGY_RING, EF_TOPOLOGY_TWO_LEG, EF_TOPOLOGY_THREE_LEG } ef_topology;

typedef enum { EF_POLE_RECTANGLE, EF_POLE_ROUND } ef_pole_shape;

/* The cross-section of a leg where it faces a gap (m). */
typedef struct {
  ef_pole_shape shape;
  double width;  /* across the leg in the plane of the section; a round pole's diameter */
  double depth;  /* the other way; equal to width for a round pole */
  double hole;   /* diameter of a central hole, 0 for none */
  double corner; /* corner radius of a rectangle, 0 for sharp */
} ef_pole;

/* A piece of the magnetic path: length along it and the cross-section it offers there. */
typedef struct {
  double length; /* m */
  double area;   /* m2 */
} ef_section;

#define EF_SHAPE_MAX_DIMENSIONS 12

/* The geometry of one core set. Sections (series and parallel sums over them give c1 and c2
 * exactly):
 * - ring: `yoke` is the whole closed path, the other sections are zero.
 * - two legs: `outer_leg` is one leg, `yoke` one of the two yokes, `outer_corner` one of the four
 *   corners; centre_leg and centre_corner are zero.
 * - three legs: `centre_leg` the whole centre leg, `outer_leg` ONE outer leg (or half of the
 *   shell), `yoke` one of the four yoke arms, `centre_corner` the part of ONE arm's corner at the
 *   centre leg (with half of the centre leg's area in its average), `outer_corner` one of four.
 *
 * All leg lengths run through both halves, from yoke face to yoke face, gaps not taken off. The
 * outer pole of a shell core (EP, PQ, RM, pot) is the rectangle of the half shell's area and mean
 * thickness. */
typedef struct {
  ef_shape_family family;
  ef_topology topology;
  ef_section centre_leg, outer_leg, yoke, centre_corner, outer_corner;
  ef_pole centre_pole, outer_pole; /* ring: outer_pole is its cross-section (radial x axial) */
  double half_height;              /* m, of one half along the leg, yoke included; ring: 0 */
  double window_height;            /* m, leg length through both halves; ring: its inner diameter */
  double window_width;             /* m, from leg to leg of one window; ring: its inner radius */
  double window_area;              /* m2, of one window (of three-leg cores: one of the two) */
  /* Leakage permeance across ONE window per unit of leg height, divided by mu0 (no unit): facing
   * sides plus the fringe in front and behind; a closed form, a few per cent off the plane's field
   * solution (shape_leakage.c). 0 for a ring. */
  double window_leakage;
  double inner_turn; /* m, girth of the leg that carries the winding (centre leg; one leg of a
                        two-leg core; ring: girth of its section) */
  double ring_outer_diameter, ring_inner_diameter, ring_height; /* m, ring only, else 0 */
  double c1, c2;                                                /* core constants, 1/m and 1/m3 */
  double effective_length, effective_area, effective_volume;    /* m, m2, m3 */
  double minimum_area;                                          /* m2 */
  double iron_volume; /* m3, sum of the sections' lengths times areas (ring: exact); mass =
                         density times it, within some per cent as corners are approximate */
  double
      outer_surface; /* m2, of the core set's envelope that meets the air: a box; pot: a cylinder;
                        ring: with its bore. Windings that stand out are not counted. */
  double envelope_width, envelope_depth, envelope_height; /* m, outer size of the core set */
} ef_core_geometry;

/* The trade name of a family ("ring", "planar E", ...); NULL beyond the last. */
const char *ef_shape_name(ef_shape_family family);

/* The letters of a family's dimensions in the order that ef_shape_evaluate wants them, ended by
 * NULL, e.g. {"A","B","C","D","E","F",NULL}; their meaning stands at the head of the family's
 * source file (shape_rectangular.c, shape_round_post.c, ...). An optional dimension ends in '?',
 * and is 0 when not given. NULL beyond the last family. */
const char *const *ef_shape_letters(ef_shape_family family);

/* Geometry of a core set from its mean dimensions.
 *  dimensions  m, as many as ef_shape_letters lists, in that order (a count such as the number of
 *              slots is a plain number; optional ones may be 0)
 *  geometry    out
 * EF_BAD_VALUE names the dimension that is not from 1e-9 m to 1000 m, or that makes the shape
 * impossible (e.g. "dimension E" not between F and A); *geometry is then left alone.
 * Source: IEC 60205 (formulas from memory; EC and EP reconstructed, no published check). Chamfers,
 * small cut-outs and corner radii but a ring's are ignored, as the standard does. */
ef_status ef_shape_evaluate(ef_context *context, ef_shape_family family, const double *dimensions,
                            ef_core_geometry *geometry);

/* Effective parameters of any closed series path: C1 = sum l/A, C2 = sum l/A^2, le = C1^2/C2,
 * Ae = C1/C2, Ve = C1^3/C2^2, the smallest area and the volume, written into *geometry (the other
 * fields are left alone). count >= 1 sections, all positive, else EF_BAD_VALUE.
 * Source: IEC 60205, definitions. Valid for a uniform flux over each section. */
ef_status ef_shape_effective(ef_context *context, size_t count, const ef_section *sections,
                             ef_core_geometry *geometry);

#endif
