/* The working: each figure with its formula, its numbers, its row, and what is assumed. */
#include "internal.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

const char *report_step_value(char out[BW_NUMBER_SIZE], const struct bw_step *step) {
    if (isfinite(step->value))
        snprintf(out, BW_NUMBER_SIZE, "%.7g", step->value);
    else
        snprintf(out, BW_NUMBER_SIZE, "%s", isnan(step->value) ? "n/a" : "unbounded");
    return out;
}

bool report_step_repeats(const struct bw_step *step, const char *text) {
    char value[BW_NUMBER_SIZE];
    double number;
    report_step_value(value, step);
    if (text[0] == '\0' || strcmp(text, value) == 0)
        return true;
    return bw_parse_number(text, &number) && strcmp(step->formula, text) == 0 && !(number < step->value) &&
           !(number > step->value);
}

static void step(struct bw_text *out, const struct bw_step *step) {
    char value[BW_NUMBER_SIZE];
    text_wrapf(out, "  ", "%s = %s%s%s", step->symbol, report_step_value(value, step), step->unit[0] ? " " : "",
               step->unit);
    if (!report_step_repeats(step, step->formula))
        text_wrapf(out, "      ", "= %s", step->formula);
    if (!report_step_repeats(step, step->numbers) && strcmp(step->numbers, step->formula) != 0)
        text_wrapf(out, "      ", "= %s", step->numbers);
    if (step->note[0])
        text_wrapf(out, "      ", "(%s)", step->note);
    if (step->source[0])
        text_wrapf(out, "      ", "[%s]", step->source);
}

static void steps(struct bw_text *out, const struct bw_working *working, bool used[REPORT_SYMBOLS_MAX]) {
    for (size_t i = 0; i < working->count; i++) {
        if (working->steps[i].heading)
            text_heading(out, working->steps[i].formula);
        else
            step(out, &working->steps[i]);
    }
    report_symbol_mark(working, used);
}

static void legend(struct bw_text *out, const bool used[REPORT_SYMBOLS_MAX]) {
    size_t count;
    const struct report_symbol *symbols = report_symbols(&count);
    text_heading(out, "What the symbols stand for");
    for (size_t i = 0; i < count; i++) {
        char head[20];
        snprintf(head, sizeof head, "  %-11s ", symbols[i].symbol);
        if (used[i])
            text_wrap(out, head, symbols[i].meaning);
    }
    bw_text_add(out, "\n");
    text_wrap(out, "  ", report_legend_words);
}

void bw_report_working_text(struct bw_text *out, const struct bw_working *working) {
    bool used[REPORT_SYMBOLS_MAX] = {false};
    if (working->count == 0)
        return;
    steps(out, working, used);
    legend(out, used);
}

static bool part(struct bw_text *out, const char *title, const struct bw_working *working,
                 bool used[REPORT_SYMBOLS_MAX]) {
    if (working->count == 0)
        return false;
    text_heading(out, title);
    steps(out, working, used);
    return true;
}

void text_all_working(struct bw_text *out, const struct bw_result *result, unsigned of) {
    bool used[REPORT_SYMBOLS_MAX] = {false}, any = false;
    char title[2 * BW_NAME_SIZE + 24];
    for (size_t i = 0; i < result->distance_count && (of & WORKING_DISTANCE); i++) {
        const struct bw_distance_result *distance = &result->distances[i];
        snprintf(title, sizeof title, "Working: %s %s", report_laser(result, distance->laser)->name,
                 report_handpiece(result, distance->laser, distance->handpiece)->name);
        any = part(out, title, &distance->working, used) || any;
    }
    if (of & WORKING_EYEWEAR)
        any = part(out, "Working: goggles", &result->eyewear_working, used) || any;
    for (size_t i = 0; i < result->room_count && (of & WORKING_ROOM); i++) {
        snprintf(title, sizeof title, "Working: room %s", result->the_case->rooms[result->rooms[i].room].name);
        any = part(out, title, &result->rooms[i].working, used) || any;
    }
    for (size_t i = 0; i < result->incident_count; i++) {
        snprintf(title, sizeof title, "Working: incident %s",
                 result->the_case->incidents[result->incidents[i].incident].name);
        any = part(out, title, &result->incidents[i].working, used) || any;
    }
    if (any)
        legend(out, used);
}

void bw_report_result_working_text(struct bw_text *out, const struct bw_result *result) {
    text_all_working(out, result, WORKING_DISTANCE | WORKING_EYEWEAR | WORKING_ROOM);
}
