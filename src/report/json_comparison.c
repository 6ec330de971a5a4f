/* "rule_sets": the same beams by every rule set; and the sentence that says why they differ. */
#include "internal.h"

static const char *reason_of(const struct bw_comparison *comparison, size_t table) {
    for (size_t i = 0; i < comparison->handpiece_count; i++)
        if (bw_comparison_cell(comparison, i, table)->result == NULL)
            return bw_comparison_cell(comparison, i, table)->reason;
    return NULL;
}

static void beam(struct json *json, const struct bw_result *result, const struct bw_comparison *comparison,
                 size_t handpiece, size_t table) {
    const struct bw_rule_cell *cell = bw_comparison_cell(comparison, handpiece, table);
    const struct bw_distance_result *distance = &result->distances[handpiece];
    if (cell->result != NULL) {
        report_beam(json, cell->result, &cell->result->distances[0]);
        return;
    }
    json_object(json, NULL);
    json_string(json, "laser", report_laser(result, distance->laser)->name);
    json_string(json, "handpiece", report_handpiece(result, distance->laser, distance->handpiece)->name);
    json_bool(json, "out_of_range", true);
    json_string(json, "reason", cell->reason);
    json_end(json);
}

static void rule_set(struct json *json, const struct bw_result *result, const struct bw_comparison *comparison,
                     size_t table) {
    bool any = false;
    for (size_t i = 0; i < comparison->handpiece_count; i++)
        any = any || bw_comparison_cell(comparison, i, table)->result != NULL;
    json_object(json, NULL);
    json_string(json, "rules", bw_table_id(comparison->tables[table]));
    if (any) {
        json_array(json, "beams");
        for (size_t i = 0; i < comparison->handpiece_count; i++)
            beam(json, result, comparison, i, table);
        json_end(json);
    } else {
        json_bool(json, "out_of_range", true);
        json_string(json, "reason", reason_of(comparison, table));
    }
    json_end(json);
}

void report_comparison_members(struct json *json, const struct bw_result *result) {
    const struct bw_comparison *comparison = result->comparison;
    if (comparison == NULL)
        return;
    json_array(json, "rule_sets");
    for (size_t k = 0; k < comparison->table_count; k++)
        rule_set(json, result, comparison, k);
    json_end(json);
    json_array(json, "differences");
    for (size_t i = 0; i < comparison->handpiece_count; i++) {
        const struct bw_distance_result *distance = &result->distances[i];
        json_object(json, NULL);
        json_string(json, "laser", report_laser(result, distance->laser)->name);
        json_string(json, "handpiece", report_handpiece(result, distance->laser, distance->handpiece)->name);
        json_string(json, "text", comparison->sentences[i]);
        json_end(json);
    }
    json_end(json);
}
