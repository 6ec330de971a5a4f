/* Which windows of a regular train can be the worst against the limits: a handful, whatever the number of pulses.
 *
 * Between two time edges the limit H(t) is a power c t^p with 0 <= p <= 1, or the lowest of such powers: it never
 * falls, and it is concave. The rule asks for the lowest H/w over all windows, w being what a window holds. Every
 * window worth looking at opens with one of a few pulses (src/beam/train.c); take one of these.
 *   1. As its end moves on through a gap, w stays and H does not fall: H/w is lowest where the last pulse ends, or at
 *      the edge if that comes later.
 *   2. As its end moves on through a pulse, w climbs in a straight line: H/w is concave over straight and has no
 *      minimum inside. The lowest lies at the end of the pulse, at the edge, or where the pulse begins, that is at 1.
 * So between two edges only windows that close with the end of a pulse count, and at each edge the window that ends
 * there. Of the former,
 *   3. the lowest H/w is r if all points (t, w) lie below the curve w = H(t)/r and one touches it. What lies below a
 *      concave curve is convex, so the point that touches is a corner of the hull of all points. The pulses of a burst
 *      are points in a row, evenly apart: the first and the last of them are its corners. The bursts of a gate are the
 *      same points again and again, moved evenly: the corners of them all are corners of the first or of the last
 *      burst. So with gates. A burst or a gate that the edge cuts stands by itself.
 * Hence the candidates: the first and the last pulse of the first, second, last but one and last burst of the first,
 * second, last but one and last gate between two edges, and every edge, the exposure as the last.
 *
 * Windows of one pulse or less belong to the first rule, and a continuous exposure to the printed limit of its own
 * length. Printed rows do not quite meet (2e-3 and 1.90e-3 J/m2 at 5 us, 1956 and 2000 W/m2 at 10 s); the second rule
 * on parts of a single pulse would carry such a step into the limits of pulses that the tables give outright. */
#include "internal.h"

#include <math.h>

struct walk {
    const struct bw_emission *emission;
    double exposure_s;
    double first; /* the pulse that opens the windows */
    window_visitor *visit;
    void *context;
};

static double length_s(const struct walk *walk, double pulses) {
    return bw_train_span_s(walk->emission, walk->first, pulses - 1.) + walk->emission->pulse_duration_s;
}

static enum bw_status visit_pulses(const struct walk *walk, double pulses) {
    struct window window = {length_s(walk, pulses), pulses, false};
    if (!(pulses >= 2. && window.time_s <= walk->exposure_s))
        return BW_OK;
    return walk->visit(&window, walk->context);
}

/* Most whole pulses in a window of a length. */
static double whole_pulses(const struct walk *walk, double window_s) {
    double most = walk->emission->pulse_count > 0 ? (double)walk->emission->pulse_count : HUGE_VAL;
    double pulses = bw_train_pulses_from(walk->emission, walk->first, fmax(0., window_s));
    while (pulses > 0. && !(length_s(walk, pulses) <= window_s))
        pulses--;
    if (pulses + 1. <= most && length_s(walk, pulses + 1.) <= window_s)
        pulses++;
    return pulses;
}

/* Corners of the windows that close with one of these pulses, by number in the train. level: how many levels of the
 * train may lie between the two. */
static enum bw_status visit_range(const struct walk *walk, size_t level, double from, double to) {
    enum bw_status status = BW_OK;
    if (!(from <= to))
        return BW_OK;
    if (level == 0) {
        status = visit_pulses(walk, from - walk->first + 1.);
        return status == BW_OK && from < to ? visit_pulses(walk, to - walk->first + 1.) : status;
    }
    double size = walk->emission->levels[0].holds * (level > 1 ? walk->emission->levels[1].holds : 1.);
    double low = floor(from / size), high = floor(to / size), last = -1.;
    const double blocks[] = {low, low + 1., high - 1., high};
    for (size_t i = 0; i < 4 && status == BW_OK; i++)
        if (blocks[i] > last && blocks[i] >= low && blocks[i] <= high) {
            last = blocks[i];
            status = visit_range(walk, level - 1, fmax(from, last * size), fmin(to, (last + 1.) * size - 1.));
        }
    return status;
}

/* Windows that close with the end of a pulse, longer than low and at most high. */
static enum bw_status visit_between(const struct walk *walk, double low_s, double high_s) {
    double before = whole_pulses(walk, low_s), last = whole_pulses(walk, high_s);
    enum bw_status status = visit_pulses(walk, before);
    if (status != BW_OK)
        return status;
    return visit_range(walk, walk->emission->level_count, walk->first + fmax(before, 1.), walk->first + last - 1.);
}

static enum bw_status visit_edge(const struct walk *walk, double edge_s) {
    double holds = bw_train_window_energy(walk->emission, edge_s) / walk->emission->pulse_energy_j;
    struct window window = {edge_s, holds, holds <= 1.};
    if (!(window.time_s > 0. && window.holds > 0.) || (window.alone && edge_s < walk->exposure_s))
        return BW_OK;
    return walk->visit(&window, walk->context);
}

/* Given:    emission  no list; edges  where the limits change their law, ascending; exposure_s  [s]
 * Returned: by visit: windows none longer than the exposure; none of one pulse or less, except the exposure itself
 * Returns:  BW_OK; what visit returns */
enum bw_status bw_hazard_windows(const struct bw_emission *emission, const struct edges *edges, double exposure_s,
                                 window_visitor *visit, void *context) {
    struct walk walk = {emission, exposure_s, 0., visit, context};
    double first[BW_STARTS_MAX], low_s = 0.;
    if (emission->continuous)
        return visit(&(struct window){exposure_s, exposure_s, false}, context);
    size_t count = bw_train_starts(emission, first);
    enum bw_status status = BW_OK;
    for (size_t i = 0; i <= edges->count && status == BW_OK && low_s < exposure_s; i++) {
        double high_s = i < edges->count ? fmin(edges->at_s[i], exposure_s) : exposure_s;
        for (size_t j = 0; j < count && status == BW_OK; j++) {
            walk.first = first[j];
            status = visit_between(&walk, low_s, high_s);
        }
        if (status == BW_OK)
            status = visit_edge(&walk, high_s);
        low_s = high_s;
    }
    return status;
}
