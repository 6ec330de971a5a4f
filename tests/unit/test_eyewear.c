/* eyewear: reading densities and markings, and whether goggles are enough. */
#include <math.h>
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdlib.h>
#include <string.h>

#include <cmocka.h>

#include <beamward/eyewear.h>

#define COUNT(array) (sizeof(array) / sizeof *(array))
#define NONE         ((double)NAN)
#define ENDLESS      ((double)INFINITY)

typedef enum bw_status reader(const char *text, struct bw_goggles *goggles, struct bw_error *error);

static void exactly(double got, double want, const char *what) {
    if (!(fabs(got - want) <= 0.))
        fail_msg("%s: got %.17g, want %.17g", what, got, want);
}

/* ---- what is read ----------------------------------------------------------------------------- */

static struct reading_case {
    const char *name;
    reader *read;
    const char *text;
    size_t count;
    struct bw_rating ratings[3];
} readings[] = {
    /* the two forms of the case file's description */
    {"read: two density ranges", bw_eyewear_read_densities, "800-820 6.2, 890-1070 5.5", 2,
     {{800., 820., 6.2, 0, ""}, {890., 1070., 5.5, 0, ""}}},
    {"read: single wavelength", bw_eyewear_read_densities, "1064 7", 1, {{1064., 1064., 7., 0, ""}}},
    {"read: blanks and tabs anywhere", bw_eyewear_read_densities, "  800 -\t820   6.2 ,890-1070\t5.5 ", 2,
     {{800., 820., 6.2, 0, ""}, {890., 1070., 5.5, 0, ""}}},
    {"read: both ends of the spectrum", bw_eyewear_read_densities, "180-1000000 0, 10600.5 20", 2,
     {{180., 1e6, 0., 0, ""}, {10600.5, 10600.5, 20., 0, ""}}},
    {"read: marking of two parts", bw_eyewear_read_marking, "800-820 D LB6 + 890-1070 DIR LB5", 2,
     {{800., 820., 6., 6, "D"}, {890., 1070., 5., 5, "DIR"}}},
    {"read: marking, modes first", bw_eyewear_read_marking, "DIRM 1064 LB7", 1, {{1064., 1064., 7., 7, "DIRM"}}},
    {"read: marking, largest scale number", bw_eyewear_read_marking, "10600 D LB10", 1,
     {{10600., 10600., 10., 10, "D"}}},
    {"read: marking with Y", bw_eyewear_read_marking, "1064 D LB5 + 1064 R LB6Y", 2,
     {{1064., 1064., 5., 5, "D"}, {1064., 1064., 6., 6, "R"}}},
    {"read: marking without blanks round the plus", bw_eyewear_read_marking, "800-820 D LB6+890-1070 IR LB4", 2,
     {{800., 820., 6., 6, "D"}, {890., 1070., 4., 4, "IR"}}},
};

static void test_reading(void **state) {
    const struct reading_case *c = *state;
    struct bw_goggles goggles = {.rating_count = 1, .ratings = {{500., 510., 1., 0, ""}}};
    struct bw_error error = {0};
    if (c->read(c->text, &goggles, &error) != BW_OK)
        fail_msg("%s", error.text);
    assert_int_equal(goggles.rating_count, 1 + c->count);
    exactly(goggles.ratings[0].low_nm, 500., "the range that was there");
    for (size_t i = 0; i < c->count; i++) {
        const struct bw_rating *got = &goggles.ratings[1 + i], *want = &c->ratings[i];
        exactly(got->low_nm, want->low_nm, "lower end");
        exactly(got->high_nm, want->high_nm, "upper end");
        exactly(got->optical_density, want->optical_density, "optical density");
        assert_int_equal(got->scale_number, want->scale_number);
        assert_string_equal(got->modes, want->modes);
    }
}

/* ---- what is refused -------------------------------------------------------------------------- */

#define DENSITIES_RIGHT "; LOW-HIGH OD, as in 800-820 6.2, 890-1070 5.5, would be right"
#define MARKING_RIGHT   "; WAVELENGTHS MODES LBn, as in 800-820 D LB6 + 890-1070 DIR LB5, would be right"

static struct refusal_case {
    const char *name;
    reader *read;
    const char *text, *error;
} refusals[] = {
    {"refused: no density", bw_eyewear_read_densities, "800-820",
     "`800-820`: no optical density" DENSITIES_RIGHT},
    {"refused: decimal comma", bw_eyewear_read_densities, "800-820 6,2",
     "`2`: a number alone (the comma parts one range from the next, decimals take a point)" DENSITIES_RIGHT},
    {"refused: empty", bw_eyewear_read_densities, "", "``: no wavelength" DENSITIES_RIGHT},
    {"refused: comma at the end", bw_eyewear_read_densities, "800-820 6.2,", "``: no wavelength" DENSITIES_RIGHT},
    {"refused: backwards", bw_eyewear_read_densities, "820-800 6",
     "`820-800 6`: the range runs backwards" DENSITIES_RIGHT},
    {"refused: open range", bw_eyewear_read_densities, "800- 6 x",
     "`800- 6 x`: wavelength outside 180 to 1000000 nm" DENSITIES_RIGHT},
    {"refused: hyphen without an end", bw_eyewear_read_densities, "800-",
     "`800-`: no wavelength after the hyphen" DENSITIES_RIGHT},
    {"refused: long dash", bw_eyewear_read_densities, "800\xe2\x80\x93" "820 6",
     "`800\xe2\x80\x93" "820 6`: a dash that is no hyphen" DENSITIES_RIGHT},
    {"refused: wavelength 179", bw_eyewear_read_densities, "179-820 6",
     "`179-820 6`: wavelength outside 180 to 1000000 nm" DENSITIES_RIGHT},
    {"refused: wavelength 1000001", bw_eyewear_read_densities, "800-1000001 6",
     "`800-1000001 6`: wavelength outside 180 to 1000000 nm" DENSITIES_RIGHT},
    {"refused: density 20.1", bw_eyewear_read_densities, "800-820 20.1",
     "`800-820 20.1`: optical density outside 0 to 20" DENSITIES_RIGHT},
    {"refused: density below 0", bw_eyewear_read_densities, "800-820 -1",
     "`800-820 -1`: the optical density is not a plain number" DENSITIES_RIGHT},
    {"refused: two points", bw_eyewear_read_densities, "800-820 6.2.1",
     "`800-820 6.2.1`: the optical density is not a plain number" DENSITIES_RIGHT},
    {"refused: OD before the number", bw_eyewear_read_densities, "800-820 OD6",
     "`800-820 OD6`: the optical density is not a plain number" DENSITIES_RIGHT},
    {"refused: plus after the number", bw_eyewear_read_densities, "800-820 6+",
     "`800-820 6+`: text after the optical density" DENSITIES_RIGHT},
    {"refused: nan", bw_eyewear_read_densities, "800-820 nan",
     "`800-820 nan`: the optical density is not a plain number" DENSITIES_RIGHT},
    {"refused: exponent", bw_eyewear_read_densities, "800-820 1e1",
     "`800-820 1e1`: text after the optical density" DENSITIES_RIGHT},
    {"refused: second of two", bw_eyewear_read_densities, "800-820 6, x",
     "`x`: no wavelength" DENSITIES_RIGHT},
    {"refused: marking without modes", bw_eyewear_read_marking, "800-820 LB6",
     "`800-820 LB6`: no mode letters D, I, R, M" MARKING_RIGHT},
    {"refused: marking with an unknown mode", bw_eyewear_read_marking, "800-820 DX LB6",
     "`800-820 DX LB6`: no mode letters D, I, R, M" MARKING_RIGHT},
    {"refused: marking with a mode twice", bw_eyewear_read_marking, "800-820 DID LB6",
     "`800-820 DID LB6`: a mode letter twice" MARKING_RIGHT},
    {"refused: marking in small letters", bw_eyewear_read_marking, "800-820 d lb6",
     "`800-820 d lb6`: no mode letters D, I, R, M" MARKING_RIGHT},
    {"refused: RB of EN 208", bw_eyewear_read_marking, "630-660 D RB2",
     "`630-660 D RB2`: no scale number LB1 to LB10" MARKING_RIGHT},
    {"refused: LB0", bw_eyewear_read_marking, "800-820 D LB0",
     "`800-820 D LB0`: scale number outside LB1 to LB10" MARKING_RIGHT},
    {"refused: LB11", bw_eyewear_read_marking, "800-820 D LB11",
     "`800-820 D LB11`: scale number outside LB1 to LB10" MARKING_RIGHT},
    {"refused: LB without number", bw_eyewear_read_marking, "800-820 D LB",
     "`800-820 D LB`: scale number outside LB1 to LB10" MARKING_RIGHT},
    {"refused: LB with a long number", bw_eyewear_read_marking, "800-820 D LB99999999999999999999",
     "`800-820 D LB99999999999999999999`: scale number outside LB1 to LB10" MARKING_RIGHT},
    {"refused: parts joined by a comma", bw_eyewear_read_marking, "800-820 D LB6, 890-1070 D LB5",
     "`800-820 D LB6, 890-1070 D LB5`: text after the scale number (+ parts one range from the next)" MARKING_RIGHT},
};

static void test_refusal(void **state) {
    const struct refusal_case *c = *state;
    struct bw_goggles goggles = {.rating_count = 1, .ratings = {{500., 510., 1., 0, ""}}};
    struct bw_error error = {0};
    assert_int_equal(c->read(c->text, &goggles, &error), BW_INPUT);
    assert_string_equal(error.text, c->error);
    assert_int_equal(error.status, BW_INPUT);
    assert_int_equal(goggles.rating_count, 1);
}

static void test_too_many_ranges(void **state) {
    (void)state;
    struct bw_goggles goggles = {0};
    struct bw_error error = {0};
    for (size_t i = 0; i < BW_RATINGS_MAX; i++)
        assert_int_equal(bw_eyewear_read_densities("800 6", &goggles, &error), BW_OK);
    assert_int_equal(bw_eyewear_read_densities("800 6", &goggles, &error), BW_INPUT);
    assert_string_equal(error.text, "more than 32 ranges; enter the goggles as two pairs");
    assert_int_equal(goggles.rating_count, BW_RATINGS_MAX);
}

/* ---- which rating counts ---------------------------------------------------------------------- */

static struct lookup_case {
    const char *name;
    double wavelength_nm;
    double density; /* NONE: none */
} lookups[] = {
    {"rating: below the range", 799.99, NONE}, {"rating: lower end counts", 800., 6.2}, {"rating: inside", 810., 6.2},
    {"rating: upper end counts", 820., 6.2},  {"rating: above the range", 820.01, NONE},
    {"rating: overlap, the lower one", 1000., 4.}, {"rating: first of the overlap alone", 950., 5.5},
    {"rating: of a single wavelength", 532., 3.}, {"rating: beside a single wavelength", 532.1, NONE},
    {"rating: NaN", NONE, NONE},
};

static void test_lookup(void **state) {
    const struct lookup_case *c = *state;
    struct bw_goggles goggles = {0};
    assert_int_equal(bw_eyewear_read_densities("800-820 6.2, 890-1070 5.5, 980-1020 4, 532 3", &goggles, NULL), BW_OK);
    const struct bw_rating *rating = bw_eyewear_rating(&goggles, c->wavelength_nm);
    if (isnan(c->density))
        assert_null(rating);
    else
        exactly(rating ? rating->optical_density : NONE, c->density, "optical density");
}

/* ---- verdicts --------------------------------------------------------------------------------- */

static struct verdict_case {
    const char *name;
    const char *densities; /* of the goggles; the emission is at 905 nm */
    double required;
    enum bw_verdict verdict;
    const char *reason;
} verdicts[] = {
    {"verdict: no rating", "800-820 6.2", 5.4, BW_NO_RATING, "no rating at 905 nm"},
    {"verdict: too weak", "890-1070 5", 5.4, BW_INSUFFICIENT, "rated 5.0, needs 5.4"},
    {"verdict: enough", "890-1070 6.2", 5.4, BW_SUFFICIENT, "rated 6.2, needs 5.4"},
    {"verdict: needs none, rated", "890-1070 5", 0., BW_SUFFICIENT, "needs none"},
    {"verdict: needs none, not rated", "800-820 5", 0., BW_SUFFICIENT, "needs none"},
    {"verdict: exactly the requirement", "890-1070 5.4", 5.4, BW_SUFFICIENT, "rated 5.4, needs 5.4"},
    {"verdict: the requirement but for the last digit", "890-1070 6", 6.000000000000001, BW_SUFFICIENT,
     "rated 6.0, needs 6.0"},
    {"verdict: short by a millionth", "890-1070 5", 5.000001, BW_INSUFFICIENT, "rated 5.0, needs 5.1"},
    {"verdict: needs is rounded up", "890-1070 5", 5.31, BW_INSUFFICIENT, "rated 5.0, needs 5.4"},
    {"verdict: given is rounded down", "890-1070 6.29", 5.4, BW_SUFFICIENT, "rated 6.2, needs 5.4"},
    {"verdict: rounding would turn it round", "890-1070 5.45", 5.44, BW_SUFFICIENT, "rated 5.45, needs 5.44"},
    {"verdict: enough by a thousandth", "890-1070 5.002", 5.001, BW_SUFFICIENT, "rated 5.002, needs 5.001"},
    {"verdict: small requirement, rating 0", "890-1070 0", 0.01, BW_INSUFFICIENT, "rated 0.0, needs 0.1"},
    {"verdict: tiny requirement", "890-1070 0", 1e-15, BW_INSUFFICIENT, "rated 0.0, needs 0.1"},
    {"verdict: requirement without end", "890-1070 20", ENDLESS, BW_INSUFFICIENT, "rated 20.0, needs unbounded"},
    {"verdict: requirement not a number", "890-1070 20", NONE, BW_INSUFFICIENT, "rated 20.0, needs n/a"},
    {"verdict: not a number, not rated", "532 20", NONE, BW_NO_RATING, "no rating at 905 nm"},
};

static void test_verdict(void **state) {
    const struct verdict_case *c = *state;
    struct bw_goggles goggles = {0};
    struct bw_output output = {.count = 1, .emissions = {{.wavelength_nm = 905.}}};
    struct bw_pair_verdict got;
    double required[BW_EMISSIONS_MAX] = {c->required};
    assert_int_equal(bw_eyewear_read_densities(c->densities, &goggles, NULL), BW_OK);
    bw_eyewear_judge(&goggles, &output, required, &got);
    assert_int_equal(got.count, 1);
    assert_string_equal(got.emissions[0].reason, c->reason);
    assert_int_equal(got.emissions[0].verdict, c->verdict);
    assert_int_equal(got.verdict, c->verdict);
    assert_int_equal(isnan(got.emissions[0].od_given), !bw_eyewear_rating(&goggles, 905.));
    assert_int_equal(got.emissions[0].scale_given, 0);
}

/* The worst of the emissions: a missing rating before a weak one before a sufficient one. */
static void test_several_emissions(void **state) {
    (void)state;
    struct bw_goggles goggles = {0};
    struct bw_output output = {.count = 3,
                               .emissions = {{.wavelength_nm = 810.}, {.wavelength_nm = 905.}, {.wavelength_nm = 650.}}};
    struct bw_pair_verdict got;
    assert_int_equal(bw_eyewear_read_marking("800-820 D LB6 + 890-1070 DIR LB5", &goggles, NULL), BW_OK);
    static const struct {
        double required[BW_EMISSIONS_MAX];
        enum bw_verdict verdict;
    } rows[] = {
        {{5.5, 4.9, 0.}, BW_SUFFICIENT},  {{5.5, 5.1, 0.}, BW_INSUFFICIENT}, {{6.1, 4.9, 0.}, BW_INSUFFICIENT},
        {{5.5, 4.9, .1}, BW_NO_RATING},   {{6.1, 5.1, .1}, BW_NO_RATING},    {{0., 0., 0.}, BW_SUFFICIENT},
        {{6., 5., 0.}, BW_SUFFICIENT},
    };
    for (size_t i = 0; i < COUNT(rows); i++) {
        bw_eyewear_judge(&goggles, &output, rows[i].required, &got);
        if (got.verdict != rows[i].verdict)
            fail_msg("row %zu: got %s, want %s", i, bw_verdict_name(got.verdict), bw_verdict_name(rows[i].verdict));
        assert_int_equal(got.count, 3);
        assert_int_equal(got.emissions[0].scale_given, 6);
        assert_int_equal(got.emissions[1].scale_given, 5);
        assert_int_equal(got.emissions[2].scale_given, 0);
    }
}

/* The sum behind the goggles decides: ratios chosen so that it comes out by hand. Each emission has one term, and all
 * terms add. */
static void test_all_together(void **state) {
    (void)state;
    static struct bw_hazard hazard; /* too large for the stack of a small thread */
    static const struct bw_output output = {
        .count = 2, .emissions = {{.wavelength_nm = 810.}, {.wavelength_nm = 650.}}};
    hazard = (struct bw_hazard){.output = &output, .term_count = 2};
    for (size_t i = 0; i < 2; i++) {
        hazard.terms[i].emission = i;
        hazard.adds[i][0] = hazard.adds[i][1] = true;
    }
    static const struct {
        const char *od;
        double ratios[2];
        enum bw_verdict verdict, aiming;
        const char *reason; /* of the aiming beam */
    } rows[] = {
        /* 1000 x 1e-4 + 0.9 = 1.0: kept */
        {"800-820 4", {1000., 0.9}, BW_SUFFICIENT, BW_SUFFICIENT, "no rating at 650 nm; all together keep the limit"},
        /* 1000 x 1e-3 + 0.9 = 1.9: not kept */
        {"800-820 3", {1000., 0.9}, BW_NO_RATING, BW_NO_RATING, "no rating at 650 nm"},
        /* an aiming beam above the limit alone needs a rating of its own */
        {"800-820 6", {1000., 1.1}, BW_NO_RATING, BW_NO_RATING, "no rating at 650 nm"},
        /* 1000 x 1e-3.2 + 0.9 x 1e-1 = 0.72: kept, though the shares ask for OD 3.31 and 0.26 */
        {"800-820 3.2, 640-660 1", {1000., 0.9}, BW_SUFFICIENT, BW_SUFFICIENT, "rated 1.0, needs 0.3"},
    };
    for (size_t i = 0; i < COUNT(rows); i++) {
        struct bw_goggles goggles = {0};
        struct bw_pair_verdict got;
        double ratios[BW_TERMS_MAX] = {rows[i].ratios[0], rows[i].ratios[1]}, od[BW_EMISSIONS_MAX];
        assert_int_equal(bw_eyewear_read_densities(rows[i].od, &goggles, NULL), BW_OK);
        bw_hazard_optical_density(&hazard, ratios, od);
        bw_eyewear_judge_together(&goggles, &hazard, ratios, od, &got);
        if (got.verdict != rows[i].verdict || got.emissions[1].verdict != rows[i].aiming)
            fail_msg("row %zu: got %s, aiming %s", i, bw_verdict_name(got.verdict),
                     bw_verdict_name(got.emissions[1].verdict));
        assert_string_equal(got.emissions[1].reason, rows[i].reason);
    }
}

static void test_fraction_of_a_nanometre(void **state) {
    (void)state;
    struct bw_goggles goggles = {0};
    struct bw_output output = {.count = 2, .emissions = {{.wavelength_nm = 632.8}, {.wavelength_nm = 1e6}}};
    struct bw_pair_verdict got;
    double required[BW_EMISSIONS_MAX] = {1., 1.};
    bw_eyewear_judge(&goggles, &output, required, &got);
    assert_string_equal(got.emissions[0].reason, "no rating at 632.8 nm");
    assert_string_equal(got.emissions[1].reason, "no rating at 1000000 nm");
}

static void test_names(void **state) {
    (void)state;
    assert_string_equal(bw_verdict_name(BW_SUFFICIENT), "sufficient");
    assert_string_equal(bw_verdict_name(BW_INSUFFICIENT), "insufficient");
    assert_string_equal(bw_verdict_name(BW_NO_RATING), "no-rating");
}

int main(void) {
    struct CMUnitTest tests[COUNT(readings) + COUNT(refusals) + COUNT(lookups) + COUNT(verdicts) + 5];
    size_t count = 0;
    for (size_t i = 0; i < COUNT(readings); i++)
        tests[count++] = (struct CMUnitTest){readings[i].name, test_reading, NULL, NULL, &readings[i]};
    for (size_t i = 0; i < COUNT(refusals); i++)
        tests[count++] = (struct CMUnitTest){refusals[i].name, test_refusal, NULL, NULL, &refusals[i]};
    for (size_t i = 0; i < COUNT(lookups); i++)
        tests[count++] = (struct CMUnitTest){lookups[i].name, test_lookup, NULL, NULL, &lookups[i]};
    for (size_t i = 0; i < COUNT(verdicts); i++)
        tests[count++] = (struct CMUnitTest){verdicts[i].name, test_verdict, NULL, NULL, &verdicts[i]};
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_too_many_ranges);
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_several_emissions);
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_all_together);
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_fraction_of_a_nanometre);
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_names);
    return cmocka_run_group_tests_name("eyewear", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
