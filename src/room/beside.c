/* What falls beside the allowed aims: a beam has a width, and its edge lights more than its axis is turned to.
 *
 * A place at the distance L from the exit, in a direction that is beside all aims by the angle g, lies r = L cos g
 * along the nearest axis and L sin g from it; half the exit is taken off that. Nothing falls behind the exit. A place
 * is never worse off than one that is aimed at from the same distance, so the envelope on the axis bounds all. */
#include "internal.h"

#include <math.h>
#include <stdlib.h>

enum { ANGLES = 64, BITS = 5 };

/* Fine close to the axis, where the beam ends. */
static double angle_edge_rad(size_t i) {
    double part = (double)i / ANGLES;
    return bw_pi / 2 * part * part;
}

static size_t angle_bin(double angle_rad) {
    double part = sqrt(angle_rad / (bw_pi / 2)) * ANGLES;
    size_t bin = part < ANGLES ? (size_t)part : ANGLES - 1;
    while (bin > 0 && angle_edge_rad(bin) > angle_rad)
        bin--;
    return bin;
}

double bw_room_exit_radius_m(const struct bw_output *output) {
    double radius_m = 0;
    for (size_t i = 0; i < output->count; i++)
        radius_m = fmax(radius_m, bw_beam_exit_radius_m(&output->beams[i]));
    return radius_m;
}

static double last_waist_m(const struct bw_hazard *hazard) {
    double waist_m = 0;
    for (size_t i = 0; i < hazard->output->count; i++)
        waist_m = fmax(waist_m, hazard->output->beams[i].waist_m);
    return waist_m;
}

static double at_place(const struct bw_hazard *hazard, double length_m, double angle_rad, double radius_m) {
    double along_m = length_m * cos(angle_rad), offset_m = length_m * sin(angle_rad) - radius_m;
    return bw_hazard_ratio_off_axis(hazard, fmax(0, along_m), fmax(0, offset_m));
}

/* At this length and angle, or as far as the last waist at the same angle. */
double bw_room_beside_exactly(const struct bw_hazard *hazard, double length_m, double angle_rad) {
    if (!(angle_rad < bw_pi / 2))
        return 0;
    double radius_m = bw_room_exit_radius_m(hazard->output);
    double ratio = at_place(hazard, length_m, angle_rad, radius_m), waist_m = last_waist_m(hazard);
    if (length_m < waist_m)
        ratio = fmax(ratio, at_place(hazard, waist_m / cos(angle_rad), angle_rad, radius_m));
    return fmin(ratio, bw_hazard_ratio_envelope(hazard, length_m));
}

/* Bound of one bin: offset at its least, distance along the axis anywhere in the bin. A Gaussian off its axis is
 * largest at one distance and falls to both sides, by less within a bin than the axis itself does; a top hat is no more
 * than its axis. So the larger of both ends, times the fall of the axis, is enough. */
static double bin_bound(const struct bw_hazard *hazard, const struct curve *lengths, const double *axis, size_t i,
                        size_t j, double radius_m) {
    double low_m = lengths->bound[i], high_m = lengths->bound[i + 1];
    double low_rad = angle_edge_rad(j), high_rad = angle_edge_rad(j + 1);
    double offset_m = fmax(0, low_m * sin(low_rad) - radius_m);
    double near_m = fmax(0, low_m * cos(high_rad)), far_m = high_m * cos(low_rad);
    double ratio =
        fmax(bw_hazard_ratio_off_axis(hazard, near_m, offset_m), bw_hazard_ratio_off_axis(hazard, far_m, offset_m));
    if (hazard->shaped) /* the axis is an envelope there; within a bin no beam falls by a tenth */
        return fmin(ratio * 1.1, axis[i]);
    double fall = bw_hazard_ratio(hazard, near_m) / bw_hazard_ratio(hazard, far_m);
    return fmin(ratio * fmax(fall, 1.01), axis[i]);
}

enum bw_status bw_room_beside(const struct bw_hazard *hazard, double far_m, struct beside *beside) {
    enum bw_status status = bw_room_curve_edges(BITS, 8 * far_m, &beside->lengths);
    size_t count = beside->lengths.bins + 1;
    beside->bound = status == BW_OK ? calloc(count * ANGLES, sizeof *beside->bound) : NULL;
    double *axis = status == BW_OK ? malloc(count * sizeof *axis) : NULL;
    if (beside->bound != NULL && axis != NULL) {
        double radius_m = bw_room_exit_radius_m(hazard->output);
        for (size_t i = count; i-- > 0;) {
            axis[i] = bw_hazard_ratio_envelope(hazard, beside->lengths.bound[i]);
            double *row = &beside->bound[i * ANGLES];
            for (size_t j = ANGLES; j-- > 0;) {
                row[j] = bin_bound(hazard, &beside->lengths, axis, i, j, radius_m);
                if (j + 1 < ANGLES)
                    row[j] = fmax(row[j], row[j + 1]);
                if (i + 1 < count)
                    row[j] = fmax(row[j], row[j + ANGLES]);
            }
        }
    } else
        status = BW_NO_MEMORY;
    free(axis);
    return status;
}

double bw_room_beside_at(const struct beside *beside, double length_m, double angle_rad) {
    if (!(angle_rad < bw_pi / 2))
        return 0;
    return beside->bound[bw_room_curve_bin(&beside->lengths, length_m) * ANGLES + angle_bin(angle_rad)];
}

/* Gaussian beyond a line at the distance x from the axis: erfc(2 x / d) / 2. Where a focused beam may be narrower
 * or wider farther on, the larger of here and very far. */
double bw_room_beside_power(const struct bw_output *output, double length_m, double angle_rad) {
    double largest = 0;
    if (!(angle_rad > 0))
        return 1;
    if (!(angle_rad < bw_pi / 2))
        return 0;
    for (size_t i = 0; i < output->count; i++)
        for (int k = 0; k < 2; k++) {
            double at_m = k == 0 ? length_m : 1e3 * (length_m + output->beams[i].waist_m);
            double offset_m = fmax(0, at_m * sin(angle_rad) - bw_beam_exit_radius_m(&output->beams[i]));
            double diameter_m = bw_beam_widest_m(&output->beams[i], at_m * cos(angle_rad));
            double wide = diameter_m > 0 ? 2 * offset_m / diameter_m : HUGE_VAL;
            double share = output->beams[i].profile == BW_TOP_HAT ? (wide > 1 ? 0 : 1) : erfc(wide) / 2;
            largest = fmax(largest, share);
        }
    return largest;
}

void bw_room_beside_free(struct beside *beside) {
    free(beside->lengths.bound);
    free(beside->bound);
}
