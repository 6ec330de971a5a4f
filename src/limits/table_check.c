/* What a rule set must have, found by asking it: at the middle of every cell between neighbouring edges exactly one
 * row of a section holds, and on the edges at least one. So a gap, an overlap or a slipped cell does not load. */
#include "check.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* One row as a patch of the plane of wavelength and time. */
struct tile {
    struct span wavelength_nm;
    struct edge from, to;
    const struct row_note *note;
    bool reported; /* in an overlap */
};
struct tiling {
    const struct bw_table *table;
    struct bw_faults *faults;
    const char *section;
    int line;
    struct tile *tiles;
    size_t count;
    struct tile cover;
    double subtense_mrad;
    bool gap_reported;
};

static int compare_numbers(const void *a, const void *b) {
    const double *x = a, *y = b;
    return (*x > *y) - (*x < *y);
}

size_t bw_check_sort_edges(double *values, size_t count) {
    size_t kept = 0;
    qsort(values, count, sizeof *values, compare_numbers);
    for (size_t i = 0; i < count; i++)
        if (kept == 0 || values[i] > values[kept - 1] * (1.0 + 1e-9))
            values[kept++] = values[i];
    return kept;
}

/* Without rounding: the checker asks beside an edge, not at it. Wavelengths and subtenses never open below. */
static bool exactly_in(const struct span *span, double x) {
    return x >= span->low && (span->open_high ? x < span->high : x <= span->high);
}

static bool tile_holds(const struct tiling *tiling, const struct tile *tile, double wavelength_nm, double time_s) {
    return exactly_in(&tile->wavelength_nm, wavelength_nm) &&
           time_s >= bw_limits_edge_s(tiling->table, &tile->from, wavelength_nm, tiling->subtense_mrad) &&
           time_s <= bw_limits_edge_s(tiling->table, &tile->to, wavelength_nm, tiling->subtense_mrad);
}

static void report_gap(struct tiling *tiling, double wavelength_nm, const double *nm, double low_s, double high_s) {
    char low[LIMITS_NUMBER_SIZE], high[LIMITS_NUMBER_SIZE], from[LIMITS_NUMBER_SIZE], to[LIMITS_NUMBER_SIZE];
    if (tiling->gap_reported)
        return;
    tiling->gap_reported = true;
    bw_limits_number(from, low_s);
    bw_limits_number(to, high_s);
    if (nm == NULL)
        bw_faults_add(tiling->faults, tiling->line, tiling->section, "",
                      "gap: no row covers exactly %s nm at %s .. %s s", bw_limits_number(low, wavelength_nm), from, to);
    else
        bw_faults_add(tiling->faults, tiling->line, tiling->section, "", "gap: no row covers %s .. %s nm at %s .. %s s",
                      bw_limits_number(low, nm[0]), bw_limits_number(high, nm[1]), from, to);
}

static void report_overlap(struct tiling *tiling, const struct tile *first, struct tile *second, const double *nm,
                           double low_s, double high_s) {
    char low[LIMITS_NUMBER_SIZE], high[LIMITS_NUMBER_SIZE], from[LIMITS_NUMBER_SIZE], to[LIMITS_NUMBER_SIZE];
    if (second->reported)
        return;
    second->reported = true;
    bw_faults_add(tiling->faults, second->note->line, tiling->section, second->note->key,
                  "overlaps %s at %s .. %s nm, %s .. %s s", first->note->key, bw_limits_number(low, nm[0]),
                  bw_limits_number(high, nm[1]), bw_limits_number(from, low_s), bw_limits_number(to, high_s));
}

static void report_outside(struct tiling *tiling, struct tile *tile) {
    if (tile->reported)
        return;
    tile->reported = true;
    bw_faults_add(tiling->faults, tile->note->line, tiling->section, tile->note->key,
                  "reaches beyond what the section covers; wants it inside `covers`");
}

/* One cell. nm: its wavelength edges, or NULL if it is a line at one wavelength. */
static void check_cell(struct tiling *tiling, double wavelength_nm, const double *nm, double low_s, double high_s) {
    double time_s = sqrt(low_s) * sqrt(high_s);
    bool covered = tile_holds(tiling, &tiling->cover, wavelength_nm, time_s);
    const struct tile *first = NULL;
    for (size_t i = 0; i < tiling->count; i++) {
        struct tile *tile = &tiling->tiles[i];
        if (!tile_holds(tiling, tile, wavelength_nm, time_s))
            continue;
        if (nm != NULL && first != NULL)
            report_overlap(tiling, first, tile, nm, low_s, high_s);
        if (nm != NULL && !covered)
            report_outside(tiling, tile);
        first = tile;
    }
    if (covered && first == NULL)
        report_gap(tiling, wavelength_nm, nm, low_s, high_s);
}

static void check_times(struct tiling *tiling, double wavelength_nm, const double *nm, double *times) {
    size_t count = 0;
    for (size_t i = 0; i <= tiling->count; i++) {
        const struct tile *tile = i < tiling->count ? &tiling->tiles[i] : &tiling->cover;
        if (!exactly_in(&tile->wavelength_nm, wavelength_nm))
            continue;
        times[count++] = bw_limits_edge_s(tiling->table, &tile->from, wavelength_nm, tiling->subtense_mrad);
        times[count++] = bw_limits_edge_s(tiling->table, &tile->to, wavelength_nm, tiling->subtense_mrad);
    }
    count = bw_check_sort_edges(times, count);
    for (size_t i = 0; i + 1 < count; i++)
        check_cell(tiling, wavelength_nm, nm, times[i], times[i + 1]);
}

/* All cells for one source size. */
static void check_tiling(struct tiling *tiling) {
    double *edges = calloc(4 * tiling->count + 4, sizeof *edges);
    if (edges == NULL) {
        tiling->faults->out_of_memory = true;
        return;
    }
    double *times = edges + 2 * tiling->count + 2;
    size_t count = 0;
    for (size_t i = 0; i <= tiling->count; i++) {
        const struct tile *tile = i < tiling->count ? &tiling->tiles[i] : &tiling->cover;
        edges[count++] = tile->wavelength_nm.low;
        edges[count++] = tile->wavelength_nm.high;
    }
    count = bw_check_sort_edges(edges, count);
    for (size_t i = 0; i + 1 < count; i++)
        check_times(tiling, 0.5 * (edges[i] + edges[i + 1]), &edges[i], times);
    for (size_t i = 0; i < count; i++)
        check_times(tiling, edges[i], NULL, times);
    free(edges);
}

/* ---- the limit sections ----------------------------------------------------------------------- */

static bool names_subtense(const struct bw_table *table, const struct edge *edge) {
    return edge->factor != EDGE_IS_NUMBER && table->factors[edge->factor].argument == BY_SUBTENSE_MRAD;
}

/* The sources to ask about: where time edges move with the subtense, the edges and middles of that factor's rows. */
static size_t subtense_samples(const struct bw_table *table, const struct limit_section *section,
                               double samples[CHECK_SAMPLES]) {
    const struct edge *moving = NULL;
    size_t count = 0;
    for (size_t i = section->first; i < section->first + section->count; i++) {
        if (names_subtense(table, &table->rows[i].from))
            moving = &table->rows[i].from;
        if (names_subtense(table, &table->rows[i].to))
            moving = &table->rows[i].to;
    }
    samples[count++] = section->subtense_mrad.low;
    samples[count++] = section->subtense_mrad.high;
    const struct factor *factor = moving == NULL ? NULL : &table->factors[moving->factor];
    for (size_t i = 0; factor != NULL && i < factor->count && count + 2 <= CHECK_SAMPLES; i++) {
        const struct span *span = &table->factor_rows[factor->first + i].argument;
        samples[count++] = 0.5 * (span->low + span->high);
        samples[count++] = span->high;
    }
    return count;
}

static void check_section(const struct bw_table *table, const struct limit_section *section, struct bw_faults *faults) {
    double samples[CHECK_SAMPLES];
    if (section->covers_line == 0) {
        bw_faults_add(faults, section->line, section->name, "covers",
                      "is missing; wants wavelength nm | time s that the rows cover");
        return;
    }
    if (section->count == 0) {
        bw_faults_add(faults, section->line, section->name, "", "has no rows");
        return;
    }
    struct tiling tiling = {.table = table, .faults = faults, .section = section->name, .line = section->covers_line};
    tiling.tiles = calloc(section->count, sizeof *tiling.tiles);
    if (tiling.tiles == NULL) {
        faults->out_of_memory = true;
        return;
    }
    for (size_t i = 0; i < section->count; i++) {
        const struct limit_row *row = &table->rows[section->first + i];
        tiling.tiles[i] = (struct tile){row->wavelength_nm, row->from, row->to, &row->note, false};
    }
    tiling.count = section->count;
    tiling.cover = (struct tile){section->wavelength_nm, section->from, section->to, NULL, false};
    size_t count = subtense_samples(table, section, samples);
    for (size_t i = 0; i < count; i++) {
        if (!exactly_in(&section->subtense_mrad, samples[i]))
            continue;
        tiling.subtense_mrad = samples[i];
        check_tiling(&tiling);
    }
    free(tiling.tiles);
}

/* ---- apertures and cones: over all that the effect's sections cover --------------------------- */

static double lower_edge(const struct edge *edge) {
    return edge->factor == EDGE_IS_NUMBER ? edge->value_s : limits_infinity; /* a moving edge has a fixed one beside */
}

static bool effect_cover(const struct bw_table *table, enum bw_effect effect, struct tile *cover) {
    bool found = false;
    for (size_t i = 0; i < table->section_count; i++) {
        const struct limit_section *section = &table->sections[i];
        if (section->effect != effect)
            continue;
        if (!found) {
            *cover = (struct tile){
                section->wavelength_nm, {limits_infinity, EDGE_IS_NUMBER}, {0.0, EDGE_IS_NUMBER}, NULL, false};
            found = true;
        }
        if (section->wavelength_nm.low < cover->wavelength_nm.low)
            cover->wavelength_nm.low = section->wavelength_nm.low;
        if (section->wavelength_nm.high >= cover->wavelength_nm.high) {
            cover->wavelength_nm.open_high = section->wavelength_nm.high > cover->wavelength_nm.high
                                                 ? section->wavelength_nm.open_high
                                                 : section->wavelength_nm.open_high && cover->wavelength_nm.open_high;
            cover->wavelength_nm.high = section->wavelength_nm.high;
        }
        cover->from.value_s = fmin(cover->from.value_s, lower_edge(&section->from));
        if (section->to.factor == EDGE_IS_NUMBER)
            cover->to.value_s = fmax(cover->to.value_s, section->to.value_s);
    }
    return found;
}

static void check_sizes(const struct bw_table *table, const char *name, const struct size_row *rows, size_t count,
                        enum bw_effect effect, struct bw_faults *faults) {
    struct tiling tiling = {.table = table, .faults = faults, .section = name};
    if (!effect_cover(table, effect, &tiling.cover))
        return;
    tiling.tiles = calloc(count + 1, sizeof *tiling.tiles);
    if (tiling.tiles == NULL) {
        faults->out_of_memory = true;
        return;
    }
    for (size_t i = 0; i < count; i++)
        if (rows[i].effect == effect)
            tiling.tiles[tiling.count++] =
                (struct tile){rows[i].wavelength_nm, rows[i].from, rows[i].to, &rows[i].note, false};
    if (tiling.count == 0)
        bw_faults_add(faults, 0, name, "", "has no row for %s", bw_effect_name(effect));
    else {
        tiling.line = tiling.tiles[0].note->line;
        check_tiling(&tiling);
    }
    free(tiling.tiles);
}

/* alpha_max covers all times that a rule set may cover. */
static void check_alpha_max(const struct bw_table *table, struct bw_faults *faults) {
    const struct source_size *size = &table->source_size;
    struct tiling tiling = {.table = table, .faults = faults, .section = "source-size", .line = size->line};
    struct span all = {limits_wavelength_low_nm, limits_wavelength_high_nm, false, false};
    tiling.cover =
        (struct tile){all, {limits_time_low_s, EDGE_IS_NUMBER}, {limits_time_high_s, EDGE_IS_NUMBER}, NULL, false};
    tiling.tiles = calloc(size->count + 1, sizeof *tiling.tiles);
    if (tiling.tiles == NULL) {
        faults->out_of_memory = true;
        return;
    }
    for (size_t i = 0; i < size->count; i++)
        tiling.tiles[i] = (struct tile){all, size->rows[i].from, size->rows[i].to, &size->rows[i].note, false};
    tiling.count = size->count;
    check_tiling(&tiling);
    free(tiling.tiles);
}

void bw_limits_check(const struct bw_table *table, struct bw_faults *faults) {
    size_t faults_before = faults->count;
    bw_check_factors(table, faults);
    bw_check_parts(table, faults);
    if (faults->count != faults_before) /* the cells below would ask factors that do not hold */
        return;
    for (size_t i = 0; i < table->section_count; i++)
        check_section(table, &table->sections[i], faults);
    if (table->source_size.line != 0)
        check_alpha_max(table, faults);
    if (faults->count != faults_before)
        return;
    static const enum bw_effect effects[BW_EFFECTS] = {BW_RETINA_THERMAL, BW_RETINA_PHOTOCHEMICAL, BW_ULTRAVIOLET,
                                                       BW_ANTERIOR, BW_SKIN_EFFECT};
    for (size_t i = 0; i < BW_EFFECTS; i++)
        check_sizes(table, "aperture", table->apertures, table->aperture_count, effects[i], faults);
    check_sizes(table, "cone", table->cones, table->cone_count, BW_RETINA_PHOTOCHEMICAL, faults);
    bw_check_whole(table, faults);
    bw_check_train(table, faults);
}
