/* Incidents: who was where in the beam, for how long, behind what. */
#include "internal.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>

static const struct range exposures_s = {1e-13, 3e4}; /* what the published tables cover */
static const struct range distances_m = {0., 1e6};

static enum presence find_laser(struct reading *reading, const struct section *section, size_t *index) {
    const struct bw_case *the_case = reading->the_case;
    const char **names = reading_allocate(reading, the_case->laser_count, sizeof *names);
    for (size_t i = 0; names && i < the_case->laser_count; i++)
        names[i] = the_case->lasers[i].name;
    enum presence presence =
        names ? value_name(reading, section, "laser", SECTION_LASER, names, the_case->laser_count, index) : WRONG;
    free(names);
    return presence;
}

static enum presence find_handpiece(struct reading *reading, const struct section *section,
                                    const struct bw_laser *laser, size_t *index) {
    const char **names = reading_allocate(reading, laser->handpiece_count, sizeof *names);
    for (size_t i = 0; names && i < laser->handpiece_count; i++)
        names[i] = laser->handpieces[i].name;
    enum presence presence =
        names ? value_name(reading, section, "handpiece", SECTION_HANDPIECE, names, laser->handpiece_count, index)
              : WRONG;
    free(names);
    return presence;
}

static enum presence find_room(struct reading *reading, const struct section *section, size_t *index) {
    const struct bw_case *the_case = reading->the_case;
    const char **names = reading_allocate(reading, the_case->room_count, sizeof *names);
    for (size_t i = 0; names && i < the_case->room_count; i++)
        names[i] = the_case->rooms[i].name;
    enum presence presence =
        names ? value_name(reading, section, "room", SECTION_ROOM, names, the_case->room_count, index) : WRONG;
    free(names);
    return presence;
}

/* Both laser and handpiece, or neither. */
static void read_light(struct reading *reading, const struct section *section, struct bw_incident *incident) {
    enum presence laser = find_laser(reading, section, &incident->laser), handpiece = ABSENT;
    bool named = value_given(section, "handpiece");
    if (laser == GIVEN)
        handpiece = find_handpiece(reading, section, &reading->the_case->lasers[incident->laser], &incident->handpiece);
    incident->has_handpiece = laser == GIVEN && handpiece == GIVEN;
    if (laser == ABSENT && (named || !incident->in_room))
        fault_missing(reading, section, "laser");
    if (!named && (laser != ABSENT || !incident->in_room))
        fault_missing(reading, section, "handpiece");
}

static bool used_there(const struct bw_case *the_case, const struct bw_incident *incident) {
    for (size_t i = 0; i < the_case->use_count; i++) {
        const struct bw_use *use = &the_case->uses[i];
        if (use->room == incident->room && (!incident->has_handpiece || (use->laser == incident->laser &&
                                                                          use->handpiece == incident->handpiece)))
            return true;
    }
    return false;
}

static void read_place(struct reading *reading, const struct section *section, struct bw_incident *incident) {
    const struct bw_case *the_case = reading->the_case;
    const struct bw_ini_entry *distance = value_entry(section, "distance", NULL);
    enum presence room = find_room(reading, section, &incident->room);
    enum presence at = value_point(reading, section, "at", &incident->at);
    if (at == ABSENT)
        fault_missing(reading, section, "at");
    if (distance)
        fault_key(reading, distance, "does not go with room; in a room at_m says where, or remove the room");
    if (room != GIVEN)
        return;
    const struct bw_room *the_room = &the_case->rooms[incident->room];
    if (at == GIVEN && the_room->outline.count > 2 && !bw_polygon_contains(&the_room->outline, incident->at))
        fault_key(reading, value_entry(section, "at", NULL),
                  "%s is outside the outline of room %s; a place inside would be right",
                  value_entry(section, "at", NULL)->value, the_room->name);
    if (!used_there(the_case, incident) && !reading->lost[SECTION_USE])
        fault_section(reading, section, "%s in room %s; [use %s LASER HANDPIECE] would be right",
                      incident->has_handpiece ? "this handpiece is not used" : "no handpiece is used", the_room->name,
                      the_room->name);
}

static void read_incident(struct reading *reading, const struct section *section, struct bw_incident *incident) {
    const struct bw_ini_entry *at = value_entry(section, "at", NULL);
    snprintf(incident->name, sizeof incident->name, "%s", section->names[0]);
    incident->line = section->head->line;
    value_text(reading, section, "title", incident->title, sizeof incident->title);
    incident->in_room = value_given(section, "room");
    read_light(reading, section, incident);
    if (incident->in_room)
        read_place(reading, section, incident);
    else if (value_number(reading, section, "distance", distances_m, &incident->distance_m) == ABSENT)
        fault_missing(reading, section, "distance");
    if (at && !incident->in_room)
        fault_key(reading, at, "is a place in a room; add `room = NAME`, or remove the line");
    if (value_number(reading, section, "exposure", exposures_s, &incident->exposure_s) == ABSENT)
        fault_missing(reading, section, "exposure");
    incident->has_eyewear = value_eyewear(reading, section, &incident->eyewear) == GIVEN;
    incident->has_aid = value_aid(reading, section, &incident->aid) == GIVEN;
}

void read_incidents(struct reading *reading) {
    struct bw_case *the_case = reading->the_case;
    size_t at = 0, count = sections_count(reading, SECTION_INCIDENT, NULL, NULL);
    the_case->incidents = reading_allocate(reading, count, sizeof *the_case->incidents);
    for (struct section *section;
         the_case->incidents && (section = sections_next(reading, &at, SECTION_INCIDENT, NULL, NULL));) {
        section->index = the_case->incident_count++;
        section->made = true;
        read_incident(reading, section, &the_case->incidents[section->index]);
    }
}
