/* The extended hazard distance: the eye behind each optical aid of the case. */
#include "internal.h"

#include <math.h>
#include <stdlib.h>

static enum bw_status one(const struct assess_job *job, struct bw_distance_result *distance, size_t index,
                          struct bw_working *working, struct bw_error *error) {
    struct bw_aid_result *result = &distance->aids[index];
    struct bw_output output = distance->output;
    struct bw_viewing_case viewing = {.target = BW_EYE, .exposure_s = distance->glance.exposure_s};
    struct bw_hazard *hazard = malloc(sizeof *hazard);
    if (!hazard)
        return bw_error_set(error, BW_NO_MEMORY, "out of memory");
    output.aid = &job->the_case->aids[index];
    result->aid = index;
    bw_working_heading(working, "Eye in the direct beam through %s", output.aid->name);
    enum bw_status status = bw_hazard_prepare(job->table, &output, &viewing, hazard, working, error);
    if (status == BW_OK)
        status = bw_hazard_reach(hazard, BW_EMISSIONS_MAX, &result->nohd, working, error);
    if (status == BW_OK) {
        bw_hazard_prepare_envelope(hazard);
        double ratio = bw_hazard_ratio_envelope(hazard, 0.);
        result->ratio_at_exit = ratio >= distance->ratio_at_exit ? ratio : distance->ratio_at_exit;
        result->naked_decides = !(result->nohd.distance_m >= distance->nohd.distance_m);
        if (result->naked_decides)
            result->nohd = distance->nohd;
    }
    free(hazard);
    return status;
}

/* Given:    job; distance  with its naked figures
 * Returned: distance  aids; working  may be NULL
 * Returns:  BW_OK; BW_OUT_OF_RANGE; BW_NO_MEMORY
 * Notes:    Who wears an aid may look past it, so no distance is less than that of the naked eye. */
enum bw_status assess_aids(const struct assess_job *job, struct bw_distance_result *distance,
                           struct bw_working *working, struct bw_error *error) {
    distance->aids = calloc(job->the_case->aid_count + 1, sizeof *distance->aids);
    if (!distance->aids)
        return bw_error_set(error, BW_NO_MEMORY, "out of memory");
    for (; distance->aid_count < job->the_case->aid_count; distance->aid_count++) {
        enum bw_status status = one(job, distance, distance->aid_count, working, error);
        if (status != BW_OK)
            return status;
    }
    return BW_OK;
}
