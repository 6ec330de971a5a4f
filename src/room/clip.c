/* The part of a polygon that lies in a box (Sutherland and Hodgman, Comm. ACM 17, 1974): where the polygon is not
 * convex the parts stay joined along the sides of the box, which adds no area. */
#include "internal.h"

#include <math.h>
#include <stdlib.h>

/* A side of the box adds at most one corner for each corner outside of it: never more than doubles, and for a polygon
 * of n corners at most n / 2 new ones a pass. */
bool bw_room_clipper_init(struct clipper *clipper, const struct bw_polygon *polygon) {
    size_t capacity = 6 * polygon->count + 16;
    clipper->polygon = polygon;
    clipper->points = malloc(capacity * sizeof *clipper->points);
    clipper->scratch = malloc(capacity * sizeof *clipper->scratch);
    return clipper->points != NULL && clipper->scratch != NULL;
}

void bw_room_clipper_free(struct clipper *clipper) {
    free(clipper->points);
    free(clipper->scratch);
}

/* How far p lies inside the side of the box. */
static double inside_m(struct bw_point p, int side, double limit_m) {
    switch (side) {
    case 0:
        return p.x_m - limit_m;
    case 1:
        return limit_m - p.x_m;
    case 2:
        return p.y_m - limit_m;
    default:
        return limit_m - p.y_m;
    }
}

static size_t clip_side(const struct bw_point *in, size_t count, struct bw_point *out, int side, double limit_m) {
    size_t kept = 0;
    for (size_t i = 0; i < count; i++) {
        struct bw_point a = in[i], b = in[(i + 1) % count];
        double from = inside_m(a, side, limit_m), to = inside_m(b, side, limit_m);
        if (from >= 0)
            out[kept++] = a;
        if ((from > 0 && to < 0) || (from < 0 && to > 0)) {
            double t = from / (from - to);
            out[kept++] = (struct bw_point){a.x_m + t * (b.x_m - a.x_m), a.y_m + t * (b.y_m - a.y_m)};
        }
    }
    return kept;
}

size_t bw_room_clip(struct clipper *clipper, struct bw_point low, struct bw_point high) {
    size_t count = clip_side(clipper->polygon->points, clipper->polygon->count, clipper->scratch, 0, low.x_m);
    count = clip_side(clipper->scratch, count, clipper->points, 1, high.x_m);
    count = clip_side(clipper->points, count, clipper->scratch, 2, low.y_m);
    return clip_side(clipper->scratch, count, clipper->points, 3, high.y_m);
}

double bw_room_chain_area_m2(const struct bw_point *points, size_t count) {
    double twice = 0;
    for (size_t i = 0; i < count; i++) {
        struct bw_point a = points[i], b = points[(i + 1) % count];
        twice += (a.x_m - points[0].x_m) * (b.y_m - points[0].y_m) - (b.x_m - points[0].x_m) * (a.y_m - points[0].y_m);
    }
    return fabs(twice) / 2;
}
