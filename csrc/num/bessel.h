/* The few Bessel functions that the core needs, for real x. */
#ifndef EF_NUM_BESSEL_H
#define EF_NUM_BESSEL_H

/* Modified Bessel function exp(-x) I_order(x) of order 0 or 1, x >= 0, to about 1e-14 relative.
 * Source: power series and asymptotic series, Abramowitz and Stegun, Handbook of Mathematical
 * Functions (1964), ch. 9 (from memory). */
double ef_bessel_i_scaled(int order, double x);

/* K1(x)/K0(x), x > 0, to about 1e-14 relative.
 * Source: the integral of exp(-x cosh t) cosh(order t) dt, there too (from memory), by the
 * trapezoidal rule, whose error falls exponentially here. */
double ef_bessel_k_ratio(double x);

#endif
