/* The guard in front of iniparser 4.1. That library silently lets the last of two equal keys or sections win; joins
 * a line that ends in `\` with the next, comments included; cuts a value at `;` or `#`; drops text after a closing
 * quote; takes `[a] ; x = 1` for a key; misses a section with `:` in its name; refuses lines of 1023 bytes; skips
 * lines after a NUL; stumbles on a byte order mark and on CR-only line ends. All of these are faults here. */
#include "internal.h"

#include <stdlib.h>
#include <string.h>

/* ---- bytes ---------------------------------------------------------------------------------- */

/* Length of the UTF-8 sequence that starts here, 0 if it is not one (RFC 3629). */
static size_t utf8_length(const unsigned char *at, size_t left) {
    static const struct {
        unsigned char first, last, low, high;
        size_t length;
    } forms[] = {{0x00, 0x7f, 0x80, 0xbf, 1}, {0xc2, 0xdf, 0x80, 0xbf, 2}, {0xe0, 0xe0, 0xa0, 0xbf, 3},
                 {0xe1, 0xec, 0x80, 0xbf, 3}, {0xed, 0xed, 0x80, 0x9f, 3}, {0xee, 0xef, 0x80, 0xbf, 3},
                 {0xf0, 0xf0, 0x90, 0xbf, 4}, {0xf1, 0xf3, 0x80, 0xbf, 4}, {0xf4, 0xf4, 0x80, 0x8f, 4}};
    for (size_t i = 0; i < sizeof forms / sizeof forms[0]; i++) {
        if (at[0] < forms[i].first || at[0] > forms[i].last || left < forms[i].length)
            continue;
        if (forms[i].length > 1 && (at[1] < forms[i].low || at[1] > forms[i].high))
            return 0;
        for (size_t j = 2; j < forms[i].length; j++)
            if (at[j] < 0x80 || at[j] > 0xbf)
                return 0;
        return forms[i].length;
    }
    return 0;
}

/* Only the first of each kind is worth a message. */
static void guard_characters(const unsigned char *bytes, size_t length, struct bw_faults *faults) {
    int line = 1;
    bool told_encoding = false, told_control = false, told_return = false;
    for (size_t i = 0; i < length;) {
        size_t step = utf8_length(bytes + i, length - i);
        bool control = bytes[i] < 0x20 && bytes[i] != '\n' && bytes[i] != '\t' && bytes[i] != '\r';
        bool lone_return = bytes[i] == '\r' && (i + 1 == length || bytes[i + 1] != '\n');
        if (step == 0 && !told_encoding) {
            bw_faults_add(faults, line, "", "", "not UTF-8 text; save the file as UTF-8");
            told_encoding = true;
        }
        if ((control || bytes[i] == 0x7f) && !told_control) {
            bw_faults_add(faults, line, "", "", "control character 0x%02x; plain text would be right", bytes[i]);
            told_control = true;
        }
        if (lone_return && !told_return) {
            bw_faults_add(faults, line, "", "", "carriage return without a line feed; save with LF or CR LF line ends");
            told_return = true;
        }
        if (bytes[i] == '\n')
            line++;
        i += step > 0 ? step : 1;
    }
}

void bw_ini_guard_bytes(const char *bytes, size_t length, struct bw_faults *faults) {
    const unsigned char *raw = (const unsigned char *)bytes;
    if (length > INI_BYTES_MAX)
        bw_faults_add(faults, 0, "", "", "larger than 4 MiB; a file of this kind has a few kilobytes");
    else if (length >= 2 && ((raw[0] == 0xff && raw[1] == 0xfe) || (raw[0] == 0xfe && raw[1] == 0xff)))
        bw_faults_add(faults, 1, "", "", "UTF-16 text; save the file as UTF-8");
    else
        guard_characters(raw, length, faults);
}

/* ---- lines ---------------------------------------------------------------------------------- */

struct line {
    const char *text; /* trimmed */
    size_t length;
    int number;
};

struct scan {
    struct bw_ini *ini;
    struct bw_faults *faults;
    char section[INI_LINE_MAX + 1];
    bool has_section, told_keys;
    enum bw_status status;
};

static bool is_blank(char c) {
    return c == ' ' || c == '\t';
}

static void trim(const char **text, size_t *length) {
    while (*length > 0 && is_blank((*text)[0])) {
        (*text)++;
        (*length)--;
    }
    while (*length > 0 && is_blank((*text)[*length - 1]))
        (*length)--;
}

static bool is_comment(const char *text, size_t length) {
    return length == 0 || text[0] == ';' || text[0] == '#';
}

static char lower(char c) {
    return c >= 'A' && c <= 'Z' ? (char)(c - 'A' + 'a') : c;
}

/* Copies a name in lower case. Returns: the first character that a name may not hold, or NUL. */
static char copy_name(char *out, const char *text, size_t length, bool blanks) {
    size_t i = 0;
    for (; i < length; i++) {
        out[i] = lower(text[i]);
        bool letter = (out[i] >= 'a' && out[i] <= 'z') || (out[i] >= '0' && out[i] <= '9');
        if (!letter && !strchr("-_.", out[i]) && !(blanks && text[i] == ' '))
            return text[i];
    }
    out[i] = '\0';
    return '\0';
}

static void add_entry(struct scan *scan, const char *key, const char *value, int line) {
    if (scan->ini->count >= INI_KEYS_MAX) {
        if (!scan->told_keys)
            bw_faults_add(scan->faults, line, "", "", "more than %d keys; split the file", INI_KEYS_MAX);
        scan->told_keys = true;
        return;
    }
    if (bw_ini_add(scan->ini, scan->section, key, value, line) != BW_OK)
        scan->status = BW_NO_MEMORY;
}

static void scan_section(struct scan *scan, struct line line) {
    const char *close = memchr(line.text, ']', line.length);
    scan->has_section = false;
    if (!close) {
        bw_faults_add(scan->faults, line.number, "", "", "section without its closing ]");
        return;
    }
    const char *name = line.text + 1, *rest = close + 1;
    size_t length = (size_t)(close - name), left = line.length - (size_t)(rest - line.text);
    trim(&name, &length);
    trim(&rest, &left);
    if (!is_comment(rest, left)) {
        bw_faults_add(scan->faults, line.number, "", "", "text after the ] of a section; begin a new line");
        return;
    }
    if (memchr(rest, '=', left)) {
        bw_faults_add(scan->faults, line.number, "", "",
                      "comment with = after a section would be read as a key; put the comment on its own line");
        return;
    }
    char wrong = copy_name(scan->section, name, length, true);
    if (wrong) { /* the messages of its keys name it as it is written */
        memcpy(scan->section, name, length);
        scan->section[length] = '\0';
    }
    if (wrong)
        bw_faults_add(scan->faults, line.number, "", "", "%s in a section's name; letters, digits, - and blanks would be right",
                      wrong == '\t' ? "a tabulator" : (char[]){'`', wrong >= ' ' && wrong < 0x7f ? wrong : '?', '`', 0});
    else if (length == 0)
        bw_faults_add(scan->faults, line.number, "", "", "section without a name");
    else if (strstr(scan->section, "  "))
        bw_faults_add(scan->faults, line.number, "", "", "several blanks in a section's name; one blank between its words");
    else
        scan->has_section = true;
    if (scan->has_section)
        add_entry(scan, "", "", line.number);
}

/* The value without quotes and comment. Returns: false after a fault. */
static bool scan_value(struct scan *scan, const char *key, struct line line, const char **value, size_t *length) {
    struct bw_faults *faults = scan->faults;
    trim(value, length);
    if (*length > 0 && ((*value)[0] == '"' || (*value)[0] == '\'')) {
        const char *close = memchr(*value + 1, (*value)[0], *length - 1);
        if (!close) {
            bw_faults_add(faults, line.number, scan->section, key, "quote without its closing %c", (*value)[0]);
            return false;
        }
        const char *rest = close + 1;
        size_t left = *length - (size_t)(rest - *value);
        trim(&rest, &left);
        if (!is_comment(rest, left)) {
            bw_faults_add(faults, line.number, scan->section, key, "text after the closing quote");
            return false;
        }
        *length = (size_t)(close - *value) - 1;
        (*value)++;
    } else {
        for (size_t i = 0; i < *length; i++) {
            if ((*value)[i] != ';' && (*value)[i] != '#')
                continue;
            if (i > 0 && !is_blank((*value)[i - 1])) {
                bw_faults_add(faults, line.number, scan->section, key,
                              "%c inside the value; put the value in double quotes, or a blank before a comment",
                              (*value)[i]);
                return false;
            }
            *length = i;
        }
    }
    trim(value, length);
    if (*length == 0) {
        bw_faults_add(faults, line.number, scan->section, key, "has no value; write one or remove the key");
        return false;
    }
    return true;
}

static void scan_key(struct scan *scan, struct line line) {
    const char *equals = memchr(line.text, '=', line.length), *name = line.text;
    size_t length = equals ? (size_t)(equals - name) : 0;
    char key[INI_LINE_MAX + 1], text[INI_LINE_MAX + 1];
    if (!equals) {
        bw_faults_add(scan->faults, line.number, scan->section, "",
                      "`%.*s` is neither a section nor a key; `key = value` would be right",
                      (int)(line.length < 40 ? line.length : 40), line.text);
        return;
    }
    trim(&name, &length);
    if (length == 0 || copy_name(key, name, length, false) != '\0') {
        bw_faults_add(scan->faults, line.number, scan->section, "",
                      "`%.*s` is no name for a key; letters, digits, _ and - would be right",
                      (int)(length < 40 ? length : 40), name);
        return;
    }
    const char *value = equals + 1;
    size_t value_length = line.length - (size_t)(value - line.text);
    if (!scan_value(scan, key, line, &value, &value_length))
        return;
    memcpy(text, value, value_length);
    text[value_length] = '\0';
    if (!scan->has_section) {
        if (scan->section[0] == '\0')
            bw_faults_add(scan->faults, line.number, "", key, "key before any section; begin with [case] or [table]");
        return; /* keys of a section that was refused have their fault already */
    }
    add_entry(scan, key, text, line.number);
}

static void scan_line(struct scan *scan, struct line line) {
    if (line.length > 0 && line.text[line.length - 1] == '\r')
        line.length--;
    if (line.length > INI_LINE_MAX) {
        bw_faults_add(scan->faults, line.number, "", "", "line of more than %d bytes; split it over several keys",
                      INI_LINE_MAX);
        return;
    }
    trim(&line.text, &line.length);
    if (line.length > 0 && line.text[line.length - 1] == '\\')
        bw_faults_add(scan->faults, line.number, "", "", "line ends in \\; a value ends with its line, remove the \\");
    else if (is_comment(line.text, line.length))
        return;
    else if (line.text[0] == '[')
        scan_section(scan, line);
    else
        scan_key(scan, line);
}

enum bw_status bw_ini_guard_lines(const char *bytes, size_t length, struct bw_ini *ini, struct bw_faults *faults) {
    struct scan *scan = calloc(1, sizeof *scan);
    if (!scan)
        return BW_NO_MEMORY;
    scan->ini = ini;
    scan->faults = faults;
    int number = 1;
    for (size_t at = 0; at < length && scan->status == BW_OK && !scan->told_keys; number++) {
        const char *end = memchr(bytes + at, '\n', length - at);
        size_t line_length = end ? (size_t)(end - bytes) - at : length - at;
        scan_line(scan, (struct line){bytes + at, line_length, number});
        at += line_length + 1;
    }
    enum bw_status status = scan->status;
    free(scan);
    return status;
}

/* ---- repeats -------------------------------------------------------------------------------- */

static int compare_entries(const void *a, const void *b) {
    const struct bw_ini_entry *const *first = a, *const *second = b;
    int order = strcmp((*first)->section, (*second)->section);
    if (order == 0)
        order = strcmp((*first)->key, (*second)->key);
    return order != 0 ? order : ((*first)->line > (*second)->line) - ((*first)->line < (*second)->line);
}

enum bw_status bw_ini_guard_repeats(const struct bw_ini *ini, struct bw_faults *faults) {
    if (ini->count == 0)
        return BW_OK;
    const struct bw_ini_entry **sorted = malloc(ini->count * sizeof *sorted);
    if (!sorted)
        return BW_NO_MEMORY;
    for (size_t i = 0; i < ini->count; i++)
        sorted[i] = &ini->entries[i];
    qsort(sorted, ini->count, sizeof *sorted, compare_entries);
    for (size_t i = 1; i < ini->count; i++) {
        const struct bw_ini_entry *first = sorted[i - 1], *again = sorted[i];
        if (strcmp(first->section, again->section) != 0 || strcmp(first->key, again->key) != 0)
            continue;
        if (again->key[0])
            bw_faults_add(faults, again->line, again->section, again->key, "given twice, first in line %d; keep one",
                          first->line);
        else
            bw_faults_add(faults, again->line, again->section, "",
                          "section given twice, first in line %d; join them under one name or give it another",
                          first->line);
    }
    free(sorted);
    return BW_OK;
}
