/* Numbers with their units, rounded to the safe side, and words that every format uses. */
#include "internal.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

static const double per_m2_to_per_cm2 = 1e-4;
static const double square_feet_per_m2 = 1. / (0.3048 * 0.3048);

enum { LIMIT_DIGITS = 3, LENGTH_DIGITS = 3 };

static const char *limit(char out[REPORT_QUANTITY_SIZE], double value, const char *unit, double us_value,
                         const char *us_unit, bool us) {
    char number[BW_NUMBER_SIZE], us_number[BW_NUMBER_SIZE];
    bw_format(number, value, LIMIT_DIGITS, BW_DOWN);
    bw_format(us_number, us_value, LIMIT_DIGITS, BW_DOWN);
    if (us)
        snprintf(out, REPORT_QUANTITY_SIZE, "%s %s (%s %s)", number, unit, us_number, us_unit);
    else
        snprintf(out, REPORT_QUANTITY_SIZE, "%s %s", number, unit);
    return out;
}

const char *report_radiant_exposure(char out[REPORT_QUANTITY_SIZE], double value_j_m2, bool us) {
    return limit(out, value_j_m2, "J/m2", value_j_m2 * per_m2_to_per_cm2, "J/cm2", us);
}

const char *report_irradiance(char out[REPORT_QUANTITY_SIZE], double value_w_m2, bool us) {
    return limit(out, value_w_m2, "W/m2", value_w_m2 * per_m2_to_per_cm2 * 1e3, "mW/cm2", us);
}

const char *report_reach(char out[REPORT_QUANTITY_SIZE], const struct bw_reach *reach, bool us) {
    if (reach->unbounded)
        snprintf(out, REPORT_QUANTITY_SIZE, "unbounded");
    else if (reach->distance_m <= 0.)
        snprintf(out, REPORT_QUANTITY_SIZE, "none");
    else
        bw_length_words(out, reach->distance_m, us);
    return out;
}

const char *report_ratio(char out[REPORT_QUANTITY_SIZE], double ratio) {
    return bw_format(out, ratio, 2, BW_UP);
}

const char *report_density(char out[REPORT_QUANTITY_SIZE], double od) {
    return bw_format_fixed(out, od, 1, BW_UP);
}

const char *report_density_given(char out[REPORT_QUANTITY_SIZE], double od) {
    if (isnan(od))
        snprintf(out, REPORT_QUANTITY_SIZE, "none");
    else
        bw_format_fixed(out, od, 1, BW_DOWN);
    return out;
}

const char *report_plain(char out[REPORT_QUANTITY_SIZE], double value) {
    snprintf(out, REPORT_QUANTITY_SIZE, "%.6g", value);
    return out;
}

const char *report_time(char out[REPORT_QUANTITY_SIZE], const struct bw_permitted_time *time) {
    char number[BW_NUMBER_SIZE];
    if (time->unbounded)
        snprintf(out, REPORT_QUANTITY_SIZE, "never");
    else if (time->exposure_s <= 0.)
        snprintf(out, REPORT_QUANTITY_SIZE, "none");
    else
        snprintf(out, REPORT_QUANTITY_SIZE, "%s s", bw_format(number, time->exposure_s, 3, BW_DOWN));
    return out;
}

const char *report_per_cent(char out[REPORT_QUANTITY_SIZE], double value) {
    char number[BW_NUMBER_SIZE];
    if (isfinite(value))
        snprintf(out, REPORT_QUANTITY_SIZE, "%s %%", bw_format_fixed(number, value, 2, BW_NEAREST));
    else
        snprintf(out, REPORT_QUANTITY_SIZE, "none");
    return out;
}

void report_input_words(struct bw_text *out, const struct bw_result *result, const struct bw_distance_result *distance,
                        const struct bw_sensitivity *sensitivity) {
    const struct bw_output *output = &report_handpiece(result, distance->laser, distance->handpiece)->output;
    bw_text_add(out, "%s", sensitivity->quantity);
    if (sensitivity->emission < output->count)
        bw_text_add(out, " of %s", output->emissions[sensitivity->emission].name);
}

const char *report_area(char out[REPORT_QUANTITY_SIZE], double area_m2, bool us) {
    char number[BW_NUMBER_SIZE], feet[BW_NUMBER_SIZE];
    bw_format(number, area_m2, LENGTH_DIGITS, BW_UP);
    bw_format(feet, area_m2 * square_feet_per_m2, LENGTH_DIGITS, BW_UP);
    if (us)
        snprintf(out, REPORT_QUANTITY_SIZE, "%s m2 (%s sq ft)", number, feet);
    else
        snprintf(out, REPORT_QUANTITY_SIZE, "%s m2", number);
    return out;
}

const char *report_known(enum bw_known known) {
    return known == BW_READ ? "read" : "memory";
}

const char *report_known_words(enum bw_known known) {
    return known == BW_READ ? "read" : "from memory";
}

void report_time_reason(struct bw_text *out, const struct bw_distance_result *distance,
                        const struct bw_exposure_time *time, const char *what) {
    if (distance->exposure_given)
        bw_text_add(out, "given in the case file");
    else
        bw_text_add(out, "customary for %s (%s, %s)", what, time->source.clause ? time->source.clause : "no clause",
                    report_known_words(time->source.known));
}

const struct bw_laser *report_laser(const struct bw_result *result, size_t laser) {
    return &result->the_case->lasers[laser];
}

const struct bw_handpiece *report_handpiece(const struct bw_result *result, size_t laser, size_t handpiece) {
    return &result->the_case->lasers[laser].handpieces[handpiece];
}

double report_largest_density(const struct bw_result *result, const struct bw_distance_result *distance) {
    double largest = 0.;
    const struct bw_output *output = &report_handpiece(result, distance->laser, distance->handpiece)->output;
    for (size_t i = 0; i < output->count; i++)
        if (!(distance->emissions[i].optical_density <= largest))
            largest = distance->emissions[i].optical_density;
    return largest;
}

double report_person_density(const struct bw_person_result *person) {
    double largest = 0.;
    for (size_t i = 0; i < person->od_count; i++)
        if (!(person->od[i].od <= largest))
            largest = person->od[i].od;
    return largest;
}

size_t report_count_findings(const struct bw_result *result, enum bw_severity severity) {
    size_t count = 0;
    for (size_t i = 0; i < result->finding_count; i++)
        count += result->findings[i].severity == severity;
    return count;
}

void report_verdict(struct bw_text *out, const struct bw_result *result) {
    size_t dangers = report_count_findings(result, BW_DANGER), actions = report_count_findings(result, BW_ACTION);
    if (!result->needs_action) {
        bw_text_add(out, "Nothing in this case needs action, if it is as described.");
        return;
    }
    bw_text_add(out, "Not acceptable as described: ");
    if (dangers > 0)
        bw_text_add(out, "%zu danger%s%s", dangers, dangers == 1 ? "" : "s", actions > 0 ? " and " : "");
    if (actions > 0)
        bw_text_add(out, "%zu thing%s to change", actions, actions == 1 ? "" : "s");
    bw_text_add(out, ".");
}

const char *report_opening_kind(enum bw_opening_kind kind) {
    switch (kind) {
    case BW_DOOR:
        return "door";
    case BW_WINDOW:
        return "window";
    case BW_GAP:
        return "gap";
    }
    return "opening";
}

const char *report_base_name(const char *path) {
    const char *slash = strrchr(path, '/');
    return slash ? slash + 1 : path;
}
