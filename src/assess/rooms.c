/* One room: the map, who stands in it, what each wears. */
#include "internal.h"

#include <stdlib.h>
#include <string.h>

static enum bw_status no_memory(const struct assess_job *job) {
    return bw_error_set(job->error, BW_NO_MEMORY, "out of memory");
}

/* The returned status counts: a failure is one even if it left no words. */
static enum bw_status blame_room(const struct assess_job *job, size_t room, enum bw_status status,
                                 const struct bw_error *cause) {
    return bw_error_set(job->error, status, "room %s: %s", job->the_case->rooms[room].name,
                        cause->text[0]           ? cause->text
                        : status == BW_NO_MEMORY ? "out of memory"
                                                 : "cannot be solved");
}

/* The handpieces used in the room, among those that were asked for. */
static enum bw_status find_sources(const struct assess_job *job, struct bw_room_result *result) {
    result->sources = calloc(job->result->distance_count + 1, sizeof *result->sources);
    if (!result->sources)
        return no_memory(job);
    for (size_t i = 0; i < job->result->distance_count; i++) {
        const struct bw_distance_result *distance = &job->result->distances[i];
        if (assess_used_in(job->the_case, result->room, distance->laser, distance->handpiece))
            result->sources[result->source_count++] = i;
    }
    return BW_OK;
}

/* Keeps the largest density of each wavelength, in ascending order of wavelength. */
static bool keep_density(struct bw_person_result *person, double wavelength_nm, double od) {
    size_t at = 0;
    while (at < person->od_count && person->od[at].wavelength_nm < wavelength_nm)
        at++;
    if (at < person->od_count && person->od[at].wavelength_nm <= wavelength_nm) {
        if (!(od <= person->od[at].od))
            person->od[at].od = od;
        return true;
    }
    if (person->od_count == sizeof person->od / sizeof person->od[0])
        return false;
    memmove(&person->od[at + 1], &person->od[at], (person->od_count - at) * sizeof person->od[0]);
    person->od[at] = (struct bw_wavelength_od){wavelength_nm, od};
    person->od_count++;
    return true;
}

static void judge(const struct assess_job *job, const struct bw_room_result *room, size_t index,
                  const struct bw_distance_result *distance, const double terms[BW_TERMS_MAX],
                  const double od[BW_EMISSIONS_MAX]) {
    const struct bw_person *person = &job->the_case->rooms[room->room].persons[index];
    struct bw_person_result *result = &room->persons[index];
    if (!person->has_eyewear)
        return;
    struct bw_pair_result *pair = &job->result->pairs[job->result->pair_count++];
    *pair = (struct bw_pair_result){.eyewear = person->eyewear,
                                    .laser = distance->laser,
                                    .handpiece = distance->handpiece,
                                    .is_place = true,
                                    .room = room->room,
                                    .person = index};
    bw_eyewear_judge_together(&job->the_case->eyewear[person->eyewear], distance->direct, terms, od, &pair->verdict);
    if (!result->has_verdict || pair->verdict.verdict > result->verdict)
        result->verdict = pair->verdict.verdict;
    result->has_verdict = true;
}

/* What one handpiece asks of the goggles at a person's place. */
static enum bw_status densities(const struct assess_job *job, const struct bw_room_result *room, size_t index,
                                const struct bw_distance_result *distance) {
    const struct bw_room *the_room = &job->the_case->rooms[room->room];
    struct bw_room_source source = {distance->direct, distance->diffuse_view};
    struct bw_error cause = {0};
    double terms[BW_TERMS_MAX] = {0}, od[BW_EMISSIONS_MAX] = {0};
    enum bw_status status = bw_room_terms_at(the_room, &source, the_room->persons[index].at, terms, &cause);
    if (status == BW_OK && the_room->persons[index].has_aid)
        status = assess_person_terms(job, room, index, distance, terms, &cause);
    if (status != BW_OK)
        return blame_room(job, room->room, status, &cause);
    bw_hazard_optical_density(distance->direct, terms, od);
    for (size_t i = 0; i < distance->direct->output->count; i++)
        if (!keep_density(&room->persons[index], distance->direct->output->emissions[i].wavelength_nm, od[i]))
            return bw_error_set(job->error, BW_ARGUMENT, "room %s: more than %zu wavelengths are used in it",
                                the_room->name, sizeof room->persons[0].od / sizeof room->persons[0].od[0]);
    judge(job, room, index, distance, terms, od);
    return BW_OK;
}

static enum bw_status person(const struct assess_job *job, const struct bw_room_result *room, size_t index,
                             const struct bw_room_source *sources) {
    const struct bw_room *the_room = &job->the_case->rooms[room->room];
    struct bw_person_result *result = &room->persons[index];
    struct bw_error cause = {0};
    enum bw_status status = BW_OK;
    if (room->solved)
        result->place = room->solution.persons[index];
    else
        status = bw_room_at(the_room, sources, room->source_count, the_room->persons[index].at, &result->place, &cause);
    if (status == BW_OK && the_room->persons[index].has_aid)
        status = assess_person_aid(job, room, index, &cause);
    if (status == BW_OK && (job->options->parts & BW_PART_ROOM))
        status = assess_person_times(job, room, index, &cause);
    if (status != BW_OK)
        return blame_room(job, room->room, status, &cause);
    result->needs_eyewear = !(result->place.ratio <= 1.);
    for (size_t i = 0; i < room->source_count; i++) {
        status = densities(job, room, index, &job->result->distances[room->sources[i]]);
        if (status != BW_OK)
            return status;
    }
    return BW_OK;
}

static enum bw_status fill(const struct assess_job *job, struct bw_room_result *result,
                           const struct bw_room_source *sources) {
    const struct bw_room *room = &job->the_case->rooms[result->room];
    struct bw_error cause = {0};
    if (job->options->parts & BW_PART_ROOM) {
        enum bw_status status = bw_room_solve(room, sources, result->source_count, &result->solution, &cause);
        if (status != BW_OK)
            return blame_room(job, result->room, status, &cause);
        result->solved = true;
    }
    for (size_t i = 0; i < room->person_count; i++) {
        enum bw_status status = person(job, result, i, sources);
        if (status != BW_OK)
            return status;
    }
    return BW_OK;
}

/* Solves a room and judges who is in it.
 * Given:    job, room  index into the case
 * Returned: result
 * Returns:  BW_OK; BW_ARGUMENT, BW_OUT_OF_RANGE with the room named; BW_NO_MEMORY
 * Notes:    Without a handpiece in use there is nothing to solve: source_count is then 0. */
enum bw_status assess_room(const struct assess_job *job, size_t room, struct bw_room_result *result) {
    result->room = room;
    enum bw_status status = find_sources(job, result);
    if (status != BW_OK || result->source_count == 0)
        return status;
    result->persons = calloc(job->the_case->rooms[room].person_count + 1, sizeof *result->persons);
    struct bw_room_source *sources = calloc(result->source_count, sizeof *sources);
    if (!result->persons || !sources) {
        free(sources);
        return no_memory(job);
    }
    for (size_t i = 0; i < result->source_count; i++) {
        const struct bw_distance_result *distance = &job->result->distances[result->sources[i]];
        sources[i] = (struct bw_room_source){distance->direct, distance->diffuse_view};
    }
    status = fill(job, result, sources);
    if (status == BW_OK && job->options->working)
        status = assess_room_working(job, result, sources);
    free(sources);
    return status;
}
