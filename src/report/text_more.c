/* What stands beside the distances of a handpiece: tolerances, aids, times, what moves the answers; times of people. */
#include "internal.h"

#include <stdio.h>

enum { SHOWN_INPUTS = 3 };

static void tolerances(struct bw_text *out, const struct bw_result *result, const struct bw_distance_result *distance) {
    const struct bw_nominal *nominal = &distance->nominal;
    bool us = result->the_case->us_units;
    char nohd[REPORT_QUANTITY_SIZE], skin[REPORT_QUANTITY_SIZE], diffuse[REPORT_QUANTITY_SIZE];
    char ratio[REPORT_QUANTITY_SIZE];
    if (!distance->has_tolerance)
        return;
    text_wrapf(out, "  without tolerances   ",
               "NOHD %s, skin %s, diffuse %s, at its worst %s times the eye limit; all else here is for the worst corner of "
               "the tolerances given",
               report_reach(nohd, &nominal->nohd, us), report_reach(skin, &nominal->skin, us),
               report_reach(diffuse, &nominal->diffuse, us), report_ratio(ratio, nominal->ratio_at_exit));
}

static void aids(struct bw_text *out, const struct bw_result *result, const struct bw_distance_result *distance) {
    for (size_t i = 0; i < distance->aid_count; i++) {
        const struct bw_aid_result *aid = &distance->aids[i];
        char reach[REPORT_QUANTITY_SIZE];
        text_wrapf(out, i == 0 ? "  extended NOHD        " : "                       ", "%s through %s%s",
                   report_reach(reach, &aid->nohd, result->the_case->us_units), result->the_case->aids[aid->aid].name,
                   aid->naked_decides ? ", no more than for the naked eye" : "");
    }
}

/* "eye 0.12 s, skin 30 s; behind green 20 s, old never" */
static void times(struct bw_text *out, const struct bw_result *result, const char *head, const char *where,
                  const struct bw_place_times *place) {
    char eye[REPORT_QUANTITY_SIZE], skin[REPORT_QUANTITY_SIZE];
    struct bw_text line = {0};
    bw_text_add(&line, "%s: eye %s, skin %s", where, report_time(eye, &place->eye), report_time(skin, &place->skin));
    for (size_t i = 0; i < result->the_case->eyewear_count; i++)
        bw_text_add(&line, "%s%s %s", i == 0 ? "; eye behind " : ", ", result->the_case->eyewear[i].name,
                    report_time(eye, &place->behind[i]));
    text_wrap(out, head, line.data ? line.data : "");
    out->failed = out->failed || line.failed;
    bw_text_free(&line);
}

static void all_times(struct bw_text *out, const struct bw_result *result, const struct bw_distance_result *distance) {
    times(out, result, "  limit reached after  ", "at the exit", &distance->exit);
    for (size_t i = 0; i < distance->place_count; i++) {
        char at[REPORT_QUANTITY_SIZE], eye[REPORT_QUANTITY_SIZE], skin[REPORT_QUANTITY_SIZE], where[200];
        const struct bw_place_times *place = &distance->places[i];
        snprintf(where, sizeof where, "at %s m (%s times the eye limit, %s times the skin limit)",
                 report_plain(at, place->at_m), report_ratio(eye, place->eye_ratio), report_ratio(skin, place->skin_ratio));
        times(out, result, "                       ", where, place);
    }
}

static void skin_area(struct bw_text *out, const struct bw_result *result, const struct bw_distance_result *distance) {
    char area[REPORT_QUANTITY_SIZE];
    if (!distance->skin_area_matters)
        return;
    text_wrapf(out, "  exposed skin         ", "%s%s: beyond 1400 nm the limit falls with the area",
               report_area(area, distance->skin_area_m2, result->the_case->us_units),
               report_handpiece(result, distance->laser, distance->handpiece)->has_exposed_skin
                   ? ", given in the case file"
                   : " at the exit, and at every distance what the beam lights there");
}

static void inputs(struct bw_text *out, const struct bw_result *result, const struct bw_distance_result *distance) {
    struct bw_text line = {0};
    size_t shown = distance->working.count > 0 ? distance->sensitivity_count : SHOWN_INPUTS;
    for (size_t i = 0; i < distance->sensitivity_count && i < shown; i++) {
        const struct bw_sensitivity *input = &distance->sensitivity[i];
        char nohd[REPORT_QUANTITY_SIZE], number[BW_NUMBER_SIZE];
        bw_text_add(&line, "%s", i > 0 ? "; " : "");
        report_input_words(&line, result, distance, input);
        bw_text_add(&line, ": NOHD %s, OD %s", report_per_cent(nohd, input->nohd_pct_per_pct),
                    bw_format_fixed(number, input->od_per_pct, 4, BW_NEAREST));
    }
    if (line.length > 0)
        text_wrapf(out, "  1 % more of an input ", "%s", line.data ? line.data : "");
    out->failed = out->failed || line.failed;
    bw_text_free(&line);
}

void text_handpiece_more(struct bw_text *out, const struct bw_result *result,
                         const struct bw_distance_result *distance) {
    tolerances(out, result, distance);
    aids(out, result, distance);
    skin_area(out, result, distance);
    all_times(out, result, distance);
    inputs(out, result, distance);
}

void text_person_times(struct bw_text *out, const struct bw_result *result, const struct bw_room_result *found) {
    const struct bw_room *room = &result->the_case->rooms[found->room];
    struct text_table table;
    if (room->person_count == 0 || !found->persons[0].has_times)
        return;
    bw_text_add(out, "\n");
    table_begin(&table, "lrrrl");
    static const char *const names[] = {"limit reached after", "eye", "eye, as worn", "skin", "looks through"};
    for (size_t i = 0; i < sizeof names / sizeof names[0]; i++)
        table_cell(&table, "%s", names[i]);
    for (size_t i = 0; i < room->person_count; i++) {
        const struct bw_person_result *person = &found->persons[i];
        char words[REPORT_QUANTITY_SIZE];
        table_cell(&table, "%s", room->persons[i].name);
        table_quantity(&table, report_time(words, &person->eye));
        table_quantity(&table, report_time(words, &person->worn));
        table_quantity(&table, report_time(words, &person->skin));
        table_cell(&table, "%s", room->persons[i].has_aid ? result->the_case->aids[room->persons[i].aid].name : "nothing");
    }
    table_print(&table, out, 2);
}
