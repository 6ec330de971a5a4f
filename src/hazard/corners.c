/* Limits of an emission whose pulse duration and rate are known to a tolerance: the worst corner of both.
 *
 * More power, a narrower beam and less divergence always mean a larger ratio, so the output brings these at their worst
 * end. Duration and rate may be worst at either end, or as given, for each effect anew: all nine are evaluated. */
#include "internal.h"

#include <math.h>
#include <stdio.h>

enum { PLACES = 3, CORNERS = PLACES * PLACES };
static const double ends[PLACES] = {0., -1., 1.}; /* as given first: it stays where all are equal */

struct corner_case {
    const struct bw_hazard *hazard;
    size_t emission;
    const struct bw_viewing_case *viewing;
    const struct bw_tolerance *tolerance;
};

/* Limits at one corner, as limits of the mean irradiance of the output's own power. */
static enum bw_status limits_at(const struct corner_case *c, size_t corner, struct bw_train_limit_set *limits,
                                struct bw_working *working, struct bw_error *error) {
    const struct bw_emission *used = &c->hazard->output->emissions[c->emission];
    struct bw_emission emission;
    double duration = 1. + ends[corner % PLACES] * c->tolerance->duration;
    double rate = 1. + ends[corner / PLACES] * c->tolerance->rate;
    enum bw_status status =
        bw_emission_varied(&c->tolerance->given, 1. + c->tolerance->power, duration, rate, &emission, error);
    if (status != BW_OK)
        return status;
    snprintf(emission.name, sizeof emission.name, "%s", used->name);
    bw_working_heading(working, "Worst corner: pulse duration x %g, rate x %g", duration, rate);
    status = bw_hazard_train_limits(c->hazard->table, &emission, c->viewing, limits, working, error);
    for (size_t i = 0; status == BW_OK && i < limits->count; i++) {
        double own_w_m2 = limits->limits[i].irradiance_w_m2;
        limits->limits[i].irradiance_w_m2 = own_w_m2 * (used->average_power_w / emission.average_power_w);
        char own[BW_NUMBER_SIZE], power[BW_NUMBER_SIZE], corner_power[BW_NUMBER_SIZE];
        bw_working_step(working, "E_limit", limits->limits[i].irradiance_w_m2, "W/m2", NULL, "E_limit P / Pc",
                        "%s * %s / %s", bw_working_number(own, own_w_m2),
                        bw_working_number(power, used->average_power_w),
                        bw_working_number(corner_power, emission.average_power_w));
        bw_working_note(working, "%s; for the power that the ratio is taken with, Pc that of the corner",
                        bw_effect_name(limits->limits[i].limit.effect));
    }
    return status;
}

struct worst {
    bool found;
    size_t corner;
    double least_w; /* lowest limit x aperture squared: what binds a beam narrower than the aperture */
    struct bw_train_limit limit;
};

static void offer(struct worst *worst, const struct bw_train_limit *limit, size_t corner) {
    double narrow = limit->irradiance_w_m2 * limit->aperture_m * limit->aperture_m;
    double least = worst->found ? fmin(worst->least_w, narrow) : narrow;
    if (!worst->found || !(worst->limit.irradiance_w_m2 <= limit->irradiance_w_m2))
        *worst = (struct worst){true, corner, least, *limit};
    worst->least_w = least;
}

/* Corners may have different apertures: as for the windows of a train, the lowest limit E with the aperture D of the
 * lowest E D^2 is never too small a ratio, and exact for wide and for narrow beams. */
static void conclude(const struct worst worst[BW_EFFECTS], struct bw_train_limit_set *limits) {
    limits->count = limits->governing = 0;
    for (size_t i = 0; i < BW_EFFECTS; i++) {
        if (!worst[i].found)
            continue;
        struct bw_train_limit *limit = &limits->limits[limits->count++];
        *limit = worst[i].limit;
        double own = limit->irradiance_w_m2 * limit->aperture_m * limit->aperture_m;
        if (worst[i].least_w < own * (1. - 1e-12))
            limit->aperture_m = sqrt(worst[i].least_w / limit->irradiance_w_m2);
    }
    for (size_t i = 1; i < limits->count; i++)
        if (!(limits->limits[limits->governing].irradiance_w_m2 <= limits->limits[i].irradiance_w_m2))
            limits->governing = i;
}

/* The working of the corners that govern any effect, each once. */
static void write_working(const struct corner_case *c, const struct worst worst[BW_EFFECTS],
                          struct bw_working *working) {
    bool written[CORNERS] = {false};
    for (size_t i = 0; i < BW_EFFECTS; i++) {
        struct bw_train_limit_set limits;
        if (!worst[i].found || written[worst[i].corner])
            continue;
        written[worst[i].corner] = true;
        limits_at(c, worst[i].corner, &limits, working, NULL);
    }
}

enum bw_status bw_hazard_corner_limits(const struct bw_hazard *hazard, size_t emission,
                                       const struct bw_viewing_case *viewing, struct bw_train_limit_set *limits,
                                       struct bw_working *working, struct bw_error *error) {
    const struct bw_tolerance *tolerance =
        hazard->output->tolerances != NULL ? &hazard->output->tolerances[emission] : NULL;
    if (tolerance == NULL || !(tolerance->duration > 0. || tolerance->rate > 0.))
        return bw_hazard_train_limits(hazard->table, &hazard->output->emissions[emission], viewing, limits, working,
                                      error);
    struct corner_case c = {hazard, emission, viewing, tolerance};
    struct worst worst[BW_EFFECTS] = {{0}};
    for (size_t corner = 0; corner < CORNERS; corner++) {
        enum bw_status status = limits_at(&c, corner, limits, NULL, error);
        if (status != BW_OK)
            return status;
        for (size_t i = 0; i < limits->count; i++)
            offer(&worst[limits->limits[i].limit.effect], &limits->limits[i], corner);
    }
    conclude(worst, limits);
    if (working != NULL)
        write_working(&c, worst, working);
    return BW_OK;
}
