/* Mode matching of a round pocket of radius a in two wide facing poles.
 *
 * Everything is relative to the uniform field of the gap g without a pocket; b = g/2. Each region
 * is solved by modes of the axial flux density:
 *  r < a, floors at L/2 = b + depth   g/L + sum a_n I0(k r)/I0(k a) cos(k z),  k = 2 pi n/L
 *  r > a, between the faces           1 + sum c_m K0(q r)/K0(q a) cos(q z),    q = 2 pi m/g
 * On r = a it is zero on the pocket's wall, |z| > b, and the same from both sides between the
 * faces, so a_n = (4/L)(sin(k b)/k + sum c_m C_mn), C_mn = integral 0..b of cos(q z) cos(k z) dz.
 * Equal radial flux density there, tested with sin(q z)/q, gives the symmetric equations
 *  c_p (b/2)(K1/K0)(q a)/q + sum over n of (4/L)(I1/I0)(k a)/k C_pn (sin(k b)/k + sum c_m C_mn) = 0
 * The rim's singular field, distance^(-1/3), makes results converge as modes^(-4/3): half the modes
 * and all of them are extrapolated. Green's theorem with the uniform field gives the lost flux
 *  1 - g/L - (4/(g a)) sum over n of a_n (I1/I0)(k a) sin(k b)/k^2. */
#include <lapacke.h>
#include <math.h>
#include <string.h>

#include "../num/bessel.h"
#include "pocket_internal.h"

#define MODES EF_POCKET_MODES

/* 1/(2^(4/3) - 1) */
#define EXTRAPOLATION 0.657963

/* Series of the pocket's modes run to this multiple of the finest mode between the faces. */
#define OVERSAMPLING 6

/* A pocket deeper than either acts on the wall's field like one of this depth, to 1e-6 (radii) and
 * 1e-3 of the wall's small part (gaps). */
#define DEEP_RADII 3.0
#define DEEP_GAPS  20.0

/* Terms below a relative size of exp(-37) are not needed. */
#define LARGEST_EXPONENT 37.0
#define MOST_FIELD_TERMS 20000
#define LOSS_TERMS       4000

static double i_ratio(double x) {
  return ef_bessel_i_scaled(1, x) / ef_bessel_i_scaled(0, x);
}

/* C_mn, with sine = sin(k b) */
static double coupling(int m, double k, double sine, double b) {
  double q = EF_PI * m / b, sign = m % 2 ? 1 : -1;
  if (fabs(q - k) < 1e-7 * q) return b / 2;
  return sign * sine * k / ((q - k) * (q + k));
}

/* (a_n) L/4 */
static double pocket_mode(const ef_pocket_modes *modes, double k) {
  double b = modes->gap / 2, sine = sin(k * b), sum = sine / k;
  for (int m = 1; m <= MODES; m++)
    sum += modes->wall[m - 1] * coupling(m, k, sine, b);
  return sum;
}

/* Lower triangle of the equations, column by column, and their right-hand side. */
static void build_equations(double a, double gap, double depth, double matrix[MODES * MODES],
                            double rhs[MODES]) {
  double b = gap / 2, length = gap + 2 * depth, c[MODES];
  int terms = (int)ceil(OVERSAMPLING * MODES * length / gap);
  memset(matrix, 0, sizeof(double) * MODES * MODES);
  memset(rhs, 0, sizeof(double) * MODES);
  for (int m = 1; m <= MODES; m++) {
    double q = EF_PI * m / b;
    matrix[(size_t)(m - 1) * (MODES + 1)] = b / (2 * q) * ef_bessel_k_ratio(q * a);
  }
  for (int n = 1; n <= terms; n++) {
    double k = 2 * EF_PI * n / length, sine = sin(k * b), weight = 4 / length * i_ratio(k * a) / k;
    for (int m = 0; m < MODES; m++)
      c[m] = coupling(m + 1, k, sine, b);
    for (int j = 0; j < MODES; j++) {
      rhs[j] -= weight * c[j] * sine / k;
      for (int i = j; i < MODES; i++)
        matrix[i + j * MODES] += weight * c[i] * c[j];
    }
  }
}

ef_status ef_pocket_modes_solve(ef_context *context, double radius, double gap, double depth,
                                ef_pocket_modes *modes) {
  double matrix[MODES * MODES], rhs[MODES], fine[MODES], coarse[MODES] = {0};
  double acting = fmin(depth, fmin(DEEP_RADII * radius, DEEP_GAPS * gap));
  *modes = (ef_pocket_modes){.radius = radius, .gap = gap, .depth = depth};
  build_equations(radius, gap, acting, matrix, rhs);
  memcpy(fine, rhs, sizeof rhs);
  memcpy(coarse, rhs, sizeof rhs / 2);
  /* The factor of the leading half is the leading half of the factor. */
  if (!isfinite(matrix[0]) ||
      LAPACKE_dpotrf_work(LAPACK_COL_MAJOR, 'L', MODES, matrix, MODES) != 0 ||
      LAPACKE_dpotrs_work(LAPACK_COL_MAJOR, 'L', MODES, 1, matrix, MODES, fine, MODES) != 0 ||
      LAPACKE_dpotrs_work(LAPACK_COL_MAJOR, 'L', MODES / 2, 1, matrix, MODES, coarse, MODES) != 0)
    return ef_fail_message(
        context, EF_SINGULAR, "pocket",
        "the pocket's dimensions are too large or too small for a finite result");
  for (int m = 0; m < MODES; m++) {
    modes->wall[m] = fine[m] + EXTRAPOLATION * (fine[m] - coarse[m]);
    modes->gain += 4 / (gap * radius) * rhs[m] * modes->wall[m];
  }
  return EF_OK;
}

double ef_pocket_modes_field(const ef_pocket_modes *modes, double r, double z) {
  double length = modes->gap + 2 * modes->depth, a = modes->radius, sum = modes->gap / length;
  for (int n = 1; n <= MOST_FIELD_TERMS; n++) {
    double k = 2 * EF_PI * n / length;
    if (k * (a - r) > LARGEST_EXPONENT) break;
    double decay = exp(-k * (a - r)) * ef_bessel_i_scaled(0, k * r) / ef_bessel_i_scaled(0, k * a);
    sum += 4 / length * pocket_mode(modes, k) * decay * cos(k * z);
  }
  return sum;
}

double ef_pocket_modes_loss(const ef_pocket_modes *modes, double *outside) {
  double a = modes->radius, gap = modes->gap, length = gap + 2 * modes->depth, sum = 0;
  *outside = 0;
  for (int m = 1; m <= MODES; m++) {
    double x = 2 * EF_PI * m / gap * a;
    *outside -= modes->wall[m - 1] * 2 / x * ef_bessel_k_ratio(x);
  }
  if (modes->depth == 0) return 0;
  for (int n = 1; n <= LOSS_TERMS; n++) {
    double k = 2 * EF_PI * n / length, sine = sin(k * gap / 2) / k;
    sum += i_ratio(k * a) / k * sine * sine;
  }
  /* The rest of the series with the mean of the squared sine. */
  double last = 2 * EF_PI * (LOSS_TERMS + 0.5) / length;
  sum += length / (2 * EF_PI) / (4 * last * last);
  return 1 - gap / length - 16 / (gap * a * length) * sum + modes->gain;
}
