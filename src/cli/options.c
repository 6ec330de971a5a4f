#include "cli.h"

#include <stdarg.h>
#include <stdio.h>
#include <string.h>

enum cli_exit cli_usage_error(const struct cli_command *command, const char *format, ...) {
    va_list list;
    fprintf(stderr, "beamward %s: ", command->name);
    va_start(list, format);
    vfprintf(stderr, format, list);
    va_end(list);
    fprintf(stderr, "; see `beamward %s --help`\n", command->name);
    return CLI_WRONG_INPUT;
}

static const struct cli_option *find_option(const struct cli_command *command, const char *name, size_t length,
                                            size_t *index) {
    for (size_t i = 0; i < command->option_count; i++) {
        if (strlen(command->options[i].name) == length && strncmp(command->options[i].name, name, length) == 0) {
            *index = i;
            return &command->options[i];
        }
    }
    return NULL;
}

static enum cli_exit unknown_option(const struct cli_command *command, const char *word, size_t length) {
    const char *names[CLI_OPTIONS_MAX];
    char name[BW_NAME_SIZE];
    snprintf(name, sizeof name, "%.*s", (int)(length < sizeof name ? length : sizeof name - 1), word);
    for (size_t i = 0; i < command->option_count; i++)
        names[i] = command->options[i].name;
    const char *nearest = bw_nearest_name(name, names, command->option_count);
    if (nearest)
        return cli_usage_error(command, "unknown option %s; did you mean %s?", name, nearest);
    return cli_usage_error(command, "unknown option %s", name);
}

/* One option, with its value in the same word (--a=b) or the next; *used tells how many words it took. */
static enum cli_exit parse_option(struct cli_arguments *arguments, int count, char *const *words, int *used) {
    const struct cli_command *command = arguments->command;
    const char *equals = strchr(words[0], '=');
    size_t length = equals ? (size_t)(equals - words[0]) : strlen(words[0]);
    size_t index = 0;
    const struct cli_option *option = find_option(command, words[0], length, &index);
    if (!option)
        return unknown_option(command, words[0], length);
    if (arguments->values[index])
        return cli_usage_error(command, "%s is given twice", option->name);
    *used = 1;
    if (!option->value) {
        if (equals)
            return cli_usage_error(command, "%s takes no value", option->name);
        arguments->values[index] = "";
        return CLI_DONE;
    }
    if (equals) {
        arguments->values[index] = equals + 1;
    } else if (count > 1) {
        arguments->values[index] = words[1];
        *used = 2;
    }
    if (!arguments->values[index] || arguments->values[index][0] == '\0')
        return cli_usage_error(command, "%s needs a value: %s", option->name, option->value);
    return CLI_DONE;
}

static enum cli_exit check_arguments(const struct cli_arguments *arguments) {
    const struct cli_command *command = arguments->command;
    const char *format = cli_value(arguments, "--format");
    if (format && strcmp(format, "text") != 0 && strcmp(format, "json") != 0)
        return cli_usage_error(command, "--format %s: unknown; text or json would be right", format);
    if (cli_value(arguments, "--help"))
        return CLI_DONE;
    if (arguments->operand_count < command->operands_least)
        return cli_usage_error(command, "%s is missing", command->operands);
    return CLI_DONE;
}

enum cli_exit cli_parse(const struct cli_command *command, int count, char *const *words,
                        struct cli_arguments *arguments) {
    *arguments = (struct cli_arguments){.command = command};
    bool options_end = false;
    for (int i = 0; i < count;) {
        int used = 1;
        if (!options_end && strcmp(words[i], "--") == 0) {
            options_end = true;
        } else if (!options_end && words[i][0] == '-' && words[i][1] != '\0') {
            enum cli_exit exit_code = parse_option(arguments, count - i, words + i, &used);
            if (exit_code != CLI_DONE)
                return exit_code;
        } else if (arguments->operand_count < command->operands_most) {
            arguments->operands[arguments->operand_count++] = words[i];
        } else {
            return cli_usage_error(command, "%s: one word too many", words[i]);
        }
        i += used;
    }
    return check_arguments(arguments);
}

const char *cli_value(const struct cli_arguments *arguments, const char *name) {
    size_t index = 0;
    if (!find_option(arguments->command, name, strlen(name), &index))
        return NULL;
    return arguments->values[index];
}

bool cli_number(const struct cli_arguments *arguments, const char *name, double low, double high, bool *given,
                double *value) {
    const char *text = cli_value(arguments, name);
    *given = text != NULL;
    if (!text)
        return true;
    if (!bw_parse_number(text, value)) {
        cli_usage_error(arguments->command, "%s %s: not a plain number%s", name, text,
                        strchr(text, ',') ? "; write a decimal point" : "");
        return false;
    }
    if (!(*value >= low && *value <= high)) {
        cli_usage_error(arguments->command, "%s %s: outside %g to %g", name, text, low, high);
        return false;
    }
    return true;
}

bool cli_wants_json(const struct cli_arguments *arguments) {
    const char *format = cli_value(arguments, "--format");
    return format && strcmp(format, "json") == 0;
}
