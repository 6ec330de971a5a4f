/* Beams with an apparent source or several emitters: the eye sees something of a size, which falls with the distance,
 * and with it CE, T2, the train correction and so the limit. Evaluated at a distance, and bounded between two.
 *
 * Seen as an extended source, a beam is not simply safer the farther off: the irradiance falls, and so does the limit.
 * Bounds of the limit between two subtenses a < b, for the search of hazard distances:
 *   - Continuous emission: the limit never falls as the source grows: it is at least that of a.
 *   - Pulses: the correction of rule 3 falls where the source grows past 5 mrad, past alpha_max, and as T2 lets more
 *     pulses count; it rises only past 100 mrad. No limit grows faster than the square of the subtense. So without
 *     100 mrad between them the limit is at least (a/b)^2 times that of b; and likewise piece by piece. Past alpha_min,
 *     too, printed rows step up (10 and 10.12 W/m2). */
#include "internal.h"

#include <math.h>

static const double just_beyond = 1. + 1e-9;
static const double longest_clamp_rad = 100e-3, shortest_clamp_rad = 5e-3; /* alpha_max of all rule sets lies between */

/* One term, whose limit is wanted for other subtenses. */
struct aim {
    const struct bw_hazard *hazard;
    size_t index; /* of the emission */
    const struct bw_emission *emission;
    enum bw_effect effect;
    struct bw_error *error;
    struct bw_train_limit least; /* the lowest met so far */
    double least_rad;
    bool failed;
};

/* Limit of the time-mean irradiance for a subtense; NAN if there is none. */
static double limit_w_m2(struct aim *aim, double subtense_rad, struct bw_train_limit *found) {
    struct bw_train_limit_set set;
    double counted_rad = fmin(fmax(subtense_rad, point_rad), bw_pi / 2.);
    enum bw_status status = aim->failed
                                ? BW_ARGUMENT
                                : bw_hazard_limits_at_eye(aim->hazard, aim->index, counted_rad, &set, NULL, aim->error);
    for (size_t i = 0; status == BW_OK && i < set.count; i++)
        if (set.limits[i].limit.effect == aim->effect) {
            *found = set.limits[i];
            return set.limits[i].irradiance_w_m2;
        }
    aim->failed = true;
    return nan("");
}

/* The lowest limit at one subtense, among those met. */
static double at_subtense(struct aim *aim, double subtense_rad) {
    struct bw_train_limit found;
    double limit = limit_w_m2(aim, subtense_rad, &found);
    if (!aim->failed && !(aim->least.irradiance_w_m2 <= limit)) {
        aim->least = found;
        aim->least_rad = subtense_rad;
    }
    return limit;
}

/* No more than the limit anywhere between two subtenses. */
static double between(struct aim *aim, double low_rad, double high_rad) {
    static const double cuts_rad[] = {1.5e-3, 100e-3};
    double low = fmax(low_rad, point_rad), high = fmax(high_rad, point_rad);
    if (!(low < high) || aim->emission->continuous)
        return at_subtense(aim, low);
    double least = at_subtense(aim, high) * (low / high) * (low / high);
    for (size_t i = 0; i < sizeof cuts_rad / sizeof *cuts_rad; i++)
        if (low <= cuts_rad[i] && cuts_rad[i] < high) {
            double limit = at_subtense(aim, cuts_rad[i]) * (low / cuts_rad[i]) * (low / cuts_rad[i]);
            least = limit >= least ? least : limit;
        }
    return least;
}

/* The lowest limit that a group may have. Of an oblong one all angles from low to high are allowed for: both ends, and
 * just past each angle at which the train correction falls. */
static double group_limit(struct aim *aim, const struct group *group) {
    const double steps_rad[] = {shortest_clamp_rad,
                                bw_limits_largest_subtense(aim->hazard->table, aim->emission->pulse_duration_s)};
    double least = between(aim, group->low_rad[1], group->low_rad[0]);
    if (aim->emission->continuous || !(group->high_rad[0] > group->low_rad[1]))
        return least;
    double high = between(aim, group->high_rad[1], group->high_rad[0]);
    least = high >= least ? least : high;
    for (size_t i = 0; i < sizeof steps_rad / sizeof *steps_rad; i++)
        if (steps_rad[i] >= group->low_rad[1] && steps_rad[i] < group->high_rad[0]) {
            double step = at_subtense(aim, steps_rad[i] * just_beyond);
            least = step >= least ? least : step;
        }
    return least;
}

static double clamp_for(const struct bw_hazard *hazard, double time_s) {
    return fmin(fmax(bw_limits_largest_subtense(hazard->table, time_s), shortest_clamp_rad), longest_clamp_rad);
}

/* alpha_max of the rule set for the shortest and the longest time that matters; how far a limit may fall as the source
 * grows: to a half at alpha_max, and by one pulse more that counts, at most the second, 2^(1/4). */
static struct sight sight_of(const struct bw_hazard *hazard, const struct bw_emission *emission, double near_m,
                             double far_m) {
    double exposure_s = hazard->viewing.exposure_s;
    double shortest_s = emission->continuous ? exposure_s : fmin(exposure_s, emission->pulse_duration_s);
    return (struct sight){
        .near_m = near_m,
        .far_m = far_m,
        .magnification = bw_hazard_magnification(hazard),
        .clamp_low_rad = clamp_for(hazard, shortest_s),
        .clamp_rad = clamp_for(hazard, exposure_s),
        .slack = emission->continuous ? 1. : 2.4,
    };
}

static bool depends_on_subtense(enum bw_effect effect) {
    return effect == BW_RETINA_THERMAL || effect == BW_RETINA_PHOTOCHEMICAL;
}

static void note(struct bw_seen *seen, double ratio, const struct group *group, const struct aim *aim) {
    if (seen == NULL || ratio <= seen->ratio)
        return;
    *seen = (struct bw_seen){ratio, aim->least_rad, group->emitters, aim->least};
}

/* The worst group against its own limit. */
static double retina_ratio(const struct bw_hazard *hazard, size_t term, double near_m, double far_m,
                           struct bw_seen *seen, struct bw_error *error) {
    size_t index = hazard->terms[term].emission;
    const struct bw_emission *emission = &hazard->output->emissions[index];
    const struct bw_train_limit *point = &hazard->terms[term].limit;
    struct sight sight = sight_of(hazard, emission, near_m, far_m);
    struct front front;
    double largest = 0.;
    bw_hazard_front(&hazard->output->beams[index], &sight, point->aperture_m, &front);
    for (size_t i = 0; i < front.count; i++) {
        struct aim aim = {
            .hazard = hazard, .index = index, .emission = emission, .effect = point->limit.effect, .error = error};
        aim.least.irradiance_w_m2 = HUGE_VAL;
        double ratio = emission->average_power_w * front.groups[i].per_w / group_limit(&aim, &front.groups[i]);
        if (!(ratio <= largest))
            largest = ratio;
        if (isnan(ratio))
            return ratio;
        note(seen, ratio, &front.groups[i], &aim);
    }
    return largest;
}

static double shaped_part(const struct bw_hazard *hazard, size_t term, double near_m, double far_m,
                          struct bw_seen *seen, struct bw_error *error) {
    const struct bw_term *of = &hazard->terms[term];
    const struct bw_beam *beam = &hazard->output->beams[of->emission];
    if (depends_on_subtense(of->limit.limit.effect))
        return retina_ratio(hazard, term, near_m, far_m, seen, error);
    double ratio = hazard->output->emissions[of->emission].average_power_w *
                   bw_hazard_all_per_w(beam, near_m, far_m, of->limit.aperture_m) / of->limit.irradiance_w_m2;
    if (seen != NULL)
        *seen = (struct bw_seen){ratio, 0., beam->cluster.count > 1 ? beam->cluster.count : 1, of->limit};
    return ratio;
}

double bw_hazard_shaped_term(const struct bw_hazard *hazard, size_t term, double near_m, double far_m,
                             struct bw_seen *seen, struct bw_error *error) {
    double settled_m = hazard->settled_m[hazard->terms[term].emission], beyond = 0.;
    if (!(near_m >= 0. && far_m >= near_m))
        return nan("");
    if (near_m >= settled_m)
        return bw_hazard_plain_term(hazard, term, near_m, far_m);
    if (far_m >= settled_m)
        beyond = bw_hazard_plain_term(hazard, term, settled_m, far_m);
    double before = shaped_part(hazard, term, near_m, fmin(far_m, settled_m), seen, error);
    return beyond <= before || isnan(before) ? before : beyond;
}

/* What the eye sees of one term, at one distance.
 * Given:    hazard, term; distance_m  0 or more
 * Returned: seen    ratio as bw_hazard_term_ratios has it, the group that makes it and its limit
 * Returns:  BW_OK; BW_ARGUMENT; BW_OUT_OF_RANGE */
enum bw_status bw_hazard_seen(const struct bw_hazard *hazard, size_t term, double distance_m, struct bw_seen *seen,
                              struct bw_error *error) {
    *seen = (struct bw_seen){.ratio = nan("")};
    if (!(term < hazard->term_count) || !(distance_m >= 0.))
        return bw_error_set(error, BW_ARGUMENT, "no such term, or the distance is %g m", distance_m);
    const struct bw_term *of = &hazard->terms[term];
    const struct bw_beam *beam = &hazard->output->beams[of->emission];
    if (!hazard->shaped || distance_m >= hazard->settled_m[of->emission]) {
        double ratio = bw_hazard_plain_term(hazard, term, distance_m, distance_m);
        double given_rad = hazard->viewing.subtense_rad;
        double subtense_rad =
            hazard->shaped ? bw_hazard_whole_rad(beam, distance_m, bw_hazard_magnification(hazard), longest_clamp_rad)
                           : given_rad;
        *seen = (struct bw_seen){ratio, subtense_rad, beam->cluster.count > 1 ? beam->cluster.count : 1, of->limit};
        return BW_OK;
    }
    struct bw_error cause = {.status = BW_OK};
    seen->ratio = -1.;
    double ratio = bw_hazard_shaped_term(hazard, term, distance_m, distance_m, seen, &cause);
    if (!(ratio >= 0.)) {
        seen->ratio = nan(""); /* whoever forgets the status must not read a safe place */
        return bw_error_set(error, cause.status == BW_OK ? BW_ARGUMENT : cause.status, "%s", cause.text);
    }
    return BW_OK;
}
