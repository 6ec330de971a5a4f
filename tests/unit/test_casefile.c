/* casefile: what a sound case file becomes. What is refused, and with which words: tests/bad_cases. */
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
#define NONE         ((double)NAN)

static void near(double got, double want, const char *what) {
    if (!(fabs(got - want) <= 1e-14 * fabs(want)))
        fail_msg("%s: got %.17g, want %.17g", what, got, want);
}

static struct bw_case *read_text(const char *text) {
    struct bw_ini ini = {0};
    struct bw_faults faults = {0};
    struct bw_error error = {0};
    struct bw_case *the_case = NULL;
    enum bw_status status = bw_ini_read_bytes(text, strlen(text), &ini, &faults, &error);
    if (status == BW_OK)
        status = bw_case_from_ini(&ini, &the_case, &faults, &error);
    if (status != BW_OK) {
        struct bw_text told = {0};
        bw_faults_print(&told, "text", &faults);
        fail_msg("%s\n%s", error.text, told.data ? told.data : "");
    }
    assert_int_equal(faults.count, 0);
    bw_ini_free(&ini);
    return the_case;
}

#define CASE "[case]\ntitle = Clinic\n"
#define LASER                                                                                                          \
    CASE "[laser heron]\n[emission heron deep]\nwavelength_nm = 810\naverage_power_w = 8\n"                            \
         "[handpiece heron spot]\nbeam_diameter_mm = 30\ndivergence_mrad = 200\ndiameter_definition = d86\n"
#define ROOM LASER "[room one]\noutline_m = 0 0, 5 0, 5 4, 0 4\nmaterial = painted-wall\n"

/* ---- the description of the case file, whole ---------------------------------------------------- */

static const char whole[] =
    "[case]\ntitle = Treatment room 2, hand-held therapy laser\nrules = iec-60825-1-2014\n"
    "[laser trident]\ntitle = three-wavelength therapy laser\nlabelled_class = 4\n"
    "[emission trident deep]\nwavelength_nm = 810\naverage_power_w = 8              ; no pulse keys: continuous\n"
    "[emission trident pulsed]\nwavelength_nm = 905\npeak_power_w = 75\npulse_duration_s = 150e-9\n"
    "repetition_rate_hz = 10000\n"
    "[emission trident aiming]\nwavelength_nm = 650\naverage_power_w = 0.002\n"
    "[handpiece trident spot-30]\nbeam_diameter_mm = 30\ndivergence_mrad = 200            ; full angle\n"
    "diameter_definition = d86\nexposure_s = 10\n"
    "[room two]\noutline_m = 0 0, 5.2 0, 5.2 4.1, 0 4.1\nmaterial = painted-wall\ngrid_mm = 20\nbounces = 2\n"
    "[surface two mirror]\nfrom_m = 0 1\nto_m = 0 2.2\nmaterial = mirror\n"
    "[opening two door]\nfrom_m = 2 0\nto_m = 2.9 0\nkind = door\ncover = none\n"
    "[treatment-area two couch]\noutline_m = 2 1.6, 3.2 1.6, 3.2 2.4, 2 2.4\naim_deg = 0 .. 360\n"
    "[person two operator]\nat_m = 2.6 1.2\neyewear = wraps\n"
    "[eyewear wraps]\ntitle = green wrap-arounds\nmarking = 800-820 D LB6 + 890-1070 DIR LB5\n"
    "luminous_transmittance_pct = 38\n"
    "[use two trident spot-30]\n"
    "[material tray]\nfinish = mirror\nreflectance_pct = 60\ntransmittance_pct = 0\n"
    "[beam trident spot-30 aiming]\nbeam_diameter_mm = 4\ndivergence_mrad = 12\n";

static void test_whole_laser(void **state) {
    (void)state;
    struct bw_case *c = read_text(whole);
    assert_string_equal(c->title, "Treatment room 2, hand-held therapy laser");
    assert_string_equal(c->rules, "iec-60825-1-2014");
    assert_true(c->rules_given && !c->us_units);
    assert_int_equal(c->laser_count, 1);
    const struct bw_laser *laser = &c->lasers[0];
    assert_string_equal(laser->title, "three-wavelength therapy laser");
    assert_string_equal(laser->labelled_class, "4");
    assert_int_equal(laser->line, 4);
    assert_int_equal(laser->emission_count, 3);
    assert_string_equal(laser->emissions[1].name, "pulsed");
    assert_true(laser->emissions[0].continuous && !laser->emissions[1].continuous);
    near(laser->emissions[1].pulse_energy_j, 11.25e-6, "75 W x 150 ns");
    near(laser->emissions[1].average_power_w, 0.1125, "75 W x 150 ns x 10 kHz");
    assert_int_equal(laser->handpiece_count, 1);
    const struct bw_handpiece *handpiece = &laser->handpieces[0];
    assert_string_equal(handpiece->name, "spot-30");
    assert_true(handpiece->has_exposure);
    near(handpiece->exposure_s, 10., "exposure");
    assert_int_equal(handpiece->output.count, 3);
    assert_string_equal(handpiece->output.emissions[2].name, "aiming");
    assert_true(!handpiece->emission_beam_given[0] && !handpiece->emission_beam_given[1]);
    assert_true(handpiece->emission_beam_given[2]);
    near(handpiece->output.beams[0].diameter_m, .03 / sqrt(2.), "d63 of the handpiece");
    near(handpiece->output.beams[1].divergence_rad, .2 / sqrt(2.), "divergence of the handpiece");
    near(handpiece->output.beams[2].diameter_m, .004 / sqrt(2.), "d63 of the aiming beam");
    near(handpiece->output.beams[2].divergence_rad, .012 / sqrt(2.), "divergence of the aiming beam");
    bw_case_free(c);
}

static void test_whole_room(void **state) {
    (void)state;
    struct bw_case *c = read_text(whole);
    assert_int_equal(c->room_count, 1);
    const struct bw_room *room = &c->rooms[0];
    assert_string_equal(room->name, "two");
    assert_int_equal(room->outline.count, 4);
    near(bw_polygon_area(&room->outline), 5.2 * 4.1, "area");
    assert_string_equal(room->walls.name, "painted-wall");
    assert_string_equal(room->treated.name, "skin");
    near(room->grid_m, .02, "grid");
    assert_int_equal(room->bounces, 2);
    assert_true(room->surface_count == 1 && room->opening_count == 1 && room->area_count == 1);
    assert_string_equal(room->surfaces[0].material.name, "mirror");
    near(room->surfaces[0].segment.to.y_m, 2.2, "end of the mirror");
    assert_true(room->openings[0].kind == BW_DOOR && room->openings[0].cover == BW_COVER_NONE);
    near(room->openings[0].segment.from.x_m, 2., "door");
    assert_int_equal(room->areas[0].outline.count, 4);
    near(room->areas[0].aim_to_deg, 360., "aim");
    assert_int_equal(room->person_count, 1);
    assert_true(room->persons[0].has_eyewear && room->persons[0].eyewear == 0);
    near(room->persons[0].at.y_m, 1.2, "operator");
    assert_int_equal(c->eyewear_count, 1);
    assert_string_equal(c->eyewear[0].marking, "800-820 D LB6 + 890-1070 DIR LB5");
    assert_int_equal(c->eyewear[0].rating_count, 2);
    near(c->eyewear[0].luminous_transmittance, .38, "luminous transmittance");
    assert_int_equal(c->use_count, 1);
    assert_true(c->uses[0].room == 0 && c->uses[0].laser == 0 && c->uses[0].handpiece == 0);
    assert_int_equal(c->given.count, 54); /* 15 sections, 39 keys */
    assert_string_equal(c->given.entries[1].key, "title");
    bw_case_free(c);
}

/* ---- keys and units of an emission -------------------------------------------------------------- */

static struct emission_case {
    const char *name, *keys;
    double wavelength_nm, average_w, peak_w, energy_j, duration_s, rate_hz;
} emissions[] = {
    {"emission: continuous", "wavelength_nm = 810\naverage_power_w = 8", 810., 8., 8., 0., 0., 0.},
    {"emission: mW", "wavelength_nm = 650\naverage_power_mw = 1.5", 650., 1.5e-3, 1.5e-3, 0., 0., 0.},
    {"emission: um", "wavelength_um = 10.6\naverage_power_w = 1", 10600., 1., 1., 0., 0., 0.},
    {"emission: kW, ns, kHz",
     "wavelength_nm = 905\npeak_power_kw = 0.075\npulse_duration_ns = 150\n"
     "repetition_rate_khz = 10",
     905., .1125, 75., 11.25e-6, 150e-9, 1e4},
    {"emission: mJ, us",
     "wavelength_nm = 1064\npulse_energy_mj = 300\npulse_duration_us = 200\n"
     "repetition_rate_hz = 50",
     1064., 15., 1500., .3, 200e-6, 50.},
    {"emission: uJ, ms",
     "wavelength_nm = 1064\npulse_energy_uj = 500\npulse_duration_ms = 2\n"
     "repetition_rate_hz = 20",
     1064., .01, .25, 5e-4, 2e-3, 20.},
    {"emission: J, s", "wavelength_nm = 1064\npulse_energy_j = 2\npulse_duration_s = 0.5\nrepetition_rate_hz = 1",
     1064., 2., 4., 2., .5, 1.},
    {"emission: both ends of the spectrum", "wavelength_nm = 180\naverage_power_w = 1", 180., 1., 1., 0., 0., 0.},
    {"emission: 1 mm", "wavelength_um = 1000\naverage_power_w = 1", 1e6, 1., 1., 0., 0., 0.},
    {"emission: keys in capitals", "Wavelength_NM = 810\nAverage_Power_W = 8", 810., 8., 8., 0., 0., 0.},
};

static void test_emission(void **state) {
    const struct emission_case *row = *state;
    char text[1000];
    snprintf(text, sizeof text,
             CASE "[laser heron]\n[emission heron deep]\n%s\n[handpiece heron spot]\nfibre_na = 0.22\n"
                  "fibre_core_mm = 0.4\n",
             row->keys);
    struct bw_case *c = read_text(text);
    const struct bw_emission *e = &c->lasers[0].handpieces[0].output.emissions[0];
    near(e->wavelength_nm, row->wavelength_nm, "wavelength");
    near(e->average_power_w, row->average_w, "average power");
    near(e->peak_power_w, row->peak_w, "peak power");
    near(e->pulse_energy_j, row->energy_j, "pulse energy");
    near(e->pulse_duration_s, row->duration_s, "duration");
    near(e->repetition_rate_hz, row->rate_hz, "rate");
    assert_memory_equal(e, &c->lasers[0].emissions[0], sizeof *e);
    bw_case_free(c);
}

/* ---- geometry ----------------------------------------------------------------------------------- */

/* By hand: d86 = d63 sqrt 2, fwhm = d63 sqrt(ln 2); a fibre's full angle is 2 NA/sqrt(ln 20); a lens makes the waist f
 * x divergence at f, and diameter/f beyond it. */
static struct beam_case {
    const char *name, *keys;
    enum bw_profile profile;
    enum bw_spread spread;
    double diameter_m, divergence_rad, waist_m, exit_m;
} beams[] = {
    {"beam: d86", "beam_diameter_mm = 30\ndivergence_mrad = 200\ndiameter_definition = d86", BW_GAUSSIAN, BW_HYPERBOLIC,
     .03 * HALF_ROOT, .2 * HALF_ROOT, 0., .03 * HALF_ROOT},
    {"beam: d63", "beam_diameter_mm = 30\ndivergence_mrad = 200\ndiameter_definition = d63", BW_GAUSSIAN, BW_HYPERBOLIC,
     .03, .2, 0., .03},
    {"beam: undefined is d86", "beam_diameter_mm = 30\ndivergence_mrad = 200", BW_GAUSSIAN, BW_HYPERBOLIC,
     .03 * HALF_ROOT, .2 * HALF_ROOT, 0., .03 * HALF_ROOT},
    {"beam: fwhm", "beam_diameter_mm = 30\ndivergence_mrad = 200\ndiameter_definition = fwhm", BW_GAUSSIAN,
     BW_HYPERBOLIC, .03 / 0.83255461115769769, .2 / 0.83255461115769769, 0., .03 / 0.83255461115769769},
    {"beam: top hat", "beam_diameter_mm = 30\ndivergence_mrad = 200\ndiameter_definition = top-hat", BW_TOP_HAT,
     BW_HYPERBOLIC, .03, .2, 0., .03},
    {"beam: half angle",
     "beam_diameter_mm = 30\ndivergence_mrad = 100\ndivergence_definition = half\n"
     "diameter_definition = d63",
     BW_GAUSSIAN, BW_HYPERBOLIC, .03, .2, 0., .03},
    {"beam: full angle said",
     "beam_diameter_mm = 30\ndivergence_mrad = 200\ndivergence_definition = full\n"
     "diameter_definition = d63",
     BW_GAUSSIAN, BW_HYPERBOLIC, .03, .2, 0., .03},
    {"beam: cm and degrees", "beam_diameter_cm = 3\ndivergence_deg = 18\ndiameter_definition = d63", BW_GAUSSIAN,
     BW_HYPERBOLIC, .03, 0.31415926535897932, 0., .03},
    {"beam: inches", "beam_diameter_in = 2\ndivergence_mrad = 1\ndiameter_definition = d63", BW_GAUSSIAN, BW_HYPERBOLIC,
     .0508, .001, 0., .0508},
    {"beam: feet", "beam_diameter_ft = 0.5\ndivergence_mrad = 1\ndiameter_definition = d63", BW_GAUSSIAN, BW_HYPERBOLIC,
     .1524, .001, 0., .1524},
    {"beam: metres", "beam_diameter_m = 1\ndivergence_mrad = 1\ndiameter_definition = d63", BW_GAUSSIAN, BW_HYPERBOLIC,
     1., .001, 0., 1.},
    {"beam: upper end in millimetres", "beam_diameter_mm = 1000\ndivergence_mrad = 1\ndiameter_definition = d63",
     BW_GAUSSIAN, BW_HYPERBOLIC, 1., .001, 0., 1.},
    {"beam: collimated", "beam_diameter_mm = 5\ndivergence_mrad = 0\ndiameter_definition = d63", BW_GAUSSIAN,
     BW_HYPERBOLIC, .005, 0., 0., .005},
    {"beam: linear", "beam_diameter_mm = 5\ndivergence_mrad = 2\ndiameter_definition = d63\nspread = linear",
     BW_GAUSSIAN, BW_LINEAR, .005, .002, 0., .005},
    {"beam: fibre", "fibre_na = 0.22\nfibre_core_mm = 0.4", BW_GAUSSIAN, BW_HYPERBOLIC, .4e-3, .44 / 1.7308183826022854,
     0., .4e-3},
    {"beam: fibre, linear", "fibre_na = 0.22\nfibre_core_mm = 0.4\nspread = linear", BW_GAUSSIAN, BW_LINEAR, .4e-3,
     .44 / 1.7308183826022854, 0., .4e-3},
    {"beam: lens", "beam_diameter_mm = 12\ndivergence_mrad = 8\ndiameter_definition = d63\nlens_focal_length_mm = 60",
     BW_GAUSSIAN, BW_HYPERBOLIC, .48e-3, .2, .06, .012},
    {"beam: lens, d86",
     "beam_diameter_mm = 12\ndivergence_mrad = 8\ndiameter_definition = d86\nlens_focal_length_cm = 6", BW_GAUSSIAN,
     BW_HYPERBOLIC, .48e-3 * HALF_ROOT, .2 * HALF_ROOT, .06, .012 * HALF_ROOT},
    {"beam: lens, half angle, top hat, linear",
     "beam_diameter_mm = 12\ndivergence_mrad = 4\ndivergence_definition = half\ndiameter_definition = top-hat\n"
     "lens_focal_length_mm = 60\nspread = linear",
     BW_TOP_HAT, BW_LINEAR, .48e-3, .2, .06, .012},
};

static void test_beam(void **state) {
    const struct beam_case *row = *state;
    char text[1000];
    snprintf(text, sizeof text,
             CASE "[laser heron]\n[emission heron deep]\nwavelength_nm = 810\naverage_power_w = 8\n"
                  "[handpiece heron spot]\n%s\n",
             row->keys);
    struct bw_case *c = read_text(text);
    const struct bw_beam *beam = &c->lasers[0].handpieces[0].output.beams[0];
    assert_int_equal(beam->profile, row->profile);
    assert_int_equal(beam->spread, row->spread);
    near(beam->diameter_m, row->diameter_m, "diameter");
    near(beam->divergence_rad, row->divergence_rad, "divergence");
    near(beam->waist_m, row->waist_m, "waist");
    near(beam->exit_diameter_m, row->exit_m, "diameter at the exit");
    assert_false(c->lasers[0].handpieces[0].has_exposure);
    bw_case_free(c);
}

/* A handpiece may leave its geometry to its emissions, if all have their own. */
static void test_only_own_beams(void **state) {
    (void)state;
    struct bw_case *c = read_text(CASE "[laser heron]\n[emission heron a]\nwavelength_nm = 810\naverage_power_w = 8\n"
                                       "[emission heron b]\nwavelength_nm = 650\naverage_power_mw = 1\n"
                                       "[beam heron spot b]\nfibre_na = 0.1\nfibre_core_mm = 0.2\n"
                                       "[beam heron spot a]\nfibre_na = 0.2\nfibre_core_mm = 0.4\n"
                                       "[handpiece heron spot]\ntitle = two fibres\n");
    const struct bw_handpiece *handpiece = &c->lasers[0].handpieces[0];
    near(handpiece->output.beams[0].diameter_m, .4e-3, "core of a");
    near(handpiece->output.beams[1].diameter_m, .2e-3, "core of b");
    assert_true(handpiece->emission_beam_given[0] && handpiece->emission_beam_given[1]);
    bw_case_free(c);
}

/* A beam has the definition of diameters of its handpiece or one of its own; nothing else of it. */
static void test_definition_of_handpiece(void **state) {
    (void)state;
    struct bw_case *c = read_text(CASE "[laser heron]\n[emission heron a]\nwavelength_nm = 810\naverage_power_w = 8\n"
                                       "[emission heron b]\nwavelength_nm = 650\naverage_power_mw = 1\n"
                                       "[emission heron c]\nwavelength_nm = 660\naverage_power_mw = 1\n"
                                       "[beam heron spot b]\nbeam_diameter_mm = 4\ndivergence_mrad = 10\n"
                                       "[beam heron spot c]\nbeam_diameter_mm = 4\ndivergence_mrad = 10\n"
                                       "diameter_definition = d86\n"
                                       "[handpiece heron spot]\nbeam_diameter_mm = 30\ndivergence_mrad = 100\n"
                                       "divergence_definition = half\ndiameter_definition = d63\nspread = linear\n");
    const struct bw_beam *beams_of = c->lasers[0].handpieces[0].output.beams;
    near(beams_of[0].divergence_rad, .2, "handpiece");
    near(beams_of[1].diameter_m, .004, "d63, as the handpiece");
    near(beams_of[1].divergence_rad, .01, "full angle, not as the handpiece");
    assert_int_equal(beams_of[1].spread, BW_HYPERBOLIC);
    near(beams_of[2].diameter_m, .004 * HALF_ROOT, "d86, its own");
    bw_case_free(c);
}

static void test_most_emissions(void **state) {
    (void)state;
    struct bw_text text = {0};
    bw_text_add(&text, "%s", LASER);
    for (int i = 1; i < BW_EMISSIONS_MAX; i++)
        bw_text_add(&text, "[emission heron e%d]\nwavelength_nm = %d\naverage_power_w = 1\n", i, 800 + i);
    struct bw_case *c = read_text(text.data);
    assert_int_equal(c->lasers[0].handpieces[0].output.count, BW_EMISSIONS_MAX);
    near(c->lasers[0].handpieces[0].output.emissions[BW_EMISSIONS_MAX - 1].wavelength_nm, 815., "the last");
    bw_case_free(c);
    bw_text_free(&text);
}

/* ---- what holds when nothing is said ------------------------------------------------------------ */

static void test_defaults(void **state) {
    (void)state;
    struct bw_case *c =
        read_text(ROOM "[opening one door]\nfrom_m = 1 0\nto_m = 2 0\nkind = gap\n"
                       "[treatment-area one spot]\noutline_m = 2 2\n"
                       "[person one guest]\nat_m = 1 1\n[person one other]\nat_m = 0 0\neyewear = none\n"
                       "[eyewear wraps]\nod = 800-820 6\n");
    assert_string_equal(c->rules, "iec-60825-1-2014");
    assert_false(c->rules_given || c->us_units);
    assert_string_equal(c->lasers[0].labelled_class, "");
    const struct bw_room *room = &c->rooms[0];
    assert_string_equal(room->treated.name, "skin");
    near(room->grid_m, .02, "grid");
    assert_int_equal(room->bounces, 1);
    assert_true(room->openings[0].kind == BW_GAP && room->openings[0].cover == BW_COVER_NONE);
    assert_int_equal(room->areas[0].outline.count, 1);
    near(room->areas[0].aim_from_deg, 0., "aim");
    near(room->areas[0].aim_to_deg, 360., "aim");
    assert_false(room->persons[0].has_eyewear || room->persons[1].has_eyewear);
    assert_true(isnan(c->eyewear[0].luminous_transmittance));
    assert_string_equal(c->eyewear[0].inspected, "");
    assert_int_equal(c->use_count, 0);
    bw_case_free(c);
}

static void test_us_units_and_foreign_rules(void **state) {
    (void)state;
    struct bw_case *c = read_text("[case]\ntitle = x\nunits = us\nrules = house-rules-7\n"
                                  "[laser a]\n[emission a e]\nwavelength_nm = 810\naverage_power_w = 1\n"
                                  "[handpiece a h]\nfibre_na = 0.2\nfibre_core_mm = 0.4\n"
                                  "[room r]\noutline_ft = 0 0, 10 0, 10 8, 0 8\nmaterial = wood\ngrid_in = 1\n");
    assert_true(c->us_units && c->rules_given);
    assert_string_equal(c->rules, "house-rules-7"); /* --tables may bring them */
    near(bw_polygon_area(&c->rooms[0].outline), 3.048 * 2.4384, "80 square feet");
    near(c->rooms[0].grid_m, .0254, "an inch");
    bw_case_free(c);
}

/* ---- rooms -------------------------------------------------------------------------------------- */

/* Within a millimetre is on the outline, and is put there; a sketch is no closer. */
static void test_opening_is_put_on_the_outline(void **state) {
    (void)state;
    struct bw_case *c = read_text(ROOM "[opening one door]\nfrom_m = 1 0.0009\nto_m = 2 -0.0009\nkind = door\n"
                                       "cover = fabric\n[opening one window]\nfrom_mm = 5001 1000\nto_cm = 499.9 200\n"
                                       "kind = window\ncover = opaque\n");
    const struct bw_opening *door = &c->rooms[0].openings[0], *window = &c->rooms[0].openings[1];
    assert_true(door->cover == BW_COVER_MATERIAL && window->cover == BW_COVER_OPAQUE && window->kind == BW_WINDOW);
    assert_string_equal(door->material.name, "fabric");
    near(door->segment.from.x_m, 1., "door x");
    near(door->segment.from.y_m, 0., "door y");
    near(door->segment.to.y_m, 0., "door y");
    near(window->segment.from.x_m, 5., "window x");
    near(window->segment.to.x_m, 5., "window x");
    near(window->segment.to.y_m, 2., "window y");
    bw_case_free(c);
}

#define L_SHAPE "outline_m = 0 0, 6 0, 6 2, 4 2, 4 5, 0 5\nmaterial = wood\n"

static struct accepted_case {
    const char *name, *text;
} accepted[] = {
    {"accepted: surface on the wall", ROOM "[surface one board]\nfrom_m = 1 0\nto_m = 4 0\nmaterial = wood\n"},
    {"accepted: surface from wall to wall", ROOM "[surface one screen]\nfrom_m = 0 2\nto_m = 5 2\nmaterial = wood\n"},
    {"accepted: surface through the inner corner",
     LASER "[room l]\n" L_SHAPE "[surface l screen]\nfrom_m = 3 1\nto_m = 5 1.5\nmaterial = wood\n"},
    {"accepted: surface that touches the inner corner",
     LASER "[room l]\n" L_SHAPE "[surface l screen]\nfrom_m = 3 3\nto_m = 5 1\nmaterial = wood\n"},
    {"accepted: treatment area in the bend",
     LASER "[room l]\n" L_SHAPE "[treatment-area l bend]\noutline_m = 1 1, 5 1, 5 1.8, 3 1.8, 3 4, 1 4\n"},
    {"accepted: treatment area as large as the room",
     LASER "[room l]\n" L_SHAPE "[treatment-area l all]\noutline_m = 0 0, 6 0, 6 2, 4 2, 4 5, 0 5\n"},
    {"accepted: treatment area of two points", ROOM "[treatment-area one line]\noutline_m = 1 1, 2 1\n"},
    {"accepted: openings side by side", ROOM "[opening one a]\nfrom_m = 1 0\nto_m = 2 0\nkind = gap\n"
                                             "[opening one b]\nfrom_m = 3 0\nto_m = 2 0\nkind = gap\n"},
    {"accepted: openings opposite each other", ROOM "[opening one a]\nfrom_m = 1 0\nto_m = 2 0\nkind = gap\n"
                                                    "[opening one b]\nfrom_m = 1 4\nto_m = 2 4\nkind = gap\n"},
    {"accepted: opening over a corner point of a straight wall",
     LASER "[room one]\noutline_m = 0 0, 2 0, 5 0, 5 4, 0 4\nmaterial = wood\n"
           "[opening one a]\nfrom_m = 1 0\nto_m = 3 0\nkind = gap\n"},
    {"accepted: room clockwise", LASER "[room one]\noutline_m = 0 4, 5 4, 5 0, 0 0\nmaterial = wood\n"
                                       "[opening one a]\nfrom_m = 1 0\nto_m = 3 0\nkind = gap\n"},
    {"accepted: bearings through 0", ROOM "[treatment-area one a]\noutline_m = 1 1\naim_deg = -10 .. 10\n"},
    {"accepted: one bearing", ROOM "[treatment-area one a]\noutline_m = 1 1\naim_deg = 90..90\n"},
    {"accepted: the same name for things of different kind",
     ROOM "[surface one a]\nfrom_m = 1 1\nto_m = 2 1\nmaterial = wood\n[person one a]\nat_m = 1 1\n"
          "[treatment-area one a]\noutline_m = 1 1\n[eyewear a]\nod = 800 1\n[material a]\nfinish = matt\n"
          "reflectance_pct = 50\ntransmittance_pct = 0\n"},
    {"accepted: sections in any order",
     "[use r a h]\n[person r p]\neyewear = g\nat_m = 1 1\n[beam a h e]\nfibre_na = 0.2\n"
     "fibre_core_mm = 0.4\n[handpiece a h]\n[treatment-area r t]\noutline_m = 1 1\n"
     "[room r]\noutline_m = 0 0, 5 0, 5 4, 0 4\nmaterial = m\n[eyewear g]\nod = 800 1\n"
     "[material m]\nfinish = matt\nreflectance_pct = 50\ntransmittance_pct = 0\n"
     "[emission a e]\naverage_power_w = 1\nwavelength_nm = 810\n[laser a]\n"
     "[case]\ntitle = backwards\n"},
};

static void test_accepted(void **state) {
    const struct accepted_case *row = *state;
    bw_case_free(read_text(row->text));
}

/* Two handpieces of two lasers in two rooms: every index is that of its own list. */
static void test_uses(void **state) {
    (void)state;
    struct bw_case *c = read_text(
        CASE "[laser a]\n[laser b]\n[emission a e]\nwavelength_nm = 810\naverage_power_w = 1\n"
             "[emission b e]\nwavelength_nm = 910\naverage_power_w = 1\n"
             "[handpiece b one]\nfibre_na = 0.2\nfibre_core_mm = 0.4\n[handpiece a one]\nfibre_na = 0.2\nfibre_core_mm "
             "= 0.4\n"
             "[handpiece b two]\nfibre_na = 0.3\nfibre_core_mm = 0.4\n"
             "[room r]\noutline_m = 0 0, 5 0, 5 4, 0 4\nmaterial = wood\n[room s]\noutline_m = 0 0, 5 0, 5 4, 0 4\n"
             "material = wood\n[treatment-area s t]\noutline_m = 1 1\n[use s b two]\n[use s a one]\n");
    assert_int_equal(c->use_count, 2);
    assert_true(c->uses[0].room == 1 && c->uses[0].laser == 1 && c->uses[0].handpiece == 1);
    assert_true(c->uses[1].room == 1 && c->uses[1].laser == 0 && c->uses[1].handpiece == 0);
    near(c->lasers[1].handpieces[1].output.emissions[0].wavelength_nm, 910., "emission of the other laser");
    assert_int_equal(c->rooms[0].area_count, 0);
    assert_int_equal(c->rooms[1].area_count, 1);
    bw_case_free(c);
}

/* ---- materials ---------------------------------------------------------------------------------- */

static struct material_case {
    const char *name, *keys;
    enum bw_finish finish;
    double reflectance, matt, transmittance, index;
    const char *source;
} materials[] = {
    {"material: mirror", "finish = mirror\nreflectance_pct = 60\ntransmittance_pct = 0", BW_MIRROR, .6, 0., 0., 0.,
     "case file, line 14"},
    {"material: matt", "finish = matt\nreflectance_pct = 60\ntransmittance_pct = 5\nsource = measured", BW_MATT, .6, .6,
     .05, 0., "measured"},
    /* ((1.5 - 1)/(1.5 + 1))^2 = 0.04 */
    {"material: glass by its index", "finish = glass\nrefractive_index = 1.5\ntransmittance_pct = 90", BW_GLASS, .04,
     0., .9, 1.5, "case file, line 14"},
    {"material: glass, a little more",
     "finish = glass\nrefractive_index = 1.5\nreflectance_pct = 4.2\n"
     "transmittance_pct = 90",
     BW_GLASS, .042, 0., .9, 1.5, "case file, line 14"},
    {"material: gloss", "finish = gloss\nrefractive_index = 1.5\nmatt_reflectance_pct = 85\ntransmittance_pct = 0",
     BW_GLOSS, .04, .85, 0., 1.5, "case file, line 14"},
};

static void test_material(void **state) {
    const struct material_case *row = *state;
    char text[1000];
    snprintf(text, sizeof text, "%s%s[material tray]\n%s\n", LASER,
             "[room one]\noutline_m = 0 0, 5 0, 5 4, 0 4\nmaterial = tray\n", row->keys);
    struct bw_case *c = read_text(text);
    const struct bw_material *m = &c->rooms[0].walls;
    assert_string_equal(m->name, "tray");
    assert_int_equal(m->finish, row->finish);
    assert_int_equal(m->known, BW_READ);
    near(m->reflectance, row->reflectance, "reflectance");
    near(m->matt_reflectance, row->matt, "reflectance of the ground");
    near(m->transmittance, row->transmittance, "transmittance");
    near(m->refractive_index, row->index, "index");
    assert_string_equal(m->source, row->source);
    bw_case_free(c);
}

/* ---- goggles ------------------------------------------------------------------------------------ */

static void test_goggles_with_both(void **state) {
    (void)state;
    struct bw_case *c = read_text(LASER "[eyewear g]\nod = 800-820 6.2\nmarking = 800-820 D LB6 + 1064 DIR LB7\n"
                                        "inspected = 2024-02-29\nluminous_transmittance_pct = 0\n");
    const struct bw_goggles *g = &c->eyewear[0];
    assert_int_equal(g->rating_count, 3);
    near(bw_eyewear_rating(g, 810.)->optical_density, 6., "the lower of both");
    near(bw_eyewear_rating(g, 1064.)->optical_density, 7., "of the marking");
    assert_string_equal(g->inspected, "2024-02-29");
    near(g->luminous_transmittance, 0., "no light at all");
    bw_case_free(c);
}

/* ---- triples that have not passed the INI reader -------------------------------------------------- */

struct triple {
    const char *section, *key, *value;
    int line;
};

static void refuse_triples(const struct triple *triples, size_t count, const char *want) {
    struct bw_ini ini = {0};
    struct bw_faults faults = {0};
    struct bw_error error = {0};
    struct bw_case *the_case = NULL;
    struct bw_text got = {0};
    for (size_t i = 0; i < count; i++)
        assert_int_equal(bw_ini_add(&ini, triples[i].section, triples[i].key, triples[i].value, triples[i].line),
                         BW_OK);
    assert_int_equal(bw_case_from_ini(&ini, &the_case, &faults, &error), BW_INPUT);
    assert_null(the_case);
    bw_faults_print(&got, "page", &faults);
    assert_string_equal(got.data, want);
    bw_text_free(&got);
    bw_faults_free(&faults);
    bw_ini_free(&ini);
}

static void test_no_triples(void **state) {
    (void)state;
    refuse_triples(NULL, 0,
                   "page: has no [case] section; `[case]` and below it `title = ...` would be right\n"
                   "page: has no laser; [laser NAME] with its emissions and handpieces would be right\n");
}

static void test_repeated_triples(void **state) {
    (void)state;
    static const struct triple triples[] = {
        {"case", "", "", 1},
        {"case", "title", "x", 2},
        {"laser a", "", "", 3},
        {"emission a e", "wavelength_nm", "810", 5}, /* no head: the key alone tells its section */
        {"emission a e", "average_power_w", "1", 6},
        {"emission a e", "average_power_w", "0.001", 7},
        {"handpiece a h", "fibre_na", "0.2", 9},
        {"handpiece a h", "fibre_core_mm", "0.2", 10},
        {"laser a", "", "", 11},
    };
    refuse_triples(triples, COUNT(triples),
                   "page:7: [emission a e] average_power_w: given twice, as average_power_w in line 6; keep one\n"
                   "page:11: [laser a]: section given twice, before in line 3; give one another name\n");
}

/* More than fits is refused in words, not by running out of something. */
static void test_too_many_rooms(void **state) {
    (void)state;
    struct bw_text text = {0};
    struct bw_ini ini = {0};
    struct bw_faults faults = {0};
    struct bw_case *the_case = NULL;
    bw_text_add(&text, "%s", LASER);
    for (int i = 0; i < 70; i++)
        bw_text_add(&text, "[room r%d]\noutline_m = 0 0, 5 0, 5 4\nmaterial = wood\n", i);
    assert_int_equal(bw_ini_read_bytes(text.data, text.length, &ini, &faults, NULL), BW_OK);
    assert_int_equal(bw_case_from_ini(&ini, &the_case, &faults, NULL), BW_INPUT);
    assert_int_equal(faults.count, 1);
    assert_string_equal(faults.items[0].section, "room r64");
    assert_string_equal(faults.items[0].text, "more than 64 [room] sections; split the case over several files");
    bw_faults_free(&faults);
    bw_ini_free(&ini);
    bw_text_free(&text);
}

/* ---- texts that the library carries --------------------------------------------------------------- */

static void test_starter(void **state) {
    (void)state;
    struct bw_case *c = read_text(bw_case_starter());
    assert_true(c->laser_count == 1 && c->room_count == 1 && c->use_count == 1 && c->eyewear_count == 1);
    bw_case_free(c);
}

static void test_examples(void **state) {
    (void)state;
    assert_true(bw_case_examples_count() >= 2);
    for (size_t i = 0; i < bw_case_examples_count(); i++) {
        char path[256];
        struct bw_case *from_file = NULL, *carried;
        struct bw_text bytes = {0};
        struct bw_faults faults = {0};
        const char *name = bw_case_example_name(i), *text = bw_case_example(name);
        assert_non_null(text);
        assert_true(i == 0 || strcmp(bw_case_example_name(i - 1), name) < 0);
        snprintf(path, sizeof path, "examples/%s.ini", name);
        assert_int_equal(bw_case_read(path, &from_file, &bytes, &faults, NULL), BW_OK);
        assert_string_equal(text, bytes.data);
        carried = read_text(text);
        assert_true(carried->room_count > 0 && carried->use_count > 0);
        bw_case_free(carried);
        bw_case_free(from_file);
        bw_text_free(&bytes);
    }
    assert_non_null(bw_case_example("physio-clinic"));
    assert_non_null(bw_case_example("horse-clinic"));
    assert_null(bw_case_example("mistakes")); /* does not run */
    assert_null(bw_case_example("starter"));
    assert_null(bw_case_example("no-such-clinic"));
    assert_null(bw_case_example_name(bw_case_examples_count()));
}

static void test_free_nothing(void **state) {
    (void)state;
    bw_case_free(NULL);
}

/* ---- files -------------------------------------------------------------------------------------- */

static void test_no_such_file(void **state) {
    (void)state;
    struct bw_case *the_case = NULL;
    struct bw_faults faults = {0};
    struct bw_error error = {0};
    assert_int_equal(bw_case_read("examples/no-such-clinic.ini", &the_case, NULL, &faults, &error), BW_INPUT);
    assert_null(the_case);
    assert_int_equal(faults.count, 0);
    assert_true(strlen(error.text) > 0);
}

/* ---- all of them -------------------------------------------------------------------------------- */

#define ADD(rows, test)                                                                                                \
    for (size_t i = 0; i < COUNT(rows); i++)                                                                           \
        tests[count++] = (struct CMUnitTest) {                                                                         \
            rows[i].name, test, NULL, NULL, &rows[i]                                                                   \
        }

int main(void) {
    static void (*const single[])(void **) = {
        test_whole_laser,
        test_definition_of_handpiece,
        test_whole_room,
        test_only_own_beams,
        test_most_emissions,
        test_defaults,
        test_us_units_and_foreign_rules,
        test_opening_is_put_on_the_outline,
        test_uses,
        test_goggles_with_both,
        test_no_triples,
        test_repeated_triples,
        test_too_many_rooms,
        test_starter,
        test_examples,
        test_free_nothing,
        test_no_such_file,
    };
    static const char *const names[] = {
        "the whole description: laser",
        "definition of the handpiece",
        "the whole description: room",
        "only own beams",
        "most emissions",
        "defaults",
        "US units, foreign rules",
        "an opening is put on the outline",
        "uses",
        "goggles with both",
        "no triples",
        "repeated triples",
        "too many rooms",
        "starter",
        "examples",
        "free nothing",
        "no such file",
    };
    struct CMUnitTest tests[COUNT(emissions) + COUNT(beams) + COUNT(accepted) + COUNT(materials) + COUNT(single)];
    size_t count = 0;
    ADD(emissions, test_emission);
    ADD(beams, test_beam);
    ADD(accepted, test_accepted);
    ADD(materials, test_material);
    for (size_t i = 0; i < COUNT(single); i++)
        tests[count++] = (struct CMUnitTest){names[i], single[i], NULL, NULL, NULL};
    return cmocka_run_group_tests_name("casefile", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
