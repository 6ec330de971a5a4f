/* Shared inside src/hazard only. */
#ifndef BEAMWARD_HAZARD_INTERNAL_H
#define BEAMWARD_HAZARD_INTERNAL_H

#include <beamward/hazard.h>

/* One emission against one target of one rule set. */
struct train_case {
    const struct bw_table *table;
    const struct bw_emission *emission;
    const struct bw_viewing_case *viewing;
};

/* ---- edges.c: where the limits change their law as time goes on -------------------------------- */

enum { EDGES_MAX = 96 };
struct edges {
    size_t count;
    double at_s[EDGES_MAX];
};
/* Limit as a function of the whole exposure: what is measured within the acceptance cone is put on all of it. */
double bw_hazard_whole_limit_j_m2(const struct bw_limit *limit, double subtense_rad);
struct bw_exposure bw_hazard_exposure(const struct train_case *train, double time_s);
/* All edges, ascending, those beyond the exposure too. Returns: BW_OK; BW_OUT_OF_RANGE if there are more than fit. */
enum bw_status bw_hazard_edges(const struct train_case *train, struct edges *edges, struct bw_error *error);

/* ---- windows.c: where the worst window of a train can lie -------------------------------------- */

/* A length of time and the most that it can hold, in pulses (of a list: energy over that of the largest pulse); of a
 * continuous emission, in seconds. */
struct window {
    double time_s, holds;
    bool alone; /* it is an exposure that meets one pulse, no more */
};
typedef enum bw_status window_visitor(const struct window *window, void *context);
/* Regular trains and continuous emissions. Returns: what the visitor returns, as soon as it is not BW_OK. */
enum bw_status bw_hazard_windows(const struct bw_emission *emission, const struct edges *edges, double exposure_s,
                                 window_visitor *visit, void *context);

/* ---- train_limit.c ----------------------------------------------------------------------------- */

/* The strictest place of one rule for one effect. */
struct finding {
    bool found;
    double per_unit_j_m2; /* per pulse; continuous: per second */
    double correction;    /* in it already */
    struct window window;
    struct bw_limit limit;
};
struct tally {
    struct finding rules[BW_RULES];
    double least_j; /* lowest limit x aperture squared of all windows: what binds a beam narrower than the aperture */
    struct finding least; /* where that is */
    double pulses, group_pulses;
    struct bw_source_note correction_source; /* of rule 3 */
};
/* A window against every effect by rule 1 or 2. */
enum bw_status bw_hazard_offer_window(const struct train_case *train, struct tally tallies[BW_EFFECTS],
                                      enum bw_train_rule rule, const struct window *window, struct bw_error *error);
/* A pulse or a group against every effect that rule 3 corrects. */
enum bw_status bw_hazard_offer_train(const struct train_case *train, struct tally tallies[BW_EFFECTS],
                                     const struct window *window, double correction, struct bw_error *error);
/* The correction of N pulses of a duration; source may be NULL. Returns: BW_OUT_OF_RANGE if the rule set has none. */
enum bw_status bw_hazard_correction(const struct train_case *train, double pulse_s, double ti_s, double pulses,
                                    double *correction, struct bw_source_note *source, struct bw_working *working,
                                    struct bw_error *error);
bool bw_hazard_train_applies(const struct train_case *train);
double bw_hazard_grouping_time_s(const struct train_case *train);
/* The time in which pulses are counted. */
double bw_hazard_counting_time_s(const struct train_case *train);

/* ---- pulse_groups.c: pulses that count as one --------------------------------------------------------- */

/* Groups in the worst window of a regular train. */
double bw_hazard_groups(const struct bw_emission *emission, double ti_s, double window_s);
/* Pulses of a run whose neighbours are within Ti: so many Ti as begin before the last of them does. */
double bw_hazard_groups_in_run(double pulses, double span_s, double ti_s);

/* ---- list.c: a list of pulses with its sums; list_rules.c: the rules for it ---------------------- */

struct list {
    const struct bw_pulse *pulses;
    size_t count;
    double largest_j;     /* energy of the largest pulse */
    double *whole, *lost; /* energy of the pulses before each: sum, and what rounding takes from it */
};
enum bw_status bw_hazard_list_make(const struct bw_emission *emission, struct list *list, struct bw_error *error);
void bw_hazard_list_free(struct list *list);
/* Length and energy of the window that opens with pulse i and closes with pulse j. */
double bw_hazard_list_length_s(const struct list *list, size_t i, size_t j);
double bw_hazard_list_energy_j(const struct list *list, size_t i, size_t j);
/* The most energy in a window of a length that meets so many pulses (1 or 2) or more; 0 if none does. */
double bw_hazard_list_most_j(const struct list *list, double length_s, size_t meets);
/* Groups in the worst window: pulses if none are within Ti. */
enum bw_status bw_hazard_list_groups(const struct list *list, double ti_s, double window_s, double *groups,
                                     struct bw_error *error);
/* All rules. */
enum bw_status bw_hazard_list_rules(const struct train_case *train, struct tally tallies[BW_EFFECTS],
                                    struct bw_working *working, struct bw_error *error);

/* ---- laws.c: the limits between two edges, fast -------------------------------------------------- */

/* One limit as a function of time, over a stretch: H, or H D^2 (what binds a beam narrower than the aperture). */
struct law {
    enum bw_effect effect;
    bool narrow;
    bool power;     /* it is scale x t^(eighths / 8); else it is evaluated each time */
    int eighths;
    double scale;
};
enum { LAWS_MAX = 2 * BW_EFFECTS };
struct laws {
    const struct train_case *train;
    size_t count;
    struct law at[LAWS_MAX];
};
/* varies: effects whose aperture changes with time; of the others H D^2 goes as H. */
void bw_hazard_laws(const struct train_case *train, double from_s, double to_s, const bool varies[BW_EFFECTS],
                    struct laws *laws);
double bw_hazard_law(const struct laws *laws, size_t which, double time_s);

/* ---- list_search.c: the worst windows of a list between two edges -------------------------------- */

struct strictest { /* of one law: the window from pulse i to pulse j with the most energy for its limit */
    bool found;
    size_t i, j;
    double most; /* energy over limit to beat; then that of the window */
};
enum bw_status bw_hazard_list_search(const struct list *list, const struct laws *laws, double from_s, double to_s,
                                     struct strictest strictest[LAWS_MAX], struct bw_error *error);

/* train_working.c */
/* What leads to N. group: what counts as one; NULL = each pulse by itself. */
void bw_hazard_counting_working(const struct train_case *train, double pulses, const struct window *group,
                                struct bw_working *working);
void bw_hazard_train_working(const struct train_case *train, const struct tally tallies[BW_EFFECTS],
                             const struct bw_train_limit_set *limits, struct bw_working *working);

/* ---- prepare.c --------------------------------------------------------------------------------- */

/* Limits of one emission for a source that looks so wide to the naked eye; and to the eye behind its aid. */
enum bw_status bw_hazard_limits_at_eye(const struct bw_hazard *hazard, size_t emission, double subtense_rad,
                                       struct bw_train_limit_set *limits, struct bw_working *working,
                                       struct bw_error *error);
enum bw_status bw_hazard_emission_limits(const struct bw_hazard *hazard, size_t emission, double subtense_rad,
                                         struct bw_train_limit_set *limits, struct bw_working *working,
                                         struct bw_error *error);
/* Fills terms and sums from table, output and viewing, each emission with its own subtense. */
enum bw_status bw_hazard_fill(struct bw_hazard *hazard, const double subtense_rad[BW_EMISSIONS_MAX],
                              struct bw_working *working, struct bw_error *error);

/* ---- corners.c --------------------------------------------------------------------------------- */

/* Limits of one emission of an output; of its tolerances the worst corner. */
enum bw_status bw_hazard_corner_limits(const struct bw_hazard *hazard, size_t emission,
                                       const struct bw_viewing_case *viewing, struct bw_train_limit_set *limits,
                                       struct bw_working *working, struct bw_error *error);

/* ---- before_eye.c ------------------------------------------------------------------------------ */

/* How often the source looks as wide as to the naked eye. */
double bw_hazard_magnification(const struct bw_hazard *hazard);
enum bw_status bw_hazard_check_before_eye(const struct bw_output *output, struct bw_error *error);
/* Puts a limit at the eye before goggles and aid, where the beam is known. */
void bw_hazard_before_eye(const struct bw_hazard *hazard, size_t emission, struct bw_train_limit *limit,
                          struct bw_working *working);

/* ---- ratio.c ----------------------------------------------------------------------------------- */

/* ratio = P g / E_limit, of a term as it stands, anywhere between two distances at its largest */
double bw_hazard_plain_term(const struct bw_hazard *hazard, size_t term, double near_m, double far_m);
/* Largest sum over terms that add, of one emission alone or (BW_EMISSIONS_MAX) of all. NAN if any term is. */
double bw_hazard_largest_sum(const struct bw_hazard *hazard, const double ratios[BW_TERMS_MAX], size_t only);
/* ratio_working.c: of one emission or (BW_EMISSIONS_MAX) of all. Returns: the largest sum. */
double bw_hazard_alone_working(const struct bw_hazard *hazard, size_t only, double distance_m,
                               struct bw_working *working);
void bw_hazard_combine(const struct bw_hazard *hazard, const double ratios[BW_TERMS_MAX], struct bw_ratio *ratio);
/* Each term's largest ratio between two distances; of one emission alone the others are 0. */
void bw_hazard_bounds(const struct bw_hazard *hazard, double near_m, double far_m, size_t only,
                      double ratios[BW_TERMS_MAX]);
/* From this distance on every term falls: beyond the last waist, and where all are points. */
double bw_hazard_settled_m(const struct bw_hazard *hazard, size_t only);

/* ---- emitter_groups.c: which emitters the eye sees together ---------------------------------------------- */

/* The smallest subtense that any rule set tells from a point [rad]: alpha_min is 1.5 mrad in all of them. */
static const double point_rad = 1.5e-3;
/* What the eye looks at is never seen from nearer: it cannot focus there. */
static const double nearest_view_m = 0.1;

/* How windows turn into angles between two distances. */
struct sight {
    double near_m, far_m; /* from the exit */
    double magnification; /* angles are those at the eye, behind its aid */
    double clamp_low_rad,
        clamp_rad; /* alpha_max that a side of a window counts up to: for the shortest time, for the longest */
    double slack;  /* how much brighter another group has to be before it stands for one that is no smaller: 1 where the
                      limit never falls as the source grows */
};
/* Emitters seen together. Of an oblong window which angle counts depends on the time, so it is known from low to high.
 */
struct group {
    size_t emitters;
    double low_rad[2], high_rad[2]; /* at near_m, at far_m */
    double per_w;                   /* mean irradiance per watt of the emission, at its largest between the two */
};
enum { FRONT_MAX = 64 };
struct front {
    size_t count;
    struct group groups[FRONT_MAX];
};
/* Groups of emitters that can be the worst: no other is as bright and as small. */
void bw_hazard_front(const struct bw_beam *beam, const struct sight *sight, double aperture_m, struct front *front);
/* All emitters together, as bright as they are anywhere across the head. */
double bw_hazard_all_per_w(const struct bw_beam *beam, double near_m, double far_m, double aperture_m);
/* The angle of the whole head at a distance; a long one's sides count up to clamp_rad. */
double bw_hazard_whole_rad(const struct bw_beam *beam, double distance_m, double magnification, double clamp_rad);
/* Where all of a beam's emitters together are a point [m]. */
double bw_hazard_point_from_m(const struct bw_beam *beam, double magnification);

/* ---- shaped.c ------------------------------------------------------------------------------------ */

/* One term of a shaped hazard between two distances, at its largest. seen may be NULL.
 * Returns: NAN if a limit cannot be had. */
double bw_hazard_shaped_term(const struct bw_hazard *hazard, size_t term, double near_m, double far_m,
                             struct bw_seen *seen, struct bw_error *error);

/* ---- ladder.c ------------------------------------------------------------------------------------ */

/* Before all has settled, outside the stand-off. */
double bw_hazard_ladder_envelope(const struct bw_hazard *hazard, double distance_m);

#endif
