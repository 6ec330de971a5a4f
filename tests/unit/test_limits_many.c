/* Many exposures at once against the evaluator of one: the same answer to 1e-13 for every exposure, in every rule set,
 * on edges too; and the power of ten that both rest on, against the long double library. */
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

#include "../../src/limits/power_of_ten.h"

/* The same numbers in every run. */
struct dice {
    uint64_t state;
};
static double roll(struct dice *dice) {
    dice->state ^= dice->state << 13;
    dice->state ^= dice->state >> 7;
    dice->state ^= dice->state << 17;
    return (double)(dice->state >> 11) * 0x1p-53;
}
static double roll_log(struct dice *dice, double low, double high) {
    return low * pow(high / low, roll(dice));
}

enum { COUNT = 100000 };
struct exposures {
    double wavelengths_nm[COUNT], times_s[COUNT];
    double radiant_exposures_j_m2[COUNT], irradiances_w_m2[COUNT], apertures_m[COUNT];
};

static const double edges_nm[] = {180, 302.5, 303,  314,  315,  400,  450,  600,
                                  700, 1050,  1150, 1200, 1250, 1400, 1500, 1e6};
static const double edges_s[] = {1e-13, 1e-11, 1e-9, 1e-7, 5e-6, 1.3e-5, 1.8e-5, 6.25e-4,
                                 0.25,  0.3,   0.35, 10,   100,  1e3,    1e4,    3e4};
enum { EDGES = 16 };

/* On the edge, within its rounding, and just beyond. */
static double near(struct dice *dice, double edge) {
    static const double off[] = {0, 0, 0x1p-52, -0x1p-52, 5e-13, -5e-13, 2e-12, -2e-12};
    return edge * (1 + off[(size_t)(8 * roll(dice))]);
}

static void fill(struct exposures *many, uint64_t start) {
    struct dice dice = {start};
    for (size_t i = 0; i < COUNT; i++) {
        double x = roll(&dice), y = roll(&dice);
        many->wavelengths_nm[i] = x < 0.1   ? near(&dice, edges_nm[(size_t)(EDGES * roll(&dice))])
                                  : x < 0.6 ? 400 + 1000 * roll(&dice)
                                            : roll_log(&dice, 170, 1.1e6);
        many->times_s[i] = y < 0.1 ? near(&dice, edges_s[(size_t)(EDGES * roll(&dice))]) : roll_log(&dice, 5e-14, 5e4);
    }
}

static bool agrees(double got, double want) {
    return fabs(got - want) <= 1e-13 * fabs(want);
}

/* Compares place by place. Returns: the number of exposures without a limit. */
static size_t compare(const struct bw_table *table, enum bw_target target, const struct bw_exposures *exposures,
                      const struct exposures *got) {
    size_t missing = 0;
    for (size_t i = 0; i < exposures->count; i++) {
        struct bw_exposure one = {exposures->wavelengths_nm[i], exposures->times_s[i], exposures->subtense_rad,
                                  exposures->area_m2};
        struct bw_limit_set set;
        if (bw_limits(table, target, &one, &set, NULL, NULL) != BW_OK) {
            missing++;
            if (!isnan(got->radiant_exposures_j_m2[i]) || !isnan(got->irradiances_w_m2[i]) ||
                !isnan(got->apertures_m[i]))
                fail_msg("%.17g nm %.17g s has no limit, got %.17g J/m2", one.wavelength_nm, one.exposure_s,
                         got->radiant_exposures_j_m2[i]);
            continue;
        }
        const struct bw_limit *want = &set.limits[set.governing];
        if (!agrees(got->radiant_exposures_j_m2[i], want->radiant_exposure_j_m2) ||
            !agrees(got->irradiances_w_m2[i], want->irradiance_w_m2) || !agrees(got->apertures_m[i], want->aperture_m))
            fail_msg("%s %.17g nm %.17g s: got %.17g J/m2, %.17g W/m2, %g m; want %.17g, %.17g, %g", bw_table_id(table),
                     one.wavelength_nm, one.exposure_s, got->radiant_exposures_j_m2[i], got->irradiances_w_m2[i],
                     got->apertures_m[i], want->radiant_exposure_j_m2, want->irradiance_w_m2, want->aperture_m);
    }
    return missing;
}

static size_t check(const struct bw_table *table, enum bw_target target, struct exposures *many, size_t count,
                    double subtense_rad, double area_m2) {
    struct bw_exposures exposures = {count, many->wavelengths_nm, many->times_s, subtense_rad, area_m2};
    size_t missing = bw_limits_many(table, target, &exposures, many->radiant_exposures_j_m2, many->irradiances_w_m2,
                                    many->apertures_m);
    size_t want = compare(table, target, &exposures, many);
    assert_int_equal(missing, want);
    return missing;
}

static struct exposures *new_exposures(uint64_t start) {
    struct exposures *many = calloc(1, sizeof *many);
    assert_non_null(many);
    fill(many, start);
    return many;
}

/* ---- rule sets -------------------------------------------------------------------------------- */

struct source_case {
    const char *name;
    double subtense_rad, area_m2;
};
static struct source_case sources[] = {
    {"point source", 0, 0},
    {"source of alpha_min", 1.5e-3, 0},
    {"source of 50 mrad, skin of 0.05 m2", 0.05, 0.05},
    {"source of 90 degrees, skin of 1 m2", 1.5707963267948966, 1},
};

static void test_source(void **state) {
    const struct source_case *source = *state;
    struct exposures *many = new_exposures(88172645463325252u);
    size_t count = source == &sources[0] ? COUNT : COUNT / 4;
    for (size_t i = 0; i < bw_tables_count(); i++) {
        size_t eye = check(bw_tables_at(i), BW_EYE, many, count, source->subtense_rad, source->area_m2);
        size_t skin = check(bw_tables_at(i), BW_SKIN, many, count, source->subtense_rad, source->area_m2);
        assert_true(eye > 0 && eye < count * 3 / 4); /* both kinds are there */
        assert_true(skin > 0 && skin < count * 3 / 4);
    }
    free(many);
}

static void test_eye_entry(void **state) {
    (void)state;
    struct exposures *many = new_exposures(1);
    const struct bw_table *table = bw_tables_find("iec-60825-1-2014");
    check(table, BW_EYE, many, COUNT, 0, 0);
    double *again = calloc(2 * (size_t)COUNT, sizeof *again);
    assert_non_null(again);
    bw_limits_eye_many(table, COUNT, many->wavelengths_nm, many->times_s, again, again + COUNT);
    assert_memory_equal(again, many->radiant_exposures_j_m2, COUNT * sizeof *again);
    assert_memory_equal(again + COUNT, many->irradiances_w_m2, COUNT * sizeof *again);
    free(again);
    free(many);
}

/* Every count around the sizes of a batch and of a block. */
static void test_counts(void **state) {
    (void)state;
    static const size_t counts[] = {1, 2, 127, 128, 129, 8191, 8192, 8193, 16384};
    struct exposures *many = new_exposures(2);
    for (size_t i = 0; i < sizeof counts / sizeof counts[0]; i++) {
        check(bw_tables_find("icnirp-2013"), BW_EYE, many, counts[i], 0, 0);
        for (size_t j = 0; j < counts[i]; j++) /* all in one cell */
            many->wavelengths_nm[j] = 650, many->times_s[j] = 1e-3;
        assert_int_equal(check(bw_tables_find("icnirp-2013"), BW_EYE, many, counts[i], 0, 0), 0);
        fill(many, 3 + i);
    }
    assert_int_equal(check(bw_tables_find("icnirp-2013"), BW_EYE, many, 0, 0, 0), 0);
    free(many);
}

/* ---- what is no exposure ---------------------------------------------------------------------- */

static void test_no_exposures(void **state) {
    (void)state;
    static const double odd[] = {(double)NAN, -(double)NAN, HUGE_VAL, -HUGE_VAL, 0,     -0.0,  -1,
                                 -650,        1e300,        1e-300,   5e-324,    179.9, 1.01e6};
    enum { ODD = sizeof odd / sizeof odd[0] };
    struct exposures *many = new_exposures(4);
    for (size_t i = 0; i < ODD; i++) {
        many->wavelengths_nm[2 * i] = odd[i], many->times_s[2 * i] = 1;
        many->wavelengths_nm[2 * i + 1] = 650, many->times_s[2 * i + 1] = odd[i] > 100 && odd[i] < 1e6 ? 4e4 : odd[i];
    }
    for (size_t i = 0; i < bw_tables_count(); i++)
        assert_int_equal(check(bw_tables_at(i), BW_EYE, many, 2 * (size_t)ODD, 0, 0), 2 * ODD);
    free(many);
}

static void test_no_source(void **state) {
    (void)state;
    static const double subtenses[] = {(double)NAN, -1e-3, 1.6, HUGE_VAL};
    static const double areas[] = {(double)NAN, -1, HUGE_VAL};
    struct exposures *many = new_exposures(5);
    const struct bw_table *table = bw_tables_find("eu-2006-25");
    for (size_t i = 0; i < sizeof subtenses / sizeof subtenses[0]; i++)
        assert_int_equal(check(table, BW_EYE, many, 5000, subtenses[i], 0), 5000);
    for (size_t i = 0; i < sizeof areas / sizeof areas[0]; i++)
        assert_int_equal(check(table, BW_SKIN, many, 5000, 0, areas[i]), 5000);
    free(many);
}

static void test_columns_not_wanted(void **state) {
    (void)state;
    struct exposures *many = new_exposures(6);
    struct bw_exposures exposures = {COUNT, many->wavelengths_nm, many->times_s, 0, 0};
    const struct bw_table *table = bw_tables_find("icnirp-2013");
    size_t missing = bw_limits_many(table, BW_EYE, &exposures, NULL, NULL, NULL);
    assert_int_equal(missing, check(table, BW_EYE, many, COUNT, 0, 0));
    free(many);
}

/* ---- every effect, each exposure once --------------------------------------------------------- */

struct visits {
    const struct bw_table *table;
    const struct exposures *many;
    double subtense_rad;
    unsigned char seen[COUNT];
};

static void visit(void *context, const struct bw_limit_batch *batch) {
    struct visits *visits = context;
    assert_in_range(batch->count, 1, BW_BATCH_MAX);
    for (size_t i = 0; i < batch->count; i++) {
        size_t place = batch->places[i];
        struct bw_exposure one = {visits->many->wavelengths_nm[place], visits->many->times_s[place],
                                  visits->subtense_rad, 0};
        struct bw_limit_set set = {0};
        visits->seen[place]++;
        bw_limits_eye(visits->table, &one, &set, NULL, NULL);
        assert_int_equal(batch->column_count, set.count);
        for (size_t j = 0; j < set.count; j++) {
            const struct bw_limit_column *column = &batch->columns[j];
            const struct bw_limit *want = &set.limits[j];
            assert_int_equal(column->effect, want->effect);
            bool open = isinf(want->acceptance_rad) && isinf(column->acceptance_rad[i]);
            if (!agrees(column->radiant_exposure_j_m2[i], want->radiant_exposure_j_m2) ||
                !agrees(column->irradiance_w_m2[i], want->irradiance_w_m2) ||
                !agrees(column->aperture_m[i], want->aperture_m) ||
                !(open || agrees(column->acceptance_rad[i], want->acceptance_rad)))
                fail_msg("%.17g nm %.17g s: %s differs", one.wavelength_nm, one.exposure_s,
                         bw_effect_name(want->effect));
        }
    }
}

static void test_visits(void **state) {
    const struct source_case *source = *state;
    struct exposures *many = new_exposures(7);
    struct visits *visits = calloc(1, sizeof *visits);
    assert_non_null(visits);
    *visits = (struct visits){
        .table = bw_tables_find("iec-60825-1-2014"), .many = many, .subtense_rad = source->subtense_rad};
    struct bw_exposures exposures = {COUNT / 4, many->wavelengths_nm, many->times_s, source->subtense_rad, 0};
    bw_limits_visit(visits->table, BW_EYE, &exposures, visit, visits);
    for (size_t i = 0; i < COUNT; i++)
        assert_int_equal(visits->seen[i], i < COUNT / 4);
    free(visits);
    free(many);
}

/* ---- tables that are loaded ------------------------------------------------------------------- */

static const char head[] = "[table]\nid = small\ntitle = small\nsource = invented for this test\nedition = first\n";
/* Radiance, an exponent that is not among the common ones, an inverse factor, a factor by the exposed area. */
static const char uncommon[] = "[factor ca]\n"
                               "r01 = 400 .. 1400 | 0 | 1 | 0.001 | 400 | A | memory\n"
                               "[eye retina-thermal]\n"
                               "covers = 400 .. 1400 | 1e-13 .. 3e4\n"
                               "r01 = 400 .. 1000 | 1e-13 .. 3e4 | H | 18 | 0.7 | ca | B | memory\n"
                               "r02 = 1000 .. 1400 | 1e-13 .. 3e4 | H | 18 | 0.5 | ca^-1 | B | memory\n"
                               "[eye retina-photochemical]\n"
                               "covers = 400 .. 600 | 10 .. 3e4\n"
                               "r01 = 400 .. 600 | 10 .. 3e4 | G | 1e6 | 0 | - | B | memory\n"
                               "[skin]\n"
                               "covers = 400 .. 1400 | 1e-13 .. 3e4\n"
                               "r01 = 400 .. 1400 | 1e-13 .. 3e4 | E | 2000 | 0 | ca | C | memory\n"
                               "[skin large-area]\n"
                               "area_m2 = 0.1 ..\n"
                               "covers = 400 .. 1400 | 10 .. 3e4\n"
                               "r01 = 400 .. 1400 | 10 .. 3e4 | E | 10 | 0 | area^-1 | C | memory\n";
static const char skin_only[] = "[skin]\n"
                                "covers = 400 .. 1400 | 1e-13 .. 3e4\n";
static const char tail[] = "[exposure]\n"
                           "r01 = visible | 400 .. 700 | 0.25 | G | memory\n"
                           "r02 = glance | 400 .. 1400 | 100 | G | memory\n"
                           "r03 = diffuse | 400 .. 1400 | 600 | G | memory\n"
                           "r04 = skin | 400 .. 1400 | 100 | G | memory\n"
                           "r05 = alignment | 400 .. 700 | 2 | G | memory\n"
                           "r06 = working-day | 400 .. 1400 | 3e4 | G | memory\n";

static struct bw_table *load(const char *text) {
    struct bw_ini ini = {0};
    struct bw_faults faults = {0};
    struct bw_error error = {0};
    struct bw_table *table = NULL;
    assert_int_equal(bw_ini_read_bytes(text, strlen(text), &ini, &faults, &error), BW_OK);
    if (bw_table_load(&ini, &table, &faults, &error) != BW_OK)
        fail_msg("line %d [%s] %s: %s", faults.count > 0 ? faults.items[0].line : 0,
                 faults.count > 0 ? faults.items[0].section : "", faults.count > 0 ? faults.items[0].key : "",
                 faults.count > 0 ? faults.items[0].text : error.text);
    bw_faults_free(&faults);
    bw_ini_free(&ini);
    return table;
}

static void test_uncommon_rows(void **state) {
    (void)state;
    char text[8192];
    snprintf(text, sizeof text, "%s%s%s%s", head, uncommon,
             "[aperture]\n"
             "r01 = retina-thermal | 400 .. 1400 | 1e-13 .. 3e4 | 7 | 0.1 | D | memory\n"
             "r02 = retina-photochemical | 400 .. 600 | 10 .. 3e4 | 7 | 0 | D | memory\n"
             "r03 = skin | 400 .. 1400 | 1e-13 .. 3e4 | 3.5 | 0 | D | memory\n"
             "[cone]\n"
             "r01 = 400 .. 600 | 10 .. 3e4 | 11 | 0 | D | memory\n"
             "[repetition]\n"
             "ti_01 = 400 .. 1400 | 5e-6 | E | memory\n"
             "count = all | E | memory\n"
             "[additivity]\n"
             "r01 = 400 .. 1400 | 400 .. 1400 | eye skin | F | memory\n",
             tail);
    struct bw_table *table = load(text);
    struct exposures *many = new_exposures(8);
    check(table, BW_EYE, many, COUNT, 0, 0);
    check(table, BW_EYE, many, COUNT, 0.05, 0);
    check(table, BW_SKIN, many, COUNT, 0, 0);
    check(table, BW_SKIN, many, COUNT, 0, 0.5);
    free(many);
    bw_table_free(table);
}

/* Far more cells than buckets: a row a nanometre. */
static void test_long_table(void **state) {
    (void)state;
    size_t size = 200000;
    char *text = calloc(size, 1);
    assert_non_null(text);
    size_t at = (size_t)snprintf(text, size, "%s%s", head, skin_only);
    for (int i = 0; i < 1000; i++)
        at +=
            (size_t)snprintf(text + at, size - at, "r%02d = %d .. %s%d | 1e-13 .. 3e4 | E | %d | 0 | - | C | memory\n",
                             i + 1, 400 + i, i < 999 ? "<" : "", 401 + i, 100 + i);
    snprintf(text + at, size - at, "%s%s",
             "[aperture]\n"
             "r01 = skin | 400 .. 1400 | 1e-13 .. 3e4 | 3.5 | 0 | D | memory\n"
             "[repetition]\n"
             "ti_01 = 400 .. 1400 | 5e-6 | E | memory\n"
             "count = all | E | memory\n"
             "[additivity]\n"
             "r01 = 400 .. 1400 | 400 .. 1400 | eye skin | F | memory\n",
             tail);
    struct bw_table *table = load(text);
    assert_true(table->plan[BW_SKIN].cell_count > 1100);
    struct exposures *many = new_exposures(9);
    check(table, BW_SKIN, many, COUNT, 0, 0);
    assert_int_equal(check(table, BW_EYE, many, 5000, 0, 0), 5000); /* it has no rows for the eye */
    free(many);
    bw_table_free(table);
    free(text);
}

/* ---- the power of ten ------------------------------------------------------------------------- */

static void test_power_of_ten(void **state) {
    (void)state;
    struct dice dice = {10};
    for (size_t i = 0; i < 200000; i++) {
        double y = i % 2 == 0 ? 600 * roll(&dice) - 300 : 4 * roll(&dice) - 2;
        long double want = powl(10, (long double)y);
        double got = power_of_ten(y), unit = ldexp(1, ilogb((double)want) - 52);
        if (!(fabsl((long double)got - want) <= 1.5L * (long double)unit))
            fail_msg("10^%.17g: got %.17g, want %.17Lg", y, got, want);
    }
    for (int n = -22; n <= 22; n++)
        if (!(fabs(power_of_ten(n) / pow(10, n) - 1) <= 0x1p-52))
            fail_msg("10^%d: got %.17g", n, power_of_ten(n));
    assert_memory_equal(&(double){power_of_ten(0)}, &(double){1}, sizeof(double));
    assert_false(isnan(power_of_ten(300)) || isnan(power_of_ten(-300)));
    assert_true(isnan(power_of_ten(300.1)) && isnan(power_of_ten(-300.1)) && isnan(power_of_ten((double)NAN)) &&
                isnan(power_of_ten((double)INFINITY)));
}

int main(void) {
    enum { SOURCES = sizeof sources / sizeof sources[0] };
    static char names[SOURCES][80];
    struct CMUnitTest tests[2 * SOURCES + 8];
    size_t count = 0;
    for (size_t i = 0; i < SOURCES; i++) {
        snprintf(names[i], sizeof names[i], "every effect once, %s", sources[i].name);
        tests[count++] = (struct CMUnitTest){sources[i].name, test_source, NULL, NULL, &sources[i]};
        tests[count++] = (struct CMUnitTest){names[i], test_visits, NULL, NULL, &sources[i]};
    }
    tests[count++] = (struct CMUnitTest){"entry for the eye", test_eye_entry, NULL, NULL, NULL};
    tests[count++] = (struct CMUnitTest){"counts", test_counts, NULL, NULL, NULL};
    tests[count++] = (struct CMUnitTest){"no exposures", test_no_exposures, NULL, NULL, NULL};
    tests[count++] = (struct CMUnitTest){"no source", test_no_source, NULL, NULL, NULL};
    tests[count++] = (struct CMUnitTest){"columns not wanted", test_columns_not_wanted, NULL, NULL, NULL};
    tests[count++] = (struct CMUnitTest){"uncommon rows", test_uncommon_rows, NULL, NULL, NULL};
    tests[count++] = (struct CMUnitTest){"long table", test_long_table, NULL, NULL, NULL};
    tests[count++] = (struct CMUnitTest){"power of ten", test_power_of_ten, NULL, NULL, NULL};
    int failed = _cmocka_run_group_tests("many limits at once", tests, count, NULL, NULL);
    return failed == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
