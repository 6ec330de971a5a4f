/* limits - exposure limits and material data from the published tables, and the one evaluator that reads them.
 * Uses: base.  Used by: hazard, eyewear, room, casefile, assess, report, cli.
 * Tables are const and may be shared between threads; nothing here keeps state. */
#ifndef BEAMWARD_LIMITS_H
#define BEAMWARD_LIMITS_H

#include <beamward/base.h>

#ifdef __cplusplus
extern "C" {
#endif

enum bw_target { BW_EYE, BW_SKIN };

enum bw_effect {
    BW_RETINA_THERMAL,
    BW_RETINA_PHOTOCHEMICAL,
    BW_ULTRAVIOLET,
    BW_ANTERIOR, /* cornea and anterior segment, beyond the ultraviolet */
    BW_SKIN_EFFECT
};
enum { BW_EFFECTS = 5 };

/* "retina-thermal", "retina-photochemical", "ultraviolet", "anterior", "skin": as the tables name them. */
const char *bw_effect_name(enum bw_effect effect);

enum bw_known { BW_READ, BW_MEMORY }; /* how a printed value is known: read, or from memory */

/* Where a value is printed. */
struct bw_source_note {
    const char *table;   /* id of the rule set */
    const char *section; /* "eye retina-thermal" */
    const char *row;     /* "r02" */
    const char *clause;  /* "Table 5" */
    enum bw_known known;
};

struct bw_exposure { /* what falls on the eye or skin */
    double wavelength_nm; /* 180 to 1e6 */
    double exposure_s;    /* 1e-13 to 3e4 */
    double subtense_rad;  /* angular subtense of the apparent source, 0 (point) to pi/2 */
    double area_m2;       /* exposed skin, for rule sets with a large-area rule; 0 = small */
};

enum { BW_FACTORS_MAX = 6 };

struct bw_factor_value {
    const char *name; /* "ca" */
    double value;     /* with its exponent applied */
};

/* One limit, as a row gives it. */
struct bw_limit {
    enum bw_effect effect;
    struct bw_source_note source;
    double radiant_exposure_j_m2; /* H over the exposure time */
    double irradiance_w_m2;       /* the same as the mean over the exposure time */
    double aperture_m;            /* diameter of the limiting aperture */
    double acceptance_rad;        /* cone that the exposure is measured in; INFINITY = open */
    bool printed_as_irradiance;   /* the row prints E (or L), not H (or G) */
    size_t factor_count;
    struct bw_factor_value factors[BW_FACTORS_MAX];
};

struct bw_limit_set {
    size_t count; /* one limit an effect that has a row, the lowest row of each */
    struct bw_limit limits[BW_EFFECTS];
    size_t governing; /* index of the lowest radiant exposure */
};

struct bw_table; /* one published rule set; its rows are private to the module */

const char *bw_table_id(const struct bw_table *table);
const char *bw_table_title(const struct bw_table *table);
const char *bw_table_source(const struct bw_table *table); /* document, edition, year */
const char *bw_table_edition(const struct bw_table *table);
/* Wavelengths that have a row for the target [nm]. */
void bw_table_span(const struct bw_table *table, enum bw_target target, double *low_nm, double *high_nm);
/* Number of printed values, and of those the number known from memory. */
void bw_table_counts(const struct bw_table *table, size_t *rows, size_t *from_memory);

size_t bw_tables_count(void);
const struct bw_table *bw_tables_at(size_t index);         /* in order of id */
const struct bw_table *bw_tables_find(const char *id);     /* NULL if there is none */

/* Builds a rule set from the triples of an INI file (the same reader that compiles the built-in ones).
 * Returns: BW_OK; BW_INPUT with every fault and its line; BW_NO_MEMORY. */
enum bw_status bw_table_load(const struct bw_ini *ini, struct bw_table **table, struct bw_faults *faults,
                             struct bw_error *error);
void bw_table_free(struct bw_table *table); /* only for tables from bw_table_load; NULL allowed */

/* The rule set as a person reads it beside the printed document: at most 80 columns, values with units and clause,
 * and which are from memory. Appends to text. Returns: BW_OK; BW_NO_MEMORY. */
enum bw_status bw_table_print(const struct bw_table *table, struct bw_text *text);

/* Every effect of the target that has a row for the wavelength: the limits, and which one governs.
 * No allocation. Where rows meet, the lowest holds.
 * Returned: limits. Returns: BW_OK; BW_ARGUMENT for NaN or a negative value; BW_OUT_OF_RANGE if no
 * row covers it, with the covered range in the text. */
enum bw_status bw_limits_eye(const struct bw_table *table, const struct bw_exposure *exposure,
                             struct bw_limit_set *limits, struct bw_working *working, struct bw_error *error);
enum bw_status bw_limits_skin(const struct bw_table *table, const struct bw_exposure *exposure,
                              struct bw_limit_set *limits, struct bw_working *working, struct bw_error *error);
enum bw_status bw_limits(const struct bw_table *table, enum bw_target target, const struct bw_exposure *exposure,
                         struct bw_limit_set *limits, struct bw_working *working, struct bw_error *error);

/* ---- many exposures at once ------------------------------------------------------------------ */

/* Many exposures to sources of one size. */
struct bw_exposures {
    size_t count;
    const double *wavelengths_nm, *times_s; /* `count` of each */
    double subtense_rad, area_m2;           /* as in bw_exposure, of all */
};

/* The lowest limit of each exposure, with the bits that bw_limits() gives, but several at a time. No allocation; about
 * 64 KiB of stack.
 * Returned: arrays of `count`; NULL where not wanted; NAN where bw_limits() would return an error.
 * Returns:  the number of those. */
size_t bw_limits_many(const struct bw_table *table, enum bw_target target, const struct bw_exposures *exposures,
                      double *radiant_exposures_j_m2, double *irradiances_w_m2, double *apertures_m);
size_t bw_limits_eye_many(const struct bw_table *table, size_t count, const double *wavelengths_nm,
                          const double *times_s, double *radiant_exposures_j_m2, double *irradiances_w_m2);

/* Some of the many, in which the same effects have a limit: a column an effect, `count` numbers each. */
struct bw_limit_column {
    enum bw_effect effect;
    const double *radiant_exposure_j_m2, *irradiance_w_m2, *aperture_m, *acceptance_rad; /* as in bw_limit */
};
struct bw_limit_batch {
    size_t count;          /* 1 to BW_BATCH_MAX */
    const size_t *places;  /* which of the exposures they are */
    size_t column_count;   /* 0: bw_limits() would return an error */
    struct bw_limit_column columns[BW_EFFECTS]; /* ascending by effect */
};
enum { BW_BATCH_MAX = 128 };
typedef void bw_limit_visitor(void *context, const struct bw_limit_batch *batch);
/* Hands every limit of each exposure to the visitor, batch by batch, each exposure once, in no particular order. */
void bw_limits_visit(const struct bw_table *table, enum bw_target target, const struct bw_exposures *exposures,
                     bw_limit_visitor *visitor, void *context);

/* Times at which a row of this target and wavelength begins or ends, ascending [s]: where the worst
 * window of a train can lie. Symbolic edges (T1, T2) are given at their value for this exposure.
 * Returns: the number written (at most `capacity`). */
enum { BW_EDGES_MAX = 32 };
size_t bw_limits_time_edges(const struct bw_table *table, enum bw_target target, const struct bw_exposure *exposure,
                            double *edges_s, size_t capacity);

/* alpha_max at a duration [rad]: CE grows no further with one side of a source; INFINITY if the rule set names none. */
double bw_limits_largest_subtense(const struct bw_table *table, double time_s);

/* ---- what a rule set says of trains, sums and customary times ------------------------------- */

/* Ti (Tmin): pulses closer than this count as one [s]. Returns: false if the rule set has none here. */
bool bw_limits_grouping_time(const struct bw_table *table, double wavelength_nm, double *ti_s,
                             struct bw_source_note *source);
/* Longest time in which pulses are counted [s]: T2 for this subtense, or INFINITY (all pulses). */
double bw_limits_counting_time(const struct bw_table *table, const struct bw_exposure *exposure);
/* The same, and how it came about. */
double bw_limits_counting_working(const struct bw_table *table, const struct bw_exposure *exposure,
                                  struct bw_working *working);
/* True if the train correction (rule 3: N^-1/4, C5, CP) applies to this effect and wavelength. */
bool bw_limits_train_applies(const struct bw_table *table, enum bw_effect effect, double wavelength_nm);
/* Longest pulse that rule 3 applies to [s]; INFINITY if the rule set names none. */
double bw_limits_train_longest_pulse(const struct bw_table *table);

struct bw_train_count {
    double pulse_s;      /* of one pulse, or Ti for a group */
    double ti_s;         /* grouping time; 0 if none */
    double pulses;       /* N counted */
    double exposure_s;   /* whole exposure */
    double subtense_rad;
};
/* The correction of rule 3 (at most 1). Source may be NULL. */
double bw_limits_train_correction(const struct bw_table *table, const struct bw_train_count *count,
                                  struct bw_source_note *source, struct bw_working *working);

/* What a row prints, as words can quote it: "H = 18 t^0.75 CA CE" of a limit, "5 N^-0.25, at least 0.4" of a train row.
 * source: as the limit or the correction names it. Empty if the rule set has no such row. Returns: out. */
enum { BW_FORMULA_SIZE = 160 };
const char *bw_limits_row_formula(const struct bw_table *table, const struct bw_source_note *source,
                                  char out[BW_FORMULA_SIZE]);

/* True if the exposures of two wavelengths add for the target (same tissue and effect). */
bool bw_limits_add(const struct bw_table *table, enum bw_target target, double first_nm, double second_nm);

enum bw_viewing {
    BW_GLANCE,      /* accidental, into the direct beam or a mirror image: 0.25 s if all emissions are visible */
    BW_DIFFUSE,     /* looking at a diffuse reflection */
    BW_SKIN_TIME,   /* skin in the beam */
    BW_ALIGNMENT,   /* a trained person on purpose into a visible alignment beam */
    BW_WORKING_DAY
};
struct bw_exposure_time {
    double exposure_s;
    struct bw_source_note source;
    bool aversion_response; /* rests on the blink: the report must say that newer results doubt it */
};
/* The customary exposure time for these wavelengths together. */
enum bw_status bw_limits_exposure_time(const struct bw_table *table, enum bw_viewing viewing,
                                       const double *wavelengths_nm, size_t count,
                                       struct bw_exposure_time *time, struct bw_error *error);

/* ---- materials ------------------------------------------------------------------------------ */

enum bw_finish { BW_MATT, BW_MIRROR, BW_GLOSS, BW_GLASS };
const char *bw_finish_name(enum bw_finish finish);

struct bw_material {
    char name[BW_NAME_SIZE];
    char title[BW_TITLE_SIZE];
    enum bw_finish finish;
    double reflectance;      /* 0 to 1; at normal incidence for gloss (its coat) and glass (one surface) */
    double matt_reflectance; /* diffuse share below a gloss coat, and of matt; else 0 */
    double transmittance;    /* 0 to 1, what goes straight through */
    double refractive_index; /* glass and gloss; else 0 */
    char source[BW_TITLE_SIZE];
    enum bw_known known;
};
size_t bw_materials_count(void);
const struct bw_material *bw_materials_at(size_t index);
const struct bw_material *bw_materials_find(const char *name);
enum bw_status bw_materials_print(struct bw_text *text); /* as bw_table_print */

#ifdef __cplusplus
}
#endif
#endif
