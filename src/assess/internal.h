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
/* Each term at its worst, at the exit or at a waist beyond it. */
void assess_worst_terms(const struct bw_hazard *hazard, double worst[BW_TERMS_MAX]);
/* blame.c: names the emission that a failed preparation is about. */
enum bw_status assess_blame(const struct assess_job *job, const struct bw_distance_result *distance,
                            enum bw_status status, const struct bw_error *cause);

/* pairs.c: goggles against handpieces at their exits. */
void assess_pairs(const struct assess_job *job);
/* rooms.c: one room of the case; appends a pair for each person's goggles and handpiece. */
enum bw_status assess_room(const struct assess_job *job, size_t room, struct bw_room_result *result);

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
