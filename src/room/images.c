/* The room unfolded along sequences of mirrors: the image sources. */
#include "internal.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static const double hair_m = 1e-9;

static bool add_barrier(struct image *image, struct barrier barrier) {
    if (image->count == image->capacity) {
        size_t capacity = image->capacity ? 2 * image->capacity : 32;
        struct barrier *barriers = realloc(image->barriers, capacity * sizeof *barriers);
        if (barriers == NULL)
            return false;
        image->barriers = barriers;
        image->capacity = capacity;
    }
    image->barriers[image->count++] = barrier;
    return true;
}

/* Distance of p to the left of the line of s. */
static double left_m(struct bw_segment s, struct bw_point p) {
    double dx = s.to.x_m - s.from.x_m, dy = s.to.y_m - s.from.y_m;
    return (dx * (p.y_m - s.from.y_m) - dy * (p.x_m - s.from.x_m)) / hypot(dx, dy);
}

/* Keeps the part of s on the given side of the line. Returns: false if nothing is left. */
static bool clip_to_side(struct bw_segment *s, struct bw_segment line, int side) {
    double from = side * left_m(line, s->from), to = side * left_m(line, s->to);
    if (!(from > hair_m || to > hair_m))
        return false;
    struct bw_segment whole = *s;
    if (from < 0 || to < 0) {
        double t = from / (from - to);
        struct bw_point at = {whole.from.x_m + t * (whole.to.x_m - whole.from.x_m),
                              whole.from.y_m + t * (whole.to.y_m - whole.from.y_m)};
        if (from < 0)
            s->from = at;
        else
            s->to = at;
    }
    return true;
}

static struct bw_segment mirrored(struct bw_segment s, struct bw_segment line) {
    return (struct bw_segment){bw_mirror_point(s.from, line), bw_mirror_point(s.to, line)};
}

/* ---- joints ----------------------------------------------------------------------------------------------------- */

static bool same(struct bw_point a, struct bw_point b) {
    return bw_distance(a, b) <= hair_m;
}

/* Where two stops touch or cross. */
static bool meet(struct bw_segment s, struct bw_segment t, struct bw_point *at) {
    if (fmin(s.from.x_m, s.to.x_m) > fmax(t.from.x_m, t.to.x_m) + hair_m ||
        fmin(t.from.x_m, t.to.x_m) > fmax(s.from.x_m, s.to.x_m) + hair_m ||
        fmin(s.from.y_m, s.to.y_m) > fmax(t.from.y_m, t.to.y_m) + hair_m ||
        fmin(t.from.y_m, t.to.y_m) > fmax(s.from.y_m, s.to.y_m) + hair_m)
        return false;
    const struct bw_point ends[4] = {s.from, s.to, t.from, t.to};
    for (int i = 0; i < 4; i++)
        if (bw_point_segment_distance(ends[i], i < 2 ? t : s) <= hair_m) {
            *at = ends[i];
            return true;
        }
    double from = left_m(t, s.from), to = left_m(t, s.to);
    if (!bw_segments_cross(s, t) || !(fabs(from - to) > 0))
        return false;
    double part = from / (from - to);
    *at = (struct bw_point){s.from.x_m + part * (s.to.x_m - s.from.x_m), s.from.y_m + part * (s.to.y_m - s.from.y_m)};
    return true;
}

static struct bw_point toward(struct bw_point from, struct bw_point to, double part) {
    return (struct bw_point){from.x_m + part * (to.x_m - from.x_m), from.y_m + part * (to.y_m - from.y_m)};
}

/* A chord between the far ends, and one nearer to the elbow for what lies between the arms; none if the two lie on the
 * same stretch of one line. */
static bool add_chord(struct image *image, struct bw_point u, struct bw_point elbow, struct bw_point v, double passes,
                      int leg) {
    static const double nearer = 0.35;
    if (same(u, elbow) || same(v, elbow) || same(u, v))
        return true;
    double across = fabs(left_m((struct bw_segment){u, elbow}, v));
    double onward = (elbow.x_m - u.x_m) * (v.x_m - elbow.x_m) + (elbow.y_m - u.y_m) * (v.y_m - elbow.y_m);
    if (across <= hair_m && !(onward > 0))
        return true;
    struct barrier far = {BARRIER_CHORD, {u, v}, passes, elbow, 0, leg}, near = far;
    near.segment = (struct bw_segment){toward(elbow, u, nearer), toward(elbow, v, nearer)};
    return add_barrier(image, far) && (across <= hair_m || add_barrier(image, near));
}

/* No single stop is crossed by all links that pass close to a joint, so a chord stands for the two together. */
static bool add_chords(struct image *image) {
    size_t count = image->count;
    for (size_t i = 0; i < count; i++)
        for (size_t j = i + 1; j < count; j++) {
            struct barrier a = image->barriers[i], b = image->barriers[j];
            struct bw_point elbow;
            if (a.kind != BARRIER_STOPS || b.kind != BARRIER_STOPS || !meet(a.segment, b.segment, &elbow))
                continue;
            double passes = fmax(a.passes, b.passes);
            if (!add_chord(image, a.segment.from, elbow, b.segment.from, passes, a.leg) ||
                !add_chord(image, a.segment.from, elbow, b.segment.to, passes, a.leg) ||
                !add_chord(image, a.segment.to, elbow, b.segment.from, passes, a.leg) ||
                !add_chord(image, a.segment.to, elbow, b.segment.to, passes, a.leg))
                return false;
        }
    return true;
}

/* ---- legs ------------------------------------------------------------------------------------------------------- */

/* The stops of a last leg, which lies on one side of its mirror (NULL: the direct way). */
static bool add_stops(struct image *image, const struct scene *scene, const struct bw_segment *mirror, int side) {
    for (size_t i = 0; i < scene->elements.count; i++) {
        const struct element *element = &scene->elements.at[i];
        struct bw_segment s = element->segment;
        if (!(element->passes < 1.) || (element->on_outline && scene->outline_is_convex))
            continue;
        if (mirror != NULL && !clip_to_side(&s, *mirror, side))
            continue;
        if (!add_barrier(image, (struct barrier){BARRIER_STOPS, s, element->passes, s.from, 0, image->depth}))
            return false;
    }
    return true;
}

static bool direct(struct image *image, const struct scene *scene, const struct emitter *emitter) {
    *image = (struct image){.emitter = emitter, .share = 1., .aims = emitter->aims};
    for (size_t i = 0; i < emitter->pieces.count; i++)
        if (!bw_room_add_quad(&image->pieces, emitter->pieces.at[i]))
            return false;
    if (emitter->faces && !add_barrier(image, (struct barrier){BARRIER_FACING, emitter->facing, 1.,
                                                               emitter->facing.from, emitter->side, 0}))
        return false;
    return add_stops(image, scene, NULL, 0) && add_chords(image);
}

static void release(struct image *image) {
    free(image->pieces.at);
    free(image->barriers);
}

static bool reflect_pieces(struct image *image, const struct image *before, struct bw_segment mirror, int side) {
    for (size_t i = 0; i < before->pieces.count; i++) {
        struct quad quad = before->pieces.at[i];
        bool lit = false;
        for (int k = 0; k < 4; k++) {
            lit = lit || side * left_m(mirror, quad.at[k]) > -hair_m;
            quad.at[k] = bw_mirror_point(quad.at[k], mirror);
        }
        if (lit && !bw_room_add_quad(&image->pieces, quad))
            return false;
    }
    return true;
}

static bool reflect_barriers(struct image *image, const struct image *before, struct bw_segment mirror, int side) {
    for (size_t i = 0; i < before->count; i++) {
        struct barrier barrier = before->barriers[i];
        if (barrier.kind == BARRIER_CHORD)
            continue;
        if (barrier.kind == BARRIER_STOPS && barrier.leg == before->depth &&
            !clip_to_side(&barrier.segment, mirror, side))
            continue;
        barrier.segment = mirrored(barrier.segment, mirror);
        barrier.side = -barrier.side;
        if (!add_barrier(image, barrier))
            return false;
    }
    return true;
}

static void reflect_angles(struct image *image, const struct element *element) {
    struct bw_segment s = element->segment;
    double line_rad = atan2(s.to.y_m - s.from.y_m, s.to.x_m - s.from.x_m);
    image->aims.middle_rad = bw_room_turn(2 * line_rad - image->aims.middle_rad);
    for (size_t i = 0; i < image->glint_count; i++)
        image->glints[i].normal_rad = bw_room_turn(2 * line_rad - image->glints[i].normal_rad);
    if (element->gleam == GLEAM_CONSTANT)
        image->share *= element->reflectance * element->behind;
    else
        image->glints[image->glint_count++] =
            (struct glint){line_rad + bw_pi / 2, element->index, element->reflectance, element->behind, element->pane};
}

/* One mirror more. */
static bool extend(struct image *image, const struct scene *scene, const struct image *before, size_t index, int side) {
    const struct element *element = &scene->elements.at[index];
    *image = *before;
    image->pieces = (struct quads){0};
    image->barriers = NULL;
    image->count = image->capacity = 0;
    image->mirrors[image->depth] = index;
    image->sides[image->depth++] = side;
    reflect_angles(image, element);
    struct barrier mirror = {BARRIER_MIRROR, element->segment, 1., element->segment.from, 0, image->depth};
    return reflect_pieces(image, before, element->segment, side) &&
           reflect_barriers(image, before, element->segment, side) && add_barrier(image, mirror) &&
           add_stops(image, scene, &element->segment, side) && add_chords(image);
}

/* ---- all sequences ---------------------------------------------------------------------------------------------- */

struct walk {
    const struct scene *scene;
    int from_depth, to_depth;
    image_visit *visit;
    void *context;
};

/* Can light of the image fall on the mirror at all: past the mirrors before, and not wholly stopped? */
static bool piece_reaches(const struct scene *scene, const struct image *image, const struct quad *piece,
                          struct bw_segment mirror) {
    struct quad target = bw_room_segment_quad(mirror);
    struct bundle bundle = bw_room_bundle(piece, &target, scene->exit_max_m);
    for (size_t i = 0; i < image->count; i++) {
        const struct barrier *barrier = &image->barriers[i];
        if (barrier->kind == BARRIER_MIRROR && bw_room_crossing(&bundle, barrier->segment) == CROSS_NONE)
            return false;
        if (barrier->kind == BARRIER_STOPS && !(barrier->passes > 0) &&
            bw_room_crossing(&bundle, barrier->segment) == CROSS_ALL)
            return false;
    }
    return true;
}

static bool reaches(const struct scene *scene, const struct image *image, size_t index, int side) {
    struct bw_segment mirror = scene->elements.at[index].segment;
    if (image->depth > 0) { /* the last leg lies on one side of the mirror before */
        int last = image->depth - 1;
        struct bw_segment before = scene->elements.at[image->mirrors[last]].segment, part = mirror;
        if (image->mirrors[last] == index || !clip_to_side(&part, before, image->sides[last]))
            return false;
    }
    bool lit = false;
    for (size_t i = 0; i < image->pieces.count && !lit; i++) {
        bool on_side = false;
        for (int k = 0; k < 4; k++)
            on_side = on_side || side * left_m(mirror, image->pieces.at[i].at[k]) > hair_m;
        lit = on_side && piece_reaches(scene, image, &image->pieces.at[i], mirror);
    }
    return lit;
}

static enum bw_status explore(const struct walk *walk, const struct image *image) {
    enum bw_status status = BW_OK;
    if (image->depth >= walk->from_depth)
        status = walk->visit(image, walk->context);
    if (image->depth >= walk->to_depth)
        return status;
    for (size_t i = 0; i < walk->scene->elements.count && status == BW_OK; i++) {
        const struct element *element = &walk->scene->elements.at[i];
        for (int side = -1; side <= 1 && status == BW_OK; side += 2) {
            if (element->gleam == GLEAM_NONE || element->side == -side || !reaches(walk->scene, image, i, side))
                continue;
            struct image next;
            status = extend(&next, walk->scene, image, i, side) ? explore(walk, &next) : BW_NO_MEMORY;
            release(&next);
        }
    }
    return status;
}

enum bw_status bw_room_images(const struct scene *scene, const struct emitter *emitter, int from_depth, int to_depth,
                              image_visit *visit, void *context) {
    struct walk walk = {scene, from_depth, to_depth, visit, context};
    struct image image;
    enum bw_status status = direct(&image, scene, emitter) ? explore(&walk, &image) : BW_NO_MEMORY;
    release(&image);
    return status;
}

/* Names of the mirrors in the order of the light, after the surface that it starts from. */
void bw_room_via(const struct scene *scene, const struct image *image, char via[BW_NAME_SIZE]) {
    size_t length = 0;
    via[0] = '\0';
    const char *name = image->emitter->name;
    for (int i = -1; i < image->depth; i++) {
        if (i >= 0)
            name = scene->elements.at[image->mirrors[i]].name;
        if (name == NULL || length >= BW_NAME_SIZE)
            continue;
        int added = snprintf(via + length, BW_NAME_SIZE - length, "%s%s", length > 0 ? ", " : "", name);
        length += added > 0 ? (size_t)added : 0;
    }
}
