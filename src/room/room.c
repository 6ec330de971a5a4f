/* Solves a room: the map, the zone, who stands in it, what leaves. */
#include "internal.h"

#include <math.h>
#include <stdlib.h>

void bw_room_clear(struct bw_room *room) {
    free(room->outline.points);
    for (size_t i = 0; i < room->area_count && room->areas != NULL; i++)
        free(room->areas[i].outline.points);
    free(room->surfaces);
    free(room->openings);
    free(room->areas);
    free(room->persons);
    *room = (struct bw_room){0};
}

struct solving {
    struct scene *scene;
    struct bw_room_map *map;
    struct pyramid pyramid;
    size_t hunt_count; /* persons, then openings */
    struct hunt *hunts;
};

static bool wants(const struct scene *scene, const struct quad *piece, double share, struct spot_curve *spot,
                  void *context) {
    const struct solving *solving = context;
    (void)scene;
    int top = solving->pyramid.levels - 1;
    double least = top > 0 ? solving->pyramid.least[top][0] : 0;
    if (share * bw_room_diffuse_at(spot, 0) > least)
        return true;
    for (size_t i = 0; i < solving->hunt_count; i++)
        if (bw_room_hunt_wants(&solving->hunts[i], piece, share, spot))
            return true;
    return false;
}

static enum bw_status take(struct scene *scene, const struct image *image, const struct light *light, void *context) {
    struct solving *solving = context;
    bw_room_sweep(scene, image, light, solving->map, &solving->pyramid);
    for (size_t i = 0; i < solving->hunt_count; i++)
        bw_room_hunt_take(scene, image, light, &solving->hunts[i]);
    return BW_OK;
}

static enum bw_status init_hunts(const struct bw_room *room, struct solving *solving) {
    solving->hunt_count = room->person_count + room->opening_count;
    solving->hunts = calloc(solving->hunt_count + 1, sizeof *solving->hunts);
    if (solving->hunts == NULL)
        return BW_NO_MEMORY;
    for (size_t i = 0; i < solving->hunt_count; i++) {
        struct hunt *hunt = &solving->hunts[i];
        if (i >= room->person_count) {
            if (!bw_room_opening_hunt(&room->openings[i - room->person_count], hunt))
                return BW_NO_MEMORY;
            continue;
        }
        *hunt = (struct hunt){.count = 1, .precision = bw_room_point_precision()};
        hunt->targets = calloc(1, sizeof *hunt->targets);
        if (hunt->targets == NULL)
            return BW_NO_MEMORY;
        hunt->targets[0] = bw_room_box_target(room->persons[i].at, room->persons[i].at);
    }
    return BW_OK;
}

static void free_solving(struct solving *solving) {
    bw_room_pyramid_free(&solving->pyramid);
    for (size_t i = 0; i < solving->hunt_count && solving->hunts != NULL; i++)
        free(solving->hunts[i].targets);
    free(solving->hunts);
}

static enum bw_status finish(const struct solving *solving, struct bw_room_solution *solution) {
    static const double levels[BW_LEVELS] = {1, 10, 1000, 1e5};
    const struct bw_room *room = solving->scene->room;
    solution->persons = calloc(room->person_count + 1, sizeof *solution->persons);
    solution->openings = calloc(room->opening_count + 1, sizeof *solution->openings);
    if (solution->persons == NULL || solution->openings == NULL)
        return BW_NO_MEMORY;
    for (size_t i = 0; i < room->person_count; i++)
        solution->persons[i] = solving->hunts[i].place;
    for (size_t i = 0; i < room->opening_count; i++)
        bw_room_opening_verdict(&room->openings[i], &solving->hunts[room->person_count + i].place,
                                &solution->openings[i]);
    enum bw_status status = bw_room_extent(solving->scene, solution);
    for (int i = 0; i < BW_LEVELS && status == BW_OK; i++)
        status = bw_room_contours(room, &solution->map, levels[i], &solution->contours[i]);
    return status;
}

static enum bw_status solve(struct scene *scene, struct bw_room_solution *solution) {
    struct solving solving = {.scene = scene, .map = &solution->map};
    struct receiver receiver = {wants, take, &solving};
    enum bw_status status = bw_room_pyramid_init(&solving.pyramid, &solution->map);
    if (status == BW_OK)
        status = init_hunts(scene->room, &solving);
    if (status == BW_OK)
        status = bw_room_lights(scene, &receiver);
    if (status == BW_OK)
        status = finish(&solving, solution);
    free_solving(&solving);
    return status;
}

/* Given:    room; sources, count   the handpieces used in it, all at once
 * Returned: solution   to be freed with bw_room_solution_free, also after an error (then it is empty)
 * Returns:  BW_OK; BW_ARGUMENT; BW_NO_MEMORY; BW_OUT_OF_RANGE from the limits of a diffuse spot
 * Notes:    Every value bounds the worst case from above; a place has the worst of its paths, not their sum. */
enum bw_status bw_room_solve(const struct bw_room *room, const struct bw_room_source *sources, size_t count,
                             struct bw_room_solution *solution, struct bw_error *error) {
    *solution = (struct bw_room_solution){.nhz_area_m2 = nan(""), .farthest_m = nan(""), .ratio_max = nan("")};
    enum bw_status status = bw_room_check(room, sources, count, error);
    if (status != BW_OK)
        return status;
    struct scene scene;
    status = bw_room_scene_init(&scene, room, sources, count, true, error);
    if (status == BW_OK)
        status = bw_room_map_init(room, &solution->map, error);
    if (status == BW_OK)
        status = solve(&scene, solution);
    bw_room_scene_free(&scene);
    if (status != BW_OK) {
        bw_room_solution_free(solution);
        bw_error_set(error, status, "room %s: memory is short", room->name);
    }
    return status;
}

void bw_room_solution_free(struct bw_room_solution *solution) {
    free(solution->map.ratio);
    free(solution->map.path);
    free(solution->map.inside);
    free(solution->persons);
    free(solution->openings);
    for (int i = 0; i < BW_LEVELS; i++)
        bw_room_contours_free(&solution->contours[i]);
    *solution = (struct bw_room_solution){0};
}
