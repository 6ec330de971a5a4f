/* How far the direct beam is a hazard: the farthest place on the axis with a ratio above 1, on the exact ratio. */
#include "internal.h"

#include <math.h>

struct search {
    const struct bw_hazard *hazard;
    size_t only;
    long stretches; /* still to be looked at before the search settles for the safe side */
};

static double ratio_at(const struct search *search, double distance_m) {
    double ratios[BW_TERMS_MAX];
    bw_hazard_bounds(search->hazard, distance_m, distance_m, search->only, ratios);
    return bw_hazard_largest_sum(search->hazard, ratios, search->only);
}

static double bound_between(const struct search *search, double near_m, double far_m) {
    double ratios[BW_TERMS_MAX];
    bw_hazard_bounds(search->hazard, near_m, far_m, search->only, ratios);
    return bw_hazard_largest_sum(search->hazard, ratios, search->only);
}

/* Halves until near (ratio above 1) and far (1 or below) are neighbouring numbers.
 * Returns: far, so that the place named is already safe */
static double close_in(const struct search *search, double near_m, double far_m) {
    for (;;) {
        double middle_m = near_m + (far_m - near_m) / 2.;
        if (!(middle_m > near_m && middle_m < far_m))
            return far_m;
        if (ratio_at(search, middle_m) <= 1.)
            far_m = middle_m;
        else
            near_m = middle_m;
    }
}

/* Where all has settled the ratio only falls: doubles the distance until it is 1 or below.
 * Returns: the crossing; infinite if it lies beyond every number */
static double beyond_settled(const struct search *search, double settled_m) {
    double near_m = settled_m, far_m = fmax(2. * settled_m, 1e-3);
    while (!(ratio_at(search, far_m) <= 1.)) {
        near_m = far_m;
        far_m *= 2.;
        if (!(far_m < HUGE_VAL))
            return HUGE_VAL;
    }
    return close_in(search, near_m, far_m);
}

/* The last place above 1 on a stretch whose far end keeps the limit, the far half first. A stretch whose bound is 1 or
 * below holds none; one too short to matter, whose bound is above 1, counts with its far end.
 * Returns: false if there is none */
static bool last_above(struct search *search, double near_m, double far_m, int depth, double *distance_m) {
    if (bound_between(search, near_m, far_m) <= 1.)
        return false;
    if (depth == 0 || search->stretches-- <= 0) {
        *distance_m = far_m;
        return true;
    }
    double middle_m = near_m + (far_m - near_m) / 2.;
    if (last_above(search, middle_m, far_m, depth - 1, distance_m))
        return true;
    return last_above(search, near_m, middle_m, depth - 1, distance_m);
}

enum { HALVINGS = 50, STRETCHES = 1000000, SHAPED_STRETCHES = 4000 };

static struct bw_reach solve(struct search *search) {
    double from_m = search->hazard->output->stand_off_m, distance_m = 0.;
    double settled_m = bw_hazard_settled_m(search->hazard, search->only);
    double at_infinity = ratio_at(search, HUGE_VAL), at_settled = ratio_at(search, settled_m);
    /* What spreads is nothing at infinity; what is collimated stays. Down to exactly 1 from above never ends either. */
    if (!(at_infinity < 1.) && !(at_settled <= 1.))
        return (struct bw_reach){HUGE_VAL, true};
    if (!(at_settled <= 1.)) {
        distance_m = beyond_settled(search, settled_m);
        return (struct bw_reach){distance_m, !(distance_m < HUGE_VAL)};
    }
    if (settled_m > from_m)
        last_above(search, from_m, settled_m, HALVINGS, &distance_m);
    return (struct bw_reach){distance_m, false};
}

static void write_round(const struct bw_beam *beam, double distance_m, double aperture_m, double per_w,
                        struct bw_working *working) {
    bw_working_step(working, "d", bw_beam_diameter_m(beam, distance_m), "m", NULL,
                    beam->spread == BW_LINEAR ? "a + phi |r - r0|" : "sqrt(a^2 + (phi (r - r0))^2)",
                    "a = %.6g m, phi = %.6g rad, r = %.6g m, r0 = %.6g m", beam->diameter_m, beam->divergence_rad,
                    distance_m, beam->waist_m);
    bw_working_step(working, "E/P", per_w, "1/m2", NULL,
                    beam->profile == BW_TOP_HAT ? "4 / (pi max(D, d)^2)" : "(1 - exp(-(D/d)^2)) / (pi D^2/4)",
                    "D = %.6g m", aperture_m);
}

static void write_elliptical(const struct bw_beam *beam, double distance_m, double aperture_m, double per_w,
                             struct bw_working *working) {
    bw_working_step(working, "E/P", per_w, "1/m2", NULL,
                    beam->profile == BW_TOP_HAT ? "common area of ellipse and aperture / their areas' product"
                                                : "mean over the aperture of the elliptical Gaussian",
                    "axes %.6g m and %.6g m, D = %.6g m", bw_beam_diameter_m(beam, distance_m),
                    bw_beam_widest_m(beam, distance_m), aperture_m);
}

static void write_term(const struct bw_hazard *hazard, size_t index, double distance_m, struct bw_working *working) {
    const struct bw_term *term = &hazard->terms[index];
    const struct bw_emission *emission = &hazard->output->emissions[term->emission];
    const struct bw_beam *beam = &hazard->output->beams[term->emission];
    double per_w = bw_beam_irradiance_per_w(beam, distance_m, term->limit.aperture_m);
    struct bw_seen seen;
    if (bw_hazard_seen(hazard, index, distance_m, &seen, NULL) != BW_OK)
        return; /* the ratio was had, so this is */
    (beam->elliptical ? write_elliptical : write_round)(beam, distance_m, term->limit.aperture_m, per_w, working);
    if (beam->cluster.count > 1) {
        per_w = seen.ratio * seen.limit.irradiance_w_m2 / emission->average_power_w;
        bw_working_step(working, "E/P", per_w, "1/m2", NULL, "of the emitters that are seen together",
                        "%zu of %zu emitters", seen.emitters, beam->cluster.count);
    }
    if (hazard->shaped)
        bw_working_step(working, "alpha", seen.subtense_rad, "rad", NULL, "2 atan(source / 2 r), sides averaged", NULL);
    bw_working_step(working, "ratio", seen.ratio, "", NULL, "P (E/P) / E_limit",
                    "%.6g W x %.6g 1/m2 / %.6g W/m2 (%g nm, %s)", emission->average_power_w, per_w,
                    seen.limit.irradiance_w_m2, emission->wavelength_nm, bw_effect_name(term->limit.limit.effect));
}

static void write_working(const struct search *search, const struct bw_reach *reach, struct bw_working *working) {
    const struct bw_hazard *hazard = search->hazard;
    bw_working_heading(working, "Hazard distance");
    for (size_t i = 0; i < hazard->term_count; i++)
        if (search->only == BW_EMISSIONS_MAX || search->only == hazard->terms[i].emission)
            write_term(hazard, i, reach->distance_m, working);
    bw_working_step(working, "sum", ratio_at(search, reach->distance_m), "", NULL, "largest sum of the ratios that add",
                    NULL);
    bw_working_step(working, "r", reach->distance_m, "m", NULL,
                    reach->unbounded ? "the ratio never falls to 1" : "farthest place with a ratio above 1", NULL);
}

/* Hazard distance of the direct beam.
 * Given:    hazard   prepared; only  one emission, or BW_EMISSIONS_MAX for all together
 * Returned: reach    the farthest place with a ratio above 1, 0 if there is none (Notes)
 *           working  may be NULL
 * Returns:  BW_OK; BW_ARGUMENT if nothing was prepared or a ratio is not a number
 * Notes:    1) Beyond the last waist, and where all sources are points, the ratio falls; whether it ever falls to 1 is
 *              decided at infinity.
 *           2) Before that the ratio may rise and fall; stretches are discarded only by a bound. Where the search
 *              becomes too long, its last stretch counts whole: farther, never nearer.
 *           3) Nobody is inside the stand-off: 0 if nothing outside it is above 1.
 * Tests:    test_hazard.c, closed forms */
enum bw_status bw_hazard_reach(const struct bw_hazard *hazard, size_t only, struct bw_reach *reach,
                               struct bw_working *working, struct bw_error *error) {
    struct search search = {hazard, only, hazard->shaped ? SHAPED_STRETCHES : STRETCHES};
    *reach = (struct bw_reach){nan(""), false};
    if (!(only == BW_EMISSIONS_MAX || only < hazard->output->count) || hazard->term_count == 0)
        return bw_error_set(error, BW_ARGUMENT, "no such emission, or the hazard was not prepared");
    if (isnan(ratio_at(&search, 0.)) || isnan(ratio_at(&search, HUGE_VAL)))
        return bw_error_set(error, BW_ARGUMENT, "the hazard ratio is not a number");
    *reach = solve(&search);
    if (working != NULL)
        write_working(&search, reach, working);
    return BW_OK;
}
