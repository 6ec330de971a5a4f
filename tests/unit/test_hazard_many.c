/* Many beams at once against the functions for one beam; and the logarithm and exponential they rest on, against the
 * long double library. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <cmocka.h>

#include <beamward/hazard.h>

#include "round_beam.h"

#include "../../src/hazard/series.h"

/* The same numbers in every run. */
static double roll(uint64_t *state) {
    *state ^= *state << 13;
    *state ^= *state >> 7;
    *state ^= *state << 17;
    return (double)(*state >> 11) * 0x1p-53;
}
static double roll_log(uint64_t *state, double low, double high) {
    return low * pow(high / low, roll(state));
}

enum { COUNT = 20000 };
struct beams {
    double wavelengths_nm[COUNT], exposures_s[COUNT], powers_w[COUNT], diameters_m[COUNT], divergences_rad[COUNT];
    double radiant_exposures_j_m2[COUNT], nohd_m[COUNT], densities[COUNT];
};

static struct beams *new_beams(uint64_t state) {
    struct beams *beams = calloc(1, sizeof *beams);
    assert_non_null(beams);
    for (size_t i = 0; i < COUNT; i++) {
        beams->wavelengths_nm[i] = roll(&state) < 0.7 ? 400 + 1000 * roll(&state) : roll_log(&state, 175, 1.05e6);
        beams->exposures_s[i] = roll_log(&state, 5e-14, 4e4);
        beams->powers_w[i] = roll_log(&state, 1e-6, 1e6);
        beams->diameters_m[i] = roll(&state) < 0.02 ? 0 : roll_log(&state, 1e-5, 1);
        beams->divergences_rad[i] = roll(&state) < 0.1 ? 0 : roll_log(&state, 1e-5, 1);
    }
    return beams;
}

static struct bw_simple_beams columns(const struct beams *beams, size_t count, double distance_m) {
    return (struct bw_simple_beams){count,           beams->wavelengths_nm, beams->exposures_s,
                                    beams->powers_w, beams->diameters_m,    beams->divergences_rad,
                                    distance_m};
}

struct one {
    bool good;
    double radiant_exposure_j_m2, nohd_m, density;
};

static struct one answer_one(const struct bw_table *table, const struct beams *beams, size_t i, double distance_m) {
    static struct bw_hazard hazard;
    struct bw_output output = {.count = 1};
    struct bw_viewing_case viewing = {BW_EYE, beams->exposures_s[i], 0, 0};
    struct bw_exposure exposure = {beams->wavelengths_nm[i], beams->exposures_s[i], 0, 0};
    struct bw_limit_set limits;
    struct bw_reach reach;
    double ratios[BW_TERMS_MAX], densities[BW_EMISSIONS_MAX];
    output.emissions[0] = (struct bw_emission){.wavelength_nm = beams->wavelengths_nm[i],
                                               .continuous = true,
                                               .average_power_w = beams->powers_w[i],
                                               .peak_power_w = beams->powers_w[i]};
    output.beams[0] = (struct bw_beam)ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, beams->diameters_m[i], beams->divergences_rad[i], 0,
                                              beams->diameters_m[i]);
    if (bw_hazard_prepare(table, &output, &viewing, &hazard, NULL, NULL) != BW_OK ||
        bw_hazard_reach(&hazard, BW_EMISSIONS_MAX, &reach, NULL, NULL) != BW_OK ||
        bw_limits_eye(table, &exposure, &limits, NULL, NULL) != BW_OK)
        return (struct one){.good = false};
    bw_hazard_term_ratios(&hazard, distance_m, ratios);
    bw_hazard_optical_density(&hazard, ratios, densities);
    return (struct one){true, limits.limits[limits.governing].radiant_exposure_j_m2, reach.distance_m, densities[0]};
}

/* The width d at the distance r, and so r^2 = (d^2 - a^2)/phi^2, carries the rounding of d: 1e-13 of d. */
static bool same_distance(const struct beams *beams, size_t i, double got_m, double want_m) {
    double a = beams->diameters_m[i], phi = beams->divergences_rad[i];
    if (isinf(want_m) || isinf(got_m))
        return isinf(want_m) && isinf(got_m);
    double wide = hypot(a, phi * want_m);
    return fabs(got_m - want_m) * phi * phi * (got_m + want_m) <= 2e-13 * wide * wide;
}

static size_t check(const struct bw_table *table, struct beams *beams, size_t count, double distance_m) {
    struct bw_simple_beams all = columns(beams, count, distance_m);
    size_t missing = bw_hazard_many(table, &all, beams->radiant_exposures_j_m2, beams->nohd_m, beams->densities);
    size_t want_missing = 0;
    for (size_t i = 0; i < count; i++) {
        struct one want = answer_one(table, beams, i, distance_m);
        if (!want.good) {
            want_missing++;
            if (!isnan(beams->radiant_exposures_j_m2[i]) || !isnan(beams->nohd_m[i]) || !isnan(beams->densities[i]))
                fail_msg("beam %zu has no answer, got %.17g m", i, beams->nohd_m[i]);
            continue;
        }
        double limit = want.radiant_exposure_j_m2;
        if (!(fabs(beams->radiant_exposures_j_m2[i] - limit) <= 1e-13 * limit) ||
            !same_distance(beams, i, beams->nohd_m[i], want.nohd_m) ||
            !(fabs(beams->densities[i] - want.density) <= 1e-13 * fmax(1, want.density)))
            fail_msg(
                "%s %.17g nm, %.17g s, %.17g W, %.17g m, %.17g rad: got %.17g J/m2, %.17g m, OD %.17g; want %.17g, "
                "%.17g, %.17g",
                bw_table_id(table), beams->wavelengths_nm[i], beams->exposures_s[i], beams->powers_w[i],
                beams->diameters_m[i], beams->divergences_rad[i], beams->radiant_exposures_j_m2[i], beams->nohd_m[i],
                beams->densities[i], limit, want.nohd_m, want.density);
    }
    assert_int_equal(missing, want_missing);
    return missing;
}

static void test_rule_set(void **state) {
    struct beams *beams = new_beams(88172645463325252u);
    size_t missing = check(*state, beams, COUNT, 0);
    assert_in_range(missing, 1, COUNT * 3 / 4);
    check(*state, beams, COUNT / 4, 2.5);
    size_t unbounded = 0, nowhere = 0, dense = 0;
    for (size_t i = 0; i < COUNT / 4; i++) { /* all kinds of answers are there */
        unbounded += isinf(beams->nohd_m[i]) != 0;
        nowhere += beams->nohd_m[i] <= 0;
        dense += beams->densities[i] > 0;
    }
    assert_true(unbounded > 10 && nowhere > 10 && dense > 10);
    free(beams);
}

/* ---- by hand ---------------------------------------------------------------------------------- */

/* 650 nm, 0.25 s: H = 18 t^0.75 = 6.3640 J/m2, E = 25.456 W/m2; through 7 mm 0.979655e-3 W. A point of 1 W spreading by
 * 1 mrad: 1 - exp(-(D/d)^2) = 0.979655e-3, d = 0.223591 m, r = 223.591 m. Beside it W7 of limits-facts: 225 m, which
 * takes the peak for the mean. At the exit all of the power goes through the pupil: OD = -log10(0.979655e-3)
 * = 3.008927. */
static void test_by_hand(void **state) {
    (void)state;
    struct beams *beams = new_beams(1);
    beams->wavelengths_nm[0] = 650, beams->exposures_s[0] = 0.25, beams->powers_w[0] = 1;
    beams->diameters_m[0] = 0, beams->divergences_rad[0] = 1e-3;
    struct bw_simple_beams one = columns(beams, 1, 0);
    assert_int_equal(bw_hazard_many(bw_tables_find("icnirp-2013"), &one, beams->radiant_exposures_j_m2, beams->nohd_m,
                                    beams->densities),
                     0);
    if (!(fabs(beams->radiant_exposures_j_m2[0] - 6.3640) <= 5e-5) || !(fabs(beams->nohd_m[0] - 223.591) <= 5e-4) ||
        !(fabs(beams->densities[0] - 3.008927) <= 5e-7))
        fail_msg("got %.9g J/m2, %.9g m, OD %.9g", beams->radiant_exposures_j_m2[0], beams->nohd_m[0],
                 beams->densities[0]);
    free(beams);
}

/* ---- what is no beam -------------------------------------------------------------------------- */

static void test_no_beams(void **state) {
    (void)state;
    static const double odd[] = {(double)NAN, HUGE_VAL, -HUGE_VAL, -1, -5e-324};
    enum { ODD = sizeof odd / sizeof odd[0] };
    struct beams *beams = new_beams(2);
    for (size_t i = 0; i < 5 * (size_t)ODD + 3; i++) { /* a good beam with one thing wrong */
        beams->wavelengths_nm[i] = 810, beams->exposures_s[i] = 10, beams->powers_w[i] = 1;
        beams->diameters_m[i] = 3e-3, beams->divergences_rad[i] = 0.1;
        double *fields[] = {&beams->wavelengths_nm[i], &beams->exposures_s[i], &beams->powers_w[i],
                            &beams->diameters_m[i], &beams->divergences_rad[i]};
        if (i < 5 * (size_t)ODD)
            *fields[i % 5] = odd[i / 5];
    }
    beams->powers_w[5 * ODD] = 0;
    beams->diameters_m[5 * ODD + 1] = 10.001;
    beams->divergences_rad[5 * ODD + 2] = 3.1416;
    for (size_t i = 0; i < bw_tables_count(); i++)
        assert_int_equal(check(bw_tables_at(i), beams, 5 * (size_t)ODD + 3, 0), 5 * ODD + 3);
    free(beams);
}

static void test_no_distance(void **state) {
    (void)state;
    static const double odd[] = {(double)NAN, HUGE_VAL, -1};
    struct beams *beams = new_beams(3);
    for (size_t i = 0; i < 3; i++) {
        struct bw_simple_beams all = columns(beams, 1000, odd[i]);
        assert_int_equal(
            bw_hazard_many(bw_tables_at(0), &all, beams->radiant_exposures_j_m2, beams->nohd_m, beams->densities),
            1000);
        for (size_t j = 0; j < 1000; j++)
            assert_true(isnan(beams->nohd_m[j]) && isnan(beams->densities[j]));
    }
    free(beams);
}

static void test_columns_not_wanted(void **state) {
    (void)state;
    struct beams *beams = new_beams(4);
    struct bw_simple_beams all = columns(beams, 1000, 0);
    size_t missing = bw_hazard_many(bw_tables_at(1), &all, NULL, NULL, NULL);
    assert_int_equal(missing, check(bw_tables_at(1), beams, 1000, 0));
    free(beams);
}

/* ---- a table in which two effects add ---------------------------------------------------------- */

static const char both[] = "[table]\nid = both\ntitle = both\nsource = invented for this test\nedition = first\n"
                           "[eye ultraviolet]\n"
                           "covers = 300 .. 400 | 1e-9 .. 3e4\n"
                           "r01 = 300 .. 400 | 1e-9 .. 3e4 | E | 50 | 0 | - | B | memory\n"
                           "[eye anterior]\n"
                           "covers = 300 .. 400 | 1e-9 .. 3e4\n"
                           "r01 = 300 .. 400 | 1e-9 .. 3e4 | E | 80 | 0 | - | B | memory\n"
                           "[aperture]\n"
                           "r01 = ultraviolet | 300 .. 400 | 1e-9 .. 3e4 | 1 | 0 | D | memory\n"
                           "r02 = anterior | 300 .. 400 | 1e-9 .. 3e4 | 3.5 | 0 | D | memory\n"
                           "[repetition]\n"
                           "ti_01 = 300 .. 400 | 1e-9 | E | memory\n"
                           "count = all | E | memory\n"
                           "[additivity]\n"
                           "r01 = 300 .. 400 | 300 .. 400 | eye skin | F | memory\n"
                           "[exposure]\n"
                           "r01 = visible | 400 .. 700 | 0.25 | G | memory\n"
                           "r02 = glance | 400 .. 1400 | 100 | G | memory\n"
                           "r03 = diffuse | 400 .. 1400 | 600 | G | memory\n"
                           "r04 = skin | 400 .. 1400 | 100 | G | memory\n"
                           "r05 = ultraviolet | 180 .. <400 | 3e4 | G | memory\n"
                           "r06 = alignment | 400 .. 700 | 2 | G | memory\n"
                           "r07 = working-day | 180 .. 1400 | 3e4 | G | memory\n";

static void test_effects_that_add(void **state) {
    (void)state;
    struct bw_ini ini = {0};
    struct bw_faults faults = {0};
    struct bw_error error = {0};
    struct bw_table *table = NULL;
    assert_int_equal(bw_ini_read_bytes(both, strlen(both), &ini, &faults, &error), BW_OK);
    if (bw_table_load(&ini, &table, &faults, &error) != BW_OK)
        fail_msg("%s: %s", faults.count > 0 ? faults.items[0].section : "",
                 faults.count > 0 ? faults.items[0].text : error.text);
    struct beams *beams = new_beams(5);
    for (size_t i = 0; i < 500; i++)
        beams->wavelengths_nm[i] = 300 + 0.2 * (double)i;
    beams->powers_w[7] = (double)NAN;
    assert_in_range(check(table, beams, 500, 0.1), 1, 400);
    free(beams);
    bw_table_free(table);
    bw_faults_free(&faults);
    bw_ini_free(&ini);
}

/* ---- series ----------------------------------------------------------------------------------- */

static bool within(double got, long double want, double units) {
    return fabsl((long double)got - want) <= (long double)(units * ldexp(1, ilogb((double)want) - 52));
}

static void test_series(void **state) {
    (void)state;
    uint64_t dice = 6;
    for (size_t i = 0; i < 100000; i++) {
        double x = roll_log(&dice, 1e-300, 1e300), near = 0.5 + roll(&dice), q = roll_log(&dice, 1e-300, 1),
               share = roll(&dice), power = roll_log(&dice, 1e-300, 100);
        if (!within(series_log(x), logl((long double)x), 3) || !within(series_log(near), logl((long double)near), 3))
            fail_msg("ln %.17g or ln %.17g", x, near);
        if (!within(series_minus_log_of_rest(q), -log1pl(-(long double)q), 3) ||
            !within(series_minus_log_of_rest(share), -log1pl(-(long double)share), 3))
            fail_msg("-ln(1 - q), q = %.17g or %.17g", q, share);
        if (!within(series_one_minus_exp(power), -expm1l(-(long double)power), 3))
            fail_msg("1 - exp(-%.17g)", power);
    }
    assert_true(series_one_minus_exp(HUGE_VAL) >= 1 && series_one_minus_exp(HUGE_VAL) <= 1);
    assert_true(series_one_minus_exp(0) >= 0 && series_one_minus_exp(0) <= 0);
    assert_true(isnan(series_one_minus_exp((double)NAN)));
    assert_true(series_log(1) >= 0 && series_log(1) <= 0);
}

int main(void) {
    struct CMUnitTest tests[32];
    size_t count = 0;
    for (size_t i = 0; i < bw_tables_count(); i++)
        tests[count++] = (struct CMUnitTest){bw_table_id(bw_tables_at(i)), test_rule_set, NULL, NULL,
                                             (void *)(uintptr_t)bw_tables_at(i)};
    tests[count++] = (struct CMUnitTest){"by hand", test_by_hand, NULL, NULL, NULL};
    tests[count++] = (struct CMUnitTest){"no beams", test_no_beams, NULL, NULL, NULL};
    tests[count++] = (struct CMUnitTest){"no distance", test_no_distance, NULL, NULL, NULL};
    tests[count++] = (struct CMUnitTest){"columns not wanted", test_columns_not_wanted, NULL, NULL, NULL};
    tests[count++] = (struct CMUnitTest){"effects that add", test_effects_that_add, NULL, NULL, NULL};
    tests[count++] = (struct CMUnitTest){"logarithm and exponential", test_series, NULL, NULL, NULL};
    int failed = _cmocka_run_group_tests("many hazards at once", tests, count, NULL, NULL);
    return failed == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
