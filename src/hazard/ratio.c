/* Hazard ratio at a place: the exposure there over the limit, summed over what adds. */
#include "internal.h"

#include <math.h>

double bw_hazard_plain_term(const struct bw_hazard *hazard, size_t term, double near_m, double far_m) {
    const struct bw_term *of = &hazard->terms[term];
    const struct bw_beam *beam = &hazard->output->beams[of->emission];
    bool one_place = near_m >= far_m;
    double per_w = one_place ? bw_beam_irradiance_per_w(beam, near_m, of->limit.aperture_m)
                             : bw_beam_irradiance_between_per_w(beam, near_m, far_m, of->limit.aperture_m, 0.);
    return hazard->output->emissions[of->emission].average_power_w * per_w / of->limit.irradiance_w_m2;
}

static double term_ratio(const struct bw_hazard *hazard, size_t term, double near_m, double far_m) {
    return hazard->shaped ? bw_hazard_shaped_term(hazard, term, near_m, far_m, NULL, NULL)
                          : bw_hazard_plain_term(hazard, term, near_m, far_m);
}

/* Given: hazard, distance_m.  Returned: term_ratios, of each term alone on the axis; NAN for a bad distance. */
void bw_hazard_term_ratios(const struct bw_hazard *hazard, double distance_m, double term_ratios[BW_TERMS_MAX]) {
    for (size_t i = 0; i < hazard->term_count; i++)
        term_ratios[i] = term_ratio(hazard, i, distance_m, distance_m);
}

/* What adds to term i, of one emission or of all. */
static double sum_with(const struct bw_hazard *hazard, const double ratios[BW_TERMS_MAX], size_t i, size_t only) {
    double sum = 0.;
    for (size_t j = 0; j < hazard->term_count; j++)
        if (hazard->adds[i][j] && (only == BW_EMISSIONS_MAX || hazard->terms[j].emission == only))
            sum += ratios[j];
    return sum;
}

/* That two exposures add is not transitive, so each term in turn is taken
 * with all that add to it. */
double bw_hazard_largest_sum(const struct bw_hazard *hazard, const double ratios[BW_TERMS_MAX], size_t only) {
    double largest = 0.;
    if (hazard->term_count == 0)
        return nan(""); /* nothing was prepared: not "safe" */
    for (size_t i = 0; i < hazard->term_count; i++) {
        if (only != BW_EMISSIONS_MAX && hazard->terms[i].emission != only)
            continue;
        double sum = sum_with(hazard, ratios, i, only);
        if (isnan(sum))
            return sum;
        largest = fmax(largest, sum);
    }
    return largest;
}

void bw_hazard_combine(const struct bw_hazard *hazard, const double ratios[BW_TERMS_MAX], struct bw_ratio *ratio) {
    size_t row = 0;
    double largest = -1.;
    ratio->total = bw_hazard_largest_sum(hazard, ratios, BW_EMISSIONS_MAX);
    ratio->governing = 0;
    for (size_t i = 0; i < BW_EMISSIONS_MAX; i++)
        ratio->emission[i] = i < hazard->output->count ? bw_hazard_largest_sum(hazard, ratios, i) : 0.;
    for (size_t i = 0; i < hazard->term_count; i++) {
        double sum = sum_with(hazard, ratios, i, BW_EMISSIONS_MAX);
        if (sum > largest) {
            largest = sum;
            row = i;
        }
    }
    largest = -1.;
    for (size_t j = 0; j < hazard->term_count; j++)
        if (hazard->adds[row][j] && ratios[j] > largest) {
            largest = ratios[j];
            ratio->governing = j;
        }
}

/* Given: hazard, term_ratios  one a term, such as those behind goggles.
 * Returns: the largest sum over terms that add; 1 or below keeps the limit; NAN if a ratio is */
double bw_hazard_total(const struct bw_hazard *hazard, const double term_ratios[BW_TERMS_MAX]) {
    return bw_hazard_largest_sum(hazard, term_ratios, BW_EMISSIONS_MAX);
}

/* Given: hazard, distance_m from the exit along the axis.
 * Returns: the largest sum over terms that add; 1 or below keeps the limit; NAN for a bad distance */
double bw_hazard_ratio(const struct bw_hazard *hazard, double distance_m) {
    double ratios[BW_TERMS_MAX];
    bw_hazard_term_ratios(hazard, distance_m, ratios);
    return bw_hazard_largest_sum(hazard, ratios, BW_EMISSIONS_MAX);
}

/* The same with each emission alone and the governing term. */
void bw_hazard_ratio_detail(const struct bw_hazard *hazard, double distance_m, struct bw_ratio *ratio) {
    double ratios[BW_TERMS_MAX];
    bw_hazard_term_ratios(hazard, distance_m, ratios);
    bw_hazard_combine(hazard, ratios, ratio);
}

/* Share of what is on the axis that an emission may have beside it. */
static double share_beside(const struct bw_hazard *hazard, size_t term, double distance_m, double offset_m) {
    const struct bw_term *of = &hazard->terms[term];
    const struct bw_beam *beam = &hazard->output->beams[of->emission];
    double beside = bw_beam_irradiance_off_axis_per_w(beam, distance_m, of->limit.aperture_m, offset_m);
    double share = beside / bw_beam_irradiance_per_w(beam, distance_m, of->limit.aperture_m);
    return share <= 1. || isnan(beside) ? share : 1.;
}

/* A head of several emitters: the place is as near to the outermost one as it can be. */
static double nearest_offset_m(const struct bw_hazard *hazard, size_t term, double offset_m) {
    double outermost_m = bw_beam_outermost_m(&hazard->output->beams[hazard->terms[term].emission]);
    return offset_m >= outermost_m ? offset_m - outermost_m : offset_m >= 0. ? 0. : offset_m;
}

/* The envelope on the axis times the largest share that any emission has beside it. Along a line from the exit that
 * share falls, so it holds for places farther off in the same direction, too. */
static double shaped_off_axis(const struct bw_hazard *hazard, double distance_m, double offset_m) {
    double largest = 0.;
    for (size_t i = 0; i < hazard->term_count; i++) {
        double share = share_beside(hazard, i, distance_m, nearest_offset_m(hazard, i, offset_m));
        if (!(share <= largest))
            largest = share;
        if (isnan(share))
            return share;
    }
    return largest * bw_hazard_ratio_envelope(hazard, distance_m);
}

/* Given: hazard, distance_m along the axis, offset_m from it.
 * Returns: upper bound of the ratio there, never rising with the offset; NAN for a bad place
 * Notes:   Of a cluster the axes of all emitters are parallel to the head's. */
double bw_hazard_ratio_off_axis(const struct bw_hazard *hazard, double distance_m, double offset_m) {
    double ratios[BW_TERMS_MAX];
    if (hazard->shaped && !(distance_m >= bw_hazard_settled_m(hazard, BW_EMISSIONS_MAX)))
        return shaped_off_axis(hazard, distance_m, offset_m);
    for (size_t i = 0; i < hazard->term_count; i++) {
        const struct bw_term *term = &hazard->terms[i];
        ratios[i] = hazard->output->emissions[term->emission].average_power_w *
                    bw_beam_irradiance_off_axis_per_w(&hazard->output->beams[term->emission], distance_m,
                                                      term->limit.aperture_m, nearest_offset_m(hazard, i, offset_m)) /
                    term->limit.irradiance_w_m2;
    }
    return bw_hazard_largest_sum(hazard, ratios, BW_EMISSIONS_MAX);
}

/* A beam is narrowest at its waist, or where it left the exit narrower than that; shaped beams have bounds of their
 * own. */
void bw_hazard_bounds(const struct bw_hazard *hazard, double near_m, double far_m, size_t only,
                      double ratios[BW_TERMS_MAX]) {
    for (size_t i = 0; i < hazard->term_count; i++)
        ratios[i] =
            only == BW_EMISSIONS_MAX || only == hazard->terms[i].emission ? term_ratio(hazard, i, near_m, far_m) : 0.;
}

double bw_hazard_settled_m(const struct bw_hazard *hazard, size_t only) {
    double last_m = hazard->output->stand_off_m;
    for (size_t i = 0; i < hazard->output->count; i++)
        if (only == BW_EMISSIONS_MAX || only == i) {
            last_m = fmax(last_m, hazard->output->beams[i].waist_m);
            last_m = fmax(last_m, hazard->shaped ? hazard->settled_m[i] : 0.);
        }
    return last_m;
}

/* Raises *best to the largest ratio on a stretch, at most 1e-4 above it and never below: a part whose bound is no
 * larger is passed over; one too short to matter counts with its bound. */
static void raise_to_largest(const struct bw_hazard *hazard, double near_m, double far_m, int depth, long *stretches,
                             double *best) {
    double ratios[BW_TERMS_MAX];
    bw_hazard_bounds(hazard, near_m, far_m, BW_EMISSIONS_MAX, ratios);
    double bound = bw_hazard_largest_sum(hazard, ratios, BW_EMISSIONS_MAX);
    if (bound <= *best * (1. + 1e-4)) {
        *best = fmax(*best, bound);
        return;
    }
    if (depth == 0 || isnan(bound) || --*stretches <= 0) {
        *best = isnan(bound) ? bound : fmax(*best, bound);
        return;
    }
    double middle_m = near_m + (far_m - near_m) / 2.;
    *best = fmax(*best, bw_hazard_ratio(hazard, middle_m));
    raise_to_largest(hazard, middle_m, far_m, depth - 1, stretches, best);
    raise_to_largest(hazard, near_m, middle_m, depth - 1, stretches, best);
}

/* Given: hazard, distance_m.
 * Returns: the largest ratio at this distance or any farther one, outside the stand-off; NAN for a bad distance
 * Notes:   Where all has settled every term falls. Before that, the bounds of bw_hazard_bounds close in, to 1e-4 and
 *          never below; of a shaped hazard with a ladder its bound is taken. */
double bw_hazard_ratio_envelope(const struct bw_hazard *hazard, double distance_m) {
    double from_m = distance_m >= 0. ? fmax(distance_m, hazard->output->stand_off_m) : nan("");
    double last_m = bw_hazard_settled_m(hazard, BW_EMISSIONS_MAX);
    if (hazard->shaped && hazard->ladder.steps > 0 && from_m < last_m)
        return bw_hazard_ladder_envelope(hazard, from_m);
    double best = bw_hazard_ratio(hazard, from_m);
    if (!(from_m < last_m) || isnan(best))
        return best;
    long stretches = 3000;
    for (size_t i = 0; i < hazard->output->count; i++)
        if (hazard->output->beams[i].waist_m > from_m)
            best = fmax(best, bw_hazard_ratio(hazard, hazard->output->beams[i].waist_m));
    best = fmax(best, bw_hazard_ratio(hazard, last_m));
    raise_to_largest(hazard, from_m, last_m, 40, &stretches, &best);
    return best;
}

/* Given: hazard.  Returned: term_ratios, upper bound of each term anywhere outside the stand-off; what is not shaped is
 * exact: a term is at its largest where its beam is narrowest. Of a shaped hazard without a ladder one is made. */
void bw_hazard_worst_terms(const struct bw_hazard *hazard, double term_ratios[BW_TERMS_MAX]) {
    double from_m = hazard->output->stand_off_m, last_m = bw_hazard_settled_m(hazard, BW_EMISSIONS_MAX);
    struct bw_hazard copy;
    if (!hazard->shaped) {
        bw_hazard_bounds(hazard, from_m, last_m, BW_EMISSIONS_MAX, term_ratios);
        return;
    }
    if (hazard->ladder.steps == 0) {
        copy = *hazard;
        bw_hazard_prepare_envelope(&copy);
        hazard = &copy;
    }
    for (size_t i = 0; i < hazard->term_count; i++)
        term_ratios[i] = hazard->ladder.worst[i];
}
