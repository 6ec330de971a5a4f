/* Would a misprint be noticed? Every number of limits_tables/ is changed by 1 %, up and down, one at a time (a 0 to
 * 0.01 and -0.01); the spoilt rule set is loaded anew and must either be refused by the reader and its checker, or
 * differ from at least one expected value of tests/reference/, which come from the published formulas. Whatever
 * passes as if nothing had happened is printed and fails the test.
 *
 * A slip copied to every place would leave the rows of a file in agreement with each other: so each value is also
 * changed in all its places at once.
 *
 * Numbers are those of the values that the INI reader hands on; not those of titles, sources and clauses. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <ctype.h>
#include <cmocka.h>

#include "../reference/reference.h"

struct expected {
    struct reference_points points;
    struct reference_rules rules;
    struct reference_materials materials;
};
static const double change = 0.01;
enum { VALUE_SIZE = 512 };

enum outcome { SURVIVED, REFUSED, REFUTED };
struct tally {
    size_t mutants, outcomes[3];
};

struct place { /* of a number in the file */
    size_t entry, from, to;
    double value;
};

/* One file under test, and the checks that concern it; the one that caught the last mutant is asked first, for the
 * next mutant mostly stands in the same row. */
struct subject {
    const char *path, *id; /* id NULL: the materials */
    const struct expected *expected;
    struct tally *total;
    struct bw_ini ini;
    struct place *places;
    size_t place_count;
    size_t *checks, check_count; /* numbers of points, then of rules behind them */
};

/* ---- does a loaded rule set pass? ------------------------------------------------------------- */

static bool check_holds(const struct subject *subject, size_t check, const struct bw_table *table) {
    size_t points = subject->expected->points.count;
    if (check < points)
        return reference_point_holds(table, &subject->expected->points.items[check], NULL);
    return reference_rule_holds(table, &subject->expected->rules.items[check - points]);
}

static enum outcome judge_table(struct subject *subject, const struct bw_table *table) {
    for (size_t i = 0; i < subject->check_count; i++) {
        size_t check = subject->checks[i];
        if (check_holds(subject, check, table))
            continue;
        memmove(subject->checks + 1, subject->checks, i * sizeof check);
        subject->checks[0] = check;
        return REFUTED;
    }
    return SURVIVED;
}

static enum outcome judge_materials(const struct subject *subject, const struct bw_material *materials, size_t count) {
    const struct reference_materials *wants = &subject->expected->materials;
    if (count != wants->count)
        return REFUTED;
    for (size_t i = 0; i < count; i++) {
        size_t found = 0;
        for (size_t j = 0; j < count; j++)
            found += reference_material_holds(&materials[j], &wants->items[i]);
        if (found != 1)
            return REFUTED;
    }
    return SURVIVED;
}

/* Loads subject->ini as it stands now. */
static enum outcome judge(struct subject *subject) {
    struct bw_faults faults = {0};
    struct bw_table *table = NULL;
    struct bw_material *materials = NULL;
    size_t count = 0;
    enum outcome outcome = REFUSED;
    if (subject->id != NULL && bw_table_load(&subject->ini, &table, &faults, NULL) == BW_OK)
        outcome = judge_table(subject, table);
    if (subject->id == NULL && bw_limits_materials_read(&subject->ini, &materials, &count, &faults, NULL) == BW_OK)
        outcome = judge_materials(subject, materials, count);
    if (outcome == REFUSED && faults.count == 0)
        fail_msg("%s refused without a fault", subject->path); /* memory was short: no verdict */
    bw_faults_free(&faults);
    bw_table_free(table);
    free(materials);
    return outcome;
}

/* ---- the numbers of a file -------------------------------------------------------------------- */

/* Where the numbers of a value end: before `| clause | known` of a printed row; a value of a material is one number
 * or a text. */
static size_t numbers_end(const struct subject *subject, const struct bw_ini_entry *entry) {
    const char *value = entry->value, *bar = strrchr(value, '|');
    double number;
    if (entry->key[0] == '\0' || strcmp(entry->section, "table") == 0)
        return 0;
    if (subject->id == NULL && !bw_parse_number(value, &number))
        return 0;
    if (bar == NULL || (strcmp(bar + 1, " read") != 0 && strcmp(bar + 1, " memory") != 0))
        return strlen(value);
    while (bar > value && *--bar != '|')
        ;
    return (size_t)(bar - value);
}

/* t2 and ca are names; the 4 of 1e-4 and the -0.25 of t2^-0.25 belong to numbers. */
static bool number_begins(const char *value, size_t at) {
    const char *text = value + at;
    if (at > 0 && (isalnum((unsigned char)text[-1]) || text[-1] == '_'))
        return false;
    return isdigit((unsigned char)text[*text == '-' ? 1 : 0]);
}

static void collect_places(struct subject *subject) {
    for (size_t entry = 0; entry < subject->ini.count; entry++) {
        const char *text = subject->ini.entries[entry].value;
        size_t end = numbers_end(subject, &subject->ini.entries[entry]);
        for (size_t at = 0; at < end; at++) {
            char *to;
            if (!number_begins(text, at))
                continue;
            struct place place = {entry, at, 0, strtod(text + at, &to)};
            place.to = (size_t)(to - text);
            subject->places = reference_grow(subject->places, subject->place_count, sizeof place);
            subject->places[subject->place_count++] = place;
            at = place.to - 1;
        }
    }
}

/* ---- the mutants ------------------------------------------------------------------------------ */

static bool same_value(const struct place *a, const struct place *b) {
    return !(a->value < b->value) && !(a->value > b->value);
}

/* Changes the place, or every place with its value, and judges. From the last place to the first, so that a change
 * does not move the places still to come. */
static void try_mutant(struct subject *subject, struct tally *tally, const struct place *place, bool everywhere,
                       double value) {
    enum { SIZE = 512 };
    struct bw_ini_entry *entries = subject->ini.entries;
    char **printed = calloc(subject->ini.count, sizeof *printed), (*spoilt)[SIZE] = NULL, before[SIZE];
    spoilt = calloc(subject->ini.count, sizeof *spoilt);
    assert_true(printed != NULL && spoilt != NULL);
    for (size_t i = 0; i < subject->ini.count; i++)
        printed[i] = entries[i].value;
    for (size_t i = subject->place_count; i-- > 0;) {
        const struct place *here = &subject->places[i];
        if (here != place && !(everywhere && same_value(here, place)))
            continue;
        snprintf(before, SIZE, "%s", entries[here->entry].value);
        int length =
            snprintf(spoilt[here->entry], SIZE, "%.*s%.17g%s", (int)here->from, before, value, before + here->to);
        assert_true(length > 0 && length < SIZE);
        entries[here->entry].value = spoilt[here->entry];
    }
    enum outcome outcome = judge(subject);
    tally->mutants++;
    tally->outcomes[outcome]++;
    const struct bw_ini_entry *entry = &entries[place->entry];
    if (outcome == SURVIVED)
        print_error("survived: %s:%d: [%s] %s = %s%s\n", subject->path, entry->line, entry->section, entry->key,
                    entry->value, everywhere ? ", and all its like" : "");
    for (size_t i = 0; i < subject->ini.count; i++)
        entries[i].value = printed[i];
    free(printed);
    free(spoilt);
}

static void try_both_ways(struct subject *subject, struct tally *tally, const struct place *place, bool everywhere) {
    double step = fabs(place->value) > 0.0 ? change * place->value : change;
    try_mutant(subject, tally, place, everywhere, place->value + step);
    try_mutant(subject, tally, place, everywhere, place->value - step);
}

static bool is_first(const struct subject *subject, const struct place *place) {
    for (const struct place *before = subject->places; before < place; before++)
        if (same_value(before, place))
            return false;
    return true;
}

/* ---- one file --------------------------------------------------------------------------------- */

static void collect_checks(struct subject *subject) {
    const struct expected *expected = subject->expected;
    subject->checks = malloc((expected->points.count + expected->rules.count + 1) * sizeof *subject->checks);
    assert_non_null(subject->checks);
    subject->check_count = 0;
    for (size_t i = 0; subject->id != NULL && i < expected->points.count; i++)
        if (strcmp(expected->points.items[i].rules, subject->id) == 0)
            subject->checks[subject->check_count++] = i;
    for (size_t i = 0; subject->id != NULL && i < expected->rules.count; i++)
        if (strcmp(expected->rules.items[i].rules, subject->id) == 0)
            subject->checks[subject->check_count++] = expected->points.count + i;
}

static void print_tally(const char *name, const struct tally *tally) {
    print_message("%s: %zu mutants, %zu killed, %zu survived (%zu refused by the checker, %zu refuted by an expected "
                  "value)\n",
                  name, tally->mutants, tally->outcomes[REFUSED] + tally->outcomes[REFUTED], tally->outcomes[SURVIVED],
                  tally->outcomes[REFUSED], tally->outcomes[REFUTED]);
}

static void add_tally(struct tally *total, const struct tally *tally) {
    total->mutants += tally->mutants;
    for (size_t i = 0; i < 3; i++)
        total->outcomes[i] += tally->outcomes[i];
}

static int open_subject(void **state) {
    struct subject *subject = *state;
    struct bw_faults faults = {0};
    enum bw_status status = bw_ini_read(subject->path, &subject->ini, NULL, &faults, NULL);
    bw_faults_free(&faults);
    if (status != BW_OK)
        return -1;
    collect_places(subject);
    collect_checks(subject);
    return 0;
}

static int close_subject(void **state) {
    struct subject *subject = *state;
    free(subject->places);
    free(subject->checks);
    bw_ini_free(&subject->ini);
    return 0;
}

static void test_file(void **state) {
    struct subject *subject = *state;
    struct tally single = {0}, everywhere = {0};
    assert_int_equal(judge(subject), SURVIVED); /* as printed it passes: a mutant falls by its change alone */
    for (size_t i = 0; i < subject->place_count; i++) {
        try_both_ways(subject, &single, &subject->places[i], false);
        if (is_first(subject, &subject->places[i]))
            try_both_ways(subject, &everywhere, &subject->places[i], true);
    }
    print_tally("one place", &single);
    print_tally("everywhere", &everywhere);
    add_tally(subject->total, &single);
    add_tally(subject->total, &everywhere);
    assert_true(single.mutants >= 50);
    assert_int_equal(single.outcomes[SURVIVED] + everywhere.outcomes[SURVIVED], 0);
}

int main(void) {
    static struct expected expected;
    static struct tally total;
    static struct subject subjects[] = {
        {.path = "limits_tables/ansi-z136-1-2014.ini", .id = "ansi-z136-1-2014"},
        {.path = "limits_tables/eu-2006-25.ini", .id = "eu-2006-25"},
        {.path = "limits_tables/icnirp-2013.ini", .id = "icnirp-2013"},
        {.path = "limits_tables/iec-60825-1-2014.ini", .id = "iec-60825-1-2014"},
        {.path = "limits_tables/materials.ini"},
    };
    enum { COUNT = sizeof subjects / sizeof subjects[0] };
    static struct CMUnitTest tests[COUNT];
    expected.points = reference_read_points("tests/reference/limits_edges.csv");
    expected.rules = reference_read_rules("tests/reference/limits_rules.csv");
    expected.materials = reference_read_materials("tests/reference/materials.csv");
    for (size_t i = 0; i < COUNT; i++) {
        subjects[i].expected = &expected;
        subjects[i].total = &total;
        tests[i] = (struct CMUnitTest){subjects[i].path, test_file, open_subject, close_subject, &subjects[i]};
    }
    int failed = cmocka_run_group_tests_name("table mutation", tests, NULL, NULL);
    print_tally("limits_tables", &total);
    free(expected.points.items);
    free(expected.rules.items);
    free(expected.materials.items);
    return failed == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
