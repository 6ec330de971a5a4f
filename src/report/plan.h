/* The plan of a room as SVG: what its files share. Private to the folder.
 * Units of the drawing: 640 across, so that its smallest text (13) prints at 7 points on A5. */
#ifndef BEAMWARD_REPORT_PLAN_H
#define BEAMWARD_REPORT_PLAN_H

#include "internal.h"

enum { PLAN_WIDTH = 640, PLAN_FONT = 13, PLAN_TITLE_FONT = 17, PLAN_LINE = 18 };

struct plan_box {
    double left, top, right, bottom;
};

struct plan {
    const struct bw_result *result;
    const struct bw_room_result *found;
    const struct bw_room *room;
    size_t index;              /* of the room in the result: makes ids unique */
    struct bw_text body, over; /* drawn first; drawn on top */
    struct bw_point low, high; /* of the room [m] */
    double scale;              /* drawing units a metre */
    struct plan_box field;     /* where the room lies, in drawing units */
    struct plan_box page;      /* where labels may lie */
    size_t box_count, box_capacity, line_count, line_capacity;
    struct plan_box *boxes;   /* taken by marks and labels */
    struct bw_segment *lines; /* walls and surfaces, better not crossed; in drawing units */
    double bottom;            /* of what has been drawn */
};

/* plan_geometry.c */
struct bw_point plan_at(const struct plan *plan, struct bw_point point);
void plan_frame(struct plan *plan);
void plan_walls(struct plan *plan);
void plan_surfaces(struct plan *plan);
void plan_areas(struct plan *plan);
void plan_openings(struct plan *plan);
void plan_place_labels(struct plan *plan); /* names of openings, surfaces and areas, when all marks are in place */
void plan_path(struct bw_text *out, const struct plan *plan, const struct bw_polygon *polygon);

/* plan_zone.c */
void plan_zone(struct plan *plan);
void plan_contours(struct plan *plan);
bool plan_has_contour(const struct plan *plan, size_t level);
const char *plan_contour_dash(size_t level); /* SVG dash array */
const char *plan_contour_name(size_t level); /* "limit", "OD 1"... */

/* plan_people.c */
void plan_people(struct plan *plan);
bool plan_is_protected(const struct bw_person_result *person);

/* plan_labels.c */
void plan_take(struct plan *plan, double x, double y, double half_width, double half_height);
void plan_take_line(struct plan *plan, struct bw_point from, struct bw_point to); /* drawing units */
double plan_text_width(const char *text);
/* A label near a mark of this radius, with a leader line where it had to move away. Returns: false if no place is free.
 */
bool plan_label(struct plan *plan, struct bw_point mark, double radius, const char *text);
/* A label on a line. Returns: false if the place is taken. */
bool plan_label_on(struct plan *plan, struct bw_point at, const char *text);
void plan_text(struct bw_text *out, double x, double y, const char *anchor, const char *text); /* escapes */
void plan_free_text(struct plan *plan, struct bw_text *text);            /* its failure becomes the plan's */
void plan_cut(char *out, size_t size, const char *text, size_t columns); /* at most so many, with an ellipsis */

/* plan_legend.c */
void plan_dimensions(struct plan *plan);
void plan_legend(struct plan *plan);
void plan_key(struct plan *plan);

#endif
