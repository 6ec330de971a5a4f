/* The whole job over a case: distances, goggles, rooms, findings, in this order. */
#include "internal.h"

#include <stdlib.h>

static enum bw_status no_memory(const struct assess_job *job) {
    return bw_error_set(job->error, BW_NO_MEMORY, "out of memory");
}

static enum bw_status distances(const struct assess_job *job) {
    size_t most = 1;
    for (size_t i = 0; i < job->the_case->laser_count; i++)
        most += job->the_case->lasers[i].handpiece_count;
    struct bw_result *result = job->result;
    result->distances = calloc(most, sizeof *result->distances);
    if (!result->distances)
        return no_memory(job);
    for (size_t i = 0; i < job->the_case->laser_count; i++) {
        for (size_t j = 0; j < job->the_case->lasers[i].handpiece_count; j++) {
            if (!assess_wants_handpiece(job, i, j))
                continue;
            enum bw_status status = assess_distance(job, i, j, &result->distances[result->distance_count++]);
            if (status != BW_OK)
                return status;
        }
    }
    if (result->distance_count == 0)
        return bw_error_set(job->error, BW_INPUT, "no handpiece of the case fits what is asked for%s",
                            job->options->room ? "; is it used in this room?" : "");
    return BW_OK;
}

/* Room for every pair: goggles with handpieces, and persons with handpieces. */
static enum bw_status make_pairs(const struct assess_job *job) {
    size_t most = job->the_case->eyewear_count + 1;
    for (size_t i = 0; i < job->the_case->room_count; i++)
        most += job->the_case->rooms[i].person_count;
    struct bw_result *result = job->result;
    result->pairs = calloc(most * result->distance_count, sizeof *result->pairs);
    if (!result->pairs)
        return no_memory(job);
    return job->options->parts & BW_PART_EYEWEAR ? assess_pairs(job) : BW_OK;
}

static enum bw_status rooms(const struct assess_job *job) {
    struct bw_result *result = job->result;
    result->rooms = calloc(job->the_case->room_count + 1, sizeof *result->rooms);
    if (!result->rooms)
        return no_memory(job);
    for (size_t i = 0; i < job->the_case->room_count; i++) {
        if (!assess_wants_room(job, i))
            continue;
        struct bw_room_result *room = &result->rooms[result->room_count++];
        enum bw_status status = assess_room(job, i, room);
        if (status != BW_OK)
            return status;
        if (room->source_count == 0) { /* nothing used in it: a finding, not a room */
            free(room->sources);
            *room = (struct bw_room_result){0};
            result->room_count--;
        }
    }
    return BW_OK;
}

static enum bw_status run(const struct assess_job *job) {
    enum bw_status status = assess_check_names(job);
    if (status == BW_OK)
        status = distances(job);
    if (status == BW_OK)
        status = make_pairs(job);
    if (status == BW_OK && (job->options->parts & (BW_PART_EYEWEAR | BW_PART_ROOM)))
        status = rooms(job);
    if (status == BW_OK && (job->options->parts & BW_PART_INCIDENT))
        status = assess_incidents(job);
    if (status == BW_OK)
        status = assess_findings(job);
    if (status == BW_OK && job->options->all_rules)
        status = assess_compare(job);
    return status;
}

/* The whole job over a case.
 * Given:    the_case, table  must outlive the result
 *           options          parts, names to narrow to, permitted time, working
 * Returned: result           NULL on error; free with bw_result_free
 * Returns:  as in the header
 * Notes:    Reads nothing but its arguments: the same case and table give the same result. */
enum bw_status bw_assess(const struct bw_case *the_case, const struct bw_table *table,
                         const struct bw_assess_options *options, struct bw_result **result, struct bw_error *error) {
    *result = calloc(1, sizeof **result);
    if (!*result)
        return bw_error_set(error, BW_NO_MEMORY, "out of memory");
    (*result)->the_case = the_case;
    (*result)->table = table;
    struct assess_job job = {the_case, table, options, *result, error};
    enum bw_status status = run(&job);
    if (status != BW_OK) {
        bw_result_free(*result);
        *result = NULL;
    }
    return status;
}

void bw_result_free(struct bw_result *result) {
    if (!result)
        return;
    for (size_t i = 0; i < result->distance_count; i++) {
        free(result->distances[i].direct);
        free(result->distances[i].diffuse_view);
        free(result->distances[i].skin_view);
        bw_working_free(&result->distances[i].working);
        for (size_t j = 0; j < result->distances[i].place_count; j++)
            free(result->distances[i].places[j].behind);
        free(result->distances[i].exit.behind);
        free(result->distances[i].places);
        free(result->distances[i].aids);
        free(result->distances[i].sensitivity);
    }
    for (size_t i = 0; i < result->incident_count; i++)
        bw_working_free(&result->incidents[i].working);
    for (size_t i = 0; i < result->room_count; i++) {
        free(result->rooms[i].sources);
        free(result->rooms[i].persons);
        bw_room_solution_free(&result->rooms[i].solution);
        bw_working_free(&result->rooms[i].working);
    }
    for (size_t i = 0; i < result->finding_count; i++)
        free(result->findings[i].text);
    bw_working_free(&result->eyewear_working);
    assess_comparison_free(result->comparison);
    free(result->distances);
    free(result->pairs);
    free(result->rooms);
    free(result->findings);
    free(result->incidents);
    free(result);
}
