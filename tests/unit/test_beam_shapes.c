/* beam: elliptical beams, apertures beside the axis, single-mode fibres, bounds between two distances. */
#include <math.h>
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdlib.h>

#include <cmocka.h>
#include <gsl/gsl_errno.h>
#include <gsl/gsl_integration.h>

#include <beamward/beam.h>

#include "round_beam.h"

#define COUNT(array) (sizeof(array) / sizeof *(array))

static void near(double got, double want, double relative, const char *what) {
    if (!(fabs(got - want) <= relative * fabs(want)))
        fail_msg("%s: got %.17g, want %.17g (%.3g off)", what, got, want, got / want - 1.);
}

static double uniform(uint64_t *random) {
    *random = *random * 6364136223846793005u + 1442695040888963407u;
    return (double)(*random >> 11) / 9007199254740992.;
}

static struct bw_beam ellipse(enum bw_profile profile, double x_m, double y_m) {
    struct bw_beam beam = ROUND(profile, BW_HYPERBOLIC, x_m, 0., 0., x_m);
    beam.elliptical = true;
    beam.diameter_y_m = beam.exit_diameter_y_m = y_m;
    return beam;
}

/* ---- against GSL: polar coordinates about the aperture's centre, another route than strips ---------- */

struct polar {
    enum bw_profile profile;
    double x_m, y_m, offset_m, radius_m, r_m;
};

static double profile_at(const struct polar *p, double x_m, double y_m) {
    double level = 4. * (x_m * x_m / p->x_m / p->x_m + y_m * y_m / p->y_m / p->y_m);
    return p->profile == BW_TOP_HAT ? (level <= 1. ? 1. : 0.) : exp(-level);
}

/* The ring of radius r: midpoint rule round the circle. */
static double ring(double r_m, void *context) {
    const struct polar *p = context;
    enum { STEPS = 2000 };
    double sum = 0.;
    for (int i = 0; i < STEPS; i++) {
        double angle = 2. * bw_pi * (i + .5) / STEPS;
        sum += profile_at(p, p->offset_m + r_m * cos(angle), r_m * sin(angle));
    }
    return 2. * bw_pi * r_m * sum / STEPS * 4. / (bw_pi * p->x_m * p->y_m);
}

static double integrate(gsl_function *function, double to, double tolerance) {
    gsl_integration_workspace *space = gsl_integration_workspace_alloc(400);
    double result = (double)NAN, estimate = (double)NAN;
    int status =
        gsl_integration_qag(function, 0., to, 0., tolerance, 400, GSL_INTEG_GAUSS31, space, &result, &estimate);
    gsl_integration_workspace_free(space);
    assert_int_equal(status, GSL_SUCCESS);
    return result;
}

static double gaussian_share(double x_m, double y_m, double aperture_m, double offset_m) {
    struct polar p = {BW_GAUSSIAN, x_m, y_m, offset_m, aperture_m / 2., 0.};
    gsl_function function = {ring, &p};
    return integrate(&function, aperture_m / 2., 1e-13);
}

static struct ellipse_case {
    const char *name;
    double x_m, y_m, aperture_m;
} ellipses[] = {
    {"ellipse: 4 x 2 mm in 7 mm", 4e-3, 2e-3, 7e-3},
    {"ellipse: 2 x 4 mm in 7 mm", 2e-3, 4e-3, 7e-3},
    {"ellipse: 30 x 10 mm in 7 mm", 30e-3, 10e-3, 7e-3},
    {"ellipse: 0.5 x 7 mm in 7 mm", .5e-3, 7e-3, 7e-3},
    {"ellipse: 1 m x 1 mm in 7 mm", 1., 1e-3, 7e-3},
    {"ellipse: 5 x 6 mm in 1 mm", 5e-3, 6e-3, 1e-3},
    {"ellipse: 1 m x 2 m in 1 mm", 1., 2., 1e-3},
    {"ellipse: 0.1 x 7 mm in 7 mm", .1e-3, 7e-3, 7e-3},
    {"ellipse: just before the other rule", 7e-3 / 15.99, 9e-3, 7e-3},
    {"ellipse: just after it", 7e-3 / 16.01, 9e-3, 7e-3},
};

static void test_ellipse(void **state) {
    const struct ellipse_case *c = *state;
    struct bw_beam beam = ellipse(BW_GAUSSIAN, c->x_m, c->y_m);
    double want = gaussian_share(c->x_m, c->y_m, c->aperture_m, 0.);
    near(bw_beam_fraction(&beam, 0., c->aperture_m), want, 1e-12, "share against quadrature");
    near(bw_beam_irradiance_per_w(&beam, 0., c->aperture_m), want / (bw_pi * c->aperture_m * c->aperture_m / 4.), 1e-12,
         "mean against quadrature");
    near(bw_beam_irradiance_per_w(&beam, 0., 0.), 4. / (bw_pi * c->x_m * c->y_m), 1e-14, "peak");
}

/* A line of light: exp(-(2y/d)^2) along, no width across: erf(D/d). From 1 um on its width tells in the 12th digit. */
static void test_line(void **state) {
    (void)state;
    static const double lengths_m[] = {1e-3, 7e-3, 50e-3, 1.};
    for (size_t i = 0; i < COUNT(lengths_m); i++) {
        struct bw_beam beam = ellipse(BW_GAUSSIAN, 1e-9, lengths_m[i]);
        near(bw_beam_fraction(&beam, 0., 7e-3), erf(7e-3 / lengths_m[i]), 1e-12, "line");
    }
}

static double chord(double x_m, void *context) { /* of ellipse and disc, whichever is shorter, in the first quadrant */
    const struct polar *p = context;
    double disc = sqrt(fmax(0., p->radius_m * p->radius_m - x_m * x_m));
    double other = x_m < p->x_m / 2. ? p->y_m / 2. * sqrt(1. - 4. * x_m * x_m / p->x_m / p->x_m) : 0.;
    return fmin(disc, other);
}

static struct ellipse_case hats[] = {
    {"top-hat ellipse: inside", 4e-3, 2e-3, 7e-3},
    {"top-hat ellipse: around", 40e-3, 20e-3, 7e-3},
    {"top-hat ellipse: crossing", 20e-3, 2e-3, 7e-3},
    {"top-hat ellipse: crossing, turned", 2e-3, 20e-3, 7e-3},
    {"top-hat ellipse: barely crossing", 7.01e-3, 6.99e-3, 7e-3},
    {"top-hat ellipse: thin", 30e-3, .3e-3, 7e-3},
};

static void test_hat(void **state) {
    const struct ellipse_case *c = *state;
    struct bw_beam beam = ellipse(BW_TOP_HAT, c->x_m, c->y_m);
    struct polar p = {BW_TOP_HAT, fmin(c->x_m, c->y_m), fmax(c->x_m, c->y_m), 0., c->aperture_m / 2., 0.};
    gsl_function function = {chord, &p};
    double want = 4. * integrate(&function, fmin(p.x_m, c->aperture_m) / 2., 1e-11) / (bw_pi * c->x_m * c->y_m / 4.);
    near(bw_beam_fraction(&beam, 0., c->aperture_m), want, 1e-9, "share against quadrature");
}

/* Equal axes are a circle; axes may be swapped; the mean falls as either axis grows. */
static void test_ellipse_limits(void **state) {
    (void)state;
    static const double widths_m[] = {1e-6, 1e-4, 1e-3, 3e-3, 7e-3, 8e-3, .1, 3., 1e4, 1e80};
    static const double apertures_m[] = {0., 1e-3, 3.5e-3, 7e-3, 50e-3};
    for (int profile = BW_GAUSSIAN; profile <= BW_TOP_HAT; profile++)
        for (size_t i = 0; i < COUNT(widths_m); i++)
            for (size_t j = 0; j < COUNT(apertures_m); j++) {
                double d = widths_m[i], aperture_m = apertures_m[j];
                struct bw_beam circle = ROUND((enum bw_profile)profile, BW_HYPERBOLIC, d, 0., 0., d);
                struct bw_beam equal = ellipse((enum bw_profile)profile, d, d);
                struct bw_beam wide = ellipse((enum bw_profile)profile, d, 1.3 * d);
                struct bw_beam turned = ellipse((enum bw_profile)profile, 1.3 * d, d);
                double round_per_w = bw_beam_irradiance_per_w(&circle, 0., aperture_m);
                near(bw_beam_irradiance_per_w(&equal, 0., aperture_m), round_per_w, 1e-12, "equal axes");
                near(bw_beam_fraction(&equal, 0., aperture_m), bw_beam_fraction(&circle, 0., aperture_m), 1e-12,
                     "share");
                near(bw_beam_irradiance_per_w(&turned, 0., aperture_m), bw_beam_irradiance_per_w(&wide, 0., aperture_m),
                     1e-13, "turned");
                assert_true(bw_beam_irradiance_per_w(&wide, 0., aperture_m) <= round_per_w * (1. + 1e-13));
            }
}

static void test_ellipse_axes(void **state) {
    (void)state;
    struct bw_beam beam = {.profile = BW_GAUSSIAN,
                           .diameter_m = 3e-3,
                           .divergence_rad = 4e-3,
                           .exit_diameter_m = 3e-3,
                           .elliptical = true,
                           .diameter_y_m = 5e-3,
                           .divergence_y_rad = 12e-3,
                           .exit_diameter_y_m = 5e-3};
    near(bw_beam_diameter_m(&beam, 1.), 5e-3, 1e-14, "the smaller");
    near(bw_beam_widest_m(&beam, 1.), 13e-3, 1e-14, "the larger");
    near(bw_beam_irradiance_per_w(&beam, 1., 0.), 4. / (bw_pi * 65e-6), 1e-14, "peak");
    near(bw_beam_exit_radius_m(&beam), 2.5e-3, 1e-14, "exit");
    beam.cluster = (struct bw_cluster){2, {{3e-3, 4e-3}, {-3e-3, 0.}}, {.5, .5}};
    near(bw_beam_outermost_m(&beam), 5e-3, 1e-14, "outermost emitter");
    near(bw_beam_exit_radius_m(&beam), 7.5e-3, 1e-14, "exit of the head");
    assert_true(isnan(bw_beam_widest_m(&beam, -1.)) && isnan(bw_beam_diameter_m(&beam, (double)NAN)));
    assert_true(isnan(bw_beam_fraction(&beam, -1., 7e-3)) && isnan(bw_beam_irradiance_per_w(&beam, 0., -1.)));
    near(bw_beam_irradiance_per_w(&beam, HUGE_VAL, 7e-3), 0., 0., "nothing arrives at infinity");
}

/* ---- beside the axis -------------------------------------------------------------------------------- */

static struct beside_case {
    const char *name;
    double width_m, aperture_m;
} besides[] = {
    {"beside: D = d", 7e-3, 7e-3},        {"beside: narrow", 1e-3, 7e-3},  {"beside: wide", 70e-3, 7e-3},
    {"beside: 1 mm in 5 mm", 5e-3, 1e-3}, {"beside: 0.5 mm", .5e-3, 7e-3},
};

static void test_beside(void **state) {
    const struct beside_case *c = *state;
    struct bw_beam beam = ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, c->width_m, 0., 0., c->width_m);
    double area_m2 = bw_pi * c->aperture_m * c->aperture_m / 4., last = HUGE_VAL;
    for (double offset_m = 0.; offset_m <= 2.5 * c->width_m + c->aperture_m / 2.; offset_m += c->width_m / 7.) {
        double got = bw_beam_irradiance_beside_per_w(&beam, 0., c->aperture_m, offset_m);
        near(got, gaussian_share(c->width_m, c->width_m, c->aperture_m, offset_m) / area_m2, 1e-11,
             "against quadrature");
        assert_true(got <= last * (1. + 1e-13));
        assert_true(got <= bw_beam_irradiance_off_axis_per_w(&beam, 0., c->aperture_m, offset_m) * (1. + 1e-13));
        last = got;
    }
}

/* Much narrower than the aperture: never below the mean, and gone beyond its edge. */
static void test_beside_narrow(void **state) {
    (void)state;
    struct bw_beam beam = ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, .2e-3, 0., 0., .2e-3);
    double inside = bw_beam_irradiance_per_w(&beam, 0., 7e-3);
    near(bw_beam_irradiance_beside_per_w(&beam, 0., 7e-3, 3e-3), inside, 1e-12, "well inside");
    double at_edge = bw_beam_irradiance_beside_per_w(&beam, 0., 7e-3, 3.5e-3);
    double exact = gaussian_share(.2e-3, .2e-3, 7e-3, 3.5e-3) / (bw_pi * 49e-6 / 4.);
    assert_true(at_edge >= exact * (1. - 1e-9) && at_edge <= 1.05 * exact);
    assert_true(bw_beam_irradiance_beside_per_w(&beam, 0., 7e-3, 4.5e-3) <= 1e-20 * inside);
}

/* Two discs: closed forms by hand, and both limits. */
static void test_two_discs(void **state) {
    (void)state;
    struct bw_beam beam = ROUND(BW_TOP_HAT, BW_HYPERBOLIC, 2e-3, 0., 0., 2e-3);
    double area_m2 = bw_pi * 1e-6;
    /* equal discs of radius 1 at the distance 1: 2 pi/3 - sqrt(3)/2 */
    near(bw_beam_irradiance_beside_per_w(&beam, 0., 2e-3, 1e-3) * area_m2, 2. / 3. - sqrt(3.) / 2. / bw_pi, 1e-12,
         "lens");
    near(bw_beam_irradiance_beside_per_w(&beam, 0., 2e-3, 2e-3), 0., 0., "touching");
    near(bw_beam_irradiance_beside_per_w(&beam, 0., 6e-3, 1.9e-3) * 9. * area_m2, 1., 1e-14, "inside the aperture");
    near(bw_beam_irradiance_beside_per_w(&beam, 0., 1e-3, .4e-3) * area_m2, 1., 1e-14, "around the aperture");
}

/* Off the axis of an elliptical beam in any direction: the bound holds. */
static void test_ellipse_off_axis(void **state) {
    (void)state;
    struct bw_beam along = ellipse(BW_GAUSSIAN, 9e-3, 3e-3), hat = ellipse(BW_TOP_HAT, 9e-3, 3e-3);
    double area_m2 = bw_pi * 49e-6 / 4., last = HUGE_VAL;
    for (double offset_m = 0.; offset_m < 25e-3; offset_m += 1e-3) {
        double bound = bw_beam_irradiance_off_axis_per_w(&along, 0., 7e-3, offset_m);
        assert_true(bound >= gaussian_share(9e-3, 3e-3, 7e-3, offset_m) / area_m2 * (1. - 1e-9));
        assert_true(bound >= gaussian_share(3e-3, 9e-3, 7e-3, offset_m) / area_m2 * (1. - 1e-9));
        assert_true(bound <= last);
        last = bound;
    }
    assert_true(bw_beam_irradiance_off_axis_per_w(&hat, 0., 7e-3, 7.99e-3) > 0.);
    near(bw_beam_irradiance_off_axis_per_w(&hat, 0., 7e-3, 8.01e-3), 0., 0., "clear of the longer axis");
}

/* ---- between two distances -------------------------------------------------------------------------- */

static struct bw_beam random_beam(uint64_t *random) {
    struct bw_beam beam =
        bw_beam_from_lens(.05 + uniform(random), 5e-3 + 20e-3 * uniform(random), 1e-3 + 20e-3 * uniform(random),
                          uniform(random) < .5 ? BW_TOP_HAT : BW_GAUSSIAN);
    beam.spread = uniform(random) < .5 ? BW_LINEAR : BW_HYPERBOLIC;
    beam.elliptical = uniform(random) < .5;
    beam.diameter_y_m = beam.diameter_m * (1. + 4. * uniform(random));
    beam.divergence_y_rad = beam.divergence_rad * (.1 + 4. * uniform(random));
    beam.exit_diameter_y_m = beam.exit_diameter_m * (.1 + 4. * uniform(random));
    return beam;
}

static void test_between(void **state) {
    (void)state;
    uint64_t random = 77;
    for (int i = 0; i < 400; i++) {
        struct bw_beam beam = random_beam(&random);
        double near_m = 2. * uniform(&random), far_m = near_m + uniform(&random) * uniform(&random);
        double offset_m = 20e-3 * uniform(&random) * uniform(&random);
        double bound = bw_beam_irradiance_between_per_w(&beam, near_m, far_m, 7e-3, offset_m);
        for (int j = 0; j <= 20; j++) {
            double here = bw_beam_irradiance_beside_per_w(&beam, near_m + (far_m - near_m) * j / 20., 7e-3, offset_m);
            if (!(here <= bound * (1. + 1e-12)))
                fail_msg("%d: %.17g exceeds the bound %.17g", i, here, bound);
        }
        near(bw_beam_irradiance_between_per_w(&beam, far_m, far_m, 7e-3, offset_m),
             bw_beam_irradiance_beside_per_w(&beam, far_m, 7e-3, offset_m), 1e-14, "one place");
    }
    struct bw_beam beam = random_beam(&random);
    assert_true(isnan(bw_beam_irradiance_between_per_w(&beam, 0., 1., 7e-3, -1.)));
    assert_true(isnan(bw_beam_irradiance_between_per_w(&beam, (double)NAN, 1., 7e-3, 0.)));
}

/* A lens so weak that the focus is wider than the beam that leaves it: 5 mm, 20 mrad, f = 1 m. It is never held to be
 * wider than it left the exit, and the narrowest place is before the focus. */
static void test_weak_lens(void **state) {
    (void)state;
    struct bw_beam beam = bw_beam_from_lens(1., 5e-3, 20e-3, BW_GAUSSIAN);
    near(bw_beam_diameter_m(&beam, .5), 5e-3, 1e-14, "before the focus");
    near(bw_beam_diameter_m(&beam, 1.), 20e-3, 1e-14, "in the focus");
    near(bw_beam_narrowest_m(&beam, 0.), 5e-3, 1e-14, "narrowest");
    near(bw_beam_narrowest_m(&beam, 1.), 20e-3, 1e-14, "narrowest from the focus on");
    near(bw_beam_irradiance_between_per_w(&beam, .2, 3., 7e-3, 0.), bw_beam_irradiance_per_w(&beam, .5, 7e-3), 1e-14,
         "worst between");
}

/* ---- fibres ------------------------------------------------------------------------------------------ */

/* 10.5 um mode field, 1550 nm: a Gaussian of w0 = 5.25 um; w(1 m) = lambda / (pi w0) = 93.98 mm. */
static void test_single_mode(void **state) {
    (void)state;
    struct bw_beam beam = bw_beam_from_single_mode_fibre(10.5e-6, 1550.);
    double w_m = 1550e-9 / (bw_pi * 5.25e-6);
    near(w_m, 93.98e-3, 1e-4, "by hand");
    near(bw_beam_diameter_m(&beam, 1000.) / 1000., sqrt(2.) * w_m, 1e-9, "d63 = 2 w / sqrt 2");
    near(bw_beam_fraction(&beam, 0., 10.5e-6), -expm1(-2.), 1e-14, "the mode field is the 1/e^2 diameter");
    near(bw_beam_fraction(&beam, 1000., 2000. * w_m), -expm1(-2.), 1e-9, "and stays it");
    near(bw_fibre_source_m(400e-6), 400e-6 * .79506, 1e-5, "63 % of an even core");
}

static struct CMUnitTest tests[COUNT(ellipses) + COUNT(hats) + COUNT(besides) + 9];

#define ADD_ROWS(rows, function)                                                                                       \
    for (size_t i = 0; i < COUNT(rows); i++)                                                                           \
        tests[count++] = (struct CMUnitTest) {                                                                         \
            rows[i].name, function, NULL, NULL, &rows[i]                                                               \
        }

int main(void) {
    size_t count = 0;
    gsl_set_error_handler_off();
    ADD_ROWS(ellipses, test_ellipse);
    ADD_ROWS(hats, test_hat);
    ADD_ROWS(besides, test_beside);
    const struct CMUnitTest single[] = {
        cmocka_unit_test(test_line),         cmocka_unit_test(test_ellipse_limits),
        cmocka_unit_test(test_ellipse_axes), cmocka_unit_test(test_beside_narrow),
        cmocka_unit_test(test_two_discs),    cmocka_unit_test(test_ellipse_off_axis),
        cmocka_unit_test(test_between),      cmocka_unit_test(test_single_mode),
        cmocka_unit_test(test_weak_lens),
    };
    for (size_t i = 0; i < COUNT(single); i++)
        tests[count++] = single[i];
    return cmocka_run_group_tests_name("beam shapes", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
