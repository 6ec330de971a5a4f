/* casefile: elliptical beams, single-mode fibres, apparent sources, heads of several emitters, a stand-off. */
#include <math.h>
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include <cmocka.h>

#include <beamward/casefile.h>

#define COUNT(array) (sizeof(array) / sizeof *(array))
#define HALF_ROOT    0.70710678118654752 /* 1/sqrt 2 */

static void near(double got, double want, const char *what) {
    if (!(fabs(got - want) <= 1e-14 * fabs(want)))
        fail_msg("%s: got %.17g, want %.17g", what, got, want);
}

static struct bw_case *read_keys(const char *handpiece_keys, const char *more) {
    struct bw_text text = {0}, told = {0};
    struct bw_ini ini = {0};
    struct bw_faults faults = {0};
    struct bw_error error = {.status = BW_OK};
    struct bw_case *the_case = NULL;
    bw_text_add(
        &text,
        "[case]\ntitle = Clinic\n[laser heron]\n[emission heron deep]\nwavelength_nm = 1064\naverage_power_w = 8\n"
        "[emission heron red]\nwavelength_nm = 532\naverage_power_mw = 1\n[handpiece heron spot]\n%s\n%s",
        handpiece_keys, more);
    enum bw_status status = bw_ini_read_bytes(text.data, text.length, &ini, &faults, &error);
    if (status == BW_OK)
        status = bw_case_from_ini(&ini, &the_case, &faults, &error);
    if (status != BW_OK) {
        bw_faults_print(&told, "text", &faults);
        fail_msg("%s\n%s", error.text, told.data ? told.data : "");
    }
    bw_ini_free(&ini);
    bw_text_free(&text);
    return the_case;
}

static const struct bw_output *output_of(const struct bw_case *c) {
    return &c->lasers[0].handpieces[0].output;
}

/* ---- elliptical --------------------------------------------------------------------------------------- */

static struct ellipse_case {
    const char *name, *keys;
    double x_m, x_rad, y_m, y_rad, exit_y_m; /* y_m 0: round */
} ellipses[] = {
    {"ellipse: both axes",
     "beam_diameter_mm = 30\nbeam_diameter_y_mm = 10\ndivergence_mrad = 200\ndivergence_y_mrad = 80\n"
     "diameter_definition = d63",
     .03, .2, .01, .08, .01},
    {"ellipse: d86",
     "beam_diameter_mm = 30\nbeam_diameter_y_cm = 1\ndivergence_mrad = 200\ndivergence_y_mrad = 80\n"
     "diameter_definition = d86",
     .03 * HALF_ROOT, .2 * HALF_ROOT, .01 * HALF_ROOT, .08 * HALF_ROOT, .01 * HALF_ROOT},
    {"ellipse: one divergence for both",
     "beam_diameter_mm = 30\nbeam_diameter_y_mm = 10\ndivergence_mrad = 200\n"
     "diameter_definition = d63",
     .03, .2, .01, .2, .01},
    {"ellipse: one diameter for both, half angles",
     "beam_diameter_mm = 30\ndivergence_mrad = 100\ndivergence_y_mrad = 40\ndivergence_definition = half\n"
     "diameter_definition = top-hat",
     .03, .2, .03, .08, .03},
    {"ellipse: lens, axis by axis",
     "beam_diameter_mm = 12\nbeam_diameter_y_mm = 6\ndivergence_mrad = 8\ndivergence_y_mrad = 4\n"
     "diameter_definition = d63\nlens_focal_length_mm = 60",
     .48e-3, .2, .24e-3, .1, .006},
    {"ellipse: round", "beam_diameter_mm = 30\ndivergence_mrad = 200\ndiameter_definition = d63", .03, .2, 0., 0., 0.},
};

static void test_ellipse(void **state) {
    const struct ellipse_case *row = *state;
    struct bw_case *c = read_keys(row->keys, "");
    const struct bw_beam *beam = &output_of(c)->beams[1];
    assert_true(beam->elliptical == (row->y_m > 0.));
    near(beam->diameter_m, row->x_m, "x");
    near(beam->divergence_rad, row->x_rad, "x divergence");
    near(beam->diameter_y_m, row->y_m, "y");
    near(beam->divergence_y_rad, row->y_rad, "y divergence");
    near(beam->exit_diameter_y_m, row->exit_y_m, "y at the exit");
    bw_case_free(c);
}

/* ---- fibres ------------------------------------------------------------------------------------------- */

/* d63 = field / sqrt 2; divergence 2 sqrt 2 lambda / (pi field), of each emission its own. */
static void test_single_mode(void **state) {
    (void)state;
    static const char *const keys[] = {"fibre_mode = single\nfibre_mode_field_um = 6", "fibre_mode_field_mm = 0.006"};
    for (size_t i = 0; i < COUNT(keys); i++) {
        struct bw_case *c = read_keys(keys[i], "");
        const struct bw_beam *beams = output_of(c)->beams;
        near(beams[0].diameter_m, 6e-6 * HALF_ROOT, "d63 of the field");
        near(beams[0].divergence_rad, 2. * sqrt(2.) * 1064e-9 / (bw_pi * 6e-6), "1064 nm");
        near(beams[1].divergence_rad, 2. * sqrt(2.) * 532e-9 / (bw_pi * 6e-6), "532 nm");
        assert_true(!(beams[0].source_m > 0.) && beams[0].waist_m <= 0.);
        bw_case_free(c);
    }
    struct bw_case *own = read_keys("beam_diameter_mm = 30\ndivergence_mrad = 200",
                                    "[beam heron spot red]\nfibre_mode = single\nfibre_mode_field_um = 4\n");
    near(output_of(own)->beams[1].divergence_rad, 2. * sqrt(2.) * 532e-9 / (bw_pi * 4e-6), "a beam of its own");
    bw_case_free(own);
}

static void test_multimode(void **state) {
    (void)state;
    struct bw_case *c = read_keys("fibre_mode = multi\nfibre_na = 0.22\nfibre_core_mm = 0.4", "");
    near(output_of(c)->beams[0].divergence_rad, .44 / sqrt(log(20.)), "as without the word");
    near(output_of(c)->beams[0].source_m, 0., "a point unless asked for");
    bw_case_free(c);
    c = read_keys("fibre_na = 0.22\nfibre_core_mm = 0.4\napparent_source_kind = fibre-end", "");
    near(output_of(c)->beams[0].source_m, bw_fibre_source_m(.4e-3), "the core");
    bw_case_free(c);
    c = read_keys("fibre_na = 0.22\nfibre_core_mm = 0.4\napparent_source_kind = point", "");
    near(output_of(c)->beams[0].source_m, 0., "a point");
    bw_case_free(c);
}

/* ---- sources and emitters ----------------------------------------------------------------------------- */

static void test_source(void **state) {
    (void)state;
    struct bw_case *c = read_keys("beam_diameter_mm = 30\ndivergence_mrad = 200\ndiameter_definition = d86\n"
                                  "apparent_source_mm = 2\napparent_source_behind_cm = 3\nstand_off_mm = 40",
                                  "[beam heron spot red]\nbeam_diameter_mm = 4\ndivergence_mrad = 10\n");
    near(output_of(c)->beams[0].source_m, 2e-3 * HALF_ROOT, "by the definition of the diameter");
    near(output_of(c)->beams[0].source_behind_m, .03, "behind the exit");
    near(output_of(c)->beams[1].source_m, 0., "not of a beam of its own");
    near(output_of(c)->stand_off_m, .04, "stand-off, of all");
    bw_case_free(c);
    c = read_keys("beam_diameter_mm = 5\ndivergence_mrad = 2\napparent_source_mm = 20\napparent_source_behind_m = 1",
                  "");
    near(output_of(c)->beams[0].source_m, .02 * HALF_ROOT, "wider than the exit, but behind it");
    near(output_of(c)->stand_off_m, 0., "no stand-off");
    bw_case_free(c);
}

static void test_emitters(void **state) {
    (void)state;
    struct bw_case *c = read_keys("beam_diameter_mm = 1\ndivergence_mrad = 200\nemitter_at_mm = -4 0, 4 0, 0 6", "");
    const struct bw_cluster *cluster = &output_of(c)->beams[0].cluster;
    assert_int_equal(cluster->count, 3);
    near(cluster->at[0].x_m, -.004, "first");
    near(cluster->at[2].y_m, .006, "third");
    near(cluster->share[1], 1. / 3., "equal shares");
    bw_case_free(c);
    c = read_keys("beam_diameter_mm = 1\ndivergence_mrad = 200\nemitter_at_cm = 0 0, 1 0\n"
                  "emitter_power_share = 0.333 , 0.6666",
                  "");
    cluster = &output_of(c)->beams[1].cluster;
    near(cluster->at[1].x_m, .01, "centimetres");
    near(cluster->share[0], .333 / .9996, "rounded shares are made whole");
    near(cluster->share[0] + cluster->share[1], 1., "sum");
    bw_case_free(c);
}

static struct CMUnitTest tests[COUNT(ellipses) + 4];

int main(void) {
    size_t count = 0;
    for (size_t i = 0; i < COUNT(ellipses); i++)
        tests[count++] = (struct CMUnitTest){ellipses[i].name, test_ellipse, NULL, NULL, &ellipses[i]};
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_single_mode);
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_multimode);
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_source);
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_emitters);
    return cmocka_run_group_tests_name("casefile shapes", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
