/* beamward room: the zone on the plan, who stands in it, what it leaves by. */
#include "cli.h"

#include <time.h>

static const struct cli_option options[] = {
    CLI_NARROWING_OPTIONS,
    {"--map", "FILE", "write the map as CSV: x_m, y_m, ratio, path (one room)"},
    {"--timing", NULL, "tell how long each map took"},
    CLI_COMMON_OPTIONS,
};

static double seconds_now(void) {
    struct timespec now;
    clock_gettime(CLOCK_MONOTONIC, &now);
    return (double)now.tv_sec + 1e-9 * (double)now.tv_nsec;
}

/* Solves a room once more under the clock, since the assessment itself reads none. */
static enum cli_exit time_room(const struct cli_job *job, const struct bw_result *result, struct bw_room_result *room) {
    struct bw_room_source sources[BW_EMISSIONS_MAX * 4];
    size_t count = 0;
    for (; count < room->source_count && count < CLI_COUNT(sources); count++) {
        const struct bw_distance_result *distance = &result->distances[room->sources[count]];
        sources[count] = (struct bw_room_source){distance->direct, distance->diffuse_view};
    }
    struct bw_room_solution solution = {0};
    struct bw_error error = {0};
    double start_s = seconds_now();
    if (bw_room_solve(&job->the_case->rooms[room->room], sources, count, &solution, &error) != BW_OK)
        return cli_print_error(job->path, &error);
    room->solution.map_seconds = seconds_now() - start_s;
    bw_room_solution_free(&solution);
    return CLI_DONE;
}

static enum cli_exit write_map(const struct cli_arguments *arguments, const struct bw_result *result) {
    const char *path = cli_value(arguments, "--map");
    if (!path)
        return CLI_DONE;
    if (result->room_count != 1)
        return cli_usage_error(arguments->command, "--map takes one room; name it with --room");
    struct bw_text text = {0};
    struct cli_files files = {0};
    bw_report_map_csv(&text, result, 0);
    enum cli_exit exit_code = cli_files_add(&files, "", path, &text);
    return exit_code == CLI_DONE ? cli_files_rename(&files) : exit_code;
}

static enum cli_exit answer(const struct cli_arguments *arguments, const struct cli_job *job,
                            struct bw_result *result) {
    bool timing = cli_value(arguments, "--timing") != NULL;
    enum cli_exit exit_code = CLI_DONE;
    for (size_t i = 0; timing && i < result->room_count && exit_code == CLI_DONE; i++)
        exit_code = time_room(job, result, &result->rooms[i]);
    if (exit_code == CLI_DONE)
        exit_code = write_map(arguments, result);
    if (exit_code != CLI_DONE)
        return exit_code;
    struct bw_text text = {0};
    if (cli_wants_json(arguments))
        bw_report_room_json(&text, result, timing);
    else
        bw_report_room_text(&text, result, timing);
    exit_code = cli_print_unless_quiet(arguments, &text);
    return exit_code == CLI_DONE && result->needs_action ? CLI_NEEDS_ACTION : exit_code;
}

static enum cli_exit run(const struct cli_arguments *arguments) {
    return cli_run_case(arguments, BW_PART_ROOM, answer);
}

const struct cli_command cli_room = {
    .name = "room",
    .operands = "CASE",
    .answers = "The zone on the plan, who stands in it, what it leaves by",
    .example = "beamward room examples/physio-clinic.ini --map map.csv",
    .operands_least = 1,
    .operands_most = 1,
    .options = options,
    .option_count = CLI_COUNT(options),
    .run = run,
};
