/* The limits between two edges as powers of time, so that millions of windows cost little. A law that turns out not to
 * be such a power is asked of the tables each time. */
#include "internal.h"

#include <math.h>

static const double places[] = {0.02, 0.21, 0.47, 0.74, 0.98}; /* of the logarithm of the stretch */
enum { PLACES = sizeof places / sizeof *places, MIDDLE = 2 };
static const double agreement = 8e-15; /* what rounding may make of it */

static double value_of(const struct train_case *train, const struct bw_limit *limit, bool narrow) {
    double whole_j_m2 = bw_hazard_whole_limit_j_m2(limit, train->viewing->subtense_rad);
    return narrow ? whole_j_m2 * limit->aperture_m * limit->aperture_m : whole_j_m2;
}

/* By square roots: as good as pow() and much faster. */
static double raised(double time_s, int eighths) {
    double half, quarter;
    switch (eighths) {
    case 0:
        return 1.;
    case 2:
        return sqrt(sqrt(time_s));
    case 4:
        return sqrt(time_s);
    case 6:
        half = sqrt(time_s);
        quarter = sqrt(half);
        return half * quarter;
    case 8:
        return time_s;
    default:
        return pow(time_s, eighths / 8.);
    }
}

/* NAN if the effect has no limit there. */
static double asked(const struct train_case *train, const struct law *law, double time_s) {
    struct bw_limit_set set;
    struct bw_exposure exposure = bw_hazard_exposure(train, time_s);
    if (bw_limits(train->table, train->viewing->target, &exposure, &set, NULL, NULL) != BW_OK)
        return nan("");
    for (size_t i = 0; i < set.count; i++)
        if (set.limits[i].effect == law->effect)
            return value_of(train, &set.limits[i], law->narrow);
    return nan("");
}

double bw_hazard_law(const struct laws *laws, size_t which, double time_s) {
    const struct law *law = &laws->at[which];
    return law->power ? law->scale * raised(time_s, law->eighths) : asked(laws->train, law, time_s);
}

/* Finds the power that fits at all places. */
static void fit(const double times_s[PLACES], const double values[PLACES], struct law *law) {
    double slope = log(values[PLACES - 1] / values[0]) / log(times_s[PLACES - 1] / times_s[0]);
    law->power = slope > -0.1 && slope < 1.1;
    law->eighths = law->power ? (int)lround(8. * slope) : 0;
    law->scale = values[MIDDLE] / raised(times_s[MIDDLE], law->eighths);
    for (size_t i = 0; i < PLACES; i++)
        law->power = law->power && fabs(law->scale * raised(times_s[i], law->eighths) - values[i]) <=
                                       agreement * values[i];
}

/* Given:    from_s, to_s  two edges; varies
 * Returned: laws  of every effect that has a limit between them */
void bw_hazard_laws(const struct train_case *train, double from_s, double to_s, const bool varies[BW_EFFECTS],
                    struct laws *laws) {
    double times_s[PLACES], values[BW_EFFECTS][2][PLACES];
    bool has[BW_EFFECTS] = {false};
    laws->train = train;
    laws->count = 0;
    for (size_t k = 0; k < PLACES; k++) {
        struct bw_limit_set set;
        times_s[k] = from_s * pow(to_s / from_s, places[k]);
        struct bw_exposure exposure = bw_hazard_exposure(train, times_s[k]);
        if (bw_limits(train->table, train->viewing->target, &exposure, &set, NULL, NULL) != BW_OK)
            return; /* no limit there: the windows that end at the edges report it */
        for (size_t i = 0; i < set.count; i++) {
            has[set.limits[i].effect] = true;
            values[set.limits[i].effect][0][k] = value_of(train, &set.limits[i], false);
            values[set.limits[i].effect][1][k] = value_of(train, &set.limits[i], true);
        }
    }
    for (size_t effect = 0; effect < BW_EFFECTS; effect++)
        for (int narrow = 0; has[effect] && narrow < (varies[effect] ? 2 : 1); narrow++) {
            struct law law = {.effect = (enum bw_effect)effect, .narrow = narrow == 1};
            fit(times_s, values[effect][narrow], &law);
            laws->at[laws->count++] = law;
        }
}
