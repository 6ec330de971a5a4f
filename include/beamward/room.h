/* room - plan geometry, light paths, the hazard map, what leaves by an opening.
 * Uses: base, limits, beam, hazard.  Used by: casefile, assess, report, cli.
 * Plan in metres, x to the right, y up. Bearings in degrees, clockwise from +y (0 = up the plan, 90 = to the right).
 * Threads: a solved map may be read by many; nothing here keeps state. */
#ifndef BEAMWARD_ROOM_H
#define BEAMWARD_ROOM_H

#include <beamward/hazard.h>

#ifdef __cplusplus
extern "C" {
#endif

struct bw_surface {
    char name[BW_NAME_SIZE], title[BW_TITLE_SIZE];
    struct bw_segment segment;
    struct bw_material material;
};

enum bw_opening_kind { BW_DOOR, BW_WINDOW, BW_GAP };
enum bw_cover { BW_COVER_NONE, BW_COVER_OPAQUE, BW_COVER_MATERIAL };
struct bw_opening {
    char name[BW_NAME_SIZE], title[BW_TITLE_SIZE];
    struct bw_segment segment; /* lies on the outline */
    enum bw_opening_kind kind;
    enum bw_cover cover;
    struct bw_material material; /* of the cover, with BW_COVER_MATERIAL */
};

struct bw_treatment_area {
    char name[BW_NAME_SIZE], title[BW_TITLE_SIZE];
    struct bw_polygon outline; /* convex or not; at least one point */
    double aim_from_deg, aim_to_deg; /* bearings, from <= to <= from + 360 */
};

struct bw_person {
    char name[BW_NAME_SIZE], title[BW_TITLE_SIZE];
    struct bw_point at;
    bool has_eyewear;
    size_t eyewear; /* index into the case's goggles */
    bool has_aid;
    size_t aid; /* index into the case's optical aids */
};

struct bw_room {
    char name[BW_NAME_SIZE], title[BW_TITLE_SIZE];
    struct bw_polygon outline;
    struct bw_material walls;
    struct bw_material treated; /* what is treated: the first diffuse reflector */
    double grid_m;              /* 0.002 to 1 */
    int bounces;                /* 0 to 3 */
    size_t surface_count, opening_count, area_count, person_count;
    struct bw_surface *surfaces;
    struct bw_opening *openings;
    struct bw_treatment_area *areas;
    struct bw_person *persons;
};
void bw_room_clear(struct bw_room *room); /* frees the arrays */

/* A handpiece used in the room. */
struct bw_room_source {
    const struct bw_hazard *direct;  /* eye, direct and mirror-like paths */
    const struct bw_hazard *diffuse; /* eye, diffuse paths */
};

enum bw_path_kind { BW_PATH_NONE, BW_PATH_DIRECT, BW_PATH_MIRROR, BW_PATH_DIFFUSE };
const char *bw_path_name(enum bw_path_kind kind); /* "none", "direct", "mirror", "diffuse" */

/* The worst that reaches a place. */
struct bw_place {
    double ratio;
    enum bw_path_kind path;
    size_t source;              /* which handpiece */
    size_t area;                /* from which treatment area */
    double length_m;            /* of the path (diffuse: from the spot) */
    double share;               /* product of reflectances and transmittances on the way: of the next five */
    double start_share;         /* that the lit surface sends out again; direct: 1 */
    double mirror_share, gloss_share; /* that mirrors and that glass and gloss reflect */
    double pass_share;          /* of what is passed through */
    double cover_share;         /* of the cover of an opening; 1 at a place */
    double spot_path_m;         /* diffuse: of the beam to the lit spot, at least */
    double aside_rad;           /* direct: beside all aims by this angle, at least */
    char via[BW_NAME_SIZE];     /* the reflecting surface; empty if direct */
};

/* Exactly at a point: the worst path of all sources (place), and for one source the largest ratio of every
 * term over all paths, for optical densities. */
enum bw_status bw_room_at(const struct bw_room *room, const struct bw_room_source *sources, size_t count,
                          struct bw_point at, struct bw_place *place, struct bw_error *error);
enum bw_status bw_room_terms_at(const struct bw_room *room, const struct bw_room_source *source, struct bw_point at,
                                double term_ratios[BW_TERMS_MAX], struct bw_error *error);

/* The same, and where each of them comes from (places may be NULL). */
enum bw_status bw_room_term_places_at(const struct bw_room *room, const struct bw_room_source *source,
                                      struct bw_point at, double term_ratios[BW_TERMS_MAX],
                                      struct bw_place places[BW_TERMS_MAX], struct bw_error *error);
/* How the ratio of a place comes about. term: of source->direct, whose place it is; BW_TERMS_MAX: all together. */
enum bw_status bw_room_place_working(const struct bw_room_source *source, const struct bw_place *place, size_t term,
                                     struct bw_working *working, struct bw_error *error);

/* The map: cell (column, row) covers origin + [column, column + 1] x [row, row + 1] cells. A cell's value is the
 * worst anywhere in the cell. */
struct bw_room_map {
    size_t columns, rows;
    struct bw_point origin;
    double cell_m;
    double *ratio;        /* rows x columns, row 0 at the bottom; 0 outside the outline */
    unsigned char *path;  /* enum bw_path_kind */
    unsigned char *inside;/* 1 if any of the cell lies inside the outline */
};

struct bw_opening_result {
    double ratio_beyond; /* worst just outside it, after its cover */
    bool leaves;         /* ratio_beyond > 1 */
    char needs[BW_REASON_SIZE]; /* "nothing" or what it needs, in words */
    struct bw_place worst;
};

struct bw_contour { /* closed or ending at the outline */
    size_t count;
    struct bw_point *points;
    bool closed;
};
struct bw_contours {
    double level;
    size_t count;
    struct bw_contour *lines;
};

enum { BW_LEVELS = 4 };
struct bw_room_solution {
    struct bw_room_map map;
    double nhz_area_m2;   /* of the cells inside the outline with ratio above 1 */
    double farthest_m;    /* farthest point of those cells from the treatment areas */
    double ratio_max;
    struct bw_place *persons;               /* one a person */
    struct bw_opening_result *openings;     /* one an opening */
    struct bw_contours contours[BW_LEVELS]; /* at ratios 1, 10, 1000, 1e5 */
    double map_seconds;   /* never set here: the caller may time the solving */
};
/* Returns: BW_OK; BW_ARGUMENT (a map of more than 4e6 cells, no area, no source), BW_NO_MEMORY. */
enum bw_status bw_room_solve(const struct bw_room *room, const struct bw_room_source *sources, size_t count,
                             struct bw_room_solution *solution, struct bw_error *error);
void bw_room_solution_free(struct bw_room_solution *solution);

#ifdef __cplusplus
}
#endif
#endif
