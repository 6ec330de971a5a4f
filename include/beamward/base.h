/* base - error values, text, numbers, root finding, plane geometry, the guarded INI reader, the working.
 * Uses: nothing (base/ini.c alone uses iniparser).  Used by: every module.
 * Threads: no state anywhere; an object may be used by one thread at a time. */
#ifndef BEAMWARD_BASE_H
#define BEAMWARD_BASE_H

#include <stdbool.h>
#include <stddef.h>

#ifdef __cplusplus
extern "C" {
#endif

#if defined(__GNUC__)
#define BW_PRINTF(text_at, first_at) __attribute__((format(printf, text_at, first_at)))
#else
#define BW_PRINTF(text_at, first_at)
#endif

/* ---- errors ------------------------------------------------------------------------------- */

enum bw_status {
    BW_OK = 0,
    BW_ARGUMENT,     /* an argument is NaN or outside its documented range */
    BW_OUT_OF_RANGE, /* no row of the published table covers it: never extrapolated */
    BW_INPUT,        /* a file, a key or an option is wrong */
    BW_NO_MEMORY,
    BW_SYSTEM        /* the system failed: disk, permissions */
};

struct bw_error {
    enum bw_status status;
    char text[480];
};

/* Sets the error unless one is set already: the first failure wins. error may be NULL.
 * Returns: status, so that a function can end with `return bw_error_set(...)`. */
enum bw_status bw_error_set(struct bw_error *error, enum bw_status status, const char *format, ...)
    BW_PRINTF(3, 4);

struct bw_text;

/* What is wrong with a file, all of it at once. A zeroed struct is an empty list. */
struct bw_fault {
    int line;      /* 1-based; 0 = the file as a whole */
    char *section; /* may be empty, never NULL */
    char *key;     /* may be empty, never NULL */
    char *text;    /* "what is wrong; what would be right" */
};
struct bw_faults {
    struct bw_fault *items;
    size_t count, capacity;
    bool out_of_memory;
};
void bw_faults_add(struct bw_faults *faults, int line, const char *section, const char *key,
                   const char *format, ...) BW_PRINTF(5, 6);
void bw_faults_sort(struct bw_faults *faults); /* by line; stable */
/* One line a fault: `PATH:LINE: [section] key: text`, without the parts that a fault lacks. */
void bw_faults_print(struct bw_text *out, const char *path, const struct bw_faults *faults);
void bw_faults_free(struct bw_faults *faults);

/* ---- text --------------------------------------------------------------------------------- */

enum { BW_NAME_SIZE = 64, BW_TITLE_SIZE = 200, BW_REASON_SIZE = 200 };

/* A growing string. A zeroed struct is empty; after a failed allocation `failed` stays true and
 * further additions do nothing. data is NUL-terminated or NULL. */
struct bw_text {
    char *data;
    size_t length, capacity;
    bool failed;
};
void bw_text_add(struct bw_text *text, const char *format, ...) BW_PRINTF(2, 3);
void bw_text_add_bytes(struct bw_text *text, const char *bytes, size_t length);
void bw_text_free(struct bw_text *text);
char *bw_duplicate(const char *string); /* NULL when memory is short */

/* The name nearest to a mistyped word (edit distance at most 2, or a third of the length), or NULL. */
const char *bw_nearest_name(const char *word, const char *const *names, size_t count);

/* ---- numbers ------------------------------------------------------------------------------ */

/* Reads one plain decimal number that fills the whole of `string` (blanks around it allowed).
 * Refused: empty, trailing text or units, decimal comma, nan, inf, hexadecimal, overflow, underflow to 0. */
bool bw_parse_number(const char *string, double *value);

enum bw_rounding { BW_NEAREST, BW_DOWN, BW_UP };

enum { BW_NUMBER_SIZE = 40 };

/* Decimal text with so many significant digits, rounded as told: limits BW_DOWN, distances and
 * optical densities BW_UP. A value that is a printed number to within 1e-12 relative is not pushed
 * to its neighbour. Plain notation from 1e-3 to below 1e6, else exponent. NaN gives "n/a",
 * infinity "unbounded". Returns: out. */
const char *bw_format(char out[BW_NUMBER_SIZE], double value, int digits, enum bw_rounding rounding);
/* The same with a fixed number of decimals (0 to 9). */
const char *bw_format_fixed(char out[BW_NUMBER_SIZE], double value, int decimals, enum bw_rounding rounding);

static const double bw_pi = 3.14159265358979323846;

/* One unit suffix of a key or a printed quantity: value_si = value * to_si. */
struct bw_unit {
    const char *suffix;
    double to_si;
};
/* Length (mm, cm, m, in, ft) or angle (mrad, deg) by the suffix of a key, without the underscore.
 * Returns: NULL if unknown. */
const struct bw_unit *bw_length_unit(const char *suffix);
const struct bw_unit *bw_angle_unit(const char *suffix);

/* Root of a continuous function between two places of opposite sign (Brent's method: R. P. Brent,
 * Algorithms for Minimization without Derivatives, 1973, ch. 4), to the last few units of the double.
 * Returned: root; NAN on error. Returns: BW_OK; BW_ARGUMENT if the signs do not differ, or on NaN. */
typedef double bw_function(double x, const void *context);
enum bw_status bw_root(bw_function *function, const void *context, double low, double high, double *root);

/* ---- plane geometry ----------------------------------------------------------------------- */

struct bw_point {
    double x_m, y_m;
};
struct bw_segment {
    struct bw_point from, to;
};
struct bw_polygon {
    struct bw_point *points; /* in order, closed implicitly */
    size_t count;
};
double bw_distance(struct bw_point a, struct bw_point b);
double bw_point_segment_distance(struct bw_point p, struct bw_segment s);
/* Touching means nearer than a nanometre: decimal coordinates are not exact in binary. */
bool bw_segments_cross(struct bw_segment a, struct bw_segment b); /* touching counts */
struct bw_point bw_mirror_point(struct bw_point p, struct bw_segment line);
double bw_polygon_area(const struct bw_polygon *polygon); /* positive whatever the direction */
bool bw_polygon_contains(const struct bw_polygon *polygon, struct bw_point p); /* the edge counts */
bool bw_polygon_is_simple(const struct bw_polygon *polygon); /* three corners or more, no edge touches another */
bool bw_polygon_is_convex(const struct bw_polygon *polygon); /* of a simple one */

/* ---- INI ---------------------------------------------------------------------------------- */

/* One key of a file, or (key == "") the head of a section. Names are lower case, values trimmed and
 * free of comments. */
struct bw_ini_entry {
    char *section, *key, *value;
    int line;
};
struct bw_ini {
    struct bw_ini_entry *entries; /* in the order of the file */
    size_t count, capacity;
};
/* Reads a file through the guard described in base/ini.c: whatever iniparser would swallow or
 * misread is a fault with its line, sorted by line. Returns: BW_OK; BW_INPUT with faults, or without if
 * there is no such file or it is a folder; BW_SYSTEM if it cannot be opened or read; BW_NO_MEMORY. `bytes` (may be NULL) receives the raw file. */
enum bw_status bw_ini_read(const char *path, struct bw_ini *ini, struct bw_text *bytes,
                           struct bw_faults *faults, struct bw_error *error);
/* The same from memory. */
enum bw_status bw_ini_read_bytes(const char *bytes, size_t length, struct bw_ini *ini,
                                 struct bw_faults *faults, struct bw_error *error);
/* For other makers of triples (the page): appends one entry. */
enum bw_status bw_ini_add(struct bw_ini *ini, const char *section, const char *key, const char *value, int line);
void bw_ini_free(struct bw_ini *ini);

/* ---- the working -------------------------------------------------------------------------- */

/* How a figure came about, written by the evaluation itself while it runs. A zeroed struct is empty.
 * Every function that takes a `struct bw_working *` accepts NULL and then records nothing. */
struct bw_step {
    bool heading;   /* then only `formula` holds text */
    char *symbol;   /* "CA" */
    char *formula;  /* "10^(0.002 (w - 700))" */
    char *numbers;  /* "10^(0.002 * (810 - 700))": gives the value on a pocket calculator; empty if it is an input or searched */
    double value;   /* as the evaluation used it */
    char *unit;     /* "J/m2"; may be empty */
    char *source;   /* "icnirp-2013, factor ca r02, Table 4, from memory"; may be empty */
    char *note;     /* what is assumed, or how it was found, in words; may be empty */
};
struct bw_working {
    struct bw_step *steps;
    size_t count, capacity;
    bool failed;
};
void bw_working_heading(struct bw_working *working, const char *format, ...) BW_PRINTF(2, 3);
/* formula and numbers may be NULL. In numbers stand + - * / ^ ( ) pi and sqrt exp ln log10 atan min max floor ceil,
 * numbers to ten digits; every other word belongs into the note. */
void bw_working_step(struct bw_working *working, const char *symbol, double value, const char *unit,
                     const char *source, const char *formula, const char *numbers, ...) BW_PRINTF(7, 8);
/* Adds words to the last step. */
void bw_working_note(struct bw_working *working, const char *format, ...) BW_PRINTF(2, 3);
/* A number for the numbers of a step: ten digits, as short as it can be. Returns: out. */
const char *bw_working_number(char out[BW_NUMBER_SIZE], double value);
void bw_working_free(struct bw_working *working);

#ifdef __cplusplus
}
#endif
#endif
