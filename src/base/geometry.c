#include <beamward/base.h>

#include <math.h>

/* Nearer than a nanometre is touching: coordinates are decimal texts, of which doubles are only near-by values, and a
 * corner that is written onto a slanting wall must be found there. */
static const double touching_m = 1e-9;

double bw_distance(struct bw_point a, struct bw_point b) {
    return hypot(b.x_m - a.x_m, b.y_m - a.y_m);
}

double bw_point_segment_distance(struct bw_point p, struct bw_segment s) {
    double dx = s.to.x_m - s.from.x_m, dy = s.to.y_m - s.from.y_m, square = dx * dx + dy * dy;
    double t = square > 0 ? ((p.x_m - s.from.x_m) * dx + (p.y_m - s.from.y_m) * dy) / square : 0;
    t = t > 0 ? (t < 1 ? t : 1) : 0;
    return hypot(s.from.x_m + t * dx - p.x_m, s.from.y_m + t * dy - p.y_m);
}

/* Twice the signed area of a, b, c: positive when c lies to the left of a -> b. */
static double side(struct bw_point a, struct bw_point b, struct bw_point c) {
    return (b.x_m - a.x_m) * (c.y_m - a.y_m) - (b.y_m - a.y_m) * (c.x_m - a.x_m);
}

static bool touches(struct bw_point p, struct bw_segment s) {
    return bw_point_segment_distance(p, s) <= touching_m;
}

static bool apart(double a_from, double a_to, double b_from, double b_to) {
    return fmax(a_from, a_to) + touching_m < fmin(b_from, b_to) || fmax(b_from, b_to) + touching_m < fmin(a_from, a_to);
}

bool bw_segments_cross(struct bw_segment a, struct bw_segment b) {
    if (apart(a.from.x_m, a.to.x_m, b.from.x_m, b.to.x_m) || apart(a.from.y_m, a.to.y_m, b.from.y_m, b.to.y_m))
        return false; /* the quick answer for most pairs */
    double a_from = side(b.from, b.to, a.from), a_to = side(b.from, b.to, a.to);
    double b_from = side(a.from, a.to, b.from), b_to = side(a.from, a.to, b.to);
    if (((a_from > 0 && a_to < 0) || (a_from < 0 && a_to > 0)) &&
        ((b_from > 0 && b_to < 0) || (b_from < 0 && b_to > 0)))
        return true;
    return touches(a.from, b) || touches(a.to, b) || touches(b.from, a) || touches(b.to, a);
}

struct bw_point bw_mirror_point(struct bw_point p, struct bw_segment line) {
    double dx = line.to.x_m - line.from.x_m, dy = line.to.y_m - line.from.y_m;
    double factor = 2 * side(line.from, line.to, p) / (dx * dx + dy * dy);
    return (struct bw_point){p.x_m + factor * dy, p.y_m - factor * dx};
}

double bw_polygon_area(const struct bw_polygon *polygon) {
    double twice = 0;
    for (size_t i = 0; i < polygon->count; i++) {
        struct bw_point a = polygon->points[i], b = polygon->points[(i + 1) % polygon->count];
        twice += a.x_m * b.y_m - b.x_m * a.y_m;
    }
    return fabs(twice) / 2;
}

static struct bw_segment edge(const struct bw_polygon *polygon, size_t i) {
    return (struct bw_segment){polygon->points[i], polygon->points[(i + 1) % polygon->count]};
}

bool bw_polygon_contains(const struct bw_polygon *polygon, struct bw_point p) {
    bool inside = false;
    for (size_t i = 0; i < polygon->count; i++) {
        struct bw_segment s = edge(polygon, i);
        if (touches(p, s))
            return true;
        if ((s.from.y_m > p.y_m) == (s.to.y_m > p.y_m))
            continue;
        double x_m = s.from.x_m + (p.y_m - s.from.y_m) / (s.to.y_m - s.from.y_m) * (s.to.x_m - s.from.x_m);
        if (p.x_m < x_m)
            inside = !inside;
    }
    return inside;
}

/* Two edges that follow each other share a corner; folding back on each other is no outline. */
static bool folds_back(struct bw_segment a, struct bw_segment b) {
    return touches(b.to, a) || touches(a.from, b);
}

bool bw_polygon_is_simple(const struct bw_polygon *polygon) {
    size_t n = polygon->count;
    if (n < 3)
        return false;
    for (size_t i = 0; i < n; i++) {
        for (size_t j = i + 1; j < n; j++) {
            struct bw_segment a = edge(polygon, i), b = edge(polygon, j);
            bool follows = j == i + 1, precedes = i == 0 && j == n - 1;
            if (follows ? folds_back(a, b) : precedes ? folds_back(b, a) : bw_segments_cross(a, b))
                return false;
        }
    }
    return true;
}

/* Of a simple polygon: whether all corners turn the same way. Corners less than a nanometre beside the line between
 * their neighbours are none. */
bool bw_polygon_is_convex(const struct bw_polygon *polygon) {
    bool left = false, right = false;
    for (size_t i = 0; i < polygon->count; i++) {
        struct bw_segment s = edge(polygon, i);
        struct bw_point next = polygon->points[(i + 2) % polygon->count];
        double turn = side(s.from, s.to, next), straight = touching_m * bw_distance(s.from, next);
        left = left || turn > straight;
        right = right || turn < -straight;
    }
    return !(left && right);
}
