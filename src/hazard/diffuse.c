/* A diffuse reflection: the lit spot as an extended source. */
#include "internal.h"

#include <math.h>

/* Given:    output; beam_path_m  length of the beam's way to the surface [m]; reflectance  0 to 1
 * Returned: spot  d63 of each emission on the surface
 * Returns:  BW_OK; BW_ARGUMENT
 * Notes:    An ellipse counts as a disc of its smaller axis, a cluster as one emitter with all the power: the smaller
 *           source has the stricter limit. */
enum bw_status bw_hazard_spot(const struct bw_output *output, double beam_path_m, double reflectance,
                              struct bw_spot *spot) {
    spot->reflectance = nan("");
    if (!(beam_path_m >= 0.) || !(reflectance >= 0. && reflectance <= 1.) || output->count > BW_EMISSIONS_MAX)
        return BW_ARGUMENT;
    double path_m = fmax(beam_path_m, output->stand_off_m); /* the spacer keeps surfaces off, too */
    for (size_t i = 0; i < BW_EMISSIONS_MAX; i++)
        spot->diameter_m[i] = i < output->count ? bw_beam_diameter_m(&output->beams[i], path_m) : 0.;
    spot->reflectance = reflectance;
    return BW_OK;
}

/* alpha = 2 atan(d / 2r), at most pi/2: never more than d/r, and a smaller source has the stricter limit. Nearer than
 * half the spot's diameter it stays. */
static double subtense_rad(double diameter_m, double distance_m) {
    return distance_m > diameter_m / 2. ? 2. * atan(diameter_m / 2. / distance_m) : bw_pi / 2.;
}

/* Irradiance per watt from a matt spot, seen along its normal: rho / (pi r^2), but nowhere more than the spot itself
 * sends out, rho x 4 / (pi d^2). The mean over an aperture is no more than that, nor than all that is sent out falling
 * into the aperture, rho x 4 / (pi D^2). */
static double irradiance_per_w(const struct bw_spot *spot, const struct bw_term *term, double distance_m) {
    double nearest_m = fmax(distance_m, fmax(spot->diameter_m[term->emission], term->limit.aperture_m) / 2.);
    return spot->reflectance / bw_pi / nearest_m / nearest_m;
}

static enum bw_status check(const struct bw_hazard *hazard, const struct bw_spot *spot, struct bw_error *error) {
    if (hazard->term_count == 0)
        return bw_error_set(error, BW_ARGUMENT, "the hazard was not prepared");
    if (!(spot->reflectance >= 0. && spot->reflectance <= 1.))
        return bw_error_set(error, BW_ARGUMENT, "reflectance is %g, outside 0 to 1", spot->reflectance);
    for (size_t i = 0; i < hazard->output->count; i++)
        if (!(spot->diameter_m[i] >= 0. && spot->diameter_m[i] < HUGE_VAL))
            return bw_error_set(error, BW_ARGUMENT, "spot diameter is %g m; it must be 0 or more", spot->diameter_m[i]);
    return BW_OK;
}

typedef char number[BW_NUMBER_SIZE];

static void write_subtense(const struct bw_spot *spot, size_t emission, double distance_m, double alpha_rad,
                           struct bw_working *working) {
    number d, r, alpha;
    bw_working_number(d, spot->diameter_m[emission]);
    bw_working_number(r, distance_m);
    if (distance_m > spot->diameter_m[emission] / 2.)
        bw_working_step(working, "alpha", alpha_rad, "rad", NULL, "2 atan(d / 2 / r)", "2 * atan(%s / 2 / %s)", d, r);
    else
        bw_working_step(working, "alpha", alpha_rad, "rad", NULL, "pi / 2", "pi / 2");
    bw_working_note(working, "the spot of d = %s m as seen from r = %s m: an extended source", d, r);
    bw_working_step(working, "alpha", 1e3 * alpha_rad, "mrad", NULL, "1000 alpha", "1000 * %s",
                    bw_working_number(alpha, alpha_rad));
}

static void write_ratio(const struct bw_hazard *here, const struct bw_term *term, const struct bw_spot *spot,
                        double distance_m, double ratio, struct bw_working *working) {
    const struct bw_emission *emission = &here->output->emissions[term->emission];
    double diameter_m = spot->diameter_m[term->emission];
    double per_w = irradiance_per_w(spot, term, distance_m);
    number rho, r, half, eye, p, g, limit;
    bw_working_step(working, "g", per_w, "1/m2", NULL, "rho / (pi max(r, d / 2, D / 2)^2)",
                    "%s / (pi * max(%s, %s / 2, %s / 2)^2)", bw_working_number(rho, spot->reflectance),
                    bw_working_number(r, distance_m), bw_working_number(half, diameter_m),
                    bw_working_number(eye, term->limit.aperture_m));
    bw_working_note(working,
                    "irradiance per watt from a matt spot, seen along its normal; never more than the spot itself "
                    "sends out");
    bw_working_step(working, "ratio", ratio, "", NULL, "P g / E_limit", "%s * %s / %s",
                    bw_working_number(p, emission->average_power_w), bw_working_number(g, per_w),
                    bw_working_number(limit, term->limit.irradiance_w_m2));
    bw_working_note(working, "%s %g nm, %s", emission->name, emission->wavelength_nm,
                    bw_effect_name(term->limit.limit.effect));
}

static enum bw_status ratio_with_working(const struct bw_hazard *hazard, const struct bw_spot *spot, double distance_m,
                                         struct bw_ratio *ratio, struct bw_working *working, struct bw_error *error) {
    struct bw_hazard here; /* the same with the limits of this subtense */
    double subtenses_rad[BW_EMISSIONS_MAX], ratios[BW_TERMS_MAX];
    here.table = hazard->table;
    here.output = hazard->output;
    here.viewing = hazard->viewing;
    for (size_t i = 0; i < hazard->output->count; i++) {
        subtenses_rad[i] = subtense_rad(spot->diameter_m[i], distance_m);
        if (working != NULL)
            write_subtense(spot, i, distance_m, subtenses_rad[i], working);
    }
    enum bw_status status = bw_hazard_fill(&here, subtenses_rad, working, error);
    if (status != BW_OK)
        return status;
    if (working != NULL)
        bw_working_heading(working, "Ratio from the spot");
    for (size_t i = 0; i < here.term_count; i++) {
        const struct bw_term *term = &here.terms[i];
        double power_w = here.output->emissions[term->emission].average_power_w;
        ratios[i] = power_w * irradiance_per_w(spot, term, distance_m) / term->limit.irradiance_w_m2;
        if (working != NULL)
            write_ratio(&here, term, spot, distance_m, ratios[i], working);
    }
    bw_hazard_combine(&here, ratios, ratio);
    bw_hazard_sum_working(&here, ratios, BW_EMISSIONS_MAX, working);
    return BW_OK;
}

/* The same with its steps, for a place. */
enum bw_status bw_hazard_diffuse_working(const struct bw_hazard *hazard, const struct bw_spot *spot, double distance_m,
                                         struct bw_ratio *ratio, struct bw_working *working, struct bw_error *error) {
    *ratio = (struct bw_ratio){.total = nan("")};
    enum bw_status status = check(hazard, spot, error);
    return status == BW_OK ? ratio_with_working(hazard, spot, distance_m, ratio, working, error) : status;
}

/* Hazard ratio of looking at a matt spot from a distance.
 * Given:    hazard  prepared for this way of viewing (its subtense is not used); spot; distance_m from it, 0 or more
 * Returned: ratio   governing counts the terms in the order of the emissions and effects, as hazard does
 * Returns:  BW_OK; BW_ARGUMENT; BW_OUT_OF_RANGE
 * Notes:    Each emission has its own spot, hence its own subtense and limits (CE, T2, photochemical cone). */
enum bw_status bw_hazard_diffuse_ratio(const struct bw_hazard *hazard, const struct bw_spot *spot, double distance_m,
                                       struct bw_ratio *ratio, struct bw_error *error) {
    *ratio = (struct bw_ratio){.total = nan("")};
    enum bw_status status = check(hazard, spot, error);
    if (status != BW_OK)
        return status;
    if (!(distance_m >= 0.))
        return bw_error_set(error, BW_ARGUMENT, "distance is %g m; it must be 0 or more", distance_m);
    return ratio_with_working(hazard, spot, distance_m, ratio, NULL, error);
}

/* ---- how far it reaches ------------------------------------------------------------------------- */

struct search {
    const struct bw_hazard *hazard;
    const struct bw_spot *spot;
    struct bw_error *error;
    enum bw_status status; /* the first failure */
};

/* A ratio that cannot be had is NAN, and the status says why. */
static double ratio_at(struct search *search, double distance_m) {
    struct bw_ratio ratio = {.total = nan("")};
    if (search->status == BW_OK)
        search->status = ratio_with_working(search->hazard, search->spot, distance_m, &ratio, NULL, search->error);
    return search->status == BW_OK ? ratio.total : nan("");
}

static double close_in(struct search *search, double near_m, double far_m) {
    while (search->status == BW_OK) {
        double middle_m = near_m + (far_m - near_m) / 2.;
        if (!(middle_m > near_m && middle_m < far_m))
            break;
        if (ratio_at(search, middle_m) <= 1.)
            far_m = middle_m;
        else
            near_m = middle_m;
    }
    return far_m;
}

/* alpha_min, the angles at which a train correction changes its law, and alpha_max at the duration of a pulse, where it
 * does so for long pulses; with a tolerance of the duration, at its corners too. Between them E falls as 1/r^2, and no
 * limit grows faster than the square of the subtense.
 * Notes: Of a list, alpha_max of the pulse with the most energy. */
size_t bw_hazard_subtense_steps(const struct bw_hazard *hazard, size_t emission, double steps_rad[BW_SUBTENSE_STEPS]) {
    static const double fixed_rad[] = {1.5e-3, 5e-3, 100e-3};
    enum { FIXED = sizeof fixed_rad / sizeof *fixed_rad };
    const struct bw_output *output = hazard->output;
    double magnification = bw_hazard_magnification(hazard); /* an aid shows the angle so wide */
    double off = output->tolerances != NULL ? output->tolerances[emission].duration : 0.;
    const double factors[] = {1., 1. - off, 1. + off};
    size_t count = 0;
    for (size_t i = 0; i < FIXED; i++)
        steps_rad[count++] = fixed_rad[i] / magnification;
    for (size_t i = 0; i < (off > 0. ? 3 : 1) && !output->emissions[emission].continuous; i++) {
        double seen_s = fmin(output->emissions[emission].pulse_duration_s * factors[i], hazard->viewing.exposure_s);
        double largest_rad = bw_limits_largest_subtense(hazard->table, seen_s);
        if (largest_rad > fixed_rad[1] && largest_rad < fixed_rad[FIXED - 1])
            steps_rad[count++] = largest_rad / magnification;
    }
    return count;
}

/* From each step on, away from the spot, the ratio may step up; between them it never rises. */
static double farthest_step_m(const struct search *search, double below_m) {
    double farthest_m = 0., steps_rad[BW_SUBTENSE_STEPS];
    for (size_t i = 0; i < search->hazard->output->count; i++) {
        size_t count = bw_hazard_subtense_steps(search->hazard, i, steps_rad);
        for (size_t j = 0; j < count; j++) {
            double half_m = search->spot->diameter_m[i] / 2.;
            double place_m = half_m / tan(steps_rad[j] / 2.) * (1. + 1e-9);
            if (place_m < below_m)
                farthest_m = fmax(farthest_m, place_m);
        }
    }
    return farthest_m;
}

/* Goes inward in steps of a few per cent, and through the place just outside each step of the law, until the ratio is
 * above 1. Nearer than half the smallest spot nothing changes any more. */
static double inward(struct search *search, double far_m, double nearest_m) {
    static const double stride = 0.94;
    while (search->status == BW_OK && far_m > nearest_m) {
        double step_m = farthest_step_m(search, far_m);
        double near_m = fmax(fmax(stride * far_m, step_m), nearest_m);
        if (!(ratio_at(search, near_m) <= 1.))
            return close_in(search, near_m, far_m);
        far_m = near_m;
    }
    return 0.;
}

static double solve(struct search *search) {
    size_t count = search->hazard->output->count;
    double smallest_m = HUGE_VAL, last_step_m = farthest_step_m(search, HUGE_VAL);
    for (size_t i = 0; i < count; i++)
        smallest_m = fmin(smallest_m, search->spot->diameter_m[i]);
    double far_m = fmax(1e-3, 2. * last_step_m), near_m = last_step_m;
    if (ratio_at(search, near_m) <= 1.)
        return inward(search, near_m, smallest_m / 2.);
    while (search->status == BW_OK && !(ratio_at(search, far_m) <= 1.)) {
        near_m = far_m;
        far_m *= 2.;
    }
    return close_in(search, near_m, far_m);
}

/* Farthest place from which the spot may not be looked at for the exposure time.
 * Given:    hazard, spot
 * Returned: reach    0 if there is none; never unbounded; working  may be NULL
 * Returns:  BW_OK; BW_ARGUMENT; BW_OUT_OF_RANGE
 * Notes:    The ratio is not monotone: where the subtense falls through 100 mrad a train correction may set in. All
 *           such steps are visited; inward the search goes in strides of 6 per cent. */
enum bw_status bw_hazard_diffuse_reach(const struct bw_hazard *hazard, const struct bw_spot *spot,
                                       struct bw_reach *reach, struct bw_working *working, struct bw_error *error) {
    *reach = (struct bw_reach){nan(""), false};
    struct search search = {hazard, spot, error, check(hazard, spot, error)};
    if (search.status != BW_OK)
        return search.status;
    double distance_m = spot->reflectance > 0. ? solve(&search) : 0.;
    if (search.status != BW_OK)
        return search.status;
    reach->distance_m = distance_m;
    if (working != NULL) {
        struct bw_ratio ratio;
        bw_working_heading(working, "Diffuse reflection");
        bw_working_step(working, "r", distance_m, "m", NULL, NULL, NULL);
        bw_working_note(working, "%s",
                        distance_m > 0. ? "the farthest place where the sum is above 1, found by halving; put "
                                          "into the steps below it gives 1"
                                        : "the sum is nowhere above 1, not even at the spot");
        search.status = ratio_with_working(hazard, spot, distance_m, &ratio, working, error);
    }
    return search.status;
}
