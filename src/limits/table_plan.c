/* The plan: which rows hold at each wavelength and time, worked out once for a table.
 *
 * A row begins or ceases to hold at its edges and nowhere else. All edges, each put where bw_limits_in_span() changes
 * its answer, cut wavelength and time into zones; within a cell of the two every question "does this row hold?" has
 * one answer, and asking at the lowest number of the zone gives it. The narrow zone around an edge, where two
 * neighbours hold and the lower limit wins, is a zone like any other. What depends on the source (its subtense, the
 * exposed area, T2) or on a symbolic edge is left to be asked. */
#include "plan.h"

#include <limits.h>
#include <math.h>
#include <stdlib.h>

/* Memory for what is only needed while planning is the table's too: simple, and small. */
struct planning {
    struct bw_table *table;
    enum bw_target target;
    struct memory *memory;
    double *wavelengths, *times; /* cuts */
    size_t wavelength_count, time_count;
    const struct limit_row **rows; /* of the target, ascending by effect, then as printed */
    size_t row_count;
    const struct limit_row **candidates; /* that hold at one wavelength */
    size_t candidate_count;
    struct held_row *held;
    struct cell *cells;
    size_t held_count, cell_count;
};

/* ---- cuts ------------------------------------------------------------------------------------- */

/* The two numbers from which on bw_limits_in_span() answers otherwise. No wavelength or time opens below. */
static void cut_span(const struct span *span, double *cuts, size_t *count) {
    cuts[(*count)++] = span->low * (1.0 - limits_edge_rounding);
    cuts[(*count)++] =
        span->open_high ? span->high : nextafter(span->high * (1.0 + limits_edge_rounding), limits_infinity);
}

/* Between these the value of a symbolic edge lies, whatever the wavelength and the source: each of its rows rises or
 * falls from end to end. The edge itself is asked; the bound only has to be wide enough. */
static struct span reach_of(const struct bw_table *table, const struct edge *edge) {
    static const double margin = 1e-6;
    struct span reach = {edge->value_s, edge->value_s, false, false};
    if (edge->factor == EDGE_IS_NUMBER)
        return reach;
    const struct factor *factor = &table->factors[edge->factor];
    reach = (struct span){limits_infinity, 0.0, false, false};
    for (size_t i = factor->first; i < factor->first + factor->count; i++) {
        const struct factor_row *row = &table->factor_rows[i];
        double ends[] = {bw_limits_factor_row(row, row->argument.low), bw_limits_factor_row(row, row->argument.high)};
        reach.low = fmin(reach.low, fmin(ends[0], ends[1]) * (1.0 - margin));
        reach.high = fmax(reach.high, fmax(ends[0], ends[1]) * (1.0 + margin));
    }
    return reach;
}

/* The longest span of time between these edges. */
static struct span times_of(const struct bw_table *table, const struct edge *from, const struct edge *to) {
    return (struct span){reach_of(table, from).low, reach_of(table, to).high, false, false};
}

static struct span size_times(const struct size_row *row) {
    return (struct span){row->from.value_s, row->to.value_s, false, false};
}

static void cut_sizes(struct planning *planning, const struct size_row *rows, size_t count) {
    for (size_t i = 0; i < count; i++) {
        struct span times = size_times(&rows[i]);
        cut_span(&rows[i].wavelength_nm, planning->wavelengths, &planning->wavelength_count);
        cut_span(&times, planning->times, &planning->time_count);
    }
}

static int compare_numbers(const void *a, const void *b) {
    const double *x = a, *y = b;
    return (*x > *y) - (*x < *y);
}

/* Sorted, each once; only positive finite cuts divide anything. */
static size_t tidy(double *cuts, size_t count) {
    size_t kept = 0;
    qsort(cuts, count, sizeof *cuts, compare_numbers);
    for (size_t i = 0; i < count; i++)
        if (cuts[i] > 0.0 && cuts[i] < limits_infinity && (kept == 0 || cuts[i] > cuts[kept - 1]))
            cuts[kept++] = cuts[i];
    return kept;
}

static bool take_cuts(struct planning *planning) {
    const struct bw_table *table = planning->table;
    const struct source_size *size = &table->source_size;
    size_t most =
        2 * (planning->row_count + table->factor_row_count + table->aperture_count + table->cone_count + size->count) +
        1;
    planning->wavelengths = bw_limits_memory_take(planning->memory, most, sizeof(double));
    planning->times = bw_limits_memory_take(planning->memory, most, sizeof(double));
    if (planning->wavelengths == NULL || planning->times == NULL)
        return false;
    for (size_t i = 0; i < planning->row_count; i++) {
        struct span times = times_of(planning->table, &planning->rows[i]->from, &planning->rows[i]->to);
        cut_span(&planning->rows[i]->wavelength_nm, planning->wavelengths, &planning->wavelength_count);
        cut_span(&times, planning->times, &planning->time_count);
    }
    for (size_t i = 0; i < table->factor_count; i++)
        for (size_t j = 0; table->factors[i].argument == BY_WAVELENGTH_NM && j < table->factors[i].count; j++)
            cut_span(&table->factor_rows[table->factors[i].first + j].argument, planning->wavelengths,
                     &planning->wavelength_count);
    cut_sizes(planning, table->apertures, table->aperture_count);
    cut_sizes(planning, table->cones, table->cone_count);
    cut_sizes(planning, size->rows, size->count);
    if (size->count > 0) /* below it bw_limits_alpha_max_mrad() answers by another rule */
        planning->times[planning->time_count++] = size->rows[0].from.value_s;
    planning->wavelength_count = tidy(planning->wavelengths, planning->wavelength_count);
    planning->time_count = tidy(planning->times, planning->time_count);
    return planning->wavelength_count < USHRT_MAX && planning->time_count < USHRT_MAX;
}

/* The search for a zone begins at the one where numbers with the same leading bits begin. One key below the first cut
 * stands for all smaller numbers, one after the last for all that is larger. */
static bool fill_cuts(struct planning *planning, struct cuts *cuts, double *at, size_t count, size_t shift) {
    at[count] = limits_nan;
    *cuts = (struct cuts){.at = at, .count = count, .shift = shift, .key_count = 1};
    if (count > 0) {
        cuts->lowest_key = leading_bits(at[0], shift) - 1;
        cuts->key_count = leading_bits(at[count - 1], shift) - cuts->lowest_key + 2;
    }
    unsigned short *first = bw_limits_memory_take(planning->memory, cuts->key_count, sizeof *first);
    if (first == NULL)
        return false;
    for (size_t key = 0, zone = 0; key < cuts->key_count; key++) {
        while (zone < count && leading_bits(at[zone], shift) < cuts->lowest_key + key)
            zone++;
        first[key] = (unsigned short)zone;
    }
    cuts->first = first;
    return true;
}

/* ---- rows ------------------------------------------------------------------------------------- */

static bool take_rows(struct planning *planning) {
    const struct bw_table *table = planning->table;
    planning->rows = bw_limits_memory_take(planning->memory, table->row_count + 1, sizeof *planning->rows);
    planning->candidates = bw_limits_memory_take(planning->memory, table->row_count + 1, sizeof *planning->rows);
    if (planning->rows == NULL || planning->candidates == NULL)
        return false;
    for (int effect = 0; effect < BW_EFFECTS; effect++)
        for (size_t i = 0; i < table->row_count; i++) {
            const struct limit_section *section = &table->sections[table->rows[i].section];
            if (section->target == planning->target && (int)section->effect == effect)
                planning->rows[planning->row_count++] = &table->rows[i];
        }
    return true;
}

/* The one row of the list that holds; NO_ROW if there is none or more than one. */
static unsigned short only_size(const struct size_row *rows, size_t count, const enum bw_effect *effect,
                                double wavelength_nm, double time_s) {
    unsigned short only = NO_ROW;
    for (size_t i = 0; i < count; i++) {
        struct span times = size_times(&rows[i]);
        if ((effect != NULL && rows[i].effect != *effect) ||
            !bw_limits_in_span(&rows[i].wavelength_nm, wavelength_nm) || !bw_limits_in_span(&times, time_s))
            continue;
        if (only != NO_ROW)
            return NO_ROW;
        only = (unsigned short)i;
    }
    return only;
}

static unsigned short only_factor_row(const struct bw_table *table, int factor, double wavelength_nm) {
    unsigned short only = NO_ROW;
    if (factor < 0 || table->factors[factor].argument != BY_WAVELENGTH_NM)
        return NO_ROW;
    const struct factor *f = &table->factors[factor];
    for (size_t i = f->first; i < f->first + f->count; i++) {
        if (!bw_limits_in_span(&table->factor_rows[i].argument, wavelength_nm))
            continue;
        if (only != NO_ROW)
            return NO_ROW;
        only = (unsigned short)i;
    }
    return only;
}

/* alpha_max counts by time alone, and by another rule below its first row. */
static unsigned short only_alpha_max(const struct source_size *size, double time_s) {
    unsigned short only = NO_ROW;
    if (size->count == 0 || time_s < size->rows[0].from.value_s)
        return NO_ROW;
    for (size_t i = 0; i < size->count; i++) {
        struct span times = size_times(&size->rows[i]);
        if (!bw_limits_in_span(&times, time_s))
            continue;
        if (only != NO_ROW)
            return NO_ROW;
        only = (unsigned short)i;
    }
    return only;
}

static bool uses_source_size(const struct limit_row *row) {
    for (size_t i = 0; i < row->use_count; i++)
        if (row->uses[i].factor == USE_CE)
            return true;
    return false;
}

static bool takes_any_source(const struct limit_section *section) {
    return section->subtense_mrad.low <= 0.0 && section->subtense_mrad.high >= limits_subtense_high_mrad &&
           section->area_m2.low <= 0.0; /* a condition on the area begins above 0 */
}

static struct held_row resolve(const struct planning *planning, const struct limit_row *row, double wavelength_nm,
                               double time_s) {
    const struct bw_table *table = planning->table;
    const struct limit_section *section = &table->sections[row->section];
    struct held_row held = {.row = (unsigned short)(row - table->rows), .cone = NO_ROW, .alpha_max = NO_ROW};
    held.aperture = only_size(table->apertures, table->aperture_count, &section->effect, wavelength_nm, time_s);
    if (section->effect == BW_RETINA_PHOTOCHEMICAL)
        held.cone = only_size(table->cones, table->cone_count, NULL, wavelength_nm, time_s);
    if (uses_source_size(row))
        held.alpha_max = only_alpha_max(&table->source_size, time_s);
    for (size_t i = 0; i < ROW_USES_MAX; i++)
        held.factor_rows[i] =
            i < row->use_count ? only_factor_row(table, row->uses[i].factor, wavelength_nm) : (unsigned short)NO_ROW;
    bool edges = row->from.factor != EDGE_IS_NUMBER || row->to.factor != EDGE_IS_NUMBER;
    held.asks = (unsigned short)((takes_any_source(section) ? ASKS_NOTHING : ASKS_SOURCE) |
                                 (edges ? ASKS_EDGES : ASKS_NOTHING));
    return held;
}

/* ---- cells ------------------------------------------------------------------------------------ */

/* The rows that hold at one wavelength. */
static void take_candidates(struct planning *planning, double wavelength_nm) {
    planning->candidate_count = 0;
    for (size_t i = 0; i < planning->row_count; i++)
        if (bw_limits_in_span(&planning->rows[i]->wavelength_nm, wavelength_nm))
            planning->candidates[planning->candidate_count++] = planning->rows[i];
}

static size_t holding(const struct planning *planning, double time_s, const struct limit_row **rows) {
    size_t count = 0;
    for (size_t i = 0; i < planning->candidate_count; i++) {
        struct span times = times_of(planning->table, &planning->candidates[i]->from, &planning->candidates[i]->to);
        if (!bw_limits_in_span(&times, time_s))
            continue;
        if (rows != NULL)
            rows[count] = planning->candidates[i];
        count++;
    }
    return count;
}

/* The lowest time of a zone. */
static double zone_time_s(const struct planning *planning, size_t zone) {
    return zone == 0 ? 0.0 : planning->times[zone - 1];
}

/* An upper bound of the rows held in all cells. */
static size_t count_held(struct planning *planning) {
    size_t count = 0;
    for (size_t w = 0; w < planning->wavelength_count; w++) {
        take_candidates(planning, planning->wavelengths[w]);
        for (size_t zone = 0; zone <= planning->time_count; zone++)
            count += holding(planning, zone_time_s(planning, zone), NULL);
    }
    return count;
}

/* The cell that holds what was just appended to the held rows: an older one if there is the like. */
static unsigned cell_of(struct planning *planning, size_t count) {
    const struct held_row *fresh = &planning->held[planning->held_count];
    for (size_t i = planning->cell_count; i > 0; i--) { /* the latest is the likeliest */
        const struct cell *cell = &planning->cells[i - 1];
        if (cell->count == count && memcmp(&planning->held[cell->first], fresh, count * sizeof *fresh) == 0)
            return (unsigned)(i - 1);
    }
    planning->cells[planning->cell_count] = (struct cell){(unsigned)planning->held_count, (unsigned)count};
    planning->held_count += count;
    return (unsigned)planning->cell_count++;
}

static void fill_cells(struct planning *planning, const struct limit_row **rows, unsigned *cells) {
    size_t zones = planning->time_count + 1;
    planning->cell_count = 1; /* cell 0 is empty, and so are all below the first wavelength */
    for (size_t w = 0; w < planning->wavelength_count; w++) {
        double wavelength_nm = planning->wavelengths[w];
        take_candidates(planning, wavelength_nm);
        for (size_t zone = 0; zone < zones; zone++) {
            double time_s = zone_time_s(planning, zone);
            size_t count = holding(planning, time_s, rows);
            for (size_t i = 0; i < count; i++)
                planning->held[planning->held_count + i] = resolve(planning, rows[i], wavelength_nm, time_s);
            cells[(w + 1) * zones + zone] = cell_of(planning, count);
        }
    }
}

static bool plan_target(struct planning *planning, struct plan *plan) {
    if (!take_rows(planning) || !take_cuts(planning))
        return false;
    size_t zones = (planning->wavelength_count + 1) * (planning->time_count + 1), most = count_held(planning);
    const struct limit_row **rows = bw_limits_memory_take(planning->memory, planning->row_count + 1, sizeof *rows);
    unsigned *cells = bw_limits_memory_take(planning->memory, zones, sizeof *cells);
    planning->held = bw_limits_memory_take(planning->memory, most + 1, sizeof *planning->held);
    planning->cells = bw_limits_memory_take(planning->memory, zones, sizeof *planning->cells);
    if (most > UINT_MAX || rows == NULL || cells == NULL || planning->held == NULL || planning->cells == NULL)
        return false;
    fill_cells(planning, rows, cells);
    plan->cell_of = cells;
    plan->cells = planning->cells;
    plan->cell_count = planning->cell_count;
    plan->held = planning->held;
    plan->held_count = planning->held_count;
    enum { WAVELENGTH_SHIFT = 52 - 7, TIME_SHIFT = 52 - 4 }; /* 128 and 16 keys an octave */
    return fill_cuts(planning, &plan->wavelengths, planning->wavelengths, planning->wavelength_count,
                     WAVELENGTH_SHIFT) &&
           fill_cuts(planning, &plan->times, planning->times, planning->time_count, TIME_SHIFT);
}

bool bw_limits_plan(struct bw_table *table, struct memory *memory) {
    if (table->row_count >= NO_ROW || table->factor_row_count >= NO_ROW || table->aperture_count >= NO_ROW ||
        table->cone_count >= NO_ROW || table->source_size.count >= NO_ROW)
        return false;
    for (size_t target = 0; target < 2; target++) {
        struct planning planning = {.table = table, .target = (enum bw_target)target, .memory = memory};
        if (!plan_target(&planning, &table->plan[target]))
            return false;
    }
    return true;
}
