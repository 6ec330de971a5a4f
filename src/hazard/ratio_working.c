/* How a hazard ratio comes about, term by term. */
#include "internal.h"

/* Given: hazard, distance_m.  Returned: working (may be NULL), a step for the width of the beam, for what falls into
 * the aperture and for the ratio of each term, and the sum. */
void bw_hazard_ratio_working(const struct bw_hazard *hazard, double distance_m, struct bw_working *working) {
    if (working == NULL)
        return;
    for (size_t i = 0; i < hazard->term_count; i++) {
        const struct bw_term *term = &hazard->terms[i];
        const struct bw_emission *emission = &hazard->output->emissions[term->emission];
        const struct bw_beam *beam = &hazard->output->beams[term->emission];
        double per_w = bw_beam_irradiance_per_w(beam, distance_m, term->limit.aperture_m);
        bw_working_step(working, "d", bw_beam_diameter_m(beam, distance_m), "m", NULL,
                        beam->spread == BW_LINEAR ? "a + phi |r - r0|" : "sqrt(a^2 + (phi (r - r0))^2)",
                        "a = %.6g m, phi = %.6g rad, r = %.6g m, r0 = %.6g m", beam->diameter_m, beam->divergence_rad,
                        distance_m, beam->waist_m);
        bw_working_step(working, "E/P", per_w, "1/m2", NULL,
                        beam->profile == BW_TOP_HAT ? "4 / (pi max(D, d)^2)" : "(1 - exp(-(D/d)^2)) / (pi D^2/4)",
                        "D = %.6g m", term->limit.aperture_m);
        bw_working_step(working, "ratio", emission->average_power_w * per_w / term->limit.irradiance_w_m2, "", NULL,
                        "P (E/P) / E_limit", "%.6g W x %.6g 1/m2 / %.6g W/m2 (%g nm, %s)", emission->average_power_w,
                        per_w, term->limit.irradiance_w_m2, emission->wavelength_nm,
                        bw_effect_name(term->limit.limit.effect));
    }
    bw_working_step(working, "sum", bw_hazard_ratio(hazard, distance_m), "", NULL, "largest sum of the ratios that add",
                    NULL);
}
