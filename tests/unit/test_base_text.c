/* base: errors, faults, growing text, nearest names, the working. */
#include <math.h>
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdlib.h>
#include <string.h>

#include <cmocka.h>

#include <beamward/base.h>

#define COUNT(array) (sizeof(array) / sizeof *(array))

/* ---- errors ----------------------------------------------------------------------------------- */

static void test_first_error_wins(void **state) {
    (void)state;
    struct bw_error error = {0};
    assert_int_equal(bw_error_set(&error, BW_OUT_OF_RANGE, "%d nm", 810), BW_OUT_OF_RANGE);
    assert_int_equal(bw_error_set(&error, BW_SYSTEM, "later"), BW_SYSTEM);
    assert_int_equal(error.status, BW_OUT_OF_RANGE);
    assert_string_equal(error.text, "810 nm");
    assert_int_equal(bw_error_set(NULL, BW_ARGUMENT, "nobody listens"), BW_ARGUMENT);
}

/* 3 bytes each: the cut must not leave half a character. 480 = 1 + 3 * 159 + 1 + NUL. */
static void test_long_error(void **state) {
    (void)state;
    char text[1000] = "x";
    for (int i = 0; i < 300; i++)
        memcpy(text + 1 + 3 * i, "\xe2\x82\xac", 4);
    struct bw_error error = {0};
    bw_error_set(&error, BW_INPUT, "%s", text);
    assert_int_equal(strlen(error.text), 1 + 3 * 159);
    assert_memory_equal(error.text, text, 1 + 3 * 159);
}

/* ---- faults ----------------------------------------------------------------------------------- */

static void test_faults(void **state) {
    (void)state;
    struct bw_faults faults = {0};
    bw_faults_add(&faults, 7, "laser a", "power_w", "is %d; positive would be right", -1);
    bw_faults_add(&faults, 3, "laser a", "", "unknown section");
    bw_faults_add(&faults, 7, "", "power_w", "second of line 7");
    bw_faults_add(&faults, 0, NULL, NULL, "the file as a whole");
    bw_faults_add(&faults, 3, "", "", "second of line 3");
    bw_faults_sort(&faults);
    struct bw_text out = {0};
    bw_faults_print(&out, "case.ini", &faults);
    assert_string_equal(out.data, "case.ini: the file as a whole\n"
                                  "case.ini:3: [laser a]: unknown section\n"
                                  "case.ini:3: second of line 3\n"
                                  "case.ini:7: [laser a] power_w: is -1; positive would be right\n"
                                  "case.ini:7: power_w: second of line 7\n");
    for (size_t i = 0; i < faults.count; i++)
        assert_true(faults.items[i].section && faults.items[i].key && faults.items[i].text);
    bw_text_free(&out);
    bw_faults_free(&faults);
    assert_true(faults.items == NULL && faults.count == 0);
}

static void test_many_long_faults(void **state) {
    (void)state;
    struct bw_faults faults = {0};
    for (int i = 0; i < 1000; i++)
        bw_faults_add(&faults, (i * 7919) % 1000, "", "", "%02000d", i);
    bw_faults_sort(&faults);
    assert_int_equal(faults.count, 1000);
    for (int i = 0; i < 1000; i++) {
        assert_int_equal(faults.items[i].line, i); /* 7919 is prime: each line once */
        assert_int_equal(strlen(faults.items[i].text), 2000);
        assert_int_equal((strtol(faults.items[i].text, NULL, 10) * 7919) % 1000, i);
    }
    bw_faults_free(&faults);
}

/* ---- text ------------------------------------------------------------------------------------- */

static void test_text_grows(void **state) {
    (void)state;
    struct bw_text text = {0};
    for (int i = 0; i < 10000; i++)
        bw_text_add(&text, "%04d,", i);
    assert_false(text.failed);
    assert_int_equal(text.length, 50000);
    assert_int_equal(strlen(text.data), 50000);
    for (int i = 0; i < 10000; i++)
        assert_int_equal(strtol(text.data + 5 * i, NULL, 10), i);
    bw_text_free(&text);
    assert_true(text.data == NULL && text.length == 0);
}

static void test_text_bytes(void **state) {
    (void)state;
    struct bw_text text = {0};
    bw_text_add_bytes(&text, "a\0b", 3);
    bw_text_add_bytes(&text, "", 0);
    bw_text_add(&text, "%s", "");
    bw_text_add_bytes(&text, "cd", 1);
    assert_int_equal(text.length, 4);
    assert_memory_equal(text.data, "a\0bc", 5);
    bw_text_free(&text);
    char *copy = bw_duplicate("same");
    assert_string_equal(copy, "same");
    free(copy);
}

/* ---- names ------------------------------------------------------------------------------------ */

static const char *const known[] = {
    "wavelength_nm", "average_power_w", "peak_power_w", "pulse_duration_s", "beam_diameter_mm", "od", "title"};

static struct name_case {
    const char *name, *word, *want; /* distances by hand */
} names[] = {
    {"nearest: the same", "title", "title"},
    {"nearest: a letter missing", "wavelenth_nm", "wavelength_nm"},
    {"nearest: a letter too many", "wavellength_nm", "wavelength_nm"},
    {"nearest: another letter", "titke", "title"},
    {"nearest: two letters swapped", "titel", "title"},
    {"nearest: two swaps count as two", "ittel", "title"},
    {"nearest: three changes of five", "tabby", NULL},
    {"nearest: a third of a long word", "beam_dimetr_m", "beam_diameter_mm"},
    {"nearest: the nearer of two", "peek_power_w", "peak_power_w"},
    {"nearest: nothing like it", "divergence", NULL},
    {"nearest: a short name is not rewritten whole", "xy", NULL},
    {"nearest: one of two letters", "oc", "od"},
    {"nearest: empty", "", NULL},
};

static void test_name(void **state) {
    const struct name_case *c = *state;
    const char *got = bw_nearest_name(c->word, known, COUNT(known));
    if (c->want)
        assert_string_equal(got ? got : "(none)", c->want);
    else
        assert_null(got);
}

static void test_name_extremes(void **state) {
    (void)state;
    char word[1001];
    memset(word, 'a', 1000);
    word[1000] = '\0';
    assert_null(bw_nearest_name("title", NULL, 0));
    (void)bw_nearest_name(word, known, COUNT(known)); /* must stay within its rows: for the sanitizers */
    const char *const longer[] = {word};
    assert_ptr_equal(bw_nearest_name(word, longer, 1), word);
}

/* ---- the working ------------------------------------------------------------------------------ */

static void test_working(void **state) {
    (void)state;
    struct bw_working working = {0};
    bw_working_heading(&working, "emission %s", "deep");
    bw_working_step(&working, "CA", 1.6595869, "", "table 4", "10^(0.002 (w - 700))", "10^(0.002 (%d - 700))", 810);
    bw_working_step(&working, "H", 12.5, NULL, NULL, NULL, NULL);
    assert_int_equal(working.count, 3);
    assert_true(working.steps[0].heading);
    assert_string_equal(working.steps[0].formula, "emission deep");
    assert_false(working.steps[1].heading);
    assert_string_equal(working.steps[1].symbol, "CA");
    assert_string_equal(working.steps[1].formula, "10^(0.002 (w - 700))");
    assert_string_equal(working.steps[1].numbers, "10^(0.002 (810 - 700))");
    assert_string_equal(working.steps[1].source, "table 4");
    assert_true(fabs(working.steps[1].value - 1.6595869) <= 0.);
    assert_string_equal(working.steps[2].unit, "");
    assert_string_equal(working.steps[2].source, "");
    assert_string_equal(working.steps[2].formula, "");
    assert_string_equal(working.steps[2].numbers, "");
    assert_false(working.failed);
    bw_working_free(&working);
    assert_true(working.steps == NULL && working.count == 0);
}

static void test_long_working(void **state) {
    (void)state;
    struct bw_working working = {0};
    for (int i = 0; i < 500; i++)
        bw_working_step(&working, "x", i, "", "", "", "%0*d", 1500, i);
    assert_int_equal(working.count, 500);
    for (int i = 0; i < 500; i++) {
        assert_int_equal(strlen(working.steps[i].numbers), 1500); /* a cut number lies */
        assert_int_equal(strtol(working.steps[i].numbers, NULL, 10), i);
    }
    bw_working_free(&working);
}

static void test_no_working(void **state) {
    (void)state;
    bw_working_heading(NULL, "nobody %d", 1);
    bw_working_step(NULL, "x", 1., "", "", "", "%d", 1);
}

int main(void) {
    struct CMUnitTest tests[COUNT(names) + 10] = {
        cmocka_unit_test(test_first_error_wins), cmocka_unit_test(test_long_error), cmocka_unit_test(test_faults),
        cmocka_unit_test(test_many_long_faults), cmocka_unit_test(test_text_grows), cmocka_unit_test(test_text_bytes),
        cmocka_unit_test(test_name_extremes),    cmocka_unit_test(test_working),    cmocka_unit_test(test_long_working),
        cmocka_unit_test(test_no_working),
    };
    for (size_t i = 0; i < COUNT(names); i++)
        tests[10 + i] = (struct CMUnitTest){names[i].name, test_name, NULL, NULL, &names[i]};
    return cmocka_run_group_tests_name("base text", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
