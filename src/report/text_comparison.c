/* Rule sets side by side on a terminal. */
#include "comparison.h"

#include <stdio.h>

/* Quantities stay in one piece, words may wrap. */
static bool is_quantity(enum comparison_row row) {
    return row <= ROW_OD;
}

enum { SETS = 4 }; /* columns in one table */

static void part(struct bw_text *out, const struct bw_comparison *comparison, const struct bw_output *output,
                 size_t handpiece, size_t from, size_t to) {
    struct text_table table;
    char words[REPORT_QUANTITY_SIZE];
    table_begin(&table, "llllllllll");
    table.columns = 1 + to - from;
    table_cell(&table, "rule set");
    for (size_t k = from; k < to; k++)
        table_cell(&table, "%s", bw_table_id(comparison->tables[k]));
    for (int row = 0; row < ROWS; row++) {
        if (row == ROW_REASON && !comparison_has_reasons(comparison, handpiece))
            continue;
        table_cell(&table, "%s", comparison_label((enum comparison_row)row));
        for (size_t k = from; k < to; k++) {
            const struct bw_rule_cell *cell = bw_comparison_cell(comparison, handpiece, k);
            const char *text = comparison_cell(words, cell, (enum comparison_row)row);
            if (row == ROW_REASON)
                table_cell(&table, "%s", cell->reason ? cell->reason : "");
            else if (is_quantity((enum comparison_row)row))
                table_quantity(&table, text);
            else
                table_cell(&table, "%s", text);
        }
    }
    for (size_t i = 0; i < output->count; i++) {
        table_cell(&table, "MPE W/m2, %s", output->emissions[i].name);
        for (size_t k = from; k < to; k++)
            table_cell(&table, "%s", comparison_limit(words, bw_comparison_cell(comparison, handpiece, k), i));
    }
    table_print(&table, out, 2);
}

void text_comparison(struct bw_text *out, const struct bw_result *result) {
    const struct bw_comparison *comparison = result->comparison;
    if (comparison == NULL)
        return;
    for (size_t i = 0; i < comparison->handpiece_count; i++) {
        const struct bw_distance_result *distance = &result->distances[i];
        const struct bw_handpiece *piece = report_handpiece(result, distance->laser, distance->handpiece);
        char title[2 * BW_NAME_SIZE + 32];
        snprintf(title, sizeof title, "Rule sets side by side: %s %s", report_laser(result, distance->laser)->name,
                 piece->name);
        text_heading(out, title);
        for (size_t from = 0; from < comparison->table_count; from += SETS)
            part(out, comparison, &piece->output, i, from,
                 from + SETS < comparison->table_count ? from + SETS : comparison->table_count);
        bw_text_add(out, "\n");
        text_wrap(out, "  ", comparison->sentences[i]);
    }
}
