/* What a printed row says, for a sentence that quotes it. */
#include "internal.h"

#include <ctype.h>
#include <stdio.h>
#include <string.h>

static void append(char out[BW_FORMULA_SIZE], const char *text) {
    size_t length = strlen(out);
    snprintf(out + length, BW_FORMULA_SIZE - length, "%s", text);
}

static void limit_formula(const struct limit_row *row, char out[BW_FORMULA_SIZE]) {
    char number[LIMITS_NUMBER_SIZE];
    snprintf(out, BW_FORMULA_SIZE, "%s = %s", bw_limits_quantity_name(row->quantity),
             bw_limits_number(number, row->value));
    if (row->time_power.law != POWER_0) {
        append(out, " t^");
        append(out, bw_limits_number(number, row->time_power.exponent));
    }
    for (size_t i = 0; i < row->use_count; i++) {
        size_t from = strlen(out);
        append(out, " ");
        append(out, row->uses[i].label);
        for (; out[from] != '\0'; from++)
            out[from] = (char)toupper((unsigned char)out[from]);
    }
}

static void train_formula(const struct train_row *row, char out[BW_FORMULA_SIZE]) {
    char number[LIMITS_NUMBER_SIZE];
    bool one = !(row->scale < 1.0) && !(row->scale > 1.0);
    snprintf(out, BW_FORMULA_SIZE, "%s", one && row->power.law != POWER_0 ? "" : bw_limits_number(number, row->scale));
    if (row->power.law == POWER_0)
        return;
    append(out, one ? "N^" : " N^");
    append(out, bw_limits_number(number, row->power.exponent));
    if (row->floor > 0.0) {
        append(out, ", at least ");
        append(out, bw_limits_number(number, row->floor));
    }
}

/* Given:    table; source  of a limit or of a train correction
 * Returned: out     the row as a formula; empty if the rule set has no such row
 * Returns:  out */
const char *bw_limits_row_formula(const struct bw_table *table, const struct bw_source_note *source,
                                  char out[BW_FORMULA_SIZE]) {
    out[0] = '\0';
    if (source->section == NULL || source->row == NULL)
        return out;
    for (size_t i = 0; i < table->row_count; i++)
        if (strcmp(table->sections[table->rows[i].section].name, source->section) == 0 &&
            strcmp(table->rows[i].note.key, source->row) == 0)
            limit_formula(&table->rows[i], out);
    for (size_t i = 0; i < table->train_count && strcmp(source->section, "train") == 0; i++)
        if (strcmp(table->train[i].note.key, source->row) == 0)
            train_formula(&table->train[i], out);
    return out;
}
