/* assess: aids, tolerances, what moves the answers, times to the limits, skin areas, incidents; against closed forms. */
#include <math.h>
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdlib.h>
#include <string.h>

#include <cmocka.h>

#include "clinic.h"

#define COUNT(array) (sizeof(array) / sizeof *(array))
#define LASER(emission, handpiece)                                                                                     \
    "[laser one]\nlabelled_class = 4\n[emission one beam]\n" emission "[handpiece one lens]\n" handpiece
#define DIODE(more, handpiece)                                                                                         \
    CLINIC_CASE LASER("wavelength_nm = 810\naverage_power_w = 8\n" more,                                               \
                      "beam_diameter_mm = 20\ndivergence_mrad = 150\ndiameter_definition = d63\nexposure_s = 100\n"   \
                      handpiece)
#define LOUPES     "[aid loupes]\nmagnification = 2.5\nobjective_diameter_mm = 16\ntransmittance_pct = 90\n"
#define BINOCULARS "[aid binoculars]\nmagnification = 7\nobjective_diameter_mm = 50\n"
#define DARK       "[aid dark]\nmagnification = 1\nobjective_diameter_mm = 50\ntransmittance_pct = 10\n"

static void expect(const char *what, double got, double want, double relative) {
    if (!(fabs(got - want) <= relative * fabs(want)))
        fail_msg("%s: got %.15g, want %.15g", what, got, want);
}

static struct clinic assess(const char *text, const char *rules, unsigned parts) {
    struct clinic clinic = clinic_assess_with(
        text, rules, (struct bw_assess_options){.parts = parts, .working = true, .at_count = 2, .at_m = {0.5, 2.}});
    if (clinic.status != BW_OK)
        fail_msg("%s", clinic.error.text);
    return clinic;
}

/* ---- closed forms ------------------------------------------------------------------------------------------------ */

/* 10 C4 W/m2 at 810 nm, 100 s (limits-facts.md, section 3). */
static double eye_limit_w_m2(void) {
    return 10. * pow(10., 0.22);
}

/* Where the mean of a Gaussian over an aperture, times a gain, is the limit. */
static double reach_m(double power_w, double exit_m, double divergence_rad, double aperture_m, double limit_w_m2) {
    double share = limit_w_m2 * bw_pi * aperture_m * aperture_m / 4. / power_w;
    double width_m = aperture_m / sqrt(-log1p(-share));
    return width_m > exit_m ? sqrt(width_m * width_m - exit_m * exit_m) / divergence_rad : 0.;
}

static double ratio_at(double power_w, double width_m, double aperture_m, double limit_w_m2) {
    return power_w * -expm1(-pow(aperture_m / width_m, 2.)) / (bw_pi * aperture_m * aperture_m / 4.) / limit_w_m2;
}

/* ---- aids ------------------------------------------------------------------------------------------------------- */

static void test_aids(void **state) {
    (void)state;
    struct clinic clinic = assess(DIODE("", "") LOUPES BINOCULARS DARK, NULL, BW_PART_DISTANCE);
    const struct bw_distance_result *distance = &clinic.result->distances[0];
    assert_int_equal(distance->aid_count, 3);
    /* loupes: 2.5 x 7 mm is more than the objective of 16 mm; binoculars: 7 x 7 = 49 mm; the limit over D' */
    double through_loupes = eye_limit_w_m2() / 0.9 * pow(7. / 16., 2.), through_binoculars = eye_limit_w_m2() / 49.;
    expect("loupes", distance->aids[0].nohd.distance_m, reach_m(8, 20e-3, .15, 16e-3, through_loupes), 1e-9);
    expect("binoculars", distance->aids[1].nohd.distance_m, reach_m(8, 20e-3, .15, 49e-3, through_binoculars), 1e-9);
    expect("binoculars at the exit", distance->aids[1].ratio_at_exit, ratio_at(8, 20e-3, 49e-3, through_binoculars),
           1e-9);
    assert_true(!distance->aids[0].naked_decides && !distance->aids[1].naked_decides);
    assert_true(distance->aids[2].naked_decides);
    expect("dark glass: past it", distance->aids[2].nohd.distance_m, distance->nohd.distance_m, 0.);
    expect("dark glass at the exit", distance->aids[2].ratio_at_exit, distance->ratio_at_exit, 0.);
    clinic_free(&clinic);
}

#define STANDS(more) "[person two operator]\nat_m = 4.5 3.5\n" more
#define USED         CLINIC_ROOM "[use two one lens]\n"

/* Someone who looks through an aid is worse off by its gain, 49 within a wide beam. */
static void test_person_aid(void **state) {
    (void)state;
    struct clinic naked = assess(DIODE("", "") BINOCULARS USED STANDS(""), NULL, BW_PART_ROOM);
    struct clinic aided = assess(DIODE("", "") BINOCULARS USED STANDS("aid = binoculars\n"), NULL, BW_PART_ROOM);
    struct clinic dark = assess(DIODE("", "") DARK USED STANDS("aid = dark\n"), NULL, BW_PART_ROOM);
    const struct bw_person_result *bare = naked.result->rooms[0].persons, *through = aided.result->rooms[0].persons;
    expect("gain", through->place.ratio / bare->place.ratio, 49., 0.02);
    assert_true(through->through_aid && !bare->through_aid && !dark.result->rooms[0].persons->through_aid);
    expect("dark", dark.result->rooms[0].persons->place.ratio, bare->place.ratio, 0.);
    expect("density", through->od[0].od, log10(through->place.ratio), 1e-3);
    assert_true(through->eye.exposure_s < bare->eye.exposure_s);
    expect("skin is none the wiser", through->skin_ratio, bare->skin_ratio, 0.);
    clinic_free(&naked);
    clinic_free(&aided);
    clinic_free(&dark);
}

/* ---- tolerances ------------------------------------------------------------------------------------------------- */

#define OFF_BEAM "diameter_tolerance_pct = 10\ndivergence_tolerance_pct = 20\n"

static void test_worst_corner(void **state) {
    (void)state;
    struct clinic off = assess(DIODE("tolerance_pct = 20\n", OFF_BEAM) USED STANDS(""), NULL, BW_PART_ALL);
    struct clinic plain = assess(DIODE("", "") USED STANDS(""), NULL, BW_PART_ALL);
    struct clinic at_worst =
        assess(CLINIC_CASE LASER("wavelength_nm = 810\naverage_power_w = 9.6\n",
                                 "beam_diameter_mm = 18\ndivergence_mrad = 120\ndiameter_definition = d63\n"
                                 "exposure_s = 100\n") USED STANDS(""),
               NULL, BW_PART_ALL);
    const struct bw_distance_result *got = &off.result->distances[0], *nominal = &plain.result->distances[0];
    const struct bw_distance_result *worst = &at_worst.result->distances[0];
    assert_true(got->has_tolerance && !nominal->has_tolerance && got->nominal.nohd.distance_m > 0.);
    expect("NOHD", got->nohd.distance_m, reach_m(9.6, 18e-3, .12, 7e-3, eye_limit_w_m2()), 1e-9);
    expect("skin", got->skin.distance_m, worst->skin.distance_m, 1e-12);
    expect("diffuse", got->diffuse.distance_m, worst->diffuse.distance_m, 1e-12);
    expect("ratio", got->ratio_at_exit, worst->ratio_at_exit, 1e-12);
    expect("density", got->emissions[0].optical_density, worst->emissions[0].optical_density, 1e-12);
    expect("time", got->exit.eye.exposure_s, worst->exit.eye.exposure_s, 1e-10);
    expect("room", off.result->rooms[0].solution.ratio_max, at_worst.result->rooms[0].solution.ratio_max, 1e-12);
    expect("zone", off.result->rooms[0].solution.nhz_area_m2, at_worst.result->rooms[0].solution.nhz_area_m2, 1e-12);
    expect("person", off.result->rooms[0].persons[0].place.ratio, at_worst.result->rooms[0].persons[0].place.ratio,
           1e-12);
    expect("nominal NOHD", got->nominal.nohd.distance_m, nominal->nohd.distance_m, 0.);
    expect("nominal skin", got->nominal.skin.distance_m, nominal->skin.distance_m, 0.);
    expect("nominal diffuse", got->nominal.diffuse.distance_m, nominal->diffuse.distance_m, 0.);
    expect("nominal density", got->nominal.optical_density[0], nominal->emissions[0].optical_density, 0.);
    clinic_free(&off);
    clinic_free(&plain);
    clinic_free(&at_worst);
}

/* Pulses: the largest of nine cases written out. 905 nm, peak 75 W, 150 ns, 10 kHz. */
static void test_pulse_corners(void **state) {
    (void)state;
    static const char *const rules[] = {"eu-2006-25", "icnirp-2013", "iec-60825-1-2014"};
    for (size_t r = 0; r < COUNT(rules); r++) {
        double largest_m = 0., largest_ratio = 0.;
        for (int d = -1; d <= 1; d++)
            for (int f = -1; f <= 1; f++) {
                char text[1000];
                snprintf(text, sizeof text,
                         CLINIC_CASE LASER("wavelength_nm = 905\npeak_power_w = 75\npulse_duration_ns = %.9g\n"
                                           "repetition_rate_hz = %.9g\n",
                                           "beam_diameter_mm = 5\ndivergence_mrad = 20\ndiameter_definition = d63\n"),
                         150. * (1. + .2 * d), 1e4 * (1. + .1 * f));
                struct clinic clinic = assess(text, rules[r], BW_PART_DISTANCE);
                largest_m = fmax(largest_m, clinic.result->distances[0].nohd.distance_m);
                largest_ratio = fmax(largest_ratio, clinic.result->distances[0].ratio_at_exit);
                clinic_free(&clinic);
            }
        struct clinic off =
            assess(CLINIC_CASE LASER("wavelength_nm = 905\npeak_power_w = 75\npulse_duration_ns = 150\n"
                                     "repetition_rate_hz = 10000\npulse_duration_tolerance_pct = 20\n"
                                     "repetition_rate_tolerance_pct = 10\n",
                                     "beam_diameter_mm = 5\ndivergence_mrad = 20\ndiameter_definition = d63\n"),
                   rules[r], BW_PART_DISTANCE);
        expect("NOHD", off.result->distances[0].nohd.distance_m, largest_m, 1e-12);
        expect("ratio", off.result->distances[0].ratio_at_exit, largest_ratio, 1e-12);
        assert_true(off.result->distances[0].nominal.nohd.distance_m < largest_m);
        clinic_free(&off);
    }
}

/* The tolerance of a beam of its own, or else of the handpiece's. */
static void test_own_beam(void **state) {
    (void)state;
    static const char text[] = CLINIC_CASE
        "[laser one]\n[emission one deep]\nwavelength_nm = 810\naverage_power_w = 8\n"
        "[emission one red]\nwavelength_nm = 650\naverage_power_w = 0.1\n"
        "[emission one other]\nwavelength_nm = 660\naverage_power_w = 0.1\n"
        "[handpiece one lens]\nbeam_diameter_mm = 20\ndivergence_mrad = 100\ndiameter_definition = d63\n"
        "diameter_tolerance_pct = 10\n"
        "[beam one lens red]\nbeam_diameter_mm = 4\ndivergence_mrad = 10\n"
        "[beam one lens other]\nbeam_diameter_mm = 4\ndivergence_mrad = 10\ndiameter_tolerance_pct = 50\n";
    struct clinic clinic = assess(text, NULL, BW_PART_DISTANCE);
    const struct bw_output *output = &clinic.result->distances[0].output;
    expect("shared", output->beams[0].diameter_m, 18e-3, 1e-12);
    expect("own, tolerance of the handpiece", output->beams[1].diameter_m, 3.6e-3, 1e-12);
    expect("own tolerance", output->beams[2].diameter_m, 2e-3, 1e-12);
    expect("no tolerance", output->beams[2].divergence_rad, 10e-3, 1e-12);
    clinic_free(&clinic);
}

/* ---- sensitivity ------------------------------------------------------------------------------------------------ */

/* Far from a narrow exit the NOHD goes as P^1/2 / phi; at a wide one the density as log10(P / d^2). */
static struct moves_case {
    const char *quantity;
    double nohd, density;
} moves[] = {
    {"divergence", -1., 0.},
    {"power", 0.5, 0.01 / 2.302585093},
    {"beam diameter", 0., -0.02 / 2.302585093},
    {"exposure time", 0., 0.},
};

static void test_moves(void **state) {
    (void)state;
    struct clinic clinic = assess(CLINIC_CASE LASER("wavelength_nm = 810\naverage_power_w = 800\n",
                                                    "beam_diameter_mm = 100\ndivergence_mrad = 150\n"
                                                    "diameter_definition = d63\nexposure_s = 100\n"),
                                  NULL, BW_PART_DISTANCE);
    const struct bw_distance_result *distance = &clinic.result->distances[0];
    assert_int_equal(distance->sensitivity_count, COUNT(moves));
    for (size_t i = 0; i < COUNT(moves); i++) {
        const struct bw_sensitivity *got = &distance->sensitivity[i];
        assert_string_equal(got->quantity, moves[i].quantity);
        if (!(fabs(got->nohd_pct_per_pct - moves[i].nohd) <= 2e-3))
            fail_msg("%s: NOHD %.9g %%, want %.9g", got->quantity, got->nohd_pct_per_pct, moves[i].nohd);
        if (!(fabs(got->od_per_pct - moves[i].density) <= 5e-5))
            fail_msg("%s: OD %.9g, want %.9g", got->quantity, got->od_per_pct, moves[i].density);
    }
    assert_true(distance->sensitivity[1].emission == 0 && distance->sensitivity[0].emission == BW_EMISSIONS_MAX);
    clinic_free(&clinic);
}

/* The same by re-evaluating with half a per cent to each side, pulses and all; the exposure at the end of the table. */
static void test_moves_pulses(void **state) {
    (void)state;
    static const char form[] = CLINIC_CASE LASER(
        "wavelength_nm = 905\npeak_power_w = %.17g\npulse_duration_ns = %.17g\nrepetition_rate_hz = %.17g\n",
        "beam_diameter_mm = %.17g\ndivergence_mrad = %.17g\ndiameter_definition = d63\nexposure_s = 30000\n");
    static const char *const names[] = {"power", "pulse duration", "repetition rate", "beam diameter", "divergence"};
    const double given[] = {75, 150, 1e4, 5, 20};
    char text[1000];
    snprintf(text, sizeof text, form, given[0], given[1], given[2], given[3], given[4]);
    struct clinic clinic = assess(text, "eu-2006-25", BW_PART_DISTANCE);
    const struct bw_distance_result *distance = &clinic.result->distances[0];
    assert_int_equal(distance->sensitivity_count, 6);
    for (size_t k = 0; k < COUNT(names); k++) {
        double nohd_m[2];
        for (size_t side = 0; side < 2; side++) {
            double v[5];
            for (size_t i = 0; i < 5; i++)
                v[i] = given[i] * (i == k ? side == 0 ? 0.995 : 1.005 : 1.);
            snprintf(text, sizeof text, form, v[0], v[1], v[2], v[3], v[4]);
            struct clinic varied = assess(text, "eu-2006-25", BW_PART_DISTANCE);
            nohd_m[side] = varied.result->distances[0].nohd.distance_m;
            clinic_free(&varied);
        }
        size_t i = 0;
        while (strcmp(distance->sensitivity[i].quantity, names[k]) != 0)
            assert_true(++i < distance->sensitivity_count);
        double want = 100. * (nohd_m[1] - nohd_m[0]) / ((nohd_m[0] + nohd_m[1]) / 2.);
        if (!(fabs(distance->sensitivity[i].nohd_pct_per_pct - want) <= 1e-8))
            fail_msg("%s: %.12g, want %.12g", names[k], distance->sensitivity[i].nohd_pct_per_pct, want);
    }
    for (size_t i = 1; i < distance->sensitivity_count; i++)
        assert_true(fabs(distance->sensitivity[i - 1].nohd_pct_per_pct) >=
                    fabs(distance->sensitivity[i].nohd_pct_per_pct) - 1e-6);
    clinic_free(&clinic);
}

static void test_moves_nothing(void **state) {
    (void)state;
    struct clinic clinic = assess(CLINIC_CASE LASER("wavelength_nm = 810\naverage_power_w = 8\n",
                                                    "beam_diameter_mm = 5\ndivergence_mrad = 0\n"
                                                    "diameter_definition = d63\n"),
                                  NULL, BW_PART_DISTANCE);
    const struct bw_distance_result *distance = &clinic.result->distances[0];
    assert_true(distance->nohd.unbounded);
    for (size_t i = 0; i < distance->sensitivity_count; i++)
        assert_true(isnan(distance->sensitivity[i].nohd_pct_per_pct));
    assert_string_equal(distance->sensitivity[0].quantity, "power"); /* then by the density */
    clinic_free(&clinic);
}

/* ---- times ------------------------------------------------------------------------------------------------------ */

/* Eye at 810 nm: 2e-3 C4 J/m2 to 5 us, 18 C4 t^3/4 to 10 s, then 10 C4 W/m2. */
static double eye_time_s(double irradiance_w_m2) {
    double c4 = pow(10., 0.22), short_s = 2e-3 * c4 / irradiance_w_m2;
    return short_s < 5e-6 ? short_s : fmin(pow(18. * c4 / irradiance_w_m2, 4.), 10.);
}

/* Skin 1.1e4 C4 t^-3/4 = E; behind goggles E 10^-OD. */
static void test_times(void **state) {
    (void)state;
    struct clinic clinic =
        assess(DIODE("", "") "[eyewear weak]\nod = 800-820 2\n[eyewear green]\nod = 800-820 7\n"
                             "[eyewear blue]\nod = 900-1000 7\n",
               NULL, BW_PART_DISTANCE);
    const struct bw_distance_result *distance = &clinic.result->distances[0];
    double c4 = pow(10., 0.22);
    assert_int_equal(distance->place_count, 2);
    for (size_t i = 0; i < 3; i++) {
        const struct bw_place_times *place = i < 2 ? &distance->places[i] : &distance->exit;
        double width_m = hypot(20e-3, 0.15 * (i == 0 ? 0.5 : i == 1 ? 2. : 0.));
        double eye_w_m2 = ratio_at(8, width_m, 7e-3, 1.), skin_w_m2 = ratio_at(8, width_m, 3.5e-3, 1.);
        expect("eye ratio", place->eye_ratio, eye_w_m2 / (10. * c4), 1e-12);
        expect("skin ratio", place->skin_ratio, skin_w_m2 / (2000. * c4), 1e-12);
        expect("eye", place->eye.exposure_s, eye_time_s(eye_w_m2), 1e-9);
        expect("behind weak goggles", place->behind[0].unbounded ? 3e4 : place->behind[0].exposure_s,
               eye_w_m2 / 100. <= 10. * c4 ? 3e4 : eye_time_s(eye_w_m2 / 100.), 1e-9);
        assert_true(place->behind[1].unbounded);
        expect("behind goggles for another laser", place->behind[2].exposure_s, place->eye.exposure_s, 1e-11);
        if (skin_w_m2 <= 2000. * c4 * 0.9)
            assert_true(place->skin.unbounded);
        else
            expect("skin", place->skin.exposure_s, pow(1.1e4 * c4 / skin_w_m2, 4. / 3.), 1e-9);
    }
    clinic_free(&clinic);
}

/* Where a person stands: after the time the ratio is 1, and an incident of that time received just the limit. */
static void test_person_times(void **state) {
    (void)state;
    static const char drawer[] = "[eyewear weak]\nod = 800-820 0.5\n";
    char text[3000], number[40];
    snprintf(text, sizeof text, "%s%s", DIODE("", "") USED STANDS("eyewear = weak\n"), drawer);
    struct clinic clinic = assess(text, NULL, BW_PART_ROOM);
    const struct bw_person_result *person = &clinic.result->rooms[0].persons[0];
    assert_true(person->has_times);
    assert_true(person->eye.exposure_s > 0. && !person->eye.unbounded && !person->worn.unbounded);
    expect("half a decade of power, two of time", person->worn.exposure_s / person->eye.exposure_s, 100., 1e-6);
    for (int behind = 0; behind < 2; behind++)
        for (int later = 0; later < 2; later++) {
            double time_s = (behind ? person->worn : person->eye).exposure_s * (later ? 1.0001 : 1. - 1e-9);
            snprintf(number, sizeof number, "%.15g", time_s);
            snprintf(text, sizeof text,
                     "%s%s[incident first]\nroom = two\nat_m = 4.5 3.5\nexposure_s = %s\neyewear = %s\n",
                     DIODE("", "") USED STANDS(""), drawer, number, behind ? "weak" : "none");
            struct clinic then = assess(text, NULL, BW_PART_INCIDENT);
            assert_int_equal(then.result->incident_count, 1);
            const struct bw_incident_result *incident = &then.result->incidents[0];
            assert_true((incident->eye_ratio <= 1.) == !later);
            expect("ratio", incident->eye_ratio, 1., 1e-4);
            expect("time", incident->eye.exposure_s, (behind ? person->worn : person->eye).exposure_s, 1e-9);
            assert_true(then.result->needs_action == (later != 0));
            clinic_free(&then);
        }
    clinic_free(&clinic);
}

/* ---- skin ------------------------------------------------------------------------------------------------------- */

/* icnirp-2013 beyond 1400 nm and 10 s: 1000 W/m2 on less than 0.01 m2, 10/A to 0.1 m2, 100 beyond. The beam lights
 * pi d86^2 / 4 = pi d63^2 / 2, so between the steps the ratio is P (4 / pi d63^2) (pi d63^2 / 2) / 10 = P / 5 W. */
static struct skin_case {
    const char *name, *power, *more, *rules;
    double power_w, limit_w_m2; /* that ends the hazard */
    bool matters;
} skins[] = {
    {"4 W: ends before the first step", "4", "", "icnirp-2013", 4, 1000, true},
    {"20 W: goes on to where all is large", "20", "", "icnirp-2013", 20, 100, true},
    {"20 W on a hand", "20", "exposed_skin_cm2 = 80\n", "icnirp-2013", 20, 1000, true},
    {"20 W on an arm", "20", "exposed_skin_cm2 = 500\n", "icnirp-2013", 20, 200, true},
    {"20 W on a back", "20", "exposed_skin_cm2 = 2000\n", "icnirp-2013", 20, 100, true},
    {"no such rule", "20", "exposed_skin_cm2 = 2000\n", "iec-60825-1-2014", 20, 1000, false},
};

static void test_skin(void **state) {
    const struct skin_case *c = *state;
    char text[1000];
    snprintf(text, sizeof text,
             CLINIC_CASE LASER("wavelength_nm = 1550\naverage_power_w = %s\n",
                               "beam_diameter_mm = 5\ndivergence_mrad = 100\ndiameter_definition = d63\nexposure_s = 100\n%s"),
             c->power, c->more);
    struct clinic clinic = assess(text, c->rules, BW_PART_DISTANCE);
    const struct bw_distance_result *distance = &clinic.result->distances[0];
    assert_true(distance->skin_area_matters == c->matters);
    expect("skin distance", distance->skin.distance_m, reach_m(c->power_w, 5e-3, .1, 3.5e-3, c->limit_w_m2), 1e-9);
    clinic_free(&clinic);
}

/* Where the area does not count at all: the limits for less than 10 s, and those of the near infrared. */
static void test_skin_area_does_not_matter(void **state) {
    (void)state;
    struct clinic clinic = assess(DIODE("", "exposed_skin_cm2 = 2000\n"), "icnirp-2013", BW_PART_DISTANCE);
    assert_false(clinic.result->distances[0].skin_area_matters);
    assert_true(clinic.result->distances[0].skin_area_m2 <= 0.);
    clinic_free(&clinic);
}

/* ---- incidents -------------------------------------------------------------------------------------------------- */

#define WHERE "laser = one\nhandpiece = lens\n"

static void test_incidents(void **state) {
    (void)state;
    struct clinic clinic = assess(
        DIODE("", "") "[eyewear green]\nod = 800-820 3\n" BINOCULARS
                      "[incident bare]\n" WHERE "distance_m = 0.5\nexposure_s = 2\n"
                      "[incident worn]\n" WHERE "distance_m = 0.5\nexposure_s = 2\neyewear = green\n"
                      "[incident through]\n" WHERE "distance_m = 5\nexposure_s = 0.1\naid = binoculars\n"
                      "[incident long]\n" WHERE "distance_m = 0\nexposure_s = 100\neyewear = green\n",
        NULL, BW_PART_INCIDENT);
    const struct bw_incident_result *found = clinic.result->incidents;
    double c4 = pow(10., 0.22), width_m = hypot(20e-3, 0.075), far_m = hypot(20e-3, 0.75);
    double eye = ratio_at(8, width_m, 7e-3, 18. * c4 * pow(2., -.25));
    assert_int_equal(clinic.result->incident_count, 4);
    expect("bare eye", found[0].eye_ratio, eye, 1e-12);
    expect("bare skin", found[0].skin_ratio, ratio_at(8, width_m, 3.5e-3, 1.1e4 * c4 * pow(2., -.75)), 1e-12);
    expect("bare time", found[0].eye.exposure_s, eye_time_s(ratio_at(8, width_m, 7e-3, 1.)), 1e-9);
    expect("behind goggles", found[1].eye_ratio, eye * 1e-3, 1e-12);
    expect("without them", found[1].naked_eye_ratio, eye, 1e-12);
    expect("skin has none", found[1].skin_ratio, found[0].skin_ratio, 0.);
    expect("binoculars", found[2].eye_ratio, ratio_at(8, far_m, 49e-3, 18. * c4 * pow(.1, -.25) / 49.), 1e-12);
    expect("long", found[3].eye_ratio, 1e-3 * ratio_at(8, 20e-3, 7e-3, 10. * c4), 1e-12);
    for (size_t i = 0; i < 4; i++) {
        assert_true(found[i].working.count > 5 && !found[i].working.failed);
        assert_int_equal(found[i].eye_place.path, BW_PATH_DIRECT);
    }
    size_t dangers = 0, notes = 0;
    for (size_t i = 0; i < clinic.result->finding_count; i++) {
        const struct bw_finding *finding = &clinic.result->findings[i];
        dangers += strncmp(finding->subject, "incident ", 9) == 0 && finding->severity == BW_DANGER;
        notes += strncmp(finding->subject, "incident ", 9) == 0 && finding->severity == BW_NOTE;
    }
    assert_true(dangers == 3 && notes == 1); /* worn: the eye kept its limit, and so did the skin */
    clinic_free(&clinic);
}

/* The working ends in the very figure. */
static void test_incident_working(void **state) {
    (void)state;
    struct clinic clinic = assess(DIODE("", "") "[incident bare]\n" WHERE "distance_m = 0.5\nexposure_s = 2\n", NULL,
                                  BW_PART_INCIDENT);
    const struct bw_incident_result *found = clinic.result->incidents;
    double eye = 0., skin = 0.;
    bool of_skin = false;
    for (size_t i = 0; i < found->working.count; i++) {
        const struct bw_step *step = &found->working.steps[i];
        if (step->heading)
            of_skin = of_skin || strncmp(step->formula, "Skin", 4) == 0;
        else if (strcmp(step->symbol, "sum") == 0)
            *(of_skin ? &skin : &eye) = step->value;
    }
    expect("eye", eye, found->eye_ratio, 0.);
    expect("skin", skin, found->skin_ratio, 0.);
    clinic_free(&clinic);
}

/* In a room: the worst of all handpieces, or of the one that is named. */
static void test_incident_room(void **state) {
    (void)state;
    static const char text[] = CLINIC_CASE
        "[laser one]\n[emission one beam]\nwavelength_nm = 810\naverage_power_w = 8\n"
        "[handpiece one weak]\nbeam_diameter_mm = 20\ndivergence_mrad = 900\ndiameter_definition = d63\n"
        "[handpiece one strong]\nbeam_diameter_mm = 20\ndivergence_mrad = 50\ndiameter_definition = d63\n" CLINIC_ROOM
        "[use two one weak]\n[use two one strong]\n"
        "[incident any]\nroom = two\nat_m = 4.5 3.5\nexposure_s = 2\n"
        "[incident weak]\nroom = two\nat_m = 4.5 3.5\nexposure_s = 2\nlaser = one\nhandpiece = weak\n";
    struct clinic clinic = assess(text, NULL, BW_PART_INCIDENT);
    const struct bw_incident_result *found = clinic.result->incidents;
    assert_int_equal(clinic.result->distances[found[0].eye_source].handpiece, 1);
    assert_int_equal(clinic.result->distances[found[1].eye_source].handpiece, 0);
    assert_true(found[0].eye_ratio > 10. * found[1].eye_ratio && found[1].eye_ratio > 0.);
    struct clinic narrowed = clinic_assess_with(
        text, NULL, (struct bw_assess_options){.parts = BW_PART_INCIDENT, .handpiece = "weak"});
    assert_int_equal(narrowed.status, BW_OK);
    assert_int_equal(narrowed.result->incident_count, 2);
    expect("only what is asked for", narrowed.result->incidents[0].eye_ratio, found[1].eye_ratio, 0.);
    clinic_free(&clinic);
    clinic_free(&narrowed);
}

int main(void) {
    struct CMUnitTest tests[COUNT(skins) + 20];
    size_t count = 0;
    const struct CMUnitTest single[] = {
        cmocka_unit_test(test_aids),           cmocka_unit_test(test_person_aid),
        cmocka_unit_test(test_worst_corner),   cmocka_unit_test(test_pulse_corners),
        cmocka_unit_test(test_own_beam),       cmocka_unit_test(test_moves),
        cmocka_unit_test(test_moves_pulses),   cmocka_unit_test(test_moves_nothing),
        cmocka_unit_test(test_times),          cmocka_unit_test(test_person_times),
        cmocka_unit_test(test_skin_area_does_not_matter), cmocka_unit_test(test_incidents),
        cmocka_unit_test(test_incident_working), cmocka_unit_test(test_incident_room)};
    for (size_t i = 0; i < COUNT(skins); i++)
        tests[count++] = (struct CMUnitTest){skins[i].name, test_skin, NULL, NULL, &skins[i]};
    for (size_t i = 0; i < COUNT(single); i++)
        tests[count++] = single[i];
    return _cmocka_run_group_tests("assess more", tests, count, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
