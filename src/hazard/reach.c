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

/* The distance, and the ratio there: whoever puts it in finds 1. */
static void write_working(const struct search *search, const struct bw_reach *reach, struct bw_working *working) {
    bool nowhere = !(reach->distance_m > 0.);
    if (search->only == BW_EMISSIONS_MAX)
        bw_working_heading(working, "Hazard distance");
    else
        bw_working_heading(working, "Hazard distance of %s alone",
                           search->hazard->output->emissions[search->only].name);
    bw_working_step(working, "r", reach->distance_m, "m", NULL, NULL, NULL);
    bw_working_note(working, "%s",
                    reach->unbounded ? "never ends: even without end the sum is not below 1"
                    : nowhere        ? "the sum is nowhere above 1, not even where the beam is narrowest"
                                     : "the farthest place where the sum is above 1, found by halving; put "
                                       "into the steps below it gives 1");
    double waist_m = bw_hazard_settled_m(search->hazard, search->only);
    if (nowhere && waist_m > 0.) {
        bw_working_step(working, "r", waist_m, "m", NULL, "r0", NULL);
        bw_working_note(working, "the last waist");
    }
    bw_hazard_alone_working(search->hazard, search->only, nowhere ? waist_m : reach->distance_m, working);
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
