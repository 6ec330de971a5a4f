/* Where the beam is worst: each emission alone, and all together. */
#include "internal.h"

#include <math.h>

static bool same(double a, double b) {
    return !(a < b) && !(a > b);
}

/* The nearest place, or the waist, whichever gives the ratio that counts. Returns: NAN if neither does. */
static double worst_place_m(const struct bw_hazard *hazard, size_t term, double worst) {
    double nearest_m = hazard->output->stand_off_m;
    double waist_m = fmax(hazard->output->beams[hazard->terms[term].emission].waist_m, nearest_m);
    if (same(bw_hazard_term_working(hazard, term, waist_m, NULL), worst))
        return waist_m;
    return same(bw_hazard_term_working(hazard, term, nearest_m, NULL), worst) ? nearest_m : nan("");
}

static void write_term(const struct bw_hazard *hazard, size_t term, double worst, struct bw_working *working) {
    const struct bw_emission *emission = &hazard->output->emissions[hazard->terms[term].emission];
    double at_m = worst_place_m(hazard, term, worst);
    if (isnan(at_m)) {
        bw_working_step(working, "ratio", worst, "", NULL, NULL, NULL);
        bw_working_note(working, "%s %g nm, %s: the largest at any distance, bounded step by step", emission->name,
                        emission->wavelength_nm, bw_effect_name(hazard->terms[term].limit.limit.effect));
        return;
    }
    bw_working_step(working, "r", at_m, "m", NULL, NULL, NULL);
    bw_working_note(working, "where %s is worst: %s", emission->name,
                    at_m > hazard->output->stand_off_m ? "its waist"
                    : at_m > 0.                        ? "as near as the spacer lets an eye come"
                                                       : "the exit");
    bw_hazard_term_working(hazard, term, at_m, working);
}

void assess_exit_working(const struct bw_hazard *hazard, double worst_m, double total, struct bw_working *working) {
    const struct bw_output *output = hazard->output;
    double ratios[BW_TERMS_MAX];
    if (working == NULL)
        return;
    bw_working_heading(working, "At the exit, or at the waist where that is worse");
    bw_hazard_worst_terms(hazard, ratios);
    for (size_t t = 0; t < hazard->term_count; t++)
        write_term(hazard, t, ratios[t], working);
    for (size_t i = 0; i < output->count && output->count > 1; i++)
        bw_hazard_sum_working(hazard, ratios, i, working);
    if (same(bw_hazard_total(hazard, ratios), total)) {
        bw_hazard_sum_working(hazard, ratios, BW_EMISSIONS_MAX, working);
        if (!hazard->shaped)
            return;
    }
    bw_working_heading(working, "All together, where their sum is worst");
    bw_working_step(working, "r", worst_m, "m", NULL, NULL, NULL);
    bw_working_note(working, "%s",
                    worst_m > output->stand_off_m ? "the waist, or the distance, where the sum is largest"
                                                  : "the exit, or as near as the spacer lets an eye come");
    bw_hazard_ratio_working(hazard, worst_m, working);
    if (!same(bw_hazard_ratio(hazard, worst_m), total)) {
        bw_working_step(working, "env", total, "", NULL, NULL, NULL);
        bw_working_note(working, "the largest sum at the exit or beyond: an upper bound, searched");
    }
}
