/* Longest exposure that keeps the limit at a place. */
#include "internal.h"

#include <math.h>

static const double shortest_s = 1e-13, longest_s = 3e4; /* what the rule sets cover */

struct search {
    const struct bw_table *table;
    const struct bw_output *const *outputs;
    size_t count;
    struct bw_viewing_case viewing;
    bw_ratio_after *ratio_after;
    void *context;
    struct bw_error *error;
    enum bw_status status;
};

static double ratio_for(struct search *search, double exposure_s) {
    double ratio = nan("");
    if (search->status == BW_OK)
        search->status = search->ratio_after(exposure_s, search->context, &ratio, search->error);
    return search->status == BW_OK ? ratio : nan("");
}

static const double close_enough = 1e-12;

/* A time that is safe and a longer one that is not, with their ratios. */
struct bracket {
    double safe_s, unsafe_s, safe_ratio, unsafe_ratio;
};

static void try_time(struct search *search, struct bracket *bracket, double time_s) {
    if (!(time_s > bracket->safe_s && time_s < bracket->unsafe_s))
        return;
    double ratio = ratio_for(search, time_s);
    if (ratio <= 1.) {
        bracket->safe_s = time_s;
        bracket->safe_ratio = ratio;
    } else {
        bracket->unsafe_s = time_s;
        bracket->unsafe_ratio = ratio;
    }
}

/* Where a power law through both ends has the ratio 1; tried a hair to each side. Most ratios are power laws. */
static void try_power_law(struct search *search, struct bracket *bracket) {
    double rise = log(bracket->unsafe_ratio / bracket->safe_ratio);
    double time_s = bracket->safe_s * exp(log(bracket->unsafe_s / bracket->safe_s) * -log(bracket->safe_ratio) / rise);
    try_time(search, bracket, time_s * (1. - close_enough / 4.));
    try_time(search, bracket, time_s * (1. + close_enough / 4.));
}

/* Alternates power laws, which meet most ratios at once, and halvings (first of the factor, then of the difference),
 * which meet all, until safe and unsafe are neighbours to 1e-12.
 * Returns: the safe one */
static double close_in(struct search *search, struct bracket bracket) {
    while (search->status == BW_OK && bracket.unsafe_s > bracket.safe_s * (1. + close_enough)) {
        double safe_s = bracket.safe_s, unsafe_s = bracket.unsafe_s;
        try_power_law(search, &bracket);
        if (bracket.unsafe_s <= bracket.safe_s * (1. + close_enough))
            break;
        double wide = bracket.unsafe_s / bracket.safe_s;
        try_time(search, &bracket,
                 wide > 2. ? bracket.safe_s * sqrt(wide) : bracket.safe_s + (bracket.unsafe_s - bracket.safe_s) / 2.);
        if (!(bracket.safe_s > safe_s || bracket.unsafe_s < unsafe_s))
            break; /* neighbouring numbers */
    }
    return bracket.safe_s;
}

/* The next time at which a limit of any emission changes its law. */
static double next_edge_s(struct search *search, double after_s) {
    double next_s = longest_s;
    for (size_t i = 0; i < search->count; i++)
        for (size_t k = 0; k < search->outputs[i]->count && search->status == BW_OK; k++) {
            struct train_case train = {search->table, &search->outputs[i]->emissions[k], &search->viewing};
            struct edges edges;
            search->status = bw_hazard_edges(&train, &edges, search->error);
            for (size_t j = 0; search->status == BW_OK && j < edges.count; j++)
                if (edges.at_s[j] > after_s * (1. + 1e-12) && edges.at_s[j] < next_s)
                    next_s = edges.at_s[j];
        }
    return next_s;
}

/* Goes from edge to edge to the first one that is not safe; in between the ratio never falls. */
static void solve(struct search *search, struct bw_permitted_time *time) {
    struct bracket bracket = {.safe_s = shortest_s, .safe_ratio = ratio_for(search, shortest_s)};
    search->viewing.exposure_s = longest_s;
    if (!(bracket.safe_ratio <= 1.)) {
        time->exposure_s = 0.;
        return;
    }
    while (search->status == BW_OK && bracket.safe_s < longest_s) {
        bracket.unsafe_s = next_edge_s(search, bracket.safe_s);
        bracket.unsafe_ratio = ratio_for(search, bracket.unsafe_s);
        if (!(bracket.unsafe_ratio <= 1.)) {
            time->exposure_s = close_in(search, bracket);
            return;
        }
        bracket.safe_s = bracket.unsafe_s;
        bracket.safe_ratio = bracket.unsafe_ratio;
    }
    *time = (struct bw_permitted_time){HUGE_VAL, true};
}

/* How long until the limit is reached.
 * Given:    table; outputs, count  all that the ratio is of; viewing  target, subtense and area of skin; ratio_after
 *           the ratio at the place after an exposure of that length; context  for it
 * Returned: time     infinite and unbounded if all times of the rule sets are safe; 0 if the shortest is not
 * Returns:  BW_OK; BW_ARGUMENT; BW_OUT_OF_RANGE; whatever ratio_after returns
 * Notes:    Every shorter exposure keeps the limit too. Between two edges of the limits the ratio never falls with the
 *           exposure; where printed rows do not meet it may (1956 and 2000 W/m2 at 10 s), hence the way from edge to
 *           edge, where the lower limit holds.
 * Tests:    test_hazard.c, test_hazard_time.c */
enum bw_status bw_hazard_time_to_limit(const struct bw_table *table, const struct bw_output *const *outputs,
                                       size_t count, const struct bw_viewing_case *viewing, bw_ratio_after *ratio_after,
                                       void *context, struct bw_permitted_time *time, struct bw_error *error) {
    struct search search = {table, outputs, count, *viewing, ratio_after, context, error, BW_OK};
    *time = (struct bw_permitted_time){nan(""), false};
    if (count == 0)
        return bw_error_set(error, BW_ARGUMENT, "nothing is emitted");
    solve(&search, time);
    if (search.status != BW_OK)
        *time = (struct bw_permitted_time){nan(""), false};
    return search.status;
}

/* ---- on the axis of one beam -------------------------------------------------------------------- */

struct on_axis {
    const struct bw_table *table;
    const struct bw_output *output;
    struct bw_viewing_case viewing;
    double distance_m;
};

static enum bw_status ratio_on_axis(double exposure_s, void *context, double *ratio, struct bw_error *error) {
    struct on_axis *at = context;
    struct bw_hazard hazard;
    at->viewing.exposure_s = exposure_s;
    enum bw_status status = bw_hazard_prepare(at->table, at->output, &at->viewing, &hazard, NULL, error);
    if (status == BW_OK)
        *ratio = bw_hazard_ratio(&hazard, at->distance_m);
    return status;
}

/* Longest exposure that keeps the limit at a distance, on the axis.
 * Given:    table, output; viewing  its exposure time is not used; distance_m  0 or more
 * Returned: time     as bw_hazard_time_to_limit
 *           working  may be NULL
 * Returns:  BW_OK; BW_ARGUMENT; BW_OUT_OF_RANGE
 * Tests:    test_hazard.c */
enum bw_status bw_hazard_permitted_time(const struct bw_table *table, const struct bw_output *output,
                                        const struct bw_viewing_case *viewing, double distance_m,
                                        struct bw_permitted_time *time, struct bw_working *working,
                                        struct bw_error *error) {
    struct on_axis at = {table, output, *viewing, distance_m};
    *time = (struct bw_permitted_time){nan(""), false};
    if (!(distance_m >= 0.))
        return bw_error_set(error, BW_ARGUMENT, "distance is %g m; it must be 0 or more", distance_m);
    enum bw_status status = bw_hazard_time_to_limit(table, &output, 1, viewing, ratio_on_axis, &at, time, error);
    if (status != BW_OK || working == NULL)
        return status;
    double used_s = time->unbounded ? longest_s : fmax(time->exposure_s, shortest_s);
    struct bw_hazard hazard;
    bw_working_heading(working, "Longest exposure at %g m", distance_m);
    bw_working_step(working, "te", time->exposure_s, "s", NULL, NULL, NULL);
    bw_working_note(working,
                    "longest exposure with a sum of 1 or below, searched between the times where a limit changes "
                    "its law; the steps below hold for %.10g s",
                    used_s);
    at.viewing.exposure_s = used_s;
    status = bw_hazard_prepare(table, output, &at.viewing, &hazard, working, error);
    if (status == BW_OK) {
        bw_working_heading(working, "Ratio after %.10g s", used_s);
        bw_hazard_ratio_working(&hazard, distance_m, working);
    }
    return status;
}
