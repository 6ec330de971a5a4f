/* The [train] rows: for every pulse, source, number of pulses and exposure exactly one holds. */
#include "check.h"

#include <math.h>
#include <stdio.h>

/* Edges of one column and the middles between them; the odd ones are middles. */
struct samples {
    double values[CHECK_SAMPLES];
    size_t count;
};

static void make_samples(struct samples *samples, double *edges, size_t count) {
    count = bw_check_sort_edges(edges, count);
    samples->count = 0;
    for (size_t i = 0; i < count && samples->count + 2 < CHECK_SAMPLES; i++) {
        samples->values[samples->count++] = edges[i];
        if (i + 1 < count)
            samples->values[samples->count++] = 0.5 * (edges[i] + edges[i + 1]);
    }
}

static void add_span(double *edges, size_t *count, const struct span *span, double farthest) {
    if (*count + 2 > CHECK_SAMPLES / 2)
        return;
    edges[(*count)++] = fmin(span->low, farthest);
    edges[(*count)++] = fmin(span->high, farthest);
}

static struct span subtense_of(const struct train_row *row, double alpha_max_mrad) {
    struct span span = row->subtense_mrad;
    if (row->low_is_alpha_max)
        span.low = alpha_max_mrad;
    if (row->high_is_alpha_max)
        span.high = alpha_max_mrad;
    return span;
}

struct place {
    enum pulse_kind pulse;
    double alpha_max_mrad, subtense_mrad, pulses, exposure_s;
    bool middle; /* away from every edge */
};

/* Returns: false after a fault. */
static bool check_place(const struct bw_table *table, const struct place *place, struct bw_faults *faults) {
    const struct train_row *first = NULL;
    char subtense[LIMITS_NUMBER_SIZE], pulses[LIMITS_NUMBER_SIZE], exposure[LIMITS_NUMBER_SIZE];
    for (size_t i = 0; i < table->train_count; i++) {
        const struct train_row *row = &table->train[i];
        struct span span = subtense_of(row, place->alpha_max_mrad);
        if ((row->pulse != PULSE_ANY && row->pulse != place->pulse) ||
            !bw_limits_in_span(&span, place->subtense_mrad) || !bw_limits_in_span(&row->pulses, place->pulses) ||
            !bw_limits_in_span(&row->exposure_s, place->exposure_s))
            continue;
        if (first != NULL && place->middle) {
            bw_faults_add(faults, row->note.line, "train", row->note.key, "overlaps %s", first->note.key);
            return false;
        }
        first = row;
    }
    if (first != NULL)
        return true;
    bw_faults_add(faults, table->train[0].note.line, "train", "",
                  "gap: no row covers a %s pulse at %s mrad, N = %s, %s s exposure", bw_limits_pulse_name(place->pulse),
                  bw_limits_number(subtense, place->subtense_mrad), bw_limits_number(pulses, place->pulses),
                  bw_limits_number(exposure, place->exposure_s));
    return false;
}

static bool check_places(const struct bw_table *table, enum pulse_kind pulse, double alpha_max_mrad,
                         struct bw_faults *faults) {
    static const struct span all_sources = {0.0, 1571.0, false, false}, all_pulses = {1.0, 1e15, false, false},
                             all_times = {0.0, 1e15, false, false};
    double edges[3][CHECK_SAMPLES];
    size_t counts[3] = {0, 0, 0};
    struct samples sources, pulses, times;
    add_span(edges[0], &counts[0], &all_sources, 1571.0);
    add_span(edges[1], &counts[1], &all_pulses, 1e15);
    add_span(edges[2], &counts[2], &all_times, 1e15);
    for (size_t i = 0; i < table->train_count; i++) {
        struct span span = subtense_of(&table->train[i], alpha_max_mrad);
        add_span(edges[0], &counts[0], &span, 1571.0);
        add_span(edges[1], &counts[1], &table->train[i].pulses, 1e15);
        add_span(edges[2], &counts[2], &table->train[i].exposure_s, 1e15);
    }
    make_samples(&sources, edges[0], counts[0]);
    make_samples(&pulses, edges[1], counts[1]);
    make_samples(&times, edges[2], counts[2]);
    for (size_t i = 0; i < sources.count; i++)
        for (size_t j = 0; j < pulses.count; j++)
            for (size_t k = 0; k < times.count; k++) {
                struct place place = {pulse,
                                      alpha_max_mrad,
                                      sources.values[i],
                                      pulses.values[j],
                                      times.values[k],
                                      i % 2 == 1 && j % 2 == 1 && k % 2 == 1};
                if (!check_place(table, &place, faults))
                    return false;
            }
    return true;
}

void bw_check_train(const struct bw_table *table, struct bw_faults *faults) {
    if (table->train_count == 0)
        return;
    /* Pulses whose alpha_max is the smallest, the largest and between: amax moves through the rows. */
    static const double durations_s[] = {1e-9, 1e-2, 10.0};
    for (size_t i = 0; i < sizeof durations_s / sizeof durations_s[0]; i++) {
        double alpha_max_mrad = fmin(bw_limits_alpha_max_mrad(table, durations_s[i]), limits_subtense_high_mrad);
        if (!check_places(table, PULSE_SHORT, alpha_max_mrad, faults) ||
            !check_places(table, PULSE_LONG, alpha_max_mrad, faults))
            return;
    }
}
