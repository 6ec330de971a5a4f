/* beamward.limit/1: one limit, every effect, with a train all three rules. */
#include "internal.h"

static void limit_members(struct json *json, const struct bw_limit *limit) {
    json_string(json, "effect", bw_effect_name(limit->effect));
    json_string(json, "row", limit->source.row);
    json_string(json, "clause", limit->source.clause);
    json_string(json, "known", report_known(limit->source.known));
    json_number(json, "radiant_exposure_j_m2", limit->radiant_exposure_j_m2);
    json_number(json, "irradiance_w_m2", limit->irradiance_w_m2);
    json_number(json, "aperture_mm", 1e3 * limit->aperture_m);
}

static void train_members(struct json *json, const struct bw_train_limit *limit) {
    json_number(json, "per_pulse_j_m2", limit->per_pulse_j_m2);
    json_number(json, "mean_irradiance_w_m2", limit->irradiance_w_m2);
    json_string(json, "rule", bw_train_rule_name(limit->rule));
    json_object(json, "rules_j_m2");
    for (int i = 0; i < BW_RULES; i++)
        json_number(json, bw_train_rule_name((enum bw_train_rule)i), limit->rules_j_m2[i]);
    json_end(json);
    json_number(json, "pulses", limit->pulses);
    json_number(json, "group_pulses", limit->group_pulses);
    json_number(json, "correction", limit->correction);
}

static void query_members(struct json *json, const struct bw_limit_query *query) {
    const struct bw_train_limit *train = query->has_train ? &query->train.limits[query->train.governing] : NULL;
    const struct bw_limit *governing = train ? &train->limit : &query->limits.limits[query->limits.governing];
    json_string(json, "rules", bw_table_id(query->table));
    json_string(json, "target", query->target == BW_EYE ? "eye" : "skin");
    json_number(json, "wavelength_nm", query->exposure.wavelength_nm);
    json_number(json, "exposure_s", query->exposure.exposure_s);
    json_number(json, "subtense_mrad", 1e3 * query->exposure.subtense_rad);
    json_number(json, "radiant_exposure_j_m2", governing->radiant_exposure_j_m2);
    json_number(json, "irradiance_w_m2", governing->irradiance_w_m2);
    json_number(json, "aperture_mm", 1e3 * governing->aperture_m);
    json_string(json, "governing", bw_effect_name(governing->effect));
    if (train) {
        train_members(json, train);
        json_number(json, "pulse_duration_s", query->emission.pulse_duration_s);
        if (query->emission.pulse_count > 0)
            json_number(json, "pulse_count", (double)query->emission.pulse_count);
        if (query->emission.pulse_count != 1)
            json_number(json, "repetition_rate_hz", query->emission.repetition_rate_hz);
    }
    if (query->exposure_reason)
        json_string(json, "exposure_reason", query->exposure_reason);
    json_array(json, "limits");
    size_t count = query->has_train ? query->train.count : query->limits.count;
    for (size_t i = 0; i < count; i++) {
        json_object(json, NULL);
        limit_members(json, query->has_train ? &query->train.limits[i].limit : &query->limits.limits[i]);
        if (query->has_train)
            train_members(json, &query->train.limits[i]);
        json_end(json);
    }
    json_end(json);
}

static void rule_sets(struct json *json, const struct bw_limit_query *query) {
    struct bw_text words = {0};
    json_array(json, "rule_sets");
    for (size_t i = 0; i < query->rule_set_count; i++) {
        const struct bw_limit_query *set = &query->rule_sets[i];
        json_object(json, NULL);
        if (set->out_of_range) {
            json_string(json, "rules", bw_table_id(set->table));
            json_bool(json, "out_of_range", true);
            json_string(json, "reason", set->reason);
        } else {
            query_members(json, set);
        }
        json_end(json);
    }
    json_end(json);
    report_limit_difference(&words, query);
    json_string(json, "difference", words.data);
    json->out->failed = json->out->failed || words.failed;
    bw_text_free(&words);
}

void bw_report_limit_json(struct bw_text *out, const struct bw_limit_query *query) {
    struct json json = {.out = out};
    json_object(&json, NULL);
    json_string(&json, "schema", "beamward.limit/1");
    query_members(&json, query);
    if (query->rule_sets != NULL)
        rule_sets(&json, query);
    json_end(&json);
}
