/* Every figure that the program prints is the value of a step of its working, of all examples; the numbers of every
 * step give its value; every symbol is explained once; nothing passes 80 columns. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <cmocka.h>

#include <beamward/report.h>

#include "calculator.h"
#include "clinic.h"

/* What the examples lack: a focused beam, limited aims, ultraviolet, a collimated beam, half angles, inches, top hats,
 * an exposure that is given, two persons behind panes and mirrors. */
static const char workshop[] =
    "[case]\ntitle = all kinds\nrules = icnirp-2013\n"
    "[laser uv]\n[emission uv line]\nwavelength_nm = 355\npulse_energy_mj = 2\npulse_duration_ns = 8\n"
    "repetition_rate_hz = 20\n[handpiece uv tube]\nbeam_diameter_in = 0.2\ndivergence_deg = 0.1\n"
    "divergence_definition = half\ndiameter_definition = fwhm\n"
    "[laser blue]\n[emission blue a]\nwavelength_nm = 450\naverage_power_w = 3\n[emission blue b]\n"
    "wavelength_nm = 1320\naverage_power_w = 2\npeak_power_w = 20000\nrepetition_rate_khz = 1\n"
    "[handpiece blue lens]\nbeam_diameter_mm = 6\ndivergence_mrad = 3\ndiameter_definition = d63\n"
    "lens_focal_length_mm = 150\nexposure_s = 20\n[handpiece blue collimated]\nbeam_diameter_mm = 8\n"
    "divergence_mrad = 0\ndiameter_definition = top-hat\nspread = linear\n"
    "[room w]\noutline_m = 0 0, 6 0, 6 5, 0 5\nmaterial = painted-wall\ngrid_mm = 100\nbounces = 2\n"
    "[surface w mirror]\nfrom_m = 0.1 1\nto_m = 0.1 3\nmaterial = mirror\n"
    "[surface w pane]\nfrom_m = 4 1\nto_m = 4 4\nmaterial = glass\n"
    "[opening w window]\nfrom_m = 6 1\nto_m = 6 3\nkind = window\ncover = glass\n"
    "[opening w door]\nfrom_m = 1 0\nto_m = 2 0\nkind = door\ncover = opaque\n"
    "[treatment-area w couch]\noutline_m = 2 2, 3 2, 3 3, 2 3\naim_deg = 60 .. 100\n"
    "[person w behind]\nat_m = 5 2.5\neyewear = one\n[person w beside]\nat_m = 2.5 4.5\n"
    "[person w back]\nat_m = 1 2.5\neyewear = one\n"
    "[eyewear one]\nod = 400-500 4, 1000-1400 6.5\n"
    "[aid loupes]\nmagnification = 2.5\nobjective_diameter_mm = 15\ntransmittance_pct = 400-1400 80\n"
    "[person w surgeon]\nat_m = 3.5 2.5\neyewear = one\naid = loupes\n"
    "[incident first]\nlaser = blue\nhandpiece = lens\ndistance_m = 2\nexposure_s = 0.5\neyewear = one\naid = loupes\n"
    "[incident second]\nroom = w\nat_m = 4.5 2\nexposure_s = 3\n"
    "[laser off]\n[emission off p]\nwavelength_nm = 905\naverage_power_w = 1\npulse_duration_ns = 100\n"
    "repetition_rate_khz = 10\ntolerance_pct = 20\npulse_duration_tolerance_pct = 10\n"
    "repetition_rate_tolerance_pct = 5\n[emission off far]\nwavelength_nm = 1550\naverage_power_w = 40\n"
    "[handpiece off spot]\nbeam_diameter_mm = 20\ndivergence_mrad = 100\ndiameter_definition = d86\n"
    "diameter_tolerance_pct = 10\ndivergence_tolerance_pct = 15\n"
    "[laser gated]\n[emission gated bursts]\nwavelength_nm = 808\npeak_power_w = 30\npulse_duration_us = 20\n"
    "repetition_rate_hz = 5000\nburst_pulses = 20\nburst_period_ms = 50\ngate_on_s = 0.5\ngate_period_s = 2\n"
    "[emission gated shot]\nwavelength_nm = 1064\npulse_energy_mj = 5\npulse_duration_ns = 10\npulse_count = 1\n"
    "[handpiece gated ellipse]\nbeam_diameter_mm = 4\nbeam_diameter_y_mm = 10\ndivergence_mrad = 20\n"
    "divergence_y_mrad = 80\ndiameter_definition = d86\n"
    "[handpiece gated head]\nbeam_diameter_mm = 3\ndivergence_mrad = 300\ndiameter_definition = d86\n"
    "emitter_at_mm = -4 0, 4 0, 0 6\nstand_off_mm = 20\n"
    "[handpiece gated fibre]\nfibre_na = 0.3\nfibre_core_mm = 0.8\napparent_source_kind = fibre-end\n"
    "[handpiece gated thin]\nfibre_mode = single\nfibre_mode_field_um = 6\n"
    "[use w blue lens]\n[use w uv tube]\n";

struct example {
    const char *name;
    struct bw_case *the_case;
    struct bw_result *result;
};
enum { EXAMPLES_MAX = 16 };
static const double at_m = 1.25;

static struct example examples[EXAMPLES_MAX];
static size_t example_count;

static void assess_example(const char *name, const char *text) {
    struct example *example = &examples[example_count++];
    struct bw_assess_options options = {
        .parts = BW_PART_ALL, .working = true, .all_rules = true, .at_count = 1, .at_m = {at_m}};
    struct bw_error error = {0};
    example->name = name;
    example->the_case = clinic_read(text);
    if (bw_assess(example->the_case, bw_tables_find(example->the_case->rules), &options, &example->result, &error) !=
        BW_OK) {
        fprintf(stderr, "%s: %s\n", name, error.text);
        abort();
    }
}

static bool holds(const struct bw_working *working, double value) {
    for (size_t i = 0; i < working->count; i++)
        if (!working->steps[i].heading && !(working->steps[i].value < value) && !(working->steps[i].value > value))
            return true;
    return false;
}

#define ASSERT_HELD(working, figure, where)                                                                            \
    do {                                                                                                               \
        if (isnan(figure) || !holds(working, figure))                                                                  \
            fail_msg("%s: %s = %.17g is no value of any step", where, #figure, figure);                                \
    } while (0)

/* ---- the figures of the distance table -------------------------------------------------------------- */

static void check_emission(const struct bw_distance_result *distance, size_t i, const char *where) {
    const struct bw_emission_result *emission = &distance->emissions[i];
    const struct bw_working *working = &distance->working;
    ASSERT_HELD(working, emission->limit.per_pulse_j_m2, where);
    ASSERT_HELD(working, emission->limit.irradiance_w_m2, where);
    ASSERT_HELD(working, emission->skin_limit.per_pulse_j_m2, where);
    ASSERT_HELD(working, emission->skin_limit.irradiance_w_m2, where);
    for (int rule = 0; rule < BW_RULES; rule++) {
        if (!isnan(emission->limit.rules_j_m2[rule]))
            ASSERT_HELD(working, emission->limit.rules_j_m2[rule], where);
        if (!isnan(emission->skin_limit.rules_j_m2[rule]))
            ASSERT_HELD(working, emission->skin_limit.rules_j_m2[rule], where);
    }
    ASSERT_HELD(working, 1e3 * emission->limit.limit.aperture_m, where);
    ASSERT_HELD(working, emission->ratio_at_exit, where);
    ASSERT_HELD(working, emission->nohd.distance_m, where);
    ASSERT_HELD(working, emission->optical_density, where);
    if (distance->direct->shaped && emission->subtense_rad > 0)
        ASSERT_HELD(working, 1e3 * emission->subtense_rad, where);
}

static void test_distances(void **state) {
    const struct example *example = *state;
    for (size_t i = 0; i < example->result->distance_count; i++) {
        const struct bw_distance_result *distance = &example->result->distances[i];
        const struct bw_working *working = &distance->working;
        const struct bw_handpiece *piece = &example->the_case->lasers[distance->laser].handpieces[distance->handpiece];
        ASSERT_HELD(working, distance->nohd.distance_m, piece->name);
        ASSERT_HELD(working, distance->skin.distance_m, piece->name);
        ASSERT_HELD(working, distance->diffuse.distance_m, piece->name);
        ASSERT_HELD(working, distance->ratio_at_exit, piece->name);
        ASSERT_HELD(working, distance->skin_ratio_at_exit, piece->name);
        ASSERT_HELD(working, distance->worst_m, piece->name);
        ASSERT_HELD(working, distance->glance.exposure_s, piece->name);
        ASSERT_HELD(working, distance->skin_time.exposure_s, piece->name);
        ASSERT_HELD(working, distance->diffuse_time.exposure_s, piece->name);
        ASSERT_HELD(working, distance->exit.eye.exposure_s, piece->name);
        ASSERT_HELD(working, distance->exit.skin.exposure_s, piece->name);
        ASSERT_HELD(working, distance->places[0].eye_ratio, piece->name);
        ASSERT_HELD(working, distance->places[0].eye.exposure_s, piece->name);
        ASSERT_HELD(working, distance->places[0].skin.exposure_s, piece->name);
        for (size_t k = 0; k < piece->output.count; k++) {
            const struct bw_emission *emission = &piece->output.emissions[k];
            const struct bw_beam *beam = &piece->output.beams[k];
            check_emission(distance, k, piece->name);
            ASSERT_HELD(working, emission->wavelength_nm, piece->name);
            ASSERT_HELD(working, emission->average_power_w, piece->name);
            ASSERT_HELD(working, beam->diameter_m, piece->name);
            ASSERT_HELD(working, beam->divergence_rad, piece->name);
            if (emission->continuous)
                continue;
            ASSERT_HELD(working, emission->peak_power_w, piece->name);
            ASSERT_HELD(working, emission->pulse_energy_j, piece->name);
            ASSERT_HELD(working, emission->pulse_duration_s, piece->name);
            ASSERT_HELD(working, emission->repetition_rate_hz, piece->name);
        }
    }
}

static void test_incidents(void **state) {
    const struct example *example = *state;
    for (size_t i = 0; i < example->result->incident_count; i++) {
        const struct bw_incident_result *incident = &example->result->incidents[i];
        ASSERT_HELD(&incident->working, incident->eye_ratio, example->name);
        ASSERT_HELD(&incident->working, incident->skin_ratio, example->name);
    }
}

static void test_goggles(void **state) {
    const struct example *example = *state;
    for (size_t i = 0; i < example->result->pair_count; i++) {
        const struct bw_pair_result *pair = &example->result->pairs[i];
        const struct bw_working *working = &example->result->eyewear_working;
        for (size_t k = 0; pair->is_place && k < example->result->room_count; k++)
            if (example->result->rooms[k].room == pair->room)
                working = &example->result->rooms[k].working;
        for (size_t k = 0; k < pair->verdict.count; k++) {
            ASSERT_HELD(working, pair->verdict.emissions[k].od_required, example->name);
            if (!isnan(pair->verdict.emissions[k].od_given))
                ASSERT_HELD(working, pair->verdict.emissions[k].od_given, example->name);
        }
    }
}

static void test_rooms(void **state) {
    const struct example *example = *state;
    for (size_t i = 0; i < example->result->room_count; i++) {
        const struct bw_room_result *found = &example->result->rooms[i];
        const struct bw_room *room = &example->the_case->rooms[found->room];
        for (size_t k = 0; k < room->person_count; k++) {
            const struct bw_person_result *person = &found->persons[k];
            ASSERT_HELD(&found->working, person->place.ratio, room->persons[k].name);
            if (person->place.path != BW_PATH_NONE) {
                ASSERT_HELD(&found->working, person->place.length_m, room->persons[k].name);
                ASSERT_HELD(&found->working, person->place.share, room->persons[k].name);
            }
            if (person->has_times) {
                ASSERT_HELD(&found->working, person->eye.exposure_s, room->persons[k].name);
                ASSERT_HELD(&found->working, person->skin.exposure_s, room->persons[k].name);
                ASSERT_HELD(&found->working, person->skin_ratio, room->persons[k].name);
            }
            for (size_t j = 0; j < person->od_count; j++)
                ASSERT_HELD(&found->working, person->od[j].od, room->persons[k].name);
        }
        for (size_t k = 0; k < room->opening_count; k++)
            ASSERT_HELD(&found->working, found->solution.openings[k].ratio_beyond, room->openings[k].name);
    }
}

/* ---- the numbers ------------------------------------------------------------------------------------ */

static size_t check_numbers(const struct bw_working *working, const char *where) {
    size_t seen = 0;
    assert_false(working->failed);
    for (size_t i = 0; i < working->count; i++) {
        const struct bw_step *step = &working->steps[i];
        double got = nan("");
        if (step->heading || step->numbers[0] == '\0')
            continue;
        seen++;
        if (!calculator_agrees(step->numbers, step->value, &got))
            fail_msg("%s: %s = %.10g, but %s gives %.10g", where, step->symbol, step->value, step->numbers, got);
    }
    return seen;
}

static void test_numbers(void **state) {
    const struct example *example = *state;
    size_t seen = check_numbers(&example->result->eyewear_working, example->name);
    for (size_t i = 0; i < example->result->distance_count; i++)
        seen += check_numbers(&example->result->distances[i].working, example->name);
    for (size_t i = 0; i < example->result->incident_count; i++)
        seen += check_numbers(&example->result->incidents[i].working, example->name);
    for (size_t i = 0; i < example->result->room_count; i++)
        seen += check_numbers(&example->result->rooms[i].working, example->name);
    assert_true(seen > 100);
}

/* A step without numbers is an input, a printed value, or was searched: then its note or its source says so. */
static void test_reasons(void **state) {
    const struct example *example = *state;
    for (size_t i = 0; i < example->result->distance_count; i++) {
        const struct bw_working *working = &example->result->distances[i].working;
        for (size_t k = 0; k < working->count; k++) {
            const struct bw_step *step = &working->steps[k];
            if (!step->heading && step->numbers[0] == '\0' && step->note[0] == '\0' && step->source[0] == '\0')
                fail_msg("%s: %s = %.10g comes from nowhere", example->name, step->symbol, step->value);
        }
    }
}

/* ---- the symbols ------------------------------------------------------------------------------------ */

static bool explained(const char *legend, const char *word, size_t length) {
    static const char *const known[] = {"sqrt",  "exp",  "ln", "log10", "atan", "min",    "max",
                                        "floor", "ceil", "pi", "of",    "each", "effect", "small"};
    char line[64];
    for (size_t i = 0; i < sizeof known / sizeof known[0]; i++)
        if (strlen(known[i]) == length && strncmp(known[i], word, length) == 0)
            return true;
    snprintf(line, sizeof line, "\n  %.*s ", (int)length, word);
    return strstr(legend, line) != NULL;
}

static void check_words(const char *legend, const char *text, const char *where) {
    for (const char *at = text; *at;) {
        if (!isalpha((unsigned char)*at)) { /* a number with its exponent is no word */
            bool digit = isdigit((unsigned char)*at);
            at++;
            if (digit && *at == 'e')
                at++;
            continue;
        }
        size_t length = 0;
        while (isalnum((unsigned char)at[length]) || at[length] == '_')
            length++;
        if (!explained(legend, at, length))
            fail_msg("%s: %.*s in '%s' is not explained", where, (int)length, at, text);
        at += length;
    }
}

static void check_legend(const char *legend, const struct bw_working *working, const char *where) {
    for (size_t i = 0; i < working->count; i++) {
        if (working->steps[i].heading)
            continue;
        check_words(legend, working->steps[i].symbol, where);
        check_words(legend, working->steps[i].formula, where);
    }
}

static void test_legend(void **state) {
    const struct example *example = *state;
    struct bw_text text = {0};
    bw_report_result_working_text(&text, example->result);
    assert_false(text.failed);
    const char *legend = strstr(text.data, "What the symbols stand for");
    assert_non_null(legend);
    assert_null(strstr(legend + 1, "What the symbols stand for"));
    check_legend(legend, &example->result->eyewear_working, example->name);
    for (size_t i = 0; i < example->result->distance_count; i++)
        check_legend(legend, &example->result->distances[i].working, example->name);
    for (size_t i = 0; i < example->result->incident_count; i++)
        check_legend(legend, &example->result->incidents[i].working, example->name);
    for (size_t i = 0; i < example->result->room_count; i++)
        check_legend(legend, &example->result->rooms[i].working, example->name);
    bw_text_free(&text);
}

/* ---- side by side ----------------------------------------------------------------------------------- */

static bool same_number(double a, double b) {
    return !(a < b) && !(a > b) && !isnan(a) && !isnan(b);
}

/* The first column is the result itself; each other one is what its rule set alone gives. */
static void test_side_by_side(void **state) {
    const struct example *example = *state;
    const struct bw_comparison *comparison = example->result->comparison;
    assert_int_equal(comparison->table_count, bw_tables_count());
    assert_int_equal(comparison->handpiece_count, example->result->distance_count);
    for (size_t i = 0; i < comparison->handpiece_count; i++) {
        const struct bw_distance_result *here = &example->result->distances[i];
        assert_true(same_number(bw_comparison_distance(comparison, i, 0)->nohd.distance_m, here->nohd.distance_m));
        for (size_t k = 0; k < comparison->table_count; k++) {
            struct bw_assess_options options = {
                .parts = BW_PART_DISTANCE,
                .laser = example->the_case->lasers[here->laser].name,
                .handpiece = example->the_case->lasers[here->laser].handpieces[here->handpiece].name};
            struct bw_result *alone = NULL;
            struct bw_error error = {0};
            const struct bw_rule_cell *cell = bw_comparison_cell(comparison, i, k);
            enum bw_status status = bw_assess(example->the_case, comparison->tables[k], &options, &alone, &error);
            assert_int_equal(cell->result != NULL, status == BW_OK);
            if (status == BW_OK)
                assert_true(
                    same_number(alone->distances[0].nohd.distance_m, cell->result->distances[0].nohd.distance_m));
            else
                assert_non_null(strstr(cell->reason, bw_table_id(comparison->tables[k])));
            bw_result_free(alone);
        }
        for (size_t k = 0; k < comparison->table_count; k++) { /* whoever has rows is named in the sentence */
            bool has_rows = bw_comparison_distance(comparison, i, k) != NULL;
            assert_true(!has_rows || strstr(comparison->sentences[i], bw_table_id(comparison->tables[k])) != NULL ||
                        strstr(comparison->sentences[i], "agree") != NULL);
        }
    }
}

static void test_columns(void **state) {
    const struct example *example = *state;
    struct bw_text text = {0};
    bw_report_distance_text(&text, example->result);
    bw_report_result_working_text(&text, example->result);
    assert_false(text.failed);
    size_t width = 0;
    for (const char *at = text.data; *at; at++) {
        width = *at == '\n' ? 0 : width + ((unsigned char)*at < 0x80 || (unsigned char)*at >= 0xC0);
        if (width > 80)
            fail_msg("%s: a line of more than 80 columns: %.80s", example->name, at - 80);
    }
    bw_text_free(&text);
}

int main(void) {
    static const struct {
        const char *name;
        CMUnitTestFunction function;
    } checks[] = {{"distances", test_distances}, {"goggles", test_goggles},           {"rooms", test_rooms},
                  {"incidents", test_incidents}, {"numbers", test_numbers},           {"reasons", test_reasons},
                  {"legend", test_legend},       {"side by side", test_side_by_side}, {"columns", test_columns}};
    enum { CHECKS = sizeof checks / sizeof checks[0] };
    static struct CMUnitTest tests[EXAMPLES_MAX * CHECKS];
    static char names[EXAMPLES_MAX * CHECKS][96];
    size_t count = 0;
    for (size_t i = 0; i < bw_case_examples_count() && i + 2 < EXAMPLES_MAX; i++)
        assess_example(bw_case_example_name(i), bw_case_example(bw_case_example_name(i)));
    assess_example("clinic", CLINIC);
    assess_example("workshop", workshop);
    for (size_t i = 0; i < example_count; i++)
        for (size_t k = 0; k < CHECKS; k++, count++) {
            snprintf(names[count], sizeof names[0], "%s, %s", examples[i].name, checks[k].name);
            tests[count] = (struct CMUnitTest){names[count], checks[k].function, NULL, NULL, &examples[i]};
        }
    int failed = _cmocka_run_group_tests("report working", tests, count, NULL, NULL);
    for (size_t i = 0; i < example_count; i++) {
        bw_result_free(examples[i].result);
        bw_case_free(examples[i].the_case);
    }
    return failed == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
