/* beamward eyewear: each pair of goggles against each handpiece and place. */
#include "cli.h"

static const struct cli_option options[] = {
    CLI_NARROWING_OPTIONS,
    CLI_COMMON_OPTIONS,
};

static enum cli_exit answer(const struct cli_arguments *arguments, const struct cli_job *job,
                            struct bw_result *result) {
    struct bw_text text = {0};
    (void)job;
    if (cli_wants_json(arguments))
        bw_report_eyewear_json(&text, result);
    else
        bw_report_eyewear_text(&text, result);
    enum cli_exit exit_code = cli_print_unless_quiet(arguments, &text);
    return exit_code == CLI_DONE && result->needs_action ? CLI_NEEDS_ACTION : exit_code;
}

static enum cli_exit run(const struct cli_arguments *arguments) {
    return cli_run_case(arguments, BW_PART_EYEWEAR, answer);
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
