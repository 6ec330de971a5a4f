/* hazard - hazard ratio at a place, hazard distances, optical density, longest permitted exposure.
 * Uses: limits, beam.  Used by: eyewear, room, assess, report, cli.
 * Plain values, no state; no allocation but for an emission that is a list of pulses (BW_NO_MEMORY). */
#ifndef BEAMWARD_HAZARD_H
#define BEAMWARD_HAZARD_H

#include <beamward/beam.h>
#include <beamward/limits.h>

#ifdef __cplusplus
extern "C" {
#endif

/* ---- the limit of one emission, pulses and all ----------------------------------------------- */

enum bw_train_rule { BW_RULE_SINGLE, BW_RULE_AVERAGE, BW_RULE_TRAIN };
enum { BW_RULES = 3 };
const char *bw_train_rule_name(enum bw_train_rule rule); /* "single", "average", "train" */

/* The limit of one emission for one effect, by each rule. Of a source wider than the cone in which the limit is
 * measured these are limits of the whole exposure: the cone is in them already. Limits per pulse are those of each pulse
 * of the train; of a list, those of its pulse with the most energy, the others in proportion. */
struct bw_train_limit {
    struct bw_limit limit;       /* the printed row that governs, at the time where it governs */
    enum bw_train_rule rule;     /* which governs; continuous: BW_RULE_AVERAGE */
    double rules_j_m2[BW_RULES]; /* limit per pulse by each rule (continuous: of the exposure time); NAN where a rule does not apply */
    double per_pulse_j_m2;       /* the lowest of them */
    double irradiance_w_m2;      /* the same as a limit of the time-mean irradiance: per_pulse_j_m2 x average power /
                                    pulse energy of the emission */
    double aperture_m;           /* to average the exposure over: the row's, or smaller where a shorter window with a
                                    smaller aperture binds a beam narrower than it */
    double pulses;               /* N as counted for rule 3 in the worst window, groups as one; 0 if it does not apply */
    double group_pulses;         /* pulses that count as one because they fall inside Ti; 1 = none (of a list: energy) */
    double correction;           /* of rule 3; 1 if none */
    struct bw_source_note correction_source; /* its row; empty if rule 3 does not apply */
};

struct bw_viewing_case {
    enum bw_target target;
    double exposure_s;
    double subtense_rad; /* 0 = point source */
    double area_m2;      /* exposed skin; 0 = small */
};

struct bw_train_limit_set {
    size_t count;
    struct bw_train_limit limits[BW_EFFECTS]; /* one an effect */
    size_t governing;
};

/* All effects of the target for one emission: rule 1 single pulse, rule 2 the worst window of every length
 * up to the exposure, rule 3 the train correction, pulses inside Ti grouped. On a tie (1e-9 relative) the
 * average governs before single before train. */
enum bw_status bw_hazard_train_limits(const struct bw_table *table, const struct bw_emission *emission,
                                      const struct bw_viewing_case *viewing, struct bw_train_limit_set *limits,
                                      struct bw_working *working, struct bw_error *error);

/* ---- a handpiece in use ---------------------------------------------------------------------- */

enum { BW_EMISSIONS_MAX = 16, BW_TERMS_MAX = BW_EMISSIONS_MAX * BW_EFFECTS };

/* Loupes, an operating microscope, binoculars: what the eye may look through. */
enum { BW_AID_BANDS_MAX = 16 };
struct bw_aid_band { /* both ends included */
    double low_nm, high_nm, transmittance;
};
struct bw_aid {
    char name[BW_NAME_SIZE], title[BW_TITLE_SIZE];
    double magnification; /* angular, 1 to 200 */
    double objective_m;   /* diameter of the objective of one eye, 1e-3 to 1 */
    size_t band_count;
    struct bw_aid_band bands[BW_AID_BANDS_MAX]; /* where none holds a wavelength, all is taken to pass */
};
/* Share that the optics pass: the largest of the bands that hold the wavelength, 1 without any; 0 where glass is taken
 * to pass nothing. */
double bw_aid_transmittance(const struct bw_aid *aid, double wavelength_nm);

/* What leaves one handpiece at once, and what is in its way to the eye. The pointers may be NULL: nothing. */
struct bw_output {
    size_t count; /* 1 to BW_EMISSIONS_MAX */
    struct bw_emission emissions[BW_EMISSIONS_MAX];
    struct bw_beam beams[BW_EMISSIONS_MAX];
    const struct bw_aid *aid;        /* the eye looks through it */
    const double *passes;            /* share of each emission that goggles let through to the eye, 0 to 1 */
    const struct bw_tolerance *tolerances; /* of each emission: limits are then those of the worst corner of duration and rate */
    double stand_off_m; /* a spacer keeps eye, skin and surface at least this far from the exit; distances count from the
                           exit all the same */
};

/* One emission against one effect: ratio = average power x irradiance per watt / limit. */
struct bw_term {
    size_t emission;
    struct bw_train_limit limit;
};

/* Bounds of the ratio by steps of distance, for what is shaped; see bw_hazard_prepare_envelope. */
enum { BW_LADDER_MAX = 96 };
struct bw_ladder {
    size_t steps;
    double edge_m[BW_LADDER_MAX + 1];
    double envelope[BW_LADDER_MAX]; /* bound of the ratio from the lower edge on */
    double worst[BW_TERMS_MAX];     /* of each term anywhere */
};

/* An output prepared against a rule set for one way of viewing. Point source: the terms hold at every
 * distance. Diffuse, and beams with an apparent source or several emitters (shaped): limits depend on the subtense and are
 * evaluated anew at each distance; the terms here are those of a point. */
struct bw_hazard {
    const struct bw_table *table;
    const struct bw_output *output;
    struct bw_viewing_case viewing;
    size_t term_count;
    struct bw_term terms[BW_TERMS_MAX];
    bool adds[BW_TERMS_MAX][BW_TERMS_MAX]; /* which terms sum: same tissue and effect */
    bool shaped; /* a beam has an apparent source or several emitters: its limits change with the distance */
    double settled_m[BW_EMISSIONS_MAX]; /* from here on an emission is a point source from one place */
    struct bw_ladder ladder;
};
enum bw_status bw_hazard_prepare(const struct bw_table *table, const struct bw_output *output,
                                 const struct bw_viewing_case *viewing, struct bw_hazard *hazard,
                                 struct bw_working *working, struct bw_error *error);
/* Fills the ladder of a shaped hazard (else nothing): without it the envelope and places off the axis are costly. */
void bw_hazard_prepare_envelope(struct bw_hazard *hazard);

struct bw_ratio {
    double total;                   /* the largest sum over terms that add */
    double emission[BW_EMISSIONS_MAX]; /* the largest of each emission alone */
    size_t governing;               /* index of the largest term within the largest sum */
};

/* Hazard ratio on the axis of the direct beam. NAN for a bad distance or if nothing was prepared. */
double bw_hazard_ratio(const struct bw_hazard *hazard, double distance_m);
void bw_hazard_ratio_detail(const struct bw_hazard *hazard, double distance_m, struct bw_ratio *ratio);
/* The same for a place off the axis by offset_m: an upper bound that never rises with the offset. */
double bw_hazard_ratio_off_axis(const struct bw_hazard *hazard, double distance_m, double offset_m);
/* How the ratio on the axis comes about: of all emissions, and the sum. */
void bw_hazard_ratio_working(const struct bw_hazard *hazard, double distance_m, struct bw_working *working);
/* Of one term, or of one emission at one distance: its width, what falls into the aperture, the ratio. Returns: it. */
double bw_hazard_term_working(const struct bw_hazard *hazard, size_t term, double distance_m,
                              struct bw_working *working);
/* Of given ratios, one a term, the largest sum over terms that add, of one emission (BW_EMISSIONS_MAX: of all).
 * Returns: it. */
double bw_hazard_sum_working(const struct bw_hazard *hazard, const double term_ratios[BW_TERMS_MAX], size_t only,
                             struct bw_working *working);
/* Envelope: the largest ratio at this distance (with a stand-off: outside it) or farther; at most 1e-4 above it, never
 * below. From a ladder: somewhat more above it. */
double bw_hazard_ratio_envelope(const struct bw_hazard *hazard, double distance_m);

/* Each term at its worst, outside the stand-off: an upper bound, exact for what is not shaped. */
void bw_hazard_worst_terms(const struct bw_hazard *hazard, double term_ratios[BW_TERMS_MAX]);

/* What of an emission the eye sees at a distance: the group of emitters that is worst against its limit. */
struct bw_seen {
    double ratio;
    double subtense_rad;         /* of the group, as its limit was taken; up to 1.5 mrad the limit is that of a point */
    size_t emitters;             /* in the group */
    struct bw_train_limit limit; /* for that subtense */
};
enum bw_status bw_hazard_seen(const struct bw_hazard *hazard, size_t term, double distance_m, struct bw_seen *seen,
                              struct bw_error *error);

/* A diffuse reflection: the spot of each emission (d63) as an extended source of its own subtense,
 * E = rho P / (pi r^2), never more than rho times the irradiance of the spot. */
struct bw_spot {
    double reflectance; /* 0 to 1 */
    double diameter_m[BW_EMISSIONS_MAX]; /* of each emission */
};
enum bw_status bw_hazard_spot(const struct bw_output *output, double beam_path_m, double reflectance, struct bw_spot *spot);
enum bw_status bw_hazard_diffuse_ratio(const struct bw_hazard *hazard, const struct bw_spot *spot, double distance_m,
                                       struct bw_ratio *ratio, struct bw_error *error);
/* How a ratio on a spot came about. */
enum bw_status bw_hazard_diffuse_working(const struct bw_hazard *hazard, const struct bw_spot *spot, double distance_m,
                                         struct bw_ratio *ratio, struct bw_working *working, struct bw_error *error);

/* Angles of a spot at which the limit of an emission steps: a spot just wider, or a place just farther off, may be the
 * stricter one. As the naked eye sees them: an aid is in them. Returns: their number, ascending order not promised. */
enum { BW_SUBTENSE_STEPS = 6 };
size_t bw_hazard_subtense_steps(const struct bw_hazard *hazard, size_t emission, double steps_rad[BW_SUBTENSE_STEPS]);

/* A distance that may not end. */
struct bw_reach {
    double distance_m; /* INFINITY when unbounded */
    bool unbounded;    /* the hazard never ends (collimated beam) */
};
/* The farthest place where the ratio is still above 1 (0 if nowhere). only = index of one emission, or
 * BW_EMISSIONS_MAX for all together. At the answer the ratio is 1 to 1e-9. */
enum bw_status bw_hazard_reach(const struct bw_hazard *hazard, size_t only, struct bw_reach *reach,
                               struct bw_working *working, struct bw_error *error);
enum bw_status bw_hazard_diffuse_reach(const struct bw_hazard *hazard, const struct bw_spot *spot,
                                       struct bw_reach *reach, struct bw_working *working, struct bw_error *error);

/* Optical density that each emission needs so that all together keep the limit: the allowance is shared
 * equally among those that need any (each residual is at most c, where the sum of min(ratio, c) is 1); a ratio
 * below c keeps its own. OD = log10(ratio / c), 0 where none is needed. */
void bw_hazard_optical_density(const struct bw_hazard *hazard, const double term_ratios[BW_TERMS_MAX],
                               double od[BW_EMISSIONS_MAX]);
/* The largest sum over terms that add; NAN if a ratio is. */
double bw_hazard_total(const struct bw_hazard *hazard, const double term_ratios[BW_TERMS_MAX]);
/* The same, and how the allowance was shared. */
void bw_hazard_density_working(const struct bw_hazard *hazard, const double term_ratios[BW_TERMS_MAX],
                               double od[BW_EMISSIONS_MAX], struct bw_working *working);
/* Term ratios at a distance, for bw_hazard_optical_density. */
void bw_hazard_term_ratios(const struct bw_hazard *hazard, double distance_m, double term_ratios[BW_TERMS_MAX]);

/* Longest exposure that keeps the limit at a distance, on the axis [s]. INFINITY with unbounded = true: safe
 * for as long as the table goes (3e4 s). 0: no time at all. */
struct bw_permitted_time {
    double exposure_s;
    bool unbounded;
};
/* The ratio after an exposure of this length, at some place. */
typedef enum bw_status bw_ratio_after(double exposure_s, void *context, double *ratio, struct bw_error *error);
/* Longest exposure of which, and of all shorter ones, the ratio is 1 or below; outputs: all that the ratio is of. */
enum bw_status bw_hazard_time_to_limit(const struct bw_table *table, const struct bw_output *const *outputs,
                                       size_t count, const struct bw_viewing_case *viewing, bw_ratio_after *ratio_after,
                                       void *context, struct bw_permitted_time *time, struct bw_error *error);
enum bw_status bw_hazard_permitted_time(const struct bw_table *table, const struct bw_output *output,
                                        const struct bw_viewing_case *viewing, double distance_m,
                                        struct bw_permitted_time *time, struct bw_working *working,
                                        struct bw_error *error);

/* ---- many beams at once ---------------------------------------------------------------------- */

/* Many continuous beams, one emission each: Gaussian, hyperbolic spread, the waist at the exit, seen as a point
 * source. Arrays of `count`; diameters and divergences (full angle) d63. */
struct bw_simple_beams {
    size_t count;
    const double *wavelengths_nm, *exposures_s;
    const double *powers_w;        /* above 0, to 1e15 */
    const double *diameters_m;     /* at the exit, 0 to 10 */
    const double *divergences_rad; /* 0 to pi */
    double distance_m;             /* where the densities are wanted, 0 or more, finite */
};
/* The hazards of an eye in each beam, as bw_limits_eye(), bw_hazard_reach() and bw_hazard_optical_density() give them,
 * but several at a time; the distances from the closed form. No allocation.
 * Returned: arrays of `count`, NULL where not wanted. radiant_exposures_j_m2  the lowest limit; nohd_m  INFINITY when
 *           unbounded; densities  at the distance. All NAN where those functions would return an error.
 * Returns:  the number of those. */
size_t bw_hazard_many(const struct bw_table *table, const struct bw_simple_beams *beams,
                      double *radiant_exposures_j_m2, double *nohd_m, double *densities);

#ifdef __cplusplus
}
#endif
#endif
