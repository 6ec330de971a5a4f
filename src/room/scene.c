/* The room prepared for tracing: elements, emitters, tables, lit surfaces. */
#include "internal.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

static void stretch(struct bw_point *low, struct bw_point *high, struct bw_point p) {
    low->x_m = fmin(low->x_m, p.x_m);
    low->y_m = fmin(low->y_m, p.y_m);
    high->x_m = fmax(high->x_m, p.x_m);
    high->y_m = fmax(high->y_m, p.y_m);
}

/* Each leg of a path is at most as long as the diagonal of all that is drawn. */
static double longest_path_m(const struct bw_room *room) {
    struct bw_point low = {HUGE_VAL, HUGE_VAL}, high = {-HUGE_VAL, -HUGE_VAL};
    for (size_t i = 0; i < room->outline.count; i++)
        stretch(&low, &high, room->outline.points[i]);
    for (size_t i = 0; i < room->area_count; i++)
        for (size_t k = 0; k < room->areas[i].outline.count; k++)
            stretch(&low, &high, room->areas[i].outline.points[k]);
    for (size_t i = 0; i < room->surface_count; i++) {
        stretch(&low, &high, room->surfaces[i].segment.from);
        stretch(&low, &high, room->surfaces[i].segment.to);
    }
    for (size_t i = 0; i < room->person_count; i++)
        stretch(&low, &high, room->persons[i].at);
    return bw_distance(low, high) * (room->bounces + 1);
}

/* Bearings, clockwise from +y, as angles anticlockwise from +x. */
static struct aims aims_of(const struct bw_treatment_area *area) {
    double from_deg = area->aim_from_deg, to_deg = area->aim_to_deg;
    return (struct aims){to_deg - from_deg >= 360, bw_room_turn((90 - (from_deg + to_deg) / 2) * bw_pi / 180),
                         (to_deg - from_deg) / 2 * bw_pi / 180};
}

static enum bw_status init_areas(struct scene *scene, bool *limited) {
    const struct bw_room *room = scene->room;
    *limited = false;
    scene->areas = calloc(room->area_count, sizeof *scene->areas);
    if (scene->areas == NULL)
        return BW_NO_MEMORY;
    for (size_t i = 0; i < room->area_count; i++) {
        struct emitter *emitter = &scene->areas[i];
        emitter->aims = aims_of(&room->areas[i]);
        emitter->area = i;
        *limited = *limited || !emitter->aims.free;
        if (!bw_room_cut_polygon(&room->areas[i].outline, &emitter->pieces))
            return BW_NO_MEMORY;
    }
    return BW_OK;
}

static enum bw_status init_tables(struct scene *scene, bool for_map, bool limited) {
    size_t count = scene->source_count;
    scene->direct = for_map ? calloc(count, sizeof *scene->direct) : NULL;
    scene->beside = limited ? calloc(count, sizeof *scene->beside) : NULL;
    if ((for_map && scene->direct == NULL) || (limited && scene->beside == NULL))
        return BW_NO_MEMORY;
    enum bw_status status = BW_OK;
    for (size_t i = 0; i < count && status == BW_OK; i++) {
        const struct bw_hazard *hazard = scene->sources[i].direct;
        scene->exit_max_m = fmax(scene->exit_max_m, bw_room_exit_radius_m(hazard->output));
        if (for_map)
            status = bw_room_direct_curve(hazard, scene->far_m, &scene->direct[i]);
        if (limited && status == BW_OK)
            status = bw_room_beside(hazard, scene->far_m, &scene->beside[i]);
    }
    return status;
}

enum bw_status bw_room_scene_init(struct scene *scene, const struct bw_room *room, const struct bw_room_source *sources,
                                  size_t count, bool for_map, struct bw_error *error) {
    *scene = (struct scene){.room = room, .sources = sources, .source_count = count, .error = error};
    scene->far_m = longest_path_m(room);
    scene->outline_is_convex = bw_polygon_is_convex(&room->outline);
    bool limited = false;
    enum bw_status status = bw_room_workspace_init(&scene->workspace) ? BW_OK : BW_NO_MEMORY;
    if (status == BW_OK)
        status = bw_room_elements(room, &scene->elements);
    if (status == BW_OK)
        status = init_areas(scene, &limited);
    if (status == BW_OK)
        status = init_tables(scene, for_map, limited);
    if (status == BW_OK)
        status = bw_room_patches(scene);
    if (status != BW_OK)
        bw_error_set(error, status, "room %s: memory is short", room->name);
    return status;
}

void bw_room_scene_free(struct scene *scene) {
    bw_room_workspace_free(&scene->workspace);
    free(scene->elements.at);
    for (size_t i = 0; scene->areas != NULL && i < scene->room->area_count; i++)
        free(scene->areas[i].pieces.at);
    free(scene->areas);
    for (size_t i = 0; i < scene->source_count; i++) {
        if (scene->direct != NULL)
            free(scene->direct[i].bound);
        if (scene->beside != NULL)
            bw_room_beside_free(&scene->beside[i]);
    }
    free(scene->direct);
    free(scene->beside);
    free(scene->patches);
    free(scene->lit);
    for (size_t i = 0; i < scene->spot_count; i++) {
        free(scene->spots[i]->curve.bound);
        free(scene->spots[i]);
    }
    free(scene->spots);
}

/* ---- diffuse curves --------------------------------------------------------------------------------------------- */

/* Eight lengths an octave: a spot a little nearer is a little smaller, the strict side. */
static double shorter_path_m(double path_m) {
    static const double near_m = 1. / 64;
    uint64_t bits;
    if (!(path_m >= near_m))
        return 0;
    memcpy(&bits, &path_m, sizeof bits);
    bits &= ~((UINT64_C(1) << 49) - 1);
    memcpy(&path_m, &bits, sizeof bits);
    return path_m;
}

static struct spot_curve *find_curve(const struct scene *scene, size_t source, size_t emission, double path_m) {
    for (size_t i = 0; i < scene->spot_count; i++) {
        struct spot_curve *curve = scene->spots[i];
        if (curve->source == source && curve->emission == emission && curve->path_m <= path_m &&
            curve->path_m >= path_m)
            return curve;
    }
    return NULL;
}

static struct spot_curve *new_curve(struct scene *scene) {
    if (scene->spot_count == scene->spot_capacity) {
        size_t capacity = scene->spot_capacity ? 2 * scene->spot_capacity : 16;
        struct spot_curve **spots = realloc(scene->spots, capacity * sizeof *spots);
        if (spots == NULL)
            return NULL;
        scene->spots = spots;
        scene->spot_capacity = capacity;
    }
    struct spot_curve *curve = calloc(1, sizeof *curve);
    if (curve != NULL)
        scene->spots[scene->spot_count++] = curve;
    return curve;
}

enum bw_status bw_room_spot_curve(struct scene *scene, size_t source, size_t emission, double path_m,
                                  struct spot_curve **found) {
    path_m = shorter_path_m(path_m);
    struct spot_curve *curve = find_curve(scene, source, emission, path_m);
    *found = curve;
    if (curve != NULL)
        return BW_OK;
    *found = curve = new_curve(scene);
    if (curve == NULL)
        return BW_NO_MEMORY;
    curve->hazard = scene->sources[source].diffuse;
    curve->source = source;
    curve->emission = emission;
    curve->path_m = path_m;
    return bw_room_diffuse_curve(curve, scene->far_m, scene->error);
}
