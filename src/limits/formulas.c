/* What one row says at one place: spans, powers, factors, time edges. Shared by the evaluator and the checker, so
 * that both read a table alike. */
#include "internal.h"
#include "power_of_ten.h"

#include <math.h>

struct power bw_limits_power_of(double exponent) {
    static const struct {
        double exponent;
        enum power_law law;
    } laws[] = {{0.0, POWER_0},   {0.25, POWER_1_4}, {0.375, POWER_3_8},
                {0.5, POWER_1_2}, {0.75, POWER_3_4}, {1.0, POWER_1}};
    struct power power = {exponent, POWER_ANY, exponent < 0.0};
    double magnitude = fabs(exponent);
    for (size_t i = 0; i < sizeof laws / sizeof laws[0]; i++)
        if (!(magnitude < laws[i].exponent) && !(magnitude > laws[i].exponent))
            power.law = laws[i].law;
    return power;
}

double bw_limits_raise(double base, const struct power *power) {
    double root, result;
    switch (power->law) { /* square roots are exact to half a unit each: as good as pow() and much faster */
    case POWER_0:
        return 1.0;
    case POWER_1_4:
        result = sqrt(sqrt(base));
        break;
    case POWER_3_8:
        root = sqrt(sqrt(base));
        result = root * sqrt(root);
        break;
    case POWER_1_2:
        result = sqrt(base);
        break;
    case POWER_3_4:
        root = sqrt(base);
        result = root * sqrt(root);
        break;
    case POWER_1:
        result = base;
        break;
    case POWER_ANY:
    default:
        return pow(base, power->exponent);
    }
    return power->inverse ? 1.0 / result : result;
}

double bw_limits_factor_row(const struct factor_row *row, double x) {
    if (row->constant)
        return row->offset + row->scale;
    return row->offset + row->scale * power_of_ten(row->slope * (x - row->origin));
}

double bw_limits_factor(const struct bw_table *table, int factor, double x, const struct power *power,
                        const struct factor_row **row) {
    const struct factor *f = &table->factors[factor];
    double lowest = limits_nan;
    for (size_t i = f->first; i < f->first + f->count; i++) {
        const struct factor_row *candidate = &table->factor_rows[i];
        if (!bw_limits_in_span(&candidate->argument, x))
            continue;
        double value = bw_limits_raise(bw_limits_factor_row(candidate, x), power);
        if (!(value >= lowest)) {
            lowest = value;
            if (row != NULL)
                *row = candidate;
        }
    }
    return lowest;
}

double bw_limits_factor_at(const struct bw_table *table, int factor, double wavelength_nm, double subtense_mrad) {
    static const struct power first = {1.0, POWER_1, false};
    double x = table->factors[factor].argument == BY_SUBTENSE_MRAD ? subtense_mrad : wavelength_nm;
    return bw_limits_factor(table, factor, x, &first, NULL);
}

double bw_limits_edge_s(const struct bw_table *table, const struct edge *edge, double wavelength_nm,
                        double subtense_mrad) {
    if (edge->factor == EDGE_IS_NUMBER)
        return edge->value_s;
    return bw_limits_factor_at(table, edge->factor, wavelength_nm, subtense_mrad);
}

double bw_limits_size(const struct size_row *row, double time_s) {
    return row->value * bw_limits_raise(time_s, &row->time_power);
}

double bw_limits_alpha_max_mrad(const struct bw_table *table, double time_s) {
    const struct source_size *size = &table->source_size;
    double smallest = limits_infinity;
    if (size->count > 0 && time_s < size->rows[0].from.value_s)
        return bw_limits_size(&size->rows[0], size->rows[0].from.value_s);
    for (size_t i = 0; i < size->count; i++) {
        struct span span = {size->rows[i].from.value_s, size->rows[i].to.value_s, false, false};
        if (bw_limits_in_span(&span, time_s))
            smallest = fmin(smallest, bw_limits_size(&size->rows[i], time_s));
    }
    return smallest;
}
