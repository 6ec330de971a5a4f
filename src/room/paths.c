/* All lights of a room, one after the other: what reaches most places first, so that the rest can be passed over. */
#include "internal.h"

#include <math.h>

struct light bw_room_direct_light(const struct scene *scene, size_t source, size_t area) {
    const struct bw_hazard *hazard = scene->sources[source].direct;
    return (struct light){.measure = MEASURE_RATIO,
                          .kind = BW_PATH_DIRECT,
                          .source = source,
                          .area = area,
                          .share = 1,
                          .exit_radius_m = bw_room_exit_radius_m(hazard->output),
                          .output = hazard->output,
                          .curve = scene->direct != NULL ? &scene->direct[source] : NULL,
                          .hazard = hazard,
                          .beside = scene->beside != NULL ? &scene->beside[source] : NULL};
}

struct light bw_room_diffuse_light(struct spot_curve *spot, size_t area, double share) {
    return (struct light){.measure = MEASURE_RATIO,
                          .kind = BW_PATH_DIFFUSE,
                          .source = spot->source,
                          .area = area,
                          .share = share,
                          .output = spot->hazard->output,
                          .spot = spot};
}

struct stage {
    struct scene *scene;
    const struct receiver *receiver;
    double reflectance; /* of what is treated */
    size_t source;      /* of a lit surface */
    const struct lit *lit;
};

static enum bw_status take_beam(const struct image *image, void *context) {
    const struct stage *stage = context;
    enum bw_status status = BW_OK;
    for (size_t i = 0; i < stage->scene->source_count && status == BW_OK; i++) {
        struct light light = bw_room_direct_light(stage->scene, i, image->emitter->area);
        status = stage->receiver->take(stage->scene, image, &light, stage->receiver->context);
    }
    return status;
}

/* The treated spot may lie anywhere in the area; the exit touches it, so the spot is as small as the exit. */
static enum bw_status take_treated(const struct image *image, void *context) {
    const struct stage *stage = context;
    enum bw_status status = BW_OK;
    for (size_t i = 0; i < stage->scene->source_count && status == BW_OK; i++) {
        struct spot_curve *spot;
        status = bw_room_spot_curve(stage->scene, i, BW_EMISSIONS_MAX, 0, &spot);
        if (status != BW_OK)
            return status;
        struct light light = bw_room_diffuse_light(spot, image->emitter->area, stage->reflectance);
        light.exit_radius_m = bw_room_exit_radius_m(light.output);
        status = stage->receiver->take(stage->scene, image, &light, stage->receiver->context);
    }
    return status;
}

static enum bw_status take_patch(const struct image *image, void *context) {
    const struct stage *stage = context;
    struct spot_curve *spot;
    enum bw_status status =
        bw_room_spot_curve(stage->scene, stage->source, BW_EMISSIONS_MAX, stage->lit->path_m, &spot);
    if (status != BW_OK)
        return status;
    struct light light = bw_room_diffuse_light(spot, stage->lit->area, stage->lit->share);
    return stage->receiver->take(stage->scene, image, &light, stage->receiver->context);
}

/* A lit surface is seen directly, and in one mirror. */
static enum bw_status patch_lights(struct stage *stage, const struct patch *patch) {
    struct spot_curve *nearest; /* with the smallest spot: at least as strict as any */
    enum bw_status status = bw_room_spot_curve(stage->scene, stage->source, BW_EMISSIONS_MAX, 0, &nearest);
    struct quad quad = bw_room_segment_quad(patch->segment);
    const struct receiver *receiver = stage->receiver;
    if (status != BW_OK || !(stage->lit->share > 0) ||
        !receiver->wants(stage->scene, &quad, stage->lit->share, nearest, receiver->context))
        return status;
    struct emitter emitter = {.pieces = {1, 1, &quad},
                              .aims = {.free = true},
                              .faces = patch->side != 0,
                              .facing = patch->segment,
                              .side = patch->side,
                              .area = stage->lit->area,
                              .name = stage->scene->elements.at[patch->element].name};
    int mirrors = stage->scene->room->bounces > 1 ? 1 : stage->scene->room->bounces;
    return bw_room_images(stage->scene, &emitter, 0, mirrors, take_patch, stage);
}

static enum bw_status beams(struct stage *stage, int from_depth, int to_depth) {
    enum bw_status status = BW_OK;
    for (size_t i = 0; i < stage->scene->room->area_count && status == BW_OK; i++)
        status = bw_room_images(stage->scene, &stage->scene->areas[i], from_depth, to_depth, take_beam, stage);
    return status;
}

static enum bw_status treated(struct stage *stage) {
    const struct bw_material *material = &stage->scene->room->treated;
    double reflectance = fmax(material->reflectance, material->matt_reflectance);
    stage->reflectance = reflectance >= 0 && reflectance <= 1 ? reflectance : 1;
    enum bw_status status = BW_OK;
    for (size_t i = 0; i < stage->scene->room->area_count && status == BW_OK; i++) {
        struct emitter spot = stage->scene->areas[i];
        spot.aims.free = true;
        status = bw_room_images(stage->scene, &spot, 0, stage->scene->room->bounces, take_treated, stage);
    }
    return status;
}

enum bw_status bw_room_lights(struct scene *scene, const struct receiver *receiver) {
    struct stage stage = {.scene = scene, .receiver = receiver};
    enum bw_status status = beams(&stage, 0, 0);
    if (status == BW_OK)
        status = treated(&stage);
    if (status == BW_OK && scene->room->bounces > 0)
        status = beams(&stage, 1, scene->room->bounces);
    for (size_t i = 0; i < scene->patch_count * scene->source_count && status == BW_OK; i++) {
        stage.source = i % scene->source_count;
        stage.lit = &scene->lit[i];
        status = patch_lights(&stage, &scene->patches[i / scene->source_count]);
    }
    return status;
}
