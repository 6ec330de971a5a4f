/* hazard: limits of one emission by each rule for trains. */
#include <math.h>
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdlib.h>
#include <string.h>

#include <cmocka.h>

#include <beamward/hazard.h>

#include "round_beam.h"

#define COUNT(array) (sizeof(array) / sizeof *(array))
#define NONE         ((double)NAN)

static void near(double got, double want, double relative, const char *what) {
    if (isnan(want) ? !isnan(got) : !(fabs(got - want) <= relative * fabs(want)))
        fail_msg("%s: got %.12g, want %.12g", what, got, want);
}

static struct bw_emission pulses(double wavelength_nm, double duration_s, double rate_hz) {
    struct bw_emission_input input = {wavelength_nm, NONE, NONE, 1e-3, duration_s, rate_hz, NULL};
    struct bw_emission emission;
    struct bw_error error = {.status = BW_OK};
    if (bw_emission_resolve(&input, &emission, &error) != BW_OK)
        fail_msg("%s", error.text);
    return emission;
}

static struct bw_emission steady(double wavelength_nm) {
    struct bw_emission_input input = {wavelength_nm, 1., NONE, NONE, NONE, NONE, NULL};
    struct bw_emission emission;
    assert_int_equal(bw_emission_resolve(&input, &emission, NULL), BW_OK);
    return emission;
}

/* The limits of one effect, or of the one that governs (effect BW_EFFECTS). */
static struct bw_train_limit limit_of(const char *rules, const struct bw_emission *emission,
                                      struct bw_viewing_case viewing, int effect) {
    struct bw_train_limit_set set;
    struct bw_error error = {.status = BW_OK};
    if (bw_hazard_train_limits(bw_tables_find(rules), emission, &viewing, &set, NULL, &error) != BW_OK)
        fail_msg("%s", error.text);
    if (effect == BW_EFFECTS)
        return set.limits[set.governing];
    for (size_t i = 0; i < set.count; i++)
        if ((int)set.limits[i].limit.effect == effect)
            return set.limits[i];
    fail_msg("no limit of %s", bw_effect_name((enum bw_effect)effect));
    return set.limits[0];
}

/* ---- rows by hand ------------------------------------------------------------------------------ */

/* CA(810) = 10^0.22 = 1.6595869074, CA(904) = 10^0.408 = 2.5585858869. */
static struct rule_case {
    const char *name, *rules;
    double wavelength_nm, duration_s, rate_hz, exposure_s, subtense_rad;
    enum bw_target target;
    int effect;
    double single, average, train;
    enum bw_train_rule rule;
} rule_cases[] = {
    {"904 nm eu", "eu-2006-25", 904., 200e-9, 5e3, 10., 0., BW_EYE, BW_EFFECTS,
     /* 5e-3 CA; 100 CA / 50000; 5e-3 CA 50000^-1/4 */
     1.2792929435e-2, 5.1171717738e-3, 8.5551475316e-4, BW_RULE_TRAIN},
    {"904 nm iec", "iec-60825-1-2014", 904., 200e-9, 5e3, 10., 0., BW_EYE, BW_EFFECTS,
     /* 2e-3 CA; the same average; 0.4 x 2e-3 CA */
     5.1171717738e-3, 5.1171717738e-3, 2.0468687095e-3, BW_RULE_TRAIN},
    {"904 nm icnirp: a tie goes to the average", "icnirp-2013", 904., 200e-9, 5e3, 10., 0., BW_EYE, BW_EFFECTS,
     5.1171717738e-3, 5.1171717738e-3, 5.1171717738e-3, BW_RULE_AVERAGE},
    {"grouped icnirp: 5 in 5 us", "icnirp-2013", 810., 100e-9, 1e6, 10., 0., BW_EYE, BW_EFFECTS,
     /* 2e-3 CA; 100 CA / 1e7; 18 CA (5e-6)^0.75 / 5 */
     3.3191738149e-3, 1.6595869074e-5, 6.3172782184e-4, BW_RULE_AVERAGE},
    {"grouped iec: 5 in 5 us, 2e6 groups", "iec-60825-1-2014", 810., 100e-9, 1e6, 10., 0., BW_EYE, BW_EFFECTS,
     3.3191738149e-3, 1.6595869074e-5, 2.5269112874e-4, BW_RULE_AVERAGE},
    {"grouped eu: 18 in 18 us, 555556 groups", "eu-2006-25", 810., 100e-9, 1e6, 10., 0., BW_EYE, BW_EFFECTS,
     /* 5e-3 CA; 100 CA / 1e7; 18 CA (1.8e-5)^0.75 555556^-1/4 / 18 */
     8.2979345372e-3, 1.6595869074e-5, 1.6798574055e-5, BW_RULE_AVERAGE},
    {"skin has no train rule", "iec-60825-1-2014", 904., 200e-9, 5e3, 10., 0., BW_SKIN, BW_EFFECTS,
     /* 1.1e4 CA (2e-7)^1/4; 1.1e4 CA 10^1/4 / 50000 */
     5.9518254221e2, 1.0009687324, NONE, BW_RULE_AVERAGE},
    {"the kink where alpha_max passes the subtense", "icnirp-2013", 810., 1e-6, 200., .0201, 20e-3, BW_EYE, BW_EFFECTS,
     /* alpha_max = 200 t^1/2 reaches 20 mrad at 10 ms, where three pulses bind: 18 CA (20/1.5) 0.010001^0.75 / 3.
        Single: 2e-3 CA 20^2/(1.5 x 5); rule 3 does not correct pulses below Ti */
     .17702260343, 4.1987745625, .17702260343, BW_RULE_SINGLE},
    {"a step down between two pulses", "icnirp-2013", 810., 1e-9, 250e3, 7e-6, 0., BW_EYE, BW_EFFECTS,
     /* two pulses, 4 us apart; at 5 us the printed rows step down to 18 CA (5e-6)^0.75 = 1.9034e-3 CA */
     3.3191738149e-3, 1.57931955e-3, 1.57931955e-3, BW_RULE_AVERAGE},
    {"a single pulse keeps its limit at such a step", "icnirp-2013", 810., 1e-9, 1., 5e-6, 0., BW_EYE, BW_EFFECTS,
     3.3191738149e-3, 3.3191738149e-3, 3.3191738149e-3, BW_RULE_AVERAGE},
    {"one pulse in the exposure", "icnirp-2013", 904., 200e-9, 1., .25, 0., BW_EYE, BW_EFFECTS,
     /* 2e-3 CA; 18 CA 0.25^0.75; 2e-3 CA */
     5.1171717738e-3, 16.282740878, 5.1171717738e-3, BW_RULE_SINGLE},
};

static void test_rule(void **state) {
    const struct rule_case *c = *state;
    struct bw_emission emission = pulses(c->wavelength_nm, c->duration_s, c->rate_hz);
    struct bw_viewing_case viewing = {c->target, c->exposure_s, c->subtense_rad, 0.};
    struct bw_train_limit limit = limit_of(c->rules, &emission, viewing, c->effect);
    near(limit.rules_j_m2[BW_RULE_SINGLE], c->single, 1e-7, "single");
    near(limit.rules_j_m2[BW_RULE_AVERAGE], c->average, 1e-7, "average");
    near(limit.rules_j_m2[BW_RULE_TRAIN], c->train, 1e-7, "train");
    assert_string_equal(bw_train_rule_name(limit.rule), bw_train_rule_name(c->rule));
    near(limit.per_pulse_j_m2, limit.rules_j_m2[c->rule], 1e-9, "per pulse");
    near(limit.irradiance_w_m2, limit.per_pulse_j_m2 * c->rate_hz, 1e-14, "irradiance");
}

static void test_counts(void **state) {
    (void)state;
    struct bw_viewing_case viewing = {BW_EYE, 10., 0., 0.};
    struct bw_emission alone = pulses(904., 200e-9, 5e3), close = pulses(810., 100e-9, 1e6);
    struct bw_train_limit limit = limit_of("eu-2006-25", &alone, viewing, BW_RETINA_THERMAL);
    near(limit.pulses, 50000., 0., "pulses");
    near(limit.group_pulses, 1., 0., "not grouped");
    near(limit.correction, .0668740305, 1e-8, "50000^-1/4");
    limit = limit_of("eu-2006-25", &close, viewing, BW_RETINA_THERMAL);
    near(limit.pulses, 555556., 0., "groups");
    near(limit.group_pulses, 18., 1e-12, "18 in a group");
    viewing.exposure_s = 1000.; /* counted in T2 = 10 s for a point source; eu counts all */
    near(limit_of("iec-60825-1-2014", &alone, viewing, BW_RETINA_THERMAL).pulses, 50000., 0., "in T2");
    near(limit_of("eu-2006-25", &alone, viewing, BW_RETINA_THERMAL).pulses, 5e6, 0., "all");
    viewing.target = BW_SKIN;
    limit = limit_of("eu-2006-25", &alone, viewing, BW_SKIN_EFFECT);
    near(limit.pulses, 0., 0., "no train rule");
    near(limit.correction, 1., 0., "no train rule");
}

/* ---- continuous -------------------------------------------------------------------------------- */

static struct steady_case {
    const char *name, *rules;
    double wavelength_nm, exposure_s;
    enum bw_target target;
    double limit_j_m2;
} steady_cases[] = {
    {"810 nm, 1 s: 18 CA", "icnirp-2013", 810., 1., BW_EYE, 29.872564334},
    {"810 nm, 100 s: 10 CA 100", "icnirp-2013", 810., 100., BW_EYE, 1659.5869074},
    {"633 nm, 0.25 s: 18 t^0.75", "eu-2006-25", 633., .25, BW_EYE, 6.3639610307},
    {"10600 nm, 10 s: the lower of 1000 t and 5600 t^1/4", "icnirp-2013", 10600., 10., BW_EYE, 9958.364696218},
    {"633 nm skin, 100 s", "iec-60825-1-2014", 633., 100., BW_SKIN, 2e5},
    {"ultraviolet 254 nm, 3e4 s: 30 J/m2", "icnirp-2013", 254., 3e4, BW_EYE, 30.},
};

static void test_steady(void **state) {
    const struct steady_case *c = *state;
    struct bw_emission emission = steady(c->wavelength_nm);
    struct bw_viewing_case viewing = {c->target, c->exposure_s, 0., 0.};
    struct bw_train_limit limit = limit_of(c->rules, &emission, viewing, BW_EFFECTS);
    near(limit.rules_j_m2[BW_RULE_AVERAGE], c->limit_j_m2, 1e-8, "over the exposure");
    near(limit.irradiance_w_m2, c->limit_j_m2 / c->exposure_s, 1e-8, "irradiance");
    assert_true(isnan(limit.rules_j_m2[BW_RULE_SINGLE]) && isnan(limit.rules_j_m2[BW_RULE_TRAIN]));
    assert_int_equal(limit.rule, BW_RULE_AVERAGE);
}

/* ---- against every window ---------------------------------------------------------------------- */

static double uniform(uint64_t *random) {
    *random = *random * 6364136223846793005u + 1442695040888963407u;
    return (double)(*random >> 11) / 9007199254740992.;
}

struct brute {
    const struct bw_table *table;
    const struct bw_emission *emission;
    struct bw_viewing_case viewing;
    double lowest[BW_EFFECTS], narrowest[BW_EFFECTS];
};

/* Limit of the whole exposure for a window, over what the window holds. */
static void try_window(struct brute *brute, double time_s, double holds) {
    struct bw_exposure exposure = {brute->emission->wavelength_nm, time_s, brute->viewing.subtense_rad, 0.};
    struct bw_limit_set set;
    bool part_of_one = !brute->emission->continuous && holds <= 1. && time_s < brute->viewing.exposure_s;
    if (!(time_s >= 1e-13 && time_s <= brute->viewing.exposure_s && holds > 0.) || part_of_one)
        return; /* the first rule's */
    assert_int_equal(bw_limits(brute->table, brute->viewing.target, &exposure, &set, NULL, NULL), BW_OK);
    for (size_t i = 0; i < set.count; i++) {
        double share = fmin(1., pow(set.limits[i].acceptance_rad / brute->viewing.subtense_rad, 2.));
        double *lowest = &brute->lowest[set.limits[i].effect];
        double *narrowest = &brute->narrowest[set.limits[i].effect];
        *lowest = fmin(*lowest, set.limits[i].radiant_exposure_j_m2 / holds / share);
        *narrowest =
            fmin(*narrowest, set.limits[i].radiant_exposure_j_m2 / holds / share * pow(set.limits[i].aperture_m, 2.));
    }
}

static void try_all_windows(struct brute *brute) {
    const struct bw_emission *e = brute->emission;
    double q = e->pulse_energy_j, shortest_s = e->pulse_duration_s;
    for (double s = log(shortest_s); !e->continuous && s < log(brute->viewing.exposure_s); s += .002)
        try_window(brute, exp(s), bw_train_window_energy(e, exp(s)) / q);
    for (double n = 2.; !e->continuous && n < 1e4; n++) {
        double time_s = (n - 1.) / e->repetition_rate_hz + e->pulse_duration_s;
        if (time_s > brute->viewing.exposure_s)
            break;
        try_window(brute, time_s, n);
        try_window(brute, time_s + .3 * e->pulse_duration_s, bw_train_window_energy(e, time_s) / q);
    }
    struct bw_exposure exposure = {e->wavelength_nm, brute->viewing.exposure_s, brute->viewing.subtense_rad, 0.};
    double edges_s[BW_EDGES_MAX];
    size_t count = bw_limits_time_edges(brute->table, BW_EYE, &exposure, edges_s, BW_EDGES_MAX);
    for (size_t i = 0; !e->continuous && i < count; i++)
        try_window(brute, edges_s[i], bw_train_window_energy(e, edges_s[i]) / q);
    try_window(brute, brute->viewing.exposure_s,
               e->continuous ? brute->viewing.exposure_s : bw_train_window_energy(e, brute->viewing.exposure_s) / q);
}

/* The handful of windows finds what thousands of them find. */
static void test_against_every_window(void **state) {
    const char *rules = *state;
    uint64_t random = 7;
    for (int i = 0; i < 60; i++) {
        double exposure_s = pow(10., -6. + 10. * uniform(&random));
        double wavelength_nm = i % 3 == 0 ? 400. + 200. * uniform(&random) : 400. + 800. * uniform(&random);
        double period_s = exposure_s / (1. + 300. * uniform(&random));
        double duration_s = fmax(1e-12, period_s * pow(10., -4. * uniform(&random)));
        struct bw_emission e = i % 4 == 3 ? steady(wavelength_nm) : pulses(wavelength_nm, duration_s, 1. / period_s);
        struct brute brute = {bw_tables_find(rules), &e, {BW_EYE, exposure_s, 0., 0.}, {0.}, {0.}};
        if (i % 2 == 1)
            brute.viewing.subtense_rad = 1e-3 * pow(10., 2.5 * uniform(&random));
        for (size_t j = 0; j < BW_EFFECTS; j++)
            brute.lowest[j] = brute.narrowest[j] = HUGE_VAL;
        try_all_windows(&brute);
        struct bw_train_limit_set set;
        struct bw_error error = {.status = BW_OK};
        if (bw_hazard_train_limits(brute.table, &e, &brute.viewing, &set, NULL, &error) != BW_OK)
            fail_msg("%s", error.text);
        for (size_t j = 0; j < set.count; j++) {
            double got = set.limits[j].rules_j_m2[BW_RULE_AVERAGE] / (e.continuous ? exposure_s : 1.);
            double want = brute.lowest[set.limits[j].limit.effect];
            if (!(got <= want * (1. + 1e-9) && got >= want * (1. - 2e-3)))
                fail_msg("%d: %s %g nm, %g s, %g Hz for %g s, %g rad: got %.9g, every window %.9g", i,
                         bw_effect_name(set.limits[j].limit.effect), wavelength_nm, duration_s, 1. / period_s,
                         exposure_s, brute.viewing.subtense_rad, got, want);
        }
    }
}

/* Of beams of every width, the one ratio is never below that of any single window. */
static void test_apertures_of_all_windows(void **state) {
    (void)state;
    uint64_t random = 11;
    const struct bw_table *table = bw_tables_find("icnirp-2013");
    for (int i = 0; i < 40; i++) {
        double exposure_s = pow(10., -1. + 3. * uniform(&random)), rate_hz = (2. + 60. * uniform(&random)) / exposure_s;
        double wavelength_nm = i % 2 ? 1500. + 1000. * uniform(&random) : 316. + 80. * uniform(&random);
        struct bw_emission e = pulses(wavelength_nm, pow(10., -3. * uniform(&random)) / rate_hz, rate_hz);
        struct bw_viewing_case viewing = {BW_EYE, exposure_s, 0., 0.};
        struct bw_train_limit limit = limit_of("icnirp-2013", &e, viewing, BW_EFFECTS);
        for (double width_m = 1e-4; width_m < 1.; width_m *= 2.) {
            struct bw_beam beam = ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, width_m, 0., 0., width_m);
            double ratio = bw_beam_irradiance_per_w(&beam, 0., limit.aperture_m) / limit.per_pulse_j_m2;
            for (double n = 1.; n <= 60.; n++) {
                struct bw_exposure exposure = {wavelength_nm, (n - 1.) / rate_hz + e.pulse_duration_s, 0., 0.};
                struct bw_limit_set set;
                if (exposure.exposure_s > exposure_s)
                    break;
                assert_int_equal(bw_limits(table, BW_EYE, &exposure, &set, NULL, NULL), BW_OK);
                double one = n * bw_beam_irradiance_per_w(&beam, 0., set.limits[0].aperture_m) /
                             set.limits[0].radiant_exposure_j_m2;
                if (!(one <= ratio * (1. + 1e-9)))
                    fail_msg("%g nm, d63 %g m: %g pulses give %g, all together %g", wavelength_nm, width_m, n, one,
                             ratio);
            }
        }
    }
}

/* More pulses in the exposure, lower limit per pulse: what the permitted time rests on. */
static void test_falls_with_exposure(void **state) {
    const char *rules = *state;
    uint64_t random = 3;
    for (int i = 0; i < 60; i++) {
        double rate_hz = pow(10., 6. * uniform(&random));
        struct bw_emission e =
            pulses(401. + 798. * uniform(&random), pow(10., -4. * uniform(&random)) / rate_hz, rate_hz);
        double subtense_rad = i % 2 ? 0. : .2 * uniform(&random), last = HUGE_VAL;
        for (double t = 1.5 / rate_hz; t <= 3e4; t *= 2.3) {
            struct bw_viewing_case viewing = {BW_EYE, t, subtense_rad, 0.};
            double now = limit_of(rules, &e, viewing, BW_RETINA_THERMAL).per_pulse_j_m2;
            if (!(now <= last * (1. + 1e-12)))
                fail_msg("%g nm, %g s, %g Hz, %g rad: rises from %g to %g at %g s", e.wavelength_nm, e.pulse_duration_s,
                         rate_hz, subtense_rad, last, now, t);
            last = now;
        }
    }
}

/* ---- refusals ---------------------------------------------------------------------------------- */

static struct refusal_case {
    const char *name, *rules;
    double wavelength_nm, duration_s, exposure_s;
    enum bw_status status;
} refusals[] = {
    {"refused: pulse below 1e-13 s", "icnirp-2013", 810., 9e-14, 1., BW_OUT_OF_RANGE},
    {"refused: exposure 0", "icnirp-2013", 810., 1e-9, 0., BW_ARGUMENT},
    {"refused: exposure negative", "icnirp-2013", 810., 1e-9, -1., BW_ARGUMENT},
    {"refused: exposure NaN", "icnirp-2013", 810., 1e-9, NONE, BW_ARGUMENT},
    {"refused: exposure infinite", "icnirp-2013", 810., 1e-9, HUGE_VAL, BW_ARGUMENT},
    {"refused: exposure beyond 3e4 s", "icnirp-2013", 810., 1e-9, 3.001e4, BW_OUT_OF_RANGE},
    {"refused: no row at 1500 nm", "ansi-z136-1-2014", 1500., 1e-9, 1., BW_OUT_OF_RANGE},
};

static void test_refusal(void **state) {
    const struct refusal_case *c = *state;
    struct bw_emission emission = pulses(c->wavelength_nm, c->duration_s, 100.);
    struct bw_viewing_case viewing = {BW_EYE, c->exposure_s, 0., 0.};
    struct bw_train_limit_set set;
    struct bw_error error = {.status = BW_OK};
    assert_int_equal(bw_hazard_train_limits(bw_tables_find(c->rules), &emission, &viewing, &set, NULL, &error),
                     c->status);
    assert_int_equal(set.count, 0);
    assert_true(error.text[0] != '\0');
}

static void test_working(void **state) {
    (void)state;
    struct bw_emission emission = pulses(904., 200e-9, 5e3);
    struct bw_viewing_case viewing = {BW_EYE, 10., 0., 0.};
    struct bw_train_limit_set set;
    struct bw_working working = {.steps = NULL};
    assert_int_equal(bw_hazard_train_limits(bw_tables_find("eu-2006-25"), &emission, &viewing, &set, &working, NULL),
                     BW_OK);
    static const char *const wanted[] = {"H1", "H2", "H3", "MPE", "E_limit"};
    const double values[] = {1.2792929435e-2, 5.1171717738e-3, 8.5551475316e-4, 8.5551475316e-4, 4.2775737658};
    for (size_t i = 0; i < COUNT(wanted); i++) {
        bool found = false;
        for (size_t j = 0; j < working.count; j++)
            if (!working.steps[j].heading && strcmp(working.steps[j].symbol, wanted[i]) == 0) {
                found = found || fabs(working.steps[j].value - values[i]) <= 1e-9 * values[i];
                assert_true(working.steps[j].formula[0] != '\0');
            }
        if (!found)
            fail_msg("no step %s of %g", wanted[i], values[i]);
    }
    bw_working_free(&working);
}

static char rule_sets[][32] = {"eu-2006-25", "iec-60825-1-2014", "icnirp-2013", "ansi-z136-1-2014"};
static struct CMUnitTest tests[COUNT(rule_cases) + COUNT(steady_cases) + COUNT(refusals) + 2 * COUNT(rule_sets) + 3];

#define ADD_ROWS(rows, function)                                                                                       \
    for (size_t i = 0; i < COUNT(rows); i++)                                                                           \
        tests[count++] = (struct CMUnitTest) {                                                                         \
            rows[i].name, function, NULL, NULL, &rows[i]                                                               \
        }

int main(void) {
    size_t count = 0;
    ADD_ROWS(rule_cases, test_rule);
    ADD_ROWS(steady_cases, test_steady);
    ADD_ROWS(refusals, test_refusal);
    for (size_t i = 0; i < COUNT(rule_sets); i++) {
        tests[count++] = (struct CMUnitTest){"every window", test_against_every_window, NULL, NULL, rule_sets[i]};
        tests[count++] = (struct CMUnitTest){"falls with exposure", test_falls_with_exposure, NULL, NULL, rule_sets[i]};
    }
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_counts);
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_apertures_of_all_windows);
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_working);
    return cmocka_run_group_tests_name("hazard_train", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
