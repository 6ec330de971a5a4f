/* What a table says of itself: names, span, how many of its values are only from memory. */
#include "internal.h"

const char *bw_table_id(const struct bw_table *table) {
    return table->id;
}

const char *bw_table_title(const struct bw_table *table) {
    return table->title;
}

const char *bw_table_source(const struct bw_table *table) {
    return table->source;
}

const char *bw_table_edition(const struct bw_table *table) {
    return table->edition;
}

void bw_table_span(const struct bw_table *table, enum bw_target target, double *low_nm, double *high_nm) {
    const struct band_index *index = &table->index[target];
    *low_nm = *high_nm = limits_nan;
    if (index->count == 0)
        return;
    *low_nm = index->bands[0].low_nm;
    *high_nm = index->bands[index->count - 1].high_nm;
}

struct counts {
    size_t rows, from_memory;
};

static void count_note(struct counts *counts, const struct row_note *note) {
    if (note->key == NULL) /* not given */
        return;
    counts->rows++;
    counts->from_memory += note->known == BW_MEMORY;
}

static void count_sizes(struct counts *counts, const struct size_row *rows, size_t count) {
    for (size_t i = 0; i < count; i++)
        count_note(counts, &rows[i].note);
}

static void count_rules(struct counts *counts, const struct bw_table *table) {
    const struct repetition *repetition = &table->repetition;
    for (size_t i = 0; i < repetition->ti_count; i++)
        count_note(counts, &repetition->ti[i].note);
    for (size_t i = 0; i < repetition->applies_count; i++)
        count_note(counts, &repetition->applies[i].note);
    count_note(counts, &repetition->count_note);
    count_note(counts, &repetition->longest_note);
    for (size_t i = 0; i < table->train_count; i++)
        count_note(counts, &table->train[i].note);
    for (size_t i = 0; i < table->additivity_count; i++)
        count_note(counts, &table->additivity[i].note);
    for (size_t i = 0; i < table->time_count; i++)
        count_note(counts, &table->times[i].note);
}

void bw_table_counts(const struct bw_table *table, size_t *rows, size_t *from_memory) {
    struct counts counts = {0, 0};
    for (size_t i = 0; i < table->factor_row_count; i++)
        count_note(&counts, &table->factor_rows[i].note);
    for (size_t i = 0; i < table->row_count; i++)
        count_note(&counts, &table->rows[i].note);
    count_note(&counts, &table->source_size.alpha_min_note);
    count_note(&counts, &table->source_size.beyond_note);
    count_sizes(&counts, table->source_size.rows, table->source_size.count);
    count_sizes(&counts, table->apertures, table->aperture_count);
    count_sizes(&counts, table->cones, table->cone_count);
    count_rules(&counts, table);
    *rows = counts.rows;
    *from_memory = counts.from_memory;
}
