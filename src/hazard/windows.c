/* Which windows of a train can be the worst against the limits: a handful, whatever the number of pulses.
 *
 * Between two time edges the limit H(t) is a power c t^p with 0 <= p <= 1, or the lowest of such powers: it never
 * falls, and it is concave. What the worst window of length t holds, w(t) pulses, stays at n from
 * t_n = (n-1) T + d to n T and climbs in a straight line to n + 1 at t_(n+1). The rule asks for the lowest H/w.
 *   1. Where w stays, H/w is lowest at the left end: at t_n, or at the edge if that comes later.
 *   2. Where w climbs, H/w is a concave function over a straight one, thus has no minimum inside: its lowest lies
 *      at an end. The left end, n T, is no lower than the place of 1; the right end is t_(n+1), or the edge.
 *   3. Over t_n, H/w = H((n-1) T + d) / n, again concave over straight in n: no minimum inside, so the first and
 *      the last t_n between the two edges suffice.
 * Hence the candidates: every edge, the t_n next above and next below it, and the exposure as the last edge.
 *
 * Windows of one pulse or less belong to the first rule, and a continuous exposure to the printed limit of its own
 * length. Printed rows do not quite meet (2e-3 and 1.90e-3 J/m2 at 5 us, 1956 and 2000 W/m2 at 10 s); the second rule
 * on parts of a single pulse would carry such a step into the limits of pulses that the tables give outright. */
#include "internal.h"

#include <math.h>

static void add_window(struct windows *windows, double time_s, double holds) {
    if (windows->count < WINDOWS_MAX && time_s > 0. && holds > 0.)
        windows->at[windows->count++] = (struct window){time_s, holds};
}

static void add_pulses(const struct bw_emission *emission, double pulses, double exposure_s, struct windows *windows) {
    double time_s = (pulses - 1.) / emission->repetition_rate_hz + emission->pulse_duration_s;
    if (pulses >= 2. && time_s <= exposure_s)
        add_window(windows, time_s, pulses);
}

static void add_edge(const struct bw_emission *emission, double edge_s, double exposure_s, struct windows *windows) {
    double holds = bw_train_window_energy(emission, edge_s) / emission->pulse_energy_j;
    if (holds > 1. || edge_s >= exposure_s)
        add_window(windows, edge_s, holds);
    double gaps = (edge_s - emission->pulse_duration_s) * emission->repetition_rate_hz;
    double above = ceil(gaps - 1e-14 * fabs(gaps)) + 1.;
    add_pulses(emission, above, exposure_s, windows);
    add_pulses(emission, above - 1., exposure_s, windows);
}

/* Given:    emission; edges  where the limits change their law; exposure_s  [s]
 * Returned: windows  none longer than the exposure; none of one pulse or less, except the exposure itself */
void bw_hazard_windows(const struct bw_emission *emission, const struct edges *edges, double exposure_s,
                       struct windows *windows) {
    windows->count = 0;
    if (emission->continuous) {
        add_window(windows, exposure_s, exposure_s);
        return;
    }
    add_pulses(emission, 2., exposure_s, windows);
    for (size_t i = 0; i < edges->count; i++)
        if (edges->at_s[i] < exposure_s)
            add_edge(emission, edges->at_s[i], exposure_s, windows);
    add_edge(emission, exposure_s, exposure_s, windows);
}
