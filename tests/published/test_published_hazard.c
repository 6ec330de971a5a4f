/* Published worked examples of distances, optical densities and pulse trains. Where the source used an older limit,
 * its limit is given and the geometry is checked. "memory": not re-read in a printed copy. */
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

static const char osha[] = "OSHA Technical Manual III:6, hazard zone table (memory), limits of ANSI Z136.1-1986";
static const char osha_od[] = "OSHA Technical Manual III:6, OD table, 7 mm pupil (memory)";
static const char textbook[] = "textbook chapter on medical lasers, p. 104-111";
static const char manual[] = "instrument manual applying IEC 60825-1 ed. 1.2 (limits of eu-2006-25)";

/* Compares within so many per cent of the printed value, plus half its last digit. */
static void compare(double got, double printed, double per_cent, double half_digit, const char *source) {
    if (!(fabs(got - printed) <= printed * per_cent / 100. + half_digit))
        fail_msg("got %.6g, published %.6g [%s]", got, printed, source);
}

static struct bw_emission emission_of(double wavelength_nm, double power_w, double energy_j, double duration_s,
                                      double rate_hz) {
    struct bw_emission_input input = {wavelength_nm, power_w, NONE, energy_j, duration_s, rate_hz, NULL};
    struct bw_emission emission;
    struct bw_error error = {.status = BW_OK};
    if (bw_emission_resolve(&input, &emission, &error) != BW_OK)
        fail_msg("%s", error.text);
    return emission;
}

/* One continuous emission against a given irradiance, peak irradiance without aperture. */
static void given_limit(struct bw_hazard *hazard, struct bw_output *output, double power_w, struct bw_beam beam,
                        double limit_w_m2) {
    *output = (struct bw_output){.count = 1};
    output->emissions[0] = emission_of(1064., power_w, NONE, NONE, NONE);
    output->beams[0] = beam;
    hazard->table = NULL;
    hazard->output = output;
    hazard->shaped = false;
    hazard->term_count = 1;
    hazard->terms[0] = (struct bw_term){.emission = 0};
    hazard->terms[0].limit.irradiance_w_m2 = limit_w_m2;
    hazard->terms[0].limit.aperture_m = 0.;
    hazard->adds[0][0] = true;
}

/* ---- distances --------------------------------------------------------------------------------- */

static struct distance_case {
    const char *name;
    double power_w, limit_w_m2;
    double exit_m, divergence_rad; /* direct; a lens if focal_m > 0 */
    double focal_m, at_lens_m;
    double printed_m, per_cent, half_digit_m;
    const char *source;
} distances[] = {
    {"O1 direct", 100., 16., 2e-3, 2e-3, 0., 0., 1410., 0., 5., osha},
    {"O1 lens on laser", 100., 16., 2e-3, 2e-3, 25.4e-3, 6.3e-3, 11.3, .7, .05, osha},
    {"O2 direct", 100., 51., 2e-3, 2e-3, 0., 0., 792., .4, .5, osha},
    {"O2 lens on laser", 100., 51., 2e-3, 2e-3, 25.4e-3, 6.3e-3, 6.3, 1.1, .05, osha},
    {"O3 direct, exit diameter neglected", 500., 1000., 0., 2e-3, 0., 0., 399., 0., .5, osha},
    {"O3 lens on laser", 500., 1000., 20e-3, 2e-3, 200e-3, 30e-3, 5.3, .4, .05, osha},
    {"W7 1 W, 1 mrad, exit diameter neglected", 1., 25.4, 0., 1e-3, 0., 0., 225., .5, .5, textbook},
};

static void test_distance(void **state) {
    const struct distance_case *c = *state;
    struct bw_beam beam = ROUND(BW_GAUSSIAN, BW_LINEAR, c->exit_m, c->divergence_rad, 0., c->exit_m);
    if (c->focal_m > 0.)
        beam = bw_beam_from_lens(c->focal_m, c->at_lens_m, c->divergence_rad, BW_GAUSSIAN);
    struct bw_hazard hazard;
    struct bw_output output;
    struct bw_reach reach;
    given_limit(&hazard, &output, c->power_w, beam, c->limit_w_m2);
    assert_int_equal(bw_hazard_reach(&hazard, BW_EMISSIONS_MAX, &reach, NULL, NULL), BW_OK);
    assert_false(reach.unbounded);
    compare(reach.distance_m - beam.waist_m, c->printed_m, c->per_cent, c->half_digit_m, c->source);
}

/* Diffuse: the irradiance that a matt spot sends to the published distance is the limit of that table. Small spot. */
static struct diffuse_case {
    const char *name;
    double wavelength_nm, power_w, limit_w_m2, printed_m, per_cent, half_digit_m;
    const char *source;
} diffuses[] = {
    {"O1 diffuse", 1064., 100., 16., 1.4, .8, .05, osha},
    {"O2 diffuse", 1064., 100., 51., .8, 1.3, .05, osha},
    {"O3 diffuse", 10600., 500., 1000., .4, .3, .05, osha},
};

static void test_diffuse(void **state) {
    const struct diffuse_case *c = *state;
    struct bw_output output = {.count = 1};
    struct bw_hazard hazard;
    struct bw_spot spot = {.reflectance = 1., .diameter_m = {1e-6}};
    struct bw_viewing_case viewing = {BW_EYE, 100., 0., 0.};
    struct bw_ratio ratio;
    output.emissions[0] = emission_of(c->wavelength_nm, c->power_w, NONE, NONE, NONE);
    output.beams[0] = (struct bw_beam)ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 1e-6, 0., 0., 1e-6);
    assert_int_equal(bw_hazard_prepare(bw_tables_find("eu-2006-25"), &output, &viewing, &hazard, NULL, NULL), BW_OK);
    assert_int_equal(bw_hazard_diffuse_ratio(&hazard, &spot, c->printed_m, &ratio, NULL), BW_OK);
    double irradiance_w_m2 = ratio.total * hazard.terms[ratio.governing].limit.irradiance_w_m2;
    compare(c->printed_m * sqrt(irradiance_w_m2 / c->limit_w_m2), c->printed_m, c->per_cent, c->half_digit_m,
            c->source);
}

/* ---- optical density --------------------------------------------------------------------------- */

static struct density_case {
    const char *name;
    double wavelength_nm, power_w, energy_j, duration_s, rate_hz, exposure_s, printed;
    const char *source;
} densities[] = {
    {"O4 argon 1 W, 0.25 s", 514., 1., NONE, NONE, NONE, .25, 3.0, osha_od},
    {"O4 argon 1 W, 10 s", 514., 1., NONE, NONE, NONE, 10., 3.4, osha_od},
    {"O5 HeNe 5 mW, 0.25 s", 633., 5e-3, NONE, NONE, NONE, .25, .7, osha_od},
    {"O5 HeNe 5 mW, 10 s", 633., 5e-3, NONE, NONE, NONE, 10., 1.1, osha_od},
    {"O6 Nd:YAG 20 mJ, 12 ns, 11 Hz, 10 s", 1064., NONE, 20e-3, 12e-9, 11., 10., 4.5, osha_od},
};

static void test_density(void **state) {
    const struct density_case *c = *state;
    struct bw_output output = {.count = 1};
    struct bw_hazard hazard;
    struct bw_viewing_case viewing = {BW_EYE, c->exposure_s, 0., 0.};
    double ratios[BW_TERMS_MAX], od[BW_EMISSIONS_MAX];
    output.emissions[0] = emission_of(c->wavelength_nm, c->power_w, c->energy_j, c->duration_s, c->rate_hz);
    output.beams[0] = (struct bw_beam)ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 1e-3, 1e-3, 0., 1e-3);
    assert_int_equal(bw_hazard_prepare(bw_tables_find("eu-2006-25"), &output, &viewing, &hazard, NULL, NULL), BW_OK);
    bw_hazard_term_ratios(&hazard, 0., ratios);
    bw_hazard_optical_density(&hazard, ratios, od);
    compare(od[0], c->printed, 0., .05, c->source);
}

/* W5: 12.5 J/cm2 against 5e-6 J/cm2. */
static void test_density_of_given_limit(void **state) {
    (void)state;
    struct bw_hazard hazard;
    struct bw_output output;
    double ratios[BW_TERMS_MAX] = {12.5e4 / 5e-2}, od[BW_EMISSIONS_MAX];
    given_limit(&hazard, &output, 1., (struct bw_beam){.diameter_m = 1e-3}, 1.);
    bw_hazard_optical_density(&hazard, ratios, od);
    compare(od[0], 6.4, 0., .05, textbook);
}

/* ---- trains ------------------------------------------------------------------------------------ */

static struct train_case {
    const char *name, *rules;
    double wavelength_nm, duration_s, rate_hz, exposure_s;
    double single, average, train, per_pulse; /* NONE: not printed */
    const char *rule;
    double per_cent;
    const char *source;
} trains[] = {
    {"W8 655 nm, 16 kHz, 31.25 us, 0.25 s", "eu-2006-25", 655., 31.25e-6, 16e3, .25, NONE, 1.59e-3, 9.46e-4, 9.46e-4,
     "train", .1, manual},
    /* just below 10 s, where the printed rows step from 101.2 to 100 J/m2 and this program takes the lower */
    {"W9 780 nm, 16 kHz, 31.25 us, 10 s", "eu-2006-25", 780., 31.25e-6, 16e3, 10. * (1. - 1e-9), 1.09e-2, 9.14e-4,
     5.44e-4, 5.44e-4, "train", .3, manual},
    {"904 nm, 200 ns, 5 kHz, 10 s: eu", "eu-2006-25", 904., 200e-9, 5e3, 10., NONE, NONE, NONE, 8.56e-4, "train", .06,
     "checked by arithmetic: N^-0.25"},
    {"904 nm, 200 ns, 5 kHz, 10 s: iec", "iec-60825-1-2014", 904., 200e-9, 5e3, 10., NONE, NONE, NONE, 2.05e-3, "train",
     .25, "checked by arithmetic: C5 = 0.4"},
    {"904 nm, 200 ns, 5 kHz, 10 s: icnirp", "icnirp-2013", 904., 200e-9, 5e3, 10., NONE, NONE, NONE, 5.12e-3, "average",
     .1, "checked by arithmetic: average over 10 s"},
};

static void test_train(void **state) {
    const struct train_case *c = *state;
    struct bw_emission emission = emission_of(c->wavelength_nm, NONE, 1e-6, c->duration_s, c->rate_hz);
    struct bw_viewing_case viewing = {BW_EYE, c->exposure_s, 0., 0.};
    struct bw_train_limit_set set;
    assert_int_equal(bw_hazard_train_limits(bw_tables_find(c->rules), &emission, &viewing, &set, NULL, NULL), BW_OK);
    const struct bw_train_limit *limit = &set.limits[set.governing];
    const double printed[BW_RULES] = {c->single, c->average, c->train};
    for (size_t i = 0; i < BW_RULES; i++)
        if (!isnan(printed[i]))
            compare(limit->rules_j_m2[i], printed[i], c->per_cent, 0., c->source);
    compare(limit->per_pulse_j_m2, c->per_pulse, c->per_cent, 0., c->source);
    assert_string_equal(bw_train_rule_name(limit->rule), c->rule);
}

static struct CMUnitTest tests[COUNT(distances) + COUNT(diffuses) + COUNT(densities) + COUNT(trains) + 1];

#define ADD_ROWS(rows, function)                                                                                       \
    for (size_t i = 0; i < COUNT(rows); i++)                                                                           \
        tests[count++] = (struct CMUnitTest) {                                                                         \
            rows[i].name, function, NULL, NULL, &rows[i]                                                               \
        }

int main(void) {
    size_t count = 0;
    ADD_ROWS(distances, test_distance);
    ADD_ROWS(diffuses, test_diffuse);
    ADD_ROWS(densities, test_density);
    ADD_ROWS(trains, test_train);
    tests[count++] = (struct CMUnitTest){"W5 OD", test_density_of_given_limit, NULL, NULL, NULL};
    return cmocka_run_group_tests_name("published hazard", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
