/* Text in 80 columns: wrapping, headings. */
#include "internal.h"

#include <stdarg.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* Length in bytes of what fits in `width` columns: whole words, or a piece of one that is too long. */
static size_t fitting(const char *string, size_t width) {
    const char *at = string, *last_blank = NULL, *before = string;
    size_t used = 0;
    while (*at) {
        unsigned long code;
        const char *next = report_next(at, &code);
        if (code == ' ')
            last_blank = at;
        size_t wider = used + (size_t)report_columns(code);
        if (wider > width && code != ' ')
            break;
        used = wider;
        before = at = next;
    }
    if (*at == '\0')
        return (size_t)(at - string);
    if (last_blank && last_blank > string)
        return (size_t)(last_blank - string);
    if (before == string) { /* not even one character fits */
        unsigned long code;
        before = report_next(string, &code);
    }
    return (size_t)(before - string);
}

size_t text_wrap_line(const char **rest, size_t width) {
    size_t length = fitting(*rest, width);
    const char *after = *rest + length;
    while (*after == ' ')
        after++;
    *rest = after;
    return length;
}

void text_wrap(struct bw_text *out, const char *head, const char *string) {
    struct bw_text clean = {0};
    report_clean(&clean, string);
    const char *rest = clean.data ? clean.data : "";
    size_t indent = report_width(head);
    bw_text_add(out, "%s", head);
    do {
        const char *line = rest;
        size_t length = text_wrap_line(&rest, TEXT_COLUMNS - indent);
        bw_text_add_bytes(out, line, length);
        bw_text_add(out, "\n");
        if (*rest)
            bw_text_add(out, "%*s", (int)indent, "");
    } while (*rest);
    out->failed = out->failed || clean.failed;
    bw_text_free(&clean);
}

void text_wrapf(struct bw_text *out, const char *head, const char *format, ...) {
    va_list arguments, again;
    va_start(arguments, format);
    va_copy(again, arguments);
    int length = vsnprintf(NULL, 0, format, arguments);
    va_end(arguments);
    char *string = length < 0 ? NULL : malloc((size_t)length + 1);
    if (string) {
        vsnprintf(string, (size_t)length + 1, format, again);
        text_wrap(out, head, string);
    } else {
        out->failed = true;
    }
    va_end(again);
    free(string);
}

void text_heading(struct bw_text *out, const char *string) {
    bw_text_add(out, "\n");
    text_wrap(out, "", string);
    size_t width = report_width(string);
    for (size_t i = 0; i < width && i < TEXT_COLUMNS; i++)
        bw_text_add(out, "-");
    bw_text_add(out, "\n");
}
