/* room: glass and gloss by angle, against Fresnel's equations in 30 digits (mpmath 1.3.0).
 * Source: M. Born and E. Wolf, Principles of Optics, section 1.5.2: R_s = ((cos i - w) / (cos i + w))^2 with
 * w = sqrt(n^2 - sin^2 i), n = 1.52; a pane 2 R_s / (1 + R_s). */
#include "test_room_fixture.h"

struct angle_case {
    const char *name;
    double tangent; /* of the angle of incidence */
    double surface, pane;
};

static struct angle_case cases[] = {
    /* name        tan i               R_s                 pane */
    {"normal", 0., 0.04257999496094734, 0.08168197196713388},
    {"45 degrees", 1., 0.0967331599682952, 0.1764023620314199},
    {"Brewster", 1.52, 0.1566919993898281, 0.2709312409396545},
    {"60 degrees", 1.732050807568877, 0.1834382506759984, 0.310008993829996},
    {"80 degrees", 5.67128181961771, 0.5463625468833337, 0.7066422398609145},
};
enum { CASES = sizeof cases / sizeof *cases };

/* Reflector along y = 0; source and place 1 m above it, symmetrical, and turned away from each other but for the
 * reflection: the handpiece may only be turned to where the reflected ray begins. */
static double share_at(const struct angle_case *angle, struct bw_material made) {
    struct plan plan;
    struct handpiece handpiece;
    struct bw_place place;
    struct bw_error error = {BW_OK, ""};
    double up = angle->tangent > 0. ? 1. : 2., bearing = 180. - atan(angle->tangent) * 180. / bw_pi;
    const struct bw_point at = {0., 1.};
    lamp(&handpiece, 5., 0.001, 0.001);
    box_plan(&plan, -1., 0., 14., 3., 0.05);
    plan.room.bounces = 1;
    add_area(&plan, &at, 1, bearing - 0.1, bearing + 0.1);
    add_surface(&plan, -1., 0., 14., 0., made);
    struct bw_point to = {angle->tangent * (1. + up), up};
    if (bw_room_at(&plan.room, &handpiece.source, 1, to, &place, &error) != BW_OK)
        fail_msg("%s", error.text);
    assert_int_equal(place.path, BW_PATH_MIRROR);
    double length_m = (1. + up) * hypot(1., angle->tangent), ratio = bw_hazard_ratio(&handpiece.direct, length_m);
    if (!(fabs(place.length_m - length_m) <= 1e-12 * length_m) ||
        !(fabs(place.ratio - place.share * ratio) <= 1e-9 * ratio))
        fail_msg("length %.15g, want %.15g", place.length_m, length_m);
    return place.share;
}

static void test_case(void **state) {
    const struct angle_case *angle = *state;
    double surface = share_at(angle, material(BW_GLOSS, 0., 0.)), pane = share_at(angle, material(BW_GLASS, 0., 1.));
    if (!(fabs(surface - angle->surface) <= 1e-12) || !(fabs(pane - angle->pane) <= 1e-12))
        fail_msg("surface %.16g, want %.16g; pane %.16g, want %.16g", surface, angle->surface, pane, angle->pane);
}

/* A material with a larger reflectance of its own is not reduced to Fresnel's. */
static void test_floor(void **state) {
    (void)state;
    double surface = share_at(&cases[0], material(BW_GLOSS, 0.2, 0.));
    if (!(fabs(surface - 0.2) <= 1e-12))
        fail_msg("got %.16g, want 0.2", surface);
}

/* Without an index, the one that gives the reflectance at normal incidence. */
static void test_index_from_reflectance(void **state) {
    (void)state;
    struct bw_material made = material(BW_GLOSS, 0.04257999496094734, 0.);
    made.refractive_index = 0.;
    double surface = share_at(&cases[3], made);
    if (!(fabs(surface - cases[3].surface) <= 1e-12))
        fail_msg("got %.16g, want %.16g", surface, cases[3].surface);
}

int main(void) {
    struct CMUnitTest tests[CASES + 2];
    for (size_t i = 0; i < CASES; i++)
        tests[i] = (struct CMUnitTest){cases[i].name, test_case, NULL, NULL, &cases[i]};
    tests[CASES] = (struct CMUnitTest)cmocka_unit_test(test_floor);
    tests[CASES + 1] = (struct CMUnitTest)cmocka_unit_test(test_index_from_reflectance);
    return cmocka_run_group_tests_name("room: glass and gloss", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
