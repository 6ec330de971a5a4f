/* Lines of equal ratio on the map (marching squares), ending at the outline.
 *
 * A corner of the grid has the largest value of the cells around it, so a line never runs inside a cell whose value is
 * above its level: it encloses all of them. */
#include "internal.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

struct field {
    const struct bw_room_map *map;
    size_t columns, rows; /* of corners */
    double *corner;       /* log of ratio / level: above 0 within */
    unsigned char *done;  /* a bit for each of the two strokes of a cell */
};
struct chain {
    size_t count, capacity;
    struct bw_point *points;
};

static const double nothing = -60; /* log of a ratio of next to nothing beside the level */

static double log_ratio(const struct bw_room_map *map, size_t cell, double level) {
    return map->ratio[cell] > 0 ? fmax(nothing, log(map->ratio[cell] / level)) : nothing;
}

static void lift(double *corner, double value) {
    *corner = isnan(*corner) || value > *corner ? value : *corner;
}

/* Corners outside the room take what the nearest inside have, twice over, so that the lines reach beyond the outline
 * and can be cut off at it. */
static bool spread(struct field *field) {
    size_t count = field->columns * field->rows;
    double *before = malloc(count * sizeof *before);
    if (before == NULL)
        return false;
    memcpy(before, field->corner, count * sizeof *before);
    for (size_t row = 0; row < field->rows; row++)
        for (size_t column = 0; column < field->columns; column++) {
            size_t at = row * field->columns + column;
            if (!isnan(before[at]))
                continue;
            for (size_t y = row > 0 ? row - 1 : 0; y <= row + 1 && y < field->rows; y++)
                for (size_t x = column > 0 ? column - 1 : 0; x <= column + 1 && x < field->columns; x++)
                    if (!isnan(before[y * field->columns + x]))
                        lift(&field->corner[at], before[y * field->columns + x]);
        }
    free(before);
    return true;
}

static bool field_init(struct field *field, const struct bw_room_map *map, double level) {
    field->map = map;
    field->columns = map->columns + 1;
    field->rows = map->rows + 1;
    field->corner = malloc(field->columns * field->rows * sizeof *field->corner);
    field->done = calloc(map->columns * map->rows, 1);
    if (field->corner == NULL || field->done == NULL)
        return false;
    for (size_t i = 0; i < field->columns * field->rows; i++)
        field->corner[i] = nan("");
    for (size_t row = 0; row < map->rows; row++)
        for (size_t column = 0; column < map->columns; column++) {
            if (!map->inside[row * map->columns + column])
                continue;
            double value = log_ratio(map, row * map->columns + column, level);
            for (size_t k = 0; k < 4; k++)
                lift(&field->corner[(row + k / 2) * field->columns + column + k % 2], value);
        }
    return spread(field);
}

/* ---- strokes ---------------------------------------------------------------------------------------------------- */

/* Sides of a cell: 0 bottom, 1 right, 2 top, 3 left. A stroke has the higher ground on its left. */
struct stroke {
    int from, to;
};

static double corner_at(const struct field *field, size_t column, size_t row, int corner) {
    static const size_t dx[4] = {0, 1, 1, 0}, dy[4] = {0, 0, 1, 1};
    return field->corner[(row + dy[corner]) * field->columns + column + dx[corner]];
}

/* Where opposite corners are high, they are taken as joined. Returns: number of strokes. */
static int strokes_of(const struct field *field, size_t column, size_t row, struct stroke strokes[2]) {
    int high[4], count = 0;
    for (int k = 0; k < 4; k++) {
        double value = corner_at(field, column, row, k);
        if (isnan(value))
            return 0;
        high[k] = value > 0;
    }
    /* Going round, the zone is left at side k from corner k (high) to k + 1 (low), and entered again at another. */
    for (int k = 0; k < 4; k++) {
        if (!(high[k] && !high[(k + 1) % 4]))
            continue;
        int entry = (k + 1) % 4;
        while (!(!high[entry] && high[(entry + 1) % 4]))
            entry = (entry + 1) % 4;
        strokes[count++] = (struct stroke){entry, k};
    }
    return count;
}

/* Where the line crosses a side of a cell. The same from both cells: always from the lower corner number upwards. */
static struct bw_point crossing_point(const struct field *field, size_t column, size_t row, int side) {
    static const size_t from_x[4] = {0, 1, 0, 0}, from_y[4] = {0, 0, 1, 0};
    size_t x = column + from_x[side], y = row + from_y[side];
    bool upright = side % 2 == 1;
    double a = field->corner[y * field->columns + x];
    double b = field->corner[(y + (upright ? 1 : 0)) * field->columns + x + (upright ? 0 : 1)];
    double t = a / (a - b);
    struct bw_point at = bw_room_cell_corner(field->map, x, y);
    if (upright)
        at.y_m += t * field->map->cell_m;
    else
        at.x_m += t * field->map->cell_m;
    return at;
}

/* ---- chains ----------------------------------------------------------------------------------------------------- */

static bool add_point(struct chain *chain, struct bw_point p) {
    if (chain->count == chain->capacity) {
        size_t capacity = chain->capacity ? 2 * chain->capacity : 64;
        struct bw_point *points = realloc(chain->points, capacity * sizeof *points);
        if (points == NULL)
            return false;
        chain->points = points;
        chain->capacity = capacity;
    }
    chain->points[chain->count++] = p;
    return true;
}

static bool neighbour(const struct field *field, size_t *column, size_t *row, int side) {
    switch (side) {
    case 0:
        return (*row)-- > 0;
    case 1:
        return ++*column < field->map->columns;
    case 2:
        return ++*row < field->map->rows;
    default:
        return (*column)-- > 0;
    }
}

/* The stroke of a cell that begins (or, backwards, ends) at a side and is not drawn yet: its number, or -1. */
static int open_stroke(const struct field *field, size_t column, size_t row, int side, bool backwards,
                       struct stroke *stroke) {
    struct stroke strokes[2];
    int count = strokes_of(field, column, row, strokes);
    for (int k = 0; k < count; k++)
        if ((backwards ? strokes[k].to : strokes[k].from) == side &&
            !(field->done[row * field->map->columns + column] & (1 << k))) {
            *stroke = strokes[k];
            return k;
        }
    return -1;
}

/* Follows the line from a side of a cell on. Returns: false if memory is short. */
static bool follow(struct field *field, size_t column, size_t row, int side, bool backwards, struct chain *chain) {
    struct stroke stroke;
    for (;;) {
        int k = open_stroke(field, column, row, side, backwards, &stroke);
        if (k < 0)
            return true;
        field->done[row * field->map->columns + column] |= (unsigned char)(1 << k);
        int leave = backwards ? stroke.from : stroke.to;
        if (!add_point(chain, crossing_point(field, column, row, leave)))
            return false;
        if (!neighbour(field, &column, &row, leave))
            return true;
        side = (leave + 2) % 4;
    }
}

static void turn_round(struct chain *chain) {
    for (size_t i = 0; i < chain->count / 2; i++) {
        struct bw_point swap = chain->points[i];
        chain->points[i] = chain->points[chain->count - 1 - i];
        chain->points[chain->count - 1 - i] = swap;
    }
}

/* ---- cut off at the outline -------------------------------------------------------------------------------------- */

static bool add_line(struct bw_contours *contours, const struct bw_point *points, size_t count, bool closed) {
    if (count < 2)
        return true;
    struct bw_contour *lines = realloc(contours->lines, (contours->count + 1) * sizeof *lines);
    if (lines == NULL)
        return false;
    contours->lines = lines;
    struct bw_point *copy = malloc(count * sizeof *copy);
    if (copy == NULL)
        return false;
    memcpy(copy, points, count * sizeof *copy);
    lines[contours->count++] = (struct bw_contour){count, copy, closed};
    return true;
}

static int by_value(const void *a, const void *b) {
    double left = *(const double *)a, right = *(const double *)b;
    return (left > right) - (left < right);
}

/* Where the stretch a b crosses the outline, as parts of its length, ascending. */
static size_t cuts_of(const struct bw_polygon *outline, struct bw_point a, struct bw_point b, double *cuts) {
    size_t count = 0;
    for (size_t i = 0; i < outline->count; i++) {
        struct bw_point c = outline->points[i], d = outline->points[(i + 1) % outline->count];
        double ux = b.x_m - a.x_m, uy = b.y_m - a.y_m, vx = d.x_m - c.x_m, vy = d.y_m - c.y_m;
        double cross = ux * vy - uy * vx;
        if (!(fabs(cross) > 0))
            continue;
        double t = ((c.x_m - a.x_m) * vy - (c.y_m - a.y_m) * vx) / cross;
        double u = ((c.x_m - a.x_m) * uy - (c.y_m - a.y_m) * ux) / cross;
        if (t > 0 && t < 1 && u >= 0 && u <= 1)
            cuts[count++] = t;
    }
    qsort(cuts, count, sizeof *cuts, by_value);
    return count;
}

struct cutting {
    const struct bw_polygon *outline;
    double *cuts;
    struct chain inside;
    bool any_outside;
};

/* One stretch of a line: its parts inside are added to the running chain, which ends where the outline is met. */
static bool cut_stretch(struct cutting *cutting, struct bw_point a, struct bw_point b, struct bw_contours *contours) {
    size_t count = cuts_of(cutting->outline, a, b, cutting->cuts);
    cutting->cuts[count] = 1;
    double from = 0;
    for (size_t i = 0; i <= count; i++) {
        double to = cutting->cuts[i], middle = (from + to) / 2;
        struct bw_point start = {a.x_m + from * (b.x_m - a.x_m), a.y_m + from * (b.y_m - a.y_m)};
        struct bw_point end =
            i == count ? b : (struct bw_point){a.x_m + to * (b.x_m - a.x_m), a.y_m + to * (b.y_m - a.y_m)};
        struct bw_point half = {a.x_m + middle * (b.x_m - a.x_m), a.y_m + middle * (b.y_m - a.y_m)};
        if (bw_polygon_contains(cutting->outline, half)) {
            if (cutting->inside.count == 0 && !add_point(&cutting->inside, start))
                return false;
            if (!add_point(&cutting->inside, end))
                return false;
        } else {
            cutting->any_outside = true;
            if (!add_line(contours, cutting->inside.points, cutting->inside.count, false))
                return false;
            cutting->inside.count = 0;
        }
        from = to;
    }
    return true;
}

/* A closed line that is cut is begun anew outside the room, so that no part of it is torn. */
static size_t outside_start(const struct bw_polygon *outline, const struct chain *chain) {
    for (size_t i = 0; i < chain->count; i++)
        if (!bw_polygon_contains(outline, chain->points[i]))
            return i;
    return 0;
}

static bool cut_line(struct cutting *cutting, const struct chain *chain, bool closed, struct bw_contours *contours) {
    size_t start = closed ? outside_start(cutting->outline, chain) : 0;
    size_t stretches = closed ? chain->count : chain->count - 1;
    cutting->inside.count = 0;
    cutting->any_outside = false;
    for (size_t i = 0; i < stretches; i++)
        if (!cut_stretch(cutting, chain->points[(start + i) % chain->count],
                         chain->points[(start + i + 1) % chain->count], contours))
            return false;
    if (closed && !cutting->any_outside)
        return add_line(contours, chain->points, chain->count, true);
    return add_line(contours, cutting->inside.points, cutting->inside.count, false);
}

/* ---- all lines of a level ---------------------------------------------------------------------------------------- */

static bool same_point(struct bw_point a, struct bw_point b) {
    return a.x_m <= b.x_m && a.x_m >= b.x_m && a.y_m <= b.y_m && a.y_m >= b.y_m;
}

/* Forwards from the middle of the stroke to its end or back to itself; if open, backwards as well. */
static bool trace(struct field *field, size_t column, size_t row, struct stroke stroke, struct cutting *cutting,
                  struct chain *chain, struct bw_contours *contours) {
    size_t to_column = column, to_row = row;
    chain->count = 0;
    if (!add_point(chain, crossing_point(field, column, row, stroke.from)) ||
        !follow(field, column, row, stroke.from, false, chain))
        return false;
    bool closed = chain->count > 3 && same_point(chain->points[0], chain->points[chain->count - 1]);
    if (closed)
        chain->count--;
    else if (neighbour(field, &to_column, &to_row, stroke.from)) {
        turn_round(chain);
        if (!follow(field, to_column, to_row, (stroke.from + 2) % 4, true, chain))
            return false;
    }
    return cut_line(cutting, chain, closed, contours);
}

static bool trace_all(struct field *field, struct cutting *cutting, struct chain *chain, struct bw_contours *contours) {
    for (size_t row = 0; row < field->map->rows; row++)
        for (size_t column = 0; column < field->map->columns; column++) {
            struct stroke strokes[2];
            int count = strokes_of(field, column, row, strokes);
            for (int k = 0; k < count; k++)
                if (!(field->done[row * field->map->columns + column] & (1 << k)) &&
                    !trace(field, column, row, strokes[k], cutting, chain, contours))
                    return false;
        }
    return true;
}

enum bw_status bw_room_contours(const struct bw_room *room, const struct bw_room_map *map, double level,
                                struct bw_contours *contours) {
    struct field field = {0};
    struct chain chain = {0};
    struct cutting cutting = {.outline = &room->outline, .cuts = malloc((room->outline.count + 1) * sizeof(double))};
    *contours = (struct bw_contours){.level = level};
    bool done = cutting.cuts != NULL && field_init(&field, map, level) && trace_all(&field, &cutting, &chain, contours);
    free(field.corner);
    free(field.done);
    free(chain.points);
    free(cutting.cuts);
    free(cutting.inside.points);
    return done ? BW_OK : BW_NO_MEMORY;
}

void bw_room_contours_free(struct bw_contours *contours) {
    for (size_t i = 0; i < contours->count; i++)
        free(contours->lines[i].points);
    free(contours->lines);
    *contours = (struct bw_contours){0};
}
