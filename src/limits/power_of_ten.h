/* 10^y, the same bits for one number as for many at once: plain arithmetic without branches, tables or calls, which a
 * compiler can do on several numbers at a time.
 *
 * 10^y = 2^n * 10^r, n the nearest whole number to y log2 10, r = y - n log10 2, at most log10(2)/2. 10^r goes into
 * 1 + r ln 10 + r^2 q(r), q the polynomial of the ninth degree that Chebyshev's points give for
 * (10^r - 1 - r ln 10)/r^2: within 1.3e-17. In all within 1.5 units of the last place. */
#ifndef BEAMWARD_LIMITS_POWER_OF_TEN_H
#define BEAMWARD_LIMITS_POWER_OF_TEN_H

#include "internal.h"

#include <stdint.h>
#include <string.h>

/* Given:   y   magnitude at most 300
 * Returns: 10^y; NAN beyond, where no factor of a limit lies. Tests: test_limits_many.c */
static inline double power_of_ten(double y) {
    static const double log2_of_10 = 0x1.a934f0979a371p1, ln_10 = 0x1.26bb1bbb55516p1;
    /* log10 of 2 in two parts; n times the first is exact */
    static const double part_1 = 0x1.34413509f7800p-2, part_2 = 0x1.fef311f12b358p-46;
    /* Added to a number, it leaves that number rounded to a whole one, in the low bits of the sum. */
    static const double whole = 0x1.8p52, bias = 1023.0;
    static const double q0 = 0x1.53524c73cea6ap+1, q1 = 0x1.0470591de2ca5p+1, q2 = 0x1.2bd7609fd83bbp+0,
                        q3 = 0x1.1429ffd1d4603p-1, q4 = 0x1.a7ed7092fdc4ep-3, q5 = 0x1.16e4dfc856c52p-4,
                        q6 = 0x1.4116785f3f8ebp-6, q7 = 0x1.48979cb22f0a8p-8, q8 = 0x1.2f55a4cf5cae2p-10,
                        q9 = 0x1.fbc9dc49f4bdap-13;
    y = y >= -300.0 && y <= 300.0 ? y : limits_nan;
    double n = (y * log2_of_10 + whole) - whole;
    double r = (y - n * part_1) - n * part_2;
    double r2 = r * r, r4 = r2 * r2;
    double q = ((q0 + q1 * r) + r2 * (q2 + q3 * r)) + r4 * (((q4 + q5 * r) + r2 * (q6 + q7 * r)) + r4 * (q8 + q9 * r));
    double scale = n + (whole + bias); /* 2^n: n + bias in the place of the exponent */
    uint64_t bits;
    memcpy(&bits, &scale, sizeof bits);
    bits <<= 52;
    memcpy(&scale, &bits, sizeof scale);
    return (1.0 + (ln_10 * r + r2 * q)) * scale;
}

#endif
