/* An emission or a beam whose given quantities are off by a factor: for tolerances and sensitivities. */
#include <beamward/beam.h>

#include <math.h>

enum { QUANTITIES = 5, ENOUGH = 3 };

/* Of the pulses inside a burst, even if each burst has but one. */
static double innermost_rate_hz(const struct bw_emission_input *input, const struct bw_emission *whole) {
    double of_energy_hz = input->average_power_w / input->pulse_energy_j;
    if (!isnan(input->repetition_rate_hz))
        return input->repetition_rate_hz;
    return isnan(of_energy_hz) ? whole->repetition_rate_hz : of_energy_hz;
}

/* More than three quantities of the pulses would contradict each other as soon as one of them changes. What is metered
 * or set stays: the average power, the rate and the duration; where one of these was not given, the energy or the peak
 * stands for it. */
static void keep_enough(struct bw_emission_input *input, const struct bw_emission *whole) {
    double *all[QUANTITIES] = {&input->average_power_w, &input->repetition_rate_hz, &input->pulse_duration_s,
                               &input->pulse_energy_j, &input->peak_power_w};
    double rate_hz = innermost_rate_hz(input, whole);
    double values[QUANTITIES] = {whole->pulse_energy_j * rate_hz, rate_hz, whole->pulse_duration_s,
                                 whole->pulse_energy_j, whole->peak_power_w};
    size_t given = 0, kept = 0;
    for (size_t i = 0; i < QUANTITIES; i++)
        given += isnan(*all[i]) ? 0 : 1;
    if (given <= ENOUGH || whole->continuous)
        return;
    bool no_duration = isnan(input->pulse_duration_s); /* average, rate and energy would be one law */
    for (size_t i = 0; i < QUANTITIES; i++) {
        bool keep = !isnan(*all[i]) && kept < ENOUGH && !(no_duration && all[i] == &input->pulse_energy_j);
        *all[i] = keep ? values[i] : nan("");
        kept += keep ? 1 : 0;
    }
}

/* An emission with what was given so many times as large.
 * Given:    given     as for bw_emission_resolve
 *           power     factor of average power, peak power and pulse energy, whichever were given
 *           duration  factor of the pulse duration, rate of the repetition rate; 1 = as given (Notes)
 * Returned: emission  as bw_emission_resolve leaves it
 * Returns:  as bw_emission_resolve
 * Notes:    1) What was not given follows: with average power, duration and rate given, a longer pulse has the same
 *              energy; with the peak given, a larger one.
 *           2) Pulses that would overlap are cut where the next one begins.
 *           3) A quantity that was not given does not change; nor do bursts and gates: at another rate a burst of so
 *              many pulses takes another time, and one of such a length holds another number.
 *           4) Of a list of pulses only the power changes. */
enum bw_status bw_emission_varied(const struct bw_emission_input *given, double power, double duration, double rate,
                                  struct bw_emission *emission, struct bw_error *error) {
    struct bw_emission_input input = *given;
    enum bw_status status = bw_emission_resolve(given, emission, error);
    if (status != BW_OK)
        return status;
    if (!(power > 0. && power < HUGE_VAL)) {
        emission->average_power_w = emission->peak_power_w = emission->pulse_energy_j = nan("");
        return bw_error_set(error, BW_ARGUMENT, "power is %g times what was given; it must be above 0", power);
    }
    keep_enough(&input, emission);
    if (!emission->continuous && !isnan(input.pulse_duration_s)) {
        double rate_hz = innermost_rate_hz(&input, emission) * (isnan(input.repetition_rate_hz) ? 1. : rate);
        input.pulse_duration_s = fmin(input.pulse_duration_s * duration, 1. / rate_hz);
    }
    struct bw_timing timing = given->timing != NULL ? *given->timing : bw_timing_none();
    if (!isnan(timing.burst_pulses) && !isnan(input.repetition_rate_hz))
        timing.burst_on_s = nan(""); /* so many pulses, however long they take: it would contradict another rate */
    input.timing = given->timing != NULL ? &timing : NULL;
    input.repetition_rate_hz *= rate;
    status = bw_emission_resolve(&input, emission, error);
    /* All powers and energies are proportional, whichever of them were given. */
    emission->average_power_w *= power;
    emission->peak_power_w *= power;
    emission->pulse_energy_j *= power;
    return status;
}

/* A beam with the diameter and the divergence that were given so many times as large.
 * Given:    beam; diameter, divergence  factors, above 0
 * Returns:  the beam
 * Notes:    With a lens (a waist in front of the exit) both were given at the lens: the diameter there sets the
 *           divergence behind the waist, and the divergence there the width of the waist. */
struct bw_beam bw_beam_varied(const struct bw_beam *beam, double diameter, double divergence) {
    struct bw_beam varied = *beam;
    bool lens = beam->waist_m > 0.;
    varied.diameter_m *= lens ? divergence : diameter;
    varied.divergence_rad *= lens ? diameter : divergence;
    varied.exit_diameter_m *= diameter;
    varied.diameter_y_m *= lens ? divergence : diameter;
    varied.divergence_y_rad *= lens ? diameter : divergence;
    varied.exit_diameter_y_m *= diameter;
    return varied;
}
