/* Longest exposure that keeps the limit at a place. */
#include "internal.h"

#include <math.h>

static const double shortest_s = 1e-13, longest_s = 3e4; /* what the rule sets cover */

struct search {
    const struct bw_table *table;
    const struct bw_output *output;
    struct bw_viewing_case viewing;
    double distance_m;
    struct bw_error *error;
    enum bw_status status;
};

static double ratio_for(struct search *search, double exposure_s, struct bw_working *working) {
    struct bw_hazard hazard;
    search->viewing.exposure_s = exposure_s;
    if (search->status == BW_OK)
        search->status =
            bw_hazard_prepare(search->table, search->output, &search->viewing, &hazard, working, search->error);
    return search->status == BW_OK ? bw_hazard_ratio(&hazard, search->distance_m) : nan("");
}

/* Halves, first by the factor, then by the difference, until safe and unsafe are neighbouring numbers.
 * Returns: the safe one */
static double close_in(struct search *search, double safe_s, double unsafe_s) {
    while (search->status == BW_OK) {
        double middle_s = unsafe_s > 2. * safe_s ? sqrt(safe_s) * sqrt(unsafe_s) : safe_s + (unsafe_s - safe_s) / 2.;
        if (!(middle_s > safe_s && middle_s < unsafe_s))
            break;
        if (ratio_for(search, middle_s, NULL) <= 1.)
            safe_s = middle_s;
        else
            unsafe_s = middle_s;
    }
    return safe_s;
}

/* The next time at which a limit of any emission changes its law. */
static double next_edge_s(struct search *search, double after_s) {
    double next_s = longest_s;
    for (size_t i = 0; i < search->output->count && search->status == BW_OK; i++) {
        struct train_case train = {search->table, &search->output->emissions[i], &search->viewing};
        struct edges edges;
        search->status = bw_hazard_edges(&train, &edges, search->error);
        for (size_t j = 0; j < edges.count && search->status == BW_OK; j++)
            if (edges.at_s[j] > after_s * (1. + 1e-12) && edges.at_s[j] < next_s)
                next_s = edges.at_s[j];
    }
    return next_s;
}

/* Goes from edge to edge to the first one that is not safe; in between the ratio never falls. */
static void solve(struct search *search, struct bw_permitted_time *time) {
    double safe_s = shortest_s;
    search->viewing.exposure_s = longest_s;
    if (!(ratio_for(search, shortest_s, NULL) <= 1.)) {
        time->exposure_s = 0.;
        return;
    }
    while (search->status == BW_OK && safe_s < longest_s) {
        search->viewing.exposure_s = longest_s;
        double edge_s = next_edge_s(search, safe_s);
        if (!(ratio_for(search, edge_s, NULL) <= 1.)) {
            time->exposure_s = close_in(search, safe_s, edge_s);
            return;
        }
        safe_s = edge_s;
    }
    *time = (struct bw_permitted_time){HUGE_VAL, true};
}

/* Longest exposure that keeps the limit at a distance, on the axis.
 * Given:    table, output; viewing  its exposure time is not used; distance_m  0 or more
 * Returned: time     infinite and unbounded if all times of the rule sets are safe; 0 if the shortest is not
 *           working  may be NULL
 * Returns:  BW_OK; BW_ARGUMENT; BW_OUT_OF_RANGE
 * Notes:    Every shorter exposure keeps the limit too. Between two edges of the limits the ratio never falls with the
 *           exposure; where printed rows do not meet it may (1956 and 2000 W/m2 at 10 s), hence the way from edge to
 *           edge, where the lower limit holds.
 * Tests:    test_hazard.c */
enum bw_status bw_hazard_permitted_time(const struct bw_table *table, const struct bw_output *output,
                                        const struct bw_viewing_case *viewing, double distance_m,
                                        struct bw_permitted_time *time, struct bw_working *working,
                                        struct bw_error *error) {
    struct search search = {table, output, *viewing, distance_m, error, BW_OK};
    *time = (struct bw_permitted_time){nan(""), false};
    if (!(distance_m >= 0.))
        return bw_error_set(error, BW_ARGUMENT, "distance is %g m; it must be 0 or more", distance_m);
    solve(&search, time);
    if (search.status == BW_OK && working != NULL) {
        bw_working_heading(working, "Longest exposure at %g m", distance_m);
        double used_s = time->unbounded ? longest_s : fmax(time->exposure_s, shortest_s);
        double ratio = ratio_for(&search, used_s, working);
        bw_working_step(working, "ratio", ratio, "", NULL, "largest sum of the ratios that add", "t = %.9g s", used_s);
        bw_working_step(working, "t", time->exposure_s, "s", NULL, "longest exposure with a ratio of 1 or below", NULL);
    }
    if (search.status != BW_OK)
        *time = (struct bw_permitted_time){nan(""), false};
    return search.status;
}
