/* Incidents: what was received, as multiples of the limit. */
#include "internal.h"

static void row(struct text_table *table, const struct bw_result *result, const struct bw_incident_result *found) {
    const struct bw_incident *incident = &result->the_case->incidents[found->incident];
    char words[REPORT_QUANTITY_SIZE];
    table_cell(table, "%s", incident->name);
    table_quantity(table, report_plain(words, incident->exposure_s));
    table_cell(table, "%s", report_ratio(words, found->naked_eye_ratio));
    table_cell(table, "%s", report_ratio(words, found->eye_ratio));
    table_cell(table, "%s", incident->has_eyewear ? result->the_case->eyewear[incident->eyewear].name : "nothing");
    table_cell(table, "%s", report_ratio(words, found->skin_ratio));
    table_quantity(table, report_time(words, &found->eye));
    table_quantity(table, report_time(words, &found->skin));
}

void text_incidents(struct bw_text *out, const struct bw_result *result) {
    static const char *const names[] = {"incident", "s", "x eye limit", "as worn", "wore", "x skin limit", "eye limit after",
                                        "skin limit after"};
    struct text_table table;
    if (result->incident_count == 0)
        return;
    text_heading(out, "Incidents");
    table_begin(&table, "lrrrlrrr");
    for (size_t i = 0; i < sizeof names / sizeof names[0]; i++)
        table_cell(&table, "%s", names[i]);
    for (size_t i = 0; i < result->incident_count; i++)
        row(&table, result, &result->incidents[i]);
    table_print(&table, out, 2);
}
