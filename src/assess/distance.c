/* One handpiece: how far each hazard reaches, and what each emission needs. */
#include "internal.h"

#include <math.h>
#include <stdlib.h>

const struct bw_laser *assess_laser(const struct assess_job *job, const struct bw_distance_result *distance) {
    return &job->the_case->lasers[distance->laser];
}

const struct bw_handpiece *assess_handpiece(const struct assess_job *job, const struct bw_distance_result *distance) {
    return &assess_laser(job, distance)->handpieces[distance->handpiece];
}

static double larger(double a, double b) {
    return isnan(a) || isnan(b) ? nan("") : fmax(a, b);
}

static enum bw_status find_time(const struct assess_job *job, const struct bw_handpiece *handpiece,
                                enum bw_viewing viewing, struct bw_exposure_time *time, struct bw_error *error) {
    double wavelengths_nm[BW_EMISSIONS_MAX];
    for (size_t i = 0; i < handpiece->output.count; i++)
        wavelengths_nm[i] = handpiece->output.emissions[i].wavelength_nm;
    return bw_limits_exposure_time(job->table, viewing, wavelengths_nm, handpiece->output.count, time, error);
}

/* The customary times, or the one of the case file for all three. */
static enum bw_status find_times(const struct assess_job *job, struct bw_distance_result *distance,
                                 struct bw_error *error) {
    const struct bw_handpiece *handpiece = assess_handpiece(job, distance);
    enum bw_status status = find_time(job, handpiece, BW_GLANCE, &distance->customary, error);
    distance->glance = distance->customary;
    if (status == BW_OK)
        status = find_time(job, handpiece, BW_SKIN_TIME, &distance->skin_time, error);
    if (status == BW_OK)
        status = find_time(job, handpiece, BW_DIFFUSE, &distance->diffuse_time, error);
    distance->exposure_given = handpiece->has_exposure;
    if (handpiece->has_exposure) {
        struct bw_exposure_time given = {.exposure_s = handpiece->exposure_s};
        /* A visible beam given no longer than the customary blink rests on that blink just as well. */
        given.aversion_response =
            distance->customary.aversion_response && given.exposure_s <= distance->customary.exposure_s;
        distance->glance = distance->skin_time = distance->diffuse_time = given;
    }
    return status;
}

enum bw_status assess_prepare(const struct assess_job *job, const struct bw_distance_result *distance,
                              struct bw_viewing_case viewing, struct bw_hazard **hazard, struct bw_working *working,
                              struct bw_error *error) {
    *hazard = calloc(1, sizeof **hazard);
    if (!*hazard)
        return bw_error_set(error, BW_NO_MEMORY, "out of memory");
    return bw_hazard_prepare(job->table, &distance->output, &viewing, *hazard, working, error);
}

/* Where each emission is narrowest: a place of the beam as near as an eye or a sheet of paper can come. */
static double narrowest_m(const struct bw_beam *beam) {
    return fmax(beam->waist_m, 0.);
}

static struct bw_spot smallest_spot(const struct bw_output *output) {
    struct bw_spot spot = {.reflectance = 1.};
    for (size_t i = 0; i < output->count; i++)
        spot.diameter_m[i] = bw_beam_diameter_m(&output->beams[i], narrowest_m(&output->beams[i]));
    return spot;
}

/* Each term at its worst, at the exit or beyond. */
void assess_worst_terms(const struct bw_hazard *hazard, double worst[BW_TERMS_MAX]) {
    double here[BW_TERMS_MAX];
    bw_hazard_term_ratios(hazard, 0., worst);
    for (size_t i = 0; i < hazard->output->count; i++) {
        double waist_m = narrowest_m(&hazard->output->beams[i]);
        if (waist_m <= 0.)
            continue;
        bw_hazard_term_ratios(hazard, waist_m, here);
        for (size_t t = 0; t < hazard->term_count; t++)
            worst[t] = larger(worst[t], here[t]);
    }
}

/* The limit of the emission's own worst term. */
static void worst_of_emission(const struct bw_hazard *hazard, const double terms[BW_TERMS_MAX], size_t emission,
                              struct bw_train_limit *limit) {
    double worst = -1.;
    for (size_t t = 0; t < hazard->term_count; t++) {
        if (hazard->terms[t].emission != emission || terms[t] <= worst)
            continue;
        worst = terms[t];
        *limit = hazard->terms[t].limit;
    }
}

/* Ratio of one emission alone where it is worst: it has but one waist, so there or, without one, at the exit. */
static double alone(const struct bw_hazard *hazard, size_t emission) {
    struct bw_ratio ratio;
    bw_hazard_ratio_detail(hazard, narrowest_m(&hazard->output->beams[emission]), &ratio);
    return ratio.emission[emission];
}

/* The term that governs where the hazard is worst: at the exit, or at the waist of one of the emissions. */
void assess_find_governing(const struct bw_hazard *hazard, size_t *emission, struct bw_train_limit *limit,
                           double *at_m) {
    struct bw_ratio ratio;
    bw_hazard_ratio_detail(hazard, 0., &ratio);
    *at_m = 0.;
    size_t governing = ratio.governing;
    double worst = ratio.total;
    for (size_t i = 0; i < hazard->output->count; i++) {
        double waist_m = narrowest_m(&hazard->output->beams[i]);
        bw_hazard_ratio_detail(hazard, waist_m, &ratio);
        if (ratio.total <= worst)
            continue;
        worst = ratio.total;
        governing = ratio.governing;
        *at_m = waist_m;
    }
    *emission = hazard->terms[governing].emission;
    *limit = hazard->terms[governing].limit;
}

static enum bw_status emissions(struct bw_distance_result *distance, struct bw_error *error) {
    const struct bw_hazard *direct = distance->direct;
    double eye[BW_TERMS_MAX] = {0}, skin[BW_TERMS_MAX] = {0}, od[BW_EMISSIONS_MAX] = {0};
    assess_worst_terms(direct, eye);
    assess_worst_terms(distance->skin_view, skin);
    bw_hazard_optical_density(direct, eye, od);
    for (size_t i = 0; i < direct->output->count; i++) {
        struct bw_emission_result *emission = &distance->emissions[i];
        worst_of_emission(direct, eye, i, &emission->limit);
        emission->ratio_at_exit = alone(direct, i);
        worst_of_emission(distance->skin_view, skin, i, &emission->skin_limit);
        emission->optical_density = od[i];
        enum bw_status status = bw_hazard_reach(direct, i, &emission->nohd, NULL, error);
        if (status != BW_OK)
            return status;
    }
    return BW_OK;
}

static enum bw_status eye_direct(const struct assess_job *job, struct bw_distance_result *distance,
                                 struct bw_working *working, struct bw_error *error) {
    bw_working_heading(working, "Eye in the direct beam, exposure %g s", distance->glance.exposure_s);
    struct bw_viewing_case viewing = {.target = BW_EYE, .exposure_s = distance->glance.exposure_s};
    enum bw_status status = assess_prepare(job, distance, viewing, &distance->direct, working, error);
    if (status == BW_OK)
        status = bw_hazard_reach(distance->direct, BW_EMISSIONS_MAX, &distance->nohd, working, error);
    if (status != BW_OK)
        return status;
    distance->ratio_at_exit = bw_hazard_ratio_envelope(distance->direct, 0.);
    assess_find_governing(distance->direct, &distance->governing_emission, &distance->governing, &distance->worst_m);
    return BW_OK;
}

/* A wider spot looks wider, and is mostly the safer for it; but the correction of a train may be stricter for it. */
static enum bw_status try_widest_spot(const struct assess_job *job, struct bw_distance_result *distance,
                                      struct bw_error *error) {
    struct bw_output widest = assess_widest_output(job, distance);
    struct bw_spot spot = smallest_spot(&widest);
    struct bw_reach reach;
    enum bw_status status = bw_hazard_diffuse_reach(distance->diffuse_view, &spot, &reach, NULL, error);
    if (status != BW_OK || reach.distance_m <= distance->diffuse.distance_m)
        return status;
    distance->diffuse_spot = spot;
    distance->diffuse = reach;
    return BW_OK;
}

static enum bw_status eye_diffuse(const struct assess_job *job, struct bw_distance_result *distance,
                                  struct bw_working *working, struct bw_error *error) {
    bw_working_heading(working, "Eye on the diffuse reflection, reflectance 1, smallest spot, exposure %g s",
                       distance->diffuse_time.exposure_s);
    struct bw_viewing_case viewing = {.target = BW_EYE, .exposure_s = distance->diffuse_time.exposure_s};
    enum bw_status status = assess_prepare(job, distance, viewing, &distance->diffuse_view, working, error);
    if (status != BW_OK)
        return status;
    distance->diffuse_spot = smallest_spot(distance->diffuse_view->output);
    status = bw_hazard_diffuse_reach(distance->diffuse_view, &distance->diffuse_spot, &distance->diffuse, NULL, error);
    if (status == BW_OK && distance->has_tolerance)
        status = try_widest_spot(job, distance, error);
    if (status != BW_OK || working == NULL)
        return status;
    return bw_hazard_diffuse_reach(distance->diffuse_view, &distance->diffuse_spot, &distance->diffuse, working, error);
}

/* The three distances, and what each emission needs. */
enum bw_status assess_figures(const struct assess_job *job, struct bw_distance_result *distance,
                              struct bw_working *working, struct bw_error *error) {
    enum bw_status status = eye_direct(job, distance, working, error);
    if (status == BW_OK)
        status = assess_skin(job, distance, working, error);
    if (status == BW_OK)
        status = eye_diffuse(job, distance, working, error);
    return status == BW_OK ? emissions(distance, error) : status;
}

/* All that is asked of one handpiece.
 * Given:    job, laser, handpiece  indices into the case
 * Returned: distance
 * Returns:  BW_OK; BW_OUT_OF_RANGE with the emission named; BW_NO_MEMORY
 * Notes:    Direct viewing is taken as a point source, the strictest case; the diffuse spot is the smallest that
 *           the beam has anywhere, on a surface that returns all. */
enum bw_status assess_distance(const struct assess_job *job, size_t laser, size_t handpiece,
                               struct bw_distance_result *distance) {
    struct bw_working *working = job->options->working ? &distance->working : NULL;
    struct bw_error cause = {0};
    distance->laser = laser;
    distance->handpiece = handpiece;
    enum bw_status status = find_times(job, distance, &cause);
    if (status == BW_OK)
        status = assess_find_output(job, distance, working, &cause);
    if (status == BW_OK)
        status = assess_figures(job, distance, working, &cause);
    if (status == BW_OK)
        status = assess_aids(job, distance, working, &cause);
    if (status == BW_OK)
        status = assess_times(job, distance, working, &cause);
    if (status == BW_OK)
        status = assess_sensitivity(job, distance, &cause);
    if (status == BW_OK && distance->working.failed)
        status = bw_error_set(&cause, BW_NO_MEMORY, "out of memory");
    return status == BW_OK ? BW_OK : assess_blame(job, distance, status, &cause);
}
