/* See columns.h. */
#include "columns.h"

#include "power_of_ten.h"
#include "vector.h"

#include <math.h>

LIMITS_VECTOR void bw_column_scale(size_t count, double factor, double out[]) {
    for (size_t i = 0; i < count; i++)
        out[i] *= factor;
}

LIMITS_VECTOR void bw_column_divide(size_t count, const double a[], const double b[], double out[]) {
    for (size_t i = 0; i < count; i++)
        out[i] = a[i] / b[i];
}

LIMITS_VECTOR void bw_column_multiply(size_t count, const double a[], const double b[], double out[]) {
    for (size_t i = 0; i < count; i++)
        out[i] = a[i] * b[i];
}

LIMITS_VECTOR void bw_column_factor(size_t count, const struct factor_row *row, const double x[], double out[]) {
    double offset = row->offset, scale = row->scale, slope = row->slope, origin = row->origin;
    for (size_t i = 0; i < count; i++)
        out[i] *= offset + scale * power_of_ten(slope * (x[i] - origin));
}

/* One loop a law, written as bw_limits_raise() has it. */
LIMITS_VECTOR void bw_column_power(size_t count, double value, const double base[], enum power_law law, double out[]) {
    switch (law) {
    case POWER_0:
        for (size_t i = 0; i < count; i++)
            out[i] = value;
        break;
    case POWER_1_4:
        for (size_t i = 0; i < count; i++)
            out[i] = value * sqrt(sqrt(base[i]));
        break;
    case POWER_1_2:
        for (size_t i = 0; i < count; i++)
            out[i] = value * sqrt(base[i]);
        break;
    case POWER_3_4:
        for (size_t i = 0; i < count; i++) {
            double half = sqrt(base[i]);
            out[i] = value * (half * sqrt(half));
        }
        break;
    case POWER_1:
        for (size_t i = 0; i < count; i++)
            out[i] = value * base[i];
        break;
    case POWER_3_8:
        for (size_t i = 0; i < count; i++) {
            double quarter = sqrt(sqrt(base[i]));
            out[i] = value * (quarter * sqrt(quarter));
        }
        break;
    case POWER_ANY:
    default:
        for (size_t i = 0; i < count; i++)
            out[i] = limits_nan;
    }
}

LIMITS_VECTOR void bw_column_lowest(size_t count, const struct bw_limit_column *rival,
                                    const struct column_limit *lowest) {
    double *restrict h = lowest->radiant_exposure_j_m2, *restrict e = lowest->irradiance_w_m2,
                     *restrict d = lowest->aperture_m;
    const double *h_rival = rival->radiant_exposure_j_m2, *e_rival = rival->irradiance_w_m2,
                 *d_rival = rival->aperture_m;
    for (size_t i = 0; i < count; i++) {
        bool keeps = h[i] <= h_rival[i];
        h[i] = keeps ? h[i] : h_rival[i];
        e[i] = keeps ? e[i] : e_rival[i];
        d[i] = keeps ? d[i] : d_rival[i];
    }
}
