/* Values of keys, and the faults that they may have. */
#include "internal.h"

#include <math.h>
#include <stdarg.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* ---- faults --------------------------------------------------------------------------------- */

static void add_fault(struct reading *reading, int line, const char *section, const char *key, const char *format,
                      va_list list) BW_PRINTF(5, 0);
static void add_fault(struct reading *reading, int line, const char *section, const char *key, const char *format,
                      va_list list) {
    enum { TEXT_SIZE = 1600 }; /* a line of the file and what is said about it */
    char text[TEXT_SIZE];
    vsnprintf(text, sizeof text, format, list);
    bw_faults_add(reading->faults, line, section, key, "%s", text);
}

void fault_key(struct reading *reading, const struct bw_ini_entry *entry, const char *format, ...) {
    va_list list;
    va_start(list, format);
    add_fault(reading, entry->line, entry->section, entry->key, format, list);
    va_end(list);
}

void fault_section(struct reading *reading, const struct section *section, const char *format, ...) {
    va_list list;
    va_start(list, format);
    add_fault(reading, section->head->line, section->head->section, "", format, list);
    va_end(list);
}

/* The word of a key by its name without unit. */
static const struct key_word *find_word(const struct section *section, const char *key) {
    const struct section_word *kind = schema_section(section->kind);
    for (size_t i = 0; i < kind->key_count; i++)
        if (strcmp(kind->keys[i].name, key) == 0)
            return &kind->keys[i];
    return NULL;
}

/* Whether an unknown key of the section may have been meant for this one; its fault is there already. */
static bool mistyped(const struct section *section, const struct key_word *word) {
    const struct unit_word *unit;
    char name[BW_NAME_SIZE];
    size_t size = strlen(word->name);
    for (size_t i = 0; i < section->key_count; i++) {
        const char *key = section->keys[i].key;
        if (schema_key(section->kind, key, &unit))
            continue;
        if (strncmp(key, word->name, size) == 0 && (key[size] == '\0' || key[size] == '_'))
            return true; /* without unit, or with a wrong one */
        if (schema_nearest_key(section->kind, key, name, sizeof name) == word)
            return true;
    }
    return false;
}

void fault_missing(struct reading *reading, const struct section *section, const char *key) {
    const struct key_word *word = find_word(section, key);
    if (!section->refused_line && word && !mistyped(section, word))
        fault_section(reading, section, "%.*s is missing; `%s` would be right", (int)strcspn(word->example, " "),
                      word->example, word->example);
}

/* ---- entries -------------------------------------------------------------------------------- */

const struct bw_ini_entry *value_entry(const struct section *section, const char *key, const struct unit_word **unit) {
    const struct key_word *wanted = find_word(section, key);
    for (size_t i = 0; wanted && i < section->key_count; i++) {
        const struct unit_word *found;
        if (schema_key(section->kind, section->keys[i].key, &found) != wanted)
            continue;
        if (unit)
            *unit = found;
        return &section->keys[i];
    }
    return NULL;
}

bool value_given(const struct section *section, const char *key) {
    return value_entry(section, key, NULL) != NULL;
}

/* ---- numbers -------------------------------------------------------------------------------- */

static bool all_digits(const char *text) {
    return text[0] != '\0' && text[strspn(text, "0123456789")] == '\0';
}

/* A comma where a number would take a point. Returns: false if that is not what is wrong. */
static bool explain_comma(struct bw_text *text, const char *number) {
    const char *comma = strchr(number, ',');
    char with_point[64];
    double value;
    if (!comma || strlen(number) >= sizeof with_point)
        return false;
    strcpy(with_point, number);
    with_point[comma - number] = '.';
    if (!bw_parse_number(with_point, &value))
        return false;
    if (all_digits(comma + 1) && strlen(comma + 1) == 3 && number[0] != '0') /* 10,000 may be ten thousand */
        bw_text_add(text, "%s: comma in a number; write %.*s%s or %s, whichever is meant", number,
                    (int)(comma - number), number, comma + 1, with_point);
    else
        bw_text_add(text, "%s: decimal comma; write %s", number, with_point);
    return true;
}

/* Nothing but a unit from here on. Exponents without digits are none. */
static bool is_unit(const char *text) {
    static const char letters[] = "abcdefghijklmnopqrstuvwxyzABCDEFGHIJKLMNOPQRSTUVWXYZ";
    while (*text == ' ')
        text++;
    return strcmp(text, "%") == 0 ||
           (text[0] != '\0' && text[strspn(text, letters)] == '\0' && strcmp(text, "e") != 0 && strcmp(text, "E") != 0);
}

void value_not_a_number(struct reading *reading, const struct bw_ini_entry *entry, const char *what,
                        const char *number) {
    struct bw_text text = {0};
    if (what)
        bw_text_add(&text, "%s: ", what);
    if (!explain_comma(&text, number)) {
        size_t digits = strspn(number, "0123456789.+-"), all = strspn(number, "0123456789.+-eE");
        if (digits > 0 && is_unit(number + digits))
            bw_text_add(&text, "%s: not a number; write a plain number, the unit is in the key", number);
        else if (digits > 0 && number[all] == '\0')
            bw_text_add(&text, "%s: not a number, or beyond all numbers; write a plain number, as in 8, 0.5 or 150e-9",
                        number);
        else
            bw_text_add(&text, "%s: not a number; write a plain number, as in 8, 0.5 or 150e-9", number);
    }
    fault_key(reading, entry, "%s", text.data ? text.data : "");
    reading->no_memory = reading->no_memory || text.failed;
    bw_text_free(&text);
}

/* Six digits; `1e6`, not `1e+06`. */
static const char *short_number(char out[BW_NUMBER_SIZE], double value) {
    snprintf(out, BW_NUMBER_SIZE, "%.6g", value);
    char *exponent = strchr(out, 'e');
    if (exponent) {
        long power = strtol(exponent + 1, NULL, 10);
        snprintf(exponent + 1, BW_NUMBER_SIZE - (size_t)(exponent + 1 - out), "%ld", power);
    }
    return out;
}

static void out_of_range(struct reading *reading, const struct bw_ini_entry *entry, const struct unit_word *unit,
                         double value, struct range range) {
    double to_si = unit ? unit->to_si : 1.;
    const char *how = value < 0. && range.least >= 0. ? "below 0" : value < range.least ? "too small" : "too large";
    char least[BW_NUMBER_SIZE], most[BW_NUMBER_SIZE];
    fault_key(reading, entry, "%s is %s; %s to %s%s%s would be right", entry->value, how,
              short_number(least, range.least / to_si), short_number(most, range.most / to_si), unit ? " " : "",
              unit ? unit->shown : "");
}

enum presence value_number(struct reading *reading, const struct section *section, const char *key, struct range range,
                           double *value) {
    static const double arithmetic = 1e-12; /* 1000 mm is 1 m, however a double rounds it */
    const struct unit_word *unit = NULL;
    const struct bw_ini_entry *entry = value_entry(section, key, &unit);
    double parsed;
    *value = nan("");
    if (!entry)
        return ABSENT;
    if (!bw_parse_number(entry->value, &parsed)) {
        value_not_a_number(reading, entry, NULL, entry->value);
        return WRONG;
    }
    parsed *= unit ? unit->to_si : 1.;
    if (!(parsed >= range.least * (1. - arithmetic) && parsed <= range.most * (1. + arithmetic))) {
        out_of_range(reading, entry, unit, parsed, range);
        return WRONG;
    }
    *value = fmin(fmax(parsed, range.least), range.most);
    return GIVEN;
}

/* ---- words and texts ------------------------------------------------------------------------ */

enum presence value_choice(struct reading *reading, const struct section *section, const char *key,
                           const char *const *words, size_t count, size_t *index) {
    const struct bw_ini_entry *entry = value_entry(section, key, NULL);
    if (!entry)
        return ABSENT;
    for (size_t i = 0; i < count; i++)
        if (strcmp(entry->value, words[i]) == 0) {
            *index = i;
            return GIVEN;
        }
    struct bw_text known = {0};
    schema_add_words(&known, words, count, " or ");
    fault_key(reading, entry, "%s: unknown; %s would be right", entry->value, known.data ? known.data : "");
    reading->no_memory = reading->no_memory || known.failed;
    bw_text_free(&known);
    return WRONG;
}

enum presence value_text(struct reading *reading, const struct section *section, const char *key, char *text,
                         size_t size) {
    const struct bw_ini_entry *entry = value_entry(section, key, NULL);
    text[0] = '\0';
    if (!entry)
        return ABSENT;
    if (strlen(entry->value) >= size) {
        fault_key(reading, entry, "has %zu bytes; at most %zu would be right", strlen(entry->value), size - 1);
        return WRONG;
    }
    strcpy(text, entry->value);
    return GIVEN;
}
