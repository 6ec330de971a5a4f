/* Goggles against handpieces, at the exit and where people stand. */
#include "internal.h"

#include <stdio.h>

static const char *short_verdict(enum bw_verdict verdict) {
    switch (verdict) {
    case BW_SUFFICIENT:
        return "sufficient";
    case BW_INSUFFICIENT:
        return "TOO WEAK";
    case BW_NO_RATING:
        return "NO RATING";
    }
    return "unknown";
}

/* One pair in one line a failing or rated emission. */
static void pair_rows(struct text_table *table, const struct bw_result *result, const struct bw_pair_result *pair) {
    const struct bw_output *output = &report_handpiece(result, pair->laser, pair->handpiece)->output;
    for (size_t i = 0; i < pair->verdict.count; i++) {
        const struct bw_emission_verdict *emission = &pair->verdict.emissions[i];
        char words[REPORT_QUANTITY_SIZE];
        table_cell(table, "%s (%s nm)", output->emissions[i].name,
                   report_plain(words, output->emissions[i].wavelength_nm));
        table_cell(table, "%s", report_density(words, emission->od_required));
        table_cell(table, "%s", report_density_given(words, emission->od_given));
        table_cell(table, "%s", short_verdict(emission->verdict));
        table_cell(table, "%s", emission->reason);
    }
}

static void pair_block(struct bw_text *out, const struct bw_result *result, const struct bw_pair_result *pair) {
    char where[3 * BW_NAME_SIZE + 64] = "at its exit";
    if (pair->is_place)
        snprintf(where, sizeof where, "where %s stands (room %s)",
                 result->the_case->rooms[pair->room].persons[pair->person].name,
                 result->the_case->rooms[pair->room].name);
    bw_text_add(out, "\n");
    text_wrapf(out, "", "%s with %s %s, %s: %s", result->the_case->eyewear[pair->eyewear].name,
               report_laser(result, pair->laser)->name, report_handpiece(result, pair->laser, pair->handpiece)->name,
               where, short_verdict(pair->verdict.verdict));
    struct text_table table;
    table_begin(&table, "lrrll");
    static const char *const names[] = {"emission", "needs", "gives", "verdict", "why"};
    for (size_t i = 0; i < sizeof names / sizeof names[0]; i++)
        table_cell(&table, "%s", names[i]);
    pair_rows(&table, result, pair);
    table_print(&table, out, 2);
}

static const struct bw_pair_result *find_pair(const struct bw_result *result, size_t eyewear,
                                              const struct bw_distance_result *distance) {
    for (size_t i = 0; i < result->pair_count; i++) {
        const struct bw_pair_result *pair = &result->pairs[i];
        if (!pair->is_place && pair->eyewear == eyewear && pair->laser == distance->laser &&
            pair->handpiece == distance->handpiece)
            return pair;
    }
    return NULL;
}

enum { MATRIX_GOGGLES = 4 }; /* columns of goggles in one table */

static void matrix_part(struct bw_text *out, const struct bw_result *result, size_t from, size_t to) {
    struct text_table table;
    table_begin(&table, "lrllll");
    table.columns = 2 + (to - from);
    table_cell(&table, "handpiece");
    table_cell(&table, "needs");
    for (size_t j = from; j < to; j++)
        table_cell(&table, "%s", result->the_case->eyewear[j].name);
    for (size_t i = 0; i < result->distance_count; i++) {
        const struct bw_distance_result *distance = &result->distances[i];
        char words[REPORT_QUANTITY_SIZE];
        table_cell(&table, "%s %s", report_laser(result, distance->laser)->name,
                   report_handpiece(result, distance->laser, distance->handpiece)->name);
        table_cell(&table, "OD %s", report_density(words, report_largest_density(result, distance)));
        for (size_t j = from; j < to; j++) {
            const struct bw_pair_result *pair = find_pair(result, j, distance);
            table_cell(&table, "%s", pair ? short_verdict(pair->verdict.verdict) : "");
        }
    }
    table_print(&table, out, 2);
}

void text_goggles_matrix(struct bw_text *out, const struct bw_result *result) {
    size_t count = result->the_case->eyewear_count;
    text_heading(out, "Goggles, at the exit");
    if (count == 0)
        text_wrap(out, "  ", "The case has no goggles.");
    for (size_t from = 0; from < count; from += MATRIX_GOGGLES)
        matrix_part(out, result, from, from + MATRIX_GOGGLES < count ? from + MATRIX_GOGGLES : count);
}

void bw_report_eyewear_text(struct bw_text *out, const struct bw_result *result) {
    text_case_head(out, result);
    text_goggles_matrix(out, result);
    text_findings(out, result, BW_DANGER, BW_NOTE);
    text_heading(out, "Each pair");
    for (size_t i = 0; i < result->pair_count; i++)
        pair_block(out, result, &result->pairs[i]);
    bw_text_add(out, "\n");
    text_wrap(out, "",
              "What is needed is rounded up, what is given down. Whether the filter withstands the beam is not "
              "judged.");
    text_all_working(out, result, WORKING_DISTANCE | WORKING_EYEWEAR);
}
