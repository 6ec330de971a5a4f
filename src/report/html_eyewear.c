/* Goggles: which pair with which handpiece, and why not. */
#include "html.h"

#include <math.h>

#define COUNT(array) (sizeof(array) / sizeof((array)[0]))

static const struct bw_pair_result *find_pair(const struct bw_result *result, size_t eyewear,
                                              const struct bw_distance_result *distance) {
    for (size_t i = 0; i < result->pair_count; i++) {
        const struct bw_pair_result *pair = &result->pairs[i];
        if (!pair->is_place && pair->eyewear == eyewear && pair->laser == distance->laser &&
            pair->handpiece == distance->handpiece)
            return pair;
    }
    return NULL;
}

enum { MATRIX_GOGGLES = 5 };

static void matrix(struct bw_text *out, const struct bw_result *result, size_t from, size_t to) {
    const char *heads[2 + MATRIX_GOGGLES] = {"Handpiece, at its exit", ">OD needed"};
    for (size_t j = from; j < to; j++)
        heads[2 + j - from] = result->the_case->eyewear[j].name;
    html_table(out, "", heads, 2 + to - from);
    for (size_t i = 0; i < result->distance_count; i++) {
        const struct bw_distance_result *distance = &result->distances[i];
        char words[REPORT_QUANTITY_SIZE];
        html_row(out, NULL);
        html_cell(out, NULL, "%s %s", report_laser(result, distance->laser)->name,
                  report_handpiece(result, distance->laser, distance->handpiece)->name);
        html_cell(out, "n", "%s", report_density(words, report_largest_density(result, distance)));
        for (size_t j = from; j < to; j++) {
            const struct bw_pair_result *pair = find_pair(result, j, distance);
            if (pair)
                html_cell(out, html_verdict_class(pair->verdict.verdict), "%s",
                          html_verdict_words(pair->verdict.verdict));
            else
                html_cell(out, NULL, "%s", "not judged");
        }
        html_row_end(out);
    }
    html_table_end(out);
}

static void ratings(struct bw_text *out, const struct bw_goggles *goggles) {
    struct bw_text text = {0};
    char low[REPORT_QUANTITY_SIZE], high[REPORT_QUANTITY_SIZE], od[REPORT_QUANTITY_SIZE];
    for (size_t i = 0; i < goggles->rating_count; i++) {
        const struct bw_rating *rating = &goggles->ratings[i];
        bw_text_add(&text, "%s%s-%s nm OD %s", i > 0 ? ", " : "", report_plain(low, rating->low_nm),
                    report_plain(high, rating->high_nm), report_density_given(od, rating->optical_density));
        if (rating->scale_number > 0)
            bw_text_add(&text, " (%s LB%d)", rating->modes, rating->scale_number);
    }
    html_cell(out, NULL, "%s", text.data ? text.data : "none");
    out->failed = out->failed || text.failed;
    bw_text_free(&text);
}

static void drawer(struct bw_text *out, const struct bw_result *result) {
    static const char *const heads[] = {"Goggles", "Title", "Marking", "Ratings", ">Light, %"};
    html_table(out, "", heads, COUNT(heads));
    for (size_t i = 0; i < result->the_case->eyewear_count; i++) {
        const struct bw_goggles *goggles = &result->the_case->eyewear[i];
        char number[BW_NUMBER_SIZE];
        html_row(out, NULL);
        html_cell(out, NULL, "%s", goggles->name);
        html_cell(out, NULL, "%s", goggles->title);
        html_cell(out, NULL, "%s", goggles->marking);
        ratings(out, goggles);
        if (isnan(goggles->luminous_transmittance))
            html_cell(out, "n", "%s", "not given");
        else
            html_cell(out, "n", "%s", bw_format(number, 100. * goggles->luminous_transmittance, 2, BW_DOWN));
        html_row_end(out);
    }
    html_table_end(out);
}

static void pair_rows(struct bw_text *out, const struct bw_result *result, const struct bw_pair_result *pair) {
    const struct bw_handpiece *piece = report_handpiece(result, pair->laser, pair->handpiece);
    for (size_t i = 0; i < pair->verdict.count; i++) {
        const struct bw_emission_verdict *emission = &pair->verdict.emissions[i];
        char words[REPORT_QUANTITY_SIZE];
        html_row(out, NULL);
        html_cell(out, NULL, "%s", i > 0 ? "" : result->the_case->eyewear[pair->eyewear].name);
        if (i > 0)
            html_cell(out, NULL, "%s", "");
        else if (pair->is_place)
            html_cell(out, NULL, "%s %s, at the place of %s (room %s)", report_laser(result, pair->laser)->name,
                      piece->name, result->the_case->rooms[pair->room].persons[pair->person].name,
                      result->the_case->rooms[pair->room].name);
        else
            html_cell(out, NULL, "%s %s, at its exit", report_laser(result, pair->laser)->name, piece->name);
        html_cell(out, NULL, "%s (%s\xC2\xA0nm)", piece->output.emissions[i].name,
                  report_plain(words, piece->output.emissions[i].wavelength_nm));
        html_cell(out, "n", "%s", report_density(words, emission->od_required));
        html_cell(out, "n", "%s", report_density_given(words, emission->od_given));
        html_cell(out, html_verdict_class(emission->verdict), "%s", html_verdict_words(emission->verdict));
        html_cell(out, NULL, "%s", emission->reason);
        html_row_end(out);
    }
}

void html_eyewear(struct bw_text *out, const struct bw_result *result) {
    static const char *const heads[] = {"Goggles", "With", "Emission", ">Needs OD", ">Gives OD", "Verdict", "Why"};
    size_t count = result->the_case->eyewear_count;
    html_heading(out, "goggles", "Which goggles");
    if (count == 0) {
        html_paragraph(out, "The case has no goggles.");
        return;
    }
    for (size_t from = 0; from < count; from += MATRIX_GOGGLES)
        matrix(out, result, from, from + MATRIX_GOGGLES < count ? from + MATRIX_GOGGLES : count);
    html_paragraph(out,
                   "What is needed is rounded up, what is given down. Only optical densities are compared: whether "
                   "a filter withstands the beam is not judged.");
    drawer(out, result);
    bw_text_add(out, "<h3>Each pair, emission by emission</h3>\n");
    html_table(out, "", heads, COUNT(heads));
    for (size_t i = 0; i < result->pair_count; i++)
        pair_rows(out, result, &result->pairs[i]);
    html_table_end(out);
}
