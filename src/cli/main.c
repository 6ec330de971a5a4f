/* beamward - the program: picks the command. */
#include "cli.h"

#include <stdio.h>
#include <string.h>

static const struct cli_command *const commands[] = {&cli_new,  &cli_limit,  &cli_distance, &cli_eyewear,
                                                     &cli_room, &cli_assess, &cli_tables};

static enum cli_exit unknown_command(const char *word) {
    const char *names[CLI_COUNT(commands)];
    for (size_t i = 0; i < CLI_COUNT(commands); i++)
        names[i] = commands[i]->name;
    const char *nearest = bw_nearest_name(word, names, CLI_COUNT(commands));
    if (nearest)
        fprintf(stderr, "beamward: unknown command %s; did you mean %s?\n", word, nearest);
    else
        fprintf(stderr, "beamward: unknown command %s; see `beamward --help`\n", word);
    return CLI_WRONG_INPUT;
}

static enum cli_exit run_command(const struct cli_command *command, int count, char *const *words) {
    struct cli_arguments arguments;
    enum cli_exit exit_code = cli_parse(command, count, words, &arguments);
    if (exit_code != CLI_DONE)
        return exit_code;
    if (cli_value(&arguments, "--help")) {
        cli_print_command_help(command);
        return CLI_DONE;
    }
    return command->run(&arguments);
}

static enum cli_exit dispatch(int count, char *const *words) {
    if (count < 2) {
        fputs("beamward: no command; see `beamward --help`\n", stderr);
        return CLI_WRONG_INPUT;
    }
    if (strcmp(words[1], "--version") == 0) {
        puts("beamward " BEAMWARD_VERSION);
        return CLI_DONE;
    }
    if (strcmp(words[1], "--help") == 0 || strcmp(words[1], "help") == 0) {
        cli_print_help(commands, CLI_COUNT(commands));
        return CLI_DONE;
    }
    for (size_t i = 0; i < CLI_COUNT(commands); i++)
        if (strcmp(words[1], commands[i]->name) == 0)
            return run_command(commands[i], count - 2, words + 2);
    return unknown_command(words[1]);
}

int main(int count, char **words) {
    enum cli_exit exit_code = dispatch(count, words);
    if (fflush(stdout) != 0 || ferror(stdout)) {
        fputs("beamward: the output could not be written\n", stderr);
        return CLI_SYSTEM_FAILED;
    }
    return (int)exit_code;
}
