/* The working of a train's limits: the rows at the times that decide, then each rule. */
#include "internal.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

typedef char number[BW_NUMBER_SIZE];

static const char *text(number out, double value) {
    return bw_working_number(out, value);
}

/* What floor and ceil take: all digits, where ten are not all. */
static const char *whole_text(number out, double value) {
    text(out, value);
    double back;
    if (!bw_parse_number(out, &back) || !(fabs(back - value) <= 1e-15 * fabs(value)))
        snprintf(out, BW_NUMBER_SIZE, "%.17g", value);
    return out;
}

static const char *source_words(char out[BW_REASON_SIZE], const struct bw_source_note *source) {
    snprintf(out, BW_REASON_SIZE, "%s, %s %s, %s%s", source->table, source->section, source->row, source->clause,
             source->known == BW_MEMORY ? ", from memory" : "");
    return out;
}

enum { SUM_SIZE = 240 };

/* ---- windows ------------------------------------------------------------------------------------ */

/* Energy of a window of time, in pulses: the closed form of a regular train. */
static double regular_holds(const struct bw_emission *emission, double time_s) {
    double whole = floor(time_s * emission->repetition_rate_hz * (1. + 1e-14));
    double rest_s = time_s - whole / emission->repetition_rate_hz;
    return whole + fmin(1., fmax(0., rest_s) / emission->pulse_duration_s);
}

/* Pulses at one rate and nothing else: what the closed forms here are for. */
static bool is_plain(const struct bw_emission *emission) {
    return emission->level_count == 0 && emission->pulses == NULL && emission->repetition_rate_hz > 0.;
}

static bool agree(double a, double b) {
    return fabs(a - b) <= 1e-9 * fabs(b);
}

/* A window's length and what it holds. */
static void write_window(const struct train_case *train, const struct window *window, struct bw_working *working) {
    const struct bw_emission *emission = train->emission;
    number t, f, d, n;
    bool plain = is_plain(emission);
    double spaced_s = (window->holds - 1.) / emission->repetition_rate_hz + emission->pulse_duration_s;
    bool by_pulses = plain && window->holds >= 2. && fabs(spaced_s - window->time_s) <= 1e-12 * window->time_s;
    text(f, emission->repetition_rate_hz);
    text(d, emission->pulse_duration_s);
    text(n, window->holds);
    if (by_pulses) {
        bw_working_step(working, "n", window->holds, "pulses", NULL, NULL, NULL);
        bw_working_note(working, "of all numbers of pulses the one with the lowest H(t) / n");
        bw_working_step(working, "t", window->time_s, "s", NULL, "(n - 1) / f + d", "(%s - 1) / %s + %s", n, f, d);
        bw_working_note(working, "from the beginning of the first pulse to the end of the last");
        return;
    }
    bool exposure = window->time_s >= train->viewing->exposure_s;
    text(t, window->time_s);
    bw_working_step(working, "t", window->time_s, "s", NULL, exposure ? "te" : NULL, "%s", exposure ? t : "");
    if (window->alone || window->holds <= 1.)
        bw_working_note(working, "the exposure holds one pulse, which rule 1 judges");
    else
        bw_working_note(working, "of all windows the one with the lowest H(t) / n%s",
                        exposure ? ": the exposure"
                        : plain  ? ": here the limit changes its law"
                                 : "");
    bool regular = plain && agree(regular_holds(emission, window->time_s), window->holds);
    whole_text(t, window->time_s);
    whole_text(f, emission->repetition_rate_hz);
    if (regular && window->time_s * emission->repetition_rate_hz < 1.)
        bw_working_step(working, "n", window->holds, "pulses", NULL, "min(1, t / d)", "min(1, %s / %s)", t, d);
    else if (regular)
        bw_working_step(working, "n", window->holds, "pulses", NULL, "floor(t f) + min(1, (t - floor(t f) / f) / d)",
                        "floor(%s * %s) + min(1, (%s - floor(%s * %s) / %s) / %s)", t, f, t, t, f, f, d);
    else
        bw_working_step(working, "n", window->holds, "pulses", NULL, NULL, NULL);
    bw_working_note(working,
                    regular ? "the most that a window of this length holds: whole periods, and what begins after them"
                    : emission->pulses != NULL
                        ? "the most energy in any window of this length, over that of the largest pulse; searched"
                        : "the most that any window of this length holds, by the bursts and gates; counted");
}

/* N groups, and what one of them holds. counted: the time that pulses are counted in. */
static void write_groups(const struct train_case *train, double pulses, const struct window *group, double counted_s,
                         struct bw_working *working) {
    const struct bw_emission *emission = train->emission;
    number t, ti, f, d, all;
    whole_text(t, counted_s);
    whole_text(ti, group->time_s);
    whole_text(f, emission->repetition_rate_hz);
    text(d, emission->pulse_duration_s);
    double met = is_plain(emission) ? bw_train_pulse_count(emission, counted_s) : nan("");
    double groups = floor((met - 1.) / emission->repetition_rate_hz / group->time_s * (1. + 1e-12)) + 1.;
    if (is_plain(emission) && emission->pulse_count == 0 && agree(fmin(met, groups), pulses)) {
        bw_working_step(working, "n", met, "pulses", NULL, "max(1, ceil(tN f))", "max(1, ceil(%s * %s))", t, f);
        bw_working_note(working, "pulses in this time");
        bw_working_step(working, "N", pulses, "pulses", NULL, "min(n, floor((n - 1) / f / Ti) + 1)",
                        "min(%s, floor((%s - 1) / %s / %s) + 1)", whole_text(all, met), all, f, ti);
    } else {
        bw_working_step(working, "N", pulses, "pulses", NULL, NULL, NULL);
    }
    bw_working_note(working, "groups: Ti laid end to end, as many as begin before the last pulse does");
    if (is_plain(emission) && agree(regular_holds(emission, group->time_s), group->holds))
        bw_working_step(working, "n", group->holds, "pulses", NULL, "floor(Ti f) + min(1, (Ti - floor(Ti f) / f) / d)",
                        "floor(%s * %s) + min(1, (%s - floor(%s * %s) / %s) / %s)", ti, f, ti, ti, f, f, d);
    else
        bw_working_step(working, "n", group->holds, "pulses", NULL, NULL, NULL);
    bw_working_note(working, "the most that fall inside Ti");
}

/* N and, where pulses count as one, how many do. */
void bw_hazard_counting_working(const struct train_case *train, double pulses, const struct window *group,
                                struct bw_working *working) {
    char source[BW_REASON_SIZE];
    struct bw_source_note note = {0};
    number t, f;
    double ti_s;
    const struct bw_emission *emission = train->emission;
    bw_working_heading(working, "Pulses counted for the train rule");
    if (bw_limits_grouping_time(train->table, emission->wavelength_nm, &ti_s, &note)) {
        bw_working_step(working, "Ti", ti_s, "s", source_words(source, &note), NULL, NULL);
        bw_working_note(working, "pulses closer than this count as one");
    }
    struct bw_exposure exposure = bw_hazard_exposure(train, train->viewing->exposure_s);
    double longest_s = bw_limits_counting_working(train->table, &exposure, working);
    double counted_s = fmin(train->viewing->exposure_s, longest_s);
    text(t, train->viewing->exposure_s);
    if (longest_s < HUGE_VAL)
        bw_working_step(working, "tN", counted_s, "s", NULL, "min(te, T2)", "min(%s, %s)", t, text(f, longest_s));
    else
        bw_working_step(working, "tN", counted_s, "s", NULL, "te", "%s", t);
    bw_working_note(working, "pulses are counted in this time");
    if (group != NULL) {
        write_groups(train, pulses, group, counted_s, working);
        return;
    }
    double met = fmax(1., ceil(counted_s * emission->repetition_rate_hz * (1. - 1e-14)));
    if (is_plain(emission) && agree(met, pulses)) {
        bw_working_step(working, "N", pulses, "pulses", NULL, "max(1, ceil(tN f))", "max(1, ceil(%s * %s))",
                        whole_text(t, counted_s), whole_text(f, emission->repetition_rate_hz));
        return;
    }
    bw_working_step(working, "N", pulses, "pulses", NULL, NULL, NULL);
    bw_working_note(working, "counted in the worst window of this time; pulses within Ti count as one");
}

/* ---- the rules ---------------------------------------------------------------------------------- */

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
    number seconds;
    bw_working_heading(working, "Limits for t = %s s", text(seconds, time_s));
    bw_limits(train->table, train->viewing->target, &exposure, &set, working, NULL);
}

/* The limit of the whole exposure at the window of a finding; a step only where it is not that of the row itself.
 * Returns: it [J/m2]. */
static double write_limit(const struct train_case *train, const struct finding *finding, struct bw_working *working) {
    double limit_j_m2 = bw_hazard_whole_limit_j_m2(&finding->limit, train->viewing->subtense_rad);
    char source[BW_REASON_SIZE];
    number h, alpha, cone, seconds;
    if (!(train->viewing->subtense_rad > finding->limit.acceptance_rad))
        return limit_j_m2;
    bw_working_step(working, "H(t)", limit_j_m2, "J/m2", source_words(source, &finding->limit.source),
                    "H (alpha / acceptance)^2", "%s * (%s / %s)^2", text(h, finding->limit.radiant_exposure_j_m2),
                    text(alpha, 1e3 * train->viewing->subtense_rad), text(cone, 1e3 * finding->limit.acceptance_rad));
    bw_working_note(working, "for t = %s s, of the whole exposure: the cone admits only its share",
                    text(seconds, finding->window.time_s));
    return limit_j_m2;
}

/* What the limit is divided by and multiplied with. */
static void rule_text(const struct train_case *train, const struct tally *tally, size_t rule, double limit_j_m2,
                      char formula[SUM_SIZE], char numbers[SUM_SIZE]) {
    const struct window *window = &tally->rules[rule].window;
    number h, n, c;
    bool divided = !train->emission->continuous && (window->holds < 1. || window->holds > 1.);
    bool corrected = rule == BW_RULE_TRAIN;
    const char *time = train->emission->continuous ? "te" : divided ? "t" : "d";
    text(h, limit_j_m2);
    text(n, window->holds);
    text(c, tally->rules[rule].correction);
    snprintf(formula, SUM_SIZE, "%sH(%s)%s", corrected ? "CP " : "", time, divided ? " / n" : "");
    snprintf(numbers, SUM_SIZE, "%s%s%s%s%s", corrected ? c : "", corrected ? " * " : "", h, divided ? " / " : "",
             divided ? n : "");
}

static void write_rule(const struct train_case *train, const struct tally *tally, size_t rule, double value,
                       struct bw_working *working) {
    static const char *const symbols[BW_RULES] = {"H1", "H2", "H3"};
    static const char *const names[BW_RULES] = {"rule 1, single: each pulse by itself",
                                                "rule 2, average: every window within the limit of its length",
                                                "rule 3, train: each pulse, or group, within the corrected limit"};
    const struct finding *finding = &tally->rules[rule];
    const struct window *window = &finding->window;
    char formula[SUM_SIZE], numbers[SUM_SIZE], source[BW_REASON_SIZE];
    number t, d;
    bool continuous = train->emission->continuous;
    if (rule == BW_RULE_AVERAGE && !continuous)
        write_window(train, window, working);
    else if (!continuous && window->holds < 1. && train->emission->pulses == NULL) {
        bw_working_step(working, "n", window->holds, "pulses", NULL, "te / d", "%s / %s", text(t, window->time_s),
                        text(d, train->emission->pulse_duration_s));
        bw_working_note(working, "the exposure is shorter than the pulse");
    } else if (!continuous && (window->holds < 1. || window->holds > 1.)) {
        bw_working_step(working, "n", window->holds, "pulses", NULL, NULL, NULL);
        bw_working_note(working,
                        window->holds > 1. ? "the group, in pulses" : "this pulse, in energies of the largest");
    }
    rule_text(train, tally, rule, write_limit(train, finding, working), formula, numbers);
    bw_working_step(working, symbols[rule], value, "J/m2", source_words(source, &finding->limit.source), formula, "%s",
                    numbers);
    bw_working_note(working, "%s", continuous ? "continuous: the exposure as a whole" : names[rule]);
}

/* A beam narrower than the aperture is bound by another window than a wide one. */
static void write_aperture(const struct train_case *train, const struct tally *tally,
                           const struct bw_train_limit *limit, double lowest, struct bw_working *working) {
    number h, d, c, n, least;
    double limit_j_m2 = bw_hazard_whole_limit_j_m2(&tally->least.limit, train->viewing->subtense_rad);
    bw_working_step(working, "HD2", tally->least_j, "J", NULL, "CP H(t) / n (D / 1000)^2",
                    "%s * %s / %s * (%s / 1000)^2", text(c, tally->least.correction), text(h, limit_j_m2),
                    text(n, tally->least.window.holds), text(d, 1e3 * tally->least.limit.aperture_m));
    bw_working_note(working, "the lowest of all windows, at t = %s s: it binds a beam narrower than the aperture",
                    text(n, tally->least.window.time_s));
    bw_working_step(working, "D", limit->aperture_m, "m", NULL, "sqrt(HD2 / MPE)", "sqrt(%s / %s)",
                    text(least, tally->least_j), text(h, lowest));
    bw_working_note(working,
                    "one aperture for all windows: exact for wide and for narrow beams, never too large a ratio");
}

/* The limit of a pulse as one of the mean power: both are the same share of the pulses' own. */
static void write_mean(const struct train_case *train, const struct bw_train_limit *limit, struct bw_working *working) {
    const struct bw_emission *emission = train->emission;
    number value, t, q;
    text(value, limit->per_pulse_j_m2);
    if (emission->continuous)
        bw_working_step(working, "E_limit", limit->irradiance_w_m2, "W/m2", NULL, "MPE / te", "%s / %s", value,
                        text(t, train->viewing->exposure_s));
    else if (is_plain(emission) && emission->pulse_count == 0)
        bw_working_step(working, "E_limit", limit->irradiance_w_m2, "W/m2", NULL, "MPE f", "%s * %s", value,
                        text(t, emission->repetition_rate_hz));
    else
        bw_working_step(working, "E_limit", limit->irradiance_w_m2, "W/m2", NULL, "MPE P / Q", "%s * %s / %s", value,
                        text(t, emission->average_power_w), text(q, emission->pulse_energy_j));
    bw_working_note(working, "the same as a limit of the mean irradiance%s",
                    emission->continuous || is_plain(emission) ? ""
                    : emission->pulse_count > 0 ? ", the mean from the first pulse to the end of the last"
                                                : ", the mean of all bursts and gaps");
}

/* The lowest of the rules, and the same as a mean irradiance. */
static void write_lowest(const struct train_case *train, const struct tally *tally, const struct bw_train_limit *limit,
                         struct bw_working *working) {
    static const char *const symbols[BW_RULES] = {"H1", "H2", "H3"};
    char formula[SUM_SIZE] = "", numbers[SUM_SIZE] = "";
    number value;
    size_t count = 0;
    bool continuous = train->emission->continuous;
    for (size_t rule = 0; rule < BW_RULES; rule++) {
        if (!tally->rules[rule].found)
            continue;
        size_t used = strlen(formula), filled = strlen(numbers);
        snprintf(formula + used, SUM_SIZE - used, "%s%s", count > 0 ? ", " : "", symbols[rule]);
        snprintf(numbers + filled, SUM_SIZE - filled, "%s%s", count > 0 ? ", " : "",
                 text(value, limit->rules_j_m2[rule]));
        count++;
    }
    char all[SUM_SIZE + 8], sums[SUM_SIZE + 8];
    snprintf(all, sizeof all, count > 1 ? "min(%s)" : "%s", formula);
    snprintf(sums, sizeof sums, count > 1 ? "min(%s)" : "%s", numbers);
    bw_working_step(working, "MPE", limit->per_pulse_j_m2, "J/m2", NULL, all, "%s", sums);
    if (continuous)
        bw_working_note(working, "over the exposure");
    else
        bw_working_note(working, "per pulse; governed by the rule: %s", bw_train_rule_name(limit->rule));
    write_mean(train, limit, working);
}

static void write_effect(const struct train_case *train, const struct tally *tally, const struct bw_train_limit *limit,
                         struct bw_working *working) {
    bw_working_heading(working, train->emission->continuous ? "The exposure, %s" : "The three rules, %s",
                       bw_effect_name(limit->limit.effect));
    for (size_t rule = 0; rule < BW_RULES; rule++)
        if (tally->rules[rule].found)
            write_rule(train, tally, rule, limit->rules_j_m2[rule], working);
    write_lowest(train, tally, limit, working);
    if (limit->aperture_m < limit->limit.aperture_m)
        write_aperture(train, tally, limit, limit->per_pulse_j_m2, working);
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
