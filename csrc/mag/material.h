/* A magnetic material: its laws at several temperatures, and the law at any temperature between. */
#ifndef EF_MAG_MATERIAL_H
#define EF_MAG_MATERIAL_H

#include "law.h"

/* One measured (or given) curve at one temperature. */
typedef struct {
  double temperature;          /* degrees Celsius */
  double initial_permeability; /* relative; for EF_LAW_CURVE 0 takes it from the points */
  double saturation;           /* Js, T; for EF_LAW_CURVE 0 fits it to the last points */
  size_t count;                /* EF_LAW_CURVE: points, the first at H = 0, B = 0; else 0 */
  const double *h, *b;         /* A/m and T */
} ef_material_curve;

typedef struct ef_material ef_material;

/* A material from its curves, sorted by temperature (strictly increasing), all of one kind.
 * Everything is copied; free with ef_material_release.
 * EF_BAD_VALUE names what is wrong: a point whose B does not rise by at least mu0 times the rise of
 * H ("polarisation falls"), too few points, temperatures out of order. */
ef_status ef_material_create(ef_context *context, ef_law_kind kind, size_t curves,
                             const ef_material_curve *curve, ef_material **material);
void ef_material_release(ef_context *context, ef_material *material);

/* Doubles of storage that the law at one temperature needs (0 for closed laws). */
size_t ef_material_law_size(const ef_material *material);

/* The law at a temperature. Between curves, permeability, saturation and J at each field strength
 * are interpolated over temperature by a monotone cubic (linear between two curves); a material
 * with one curve has the same law at all temperatures (the caller says so to the user).
 *  storage  ef_material_law_size doubles, kept by the caller as long as the law is used
 * EF_OUT_OF_RANGE outside the curves' temperatures. */
ef_status ef_material_law(ef_context *context, const ef_material *material, double temperature,
                          double *storage, ef_law *law);

#endif
