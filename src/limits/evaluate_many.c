/* Many exposures at once. They are sorted by the cell of the plan that they fall into; in a cell the same rows hold, so
 * that each row is one formula on columns of numbers. What is not so simple (an edge, where rows compete; a symbolic
 * edge; an extended source) goes one by one through the evaluator of one exposure, which decides what the answer is:
 * the columns do the same operations in the same order and give the same bits. */
#include "columns.h"
#include "plan.h"

#include <string.h>

/* A block is sorted, then worked off in batches; both small enough for the stack and the nearest cache. */
enum { BLOCK = 8192, CELLS_MAX = 1024, EFFECT_COLUMNS = 4 };

struct block {
    size_t first, count;
    unsigned short bucket[BLOCK], order[BLOCK]; /* by exposure; exposures by bucket */
    unsigned short ends[CELLS_MAX + 1];         /* of each bucket in `order` */
};

struct many {
    const struct bw_table *table;
    const struct plan *plan;
    enum bw_target target;
    const struct bw_exposures *exposures;
    bw_limit_visitor *visitor;
    void *context;
    struct block block;
    size_t places[BW_BATCH_MAX];
    double wavelengths_nm[BW_BATCH_MAX], times_s[BW_BATCH_MAX];
    double columns[BW_EFFECTS][EFFECT_COLUMNS][BW_BATCH_MAX];
};

/* ---- sorting ---------------------------------------------------------------------------------- */

/* Sorts by counting. Cells beyond the buckets, which only an uncommonly long table has, share the last. */
static void sort(struct many *many) {
    struct block *block = &many->block;
    const double *wavelengths_nm = many->exposures->wavelengths_nm + block->first;
    const double *times_s = many->exposures->times_s + block->first;
    memset(block->ends, 0, sizeof block->ends);
    for (size_t i = 0; i < block->count; i++) {
        unsigned cell = cell_at(many->plan, wavelengths_nm[i], times_s[i]);
        block->bucket[i] = (unsigned short)(cell < CELLS_MAX ? cell : CELLS_MAX);
        block->ends[block->bucket[i]]++;
    }
    unsigned short before = 0; /* each count becomes the start of its bucket, and by filling it the end */
    for (size_t bucket = 0; bucket <= CELLS_MAX; bucket++) {
        unsigned short count = block->ends[bucket];
        block->ends[bucket] = before;
        before = (unsigned short)(before + count);
    }
    for (size_t i = 0; i < block->count; i++)
        block->order[block->ends[block->bucket[i]]++] = (unsigned short)i;
}

/* ---- one by one ------------------------------------------------------------------------------- */

static void visit_one(const struct many *many, size_t place) {
    const struct bw_exposures *exposures = many->exposures;
    struct bw_exposure exposure = {exposures->wavelengths_nm[place], exposures->times_s[place], exposures->subtense_rad,
                                   exposures->area_m2};
    struct bw_limit_set set;
    struct bw_limit_batch batch = {.count = 1, .places = &place};
    if (bw_limits(many->table, many->target, &exposure, &set, NULL, NULL) == BW_OK)
        batch.column_count = set.count;
    for (size_t i = 0; i < batch.column_count; i++) {
        const struct bw_limit *limit = &set.limits[i];
        batch.columns[i] =
            (struct bw_limit_column){limit->effect, &limit->radiant_exposure_j_m2, &limit->irradiance_w_m2,
                                     &limit->aperture_m, &limit->acceptance_rad};
    }
    many->visitor(many->context, &batch);
}

static void visit_each(const struct many *many, size_t from, size_t to) {
    for (size_t i = from; i < to; i++)
        visit_one(many, many->block.first + many->block.order[i]);
}

/* ---- by columns ------------------------------------------------------------------------------- */

static bool is_simple(const struct power *power) {
    return power->law != POWER_ANY && !power->inverse;
}

static bool is_simple_use(const struct many *many, const struct held_row *held, size_t index) {
    const struct factor_use *use = &many->table->rows[held->row].uses[index];
    const struct source_size *size = &many->table->source_size;
    if (use->power.law != POWER_1 || use->power.inverse)
        return false;
    if (use->factor != USE_CE)
        return held->factor_rows[index] != NO_ROW;
    return many->exposures->subtense_rad * 1e3 <= size->alpha_min_mrad &&
           (size->beyond != BEYOND_ACCEPTANCE ||
            (held->alpha_max != NO_ROW && is_simple(&size->rows[held->alpha_max].time_power)));
}

static bool is_simple_row(const struct many *many, const struct held_row *held) {
    const struct limit_row *row = &many->table->rows[held->row];
    bool photochemical = many->table->sections[row->section].effect == BW_RETINA_PHOTOCHEMICAL;
    if ((held->asks & ASKS_EDGES) || !is_simple(&row->time_power) || held->aperture == NO_ROW ||
        !is_simple(&many->table->apertures[held->aperture].time_power) ||
        !(row->quantity == QUANTITY_H || row->quantity == QUANTITY_E))
        return false;
    if (photochemical && many->exposures->subtense_rad > 0.0) /* may be wider than the cone */
        return false;
    for (size_t i = 0; i < row->use_count; i++)
        if (!is_simple_use(many, held, i))
            return false;
    return true;
}

/* A row of a section that is for other sources does not hold for any of the exposures. */
static bool takes_source(const struct many *many, const struct held_row *held) {
    const struct limit_section *section = &many->table->sections[many->table->rows[held->row].section];
    return !(held->asks & ASKS_SOURCE) ||
           (bw_limits_in_span(&section->subtense_mrad, many->exposures->subtense_rad * 1e3) &&
            bw_limits_in_span(&section->area_m2, many->exposures->area_m2));
}

/* The rows of the cell, one an effect. Returns: false if it takes more than columns. */
static bool simple_rows(const struct many *many, const struct cell *cell, const struct held_row *rows[BW_EFFECTS],
                        size_t *count) {
    *count = 0;
    for (size_t i = cell->first; i < cell->first + cell->count; i++) {
        const struct held_row *held = &many->plan->held[i];
        if (!takes_source(many, held))
            continue;
        const struct limit_section *sections = many->table->sections;
        bool rivals = *count > 0 && sections[many->table->rows[rows[*count - 1]->row].section].effect ==
                                        sections[many->table->rows[held->row].section].effect;
        if (rivals || !is_simple_row(many, held))
            return false;
        rows[(*count)++] = held;
    }
    return true;
}

static void size_column(const struct many *many, size_t count, const struct size_row *row, double out[]) {
    bw_column_power(count, row->value, many->times_s, row->time_power.law, out);
    bw_column_scale(count, 1e-3, out);
}

/* limit = value * t^power * factors, in the order of evaluate_row(). */
static void row_columns(struct many *many, size_t count, const struct held_row *held, size_t index,
                        struct bw_limit_column *column) {
    const struct bw_table *table = many->table;
    const struct limit_row *row = &table->rows[held->row];
    double *radiant = many->columns[index][0], *irradiance = many->columns[index][1];
    double *aperture = many->columns[index][2], *acceptance = many->columns[index][3];
    double *product = row->quantity == QUANTITY_E ? irradiance : radiant;
    bool measured_within_alpha_max = false;
    bw_column_power(count, row->value, many->times_s, row->time_power.law, product);
    for (size_t i = 0; i < row->use_count; i++) {
        if (row->uses[i].factor == USE_CE) { /* 1 for a source no larger than alpha_min */
            measured_within_alpha_max = table->source_size.beyond == BEYOND_ACCEPTANCE;
            continue;
        }
        const struct factor_row *factor = &table->factor_rows[held->factor_rows[i]];
        if (factor->constant)
            bw_column_scale(count, factor->offset + factor->scale, product);
        else
            bw_column_factor(count, factor, many->wavelengths_nm, product);
    }
    if (row->quantity == QUANTITY_E)
        bw_column_multiply(count, irradiance, many->times_s, radiant);
    else
        bw_column_divide(count, radiant, many->times_s, irradiance);
    size_column(many, count, &table->apertures[held->aperture], aperture);
    if (measured_within_alpha_max)
        size_column(many, count, &table->source_size.rows[held->alpha_max], acceptance);
    else
        bw_column_power(count, limits_infinity, many->times_s, POWER_0, acceptance);
    *column = (struct bw_limit_column){table->sections[row->section].effect, radiant, irradiance, aperture, acceptance};
}

static void visit_batch(struct many *many, const unsigned short *order, size_t count,
                        const struct held_row *const rows[BW_EFFECTS], size_t row_count) {
    struct bw_limit_batch batch = {.count = count, .places = many->places, .column_count = row_count};
    for (size_t i = 0; i < count; i++) {
        size_t place = many->block.first + order[i];
        many->places[i] = place;
        many->wavelengths_nm[i] = many->exposures->wavelengths_nm[place];
        many->times_s[i] = many->exposures->times_s[place];
    }
    for (size_t i = 0; i < row_count; i++)
        row_columns(many, count, rows[i], i, &batch.columns[i]);
    many->visitor(many->context, &batch);
}

static void visit_cell(struct many *many, const struct cell *cell, size_t from, size_t to) {
    const struct held_row *rows[BW_EFFECTS];
    size_t row_count;
    if (!simple_rows(many, cell, rows, &row_count)) {
        visit_each(many, from, to);
        return;
    }
    for (size_t i = from; i < to; i += BW_BATCH_MAX)
        visit_batch(many, many->block.order + i, to - i < BW_BATCH_MAX ? to - i : BW_BATCH_MAX, rows, row_count);
}

/* ---- entry points ----------------------------------------------------------------------------- */

static bool is_source(const struct bw_exposures *exposures) {
    return exposures->subtense_rad >= 0.0 && exposures->subtense_rad <= bw_pi / 2.0 && exposures->area_m2 >= 0.0 &&
           exposures->area_m2 < limits_infinity;
}

void bw_limits_visit(const struct bw_table *table, enum bw_target target, const struct bw_exposures *exposures,
                     bw_limit_visitor *visitor, void *context) {
    struct many many;
    many.table = table;
    many.plan = &table->plan[target];
    many.target = target;
    many.exposures = exposures;
    many.visitor = visitor;
    many.context = context;
    for (size_t first = 0; first < exposures->count; first += BLOCK) {
        many.block.first = first;
        many.block.count = exposures->count - first < BLOCK ? exposures->count - first : BLOCK;
        sort(&many);
        size_t from = 0;
        for (size_t bucket = 0; bucket <= CELLS_MAX; bucket++) {
            size_t to = many.block.ends[bucket];
            if (from < to && bucket < CELLS_MAX && is_source(exposures))
                visit_cell(&many, &many.plan->cells[bucket], from, to);
            else
                visit_each(&many, from, to);
            from = to;
        }
    }
}

struct lowest {
    double *radiant_exposures_j_m2, *irradiances_w_m2, *apertures_m;
    size_t missing;
};

static void scatter(const struct bw_limit_batch *batch, const double column[], double *out) {
    for (size_t i = 0; out != NULL && i < batch->count; i++)
        out[batch->places[i]] = column[i];
}

static void take(struct lowest *lowest, const struct bw_limit_batch *batch, const struct bw_limit_column *column) {
    scatter(batch, column->radiant_exposure_j_m2, lowest->radiant_exposures_j_m2);
    scatter(batch, column->irradiance_w_m2, lowest->irradiances_w_m2);
    scatter(batch, column->aperture_m, lowest->apertures_m);
}

/* The lowest of at most all effects, in columns of its own: NAN at first, which any limit replaces. */
static void take_lowest(void *context, const struct bw_limit_batch *batch) {
    struct lowest *lowest = context;
    double columns[3][BW_BATCH_MAX];
    struct column_limit found = {columns[0], columns[1], columns[2]};
    if (batch->column_count == 1) {
        take(lowest, batch, &batch->columns[0]);
        return;
    }
    lowest->missing += batch->column_count == 0 ? batch->count : 0;
    for (size_t i = 0; i < batch->count; i++)
        columns[0][i] = columns[1][i] = columns[2][i] = limits_nan;
    for (size_t i = 0; i < batch->column_count; i++)
        bw_column_lowest(batch->count, &batch->columns[i], &found);
    take(lowest, batch,
         &(struct bw_limit_column){
             .radiant_exposure_j_m2 = columns[0], .irradiance_w_m2 = columns[1], .aperture_m = columns[2]});
}

size_t bw_limits_many(const struct bw_table *table, enum bw_target target, const struct bw_exposures *exposures,
                      double *radiant_exposures_j_m2, double *irradiances_w_m2, double *apertures_m) {
    struct lowest lowest = {radiant_exposures_j_m2, irradiances_w_m2, apertures_m, 0};
    bw_limits_visit(table, target, exposures, take_lowest, &lowest);
    return lowest.missing;
}

size_t bw_limits_eye_many(const struct bw_table *table, size_t count, const double *wavelengths_nm,
                          const double *times_s, double *radiant_exposures_j_m2, double *irradiances_w_m2) {
    struct bw_exposures exposures = {count, wavelengths_nm, times_s, 0.0, 0.0};
    return bw_limits_many(table, BW_EYE, &exposures, radiant_exposures_j_m2, irradiances_w_m2, NULL);
}
