/* One limit by every rule set, side by side. */
#include "internal.h"

#include <stdio.h>

static const struct bw_limit *limit_of(const struct bw_limit_query *set) {
    return set->has_train ? &set->train.limits[set->train.governing].limit : &set->limits.limits[set->limits.governing];
}

static double figure(const struct bw_limit_query *set) {
    return set->has_train ? set->train.limits[set->train.governing].per_pulse_j_m2 : limit_of(set)->irradiance_w_m2;
}

enum { SETS_MAX = 16, SETS = 4 };

void report_limit_difference(struct bw_text *out, const struct bw_limit_query *query) {
    struct bw_column columns[SETS_MAX];
    size_t count = 0;
    for (; count < query->rule_set_count && count < SETS_MAX; count++) {
        const struct bw_limit_query *set = &query->rule_sets[count];
        columns[count] = (struct bw_column){.table = set->table, .out_of_range = set->out_of_range};
        if (set->out_of_range)
            continue;
        columns[count].figure = figure(set);
        columns[count].exposure_s = set->exposure.exposure_s;
        columns[count].wavelength_nm = set->exposure.wavelength_nm;
        columns[count].has_train = set->has_train;
        if (set->has_train)
            columns[count].limit = set->train.limits[set->train.governing];
        else
            columns[count].limit.limit = *limit_of(set);
    }
    bw_column_words(out, columns, count, "limits");
}

/* Rows of the table; those of a train only with one. */
enum row {
    ROW_EXPOSURE,
    ROW_PULSE,
    ROW_SINGLE,
    ROW_AVERAGE,
    ROW_TRAIN,
    ROW_RULE,
    ROW_MEAN,
    ROW_H,
    ROW_APERTURE,
    ROW_EFFECT,
    ROW_ROW,
    ROW_KNOWN,
    ROW_REASON,
    ROWS
};

static bool is_of_train(enum row row) {
    return row >= ROW_PULSE && row <= ROW_RULE;
}

static void cell(struct text_table *table, const struct bw_limit_query *set, enum row row) {
    char words[REPORT_QUANTITY_SIZE], number[BW_NUMBER_SIZE];
    if (set->out_of_range) {
        table_cell(table, "%s", row == ROW_REASON ? set->reason : "");
        return;
    }
    const struct bw_limit *limit = limit_of(set);
    const struct bw_train_limit *train = &set->train.limits[set->train.governing];
    switch (row) {
    case ROW_EXPOSURE:
        table_cell(table, "%s s", report_plain(words, set->exposure.exposure_s));
        break;
    case ROW_PULSE:
        table_cell(table, "%s", bw_format(number, train->per_pulse_j_m2, 3, BW_DOWN));
        break;
    case ROW_SINGLE:
    case ROW_AVERAGE:
    case ROW_TRAIN:
        table_cell(table, "%s", bw_format(number, train->rules_j_m2[row - ROW_SINGLE], 3, BW_DOWN));
        break;
    case ROW_RULE:
        table_cell(table, "%s", bw_train_rule_name(train->rule));
        break;
    case ROW_MEAN:
        table_cell(table, "%s",
                   bw_format(number, set->has_train ? train->irradiance_w_m2 : limit->irradiance_w_m2, 3, BW_DOWN));
        break;
    case ROW_H:
        table_cell(table, "%s", bw_format(number, limit->radiant_exposure_j_m2, 3, BW_DOWN));
        break;
    case ROW_APERTURE:
        table_cell(table, "%s mm", report_plain(words, 1e3 * limit->aperture_m));
        break;
    case ROW_EFFECT:
        table_cell(table, "%s", bw_effect_name(limit->effect));
        break;
    case ROW_ROW:
        table_cell(table, "%s, %s", limit->source.row, limit->source.clause);
        break;
    case ROW_KNOWN:
        table_cell(table, "%s", report_known_words(limit->source.known));
        break;
    case ROW_REASON:
    case ROWS:
        table_cell(table, "%s", "");
        break;
    }
}

static bool any_out_of_range(const struct bw_limit_query *query) {
    for (size_t i = 0; i < query->rule_set_count; i++)
        if (query->rule_sets[i].out_of_range)
            return true;
    return false;
}

static void part(struct bw_text *out, const struct bw_limit_query *query, size_t from, size_t to) {
    static const char *const labels[ROWS] = {
        "exposure", "per pulse J/m2", "single",      "average",     "train", "governing rule", "mean W/m2",
        "J/m2",     "aperture",       "governed by", "row, clause", "known", "out of range"};
    struct text_table table;
    table_begin(&table, "lllll");
    table.columns = 1 + to - from;
    table_cell(&table, "rule set");
    for (size_t i = from; i < to; i++)
        table_cell(&table, "%s", bw_table_id(query->rule_sets[i].table));
    for (int row = 0; row < ROWS; row++) {
        bool wanted = is_of_train((enum row)row) ? query->has_train
                      : row == ROW_H             ? !query->has_train
                      : row == ROW_REASON        ? any_out_of_range(query)
                                                 : true;
        if (!wanted)
            continue;
        table_cell(&table, "%s", labels[row]);
        for (size_t i = from; i < to; i++)
            cell(&table, &query->rule_sets[i], (enum row)row);
    }
    table_print(&table, out, 2);
}

void text_limit_sets(struct bw_text *out, const struct bw_limit_query *query) {
    struct bw_text words = {0};
    if (query->rule_sets == NULL)
        return;
    text_heading(out, "Rule sets side by side");
    for (size_t from = 0; from < query->rule_set_count; from += SETS)
        part(out, query, from, from + SETS < query->rule_set_count ? from + SETS : query->rule_set_count);
    bw_text_add(out, "\n");
    report_limit_difference(&words, query);
    text_wrap(out, "  ", words.data ? words.data : "");
    out->failed = out->failed || words.failed;
    bw_text_free(&words);
}
