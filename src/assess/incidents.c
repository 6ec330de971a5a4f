/* Incidents: what somebody received, as a multiple of the limit for that time. */
#include "internal.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>

static bool wanted(const struct assess_job *job, const struct bw_incident *incident,
                   const struct bw_distance_result *distance) {
    if (incident->has_handpiece && !(distance->laser == incident->laser && distance->handpiece == incident->handpiece))
        return false;
    return !incident->in_room || assess_used_in(job->the_case, incident->room, distance->laser, distance->handpiece);
}

/* One way of seeing or feeling it. */
struct reception {
    const struct bw_incident *incident;
    enum bw_target target;
    bool goggles, aid;
};

static struct assess_view view_of(const struct assess_job *job, const struct reception *reception) {
    const struct bw_incident *incident = reception->incident;
    struct assess_view view = {
        .job = job, .target = reception->target, .at = incident->at, .distance_m = incident->distance_m};
    if (incident->in_room)
        view.room = &job->the_case->rooms[incident->room];
    if (reception->goggles && incident->has_eyewear)
        view.goggles = &job->the_case->eyewear[incident->eyewear];
    if (reception->aid && incident->has_aid)
        view.aid = &job->the_case->aids[incident->aid];
    return view;
}

static enum bw_status open_all(struct assess_view *view, const struct bw_incident *incident, struct bw_error *error) {
    const struct bw_result *result = view->job->result;
    const struct bw_distance_result **distances = calloc(result->distance_count + 1, sizeof *distances);
    size_t count = 0;
    if (!distances)
        return bw_error_set(error, BW_NO_MEMORY, "out of memory");
    for (size_t i = 0; i < result->distance_count; i++)
        if (wanted(view->job, incident, &result->distances[i]))
            distances[count++] = &result->distances[i];
    enum bw_status status = assess_view_open(view, distances, count, error);
    free(distances);
    return status;
}

/* ---- working ---------------------------------------------------------------------------------- */

static void write_goggles(const struct assess_view *view, const struct assess_light *light,
                          struct bw_working *working) {
    for (size_t i = 0; view->goggles && i < light->output.count; i++) {
        const struct bw_emission *emission = &light->output.emissions[i];
        const struct bw_rating *rating = bw_eyewear_rating(view->goggles, emission->wavelength_nm);
        char density[BW_NUMBER_SIZE];
        if (rating)
            bw_working_step(working, "tau", light->passes[i], "", NULL, "10^-OD", "10^-%s",
                            bw_working_number(density, rating->optical_density));
        else
            bw_working_step(working, "tau", light->passes[i], "", NULL, "1", "1");
        bw_working_note(working, "%s at %.6g nm%s", view->goggles->name, emission->wavelength_nm,
                        rating ? "" : ": no rating, so all of it passes");
    }
}

/* The limits for this exposure, and the ratio on the way that was worst. */
static void write_path(const struct assess_view *view, const struct assess_light *light, double exposure_s,
                       struct bw_working *working) {
    struct bw_hazard *hazards = calloc(2, sizeof *hazards);
    struct bw_viewing_case direct = light->direct.viewing, diffuse = light->diffuse.viewing;
    struct bw_room_source source = {&hazards[0], &hazards[1]};
    if (!hazards) {
        working->failed = true;
        return;
    }
    direct.exposure_s = exposure_s;
    diffuse.exposure_s = exposure_s;
    bool is_diffuse = view->room && view->place.path == BW_PATH_DIFFUSE;
    enum bw_status status =
        bw_hazard_prepare(view->job->table, &light->output, &direct, &hazards[0], is_diffuse ? NULL : working, NULL);
    bw_working_heading(working, "Ratio at the place");
    if (status == BW_OK && !view->room)
        bw_hazard_ratio_working(&hazards[0], view->place.length_m, working);
    else if (status == BW_OK &&
             bw_hazard_prepare(view->job->table, &light->output, &diffuse, &hazards[1], NULL, NULL) == BW_OK)
        bw_room_place_working(&source, &view->place, BW_TERMS_MAX, working, NULL);
    free(hazards);
}

static void write_working(const struct assess_view *view, const struct reception *reception,
                          struct bw_working *working) {
    const struct assess_light *light = &view->lights[view->room ? view->place.source : 0];
    const struct bw_distance_result *distance = light->distance;
    bw_working_heading(working, "%s%s%s, exposure %g s, from %s %s", reception->target == BW_EYE ? "Eye" : "Skin",
                       view->goggles ? " behind "
                       : view->aid   ? " through "
                                     : "",
                       view->goggles ? view->goggles->name
                       : view->aid   ? view->aid->name
                                     : "",
                       reception->incident->exposure_s, assess_laser(view->job, distance)->name,
                       assess_handpiece(view->job, distance)->name);
    bw_working_step(working, "te", reception->incident->exposure_s, "s", NULL, NULL, NULL);
    bw_working_note(working, "exposure time of the incident");
    write_goggles(view, light, working);
    write_path(view, light, reception->incident->exposure_s, working);
}

/* ---- one incident ----------------------------------------------------------------------------- */

struct received {
    double ratio;
    struct bw_place place;
    size_t source; /* index into distances */
    struct bw_permitted_time time;
};

static enum bw_status receive(const struct assess_job *job, const struct reception *reception,
                              struct received *received, struct bw_working *working, struct bw_error *error) {
    struct assess_view view = view_of(job, reception);
    enum bw_status status = open_all(&view, reception->incident, error);
    if (status == BW_OK)
        status = assess_view_time(&view, &received->time, error);
    if (status == BW_OK)
        status = assess_view_ratio(reception->incident->exposure_s, &view, &received->ratio, error);
    if (status == BW_OK) {
        received->place = view.place;
        received->source = (size_t)(view.lights[view.room ? view.place.source : 0].distance - job->result->distances);
        if (working)
            write_working(&view, reception, working);
    }
    assess_view_close(&view);
    return status;
}

/* The eye through the aid and beside it: the worse one counts. Only its working is shown. */
static enum bw_status receive_eye(const struct assess_job *job, const struct bw_incident *incident, bool goggles,
                                  struct received *received, struct bw_working *working, struct bw_error *error) {
    struct reception past = {incident, BW_EYE, goggles, false}, through = {incident, BW_EYE, goggles, true};
    struct received aided;
    enum bw_status status = receive(job, &past, received, NULL, error);
    if (status == BW_OK && incident->has_aid)
        status = receive(job, &through, &aided, NULL, error);
    bool worse = status == BW_OK && incident->has_aid && !(aided.ratio <= received->ratio);
    if (worse)
        *received = aided;
    if (status == BW_OK && working)
        status = receive(job, worse ? &through : &past, received, working, error);
    return status;
}

static enum bw_status fill(const struct assess_job *job, const struct bw_incident *incident,
                           struct bw_incident_result *result, struct bw_error *error) {
    struct bw_working *working = job->options->working ? &result->working : NULL;
    struct received eye, naked, skin;
    struct reception touch = {incident, BW_SKIN, false, false};
    enum bw_status status = receive_eye(job, incident, true, &eye, working, error);
    if (status == BW_OK)
        status = receive_eye(job, incident, false, &naked, NULL, error);
    if (status == BW_OK)
        status = receive(job, &touch, &skin, working, error);
    if (status != BW_OK)
        return status;
    result->eye_ratio = eye.ratio;
    result->eye_place = eye.place;
    result->eye_source = eye.source;
    result->eye = eye.time;
    result->naked_eye_ratio = naked.ratio;
    result->skin_ratio = skin.ratio;
    result->skin_place = skin.place;
    result->skin_source = skin.source;
    result->skin = skin.time;
    return result->working.failed ? bw_error_set(error, BW_NO_MEMORY, "out of memory") : BW_OK;
}

/* With options that narrow the job, incidents with what is left out are left out too. */
static bool is_asked_for(const struct assess_job *job, const struct bw_incident *incident) {
    if (job->options->room && !(incident->in_room && assess_wants_room(job, incident->room)))
        return false;
    for (size_t i = 0; i < job->result->distance_count; i++)
        if (wanted(job, incident, &job->result->distances[i]))
            return true;
    return false;
}

/* Given:    job  with its distances
 * Returned: job->result->incidents
 * Returns:  BW_OK; BW_OUT_OF_RANGE with the incident named; BW_NO_MEMORY */
enum bw_status assess_incidents(const struct assess_job *job) {
    struct bw_result *result = job->result;
    result->incidents = calloc(job->the_case->incident_count + 1, sizeof *result->incidents);
    if (!result->incidents)
        return bw_error_set(job->error, BW_NO_MEMORY, "out of memory");
    for (size_t i = 0; i < job->the_case->incident_count; i++) {
        const struct bw_incident *incident = &job->the_case->incidents[i];
        struct bw_error cause = {0};
        if (!is_asked_for(job, incident))
            continue;
        struct bw_incident_result *each = &result->incidents[result->incident_count++];
        each->incident = i;
        enum bw_status status = fill(job, incident, each, &cause);
        if (status != BW_OK)
            return bw_error_set(job->error, status, "incident %s: %s", incident->name, cause.text);
    }
    return BW_OK;
}
