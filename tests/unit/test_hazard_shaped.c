/* hazard: beams with an apparent source, heads of several emitters, elliptical beams, a stand-off. */
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

static const char *const rule_sets[] = {"eu-2006-25", "icnirp-2013", "iec-60825-1-2014", "ansi-z136-1-2014"};

static void near(double got, double want, double relative, const char *what) {
    if (!(fabs(got - want) <= relative * fabs(want)))
        fail_msg("%s: got %.17g, want %.17g (%.3g off)", what, got, want, got / want - 1.);
}

static double uniform(uint64_t *random) {
    *random = *random * 6364136223846793005u + 1442695040888963407u;
    return (double)(*random >> 11) / 9007199254740992.;
}

static void add(struct bw_output *output, double wavelength_nm, double power_w, double duration_s, double rate_hz,
                struct bw_beam beam) {
    struct bw_emission_input input = {wavelength_nm, power_w, NONE, NONE, duration_s, rate_hz, NULL};
    struct bw_error error = {.status = BW_OK};
    if (bw_emission_resolve(&input, &output->emissions[output->count], &error) != BW_OK)
        fail_msg("%s", error.text);
    output->beams[output->count++] = beam;
}

static void prepare_by(struct bw_hazard *hazard, const char *rules, const struct bw_output *output,
                       enum bw_target target, double exposure_s) {
    struct bw_viewing_case viewing = {target, exposure_s, 0., 0.};
    struct bw_error error = {.status = BW_OK};
    if (bw_hazard_prepare(bw_tables_find(rules), output, &viewing, hazard, NULL, &error) != BW_OK)
        fail_msg("%s", error.text);
}

static void prepare(struct bw_hazard *hazard, const struct bw_output *output, enum bw_target target,
                    double exposure_s) {
    prepare_by(hazard, "icnirp-2013", output, target, exposure_s);
}

static double reach_of(const struct bw_hazard *hazard) {
    struct bw_reach reach;
    struct bw_error error = {.status = BW_OK};
    if (bw_hazard_reach(hazard, ALL, &reach, NULL, &error) != BW_OK)
        fail_msg("%s", error.text);
    return reach.distance_m;
}

/* The limit of the mean irradiance for a subtense, straight from the train limits. */
static double limit_for(const struct bw_hazard *hazard, size_t emission, enum bw_effect effect, double subtense_rad) {
    struct bw_viewing_case viewing = hazard->viewing;
    struct bw_train_limit_set set;
    viewing.subtense_rad = subtense_rad;
    assert_int_equal(
        bw_hazard_train_limits(hazard->table, &hazard->output->emissions[emission], &viewing, &set, NULL, NULL), BW_OK);
    for (size_t i = 0; i < set.count; i++)
        if (set.limits[i].limit.effect == effect)
            return set.limits[i].irradiance_w_m2;
    return NONE;
}

/* ---- an apparent source ------------------------------------------------------------------------------ */

static struct bw_beam source_beam(double exit_m, double divergence_rad, double source_m, double behind_m) {
    struct bw_beam beam = ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, exit_m, divergence_rad, 0., exit_m);
    beam.source_m = source_m;
    beam.source_behind_m = behind_m;
    return beam;
}

/* 808 nm, 100 s, 2 mm source, CE = alpha / 1.5 mrad, T2 by its formula: the ratio by hand at each distance. */
static void test_ratio_by_hand(void **state) {
    (void)state;
    static const double distances_m[] = {.01, .1, .15, .5, 1., 1.3, 1.4, 3., 50.};
    struct bw_output output = {.count = 0};
    struct bw_hazard hazard;
    add(&output, 808., 2., NONE, NONE, source_beam(10e-3, .05, 2e-3, .02));
    prepare(&hazard, &output, BW_EYE, 100.);
    for (size_t i = 0; i < COUNT(distances_m); i++) {
        double r = distances_m[i], alpha = 1e3 * 2. * atan(1e-3 / fmax(r + .02, .1)), ca = pow(10., .216);
        double t2_s = 10. * pow(10., (alpha - 1.5) / 98.5);
        double limit = alpha > 1.5 ? 18. * ca * (alpha / 1.5) * pow(fmin(t2_s, 100.), -.25) : 10. * ca;
        double d2 = 1e-4 + .0025 * r * r, share = -expm1(-49e-6 / d2);
        near(bw_hazard_ratio(&hazard, r), 2. * share / (bw_pi * 49e-6 / 4.) / limit, 1e-12, "ratio");
        struct bw_seen seen;
        assert_int_equal(bw_hazard_seen(&hazard, 0, r, &seen, NULL), BW_OK);
        near(seen.ratio, bw_hazard_ratio(&hazard, r), 1e-14, "seen");
        near(seen.subtense_rad, alpha * 1e-3, 1e-12, "subtense");
        assert_int_equal(seen.emitters, 1);
    }
    assert_true(isnan(bw_hazard_ratio(&hazard, -1.)) && isnan(bw_hazard_ratio(&hazard, NONE)));
}

/* Random outputs of one to three emissions, pulsed or not, each with its source. */
static void random_sources(struct bw_output *output, uint64_t *random) {
    static const double wavelengths_nm[] = {450., 532., 650., 810., 905., 1064., 1310.};
    static const double durations_s[] = {1e-7, 50e-6, 200e-6, 2e-3, 30e-3};
    *output = (struct bw_output){.count = 0};
    size_t count = 1 + (size_t)(2.5 * uniform(random));
    for (size_t i = 0; i < count; i++) {
        double duration_s = NONE, rate_hz = NONE;
        struct bw_beam beam = source_beam(1e-3 + 20e-3 * uniform(random), pow(10., -3. + 2.5 * uniform(random)),
                                          20e-3 * uniform(random) * uniform(random), .2 * uniform(random));
        if (uniform(random) < .3)
            beam = bw_beam_from_lens(.05 + uniform(random), 20e-3, 4e-3 + 4e-3 * uniform(random), BW_GAUSSIAN);
        beam.source_m = uniform(random) < .2 ? 0. : fmax(beam.source_m, 15e-3 * uniform(random));
        if (uniform(random) < .7) {
            duration_s = durations_s[(size_t)(5. * uniform(random))];
            rate_hz = pow(.8 / duration_s, uniform(random)) * 2.;
            rate_hz = fmin(rate_hz, .8 / duration_s);
        }
        add(output, wavelengths_nm[(size_t)(7. * uniform(random))], pow(10., -3. + 3.5 * uniform(random)), duration_s,
            rate_hz, beam);
    }
    output->stand_off_m = uniform(random) < .3 ? .3 * uniform(random) : 0.;
}

/* No place beyond the reach is above 1, the reach is; envelope, bound off the axis and worst terms hold. */
static void test_random_sources(void **state) {
    (void)state;
    uint64_t random = 3;
    size_t inside = 0, beyond = 0;
    for (int i = 0; i < 120; i++) {
        struct bw_output output;
        struct bw_hazard hazard;
        double worst[BW_TERMS_MAX], here[BW_TERMS_MAX];
        random_sources(&output, &random);
        prepare_by(&hazard, rule_sets[i % 4 == 3 ? 0 : i % 4], &output, BW_EYE, i % 5 ? 10. : .25);
        double reach_m = reach_of(&hazard);
        bw_hazard_prepare_envelope(&hazard);
        bw_hazard_worst_terms(&hazard, worst);
        double last_m = output.stand_off_m, settled_m = 0.;
        for (size_t j = 0; j < output.count; j++)
            settled_m = fmax(settled_m, hazard.settled_m[j]);
        double largest = 0.;
        for (int k = 400; k >= 0; k--) {
            double r = fmax(2. * settled_m, 2.) * pow(k / 400., 2.);
            if (r < output.stand_off_m)
                break;
            double ratio = bw_hazard_ratio(&hazard, r);
            largest = fmax(largest, ratio);
            if (!(ratio <= 1.))
                last_m = fmax(last_m, r);
            double envelope = bw_hazard_ratio_envelope(&hazard, r);
            if (!(envelope >= largest * (1. - 1e-12)))
                fail_msg("%d: envelope %g below %g at %g m", i, envelope, largest, r);
            assert_true(bw_hazard_ratio_off_axis(&hazard, r, 0.) >= ratio * (1. - 1e-12));
            assert_true(bw_hazard_ratio_off_axis(&hazard, r, 5e-3) <= bw_hazard_ratio_off_axis(&hazard, r, 4e-3));
            bw_hazard_term_ratios(&hazard, r, here);
            for (size_t t = 0; t < hazard.term_count; t++)
                assert_true(here[t] <= worst[t] * (1. + 1e-12));
        }
        if (!(reach_m >= last_m || last_m <= output.stand_off_m))
            fail_msg("%d: reach %g m, but above 1 at %g m", i, reach_m, last_m);
        if (reach_m > 0. && isfinite(reach_m)) {
            assert_true(bw_hazard_ratio(&hazard, reach_m * (1. + 1e-9)) <= 1.);
            double just_inside = bw_hazard_ratio(&hazard, reach_m * (1. - 1e-7));
            if (!(just_inside > 1. - 1e-6) && reach_m > output.stand_off_m * (1. + 1e-6))
                fail_msg("%d: %g just inside the reach of %.15g m", i, just_inside, reach_m);
            (reach_m < settled_m ? &inside : &beyond)[0]++;
        }
        double at_exit = bw_hazard_ratio_envelope(&hazard, 0.);
        assert_true(at_exit >= largest * (1. - 1e-12) && at_exit <= 1.6 * largest);
    }
    assert_true(inside >= 10 && beyond >= 20); /* both kinds did occur */
}

/* Without a ladder the envelope closes in to 1e-4. */
static void test_envelope_without_ladder(void **state) {
    (void)state;
    struct bw_output output = {.count = 0};
    struct bw_hazard hazard;
    add(&output, 808., 2., NONE, NONE, source_beam(10e-3, 2e-3, 5e-3, 0.));
    prepare(&hazard, &output, BW_EYE, 100.);
    double largest = 0.;
    for (double r = 10.; r >= 0.; r -= 1e-3)
        largest = fmax(largest, bw_hazard_ratio(&hazard, r));
    double envelope = bw_hazard_ratio_envelope(&hazard, 0.);
    assert_true(envelope >= largest && envelope <= largest * (1. + 3e-4));
    assert_true(largest > 1.5 * bw_hazard_ratio(&hazard, .1)); /* it does rise with the distance */
}

/* No source: the same numbers, to the last digit, as the point that it is. A vast one: the limit of the rule set. */
static void test_source_limits(void **state) {
    (void)state;
    struct bw_output point = {.count = 0}, tiny = {.count = 0}, small = {.count = 0};
    struct bw_hazard one, other, third;
    add(&point, 808., 2., NONE, NONE, source_beam(10e-3, .05, 0., 0.));
    add(&tiny, 808., 2., NONE, NONE, source_beam(10e-3, .05, 1e-9, 0.));
    add(&small, 808., 2., NONE, NONE, source_beam(10e-3, .05, .149e-3, 0.)); /* 1.49 mrad at 100 mm */
    prepare(&one, &point, BW_EYE, 10.);
    prepare(&other, &tiny, BW_EYE, 10.);
    prepare(&third, &small, BW_EYE, 10.);
    assert_false(one.shaped);
    for (double r = 0.; r < 3.; r += .01) {
        near(bw_hazard_ratio(&other, r), bw_hazard_ratio(&one, r), 1e-15, "a nanometre");
        near(bw_hazard_ratio(&third, r), bw_hazard_ratio(&one, r), 1e-15, "below alpha_min even at 100 mm");
    }
    near(reach_of(&other), reach_of(&one), 1e-12, "reach");
    struct bw_viewing_case wide = {BW_EYE, 10., .02, 0.}; /* a subtense given for all distances */
    struct bw_hazard fixed;
    assert_int_equal(bw_hazard_prepare(bw_tables_find("icnirp-2013"), &small, &wide, &fixed, NULL, NULL), BW_OK);
    assert_false(fixed.shaped);
}

/* ---- heads of several emitters ----------------------------------------------------------------------- */

static void place(struct bw_beam *beam, size_t count, const double (*at_mm)[2]) {
    beam->cluster.count = count;
    for (size_t i = 0; i < count; i++) {
        beam->cluster.at[i] = (struct bw_point){at_mm[i][0] * 1e-3, at_mm[i][1] * 1e-3};
        beam->cluster.share[i] = 1. / (double)count;
    }
}

static double clamp(double x, double low, double high) {
    return fmin(fmax(x, low), high);
}

/* Brute force over all subsets of the first emitters: each set's power on the axis over the limit for its bounding box.
 * Emitters whose beams lie over each other, so that all of the set is seen at once. */
static double by_subsets_of(const struct bw_hazard *hazard, double distance_m, size_t first) {
    const struct bw_beam *beam = &hazard->output->beams[0];
    double largest = 0., g = bw_beam_irradiance_per_w(beam, distance_m, 7e-3);
    for (unsigned set = 1; set < 1u << first; set++) {
        double low[2] = {HUGE_VAL, HUGE_VAL}, high[2] = {-HUGE_VAL, -HUGE_VAL}, share = 0.;
        for (size_t i = 0; i < beam->cluster.count; i++) {
            if (!(set >> i & 1u))
                continue;
            double xy[2] = {beam->cluster.at[i].x_m, beam->cluster.at[i].y_m};
            share += beam->cluster.share[i];
            for (size_t k = 0; k < 2; k++) {
                low[k] = fmin(low[k], xy[k]);
                high[k] = fmax(high[k], xy[k]);
            }
        }
        double view_m = fmax(distance_m + beam->source_behind_m, .1), side[2], mean = 0.;
        for (size_t k = 0; k < 2; k++) {
            side[k] = 2. * atan((high[k] - low[k] + beam->source_m) / 2. / view_m);
            mean += clamp(side[k], 1.5e-3, 100e-3) / 2.;
        }
        double alpha = fabs(side[0] - side[1]) <= 1e-12 ? side[0] : fmax(fmin(side[0], side[1]), mean);
        double limit = limit_for(hazard, 0, BW_RETINA_THERMAL, fmax(alpha, 1.5e-3));
        largest = fmax(largest, hazard->output->emissions[0].average_power_w * share * g / limit);
    }
    return largest;
}

static double by_subsets(const struct bw_hazard *hazard, double distance_m) {
    return by_subsets_of(hazard, distance_m, hazard->output->beams[0].cluster.count);
}

static void random_cluster(struct bw_beam *beam, uint64_t *random) {
    double at_mm[BW_EMITTERS_MAX][2], sum = 0.;
    size_t count = 2 + (size_t)(6. * uniform(random));
    bool grid = uniform(random) < .4;
    for (size_t i = 0; i < count; i++) {
        at_mm[i][0] = grid ? 7.1 * (double)(i % 3) : 30. * uniform(random) - 15.;
        at_mm[i][1] = grid ? 5.3 * (double)(i / 3) : 30. * uniform(random) * uniform(random);
    }
    place(beam, count, (const double(*)[2])at_mm);
    for (size_t i = 0; i < count; i++)
        sum += beam->cluster.share[i] = .2 + uniform(random);
    for (size_t i = 0; i < count; i++)
        beam->cluster.share[i] /= sum;
    beam->source_m = 3e-3 * uniform(random) * uniform(random);
}

/* Windows against all subsets, beams so wide that they overlap: 5 m wide at the exit, so that the offsets of some
 * centimetres do not tell (1e-4). */
static void test_cluster_subsets(void **state) {
    (void)state;
    uint64_t random = 8;
    for (int i = 0; i < 60; i++) {
        struct bw_output output = {.count = 0};
        struct bw_hazard hazard;
        struct bw_beam beam = source_beam(5., 1e-3, 0., 0.);
        random_cluster(&beam, &random);
        add(&output, 808., 1e4, NONE, NONE, beam);
        prepare_by(&hazard, rule_sets[i % 4], &output, BW_EYE, 10.);
        for (double r = 0.; r < 1.2 * hazard.settled_m[0]; r += hazard.settled_m[0] / 17.)
            near(bw_hazard_ratio(&hazard, r), by_subsets(&hazard, r), 3e-4, "worst window against all subsets");
    }
}

/* Pulses: limits that may fall as the source grows. Never below any subset. */
static void test_cluster_subsets_pulsed(void **state) {
    (void)state;
    uint64_t random = 12;
    for (int i = 0; i < 24; i++) {
        struct bw_output output = {.count = 0};
        struct bw_hazard hazard;
        struct bw_beam beam = source_beam(5., 1e-3, 0., 0.);
        random_cluster(&beam, &random);
        static const double durations_s[] = {1e-7, 100e-6, 2e-3, 20e-3};
        double duration_s = durations_s[i % 4];
        add(&output, 905., 1e4, duration_s, fmin(2e4, .3 / duration_s), beam);
        prepare_by(&hazard, rule_sets[i % 3], &output, BW_EYE, 10.);
        for (double r = .05; r < hazard.settled_m[0]; r += hazard.settled_m[0] / 9.) {
            double want = by_subsets(&hazard, r), got = bw_hazard_ratio(&hazard, r);
            /* oblong windows allow for alpha_max at the duration of the pulse: stricter, by a few at most */
            if (!(got >= want * (1. - 3e-4) && got <= 40. * want))
                fail_msg("%d: at %g m got %g, subsets %g", i, r, got, want);
        }
    }
}

/* All at one spot are one emitter; one emitter off the axis is one emitter. */
static void test_cluster_limits(void **state) {
    (void)state;
    static const double same_mm[3][2] = {{0., 0.}, {0., 0.}, {0., 0.}};
    struct bw_output single = {.count = 0}, three = {.count = 0};
    struct bw_hazard one, other;
    struct bw_beam beam = source_beam(5e-3, .1, 0., 0.), cluster = beam;
    place(&cluster, 3, same_mm);
    add(&single, 808., 2., NONE, NONE, beam);
    add(&three, 808., 2., NONE, NONE, cluster);
    prepare(&one, &single, BW_EYE, 10.);
    prepare(&other, &three, BW_EYE, 10.);
    for (double r = 0.; r < 3.; r += .1)
        near(bw_hazard_ratio(&other, r), bw_hazard_ratio(&one, r), 1e-12, "all in one place");
    near(reach_of(&other), reach_of(&one), 1e-12, "reach");
}

/* 16 narrow beams 10 mm apart, collimated: at the exit the eye gets one of them, the skin too. */
static void test_cluster_apart(void **state) {
    (void)state;
    double at_mm[16][2];
    for (size_t i = 0; i < 16; i++) {
        at_mm[i][0] = 20. * (double)(i % 4);
        at_mm[i][1] = 20. * (double)(i / 4);
    }
    struct bw_output sixteen = {.count = 0}, single = {.count = 0};
    struct bw_hazard all, one;
    struct bw_beam beam = source_beam(1e-3, 5e-3, 0., 0.), cluster = beam;
    beam.profile = cluster.profile = BW_TOP_HAT;
    place(&cluster, 16, (const double(*)[2])at_mm);
    add(&sixteen, 808., 16., NONE, NONE, cluster);
    add(&single, 808., 1., NONE, NONE, beam);
    for (int target = BW_EYE; target <= BW_SKIN; target++) {
        prepare(&all, &sixteen, (enum bw_target)target, 10.);
        prepare(&one, &single, (enum bw_target)target, 10.);
        near(bw_hazard_ratio(&all, 0.), bw_hazard_ratio(&one, 0.), 1e-12, "one of sixteen");
        double far_m = 1e3; /* all over each other, and a point */
        near(bw_hazard_ratio(&all, far_m), 16. * bw_hazard_ratio(&one, far_m), 1e-12, "sixteen together");
        assert_true(reach_of(&all) > reach_of(&one));
    }
}

/* Wherever the eye stands, it gets no more than the bound: the sum of displaced means over a fine grid of places. */
static void test_cluster_anywhere(void **state) {
    (void)state;
    uint64_t random = 31;
    for (int i = 0; i < 12; i++) {
        struct bw_output output = {.count = 0};
        struct bw_hazard hazard;
        struct bw_beam beam = source_beam(2e-3 + 8e-3 * uniform(&random), .02, 0., 0.);
        if (i % 2)
            beam.profile = BW_TOP_HAT;
        random_cluster(&beam, &random);
        add(&output, 10600., 1., NONE, NONE, beam); /* the front of the eye: no subtense in it */
        prepare(&hazard, &output, BW_EYE, 10.);
        const struct bw_train_limit *limit = &hazard.terms[0].limit;
        for (double r = 0.; r < 2.; r += .3) {
            double largest = 0., bound = bw_hazard_ratio(&hazard, r);
            for (int k = 0; k < 41 * 41; k++) {
                struct bw_point at = {-20e-3 + 1e-3 * (k % 41), -5e-3 + 1e-3 * (double)(k / 41)};
                double sum = 0.;
                for (size_t j = 0; j < beam.cluster.count; j++)
                    sum += beam.cluster.share[j] * bw_beam_irradiance_beside_per_w(&beam, r, limit->aperture_m,
                                                                                   bw_distance(at, beam.cluster.at[j]));
                largest = fmax(largest, sum / limit->irradiance_w_m2);
            }
            if (!(bound >= largest * (1. - 1e-12) && bound <= 3. * largest))
                fail_msg("%d: at %g m the bound is %g, the worst place gets %g", i, r, bound, largest);
        }
    }
}

/* Reach, envelope and bound off the axis of random heads. */
static void test_random_clusters(void **state) {
    (void)state;
    uint64_t random = 41;
    for (int i = 0; i < 25; i++) {
        struct bw_output output = {.count = 0};
        struct bw_hazard hazard;
        struct bw_beam beam = source_beam(2e-3 + 8e-3 * uniform(&random), .01 + .2 * uniform(&random), 0., 0.);
        random_cluster(&beam, &random);
        if (i % 3)
            add(&output, 808., pow(10., -2. + 2. * uniform(&random)), NONE, NONE, beam);
        else
            add(&output, 905., .1, 2e-4, 50., beam);
        prepare(&hazard, &output, BW_EYE, 10.);
        double reach_m = reach_of(&hazard), last_m = 0., largest = 0.;
        bw_hazard_prepare_envelope(&hazard);
        for (int k = 120; k >= 0; k--) {
            double r = 1.2 * hazard.settled_m[0] * pow(k / 120., 2.), ratio = bw_hazard_ratio(&hazard, r);
            largest = fmax(largest, ratio);
            last_m = ratio <= 1. ? last_m : fmax(last_m, r);
            assert_true(bw_hazard_ratio_envelope(&hazard, r) >= largest * (1. - 1e-12));
            double outermost_m = bw_beam_outermost_m(&beam);
            assert_true(bw_hazard_ratio_off_axis(&hazard, r, outermost_m) >= ratio * (1. - 1e-12));
            assert_true(bw_hazard_ratio_off_axis(&hazard, r, outermost_m + 50e-3) <=
                        bw_hazard_ratio_off_axis(&hazard, r, outermost_m + 40e-3));
        }
        if (!(reach_m >= last_m))
            fail_msg("%d: reach %g m, above 1 at %g m", i, reach_m, last_m);
        if (reach_m > 0.)
            assert_true(bw_hazard_ratio(&hazard, reach_m * (1. + 1e-9)) <= 1.);
    }
}

/* Sixteen emitters here and there, pulsed: more windows than are kept apart. Those put together are stricter. */
static void test_cluster_crowd(void **state) {
    (void)state;
    uint64_t random = 99;
    struct bw_output output = {.count = 0};
    struct bw_hazard hazard;
    struct bw_beam beam = source_beam(5., 1e-3, 0., 0.);
    double at_mm[16][2];
    for (size_t i = 0; i < 16; i++) {
        at_mm[i][0] = 40. * uniform(&random);
        at_mm[i][1] = 40. * uniform(&random);
    }
    place(&beam, 16, (const double(*)[2])at_mm);
    add(&output, 905., 1e4, 2e-3, 50., beam);
    prepare(&hazard, &output, BW_EYE, 10.);
    for (double r = .1; r < 3.; r *= 2.5) {
        double want = by_subsets_of(&hazard, r, 10), got = bw_hazard_ratio(&hazard, r);
        assert_true(got >= want * (1. - 3e-4));
    }
}

/* ---- the working --------------------------------------------------------------------------------------- */

static const struct bw_step *step_of(const struct bw_working *working, const char *symbol, const char *part) {
    for (size_t i = 0; i < working->count; i++) {
        const struct bw_step *step = &working->steps[i];
        if (!step->heading && strcmp(step->symbol, symbol) == 0 && (strstr(step->formula, part) != NULL || strstr(step->note, part) != NULL))
            return step;
    }
    for (size_t i = 0; i < working->count; i++)
        print_error("%s = %g: %s\n", working->steps[i].symbol, working->steps[i].value, working->steps[i].formula);
    fail_msg("no step %s with %s", symbol, part);
    return NULL;
}

/* The steps multiply to the ratio at the answer. */
static void test_working(void **state) {
    (void)state;
    static const double at_mm[3][2] = {{0., 0.}, {9., 0.}, {0., 7.}};
    for (int i = 0; i < 5; i++) {
        struct bw_output output = {.count = 0};
        struct bw_hazard hazard;
        struct bw_working working = {0};
        struct bw_reach reach;
        struct bw_beam beam = source_beam(4e-3, .2, i == 1 ? 4e-3 : 0., 0.);
        beam.profile = i == 3 ? BW_TOP_HAT : BW_GAUSSIAN;
        beam.elliptical = i >= 2;
        beam.diameter_y_m = beam.exit_diameter_y_m = 8e-3;
        beam.divergence_y_rad = .4;
        if (i == 4)
            place(&beam, 3, at_mm);
        add(&output, 808., 1., NONE, NONE, beam);
        prepare(&hazard, &output, BW_EYE, 10.);
        assert_int_equal(bw_hazard_reach(&hazard, ALL, &reach, &working, NULL), BW_OK);
        const struct bw_step *per_w = step_of(&working, "g",
                                              i == 4   ? "seen together"
                                              : i == 3 ? "common area"
                                              : i == 2 ? "elliptical"
                                                       : "exp");
        struct bw_seen seen;
        assert_int_equal(bw_hazard_seen(&hazard, 0, reach.distance_m, &seen, NULL), BW_OK);
        near(step_of(&working, "ratio", "E_limit")->value, per_w->value / seen.limit.irradiance_w_m2, 1e-12, "ratio");
        near(step_of(&working, "sum", "ratio")->value, 1., 1e-9, "sum");
        near(step_of(&working, "r", "farthest")->value, reach.distance_m, 0., "distance");
        assert_true(i != 1 || seen.subtense_rad > 1.5e-3);
        if (i == 1 || i == 4)
            near(step_of(&working, "alpha", "the eye sees")->value, 1e3 * seen.subtense_rad, 1e-12, "alpha");
        bw_working_free(&working);
    }
}

/* ---- elliptical beams --------------------------------------------------------------------------------- */

/* An ellipse reaches farther than the circle of its larger axes and less far than that of its smaller ones. */
static void test_ellipse_reach(void **state) {
    (void)state;
    double reach_m[4];
    for (size_t i = 0; i < 4; i++) {
        struct bw_output output = {.count = 0};
        struct bw_hazard hazard;
        struct bw_beam beam = source_beam(i == 1 ? 10e-3 : 4e-3, i == 1 ? .5 : .1, 0., 0.);
        beam.elliptical = i >= 2;
        beam.diameter_y_m = beam.exit_diameter_y_m = i == 3 ? 4e-3 : 10e-3;
        beam.divergence_y_rad = i == 3 ? .1 : .5;
        add(&output, 808., 5., NONE, NONE, beam);
        prepare(&hazard, &output, BW_EYE, 10.);
        reach_m[i] = reach_of(&hazard);
        near(bw_hazard_ratio(&hazard, reach_m[i]), 1., 1e-9, "ratio at the reach");
        double last = HUGE_VAL;
        for (double r = 0.; r < 3. * reach_m[i]; r += reach_m[i] / 50.) {
            double now = bw_hazard_ratio(&hazard, r);
            assert_true(now < last);
            near(bw_hazard_ratio_envelope(&hazard, r), now, 0., "envelope");
            last = now;
        }
    }
    assert_true(reach_m[1] < reach_m[2] && reach_m[2] < reach_m[0]);
    near(reach_m[3], reach_m[0], 1e-12, "equal axes");
    /* far off E = 4 P / (pi phi_x phi_y r^2): the geometric mean of both divergences */
    near(reach_m[2], reach_m[0] * sqrt(.1 / .5), .01, "geometric mean");
}

/* A weak lens: narrow up to its focus, where it is held to be wide. The hazard before the focus is found. */
static void test_weak_lens(void **state) {
    (void)state;
    struct bw_output output = {.count = 0};
    struct bw_hazard hazard;
    double worst[BW_TERMS_MAX];
    add(&output, 10600., 50e-3, NONE, NONE, bw_beam_from_lens(1., 5e-3, 20e-3, BW_GAUSSIAN));
    prepare(&hazard, &output, BW_EYE, 10.);
    assert_true(bw_hazard_ratio(&hazard, .99) > 1. && bw_hazard_ratio(&hazard, 1.) < 1.);
    near(reach_of(&hazard), 1., 1e-9, "up to the focus");
    near(bw_hazard_ratio_envelope(&hazard, .3), bw_hazard_ratio(&hazard, .5), 1e-4, "envelope before it");
    bw_hazard_worst_terms(&hazard, worst);
    near(worst[0], bw_hazard_ratio(&hazard, 0.), 1e-12, "worst term");
}

/* ---- stand-off ---------------------------------------------------------------------------------------- */

static void test_stand_off(void **state) {
    (void)state;
    struct bw_output output = {.count = 0};
    struct bw_hazard hazard;
    double worst[BW_TERMS_MAX];
    add(&output, 808., 5., NONE, NONE, source_beam(4e-3, .3, 0., 0.));
    prepare(&hazard, &output, BW_EYE, 10.);
    double reach_m = reach_of(&hazard), exit = bw_hazard_ratio(&hazard, 0.);
    output.stand_off_m = reach_m / 2.;
    near(reach_of(&hazard), reach_m, 1e-12, "a spacer shorter than the hazard changes no distance");
    near(bw_hazard_ratio_envelope(&hazard, 0.), bw_hazard_ratio(&hazard, reach_m / 2.), 0., "at the spacer's end");
    bw_hazard_worst_terms(&hazard, worst);
    near(worst[0], bw_hazard_ratio(&hazard, reach_m / 2.), 1e-14, "worst outside");
    near(bw_hazard_ratio(&hazard, 0.), exit, 0., "the ratio itself is what it is");
    output.stand_off_m = reach_m * 1.01;
    assert_true(!(reach_of(&hazard) > 0.));
    struct bw_spot spot;
    assert_int_equal(bw_hazard_spot(&output, 0., 1., &spot), BW_OK);
    near(spot.diameter_m[0], bw_beam_diameter_m(&output.beams[0], output.stand_off_m), 0., "the spot at its end");
}

/* ---- refusals ----------------------------------------------------------------------------------------- */

static void refuse(const struct bw_output *output, const char *part) {
    struct bw_viewing_case viewing = {BW_EYE, 10., 0., 0.};
    struct bw_error error = {.status = BW_OK};
    struct bw_hazard hazard;
    assert_int_equal(bw_hazard_prepare(bw_tables_find("icnirp-2013"), output, &viewing, &hazard, NULL, &error),
                     BW_ARGUMENT);
    assert_non_null(strstr(error.text, part));
    assert_true(isnan(bw_hazard_ratio(&hazard, 1.)));
}

static void test_refusals(void **state) {
    (void)state;
    static const double at_mm[2][2] = {{0., 0.}, {5., 0.}};
    struct bw_output good = {.count = 0}, bad;
    add(&good, 808., 5., NONE, NONE, source_beam(4e-3, .3, 0., 0.));
    place(&good.beams[0], 2, at_mm);
    static const double wrong[] = {NONE, -1.};
    for (size_t i = 0; i < COUNT(wrong); i++) {
        bad = good;
        bad.stand_off_m = wrong[i];
        refuse(&bad, "stand-off");
        bad = good;
        bad.beams[0].source_m = wrong[i];
        refuse(&bad, "apparent source");
        bad = good;
        bad.beams[0].source_behind_m = wrong[i];
        refuse(&bad, "apparent source");
        bad = good;
        bad.beams[0].cluster.share[1] = wrong[i];
        refuse(&bad, "share");
        bad = good;
        bad.beams[0].cluster.at[1].x_m = wrong[i] * 2.;
        refuse(&bad, "off the axis");
        bad = good;
        bad.beams[0].elliptical = true;
        bad.beams[0].diameter_y_m = wrong[i];
        refuse(&bad, "diameter");
        bad.beams[0].diameter_y_m = 1e-3;
        bad.beams[0].divergence_y_rad = wrong[i];
        refuse(&bad, "divergence");
    }
    bad = good;
    bad.beams[0].cluster.share[1] = .4;
    refuse(&bad, "sum to");
    bad = good;
    bad.beams[0].cluster.count = 17;
    refuse(&bad, "emitters");
    struct bw_seen seen;
    struct bw_hazard hazard;
    prepare(&hazard, &good, BW_EYE, 10.);
    assert_int_equal(bw_hazard_seen(&hazard, 99, 1., &seen, NULL), BW_ARGUMENT);
    assert_int_equal(bw_hazard_seen(&hazard, 0, -1., &seen, NULL), BW_ARGUMENT);
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_ratio_by_hand),
        cmocka_unit_test(test_random_sources),
        cmocka_unit_test(test_envelope_without_ladder),
        cmocka_unit_test(test_source_limits),
        cmocka_unit_test(test_cluster_subsets),
        cmocka_unit_test(test_cluster_subsets_pulsed),
        cmocka_unit_test(test_cluster_limits),
        cmocka_unit_test(test_cluster_apart),
        cmocka_unit_test(test_cluster_anywhere),
        cmocka_unit_test(test_random_clusters),
        cmocka_unit_test(test_cluster_crowd),
        cmocka_unit_test(test_working),
        cmocka_unit_test(test_ellipse_reach),
        cmocka_unit_test(test_weak_lens),
        cmocka_unit_test(test_stand_off),
        cmocka_unit_test(test_refusals),
    };
    return cmocka_run_group_tests_name("hazard shaped", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
