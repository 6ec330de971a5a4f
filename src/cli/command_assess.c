/* beamward assess: the whole job over a case, and the record. */
#include "cli.h"

#include <sha2.h>
#include <stdint.h>
#include <stdio.h>

static const struct cli_option options[] = {
    {"--out", "DIR", "folder for report.html, plan-ROOM.svg, result.json (needed)"},
    CLI_COMPARING_OPTIONS,
};

static enum cli_exit add_files(struct cli_files *files, const char *directory, const struct bw_result *result,
                               const struct bw_provenance *provenance) {
    struct bw_text text = {0};
    bw_report_result_json(&text, result, provenance);
    enum cli_exit exit_code = cli_files_add(files, directory, "result.json", &text);
    for (size_t i = 0; i < result->room_count && exit_code == CLI_DONE; i++) {
        char name[BW_NAME_SIZE + 16];
        snprintf(name, sizeof name, "plan-%s.svg", result->the_case->rooms[result->rooms[i].room].name);
        bw_report_plan_svg(&text, result, i, true);
        exit_code = cli_files_add(files, directory, name, &text);
    }
    if (exit_code != CLI_DONE)
        return exit_code;
    bw_report_html(&text, result, provenance);
    return cli_files_add(files, directory, "report.html", &text);
}

static enum cli_exit answer(const struct cli_arguments *arguments, const struct cli_job *job,
                            struct bw_result *result) {
    char sha256[SHA256_DIGEST_STRING_LENGTH];
    SHA256Data((const uint8_t *)job->bytes.data, job->bytes.length, sha256);
    struct bw_provenance provenance = {.version = BEAMWARD_VERSION, .case_path = job->path, .case_sha256 = sha256};
    const char *directory = cli_value(arguments, "--out");
    struct cli_files files = {0};
    enum cli_exit exit_code = cli_make_directory(directory);
    if (exit_code == CLI_DONE)
        exit_code = add_files(&files, directory, result, &provenance);
    if (exit_code == CLI_DONE)
        exit_code = cli_files_rename(&files);
    if (exit_code != CLI_DONE)
        return exit_code;
    struct bw_text text = {0};
    if (cli_wants_json(arguments)) {
        bw_report_result_json(&text, result, &provenance);
    } else {
        bw_report_summary_text(&text, result);
        if (cli_value(arguments, "--working"))
            bw_report_result_working_text(&text, result);
        bw_text_add(&text, "\nThe record: %s/report.html\n", directory);
    }
    exit_code = cli_print_unless_quiet(arguments, &text);
    return exit_code == CLI_DONE && result->needs_action ? CLI_NEEDS_ACTION : exit_code;
}

static enum cli_exit run(const struct cli_arguments *arguments) {
    if (!cli_value(arguments, "--out"))
        return cli_usage_error(arguments->command, "--out DIR is missing: the folder for the record");
    return cli_run_case(arguments, BW_PART_ALL, answer);
}

const struct cli_command cli_assess = {
    .name = "assess",
    .operands = "CASE",
    .answers = "The whole job: findings, report.html, plans, result.json",
    .example = "beamward assess examples/physio-clinic.ini --out record",
    .operands_least = 1,
    .operands_most = 1,
    .options = options,
    .option_count = CLI_COUNT(options),
    .run = run,
};
