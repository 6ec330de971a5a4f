/* The case as it was written down, and as it was understood. */
#include "html.h"

#define COUNT(array) (sizeof(array) / sizeof((array)[0]))

static void emission(struct bw_text *out, const struct bw_laser *laser, const struct bw_emission *emission) {
    char words[REPORT_QUANTITY_SIZE];
    html_row(out, NULL);
    html_cell(out, NULL, "%s %s", laser->name, emission->name);
    html_cell(out, "n", "%s", report_plain(words, emission->wavelength_nm));
    html_cell(out, "n", "%s", report_plain(words, emission->average_power_w));
    if (emission->continuous) {
        html_cell(out, NULL, "%s", "continuous");
        for (int i = 0; i < 3; i++)
            html_cell(out, "n", "%s", "");
    } else {
        html_cell(out, "n", "%s", report_plain(words, emission->peak_power_w));
        html_cell(out, "n", "%s", report_plain(words, emission->pulse_energy_j));
        html_cell(out, "n", "%s", report_plain(words, emission->pulse_duration_s));
        html_cell(out, "n", "%s",
                  emission->repetition_rate_hz > 0. ? report_plain(words, emission->repetition_rate_hz) : "");
    }
    html_row_end(out);
}

/* How the pulses follow each other, where duration and rate do not say it all. */
static void timing(struct bw_text *out, const struct bw_laser *laser, const struct bw_emission *emission) {
    struct bw_text words = {0};
    char number[REPORT_QUANTITY_SIZE];
    bool list = emission->pulses != NULL;
    bw_text_add(&words, "%s %s: ", laser->name, emission->name);
    if (emission->pulse_count == 1)
        bw_text_add(&words, "a single pulse. ");
    else if (list)
        bw_text_add(&words, "%zu pulses as listed; pulse energy and duration are those of the one with the most energy. ",
                    emission->pulse_count);
    else if (emission->pulse_count > 0)
        bw_text_add(&words, "%zu pulses in all. ", emission->pulse_count);
    for (size_t i = 0; i < emission->level_count; i++) {
        const struct bw_level *level = &emission->levels[i];
        bw_text_add(&words, i == 0 ? "Bursts of %s pulses, " : "gates of %s such bursts, ",
                    report_plain(number, level->holds));
        bw_text_add(&words, "one every %s s%s ", report_plain(number, level->period_s),
                    i + 1 < emission->level_count ? ";" : ".");
    }
    if (emission->pulse_count == 0)
        bw_text_add(&words, "While on, the mean is %s W (a power given for the emission is read so); Average W is the mean "
                    "with all gaps.",
                    report_plain(number, emission->pulse_energy_j * emission->repetition_rate_hz));
    else
        bw_text_add(&words, "Average W is the mean from the first pulse to the end of the last.");
    html_paragraph(out, "%s", words.data ? words.data : "");
    out->failed = out->failed || words.failed;
    bw_text_free(&words);
}

static void timings(struct bw_text *out, const struct bw_result *result) {
    for (size_t i = 0; i < result->the_case->laser_count; i++)
        for (size_t j = 0; j < result->the_case->lasers[i].emission_count; j++) {
            const struct bw_emission *emission = &result->the_case->lasers[i].emissions[j];
            if (emission->level_count > 0 || emission->pulse_count > 0)
                timing(out, &result->the_case->lasers[i], emission);
        }
}

static void emissions(struct bw_text *out, const struct bw_result *result) {
    static const char *const heads[] = {"Emission",        ">nm",         ">Average W", ">Peak W",
                                        ">Pulse energy J", ">Duration s", ">Rate Hz"};
    html_table(out, "", heads, COUNT(heads));
    for (size_t i = 0; i < result->the_case->laser_count; i++)
        for (size_t j = 0; j < result->the_case->lasers[i].emission_count; j++)
            emission(out, &result->the_case->lasers[i], &result->the_case->lasers[i].emissions[j]);
    html_table_end(out);
}

/* Profile and spread, and what is not a round beam from one point. */
static void add_shape(struct bw_text *out, const struct bw_beam *beam, double stand_off_m) {
    char words[REPORT_QUANTITY_SIZE];
    bw_text_add(out, "%s, %s", beam->profile == BW_TOP_HAT ? "top hat" : "Gaussian",
                beam->spread == BW_LINEAR ? "linear" : "hyperbolic");
    if (beam->elliptical) {
        bw_text_add(out, "; y axis: exit %s mm", report_plain(words, 1e3 * beam->exit_diameter_y_m));
        bw_text_add(out, ", waist %s mm", report_plain(words, 1e3 * beam->diameter_y_m));
        bw_text_add(out, ", %s mrad", report_plain(words, 1e3 * beam->divergence_y_rad));
    }
    if (beam->source_m > 0.) {
        bw_text_add(out, "; apparent source %s mm", report_plain(words, 1e3 * beam->source_m));
        bw_text_add(out, ", %s m behind the exit", report_plain(words, beam->source_behind_m));
    }
    if (beam->cluster.count > 1)
        bw_text_add(out, "; %zu emitters", beam->cluster.count);
    if (stand_off_m > 0.)
        bw_text_add(out, "; stand-off %s m", report_plain(words, stand_off_m));
}

static void beam(struct bw_text *out, const struct bw_laser *laser, const struct bw_handpiece *piece, size_t index) {
    const struct bw_beam *beam = &piece->output.beams[index];
    char words[REPORT_QUANTITY_SIZE];
    html_row(out, NULL);
    html_cell(out, NULL, "%s %s", laser->name, piece->name);
    html_cell(out, NULL, "%s%s", piece->output.emissions[index].name,
              piece->emission_beam_given[index] ? " (its own beam)" : "");
    html_cell(out, "n", "%s", report_plain(words, 1e3 * beam->exit_diameter_m));
    html_cell(out, "n", "%s", report_plain(words, 1e3 * beam->diameter_m));
    html_cell(out, "n", "%s", report_plain(words, beam->waist_m));
    html_cell(out, "n", "%s", report_plain(words, 1e3 * beam->divergence_rad));
    struct bw_text shape = {0};
    add_shape(&shape, beam, piece->output.stand_off_m);
    html_cell(out, NULL, "%s", shape.data ? shape.data : "");
    out->failed = out->failed || shape.failed;
    bw_text_free(&shape);
    html_row_end(out);
}

static void beams(struct bw_text *out, const struct bw_result *result) {
    static const char *const heads[] = {"Handpiece", "Emission",         ">Exit d63 mm",   ">Waist d63 mm",
                                        ">Waist m",  ">Divergence mrad", "Profile, spread"};
    html_table(out, "", heads, COUNT(heads));
    for (size_t i = 0; i < result->the_case->laser_count; i++) {
        const struct bw_laser *laser = &result->the_case->lasers[i];
        for (size_t j = 0; j < laser->handpiece_count; j++)
            for (size_t k = 0; k < laser->handpieces[j].output.count; k++)
                beam(out, laser, &laser->handpieces[j], k);
    }
    html_table_end(out);
}

void html_inputs_converted(struct bw_text *out, const struct bw_result *result) {
    html_heading(out, "converted", "Inputs as understood");
    emissions(out, result);
    timings(out, result);
    beams(out, result);
    html_paragraph(out, "Divergence: full angle, d63. Waist m: how far in front of the exit the beam is narrowest.");
}

void html_inputs_given(struct bw_text *out, const struct bw_result *result) {
    static const char *const heads[] = {">Line", "Section", "Key", "Value"};
    const struct bw_ini *given = &result->the_case->given;
    html_heading(out, "given", "Inputs as given");
    html_table(out, "given", heads, COUNT(heads));
    for (size_t i = 0; i < given->count; i++) {
        const struct bw_ini_entry *entry = &given->entries[i];
        bool head = entry->key[0] == '\0';
        html_row(out, head ? "head" : NULL);
        html_cell(out, "n", "%d", entry->line);
        html_cell(out, NULL, head ? "[%s]" : "%s", head ? entry->section : "");
        html_cell(out, NULL, "%s", entry->key);
        html_cell(out, NULL, "%s", entry->value);
        html_row_end(out);
    }
    html_table_end(out);
}
