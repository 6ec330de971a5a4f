/* Tables that never pass 80 columns: the widest columns give way, their cells wrap. */
#include "internal.h"

#include <stdarg.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { GAP = 2, NARROWEST = 5 };

void table_begin(struct text_table *table, const char *alignment) {
    *table = (struct text_table){0};
    for (; alignment[table->columns] && table->columns < TABLE_COLUMNS_MAX; table->columns++)
        table->right[table->columns] = alignment[table->columns] == 'r';
}

static void add_cell(struct text_table *table, char *cell) {
    if (table->count == table->capacity) {
        size_t capacity = table->capacity ? 2 * table->capacity : 32;
        char **more = realloc(table->cells, capacity * sizeof *more);
        if (!more) {
            table->failed = true;
            free(cell);
            return;
        }
        table->cells = more;
        table->capacity = capacity;
    }
    table->cells[table->count++] = cell;
}

void table_cell(struct text_table *table, const char *format, ...) {
    va_list arguments, again;
    struct bw_text clean = {0};
    va_start(arguments, format);
    va_copy(again, arguments);
    int length = vsnprintf(NULL, 0, format, arguments);
    va_end(arguments);
    char *raw = length < 0 ? NULL : malloc((size_t)length + 1);
    if (raw) {
        vsnprintf(raw, (size_t)length + 1, format, again);
        report_clean(&clean, raw);
    }
    va_end(again);
    free(raw);
    if (!raw || clean.failed)
        table->failed = true;
    else
        add_cell(table, clean.data ? clean.data : bw_duplicate(""));
}

void table_quantity(struct text_table *table, const char *quantity) {
    char tied[2 * REPORT_QUANTITY_SIZE];
    size_t length = 0;
    for (; *quantity && length + 3 < sizeof tied; quantity++) {
        if (*quantity == ' ' && quantity[1] != '(')
            tied[length++] = '\xC2';
        tied[length++] = *quantity == ' ' && quantity[1] != '(' ? '\xA0' : *quantity;
    }
    tied[length] = '\0';
    table_cell(table, "%s", tied);
}

/* Columns of the longest word: what a column needs so that none is broken. */
static size_t longest_word(const char *cell) {
    size_t longest = 0, width = 0;
    while (*cell) {
        unsigned long code;
        cell = report_next(cell, &code);
        width = code == ' ' ? 0 : width + (size_t)report_columns(code);
        longest = width > longest ? width : longest;
    }
    return longest;
}

/* The widest column that is still wider than it has to be. */
static size_t widest(const struct text_table *table, const size_t *widths, const size_t *least) {
    size_t found = table->columns;
    for (size_t i = 0; i < table->columns; i++)
        if (widths[i] > least[i] && (found == table->columns || widths[i] > widths[found]))
            found = i;
    return found;
}

/* Gives way until the total fits: the widest first; no word is broken before all columns are down to their words. */
static void measure(const struct text_table *table, size_t widths[TABLE_COLUMNS_MAX], size_t indent) {
    size_t total = indent + GAP * (table->columns - 1), least[TABLE_COLUMNS_MAX];
    for (size_t i = 0; i < table->columns; i++)
        widths[i] = least[i] = 1;
    for (size_t i = 0; i < table->count; i++) {
        size_t width = report_width(table->cells[i]), word = longest_word(table->cells[i]), at = i % table->columns;
        widths[at] = width > widths[at] ? width : widths[at];
        least[at] = word > least[at] ? word : least[at];
    }
    for (size_t i = 0; i < table->columns; i++)
        total += widths[i];
    for (; total > TEXT_COLUMNS; total--) {
        size_t at = widest(table, widths, least);
        if (at == table->columns) {
            for (size_t i = 0; i < table->columns; i++)
                least[i] = NARROWEST;
            at = widest(table, widths, least);
        }
        if (at == table->columns)
            return;
        widths[at]--;
    }
}

static void blanks(struct bw_text *out, size_t count) {
    for (; count > 0; count--)
        bw_text_add(out, " ");
}

/* A blank that must not be broken at (U+00A0) becomes a plain one. */
static void untied(struct bw_text *out, const char *start, size_t length) {
    for (const char *at = start; at < start + length;) {
        unsigned long code;
        at = report_next(at, &code);
        report_encode(out, code == 0xA0 ? ' ' : code);
    }
}

static size_t piece_width(const char *start, size_t length) {
    size_t width = 0;
    for (const char *at = start; at < start + length;) {
        unsigned long code;
        at = report_next(at, &code);
        width += (size_t)report_columns(code);
    }
    return width;
}

/* One line of a row. Returns: true if any cell goes on. */
static bool print_line(const struct text_table *table, const size_t *widths, const char **rest, struct bw_text *out,
                       size_t indent) {
    bool goes_on = false;
    size_t owed = indent; /* blanks before the next visible piece: none at the end of a line */
    for (size_t i = 0; i < table->columns; i++) {
        const char *start = rest[i];
        size_t length = text_wrap_line(&rest[i], widths[i]), width = piece_width(start, length);
        size_t pad = widths[i] > width ? widths[i] - width : 0;
        if (length > 0) {
            blanks(out, owed + (table->right[i] ? pad : 0));
            untied(out, start, length);
            owed = table->right[i] ? 0 : pad;
        } else {
            owed += widths[i];
        }
        owed += GAP;
        goes_on = goes_on || *rest[i];
    }
    bw_text_add(out, "\n");
    return goes_on;
}

void table_print(struct text_table *table, struct bw_text *out, size_t indent) {
    size_t widths[TABLE_COLUMNS_MAX];
    for (size_t i = 0; i < table->count; i++)
        table->failed = table->failed || !table->cells[i];
    if (!table->failed && table->columns > 0) {
        measure(table, widths, indent);
        for (size_t row = 0; row + table->columns <= table->count; row += table->columns) {
            const char *rest[TABLE_COLUMNS_MAX];
            for (size_t i = 0; i < table->columns; i++)
                rest[i] = table->cells[row + i];
            while (print_line(table, widths, rest, out, indent))
                ;
        }
    }
    out->failed = out->failed || table->failed;
    for (size_t i = 0; i < table->count; i++)
        free(table->cells[i]);
    free(table->cells);
    *table = (struct text_table){0};
}
