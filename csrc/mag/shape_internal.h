/* What the shape files share: checks of dimensions and the assembly of sections. */
#ifndef EF_MAG_SHAPE_INTERNAL_H
#define EF_MAG_SHAPE_INTERNAL_H

#include "shape.h"

/* A bound of a dimension with the name that the message gives it, e.g. {"A", 0.042}. No lower
 * bound: {"0", 0}; no upper one: {NULL, INFINITY}. */
typedef struct {
  const char *name;
  double value; /* m */
} ef_shape_bound;

/* EF_OK when low < value < high, else EF_BAD_VALUE with both bounds in the message. */
ef_status ef_shape_between(ef_context *context, const char *letter, double value,
                           ef_shape_bound low, ef_shape_bound high);

/* The evaluators, one per group of families. Dimensions (m) are finite, required ones positive;
 * they fill everything but the family. EF_BAD_VALUE names the dimension that makes the shape
 * impossible. */
ef_status ef_shape_ring(ef_context *context, const double *d, ef_core_geometry *g);
ef_status ef_shape_u(ef_context *context, const double *d, ef_core_geometry *g);
ef_status ef_shape_e(ef_context *context, const double *d, ef_core_geometry *g);
ef_status ef_shape_efd(ef_context *context, const double *d, ef_core_geometry *g);
ef_status ef_shape_round_post(ef_context *context, const double *d, ef_core_geometry *g);
ef_status ef_shape_pot(ef_context *context, const double *d, ef_core_geometry *g);
ef_status ef_shape_ep(ef_context *context, const double *d, ef_core_geometry *g);
ef_status ef_shape_rm(ef_context *context, const double *d, ef_core_geometry *g);
ef_status ef_shape_pq(ef_context *context, const double *d, ef_core_geometry *g);

/* An E frame: rectangular outer legs and yokes of one depth around a centre leg (m, m2). */
typedef struct {
  double depth, window_depth; /* C, and D of one half */
  double leg, yoke;           /* thickness of an outer leg and of a yoke */
  double arm;                 /* length of one yoke arm between the legs */
  double half_post;           /* half of the centre leg's width */
  double post_area;           /* of the whole centre leg */
} ef_shape_frame;

/* Sections, window height and half height of an E frame; then its effective parameters. */
ef_status ef_shape_set_frame(ef_context *context, const ef_shape_frame *frame, ef_core_geometry *g);

/* A shell around a round post, all the way around: areas and lengths of the whole shell, of both
 * yokes or of both corners in series (m, m2). */
typedef struct {
  double outer_height, window_height;
  double post_area, shell_area;
  double yoke_c1, yoke_c2;                 /* sum l/A and l/A2 of both yokes, 1/m and 1/m3 */
  double yoke_inner_area, yoke_outer_area; /* of a yoke where it starts at the post and ends */
  ef_section centre_corner, outer_corner;
  double shell_thickness; /* of a leg's rectangular stand-in as a pole */
  double post_diameter, post_hole, window_diameter;
} ef_shape_shell;

/* Everything of a shell core but leakage, envelope and surface. */
ef_status ef_shape_set_shell(ef_context *context, const ef_shape_shell *shell, ef_core_geometry *g);

/* Effective parameters and volume of a geometry whose topology and sections are set. */
ef_status ef_shape_sum(ef_context *context, ef_core_geometry *g);

/* A box as envelope and surface. */
void ef_shape_set_box(ef_core_geometry *g, double width, double depth, double height);

ef_pole ef_shape_rectangle_pole(double width, double depth);
ef_pole ef_shape_round_pole(double diameter, double hole);

/* Leakage permeance / mu0 across one window of an E frame, or between the legs of a U, per unit of
 * leg length.
 *  facing  m, depth over which the legs face each other    depth  m, of the outer legs
 *  post, window, leg  m, half width of the centre leg, distance, width of the outer leg */
double ef_shape_e_leakage(double facing, double depth, double post, double window, double leg);
double ef_shape_u_leakage(double depth, double window, double leg);

/* The same across one window of a shell around a round post.
 *  shell, post  m, diameters    slots  number of openings per window    angle  rad, of one */
double ef_shape_coaxial_leakage(double shell, double post, double slots, double angle);

#endif
