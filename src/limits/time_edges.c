/* The times at which a limit changes its law: where the worst window of a train can lie. */
#include "internal.h"

#include <math.h>

struct edges {
    double *values;
    size_t count, capacity;
};

/* Inserts in order, once. */
static void add(struct edges *edges, double value) {
    size_t at = 0;
    if (!(value >= 0.0))
        return;
    while (at < edges->count && edges->values[at] < value * (1.0 - limits_edge_rounding))
        at++;
    if (at < edges->count && edges->values[at] <= value * (1.0 + limits_edge_rounding))
        return;
    if (edges->count == edges->capacity)
        return;
    for (size_t i = edges->count; i > at; i--)
        edges->values[i] = edges->values[i - 1];
    edges->values[at] = value;
    edges->count++;
}

static void add_size_rows(struct edges *edges, const struct size_row *rows, size_t count, double wavelength_nm) {
    for (size_t i = 0; i < count; i++) {
        if (!bw_limits_in_span(&rows[i].wavelength_nm, wavelength_nm))
            continue;
        add(edges, rows[i].from.value_s);
        add(edges, rows[i].to.value_s);
    }
}

size_t bw_limits_time_edges(const struct bw_table *table, enum bw_target target, const struct bw_exposure *exposure,
                            double *edges_s, size_t capacity) {
    struct edges edges = {edges_s, 0, capacity};
    double wavelength_nm = exposure->wavelength_nm, subtense_mrad = exposure->subtense_rad * 1e3;
    bool sized = false;
    for (size_t i = 0; i < table->row_count; i++) {
        const struct limit_row *row = &table->rows[i];
        const struct limit_section *section = &table->sections[row->section];
        if (section->target != target || !bw_limits_in_span(&row->wavelength_nm, wavelength_nm) ||
            !bw_limits_in_span(&section->subtense_mrad, subtense_mrad) ||
            !bw_limits_in_span(&section->area_m2, exposure->area_m2))
            continue;
        add(&edges, bw_limits_edge_s(table, &row->from, wavelength_nm, subtense_mrad));
        add(&edges, bw_limits_edge_s(table, &row->to, wavelength_nm, subtense_mrad));
        for (size_t j = 0; j < row->use_count; j++)
            sized = sized || row->uses[j].factor == USE_CE;
    }
    if (sized)
        add_size_rows(&edges, table->source_size.rows, table->source_size.count, wavelength_nm);
    for (size_t i = 0; i < table->aperture_count; i++)
        if ((table->apertures[i].effect == BW_SKIN_EFFECT) == (target == BW_SKIN))
            add_size_rows(&edges, &table->apertures[i], 1, wavelength_nm);
    if (target == BW_EYE)
        add_size_rows(&edges, table->cones, table->cone_count, wavelength_nm);
    return edges.count;
}
