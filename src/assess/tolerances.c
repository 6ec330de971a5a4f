/* The output at the worst corner of its tolerances, and the figures without any beside it. */
#include "internal.h"

#include <math.h>
#include <stdlib.h>

/* Worst for every distance and tissue: the highest power, the narrowest beam, the least divergence. What duration and
 * rate do is left to hazard, which takes their worst corner for each effect. */
static enum bw_status worst_emission(const struct assess_job *job, struct bw_distance_result *distance, size_t index,
                                     struct bw_working *working, struct bw_error *error) {
    const struct bw_tolerance *tolerance = &assess_laser(job, distance)->tolerances[index];
    const struct bw_handpiece *handpiece = assess_handpiece(job, distance);
    struct bw_emission *emission = &distance->output.emissions[index], given = *emission;
    const struct bw_beam *beam = &handpiece->output.beams[index];
    enum bw_status status = BW_OK;
    char value[BW_NUMBER_SIZE], tol[BW_NUMBER_SIZE];
    if (tolerance->power > 0.) {
        status = bw_emission_varied(&tolerance->given, 1. + tolerance->power, 1., 1., emission, error);
        for (size_t i = 0; i < BW_NAME_SIZE; i++)
            emission->name[i] = given.name[i];
        bw_working_step(working, "P", emission->average_power_w, "W", NULL, "P (1 + tol)", "%s * (1 + %s)",
                        bw_working_number(value, given.average_power_w), bw_working_number(tol, tolerance->power));
        bw_working_note(working, "%s, the highest power", given.name);
    }
    double diameter = handpiece->diameter_tolerance[index], divergence = handpiece->divergence_tolerance[index];
    distance->output.beams[index] = bw_beam_varied(&handpiece->output.beams[index], 1. - diameter, 1. - divergence);
    if (diameter > 0. || divergence > 0.) {
        bool lens = beam->waist_m > 0.;
        bw_working_step(working, "a", distance->output.beams[index].diameter_m, "m", NULL, "a (1 - tol)",
                        "%s * (1 - %s)", bw_working_number(value, beam->diameter_m),
                        bw_working_number(tol, lens ? divergence : diameter));
        bw_working_note(working, "%s, the narrowest beam%s", given.name,
                        lens ? "; with a lens the divergence there sets the width of the waist" : "");
        bw_working_step(working, "phi", distance->output.beams[index].divergence_rad, "rad", NULL, "phi (1 - tol)",
                        "%s * (1 - %s)", bw_working_number(value, beam->divergence_rad),
                        bw_working_number(tol, lens ? diameter : divergence));
        bw_working_note(working, "%s, the least divergence%s", given.name,
                        lens ? "; with a lens the diameter there sets it" : "");
    }
    distance->tolerances[index] = *tolerance;
    return status;
}

struct bw_output assess_widest_output(const struct assess_job *job, const struct bw_distance_result *distance) {
    const struct bw_handpiece *handpiece = assess_handpiece(job, distance);
    struct bw_output widest = distance->output;
    for (size_t i = 0; i < widest.count; i++)
        widest.beams[i] = bw_beam_varied(&handpiece->output.beams[i], 1. + handpiece->diameter_tolerance[i],
                                         1. + handpiece->divergence_tolerance[i]);
    return widest;
}

static void copy_nominal(const struct bw_distance_result *from, struct bw_nominal *nominal) {
    nominal->nohd = from->nohd;
    nominal->skin = from->skin;
    nominal->diffuse = from->diffuse;
    nominal->ratio_at_exit = from->ratio_at_exit;
    nominal->skin_ratio_at_exit = from->skin_ratio_at_exit;
    for (size_t i = 0; i < BW_EMISSIONS_MAX; i++)
        nominal->optical_density[i] = from->emissions[i].optical_density;
}

/* The same evaluation of the values as they were given. */
static enum bw_status find_nominal(const struct assess_job *job, struct bw_distance_result *distance,
                                   struct bw_error *error) {
    struct bw_distance_result *plain = malloc(sizeof *plain);
    if (!plain)
        return bw_error_set(error, BW_NO_MEMORY, "out of memory");
    *plain = *distance;
    plain->has_tolerance = false;
    plain->output = assess_handpiece(job, distance)->output;
    plain->direct = plain->diffuse_view = plain->skin_view = NULL;
    enum bw_status status = assess_figures(job, plain, NULL, error);
    copy_nominal(plain, &distance->nominal);
    free(plain->direct);
    free(plain->diffuse_view);
    free(plain->skin_view);
    free(plain);
    return status;
}

/* What is judged: the handpiece's output, with tolerances at their worst corner.
 * Given:    job; distance  laser, handpiece and exposure times
 * Returned: distance  output, tolerances, has_tolerance, nominal
 *           working   may be NULL
 * Returns:  BW_OK; BW_ARGUMENT, BW_OUT_OF_RANGE, BW_NO_MEMORY
 * Notes:    Of a Gaussian or a top hat the mean over an aperture falls with its width at every place, so the narrowest
 *           beam is the worst everywhere; a diffuse spot is tried at both ends. */
enum bw_status assess_find_output(const struct assess_job *job, struct bw_distance_result *distance,
                                  struct bw_working *working, struct bw_error *error) {
    const struct bw_handpiece *handpiece = assess_handpiece(job, distance);
    distance->output = handpiece->output;
    distance->has_tolerance = handpiece->has_tolerance;
    if (!handpiece->has_tolerance)
        return BW_OK;
    bw_working_heading(working, "Tolerances at their worst corner");
    for (size_t i = 0; i < distance->output.count; i++) {
        enum bw_status status = worst_emission(job, distance, i, working, error);
        if (status != BW_OK)
            return status;
    }
    distance->output.tolerances = distance->tolerances;
    return find_nominal(job, distance, error);
}
