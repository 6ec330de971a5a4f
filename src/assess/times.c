/* How long until the limits are reached: at the exit, and at the distances that were asked for. */
#include "internal.h"

#include <math.h>
#include <stdlib.h>

static enum bw_status one_view(const struct assess_job *job, const struct bw_distance_result *distance,
                               const struct bw_place_times *place, enum bw_target target,
                               const struct bw_goggles *goggles, double *ratio, struct bw_permitted_time *time,
                               struct bw_error *error) {
    struct assess_view view = {
        .job = job, .target = target, .goggles = goggles, .at_exit = place->at_exit, .distance_m = place->at_m};
    enum bw_status status = assess_view_open(&view, &distance, 1, error);
    if (status == BW_OK && ratio)
        status = assess_view_customary(&view, ratio, error);
    if (status == BW_OK)
        status = assess_view_time(&view, time, error);
    assess_view_close(&view);
    return status;
}

static enum bw_status fill(const struct assess_job *job, const struct bw_distance_result *distance,
                           struct bw_place_times *place, struct bw_error *error) {
    place->behind = calloc(job->the_case->eyewear_count + 1, sizeof *place->behind);
    if (!place->behind)
        return bw_error_set(error, BW_NO_MEMORY, "out of memory");
    enum bw_status status = one_view(job, distance, place, BW_EYE, NULL, &place->eye_ratio, &place->eye, error);
    if (status == BW_OK)
        status = one_view(job, distance, place, BW_SKIN, NULL, &place->skin_ratio, &place->skin, error);
    for (size_t i = 0; i < job->the_case->eyewear_count && status == BW_OK; i++)
        status = one_view(job, distance, place, BW_EYE, &job->the_case->eyewear[i], NULL, &place->behind[i], error);
    return status;
}

/* The working of one time: the limits of that time, and the ratio. */
static void write_working(const struct assess_job *job, const struct bw_distance_result *distance,
                          const struct bw_place_times *place, enum bw_target target,
                          const struct bw_permitted_time *time, struct bw_working *working) {
    static const double shortest_s = 1e-13, longest_s = 3e4;
    struct bw_viewing_case viewing = {.target = target,
                                      .exposure_s = fmin(fmax(time->exposure_s, shortest_s), longest_s)};
    struct bw_hazard hazard;
    if (target == BW_SKIN)
        viewing.area_m2 = assess_skin_area_m2(job, distance, place->at_m);
    bw_working_heading(working, "Longest exposure of the %s at %g m", target == BW_EYE ? "eye" : "skin", place->at_m);
    if (bw_hazard_prepare(job->table, &distance->output, &viewing, &hazard, working, NULL) != BW_OK)
        return;
    bw_working_heading(working, "Ratio after %.10g s", viewing.exposure_s);
    bw_hazard_ratio_working(&hazard, place->at_m, working);
    bw_working_step(working, "te", time->exposure_s, "s", NULL, NULL, NULL);
    bw_working_note(working, time->unbounded
                                 ? "no limit is reached within 30 000 s: the steps above hold for these"
                                 : "longest exposure with a sum of 1 or below, searched; the steps above hold "
                                   "for it");
}

static void write_exit(const struct assess_job *job, const struct bw_place_times *place, struct bw_working *working) {
    static const char how[] =
        "longest exposure for which the sum of the ratios, each where it is worst, is 1 or below; "
        "searched between the times where a limit changes its law";
    bw_working_heading(working, "Longest exposure at the exit, or at the waist where that is worse");
    bw_working_step(working, "te", place->eye.exposure_s, "s", NULL, NULL, NULL);
    bw_working_note(working, "eye; %s", how);
    bw_working_step(working, "te", place->skin.exposure_s, "s", NULL, NULL, NULL);
    bw_working_note(working, "skin; %s", how);
    for (size_t i = 0; i < job->the_case->eyewear_count; i++) {
        bw_working_step(working, "te", place->behind[i].exposure_s, "s", NULL, NULL, NULL);
        bw_working_note(working, "eye behind %s, which passes tau = 10^-OD_given of each emission",
                        job->the_case->eyewear[i].name);
    }
}

/* Given:    job; distance  with its figures
 * Returned: distance  exit, places; working  may be NULL
 * Returns:  BW_OK; BW_OUT_OF_RANGE; BW_NO_MEMORY */
enum bw_status assess_times(const struct assess_job *job, struct bw_distance_result *distance,
                            struct bw_working *working, struct bw_error *error) {
    distance->places = calloc(job->options->at_count + 1, sizeof *distance->places);
    if (!distance->places)
        return bw_error_set(error, BW_NO_MEMORY, "out of memory");
    distance->exit.at_exit = true;
    enum bw_status status = fill(job, distance, &distance->exit, error);
    if (status == BW_OK && working)
        write_exit(job, &distance->exit, working);
    while (status == BW_OK && distance->place_count < job->options->at_count) {
        struct bw_place_times *place = &distance->places[distance->place_count];
        place->at_m = job->options->at_m[distance->place_count++];
        status = fill(job, distance, place, error);
        if (status == BW_OK && working) {
            bw_working_heading(working, "At %g m, for the exposure times of the handpiece", place->at_m);
            bw_hazard_ratio_working(distance->direct, place->at_m, working);
            bw_working_note(working, "eye");
            write_working(job, distance, place, BW_EYE, &place->eye, working);
            write_working(job, distance, place, BW_SKIN, &place->skin, working);
        }
    }
    return status;
}
