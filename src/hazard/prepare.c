/* An output against a rule set: every emission's limits, and which of them add. */
#include "internal.h"

#include <math.h>
#include <stdio.h>

/* Effects that share a tissue; only within one of these can exposures add. */
enum tissue { RETINA_HEAT, RETINA_LIGHT, FRONT_OF_EYE, SKIN };

static enum tissue tissue_of(enum bw_effect effect) {
    switch (effect) {
    case BW_RETINA_THERMAL:
        return RETINA_HEAT;
    case BW_RETINA_PHOTOCHEMICAL:
        return RETINA_LIGHT;
    case BW_ULTRAVIOLET:
    case BW_ANTERIOR:
        return FRONT_OF_EYE;
    case BW_SKIN_EFFECT:
        break;
    }
    return SKIN;
}

/* Two exposures of the retina add within heat and within light, never across (at 1 s and longer the rule sets keep
 * the sums apart; each limit holds by itself). The ultraviolet, the front of the eye and the skin add as the rule
 * set's bands say; but two heatings of the front of the eye add wherever they lie, 1250 to 1400 nm included. */
static bool terms_add(const struct bw_hazard *hazard, const struct bw_term *a, const struct bw_term *b) {
    enum bw_effect first = a->limit.limit.effect, second = b->limit.limit.effect;
    if (tissue_of(first) != tissue_of(second))
        return false;
    if (a->emission == b->emission && first == second)
        return true;
    bool bands_decide = tissue_of(first) == SKIN || first == BW_ULTRAVIOLET || second == BW_ULTRAVIOLET;
    if (!bands_decide)
        return true;
    return bw_limits_add(hazard->table, hazard->viewing.target, hazard->output->emissions[a->emission].wavelength_nm,
                         hazard->output->emissions[b->emission].wavelength_nm);
}

enum { NAMED_SIZE = BW_NAME_SIZE + 32 };

static const char *name_emission(const struct bw_emission *emission, char text[NAMED_SIZE]) {
    snprintf(text, NAMED_SIZE, "%.*s%s%g nm", BW_NAME_SIZE - 1, emission->name, emission->name[0] != '\0' ? ", " : "",
             emission->wavelength_nm);
    return text;
}

/* For a source that looks so wide to the naked eye, before what is in front of the eye. */
enum bw_status bw_hazard_emission_limits(const struct bw_hazard *hazard, size_t emission, double subtense_rad,
                                         struct bw_train_limit_set *limits, struct bw_working *working,
                                         struct bw_error *error) {
    double at_eye_rad = fmin(subtense_rad * bw_hazard_magnification(hazard), bw_pi / 2.);
    return bw_hazard_limits_at_eye(hazard, emission, at_eye_rad, limits, working, error);
}

enum bw_status bw_hazard_limits_at_eye(const struct bw_hazard *hazard, size_t emission, double subtense_rad,
                                       struct bw_train_limit_set *limits, struct bw_working *working,
                                       struct bw_error *error) {
    struct bw_viewing_case viewing = hazard->viewing;
    viewing.subtense_rad = subtense_rad;
    enum bw_status status = bw_hazard_corner_limits(hazard, emission, &viewing, limits, working, error);
    for (size_t i = 0; status == BW_OK && i < limits->count; i++)
        bw_hazard_before_eye(hazard, emission, &limits->limits[i], working);
    return status;
}

static enum bw_status fill_emission(struct bw_hazard *hazard, size_t emission, double subtense_rad,
                                    struct bw_working *working, struct bw_error *error) {
    struct bw_train_limit_set set;
    struct bw_error reason = {.status = BW_OK};
    char name[NAMED_SIZE] = "";
    if (working != NULL)
        bw_working_heading(working, "%s", name_emission(&hazard->output->emissions[emission], name));
    enum bw_status status = bw_hazard_emission_limits(hazard, emission, subtense_rad, &set, working, &reason);
    if (status != BW_OK)
        return bw_error_set(error, status, "%s: %s", name_emission(&hazard->output->emissions[emission], name),
                            reason.text);
    for (size_t i = 0; i < set.count; i++)
        hazard->terms[hazard->term_count++] = (struct bw_term){emission, set.limits[i]};
    return BW_OK;
}

enum bw_status bw_hazard_fill(struct bw_hazard *hazard, const double subtense_rad[BW_EMISSIONS_MAX],
                              struct bw_working *working, struct bw_error *error) {
    hazard->term_count = 0;
    for (size_t i = 0; i < hazard->output->count; i++) {
        enum bw_status status = fill_emission(hazard, i, subtense_rad[i], working, error);
        if (status != BW_OK) {
            hazard->term_count = 0;
            return status;
        }
    }
    for (size_t i = 0; i < hazard->term_count; i++)
        for (size_t j = 0; j < hazard->term_count; j++)
            hazard->adds[i][j] = terms_add(hazard, &hazard->terms[i], &hazard->terms[j]);
    return BW_OK;
}

static enum bw_status check_axis(double diameter_m, double divergence_rad, struct bw_error *error) {
    if (!(diameter_m >= 0. && diameter_m <= 10.))
        return bw_error_set(error, BW_ARGUMENT, "beam diameter is %g m, outside 0 to 10 m", diameter_m);
    if (!(divergence_rad >= 0. && divergence_rad <= bw_pi))
        return bw_error_set(error, BW_ARGUMENT, "divergence is %g rad, outside 0 to pi rad", divergence_rad);
    return BW_OK;
}

static enum bw_status check_cluster(const struct bw_cluster *cluster, struct bw_error *error) {
    double sum = 0.;
    if (!(cluster->count <= BW_EMITTERS_MAX))
        return bw_error_set(error, BW_ARGUMENT, "%zu emitters; 1 to %d can be assessed", cluster->count,
                            BW_EMITTERS_MAX);
    for (size_t i = 0; i < cluster->count; i++) {
        if (!(fabs(cluster->at[i].x_m) <= 1. && fabs(cluster->at[i].y_m) <= 1.))
            return bw_error_set(error, BW_ARGUMENT, "emitter %zu is more than 1 m off the axis", i + 1);
        if (!(cluster->share[i] >= 0.))
            return bw_error_set(error, BW_ARGUMENT, "emitter %zu has the share %g; it must be 0 or more", i + 1,
                                cluster->share[i]);
        sum += cluster->share[i];
    }
    if (cluster->count > 0 && !(fabs(sum - 1.) <= 1e-9))
        return bw_error_set(error, BW_ARGUMENT, "the shares of the emitters sum to %g; they must sum to 1", sum);
    return BW_OK;
}

static enum bw_status check_beam(const struct bw_beam *beam, struct bw_error *error) {
    enum bw_status status = check_axis(beam->diameter_m, beam->divergence_rad, error);
    if (status == BW_OK && beam->elliptical)
        status = check_axis(beam->diameter_y_m, beam->divergence_y_rad, error);
    if (status == BW_OK)
        status = check_cluster(&beam->cluster, error);
    if (status != BW_OK)
        return status;
    if (!(beam->waist_m >= 0. && beam->waist_m < HUGE_VAL))
        return bw_error_set(error, BW_ARGUMENT, "the waist is at %g m; it must be at the exit or in front of it",
                            beam->waist_m);
    if (!(beam->source_m >= 0. && beam->source_m <= 1. && beam->source_behind_m >= 0. && beam->source_behind_m <= 100.))
        return bw_error_set(
            error, BW_ARGUMENT,
            "the apparent source of %g m lies %g m behind the exit; 0 to 1 m and 0 to 100 m are possible",
            beam->source_m, beam->source_behind_m);
    return BW_OK;
}

/* A subtense that the caller gives holds for all, and at every distance. */
static void find_shapes(struct bw_hazard *hazard) {
    hazard->shaped = false;
    hazard->ladder.steps = 0;
    for (size_t i = 0; i < hazard->output->count; i++) {
        const struct bw_beam *beam = &hazard->output->beams[i];
        bool point = hazard->viewing.subtense_rad > 0. || (!(beam->source_m > 0.) && beam->cluster.count <= 1);
        hazard->settled_m[i] = point ? 0. : bw_hazard_point_from_m(beam, bw_hazard_magnification(hazard));
        hazard->shaped = hazard->shaped || !point;
    }
}

/* Prepares an output against a rule set for one way of viewing.
 * Given:    table; output  kept by reference; viewing
 * Returned: hazard   no terms on error; without a ladder (bw_hazard_prepare_envelope)
 *           working  may be NULL
 * Returns:  BW_OK; BW_ARGUMENT; BW_OUT_OF_RANGE if an emission has no row: none is ever left out
 * Tests:    test_hazard.c */
enum bw_status bw_hazard_prepare(const struct bw_table *table, const struct bw_output *output,
                                 const struct bw_viewing_case *viewing, struct bw_hazard *hazard,
                                 struct bw_working *working, struct bw_error *error) {
    double subtense_rad[BW_EMISSIONS_MAX];
    hazard->table = table;
    hazard->output = output;
    hazard->viewing = *viewing;
    hazard->term_count = 0;
    if (!(output->count >= 1 && output->count <= BW_EMISSIONS_MAX))
        return bw_error_set(error, BW_ARGUMENT, "%zu emissions leave the handpiece; 1 to %d can be assessed together",
                            output->count, BW_EMISSIONS_MAX);
    for (size_t i = 0; i < output->count; i++) {
        enum bw_status status = check_beam(&output->beams[i], error);
        if (status != BW_OK)
            return status;
        subtense_rad[i] = viewing->subtense_rad;
    }
    if (bw_hazard_check_before_eye(output, error) != BW_OK)
        return BW_ARGUMENT;
    if (!(output->stand_off_m >= 0. && output->stand_off_m <= 100.))
        return bw_error_set(error, BW_ARGUMENT, "the stand-off is %g m, outside 0 to 100 m", output->stand_off_m);
    find_shapes(hazard);
    return bw_hazard_fill(hazard, subtense_rad, working, error);
}
