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
 * there one value serves 16 bins. */
enum bw_status bw_room_direct_curve(const struct bw_hazard *hazard, double far_m, struct curve *curve) {
    static const size_t coarse = 16;
    enum bw_status status = init(curve, 10, far_m);
    if (status != BW_OK)
        return status;
    double waist_m = last_waist_m(hazard->output);
    curve->bound[0] = bw_hazard_ratio_envelope(hazard, 0);
    for (size_t i = 0; i < curve->bins; i++) {
        double edge_m = lower_edge_m(curve, i);
        bool fine = edge_m >= waist_m || i % coarse == 0;
        curve->bound[i + 1] = fine ? bw_hazard_ratio_envelope(hazard, edge_m) : curve->bound[i];
    }
    return BW_OK;
}

/* ---- diffuse ---------------------------------------------------------------------------------------------------- */

/* On its way to a waist a beam gets narrower: a surface farther off may bear a smaller spot. */
enum bw_status bw_room_least_spot(const struct bw_output *output, double path_m, struct bw_spot *spot) {
    enum bw_status status = bw_hazard_spot(output, path_m, 1., spot);
    for (size_t i = 0; status == BW_OK && i < output->count; i++)
        if (output->beams[i].waist_m > path_m)
            spot->diameter_m[i] = fmin(spot->diameter_m[i], bw_beam_diameter_m(&output->beams[i], output->beams[i].waist_m));
    return status;
}

static double pick(const struct bw_ratio *ratio, size_t only) {
    return only < BW_EMISSIONS_MAX ? ratio->emission[only] : ratio->total;
}

/* Train corrections change their law at these subtenses (limits tables, [train]), and then a larger spot may have a
 * stricter limit: so all spots from the smallest up are asked at both ends of each law. */
static const double steps_rad[] = {1.5e-3, 5e-3, 100e-3};
enum { STEPS = 3 };

static bool is_pulsed(const struct bw_output *output) {
    bool pulsed = false;
    for (size_t i = 0; i < output->count; i++)
        pulsed = pulsed || !output->emissions[i].continuous;
    return pulsed;
}

enum bw_status bw_room_diffuse_at(const struct bw_hazard *hazard, const struct bw_spot *spot, size_t only,
                                  double distance_m, double *ratio, struct bw_error *error) {
    struct bw_ratio at;
    enum bw_status status = bw_hazard_diffuse_ratio(hazard, spot, distance_m, &at, error);
    *ratio = pick(&at, only);
    for (size_t k = 0; status == BW_OK && is_pulsed(hazard->output) && k < STEPS; k++) {
        struct bw_spot other = *spot;
        double step_m = 2 * distance_m * tan(steps_rad[k] / 2) * (1 + 1e-9);
        bool larger = false;
        for (size_t i = 0; i < hazard->output->count; i++) {
            larger = larger || step_m > spot->diameter_m[i];
            other.diameter_m[i] = fmax(step_m, spot->diameter_m[i]);
        }
        if (!larger)
            continue;
        status = bw_hazard_diffuse_ratio(hazard, &other, distance_m, &at, error);
        *ratio = fmax(*ratio, pick(&at, only));
    }
    return status;
}

/* The same, or the ratio somewhat farther (but within reach of the curve) where a train correction sets in. */
enum bw_status bw_room_diffuse_envelope(const struct bw_hazard *hazard, const struct bw_spot *spot, size_t only,
                                        double distance_m, double far_m, double *ratio, struct bw_error *error) {
    enum bw_status status = bw_room_diffuse_at(hazard, spot, only, distance_m, ratio, error);
    for (size_t i = 0; is_pulsed(hazard->output) && i < hazard->output->count; i++)
        for (size_t k = 0; k < STEPS && status == BW_OK; k++) {
            double step_m = spot->diameter_m[i] / 2 / tan(steps_rad[k] / 2) * (1 + 1e-9), there = 0;
            if (!(step_m > distance_m && step_m < far_m))
                continue;
            status = bw_room_diffuse_at(hazard, spot, only, step_m, &there, error);
            *ratio = fmax(*ratio, there);
        }
    return status;
}

/* Given:    spot   the smallest of each emission; bits  2^bits bins an octave
 * Returned: curve  for reflectance 1
 * Notes:    Away from the spot E falls as 1/r^2 and no limit grows faster than the square of the subtense, so within a bin
 *           the ratio is at most its value at the lower edge, or, if a train correction sets in within it, at most that
 *           at the upper edge times (upper / lower)^2. From the far end the largest so far is kept: the ratio may rise
 *           with the distance where a correction sets in. */
enum bw_status bw_room_diffuse_curve(const struct bw_hazard *hazard, const struct bw_spot *spot, size_t only, int bits,
                                     double far_m, struct curve *curve, struct bw_error *error) {
    enum bw_status status = init(curve, bits, far_m);
    double upper = 0, largest = 0;
    bool pulsed = is_pulsed(hazard->output);
    if (status == BW_OK)
        status = bw_room_diffuse_at(hazard, spot, only, lower_edge_m(curve, curve->bins), &upper, error);
    for (size_t i = curve->bins; status == BW_OK && i-- > 0;) {
        double lower = 0, wider = lower_edge_m(curve, i + 1) / lower_edge_m(curve, i);
        status = bw_room_diffuse_at(hazard, spot, only, lower_edge_m(curve, i), &lower, error);
        largest = fmax(largest, fmax(lower, pulsed ? upper * wider * wider : upper));
        curve->bound[i + 1] = largest;
        upper = lower;
    }
    double at_spot = 0;
    if (status == BW_OK)
        status = bw_room_diffuse_at(hazard, spot, only, 0, &at_spot, error);
    if (status == BW_OK)
        curve->bound[0] = fmax(largest, at_spot) * 1.01;
    return status;
}
