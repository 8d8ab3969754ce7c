/* Permeance of an air gap between two facing poles: closed forms, and the one struct in which any
 * method, also a field solution, hands its answer to the network. */
#ifndef EF_MAG_GAP_H
#define EF_MAG_GAP_H

#include "../num/context.h"
#include "shape.h"

/* What a pole's edge sees beyond the gap. It decides how far the fringing flux can spread. */
typedef enum {
  EF_EDGE_FREE,       /* open space beside a side wall of height `reach` (m): published asymptote */
  EF_EDGE_FREE_EXACT, /* the same without the asymptote: exact for any wall height */
  EF_EDGE_NEAR_YOKE,  /* an iron yoke carries the pole at `reach` = half the window height (m) from
                         the middle of the gap, more than half the gap: exact for a yoke without
                         end; for reach >> gap the basic term with wall height 2 reach/pi */
  EF_EDGE_NEAR_LEG,   /* a leg at the potential of the gap's middle stands at `reach` (m) across the
                         window; the flux that crosses the window evenly (the ladder's rungs) is NOT
                         part of this permeance */
  EF_EDGE_NONE        /* no edge: the pole goes on, e.g. half of a closed shell; reach is ignored */
} ef_edge_kind;

typedef struct {
  ef_edge_kind kind;
  double reach; /* m, as the kind says */
} ef_edge;

typedef enum {
  EF_GAP_PLAIN,      /* mu0 A / length, no fringing: the plain series estimate */
  EF_GAP_ADD_LENGTH, /* pole enlarged by the gap's length (half on each side) */
  EF_GAP_HANDBOOK,   /* logarithmic handbook factor 1 + lg/sqrt(A) ln(2G/lg) */
  EF_GAP_CONFORMAL,  /* Schwarz-Christoffel permeances of the edges, combined to three dimensions */
  EF_GAP_METHOD_COUNT
} ef_gap_method;

typedef struct {
  ef_pole pole;
  double length;         /* m, one gap */
  ef_edge x_low, x_high; /* edges across the width; a round pole's edge all around is the mean of
                            the four edges */
  ef_edge y_low, y_high; /* edges across the depth */
  double winding_length; /* m, G of the handbook factor: window height */
} ef_gap_geometry;

#define EF_NOTE_SIZE 160

typedef struct {
  double permeance;           /* H (Wb per A) */
  double permeance_by_length; /* H/m, derivative with respect to the gap's length, pole and reaches
                                 held */
  double fringing;            /* permeance / (mu0 A / length) */
  double face;                /* mean flux density on the pole face / (mu0 u / length), u the gap's
                                 magnetomotive force: the face's part of the conformal edges, whose
                                 rest leaves the side walls; 1 for the plain method */
  int valid;                  /* 1 inside the method's range of validity */
  char note[EF_NOTE_SIZE];    /* empty, or one sentence: which range is left and what that costs */
} ef_gap_permeance;

/* Short name of a method ("plain", "added length", "handbook", "conformal"); NULL beyond. */
const char *ef_gap_method_name(ef_gap_method method);

/* Permeance of one gap by one method.
 * Never extrapolates silently: outside the range the value is still computed where the formula is
 * finite, valid is 0 and the note says so; where the formula has no finite positive value:
 * EF_OUT_OF_RANGE. EF_BAD_VALUE names the field: "gap length", "pole width", "pole depth", "pole
 * diameter", "pole hole", "pole corner", "winding length" (handbook only), "edge x_low reach" ...
 * (conformal only). A hole and rounded corners are taken off the pole's area; with a hole valid
 * stays 1 and the note calls the fringing methods approximate.
 *
 * Plain: mu0 A/length. Valid as the lower estimate that it is.
 * Added length: (a + g)(b + g)/(a b), round ((D + g)/D)^2. L. W. Matsch, Capacitors, Magnetic
 *  Circuits, and Transformers, ch. 3-12. Valid for g <= 0.1 of the smaller side; there 0 to 20 %
 * low (round post between yokes). Handbook: 1 + g/sqrt(A) ln(2 G/g). W. T. McLyman, Transformer and
 * Inductor Design Handbook (from memory). Valid for G >= 2.5 g and g <= 0.25 sqrt(A): -8 to +3 %
 * against the same post. Conformal: per direction sigma = (w/g)/(w/g + (p_low + p_high)/2),
 * reluctance sigma_x sigma_y g/(mu0 A); round: sigma^2 with w = diameter. Balakrishnan, Joines,
 * Wilson, IEEE Trans. Power Electron. 12(4), 1997; Muehlethaler, Kolar, Ecklebe, ICPE-ECCE Asia
 * 2011 (both from memory). Valid for poles at least as wide as the gap and free walls of at
 * least 2.5 gap lengths: within 3 % of a post between yokes, 2 to 9 % high for thin plates. */
ef_status ef_gap_evaluate(ef_context *context, ef_gap_method method,
                          const ef_gap_geometry *geometry, ef_gap_permeance *result);

/* Dimensionless permeance (per mu0 and unit depth) of one edge over the mid-plane: what one edge
 * adds to the uniform flux X/l of the face, l = half the gap's length.
 *  kind, reach as ef_edge; half_length l in m; *by_length gets d(permeance)/dl in 1/m (NULL ok).
 * EF_BAD_VALUE: "edge reach", "half length of the gap", "edge kind"; EF_OUT_OF_RANGE: a free wall
 * so low (reach < 0.47 l) that the asymptote is not positive. Source: Schwarz-Christoffel maps; the
 * free edge is F. W. Carter's (1901), the others are derived in docs/methods/gap.md. The asymptote
 * of EF_EDGE_FREE is 21 % low at reach = 2 l, 6.9 % at 5 l, 3 % at 10 l; the other kinds are exact
 * for one edge in two dimensions. */
ef_status ef_gap_edge(ef_context *context, const ef_edge *edge, double half_length,
                      double *permeance, double *by_length);

/* Flux density in the middle plane of a gap at a single edge, relative to the field deep inside:
 * x in units of half the gap's length, > 0 under the pole, < 0 outside. Exact for one right-angled
 * edge with a high wall. */
double ef_gap_midplane_edge(double x);

/* The same on the middle plane of a whole pole at (x, y) from its axis, m: product of its edges
 * (round: by radius). *valid 0 when the pole is narrower than one and a half gap lengths or the
 * point lies outside the pole by more than one gap length, else 1. */
double ef_gap_midplane(const ef_gap_geometry *geometry, double x, double y, int *valid);

#endif
