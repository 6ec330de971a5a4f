/* Cuts a polygon into convex pieces. */
#include "internal.h"

#include <math.h>
#include <stdlib.h>

bool bw_room_add_quad(struct quads *quads, struct quad quad) {
    if (quads->count == quads->capacity) {
        size_t capacity = quads->capacity ? 2 * quads->capacity : 8;
        struct quad *at = realloc(quads->at, capacity * sizeof *at);
        if (at == NULL)
            return false;
        quads->at = at;
        quads->capacity = capacity;
    }
    quads->at[quads->count++] = quad;
    return true;
}

/* A side of the polygon where it goes through a slab between two heights. */
struct rib {
    double low_x_m, high_x_m;
};

static int by_place(const void *a, const void *b) {
    const struct rib *first = a, *second = b;
    double left = first->low_x_m + first->high_x_m, right = second->low_x_m + second->high_x_m;
    return (left > right) - (left < right);
}

static int by_height(const void *a, const void *b) {
    double left = *(const double *)a, right = *(const double *)b;
    return (left > right) - (left < right);
}

static double x_at(struct bw_point low, struct bw_point high, double y_m) {
    if (y_m <= low.y_m)
        return low.x_m;
    if (y_m >= high.y_m)
        return high.x_m;
    return low.x_m + (y_m - low.y_m) / (high.y_m - low.y_m) * (high.x_m - low.x_m);
}

/* The trapezia of the polygon between two neighbouring heights of its corners. */
static bool cut_slab(const struct bw_polygon *polygon, double low_m, double high_m, struct rib *ribs,
                     struct quads *quads) {
    size_t count = 0;
    for (size_t i = 0; i < polygon->count; i++) {
        struct bw_point a = polygon->points[i], b = polygon->points[(i + 1) % polygon->count];
        struct bw_point low = a.y_m < b.y_m ? a : b, high = a.y_m < b.y_m ? b : a;
        if (low.y_m <= low_m && high.y_m >= high_m && low.y_m < high.y_m)
            ribs[count++] = (struct rib){x_at(low, high, low_m), x_at(low, high, high_m)};
    }
    qsort(ribs, count, sizeof *ribs, by_place);
    for (size_t i = 0; i + 1 < count; i += 2) {
        struct quad quad = {{{ribs[i].low_x_m, low_m},
                             {ribs[i + 1].low_x_m, low_m},
                             {ribs[i + 1].high_x_m, high_m},
                             {ribs[i].high_x_m, high_m}}};
        if (!bw_room_add_quad(quads, quad))
            return false;
    }
    return true;
}

static bool cut_slabs(const struct bw_polygon *polygon, double *heights_m, struct rib *ribs, struct quads *quads) {
    for (size_t i = 0; i < polygon->count; i++)
        heights_m[i] = polygon->points[i].y_m;
    qsort(heights_m, polygon->count, sizeof *heights_m, by_height);
    for (size_t i = 0; i + 1 < polygon->count; i++)
        if (heights_m[i] < heights_m[i + 1] && !cut_slab(polygon, heights_m[i], heights_m[i + 1], ribs, quads))
            return false;
    return true;
}

/* Each side as a segment: for a polygon without inside. */
static bool cut_flat(const struct bw_polygon *polygon, struct quads *quads) {
    for (size_t i = 0; i < polygon->count; i++) {
        struct bw_segment s = {polygon->points[i], polygon->points[(i + 1) % polygon->count]};
        if (!bw_room_add_quad(quads, bw_room_segment_quad(s)))
            return false;
    }
    return true;
}

bool bw_room_cut_polygon(const struct bw_polygon *polygon, struct quads *quads) {
    if (polygon->count == 1)
        return bw_room_add_quad(quads, bw_room_point_quad(polygon->points[0]));
    if (!(bw_polygon_area(polygon) > 0.))
        return cut_flat(polygon, quads);
    if (polygon->count == 4 && bw_polygon_is_convex(polygon)) {
        const struct bw_point *p = polygon->points;
        return bw_room_add_quad(quads, (struct quad){{p[0], p[1], p[2], p[3]}});
    }
    double *heights_m = malloc(polygon->count * sizeof *heights_m);
    struct rib *ribs = malloc(polygon->count * sizeof *ribs);
    bool done = heights_m != NULL && ribs != NULL && cut_slabs(polygon, heights_m, ribs, quads);
    free(heights_m);
    free(ribs);
    return done;
}
