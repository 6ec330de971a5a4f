/* Hazard distances and densities, a handpiece each. */
#include "internal.h"

#include <stdio.h>

static void line(struct bw_text *out, const char *head, const struct bw_reach *reach, const char *why,
                 const struct bw_result *result, const struct bw_distance_result *distance,
                 const struct bw_exposure_time *time) {
    char words[REPORT_QUANTITY_SIZE], seconds[REPORT_QUANTITY_SIZE];
    struct bw_text reason = {0};
    report_time_reason(&reason, distance, time, why);
    text_wrapf(out, head, "%s; exposure %s s, %s", report_reach(words, reach, result->the_case->us_units),
               report_plain(seconds, time->exposure_s), reason.data ? reason.data : "");
    out->failed = out->failed || reason.failed;
    bw_text_free(&reason);
}

static void emissions(struct bw_text *out, const struct bw_result *result, const struct bw_distance_result *distance) {
    const struct bw_output *output = &report_handpiece(result, distance->laser, distance->handpiece)->output;
    struct text_table table;
    table_begin(&table, "lrrrlrrr");
    static const char *const names[] = {"emission", "nm", "MPE J/m2", "MPE W/m2", "rule", "alone", "NOHD alone", "OD"};
    for (size_t i = 0; i < sizeof names / sizeof names[0]; i++)
        table_cell(&table, "%s", names[i]);
    for (size_t i = 0; i < output->count; i++) {
        const struct bw_emission_result *emission = &distance->emissions[i];
        char words[REPORT_QUANTITY_SIZE], number[BW_NUMBER_SIZE];
        table_cell(&table, "%s", output->emissions[i].name);
        table_cell(&table, "%s", report_plain(words, output->emissions[i].wavelength_nm));
        table_cell(&table, "%s", bw_format(number, emission->limit.per_pulse_j_m2, 3, BW_DOWN));
        table_cell(&table, "%s", bw_format(number, emission->limit.irradiance_w_m2, 3, BW_DOWN));
        table_cell(&table, "%s", bw_train_rule_name(emission->limit.rule));
        table_cell(&table, "%s x", report_ratio(words, emission->ratio_at_exit));
        table_quantity(&table, report_reach(words, &emission->nohd, false));
        table_cell(&table, "%s", report_density(words, emission->optical_density));
    }
    table_print(&table, out, 2);
}

enum { PLACE_SIZE = 80 };

static void worst_place(char out[PLACE_SIZE], const struct bw_output *output,
                        const struct bw_distance_result *distance) {
    char metres[REPORT_QUANTITY_SIZE];
    const char *what = "";
    for (size_t i = 0; i < output->count; i++)
        if (distance->worst_m > distance->nearest_m && output->beams[i].waist_m >= distance->worst_m &&
            output->beams[i].waist_m <= distance->worst_m)
            what = ", its waist";
    if (distance->worst_m <= distance->nearest_m)
        what = ", the end of its stand-off";
    if (distance->worst_m > 0.)
        snprintf(out, PLACE_SIZE, "%s m from the exit%s", report_plain(metres, distance->worst_m), what);
    else
        snprintf(out, PLACE_SIZE, "the exit");
}

/* Only where there is more to see than a point. */
static void source_line(struct bw_text *out, const struct bw_distance_result *distance) {
    char number[BW_NUMBER_SIZE];
    if (distance->direct->shaped)
        text_wrapf(out, "  source seen          ", "%s mrad wide at %s; up to 1.5 mrad it counts as a point",
                   bw_format(number, 1e3 * distance->subtense_rad, 3, BW_DOWN),
                   distance->nohd.distance_m > 0. ? "the NOHD" : "the exit");
}

static void handpiece(struct bw_text *out, const struct bw_result *result, const struct bw_distance_result *distance) {
    const struct bw_laser *laser = report_laser(result, distance->laser);
    const struct bw_handpiece *piece = report_handpiece(result, distance->laser, distance->handpiece);
    char title[2 * BW_NAME_SIZE + 2], ratio[REPORT_QUANTITY_SIZE], wavelength[REPORT_QUANTITY_SIZE];
    const struct bw_train_limit *governing = &distance->governing;
    snprintf(title, sizeof title, "%s %s", laser->name, piece->name);
    text_heading(out, title);
    line(out, "  eye, direct (NOHD)   ", &distance->nohd, "an accidental glance", result, distance, &distance->glance);
    line(out, "  skin                 ", &distance->skin, "skin", result, distance, &distance->skin_time);
    line(out, "  diffuse reflection   ", &distance->diffuse, "diffuse viewing", result, distance,
         &distance->diffuse_time);
    char place[PLACE_SIZE];
    worst_place(place, &piece->output, distance);
    text_wrapf(out, "  at its worst         ", "%s times the eye limit, at %s",
               report_ratio(ratio, distance->ratio_at_exit), place);
    text_wrapf(out, "  governed by          ", "%s nm, %s, rule: %s; row %s, %s (%s)",
               report_plain(wavelength, piece->output.emissions[distance->governing_emission].wavelength_nm),
               bw_effect_name(governing->limit.effect), bw_train_rule_name(governing->rule),
               governing->limit.source.row, governing->limit.source.clause,
               report_known_words(governing->limit.source.known));
    source_line(out, distance);
    text_handpiece_more(out, result, distance);
    bw_text_add(out, "\n");
    emissions(out, result, distance);
}

void bw_report_distance_text(struct bw_text *out, const struct bw_result *result) {
    text_case_head(out, result);
    text_distance_table(out, result);
    for (size_t i = 0; i < result->distance_count; i++)
        handpiece(out, result, &result->distances[i]);
    bw_text_add(out, "\n");
    text_wrap(out, "",
              "MPE in J/m2 is per pulse (continuous: over the exposure), in W/m2 the mean. OD is what each emission "
              "needs at the exit, all of them together keeping the limit. Limits are rounded down, "
              "distances and OD up.");
    text_incidents(out, result);
    text_comparison(out, result);
    text_findings(out, result, BW_DANGER, BW_NOTE);
    text_all_working(out, result, WORKING_DISTANCE);
}
