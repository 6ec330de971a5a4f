/* JSON: valid, with the fields of the contract, 12 digits, nothing infinite, strings escaped. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdlib.h>
#include <string.h>
#include <cmocka.h>
#include <math.h>

#include <beamward/report.h>

#include "check_json.h"
#include "clinic.h"

static const struct bw_provenance provenance = {
    .version = "1.2.3", .case_path = "some/where/clinic.ini", .case_sha256 = "00ff"};

static struct bw_text written(const struct clinic *clinic) {
    struct bw_text text = {0};
    if (clinic->status != BW_OK)
        fail_msg("%s", clinic->error.text);
    bw_report_result_json(&text, clinic->result, &provenance);
    assert_false(text.failed);
    if (!json_is_valid(text.data))
        fail_msg("not valid JSON:\n%s", text.data);
    return text;
}

static void require_value(const char *json, const char *path, const char *want) {
    const char *value = json_find(json, path);
    if (!value)
        fail_msg("%s is missing in\n%s", path, json);
    const char *end = json_skip(value);
    if (want && ((size_t)(end - value) != strlen(want) || strncmp(value, want, strlen(want)) != 0))
        fail_msg("%s: got %.*s, want %s", path, (int)(end - value), value, want);
}

/* ---- every field of the contract is there -------------------------------------------------------- */

static struct path_case {
    const char *name, *want; /* the path; its value or NULL for any */
} path_cases[] = {
    {"schema", "\"beamward.result/1\""},
    {"version", "\"1.2.3\""},
    {"rules", "\"iec-60825-1-2014\""},
    {"edition", NULL},
    {"case_file", "\"clinic.ini\""},
    {"case_sha256", "\"00ff\""},
    {"needs_action", "true"},
    {"findings[0].severity", NULL},
    {"findings[0].subject", NULL},
    {"findings[0].text", NULL},
    {"distance.rules", "\"iec-60825-1-2014\""},
    {"distance.beams[0].laser", "\"trident\""},
    {"distance.beams[0].handpiece", "\"spot-30\""},
    {"distance.beams[0].exposure_s", "100"},
    {"distance.beams[0].nohd_m", NULL},
    {"distance.beams[0].skin_distance_m", NULL},
    {"distance.beams[0].diffuse_distance_m", NULL},
    {"distance.beams[0].ratio_at_exit", NULL},
    {"distance.beams[0].governing.effect", "\"retina-thermal\""},
    {"distance.beams[0].governing.wavelength_nm", "810"},
    {"distance.beams[0].governing.rule", "\"average\""},
    {"distance.beams[0].emissions[1].name", "\"pulsed\""},
    {"distance.beams[0].emissions[1].wavelength_nm", "905"},
    {"distance.beams[0].emissions[1].mpe_j_m2", NULL},
    {"distance.beams[0].emissions[1].mpe_w_m2", NULL},
    {"distance.beams[0].emissions[1].rule", NULL},
    {"distance.beams[0].emissions[1].nohd_m", NULL},
    {"distance.beams[0].emissions[1].od", NULL},
    {"eyewear.pairs[1].eyewear", "\"weak\""},
    {"eyewear.pairs[1].laser", "\"trident\""},
    {"eyewear.pairs[1].handpiece", "\"spot-30\""},
    {"eyewear.pairs[1].verdict", "\"insufficient\""},
    {"eyewear.pairs[1].emissions[0].name", "\"deep\""},
    {"eyewear.pairs[1].emissions[0].wavelength_nm", "810"},
    {"eyewear.pairs[1].emissions[0].od_required", NULL},
    {"eyewear.pairs[1].emissions[0].od_given", "2"},
    {"eyewear.pairs[1].emissions[0].scale_required", "null"},
    {"eyewear.pairs[1].emissions[0].scale_given", "null"},
    {"eyewear.pairs[1].emissions[0].verdict", "\"insufficient\""},
    {"eyewear.pairs[1].emissions[0].reason", NULL},
    {"eyewear.pairs[2].eyewear", NULL}, /* where a person stands: not among the pairs, see below */
    {"eyewear.places[0].person", "\"operator\""},
    {"eyewear.places[0].verdict", "\"sufficient\""},
    {"room.rooms[0].room", "\"two\""},
    {"room.rooms[0].grid_mm", "100"},
    {"room.rooms[0].nhz_area_m2", NULL},
    {"room.rooms[0].farthest_m", NULL},
    {"room.rooms[0].ratio_max", NULL},
    {"room.rooms[0].persons[0].name", "\"operator\""},
    {"room.rooms[0].persons[0].at_m", "[2.6, 1.2]"},
    {"room.rooms[0].persons[0].ratio", NULL},
    {"room.rooms[0].persons[0].od_required[0].wavelength_nm", "650"},
    {"room.rooms[0].persons[0].od_required[0].od", NULL},
    {"room.rooms[0].persons[0].eyewear", "\"wraps\""},
    {"room.rooms[0].persons[0].verdict", "\"sufficient\""},
    {"room.rooms[0].openings[1].name", "\"window\""},
    {"room.rooms[0].openings[1].ratio_beyond", NULL},
    {"room.rooms[0].openings[1].leaves", "true"},
    {"room.rooms[0].openings[1].needs", NULL},
};

static struct clinic shared;

static void test_path(void **state) {
    const struct path_case *c = *state;
    struct bw_text text = written(&shared);
    if (strncmp(c->name, "eyewear.pairs[2]", 16) == 0)
        assert_null(json_find(text.data, c->name));
    else
        require_value(text.data, c->name, c->want);
    bw_text_free(&text);
}

static void test_digits(void **state) {
    (void)state;
    struct bw_text text = written(&shared);
    const char *value = json_find(text.data, "distance.beams[0].nohd_m");
    double got = strtod(value, NULL), want = shared.result->distances[0].nohd.distance_m;
    if (!(fabs(got - want) <= 1e-11 * want))
        fail_msg("got %.15g, want %.15g", got, want);
    assert_null(json_find(text.data, "room.rooms[0].map_seconds")); /* only with --timing */
    bw_text_free(&text);
}

static void test_same_bytes(void **state) {
    (void)state;
    struct clinic again = clinic_assess(CLINIC);
    struct bw_text first = written(&shared), second = written(&again);
    assert_string_equal(first.data, second.data);
    bw_text_free(&first);
    bw_text_free(&second);
    clinic_free(&again);
}

/* ---- what never ends ----------------------------------------------------------------------------- */

static void test_unbounded(void **state) {
    (void)state;
    struct clinic clinic = clinic_assess(
        CLINIC_CASE
        "[laser one]\n[emission one beam]\nwavelength_nm = 810\naverage_power_w = 8\n"
        "[handpiece one lens]\nbeam_diameter_mm = 30\ndivergence_mrad = 0\ndiameter_definition = d86\n" CLINIC_ROOM
        "[use two one lens]\n");
    struct bw_text text = written(&clinic);
    require_value(text.data, "distance.beams[0].nohd_m", "null");
    require_value(text.data, "distance.beams[0].unbounded", "true");
    require_value(text.data, "distance.beams[0].nohd_unbounded", "true");
    require_value(text.data, "distance.beams[0].emissions[0].nohd_m", "null");
    require_value(text.data, "distance.beams[0].emissions[0].unbounded", "true");
    assert_null(json_find(text.data, "distance.beams[0].diffuse_unbounded"));
    assert_null(strstr(text.data, "inf"));
    assert_null(strstr(text.data, "nan"));
    bw_text_free(&text);
    clinic_free(&clinic);
}

static void test_bounded_says_nothing(void **state) {
    (void)state;
    struct bw_text text = written(&shared);
    static const char *const never[] = {"\"nohd_unbounded\"", "\"diffuse_unbounded\"", "\"nohd_m\": null",
                                        "\"skin_distance_m\": null", "\"diffuse_distance_m\": null"};
    for (size_t i = 0; i < sizeof never / sizeof never[0]; i++)
        if (strstr(text.data, never[i]))
            fail_msg("%s, though every distance ends", never[i]);
    bw_text_free(&text);
}

/* ---- strings ------------------------------------------------------------------------------------- */

static struct string_case {
    const char *name, *title, *want;
} string_cases[] = {
    {"quotes", "a \"b\" c", "\"a \\\"b\\\" c\""},
    {"backslash", "a\\b", "\"a\\\\b\""},
    {"control characters", "a\tb\nc\x01\x1f\x7f", "\"a\\u0009b\\u000ac\\u0001\\u001f\\u007f\""},
    {"markup stays", "<&\">'", "\"<&\\\">'\""},
    {"UTF-8 passes", "\xC3\xA9 \xE2\x82\xAC \xF0\x9F\x90\xB4", "\"\xC3\xA9 \xE2\x82\xAC \xF0\x9F\x90\xB4\""},
    {"what is no UTF-8", "a\xFFz\xC0\xAF\xED\xA0\x80\xE2\x82",
     "\"a\xEF\xBF\xBDz\xEF\xBF\xBD\xEF\xBF\xBD\xEF\xBF\xBD"
     "\xEF\xBF\xBD\xEF\xBF\xBD\xEF\xBF\xBD\xEF\xBF\xBD\""},
};
static void test_string(void **state) {
    const struct string_case *c = *state;
    struct clinic clinic = clinic_assess(CLINIC);
    snprintf(clinic.the_case->title, sizeof clinic.the_case->title, "%s", c->title);
    struct bw_text text = written(&clinic);
    require_value(text.data, "title", c->want);
    bw_text_free(&text);
    clinic_free(&clinic);
}

/* ---- the schemas of the other commands ----------------------------------------------------------- */

static void test_parts(void **state) {
    (void)state;
    struct bw_text distance = {0}, eyewear = {0}, room = {0};
    bw_report_distance_json(&distance, shared.result);
    bw_report_eyewear_json(&eyewear, shared.result);
    bw_report_room_json(&room, shared.result, true);
    assert_true(json_is_valid(distance.data) && json_is_valid(eyewear.data) && json_is_valid(room.data));
    require_value(distance.data, "schema", "\"beamward.distance/1\"");
    require_value(distance.data, "beams[0].nohd_m", NULL);
    require_value(eyewear.data, "schema", "\"beamward.eyewear/1\"");
    require_value(eyewear.data, "pairs[0].verdict", "\"sufficient\"");
    require_value(room.data, "schema", "\"beamward.room/1\"");
    require_value(room.data, "rooms[0].map_seconds", NULL);
    const char first[] = "{\n  \"schema\"";
    assert_memory_equal(distance.data, first, strlen(first));
    bw_text_free(&distance);
    bw_text_free(&eyewear);
    bw_text_free(&room);
}

static struct bw_text limit_json(bool train) {
    struct bw_limit_query query = {.table = bw_tables_find("iec-60825-1-2014"),
                                   .target = BW_EYE,
                                   .has_train = train,
                                   .exposure = {.wavelength_nm = 904, .exposure_s = 10}};
    struct bw_emission_input input = {.wavelength_nm = 904,
                                      .average_power_w = nan(""),
                                      .peak_power_w = nan(""),
                                      .pulse_energy_j = 1,
                                      .pulse_duration_s = 200e-9,
                                      .repetition_rate_hz = 5000};
    struct bw_viewing_case viewing = {.target = BW_EYE, .exposure_s = 10};
    struct bw_error error = {0};
    struct bw_text text = {0};
    assert_int_equal(bw_limits(query.table, BW_EYE, &query.exposure, &query.limits, NULL, &error), BW_OK);
    assert_int_equal(bw_emission_resolve(&input, &query.emission, &error), BW_OK);
    assert_int_equal(bw_hazard_train_limits(query.table, &query.emission, &viewing, &query.train, NULL, &error), BW_OK);
    bw_report_limit_json(&text, &query);
    if (!json_is_valid(text.data))
        fail_msg("not valid JSON:\n%s", text.data);
    return text;
}

static void test_limit(void **state) {
    (void)state;
    static const char *const paths[] = {"rules",
                                        "target",
                                        "wavelength_nm",
                                        "exposure_s",
                                        "subtense_mrad",
                                        "radiant_exposure_j_m2",
                                        "irradiance_w_m2",
                                        "aperture_mm",
                                        "governing",
                                        "limits[0].effect",
                                        "limits[0].row",
                                        "limits[0].clause",
                                        "limits[0].known",
                                        "limits[0].radiant_exposure_j_m2",
                                        "limits[0].irradiance_w_m2",
                                        "limits[0].aperture_mm"};
    struct bw_text text = limit_json(false);
    require_value(text.data, "schema", "\"beamward.limit/1\"");
    for (size_t i = 0; i < sizeof paths / sizeof paths[0]; i++)
        require_value(text.data, paths[i], NULL);
    assert_null(json_find(text.data, "rule"));
    bw_text_free(&text);
}

/* limits-facts.md, section 3c: 904 nm, 200 ns, 5 kHz, 10 s, iec-60825-1-2014: 2.05e-3 J/m2 by the train rule. */
static void test_train_limit(void **state) {
    (void)state;
    struct bw_text text = limit_json(true);
    require_value(text.data, "rule", "\"train\"");
    require_value(text.data, "rules_j_m2.single", NULL);
    require_value(text.data, "rules_j_m2.average", NULL);
    double per_pulse_j_m2 = strtod(json_find(text.data, "per_pulse_j_m2"), NULL);
    if (!(fabs(per_pulse_j_m2 - 2.05e-3) <= 0.005e-3))
        fail_msg("got %.9g J/m2", per_pulse_j_m2);
    double train_j_m2 = strtod(json_find(text.data, "rules_j_m2.train"), NULL);
    if (!(fabs(train_j_m2 - per_pulse_j_m2) <= 1e-11))
        fail_msg("got %.9g J/m2", train_j_m2);
    bw_text_free(&text);
}

/* The checker itself refuses what is wrong. */
static void test_checker(void **state) {
    (void)state;
    static const char *const wrong[] = {"",    "{",        "{\"a\":1,}",  "[1,]",   "[1 2]",    "{\"a\" 1}",
                                        "01",  "1.",       ".5",          "1e",     "nan",      "-",
                                        "\"a", "\"\\x\"",  "\"\\u12g4\"", "\"\t\"", "{a:1}",    "1 2",
                                        "[1}", "Infinity", "'a'",         "tru",    "{\"a\":}", "+1"};
    for (size_t i = 0; i < sizeof wrong / sizeof wrong[0]; i++)
        if (json_is_valid(wrong[i]))
            fail_msg("takes %s", wrong[i]);
    assert_true(json_is_valid(" {\"a\": [1, -2.5e-7, true, null, {}], \"b\": \"\\u00e9\"} "));
}

enum { TESTS_MAX = 100 };
#define ADD_ROWS(rows, function)                                                                                       \
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++)                                                          \
        tests[count++] = (struct CMUnitTest) {                                                                         \
            rows[i].name, function, NULL, NULL, &rows[i]                                                               \
        }

int main(void) {
    struct CMUnitTest tests[TESTS_MAX] = {{0}};
    size_t count = 0;
    ADD_ROWS(path_cases, test_path);
    ADD_ROWS(string_cases, test_string);
    const struct CMUnitTest single[] = {cmocka_unit_test(test_digits),      cmocka_unit_test(test_same_bytes),
                                        cmocka_unit_test(test_unbounded),   cmocka_unit_test(test_bounded_says_nothing),
                                        cmocka_unit_test(test_parts),       cmocka_unit_test(test_limit),
                                        cmocka_unit_test(test_train_limit), cmocka_unit_test(test_checker)};
    for (size_t i = 0; i < sizeof single / sizeof single[0]; i++)
        tests[count++] = single[i];
    shared = clinic_assess(CLINIC);
    int failed = cmocka_run_group_tests_name("report json", tests, NULL, NULL);
    clinic_free(&shared);
    return failed == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
