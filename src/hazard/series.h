/* Logarithm and exponential as plain arithmetic without branches, tables or calls, which a compiler can do on several
 * numbers at once. Each is a reduction to a short range and a polynomial through Chebyshev's points there, within
 * 2e-17; in all within 3 units of the last place. Tests: test_hazard_many.c */
#ifndef BEAMWARD_HAZARD_SERIES_H
#define BEAMWARD_HAZARD_SERIES_H

#include <stdint.h>
#include <string.h>

/* ln 2 in two parts; a whole number up to 2047 times the first is exact */
static const double hazard_ln_2_part_1 = 0x1.62e42fefa3800p-1, hazard_ln_2_part_2 = 0x1.ef35793c76730p-45;

/* ln x of a positive, finite x that is not tiny (1e-300 and up).
 * x = 2^k m, m from sqrt(1/2) to sqrt(2); ln m = 2 artanh s, s = (m - 1)/(m + 1). */
static inline double series_log(double x) {
    static const uint64_t root_half = 0x3fe6a09e667f3bcd, one = 0x3ff0000000000000, fraction = 0x000fffffffffffff;
    static const uint64_t two_to_52 = 0x4330000000000000;
    static const double bias = 0x1p52 + 1023.0;
    static const double c0 = 0x1.5555555555558p-1, c1 = 0x1.99999999952d7p-2, c2 = 0x1.2492492df281ap-2,
                        c3 = 0x1.c71c62e3f11e6p-3, c4 = 0x1.7462b51cb66b1p-3, c5 = 0x1.39fe51a7c18f9p-3,
                        c6 = 0x1.2b5900de53b32p-3;
    uint64_t bits, exponent;
    double m, k;
    memcpy(&bits, &x, sizeof bits);
    bits += one - root_half;
    exponent = (bits >> 52) | two_to_52; /* as the low bits of a number, it becomes one without a conversion */
    memcpy(&k, &exponent, sizeof k);
    k -= bias;
    bits = (bits & fraction) + root_half;
    memcpy(&m, &bits, sizeof m);
    double s = (m - 1.0) / (m + 1.0), z = s * s, z2 = z * z, z4 = z2 * z2;
    double rest = z * (((c0 + c1 * z) + z2 * (c2 + c3 * z)) + z4 * ((c4 + c5 * z) + z2 * c6));
    return k * hazard_ln_2_part_1 + (2.0 * s + (s * rest + k * hazard_ln_2_part_2));
}

/* -ln(1 - q) for q from 1e-300 to below 1; nothing cancels for a small q.
 * With v the rounded 1 - q it is -ln v - e/v, e what rounding took: nothing for q above 1/2, at most 2^-54 below, so
 * that e/v differs from e by less than counts. */
static inline double series_minus_log_of_rest(double q) {
    double v = 1.0 - q, e = (1.0 - v) - q;
    return -(series_log(v) + e);
}

/* 1 - e^-x for x from 0 to infinity; nothing cancels for a small x.
 * e^-x = 2^n e^r, |r| <= ln(2)/2; e^r = 1 + r + r^2 q(r). NaN stays. */
static inline double series_one_minus_exp(double x) {
    static const double log2_of_e = 0x1.71547652b82fep+0;
    static const double whole = 0x1.8p52, bias = 1023.0; /* see power_of_ten.h in limits */
    static const double q0 = 0x1.0000000000001p-1, q1 = 0x1.5555555555556p-3, q2 = 0x1.5555555553d63p-5,
                        q3 = 0x1.11111111109b3p-7, q4 = 0x1.6c16c1788bd90p-10, q5 = 0x1.a01a01a7c41d5p-13,
                        q6 = 0x1.a019b90d2ae7ap-16, q7 = 0x1.71de0dae63bb3p-19, q8 = 0x1.289185613a3d6p-22,
                        q9 = 0x1.af38a9b0ec855p-26;
    x = x > 50.0 ? 50.0 : x; /* e^-50 is nothing beside 1 */
    double n = (whole - x * log2_of_e) - whole;
    double r = (-x - n * hazard_ln_2_part_1) - n * hazard_ln_2_part_2, r2 = r * r, r4 = r2 * r2;
    double q = ((q0 + q1 * r) + r2 * (q2 + q3 * r)) + r4 * (((q4 + q5 * r) + r2 * (q6 + q7 * r)) + r4 * (q8 + q9 * r));
    double scale = n + (whole + bias);
    uint64_t bits;
    memcpy(&bits, &scale, sizeof bits);
    bits <<= 52;
    memcpy(&scale, &bits, sizeof scale);
    return (1.0 - scale) - scale * (r + r2 * q);
}

#endif
