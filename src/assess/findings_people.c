/* Who stands in the zone without enough protection, and what gets out of the room. */
#include "internal.h"

#include <stdio.h>

static void add_densities(struct bw_text *out, const struct bw_person_result *person) {
    const char *before = "";
    for (size_t i = 0; i < person->od_count; i++) {
        char od[BW_NUMBER_SIZE];
        if (person->od[i].od <= 0.)
            continue;
        bw_text_add(out, "%sOD %s at %.6g nm", before, bw_format_fixed(od, person->od[i].od, 1, BW_UP),
                    person->od[i].wavelength_nm);
        before = ", ";
    }
}

static void unprotected(const struct assess_job *job, const char *subject, const struct bw_person_result *person) {
    struct bw_text text = {0};
    char ratio[BW_NUMBER_SIZE], path[BW_WORDS_SIZE];
    bw_text_add(&text, "Wears no goggles where %s times the eye limit can arrive (%s). Needs goggles of ",
                bw_format(ratio, person->place.ratio, 2, BW_UP),
                bw_path_words(path, &person->place, job->the_case->us_units));
    add_densities(&text, person);
    bw_text_add(&text, ", or a place outside the zone.");
    assess_finding_text(job, BW_DANGER, subject, &text);
}

static const struct bw_distance_result *find_distance(const struct bw_result *result,
                                                      const struct bw_pair_result *pair) {
    for (size_t i = 0; i < result->distance_count; i++)
        if (result->distances[i].laser == pair->laser && result->distances[i].handpiece == pair->handpiece)
            return &result->distances[i];
    return NULL;
}

static void too_weak(const struct assess_job *job, const char *subject, const struct bw_pair_result *pair) {
    const struct bw_distance_result *distance = find_distance(job->result, pair);
    char handpiece[BW_TITLE_SIZE];
    struct bw_text text = {0};
    assess_handpiece_words(job, distance, handpiece);
    bw_text_add(&text, "Wears %s, too weak at this place for %s: ", job->the_case->eyewear[pair->eyewear].name,
                handpiece);
    assess_failures(&text, distance->direct->output, &pair->verdict);
    bw_text_add(&text, ".");
    assess_finding_text(job, BW_DANGER, subject, &text);
}

static const struct bw_pair_result *pair_at_exit(const struct bw_result *result, const struct bw_pair_result *place) {
    for (size_t i = 0; i < result->pair_count; i++) {
        const struct bw_pair_result *pair = &result->pairs[i];
        if (!pair->is_place && pair->eyewear == place->eyewear && pair->laser == place->laser &&
            pair->handpiece == place->handpiece)
            return pair;
    }
    return NULL;
}

/* Enough where they stand, but people move. */
static void only_here(const struct assess_job *job, const char *subject, const struct bw_pair_result *place) {
    const struct bw_pair_result *at_exit = pair_at_exit(job->result, place);
    if (!at_exit || at_exit->verdict.verdict == BW_SUFFICIENT)
        return;
    const struct bw_distance_result *distance = find_distance(job->result, place);
    char handpiece[BW_TITLE_SIZE];
    struct bw_text text = {0};
    assess_handpiece_words(job, distance, handpiece);
    bw_text_add(&text, "Wears %s: enough at this place, but not nearer, at the exit of %s (",
                job->the_case->eyewear[place->eyewear].name, handpiece);
    assess_failures(&text, distance->direct->output, &at_exit->verdict);
    bw_text_add(&text, "). Give stronger goggles to whoever may come nearer.");
    assess_finding_text(job, BW_CAUTION, subject, &text);
}

static void person(const struct assess_job *job, const struct bw_room_result *room, size_t index) {
    const struct bw_room *the_room = &job->the_case->rooms[room->room];
    const struct bw_person_result *result = &room->persons[index];
    char subject[BW_TITLE_SIZE];
    snprintf(subject, sizeof subject, "room %s, person %s", the_room->name, the_room->persons[index].name);
    if (result->needs_eyewear && !result->has_verdict)
        unprotected(job, subject, result);
    for (size_t i = 0; i < job->result->pair_count; i++) {
        const struct bw_pair_result *pair = &job->result->pairs[i];
        if (!pair->is_place || pair->room != room->room || pair->person != index)
            continue;
        if (pair->verdict.verdict == BW_SUFFICIENT)
            only_here(job, subject, pair);
        else
            too_weak(job, subject, pair);
    }
}

/* Somebody in the treatment area, whose eyes the case then speaks of. */
static bool has_patient(const struct bw_room *room) {
    static const double beside_m = 0.3; /* of an area given as a point or a line */
    for (size_t i = 0; i < room->area_count; i++) {
        const struct bw_polygon *area = &room->areas[i].outline;
        for (size_t j = 0; j < room->person_count; j++) {
            struct bw_segment line = {area->points[0], area->points[area->count - 1]};
            if (area->count < 3 ? bw_point_segment_distance(room->persons[j].at, line) <= beside_m
                                : bw_polygon_contains(area, room->persons[j].at))
                return true;
        }
    }
    return false;
}

static void patient(const struct assess_job *job, const struct bw_room_result *room) {
    const struct bw_room *the_room = &job->the_case->rooms[room->room];
    char subject[BW_TITLE_SIZE];
    if (has_patient(the_room))
        return;
    snprintf(subject, sizeof subject, "room %s", the_room->name);
    assess_finding(job, BW_NOTE, subject,
                   "The case has nobody in the treatment area. The eyes of whoever is treated need protecting too: a "
                   "patient wears goggles or eye shields, an animal's eyes are shielded as the staff's are.");
}

void assess_people_findings(const struct assess_job *job) {
    for (size_t i = 0; i < job->result->room_count; i++) {
        const struct bw_room_result *room = &job->result->rooms[i];
        for (size_t j = 0; j < job->the_case->rooms[room->room].person_count; j++)
            person(job, room, j);
        patient(job, room);
    }
}

static void opening(const struct assess_job *job, const struct bw_room_result *room, size_t index) {
    const struct bw_room *the_room = &job->the_case->rooms[room->room];
    const struct bw_opening_result *result = &room->solution.openings[index];
    char subject[BW_TITLE_SIZE], ratio[BW_NUMBER_SIZE], path[BW_WORDS_SIZE];
    if (!result->leaves && result->ratio_beyond <= 1.)
        return;
    snprintf(subject, sizeof subject, "room %s, opening %s", the_room->name, the_room->openings[index].name);
    assess_finding(job, BW_ACTION, subject, "%s times the eye limit can get out here (%s). Needs: %s.",
                   bw_format(ratio, result->ratio_beyond, 2, BW_UP),
                   bw_path_words(path, &result->worst, job->the_case->us_units), result->needs);
}

void assess_opening_findings(const struct assess_job *job) {
    for (size_t i = 0; i < job->result->room_count; i++) {
        const struct bw_room_result *room = &job->result->rooms[i];
        for (size_t j = 0; room->solved && j < job->the_case->rooms[room->room].opening_count; j++)
            opening(job, room, j);
    }
}
