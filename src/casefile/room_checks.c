/* Whether everything in a room is where it can be. */
#include "internal.h"

#include <math.h>
#include <stdlib.h>

static const double on_outline_m = 0.001 + 1e-9; /* plans are measured to a millimetre at best; and arithmetic */
static const double least_area_m2 = 0.01;
static const double cells_most = 4e6; /* what room takes */

/* ---- the outline ---------------------------------------------------------------------------- */

static struct bw_segment edge(const struct bw_polygon *polygon, size_t i) {
    return (struct bw_segment){polygon->points[i], polygon->points[(i + 1) % polygon->count]};
}

/* Says which edges cross. */
static void explain_crossing(struct reading *reading, const struct bw_ini_entry *entry,
                             const struct bw_polygon *polygon) {
    size_t n = polygon->count;
    for (size_t i = 0; i < n; i++)
        for (size_t j = i + 2; j < n; j++)
            if (!(i == 0 && j == n - 1) && bw_segments_cross(edge(polygon, i), edge(polygon, j))) {
                fault_key(reading, entry,
                          "edge %zu-%zu crosses edge %zu-%zu; the corners in order round the outline would be right",
                          i + 1, i + 2, j + 1, j + 1 < n ? j + 2 : (size_t)1);
                return;
            }
    fault_key(reading, entry, "folds back on itself; the corners in order round the outline would be right");
}

/* A polygon of three points and more that is no outline. */
static bool check_outline(struct reading *reading, const struct section *section, const struct bw_polygon *polygon) {
    const struct bw_ini_entry *entry = value_entry(section, "outline", NULL);
    size_t n = polygon->count;
    for (size_t i = 0; i < n; i++)
        if (bw_distance(polygon->points[i], polygon->points[(i + 1) % n]) < on_outline_m) {
            if (i + 1 == n)
                fault_key(reading, entry, "point %zu repeats point 1; remove it, the outline closes itself", n);
            else
                fault_key(reading, entry, "point %zu repeats point %zu; remove one of them", i + 2, i + 1);
            return false;
        }
    if (!bw_polygon_is_simple(polygon)) {
        explain_crossing(reading, entry, polygon);
        return false;
    }
    return true;
}

static bool check_room_outline(struct reading *reading, const struct section *section, const struct bw_room *room) {
    if (room->outline.count == 0 || !check_outline(reading, section, &room->outline))
        return false;
    double area_m2 = bw_polygon_area(&room->outline);
    if (area_m2 >= least_area_m2)
        return true;
    fault_key(reading, value_entry(section, "outline", NULL),
              "encloses %.3g m2; a room of at least %.3g m2 would be right (is the unit of the key the one you mean?)",
              area_m2, least_area_m2);
    return false;
}

/* ---- inside --------------------------------------------------------------------------------- */

static int compare_doubles(const void *a, const void *b) {
    const double *first = a, *second = b;
    return (*first > *second) - (*first < *second);
}

static struct bw_point along(struct bw_segment s, double t) {
    return (struct bw_point){s.from.x_m + t * (s.to.x_m - s.from.x_m), s.from.y_m + t * (s.to.y_m - s.from.y_m)};
}

/* Where the line of `s` meets the line of `wall`, as a part of s; out of 0 to 1 if they do not meet there. */
static double meeting(struct bw_segment s, struct bw_segment wall) {
    double dx = s.to.x_m - s.from.x_m, dy = s.to.y_m - s.from.y_m;
    double wx = wall.to.x_m - wall.from.x_m, wy = wall.to.y_m - wall.from.y_m;
    double determinant = dx * wy - dy * wx;
    if (!(fabs(determinant) > 0.))
        return -1.;
    return ((wall.from.x_m - s.from.x_m) * wy - (wall.from.y_m - s.from.y_m) * wx) / determinant;
}

/* Between two places where it meets the outline, a segment is inside or outside as a whole. */
static bool holds_segment(struct reading *reading, const struct bw_polygon *outline, struct bw_segment segment) {
    if (!bw_polygon_contains(outline, segment.from) || !bw_polygon_contains(outline, segment.to))
        return false;
    double *parts = reading_allocate(reading, outline->count + 2, sizeof *parts);
    if (!parts)
        return true; /* the case is refused all the same */
    size_t count = 0;
    parts[count++] = 0.;
    parts[count++] = 1.;
    for (size_t i = 0; i < outline->count; i++) {
        double t = meeting(segment, edge(outline, i));
        if (t > 0. && t < 1.)
            parts[count++] = t;
    }
    qsort(parts, count, sizeof *parts, compare_doubles);
    bool holds = true;
    for (size_t i = 0; i + 1 < count && holds; i++)
        holds = bw_polygon_contains(outline, along(segment, (parts[i] + parts[i + 1]) / 2.));
    free(parts);
    return holds;
}

static void outside(struct reading *reading, const struct bw_ini_entry *entry, const struct bw_room *room) {
    fault_key(reading, entry, "%s is outside the outline of room %s; a place inside would be right", entry->value,
              room->name);
}

static void check_surface(struct reading *reading, const struct section *section, const struct bw_room *room) {
    struct bw_segment segment = room->surfaces[section->index].segment;
    bool from = bw_polygon_contains(&room->outline, segment.from);
    bool to = bw_polygon_contains(&room->outline, segment.to);
    if (!from)
        outside(reading, value_entry(section, "from", NULL), room);
    if (!to)
        outside(reading, value_entry(section, "to", NULL), room);
    if (from && to && !holds_segment(reading, &room->outline, segment))
        fault_section(reading, section,
                      "leaves the outline of room %s between its ends; one surface a wall would be right", room->name);
}

static void check_person(struct reading *reading, const struct section *section, const struct bw_room *room) {
    if (!bw_polygon_contains(&room->outline, room->persons[section->index].at))
        outside(reading, value_entry(section, "at", NULL), room);
}

static void check_area(struct reading *reading, const struct section *section, const struct bw_room *room) {
    const struct bw_polygon *polygon = &room->areas[section->index].outline;
    const struct bw_ini_entry *entry = value_entry(section, "outline", NULL);
    if (polygon->count >= 3 && !check_outline(reading, section, polygon))
        return;
    for (size_t i = 0; i < polygon->count; i++)
        if (!bw_polygon_contains(&room->outline, polygon->points[i])) {
            fault_key(reading, entry, "point %zu is outside the outline of room %s; a place inside would be right",
                      i + 1, room->name);
            return;
        }
    for (size_t i = 0; i < polygon->count; i++)
        if (!holds_segment(reading, &room->outline, edge(polygon, i))) {
            fault_key(reading, entry, "leaves the outline of room %s after point %zu; an area inside would be right",
                      room->name, i + 1);
            return;
        }
}

/* ---- openings ------------------------------------------------------------------------------- */

static struct bw_point nearest_on(const struct bw_polygon *outline, struct bw_point p) {
    struct bw_point nearest = outline->points[0];
    for (size_t i = 0; i < outline->count; i++) {
        struct bw_segment wall = edge(outline, i);
        double dx = wall.to.x_m - wall.from.x_m, dy = wall.to.y_m - wall.from.y_m;
        double t = ((p.x_m - wall.from.x_m) * dx + (p.y_m - wall.from.y_m) * dy) / (dx * dx + dy * dy);
        struct bw_point candidate = along(wall, fmin(fmax(t, 0.), 1.));
        if (bw_distance(candidate, p) < bw_distance(nearest, p))
            nearest = candidate;
    }
    return nearest;
}

/* Moves an end that is as good as on the outline onto it. Returns: false, with a fault, if it is not. */
static bool put_on_outline(struct reading *reading, const struct section *section, const char *key,
                           const struct bw_polygon *outline, struct bw_point *point) {
    const struct unit_word *unit = NULL;
    const struct bw_ini_entry *entry = value_entry(section, key, &unit);
    struct bw_point nearest = nearest_on(outline, *point);
    double off_m = bw_distance(nearest, *point);
    if (off_m <= on_outline_m) {
        *point = nearest;
        return true;
    }
    fault_key(reading, entry, "%s is %.3g %s off the outline; its nearest place, %.6g %.6g, would be right",
              entry->value, off_m / unit->to_si, unit->shown, nearest.x_m / unit->to_si, nearest.y_m / unit->to_si);
    return false;
}

static void check_opening(struct reading *reading, struct section *section, const struct bw_room *room) {
    enum { PARTS = 64 };
    struct bw_segment *segment = &room->openings[section->index].segment;
    bool from = put_on_outline(reading, section, "from", &room->outline, &segment->from);
    bool to = put_on_outline(reading, section, "to", &room->outline, &segment->to);
    section->made = from && to;
    for (int i = 1; i < PARTS && section->made; i++) {
        struct bw_point p = along(*segment, (double)i / PARTS);
        if (bw_distance(p, nearest_on(&room->outline, p)) <= on_outline_m)
            continue;
        fault_section(reading, section,
                      "leaves the outline of room %s between its ends; one opening a wall would be right", room->name);
        section->made = false;
    }
}

/* How much of `b` lies on `a`; nothing if they are not in one line. */
static double shared_length_m(struct bw_segment a, struct bw_segment b) {
    double length_m = bw_distance(a.from, a.to);
    double ux = (a.to.x_m - a.from.x_m) / length_m, uy = (a.to.y_m - a.from.y_m) / length_m;
    double from_m = (b.from.x_m - a.from.x_m) * ux + (b.from.y_m - a.from.y_m) * uy;
    double to_m = (b.to.x_m - a.from.x_m) * ux + (b.to.y_m - a.from.y_m) * uy;
    double from_off_m = fabs((b.from.x_m - a.from.x_m) * uy - (b.from.y_m - a.from.y_m) * ux);
    double to_off_m = fabs((b.to.x_m - a.from.x_m) * uy - (b.to.y_m - a.from.y_m) * ux);
    if (!(from_off_m <= on_outline_m && to_off_m <= on_outline_m))
        return 0.;
    return fmin(fmax(from_m, to_m), length_m) - fmax(fmin(from_m, to_m), 0.);
}

static void check_overlaps(struct reading *reading, const struct bw_room *room) {
    size_t at = 0;
    for (struct section *later; (later = sections_next(reading, &at, SECTION_OPENING, room->name, NULL));) {
        size_t before = 0;
        for (struct section *earlier;
             later->made && (earlier = sections_next(reading, &before, SECTION_OPENING, room->name, NULL)) != later;) {
            double shared_m = earlier->made ? shared_length_m(room->openings[earlier->index].segment,
                                                              room->openings[later->index].segment)
                                            : 0.;
            if (shared_m > on_outline_m)
                fault_section(reading, later, "overlaps [%s] by %.3g m; openings side by side would be right",
                              earlier->head->section, shared_m);
        }
    }
}

/* ---- the map -------------------------------------------------------------------------------- */

static double cells(double width_m, double height_m, double grid_m) {
    return (ceil(width_m / grid_m) + 1.) * (ceil(height_m / grid_m) + 1.);
}

static void check_grid(struct reading *reading, const struct section *section, const struct bw_room *room) {
    struct bw_point low = room->outline.points[0], high = low;
    for (size_t i = 1; i < room->outline.count; i++) {
        low = (struct bw_point){fmin(low.x_m, room->outline.points[i].x_m), fmin(low.y_m, room->outline.points[i].y_m)};
        high =
            (struct bw_point){fmax(high.x_m, room->outline.points[i].x_m), fmax(high.y_m, room->outline.points[i].y_m)};
    }
    double width_m = high.x_m - low.x_m, height_m = high.y_m - low.y_m;
    if (!(room->grid_m > 0.) || cells(width_m, height_m, room->grid_m) <= cells_most)
        return;
    double enough_mm = ceil(sqrt(width_m * height_m / cells_most) * 1e3);
    while (cells(width_m, height_m, enough_mm * 1e-3) > cells_most)
        enough_mm++;
    fault_section(reading, section,
                  "a grid of %.6g mm makes %.3g million cells, more than %.3g million; grid_mm = %.0f "
                  "would be right",
                  room->grid_m * 1e3, cells(width_m, height_m, room->grid_m) * 1e-6, cells_most * 1e-6, enough_mm);
}

/* ---- all of it ------------------------------------------------------------------------------ */

void check_room(struct reading *reading, const struct section *of) {
    const struct bw_room *room = &reading->the_case->rooms[of->index];
    if (reading->no_memory || !check_room_outline(reading, of, room))
        return;
    check_grid(reading, of, room);
    for (size_t i = 0; i < reading->section_count; i++) {
        struct section *section = &reading->sections[i];
        if (!section->made || section->parent != of->index)
            continue;
        if (section->kind == SECTION_SURFACE)
            check_surface(reading, section, room);
        else if (section->kind == SECTION_OPENING)
            check_opening(reading, section, room);
        else if (section->kind == SECTION_AREA)
            check_area(reading, section, room);
        else if (section->kind == SECTION_PERSON)
            check_person(reading, section, room);
    }
    check_overlaps(reading, room);
}
