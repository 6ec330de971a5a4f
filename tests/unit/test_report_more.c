/* report: aids, tolerances, times, sensitivities and incidents in every format. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdlib.h>
#include <string.h>

#include <cmocka.h>

#include <beamward/report.h>

#include "check_json.h"
#include "check_xml.h"
#include "clinic.h"

#define COUNT(array) (sizeof(array) / sizeof *(array))
#define MORE                                                                                                           \
    "[aid loupes]\nmagnification = 2.5\nobjective_diameter_mm = 16\n"                                                  \
    "[person two surgeon]\nat_m = 1 1\naid = loupes\n"                                                                 \
    "[laser pen]\n[emission pen red]\nwavelength_nm = 650\naverage_power_mw = 5\ntolerance_pct = 20\n"                 \
    "[handpiece pen end]\nbeam_diameter_mm = 3\ndivergence_mrad = 0\ndiameter_definition = d63\n"                      \
    "[incident glance]\nlaser = pen\nhandpiece = end\ndistance_m = 1\nexposure_s = 0.1\neyewear = wraps\naid = loupes\n" \
    "[incident swept]\nroom = two\nat_m = 2.6 1.2\nexposure_s = 0.5\n"

static struct clinic shared;
static const struct bw_provenance provenance = {.version = "1.2.3"};

static struct row {
    const char *name, *want; /* want NULL: it is there */
} json_rows[] = {
    {"distance.beams[0].aids[0].aid", "\"loupes\""},
    {"distance.beams[0].aids[0].nohd_m", NULL},
    {"distance.beams[0].aids[0].naked_eye_decides", "false"},
    {"distance.beams[1].aids[0].nohd_m", "null"},
    {"distance.beams[1].aids[0].unbounded", "true"},
    {"distance.beams[1].without_tolerances.nohd_m", "null"},
    {"distance.beams[1].without_tolerances.nohd_unbounded", "true"},
    {"distance.beams[1].without_tolerances.od[0]", NULL},
    {"distance.beams[0].permitted_at_exit.eye_s", NULL},
    {"distance.beams[0].permitted_at_exit.behind[1].eyewear", "\"weak\""},
    {"distance.beams[0].permitted", "[]"},
    {"distance.beams[0].sensitivity[0].quantity", "\"divergence\""},
    {"distance.beams[0].sensitivity[0].emission", "null"},
    {"distance.beams[0].sensitivity[0].nohd_pct_per_pct", NULL},
    {"distance.beams[0].sensitivity[1].emission", "\"deep\""},
    {"distance.beams[1].sensitivity[0].nohd_pct_per_pct", "null"},
    {"room.rooms[0].persons[0].time_to_limit_s", NULL},
    {"room.rooms[0].persons[0].time_to_limit_worn_s", NULL},
    {"room.rooms[0].persons[0].skin_time_to_limit_s", NULL},
    {"room.rooms[0].persons[1].aid", "\"loupes\""},
    {"room.rooms[0].persons[1].through_aid", "true"},
    {"incidents[0].name", "\"glance\""},
    {"incidents[0].distance_m", "1"},
    {"incidents[0].eyewear", "\"wraps\""},
    {"incidents[0].eye_from.laser", "\"pen\""},
    {"incidents[1].room", "\"two\""},
    {"incidents[1].at_m", "[2.6, 1.2]"},
    {"incidents[1].eye_ratio", NULL},
    {"incidents[1].skin_ratio", NULL},
};

static void test_json(void **state) {
    const struct row *row = *state;
    struct bw_text text = {0};
    bw_report_result_json(&text, shared.result, &provenance);
    assert_true(!text.failed && json_is_valid(text.data));
    assert_null(strstr(text.data, "inf"));
    const char *value = json_find(text.data, row->name);
    if (!value)
        fail_msg("%s is missing", row->name);
    size_t length = (size_t)(json_skip(value) - value);
    if (row->want && (length != strlen(row->want) || strncmp(value, row->want, length) != 0))
        fail_msg("%s: got %.*s, want %s", row->name, (int)length, value, row->want);
    bw_text_free(&text);
}

static void require_parts(const struct bw_text *text, const char *const *parts, size_t count) {
    assert_true(!text->failed && text->data);
    const char *at = text->data;
    for (size_t i = 0; i < count; i++) {
        at = strstr(at, parts[i]);
        if (!at)
            fail_msg("%s is missing or too early in\n%s", parts[i], text->data);
    }
}

static void test_page(void **state) {
    (void)state;
    static const char *const parts[] = {"incident swept",     "Through loupes",    "Extended NOHD",
                                        "the eye behind it",  "Eye limit after",   "moves the NOHD by",
                                        "divergence",         "worst corner of the tolerances", "unbounded",
                                        "Eye limit reached after", "surgeon",      "loupes",
                                        "id=\"incidents\"",   "glance",            "swept",
                                        "Optical aids",       "id=\"working\"",    "incident glance",
                                        "Skin, exposure 0.1 s"};
    struct bw_text text = {0};
    bw_report_html(&text, shared.result, &provenance);
    require_parts(&text, parts, COUNT(parts));
    const char *fault = xml_fault(text.data);
    if (fault)
        fail_msg("not well-formed: %.80s", fault);
    bw_text_free(&text);
}

/* 80 columns, blanks or not. */
static void test_text(void **state) {
    (void)state;
    static const char *const parts[] = {"extended NOHD",       "through loupes", "limit reached after",
                                        "1 % more of an input", "without tolerances", "Incidents", "glance", "wraps"};
    struct bw_text text = {0};
    bw_report_distance_text(&text, shared.result);
    require_parts(&text, parts, COUNT(parts));
    bw_report_room_text(&text, shared.result, false);
    bw_report_summary_text(&text, shared.result);
    size_t width = 0;
    for (const char *at = text.data; *at; at++) {
        width = *at == '\n' ? 0 : width + 1;
        if (width > 80)
            fail_msg("a line of more than 80 columns: %.100s", at - 80);
    }
    bw_text_free(&text);
}

int main(void) {
    struct CMUnitTest tests[COUNT(json_rows) + 2];
    size_t count = 0;
    for (size_t i = 0; i < COUNT(json_rows); i++)
        tests[count++] = (struct CMUnitTest){json_rows[i].name, test_json, NULL, NULL, &json_rows[i]};
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_page);
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_text);
    shared = clinic_assess(CLINIC MORE);
    if (shared.status != BW_OK) {
        fprintf(stderr, "%s\n", shared.error.text);
        return EXIT_FAILURE;
    }
    int failed = _cmocka_run_group_tests("report more", tests, count, NULL, NULL);
    clinic_free(&shared);
    return failed == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
