/* Rooms: the plan, who stands in it, what gets out. */
#include "html.h"

#include <stdio.h>

#define COUNT(array) (sizeof(array) / sizeof((array)[0]))

static void facts(struct bw_text *out, const struct bw_result *result, const struct bw_room_result *found) {
    const struct bw_room *room = &result->the_case->rooms[found->room];
    bool us = result->the_case->us_units;
    char zone[REPORT_QUANTITY_SIZE], area[REPORT_QUANTITY_SIZE], reach[BW_WORDS_SIZE], ratio[REPORT_QUANTITY_SIZE];
    html_paragraph(
        out,
        "The hazard zone (NHZ) takes %s of the %s of the room and reaches %s from where the handpiece is used. "
        "At the worst place %s times the eye limit can arrive. Map of %g mm cells, up to %d mirror-like "
        "bounce%s.",
        report_area(zone, found->solution.nhz_area_m2, us), report_area(area, bw_polygon_area(&room->outline), us),
        bw_length_words(reach, found->solution.farthest_m, us), report_ratio(ratio, found->solution.ratio_max),
        1e3 * room->grid_m, room->bounces, room->bounces == 1 ? "" : "s");
}

static void densities(struct bw_text *out, const struct bw_person_result *person) {
    struct bw_text text = {0};
    char od[REPORT_QUANTITY_SIZE], wavelength[REPORT_QUANTITY_SIZE];
    for (size_t i = 0; i < person->od_count; i++)
        if (!(person->od[i].od <= 0.))
            bw_text_add(&text, "%s%s at %s nm", text.length > 0 ? ", " : "", report_density(od, person->od[i].od),
                        report_plain(wavelength, person->od[i].wavelength_nm));
    html_cell(out, NULL, "%s", text.length > 0 ? text.data : "none");
    out->failed = out->failed || text.failed;
    bw_text_free(&text);
}

static void person(struct bw_text *out, const struct bw_result *result, const struct bw_room_result *found,
                   size_t index) {
    const struct bw_person *person = &result->the_case->rooms[found->room].persons[index];
    const struct bw_person_result *each = &found->persons[index];
    char words[REPORT_QUANTITY_SIZE], path[BW_WORDS_SIZE];
    html_row(out, NULL);
    html_cell(out, NULL, "%zu %s", index + 1, person->name);
    html_cell(out, "n", "%.2f, %.2f", person->at.x_m, person->at.y_m);
    html_cell(out, "n", "%s", report_ratio(words, each->place.ratio));
    html_cell(out, NULL, "%s", bw_path_words(path, &each->place, result->the_case->us_units));
    densities(out, each);
    html_cell(out, NULL, "%s", person->has_eyewear ? result->the_case->eyewear[person->eyewear].name : "nothing");
    if (each->has_verdict)
        html_cell(out, html_verdict_class(each->verdict), "%s", html_verdict_words(each->verdict));
    else if (each->needs_eyewear)
        html_cell(out, "bad v", "%s", "\xE2\x9C\x97 unprotected");
    else
        html_cell(out, "good", "%s", "\xE2\x9C\x93 outside the zone");
    html_row_end(out);
}

static void people(struct bw_text *out, const struct bw_result *result, const struct bw_room_result *found) {
    static const char *const heads[] = {"Person", ">At x, y (m)", ">\xC3\x97 eye limit", "Worst by", "Needs OD",
                                        "Wears",  "Verdict"};
    size_t count = result->the_case->rooms[found->room].person_count;
    if (count == 0) {
        html_paragraph(out, "The case has nobody in this room.");
        return;
    }
    html_table(out, "", heads, COUNT(heads));
    for (size_t i = 0; i < count; i++)
        person(out, result, found, i);
    html_table_end(out);
}

static const char *cover_words(const struct bw_opening *opening) {
    switch (opening->cover) {
    case BW_COVER_NONE:
        return "none";
    case BW_COVER_OPAQUE:
        return "opaque";
    case BW_COVER_MATERIAL:
        return opening->material.name;
    }
    return "unknown";
}

static void openings(struct bw_text *out, const struct bw_result *result, const struct bw_room_result *found) {
    static const char *const heads[] = {"Opening", "Kind", "Cover", ">\xC3\x97 eye limit beyond", "Worst by", "Needs"};
    const struct bw_room *room = &result->the_case->rooms[found->room];
    if (room->opening_count == 0) {
        html_paragraph(out, "The room has no opening in this case.");
        return;
    }
    html_table(out, "", heads, COUNT(heads));
    for (size_t i = 0; i < room->opening_count; i++) {
        const struct bw_opening_result *each = &found->solution.openings[i];
        char words[REPORT_QUANTITY_SIZE], path[BW_WORDS_SIZE],
            letter[4] = {(char)('A' + i % 26), i >= 26 ? '\'' : '\0'};
        html_row(out, NULL);
        html_cell(out, NULL, "%s %s", letter, room->openings[i].name);
        html_cell(out, NULL, "%s", report_opening_kind(room->openings[i].kind));
        html_cell(out, NULL, "%s", cover_words(&room->openings[i]));
        html_cell(out, each->leaves ? "n bad" : "n", "%s", report_ratio(words, each->ratio_beyond));
        html_cell(out, NULL, "%s", bw_path_words(path, &each->worst, result->the_case->us_units));
        html_cell(out, each->leaves ? "bad" : NULL, "%s", each->needs);
        html_row_end(out);
    }
    html_table_end(out);
}

static void material(struct bw_text *out, const char *what, const struct bw_material *material) {
    char words[REPORT_QUANTITY_SIZE];
    html_row(out, NULL);
    html_cell(out, NULL, "%s", what);
    html_cell(out, NULL, "%s", material->name);
    html_cell(out, NULL, "%s", bw_finish_name(material->finish));
    html_cell(out, "n", "%s", report_plain(words, 100. * material->reflectance));
    html_cell(out, "n", "%s", report_plain(words, 100. * material->matt_reflectance));
    html_cell(out, "n", "%s", report_plain(words, 100. * material->transmittance));
    html_cell(out, NULL, "%s (%s)", material->source, report_known_words(material->known));
    html_row_end(out);
}

static void materials(struct bw_text *out, const struct bw_room *room) {
    static const char *const heads[] = {"Surface", "Material",        "Finish", ">Reflects %",
                                        ">Matt %", ">Lets through %", "Source"};
    html_table(out, "", heads, COUNT(heads));
    material(out, "walls", &room->walls);
    material(out, "what is treated", &room->treated);
    for (size_t i = 0; i < room->surface_count; i++)
        material(out, room->surfaces[i].name, &room->surfaces[i].material);
    html_table_end(out);
}

void html_rooms(struct bw_text *out, const struct bw_result *result) {
    for (size_t i = 0; i < result->room_count; i++) {
        const struct bw_room_result *found = &result->rooms[i];
        const struct bw_room *room = &result->the_case->rooms[found->room];
        if (!found->solved)
            continue;
        char id[40];
        struct bw_text title = {0};
        bw_text_add(&title, "Room %s%s%s", room->name, room->title[0] ? ": " : "", room->title);
        bw_text_add(out, "<section class=\"page\">\n");

        snprintf(id, sizeof id, "room-section-%zu", i);
        html_heading(out, id, title.data ? title.data : "Room");
        out->failed = out->failed || title.failed;
        bw_text_free(&title);
        facts(out, result, found);
        bw_text_add(out, "<figure>\n");
        bw_report_plan_svg(out, result, i, false);
        bw_text_add(out, "</figure>\n");
        people(out, result, found);
        html_person_times(out, result, found);
        openings(out, result, found);
        materials(out, room);
        bw_text_add(out, "</section>\n");
    }
}
