/* Potential and field of a uniformly charged rectangle, and the ring's mirror images. */
#include <float.h>
#include <math.h>

#include "ring_internal.h"

/* Distances in units of the longest side beyond which 2 x 2 Gauss points, then one point stand for
 * the closed form: the relative error of the potential stays below 1e-4 and 1e-3. */
#define NEAR 2.5
#define FAR  8.0

/* Coordinates of a point in the rectangle's frame: across, along, normal. */
static void to_frame(const ef_rectangle *r, const double point[3], double local[3]) {
  double d[3];
  for (int i = 0; i < 3; i++)
    d[i] = point[i] - r->centre[i];
  const double *a = r->across, *b = r->along;
  local[0] = a[0] * d[0] + a[1] * d[1] + a[2] * d[2];
  local[1] = b[0] * d[0] + b[1] * d[1] + b[2] * d[2];
  local[2] = (a[1] * b[2] - a[2] * b[1]) * d[0] + (a[2] * b[0] - a[0] * b[2]) * d[1] +
             (a[0] * b[1] - a[1] * b[0]) * d[2];
}

/* ln(v + R) with R = sqrt(u^2 + v^2 + w^2), without cancellation for negative v. */
static double log_sum(double v, double distance, double others_squared) {
  double sum = v >= 0 ? v + distance : others_squared / (distance - v);
  return log(fmax(sum, DBL_MIN));
}

/* Sum over the corners, each with its sign, of the closed forms:
 *  potential  u ln(v + R) + v ln(u + R) - w atan(uv / (wR))
 *  field      ln(v + R), ln(u + R), atan(uv / (wR)) */
static double corner_sums(const ef_rectangle *r, const double local[3], double field[3]) {
  double w = local[2], potential = 0;
  field[0] = field[1] = field[2] = 0;
  for (int corner = 0; corner < 4; corner++) {
    double u = (corner & 1 ? r->half_across : -r->half_across) - local[0];
    double v = (corner & 2 ? r->half_along : -r->half_along) - local[1];
    double sign = corner == 0 || corner == 3 ? 1 : -1;
    double distance = sqrt(u * u + v * v + w * w);
    double log_v = log_sum(v, distance, u * u + w * w);
    double log_u = log_sum(u, distance, v * v + w * w);
    double angle = w != 0 ? atan(u * v / (w * distance)) : 0;
    potential += sign * (u * log_v + v * log_u - w * angle);
    field[0] += sign * log_v;
    field[1] += sign * log_u;
    field[2] += sign * angle;
  }
  return potential;
}

double ef_rectangle_potential(const ef_rectangle *r, const double point[3]) {
  double local[3], unused[3];
  to_frame(r, point, local);
  double longest = 2 * fmax(r->half_across, r->half_along);
  double squared = local[0] * local[0] + local[1] * local[1] + local[2] * local[2];
  double area = 4 * r->half_across * r->half_along;
  if (squared < NEAR * NEAR * longest * longest) return corner_sums(r, local, unused) / (4 * EF_PI);
  if (squared > FAR * FAR * longest * longest) return area / (4 * EF_PI * sqrt(squared));
  double sum = 0;
  for (int k = 0; k < 4; k++) {
    double u = (k & 1 ? 1 : -1) * r->half_across / sqrt(3.0) - local[0];
    double v = (k & 2 ? 1 : -1) * r->half_along / sqrt(3.0) - local[1];
    sum += 1 / sqrt(u * u + v * v + local[2] * local[2]);
  }
  return area / 4 * sum / (4 * EF_PI);
}

void ef_rectangle_add_field(const ef_rectangle *r, const double point[3], double weight,
                            double field[3]) {
  double local[3], part[3];
  to_frame(r, point, local);
  corner_sums(r, local, part);
  const double *a = r->across, *b = r->along;
  double normal[3] = {a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2],
                      a[0] * b[1] - a[1] * b[0]};
  for (int i = 0; i < 3; i++)
    field[i] += weight / (4 * EF_PI) * (part[0] * a[i] + part[1] * b[i] + part[2] * normal[i]);
}

size_t ef_ring_images(int gaps, const double point[3], ef_ring_image image[EF_MAX_RING_IMAGES]) {
  size_t count = gaps == 2 ? 8 : 4;
  for (size_t k = 0; k < count; k++) {
    double turned = k & 4 ? -1 : 1;
    ef_ring_image *m = &image[k];
    m->charge_sign = k & 1 ? -1 : 1;
    m->x_sign = turned;
    m->y_sign = turned * m->charge_sign;
    m->z_sign = k & 2 ? -1 : 1;
    m->point[0] = m->x_sign * point[0];
    m->point[1] = m->y_sign * point[1];
    m->point[2] = m->z_sign * point[2];
  }
  return count;
}
