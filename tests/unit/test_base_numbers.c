/* base: reading numbers, printing them rounded to the safe side, units. */
#include <math.h>
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include <cmocka.h>

#include <beamward/base.h>

#define COUNT(array) (sizeof(array) / sizeof *(array))

/* ---- reading --------------------------------------------------------------------------------- */

static struct parse_case {
    const char *name, *text;
    bool good;
    double want;
} parses[] = {
    {"parse: whole", "810", true, 810.},
    {"parse: decimal", "0.25", true, .25},
    {"parse: exponent", "150e-9", true, 150e-9},
    {"parse: capital exponent", "1.5E3", true, 1500.},
    {"parse: signs", "-2.5e+1", true, -25.},
    {"parse: plus", "+3", true, 3.},
    {"parse: point first", ".5", true, .5},
    {"parse: point last", "5.", true, 5.},
    {"parse: blanks around", " \t 7 \t", true, 7.},
    {"parse: zero", "0", true, 0.},
    {"parse: zero with exponent", "0.00e5", true, 0.},
    {"parse: zero with digits in the exponent", "0e12", true, 0.},
    {"parse: smallest double", "4.94065645841247e-324", true, 4.94065645841247e-324},
    {"parse: largest double", "1.7976931348623157e308", true, 1.7976931348623157e308},
    {"parse: empty", "", false, 0.},
    {"parse: blanks only", "  ", false, 0.},
    {"parse: unit", "5 mW", false, 0.},
    {"parse: unit without blank", "5mW", false, 0.},
    {"parse: decimal comma", "1,5", false, 0.},
    {"parse: two numbers", "1 2", false, 0.},
    {"parse: word", "abc", false, 0.},
    {"parse: nan", "nan", false, 0.},
    {"parse: inf", "inf", false, 0.},
    {"parse: infinity", "-INFINITY", false, 0.},
    {"parse: hexadecimal", "0x10", false, 0.},
    {"parse: hexadecimal exponent", "0x1p3", false, 0.},
    {"parse: overflow", "1e309", false, 0.},
    {"parse: negative overflow", "-1e999", false, 0.},
    {"parse: underflow to zero", "1e-400", false, 0.},
    {"parse: two points", "1.2.3", false, 0.},
    {"parse: two signs", "--1", false, 0.},
    {"parse: sign in the middle", "1-2", false, 0.},
    {"parse: sign alone", "-", false, 0.},
    {"parse: point alone", ".", false, 0.},
    {"parse: no digits before e", "e5", false, 0.},
    {"parse: nothing after e", "5e", false, 0.},
    {"parse: line feed", "5\n", false, 0.},
    {"parse: thin space", "5\xe2\x80\x89", false, 0.},
};

static void test_parse(void **state) {
    const struct parse_case *c = *state;
    double got = 4711.;
    bool good = bw_parse_number(c->text, &got);
    if (good != c->good)
        fail_msg("`%s`: taken for %s", c->text, good ? "a number" : "no number");
    double want = c->good ? c->want : 4711.; /* untouched on refusal */
    if (!(fabs(got - want) <= 0.))
        fail_msg("`%s`: got %.17g, want %.17g", c->text, got, want);
}

/* ---- printing -------------------------------------------------------------------------------- */

/* By hand, from the words of the header. */
static struct format_case {
    const char *name;
    double value;
    int digits;
    const char *nearest, *down, *up;
} formats[] = {
    {"format: pi", 3.14159265358979, 3, "3.14", "3.14", "3.15"},
    {"format: carries up", 9.996, 3, "10.0", "9.99", "10.0"},
    {"format: carries over all nines", 999.9, 3, "1000", "999", "1000"},
    {"format: exact stays", 0.25, 2, "0.25", "0.25", "0.25"},
    {"format: zeros kept", 8., 3, "8.00", "8.00", "8.00"},
    {"format: whole number above its digits", 1234.5, 3, "1230", "1230", "1240"},
    {"format: negative", -3.14159, 3, "-3.14", "-3.15", "-3.14"},
    {"format: negative carries", -9.996, 3, "-10.0", "-10.0", "-9.99"},
    {"format: smallest plain", 1e-3, 3, "0.00100", "0.00100", "0.00100"},
    {"format: below plain", 5.123e-4, 3, "5.12e-4", "5.12e-4", "5.13e-4"},
    {"format: rounds up into plain", 9.999e-4, 3, "0.00100", "9.99e-4", "0.00100"},
    {"format: largest plain", 999999., 6, "999999", "999999", "999999"},
    {"format: rounds up out of plain", 999999.7, 6, "1.00000e6", "999999", "1.00000e6"},
    {"format: above plain", 1e6, 2, "1.0e6", "1.0e6", "1.0e6"},
    {"format: one digit with exponent", 5.01e-9, 1, "5e-9", "5e-9", "6e-9"},
    {"format: three-digit exponent", 1.234e-300, 2, "1.2e-300", "1.2e-300", "1.3e-300"},
    {"format: largest double", 1.7976931348623157e308, 3, "1.80e308", "1.79e308", "1.80e308"},
    {"format: smallest double", 4.94065645841247e-324, 2, "4.9e-324", "4.9e-324", "5.0e-324"},
    {"format: binary noise above", 0.1 + 0.2, 1, "0.3", "0.3", "0.3"},
    {"format: binary noise below", 1.1 * 1.1, 3, "1.21", "1.21", "1.21"},
    {"format: less than 1e-12 above", 9.99 * (1 + 9e-13), 3, "9.99", "9.99", "9.99"},
    {"format: less than 1e-12 below", 9.99 * (1 - 9e-13), 3, "9.99", "9.99", "9.99"},
    {"format: more than 1e-12 above", 9.99 * (1 + 2e-12), 3, "9.99", "9.99", "10.0"},
    {"format: more than 1e-12 below", 9.99 * (1 - 2e-12), 3, "9.99", "9.98", "9.99"},
    {"format: less than 1e-12 below a power of ten", 1 - 9e-13, 3, "1.00", "1.00", "1.00"},
    {"format: zero", 0., 3, "0", "0", "0"},
    {"format: negative zero", -0., 3, "0", "0", "0"},
    {"format: NaN", (double)NAN, 3, "n/a", "n/a", "n/a"},
    {"format: infinity", (double)INFINITY, 3, "unbounded", "unbounded", "unbounded"},
    {"format: 12 digits", 0.123456789012345, 12, "0.123456789012", "0.123456789012", "0.123456789013"},
};

/* `digits` are decimals here. */
static struct format_case fixed[] = {
    {"fixed: plain", 2.345, 2, "2.35", "2.34", "2.35"},
    {"fixed: exact stays", 2.5, 1, "2.5", "2.5", "2.5"},
    {"fixed: zeros behind", 12., 3, "12.000", "12.000", "12.000"},
    {"fixed: no decimals", 12.3, 0, "12", "12", "13"},
    {"fixed: carries", 9.996, 2, "10.00", "9.99", "10.00"},
    {"fixed: carries into a new place", 99.99, 1, "100.0", "99.9", "100.0"},
    {"fixed: below one", 0.0512, 2, "0.05", "0.05", "0.06"},
    {"fixed: below the last decimal", 0.0004, 2, "0.00", "0.00", "0.01"},
    {"fixed: just above half of the last decimal", 0.006, 2, "0.01", "0.00", "0.01"},
    {"fixed: far below the last decimal", 1e-300, 2, "0.00", "0.00", "0.01"},
    {"fixed: below a whole", 0.3, 0, "0", "0", "1"},
    {"fixed: binary noise", 0.1 + 0.2, 1, "0.3", "0.3", "0.3"},
    {"fixed: less than 1e-12 below", 0.01 * (1 - 5e-13), 2, "0.01", "0.01", "0.01"},
    {"fixed: less than 1e-12 above", 0.01 * (1 + 5e-13), 2, "0.01", "0.01", "0.01"},
    {"fixed: more than 1e-12 above", 0.01 * (1 + 2e-12), 2, "0.01", "0.01", "0.02"},
    {"fixed: negative", -0.016, 2, "-0.02", "-0.02", "-0.01"},
    {"fixed: negative to zero has no sign", -0.001, 2, "0.00", "-0.01", "0.00"},
    {"fixed: zero", 0., 2, "0.00", "0.00", "0.00"},
    {"fixed: zero without decimals", 0., 0, "0", "0", "0"},
    {"fixed: large", 123456789012345., 9, "123456789012345.000000000", "123456789012345.000000000",
     "123456789012345.000000000"},
    {"fixed: NaN", (double)NAN, 2, "n/a", "n/a", "n/a"},
    {"fixed: infinity", (double)INFINITY, 2, "unbounded", "unbounded", "unbounded"},
};

typedef const char *format_function(char out[BW_NUMBER_SIZE], double value, int digits, enum bw_rounding rounding);

static void test_printed(const struct format_case *c, format_function *format) {
    char out[BW_NUMBER_SIZE];
    assert_ptr_equal(format(out, c->value, c->digits, BW_NEAREST), out);
    assert_string_equal(out, c->nearest);
    assert_string_equal(format(out, c->value, c->digits, BW_DOWN), c->down);
    assert_string_equal(format(out, c->value, c->digits, BW_UP), c->up);
}

static void test_format(void **state) {
    test_printed(*state, bw_format);
}

static void test_fixed(void **state) {
    test_printed(*state, bw_format_fixed);
}

/* ---- what must hold for every value ---------------------------------------------------------- */

/* xorshift64 (G. Marsaglia, Xorshift RNGs, 2003): the same numbers on every machine. */
static uint64_t next_random(uint64_t *random) {
    *random ^= *random << 13;
    *random ^= *random >> 7;
    *random ^= *random << 17;
    return *random;
}

static double read_back(const char *text) {
    double value;
    if (!bw_parse_number(text, &value))
        fail_msg("`%s` cannot be read back", text);
    return value;
}

/* Both neighbours hold the value between them, and lie no farther apart than one unit of the last place. */
static void check_between(double value, const char *down, const char *up, double unit) {
    double slack = 1.01e-12 * fabs(value), low = read_back(down), high = read_back(up);
    if (!(low <= value + slack && value - slack <= high && low <= high))
        fail_msg("%.17g is not between %s and %s", value, down, up);
    if (!(high - low <= 1.5 * unit)) /* the next possible is 2 */
        fail_msg("%.17g: %s and %s are more than %g apart", value, down, up, unit);
}

static void test_format_property(void **state) {
    (void)state;
    uint64_t random = 88172645463325252u;
    for (int i = 0; i < 40000; i++) {
        double mantissa = 1 + 9 * ((double)(next_random(&random) >> 11) / 9007199254740992.);
        int exponent = (int)(next_random(&random) % (i % 2 ? 40 : 500)) - (i % 2 ? 20 : 250), digits = 1 + i % 12;
        double value = mantissa * pow(10, exponent) * (i % 3 ? 1 : -1);
        char down[BW_NUMBER_SIZE], up[BW_NUMBER_SIZE], nearest[BW_NUMBER_SIZE];
        bw_format(down, value, digits, BW_DOWN);
        bw_format(up, value, digits, BW_UP);
        bw_format(nearest, value, digits, BW_NEAREST);
        check_between(value, down, up, pow(10, floor(log10(fabs(value))) - digits + 1));
        if (strcmp(nearest, down) != 0 && strcmp(nearest, up) != 0)
            fail_msg("%.17g: nearest %s is neither %s nor %s", value, nearest, down, up);
        if (!(fabs(read_back(nearest) - value) <=
              fmin(fabs(value - read_back(down)), fabs(read_back(up) - value)) + 1.01e-12 * fabs(value)))
            fail_msg("%.17g: %s is not the nearest", value, nearest);
    }
}

static void test_fixed_property(void **state) {
    (void)state;
    uint64_t random = 362436069521288629u;
    for (int i = 0; i < 40000; i++) {
        int decimals = i % 10, exponent = (int)(next_random(&random) % 17) - 12;
        double value = (double)(next_random(&random) >> 11) / 9007199254740992. * pow(10, exponent) * (i % 3 ? 1 : -1);
        char down[BW_NUMBER_SIZE], up[BW_NUMBER_SIZE];
        bw_format_fixed(down, value, decimals, BW_DOWN);
        bw_format_fixed(up, value, decimals, BW_UP);
        check_between(value, down, up, pow(10, -decimals));
        const char *point = strchr(up, '.');
        assert_int_equal(point ? strlen(point + 1) : 0, decimals);
    }
}

/* A number that was printed is printed the same again, in every direction. */
static void test_format_stays(void **state) {
    (void)state;
    uint64_t random = 521288629u;
    for (int i = 0; i < 20000; i++) {
        int digits = 1 + i % 11, exponent = (int)(next_random(&random) % 60) - 30;
        double value = (1 + 9 * ((double)(next_random(&random) >> 11) / 9007199254740992.)) * pow(10, exponent);
        char once[BW_NUMBER_SIZE], again[BW_NUMBER_SIZE];
        bw_format(once, value, digits, BW_UP);
        for (int rounding = BW_NEAREST; rounding <= BW_UP; rounding++)
            assert_string_equal(bw_format(again, read_back(once), digits, (enum bw_rounding)rounding), once);
    }
}

/* ---- units ----------------------------------------------------------------------------------- */

static struct unit_case {
    const char *name, *suffix;
    const struct bw_unit *(*find)(const char *suffix);
    double given, want_si; /* the same quantity */
} units[] = {
    {"unit: mm", "mm", bw_length_unit, 30., .03},
    {"unit: cm", "cm", bw_length_unit, 2.5, .025},
    {"unit: m", "m", bw_length_unit, 4.1, 4.1},
    {"unit: in, 25.4 mm (1959 agreement)", "in", bw_length_unit, 10., .254},
    {"unit: ft, 12 in (1959 agreement)", "ft", bw_length_unit, 10., 3.048},
    {"unit: mrad", "mrad", bw_angle_unit, 200., .2},
    {"unit: deg, half a turn is pi", "deg", bw_angle_unit, 180., 3.14159265358979323846},
};

static void test_unit(void **state) {
    const struct unit_case *c = *state;
    const struct bw_unit *unit = c->find(c->suffix);
    assert_non_null(unit);
    assert_string_equal(unit->suffix, c->suffix);
    double si = c->given * unit->to_si;
    if (!(fabs(si - c->want_si) <= 1e-15 * c->want_si))
        fail_msg("%g %s: got %.17g, want %.17g", c->given, c->suffix, si, c->want_si);
    if (!(fabs(si / unit->to_si - c->given) <= 1e-15 * c->given))
        fail_msg("%g %s does not come back", c->given, c->suffix);
}

static void test_unknown_units(void **state) {
    (void)state;
    static const char *const unknown[] = {"", "M", "MM", "mm ", "_mm", "nm", "km", "yd"};
    for (size_t i = 0; i < COUNT(unknown); i++) {
        assert_null(bw_length_unit(unknown[i]));
        assert_null(bw_angle_unit(unknown[i]));
    }
    assert_null(bw_length_unit("mrad"));
    assert_null(bw_length_unit("deg"));
    assert_null(bw_angle_unit("m"));
    assert_null(bw_angle_unit("mm"));
    assert_null(bw_angle_unit("rad"));
}

int main(void) {
    struct CMUnitTest tests[COUNT(parses) + COUNT(formats) + COUNT(fixed) + COUNT(units) + 4];
    size_t count = 0;
    for (size_t i = 0; i < COUNT(parses); i++)
        tests[count++] = (struct CMUnitTest){parses[i].name, test_parse, NULL, NULL, &parses[i]};
    for (size_t i = 0; i < COUNT(formats); i++)
        tests[count++] = (struct CMUnitTest){formats[i].name, test_format, NULL, NULL, &formats[i]};
    for (size_t i = 0; i < COUNT(fixed); i++)
        tests[count++] = (struct CMUnitTest){fixed[i].name, test_fixed, NULL, NULL, &fixed[i]};
    for (size_t i = 0; i < COUNT(units); i++)
        tests[count++] = (struct CMUnitTest){units[i].name, test_unit, NULL, NULL, &units[i]};
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_format_property);
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_fixed_property);
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_format_stays);
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_unknown_units);
    return cmocka_run_group_tests_name("base numbers", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
