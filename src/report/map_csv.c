/* The map of a room, a line a cell. */
#include "internal.h"

void bw_report_map_csv(struct bw_text *out, const struct bw_result *result, size_t room) {
    const struct bw_room_map *map = &result->rooms[room].solution.map;
    bw_text_add(out, "x_m,y_m,ratio,path\n");
    for (size_t row = 0; row < map->rows; row++) {
        for (size_t column = 0; column < map->columns; column++) {
            size_t cell = row * map->columns + column;
            if (!map->inside[cell])
                continue;
            bw_text_add(out, "%.12g,%.12g,%.12g,%s\n", map->origin.x_m + ((double)column + 0.5) * map->cell_m,
                        map->origin.y_m + ((double)row + 0.5) * map->cell_m, map->ratio[cell],
                        bw_path_name((enum bw_path_kind)map->path[cell]));
        }
    }
}
