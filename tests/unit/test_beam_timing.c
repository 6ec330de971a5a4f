/* beam: bursts, gates, counts and lists of pulses made complete; what their windows hold. */
#include <math.h>
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdlib.h>
#include <string.h>

#include <cmocka.h>

#include <beamward/beam.h>

#define COUNT(array) (sizeof(array) / sizeof *(array))
#define NONE         ((double)NAN)

static void near(double got, double want, double relative, const char *what) {
    if (!(fabs(got - want) <= relative * fabs(want)))
        fail_msg("%s: got %.17g, want %.17g", what, got, want);
}

/* ---- what follows from what is given ------------------------------------------------------------ */

/* average, peak, energy, duration, rate | count, burst: on, period, pulses, rate, gate: on, period. */
static struct timed_case {
    const char *name;
    double average_w, peak_w, energy_j, duration_s, rate_hz;
    struct bw_timing timing;
    double want_average_w, want_energy_j, want_duration_s, want_rate_hz; /* by hand */
    size_t want_levels;
    struct bw_level want[BW_LEVELS_MAX];
    size_t want_count;
} timed[] = {
    /* 10 pulses of 1 mJ in 10 ms, every 100 ms: 10 mJ / 0.1 s */
    {"burst by on-time and period", NONE, NONE, 1e-3, 1e-6, 1e3, {NONE, .01, .1, NONE, NONE, NONE, NONE, NULL, 0},
     .1, 1e-3, 1e-6, 1e3, 1, {{.01, .1, 10}}, 0},
    {"burst by pulses and rate", NONE, NONE, 1e-3, 1e-6, 1e3, {NONE, NONE, NONE, 10, 10, NONE, NONE, NULL, 0},
     .1, 1e-3, 1e-6, 1e3, 1, {{.01, .1, 10}}, 0},
    {"burst by all four", NONE, NONE, 1e-3, 1e-6, 1e3, {NONE, .01, .1, 10, 10, NONE, NONE, NULL, 0},
     .1, 1e-3, 1e-6, 1e3, 1, {{.01, .1, 10}}, 0},
    {"the rate follows from on-time and pulses", NONE, NONE, 1e-3, 1e-6, NONE,
     {NONE, .01, .1, 10, NONE, NONE, NONE, NULL, 0}, .1, 1e-3, 1e-6, 1e3, 1, {{.01, .1, 10}}, 0},
    /* average and peak are those while it is on: 1 W = 1 mJ x 1 kHz */
    {"average power is that while on", 1., 1e3, NONE, NONE, 1e3, {NONE, .01, .1, NONE, NONE, NONE, NONE, NULL, 0},
     .1, 1e-3, 1e-6, 1e3, 1, {{.01, .1, 10}}, 0},
    /* the eleventh pulse begins at 10 ms and is finished: 11 mJ / 0.1 s */
    {"what has begun is finished", NONE, NONE, 1e-3, 1e-4, 1e3, {NONE, .01005, .1, NONE, NONE, NONE, NONE, NULL, 0},
     .11, 1e-3, 1e-4, 1e3, 1, {{.01005, .1, 11}}, 0},
    {"rounding begins no pulse: 0.3 s of 10 Hz", NONE, NONE, 1e-3, 1e-4, 10.,
     {NONE, .3, 1., NONE, NONE, NONE, NONE, NULL, 0}, 3e-3, 1e-3, 1e-4, 10., 1, {{.3, 1., 3}}, 0},
    /* 10 pulses a burst, 5 bursts in 0.5 s, every 2 s: 50 mJ / 2 s */
    {"bursts in a gate", NONE, NONE, 1e-3, 1e-6, 1e3, {NONE, .01, .1, NONE, NONE, .5, 2., NULL, 0},
     .025, 1e-3, 1e-6, 1e3, 2, {{.01, .1, 10}, {.5, 2., 5}}, 0},
    {"a gate alone", NONE, NONE, 1e-3, 1e-6, 1e3, {NONE, NONE, NONE, NONE, NONE, .5, 2., NULL, 0},
     .25, 1e-3, 1e-6, 1e3, 1, {{.5, 2., 500}}, 0},
    /* continuous 8 W for 0.1 s every second: pulses of 0.8 J */
    {"continuous in a gate", 8., NONE, NONE, NONE, NONE, {NONE, NONE, NONE, NONE, NONE, .1, 1., NULL, 0},
     .8, .8, .1, 1., 0, {{0., 0., 0.}}, 0},
    {"continuous in a gate, by its peak", NONE, 8., NONE, NONE, NONE, {NONE, NONE, NONE, NONE, NONE, .1, 1., NULL, 0},
     .8, .8, .1, 1., 0, {{0., 0., 0.}}, 0},
    /* 8 W, 10 ms every 50 ms, for 0.5 s every 2 s: 10 of 80 mJ / 2 s */
    {"continuous in bursts in a gate", 8., NONE, NONE, NONE, NONE, {NONE, .01, .05, NONE, NONE, .5, 2., NULL, 0},
     .4, .08, .01, 20., 1, {{.5, 2., 10}}, 0},
    {"a burst that never pauses changes nothing", NONE, NONE, 1e-3, 1e-6, 1e3,
     {NONE, .01, .01, NONE, NONE, NONE, NONE, NULL, 0}, 1., 1e-3, 1e-6, 1e3, 0, {{0., 0., 0.}}, 0},
    /* bursts of 10 without pause, a gate that opens in the middle of one: the burst is finished, 30 pulses */
    {"bursts without pause inside a gate", NONE, NONE, 1e-3, 1e-6, 1e3,
     {NONE, .01, .01, NONE, NONE, .025, 1., NULL, 0}, .03, 1e-3, 1e-6, 1e3, 1, {{.025, 1., 30}}, 0},
    {"bursts of one pulse are pulses", NONE, NONE, 1e-3, 1e-6, 1e3, {NONE, NONE, .1, 1, NONE, NONE, NONE, NULL, 0},
     .01, 1e-3, 1e-6, 10., 0, {{0., 0., 0.}}, 0},
    /* finite: the mean lasts from the first pulse to the end of the last */
    {"a single pulse", NONE, NONE, .5, .1, NONE, {1, NONE, NONE, NONE, NONE, NONE, NONE, NULL, 0},
     5., .5, .1, 0., 0, {{0., 0., 0.}}, 1},
    {"a single pulse by its peak", NONE, 5., NONE, .1, NONE, {1, NONE, NONE, NONE, NONE, NONE, NONE, NULL, 0},
     5., .5, .1, 0., 0, {{0., 0., 0.}}, 1},
    {"a single pulse by energy and peak", NONE, 5., .5, NONE, NONE, {1, NONE, NONE, NONE, NONE, NONE, NONE, NULL, 0},
     5., .5, .1, 0., 0, {{0., 0., 0.}}, 1},
    /* 5 of 0.5 J in 4 x 0.2 s + 0.1 s */
    {"five pulses", NONE, NONE, .5, .1, 5., {5, NONE, NONE, NONE, NONE, NONE, NONE, NULL, 0},
     2.5 / .9, .5, .1, 5., 0, {{0., 0., 0.}}, 5},
    {"more than one burst", NONE, NONE, 1e-3, 1e-6, 1e3, {25, .01, .1, NONE, NONE, NONE, NONE, NULL, 0},
     .025 / (.2 + 4e-3 + 1e-6), 1e-3, 1e-6, 1e3, 1, {{.01, .1, 10}}, 25},
    {"all within one burst", NONE, NONE, 1e-3, 1e-6, 1e3, {10, .01, .1, NONE, NONE, .5, 2., NULL, 0},
     .01 / (9e-3 + 1e-6), 1e-3, 1e-6, 1e3, 0, {{0., 0., 0.}}, 10},
    {"all within one gate", NONE, NONE, 1e-3, 1e-6, 1e3, {50, .01, .1, NONE, NONE, .5, 2., NULL, 0},
     .05 / (.4 + 9e-3 + 1e-6), 1e-3, 1e-6, 1e3, 1, {{.01, .1, 10}}, 50},
};

static void test_timed(void **state) {
    const struct timed_case *c = *state;
    struct bw_emission_input input = {905., c->average_w, c->peak_w, c->energy_j, c->duration_s, c->rate_hz, &c->timing};
    struct bw_emission e;
    struct bw_error error = {.status = BW_OK};
    if (bw_emission_resolve(&input, &e, &error) != BW_OK)
        fail_msg("%s", error.text);
    assert_false(e.continuous);
    near(e.average_power_w, c->want_average_w, 1e-12, "average power");
    near(e.pulse_energy_j, c->want_energy_j, 1e-12, "pulse energy");
    near(e.pulse_duration_s, c->want_duration_s, 1e-12, "duration");
    near(e.peak_power_w, c->want_energy_j / c->want_duration_s, 1e-12, "peak power");
    near(e.repetition_rate_hz, c->want_rate_hz, 1e-12, "rate");
    assert_int_equal(e.pulse_count, c->want_count);
    assert_int_equal(e.level_count, c->want_levels);
    for (size_t i = 0; i < c->want_levels; i++) {
        near(e.levels[i].on_s, c->want[i].on_s, 1e-12, "on");
        near(e.levels[i].period_s, c->want[i].period_s, 1e-12, "period");
        near(e.levels[i].holds, c->want[i].holds, 0., "holds");
    }
}

static void test_stays_continuous(void **state) {
    (void)state;
    struct bw_timing timing = bw_timing_none();
    struct bw_emission_input input = {905., 8., NONE, NONE, NONE, NONE, &timing};
    struct bw_emission e;
    timing.gate_on_s = timing.gate_period_s = 2.;
    assert_int_equal(bw_emission_resolve(&input, &e, NULL), BW_OK);
    assert_true(e.continuous);
    near(e.average_power_w, 8., 0., "average power");
    timing = bw_timing_none();
    assert_int_equal(bw_emission_resolve(&input, &e, NULL), BW_OK);
    assert_true(e.continuous);
}

/* ---- refusals ---------------------------------------------------------------------------------- */

static struct refusal_case {
    const char *name;
    double average_w, peak_w, energy_j, duration_s, rate_hz;
    struct bw_timing timing;
    enum bw_status status;
    const char *text;
} refusals[] = {
    {"refused: burst holds another number", NONE, NONE, 1e-3, 1e-6, 1e3,
     {NONE, .01, .1, 12, NONE, NONE, NONE, NULL, 0}, BW_INPUT,
     "a burst of 0.01 s holds 10 pulses 0.001 s apart, but 12 are given: 20 % off; leave one of them out or correct "
     "one"},
    {"refused: burst period and rate", NONE, NONE, 1e-3, 1e-6, 1e3,
     {NONE, .01, .1, NONE, 11, NONE, NONE, NULL, 0}, BW_INPUT,
     "burst period 0.1 s, but a burst rate of 11 Hz gives 0.0909091 s: 10 % off; leave one of them out or correct one"},
    {"refused: rate against on-time and pulses", NONE, NONE, 1e-3, 1e-6, 500.,
     {NONE, .01, .1, 10, NONE, NONE, NONE, NULL, 0}, BW_INPUT,
     "a burst of 0.01 s holds 5 pulses 0.002 s apart, but 10 are given: 100 % off; leave one of them out or correct "
     "one"},
    {"refused: burst without period", NONE, NONE, 1e-3, 1e-6, 1e3,
     {NONE, .01, NONE, NONE, NONE, NONE, NONE, NULL, 0}, BW_INPUT,
     "the bursts have no period; give the burst period or burst rate"},
    {"refused: burst without length", NONE, NONE, 1e-3, 1e-6, 1e3,
     {NONE, NONE, .1, NONE, NONE, NONE, NONE, NULL, 0}, BW_INPUT,
     "the bursts have no length; give the burst on-time or the number of pulses in a burst"},
    {"refused: gate without period", NONE, NONE, 1e-3, 1e-6, 1e3, {NONE, NONE, NONE, NONE, NONE, .5, NONE, NULL, 0},
     BW_INPUT, "gate on-time and gate period need each other; only one is given"},
    {"refused: on for longer than the period", NONE, NONE, 1e-3, 1e-6, 1e3,
     {NONE, NONE, NONE, NONE, NONE, .5, .4, NULL, 0}, BW_INPUT,
     "the gate is on for 0.5 s, 1.25 times its period of 0.4 s; it must be at most once"},
    {"refused: the last pulse does not end in time", NONE, NONE, 1e-3, 5e-4, 1e3,
     {NONE, .0092, .0093, NONE, NONE, NONE, NONE, NULL, 0}, BW_INPUT,
     "the 10 pulses of a burst last 0.0095 s until the last one has ended, but the next burst begins after 0.0093 s: "
     "2.15 % too long"},
    {"refused: bursts do not fit into the gate", NONE, NONE, 1e-3, 1e-6, 1e3,
     {NONE, .05, .1, NONE, NONE, .31, .32, NULL, 0}, BW_INPUT,
     "the 4 bursts of a gate last 0.349001 s until the last one has ended, but the next gate begins after 0.32 s: "
     "9.06 % too long"},
    {"refused: number of pulses of a continuous burst", 8., NONE, NONE, NONE, NONE,
     {NONE, NONE, .1, 3, NONE, NONE, NONE, NULL, 0}, BW_INPUT,
     "a number of pulses in a burst is given, but the emission inside is continuous; give the pulses as well, or the "
     "burst on-time alone"},
    {"refused: average and peak of a continuous burst", 4., 8., NONE, NONE, NONE,
     {NONE, .01, .1, NONE, NONE, NONE, NONE, NULL, 0}, BW_INPUT,
     "average power 4 W and peak power 8 W differ by 50 %, but while the emission is on they are the same; leave one of "
     "them out, or give the pulses inside"},
    {"refused: count of a continuous emission", 8., NONE, NONE, NONE, NONE,
     {3, NONE, NONE, NONE, NONE, NONE, NONE, NULL, 0}, BW_INPUT,
     "a pulse count is given, but the emission is continuous; give pulse energy or peak power, and pulse duration"},
    {"refused: count of half a pulse", NONE, NONE, 1e-3, 1e-6, 1e3,
     {2.5, NONE, NONE, NONE, NONE, NONE, NONE, NULL, 0}, BW_ARGUMENT,
     "pulse count is 2.5; a whole number from 1 to 1e+09 would be right"},
    {"refused: no pulse", NONE, NONE, 1e-3, 1e-6, 1e3, {0, NONE, NONE, NONE, NONE, NONE, NONE, NULL, 0}, BW_ARGUMENT,
     "pulse count is 0; a whole number from 1 to 1e+09 would be right"},
    {"refused: gate on for no time", NONE, NONE, 1e-3, 1e-6, 1e3, {NONE, NONE, NONE, NONE, NONE, 0, 1, NULL, 0},
     BW_ARGUMENT, "gate on-time is 0 s, outside 1e-15 to 30000 s"},
    {"refused: single pulse, too little", NONE, NONE, 1e-3, NONE, NONE,
     {1, NONE, NONE, NONE, NONE, NONE, NONE, NULL, 0}, BW_INPUT,
     "pulse energy alone does not describe the pulse; a single pulse needs two of peak power, pulse energy, pulse "
     "duration"},
    {"refused: single pulse, nothing", NONE, NONE, NONE, NONE, NONE,
     {1, NONE, NONE, NONE, NONE, NONE, NONE, NULL, 0}, BW_INPUT,
     "nothing is given of the pulse; a single pulse needs two of peak power, pulse energy, pulse duration"},
    {"refused: single pulse, contradiction", NONE, 2e3, 1e-3, 1e-6, NONE,
     {1, NONE, NONE, NONE, NONE, NONE, NONE, NULL, 0}, BW_INPUT,
     "pulse energy 0.001 J, but 2000 W x 1 us gives 0.002 J: 50 % off; leave one of them out or correct one"},
    {"refused: two pulses without rate", NONE, NONE, 1e-3, 1e-6, NONE,
     {2, NONE, NONE, NONE, NONE, NONE, NONE, NULL, 0}, BW_INPUT,
     "pulse energy and pulse duration do not describe the pulses; give the average power or repetition rate as well"},
};

static void test_refusal(void **state) {
    const struct refusal_case *c = *state;
    struct bw_emission_input input = {905., c->average_w, c->peak_w, c->energy_j, c->duration_s, c->rate_hz, &c->timing};
    struct bw_emission e;
    struct bw_error error = {.status = BW_OK};
    enum bw_status status = bw_emission_resolve(&input, &e, &error);
    assert_string_equal(error.text, c->text);
    assert_int_equal(status, c->status);
    assert_true(isnan(e.average_power_w) && isnan(e.pulse_energy_j) && e.level_count == 0 && e.pulse_count == 0);
}

/* ---- lists -------------------------------------------------------------------------------------- */

static enum bw_status resolve_list(const struct bw_pulse *pulses, size_t count, struct bw_emission *e,
                                   struct bw_error *error) {
    struct bw_timing timing = bw_timing_none();
    struct bw_emission_input input = {905., NONE, NONE, NONE, NONE, NONE, &timing};
    timing.pulses = pulses;
    timing.pulses_given = count;
    return bw_emission_resolve(&input, e, error);
}

static void test_list(void **state) {
    (void)state;
    const struct bw_pulse pulses[] = {{5., .1, .2}, {5.5, .2, .6}, {6., .01, .1}};
    struct bw_emission e;
    assert_int_equal(resolve_list(pulses, 3, &e, NULL), BW_OK);
    near(e.average_power_w, .9 / 1.01, 1e-14, "0.9 J from 5 to 6.01 s");
    near(e.pulse_energy_j, .6, 0., "largest energy");
    near(e.pulse_duration_s, .2, 0., "its duration");
    near(e.peak_power_w, 10., 1e-14, "largest peak is of another");
    assert_int_equal(e.pulse_count, 3);
    near(bw_train_pulse_count(&e, .6), 2., 0., "two begin within 0.6 s");
    near(bw_train_pulse_count(&e, .5), 1., 0., "0.5 s later the next begins");
    near(bw_train_window_energy(&e, .2), .6, 1e-14, "0.2 s");
    near(bw_train_window_energy(&e, .35), .6, 1e-14, "0.35 s");
    near(bw_train_window_energy(&e, .51), .7, 1e-14, "0.51 s: 5.5 to 6.01");
    near(bw_train_window_energy(&e, .65), .6 + .1, 1e-14, "0.65 s: 5.5 to 6.15");
    near(bw_train_window_energy(&e, .67), .6 + .2 * .7, 1e-14, "0.67 s: 5.03 to 5.7");
    near(bw_train_window_energy(&e, 9.), .9, 1e-14, "all");
    e.pulse_energy_j *= 2.; /* scaled, as by a tolerance */
    near(bw_train_window_energy(&e, 9.), 1.8, 1e-14, "scaled");
    assert_true(isnan(bw_train_window_energy(&e, NONE)) && isnan(bw_train_pulse_count(&e, NONE)));
}

static struct list_case {
    const char *name;
    struct bw_pulse pulses[3];
    size_t count;
    const char *text; /* NULL: sound */
} lists[] = {
    {"list: touching", {{0., .1, 1.}, {.1, .1, 1.}, {.2, .1, 1.}}, 3, NULL},
    {"list: touching to rounding", {{.1, .1, 1.}, {.2, .1, 1.}, {.3, .1, 1.}}, 3, NULL},
    {"list: before time 0", {{-1., .1, 1.}}, 1, NULL},
    {"list refused: empty", {{0., .1, 1.}}, 0, "the list has 0 pulses; 1 to 1000000 would be right"},
    {"list refused: overlap", {{0., .1, 1.}, {.09, .1, 1.}}, 2,
     "pulse 2: starts at 0.09 s, 0.01 s before the pulse before it ends"},
    {"list refused: descending", {{1., .1, 1.}, {.5, .1, 1.}}, 2,
     "pulse 2: starts at 0.5 s, not after the pulse before it (1 s)"},
    {"list refused: twice", {{1., .1, 1.}, {1., .1, 1.}}, 2,
     "pulse 2: starts at 1 s, not after the pulse before it (1 s)"},
    {"list refused: no duration", {{0., 0., 1.}}, 1, "pulse 1: duration is 0 s, outside 1e-15 to 30000 s"},
    {"list refused: energy negative", {{0., .1, -1.}}, 1, "pulse 1: energy is -1 J, outside 1e-18 to 1e+06 J"},
    {"list refused: start NaN", {{NONE, .1, 1.}}, 1, "pulse 1: start is nan s, outside -1e+09 to 1e+09 s"},
};

static void test_list_check(void **state) {
    const struct list_case *c = *state;
    struct bw_emission e;
    struct bw_error error = {.status = BW_OK};
    enum bw_status status = resolve_list(c->pulses, c->count, &e, &error);
    assert_int_equal(status, c->text == NULL ? BW_OK : BW_INPUT);
    if (c->text != NULL)
        assert_string_equal(error.text, c->text);
}

static void test_list_and_power(void **state) {
    (void)state;
    const struct bw_pulse pulse = {0., .1, 1.};
    struct bw_timing timing = bw_timing_none();
    struct bw_emission_input input = {905., 1., NONE, NONE, NONE, NONE, &timing};
    struct bw_emission e;
    timing.pulses = &pulse;
    timing.pulses_given = 1;
    assert_int_equal(bw_emission_resolve(&input, &e, NULL), BW_INPUT);
    input.average_power_w = NONE;
    timing.gate_on_s = 1.;
    assert_int_equal(bw_emission_resolve(&input, &e, NULL), BW_INPUT);
}

/* ---- windows of trains with bursts and gates ------------------------------------------------------ */

/* By hand: 3 pulses of 0.1 s every second, bursts every 10 s, 2 bursts in a gate, gates every 100 s. Starts: 0 1 2,
 * 10 11 12, 100 101 102, 110 111 112, ... */
static struct window_case {
    const char *name;
    double window_s, pulses, begun;
} windows[] = {
    {"nested window: one pulse", .1, 1., 1.},
    {"nested window: a burst", 2.1, 3., 3.},
    {"nested window: and the gap", 10., 3., 3.},
    {"nested window: and half a pulse", 10.05, 3.5, 4.},
    {"nested window: both bursts", 12.1, 6., 6.},
    {"nested window: and the gap of the gate", 100., 6., 6.},
    {"nested window: three bursts", 102.1, 9., 9.},
    {"nested window: two gates", 112.1, 12., 12.},
    {"nested window: ten gates", 1000., 60., 60.},
    {"nested window: 1e8 gates and a pulse", 1e10 + .1, 6e8 + 1., 6e8 + 1.},
};

static void test_window(void **state) {
    const struct window_case *c = *state;
    struct bw_timing timing = {NONE, NONE, 10., 3, NONE, 20., 100., NULL, 0};
    struct bw_emission_input input = {905., NONE, NONE, 2., .1, 1., &timing};
    struct bw_emission e;
    assert_int_equal(bw_emission_resolve(&input, &e, NULL), BW_OK);
    near(bw_train_window_energy(&e, c->window_s), 2. * c->pulses, 1e-12, "energy");
    near(bw_train_pulse_count(&e, c->window_s), c->begun, 0., "begun");
}

/* Bursts closer to each other than their pulses: 0 1 2, 2.2 3.2 4.2, ... The densest window opens with the last. */
static void test_closer_bursts(void **state) {
    (void)state;
    struct bw_timing timing = {NONE, NONE, 2.2, 3, NONE, NONE, NONE, NULL, 0};
    struct bw_emission_input input = {905., NONE, NONE, 2., .1, 1., &timing};
    struct bw_emission e;
    double first[BW_STARTS_MAX];
    assert_int_equal(bw_emission_resolve(&input, &e, NULL), BW_OK);
    assert_int_equal(bw_train_starts(&e, first), 2);
    near(bw_train_window_energy(&e, .3), 4., 1e-12, "2 to 2.3");
    near(bw_train_window_energy(&e, .25), 3., 1e-12, "2 to 2.25");
    near(bw_train_window_energy(&e, 2.5), 10., 1e-12, "2 to 4.5 holds 2, 2.2, 3.2, 4.2 and 4.4");
    near(bw_train_pulse_count(&e, .21), 2., 0., "2 and 2.2");
}

static void test_end_of_train(void **state) {
    (void)state;
    struct bw_timing timing = {4, NONE, 10., 3, NONE, NONE, NONE, NULL, 0};
    struct bw_emission_input input = {905., NONE, NONE, 2., .1, 1., &timing};
    struct bw_emission e;
    assert_int_equal(bw_emission_resolve(&input, &e, NULL), BW_OK);
    near(bw_train_window_energy(&e, 1e6), 8., 1e-12, "four pulses, no more");
    near(bw_train_window_energy(&e, HUGE_VAL), 8., 1e-12, "ever");
    near(bw_train_pulse_count(&e, 1e6), 4., 0., "four pulses, no more");
    timing.pulse_count = 1;
    assert_int_equal(bw_emission_resolve(&input, &e, NULL), BW_OK);
    near(bw_train_window_energy(&e, .05), 1., 1e-12, "half of one");
    near(bw_train_window_energy(&e, 7.), 2., 1e-12, "one");
}

static struct CMUnitTest tests[COUNT(timed) + COUNT(refusals) + COUNT(lists) + COUNT(windows) + 5];

#define ADD_ROWS(rows, function)                                                                                       \
    for (size_t i = 0; i < COUNT(rows); i++)                                                                           \
        tests[count++] = (struct CMUnitTest) {                                                                         \
            rows[i].name, function, NULL, NULL, &rows[i]                                                               \
        }

int main(void) {
    size_t count = 0;
    ADD_ROWS(timed, test_timed);
    ADD_ROWS(refusals, test_refusal);
    ADD_ROWS(lists, test_list_check);
    ADD_ROWS(windows, test_window);
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_stays_continuous);
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_list);
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_list_and_power);
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_closer_bursts);
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_end_of_train);
    return cmocka_run_group_tests_name("beam timing", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
