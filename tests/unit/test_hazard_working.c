/* A reader with a pocket calculator can follow the working: the numbers of every step give its value to the digits
 * that are printed, over many inputs; and the figures that come out are among the values. */
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

#include "calculator.h"

#define COUNT(array) (sizeof(array) / sizeof((array)[0]))

/* ---- the calculator itself ------------------------------------------------------------------------ */

static struct sum_case {
    const char *text;
    double want;
    bool wrong;
} sums[] = {
    {"1 + 2 * 3", 7, false},
    {"2^3^2", 512, false},
    {"-2^2", -4, false},
    {"8^-0.25", 0.5946035575013605, false},
    {"(1 - exp(-(0.007 / 0.02)^2)) / (pi * 0.007^2 / 4)", 2995.8571645, false},
    {"2 * atan(0.001 / 2 / 0.5)", 1.9999993333e-3, false},
    {"min(3, 1, 2) + max(4, 6, 5)", 7, false},
    {"log10(1000) + ln(exp(2)) + sqrt(16)", 9, false},
    {"ceil(80000.00000001) + floor(2.5)", 80002, false},
    {"1 - 2 - 3", -4, false},
    {"8 / 2 / 2", 2, false},
    {"0.02 J/m2 / 1", 0, true},
    {"N = 5", 0, true},
    {"2 3", 0, true},
    {"(1", 0, true},
    {"", 0, true},
};

static void test_sum(void **state) {
    const struct sum_case *c = *state;
    double got = nan("");
    bool fine = calculate(c->text, &got);
    assert_int_equal(fine, !c->wrong);
    if (fine && !(fabs(got - c->want) <= 1e-7 * fabs(c->want)))
        fail_msg("%s: got %.10g, want %.10g", c->text, got, c->want);
}

/* ---- every step ----------------------------------------------------------------------------------- */

static size_t check_steps(const struct bw_working *working, const char *where) {
    size_t sums_seen = 0;
    assert_false(working->failed);
    for (size_t i = 0; i < working->count; i++) {
        const struct bw_step *step = &working->steps[i];
        double got = nan("");
        if (step->heading || step->numbers[0] == '\0')
            continue;
        sums_seen++;
        if (!calculator_agrees(step->numbers, step->value, &got))
            fail_msg("%s: %s = %.10g, but %s gives %.10g", where, step->symbol, step->value, step->numbers, got);
    }
    return sums_seen;
}

static bool holds(const struct bw_working *working, double value) {
    for (size_t i = 0; i < working->count; i++)
        if (!working->steps[i].heading && !(working->steps[i].value < value) && !(working->steps[i].value > value) &&
            !isnan(value))
            return true;
    return false;
}

#define ASSERT_HELD(working, figure, where)                                                                            \
    do {                                                                                                               \
        if (!holds(working, figure))                                                                                   \
            fail_msg("%s: %s = %.17g is no value of any step", where, #figure, figure);                                \
    } while (0)

static uint64_t next(uint64_t *random) {
    *random ^= *random << 13;
    *random ^= *random >> 7;
    *random ^= *random << 17;
    return *random;
}
static double share(uint64_t *random) {
    return (double)(next(random) >> 11) / 9007199254740992.;
}
static double between(uint64_t *random, double low, double high) { /* evenly in the logarithm */
    return low * pow(high / low, share(random));
}

static const double subtenses_rad[] = {0, 1e-3, 1.5e-3, 8e-3, 60e-3, 0.4};

static void test_limits(void **state) {
    uint64_t random = 77;
    size_t seen = 0, evaluated = 0;
    (void)state;
    for (int i = 0; i < 6000; i++) {
        const struct bw_table *table = bw_tables_at((size_t)i % bw_tables_count());
        struct bw_exposure exposure = {between(&random, 180, 1e6), between(&random, 1e-13, 3e4),
                                       subtenses_rad[next(&random) % COUNT(subtenses_rad)],
                                       i % 3 == 0 ? between(&random, 1e-3, 1) : 0};
        if (i % 2)
            exposure.wavelength_nm = between(&random, 400, 1400);
        struct bw_limit_set limits;
        struct bw_working working = {0};
        char where[160];
        enum bw_target target = i % 5 ? BW_EYE : BW_SKIN;
        snprintf(where, sizeof where, "%s %.17g nm %.17g s %g rad", bw_table_id(table), exposure.wavelength_nm,
                 exposure.exposure_s, exposure.subtense_rad);
        if (bw_limits(table, target, &exposure, &limits, &working, NULL) == BW_OK) {
            evaluated++;
            seen += check_steps(&working, where);
            for (size_t k = 0; k < limits.count; k++) {
                ASSERT_HELD(&working, limits.limits[k].radiant_exposure_j_m2, where);
                ASSERT_HELD(&working, limits.limits[k].irradiance_w_m2, where);
            }
        }
        bw_working_free(&working);
    }
    assert_true(evaluated > 4000 && seen > 3 * evaluated);
}

/* Half of the trains have bursts, a gate, both, or end. */
static void random_timing(uint64_t *random, struct bw_timing *timing, struct bw_emission_input *input) {
    *timing = bw_timing_none();
    uint64_t which = next(random) % 8;
    double period_s = 1 / input->repetition_rate_hz;
    if (which == 0)
        timing->pulse_count = (double)(1 + next(random) % 20);
    if (which == 1 || which == 2) {
        timing->burst_on_s = period_s * (double)(2 + next(random) % 9);
        timing->burst_period_s = timing->burst_on_s * between(random, 1.5, 20);
    }
    if (which == 2 || which == 3) {
        double inner_s = which == 2 ? timing->burst_period_s : period_s;
        timing->gate_on_s = inner_s * (double)(2 + next(random) % 9);
        timing->gate_period_s = timing->gate_on_s * between(random, 1.5, 20);
    }
    if (which < 4)
        input->timing = timing;
}

static struct bw_emission random_emission(uint64_t *random, double low_nm, double high_nm) {
    for (;;) {
        struct bw_emission_input input = {.wavelength_nm = between(random, low_nm, high_nm),
                                          .average_power_w = nan(""),
                                          .peak_power_w = nan(""),
                                          .pulse_energy_j = nan(""),
                                          .pulse_duration_s = nan(""),
                                          .repetition_rate_hz = nan("")};
        struct bw_emission emission;
        struct bw_timing timing;
        if (next(random) % 3 == 0) {
            input.average_power_w = between(random, 1e-3, 50);
        } else {
            input.pulse_energy_j = between(random, 1e-7, 1);
            input.pulse_duration_s = between(random, 1e-9, 1e-2);
            input.repetition_rate_hz = between(random, 0.2, 1e6);
            random_timing(random, &timing, &input);
        }
        if (bw_emission_resolve(&input, &emission, NULL) == BW_OK) {
            snprintf(emission.name, sizeof emission.name, "e");
            return emission;
        }
    }
}

static void check_train(const struct bw_train_limit_set *set, const struct bw_working *working, const char *where) {
    for (size_t k = 0; k < set->count; k++) {
        const struct bw_train_limit *limit = &set->limits[k];
        ASSERT_HELD(working, limit->per_pulse_j_m2, where);
        ASSERT_HELD(working, limit->irradiance_w_m2, where);
        for (int rule = 0; rule < BW_RULES; rule++)
            if (!isnan(limit->rules_j_m2[rule]))
                ASSERT_HELD(working, limit->rules_j_m2[rule], where);
        if (limit->pulses > 0) {
            ASSERT_HELD(working, limit->pulses, where);
            ASSERT_HELD(working, limit->correction, where);
        }
        if (limit->group_pulses > 1)
            ASSERT_HELD(working, limit->group_pulses, where);
    }
}

static void test_trains(void **state) {
    uint64_t random = 4711;
    size_t by_rule[BW_RULES] = {0}, grouped = 0, narrow = 0;
    (void)state;
    for (int i = 0; i < 3000; i++) {
        const struct bw_table *table = bw_tables_at((size_t)i % bw_tables_count());
        struct bw_emission emission = random_emission(&random, 400, i % 2 ? 1200 : 12000);
        struct bw_viewing_case viewing = {i % 7 ? BW_EYE : BW_SKIN, between(&random, 1e-4, 3e4),
                                          subtenses_rad[next(&random) % COUNT(subtenses_rad)], 0};
        struct bw_train_limit_set set;
        struct bw_working working = {0};
        char where[200];
        snprintf(where, sizeof where, "%s %.17g nm %.17g s %.17g Hz, %.17g s %g rad", bw_table_id(table),
                 emission.wavelength_nm, emission.pulse_duration_s, emission.repetition_rate_hz, viewing.exposure_s,
                 viewing.subtense_rad);
        if (bw_hazard_train_limits(table, &emission, &viewing, &set, &working, NULL) == BW_OK) {
            check_steps(&working, where);
            check_train(&set, &working, where);
            const struct bw_train_limit *limit = &set.limits[set.governing];
            by_rule[limit->rule]++;
            grouped += limit->group_pulses > 1;
            narrow += limit->aperture_m < limit->limit.aperture_m;
        }
        bw_working_free(&working);
    }
    assert_true(by_rule[0] > 50 && by_rule[1] > 50 && by_rule[2] > 50 && grouped > 20 && narrow > 20);
}

static struct bw_beam random_beam(uint64_t *random) {
    struct bw_beam beam = {.profile = next(random) % 4 ? BW_GAUSSIAN : BW_TOP_HAT,
                           .spread = next(random) % 4 ? BW_HYPERBOLIC : BW_LINEAR,
                           .diameter_m = between(random, 1e-4, 0.1),
                           .divergence_rad = between(random, 1e-4, 1)};
    beam.exit_diameter_m = beam.diameter_m;
    if (next(random) % 5 == 0) {
        beam.waist_m = between(random, 0.01, 1);
        beam.exit_diameter_m = beam.diameter_m * 20;
    }
    if (next(random) % 9 == 0)
        beam.divergence_rad = 0;
    if (next(random) % 6 == 0) {
        beam.elliptical = true;
        beam.diameter_y_m = beam.diameter_m * between(random, 0.2, 5);
        beam.exit_diameter_y_m = beam.exit_diameter_m * between(random, 0.2, 5);
        beam.divergence_y_rad = beam.divergence_rad * between(random, 0.2, 1.5);
    }
    if (next(random) % 6 == 0)
        beam.source_m = between(random, 1e-4, 1e-2);
    return beam;
}

/* Distances, densities and the diffuse reflection of one to four emissions. */
static void check_output(const struct bw_table *table, const struct bw_output *output, double exposure_s,
                         const char *where) {
    struct bw_viewing_case viewing = {BW_EYE, exposure_s, 0, 0};
    struct bw_working working = {0};
    struct bw_hazard hazard;
    struct bw_reach reach;
    struct bw_spot spot;
    double ratios[BW_TERMS_MAX], od[BW_EMISSIONS_MAX], plain[BW_EMISSIONS_MAX];
    if (bw_hazard_prepare(table, output, &viewing, &hazard, NULL, NULL) != BW_OK)
        return;
    assert_int_equal(bw_hazard_reach(&hazard, BW_EMISSIONS_MAX, &reach, &working, NULL), BW_OK);
    check_steps(&working, where);
    if (reach.distance_m < HUGE_VAL)
        ASSERT_HELD(&working, reach.distance_m, where);
    bw_hazard_ratio_working(&hazard, 0.3, &working);
    ASSERT_HELD(&working, bw_hazard_ratio(&hazard, 0.3), where);
    bw_hazard_term_ratios(&hazard, 0, ratios);
    bw_hazard_optical_density(&hazard, ratios, plain);
    bw_hazard_density_working(&hazard, ratios, od, &working);
    for (size_t i = 0; i < output->count; i++) {
        assert_true(fabs(od[i] - plain[i]) <= 0);
        ASSERT_HELD(&working, od[i], where);
    }
    assert_int_equal(bw_hazard_spot(output, 0, 1, &spot), BW_OK);
    assert_int_equal(bw_hazard_diffuse_reach(&hazard, &spot, &reach, &working, NULL), BW_OK);
    ASSERT_HELD(&working, reach.distance_m, where);
    check_steps(&working, where);
    bw_working_free(&working);
}

static void test_distances(void **state) {
    uint64_t random = 90210;
    (void)state;
    for (int i = 0; i < 400; i++) {
        const struct bw_table *table = bw_tables_at((size_t)i % bw_tables_count());
        struct bw_output output = {.count = 1 + next(&random) % 4};
        char where[80];
        for (size_t k = 0; k < output.count; k++) {
            output.emissions[k] = random_emission(&random, 400, 1200);
            output.beams[k] = random_beam(&random);
        }
        snprintf(where, sizeof where, "output %d by %s", i, bw_table_id(table));
        check_output(table, &output, between(&random, 1e-3, 3e4), where);
    }
}

/* ---- the steps that were missing: average rule of a train ------------------------------------------ */

static double value_of(const struct bw_working *working, const char *symbol, const char *formula) {
    for (size_t i = working->count; i-- > 0;)
        if (!working->steps[i].heading && strcmp(working->steps[i].symbol, symbol) == 0 &&
            strcmp(working->steps[i].formula, formula) == 0)
            return working->steps[i].value;
    fail_msg("no step %s = %s", symbol, formula);
    return nan("");
}

/* 1064 nm, 1 us, 100 kHz, 10 s, iec-60825-1-2014: E = 10 CA CC = 50 W/m2, H = 500 J/m2 over 1e6 pulses. */
static void test_average(void **state) {
    struct bw_emission_input input = {1064, nan(""), nan(""), 1, 1e-6, 1e5, NULL};
    struct bw_emission emission;
    struct bw_viewing_case viewing = {BW_EYE, 10, 0, 0};
    struct bw_train_limit_set set;
    struct bw_working working = {0};
    (void)state;
    assert_int_equal(bw_emission_resolve(&input, &emission, NULL), BW_OK);
    assert_int_equal(
        bw_hazard_train_limits(bw_tables_find("iec-60825-1-2014"), &emission, &viewing, &set, &working, NULL), BW_OK);
    static const struct {
        const char *symbol, *formula;
        double want;
    } steps[] = {{"t", "te", 10},
                 {"n", "floor(t f) + min(1, (t - floor(t f) / f) / d)", 1e6},
                 {"H2", "H(t) / n", 5e-4},
                 {"N", "min(n, floor((n - 1) / f / Ti) + 1)", 769231},
                 {"CP", "min(1, max(0.4, 5 N^-0.25))", 0.4},
                 {"MPE", "min(H1, H2, H3)", 5e-4},
                 {"E_limit", "MPE f", 50}};
    for (size_t i = 0; i < COUNT(steps); i++) {
        double got = value_of(&working, steps[i].symbol, steps[i].formula);
        if (!(fabs(got - steps[i].want) <= 1e-9 * steps[i].want))
            fail_msg("%s: got %.12g, want %.12g", steps[i].symbol, got, steps[i].want);
    }
    bw_working_free(&working);
}

int main(void) {
    static struct CMUnitTest tests[COUNT(sums) + 4];
    size_t count = 0;
    for (size_t i = 0; i < COUNT(sums); i++)
        tests[count++] =
            (struct CMUnitTest){sums[i].text[0] ? sums[i].text : "nothing", test_sum, NULL, NULL, &sums[i]};
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_limits);
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_trains);
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_distances);
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_average);
    return _cmocka_run_group_tests("hazard working", tests, count, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
