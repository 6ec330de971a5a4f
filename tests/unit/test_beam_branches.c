/* beam: what is given badly or only just, the ways through the code that ordinary trains and beams do not take. */
#include <math.h>
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdlib.h>
#include <string.h>

#include <cmocka.h>

#include <beamward/beam.h>

#include "round_beam.h"

#define COUNT(array) (sizeof(array) / sizeof *(array))
#define NONE         ((double)NAN)
#define LONG         ((double)INFINITY)

/* NaN is wanted where want is NaN, infinity where want is infinite. */
static void same(const char *what, double got, double want) {
    bool alike = isnan(want)   ? isnan(got) != 0
                 : isinf(want) ? isinf(got) != 0 && signbit(got) == signbit(want)
                               : fabs(got - want) <= 1e-12 * fabs(want);
    if (!alike)
        fail_msg("%s: got %.17g, want %.17g", what, got, want);
}

static struct bw_timing counted(double pulse_count) {
    struct bw_timing timing = bw_timing_none();
    timing.pulse_count = pulse_count;
    return timing;
}

/* ---- emissions that are refused ------------------------------------------------------------------- */

static const struct bw_pulse two_pulses[2] = {{0., .1, .2}, {.5, .2, .6}};

#define TIMING(count, on, period, pulses, rate, gate_on, gate_period)                                                  \
    {                                                                                                                  \
        count, on, period, pulses, rate, gate_on, gate_period, NULL, 0                                                 \
    }
#define NO_TIMING TIMING(NONE, NONE, NONE, NONE, NONE, NONE, NONE)
#define LISTED(pulses, count)                                                                                          \
    {                                                                                                                  \
        NONE, NONE, NONE, NONE, NONE, NONE, NONE, pulses, count                                                        \
    }

/* Numbers in the texts by hand. */
static struct refusal_case {
    const char *name;
    struct bw_emission_input input; /* the timing below is put in */
    struct bw_timing timing;
    enum bw_status status;
    const char *text; /* how it begins */
} refusals[] = {
    {"refused: average power against energy and rate",
     {905., .5, NONE, 11.25e-6, 150e-9, 1e4, NULL},
     NO_TIMING,
     BW_INPUT,
     "average power 0.5 W, but 1.125e-05 J x 10000 Hz gives 0.1125 W: 344 % off; leave one of them out"},
    {"refused: burst on-time too short",
     {905., 1., NONE, NONE, NONE, NONE, NULL},
     TIMING(NONE, 1e-16, .1, NONE, NONE, NONE, NONE),
     BW_ARGUMENT,
     "burst on-time is 1e-16 s, outside 1e-15 to 30000 s"},
    {"refused: burst on-time too long",
     {905., 1., NONE, NONE, NONE, NONE, NULL},
     TIMING(NONE, 3.1e4, 1e5, NONE, NONE, NONE, NONE),
     BW_ARGUMENT,
     "burst on-time is 31000 s, outside"},
    {"refused: burst rate infinite",
     {905., 1., NONE, NONE, NONE, NONE, NULL},
     TIMING(NONE, .01, NONE, NONE, LONG, NONE, NONE),
     BW_ARGUMENT,
     "burst rate is inf Hz, outside"},
    {"refused: gate period negative",
     {905., 1., NONE, NONE, NONE, NONE, NULL},
     TIMING(NONE, NONE, NONE, NONE, NONE, .1, -1.),
     BW_ARGUMENT,
     "gate period is -1 s, outside"},
    {"refused: no pulse",
     {905., NONE, 1., NONE, 1e-3, NONE, NULL},
     TIMING(0., NONE, NONE, NONE, NONE, NONE, NONE),
     BW_ARGUMENT,
     "pulse count is 0; a whole number from 1 to 1e+09 would be right"},
    {"refused: two pulses and a half",
     {905., NONE, 1., NONE, 1e-3, 10., NULL},
     TIMING(2.5, NONE, NONE, NONE, NONE, NONE, NONE),
     BW_ARGUMENT,
     "pulse count is 2.5; a whole number"},
    {"refused: more pulses than can be counted",
     {905., NONE, 1., NONE, 1e-3, 10., NULL},
     TIMING(2e9, NONE, NONE, NONE, NONE, NONE, NONE),
     BW_ARGUMENT,
     "pulse count is 2e+09; a whole number"},
    {"refused: half a pulse a burst",
     {905., NONE, 1., NONE, 1e-3, 10., NULL},
     TIMING(NONE, NONE, 1., .5, NONE, NONE, NONE),
     BW_ARGUMENT,
     "number of pulses in a burst is 0.5; a whole number"},
    {"refused: a burst longer than its period, a gate besides",
     {905., 1., NONE, NONE, NONE, NONE, NULL},
     TIMING(NONE, .2, .1, NONE, NONE, 1., 2.),
     BW_INPUT,
     "the burst is on for 0.2 s, 2 times its period of 0.1 s; it must be at most once"},
    {"refused: average and peak apart while on",
     {905., 1., 2., NONE, NONE, NONE, NULL},
     TIMING(NONE, .01, .1, NONE, NONE, NONE, NONE),
     BW_INPUT,
     "average power 1 W and peak power 2 W differ by 50 %"},
    {"refused: no power while on",
     {905., NONE, NONE, NONE, NONE, NONE, NULL},
     TIMING(NONE, .01, .1, NONE, NONE, NONE, NONE),
     BW_INPUT,
     "no power or energy is given"},
    {"refused: more pulses than the burst has time for",
     {905., NONE, 1., NONE, 1e-4, 1e3, NULL},
     TIMING(NONE, .01, .1, 20., NONE, NONE, NONE),
     BW_INPUT,
     "a burst of 0.01 s holds 10 pulses 0.001 s apart, but 20 are given: 100 % off"},
    {"refused: fewer pulses than the burst has time for",
     {905., NONE, 1., NONE, 1e-4, 1e3, NULL},
     TIMING(NONE, .01, .1, 5., NONE, NONE, NONE),
     BW_INPUT,
     "a burst of 0.01 s holds 10 pulses 0.001 s apart, but 5 are given: 50 % off"},
    {"refused: pulses in a burst, but a continuous emission",
     {905., 1., NONE, NONE, NONE, NONE, NULL},
     TIMING(NONE, NONE, .1, 10., NONE, NONE, NONE),
     BW_INPUT,
     "a number of pulses in a burst is given, but the emission inside is continuous"},
    {"refused: a count of a continuous emission",
     {905., 1., NONE, NONE, NONE, NONE, NULL},
     TIMING(3., NONE, NONE, NONE, NONE, NONE, NONE),
     BW_INPUT,
     "a pulse count is given, but the emission is continuous"},
    {"refused: a list of none",
     {905., NONE, NONE, NONE, NONE, NONE, NULL},
     LISTED(two_pulses, 0),
     BW_INPUT,
     "the list has 0 pulses; 1 to 1000000 would be right"},
    {"refused: a list too long",
     {905., NONE, NONE, NONE, NONE, NONE, NULL},
     LISTED(two_pulses, 1000001),
     BW_INPUT,
     "the list has 1000001 pulses; 1 to 1000000 would be right"},
};

static void test_refusal(void **state) {
    const struct refusal_case *c = *state;
    struct bw_emission_input input = c->input;
    struct bw_emission emission;
    struct bw_error error = {.status = BW_OK};
    input.timing = &c->timing;
    assert_int_equal(bw_emission_resolve(&input, &emission, &error), c->status);
    assert_int_equal(error.status, c->status);
    if (strncmp(error.text, c->text, strlen(c->text)) != 0)
        fail_msg("got \"%s\", want \"%s...\"", error.text, c->text);
    assert_true(isnan(emission.average_power_w) && isnan(emission.peak_power_w) && isnan(emission.pulse_energy_j));
    assert_int_equal(bw_emission_resolve(&input, &emission, NULL), c->status); /* nobody asks why */
}

/* ---- emissions that are only just right ----------------------------------------------------------- */

/* Q = peak x d, the mean over whole periods of the outermost level, or from the first pulse to the end of the last. */
static struct right_case {
    const char *name;
    struct bw_emission_input input;
    struct bw_timing timing;
    double want_average_w, want_peak_w, want_energy_j, want_duration_s, want_rate_hz;
} rights[] = {
    {"one pulse, all three given, the largest energy holds",
     {905., NONE, 100., 1.0005e-3, 1e-5, NONE, NULL},
     TIMING(1., NONE, NONE, NONE, NONE, NONE, NONE),
     100.05, 100.05, 1.0005e-3, 1e-5, 0.},
    {"one pulse, all three given, peak and duration hold",
     {905., NONE, 100., .9995e-3, 1e-5, NONE, NULL},
     TIMING(1., NONE, NONE, NONE, NONE, NONE, NONE),
     100., 100., 1e-3, 1e-5, 0.},
    {"one pulse of a train whose rate is given",
     {905., NONE, 100., NONE, 1e-5, 1e3, NULL},
     TIMING(1., NONE, NONE, NONE, NONE, NONE, NONE),
     100., 100., 1e-3, 1e-5, 1e3},
    {"one pulse of a train whose average is given: 1 W = 1 mJ x 1 kHz",
     {905., 1., 100., NONE, 1e-5, NONE, NULL},
     TIMING(1., NONE, NONE, NONE, NONE, NONE, NONE),
     100., 100., 1e-3, 1e-5, 1e3},
    {"on for a while, average and peak alike: the larger",
     {905., 1., 1.0005, NONE, NONE, NONE, NULL},
     TIMING(NONE, .01, .1, NONE, NONE, NONE, NONE),
     .10005, 1.0005, .010005, .01, 10.},
    {"on for a while, the average the larger",
     {905., 1.0005, 1., NONE, NONE, NONE, NULL},
     TIMING(NONE, .01, .1, NONE, NONE, NONE, NONE),
     .10005, 1.0005, .010005, .01, 10.},
    {"on for a while, only the peak given",
     {905., NONE, 2., NONE, NONE, NONE, NULL},
     TIMING(NONE, .01, .1, NONE, NONE, NONE, NONE),
     .2, 2., .02, .01, 10.},
    {"on for a while, only the average given",
     {905., 2., NONE, NONE, NONE, NONE, NULL},
     TIMING(NONE, .01, .1, NONE, NONE, NONE, NONE),
     .2, 2., .02, .01, 10.},
    {"a gate that one burst fits into: ten pulses of 1 mJ a second",
     {905., NONE, NONE, 1e-3, 1e-6, 1e3, NULL},
     TIMING(NONE, .01, .1, NONE, NONE, .05, 1.),
     .01, 1e3, 1e-3, 1e-6, 1e3},
    {"a burst of pulses without gaps, by their number",
     {905., 1., NONE, NONE, 1e-3, 1e3, NULL},
     TIMING(NONE, NONE, .1, 10., NONE, NONE, NONE),
     .1, 1., .01, .01, 10.},
    {"a burst of pulses without gaps, by number and on-time",
     {905., 1., NONE, NONE, 1e-3, 1e3, NULL},
     TIMING(NONE, .01, .1, 10., NONE, NONE, NONE),
     .1, 1., .01, .01, 10.},
    {"a burst of pulses without gaps, by its on-time",
     {905., 1., NONE, NONE, 1e-3, 1e3, NULL},
     TIMING(NONE, .01, .1, NONE, NONE, NONE, NONE),
     .1, 1., .01, .01, 10.},
    {"a burst of pulses without gaps, their rate not given",
     {905., 1., 1., NONE, 1e-3, NONE, NULL},
     TIMING(NONE, NONE, .1, 10., NONE, NONE, NONE),
     .1, 1., .01, .01, 10.},
};

static void test_right(void **state) {
    const struct right_case *c = *state;
    struct bw_emission_input input = c->input;
    struct bw_emission emission;
    struct bw_error error = {.status = BW_OK};
    input.timing = &c->timing;
    if (bw_emission_resolve(&input, &emission, &error) != BW_OK)
        fail_msg("%s", error.text);
    assert_false(emission.continuous);
    same("average", emission.average_power_w, c->want_average_w);
    same("peak", emission.peak_power_w, c->want_peak_w);
    same("energy", emission.pulse_energy_j, c->want_energy_j);
    same("duration", emission.pulse_duration_s, c->want_duration_s);
    same("rate", emission.repetition_rate_hz, c->want_rate_hz);
}

/* ---- off by a factor ------------------------------------------------------------------------------ */

static struct varied_case {
    const char *name;
    struct bw_emission_input given;
    double power;
    enum bw_status status;
    double want_average_w, want_peak_w;
} varied[] = {
    {"varied: no gaps, four given", {905., 1., 1., NONE, 1e-3, 1e3, NULL}, 2., BW_OK, 2., 2.},
    {"varied: nothing given", {905., NONE, NONE, NONE, NONE, NONE, NULL}, 1., BW_INPUT, NONE, NONE},
    {"varied: no such wavelength", {5., 1., NONE, NONE, NONE, NONE, NULL}, 1., BW_ARGUMENT, NONE, NONE},
    {"varied: infinite power", {905., 1., NONE, NONE, NONE, NONE, NULL}, LONG, BW_ARGUMENT, NONE, NONE},
    {"varied: no power", {905., 1., NONE, NONE, NONE, NONE, NULL}, 0., BW_ARGUMENT, NONE, NONE},
    {"varied: power NaN", {905., 1., NONE, NONE, NONE, NONE, NULL}, NONE, BW_ARGUMENT, NONE, NONE},
};

static void test_varied(void **state) {
    const struct varied_case *c = *state;
    struct bw_emission emission;
    struct bw_error error = {.status = BW_OK};
    assert_int_equal(bw_emission_varied(&c->given, c->power, 1., 1., &emission, &error), c->status);
    assert_int_equal(error.status, c->status);
    same("average", emission.average_power_w, c->want_average_w);
    same("peak", emission.peak_power_w, c->want_peak_w);
}

/* ---- lists and windows ---------------------------------------------------------------------------- */

static struct pulse_case {
    const char *name;
    struct bw_pulse pulses[2];
    size_t index;
    enum bw_status status;
    const char *text;
} pulse_cases[] = {
    {"pulse: start NaN", {{NONE, .1, .2}}, 0, BW_INPUT, "start is nan s, outside"},
    {"pulse: starts too late", {{1.1e9, .1, .2}}, 0, BW_INPUT, "start is 1.1e+09 s, outside"},
    {"pulse: starts too early", {{-1.1e9, .1, .2}}, 0, BW_INPUT, "start is -1.1e+09 s, outside"},
    {"pulse: no duration", {{0., 0., .2}}, 0, BW_INPUT, "duration is 0 s, outside"},
    {"pulse: infinite energy", {{0., .1, LONG}}, 0, BW_INPUT, "energy is inf J, outside"},
    {"pulse: negative energy", {{0., .1, -1.}}, 0, BW_INPUT, "energy is -1 J, outside"},
    {"pulse: at the same time", {{1., .1, .2}, {1., .1, .2}}, 1, BW_INPUT, "starts at 1 s, not after the pulse before"},
    {"pulse: before the other ends", {{1., .5, .2}, {1.25, .1, .2}}, 1, BW_INPUT, "starts at 1.25 s, 0.25 s before"},
    {"pulse: the first", {{1., .1, .2}}, 0, BW_OK, ""},
    {"pulse: as the other ends", {{1., .5, .2}, {1.5, .1, .2}}, 1, BW_OK, ""},
};

static void test_pulse(void **state) {
    const struct pulse_case *c = *state;
    struct bw_error error = {.status = BW_OK};
    assert_int_equal(bw_pulses_check(c->pulses, c->index, &error), c->status);
    if (strncmp(error.text, c->text, strlen(c->text)) != 0)
        fail_msg("got \"%s\", want \"%s...\"", error.text, c->text);
    assert_int_equal(bw_pulses_check(c->pulses, c->index, NULL), c->status);
}

/* The trains of the windows below: a list, 1 mJ a millisecond, one pulse alone, 1 W. */
enum train { LIST, REGULAR, ALONE, STEADY };

static void make_train(enum train which, struct bw_timing *timing, struct bw_emission *emission) {
    static const struct bw_emission_input inputs[] = {
        [LIST] = {905., NONE, NONE, NONE, NONE, NONE, NULL},
        [REGULAR] = {905., NONE, NONE, 1e-3, 1e-4, 1e3, NULL},
        [ALONE] = {905., NONE, NONE, 1e-3, 1e-4, NONE, NULL},
        [STEADY] = {905., 1., NONE, NONE, NONE, NONE, NULL},
    };
    struct bw_emission_input input = inputs[which];
    struct bw_error error = {.status = BW_OK};
    *timing = which == ALONE ? counted(1.) : bw_timing_none();
    if (which == LIST) {
        timing->pulses = two_pulses;
        timing->pulses_given = COUNT(two_pulses);
    }
    input.timing = timing;
    if (bw_emission_resolve(&input, emission, &error) != BW_OK)
        fail_msg("%s", error.text);
}

static struct window_case {
    const char *name;
    enum train train;
    double window_s, want_energy_j, want_pulses;
} windows[] = {
    {"window of a list: all of it", LIST, 1., .8, 2.},
    {"window of a list: half of the second pulse", LIST, .1, .3, 1.},
    {"window of a list: both, the first cut by half", LIST, .65, .7, 2.},
    {"window of a list: NaN", LIST, NONE, NONE, NONE},
    {"window of a list: negative", LIST, -1., NONE, NONE},
    {"window of a train: none", REGULAR, 0., 0., 0.},
    {"window of a train: half a pulse", REGULAR, .5e-4, .5e-3, 1.},
    {"window of a train: without end", REGULAR, LONG, LONG, LONG},
    {"window of a train: NaN", REGULAR, NONE, NONE, NONE},
    {"window of a pulse: without end", ALONE, LONG, 1e-3, 1.},
    {"window of a pulse: half of it", ALONE, .5e-4, .5e-3, 1.},
    {"window of a steady beam: 3 s", STEADY, 3., 3., 1.},
    {"window of a steady beam: none", STEADY, 0., 0., 0.},
    {"window of a steady beam: negative", STEADY, -1., NONE, NONE},
};

static void test_window(void **state) {
    const struct window_case *c = *state;
    struct bw_timing timing;
    struct bw_emission emission;
    make_train(c->train, &timing, &emission);
    same("energy", bw_train_window_energy(&emission, c->window_s), c->want_energy_j);
    same("pulses", bw_train_pulse_count(&emission, c->window_s), c->want_pulses);
}

/* From one pulse of a list to the other; a window that opens with a pulse. */
static void test_spans(void **state) {
    (void)state;
    struct bw_timing timing;
    struct bw_emission list, regular;
    make_train(LIST, &timing, &list);
    same("list", bw_train_span_s(&list, 0., 1.), .5);
    make_train(REGULAR, &timing, &regular);
    same("regular", bw_train_span_s(&regular, 4., 3.), 3e-3);
    same("no step", bw_train_span_s(&regular, 4., 0.), 0.);
    same("NaN", bw_train_pulses_from(&regular, 0., NONE), NONE);
    same("negative", bw_train_pulses_from(&regular, 0., -1.), NONE);
    same("nothing", bw_train_pulses_from(&regular, 0., 0.), 0.);
    same("3 periods", bw_train_pulses_from(&regular, 2., 3e-3), 3.);
}

/* ---- beams ---------------------------------------------------------------------------------------- */

/* a = 3 mm, 4 mrad at 1 m: 5 mm hyperbolic, 7 mm linear. */
#define ELLIPTICAL(profile_, x, phi_x, y, phi_y)                                                                       \
    {                                                                                                                  \
        .profile = (profile_), .spread = BW_HYPERBOLIC, .diameter_m = (x), .divergence_rad = (phi_x),                  \
        .exit_diameter_m = (x), .elliptical = true, .diameter_y_m = (y), .divergence_y_rad = (phi_y),                  \
        .exit_diameter_y_m = (y)                                                                                       \
    }

static struct width_case {
    const char *name;
    struct bw_beam beam;
    double distance_m, want_smaller_m, want_larger_m, want_narrowest_m;
} widths[] = {
    {"width: hyperbolic", ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 3e-3, 4e-3, 0., 3e-3), 1., 5e-3, 5e-3, 5e-3},
    {"width: linear", ROUND(BW_GAUSSIAN, BW_LINEAR, 3e-3, 4e-3, 0., 3e-3), 1., 7e-3, 7e-3, 7e-3},
    {"width: a negative divergence widens as well", ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 3e-3, -4e-3, 0., 3e-3), 1., 5e-3,
     5e-3, 5e-3},
    {"width: divergence NaN", ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 3e-3, NONE, 0., 3e-3), 1., NONE, NONE, NONE},
    {"width: distance NaN", ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 3e-3, 4e-3, 0., 3e-3), NONE, NONE, NONE, NONE},
    {"width: distance negative", ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 3e-3, 4e-3, 0., 3e-3), -1., NONE, NONE, NONE},
    {"width: infinitely far", ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 3e-3, 4e-3, 0., 3e-3), LONG, LONG, LONG, LONG},
    {"width: infinitely far, collimated", ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 3e-3, 0., 0., 3e-3), LONG, 3e-3, 3e-3,
     3e-3},
    {"width: before the waist, no exit given", ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 3e-3, 4e-3, 1., 0.), 0., 5e-3, 5e-3,
     3e-3},
    {"width: before the waist, the exit is narrower", ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 3e-3, 4e-3, 1., 4e-3), 0., 4e-3,
     4e-3, 3e-3},
    {"width: before the waist, the exit is wider", ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 3e-3, 4e-3, 1., 6e-3), 0., 5e-3,
     5e-3, 3e-3},
    {"width: an exit narrower than the waist", ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 3e-3, 4e-3, 1., 2e-3), .5, 2e-3, 2e-3,
     2e-3},
    {"width: ellipse, x the smaller", ELLIPTICAL(BW_GAUSSIAN, 3e-3, 4e-3, 6e-3, 8e-3), 1., 5e-3, 10e-3, 5e-3},
    {"width: ellipse, y the smaller", ELLIPTICAL(BW_GAUSSIAN, 6e-3, 8e-3, 3e-3, 4e-3), 1., 5e-3, 10e-3, 5e-3},
    {"width: ellipse, distance NaN", ELLIPTICAL(BW_GAUSSIAN, 6e-3, 8e-3, 3e-3, 4e-3), NONE, NONE, NONE, NONE},
    {"width: ellipse, x divergence NaN", ELLIPTICAL(BW_GAUSSIAN, 6e-3, NONE, 3e-3, 4e-3), 1., NONE, NONE, NONE},
    {"width: ellipse, y divergence NaN", ELLIPTICAL(BW_GAUSSIAN, 6e-3, 8e-3, 3e-3, NONE), 1., NONE, NONE, NONE},
};

static void test_width(void **state) {
    const struct width_case *c = *state;
    same("smaller", bw_beam_diameter_m(&c->beam, c->distance_m), c->want_smaller_m);
    same("larger", bw_beam_widest_m(&c->beam, c->distance_m), c->want_larger_m);
    same("narrowest", bw_beam_narrowest_m(&c->beam, c->distance_m), c->want_narrowest_m);
}

/* Mean irradiance per watt over the aperture, at one place. Everything within: 4 / (pi D^2). */
#define DISC(diameter) (4. / 3.14159265358979323846 / (diameter) / (diameter))

static struct irradiance_case {
    const char *name;
    struct bw_beam beam;
    double distance_m, aperture_m, offset_m;
    double want_share, want_on_axis, want_off_axis, want_beside, want_between;
} irradiances[] = {
    /* the brightness of an ellipse squeezed to a line, twice as long as the aperture: 1/3 + sqrt(3) / (2 pi) */
    {"irradiance: evenly lit line", ELLIPTICAL(BW_TOP_HAT, 14e-3, 0., 0., 0.), 1., 7e-3, 0., .60899778104422935,
     .60899778104422935 * DISC(7e-3), .60899778104422935 * DISC(7e-3), .60899778104422935 * DISC(7e-3),
     .60899778104422935 * DISC(7e-3)},
    {"irradiance: ellipse, peak", ELLIPTICAL(BW_GAUSSIAN, 2e-3, 0., 8e-3, 0.), 1., 0., 0., 0., DISC(4e-3), DISC(4e-3),
     DISC(4e-3), DISC(4e-3)},
    /* without a width the bound between two places is what no place exceeds: all of it in the aperture */
    {"irradiance: no width, beside it", ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 0., 0., 0., 0.), 1., 7e-3, .1, 1., DISC(7e-3),
     0., 0., DISC(7e-3)},
    {"irradiance: top hat without width, beside it", ROUND(BW_TOP_HAT, BW_HYPERBOLIC, 0., 0., 0., 0.), 1., 7e-3, .1, 1.,
     DISC(7e-3), 0., 0., DISC(7e-3)},
    {"irradiance: infinitely wide, beside it", ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 1e-3, .1, 0., 1e-3), LONG, 7e-3, .1,
     0., 0., 0., 0., 0.},
    {"irradiance: peak beside the axis is exp(-4 r^2/d^2) of it",
     ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 4e-3, 0., 0., 4e-3), 1., 0., 2e-3, 0., DISC(4e-3),
     DISC(4e-3) * .36787944117144232, DISC(4e-3) * .36787944117144232, DISC(4e-3) * .36787944117144232},
    {"irradiance: aperture NaN", ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 1e-3, .1, 0., 1e-3), 1., NONE, .1, NONE, NONE, NONE,
     NONE, NONE},
    {"irradiance: aperture negative", ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 1e-3, .1, 0., 1e-3), 1., -1., .1, NONE, NONE,
     NONE, NONE, NONE},
    {"irradiance: distance NaN", ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 1e-3, .1, 0., 1e-3), NONE, 7e-3, .1, NONE, NONE,
     NONE, NONE, NONE},
    {"irradiance: distance negative, on the axis", ROUND(BW_TOP_HAT, BW_HYPERBOLIC, 1e-3, .1, 0., 1e-3), -1., 7e-3, 0.,
     NONE, NONE, NONE, NONE, NONE},
    {"irradiance: offset NaN", ROUND(BW_TOP_HAT, BW_HYPERBOLIC, 7e-3, 0., 0., 7e-3), 1., 7e-3, NONE, 1., DISC(7e-3),
     NONE, NONE, NONE},
    {"irradiance: offset negative", ROUND(BW_TOP_HAT, BW_HYPERBOLIC, 7e-3, 0., 0., 7e-3), 1., 7e-3, -1e-3, 1.,
     DISC(7e-3), NONE, NONE, NONE},
    {"irradiance: y divergence NaN", ELLIPTICAL(BW_GAUSSIAN, 6e-3, 8e-3, 3e-3, NONE), 1., 7e-3, 0., NONE, NONE, NONE,
     NONE, NONE},
    {"irradiance: x divergence NaN", ELLIPTICAL(BW_GAUSSIAN, 6e-3, NONE, 3e-3, 4e-3), 1., 7e-3, .1, NONE, NONE, NONE,
     NONE, NONE},
};

static void test_irradiance(void **state) {
    const struct irradiance_case *c = *state;
    double r = c->distance_m, D = c->aperture_m, s = c->offset_m;
    same("share", bw_beam_fraction(&c->beam, r, D), c->want_share);
    same("on axis", bw_beam_irradiance_per_w(&c->beam, r, D), c->want_on_axis);
    same("off axis", bw_beam_irradiance_off_axis_per_w(&c->beam, r, D, s), c->want_off_axis);
    same("beside", bw_beam_irradiance_beside_per_w(&c->beam, r, D, s), c->want_beside);
    same("between", bw_beam_irradiance_between_per_w(&c->beam, r, r, D, s), c->want_between);
}

/* From a point to a width: the ratio of the widths knows no bound, so the bound is all the power in the aperture. */
static void test_from_a_point(void **state) {
    (void)state;
    struct bw_beam beam = ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 0., .1, 0., 0.);
    same("bound", bw_beam_irradiance_between_per_w(&beam, 0., 1., 7e-3, .05), DISC(7e-3));
}

/* A head that says it has more emitters than there is room for: the room is not left. */
static void test_head(void **state) {
    (void)state;
    struct bw_beam beam = ELLIPTICAL(BW_GAUSSIAN, 4e-3, 0., 6e-3, 0.);
    const struct bw_beam round = ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 4e-3, 0., 0., 4e-3);
    same("radius of a round exit", bw_beam_exit_radius_m(&round), 2e-3);
    same("radius of the wider axis", bw_beam_exit_radius_m(&beam), 3e-3);
    beam.cluster.count = BW_EMITTERS_MAX + 4;
    for (size_t i = 0; i < BW_EMITTERS_MAX; i++)
        beam.cluster.at[i] = (struct bw_point){3e-3 * (double)i, 4e-3 * (double)i};
    same("outermost", bw_beam_outermost_m(&beam), 5e-3 * (BW_EMITTERS_MAX - 1));
    same("exit", bw_beam_exit_radius_m(&beam), 3e-3 + 5e-3 * (BW_EMITTERS_MAX - 1));
}

static void test_definition(void **state) {
    (void)state;
    enum bw_diameter_definition none = (enum bw_diameter_definition)9;
    same("to", bw_diameter_to_d63(1e-3, none), NONE);
    same("from", bw_diameter_from_d63(1e-3, none), NONE);
    same("top hat", bw_diameter_to_d63(1e-3, BW_D_TOP_HAT), 1e-3);
}

static struct CMUnitTest tests[COUNT(refusals) + COUNT(rights) + COUNT(varied) + COUNT(pulse_cases) + COUNT(windows) +
                               COUNT(widths) + COUNT(irradiances) + 4];

#define ADD_ROWS(rows, function)                                                                                       \
    for (size_t i = 0; i < COUNT(rows); i++)                                                                           \
        tests[count++] = (struct CMUnitTest) {                                                                         \
            rows[i].name, function, NULL, NULL, &rows[i]                                                               \
        }

int main(void) {
    size_t count = 0;
    ADD_ROWS(refusals, test_refusal);
    ADD_ROWS(rights, test_right);
    ADD_ROWS(varied, test_varied);
    ADD_ROWS(pulse_cases, test_pulse);
    ADD_ROWS(windows, test_window);
    ADD_ROWS(widths, test_width);
    ADD_ROWS(irradiances, test_irradiance);
    const struct CMUnitTest single[] = {
        cmocka_unit_test(test_spans),
        cmocka_unit_test(test_from_a_point),
        cmocka_unit_test(test_head),
        cmocka_unit_test(test_definition),
    };
    for (size_t i = 0; i < COUNT(single); i++)
        tests[count++] = single[i];
    return cmocka_run_group_tests_name("beam branches", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
