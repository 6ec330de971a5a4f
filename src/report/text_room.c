/* The zone, who stands in it, what it leaves by. */
#include "internal.h"

#include <stdio.h>

static void persons(struct bw_text *out, const struct bw_result *result, const struct bw_room_result *found) {
    const struct bw_room *room = &result->the_case->rooms[found->room];
    struct text_table table;
    if (room->person_count == 0)
        return;
    bw_text_add(out, "\n");
    table_begin(&table, "lrrlll");
    static const char *const names[] = {"person", "x limit", "OD", "worst by", "wears", "verdict"};
    for (size_t i = 0; i < sizeof names / sizeof names[0]; i++)
        table_cell(&table, "%s", names[i]);
    for (size_t i = 0; i < room->person_count; i++) {
        const struct bw_person_result *person = &found->persons[i];
        char words[REPORT_QUANTITY_SIZE], path[BW_WORDS_SIZE];
        table_cell(&table, "%s", room->persons[i].name);
        table_cell(&table, "%s", report_ratio(words, person->place.ratio));
        table_cell(&table, "%s", report_density(words, report_person_density(person)));
        table_cell(&table, "%s", bw_path_words(path, &person->place, result->the_case->us_units));
        table_cell(&table, "%s",
                   room->persons[i].has_eyewear ? result->the_case->eyewear[room->persons[i].eyewear].name : "nothing");
        table_cell(&table, "%s",
                   person->has_verdict     ? bw_verdict_name(person->verdict)
                   : person->needs_eyewear ? "UNPROTECTED"
                                           : "outside the zone");
    }
    table_print(&table, out, 2);
}

static void openings(struct bw_text *out, const struct bw_result *result, const struct bw_room_result *found) {
    const struct bw_room *room = &result->the_case->rooms[found->room];
    struct text_table table;
    if (room->opening_count == 0)
        return;
    bw_text_add(out, "\n");
    table_begin(&table, "llrl");
    table_cell(&table, "opening");
    table_cell(&table, "kind");
    table_cell(&table, "x limit beyond");
    table_cell(&table, "needs");
    for (size_t i = 0; i < room->opening_count; i++) {
        char words[REPORT_QUANTITY_SIZE];
        table_cell(&table, "%s", room->openings[i].name);
        table_cell(&table, "%s", report_opening_kind(room->openings[i].kind));
        table_cell(&table, "%s", report_ratio(words, found->solution.openings[i].ratio_beyond));
        table_cell(&table, "%s", found->solution.openings[i].needs);
    }
    table_print(&table, out, 2);
}

static void room(struct bw_text *out, const struct bw_result *result, const struct bw_room_result *found, bool timing) {
    const struct bw_room *room = &result->the_case->rooms[found->room];
    bool us = result->the_case->us_units;
    char title[BW_NAME_SIZE + 8], words[REPORT_QUANTITY_SIZE], of[REPORT_QUANTITY_SIZE];
    snprintf(title, sizeof title, "Room %s", room->name);
    text_heading(out, title);
    text_wrapf(out, "  hazard zone (NHZ)    ", "%s of %s", report_area(words, found->solution.nhz_area_m2, us),
               report_area(of, bw_polygon_area(&room->outline), us));
    text_wrapf(out, "  farthest place       ", "%s from where it is used",
               bw_length_words(words, found->solution.farthest_m, us));
    text_wrapf(out, "  worst in the room    ", "%s times the eye limit",
               report_ratio(words, found->solution.ratio_max));
    for (size_t i = 0; i < found->source_count; i++) {
        const struct bw_distance_result *distance = &result->distances[found->sources[i]];
        text_wrapf(out, i == 0 ? "  used here            " : "                       ", "%s %s",
                   report_laser(result, distance->laser)->name,
                   report_handpiece(result, distance->laser, distance->handpiece)->name);
    }
    if (timing)
        text_wrapf(out, "  time of the map      ", "%.3f s", found->solution.map_seconds);
    persons(out, result, found);
    text_person_times(out, result, found);
    openings(out, result, found);
}

void text_rooms(struct bw_text *out, const struct bw_result *result, bool timing) {
    for (size_t i = 0; i < result->room_count; i++)
        if (result->rooms[i].solved)
            room(out, result, &result->rooms[i], timing);
}

void bw_report_room_text(struct bw_text *out, const struct bw_result *result, bool timing) {
    text_case_head(out, result);
    text_findings(out, result, BW_DANGER, BW_ACTION);
    text_rooms(out, result, timing);
    text_findings(out, result, BW_CAUTION, BW_NOTE);
    text_all_working(out, result, WORKING_DISTANCE | WORKING_ROOM);
}
