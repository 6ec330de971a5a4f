/* One light over the map, from large blocks of cells to small ones.
 *
 * A block is passed over when nothing can raise the least of its cells; it is filled at once when nothing is left to
 * decide (no barrier half in the way, no angle); else it is quartered. */
#include "internal.h"

#include <math.h>

struct sweep {
    struct scene *scene;
    const struct image *image;
    const struct light *light;
    struct bw_room_map *map;
    const struct pyramid *pyramid;
    struct precision precision;
    unsigned char path;
    bool raised;
};
struct block {
    int level;
    size_t column, row; /* in blocks of its level */
};
struct cells { /* of a block: [from, to) */
    size_t from_column, to_column, from_row, to_row;
};

static struct cells cells_of(const struct sweep *sweep, struct block block) {
    size_t side = (size_t)1 << block.level;
    struct cells cells = {block.column * side, (block.column + 1) * side, block.row * side, (block.row + 1) * side};
    cells.to_column = cells.to_column < sweep->map->columns ? cells.to_column : sweep->map->columns;
    cells.to_row = cells.to_row < sweep->map->rows ? cells.to_row : sweep->map->rows;
    return cells;
}

static double least_of(const struct sweep *sweep, struct block block) {
    size_t i = block.row * sweep->pyramid->columns[block.level] + block.column;
    if (block.level > 0)
        return sweep->pyramid->least[block.level][i];
    return sweep->map->inside[i] ? sweep->map->ratio[i] : HUGE_VAL;
}

static void raise(struct sweep *sweep, size_t cell, double ratio) {
    if (ratio > sweep->map->ratio[cell]) {
        sweep->map->ratio[cell] = ratio;
        sweep->map->path[cell] = sweep->path;
        sweep->raised = true;
    }
}

/* Every part is clear: only the distance differs from cell to cell. */
static void fill(struct sweep *sweep, struct cells cells, size_t first, size_t count) {
    struct bw_room_map *map = sweep->map;
    for (size_t row = cells.from_row; row < cells.to_row; row++)
        for (size_t column = cells.from_column; column < cells.to_column; column++) {
            size_t cell = row * map->columns + column;
            if (!map->inside[cell])
                continue;
            struct bw_point low = bw_room_cell_corner(map, column, row);
            struct bw_point high = bw_room_cell_corner(map, column + 1, row + 1);
            for (size_t i = first; i < first + count; i++) {
                const struct part *part = &sweep->scene->workspace.parts[i];
                double length_m = bw_room_box_distance(&part->piece, low, high);
                raise(sweep, cell, part->total_share * bw_room_bound_at(sweep->light, length_m));
            }
        }
}

/* Adds what is left of a part at this target, in halves while it is large beside the block. */
static void add_parts(struct sweep *sweep, const struct target *target, const struct part *from, double above,
                      size_t most) {
    struct workspace *workspace = &sweep->scene->workspace;
    struct part part;
    size_t indices = workspace->index_count;
    if (!bw_room_refine(workspace, sweep->image, sweep->light, target, from, &part) || !(part.bound > above)) {
        workspace->index_count = indices;
        return;
    }
    double small_m = fmax(target->size_m, fmax(sweep->precision.least_m, sweep->precision.relative * part.length_m));
    if (part.clear || part.size_m <= small_m || workspace->part_count >= most) {
        if (workspace->part_count < workspace->part_capacity)
            workspace->parts[workspace->part_count++] = part;
        return;
    }
    struct quad halves[2];
    bw_room_quad_halves(&part.piece, halves);
    for (int k = 0; k < 2; k++) {
        struct part half = part;
        half.piece = halves[k];
        half.size_m = bw_room_quad_size_m(&half.piece);
        add_parts(sweep, target, &half, above, most);
    }
}

/* Drops what a clear part outdoes everywhere in the block: no cell of it is farther from that part than its distance
 * and the block's size. Returns: the number left; clear: of them all. */
static size_t drop_outdone(struct sweep *sweep, const struct target *target, size_t first, bool *clear) {
    struct workspace *workspace = &sweep->scene->workspace;
    size_t best = workspace->part_count, kept = first;
    double certain = 0;
    for (size_t i = first; i < workspace->part_count; i++) {
        const struct part *part = &workspace->parts[i];
        if (!part->clear)
            continue;
        double least = part->total_share * bw_room_bound_at(sweep->light, part->length_m + target->size_m);
        if (least > certain) {
            certain = least;
            best = i;
        }
    }
    *clear = true;
    for (size_t i = first; i < workspace->part_count; i++)
        if (workspace->parts[i].bound >= certain || i == best) {
            *clear = *clear && workspace->parts[i].clear;
            workspace->parts[kept++] = workspace->parts[i];
        }
    workspace->part_count = kept;
    return kept - first;
}

static void descend(struct sweep *sweep, struct block block, size_t first, size_t count);

static void quarter(struct sweep *sweep, struct block block, size_t first, size_t count) {
    int level = block.level - 1;
    for (size_t k = 0; k < 4; k++) {
        struct block part = {level, 2 * block.column + k % 2, 2 * block.row + k / 2};
        if (part.column < sweep->pyramid->columns[level] && part.row < sweep->pyramid->rows[level])
            descend(sweep, part, first, count);
    }
}

static void one_cell(struct sweep *sweep, struct cells cells, const struct target *target, size_t first, size_t count) {
    size_t cell = cells.from_row * sweep->map->columns + cells.from_column;
    struct finding found = {.ratio = sweep->map->ratio[cell]};
    if (bw_room_worst(&sweep->scene->workspace, sweep->image, sweep->light, target, first, count, &sweep->precision,
                      &found))
        raise(sweep, cell, found.ratio);
}

static void descend(struct sweep *sweep, struct block block, size_t first, size_t count) {
    static const size_t parts_max = 48;
    double least = least_of(sweep, block);
    if (!(least < HUGE_VAL))
        return; /* no cell inside */
    struct workspace *workspace = &sweep->scene->workspace;
    struct cells cells = cells_of(sweep, block);
    struct target target = bw_room_box_target(bw_room_cell_corner(sweep->map, cells.from_column, cells.from_row),
                                              bw_room_cell_corner(sweep->map, cells.to_column, cells.to_row));
    if (block.level == 0) {
        one_cell(sweep, cells, &target, first, count);
        return;
    }
    size_t base = workspace->part_count, indices = workspace->index_count;
    for (size_t i = first; i < first + count; i++) {
        struct part from = workspace->parts[i];
        add_parts(sweep, &target, &from, least, base + parts_max);
    }
    bool clear;
    size_t left = drop_outdone(sweep, &target, base, &clear);
    if (left > 0 && clear)
        fill(sweep, cells, base, left);
    else if (left > 0)
        quarter(sweep, block, base, left);
    workspace->part_count = base;
    workspace->index_count = indices;
}

void bw_room_sweep(struct scene *scene, const struct image *image, const struct light *light, struct bw_room_map *map,
                   struct pyramid *pyramid) {
    enum bw_path_kind kind = light->kind == BW_PATH_DIRECT && image->depth > 0 ? BW_PATH_MIRROR : light->kind;
    struct sweep sweep = {scene,
                          image,
                          light,
                          map,
                          pyramid,
                          {light->spot != NULL ? 0.1 : 0.05, fmax(0.01, map->cell_m / 2), 2000},
                          (unsigned char)kind,
                          false};
    size_t first = bw_room_push_roots(&scene->workspace, image), count = scene->workspace.part_count - first;
    descend(&sweep, (struct block){pyramid->levels - 1, 0, 0}, first, count);
    scene->workspace.part_count = 0;
    scene->workspace.index_count = 0;
    if (sweep.raised)
        bw_room_pyramid_renew(pyramid, map);
}
