/* Beside the distances of a handpiece: tolerances, aids, times, what moves the answers. Times of people; incidents. */
#include "html.h"

#include <math.h>

#define COUNT(array) (sizeof(array) / sizeof((array)[0]))

static void tolerances(struct bw_text *out, const struct bw_result *result, const struct bw_distance_result *distance) {
    const struct bw_nominal *nominal = &distance->nominal;
    char nohd[REPORT_QUANTITY_SIZE], skin[REPORT_QUANTITY_SIZE], diffuse[REPORT_QUANTITY_SIZE];
    char ratio[REPORT_QUANTITY_SIZE];
    bool us = result->the_case->us_units;
    if (!distance->has_tolerance)
        return;
    html_paragraph(out,
                   "All figures of this handpiece are for the worst corner of the tolerances given. Without tolerances: NOHD "
                   "%s, skin %s, diffuse light %s, at its worst %s times the eye limit.",
                   report_reach(nohd, &nominal->nohd, us), report_reach(skin, &nominal->skin, us),
                   report_reach(diffuse, &nominal->diffuse, us), report_ratio(ratio, nominal->ratio_at_exit));
}

static void aids(struct bw_text *out, const struct bw_result *result, const struct bw_distance_result *distance) {
    static const char *const heads[] = {"Optical aid", ">Magnifies", ">Objective mm", ">Extended NOHD", "Decided by"};
    if (distance->aid_count == 0)
        return;
    html_table(out, "", heads, COUNT(heads));
    for (size_t i = 0; i < distance->aid_count; i++) {
        const struct bw_aid *aid = &result->the_case->aids[distance->aids[i].aid];
        char words[REPORT_QUANTITY_SIZE];
        html_row(out, NULL);
        html_cell(out, NULL, "%s", aid->name);
        html_cell(out, "n", "%s", report_plain(words, aid->magnification));
        html_cell(out, "n", "%s", report_plain(words, 1e3 * aid->objective_m));
        html_cell(out, "n", "%s", report_reach(words, &distance->aids[i].nohd, result->the_case->us_units));
        html_cell(out, NULL, "%s", distance->aids[i].naked_decides ? "the naked eye" : "the eye behind it");
        html_row_end(out);
    }
    html_table_end(out);
}

static void time_row(struct bw_text *out, const struct bw_result *result, const struct bw_place_times *place) {
    char words[REPORT_QUANTITY_SIZE];
    struct bw_text behind = {0};
    html_row(out, NULL);
    if (place->at_exit)
        html_cell(out, NULL, "%s", "exit");
    else
        html_cell(out, NULL, "%s m", report_plain(words, place->at_m));
    html_cell(out, "n", "%s", report_ratio(words, place->eye_ratio));
    html_cell(out, "n", "%s", report_time(words, &place->eye));
    for (size_t i = 0; i < result->the_case->eyewear_count; i++)
        bw_text_add(&behind, "%s%s %s", i > 0 ? ", " : "", result->the_case->eyewear[i].name,
                    report_time(words, &place->behind[i]));
    html_cell(out, "name", "%s", behind.data ? behind.data : "no goggles");
    html_cell(out, "n", "%s", report_ratio(words, place->skin_ratio));
    html_cell(out, "n", "%s", report_time(words, &place->skin));
    html_row_end(out);
    out->failed = out->failed || behind.failed;
    bw_text_free(&behind);
}

static void times(struct bw_text *out, const struct bw_result *result, const struct bw_distance_result *distance) {
    static const char *const heads[] = {"At",           ">\xC3\x97 eye limit",  ">Eye limit after", "Behind goggles, after",
                                        ">\xC3\x97 skin limit", ">Skin limit after"};
    char area[REPORT_QUANTITY_SIZE];
    html_table(out, "", heads, COUNT(heads));
    time_row(out, result, &distance->exit);
    for (size_t i = 0; i < distance->place_count; i++)
        time_row(out, result, &distance->places[i]);
    html_table_end(out);
    if (distance->skin_area_matters)
        html_paragraph(out, "Exposed skin at the exit: %s. Beyond 1400 nm the rule set limits large areas more strictly.",
                       report_area(area, distance->skin_area_m2, result->the_case->us_units));
}

static void inputs(struct bw_text *out, const struct bw_result *result, const struct bw_distance_result *distance) {
    static const char *const heads[] = {"1 % more of", ">moves the NOHD by", ">moves the OD by"};
    html_table(out, "", heads, COUNT(heads));
    for (size_t i = 0; i < distance->sensitivity_count; i++) {
        const struct bw_sensitivity *input = &distance->sensitivity[i];
        struct bw_text name = {0};
        char words[REPORT_QUANTITY_SIZE];
        report_input_words(&name, result, distance, input);
        html_row(out, NULL);
        html_cell(out, NULL, "%s", name.data ? name.data : "");
        html_cell(out, "n", "%s", report_per_cent(words, input->nohd_pct_per_pct));
        html_cell(out, "n", "%s", bw_format_fixed(words, input->od_per_pct, 4, BW_NEAREST));
        html_row_end(out);
        out->failed = out->failed || name.failed;
        bw_text_free(&name);
    }
    html_table_end(out);
}

void html_handpiece_more(struct bw_text *out, const struct bw_result *result,
                         const struct bw_distance_result *distance) {
    tolerances(out, result, distance);
    aids(out, result, distance);
    times(out, result, distance);
    inputs(out, result, distance);
}

void html_person_times(struct bw_text *out, const struct bw_result *result, const struct bw_room_result *found) {
    static const char *const heads[] = {"Person", ">Eye limit reached after", ">Eye, as worn", ">Skin", ">\xC3\x97 skin limit",
                                        "Looks through"};
    const struct bw_room *room = &result->the_case->rooms[found->room];
    if (room->person_count == 0 || !found->persons[0].has_times)
        return;
    html_table(out, "", heads, COUNT(heads));
    for (size_t i = 0; i < room->person_count; i++) {
        const struct bw_person_result *person = &found->persons[i];
        char words[REPORT_QUANTITY_SIZE];
        html_row(out, NULL);
        html_cell(out, NULL, "%zu %s", i + 1, room->persons[i].name);
        html_cell(out, "n", "%s", report_time(words, &person->eye));
        html_cell(out, "n", "%s", report_time(words, &person->worn));
        html_cell(out, "n", "%s", report_time(words, &person->skin));
        html_cell(out, "n", "%s", report_ratio(words, person->skin_ratio));
        html_cell(out, "name", "%s",
                  room->persons[i].has_aid ? result->the_case->aids[room->persons[i].aid].name : "nothing");
        html_row_end(out);
    }
    html_table_end(out);
}

static void incident(struct bw_text *out, const struct bw_result *result, const struct bw_incident_result *found) {
    const struct bw_incident *given = &result->the_case->incidents[found->incident];
    char words[REPORT_QUANTITY_SIZE], path[BW_WORDS_SIZE];
    html_row(out, NULL);
    html_cell(out, "name", "%s", given->name);
    html_cell(out, "n", "%s", report_plain(words, given->exposure_s));
    html_cell(out, NULL, "%s", bw_path_words(path, &found->eye_place, result->the_case->us_units));
    html_cell(out, "name", "%s%s%s", given->has_eyewear ? result->the_case->eyewear[given->eyewear].name : "nothing",
              given->has_aid ? ", " : "", given->has_aid ? result->the_case->aids[given->aid].name : "");
    html_cell(out, found->naked_eye_ratio <= 1. ? "n" : "n bad", "%s", report_ratio(words, found->naked_eye_ratio));
    html_cell(out, found->eye_ratio <= 1. ? "n" : "n bad", "%s", report_ratio(words, found->eye_ratio));
    html_cell(out, "n", "%s", report_time(words, &found->eye));
    html_cell(out, found->skin_ratio <= 1. ? "n" : "n bad", "%s", report_ratio(words, found->skin_ratio));
    html_cell(out, "n", "%s", report_time(words, &found->skin));
    html_row_end(out);
}

void html_incidents(struct bw_text *out, const struct bw_result *result) {
    static const char *const heads[] = {"Incident", ">s", "How the eye was reached", "Wore", ">\xC3\x97 eye limit, bare",
                                        ">as worn", ">Eye limit after", ">\xC3\x97 skin limit", ">Skin limit after"};
    if (result->incident_count == 0)
        return;
    html_heading(out, "incidents", "Incidents");
    html_table(out, "", heads, COUNT(heads));
    for (size_t i = 0; i < result->incident_count; i++)
        incident(out, result, &result->incidents[i]);
    html_table_end(out);
    html_paragraph(out, "What was received is given as a multiple of the limit for that time; above 1 the limit was "
                        "exceeded. The working is at the end.");
}
