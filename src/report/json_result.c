/* beamward.result/1: the whole job. */
#include "internal.h"

static void findings(struct json *json, const struct bw_result *result) {
    json_array(json, "findings");
    for (size_t i = 0; i < result->finding_count; i++) {
        json_object(json, NULL);
        json_string(json, "severity", bw_severity_name(result->findings[i].severity));
        json_string(json, "subject", result->findings[i].subject);
        json_string(json, "text", result->findings[i].text);
        json_end(json);
    }
    json_end(json);
}

void bw_report_result_json(struct bw_text *out, const struct bw_result *result,
                           const struct bw_provenance *provenance) {
    struct json json = {.out = out};
    json_object(&json, NULL);
    json_string(&json, "schema", "beamward.result/1");
    json_string(&json, "version", provenance->version);
    json_string(&json, "rules", bw_table_id(result->table));
    json_string(&json, "edition", bw_table_edition(result->table));
    json_string(&json, "title", result->the_case->title);
    json_string(&json, "case_file", provenance->case_path ? report_base_name(provenance->case_path) : NULL);
    json_string(&json, "case_sha256", provenance->case_sha256);
    if (provenance->date)
        json_string(&json, "date", provenance->date);
    json_bool(&json, "needs_action", result->needs_action);
    findings(&json, result);
    json_object(&json, "distance");
    report_distance_members(&json, result);
    report_comparison_members(&json, result);
    json_end(&json);
    json_object(&json, "eyewear");
    report_eyewear_members(&json, result);
    json_end(&json);
    json_object(&json, "room");
    report_room_members(&json, result, false);
    json_end(&json);
    report_incident_members(&json, result);
    json_end(&json);
}
