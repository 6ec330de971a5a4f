/* A train as measured: a list of rectangular pulses, whatever their lengths, energies and distances. */
#include "internal.h"

#include <math.h>

/* Two starts in one file are decimal numbers, so an end and the next start may differ by their rounding. */
static const double rounding = 1e-15;

static const struct {
    const char *name, *unit;
    double least, most;
} ranges[] = {{"start", "s", -1e9, 1e9}, {"duration", "s", 1e-15, 3e4}, {"energy", "J", 1e-18, 1e6}};

/* Whether a pulse may stand where it stands.
 * Given:    pulses; index  of the pulse; those before it are sound
 * Returns:  BW_OK; BW_INPUT: a value out of range, not after the pulse before, or begun before that one has ended */
enum bw_status bw_pulses_check(const struct bw_pulse *pulses, size_t index, struct bw_error *error) {
    const struct bw_pulse *pulse = &pulses[index], *before = index > 0 ? pulse - 1 : NULL;
    const double values[] = {pulse->start_s, pulse->duration_s, pulse->energy_j};
    for (size_t i = 0; i < sizeof values / sizeof *values; i++)
        if (!(values[i] >= ranges[i].least && values[i] <= ranges[i].most))
            return bw_error_set(error, BW_INPUT, "%s is %g %s, outside %g to %g %s", ranges[i].name, values[i],
                                ranges[i].unit, ranges[i].least, ranges[i].most, ranges[i].unit);
    if (before == NULL)
        return BW_OK;
    double since_s = pulse->start_s - before->start_s;
    if (!(since_s > 0.))
        return bw_error_set(error, BW_INPUT, "starts at %.12g s, not after the pulse before it (%.12g s)",
                            pulse->start_s, before->start_s);
    if (!(since_s >= before->duration_s - rounding * fmax(fabs(pulse->start_s), before->duration_s)))
        return bw_error_set(error, BW_INPUT, "starts at %.12g s, %.3g s before the pulse before it ends",
                            pulse->start_s, before->duration_s - since_s);
    return BW_OK;
}

static double end_after_s(const struct bw_pulse *from, const struct bw_pulse *pulse) {
    return pulse->start_s - from->start_s + pulse->duration_s;
}

/* A sum that keeps what rounding loses (A. Neumaier, ZAMM 54, 1974). */
struct sum {
    double whole, lost;
};

static void add(struct sum *sum, double value) {
    double next = sum->whole + value;
    sum->lost += fabs(sum->whole) >= fabs(value) ? sum->whole - next + value : value - next + sum->whole;
    sum->whole = next;
}

/* ---- as an emission ------------------------------------------------------------------------------- */

static enum bw_status check_list(const struct bw_emission_input *input, struct bw_error *error) {
    const struct bw_timing *t = input->timing;
    const double others[] = {input->average_power_w,  input->peak_power_w, input->pulse_energy_j,
                             input->pulse_duration_s, input->repetition_rate_hz, t->pulse_count,
                             t->burst_on_s,           t->burst_period_s,   t->burst_pulses,
                             t->burst_rate_hz,        t->gate_on_s,        t->gate_period_s};
    for (size_t i = 0; i < sizeof others / sizeof *others; i++)
        if (!isnan(others[i]))
            return bw_error_set(error, BW_INPUT, "the pulses are given as a list; no power, energy, duration, rate, "
                                                 "count, burst or gate may be given beside it");
    if (t->pulses_given < 1 || t->pulses_given > BW_PULSES_MAX)
        return bw_error_set(error, BW_INPUT, "the list has %zu pulses; 1 to %d would be right", t->pulses_given,
                            BW_PULSES_MAX);
    for (size_t i = 0; i < t->pulses_given; i++) {
        struct bw_error reason = {.status = BW_OK};
        if (bw_pulses_check(t->pulses, i, &reason) != BW_OK)
            return bw_error_set(error, BW_INPUT, "pulse %zu: %s", i + 1, reason.text);
    }
    return BW_OK;
}

enum bw_status bw_beam_resolve_list(const struct bw_emission_input *input, struct bw_emission *emission,
                                    struct bw_error *error) {
    enum bw_status status = check_list(input, error);
    if (status != BW_OK)
        return status;
    const struct bw_pulse *pulses = input->timing->pulses, *largest = pulses;
    size_t count = input->timing->pulses_given;
    struct sum energy_j = {0., 0.};
    double peak_w = 0.;
    for (size_t i = 0; i < count; i++) {
        add(&energy_j, pulses[i].energy_j);
        peak_w = fmax(peak_w, pulses[i].energy_j / pulses[i].duration_s);
        if (pulses[i].energy_j > largest->energy_j)
            largest = &pulses[i];
    }
    emission->wavelength_nm = input->wavelength_nm;
    emission->average_power_w = (energy_j.whole + energy_j.lost) / end_after_s(pulses, &pulses[count - 1]);
    emission->peak_power_w = peak_w;
    emission->pulse_energy_j = largest->energy_j;
    emission->pulse_duration_s = largest->duration_s;
    emission->repetition_rate_hz = 0.;
    emission->pulse_count = count;
    emission->pulses = pulses;
    return BW_OK;
}

/* ---- windows -------------------------------------------------------------------------------------- */

/* Windows that open with a pulse: how many pulses begin before the window ends. */
static size_t begun(const struct bw_emission *emission, size_t first, size_t after, double window_s) {
    while (after < emission->pulse_count &&
           emission->pulses[after].start_s - emission->pulses[first].start_s < window_s * (1. - 1e-14))
        after++;
    return after;
}

double bw_beam_list_pulse_count(const struct bw_emission *emission, double exposure_s) {
    size_t most = 0;
    for (size_t i = 0, after = 0; i < emission->pulse_count; i++) {
        after = begun(emission, i, after, exposure_s);
        most = after - i > most ? after - i : most;
    }
    return (double)most;
}

/* Both the windows that open with a pulse and those that close with one: their largest is the largest of all. */
double bw_beam_list_window_energy(const struct bw_emission *emission, double window_s) {
    const struct bw_pulse *pulses = emission->pulses;
    struct sum opening = {0., 0.}, closing = {0., 0.};
    if (window_s >= 0. && window_s <= 0.)
        return 0.; /* no time, no energy; below, nothing would be divided by nothing */
    double largest_j = 0., list_j = 0.;
    for (size_t i = 0, after = 0, before = 0; i < emission->pulse_count && window_s > 0.; i++) {
        list_j = fmax(list_j, pulses[i].energy_j);
        for (size_t next = begun(emission, i, after, window_s); after < next; after++)
            add(&opening, pulses[after].energy_j);
        double beyond_s = fmax(0., end_after_s(&pulses[i], &pulses[after - 1]) - window_s);
        double cut_j = pulses[after - 1].energy_j * fmin(1., beyond_s / pulses[after - 1].duration_s);
        largest_j = fmax(largest_j, opening.whole - cut_j + opening.lost);
        add(&opening, -pulses[i].energy_j);

        add(&closing, pulses[i].energy_j);
        while (before < i && !(end_after_s(&pulses[before], &pulses[i]) - pulses[before].duration_s < window_s))
            add(&closing, -pulses[before++].energy_j);
        beyond_s = fmax(0., end_after_s(&pulses[before], &pulses[i]) - window_s);
        cut_j = pulses[before].energy_j * fmin(1., beyond_s / pulses[before].duration_s);
        largest_j = fmax(largest_j, closing.whole - cut_j + closing.lost);
    }
    return largest_j * (emission->pulse_energy_j / list_j);
}
