/* Where rows meet, and between: the lower limit holds on an edge; inside the rows the limit never rises with time as
 * irradiance and never falls as radiant exposure; the printed steps are those listed here, and there are no others. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <cmocka.h>

#include <beamward/limits.h>

static const enum bw_effect effects[BW_EFFECTS] = {BW_RETINA_THERMAL, BW_RETINA_PHOTOCHEMICAL, BW_ULTRAVIOLET,
                                                   BW_ANTERIOR, BW_SKIN_EFFECT};

/* H of one effect; 0 if it has no row there. aperture_mm may be NULL. */
static double effect_limit(const char *table, enum bw_effect effect, double wavelength_nm, double exposure_s,
                           double subtense_mrad, double *aperture_mm) {
    const struct bw_exposure exposure = {wavelength_nm, exposure_s, subtense_mrad * 1e-3, 0.0};
    struct bw_limit_set limits;
    if (bw_limits(bw_tables_find(table), effect == BW_SKIN_EFFECT ? BW_SKIN : BW_EYE, &exposure, &limits, NULL, NULL) !=
        BW_OK)
        return 0.0;
    for (size_t i = 0; i < limits.count; i++)
        if (limits.limits[i].effect == effect) {
            if (aperture_mm != NULL)
                *aperture_mm = limits.limits[i].aperture_m * 1e3;
            return limits.limits[i].radiant_exposure_j_m2;
        }
    return 0.0;
}

/* ---- on an edge and beside it ----------------------------------------------------------------- */

struct edge_case {
    const char *name, *table;
    enum bw_effect effect;
    double wavelength_nm, exposure_s, subtense_mrad;
    double want_j_m2, tolerance, want_aperture_mm; /* tolerance relative; 0 J/m2: no such effect */
    const char *why;
};
static struct edge_case edge_cases[] = {
    {"302.5 nm keeps 30", "eu-2006-25", BW_ULTRAVIOLET, 302.5, 1, 0, 30, 1e-12, 1.5, "below 303 it is 30"},
    {"302.999 nm keeps 30", "icnirp-2013", BW_ULTRAVIOLET, 302.999, 1, 0, 30, 1e-12, 1.5, "below 303 it is 30"},
    {"303 nm", "eu-2006-25", BW_ULTRAVIOLET, 303, 1, 0, 40, 1e-12, 1.5, "Table 2.2"},
    {"303.5 nm keeps 303's", "eu-2006-25", BW_ULTRAVIOLET, 303.5, 1, 0, 40, 1e-12, 1.5, "next lower step"},
    {"304 nm", "eu-2006-25", BW_ULTRAVIOLET, 304, 1, 0, 60, 1e-12, 1.5, "Table 2.2"},
    {"just below 304 nm", "eu-2006-25", BW_ULTRAVIOLET, 303.99999, 1, 0, 40, 1e-12, 1.5, "next lower step"},
    {"314.5 nm, thermal cap", "eu-2006-25", BW_ULTRAVIOLET, 314.5, 1, 0, 5600, 1e-12, 1.5, "5.6e3 t^0.25"},
    {"314.5 nm, long", "eu-2006-25", BW_ULTRAVIOLET, 314.5, 100, 0, 6300, 1e-12, 3.5, "Table 2.3"},
    {"315 nm, long", "eu-2006-25", BW_ULTRAVIOLET, 315, 100, 0, 1e4, 1e-12, 3.5, "Table 2.3"},
    {"302.5 nm, the lower", "iec-60825-1-2014", BW_ULTRAVIOLET, 302.5, 1, 0, 30, 1e-12, 1, "30 against 31.6"},
    {"just above 302.5 nm", "iec-60825-1-2014", BW_ULTRAVIOLET, 302.50001, 1, 0, 31.623, 1e-5, 1, "10^1.5"},
    {"315 nm, the lower", "iec-60825-1-2014", BW_ULTRAVIOLET, 315, 100, 0, 1e4, 1e-12, 1, "10^4 and 1e4"},
    {"315 nm at T1 = 10 s", "iec-60825-1-2014", BW_ULTRAVIOLET, 315, 10, 0, 9958.36, 1e-6, 1, "5.6e3 10^0.25"},
    {"400 nm has both: ultraviolet", "eu-2006-25", BW_ULTRAVIOLET, 400, 1, 0, 5600, 1e-12, 1.5, "closed at 400"},
    {"400 nm has both: retina", "eu-2006-25", BW_RETINA_THERMAL, 400, 1, 0, 18, 1e-12, 7, "closed at 400"},
    {"400.001 nm has no ultraviolet", "eu-2006-25", BW_ULTRAVIOLET, 400.001, 1, 0, 0, 0, 0, ""},
    {"399.999 nm has no retina", "eu-2006-25", BW_RETINA_THERMAL, 399.999, 1, 0, 0, 0, 0, ""},
    {"400 nm, skin, the lower", "eu-2006-25", BW_SKIN_EFFECT, 400, 1, 0, 5600, 1e-12, 3.5, "5.6e3 against 1.1e4"},
    {"600 nm still photochemical", "icnirp-2013", BW_RETINA_PHOTOCHEMICAL, 600, 10, 0, 1e5, 1e-12, 7, "CB = 1000"},
    {"600.001 nm no longer", "icnirp-2013", BW_RETINA_PHOTOCHEMICAL, 600.001, 10, 0, 0, 0, 0, ""},
    {"photochemical not before 10 s", "icnirp-2013", BW_RETINA_PHOTOCHEMICAL, 450, 9.999, 0, 0, 0, 0, ""},
    {"700 nm", "icnirp-2013", BW_RETINA_THERMAL, 700, 1, 0, 18, 1e-12, 7, "CA = 1"},
    {"1050 nm, CA the lower", "icnirp-2013", BW_RETINA_THERMAL, 1050, 1e-6, 0, 1e-2, 1e-12, 7, "2e-3 * 5"},
    {"just above 1050 nm", "icnirp-2013", BW_RETINA_THERMAL, 1050.001, 1e-6, 0, 2e-2, 1e-12, 7, "2e-2"},
    {"1150 nm", "eu-2006-25", BW_RETINA_THERMAL, 1150, 1e-6, 0, 5e-2, 1e-12, 7, "CC = 1"},
    {"1200 nm, CC the lower", "icnirp-2013", BW_RETINA_THERMAL, 1200, 1e-6, 0, 0.158866, 1e-5, 7,
     "10^0.9 against 8.01"},
    {"1200 nm, CC the lower", "eu-2006-25", BW_RETINA_THERMAL, 1200, 1e-6, 0, 0.397164, 1e-5, 7, "10^0.9 against 8"},
    {"1250 nm begins the cap", "icnirp-2013", BW_ANTERIOR, 1250, 1e-8, 0, 1000, 1e-12, 1, "200 * 5"},
    {"just below 1250 nm no cap", "icnirp-2013", BW_ANTERIOR, 1249.999, 1e-8, 0, 0, 0, 0, ""},
    {"1400 nm, retina", "eu-2006-25", BW_RETINA_THERMAL, 1400, 1e-6, 0, 0.4, 1e-12, 7, "5e-2 * 8"},
    {"1400 nm, anterior", "eu-2006-25", BW_ANTERIOR, 1400, 1e-6, 0, 1000, 1e-12, 1, "closed at 1400"},
    {"1400 nm, anterior, the lower", "iec-60825-1-2014", BW_ANTERIOR, 1400, 1e-2, 0, 1770.87, 1e-5, 1,
     "5.6e3 t^0.25 against 5.5e4 t^0.25"},
    {"1500 nm, the lower", "eu-2006-25", BW_ANTERIOR, 1500, 1e-6, 0, 1000, 1e-12, 1, "1e3 against 1e4"},
    {"1800 nm, the lower", "eu-2006-25", BW_ANTERIOR, 1800, 1e-6, 0, 1000, 1e-12, 1, "1e3 against 1e4"},
    {"2600 nm, the lower", "eu-2006-25", BW_ANTERIOR, 2600, 1e-8, 0, 100, 1e-12, 1, "100 against 1e3"},
    {"1e5 nm, the smaller aperture", "eu-2006-25", BW_ANTERIOR, 1e5, 100, 0, 1e5, 1e-12, 3.5, "3.5 against 11 mm"},
    {"above 1e5 nm 11 mm", "eu-2006-25", BW_ANTERIOR, 100001, 100, 0, 1e5, 1e-12, 11, "11 mm"},
    {"skin at 1e5 nm", "eu-2006-25", BW_SKIN_EFFECT, 1e5, 100, 0, 1e5, 1e-12, 3.5, "3.5 against 11 mm"},
    {"1 ns", "eu-2006-25", BW_RETINA_THERMAL, 550, 1e-9, 0, 4.80135e-3, 1e-5, 7, "2.7e4 t^0.75 against 5e-3"},
    {"just above 1 ns", "eu-2006-25", BW_RETINA_THERMAL, 550, 1.0001e-9, 0, 5e-3, 1e-12, 7, "5e-3"},
    {"18e-6 s computed", "eu-2006-25", BW_RETINA_THERMAL, 550, 6e-6 * 3, 0, 4.97424e-3, 1e-5, 7, "18 t^0.75"},
    {"aperture at 0.3 s", "eu-2006-25", BW_ANTERIOR, 10600, 0.3, 0, 4144.46, 1e-5, 0.955018, "1.5 t^0.375 against 1"},
    {"aperture below 0.3 s", "eu-2006-25", BW_ANTERIOR, 10600, 0.2999, 0, 4144.12, 1e-5, 1, "1 mm"},
    {"aperture at 0.35 s", "icnirp-2013", BW_ANTERIOR, 10600, 0.35, 0, 4307.30, 1e-5, 1, "1 against 1.012 mm"},
    {"aperture at 10 s", "icnirp-2013", BW_ULTRAVIOLET, 355, 10, 0, 9958.36, 1e-6, 3.5, "3.5 against 3.557 mm"},
    {"10 s, point source", "icnirp-2013", BW_RETINA_THERMAL, 550, 10, 0, 100, 1e-12, 7, "10 W/m2 against 101.2 J/m2"},
    {"just below 10 s", "icnirp-2013", BW_RETINA_THERMAL, 550, 9.999999, 0, 101.2214, 1e-6, 7, "18 t^0.75"},
    {"1.5 mrad, the lower", "icnirp-2013", BW_RETINA_THERMAL, 550, 100, 1.5, 1000, 1e-12, 7, "10 against 10.12 W/m2"},
    {"just above 1.5 mrad", "icnirp-2013", BW_RETINA_THERMAL, 550, 100, 1.50001, 1012.2, 1e-4, 7, "18 T2^-0.25"},
    {"T2 of 100 mrad", "icnirp-2013", BW_RETINA_THERMAL, 550, 100, 100, 37947.3, 1e-5, 7, "18 * 66.67 * 100^0.75"},
    {"T2 beyond 100 mrad", "iec-60825-1-2014", BW_RETINA_THERMAL, 550, 1000, 200, 379473, 1e-5, 7,
     "CE stops at 66.67; 18 * 66.67 * 100^-0.25 W/m2"},
    {"below alpha_min CE is 1", "eu-2006-25", BW_RETINA_THERMAL, 550, 1, 1.4, 18, 1e-12, 7, "CE = 1"},
    {"shortest time", "eu-2006-25", BW_RETINA_THERMAL, 550, 1e-13, 0, 1.5e-4, 1e-12, 7, "1.5e-4"},
    {"longest time", "eu-2006-25", BW_RETINA_THERMAL, 550, 3e4, 0, 3e5, 1e-12, 7, "10 W/m2"},
    {"shortest wavelength", "eu-2006-25", BW_ULTRAVIOLET, 180, 1, 0, 30, 1e-12, 1.5, "30"},
    {"longest wavelength", "eu-2006-25", BW_ANTERIOR, 1e6, 1, 0, 5600, 1e-12, 11, "5.6e3 t^0.25"},
    {"both ends of ansi", "ansi-z136-1-2014", BW_RETINA_THERMAL, 1200, 1e-6, 0, 0.158866, 1e-5, 7, "2e-2 * 10^0.9"},
    {"both ends of ansi", "ansi-z136-1-2014", BW_RETINA_THERMAL, 400, 1e-6, 0, 2e-3, 1e-12, 7, "2e-3"},
};

static void test_edge(void **state) {
    const struct edge_case *c = *state;
    double aperture_mm = 0.0;
    double got = effect_limit(c->table, c->effect, c->wavelength_nm, c->exposure_s, c->subtense_mrad, &aperture_mm);
    if (!(fabs(got - c->want_j_m2) <= c->tolerance * c->want_j_m2))
        fail_msg("got %.9g, want %.9g J/m2 [%s: %s]", got, c->want_j_m2, c->table, c->why);
    if (!(fabs(aperture_mm - c->want_aperture_mm) <= 1e-5))
        fail_msg("got %.9g, want %.9g mm [%s: %s]", aperture_mm, c->want_aperture_mm, c->table, c->why);
}

/* ---- the printed steps ------------------------------------------------------------------------ */

struct step_case { /* H just before and just after, as the two rows print them; CA CC CE aside unless named */
    const char *tables;
    enum bw_effect effect;
    double low_nm, high_nm, time_s;
    double before_j_m2, after_j_m2; /* only their ratio counts where a factor stands on both sides */
};
static const struct step_case step_cases[] = {
    /* ultraviolet: 3e10 W/m2 gives way to the step or to 5.6e3 t^0.25 = 31.49111 */
    {"eu-2006-25 icnirp-2013", BW_ULTRAVIOLET, 303, 315, 1e-9, 30, 31.49111},
    {"eu-2006-25 icnirp-2013 iec-60825-1-2014", BW_ULTRAVIOLET, 315, 400, 1e-9, 30, 31.49111},
    {"eu-2006-25 icnirp-2013 iec-60825-1-2014", BW_ULTRAVIOLET, 315, 400, 10, 9958.365, 10000},
    {"iec-60825-1-2014", BW_ULTRAVIOLET, 302.6, 314.9, 1e-9, 30, 31.49111},
    /* retina, Directive */
    {"eu-2006-25", BW_RETINA_THERMAL, 400, 1050, 1e-11, 1.5e-4, 1.518322e-4},
    {"eu-2006-25", BW_RETINA_THERMAL, 400, 1050, 1e-9, 4.801354e-3, 5e-3},
    {"eu-2006-25", BW_RETINA_THERMAL, 400, 1050, 1.8e-5, 5e-3, 4.97424e-3},
    {"eu-2006-25", BW_RETINA_THERMAL, 1050, 1400, 1e-11, 1.5e-3, 1.518322e-3},
    {"eu-2006-25", BW_RETINA_THERMAL, 1050, 1400, 1e-9, 4.801354e-2, 5e-2},
    {"eu-2006-25", BW_RETINA_THERMAL, 1050, 1400, 5e-5, 5e-2, 5.351432e-2},
    /* retina, 2013 and 2014 */
    {"icnirp-2013 iec-60825-1-2014 ansi-z136-1-2014", BW_RETINA_THERMAL, 400, 700, 1e-11, 1e-3, 2e-3},
    {"icnirp-2013 iec-60825-1-2014 ansi-z136-1-2014", BW_RETINA_THERMAL, 810, 810, 1e-11, 1e-3, 3.31917e-3}, /* CA */
    {"icnirp-2013 iec-60825-1-2014 ansi-z136-1-2014", BW_RETINA_THERMAL, 1050, 1400, 1e-11, 1e-3, 2e-2},
    {"icnirp-2013 iec-60825-1-2014 ansi-z136-1-2014", BW_RETINA_THERMAL, 400, 1050, 5e-6, 2e-3, 1.903268e-3},
    {"icnirp-2013 iec-60825-1-2014 ansi-z136-1-2014", BW_RETINA_THERMAL, 1050, 1400, 1.3e-5, 2e-2, 1.948498e-2},
    {"*", BW_RETINA_THERMAL, 400, 1400, 10, 101.22144, 100},
    /* anterior and skin */
    {"icnirp-2013 iec-60825-1-2014", BW_ANTERIOR, 1250, 1400, 1e-7, 1000, 978.0537},
    {"icnirp-2013 iec-60825-1-2014", BW_ANTERIOR, 1250, 1400, 10, 97805.37, 100000},
    {"eu-2006-25 icnirp-2013 iec-60825-1-2014", BW_ANTERIOR, 1400, 1500, 1e-3, 1000, 995.8365},
    {"eu-2006-25 icnirp-2013 iec-60825-1-2014", BW_ANTERIOR, 1800, 2600, 1e-3, 1000, 995.8365},
    {"eu-2006-25 icnirp-2013 iec-60825-1-2014", BW_ANTERIOR, 2600, 1e6, 1e-7, 100, 99.58365},
    {"eu-2006-25 icnirp-2013 iec-60825-1-2014", BW_ANTERIOR, 1400, 1500, 10, 9958.365, 10000},
    {"eu-2006-25 icnirp-2013 iec-60825-1-2014", BW_ANTERIOR, 1800, 1e6, 10, 9958.365, 10000},
    {"eu-2006-25 icnirp-2013", BW_SKIN_EFFECT, 303, 315, 1e-9, 30, 31.49111},
    {"eu-2006-25 icnirp-2013 iec-60825-1-2014", BW_SKIN_EFFECT, 315, 400, 1e-9, 30, 31.49111},
    {"eu-2006-25 icnirp-2013 iec-60825-1-2014", BW_SKIN_EFFECT, 315, 400, 10, 9958.365, 10000},
    {"iec-60825-1-2014", BW_SKIN_EFFECT, 302.6, 314.9, 1e-9, 30, 31.49111},
    {"*", BW_SKIN_EFFECT, 400, 1400, 1e-7, 200, 195.6107},
    {"*", BW_SKIN_EFFECT, 400, 1400, 10, 19561.07, 20000},
    {"eu-2006-25 icnirp-2013 iec-60825-1-2014", BW_SKIN_EFFECT, 1400, 1500, 1e-3, 1000, 995.8365},
    {"eu-2006-25 icnirp-2013 iec-60825-1-2014", BW_SKIN_EFFECT, 1800, 2600, 1e-3, 1000, 995.8365},
    {"eu-2006-25 icnirp-2013 iec-60825-1-2014", BW_SKIN_EFFECT, 2600, 1e6, 1e-7, 100, 99.58365},
    {"eu-2006-25 icnirp-2013 iec-60825-1-2014", BW_SKIN_EFFECT, 1400, 1500, 10, 9958.365, 10000},
    {"eu-2006-25 icnirp-2013 iec-60825-1-2014", BW_SKIN_EFFECT, 1800, 1e6, 10, 9958.365, 10000},
};
enum { STEPS = sizeof step_cases / sizeof step_cases[0] };

/* One wavelength in each band of any rule set; 810 stands for 700 to 1050, where a step carries CA. */
static const double wavelengths_nm[] = {250, 302.7, 303.5, 304.5, 308.5, 311.5, 314.5, 350,  430,   550, 650,
                                        810, 1100,  1175,  1225,  1300,  1450,  1600,  2000, 10600, 2e5};
enum { WAVELENGTHS = sizeof wavelengths_nm / sizeof wavelengths_nm[0] };

static bool names_table(const char *tables, const char *table) {
    return strcmp(tables, "*") == 0 || strstr(tables, table) != NULL;
}

/* T1 of IEC moves with the wavelength: 1e-15 * 10^(0.8 (w - 295)); there 5.6e3 T1^0.25 = 0.99584 * 10^(0.2 (w - 295)).
 */
static bool is_uv_takeover(const char *table, enum bw_effect effect, double wavelength_nm, double time_s,
                           struct step_case *step) {
    double takeover_s = 1e-15 * pow(10.0, 0.8 * (wavelength_nm - 295.0));
    if (strcmp(table, "iec-60825-1-2014") != 0 || (effect != BW_ULTRAVIOLET && effect != BW_SKIN_EFFECT) ||
        !(wavelength_nm > 302.5 && wavelength_nm < 315.0) || !(fabs(time_s / takeover_s - 1.0) <= 1e-9))
        return false;
    *step = (struct step_case){table, effect, wavelength_nm, wavelength_nm, takeover_s, 0.995836, 1.0};
    return true;
}

/* The listed step at this time, within the given relative distance. seen (may be NULL) is ticked.
 * Returns: false if none is printed there. */
static bool find_step(const char *table, enum bw_effect effect, double wavelength_nm, double time_s, double near,
                      struct step_case *step, bool seen[STEPS]) {
    for (size_t i = 0; i < STEPS; i++) {
        *step = step_cases[i];
        bool carries_ca = step->low_nm >= step->high_nm && wavelength_nm > 700.0 && wavelength_nm < 1050.0;
        if (names_table(step->tables, table) && step->effect == effect &&
            ((wavelength_nm > step->low_nm && wavelength_nm < step->high_nm) || carries_ca) &&
            fabs(time_s / step->time_s - 1.0) <= near) {
            if (seen != NULL)
                seen[i] = true;
            return true;
        }
    }
    return is_uv_takeover(table, effect, wavelength_nm, time_s, step);
}

/* At every edge of a row: a step only where one is listed, and then of the listed height. */
static void check_edges_of(const char *table, enum bw_effect effect, double wavelength_nm, bool seen[STEPS]) {
    const struct bw_exposure exposure = {wavelength_nm, 1.0, 0.0, 0.0};
    double edges_s[BW_EDGES_MAX];
    size_t count = bw_limits_time_edges(bw_tables_find(table), effect == BW_SKIN_EFFECT ? BW_SKIN : BW_EYE, &exposure,
                                        edges_s, BW_EDGES_MAX);
    for (size_t i = 0; i < count; i++) {
        struct step_case step;
        double before = effect_limit(table, effect, wavelength_nm, edges_s[i] * (1.0 - 1e-9), 0.0, NULL);
        double after = effect_limit(table, effect, wavelength_nm, edges_s[i] * (1.0 + 1e-9), 0.0, NULL);
        double on = effect_limit(table, effect, wavelength_nm, edges_s[i], 0.0, NULL);
        if (before <= 0.0 || after <= 0.0)
            continue;
        if (!(fabs(on / fmin(before, after) - 1.0) <= 2e-9))
            fail_msg("%s %s %g nm: on the edge %g s %.9g, beside it %.9g and %.9g", table, bw_effect_name(effect),
                     wavelength_nm, edges_s[i], on, before, after);
        bool listed = find_step(table, effect, wavelength_nm, edges_s[i], 1e-9, &step, seen);
        double want = listed ? step.after_j_m2 / step.before_j_m2 : 1.0;
        if (!(fabs(after / before / want - 1.0) <= 1e-5))
            fail_msg("%s %s %g nm: at %g s from %.9g to %.9g J/m2, which is not a printed step", table,
                     bw_effect_name(effect), wavelength_nm, edges_s[i], before, after);
    }
}

static void test_steps(void **state) {
    static const char *const tables[] = {"ansi-z136-1-2014", "eu-2006-25", "icnirp-2013", "iec-60825-1-2014"};
    bool seen[STEPS] = {false};
    (void)state;
    for (size_t t = 0; t < 4; t++)
        for (size_t w = 0; w < WAVELENGTHS; w++)
            for (size_t e = 0; e < BW_EFFECTS; e++)
                check_edges_of(tables[t], effects[e], wavelengths_nm[w], seen);
    for (size_t i = 0; i < STEPS; i++)
        if (!seen[i])
            fail_msg("step %zu (%s, %g .. %g nm, %g s) is listed but not found", i, step_cases[i].tables,
                     step_cases[i].low_nm, step_cases[i].high_nm, step_cases[i].time_s);
}

/* The ceiling of the Directive steps with the source: 18 CA CC CE T2^-0.25 is cut to 1000 W/m2. */
static void test_ceiling_step(void **state) {
    (void)state;
    double t2 = 10.0 * pow(10.0, 58.5 / 98.5), uncut = 18.0 * 5.0 * 40.0 * pow(t2, -0.25);
    double before = effect_limit("eu-2006-25", BW_RETINA_THERMAL, 1064.0, t2 * (1.0 - 1e-9), 60.0, NULL);
    double after = effect_limit("eu-2006-25", BW_RETINA_THERMAL, 1064.0, t2 * (1.0 + 1e-9), 60.0, NULL);
    assert_true(uncut > 1000.0);
    assert_true(fabs(before / t2 / uncut - 1.0) <= 1e-8);
    assert_true(fabs(after / t2 / 1000.0 - 1.0) <= 1e-8);
    assert_true(fabs(effect_limit("icnirp-2013", BW_RETINA_THERMAL, 1064.0, 1000.0, 60.0, NULL) / 1000.0 / uncut -
                     1.0) <= 1e-12); /* no ceiling there */
}

/* ---- the course with time --------------------------------------------------------------------- */

/* The limit as an even source meets it whole. IEC measures only what comes from within alpha_max(t), which grows with
 * time, and so its printed limit does too: compared with the whole source it is alpha^2/alpha_max^2 times as high. */
static double whole_limit(const char *table, enum bw_effect effect, double wavelength_nm, double exposure_s,
                          double subtense_mrad) {
    double limit = effect_limit(table, effect, wavelength_nm, exposure_s, subtense_mrad, NULL);
    if (effect != BW_RETINA_THERMAL || strcmp(table, "iec-60825-1-2014") != 0)
        return limit;
    double alpha_max_mrad = exposure_s < 625e-6 ? 5.0 : exposure_s < 0.25 ? 200.0 * sqrt(exposure_s) : 100.0;
    double share = fmin(1.0, alpha_max_mrad / subtense_mrad);
    return limit / (share * share);
}

/* The Directive cuts extended sources to 1000 W/m2 beyond T2: a step that moves with the source. */
static bool is_ceiling(const char *table, double wavelength_nm, double subtense_mrad, double from_s, double to_s) {
    double t2 = 10.0 * pow(10.0, (subtense_mrad - 1.5) / 98.5);
    return strcmp(table, "eu-2006-25") == 0 && wavelength_nm > 700.0 && wavelength_nm < 1400.0 && subtense_mrad > 1.5 &&
           t2 >= from_s && t2 <= to_s;
}

/* From 1e-13 to 3e4 s in steps of 0.5 %: H never falls, E never rises, but over a listed step. */
static void check_course(const char *table, enum bw_effect effect, double wavelength_nm, double subtense_mrad) {
    const double ratio = 1.005;
    double last_s = 1e-13, last = whole_limit(table, effect, wavelength_nm, last_s, subtense_mrad);
    for (double time_s = last_s * ratio; time_s <= 3e4; time_s *= ratio) {
        struct step_case step;
        double limit = whole_limit(table, effect, wavelength_nm, time_s, subtense_mrad);
        double middle_s = sqrt(last_s * time_s), change = limit / last;
        bool listed = find_step(table, effect, wavelength_nm, middle_s, 0.0026, &step, NULL);
        double takeover_s = 1e-15 * pow(10.0, 0.8 * (wavelength_nm - 295.0));
        listed = listed || is_ceiling(table, wavelength_nm, subtense_mrad, last_s, time_s) ||
                 (takeover_s >= last_s && takeover_s <= time_s &&
                  is_uv_takeover(table, effect, wavelength_nm, takeover_s, &step));
        if (last > 0.0 && !listed && !(change >= 1.0 - 1e-12 && change <= time_s / last_s * (1.0 + 1e-12)))
            fail_msg("%s %s %g nm %g mrad: from %.9g J/m2 at %g s to %.9g J/m2 at %g s", table, bw_effect_name(effect),
                     wavelength_nm, subtense_mrad, last, last_s, limit, time_s);
        if (last > 0.0 && !(limit > 0.0))
            fail_msg("%s %s %g nm: the limit ends at %g s", table, bw_effect_name(effect), wavelength_nm, time_s);
        last = limit;
        last_s = time_s;
    }
}

static void test_course(void **state) {
    const char *table = *state;
    static const double subtenses_mrad[] = {0.0, 4.0, 40.0};
    for (size_t w = 0; w < WAVELENGTHS; w++)
        for (size_t e = 0; e < BW_EFFECTS; e++)
            for (size_t a = 0; a < (effects[e] == BW_RETINA_THERMAL ? 3 : 1); a++)
                check_course(table, effects[e], wavelengths_nm[w], subtenses_mrad[a]);
}

/* A larger source never has a lower limit, and never one higher than its area gives. */
static void test_source_size(void **state) {
    const char *table = *state;
    static const double times_s[] = {1e-9, 1e-3, 0.25, 5.0, 30.0, 3e3, 2e4};
    static const enum bw_effect retinal[] = {BW_RETINA_THERMAL, BW_RETINA_PHOTOCHEMICAL};
    for (size_t t = 0; t < 7; t++)
        for (size_t e = 0; e < 2; e++)
            for (double alpha = 0.5; alpha < 1500.0; alpha *= 1.01) {
                double smaller = effect_limit(table, retinal[e], 480.0, times_s[t], alpha, NULL);
                double larger = effect_limit(table, retinal[e], 480.0, times_s[t], alpha * 1.01, NULL);
                /* T2 grows with alpha, so the limit may grow a little less than CE; from 10 to 10.12 W/m2 at 1.5 */
                if (smaller > 0.0 && !(larger >= smaller * (1.0 - 1e-12) && larger <= smaller * 1.01 * 1.01 * 1.0123))
                    fail_msg("%s %g s: from %.9g at %g mrad to %.9g J/m2", table, times_s[t], smaller, alpha, larger);
            }
}

/* ---- arguments -------------------------------------------------------------------------------- */

struct argument_case {
    const char *name, *table;
    enum bw_target target;
    struct bw_exposure exposure;
    enum bw_status want;
    const char *text;
};
static struct argument_case argument_cases[] = {
    {"wavelength NaN",
     "eu-2006-25",
     BW_EYE,
     {(double)NAN, 1, 0, 0},
     BW_ARGUMENT,
     "wavelength nan nm is not a wavelength; wants 180 to 1e6 nm"},
    {"wavelength negative",
     "eu-2006-25",
     BW_EYE,
     {-1, 1, 0, 0},
     BW_ARGUMENT,
     "wavelength -1 nm is not a wavelength; wants 180 to 1e6 nm"},
    {"wavelength 0",
     "eu-2006-25",
     BW_EYE,
     {0, 1, 0, 0},
     BW_OUT_OF_RANGE,
     "no row of eu-2006-25 covers 0 nm; it covers 180 to 1e6 nm"},
    {"wavelength 170",
     "iec-60825-1-2014",
     BW_EYE,
     {170, 1, 0, 0},
     BW_OUT_OF_RANGE,
     "no row of iec-60825-1-2014 covers 170 nm; it covers 180 to 1e6 nm"},
    {"wavelength 179.999",
     "icnirp-2013",
     BW_SKIN,
     {179.999, 1, 0, 0},
     BW_OUT_OF_RANGE,
     "no row of icnirp-2013 covers 179.999 nm; it covers 180 to 1e6 nm"},
    {"wavelength above 1 mm",
     "icnirp-2013",
     BW_EYE,
     {1000001, 1, 0, 0},
     BW_OUT_OF_RANGE,
     "no row of icnirp-2013 covers 1000001 nm; it covers 180 to 1e6 nm"},
    {"wavelength infinite",
     "icnirp-2013",
     BW_EYE,
     {HUGE_VAL, 1, 0, 0},
     BW_OUT_OF_RANGE,
     "no row of icnirp-2013 covers unbounded nm; it covers 180 to 1e6 nm"},
    {"ansi below 400",
     "ansi-z136-1-2014",
     BW_EYE,
     {399.9, 1, 0, 0},
     BW_OUT_OF_RANGE,
     "no row of ansi-z136-1-2014 covers 399.9 nm; it covers 400 to 1200 nm"},
    {"ansi above 1200",
     "ansi-z136-1-2014",
     BW_SKIN,
     {1320, 1, 0, 0},
     BW_OUT_OF_RANGE,
     "no row of ansi-z136-1-2014 covers 1320 nm; it covers 400 to 1200 nm"},
    {"time NaN",
     "eu-2006-25",
     BW_EYE,
     {810, (double)NAN, 0, 0},
     BW_ARGUMENT,
     "exposure time nan s is not a time; wants 1e-13 to 3e4 s"},
    {"time negative",
     "eu-2006-25",
     BW_EYE,
     {810, -1, 0, 0},
     BW_ARGUMENT,
     "exposure time -1 s is not a time; wants 1e-13 to 3e4 s"},
    {"time 0",
     "eu-2006-25",
     BW_EYE,
     {810, 0, 0, 0},
     BW_OUT_OF_RANGE,
     "no row of eu-2006-25 covers 0 s; it covers 1e-13 to 3e4 s"},
    {"time too short",
     "eu-2006-25",
     BW_EYE,
     {810, 0.99e-13, 0, 0},
     BW_OUT_OF_RANGE,
     "no row of eu-2006-25 covers 9.9e-14 s; it covers 1e-13 to 3e4 s"},
    {"time too long",
     "eu-2006-25",
     BW_EYE,
     {810, 30001, 0, 0},
     BW_OUT_OF_RANGE,
     "no row of eu-2006-25 covers 30001 s; it covers 1e-13 to 3e4 s"},
    {"time infinite",
     "eu-2006-25",
     BW_SKIN,
     {810, HUGE_VAL, 0, 0},
     BW_OUT_OF_RANGE,
     "no row of eu-2006-25 covers unbounded s; it covers 1e-13 to 3e4 s"},
    {"subtense NaN",
     "eu-2006-25",
     BW_EYE,
     {810, 1, (double)NAN, 0},
     BW_ARGUMENT,
     "angular subtense nan rad is out of range; wants 0 to pi/2 rad"},
    {"subtense beyond a right angle",
     "eu-2006-25",
     BW_EYE,
     {810, 1, 1.58, 0},
     BW_ARGUMENT,
     "angular subtense 1.58 rad is out of range; wants 0 to pi/2 rad"},
    {"subtense negative",
     "eu-2006-25",
     BW_EYE,
     {810, 1, -1e-3, 0},
     BW_ARGUMENT,
     "angular subtense -0.001 rad is out of range; wants 0 to pi/2 rad"},
    {"area NaN",
     "icnirp-2013",
     BW_SKIN,
     {10600, 100, 0, (double)NAN},
     BW_ARGUMENT,
     "exposed area nan m2 is not an area; wants 0 (small) or more"},
    {"area infinite",
     "icnirp-2013",
     BW_SKIN,
     {10600, 100, 0, HUGE_VAL},
     BW_ARGUMENT,
     "exposed area inf m2 is not an area; wants 0 (small) or more"},
    {"subtense a right angle", "eu-2006-25", BW_EYE, {810, 100, 1.5707963267948966, 0}, BW_OK, ""},
    {"wavelength off by rounding", "eu-2006-25", BW_EYE, {179.99999999999997, 1, 0, 0}, BW_OK, ""},
};

static void test_argument(void **state) {
    const struct argument_case *c = *state;
    struct bw_limit_set limits;
    struct bw_error error = {0};
    enum bw_status status = bw_limits(bw_tables_find(c->table), c->target, &c->exposure, &limits, NULL, &error);
    assert_int_equal(status, c->want);
    assert_string_equal(error.text, c->text);
    if (status == BW_OK)
        return;
    assert_int_equal(limits.count, 0);
    assert_true(isnan(limits.limits[0].radiant_exposure_j_m2));
}

static void test_governing(void **state) {
    struct bw_limit_set limits;
    const struct bw_exposure blue = {440.0, 1000.0, 0.0, 0.0}, infrared = {1390.0, 1e-3, 0.0, 0.0};
    (void)state;
    assert_int_equal(bw_limits_eye(bw_tables_find("eu-2006-25"), &blue, &limits, NULL, NULL), BW_OK);
    assert_int_equal(limits.count, 2); /* thermal 1e4 J/m2, photochemical 1000 J/m2 */
    assert_int_equal(limits.limits[limits.governing].effect, BW_RETINA_PHOTOCHEMICAL);
    assert_int_equal(bw_limits_eye(bw_tables_find("icnirp-2013"), &infrared, &limits, NULL, NULL), BW_OK);
    assert_int_equal(limits.count, 2); /* CC = 8 + 10^5.6: the skin limit caps it */
    assert_int_equal(limits.limits[limits.governing].effect, BW_ANTERIOR);
}

/* The cone that the exposure is measured in: only IEC's source-size rows are not open. */
static void test_acceptance(void **state) {
    struct bw_limit_set limits;
    const struct bw_exposure exposure = {810.0, 0.01, 0.05, 0.0}, wide = {480.0, 50.0, 0.05, 0.0};
    (void)state;
    assert_int_equal(bw_limits_eye(bw_tables_find("iec-60825-1-2014"), &exposure, &limits, NULL, NULL), BW_OK);
    assert_true(fabs(limits.limits[0].acceptance_rad - 0.02) <= 1e-15); /* 200 mrad * sqrt(0.01) */
    assert_int_equal(bw_limits_eye(bw_tables_find("icnirp-2013"), &exposure, &limits, NULL, NULL), BW_OK);
    assert_true(isinf(limits.limits[0].acceptance_rad));
    assert_int_equal(bw_limits_eye(bw_tables_find("iec-60825-1-2014"), &wide, &limits, NULL, NULL), BW_OK);
    assert_int_equal(limits.limits[1].effect, BW_RETINA_PHOTOCHEMICAL);
    assert_true(isinf(limits.limits[1].acceptance_rad)); /* (alpha/gamma)^2 is in the limit */
    assert_string_equal(limits.limits[1].factors[1].name, "(alpha/gamma)^2");
    assert_true(fabs(limits.limits[1].factors[1].value - 2500.0 / 121.0) <= 1e-12);
}

/* ---- time edges ------------------------------------------------------------------------------- */

struct list_case {
    const char *name, *table;
    enum bw_target target;
    double wavelength_nm, subtense_mrad;
    size_t count;
    double edges_s[12];
};
static struct list_case list_cases[] = {
    {"eu 550 nm, point", "eu-2006-25", BW_EYE, 550, 0, 8, {1e-13, 1e-11, 1e-9, 1.8e-5, 10, 100, 1e4, 3e4}},
    {"iec 810 nm, 30 mrad",
     "iec-60825-1-2014",
     BW_EYE,
     810,
     30,
     8,
     {1e-13, 1e-11, 5e-6, 625e-6, 0.25, 10, 19.46884, 3e4}},
    {"iec 310 nm", "iec-60825-1-2014", BW_EYE, 310, 0, 4, {1e-13, 1e-9, 1e-3, 3e4}},
    {"icnirp 10.6 um", "icnirp-2013", BW_EYE, 10600, 0, 6, {1e-13, 1e-9, 1e-7, 0.35, 10, 3e4}},
    {"ansi skin", "ansi-z136-1-2014", BW_SKIN, 905, 0, 5, {1e-13, 1e-9, 1e-7, 10, 3e4}},
};

static void test_list(void **state) {
    const struct list_case *c = *state;
    const struct bw_exposure exposure = {c->wavelength_nm, 1.0, c->subtense_mrad * 1e-3, 0.0};
    double edges_s[BW_EDGES_MAX];
    size_t count = bw_limits_time_edges(bw_tables_find(c->table), c->target, &exposure, edges_s, BW_EDGES_MAX);
    for (size_t i = 0; i < count && i < c->count; i++)
        if (!(fabs(edges_s[i] / c->edges_s[i] - 1.0) <= 1e-6))
            fail_msg("edge %zu: got %.9g, want %.9g s", i, edges_s[i], c->edges_s[i]);
    assert_int_equal(count, c->count);
    assert_int_equal(bw_limits_time_edges(bw_tables_find(c->table), c->target, &exposure, edges_s, 2), 2);
}

enum {
    EDGES = sizeof edge_cases / sizeof edge_cases[0],
    ARGUMENTS = sizeof argument_cases / sizeof argument_cases[0],
    LISTS = sizeof list_cases / sizeof list_cases[0]
};

int main(void) {
    static char tables[][40] = {"ansi-z136-1-2014", "eu-2006-25", "icnirp-2013", "iec-60825-1-2014"};
    static struct CMUnitTest tests[EDGES + ARGUMENTS + LISTS + 12];
    size_t n = 0;
    for (size_t i = 0; i < EDGES; i++)
        tests[n++] = (struct CMUnitTest){edge_cases[i].name, test_edge, NULL, NULL, &edge_cases[i]};
    for (size_t i = 0; i < ARGUMENTS; i++)
        tests[n++] = (struct CMUnitTest){argument_cases[i].name, test_argument, NULL, NULL, &argument_cases[i]};
    for (size_t i = 0; i < LISTS; i++)
        tests[n++] = (struct CMUnitTest){list_cases[i].name, test_list, NULL, NULL, &list_cases[i]};
    tests[n++] = (struct CMUnitTest){"printed steps, and no others", test_steps, NULL, NULL, NULL};
    tests[n++] = (struct CMUnitTest){"the Directive's ceiling", test_ceiling_step, NULL, NULL, NULL};
    tests[n++] = (struct CMUnitTest){"which effect governs", test_governing, NULL, NULL, NULL};
    tests[n++] = (struct CMUnitTest){"acceptance cone", test_acceptance, NULL, NULL, NULL};
    for (size_t i = 0; i < 4; i++) {
        tests[n++] = (struct CMUnitTest){"course with time", test_course, NULL, NULL, tables[i]};
        tests[n++] = (struct CMUnitTest){"course with source size", test_source_size, NULL, NULL, tables[i]};
    }
    return cmocka_run_group_tests_name("limits edges", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
