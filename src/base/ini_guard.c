/* The guard in front of iniparser 4.1. That library silently lets the last of two equal keys or sections win; joins
 * a line that ends in `\` with the next, comments included; cuts a value at `;` or `#`; drops text after a closing
 * quote; takes `[a] ; x = 1` for a key, and without the `=` refuses the whole file; misses a section with `:` in its
 * name; refuses lines of 1023 bytes; skips lines after a NUL; stumbles on a byte order mark and on CR-only line ends;
 * opens a folder as an empty file; keeps no line numbers. All of these are faults here or in ini_bytes.c and ini.c. */
#include "internal.h"

#include <stdlib.h>
#include <string.h>

enum { SHOWN_MAX = 40 }; /* bytes of the file in a message */

bool bw_ini_enough_faults(struct bw_faults *faults, int line) {
    if (faults->count == INI_FAULTS_MAX)
        bw_faults_add(faults, line, "", "", "too many faults; what follows is not listed");
    return faults->count >= INI_FAULTS_MAX;
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
    char section[INI_LINE_MAX + 1]; /* for messages also if it was refused */
    bool any_section, has_section, full;
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

/* Copies in lower case. Returns: where the first character stands that a name may not hold; length if none. */
static size_t copy_name(char *out, const char *text, size_t length, bool blanks) {
    size_t wrong = length;
    for (size_t i = 0; i < length; i++) {
        out[i] = lower(text[i]);
        bool letter = (out[i] >= 'a' && out[i] <= 'z') || (out[i] >= '0' && out[i] <= '9');
        bool mark = out[i] == '-' || out[i] == '_' || out[i] == '.' || (blanks && out[i] == ' ');
        if (!letter && !mark && i < wrong)
            wrong = i;
    }
    out[length] = '\0';
    return wrong;
}

static int shown(size_t length, const char *text) {
    return (int)bw_utf8_cut(text, length, SHOWN_MAX);
}

static void add_entry(struct scan *scan, const char *key, const char *value, int line) {
    if (scan->ini->count >= INI_KEYS_MAX) {
        bw_faults_add(scan->faults, line, "", "", "more than %d keys and sections; split the file", INI_KEYS_MAX);
        scan->full = true;
    } else if (bw_ini_add(scan->ini, scan->section, key, value, line) != BW_OK) {
        scan->status = BW_NO_MEMORY;
    }
}

/* Says what is wrong with a section's name. Returns: true if nothing is. */
static bool accept_name(struct scan *scan, const char *name, size_t length, size_t wrong, int line) {
    if (length == 0) {
        bw_faults_add(scan->faults, line, "", "", "section without a name; `[case]` would be right");
    } else if (wrong < length && name[wrong] == '\t') {
        bw_faults_add(scan->faults, line, "", "", "tabulator in a section's name; one blank between its words");
    } else if (wrong < length) {
        size_t size = bw_utf8_length(name + wrong, length - wrong);
        bw_faults_add(scan->faults, line, "", "",
                      "`%.*s` in a section's name; letters, digits, - and blanks would be right",
                      (int)(size > 0 ? size : 1), name + wrong);
    } else {
        return true;
    }
    return false;
}

static void scan_section(struct scan *scan, struct line line) {
    const char *close = memchr(line.text, ']', line.length), *name = line.text + 1;
    const char *rest = close ? close + 1 : line.text + line.length;
    size_t length = (size_t)(rest - name) - (close ? 1 : 0), left = line.length - (size_t)(rest - line.text);
    trim(&name, &length);
    trim(&rest, &left);
    size_t wrong = copy_name(scan->section, name, length, true);
    scan->any_section = true;
    scan->has_section = false;
    if (!close)
        bw_faults_add(scan->faults, line.number, "", "", "section without its closing ]");
    else if (left > 0 && is_comment(rest, left) && memchr(rest, '=', left))
        bw_faults_add(scan->faults, line.number, "", "", "a key in the comment after a section; put it on its own line");
    else if (left > 0 && !is_comment(rest, left))
        bw_faults_add(scan->faults, line.number, "", "", "text after the ] of a section; begin a new line");
    else
        scan->has_section = accept_name(scan, name, length, wrong, line.number);
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
            bw_faults_add(faults, line.number, scan->section, key,
                          "text after the closing quote; one pair of quotes round the whole value");
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
                      shown(line.length, line.text), line.text);
        return;
    }
    trim(&name, &length);
    if (length == 0) {
        bw_faults_add(scan->faults, line.number, scan->section, "",
                      "no key before the =; `key = value` would be right");
        return;
    }
    if (copy_name(key, name, length, false) < length) {
        bw_faults_add(scan->faults, line.number, scan->section, "",
                      "`%.*s` is no name for a key; letters, digits, _ and - would be right", shown(length, name),
                      name);
        return;
    }
    const char *value = equals + 1;
    size_t value_length = line.length - (size_t)(value - line.text);
    if (!scan->any_section)
        bw_faults_add(scan->faults, line.number, "", key, "key before any section; begin with [case] or [table]");
    if (!scan_value(scan, key, line, &value, &value_length) || !scan->has_section)
        return; /* a section that was refused has its fault already */
    memcpy(text, value, value_length);
    text[value_length] = '\0';
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
    for (size_t at = 0; at < length && scan->status == BW_OK && !scan->full; number++) {
        if (bw_ini_enough_faults(faults, number))
            break;
        const char *end = memchr(bytes + at, '\n', length - at);
        size_t line_length = end ? (size_t)(end - bytes) - at : length - at;
        scan_line(scan, (struct line){bytes + at, line_length, number});
        at += line_length + 1;
    }
    enum bw_status status = scan->status;
    free(scan);
    return status;
}

/* iniparser refuses a file with a comment behind a section, which a person finds natural: it gets blanks instead. */
void bw_ini_blank_section_comments(char *bytes, size_t length) {
    for (size_t at = 0; at < length;) {
        char *line = bytes + at, *end = memchr(line, '\n', length - at);
        size_t left = end ? (size_t)(end - line) : length - at;
        at += left + 1;
        size_t blanks = 0;
        while (blanks < left && is_blank(line[blanks]))
            blanks++;
        char *close = blanks < left && line[blanks] == '[' ? memchr(line, ']', left) : NULL;
        for (char *c = close ? close + 1 : line + left; c < line + left; c++)
            *c = *c == '\r' ? '\r' : ' ';
    }
}

/* ---- names ---------------------------------------------------------------------------------- */

/* Where the next character stands that counts: the second of two blanks does not. */
static const char *skip_blanks(const char *at) {
    while (at[0] == ' ' && at[1] == ' ')
        at++;
    return at;
}

void bw_ini_collapse_sections(struct bw_ini *ini) {
    for (size_t i = 0; i < ini->count; i++) {
        char *to = ini->entries[i].section;
        for (const char *from = skip_blanks(to); *from; from = skip_blanks(from + 1))
            *to++ = *from;
        *to = '\0';
    }
}

static int compare_sections(const char *a, const char *b) {
    for (;; a++, b++) {
        a = skip_blanks(a);
        b = skip_blanks(b);
        if (*a != *b || *a == '\0')
            return (unsigned char)*a - (unsigned char)*b;
    }
}

static int compare_names(const struct bw_ini_entry *a, const struct bw_ini_entry *b) {
    int order = compare_sections(a->section, b->section);
    return order != 0 ? order : strcmp(a->key, b->key);
}

static int compare_entries(const void *a, const void *b) {
    const struct bw_ini_entry *const *first = a, *const *second = b;
    int order = compare_names(*first, *second);
    return order != 0 ? order : ((*first)->line > (*second)->line) - ((*first)->line < (*second)->line);
}

static void tell_repeat(const struct bw_ini_entry *first, const struct bw_ini_entry *again, struct bw_faults *faults) {
    if (again->key[0])
        bw_faults_add(faults, again->line, again->section, again->key, "given twice, first in line %d; keep one",
                      first->line);
    else
        bw_faults_add(faults, again->line, again->section, "",
                      "section given twice, first in line %d; join them under one name or give it another",
                      first->line);
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
    const struct bw_ini_entry *first = sorted[0];
    for (size_t i = 1; i < ini->count; i++) {
        if (compare_names(first, sorted[i]) != 0)
            first = sorted[i];
        else if (!bw_ini_enough_faults(faults, sorted[i]->line))
            tell_repeat(first, sorted[i], faults);
    }
    free(sorted);
    return BW_OK;
}
