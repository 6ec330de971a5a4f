/* How many groups the pulses of a regular train form: pulses within Ti (Tmin) count as one.
 *
 * Pulses each of which follows the one before within Ti are a run. A run counts as so many groups as Ti, laid end to
 * end from its first pulse, begin before its last pulse has begun, floor(span / Ti) + 1, and never more than its pulses.
 * Where pulses of a burst are within Ti and the bursts are not, every burst is a run; where the bursts are too and the
 * gates are not, every gate is. Where instead the farther are grouped and the nearer are not (bursts that follow each
 * other more closely than their pulses do), every pulse is counted: the stricter side. */
#include "internal.h"

#include <math.h>

double bw_hazard_groups_in_run(double pulses, double span_s, double ti_s) {
    double groups = span_s / ti_s;
    return fmin(pulses, floor(groups * (1. + 1e-12)) + 1.);
}

struct runs {
    const struct bw_emission *emission;
    double ti_s;
    double size; /* pulses that make one run; HUGE_VAL: all of them */
};

static double run(const struct runs *runs, double from, double to) {
    return bw_hazard_groups_in_run(to - from + 1., bw_train_span_s(runs->emission, from, to - from), runs->ti_s);
}

/* Groups of the pulses from one number to another. */
static double groups_between(const struct runs *runs, double from, double to) {
    double low = floor(from / runs->size), high = floor(to / runs->size);
    if (!(low < high))
        return run(runs, from, to);
    return run(runs, from, (low + 1.) * runs->size - 1.) + run(runs, high * runs->size, to) +
           (high - low - 1.) * run(runs, 0., runs->size - 1.);
}

/* Given:    emission  no list; ti_s  grouping time, 0 = none; window_s  the time in which pulses are counted
 * Returns:  N in the worst window; of a train that ends, with bursts, at least that
 * Notes:    The window opens with the first or last pulse of a first or last burst. Take one that touches a run at each
 *           of its ends, and shift: what the one end loses the other gains, and floor(a) + floor(b) <= floor(a + b), so
 *           one of the two may as well be whole, or be one pulse.   Tests: test_hazard_pulses.c, against all windows */
double bw_hazard_groups(const struct bw_emission *emission, double ti_s, double window_s) {
    struct runs runs = {emission, ti_s, HUGE_VAL};
    double most = 0., in_burst = emission->levels[0].holds, bursts = emission->levels[1].holds;
    bool within[BW_LEVELS_MAX + 1], pulses_alone = false;
    double sizes[BW_LEVELS_MAX] = {in_burst, in_burst * bursts};
    const double starts[] = {0., in_burst - 1., in_burst * (bursts - 1.), in_burst * bursts - 1.};
    for (size_t i = 0; i <= emission->level_count; i++) {
        double last = i > 0 ? sizes[i - 1] - 1. : 0.;
        within[i] = bw_train_span_s(emission, last, 1.) <= ti_s * (1. + 1e-12);
        pulses_alone = pulses_alone || !within[0] || (i > 0 && within[i] && !within[i - 1]);
        if (i > 0 && within[i - 1] && !within[i])
            runs.size = sizes[i - 1];
    }
    if (pulses_alone)
        return bw_train_pulse_count(emission, window_s);
    for (size_t i = 0; i < (emission->level_count > 1 ? 4u : emission->level_count > 0 ? 2u : 1u); i++) {
        double pulses = bw_train_pulses_from(emission, starts[i], window_s);
        if (pulses > 0.)
            most = fmax(most, groups_between(&runs, starts[i], starts[i] + pulses - 1.));
    }
    if (emission->pulse_count > 0) /* some of these windows may lie beyond its end: no more than all of it */
        most = fmin(most, groups_between(&runs, 0., (double)emission->pulse_count - 1.));
    return most;
}
