#include <beamward/base.h>

#include <math.h>

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

static bool in_box(struct bw_segment s, struct bw_point p) {
    return p.x_m >= fmin(s.from.x_m, s.to.x_m) && p.x_m <= fmax(s.from.x_m, s.to.x_m) &&
           p.y_m >= fmin(s.from.y_m, s.to.y_m) && p.y_m <= fmax(s.from.y_m, s.to.y_m);
}

static bool is_zero(double x) {
    return x <= 0 && x >= 0;
}

bool bw_segments_cross(struct bw_segment a, struct bw_segment b) {
    double a_from = side(b.from, b.to, a.from), a_to = side(b.from, b.to, a.to);
    double b_from = side(a.from, a.to, b.from), b_to = side(a.from, a.to, b.to);
    if (((a_from > 0 && a_to < 0) || (a_from < 0 && a_to > 0)) && ((b_from > 0 && b_to < 0) || (b_from < 0 && b_to > 0)))
        return true;
    return (is_zero(a_from) && in_box(b, a.from)) || (is_zero(a_to) && in_box(b, a.to)) ||
           (is_zero(b_from) && in_box(a, b.from)) || (is_zero(b_to) && in_box(a, b.to));
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
        if (is_zero(side(s.from, s.to, p)) && in_box(s, p))
            return true;
        if ((s.from.y_m > p.y_m) == (s.to.y_m > p.y_m))
            continue;
        double x_m = s.from.x_m + (p.y_m - s.from.y_m) / (s.to.y_m - s.from.y_m) * (s.to.x_m - s.from.x_m);
        if (p.x_m < x_m)
            inside = !inside;
    }
    return inside;
}

bool bw_polygon_is_simple(const struct bw_polygon *polygon) {
    size_t n = polygon->count;
    for (size_t i = 0; i < n; i++) {
        for (size_t j = i + 1; j < n; j++) {
            struct bw_segment a = edge(polygon, i), b = edge(polygon, j);
            bool follows = j == i + 1, precedes = i == 0 && j == n - 1;
            if (!follows && !precedes && bw_segments_cross(a, b))
                return false;
            /* Neighbours share a corner; folding back on each other is no outline. */
            if (follows && n > 2 && is_zero(side(a.from, a.to, b.to)) &&
                (b.to.x_m - b.from.x_m) * (a.to.x_m - a.from.x_m) + (b.to.y_m - b.from.y_m) * (a.to.y_m - a.from.y_m) < 0)
                return false;
        }
    }
    return true;
}

bool bw_polygon_is_convex(const struct bw_polygon *polygon) {
    bool left = false, right = false;
    for (size_t i = 0; i < polygon->count; i++) {
        struct bw_segment s = edge(polygon, i);
        double turn = side(s.from, s.to, polygon->points[(i + 2) % polygon->count]);
        left = left || turn > 0;
        right = right || turn < 0;
    }
    return !(left && right);
}
