/* room: rooms simple enough to be solved by hand. */
#include "test_room_fixture.h"

static void near(const char *what, double got, double want, double tolerance) {
    if (!(fabs(got - want) <= tolerance))
        fail_msg("%s: got %.12g, want %.12g +/- %.3g", what, got, want, tolerance);
}

static double reach_m(const struct handpiece *handpiece) {
    struct bw_reach reach;
    assert_int_equal(bw_hazard_reach(&handpiece->direct, BW_EMISSIONS_MAX, &reach, NULL, NULL), BW_OK);
    assert_false(reach.unbounded);
    return reach.distance_m;
}

/* A lamp whose hazard ends at about the distance asked for (a few per cent). */
static void lamp_reaching(struct handpiece *handpiece, double distance_m) {
    double low_w = 1e-3, high_w = 100;
    for (int i = 0; i < 60; i++) {
        double power_w = sqrt(low_w * high_w);
        lamp(handpiece, power_w, 0.01, 0.3);
        if (reach_m(handpiece) > distance_m)
            high_w = power_w;
        else
            low_w = power_w;
    }
    near("reach", reach_m(handpiece), distance_m, 1e-6);
}

static struct bw_place place_at(const struct plan *plan, const struct handpiece *handpiece, double x, double y) {
    struct bw_place place;
    struct bw_error error = {BW_OK, ""};
    if (bw_room_at(&plan->room, &handpiece->source, 1, (struct bw_point){x, y}, &place, &error) != BW_OK)
        fail_msg("%s", error.text);
    return place;
}

/* ---- areas ------------------------------------------------------------------------------------------------------ */

/* Cells that the zone only touches count whole: at most a ring of one diagonal more. */
static void near_area(double got_m2, double want_m2, double edge_m, double cell_m) {
    if (!(got_m2 >= want_m2 && got_m2 <= want_m2 + edge_m * cell_m * sqrt(2) + 4 * cell_m * cell_m))
        fail_msg("area %.6g m2, by hand %.6g m2 and at most a ring of one cell more", got_m2, want_m2);
}

static void test_disc(void **state) {
    (void)state;
    struct plan plan;
    struct handpiece handpiece;
    struct bw_room_solution solution;
    lamp_reaching(&handpiece, 1.5);
    box_plan(&plan, 0, 0, 5, 4, 0.02);
    add_point_area(&plan, 2.5, 2);
    solve(&plan, &handpiece, &solution);
    near_area(solution.nhz_area_m2, bw_pi * 1.5 * 1.5, 2 * bw_pi * 1.5, 0.02);
    assert_true(solution.farthest_m >= 1.5 && solution.farthest_m <= 1.5 * 1.001 + 0.02 * sqrt(2));
    near("largest", solution.ratio_max, bw_hazard_ratio(&handpiece.direct, 0), 1e-9 * solution.ratio_max);
    bw_room_solution_free(&solution);
}

/* The disc about a couch: its area, its rounded edge. */
static void test_couch(void **state) {
    (void)state;
    struct plan plan;
    struct handpiece handpiece;
    struct bw_room_solution solution;
    lamp_reaching(&handpiece, 1);
    box_plan(&plan, 0, 0, 5, 4, 0.02);
    add_couch(&plan, 2, 1.6, 3.2, 2.4);
    solve(&plan, &handpiece, &solution);
    near_area(solution.nhz_area_m2, 1.2 * 0.8 + 2 * (1.2 + 0.8) * 1 + bw_pi, 4 + 2 * bw_pi, 0.02);
    bw_room_solution_free(&solution);
}

static void test_half_disc(void **state) {
    (void)state;
    struct plan plan;
    struct handpiece handpiece;
    struct bw_room_solution solution;
    lamp_reaching(&handpiece, 1.5);
    box_plan(&plan, 0, 0, 5, 4, 0.02);
    add_point_area(&plan, 2.5, 0);
    solve(&plan, &handpiece, &solution);
    near_area(solution.nhz_area_m2, bw_pi * 1.5 * 1.5 / 2, bw_pi * 1.5, 0.02);
    bw_room_solution_free(&solution);
}

/* Nothing reaches beyond the room, whatever the hazard. */
static void test_whole_room(void **state) {
    (void)state;
    struct plan plan;
    struct handpiece handpiece;
    struct bw_room_solution solution;
    const struct bw_point outline[5] = {{0, 0}, {4.03, 0.3}, {3.7, 2.9}, {1.2, 3.31}, {-0.5, 1.7}};
    lamp(&handpiece, 10, 0.01, 0.1);
    begin_plan(&plan, outline, 5, 0.05);
    add_point_area(&plan, 2, 1.5);
    solve(&plan, &handpiece, &solution);
    near("area", solution.nhz_area_m2, bw_polygon_area(&plan.room.outline), 1e-9);
    double corner_m = 0;
    for (size_t i = 0; i < 5; i++)
        corner_m = fmax(corner_m, hypot(outline[i].x_m - 2, outline[i].y_m - 1.5));
    near("farthest", solution.farthest_m, corner_m, 1e-9);
    bw_room_solution_free(&solution);
}

/* ---- mirrors, screens, aims ---------------------------------------------------------------------------------------
 */

/* Mirror on the line x = 0 from y = 1 to 3; source at (1, 2), image at (-1, 2). A screen keeps direct light off. */
static void test_mirror(void **state) {
    (void)state;
    struct plan plan;
    struct handpiece handpiece;
    lamp(&handpiece, 5, 0.001, 0.4);
    box_plan(&plan, 0, 0, 6, 5, 0.05);
    plan.room.bounces = 1;
    add_point_area(&plan, 1, 2);
    add_surface(&plan, 0, 1, 0, 3, material(BW_MIRROR, 0.9, 0));
    add_surface(&plan, 1.5, 1.9, 1.5, 2.8, dark());
    struct bw_place place = place_at(&plan, &handpiece, 2, 3);
    near("length", place.length_m, hypot(3, 1), 1e-12);
    near("ratio", place.ratio, 0.9 * bw_hazard_ratio(&handpiece.direct, hypot(3, 1)), 1e-9 * place.ratio);
    assert_int_equal(place.path, BW_PATH_MIRROR);
    assert_string_equal(place.via, "surface-0");
    near("direct", place_at(&plan, &handpiece, 2, 1).ratio, bw_hazard_ratio(&handpiece.direct, sqrt(2)), 1e-9);
    /* The link from (-1, 2) to (0.5, 0.7) meets x = 0 at 1.13, that to (0.5, 0.3) at 0.87, past the mirror's end. */
    plan.surfaces[1].segment = (struct bw_segment){{0.95, 1.9}, {1.2, 1.9}};
    near("at the mirror's end", place_at(&plan, &handpiece, 0.5, 0.7).path, BW_PATH_MIRROR, 0);
    near("past the mirror's end", place_at(&plan, &handpiece, 0.5, 0.3).path, BW_PATH_NONE, 0);
    plan.surfaces[1].segment = (struct bw_segment){{1.5, 1.9}, {1.5, 2.8}};
    plan.room.bounces = 0;
    near("no bounces", place_at(&plan, &handpiece, 2, 3).ratio, 0, 0);
    assert_int_equal(place_at(&plan, &handpiece, 2, 3).path, BW_PATH_NONE);
}

/* Two mirrors at right angles: through both, the source at (1, 1) appears at (-1, -1). */
static void test_two_mirrors(void **state) {
    (void)state;
    struct plan plan;
    struct handpiece handpiece;
    lamp(&handpiece, 5, 0.001, 0.4);
    box_plan(&plan, 0, 0, 6, 6, 0.05);
    plan.room.bounces = 2;
    const struct bw_point at = {1, 1};
    add_area(&plan, &at, 1, 215, 235); /* aimed into the corner */
    add_surface(&plan, 0, 0, 0, 2, material(BW_MIRROR, 0.9, 0));
    add_surface(&plan, 0, 0, 2, 0, material(BW_MIRROR, 0.8, 0));
    struct bw_place place = place_at(&plan, &handpiece, 3, 3.2);
    near("length", place.length_m, hypot(4, 4.2), 1e-12);
    near("share", place.share, 0.72, 1e-12);
    near("ratio", place.ratio, 0.72 * bw_hazard_ratio(&handpiece.direct, hypot(4, 4.2)), 1e-9 * place.ratio);
    plan.room.bounces = 3;
    near("third", place_at(&plan, &handpiece, 3, 3.2).ratio, place.ratio, 1e-12 * place.ratio);
}

/* A corridor between the mirrors x = 0 and x = 2; from (0.6, 1) to (1.3, 4). The image at X is seen through y = 2 at
 * X + (1.3 - X) / 3, folded back into the corridor; a screen there has one gap. */
static void test_corridor(void **state) {
    (void)state;
    static const struct {
        double gap, image;
        int bounces;
    } rows[] = {
        {0.8333, 0.6, 0}, {0.0333, -0.6, 1}, {1.3, 3.4, 1}, {0.5, 4.6, 2}, {1.8333, -3.4, 2}, {1.3667, -4.6, 3},
    };
    for (size_t i = 0; i < sizeof rows / sizeof *rows; i++) {
        struct plan plan;
        struct handpiece handpiece;
        lamp(&handpiece, 5, 0.001, 0.4);
        box_plan(&plan, 0, 0, 2, 8, 0.05);
        plan.room.bounces = 3;
        add_point_area(&plan, 0.6, 1);
        add_surface(&plan, 0, 0, 0, 8, material(BW_MIRROR, 0.9, 0));
        add_surface(&plan, 2, 0, 2, 8, material(BW_MIRROR, 0.9, 0));
        add_surface(&plan, 0, 2, rows[i].gap - 0.01, 2, dark());
        add_surface(&plan, rows[i].gap + 0.01, 2, 2, 2, dark());
        struct bw_place place = place_at(&plan, &handpiece, 1.3, 4);
        near("length", place.length_m, hypot(rows[i].image - 1.3, 3), 1e-12);
        near("share", place.share, pow(0.9, rows[i].bounces), 1e-12);
        plan.room.bounces = rows[i].bounces - 1;
        if (rows[i].bounces > 0)
            assert_true(place_at(&plan, &handpiece, 1.3, 4).ratio <= 0);
    }
}

/* Shadow of a screen from (2, 1) to (2, 2) with the lamp at (1, 1.5): lines of slope +-1/2. */
static void test_screen(void **state) {
    (void)state;
    struct plan plan;
    struct handpiece handpiece;
    struct bw_room_solution solution;
    lamp(&handpiece, 5, 0.001, 0.4);
    box_plan(&plan, 0, 0, 5, 3, 0.01);
    add_point_area(&plan, 1, 1.5);
    add_surface(&plan, 2, 1, 2, 2, dark());
    solve(&plan, &handpiece, &solution);
    for (double x = 2.105; x < 4; x += 0.3) {
        double edge = (x - 1) / 2, penumbra = 0.0005 * (x - 2) + 0.02;
        for (int side = -1; side <= 1; side += 2) {
            near("dark", ratio_at(&solution.map, x, 1.5 + side * (edge - penumbra)), 0, 0);
            double y = 1.5 + side * (edge + penumbra), here = bw_hazard_ratio(&handpiece.direct, hypot(x - 1, y - 1.5));
            if (y > 0 && y < 3 && !(ratio_at(&solution.map, x, y) >= here))
                fail_msg("lit at %g %g: %g, want at least %g", x, y, ratio_at(&solution.map, x, y), here);
        }
    }
    near("right behind", ratio_at(&solution.map, 2.005, 1.5), 0, 0);
    bw_room_solution_free(&solution);
}

/* A curtain that passes a part; a joint of two screens passes nothing. */
static void test_curtain_and_joint(void **state) {
    (void)state;
    struct plan plan;
    struct handpiece handpiece;
    lamp(&handpiece, 5, 0.001, 0.4);
    box_plan(&plan, 0, 0, 5, 3, 0.05);
    add_couch(&plan, 0.5, 1, 1, 2);
    add_surface(&plan, 2, 0, 2, 3, material(BW_MATT, 0, 0.01));
    struct bw_place place = place_at(&plan, &handpiece, 3, 1.5);
    near("curtain", place.ratio, 0.01 * bw_hazard_ratio(&handpiece.direct, 2), 1e-9 * place.ratio);
    plan.surfaces[0].material.transmittance = 0;
    plan.surfaces[0].segment = (struct bw_segment){{2, 0}, {2.2, 1.5}};
    add_surface(&plan, 2.2, 1.5, 2, 3, dark());
    struct bw_room_solution solution;
    solve(&plan, &handpiece, &solution);
    for (double y = 0.025; y < 3; y += 0.05)
        for (double x = 2.325; x < 5; x += 0.05)
            near("behind the joint", ratio_at(&solution.map, x, y), 0, 0);
    bw_room_solution_free(&solution);
}

/* Aims from 45 to 135 degrees (to the right). */
static void test_aims(void **state) {
    (void)state;
    struct plan plan;
    struct handpiece handpiece;
    const struct bw_point at = {2, 2};
    lamp(&handpiece, 5, 0.001, 0.05);
    box_plan(&plan, 0, 0, 4, 4, 0.02);
    add_area(&plan, &at, 1, 45, 135);
    struct bw_room_solution solution;
    solve(&plan, &handpiece, &solution);
    for (double bearing = 0; bearing < 360; bearing += 6) {
        if (fabs(bearing - 45) < 5 || fabs(bearing - 135) < 5)
            continue;
        double angle = bearing * bw_pi / 180, x = 2 + 1.5 * sin(angle), y = 2 + 1.5 * cos(angle);
        double here = ratio_at(&solution.map, x, y), on_axis = bw_hazard_ratio(&handpiece.direct, 1.5);
        if (bearing > 45 && bearing < 135)
            assert_true(here >= on_axis && here <= 1.1 * on_axis);
        else
            assert_true(here < on_axis * 1e-3);
    }
    near("behind", ratio_at(&solution.map, 1, 2), 0, 0);
    /* Two degrees beside: the beam's edge, no more than a bound of it and no less. */
    double beside = 2 * bw_pi / 180, angle = 43 * bw_pi / 180;
    struct bw_place place = place_at(&plan, &handpiece, 2 + sin(angle), 2 + cos(angle));
    double want = bw_hazard_ratio_off_axis(&handpiece.direct, cos(beside), sin(beside) - 0.0005);
    near("beside", place.ratio, want, 1e-6 * want);
    bw_room_solution_free(&solution);
}

/* Through a mirror the bearing is that of the first leg. */
static void test_aims_in_mirror(void **state) {
    (void)state;
    struct plan plan;
    struct handpiece handpiece;
    const struct bw_point at = {2, 2};
    lamp(&handpiece, 5, 0.001, 0.05);
    box_plan(&plan, 0, 0, 6, 4, 0.05);
    plan.room.bounces = 1;
    add_area(&plan, &at, 1, 260, 280); /* to the left */
    add_surface(&plan, 0, 1, 0, 3, material(BW_MIRROR, 1, 0));
    struct bw_place place = place_at(&plan, &handpiece, 5, 2.3);
    near("length", place.length_m, hypot(7, 0.3), 1e-12);
    near("ratio", place.ratio, bw_hazard_ratio(&handpiece.direct, hypot(7, 0.3)), 1e-9 * place.ratio);
    plan.areas[0].aim_from_deg = 80;
    plan.areas[0].aim_to_deg = 100;
    place = place_at(&plan, &handpiece, 1, 2.01);
    near("away from the mirror", place.ratio, 0, 0);
}

/* L-shaped: from the end of one arm the other arm's end is dark. */
static void test_l_shape(void **state) {
    (void)state;
    struct plan plan;
    struct handpiece handpiece;
    struct bw_room_solution solution;
    const struct bw_point outline[6] = {{0, 0}, {4, 0}, {4, 1}, {1, 1}, {1, 4}, {0, 4}};
    lamp(&handpiece, 5, 0.001, 0.4);
    begin_plan(&plan, outline, 6, 0.02);
    add_couch(&plan, 3, 0.2, 3.5, 0.6);
    solve(&plan, &handpiece, &solution);
    near("outside", ratio_at(&solution.map, 2, 2), 0, 0);
    assert_int_equal(solution.map.inside[cell_at(&solution.map, 2, 2)], 0);
    /* Steepest line past the corner (1, 1): from (3.5, 0.2), slope -0.8 / 2.5; with x = 0 at y = 1.32. */
    near("dark arm", ratio_at(&solution.map, 0.5, 1.33), 0, 0);
    near("dark end", ratio_at(&solution.map, 0.1, 3.9), 0, 0);
    assert_true(ratio_at(&solution.map, 0.05, 1.2) > 0);
    assert_true(ratio_at(&solution.map, 0.95, 0.95) > 0);
    near("area", solution.nhz_area_m2 <= 7, 1, 0);
    bw_room_solution_free(&solution);
}

/* ---- openings ---------------------------------------------------------------------------------------------------- */

static void test_openings(void **state) {
    (void)state;
    struct plan plan;
    struct handpiece handpiece;
    struct bw_room_solution solution;
    lamp(&handpiece, 50, 0.001, 0.4);
    box_plan(&plan, 0, 0, 5, 4, 0.05);
    add_point_area(&plan, 2, 2);
    add_opening(&plan, 5, 1, 5, 2.5, BW_DOOR, BW_COVER_NONE);
    add_opening(&plan, 1, 4, 2.5, 4, BW_WINDOW, BW_COVER_NONE);
    add_opening(&plan, 0, 1, 0, 3, BW_WINDOW, BW_COVER_OPAQUE);
    add_opening(&plan, 1, 0, 2.5, 0, BW_GAP, BW_COVER_MATERIAL)->material = material(BW_MATT, 1, 1e-9);
    add_opening(&plan, 3, 0, 4, 0, BW_GAP, BW_COVER_MATERIAL)->material = material(BW_MATT, 1, 0.5);
    solve(&plan, &handpiece, &solution);
    static const double distances_m[5] = {3, 2, 2, 2, 2.23606797749979};
    static const double passes[5] = {1, 1, 0, 1e-9, 0.5};
    for (size_t i = 0; i < 5; i++) {
        double want = passes[i] * bw_hazard_ratio(&handpiece.direct, distances_m[i]);
        near("beyond", solution.openings[i].ratio_beyond, want, 1e-9 * want);
        assert_int_equal(solution.openings[i].leaves, want > 1);
    }
    char needs[BW_REASON_SIZE], density[BW_NUMBER_SIZE];
    bw_format_fixed(density, log10(bw_hazard_ratio(&handpiece.direct, 3)), 1, BW_UP);
    snprintf(needs, sizeof needs, "keep shut or opaque cover, optical density %s", density);
    assert_string_equal(solution.openings[0].needs, needs);
    assert_string_equal(solution.openings[2].needs, "nothing");
    assert_string_equal(solution.openings[3].needs, "nothing");
    bw_room_solution_free(&solution);
}

/* ---- diffuse ------------------------------------------------------------------------------------------------------
 */

/* The treated spot behind a handpiece that cannot be turned that way: seen as a diffuse source only. */
static void test_treated(void **state) {
    (void)state;
    struct plan plan;
    struct handpiece handpiece;
    const struct bw_point at = {2, 2};
    lamp(&handpiece, 10, 0.01, 0.2);
    box_plan(&plan, 0, 0, 4, 4, 0.05);
    plan.room.treated = material(BW_MATT, 0.6, 0);
    add_area(&plan, &at, 1, 85, 95);
    struct bw_place place = place_at(&plan, &handpiece, 1.5, 2);
    struct bw_spot spot;
    struct bw_ratio want;
    assert_int_equal(bw_hazard_spot(&handpiece.output, 0, 0.6, &spot), BW_OK);
    assert_int_equal(bw_hazard_diffuse_ratio(&handpiece.diffuse, &spot, 0.5, &want, NULL), BW_OK);
    assert_int_equal(place.path, BW_PATH_DIFFUSE);
    near("ratio", place.ratio, want.total, 1e-9 * want.total);
    near("length", place.length_m, 0.5, 1e-12);
}

/* A matt wall at x = 4, lit from (2, 2); at (2.4, 3) only its light is seen. The spot is at least as large as at the
 * wall's nearest point, and no part that is lit is nearer than 1.6 m. */
static void test_matt_wall(void **state) {
    (void)state;
    struct plan plan;
    struct handpiece handpiece;
    const struct bw_point at = {2, 2};
    lamp(&handpiece, 10, 0.01, 0.05);
    box_plan(&plan, 0, 0, 4, 4, 0.05);
    plan.room.walls = material(BW_MATT, 0.9, 0);
    add_area(&plan, &at, 1, 88, 92);
    struct bw_place place = place_at(&plan, &handpiece, 2.4, 3);
    struct bw_spot spot;
    struct bw_ratio at_most, at_least;
    assert_int_equal(bw_hazard_spot(&handpiece.output, 2, 0.9, &spot), BW_OK);
    assert_int_equal(bw_hazard_diffuse_ratio(&handpiece.diffuse, &spot, hypot(1.6, 1), &at_least, NULL), BW_OK);
    assert_int_equal(bw_hazard_spot(&handpiece.output, 1.8, 0.9, &spot), BW_OK);
    assert_int_equal(bw_hazard_diffuse_ratio(&handpiece.diffuse, &spot, 1.65, &at_most, NULL), BW_OK);
    assert_int_equal(place.path, BW_PATH_DIFFUSE);
    assert_string_equal(place.via, "wall");
    if (!(place.ratio >= at_least.total && place.ratio <= at_most.total))
        fail_msg("%g, want %g to %g", place.ratio, at_least.total, at_most.total);
    /* A screen that keeps the beam off the wall darkens it, and is lit itself, on the near side only. */
    add_surface(&plan, 3, 1, 3, 3, material(BW_MATT, 1, 0));
    near("behind the screen", place_at(&plan, &handpiece, 3.5, 2).ratio, 0, 0);
    assert_string_equal(place_at(&plan, &handpiece, 2.4, 3).via, "surface-0");
}

/* Pulses of 10 ms: alpha_max is 20 mrad, and a spot just wider has half the train correction (IEC 60825-1:2014, C5, from
 * memory). So of all spots on a lit wall the smallest is not always the worst: each place of the wall is tried. */
static void test_matt_wall_long_pulses(void **state) {
    (void)state;
    struct plan plan;
    struct handpiece handpiece;
    struct bw_error error = {BW_OK, ""};
    struct bw_emission_input input = {810, 10, (double)NAN, (double)NAN, 10e-3, 20, NULL};
    const struct bw_point at = {2, 2};
    box_plan(&plan, 0, 0, 4, 4, 0.05);
    plan.room.walls = material(BW_MATT, 0.9, 0);
    add_area(&plan, &at, 1, 60, 120);
    for (double divergence_rad = 0.010; divergence_rad < 0.022; divergence_rad += 0.001) {
        lamp(&handpiece, 10, 0.001, divergence_rad);
        assert_int_equal(bw_emission_resolve(&input, &handpiece.output.emissions[0], &error), BW_OK);
        prepare(&handpiece, 100);
        double worst = 0, got = place_at(&plan, &handpiece, 2.4, 3).ratio;
        for (double y = 1; y <= 3; y += 0.005) {
            struct bw_spot spot;
            struct bw_ratio ratio;
            assert_int_equal(bw_hazard_spot(&handpiece.output, hypot(2, y - 2), 0.9, &spot), BW_OK);
            assert_int_equal(bw_hazard_diffuse_ratio(&handpiece.diffuse, &spot, hypot(1.6, y - 3), &ratio, NULL), BW_OK);
            worst = fmax(worst, ratio.total);
        }
        if (!(got >= worst * (1 - 1e-9)))
            fail_msg("%g rad: got %g, a place of the wall gives %g", divergence_rad, got, worst);
    }
}

/* ---- results that belong together -----------------------------------------------------------------------------------
 */

static void test_terms(void **state) {
    (void)state;
    struct plan plan;
    struct handpiece handpiece;
    struct bw_error error = {BW_OK, ""};
    double terms[BW_TERMS_MAX], want[BW_TERMS_MAX];
    trident(&handpiece);
    box_plan(&plan, 0, 0, 5, 4, 0.05);
    plan.room.treated = material(BW_MATT, 0.65, 0);
    add_couch(&plan, 2, 1.6, 3.2, 2.4);
    assert_int_equal(bw_room_terms_at(&plan.room, &handpiece.source, (struct bw_point){2.6, 1.1}, terms, &error),
                     BW_OK);
    bw_hazard_term_ratios(&handpiece.direct, 0.5, want);
    for (size_t i = 0; i < handpiece.direct.term_count; i++)
        near("term", terms[i], want[i], 1e-9 * want[i]);
}

static void test_persons_within_cells(void **state) {
    (void)state;
    struct plan plan;
    struct handpiece handpiece;
    struct bw_room_solution solution;
    trident(&handpiece);
    box_plan(&plan, 0, 0, 5, 4, 0.03);
    plan.room.bounces = 2;
    plan.room.walls = material(BW_MATT, 0.9, 0);
    plan.room.treated = material(BW_MATT, 0.65, 0);
    add_couch(&plan, 2, 1.6, 3.2, 2.4);
    plan.areas[0].aim_from_deg = 100;
    plan.areas[0].aim_to_deg = 200;
    add_surface(&plan, 0, 1, 0, 2.2, material(BW_MIRROR, 0.97, 0));
    add_surface(&plan, 3.6, 0.4, 4.2, 1.1, material(BW_GLOSS, 0.0426, 0));
    add_surface(&plan, 1.2, 1.3, 1.2, 2.6, dark());
    for (int i = 0; i < 60; i++)
        add_person(&plan, 0.1 + 0.079 * i, fmod(0.05 + 0.731 * i, 3.9));
    solve(&plan, &handpiece, &solution);
    for (size_t i = 0; i < plan.room.person_count; i++) {
        struct bw_point at = plan.persons[i].at;
        double here = solution.persons[i].ratio, cell = ratio_at(&solution.map, at.x_m, at.y_m);
        if (!(here <= cell * (1 + 1e-9)))
            fail_msg("person at %g %g: %.12g, cell %.12g", at.x_m, at.y_m, here, cell);
        near("alone", place_at(&plan, &handpiece, at.x_m, at.y_m).ratio, here, 0.003 * here + 1e-12);
    }
    bw_room_solution_free(&solution);
}

static void test_contours(void **state) {
    (void)state;
    struct plan plan;
    struct handpiece handpiece;
    struct bw_room_solution solution;
    lamp_reaching(&handpiece, 1.5);
    box_plan(&plan, 0, 0, 5, 4, 0.02);
    add_point_area(&plan, 2.5, 2);
    solve(&plan, &handpiece, &solution);
    near("level", solution.contours[0].level, 1, 0);
    assert_int_equal(solution.contours[0].count, 1);
    assert_true(solution.contours[0].lines[0].closed);
    for (size_t i = 0; i < solution.contours[0].lines[0].count; i++) {
        struct bw_point p = solution.contours[0].lines[0].points[i];
        double radius_m = hypot(p.x_m - 2.5, p.y_m - 2);
        if (!(radius_m >= 1.5 && radius_m <= 1.5 + 0.06))
            fail_msg("radius %g of the contour, want 1.5 to 1.56", radius_m);
    }
    bw_room_solution_free(&solution);
    plan.area_points[0][0] = (struct bw_point){0.5, 0}; /* now the line is cut off by two walls */
    solve(&plan, &handpiece, &solution);
    assert_int_equal(solution.contours[0].count, 1);
    const struct bw_contour *line = &solution.contours[0].lines[0];
    assert_false(line->closed);
    for (int end = 0; end < 2; end++) {
        struct bw_point p = line->points[end == 0 ? 0 : line->count - 1];
        double wall_m = fmin(fabs(p.x_m), fabs(p.y_m));
        near("end on the outline", wall_m, 0, 1e-9);
    }
    bw_room_solution_free(&solution);
}

/* A room and its mirror image, left to right: the same map. */
static void test_mirrored_room(void **state) {
    (void)state;
    struct plan plans[2];
    struct handpiece handpiece;
    struct bw_room_solution solutions[2];
    trident(&handpiece);
    for (int k = 0; k < 2; k++) {
        struct plan *plan = &plans[k];
        double sign = k == 0 ? 1 : -1;
        box_plan(plan, k == 0 ? 0 : -5, 0, k == 0 ? 5 : 0, 4, 0.0625);
        plan->room.bounces = 1;
        plan->room.walls = material(BW_MATT, 0.9, 0);
        add_couch(plan, sign * 2, 1.5, sign * 3.25, 2.5);
        add_surface(plan, 0, 1, 0, 2.25, material(BW_MIRROR, 0.97, 0));
        add_surface(plan, sign * 3.5, 0.5, sign * 4.25, 1.125, dark());
        solve(plan, &handpiece, &solutions[k]);
    }
    const struct bw_room_map *a = &solutions[0].map, *b = &solutions[1].map;
    for (size_t row = 0; row < a->rows; row++)
        for (size_t column = 0; column < a->columns; column++) {
            double left = a->ratio[row * a->columns + column], right = b->ratio[(row + 1) * b->columns - 1 - column];
            if (!(fabs(left - right) <= 1e-9 * left))
                fail_msg("cell %zu %zu: %.12g and %.12g", column, row, left, right);
        }
    bw_room_solution_free(&solutions[0]);
    bw_room_solution_free(&solutions[1]);
}

/* ---- monotony -----------------------------------------------------------------------------------------------------
 */

static void furnished(struct plan *plan) {
    box_plan(plan, 0, 0, 5, 4, 0.05);
    plan->room.bounces = 1;
    plan->room.walls = material(BW_MATT, 0.9, 0);
    plan->room.treated = material(BW_MATT, 0.65, 0);
    add_couch(plan, 2, 1.6, 3.2, 2.4);
    add_surface(plan, 0, 1, 0, 2.2, material(BW_MIRROR, 0.97, 0));
    add_surface(plan, 4, 1, 4, 3, dark());
    add_surface(plan, 1, 3, 1.8, 3.3, material(BW_MATT, 1, 0));
}

static void test_absorber(void **state) {
    (void)state;
    struct plan plan;
    struct handpiece handpiece;
    struct bw_room_solution before, after;
    trident(&handpiece);
    furnished(&plan);
    solve(&plan, &handpiece, &before);
    add_surface(&plan, 1.2, 0.5, 1.7, 1.4, dark());
    solve(&plan, &handpiece, &after);
    size_t darker = 0;
    for (size_t i = 0; i < before.map.columns * before.map.rows; i++) {
        if (!(after.map.ratio[i] <= before.map.ratio[i] * (1 + 1e-9)))
            fail_msg("cell %zu rose from %.12g to %.12g", i, before.map.ratio[i], after.map.ratio[i]);
        darker += after.map.ratio[i] < 0.9 * before.map.ratio[i];
    }
    assert_true(darker > 10);
    bw_room_solution_free(&before);
    bw_room_solution_free(&after);
}

/* Along the wall a mirror shades nothing. */
static void test_reflector(void **state) {
    (void)state;
    struct plan plan;
    struct handpiece handpiece;
    struct bw_room_solution before, after;
    trident(&handpiece);
    furnished(&plan);
    solve(&plan, &handpiece, &before);
    add_surface(&plan, 1, 0, 4.5, 0, material(BW_MIRROR, 0.97, 0));
    solve(&plan, &handpiece, &after);
    size_t brighter = 0;
    for (size_t i = 0; i < before.map.columns * before.map.rows; i++) {
        if (!(after.map.ratio[i] >= before.map.ratio[i] * (1 - 1e-9)))
            fail_msg("cell %zu fell from %.12g to %.12g", i, before.map.ratio[i], after.map.ratio[i]);
        brighter += after.map.ratio[i] > 2 * before.map.ratio[i];
    }
    assert_true(brighter > 10);
    bw_room_solution_free(&before);
    bw_room_solution_free(&after);
}

/* ---- refusals ------------------------------------------------------------------------------------------------------
 */

static void refused(const struct plan *plan, const struct handpiece *handpiece, const char *part) {
    struct bw_room_solution solution;
    struct bw_error error = {BW_OK, ""};
    assert_int_equal(bw_room_solve(&plan->room, &handpiece->source, 1, &solution, &error), BW_ARGUMENT);
    if (strstr(error.text, part) == NULL)
        fail_msg("\"%s\" does not say \"%s\"", error.text, part);
    bw_room_solution_free(&solution);
}

static void test_refusals(void **state) {
    (void)state;
    struct plan plan;
    struct handpiece handpiece;
    struct bw_place place;
    lamp(&handpiece, 5, 0.001, 0.4);
    box_plan(&plan, 0, 0, 5, 4, 0.05);
    refused(&plan, &handpiece, "no treatment area");
    add_point_area(&plan, 2, 2);
    struct bw_room_solution solution;
    assert_int_equal(bw_room_solve(&plan.room, NULL, 0, &solution, NULL), BW_ARGUMENT);
    static const double grids_m[] = {0.0019, 1.01, (double)NAN, 0};
    for (size_t i = 0; i < 4; i++) {
        plan.room.grid_m = grids_m[i];
        refused(&plan, &handpiece, "grid");
    }
    plan.room.grid_m = 0.0021;
    refused(&plan, &handpiece, "cells");
    plan.room.grid_m = 0.05;
    plan.room.bounces = 4;
    refused(&plan, &handpiece, "bounces");
    plan.room.bounces = 0;
    plan.outline[2].x_m = (double)NAN;
    refused(&plan, &handpiece, "outline");
    plan.outline[2] = (struct bw_point){1, -1};
    refused(&plan, &handpiece, "outline");
    plan.outline[2] = (struct bw_point){5, 4};
    plan.areas[0].aim_to_deg = -1;
    refused(&plan, &handpiece, "aims");
    plan.areas[0].aim_to_deg = 360;
    assert_int_equal(bw_room_at(&plan.room, &handpiece.source, 1, (struct bw_point){(double)NAN, 0}, &place, NULL),
                     BW_ARGUMENT);
    assert_true(isnan(place.ratio));
}

int main(void) {
    const struct CMUnitTest tests[] = {
        cmocka_unit_test(test_disc),
        cmocka_unit_test(test_couch),
        cmocka_unit_test(test_half_disc),
        cmocka_unit_test(test_whole_room),
        cmocka_unit_test(test_mirror),
        cmocka_unit_test(test_two_mirrors),
        cmocka_unit_test(test_corridor),
        cmocka_unit_test(test_screen),
        cmocka_unit_test(test_curtain_and_joint),
        cmocka_unit_test(test_aims),
        cmocka_unit_test(test_aims_in_mirror),
        cmocka_unit_test(test_l_shape),
        cmocka_unit_test(test_openings),
        cmocka_unit_test(test_treated),
        cmocka_unit_test(test_matt_wall),
        cmocka_unit_test(test_matt_wall_long_pulses),
        cmocka_unit_test(test_terms),
        cmocka_unit_test(test_persons_within_cells),
        cmocka_unit_test(test_contours),
        cmocka_unit_test(test_mirrored_room),
        cmocka_unit_test(test_absorber),
        cmocka_unit_test(test_reflector),
        cmocka_unit_test(test_refusals),
    };
    return cmocka_run_group_tests_name("room", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
