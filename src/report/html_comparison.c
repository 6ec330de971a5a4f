/* Rule sets side by side: a table a handpiece, a column a rule set. */
#include "comparison.h"
#include "html.h"

enum { SETS_MAX = 16 };

static void rows(struct bw_text *out, const struct bw_comparison *comparison, const struct bw_output *output,
                 size_t handpiece) {
    char words[REPORT_QUANTITY_SIZE];
    for (int row = 0; row < ROWS; row++) {
        if (row == ROW_REASON && !comparison_has_reasons(comparison, handpiece))
            continue;
        html_row(out, NULL);
        html_cell(out, NULL, "%s", comparison_label((enum comparison_row)row));
        for (size_t k = 0; k < comparison->table_count && k < SETS_MAX; k++) {
            const struct bw_rule_cell *cell = bw_comparison_cell(comparison, handpiece, k);
            html_cell(out, NULL, "%s",
                      row != ROW_REASON ? comparison_cell(words, cell, (enum comparison_row)row)
                      : cell->reason    ? cell->reason
                                        : "");
        }
        html_row_end(out);
    }
    for (size_t i = 0; i < output->count; i++) {
        html_row(out, NULL);
        html_cell(out, NULL, "MPE %s, W/m\xC2\xB2", output->emissions[i].name);
        for (size_t k = 0; k < comparison->table_count && k < SETS_MAX; k++)
            html_cell(out, NULL, "%s", comparison_limit(words, bw_comparison_cell(comparison, handpiece, k), i));
        html_row_end(out);
    }
}

void html_comparison(struct bw_text *out, const struct bw_result *result) {
    const struct bw_comparison *comparison = result->comparison;
    if (comparison == NULL)
        return;
    html_heading(out, "rule-sets", "Rule sets side by side");
    html_paragraph(out, "This record is judged by %s alone; the others stand here for comparison.",
                   bw_table_id(result->table));
    for (size_t i = 0; i < comparison->handpiece_count; i++) {
        const struct bw_distance_result *distance = &result->distances[i];
        const struct bw_handpiece *piece = report_handpiece(result, distance->laser, distance->handpiece);
        const char *heads[SETS_MAX + 1] = {"Rule set"};
        size_t count = 1;
        for (size_t k = 0; k < comparison->table_count && k < SETS_MAX; k++)
            heads[count++] = bw_table_id(comparison->tables[k]);
        bw_text_add(out, "<h3>");
        report_xml(out, report_laser(result, distance->laser)->name);
        bw_text_add(out, " ");
        report_xml(out, piece->name);
        bw_text_add(out, "</h3>\n");
        html_table(out, "sets", heads, count);
        rows(out, comparison, &piece->output, i);
        html_table_end(out);
        html_paragraph(out, "%s", comparison->sentences[i]);
    }
}
