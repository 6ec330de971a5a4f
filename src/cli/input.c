#include "cli.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static const char default_rules[] = "iec-60825-1-2014";

void cli_print_faults(const char *path, struct bw_faults *faults) {
    struct bw_text text = {0};
    bw_faults_sort(faults);
    bw_faults_print(&text, path, faults);
    if (text.data)
        fputs(text.data, stderr);
    bw_text_free(&text);
}

enum cli_exit cli_print_error(const char *subject, const struct bw_error *error) {
    fprintf(stderr, "%s: %s\n", subject, error->text);
    switch (error->status) {
    case BW_OK:
    case BW_ARGUMENT:
    case BW_OUT_OF_RANGE:
    case BW_INPUT:
        return CLI_WRONG_INPUT;
    case BW_NO_MEMORY:
    case BW_SYSTEM:
        break;
    }
    return CLI_SYSTEM_FAILED;
}

/* What a failed reader has to say: the faults if it found any, else the error. */
static enum cli_exit reading_failed(const char *path, struct bw_faults *faults, const struct bw_error *error) {
    enum cli_exit exit_code = CLI_WRONG_INPUT;
    if (faults->count > 0)
        cli_print_faults(path, faults);
    else
        exit_code = cli_print_error(path, error);
    bw_faults_free(faults);
    return exit_code;
}

enum cli_exit cli_load_table(const char *path, struct bw_table **table) {
    struct bw_ini ini = {0};
    struct bw_faults faults = {0};
    struct bw_error error = {0};
    enum bw_status status = bw_ini_read(path, &ini, NULL, &faults, &error);
    if (status == BW_OK)
        status = bw_table_load(&ini, table, &faults, &error);
    bw_ini_free(&ini);
    return status == BW_OK ? CLI_DONE : reading_failed(path, &faults, &error);
}

static enum cli_exit unknown_rules(const char *rules, const char *case_path) {
    const char *names[16];
    size_t count = 0;
    for (; count < bw_tables_count() && count < CLI_COUNT(names); count++)
        names[count] = bw_table_id(bw_tables_at(count));
    const char *nearest = strcmp(rules, "all") == 0 ? NULL : bw_nearest_name(rules, names, count);
    fprintf(stderr, "%s: %s: unknown rule set; ", case_path ? case_path : "beamward: --rules", rules);
    if (nearest)
        fprintf(stderr, "did you mean %s?\n", nearest);
    else
        fputs("see `beamward tables`\n", stderr);
    return CLI_WRONG_INPUT;
}

/* Only the commands that compare know "all"; elsewhere it is an unknown rule set. */
bool cli_wants_all_rules(const struct cli_arguments *arguments) {
    const char *rules = cli_value(arguments, "--rules");
    for (size_t i = 0; i < arguments->command->option_count; i++)
        if (strcmp(arguments->command->options[i].name, "--rules") == 0 &&
            strcmp(arguments->command->options[i].value, "ID|all") == 0)
            return rules != NULL && strcmp(rules, "all") == 0;
    return false;
}

enum cli_exit cli_find_table(const struct cli_arguments *arguments, const char *case_rules, const char *case_path,
                             const struct bw_table **table, struct bw_table **loaded) {
    const char *file = cli_value(arguments, "--tables"), *rules = cli_value(arguments, "--rules");
    if (cli_wants_all_rules(arguments))
        rules = NULL;
    *loaded = NULL;
    if (file) {
        enum cli_exit exit_code = cli_load_table(file, loaded);
        if (exit_code != CLI_DONE)
            return exit_code;
        *table = *loaded;
        if (!rules || strcmp(rules, bw_table_id(*loaded)) == 0)
            return CLI_DONE;
    }
    const char *wanted = rules ? rules : case_rules ? case_rules : default_rules;
    *table = bw_tables_find(wanted);
    if (*table)
        return CLI_DONE;
    bw_table_free(*loaded);
    *loaded = NULL;
    return unknown_rules(wanted, rules || !case_rules ? NULL : case_path);
}

enum cli_exit cli_job_read(const struct cli_arguments *arguments, struct cli_job *job) {
    struct bw_faults faults = {0};
    struct bw_error error = {0};
    *job = (struct cli_job){.path = arguments->operands[0]};
    enum bw_status status = bw_case_read(job->path, &job->the_case, &job->bytes, &faults, &error);
    enum cli_exit exit_code = CLI_DONE;
    if (status != BW_OK) {
        exit_code = reading_failed(job->path, &faults, &error);
    } else {
        exit_code = cli_find_table(arguments, job->the_case->rules, job->path, &job->table, &job->loaded);
    }
    if (exit_code != CLI_DONE)
        cli_job_free(job);
    return exit_code;
}

void cli_job_free(struct cli_job *job) {
    bw_case_free(job->the_case);
    bw_table_free(job->loaded);
    bw_text_free(&job->bytes);
    *job = (struct cli_job){0};
}

/* --at M or M,M,M. Returns: false after printing what is wrong. */
static bool read_distances(const struct cli_arguments *arguments, struct bw_assess_options *options) {
    const char *value = cli_value(arguments, "--at");
    for (const char *next = value; next; next = strchr(next, ',') ? strchr(next, ',') + 1 : NULL) {
        char number[40];
        snprintf(number, sizeof number, "%.*s", (int)strcspn(next, ","), next);
        double *at_m = &options->at_m[options->at_count < BW_PLACES_MAX ? options->at_count : 0];
        if (options->at_count == BW_PLACES_MAX || strcspn(next, ",") >= sizeof number ||
            !bw_parse_number(number, at_m) || !(*at_m >= 0 && *at_m <= 1e9)) {
            cli_usage_error(arguments->command,
                            "--at %s: at most %d distances of 0 to 1e+09 m would be right, as in 0.1,0.5,1", value,
                            BW_PLACES_MAX);
            return false;
        }
        options->at_count++;
    }
    return true;
}

enum cli_exit cli_job_assess(const struct cli_arguments *arguments, const struct cli_job *job, unsigned parts,
                             struct bw_result **result) {
    struct bw_assess_options options = {
        .parts = parts,
        .laser = cli_value(arguments, "--laser"),
        .handpiece = cli_value(arguments, "--handpiece"),
        .room = cli_value(arguments, "--room"),
        .all_rules = cli_wants_all_rules(arguments),
        .working = cli_value(arguments, "--working") != NULL || parts == BW_PART_ALL,
    };
    if (!read_distances(arguments, &options))
        return CLI_WRONG_INPUT;
    struct bw_error error = {0};
    if (bw_assess(job->the_case, job->table, &options, result, &error) != BW_OK)
        return cli_print_error(job->path, &error);
    return CLI_DONE;
}

enum cli_exit cli_run_case(const struct cli_arguments *arguments, unsigned parts, cli_answer *answer) {
    struct cli_job job;
    struct bw_result *result = NULL;
    enum cli_exit exit_code = cli_job_read(arguments, &job);
    if (exit_code != CLI_DONE)
        return exit_code;
    exit_code = cli_job_assess(arguments, &job, parts, &result);
    if (exit_code == CLI_DONE)
        exit_code = answer(arguments, &job, result);
    bw_result_free(result);
    cli_job_free(&job);
    return exit_code;
}
