/* People in a room: behind an optical aid, and how long until the limit is reached where they stand. */
#include "internal.h"

#include <math.h>
#include <stdlib.h>

static const struct bw_person *person_of(const struct assess_job *job, const struct bw_room_result *room,
                                         size_t index) {
    return &job->the_case->rooms[room->room].persons[index];
}

static struct assess_view view_of(const struct assess_job *job, const struct bw_room_result *room, size_t index,
                                  enum bw_target target) {
    return (struct assess_view){
        .job = job, .target = target, .room = &job->the_case->rooms[room->room], .at = person_of(job, room, index)->at};
}

static enum bw_status open_all(struct assess_view *view, const struct bw_room_result *room, struct bw_error *error) {
    const struct bw_distance_result **distances = calloc(room->source_count + 1, sizeof *distances);
    if (!distances)
        return bw_error_set(error, BW_NO_MEMORY, "out of memory");
    for (size_t i = 0; i < room->source_count; i++)
        distances[i] = &view->job->result->distances[room->sources[i]];
    enum bw_status status = assess_view_open(view, distances, room->source_count, error);
    free(distances);
    return status;
}

/* What the person's aid makes worse. The naked place stays where it is the worse: one can look past an aid. */
enum bw_status assess_person_aid(const struct assess_job *job, const struct bw_room_result *room, size_t index,
                                 struct bw_error *error) {
    struct bw_person_result *result = &room->persons[index];
    struct assess_view view = view_of(job, room, index, BW_EYE);
    double ratio = nan("");
    view.aid = &job->the_case->aids[person_of(job, room, index)->aid];
    enum bw_status status = open_all(&view, room, error);
    if (status == BW_OK)
        status = assess_view_customary(&view, &ratio, error);
    if (status == BW_OK && !(ratio <= result->place.ratio)) {
        result->place = view.place;
        result->through_aid = true;
    }
    assess_view_close(&view);
    return status;
}

/* Raises the terms of one handpiece at the person's place to what comes through the aid. */
enum bw_status assess_person_terms(const struct assess_job *job, const struct bw_room_result *room, size_t index,
                                   const struct bw_distance_result *distance, double term_ratios[BW_TERMS_MAX],
                                   struct bw_error *error) {
    struct assess_view view = view_of(job, room, index, BW_EYE);
    double ratio, through[BW_TERMS_MAX] = {0};
    view.aid = &job->the_case->aids[person_of(job, room, index)->aid];
    enum bw_status status = assess_view_open(&view, &distance, 1, error);
    if (status == BW_OK)
        status = assess_view_customary(&view, &ratio, error);
    if (status == BW_OK)
        status = bw_room_terms_at(view.room, &view.sources[0], view.at, through, error);
    size_t terms = distance->direct->term_count;
    if (status == BW_OK && view.lights[0].direct.term_count != terms)
        status = bw_error_set(error, BW_OUT_OF_RANGE, "the effects through %s differ from those of the naked eye",
                              view.aid->name);
    for (size_t i = 0; status == BW_OK && i < terms; i++)
        if (!(through[i] <= term_ratios[i]))
            term_ratios[i] = through[i];
    assess_view_close(&view);
    return status;
}

static enum bw_status time_of(const struct assess_job *job, const struct bw_room_result *room, size_t index,
                              enum bw_target target, const struct bw_goggles *goggles, const struct bw_aid *aid,
                              struct bw_permitted_time *time, struct bw_error *error) {
    struct assess_view view = view_of(job, room, index, target);
    view.goggles = goggles;
    view.aid = aid;
    enum bw_status status = open_all(&view, room, error);
    if (status == BW_OK && target == BW_SKIN)
        status = assess_view_customary(&view, &room->persons[index].skin_ratio, error);
    if (status == BW_OK)
        status = assess_view_time(&view, time, error);
    assess_view_close(&view);
    return status;
}

/* The eye: naked and, with an aid, through it; the shorter time holds. */
static enum bw_status eye_time(const struct assess_job *job, const struct bw_room_result *room, size_t index,
                               const struct bw_goggles *goggles, struct bw_permitted_time *time,
                               struct bw_error *error) {
    const struct bw_person *person = person_of(job, room, index);
    struct bw_permitted_time aided;
    enum bw_status status = time_of(job, room, index, BW_EYE, goggles, NULL, time, error);
    if (status != BW_OK || !person->has_aid)
        return status;
    status = time_of(job, room, index, BW_EYE, goggles, &job->the_case->aids[person->aid], &aided, error);
    if (status == BW_OK)
        *time = assess_shorter(*time, aided);
    return status;
}

/* Given:    job, room, index  of the person
 * Returned: room->persons[index]  eye, worn (the same without goggles), skin
 * Returns:  as bw_room_at */
enum bw_status assess_person_times(const struct assess_job *job, const struct bw_room_result *room, size_t index,
                                   struct bw_error *error) {
    const struct bw_person *person = person_of(job, room, index);
    struct bw_person_result *result = &room->persons[index];
    enum bw_status status = eye_time(job, room, index, NULL, &result->eye, error);
    result->worn = result->eye;
    if (status == BW_OK && person->has_eyewear)
        status = eye_time(job, room, index, &job->the_case->eyewear[person->eyewear], &result->worn, error);
    if (status == BW_OK)
        status = time_of(job, room, index, BW_SKIN, NULL, NULL, &result->skin, error);
    result->has_times = status == BW_OK;
    return status;
}
