/* What a regular train of rectangular pulses sends in a window of time. Closed forms: the cost does not
 * depend on the number of pulses. */
#include <beamward/beam.h>

#include <math.h>

/* Periods in a time; a whole number to within rounding is that number (10 s of 5000 Hz are 50000, not
 * 50000 and a hair). */
static double periods(const struct bw_emission *emission, double time_s) {
    double count = time_s * emission->repetition_rate_hz;
    double whole = round(count);
    return fabs(count - whole) <= 1e-14 * whole ? whole : count;
}

/* Largest energy in any window of a length: the window opens with a pulse, holds k whole periods and the
 * beginning of the next pulse.   W = k Q + Q min(1, (t - k T) / d)
 * Given:    emission
 *           window_s   t   length [s], 0 or more
 * Returns:  W [J]; NAN if the length is NaN or negative
 * Notes:    Opening with a pulse is the worst: moving the window later loses at the front at least as fast
 *           as it gains at the back. W is continuous and never falls with t. */
double bw_train_window_energy(const struct bw_emission *emission, double window_s) {
    if (!(window_s >= 0.))
        return nan("");
    if (emission->continuous)
        return emission->average_power_w * window_s;
    double count = periods(emission, window_s);
    if (!(count < HUGE_VAL))
        return HUGE_VAL;
    double whole = floor(count);
    double rest_s = (count - whole) / emission->repetition_rate_hz;
    return emission->pulse_energy_j * (whole + fmin(1., rest_s / emission->pulse_duration_s));
}

/* Pulses, whole or begun, of an exposure that opens with a pulse.
 * Given:    emission
 *           exposure_s   length [s], 0 or more
 * Returns:  number of pulses, 1 for a continuous emission, 0 for no time; NAN if the time is NaN or negative */
double bw_train_pulse_count(const struct bw_emission *emission, double exposure_s) {
    if (!(exposure_s >= 0.))
        return nan("");
    if (!(exposure_s > 0.))
        return 0.;
    return emission->continuous ? 1. : fmax(1., ceil(periods(emission, exposure_s)));
}
