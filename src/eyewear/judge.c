/* Whether goggles are enough, with the reason in words. */
#include <beamward/eyewear.h>

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* What a printed number is allowed to be off (base, bw_format): a density that is the requirement but for the last
 * digits of the arithmetic is the requirement. 1e-12 of it is 3e-11 of the transmittance. */
static const double arithmetic = 1e-12;

const char *bw_verdict_name(enum bw_verdict verdict) {
    switch (verdict) {
    case BW_SUFFICIENT:
        return "sufficient";
    case BW_INSUFFICIENT:
        return "insufficient";
    case BW_NO_RATING:
        return "no-rating";
    }
    return "";
}

/* The rating that counts at a wavelength.
 * Returns:  the lowest of the ranges that hold it, both ends included; NULL if there is none */
const struct bw_rating *bw_eyewear_rating(const struct bw_goggles *goggles, double wavelength_nm) {
    const struct bw_rating *lowest = NULL;
    for (size_t i = 0; i < goggles->rating_count; i++) {
        const struct bw_rating *rating = &goggles->ratings[i];
        if (wavelength_nm >= rating->low_nm && wavelength_nm <= rating->high_nm &&
            (!lowest || rating->optical_density < lowest->optical_density))
            lowest = rating;
    }
    return lowest;
}

/* "rated 5.0, needs 5.4": given down, needed up, with as many decimals as it takes for the figures to say what the
 * verdict says. */
static void write_densities(struct bw_emission_verdict *verdict) {
    enum { DECIMALS_MAX = 9 };
    char given[BW_NUMBER_SIZE], needs[BW_NUMBER_SIZE];
    for (int decimals = 1; decimals <= DECIMALS_MAX; decimals++) {
        bw_format_fixed(given, verdict->od_given, decimals, BW_DOWN);
        bw_format_fixed(needs, verdict->od_required, decimals, BW_UP);
        if (!isfinite(verdict->od_required))
            break;
        bool enough = strtod(given, NULL) >= strtod(needs, NULL);
        if (enough == (verdict->verdict == BW_SUFFICIENT))
            break;
    }
    snprintf(verdict->reason, sizeof verdict->reason, "rated %s, needs %s", given, needs);
}

static void judge_emission(const struct bw_goggles *goggles, double wavelength_nm,
                           struct bw_emission_verdict *verdict) {
    const struct bw_rating *rating = bw_eyewear_rating(goggles, wavelength_nm);
    if (rating) {
        verdict->od_given = rating->optical_density;
        verdict->scale_given = rating->scale_number;
    }
    if (verdict->od_required <= 0.) {
        verdict->verdict = BW_SUFFICIENT;
        snprintf(verdict->reason, sizeof verdict->reason, "needs none");
    } else if (!rating) {
        verdict->verdict = BW_NO_RATING;
        snprintf(verdict->reason, sizeof verdict->reason, "no rating at %.7g nm", wavelength_nm);
    } else {
        bool enough = verdict->od_given >= verdict->od_required * (1. - arithmetic);
        verdict->verdict = enough ? BW_SUFFICIENT : BW_INSUFFICIENT;
        write_densities(verdict);
    }
}

/* Goggles against what each emission needs.
 * Given:    goggles, output; od_required  of each emission, unrounded; NaN counts as not met
 * Returned: verdict  of each emission, and the worst of them
 * Notes:    An emission that needs 0 is sufficient without a rating, so it cannot make the pair worse. */
void bw_eyewear_judge(const struct bw_goggles *goggles, const struct bw_output *output,
                      const double od_required[BW_EMISSIONS_MAX], struct bw_pair_verdict *verdict) {
    *verdict = (struct bw_pair_verdict){.verdict = BW_SUFFICIENT, .count = output->count};
    for (size_t i = 0; i < output->count; i++) {
        verdict->emissions[i] = (struct bw_emission_verdict){.od_required = od_required[i], .od_given = nan("")};
        judge_emission(goggles, output->emissions[i].wavelength_nm, &verdict->emissions[i]);
        if (verdict->emissions[i].verdict > verdict->verdict)
            verdict->verdict = verdict->emissions[i].verdict;
    }
}

/* What comes through the goggles, all together. An emission without a rating is not weakened at all. */
static double ratio_behind(const struct bw_goggles *goggles, const struct bw_hazard *hazard,
                           const double term_ratios[BW_TERMS_MAX]) {
    double behind[BW_TERMS_MAX];
    for (size_t i = 0; i < hazard->term_count; i++) {
        const struct bw_emission *emission = &hazard->output->emissions[hazard->terms[i].emission];
        const struct bw_rating *rating = bw_eyewear_rating(goggles, emission->wavelength_nm);
        behind[i] = rating ? term_ratios[i] * pow(10., -rating->optical_density) : term_ratios[i];
    }
    return bw_hazard_total(hazard, behind);
}

/* Goggles against all that arrives at a place.
 * Given:    goggles; hazard  direct view; term_ratios  without eyewear; od_required  the equal shares
 * Returned: verdict  as bw_eyewear_judge, but sufficient if the sum behind the goggles is 1 or below
 * Notes:    The shares are one way to keep the sum and not the only one; that the sum is kept is what protects. */
void bw_eyewear_judge_together(const struct bw_goggles *goggles, const struct bw_hazard *hazard,
                               const double term_ratios[BW_TERMS_MAX], const double od_required[BW_EMISSIONS_MAX],
                               struct bw_pair_verdict *verdict) {
    bw_eyewear_judge(goggles, hazard->output, od_required, verdict);
    if (verdict->verdict == BW_SUFFICIENT || !(ratio_behind(goggles, hazard, term_ratios) <= 1.))
        return;
    verdict->verdict = BW_SUFFICIENT;
    for (size_t i = 0; i < verdict->count; i++) {
        struct bw_emission_verdict *emission = &verdict->emissions[i];
        if (emission->verdict == BW_SUFFICIENT)
            continue;
        emission->verdict = BW_SUFFICIENT;
        size_t length = strlen(emission->reason);
        snprintf(emission->reason + length, sizeof emission->reason - length, "; all together keep the limit");
    }
}
