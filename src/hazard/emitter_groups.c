/* Which emitters of a head the eye sees together, how large and how bright they are.
 *
 * The standards evaluate an irregular source window by window: the power that comes from within a rectangular window
 * against the limit for the window's angular subtense, the arithmetic mean of its two sides, each counted from
 * alpha_min to alpha_max (IEC 60825-1:2014, 4.3 d and the notes on non-circular sources; from memory). The worst window
 * governs. Only windows whose four sides each touch an emitter are looked at: any other holds what a smaller one holds.
 *
 * How bright: the eye may stand anywhere. At a place p the emitters send sum w_j h(|p - p_j|), h the mean irradiance
 * over the aperture beside an axis, which falls with the offset. Let i be the emitter nearest to p; then every j is at
 * least half of |p_i - p_j| away from p, because |p_i - p_j| <= |p - p_i| + |p - p_j| <= 2 |p - p_j|. So the sum is at
 * most the largest over i of sum_j w_j h(|p_i - p_j| / 2): exact when the beams lie over each other, and when they are
 * clear of each other. */
#include "internal.h"

#include <math.h>

/* ---- angles ------------------------------------------------------------------------------------- */

static double angle_rad(double width_m, double view_m, double magnification) {
    return fmin(magnification * 2. * atan(width_m / 2. / view_m), bw_pi / 2.);
}

static double clamped(double side_rad, double most_rad) {
    return fmin(fmax(side_rad, point_rad), most_rad);
}

/* Angle of a window: a square one's own, an oblong one's mean of sides as far as they count, but no less than its
 * shorter side. */
static double window_rad(double x_rad, double y_rad, double most_rad) {
    double shorter = fmin(x_rad, y_rad), longer = fmax(x_rad, y_rad);
    if (longer <= shorter * (1. + 1e-12))
        return longer;
    return fmax(shorter, (clamped(x_rad, most_rad) + clamped(y_rad, most_rad)) / 2.);
}

static double view_m(const struct bw_beam *beam, double distance_m) {
    return fmax(distance_m + beam->source_behind_m, nearest_view_m);
}

static void set_angles(const struct bw_beam *beam, const struct sight *sight, double width_x_m, double width_y_m,
                       struct group *group) {
    const double at_m[2] = {sight->near_m, sight->far_m};
    for (size_t i = 0; i < 2; i++) {
        double away_m = view_m(beam, at_m[i]), x_rad = angle_rad(width_x_m, away_m, sight->magnification);
        double y_rad = angle_rad(width_y_m, away_m, sight->magnification);
        group->low_rad[i] = window_rad(x_rad, y_rad, sight->clamp_low_rad);
        group->high_rad[i] = window_rad(x_rad, y_rad, sight->clamp_rad);
    }
}

/* ---- brightness --------------------------------------------------------------------------------- */

/* What emitter j adds where i is the nearest. */
struct brightness {
    size_t count;
    double per_w[BW_EMITTERS_MAX][BW_EMITTERS_MAX];
};

static void fill_brightness(const struct bw_beam *beam, double near_m, double far_m, double aperture_m,
                            struct brightness *bright) {
    const struct bw_cluster *cluster = &beam->cluster;
    bright->count = cluster->count;
    for (size_t i = 0; i < cluster->count; i++)
        for (size_t j = 0; j <= i; j++) {
            double half_m = bw_distance(cluster->at[i], cluster->at[j]) / 2.;
            double per_w = bw_beam_irradiance_between_per_w(beam, near_m, far_m, aperture_m, half_m);
            bright->per_w[i][j] = cluster->share[j] * per_w;
            bright->per_w[j][i] = cluster->share[i] * per_w;
        }
}

static double brightest(const struct brightness *bright, unsigned members) {
    double largest = 0.;
    for (size_t i = 0; i < bright->count; i++) {
        double sum = 0.;
        if (!(members >> i & 1u))
            continue;
        for (size_t j = 0; j < bright->count; j++)
            sum += members >> j & 1u ? bright->per_w[i][j] : 0.;
        largest = sum <= largest ? largest : sum; /* NaN stays */
    }
    return largest;
}

double bw_hazard_all_per_w(const struct bw_beam *beam, double near_m, double far_m, double aperture_m) {
    struct brightness bright;
    if (beam->cluster.count <= 1)
        return bw_beam_irradiance_between_per_w(beam, near_m, far_m, aperture_m, 0.);
    fill_brightness(beam, near_m, far_m, aperture_m, &bright);
    return brightest(&bright, ~0u);
}

/* ---- the front ---------------------------------------------------------------------------------- */

/* Train corrections change their law at 5 and at 100 mrad, and in between at alpha_max, by a factor of two. */
static int law_of(double subtense_rad) {
    return subtense_rad <= 5e-3 ? 0 : subtense_rad <= 100e-3 ? 1 : 2;
}

/* a is no larger than b, and bright enough to stand for it. */
static bool stands_for(const struct group *a, const struct group *b, double slack) {
    if (!(a->per_w >= b->per_w))
        return false;
    bool smaller = true, same = true;
    for (size_t i = 0; i < 2; i++) {
        smaller = smaller && a->low_rad[i] <= b->low_rad[i];
        same = same && a->low_rad[i] >= b->low_rad[i] && a->high_rad[i] <= b->high_rad[i] &&
               a->high_rad[i] >= b->high_rad[i];
    }
    if ((smaller && same) || (smaller && slack <= 1.))
        return true;
    return smaller && a->per_w >= slack * b->per_w && law_of(a->low_rad[1]) == law_of(b->high_rad[0]);
}

/* One group that is no less than either. */
static void merge(struct group *into, const struct group *other) {
    for (size_t i = 0; i < 2; i++) {
        into->low_rad[i] = fmin(into->low_rad[i], other->low_rad[i]);
        into->high_rad[i] = fmax(into->high_rad[i], other->high_rad[i]);
    }
    into->per_w = fmax(into->per_w, other->per_w);
    into->emitters = into->emitters > other->emitters ? into->emitters : other->emitters;
}

static void offer(struct front *front, const struct group *group, double slack) {
    size_t kept = 0, nearest = 0;
    for (size_t i = 0; i < front->count; i++)
        if (stands_for(&front->groups[i], group, slack))
            return;
    for (size_t i = 0; i < front->count; i++)
        if (!stands_for(group, &front->groups[i], slack))
            front->groups[kept++] = front->groups[i];
    front->count = kept;
    if (front->count < FRONT_MAX) {
        front->groups[front->count++] = *group;
        return;
    }
    for (size_t i = 1; i < front->count; i++)
        if (fabs(front->groups[i].low_rad[0] - group->low_rad[0]) <
            fabs(front->groups[nearest].low_rad[0] - group->low_rad[0]))
            nearest = i;
    merge(&front->groups[nearest], group);
}

/* ---- windows ------------------------------------------------------------------------------------ */

/* Columns (or rows) of a head: the places of its emitters along one side, ascending, and who is there. */
struct lines {
    size_t count;
    double at_m[BW_EMITTERS_MAX];
    unsigned members[BW_EMITTERS_MAX];
};

static void sort_into(const struct bw_cluster *cluster, bool along_x, struct lines *lines) {
    lines->count = 0;
    for (size_t i = 0; i < cluster->count; i++) {
        double value_m = along_x ? cluster->at[i].x_m : cluster->at[i].y_m;
        size_t at = 0;
        while (at < lines->count && lines->at_m[at] < value_m)
            at++;
        if (!(at < lines->count && lines->at_m[at] <= value_m)) {
            for (size_t j = lines->count++; j > at; j--) {
                lines->at_m[j] = lines->at_m[j - 1];
                lines->members[j] = lines->members[j - 1];
            }
            lines->at_m[at] = value_m;
            lines->members[at] = 0;
        }
        lines->members[at] |= 1u << i;
    }
}

/* Those between two columns and two rows, if each of the four holds one of them; else none. */
static unsigned tight(const struct lines *columns, const struct lines *rows, unsigned between_columns,
                      unsigned between_rows, const size_t box[4]) {
    unsigned members = between_columns & between_rows;
    bool touches = members & columns->members[box[0]] && members & columns->members[box[1]] &&
                   members & rows->members[box[2]] && members & rows->members[box[3]];
    return touches ? members : 0;
}

static size_t count_bits(unsigned members) {
    size_t count = 0;
    for (; members; members &= members - 1)
        count++;
    return count;
}

/* Down to the nanometre, so that equal windows of a grid are equal. */
static double side_m(double low_m, double high_m, double source_m) {
    return floor((high_m - low_m + source_m) * 1e9 + 1e-3) * 1e-9;
}

static void offer_window(const struct bw_beam *beam, const struct sight *sight, const struct brightness *bright,
                         unsigned members, double width_x_m, double width_y_m, struct front *front) {
    struct group group;
    group.emitters = count_bits(members);
    group.per_w = brightest(bright, members);
    set_angles(beam, sight, width_x_m, width_y_m, &group);
    offer(front, &group, sight->slack);
}

/* All windows between two columns. */
static void offer_rows(const struct bw_beam *beam, const struct sight *sight, const struct brightness *bright,
                       const struct lines *columns, const struct lines *rows, size_t from, size_t to,
                       struct front *front) {
    unsigned between_columns = 0;
    for (size_t i = from; i <= to; i++)
        between_columns |= columns->members[i];
    for (size_t k = 0; k < rows->count; k++) {
        unsigned between_rows = 0;
        for (size_t l = k; l < rows->count; l++) {
            const size_t box[4] = {from, to, k, l};
            between_rows |= rows->members[l];
            unsigned members = tight(columns, rows, between_columns, between_rows, box);
            if (members != 0)
                offer_window(beam, sight, bright, members,
                             side_m(columns->at_m[from], columns->at_m[to], beam->source_m),
                             side_m(rows->at_m[k], rows->at_m[l], beam->source_m), front);
        }
    }
}

static void one_group(const struct bw_beam *beam, const struct sight *sight, double aperture_m, struct front *front) {
    front->count = 1;
    front->groups[0].emitters = 1;
    front->groups[0].per_w = bw_beam_irradiance_between_per_w(beam, sight->near_m, sight->far_m, aperture_m, 0.);
    set_angles(beam, sight, beam->source_m, beam->source_m, &front->groups[0]);
}

void bw_hazard_front(const struct bw_beam *beam, const struct sight *sight, double aperture_m, struct front *front) {
    struct brightness bright;
    struct lines columns, rows;
    if (beam->cluster.count <= 1) {
        one_group(beam, sight, aperture_m, front);
        return;
    }
    front->count = 0;
    fill_brightness(beam, sight->near_m, sight->far_m, aperture_m, &bright);
    sort_into(&beam->cluster, true, &columns);
    sort_into(&beam->cluster, false, &rows);
    for (size_t i = 0; i < columns.count; i++)
        for (size_t j = i; j < columns.count; j++)
            offer_rows(beam, sight, &bright, &columns, &rows, i, j, front);
}

struct extent {
    double x_m, y_m;
};

static struct extent extent_of(const struct bw_beam *beam) {
    const struct bw_cluster *cluster = &beam->cluster;
    struct extent extent = {0., 0.};
    for (size_t i = 0; i < cluster->count && cluster->count > 1; i++)
        for (size_t j = 0; j < i; j++) {
            extent.x_m = fmax(extent.x_m, fabs(cluster->at[i].x_m - cluster->at[j].x_m));
            extent.y_m = fmax(extent.y_m, fabs(cluster->at[i].y_m - cluster->at[j].y_m));
        }
    return (struct extent){extent.x_m + beam->source_m, extent.y_m + beam->source_m};
}

double bw_hazard_whole_rad(const struct bw_beam *beam, double distance_m, double magnification, double clamp_rad) {
    struct extent extent = extent_of(beam);
    double away_m = view_m(beam, distance_m), x_rad = angle_rad(extent.x_m, away_m, magnification);
    double y_rad = angle_rad(extent.y_m, away_m, magnification);
    /* below alpha_min on both sides: as it is, not as it counts */
    return fmax(x_rad, y_rad) <= point_rad ? fmax(x_rad, y_rad) : window_rad(x_rad, y_rad, clamp_rad);
}

/* From here on the angle of the whole head is alpha_min or less. */
double bw_hazard_point_from_m(const struct bw_beam *beam, double magnification) {
    struct extent extent = extent_of(beam);
    double width_m = fmax(extent.x_m, extent.y_m);
    return fmax(0., width_m / 2. / tan(point_rad / magnification / 2.) * (1. + 1e-9) - beam->source_behind_m);
}
