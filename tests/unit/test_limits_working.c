/* The working: what is written down is what was multiplied. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <cmocka.h>

#include <beamward/limits.h>

/* ---- one limit, step by step ------------------------------------------------------------------ */

struct step_case {
    bool heading;
    const char *symbol, *formula, *numbers;
    double value, tolerance;
    const char *unit, *source;
};
/* 905 nm, 100 s, 30 mrad: CA = 10^0.41, CE = 20, T2 = 19.4688 s; 18 * 2.570396 * 20 * 0.476064 = 440.52 W/m2 */
static const struct step_case eye_steps[] = {
    {true, "", "Limit: eu-2006-25, eye retina-thermal extended, row r04", "", 0, 0, "", ""},
    {false, "CA", "10^(0.002 (w - 700))", "10^(0.002 * (905 - 700))", 2.5703958, 1e-7, "",
     "eu-2006-25, factor ca r02, Table 2.5"},
    {false, "CC", "1", "", 1, 0, "", "eu-2006-25, factor cc r01, Table 2.5"},
    {false, "alpha_max", "100", "", 100, 0, "mrad", "eu-2006-25, source-size max_01, Table 2.5"},
    {false, "CE", "alpha / alpha_min", "30 / 1.5", 20, 1e-12, "", "eu-2006-25, source-size alpha_min, Table 2.5"},
    {false, "T2^-0.25", "(10 * 10^(0.01015228426 (alpha - 1.5)))^-0.25", "(10 * 10^(0.01015228426 * (30 - 1.5)))^-0.25",
     0.4760636, 1e-7, "", "eu-2006-25, factor t2 r02, Table 2.5"},
    {false, "E", "18 CA CC CE T2^-0.25", "18 * 2.570395783 * 1 * 20 * 0.476063598", 440.521871, 1e-6, "W/m2",
     "eu-2006-25, eye retina-thermal extended r04, Table 2.3, from memory"},
    {false, "H", "E t", "440.5218713 * 100", 44052.1871, 1e-4, "J/m2", ""},
    {false, "D", "7", "", 7, 0, "mm", "eu-2006-25, aperture r05, Table 2.3, from memory"},
    {true, "", "Limit: eu-2006-25, eye retina-thermal ceiling, row r01", "", 0, 0, "", ""},
    {false, "E", "1000", "1000", 1000, 0, "W/m2", "eu-2006-25, eye retina-thermal ceiling r01, Table 2.3, from memory"},
    {false, "H", "E t", "1000 * 100", 1e5, 0, "J/m2", ""},
    {false, "D", "7", "", 7, 0, "mm", "eu-2006-25, aperture r05, Table 2.3, from memory"},
    {true, "", "Lowest limit for the eye: retina-thermal", "", 0, 0, "", ""},
    {false, "MPE", "H", "44052.18713", 44052.1871, 1e-2, "J/m2",
     "eu-2006-25, eye retina-thermal extended r04, Table 2.3, from memory"},
};

/* A short pulse far in the infrared: an aperture and a power of time with numbers. */
static const struct step_case far_steps[] = {
    {true, "", "Limit: iec-60825-1-2014, eye anterior, row r15", "", 0, 0, "", ""},
    {false, "H", "5600 t^0.25", "5600 * 0.5^0.25", 4709.01993, 1e-4, "J/m2",
     "iec-60825-1-2014, eye anterior r15, Annex A, eye, from memory"},
    {false, "E", "H / t", "4709.019925 / 0.5", 9418.03985, 1e-4, "W/m2", ""},
    {false, "D", "1.5 t^0.375", "1.5 * 0.5^0.375", 1.15665812, 1e-8, "mm",
     "iec-60825-1-2014, aperture r05, Annex A, from memory"},
    {true, "", "Lowest limit for the eye: anterior", "", 0, 0, "", ""},
    {false, "MPE", "H", "4709.019925", 4709.01993, 1e-4, "J/m2",
     "iec-60825-1-2014, eye anterior r15, Annex A, eye, from memory"},
};

static void check_steps(const struct bw_working *working, const struct step_case *want, size_t count) {
    for (size_t i = 0; i < count && i < working->count; i++) {
        const struct bw_step *step = &working->steps[i];
        assert_int_equal(step->heading, want[i].heading);
        assert_string_equal(step->formula, want[i].formula);
        if (step->heading)
            continue;
        assert_string_equal(step->symbol, want[i].symbol);
        assert_string_equal(step->numbers, want[i].numbers);
        assert_string_equal(step->unit, want[i].unit);
        assert_string_equal(step->source, want[i].source);
        if (!(fabs(step->value - want[i].value) <= want[i].tolerance))
            fail_msg("%s: got %.9g, want %.9g", step->symbol, step->value, want[i].value);
    }
    assert_int_equal(working->count, count);
}

static void test_steps(void **state) {
    const struct bw_exposure near = {905.0, 100.0, 0.03, 0.0}, far = {10600.0, 0.5, 0.0, 0.0};
    struct bw_limit_set limits;
    struct bw_working working = {0};
    (void)state;
    assert_int_equal(bw_limits_eye(bw_tables_find("eu-2006-25"), &near, &limits, &working, NULL), BW_OK);
    check_steps(&working, eye_steps, sizeof eye_steps / sizeof eye_steps[0]);
    bw_working_free(&working);
    working = (struct bw_working){0};
    assert_int_equal(bw_limits_eye(bw_tables_find("iec-60825-1-2014"), &far, &limits, &working, NULL), BW_OK);
    check_steps(&working, far_steps, sizeof far_steps / sizeof far_steps[0]);
    bw_working_free(&working);
}

/* ---- all over: with and without working the same, and its steps hold the limit's own values ----- */

static const struct bw_step *find_step(const struct bw_working *working, double value) {
    for (size_t i = 0; i < working->count; i++)
        if (!working->steps[i].heading && fabs(working->steps[i].value - value) <= 0.0)
            return &working->steps[i];
    return NULL;
}

static void check_everywhere(const struct bw_table *table, enum bw_target target, const struct bw_exposure *exposure) {
    struct bw_limit_set plain, worked;
    struct bw_working working = {0};
    if (bw_limits(table, target, exposure, &plain, NULL, NULL) != BW_OK)
        return;
    assert_int_equal(bw_limits(table, target, exposure, &worked, &working, NULL), BW_OK);
    assert_int_equal(plain.count, worked.count);
    assert_int_equal(plain.governing, worked.governing);
    for (size_t i = 0; i < plain.count; i++) {
        const struct bw_limit *limit = &worked.limits[i];
        assert_true(fabs(plain.limits[i].radiant_exposure_j_m2 - limit->radiant_exposure_j_m2) <= 0.0);
        assert_true(fabs(plain.limits[i].aperture_m - limit->aperture_m) <= 0.0);
        assert_non_null(find_step(&working, limit->radiant_exposure_j_m2));
        assert_non_null(find_step(&working, limit->irradiance_w_m2));
        for (size_t j = 0; j < limit->factor_count; j++)
            assert_non_null(find_step(&working, limit->factors[j].value));
    }
    const struct bw_step *last = &working.steps[working.count - 1];
    assert_string_equal(last->symbol, "MPE");
    assert_true(fabs(last->value - worked.limits[worked.governing].radiant_exposure_j_m2) <= 0.0);
    assert_false(working.failed);
    bw_working_free(&working);
}

static void test_everywhere(void **state) {
    static const double wavelengths_nm[] = {200, 310,  355,  400,  440,  532,  700,
                                            905, 1064, 1180, 1300, 1400, 1550, 10600};
    static const double times_s[] = {1e-12, 1e-8, 1e-3, 0.25, 10, 50, 2e4}, subtenses_rad[] = {0, 4e-3, 0.15};
    static const double areas_m2[] = {0, 0.05, 1};
    (void)state;
    for (size_t table = 0; table < bw_tables_count(); table++)
        for (size_t w = 0; w < 14; w++)
            for (size_t t = 0; t < 7; t++)
                for (size_t s = 0; s < 3; s++) {
                    const struct bw_exposure exposure = {wavelengths_nm[w], times_s[t], subtenses_rad[s], areas_m2[s]};
                    check_everywhere(bw_tables_at(table), BW_EYE, &exposure);
                    check_everywhere(bw_tables_at(table), BW_SKIN, &exposure);
                }
}

int main(void) {
    const struct CMUnitTest tests[] = {cmocka_unit_test(test_steps), cmocka_unit_test(test_everywhere)};
    return cmocka_run_group_tests_name("limits working", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
