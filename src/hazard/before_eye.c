/* What is between the beam and the eye: goggles, and an optical aid that gathers more light and shows the source wider.
 *
 * A telescope, binoculars or loupes of magnification M make a beam M times narrower. Of the beam at the objective, what
 * lies within M D comes out within D, the limiting aperture at the eye; no more than the objective takes in. So the
 * eye gets tau times the power within min(Do, M D), spread over the area of D:
 *   E_eye = tau E(D') (D'/D)^2,   D' = min(Do, M D),   E(D') the mean at the objective over D'.
 * Of a beam much wider than the objective the gain is tau min(M^2, (Do/D)^2), the usual one; of a narrow one it is tau.
 * The limit is put where the beam is known: at the objective, E_limit / tau (D/D')^2 as the mean over D'. Then every
 * distance is solved on the ratio as it is, the aperture included. */
#include "internal.h"

#include <math.h>

/* Where viewing through glass optics is assessed: 302.5 to 4000 nm. IEC 60825-1, condition 1 (from memory); beyond,
 * glass is taken to pass nothing, and the naked eye decides. */
static const double glass_from_nm = 302.5, glass_to_nm = 4000.;

/* Share that an aid passes.
 * Given:    aid; wavelength_nm
 * Returns:  the largest of the bands that hold it; 1 where none does (the safe side); 0 outside 302.5 to 4000 nm
 * Source:   common practice; the ends of the band from memory.   Tests: test_hazard_aid.c */
double bw_aid_transmittance(const struct bw_aid *aid, double wavelength_nm) {
    double largest = -1.;
    if (!(wavelength_nm >= glass_from_nm && wavelength_nm <= glass_to_nm))
        return 0.;
    for (size_t i = 0; i < aid->band_count; i++)
        if (wavelength_nm >= aid->bands[i].low_nm && wavelength_nm <= aid->bands[i].high_nm)
            largest = fmax(largest, aid->bands[i].transmittance);
    return largest >= 0. ? largest : 1.;
}

static const struct bw_aid *aid_of(const struct bw_hazard *hazard) {
    return hazard->viewing.target == BW_EYE ? hazard->output->aid : NULL;
}

double bw_hazard_magnification(const struct bw_hazard *hazard) {
    const struct bw_aid *aid = aid_of(hazard);
    return aid != NULL ? aid->magnification : 1.;
}

enum bw_status bw_hazard_check_before_eye(const struct bw_output *output, struct bw_error *error) {
    const struct bw_aid *aid = output->aid;
    for (size_t i = 0; output->passes != NULL && i < output->count; i++)
        if (!(output->passes[i] >= 0. && output->passes[i] <= 1.))
            return bw_error_set(error, BW_ARGUMENT, "goggles that pass a share of %g; it must be 0 to 1",
                                output->passes[i]);
    if (aid == NULL)
        return BW_OK;
    if (!(aid->magnification >= 1. && aid->magnification <= 200.))
        return bw_error_set(error, BW_ARGUMENT, "magnification is %g, outside 1 to 200", aid->magnification);
    if (!(aid->objective_m >= 1e-3 && aid->objective_m <= 1.))
        return bw_error_set(error, BW_ARGUMENT, "objective is %g m wide, outside 1e-3 to 1 m", aid->objective_m);
    for (size_t i = 0; i < aid->band_count; i++)
        if (!(aid->bands[i].transmittance >= 0. && aid->bands[i].transmittance <= 1.))
            return bw_error_set(error, BW_ARGUMENT, "transmittance is %g; it must be 0 to 1",
                                aid->bands[i].transmittance);
    return BW_OK;
}

typedef char number[BW_NUMBER_SIZE];

static void through_goggles(const struct bw_hazard *hazard, size_t emission, struct bw_train_limit *limit,
                            struct bw_working *working) {
    double at_eye_w_m2 = limit->irradiance_w_m2, passes = hazard->output->passes[emission];
    limit->irradiance_w_m2 = at_eye_w_m2 / passes; /* infinite if nothing passes */
    number at_eye, tau;
    if (passes > 0.)
        bw_working_step(working, "E_limit", limit->irradiance_w_m2, "W/m2", NULL, "E_limit / tau", "%s / %s",
                        bw_working_number(at_eye, at_eye_w_m2), bw_working_number(tau, passes));
    else
        bw_working_step(working, "E_limit", limit->irradiance_w_m2, "W/m2", NULL, NULL, NULL);
    bw_working_note(working, "before the goggles, which pass the share tau");
}

static void through_aid(const struct bw_hazard *hazard, size_t emission, struct bw_train_limit *limit,
                        struct bw_working *working) {
    const struct bw_aid *aid = hazard->output->aid;
    double tau = bw_aid_transmittance(aid, hazard->output->emissions[emission].wavelength_nm);
    double eye_m = limit->aperture_m, at_eye_w_m2 = limit->irradiance_w_m2;
    double taken_m = fmin(aid->objective_m, aid->magnification * eye_m);
    limit->aperture_m = taken_m;
    limit->irradiance_w_m2 = at_eye_w_m2 / tau * (eye_m / taken_m) * (eye_m / taken_m);
    number objective, times, eye, at_eye, share, taken;
    bw_working_number(eye, eye_m);
    bw_working_step(working, "Da", taken_m, "m", "common practice", "min(Do, M D)", "min(%s, %s * %s)",
                    bw_working_number(objective, aid->objective_m), bw_working_number(times, aid->magnification), eye);
    bw_working_note(working, "what the aid gathers for the eye: objective Do, magnification M, aperture D in m");
    if (tau > 0.)
        bw_working_step(working, "E_limit", limit->irradiance_w_m2, "W/m2", "common practice",
                        "E_limit / tau (D / Da)^2", "%s / %s * (%s / %s)^2", bw_working_number(at_eye, at_eye_w_m2),
                        bw_working_number(share, tau), eye, bw_working_number(taken, taken_m));
    else
        bw_working_step(working, "E_limit", limit->irradiance_w_m2, "W/m2", "common practice", NULL, NULL);
    bw_working_note(working, tau > 0. ? "at the objective; the aid passes the share tau"
                                      : "the aid is taken to pass nothing here");
}

void bw_hazard_before_eye(const struct bw_hazard *hazard, size_t emission, struct bw_train_limit *limit,
                          struct bw_working *working) {
    if (hazard->viewing.target != BW_EYE)
        return; /* they shield the eye only */
    if (hazard->output->passes != NULL)
        through_goggles(hazard, emission, limit, working);
    if (aid_of(hazard) != NULL)
        through_aid(hazard, emission, limit, working);
}
