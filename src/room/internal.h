/* Shared inside src/room only.
 *
 * How a bound is found. Light comes from convex pieces (of a treatment area, or of a lit surface) and falls on a convex
 * target (a cell, a part of an opening, a point). A mirror-like path is unfolded: piece, first legs and mirrors are
 * reflected so that the path becomes one straight link from the piece to the target. Then, for all links at once:
 *   length  >= distance between piece and target;
 *   share   <= product of what each barrier passes that EVERY link crosses;
 *   nothing    if every link misses a mirror that it would have to cross.
 * Where some links cross a barrier and some do not, the piece and the target are halved until that no longer matters.
 * So every value is an upper bound over all positions, aims and places. */
#ifndef BEAMWARD_ROOM_INTERNAL_H
#define BEAMWARD_ROOM_INTERNAL_H

#include <beamward/room.h>

#include <stdint.h>

/* ---- quads.c: convex quadrilaterals, corners in order; corners may coincide (a point, a segment) ---------------- */

struct quad {
    struct bw_point at[4];
};
struct quad bw_room_point_quad(struct bw_point p);
struct quad bw_room_segment_quad(struct bw_segment s);
struct bw_point bw_room_quad_middle(const struct quad *quad);
double bw_room_quad_size_m(const struct quad *quad); /* longest diagonal or side */
void bw_room_quad_halves(const struct quad *quad, struct quad halves[2]);
double bw_room_quad_distance(const struct quad *a, const struct quad *b);
double bw_room_box_distance(const struct quad *a, struct bw_point low, struct bw_point high);

/* Directions of all links from a to b: middle +- half [rad, anticlockwise from +x]. */
struct fan {
    bool any; /* a and b touch or surround each other: any direction */
    double middle_rad, half_rad;
};
struct fan bw_room_fan(const struct quad *a, const struct quad *b);
double bw_room_turn(double angle_rad); /* to -pi .. pi */

/* ---- crossing.c: do the links between two quads cross a segment ------------------------------------------------- */

enum crossing { CROSS_NONE, CROSS_SOME, CROSS_ALL };
struct bundle {
    struct quad a, b;
    int a_corners, b_corners;
    double a_radius_m; /* links may begin this far beside a: half the exit of the handpiece */
    struct bw_point low, high;
};
struct bundle bw_room_bundle(const struct quad *a, const struct quad *b, double a_radius_m);
enum crossing bw_room_crossing(const struct bundle *bundle, struct bw_segment s);
enum crossing bw_room_elbow(const struct bundle *bundle, struct bw_segment chord, struct bw_point elbow);

/* ---- fresnel.c -------------------------------------------------------------------------------------------------- */

double bw_room_fresnel_s(double index, double incidence_rad); /* one surface, s polarisation */
double bw_room_pane(double surface);                          /* both surfaces, without interference */
double bw_room_index_of(double normal_reflectance);           /* the index that reflects so much */

/* ---- elements.c: everything in the room that stops or sends on light ------------------------------------------- */

enum gleam { GLEAM_NONE, GLEAM_CONSTANT, GLEAM_FRESNEL };
struct element {
    struct bw_segment segment;
    char name[BW_NAME_SIZE];
    double passes;      /* share that goes straight through */
    enum gleam gleam;   /* mirror-like part */
    double reflectance; /* of it: whole, or at least */
    double index;
    bool pane;
    double behind; /* share that reaches the gleam and comes back (glass behind a cover) */
    double matt;   /* diffuse share */
    int side;      /* that can be lit: +1 left of from -> to, -1 right, 0 both */
    bool on_outline;
};
struct elements {
    size_t count, capacity;
    struct element *at;
};
enum bw_status bw_room_elements(const struct bw_room *room, struct elements *elements);

/* ---- pieces.c --------------------------------------------------------------------------------------------------- */

struct quads {
    size_t count, capacity;
    struct quad *at;
};
bool bw_room_add_quad(struct quads *quads, struct quad quad); /* false: no memory */
/* Cuts any simple polygon into convex quads that cover it exactly. */
bool bw_room_cut_polygon(const struct bw_polygon *polygon, struct quads *quads);

/* ---- images.c: the room unfolded along a sequence of mirrors ---------------------------------------------------- */

enum { BOUNCES_MAX = 3 };
enum barrier_kind { BARRIER_STOPS, BARRIER_MIRROR, BARRIER_FACING, BARRIER_CHORD };
struct barrier {
    enum barrier_kind kind;
    struct bw_segment segment;
    double passes;         /* STOPS, CHORD */
    struct bw_point elbow; /* CHORD */
    int side;              /* FACING: the target lies on this side */
    int leg;
};
struct glint { /* a mirror-like reflection that depends on the angle */
    double normal_rad, index, least, behind;
    bool pane;
};
struct aims {
    bool free;
    double middle_rad, half_rad; /* anticlockwise from +x */
};
struct emitter { /* where light starts */
    struct quads pieces;
    struct aims aims;
    bool faces; /* only to one side of a line (a lit surface) */
    struct bw_segment facing;
    int side;
    size_t area;
    const char *name;
};
struct image {
    const struct emitter *emitter;
    int depth;
    size_t mirrors[BOUNCES_MAX];
    int sides[BOUNCES_MAX];
    double share; /* of the mirrors whose reflectance does not depend on the angle */
    size_t glint_count;
    struct glint glints[BOUNCES_MAX];
    struct aims aims;
    struct quads pieces;
    size_t count, capacity;
    struct barrier *barriers;
};
struct scene;
typedef enum bw_status image_visit(const struct image *image, void *context);
/* Calls visit for every image of the emitter with from_depth to to_depth reflections that can exist at all. */
enum bw_status bw_room_images(const struct scene *scene, const struct emitter *emitter, int from_depth, int to_depth,
                              image_visit *visit, void *context);
void bw_room_via(const struct scene *scene, const struct image *image, char via[BW_NAME_SIZE]);

/* ---- curves.c: ratio against length, tabulated so that it is never too low -------------------------------------- */

struct curve {
    int shift; /* mantissa bits that a bin ignores */
    uint64_t first;
    size_t bins;   /* bound[0]: nearer than all bins; bound[i + 1]: bin i, and beyond the last */
    double *bound; /* never rises */
};
size_t bw_room_curve_bin(const struct curve *curve, double length_m);
double bw_room_curve_at(const struct curve *curve, double length_m);
/* The lower edges themselves as bounds: bound[0] = 0, bound[i + 1] that of bin i, one more for the end of the last. */
enum bw_status bw_room_curve_edges(int bits, double far_m, struct curve *curve);
enum bw_status bw_room_direct_curve(const struct bw_hazard *hazard, double far_m, struct curve *curve);
struct spot_step {
    double distance_m, ratio;
};
struct spot_curve { /* a lit spot, seen from a distance */
    const struct bw_hazard *hazard;
    size_t source, emission; /* BW_EMISSIONS_MAX: all together */
    double path_m;           /* of the beam to it, at least */
    struct bw_spot spot;
    struct curve curve; /* filled when asked */
    size_t step_count;
    struct spot_step steps[BW_SUBTENSE_STEPS * BW_EMISSIONS_MAX];
};
enum bw_status bw_room_diffuse_curve(struct spot_curve *spot, double far_m, struct bw_error *error);
double bw_room_diffuse_at(struct spot_curve *spot, double distance_m); /* bound of the bin */
double bw_room_diffuse_exactly(const struct spot_curve *spot, double distance_m);
/* The spot and the distance that this ratio comes from: as they are, or where a train correction sets in. */
void bw_room_diffuse_deciding(const struct spot_curve *spot, double distance_m, struct bw_spot *deciding,
                              double *seen_m);

/* ---- beside.c: what falls beside the allowed aims --------------------------------------------------------------- */

struct beside {
    struct curve lengths; /* bound = lower edges [m] */
    double *bound;        /* [length][angle], falls along both */
};
enum bw_status bw_room_beside(const struct bw_hazard *hazard, double far_m, struct beside *beside);
double bw_room_beside_at(const struct beside *beside, double length_m, double angle_rad);
double bw_room_beside_exactly(const struct bw_hazard *hazard, double length_m, double angle_rad);
/* Largest share of the power of any emission that falls beyond a line at this angle beside the axis. */
double bw_room_beside_power(const struct bw_output *output, double length_m, double angle_rad);
double bw_room_exit_radius_m(const struct bw_output *output);
void bw_room_beside_free(struct beside *beside);

/* ---- bound.c: the worst of all links to one target -------------------------------------------------------------- */

enum measure { MEASURE_RATIO, MEASURE_NEAREST, MEASURE_SHARE };
struct light {
    enum measure measure;
    enum bw_path_kind kind; /* BW_PATH_DIRECT for mirror-like ones too */
    size_t source, area;
    double share;
    double exit_radius_m;
    const struct bw_output *output;
    const struct curve *curve;      /* NULL: hazard itself */
    const struct bw_hazard *hazard; /* exact value */
    const struct beside *beside;    /* with limited aims */
    bool exact;                     /* points: the value itself, not its bound */
    struct spot_curve *spot;        /* DIFFUSE: instead of curve and hazard */
};
struct target {
    struct quad quad;
    bool is_box;
    struct bw_point low, high;
    double size_m;
    int lit_side; /* light must come from this side of the target's own segment; 0 = any */
};
struct target bw_room_box_target(struct bw_point low, struct bw_point high);
struct target bw_room_segment_target(struct bw_segment s, int lit_side);

struct part { /* of an emitter, against one target */
    struct quad piece;
    double size_m;
    double share, chord_share;
    bool clear;          /* nothing is left to decide */
    bool aims_met;       /* every link lies within the aims */
    size_t first, count; /* barriers still to decide: indices in the workspace */
    double length_m, bound, total_share, aside_rad;
};
struct workspace {
    size_t part_count, part_capacity, index_count, index_capacity;
    struct part *parts;
    uint32_t *indices;
};
bool bw_room_workspace_init(struct workspace *workspace);
void bw_room_workspace_free(struct workspace *workspace);
/* Puts the pieces of an image on the workspace, all barriers undecided. Returns: index of the first part. */
size_t bw_room_push_roots(struct workspace *workspace, const struct image *image);
/* One part against a target: false if no light comes. */
bool bw_room_refine(struct workspace *workspace, const struct image *image, const struct light *light,
                    const struct target *target, const struct part *from, struct part *to);
double bw_room_bound_at(const struct light *light, double length_m); /* on the axis, share 1 */
double bw_room_value(const struct light *light, const struct part *part);

struct precision {
    double relative, least_m; /* a piece smaller than relative x distance or least_m is not halved */
    size_t steps;             /* at most so many halvings */
};
struct finding {
    double ratio, length_m, share;
    double pass_share, aside_rad; /* of it: what lets light through; the angle beside the aims */
};
/* The worst of the parts [first, first + count) at the target, if more than found->ratio. */
bool bw_room_worst(struct workspace *workspace, const struct image *image, const struct light *light,
                   const struct target *target, size_t first, size_t count, const struct precision *precision,
                   struct finding *found);

/* ---- scene.c: the room, prepared -------------------------------------------------------------------------------- */

struct patch { /* part of a matt surface */
    struct bw_segment segment;
    size_t element;
    int side; /* that is lit and seen; 0 both */
};
struct lit {       /* one patch by one source */
    double share;  /* of its light that the patch sends out again; 0 = in the dark */
    double path_m; /* shortest way of the beam to it */
    size_t area;   /* where that begins */
};
struct scene {
    const struct bw_room *room;
    const struct bw_room_source *sources;
    size_t source_count;
    double far_m;           /* no path is longer */
    bool outline_is_convex; /* then walls stop nothing on its way inside the room */
    double exit_max_m;      /* largest exit radius */
    struct elements elements;
    struct emitter *areas; /* one a treatment area */
    struct curve *direct;  /* one a source; NULL unless a map is wanted */
    struct beside *beside; /* one a source; NULL unless some aims are limited */
    size_t patch_count, patch_capacity;
    struct patch *patches;
    struct lit *lit; /* [patch][source] */
    size_t spot_count, spot_capacity;
    struct spot_curve **spots;
    struct workspace workspace;
    struct bw_error *error;
};
/* bw_room_scene_free also after a failure. */
enum bw_status bw_room_scene_init(struct scene *scene, const struct bw_room *room, const struct bw_room_source *sources,
                                  size_t count, bool for_map, struct bw_error *error);
void bw_room_scene_free(struct scene *scene);
/* The diffuse curve of a source for a beam path of at least path_m; made when first asked for. */
enum bw_status bw_room_spot_curve(struct scene *scene, size_t source, size_t emission, double path_m,
                                  struct spot_curve **curve);

/* patches.c */
enum bw_status bw_room_patches(struct scene *scene);

/* ---- paths.c: every image of every emitter, one light after the other ------------------------------------------ */

struct receiver {
    /* Could light from this piece raise anything? Asked before the images of a lit surface are made. */
    bool (*wants)(const struct scene *scene, const struct quad *piece, double share, struct spot_curve *spot,
                  void *context);
    enum bw_status (*take)(struct scene *scene, const struct image *image, const struct light *light, void *context);
    void *context;
};
struct light bw_room_direct_light(const struct scene *scene, size_t source, size_t area);
struct light bw_room_diffuse_light(struct spot_curve *spot, size_t area, double share);
enum bw_status bw_room_lights(struct scene *scene, const struct receiver *receiver);

/* ---- place.c: points and parts of openings --------------------------------------------------------------------- */

struct hunt { /* the worst at some targets together */
    size_t count;
    struct target *targets;
    struct precision precision;
    struct bw_place place;
};
bool bw_room_hunt_wants(const struct hunt *hunt, const struct quad *piece, double share, struct spot_curve *spot);
void bw_room_hunt_take(struct scene *scene, const struct image *image, const struct light *light, struct hunt *hunt);
struct precision bw_room_point_precision(void);

/* ---- check.c ---------------------------------------------------------------------------------------------------- */

enum bw_status bw_room_check(const struct bw_room *room, const struct bw_room_source *sources, size_t count,
                             struct bw_error *error);

/* ---- clip.c: a polygon within a box ----------------------------------------------------------------------------- */

struct clipper {
    const struct bw_polygon *polygon;
    struct bw_point *points, *scratch;
};
bool bw_room_clipper_init(struct clipper *clipper, const struct bw_polygon *polygon);
void bw_room_clipper_free(struct clipper *clipper);
/* Leaves the clipped chain in clipper->points. Returns: its length. */
size_t bw_room_clip(struct clipper *clipper, struct bw_point low, struct bw_point high);
double bw_room_chain_area_m2(const struct bw_point *points, size_t count);

/* ---- map.c, sweep.c, extent.c, contours.c, openings.c ----------------------------------------------------------- */

enum bw_status bw_room_map_init(const struct bw_room *room, struct bw_room_map *map, struct bw_error *error);
struct bw_point bw_room_cell_corner(const struct bw_room_map *map, size_t column, size_t row);

enum { PYRAMID_LEVELS = 14 };
struct pyramid { /* least ratio of the cells inside, for blocks of 2^level x 2^level cells; infinite where none is */
    int levels;
    size_t columns[PYRAMID_LEVELS], rows[PYRAMID_LEVELS];
    double *least[PYRAMID_LEVELS]; /* level 0: not kept */
};
enum bw_status bw_room_pyramid_init(struct pyramid *pyramid, const struct bw_room_map *map);
void bw_room_pyramid_free(struct pyramid *pyramid);
void bw_room_pyramid_renew(struct pyramid *pyramid, const struct bw_room_map *map);
/* Raises the map by one light. */
void bw_room_sweep(struct scene *scene, const struct image *image, const struct light *light, struct bw_room_map *map,
                   struct pyramid *pyramid);

enum bw_status bw_room_extent(const struct scene *scene, struct bw_room_solution *solution);
enum bw_status bw_room_contours(const struct bw_room *room, const struct bw_room_map *map, double level,
                                struct bw_contours *contours);
void bw_room_contours_free(struct bw_contours *contours);
bool bw_room_opening_hunt(const struct bw_opening *opening, struct hunt *hunt); /* false: no memory */
void bw_room_opening_verdict(const struct bw_opening *opening, const struct bw_place *worst,
                             struct bw_opening_result *result);

#endif
