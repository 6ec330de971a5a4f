/* Hazard distances, and the limits that they rest on. */
#include "html.h"

#include <math.h>

#define COUNT(array) (sizeof(array) / sizeof((array)[0]))

static void row(struct bw_text *out, const struct bw_result *result, const struct bw_distance_result *distance) {
    const struct bw_handpiece *piece = report_handpiece(result, distance->laser, distance->handpiece);
    char words[REPORT_QUANTITY_SIZE];
    bool us = result->the_case->us_units;
    html_row(out, NULL);
    html_cell(out, NULL, "%s %s", report_laser(result, distance->laser)->name, piece->name);
    html_cell(out, "n", "%s", report_plain(words, distance->glance.exposure_s));
    html_cell(out, "n", "%s", report_reach(words, &distance->nohd, us));
    html_cell(out, "n", "%s", report_reach(words, &distance->skin, us));
    html_cell(out, "n", "%s", report_reach(words, &distance->diffuse, us));
    html_cell(out, "n", "%s", report_ratio(words, distance->ratio_at_exit));
    html_cell(out, "n", "%s", report_density(words, report_largest_density(result, distance)));
    html_cell(out, NULL, "%s nm, %s, %s",
              report_plain(words, piece->output.emissions[distance->governing_emission].wavelength_nm),
              bw_effect_name(distance->governing.limit.effect), bw_train_rule_name(distance->governing.rule));
    html_row_end(out);
}

static void summary(struct bw_text *out, const struct bw_result *result) {
    static const char *const heads[] = {"Handpiece",      ">Glance, s",          ">Eye (NOHD)", ">Skin",
                                        ">Diffuse light", ">\xC3\x97 eye limit", ">OD needed",  "Governed by"};
    html_table(out, "", heads, COUNT(heads));
    for (size_t i = 0; i < result->distance_count; i++)
        row(out, result, &result->distances[i]);
    html_table_end(out);
    html_paragraph(out,
                   "Distances from the exit of the handpiece, up to which the limit is exceeded on the axis of the "
                   "beam; diffuse light: from a lit spot on a white matt surface. The multiple of the limit and the "
                   "optical density (OD) hold at the exit, or at the waist in front of it where that is worse. "
                   "Distances and densities are rounded up, limits down.");
}

static void limit_row(struct bw_text *out, const struct bw_emission *emission, const struct bw_train_limit *limit,
                      bool skin) {
    char number[BW_NUMBER_SIZE], words[REPORT_QUANTITY_SIZE];
    html_cell(out, NULL, "%s", emission->name);
    html_cell(out, "n", "%s", report_plain(words, emission->wavelength_nm));
    html_cell(out, NULL, skin ? "skin" : "eye, %s", bw_effect_name(limit->limit.effect));
    for (int i = 0; i < BW_RULES; i++)
        html_cell(out, "n", "%s",
                  isnan(limit->rules_j_m2[i]) ? "" : bw_format(number, limit->rules_j_m2[i], 3, BW_DOWN));
    html_cell(out, "keep", "%s", emission->continuous ? "continuous" : bw_train_rule_name(limit->rule));
    html_cell(out, "n", "%s", bw_format(number, limit->irradiance_w_m2, 3, BW_DOWN));
    html_cell(out, "n", "%s", report_plain(words, 1e3 * limit->limit.aperture_m));
    html_cell(out, NULL, "%s, %s (%s)", limit->limit.source.row, limit->limit.source.clause,
              report_known_words(limit->limit.source.known));
}

static void limits(struct bw_text *out, const struct bw_result *result, const struct bw_distance_result *distance) {
    static const char *const heads[] = {"Emission", ">nm",     "Limit of",          ">Single",      ">Average",
                                        ">Train",   "Governs", ">Mean W/m\xC2\xB2", ">Aperture mm", "Printed in"};
    const struct bw_output *output = &report_handpiece(result, distance->laser, distance->handpiece)->output;
    html_table(out, "", heads, COUNT(heads));
    for (size_t i = 0; i < output->count; i++) {
        const struct bw_emission_result *emission = &distance->emissions[i];
        html_row(out, NULL);
        limit_row(out, &output->emissions[i], &emission->limit, false);
        html_row_end(out);
        html_row(out, NULL);
        limit_row(out, &output->emissions[i], &emission->skin_limit, true);
        html_row_end(out);
    }
    html_table_end(out);
}

static void needs(struct bw_text *out, const struct bw_result *result, const struct bw_distance_result *distance) {
    static const char *const heads[] = {"Emission", ">nm", ">\xC3\x97 eye limit, alone", ">NOHD, alone", ">OD needed"};
    const struct bw_output *output = &report_handpiece(result, distance->laser, distance->handpiece)->output;
    html_table(out, "", heads, COUNT(heads));
    for (size_t i = 0; i < output->count; i++) {
        const struct bw_emission_result *emission = &distance->emissions[i];
        char words[REPORT_QUANTITY_SIZE];
        html_row(out, NULL);
        html_cell(out, NULL, "%s", output->emissions[i].name);
        html_cell(out, "n", "%s", report_plain(words, output->emissions[i].wavelength_nm));
        html_cell(out, "n", "%s", report_ratio(words, emission->ratio_at_exit));
        html_cell(out, "n", "%s", report_reach(words, &emission->nohd, result->the_case->us_units));
        html_cell(out, "n", "%s", report_density(words, emission->optical_density));
        html_row_end(out);
    }
    html_table_end(out);
}

void html_distances(struct bw_text *out, const struct bw_result *result) {
    html_heading(out, "distances", "How far the hazard reaches");
    summary(out, result);
    for (size_t i = 0; i < result->distance_count; i++) {
        const struct bw_distance_result *distance = &result->distances[i];
        bw_text_add(out, "<h3>");
        report_xml(out, report_laser(result, distance->laser)->name);
        bw_text_add(out, " ");
        report_xml(out, report_handpiece(result, distance->laser, distance->handpiece)->name);
        bw_text_add(out, "</h3>\n");
        needs(out, result, distance);
        limits(out, result, distance);
        html_handpiece_more(out, result, distance);
    }
    html_paragraph(out,
                   "Limits by the three rules are radiant exposures per pulse in J/m\xC2\xB2 (continuous: over the "
                   "exposure time); the lowest governs. The OD of each emission lets all of them together keep the "
                   "limit.");
}
