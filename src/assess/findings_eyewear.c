/* Is there a pair for every handpiece, and which must not be taken for which. */
#include "internal.h"

#include <math.h>
#include <stdio.h>

static bool is_exit_pair(const struct bw_pair_result *pair, const struct bw_distance_result *distance) {
    return !pair->is_place && pair->laser == distance->laser && pair->handpiece == distance->handpiece;
}

static bool has_sufficient(const struct bw_result *result, const struct bw_distance_result *distance) {
    for (size_t i = 0; i < result->pair_count; i++)
        if (is_exit_pair(&result->pairs[i], distance) && result->pairs[i].verdict.verdict == BW_SUFFICIENT)
            return true;
    return false;
}

static void drawer(const struct assess_job *job, const struct bw_distance_result *distance) {
    const struct bw_output *output = distance->direct->output;
    char subject[BW_TITLE_SIZE];
    double od[BW_EMISSIONS_MAX] = {0};
    bool needs_any = false;
    for (size_t i = 0; i < output->count; i++) {
        od[i] = distance->emissions[i].optical_density;
        needs_any = needs_any || !(od[i] <= 0.);
    }
    if (!needs_any || has_sufficient(job->result, distance))
        return;
    struct bw_text text = {0};
    bw_text_add(&text, "%s for this handpiece at its exit. Get goggles that give, in one pair, ",
                job->the_case->eyewear_count > 0 ? "None of the goggles is enough" : "The case has no goggles");
    assess_emission_densities(&text, output, od);
    bw_text_add(&text, ".");
    assess_handpiece_words(job, distance, subject);
    assess_finding_text(job, BW_ACTION, subject, &text);
}

static void not_with(const struct assess_job *job, const struct bw_pair_result *pair,
                     const struct bw_distance_result *distance) {
    char handpiece[BW_TITLE_SIZE], subject[BW_TITLE_SIZE];
    struct bw_text text = {0};
    if (!is_exit_pair(pair, distance) || pair->verdict.verdict == BW_SUFFICIENT)
        return;
    assess_handpiece_words(job, distance, handpiece);
    snprintf(subject, sizeof subject, "eyewear %s", job->the_case->eyewear[pair->eyewear].name);
    bw_text_add(&text, "Do not use with %s: ", handpiece);
    assess_failures(&text, distance->direct->output, &pair->verdict);
    bw_text_add(&text, ".");
    assess_finding_text(job, BW_CAUTION, subject, &text);
}

static void dark(const struct assess_job *job, const struct bw_goggles *goggles) {
    static const double enough = 0.2;
    char subject[BW_TITLE_SIZE], percent[BW_NUMBER_SIZE];
    if (isnan(goggles->luminous_transmittance) || goggles->luminous_transmittance >= enough)
        return;
    snprintf(subject, sizeof subject, "eyewear %s", goggles->name);
    assess_finding(job, BW_NOTE, subject,
                   "Lets through %s %% of the light: below 20 %% the room needs extra lighting (from memory).",
                   bw_format(percent, 100. * goggles->luminous_transmittance, 2, BW_DOWN));
}

void assess_eyewear_findings(const struct assess_job *job) {
    const struct bw_result *result = job->result;
    if (!(job->options->parts & BW_PART_EYEWEAR))
        return;
    for (size_t i = 0; i < result->distance_count; i++)
        drawer(job, &result->distances[i]);
    for (size_t i = 0; i < result->pair_count; i++)
        for (size_t j = 0; j < result->distance_count; j++)
            not_with(job, &result->pairs[i], &result->distances[j]);
    if (job->the_case->eyewear_count > 0)
        assess_finding(job, BW_CAUTION, "eyewear",
                       "Only optical densities are compared. Whether the filters and frames withstand the beam (scale "
                       "number, modes D, I, R, M of the marking) is not judged: check it with the maker.");
    for (size_t i = 0; i < job->the_case->eyewear_count; i++)
        dark(job, &job->the_case->eyewear[i]);
}
