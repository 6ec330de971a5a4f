/* What a regular train of rectangular pulses sends in a window of time, levels and all. Closed forms: the cost does not
 * depend on the number of pulses.
 *
 * Pulse m begins at x(m) = m T + g floor(m / B) + h floor(m / C): B pulses a burst, C a gate (a multiple of B), T from
 * pulse to pulse; g is by how much the step into the next burst is longer than T, and h the same for the next gate on
 * top of g. Which window of n pulses is the shortest? With k = n - 1 it lasts, from its first pulse i,
 *   x(i+k) - x(i) + d,   x(i+k) - x(i) = k T + g (floor(k/B) + e) + h (floor(k/C) + f),
 * where e and f are 0 or 1: a window crosses one boundary more than it must if it opens late enough in its block. Which
 * pairs (e, f) there are follows from k = q C + r, r = p B + s (s < B, r < C):
 *   (0,0) always, by i = 0;
 *   (1,1) if s > 0, by i = C - 1, the last pulse of a gate: every boundary comes at once;
 *   (1,0) if s > 0 and p <= C/B - 2, by i = B - 1, the last pulse of a first burst; if p = C/B - 1 a window that
 *         crosses one more burst crosses the gate too;
 *   (0,1) if p > 0, by i = C - B, the first pulse of a last burst; if p = 0 (and s > 0) opening s or less before the
 *         end of the gate, which (0,1) needs, is (1,1).
 * So one of the four is the shortest for every n, and i = 0 alone where g and h are not negative.
 * What a window of length t holds is the larger, the shorter n pulses are for every n; hence the window that holds the
 * most opens with one of the same four. (A window may as well close with a pulse: the mirror image of the train is the
 * same train. In between it never holds more: as it moves on, it gains or loses evenly until one end meets a pulse's.)
 *
 * A train that ends after N pulses has no window of more than N. Of those that open with i > 0 some may lie beyond its
 * end: where g or h is negative the result is then an upper bound, the safe side. */
#include "internal.h"

#include <math.h>

static const double rounding = 1e-14; /* times this close are one: 0.3 s of 10 Hz are 3 periods */

struct place {
    double gate, burst, pulse; /* number of each in what holds it */
};

static struct place place_of(const struct bw_emission *emission, double index) {
    struct place place = {0., 0., index};
    if (emission->level_count > 1) {
        double in_gate = emission->levels[0].holds * emission->levels[1].holds;
        place.gate = floor(place.pulse / in_gate);
        place.pulse -= place.gate * in_gate;
    }
    if (emission->level_count > 0) {
        place.burst = floor(place.pulse / emission->levels[0].holds);
        place.pulse -= place.burst * emission->levels[0].holds;
    }
    return place;
}

double bw_train_span_s(const struct bw_emission *emission, double first, double next) {
    if (emission->pulses != NULL)
        return emission->pulses[(size_t)(first + next)].start_s - emission->pulses[(size_t)first].start_s;
    if (!(next > 0.))
        return 0.;
    if (emission->level_count == 0)
        return next / emission->repetition_rate_hz;
    struct place from = place_of(emission, first), to = place_of(emission, first + next);
    double span_s = (to.burst - from.burst) * emission->levels[0].period_s +
                    (to.pulse - from.pulse) / emission->repetition_rate_hz;
    return emission->level_count > 1 ? span_s + (to.gate - from.gate) * emission->levels[1].period_s : span_s;
}

/* About how many pulses begin before a time since the start of the train: off by one or two at most. */
static double pulses_before(const struct bw_emission *emission, double time_s) {
    double pulses = 0., most = HUGE_VAL;
    for (size_t i = emission->level_count; i-- > 0;) {
        double each = emission->levels[0].holds * (i > 0 ? emission->levels[1].holds : 1.);
        double whole = floor(time_s / emission->levels[i].period_s);
        time_s -= whole * emission->levels[i].period_s;
        double before = fmin(pulses + whole * each, most);
        most = fmin(before + each, most);
        pulses = before;
    }
    return fmin(pulses + fmax(0., ceil(time_s * emission->repetition_rate_hz)), most);
}

double bw_train_pulses_from(const struct bw_emission *emission, double first, double window_s) {
    double most = emission->pulse_count > 0 ? (double)emission->pulse_count : HUGE_VAL;
    if (!(window_s >= 0.))
        return nan("");
    if (!(window_s > 0.))
        return 0.;
    if (emission->pulse_count == 1 || !(window_s < HUGE_VAL))
        return most;
    double end_s = window_s * (1. - rounding);
    double pulses = fmax(1., pulses_before(emission, bw_train_span_s(emission, 0., first) + window_s) - first);
    for (int i = 0; i < 4 && bw_train_span_s(emission, first, pulses) < end_s; i++)
        pulses++;
    for (int i = 0; i < 4 && pulses > 1. && !(bw_train_span_s(emission, first, pulses - 1.) < end_s); i++)
        pulses--;
    return fmin(pulses, most);
}

size_t bw_train_starts(const struct bw_emission *emission, double first[BW_STARTS_MAX]) {
    size_t count = 0;
    double even_s = 1. / emission->repetition_rate_hz, in_burst = emission->levels[0].holds, bursts = 1.;
    bool closer = false;
    for (size_t i = 0; i < emission->level_count; i++) {
        closer = closer || emission->levels[i].period_s < emission->levels[i].holds * even_s;
        even_s = emission->levels[i].period_s;
    }
    first[count++] = 0.;
    if (!closer)
        return count;
    if (emission->level_count > 1)
        bursts = emission->levels[1].holds;
    first[count++] = in_burst - 1.;
    if (bursts > 1.) {
        first[count++] = in_burst * (bursts - 1.);
        first[count++] = in_burst * bursts - 1.;
    }
    return count;
}

/* In pulses. */
static double held_from(const struct bw_emission *emission, double first, double window_s) {
    double pulses = bw_train_pulses_from(emission, first, window_s);
    if (!(pulses > 0.) || !(pulses < HUGE_VAL))
        return pulses;
    double last_s = window_s - bw_train_span_s(emission, first, pulses - 1.);
    return pulses - 1. + fmin(1., fmax(0., last_s) / emission->pulse_duration_s);
}

/* Largest energy in any window of a length: the window opens with a pulse and closes with, or within, another.
 * Given:    emission
 *           window_s   t   length [s], 0 or more
 * Returns:  W [J]; NAN if the length is NaN or negative
 * Notes:    W is continuous and never falls with t. */
double bw_train_window_energy(const struct bw_emission *emission, double window_s) {
    double first[BW_STARTS_MAX], largest = 0.;
    if (!(window_s >= 0.))
        return nan("");
    if (emission->continuous)
        return emission->average_power_w * window_s;
    if (emission->pulses != NULL)
        return bw_beam_list_window_energy(emission, window_s);
    size_t count = bw_train_starts(emission, first);
    for (size_t i = 0; i < count; i++)
        largest = fmax(largest, held_from(emission, first[i], window_s));
    return emission->pulse_energy_j * largest;
}

/* Most pulses, whole or begun, of any exposure of a length; it opens with a pulse.
 * Given:    emission
 *           exposure_s   length [s], 0 or more
 * Returns:  number of pulses, 1 for a continuous emission, 0 for no time; NAN if the time is NaN or negative */
double bw_train_pulse_count(const struct bw_emission *emission, double exposure_s) {
    double first[BW_STARTS_MAX], largest = 0.;
    if (!(exposure_s >= 0.))
        return nan("");
    if (!(exposure_s > 0.))
        return 0.;
    if (emission->continuous)
        return 1.;
    if (emission->pulses != NULL)
        return bw_beam_list_pulse_count(emission, exposure_s);
    size_t count = bw_train_starts(emission, first);
    for (size_t i = 0; i < count; i++)
        largest = fmax(largest, bw_train_pulses_from(emission, first[i], exposure_s));
    return largest;
}
