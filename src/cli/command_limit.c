/* beamward limit: the exposure limit for one wavelength and time. */
#include "cli.h"

#include <math.h>
#include <string.h>

static const struct cli_option options[] = {
    {"--wavelength", "NM", "wavelength in nm, 180 to 1e6 (needed)"},
    {"--time", "S", "exposure in s; without it the customary time of the rule set"},
    {"--target", "eye|skin", "what is exposed (eye)"},
    {"--subtense", "MRAD", "angular subtense of the source in mrad (0: a point)"},
    {"--pulse-duration", "S", "a pulse train: duration of each pulse in s"},
    {"--rate", "HZ", "a pulse train: pulses per second"},
    {"--pulses", "N", "so many pulses and no more; 1 needs no --rate"},
    CLI_COMMON_OPTIONS,
};

static bool read_train(const struct cli_arguments *arguments, struct bw_limit_query *query, bool *wrong) {
    bool has_duration, has_rate, has_count;
    struct bw_timing timing = bw_timing_none();
    struct bw_emission_input input = {.wavelength_nm = query->exposure.wavelength_nm, .average_power_w = (double)NAN,
                                      .peak_power_w = (double)NAN, .pulse_energy_j = 1,
                                      .timing = &timing};
    *wrong = !cli_number(arguments, "--pulse-duration", 1e-13, 3e4, &has_duration, &input.pulse_duration_s) ||
             !cli_number(arguments, "--rate", 1e-9, 1e12, &has_rate, &input.repetition_rate_hz) ||
             !cli_number(arguments, "--pulses", 1, 1e9, &has_count, &timing.pulse_count);
    if (*wrong || (!has_duration && !has_rate && !has_count))
        return false;
    bool single = has_count && timing.pulse_count <= 1;
    if (!has_rate)
        input.repetition_rate_hz = (double)NAN;
    if (!has_count)
        timing.pulse_count = (double)NAN;
    if (!has_duration || !(has_rate || single)) {
        cli_usage_error(arguments->command, "a pulse train needs both --pulse-duration and --rate");
        *wrong = true;
        return false;
    }
    struct bw_error error = {0};
    if (bw_emission_resolve(&input, &query->emission, &error) != BW_OK) {
        cli_usage_error(arguments->command, "%s", error.text);
        *wrong = true;
    }
    return !*wrong;
}

static bool read_query(const struct cli_arguments *arguments, struct bw_limit_query *query, bool *has_time) {
    bool has_wavelength, has_subtense, wrong = false;
    double subtense_mrad = 0;
    const char *target = cli_value(arguments, "--target");
    if (target && strcmp(target, "eye") != 0 && strcmp(target, "skin") != 0) {
        cli_usage_error(arguments->command, "--target %s: unknown; eye or skin would be right", target);
        return false;
    }
    query->target = target && strcmp(target, "skin") == 0 ? BW_SKIN : BW_EYE;
    if (!cli_number(arguments, "--wavelength", 180, 1e6, &has_wavelength, &query->exposure.wavelength_nm) ||
        !cli_number(arguments, "--time", 1e-13, 3e4, has_time, &query->exposure.exposure_s) ||
        !cli_number(arguments, "--subtense", 0, 1571, &has_subtense, &subtense_mrad))
        return false;
    if (!has_wavelength) {
        cli_usage_error(arguments->command, "--wavelength NM is missing");
        return false;
    }
    query->exposure.subtense_rad = subtense_mrad / 1000;
    query->has_train = read_train(arguments, query, &wrong);
    return !wrong;
}

static enum bw_status evaluate(struct bw_limit_query *query, bool has_time, bool working, struct bw_error *error) {
    struct bw_exposure_time time;
    struct bw_working *steps = working ? &query->working : NULL;
    if (!has_time) {
        enum bw_viewing viewing = query->target == BW_EYE ? BW_GLANCE : BW_SKIN_TIME;
        enum bw_status status =
            bw_limits_exposure_time(query->table, viewing, &query->exposure.wavelength_nm, 1, &time, error);
        if (status != BW_OK)
            return status;
        query->exposure.exposure_s = time.exposure_s;
        query->exposure_reason = time.source.clause;
    }
    enum bw_status status = bw_limits(query->table, query->target, &query->exposure, &query->limits,
                                      query->has_train ? NULL : steps, error);
    if (status != BW_OK || !query->has_train)
        return status;
    struct bw_viewing_case viewing = {.target = query->target, .exposure_s = query->exposure.exposure_s,
                                      .subtense_rad = query->exposure.subtense_rad};
    return bw_hazard_train_limits(query->table, &query->emission, &viewing, &query->train, steps, error);
}

static enum cli_exit run(const struct cli_arguments *arguments) {
    struct bw_limit_query query = {0};
    bool has_time = false;
    if (!read_query(arguments, &query, &has_time))
        return CLI_WRONG_INPUT;
    struct bw_table *loaded = NULL;
    enum cli_exit exit_code = cli_find_table(arguments, NULL, NULL, &query.table, &loaded);
    if (exit_code != CLI_DONE)
        return exit_code;
    struct bw_error error = {0};
    bool working = cli_value(arguments, "--working") != NULL;
    if (evaluate(&query, has_time, working, &error) != BW_OK) {
        exit_code = cli_print_error("beamward limit", &error);
    } else {
        struct bw_text text = {0};
        if (cli_wants_json(arguments)) {
            bw_report_limit_json(&text, &query);
        } else {
            bw_report_limit_text(&text, &query);
            if (working)
                bw_report_working_text(&text, &query.working);
        }
        exit_code = cli_print_unless_quiet(arguments, &text);
    }
    bw_working_free(&query.working);
    bw_table_free(loaded);
    return exit_code;
}

const struct cli_command cli_limit = {
    .name = "limit",
    .operands = "",
    .answers = "MPE for one wavelength and exposure time, eye or skin",
    .example = "beamward limit --wavelength 904 --time 10 --pulse-duration 200e-9 --rate 5000",
    .operands_least = 0,
    .operands_most = 0,
    .options = options,
    .option_count = CLI_COUNT(options),
    .run = run,
};
