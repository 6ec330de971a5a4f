/* A shaped hazard's ratio in steps of distance, bounded once, so that a map may ask for it often. */
#include "internal.h"

#include <math.h>

static const double first_m = 2e-3; /* nearer, all is one step */

/* The step that holds a distance: edge[step] <= distance < edge[step + 1]. */
static size_t step_of(const struct bw_ladder *ladder, double distance_m) {
    size_t low = 0, high = ladder->steps;
    while (high - low > 1) {
        size_t middle = (low + high) / 2;
        if (ladder->edge_m[middle] <= distance_m)
            low = middle;
        else
            high = middle;
    }
    return low;
}

double bw_hazard_ladder_envelope(const struct bw_hazard *hazard, double distance_m) {
    return hazard->ladder.envelope[step_of(&hazard->ladder, distance_m)];
}

static void raise_worst(struct bw_ladder *ladder, const double ratios[BW_TERMS_MAX], size_t count) {
    for (size_t i = 0; i < count; i++)
        if (!(ratios[i] <= ladder->worst[i]) && !isnan(ladder->worst[i]))
            ladder->worst[i] = ratios[i];
}

/* Bound on a step, halved where both halves together are tighter by more than a tenth. */
static double bound_step(struct bw_hazard *hazard, double near_m, double far_m, int depth) {
    double ratios[BW_TERMS_MAX], ends[BW_TERMS_MAX];
    bw_hazard_bounds(hazard, near_m, far_m, BW_EMISSIONS_MAX, ratios);
    double bound = bw_hazard_largest_sum(hazard, ratios, BW_EMISSIONS_MAX);
    bw_hazard_term_ratios(hazard, near_m, ends);
    double here = fmax(bw_hazard_largest_sum(hazard, ends, BW_EMISSIONS_MAX), bw_hazard_ratio(hazard, far_m));
    if (depth == 0 || isnan(bound) || bound <= 1.05 * here) {
        raise_worst(&hazard->ladder, ratios, hazard->term_count);
        return bound;
    }
    double middle_m = near_m + (far_m - near_m) / 2.;
    double first = bound_step(hazard, near_m, middle_m, depth - 1);
    double second = bound_step(hazard, middle_m, far_m, depth - 1);
    return first >= second || isnan(first) ? first : second;
}

/* Steps by equal factors from the stand-off to where all has settled. */
static void place_edges(struct bw_ladder *ladder, double from_m, double settled_m) {
    double low_m = fmax(from_m, first_m);
    ladder->steps = settled_m > low_m ? BW_LADDER_MAX : 1;
    ladder->edge_m[0] = from_m;
    size_t first = from_m < low_m ? 1 : 0;
    for (size_t i = first; i < ladder->steps; i++)
        ladder->edge_m[i] = low_m * pow(settled_m / low_m, (double)(i - first) / (double)(ladder->steps - first));
    ladder->edge_m[ladder->steps] = settled_m;
}

/* How often a step is halved: heads of many emitters cost more, and get coarser bounds. */
static int halvings(const struct bw_output *output) {
    for (size_t i = 0; i < output->count; i++)
        if (output->beams[i].cluster.count > 4)
            return 1;
    return 3;
}

/* Fills the ladder.
 * Given:    hazard   prepared
 * Returned: hazard   its ladder; none where nothing is shaped or all has settled at the stand-off
 * Notes:    A ratio that cannot be had is NAN in the ladder as it is everywhere: not safe. */
void bw_hazard_prepare_envelope(struct bw_hazard *hazard) {
    struct bw_ladder *ladder = &hazard->ladder;
    double ratios[BW_TERMS_MAX];
    ladder->steps = 0;
    if (!hazard->shaped || hazard->term_count == 0)
        return;
    double from_m = hazard->output->stand_off_m, settled_m = bw_hazard_settled_m(hazard, BW_EMISSIONS_MAX);
    bw_hazard_term_ratios(hazard, settled_m, ratios);
    for (size_t i = 0; i < hazard->term_count; i++)
        ladder->worst[i] = ratios[i];
    double beyond = bw_hazard_ratio(hazard, settled_m);
    if (!(settled_m > from_m))
        return;
    struct bw_ladder built = *ladder;
    place_edges(&built, from_m, settled_m);
    for (size_t i = built.steps; i-- > 0;) {
        double bound = bound_step(hazard, built.edge_m[i], built.edge_m[i + 1], halvings(hazard->output));
        beyond = beyond >= bound || isnan(beyond) ? beyond : bound;
        built.envelope[i] = beyond;
    }
    for (size_t i = 0; i < hazard->term_count; i++)
        built.worst[i] = ladder->worst[i];
    *ladder = built;
}
