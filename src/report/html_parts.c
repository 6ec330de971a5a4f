/* Elements of the page; every text is escaped here. */
#include "html.h"

#include <stdarg.h>
#include <stdio.h>
#include <stdlib.h>

BW_PRINTF(1, 0)
static char *formatted(const char *format, va_list arguments) {
    va_list again;
    va_copy(again, arguments);
    int length = vsnprintf(NULL, 0, format, arguments);
    char *string = length < 0 ? NULL : malloc((size_t)length + 1);
    if (string)
        vsnprintf(string, (size_t)length + 1, format, again);
    va_end(again);
    return string;
}

BW_PRINTF(2, 0)
static void escaped(struct bw_text *out, const char *format, va_list arguments) {
    char *string = formatted(format, arguments);
    if (string)
        report_xml(out, string);
    else
        out->failed = true;
    free(string);
}

void html_heading(struct bw_text *out, const char *id, const char *title) {
    bw_text_add(out, "<h2 id=\"%s\">", id);
    report_xml(out, title);
    bw_text_add(out, "</h2>\n");
}

void html_paragraph(struct bw_text *out, const char *format, ...) {
    va_list arguments;
    va_start(arguments, format);
    bw_text_add(out, "<p>");
    escaped(out, format, arguments);
    bw_text_add(out, "</p>\n");
    va_end(arguments);
}

void html_item(struct bw_text *out, const char *format, ...) {
    va_list arguments;
    va_start(arguments, format);
    bw_text_add(out, "<li>");
    escaped(out, format, arguments);
    bw_text_add(out, "</li>\n");
    va_end(arguments);
}

void html_table(struct bw_text *out, const char *class, const char *const *heads, size_t count) {
    bw_text_add(out, "<div class=\"scroll\"><table class=\"%s\"><thead><tr>", class);
    for (size_t i = 0; i < count; i++) {
        bool number = heads[i][0] == '>';
        bw_text_add(out, number ? "<th scope=\"col\" class=\"n\">" : "<th scope=\"col\">");
        report_xml(out, heads[i] + number);
        bw_text_add(out, "</th>");
    }
    bw_text_add(out, "</tr></thead><tbody>\n");
}

void html_table_end(struct bw_text *out) {
    bw_text_add(out, "</tbody></table></div>\n");
}

void html_row(struct bw_text *out, const char *class) {
    if (class)
        bw_text_add(out, "<tr class=\"%s\">", class);
    else
        bw_text_add(out, "<tr>");
}

void html_row_end(struct bw_text *out) {
    bw_text_add(out, "</tr>\n");
}

/* A word so long that it has to be broken if its table is to fit the page. */
static bool has_long_word(const char *string) {
    enum { LONG = 22 };
    for (size_t length = 0; *string; string++) {
        length = *string == ' ' ? 0 : length + 1;
        if (length > LONG)
            return true;
    }
    return false;
}

void html_cell(struct bw_text *out, const char *class, const char *format, ...) {
    va_list arguments;
    va_start(arguments, format);
    char *string = formatted(format, arguments);
    va_end(arguments);
    bool is_long = string && has_long_word(string);
    if (class || is_long)
        bw_text_add(out, "<td class=\"%s%s%s\">", class ? class : "", class && is_long ? " " : "",
                    is_long ? "long" : "");
    else
        bw_text_add(out, "<td>");
    if (string)
        report_xml(out, string);
    else
        out->failed = true;
    free(string);
    bw_text_add(out, "</td>");
}

const char *html_verdict_class(enum bw_verdict verdict) {
    return verdict == BW_SUFFICIENT ? "good v" : "bad v";
}

const char *html_verdict_words(enum bw_verdict verdict) {
    switch (verdict) {
    case BW_SUFFICIENT:
        return "\xE2\x9C\x93 sufficient";
    case BW_INSUFFICIENT:
        return "\xE2\x9C\x97 too weak";
    case BW_NO_RATING:
        return "\xE2\x9C\x97 no rating";
    }
    return "unknown";
}
