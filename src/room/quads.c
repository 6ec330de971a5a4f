/* Convex quadrilaterals: halves, distances, directions. */
#include "internal.h"

#include <math.h>

struct quad bw_room_point_quad(struct bw_point p) {
    return (struct quad){{p, p, p, p}};
}

struct quad bw_room_segment_quad(struct bw_segment s) {
    return (struct quad){{s.from, s.to, s.to, s.from}};
}

struct bw_point bw_room_quad_middle(const struct quad *quad) {
    const struct bw_point *p = quad->at;
    return (struct bw_point){((p[0].x_m + p[2].x_m) + (p[1].x_m + p[3].x_m)) / 4,
                             ((p[0].y_m + p[2].y_m) + (p[1].y_m + p[3].y_m)) / 4};
}

static double square(struct bw_point a, struct bw_point b) {
    double dx = a.x_m - b.x_m, dy = a.y_m - b.y_m;
    return dx * dx + dy * dy;
}

double bw_room_quad_size_m(const struct quad *quad) {
    const struct bw_point *p = quad->at;
    double across = fmax(square(p[0], p[2]), square(p[1], p[3]));
    double along = fmax(fmax(square(p[0], p[1]), square(p[2], p[3])), fmax(square(p[1], p[2]), square(p[3], p[0])));
    return sqrt(fmax(across, along));
}

static struct bw_point between(struct bw_point a, struct bw_point b) {
    return (struct bw_point){(a.x_m + b.x_m) / 2, (a.y_m + b.y_m) / 2};
}

/* Cuts the longer pair of opposite sides in the middle. Both halves are convex, and together they are the whole. */
void bw_room_quad_halves(const struct quad *quad, struct quad halves[2]) {
    const struct bw_point *p = quad->at;
    if (square(p[0], p[1]) + square(p[2], p[3]) >= square(p[1], p[2]) + square(p[3], p[0])) {
        struct bw_point low = between(p[0], p[1]), high = between(p[2], p[3]);
        halves[0] = (struct quad){{p[0], low, high, p[3]}};
        halves[1] = (struct quad){{low, p[1], p[2], high}};
    } else {
        struct bw_point right = between(p[1], p[2]), left = between(p[3], p[0]);
        halves[0] = (struct quad){{p[0], p[1], right, left}};
        halves[1] = (struct quad){{left, right, p[2], p[3]}};
    }
}

static double point_edge_square(struct bw_point p, struct bw_point from, struct bw_point to) {
    double dx = to.x_m - from.x_m, dy = to.y_m - from.y_m, px = p.x_m - from.x_m, py = p.y_m - from.y_m;
    double length = dx * dx + dy * dy, t = length > 0 ? (px * dx + py * dy) / length : 0;
    t = t > 0 ? (t < 1 ? t : 1) : 0;
    px -= t * dx;
    py -= t * dy;
    return px * px + py * py;
}

/* True if the shadows of a and b on the axis (x, y) lie apart. */
static bool apart(const struct quad *a, const struct quad *b, double x, double y) {
    double a_low = HUGE_VAL, a_high = -HUGE_VAL, b_low = HUGE_VAL, b_high = -HUGE_VAL;
    for (int i = 0; i < 4; i++) {
        double at_a = a->at[i].x_m * x + a->at[i].y_m * y, at_b = b->at[i].x_m * x + b->at[i].y_m * y;
        a_low = at_a < a_low ? at_a : a_low;
        a_high = at_a > a_high ? at_a : a_high;
        b_low = at_b < b_low ? at_b : b_low;
        b_high = at_b > b_high ? at_b : b_high;
    }
    return a_low > b_high || b_low > a_high;
}

/* Along the sides as well as across them, since a quad may be a segment. */
static bool separated_by_sides(const struct quad *sides, const struct quad *a, const struct quad *b) {
    for (int i = 0; i < 4; i++) {
        struct bw_point from = sides->at[i], to = sides->at[(i + 1) & 3];
        double dx = to.x_m - from.x_m, dy = to.y_m - from.y_m;
        if (apart(a, b, dy, -dx) || apart(a, b, dx, dy))
            return true;
    }
    return false;
}

static bool separated(const struct quad *a, const struct quad *b) {
    return apart(a, b, 1, 0) || apart(a, b, 0, 1) || separated_by_sides(a, a, b) || separated_by_sides(b, a, b);
}

/* Least distance between two convex quads; 0 if they touch. Apart, it lies between a corner and a side. */
double bw_room_quad_distance(const struct quad *a, const struct quad *b) {
    double least = HUGE_VAL;
    for (int i = 0; i < 4; i++)
        for (int j = 0; j < 4; j++) {
            least = fmin(least, point_edge_square(a->at[i], b->at[j], b->at[(j + 1) & 3]));
            least = fmin(least, point_edge_square(b->at[i], a->at[j], a->at[(j + 1) & 3]));
        }
    return least > 0 && separated(a, b) ? sqrt(least) : 0;
}

static double gap(double low, double high, double from, double to) {
    return from > high ? from - high : low > to ? low - to : 0;
}

static bool equal(double a, double b) {
    return a <= b && a >= b;
}

/* Sides along the axes, so that the box around it is the quad itself. */
static bool is_upright(const struct quad *quad) {
    const struct bw_point *p = quad->at;
    return (equal(p[0].y_m, p[1].y_m) && equal(p[2].y_m, p[3].y_m) && equal(p[1].x_m, p[2].x_m) &&
            equal(p[3].x_m, p[0].x_m)) ||
           (equal(p[0].x_m, p[1].x_m) && equal(p[2].x_m, p[3].x_m) && equal(p[1].y_m, p[2].y_m) &&
            equal(p[3].y_m, p[0].y_m));
}

/* The same to a box with sides along the axes. */
double bw_room_box_distance(const struct quad *a, struct bw_point low, struct bw_point high) {
    if (is_upright(a)) {
        const struct bw_point *p = a->at;
        double dx = gap(fmin(p[0].x_m, p[2].x_m), fmax(p[0].x_m, p[2].x_m), low.x_m, high.x_m);
        double dy = gap(fmin(p[0].y_m, p[2].y_m), fmax(p[0].y_m, p[2].y_m), low.y_m, high.y_m);
        return sqrt(dx * dx + dy * dy);
    }
    struct quad box = {{low, {high.x_m, low.y_m}, high, {low.x_m, high.y_m}}};
    double least = HUGE_VAL;
    for (int i = 0; i < 4; i++) {
        double dx = gap(a->at[i].x_m, a->at[i].x_m, low.x_m, high.x_m);
        double dy = gap(a->at[i].y_m, a->at[i].y_m, low.y_m, high.y_m);
        least = fmin(least, dx * dx + dy * dy);
        for (int j = 0; j < 4; j++)
            least = fmin(least, point_edge_square(box.at[i], a->at[j], a->at[(j + 1) & 3]));
    }
    return least > 0 && separated(a, &box) ? sqrt(least) : 0;
}

double bw_room_turn(double angle_rad) {
    return remainder(angle_rad, 2 * bw_pi);
}

/* The directions of b - a are those of a convex set (b less a), so its corners bound them, unless it holds the origin.
 */
struct fan bw_room_fan(const struct quad *a, const struct quad *b) {
    struct bw_point from = bw_room_quad_middle(a), to = bw_room_quad_middle(b);
    double x = to.x_m - from.x_m, y = to.y_m - from.y_m, low = HUGE_VAL, high = -HUGE_VAL;
    for (int i = 0; i < 4; i++)
        for (int j = 0; j < 4; j++) {
            double dx = b->at[j].x_m - a->at[i].x_m, dy = b->at[j].y_m - a->at[i].y_m, along = x * dx + y * dy;
            if (!(along > 0)) /* half a turn or more: too wide to be of use */
                return (struct fan){true, 0, bw_pi};
            double slope = (x * dy - y * dx) / along;
            low = slope < low ? slope : low;
            high = slope > high ? slope : high;
        }
    double from_rad = atan(low), to_rad = atan(high);
    return (struct fan){false, atan2(y, x) + (from_rad + to_rad) / 2, (to_rad - from_rad) / 2};
}
