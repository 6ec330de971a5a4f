/* The whole job over a case: figures against closed forms, findings and their order, narrowing, errors. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdlib.h>
#include <string.h>
#include <cmocka.h>
#include <math.h>

#include "clinic.h"

#define LASER(emission, handpiece)                                                                                     \
    "[laser one]\nlabelled_class = 4\n[emission one beam]\n" emission "[handpiece one lens]\n" handpiece
#define ROOM_USE CLINIC_ROOM "[use two one lens]\n"

static void expect(const char *what, double got, double want, double relative) {
    if (!(fabs(got - want) <= relative * fabs(want)))
        fail_msg("%s: got %.15g, want %.15g", what, got, want);
}

static void require_ok(const struct clinic *clinic) {
    if (clinic->status != BW_OK)
        fail_msg("%s", clinic->error.text);
}

/* ---- one continuous emission: everything in closed form ------------------------------------------ */

/* 810 nm, 100 s: eye 10 C4 W/m2 in 7 mm, skin 2000 C4 W/m2 in 3.5 mm (limits-facts.md, sections 1 and 3);
 * C4 = 10^(0.002 (810 - 700)). Gaussian, hyperbolic: E = P (1 - exp(-(D/d)^2)) / (pi D^2/4). */
struct closed_case {
    const char *name, *text;
    double power_w, diameter_m, divergence_rad, wavelength_nm;
};
#define CLOSED(power, mm, mrad)                                                                                        \
    CLINIC_CASE LASER("wavelength_nm = 810\naverage_power_w = " power "\n",                                            \
                      "beam_diameter_mm = " mm "\ndivergence_mrad = " mrad                                             \
                      "\ndiameter_definition = d63\nexposure_s = 100\n") ROOM_USE
static struct closed_case closed_cases[] = {
    {"8 W, 20 mm, 150 mrad", CLOSED("8", "20", "150"), 8, 20e-3, 0.150, 810},
    {"0.5 W, 1 mm, 10 mrad", CLOSED("0.5", "1", "10"), 0.5, 1e-3, 0.010, 810},
    {"30 W, 50 mm, 400 mrad", CLOSED("30", "50", "400"), 30, 50e-3, 0.400, 810},
};

static double irradiance_w_m2(const struct closed_case *c, double aperture_m, double diameter_m) {
    return c->power_w * -expm1(-pow(aperture_m / diameter_m, 2)) / (bw_pi * aperture_m * aperture_m / 4);
}

/* The distance at which the mean over the aperture is the limit. */
static double reach_m(const struct closed_case *c, double aperture_m, double limit_w_m2) {
    double share = limit_w_m2 * bw_pi * aperture_m * aperture_m / 4 / c->power_w;
    double diameter_m = aperture_m / sqrt(-log1p(-share));
    return diameter_m > c->diameter_m
               ? sqrt(diameter_m * diameter_m - c->diameter_m * c->diameter_m) / c->divergence_rad
               : 0.;
}

static void test_closed(void **state) {
    const struct closed_case *c = *state;
    struct clinic clinic = clinic_assess(c->text);
    require_ok(&clinic);
    const struct bw_distance_result *distance = &clinic.result->distances[0];
    double c4 = pow(10, 0.002 * (c->wavelength_nm - 700)), eye_w_m2 = 10 * c4, skin_w_m2 = 2000 * c4;
    double ratio = irradiance_w_m2(c, 7e-3, c->diameter_m) / eye_w_m2;
    expect("ratio at exit", distance->ratio_at_exit, ratio, 1e-12);
    expect("NOHD", distance->nohd.distance_m, reach_m(c, 7e-3, eye_w_m2), 1e-9);
    expect("NOHD alone", distance->emissions[0].nohd.distance_m, distance->nohd.distance_m, 1e-12);
    expect("OD", distance->emissions[0].optical_density, log10(ratio), 1e-12);
    expect("ratio alone", distance->emissions[0].ratio_at_exit, ratio, 1e-12);
    expect("skin ratio", distance->skin_ratio_at_exit, irradiance_w_m2(c, 3.5e-3, c->diameter_m) / skin_w_m2, 1e-12);
    expect("skin distance", distance->skin.distance_m, reach_m(c, 3.5e-3, skin_w_m2), 1e-9);
    expect("limit", distance->governing.irradiance_w_m2, eye_w_m2, 1e-12);
    expect("ratio at the NOHD", bw_hazard_ratio(distance->direct, distance->nohd.distance_m), 1., 1e-9);
    clinic_free(&clinic);
}

/* ---- several emissions --------------------------------------------------------------------------- */

/* With the densities of the result, what is left of all emissions together keeps the limit. */
static void test_densities_keep_the_limit(void **state) {
    (void)state;
    struct clinic clinic = clinic_assess(CLINIC);
    require_ok(&clinic);
    const struct bw_distance_result *distance = &clinic.result->distances[0];
    double left = 0;
    for (size_t i = 0; i < distance->direct->output->count; i++)
        left += distance->emissions[i].ratio_at_exit * pow(10, -distance->emissions[i].optical_density);
    if (!(left <= 1 + 1e-9))
        fail_msg("%.15g times the limit is left", left);
    if (!(left >= 0.9))
        fail_msg("only %.15g times the limit is left: more is asked than is needed", left);
    clinic_free(&clinic);
}

static void test_waist(void **state) {
    (void)state;
    struct clinic clinic =
        clinic_assess(CLINIC_CASE LASER("wavelength_nm = 1064\naverage_power_w = 10\n",
                                        "beam_diameter_mm = 20\ndivergence_mrad = 1\n"
                                        "lens_focal_length_mm = 150\ndiameter_definition = d63\n") ROOM_USE);
    require_ok(&clinic);
    const struct bw_distance_result *distance = &clinic.result->distances[0];
    expect("worst place", distance->worst_m, 0.150, 1e-9);
    double at_exit = bw_hazard_ratio(distance->direct, 0), at_waist = bw_hazard_ratio(distance->direct, 0.150);
    assert_true(at_waist > 2 * at_exit);
    expect("worst ratio", distance->ratio_at_exit, at_waist, 1e-9);
    expect("OD", distance->emissions[0].optical_density, log10(at_waist), 1e-9);
    expect("spot", distance->diffuse_spot.diameter_m[0], 0.150e-3, 1e-9);
    clinic_free(&clinic);
}

/* ---- findings ------------------------------------------------------------------------------------ */

static const struct bw_finding *find(const struct clinic *clinic, enum bw_severity severity, const char *subject,
                                     const char *part) {
    for (size_t i = 0; i < clinic->result->finding_count; i++) {
        const struct bw_finding *finding = &clinic->result->findings[i];
        if (finding->severity == severity && strstr(finding->subject, subject) && strstr(finding->text, part))
            return finding;
    }
    return NULL;
}

#define VISIBLE                                                                                                        \
    LASER("wavelength_nm = 650\naverage_power_w = 0.1\n",                                                              \
          "beam_diameter_mm = 3\ndivergence_mrad = 2\ndiameter_definition = d63\n")
#define NEAR_INFRARED(more)                                                                                            \
    LASER("wavelength_nm = 810\naverage_power_w = 8\n",                                                                \
          "beam_diameter_mm = 20\ndivergence_mrad = 150\ndiameter_definition = d86\n" more)
#define WEAK_PERSON "[person two operator]\nat_m = 2.6 1.2\neyewear = weak\n"
#define BARE_PERSON "[person two operator]\nat_m = 2.6 1.2\n"
#define LYING       "[person two patient]\nat_m = 2.6 2\neyewear = wraps\n"

static struct finding_case {
    const char *name, *text;
    enum bw_severity severity;
    const char *subject, *part;
    bool there;
} finding_cases[] = {
    {"bare person in the zone", CLINIC_CASE CLINIC_LASER CLINIC_ROOM BARE_PERSON CLINIC_DRAWER CLINIC_USE, BW_DANGER,
     "room two, person operator", "Wears no goggles", true},
    {"protected person", CLINIC, BW_DANGER, "person operator", "", false},
    {"weak goggles worn", CLINIC_CASE CLINIC_LASER CLINIC_ROOM WEAK_PERSON CLINIC_DRAWER CLINIC_USE, BW_DANGER,
     "room two, person operator", "Wears weak, too weak at this place for trident spot-30: deep", true},
    {"open window", CLINIC, BW_ACTION, "room two, opening window", "times the eye limit can get out", true},
    {"covered door", CLINIC, BW_ACTION, "opening door", "", false},
    {"no goggles at all", CLINIC_CASE CLINIC_LASER CLINIC_ROOM CLINIC_USE, BW_ACTION, "trident spot-30",
     "The case has no goggles", true},
    {"none is enough", CLINIC_CASE CLINIC_LASER CLINIC_ROOM "[eyewear weak]\nod = 640-660 3, 800-820 2\n" CLINIC_USE,
     BW_ACTION, "trident spot-30", "None of the goggles is enough", true},
    {"one is enough", CLINIC, BW_ACTION, "trident spot-30", "goggles", false},
    {"not to be used", CLINIC, BW_CAUTION, "eyewear weak", "Do not use with trident spot-30: deep", true},
    {"may be used", CLINIC, BW_CAUTION, "eyewear wraps", "Do not use", false},
    {"resistance", CLINIC, BW_CAUTION, "eyewear", "withstand", true},
    {"aversion response", CLINIC_CASE VISIBLE ROOM_USE, BW_NOTE, "one lens", "SSK, 15 March 2006", true},
    {"no aversion response", CLINIC, BW_NOTE, "trident", "SSK", false},
    {"given time, short", CLINIC_CASE NEAR_INFRARED("exposure_s = 1\n") ROOM_USE, BW_CAUTION, "one lens",
     "exposure time, 1 s, comes from the case file", true},
    {"given time, long", CLINIC_CASE NEAR_INFRARED("exposure_s = 1000\n") ROOM_USE, BW_NOTE, "one lens",
     "exposure time, 1000 s, comes from the case file", true},
    {"given time, visible", CLINIC_CASE VISIBLE "exposure_s = 0.25\n" ROOM_USE, BW_NOTE, "one lens", "SSK", true},
    {"collimated",
     CLINIC_CASE LASER("wavelength_nm = 810\naverage_power_w = 8\n",
                       "beam_diameter_mm = 20\ndivergence_mrad = 0\ndiameter_definition = d86\n") ROOM_USE,
     BW_CAUTION, "one lens", "never ends", true},
    {"spreading", CLINIC, BW_CAUTION, "trident", "never ends", false},
    {"skin", CLINIC_CASE NEAR_INFRARED("") ROOM_USE, BW_CAUTION, "one lens", "times the skin limit", true},
    {"meter the beam", CLINIC, BW_CAUTION, "laser trident", "Meter the beam", true},
    {"nobody treated", CLINIC, BW_NOTE, "room two", "eyes of whoever is treated", true},
    {"somebody treated", CLINIC_CASE CLINIC_LASER CLINIC_ROOM CLINIC_PERSON LYING CLINIC_DRAWER CLINIC_USE, BW_NOTE,
     "room two", "eyes of whoever is treated", false},
    {"from memory", CLINIC, BW_CAUTION, "rule set iec-60825-1-2014", "from memory", true},
    {"reflectances from memory", CLINIC, BW_NOTE, "room two", "Reflectances that come from memory: ", true},
};

static void test_finding(void **state) {
    const struct finding_case *c = *state;
    struct clinic clinic = clinic_assess(c->text);
    require_ok(&clinic);
    const struct bw_finding *finding = find(&clinic, c->severity, c->subject, c->part);
    if (c->there != (finding != NULL)) {
        for (size_t i = 0; i < clinic.result->finding_count; i++)
            print_message("%s: %s: %s\n", bw_severity_name(clinic.result->findings[i].severity),
                          clinic.result->findings[i].subject, clinic.result->findings[i].text);
        fail_msg("%s: %s is %s", c->subject, c->part, c->there ? "missing" : "there");
    }
    bool needs_action = false;
    for (size_t i = 0; i < clinic.result->finding_count; i++) {
        needs_action = needs_action || clinic.result->findings[i].severity <= BW_ACTION;
        if (i > 0)
            assert_true(clinic.result->findings[i - 1].severity <= clinic.result->findings[i].severity);
    }
    assert_int_equal(clinic.result->needs_action, needs_action);
    clinic_free(&clinic);
}

/* ---- people -------------------------------------------------------------------------------------- */

static void test_people(void **state) {
    (void)state;
    struct clinic clinic =
        clinic_assess(CLINIC_CASE CLINIC_LASER CLINIC_ROOM CLINIC_PERSON
                      "[person two trainee]\nat_m = 3.3 2.5\neyewear = weak\n" LYING CLINIC_DRAWER CLINIC_USE);
    require_ok(&clinic);
    const struct bw_result *result = clinic.result;
    assert_int_equal(result->room_count, 1);
    assert_int_equal(result->pair_count, 2 + 3); /* each pair at the exit, each person at their place */
    const struct bw_person_result *persons = result->rooms[0].persons;
    for (size_t i = 0; i < 3; i++) {
        assert_true(persons[i].needs_eyewear);
        assert_int_equal(persons[i].od_count, 3);
        for (size_t j = 1; j < 3; j++)
            assert_true(persons[i].od[j - 1].wavelength_nm < persons[i].od[j].wavelength_nm);
        expect("ratio", persons[i].place.ratio, result->rooms[0].solution.persons[i].ratio, 1e-12);
    }
    assert_int_equal(persons[0].verdict, BW_SUFFICIENT);
    assert_int_equal(persons[1].verdict, BW_INSUFFICIENT);
    clinic_free(&clinic);
}

/* ---- what is asked for --------------------------------------------------------------------------- */

#define SECOND "[handpiece trident spot-10]\nbeam_diameter_mm = 10\ndivergence_mrad = 200\ndiameter_definition = d86\n"
static struct narrow_case {
    const char *name;
    struct bw_assess_options options;
    size_t distances, pairs, rooms;
    const char *error; /* a part of it; NULL: none */
} narrow_cases[] = {
    {"all", {.parts = BW_PART_ALL}, 2, 4 + 1, 1, NULL},
    {"distances", {.parts = BW_PART_DISTANCE}, 2, 0, 0, NULL},
    {"eyewear", {.parts = BW_PART_EYEWEAR}, 2, 4 + 1, 1, NULL},
    {"rooms", {.parts = BW_PART_ROOM}, 2, 1, 1, NULL},
    {"handpiece", {.parts = BW_PART_ALL, .handpiece = "spot-10"}, 1, 2, 0, NULL},
    {"laser", {.parts = BW_PART_ALL, .laser = "trident"}, 2, 4 + 1, 1, NULL},
    {"room", {.parts = BW_PART_ALL, .room = "two"}, 1, 2 + 1, 1, NULL},
    {"unknown handpiece", {.parts = BW_PART_ALL, .handpiece = "spot-3"}, 0, 0, 0, "did you mean spot-30?"},
    {"unknown laser",
     {.parts = BW_PART_ALL, .laser = "tridant"},
     0,
     0,
     0,
     "laser tridant: the case has none of this name; did you mean trident?"},
    {"unknown room", {.parts = BW_PART_ALL, .room = "twoo"}, 0, 0, 0, "did you mean two?"},
    {"unlike any", {.parts = BW_PART_ALL, .room = "operating-theatre"}, 0, 0, 0, "the case has none of this name"},
    {"not used there",
     {.parts = BW_PART_ALL, .room = "two", .handpiece = "spot-10"},
     0,
     0,
     0,
     "is it used in this room?"},
};

static void test_narrow(void **state) {
    const struct narrow_case *c = *state;
    struct clinic clinic = clinic_assess_with(
        CLINIC_CASE CLINIC_LASER SECOND CLINIC_ROOM CLINIC_PERSON CLINIC_DRAWER CLINIC_USE, NULL, c->options);
    if (c->error) {
        assert_int_equal(clinic.status, BW_INPUT);
        assert_null(clinic.result);
        if (!strstr(clinic.error.text, c->error))
            fail_msg("got: %s", clinic.error.text);
    } else {
        require_ok(&clinic);
        assert_int_equal(clinic.result->distance_count, c->distances);
        assert_int_equal(clinic.result->pair_count, c->pairs);
        assert_int_equal(clinic.result->room_count, c->rooms);
        for (size_t i = 0; i < clinic.result->room_count; i++)
            assert_int_equal(clinic.result->rooms[i].solved, (c->options.parts & BW_PART_ROOM) != 0);
    }
    clinic_free(&clinic);
}

/* A wavelength that the rule set lacks: the emission is named, with its wavelength. */
static void test_out_of_range(void **state) {
    (void)state;
    struct clinic clinic = clinic_assess_with(
        CLINIC_CASE LASER("wavelength_nm = 1300\naverage_power_w = 1\n",
                          "beam_diameter_mm = 5\ndivergence_mrad = 5\ndiameter_definition = d86\n") ROOM_USE,
        "ansi-z136-1-2014", (struct bw_assess_options){.parts = BW_PART_ALL});
    assert_int_equal(clinic.status, BW_OUT_OF_RANGE);
    assert_null(clinic.result);
    if (!strstr(clinic.error.text, "laser one, emission beam (1300 nm): "))
        fail_msg("got: %s", clinic.error.text);
    clinic_free(&clinic);
}

static void test_given_time(void **state) {
    (void)state;
    struct clinic clinic = clinic_assess(CLINIC_CASE NEAR_INFRARED("exposure_s = 7\n") ROOM_USE);
    require_ok(&clinic);
    const struct bw_distance_result *distance = &clinic.result->distances[0];
    assert_true(distance->exposure_given);
    expect("glance", distance->glance.exposure_s, 7, 0);
    expect("skin", distance->skin_view->viewing.exposure_s, 7, 0);
    expect("diffuse", distance->diffuse_view->viewing.exposure_s, 7, 0);
    expect("customary", distance->customary.exposure_s, 100, 0); /* limits-facts.md, section 3c */
    clinic_free(&clinic);
}

/* The longest permitted exposure is just that: with it the ratio is 1. */
static void test_permitted(void **state) {
    (void)state;
    struct clinic clinic =
        clinic_assess_with(CLINIC_CASE NEAR_INFRARED("") ROOM_USE, NULL,
                           (struct bw_assess_options){.parts = BW_PART_DISTANCE, .at_count = 1, .at_m = {0.5}});
    require_ok(&clinic);
    const struct bw_distance_result *distance = &clinic.result->distances[0];
    assert_int_equal(distance->place_count, 1);
    expect("ratio", distance->places[0].eye_ratio, bw_hazard_ratio(distance->direct, 0.5), 0);
    assert_false(distance->places[0].eye.unbounded);
    struct bw_viewing_case viewing = {.target = BW_EYE, .exposure_s = distance->places[0].eye.exposure_s};
    struct bw_hazard *hazard = calloc(1, sizeof *hazard);
    assert_non_null(hazard);
    struct bw_error error = {0};
    assert_int_equal(bw_hazard_prepare(clinic.result->table, distance->direct->output, &viewing, hazard, NULL, &error),
                     BW_OK);
    expect("ratio with the permitted time", bw_hazard_ratio(hazard, 0.5), 1., 1e-6);
    free(hazard);
    clinic_free(&clinic);
}

/* ---- words --------------------------------------------------------------------------------------- */

static struct length_case {
    const char *name;
    double length_m;
    bool us;
    const char *want;
} length_cases[] = {
    {"up", 3.4111, false, "3.42 m"},
    {"exact", 3.42, false, "3.42 m"},
    {"large", 1410.2, false, "1420 m"},
    {"feet", 3.048, true, "3.05 m (10.0 ft)"},
    {"feet up", 3.0481, true, "3.05 m (10.1 ft)"},
    {"never ends", HUGE_VAL, true, "unbounded"},
    {"not a number", 0, false, "unknown"},
};
static void test_length(void **state) {
    const struct length_case *c = *state;
    char words[BW_WORDS_SIZE];
    double length_m = strcmp(c->want, "unknown") == 0 ? nan("") : c->length_m;
    assert_string_equal(bw_length_words(words, length_m, c->us), c->want);
}

enum { TESTS_MAX = 120 };
#define ADD_ROWS(rows, function)                                                                                       \
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++)                                                          \
        tests[count++] = (struct CMUnitTest) {                                                                         \
            rows[i].name, function, NULL, NULL, &rows[i]                                                               \
        }

int main(void) {
    struct CMUnitTest tests[TESTS_MAX] = {{0}};
    size_t count = 0;
    ADD_ROWS(closed_cases, test_closed);
    ADD_ROWS(finding_cases, test_finding);
    ADD_ROWS(narrow_cases, test_narrow);
    ADD_ROWS(length_cases, test_length);
    const struct CMUnitTest single[] = {cmocka_unit_test(test_densities_keep_the_limit),
                                        cmocka_unit_test(test_waist),
                                        cmocka_unit_test(test_people),
                                        cmocka_unit_test(test_out_of_range),
                                        cmocka_unit_test(test_given_time),
                                        cmocka_unit_test(test_permitted)};
    for (size_t i = 0; i < sizeof single / sizeof single[0]; i++)
        tests[count++] = single[i];
    return cmocka_run_group_tests_name("assess", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
