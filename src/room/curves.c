/* Ratio against length as a table, every entry an upper bound of its bin. */
#include "internal.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

/* Bins follow the bits of the double: `bits` of its mantissa tell 2^bits bins an octave apart. */
static uint64_t bits_of(double value) {
    uint64_t bits;
    memcpy(&bits, &value, sizeof bits);
    return bits;
}

static double value_of(uint64_t bits) {
    double value;
    memcpy(&value, &bits, sizeof value);
    return value;
}

static const double near_m = 1. / 256; /* nearer, all is one bin */

static enum bw_status init(struct curve *curve, int bits, double far_m) {
    curve->shift = 52 - bits;
    curve->first = bits_of(near_m) >> curve->shift;
    curve->bins = (size_t)((bits_of(fmax(far_m, 2 * near_m)) >> curve->shift) - curve->first) + 1;
    curve->bound = malloc((curve->bins + 2) * sizeof *curve->bound);
    return curve->bound != NULL ? BW_OK : BW_NO_MEMORY;
}

static double lower_edge_m(const struct curve *curve, size_t bin) {
    return value_of((curve->first + bin) << curve->shift);
}

/* Index into bound. */
size_t bw_room_curve_bin(const struct curve *curve, double length_m) {
    uint64_t at = bits_of(length_m) >> curve->shift;
    if (!(length_m > 0) || at < curve->first)
        return 0;
    uint64_t bin = at - curve->first;
    return bin < curve->bins ? (size_t)bin + 1 : curve->bins;
}

double bw_room_curve_at(const struct curve *curve, double length_m) {
    return curve->bound[bw_room_curve_bin(curve, length_m)];
}

/* Lower edges of bins 0 (at the exit), 1, ... for tables that need only those. */
enum bw_status bw_room_curve_edges(int bits, double far_m, struct curve *curve) {
    enum bw_status status = init(curve, bits, far_m);
    for (size_t i = 0; status == BW_OK && i <= curve->bins; i++)
        curve->bound[i + 1] = lower_edge_m(curve, i);
    if (status == BW_OK)
        curve->bound[0] = 0;
    return status;
}

static double last_waist_m(const struct bw_output *output) {
    double waist_m = 0;
    for (size_t i = 0; i < output->count; i++)
        waist_m = fmax(waist_m, output->beams[i].waist_m);
    return waist_m;
}

/* The envelope falls with the length, so its value at the lower edge bounds the bin. Before a waist it is costly, so
 * there one value serves 16 bins; and it is found by closing in, so what is a hair larger farther off is kept. */
enum bw_status bw_room_direct_curve(const struct bw_hazard *hazard, double far_m, struct curve *curve) {
    static const size_t coarse = 16;
    enum bw_status status = init(curve, 10, far_m);
    if (status != BW_OK)
        return status;
    double waist_m = last_waist_m(hazard->output), largest = 0;
    curve->bound[0] = bw_hazard_ratio_envelope(hazard, 0);
    for (size_t i = 0; i < curve->bins; i++) {
        double edge_m = lower_edge_m(curve, i);
        bool fine = edge_m >= waist_m || i % coarse == 0;
        curve->bound[i + 1] = fine ? bw_hazard_ratio_envelope(hazard, edge_m) : curve->bound[i];
    }
    for (size_t i = curve->bins + 1; i-- > 0;) {
        largest = isnan(curve->bound[i]) ? HUGE_VAL : fmax(largest, curve->bound[i]); /* unknown is not safe */
        curve->bound[i] = largest;
    }
    return BW_OK;
}

/* ---- diffuse ---------------------------------------------------------------------------------------------------- */

static double pick(const struct bw_ratio *ratio, size_t only) {
    return only < BW_EMISSIONS_MAX ? ratio->emission[only] : ratio->total;
}

/* Where a limit steps, a larger spot or a place farther off may be the stricter. Between the steps a smaller spot is
 * stricter, and the ratio falls with the distance: E falls as 1/r^2, and no limit grows faster than the square of the
 * subtense. */
static double step_rad(const struct spot_curve *spot, size_t emission, size_t step) {
    double steps_rad[BW_SUBTENSE_STEPS];
    return step < bw_hazard_subtense_steps(spot->hazard, emission, steps_rad) ? steps_rad[step] : 0;
}

static const double just_beyond = 1 + 1e-9;

/* The spot that from a distance looks just wider than a step; 0 where there is none. */
static double step_spot_m(const struct spot_curve *spot, size_t emission, size_t step, double distance_m) {
    bool pulses = !spot->hazard->output->emissions[emission].continuous;
    return pulses ? 2 * distance_m * tan(step_rad(spot, emission, step) / 2) * just_beyond : 0;
}

/* All spots from the smallest up: each law at the end where it is strictest. */
static enum bw_status diffuse_at(const struct spot_curve *spot, double distance_m, double *ratio,
                                 struct bw_error *error) {
    const struct bw_output *output = spot->hazard->output;
    struct bw_ratio at;
    enum bw_status status = bw_hazard_diffuse_ratio(spot->hazard, &spot->spot, distance_m, &at, error);
    *ratio = pick(&at, spot->emission);
    for (size_t k = 0; status == BW_OK && k < BW_SUBTENSE_STEPS; k++) {
        struct bw_spot other = spot->spot;
        bool larger = false;
        for (size_t i = 0; i < output->count; i++) {
            double step_m = step_spot_m(spot, i, k, distance_m);
            if (step_m > spot->spot.diameter_m[i]) {
                other.diameter_m[i] = step_m;
                larger = true;
            }
        }
        if (!larger)
            continue;
        status = bw_hazard_diffuse_ratio(spot->hazard, &other, distance_m, &at, error);
        *ratio = fmax(*ratio, pick(&at, spot->emission));
    }
    return status;
}

/* The largest at this distance or where a train correction sets in farther off. */
static double envelope_at(const struct spot_curve *spot, double distance_m) {
    double ratio = HUGE_VAL;
    if (diffuse_at(spot, distance_m, &ratio, NULL) != BW_OK || isnan(ratio))
        return HUGE_VAL; /* unknown is not safe */
    for (size_t i = 0; i < spot->step_count; i++)
        if (spot->steps[i].distance_m > distance_m)
            ratio = fmax(ratio, spot->steps[i].ratio);
    return ratio;
}

double bw_room_diffuse_exactly(const struct spot_curve *spot, double distance_m) {
    return envelope_at(spot, distance_m);
}

/* One of the spots that diffuse_at tries: the smallest, or one that a correction makes stricter. */
static void try_spot(const struct spot_curve *spot, const struct bw_spot *other, double distance_m, double *best,
                     struct bw_spot *deciding, double *seen_m) {
    struct bw_ratio at;
    if (bw_hazard_diffuse_ratio(spot->hazard, other, distance_m, &at, NULL) != BW_OK ||
        !(pick(&at, spot->emission) > *best))
        return;
    *best = pick(&at, spot->emission);
    *deciding = *other;
    *seen_m = distance_m;
}

static void try_spots(const struct spot_curve *spot, double distance_m, double *best, struct bw_spot *deciding,
                      double *seen_m) {
    const struct bw_output *output = spot->hazard->output;
    try_spot(spot, &spot->spot, distance_m, best, deciding, seen_m);
    for (size_t k = 0; k < BW_SUBTENSE_STEPS; k++) {
        struct bw_spot other = spot->spot;
        for (size_t i = 0; i < output->count; i++)
            other.diameter_m[i] = fmax(other.diameter_m[i], step_spot_m(spot, i, k, distance_m));
        try_spot(spot, &other, distance_m, best, deciding, seen_m);
    }
}

void bw_room_diffuse_deciding(const struct spot_curve *spot, double distance_m, struct bw_spot *deciding,
                              double *seen_m) {
    double best = -1;
    *deciding = spot->spot;
    *seen_m = distance_m;
    try_spots(spot, distance_m, &best, deciding, seen_m);
    for (size_t i = 0; i < spot->step_count; i++)
        if (spot->steps[i].distance_m > distance_m)
            try_spots(spot, spot->steps[i].distance_m, &best, deciding, seen_m);
}

/* A bin is filled when first asked for: a limit costs far more than all else. */
double bw_room_diffuse_at(struct spot_curve *spot, double distance_m) {
    struct curve *curve = &spot->curve;
    size_t bin = bw_room_curve_bin(curve, distance_m);
    if (isnan(curve->bound[bin]))
        curve->bound[bin] = envelope_at(spot, bin > 0 ? lower_edge_m(curve, bin - 1) : 0);
    return curve->bound[bin];
}

static enum bw_status find_steps(struct spot_curve *spot, struct bw_error *error) {
    enum bw_status status = BW_OK;
    for (size_t i = 0; i < spot->hazard->output->count; i++)
        for (size_t k = 0; k < BW_SUBTENSE_STEPS && status == BW_OK; k++) {
            if (!(step_spot_m(spot, i, k, 1) > 0))
                continue;
            struct spot_step *step = &spot->steps[spot->step_count++];
            step->distance_m = spot->spot.diameter_m[i] / 2 / tan(step_rad(spot, i, k) / 2) * just_beyond;
            status = diffuse_at(spot, step->distance_m, &step->ratio, error);
        }
    return status;
}

/* Given:    spot   hazard, emission and path_m set, the rest zero
 * Returned: spot   the smallest of each emission on a surface this far or farther; reflectance 1; the curve empty
 * Notes:    On its way to a waist a beam gets narrower: a surface farther off may bear a smaller spot. */
enum bw_status bw_room_diffuse_curve(struct spot_curve *spot, double far_m, struct bw_error *error) {
    const struct bw_output *output = spot->hazard->output;
    enum bw_status status = bw_hazard_spot(output, spot->path_m, 1., &spot->spot);
    for (size_t i = 0; status == BW_OK && i < output->count; i++)
        if (output->beams[i].waist_m > spot->path_m)
            spot->spot.diameter_m[i] =
                fmin(spot->spot.diameter_m[i], bw_beam_diameter_m(&output->beams[i], output->beams[i].waist_m));
    double any;
    if (status == BW_OK)
        status = init(&spot->curve, 5, far_m);
    for (size_t i = 0; status == BW_OK && i < spot->curve.bins + 2; i++)
        spot->curve.bound[i] = nan("");
    if (status == BW_OK)
        status = diffuse_at(spot, far_m, &any, error);
    return status == BW_OK ? find_steps(spot, error) : status;
}
