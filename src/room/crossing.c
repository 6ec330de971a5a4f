/* Do the links between two convex quads cross a segment: all of them, some, none?
 *
 * Why the corners suffice. Let u, v be the ends of the segment, a and b the ends of a link, and turn(a, b, u) the
 * signed area of the triangle a b u. With b fixed it is affine in a, with a fixed affine in b. So if it is positive for
 * all pairs of corners it is positive for all a of the one quad and all b of the other. The link crosses the segment if
 * a and b lie on different sides of the line u v, and u and v on different sides of the line a b. All of these hold for
 * all links if they hold for the corners. */
#include "internal.h"

#include <math.h>

static const double hair_m = 1e-9; /* what is drawn closer than this to a line lies on it */

static double cross(struct bw_point o, struct bw_point p, struct bw_point q) {
    return (p.x_m - o.x_m) * (q.y_m - o.y_m) - (p.y_m - o.y_m) * (q.x_m - o.x_m);
}

struct range {
    double low, high;
};

static void widen(struct range *range, double value) {
    range->low = value < range->low ? value : range->low;
    range->high = value > range->high ? value : range->high;
}

static struct range sides(const struct quad *quad, int corners, struct bw_segment s) {
    struct range range = {HUGE_VAL, -HUGE_VAL};
    for (int i = 0; i < corners; i++)
        widen(&range, cross(s.from, s.to, quad->at[i]));
    return range;
}

static struct range turns(const struct bundle *bundle, struct bw_point p) {
    struct range range = {HUGE_VAL, -HUGE_VAL};
    for (int i = 0; i < bundle->a_corners; i++) {
        double ax = bundle->a.at[i].x_m - p.x_m, ay = bundle->a.at[i].y_m - p.y_m;
        for (int j = 0; j < bundle->b_corners; j++)
            widen(&range, ax * (bundle->b.at[j].y_m - p.y_m) - ay * (bundle->b.at[j].x_m - p.x_m));
    }
    return range;
}

static bool same(struct bw_point p, struct bw_point q) {
    return p.x_m <= q.x_m && p.x_m >= q.x_m && p.y_m <= q.y_m && p.y_m >= q.y_m;
}

/* A point has one corner that counts, a segment two. */
static int corners_of(const struct quad *quad) {
    if (!same(quad->at[0], quad->at[3]) || !same(quad->at[1], quad->at[2]))
        return 4;
    return same(quad->at[0], quad->at[1]) ? 1 : 2;
}

struct bundle bw_room_bundle(const struct quad *a, const struct quad *b, double a_radius_m) {
    struct range x = {HUGE_VAL, -HUGE_VAL}, y = {HUGE_VAL, -HUGE_VAL};
    for (int i = 0; i < 4; i++) {
        widen(&x, a->at[i].x_m - a_radius_m);
        widen(&x, a->at[i].x_m + a_radius_m);
        widen(&x, b->at[i].x_m);
        widen(&y, a->at[i].y_m - a_radius_m);
        widen(&y, a->at[i].y_m + a_radius_m);
        widen(&y, b->at[i].y_m);
    }
    return (struct bundle){*a, *b, corners_of(a), corners_of(b), a_radius_m, {x.low, y.low}, {x.high, y.high}};
}

static bool boxes_apart(const struct bundle *bundle, struct bw_segment s) {
    return fmin(s.from.x_m, s.to.x_m) > bundle->high.x_m || fmax(s.from.x_m, s.to.x_m) < bundle->low.x_m ||
           fmin(s.from.y_m, s.to.y_m) > bundle->high.y_m || fmax(s.from.y_m, s.to.y_m) < bundle->low.y_m;
}

/* How much turn(a, b, p) can change when a moves by its radius. */
static double play(const struct bundle *bundle, struct bw_point p) {
    double far_m = 0;
    for (int j = 0; j < bundle->b_corners; j++) {
        double off_m = fabs(bundle->b.at[j].x_m - p.x_m) + fabs(bundle->b.at[j].y_m - p.y_m);
        far_m = off_m > far_m ? off_m : far_m;
    }
    return (bundle->a_radius_m + hair_m) * far_m;
}

/* Positions and places are open sets: what only touches the line of a segment belongs to its own side of it. What lies
 * wholly on the line is not taken to cross. */
static bool facing_each_other(struct range a, struct range b, double hair) {
    return (a.low >= -hair && a.high > hair && b.high <= hair && b.low < -hair) ||
           (b.low >= -hair && b.high > hair && a.high <= hair && a.low < -hair);
}

static bool on_line(struct range side, double hair) {
    return side.low >= -hair && side.high <= hair;
}

/* Given:   bundle; s
 * Returns: CROSS_ALL only if it is certain that all links cross s, CROSS_NONE only if it is certain that none does
 *          (the exit's radius beside a included, except across the line of s: a handpiece does not reach through a
 *          surface); else CROSS_SOME */
enum crossing bw_room_crossing(const struct bundle *bundle, struct bw_segment s) {
    if (boxes_apart(bundle, s))
        return CROSS_NONE;
    double length_m = fabs(s.to.x_m - s.from.x_m) + fabs(s.to.y_m - s.from.y_m), hair = hair_m * length_m;
    struct range a = sides(&bundle->a, bundle->a_corners, s), b = sides(&bundle->b, bundle->b_corners, s);
    if ((a.low > hair && b.low > hair) || (a.high < -hair && b.high < -hair))
        return CROSS_NONE;
    if (on_line(a, hair) || on_line(b, hair))
        return CROSS_NONE; /* it begins or ends there, and a straight link does not come back */
    struct range from = turns(bundle, s.from), to = turns(bundle, s.to);
    double from_play = play(bundle, s.from), to_play = play(bundle, s.to);
    if ((from.low > from_play && to.low > to_play) || (from.high < -from_play && to.high < -to_play))
        return CROSS_NONE;
    bool astride = (from.low > from_play && to.high < -to_play) || (from.high < -from_play && to.low > to_play);
    return astride && facing_each_other(a, b, hair) ? CROSS_ALL : CROSS_SOME;
}

/* What lies wholly on the line may belong to either side of it. */
static bool beyond(const struct quad *quad, struct bw_segment s, int inner, double margin_m) {
    double dx = s.to.x_m - s.from.x_m, dy = s.to.y_m - s.from.y_m, length_m = sqrt(dx * dx + dy * dy);
    double margin = (margin_m - hair_m) * length_m, hair = hair_m * length_m;
    struct range range = sides(quad, 4, s);
    return inner > 0 ? range.high <= -margin && range.low < -hair : range.low >= margin && range.high > hair;
}

/* 1: the quad lies outside the triangle of the elbow, -1: inside, 0: not certain. */
static int outside(const struct quad *quad, struct bw_segment chord, struct bw_point elbow, double radius_m) {
    double area = cross(chord.from, chord.to, elbow);
    if (fabs(area) <= hair_m * (fabs(chord.to.x_m - chord.from.x_m) + fabs(chord.to.y_m - chord.from.y_m)))
        return 1; /* a straight joint: no inside */
    int inner = area > 0 ? 1 : -1;
    struct bw_segment to = {chord.to, elbow}, from = {elbow, chord.from};
    if (beyond(quad, chord, inner, radius_m) || beyond(quad, to, inner, 0) || beyond(quad, from, inner, 0))
        return 1;
    return beyond(quad, chord, -inner, radius_m) && beyond(quad, to, -inner, 0) && beyond(quad, from, -inner, 0) ? -1
                                                                                                                 : 0;
}

static bool apart_from_elbow(const struct bundle *bundle, struct bw_segment chord, struct bw_point elbow) {
    return fmin(fmin(chord.from.x_m, chord.to.x_m), elbow.x_m) > bundle->high.x_m ||
           fmax(fmax(chord.from.x_m, chord.to.x_m), elbow.x_m) < bundle->low.x_m ||
           fmin(fmin(chord.from.y_m, chord.to.y_m), elbow.y_m) > bundle->high.y_m ||
           fmax(fmax(chord.from.y_m, chord.to.y_m), elbow.y_m) < bundle->low.y_m;
}

/* Do all links cross one or the other of two stops that meet at the elbow, and whose ends the chord joins?
 * Notes: 1) A link that crosses the chord and has neither end within the triangle leaves it by one of the two stops.
 *        2) A link with one end within and one outside that does not cross the chord goes through one of them.
 *        CROSS_NONE here means that this joint will never tell anything. */
enum crossing bw_room_elbow(const struct bundle *bundle, struct bw_segment chord, struct bw_point elbow) {
    if (apart_from_elbow(bundle, chord, elbow))
        return CROSS_NONE;
    enum crossing crossing = bw_room_crossing(bundle, chord);
    if (crossing == CROSS_SOME)
        return CROSS_SOME;
    int a = outside(&bundle->a, chord, elbow, bundle->a_radius_m), b = outside(&bundle->b, chord, elbow, 0);
    if (crossing == CROSS_ALL)
        return a > 0 && b > 0 ? CROSS_ALL : CROSS_SOME;
    if (a * b < 0)
        return CROSS_ALL;
    return a * b > 0 ? CROSS_NONE : CROSS_SOME;
}
