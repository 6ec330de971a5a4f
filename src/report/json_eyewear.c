/* beamward.eyewear/1: goggles against handpieces at the exit (pairs) and where persons stand (places). */
#include "internal.h"

static void emission(struct json *json, const struct bw_emission *emission, const struct bw_emission_verdict *verdict) {
    json_object(json, NULL);
    json_string(json, "name", emission->name);
    json_number(json, "wavelength_nm", emission->wavelength_nm);
    json_number(json, "od_required", verdict->od_required);
    json_number(json, "od_given", verdict->od_given);
    json_null(json, "scale_required"); /* resistance is not judged */
    if (verdict->scale_given > 0)
        json_integer(json, "scale_given", verdict->scale_given);
    else
        json_null(json, "scale_given");
    json_string(json, "verdict", bw_verdict_name(verdict->verdict));
    json_string(json, "reason", verdict->reason);
    json_end(json);
}

static void pair(struct json *json, const struct bw_result *result, const struct bw_pair_result *pair) {
    const struct bw_handpiece *handpiece = report_handpiece(result, pair->laser, pair->handpiece);
    json_object(json, NULL);
    if (pair->is_place) {
        json_string(json, "room", result->the_case->rooms[pair->room].name);
        json_string(json, "person", result->the_case->rooms[pair->room].persons[pair->person].name);
    }
    json_string(json, "eyewear", result->the_case->eyewear[pair->eyewear].name);
    json_string(json, "laser", report_laser(result, pair->laser)->name);
    json_string(json, "handpiece", handpiece->name);
    json_string(json, "verdict", bw_verdict_name(pair->verdict.verdict));
    json_array(json, "emissions");
    for (size_t i = 0; i < pair->verdict.count; i++)
        emission(json, &handpiece->output.emissions[i], &pair->verdict.emissions[i]);
    json_end(json);
    json_end(json);
}

static void pairs(struct json *json, const struct bw_result *result, const char *key, bool places) {
    json_array(json, key);
    for (size_t i = 0; i < result->pair_count; i++)
        if (result->pairs[i].is_place == places)
            pair(json, result, &result->pairs[i]);
    json_end(json);
}

void report_eyewear_members(struct json *json, const struct bw_result *result) {
    pairs(json, result, "pairs", false);
    pairs(json, result, "places", true);
}

void bw_report_eyewear_json(struct bw_text *out, const struct bw_result *result) {
    struct json json = {.out = out};
    json_object(&json, NULL);
    json_string(&json, "schema", "beamward.eyewear/1");
    json_string(&json, "rules", bw_table_id(result->table));
    report_eyewear_members(&json, result);
    json_end(&json);
}
