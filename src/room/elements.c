/* Everything that stops light or sends it on: walls between the openings, openings, surfaces. */
#include "internal.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>

static const double on_wall_m = 1e-3;    /* an opening drawn so close to a wall lies in it */
static const double window_index = 1.52; /* window glass, materials.ini */

static bool add(struct elements *elements, const struct element *element) {
    if (elements->count == elements->capacity) {
        size_t capacity = elements->capacity ? 2 * elements->capacity : 32;
        struct element *at = realloc(elements->at, capacity * sizeof *at);
        if (at == NULL)
            return false;
        elements->at = at;
        elements->capacity = capacity;
    }
    elements->at[elements->count++] = *element;
    return true;
}

static double share(double value) {
    return value >= 0. && value <= 1. ? value : 1.; /* where in doubt, 1 */
}

static void set_glass(struct element *element, double index, double reflectance, bool pane) {
    element->gleam = GLEAM_FRESNEL;
    element->pane = pane;
    element->reflectance = reflectance;
    element->index = index > 1. ? index : bw_room_index_of(reflectance);
}

static void set_material(struct element *element, const struct bw_material *material) {
    element->passes = share(material->transmittance);
    element->matt = share(material->matt_reflectance);
    switch (material->finish) {
    case BW_MATT:
        element->matt = fmax(share(material->reflectance), element->matt);
        break;
    case BW_MIRROR:
        element->gleam = GLEAM_CONSTANT;
        element->reflectance = share(material->reflectance);
        break;
    case BW_GLOSS:
        set_glass(element, material->refractive_index, share(material->reflectance), false);
        break;
    case BW_GLASS:
        set_glass(element, material->refractive_index, share(material->reflectance), true);
        break;
    }
    if (element->gleam == GLEAM_CONSTANT && !(element->reflectance > 0.))
        element->gleam = GLEAM_NONE;
}

static struct element blank(struct bw_segment segment, const char *name) {
    struct element element = {.segment = segment, .passes = 1., .behind = 1.};
    snprintf(element.name, sizeof element.name, "%s", name);
    return element;
}

/* ---- the outline ------------------------------------------------------------------------------------------------ */

static struct bw_segment edge(const struct bw_polygon *outline, size_t i) {
    return (struct bw_segment){outline->points[i], outline->points[(i + 1) % outline->count]};
}

/* +1 if the room lies left of its edges as listed. */
static int inner_side(const struct bw_polygon *outline) {
    double twice = 0.;
    for (size_t i = 0; i < outline->count; i++) {
        struct bw_segment s = edge(outline, i);
        twice += s.from.x_m * s.to.y_m - s.to.x_m * s.from.y_m;
    }
    return twice > 0. ? 1 : -1;
}

static double place_along(struct bw_segment s, struct bw_point p) {
    double dx = s.to.x_m - s.from.x_m, dy = s.to.y_m - s.from.y_m;
    return ((p.x_m - s.from.x_m) * dx + (p.y_m - s.from.y_m) * dy) / (dx * dx + dy * dy);
}

static bool lies_in(struct bw_segment opening, struct bw_segment wall) {
    return bw_point_segment_distance(opening.from, wall) <= on_wall_m &&
           bw_point_segment_distance(opening.to, wall) <= on_wall_m;
}

static struct bw_point along(struct bw_segment s, double t) {
    return (struct bw_point){s.from.x_m + t * (s.to.x_m - s.from.x_m), s.from.y_m + t * (s.to.y_m - s.from.y_m)};
}

/* The next opening in this edge that ends beyond `from`: where the wall goes on. */
static double next_opening(const struct bw_room *room, struct bw_segment wall, double from, double *to) {
    double begins = HUGE_VAL;
    *to = HUGE_VAL;
    for (size_t i = 0; i < room->opening_count; i++) {
        struct bw_segment s = room->openings[i].segment;
        if (!lies_in(s, wall))
            continue;
        double a = place_along(wall, s.from), b = place_along(wall, s.to), low = fmin(a, b), high = fmax(a, b);
        if (high > from && low < begins) {
            begins = low;
            *to = high;
        }
    }
    return begins;
}

/* An edge without its openings. */
static bool add_wall(const struct bw_room *room, size_t i, int side, struct elements *elements) {
    struct bw_segment wall = edge(&room->outline, i);
    double from = 0.;
    while (from < 1.) {
        double goes_on, begins = next_opening(room, wall, from, &goes_on);
        if (begins > from) {
            struct bw_segment s = {along(wall, from), begins < 1. ? along(wall, begins) : wall.to};
            struct element element = blank(s, "wall");
            set_material(&element, &room->walls);
            element.side = side;
            element.on_outline = true;
            if (!add(elements, &element))
                return false;
        }
        from = goes_on;
    }
    return true;
}

/* Which side of an opening, drawn in either direction, the room is on. */
static int opening_side(const struct bw_room *room, struct bw_segment opening, int side) {
    for (size_t i = 0; i < room->outline.count; i++) {
        struct bw_segment wall = edge(&room->outline, i);
        if (lies_in(opening, wall))
            return place_along(wall, opening.to) > place_along(wall, opening.from) ? side : -side;
    }
    return 0;
}

/* ---- openings and surfaces -------------------------------------------------------------------------------------- */

/* A door may be open or shut; what is not known to be matt or dark reflects all. */
static bool add_opening(const struct bw_room *room, const struct bw_opening *opening, int side,
                        struct elements *elements) {
    struct element element = blank(opening->segment, opening->name);
    element.side = opening_side(room, opening->segment, side);
    element.on_outline = true;
    if (opening->cover == BW_COVER_MATERIAL)
        set_material(&element, &opening->material);
    else if (opening->cover == BW_COVER_OPAQUE) {
        element.passes = 0.;
        element.matt = 1.;
    } else if (opening->kind == BW_DOOR)
        element.matt = 1.;
    double passes = element.passes;
    if (!add(elements, &element))
        return false;
    if (opening->kind != BW_WINDOW || !(passes > 0.))
        return true;
    struct element glass = blank(opening->segment, opening->name); /* seen through its cover, there and back */
    glass.side = element.side;
    glass.on_outline = true;
    glass.behind = passes * passes;
    set_glass(&glass, window_index, 0., true);
    return add(elements, &glass);
}

enum bw_status bw_room_elements(const struct bw_room *room, struct elements *elements) {
    int side = inner_side(&room->outline);
    for (size_t i = 0; i < room->outline.count; i++)
        if (!add_wall(room, i, side, elements))
            return BW_NO_MEMORY;
    for (size_t i = 0; i < room->opening_count; i++)
        if (!add_opening(room, &room->openings[i], side, elements))
            return BW_NO_MEMORY;
    for (size_t i = 0; i < room->surface_count; i++) {
        struct element element = blank(room->surfaces[i].segment, room->surfaces[i].name);
        set_material(&element, &room->surfaces[i].material);
        if (!add(elements, &element))
            return BW_NO_MEMORY;
    }
    return BW_OK;
}
