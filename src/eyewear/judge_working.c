/* The working of a verdict: what is needed, what is given, what comes through. */
#include <beamward/eyewear.h>

#include <math.h>

typedef char number[BW_NUMBER_SIZE];

static const char *text(number out, double value) {
    return bw_working_number(out, value);
}

static void write_emission(const struct bw_emission *emission, const struct bw_emission_verdict *verdict,
                           const struct bw_rating *rating, struct bw_working *working) {
    bw_working_step(working, "OD", verdict->od_required, "", NULL, NULL, NULL);
    bw_working_note(working, "needed for %s %g nm, its share of the allowance, from the working of the place",
                    emission->name, emission->wavelength_nm);
    if (rating == NULL) {
        bw_working_note(working, "the goggles claim nothing at this wavelength");
        return;
    }
    bw_working_step(working, "OD_given", verdict->od_given, "", NULL, NULL, NULL);
    bw_working_note(working, "claimed for %g to %g nm; %s", rating->low_nm, rating->high_nm, verdict->reason);
}

void bw_eyewear_working(const struct bw_goggles *goggles, const struct bw_hazard *hazard,
                        const double term_ratios[BW_TERMS_MAX], const struct bw_pair_verdict *verdict,
                        struct bw_working *working) {
    double behind[BW_TERMS_MAX];
    number ratio, od;
    if (working == NULL)
        return;
    for (size_t i = 0; i < verdict->count; i++) {
        const struct bw_emission *emission = &hazard->output->emissions[i];
        write_emission(emission, &verdict->emissions[i], bw_eyewear_rating(goggles, emission->wavelength_nm), working);
    }
    for (size_t i = 0; i < hazard->term_count; i++) {
        const struct bw_emission *emission = &hazard->output->emissions[hazard->terms[i].emission];
        const struct bw_rating *rating = bw_eyewear_rating(goggles, emission->wavelength_nm);
        behind[i] = rating ? term_ratios[i] * pow(10., -rating->optical_density) : term_ratios[i];
        text(ratio, term_ratios[i]);
        if (rating != NULL)
            bw_working_step(working, "ratio", behind[i], "", NULL, "ratio 10^-OD_given", "%s * 10^-%s", ratio,
                            text(od, rating->optical_density));
        else
            bw_working_step(working, "ratio", behind[i], "", NULL, "ratio", "%s", ratio);
        bw_working_note(working, "behind the goggles, %s, %s", emission->name,
                        bw_effect_name(hazard->terms[i].limit.limit.effect));
    }
    double sum = bw_hazard_sum_working(hazard, behind, BW_EMISSIONS_MAX, working);
    bw_working_note(working, "behind the goggles: %s", sum <= 1. ? "the limit is kept" : "above the limit");
}
