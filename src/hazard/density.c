/* Optical density that each emission needs, the allowance shared equally among those that need any. */
#include "internal.h"

#include <math.h>
#include <stdio.h>

/* The terms that add to one, largest first. Returns: their number; ratios that are NAN come first. */
static size_t gather(const struct bw_hazard *hazard, const double ratios[BW_TERMS_MAX], size_t row,
                     double sorted[BW_TERMS_MAX]) {
    size_t count = 0;
    for (size_t j = 0; j < hazard->term_count; j++) {
        if (!hazard->adds[row][j])
            continue;
        size_t at = count++;
        while (at > 0 && !(ratios[j] <= sorted[at - 1])) {
            sorted[at] = sorted[at - 1];
            at--;
        }
        sorted[at] = ratios[j];
    }
    return count;
}

static double sum_from(const double sorted[BW_TERMS_MAX], size_t from, size_t count) {
    double sum = 0.;
    for (size_t i = count; i > from; i--)
        sum += sorted[i - 1]; /* the smallest first */
    return sum;
}

/* The largest c with sum(min(ratio, c)) <= 1. With the k largest cut to c it is (1 - sum of the others) / k, and k is
 * right as soon as the next is no larger than c: then the sum is exactly 1.
 * Returns: c; infinite if all together keep the limit; NAN if a ratio is */
static double residual(const double sorted[BW_TERMS_MAX], size_t count) {
    double sum = sum_from(sorted, 0, count);
    if (isnan(sum))
        return sum;
    if (sum <= 1.)
        return HUGE_VAL;
    for (size_t k = 1; k < count; k++) {
        double c = (1. - sum_from(sorted, k, count)) / (double)k;
        if (c >= sorted[k])
            return c;
    }
    return 1. / (double)count;
}

/* What decided the density of one emission. */
struct decision {
    size_t row, term;
    double residual;
};

static void decide(const struct bw_hazard *hazard, const double ratios[BW_TERMS_MAX], double od[BW_EMISSIONS_MAX],
                   struct decision decisions[BW_EMISSIONS_MAX]) {
    double sorted[BW_TERMS_MAX];
    for (size_t i = 0; i < BW_EMISSIONS_MAX; i++)
        od[i] = 0.;
    for (size_t row = 0; row < hazard->term_count; row++) {
        double c = residual(sorted, gather(hazard, ratios, row, sorted));
        for (size_t j = 0; j < hazard->term_count; j++) {
            double *needed = &od[hazard->terms[j].emission];
            if (!hazard->adds[row][j] || ratios[j] <= c || isnan(*needed))
                continue;
            double density = isnan(c) ? c : log10(ratios[j] / c);
            if (!(density <= *needed)) {
                *needed = density;
                decisions[hazard->terms[j].emission] = (struct decision){row, j, c};
            }
        }
    }
}

/* Optical densities that let all emissions together keep the limit.
 * Given:    hazard; term_ratios  without eyewear, as from bw_hazard_term_ratios
 * Returned: od  of each emission, 0 where none is needed; NAN if a ratio is NAN
 * Notes:    The residuals ratio x 10^-OD of any terms that add sum to 1 at most. An emission that takes part in
 *           several sums gets the largest density of them. */
void bw_hazard_optical_density(const struct bw_hazard *hazard, const double term_ratios[BW_TERMS_MAX],
                               double od[BW_EMISSIONS_MAX]) {
    struct decision decisions[BW_EMISSIONS_MAX];
    decide(hazard, term_ratios, od, decisions);
}

/* ---- the working -------------------------------------------------------------------------------- */

typedef char number[BW_NUMBER_SIZE];

/* c: what remains of the allowance after the small ratios, shared by the k large ones. */
static void write_residual(const struct bw_hazard *hazard, const double ratios[BW_TERMS_MAX],
                           const struct decision *decision, struct bw_working *working) {
    double sorted[BW_TERMS_MAX];
    size_t count = gather(hazard, ratios, decision->row, sorted), large = 0;
    struct bw_text numbers = {0};
    while (large < count && !(sorted[large] <= decision->residual))
        large++;
    for (size_t i = count; i > large; i--) {
        char value[40]; /* more digits: the difference may be small */
        snprintf(value, sizeof value, "%.13g", sorted[i - 1]);
        bw_text_add(&numbers, " - %s", value);
    }
    bw_working_step(working, "c", decision->residual, "", NULL,
                    count > large ? "(1 - sum of small ratio) / k" : "1 / k",
                    count > large ? "(1%s) / %zu" : "1%s / %zu", numbers.data ? numbers.data : "", large);
    bw_working_note(working, "the allowance of 1, less the ratios below c, shared equally by the k = %zu above it",
                    large);
    working->failed = working->failed || numbers.failed;
    bw_text_free(&numbers);
}

void bw_hazard_density_working(const struct bw_hazard *hazard, const double term_ratios[BW_TERMS_MAX],
                               double od[BW_EMISSIONS_MAX], struct bw_working *working) {
    struct decision decisions[BW_EMISSIONS_MAX];
    decide(hazard, term_ratios, od, decisions);
    for (size_t i = 0; i < hazard->output->count && working != NULL; i++) {
        const struct bw_emission *emission = &hazard->output->emissions[i];
        number ratio, c;
        if (!(od[i] > 0.)) {
            bw_working_step(working, "OD", od[i], "", NULL, "0", "0");
            bw_working_note(working, "%s %g nm needs none: it is below its share of the allowance", emission->name,
                            emission->wavelength_nm);
            continue;
        }
        bool first = true;
        for (size_t j = 0; j < i; j++)
            first = first && !(od[j] > 0. && decisions[j].row == decisions[i].row);
        if (first)
            write_residual(hazard, term_ratios, &decisions[i], working);
        bw_working_step(working, "OD", od[i], "", NULL, "log10(ratio / c)", "log10(%s / %s)",
                        bw_working_number(ratio, term_ratios[decisions[i].term]),
                        bw_working_number(c, decisions[i].residual));
        bw_working_note(working, "%s %g nm, %s", emission->name, emission->wavelength_nm,
                        bw_effect_name(hazard->terms[decisions[i].term].limit.limit.effect));
    }
}
