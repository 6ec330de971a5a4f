/* What a handpiece does beside the direct view, and on what its exposure time rests. */
#include "internal.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

static const char *as_given(char out[BW_NUMBER_SIZE], double value) {
    snprintf(out, BW_NUMBER_SIZE, "%.6g", value); /* as given: an input, not a result */
    return out;
}

static void unbounded(const struct assess_job *job, const char *subject, const struct bw_distance_result *distance) {
    if (!distance->nohd.unbounded && !distance->skin.unbounded && !distance->diffuse.unbounded)
        return;
    assess_finding(job, BW_CAUTION, subject,
                   "The %s hazard of the direct beam never ends, because the beam does not spread: only something "
                   "opaque in its way ends it.",
                   distance->nohd.unbounded && distance->skin.unbounded ? "eye and skin"
                   : distance->skin.unbounded                           ? "skin"
                                                                        : "eye");
}

static void skin(const struct assess_job *job, const char *subject, const struct bw_distance_result *distance) {
    char reach[BW_WORDS_SIZE], times[BW_NUMBER_SIZE], seconds[BW_NUMBER_SIZE];
    if (distance->skin_ratio_at_exit <= 1. && distance->skin.distance_m <= 0.)
        return;
    assess_finding(job, BW_CAUTION, subject,
                   "Skin in the beam for %s s gets up to %s times the skin limit; the hazard reaches %s. Keep hands "
                   "and all skin that is not treated out of the beam.",
                   as_given(seconds, distance->skin_time.exposure_s),
                   bw_format(times, distance->skin_ratio_at_exit, 2, BW_UP),
                   bw_length_words(reach, distance->skin.distance_m, job->the_case->us_units));
}

static void diffuse(const struct assess_job *job, const char *subject, const struct bw_distance_result *distance) {
    char reach[BW_WORDS_SIZE], seconds[BW_NUMBER_SIZE];
    if (distance->diffuse.distance_m <= 0.)
        return;
    assess_finding(job, BW_CAUTION, subject,
                   "Looking for %s s at the lit spot on a white matt surface is above the eye limit up to %s from "
                   "it: whoever only watches needs goggles too.",
                   as_given(seconds, distance->diffuse_time.exposure_s),
                   bw_length_words(reach, distance->diffuse.distance_m, job->the_case->us_units));
}

static void exposure(const struct assess_job *job, const char *subject, const struct bw_distance_result *distance) {
    char given[BW_NUMBER_SIZE], customary[BW_NUMBER_SIZE];
    if (distance->exposure_given)
        assess_finding(
            job, distance->glance.exposure_s >= distance->customary.exposure_s ? BW_NOTE : BW_CAUTION, subject,
            "The exposure time, %s s, comes from the case file; customary for an accidental glance is %s "
            "s%s",
            as_given(given, distance->glance.exposure_s), as_given(customary, distance->customary.exposure_s),
            distance->glance.exposure_s >= distance->customary.exposure_s ? "." : ". Write down why it is shorter.");
    if (distance->glance.aversion_response)
        assess_finding(job, BW_NOTE, subject,
                       "The exposure time of %s s for visible light rests on the aversion response (blinking, turning "
                       "away). The German radiation protection commission (SSK, 15 March 2006) says that newer results "
                       "do not bear this assumption out.",
                       as_given(given, distance->glance.exposure_s));
}

static void definition(const struct assess_job *job, const char *subject, const struct bw_distance_result *distance) {
    if (assess_handpiece(job, distance)->definition_assumed)
        assess_finding(job, BW_NOTE, subject,
                       "The case does not say how the beam diameter is defined; d86 (1/e2 of the peak) was taken, the "
                       "safe side. Ask the maker and enter diameter_definition.");
}

static void shape(const struct assess_job *job, const char *subject, const struct bw_distance_result *distance) {
    char number[BW_NUMBER_SIZE];
    if (distance->direct->shaped)
        assess_finding(job, BW_NOTE, subject,
                       "The limits of direct viewing rest on the size of the apparent source or the places of the "
                       "emitters that the case gives. Keep the measurement or the maker's statement: a point source, "
                       "which is taken where nothing is known, has the stricter limit.");
    if (distance->nearest_m > 0.)
        assess_finding(job, BW_NOTE, subject,
                       "Ratios and densities at the exit hold %s mm in front of it, where the spacer ends: it must "
                       "always be fitted. Distances count from the exit.",
                       as_given(number, 1e3 * distance->nearest_m));
}

static void meter(const struct assess_job *job) {
    struct bw_text text = {0};
    for (size_t i = 0; i < job->the_case->laser_count; i++) {
        const struct bw_laser *laser = &job->the_case->lasers[i];
        bool is_used = false;
        for (size_t j = 0; j < job->result->distance_count; j++)
            is_used = is_used || job->result->distances[j].laser == i;
        if (is_used && (strcmp(laser->labelled_class, "4") == 0 || laser->labelled_class[0] == '\0'))
            bw_text_add(&text, "%s%s", text.length > 0 ? ", " : "laser ", laser->name);
    }
    if (text.length > 0)
        assess_finding(job, BW_CAUTION, text.data,
                       "Meter the beam, do not trust the display: class 4 medical output may differ from its setting "
                       "by 20 %% (IEC 60601-2-22, from memory), and surveys found far more. Enter the highest output "
                       "found.");
    if (text.failed)
        bw_error_set(job->error, BW_NO_MEMORY, "out of memory");
    bw_text_free(&text);
}

void assess_beam_findings(const struct assess_job *job) {
    for (size_t i = 0; i < job->result->distance_count; i++) {
        const struct bw_distance_result *distance = &job->result->distances[i];
        char subject[BW_TITLE_SIZE];
        assess_handpiece_words(job, distance, subject);
        unbounded(job, subject, distance);
        skin(job, subject, distance);
        diffuse(job, subject, distance);
        exposure(job, subject, distance);
        definition(job, subject, distance);
        shape(job, subject, distance);
    }
    meter(job);
}
