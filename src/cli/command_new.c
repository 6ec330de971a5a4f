/* beamward new: a commented starter case file that runs as it is. */
#include "cli.h"

#include <stdio.h>
#include <string.h>
#include <unistd.h>

static const struct cli_option options[] = {
    {"--from", "EXAMPLE", "start from this example instead (--list names them)"},
    {"--list", NULL, "list the examples"},
    {"--quiet", NULL, "print nothing but errors"},
    {"--help", NULL, "this text"},
};

static enum cli_exit list_examples(void) {
    for (size_t i = 0; i < bw_case_examples_count(); i++)
        puts(bw_case_example_name(i));
    return CLI_DONE;
}

static enum cli_exit unknown_example(const struct cli_arguments *arguments, const char *name) {
    const char *names[32];
    size_t count = 0;
    for (; count < bw_case_examples_count() && count < CLI_COUNT(names); count++)
        names[count] = bw_case_example_name(count);
    const char *nearest = bw_nearest_name(name, names, count);
    if (nearest)
        return cli_usage_error(arguments->command, "no example %s; did you mean %s?", name, nearest);
    return cli_usage_error(arguments->command, "no example %s; `beamward new --list` names them", name);
}

static enum cli_exit run(const struct cli_arguments *arguments) {
    if (cli_value(arguments, "--list"))
        return list_examples();
    if (arguments->operand_count == 0)
        return cli_usage_error(arguments->command, "FILE is missing");
    const char *path = arguments->operands[0], *from = cli_value(arguments, "--from");
    const char *body = from ? bw_case_example(from) : bw_case_starter();
    if (!body)
        return unknown_example(arguments, from);
    if (access(path, F_OK) == 0) {
        fprintf(stderr, "beamward new: %s exists; name a new file, nothing is overwritten\n", path);
        return CLI_WRONG_INPUT;
    }
    struct bw_text text = {0};
    bw_text_add_bytes(&text, body, strlen(body));
    struct cli_files files = {0};
    enum cli_exit exit_code = cli_files_add(&files, "", path, &text);
    if (exit_code == CLI_DONE)
        exit_code = cli_files_rename(&files);
    if (exit_code == CLI_DONE && !cli_value(arguments, "--quiet"))
        printf("%s is written and runs as it is. Change it to your clinic, then:\n  beamward assess %s --out record\n",
               path, path);
    return exit_code;
}

const struct cli_command cli_new = {
    .name = "new",
    .operands = "FILE",
    .answers = "Writes a commented starter case file that runs as it is",
    .example = "beamward new my-clinic.ini",
    .operands_least = 0,
    .operands_most = 1,
    .options = options,
    .option_count = CLI_COUNT(options),
    .run = run,
};
