/* The worst at a point, or at the parts of an opening. */
#include "internal.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

const char *bw_path_name(enum bw_path_kind kind) {
    switch (kind) {
    case BW_PATH_NONE:
        return "none";
    case BW_PATH_DIRECT:
        return "direct";
    case BW_PATH_MIRROR:
        return "mirror";
    case BW_PATH_DIFFUSE:
        return "diffuse";
    }
    return "none";
}

struct precision bw_room_point_precision(void) {
    return (struct precision){0.002, 0.001, 20000};
}

bool bw_room_hunt_wants(const struct hunt *hunt, const struct quad *piece, double share, struct spot_curve *spot) {
    for (size_t i = 0; i < hunt->count; i++)
        if (share * bw_room_diffuse_at(spot, bw_room_quad_distance(piece, &hunt->targets[i].quad)) > hunt->place.ratio)
            return true;
    return false;
}

static void note(const struct scene *scene, const struct image *image, const struct light *light,
                 const struct finding *found, struct bw_place *place) {
    place->ratio = found->ratio;
    place->path = light->kind == BW_PATH_DIRECT && image->depth > 0 ? BW_PATH_MIRROR : light->kind;
    place->source = light->source;
    place->area = light->area;
    place->length_m = found->length_m;
    place->share = found->share;
    place->start_share = light->share;
    place->mirror_share = image->share;
    place->pass_share = found->pass_share;
    double without_gloss = light->share * image->share * found->pass_share;
    place->gloss_share = image->glint_count > 0 && without_gloss > 0 ? found->share / without_gloss : 1;
    place->cover_share = 1;
    place->spot_path_m = light->spot != NULL ? light->spot->path_m : 0;
    place->aside_rad = found->aside_rad;
    bw_room_via(scene, image, place->via);
}

void bw_room_hunt_take(struct scene *scene, const struct image *image, const struct light *light, struct hunt *hunt) {
    struct light exactly = *light;
    exactly.exact = true;
    struct finding found = {.ratio = hunt->place.ratio};
    bool better = false;
    size_t first = bw_room_push_roots(&scene->workspace, image), count = scene->workspace.part_count - first;
    for (size_t i = 0; i < hunt->count; i++)
        better = bw_room_worst(&scene->workspace, image, &exactly, &hunt->targets[i], first, count, &hunt->precision,
                               &found) ||
                 better;
    scene->workspace.part_count = 0;
    scene->workspace.index_count = 0;
    if (better)
        note(scene, image, light, &found, &hunt->place);
}

/* ---- one point -------------------------------------------------------------------------------------------------- */

static bool wants(const struct scene *scene, const struct quad *piece, double share, struct spot_curve *spot,
                  void *context) {
    (void)scene;
    return bw_room_hunt_wants(context, piece, share, spot);
}

static enum bw_status take(struct scene *scene, const struct image *image, const struct light *light, void *context) {
    bw_room_hunt_take(scene, image, light, context);
    return BW_OK;
}

static struct target point_target(struct bw_point at) {
    return bw_room_box_target(at, at);
}

static enum bw_status check_point(struct bw_point at, struct bw_error *error) {
    if (isfinite(at.x_m) && isfinite(at.y_m))
        return BW_OK;
    return bw_error_set(error, BW_ARGUMENT, "the place is not a finite point");
}

/* The worst path of all handpieces to a point.
 * Given:    room; sources, count; at
 * Returned: place   ratio is exact where nothing is half in the way; else at most one that is 0.2 % nearer
 * Returns:  BW_OK; BW_ARGUMENT; BW_NO_MEMORY; BW_OUT_OF_RANGE from the limits of a diffuse spot */
enum bw_status bw_room_at(const struct bw_room *room, const struct bw_room_source *sources, size_t count,
                          struct bw_point at, struct bw_place *place, struct bw_error *error) {
    *place = (struct bw_place){.ratio = nan("")};
    enum bw_status status = bw_room_check(room, sources, count, error);
    if (status == BW_OK)
        status = check_point(at, error);
    if (status != BW_OK)
        return status;
    struct scene scene;
    struct target target = point_target(at);
    struct hunt hunt = {.count = 1, .targets = &target, .precision = bw_room_point_precision()};
    struct receiver receiver = {wants, take, &hunt};
    status = bw_room_scene_init(&scene, room, sources, count, false, error);
    if (status == BW_OK)
        status = bw_room_lights(&scene, &receiver);
    bw_room_scene_free(&scene);
    if (status == BW_OK)
        *place = hunt.place;
    return status;
}

/* ---- every term ------------------------------------------------------------------------------------------------- */

struct terms {
    const struct bw_hazard *hazard;
    struct bw_hazard *one; /* each term by itself */
    struct target target;
    struct precision precision;
    double *ratios;
    struct bw_place *places; /* may be NULL */
};

static void take_one(struct scene *scene, const struct image *image, const struct light *light, struct terms *terms,
                     double *ratio, struct bw_place *place) {
    struct finding found = {.ratio = *ratio};
    size_t first = bw_room_push_roots(&scene->workspace, image), count = scene->workspace.part_count - first;
    if (bw_room_worst(&scene->workspace, image, light, &terms->target, first, count, &terms->precision, &found)) {
        *ratio = found.ratio;
        note(scene, image, light, &found, place);
    }
    scene->workspace.part_count = 0;
    scene->workspace.index_count = 0;
}

/* A diffuse path tells of an emission, not of its effects: each of its terms takes the largest. */
static enum bw_status take_diffuse(struct scene *scene, const struct image *image, const struct light *light,
                                   struct terms *terms) {
    enum bw_status status = BW_OK;
    for (size_t e = 0; e < terms->hazard->output->count && status == BW_OK; e++) {
        struct spot_curve *spot;
        status = bw_room_spot_curve(scene, light->source, e, light->spot->path_m, &spot);
        if (status != BW_OK)
            break;
        struct light alone = bw_room_diffuse_light(spot, light->area, light->share);
        alone.exit_radius_m = light->exit_radius_m;
        alone.exact = true;
        double least = HUGE_VAL;
        for (size_t i = 0; i < terms->hazard->term_count; i++)
            if (terms->hazard->terms[i].emission == e)
                least = fmin(least, terms->ratios[i]);
        double ratio = least;
        struct bw_place place;
        if (least < HUGE_VAL)
            take_one(scene, image, &alone, terms, &ratio, &place);
        for (size_t i = 0; i < terms->hazard->term_count; i++)
            if (terms->hazard->terms[i].emission == e && ratio > terms->ratios[i]) {
                terms->ratios[i] = ratio;
                if (terms->places != NULL)
                    terms->places[i] = place;
            }
    }
    return status;
}

/* Hazards of one term each. Returns: NULL when memory is short. */
static struct bw_hazard *single_terms(const struct bw_hazard *hazard) {
    struct bw_hazard *one = malloc((hazard->term_count + 1) * sizeof *one);
    for (size_t i = 0; one != NULL && i < hazard->term_count; i++) {
        one[i] = *hazard;
        one[i].term_count = 1;
        one[i].terms[0] = hazard->terms[i];
        one[i].adds[0][0] = true;
        bw_hazard_prepare_envelope(&one[i]);
    }
    return one;
}

static enum bw_status take_terms(struct scene *scene, const struct image *image, const struct light *light,
                                 void *context) {
    struct terms *terms = context;
    if (light->kind == BW_PATH_DIFFUSE)
        return take_diffuse(scene, image, light, terms);
    for (size_t i = 0; i < terms->hazard->term_count; i++) {
        struct light alone = *light;
        alone.hazard = &terms->one[i];
        alone.curve = NULL;
        alone.exact = true;
        struct bw_place place, *to = terms->places != NULL ? &terms->places[i] : &place;
        take_one(scene, image, &alone, terms, &terms->ratios[i], to);
    }
    return BW_OK;
}

static bool wants_terms(const struct scene *scene, const struct quad *piece, double share, struct spot_curve *spot,
                        void *context) {
    const struct terms *terms = context;
    (void)scene;
    double least = HUGE_VAL;
    for (size_t i = 0; i < terms->hazard->term_count; i++)
        least = fmin(least, terms->ratios[i]);
    return share * bw_room_diffuse_at(spot, bw_room_quad_distance(piece, &terms->target.quad)) > least;
}

/* Every term of the direct hazard at its largest over all paths of one handpiece.
 * Given:    room; source; at
 * Returned: term_ratios   in the order of source->direct; NAN on error
 *           places        may be NULL; where each comes from
 * Returns:  as bw_room_at */
enum bw_status bw_room_term_places_at(const struct bw_room *room, const struct bw_room_source *source,
                                      struct bw_point at, double term_ratios[BW_TERMS_MAX],
                                      struct bw_place places[BW_TERMS_MAX], struct bw_error *error) {
    for (size_t i = 0; i < BW_TERMS_MAX; i++)
        term_ratios[i] = nan("");
    for (size_t i = 0; places != NULL && i < BW_TERMS_MAX; i++)
        places[i] = (struct bw_place){.path = BW_PATH_NONE};
    enum bw_status status = bw_room_check(room, source, 1, error);
    if (status == BW_OK)
        status = check_point(at, error);
    if (status != BW_OK)
        return status;
    double ratios[BW_TERMS_MAX] = {0};
    struct scene scene;
    struct terms terms = {
        source->direct, single_terms(source->direct), point_target(at), bw_room_point_precision(), ratios, places};
    struct receiver receiver = {wants_terms, take_terms, &terms};
    status = bw_room_scene_init(&scene, room, source, 1, false, error);
    if (status == BW_OK)
        status = terms.one != NULL ? bw_room_lights(&scene, &receiver) : BW_NO_MEMORY;
    bw_room_scene_free(&scene);
    free(terms.one);
    if (status == BW_OK)
        memcpy(term_ratios, ratios, sizeof ratios);
    return status;
}

enum bw_status bw_room_terms_at(const struct bw_room *room, const struct bw_room_source *source, struct bw_point at,
                                double term_ratios[BW_TERMS_MAX], struct bw_error *error) {
    return bw_room_term_places_at(room, source, at, term_ratios, NULL, error);
}
