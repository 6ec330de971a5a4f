/* The rows sorted by wavelength: between two neighbouring edges the same rows hold. For the checker and for what a
 * table tells of itself; the evaluator has the plan (table_plan.c). */
#include "internal.h"

#include <limits.h>
#include <stdlib.h>

static int compare_numbers(const void *a, const void *b) {
    const double *x = a, *y = b;
    return (*x > *y) - (*x < *y);
}

static size_t sort_unique(double *values, size_t count) {
    size_t kept = 0;
    qsort(values, count, sizeof *values, compare_numbers);
    for (size_t i = 0; i < count; i++)
        if (kept == 0 || values[i] > values[kept - 1])
            values[kept++] = values[i];
    return kept;
}

/* A row belongs to a band if it touches it: at an edge both neighbours must be found. */
static bool touches(const struct limit_row *row, double low_nm, double high_nm) {
    return row->wavelength_nm.low <= high_nm && row->wavelength_nm.high >= low_nm;
}

bool bw_limits_index(struct bw_table *table, struct memory *memory) {
    if (table->row_count > USHRT_MAX)
        return false;
    for (size_t target = 0; target < 2; target++) {
        double *edges = bw_limits_memory_take(memory, 2 * table->row_count + 1, sizeof *edges);
        if (edges == NULL)
            return false;
        size_t count = 0;
        for (size_t i = 0; i < table->row_count; i++) {
            if ((size_t)table->sections[table->rows[i].section].target != target)
                continue;
            edges[count++] = table->rows[i].wavelength_nm.low;
            edges[count++] = table->rows[i].wavelength_nm.high;
        }
        count = sort_unique(edges, count);
        if (count < 2)
            continue;
        struct band *bands = bw_limits_memory_take(memory, count - 1, sizeof *bands);
        unsigned short *rows = bw_limits_memory_take(memory, (count - 1) * table->row_count, sizeof *rows);
        if (bands == NULL || rows == NULL)
            return false;
        struct band_index *index = &table->index[target];
        for (size_t b = 0; b + 1 < count; b++) {
            bands[b] = (struct band){edges[b], edges[b + 1], index->rows_count, 0};
            for (size_t i = 0; i < table->row_count; i++)
                if ((size_t)table->sections[table->rows[i].section].target == target &&
                    touches(&table->rows[i], edges[b], edges[b + 1]))
                    rows[index->rows_count++] = (unsigned short)i;
            bands[b].count = index->rows_count - bands[b].first;
        }
        index->bands = bands;
        index->count = count - 1;
        index->rows = rows;
    }
    return true;
}
