/* What a rule set holds in memory. Private to src/limits; tablec writes these structs out as C. */
#ifndef BEAMWARD_LIMITS_INTERNAL_H
#define BEAMWARD_LIMITS_INTERNAL_H

#include <beamward/limits.h>

#include <math.h>

/* As doubles: the macros of math.h are floats, and clang warns at each use. */
static const double limits_nan = (double)NAN, limits_infinity = HUGE_VAL;

/* Two numbers that differ by less than this, relatively, are the same printed edge: 18e-6 s that a caller
 * computed must still meet the row that ends at 1.8e-5 s. Only rounding, never an extrapolation. */
static const double limits_edge_rounding = 1e-12;

/* The domain of every rule set; a row outside it is a misprint. */
static const double limits_wavelength_low_nm = 180.0, limits_wavelength_high_nm = 1e6;
static const double limits_time_low_s = 1e-13, limits_time_high_s = 3e4;
static const double limits_subtense_high_mrad = 1571.0; /* pi/2, as printed in the tables */

/* Where a row is printed. */
struct row_note {
    const char *key, *clause;
    enum bw_known known;
    int line; /* of the INI file, for the checker */
};

/* Closed unless marked open: `303 .. <304`, `>0.25 .. 3e4`. */
struct span {
    double low, high;
    bool open_low, open_high;
};

/* An exponent, with the law that the evaluator may use instead of pow(). The common laws come first. */
enum power_law { POWER_0, POWER_1_4, POWER_1_2, POWER_3_4, POWER_1, POWER_COMMON, POWER_3_8 = POWER_COMMON, POWER_ANY };
struct power {
    double exponent;
    enum power_law law; /* of the exponent's magnitude */
    bool inverse;       /* the exponent is negative */
};

struct factor_row { /* offset + scale * 10^(slope * (x - origin)) */
    struct span argument;
    double offset, scale, slope, origin;
    bool constant; /* slope 0: no power needed */
    struct row_note note;
};
enum factor_argument { BY_WAVELENGTH_NM, BY_SUBTENSE_MRAD };
struct factor {
    const char *name, *section; /* "ca", "factor ca" */
    enum factor_argument argument;
    size_t first, count; /* in bw_table.factor_rows */
    int line;
};

/* A time edge: a number, or the value of a factor (T1, T2). */
struct edge {
    double value_s; /* if factor is EDGE_IS_NUMBER */
    int factor;
};
enum { EDGE_IS_NUMBER = -1 };

enum { USE_CE = -1, USE_AREA = -2 }; /* factors that are built in */
struct factor_use {
    int factor;        /* index, or USE_... */
    const char *label; /* "t2^-0.25" */
    struct power power;
};

enum quantity { QUANTITY_H, QUANTITY_E, QUANTITY_G, QUANTITY_L };
enum { ROW_USES_MAX = BW_FACTORS_MAX - 1 }; /* one place is kept for (alpha/gamma)^2 */
struct limit_row {
    struct span wavelength_nm;
    struct edge from, to;
    enum quantity quantity;
    double value;
    struct power time_power;
    size_t use_count;
    struct factor_use uses[ROW_USES_MAX];
    size_t section; /* in bw_table.sections */
    struct row_note note;
};
struct limit_section {
    const char *name; /* "eye retina-thermal point" */
    enum bw_target target;
    enum bw_effect effect;
    struct span subtense_mrad, area_m2; /* condition on the source and on the exposed skin */
    struct span wavelength_nm;          /* `covers` */
    struct edge from, to;
    size_t first, count;   /* in bw_table.rows */
    int line, covers_line; /* covers_line 0: not given */
};

/* A length or an angle by wavelength and time: apertures [mm], cones and alpha_max [mrad]. */
struct size_row {
    enum bw_effect effect; /* apertures only */
    struct span wavelength_nm;
    struct edge from, to; /* numbers */
    double value;
    struct power time_power;
    struct row_note note;
};

enum beyond { BEYOND_NONE, BEYOND_SQUARE, BEYOND_ACCEPTANCE };
struct source_size {
    int line; /* 0: the rule set has none */
    double alpha_min_mrad;
    struct row_note alpha_min_note;
    enum beyond beyond; /* a source larger than alpha_max */
    struct row_note beyond_note;
    const struct size_row *rows; /* alpha_max */
    size_t count;
};

struct ti_row {
    struct span wavelength_nm;
    double ti_s;
    struct row_note note;
};
struct applies_row {
    enum bw_effect effect;
    struct span wavelength_nm;
    struct row_note note;
};
struct repetition {
    int line;
    const struct ti_row *ti;
    size_t ti_count;
    const struct applies_row *applies;
    size_t applies_count;
    int counting_factor; /* pulses are counted in this time (T2); COUNT_ALL: in the whole exposure */
    struct row_note count_note;
    double longest_pulse_s; /* INFINITY: not named */
    struct row_note longest_note;
};
enum { COUNT_ALL = -1 };

enum pulse_kind { PULSE_ANY, PULSE_SHORT, PULSE_LONG }; /* short: not longer than Ti */
struct train_row {                                      /* max(floor, scale * N^power), at most 1 */
    enum pulse_kind pulse;
    struct span subtense_mrad;
    bool low_is_alpha_max, high_is_alpha_max; /* that edge is alpha_max at the pulse's duration */
    struct span pulses, exposure_s;
    double scale;
    struct power power;
    double floor;
    struct row_note note;
};

struct add_row {
    struct span first_nm, second_nm;
    bool eye, skin;
    struct row_note note;
};

enum time_kind {
    TIME_VISIBLE,
    TIME_GLANCE,
    TIME_DIFFUSE,
    TIME_SKIN,
    TIME_ULTRAVIOLET,
    TIME_ALIGNMENT,
    TIME_WORKING_DAY
};
enum { TIME_KINDS = 7 };
struct time_row {
    enum time_kind kind;
    struct span wavelength_nm;
    double exposure_s;
    struct row_note note;
};

/* Rows that touch this band of wavelengths. */
struct band {
    double low_nm, high_nm;
    size_t first, count; /* in band_index.rows */
};
struct band_index {
    const struct band *bands; /* ascending, gapless */
    size_t count;
    const unsigned short *rows; /* indices into bw_table.rows */
    size_t rows_count;
};

/* Ascending cuts divide the numbers into zones: zone 0 lies below the first cut, zone k from cut k - 1 up to cut k. */
struct cuts {
    const double *at; /* NAN after the last: no number is at or above it */
    size_t count;
    const unsigned short *first; /* where to begin the search, by the leading bits of the number; see plan.h */
    size_t shift, lowest_key, key_count;
};

/* A row that holds in a whole cell, and the one row of each kind that goes with it there. */
enum { NO_ROW = 0xffff }; /* none, or several that have to be compared */
struct held_row {
    unsigned short row;                       /* in bw_table.rows */
    unsigned short aperture, cone, alpha_max; /* in their lists */
    unsigned short factor_rows[ROW_USES_MAX]; /* in bw_table.factor_rows, of each use */
    unsigned short asks;                      /* what is still to be asked: ASKS_... */
};
enum { ASKS_NOTHING = 0, ASKS_SOURCE = 1, ASKS_EDGES = 2 }; /* the subtense and area; symbolic edges */
struct cell {                                               /* ascending by effect, then by row */
    unsigned first, count;                                  /* in plan.held */
};

/* The rows that hold in each zone of wavelength and time. Cells that hold the same rows are one. Cell 0 is empty. */
struct plan {
    struct cuts wavelengths, times;
    const unsigned *cell_of; /* [wavelength zone][time zone] */
    const struct cell *cells;
    size_t cell_count;
    const struct held_row *held;
    size_t held_count;
};

struct bw_table {
    const char *id, *title, *source, *edition;
    const char *const *notes;
    size_t note_count;
    const struct factor *factors;
    size_t factor_count;
    const struct factor_row *factor_rows;
    size_t factor_row_count;
    struct source_size source_size;
    const struct limit_section *sections;
    size_t section_count;
    const struct limit_row *rows;
    size_t row_count;
    struct band_index index[2]; /* by enum bw_target */
    struct plan plan[2];        /* by enum bw_target */
    const struct size_row *apertures;
    size_t aperture_count;
    const struct size_row *cones;
    size_t cone_count;
    struct repetition repetition;
    const struct train_row *train;
    size_t train_count;
    const struct add_row *additivity;
    size_t additivity_count;
    const struct time_row *times;
    size_t time_count;
    void *memory; /* of a table that was loaded; NULL if it is built in */
};

/* tables_data.c, which tablec writes */
extern const struct bw_table *const bw_limits_built_in_tables[];
extern const size_t bw_limits_built_in_table_count;
extern const struct bw_material bw_limits_built_in_materials[];
extern const size_t bw_limits_built_in_material_count;

/* ---- formulas.c: what a row says at one place ------------------------------------------------- */

/* Within the span, its edges to within rounding. NaN is never inside.
 * An open edge decides for the stricter neighbour (`303 .. <304` holds just below 304); `>0.25` begins where the
 * number is no longer 0.25 but for rounding. */
static inline bool bw_limits_in_span(const struct span *span, double x) {
    bool above =
        span->open_low ? x > span->low * (1.0 + limits_edge_rounding) : x >= span->low * (1.0 - limits_edge_rounding);
    bool below = span->open_high ? x < span->high : x <= span->high * (1.0 + limits_edge_rounding);
    return above && below;
}
struct power bw_limits_power_of(double exponent);
double bw_limits_raise(double base, const struct power *power);
/* offset + scale * 10^(slope * (x - origin)) */
double bw_limits_factor_row(const struct factor_row *row, double x);
/* The lowest value^power of the factor's rows at x; NAN if no row holds. row (may be NULL): the row that gave it. */
double bw_limits_factor(const struct bw_table *table, int factor, double x, const struct power *power,
                        const struct factor_row **row);
/* The same with the argument taken by the factor's kind, to the first power. */
double bw_limits_factor_at(const struct bw_table *table, int factor, double wavelength_nm, double subtense_mrad);
double bw_limits_edge_s(const struct bw_table *table, const struct edge *edge, double wavelength_nm,
                        double subtense_mrad);
double bw_limits_size(const struct size_row *row, double time_s);
/* alpha_max at this duration [mrad]; INFINITY if the rule set names none. Durations below the first row take it. */
double bw_limits_alpha_max_mrad(const struct bw_table *table, double time_s);

/* ---- names.c ---------------------------------------------------------------------------------- */

const char *bw_limits_time_kind_name(enum time_kind kind);
const char *bw_limits_quantity_unit(enum quantity quantity);
const char *bw_limits_quantity_name(enum quantity quantity);
const char *bw_limits_pulse_name(enum pulse_kind pulse);

/* The shortest decimal text that reads back as the same number: 1e-13, 0.25, 1e6. */
enum { LIMITS_NUMBER_SIZE = 32 };
const char *bw_limits_number(char out[LIMITS_NUMBER_SIZE], double value);
/* The span as the tables print it. */
enum { LIMITS_SPAN_SIZE = 2 * LIMITS_NUMBER_SIZE + 8 };
const char *bw_limits_span(char out[LIMITS_SPAN_SIZE], const struct span *span);

/* ---- building --------------------------------------------------------------------------------- */

struct memory; /* memory.c: blocks that are freed together */
struct memory *bw_limits_memory_new(void);
void *bw_limits_memory_take(struct memory *memory, size_t count, size_t size); /* size > 0; zeroed; NULL if short */
const char *bw_limits_memory_copy(struct memory *memory, const char *string);
void bw_limits_memory_free(struct memory *memory);

/* table_index.c. Returns: false if memory is short. */
bool bw_limits_index(struct bw_table *table, struct memory *memory);
/* table_plan.c. Returns: false if memory is short. */
bool bw_limits_plan(struct bw_table *table, struct memory *memory);
/* table_check.c: gaps, overlaps and missing parts. */
void bw_limits_check(const struct bw_table *table, struct bw_faults *faults);
/* material_read.c. Returned: materials, to be freed by the caller. */
enum bw_status bw_limits_materials_read(const struct bw_ini *ini, struct bw_material **materials, size_t *count,
                                        struct bw_faults *faults, struct bw_error *error);

/* ---- evaluate_working.c: the working of a limit, in words ------------------------------------- */

/* "icnirp-2013, factor ca r02, Table 4, from memory" */
enum { LIMITS_SOURCE_SIZE = 200 };
const char *bw_limits_source_text(char out[LIMITS_SOURCE_SIZE], const char *table, const char *section,
                                  const struct row_note *note);
/* train.c: "min(1, max(0.4, 5 N^-0.25))", with N as a symbol or a number. */
void bw_limits_train_formula(char out[LIMITS_SOURCE_SIZE], const struct train_row *row, const char *pulses);

#endif
