/* Every printed limit row: asked at a place where it governs its effect, against its formula worked out in 40 digits.
 * A table row without a line here fails the last test. */
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

struct row_case {
    const char *table, *target, *section, *row;
    double wavelength_nm, exposure_s, subtense_mrad, area_m2;
    double want_j_m2, want_aperture_mm;
    const char *formula;
};

static struct row_case cases[] = {
#include "limits_rows.inc"
};
enum { CASES = sizeof cases / sizeof cases[0] };

static void test_row(void **state) {
    const struct row_case *c = *state;
    const struct bw_exposure exposure = {c->wavelength_nm, c->exposure_s, c->subtense_mrad * 1e-3, c->area_m2};
    struct bw_limit_set limits;
    struct bw_error error = {0};
    enum bw_target target = strcmp(c->target, "eye") == 0 ? BW_EYE : BW_SKIN;
    if (bw_limits(bw_tables_find(c->table), target, &exposure, &limits, NULL, &error) != BW_OK)
        fail_msg("%s", error.text);
    for (size_t i = 0; i < limits.count; i++) {
        const struct bw_limit *limit = &limits.limits[i];
        if (strcmp(limit->source.section, c->section) != 0 || strcmp(limit->source.row, c->row) != 0)
            continue;
        assert_string_equal(limit->source.table, c->table);
        if (!(fabs(limit->radiant_exposure_j_m2 / c->want_j_m2 - 1.0) <= 1e-13))
            fail_msg("H %.17g, want %.17g J/m2 [%s]", limit->radiant_exposure_j_m2, c->want_j_m2, c->formula);
        if (!(fabs(limit->irradiance_w_m2 / (c->want_j_m2 / c->exposure_s) - 1.0) <= 1e-13))
            fail_msg("E %.17g, want %.17g W/m2 [%s]", limit->irradiance_w_m2, c->want_j_m2 / c->exposure_s, c->formula);
        if (!(fabs(limit->aperture_m * 1e3 / c->want_aperture_mm - 1.0) <= 1e-11))
            fail_msg("aperture %.17g, want %.17g mm", limit->aperture_m * 1e3, c->want_aperture_mm);
        assert_int_equal(limit->printed_as_irradiance, c->formula[0] == 'E');
        return;
    }
    fail_msg("%s %s does not govern its effect here", c->section, c->row);
}

/* ---- no row is left out ----------------------------------------------------------------------- */

static bool is_asked(const char *table, const char *section, const char *row) {
    for (size_t i = 0; i < CASES; i++)
        if (strcmp(cases[i].table, table) == 0 && strcmp(cases[i].section, section) == 0 &&
            strcmp(cases[i].row, row) == 0)
            return true;
    return false;
}

static void test_all_rows_are_asked(void **state) {
    const char *table = *state;
    char path[120];
    struct bw_ini ini = {0};
    struct bw_faults faults = {0};
    struct bw_error error = {0};
    size_t rows = 0;
    snprintf(path, sizeof path, "limits_tables/%s.ini", table);
    if (bw_ini_read(path, &ini, NULL, &faults, &error) != BW_OK)
        fail_msg("%s: %s", path, error.text);
    for (size_t i = 0; i < ini.count; i++) {
        const struct bw_ini_entry *entry = &ini.entries[i];
        if ((strncmp(entry->section, "eye ", 4) != 0 && strncmp(entry->section, "skin", 4) != 0) ||
            entry->key[0] != 'r')
            continue;
        rows++;
        if (!is_asked(table, entry->section, entry->key))
            fail_msg("no line for %s %s", entry->section, entry->key);
    }
    assert_true(rows > 10);
    bw_ini_free(&ini);
    bw_faults_free(&faults);
}

int main(void) {
    static const char *const tables[] = {"ansi-z136-1-2014", "eu-2006-25", "icnirp-2013", "iec-60825-1-2014"};
    enum { TABLES = 4 };
    static char names[CASES][160], ids[TABLES][40];
    static struct CMUnitTest tests[CASES + TABLES];
    for (size_t i = 0; i < CASES; i++) {
        const struct row_case *c = &cases[i];
        snprintf(names[i], sizeof names[i], "%s %s %s %g nm %g s %g mrad", c->table, c->section, c->row,
                 c->wavelength_nm, c->exposure_s, c->subtense_mrad);
        tests[i] = (struct CMUnitTest){names[i], test_row, NULL, NULL, &cases[i]};
    }
    for (size_t i = 0; i < TABLES; i++) {
        snprintf(ids[i], sizeof ids[i], "%s", tables[i]);
        tests[CASES + i] = (struct CMUnitTest){"every row is asked", test_all_rows_are_asked, NULL, NULL, ids[i]};
    }
    return cmocka_run_group_tests_name("limits rows", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
