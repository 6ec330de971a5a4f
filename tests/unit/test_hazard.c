/* hazard: ratios, hazard distances, diffuse spots, optical density, permitted time. */
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
#define ALL          ((size_t)BW_EMISSIONS_MAX)

static void near(double got, double want, double relative, const char *what) {
    if (!(fabs(got - want) <= relative * fabs(want)))
        fail_msg("%s: got %.17g, want %.17g", what, got, want);
}

static double uniform(uint64_t *random) {
    *random = *random * 6364136223846793005u + 1442695040888963407u;
    return (double)(*random >> 11) / 9007199254740992.;
}

static void add_beam(struct bw_output *output, double wavelength_nm, double power_w, struct bw_beam beam) {
    struct bw_emission_input input = {wavelength_nm, power_w, NONE, NONE, NONE, NONE, NULL};
    assert_int_equal(bw_emission_resolve(&input, &output->emissions[output->count], NULL), BW_OK);
    output->beams[output->count++] = beam;
}

static void add_train(struct bw_output *output, double wavelength_nm, double peak_w, double duration_s, double rate_hz,
                      struct bw_beam beam) {
    struct bw_emission_input input = {wavelength_nm, NONE, peak_w, NONE, duration_s, rate_hz, NULL};
    assert_int_equal(bw_emission_resolve(&input, &output->emissions[output->count], NULL), BW_OK);
    output->beams[output->count++] = beam;
}

static void prepare(struct bw_hazard *hazard, const struct bw_output *output, enum bw_target target,
                    double exposure_s) {
    struct bw_viewing_case viewing = {target, exposure_s, 0., 0.};
    struct bw_error error = {.status = BW_OK};
    if (bw_hazard_prepare(bw_tables_find("icnirp-2013"), output, &viewing, hazard, NULL, &error) != BW_OK)
        fail_msg("%s", error.text);
}

static double reach_of(const struct bw_hazard *hazard, size_t only) {
    struct bw_reach reach;
    struct bw_error error = {.status = BW_OK};
    if (bw_hazard_reach(hazard, only, &reach, NULL, &error) != BW_OK)
        fail_msg("%s", error.text);
    assert_true(reach.unbounded == (isinf(reach.distance_m) != 0));
    return reach.distance_m;
}

/* ---- hazard distance against its closed form ------------------------------------------------------ */

static struct form_case {
    const char *name;
    enum bw_profile profile;
    enum bw_spread spread;
    double wavelength_nm, power_w, exit_m, divergence_rad, exposure_s;
    enum bw_target target;
} forms[] = {
    {"Gaussian, hyperbolic, therapy", BW_GAUSSIAN, BW_HYPERBOLIC, 810., 8., 21e-3, .14, 10., BW_EYE},
    {"Gaussian, linear, therapy", BW_GAUSSIAN, BW_LINEAR, 810., 8., 21e-3, .14, 10., BW_EYE},
    {"Gaussian, narrow", BW_GAUSSIAN, BW_HYPERBOLIC, 633., 5e-3, 1e-3, 1e-3, .25, BW_EYE},
    {"Gaussian, barely above the limit", BW_GAUSSIAN, BW_HYPERBOLIC, 633., 1.03e-3, 1e-3, 1e-3, .25, BW_EYE},
    {"top hat", BW_TOP_HAT, BW_HYPERBOLIC, 980., 30., 20e-3, .2, 10., BW_EYE},
    {"top hat, linear, narrow", BW_TOP_HAT, BW_LINEAR, 532., 1., 1e-3, 2e-3, .25, BW_EYE},
    {"skin", BW_GAUSSIAN, BW_HYPERBOLIC, 1064., 50., 5e-3, .05, 10., BW_SKIN},
    {"carbon dioxide", BW_GAUSSIAN, BW_LINEAR, 10600., 500., 20e-3, 2e-3, 10., BW_EYE},
    {"farther than the moon", BW_GAUSSIAN, BW_HYPERBOLIC, 532., 1e9, 1., 1e-6, .25, BW_EYE},
    {"astronomically far", BW_TOP_HAT, BW_LINEAR, 532., 1e9, 1., 1e-15, .25, BW_EYE},
};

/* (1 - exp(-x)) P / A = E  =>  d = D / sqrt(x),  x = -ln(1 - A E / P) */
static double width_at_limit(const struct form_case *c, double limit_w_m2, double aperture_m) {
    double share = bw_pi * aperture_m * aperture_m / 4. * limit_w_m2 / c->power_w;
    return aperture_m / sqrt(c->profile == BW_TOP_HAT ? share : -log1p(-share));
}

static void test_form(void **state) {
    const struct form_case *c = *state;
    struct bw_output output = {.count = 0};
    struct bw_hazard hazard;
    add_beam(&output, c->wavelength_nm, c->power_w,
             (struct bw_beam)ROUND(c->profile, c->spread, c->exit_m, c->divergence_rad, 0., c->exit_m));
    prepare(&hazard, &output, c->target, c->exposure_s);
    struct bw_ratio detail;
    bw_hazard_ratio_detail(&hazard, 0., &detail);
    const struct bw_train_limit *limit = &hazard.terms[detail.governing].limit;
    double width_m = width_at_limit(c, limit->irradiance_w_m2, limit->aperture_m);
    double want_m = (c->spread == BW_LINEAR ? width_m - c->exit_m : sqrt(width_m * width_m - c->exit_m * c->exit_m)) /
                    c->divergence_rad;
    double got_m = reach_of(&hazard, ALL);
    near(got_m, want_m, 1e-9, "hazard distance");
    near(bw_hazard_ratio(&hazard, got_m), 1., 1e-9, "ratio at the hazard distance");
    assert_true(bw_hazard_ratio(&hazard, got_m) <= 1.);
    assert_true(bw_hazard_ratio(&hazard, got_m * (1. - 1e-6)) > 1.);
    near(reach_of(&hazard, 0), got_m, 0., "the one emission alone");
}

static struct end_case {
    const char *name;
    double power_w, divergence_rad, want_m;
} ends[] = {
    {"collimated and hazardous: no end", 1., 0., HUGE_VAL},
    {"collimated and harmless: nowhere", 1e-4, 0., 0.},
    {"diverging and harmless: nowhere", 1e-4, .1, 0.},
};

static void test_end(void **state) {
    const struct end_case *c = *state;
    struct bw_output output = {.count = 0};
    struct bw_hazard hazard;
    add_beam(&output, 633., c->power_w,
             (struct bw_beam)ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 2e-3, c->divergence_rad, 0., 2e-3));
    prepare(&hazard, &output, BW_EYE, .25);
    double got_m = reach_of(&hazard, ALL);
    assert_true(isinf(c->want_m) ? isinf(got_m) : !(got_m > 0.));
}

/* A collimated beam just below its limit, and a spreading one beside it: the sum falls to 1 only slowly, and does. */
static void test_collimated_with_spreading(void **state) {
    (void)state;
    struct bw_output output = {.count = 0};
    struct bw_hazard hazard;
    add_beam(&output, 633., 9e-4, (struct bw_beam)ROUND(BW_TOP_HAT, BW_HYPERBOLIC, 2e-3, 0., 0., 2e-3));
    add_beam(&output, 810., 1., (struct bw_beam)ROUND(BW_TOP_HAT, BW_HYPERBOLIC, 2e-3, .1, 0., 2e-3));
    prepare(&hazard, &output, BW_EYE, .25);
    double steady = bw_hazard_ratio(&hazard, HUGE_VAL);
    near(steady, 9e-4 / (bw_pi * 49e-6 / 4.) / (18. * pow(.25, -.25)), 1e-12, "what stays");
    /* the spreading beam must fall to 1 - steady */
    double rest = 1. - steady, limit_w_m2 = 18. * pow(.25, -.25) * pow(10., .22);
    double width_m = sqrt(4. / bw_pi / (limit_w_m2 * rest));
    near(reach_of(&hazard, ALL), sqrt(width_m * width_m - 4e-6) / .1, 1e-9, "where the sum is 1");
}

/* ---- several beams with several waists ------------------------------------------------------------ */

static void random_output(struct bw_output *output, uint64_t *random) {
    static const double wavelengths_nm[] = {532., 650., 810., 980., 1064.};
    *output = (struct bw_output){.count = 0};
    size_t count = 2 + (size_t)(3. * uniform(random));
    for (size_t i = 0; i < count; i++) {
        struct bw_beam beam = bw_beam_from_lens(.02 + uniform(random), 5e-3 + 20e-3 * uniform(random),
                                                1e-3 + 5e-3 * uniform(random), BW_GAUSSIAN);
        add_beam(output, wavelengths_nm[(size_t)(5. * uniform(random))], pow(10., -3. + 1.5 * uniform(random)), beam);
    }
}

static void test_waists(void **state) {
    (void)state;
    uint64_t random = 5;
    size_t before_waist = 0;
    for (int i = 0; i < 150; i++) {
        struct bw_output output;
        struct bw_hazard hazard;
        random_output(&output, &random);
        prepare(&hazard, &output, BW_EYE, .25);
        double got_m = reach_of(&hazard, ALL), last_waist_m = 0., scanned_m = 0.;
        for (size_t j = 0; j < output.count; j++)
            last_waist_m = fmax(last_waist_m, output.beams[j].waist_m);
        double end_m = fmax(2. * last_waist_m, 1.01 * got_m), step_m = end_m / 20000.;
        for (double r = 0.; r <= end_m; r += step_m)
            if (!(bw_hazard_ratio(&hazard, r) <= 1.))
                scanned_m = r;
        if (!(got_m >= scanned_m && got_m <= scanned_m + 1.01 * step_m))
            fail_msg("%d: got %.12g m, scanned %.12g m", i, got_m, scanned_m);
        if (got_m > 0.)
            near(bw_hazard_ratio(&hazard, got_m), 1., 1e-9, "ratio at the hazard distance");
        before_waist += got_m > 0. && got_m < last_waist_m;
    }
    assert_true(before_waist >= 3); /* the hard cases did occur */
}

static void test_envelope(void **state) {
    (void)state;
    uint64_t random = 9;
    for (int i = 0; i < 40; i++) {
        struct bw_output output;
        struct bw_hazard hazard;
        random_output(&output, &random);
        prepare(&hazard, &output, BW_EYE, .25);
        double largest = 0., step_m = 2. / 4000.;
        for (double r = 2.; r >= 0.; r -= step_m) {
            largest = fmax(largest, bw_hazard_ratio(&hazard, r));
            double got = bw_hazard_ratio_envelope(&hazard, r);
            if (!(got >= largest && got <= largest * 1.02))
                fail_msg("%d: at %g m the envelope is %g, the largest seen farther out %g", i, r, got, largest);
        }
    }
}

static void test_falls_beyond_waist(void **state) {
    (void)state;
    uint64_t random = 15;
    for (int i = 0; i < 50; i++) {
        struct bw_output output;
        struct bw_hazard hazard;
        random_output(&output, &random);
        prepare(&hazard, &output, i % 2 ? BW_EYE : BW_SKIN, 10.);
        double last = HUGE_VAL;
        for (double r = 1.02; r < 1e5; r *= 1.1) {
            double now = bw_hazard_ratio(&hazard, r);
            if (!(now < last && now > 0.))
                fail_msg("rises from %g to %g at %g m", last, now, r);
            near(bw_hazard_ratio_envelope(&hazard, r), now, 0., "the envelope beyond the last waist");
            last = now;
        }
    }
}

static void test_off_axis(void **state) {
    (void)state;
    uint64_t random = 21;
    for (int i = 0; i < 20; i++) {
        struct bw_output output;
        struct bw_hazard hazard;
        random_output(&output, &random);
        prepare(&hazard, &output, BW_EYE, .25);
        for (double r = .1; r < 100.; r *= 3.) {
            double last = bw_hazard_ratio(&hazard, r);
            near(bw_hazard_ratio_off_axis(&hazard, r, 0.), last, 0., "on the axis");
            for (double offset_m = 0.; offset_m < r; offset_m += r / 50.) {
                double now = bw_hazard_ratio_off_axis(&hazard, r, offset_m);
                if (!(now <= last && now >= 0.))
                    fail_msg("rises from %g to %g at %g m off", last, now, offset_m);
                last = now;
            }
        }
    }
}

/* ---- which exposures add --------------------------------------------------------------------------- */

static struct sum_case {
    const char *name;
    double first_nm, second_nm, exposure_s;
    enum bw_target target;
    bool adds;
} sums[] = {
    /* limits-facts.md, additivity */
    {"sum: 810 and 980 nm, eye", 810., 980., 10., BW_EYE, true},
    {"sum: 650 and 810 nm, eye", 650., 810., 10., BW_EYE, true},
    {"sum: 810 and 1550 nm, eye", 810., 1550., 10., BW_EYE, false},
    {"sum: 810 and 1550 nm, skin", 810., 1550., 10., BW_SKIN, true},
    {"sum: 350 and 1550 nm, eye", 350., 1550., 10., BW_EYE, true},
    {"sum: 350 and 810 nm, eye", 350., 810., 10., BW_EYE, false},
    {"sum: 350 and 810 nm, skin", 350., 810., 10., BW_SKIN, true},
    {"sum: 254 and 810 nm, skin", 254., 810., 10., BW_SKIN, false},
    {"sum: 254 and 280 nm, eye", 254., 280., 10., BW_EYE, true},
    {"sum: 254 and 350 nm, eye", 254., 350., 10., BW_EYE, false},
    {"sum: 1550 and 10600 nm, eye", 1550., 10600., 10., BW_EYE, true},
};

static void test_sum(void **state) {
    const struct sum_case *c = *state;
    struct bw_beam beam = ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 10e-3, 10e-3, 0., 10e-3);
    struct bw_output both = {.count = 0}, first = {.count = 0}, second = {.count = 0};
    struct bw_hazard hazard;
    add_beam(&both, c->first_nm, .1, beam);
    add_beam(&both, c->second_nm, .1, beam);
    add_beam(&first, c->first_nm, .1, beam);
    add_beam(&second, c->second_nm, .1, beam);
    prepare(&hazard, &first, c->target, c->exposure_s);
    double one = bw_hazard_ratio(&hazard, 1.);
    prepare(&hazard, &second, c->target, c->exposure_s);
    double two = bw_hazard_ratio(&hazard, 1.);
    struct bw_ratio ratio;
    prepare(&hazard, &both, c->target, c->exposure_s);
    bw_hazard_ratio_detail(&hazard, 1., &ratio);
    near(ratio.total, c->adds ? one + two : fmax(one, two), 1e-12, "total");
    near(ratio.emission[0], one, 1e-12, "first alone");
    near(ratio.emission[1], two, 1e-12, "second alone");
    assert_int_equal(hazard.terms[ratio.governing].emission, one >= two ? 0 : 1);
    for (size_t i = 0; i < hazard.term_count; i++)
        for (size_t j = 0; j < hazard.term_count; j++)
            assert_true(hazard.adds[i][j] == hazard.adds[j][i] && hazard.adds[i][i]);
}

/* 450 nm for 100 s: heat and light of the retina are two limits, and do not add. 1310 nm heats the front of the eye
 * too, and there adds to 1550 nm. */
static void test_tissues(void **state) {
    (void)state;
    struct bw_beam beam = ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 10e-3, 10e-3, 0., 10e-3);
    struct bw_output output = {.count = 0};
    struct bw_hazard hazard;
    add_beam(&output, 450., 1e-3, beam);
    prepare(&hazard, &output, BW_EYE, 100.);
    assert_int_equal(hazard.term_count, 2);
    assert_false(hazard.adds[0][1]);
    output.count = 0;
    add_beam(&output, 1310., .1, beam);
    add_beam(&output, 1550., .1, beam);
    prepare(&hazard, &output, BW_EYE, 10.);
    size_t together = 0;
    for (size_t i = 0; i < hazard.term_count; i++)
        for (size_t j = 0; j < hazard.term_count; j++)
            if (hazard.adds[i][j] && i != j) {
                assert_int_equal(hazard.terms[i].limit.limit.effect, BW_ANTERIOR);
                together++;
            }
    assert_int_equal(together, 2);
}

/* ---- optical density -------------------------------------------------------------------------------- */

static struct share_case {
    const char *name;
    double ratios[3], want[3];
} shares[] = {
    {"share: all harmless together", {.3, .3, .3}, {0., 0., 0.}},
    {"share: exactly 1", {.5, .5, 0.}, {0., 0., 0.}},
    {"share: one alone", {100., 0., 0.}, {2., 0., 0.}},
    {"share: two equals, half each", {50., 50., 0.}, {2., 2., 0.}},
    {"share: three, a third each", {100., 10., 1.}, {2.4771212547, 1.4771212547, .4771212547}},
    {"share: a small one keeps its own", {90., .1, 0.}, {2., 0., 0.}},
    {"share: two small ones keep theirs", {60., .2, .2}, {2., 0., 0.}},
    {"share: the small one is above its half", {50., .6, 0.}, {2., .0791812460, 0.}},
};

static void test_share(void **state) {
    const struct share_case *c = *state;
    struct bw_beam beam = ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 10e-3, 10e-3, 0., 10e-3);
    struct bw_output output = {.count = 0};
    struct bw_hazard hazard;
    for (int i = 0; i < 3; i++)
        add_beam(&output, 800. + 50. * i, 1., beam);
    prepare(&hazard, &output, BW_EYE, 10.);
    assert_int_equal(hazard.term_count, 3);
    double ratios[BW_TERMS_MAX] = {c->ratios[0], c->ratios[1], c->ratios[2]}, od[BW_EMISSIONS_MAX];
    bw_hazard_optical_density(&hazard, ratios, od);
    for (size_t i = 0; i < 3; i++)
        if (!(fabs(od[i] - c->want[i]) <= 1e-9))
            fail_msg("emission %zu: got OD %.12g, want %.12g", i, od[i], c->want[i]);
}

/* Behind the eyewear asked for, the sum is 1; at the hazard distance none is asked for. */
static void test_density_and_distance_agree(void **state) {
    (void)state;
    uint64_t random = 33;
    for (int i = 0; i < 60; i++) {
        struct bw_output output;
        struct bw_hazard hazard;
        double ratios[BW_TERMS_MAX], od[BW_EMISSIONS_MAX];
        random_output(&output, &random);
        prepare(&hazard, &output, BW_EYE, 10.);
        bw_hazard_term_ratios(&hazard, 1.1, ratios);
        bw_hazard_optical_density(&hazard, ratios, od);
        double sum = 0., before = bw_hazard_ratio(&hazard, 1.1);
        for (size_t j = 0; j < hazard.term_count; j++)
            if (hazard.terms[j].limit.limit.effect == BW_RETINA_THERMAL)
                sum += ratios[j] * pow(10., -od[hazard.terms[j].emission]);
        if (before > 1.)
            near(sum, 1., 1e-9, "behind the eyewear");
        bw_hazard_term_ratios(&hazard, reach_of(&hazard, ALL), ratios);
        bw_hazard_optical_density(&hazard, ratios, od);
        for (size_t j = 0; j < output.count; j++)
            assert_true(od[j] <= 1e-9);
    }
}

static void test_density_bad_ratio(void **state) {
    (void)state;
    struct bw_output output = {.count = 0};
    struct bw_hazard hazard;
    double ratios[BW_TERMS_MAX] = {NONE}, od[BW_EMISSIONS_MAX];
    add_beam(&output, 810., 1., (struct bw_beam)ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 10e-3, 10e-3, 0., 10e-3));
    prepare(&hazard, &output, BW_EYE, 10.);
    bw_hazard_optical_density(&hazard, ratios, od);
    assert_true(isnan(od[0]));
    ratios[0] = HUGE_VAL;
    bw_hazard_optical_density(&hazard, ratios, od);
    assert_true(isinf(od[0]));
}

/* ---- diffuse reflections ------------------------------------------------------------------------------ */

static struct diffuse_case {
    const char *name;
    double wavelength_nm, power_w, spot_m, reflectance, exposure_s;
    double want_m; /* by hand */
} diffuses[] = {
    /* point source, 10 CA W/m2: sqrt(rho P / (pi E)) = sqrt(8 / (pi 16.5958690744)) */
    {"diffuse: small spot", 810., 8., 1e-6, 1., 100., .391714869},
    /* 1 cm spot, 10 s: alpha near 24 mrad = d/r; limit 18 CA CE t^0.75 / t, CE = alpha / 1.5 mrad = d / (1.5e-3 r):
     * r = rho P 1.5e-3 / (pi 18 CA 10^-1/4 d) = 0.5 x 200 x 1.5e-3 / (pi 16.798577 x 0.01) */
    {"diffuse: the spot as an extended source", 810., 200., 10e-3, .5, 10., .284229},
    {"diffuse: nothing reflected", 810., 8., 1e-3, 0., 100., 0.},
    /* contact: rho 4 P / (pi d^2) = 50.9 W/m2, CE = (pi/2)^2 / (1.5e-3 x 0.1): harmless everywhere */
    {"diffuse: wide and weak", 810., .1, 50e-3, 1., 10., 0.},
    /* 10600 nm has no source size: sqrt(100 / (pi 1000)) */
    {"diffuse: carbon dioxide", 10600., 100., 5e-3, 1., 100., .178412412},
};

static void test_diffuse(void **state) {
    const struct diffuse_case *c = *state;
    struct bw_output output = {.count = 0};
    struct bw_hazard hazard;
    struct bw_spot spot;
    struct bw_reach reach;
    struct bw_ratio ratio;
    add_beam(&output, c->wavelength_nm, c->power_w,
             (struct bw_beam)ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, c->spot_m, 0., 0., c->spot_m));
    prepare(&hazard, &output, BW_EYE, c->exposure_s);
    assert_int_equal(bw_hazard_spot(&output, 1., c->reflectance, &spot), BW_OK);
    near(spot.diameter_m[0], c->spot_m, 0., "spot");
    assert_int_equal(bw_hazard_diffuse_reach(&hazard, &spot, &reach, NULL, NULL), BW_OK);
    assert_false(reach.unbounded);
    if (!(fabs(reach.distance_m - c->want_m) <= 1e-3 * c->want_m))
        fail_msg("got %.9g m, want %.9g m", reach.distance_m, c->want_m);
    if (!(c->want_m > 0.))
        return;
    assert_int_equal(bw_hazard_diffuse_ratio(&hazard, &spot, reach.distance_m, &ratio, NULL), BW_OK);
    near(ratio.total, 1., 1e-9, "ratio at the distance");
}

/* 0.2 s pulses, 300 of them in T2 = 100 s, spot 10 cm. Nearer than 1 m (alpha above 100 mrad) no train correction
 * holds and the average, 18 (100/1.5) 100^-1/4 = 379.5 W/m2, is kept with a ratio of 0.92. From there to
 * alpha_max(0.2 s) = 200 x 0.2^1/2 = 89.4 mrad the correction is about 300^-1/4 and the ratio 1.2; then it is 0.4, and
 * the ratio below 1. */
static void test_diffuse_step(void **state) {
    (void)state;
    struct bw_output output = {.count = 0};
    struct bw_hazard hazard;
    struct bw_spot spot;
    struct bw_reach reach;
    struct bw_ratio ratio;
    add_train(&output, 650., 1100. / .6, .2, 3., (struct bw_beam)ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, .1, 0., 0., .1));
    prepare(&hazard, &output, BW_EYE, 100.);
    assert_int_equal(bw_hazard_spot(&output, 0., 1., &spot), BW_OK);
    assert_int_equal(bw_hazard_diffuse_ratio(&hazard, &spot, .1 / 2. / tan(.0501), &ratio, NULL), BW_OK);
    assert_true(ratio.total <= 1.);
    assert_int_equal(bw_hazard_diffuse_reach(&hazard, &spot, &reach, NULL, NULL), BW_OK);
    near(reach.distance_m, .1 / 2. / tan(.2 * sqrt(.2) / 2.), 1e-9, "where the correction eases");
}

/* The farthest place that a fine scan finds, for random outputs, spots and rule sets. */
static void test_diffuse_scan(void **state) {
    (void)state;
    uint64_t random = 41;
    static const char *const rules[] = {"icnirp-2013", "iec-60825-1-2014", "eu-2006-25"};
    for (int i = 0; i < 40; i++) {
        struct bw_output output = {.count = 0};
        struct bw_hazard hazard;
        struct bw_spot spot;
        struct bw_reach reach;
        struct bw_ratio ratio;
        for (int j = 0; j < 1 + i % 2; j++) {
            double d = pow(10., -4. + 3. * uniform(&random));
            struct bw_beam beam = ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, d, 0., 0., d);
            if (uniform(&random) < .7)
                add_train(&output, 700. + 400. * uniform(&random), pow(10., 2. + 5. * uniform(&random)),
                          pow(10., -8. + 4. * uniform(&random)), 10. + 5e3 * uniform(&random), beam);
            else
                add_beam(&output, 500. + 600. * uniform(&random), pow(10., -2. + 4. * uniform(&random)), beam);
        }
        struct bw_viewing_case viewing = {BW_EYE, pow(10., 2. * uniform(&random)), 0., 0.};
        assert_int_equal(bw_hazard_prepare(bw_tables_find(rules[i % 3]), &output, &viewing, &hazard, NULL, NULL),
                         BW_OK);
        assert_int_equal(bw_hazard_spot(&output, 0., .2 + .8 * uniform(&random), &spot), BW_OK);
        assert_int_equal(bw_hazard_diffuse_reach(&hazard, &spot, &reach, NULL, NULL), BW_OK);
        double scanned_m = 0., farthest_m = fmax(3. * reach.distance_m, 100.);
        for (double r = 1e-5; r < farthest_m; r *= 1.01) {
            assert_int_equal(bw_hazard_diffuse_ratio(&hazard, &spot, r, &ratio, NULL), BW_OK);
            if (!(ratio.total <= 1.))
                scanned_m = r;
        }
        if (!(reach.distance_m >= scanned_m && (reach.distance_m <= scanned_m * 1.0101 || reach.distance_m < 1e-5)))
            fail_msg("%d: got %.9g m, scanned %.9g m", i, reach.distance_m, scanned_m);
    }
}

static void test_diffuse_at_contact(void **state) {
    (void)state;
    struct bw_output output = {.count = 0};
    struct bw_hazard hazard;
    struct bw_spot spot;
    struct bw_ratio contact, near_by;
    add_beam(&output, 10600., 1., (struct bw_beam)ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 20e-3, 0., 0., 20e-3));
    prepare(&hazard, &output, BW_SKIN, 100.);
    assert_int_equal(bw_hazard_spot(&output, 0., .5, &spot), BW_OK);
    assert_int_equal(bw_hazard_diffuse_ratio(&hazard, &spot, 0., &contact, NULL), BW_OK);
    assert_int_equal(bw_hazard_diffuse_ratio(&hazard, &spot, 9e-3, &near_by, NULL), BW_OK);
    near(contact.total, .5 * 4. / (bw_pi * 4e-4) / 1000., 1e-12, "no more than the spot sends out");
    near(near_by.total, contact.total, 1e-12, "within its own radius");
    assert_int_equal(bw_hazard_diffuse_ratio(&hazard, &spot, -1., &contact, NULL), BW_ARGUMENT);
    assert_int_equal(bw_hazard_diffuse_ratio(&hazard, &spot, NONE, &contact, NULL), BW_ARGUMENT);
    assert_true(isnan(contact.total));
    assert_int_equal(bw_hazard_spot(&output, 0., 1.1, &spot), BW_ARGUMENT);
    assert_int_equal(bw_hazard_spot(&output, NONE, .5, &spot), BW_ARGUMENT);
    assert_int_equal(bw_hazard_diffuse_ratio(&hazard, &spot, 1., &contact, NULL), BW_ARGUMENT);
}

/* ---- longest exposure ---------------------------------------------------------------------------------- */

static struct time_case {
    const char *name;
    double wavelength_nm, irradiance_w_m2;
    enum bw_target target;
    double want_s, relative;
} times[] = {
    /* 18 CA t^-0.25 = E: t = (18 CA / E)^4, CA(810) = 1.65958690744 */
    {"time: 100 W/m2 at 810 nm", 810., 100., BW_EYE, 7.9632439516e-3, 1e-9},
    {"time: 633 nm blink", 633., 25.455844123, BW_EYE, .25, 1e-8},
    /* between 10.12 and 10 W/m2: the step at 10 s ends it */
    {"time: in the step at 10 s", 633., 10.05, BW_EYE, 10., 1e-11},
    {"time: 10 W/m2 is safe for ever", 633., 10. * (1. - 1e-12), BW_EYE, HUGE_VAL, 0.},
    /* skin 1.1e4 t^-0.75 = 1990: (1.1e4/1990)^(4/3); that 2000 W/m2 holds again from 10 s on does not help */
    {"time: under the step of the skin", 633., 1990., BW_SKIN, 9.773560635, 1e-9},
    {"time: no time at all", 633., 1e11, BW_EYE, 0., 0.},
    /* ultraviolet 30 J/m2 */
    {"time: 254 nm, 30 J/m2", 254., 1e-2, BW_EYE, 3000., 1e-9},
};

static void test_time(void **state) {
    const struct time_case *c = *state;
    struct bw_output output = {.count = 0};
    struct bw_permitted_time time;
    struct bw_viewing_case viewing = {c->target, NONE, 0., 0.};
    struct bw_error error = {.status = BW_OK};
    add_beam(&output, c->wavelength_nm, c->irradiance_w_m2 * bw_pi / 400., /* a top hat of 10 cm */
             (struct bw_beam)ROUND(BW_TOP_HAT, BW_HYPERBOLIC, .1, 0., 0., .1));
    if (bw_hazard_permitted_time(bw_tables_find("icnirp-2013"), &output, &viewing, 5., &time, NULL, &error) != BW_OK)
        fail_msg("%s", error.text);
    assert_true(time.unbounded == (isinf(c->want_s) != 0));
    if (isinf(c->want_s))
        assert_true(isinf(time.exposure_s));
    else
        near(time.exposure_s, c->want_s, c->relative, "permitted time");
}

/* Every shorter exposure is safe, the next longer one is not. */
static void test_time_scan(void **state) {
    (void)state;
    uint64_t random = 51;
    size_t between = 0;
    for (int i = 0; i < 25; i++) {
        struct bw_output output = {.count = 0};
        struct bw_permitted_time time;
        struct bw_hazard hazard;
        struct bw_beam beam = ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 10e-3, .1, 0., 10e-3);
        struct bw_viewing_case viewing = {BW_EYE, 1., i % 2 ? 0. : .05 * uniform(&random), 0.};
        add_beam(&output, 500. + 800. * uniform(&random), pow(10., -2. + 3. * uniform(&random)), beam);
        add_train(&output, 905., pow(10., 1. + uniform(&random)), 150e-9, pow(10., 4. * uniform(&random)), beam);
        assert_int_equal(
            bw_hazard_permitted_time(bw_tables_find("iec-60825-1-2014"), &output, &viewing, 1., &time, NULL, NULL),
            BW_OK);
        double end_s = fmin(time.exposure_s, 3e4);
        between += end_s > 1e-9 && end_s < 3e4;
        for (double t = 1e-13; t <= end_s; t *= 1.3) {
            viewing.exposure_s = t;
            assert_int_equal(
                bw_hazard_prepare(bw_tables_find("iec-60825-1-2014"), &output, &viewing, &hazard, NULL, NULL), BW_OK);
            if (!(bw_hazard_ratio(&hazard, 1.) <= 1.))
                fail_msg("%d: %g s are said to be safe, but not %g s", i, time.exposure_s, t);
        }
        if (time.unbounded)
            continue;
        viewing.exposure_s = fmax(1e-13, time.exposure_s * (1. + 1e-9));
        assert_int_equal(bw_hazard_prepare(bw_tables_find("iec-60825-1-2014"), &output, &viewing, &hazard, NULL, NULL),
                         BW_OK);
        assert_true(bw_hazard_ratio(&hazard, 1.) > 1.);
    }
    assert_true(between >= 5);
}

/* ---- bad input and working ----------------------------------------------------------------------------- */

static void test_bad_input(void **state) {
    (void)state;
    struct bw_output output = {.count = 0};
    struct bw_hazard hazard;
    struct bw_viewing_case viewing = {BW_EYE, 10., 0., 0.};
    struct bw_error error = {.status = BW_OK};
    struct bw_reach reach;
    struct bw_permitted_time time;
    const struct bw_table *table = bw_tables_find("ansi-z136-1-2014");
    assert_int_equal(bw_hazard_prepare(table, &output, &viewing, &hazard, NULL, NULL), BW_ARGUMENT);
    assert_true(isnan(bw_hazard_ratio(&hazard, 1.)));
    assert_int_equal(bw_hazard_reach(&hazard, ALL, &reach, NULL, NULL), BW_ARGUMENT);
    add_beam(&output, 810., 1., (struct bw_beam)ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 10e-3, 10e-3, 0., 10e-3));
    add_beam(&output, 1550., 1., output.beams[0]);
    strcpy(output.emissions[1].name, "deep");
    assert_int_equal(bw_hazard_prepare(table, &output, &viewing, &hazard, NULL, &error), BW_OUT_OF_RANGE);
    assert_true(strncmp(error.text, "deep, 1550 nm: ", 15) == 0);
    assert_true(isnan(bw_hazard_ratio(&hazard, 1.))); /* not safe by leaving one out */
    output.count = 1;
    assert_int_equal(bw_hazard_prepare(table, &output, &viewing, &hazard, NULL, NULL), BW_OK);
    assert_true(isnan(bw_hazard_ratio(&hazard, NONE)) && isnan(bw_hazard_ratio(&hazard, -1.)));
    assert_true(isnan(bw_hazard_ratio_envelope(&hazard, NONE)));
    assert_true(isnan(bw_hazard_ratio_off_axis(&hazard, 1., NONE)));
    assert_true(bw_hazard_ratio(&hazard, HUGE_VAL) <= 0.);
    assert_int_equal(bw_hazard_reach(&hazard, 1, &reach, NULL, NULL), BW_ARGUMENT);
    assert_true(isnan(reach.distance_m));
    assert_int_equal(bw_hazard_permitted_time(table, &output, &viewing, NONE, &time, NULL, NULL), BW_ARGUMENT);
    output.beams[0].divergence_rad = NONE;
    assert_int_equal(bw_hazard_prepare(table, &output, &viewing, &hazard, NULL, NULL), BW_ARGUMENT);
    output.beams[0].divergence_rad = 0.;
    output.beams[0].diameter_m = HUGE_VAL;
    assert_int_equal(bw_hazard_prepare(table, &output, &viewing, &hazard, NULL, NULL), BW_ARGUMENT);
}

static const struct bw_step *last_step(const struct bw_working *working, const char *symbol) {
    for (size_t i = working->count; i > 0; i--)
        if (!working->steps[i - 1].heading && strcmp(working->steps[i - 1].symbol, symbol) == 0)
            return &working->steps[i - 1];
    fail_msg("no step %s", symbol);
    return NULL;
}

static void test_working(void **state) {
    (void)state;
    struct bw_output output = {.count = 0};
    struct bw_hazard hazard;
    struct bw_viewing_case viewing = {BW_EYE, 10., 0., 0.};
    struct bw_working working = {.steps = NULL};
    struct bw_reach reach;
    struct bw_spot spot;
    struct bw_permitted_time time;
    const struct bw_table *table = bw_tables_find("icnirp-2013");
    add_beam(&output, 810., 1., (struct bw_beam)ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 10e-3, 10e-3, 0., 10e-3));
    assert_int_equal(bw_hazard_prepare(table, &output, &viewing, &hazard, &working, NULL), BW_OK);
    near(last_step(&working, "E_limit")->value, 16.595869074, 1e-9, "limit");
    assert_int_equal(bw_hazard_reach(&hazard, ALL, &reach, &working, NULL), BW_OK);
    near(last_step(&working, "r")->value, reach.distance_m, 0., "distance");
    near(last_step(&working, "sum")->value, 1., 1e-9, "sum");
    assert_int_equal(bw_hazard_spot(&output, 0., 1., &spot), BW_OK);
    assert_int_equal(bw_hazard_diffuse_reach(&hazard, &spot, &reach, &working, NULL), BW_OK);
    near(last_step(&working, "r")->value, reach.distance_m, 0., "diffuse distance");
    assert_int_equal(bw_hazard_permitted_time(table, &output, &viewing, 1., &time, &working, NULL), BW_OK);
    near(last_step(&working, "te")->value, time.exposure_s, 0., "time");
    assert_false(working.failed);
    bw_working_free(&working);
}

static struct CMUnitTest
    tests[COUNT(forms) + COUNT(ends) + COUNT(sums) + COUNT(shares) + COUNT(diffuses) + COUNT(times) + 14];

#define ADD_ROWS(rows, function)                                                                                       \
    for (size_t i = 0; i < COUNT(rows); i++)                                                                           \
        tests[count++] = (struct CMUnitTest) {                                                                         \
            rows[i].name, function, NULL, NULL, &rows[i]                                                               \
        }

int main(void) {
    size_t count = 0;
    ADD_ROWS(forms, test_form);
    ADD_ROWS(ends, test_end);
    ADD_ROWS(sums, test_sum);
    ADD_ROWS(shares, test_share);
    ADD_ROWS(diffuses, test_diffuse);
    ADD_ROWS(times, test_time);
    const struct CMUnitTest single[] = {
        cmocka_unit_test(test_collimated_with_spreading),
        cmocka_unit_test(test_waists),
        cmocka_unit_test(test_envelope),
        cmocka_unit_test(test_falls_beyond_waist),
        cmocka_unit_test(test_off_axis),
        cmocka_unit_test(test_tissues),
        cmocka_unit_test(test_density_and_distance_agree),
        cmocka_unit_test(test_density_bad_ratio),
        cmocka_unit_test(test_diffuse_step),
        cmocka_unit_test(test_diffuse_scan),
        cmocka_unit_test(test_diffuse_at_contact),
        cmocka_unit_test(test_time_scan),
        cmocka_unit_test(test_bad_input),
        cmocka_unit_test(test_working),
    };
    for (size_t i = 0; i < COUNT(single); i++)
        tests[count++] = single[i];
    return cmocka_run_group_tests_name("hazard", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
