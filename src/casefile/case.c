/* A case from its triples: each kind of section in the order in which they refer to each other. */
#include "internal.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static const char default_rules[] = "iec-60825-1-2014";

/* ---- [case] --------------------------------------------------------------------------------- */

static void read_rules(struct reading *reading, const struct section *section) {
    struct bw_case *the_case = reading->the_case;
    char rules[BW_NAME_SIZE];
    the_case->rules_given = value_text(reading, section, "rules", rules, sizeof rules) == GIVEN;
    if (!the_case->rules_given)
        return;
    snprintf(the_case->rules, sizeof the_case->rules, "%s", rules);
    /* Whether there is such a rule set is for the caller to say: --rules and --tables may bring another. */
    if (the_case->rules[strspn(the_case->rules, "abcdefghijklmnopqrstuvwxyz0123456789-")] != '\0')
        fault_key(reading, value_entry(section, "rules", NULL),
                  "%s: not the id of a rule set; a-z, 0-9 and hyphen would be right, as in %s", the_case->rules,
                  default_rules);
}

static void read_case_section(struct reading *reading) {
    static const char *const units[] = {"si", "us"};
    struct bw_case *the_case = reading->the_case;
    size_t at = 0, index = 0;
    const struct section *section = sections_next(reading, &at, SECTION_CASE, NULL, NULL);
    if (!section) {
        if (!reading->lost[SECTION_CASE])
            bw_faults_add(reading->faults, 0, "", "",
                          "has no [case] section; `[case]` and below it `title = ...` would be right");
        return;
    }
    if (value_text(reading, section, "title", the_case->title, sizeof the_case->title) == ABSENT)
        snprintf(the_case->title, sizeof the_case->title, "Untitled case");
    read_rules(reading, section);
    value_choice(reading, section, "units", units, 2, &index);
    the_case->us_units = index == 1;
}

/* ---- [use] ---------------------------------------------------------------------------------- */

static void read_use(struct reading *reading, const struct section *section) {
    struct bw_case *the_case = reading->the_case;
    const struct section *room = sections_refer(reading, section, SECTION_ROOM, section->names[0], NULL);
    const struct section *laser = sections_refer(reading, section, SECTION_LASER, section->names[1], NULL);
    const struct section *handpiece =
        laser ? sections_refer(reading, section, SECTION_HANDPIECE, section->names[1], section->names[2]) : NULL;
    if (room && laser && handpiece)
        the_case->uses[the_case->use_count++] = (struct bw_use){room->index, laser->index, handpiece->index};
}

/* Where a handpiece is used it must be known where it is held. */
static void check_areas(struct reading *reading) {
    const struct bw_case *the_case = reading->the_case;
    size_t at = 0;
    for (struct section *section; (section = sections_next(reading, &at, SECTION_ROOM, NULL, NULL));) {
        bool used = false;
        for (size_t i = 0; i < the_case->use_count; i++)
            used = used || the_case->uses[i].room == section->index;
        if (used && the_case->rooms[section->index].area_count == 0 && !reading->lost[SECTION_AREA])
            fault_section(reading, section,
                          "a handpiece is used in it, but it has no treatment area; [treatment-area %s NAME] with "
                          "outline_m would be right",
                          section->names[0]);
    }
}

void read_uses(struct reading *reading) {
    struct bw_case *the_case = reading->the_case;
    size_t at = 0;
    the_case->uses =
        reading_allocate(reading, sections_count(reading, SECTION_USE, NULL, NULL), sizeof *the_case->uses);
    for (struct section *section; the_case->uses && (section = sections_next(reading, &at, SECTION_USE, NULL, NULL));)
        read_use(reading, section);
    if (!reading->no_memory)
        check_areas(reading);
}

/* ---- the whole ------------------------------------------------------------------------------ */

static void keep_given(struct reading *reading) {
    const struct bw_ini *ini = reading->ini;
    for (size_t i = 0; i < ini->count && !reading->no_memory; i++) {
        const struct bw_ini_entry *entry = &ini->entries[i];
        if (bw_ini_add(&reading->the_case->given, entry->section, entry->key, entry->value, entry->line) != BW_OK)
            reading->no_memory = true;
    }
}

static void read_all(struct reading *reading) {
    static void (*const readers[])(struct reading *) = {
        sections_read,   read_case_section, read_materials, read_goggles,   read_aids,  read_lasers,
        read_handpieces, read_rooms,        read_uses,      read_incidents, keep_given,
    };
    for (size_t i = 0; i < sizeof readers / sizeof *readers && !reading->no_memory; i++)
        readers[i](reading);
}

/* With lost lines, the faults of the INI guard are in the list already, and what it refused is not in ini. */
static enum bw_status read_case(const struct bw_ini *ini, const char *path, const struct lost_lines *lost,
                                struct bw_case **the_case, struct bw_faults *faults, struct bw_error *error) {
    struct reading reading = {.ini = ini, .faults = faults, .lost_lines = lost, .path = path};
    for (size_t i = 0; i < SECTION_KINDS; i++)
        reading.lost[i] = lost && lost->sections;
    *the_case = NULL;
    reading.the_case = reading_allocate(&reading, 1, sizeof *reading.the_case);
    if (reading.the_case) {
        snprintf(reading.the_case->rules, sizeof reading.the_case->rules, "%s", default_rules);
        read_all(&reading);
    }
    free(reading.sections);
    free(reading.materials);
    bw_faults_sort(faults);
    enum bw_status status = BW_OK;
    if (reading.no_memory || faults->out_of_memory)
        status = bw_error_set(error, BW_NO_MEMORY, "out of memory");
    else if (faults->count > 0)
        status = bw_error_set(error, BW_INPUT, "%s", faults->items[0].text);
    if (status == BW_OK)
        *the_case = reading.the_case;
    else
        bw_case_free(reading.the_case);
    return status;
}

/* A case from triples.
 * Given:    ini       of any maker: repeats are faults here as well
 * Returned: the_case  NULL unless BW_OK; to be freed by bw_case_free
 *           faults    every fault, by line, beside those that were there
 * Returns:  BW_OK; BW_INPUT with faults; BW_NO_MEMORY
 * Notes:    Whether the rule set exists is not judged here: the caller may bring a foreign one. */
enum bw_status bw_case_from_ini(const struct bw_ini *ini, struct bw_case **the_case, struct bw_faults *faults,
                                struct bw_error *error) {
    return read_case(ini, NULL, NULL, the_case, faults, error);
}

/* Judges what the INI guard has left, so that its faults and ours are told together. */
static enum bw_status judge_rest(const char *path, const struct bw_text *bytes, struct bw_case **the_case, struct bw_faults *faults,
                                 struct bw_error *error) {
    struct bw_text plain = {0};
    struct lost_lines lost = {0};
    struct bw_ini ini = {0};
    struct bw_faults again = {0};
    enum bw_status status = BW_INPUT;
    if (repair_lines(bytes, faults, &plain, &lost))
        status = bw_ini_read_bytes(plain.data, plain.length, &ini, &again, NULL);
    if (status == BW_OK)
        status = read_case(&ini, path, &lost, the_case, faults, error);
    bool no_memory = lost.no_memory || status == BW_NO_MEMORY;
    if (no_memory) {
        if (error) /* of the guard's first fault */
            *error = (struct bw_error){0};
        bw_error_set(error, BW_NO_MEMORY, "out of memory");
    }
    bw_faults_free(&again);
    bw_ini_free(&ini);
    bw_text_free(&plain);
    free(lost.lines);
    return no_memory ? BW_NO_MEMORY : BW_INPUT;
}

/* A case from a file.
 * Given:    path
 * Returned: the_case  NULL unless BW_OK; bytes (may be NULL) the raw file; faults all of them, by line
 * Returns:  BW_OK; BW_INPUT, with faults unless the file cannot be opened; BW_SYSTEM; BW_NO_MEMORY */
enum bw_status bw_case_read(const char *path, struct bw_case **the_case, struct bw_text *bytes,
                            struct bw_faults *faults, struct bw_error *error) {
    struct bw_ini ini = {0};
    struct bw_text own = {0}, *content = bytes ? bytes : &own;
    *the_case = NULL;
    enum bw_status status = bw_ini_read(path, &ini, content, faults, error);
    if (status == BW_OK)
        status = read_case(&ini, path, NULL, the_case, faults, error);
    else if (status == BW_INPUT && faults->count > 0)
        status = judge_rest(path, content, the_case, faults, error);
    bw_ini_free(&ini);
    bw_text_free(&own);
    return status;
}

static void free_laser(struct bw_laser *laser) {
    free(laser->emissions);
    free_timings(laser->timings, laser->emission_count);
    free(laser->handpieces);
    free(laser->tolerances);
}

void bw_case_free(struct bw_case *the_case) {
    if (!the_case)
        return;
    for (size_t i = 0; i < the_case->laser_count; i++)
        free_laser(&the_case->lasers[i]);
    for (size_t i = 0; i < the_case->room_count; i++)
        bw_room_clear(&the_case->rooms[i]);
    free(the_case->lasers);
    free(the_case->rooms);
    free(the_case->eyewear);
    free(the_case->uses);
    free(the_case->aids);
    free(the_case->incidents);
    bw_ini_free(&the_case->given);
    free(the_case);
}
