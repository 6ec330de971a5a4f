/* Limits that someone published, with the source in each row. The tolerance is what the printed digits allow. Older
 * examples rest on the limit set of their day: those of before 2013 are the values of the Directive. */
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

static const char eu[] = "eu-2006-25", icnirp[] = "icnirp-2013", iec[] = "iec-60825-1-2014";

enum quantity { RADIANT_EXPOSURE, IRRADIANCE, POWER }; /* J/m2, W/m2, W through the limiting aperture */

struct limit_case {
    const char *name, *table;
    enum bw_target target;
    double wavelength_nm, exposure_s, subtense_mrad;
    enum quantity quantity;
    double want, tolerance;
    const char *source;
};
static struct limit_case limit_cases[] = {
    {"W1 488 nm 0.25 s, J/m2", eu, BW_EYE, 488, 0.25, 0, RADIANT_EXPOSURE, 6.4, 0.05,
     "Macquarie University, sample calculations (AS/NZS 2211.1:2004): 0.64 mJ/cm2"},
    {"W1 488 nm 0.25 s, W/m2", eu, BW_EYE, 488, 0.25, 0, IRRADIANCE, 25.5, 0.05,
     "Macquarie University, sample calculations (AS/NZS 2211.1:2004): 2.55 mW/cm2"},
    {"W3 visible, 0.25 s", eu, BW_EYE, 550, 0.25, 0, RADIANT_EXPOSURE, 6.36, 0.005,
     "health-physics mailing list, June 2000 (ANSI Z136.1): 6.36e-4 J/cm2"},
    {"W3 visible, 0.25 s, unchanged since", "ansi-z136-1-2014", BW_EYE, 550, 0.25, 0, RADIANT_EXPOSURE, 6.36, 0.005,
     "health-physics mailing list, June 2000 (ANSI Z136.1): 6.36e-4 J/cm2"},
    {"W4 633 nm, continuous, eye", eu, BW_EYE, 633, 100, 0, IRRADIANCE, 10, 0,
     "textbook chapter on medical lasers, p. 104-111: 1 mW/cm2"},
    {"W4 633 nm, skin from 10 s", eu, BW_SKIN, 633, 10.0001, 0, IRRADIANCE, 2000, 0,
     "textbook chapter on medical lasers, p. 104-111: 200 mW/cm2"},
    {"W4 633 nm, skin at 10 s: the row before gives 1956", eu, BW_SKIN, 633, 10, 0, IRRADIANCE, 2000, 50,
     "textbook chapter on medical lasers, p. 104-111: 200 mW/cm2"},
    {"W6 1064 nm, 1 ns: the row before gives 4.8e-2", eu, BW_EYE, 1064, 1e-9, 0, RADIANT_EXPOSURE, 5e-2, 0.5e-2,
     "textbook chapter on medical lasers, p. 104-111: 5e-6 J/cm2"},
    {"W6 1064 nm, above 1 ns", eu, BW_EYE, 1064, 1.0001e-9, 0, RADIANT_EXPOSURE, 5e-2, 0,
     "textbook chapter on medical lasers, p. 104-111: 5e-6 J/cm2"},
    {"W6 1064 nm, 1 ns, in 2013", icnirp, BW_EYE, 1064, 1e-9, 0, RADIANT_EXPOSURE, 2e-2, 0,
     "ICNIRP 2013 (from memory): 2e-6 J/cm2"},
    {"W10 class 2 power in 7 mm", eu, BW_EYE, 650, 0.25, 0, POWER, 0.98e-3, 0.005e-3, "sensor manual: 0.98 mW"},
    {"W10 class 1 power in 7 mm", eu, BW_EYE, 650, 3e4, 0, POWER, 0.39e-3, 0.006e-3,
     "sensor manual: 0.39 mW, rounded up there from 0.385"},
    {"W11 1064 nm, skin in 3.5 mm", eu, BW_SKIN, 1064, 100, 0, POWER, 96e-3, 0.5e-3,
     "observatory slides (ANSI Z136.1-2007): 96 mW"},
    {"W12 simplified D limit, 633 nm", eu, BW_EYE, 633, 3e4, 0, IRRADIANCE, 10, 0,
     "DGUV Information 203-042, Table A6.1: 10 W/m2"},
    {"W12 simplified I and R limit, 633 nm", eu, BW_EYE, 633, 1e-7, 0, RADIANT_EXPOSURE, 5e-3, 0,
     "DGUV Information 203-042, Table A6.1: 5e-3 J/m2"},
    {"O4 argon 514 nm, 0.25 s", eu, BW_EYE, 514, 0.25, 0, IRRADIANCE, 25.5, 0.05,
     "OSHA Technical Manual III:6 (from memory): 1 W in 7 mm, OD 3.0"},
    {"W8 655 nm, average rule: the total", eu, BW_EYE, 655, 0.25, 0, RADIANT_EXPOSURE, 1.59e-3 * 4000, 0.005e-3 * 4000,
     "instrument manual, IEC 60825-1 ed. 1.2: 4000 pulses, 1.59e-3 J/m2 each"},
    {"W9 780 nm, single pulse", eu, BW_EYE, 780, 31.25e-6, 0, RADIANT_EXPOSURE, 1.09e-2, 0.005e-2,
     "instrument manual, IEC 60825-1 ed. 1.2: 1.09e-2 J/m2"},
    {"W9 780 nm, average rule, row below 10 s", eu, BW_EYE, 780, 9.9999999, 0, RADIANT_EXPOSURE, 9.14e-4 * 160000,
     0.005e-4 * 160000, "instrument manual, IEC 60825-1 ed. 1.2: 160000 pulses, 9.14e-4 J/m2 each"},
    {"904 nm, 5 kHz, 10 s, average, icnirp", icnirp, BW_EYE, 904, 10, 0, RADIANT_EXPOSURE, 5.12e-3 * 50000,
     0.005e-3 * 50000, "limits of the three sets compared, our arithmetic: 5.12e-3 J/m2 per pulse"},
    {"101.2 J/m2 just below 10 s", iec, BW_EYE, 532, 9.9999999, 0, RADIANT_EXPOSURE, 101.2, 0.05, "printed step"},
    {"100 J/m2 from 10 s", iec, BW_EYE, 532, 10, 0, RADIANT_EXPOSURE, 100, 0, "printed step"},
};

static void test_limit(void **state) {
    const struct limit_case *c = *state;
    const struct bw_exposure exposure = {c->wavelength_nm, c->exposure_s, c->subtense_mrad * 1e-3, 0.0};
    struct bw_limit_set limits;
    struct bw_error error = {0};
    if (bw_limits(bw_tables_find(c->table), c->target, &exposure, &limits, NULL, &error) != BW_OK)
        fail_msg("%s", error.text);
    const struct bw_limit *limit = &limits.limits[limits.governing];
    double got = limit->radiant_exposure_j_m2;
    if (c->quantity == IRRADIANCE)
        got = limit->irradiance_w_m2;
    else if (c->quantity == POWER)
        got = limit->irradiance_w_m2 * bw_pi / 4.0 * limit->aperture_m * limit->aperture_m;
    if (!(fabs(got - c->want) <= fmax(c->tolerance, 1e-12 * c->want)))
        fail_msg("got %.9g, want %.9g +- %g [%s; %s]", got, c->want, c->tolerance, c->table, c->source);
}

/* W2: the aperture of the eye. Printed 5.19e-3 W/cm2, cut off, not rounded: 5.197e-3. */
static void test_aperture(void **state) {
    const struct bw_exposure exposure = {633.0, 0.25, 0.0, 0.0};
    struct bw_limit_set limits;
    (void)state;
    assert_int_equal(bw_limits_eye(bw_tables_find(eu), &exposure, &limits, NULL, NULL), BW_OK);
    double irradiance_w_m2 = 2e-3 / (bw_pi / 4.0 * limits.limits[0].aperture_m * limits.limits[0].aperture_m);
    assert_true(irradiance_w_m2 >= 51.9 && irradiance_w_m2 < 52.0);
}

/* ---- trains ----------------------------------------------------------------------------------- */

struct train_case {
    const char *name, *table;
    double wavelength_nm, pulse_s, pulses, exposure_s, want_j_m2, tolerance;
    const char *source;
};
static struct train_case train_cases[] = {
    {"W8 655 nm, N^-0.25", eu, 655, 31.25e-6, 4000, 0.25, 9.46e-4, 0.005e-4 + 0.001 * 9.46e-4,
     "instrument manual, IEC 60825-1 ed. 1.2: 9.46e-4 J/m2 (0.1 % by their rounding)"},
    {"W9 780 nm, N^-0.25", eu, 780, 31.25e-6, 160000, 10, 5.44e-4, 0.005e-4 + 0.003 * 5.44e-4,
     "instrument manual, IEC 60825-1 ed. 1.2: 5.44e-4 J/m2 (0.3 % by their rounding)"},
    {"904 nm, 200 ns, 5 kHz, 10 s, eu", eu, 904, 200e-9, 50000, 10, 8.56e-4, 0.005e-4,
     "limits of the three sets compared, our arithmetic: 8.56e-4 J/m2"},
    {"904 nm, 200 ns, 5 kHz, 10 s, iec", iec, 904, 200e-9, 50000, 10, 2.05e-3, 0.005e-3,
     "limits of the three sets compared, our arithmetic: C5 = 0.4, 2.05e-3 J/m2"},
};

static void test_train(void **state) {
    const struct train_case *c = *state;
    const struct bw_table *table = bw_tables_find(c->table);
    const struct bw_exposure exposure = {c->wavelength_nm, c->pulse_s, 0.0, 0.0};
    struct bw_limit_set limits;
    struct bw_train_count count = {c->pulse_s, 0.0, c->pulses, c->exposure_s, 0.0};
    assert_int_equal(bw_limits_eye(table, &exposure, &limits, NULL, NULL), BW_OK);
    assert_true(bw_limits_train_applies(table, limits.limits[0].effect, c->wavelength_nm));
    assert_true(bw_limits_grouping_time(table, c->wavelength_nm, &count.ti_s, NULL));
    double got = limits.limits[0].radiant_exposure_j_m2 * bw_limits_train_correction(table, &count, NULL, NULL);
    if (!(fabs(got - c->want_j_m2) <= c->tolerance))
        fail_msg("got %.9g, want %.9g [%s; %s]", got, c->want_j_m2, c->table, c->source);
}

/* ---- Directive, Table 2.2: where the ultraviolet steps meet 5.6e3 t^0.25 ----------------------- */

struct crossing_case {
    const char *name;
    double wavelength_nm, step_j_m2, crossing_s; /* printed to two digits */
};
static struct crossing_case crossing_cases[] = {
    {"303 nm", 303, 40, 2.6e-9},   {"304 nm", 304, 60, 1.3e-8},   {"305 nm", 305, 100, 1.0e-7},
    {"306 nm", 306, 160, 6.7e-7},  {"307 nm", 307, 250, 4.0e-6},  {"308 nm", 308, 400, 2.6e-5},
    {"309 nm", 309, 630, 1.6e-4},  {"310 nm", 310, 1000, 1.0e-3}, {"311 nm", 311, 1600, 6.7e-3},
    {"312 nm", 312, 2500, 4.0e-2}, {"313 nm", 313, 4000, 2.6e-1}, {"314 nm", 314, 6300, 1.6},
};

static double ultraviolet_limit(double wavelength_nm, double exposure_s) {
    const struct bw_exposure exposure = {wavelength_nm, exposure_s, 0.0, 0.0};
    struct bw_limit_set limits;
    assert_int_equal(bw_limits_eye(bw_tables_find(eu), &exposure, &limits, NULL, NULL), BW_OK);
    return limits.limits[0].radiant_exposure_j_m2;
}

static void test_crossing(void **state) {
    const struct crossing_case *c = *state;
    double half_digit = 0.5 * pow(10.0, floor(log10(c->crossing_s)) - 1.0);
    double before_s = c->crossing_s - half_digit, after_s = c->crossing_s + half_digit;
    assert_true(ultraviolet_limit(c->wavelength_nm, before_s) < c->step_j_m2);
    assert_true(fabs(ultraviolet_limit(c->wavelength_nm, before_s) / (5.6e3 * pow(before_s, 0.25)) - 1.0) <= 1e-12);
    assert_true(fabs(ultraviolet_limit(c->wavelength_nm, after_s) / c->step_j_m2 - 1.0) <= 1e-12);
}

#define COUNT(list) (sizeof(list) / sizeof(list)[0])

int main(void) {
    static struct CMUnitTest tests[COUNT(limit_cases) + COUNT(train_cases) + COUNT(crossing_cases) + 1];
    size_t n = 0;
    for (size_t i = 0; i < COUNT(limit_cases); i++)
        tests[n++] = (struct CMUnitTest){limit_cases[i].name, test_limit, NULL, NULL, &limit_cases[i]};
    for (size_t i = 0; i < COUNT(train_cases); i++)
        tests[n++] = (struct CMUnitTest){train_cases[i].name, test_train, NULL, NULL, &train_cases[i]};
    for (size_t i = 0; i < COUNT(crossing_cases); i++)
        tests[n++] = (struct CMUnitTest){crossing_cases[i].name, test_crossing, NULL, NULL, &crossing_cases[i]};
    tests[n++] = (struct CMUnitTest){"W2 2 mW through 7 mm", test_aperture, NULL, NULL, NULL};
    return cmocka_run_group_tests_name("published limits", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
