/* Terminal texts: 80 columns whatever the names, answers first, numbers rounded to the safe side. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdlib.h>
#include <string.h>
#include <cmocka.h>
#include <math.h>

#include <beamward/report.h>

#include "clinic.h"

/* Columns of a line of UTF-8: characters, wide ones twice. */
static size_t columns(const char *line, size_t length) {
    size_t count = 0;
    for (size_t i = 0; i < length; i++) {
        unsigned char byte = (unsigned char)line[i];
        count += (byte & 0xC0) != 0x80;
        count += byte == 0xE4 || byte == 0xE5 || byte == 0xF0; /* CJK and emoji of the titles below */
    }
    return count;
}

static void check_columns(const char *what, const struct bw_text *text) {
    assert_false(text->failed);
    for (const char *line = text->data; *line;) {
        size_t length = strcspn(line, "\n");
        if (columns(line, length) > 80)
            fail_msg("%s: %zu columns: %.*s", what, columns(line, length), (int)length, line);
        if (length > 0 && line[length - 1] == ' ')
            fail_msg("%s: blanks at the end: %.*s", what, (int)length, line);
        for (size_t i = 0; i < length; i++)
            if ((unsigned char)line[i] < 0x20 || line[i] == 0x7F)
                fail_msg("%s: control character %d", what, line[i]);
        line += length + (line[length] == '\n');
    }
}

/* ---- 80 columns ---------------------------------------------------------------------------------- */

#define LONG_A "aaaaaaaa-aaaaaaaa-aaaaaaaa-aaaaaaaa-aaaaaaaa-aaaaaaaa-aaaaaa"
#define LONG_B "bbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbbb"
#define LONG_CASE                                                                                                      \
    CLINIC_CASE "[laser " LONG_A "]\nlabelled_class = 4\n[emission " LONG_A " " LONG_B "]\nwavelength_nm = 810.125\n"  \
                "average_power_w = 8\n[handpiece " LONG_A " " LONG_A "]\nbeam_diameter_mm = 30\n"                      \
                "divergence_mrad = 200\ndiameter_definition = d86\n[room " LONG_A                                      \
                "]\noutline_m = 0 0, 5 0, 5 4, 0 4\n"                                                                  \
                "material = painted-wall\ngrid_mm = 200\nbounces = 0\n[opening " LONG_A " " LONG_B "]\n"               \
                "from_m = 2 0\nto_m = 2.9 0\nkind = door\ncover = none\n[treatment-area " LONG_A " " LONG_B "]\n"      \
                "outline_m = 2 1, 3 1, 3 2, 2 2\naim_deg = 0 .. 360\n[person " LONG_A " " LONG_B "]\nat_m = 1 1\n"     \
                "eyewear = " LONG_A "\n[person " LONG_A " " LONG_A "]\nat_m = 1 3\n"                                   \
                "[eyewear " LONG_A "]\nod = 800-805 3\n[eyewear " LONG_B "]\nod = 800-820 9\n"                         \
                "[use " LONG_A " " LONG_A " " LONG_A "]\n"
#define MANY_GOGGLES                                                                                                   \
    "[eyewear pair-3]\nod = 800-820 3\n[eyewear pair-4]\nod = 800-820 4\n[eyewear pair-5]\nod = 800-820 5\n"           \
    "[eyewear pair-6]\nod = 800-820 6\n[eyewear pair-7]\nod = 800-820 7\n[eyewear pair-8]\nod = 800-820 8\n"

static struct width_case {
    const char *name, *text;
    bool us;
    const char *title; /* NULL: that of the case */
} width_cases[] = {
    {"clinic", CLINIC, false, NULL},
    {"US units", CLINIC, true, NULL},
    {"long names", LONG_CASE, false, NULL},
    {"long names, US units", LONG_CASE, true, NULL},
    {"many goggles", CLINIC MANY_GOGGLES, false, NULL},
    {"no goggles", CLINIC_CASE CLINIC_LASER CLINIC_ROOM CLINIC_USE, false, NULL},
    {"title without blanks", CLINIC, false,
     "wwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwwww"},
    {"wide title", CLINIC, false,
     "\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4"
     "\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4"
     "\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4"
     "\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4"
     "\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4\xE5\xAE\xA4"},
    {"title that would move the cursor", CLINIC, false, "a\x1b[2Jb\rc\nd\te"},
};

static void test_width(void **state) {
    const struct width_case *c = *state;
    struct clinic clinic = clinic_assess(c->text);
    if (clinic.status != BW_OK)
        fail_msg("%s", clinic.error.text);
    clinic.the_case->us_units = c->us;
    if (c->title)
        snprintf(clinic.the_case->title, sizeof clinic.the_case->title, "%s", c->title);
    struct bw_text texts[5] = {{0}};
    bw_report_summary_text(&texts[0], clinic.result);
    bw_report_distance_text(&texts[1], clinic.result);
    bw_report_eyewear_text(&texts[2], clinic.result);
    bw_report_room_text(&texts[3], clinic.result, true);
    bw_report_working_text(&texts[4], &clinic.result->distances[0].working);
    static const char *const names[] = {"summary", "distance", "eyewear", "room", "working"};
    for (size_t i = 0; i < 5; i++) {
        check_columns(names[i], &texts[i]);
        bw_text_free(&texts[i]);
    }
    clinic_free(&clinic);
}

/* ---- the limit ----------------------------------------------------------------------------------- */

static struct limit_case {
    const char *name;
    double wavelength_nm, exposure_s, pulse_s, rate_hz; /* pulse_s 0: continuous */
    enum bw_target target;
    bool us;
} limit_cases[] = {
    {"visible", 532, 0.25, 0, 0, BW_EYE, false},
    {"near infrared", 810, 100, 0, 0, BW_EYE, true},
    {"skin", 905, 10, 0, 0, BW_SKIN, true},
    {"ultraviolet", 308, 3e4, 0, 0, BW_EYE, false},
    {"two retinal limits", 450, 100, 0, 0, BW_EYE, true},
    {"train", 904, 10, 200e-9, 5000, BW_EYE, true},
    {"train of long pulses", 780, 10, 31.25e-6, 16e3, BW_EYE, false},
    {"train, skin", 905, 10, 150e-9, 1e4, BW_SKIN, true},
};

/* The first number after a label in a text. */
static double number_after(const char *text, const char *label) {
    const char *at = strstr(text, label);
    if (!at)
        fail_msg("%s is missing in\n%s", label, text);
    return strtod(at + strlen(label), NULL);
}

static void below(const char *what, double printed, double exact) {
    if (!(printed <= exact * (1 + 1e-11) && printed >= 0.99 * exact))
        fail_msg("%s: %.12g is printed as %.12g: a limit is rounded down", what, exact, printed);
}

static void above(const char *what, double printed, double exact, double most) {
    if (!(printed >= exact * (1 - 1e-11) && printed <= most))
        fail_msg("%s: %.12g is printed as %.12g: it is rounded up", what, exact, printed);
}

static void test_limit(void **state) {
    const struct limit_case *c = *state;
    struct bw_limit_query query = {.table = bw_tables_find("iec-60825-1-2014"),
                                   .target = c->target,
                                   .exposure = {.wavelength_nm = c->wavelength_nm, .exposure_s = c->exposure_s},
                                   .has_train = c->pulse_s > 0,
                                   .us_units = c->us};
    struct bw_error error = {0};
    assert_int_equal(bw_limits(query.table, c->target, &query.exposure, &query.limits, NULL, &error), BW_OK);
    struct bw_emission_input input = {.wavelength_nm = c->wavelength_nm,
                                      .average_power_w = nan(""),
                                      .peak_power_w = nan(""),
                                      .pulse_energy_j = 1e-6,
                                      .pulse_duration_s = c->pulse_s,
                                      .repetition_rate_hz = c->rate_hz};
    struct bw_viewing_case viewing = {.target = c->target, .exposure_s = c->exposure_s};
    struct bw_text text = {0};
    if (query.has_train) {
        assert_int_equal(bw_emission_resolve(&input, &query.emission, &error), BW_OK);
        assert_int_equal(bw_hazard_train_limits(query.table, &query.emission, &viewing, &query.train, NULL, &error),
                         BW_OK);
    }
    bw_report_limit_text(&text, &query);
    check_columns("limit", &text);
    if (query.has_train) {
        const struct bw_train_limit *limit = &query.train.limits[query.train.governing];
        below("per pulse", number_after(text.data, "per pulse"), limit->per_pulse_j_m2);
        below("mean", number_after(text.data, "mean irradiance"), limit->irradiance_w_m2);
    } else {
        const struct bw_limit *limit = &query.limits.limits[query.limits.governing];
        below("H", number_after(text.data, "radiant exposure"), limit->radiant_exposure_j_m2);
        below("E", number_after(text.data, "irradiance  "), limit->irradiance_w_m2);
        if (c->us)
            below("H", number_after(text.data, "J/m2 ("), limit->radiant_exposure_j_m2 * 1e-4);
        if (c->us)
            below("E", number_after(text.data, "W/m2 ("), limit->irradiance_w_m2 * 0.1);
    }
    bw_text_free(&text);
}

/* ---- rounding ------------------------------------------------------------------------------------ */

static void test_rounding(void **state) {
    (void)state;
    struct clinic clinic = clinic_assess(CLINIC);
    clinic.the_case->us_units = true;
    const struct bw_distance_result *distance = &clinic.result->distances[0];
    struct bw_text text = {0};
    bw_report_distance_text(&text, clinic.result);
    double nohd_m = number_after(text.data, "eye, direct (NOHD)"), exact_m = distance->nohd.distance_m;
    above("NOHD", nohd_m, exact_m, 1.01 * exact_m);
    const char *feet = strstr(strstr(text.data, "eye, direct (NOHD)"), "m (");
    above("NOHD in feet", strtod(feet + 3, NULL), exact_m / 0.3048, 1.01 * exact_m / 0.3048);
    above("ratio", number_after(text.data, "at its worst "), distance->ratio_at_exit, 1.1 * distance->ratio_at_exit);
    const char *deep = strstr(text.data, "\n  deep ");
    assert_non_null(deep);
    const char *end = strchr(deep + 1, '\n');
    while (end[-1] != ' ')
        end--;
    double od = distance->emissions[0].optical_density;
    above("OD", strtod(end, NULL), od, od + 0.1);
    bw_text_free(&text);
    clinic_free(&clinic);
}

/* ---- answers first ------------------------------------------------------------------------------- */

static void test_order(void **state) {
    (void)state;
    static const char *const order[] = {"Treatment room 2",
                                        "Not acceptable as described: 1 danger and 1 thing to change.",
                                        "DANGER",
                                        "ACTION",
                                        "How far the hazard reaches",
                                        "Goggles, at the exit",
                                        "Room two",
                                        "caution",
                                        "note"};
    struct clinic clinic = clinic_assess(CLINIC_CASE CLINIC_LASER CLINIC_ROOM
                                         "[person two operator]\nat_m = 2.6 1.2\n" CLINIC_DRAWER CLINIC_USE);
    struct bw_text text = {0};
    bw_report_summary_text(&text, clinic.result);
    const char *at = text.data;
    for (size_t i = 0; i < sizeof order / sizeof order[0]; i++) {
        at = strstr(at, order[i]);
        if (!at)
            fail_msg("%s is missing or too early in\n%s", order[i], text.data);
    }
    bw_text_free(&text);
    clinic_free(&clinic);
}

static void test_nothing_to_do(void **state) {
    (void)state;
    struct clinic clinic = clinic_assess(
        CLINIC_CASE
        "[laser pen]\nlabelled_class = 1\n[emission pen red]\nwavelength_nm = 650\naverage_power_w = 1e-6\n"
        "[handpiece pen tip]\nbeam_diameter_mm = 3\ndivergence_mrad = 2\ndiameter_definition = d86\n" CLINIC_ROOM
            CLINIC_PERSON CLINIC_DRAWER "[use two pen tip]\n");
    struct bw_text text = {0};
    assert_false(clinic.result->needs_action);
    bw_report_summary_text(&text, clinic.result);
    assert_non_null(strstr(text.data, "Nothing in this case needs action"));
    assert_null(strstr(text.data, "Not acceptable"));
    bw_text_free(&text);
    clinic_free(&clinic);
}

/* One line a cell inside the outline, and a head. */
static void test_map(void **state) {
    (void)state;
    struct clinic clinic = clinic_assess(CLINIC);
    const struct bw_room_map *map = &clinic.result->rooms[0].solution.map;
    struct bw_text text = {0};
    bw_report_map_csv(&text, clinic.result, 0);
    size_t want = 1, lines = 0;
    for (size_t i = 0; i < map->rows * map->columns; i++)
        want += map->inside[i];
    for (const char *at = text.data; *at; at++)
        lines += *at == '\n';
    assert_int_equal(lines, want);
    const char head[] = "x_m,y_m,ratio,path\n";
    assert_memory_equal(text.data, head, strlen(head));
    bw_text_free(&text);
    clinic_free(&clinic);
}

enum { TESTS_MAX = 60 };
#define ADD_ROWS(rows, function)                                                                                       \
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++)                                                          \
        tests[count++] = (struct CMUnitTest) {                                                                         \
            rows[i].name, function, NULL, NULL, &rows[i]                                                               \
        }

int main(void) {
    struct CMUnitTest tests[TESTS_MAX] = {{0}};
    size_t count = 0;
    ADD_ROWS(width_cases, test_width);
    ADD_ROWS(limit_cases, test_limit);
    const struct CMUnitTest single[] = {cmocka_unit_test(test_rounding), cmocka_unit_test(test_order),
                                        cmocka_unit_test(test_nothing_to_do), cmocka_unit_test(test_map)};
    for (size_t i = 0; i < sizeof single / sizeof single[0]; i++)
        tests[count++] = single[i];
    return cmocka_run_group_tests_name("report text", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
