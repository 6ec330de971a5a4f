/* Optical density that each emission needs, the allowance shared equally among those that need any. */
#include "internal.h"

#include <math.h>

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

/* Optical densities that let all emissions together keep the limit.
 * Given:    hazard; term_ratios  without eyewear, as from bw_hazard_term_ratios
 * Returned: od  of each emission, 0 where none is needed; NAN if a ratio is NAN
 * Notes:    The residuals ratio x 10^-OD of any terms that add sum to 1 at most. An emission that takes part in
 *           several sums gets the largest density of them. */
void bw_hazard_optical_density(const struct bw_hazard *hazard, const double term_ratios[BW_TERMS_MAX],
                               double od[BW_EMISSIONS_MAX]) {
    double sorted[BW_TERMS_MAX];
    for (size_t i = 0; i < BW_EMISSIONS_MAX; i++)
        od[i] = 0.;
    for (size_t row = 0; row < hazard->term_count; row++) {
        double c = residual(sorted, gather(hazard, term_ratios, row, sorted));
        for (size_t j = 0; j < hazard->term_count; j++) {
            double *needed = &od[hazard->terms[j].emission];
            if (hazard->adds[row][j] && !(term_ratios[j] <= c))
                *needed = isnan(*needed) ? *needed : isnan(c) ? c : fmax(*needed, log10(term_ratios[j] / c));
        }
    }
}
