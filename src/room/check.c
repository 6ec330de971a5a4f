/* What a room must be before it is solved. */
#include "internal.h"

#include <math.h>

static const double cells_max = 4e6;

static bool finite_point(struct bw_point p) {
    return isfinite(p.x_m) && isfinite(p.y_m);
}

static bool finite_polygon(const struct bw_polygon *polygon) {
    bool finite = true;
    for (size_t i = 0; i < polygon->count; i++)
        finite = finite && finite_point(polygon->points[i]);
    return finite;
}

static bool good_segment(struct bw_segment s) {
    return finite_point(s.from) && finite_point(s.to) && bw_distance(s.from, s.to) > 1e-6;
}

static enum bw_status check_outline(const struct bw_room *room, struct bw_error *error) {
    if (room->outline.count < 3 || !finite_polygon(&room->outline) || !bw_polygon_is_simple(&room->outline) ||
        !(bw_polygon_area(&room->outline) > 0))
        return bw_error_set(error, BW_ARGUMENT, "room %s: the outline must be a polygon whose sides do not cross",
                            room->name);
    if (!(room->grid_m >= 0.002 && room->grid_m <= 1))
        return bw_error_set(error, BW_ARGUMENT, "room %s: grid is %g m, outside 0.002 to 1 m", room->name,
                            room->grid_m);
    if (!(room->bounces >= 0 && room->bounces <= BOUNCES_MAX))
        return bw_error_set(error, BW_ARGUMENT, "room %s: bounces is %d, outside 0 to %d", room->name, room->bounces,
                            BOUNCES_MAX);
    double x_low = HUGE_VAL, x_high = -HUGE_VAL, y_low = HUGE_VAL, y_high = -HUGE_VAL;
    for (size_t i = 0; i < room->outline.count; i++) {
        struct bw_point p = room->outline.points[i];
        x_low = fmin(x_low, p.x_m);
        x_high = fmax(x_high, p.x_m);
        y_low = fmin(y_low, p.y_m);
        y_high = fmax(y_high, p.y_m);
    }
    double cells = ceil((x_high - x_low) / room->grid_m) * ceil((y_high - y_low) / room->grid_m);
    if (!(cells <= cells_max))
        return bw_error_set(error, BW_ARGUMENT, "room %s: a map of %.3g cells; at most %.3g, so take a wider grid",
                            room->name, cells, cells_max);
    return BW_OK;
}

static enum bw_status check_parts(const struct bw_room *room, struct bw_error *error) {
    for (size_t i = 0; i < room->surface_count; i++)
        if (!good_segment(room->surfaces[i].segment))
            return bw_error_set(error, BW_ARGUMENT, "surface %s: its ends must be two places", room->surfaces[i].name);
    for (size_t i = 0; i < room->opening_count; i++)
        if (!good_segment(room->openings[i].segment))
            return bw_error_set(error, BW_ARGUMENT, "opening %s: its ends must be two places", room->openings[i].name);
    for (size_t i = 0; i < room->area_count; i++) {
        const struct bw_treatment_area *area = &room->areas[i];
        if (area->outline.count < 1 || !finite_polygon(&area->outline) ||
            (area->outline.count > 2 && !bw_polygon_is_simple(&area->outline)))
            return bw_error_set(error, BW_ARGUMENT,
                                "treatment area %s: the outline must be a point or a polygon whose "
                                "sides do not cross",
                                area->name);
        if (!(area->aim_from_deg <= area->aim_to_deg && isfinite(area->aim_from_deg) && isfinite(area->aim_to_deg)))
            return bw_error_set(error, BW_ARGUMENT, "treatment area %s: aims from %g to %g degrees", area->name,
                                area->aim_from_deg, area->aim_to_deg);
    }
    for (size_t i = 0; i < room->person_count; i++)
        if (!finite_point(room->persons[i].at))
            return bw_error_set(error, BW_ARGUMENT, "person %s: the place must be finite", room->persons[i].name);
    return BW_OK;
}

enum bw_status bw_room_check(const struct bw_room *room, const struct bw_room_source *sources, size_t count,
                             struct bw_error *error) {
    if (room->area_count == 0)
        return bw_error_set(error, BW_ARGUMENT, "room %s: no treatment area", room->name);
    if (count == 0 || sources == NULL)
        return bw_error_set(error, BW_ARGUMENT, "room %s: no handpiece is used in it", room->name);
    for (size_t i = 0; i < count; i++)
        if (sources[i].direct == NULL || sources[i].direct->term_count == 0 || sources[i].diffuse == NULL ||
            sources[i].diffuse->term_count == 0)
            return bw_error_set(error, BW_ARGUMENT, "room %s: handpiece %zu was not prepared", room->name, i + 1);
    enum bw_status status = check_outline(room, error);
    return status == BW_OK ? check_parts(room, error) : status;
}
