/* assess: handpieces with a shape, all the way from the case file to the room. */
#include <math.h>
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdlib.h>
#include <string.h>

#include <cmocka.h>

#include <beamward/assess.h>

static const char text[] =
    "[case]\ntitle = Clinic\n[laser heron]\n[emission heron deep]\nwavelength_nm = 810\naverage_power_w = 8\n"
    "[emission heron pulsed]\nwavelength_nm = 905\npeak_power_w = 75\npulse_duration_s = 150e-9\n"
    "repetition_rate_hz = 10000\n"
    "[handpiece heron point]\nfibre_na = 0.22\nfibre_core_mm = 0.4\n"
    "[handpiece heron fibre]\nfibre_na = 0.22\nfibre_core_mm = 0.4\napparent_source_kind = fibre-end\n"
    "[handpiece heron head]\nbeam_diameter_mm = 2\ndivergence_mrad = 300\ndiameter_definition = d86\n"
    "apparent_source_mm = 1\nemitter_at_mm = -10 0, 0 0, 10 0, -10 8, 0 8, 10 8\n"
    "[handpiece heron flat]\nbeam_diameter_mm = 4\nbeam_diameter_y_mm = 10\ndivergence_mrad = 60\n"
    "divergence_y_mrad = 300\ndiameter_definition = d63\nstand_off_mm = 40\n"
    "[handpiece heron long]\nbeam_diameter_mm = 4\ndivergence_mrad = 300\ndiameter_definition = d63\nstand_off_m = 9\n"
    "[room one]\noutline_m = 0 0, 8 0, 8 4, 0 4\nmaterial = painted-wall\nbounces = 0\ngrid_mm = 50\n"
    "[treatment-area one couch]\noutline_m = 1 2\naim_deg = 90 .. 90\n"
    "[person one near]\nat_m = 1.6 2\n[person one beside]\nat_m = 1.6 2.3\n"
    "[use one heron head]\n";

struct whole {
    struct bw_case *the_case;
    struct bw_result *result;
};

static int set_up(void **state) {
    struct bw_ini ini = {0};
    struct bw_faults faults = {0};
    struct bw_error error = {.status = BW_OK};
    struct bw_assess_options options = {.parts = BW_PART_ALL};
    struct whole *whole = calloc(1, sizeof *whole);
    assert_non_null(whole);
    assert_int_equal(bw_ini_read_bytes(text, strlen(text), &ini, &faults, &error), BW_OK);
    if (bw_case_from_ini(&ini, &whole->the_case, &faults, &error) != BW_OK)
        fail_msg("%s", faults.count > 0 ? faults.items[0].text : error.text);
    if (bw_assess(whole->the_case, bw_tables_find("iec-60825-1-2014"), &options, &whole->result, &error) != BW_OK)
        fail_msg("%s", error.text);
    bw_ini_free(&ini);
    *state = whole;
    return 0;
}

static int tear_down(void **state) {
    struct whole *whole = *state;
    bw_result_free(whole->result);
    bw_case_free(whole->the_case);
    free(whole);
    return 0;
}

static const struct bw_distance_result *named(const struct whole *whole, const char *name) {
    for (size_t i = 0; i < whole->result->distance_count; i++)
        if (strcmp(whole->the_case->lasers[0].handpieces[whole->result->distances[i].handpiece].name, name) == 0)
            return &whole->result->distances[i];
    fail_msg("no handpiece %s", name);
    return NULL;
}

/* What is told of the exit and beyond holds at every place outside the stand-off. */
static void test_worst(void **state) {
    static const char *const names[] = {"point", "fibre", "head", "flat", "long"};
    for (size_t n = 0; n < sizeof names / sizeof *names; n++) {
        const struct bw_distance_result *d = named(*state, names[n]);
        double largest = 0., density[BW_EMISSIONS_MAX] = {0}, last_m = 0.;
        for (double r = d->nearest_m; r < d->nearest_m + 8.; r += .004) {
            struct bw_ratio ratio;
            bw_hazard_ratio_detail(d->direct, r, &ratio);
            largest = fmax(largest, ratio.total);
            last_m = ratio.total > 1. ? r : last_m;
            for (size_t i = 0; i < 2; i++) {
                assert_true(ratio.emission[i] <= d->emissions[i].ratio_at_exit * (1. + 1e-12));
                density[i] = fmax(density[i], ratio.emission[i] > 1. ? log10(ratio.emission[i]) : 0.);
            }
        }
        assert_true(d->ratio_at_exit >= largest * (1. - 1e-12) && d->ratio_at_exit <= 1.6 * largest);
        for (size_t i = 0; i < 2; i++)
            assert_true(d->emissions[i].optical_density >= density[i] - 1e-12);
        assert_true(d->nohd.distance_m >= last_m && d->nohd.distance_m <= last_m + .0041);
    }
}

static void test_told(void **state) {
    const struct bw_distance_result *point = named(*state, "point"), *fibre = named(*state, "fibre");
    const struct bw_distance_result *head = named(*state, "head"), *flat = named(*state, "flat");
    const struct bw_distance_result *longest = named(*state, "long");
    assert_true(!point->direct->shaped && fibre->direct->shaped && head->direct->shaped && !flat->direct->shaped);
    /* 318 um at 3.1 m is a point, and at 100 mm it is not */
    assert_true(fibre->nohd.distance_m <= point->nohd.distance_m &&
                fibre->nohd.distance_m >= point->nohd.distance_m * .999);
    assert_true(fibre->ratio_at_exit < .6 * point->ratio_at_exit);
    double subtense = .4e-3 * sqrt(1. - exp(-1.)) / fibre->nohd.distance_m;
    assert_true(fabs(fibre->subtense_rad - subtense) <= 1e-6 * subtense);
    assert_true(point->subtense_rad <= 0. && point->emissions[0].emitters == 1);
    assert_true(head->subtense_rad >= 1.5e-3 && head->emissions[0].emitters >= 1 && head->emissions[0].emitters <= 6);
    assert_true(fabs(flat->nearest_m - .04) <= 1e-15 && fabs(flat->worst_m - .04) <= 1e-15);
    assert_true(flat->nohd.distance_m > .04 && flat->ratio_at_exit > 1.);
    assert_true(longest->nohd.distance_m <= 0. && longest->ratio_at_exit <= 1.);
    assert_true(longest->emissions[0].optical_density <= 0.);
}

/* In the room the head is bounded from above, on its axis and beside it, and its hazard ends. */
static void test_room(void **state) {
    const struct whole *whole = *state;
    const struct bw_room_result *room = &whole->result->rooms[0];
    const struct bw_distance_result *head = named(whole, "head");
    double at_near = bw_hazard_ratio(head->direct, .6);
    assert_true(room->persons[0].place.ratio >= at_near * (1. - 1e-9) && room->persons[0].place.ratio <= 1.6 * at_near);
    assert_true(room->persons[1].place.ratio < room->persons[0].place.ratio);
    assert_true(room->solution.ratio_max >= bw_hazard_ratio(head->direct, .1) * (1. - 1e-9));
    assert_true(room->solution.farthest_m >= head->nohd.distance_m - .1);
    assert_true(room->solution.farthest_m <= 1.2 * head->nohd.distance_m + .15);
}

/* The findings say what it rests on. */
static void test_findings(void **state) {
    const struct whole *whole = *state;
    size_t sources = 0, spacers = 0;
    for (size_t i = 0; i < whole->result->finding_count; i++) {
        sources += strstr(whole->result->findings[i].text, "apparent source") != NULL;
        spacers += strstr(whole->result->findings[i].text, "spacer") != NULL;
    }
    assert_int_equal(sources, 2);
    assert_int_equal(spacers, 2);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_worst),
        cmocka_unit_test(test_told),
        cmocka_unit_test(test_room),
        cmocka_unit_test(test_findings),
    };
    return cmocka_run_group_tests_name("assess shapes", tests, set_up, tear_down) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
