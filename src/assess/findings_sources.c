/* Which published values the figures rest on that nobody has compared with a printed copy; what was left out. */
#include "internal.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* Distinct notes from memory. */
struct notes {
    size_t count, capacity;
    const struct bw_source_note **items;
};

static bool same(const char *a, const char *b) {
    return strcmp(a ? a : "", b ? b : "") == 0;
}

static void keep(struct notes *notes, const struct bw_source_note *note) {
    if (note->known != BW_MEMORY || notes->count == notes->capacity || !note->table)
        return;
    for (size_t i = 0; i < notes->count; i++)
        if (same(notes->items[i]->section, note->section) && same(notes->items[i]->row, note->row))
            return;
    notes->items[notes->count++] = note;
}

static void collect(struct notes *notes, const struct bw_distance_result *distance) {
    for (size_t i = 0; i < distance->direct->output->count; i++) {
        keep(notes, &distance->emissions[i].limit.limit.source);
        keep(notes, &distance->emissions[i].skin_limit.limit.source);
    }
    keep(notes, &distance->glance.source);
    keep(notes, &distance->skin_time.source);
    keep(notes, &distance->diffuse_time.source);
}

static void from_memory(const struct assess_job *job) {
    const struct bw_result *result = job->result;
    struct notes notes = {.capacity = result->distance_count * (2 * BW_EMISSIONS_MAX + 3)};
    notes.items = calloc(notes.capacity + 1, sizeof *notes.items);
    if (!notes.items) {
        bw_error_set(job->error, BW_NO_MEMORY, "out of memory");
        return;
    }
    for (size_t i = 0; i < result->distance_count; i++)
        collect(&notes, &result->distances[i]);
    struct bw_text text = {0};
    bw_text_add(&text, "%zu of the rows that govern here %s from memory, not from a printed copy: ", notes.count,
                notes.count == 1 ? "comes" : "come");
    for (size_t i = 0; i < notes.count; i++)
        bw_text_add(&text, "%s%s %s (%s)", i > 0 ? "; " : "", notes.items[i]->section, notes.items[i]->row,
                    notes.items[i]->clause);
    bw_text_add(&text, ". Compare them with the printed document before you defend a figure.");
    char subject[BW_TITLE_SIZE];
    snprintf(subject, sizeof subject, "rule set %s", bw_table_id(job->table));
    if (notes.count > 0)
        assess_finding_text(job, BW_CAUTION, subject, &text);
    bw_text_free(&text);
    free(notes.items);
}

static void keep_material(const struct bw_material *material, struct bw_text *names) {
    if (material->known != BW_MEMORY || material->name[0] == '\0')
        return;
    /* Names are words of a-z, 0-9 and hyphen, so a word between blanks is the whole name. */
    char word[BW_NAME_SIZE + 3];
    snprintf(word, sizeof word, " %s,", material->name);
    if (!names->data || !strstr(names->data, word))
        bw_text_add(names, "%s", word);
}

static void materials(const struct assess_job *job, const struct bw_room_result *result) {
    const struct bw_room *room = &job->the_case->rooms[result->room];
    struct bw_text names = {0};
    keep_material(&room->walls, &names);
    keep_material(&room->treated, &names);
    for (size_t i = 0; i < room->surface_count; i++)
        keep_material(&room->surfaces[i].material, &names);
    for (size_t i = 0; i < room->opening_count; i++)
        if (room->openings[i].cover == BW_COVER_MATERIAL)
            keep_material(&room->openings[i].material, &names);
    char subject[BW_TITLE_SIZE];
    snprintf(subject, sizeof subject, "room %s", room->name);
    if (names.length > 0)
        assess_finding(job, BW_NOTE, subject, "Reflectances that come from memory:%.*s.", (int)names.length - 1,
                       names.data);
    if (names.failed)
        bw_error_set(job->error, BW_NO_MEMORY, "out of memory");
    bw_text_free(&names);
}

/* A room in which no handpiece is used cannot be solved. */
static void unused_rooms(const struct assess_job *job) {
    if (job->options->laser || job->options->handpiece || !(job->options->parts & BW_PART_ROOM))
        return;
    for (size_t i = 0; i < job->the_case->room_count; i++) {
        bool is_used = false;
        char subject[BW_TITLE_SIZE];
        for (size_t j = 0; j < job->the_case->use_count; j++)
            is_used = is_used || job->the_case->uses[j].room == i;
        if (is_used || !assess_wants_room(job, i))
            continue;
        snprintf(subject, sizeof subject, "room %s", job->the_case->rooms[i].name);
        assess_finding(job, BW_CAUTION, subject,
                       "Not assessed: no handpiece is used in it. A section [use %s LASER HANDPIECE] says which.",
                       job->the_case->rooms[i].name);
    }
}

void assess_source_findings(const struct assess_job *job) {
    from_memory(job);
    for (size_t i = 0; i < job->result->room_count; i++)
        if (job->result->rooms[i].solved)
            materials(job, &job->result->rooms[i]);
    unused_rooms(job);
}
