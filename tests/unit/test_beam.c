/* beam: completing emissions, windows of a train, propagation, power through an aperture. */
#include <math.h>
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdlib.h>
#include <string.h>

#include <cmocka.h>
#include <gsl/gsl_errno.h>
#include <gsl/gsl_integration.h>

#include <beamward/beam.h>

#include "round_beam.h"

#define COUNT(array) (sizeof(array) / sizeof *(array))
#define NONE         ((double)NAN)

static void near(double got, double want, double relative, const char *what) {
    if (!(fabs(got - want) <= relative * fabs(want)))
        fail_msg("%s: got %.17g, want %.17g", what, got, want);
}

/* ---- completing an emission ------------------------------------------------------------------ */

/* One train, 75 W x 150 ns x 10 kHz: 11.25 uJ, 0.1125 W (by hand), told in every sufficient way. */
static struct set_case {
    const char *name;
    double average_w, peak_w, energy_j, duration_s, rate_hz;
} sets[] = {
    {"set: peak duration rate", NONE, 75., NONE, 150e-9, 1e4},
    {"set: average peak duration", .1125, 75., NONE, 150e-9, NONE},
    {"set: average peak rate", .1125, 75., NONE, NONE, 1e4},
    {"set: average duration rate", .1125, NONE, NONE, 150e-9, 1e4},
    {"set: average energy duration", .1125, NONE, 11.25e-6, 150e-9, NONE},
    {"set: average energy peak", .1125, 75., 11.25e-6, NONE, NONE},
    {"set: energy duration rate", NONE, NONE, 11.25e-6, 150e-9, 1e4},
    {"set: energy peak rate", NONE, 75., 11.25e-6, NONE, 1e4},
    {"set: average peak duration rate", .1125, 75., NONE, 150e-9, 1e4},
    {"set: all five", .1125, 75., 11.25e-6, 150e-9, 1e4},
};

static void test_set(void **state) {
    const struct set_case *c = *state;
    struct bw_emission_input input = {905., c->average_w, c->peak_w, c->energy_j, c->duration_s, c->rate_hz, NULL};
    struct bw_emission e;
    struct bw_error error = {0};
    if (bw_emission_resolve(&input, &e, &error) != BW_OK)
        fail_msg("%s", error.text);
    assert_false(e.continuous);
    near(e.average_power_w, .1125, 1e-14, "average power");
    near(e.peak_power_w, 75., 1e-14, "peak power");
    near(e.pulse_energy_j, 11.25e-6, 1e-14, "pulse energy");
    near(e.pulse_duration_s, 150e-9, 1e-14, "duration");
    near(e.repetition_rate_hz, 1e4, 1e-14, "rate");
}

#define THREE_OF "average power, peak power, pulse energy, pulse duration, repetition rate"

static struct refusal_case {
    const char *name;
    struct bw_emission_input input;
    enum bw_status status;
    const char *text;
} refusals[] = {
    {"refused: contradiction of average power",
     {905., .5, 75., NONE, 150e-9, 1e4, NULL},
     BW_INPUT,
     "average power 0.5 W, but 75 W x 150 ns x 10000 Hz gives 0.1125 W: 344 % off; leave one of them out or correct "
     "one"},
    {"refused: contradiction of pulse energy",
     {905., NONE, 75., 12e-6, 150e-9, 1e4, NULL},
     BW_INPUT,
     "pulse energy 1.2e-05 J, but 75 W x 150 ns gives 1.125e-05 J: 6.67 % off; leave one of them out or correct one"},
    {"refused: average power, energy and rate",
     {905., .2, NONE, 11.25e-6, NONE, 1e4, NULL},
     BW_INPUT,
     "average power, pulse energy and repetition rate do not describe the pulses; give the peak power or pulse "
     "duration as well"},
    {"refused: 0.11 % apart",
     {905., .1125 * 1.0011, 75., NONE, 150e-9, 1e4, NULL},
     BW_INPUT,
     "average power 0.112624 W, but 75 W x 150 ns x 10000 Hz gives 0.1125 W: 0.11 % off; leave one of them out or "
     "correct one"},
    {"refused: nothing given",
     {905., NONE, NONE, NONE, NONE, NONE, NULL},
     BW_INPUT,
     "no power or energy is given; give the average power of a continuous emission, or of a pulsed one three of "
     "average power, peak power, pulse energy, pulse duration, repetition rate"},
    {"refused: average power and rate",
     {905., .5, NONE, NONE, NONE, 1e4, NULL},
     BW_INPUT,
     "average power and repetition rate do not describe the pulses; give the peak power or pulse duration as well"},
    {"refused: duration and rate",
     {905., NONE, NONE, NONE, 150e-9, 1e4, NULL},
     BW_INPUT,
     "pulse duration and repetition rate do not describe the pulses; give the average power, peak power or pulse "
     "energy as well"},
    {"refused: peak power alone",
     {905., NONE, 75., NONE, NONE, NONE, NULL},
     BW_INPUT,
     "peak power alone does not describe the pulses; give three of " THREE_OF},
    {"refused: one pulse without rate",
     {905., NONE, 75., 11.25e-6, 150e-9, NONE, NULL},
     BW_INPUT,
     "peak power, pulse energy and pulse duration do not describe the pulses; give the average power or repetition "
     "rate as well"},
    {"refused: pulses overlap",
     {905., NONE, 75., NONE, 2e-4, 1e4, NULL},
     BW_INPUT,
     "pulse duration 0.0002 s x repetition rate 10000 Hz is 2: the pulses overlap; it must be at most 1"},
    {"refused: average above peak",
     {905., 5., 1., NONE, NONE, 1e4, NULL},
     BW_INPUT,
     "pulse duration 0.0005 s x repetition rate 10000 Hz is 5: the pulses overlap; it must be at most 1"},
    {"refused: wavelength below 180",
     {179.9, 1., NONE, NONE, NONE, NONE, NULL},
     BW_ARGUMENT,
     "wavelength is 179.9 nm, outside 180 to 1e+06 nm"},
    {"refused: wavelength above 1e6",
     {1.0001e6, 1., NONE, NONE, NONE, NONE, NULL},
     BW_ARGUMENT,
     "wavelength is 1.0001e+06 nm, outside 180 to 1e+06 nm"},
    {"refused: wavelength NaN",
     {NONE, 1., NONE, NONE, NONE, NONE, NULL},
     BW_ARGUMENT,
     "wavelength is nan nm, outside 180 to 1e+06 nm"},
    {"refused: power 0",
     {905., 0., NONE, NONE, NONE, NONE, NULL},
     BW_ARGUMENT,
     "average power is 0 W, outside 1e-12 to 1e+09 W"},
    {"refused: power negative",
     {905., -1., NONE, NONE, NONE, NONE, NULL},
     BW_ARGUMENT,
     "average power is -1 W, outside 1e-12 to 1e+09 W"},
    {"refused: power infinite",
     {905., HUGE_VAL, NONE, NONE, NONE, NONE, NULL},
     BW_ARGUMENT,
     "average power is inf W, outside 1e-12 to 1e+09 W"},
    {"refused: rate 0",
     {905., 1., 75., NONE, NONE, 0., NULL},
     BW_ARGUMENT,
     "repetition rate is 0 Hz, outside 1e-06 to 1e+12 Hz"},
    {"refused: what follows is out of range",
     {905., NONE, NONE, 1e6, 1e-15, 1., NULL},
     BW_ARGUMENT,
     "peak power works out as 1e+21 W, outside 1e-12 to 1e+15 W"},
};

static void test_refusal(void **state) {
    const struct refusal_case *c = *state;
    struct bw_emission e;
    struct bw_error error = {0};
    enum bw_status status = bw_emission_resolve(&c->input, &e, &error);
    assert_string_equal(error.text, c->text);
    assert_int_equal(status, c->status);
    assert_true(isnan(e.average_power_w) && isnan(e.peak_power_w) && isnan(e.pulse_energy_j));
}

static void test_continuous(void **state) {
    (void)state;
    struct bw_emission e;
    struct bw_emission_input alone = {810., 8., NONE, NONE, NONE, NONE, NULL};
    assert_int_equal(bw_emission_resolve(&alone, &e, NULL), BW_OK);
    assert_true(e.continuous);
    near(e.average_power_w, 8., 0., "average power");
    near(e.peak_power_w, 8., 0., "peak power");
    struct bw_emission_input full = {810., NONE, 8., NONE, 1e-4, 1e4, NULL};
    assert_int_equal(bw_emission_resolve(&full, &e, NULL), BW_OK);
    assert_true(e.continuous);
    near(e.average_power_w, 8., 1e-14, "average power of a full train");
    near(e.pulse_energy_j, 0., 0., "no pulses");
}

/* Given more than is needed, apart by less than the tolerance: the largest energy holds, and all agree. */
static void test_tolerated(void **state) {
    (void)state;
    for (int sign = -1; sign <= 1; sign += 2) {
        struct bw_emission_input input = {905., .1125 * (1. + sign * 9e-4), 75., NONE, 150e-9, 1e4, NULL};
        struct bw_emission e;
        assert_int_equal(bw_emission_resolve(&input, &e, NULL), BW_OK);
        near(e.average_power_w, fmax(input.average_power_w, .1125), 1e-14, "average power");
        near(e.pulse_energy_j * e.repetition_rate_hz, e.average_power_w, 1e-14, "energy x rate");
        near(e.peak_power_w * e.pulse_duration_s, e.pulse_energy_j, 1e-14, "peak x duration");
    }
}

/* ---- windows ---------------------------------------------------------------------------------- */

static struct bw_emission train(double energy_j, double duration_s, double rate_hz) {
    struct bw_emission_input input = {905., NONE, NONE, energy_j, duration_s, rate_hz, NULL};
    struct bw_emission e;
    struct bw_error error = {0};
    if (bw_emission_resolve(&input, &e, &error) != BW_OK)
        fail_msg("%s", error.text);
    return e;
}

static struct window_case {
    const char *name;
    double rate_hz, duration_s, window_s, want_pulses, count;
} windows[] = {
    /* by hand: whole pulses, and the part of the next that has passed */
    {"window: none", 1., .2, 0., 0., 0.},
    {"window: half a pulse", 1., .2, .1, .5, 1.},
    {"window: one pulse", 1., .2, .2, 1., 1.},
    {"window: a gap changes nothing", 1., .2, .9, 1., 1.},
    {"window: one period", 1., .2, 1., 1., 1.},
    {"window: a quarter of the second", 1., .2, 1.05, 1.25, 2.},
    {"window: ten and a bit", 1., .25, 10.25, 11., 11.},
    {"window: 10 s of 5 kHz are 50000", 5000., 200e-9, 10., 50000., 50000.},
    {"window: 0.25 s of 16 kHz are 4000", 16000., 31.25e-6, .25, 4000., 4000.},
    {"window: 0.3 s of 10 Hz are 3", 10., 1e-9, .3, 3., 3.},
    {"window: 0.7 s of 10 Hz are 7", 10., 1e-12, .7, 7., 7.},
    {"window: 0.07 s of 100 Hz are 7, not 7.000000000000001", 100., 1e-12, .07, 7., 7.},
    {"window: 3e4 s of 90 MHz", 90e6, 1e-13, 3e4, 2.7e12, 2.7e12},
};

static void test_window(void **state) {
    const struct window_case *c = *state;
    struct bw_emission e = train(2e-6, c->duration_s, c->rate_hz);
    near(bw_train_window_energy(&e, c->window_s) / 2e-6, c->want_pulses, 1e-13, "energy of the window in pulses");
    near(bw_train_pulse_count(&e, c->window_s), c->count, 0., "pulses begun");
}

/* Energy of [from, from + length] added pulse by pulse. */
static double brute_energy(const struct bw_emission *e, double from_s, double length_s) {
    double period_s = 1. / e->repetition_rate_hz, sum_s = 0.;
    for (double n = 0.; n * period_s < from_s + length_s; n++) {
        double begin = fmax(n * period_s, from_s);
        double end = fmin(n * period_s + e->pulse_duration_s, from_s + length_s);
        sum_s += fmax(0., end - begin);
    }
    return sum_s * e->peak_power_w;
}

static double uniform(uint64_t *random) {
    *random = *random * 6364136223846793005u + 1442695040888963407u;
    return (double)(*random >> 11) / 9007199254740992.;
}

/* No window of any position holds more than the closed form says, and the one that opens with a pulse as much. */
static void test_window_brute_force(void **state) {
    (void)state;
    uint64_t random = 20260101;
    for (int i = 0; i < 300; i++) {
        double rate_hz = 1. + 20. * uniform(&random);
        struct bw_emission e = train(1e-3, (.01 + .98 * uniform(&random)) / rate_hz, rate_hz);
        double length_s = 12. / rate_hz * uniform(&random), largest = 0.;
        for (int j = 0; j <= 200; j++)
            largest = fmax(largest, brute_energy(&e, j / 200. / rate_hz, length_s));
        double got = bw_train_window_energy(&e, length_s);
        near(got, brute_energy(&e, 0., length_s), 1e-11, "window that opens with a pulse");
        if (!(largest <= got * (1. + 1e-11)))
            fail_msg("a window of %g s holds %.17g J, more than %.17g J", length_s, largest, got);
    }
}

static void test_train_bad_arguments(void **state) {
    (void)state;
    struct bw_emission e = train(1e-3, 1e-3, 10.);
    struct bw_emission steady = {.continuous = true, .average_power_w = 2.};
    near(bw_train_window_energy(&steady, 3.), 6., 0., "continuous");
    near(bw_train_pulse_count(&steady, 3.), 1., 0., "continuous counts one");
    assert_true(isnan(bw_train_window_energy(&e, NONE)) && isnan(bw_train_window_energy(&e, -1.)));
    assert_true(isnan(bw_train_pulse_count(&e, NONE)) && isnan(bw_train_pulse_count(&e, -1.)));
    assert_true(isinf(bw_train_window_energy(&e, HUGE_VAL)) && isinf(bw_train_pulse_count(&e, HUGE_VAL)));
}

/* ---- geometry --------------------------------------------------------------------------------- */

static struct definition_case {
    const char *name;
    enum bw_diameter_definition definition;
    double in_d63, share; /* share of the power inside that diameter, from the definition itself */
} definitions[] = {
    {"definition: d63 holds 63.2 %", BW_D63, 1., 0.63212055882855767},
    {"definition: d86 holds 86.5 %", BW_D86, 1.4142135623730951, 0.86466471676338731},
    {"definition: fwhm holds half", BW_FWHM, 0.83255461115769776, 0.5},
};

static void test_definition(void **state) {
    const struct definition_case *c = *state;
    near(bw_diameter_from_d63(3e-3, c->definition), 3e-3 * c->in_d63, 1e-15, "from d63");
    near(bw_diameter_to_d63(bw_diameter_from_d63(3e-3, c->definition), c->definition), 3e-3, 1e-15, "round trip");
    struct bw_beam beam = ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 3e-3, 0., 0., 3e-3);
    near(bw_beam_fraction(&beam, 0., bw_diameter_from_d63(3e-3, c->definition)), c->share, 1e-14, "share inside");
}

static void test_definition_top_hat(void **state) {
    (void)state;
    near(bw_diameter_to_d63(3e-3, BW_D_TOP_HAT), 3e-3, 0., "to d63");
    near(bw_diameter_from_d63(3e-3, BW_D_TOP_HAT), 3e-3, 0., "from d63");
}

/* NA 0.22, 400 um: at the NA angle the far field has fallen to 5 % of its peak. */
static void test_fibre(void **state) {
    (void)state;
    struct bw_beam beam = bw_beam_from_fibre(.22, 400e-6);
    double far_m = 1e4, peak = bw_beam_irradiance_per_w(&beam, far_m, 0.);
    double radius_m = .22 * far_m, width_m = bw_beam_diameter_m(&beam, far_m);
    near(peak * exp(-4. * radius_m * radius_m / width_m / width_m), .05 * peak, 1e-9, "5 % point");
    near(beam.exit_diameter_m, 400e-6, 0., "exit");
}

static void test_lens(void **state) {
    (void)state;
    struct bw_beam beam = bw_beam_from_lens(.2, 30e-3, 2e-3, BW_GAUSSIAN);
    near(bw_beam_diameter_m(&beam, .2), .4e-3, 1e-14, "f x divergence in the focus");
    near(bw_beam_diameter_m(&beam, 0.), 30e-3, 1e-14, "as it left the lens");
    near(bw_beam_diameter_m(&beam, .4), hypot(30e-3, .4e-3), 1e-14, "as far behind the focus");
    near(bw_beam_diameter_m(&beam, .1), hypot(15e-3, .4e-3), 1e-14, "half way");
}

static struct width_case {
    const char *name;
    struct bw_beam beam;
    double distance_m, want_m;
} widths[] = {
    {"width: hyperbolic 3-4-5", ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 3e-3, 4e-3, 0., 3e-3), 1., 5e-3},
    {"width: linear 3+4", ROUND(BW_GAUSSIAN, BW_LINEAR, 3e-3, 4e-3, 0., 3e-3), 1., 7e-3},
    {"width: collimated", ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 3e-3, 0., 0., 3e-3), 1e300, 3e-3},
    {"width: collimated for ever", ROUND(BW_TOP_HAT, BW_LINEAR, 3e-3, 0., 0., 3e-3), HUGE_VAL, 3e-3},
    {"width: far enough to overflow a square", ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 3e-3, 1e-3, 0., 3e-3), 1e200, 1e197},
    {"width: for ever", ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 3e-3, 1e-3, 0., 3e-3), HUGE_VAL, HUGE_VAL},
    {"width: linear, before the waist", ROUND(BW_GAUSSIAN, BW_LINEAR, 1e-3, 1e-2, 1., 20e-3), .5, 6e-3},
    {"width: never wider than the exit", ROUND(BW_GAUSSIAN, BW_LINEAR, 1e-3, 1e-2, 1., 10e-3), 0., 10e-3},
};

static void test_width(void **state) {
    const struct width_case *c = *state;
    double got = bw_beam_diameter_m(&c->beam, c->distance_m);
    if (isinf(c->want_m))
        assert_true(isinf(got));
    else
        near(got, c->want_m, 1e-14, "d63");
}

struct disc {
    double width_m, offset_m, radius_m;
};

/* Ring of radius r about the aperture's centre: the angle mean of the profile there, times 2 pi r. The mean of
 * exp(2 b cos) over the angle is done by the midpoint rule, which converges geometrically. */
static double ring(double r, void *context) {
    const struct disc *disc = context;
    enum { STEPS = 400 };
    double sum = 0.;
    for (int i = 0; i < STEPS; i++) {
        double x = disc->offset_m + r * cos((i + .5) / STEPS * bw_pi), y = r * sin((i + .5) / STEPS * bw_pi);
        sum += exp(-4. * (x * x + y * y) / disc->width_m / disc->width_m);
    }
    return 2. * bw_pi * r * sum / STEPS * 4. / (bw_pi * disc->width_m * disc->width_m);
}

/* Power of 1 W through the aperture by GSL: an independent route. */
static double quadrature(double width_m, double aperture_m, double offset_m) {
    struct disc disc = {width_m, offset_m, aperture_m / 2.};
    gsl_function function = {ring, &disc};
    gsl_integration_workspace *space = gsl_integration_workspace_alloc(200);
    double result = NONE, estimate = NONE;
    int status = gsl_integration_qag(&function, 0., aperture_m / 2., 0., 1e-11, 200, GSL_INTEG_GAUSS31, space, &result,
                                     &estimate);
    gsl_integration_workspace_free(space);
    assert_int_equal(status, GSL_SUCCESS);
    return result;
}

static struct aperture_case {
    const char *name;
    double width_m, aperture_m;
} apertures[] = {
    {"aperture: D = d", 7e-3, 7e-3},        {"aperture: narrow beam", 1e-3, 7e-3},
    {"aperture: wide beam", 70e-3, 7e-3},   {"aperture: far wider", 7., 7e-3},
    {"aperture: 1 mm in 5 mm", 5e-3, 1e-3}, {"aperture: 3.5 mm in 4 mm", 4e-3, 3.5e-3},
};

static void test_aperture(void **state) {
    const struct aperture_case *c = *state;
    struct bw_beam beam = ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, c->width_m, 0., 0., c->width_m);
    double share = quadrature(c->width_m, c->aperture_m, 0.), area_m2 = bw_pi * c->aperture_m * c->aperture_m / 4.;
    near(bw_beam_fraction(&beam, 0., c->aperture_m), share, 1e-10, "share against quadrature");
    near(bw_beam_irradiance_per_w(&beam, 0., c->aperture_m), share / area_m2, 1e-10, "mean against quadrature");
    double last = bw_beam_irradiance_per_w(&beam, 0., c->aperture_m);
    near(bw_beam_irradiance_off_axis_per_w(&beam, 0., c->aperture_m, 0.), last, 0., "on the axis");
    for (double offset_m = 0.; offset_m <= 3. * c->width_m + c->aperture_m; offset_m += c->width_m / 8.) {
        double bound = bw_beam_irradiance_off_axis_per_w(&beam, 0., c->aperture_m, offset_m);
        double exact = quadrature(c->width_m, c->aperture_m, offset_m) / area_m2;
        if (!(bound >= exact * (1. - 1e-9)))
            fail_msg("at offset %g m the bound %g is below the mean %g", offset_m, bound, exact);
        if (!(bound <= last))
            fail_msg("at offset %g m the bound rises from %g to %g", offset_m, last, bound);
        last = bound;
    }
}

static void test_top_hat(void **state) {
    (void)state;
    struct bw_beam beam = ROUND(BW_TOP_HAT, BW_LINEAR, 10e-3, 0., 0., 10e-3);
    double full = 4. / (bw_pi * 1e-4);
    near(bw_beam_irradiance_per_w(&beam, 0., 0.), full, 1e-14, "peak");
    near(bw_beam_irradiance_per_w(&beam, 0., 7e-3), full, 1e-14, "aperture inside");
    near(bw_beam_irradiance_per_w(&beam, 0., 20e-3), full / 4., 1e-14, "aperture wider");
    near(bw_beam_fraction(&beam, 0., 5e-3), .25, 1e-14, "a quarter");
    near(bw_beam_fraction(&beam, 0., 20e-3), 1., 0., "all");
    near(bw_beam_irradiance_off_axis_per_w(&beam, 0., 7e-3, 8.4999e-3), full, 1e-14, "still touching");
    near(bw_beam_irradiance_off_axis_per_w(&beam, 0., 7e-3, 8.5001e-3), 0., 0., "clear of it");
}

/* Far beyond the aperture a top hat and a Gaussian of the same d63 have the same irradiance on the axis, to
 * (D/d)^2 / 2. */
static void test_profiles_agree(void **state) {
    (void)state;
    struct bw_beam gaussian = ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 5e-3, 2e-3, 0., 5e-3), top_hat = gaussian;
    top_hat.profile = BW_TOP_HAT;
    for (double r = 10.; r < 1e7; r *= 3.) {
        double x = pow(7e-3 / bw_beam_diameter_m(&gaussian, r), 2.);
        near(bw_beam_irradiance_per_w(&gaussian, r, 7e-3), bw_beam_irradiance_per_w(&top_hat, r, 7e-3), x / 2. + 1e-14,
             "far away");
    }
}

static void test_falls_with_distance(void **state) {
    (void)state;
    for (int profile = BW_GAUSSIAN; profile <= BW_TOP_HAT; profile++)
        for (int spread = BW_HYPERBOLIC; spread <= BW_LINEAR; spread++) {
            struct bw_beam beam = ROUND((enum bw_profile)profile, (enum bw_spread)spread, 1e-3, .1, .05, 6e-3);
            double last = HUGE_VAL;
            for (double r = .05; r < 1e6; r *= 1.05) {
                double e = bw_beam_irradiance_per_w(&beam, r, 7e-3);
                if (!(e <= last))
                    fail_msg("rises at %g m", r);
                last = e;
            }
        }
}

static void test_geometry_bad_arguments(void **state) {
    (void)state;
    struct bw_beam beam = ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 1e-3, 1e-3, 0., 1e-3);
    static const double bad[] = {NONE, -1.};
    for (size_t i = 0; i < COUNT(bad); i++) {
        assert_true(isnan(bw_beam_diameter_m(&beam, bad[i])));
        assert_true(isnan(bw_beam_fraction(&beam, bad[i], 7e-3)) && isnan(bw_beam_fraction(&beam, 1., bad[i])));
        assert_true(isnan(bw_beam_irradiance_per_w(&beam, bad[i], 7e-3)));
        assert_true(isnan(bw_beam_irradiance_per_w(&beam, 1., bad[i])));
        assert_true(isnan(bw_beam_irradiance_off_axis_per_w(&beam, 1., 7e-3, bad[i])));
    }
    near(bw_beam_irradiance_per_w(&beam, HUGE_VAL, 7e-3), 0., 0., "nothing arrives at infinity");
    struct bw_beam point = ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 0., 1e-3, 0., 0.);
    near(bw_beam_irradiance_per_w(&point, 0., 7e-3), 4. / (bw_pi * 49e-6), 1e-14, "a focus without width");
    assert_true(isinf(bw_beam_irradiance_per_w(&point, 0., 0.)));
    struct bw_beam unknown = beam;
    unknown.divergence_rad = NONE;
    assert_true(isnan(bw_beam_irradiance_per_w(&unknown, 1., 7e-3)));
}

static struct CMUnitTest
    tests[COUNT(sets) + COUNT(refusals) + COUNT(windows) + COUNT(definitions) + COUNT(widths) + COUNT(apertures) + 11];

#define ADD_ROWS(rows, function)                                                                                       \
    for (size_t i = 0; i < COUNT(rows); i++)                                                                           \
        tests[count++] = (struct CMUnitTest) {                                                                         \
            rows[i].name, function, NULL, NULL, &rows[i]                                                               \
        }

int main(void) {
    size_t count = 0;
    gsl_set_error_handler_off();
    ADD_ROWS(sets, test_set);
    ADD_ROWS(refusals, test_refusal);
    ADD_ROWS(windows, test_window);
    ADD_ROWS(definitions, test_definition);
    ADD_ROWS(widths, test_width);
    ADD_ROWS(apertures, test_aperture);
    const struct CMUnitTest single[] = {
        cmocka_unit_test(test_continuous),
        cmocka_unit_test(test_tolerated),
        cmocka_unit_test(test_window_brute_force),
        cmocka_unit_test(test_train_bad_arguments),
        cmocka_unit_test(test_definition_top_hat),
        cmocka_unit_test(test_fibre),
        cmocka_unit_test(test_lens),
        cmocka_unit_test(test_top_hat),
        cmocka_unit_test(test_profiles_agree),
        cmocka_unit_test(test_falls_with_distance),
        cmocka_unit_test(test_geometry_bad_arguments),
    };
    for (size_t i = 0; i < COUNT(single); i++)
        tests[count++] = single[i];
    return cmocka_run_group_tests_name("beam", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
