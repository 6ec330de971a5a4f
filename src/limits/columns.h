/* Arithmetic on columns of numbers, for the evaluation of many exposures: each function is one loop. In and out may be
 * the same column only where it says so. The results have the same bits as those of the evaluation of one. */
#ifndef BEAMWARD_LIMITS_COLUMNS_H
#define BEAMWARD_LIMITS_COLUMNS_H

#include "internal.h"

/* out = value * base^law, of the laws but POWER_ANY. */
void bw_column_power(size_t count, double value, const double base[], enum power_law law, double out[]);
/* out *= factor */
void bw_column_scale(size_t count, double factor, double out[]);
/* out *= the factor of the row at x */
void bw_column_factor(size_t count, const struct factor_row *row, const double x[], double out[]);
/* out = a / b, out = a * b */
void bw_column_divide(size_t count, const double a[], const double b[], double out[]);
void bw_column_multiply(size_t count, const double a[], const double b[], double out[]);
/* Takes over, place by place, the rival's three numbers where its first is lower. */
struct column_limit {
    double *radiant_exposure_j_m2, *irradiance_w_m2, *aperture_m;
};
void bw_column_lowest(size_t count, const struct bw_limit_column *rival, const struct column_limit *lowest);

#endif
