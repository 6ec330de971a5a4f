/* beamward distance: hazard distances and optical density, a handpiece each. */
#include "cli.h"

static const struct cli_option options[] = {
    CLI_NARROWING_OPTIONS,
    {"--at", "M,M...", "longest exposures at these distances in m as well"},
    CLI_COMPARING_OPTIONS,
};

static enum cli_exit answer(const struct cli_arguments *arguments, const struct cli_job *job,
                            struct bw_result *result) {
    struct bw_text text = {0};
    (void)job;
    if (cli_wants_json(arguments))
        bw_report_distance_json(&text, result);
    else
        bw_report_distance_text(&text, result);
    return cli_print_unless_quiet(arguments, &text);
}

static enum cli_exit run(const struct cli_arguments *arguments) {
    return cli_run_case(arguments, BW_PART_DISTANCE | BW_PART_INCIDENT, answer);
}

const struct cli_command cli_distance = {
    .name = "distance",
    .operands = "CASE",
    .answers = "Hazard distances and optical density, per handpiece",
    .example = "beamward distance examples/physio-clinic.ini --at 2",
    .operands_least = 1,
    .operands_most = 1,
    .options = options,
    .option_count = CLI_COUNT(options),
    .run = run,
};
