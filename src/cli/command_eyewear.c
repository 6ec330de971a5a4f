/* beamward eyewear: each pair of goggles against each handpiece and place. */
#include "cli.h"

static const struct cli_option options[] = {
    CLI_NARROWING_OPTIONS,
    CLI_COMMON_OPTIONS,
};

static enum cli_exit run(const struct cli_arguments *arguments) {
    struct cli_job job;
    struct bw_result *result = NULL;
    enum cli_exit exit_code = cli_job_read(arguments, &job);
    if (exit_code != CLI_DONE)
        return exit_code;
    exit_code = cli_job_assess(arguments, &job, BW_PART_EYEWEAR, &result);
    if (exit_code == CLI_DONE) {
        struct bw_text text = {0};
        if (cli_wants_json(arguments))
            bw_report_eyewear_json(&text, result);
        else
            bw_report_eyewear_text(&text, result);
        exit_code = cli_print_unless_quiet(arguments, &text);
        if (exit_code == CLI_DONE && result->needs_action)
            exit_code = CLI_NEEDS_ACTION;
    }
    bw_result_free(result);
    cli_job_free(&job);
    return exit_code;
}

const struct cli_command cli_eyewear = {
    .name = "eyewear",
    .operands = "CASE",
    .answers = "Each pair of goggles against each handpiece and place",
    .example = "beamward eyewear examples/physio-clinic.ini",
    .operands_least = 1,
    .operands_most = 1,
    .options = options,
    .option_count = CLI_COUNT(options),
    .run = run,
};
