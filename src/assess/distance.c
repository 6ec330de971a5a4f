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

/* As narrow as each emission gets where a sheet of paper can come. */
static struct bw_spot smallest_spot(const struct bw_output *output) {
    struct bw_spot spot = {.reflectance = 1.};
    for (size_t i = 0; i < output->count; i++)
        spot.diameter_m[i] = bw_beam_narrowest_m(&output->beams[i], output->stand_off_m);
    return spot;
}

/* The limit of the emission's own worst term, as at the place where all is worst. */
static void worst_of_emission(const struct bw_hazard *hazard, const double terms[BW_TERMS_MAX], size_t emission,
                              double at_m, struct bw_train_limit *limit) {
    double worst = -1.;
    struct bw_seen seen;
    for (size_t t = 0; t < hazard->term_count; t++) {
        if (hazard->terms[t].emission != emission || terms[t] <= worst)
            continue;
        worst = terms[t];
        *limit = bw_hazard_seen(hazard, t, at_m, &seen, NULL) == BW_OK ? seen.limit : hazard->terms[t].limit;
    }
}

/* Ratio of one emission alone where it is worst. */
static double alone(const struct bw_hazard *hazard, const double worst[BW_TERMS_MAX], size_t emission) {
    double largest = 0.;
    for (size_t i = 0; i < hazard->term_count; i++) {
        double sum = 0.;
        if (hazard->terms[i].emission != emission)
            continue;
        for (size_t j = 0; j < hazard->term_count; j++)
            sum += hazard->terms[j].emission == emission && hazard->adds[i][j] ? worst[j] : 0.;
        largest = larger(largest, sum);
    }
    return largest;
}

struct worst_place {
    double at_m, total;
    size_t term;
};

static void try_place(const struct bw_hazard *hazard, double at_m, struct worst_place *worst) {
    struct bw_ratio ratio;
    bw_hazard_ratio_detail(hazard, at_m, &ratio);
    if (ratio.total <= worst->total)
        return;
    *worst = (struct worst_place){at_m, ratio.total, ratio.governing};
}

/* The term that governs where the hazard is worst: at the exit, or at the waist of one of the emissions; of a shaped
 * hazard, at the step of its ladder that is worst. */
void assess_find_governing(const struct bw_hazard *hazard, size_t *emission, struct bw_train_limit *limit,
                           double *at_m) {
    struct worst_place worst = {0., -1., 0};
    struct bw_seen seen;
    try_place(hazard, hazard->output->stand_off_m, &worst);
    for (size_t i = 0; i < hazard->output->count; i++)
        if (hazard->output->beams[i].waist_m > hazard->output->stand_off_m)
            try_place(hazard, hazard->output->beams[i].waist_m, &worst);
    for (size_t i = 0; hazard->shaped && i <= hazard->ladder.steps && hazard->ladder.steps > 0; i++)
        try_place(hazard, hazard->ladder.edge_m[i], &worst);
    *at_m = worst.at_m;
    *emission = hazard->terms[worst.term].emission;
    *limit = bw_hazard_seen(hazard, worst.term, worst.at_m, &seen, NULL) == BW_OK ? seen.limit
                                                                                  : hazard->terms[worst.term].limit;
}

/* What the eye sees at the end of the hazard, or at the exit where there is none. */
static void look_back(const struct bw_hazard *hazard, const struct bw_reach *reach, size_t only, double *subtense_rad,
                      size_t *emitters) {
    struct bw_seen seen;
    double at_m = fmax(reach->distance_m, hazard->output->stand_off_m), largest = -1.;
    *subtense_rad = 0.;
    *emitters = 1;
    for (size_t t = 0; t < hazard->term_count; t++) {
        bool counts = only == BW_EMISSIONS_MAX || hazard->terms[t].emission == only;
        if (!counts || bw_hazard_seen(hazard, t, at_m, &seen, NULL) != BW_OK || seen.ratio <= largest)
            continue;
        largest = seen.ratio;
        *subtense_rad = seen.subtense_rad;
        *emitters = seen.emitters;
    }
}

static enum bw_status emissions(struct bw_distance_result *distance, struct bw_working *working,
                                struct bw_error *error) {
    const struct bw_hazard *direct = distance->direct;
    struct bw_working *alone_working = direct->output->count > 1 ? working : NULL;
    double eye[BW_TERMS_MAX] = {0}, skin[BW_TERMS_MAX] = {0}, od[BW_EMISSIONS_MAX] = {0};
    bw_hazard_worst_terms(direct, eye);
    bw_hazard_worst_terms(distance->skin_view, skin);
    bw_working_heading(working, "Optical density at the exit, by the largest ratio of each emission");
    bw_hazard_density_working(direct, eye, od, working);
    for (size_t i = 0; i < direct->output->count; i++) {
        struct bw_emission_result *emission = &distance->emissions[i];
        worst_of_emission(direct, eye, i, distance->worst_m, &emission->limit);
        emission->ratio_at_exit = alone(direct, eye, i);
        worst_of_emission(distance->skin_view, skin, i, distance->worst_m, &emission->skin_limit);
        emission->optical_density = od[i];
        enum bw_status status = bw_hazard_reach(direct, i, &emission->nohd, alone_working, error);
        if (status != BW_OK)
            return status;
        look_back(direct, &emission->nohd, i, &emission->subtense_rad, &emission->emitters);
    }
    return BW_OK;
}

static enum bw_status eye_direct(const struct assess_job *job, struct bw_distance_result *distance,
                                 struct bw_working *working, struct bw_error *error) {
    bw_working_heading(working, "Eye in the direct beam, exposure %g s", distance->glance.exposure_s);
    assess_time_working(distance, &distance->glance, "an accidental glance", working);
    bw_working_note(working, "a direct view counts as a point source");
    struct bw_viewing_case viewing = {.target = BW_EYE, .exposure_s = distance->glance.exposure_s};
    enum bw_status status = assess_prepare(job, distance, viewing, &distance->direct, working, error);
    if (status == BW_OK)
        status = bw_hazard_reach(distance->direct, BW_EMISSIONS_MAX, &distance->nohd, working, error);
    if (status != BW_OK)
        return status;
    bw_hazard_prepare_envelope(distance->direct);
    distance->ratio_at_exit = bw_hazard_ratio_envelope(distance->direct, 0.);
    assess_find_governing(distance->direct, &distance->governing_emission, &distance->governing, &distance->worst_m);
    assess_exit_working(distance->direct, distance->worst_m, distance->ratio_at_exit, working);
    size_t emitters;
    look_back(distance->direct, &distance->nohd, BW_EMISSIONS_MAX, &distance->subtense_rad, &emitters);
    distance->nearest_m = distance->direct->output->stand_off_m;
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

static void write_spots(const struct bw_distance_result *distance, struct bw_working *working) {
    const struct bw_output *output = distance->diffuse_view->output;
    for (size_t i = 0; i < output->count; i++) {
        const struct bw_beam *beam = &output->beams[i];
        double spot_m = distance->diffuse_spot.diameter_m[i];
        double places_m[] = {fmax(beam->waist_m, output->stand_off_m), output->stand_off_m}, at_m = nan("");
        for (size_t k = 0; k < 2; k++)
            if (!(bw_beam_diameter_m(beam, places_m[k]) < spot_m) && !(bw_beam_diameter_m(beam, places_m[k]) > spot_m))
                at_m = places_m[k];
        if (isnan(at_m))
            bw_working_step(working, "d", spot_m, "m", NULL, NULL, NULL);
        else
            bw_beam_diameter_working(beam, at_m, working);
        bw_working_note(working, "%s, on a white matt surface: rho = 1%s", output->emissions[i].name,
                        isnan(at_m) ? "; the widest that the tolerances allow, which is worse here" : "");
    }
}

static enum bw_status eye_diffuse(const struct assess_job *job, struct bw_distance_result *distance,
                                  struct bw_working *working, struct bw_error *error) {
    bw_working_heading(working, "Eye on the diffuse reflection, reflectance 1, smallest spot, exposure %g s",
                       distance->diffuse_time.exposure_s);
    assess_time_working(distance, &distance->diffuse_time, "diffuse viewing", working);
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
    bw_working_heading(working, "The lit spot of each emission");
    write_spots(distance, working);
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
    return status == BW_OK ? emissions(distance, working, error) : status;
}

/* All that is asked of one handpiece.
 * Given:    job, laser, handpiece  indices into the case
 * Returned: distance
 * Returns:  BW_OK; BW_OUT_OF_RANGE with the emission named; BW_NO_MEMORY
 * Notes:    Direct viewing is taken as a point source, the strictest case, unless the case gives an apparent source or
 *           several emitters; the diffuse spot is the smallest that
 *           the beam has anywhere, on a surface that returns all. */
enum bw_status assess_distance(const struct assess_job *job, size_t laser, size_t handpiece,
                               struct bw_distance_result *distance) {
    struct bw_working *working = job->options->working ? &distance->working : NULL;
    struct bw_error cause = {0};
    distance->laser = laser;
    distance->handpiece = handpiece;
    enum bw_status status = find_times(job, distance, &cause);
    assess_inputs_working(job, distance, working);
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
