#include "material.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

/* All curves are brought to one common set of field strengths, so that a temperature between them
 * needs one interpolation per field strength. */
struct ef_material {
  ef_law_kind kind;
  size_t curves, points; /* points is 0 for closed laws */
  size_t block;          /* doubles in `memory` */
  double *memory;
  double *temperature;  /* curves */
  double *permeability; /* curves */
  double *saturation;   /* curves */
  double *h;            /* points */
  double *j;            /* points * curves, curve fastest */
};

static ef_status check_curve(ef_context *context, ef_law_kind kind, const ef_material_curve *c,
                             const ef_material_curve *before) {
  char allowed[EF_ALLOWED_SIZE];
  if (!isfinite(c->temperature))
    return ef_fail(context, EF_BAD_VALUE, "temperature of a curve", c->temperature,
                   "a finite number of degrees Celsius");
  if (before && c->temperature <= before->temperature)
    return ef_fail(context, EF_BAD_VALUE, "temperature of a curve", c->temperature,
                   "above that of the curve before");
  if (kind != EF_LAW_CURVE) return EF_OK;
  if (c->count < 3)
    return ef_fail(context, EF_BAD_VALUE, "number of points of the curve", (double)c->count,
                   "at least 3, the first at H = 0, B = 0");
  for (size_t i = 0; i < c->count; i++) {
    char field[EF_FIELD_SIZE];
    double rise = i ? c->h[i] - c->h[i - 1] : 1;
    if (!isfinite(c->h[i]) || !isfinite(c->b[i])) {
      snprintf(field, sizeof field, "point %zu of the curve", i + 1);
      return ef_fail(context, EF_BAD_VALUE, field, isfinite(c->h[i]) ? c->b[i] : c->h[i],
                     "finite numbers");
    }
    if (!(rise > 0)) {
      snprintf(field, sizeof field, "field strength of point %zu of the curve", i + 1);
      snprintf(allowed, sizeof allowed, "above %.6g A/m, that of the point before", c->h[i - 1]);
      return ef_fail(context, EF_BAD_VALUE, field, c->h[i], allowed);
    }
    if (i && c->b[i] - c->b[i - 1] < EF_MU0 * rise * (1 - 1e-9)) {
      snprintf(field, sizeof field, "flux density of point %zu of the curve", i + 1);
      snprintf(allowed, sizeof allowed,
               "at least %.6g T: the rise from the point before is at least mu0 times that of H",
               c->b[i - 1] + EF_MU0 * rise);
      return ef_fail(context, EF_BAD_VALUE, field, c->b[i], allowed);
    }
  }
  return EF_OK;
}

/* Sorted union of the curves' field strengths into h (room for all points); returns the count. */
static size_t unite_fields(size_t curves, const ef_material_curve *curve, double *h) {
  size_t count = 0;
  for (size_t c = 0; c < curves; c++)
    for (size_t i = 0; i < curve[c].count; i++) {
      double value = curve[c].h[i];
      size_t at = count;
      while (at > 0 && h[at - 1] > value)
        at--;
      /* Points closer than a millionth are one: a piece between them would be all rounding. */
      if (at > 0 && value - h[at - 1] <= 1e-6 * value) continue;
      if (at < count && h[at] - value <= 1e-6 * value) continue;
      memmove(h + at + 1, h + at, (count - at) * sizeof *h);
      h[at] = value;
      count++;
    }
  return count;
}

/* J of one curve at the common field strengths. */
static ef_status resample(ef_context *context, const ef_material_curve *c, ef_material *m,
                          size_t index) {
  size_t room = c->count + EF_CURVE_STORAGE(c->count);
  double *j = ef_allocate(context, room, sizeof *j);
  if (!j) return EF_NO_MEMORY;
  for (size_t i = 0; i < c->count; i++) {
    j[i] = c->b[i] - EF_MU0 * c->h[i];
    if (i && j[i] < j[i - 1]) j[i] = j[i - 1]; /* within the rounding that check_curve allows */
  }
  ef_law law;
  ef_status status = ef_law_points(context, c->count, c->h, j, j + c->count,
                                   c->initial_permeability, c->saturation, &law);
  if (status == EF_OK) {
    size_t hint = 0;
    m->permeability[index] = law.susceptibility + 1;
    m->saturation[index] = law.saturation;
    for (size_t i = 0; i < m->points; i++)
      m->j[i * m->curves + index] = ef_law_at(&law, m->h[i], &hint).polarisation;
  }
  ef_release(context, j, room, sizeof *j);
  return status;
}

static ef_status fill_closed(ef_context *context, const ef_material_curve *c, ef_material *m,
                             size_t index) {
  ef_law law;
  ef_status status = ef_law_closed(context, m->kind, c->initial_permeability, c->saturation, &law);
  if (status != EF_OK) return status;
  m->permeability[index] = c->initial_permeability;
  m->saturation[index] = law.saturation;
  return EF_OK;
}

static ef_status allocate_material(ef_context *context, ef_law_kind kind, size_t curves,
                                   size_t points, ef_material **material) {
  ef_material *m = ef_allocate(context, 1, sizeof *m);
  if (!m) return EF_NO_MEMORY;
  *m = (ef_material){.kind = kind,
                     .curves = curves,
                     .points = points,
                     .block = 3 * curves + points + points * curves};
  m->memory = ef_allocate(context, m->block, sizeof(double));
  if (!m->memory) {
    ef_release(context, m, 1, sizeof *m);
    return EF_NO_MEMORY;
  }
  m->temperature = m->memory;
  m->permeability = m->temperature + curves;
  m->saturation = m->permeability + curves;
  m->h = m->saturation + curves;
  m->j = m->h + points;
  *material = m;
  return EF_OK;
}

ef_status ef_material_create(ef_context *context, ef_law_kind kind, size_t curves,
                             const ef_material_curve *curve, ef_material **material) {
  size_t total = 0;
  if (curves == 0) return ef_fail(context, EF_BAD_VALUE, "number of curves", 0, "at least 1");
  for (size_t c = 0; c < curves; c++) {
    ef_status status = check_curve(context, kind, &curve[c], c ? &curve[c - 1] : NULL);
    if (status != EF_OK) return status;
    total += kind == EF_LAW_CURVE ? curve[c].count : 0;
  }
  double *h = ef_allocate(context, total, sizeof *h);
  if (!h) return EF_NO_MEMORY;
  size_t points = total ? unite_fields(curves, curve, h) : 0;
  ef_material *m = NULL;
  ef_status status = allocate_material(context, kind, curves, points, &m);
  if (status == EF_OK) {
    memcpy(m->h, h, points * sizeof *h);
    for (size_t c = 0; c < curves && status == EF_OK; c++) {
      m->temperature[c] = curve[c].temperature;
      status = points ? resample(context, &curve[c], m, c) : fill_closed(context, &curve[c], m, c);
    }
    if (status == EF_OK)
      *material = m;
    else
      ef_material_release(context, m);
  }
  ef_release(context, h, total, sizeof *h);
  return status;
}

void ef_material_release(ef_context *context, ef_material *material) {
  if (!material) return;
  ef_release(context, material->memory, material->block, sizeof(double));
  ef_release(context, material, 1, sizeof *material);
}

size_t ef_material_law_size(const ef_material *material) {
  return 2 * material->points + EF_CURVE_STORAGE(material->points);
}

/* Where a temperature lies: exactly the same monotone cubic serves every quantity. */
typedef struct {
  const ef_material *material;
  size_t piece;
  double temperature;
} temperature_place;

/* Monotone cubic over temperature through the curves' values: slopes as in ef_curve_slopes, which
 * wants non-decreasing ordinates, so a falling sequence is turned over. Quantities that go up and
 * down (a permeability with a maximum) get slope 0 at the turn by the same rule, piece by piece. */
static double slope_at(const double *t, const double *y, size_t count, size_t i) {
  if (i == 0 || i + 1 == count) {
    size_t a = i == 0 ? 0 : i - 1;
    return (y[a + 1] - y[a]) / (t[a + 1] - t[a]);
  }
  double before = t[i] - t[i - 1], after = t[i + 1] - t[i];
  double left = (y[i] - y[i - 1]) / before, right = (y[i + 1] - y[i]) / after;
  if (left * right <= 0) return 0;
  double weight_left = before + 2 * after, weight_right = 2 * before + after;
  return (weight_left + weight_right) / (weight_left / left + weight_right / right);
}

static double over_temperature(const temperature_place *place, const double *y) {
  const ef_material *m = place->material;
  size_t i = place->piece;
  if (m->curves == 1) return y[0];
  double step = m->temperature[i + 1] - m->temperature[i];
  double s = (place->temperature - m->temperature[i]) / step;
  double m0 = slope_at(m->temperature, y, m->curves, i) * step;
  double m1 = slope_at(m->temperature, y, m->curves, i + 1) * step;
  return y[i] * (1 - s) * (1 - s) * (1 + 2 * s) + y[i + 1] * s * s * (3 - 2 * s) +
         m0 * s * (1 - s) * (1 - s) - m1 * s * s * (1 - s);
}

static ef_status find_temperature(ef_context *context, const ef_material *m, double temperature,
                                  temperature_place *place) {
  double low = m->temperature[0], high = m->temperature[m->curves - 1];
  *place = (temperature_place){m, 0, temperature};
  if (!isfinite(temperature))
    return ef_fail(context, EF_BAD_VALUE, "temperature", temperature, "a finite number");
  if (m->curves == 1) return EF_OK;
  if (temperature < low || temperature > high) {
    char allowed[EF_ALLOWED_SIZE];
    snprintf(allowed, sizeof allowed,
             "from %g to %g degrees Celsius, the range of the material's"
             " curves",
             low, high);
    return ef_fail(context, EF_OUT_OF_RANGE, "temperature", temperature, allowed);
  }
  while (place->piece + 2 < m->curves && temperature > m->temperature[place->piece + 1])
    place->piece++;
  return EF_OK;
}

ef_status ef_material_law(ef_context *context, const ef_material *material, double temperature,
                          double *storage, ef_law *law) {
  temperature_place place;
  ef_status status = find_temperature(context, material, temperature, &place);
  if (status != EF_OK) return status;
  double permeability = over_temperature(&place, material->permeability);
  double saturation =
      material->kind == EF_LAW_LINEAR ? HUGE_VAL : over_temperature(&place, material->saturation);
  if (material->kind != EF_LAW_CURVE)
    return ef_law_closed(context, material->kind, permeability, saturation, law);
  size_t n = material->points;
  double *h = storage, *j = storage + n;
  memcpy(h, material->h, n * sizeof *h);
  for (size_t i = 0; i < n; i++) {
    j[i] = over_temperature(&place, material->j + i * material->curves);
    if (i && j[i] < j[i - 1]) j[i] = j[i - 1]; /* rounding, or curves that cross */
  }
  if (saturation < j[n - 1]) saturation = j[n - 1];
  return ef_law_points(context, n, h, j, storage + 2 * n, permeability, saturation, law);
}
