/* Pulses inside bursts inside a gate, and trains that end: what is known of the timing made complete.
 *
 * Every level opens with what it holds, and what has begun while it is on is finished, as a laser does that is told to
 * stop between its pulses. So all pulses are alike, and a gate that closes within one counts the whole of it: the safe
 * side. A continuous emission inside a burst or a gate is a train of pulses as long as that is on. */
#include "internal.h"

#include <math.h>

static const double hair = 1e-9; /* rounding of what was typed: 0.3 s of 10 Hz hold 3 pulses, not 4 */

struct bw_timing bw_timing_none(void) {
    double none = nan("");
    return (struct bw_timing){none, none, none, none, none, none, none, NULL, 0};
}

/* What is known of one level. */
struct level_input {
    const char *name; /* "burst" */
    double on_s, period_s, holds;
};

static enum bw_status check_between(const char *name, double value, double least, double most, const char *unit,
                                    struct bw_error *error) {
    if (isnan(value) || (value >= least && value <= most))
        return BW_OK;
    return bw_error_set(error, BW_ARGUMENT, "%s is %g%s, outside %g to %g%s", name, value, unit, least, most, unit);
}

static enum bw_status check_whole(const char *name, double value, double most, struct bw_error *error) {
    if (isnan(value) || (value >= 1. && value <= most && !(floor(value) < value)))
        return BW_OK;
    return bw_error_set(error, BW_ARGUMENT, "%s is %g; a whole number from 1 to %g would be right", name, value, most);
}

static enum bw_status check_ranges(const struct bw_timing *timing, struct bw_error *error) {
    const struct {
        const char *name;
        double value, least, most;
        const char *unit;
    } rows[] = {
        {"burst on-time", timing->burst_on_s, 1e-15, 3e4, " s"},
        {"burst period", timing->burst_period_s, 1e-15, 1e6, " s"},
        {"burst rate", timing->burst_rate_hz, 1e-6, 1e12, " Hz"},
        {"gate on-time", timing->gate_on_s, 1e-15, 3e4, " s"},
        {"gate period", timing->gate_period_s, 1e-15, 1e6, " s"},
    };
    enum bw_status status = check_whole("pulse count", timing->pulse_count, 1e9, error);
    if (status == BW_OK)
        status = check_whole("number of pulses in a burst", timing->burst_pulses, 1e9, error);
    for (size_t i = 0; i < sizeof rows / sizeof *rows && status == BW_OK; i++)
        status = check_between(rows[i].name, rows[i].value, rows[i].least, rows[i].most, rows[i].unit, error);
    return status;
}

/* Period and rate of the bursts are one quantity; where both are given, the shorter period holds. */
static enum bw_status burst_period(const struct bw_timing *timing, double *period_s, struct bw_error *error) {
    double of_rate_s = 1. / timing->burst_rate_hz;
    *period_s = fmin(timing->burst_period_s, of_rate_s); /* that which is given, if only one is */
    if (isnan(timing->burst_period_s) || isnan(of_rate_s))
        return BW_OK;
    if (!(fabs(timing->burst_period_s - of_rate_s) <= bw_beam_agreement * of_rate_s))
        return bw_error_set(error, BW_INPUT,
                            "burst period %.6g s, but a burst rate of %.6g Hz gives %.6g s: %.3g %% off; leave one of "
                            "them out or correct one",
                            timing->burst_period_s, timing->burst_rate_hz, of_rate_s,
                            100. * fabs(timing->burst_period_s / of_rate_s - 1.));
    return BW_OK;
}

static enum bw_status check_on(const struct level_input *level, struct bw_error *error) {
    if (isnan(level->on_s) || level->on_s <= level->period_s * (1. + hair))
        return BW_OK;
    return bw_error_set(error, BW_INPUT, "the %s is on for %.6g s, %.6g times its period of %.6g s; it must be at most "
                        "once", level->name, level->on_s, level->on_s / level->period_s, level->period_s);
}

/* Returned: levels  innermost first, those of which anything is given. */
static enum bw_status read_levels(const struct bw_timing *timing, struct level_input levels[BW_LEVELS_MAX],
                                  size_t *count, struct bw_error *error) {
    struct level_input burst = {"burst", timing->burst_on_s, nan(""), timing->burst_pulses};
    struct level_input gate = {"gate", timing->gate_on_s, timing->gate_period_s, nan("")};
    enum bw_status status = burst_period(timing, &burst.period_s, error);
    *count = 0;
    if (status != BW_OK)
        return status;
    if (!isnan(burst.on_s) || !isnan(burst.holds) || !isnan(burst.period_s)) {
        if (isnan(burst.period_s))
            return bw_error_set(error, BW_INPUT, "the bursts have no period; give the burst period or burst rate");
        if (isnan(burst.on_s) && isnan(burst.holds))
            return bw_error_set(error, BW_INPUT, "the bursts have no length; give the burst on-time or the number of "
                                                 "pulses in a burst");
        levels[(*count)++] = burst;
    }
    if (isnan(gate.on_s) != isnan(gate.period_s))
        return bw_error_set(error, BW_INPUT, "gate on-time and gate period need each other; only one is given");
    if (!isnan(gate.on_s))
        levels[(*count)++] = gate;
    for (size_t i = 0; i < *count && status == BW_OK; i++)
        status = check_on(&levels[i], error);
    return status;
}

/* ---- a continuous emission that is switched ------------------------------------------------------ */

static bool steady_while_on(const struct bw_emission_input *input) {
    return isnan(input->pulse_energy_j) && isnan(input->pulse_duration_s) && isnan(input->repetition_rate_hz);
}

/* While it is on, average and peak power are the same. */
static enum bw_status power_while_on(const struct bw_emission_input *input, struct bw_emission *emission,
                                     struct bw_error *error) {
    struct bw_emission_input steady = *input;
    double average_w = input->average_power_w, peak_w = input->peak_power_w;
    if (!isnan(average_w) && !isnan(peak_w) && !(fabs(average_w - peak_w) <= bw_beam_agreement * peak_w))
        return bw_error_set(error, BW_INPUT,
                            "average power %.6g W and peak power %.6g W differ by %.3g %%, but while the emission is "
                            "on they are the same; leave one of them out, or give the pulses inside",
                            average_w, peak_w, 100. * fabs(average_w / peak_w - 1.));
    steady.average_power_w = isnan(average_w) ? peak_w : isnan(peak_w) ? average_w : fmax(average_w, peak_w);
    steady.peak_power_w = nan("");
    return bw_beam_resolve_train(&steady, false, emission, error);
}

/* The innermost level cuts a steady power into pulses. */
static enum bw_status cut_into_pulses(const struct level_input *level, struct bw_emission *emission,
                                      struct bw_error *error) {
    if (isnan(level->on_s))
        return bw_error_set(error, BW_INPUT, "a number of pulses in a burst is given, but the emission inside is "
                                             "continuous; give the pulses as well, or the burst on-time alone");
    if (level->on_s >= level->period_s * (1. - hair))
        return check_on(level, error); /* never off */
    emission->continuous = false;
    emission->pulse_duration_s = level->on_s;
    emission->pulse_energy_j = emission->peak_power_w * level->on_s;
    emission->repetition_rate_hz = 1. / level->period_s;
    return BW_OK;
}

/* ---- levels -------------------------------------------------------------------------------------- */

/* From one to the next of what the outermost level so far holds, and how long one of it lasts. */
static double unit_s(const struct bw_emission *emission) {
    return emission->level_count > 0 ? emission->levels[emission->level_count - 1].period_s
                                     : 1. / emission->repetition_rate_hz;
}

static double length_s(const struct bw_emission *emission) {
    double length = emission->pulse_duration_s, unit = 1. / emission->repetition_rate_hz;
    for (size_t i = 0; i < emission->level_count; i++) {
        length += (emission->levels[i].holds - 1.) * unit;
        unit = emission->levels[i].period_s;
    }
    return length;
}

static const char *inside(const struct bw_emission *emission) {
    return emission->level_count > 0 ? "burst" : "pulse";
}

/* How many of what is inside begin while the level is on. */
static enum bw_status count_inside(const struct level_input *level, const struct bw_emission *emission, double *holds,
                                   struct bw_error *error) {
    double unit = unit_s(emission);
    double begun = fmax(1., ceil(level->on_s / unit * (1. - hair)));
    *holds = isnan(level->holds) ? begun : level->holds;
    if (isnan(level->on_s) || isnan(level->holds))
        return BW_OK;
    double least_s = (level->holds - 1.) * unit, most_s = level->holds * unit;
    if (!(level->on_s > least_s * (1. - bw_beam_agreement) && level->on_s <= most_s * (1. + bw_beam_agreement)))
        return bw_error_set(error, BW_INPUT,
                            "a %s of %.6g s holds %.9g %ss %.6g s apart, but %.9g are given: %.3g %% off; leave one of "
                            "them out or correct one",
                            level->name, level->on_s, begun, inside(emission), unit, level->holds,
                            100. * fabs(level->holds / begun - 1.));
    return BW_OK;
}

static void every(struct bw_emission *emission, double period_s) {
    if (emission->level_count > 0)
        emission->levels[emission->level_count - 1].period_s = period_s;
    else
        emission->repetition_rate_hz = 1. / period_s;
}

static enum bw_status add_level(const struct level_input *level, struct bw_emission *emission,
                                struct bw_error *error) {
    double unit = unit_s(emission), holds;
    enum bw_status status = count_inside(level, emission, &holds, error);
    if (status != BW_OK)
        return status;
    double lasts_s = (holds - 1.) * unit + length_s(emission);
    if (!(lasts_s <= level->period_s * (1. + hair)))
        return bw_error_set(error, BW_INPUT,
                            "the %.9g %ss of a %s last %.6g s until the last one has ended, but the next %s begins "
                            "after %.6g s: %.3g %% too long",
                            holds, inside(emission), level->name, lasts_s, level->name, level->period_s,
                            100. * (lasts_s / level->period_s - 1.));
    if (!(holds > 1.)) {
        every(emission, level->period_s); /* one of it: its period is the level's */
        return BW_OK;
    }
    double on_s = isnan(level->on_s) ? holds * unit : level->on_s;
    emission->levels[emission->level_count++] = (struct bw_level){on_s, level->period_s, holds};
    return BW_OK;
}

/* A level after which it goes on as evenly as inside changes nothing. */
static void drop_even_levels(struct bw_emission *emission) {
    double unit = 1. / emission->repetition_rate_hz;
    for (size_t i = 0; i < emission->level_count;) {
        struct bw_level *level = &emission->levels[i];
        if (!(fabs(level->holds * unit - level->period_s) <= 1e-12 * level->period_s)) {
            unit = level->period_s;
            i++;
            continue;
        }
        if (i + 1 < emission->level_count) {
            level[1].holds *= level->holds;
            level[0] = level[1];
        }
        emission->level_count--;
    }
}

/* ---- the whole ------------------------------------------------------------------------------------ */

/* Pulses that one period of the outermost level holds. */
static double pulses_inside(const struct bw_emission *emission) {
    double pulses = 1.;
    for (size_t i = 0; i < emission->level_count; i++)
        pulses *= emission->levels[i].holds;
    return pulses;
}

static void find_average(struct bw_emission *emission) {
    double energy_j = emission->pulse_energy_j;
    if (emission->pulse_count > 0) {
        double last = (double)emission->pulse_count - 1.;
        emission->average_power_w = energy_j * (last + 1.) /
                                    (bw_train_span_s(emission, 0., last) + emission->pulse_duration_s);
        return;
    }
    if (emission->level_count == 0) {
        emission->average_power_w = energy_j * emission->repetition_rate_hz;
        return;
    }
    emission->average_power_w =
        energy_j * pulses_inside(emission) / emission->levels[emission->level_count - 1].period_s;
}

/* So many pulses without a gap between them last as long as a burst that is on for their time. */
static void join_pulses(const struct bw_emission_input *inner, struct level_input *level) {
    double each_s = isnan(inner->repetition_rate_hz) ? inner->pulse_duration_s : 1. / inner->repetition_rate_hz;
    if (!isnan(level->holds) && !isnan(each_s))
        level->on_s = isnan(level->on_s) ? level->holds * each_s : fmax(level->on_s, level->holds * each_s);
}

/* The innermost train; its rate follows from a burst's length and number of pulses if it is not given itself. */
static enum bw_status resolve_innermost(const struct bw_emission_input *input, struct level_input *levels,
                                        size_t level_count, struct bw_emission *emission, struct bw_error *error) {
    struct bw_emission_input inner = *input;
    bool single = level_count == 0 && input->timing->pulse_count <= 1. && isnan(input->repetition_rate_hz) &&
                  isnan(input->average_power_w);
    if (level_count > 0 && steady_while_on(input) && isnan(levels[0].holds))
        return power_while_on(input, emission, error);
    if (level_count > 0 && isnan(inner.repetition_rate_hz))
        inner.repetition_rate_hz = levels[0].holds / levels[0].on_s;
    enum bw_status status = bw_beam_resolve_train(&inner, single, emission, error);
    if (status == BW_OK && level_count > 0 && emission->continuous)
        join_pulses(&inner, &levels[0]);
    return status;
}

static enum bw_status limit_count(double count, struct bw_emission *emission, struct bw_error *error) {
    if (isnan(count))
        return BW_OK;
    if (emission->continuous)
        return bw_error_set(error, BW_INPUT, "a pulse count is given, but the emission is continuous; give pulse "
                                             "energy or peak power, and pulse duration");
    emission->pulse_count = (size_t)count;
    while (emission->level_count > 0 && count <= pulses_inside(emission))
        emission->level_count--; /* it never comes round */
    return BW_OK;
}

enum bw_status bw_beam_resolve_timed(const struct bw_emission_input *input, struct bw_emission *emission,
                                     struct bw_error *error) {
    struct level_input levels[BW_LEVELS_MAX];
    size_t level_count = 0, inner = 0;
    enum bw_status status = check_ranges(input->timing, error);
    if (status == BW_OK)
        status = read_levels(input->timing, levels, &level_count, error);
    if (status == BW_OK)
        status = resolve_innermost(input, levels, level_count, emission, error);
    while (status == BW_OK && emission->continuous && inner < level_count)
        status = cut_into_pulses(&levels[inner++], emission, error);
    for (; status == BW_OK && inner < level_count; inner++)
        status = add_level(&levels[inner], emission, error);
    if (status == BW_OK && !emission->continuous)
        drop_even_levels(emission);
    if (status == BW_OK)
        status = limit_count(input->timing->pulse_count, emission, error);
    if (status == BW_OK && !emission->continuous)
        find_average(emission);
    return status;
}
