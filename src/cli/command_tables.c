/* beamward tables: the rule sets, readable; checks a foreign one. */
#include "cli.h"

#include <stdio.h>
#include <string.h>

static const struct cli_option options[] = {
    {"--check", "FILE", "check a rule set in an INI file"},
    {"--help", NULL, "this text"},
};

static enum cli_exit list_tables(void) {
    struct bw_text text = {0};
    for (size_t i = 0; i < bw_tables_count(); i++) {
        const struct bw_table *table = bw_tables_at(i);
        size_t rows, from_memory;
        double low_nm, high_nm;
        bw_table_counts(table, &rows, &from_memory);
        bw_table_span(table, BW_EYE, &low_nm, &high_nm);
        bw_text_add(&text, "%-18s %.0f to %.0f nm, %zu rows, %zu of them from memory\n    %s\n", bw_table_id(table),
                    low_nm, high_nm, rows, from_memory, bw_table_title(table));
    }
    bw_text_add(&text, "%-18s %zu materials and their reflectances\n", "materials", bw_materials_count());
    bw_text_add(&text, "\n`beamward tables ID` prints one with its sources.\n");
    return cli_print(&text);
}

static enum cli_exit unknown_table(const struct cli_arguments *arguments, const char *id) {
    const char *names[32];
    size_t count = 0;
    for (; count < bw_tables_count() && count < CLI_COUNT(names) - 1; count++)
        names[count] = bw_table_id(bw_tables_at(count));
    names[count++] = "materials";
    const char *nearest = bw_nearest_name(id, names, count);
    if (nearest)
        return cli_usage_error(arguments->command, "no table %s; did you mean %s?", id, nearest);
    return cli_usage_error(arguments->command, "no table %s; `beamward tables` lists them", id);
}

static enum cli_exit print_table(const struct cli_arguments *arguments, const char *id) {
    struct bw_text text = {0};
    if (strcmp(id, "materials") == 0) {
        bw_materials_print(&text);
        return cli_print(&text);
    }
    const struct bw_table *table = bw_tables_find(id);
    if (!table)
        return unknown_table(arguments, id);
    bw_table_print(table, &text);
    return cli_print(&text);
}

static enum cli_exit check_table(const char *path) {
    struct bw_table *table = NULL;
    enum cli_exit exit_code = cli_load_table(path, &table);
    if (exit_code != CLI_DONE)
        return exit_code;
    size_t rows, from_memory;
    bw_table_counts(table, &rows, &from_memory);
    printf("%s: %s is sound: %zu rows, %zu of them from memory\n", path, bw_table_id(table), rows, from_memory);
    bw_table_free(table);
    return CLI_DONE;
}

static enum cli_exit run(const struct cli_arguments *arguments) {
    const char *path = cli_value(arguments, "--check");
    if (path && arguments->operand_count > 0)
        return cli_usage_error(arguments->command, "either an ID or --check FILE");
    if (path)
        return check_table(path);
    return arguments->operand_count > 0 ? print_table(arguments, arguments->operands[0]) : list_tables();
}

const struct cli_command cli_tables = {
    .name = "tables",
    .operands = "[ID]",
    .answers = "The rule sets, readable, with sources; --check validates one",
    .example = "beamward tables iec-60825-1-2014",
    .operands_least = 0,
    .operands_most = 1,
    .options = options,
    .option_count = CLI_COUNT(options),
    .run = run,
};
