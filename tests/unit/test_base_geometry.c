/* base: plane geometry, every expected value by hand. */
#include <math.h>
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdlib.h>

#include <cmocka.h>

#include <beamward/base.h>

#define COUNT(array) (sizeof(array) / sizeof *(array))

static void near(double got, double want, const char *what) {
    if (!(fabs(got - want) <= 1e-14))
        fail_msg("%s: got %.17g, want %.17g", what, got, want);
}

/* ---- distances ------------------------------------------------------------------------------- */

static struct distance_case {
    const char *name;
    struct bw_point p;
    struct bw_segment s;
    double want_m;
} distances[] = {
    {"distance: beside", {1., 3.}, {{0., 0.}, {4., 0.}}, 3.},
    {"distance: before the start, 3-4-5", {-3., 4.}, {{0., 0.}, {4., 0.}}, 5.},
    {"distance: past the end, 5-12-13", {9., 12.}, {{0., 0.}, {4., 0.}}, 13.},
    {"distance: on it", {2., 2.}, {{0., 0.}, {4., 4.}}, 0.},
    {"distance: slanting, |3*4+4*3-0|/5", {4., 3.}, {{-8., 6.}, {8., -6.}}, 24. / 5.},
    {"distance: segment of no length", {3., 4.}, {{0., 0.}, {0., 0.}}, 5.},
};

static void test_distance(void **state) {
    const struct distance_case *c = *state;
    near(bw_point_segment_distance(c->p, c->s), c->want_m, c->name);
    struct bw_segment turned = {c->s.to, c->s.from};
    near(bw_point_segment_distance(c->p, turned), c->want_m, "turned round");
}

static void test_points(void **state) {
    (void)state;
    near(bw_distance((struct bw_point){1., 2.}, (struct bw_point){4., 6.}), 5., "3-4-5");
    near(bw_distance((struct bw_point){4., 6.}, (struct bw_point){4., 6.}), 0., "none");
    struct bw_point nowhere = {(double)NAN, 0.};
    assert_true(isnan(bw_distance(nowhere, (struct bw_point){0., 0.})));
    assert_true(isnan(bw_point_segment_distance(nowhere, (struct bw_segment){{0., 0.}, {1., 0.}})));
}

/* ---- crossing -------------------------------------------------------------------------------- */

static struct crossing_case {
    const char *name;
    struct bw_segment a, b;
    bool want;
} crossings[] = {
    {"crossing: an X", {{0., 0.}, {2., 2.}}, {{0., 2.}, {2., 0.}}, true},
    {"crossing: side by side", {{0., 0.}, {2., 0.}}, {{0., 1.}, {2., 1.}}, false},
    {"crossing: lines cross, segments do not", {{0., 0.}, {1., 1.}}, {{0., 4.}, {4., 0.}}, false},
    {"crossing: a T", {{0., 0.}, {2., 0.}}, {{1., 0.}, {1., 2.}}, true},
    {"crossing: a T with a gap", {{0., 0.}, {2., 0.}}, {{1., 1e-6}, {1., 2.}}, false},
    {"crossing: common corner", {{0., 0.}, {2., 0.}}, {{2., 0.}, {3., 5.}}, true},
    {"crossing: on one line, apart", {{0., 0.}, {1., 1.}}, {{2., 2.}, {3., 3.}}, false},
    {"crossing: on one line, overlapping", {{0., 0.}, {2., 2.}}, {{1., 1.}, {3., 3.}}, true},
    {"crossing: one within the other", {{0., 0.}, {3., 3.}}, {{1., 1.}, {2., 2.}}, true},
    {"crossing: the same", {{0., 0.}, {3., 1.}}, {{0., 0.}, {3., 1.}}, true},
    {"crossing: decimal corner on a slanting wall", {{0., 0.}, {1., 3.}}, {{.1, .3}, {-1., .3}}, true},
    {"crossing: the same from the other side", {{0., 0.}, {1., 3.}}, {{.1, .3}, {1., .3}}, true},
    {"crossing: a point on it", {{0., 0.}, {2., 0.}}, {{1., 0.}, {1., 0.}}, true},
    {"crossing: a point beside it", {{0., 0.}, {2., 0.}}, {{1., 1.}, {1., 1.}}, false},
    {"crossing: boxes overlap, segments do not", {{0., 0.}, {4., 4.}}, {{3., 0.}, {4., 3.}}, false},
};

static void test_crossing(void **state) {
    const struct crossing_case *c = *state;
    struct bw_segment a = {c->a.to, c->a.from}, b = {c->b.to, c->b.from};
    assert_int_equal(bw_segments_cross(c->a, c->b), c->want);
    assert_int_equal(bw_segments_cross(c->b, c->a), c->want);
    assert_int_equal(bw_segments_cross(a, c->b), c->want);
    assert_int_equal(bw_segments_cross(c->a, b), c->want);
}

/* ---- mirror ---------------------------------------------------------------------------------- */

static struct mirror_case {
    const char *name;
    struct bw_point p;
    struct bw_segment line;
    struct bw_point want;
} mirrors[] = {
    {"mirror: in the x axis", {3., 2.}, {{0., 0.}, {1., 0.}}, {3., -2.}},
    {"mirror: in a wall at x = 5", {3., 2.}, {{5., 7.}, {5., 1.}}, {7., 2.}},
    {"mirror: in the diagonal", {3., 1.}, {{0., 0.}, {2., 2.}}, {1., 3.}},
    {"mirror: on the line", {3., 3.}, {{0., 0.}, {2., 2.}}, {3., 3.}},
    {"mirror: past the ends of the segment", {10., 1.}, {{0., 0.}, {1., 0.}}, {10., -1.}},
    {"mirror: in 3x + 4y = 0", {3., 4.}, {{-4., 3.}, {4., -3.}}, {-3., -4.}},
};

static void test_mirror(void **state) {
    const struct mirror_case *c = *state;
    struct bw_segment turned = {c->line.to, c->line.from};
    struct bw_point got = bw_mirror_point(c->p, c->line), again = bw_mirror_point(c->p, turned);
    near(got.x_m, c->want.x_m, "x");
    near(got.y_m, c->want.y_m, "y");
    near(again.x_m, c->want.x_m, "x, turned round");
    near(again.y_m, c->want.y_m, "y, turned round");
    struct bw_point back = bw_mirror_point(got, c->line);
    near(back.x_m, c->p.x_m, "x, back");
    near(back.y_m, c->p.y_m, "y, back");
}

/* ---- polygons -------------------------------------------------------------------------------- */

enum { CORNERS_MAX = 8 };

static struct polygon_case {
    const char *name;
    struct bw_point points[CORNERS_MAX];
    size_t count;
    double area_m2; /* of simple ones */
    bool simple, convex;
} polygons[] = {
    {"polygon: square", {{0., 0.}, {2., 0.}, {2., 2.}, {0., 2.}}, 4, 4., true, true},
    {"polygon: triangle", {{0., 0.}, {4., 0.}, {0., 3.}}, 3, 6., true, true},
    {"polygon: L", {{0., 0.}, {4., 0.}, {4., 1.}, {1., 1.}, {1., 3.}, {0., 3.}}, 6, 6., true, false},
    {"polygon: dart", {{0., 0.}, {4., 0.}, {1., 1.}, {0., 4.}}, 4, 4., true, false},
    {"polygon: corner within a side", {{0., 0.}, {1., 0.}, {2., 0.}, {2., 2.}, {0., 2.}}, 5, 4., true, true},
    {"polygon: decimal corners within a slanting side",
     {{0., 0.}, {.1, .3}, {.2, .6}, {.7, 2.1}, {1., 3.}, {0., 3.}},
     6,
     1.5,
     true,
     true},
    {"polygon: bow tie", {{0., 0.}, {2., 2.}, {2., 0.}, {0., 2.}}, 4, 0., false, false},
    {"polygon: corner twice", {{0., 0.}, {2., 0.}, {2., 0.}, {2., 2.}, {0., 2.}}, 5, 0., false, false},
    {"polygon: closed explicitly", {{0., 0.}, {2., 0.}, {2., 2.}, {0., 2.}, {0., 0.}}, 5, 0., false, false},
    {"polygon: spike", {{0., 0.}, {2., 0.}, {4., 0.}, {2., 0.}, {2., 2.}, {0., 2.}}, 6, 0., false, false},
    {"polygon: spike at its first corner", {{4., 0.}, {2., 0.}, {2., 2.}, {0., 2.}, {0., 0.}}, 5, 0., false, false},
    {"polygon: corner touches a side", {{0., 0.}, {4., 0.}, {4., 4.}, {2., 0.}, {0., 4.}}, 5, 0., false, false},
    {"polygon: triangle on one line", {{0., 0.}, {1., 1.}, {2., 2.}}, 3, 0., false, false},
    {"polygon: two corners", {{0., 0.}, {1., 1.}}, 2, 0., false, false},
    {"polygon: one corner", {{1., 1.}}, 1, 0., false, false},
    {"polygon: none", {{0., 0.}}, 0, 0., false, false},
    {"polygon: five-pointed star",
     {{0., 1.}, {.5878, -.8090}, {-.9511, .3090}, {.9511, .3090}, {-.5878, -.8090}},
     5,
     0.,
     false,
     false},
};

/* Whatever the corner it begins with and the direction. */
static void test_polygon(void **state) {
    const struct polygon_case *c = *state;
    size_t n = c->count;
    for (size_t first = 0; first < (n > 0 ? n : 1); first++) {
        for (int direction = 0; direction < 2; direction++) {
            struct bw_point points[CORNERS_MAX];
            for (size_t i = 0; i < n; i++)
                points[i] = c->points[(first + (direction ? n - i : i)) % n];
            struct bw_polygon polygon = {points, n};
            assert_int_equal(bw_polygon_is_simple(&polygon), c->simple);
            if (!c->simple)
                continue;
            assert_int_equal(bw_polygon_is_convex(&polygon), c->convex);
            near(bw_polygon_area(&polygon), c->area_m2, "area");
        }
    }
}

static void test_no_area(void **state) {
    (void)state;
    struct bw_polygon none = {NULL, 0};
    near(bw_polygon_area(&none), 0., "no corners");
    assert_false(bw_polygon_contains(&none, (struct bw_point){0., 0.}));
}

static struct bw_point u_shape[] = {{0., 0.}, {6., 0.}, {6., 4.}, {4., 4.}, {4., 2.}, {2., 2.}, {2., 4.}, {0., 4.}};
static struct bw_point slanting[] = {{0., 0.}, {1., 3.}, {0., 3.}};

static struct inside_case {
    const char *name;
    struct bw_polygon polygon;
    struct bw_point p;
    bool want;
} insides[] = {
    {"inside: the base of the U", {u_shape, 8}, {3., 1.}, true},
    {"inside: its left arm", {u_shape, 8}, {1., 3.}, true},
    {"inside: its right arm", {u_shape, 8}, {5., 3.}, true},
    {"inside: not between the arms", {u_shape, 8}, {3., 3.}, false},
    {"inside: not left of it", {u_shape, 8}, {-1., 2.}, false},
    {"inside: not left of it at the height of a corner", {u_shape, 8}, {-1., 4.}, false},
    {"inside: not right of it at the height of an edge", {u_shape, 8}, {7., 2.}, false},
    {"inside: at the height of the inner edge", {u_shape, 8}, {1., 2.}, true},
    {"inside: the edge counts", {u_shape, 8}, {3., 2.}, true},
    {"inside: the upper edge counts", {u_shape, 8}, {5., 4.}, true},
    {"inside: a corner counts", {u_shape, 8}, {4., 4.}, true},
    {"inside: the first corner counts", {u_shape, 8}, {0., 0.}, true},
    {"inside: not just beside the edge", {u_shape, 8}, {6.000001, 1.}, false},
    {"inside: 0.1 0.3 on a slanting edge", {slanting, 3}, {.1, .3}, true},
    {"inside: 0.7 2.1 on a slanting edge", {slanting, 3}, {.7, 2.1}, true},
    {"inside: not just beside a slanting edge", {slanting, 3}, {.100001, .3}, false},
    {"inside: nowhere is not inside", {slanting, 3}, {(double)NAN, 1.}, false},
};

static void test_inside(void **state) {
    const struct inside_case *c = *state;
    assert_int_equal(bw_polygon_contains(&c->polygon, c->p), c->want);
}

int main(void) {
    struct CMUnitTest
        tests[COUNT(distances) + COUNT(crossings) + COUNT(mirrors) + COUNT(polygons) + COUNT(insides) + 2];
    size_t count = 0;
    for (size_t i = 0; i < COUNT(distances); i++)
        tests[count++] = (struct CMUnitTest){distances[i].name, test_distance, NULL, NULL, &distances[i]};
    for (size_t i = 0; i < COUNT(crossings); i++)
        tests[count++] = (struct CMUnitTest){crossings[i].name, test_crossing, NULL, NULL, &crossings[i]};
    for (size_t i = 0; i < COUNT(mirrors); i++)
        tests[count++] = (struct CMUnitTest){mirrors[i].name, test_mirror, NULL, NULL, &mirrors[i]};
    for (size_t i = 0; i < COUNT(polygons); i++)
        tests[count++] = (struct CMUnitTest){polygons[i].name, test_polygon, NULL, NULL, &polygons[i]};
    for (size_t i = 0; i < COUNT(insides); i++)
        tests[count++] = (struct CMUnitTest){insides[i].name, test_inside, NULL, NULL, &insides[i]};
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_points);
    tests[count++] = (struct CMUnitTest)cmocka_unit_test(test_no_area);
    return cmocka_run_group_tests_name("base geometry", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
