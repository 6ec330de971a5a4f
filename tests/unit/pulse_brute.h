/* For tests only: every rule for a train by trying all its windows, one by one. Knows nothing of the ways of
 * src/hazard: it takes the pulses as a list, the limits from the tables, and forgets nothing. */
#ifndef TESTS_PULSE_BRUTE_H
#define TESTS_PULSE_BRUTE_H

#include <beamward/hazard.h>

#include <math.h>
#include <stdint.h>
#include <string.h>

static double uniform(uint64_t *random) {
    *random = *random * 6364136223846793005u + 1442695040888963407u;
    return (double)(*random >> 11) / 9007199254740992.;
}

static double between(uint64_t *random, double low, double high) {
    return low + (high - low) * uniform(random);
}

/* Even in the logarithm. */
static double decades(uint64_t *random, double low, double high) {
    return low * pow(high / low, uniform(random));
}

struct brute {
    const struct bw_table *table;
    double wavelength_nm, largest_j;
    struct bw_viewing_case viewing;
    const struct bw_pulse *pulses;
    size_t count;
    double opens_before_s; /* windows that open later are not counted for N: of a train without end */
    double lowest[BW_EFFECTS][BW_RULES], least[BW_EFFECTS]; /* limit; limit times aperture squared */
    double any[BW_EFFECTS]; /* limit by windows of any length, of two pulses or more */
    double n, group;
};

static void brute_try(struct brute *b, enum bw_train_rule rule, double time_s, double energy_j, double correction) {
    struct bw_exposure exposure = {b->wavelength_nm, time_s, b->viewing.subtense_rad, b->viewing.area_m2};
    struct bw_limit_set set;
    if (!(energy_j > 0.))
        return;
    if (bw_limits(b->table, b->viewing.target, &exposure, &set, NULL, NULL) != BW_OK)
        return;
    for (size_t i = 0; i < set.count; i++) {
        const struct bw_limit *limit = &set.limits[i];
        size_t effect = limit->effect;
        double wide = b->viewing.subtense_rad / limit->acceptance_rad;
        double value = limit->radiant_exposure_j_m2 * (wide > 1. ? wide * wide : 1.) / energy_j * b->largest_j;
        value *= correction;
        if (rule == BW_RULE_TRAIN && !bw_limits_train_applies(b->table, limit->effect, b->wavelength_nm))
            continue;
        b->lowest[effect][rule] = fmin(b->lowest[effect][rule], value);
        b->least[effect] = fmin(b->least[effect], value * limit->aperture_m * limit->aperture_m);
    }
}

/* Windows of lengths that mean nothing to the limits. */
static void brute_try_any(struct brute *b, double time_s, double energy_j) {
    double kept[BW_EFFECTS], least[BW_EFFECTS];
    for (size_t i = 0; i < BW_EFFECTS; i++) {
        kept[i] = b->lowest[i][BW_RULE_AVERAGE];
        least[i] = b->least[i];
        b->lowest[i][BW_RULE_AVERAGE] = HUGE_VAL;
    }
    brute_try(b, BW_RULE_AVERAGE, time_s, energy_j, 1.);
    for (size_t i = 0; i < BW_EFFECTS; i++) {
        b->any[i] = fmin(b->any[i], b->lowest[i][BW_RULE_AVERAGE]);
        b->lowest[i][BW_RULE_AVERAGE] = kept[i];
        b->least[i] = least[i];
    }
}

/* Energy of the window from one time to another, counted from a pulse so that little is lost; how many it meets. */
static double brute_energy(const struct brute *b, size_t from, double open_s, double close_s, size_t *meets) {
    long double sum = 0.0L;
    *meets = 0;
    for (size_t i = 0; i < b->count; i++) {
        double start_s = b->pulses[i].start_s - b->pulses[from].start_s;
        double inside_s = fmin(start_s + b->pulses[i].duration_s, close_s) - fmax(start_s, open_s);
        if (inside_s > 0. && inside_s < b->pulses[i].duration_s * (1. - 1e-13)) {
            sum += (long double)(b->pulses[i].energy_j * (inside_s / b->pulses[i].duration_s));
            *meets += inside_s > 1e-9 * b->pulses[i].duration_s ? 1 : 0; /* more than rounding where two touch */
        } else if (inside_s > 0.) {
            sum += (long double)b->pulses[i].energy_j;
            ++*meets;
        }
    }
    return (double)sum;
}

/* All windows of one length that open with a pulse or close with one and meet so many pulses. Returns: the most. */
static double brute_of_length(const struct brute *b, double length_s, size_t least_meets) {
    double most_j = 0.;
    for (size_t i = 0; i < b->count; i++) {
        size_t meets;
        double energy_j = brute_energy(b, i, 0., length_s, &meets);
        most_j = meets >= least_meets ? fmax(most_j, energy_j) : most_j;
        double end_s = b->pulses[i].duration_s;
        energy_j = brute_energy(b, i, end_s - length_s, end_s, &meets);
        most_j = meets >= least_meets ? fmax(most_j, energy_j) : most_j;
    }
    return most_j;
}

static void brute_average(struct brute *b) {
    for (size_t i = 0; i < b->count; i++) {
        long double sum = (long double)b->pulses[i].energy_j;
        for (size_t j = i + 1; j < b->count; j++) {
            double time_s = b->pulses[j].start_s - b->pulses[i].start_s + b->pulses[j].duration_s;
            sum += (long double)b->pulses[j].energy_j;
            if (time_s <= b->viewing.exposure_s)
                brute_try(b, BW_RULE_AVERAGE, time_s, (double)sum, 1.);
        }
    }
    struct bw_exposure exposure = {b->wavelength_nm, b->viewing.exposure_s, b->viewing.subtense_rad, 0.};
    double lengths_s[BW_EDGES_MAX + 2];
    size_t count = bw_limits_time_edges(b->table, b->viewing.target, &exposure, lengths_s, BW_EDGES_MAX);
    double subtense_mrad = 1e3 * b->viewing.subtense_rad; /* where a time-dependent angle passes the subtense */
    if (subtense_mrad > 5. && subtense_mrad < 100. && strcmp(bw_table_id(b->table), "eu-2006-25") != 0)
        lengths_s[count++] = pow(subtense_mrad / 200., 2.);
    if (subtense_mrad > 11. && subtense_mrad < 110. && b->wavelength_nm <= 600.)
        lengths_s[count++] = pow(subtense_mrad / 1.1, 2.);
    for (size_t i = 0; i < count; i++)
        if (lengths_s[i] > 1e-13 && lengths_s[i] < b->viewing.exposure_s)
            brute_try(b, BW_RULE_AVERAGE, lengths_s[i], brute_of_length(b, lengths_s[i], 2), 1.);
    double most_j = brute_of_length(b, b->viewing.exposure_s, 2);
    if (most_j > 0.)
        brute_try(b, BW_RULE_AVERAGE, b->viewing.exposure_s, most_j, 1.);
    for (double share = .9; share > .01; share *= .7)
        if (share * b->viewing.exposure_s > 1e-13)
            brute_try_any(b, share * b->viewing.exposure_s, brute_of_length(b, share * b->viewing.exposure_s, 2));
}

/* Pulses i to j in groups: runs of neighbours within Ti, each of so many Ti as begin before its last pulse does. */
static double brute_groups(const struct brute *b, size_t i, size_t j, double ti_s) {
    double groups = 0.;
    for (size_t last; i <= j; i = last + 1) {
        for (last = i; last < j && ti_s > 0. &&
                       b->pulses[last + 1].start_s - b->pulses[last].start_s <= ti_s * (1. + 1e-12);
             last++)
            continue;
        double span_s = b->pulses[last].start_s - b->pulses[i].start_s, begin_s = 0., begun = 0.;
        for (; begun <= (double)(last - i) && begin_s <= span_s * (1. + 1e-12); begin_s = ++begun * ti_s)
            continue;
        groups += fmax(1., fmin(begun, (double)(last - i + 1)));
    }
    return groups;
}

static void brute_train(struct brute *b) {
    double ti_s = 0., counting_s, longest_s = bw_limits_train_longest_pulse(b->table) * (1. + 1e-12);
    struct bw_exposure exposure = {b->wavelength_nm, b->viewing.exposure_s, b->viewing.subtense_rad, 0.};
    bw_limits_grouping_time(b->table, b->wavelength_nm, &ti_s, NULL);
    counting_s = fmin(exposure.exposure_s, bw_limits_counting_time(b->table, &exposure));
    b->n = 0.;
    for (size_t i = 0; i < b->count && b->pulses[i].start_s - b->pulses[0].start_s < b->opens_before_s; i++) {
        size_t last = i;
        while (last + 1 < b->count && b->pulses[last + 1].start_s - b->pulses[i].start_s < counting_s * (1. - 1e-13))
            last++;
        b->n = fmax(b->n, brute_groups(b, i, last, ti_s));
    }
    struct bw_train_count count = {0., ti_s, b->n, b->viewing.exposure_s, b->viewing.subtense_rad};
    for (size_t i = 0; i < b->count; i++) {
        double d = b->pulses[i].duration_s, seen_s = fmin(d, b->viewing.exposure_s);
        count.pulse_s = seen_s;
        if (d <= longest_s)
            brute_try(b, BW_RULE_TRAIN, seen_s, b->pulses[i].energy_j * seen_s / d,
                      bw_limits_train_correction(b->table, &count, NULL, NULL));
    }
    double length_s = fmin(ti_s, b->viewing.exposure_s);
    b->group = brute_of_length(b, length_s, 2) / b->largest_j;
    count.pulse_s = length_s;
    if (b->group > 0.)
        brute_try(b, BW_RULE_TRAIN, length_s, b->group * b->largest_j,
                  bw_limits_train_correction(b->table, &count, NULL, NULL));
}

static void brute_all(struct brute *b) {
    for (size_t effect = 0; effect < BW_EFFECTS; effect++) {
        b->least[effect] = b->any[effect] = HUGE_VAL;
        for (size_t rule = 0; rule < BW_RULES; rule++)
            b->lowest[effect][rule] = HUGE_VAL;
    }
    b->largest_j = 0.;
    for (size_t i = 0; i < b->count; i++)
        b->largest_j = fmax(b->largest_j, b->pulses[i].energy_j);
    for (size_t i = 0; i < b->count; i++) {
        double d = b->pulses[i].duration_s, seen_s = fmin(d, b->viewing.exposure_s);
        brute_try(b, BW_RULE_SINGLE, seen_s, b->pulses[i].energy_j * seen_s / d, 1.);
    }
    brute_train(b);
    brute_average(b);
}

#endif
