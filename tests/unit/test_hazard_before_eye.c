/* hazard: what is in front of the eye (optical aids, goggles), tolerances, and the time to any limit. */
#include <math.h>
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdlib.h>

#include <cmocka.h>

#include <beamward/hazard.h>

#include "round_beam.h"

#define COUNT(array) (sizeof(array) / sizeof *(array))
#define NONE         ((double)NAN)

static void near(double got, double want, double relative, const char *what) {
    if (!(fabs(got - want) <= relative * fabs(want)))
        fail_msg("%s: got %.17g, want %.17g", what, got, want);
}

static struct bw_output output_of(double wavelength_nm, double power_w, double diameter_m, double divergence_rad) {
    struct bw_output output = {.count = 1};
    struct bw_emission_input input = {wavelength_nm, power_w, NONE, NONE, NONE, NONE, NULL};
    assert_int_equal(bw_emission_resolve(&input, &output.emissions[0], NULL), BW_OK);
    output.beams[0] = (struct bw_beam)ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, diameter_m, divergence_rad, 0., diameter_m);
    return output;
}

static const struct bw_table *icnirp(void) {
    return bw_tables_find("icnirp-2013");
}

static void prepare(struct bw_hazard *hazard, const struct bw_output *output, enum bw_target target,
                    double exposure_s, double subtense_rad) {
    struct bw_viewing_case viewing = {.target = target, .exposure_s = exposure_s, .subtense_rad = subtense_rad};
    struct bw_error error = {.status = BW_OK};
    if (bw_hazard_prepare(icnirp(), output, &viewing, hazard, NULL, &error) != BW_OK)
        fail_msg("%s", error.text);
}

/* ---- aids: the ratio and the extended distance in closed form -------------------------------------- */

/* 810 nm, 10 s, point source: 18 CA t^0.75 / t within 7 mm; 1550 nm, 10 s: 1000 W/m2 within 3.5 mm; at the eye
 * tau P (1 - exp(-(D'/d)^2)) / (pi D^2/4), D' = min(Do, M D) (common practice). */
static struct aid_case {
    const char *name;
    double wavelength_nm, power_w, exit_m, divergence_rad;
    double magnification, objective_m, transmittance;
} aids[] = {
    {"binoculars 7 x 50", 810, 8, 21e-3, 0.14, 7, 50e-3, 0.8},
    {"binoculars 10 x 25: the objective takes in less than M times the pupil", 810, 8, 21e-3, 0.14, 10, 25e-3, 0.8},
    {"loupes", 810, 8, 21e-3, 0.14, 2.5, 16e-3, 0.9},
    {"magnifies nothing, loses nothing", 810, 8, 21e-3, 0.14, 1, 50e-3, 1},
    {"a narrow beam loses what the glass takes", 810, 1, 1e-3, 1e-3, 7, 50e-3, 0.7},
    {"front of the eye", 1550, 20, 5e-3, 0.05, 4, 20e-3, 0.9},
};

static double eye_aperture_m(const struct aid_case *c) {
    return c->wavelength_nm > 1400 ? 3.5e-3 : 7e-3;
}

static double eye_limit_w_m2(const struct aid_case *c) {
    return c->wavelength_nm > 1400 ? 1000. : 18. * pow(10., 0.002 * (c->wavelength_nm - 700.)) * pow(10., -0.25);
}

static void test_aid(void **state) {
    const struct aid_case *c = *state;
    struct bw_aid aid = {.magnification = c->magnification, .objective_m = c->objective_m, .band_count = 1,
                         .bands = {{400, 2000, c->transmittance}}};
    struct bw_output output = output_of(c->wavelength_nm, c->power_w, c->exit_m, c->divergence_rad);
    struct bw_hazard hazard;
    struct bw_reach reach;
    output.aid = &aid;
    prepare(&hazard, &output, BW_EYE, 10., 0.);
    double eye_m = eye_aperture_m(c), taken_m = fmin(c->objective_m, c->magnification * eye_m);
    double area_m2 = bw_pi * eye_m * eye_m / 4.;
    for (double distance_m = 0.; distance_m < 100.; distance_m = 2. * distance_m + 0.3) {
        double width_m = hypot(c->exit_m, c->divergence_rad * distance_m);
        double want = c->transmittance * c->power_w * -expm1(-pow(taken_m / width_m, 2.)) / area_m2 /
                      fmin(eye_limit_w_m2(c), 1e300);
        if (c->wavelength_nm < 1400) /* printed rows at 10 s: 18 t^0.75 / t and 10 W/m2, the lower holds */
            want = fmax(want, want * eye_limit_w_m2(c) / (10. * pow(10., 0.002 * (c->wavelength_nm - 700.))));
        near(bw_hazard_ratio(&hazard, distance_m), want, 1e-12, "ratio");
    }
    double limit_w_m2 = hazard.terms[0].limit.irradiance_w_m2; /* at the objective, over D' */
    assert_int_equal(bw_hazard_reach(&hazard, BW_EMISSIONS_MAX, &reach, NULL, NULL), BW_OK);
    double share = limit_w_m2 * bw_pi * taken_m * taken_m / 4. / c->power_w;
    double width_m = taken_m / sqrt(-log1p(-share));
    near(reach.distance_m, sqrt(width_m * width_m - c->exit_m * c->exit_m) / c->divergence_rad, 1e-9, "ENOHD");
}

/* Of a beam much wider than the objective: tau min(M^2, (Do/D)^2), the gain as commonly given. */
static void test_gain(void **state) {
    const struct aid_case *c = *state;
    struct bw_aid aid = {.magnification = c->magnification, .objective_m = c->objective_m, .band_count = 1,
                         .bands = {{400, 2000, c->transmittance}}};
    struct bw_output output = output_of(c->wavelength_nm, c->power_w, 1., 1.);
    struct bw_hazard naked, aided;
    prepare(&naked, &output, BW_EYE, 10., 0.);
    output.aid = &aid;
    prepare(&aided, &output, BW_EYE, 10., 0.);
    double gain = c->transmittance * fmin(pow(c->magnification, 2.), pow(c->objective_m / eye_aperture_m(c), 2.));
    near(bw_hazard_ratio(&aided, 1e4) / bw_hazard_ratio(&naked, 1e4), gain, 1e-9, "gain");
}

/* A source that looks M times as wide has the limits of a source so wide. */
static void test_subtense(void **state) {
    (void)state;
    struct bw_aid aid = {.magnification = 3., .objective_m = 50e-3};
    struct bw_output output = output_of(810, 8, 1., 1.), plain = output;
    struct bw_hazard wide, aided;
    prepare(&wide, &plain, BW_EYE, 10., 30e-3);
    output.aid = &aid;
    prepare(&aided, &output, BW_EYE, 10., 10e-3);
    near(bw_hazard_ratio(&aided, 1e4), 9. * bw_hazard_ratio(&wide, 1e4), 1e-9, "ratio");
}

/* The same for a lit spot: rho P / (pi r^2) at the objective, gain M^2, limits for M alpha. */
static void test_diffuse(void **state) {
    (void)state;
    struct bw_aid aid = {.magnification = 4., .objective_m = 50e-3};
    struct bw_output output = output_of(810, 30, 5e-3, .1), plain = output;
    struct bw_hazard aided;
    struct bw_spot spot = {.reflectance = 0.8, .diameter_m = {5e-3}};
    output.aid = &aid;
    prepare(&aided, &output, BW_EYE, 100., 0.);
    for (double distance_m = 0.1; distance_m < 20.; distance_m *= 1.7) {
        struct bw_train_limit_set limits;
        struct bw_ratio ratio;
        struct bw_viewing_case viewing = {.target = BW_EYE, .exposure_s = 100.,
                                          .subtense_rad = fmin(4. * 2. * atan(2.5e-3 / distance_m), bw_pi / 2.)};
        assert_int_equal(bw_hazard_train_limits(icnirp(), &plain.emissions[0], &viewing, &limits, NULL, NULL), BW_OK);
        double want = 16. * 0.8 * 30. / bw_pi / distance_m / distance_m / limits.limits[0].irradiance_w_m2;
        assert_int_equal(bw_hazard_diffuse_ratio(&aided, &spot, distance_m, &ratio, NULL), BW_OK);
        near(ratio.total, want, 1e-12, "diffuse ratio");
    }
    struct bw_reach reach;
    struct bw_ratio at, before;
    assert_int_equal(bw_hazard_diffuse_reach(&aided, &spot, &reach, NULL, NULL), BW_OK);
    assert_int_equal(bw_hazard_diffuse_ratio(&aided, &spot, reach.distance_m, &at, NULL), BW_OK);
    assert_int_equal(bw_hazard_diffuse_ratio(&aided, &spot, reach.distance_m * (1. - 1e-9), &before, NULL), BW_OK);
    assert_true(at.total <= 1. && before.total > 1.);
}

/* 0.24 s pulses, 300 of them in T2 = 100 s (test_hazard.c, "step of a diffuse spot"), on a spot of 10 cm / M behind an
 * aid that magnifies M times and loses what it gathers: as the naked eye on 10 cm. The correction by the train holds from
 * 100 down to alpha_max(0.24 s) = 200 x 0.24^1/2 = 98.0 mrad of what the eye sees, and only there is the ratio above 1. */
static void test_diffuse_steps(void **state) {
    (void)state;
    static const double magnifications[] = {1., 2., 3., 5., 7., 10., 13., 20.};
    for (size_t i = 0; i < COUNT(magnifications); i++) {
        double m = magnifications[i];
        struct bw_output output = {.count = 1};
        struct bw_emission_input input = {650, NONE, 1100. / .72, NONE, .24, 3., NULL};
        struct bw_aid aid = {.magnification = m, .objective_m = 1., .band_count = 1, .bands = {{600, 700, 1. / m / m}}};
        struct bw_spot spot = {.reflectance = 1., .diameter_m = {.1 / m}};
        struct bw_hazard hazard;
        struct bw_reach reach;
        assert_int_equal(bw_emission_resolve(&input, &output.emissions[0], NULL), BW_OK);
        output.beams[0] = (struct bw_beam)ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, .1, 0., 0., .1);
        output.aid = &aid;
        prepare(&hazard, &output, BW_EYE, 100., 0.);
        assert_int_equal(bw_hazard_diffuse_reach(&hazard, &spot, &reach, NULL, NULL), BW_OK);
        near(reach.distance_m, .1 / m / 2. / tan(.2 * sqrt(.24) / 2. / m), 1e-9, "where the correction eases");
    }
}

static struct glass_case {
    const char *name;
    double wavelength_nm, want;
} glasses[] = {
    {"302.4 nm: glass passes nothing", 302.4, 0.},
    {"302.5 nm: no band, all of it", 302.5, 1.},
    {"399.9 nm: no band", 399.9, 1.},
    {"400 nm: the end of a band", 400., 0.9},
    {"700 nm: two bands, the larger", 700., 0.9},
    {"701 nm", 701., 0.5},
    {"1400 nm: the other end", 1400., 0.5},
    {"4000 nm: no band, all of it", 4000., 1.},
    {"4001 nm: nothing", 4001., 0.},
    {"10600 nm: nothing", 10600., 0.},
    {"not a number: nothing is claimed to be seen through it", NONE, 0.},
};

static void test_glass(void **state) {
    const struct glass_case *c = *state;
    struct bw_aid aid = {.band_count = 2, .bands = {{400, 700, 0.9}, {700, 1400, 0.5}}};
    double got = bw_aid_transmittance(&aid, c->wavelength_nm);
    if (!(fabs(got - c->want) <= 0.))
        fail_msg("got %g, want %g", got, c->want);
}

static void test_opaque(void **state) {
    (void)state;
    struct bw_aid aid = {.magnification = 7., .objective_m = 50e-3};
    struct bw_output output = output_of(10600, 50, 5e-3, .05);
    struct bw_hazard hazard;
    struct bw_reach reach;
    output.aid = &aid;
    prepare(&hazard, &output, BW_EYE, 10., 0.);
    assert_true(bw_hazard_ratio(&hazard, 0.) <= 0.);
    assert_int_equal(bw_hazard_reach(&hazard, BW_EMISSIONS_MAX, &reach, NULL, NULL), BW_OK);
    assert_true(reach.distance_m <= 0. && !reach.unbounded);
}

static void test_skin_behind_nothing(void **state) {
    (void)state;
    struct bw_aid aid = {.magnification = 7., .objective_m = 50e-3};
    double passes[] = {1e-6};
    struct bw_output output = output_of(810, 8, 5e-3, .05), plain = output;
    struct bw_hazard naked, hazard;
    prepare(&naked, &plain, BW_SKIN, 10., 0.);
    output.aid = &aid;
    output.passes = passes;
    prepare(&hazard, &output, BW_SKIN, 10., 0.);
    near(bw_hazard_ratio(&hazard, 0.3), bw_hazard_ratio(&naked, 0.3), 0., "skin");
}

static struct refused_case {
    const char *name;
    double magnification, objective_m, transmittance, passes;
} refused[] = {
    {"magnification below 1", 0.9, 0.05, 1, 1},     {"magnification beyond 200", 201, 0.05, 1, 1},
    {"no magnification", NONE, 0.05, 1, 1},          {"objective of nothing", 7, 0, 1, 1},
    {"objective beyond 1 m", 7, 1.1, 1, 1},         {"objective NaN", 7, NONE, 1, 1},
    {"transmittance above 1", 7, 0.05, 1.01, 1},    {"transmittance NaN", 7, 0.05, NONE, 1},
    {"goggles that amplify", 7, 0.05, 1, 1.01},     {"goggles below nothing", 7, 0.05, 1, -0.1},
    {"goggles of NaN", 7, 0.05, 1, NONE},
};

static void test_refused(void **state) {
    const struct refused_case *c = *state;
    struct bw_aid aid = {.magnification = c->magnification, .objective_m = c->objective_m, .band_count = 1,
                         .bands = {{400, 2000, c->transmittance}}};
    double passes[] = {c->passes};
    struct bw_output output = output_of(810, 8, 5e-3, .05);
    struct bw_viewing_case viewing = {.target = BW_EYE, .exposure_s = 10.};
    struct bw_hazard hazard;
    struct bw_error error = {.status = BW_OK};
    output.aid = &aid;
    output.passes = passes;
    assert_int_equal(bw_hazard_prepare(icnirp(), &output, &viewing, &hazard, NULL, &error), BW_ARGUMENT);
    assert_true(hazard.term_count == 0 && error.text[0] != '\0');
}

/* ---- goggles: the same as so much less power -------------------------------------------------------- */

static void test_goggles(void **state) {
    (void)state;
    double passes[] = {1e-3}, nothing[] = {0.};
    struct bw_output output = output_of(810, 8, 5e-3, .05), weak = output_of(810, 8e-3, 5e-3, .05);
    struct bw_hazard hazard, want;
    struct bw_viewing_case viewing = {.target = BW_EYE};
    struct bw_permitted_time time, want_time;
    output.passes = passes;
    prepare(&hazard, &output, BW_EYE, 10., 0.);
    prepare(&want, &weak, BW_EYE, 10., 0.);
    near(bw_hazard_ratio(&hazard, 0.2), bw_hazard_ratio(&want, 0.2), 1e-13, "ratio");
    assert_int_equal(bw_hazard_permitted_time(icnirp(), &output, &viewing, 0.4, &time, NULL, NULL), BW_OK);
    assert_int_equal(bw_hazard_permitted_time(icnirp(), &weak, &viewing, 0.4, &want_time, NULL, NULL), BW_OK);
    assert_true(time.exposure_s > 0. && !time.unbounded);
    near(time.exposure_s, want_time.exposure_s, 1e-11, "time");
    output.passes = nothing;
    prepare(&hazard, &output, BW_EYE, 10., 0.);
    assert_true(bw_hazard_ratio(&hazard, 0.) <= 0.);
    assert_int_equal(bw_hazard_permitted_time(icnirp(), &output, &viewing, 0., &time, NULL, NULL), BW_OK);
    assert_true(time.unbounded);
}

/* ---- tolerances of the pulses ------------------------------------------------------------------------ */

/* Each corner by itself, as an output of its own: the ratio at any place is the largest of them. */
static struct corner_case {
    const char *name;
    struct bw_emission_input given;
    double power, duration, rate;
    enum bw_target target;
    const char *rules;
} corners[] = {
    {"peak given", {905, NONE, 75, NONE, 150e-9, 1e4, NULL}, 0, 0.1, 0.2, BW_EYE, "icnirp-2013"},
    {"peak and power", {905, NONE, 75, NONE, 150e-9, 1e4, NULL}, 0.2, 0.1, 0.2, BW_EYE, "iec-60825-1-2014"},
    {"average given", {905, 0.5, NONE, NONE, 150e-9, 1e4, NULL}, 0.1, 0.3, 0.3, BW_EYE, "eu-2006-25"},
    {"long pulses", {810, 5, NONE, NONE, 5e-3, 50, NULL}, 0.1, 0.3, 0.3, BW_EYE, "icnirp-2013"},
    {"across Ti", {810, 5, NONE, NONE, 5.2e-6, 1e4, NULL}, 0, 0.1, 0.1, BW_EYE, "iec-60825-1-2014"},
    {"duration alone", {810, 5, NONE, NONE, 5.2e-6, 1e4, NULL}, 0, 0.1, 0, BW_EYE, "iec-60825-1-2014"},
    {"energy given, skin", {1064, NONE, NONE, 0.02, 12e-9, 11, NULL}, 0.2, 0.5, 0.2, BW_SKIN, "icnirp-2013"},
    {"apertures that switch", {1550, NONE, NONE, 0.5, 0.3, 1.2, NULL}, 0, 0.4, 0.2, BW_EYE, "icnirp-2013"},
    {"continuous: nothing to vary", {810, 8, NONE, NONE, NONE, NONE, NULL}, 0.2, 0, 0, BW_EYE, "icnirp-2013"},
};

static double ratio_of(const struct corner_case *c, double power, double duration, double rate, double distance_m) {
    struct bw_output output = output_of(810, 1, 3e-3, .02);
    struct bw_viewing_case viewing = {.target = c->target, .exposure_s = 10.};
    struct bw_hazard hazard;
    assert_int_equal(bw_emission_varied(&c->given, power, duration, rate, &output.emissions[0], NULL), BW_OK);
    assert_int_equal(bw_hazard_prepare(bw_tables_find(c->rules), &output, &viewing, &hazard, NULL, NULL), BW_OK);
    return bw_hazard_ratio(&hazard, distance_m);
}

static void test_corner(void **state) {
    const struct corner_case *c = *state;
    struct bw_tolerance tolerance = {c->given, c->power, c->duration, c->rate};
    struct bw_output output = output_of(810, 1, 3e-3, .02);
    struct bw_viewing_case viewing = {.target = c->target, .exposure_s = 10.};
    struct bw_hazard hazard;
    struct bw_working working = {0};
    assert_int_equal(bw_emission_varied(&c->given, 1. + c->power, 1., 1., &output.emissions[0], NULL), BW_OK);
    output.tolerances = &tolerance;
    assert_int_equal(bw_hazard_prepare(bw_tables_find(c->rules), &output, &viewing, &hazard, &working, NULL), BW_OK);
    assert_true(working.count > 0);
    bw_working_free(&working);
    for (double distance_m = 0.; distance_m < 1e3; distance_m = 3. * distance_m + 0.01) {
        double largest = 0., smallest = HUGE_VAL;
        for (int d = -1; d <= 1; d++)
            for (int r = -1; r <= 1; r++) {
                double ratio = ratio_of(c, 1. + c->power, 1. + d * c->duration, 1. + r * c->rate, distance_m);
                largest = fmax(largest, ratio);
                smallest = fmin(smallest, ratio);
            }
        double got = bw_hazard_ratio(&hazard, distance_m);
        if (!(got >= largest * (1. - 1e-12)))
            fail_msg("at %g m: %.15g, but a corner has %.15g", distance_m, got, largest);
        /* One aperture stands for all corners: exact unless they differ in it. */
        if (!(got <= largest * (c->given.wavelength_nm > 1400. ? 2. : 1. + 1e-12)))
            fail_msg("at %g m: %.15g, more than any corner, %.15g", distance_m, got, largest);
        if (c->duration > 0. && !(largest > smallest))
            fail_msg("at %g m all corners are the same", distance_m);
    }
}

/* ---- the time to any limit ---------------------------------------------------------------------------- */

static enum bw_status rising(double exposure_s, void *context, double *ratio, struct bw_error *error) {
    (void)error;
    *ratio = exposure_s / *(const double *)context;
    return BW_OK;
}

static enum bw_status failing(double exposure_s, void *context, double *ratio, struct bw_error *error) {
    (void)context;
    if (exposure_s > 1.)
        return bw_error_set(error, BW_OUT_OF_RANGE, "no ratio after %g s", exposure_s);
    *ratio = 0.1;
    return BW_OK;
}

static struct time_case {
    const char *name;
    double limit_s, want_s; /* want 0: none; infinite: unbounded */
} times[] = {
    {"1 us", 1e-6, 1e-6},     {"0.123 s", 0.123, 0.123},     {"an edge, 10 s", 10., 10.},
    {"29999 s", 29999., 29999.}, {"exactly the last time", 3e4, HUGE_VAL}, {"never", 1e9, HUGE_VAL},
    {"at once", 1e-14, 0.},   {"not a number: no time at all", NONE, 0.},
};

static void test_time(void **state) {
    const struct time_case *c = *state;
    struct bw_output output = output_of(810, 8, 5e-3, .05);
    const struct bw_output *outputs[] = {&output, &output};
    struct bw_viewing_case viewing = {.target = BW_EYE};
    struct bw_permitted_time time;
    double limit_s = c->limit_s;
    assert_int_equal(bw_hazard_time_to_limit(icnirp(), outputs, 2, &viewing, rising, &limit_s, &time, NULL), BW_OK);
    assert_true(time.unbounded == (isinf(c->want_s) != 0));
    if (!time.unbounded)
        near(time.exposure_s, c->want_s, 2e-12, "time");
    assert_true(time.unbounded || time.exposure_s <= c->want_s);
}

static void test_time_fails(void **state) {
    (void)state;
    struct bw_output output = output_of(810, 8, 5e-3, .05);
    const struct bw_output *outputs[] = {&output};
    struct bw_viewing_case viewing = {.target = BW_EYE};
    struct bw_permitted_time time;
    struct bw_error error = {.status = BW_OK};
    assert_int_equal(bw_hazard_time_to_limit(icnirp(), outputs, 1, &viewing, failing, NULL, &time, &error),
                     BW_OUT_OF_RANGE);
    assert_true(isnan(time.exposure_s) && !time.unbounded && error.text[0] != '\0');
    assert_int_equal(bw_hazard_time_to_limit(icnirp(), outputs, 0, &viewing, rising, NULL, &time, NULL), BW_ARGUMENT);
}

static size_t add(struct CMUnitTest *tests, size_t count, const char *name, CMUnitTestFunction test, void *row) {
    tests[count] = (struct CMUnitTest){name, test, NULL, NULL, row};
    return count + 1;
}

int main(void) {
    struct CMUnitTest tests[200];
    size_t n = 0;
    for (size_t i = 0; i < COUNT(aids); i++) {
        n = add(tests, n, aids[i].name, test_aid, &aids[i]);
        n = add(tests, n, aids[i].name, test_gain, &aids[i]);
    }
    for (size_t i = 0; i < COUNT(glasses); i++)
        n = add(tests, n, glasses[i].name, test_glass, &glasses[i]);
    for (size_t i = 0; i < COUNT(refused); i++)
        n = add(tests, n, refused[i].name, test_refused, &refused[i]);
    for (size_t i = 0; i < COUNT(corners); i++)
        n = add(tests, n, corners[i].name, test_corner, &corners[i]);
    for (size_t i = 0; i < COUNT(times); i++)
        n = add(tests, n, times[i].name, test_time, &times[i]);
    n = add(tests, n, "subtense through an aid", test_subtense, NULL);
    n = add(tests, n, "lit spot through an aid", test_diffuse, NULL);
    n = add(tests, n, "steps of a lit spot through an aid", test_diffuse_steps, NULL);
    n = add(tests, n, "glass is opaque to 10.6 um", test_opaque, NULL);
    n = add(tests, n, "skin has no goggles", test_skin_behind_nothing, NULL);
    n = add(tests, n, "goggles", test_goggles, NULL);
    n = add(tests, n, "time: failures", test_time_fails, NULL);
    return _cmocka_run_group_tests("hazard before the eye", tests, n, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
