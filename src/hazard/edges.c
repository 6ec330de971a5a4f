/* Times at which a limit changes its law: the edges of the printed rows, and the kinks that an extended source adds
 * where a time-dependent angle (alpha_max, the photochemical cone) passes its subtense. */
#include "internal.h"

#include <math.h>

/* A measuring cone narrower than the source admits only that share of the exposure. */
double bw_hazard_whole_limit_j_m2(const struct bw_limit *limit, double subtense_rad) {
    double wide = subtense_rad / limit->acceptance_rad;
    return limit->radiant_exposure_j_m2 * (wide > 1. ? wide * wide : 1.);
}

struct bw_exposure bw_hazard_exposure(const struct train_case *train, double time_s) {
    return (struct bw_exposure){
        .wavelength_nm = train->emission->wavelength_nm,
        .exposure_s = time_s,
        .subtense_rad = train->viewing->subtense_rad,
        .area_m2 = train->viewing->area_m2,
    };
}

/* Logarithm of the whole limit of each effect; NAN where the effect has none. */
static void log_limits(const struct train_case *train, double log_s, double limits[BW_EFFECTS]) {
    struct bw_limit_set set;
    struct bw_exposure exposure = bw_hazard_exposure(train, exp(log_s));
    for (size_t i = 0; i < BW_EFFECTS; i++)
        limits[i] = nan("");
    if (bw_limits(train->table, train->viewing->target, &exposure, &set, NULL, NULL) != BW_OK)
        return; /* the windows of this stretch report it */
    for (size_t i = 0; i < set.count; i++)
        limits[set.limits[i].effect] = log(bw_hazard_whole_limit_j_m2(&set.limits[i], train->viewing->subtense_rad));
}

/* A stretch of time between two edges, seen in logarithms, where a power law is a straight line. */
struct stretch {
    double from, to;
    double first[BW_EFFECTS], second[BW_EFFECTS], third[BW_EFFECTS], last[BW_EFFECTS]; /* at both ends and inside */
};
static const double hair = 1e-9, second_place = 0.1, third_place = 0.83;

static double place(const struct stretch *s, double share) {
    return s->from + (s->to - s->from) * share;
}

static void look(const struct train_case *train, struct stretch *s) {
    log_limits(train, place(s, hair), s->first);
    log_limits(train, place(s, second_place), s->second);
    log_limits(train, place(s, third_place), s->third);
    log_limits(train, place(s, 1. - hair), s->last);
}

/* Where the lines at both ends of a stretch meet, for the first effect that is not one straight line.
 * Returns: false if all are straight. meeting = middle if the lines do not meet inside. */
static bool bends(const struct stretch *s, double *meeting) {
    double length = s->to - s->from;
    for (size_t i = 0; i < BW_EFFECTS; i++) {
        double rise = s->last[i] - s->first[i];
        double off = fmax(fabs(s->first[i] + rise * second_place - s->second[i]),
                          fabs(s->first[i] + rise * third_place - s->third[i]));
        if (isnan(rise) || off <= 1e-8)
            continue;
        double left = (s->second[i] - s->first[i]) / (second_place * length);
        double right = (s->last[i] - s->third[i]) / ((1. - third_place) * length);
        *meeting = s->from + (rise - right * length) / (left - right);
        if (!(*meeting > s->from + hair && *meeting < s->to - hair))
            *meeting = place(s, 0.5);
        return true;
    }
    return false;
}

/* Splits a stretch until every part is a power law. A part too short to matter is left. */
static void add_kinks(const struct train_case *train, double from, double to, int depth, struct edges *edges) {
    struct stretch stretch = {.from = from, .to = to};
    double meeting;
    if (!(to - from > 1e-7) || depth == 0)
        return;
    look(train, &stretch);
    if (!bends(&stretch, &meeting) || edges->count == EDGES_MAX)
        return;
    edges->at_s[edges->count++] = exp(meeting);
    add_kinks(train, from, meeting, depth - 1, edges);
    add_kinks(train, meeting, to, depth - 1, edges);
}

static void sort(struct edges *edges) {
    for (size_t i = 1; i < edges->count; i++)
        for (size_t j = i; j > 0 && edges->at_s[j] < edges->at_s[j - 1]; j--) {
            double swapped = edges->at_s[j];
            edges->at_s[j] = edges->at_s[j - 1];
            edges->at_s[j - 1] = swapped;
        }
}

enum bw_status bw_hazard_edges(const struct train_case *train, struct edges *edges, struct bw_error *error) {
    struct bw_exposure exposure = bw_hazard_exposure(train, train->viewing->exposure_s);
    edges->count = bw_limits_time_edges(train->table, train->viewing->target, &exposure, edges->at_s, EDGES_MAX);
    size_t printed = edges->count;
    if (train->viewing->subtense_rad > 0.)
        for (size_t i = 0; i + 1 < printed && edges->at_s[i] < exposure.exposure_s; i++)
            add_kinks(train, log(edges->at_s[i]), log(edges->at_s[i + 1]), 24, edges);
    if (edges->count >= EDGES_MAX)
        return bw_error_set(error, BW_OUT_OF_RANGE, "the limits at %g nm have more than %d edges in time",
                            exposure.wavelength_nm, EDGES_MAX - 1);
    sort(edges);
    return BW_OK;
}
