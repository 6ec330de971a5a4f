/* What an object of beams[] has beside the distances; the incidents. */
#include "internal.h"

static void reach(struct json *json, const char *key, const char *unbounded_key, const struct bw_reach *reach) {
    if (reach->unbounded)
        json_null(json, key);
    else
        json_number(json, key, reach->distance_m);
    if (reach->unbounded)
        json_bool(json, unbounded_key, true);
}

void report_time_member(struct json *json, const char *key, const char *unbounded_key,
                        const struct bw_permitted_time *time) {
    if (time->unbounded)
        json_null(json, key);
    else
        json_number(json, key, time->exposure_s);
    if (time->unbounded)
        json_bool(json, unbounded_key, true);
}

static void nominal(struct json *json, const struct bw_result *result, const struct bw_distance_result *distance) {
    const struct bw_output *output = &report_handpiece(result, distance->laser, distance->handpiece)->output;
    json_object(json, "without_tolerances");
    reach(json, "nohd_m", "nohd_unbounded", &distance->nominal.nohd);
    reach(json, "skin_distance_m", "skin_unbounded", &distance->nominal.skin);
    reach(json, "diffuse_distance_m", "diffuse_unbounded", &distance->nominal.diffuse);
    json_number(json, "ratio_at_exit", distance->nominal.ratio_at_exit);
    json_number(json, "skin_ratio_at_exit", distance->nominal.skin_ratio_at_exit);
    json_array(json, "od");
    for (size_t i = 0; i < output->count; i++)
        json_number(json, NULL, distance->nominal.optical_density[i]);
    json_end(json);
    json_end(json);
}

static void aids(struct json *json, const struct bw_result *result, const struct bw_distance_result *distance) {
    json_array(json, "aids");
    for (size_t i = 0; i < distance->aid_count; i++) {
        const struct bw_aid_result *aid = &distance->aids[i];
        json_object(json, NULL);
        json_string(json, "aid", result->the_case->aids[aid->aid].name);
        reach(json, "nohd_m", "unbounded", &aid->nohd);
        json_bool(json, "naked_eye_decides", aid->naked_decides);
        json_number(json, "ratio_at_exit", aid->ratio_at_exit);
        json_end(json);
    }
    json_end(json);
}

static void place_members(struct json *json, const struct bw_result *result, const struct bw_place_times *place) {
    json_number(json, "ratio", place->eye_ratio);
    json_number(json, "skin_ratio", place->skin_ratio);
    report_time_member(json, "eye_s", "eye_unbounded", &place->eye);
    report_time_member(json, "skin_s", "skin_unbounded", &place->skin);
    if (place->eye.unbounded || place->skin.unbounded)
        json_bool(json, "unbounded", true);
    json_array(json, "behind");
    for (size_t i = 0; i < result->the_case->eyewear_count; i++) {
        json_object(json, NULL);
        json_string(json, "eyewear", result->the_case->eyewear[i].name);
        report_time_member(json, "eye_s", "unbounded", &place->behind[i]);
        json_end(json);
    }
    json_end(json);
}

static void times(struct json *json, const struct bw_result *result, const struct bw_distance_result *distance) {
    json_object(json, "permitted_at_exit");
    place_members(json, result, &distance->exit);
    json_end(json);
    json_array(json, "permitted");
    for (size_t i = 0; i < distance->place_count; i++) {
        json_object(json, NULL);
        json_number(json, "distance_m", distance->places[i].at_m);
        place_members(json, result, &distance->places[i]);
        json_end(json);
    }
    json_end(json);
}

static void sensitivity(struct json *json, const struct bw_result *result, const struct bw_distance_result *distance) {
    const struct bw_output *output = &report_handpiece(result, distance->laser, distance->handpiece)->output;
    json_array(json, "sensitivity");
    for (size_t i = 0; i < distance->sensitivity_count; i++) {
        const struct bw_sensitivity *input = &distance->sensitivity[i];
        json_object(json, NULL);
        json_string(json, "quantity", input->quantity);
        json_string(json, "emission", input->emission < output->count ? output->emissions[input->emission].name : NULL);
        json_number(json, "nohd_pct_per_pct", input->nohd_pct_per_pct);
        json_number(json, "od_per_pct", input->od_per_pct);
        json_end(json);
    }
    json_end(json);
}

void report_more_members(struct json *json, const struct bw_result *result, const struct bw_distance_result *distance) {
    if (distance->has_tolerance)
        nominal(json, result, distance);
    aids(json, result, distance);
    if (distance->skin_area_matters)
        json_number(json, "exposed_skin_m2", distance->skin_area_m2);
    times(json, result, distance);
    sensitivity(json, result, distance);
}

static void source(struct json *json, const struct bw_result *result, const char *key, size_t distance) {
    const struct bw_distance_result *from = &result->distances[distance];
    json_object(json, key);
    json_string(json, "laser", report_laser(result, from->laser)->name);
    json_string(json, "handpiece", report_handpiece(result, from->laser, from->handpiece)->name);
    json_end(json);
}

static void incident(struct json *json, const struct bw_result *result, const struct bw_incident_result *found) {
    const struct bw_incident *given = &result->the_case->incidents[found->incident];
    json_object(json, NULL);
    json_string(json, "name", given->name);
    json_string(json, "room", given->in_room ? result->the_case->rooms[given->room].name : NULL);
    if (given->in_room)
        json_point(json, "at_m", given->at);
    else
        json_number(json, "distance_m", given->distance_m);
    json_number(json, "exposure_s", given->exposure_s);
    json_string(json, "eyewear", given->has_eyewear ? result->the_case->eyewear[given->eyewear].name : NULL);
    json_string(json, "aid", given->has_aid ? result->the_case->aids[given->aid].name : NULL);
    json_number(json, "eye_ratio", found->eye_ratio);
    json_number(json, "naked_eye_ratio", found->naked_eye_ratio);
    json_number(json, "skin_ratio", found->skin_ratio);
    json_string(json, "eye_path", bw_path_name(found->eye_place.path));
    json_string(json, "skin_path", bw_path_name(found->skin_place.path));
    source(json, result, "eye_from", found->eye_source);
    source(json, result, "skin_from", found->skin_source);
    report_time_member(json, "time_to_limit_s", "time_to_limit_unbounded", &found->eye);
    report_time_member(json, "skin_time_to_limit_s", "skin_time_to_limit_unbounded", &found->skin);
    json_end(json);
}

void report_incident_members(struct json *json, const struct bw_result *result) {
    json_array(json, "incidents");
    for (size_t i = 0; i < result->incident_count; i++)
        incident(json, result, &result->incidents[i]);
    json_end(json);
}
