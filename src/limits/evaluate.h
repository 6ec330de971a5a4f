/* The evaluator and its scribe: evaluate.c computes, evaluate_working.c writes down what it is told. */
#ifndef BEAMWARD_LIMITS_EVALUATE_H
#define BEAMWARD_LIMITS_EVALUATE_H

#include "internal.h"

struct query {
    const struct bw_table *table;
    enum bw_target target;
    double wavelength_nm, time_s, subtense_mrad, area_m2;
    double time_powers[POWER_COMMON]; /* time_s by each common law */
    struct bw_working *working;       /* may be NULL */
};

/* The product as it grows, in symbols and in numbers; empty and unused without a working. */
enum { PRODUCT_SIZE = 240 };
struct product_text {
    char symbols[PRODUCT_SIZE], numbers[PRODUCT_SIZE];
};

void bw_working_row(const struct query *query, const struct limit_row *row, struct product_text *text,
                    double gamma_mrad);
/* row: of a printed factor, else NULL. */
void bw_working_factor(const struct query *query, const struct factor_use *use, const struct factor_row *row,
                       double value, struct product_text *text);
void bw_working_ce(const struct query *query, double value, double alpha_max_mrad);
void bw_working_gamma(const struct query *query, const struct size_row *cone, double gamma_mrad);
void bw_working_cone(const struct query *query, const struct size_row *cone, double gamma_mrad, double value,
                     struct product_text *text);
void bw_working_limit(const struct query *query, const struct limit_row *row, const struct bw_limit *limit,
                      const struct product_text *text);
void bw_working_aperture(const struct query *query, const struct size_row *row, double aperture_mm);
void bw_working_acceptance(const struct query *query, double alpha_max_mrad);
void bw_working_lowest(const struct query *query, const struct bw_limit_set *limits);

#endif
