/* Walls, surfaces, treatment areas, openings. */
#include "plan.h"

#include <math.h>
#include <stdio.h>

struct bw_point plan_at(const struct plan *plan, struct bw_point point) {
    return (struct bw_point){plan->field.left + (point.x_m - plan->low.x_m) * plan->scale,
                             plan->field.top + (plan->high.y_m - point.y_m) * plan->scale};
}

/* Where the room lies on the drawing: as large as fits, with a margin for labels outside the walls. */
void plan_frame(struct plan *plan) {
    static const double margin = 84, title = 64, widest = PLAN_WIDTH - 2 * 84, highest = 470;
    const struct bw_polygon *outline = &plan->room->outline;
    plan->low = plan->high = outline->points[0];
    for (size_t i = 1; i < outline->count; i++) {
        plan->low.x_m = fmin(plan->low.x_m, outline->points[i].x_m);
        plan->low.y_m = fmin(plan->low.y_m, outline->points[i].y_m);
        plan->high.x_m = fmax(plan->high.x_m, outline->points[i].x_m);
        plan->high.y_m = fmax(plan->high.y_m, outline->points[i].y_m);
    }
    double width_m = plan->high.x_m - plan->low.x_m, height_m = plan->high.y_m - plan->low.y_m;
    plan->scale = fmin(widest / width_m, highest / height_m);
    double left = (PLAN_WIDTH - width_m * plan->scale) / 2, top = title + 48;
    plan->field = (struct plan_box){left, top, left + width_m * plan->scale, top + height_m * plan->scale};
    plan->page = (struct plan_box){fmin(left - margin, 6) + 2, title, PLAN_WIDTH - 8, plan->field.bottom + 44};
    plan->page.left = 8;
    plan->bottom = plan->page.bottom;
}

void plan_path(struct bw_text *out, const struct plan *plan, const struct bw_polygon *polygon) {
    for (size_t i = 0; i < polygon->count; i++) {
        struct bw_point at = plan_at(plan, polygon->points[i]);
        bw_text_add(out, "%s%.1f %.1f", i == 0 ? "M" : "L", at.x_m, at.y_m);
    }
    bw_text_add(out, "Z");
}

void plan_walls(struct plan *plan) {
    const struct bw_polygon *outline = &plan->room->outline;
    bw_text_add(&plan->body, "<path class=\"wall\" d=\"");
    plan_path(&plan->body, plan, outline);
    bw_text_add(&plan->body, "\"/>\n");
    for (size_t i = 0; i < outline->count; i++)
        plan_take_line(plan, plan_at(plan, outline->points[i]),
                       plan_at(plan, outline->points[(i + 1) % outline->count]));
}

static void line(struct bw_text *out, const char *class, struct bw_point from, struct bw_point to) {
    bw_text_add(out, "<line class=\"%s\" x1=\"%.1f\" y1=\"%.1f\" x2=\"%.1f\" y2=\"%.1f\"/>\n", class, from.x_m,
                from.y_m, to.x_m, to.y_m);
}

static struct bw_point middle(struct bw_point a, struct bw_point b) {
    return (struct bw_point){(a.x_m + b.x_m) / 2, (a.y_m + b.y_m) / 2};
}

/* Unit vector across a line, in the drawing. */
static struct bw_point across(struct bw_point from, struct bw_point to) {
    double length = hypot(to.x_m - from.x_m, to.y_m - from.y_m);
    if (!(length > 0.))
        return (struct bw_point){0., -1.};
    return (struct bw_point){(to.y_m - from.y_m) / length, -(to.x_m - from.x_m) / length};
}

static struct bw_point moved(struct bw_point p, struct bw_point by, double distance) {
    return (struct bw_point){p.x_m + by.x_m * distance, p.y_m + by.y_m * distance};
}

void plan_surfaces(struct plan *plan) {
    static const char *const classes[] = {
        [BW_MATT] = "matt", [BW_MIRROR] = "mirror", [BW_GLOSS] = "gloss", [BW_GLASS] = "glass"};
    for (size_t i = 0; i < plan->room->surface_count; i++) {
        const struct bw_surface *surface = &plan->room->surfaces[i];
        struct bw_point from = plan_at(plan, surface->segment.from), to = plan_at(plan, surface->segment.to);
        line(&plan->body, "surface", from, to);
        line(&plan->body, classes[surface->material.finish], from, to);
        plan_take_line(plan, from, to);
    }
}

static void surface_labels(struct plan *plan) {
    for (size_t i = 0; i < plan->room->surface_count; i++) {
        const struct bw_surface *surface = &plan->room->surfaces[i];
        struct bw_point from = plan_at(plan, surface->segment.from), to = plan_at(plan, surface->segment.to);
        char text[120];
        plan_cut(text, sizeof text, surface->name, 16);
        plan_label(plan, middle(from, to), 5, text);
    }
}

/* ---- treatment areas and the bearings that the handpiece may be turned to ----------------------- */

static struct bw_point centre(const struct bw_polygon *polygon) {
    struct bw_point sum = {0};
    for (size_t i = 0; i < polygon->count; i++) {
        sum.x_m += polygon->points[i].x_m / (double)polygon->count;
        sum.y_m += polygon->points[i].y_m / (double)polygon->count;
    }
    return sum;
}

static struct bw_point bearing_tip(struct bw_point from, double bearing_deg, double length) {
    double angle = bearing_deg * bw_pi / 180;
    return (struct bw_point){from.x_m + sin(angle) * length, from.y_m - cos(angle) * length};
}

enum { AIM_RADIUS = 26 };

static void arrow(struct plan *plan, struct bw_point from, double bearing_deg) {
    struct bw_point tip = bearing_tip(from, bearing_deg, AIM_RADIUS);
    struct bw_point a = bearing_tip(tip, bearing_deg + 155, 8), b = bearing_tip(tip, bearing_deg - 155, 8);
    line(&plan->body, "aim", from, tip);
    bw_text_add(&plan->body, "<path class=\"aim-tip\" d=\"M%.1f %.1fL%.1f %.1fL%.1f %.1fZ\"/>\n", tip.x_m, tip.y_m,
                a.x_m, a.y_m, b.x_m, b.y_m);
}

/* The arc from the first bearing clockwise to the last, and arrows along it. */
static void aim(struct plan *plan, struct bw_point from, const struct bw_treatment_area *area) {
    double first = area->aim_from_deg, span = area->aim_to_deg - area->aim_from_deg;
    int arrows = span >= 359.9 ? 4 : span > 0.1 ? 2 : 1;
    for (int i = 0; i < arrows; i++)
        arrow(plan, from, first + (arrows == 2 ? i * span : i * 90.));
    if (arrows == 2) {
        struct bw_point start = bearing_tip(from, first, AIM_RADIUS * 0.65);
        struct bw_point end = bearing_tip(from, first + span, AIM_RADIUS * 0.65);
        bw_text_add(&plan->body, "<path class=\"aim\" d=\"M%.1f %.1fA%.1f %.1f 0 %d 1 %.1f %.1f\"/>\n", start.x_m,
                    start.y_m, AIM_RADIUS * 0.65, AIM_RADIUS * 0.65, span > 180, end.x_m, end.y_m);
    } else if (arrows == 4) {
        bw_text_add(&plan->body, "<circle class=\"aim\" cx=\"%.1f\" cy=\"%.1f\" r=\"%.1f\"/>\n", from.x_m, from.y_m,
                    AIM_RADIUS * 0.65);
    }
    plan_take(plan, from.x_m, from.y_m, AIM_RADIUS * 0.8, AIM_RADIUS * 0.8);
}

void plan_areas(struct plan *plan) {
    for (size_t i = 0; i < plan->room->area_count; i++) {
        const struct bw_treatment_area *area = &plan->room->areas[i];
        bw_text_add(&plan->body, "<path class=\"area\" d=\"");
        plan_path(&plan->body, plan, &area->outline);
        bw_text_add(&plan->body, "\"/>\n");
        aim(plan, plan_at(plan, centre(&area->outline)), area);
    }
}

static void area_labels(struct plan *plan) {
    for (size_t i = 0; i < plan->room->area_count; i++) {
        char text[120];
        plan_cut(text, sizeof text, plan->room->areas[i].name, 16);
        plan_label(plan, plan_at(plan, centre(&plan->room->areas[i].outline)), AIM_RADIUS * 0.8, text);
    }
}

/* ---- openings ----------------------------------------------------------------------------------- */

/* Unit vector out of the room, in the drawing. */
static struct bw_point outward(const struct plan *plan, const struct bw_opening *opening) {
    struct bw_point from = plan_at(plan, opening->segment.from), to = plan_at(plan, opening->segment.to);
    struct bw_point normal = across(from, to), at = middle(opening->segment.from, opening->segment.to);
    double step_m = 1e-3 * (plan->high.x_m - plan->low.x_m + plan->high.y_m - plan->low.y_m);
    struct bw_point probe = {at.x_m + normal.x_m * step_m, at.y_m - normal.y_m * step_m};
    if (bw_polygon_contains(&plan->room->outline, probe))
        return (struct bw_point){-normal.x_m, -normal.y_m};
    return normal;
}

static void frame(struct plan *plan, const struct bw_opening *opening, struct bw_point out) {
    struct bw_point from = plan_at(plan, opening->segment.from), to = plan_at(plan, opening->segment.to);
    line(&plan->body, "hole", from, to);
    for (int side = -1; side <= 1; side += 2) {
        if (opening->kind == BW_GAP)
            break;
        line(&plan->body, opening->kind == BW_WINDOW ? "pane" : "leaf", moved(from, out, 2.5 * side),
             moved(to, out, 2.5 * side));
    }
    line(&plan->body, "jamb", moved(from, out, -5), moved(from, out, 5));
    line(&plan->body, "jamb", moved(to, out, -5), moved(to, out, 5));
    if (opening->cover != BW_COVER_NONE)
        line(&plan->body, opening->cover == BW_COVER_OPAQUE ? "cover" : "cover thin", moved(from, out, -7),
             moved(to, out, -7));
}

/* What gets out: an arrow through the opening. */
static void escape_arrow(struct plan *plan, struct bw_point at, struct bw_point out) {
    struct bw_point start = moved(at, out, -12), end = moved(at, out, 16), along = {-out.y_m, out.x_m};
    struct bw_point a = moved(moved(end, out, -9), along, 5), b = moved(moved(end, out, -9), along, -5);
    line(&plan->body, "escape", start, moved(end, out, -6));
    bw_text_add(&plan->body, "<path class=\"aim-tip\" d=\"M%.1f %.1fL%.1f %.1fL%.1f %.1fZ\"/>\n", end.x_m, end.y_m,
                a.x_m, a.y_m, b.x_m, b.y_m);
    plan_take(plan, at.x_m + out.x_m * 4, at.y_m + out.y_m * 4, 5 + 10 * fabs(out.x_m), 5 + 10 * fabs(out.y_m));
}

static void badge(struct plan *plan, struct bw_point at, size_t number, bool leaves) {
    char letter[8];
    snprintf(letter, sizeof letter, "%c%s", (char)('A' + number % 26), number >= 26 ? "'" : "");
    bw_text_add(&plan->body, "<rect class=\"%s\" x=\"%.1f\" y=\"%.1f\" width=\"18\" height=\"18\"/>",
                leaves ? "badge bad" : "badge", at.x_m - 9, at.y_m - 9);
    bw_text_add(&plan->body, "<text class=\"%s\" x=\"%.1f\" y=\"%.1f\" text-anchor=\"middle\">%s</text>\n",
                leaves ? "on-bad" : "on-badge", at.x_m, at.y_m + 4.7, letter);
    plan_take(plan, at.x_m, at.y_m, 10, 10);
}

void plan_openings(struct plan *plan) {
    for (size_t i = 0; i < plan->room->opening_count; i++) {
        const struct bw_opening *opening = &plan->room->openings[i];
        bool leaves = plan->found->solution.openings[i].leaves;
        struct bw_point out = outward(plan, opening);
        struct bw_point at = plan_at(plan, middle(opening->segment.from, opening->segment.to));
        frame(plan, opening, out);
        if (leaves)
            escape_arrow(plan, at, out);
        badge(plan, moved(at, out, leaves ? 29 : 19), i, leaves);
    }
}

/* Names of openings, surfaces and areas, when all marks are in place. */
void plan_place_labels(struct plan *plan) {
    area_labels(plan);
    surface_labels(plan);
    for (size_t i = 0; i < plan->room->opening_count; i++) {
        const struct bw_opening *opening = &plan->room->openings[i];
        struct bw_point at = plan_at(plan, middle(opening->segment.from, opening->segment.to));
        char text[120];
        plan_cut(text, sizeof text, opening->name, 16);
        plan_label(plan, moved(at, outward(plan, opening), plan->found->solution.openings[i].leaves ? 29 : 19), 10,
                   text);
    }
}
