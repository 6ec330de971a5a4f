/* Limit, hazard distance and density of many simple beams: the limits come in batches in which the same effects hold,
 * and each step is a loop over the batch. */
#include "columns.h"

#include <math.h>

struct many {
    const struct bw_table *table;
    const struct bw_simple_beams *beams;
    double *radiant_exposures_j_m2, *nohd_m, *densities;
    bool has_distance;
    size_t missing;
};

static void put(const struct bw_limit_batch *batch, const double column[], double *out) {
    for (size_t i = 0; out != NULL && i < batch->count; i++)
        out[batch->places[i]] = column[i];
}

static void take_beams(const struct bw_simple_beams *all, const struct bw_limit_batch *batch,
                       struct beam_columns *beams) {
    for (size_t i = 0; i < batch->count; i++) {
        size_t place = batch->places[i];
        beams->power_w[i] = all->powers_w[place];
        beams->diameter_m[i] = all->diameters_m[place];
        beams->divergence_rad[i] = all->divergences_rad[place];
    }
    for (size_t i = 0; i < batch->count; i++) {
        beams->lowest_j_m2[i] = HUGE_VAL;
        beams->widest_m2[i] = beams->ratio[i] = 0.;
    }
}

/* The ultraviolet and the front of the eye are one tissue: where a table has both at one wavelength their ratios add,
 * and no closed form gives the distance. */
static bool effects_add(const struct bw_limit_batch *batch) {
    bool ultraviolet = false, anterior = false;
    for (size_t i = 0; i < batch->column_count; i++) {
        ultraviolet = ultraviolet || batch->columns[i].effect == BW_ULTRAVIOLET;
        anterior = anterior || batch->columns[i].effect == BW_ANTERIOR;
    }
    return ultraviolet && anterior;
}

/* One beam by the functions for one. */
static void answer_one(const struct many *many, size_t place, double *nohd_m, double *density) {
    const struct bw_simple_beams *beams = many->beams;
    struct bw_output output = {.count = 1};
    struct bw_viewing_case viewing = {BW_EYE, beams->exposures_s[place], 0., 0.};
    struct bw_hazard hazard;
    struct bw_reach reach;
    double ratios[BW_TERMS_MAX], densities[BW_EMISSIONS_MAX];
    output.emissions[0] = (struct bw_emission){.wavelength_nm = beams->wavelengths_nm[place],
                                               .continuous = true,
                                               .average_power_w = beams->powers_w[place],
                                               .peak_power_w = beams->powers_w[place]};
    output.beams[0] = (struct bw_beam){.profile = BW_GAUSSIAN,
                                       .spread = BW_HYPERBOLIC,
                                       .diameter_m = beams->diameters_m[place],
                                       .divergence_rad = beams->divergences_rad[place],
                                       .exit_diameter_m = beams->diameters_m[place]};
    *nohd_m = *density = (double)NAN;
    if (bw_hazard_prepare(many->table, &output, &viewing, &hazard, NULL, NULL) != BW_OK ||
        bw_hazard_reach(&hazard, BW_EMISSIONS_MAX, &reach, NULL, NULL) != BW_OK)
        return;
    bw_hazard_term_ratios(&hazard, beams->distance_m, ratios);
    bw_hazard_optical_density(&hazard, ratios, densities);
    *nohd_m = reach.distance_m;
    *density = densities[0];
}

static size_t answer_each(const struct many *many, const struct bw_limit_batch *batch, struct answer_columns *answers) {
    size_t missing = 0;
    for (size_t i = 0; i < batch->count; i++) {
        answer_one(many, batch->places[i], &answers->nohd_m[i], &answers->density[i]);
        if (isnan(answers->nohd_m[i])) {
            answers->radiant_exposure_j_m2[i] = (double)NAN;
            missing++;
        }
    }
    return missing;
}

static size_t answer_none(const struct bw_limit_batch *batch, struct answer_columns *answers) {
    for (size_t i = 0; i < batch->count; i++)
        answers->radiant_exposure_j_m2[i] = answers->nohd_m[i] = answers->density[i] = (double)NAN;
    return batch->count;
}

static void visit(void *context, const struct bw_limit_batch *batch) {
    struct many *many = context;
    struct beam_columns beams;
    struct answer_columns answers;
    take_beams(many->beams, batch, &beams);
    for (size_t i = 0; i < batch->column_count; i++)
        bw_column_hazard(batch->count, &batch->columns[i], many->beams->distance_m, &beams);
    size_t missing = bw_column_answers(batch->count, &beams, &answers);
    if (batch->column_count == 0 || !many->has_distance)
        missing = answer_none(batch, &answers);
    else if (effects_add(batch))
        missing = answer_each(many, batch, &answers);
    many->missing += missing;
    put(batch, answers.radiant_exposure_j_m2, many->radiant_exposures_j_m2);
    put(batch, answers.nohd_m, many->nohd_m);
    put(batch, answers.density, many->densities);
}

/* Given, Returned, Returns: see hazard.h.
 * Notes:    The distance is that at which the beam is as wide as the limit wants, sqrt(d^2 - a^2)/phi; where d is
 *           hardly wider than a the difference carries the rounding of d, as bw_hazard_reach() carries that of the
 * ratio. Tests:    test_hazard_many.c */
size_t bw_hazard_many(const struct bw_table *table, const struct bw_simple_beams *beams, double *radiant_exposures_j_m2,
                      double *nohd_m, double *densities) {
    struct many many = {.table = table,
                        .beams = beams,
                        .radiant_exposures_j_m2 = radiant_exposures_j_m2,
                        .nohd_m = nohd_m,
                        .densities = densities,
                        .has_distance = beams->distance_m >= 0. && beams->distance_m < HUGE_VAL};
    struct bw_exposures exposures = {beams->count, beams->wavelengths_nm, beams->exposures_s, 0., 0.};
    bw_limits_visit(table, BW_EYE, &exposures, visit, &many);
    return many.missing;
}
