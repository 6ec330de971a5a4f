/* What is to be said of each incident, and of the optical aids. */
#include "internal.h"

#include <math.h>
#include <stdio.h>

static void add_received(struct bw_text *text, const struct assess_job *job, const char *tissue, double ratio,
                         const struct bw_place *place, double exposure_s) {
    char times[BW_NUMBER_SIZE], path[BW_WORDS_SIZE];
    bw_text_add(text, "The %s got %s times the limit for %.6g s (%s). ", tissue, bw_format(times, ratio, 2, BW_UP),
                exposure_s, bw_path_words(path, place, job->the_case->us_units));
}

static void incident(const struct assess_job *job, const struct bw_incident_result *result) {
    const struct bw_incident *given = &job->the_case->incidents[result->incident];
    char subject[BW_TITLE_SIZE];
    char eye_times[BW_NUMBER_SIZE], skin_times[BW_NUMBER_SIZE];
    struct bw_text text = {0};
    bool eye = !(result->eye_ratio <= 1.), skin = !(result->skin_ratio <= 1.);
    snprintf(subject, sizeof subject, "incident %s", given->name);
    if (eye)
        add_received(&text, job, "eye", result->eye_ratio, &result->eye_place, given->exposure_s);
    if (skin)
        add_received(&text, job, "skin", result->skin_ratio, &result->skin_place, given->exposure_s);
    if (eye || skin)
        bw_text_add(&text, "Stop, keep the setting as it is, have %s seen by a doctor, and keep this record.",
                    eye && skin ? "eyes and skin"
                    : eye       ? "the eyes"
                                : "the skin");
    else
        bw_text_add(&text,
                    "As described, no limit was exceeded: the eye got at most %s, the skin %s times the limit for "
                    "%.6g s. If in doubt about time, place or goggles, take the worse one.",
                    bw_format(eye_times, result->eye_ratio, 2, BW_UP),
                    bw_format(skin_times, result->skin_ratio, 2, BW_UP), given->exposure_s);
    assess_finding_text(job, eye || skin ? BW_DANGER : BW_NOTE, subject, &text);
}

static void aids(const struct assess_job *job, const struct bw_distance_result *distance) {
    for (size_t i = 0; i < distance->aid_count; i++) {
        const struct bw_aid_result *aid = &distance->aids[i];
        char subject[BW_TITLE_SIZE], reach[BW_WORDS_SIZE], naked[BW_WORDS_SIZE];
        if (aid->naked_decides || !(aid->nohd.distance_m > distance->nohd.distance_m))
            continue;
        assess_handpiece_words(job, distance, subject);
        assess_finding(
            job, BW_CAUTION, subject,
            "Through %s the hazard of the direct beam reaches %s instead of %s. The map of a room is for the "
            "naked eye.",
            job->the_case->aids[aid->aid].name, bw_length_words(reach, aid->nohd.distance_m, job->the_case->us_units),
            bw_length_words(naked, distance->nohd.distance_m, job->the_case->us_units));
    }
}

void assess_incident_findings(const struct assess_job *job) {
    for (size_t i = 0; i < job->result->incident_count; i++)
        incident(job, &job->result->incidents[i]);
    for (size_t i = 0; i < job->result->distance_count; i++)
        aids(job, &job->result->distances[i]);
}
