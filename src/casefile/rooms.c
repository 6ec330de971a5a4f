/* Rooms and what is in them. Whether all of it is where it can be: room_checks.c. */
#include "internal.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

static const struct range grids_m = {0.002, 1.};
enum { BOUNCES_MAX = 3, BOUNCES_DEFAULT = 1 };
static const double grid_default_m = 0.02, shortest_m = 0.001;

/* A published material that stands for what the case does not say. */
static void take_default(struct reading *reading, const struct section *section, const char *name,
                         struct bw_material *material) {
    const struct bw_material *found = bw_materials_find(name);
    if (found)
        *material = *found;
    else
        fault_section(reading, section, "treated is missing, and there is no published %s to stand for it", name);
}

static void read_bounces(struct reading *reading, const struct section *section, struct bw_room *room) {
    double value;
    enum presence presence = value_number(reading, section, "bounces", (struct range){0., BOUNCES_MAX}, &value);
    room->bounces = presence == GIVEN ? (int)value : BOUNCES_DEFAULT;
    if (presence == GIVEN && fabs(value - room->bounces) > 0.) {
        const struct bw_ini_entry *entry = value_entry(section, "bounces", NULL);
        fault_key(reading, entry, "%s is not a whole number; 0, 1, 2 or 3 would be right", entry->value);
    }
}

static void read_room(struct reading *reading, const struct section *section, struct bw_room *room) {
    snprintf(room->name, sizeof room->name, "%s", section->names[0]);
    value_text(reading, section, "title", room->title, sizeof room->title);
    if (value_points(reading, section, "outline", 3, &room->outline) == ABSENT)
        fault_missing(reading, section, "outline");
    if (value_material(reading, section, "material", &room->walls) == ABSENT)
        fault_missing(reading, section, "material");
    if (value_material(reading, section, "treated", &room->treated) == ABSENT)
        take_default(reading, section, "skin", &room->treated);
    if (value_number(reading, section, "grid", grids_m, &room->grid_m) == ABSENT)
        room->grid_m = grid_default_m;
    read_bounces(reading, section, room);
}

static bool read_end(struct reading *reading, const struct section *section, const char *key, struct bw_point *point) {
    enum presence presence = value_point(reading, section, key, point);
    if (presence == ABSENT)
        fault_missing(reading, section, key);
    return presence == GIVEN;
}

static bool read_segment(struct reading *reading, const struct section *section, struct bw_segment *segment) {
    bool from = read_end(reading, section, "from", &segment->from);
    bool to = read_end(reading, section, "to", &segment->to);
    if (!from || !to)
        return false;
    if (bw_distance(segment->from, segment->to) >= shortest_m)
        return true;
    fault_key(reading, value_entry(section, "to", NULL),
              "is the same place as the other end, in line %d; another place would "
              "be right",
              value_entry(section, "from", NULL)->line);
    return false;
}

static void read_surface(struct reading *reading, struct section *section, struct bw_room *room) {
    struct bw_surface *surface = &room->surfaces[section->index];
    snprintf(surface->name, sizeof surface->name, "%s", section->names[1]);
    value_text(reading, section, "title", surface->title, sizeof surface->title);
    section->made = read_segment(reading, section, &surface->segment);
    if (value_material(reading, section, "material", &surface->material) == ABSENT)
        fault_missing(reading, section, "material");
}

/* none (also when nothing is said: the safe side), opaque, or a material. */
static void read_cover(struct reading *reading, const struct section *section, struct bw_opening *opening) {
    const struct bw_ini_entry *entry = value_entry(section, "cover", NULL);
    opening->cover = BW_COVER_NONE;
    if (!entry || strcmp(entry->value, "none") == 0)
        return;
    if (strcmp(entry->value, "opaque") == 0)
        opening->cover = BW_COVER_OPAQUE;
    else if (value_material(reading, section, "cover", &opening->material) == GIVEN)
        opening->cover = BW_COVER_MATERIAL;
}

static void read_opening(struct reading *reading, struct section *section, struct bw_room *room) {
    static const char *const words[] = {"door", "window", "gap"};
    static const enum bw_opening_kind kinds[] = {BW_DOOR, BW_WINDOW, BW_GAP};
    struct bw_opening *opening = &room->openings[section->index];
    size_t index = 0;
    snprintf(opening->name, sizeof opening->name, "%s", section->names[1]);
    value_text(reading, section, "title", opening->title, sizeof opening->title);
    section->made = read_segment(reading, section, &opening->segment);
    if (value_choice(reading, section, "kind", words, sizeof words / sizeof *words, &index) == ABSENT)
        fault_missing(reading, section, "kind");
    opening->kind = kinds[index];
    read_cover(reading, section, opening);
}

static void read_area(struct reading *reading, struct section *section, struct bw_room *room) {
    struct bw_treatment_area *area = &room->areas[section->index];
    snprintf(area->name, sizeof area->name, "%s", section->names[1]);
    value_text(reading, section, "title", area->title, sizeof area->title);
    enum presence presence = value_points(reading, section, "outline", 1, &area->outline);
    if (presence == ABSENT)
        fault_missing(reading, section, "outline");
    section->made = presence == GIVEN;
    if (value_aim(reading, section, &area->aim_from_deg, &area->aim_to_deg) == ABSENT) {
        area->aim_from_deg = 0.;
        area->aim_to_deg = 360.;
    }
}

static void read_person(struct reading *reading, struct section *section, struct bw_room *room) {
    struct bw_person *person = &room->persons[section->index];
    snprintf(person->name, sizeof person->name, "%s", section->names[1]);
    value_text(reading, section, "title", person->title, sizeof person->title);
    section->made = read_end(reading, section, "at", &person->at);
    person->has_eyewear = value_eyewear(reading, section, &person->eyewear) == GIVEN;
    person->has_aid = value_aid(reading, section, &person->aid) == GIVEN;
}

/* What can be in a room, and where its number is kept. */
typedef void thing_reader(struct reading *reading, struct section *section, struct bw_room *room);

static void read_things(struct reading *reading, const struct section *of, struct bw_room *room, enum section_kind kind,
                        thing_reader *reader, size_t *count) {
    size_t at = 0;
    for (struct section *section; (section = sections_next(reading, &at, kind, room->name, NULL));) {
        section->index = (*count)++;
        section->parent = of->index;
        reader(reading, section, room);
    }
}

static void read_contents(struct reading *reading, const struct section *of, struct bw_room *room) {
    const char *name = room->name;
    room->surfaces =
        reading_allocate(reading, sections_count(reading, SECTION_SURFACE, name, NULL), sizeof *room->surfaces);
    room->openings =
        reading_allocate(reading, sections_count(reading, SECTION_OPENING, name, NULL), sizeof *room->openings);
    room->areas = reading_allocate(reading, sections_count(reading, SECTION_AREA, name, NULL), sizeof *room->areas);
    room->persons =
        reading_allocate(reading, sections_count(reading, SECTION_PERSON, name, NULL), sizeof *room->persons);
    if (reading->no_memory)
        return;
    read_things(reading, of, room, SECTION_SURFACE, read_surface, &room->surface_count);
    read_things(reading, of, room, SECTION_OPENING, read_opening, &room->opening_count);
    read_things(reading, of, room, SECTION_AREA, read_area, &room->area_count);
    read_things(reading, of, room, SECTION_PERSON, read_person, &room->person_count);
}

/* What lies in rooms that are not there. */
static void check_owners(struct reading *reading) {
    static const enum section_kind kinds[] = {SECTION_SURFACE, SECTION_OPENING, SECTION_AREA, SECTION_PERSON};
    for (size_t i = 0; i < sizeof kinds / sizeof *kinds; i++) {
        size_t at = 0;
        for (struct section *section; (section = sections_next(reading, &at, kinds[i], NULL, NULL));)
            sections_refer(reading, section, SECTION_ROOM, section->names[0], NULL);
    }
}

void read_rooms(struct reading *reading) {
    struct bw_case *the_case = reading->the_case;
    size_t at = 0, count = sections_count(reading, SECTION_ROOM, NULL, NULL);
    sections_lose_orphans(reading, SECTION_AREA, SECTION_ROOM);
    the_case->rooms = reading_allocate(reading, count, sizeof *the_case->rooms);
    for (struct section *section;
         the_case->rooms && (section = sections_next(reading, &at, SECTION_ROOM, NULL, NULL));) {
        section->index = the_case->room_count++;
        section->made = true;
        struct bw_room *room = &the_case->rooms[section->index];
        read_room(reading, section, room);
        read_contents(reading, section, room);
        check_room(reading, section);
    }
    check_owners(reading);
}
