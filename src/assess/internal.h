/* assess - what its files share. Private to the folder. */
#ifndef BEAMWARD_ASSESS_INTERNAL_H
#define BEAMWARD_ASSESS_INTERNAL_H

#include <beamward/assess.h>

/* One run: what it reads, and the result that it fills. */
struct assess_job {
    const struct bw_case *the_case;
    const struct bw_table *table;
    const struct bw_assess_options *options;
    struct bw_result *result;
    struct bw_error *error;
};

const struct bw_laser *assess_laser(const struct assess_job *job, const struct bw_distance_result *distance);
const struct bw_handpiece *assess_handpiece(const struct assess_job *job, const struct bw_distance_result *distance);

/* select.c: names that the options ask for. */
enum bw_status assess_check_names(const struct assess_job *job);
bool assess_wants_room(const struct assess_job *job, size_t room);
bool assess_wants_handpiece(const struct assess_job *job, size_t laser, size_t handpiece);
bool assess_used_in(const struct bw_case *the_case, size_t room, size_t laser, size_t handpiece);

/* distance.c: one handpiece. The result is freed by bw_result_free whatever is returned. */
enum bw_status assess_distance(const struct assess_job *job, size_t laser, size_t handpiece,
                               struct bw_distance_result *distance);
enum bw_status assess_prepare(const struct assess_job *job, const struct bw_distance_result *distance,
                              struct bw_viewing_case viewing, struct bw_hazard **hazard, struct bw_working *working,
                              struct bw_error *error);
/* The term that governs where the hazard is worst: at the exit, or at the waist of one of the emissions. */
void assess_find_governing(const struct bw_hazard *hazard, size_t *emission, struct bw_train_limit *limit,
                           double *at_m);

/* distance.c: distances and densities of distance->output for its exposure times. */
enum bw_status assess_figures(const struct assess_job *job, struct bw_distance_result *distance,
                              struct bw_working *working, struct bw_error *error);

/* tolerances.c: the output at the worst corner of the tolerances, and the figures without any. */
enum bw_status assess_find_output(const struct assess_job *job, struct bw_distance_result *distance,
                                  struct bw_working *working, struct bw_error *error);
/* The widest spots that the tolerances allow. */
struct bw_output assess_widest_output(const struct assess_job *job, const struct bw_distance_result *distance);

/* skin.c: how far skin in the beam is at risk; the large-area rule. */
enum bw_status assess_skin(const struct assess_job *job, struct bw_distance_result *distance,
                           struct bw_working *working, struct bw_error *error);
/* The exposed area of skin at a distance, 0 where it does not matter. */
double assess_skin_area_m2(const struct assess_job *job, const struct bw_distance_result *distance, double at_m);

/* aids.c, times.c, sensitivity.c: more about one handpiece. */
enum bw_status assess_aids(const struct assess_job *job, struct bw_distance_result *distance,
                           struct bw_working *working, struct bw_error *error);
enum bw_status assess_times(const struct assess_job *job, struct bw_distance_result *distance,
                            struct bw_working *working, struct bw_error *error);
enum bw_status assess_sensitivity(const struct assess_job *job, struct bw_distance_result *distance,
                                  struct bw_error *error);

/* view.c: the eye or skin of somebody, at a distance on the axis of a handpiece or at a place in a room, behind what
 * they wear. */
struct assess_light { /* one handpiece that may reach them */
    const struct bw_distance_result *distance;
    struct bw_output output;
    double passes[BW_EMISSIONS_MAX];
    struct bw_hazard direct, diffuse;
};
struct assess_view {
    const struct assess_job *job;
    enum bw_target target;
    const struct bw_aid *aid;         /* NULL: none */
    const struct bw_goggles *goggles; /* NULL: none */
    const struct bw_room *room;       /* NULL: on the axis of one handpiece */
    struct bw_point at;               /* in the room */
    bool at_exit;                     /* on the axis: where it is worst, at the exit or beyond */
    double distance_m;                /* on the axis, else */
    size_t count;
    struct assess_light *lights;
    struct bw_room_source *sources;
    struct bw_place place; /* of the last ratio; on the axis: direct */
};
/* One light a handpiece. assess_view_close also after a failure. */
enum bw_status assess_view_open(struct assess_view *view, const struct bw_distance_result *const *distances,
                                size_t count, struct bw_error *error);
void assess_view_close(struct assess_view *view);
/* After an exposure of this length; context is the view. */
enum bw_status assess_view_ratio(double exposure_s, void *context, double *ratio, struct bw_error *error);
/* For the exposure times of each handpiece. */
enum bw_status assess_view_customary(struct assess_view *view, double *ratio, struct bw_error *error);
enum bw_status assess_view_time(struct assess_view *view, struct bw_permitted_time *time, struct bw_error *error);
struct bw_permitted_time assess_shorter(struct bw_permitted_time a, struct bw_permitted_time b);

/* persons.c: times and aids of the people in a room. */
enum bw_status assess_person_aid(const struct assess_job *job, const struct bw_room_result *room, size_t index,
                                 struct bw_error *error);
enum bw_status assess_person_terms(const struct assess_job *job, const struct bw_room_result *room, size_t index,
                                   const struct bw_distance_result *distance, double term_ratios[BW_TERMS_MAX],
                                   struct bw_error *error);
enum bw_status assess_person_times(const struct assess_job *job, const struct bw_room_result *room, size_t index,
                                   struct bw_error *error);

/* incidents.c */
enum bw_status assess_incidents(const struct assess_job *job);
void assess_incident_findings(const struct assess_job *job); /* findings_incidents.c */

/* blame.c: names the emission that a failed preparation is about. */
enum bw_status assess_blame(const struct assess_job *job, const struct bw_distance_result *distance,
                            enum bw_status status, const struct bw_error *cause);

/* working_inputs.c, working_exit.c: steps of what no evaluator below writes. working may be NULL. */
void assess_inputs_working(const struct assess_job *job, const struct bw_distance_result *distance,
                           struct bw_working *working);
void assess_time_working(const struct bw_distance_result *distance, const struct bw_exposure_time *time,
                         const char *what, struct bw_working *working);
/* Ratios where each emission is worst, and of all together: total is what the result says. */
void assess_exit_working(const struct bw_hazard *hazard, double worst_m, double total, struct bw_working *working);

/* pairs.c: goggles against handpieces at their exits. */
enum bw_status assess_pairs(const struct assess_job *job);
/* rooms.c: one room of the case; appends a pair for each person's goggles and handpiece. */
enum bw_status assess_room(const struct assess_job *job, size_t room, struct bw_room_result *result);

/* rooms_working.c: every person's place and what it asks of goggles, every opening. */
enum bw_status assess_room_working(const struct assess_job *job, struct bw_room_result *result,
                                   const struct bw_room_source *sources);

/* compare.c: the distances by every rule set. */
enum bw_status assess_compare(const struct assess_job *job);
void assess_comparison_free(struct bw_comparison *comparison); /* NULL allowed */

/* findings.c */
enum bw_status assess_findings(const struct assess_job *job);
void assess_finding(const struct assess_job *job, enum bw_severity severity, const char *subject, const char *format,
                    ...) BW_PRINTF(4, 5);
void assess_finding_text(const struct assess_job *job, enum bw_severity severity, const char *subject,
                         struct bw_text *text);             /* takes the text */
void assess_people_findings(const struct assess_job *job);  /* findings_people.c */
void assess_opening_findings(const struct assess_job *job); /* findings_people.c */
void assess_eyewear_findings(const struct assess_job *job); /* findings_eyewear.c */
void assess_beam_findings(const struct assess_job *job);    /* findings_beam.c */
void assess_source_findings(const struct assess_job *job);  /* findings_sources.c */

/* words.c: names and numbers in plain words, rounded to the safe side. */
void assess_handpiece_words(const struct assess_job *job, const struct bw_distance_result *distance,
                            char out[BW_TITLE_SIZE]);
/* "OD 5.6 at 810 nm, OD 6.1 at 905 nm": what each emission needs; nothing for those that need none. */
void assess_emission_densities(struct bw_text *out, const struct bw_output *output, const double *od);
/* "deep (810 nm): rated 5.0, needs 5.4; ...": the emissions that the goggles fail. */
void assess_failures(struct bw_text *out, const struct bw_output *output, const struct bw_pair_verdict *verdict);

#endif
