/* The comparison of rule sets: what text and HTML share. Private to the folder. */
#ifndef BEAMWARD_REPORT_COMPARISON_H
#define BEAMWARD_REPORT_COMPARISON_H

#include "internal.h"

enum comparison_row {
    ROW_EXPOSURE,
    ROW_NOHD,
    ROW_SKIN,
    ROW_DIFFUSE,
    ROW_RATIO,
    ROW_OD,
    ROW_GOVERNING,
    ROW_RULE,
    ROW_ROW,
    ROW_KNOWN,
    ROW_REASON, /* only where a rule set has no row */
    ROWS
};
const char *comparison_label(enum comparison_row row);
const char *comparison_cell(char out[REPORT_QUANTITY_SIZE], const struct bw_rule_cell *cell, enum comparison_row row);
/* MPE of one emission as a mean irradiance [W/m2], and the rule that governs it. */
const char *comparison_limit(char out[REPORT_QUANTITY_SIZE], const struct bw_rule_cell *cell, size_t emission);
bool comparison_has_reasons(const struct bw_comparison *comparison, size_t handpiece);

#endif
