/* The library's limits against limits.csv: the published formulas in arbitrary precision (generate_limits.py),
 * written without a look at limits_tables/. One test a rule set and target; agreement to 1e-12 relative, and the
 * same effects present. */
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

static const char data[] = "tests/reference/limits.csv";

struct row {
    char rules[32], target[8], effect[32];
    double wavelength_nm, exposure_s, subtense_mrad, want_j_m2;
};

static bool read_row(FILE *file, struct row *row) {
    return fscanf(file, "%31[^,],%7[^,],%lf,%lf,%lf,%31[^,],%lf\n", row->rules, row->target, &row->wavelength_nm,
                  &row->exposure_s, &row->subtense_mrad, row->effect, &row->want_j_m2) == 7;
}

static bool same_exposure(const struct row *a, const struct row *b) {
    return memcmp(&a->wavelength_nm, &b->wavelength_nm, 3 * sizeof(double)) == 0 && strcmp(a->target, b->target) == 0 &&
           strcmp(a->rules, b->rules) == 0;
}

static void evaluate(const struct row *row, struct bw_limit_set *limits) {
    struct bw_error error = {0};
    struct bw_exposure exposure = {row->wavelength_nm, row->exposure_s, row->subtense_mrad / 1000, 0};
    const struct bw_table *table = bw_tables_find(row->rules);
    assert_non_null(table);
    enum bw_target target = strcmp(row->target, "eye") == 0 ? BW_EYE : BW_SKIN;
    if (bw_limits(table, target, &exposure, limits, NULL, &error) != BW_OK)
        fail_msg("%s %s %.17g nm %.17g s: %s", row->rules, row->target, row->wavelength_nm, row->exposure_s,
                 error.text);
}

static size_t check_row(const struct row *row, const struct bw_limit_set *limits) {
    for (size_t i = 0; i < limits->count; i++) {
        if (strcmp(bw_effect_name(limits->limits[i].effect), row->effect) != 0)
            continue;
        double got = limits->limits[i].radiant_exposure_j_m2;
        if (fabs(got / row->want_j_m2 - 1) <= 1e-12)
            return 0;
        print_error("%s %s %s %.17g nm %.17g s %g mrad: got %.15g by %s %s, want %.15g J/m2\n", row->rules, row->target,
                    row->effect, row->wavelength_nm, row->exposure_s, row->subtense_mrad, got,
                    limits->limits[i].source.section, limits->limits[i].source.row, row->want_j_m2);
        return 1;
    }
    print_error("%s %s %s %.17g nm %.17g s: the library has no such effect\n", row->rules, row->target, row->effect,
                row->wavelength_nm, row->exposure_s);
    return 1;
}

static size_t check_count(const struct row *row, const struct bw_limit_set *limits, size_t want) {
    if (want == limits->count)
        return 0;
    print_error("%s %s %.17g nm %.17g s: the library has %zu effects, the formulas %zu\n", row->rules, row->target,
                row->wavelength_nm, row->exposure_s, limits->count, want);
    return 1;
}

static void test_rules_and_target(void **state) {
    const char *const *names = *state;
    FILE *file = fopen(data, "r");
    assert_non_null(file);
    assert_int_equal(fscanf(file, "%*[^\n]\n"), 0);
    struct row row = {0}, last = {0};
    struct bw_limit_set limits = {0};
    size_t checked = 0, failed = 0, effects = 0;
    while (read_row(file, &row)) {
        if (strcmp(row.rules, names[0]) != 0 || strcmp(row.target, names[1]) != 0)
            continue;
        if (checked == 0 || !same_exposure(&row, &last)) {
            if (checked > 0)
                failed += check_count(&last, &limits, effects);
            evaluate(&row, &limits);
            effects = 0;
        }
        failed += check_row(&row, &limits);
        effects++;
        checked++;
        last = row;
    }
    fclose(file);
    assert_true(checked > 1000);
    if (failed > 0)
        fail_msg("%zu of %zu values differ", failed, checked);
}

int main(void) {
    static const char *names[][2] = {
        {"icnirp-2013", "eye"},  {"iec-60825-1-2014", "eye"},  {"eu-2006-25", "eye"},  {"ansi-z136-1-2014", "eye"},
        {"icnirp-2013", "skin"}, {"iec-60825-1-2014", "skin"}, {"eu-2006-25", "skin"}, {"ansi-z136-1-2014", "skin"},
    };
    enum { COUNT = sizeof names / sizeof names[0] };
    static char titles[COUNT][64];
    static struct CMUnitTest tests[COUNT];
    for (size_t i = 0; i < COUNT; i++) {
        snprintf(titles[i], sizeof titles[i], "%s %s", names[i][0], names[i][1]);
        tests[i] = (struct CMUnitTest){titles[i], test_rules_and_target, NULL, NULL, names[i]};
    }
    int failed = _cmocka_run_group_tests("limits against mpmath", tests, COUNT, NULL, NULL);
    return failed == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
