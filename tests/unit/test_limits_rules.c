/* What the rule sets say of trains, sums and customary times, and the materials: value by value from the published
 * facts. */
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

static const char eu[] = "eu-2006-25", icnirp[] = "icnirp-2013", iec[] = "iec-60825-1-2014",
                  ansi[] = "ansi-z136-1-2014";

/* ---- grouping time ---------------------------------------------------------------------------- */

struct ti_case {
    const char *name, *table;
    double wavelength_nm, want_s; /* 0: none */
    const char *source;
};
static struct ti_case ti_cases[] = {
    {"eu 300", eu, 300, 0, "Table 2.6"},
    {"eu 350", eu, 350, 1e-9, "Table 2.6"},
    {"eu 400, the retina's", eu, 400, 1.8e-5, "Table 2.6"},
    {"eu 810", eu, 810, 1.8e-5, "Table 2.6"},
    {"eu 1050, the lower limit's", eu, 1050, 1.8e-5, "Table 2.6"},
    {"eu 1064", eu, 1064, 5e-5, "Table 2.6"},
    {"eu 1450", eu, 1450, 1e-3, "Table 2.6"},
    {"eu 1550", eu, 1550, 10, "Table 2.6"},
    {"eu 1500, the lower limit's", eu, 1500, 1e-3, "Table 2.6"},
    {"eu 2000", eu, 2000, 1e-3, "Table 2.6"},
    {"eu 10600", eu, 10600, 1e-7, "Table 2.6"},
    {"icnirp 350", icnirp, 350, 1e-9, "from memory"},
    {"icnirp 810", icnirp, 810, 5e-6, "from memory"},
    {"icnirp 1064", icnirp, 1064, 1.3e-5, "from memory"},
    {"icnirp 1550", icnirp, 1550, 10, "from memory"},
    {"iec 810", iec, 810, 5e-6, "from memory"},
    {"iec 1320", iec, 1320, 1.3e-5, "from memory"},
    {"iec 10600", iec, 10600, 1e-7, "from memory"},
    {"ansi 532", ansi, 532, 5e-6, "from memory"},
    {"ansi 1100", ansi, 1100, 1.3e-5, "from memory"},
    {"ansi 1300", ansi, 1300, 0, "not covered"},
    {"NaN", eu, (double)NAN, 0, "not covered"},
};

static void test_ti(void **state) {
    const struct ti_case *c = *state;
    struct bw_source_note note = {0};
    double ti_s = -1.0;
    bool found = bw_limits_grouping_time(bw_tables_find(c->table), c->wavelength_nm, &ti_s, &note);
    assert_int_equal(found, c->want_s > 0.0);
    if (!(fabs(ti_s - c->want_s) <= 1e-15 * c->want_s))
        fail_msg("got %.9g, want %.9g s [%s]", ti_s, c->want_s, c->source);
    if (found)
        assert_int_equal(note.known, c->table == eu ? BW_READ : BW_MEMORY);
}

/* ---- where the correction holds, and how pulses are counted ----------------------------------- */

struct applies_case {
    const char *name, *table;
    enum bw_effect effect;
    double wavelength_nm;
    bool want;
};
static struct applies_case applies_cases[] = {
    {"eu retina", eu, BW_RETINA_THERMAL, 810, true},
    {"eu anterior: every thermal limit of the eye", eu, BW_ANTERIOR, 10600, true},
    {"eu ultraviolet from 315", eu, BW_ULTRAVIOLET, 355, true},
    {"eu ultraviolet below 315: no Tmin", eu, BW_ULTRAVIOLET, 308, false},
    {"eu skin", eu, BW_SKIN_EFFECT, 810, false},
    {"eu photochemical", eu, BW_RETINA_PHOTOCHEMICAL, 450, false},
    {"icnirp retina", icnirp, BW_RETINA_THERMAL, 1064, true},
    {"icnirp anterior", icnirp, BW_ANTERIOR, 10600, false},
    {"icnirp ultraviolet", icnirp, BW_ULTRAVIOLET, 355, false},
    {"iec retina", iec, BW_RETINA_THERMAL, 400, true},
    {"iec anterior", iec, BW_ANTERIOR, 1300, false},
    {"iec skin", iec, BW_SKIN_EFFECT, 905, false},
    {"ansi retina", ansi, BW_RETINA_THERMAL, 905, true},
    {"ansi beyond its range", ansi, BW_RETINA_THERMAL, 1300, false},
};

static void test_applies(void **state) {
    const struct applies_case *c = *state;
    assert_int_equal(bw_limits_train_applies(bw_tables_find(c->table), c->effect, c->wavelength_nm), c->want);
}

static void test_counting(void **state) {
    const struct bw_exposure point = {905, 100, 0, 0}, middle = {905, 100, 0.05075, 0}, large = {905, 100, 0.2, 0};
    (void)state;
    assert_true(isinf(bw_limits_counting_time(bw_tables_find(eu), &point))); /* no cut at T2 */
    assert_true(fabs(bw_limits_counting_time(bw_tables_find(icnirp), &point) - 10.0) <= 1e-12);
    assert_true(fabs(bw_limits_counting_time(bw_tables_find(iec), &middle) - 31.6227766016838) <= 1e-9); /* 10^1.5 */
    assert_true(fabs(bw_limits_counting_time(bw_tables_find(ansi), &large) - 100.0) <= 1e-12);
    assert_true(isinf(bw_limits_train_longest_pulse(bw_tables_find(icnirp))));
    assert_true(isinf(bw_limits_train_longest_pulse(bw_tables_find(eu))));
    assert_true(fabs(bw_limits_train_longest_pulse(bw_tables_find(iec)) - 0.25) <= 0.0);
}

/* ---- the correction --------------------------------------------------------------------------- */

struct train_case {
    const char *name, *table;
    double pulse_s, ti_s, pulses, exposure_s, subtense_mrad, want;
    const char *source;
};
static struct train_case train_cases[] = {
    {"eu N = 1", eu, 1e-7, 1.8e-5, 1, 10, 0, 1, "one pulse"},
    {"eu N = 16", eu, 1e-7, 1.8e-5, 16, 10, 0, 0.5, "N^-0.25"},
    {"eu N = 1e8, no floor", eu, 1e-3, 1.8e-5, 1e8, 1e4, 50, 0.01, "N^-0.25"},
    {"eu short pulse too", eu, 1e-9, 1.8e-5, 625, 0.25, 0, 0.2, "N^-0.25"},
    {"iec short, 0.25 s", iec, 1e-7, 5e-6, 1e6, 0.25, 0, 1, "exposure up to 0.25 s"},
    {"iec short, 0.25 s computed", iec, 1e-7, 5e-6, 1e6, 0.1 + 0.15, 0, 1, "exposure up to 0.25 s"},
    {"iec short, N = 600", iec, 1e-7, 5e-6, 600, 10, 0, 1, "N up to 600"},
    {"iec short, N = 700", iec, 1e-7, 5e-6, 700, 10, 0, 0.972066, "5 N^-0.25"},
    {"iec short, N = 601 not above 1", iec, 1e-7, 5e-6, 601, 10, 0, 1, "5 * 601^-0.25 = 1.0098"},
    {"iec short, N = 10000", iec, 1e-7, 5e-6, 1e4, 10, 0, 0.5, "5 N^-0.25"},
    {"iec short, N = 1e5", iec, 1e-7, 5e-6, 1e5, 10, 0, 0.4, "floor 0.4"},
    {"iec group of length Ti is short", iec, 5e-6, 5e-6, 1e4, 10, 50, 0.5, "5 N^-0.25"},
    {"iec long, 5 mrad", iec, 1e-3, 5e-6, 1e4, 10, 5, 1, "alpha up to 5 mrad"},
    {"iec long, just above 5 mrad, N = 16", iec, 1e-3, 5e-6, 16, 10, 5.001, 0.5, "N^-0.25"},
    {"iec long, 1 ms: alpha_max 6.32", iec, 1e-3, 5e-6, 1e4, 10, 6.3, 0.4, "to alpha_max, N above 40"},
    {"iec long, beyond alpha_max", iec, 1e-3, 5e-6, 1e4, 10, 6.4, 0.2, "beyond alpha_max, N above 625"},
    {"iec long, to alpha_max, N = 40", iec, 1e-3, 5e-6, 40, 10, 6, 0.397635, "N^-0.25 to N = 40"},
    {"iec long, to alpha_max, N = 41", iec, 1e-3, 5e-6, 41, 10, 6, 0.4, "else 0.4"},
    {"iec long, beyond, N = 256", iec, 1e-3, 5e-6, 256, 10, 50, 0.25, "N^-0.25"},
    {"iec long, beyond, N = 625", iec, 1e-3, 5e-6, 625, 10, 50, 0.2, "N^-0.25"},
    {"iec long, 100 mrad", iec, 1e-3, 5e-6, 16, 10, 100, 0.5, "not above 100 mrad"},
    {"iec long, above 100 mrad", iec, 1e-3, 5e-6, 16, 10, 100.1, 1, "alpha above 100 mrad"},
    {"iec long, 20 us pulse: alpha_max is 5", iec, 2e-5, 5e-6, 1e4, 10, 5.1, 0.2, "beyond alpha_max"},
    {"iec pulse above 0.25 s", iec, 0.3, 5e-6, 16, 10, 50, 1, "only for pulses up to 0.25 s"},
    {"iec pulse of 0.25 s", iec, 0.25, 5e-6, 16, 10, 50, 0.5, "alpha_max 100: N^-0.25"},
    {"icnirp short", icnirp, 5e-6, 5e-6, 1e6, 100, 0, 1, "pulse up to Ti"},
    {"icnirp long, N = 16", icnirp, 1e-5, 5e-6, 16, 10, 20, 0.5, "N^-0.25"},
    {"icnirp long, point", icnirp, 1e-3, 5e-6, 16, 10, 0, 1, "alpha up to 5 mrad"},
    {"icnirp long, 0.3 s", icnirp, 0.3, 5e-6, 16, 10, 50, 0.5, "names no longest pulse"},
    {"icnirp large N", icnirp, 1e-3, 5e-6, 1e9, 3e4, 50, 0.2, "else 0.2"},
    {"ansi long", ansi, 1e-3, 5e-6, 81, 10, 50, 1.0 / 3.0, "as icnirp"},
    {"N below 1 counts as 1", eu, 1e-7, 1.8e-5, 0.5, 10, 0, 1, "one pulse"},
    {"NaN pulses", eu, 1e-7, 1.8e-5, (double)NAN, 10, 0, (double)NAN, ""},
    {"NaN duration", iec, (double)NAN, 5e-6, 10, 10, 0, (double)NAN, ""},
    {"NaN subtense", iec, 1e-7, 5e-6, 10, 10, (double)NAN, (double)NAN, ""},
    {"NaN exposure", iec, 1e-7, 5e-6, 10, (double)NAN, 0, (double)NAN, ""},
};

static void test_train(void **state) {
    const struct train_case *c = *state;
    const struct bw_train_count count = {c->pulse_s, c->ti_s, c->pulses, c->exposure_s, c->subtense_mrad * 1e-3};
    struct bw_source_note note = {0};
    struct bw_working working = {0};
    double got = bw_limits_train_correction(bw_tables_find(c->table), &count, &note, &working);
    if (isnan(c->want)) {
        assert_true(isnan(got));
        assert_int_equal(working.count, 0);
        return;
    }
    if (!(fabs(got - c->want) <= 1e-6))
        fail_msg("got %.9g, want %.9g [%s]", got, c->want, c->source);
    assert_string_equal(note.section, "train");
    assert_int_equal(working.count, 1);
    assert_true(fabs(working.steps[0].value - got) <= 0.0);
    bw_working_free(&working);
}

/* ---- sums ------------------------------------------------------------------------------------- */

struct add_case {
    const char *name, *table;
    double first_nm, second_nm;
    bool want_eye, want_skin;
};
static struct add_case add_cases[] = {
    {"254 and 308", eu, 254, 308, true, true},        {"254 and 355", eu, 254, 355, false, false},
    {"254 and 810", eu, 254, 810, false, false},      {"308 and 10600", eu, 308, 10600, false, false},
    {"350 and 355", eu, 350, 355, true, true},        {"355 and 810", eu, 355, 810, false, true},
    {"355 and 1550", eu, 355, 1550, true, true},      {"650 and 905", eu, 650, 905, true, true},
    {"905 and 650", iec, 905, 650, true, true},       {"905 and 1550", icnirp, 905, 1550, false, true},
    {"1550 and 10600", iec, 1550, 10600, true, true}, {"1550 and 905", iec, 1550, 905, false, true},
    {"810 and 980", ansi, 810, 980, true, true},      {"810 and 1300", ansi, 810, 1300, false, false},
    {"NaN", eu, (double)NAN, 810, false, false},
};

static void test_add(void **state) {
    const struct add_case *c = *state;
    assert_int_equal(bw_limits_add(bw_tables_find(c->table), BW_EYE, c->first_nm, c->second_nm), c->want_eye);
    assert_int_equal(bw_limits_add(bw_tables_find(c->table), BW_SKIN, c->first_nm, c->second_nm), c->want_skin);
    assert_int_equal(bw_limits_add(bw_tables_find(c->table), BW_EYE, c->second_nm, c->first_nm), c->want_eye);
    assert_int_equal(bw_limits_add(bw_tables_find(c->table), BW_SKIN, c->second_nm, c->first_nm), c->want_skin);
}

/* ---- customary times -------------------------------------------------------------------------- */

struct time_case {
    const char *name, *table;
    enum bw_viewing viewing;
    double wavelengths_nm[3];
    size_t count;
    double want_s; /* 0: an error */
    bool aversion;
    enum bw_known known;
    const char *text; /* of the error */
};
static struct time_case time_cases[] = {
    {"glance, visible", eu, BW_GLANCE, {650}, 1, 0.25, true, BW_MEMORY, ""},
    {"glance, 400 and 700", iec, BW_GLANCE, {400, 700}, 2, 0.25, true, BW_MEMORY, ""},
    {"glance, 700.1", iec, BW_GLANCE, {700.1}, 1, 100, false, BW_READ, ""},
    {"glance, red beside infrared", eu, BW_GLANCE, {650, 810, 905}, 3, 100, false, BW_READ, ""},
    {"glance, infrared, icnirp", icnirp, BW_GLANCE, {905}, 1, 10, false, BW_MEMORY, ""},
    {"glance, infrared, ansi", ansi, BW_GLANCE, {905}, 1, 10, false, BW_MEMORY, ""},
    {"glance, ultraviolet", eu, BW_GLANCE, {355}, 1, 3e4, false, BW_READ, ""},
    {"glance, ultraviolet beside red", icnirp, BW_GLANCE, {650, 355}, 2, 3e4, false, BW_READ, ""},
    {"glance, 399.9", eu, BW_GLANCE, {399.9}, 1, 3e4, false, BW_READ, ""},
    {"glance, far infrared", iec, BW_GLANCE, {10600}, 1, 100, false, BW_READ, ""},
    {"diffuse, visible", eu, BW_DIFFUSE, {532}, 1, 600, false, BW_MEMORY, ""},
    {"diffuse, infrared", ansi, BW_DIFFUSE, {905}, 1, 600, false, BW_MEMORY, ""},
    {"diffuse, ultraviolet", iec, BW_DIFFUSE, {308}, 1, 3e4, false, BW_READ, ""},
    {"skin, visible: never 0.25 s", eu, BW_SKIN_TIME, {650}, 1, 100, false, BW_MEMORY, ""},
    {"skin, infrared, icnirp", icnirp, BW_SKIN_TIME, {905}, 1, 10, false, BW_MEMORY, ""},
    {"skin, ultraviolet", icnirp, BW_SKIN_TIME, {308}, 1, 3e4, false, BW_READ, ""},
    {"alignment, visible", eu, BW_ALIGNMENT, {635}, 1, 2, false, BW_READ, ""},
    {"alignment, not visible", eu, BW_ALIGNMENT, {635, 810}, 2, 100, false, BW_READ, ""},
    {"alignment, ultraviolet", eu, BW_ALIGNMENT, {635, 355}, 2, 3e4, false, BW_READ, ""},
    {"working day", eu, BW_WORKING_DAY, {635}, 1, 3e4, false, BW_READ, ""},
    {"working day, ansi", ansi, BW_WORKING_DAY, {905}, 1, 3e4, false, BW_MEMORY, ""},
    {"no wavelength", eu, BW_GLANCE, {0}, 0, 0, false, BW_READ, "no wavelength given for the exposure time"},
    {"NaN",
     eu,
     BW_GLANCE,
     {650, (double)NAN},
     2,
     0,
     false,
     BW_READ,
     "wavelength nan nm is not a wavelength; wants 180 to 1e6 nm"},
    {"outside", eu, BW_GLANCE, {650, 170}, 2, 0, false, BW_READ, "eu-2006-25 names no exposure time for 170 nm"},
    {"ansi, ultraviolet",
     ansi,
     BW_GLANCE,
     {355},
     1,
     0,
     false,
     BW_READ,
     "ansi-z136-1-2014 names no exposure time for 355 nm"},
};

static void test_time(void **state) {
    const struct time_case *c = *state;
    struct bw_exposure_time time;
    struct bw_error error = {0};
    enum bw_status status =
        bw_limits_exposure_time(bw_tables_find(c->table), c->viewing, c->wavelengths_nm, c->count, &time, &error);
    assert_string_equal(error.text, c->text);
    if (!(c->want_s > 0.0)) {
        assert_int_not_equal(status, BW_OK);
        assert_true(isnan(time.exposure_s));
        return;
    }
    assert_int_equal(status, BW_OK);
    if (!(fabs(time.exposure_s - c->want_s) <= 0.0))
        fail_msg("got %.9g, want %.9g s", time.exposure_s, c->want_s);
    assert_int_equal(time.aversion_response, c->aversion);
    assert_int_equal(time.source.known, c->known);
    assert_string_equal(time.source.table, c->table);
}

/* ---- the lists -------------------------------------------------------------------------------- */

static void test_tables(void **state) {
    static const char *const ids[] = {"ansi-z136-1-2014", "eu-2006-25", "icnirp-2013", "iec-60825-1-2014"};
    (void)state;
    assert_int_equal(bw_tables_count(), 4);
    for (size_t i = 0; i < 4; i++) {
        const struct bw_table *table = bw_tables_at(i);
        size_t rows, from_memory;
        assert_string_equal(bw_table_id(table), ids[i]); /* in order of id */
        assert_ptr_equal(bw_tables_find(ids[i]), table);
        assert_true(strlen(bw_table_source(table)) > 5 && strlen(bw_table_title(table)) > 5);
        assert_true(strlen(bw_table_edition(table)) > 3);
        bw_table_counts(table, &rows, &from_memory);
        assert_true(rows > 60 && from_memory > 0 && from_memory < rows);
    }
    assert_null(bw_tables_at(4));
    assert_null(bw_tables_find("eu"));
}

static void test_spans(void **state) {
    double low_nm, high_nm;
    (void)state;
    bw_table_span(bw_tables_find(eu), BW_EYE, &low_nm, &high_nm);
    assert_true(fabs(low_nm - 180.0) <= 0.0 && fabs(high_nm - 1e6) <= 0.0);
    bw_table_span(bw_tables_find(ansi), BW_SKIN, &low_nm, &high_nm);
    assert_true(fabs(low_nm - 400.0) <= 0.0 && fabs(high_nm - 1200.0) <= 0.0);
}

/* Lines of at most 80 bytes, and the marks of what is only from memory. */
static void check_page(const struct bw_text *text) {
    for (const char *line = text->data; line != NULL && *line != '\0';) {
        size_t length = strcspn(line, "\n");
        if (length > 80)
            fail_msg("line of %zu: %.*s", length, (int)length, line);
        line += length + (line[length] == '\n');
    }
}

static void test_print(void **state) {
    (void)state;
    for (size_t i = 0; i < bw_tables_count(); i++) {
        struct bw_text text = {0};
        assert_int_equal(bw_table_print(bw_tables_at(i), &text), BW_OK);
        check_page(&text);
        assert_non_null(strstr(text.data, bw_table_id(bw_tables_at(i))));
        assert_non_null(strstr(text.data, "from memory"));
        assert_non_null(strstr(text.data, "eye retina-thermal"));
        assert_non_null(strstr(text.data, "CA"));
        bw_text_free(&text);
    }
    struct bw_text text = {0};
    assert_int_equal(bw_table_print(bw_tables_find(eu), &text), BW_OK);
    assert_non_null(
        strstr(text.data, "  400 .. 700   nm  1.8e-5 .. 10 s     H = 18 t^0.75 CE J/m2          Table 2.2\n"));
    assert_non_null(
        strstr(text.data, "  400 .. 700   nm  10 .. 3e4 s        E = 10 W/m2                    Table 2.3 *\n"));
    bw_text_free(&text);
}

/* ---- materials -------------------------------------------------------------------------------- */

struct material_case {
    const char *name;
    enum bw_finish finish;
    double reflectance, matt_reflectance, transmittance, refractive_index;
};
static struct material_case material_cases[] = {
    {"painted-wall", BW_MATT, 0.9, 0.9, 0, 0},
    {"skin", BW_MATT, 0.65, 0.65, 0, 0},
    {"brushed-steel", BW_MIRROR, 0.65, 0, 0, 0},
    {"mirror", BW_MIRROR, 0.97, 0, 0, 0},
    {"glass", BW_GLASS, 0.0426, 0, 1, 1.52},
    {"gloss-paint", BW_GLOSS, 0.0426, 0.9, 0, 1.52},
    {"unknown", BW_MIRROR, 1, 0, 0, 0},
    {"wood", BW_MATT, 1, 1, 0, 0},
    {"fabric", BW_MATT, 1, 1, 1, 0},
    {"opaque-screen", BW_MATT, 1, 1, 0, 0},
    {"polished-steel", BW_MIRROR, 1, 0, 0, 0},
};

static void test_material(void **state) {
    const struct material_case *c = *state;
    const struct bw_material *material = bw_materials_find(c->name);
    assert_non_null(material);
    assert_int_equal(material->finish, c->finish);
    assert_true(fabs(material->reflectance - c->reflectance) <= 0.0);
    assert_true(fabs(material->matt_reflectance - c->matt_reflectance) <= 0.0);
    assert_true(fabs(material->transmittance - c->transmittance) <= 0.0);
    assert_true(fabs(material->refractive_index - c->refractive_index) <= 0.0);
    assert_true(strlen(material->title) > 0 && strlen(material->source) > 0);
    assert_int_equal(material->known, BW_MEMORY);
}

static void test_materials(void **state) {
    struct bw_text text = {0};
    (void)state;
    assert_int_equal(bw_materials_count(), sizeof material_cases / sizeof material_cases[0]);
    for (size_t i = 1; i < bw_materials_count(); i++)
        assert_true(strcmp(bw_materials_at(i - 1)->name, bw_materials_at(i)->name) < 0);
    assert_null(bw_materials_at(bw_materials_count()));
    assert_null(bw_materials_find("chrome"));
    assert_int_equal(bw_materials_print(&text), BW_OK);
    check_page(&text);
    bw_text_free(&text);
}

#define COUNT(list) (sizeof(list) / sizeof(list)[0])

int main(void) {
    static struct CMUnitTest tests[COUNT(ti_cases) + COUNT(applies_cases) + COUNT(train_cases) + COUNT(add_cases) +
                                   COUNT(time_cases) + COUNT(material_cases) + 8];
    size_t n = 0;
    for (size_t i = 0; i < COUNT(ti_cases); i++)
        tests[n++] = (struct CMUnitTest){ti_cases[i].name, test_ti, NULL, NULL, &ti_cases[i]};
    for (size_t i = 0; i < COUNT(applies_cases); i++)
        tests[n++] = (struct CMUnitTest){applies_cases[i].name, test_applies, NULL, NULL, &applies_cases[i]};
    for (size_t i = 0; i < COUNT(train_cases); i++)
        tests[n++] = (struct CMUnitTest){train_cases[i].name, test_train, NULL, NULL, &train_cases[i]};
    for (size_t i = 0; i < COUNT(add_cases); i++)
        tests[n++] = (struct CMUnitTest){add_cases[i].name, test_add, NULL, NULL, &add_cases[i]};
    for (size_t i = 0; i < COUNT(time_cases); i++)
        tests[n++] = (struct CMUnitTest){time_cases[i].name, test_time, NULL, NULL, &time_cases[i]};
    for (size_t i = 0; i < COUNT(material_cases); i++)
        tests[n++] = (struct CMUnitTest){material_cases[i].name, test_material, NULL, NULL, &material_cases[i]};
    tests[n++] = (struct CMUnitTest){"counting time", test_counting, NULL, NULL, NULL};
    tests[n++] = (struct CMUnitTest){"rule sets", test_tables, NULL, NULL, NULL};
    tests[n++] = (struct CMUnitTest){"spans", test_spans, NULL, NULL, NULL};
    tests[n++] = (struct CMUnitTest){"printed page", test_print, NULL, NULL, NULL};
    tests[n++] = (struct CMUnitTest){"materials", test_materials, NULL, NULL, NULL};
    return _cmocka_run_group_tests("limits rules", tests, n, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
