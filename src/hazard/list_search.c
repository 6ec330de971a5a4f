/* The worst windows of a list of n pulses between two time edges, in about n log n steps and exactly.
 *
 * As for a regular train (windows.c), between two edges only windows count that open with the start of a pulse and
 * close with the end of one: as an end moves through a gap the window grows for nothing; as it moves through a pulse the
 * limit over the energy is concave over straight. Two pulses at least: one alone is under rule 1, and a window that
 * shrinks to one on the way is no stricter than that pulse. What a window from pulse i to pulse j holds and how long it is are
 *   w = S(j) - S(i-1),   t = e(j) - s(i),   so (t, w) = (e(j), S(j)) + (-s(i), -S(i-1)):
 * a point of J and a point of I added. The limit is concave between two edges, so the windows with the most energy for
 * their limit, by whatever limit, are corners of the upper hull of all points (t, w).
 *
 * Were every i allowed with every j, the hull would be that of J plus that of I, corner by corner, as two hulls are
 * added: their sides put one after the other by slope. Allowed are those with j > i and t between the edges: for each j
 * a range of i, and both ends of the range never fall as j grows. Halving the list again and again, each j takes its range
 * as a few of the halves, those that lie in it whole and whose double does not; the j that take one half are two
 * stretches at most, on either side of those that take its double. So all that is allowed is the sum of rectangles, i
 * from a half, j from a stretch, in which each pulse occurs about log n times; each rectangle's hulls take one pass.
 *
 * Nothing has to be sorted, for the pulses are in order already. A half is passed over, with all its parts, when all
 * that it could hold, against the limit of the shortest time, would not be stricter than what was found: that makes
 * it faster and never wrong. Of corners nearly in line with their neighbours rounding may lose one; it lies above the
 * line between them by no more than the rounding of the shorter side. */
#include "internal.h"

#include <math.h>
#include <stdlib.h>

static const double same_edge = 1e-12; /* times this close to an edge belong to both sides of it, as in the tables */

struct search {
    const struct list *list;
    const struct laws *laws;
    struct strictest *strictest;
    double from_s;      /* no window is shorter */
    size_t *near, *far; /* of each i: the first and the last j */
    size_t *left, *right; /* corners of the two hulls */
};

static void try_window(struct search *search, size_t i, size_t j) {
    double time_s = bw_hazard_list_length_s(search->list, i, j);
    double energy_j = bw_hazard_list_energy_j(search->list, i, j);
    for (size_t k = 0; k < search->laws->count; k++) {
        struct strictest *strictest = &search->strictest[k];
        double limit = bw_hazard_law(search->laws, k, time_s);
        if (energy_j > strictest->most * limit)
            *strictest = (struct strictest){true, i, j, energy_j / limit};
    }
}

/* Whether windows of at most this energy and at least this length could be stricter than what was found. */
static bool may_be_stricter(const struct search *search, double energy_j, double time_s) {
    for (size_t k = 0; k < search->laws->count; k++)
        if (!(energy_j <= search->strictest[k].most * bw_hazard_law(search->laws, k, time_s)))
            return true;
    return false;
}

struct side { /* from one corner to the next */
    double time_s, energy_j;
};

/* From the point of pulse a to that of pulse b. */
static struct side close_later(const struct list *list, size_t a, size_t b) { /* of J, a < b */
    const struct bw_pulse *p = list->pulses;
    return (struct side){p[b].start_s - p[a].start_s + (p[b].duration_s - p[a].duration_s),
                         bw_hazard_list_energy_j(list, a + 1, b)};
}
static struct side open_earlier(const struct list *list, size_t a, size_t b) { /* of I, a > b */
    return (struct side){list->pulses[a].start_s - list->pulses[b].start_s, bw_hazard_list_energy_j(list, b, a - 1)};
}

static bool steeper(struct side a, struct side b) {
    return a.energy_j * b.time_s > b.energy_j * a.time_s;
}

typedef struct side side_of(const struct list *list, size_t a, size_t b);

/* Adds a point at the end of an upper hull. Returns: how many corners it has now. */
static size_t add_corner(const struct list *list, side_of *side, size_t *corners, size_t count, size_t point) {
    while (count >= 2 && !steeper(side(list, corners[count - 2], corners[count - 1]),
                                  side(list, corners[count - 1], point)))
        count--;
    corners[count] = point;
    return count + 1;
}

/* Windows that open with pulse p to q and close with pulse u to v: all of them are allowed. */
static void search_rectangle(struct search *search, size_t p, size_t q, size_t u, size_t v) {
    const struct list *list = search->list;
    size_t left_count = 0, right_count = 0, x = 0, y = 0;
    double shortest_s = fmax(search->from_s, bw_hazard_list_length_s(list, q, u));
    if (!may_be_stricter(search, bw_hazard_list_energy_j(list, p, v), shortest_s))
        return;
    for (size_t i = q + 1; i-- > p;)
        left_count = add_corner(list, open_earlier, search->left, left_count, i);
    for (size_t j = u; j <= v; j++)
        right_count = add_corner(list, close_later, search->right, right_count, j);
    try_window(search, search->left[0], search->right[0]);
    while (x + 1 < left_count || y + 1 < right_count) {
        bool left_next = y + 1 == right_count;
        if (!left_next && x + 1 < left_count)
            left_next = steeper(open_earlier(list, search->left[x], search->left[x + 1]),
                                close_later(list, search->right[y], search->right[y + 1]));
        x += left_next ? 1 : 0;
        y += left_next ? 0 : 1;
        try_window(search, search->left[x], search->right[y]);
    }
}

/* The half of pulses p to q, which the pulses u to v take whole (none if u > v), and its own halves. */
static void search_half(struct search *search, size_t p, size_t q, size_t u, size_t v) {
    if (search->far[q] <= p || !may_be_stricter(search, bw_hazard_list_energy_j(search->list, p, search->far[q]),
                                                search->from_s))
        return;
    if (u <= v)
        search_rectangle(search, p, q, u, v);
    if (p == q)
        return;
    size_t middle = p + (q - p) / 2, before = search->near[q] - 1, after = search->far[p] + 1;
    size_t right_u = search->near[q] > after ? search->near[q] : after;
    size_t left_v = search->far[p] < before ? search->far[p] : before;
    search_half(search, p, middle, search->near[middle], left_v);
    search_half(search, middle + 1, q, right_u, search->far[middle + 1]);
}

/* Returns: whether there is any window. */
static bool find_ranges(struct search *search, double from_s, double to_s) {
    const struct list *list = search->list;
    bool any = false;
    for (size_t i = 0, near = 0, far = 0; i < list->count; i++) {
        near = near > i ? near : i + 1;
        far = far > i ? far : i;
        while (near < list->count && bw_hazard_list_length_s(list, i, near) < from_s)
            near++;
        while (far + 1 < list->count && bw_hazard_list_length_s(list, i, far + 1) <= to_s)
            far++;
        search->near[i] = near;
        search->far[i] = far;
        any = any || near <= far;
    }
    return any;
}

/* Given:    list; laws  between the two edges; from_s, to_s  edges, or the exposure time
 *           strictest   of each law, what is to be beaten
 * Returned: strictest   found, if a window of two pulses or more beats it
 * Returns:  BW_OK; BW_NO_MEMORY
 * Tests:    test_hazard_pulses.c, against all windows */
enum bw_status bw_hazard_list_search(const struct list *list, const struct laws *laws, double from_s, double to_s,
                                     struct strictest strictest[LAWS_MAX], struct bw_error *error) {
    size_t *room = malloc(4 * list->count * sizeof *room), last = list->count - 1;
    struct search search = {list, laws, strictest, from_s * (1. - same_edge), NULL, NULL, NULL, NULL};
    if (room == NULL)
        return bw_error_set(error, BW_NO_MEMORY, "out of memory");
    search.near = room;
    search.far = room + list->count;
    search.left = search.far + list->count;
    search.right = search.left + list->count;
    if (find_ranges(&search, search.from_s, to_s * (1. + same_edge)))
        search_half(&search, 0, last, search.near[last], search.far[0]);
    free(room);
    return BW_OK;
}
