/* The rows of the comparison of rule sets, for text and HTML alike: what stands in a cell. */
#include "comparison.h"

#include <stdio.h>

static const struct bw_handpiece *piece_of(const struct bw_result *result, const struct bw_distance_result *distance) {
    return report_handpiece(result, distance->laser, distance->handpiece);
}

static void distance_cell(char out[REPORT_QUANTITY_SIZE], const struct bw_result *result,
                          const struct bw_distance_result *distance, enum comparison_row row) {
    char words[REPORT_QUANTITY_SIZE];
    bool us = result->the_case->us_units;
    const struct bw_limit *limit = &distance->governing.limit;
    const struct bw_emission *emission = &piece_of(result, distance)->output.emissions[distance->governing_emission];
    out[0] = '\0';
    switch (row) {
    case ROW_EXPOSURE:
        snprintf(out, REPORT_QUANTITY_SIZE, "%.40s s", report_plain(words, distance->glance.exposure_s));
        break;
    case ROW_NOHD:
        report_reach(out, &distance->nohd, us);
        break;
    case ROW_SKIN:
        report_reach(out, &distance->skin, us);
        break;
    case ROW_DIFFUSE:
        report_reach(out, &distance->diffuse, us);
        break;
    case ROW_RATIO:
        report_ratio(out, distance->ratio_at_exit);
        break;
    case ROW_OD:
        report_density(out, report_largest_density(result, distance));
        break;
    case ROW_GOVERNING:
        snprintf(out, REPORT_QUANTITY_SIZE, "%.12s nm, %s", report_plain(words, emission->wavelength_nm),
                 bw_effect_name(limit->effect));
        break;
    case ROW_RULE:
        snprintf(out, REPORT_QUANTITY_SIZE, "%s",
                 emission->continuous ? "continuous" : bw_train_rule_name(distance->governing.rule));
        break;
    case ROW_ROW:
        snprintf(out, REPORT_QUANTITY_SIZE, "%.60s, %.100s", limit->source.row, limit->source.clause);
        break;
    case ROW_KNOWN:
        snprintf(out, REPORT_QUANTITY_SIZE, "%s", report_known_words(limit->source.known));
        break;
    case ROW_REASON:
    case ROWS:
        break;
    }
}

const char *comparison_label(enum comparison_row row) {
    static const char *const labels[ROWS] = {"exposure",    "eye (NOHD)", "skin",        "diffuse",
                                             "x eye limit", "OD at exit", "governed by", "rule",
                                             "row, clause", "known",      "out of range"};
    return labels[row];
}

const char *comparison_cell(char out[REPORT_QUANTITY_SIZE], const struct bw_rule_cell *cell, enum comparison_row row) {
    out[0] = '\0';
    if (cell->result != NULL)
        distance_cell(out, cell->result, &cell->result->distances[0], row);
    return out;
}

const char *comparison_limit(char out[REPORT_QUANTITY_SIZE], const struct bw_rule_cell *cell, size_t emission) {
    char number[BW_NUMBER_SIZE];
    out[0] = '\0';
    if (cell->result == NULL)
        return out;
    const struct bw_distance_result *distance = &cell->result->distances[0];
    const struct bw_emission_result *result = &distance->emissions[emission];
    bool continuous = piece_of(cell->result, distance)->output.emissions[emission].continuous;
    snprintf(out, REPORT_QUANTITY_SIZE, "%s, %s", bw_format(number, result->limit.irradiance_w_m2, 3, BW_DOWN),
             continuous ? "continuous" : bw_train_rule_name(result->limit.rule));
    return out;
}

bool comparison_has_reasons(const struct bw_comparison *comparison, size_t handpiece) {
    for (size_t k = 0; k < comparison->table_count; k++)
        if (bw_comparison_cell(comparison, handpiece, k)->result == NULL)
            return true;
    return false;
}
