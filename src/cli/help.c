#include "cli.h"

#include <stdio.h>

void cli_print_help(const struct cli_command *const *commands, size_t count) {
    puts("beamward - laser safety hazard calculator: MPE, NOHD, NHZ, optical density\n");
    puts("Usage: beamward COMMAND [OPTION]...\n");
    for (size_t i = 0; i < count; i++)
        printf("  %-9s %-5s %s\n", commands[i]->name, commands[i]->operands, commands[i]->answers);
    puts("\n`beamward COMMAND --help` tells its options and gives an example.");
    puts("Exit code: 0 nothing objectionable, 1 something needs action, 2 wrong input or");
    puts("command, 3 the system failed.\n");
    puts("The figures support the decisions of a laser safety officer; they do not replace");
    puts("the officer, local codes or licensed practice.");
}

void cli_print_command_help(const struct cli_command *command) {
    printf("Usage: beamward %s%s%s [OPTION]...\n\n%s.\n\n", command->name, command->operands[0] ? " " : "",
           command->operands, command->answers);
    for (size_t i = 0; i < command->option_count; i++) {
        char left[BW_NAME_SIZE];
        snprintf(left, sizeof left, "%s%s%s", command->options[i].name, command->options[i].value ? " " : "",
                 command->options[i].value ? command->options[i].value : "");
        printf("  %-24s %s\n", left, command->options[i].help);
    }
    printf("\nExample:\n  %s\n", command->example);
}
