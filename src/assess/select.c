/* Which lasers, handpieces and rooms the options ask for. */
#include "internal.h"

#include <stdlib.h>
#include <string.h>

bool assess_used_in(const struct bw_case *the_case, size_t room, size_t laser, size_t handpiece) {
    for (size_t i = 0; i < the_case->use_count; i++) {
        const struct bw_use *use = &the_case->uses[i];
        if (use->room == room && use->laser == laser && use->handpiece == handpiece)
            return true;
    }
    return false;
}

static bool fits(const char *wanted, const char *name) {
    return !wanted || strcmp(wanted, name) == 0;
}

bool assess_wants_room(const struct assess_job *job, size_t room) {
    return fits(job->options->room, job->the_case->rooms[room].name);
}

/* With a room named, only what is used there. */
bool assess_wants_handpiece(const struct assess_job *job, size_t laser, size_t handpiece) {
    const struct bw_laser *the_laser = &job->the_case->lasers[laser];
    if (!fits(job->options->laser, the_laser->name) ||
        !fits(job->options->handpiece, the_laser->handpieces[handpiece].name))
        return false;
    if (!job->options->room)
        return true;
    for (size_t room = 0; room < job->the_case->room_count; room++)
        if (assess_wants_room(job, room) && assess_used_in(job->the_case, room, laser, handpiece))
            return true;
    return false;
}

static enum bw_status check_name(const struct assess_job *job, const char *kind, const char *wanted,
                                 const char *const *names, size_t count) {
    if (!wanted)
        return BW_OK;
    for (size_t i = 0; i < count; i++)
        if (strcmp(wanted, names[i]) == 0)
            return BW_OK;
    const char *nearest = bw_nearest_name(wanted, names, count);
    if (nearest)
        return bw_error_set(job->error, BW_INPUT, "%s %s: the case has none of this name; did you mean %s?", kind,
                            wanted, nearest);
    return bw_error_set(job->error, BW_INPUT, "%s %s: the case has none of this name%s%s", kind, wanted,
                        count > 0 ? "; it has " : "", count > 0 ? names[0] : "");
}

/* Names of the handpieces of the laser that is asked for, or of all. Returns: their number. */
static size_t handpiece_names(const struct assess_job *job, const char **names) {
    size_t count = 0;
    for (size_t i = 0; i < job->the_case->laser_count; i++) {
        const struct bw_laser *laser = &job->the_case->lasers[i];
        for (size_t j = 0; j < laser->handpiece_count && fits(job->options->laser, laser->name); j++)
            names[count++] = laser->handpieces[j].name;
    }
    return count;
}

static enum bw_status check_in(const struct assess_job *job, const char **names) {
    const struct bw_case *the_case = job->the_case;
    for (size_t i = 0; i < the_case->laser_count; i++)
        names[i] = the_case->lasers[i].name;
    enum bw_status status = check_name(job, "laser", job->options->laser, names, the_case->laser_count);
    if (status != BW_OK)
        return status;
    for (size_t i = 0; i < the_case->room_count; i++)
        names[i] = the_case->rooms[i].name;
    status = check_name(job, "room", job->options->room, names, the_case->room_count);
    if (status != BW_OK)
        return status;
    size_t count = handpiece_names(job, names);
    return check_name(job, "handpiece", job->options->handpiece, names, count);
}

enum bw_status assess_check_names(const struct assess_job *job) {
    size_t most = job->the_case->laser_count + job->the_case->room_count + 1;
    for (size_t i = 0; i < job->the_case->laser_count; i++)
        most += job->the_case->lasers[i].handpiece_count;
    const char **names = calloc(most, sizeof *names);
    if (!names)
        return bw_error_set(job->error, BW_NO_MEMORY, "out of memory");
    enum bw_status status = check_in(job, names);
    free(names);
    return status;
}
