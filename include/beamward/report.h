/* report - a result as text, JSON, SVG and HTML. Computes nothing; rounds to the safe side.
 * Uses: assess and below.  Used by: cli.
 * Everything is appended to a bw_text; check text->failed for memory. */
#ifndef BEAMWARD_REPORT_H
#define BEAMWARD_REPORT_H

#include <beamward/assess.h>

#ifdef __cplusplus
extern "C" {
#endif

/* What the record says of how it was made. Any may be NULL except version. */
struct bw_provenance {
    const char *version;
    const char *case_path, *case_sha256;
    const char *date; /* ISO; given by the caller, since nothing here reads a clock; NULL leaves a line to fill in */
};

/* A limit on its own (`beamward limit`). */
struct bw_limit_query {
    const struct bw_table *table;
    enum bw_target target;
    struct bw_exposure exposure;
    struct bw_limit_set limits;
    bool has_train;
    struct bw_emission emission; /* with has_train */
    struct bw_train_limit_set train;
    const char *exposure_reason; /* NULL if the time was given */
    bool us_units;
    struct bw_working working;
    const struct bw_limit_query *rule_sets; /* the same by every rule set, this one first; NULL: not asked for */
    size_t rule_set_count;
    bool out_of_range; /* of one of those: the rule set has no row, and why */
    char reason[480];
};

/* Text for the terminal: 80 columns. */
void bw_report_limit_text(struct bw_text *out, const struct bw_limit_query *query);
void bw_report_distance_text(struct bw_text *out, const struct bw_result *result);
void bw_report_eyewear_text(struct bw_text *out, const struct bw_result *result);
void bw_report_room_text(struct bw_text *out, const struct bw_result *result, bool timing);
void bw_report_summary_text(struct bw_text *out, const struct bw_result *result);
void bw_report_working_text(struct bw_text *out, const struct bw_working *working); /* with a legend at its end */
void bw_report_result_working_text(struct bw_text *out, const struct bw_result *result); /* all that there is */

/* JSON, schema beamward.KIND/1, 12 significant digits, null and "unbounded": true for what never ends. */
void bw_report_limit_json(struct bw_text *out, const struct bw_limit_query *query);
void bw_report_distance_json(struct bw_text *out, const struct bw_result *result);
void bw_report_eyewear_json(struct bw_text *out, const struct bw_result *result);
void bw_report_room_json(struct bw_text *out, const struct bw_result *result, bool timing);
void bw_report_result_json(struct bw_text *out, const struct bw_result *result, const struct bw_provenance *provenance);

/* The plan of one room (index into result->rooms): a complete SVG document, or the element alone. */
void bw_report_plan_svg(struct bw_text *out, const struct bw_result *result, size_t room, bool document);
/* The map of one room as CSV: x_m, y_m (cell centres), ratio, path. */
void bw_report_map_csv(struct bw_text *out, const struct bw_result *result, size_t room);
/* The whole record, one self-contained HTML file. */
void bw_report_html(struct bw_text *out, const struct bw_result *result, const struct bw_provenance *provenance);

#ifdef __cplusplus
}
#endif
#endif
