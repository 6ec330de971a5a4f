/* beamward.room/1: the zone, who stands in it, what it leaves by. */
#include "internal.h"

static void person(struct json *json, const struct bw_result *result, const struct bw_person *person,
                   const struct bw_person_result *found) {
    json_object(json, NULL);
    json_string(json, "name", person->name);
    json_point(json, "at_m", person->at);
    json_number(json, "ratio", found->place.ratio);
    json_array(json, "od_required");
    for (size_t i = 0; i < found->od_count; i++) {
        json_object(json, NULL);
        json_number(json, "wavelength_nm", found->od[i].wavelength_nm);
        json_number(json, "od", found->od[i].od);
        json_end(json);
    }
    json_end(json);
    json_string(json, "eyewear", person->has_eyewear ? result->the_case->eyewear[person->eyewear].name : NULL);
    json_string(json, "verdict", found->has_verdict ? bw_verdict_name(found->verdict) : NULL);
    json_bool(json, "needs_eyewear", found->needs_eyewear);
    json_string(json, "path", bw_path_name(found->place.path));
    json_string(json, "via", found->place.via[0] ? found->place.via : NULL);
    json_number(json, "path_length_m", found->place.length_m);
    json_string(json, "aid", person->has_aid ? result->the_case->aids[person->aid].name : NULL);
    json_bool(json, "through_aid", found->through_aid);
    if (found->has_times) {
        report_time_member(json, "time_to_limit_s", "time_to_limit_unbounded", &found->eye);
        report_time_member(json, "time_to_limit_worn_s", "time_to_limit_worn_unbounded", &found->worn);
        report_time_member(json, "skin_time_to_limit_s", "skin_time_to_limit_unbounded", &found->skin);
        json_number(json, "skin_ratio", found->skin_ratio);
    }
    json_end(json);
}

static void opening(struct json *json, const struct bw_opening *opening, const struct bw_opening_result *found) {
    json_object(json, NULL);
    json_string(json, "name", opening->name);
    json_number(json, "ratio_beyond", found->ratio_beyond);
    json_bool(json, "leaves", found->leaves);
    json_string(json, "needs", found->needs);
    json_string(json, "kind", report_opening_kind(opening->kind));
    json_string(json, "path", bw_path_name(found->worst.path));
    json_end(json);
}

static void sources(struct json *json, const struct bw_result *result, const struct bw_room_result *room) {
    json_array(json, "uses");
    for (size_t i = 0; i < room->source_count; i++) {
        const struct bw_distance_result *distance = &result->distances[room->sources[i]];
        json_object(json, NULL);
        json_string(json, "laser", report_laser(result, distance->laser)->name);
        json_string(json, "handpiece", report_handpiece(result, distance->laser, distance->handpiece)->name);
        json_end(json);
    }
    json_end(json);
}

static void room(struct json *json, const struct bw_result *result, const struct bw_room_result *found, bool timing) {
    const struct bw_room *room = &result->the_case->rooms[found->room];
    json_object(json, NULL);
    json_string(json, "room", room->name);
    json_number(json, "grid_mm", 1e3 * room->grid_m);
    json_number(json, "nhz_area_m2", found->solution.nhz_area_m2);
    json_number(json, "farthest_m", found->solution.farthest_m);
    json_number(json, "ratio_max", found->solution.ratio_max);
    json_array(json, "persons");
    for (size_t i = 0; i < room->person_count; i++)
        person(json, result, &room->persons[i], &found->persons[i]);
    json_end(json);
    json_array(json, "openings");
    for (size_t i = 0; i < room->opening_count; i++)
        opening(json, &room->openings[i], &found->solution.openings[i]);
    json_end(json);
    sources(json, result, found);
    if (timing)
        json_number(json, "map_seconds", found->solution.map_seconds);
    json_end(json);
}

void report_room_members(struct json *json, const struct bw_result *result, bool timing) {
    json_array(json, "rooms");
    for (size_t i = 0; i < result->room_count; i++)
        if (result->rooms[i].solved)
            room(json, result, &result->rooms[i], timing);
    json_end(json);
}

void bw_report_room_json(struct bw_text *out, const struct bw_result *result, bool timing) {
    struct json json = {.out = out};
    json_object(&json, NULL);
    json_string(&json, "schema", "beamward.room/1");
    json_string(&json, "rules", bw_table_id(result->table));
    report_room_members(&json, result, timing);
    json_end(&json);
}
