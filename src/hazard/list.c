/* A list of pulses with its sums: what any window holds. */
#include "internal.h"

#include <math.h>
#include <stdlib.h>

/* Sums with what rounding loses kept beside (A. Neumaier, ZAMM 54, 1974): the energy of two pulses among a million is
 * the difference of two large sums. */
static void sum_up(struct list *list) {
    double whole = 0., lost = 0.;
    for (size_t i = 0; i < list->count; i++) {
        double value = list->pulses[i].energy_j, next = whole + value;
        list->whole[i] = whole;
        list->lost[i] = lost;
        lost += whole >= value ? whole - next + value : value - next + whole;
        whole = next;
        list->largest_j = fmax(list->largest_j, value);
    }
    list->whole[list->count] = whole;
    list->lost[list->count] = lost;
}

/* Returned: list  to be freed, on error too. */
enum bw_status bw_hazard_list_make(const struct bw_emission *emission, struct list *list, struct bw_error *error) {
    *list = (struct list){.pulses = emission->pulses, .count = emission->pulse_count};
    if (list->count < 1 || list->count > BW_PULSES_MAX)
        return bw_error_set(error, BW_ARGUMENT, "the list has %zu pulses; it must be 1 to %d", list->count,
                            BW_PULSES_MAX);
    list->whole = malloc((list->count + 1) * sizeof *list->whole);
    list->lost = malloc((list->count + 1) * sizeof *list->lost);
    if (list->whole == NULL || list->lost == NULL)
        return bw_error_set(error, BW_NO_MEMORY, "out of memory");
    sum_up(list);
    return BW_OK;
}

void bw_hazard_list_free(struct list *list) {
    free(list->whole);
    free(list->lost);
    list->whole = list->lost = NULL;
}

double bw_hazard_list_length_s(const struct list *list, size_t i, size_t j) {
    return list->pulses[j].start_s - list->pulses[i].start_s + list->pulses[j].duration_s;
}

double bw_hazard_list_energy_j(const struct list *list, size_t i, size_t j) {
    return list->whole[j + 1] - list->whole[i] + (list->lost[j + 1] - list->lost[i]);
}

/* What of pulse k lies within a window that reaches so far into it. */
static double part_j(const struct list *list, size_t k, double reach_s) {
    return list->pulses[k].energy_j * fmin(1., reach_s / list->pulses[k].duration_s);
}

/* Pulses that a window meets, by more than rounding where two touch: the pulses i to j, of which it reaches so far into
 * the outermost. */
static size_t met(size_t i, size_t j, double held_j, double whole_j) {
    return j - i + (held_j > 1e-9 * whole_j ? 1 : 0);
}

/* The most that a window of a length holds. As a window moves on, it gains and loses evenly until one of its ends meets
 * an end of a pulse; it holds the most where it opens with a pulse, or where it closes with one. */
double bw_hazard_list_most_j(const struct list *list, double length_s, size_t meets) {
    const struct bw_pulse *p = list->pulses;
    double most_j = 0.;
    for (size_t i = 0, last = 0; i < list->count; i++) { /* opens with pulse i; ends in or after pulse `last` */
        last = last < i ? i : last;
        while (last + 1 < list->count && p[last + 1].start_s - p[i].start_s < length_s)
            last++;
        double held_j = part_j(list, last, length_s - (p[last].start_s - p[i].start_s));
        size_t here = met(i, last, held_j, p[last].energy_j);
        if (last > i)
            held_j += bw_hazard_list_energy_j(list, i, last - 1);
        if (here >= meets)
            most_j = fmax(most_j, held_j);
    }
    for (size_t j = 0, first = 0; j < list->count; j++) { /* closes with pulse j; begins in or before pulse `first` */
        while (first < j && !(p[j].start_s - p[first].start_s + (p[j].duration_s - p[first].duration_s) < length_s))
            first++;
        double held_j =
            part_j(list, first, length_s - (p[j].start_s - p[first].start_s + (p[j].duration_s - p[first].duration_s)));
        size_t here = met(first, j, held_j, p[first].energy_j);
        if (j > first)
            held_j += bw_hazard_list_energy_j(list, first + 1, j);
        if (here >= meets)
            most_j = fmax(most_j, held_j);
    }
    return most_j;
}

/* ---- groups --------------------------------------------------------------------------------------- */

struct runs {
    size_t *head, *tail; /* first and last pulse of the run that each pulse is in */
    double *before;      /* groups of all runs before it */
};

static double run(const struct list *list, size_t i, size_t j, double ti_s) {
    double pulses = (double)(j - i + 1);
    if (!(ti_s > 0.))
        return pulses;
    return bw_hazard_groups_in_run(pulses, list->pulses[j].start_s - list->pulses[i].start_s, ti_s);
}

static void find_runs(const struct list *list, double ti_s, struct runs *runs) {
    double before = 0.;
    for (size_t i = 0, j; i < list->count; i = j + 1) {
        for (j = i; j + 1 < list->count &&
                    list->pulses[j + 1].start_s - list->pulses[j].start_s <= ti_s * (1. + 1e-12);
             j++)
            continue;
        for (size_t k = i; k <= j; k++) {
            runs->head[k] = i;
            runs->tail[k] = j;
            runs->before[k] = before;
        }
        before += run(list, i, j, ti_s);
    }
}

static double groups_between(const struct list *list, const struct runs *runs, size_t i, size_t j, double ti_s) {
    if (runs->head[i] == runs->head[j])
        return run(list, i, j, ti_s);
    size_t next = runs->tail[i] + 1;
    return run(list, i, runs->tail[i], ti_s) + (runs->before[j] - runs->before[next]) +
           run(list, runs->head[j], j, ti_s);
}

/* N in the worst window, which opens with a pulse: groups as in pulse_groups.c.
 * Returned: groups.  Returns: BW_OK; BW_NO_MEMORY */
enum bw_status bw_hazard_list_groups(const struct list *list, double ti_s, double window_s, double *groups,
                                     struct bw_error *error) {
    struct runs runs = {malloc(list->count * sizeof *runs.head), malloc(list->count * sizeof *runs.tail),
                        malloc(list->count * sizeof *runs.before)};
    enum bw_status status = BW_OK;
    *groups = 0.;
    if (runs.head == NULL || runs.tail == NULL || runs.before == NULL)
        status = bw_error_set(error, BW_NO_MEMORY, "out of memory");
    if (status == BW_OK)
        find_runs(list, ti_s, &runs);
    for (size_t i = 0, last = 0; status == BW_OK && i < list->count; i++) {
        last = last < i ? i : last;
        while (last + 1 < list->count &&
               list->pulses[last + 1].start_s - list->pulses[i].start_s < window_s * (1. - 1e-14))
            last++;
        *groups = fmax(*groups, groups_between(list, &runs, i, last, ti_s));
    }
    free(runs.head);
    free(runs.tail);
    free(runs.before);
    return status;
}
