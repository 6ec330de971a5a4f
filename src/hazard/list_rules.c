/* The three rules for a list of pulses. Everything is counted in pulses of the largest energy: a window of n holds n
 * times that energy, and the limits are limits of that pulse, the others in proportion. */
#include "internal.h"

#include <math.h>

struct list_case {
    const struct train_case *train;
    struct tally *tallies;
    struct list list;
    struct bw_error *error;
};

/* ---- rules 1 and 3: pulse by pulse ---------------------------------------------------------------- */

/* A pulse; of one longer than the exposure, what the exposure cuts from it. */
static struct window one_pulse(const struct list_case *c, size_t i) {
    const struct bw_pulse *pulse = &c->list.pulses[i];
    double seen_s = fmin(pulse->duration_s, c->train->viewing->exposure_s);
    return (struct window){seen_s, seen_s / pulse->duration_s * (pulse->energy_j / c->list.largest_j), false};
}

/* As long as the one before and no stronger: it binds no more than that. */
static bool like_before(const struct list_case *c, size_t i) {
    const struct bw_pulse *p = c->list.pulses;
    return i > 0 && p[i].duration_s >= p[i - 1].duration_s && p[i].duration_s <= p[i - 1].duration_s &&
           p[i].energy_j <= p[i - 1].energy_j;
}

static enum bw_status rule_single(struct list_case *c) {
    enum bw_status status = BW_OK;
    for (size_t i = 0; i < c->list.count && status == BW_OK; i++) {
        struct window pulse = one_pulse(c, i);
        if (!like_before(c, i))
            status = bw_hazard_offer_window(c->train, c->tallies, BW_RULE_SINGLE, &pulse, c->error);
    }
    return status;
}

/* The row and the working of the correction that stays. */
static enum bw_status write_correction(struct list_case *c, double ti_s, double pulses, struct bw_working *working) {
    enum bw_status status = BW_OK;
    double correction;
    if (working != NULL)
        bw_hazard_counting_working(c->train, pulses, NULL, working);
    for (size_t i = 0; i < BW_EFFECTS && status == BW_OK; i++)
        if (c->tallies[i].rules[BW_RULE_TRAIN].found)
            status = bw_hazard_correction(c->train, c->tallies[i].rules[BW_RULE_TRAIN].window.time_s, ti_s, pulses,
                                          &correction, &c->tallies[i].correction_source, working, c->error);
    return status;
}

/* Each pulse by the correction of its own duration, N being the same for all; and the group that holds the most. */
static enum bw_status rule_train(struct list_case *c, struct bw_working *working) {
    double ti_s = bw_hazard_grouping_time_s(c->train), pulses, correction = 1.;
    double longest_s = bw_limits_train_longest_pulse(c->train->table) * (1. + 1e-12);
    if (!bw_hazard_train_applies(c->train))
        return BW_OK;
    enum bw_status status =
        bw_hazard_list_groups(&c->list, ti_s, bw_hazard_counting_time_s(c->train), &pulses, c->error);
    for (size_t i = 0; i < c->list.count && status == BW_OK; i++) {
        struct window pulse = one_pulse(c, i);
        if (like_before(c, i) || !(c->list.pulses[i].duration_s <= longest_s))
            continue;
        status = bw_hazard_correction(c->train, pulse.time_s, ti_s, pulses, &correction, NULL, NULL, c->error);
        if (status == BW_OK)
            status = bw_hazard_offer_train(c->train, c->tallies, &pulse, correction, c->error);
    }
    double length_s = fmin(ti_s, c->train->viewing->exposure_s);
    struct window group = {length_s, bw_hazard_list_most_j(&c->list, length_s, 2) / c->list.largest_j, false};
    if (status == BW_OK && group.holds > 0.) {
        status = bw_hazard_correction(c->train, length_s, ti_s, pulses, &correction, NULL, NULL, c->error);
        if (status == BW_OK)
            status = bw_hazard_offer_train(c->train, c->tallies, &group, correction, c->error);
    }
    for (size_t i = 0; i < BW_EFFECTS; i++)
        if (c->tallies[i].rules[BW_RULE_TRAIN].found) {
            c->tallies[i].pulses = pulses;
            c->tallies[i].group_pulses = fmax(1., group.holds);
        }
    return status == BW_OK ? write_correction(c, ti_s, pulses, working) : status;
}

/* ---- rule 2: every window ------------------------------------------------------------------------- */

/* The window that ends at an edge, or with the exposure. An exposure that meets no two pulses is that of one. */
static enum bw_status offer_edge(struct list_case *c, double edge_s) {
    double most_j = bw_hazard_list_most_j(&c->list, edge_s, 2);
    bool alone = !(most_j > 0.) && edge_s >= c->train->viewing->exposure_s;
    if (alone)
        most_j = bw_hazard_list_most_j(&c->list, edge_s, 1);
    struct window window = {edge_s, most_j / c->list.largest_j, alone};
    if (!(most_j > 0.))
        return BW_OK;
    return bw_hazard_offer_window(c->train, c->tallies, BW_RULE_AVERAGE, &window, c->error);
}

static void find_varying(const struct list_case *c, const struct edges *edges, bool varies[BW_EFFECTS]) {
    double aperture_m[BW_EFFECTS] = {0.};
    for (size_t i = 0; i < edges->count && edges->at_s[i] <= c->train->viewing->exposure_s; i++) {
        double next_s = i + 1 < edges->count ? edges->at_s[i + 1] : edges->at_s[i];
        const double times_s[] = {edges->at_s[i], sqrt(edges->at_s[i] * next_s)};
        for (size_t k = 0; k < sizeof times_s / sizeof *times_s; k++) {
            struct bw_limit_set set = {.count = 0};
            struct bw_exposure exposure = bw_hazard_exposure(c->train, times_s[k]);
            if (bw_limits(c->train->table, c->train->viewing->target, &exposure, &set, NULL, NULL) != BW_OK)
                continue;
            for (size_t j = 0; j < set.count; j++) {
                double *known_m = &aperture_m[set.limits[j].effect], here_m = set.limits[j].aperture_m;
                varies[set.limits[j].effect] |= *known_m > 0. && (here_m < *known_m || here_m > *known_m);
                *known_m = here_m;
            }
        }
    }
}

static enum bw_status search_between(struct list_case *c, double low_s, double high_s, double until_s,
                                     const bool varies[BW_EFFECTS]) {
    struct laws laws;
    struct strictest strictest[LAWS_MAX];
    bw_hazard_laws(c->train, low_s, high_s, varies, &laws);
    for (size_t k = 0; k < laws.count; k++) {
        const struct tally *tally = &c->tallies[laws.at[k].effect];
        const struct finding *known = &tally->rules[BW_RULE_AVERAGE];
        double beat = laws.at[k].narrow ? tally->least_j : known->found ? known->per_unit_j_m2 : HUGE_VAL;
        strictest[k] = (struct strictest){false, 0, 0, c->list.largest_j / beat};
    }
    enum bw_status status =
        laws.count > 0 ? bw_hazard_list_search(&c->list, &laws, low_s, until_s, strictest, c->error) : BW_OK;
    for (size_t k = 0; k < laws.count && status == BW_OK; k++) {
        size_t i = strictest[k].i, j = strictest[k].j;
        struct window window = {bw_hazard_list_length_s(&c->list, i, j),
                                bw_hazard_list_energy_j(&c->list, i, j) / c->list.largest_j, false};
        if (strictest[k].found)
            status = bw_hazard_offer_window(c->train, c->tallies, BW_RULE_AVERAGE, &window, c->error);
    }
    return status;
}

static enum bw_status rule_average(struct list_case *c) {
    struct edges edges;
    bool varies[BW_EFFECTS] = {false};
    double exposure_s = c->train->viewing->exposure_s;
    enum bw_status status = bw_hazard_edges(c->train, &edges, c->error);
    if (status != BW_OK)
        return status;
    find_varying(c, &edges, varies);
    for (size_t i = 0; i < edges.count && edges.at_s[i] < exposure_s && status == BW_OK; i++)
        status = offer_edge(c, edges.at_s[i]);
    if (status == BW_OK)
        status = offer_edge(c, exposure_s);
    for (size_t i = 0; i + 1 < edges.count && edges.at_s[i] < exposure_s && status == BW_OK; i++)
        status = search_between(c, edges.at_s[i], edges.at_s[i + 1], fmin(edges.at_s[i + 1], exposure_s), varies);
    return status;
}

enum bw_status bw_hazard_list_rules(const struct train_case *train, struct tally tallies[BW_EFFECTS],
                                    struct bw_working *working, struct bw_error *error) {
    struct list_case c = {.train = train, .tallies = tallies, .error = error};
    enum bw_status status = bw_hazard_list_make(train->emission, &c.list, error);
    if (status == BW_OK)
        status = rule_single(&c);
    if (status == BW_OK)
        status = rule_train(&c, working);
    if (status == BW_OK)
        status = rule_average(&c);
    bw_hazard_list_free(&c.list);
    return status;
}
