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
/* All edges, those beyond the exposure too. Returns: BW_OK; BW_OUT_OF_RANGE if there are more than fit. */
enum bw_status bw_hazard_edges(const struct train_case *train, struct edges *edges, struct bw_error *error);

/* ---- windows.c: where the worst window of a train can lie -------------------------------------- */

/* A length of time and the most that it can hold, in pulses; of a continuous emission, in seconds. */
struct window {
    double time_s, holds;
};
enum { WINDOWS_MAX = 3 * EDGES_MAX + 4 };
struct windows {
    size_t count;
    struct window at[WINDOWS_MAX];
};
void bw_hazard_windows(const struct bw_emission *emission, const struct edges *edges, double exposure_s,
                       struct windows *windows);

/* ---- train_limit.c ----------------------------------------------------------------------------- */

/* The strictest place of one rule for one effect. */
struct finding {
    bool found;
    double per_unit_j_m2; /* per pulse; continuous: per second */
    struct window window;
    struct bw_limit limit;
};
struct tally {
    struct finding rules[BW_RULES];
    double least_j; /* lowest limit x aperture squared of all windows: what binds a beam narrower than the aperture */
    double pulses, group_pulses, correction;
};
/* train_working.c */
void bw_hazard_train_working(const struct train_case *train, const struct tally tallies[BW_EFFECTS],
                             const struct bw_train_limit_set *limits, struct bw_working *working);

/* ---- prepare.c --------------------------------------------------------------------------------- */

/* Limits of one emission for a source of this subtense. */
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

/* Largest sum over terms that add, of one emission alone or (BW_EMISSIONS_MAX) of all. NAN if any term is. */
double bw_hazard_largest_sum(const struct bw_hazard *hazard, const double ratios[BW_TERMS_MAX], size_t only);
void bw_hazard_combine(const struct bw_hazard *hazard, const double ratios[BW_TERMS_MAX], struct bw_ratio *ratio);
/* Each term's largest ratio between two distances. */
void bw_hazard_bounds(const struct bw_hazard *hazard, double near_m, double far_m, double ratios[BW_TERMS_MAX]);
/* Distance of the last waist: beyond it every term falls. */
double bw_hazard_last_waist_m(const struct bw_hazard *hazard, size_t only);

#endif
