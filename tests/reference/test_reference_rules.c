/* Factors, grouping and counting times, train corrections, sums and customary times against limits_rules.csv, and the
 * materials against materials.csv (generate_rules.py). One test a rule set and statement; agreement to 1e-12
 * relative. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <cmocka.h>

#include "reference.h"

struct group {
    const char *rules, *what;
    const struct reference_rules *all;
};

static void test_group(void **state) {
    const struct group *group = *state;
    const struct bw_table *table = bw_tables_find(group->rules);
    size_t checked = 0, failed = 0;
    assert_non_null(table);
    for (size_t i = 0; i < group->all->count; i++) {
        const struct reference_rule *rule = &group->all->items[i];
        if (strcmp(rule->rules, group->rules) != 0 || strcmp(rule->what, group->what) != 0)
            continue;
        checked++;
        if (reference_rule_holds(table, rule))
            continue;
        failed++;
        print_error("%s %s %s %.10g %.10g %.10g %.10g %.10g: got %.15g, want %.15g\n", rule->rules, rule->what,
                    rule->word, rule->a, rule->b, rule->c, rule->d, rule->e, reference_rule_value(table, rule),
                    rule->want);
    }
    assert_true(checked > 0);
    if (failed > 0)
        fail_msg("%zu of %zu values differ", failed, checked);
}

static void test_materials(void **state) {
    struct reference_materials wants = reference_read_materials("tests/reference/materials.csv");
    size_t failed = 0;
    (void)state;
    for (size_t i = 0; i < wants.count; i++) {
        const struct bw_material *got = bw_materials_find(wants.items[i].name);
        if (got != NULL && reference_material_holds(got, &wants.items[i]))
            continue;
        failed++;
        print_error("material %s differs\n", wants.items[i].name);
    }
    free(wants.items);
    assert_int_equal(wants.count, bw_materials_count());
    assert_int_equal(failed, 0);
}

int main(void) {
    static const char *const rules[] = {"icnirp-2013", "iec-60825-1-2014", "eu-2006-25", "ansi-z136-1-2014"};
    static const char *const whats[] = {"factor", "ti", "applies", "count", "longest", "train", "adds", "time"};
    enum { RULES = 4, WHATS = 8, COUNT = RULES * WHATS + 2 };
    static struct reference_rules all;
    static struct group groups[COUNT];
    static char titles[COUNT][64];
    static struct CMUnitTest tests[COUNT];
    all = reference_read_rules("tests/reference/limits_rules.csv");
    for (size_t i = 0; i + 2 < COUNT; i++) {
        groups[i] = (struct group){rules[i / WHATS], whats[i % WHATS], &all};
        snprintf(titles[i], sizeof titles[i], "%s %s", groups[i].rules, groups[i].what);
        tests[i] = (struct CMUnitTest){titles[i], test_group, NULL, NULL, &groups[i]};
    }
    groups[COUNT - 2] = (struct group){"icnirp-2013", "prints", &all}; /* the only set with an area rule */
    tests[COUNT - 2] = (struct CMUnitTest){"icnirp-2013 prints", test_group, NULL, NULL, &groups[COUNT - 2]};
    tests[COUNT - 1] = (struct CMUnitTest){"materials", test_materials, NULL, NULL, NULL};
    int failed = cmocka_run_group_tests_name("rules against mpmath", tests, NULL, NULL);
    free(all.items);
    return failed == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
