/* How the ratio at a place came about: the path, what is left of the light on it, the ratio at its length. */
#include "internal.h"

#include <math.h>
#include <stdlib.h>

typedef char number[BW_NUMBER_SIZE];

static void write_path(const struct bw_place *place, struct bw_working *working) {
    number rho, mirrors, gloss, passes, cover;
    static const char *const ways[] = {"no path", "direct", "in mirrors", "diffuse"};
    bool is_diffuse = place->path == BW_PATH_DIFFUSE, is_cover = place->cover_share < 1.;
    bw_working_step(working, "L", place->length_m, "m", NULL, NULL, NULL);
    bw_working_note(working, "%s%s%s: the shortest way from any position %s that comes this way", ways[place->path],
                    place->via[0] ? ", by " : "", place->via, is_diffuse ? "of the spot" : "of the handpiece");
    bw_working_number(rho, place->start_share);
    bw_working_number(mirrors, place->mirror_share);
    bw_working_number(gloss, place->gloss_share);
    bw_working_number(passes, place->pass_share);
    bw_working_number(cover, place->cover_share);
    if (is_cover)
        bw_working_step(working, "S", place->share, "", NULL, "rho R G T Tc", "%s * %s * %s * %s * %s", rho, mirrors,
                        gloss, passes, cover);
    else
        bw_working_step(working, "S", place->share, "", NULL, "rho R G T", "%s * %s * %s * %s", rho, mirrors, gloss,
                        passes);
    bw_working_note(working, "%smirrors R, gloss and glass G by angle, what is passed through T%s",
                    is_diffuse ? "lit surface rho, " : "direct: rho = 1; ", is_cover ? ", the cover Tc" : "");
}

static void write_final(const struct bw_place *place, const char *of, double ratio, struct bw_working *working) {
    number s, at;
    bw_working_step(working, "ratio", place->ratio, "", NULL, of, "%s * %s", bw_working_number(s, place->share),
                    bw_working_number(at, ratio));
    bw_working_note(working, "at the place");
}

/* One term by itself: what bw_room_terms_at takes. Returns: the ratio at the length, with what lies farther. */
static double one_term(const struct bw_hazard *hazard, size_t term, double length_m, double *here,
                       struct bw_working *working, bool *failed) {
    struct bw_hazard *one = malloc(sizeof *one);
    *failed = one == NULL;
    if (one == NULL)
        return nan("");
    *one = *hazard;
    one->term_count = 1;
    one->terms[0] = hazard->terms[term];
    one->adds[0][0] = true;
    *here = bw_hazard_term_working(one, 0, length_m, working);
    double envelope = bw_hazard_ratio_envelope(one, length_m);
    free(one);
    return envelope;
}

static enum bw_status direct(const struct bw_hazard *hazard, const struct bw_place *place, size_t term,
                             struct bw_working *working) {
    double here = bw_hazard_ratio(hazard, place->length_m), envelope;
    bool failed = false;
    if (place->aside_rad > 0.) {
        double beside = place->share > 0. ? place->ratio / place->share : 0.;
        bw_working_step(working, "env", beside, "", NULL, NULL, NULL);
        bw_working_note(working,
                        "the place lies beside all allowed aims by %.4g mrad at least: the bound of the beam's "
                        "edge there",
                        1e3 * place->aside_rad);
        write_final(place, "S env", beside, working);
        return BW_OK;
    }
    bw_working_note(working, "r of the steps below is L");
    if (term < hazard->term_count) {
        envelope = one_term(hazard, term, place->length_m, &here, working, &failed);
    } else {
        bw_hazard_ratio_working(hazard, place->length_m, working);
        envelope = bw_hazard_ratio_envelope(hazard, place->length_m);
    }
    if (failed)
        return BW_NO_MEMORY;
    if (envelope > here) {
        bw_working_step(working, "env", envelope, "", NULL, NULL, NULL);
        bw_working_note(working, "nearer to its waist the beam is narrower: the largest sum from L on, searched");
    }
    write_final(place, envelope > here ? "S env" : term < hazard->term_count ? "S ratio" : "S sum", envelope, working);
    return BW_OK;
}

static enum bw_status diffuse(const struct bw_hazard *hazard, const struct bw_place *place, size_t emission,
                              struct bw_working *working, struct bw_error *error) {
    struct spot_curve curve = {.hazard = hazard, .emission = emission, .path_m = place->spot_path_m};
    struct bw_spot spot;
    struct bw_ratio ratio;
    double seen_m;
    enum bw_status status = bw_room_diffuse_curve(&curve, fmax(place->length_m, 1.), error);
    if (status == BW_OK) {
        bw_room_diffuse_deciding(&curve, place->length_m, &spot, &seen_m);
        bw_working_step(working, "r", curve.path_m, "m", NULL, NULL, NULL);
        bw_working_note(working, "of the beam to the lit spot, at least; the smallest spot from there on:");
        for (size_t i = 0; i < hazard->output->count; i++)
            bw_beam_diameter_working(&hazard->output->beams[i], fmax(curve.path_m, hazard->output->beams[i].waist_m),
                                     working);
        bw_working_step(working, "r", seen_m, "m", NULL, NULL, NULL);
        bw_working_note(working, "the spot is seen from here%s; all of its light, S comes last",
                        seen_m > place->length_m ? ", where farther off a train correction sets in" : " (L)");
        status = bw_hazard_diffuse_working(hazard, &spot, seen_m, &ratio, working, error);
    }
    free(curve.curve.bound);
    if (status == BW_OK && emission < BW_EMISSIONS_MAX)
        write_final(place, "S ratio", ratio.emission[emission], working);
    else if (status == BW_OK)
        write_final(place, "S sum", ratio.total, working);
    return status;
}

/* Given:    source; place  as bw_room_at or bw_room_term_places_at left it; term  whose place it is, or BW_TERMS_MAX
 * Returned: working        may be NULL
 * Returns:  BW_OK; BW_NO_MEMORY; as the limits */
enum bw_status bw_room_place_working(const struct bw_room_source *source, const struct bw_place *place, size_t term,
                                     struct bw_working *working, struct bw_error *error) {
    if (working == NULL)
        return BW_OK;
    if (place->path == BW_PATH_NONE) {
        bw_working_step(working, "ratio", place->ratio, "", NULL, NULL, NULL);
        bw_working_note(working, "no light reaches the place");
        return BW_OK;
    }
    write_path(place, working);
    if (place->path != BW_PATH_DIFFUSE)
        return direct(source->direct, place, term, working);
    size_t emission = term < source->direct->term_count ? source->direct->terms[term].emission : BW_EMISSIONS_MAX;
    return diffuse(source->diffuse, place, emission, working, error);
}
