/* Goggles against handpieces at their exits. */
#include "internal.h"

static void write_pair(const struct assess_job *job, const struct bw_pair_result *pair,
                       const struct bw_distance_result *distance, const double terms[BW_TERMS_MAX]) {
    struct bw_working *working = &job->result->eyewear_working;
    const struct bw_goggles *goggles = &job->the_case->eyewear[pair->eyewear];
    char words[BW_TITLE_SIZE];
    assess_handpiece_words(job, distance, words);
    bw_working_heading(working, "%s with %s, at its exit: %s", goggles->name, words,
                       bw_verdict_name(pair->verdict.verdict));
    bw_eyewear_working(goggles, distance->direct, terms, &pair->verdict, working);
}

enum bw_status assess_pairs(const struct assess_job *job) {
    struct bw_result *result = job->result;
    for (size_t i = 0; i < job->the_case->eyewear_count; i++) {
        for (size_t j = 0; j < result->distance_count; j++) {
            const struct bw_distance_result *distance = &result->distances[j];
            double od[BW_EMISSIONS_MAX] = {0}, terms[BW_TERMS_MAX] = {0};
            bw_hazard_worst_terms(distance->direct, terms);
            for (size_t k = 0; k < distance->direct->output->count; k++)
                od[k] = distance->emissions[k].optical_density;
            struct bw_pair_result *pair = &result->pairs[result->pair_count++];
            pair->eyewear = i;
            pair->laser = distance->laser;
            pair->handpiece = distance->handpiece;
            bw_eyewear_judge_together(&job->the_case->eyewear[i], distance->direct, terms, od, &pair->verdict);
            if (job->options->working)
                write_pair(job, pair, distance, terms);
        }
    }
    return result->eyewear_working.failed ? bw_error_set(job->error, BW_NO_MEMORY, "out of memory") : BW_OK;
}
