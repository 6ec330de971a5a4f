/* report - what its files share. Private to the folder. */
#ifndef BEAMWARD_REPORT_INTERNAL_H
#define BEAMWARD_REPORT_INTERNAL_H

#include <beamward/report.h>

/* ---- utf8.c: text of other people's making ---------------------------------------------------- */

/* One character. Returns: what follows it; *code is U+FFFD for bytes that are no UTF-8. */
const char *report_next(const char *at, unsigned long *code);
void report_encode(struct bw_text *out, unsigned long code);
int report_columns(unsigned long code); /* on a terminal: 0, 1 or 2 */
size_t report_width(const char *string);
/* Copies what can be shown: control and direction-changing characters become blanks. */
void report_clean(struct bw_text *out, const char *string);
/* The same, and & < > " ' become entities: for HTML, SVG and their attributes. */
void report_xml(struct bw_text *out, const char *string);

/* ---- quantities.c: numbers with units, rounded to the safe side -------------------------------- */

enum { REPORT_QUANTITY_SIZE = BW_WORDS_SIZE };
const char *report_radiant_exposure(char out[REPORT_QUANTITY_SIZE], double value_j_m2, bool us); /* limit: down */
const char *report_irradiance(char out[REPORT_QUANTITY_SIZE], double value_w_m2, bool us);       /* limit: down */
const char *report_reach(char out[REPORT_QUANTITY_SIZE], const struct bw_reach *reach, bool us); /* up; "none" for 0 */
const char *report_ratio(char out[REPORT_QUANTITY_SIZE], double ratio);                          /* up */
const char *report_density(char out[REPORT_QUANTITY_SIZE], double od);       /* needed: up, one decimal */
const char *report_density_given(char out[REPORT_QUANTITY_SIZE], double od); /* down; "none" */
const char *report_plain(char out[REPORT_QUANTITY_SIZE], double value); /* an input, or what is no limit: nearest */
const char *report_time(char out[REPORT_QUANTITY_SIZE],
                        const struct bw_permitted_time *time);                    /* down; "none", "never" */
const char *report_area(char out[REPORT_QUANTITY_SIZE], double area_m2, bool us); /* up */
const char *report_known(enum bw_known known);                                    /* "read", "memory" */
const char *report_known_words(enum bw_known known);                              /* "read", "from memory" */
/* Why this exposure time: "customary glance (clause, from memory)" or "given in the case file". */
void report_time_reason(struct bw_text *out, const struct bw_distance_result *distance,
                        const struct bw_exposure_time *time, const char *what);
/* "power of deep" or, of all that share it, "beam diameter". */
void report_input_words(struct bw_text *out, const struct bw_result *result, const struct bw_distance_result *distance,
                        const struct bw_sensitivity *sensitivity);
/* "0.50 %" or "none"; either sign, to the nearest. */
const char *report_per_cent(char out[REPORT_QUANTITY_SIZE], double value);
/* Emissions of a handpiece and what it is called. */
const struct bw_laser *report_laser(const struct bw_result *result, size_t laser);
const struct bw_handpiece *report_handpiece(const struct bw_result *result, size_t laser, size_t handpiece);
/* The largest density that any emission of the handpiece needs at the exit. */
double report_largest_density(const struct bw_result *result, const struct bw_distance_result *distance);
double report_person_density(const struct bw_person_result *person);
size_t report_count_findings(const struct bw_result *result, enum bw_severity severity);
/* "Not acceptable as it is: 2 dangers, 1 action." or what can be said if there is none. */
void report_verdict(struct bw_text *out, const struct bw_result *result);
const char *report_opening_kind(enum bw_opening_kind kind);
const char *report_base_name(const char *path);

/* ---- legend.c: the symbols of the working ------------------------------------------------------- */

struct report_symbol {
    const char *symbol, *meaning;
};
enum { REPORT_SYMBOLS_MAX = 96 };
const struct report_symbol *report_symbols(size_t *count); /* fewer than REPORT_SYMBOLS_MAX */
bool report_symbol_used(const struct bw_working *working, const char *symbol);
void report_symbol_mark(const struct bw_working *working, bool used[REPORT_SYMBOLS_MAX]);
extern const char report_legend_words[];
/* Value of a step, seven digits. */
const char *report_step_value(char out[BW_NUMBER_SIZE], const struct bw_step *step);
/* A formula or numbers that say no more than the value itself, or than what stands before. */
bool report_step_repeats(const struct bw_step *step, const char *text);

/* ---- json.c ------------------------------------------------------------------------------------ */

enum { JSON_DEPTH = 16 };
struct json {
    struct bw_text *out;
    int depth;
    char closers[JSON_DEPTH];
    bool has_items[JSON_DEPTH];
};
/* key is NULL inside arrays. */
void json_object(struct json *json, const char *key);
void json_array(struct json *json, const char *key);
void json_end(struct json *json);
void json_string(struct json *json, const char *key, const char *value); /* NULL becomes null */
void json_number(struct json *json, const char *key, double value);      /* not finite becomes null */
void json_integer(struct json *json, const char *key, long value);
void json_bool(struct json *json, const char *key, bool value);
void json_null(struct json *json, const char *key);
void json_point(struct json *json, const char *key, struct bw_point point);
/* Members of an object that is open. */
void report_distance_members(struct json *json, const struct bw_result *result);
void report_eyewear_members(struct json *json, const struct bw_result *result);
void report_beam(struct json *json, const struct bw_result *result, const struct bw_distance_result *distance);
void report_comparison_members(struct json *json, const struct bw_result *result); /* nothing without --rules all */
void report_room_members(struct json *json, const struct bw_result *result, bool timing);
void report_incident_members(struct json *json, const struct bw_result *result);
void report_time_member(struct json *json, const char *key, const char *unbounded_key,
                        const struct bw_permitted_time *time);
/* What an object of beams[] has beside distances: tolerances, aids, times, sensitivity. */
void report_more_members(struct json *json, const struct bw_result *result, const struct bw_distance_result *distance);

/* ---- text.c: 80 columns ------------------------------------------------------------------------- */

enum { TEXT_COLUMNS = 80, TABLE_COLUMNS_MAX = 10 };
/* Wraps; the first line begins with `head`, the others with as many blanks. */
/* One line of a wrapped string. Returned: *rest after it and its blanks. Returns: its length in bytes. */
size_t text_wrap_line(const char **rest, size_t width);
void text_wrap(struct bw_text *out, const char *head, const char *string);
void text_wrapf(struct bw_text *out, const char *head, const char *format, ...) BW_PRINTF(3, 4);
void text_heading(struct bw_text *out, const char *string); /* underlined, a blank line before it */

struct text_table {
    size_t columns, count, capacity; /* count: of cells */
    bool right[TABLE_COLUMNS_MAX];   /* numbers */
    char **cells;
    bool failed;
};
/* Alignment: one letter a column, l or r. The first row of cells is the head. */
void table_begin(struct text_table *table, const char *alignment);
void table_cell(struct text_table *table, const char *format, ...) BW_PRINTF(2, 3);
/* The same for a quantity: its number and unit stay together. */
void table_quantity(struct text_table *table, const char *quantity);
void table_print(struct text_table *table, struct bw_text *out, size_t indent); /* and frees it */

/* Sections that several texts share. */
void text_case_head(struct bw_text *out, const struct bw_result *result);
void text_distance_table(struct bw_text *out, const struct bw_result *result);
void text_goggles_matrix(struct bw_text *out, const struct bw_result *result);
void text_rooms(struct bw_text *out, const struct bw_result *result, bool timing);
void text_findings(struct bw_text *out, const struct bw_result *result, enum bw_severity from, enum bw_severity to);
void text_handpiece_more(struct bw_text *out, const struct bw_result *result,
                         const struct bw_distance_result *distance);
void text_person_times(struct bw_text *out, const struct bw_result *result, const struct bw_room_result *found);
void text_incidents(struct bw_text *out, const struct bw_result *result);
void text_limit_sets(struct bw_text *out, const struct bw_limit_query *query); /* nothing without --rules all */
void report_limit_difference(struct bw_text *out, const struct bw_limit_query *query);
void text_comparison(struct bw_text *out, const struct bw_result *result); /* nothing without --rules all */
/* Of the distances; and of goggles and rooms, if asked for. With the legend. */
enum { WORKING_DISTANCE = 1, WORKING_EYEWEAR = 2, WORKING_ROOM = 4 };
void text_all_working(struct bw_text *out, const struct bw_result *result, unsigned of);

#endif
