/* cli - what the commands share: options, reading a case, writing out. Private to the folder. */
#ifndef BEAMWARD_CLI_H
#define BEAMWARD_CLI_H

#include <beamward/report.h>

/* What the shell is told. */
enum cli_exit { CLI_DONE = 0, CLI_NEEDS_ACTION = 1, CLI_WRONG_INPUT = 2, CLI_SYSTEM_FAILED = 3 };

struct cli_option {
    const char *name;  /* "--rules" */
    const char *value; /* what it takes, as the help names it; NULL: a switch */
    const char *help;
};

enum { CLI_OPTIONS_MAX = 24, CLI_OPERANDS_MAX = 8 };

struct cli_arguments {
    const struct cli_command *command;
    size_t operand_count;
    const char *operands[CLI_OPERANDS_MAX];
    const char *values[CLI_OPTIONS_MAX]; /* by the index of the option; switches hold "" when given */
};

struct cli_command {
    const char *name, *operands, *answers, *example;
    size_t operands_least, operands_most;
    const struct cli_option *options;
    size_t option_count;
    enum cli_exit (*run)(const struct cli_arguments *arguments);
};

extern const struct cli_command cli_new, cli_limit, cli_distance, cli_eyewear, cli_room, cli_assess, cli_tables;

/* ---- options.c */
/* Value of an option, "" for a given switch, NULL if it was not given. */
const char *cli_value(const struct cli_arguments *arguments, const char *name);
/* A number in a range. Returns: false after printing what is wrong; *given tells whether the option was there. */
bool cli_number(const struct cli_arguments *arguments, const char *name, double low, double high, bool *given,
                double *value);
/* True for --format json. The parser has refused all else. */
bool cli_wants_json(const struct cli_arguments *arguments);
enum cli_exit cli_parse(const struct cli_command *command, int count, char *const *words,
                        struct cli_arguments *arguments);
/* "beamward COMMAND: text" and a hint how to get help, on stderr. Returns: CLI_WRONG_INPUT. */
enum cli_exit cli_usage_error(const struct cli_command *command, const char *format, ...) BW_PRINTF(2, 3);

/* ---- help.c */
void cli_print_help(const struct cli_command *const *commands, size_t count);
void cli_print_command_help(const struct cli_command *command);

/* ---- input.c */
/* A case file with the rule set that it is judged by. */
struct cli_job {
    const char *path;
    struct bw_text bytes; /* the file as it is on disk */
    struct bw_case *the_case;
    const struct bw_table *table;
    struct bw_table *loaded; /* from --tables; owned */
};
enum cli_exit cli_job_read(const struct cli_arguments *arguments, struct cli_job *job);
void cli_job_free(struct cli_job *job);
/* The rule set by --tables and --rules; case_rules (may be NULL) is what the case file asks for. */
enum cli_exit cli_find_table(const struct cli_arguments *arguments, const char *case_rules, const char *case_path,
                             const struct bw_table **table, struct bw_table **loaded);
/* --rules all. */
bool cli_wants_all_rules(const struct cli_arguments *arguments);
/* A rule set from a file; faults are printed. The caller frees it. */
enum cli_exit cli_load_table(const char *path, struct bw_table **table);
/* Runs the assessment, with the options --laser, --handpiece, --room, --at and --working of the command. */
enum cli_exit cli_job_assess(const struct cli_arguments *arguments, const struct cli_job *job, unsigned parts,
                             struct bw_result **result);
void cli_print_faults(const char *path, struct bw_faults *faults);
enum cli_exit cli_print_error(const char *subject, const struct bw_error *error);

/* Reads the case, assesses it, answers, and frees both. */
typedef enum cli_exit cli_answer(const struct cli_arguments *arguments, const struct cli_job *job,
                                 struct bw_result *result);
enum cli_exit cli_run_case(const struct cli_arguments *arguments, unsigned parts, cli_answer *answer);

/* ---- output.c */
/* Prints to stdout and frees the text. */
enum cli_exit cli_print(struct bw_text *text);
/* Prints the text unless --quiet was given. */
enum cli_exit cli_print_unless_quiet(const struct cli_arguments *arguments, struct bw_text *text);

/* Files that appear together or not at all: written beside, then renamed. */
enum { CLI_FILES_MAX = 80 };
struct cli_files {
    size_t count;
    char *paths[CLI_FILES_MAX], *beside[CLI_FILES_MAX];
};
/* Writes one file beside its place; frees the text. A failure is printed and removes all written so far. */
enum cli_exit cli_files_add(struct cli_files *files, const char *directory, const char *name, struct bw_text *text);
enum cli_exit cli_files_rename(struct cli_files *files);
void cli_files_discard(struct cli_files *files);
enum cli_exit cli_make_directory(const char *path);

/* Options that several commands take. */
#define CLI_COMMON_OPTIONS {"--rules", "ID", "rule set to judge by (see `beamward tables`)"}, CLI_OTHER_OPTIONS
#define CLI_COMPARING_OPTIONS                                                                                          \
    {"--rules", "ID|all", "rule set (`beamward tables`); all: side by side"}, CLI_OTHER_OPTIONS
#define CLI_OTHER_OPTIONS                                                                                              \
    {"--tables", "FILE", "load another rule set from an INI file"}, {"--format", "text|json", "what to print (text)"}, \
        {"--working", NULL, "show each figure with its formula, row and clause"},                                      \
        {"--quiet", NULL, "print nothing but errors; the exit code tells"}, {                                          \
        "--help", NULL, "this text"                                                                                    \
    }
#define CLI_NARROWING_OPTIONS                                                                                          \
    {"--laser", "NAME", "only this laser"}, {"--handpiece", "NAME", "only this handpiece"}, {                          \
        "--room", "NAME", "only this room"                                                                             \
    }

#define CLI_COUNT(array) (sizeof(array) / sizeof((array)[0]))

#endif
