/* The record as HTML: what its files share. Private to the folder. */
#ifndef BEAMWARD_REPORT_HTML_H
#define BEAMWARD_REPORT_HTML_H

#include "internal.h"

/* html_parts.c: elements; all text is escaped. */
void html_heading(struct bw_text *out, const char *id, const char *title);
void html_paragraph(struct bw_text *out, const char *format, ...) BW_PRINTF(2, 3);
void html_item(struct bw_text *out, const char *format, ...) BW_PRINTF(2, 3); /* of a list */
void html_table(struct bw_text *out, const char *class, const char *const *heads, size_t count);
/* A head that begins with '>' is a column of numbers. */
void html_table_end(struct bw_text *out);
void html_row(struct bw_text *out, const char *class);
void html_row_end(struct bw_text *out);
void html_cell(struct bw_text *out, const char *class, const char *format, ...) BW_PRINTF(3, 4);
const char *html_verdict_class(enum bw_verdict verdict);
const char *html_verdict_words(enum bw_verdict verdict);

/* The sections, in the order of the page. */
extern const char html_style[], html_style_print[]; /* one string each: a string of C11 may have 4095 bytes */
void html_top(struct bw_text *out, const struct bw_result *result, const struct bw_provenance *provenance);
void html_findings(struct bw_text *out, const struct bw_result *result);
void html_distances(struct bw_text *out, const struct bw_result *result);
void html_comparison(struct bw_text *out, const struct bw_result *result); /* nothing without --rules all */
void html_eyewear(struct bw_text *out, const struct bw_result *result);
void html_rooms(struct bw_text *out, const struct bw_result *result);
void html_incidents(struct bw_text *out, const struct bw_result *result);
/* html_more.c: of one handpiece, beside its distances; of the people of a room. */
void html_handpiece_more(struct bw_text *out, const struct bw_result *result,
                         const struct bw_distance_result *distance);
void html_person_times(struct bw_text *out, const struct bw_result *result, const struct bw_room_result *found);
/* html_record.c: the steps of one working. */
void html_steps(struct bw_text *out, const struct bw_working *working);
void html_assumptions(struct bw_text *out, const struct bw_result *result);
void html_inputs_converted(struct bw_text *out, const struct bw_result *result);
void html_inputs_given(struct bw_text *out, const struct bw_result *result);
void html_working(struct bw_text *out, const struct bw_result *result);
void html_cautions(struct bw_text *out);
void html_sources(struct bw_text *out, const struct bw_result *result, const struct bw_provenance *provenance);
void html_signature(struct bw_text *out, const struct bw_provenance *provenance);

#endif
