/* hazard: what is refused, what fails on the way and is handed on, and the ways that ordinary outputs do not take. */
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
#define LONG         ((double)INFINITY)
#define ALL          ((size_t)BW_EMISSIONS_MAX)

static void near(const char *what, double got, double want, double relative) {
    bool alike = isnan(want)   ? isnan(got) != 0
                 : isinf(want) ? isinf(got) != 0 && got > 0.
                               : fabs(got - want) <= relative * fabs(want);
    if (!alike)
        fail_msg("%s: got %.17g, want %.17g", what, got, want);
}

static void begins(const char *got, const char *want) {
    if (strncmp(got, want, strlen(want)) != 0)
        fail_msg("got \"%s\", want \"%s...\"", got, want);
}

/* Some step of the working has this symbol and value. */
static void wrote(const struct bw_working *working, const char *symbol, double value) {
    assert_false(working->failed);
    for (size_t i = 0; i < working->count; i++) {
        double got = working->steps[i].value;
        bool alike = isinf(value) ? isinf(got) != 0 && got > 0. : fabs(got - value) <= 1e-12 * fabs(value);
        if (!working->steps[i].heading && strcmp(working->steps[i].symbol, symbol) == 0 && alike)
            return;
    }
    fail_msg("no step %s = %.17g", symbol, value);
}

static const struct bw_beam plain = ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 3e-3, .1, 0., 3e-3);

/* 810 nm from 10 s on: 10 CA W/m2, CA = 10^(0.002 (810 - 700)) */
static double limit_810(void) {
    return 10. * pow(10., .22);
}

static void add_watts(struct bw_output *output, double wavelength_nm, double power_w, struct bw_beam beam) {
    struct bw_emission_input input = {wavelength_nm, power_w, NONE, NONE, NONE, NONE, NULL};
    assert_int_equal(bw_emission_resolve(&input, &output->emissions[output->count], NULL), BW_OK);
    output->beams[output->count++] = beam;
}

static struct bw_timing counted(double pulse_count) {
    struct bw_timing timing = bw_timing_none();
    timing.pulse_count = pulse_count;
    return timing;
}

static void prepare(struct bw_hazard *hazard, const struct bw_output *output, double exposure_s) {
    struct bw_viewing_case viewing = {BW_EYE, exposure_s, 0., 0.};
    struct bw_error error = {.status = BW_OK};
    if (bw_hazard_prepare(bw_tables_find("icnirp-2013"), output, &viewing, hazard, NULL, &error) != BW_OK)
        fail_msg("%s", error.text);
}

/* ---- outputs that are refused --------------------------------------------------------------------- */

#define BEAM(...)                                                                                                      \
    {                                                                                                                  \
        .profile = BW_GAUSSIAN, .diameter_m = 3e-3, .divergence_rad = .1, .exit_diameter_m = 3e-3, __VA_ARGS__         \
    }

static struct refusal_case {
    const char *name;
    size_t count;
    double stand_off_m;
    struct bw_beam beam;
    const char *text;
} refusals[] = {
    {"refused: no emission", 0, 0., BEAM(.waist_m = 0.), "0 emissions leave the handpiece; 1 to 16"},
    {"refused: too many emissions", 17, 0., BEAM(.waist_m = 0.), "17 emissions leave the handpiece; 1 to 16"},
    {"refused: stand-off negative", 1, -.1, BEAM(.waist_m = 0.), "the stand-off is -0.1 m, outside 0 to 100 m"},
    {"refused: stand-off too long", 1, 101., BEAM(.waist_m = 0.), "the stand-off is 101 m, outside"},
    {"refused: stand-off NaN", 1, NONE, BEAM(.waist_m = 0.), "the stand-off is nan m, outside"},
    {"refused: waist behind the exit", 1, 0., BEAM(.waist_m = -1.), "the waist is at -1 m"},
    {"refused: waist infinitely far", 1, 0., BEAM(.waist_m = LONG), "the waist is at inf m"},
    {"refused: waist NaN", 1, 0., BEAM(.waist_m = NONE), "the waist is at nan m"},
    {"refused: source negative", 1, 0., BEAM(.source_m = -1e-3), "the apparent source of -0.001 m lies 0 m behind"},
    {"refused: source too wide", 1, 0., BEAM(.source_m = 1.1), "the apparent source of 1.1 m lies 0 m behind"},
    {"refused: source in front", 1, 0., BEAM(.source_behind_m = -.1), "the apparent source of 0 m lies -0.1 m behind"},
    {"refused: source too far behind", 1, 0., BEAM(.source_behind_m = 101.), "the apparent source of 0 m lies 101 m"},
    {"refused: source NaN", 1, 0., BEAM(.source_m = NONE), "the apparent source of nan m"},
    {"refused: y diameter too wide", 1, 0., BEAM(.elliptical = true, .diameter_y_m = 11.), "beam diameter is 11 m"},
    {"refused: y divergence NaN", 1, 0., BEAM(.elliptical = true, .divergence_y_rad = NONE), "divergence is nan rad"},
    {"refused: more emitters than there is room for", 1, 0., BEAM(.cluster = {.count = 17}), "17 emitters; 1 to 16"},
    {"refused: emitter too far to the side", 1, 0., BEAM(.cluster = {.count = 1, .at = {{1.1, 0.}}, .share = {1.}}),
     "emitter 1 is more than 1 m off the axis"},
    {"refused: emitter too far up", 1, 0., BEAM(.cluster = {.count = 1, .at = {{0., -1.1}}, .share = {1.}}),
     "emitter 1 is more than 1 m off the axis"},
    {"refused: share negative", 1, 0., BEAM(.cluster = {.count = 1, .share = {-1.}}), "emitter 1 has the share -1"},
    {"refused: shares too small", 1, 0., BEAM(.cluster = {.count = 1, .share = {.9}}), "the shares of the emitters sum"},
};

/* Nothing is prepared then, and whatever is asked of it is no number and no distance. */
static void test_refusal(void **state) {
    const struct refusal_case *c = *state;
    struct bw_output output = {.count = 0};
    struct bw_viewing_case viewing = {BW_EYE, 10., 0., 0.};
    struct bw_error error = {.status = BW_OK};
    struct bw_hazard hazard;
    struct bw_reach reach;
    for (size_t i = 0; i < BW_EMISSIONS_MAX; i++)
        add_watts(&output, 810., 1., plain);
    output.beams[0] = c->beam;
    output.count = c->count;
    output.stand_off_m = c->stand_off_m;
    const struct bw_table *table = bw_tables_find("icnirp-2013");
    assert_int_equal(bw_hazard_prepare(table, &output, &viewing, &hazard, NULL, &error), BW_ARGUMENT);
    assert_int_equal(error.status, BW_ARGUMENT);
    begins(error.text, c->text);
    near("ratio", bw_hazard_ratio(&hazard, 1.), NONE, 0.);
    assert_int_equal(bw_hazard_reach(&hazard, ALL, &reach, NULL, NULL), BW_ARGUMENT);
    near("reach", reach.distance_m, NONE, 0.);
}

/* ---- how long until the limit --------------------------------------------------------------------- */

enum law { RISES, STEPS, NEVER, AT_ONCE };
struct told {
    enum law law;
    int calls, fails_at; /* 0 = never */
};

static enum bw_status ratio_after(double exposure_s, void *context, double *ratio, struct bw_error *error) {
    struct told *told = context;
    if (++told->calls == told->fails_at)
        return bw_error_set(error, BW_SYSTEM, "call %d", told->calls);
    *ratio = told->law == RISES ? exposure_s : told->law == STEPS ? (exposure_s <= 7. ? 0. : 2.) : told->law == NEVER ? .5 : 2.;
    return BW_OK;
}

static struct time_case {
    const char *name;
    enum law law;
    int fails_at;
    enum bw_status status;
    double want_s;
    bool unbounded;
} times[] = {
    {"time: the ratio is the time", RISES, 0, BW_OK, 1., false},
    {"time: a step at 7 s", STEPS, 0, BW_OK, 7., false},
    {"time: never", NEVER, 0, BW_OK, LONG, true},
    {"time: at once", AT_ONCE, 0, BW_OK, 0., false},
    {"time: fails at the shortest", RISES, 1, BW_SYSTEM, NONE, false},
    {"time: fails at the first edge", RISES, 2, BW_SYSTEM, NONE, false},
    {"time: never, fails on the way", NEVER, 3, BW_SYSTEM, NONE, false},
};

static enum bw_status time_of(struct told *told, size_t count, struct bw_permitted_time *time,
                              struct bw_error *error) {
    struct bw_output output = {.count = 0};
    const struct bw_output *outputs[] = {&output};
    struct bw_viewing_case viewing = {BW_EYE, 10., 0., 0.};
    add_watts(&output, 810., 1., plain);
    return bw_hazard_time_to_limit(bw_tables_find("icnirp-2013"), outputs, count, &viewing, ratio_after, told, time,
                                   error);
}

static void test_time(void **state) {
    const struct time_case *c = *state;
    struct told told = {c->law, 0, c->fails_at};
    struct bw_permitted_time time;
    struct bw_error error = {.status = BW_OK};
    assert_int_equal(time_of(&told, 1, &time, &error), c->status);
    assert_int_equal(error.status, c->status);
    near("time", time.exposure_s, c->want_s, 2e-12);
    assert_true(time.unbounded == c->unbounded);
}

/* Whichever call fails, the search ends with it: no time, and nothing more is asked. */
static void test_time_fails(void **state) {
    (void)state;
    struct told whole = {STEPS, 0, 0};
    struct bw_permitted_time time;
    assert_int_equal(time_of(&whole, 1, &time, NULL), BW_OK);
    assert_true(whole.calls > 10);
    for (int i = 1; i <= whole.calls; i++) {
        struct told told = {STEPS, 0, i};
        assert_int_equal(time_of(&told, 1, &time, NULL), BW_SYSTEM);
        assert_int_equal(told.calls, i);
        near("time", time.exposure_s, NONE, 0.);
        assert_false(time.unbounded);
    }
    assert_int_equal(time_of(&whole, 0, &time, NULL), BW_ARGUMENT);
    near("time of nothing", time.exposure_s, NONE, 0.);
}

static struct permitted_case {
    const char *name, *table;
    double wavelength_nm, power_w, distance_m;
    enum bw_status status;
    double want_s;
} permitted[] = {
    {"permitted: no row for the wavelength", "ansi-z136-1-2014", 1500., 1., 1., BW_OUT_OF_RANGE, NONE},
    {"permitted: distance negative", "icnirp-2013", 810., 1., -1., BW_ARGUMENT, NONE},
    {"permitted: distance NaN", "icnirp-2013", 810., 1., NONE, BW_ARGUMENT, NONE},
    {"permitted: a microwatt for ever", "icnirp-2013", 810., 1e-6, 1., BW_OK, LONG},
    {"permitted: a gigawatt not at all", "icnirp-2013", 810., 1e9, 0., BW_OK, 0.},
};

static void test_permitted(void **state) {
    const struct permitted_case *c = *state;
    struct bw_output output = {.count = 0};
    struct bw_viewing_case viewing = {BW_EYE, 10., 0., 0.};
    struct bw_working working = {.steps = NULL};
    struct bw_permitted_time time;
    struct bw_error error = {.status = BW_OK};
    add_watts(&output, c->wavelength_nm, c->power_w, plain);
    assert_int_equal(bw_hazard_permitted_time(bw_tables_find(c->table), &output, &viewing, c->distance_m, &time,
                                              &working, &error),
                     c->status);
    assert_int_equal(error.status, c->status);
    near("time", time.exposure_s, c->want_s, 0.);
    assert_true(time.unbounded == (isinf(c->want_s) != 0));
    assert_true((working.count > 0) == (c->status == BW_OK));
    if (working.count > 0)
        wrote(&working, "te", c->want_s);
    bw_working_free(&working);
}

/* ---- trains that are incomplete, or longer than the tables ---------------------------------------- */

static const struct bw_pulse far_apart[] = {{0., .1, 1e-3}, {3.5e4, .1, 1e-3}};

static struct train_case {
    const char *name, *table;
    struct bw_emission emission;
    double exposure_s;
    enum bw_status status;
} trains[] = {
#define TRAIN(...) {.wavelength_nm = 810., .average_power_w = 1., .peak_power_w = 1e6, __VA_ARGS__}
    {"train: no duration", "icnirp-2013", TRAIN(.pulse_energy_j = 1., .repetition_rate_hz = 1.), 10., BW_ARGUMENT},
    {"train: no energy", "icnirp-2013", TRAIN(.pulse_duration_s = 1e-6, .repetition_rate_hz = 1.), 10., BW_ARGUMENT},
    {"train: no rate", "icnirp-2013", TRAIN(.pulse_energy_j = 1., .pulse_duration_s = 1e-6), 10., BW_ARGUMENT},
    {"train: rate NaN", "icnirp-2013",
     TRAIN(.pulse_energy_j = 1., .pulse_duration_s = 1e-6, .repetition_rate_hz = NONE), 10., BW_ARGUMENT},
    {"train: no exposure", "icnirp-2013",
     TRAIN(.pulse_energy_j = 1., .pulse_duration_s = 1e-6, .repetition_rate_hz = 1.), 0., BW_ARGUMENT},
    {"train: exposure infinite", "icnirp-2013",
     TRAIN(.pulse_energy_j = 1., .pulse_duration_s = 1e-6, .repetition_rate_hz = 1.), LONG, BW_ARGUMENT},
    {"train: power NaN", "icnirp-2013", {.wavelength_nm = 810., .continuous = true, .average_power_w = NONE}, 10.,
     BW_ARGUMENT},
    {"train: power infinite", "icnirp-2013", {.wavelength_nm = 810., .continuous = true, .average_power_w = LONG}, 10.,
     BW_ARGUMENT},
    {"train: one pulse needs no rate", "icnirp-2013",
     TRAIN(.pulse_energy_j = 1., .pulse_duration_s = 1e-6, .pulse_count = 1), 10., BW_OK},
    {"train: no row for the wavelength", "ansi-z136-1-2014",
     {.wavelength_nm = 1500., .average_power_w = 1., .pulse_energy_j = 1., .pulse_duration_s = 1e-6,
      .repetition_rate_hz = 1.},
     10., BW_OUT_OF_RANGE},
    {"train: longer than the tables", "icnirp-2013",
     TRAIN(.pulse_energy_j = 1., .pulse_duration_s = 1e-6, .repetition_rate_hz = 1.), 4e4, BW_OUT_OF_RANGE},
    {"train: bursts longer than the tables", "icnirp-2013",
     TRAIN(.pulse_energy_j = 1., .pulse_duration_s = 1e-6, .repetition_rate_hz = 10., .level_count = 1,
           .levels = {{.2, 1., 2.}}),
     4e4, BW_OUT_OF_RANGE},
    {"train: close bursts longer than the tables", "icnirp-2013",
     TRAIN(.pulse_energy_j = 1., .pulse_duration_s = 1e-6, .repetition_rate_hz = 1., .level_count = 1,
           .levels = {{2., 1.5, 2.}}),
     4e4, BW_OUT_OF_RANGE},
    {"train: continuous, longer than the tables", "icnirp-2013",
     {.wavelength_nm = 810., .continuous = true, .average_power_w = 1., .peak_power_w = 1.}, 4e4, BW_OUT_OF_RANGE},
    {"list: of none", "icnirp-2013",
     TRAIN(.pulse_energy_j = 1e-3, .pulse_duration_s = .1, .pulses = far_apart, .pulse_count = 0), 10., BW_ARGUMENT},
    {"list: too long", "icnirp-2013",
     TRAIN(.pulse_energy_j = 1e-3, .pulse_duration_s = .1, .pulses = far_apart, .pulse_count = 1000001), 10.,
     BW_ARGUMENT},
    {"list: no row for the wavelength", "ansi-z136-1-2014",
     {.wavelength_nm = 1500., .average_power_w = 1., .pulse_energy_j = 1e-3, .pulse_duration_s = .1,
      .pulses = far_apart, .pulse_count = 2},
     10., BW_OUT_OF_RANGE},
    {"list: longer than the tables", "icnirp-2013",
     TRAIN(.pulse_energy_j = 1e-3, .pulse_duration_s = .1, .pulses = far_apart, .pulse_count = 2), 4e4,
     BW_OUT_OF_RANGE},
};

static void test_train(void **state) {
    const struct train_case *c = *state;
    struct bw_viewing_case viewing = {BW_EYE, c->exposure_s, 0., 0.};
    struct bw_train_limit_set limits;
    struct bw_error error = {.status = BW_OK};
    const struct bw_table *table = bw_tables_find(c->table);
    assert_int_equal(bw_hazard_train_limits(table, &c->emission, &viewing, &limits, NULL, &error), c->status);
    assert_int_equal(error.status, c->status);
    assert_true((limits.count > 0) == (c->status == BW_OK));
}

static void test_rule_names(void **state) {
    (void)state;
    assert_string_equal(bw_train_rule_name(BW_RULE_TRAIN), "train");
    assert_null(bw_train_rule_name((enum bw_train_rule)BW_RULES));
}

/* ---- limits by hand ------------------------------------------------------------------------------- */

static const struct bw_train_limit *limit_for(const struct bw_train_limit_set *limits, enum bw_effect effect) {
    for (size_t i = 0; i < limits->count; i++)
        if (limits->limits[i].limit.effect == effect)
            return &limits->limits[i];
    fail_msg("no limit for %s", bw_effect_name(effect));
    return NULL;
}

/* 300 nm: 30 J/m2 of all the 1000 pulses in 100 s (5600 t^0.25 is more for each); no train correction there. */
static void test_ultraviolet_train(void **state) {
    (void)state;
    struct bw_emission_input input = {300., NONE, NONE, 1e-6, 1e-6, 10., NULL};
    struct bw_viewing_case viewing = {BW_EYE, 100., 0., 0.};
    struct bw_emission emission;
    struct bw_train_limit_set limits;
    assert_int_equal(bw_emission_resolve(&input, &emission, NULL), BW_OK);
    assert_int_equal(bw_hazard_train_limits(bw_tables_find("icnirp-2013"), &emission, &viewing, &limits, NULL, NULL),
                     BW_OK);
    const struct bw_train_limit *limit = limit_for(&limits, BW_ULTRAVIOLET);
    near("per pulse", limit->per_pulse_j_m2, .03, 1e-12);
    near("by the train", limit->rules_j_m2[BW_RULE_TRAIN], NONE, 0.);
    near("correction", limit->correction, 1., 0.);
    near("pulses", limit->pulses, 0., 0.);
    assert_int_equal(limit->rule, BW_RULE_AVERAGE);
}

/* One pulse of 1 ms in 20 s at 450 nm: it is too short for the photochemical limit, the exposure is not. That limit is
 * 100 CB = 100 J/m2 of the exposure, so of the one pulse. */
static void test_single_without_row(void **state) {
    (void)state;
    const struct bw_timing timing = counted(1.);
    struct bw_emission_input input = {450., NONE, NONE, 1e-6, 1e-3, NONE, &timing};
    struct bw_viewing_case viewing = {BW_EYE, 20., 0., 0.};
    struct bw_emission emission;
    struct bw_train_limit_set limits;
    assert_int_equal(bw_emission_resolve(&input, &emission, NULL), BW_OK);
    assert_int_equal(bw_hazard_train_limits(bw_tables_find("icnirp-2013"), &emission, &viewing, &limits, NULL, NULL),
                     BW_OK);
    const struct bw_train_limit *limit = limit_for(&limits, BW_RETINA_PHOTOCHEMICAL);
    near("single", limit->rules_j_m2[BW_RULE_SINGLE], NONE, 0.);
    near("average", limit->rules_j_m2[BW_RULE_AVERAGE], 100., 1e-12);
    near("per pulse", limit->per_pulse_j_m2, 100., 1e-12);
}

/* 1 s at 810 nm, a source of 200 mrad: 18 CA C6 t^0.75 within the cone of alpha_max = 100 mrad, C6 = 100 / 1.5; of all
 * of it (200 / 100)^2 as much. */
static void test_cone_in_working(void **state) {
    (void)state;
    struct bw_emission_input input = {810., 1., NONE, NONE, NONE, NONE, NULL};
    struct bw_viewing_case viewing = {BW_EYE, 1., 200e-3, 0.};
    struct bw_emission emission;
    struct bw_train_limit_set limits;
    struct bw_working working = {.steps = NULL};
    double want_w_m2 = 18. * pow(10., .22) * 100. / 1.5 * 4.;
    assert_int_equal(bw_emission_resolve(&input, &emission, NULL), BW_OK);
    assert_int_equal(
        bw_hazard_train_limits(bw_tables_find("iec-60825-1-2014"), &emission, &viewing, &limits, &working, NULL), BW_OK);
    near("limit", limit_for(&limits, BW_RETINA_THERMAL)->irradiance_w_m2, want_w_m2, 1e-12);
    wrote(&working, "E_limit", want_w_m2);
    bw_working_free(&working);
}

/* The mean that a limit of a pulse is turned into, told in the working: from the first pulse to the end of the last,
 * of all bursts and gaps, of an endless train the rate. */
static struct mean_case {
    const char *name;
    struct bw_timing timing;
    double want_per_j_hz; /* average power over pulse energy, by hand */
} means[] = {
    {"mean: ten pulses in 9.001 periods", {10., NONE, NONE, NONE, NONE, NONE, NONE, NULL, 0},
     10. / 9.001e-3},
    {"mean: bursts of ten every 100 ms", {NONE, .01, .1, NONE, NONE, NONE, NONE, NULL, 0},
     100.},
    {"mean: three bursts of ten", {30., .01, .1, NONE, NONE, NONE, NONE, NULL, 0},
     30. / .209001},
    {"mean: an endless train", {NONE, NONE, NONE, NONE, NONE, NONE, NONE, NULL, 0}, 1000.},
};

static void test_mean(void **state) {
    const struct mean_case *c = *state;
    struct bw_emission_input input = {810., NONE, NONE, 1e-3, 1e-6, 1e3, &c->timing};
    struct bw_viewing_case viewing = {BW_EYE, 10., 0., 0.};
    struct bw_emission emission;
    struct bw_train_limit_set limits;
    struct bw_working working = {.steps = NULL};
    assert_int_equal(bw_emission_resolve(&input, &emission, NULL), BW_OK);
    assert_int_equal(
        bw_hazard_train_limits(bw_tables_find("icnirp-2013"), &emission, &viewing, &limits, &working, NULL), BW_OK);
    assert_int_equal(limits.count, 1);
    near("limit", limits.limits[0].irradiance_w_m2, limits.limits[0].per_pulse_j_m2 * c->want_per_j_hz, 1e-12);
    wrote(&working, "E_limit", limits.limits[0].irradiance_w_m2);
    bw_working_free(&working);
}

/* Two pulses of 1 us, 10 s apart, in the working day: each alone is under 2e-3 CA J/m2 (to 5 us), the row
 * of it; the two are far from any other limit. N = 1 in T2 = 10 s: nothing is corrected. */
static void test_list_working(void **state) {
    (void)state;
    static const struct bw_pulse pulses[] = {{0., 1e-6, 1e-3}, {10., 1e-6, 1e-3}};
    struct bw_timing timing = bw_timing_none();
    struct bw_emission_input input = {810., NONE, NONE, NONE, NONE, NONE, &timing};
    struct bw_viewing_case viewing = {BW_EYE, 3e4, 0., 0.};
    struct bw_emission emission;
    struct bw_train_limit_set limits;
    struct bw_working working = {.steps = NULL};
    timing.pulses = pulses;
    timing.pulses_given = COUNT(pulses);
    assert_int_equal(bw_emission_resolve(&input, &emission, NULL), BW_OK);
    assert_int_equal(
        bw_hazard_train_limits(bw_tables_find("icnirp-2013"), &emission, &viewing, &limits, &working, NULL), BW_OK);
    const struct bw_train_limit *limit = limit_for(&limits, BW_RETINA_THERMAL);
    near("per pulse", limit->per_pulse_j_m2, 2e-3 * pow(10., .22), 1e-12);
    near("by the train", limit->rules_j_m2[BW_RULE_TRAIN], limit->rules_j_m2[BW_RULE_SINGLE], 1e-12);
    wrote(&working, "H3", limit->rules_j_m2[BW_RULE_TRAIN]);
    bw_working_free(&working);
}

/* ---- a hazard that was spoilt after it was prepared ---------------------------------------------- */

/* Without an exposure time no limit of an extended source can be had: every answer is no number, never "safe". */
static void spoil(struct bw_hazard *hazard) {
    hazard->viewing.exposure_s = NONE;
}

static const struct bw_beam wide_source = {.profile = BW_GAUSSIAN,
                                           .diameter_m = 5e-3,
                                           .divergence_rad = .1,
                                           .exit_diameter_m = 5e-3,
                                           .source_m = 2e-3};

static struct spoilt_case {
    const char *name;
    double wavelength_nm, duration_s, rate_hz;
} spoilt[] = {
    {"spoilt: continuous", 810., NONE, NONE},
    {"spoilt: pulses", 810., 1e-6, 100.},
};

static void test_spoilt(void **state) {
    const struct spoilt_case *c = *state;
    struct bw_emission_input input = {c->wavelength_nm, 1., NONE, NONE, c->duration_s, c->rate_hz, NULL};
    struct bw_output output = {.count = 1, .beams = {wide_source}};
    struct bw_hazard hazard;
    struct bw_reach reach;
    struct bw_seen seen;
    struct bw_error error = {.status = BW_OK};
    double ratios[BW_TERMS_MAX];
    assert_int_equal(bw_emission_resolve(&input, &output.emissions[0], NULL), BW_OK);
    prepare(&hazard, &output, 10.);
    assert_true(hazard.shaped);
    spoil(&hazard);
    near("ratio", bw_hazard_ratio(&hazard, .5), NONE, 0.);
    near("off axis", bw_hazard_ratio_off_axis(&hazard, .5, .01), NONE, 0.);
    near("envelope", bw_hazard_ratio_envelope(&hazard, .5), NONE, 0.);
    assert_int_equal(bw_hazard_seen(&hazard, 0, .5, &seen, &error), BW_ARGUMENT);
    begins(error.text, "exposure time is nan s");
    error = (struct bw_error){.status = BW_OK};
    assert_int_equal(bw_hazard_reach(&hazard, ALL, &reach, NULL, &error), BW_ARGUMENT);
    begins(error.text, "the hazard ratio is not a number");
    near("reach", reach.distance_m, NONE, 0.);
    bw_hazard_worst_terms(&hazard, ratios);
    near("worst", ratios[0], NONE, 0.);
    bw_hazard_prepare_envelope(&hazard);
    assert_true(hazard.ladder.steps > 0);
    near("ladder", bw_hazard_ratio_envelope(&hazard, .5), NONE, 0.);
    bw_hazard_worst_terms(&hazard, ratios);
    near("worst of the ladder", ratios[0], NONE, 0.);
}

/* A beam whose width is no number: of the plain ratio, at the exit and at infinity. */
static struct no_width_case {
    const char *name;
    double diameter_m, waist_m;
} no_widths[] = {
    {"no width: nowhere", NONE, 0.},
    {"no width: at infinity", 3e-3, LONG},
};

static void test_no_width(void **state) {
    const struct no_width_case *c = *state;
    struct bw_output output = {.count = 0};
    struct bw_hazard hazard;
    struct bw_reach reach;
    struct bw_error error = {.status = BW_OK};
    add_watts(&output, 810., 1., plain);
    prepare(&hazard, &output, 10.);
    output.beams[0].diameter_m = c->diameter_m;
    output.beams[0].waist_m = c->waist_m;
    output.beams[0].exit_diameter_m = 3e-3;
    assert_int_equal(bw_hazard_reach(&hazard, ALL, &reach, NULL, &error), BW_ARGUMENT);
    begins(error.text, "the hazard ratio is not a number");
    near("reach", reach.distance_m, NONE, 0.);
    assert_false(reach.unbounded);
}

/* ---- a source of a size --------------------------------------------------------------------------- */

static struct place_case {
    const char *name;
    double distance_m, offset_m;
} places[] = {
    {"no place: distance NaN", NONE, .01},      {"no place: distance negative", -1., .01},
    {"no place: offset NaN", .5, NONE},         {"no place: offset negative", .5, -.01},
    {"no place: offset NaN, far off", 9., NONE}, {"no place: offset negative, far off", 9., -.01},
};

static void test_place(void **state) {
    const struct place_case *c = *state;
    struct bw_output output = {.count = 0};
    struct bw_hazard hazard;
    add_watts(&output, 810., 1., wide_source);
    prepare(&hazard, &output, 10.);
    assert_in_range(hazard.settled_m[0] * 1e3, 501, 8999); /* both sides of it */
    near("without a ladder", bw_hazard_ratio_off_axis(&hazard, c->distance_m, c->offset_m), NONE, 0.);
    bw_hazard_prepare_envelope(&hazard);
    near("with a ladder", bw_hazard_ratio_off_axis(&hazard, c->distance_m, c->offset_m), NONE, 0.);
    if (!(c->distance_m >= 0.)) {
        near("on axis", bw_hazard_ratio(&hazard, c->distance_m), NONE, 0.);
        near("envelope", bw_hazard_ratio_envelope(&hazard, c->distance_m), NONE, 0.);
    }
}

/* Where the eye sees but a point the limit is that of a point: a collimated top hat narrower than the pupil has the
 * same ratio everywhere, P / (pi (7 mm)^2 / 4) / E. A source of a micrometre is a point at any distance; so is a
 * wider one behind a long spacer, and one of a head that has one emitter. */
static struct point_case {
    const char *name;
    double source_m, stand_off_m;
    size_t emitters;
    bool ladder;
} points[] = {
    {"point: two micrometres", 2e-6, 0., 0, true},
    {"point: a millimetre behind 2 m of spacer", 1e-3, 2., 0, false},
    {"point: two micrometres, a head of one", 2e-6, 0., 1, true},
    {"point: a point", 0., 0., 1, false},
};

static void test_point(void **state) {
    const struct point_case *c = *state;
    struct bw_output output = {.count = 0, .stand_off_m = c->stand_off_m};
    struct bw_hazard hazard;
    struct bw_seen seen;
    double ratios[BW_TERMS_MAX], want = .5 / (bw_pi * 49e-6 / 4.) / limit_810();
    struct bw_beam beam = ROUND(BW_TOP_HAT, BW_HYPERBOLIC, 2e-3, 0., 0., 2e-3);
    beam.source_m = c->source_m;
    beam.cluster.count = c->emitters;
    beam.cluster.share[0] = 1.;
    add_watts(&output, 810., .5, beam);
    prepare(&hazard, &output, 10.);
    bw_hazard_prepare_envelope(&hazard);
    assert_true((hazard.ladder.steps > 0) == c->ladder);
    near("envelope", bw_hazard_ratio_envelope(&hazard, 0.), want, 1e-9);
    near("ratio", bw_hazard_ratio(&hazard, 3.), want, 1e-9);
    bw_hazard_worst_terms(&hazard, ratios);
    near("worst", ratios[0], want, 1e-9);
    assert_int_equal(bw_hazard_seen(&hazard, 0, 3., &seen, NULL), BW_OK);
    near("seen", seen.ratio, want, 1e-9);
    near("subtense", seen.subtense_rad, 2. * atan(c->source_m / 2. / 3.), 1e-12);
    assert_int_equal(seen.emitters, 1);
    assert_int_equal(bw_hazard_seen(&hazard, 1, 3., &seen, NULL), BW_ARGUMENT);
    assert_int_equal(bw_hazard_seen(&hazard, 0, NONE, &seen, NULL), BW_ARGUMENT);
}

/* The front of the eye asks nothing of the source's size: 10.6 um, 1000 W/m2 beyond 10 s, a collimated top hat of
 * 2 mm within the 3.5 mm aperture. */
static void test_front_of_eye(void **state) {
    (void)state;
    struct bw_output output = {.count = 0};
    struct bw_hazard hazard;
    struct bw_seen seen;
    struct bw_beam beam = ROUND(BW_TOP_HAT, BW_HYPERBOLIC, 2e-3, 0., 0., 2e-3);
    beam.source_m = 1e-3;
    add_watts(&output, 10600., 1., beam);
    prepare(&hazard, &output, 100.);
    assert_true(hazard.shaped);
    assert_int_equal(bw_hazard_seen(&hazard, 0, .2, &seen, NULL), BW_OK);
    near("seen", seen.ratio, 1. / (bw_pi * 3.5e-3 * 3.5e-3 / 4.) / 1000., 1e-12);
    assert_int_equal(seen.limit.limit.effect, BW_ANTERIOR);
    assert_int_equal(seen.emitters, 1);
}

/* Nothing was prepared of a shaped output: nothing is known. */
static void test_shaped_unprepared(void **state) {
    (void)state;
    struct bw_output output = {.count = 0};
    struct bw_viewing_case viewing = {BW_EYE, 10., 0., 0.};
    struct bw_hazard hazard;
    struct bw_error error = {.status = BW_OK};
    add_watts(&output, 1500., 1., wide_source);
    assert_int_equal(
        bw_hazard_prepare(bw_tables_find("ansi-z136-1-2014"), &output, &viewing, &hazard, NULL, &error),
        BW_OUT_OF_RANGE);
    begins(error.text, "1500 nm: ");
    assert_int_equal(hazard.term_count, 0);
    bw_hazard_prepare_envelope(&hazard);
    assert_int_equal(hazard.ladder.steps, 0);
    near("envelope", bw_hazard_ratio_envelope(&hazard, .1), NONE, 0.);
}

/* ---- distances ------------------------------------------------------------------------------------ */

static struct reach_case {
    const char *name;
    enum bw_profile profile;
    enum bw_spread spread;
    double divergence_rad;
    size_t only;
} reaches[] = {
    {"reach: Gaussian", BW_GAUSSIAN, BW_HYPERBOLIC, .1, ALL},
    {"reach: linear", BW_GAUSSIAN, BW_LINEAR, .1, 1},
    {"reach: top hat", BW_TOP_HAT, BW_HYPERBOLIC, .1, 1},
    {"reach: collimated", BW_TOP_HAT, BW_LINEAR, 0., 1},
    {"reach: beyond every number", BW_TOP_HAT, BW_LINEAR, 1e-310, 1},
};

/* Two emissions, the first harmless, the second as the row says. */
static void test_reach(void **state) {
    const struct reach_case *c = *state;
    struct bw_output output = {.count = 0};
    struct bw_hazard hazard;
    struct bw_reach reach;
    struct bw_working working = {.steps = NULL};
    struct bw_beam beam = ROUND(c->profile, c->spread, 3e-3, c->divergence_rad, 0., 3e-3);
    add_watts(&output, 980., 1e-9, beam);
    add_watts(&output, 810., 10., beam);
    prepare(&hazard, &output, 10.);
    assert_int_equal(bw_hazard_reach(&hazard, c->only, &reach, &working, NULL), BW_OK);
    assert_true(reach.unbounded == !(c->divergence_rad > 1e-300));
    wrote(&working, "r", reach.distance_m);
    if (!reach.unbounded)
        near("ratio", bw_hazard_ratio(&hazard, reach.distance_m), 1., 1e-6);
    assert_int_equal(bw_hazard_reach(&hazard, 0, &reach, NULL, NULL), BW_OK);
    near("the harmless one", reach.distance_m, 0., 0.);
    assert_int_equal(bw_hazard_reach(&hazard, 2, &reach, NULL, NULL), BW_ARGUMENT);
    bw_working_free(&working);
}

/* ---- optical density ------------------------------------------------------------------------------ */

/* 450 nm for 1000 s: heat and light are two sums of the one emission. */
static struct density_case {
    const char *name;
    double first, second, want;
} densities[] = {
    {"density: the larger of both", 10., 1000., 3.},
    {"density: the first is the larger", 100., 10., 2.},
    {"density: the first no number", NONE, 10., NONE},
    {"density: the second no number", 10., NONE, NONE},
    {"density: neither a number", NONE, NONE, NONE},
    {"density: none needed", 1., .5, 0.},
};

static void test_density(void **state) {
    const struct density_case *c = *state;
    struct bw_output output = {.count = 0};
    struct bw_hazard hazard;
    double od[BW_EMISSIONS_MAX], ratios[BW_TERMS_MAX] = {c->first, c->second};
    add_watts(&output, 450., 1., plain);
    prepare(&hazard, &output, 1000.);
    assert_int_equal(hazard.term_count, 2);
    bw_hazard_optical_density(&hazard, ratios, od);
    near("density", od[0], c->want, 1e-12);
    near("of no emission", od[1], 0., 0.);
}

/* ---- diffuse -------------------------------------------------------------------------------------- */

static struct spot_case {
    const char *name;
    double path_m, reflectance;
    size_t count;
    enum bw_status status;
} spots[] = {
    {"spot: as it should be", 1., .5, 1, BW_OK},        {"spot: path negative", -1., .5, 1, BW_ARGUMENT},
    {"spot: path NaN", NONE, .5, 1, BW_ARGUMENT},       {"spot: reflectance negative", 1., -.1, 1, BW_ARGUMENT},
    {"spot: reflectance above 1", 1., 1.1, 1, BW_ARGUMENT}, {"spot: reflectance NaN", 1., NONE, 1, BW_ARGUMENT},
    {"spot: too many emissions", 1., .5, 17, BW_ARGUMENT},
};

static void test_spot(void **state) {
    const struct spot_case *c = *state;
    struct bw_output output = {.count = 0};
    struct bw_spot spot;
    add_watts(&output, 810., 1., plain);
    output.count = c->count;
    assert_int_equal(bw_hazard_spot(&output, c->path_m, c->reflectance, &spot), c->status);
    near("reflectance", spot.reflectance, c->status == BW_OK ? c->reflectance : NONE, 0.);
    if (c->status == BW_OK)
        near("width", spot.diameter_m[0], hypot(3e-3, .1), 1e-12);
}

enum broken { SOUND, UNPREPARED, SPOILT };
static struct diffuse_case {
    const char *name;
    enum broken broken;
    double reflectance, diameter_m, distance_m;
    const char *text;
} diffuses[] = {
    {"diffuse: unprepared", UNPREPARED, .5, .01, 1., "the hazard was not prepared"},
    {"diffuse: no limits", SPOILT, .5, .01, 1., "810 nm: exposure time is nan s"},
    {"diffuse: reflectance NaN", SOUND, NONE, .01, 1., "reflectance is nan, outside 0 to 1"},
    {"diffuse: reflectance negative", SOUND, -.1, .01, 1., "reflectance is -0.1, outside"},
    {"diffuse: reflectance above 1", SOUND, 1.5, .01, 1., "reflectance is 1.5, outside"},
    {"diffuse: spot NaN", SOUND, .5, NONE, 1., "spot diameter is nan m"},
    {"diffuse: spot negative", SOUND, .5, -.01, 1., "spot diameter is -0.01 m"},
    {"diffuse: spot infinite", SOUND, .5, LONG, 1., "spot diameter is inf m"},
    {"diffuse: distance NaN", SOUND, .5, .01, NONE, "distance is nan m"},
    {"diffuse: distance negative", SOUND, .5, .01, -1., "distance is -1 m"},
};

static void test_diffuse(void **state) {
    const struct diffuse_case *c = *state;
    struct bw_output output = {.count = 0};
    struct bw_hazard hazard;
    struct bw_ratio ratio;
    struct bw_reach reach;
    struct bw_working working = {.steps = NULL};
    struct bw_error error = {.status = BW_OK};
    struct bw_spot spot = {c->reflectance, {c->diameter_m}};
    add_watts(&output, 810., 1., plain);
    prepare(&hazard, &output, 10.);
    if (c->broken == UNPREPARED)
        hazard.term_count = 0;
    if (c->broken == SPOILT)
        spoil(&hazard);
    assert_int_equal(bw_hazard_diffuse_ratio(&hazard, &spot, c->distance_m, &ratio, &error), BW_ARGUMENT);
    begins(error.text, c->text);
    near("ratio", ratio.total, NONE, 0.);
    if (!(c->distance_m >= 0.))
        return; /* the reach has no distance */
    error = (struct bw_error){.status = BW_OK};
    assert_int_equal(bw_hazard_diffuse_reach(&hazard, &spot, &reach, &working, &error), BW_ARGUMENT);
    begins(error.text, c->text);
    near("reach", reach.distance_m, NONE, 0.);
    assert_int_equal(working.count, 0);
    bw_working_free(&working);
}

/* ---- tolerances ----------------------------------------------------------------------------------- */

static struct tolerance_case {
    const char *name, *table;
    double wavelength_nm;
    struct bw_tolerance tolerance;
    enum bw_status status;
    const char *text;
} tolerances[] = {
#define GIVEN(wavelength) {wavelength, 1., NONE, NONE, 1e-6, 100., NULL}
    {"tolerance: none, nothing needs to be given", "icnirp-2013", 810., {GIVEN(NONE), .1, 0., 0.}, BW_OK, ""},
    {"tolerance: of the rate alone", "icnirp-2013", 810., {GIVEN(810.), .1, 0., .1}, BW_OK, ""},
    {"tolerance: of the duration alone", "icnirp-2013", 810., {GIVEN(810.), .1, .1, 0.}, BW_OK, ""},
    {"tolerance: what was given is no emission", "icnirp-2013", 810., {GIVEN(NONE), .1, .1, .1}, BW_ARGUMENT,
     "810 nm: wavelength is nan nm"},
    {"tolerance: of more than all power", "icnirp-2013", 810., {GIVEN(810.), -1., .1, .1}, BW_ARGUMENT,
     "810 nm: power is 0 times what was given"},
    {"tolerance: no row for the wavelength", "ansi-z136-1-2014", 1500., {GIVEN(1500.), .1, .1, .1}, BW_OUT_OF_RANGE,
     "1500 nm: "},
};

static void test_tolerance(void **state) {
    const struct tolerance_case *c = *state;
    struct bw_emission_input input = GIVEN(c->wavelength_nm);
    struct bw_output output = {.count = 1, .beams = {plain}, .tolerances = &c->tolerance};
    struct bw_viewing_case viewing = {BW_EYE, 10., 0., 0.};
    struct bw_hazard hazard;
    struct bw_error error = {.status = BW_OK};
    assert_int_equal(bw_emission_resolve(&input, &output.emissions[0], NULL), BW_OK);
    assert_int_equal(bw_hazard_prepare(bw_tables_find(c->table), &output, &viewing, &hazard, NULL, &error), c->status);
    begins(error.text, c->text);
    assert_true((hazard.term_count > 0) == (c->status == BW_OK));
}

/* 1 W of pulses at 1 MHz for 1000 s: the mean decides, whatever duration and rate. At 450 nm 1 CB = 1 W/m2 (light, below
 * the 10 W/m2 of heat), at 520 nm 10^(0.02 x 70) = 25 W/m2 (above). */
static struct corner_case {
    const char *name;
    double wavelength_nm, want_heat_w_m2, want_light_w_m2;
    enum bw_effect governs;
} corners[] = {
    {"corners: light governs", 450., 10., 1., BW_RETINA_PHOTOCHEMICAL},
    {"corners: heat governs", 520., 10., 25.118864315095801, BW_RETINA_THERMAL},
};

static void test_corners(void **state) {
    const struct corner_case *c = *state;
    struct bw_emission_input input = {c->wavelength_nm, 1., NONE, NONE, 1e-7, 1e6, NULL};
    struct bw_tolerance tolerance = {input, .2, .1, .1};
    struct bw_output output = {.count = 1, .beams = {plain}, .tolerances = &tolerance};
    struct bw_viewing_case viewing = {BW_EYE, 1000., 0., 0.};
    struct bw_hazard hazard;
    struct bw_ratio ratio;
    struct bw_working working = {.steps = NULL};
    input.average_power_w *= 1.2; /* the output brings the power at its worst end */
    assert_int_equal(bw_emission_resolve(&input, &output.emissions[0], NULL), BW_OK);
    assert_int_equal(
        bw_hazard_prepare(bw_tables_find("icnirp-2013"), &output, &viewing, &hazard, &working, NULL), BW_OK);
    assert_int_equal(hazard.term_count, 2);
    for (size_t i = 0; i < 2; i++) {
        bool heat = hazard.terms[i].limit.limit.effect == BW_RETINA_THERMAL;
        near("limit", hazard.terms[i].limit.irradiance_w_m2, heat ? c->want_heat_w_m2 : c->want_light_w_m2, 1e-6);
    }
    bw_hazard_ratio_detail(&hazard, 1., &ratio);
    assert_int_equal(hazard.terms[ratio.governing].limit.limit.effect, c->governs);
    size_t written = 0;
    for (size_t i = 0; i < working.count; i++)
        if (working.steps[i].heading && strncmp(working.steps[i].formula, "Worst corner", 12) == 0)
            written++;
    assert_in_range(written, 1, 2);
    bw_working_free(&working);
}

/* ---- corners with several apertures --------------------------------------------------------------- */

/* Far infrared: the aperture grows with the time from 0.35 to 10 s, and the corners of duration and rate have limits
 * for several. The one limit that stands for all is the lowest E of all corners, and its E D^2 no more than that of
 * any: so neither a wide nor a narrow beam has a smaller ratio than at its worst corner. */
static struct aperture_case {
    const char *name;
    double duration_s, off;
    bool alone;
} apertures[] = {
    {"apertures: 50 ms", .05, .3, false}, {"apertures: 0.1 s", .1, .3, false}, {"apertures: 0.2 s", .2, .3, false},
    {"apertures: 0.4 s", .4, .3, false},  {"apertures: 0.8 s", .8, .3, false}, {"apertures: 1.6 s", 1.6, .3, false},
    {"apertures: 3 s", 3., .3, false},    {"apertures: 6 s", 6., .3, false},   {"apertures: 14.2 s", 14.2, .3, false},
    {"apertures: 20 s", 20., .3, false},
    /* the longer pulse has the lower limit, but at 0.35 s the aperture steps up by more than that */
    {"apertures: one pulse at the step", .35, .03, true},
};

static void test_apertures(void **state) {
    const struct aperture_case *c = *state;
    const double ends[] = {1. - c->off, 1., 1. + c->off};
    const struct bw_timing once = counted(1.);
    struct bw_emission_input input = {10600., NONE, 1., NONE, c->duration_s, 1. / (3. * c->duration_s), NULL};
    if (c->alone) {
        input.repetition_rate_hz = NONE;
        input.timing = &once;
    }
    struct bw_tolerance tolerance = {input, 0., c->off, c->off};
    struct bw_output output = {.count = 1, .beams = {plain}, .tolerances = &tolerance};
    struct bw_viewing_case viewing = {BW_EYE, 100., 0., 0.};
    const struct bw_table *table = bw_tables_find("icnirp-2013");
    struct bw_hazard hazard;
    double least = LONG, least_narrow = LONG;
    assert_int_equal(bw_emission_resolve(&input, &output.emissions[0], NULL), BW_OK);
    assert_int_equal(bw_hazard_prepare(table, &output, &viewing, &hazard, NULL, NULL), BW_OK);
    assert_int_equal(hazard.term_count, 1);
    for (size_t i = 0; i < COUNT(ends) * COUNT(ends); i++) {
        struct bw_emission emission;
        struct bw_train_limit_set set;
        double duration = ends[i / COUNT(ends)], rate = ends[i % COUNT(ends)];
        assert_int_equal(bw_emission_varied(&input, 1., duration, rate, &emission, NULL), BW_OK);
        assert_int_equal(bw_hazard_train_limits(table, &emission, &viewing, &set, NULL, NULL), BW_OK);
        double of_own_w = output.emissions[0].average_power_w / emission.average_power_w;
        double limit = set.limits[0].irradiance_w_m2 * of_own_w, D = set.limits[0].aperture_m;
        least = fmin(least, limit);
        least_narrow = fmin(least_narrow, limit * D * D);
    }
    const struct bw_train_limit *all = &hazard.terms[0].limit;
    near("limit", all->irradiance_w_m2, least, 1e-12);
    near("limit of a narrow beam", all->irradiance_w_m2 * all->aperture_m * all->aperture_m, least_narrow, 1e-11);
}

/* ---- a rule set with other powers of time --------------------------------------------------------- */

static const char odd_powers[] = "[table]\nid = odd\ntitle = odd\nsource = invented for this test\nedition = first\n"
                                 "[eye ultraviolet]\n"
                                 "covers = 300 .. 400 | 1e-9 .. 3e4\n"
                                 "r01 = 300 .. 400 | 1e-9 .. 3e4 | H | 100 | 0.3 | - | B | memory\n"
                                 "[eye anterior]\n"
                                 "covers = 300 .. 400 | 1e-9 .. 3e4\n"
                                 "r01 = 300 .. 400 | 1e-9 .. 3e4 | H | 1000 | 0.3 | - | B | memory\n"
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

static struct bw_table *load(const char *text) {
    struct bw_ini ini = {.entries = NULL};
    struct bw_faults faults = {.items = NULL};
    struct bw_error error = {.status = BW_OK};
    struct bw_table *table = NULL;
    assert_int_equal(bw_ini_read_bytes(text, strlen(text), &ini, &faults, &error), BW_OK);
    if (bw_table_load(&ini, &table, &faults, &error) != BW_OK)
        fail_msg("%s", faults.count > 0 ? faults.items[0].text : error.text);
    bw_faults_free(&faults);
    bw_ini_free(&ini);
    return table;
}

/* Of n pulses of 1 us, a millisecond apart, all in one window: 100 (n ms)^0.3 / n; one alone 100 (1 us)^0.3. */
static struct power_case {
    const char *name;
    size_t count;
} powers[] = {{"odd powers: 2 pulses", 2}, {"odd powers: 3 pulses", 3}, {"odd powers: 500 pulses", 500}};

static void test_power(void **state) {
    const struct power_case *c = *state;
    static struct bw_pulse pulses[500];
    struct bw_timing timing = bw_timing_none();
    struct bw_emission_input input = {350., NONE, NONE, NONE, NONE, NONE, &timing};
    struct bw_viewing_case viewing = {BW_EYE, 10., 0., 0.};
    struct bw_emission emission;
    struct bw_train_limit_set limits;
    double count = (double)c->count;
    for (size_t i = 0; i < c->count; i++)
        pulses[i] = (struct bw_pulse){1e-3 * (double)i, 1e-6, 1e-3};
    timing.pulses = pulses;
    timing.pulses_given = c->count;
    struct bw_table *table = load(odd_powers);
    assert_int_equal(bw_emission_resolve(&input, &emission, NULL), BW_OK);
    assert_int_equal(bw_hazard_train_limits(table, &emission, &viewing, &limits, NULL, NULL), BW_OK);
    assert_int_equal(limits.count, 2);
    double average = LONG;
    for (double n = 2.; n <= count; n++)
        average = fmin(average, 100. * pow(1e-3 * (n - 1.) + 1e-6, .3) / n);
    for (size_t i = 0; i < 2; i++) {
        double factor = limits.limits[i].limit.effect == BW_ANTERIOR ? 10. : 1.;
        near("single", limits.limits[i].rules_j_m2[BW_RULE_SINGLE], factor * 100. * pow(1e-6, .3), 1e-12);
        near("average", limits.limits[i].rules_j_m2[BW_RULE_AVERAGE], factor * average, 1e-11);
    }
    bw_table_free(table);
}

/* Two effects of one tissue add there, so the beams are taken one by one: that without a power has no answer; the
 * other's limits are the 100 t^0.3 of the ultraviolet. */
static void test_many_that_add(void **state) {
    (void)state;
    static const double wavelengths_nm[] = {350., 350.}, exposures_s[] = {10., 10.}, powers_w[] = {NONE, 1.};
    static const double diameters_m[] = {1e-3, 1e-3}, divergences_rad[] = {.1, .1};
    struct bw_simple_beams beams = {2, wavelengths_nm, exposures_s, powers_w, diameters_m, divergences_rad, 1.};
    double limits_j_m2[2], nohd_m[2], ods[2];
    struct bw_table *table = load(odd_powers);
    assert_int_equal(bw_hazard_many(table, &beams, limits_j_m2, nohd_m, ods), 1);
    near("limit of none", limits_j_m2[0], NONE, 0.);
    near("distance of none", nohd_m[0], NONE, 0.);
    near("density of none", ods[0], NONE, 0.);
    near("limit", limits_j_m2[1], 100. * pow(10., .3), 1e-12);
    bw_table_free(table);
}

/* ---- a head of two emitters ----------------------------------------------------------------------- */

/* Between the emitters a place is as on the axis; beyond them the nearer one counts. */
static void test_between_emitters(void **state) {
    (void)state;
    struct bw_output output = {.count = 0};
    struct bw_hazard hazard;
    struct bw_beam beam = plain;
    beam.cluster.count = 2;
    beam.cluster.at[0].x_m = 5e-3;
    beam.cluster.at[1].x_m = -5e-3;
    beam.cluster.share[0] = beam.cluster.share[1] = .5;
    add_watts(&output, 810., 1., beam);
    prepare(&hazard, &output, 10.);
    double r = 2. * hazard.settled_m[0], d = hypot(3e-3, .1 * r);
    double want = -expm1(-(7e-3 / d) * (7e-3 / d)) / (bw_pi * 49e-6 / 4.) / limit_810();
    near("on the axis", bw_hazard_ratio_off_axis(&hazard, r, 0.), want, 1e-9);
    near("between them", bw_hazard_ratio_off_axis(&hazard, r, 2e-3), want, 1e-9);
    assert_true(bw_hazard_ratio_off_axis(&hazard, r, 2. * d) < .1 * want);
}

/* Exactly at the limit and collimated: nowhere above it, though nowhere below. */
static void test_exactly_one(void **state) {
    (void)state;
    struct bw_output output = {.count = 0};
    struct bw_hazard hazard;
    struct bw_reach reach;
    add_watts(&output, 810., .5, (struct bw_beam)ROUND(BW_TOP_HAT, BW_HYPERBOLIC, 2e-3, 0., 0., 2e-3));
    prepare(&hazard, &output, 10.);
    double *power_w = &output.emissions[0].average_power_w;
    *power_w /= bw_hazard_ratio(&hazard, 1.);
    for (int i = 0; i < 8 && bw_hazard_ratio(&hazard, 1.) > 1.; i++)
        *power_w = nextafter(*power_w, 0.);
    for (int i = 0; i < 8 && bw_hazard_ratio(&hazard, 1.) < 1.; i++)
        *power_w = nextafter(*power_w, LONG);
    near("ratio", bw_hazard_ratio(&hazard, 1.), 1., 0.);
    assert_int_equal(bw_hazard_reach(&hazard, ALL, &reach, NULL, NULL), BW_OK);
    near("reach", reach.distance_m, 0., 0.);
    assert_false(reach.unbounded);
    *power_w *= 1. + 1e-12;
    assert_int_equal(bw_hazard_reach(&hazard, ALL, &reach, NULL, NULL), BW_OK);
    assert_true(reach.unbounded);
}

static struct CMUnitTest tests[COUNT(refusals) + COUNT(times) + COUNT(permitted) + COUNT(trains) + COUNT(means) +
                               COUNT(spoilt) + COUNT(no_widths) + COUNT(places) + COUNT(points) + COUNT(reaches) +
                               COUNT(densities) + COUNT(spots) + COUNT(diffuses) + COUNT(tolerances) + COUNT(corners) +
                               COUNT(apertures) + COUNT(powers) + 11];

#define ADD_ROWS(rows, function)                                                                                       \
    for (size_t i = 0; i < COUNT(rows); i++)                                                                           \
        tests[count++] = (struct CMUnitTest) {                                                                         \
            rows[i].name, function, NULL, NULL, &rows[i]                                                               \
        }

int main(void) {
    size_t count = 0;
    ADD_ROWS(refusals, test_refusal);
    ADD_ROWS(times, test_time);
    ADD_ROWS(permitted, test_permitted);
    ADD_ROWS(trains, test_train);
    ADD_ROWS(means, test_mean);
    ADD_ROWS(spoilt, test_spoilt);
    ADD_ROWS(no_widths, test_no_width);
    ADD_ROWS(places, test_place);
    ADD_ROWS(points, test_point);
    ADD_ROWS(reaches, test_reach);
    ADD_ROWS(densities, test_density);
    ADD_ROWS(spots, test_spot);
    ADD_ROWS(diffuses, test_diffuse);
    ADD_ROWS(tolerances, test_tolerance);
    ADD_ROWS(corners, test_corners);
    ADD_ROWS(apertures, test_apertures);
    ADD_ROWS(powers, test_power);
    const struct CMUnitTest single[] = {
        cmocka_unit_test(test_time_fails),
        cmocka_unit_test(test_rule_names),
        cmocka_unit_test(test_ultraviolet_train),
        cmocka_unit_test(test_single_without_row),
        cmocka_unit_test(test_cone_in_working),
        cmocka_unit_test(test_list_working),
        cmocka_unit_test(test_front_of_eye),
        cmocka_unit_test(test_shaped_unprepared),
        cmocka_unit_test(test_many_that_add),
        cmocka_unit_test(test_between_emitters),
        cmocka_unit_test(test_exactly_one),
    };
    for (size_t i = 0; i < COUNT(single); i++)
        tests[count++] = single[i];
    return cmocka_run_group_tests_name("hazard branches", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
