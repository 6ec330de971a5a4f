/* Reading a rule set: the table being built, and the cells of one row. Private to the table_read*.c files. */
#ifndef BEAMWARD_LIMITS_READ_H
#define BEAMWARD_LIMITS_READ_H

#include "internal.h"

/* One row `key = cell | cell | ...`. Each fault is reported where it is found; `good` tells whether there was one. */
enum { CELLS_MAX = 12, CELL_SIZE = 200 };
struct cells {
    const struct bw_ini_entry *entry;
    struct bw_faults *faults;
    bool good;
    size_t count;
    char cell[CELLS_MAX][CELL_SIZE];
};

/* columns: "wavelength nm | s | clause | known"; the row must have as many. Returns: false after a fault. */
bool bw_cells_split(struct cells *cells, const struct bw_ini_entry *entry, struct bw_faults *faults,
                    const char *columns);
void bw_cells_fault(struct cells *cells, const char *format, ...) BW_PRINTF(2, 3);

/* A plain number or a quotient of two (1/98.5), within low .. high. NAN after a fault. */
double bw_cells_number(struct cells *cells, size_t column, const char *what, double low, double high);
enum span_edges { EDGES_CLOSED = 0, EDGES_OPEN_LOW = 1, EDGES_OPEN_HIGH = 2, EDGES_UNBOUNDED = 4 };
/* `lo .. hi` within low .. high; the open edges `>lo`, `<hi` and the missing upper edge only as allowed. */
struct span bw_cells_span(struct cells *cells, size_t column, const char *what, double low, double high, int allowed);
struct span bw_cells_wavelength(struct cells *cells, size_t column);
/* The two texts of a span, open marks removed, for edges that may be names. */
bool bw_cells_span_texts(struct cells *cells, size_t column, const char *what, char low[CELL_SIZE],
                         char high[CELL_SIZE], struct span *open);
/* Which of the words the cell is; a fault offers the nearest. Returns: count after a fault. */
size_t bw_cells_word(struct cells *cells, size_t column, const char *what, const char *const *words, size_t count);
bool bw_cells_effect(struct cells *cells, size_t column, enum bw_effect *effect);

enum section_kind {
    SECTION_NONE,
    SECTION_UNKNOWN,
    SECTION_TABLE,
    SECTION_FACTOR,
    SECTION_SOURCE_SIZE,
    SECTION_LIMITS,
    SECTION_APERTURE,
    SECTION_CONE,
    SECTION_REPETITION,
    SECTION_TRAIN,
    SECTION_ADDITIVITY,
    SECTION_EXPOSURE
};

/* The table under construction. Every list has room for all keys of the file, so that none has to grow. */
struct reading {
    const struct bw_ini *ini;
    struct bw_faults *faults;
    struct memory *memory;
    bool no_memory;
    struct bw_table *table;
    enum section_kind kind; /* of the section being read */
    size_t section_rows;    /* rows read so far in it, by one numbering */
    size_t applies_rows;    /* the second numbering of [repetition] */
    const char **notes;
    struct factor *factors;
    struct factor *factor; /* being read */
    struct factor_row *factor_rows;
    struct limit_section *sections;
    struct limit_row *rows;
    struct size_row *apertures, *cones, *alpha_max;
    struct ti_row *ti;
    struct applies_row *applies;
    struct train_row *train;
    struct add_row *additivity;
    struct time_row *times;
};

/* NULL, and no_memory set, when memory is short. */
const char *bw_reading_copy(struct reading *reading, const char *string);
void bw_reading_fault(struct reading *reading, const struct bw_ini_entry *entry, const char *format, ...)
    BW_PRINTF(3, 4);
/* The clause and known of the last two cells. */
struct row_note bw_reading_note(struct reading *reading, struct cells *cells);
/* Rows are numbered r01, r02 ... in the order of the page: a slipped or doubled line shows. */
bool bw_reading_row_number(struct reading *reading, const struct bw_ini_entry *entry, const char *prefix, size_t *rows);
int bw_reading_factor(const struct reading *reading, const char *name); /* index; -1 if unknown */

/* table_read_rows.c: factors, limits, apertures, cones, source size */
void bw_read_factor(struct reading *reading, const struct bw_ini_entry *entry);
void bw_read_limits_section(struct reading *reading, const struct bw_ini_entry *entry);
void bw_read_limits(struct reading *reading, const struct bw_ini_entry *entry);
void bw_read_aperture(struct reading *reading, const struct bw_ini_entry *entry);
void bw_read_cone(struct reading *reading, const struct bw_ini_entry *entry);
void bw_read_source_size(struct reading *reading, const struct bw_ini_entry *entry);

/* table_read_rules.c: trains, sums, times */
void bw_read_repetition(struct reading *reading, const struct bw_ini_entry *entry);
void bw_read_train(struct reading *reading, const struct bw_ini_entry *entry);
void bw_read_additivity(struct reading *reading, const struct bw_ini_entry *entry);
void bw_read_exposure(struct reading *reading, const struct bw_ini_entry *entry);

#endif
