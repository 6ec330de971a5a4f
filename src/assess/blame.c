/* Which emission a failed preparation is about, so that the message names it. */
#include "internal.h"

static enum bw_status try_viewing(const struct assess_job *job, const struct bw_emission *emission,
                                  enum bw_target target, double exposure_s, struct bw_error *cause) {
    struct bw_train_limit_set limits;
    struct bw_viewing_case viewing = {.target = target, .exposure_s = exposure_s};
    return bw_hazard_train_limits(job->table, emission, &viewing, &limits, NULL, cause);
}

/* Does this emission alone fail too? Then `cause` holds its own message. */
static bool fails_alone(const struct assess_job *job, const struct bw_distance_result *distance,
                        const struct bw_emission *emission, struct bw_error *cause) {
    static const enum bw_viewing viewings[] = {BW_GLANCE, BW_DIFFUSE, BW_SKIN_TIME};
    const struct bw_handpiece *handpiece = assess_handpiece(job, distance);
    for (size_t i = 0; i < sizeof viewings / sizeof viewings[0]; i++) {
        struct bw_exposure_time time;
        if (bw_limits_exposure_time(job->table, viewings[i], &emission->wavelength_nm, 1, &time, cause) != BW_OK)
            return true;
        double exposure_s = handpiece->has_exposure ? handpiece->exposure_s : time.exposure_s;
        enum bw_target target = viewings[i] == BW_SKIN_TIME ? BW_SKIN : BW_EYE;
        if (try_viewing(job, emission, target, exposure_s, cause) != BW_OK)
            return true;
    }
    return false;
}

enum bw_status assess_blame(const struct assess_job *job, const struct bw_distance_result *distance,
                            enum bw_status status, const struct bw_error *cause) {
    const struct bw_laser *laser = assess_laser(job, distance);
    const struct bw_handpiece *handpiece = assess_handpiece(job, distance);
    for (size_t i = 0; status != BW_NO_MEMORY && i < handpiece->output.count; i++) {
        const struct bw_emission *emission = &handpiece->output.emissions[i];
        struct bw_error own = {0};
        if (fails_alone(job, distance, emission, &own))
            return bw_error_set(job->error, own.status, "laser %s, emission %s (%.6g nm): %s", laser->name,
                                emission->name, emission->wavelength_nm, own.text);
    }
    return bw_error_set(job->error, status, "laser %s, handpiece %s: %s", laser->name, handpiece->name,
                        cause->text[0] ? cause->text : "cannot be assessed");
}
