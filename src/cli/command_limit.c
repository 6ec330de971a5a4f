/* beamward limit: the exposure limit for one wavelength and time. */
#include "cli.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static const struct cli_option options[] = {
    {"--wavelength", "NM", "wavelength in nm, 180 to 1e6 (needed)"},
    {"--time", "S", "exposure in s; without it the customary time of the rule set"},
    {"--target", "eye|skin", "what is exposed (eye)"},
    {"--subtense", "MRAD", "angular subtense of the source in mrad (0: a point)"},
    {"--pulse-duration", "S", "a pulse train: duration of each pulse in s"},
    {"--rate", "HZ", "a pulse train: pulses per second"},
    {"--pulses", "N", "so many pulses and no more; 1 needs no --rate"},
    CLI_COMPARING_OPTIONS,
};

static bool read_train(const struct cli_arguments *arguments, struct bw_limit_query *query, bool *wrong) {
    bool has_duration, has_rate, has_count;
    struct bw_timing timing = bw_timing_none();
    struct bw_emission_input input = {.wavelength_nm = query->exposure.wavelength_nm,
                                      .average_power_w = (double)NAN,
                                      .peak_power_w = (double)NAN,
                                      .pulse_energy_j = 1,
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

/* How long, and why. */
static void write_time(const struct bw_limit_query *query, const struct bw_exposure_time *time,
                       struct bw_working *steps) {
    char source[BW_REASON_SIZE] = "";
    if (query->exposure_reason)
        snprintf(source, sizeof source, "%s, %s %s, %s%s", time->source.table, time->source.section, time->source.row,
                 time->source.clause, time->source.known == BW_MEMORY ? ", from memory" : "");
    bw_working_heading(steps, "What is asked");
    bw_working_step(steps, "w", query->exposure.wavelength_nm, "nm", NULL, NULL, NULL);
    bw_working_note(steps, "given");
    bw_working_step(steps, "te", query->exposure.exposure_s, "s", source, NULL, NULL);
    bw_working_note(steps, "exposure time, %s", query->exposure_reason ? "customary of the rule set" : "given");
    bw_working_step(steps, "alpha", 1e3 * query->exposure.subtense_rad, "mrad", NULL, NULL, NULL);
    bw_working_note(steps, "%s", query->exposure.subtense_rad > 0 ? "given" : "a point source, the strictest case");
    if (!query->has_train)
        return;
    bw_working_step(steps, "d", query->emission.pulse_duration_s, "s", NULL, NULL, NULL);
    bw_working_note(steps, "given");
    bw_working_step(steps, "f", query->emission.repetition_rate_hz, "Hz", NULL, NULL, NULL);
    bw_working_note(steps, "given");
}

static enum bw_status evaluate(struct bw_limit_query *query, bool has_time, bool working, struct bw_error *error) {
    struct bw_exposure_time time = {0};
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
    write_time(query, &time, steps);
    enum bw_status status = bw_limits(query->table, query->target, &query->exposure, &query->limits,
                                      query->has_train ? NULL : steps, error);
    if (status != BW_OK || !query->has_train)
        return status;
    struct bw_viewing_case viewing = {.target = query->target,
                                      .exposure_s = query->exposure.exposure_s,
                                      .subtense_rad = query->exposure.subtense_rad};
    return bw_hazard_train_limits(query->table, &query->emission, &viewing, &query->train, steps, error);
}

/* The same by every rule set, the primary first: one that has no row says so in its place. */
static enum bw_status evaluate_all(struct bw_limit_query *sets, size_t *count, const struct bw_limit_query *asked,
                                   bool has_time, bool working, struct bw_error *error) {
    for (size_t i = 0; i <= bw_tables_count(); i++) {
        const struct bw_table *table = i == 0 ? asked->table : bw_tables_at(i - 1);
        if (i > 0 && strcmp(bw_table_id(table), bw_table_id(asked->table)) == 0)
            continue;
        struct bw_limit_query *set = &sets[(*count)++];
        struct bw_error own = {0};
        *set = *asked;
        set->table = table;
        enum bw_status status = evaluate(set, has_time, working, &own);
        if (status == BW_OK)
            continue;
        if (status != BW_OUT_OF_RANGE || i == 0)
            return bw_error_set(error, status, "%s", own.text);
        set->out_of_range = true;
        double low_nm, high_nm;
        bw_table_span(table, asked->target, &low_nm, &high_nm);
        if (strstr(own.text, "covers") != NULL)
            snprintf(set->reason, sizeof set->reason, "%s", own.text);
        else
            snprintf(set->reason, sizeof set->reason, "%.400s; it covers %g to %g nm", own.text, low_nm, high_nm);
    }
    return BW_OK;
}

static void print_working(struct bw_text *text, const struct bw_limit_query *query) {
    if (query->rule_sets == NULL)
        bw_report_working_text(text, &query->working);
    for (size_t i = 0; i < query->rule_set_count; i++)
        if (query->rule_sets[i].working.count > 0) {
            bw_text_add(text, "\nWorking by %s\n", bw_table_id(query->rule_sets[i].table));
            bw_report_working_text(text, &query->rule_sets[i].working);
        }
}

static enum cli_exit answer(const struct cli_arguments *arguments, const struct bw_limit_query *query) {
    struct bw_text text = {0};
    if (cli_wants_json(arguments)) {
        bw_report_limit_json(&text, query);
    } else {
        bw_report_limit_text(&text, query);
        print_working(&text, query);
    }
    return cli_print_unless_quiet(arguments, &text);
}

static enum cli_exit run_all(const struct cli_arguments *arguments, const struct bw_limit_query *asked, bool has_time) {
    struct bw_error error = {0};
    struct bw_limit_query *sets = calloc(bw_tables_count() + 1, sizeof *sets);
    size_t count = 0;
    if (sets == NULL) {
        bw_error_set(&error, BW_NO_MEMORY, "out of memory");
        return cli_print_error("beamward limit", &error);
    }
    enum cli_exit exit_code;
    bool working = cli_value(arguments, "--working") != NULL;
    if (evaluate_all(sets, &count, asked, has_time, working, &error) != BW_OK) {
        exit_code = cli_print_error("beamward limit", &error);
    } else {
        struct bw_limit_query primary = sets[0];
        primary.rule_sets = sets;
        primary.rule_set_count = count;
        exit_code = answer(arguments, &primary);
    }
    for (size_t i = 0; i < count; i++)
        bw_working_free(&sets[i].working);
    free(sets);
    return exit_code;
}

static enum cli_exit run_one(const struct cli_arguments *arguments, struct bw_limit_query *query, bool has_time) {
    struct bw_error error = {0};
    enum cli_exit exit_code;
    if (evaluate(query, has_time, cli_value(arguments, "--working") != NULL, &error) != BW_OK)
        exit_code = cli_print_error("beamward limit", &error);
    else
        exit_code = answer(arguments, query);
    bw_working_free(&query->working);
    return exit_code;
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
    exit_code =
        cli_wants_all_rules(arguments) ? run_all(arguments, &query, has_time) : run_one(arguments, &query, has_time);
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
