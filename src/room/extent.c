/* Area and reach of the hazard zone on the map. */
#include "internal.h"

#include <math.h>

/* Farthest corner of the chain from the nearest area. A distance to a convex piece is largest at a corner, so this
 * bounds the chain's inside too. */
static double farthest_from_areas(const struct scene *scene, const struct bw_point *points, size_t count) {
    double farthest_m = 0;
    for (size_t k = 0; k < count; k++) {
        double nearest_m = HUGE_VAL;
        for (size_t i = 0; i < scene->room->area_count; i++)
            for (size_t j = 0; j < scene->areas[i].pieces.count; j++)
                nearest_m = fmin(nearest_m, bw_room_box_distance(&scene->areas[i].pieces.at[j], points[k], points[k]));
        farthest_m = fmax(farthest_m, nearest_m);
    }
    return farthest_m;
}

/* Only the edge of the zone can be farthest, but it costs little to ask all cells at their middle first. */
static bool may_be_farther(const struct scene *scene, struct bw_point low, struct bw_point high, double farthest_m) {
    struct bw_point middle = {(low.x_m + high.x_m) / 2, (low.y_m + high.y_m) / 2};
    return farthest_from_areas(scene, &middle, 1) + bw_distance(middle, high) > farthest_m;
}

/* Cells that the outline cuts count with the part inside it. */
enum bw_status bw_room_extent(const struct scene *scene, struct bw_room_solution *solution) {
    const struct bw_room_map *map = &solution->map;
    struct clipper clipper;
    bool ready = bw_room_clipper_init(&clipper, &scene->room->outline);
    solution->nhz_area_m2 = solution->farthest_m = solution->ratio_max = 0;
    for (size_t row = 0; ready && row < map->rows; row++)
        for (size_t column = 0; column < map->columns; column++) {
            size_t cell = row * map->columns + column;
            if (!map->inside[cell])
                continue;
            solution->ratio_max = fmax(solution->ratio_max, map->ratio[cell]);
            if (map->ratio[cell] <= 1)
                continue;
            struct bw_point low = bw_room_cell_corner(map, column, row);
            struct bw_point high = bw_room_cell_corner(map, column + 1, row + 1);
            size_t count = bw_room_clip(&clipper, low, high);
            solution->nhz_area_m2 += bw_room_chain_area_m2(clipper.points, count);
            if (may_be_farther(scene, low, high, solution->farthest_m))
                solution->farthest_m = fmax(solution->farthest_m, farthest_from_areas(scene, clipper.points, count));
        }
    bw_room_clipper_free(&clipper);
    return ready ? BW_OK : BW_NO_MEMORY;
}
