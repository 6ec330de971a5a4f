/* The working: each figure with its formula, its numbers and its row. */
#include "internal.h"

#include <stdio.h>

static void step(struct bw_text *out, const struct bw_step *step) {
    char value[BW_NUMBER_SIZE];
    snprintf(value, sizeof value, "%.9g", step->value);
    text_wrapf(out, "  ", "%s = %s%s%s", step->symbol, value, step->unit[0] ? " " : "", step->unit);
    if (step->formula && step->formula[0])
        text_wrapf(out, "      ", "= %s", step->formula);
    if (step->numbers && step->numbers[0])
        text_wrapf(out, "      ", "= %s", step->numbers);
    if (step->source && step->source[0])
        text_wrapf(out, "      ", "[%s]", step->source);
}

void bw_report_working_text(struct bw_text *out, const struct bw_working *working) {
    for (size_t i = 0; i < working->count; i++) {
        if (working->steps[i].heading)
            text_heading(out, working->steps[i].formula);
        else
            step(out, &working->steps[i]);
    }
}

void text_all_working(struct bw_text *out, const struct bw_result *result) {
    for (size_t i = 0; i < result->distance_count; i++) {
        const struct bw_distance_result *distance = &result->distances[i];
        char title[2 * BW_NAME_SIZE + 24];
        if (distance->working.count == 0)
            continue;
        snprintf(title, sizeof title, "Working: %s %s", report_laser(result, distance->laser)->name,
                 report_handpiece(result, distance->laser, distance->handpiece)->name);
        text_heading(out, title);
        bw_report_working_text(out, &distance->working);
    }
    for (size_t i = 0; i < result->incident_count; i++) {
        char title[BW_NAME_SIZE + 24];
        if (result->incidents[i].working.count == 0)
            continue;
        snprintf(title, sizeof title, "Working: incident %s",
                 result->the_case->incidents[result->incidents[i].incident].name);
        text_heading(out, title);
        bw_report_working_text(out, &result->incidents[i].working);
    }
}
