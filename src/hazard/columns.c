/* See columns.h. */
#include "columns.h"

#include "series.h"
#include "vector.h"

#include <math.h>

/* With q = E pi D^2 / (4 P), the share of the power that the limit lets through the aperture, the ratio is 1 where
 * 1 - exp(-(D/d)^2) = q. A q of 1 or more is never exceeded. */
HAZARD_VECTOR void bw_column_hazard(size_t count, const struct bw_limit_column *limits, double distance_m,
                                    struct beam_columns *beams) {
    const double *radiant_exposure_j_m2 = limits->radiant_exposure_j_m2, *irradiance_w_m2 = limits->irradiance_w_m2;
    const double *aperture_m = limits->aperture_m;
    for (size_t i = 0; i < count; i++) {
        double aperture_m2 = aperture_m[i] * aperture_m[i];
        double q = irradiance_w_m2[i] * (bw_pi / 4.) * aperture_m2 / beams->power_w[i];
        double edge_m2 = aperture_m2 / series_minus_log_of_rest(q);
        edge_m2 = q < 1. ? edge_m2 : 0.;
        beams->widest_m2[i] = edge_m2 > beams->widest_m2[i] ? edge_m2 : beams->widest_m2[i];
        double growth_m = beams->divergence_rad[i] * distance_m;
        double width_m2 = beams->diameter_m[i] * beams->diameter_m[i] + growth_m * growth_m;
        double ratio = series_one_minus_exp(aperture_m2 / width_m2) / q;
        beams->ratio[i] = ratio > beams->ratio[i] ? ratio : beams->ratio[i];
        beams->lowest_j_m2[i] =
            beams->lowest_j_m2[i] <= radiant_exposure_j_m2[i] ? beams->lowest_j_m2[i] : radiant_exposure_j_m2[i];
    }
}

/* The diameter d grows as d^2 = a^2 + (phi r)^2. A collimated beam (phi = 0) that is above the limit stays so. */
HAZARD_VECTOR size_t bw_column_answers(size_t count, const struct beam_columns *beams, struct answer_columns *answers) {
    const double none = (double)NAN, power_max_w = 1e15; /* a limit for the series, not for lasers */
    size_t missing = 0;
    for (size_t i = 0; i < count; i++) {
        double a = beams->diameter_m[i], phi = beams->divergence_rad[i], power_w = beams->power_w[i];
        double beyond_m2 = beams->widest_m2[i] - a * a;
        double nohd = beyond_m2 > 0. ? sqrt(beyond_m2) / phi : 0.;
        double od = series_log(beams->ratio[i]) * 0x1.bcb7b1526e50ep-2; /* 1 / ln 10 */
        od = beams->ratio[i] > 1. ? od : 0.;
        bool is_beam =
            (power_w > 0.) & (power_w <= power_max_w) & (a >= 0.) & (a <= 10.) & (phi >= 0.) & (phi <= bw_pi);
        answers->radiant_exposure_j_m2[i] = is_beam ? beams->lowest_j_m2[i] : none;
        answers->nohd_m[i] = is_beam ? nohd : none;
        answers->density[i] = is_beam ? od : none;
        missing += !is_beam;
    }
    return missing;
}
