/* Skin in the beam. Where the rule set limits a large area of exposed skin more strictly (icnirp-2013 beyond 1400 nm),
 * the area counts: the one that the case gives, or that of the beam itself, which grows with the distance. */
#include "internal.h"

#include <math.h>
#include <stdlib.h>

static const double large_m2 = 2.; /* more than any printed step of area */

/* Area of the largest spot, by its 1/e2 diameter; no body is larger. Of tolerances the narrowest beam is the worst here
 * too: on any area the ratio falls with the width of the beam that lights it, or stays.
 * Source: common practice, no source. */
static double spot_area_m2(const struct bw_distance_result *distance, double at_m) {
    double largest_m2 = 0.;
    for (size_t i = 0; i < distance->output.count; i++) {
        const struct bw_beam *beam = &distance->output.beams[i];
        double width_m = bw_beam_widest_m(beam, at_m);
        if (beam->profile == BW_GAUSSIAN)
            width_m = bw_diameter_from_d63(width_m, BW_D86);
        width_m += 2. * bw_beam_outermost_m(beam);
        largest_m2 = fmax(largest_m2, bw_pi / 4. * width_m * width_m);
    }
    return fmin(largest_m2, large_m2);
}

double assess_skin_area_m2(const struct assess_job *job, const struct bw_distance_result *distance, double at_m) {
    const struct bw_handpiece *handpiece = assess_handpiece(job, distance);
    if (!distance->skin_area_matters)
        return 0.;
    return handpiece->has_exposed_skin ? handpiece->exposed_skin_m2 : spot_area_m2(distance, at_m);
}

struct skin_case {
    const struct assess_job *job;
    const struct bw_distance_result *distance;
    struct bw_error *error;
    enum bw_status status;
};

static struct bw_viewing_case viewing_of(const struct bw_distance_result *distance, double area_m2) {
    return (struct bw_viewing_case){
        .target = BW_SKIN, .exposure_s = distance->skin_time.exposure_s, .area_m2 = area_m2};
}

static double ratio_at(struct skin_case *skin, double at_m) {
    struct bw_viewing_case viewing = viewing_of(skin->distance, assess_skin_area_m2(skin->job, skin->distance, at_m));
    struct bw_hazard hazard;
    if (skin->status == BW_OK)
        skin->status =
            bw_hazard_prepare(skin->job->table, &skin->distance->output, &viewing, &hazard, NULL, skin->error);
    return skin->status == BW_OK ? bw_hazard_ratio(&hazard, at_m) : nan("");
}

static double close_in(struct skin_case *skin, double near_m, double far_m) {
    while (skin->status == BW_OK) {
        double middle_m = near_m + (far_m - near_m) / 2.;
        if (!(middle_m > near_m && middle_m < far_m))
            break;
        if (ratio_at(skin, middle_m) <= 1.)
            far_m = middle_m;
        else
            near_m = middle_m;
    }
    return far_m;
}

/* Nowhere farther than with the limit of the largest area; from there inward in strides of 2 per cent. What the area
 * adds with the distance the spread of the same beam takes away, so the ratio hardly rises with it anywhere. */
static struct bw_reach with_growing_area(struct skin_case *skin, const struct bw_reach *strictest) {
    static const double stride = 0.98, nearest_m = 1e-3;
    double far_m = strictest->distance_m;
    if (strictest->unbounded)
        return *strictest;
    while (skin->status == BW_OK && far_m > nearest_m) {
        double near_m = stride * far_m;
        if (!(ratio_at(skin, near_m) <= 1.))
            return (struct bw_reach){close_in(skin, near_m, far_m), false};
        far_m = near_m;
    }
    double at_exit = ratio_at(skin, 0.);
    return (struct bw_reach){at_exit <= 1. ? 0. : far_m, false};
}

/* Does the area of the skin change any limit here? */
static enum bw_status find_whether(const struct assess_job *job, struct bw_distance_result *distance,
                                   struct bw_error *error) {
    struct bw_viewing_case small = viewing_of(distance, 0.), large = viewing_of(distance, large_m2);
    struct bw_hazard of_small, of_large;
    enum bw_status status = bw_hazard_prepare(job->table, &distance->output, &small, &of_small, NULL, error);
    if (status == BW_OK)
        status = bw_hazard_prepare(job->table, &distance->output, &large, &of_large, NULL, error);
    if (status != BW_OK)
        return status;
    distance->skin_area_matters = of_small.term_count != of_large.term_count;
    for (size_t i = 0; i < of_small.term_count && !distance->skin_area_matters; i++)
        distance->skin_area_matters =
            !(of_small.terms[i].limit.irradiance_w_m2 <= of_large.terms[i].limit.irradiance_w_m2);
    return BW_OK;
}

/* The answer, and the ratio there with the limit of its own area. */
static enum bw_status write_reach(const struct assess_job *job, const struct bw_distance_result *distance,
                                  double area_m2, struct bw_working *working, struct bw_error *error) {
    struct bw_viewing_case viewing = viewing_of(distance, area_m2);
    struct bw_hazard hazard;
    double at_m = distance->skin.distance_m;
    bw_working_heading(working, "Hazard distance, each place with the limit of its own area");
    bw_working_step(working, "r", at_m, "m", NULL, NULL, NULL);
    bw_working_note(working, "%s",
                    distance->skin.unbounded ? "never ends"
                    : at_m > 0.              ? "the farthest place where the sum is above 1, searched; put into the "
                                               "steps below it gives 1"
                                             : "the sum is nowhere above 1");
    if (distance->skin.unbounded)
        return BW_OK;
    bw_working_step(working, "A", area_m2, "m2", "common practice", NULL, NULL);
    bw_working_note(working, "skin lit by the widest emission within d86 = sqrt(2) d63 there, of 2 m2 at most");
    enum bw_status status = bw_hazard_prepare(job->table, &distance->output, &viewing, &hazard, working, error);
    if (status == BW_OK)
        bw_hazard_ratio_working(&hazard, at_m, working);
    return status;
}

static enum bw_status find_reach(const struct assess_job *job, struct bw_distance_result *distance,
                                 struct bw_working *working, struct bw_error *error) {
    struct skin_case skin = {job, distance, error, BW_OK};
    struct bw_viewing_case viewing = viewing_of(distance, large_m2);
    struct bw_hazard strictest;
    if (!distance->skin_area_matters || assess_handpiece(job, distance)->has_exposed_skin)
        return bw_hazard_reach(distance->skin_view, BW_EMISSIONS_MAX, &distance->skin, working, error);
    struct bw_reach bound;
    enum bw_status status = bw_hazard_prepare(job->table, &distance->output, &viewing, &strictest, NULL, error);
    if (status == BW_OK)
        status = bw_hazard_reach(&strictest, BW_EMISSIONS_MAX, &bound, NULL, error);
    if (status != BW_OK)
        return status;
    distance->skin = with_growing_area(&skin, &bound);
    double area_m2 = assess_skin_area_m2(job, distance, distance->skin.distance_m);
    if (skin.status == BW_OK && working != NULL)
        skin.status = write_reach(job, distance, area_m2, working, error);
    return skin.status;
}

enum bw_status assess_skin(const struct assess_job *job, struct bw_distance_result *distance,
                           struct bw_working *working, struct bw_error *error) {
    bw_working_heading(working, "Skin in the beam, exposure %g s", distance->skin_time.exposure_s);
    assess_time_working(distance, &distance->skin_time, "skin", working);
    enum bw_status status = find_whether(job, distance, error);
    distance->skin_area_m2 = assess_skin_area_m2(job, distance, 0.);
    struct bw_viewing_case viewing = viewing_of(distance, distance->skin_area_m2);
    if (status == BW_OK)
        status = assess_prepare(job, distance, viewing, &distance->skin_view, working, error);
    if (status == BW_OK)
        status = find_reach(job, distance, working, error);
    if (status != BW_OK)
        return status;
    double at_m;
    bw_hazard_prepare_envelope(distance->skin_view);
    distance->skin_ratio_at_exit = bw_hazard_ratio_envelope(distance->skin_view, 0.);
    assess_find_governing(distance->skin_view, &distance->skin_governing_emission, &distance->skin_governing, &at_m);
    assess_exit_working(distance->skin_view, at_m, distance->skin_ratio_at_exit, working);
    return BW_OK;
}
