/* The cells of one printed row: what does not read as its column says is a fault, never a guess. */
#include "read.h"

#include <ctype.h>
#include <math.h>
#include <stdarg.h>
#include <stdio.h>
#include <string.h>

void bw_cells_fault(struct cells *cells, const char *format, ...) {
    char text[CELL_SIZE * 3];
    va_list arguments;
    va_start(arguments, format);
    vsnprintf(text, sizeof text, format, arguments);
    va_end(arguments);
    cells->good = false;
    bw_faults_add(cells->faults, cells->entry->line, cells->entry->section, cells->entry->key, "%s", text);
}

/* Copies the text from..to without the blanks around it; cut, should it not fit. Returns: its whole length. */
static size_t copy_trimmed(char out[CELL_SIZE], const char *from, const char *to) {
    while (from < to && isspace((unsigned char)*from))
        from++;
    while (to > from && isspace((unsigned char)to[-1]))
        to--;
    size_t length = (size_t)(to - from), kept = length < CELL_SIZE ? length : CELL_SIZE - 1;
    memcpy(out, from, kept);
    out[kept] = '\0';
    return length;
}

static size_t count_columns(const char *text) {
    size_t count = 1;
    for (; *text != '\0'; text++)
        if (*text == '|')
            count++;
    return count;
}

bool bw_cells_split(struct cells *cells, const struct bw_ini_entry *entry, struct bw_faults *faults,
                    const char *columns) {
    cells->entry = entry;
    cells->faults = faults;
    cells->good = true;
    cells->count = 0;
    size_t want = count_columns(columns), have = count_columns(entry->value);
    if (have != want) { /* no reader wants more than CELLS_MAX */
        bw_cells_fault(cells, "has %zu columns; wants %zu: %s", have, want, columns);
        return false;
    }
    const char *from = entry->value;
    for (size_t i = 0; i < have; i++) {
        const char *to = strchr(from, '|');
        if (to == NULL)
            to = from + strlen(from);
        if (copy_trimmed(cells->cell[i], from, to) >= CELL_SIZE)
            bw_cells_fault(cells, "column %zu is longer than %d characters; shorten it", i + 1, CELL_SIZE - 1);
        else if (cells->cell[i][0] == '\0')
            bw_cells_fault(cells, "column %zu is empty; wants %zu: %s", i + 1, want, columns);
        from = to + 1;
    }
    cells->count = have;
    return cells->good;
}

static double parse_quotient(const char *text) {
    char top[CELL_SIZE];
    double dividend, divisor, value;
    const char *slash = strchr(text, '/');
    if (slash == NULL)
        return bw_parse_number(text, &value) ? value : limits_nan;
    copy_trimmed(top, text, slash);
    if (!bw_parse_number(top, &dividend) || !bw_parse_number(slash + 1, &divisor))
        return limits_nan;
    return dividend / divisor;
}

static double number_within(struct cells *cells, const char *text, const char *what, double low, double high) {
    char low_text[LIMITS_NUMBER_SIZE], high_text[LIMITS_NUMBER_SIZE];
    double value = parse_quotient(text);
    if (!isfinite(value)) {
        bw_cells_fault(cells, "%s '%s' is not a number; wants a plain decimal number such as 5e-3", what, text);
        return limits_nan;
    }
    if (!(value >= low && value <= high)) {
        bw_cells_fault(cells, "%s %s is out of range; wants %s to %s", what, text, bw_limits_number(low_text, low),
                       bw_limits_number(high_text, high));
        return limits_nan;
    }
    return value;
}

double bw_cells_number(struct cells *cells, size_t column, const char *what, double low, double high) {
    return number_within(cells, cells->cell[column], what, low, high);
}

bool bw_cells_span_texts(struct cells *cells, size_t column, const char *what, char low[CELL_SIZE],
                         char high[CELL_SIZE], struct span *open) {
    const char *text = cells->cell[column];
    const char *dots = strstr(text, "..");
    if (dots == NULL || dots[2] == '.') {
        bw_cells_fault(cells, "%s '%s' is not a range; wants two values with .. between them", what, text);
        return false;
    }
    const char *from = text, *to = dots + 2;
    while (isspace((unsigned char)*to))
        to++;
    open->open_low = *from == '>';
    open->open_high = *to == '<';
    copy_trimmed(low, from + (open->open_low ? 1 : 0), dots); /* parts of a cell fit into one */
    copy_trimmed(high, to + (open->open_high ? 1 : 0), text + strlen(text));
    return true;
}

struct span bw_cells_span(struct cells *cells, size_t column, const char *what, double low, double high, int allowed) {
    char low_text[CELL_SIZE], high_text[CELL_SIZE];
    struct span span = {limits_nan, limits_nan, false, false};
    if (!bw_cells_span_texts(cells, column, what, low_text, high_text, &span))
        return span;
    if ((span.open_low && !(allowed & EDGES_OPEN_LOW)) || (span.open_high && !(allowed & EDGES_OPEN_HIGH)))
        bw_cells_fault(cells, "%s '%s' has an open edge; wants closed edges here", what, cells->cell[column]);
    span.low = number_within(cells, low_text, what, low, high);
    if (high_text[0] == '\0' && (allowed & EDGES_UNBOUNDED))
        span.high = limits_infinity;
    else
        span.high = number_within(cells, high_text, what, low, high);
    if (span.low >= span.high)
        bw_cells_fault(cells, "%s %s runs backwards; wants the lower edge first", what, cells->cell[column]);
    return span;
}

struct span bw_cells_wavelength(struct cells *cells, size_t column) {
    return bw_cells_span(cells, column, "wavelength", limits_wavelength_low_nm, limits_wavelength_high_nm,
                         EDGES_OPEN_HIGH);
}

size_t bw_cells_word(struct cells *cells, size_t column, const char *what, const char *const *words, size_t count) {
    const char *word = cells->cell[column];
    for (size_t i = 0; i < count; i++)
        if (strcmp(word, words[i]) == 0)
            return i;
    const char *nearest = bw_nearest_name(word, words, count);
    char list[CELL_SIZE] = "";
    for (size_t i = 0; i < count; i++) {
        size_t length = strlen(list);
        snprintf(list + length, sizeof list - length, "%s%s", i == 0 ? "" : i + 1 == count ? " or " : ", ", words[i]);
    }
    if (nearest != NULL && strlen(word) > 2)
        bw_cells_fault(cells, "unknown %s '%s'; did you mean %s?", what, word, nearest);
    else
        bw_cells_fault(cells, "unknown %s '%s'; wants %s", what, word, list);
    return count;
}

bool bw_cells_effect(struct cells *cells, size_t column, enum bw_effect *effect) {
    const char *const names[BW_EFFECTS] = {bw_effect_name(BW_RETINA_THERMAL), bw_effect_name(BW_RETINA_PHOTOCHEMICAL),
                                           bw_effect_name(BW_ULTRAVIOLET), bw_effect_name(BW_ANTERIOR),
                                           bw_effect_name(BW_SKIN_EFFECT)};
    static const enum bw_effect effects[BW_EFFECTS] = {BW_RETINA_THERMAL, BW_RETINA_PHOTOCHEMICAL, BW_ULTRAVIOLET,
                                                       BW_ANTERIOR, BW_SKIN_EFFECT};
    size_t found = bw_cells_word(cells, column, "effect", names, BW_EFFECTS);
    if (found < BW_EFFECTS)
        *effect = effects[found];
    return found < BW_EFFECTS;
}
