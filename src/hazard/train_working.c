/* The working of a train's limits: the rows at the times that decide, then each rule. */
#include "internal.h"

#include <math.h>

static const char *const symbols[BW_RULES] = {"H1", "H2", "H3"};

/* The rows at one time, once. */
static void write_rows(const struct train_case *train, const struct tally tallies[BW_EFFECTS], size_t effect,
                       size_t rule, struct bw_working *working) {
    double time_s = tallies[effect].rules[rule].window.time_s;
    for (size_t i = 0; i <= effect; i++)
        for (size_t j = 0; j < (i == effect ? rule : BW_RULES); j++) {
            const struct finding *before = &tallies[i].rules[j];
            if (before->found && before->window.time_s <= time_s && before->window.time_s >= time_s)
                return;
        }
    struct bw_limit_set set;
    struct bw_exposure exposure = bw_hazard_exposure(train, time_s);
    bw_working_heading(working, "Limits for %g s", time_s);
    bw_limits(train->table, train->viewing->target, &exposure, &set, working, NULL);
}

/* n of a list is energy: that of the pulse or the window over that of the largest pulse. */
static const char *formula_of(const struct bw_emission *emission, size_t rule) {
    bool list = emission->pulses != NULL;
    if (rule == BW_RULE_TRAIN)
        return list ? "C H(t) / n, each pulse or group of n times the largest energy corrected by the train"
                    : "C H(t) / n, each pulse corrected by the train";
    if (rule == BW_RULE_SINGLE)
        return list ? "H(d) / n, lowest of all pulses, of n times the largest energy" : "H(d), each pulse by itself";
    return list ? "H(t) / n, lowest over all windows of n times the largest energy"
                : "H(t) / n, lowest over all windows of n pulses";
}

static void write_rule(const struct train_case *train, const struct tally *tally, size_t rule, double value,
                       struct bw_working *working) {
    const struct finding *finding = &tally->rules[rule];
    const struct window *window = &finding->window;
    double limit_j_m2 = bw_hazard_whole_limit_j_m2(&finding->limit, train->viewing->subtense_rad);
    const char *source = finding->limit.source.clause;
    if (train->viewing->subtense_rad > finding->limit.acceptance_rad)
        bw_working_step(working, "H", limit_j_m2, "J/m2", source,
                        "H (alpha / acceptance)^2, of the whole exposure: the cone admits only its share",
                        "%.6g J/m2 x (%.6g / %.6g)^2, t = %.9g s", finding->limit.radiant_exposure_j_m2,
                        train->viewing->subtense_rad, finding->limit.acceptance_rad, window->time_s);
    if (train->emission->continuous)
        bw_working_step(working, symbols[rule], value, "J/m2", source, "H(t), t the exposure", "%.6g J/m2, t = %.9g s",
                        limit_j_m2, window->time_s);
    else if (rule == BW_RULE_TRAIN)
        bw_working_step(working, symbols[rule], value, "J/m2", source, formula_of(train->emission, rule),
                        "%.6g x %.6g J/m2 / %.9g, t = %.6g s, N = %.9g", finding->correction, limit_j_m2, window->holds,
                        window->time_s, tally->pulses);
    else
        bw_working_step(working, symbols[rule], value, "J/m2", source,
                        formula_of(train->emission, rule),
                        "%.6g J/m2 / %.9g, t = %.9g s", limit_j_m2, window->holds, window->time_s);
}

/* The limit of a pulse as one of the mean power: both are the same share of the pulses' own. */
static void write_mean(const struct bw_emission *emission, const struct bw_train_limit *limit,
                       struct bw_working *working) {
    if (emission->pulse_count == 0 && emission->level_count == 0)
        bw_working_step(working, "E_limit", limit->irradiance_w_m2, "W/m2", NULL, "H f", "%.6g J/m2 x %.9g Hz",
                        limit->per_pulse_j_m2, emission->repetition_rate_hz);
    else
        bw_working_step(working, "E_limit", limit->irradiance_w_m2, "W/m2", NULL,
                        emission->pulse_count > 0 ? "H P / Q, P the mean from the first pulse to the end of the last"
                                                  : "H P / Q, P the mean of all bursts and gaps",
                        "%.6g J/m2 x %.9g W / %.9g J", limit->per_pulse_j_m2, emission->average_power_w,
                        emission->pulse_energy_j);
}

static void write_effect(const struct train_case *train, const struct tally *tally, const struct bw_train_limit *limit,
                         struct bw_working *working) {
    bw_working_heading(working, "Rules for %s", bw_effect_name(limit->limit.effect));
    for (size_t rule = 0; rule < BW_RULES; rule++)
        if (tally->rules[rule].found)
            write_rule(train, tally, rule, limit->rules_j_m2[rule], working);
    bw_working_step(working, "H", limit->per_pulse_j_m2, "J/m2", NULL, "the lowest rule", "%s",
                    bw_train_rule_name(limit->rule));
    if (train->emission->continuous)
        bw_working_step(working, "E_limit", limit->irradiance_w_m2, "W/m2", NULL, "H / t_e", "%.6g J/m2 / %.9g s",
                        limit->per_pulse_j_m2, train->viewing->exposure_s);
    else
        write_mean(train->emission, limit, working);
    if (limit->aperture_m < limit->limit.aperture_m)
        bw_working_step(
            working, "D", limit->aperture_m, "m", NULL,
            "the lowest H D^2 of all windows over the lowest H: a narrow beam is bound by a smaller aperture", NULL);
}

void bw_hazard_train_working(const struct train_case *train, const struct tally tallies[BW_EFFECTS],
                             const struct bw_train_limit_set *limits, struct bw_working *working) {
    for (size_t i = 0; i < limits->count; i++) {
        size_t effect = limits->limits[i].limit.effect;
        for (size_t rule = 0; rule < BW_RULES; rule++)
            if (tallies[effect].rules[rule].found)
                write_rows(train, tallies, effect, rule, working);
    }
    for (size_t i = 0; i < limits->count; i++)
        write_effect(train, &tallies[limits->limits[i].limit.effect], &limits->limits[i], working);
}
