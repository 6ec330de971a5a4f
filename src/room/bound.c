/* The worst of all links from an image to one target. */
#include "internal.h"

#include <math.h>
#include <stdlib.h>

enum { PARTS = 16384, INDICES = 1 << 20 };

bool bw_room_workspace_init(struct workspace *workspace) {
    *workspace = (struct workspace){.part_capacity = PARTS, .index_capacity = INDICES};
    workspace->parts = malloc(PARTS * sizeof *workspace->parts);
    workspace->indices = malloc(INDICES * sizeof *workspace->indices);
    return workspace->parts != NULL && workspace->indices != NULL;
}

void bw_room_workspace_free(struct workspace *workspace) {
    free(workspace->parts);
    free(workspace->indices);
    *workspace = (struct workspace){0};
}

struct target bw_room_box_target(struct bw_point low, struct bw_point high) {
    struct quad box = {{low, {high.x_m, low.y_m}, high, {low.x_m, high.y_m}}};
    return (struct target){box, true, low, high, hypot(high.x_m - low.x_m, high.y_m - low.y_m), 0};
}

struct target bw_room_segment_target(struct bw_segment s, int lit_side) {
    return (struct target){.quad = bw_room_segment_quad(s), .size_m = bw_distance(s.from, s.to), .lit_side = lit_side};
}

/* Returns: index of the first part, or the part count if there is no room (callers give roots few enough). */
size_t bw_room_push_roots(struct workspace *workspace, const struct image *image) {
    size_t first = workspace->part_count, begin = workspace->index_count;
    for (size_t i = 0; i < image->count && workspace->index_count < workspace->index_capacity; i++)
        workspace->indices[workspace->index_count++] = (uint32_t)i;
    for (size_t i = 0; i < image->pieces.count && workspace->part_count < workspace->part_capacity; i++) {
        struct quad piece = image->pieces.at[i];
        workspace->parts[workspace->part_count++] = (struct part){.piece = piece,
                                                                  .size_m = bw_room_quad_size_m(&piece),
                                                                  .share = 1,
                                                                  .chord_share = 1,
                                                                  .first = begin,
                                                                  .count = workspace->index_count - begin,
                                                                  .bound = HUGE_VAL};
    }
    return first;
}

/* ---- barriers --------------------------------------------------------------------------------------------------- */

static double left(struct bw_segment s, struct bw_point p) {
    return (s.to.x_m - s.from.x_m) * (p.y_m - s.from.y_m) - (s.to.y_m - s.from.y_m) * (p.x_m - s.from.x_m);
}

/* Any corner of the quad on this side of the line of s? */
static bool any_on_side(const struct quad *quad, struct bw_segment s, int side) {
    double hair = 1e-9 * (fabs(s.to.x_m - s.from.x_m) + fabs(s.to.y_m - s.from.y_m));
    for (int i = 0; i < 4; i++)
        if (side * left(s, quad->at[i]) > hair)
            return true;
    return false;
}

enum decision { DARK, DECIDED, OPEN };

static enum decision decide(const struct bundle *bundle, const struct barrier *barrier, struct part *part) {
    if (barrier->kind == BARRIER_FACING)
        return any_on_side(&bundle->b, barrier->segment, barrier->side) ? DECIDED : DARK;
    enum crossing crossing = barrier->kind == BARRIER_CHORD ? bw_room_elbow(bundle, barrier->segment, barrier->elbow)
                                                            : bw_room_crossing(bundle, barrier->segment);
    if (barrier->kind == BARRIER_MIRROR)
        return crossing == CROSS_NONE ? DARK : crossing == CROSS_ALL ? DECIDED : OPEN;
    if (crossing != CROSS_ALL)
        return crossing == CROSS_NONE ? DECIDED : OPEN;
    if (barrier->kind == BARRIER_STOPS)
        part->share *= barrier->passes;
    else
        part->chord_share = fmin(part->chord_share, barrier->passes);
    return part->share > 0 && part->chord_share > 0 ? DECIDED : DARK;
}

/* Decides what can be decided; `to` keeps the rest. A chord is asked only while one of the stops is half in the way:
 * all links go through a joint only if some go through one of its arms. (Chords stand last among the barriers.)
 * Returns: false if dark. */
static bool pass_barriers(struct workspace *workspace, const struct image *image, const struct bundle *bundle,
                          const struct part *from, struct part *to, bool *open) {
    size_t begin = workspace->index_count;
    bool stopped = false;
    *open = false;
    if (begin + from->count > workspace->index_capacity) { /* no room to take notes: as if nothing stood in the way */
        *open = true;
        return true;
    }
    for (size_t i = 0; i < from->count; i++) {
        uint32_t index = workspace->indices[from->first + i];
        const struct barrier *barrier = &image->barriers[index];
        if (barrier->kind == BARRIER_CHORD && !stopped)
            break;
        enum decision decision = decide(bundle, barrier, to);
        if (decision == DARK) {
            workspace->index_count = begin;
            return false;
        }
        if (decision == OPEN) {
            workspace->indices[workspace->index_count++] = index;
            *open = *open || barrier->kind != BARRIER_CHORD;
            stopped = stopped || barrier->kind == BARRIER_STOPS;
        }
    }
    to->first = begin;
    to->count = workspace->index_count - begin;
    return true;
}

/* ---- angles ----------------------------------------------------------------------------------------------------- */

static double glint_share(const struct glint *glint, const struct fan *fan) {
    double off_rad = fabs(remainder(fan->middle_rad - glint->normal_rad, bw_pi)) + fan->half_rad;
    double surface = fmax(glint->least, bw_room_fresnel_s(glint->index, fan->any ? bw_pi / 2 : off_rad));
    return glint->behind * (glint->pane ? bw_room_pane(surface) : surface);
}

/* How far all links lie beside the aims, at least. */
static double aside_rad(const struct aims *aims, const struct fan *fan, bool *met) {
    *met = aims->free;
    if (aims->free || fan->any)
        return 0;
    double off_rad = fabs(bw_room_turn(fan->middle_rad - aims->middle_rad));
    *met = off_rad + fan->half_rad <= aims->half_rad;
    return fmax(0, off_rad - fan->half_rad - aims->half_rad);
}

static void measure_angles(const struct image *image, const struct target *target, struct part *part) {
    part->aside_rad = 0;
    if (image->glint_count == 0 && (image->aims.free || part->aims_met))
        return;
    struct fan fan = bw_room_fan(&part->piece, &target->quad);
    for (size_t i = 0; i < image->glint_count; i++)
        part->total_share *= glint_share(&image->glints[i], &fan);
    if (!part->aims_met)
        part->aside_rad = aside_rad(&image->aims, &fan, &part->aims_met);
}

/* ---- bounds ----------------------------------------------------------------------------------------------------- */

double bw_room_bound_at(const struct light *light, double length_m) {
    if (light->spot != NULL)
        return bw_room_diffuse_at(light->spot, length_m);
    return light->curve != NULL ? bw_room_curve_at(light->curve, length_m)
                                : bw_hazard_ratio_envelope(light->hazard, length_m);
}

static double ratio_bound(const struct light *light, double length_m, double beside_rad) {
    double on_axis = bw_room_bound_at(light, length_m);
    if (light->beside == NULL || !(beside_rad > 0))
        return on_axis;
    return fmin(on_axis, bw_room_beside_at(light->beside, length_m, beside_rad));
}

static double bound_of(const struct light *light, const struct part *part) {
    double beside = light->measure == MEASURE_RATIO || !(part->aside_rad > 0)
                        ? 1
                        : bw_room_beside_power(light->output, part->length_m, part->aside_rad);
    switch (light->measure) {
    case MEASURE_RATIO:
        return part->total_share * ratio_bound(light, part->length_m, part->aside_rad);
    case MEASURE_NEAREST:
        return part->total_share * beside > 0 ? 1 / (1 + part->length_m) : 0;
    case MEASURE_SHARE:
        return part->total_share * beside;
    }
    return HUGE_VAL;
}

static double distance_to(const struct quad *piece, const struct target *target) {
    return target->is_box ? bw_room_box_distance(piece, target->low, target->high)
                          : bw_room_quad_distance(piece, &target->quad);
}

bool bw_room_refine(struct workspace *workspace, const struct image *image, const struct light *light,
                    const struct target *target, const struct part *from, struct part *to) {
    *to = *from;
    if (target->lit_side != 0 &&
        !any_on_side(&from->piece, (struct bw_segment){target->quad.at[0], target->quad.at[1]}, target->lit_side))
        return false;
    bool open = false;
    if (from->count > 0) {
        struct bundle bundle = bw_room_bundle(&from->piece, &target->quad, light->exit_radius_m);
        if (!pass_barriers(workspace, image, &bundle, from, to, &open))
            return false;
    }
    to->length_m = distance_to(&to->piece, target);
    to->total_share = light->share * image->share * fmin(to->share, to->chord_share);
    measure_angles(image, target, to);
    to->clear = !open && image->glint_count == 0 && (image->aims.free || to->aims_met);
    to->bound = bound_of(light, to);
    if (isnan(to->bound))
        to->bound = HUGE_VAL; /* a ratio that cannot be had is not safe */
    return to->bound > 0;
}

/* The value at a point, where the bound is only a bound. */
double bw_room_value(const struct light *light, const struct part *part) {
    double ratio = part->bound;
    if (!light->exact || light->measure != MEASURE_RATIO)
        return ratio;
    if (light->spot != NULL)
        ratio = part->total_share * bw_room_diffuse_exactly(light->spot, part->length_m);
    else if (part->aside_rad > 0 && light->beside != NULL)
        ratio = part->total_share * bw_room_beside_exactly(light->hazard, part->length_m, part->aside_rad);
    else
        ratio = part->total_share * bw_hazard_ratio_envelope(light->hazard, part->length_m);
    return fmin(ratio, part->bound);
}

/* ---- best first ------------------------------------------------------------------------------------------------- */

static size_t pick(const struct workspace *workspace, size_t first) {
    size_t best = first;
    for (size_t i = first + 1; i < workspace->part_count; i++)
        if (workspace->parts[i].bound > workspace->parts[best].bound)
            best = i;
    return best;
}

static void push(struct workspace *workspace, const struct image *image, const struct light *light,
                 const struct target *target, const struct part *from, double above) {
    struct part part;
    size_t indices = workspace->index_count;
    if (bw_room_refine(workspace, image, light, target, from, &part) && part.bound > above)
        workspace->parts[workspace->part_count++] = part;
    else
        workspace->index_count = indices;
}

static bool is_final(const struct workspace *workspace, const struct part *part, const struct precision *precision,
                     size_t steps) {
    return part->clear || steps >= precision->steps || workspace->part_count + 2 > workspace->part_capacity ||
           part->size_m <= fmax(precision->least_m, precision->relative * part->length_m);
}

/* The part with the largest bound is halved until it is decided or small; then nothing else can be worse. */
bool bw_room_worst(struct workspace *workspace, const struct image *image, const struct light *light,
                   const struct target *target, size_t first, size_t count, const struct precision *precision,
                   struct finding *found) {
    size_t base = workspace->part_count, indices = workspace->index_count, steps = 0;
    bool better = false;
    for (size_t i = first; i < first + count && workspace->part_count < workspace->part_capacity; i++) {
        struct part from = workspace->parts[i];
        push(workspace, image, light, target, &from, found->ratio);
    }
    while (workspace->part_count > base) {
        size_t at = pick(workspace, base);
        struct part part = workspace->parts[at];
        workspace->parts[at] = workspace->parts[--workspace->part_count];
        if (!(part.bound > found->ratio))
            break;
        if (is_final(workspace, &part, precision, steps)) {
            double ratio = bw_room_value(light, &part);
            if (ratio > found->ratio) {
                *found = (struct finding){ratio, part.length_m, part.total_share, fmin(part.share, part.chord_share),
                                          light->beside != NULL ? part.aside_rad : 0};
                better = true;
            }
            continue;
        }
        struct quad halves[2];
        bw_room_quad_halves(&part.piece, halves);
        for (int k = 0; k < 2; k++, steps++) {
            struct part half = part;
            half.piece = halves[k];
            half.size_m = bw_room_quad_size_m(&half.piece);
            push(workspace, image, light, target, &half, found->ratio);
        }
    }
    workspace->part_count = base;
    workspace->index_count = indices;
    return better;
}
