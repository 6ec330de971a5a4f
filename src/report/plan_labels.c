/* Labels that do not lie on one another: each takes the first free place around its mark. */
#include "plan.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { HALF_HEIGHT = 8, PADDING = 3, DIRECTIONS = 16, RINGS = 12 };

static void take_box(struct plan *plan, struct plan_box box) {
    if (plan->box_count == plan->box_capacity) {
        size_t capacity = plan->box_capacity ? 2 * plan->box_capacity : 64;
        struct plan_box *more = realloc(plan->boxes, capacity * sizeof *more);
        if (!more) {
            plan->body.failed = true;
            return;
        }
        plan->boxes = more;
        plan->box_capacity = capacity;
    }
    plan->boxes[plan->box_count++] = box;
}

void plan_take(struct plan *plan, double x, double y, double half_width, double half_height) {
    take_box(plan, (struct plan_box){x - half_width, y - half_height, x + half_width, y + half_height});
}

void plan_take_line(struct plan *plan, struct bw_point from, struct bw_point to) {
    if (plan->line_count == plan->line_capacity) {
        size_t capacity = plan->line_capacity ? 2 * plan->line_capacity : 64;
        struct bw_segment *more = realloc(plan->lines, capacity * sizeof *more);
        if (!more) {
            plan->body.failed = true;
            return;
        }
        plan->lines = more;
        plan->line_capacity = capacity;
    }
    plan->lines[plan->line_count++] = (struct bw_segment){from, to};
}

/* Sans-serif faces differ; this errs to the wide side. */
double plan_text_width(const char *text) {
    return (double)report_width(text) * PLAN_FONT * 0.58;
}

static bool overlaps(struct plan_box a, struct plan_box b) {
    return a.left < b.right && b.left < a.right && a.top < b.bottom && b.top < a.bottom;
}

static bool is_free(const struct plan *plan, struct plan_box box) {
    if (box.left < plan->page.left || box.right > plan->page.right || box.top < plan->page.top ||
        box.bottom > plan->page.bottom)
        return false;
    for (size_t i = 0; i < plan->box_count; i++)
        if (overlaps(box, plan->boxes[i]))
            return false;
    return true;
}

static int crossings(const struct plan *plan, struct plan_box box) {
    int count = 0;
    struct bw_point corner[4] = {
        {box.left, box.top}, {box.right, box.top}, {box.right, box.bottom}, {box.left, box.bottom}};
    for (size_t i = 0; i < plan->line_count; i++) {
        bool crosses = plan->lines[i].from.x_m > box.left && plan->lines[i].from.x_m < box.right &&
                       plan->lines[i].from.y_m > box.top && plan->lines[i].from.y_m < box.bottom;
        for (size_t j = 0; j < 4 && !crosses; j++)
            crosses = bw_segments_cross(plan->lines[i], (struct bw_segment){corner[j], corner[(j + 1) % 4]});
        count += crosses;
    }
    return count;
}

void plan_text(struct bw_text *out, double x, double y, const char *anchor, const char *text) {
    bw_text_add(out, "<text x=\"%.1f\" y=\"%.1f\" text-anchor=\"%s\">", x, y, anchor);
    report_xml(out, text);
    bw_text_add(out, "</text>\n");
}

void plan_free_text(struct plan *plan, struct bw_text *text) {
    plan->over.failed = plan->over.failed || text->failed;
    bw_text_free(text);
}

void plan_cut(char *out, size_t size, const char *text, size_t columns) {
    static const char ellipsis[] = "\xE2\x80\xA6";
    bool all = report_width(text) <= columns;
    size_t used = 0, length = 0;
    while (*text) {
        unsigned long code;
        const char *next = report_next(text, &code);
        used += (size_t)report_columns(code);
        if ((!all && used > columns - 1) || length + (size_t)(next - text) + sizeof ellipsis > size) {
            memcpy(out + length, ellipsis, sizeof ellipsis);
            return;
        }
        memcpy(out + length, text, (size_t)(next - text));
        length += (size_t)(next - text);
        text = next;
    }
    out[length] = '\0';
}

/* The text stands at the side of its box that is nearer to the mark. */
static void draw(struct plan *plan, struct plan_box box, double mark_x, const char *text) {
    const char *anchor = "middle";
    double x = (box.left + box.right) / 2, y = (box.top + box.bottom) / 2 + PLAN_FONT * 0.36;
    if (mark_x < box.left) {
        anchor = "start";
        x = box.left + PADDING;
    } else if (mark_x > box.right) {
        anchor = "end";
        x = box.right - PADDING;
    }
    bw_text_add(&plan->over, "<rect x=\"%.1f\" y=\"%.1f\" width=\"%.1f\" height=\"%.1f\" class=\"halo\"/>", box.left,
                box.top, box.right - box.left, box.bottom - box.top);
    plan_text(&plan->over, x, y, anchor, text);
}

static struct plan_box box_around(double x, double y, const char *text) {
    double half = plan_text_width(text) / 2 + PADDING;
    return (struct plan_box){x - half, y - HALF_HEIGHT, x + half, y + HALF_HEIGHT};
}

/* The box that touches a circle around the mark, in this direction. */
static struct plan_box box_towards(struct bw_point mark, double distance, double angle, const char *text) {
    double half = plan_text_width(text) / 2 + PADDING;
    double x = mark.x_m + cos(angle) * (distance + half), y = mark.y_m - sin(angle) * (distance + HALF_HEIGHT);
    return box_around(x, y, text);
}

static void leader(struct plan *plan, struct bw_point mark, double radius, struct plan_box box) {
    double x = fmin(fmax(mark.x_m, box.left), box.right), y = fmin(fmax(mark.y_m, box.top), box.bottom);
    double length = hypot(x - mark.x_m, y - mark.y_m);
    if (length < radius + 12)
        return;
    double dx = (x - mark.x_m) / length, dy = (y - mark.y_m) / length;
    bw_text_add(&plan->over, "<line x1=\"%.1f\" y1=\"%.1f\" x2=\"%.1f\" y2=\"%.1f\" class=\"leader\"/>",
                mark.x_m + dx * radius, mark.y_m + dy * radius, x, y);
}

bool plan_label(struct plan *plan, struct bw_point mark, double radius, const char *text) {
    struct plan_box best = {0};
    double best_cost = HUGE_VAL;
    for (int ring = 0; ring < RINGS; ring++) {
        for (int i = 0; i < DIRECTIONS; i++) {
            double distance = radius + 2 + 9 * ring;
            struct plan_box box = box_towards(mark, distance, 2 * bw_pi * i / DIRECTIONS, text);
            double cost = 9. * ring + 0.1 * i;
            if (cost >= best_cost || !is_free(plan, box))
                continue;
            cost += 25. * crossings(plan, box);
            if (cost < best_cost) {
                best_cost = cost;
                best = box;
            }
        }
    }
    if (!(best_cost < HUGE_VAL))
        return false;
    take_box(plan, best);
    leader(plan, mark, radius, best);
    draw(plan, best, mark.x_m, text);
    return true;
}

bool plan_label_on(struct plan *plan, struct bw_point at, const char *text) {
    struct plan_box box = box_around(at.x_m, at.y_m, text);
    if (!is_free(plan, box) || crossings(plan, box) > 0)
        return false;
    take_box(plan, box);
    draw(plan, box, at.x_m, text);
    return true;
}
