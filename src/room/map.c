/* The grid: which cells lie in the room, and the least ratio of each block of cells. */
#include "internal.h"

#include <math.h>
#include <stdlib.h>

struct bw_point bw_room_cell_corner(const struct bw_room_map *map, size_t column, size_t row) {
    return (struct bw_point){map->origin.x_m + (double)column * map->cell_m,
                             map->origin.y_m + (double)row * map->cell_m};
}

static size_t cells_across(double width_m, double cell_m) {
    double cells = ceil(width_m / cell_m - 1e-9);
    return cells > 1 ? (size_t)cells : 1;
}

enum { CUT = 2 }; /* a side of the outline may go through the cell */

/* Marks the cells that a side of the outline may go through, one row after the other, with a hair to spare. */
static void mark_side(struct bw_room_map *map, struct bw_point a, struct bw_point b) {
    double hair = 1e-6, cell_m = map->cell_m;
    struct bw_point low = a.y_m < b.y_m ? a : b, high = a.y_m < b.y_m ? b : a;
    double from = floor((low.y_m - map->origin.y_m) / cell_m - hair),
           to = floor((high.y_m - map->origin.y_m) / cell_m + hair);
    for (double row = fmax(0, from); row <= to && row < (double)map->rows; row++) {
        double rise = high.y_m - low.y_m, y0 = map->origin.y_m + row * cell_m, y1 = y0 + cell_m;
        double t0 = rise > 0 ? fmin(fmax((y0 - low.y_m) / rise, 0), 1) : 0;
        double t1 = rise > 0 ? fmin(fmax((y1 - low.y_m) / rise, 0), 1) : 1;
        double x0 = low.x_m + t0 * (high.x_m - low.x_m), x1 = low.x_m + t1 * (high.x_m - low.x_m);
        double first = floor((fmin(x0, x1) - map->origin.x_m) / cell_m - hair);
        double last = floor((fmax(x0, x1) - map->origin.x_m) / cell_m + hair);
        for (double column = fmax(0, first); column <= last && column < (double)map->columns; column++)
            map->inside[(size_t)row * map->columns + (size_t)column] = CUT;
    }
}

static bool cell_is_inside(const struct bw_room_map *map, struct clipper *clipper, size_t column, size_t row,
                           bool cut) {
    struct bw_point low = bw_room_cell_corner(map, column, row), high = bw_room_cell_corner(map, column + 1, row + 1);
    if (!cut)
        return bw_polygon_contains(clipper->polygon,
                                   (struct bw_point){(low.x_m + high.x_m) / 2, (low.y_m + high.y_m) / 2});
    size_t count = bw_room_clip(clipper, low, high);
    return bw_room_chain_area_m2(clipper->points, count) > 1e-9 * map->cell_m * map->cell_m;
}

/* From one cell to the next nothing changes unless a side goes through one of them. */
static void mark_row(struct bw_room_map *map, struct clipper *clipper, size_t row) {
    bool known = false;
    for (size_t column = 0; column < map->columns; column++) {
        unsigned char *inside = &map->inside[row * map->columns + column];
        bool cut = *inside == CUT;
        *inside = known && !cut ? inside[-1] : cell_is_inside(map, clipper, column, row, cut);
        known = !cut;
    }
}

static enum bw_status mark_inside(const struct bw_room *room, struct bw_room_map *map) {
    struct clipper clipper;
    bool ready = bw_room_clipper_init(&clipper, &room->outline);
    for (size_t i = 0; ready && i < room->outline.count; i++)
        mark_side(map, room->outline.points[i], room->outline.points[(i + 1) % room->outline.count]);
    for (size_t row = 0; ready && row < map->rows; row++)
        mark_row(map, &clipper, row);
    bw_room_clipper_free(&clipper);
    return ready ? BW_OK : BW_NO_MEMORY;
}

enum bw_status bw_room_map_init(const struct bw_room *room, struct bw_room_map *map, struct bw_error *error) {
    struct bw_point low = {HUGE_VAL, HUGE_VAL}, high = {-HUGE_VAL, -HUGE_VAL};
    for (size_t i = 0; i < room->outline.count; i++) {
        struct bw_point p = room->outline.points[i];
        low = (struct bw_point){fmin(low.x_m, p.x_m), fmin(low.y_m, p.y_m)};
        high = (struct bw_point){fmax(high.x_m, p.x_m), fmax(high.y_m, p.y_m)};
    }
    map->origin = low;
    map->cell_m = room->grid_m;
    map->columns = cells_across(high.x_m - low.x_m, room->grid_m);
    map->rows = cells_across(high.y_m - low.y_m, room->grid_m);
    size_t cells = map->columns * map->rows;
    map->ratio = calloc(cells, sizeof *map->ratio);
    map->path = calloc(cells, sizeof *map->path);
    map->inside = calloc(cells, sizeof *map->inside);
    bool ready = map->ratio != NULL && map->path != NULL && map->inside != NULL;
    if (!ready || mark_inside(room, map) != BW_OK)
        return bw_error_set(error, BW_NO_MEMORY, "room %s: no memory for a map of %zu x %zu cells", room->name,
                            map->columns, map->rows);
    return BW_OK;
}

/* ---- blocks ----------------------------------------------------------------------------------------------------- */

enum bw_status bw_room_pyramid_init(struct pyramid *pyramid, const struct bw_room_map *map) {
    *pyramid = (struct pyramid){.levels = 1, .columns = {map->columns}, .rows = {map->rows}};
    while (pyramid->levels < PYRAMID_LEVELS &&
           (pyramid->columns[pyramid->levels - 1] > 1 || pyramid->rows[pyramid->levels - 1] > 1)) {
        int level = pyramid->levels++;
        pyramid->columns[level] = (pyramid->columns[level - 1] + 1) / 2;
        pyramid->rows[level] = (pyramid->rows[level - 1] + 1) / 2;
        pyramid->least[level] = malloc(pyramid->columns[level] * pyramid->rows[level] * sizeof(double));
        if (pyramid->least[level] == NULL)
            return BW_NO_MEMORY;
    }
    bw_room_pyramid_renew(pyramid, map);
    return BW_OK;
}

void bw_room_pyramid_free(struct pyramid *pyramid) {
    for (int level = 0; level < PYRAMID_LEVELS; level++)
        free(pyramid->least[level]);
}

static double least_below(const struct pyramid *pyramid, const struct bw_room_map *map, int level, size_t column,
                          size_t row) {
    size_t columns = pyramid->columns[level], rows = pyramid->rows[level];
    double least = HUGE_VAL;
    for (size_t y = row; y < row + 2 && y < rows; y++)
        for (size_t x = column; x < column + 2 && x < columns; x++) {
            size_t i = y * columns + x;
            double value = level > 0 ? pyramid->least[level][i] : map->inside[i] ? map->ratio[i] : HUGE_VAL;
            least = value < least ? value : least;
        }
    return least;
}

void bw_room_pyramid_renew(struct pyramid *pyramid, const struct bw_room_map *map) {
    for (int level = 1; level < pyramid->levels; level++)
        for (size_t row = 0; row < pyramid->rows[level]; row++)
            for (size_t column = 0; column < pyramid->columns[level]; column++)
                pyramid->least[level][row * pyramid->columns[level] + column] =
                    least_below(pyramid, map, level - 1, 2 * column, 2 * row);
}
