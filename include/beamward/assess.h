/* assess - the whole job over a case: distances, goggles, rooms, findings. Pure: same case and table in, same result out.
 * Uses: base to casefile.  Used by: report, cli.
 * Threads: re-entrant; a result is const once made. */
#ifndef BEAMWARD_ASSESS_H
#define BEAMWARD_ASSESS_H

#include <beamward/casefile.h>

#ifdef __cplusplus
extern "C" {
#endif

/* One emission of a handpiece, in the direct beam. */
struct bw_emission_result {
    struct bw_train_limit limit; /* eye, the effect that governs this emission at the exit */
    struct bw_train_limit skin_limit;
    double ratio_at_exit;        /* alone; at the waist in front of the exit where that is worse */
    struct bw_reach nohd;        /* alone */
    double optical_density;      /* needed at the exit, sharing the allowance */
    double subtense_rad;         /* of what the eye sees at its NOHD, or at the exit if there is none; 0 = point */
    size_t emitters;             /* seen together there */
};

/* The same with every tolerance left out. */
struct bw_nominal {
    struct bw_reach nohd, skin, diffuse;
    double ratio_at_exit, skin_ratio_at_exit;
    double optical_density[BW_EMISSIONS_MAX];
};

/* The eye behind loupes, a microscope or binoculars. */
struct bw_aid_result {
    size_t aid;
    struct bw_reach nohd; /* extended: through the aid or, if that is farther, of the naked eye that looks past it */
    bool naked_decides;
    double ratio_at_exit; /* likewise */
};

/* How long until the limits are reached somewhere on the axis. */
struct bw_place_times {
    bool at_exit; /* where the hazard is worst, at the exit or beyond; else at at_m */
    double at_m;
    double eye_ratio, skin_ratio; /* for the exposure times of the handpiece */
    struct bw_permitted_time eye, skin;
    struct bw_permitted_time *behind; /* the eye behind each pair of goggles of the case */
};

/* How much one input moves the answers: central difference on the evaluation itself, about the values as given. */
struct bw_sensitivity {
    const char *quantity; /* "power", "pulse duration", "repetition rate", "beam diameter", "divergence", "exposure time" */
    size_t emission;      /* BW_EMISSIONS_MAX: of all that share it */
    double nohd_pct_per_pct; /* NAN if there is no NOHD, or none that ends */
    double od_per_pct;       /* of the largest density at the exit */
};
enum { BW_SENSITIVITIES_MAX = 5 * BW_EMISSIONS_MAX + 3 };

struct bw_distance_result { /* one handpiece */
    size_t laser, handpiece;
    struct bw_exposure_time glance, skin_time, diffuse_time;
    bool exposure_given; /* by the case file, for all three; their source is then empty */
    struct bw_exposure_time customary; /* glance by the rule set, whatever the case gives */
    struct bw_reach nohd, skin, diffuse;
    double ratio_at_exit;       /* eye, worst at the exit or beyond (a focused beam is worst at its waist) */
    double skin_ratio_at_exit;
    double worst_m;             /* where the governing emission is worst: the exit (0, or the stand-off), else the waist,
                                   or where the source has become a point */
    double subtense_rad;        /* of the governing emission's source at the NOHD, or at the exit if there is none */
    double nearest_m;           /* as near as an eye can come: the stand-off */
    struct bw_spot diffuse_spot; /* what the diffuse distance assumes: reflectance 1, the smallest spot */
    size_t governing_emission;
    struct bw_train_limit governing;
    size_t skin_governing_emission;
    struct bw_train_limit skin_governing;
    struct bw_emission_result emissions[BW_EMISSIONS_MAX];
    struct bw_hazard *direct, *diffuse_view, *skin_view; /* prepared */
    struct bw_output output; /* what was judged: with tolerances at their worst corner, else the handpiece's own */
    struct bw_tolerance tolerances[BW_EMISSIONS_MAX];
    bool has_tolerance;
    struct bw_nominal nominal; /* with has_tolerance */
    bool skin_area_matters;    /* the rule set limits large areas of skin more strictly here */
    double skin_area_m2;       /* then: the area at the exit */
    size_t aid_count, place_count, sensitivity_count;
    struct bw_aid_result *aids;
    struct bw_place_times exit;
    struct bw_place_times *places; /* at each of options.at_m */
    struct bw_sensitivity *sensitivity; /* the one that moves the NOHD most first, then the density */
    struct bw_working working; /* empty unless options.working */
};

struct bw_pair_result { /* goggles against a handpiece at its exit, or (is_place) where a person stands */
    size_t eyewear, laser, handpiece;
    bool is_place;
    size_t room, person;
    struct bw_pair_verdict verdict;
};

/* One person in a room. */
struct bw_person_result {
    struct bw_place place;
    size_t od_count;
    struct bw_wavelength_od {
        double wavelength_nm, od;
    } od[BW_EMISSIONS_MAX * 4]; /* one a wavelength, the largest over the handpieces used; ascending */
    bool has_verdict; /* wears goggles */
    enum bw_verdict verdict;
    bool needs_eyewear; /* ratio above 1 */
    bool through_aid;   /* the place is that of the eye behind the aid, which is worse off than without */
    bool has_times;     /* with BW_PART_ROOM */
    struct bw_permitted_time eye, worn, skin; /* until the limit is reached: without goggles, behind those worn, of skin */
    double skin_ratio;
};
struct bw_room_result {
    size_t room;
    size_t source_count;
    size_t *sources; /* indices into distances */
    bool solved;     /* false without BW_PART_ROOM: persons only, no map, no openings */
    struct bw_working working; /* of the persons' places and openings; empty unless options.working */
    struct bw_room_solution solution;
    struct bw_person_result *persons;
};

/* What somebody received. */
struct bw_incident_result {
    size_t incident;
    double eye_ratio;       /* multiple of the limit for that time, behind the goggles if any */
    double naked_eye_ratio; /* without them */
    double skin_ratio;
    struct bw_place eye_place, skin_place; /* how it came there; on an axis: direct */
    size_t eye_source, skin_source; /* index into distances: the handpiece that is worst */
    struct bw_permitted_time eye, skin; /* how long it would have taken to reach the limit */
    struct bw_working working;
};
struct bw_result;
/* The distances of one handpiece by one rule set. */
struct bw_rule_cell {
    struct bw_result *result; /* of this handpiece alone; NULL if the rule set has no row for it */
    char *reason;             /* then why */
};
/* One column a rule set, the primary one first, then the others in order of id. */
struct bw_comparison {
    size_t table_count, handpiece_count; /* as the result's distances */
    const struct bw_table **tables;
    struct bw_rule_cell *cells; /* [handpiece][table] */
    char **sentences;           /* [handpiece]: why the columns differ */
};
const struct bw_rule_cell *bw_comparison_cell(const struct bw_comparison *comparison, size_t handpiece, size_t table);
/* NULL if the rule set has no row. */
const struct bw_distance_result *bw_comparison_distance(const struct bw_comparison *comparison, size_t handpiece,
                                                        size_t table);

/* What one rule set says of an exposure, for a sentence that compares: by which rule and row it governs. */
struct bw_column {
    const struct bw_table *table;
    bool out_of_range;
    double figure;          /* what is compared: equal figures need no reason */
    double exposure_s, wavelength_nm;
    struct bw_train_limit limit;
    bool has_train;         /* a train of pulses: the rule that governs counts */
};
/* "They differ because eu-2006-25 governs by N^-0.25 (train) ..., icnirp-2013 by the average ...". Appends. */
bool bw_columns_differ(const struct bw_column *columns, size_t count);
void bw_column_words(struct bw_text *out, const struct bw_column *columns, size_t count, const char *what);

enum bw_severity { BW_DANGER, BW_ACTION, BW_CAUTION, BW_NOTE };
const char *bw_severity_name(enum bw_severity severity); /* "danger", "action", "caution", "note" */
struct bw_finding {
    enum bw_severity severity;
    char subject[BW_TITLE_SIZE];
    char *text;
};

struct bw_result {
    const struct bw_case *the_case;
    const struct bw_table *table;
    size_t distance_count, pair_count, room_count, finding_count, incident_count;
    struct bw_distance_result *distances;
    struct bw_pair_result *pairs;
    struct bw_room_result *rooms;
    struct bw_incident_result *incidents;
    struct bw_finding *findings; /* in order of severity */
    bool needs_action;           /* any finding of danger or action */
    struct bw_working eyewear_working; /* of the goggles; empty unless options.working */
    struct bw_comparison *comparison; /* with options.all_rules, else NULL */
};

enum bw_part { BW_PART_DISTANCE = 1, BW_PART_EYEWEAR = 2, BW_PART_ROOM = 4, BW_PART_INCIDENT = 8, BW_PART_ALL = 15 };
enum { BW_PLACES_MAX = 16 };
struct bw_assess_options {
    unsigned parts;             /* of enum bw_part; eyewear and room include the distances that they need */
    const char *laser, *handpiece, *room; /* NULL = all */
    size_t at_count;
    double at_m[BW_PLACES_MAX]; /* permitted exposure times at these distances */
    bool working;
    bool all_rules;             /* also by every other rule set, side by side */
};
/* Returns: BW_OK; BW_OUT_OF_RANGE (a wavelength that the rule set lacks; names the emission); BW_INPUT (a name that the
 * case lacks; offers the nearest); BW_NO_MEMORY. */
enum bw_status bw_assess(const struct bw_case *the_case, const struct bw_table *table,
                         const struct bw_assess_options *options, struct bw_result **result, struct bw_error *error);
void bw_result_free(struct bw_result *result);

/* Words that findings and reports share, rounded to the safe side. */
enum { BW_WORDS_SIZE = 200 };
/* "3.42 m" or, with us, "3.42 m (11.3 ft)"; up. "unbounded". */
const char *bw_length_words(char out[BW_WORDS_SIZE], double length_m, bool us);
/* How the worst reaches a place: "the direct beam, 0.4 m from the handpiece". */
const char *bw_path_words(char out[BW_WORDS_SIZE], const struct bw_place *place, bool us);

#ifdef __cplusplus
}
#endif
#endif
