/* Limits, apertures and acceptance angles just beside every printed edge against limits_edges.csv: the published
 * formulas in arbitrary precision (generate_limits.py). One test a rule set and target; agreement to 1e-12 relative,
 * and the same effects present, no more. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <cmocka.h>

#include "reference.h"

struct group {
    const char *rules;
    enum bw_target target;
    const struct reference_points *points;
};

static void test_group(void **state) {
    const struct group *group = *state;
    const struct bw_table *table = bw_tables_find(group->rules);
    size_t checked = 0, failed = 0;
    char why[REFERENCE_WHY] = "";
    assert_non_null(table);
    for (size_t i = 0; i < group->points->count; i++) {
        const struct reference_point *point = &group->points->items[i];
        if (strcmp(point->rules, group->rules) != 0 || point->target != group->target)
            continue;
        checked++;
        if (reference_point_holds(table, point, why))
            continue;
        failed++;
        print_error("%s %.10g nm %.10g s %.10g mrad %.10g m2: %s\n", group->rules, point->exposure.wavelength_nm,
                    point->exposure.exposure_s, point->exposure.subtense_rad * 1e3, point->exposure.area_m2, why);
    }
    assert_true(checked > 250);
    if (failed > 0)
        fail_msg("%zu of %zu places differ", failed, checked);
}

int main(void) {
    static struct reference_points points;
    static struct group groups[] = {
        {"icnirp-2013", BW_EYE, &points},      {"icnirp-2013", BW_SKIN, &points},
        {"iec-60825-1-2014", BW_EYE, &points}, {"iec-60825-1-2014", BW_SKIN, &points},
        {"eu-2006-25", BW_EYE, &points},       {"eu-2006-25", BW_SKIN, &points},
        {"ansi-z136-1-2014", BW_EYE, &points}, {"ansi-z136-1-2014", BW_SKIN, &points},
    };
    enum { COUNT = sizeof groups / sizeof groups[0] };
    static char titles[COUNT][64];
    static struct CMUnitTest tests[COUNT];
    points = reference_read_points("tests/reference/limits_edges.csv");
    for (size_t i = 0; i < COUNT; i++) {
        snprintf(titles[i], sizeof titles[i], "%s %s", groups[i].rules, groups[i].target == BW_EYE ? "eye" : "skin");
        tests[i] = (struct CMUnitTest){titles[i], test_group, NULL, NULL, &groups[i]};
    }
    int failed = cmocka_run_group_tests_name("edges against mpmath", tests, NULL, NULL);
    free(points.items);
    return failed == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
