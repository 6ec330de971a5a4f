/* The nominal hazard zone as a hatched field, and the contours of the density that is needed. */
#include "plan.h"

#include <math.h>
#include <stdlib.h>

enum { BLOCKS_MAX = 300, LABELS_PER_LEVEL = 2, LABEL_TRIES = 24 };

/* The map in blocks of cells; a block counts as zone if any of its cells does. */
struct blocks {
    const struct bw_room_map *map;
    size_t side, columns, rows;
};

static bool is_zone(const struct blocks *blocks, size_t column, size_t row) {
    const struct bw_room_map *map = blocks->map;
    for (size_t y = row * blocks->side; y < (row + 1) * blocks->side && y < map->rows; y++)
        for (size_t x = column * blocks->side; x < (column + 1) * blocks->side && x < map->columns; x++)
            if (map->inside[y * map->columns + x] && !(map->ratio[y * map->columns + x] <= 1.))
                return true;
    return false;
}

static bool same_run(const struct blocks *blocks, size_t from, size_t to, size_t row) {
    if (from > 0 && is_zone(blocks, from - 1, row))
        return false;
    if (to < blocks->columns && is_zone(blocks, to, row))
        return false;
    for (size_t column = from; column < to; column++)
        if (!is_zone(blocks, column, row))
            return false;
    return true;
}

/* One rectangle: a run of blocks, as many rows high as the same run goes on. */
static void rectangle(struct plan *plan, const struct blocks *blocks, size_t from, size_t to, size_t row) {
    if (row > 0 && same_run(blocks, from, to, row - 1))
        return; /* drawn with the row below */
    size_t top = row + 1;
    while (top < blocks->rows && same_run(blocks, from, to, top))
        top++;
    double side_m = (double)blocks->side * blocks->map->cell_m;
    struct bw_point low = {blocks->map->origin.x_m + (double)from * side_m,
                           blocks->map->origin.y_m + (double)row * side_m};
    struct bw_point high = {blocks->map->origin.x_m + (double)to * side_m,
                            blocks->map->origin.y_m + (double)top * side_m};
    struct bw_point a = plan_at(plan, low), b = plan_at(plan, high);
    bw_text_add(&plan->body, "M%.1f %.1fH%.1fV%.1fH%.1fZ", a.x_m, a.y_m, b.x_m, b.y_m, a.x_m);
}

static void rectangles(struct plan *plan, const struct blocks *blocks) {
    for (size_t row = 0; row < blocks->rows; row++) {
        for (size_t column = 0; column < blocks->columns;) {
            if (!is_zone(blocks, column, row)) {
                column++;
                continue;
            }
            size_t from = column;
            while (column < blocks->columns && is_zone(blocks, column, row))
                column++;
            rectangle(plan, blocks, from, column, row);
        }
    }
}

void plan_zone(struct plan *plan) {
    const struct bw_room_map *map = &plan->found->solution.map;
    size_t longest = map->columns > map->rows ? map->columns : map->rows;
    struct blocks blocks = {.map = map, .side = (longest + BLOCKS_MAX - 1) / BLOCKS_MAX};
    if (blocks.side == 0)
        return;
    blocks.columns = (map->columns + blocks.side - 1) / blocks.side;
    blocks.rows = (map->rows + blocks.side - 1) / blocks.side;
    bw_text_add(&plan->body, "<path class=\"zone\" clip-path=\"url(#room-%zu)\" fill=\"url(#hatch-%zu)\" d=\"",
                plan->index, plan->index);
    rectangles(plan, &blocks);
    bw_text_add(&plan->body, "\"/>\n");
}

bool plan_has_contour(const struct plan *plan, size_t level) {
    return plan->found->solution.contours[level].count > 0;
}

const char *plan_contour_dash(size_t level) {
    static const char *const dashes[BW_LEVELS] = {"none", "11 4", "9 3 2 3", "2 3"};
    return dashes[level];
}

const char *plan_contour_name(size_t level) {
    static const char *const names[BW_LEVELS] = {"limit", "OD 1", "OD 3", "OD 5"};
    return names[level];
}

/* Points nearer than this to the last one drawn add nothing that an eye could see. */
static void contour(struct plan *plan, const struct bw_contour *line) {
    static const double near = 0.8;
    struct bw_point last = {0};
    for (size_t i = 0; i < line->count; i++) {
        struct bw_point at = plan_at(plan, line->points[i]);
        if (i > 0 && i + 1 < line->count && hypot(at.x_m - last.x_m, at.y_m - last.y_m) < near)
            continue;
        bw_text_add(&plan->body, "%s%.1f %.1f", i == 0 ? "M" : "L", at.x_m, at.y_m);
        last = at;
    }
    if (line->closed)
        bw_text_add(&plan->body, "Z");
}

static double length_of(const struct bw_contour *line) {
    double length = 0;
    for (size_t i = 1; i < line->count; i++)
        length += bw_distance(line->points[i - 1], line->points[i]);
    return length;
}

/* Tries places along the line, from its middle to both ends. */
static bool label_line(struct plan *plan, const struct bw_contour *line, const char *text) {
    for (size_t i = 0; i < LABEL_TRIES; i++) {
        double share = 0.5 + (i % 2 ? 0.5 : -0.5) * (double)i / LABEL_TRIES;
        size_t point = (size_t)(share * (double)(line->count - 1));
        bool inside = bw_polygon_contains(&plan->room->outline, line->points[point]);
        if (inside && plan_label_on(plan, plan_at(plan, line->points[point]), text))
            return true;
    }
    return false;
}

/* The longest lines of a level get a label. */
static void label_level(struct plan *plan, size_t level) {
    const struct bw_contours *contours = &plan->found->solution.contours[level];
    double shorter_than = HUGE_VAL;
    for (size_t labels = 0; labels < LABELS_PER_LEVEL;) {
        const struct bw_contour *longest = NULL;
        double length = 0;
        for (size_t i = 0; i < contours->count; i++) {
            double own = length_of(&contours->lines[i]);
            if (own < shorter_than && own > length) {
                length = own;
                longest = &contours->lines[i];
            }
        }
        if (!longest || length * plan->scale < 30)
            return;
        labels += label_line(plan, longest, plan_contour_name(level));
        shorter_than = length;
    }
}

void plan_contours(struct plan *plan) {
    for (size_t level = 0; level < BW_LEVELS; level++) {
        const struct bw_contours *contours = &plan->found->solution.contours[level];
        if (contours->count == 0)
            continue;
        bw_text_add(&plan->body,
                    "<path class=\"contour\" clip-path=\"url(#room-%zu)\" stroke-width=\"%s\" "
                    "stroke-dasharray=\"%s\" d=\"",
                    plan->index, level == 0 ? "2.6" : "1.6", plan_contour_dash(level));
        for (size_t i = 0; i < contours->count; i++)
            contour(plan, &contours->lines[i]);
        bw_text_add(&plan->body, "\"/>\n");
    }
    for (size_t level = 0; level < BW_LEVELS; level++)
        label_level(plan, level);
}
