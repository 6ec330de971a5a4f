/* room: never optimistic. A tracer of its own, as simple as can be, throws rays at random over random rooms: no ray
 * may find a place where its ratio exceeds the map's cell. And not too cautious: in 95 % of the cells in reach the map
 * is within 10 % of the worst that a dense search finds. */
#include "test_room_fixture.h"

enum { ROOMS = 25, RAYS = 8000, STEPS = 5, DIFFUSE_EVERY = 8 };

/* ---- numbers (xorshift; the same on every machine) ------------------------------------------------------------------
 */

static double draw(uint64_t *state) {
    *state ^= *state << 13;
    *state ^= *state >> 7;
    *state ^= *state << 17;
    return (double)(*state >> 11) / 9007199254740992.;
}

static double between(uint64_t *state, double low, double high) {
    return low + (high - low) * draw(state);
}

/* ---- rooms
 * ----------------------------------------------------------------------------------------------------------- */

static struct bw_material any_material(uint64_t *state) {
    switch ((int)(draw(state) * 6)) {
    case 0:
        return material(BW_MIRROR, between(state, 0.3, 1), 0);
    case 1:
        return material(BW_GLASS, 0.0426, between(state, 0.5, 1));
    case 2:
        return material(BW_GLOSS, 0.0426, 0);
    case 3:
        return material(BW_MATT, between(state, 0.2, 1), between(state, 0, 0.3));
    default:
        return material(BW_MATT, between(state, 0.2, 1), 0);
    }
}

static void any_outline(struct plan *plan, uint64_t *state, int index) {
    const struct bw_point box[4] = {{0, 0}, {5, 0}, {5, 4}, {0, 4}};
    const struct bw_point corner[6] = {{0, 0}, {5, 0}, {5, 4}, {2.6, 4}, {2.6, 2.7}, {0, 2.7}};
    const struct bw_point skew[5] = {{0.1, 0.2}, {4.8, 0}, {5.3, 2.2}, {3.1, 4.1}, {-0.3, 3.3}};
    (void)state;
    if (index % 3 == 0)
        begin_plan(plan, box, 4, 0.05);
    else if (index % 3 == 1)
        begin_plan(plan, corner, 6, 0.04);
    else
        begin_plan(plan, skew, 5, 0.05);
}

static void any_room(struct plan *plan, uint64_t *state, int index) {
    any_outline(plan, state, index);
    plan->room.bounces = index % 4;
    plan->room.walls = material(index % 5 == 0 ? BW_GLOSS : BW_MATT, index % 5 == 0 ? 0.0426 : 0.9, 0);
    plan->room.treated = material(BW_MATT, 0.65, 0);
    double x = between(state, 1, 3), y = between(state, 0.7, 1.6), turn = between(state, 0, 0.5);
    struct bw_point area[4] = {{x, y}, {x + 1, y + turn}, {x + 1 - turn, y + 0.6 + turn}, {x - turn, y + 0.6}};
    double from = between(state, 0, 360), wide = index % 2 == 0 ? 360 : between(state, 5, 120);
    add_area(plan, area, index % 7 == 6 ? 1 : 4, from, from + wide);
    for (int i = 0; i < 4 + index % 5; i++) {
        double x0 = between(state, 0.2, 4.5), y0 = between(state, 0.2, 3), angle = between(state, 0, 6.28);
        double length = between(state, 0.3, 1.5);
        add_surface(plan, x0, y0, x0 + length * cos(angle), y0 + length * sin(angle), any_material(state));
    }
    for (int i = 0; i < 2; i++) /* a folding screen */
        add_surface(plan, 3.6 + 0.4 * i, 2 + 0.1 * i, 4 + 0.4 * i, 2.1 - 0.1 * i, material(BW_MATT, 1, 0));
    if (index % 3 == 0)
        add_opening(plan, 1, 0, 2, 0, index % 2 == 0 ? BW_WINDOW : BW_DOOR, BW_COVER_NONE);
}

/* ---- the tracer
 * -------------------------------------------------------------------------------------------------------- */

struct wall {
    struct bw_segment segment;
    struct bw_material material;
};
struct world {
    const struct plan *plan;
    const struct handpiece *handpiece;
    const struct bw_room_solution *solution;
    size_t count;
    struct wall walls[2 * ROOM_PARTS];
    unsigned long rays, places;
};

/* Surfaces, openings (a door may be shut, a window is of glass), and last the outline, which they lie in or on: of two
 * walls at one place the first is met. */
static void build_world(struct world *world) {
    const struct bw_room *room = &world->plan->room;
    for (size_t i = 0; i < room->surface_count; i++)
        world->walls[world->count++] = (struct wall){room->surfaces[i].segment, room->surfaces[i].material};
    for (size_t i = 0; i < room->opening_count; i++)
        world->walls[world->count++] =
            (struct wall){room->openings[i].segment,
                          room->openings[i].kind == BW_DOOR ? material(BW_MATT, 1, 0) : material(BW_GLASS, 0, 0)};
    for (size_t i = 0; i < room->outline.count; i++)
        world->walls[world->count++] =
            (struct wall){{room->outline.points[i], room->outline.points[(i + 1) % room->outline.count]}, room->walls};
}

/* Distance along the ray to the segment; infinite if it is missed. */
static double hit(struct bw_point from, double dx, double dy, struct bw_segment s) {
    double sx = s.to.x_m - s.from.x_m, sy = s.to.y_m - s.from.y_m, cross = dx * sy - dy * sx;
    double px = s.from.x_m - from.x_m, py = s.from.y_m - from.y_m;
    double t = (px * sy - py * sx) / cross, u = (px * dy - py * dx) / cross;
    return t > 1e-9 && u >= 0 && u <= 1 ? t : HUGE_VAL;
}

static void compare(struct world *world, struct bw_point at, double ratio, const char *what) {
    const struct bw_room_map *map = &world->solution->map;
    if (!bw_polygon_contains(&world->plan->room.outline, at))
        return;
    size_t cell = cell_at(map, at.x_m, at.y_m);
    world->places++;
    if (!(ratio <= map->ratio[cell] * (1 + 1e-9)))
        fail_msg("%s ray at %.6g %.6g: %.12g, but the map says %.12g (%s)", what, at.x_m, at.y_m, ratio,
                 map->ratio[cell], bw_path_name((enum bw_path_kind)map->path[cell]));
}

/* What passes between two places. */
static double open_share(const struct world *world, struct bw_point from, struct bw_point to) {
    double dx = to.x_m - from.x_m, dy = to.y_m - from.y_m, share = 1;
    for (size_t i = 0; i < world->count; i++) {
        double t = hit(from, dx, dy, world->walls[i].segment);
        if (t < 1 - 1e-9)
            share *= world->walls[i].material.transmittance;
    }
    return share;
}

/* From a matt place lit by the ray, to a place seen from it. */
static void scatter(struct world *world, uint64_t *state, struct bw_point at, double path_m, double share) {
    const struct bw_room_map *map = &world->solution->map;
    struct bw_point to = {map->origin.x_m + draw(state) * (double)map->columns * map->cell_m,
                          map->origin.y_m + draw(state) * (double)map->rows * map->cell_m};
    struct bw_spot spot;
    struct bw_ratio ratio;
    share *= open_share(world, at, to);
    if (!(share > 0) || bw_hazard_spot(&world->handpiece->output, path_m, share, &spot) != BW_OK)
        return;
    if (bw_hazard_diffuse_ratio(&world->handpiece->diffuse, &spot, bw_distance(at, to), &ratio, NULL) == BW_OK)
        compare(world, to, ratio.total, "diffuse");
}

static double fresnel(const struct bw_material *made, double cosine) {
    double n = made->refractive_index, within = sqrt(n * n - 1 + cosine * cosine);
    double surface = pow((cosine - within) / (cosine + within), 2);
    surface = fmax(surface, made->reflectance);
    return made->finish == BW_GLASS ? 2 * surface / (1 + surface) : surface;
}

static double mirror_share(const struct bw_material *made, double cosine) {
    if (made->finish == BW_MATT)
        return 0;
    return made->finish == BW_MIRROR ? made->reflectance : fresnel(made, cosine);
}

static double matt_share(const struct bw_material *made) {
    return made->finish == BW_MATT ? made->reflectance : made->matt_reflectance;
}

/* Light beside the axis, straight from the exit: it too counts, and most of all beside the allowed aims. The bound of
 * the beam itself is coarse by the width of a pupil, hence 2 %. */
static void look_beside(struct world *world, uint64_t *state, struct bw_point at, double dx, double dy) {
    double along_m = between(state, 0.2, 3), offset_m = between(state, -0.4, 0.4) * along_m;
    struct bw_point place = {at.x_m + along_m * dx - offset_m * dy, at.y_m + along_m * dy + offset_m * dx};
    double share = open_share(world, at, place);
    if (share > 0)
        compare(world, place,
                share * bw_hazard_ratio_off_axis(&world->handpiece->direct, along_m, fabs(offset_m)) / 1.02,
                "sideways");
}

/* One leg after the other until nothing is left. */
static void follow(struct world *world, uint64_t *state, struct bw_point at, double dx, double dy, bool scatters) {
    double share = 1, path_m = 0;
    int bounces = world->plan->room.bounces;
    for (int leg = 0; leg < 20 && share > 1e-9; leg++) {
        double nearest = HUGE_VAL;
        const struct wall *wall = NULL;
        for (size_t i = 0; i < world->count; i++) {
            double t = hit(at, dx, dy, world->walls[i].segment);
            if (t < nearest - 1e-9) {
                nearest = t;
                wall = &world->walls[i];
            }
        }
        if (wall == NULL)
            return;
        for (int i = 0; i < STEPS; i++) {
            double t = nearest * draw(state);
            struct bw_point place = {at.x_m + t * dx, at.y_m + t * dy};
            compare(world, place, share * bw_hazard_ratio(&world->handpiece->direct, path_m + t), "straight");
        }
        at = (struct bw_point){at.x_m + nearest * dx, at.y_m + nearest * dy};
        path_m += nearest;
        double sx = wall->segment.to.x_m - wall->segment.from.x_m, sy = wall->segment.to.y_m - wall->segment.from.y_m;
        double length = hypot(sx, sy), along = (dx * sx + dy * sy) / length, across = (dx * sy - dy * sx) / length;
        if (scatters && matt_share(&wall->material) > 0) {
            struct bw_point front = {at.x_m - 1e-7 * dx, at.y_m - 1e-7 * dy};
            scatter(world, state, front, path_m, share * matt_share(&wall->material));
        }
        double shining = mirror_share(&wall->material, fabs(across));
        if (draw(state) < 0.5 && wall->material.transmittance > 0)
            share *= wall->material.transmittance;
        else if (bounces-- > 0 && shining > 0) {
            share *= shining;
            dx = (2 * along * sx / length) - dx;
            dy = (2 * along * sy / length) - dy;
        } else
            return;
    }
}

static struct bw_point any_position(const struct bw_polygon *area, uint64_t *state) {
    struct bw_point low = area->points[0], high = low, p = low;
    if (area->count == 1)
        return p;
    for (size_t i = 1; i < area->count; i++) {
        low = (struct bw_point){fmin(low.x_m, area->points[i].x_m), fmin(low.y_m, area->points[i].y_m)};
        high = (struct bw_point){fmax(high.x_m, area->points[i].x_m), fmax(high.y_m, area->points[i].y_m)};
    }
    do
        p = (struct bw_point){between(state, low.x_m, high.x_m), between(state, low.y_m, high.y_m)};
    while (!bw_polygon_contains(area, p));
    return p;
}

static void throw_rays(struct world *world, uint64_t *state) {
    const struct bw_treatment_area *area = &world->plan->room.areas[0];
    for (int i = 0; i < RAYS; i++, world->rays++) {
        double bearing = between(state, area->aim_from_deg, area->aim_to_deg) * bw_pi / 180;
        struct bw_point at = any_position(&area->outline, state);
        follow(world, state, at, sin(bearing), cos(bearing), i % DIFFUSE_EVERY == 0);
        look_beside(world, state, at, sin(bearing), cos(bearing));
        if (i % DIFFUSE_EVERY == 0)
            scatter(world, state, at, 0, world->plan->room.treated.reflectance);
    }
}

/* ---- the tests
 * ----------------------------------------------------------------------------------------------------------- */

static uint64_t start_of(int index) {
    return UINT64_C(0x9E3779B97F4A7C15) * (uint64_t)(index + 1);
}

static void test_room_of_rays(void **state) {
    int index = *(int *)*state;
    uint64_t numbers = start_of(index);
    struct plan *plan = malloc(sizeof *plan);
    struct handpiece *handpiece = malloc(sizeof *handpiece);
    struct bw_room_solution solution;
    assert_true(plan != NULL && handpiece != NULL);
    if (index % 4 == 3)
        lens(handpiece);
    else
        trident(handpiece);
    any_room(plan, &numbers, index);
    solve(plan, handpiece, &solution);
    struct world world = {.plan = plan, .handpiece = handpiece, .solution = &solution};
    build_world(&world);
    throw_rays(&world, &numbers);
    assert_true(world.rays == RAYS && world.places > RAYS);
    bw_room_solution_free(&solution);
    free(plan);
    free(handpiece);
}

/* The worst of direct light in a cell, from 25 x 17 positions to 3 x 3 places. */
static double dense_search(const struct world *world, size_t column, size_t row) {
    const struct bw_room_map *map = &world->solution->map;
    const struct bw_point *area = world->plan->room.areas[0].outline.points;
    double worst = 0;
    for (int k = 0; k < 425 * 9; k++) {
        double s = k % 25 / 24., t = k / 25 % 17 / 16., u = k / 425 % 3 / 2., v = k / 1275 / 2.;
        struct bw_point from = {area[0].x_m + s * (area[1].x_m - area[0].x_m) + t * (area[3].x_m - area[0].x_m),
                                area[0].y_m + s * (area[1].y_m - area[0].y_m) + t * (area[3].y_m - area[0].y_m)};
        struct bw_point to = {map->origin.x_m + ((double)column + u) * map->cell_m,
                              map->origin.y_m + ((double)row + v) * map->cell_m};
        double ratio = bw_hazard_ratio(&world->handpiece->direct, bw_distance(from, to));
        if (ratio > worst)
            worst = fmax(worst, ratio * open_share(world, from, to));
    }
    return worst;
}

static void test_tight(void **state) {
    (void)state;
    struct plan plan;
    struct handpiece handpiece;
    struct bw_room_solution solution;
    trident(&handpiece);
    box_plan(&plan, 0, 0, 5, 4, 0.05);
    add_couch(&plan, 2, 1.6, 3.2, 2.4);
    add_surface(&plan, 1, 1, 1.3, 2.5, dark());
    add_surface(&plan, 3.8, 1.5, 4.2, 1.5, dark());
    add_surface(&plan, 2, 3, 2.5, 3.2, dark());
    add_surface(&plan, 2.5, 3.2, 3, 3, dark());
    solve(&plan, &handpiece, &solution);
    struct world world = {.plan = &plan, .handpiece = &handpiece, .solution = &solution};
    build_world(&world);
    unsigned reached = 0, tight = 0;
    for (size_t row = 1; row < solution.map.rows - 1; row += 3)
        for (size_t column = 1; column < solution.map.columns - 1; column += 3) {
            double worst = dense_search(&world, column, row),
                   map = solution.map.ratio[row * solution.map.columns + column];
            reached += worst > 0;
            tight += worst > 0 && map <= 1.1 * worst;
        }
    print_message("tight: %u of %u cells in reach within 10 %%\n", tight, reached);
    assert_true(reached > 600 && tight >= 0.95 * reached);
    bw_room_solution_free(&solution);
}

int main(void) {
    static int indices[ROOMS];
    static char names[ROOMS][64];
    struct CMUnitTest tests[ROOMS + 1];
    for (int i = 0; i < ROOMS; i++) {
        indices[i] = i;
        snprintf(names[i], sizeof names[i], "room %d, %d rays, numbers from %016llx", i, RAYS,
                 (unsigned long long)start_of(i));
        tests[i] = (struct CMUnitTest){names[i], test_room_of_rays, NULL, NULL, &indices[i]};
    }
    tests[ROOMS] = (struct CMUnitTest)cmocka_unit_test(test_tight);
    return cmocka_run_group_tests_name("room: rays", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
