/* Rooms and handpieces for the tests of room. */
#ifndef TEST_ROOM_FIXTURE_H
#define TEST_ROOM_FIXTURE_H

#include <beamward/room.h>

#include "round_beam.h"

#include <setjmp.h>
#include <stdarg.h>
#include <stdint.h>
#include <cmocka.h>

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { ROOM_POINTS = 64, ROOM_PARTS = 64 };

/* A room in one piece: nothing to free. */
struct plan {
    struct bw_room room;
    struct bw_point outline[ROOM_POINTS];
    struct bw_surface surfaces[ROOM_PARTS];
    struct bw_opening openings[ROOM_PARTS];
    struct bw_treatment_area areas[8];
    struct bw_point area_points[8][ROOM_POINTS];
    struct bw_person persons[ROOM_PARTS];
};

struct handpiece {
    struct bw_output output;
    struct bw_hazard direct, diffuse;
    struct bw_room_source source;
};

static inline void prepare(struct handpiece *handpiece, double diffuse_s) {
    struct bw_error error = {BW_OK, ""};
    const struct bw_table *table = bw_tables_find("iec-60825-1-2014");
    struct bw_viewing_case glance = {BW_EYE, 100, 0, 0}, long_look = {BW_EYE, diffuse_s, 0, 0};
    assert_non_null(table);
    if (bw_hazard_prepare(table, &handpiece->output, &glance, &handpiece->direct, NULL, &error) != BW_OK ||
        bw_hazard_prepare(table, &handpiece->output, &long_look, &handpiece->diffuse, NULL, &error) != BW_OK)
        fail_msg("%s", error.text);
    handpiece->source = (struct bw_room_source){&handpiece->direct, &handpiece->diffuse};
}

/* One continuous emission at 810 nm. */
static inline void lamp(struct handpiece *handpiece, double power_w, double exit_m, double divergence_rad) {
    memset(handpiece, 0, sizeof *handpiece);
    struct bw_emission_input input = {810, power_w, (double)NAN, (double)NAN, (double)NAN, (double)NAN, NULL};
    struct bw_error error = {BW_OK, ""};
    assert_int_equal(bw_emission_resolve(&input, &handpiece->output.emissions[0], &error), BW_OK);
    handpiece->output.count = 1;
    handpiece->output.beams[0] = (struct bw_beam)ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, exit_m, divergence_rad, 0, exit_m);
    prepare(handpiece, 100);
}

/* Three wavelengths, one of them superpulsed, as in the design. */
static inline void trident(struct handpiece *handpiece) {
    memset(handpiece, 0, sizeof *handpiece);
    struct bw_emission_input inputs[3] = {{810, 8, (double)NAN, (double)NAN, (double)NAN, (double)NAN, NULL},
                                          {905, (double)NAN, 75, (double)NAN, 150e-9, 10000, NULL},
                                          {650, 0.002, (double)NAN, (double)NAN, (double)NAN, (double)NAN, NULL}};
    struct bw_error error = {BW_OK, ""};
    for (size_t i = 0; i < 3; i++) {
        assert_int_equal(bw_emission_resolve(&inputs[i], &handpiece->output.emissions[i], &error), BW_OK);
        handpiece->output.beams[i] =
            (struct bw_beam)ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 0.03 / sqrt(2), 0.2 / sqrt(2), 0, 0.03 / sqrt(2));
    }
    handpiece->output.count = 3;
    prepare(handpiece, 100);
}

/* A lens that focuses at 0.4 m, and a wide top hat beside it. */
static inline void lens(struct handpiece *handpiece) {
    trident(handpiece);
    handpiece->output.beams[0] = (struct bw_beam)ROUND(BW_GAUSSIAN, BW_HYPERBOLIC, 0.002, 0.05, 0.4, 0.02);
    handpiece->output.beams[1] = (struct bw_beam)ROUND(BW_TOP_HAT, BW_LINEAR, 0.01, 0.3, 0, 0.01);
    prepare(handpiece, 100);
}

static inline struct bw_material material(enum bw_finish finish, double reflectance, double transmittance) {
    struct bw_material made = {.finish = finish, .reflectance = reflectance, .transmittance = transmittance};
    if (finish == BW_GLOSS || finish == BW_GLASS)
        made.refractive_index = 1.52;
    return made;
}

static inline struct bw_material dark(void) {
    return material(BW_MATT, 0, 0);
}

/* Black walls, nothing treated that reflects, no bounces: only what a test adds shines. */
static inline void begin_plan(struct plan *plan, const struct bw_point *outline, size_t count, double grid_m) {
    memset(plan, 0, sizeof *plan);
    memcpy(plan->outline, outline, count * sizeof *outline);
    plan->room.outline = (struct bw_polygon){plan->outline, count};
    plan->room.walls = plan->room.treated = dark();
    plan->room.grid_m = grid_m;
    plan->room.surfaces = plan->surfaces;
    plan->room.openings = plan->openings;
    plan->room.areas = plan->areas;
    plan->room.persons = plan->persons;
}

static inline void box_plan(struct plan *plan, double x0, double y0, double x1, double y1, double grid_m) {
    const struct bw_point outline[4] = {{x0, y0}, {x1, y0}, {x1, y1}, {x0, y1}};
    begin_plan(plan, outline, 4, grid_m);
}

static inline void add_area(struct plan *plan, const struct bw_point *points, size_t count, double from_deg,
                            double to_deg) {
    size_t i = plan->room.area_count++;
    memcpy(plan->area_points[i], points, count * sizeof *points);
    plan->areas[i].outline = (struct bw_polygon){plan->area_points[i], count};
    plan->areas[i].aim_from_deg = from_deg;
    plan->areas[i].aim_to_deg = to_deg;
    snprintf(plan->areas[i].name, sizeof plan->areas[i].name, "area-%zu", i);
}

static inline void add_point_area(struct plan *plan, double x, double y) {
    const struct bw_point at = {x, y};
    add_area(plan, &at, 1, 0, 360);
}

static inline void add_couch(struct plan *plan, double x0, double y0, double x1, double y1) {
    const struct bw_point points[4] = {{x0, y0}, {x1, y0}, {x1, y1}, {x0, y1}};
    add_area(plan, points, 4, 0, 360);
}

static inline void add_surface(struct plan *plan, double x0, double y0, double x1, double y1, struct bw_material made) {
    struct bw_surface *surface = &plan->surfaces[plan->room.surface_count];
    snprintf(surface->name, sizeof surface->name, "surface-%zu", plan->room.surface_count++);
    surface->segment = (struct bw_segment){{x0, y0}, {x1, y1}};
    surface->material = made;
}

static inline struct bw_opening *add_opening(struct plan *plan, double x0, double y0, double x1, double y1,
                                             enum bw_opening_kind kind, enum bw_cover cover) {
    struct bw_opening *opening = &plan->openings[plan->room.opening_count];
    snprintf(opening->name, sizeof opening->name, "opening-%zu", plan->room.opening_count++);
    opening->segment = (struct bw_segment){{x0, y0}, {x1, y1}};
    opening->kind = kind;
    opening->cover = cover;
    return opening;
}

static inline void add_person(struct plan *plan, double x, double y) {
    plan->persons[plan->room.person_count++].at = (struct bw_point){x, y};
}

static inline void solve(const struct plan *plan, const struct handpiece *handpiece,
                         struct bw_room_solution *solution) {
    struct bw_error error = {BW_OK, ""};
    if (bw_room_solve(&plan->room, &handpiece->source, 1, solution, &error) != BW_OK)
        fail_msg("%s", error.text);
}

static inline size_t cell_at(const struct bw_room_map *map, double x, double y) {
    size_t column = (size_t)fmax(0, floor((x - map->origin.x_m) / map->cell_m));
    size_t row = (size_t)fmax(0, floor((y - map->origin.y_m) / map->cell_m));
    column = column < map->columns ? column : map->columns - 1;
    row = row < map->rows ? row : map->rows - 1;
    return row * map->columns + column;
}

static inline double ratio_at(const struct bw_room_map *map, double x, double y) {
    return map->ratio[cell_at(map, x, y)];
}

#endif
