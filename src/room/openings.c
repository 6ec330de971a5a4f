/* What leaves by an opening, and what it needs. */
#include "internal.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>

static const double part_m = 0.05;

bool bw_room_opening_hunt(const struct bw_opening *opening, struct hunt *hunt) {
    struct bw_segment s = opening->segment;
    size_t count = (size_t)ceil(bw_distance(s.from, s.to) / part_m);
    *hunt = (struct hunt){.count = count, .precision = {0.01, 0.005, 4000}};
    hunt->targets = calloc(count, sizeof *hunt->targets);
    if (hunt->targets == NULL)
        return false;
    for (size_t i = 0; i < count; i++) {
        double from = (double)i / (double)count, to = (double)(i + 1) / (double)count;
        struct bw_segment part = {
            {s.from.x_m + from * (s.to.x_m - s.from.x_m), s.from.y_m + from * (s.to.y_m - s.from.y_m)},
            {s.from.x_m + to * (s.to.x_m - s.from.x_m), s.from.y_m + to * (s.to.y_m - s.from.y_m)}};
        hunt->targets[i] = bw_room_segment_target(part, 0);
    }
    return true;
}

static double passes(const struct bw_opening *opening) {
    double transmittance = opening->material.transmittance;
    switch (opening->cover) {
    case BW_COVER_NONE:
        return 1;
    case BW_COVER_OPAQUE:
        return 0;
    case BW_COVER_MATERIAL:
        return transmittance >= 0 && transmittance <= 1 ? transmittance : 1;
    }
    return 1;
}

static void say_need(const struct bw_opening *opening, double incoming, char needs[BW_REASON_SIZE]) {
    char density[BW_NUMBER_SIZE];
    bw_format_fixed(density, log10(incoming), 1, BW_UP);
    if (opening->cover == BW_COVER_MATERIAL)
        snprintf(needs, BW_REASON_SIZE, "a cover with optical density %s", density);
    else if (opening->kind == BW_DOOR)
        snprintf(needs, BW_REASON_SIZE, "keep shut or opaque cover, optical density %s", density);
    else
        snprintf(needs, BW_REASON_SIZE, "opaque cover, optical density %s", density);
}

/* worst: what comes to the opening from within. */
void bw_room_opening_verdict(const struct bw_opening *opening, const struct bw_place *worst,
                             struct bw_opening_result *result) {
    result->worst = *worst;
    result->ratio_beyond = passes(opening) > 0 ? worst->ratio * passes(opening) : 0;
    result->worst.ratio = result->ratio_beyond;
    result->worst.share *= passes(opening);
    result->worst.cover_share = passes(opening);
    result->leaves = !(result->ratio_beyond <= 1);
    snprintf(result->needs, sizeof result->needs, "nothing");
    if (result->leaves)
        say_need(opening, worst->ratio, result->needs);
}
