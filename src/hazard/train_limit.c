/* The limit of one emission, pulses and all: each rule for each effect, and the lowest. */
#include "internal.h"

#include <math.h>
#include <string.h>

static const double tie = 1e-9; /* rules this close are equal; the average then governs, then the single pulse */

const char *bw_train_rule_name(enum bw_train_rule rule) {
    static const char *const names[BW_RULES] = {"single", "average", "train"};
    return (unsigned)rule < BW_RULES ? names[rule] : NULL;
}

/* Offers one window to a rule: limit / what it holds, times the correction. The strictest stays. */
static void offer(const struct train_case *train, struct tally *tally, enum bw_train_rule rule,
                  const struct bw_limit *limit, const struct window *window, double correction) {
    struct finding *finding = &tally->rules[rule];
    double per_unit = correction * bw_hazard_whole_limit_j_m2(limit, train->viewing->subtense_rad) / window->holds;
    double narrow = per_unit * limit->aperture_m * limit->aperture_m;
    if (!(tally->least_j <= narrow)) {
        tally->least_j = narrow;
        tally->least = (struct finding){true, per_unit, correction, *window, *limit};
    }
    if (finding->found && finding->per_unit_j_m2 <= per_unit)
        return;
    *finding = (struct finding){true, per_unit, correction, *window, *limit};
}

/* Every effect's limit at the length of a window. */
static enum bw_status limits_at(const struct train_case *train, double time_s, struct bw_limit_set *set,
                                struct bw_error *error) {
    struct bw_exposure exposure = bw_hazard_exposure(train, time_s);
    return bw_limits(train->table, train->viewing->target, &exposure, set, NULL, error);
}

enum bw_status bw_hazard_offer_window(const struct train_case *train, struct tally tallies[BW_EFFECTS],
                                      enum bw_train_rule rule, const struct window *window, struct bw_error *error) {
    struct bw_limit_set set;
    enum bw_status status = limits_at(train, window->time_s, &set, error);
    for (size_t i = 0; status == BW_OK && i < set.count; i++) {
        struct tally *tally = &tallies[set.limits[i].effect];
        const struct finding *single = &tally->rules[BW_RULE_SINGLE];
        double limit_j_m2 = bw_hazard_whole_limit_j_m2(&set.limits[i], train->viewing->subtense_rad);
        /* An exposure that holds one pulse is under rule 1: no lower, where the printed rows step down. */
        if (window->alone && single->found && limit_j_m2 < single->per_unit_j_m2)
            tally->rules[rule] = *single;
        else
            offer(train, tally, rule, &set.limits[i], window, 1.);
    }
    return status;
}

struct average_case {
    const struct train_case *train;
    struct tally *tallies;
    struct bw_error *error;
};

static enum bw_status visit_window(const struct window *window, void *context) {
    const struct average_case *average = context;
    return bw_hazard_offer_window(average->train, average->tallies, BW_RULE_AVERAGE, window, average->error);
}

/* Rule 2: the energy of every window within the limit of its length; of a continuous emission, of the exposure. */
static enum bw_status rule_average(const struct train_case *train, struct tally tallies[BW_EFFECTS],
                                   struct bw_error *error) {
    struct edges edges = {.count = 0};
    struct average_case average = {train, tallies, error};
    enum bw_status status = train->emission->continuous ? BW_OK : bw_hazard_edges(train, &edges, error);
    if (status != BW_OK)
        return status;
    return bw_hazard_windows(train->emission, &edges, train->viewing->exposure_s, visit_window, &average);
}

/* One pulse; of a pulse longer than the exposure, what the exposure cuts from it. */
static struct window one_pulse(const struct train_case *train) {
    double seen_s = fmin(train->emission->pulse_duration_s, train->viewing->exposure_s);
    return (struct window){seen_s, seen_s / train->emission->pulse_duration_s, false};
}

double bw_hazard_grouping_time_s(const struct train_case *train) {
    double ti_s;
    return bw_limits_grouping_time(train->table, train->emission->wavelength_nm, &ti_s, NULL) ? ti_s : 0.;
}

double bw_hazard_counting_time_s(const struct train_case *train) {
    struct bw_exposure exposure = bw_hazard_exposure(train, train->viewing->exposure_s);
    return fmin(exposure.exposure_s, bw_limits_counting_time(train->table, &exposure));
}

/* From the start of a pulse to that of the next, where they follow each other most closely. */
static double closest_s(const struct bw_emission *emission) {
    double first[BW_STARTS_MAX], closest_s = HUGE_VAL;
    if (emission->pulse_count == 1)
        return closest_s;
    size_t count = bw_train_starts(emission, first);
    for (size_t i = 0; i < count; i++)
        closest_s = fmin(closest_s, bw_train_span_s(emission, first[i], 1.));
    return closest_s;
}

/* Pulses that count as one because they fall inside Ti (Tmin): the most that any window of Ti holds.
 * Returns: a window of one pulse if there is no Ti or the pulses are farther apart. */
static struct window one_group(const struct train_case *train, double ti_s) {
    const struct bw_emission *emission = train->emission;
    double length_s = fmin(ti_s, train->viewing->exposure_s);
    if (!(closest_s(emission) <= length_s * (1. + 1e-12)))
        return one_pulse(train);
    return (struct window){length_s, bw_train_window_energy(emission, length_s) / emission->pulse_energy_j, false};
}

static bool is_group(const struct train_case *train, const struct window *group) {
    return group->time_s > one_pulse(train).time_s;
}

enum bw_status bw_hazard_correction(const struct train_case *train, double pulse_s, double ti_s, double pulses,
                                    double *correction, struct bw_source_note *source, struct bw_working *working,
                                    struct bw_error *error) {
    struct bw_train_count count = {
        .pulse_s = pulse_s,
        .ti_s = ti_s,
        .pulses = pulses,
        .exposure_s = train->viewing->exposure_s,
        .subtense_rad = train->viewing->subtense_rad,
    };
    *correction = bw_limits_train_correction(train->table, &count, source, working);
    if (!(*correction > 0. && *correction <= 1.))
        return bw_error_set(error, BW_OUT_OF_RANGE, "no row of %s corrects a train of %g pulses of %g s",
                            bw_table_id(train->table), pulses, pulse_s);
    return BW_OK;
}

enum bw_status bw_hazard_offer_train(const struct train_case *train, struct tally tallies[BW_EFFECTS],
                                     const struct window *window, double correction, struct bw_error *error) {
    struct bw_limit_set set;
    enum bw_status status = limits_at(train, window->time_s, &set, error);
    for (size_t i = 0; status == BW_OK && i < set.count; i++)
        if (bw_limits_train_applies(train->table, set.limits[i].effect, train->emission->wavelength_nm))
            offer(train, &tallies[set.limits[i].effect], BW_RULE_TRAIN, &set.limits[i], window, correction);
    return status;
}

bool bw_hazard_train_applies(const struct train_case *train) {
    for (int effect = 0; effect < BW_EFFECTS; effect++)
        if (bw_limits_train_applies(train->table, (enum bw_effect)effect, train->emission->wavelength_nm) &&
            (effect == BW_SKIN_EFFECT) == (train->viewing->target == BW_SKIN))
            return true;
    return false;
}

/* Rule 3. Pulses inside Ti count as one pulse of the length Ti with all their energy; the correction goes by the
 * number of groups (pulse_groups.c). Two readings of a group are kept, and the stricter holds: the group against the
 * limit of Ti, and each pulse in it against the limit of its own duration, both corrected. */
static enum bw_status rule_train(const struct train_case *train, struct tally tallies[BW_EFFECTS],
                                 struct bw_working *working, struct bw_error *error) {
    double ti_s = bw_hazard_grouping_time_s(train), correction;
    if (!bw_hazard_train_applies(train))
        return BW_OK;
    struct window pulse = one_pulse(train), group = one_group(train, ti_s);
    if (!(train->emission->pulse_duration_s <= bw_limits_train_longest_pulse(train->table) * (1. + 1e-12)))
        return BW_OK;
    double pulses = bw_hazard_groups(train->emission, ti_s, bw_hazard_counting_time_s(train));
    struct bw_source_note source = {0};
    if (working != NULL)
        bw_hazard_counting_working(train, pulses, is_group(train, &group) ? &group : NULL, working);
    enum bw_status status =
        bw_hazard_correction(train, group.time_s, ti_s, pulses, &correction, &source, working, error);
    if (status == BW_OK)
        status = bw_hazard_offer_train(train, tallies, &pulse, correction, error);
    if (status == BW_OK && is_group(train, &group))
        status = bw_hazard_offer_train(train, tallies, &group, correction, error);
    for (size_t i = 0; i < BW_EFFECTS; i++)
        if (tallies[i].rules[BW_RULE_TRAIN].found) {
            tallies[i].pulses = pulses;
            tallies[i].group_pulses = is_group(train, &group) ? group.holds : 1.;
            tallies[i].correction_source = source;
        }
    return status;
}

static enum bw_train_rule governing_rule(const struct tally *tally) {
    static const enum bw_train_rule order[BW_RULES] = {BW_RULE_AVERAGE, BW_RULE_SINGLE, BW_RULE_TRAIN};
    double lowest = HUGE_VAL;
    for (size_t i = 0; i < BW_RULES; i++)
        if (tally->rules[i].found)
            lowest = fmin(lowest, tally->rules[i].per_unit_j_m2);
    for (size_t i = 0; i < BW_RULES; i++)
        if (tally->rules[order[i]].found && tally->rules[order[i]].per_unit_j_m2 <= lowest * (1. + tie))
            return order[i];
    return BW_RULE_AVERAGE;
}

/* The aperture to average over, so that one ratio stands for all windows. Windows may have different apertures
 * (1 mm up to 0.3 s, 3.5 mm from 10 s), and which one binds depends on the width of the beam. With the lowest limit H
 * of all windows, and the aperture D for which H D^2 is the lowest of all windows, the ratio is exact for beams much
 * wider and much narrower than the apertures, and never too small in between: the mean over an aperture falls with
 * its area, the power through it rises. */
static double common_aperture_m(const struct tally *tally, double lowest, const struct bw_limit *limit) {
    double own = lowest * limit->aperture_m * limit->aperture_m;
    if (!(tally->least_j < own * (1. - 1e-12)))
        return limit->aperture_m;
    return sqrt(tally->least_j / lowest);
}

static void conclude(const struct train_case *train, const struct tally *tally, struct bw_train_limit *limit) {
    const struct bw_emission *emission = train->emission;
    double unit = emission->continuous ? train->viewing->exposure_s : 1., lowest = HUGE_VAL;
    limit->rule = governing_rule(tally);
    limit->limit = tally->rules[limit->rule].limit;
    for (size_t i = 0; i < BW_RULES; i++) {
        const struct finding *finding = &tally->rules[i];
        limit->rules_j_m2[i] = finding->found ? finding->per_unit_j_m2 * unit : nan("");
        if (finding->found)
            lowest = fmin(lowest, finding->per_unit_j_m2);
    }
    limit->per_pulse_j_m2 = lowest * unit;
    limit->irradiance_w_m2 =
        emission->continuous ? lowest : lowest * (emission->average_power_w / emission->pulse_energy_j);
    limit->aperture_m = common_aperture_m(tally, lowest, &limit->limit);
    limit->pulses = tally->pulses;
    limit->group_pulses = tally->group_pulses;
    limit->correction = tally->rules[BW_RULE_TRAIN].found ? tally->rules[BW_RULE_TRAIN].correction : 1.;
    limit->correction_source = tally->correction_source;
}

static enum bw_status check(const struct train_case *train, struct bw_error *error) {
    const struct bw_emission *emission = train->emission;
    if (!(train->viewing->exposure_s > 0. && train->viewing->exposure_s < HUGE_VAL))
        return bw_error_set(error, BW_ARGUMENT, "exposure time is %g s; it must be above 0",
                            train->viewing->exposure_s);
    if (!(emission->average_power_w > 0. && emission->average_power_w < HUGE_VAL))
        return bw_error_set(error, BW_ARGUMENT, "average power is %g W; it must be above 0", emission->average_power_w);
    bool pulses = emission->pulse_duration_s > 0. && emission->pulse_energy_j > 0.;
    bool follow = emission->repetition_rate_hz > 0. || emission->pulse_count == 1 || emission->pulses != NULL;
    if (!emission->continuous && !(pulses && follow))
        return bw_error_set(error, BW_ARGUMENT, "the pulses are incomplete: %g J, %g s, %g Hz",
                            emission->pulse_energy_j, emission->pulse_duration_s, emission->repetition_rate_hz);
    return BW_OK;
}

static enum bw_status tally_rules(const struct train_case *train, struct tally tallies[BW_EFFECTS],
                                  struct bw_working *working, struct bw_error *error) {
    for (size_t i = 0; i < BW_EFFECTS; i++)
        tallies[i] = (struct tally){.least_j = HUGE_VAL, .group_pulses = 1.};
    enum bw_status status = check(train, error);
    if (status == BW_OK && train->emission->pulses != NULL)
        return bw_hazard_list_rules(train, tallies, working, error);
    if (status == BW_OK && !train->emission->continuous) {
        struct window pulse = one_pulse(train);
        status = bw_hazard_offer_window(train, tallies, BW_RULE_SINGLE, &pulse, error);
        if (status == BW_OK)
            status = rule_train(train, tallies, working, error);
    }
    return status == BW_OK ? rule_average(train, tallies, error) : status;
}

/* Limits of one emission by every effect and rule.
 * Given:    table, emission; viewing  target, exposure time, subtense of the source, area of skin
 * Returned: limits   one an effect that has a row; none on error (Notes)
 *           working  may be NULL
 * Returns:  BW_OK; BW_ARGUMENT; BW_OUT_OF_RANGE if no row covers the wavelength or a time that matters
 * Notes:    1) rule 1, single: a pulse against the limit of its duration.
 *           2) rule 2, average: the worst window of every length up to the exposure; see windows.c. Continuous: the
 * exposure. 3) rule 3, train: only for effects, wavelengths and durations that the rule set names; see rule_train. 4)
 * Of a source wider than the cone in which a limit is measured, the limits are those of the whole exposure: the cone is
 * in them already. Source:   design.md, "Pulse trains"; the clauses are in the rule sets.   Tests: test_hazard_train.c
 */
enum bw_status bw_hazard_train_limits(const struct bw_table *table, const struct bw_emission *emission,
                                      const struct bw_viewing_case *viewing, struct bw_train_limit_set *limits,
                                      struct bw_working *working, struct bw_error *error) {
    struct train_case train = {table, emission, viewing};
    struct tally tallies[BW_EFFECTS];
    limits->count = limits->governing = 0;
    enum bw_status status = tally_rules(&train, tallies, working, error);
    if (status != BW_OK)
        return status;
    for (size_t i = 0; i < BW_EFFECTS; i++) {
        const struct finding *rules = tallies[i].rules;
        if (rules[BW_RULE_SINGLE].found || rules[BW_RULE_AVERAGE].found || rules[BW_RULE_TRAIN].found)
            conclude(&train, &tallies[i], &limits->limits[limits->count++]);
    }
    for (size_t i = 1; i < limits->count; i++)
        if (!(limits->limits[limits->governing].per_pulse_j_m2 <= limits->limits[i].per_pulse_j_m2))
            limits->governing = i;
    if (working != NULL)
        bw_hazard_train_working(&train, tallies, limits, working);
    return BW_OK;
}
