/* beam: what was given, off by a factor. */
#include <math.h>
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdlib.h>

#include <cmocka.h>

#include <beamward/beam.h>

#include "round_beam.h"

#define NONE         ((double)NAN)
#define COUNT(array) (sizeof(array) / sizeof *(array))

static void expect(const char *what, double got, double want) {
    if (!(fabs(got - want) <= 1e-12 * fabs(want)))
        fail_msg("%s: got %.17g, want %.17g", what, got, want);
}

/* Q = peak x d and P = Q x f, by hand. */
static struct varied_case {
    const char *name;
    double average_w, peak_w, energy_j, duration_s, rate_hz; /* given */
    double power, duration, rate;                            /* factors */
    double want_average_w, want_peak_w, want_energy_j, want_duration_s, want_rate_hz;
} varied[] = {
    {"continuous", 8, NONE, NONE, NONE, NONE, 1.2, 0.5, 3, 9.6, 9.6, 0, 0, 0},
    {"nothing changes", NONE, 75, NONE, 150e-9, 1e4, 1, 1, 1, 0.1125, 75, 11.25e-6, 150e-9, 1e4},
    {"peak given: power", NONE, 75, NONE, 150e-9, 1e4, 1.2, 1, 1, 0.135, 90, 13.5e-6, 150e-9, 1e4},
    {"peak given: a longer pulse has more energy", NONE, 75, NONE, 150e-9, 1e4, 1, 2, 1, 0.225, 75, 22.5e-6, 300e-9, 1e4},
    {"peak given: rate", NONE, 75, NONE, 150e-9, 1e4, 1, 1, 0.5, 0.05625, 75, 11.25e-6, 150e-9, 5e3},
    {"average given: a longer pulse has the same energy", 0.1, NONE, NONE, 1e-7, 1e4, 1, 2, 1, 0.1, 50, 1e-5, 2e-7, 1e4},
    {"average given: fewer pulses have more energy", 0.1, NONE, NONE, 1e-7, 1e4, 1, 1, 0.5, 0.1, 200, 2e-5, 1e-7, 5e3},
    {"energy given: rate", NONE, NONE, 1e-5, 1e-7, 1e4, 1, 1, 2, 0.2, 100, 1e-5, 1e-7, 2e4},
    {"duration not given: it follows", 0.1, 100, NONE, NONE, 1e4, 1, 3, 1, 0.1, 100, 1e-5, 1e-7, 1e4},
    {"duration not given, rate", 0.1, 100, NONE, NONE, 1e4, 1, 1, 2, 0.1, 100, 5e-6, 5e-8, 2e4},
    {"all five given", 0.1, 100, 1e-5, 1e-7, 1e4, 2, 1, 2, 0.2, 100, 1e-5, 1e-7, 2e4},
    {"four given, no duration", 0.1, 100, 1e-5, NONE, 1e4, 1, 1, 2, 0.1, 100, 5e-6, 5e-8, 2e4},
    {"four given, no rate", 0.1, 100, 1e-5, 1e-7, NONE, 1, 2, 1, 0.1, 50, 1e-5, 2e-7, 1e4},
    {"pulses that would overlap are cut: continuous", 1, NONE, NONE, 0.8e-3, 1e3, 1, 1.5, 1, 1, 1, 0, 0, 0},
    {"overlap by rate", 1, NONE, NONE, 0.8e-3, 1e3, 1, 1, 1.5, 1, 1, 0, 0, 0},
};

static void test_varied(void **state) {
    const struct varied_case *c = *state;
    struct bw_emission_input given = {810, c->average_w, c->peak_w, c->energy_j, c->duration_s, c->rate_hz, NULL};
    struct bw_emission emission;
    struct bw_error error = {.status = BW_OK};
    if (bw_emission_varied(&given, c->power, c->duration, c->rate, &emission, &error) != BW_OK)
        fail_msg("%s", error.text);
    expect("average", emission.average_power_w, c->want_average_w);
    expect("peak", emission.peak_power_w, c->want_peak_w);
    expect("energy", emission.pulse_energy_j, c->want_energy_j);
    expect("duration", emission.pulse_duration_s, c->want_duration_s);
    expect("rate", emission.repetition_rate_hz, c->want_rate_hz);
    assert_true(emission.continuous == !(c->want_duration_s > 0));
}

/* Bursts of pulses of 1 mJ, 1 kHz, 10 in 10 ms, every 100 ms: 0.1 W in the mean. */
static struct burst_case {
    const char *name;
    struct bw_emission_input given;
    struct bw_timing timing;
    double power, duration, rate;
    double want_average_w, want_energy_j, want_duration_s, want_rate_hz, want_holds;
} bursts[] = {
    {"bursts: as given", {810, NONE, NONE, 1e-3, 1e-6, 1e3, NULL}, {NONE, .01, .1, NONE, NONE, NONE, NONE, NULL, 0},
     1, 1, 1, .1, 1e-3, 1e-6, 1e3, 10},
    {"bursts: power", {810, NONE, NONE, 1e-3, 1e-6, 1e3, NULL}, {NONE, .01, .1, NONE, NONE, NONE, NONE, NULL, 0},
     1.2, 1, 1, .12, 1.2e-3, 1e-6, 1e3, 10},
    {"bursts: more given than needed, the power is that while on", {810, 1, 1e3, 1e-3, 1e-6, 1e3, NULL},
     {NONE, .01, .1, NONE, NONE, NONE, NONE, NULL, 0}, 1, 2, 1, .1, 1e-3, 2e-6, 1e3, 10},
    {"bursts: four given, no rate", {810, 1, 1e3, 1e-3, 1e-6, NONE, NULL},
     {NONE, .01, .1, NONE, NONE, NONE, NONE, NULL, 0}, 1, 2, 1, .1, 1e-3, 2e-6, 1e3, 10},
    {"bursts: of a length hold more pulses at a higher rate", {810, NONE, NONE, 1e-3, 1e-6, 1e3, NULL},
     {NONE, .01, .1, NONE, NONE, NONE, NONE, NULL, 0}, 1, 1, 1.5, .15, 1e-3, 1e-6, 1.5e3, 15},
    {"bursts: of so many pulses are shorter at a higher rate", {810, NONE, NONE, 1e-3, 1e-6, 1e3, NULL},
     {NONE, .01, .1, 10, NONE, NONE, NONE, NULL, 0}, 1, 1, 1.5, .1, 1e-3, 1e-6, 1.5e3, 10},
    {"bursts: the rate was not given and stays", {810, NONE, NONE, 1e-3, 1e-6, NONE, NULL},
     {NONE, .01, .1, 10, NONE, NONE, NONE, NULL, 0}, 1, 1, 1.5, .1, 1e-3, 1e-6, 1e3, 10},
    {"bursts of one: pulses overlap only with the next burst", {810, NONE, NONE, 1e-3, 9e-4, 1e3, NULL},
     {NONE, NONE, .1, 1, NONE, NONE, NONE, NULL, 0}, 1, 1.5, 1, .01, 1e-3, 1e-3, 10, 0},
};

static void test_bursts(void **state) {
    const struct burst_case *c = *state;
    struct bw_emission_input given = c->given;
    struct bw_emission emission;
    struct bw_error error = {.status = BW_OK};
    given.timing = &c->timing;
    if (bw_emission_varied(&given, c->power, c->duration, c->rate, &emission, &error) != BW_OK)
        fail_msg("%s", error.text);
    expect("average", emission.average_power_w, c->want_average_w);
    expect("energy", emission.pulse_energy_j, c->want_energy_j);
    expect("duration", emission.pulse_duration_s, c->want_duration_s);
    expect("rate", emission.repetition_rate_hz, c->want_rate_hz);
    expect("holds", emission.level_count > 0 ? emission.levels[0].holds : 0, c->want_holds);
}

static void test_varied_list(void **state) {
    (void)state;
    const struct bw_pulse pulses[] = {{0, .1, .2}, {.5, .2, .6}};
    struct bw_timing timing = bw_timing_none();
    struct bw_emission_input given = {810, NONE, NONE, NONE, NONE, NONE, &timing};
    struct bw_emission emission;
    timing.pulses = pulses;
    timing.pulses_given = 2;
    assert_int_equal(bw_emission_varied(&given, 1.5, 2, 2, &emission, NULL), BW_OK);
    expect("average", emission.average_power_w, 1.5 * .8 / .7);
    expect("energy", emission.pulse_energy_j, .9);
    expect("duration", emission.pulse_duration_s, .2);
    expect("window", bw_train_window_energy(&emission, 1), 1.2);
}

static void test_not_a_factor(void **state) {
    (void)state;
    struct bw_emission_input given = {810, 8, NONE, NONE, NONE, NONE, NULL};
    struct bw_emission emission;
    assert_int_equal(bw_emission_varied(&given, -1, 1, 1, &emission, NULL), BW_ARGUMENT);
    assert_true(isnan(emission.average_power_w));
}

static struct beam_case {
    const char *name;
    struct bw_beam beam;
    double diameter, divergence;
    double want_waist_m, want_divergence_rad, want_exit_m;
} beams[] = {
    {"round", ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 20e-3, 0.1, 0, 20e-3), 0.9, 0.8, 18e-3, 0.08, 18e-3},
    /* 30 mm and 1 mrad at a lens of 100 mm: waist 0.1 mm, 300 mrad behind it; 27 mm and 0.8 mrad: 0.08 mm, 270 mrad */
    {"lens", ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 1e-4, 0.3, 0.1, 30e-3), 0.9, 0.8, 0.8e-4, 0.27, 27e-3},
};

static void test_beam(void **state) {
    const struct beam_case *c = *state;
    struct bw_beam beam = bw_beam_varied(&c->beam, c->diameter, c->divergence);
    expect("waist", beam.diameter_m, c->want_waist_m);
    expect("divergence", beam.divergence_rad, c->want_divergence_rad);
    expect("exit", beam.exit_diameter_m, c->want_exit_m);
    expect("place", beam.waist_m, c->beam.waist_m);
}

int main(void) {
    struct CMUnitTest tests[COUNT(varied) + COUNT(beams) + COUNT(bursts) + 2];
    size_t count = 0;
    for (size_t i = 0; i < COUNT(varied); i++)
        tests[count++] = (struct CMUnitTest){varied[i].name, test_varied, NULL, NULL, &varied[i]};
    for (size_t i = 0; i < COUNT(beams); i++)
        tests[count++] = (struct CMUnitTest){beams[i].name, test_beam, NULL, NULL, &beams[i]};
    for (size_t i = 0; i < COUNT(bursts); i++)
        tests[count++] = (struct CMUnitTest){bursts[i].name, test_bursts, NULL, NULL, &bursts[i]};
    tests[count++] = (struct CMUnitTest){"of a list only the power", test_varied_list, NULL, NULL, NULL};
    tests[count++] = (struct CMUnitTest){"a factor below 0", test_not_a_factor, NULL, NULL, NULL};
    return _cmocka_run_group_tests("beam varied", tests, count, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
