/* beamward.distance/1: each handpiece, each of its emissions. */
#include "internal.h"

/* A distance, or null where the hazard never ends; the caller then adds "unbounded". */
static void reach(struct json *json, const char *key, const struct bw_reach *reach) {
    if (reach->unbounded)
        json_null(json, key);
    else
        json_number(json, key, reach->distance_m);
}

static void emission(struct json *json, const struct bw_emission *emission, const struct bw_emission_result *result) {
    json_object(json, NULL);
    json_string(json, "name", emission->name);
    json_number(json, "wavelength_nm", emission->wavelength_nm);
    json_number(json, "mpe_j_m2", result->limit.per_pulse_j_m2);
    json_number(json, "mpe_w_m2", result->limit.irradiance_w_m2);
    json_string(json, "rule", bw_train_rule_name(result->limit.rule));
    reach(json, "nohd_m", &result->nohd);
    if (result->nohd.unbounded)
        json_bool(json, "unbounded", true);
    json_number(json, "od", result->optical_density);
    json_number(json, "ratio_at_exit", result->ratio_at_exit);
    json_string(json, "effect", bw_effect_name(result->limit.limit.effect));
    json_string(json, "row", result->limit.limit.source.row);
    json_string(json, "clause", result->limit.limit.source.clause);
    json_string(json, "known", report_known(result->limit.limit.source.known));
    json_number(json, "aperture_mm", 1e3 * result->limit.limit.aperture_m);
    json_number(json, "subtense_mrad", 1e3 * result->subtense_rad);
    json_number(json, "emitters_seen", (double)result->emitters);
    json_end(json);
}

static void distances(struct json *json, const struct bw_distance_result *distance) {
    reach(json, "nohd_m", &distance->nohd);
    reach(json, "skin_distance_m", &distance->skin);
    reach(json, "diffuse_distance_m", &distance->diffuse);
    if (distance->nohd.unbounded || distance->skin.unbounded || distance->diffuse.unbounded)
        json_bool(json, "unbounded", true);
    if (distance->nohd.unbounded)
        json_bool(json, "nohd_unbounded", true);
    if (distance->skin.unbounded)
        json_bool(json, "skin_unbounded", true);
    if (distance->diffuse.unbounded)
        json_bool(json, "diffuse_unbounded", true);
}

void report_beam(struct json *json, const struct bw_result *result, const struct bw_distance_result *distance) {
    const struct bw_output *output = &report_handpiece(result, distance->laser, distance->handpiece)->output;
    json_object(json, NULL);
    json_string(json, "laser", report_laser(result, distance->laser)->name);
    json_string(json, "handpiece", report_handpiece(result, distance->laser, distance->handpiece)->name);
    json_number(json, "exposure_s", distance->glance.exposure_s);
    distances(json, distance);
    json_number(json, "ratio_at_exit", distance->ratio_at_exit);
    json_object(json, "governing");
    json_string(json, "effect", bw_effect_name(distance->governing.limit.effect));
    json_number(json, "wavelength_nm", output->emissions[distance->governing_emission].wavelength_nm);
    json_string(json, "rule", bw_train_rule_name(distance->governing.rule));
    json_end(json);
    json_number(json, "worst_m", distance->worst_m);
    json_number(json, "stand_off_m", distance->nearest_m);
    json_number(json, "subtense_mrad", 1e3 * distance->subtense_rad);
    json_number(json, "skin_ratio_at_exit", distance->skin_ratio_at_exit);
    json_bool(json, "exposure_given", distance->exposure_given);
    json_number(json, "skin_exposure_s", distance->skin_time.exposure_s);
    json_number(json, "diffuse_exposure_s", distance->diffuse_time.exposure_s);
    json_bool(json, "aversion_response", distance->glance.aversion_response);
    report_more_members(json, result, distance);
    json_array(json, "emissions");
    for (size_t i = 0; i < output->count; i++)
        emission(json, &output->emissions[i], &distance->emissions[i]);
    json_end(json);
    json_end(json);
}

void report_distance_members(struct json *json, const struct bw_result *result) {
    json_string(json, "rules", bw_table_id(result->table));
    json_array(json, "beams");
    for (size_t i = 0; i < result->distance_count; i++)
        report_beam(json, result, &result->distances[i]);
    json_end(json);
}

void bw_report_distance_json(struct bw_text *out, const struct bw_result *result) {
    struct json json = {.out = out};
    json_object(&json, NULL);
    json_string(&json, "schema", "beamward.distance/1");
    report_distance_members(&json, result);
    if (result->incident_count > 0)
        report_incident_members(&json, result);
    report_comparison_members(&json, result);
    json_end(&json);
}
