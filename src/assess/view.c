/* The eye or skin of somebody: the ratio after any exposure, and how long until the limit is reached. */
#include "internal.h"

#include <math.h>
#include <stdlib.h>

/* What goggles let through of each emission; where they have no rating, all of it. */
static void pass(const struct bw_goggles *goggles, struct assess_light *light) {
    for (size_t i = 0; i < light->output.count; i++) {
        const struct bw_rating *rating = bw_eyewear_rating(goggles, light->output.emissions[i].wavelength_nm);
        light->passes[i] = rating ? pow(10., -rating->optical_density) : 1.;
    }
    light->output.passes = light->passes;
}

enum bw_status assess_view_open(struct assess_view *view, const struct bw_distance_result *const *distances,
                                size_t count, struct bw_error *error) {
    view->count = count;
    view->lights = calloc(count + 1, sizeof *view->lights);
    view->sources = calloc(count + 1, sizeof *view->sources);
    if (!view->lights || !view->sources)
        return bw_error_set(error, BW_NO_MEMORY, "out of memory");
    for (size_t i = 0; i < count; i++) {
        struct assess_light *light = &view->lights[i];
        light->distance = distances[i];
        light->output = distances[i]->output;
        light->output.aid = view->aid;
        if (view->goggles)
            pass(view->goggles, light);
        view->sources[i] = (struct bw_room_source){&light->direct, &light->diffuse};
    }
    return BW_OK;
}

void assess_view_close(struct assess_view *view) {
    free(view->lights);
    free(view->sources);
    view->lights = NULL;
    view->sources = NULL;
    view->count = 0;
}

/* No path in the room is longer than this, whatever it is reflected by. */
static double longest_path_m(const struct bw_room *room) {
    double widest_m = 0.;
    for (size_t i = 0; i < room->outline.count; i++)
        for (size_t j = i + 1; j < room->outline.count; j++)
            widest_m = fmax(widest_m, bw_distance(room->outline.points[i], room->outline.points[j]));
    return widest_m * (room->bounces + 1);
}

static enum bw_status prepare_light(struct assess_view *view, size_t index, double direct_s, double diffuse_s,
                                    struct bw_error *error) {
    struct assess_light *light = &view->lights[index];
    double at_m = view->room ? longest_path_m(view->room) : view->at_exit ? 0. : view->distance_m;
    struct bw_viewing_case viewing = {.target = view->target, .exposure_s = direct_s};
    if (view->target == BW_SKIN)
        viewing.area_m2 = assess_skin_area_m2(view->job, light->distance, at_m);
    enum bw_status status = bw_hazard_prepare(view->job->table, &light->output, &viewing, &light->direct, NULL, error);
    if (status == BW_OK && view->room)
        bw_hazard_prepare_envelope(&light->direct);
    viewing.exposure_s = diffuse_s;
    if (status == BW_OK && view->room)
        status = bw_hazard_prepare(view->job->table, &light->output, &viewing, &light->diffuse, NULL, error);
    return status;
}

static double on_axis(const struct assess_view *view) {
    const struct bw_hazard *hazard = &view->lights[0].direct;
    double terms[BW_TERMS_MAX] = {0};
    if (!view->at_exit)
        return bw_hazard_ratio(hazard, view->distance_m);
    bw_hazard_worst_terms(hazard, terms);
    return bw_hazard_total(hazard, terms);
}

/* With all lights prepared. */
static enum bw_status find_ratio(struct assess_view *view, double *ratio, struct bw_error *error) {
    if (!view->room) {
        *ratio = on_axis(view);
        view->place =
            (struct bw_place){.ratio = *ratio, .path = BW_PATH_DIRECT, .length_m = view->distance_m, .share = 1.};
        return BW_OK;
    }
    enum bw_status status = bw_room_at(view->room, view->sources, view->count, view->at, &view->place, error);
    *ratio = view->place.ratio;
    return status;
}

enum bw_status assess_view_ratio(double exposure_s, void *context, double *ratio, struct bw_error *error) {
    struct assess_view *view = context;
    *ratio = nan("");
    for (size_t i = 0; i < view->count; i++) {
        enum bw_status status = prepare_light(view, i, exposure_s, exposure_s, error);
        if (status != BW_OK)
            return status;
    }
    return find_ratio(view, ratio, error);
}

enum bw_status assess_view_customary(struct assess_view *view, double *ratio, struct bw_error *error) {
    *ratio = nan("");
    for (size_t i = 0; i < view->count; i++) {
        const struct bw_distance_result *distance = view->lights[i].distance;
        bool skin = view->target == BW_SKIN;
        enum bw_status status =
            prepare_light(view, i, skin ? distance->skin_time.exposure_s : distance->glance.exposure_s,
                          skin ? distance->skin_time.exposure_s : distance->diffuse_time.exposure_s, error);
        if (status != BW_OK)
            return status;
    }
    return find_ratio(view, ratio, error);
}

/* Given:    view  open
 * Returned: time  as bw_hazard_time_to_limit
 * Returns:  as that, and as bw_room_at
 * Notes:    In a room every path counts for as long as it takes: the direct beam, mirror images, diffuse light. */
enum bw_status assess_view_time(struct assess_view *view, struct bw_permitted_time *time, struct bw_error *error) {
    struct bw_viewing_case viewing = {.target = view->target};
    const struct bw_output **outputs = calloc(view->count + 1, sizeof *outputs);
    if (!outputs)
        return bw_error_set(error, BW_NO_MEMORY, "out of memory");
    for (size_t i = 0; i < view->count; i++)
        outputs[i] = &view->lights[i].output;
    enum bw_status status =
        bw_hazard_time_to_limit(view->job->table, outputs, view->count, &viewing, assess_view_ratio, view, time, error);
    free(outputs);
    return status;
}

struct bw_permitted_time assess_shorter(struct bw_permitted_time a, struct bw_permitted_time b) {
    return a.exposure_s <= b.exposure_s ? a : b;
}
