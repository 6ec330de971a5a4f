/* base: roots, against GSL's and against numbers known by hand. */
#include <float.h>
#include <math.h>
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdlib.h>

#include <cmocka.h>
#include <gsl/gsl_errno.h>
#include <gsl/gsl_roots.h>

#include <beamward/base.h>

#define COUNT(array) (sizeof(array) / sizeof *(array))

static double square(double x, const void *c) {
    return x * x - *(const double *)c;
}
static double line(double x, const void *c) {
    return x - *(const double *)c;
}
static double falling_line(double x, const void *c) {
    return *(const double *)c - x;
}
static double cosine(double x, const void *c) {
    return cos(x) - *(const double *)c * x;
}
static double ninth_power(double x, const void *c) {
    return pow(x - *(const double *)c, 9); /* flat at its root */
}
static double jump(double x, const void *c) {
    return x < *(const double *)c ? -1. : 1.;
}
/* The ratio of a diverging beam of 2 mm and 1 mrad against a limit, on a scale of logarithms: as a hazard distance. */
static double beam(double r, const void *c) {
    return log(4. / (3.14159265358979323846 * pow(2e-3 + 1e-3 * r, 2)) / *(const double *)c);
}
static double aperture(double x, const void *c) {
    return 1 - exp(-x * x) - *(const double *)c;
}
static double not_a_number(double x, const void *c) {
    return x > .25 && x < .75 ? (double)NAN : x - *(const double *)c;
}

static struct root_case {
    const char *name;
    bw_function *function;
    double c, low, high, want; /* by hand; relative tolerance beside it */
    double tolerance;
} roots[] = {
    {"root: square root of 2", square, 2., 0., 2., 1.4142135623730951, 4 * DBL_EPSILON},
    {"root: turned round", square, 2., 2., 0., 1.4142135623730951, 4 * DBL_EPSILON},
    {"root: negative", square, 2., -2., 0., -1.4142135623730951, 4 * DBL_EPSILON},
    {"root: of 1e-12 from a wide start", square, 1e-12, 0., 1e6, 1e-6, 4 * DBL_EPSILON},
    {"root: large", square, 1e12, 0., 1e9, 1e6, 4 * DBL_EPSILON},
    {"root: at the low end", line, 3., 3., 5., 3., 0.},
    {"root: at the high end", line, 5., 3., 5., 5., 0.},
    {"root: falling", falling_line, 4., 3., 5., 4., 4 * DBL_EPSILON},
    {"root: from tiny to huge", line, 1e-300, 0., 1e300, 1e-300, 4 * DBL_EPSILON},
    {"root: zero", line, 0., -1., 3., 0., 0.},
    {"root: cos x = x (Dottie's number)", cosine, 1., 0., 1., 0.73908513321516064, 4 * DBL_EPSILON},
    {"root: a jump", jump, 2.5, 0., 100., 2.5, 4 * DBL_EPSILON},
    {"root: beam, r = (sqrt(4/(pi E)) - a)/phi", beam, 25.464790894703254, 0., 1e4, (0.22360679774997896 - 2e-3) / 1e-3,
     1e-13},
    {"root: aperture, x = sqrt(-ln(1-c))", aperture, .5, 0., 10., 0.83255461115769776, 1e-15},
};

static void test_root(void **state) {
    const struct root_case *c = *state;
    double got = 4711.;
    assert_int_equal(bw_root(c->function, &c->c, c->low, c->high, &got), BW_OK);
    if (!(fabs(got - c->want) <= c->tolerance * fabs(c->want)))
        fail_msg("got %.17g, want %.17g", got, c->want);
}

/* A root of high order is known only as far as the function tells: here (x-1)^9 is exactly 0 within 1e-36. */
static void test_flat_root(void **state) {
    (void)state;
    double c = 1., got;
    assert_int_equal(bw_root(ninth_power, &c, 0., 3., &got), BW_OK);
    if (!(fabs(got - 1.) <= 4 * DBL_EPSILON))
        fail_msg("got %.17g, want 1", got);
}

/* A slip in the interpolation still finds the root, by more calls (16 to 21 here), by halving alone with
 * some 50. The bounds are one call above what the method takes today. */
struct counted {
    bw_function *function;
    double c;
    int *calls;
};

static double call_counted(double x, const void *context) {
    const struct counted *counted = context;
    ++*counted->calls;
    return counted->function(x, &counted->c);
}

static struct speed_case {
    const char *name;
    bw_function *function;
    double c, low, high;
    int calls_max;
} speeds[] = {
    {"few calls: square root of 2", square, 2., 0., 2., 11},
    {"few calls: cos x = x", cosine, 1., 0., 1., 9},
    {"few calls: aperture", aperture, .5, 0., 3., 11},
    {"few calls: beam", beam, 25.464790894703254, 0., 1e3, 13},
};

static void test_speed(void **state) {
    const struct speed_case *c = *state;
    int calls = 0;
    double got;
    struct counted counted = {c->function, c->c, &calls};
    assert_int_equal(bw_root(call_counted, &counted, c->low, c->high, &got), BW_OK);
    if (!(calls <= c->calls_max))
        fail_msg("%d calls, want at most %d", calls, c->calls_max);
}

struct gsl_wrap {
    bw_function *function;
    const void *context;
};

static double call_wrapped(double x, void *wrap) {
    const struct gsl_wrap *w = wrap;
    return w->function(x, w->context);
}

static double gsl_root(bw_function *function, const void *context, double low, double high) {
    struct gsl_wrap wrap = {function, context};
    gsl_function f = {call_wrapped, &wrap};
    gsl_root_fsolver *solver = gsl_root_fsolver_alloc(gsl_root_fsolver_bisection);
    assert_non_null(solver);
    assert_int_equal(gsl_root_fsolver_set(solver, &f, low, high), GSL_SUCCESS);
    for (int i = 0; i < 200; i++)
        gsl_root_fsolver_iterate(solver);
    double root = gsl_root_fsolver_root(solver);
    gsl_root_fsolver_free(solver);
    return root;
}

/* 3000 functions of four kinds, against bisection by GSL. */
static void test_against_gsl(void **state) {
    (void)state;
    static const struct {
        bw_function *function;
        double low, high, c_low, c_high;
    } kinds[] = {{square, 0., 20., 1e-3, 300.},
                 {cosine, 0., 2., .1, 50.},
                 {beam, 0., 1e6, 1e-3, 1e5},
                 {aperture, 0., 10., 1e-3, .999}};
    for (size_t kind = 0; kind < COUNT(kinds); kind++) {
        for (int i = 0; i < 750; i++) {
            double c = kinds[kind].c_low * pow(kinds[kind].c_high / kinds[kind].c_low, i / 749.), got;
            assert_int_equal(bw_root(kinds[kind].function, &c, kinds[kind].low, kinds[kind].high, &got), BW_OK);
            double want = gsl_root(kinds[kind].function, &c, kinds[kind].low, kinds[kind].high);
            if (!(fabs(got - want) <= 2e-12 * fabs(want))) /* what rounding leaves of the flat ends of `aperture` */
                fail_msg("kind %zu, c = %.17g: got %.17g, GSL %.17g", kind, c, got, want);
        }
    }
}

static struct refusal_case {
    const char *name;
    bw_function *function;
    double c, low, high;
} refusals[] = {
    {"refused: no change of sign", square, 2., 2., 5.},
    {"refused: both below", square, 2., -1., 1.},
    {"refused: NaN at the low end", square, 2., (double)NAN, 5.},
    {"refused: NaN at the high end", square, 2., 0., (double)NAN},
    {"refused: NaN on the way", not_a_number, .5, 0., 1.},
    {"refused: NaN as context", square, (double)NAN, 0., 5.},
};

static void test_refusal(void **state) {
    const struct refusal_case *c = *state;
    double got = 4711.;
    assert_int_equal(bw_root(c->function, &c->c, c->low, c->high, &got), BW_ARGUMENT);
    assert_true(isnan(got));
}

int main(void) {
    struct CMUnitTest tests[COUNT(roots) + COUNT(speeds) + COUNT(refusals) + 2];
    size_t count = 0;
    gsl_set_error_handler_off();
    for (size_t i = 0; i < COUNT(roots); i++)
        tests[count++] = (struct CMUnitTest){roots[i].name, test_root, NULL, NULL, &roots[i]};
    for (size_t i = 0; i < COUNT(speeds); i++)
        tests[count++] = (struct CMUnitTest){speeds[i].name, test_speed, NULL, NULL, &speeds[i]};
    for (size_t i = 0; i < COUNT(refusals); i++)
        tests[count++] = (struct CMUnitTest){refusals[i].name, test_refusal, NULL, NULL, &refusals[i]};
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_flat_root);
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_against_gsl);
    return cmocka_run_group_tests_name("base root", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
