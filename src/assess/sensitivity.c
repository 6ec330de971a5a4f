/* Which input moves the answers most. */
#include "internal.h"

#include <math.h>
#include <stdlib.h>

static const double step = 0.005; /* 0.5 % to each side */

enum quantity { POWER, DURATION, RATE, DIAMETER, DIVERGENCE, EXPOSURE };
static const char *const names[] = {"power",         "pulse duration", "repetition rate",
                                    "beam diameter", "divergence",     "exposure time"};

/* One input: of one emission, or of all that share it. */
struct input {
    enum quantity quantity;
    size_t emission; /* BW_EMISSIONS_MAX: of all that share it */
};

struct answers {
    double nohd_m, density; /* NAN if there is none */
};

static bool is_meant(const struct bw_handpiece *handpiece, const struct input *input, size_t emission) {
    return input->emission == emission ||
           (input->emission == BW_EMISSIONS_MAX && !handpiece->emission_beam_given[emission]);
}

static enum bw_status vary(const struct assess_job *job, const struct bw_distance_result *distance,
                           const struct input *input, double factor, struct bw_output *output, struct bw_error *error) {
    const struct bw_handpiece *handpiece = assess_handpiece(job, distance);
    const struct bw_laser *laser = assess_laser(job, distance);
    enum bw_status status = BW_OK;
    *output = handpiece->output;
    for (size_t i = 0; i < output->count && status == BW_OK; i++) {
        if (!is_meant(handpiece, input, i))
            continue;
        if (input->quantity == DIAMETER || input->quantity == DIVERGENCE)
            output->beams[i] = bw_beam_varied(&handpiece->output.beams[i], input->quantity == DIAMETER ? factor : 1.,
                                              input->quantity == DIVERGENCE ? factor : 1.);
        else if (input->quantity != EXPOSURE)
            status = bw_emission_varied(&laser->tolerances[i].given, input->quantity == POWER ? factor : 1.,
                                        input->quantity == DURATION ? factor : 1.,
                                        input->quantity == RATE ? factor : 1., &output->emissions[i], error);
    }
    return status;
}

static enum bw_status answer(const struct assess_job *job, const struct bw_distance_result *distance,
                             const struct input *input, double factor, struct answers *answers,
                             struct bw_error *error) {
    struct bw_output output;
    struct bw_hazard hazard;
    struct bw_reach reach;
    struct bw_viewing_case viewing = {.target = BW_EYE, .exposure_s = distance->glance.exposure_s};
    if (input->quantity == EXPOSURE)
        viewing.exposure_s *= factor;
    enum bw_status status = vary(job, distance, input, factor, &output, error);
    if (status == BW_OK)
        status = bw_hazard_prepare(job->table, &output, &viewing, &hazard, NULL, error);
    if (status == BW_OK)
        status = bw_hazard_reach(&hazard, BW_EMISSIONS_MAX, &reach, NULL, error);
    if (status != BW_OK)
        return status;
    double terms[BW_TERMS_MAX] = {0}, od[BW_EMISSIONS_MAX] = {0};
    bw_hazard_worst_terms(&hazard, terms);
    bw_hazard_optical_density(&hazard, terms, od);
    answers->nohd_m = reach.unbounded || !(reach.distance_m > 0.) ? nan("") : reach.distance_m;
    answers->density = 0.;
    for (size_t i = 0; i < output.count; i++)
        answers->density = fmax(answers->density, od[i]);
    return BW_OK;
}

/* What differs only by the rounding of the arithmetic is the same. */
static double rounded(double value) {
    return isnan(value) ? value : round(value * 1e9) / 1e9;
}

/* An exposure at the end of the table cannot be longer: then the difference is taken to one side. */
static enum bw_status measure(const struct assess_job *job, const struct bw_distance_result *distance,
                              const struct input *input, struct bw_sensitivity *result, struct bw_error *error) {
    struct answers less, more;
    double up = input->quantity == EXPOSURE && distance->glance.exposure_s * (1. + step) > 3e4 ? 0. : step;
    enum bw_status status = answer(job, distance, input, 1. - step, &less, error);
    if (status == BW_OK)
        status = answer(job, distance, input, 1. + up, &more, error);
    *result = (struct bw_sensitivity){.quantity = names[input->quantity], .emission = input->emission};
    if (status != BW_OK)
        return status;
    double per_cent = 100. * (step + up), middle_m = (less.nohd_m + more.nohd_m) / 2.;
    result->nohd_pct_per_pct = rounded(100. * (more.nohd_m - less.nohd_m) / middle_m / per_cent);
    result->od_per_pct = rounded((more.density - less.density) / per_cent);
    return BW_OK;
}

static bool given(const struct assess_job *job, const struct bw_distance_result *distance, const struct input *input) {
    const struct bw_handpiece *handpiece = assess_handpiece(job, distance);
    size_t i = input->emission;
    if (i == BW_EMISSIONS_MAX) {
        for (size_t k = 0; k < handpiece->output.count && input->quantity != EXPOSURE; k++)
            if (!handpiece->emission_beam_given[k])
                return true;
        return input->quantity == EXPOSURE;
    }
    const struct bw_emission_input *known = &assess_laser(job, distance)->tolerances[i].given;
    switch (input->quantity) {
    case POWER:
        return true;
    case DURATION:
        return !isnan(known->pulse_duration_s) && !handpiece->output.emissions[i].continuous;
    case RATE:
        return !isnan(known->repetition_rate_hz) && !handpiece->output.emissions[i].continuous;
    case DIAMETER:
    case DIVERGENCE:
        return handpiece->emission_beam_given[i];
    case EXPOSURE:
        break;
    }
    return false;
}

/* By the NOHD, then by the density; without a NOHD last. What differs by rounding only keeps the order of the case. */
static bool tells_more(const struct bw_sensitivity *a, const struct bw_sensitivity *b) {
    double first = isnan(a->nohd_pct_per_pct) ? -1. : fabs(a->nohd_pct_per_pct);
    double second = isnan(b->nohd_pct_per_pct) ? -1. : fabs(b->nohd_pct_per_pct);
    if (fabs(first - second) > 1e-6)
        return first > second;
    return fabs(a->od_per_pct) > fabs(b->od_per_pct) + 1e-9;
}

static void sort(struct bw_sensitivity *items, size_t count) {
    for (size_t i = 1; i < count; i++) {
        struct bw_sensitivity moving = items[i];
        size_t j = i;
        for (; j > 0 && tells_more(&moving, &items[j - 1]); j--)
            items[j] = items[j - 1];
        items[j] = moving;
    }
}

/* Given:    job; distance  its exposure times
 * Returned: distance  sensitivity, the most telling input first
 * Returns:  BW_OK; BW_OUT_OF_RANGE; BW_NO_MEMORY
 * Notes:    Central differences over 1 % on the whole evaluation, about the values as given, tolerances left out. */
enum bw_status assess_sensitivity(const struct assess_job *job, struct bw_distance_result *distance,
                                  struct bw_error *error) {
    size_t count = assess_handpiece(job, distance)->output.count;
    distance->sensitivity = calloc(BW_SENSITIVITIES_MAX, sizeof *distance->sensitivity);
    if (!distance->sensitivity)
        return bw_error_set(error, BW_NO_MEMORY, "out of memory");
    for (size_t emission = 0; emission <= BW_EMISSIONS_MAX; emission++)
        for (int quantity = POWER; quantity <= EXPOSURE; quantity++) {
            struct input input = {(enum quantity)quantity, emission};
            if ((emission >= count && emission < BW_EMISSIONS_MAX) || !given(job, distance, &input) ||
                (emission == BW_EMISSIONS_MAX && quantity < DIAMETER))
                continue;
            enum bw_status status =
                measure(job, distance, &input, &distance->sensitivity[distance->sensitivity_count++], error);
            if (status != BW_OK)
                return status;
        }
    sort(distance->sensitivity, distance->sensitivity_count);
    return BW_OK;
}
