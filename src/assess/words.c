/* Names and numbers in plain words, rounded to the safe side. */
#include "internal.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

static const double metre_per_foot = 0.3048;

const char *bw_severity_name(enum bw_severity severity) {
    switch (severity) {
    case BW_DANGER:
        return "danger";
    case BW_ACTION:
        return "action";
    case BW_CAUTION:
        return "caution";
    case BW_NOTE:
        return "note";
    }
    return "unknown";
}

/* A length in words, rounded up.
 * Given:    length_m  [m]; infinity = never ends
 *           us        feet beside metres
 * Returned: out       "3.42 m", "3.42 m (11.3 ft)" or "unbounded"
 * Returns:  out */
const char *bw_length_words(char out[BW_WORDS_SIZE], double length_m, bool us) {
    char metres[BW_NUMBER_SIZE], feet[BW_NUMBER_SIZE];
    if (!isfinite(length_m)) {
        snprintf(out, BW_WORDS_SIZE, "%s", length_m > 0. ? "unbounded" : "unknown");
        return out;
    }
    bw_format(metres, length_m, 3, BW_UP);
    bw_format(feet, length_m / metre_per_foot, 3, BW_UP);
    if (us)
        snprintf(out, BW_WORDS_SIZE, "%s m (%s ft)", metres, feet);
    else
        snprintf(out, BW_WORDS_SIZE, "%s m", metres);
    return out;
}

/* How the worst path reaches a place, in words.
 * Given:    place, us
 * Returned: out    "the direct beam, 0.400 m from the handpiece"
 * Returns:  out
 * Notes:    A length is where the ratio was taken; it is rounded to the nearest, being no hazard distance. */
const char *bw_path_words(char out[BW_WORDS_SIZE], const struct bw_place *place, bool us) {
    char metres[BW_NUMBER_SIZE], feet[BW_NUMBER_SIZE + 8] = "";
    bw_format_fixed(metres, place->length_m, 2, BW_NEAREST);
    if (us) {
        char number[BW_NUMBER_SIZE];
        snprintf(feet, sizeof feet, " (%s ft)",
                 bw_format_fixed(number, place->length_m / metre_per_foot, 1, BW_NEAREST));
    }
    switch (place->path) {
    case BW_PATH_NONE:
        snprintf(out, BW_WORDS_SIZE, "no path");
        break;
    case BW_PATH_DIRECT:
        snprintf(out, BW_WORDS_SIZE, "the direct beam, %s m%s from the handpiece", metres, feet);
        break;
    case BW_PATH_MIRROR:
        snprintf(out, BW_WORDS_SIZE, "the mirror image in %.40s, %s m%s of path", place->via, metres, feet);
        break;
    case BW_PATH_DIFFUSE:
        snprintf(out, BW_WORDS_SIZE, "diffuse light from %.40s, %s m%s from the spot",
                 place->via[0] ? place->via : "the treated spot", metres, feet);
        break;
    }
    return out;
}

void assess_handpiece_words(const struct assess_job *job, const struct bw_distance_result *distance,
                            char out[BW_TITLE_SIZE]) {
    snprintf(out, BW_TITLE_SIZE, "%s %s", assess_laser(job, distance)->name, assess_handpiece(job, distance)->name);
}

void assess_emission_densities(struct bw_text *out, const struct bw_output *output, const double *od) {
    const char *before = "";
    char number[BW_NUMBER_SIZE];
    for (size_t i = 0; i < output->count; i++) {
        if (od[i] <= 0.)
            continue;
        bw_text_add(out, "%sOD %s at %.6g nm", before, bw_format_fixed(number, od[i], 1, BW_UP),
                    output->emissions[i].wavelength_nm);
        before = ", ";
    }
}

void assess_failures(struct bw_text *out, const struct bw_output *output, const struct bw_pair_verdict *verdict) {
    const char *before = "";
    for (size_t i = 0; i < verdict->count; i++) {
        if (verdict->emissions[i].verdict == BW_SUFFICIENT)
            continue;
        bw_text_add(out, "%s%s", before, output->emissions[i].name);
        if (!strstr(verdict->emissions[i].reason, " nm"))
            bw_text_add(out, " (%.6g nm)", output->emissions[i].wavelength_nm);
        bw_text_add(out, ": %s", verdict->emissions[i].reason);
        before = "; ";
    }
}
