/* Matt surfaces in parts: which of them the beam reaches, how much of it, and from how near. */
#include "internal.h"

#include <math.h>
#include <stdlib.h>

static const double patch_m = 0.25;

static bool add_patch(struct scene *scene, struct patch patch) {
    if (scene->patch_count == scene->patch_capacity) {
        size_t capacity = scene->patch_capacity ? 2 * scene->patch_capacity : 64;
        struct patch *patches = realloc(scene->patches, capacity * sizeof *patches);
        if (patches == NULL)
            return false;
        scene->patches = patches;
        scene->patch_capacity = capacity;
    }
    scene->patches[scene->patch_count++] = patch;
    return true;
}

static struct bw_point along(struct bw_segment s, double t) {
    return (struct bw_point){s.from.x_m + t * (s.to.x_m - s.from.x_m), s.from.y_m + t * (s.to.y_m - s.from.y_m)};
}

static bool cut(struct scene *scene, size_t element, int side) {
    struct bw_segment s = scene->elements.at[element].segment;
    size_t count = (size_t)ceil(bw_distance(s.from, s.to) / patch_m - 1e-9);
    count = count > 0 ? count : 1;
    for (size_t i = 0; i < count; i++) {
        struct bw_segment part = {along(s, (double)i / (double)count), along(s, (double)(i + 1) / (double)count)};
        if (!add_patch(scene, (struct patch){part, element, side}))
            return false;
    }
    return true;
}

/* Each side is lit and seen by itself, unless light goes through. */
static bool cut_all(struct scene *scene) {
    for (size_t i = 0; i < scene->elements.count; i++) {
        const struct element *element = &scene->elements.at[i];
        if (!(element->matt > 0))
            continue;
        bool done;
        if (element->side != 0 || element->passes > 0)
            done = cut(scene, i, element->side);
        else
            done = cut(scene, i, 1) && cut(scene, i, -1);
        if (!done)
            return false;
    }
    return true;
}

/* ---- lighting --------------------------------------------------------------------------------------------------- */

static const struct precision lighting = {0.05, 0.02, 400};

struct lighting {
    struct scene *scene;
};

/* Nearest way and largest share of one image, each a bound of its own. */
static void light_patch(struct scene *scene, const struct image *image, const struct patch *patch, size_t source,
                        struct lit *lit) {
    const struct element *element = &scene->elements.at[patch->element];
    struct target target = bw_room_segment_target(patch->segment, patch->side);
    double near_m = HUGE_VAL;
    for (size_t i = 0; i < image->pieces.count; i++)
        near_m = fmin(near_m, bw_room_quad_distance(&image->pieces.at[i], &target.quad));
    if (lit->share >= element->matt * image->share && lit->path_m <= near_m)
        return;
    struct light light = bw_room_direct_light(scene, source, image->emitter->area);
    struct finding nearest = {.length_m = HUGE_VAL}, brightest = {.ratio = lit->share / element->matt};
    size_t first = bw_room_push_roots(&scene->workspace, image), count = scene->workspace.part_count - first;
    light.measure = MEASURE_NEAREST;
    if (bw_room_worst(&scene->workspace, image, &light, &target, first, count, &lighting, &nearest)) {
        if (nearest.length_m < lit->path_m) {
            lit->path_m = nearest.length_m;
            lit->area = image->emitter->area;
        }
        light.measure = MEASURE_SHARE;
        if (bw_room_worst(&scene->workspace, image, &light, &target, first, count, &lighting, &brightest))
            lit->share = element->matt * brightest.ratio;
    }
    scene->workspace.part_count = 0;
    scene->workspace.index_count = 0;
}

static enum bw_status light_all(const struct image *image, void *context) {
    struct scene *scene = ((struct lighting *)context)->scene;
    for (size_t i = 0; i < scene->patch_count; i++)
        for (size_t k = 0; k < scene->source_count; k++)
            light_patch(scene, image, &scene->patches[i], k, &scene->lit[i * scene->source_count + k]);
    return BW_OK;
}

enum bw_status bw_room_patches(struct scene *scene) {
    if (!cut_all(scene))
        return BW_NO_MEMORY;
    size_t count = scene->patch_count * scene->source_count;
    scene->lit = calloc(count + 1, sizeof *scene->lit);
    if (scene->lit == NULL)
        return BW_NO_MEMORY;
    for (size_t i = 0; i < count; i++)
        scene->lit[i].path_m = HUGE_VAL;
    struct lighting context = {scene};
    enum bw_status status = BW_OK;
    for (size_t i = 0; i < scene->room->area_count && status == BW_OK; i++)
        status = bw_room_images(scene, &scene->areas[i], 0, scene->room->bounces, light_all, &context);
    return status;
}
