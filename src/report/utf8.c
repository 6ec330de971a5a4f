/* Text of other people's making: decoded, measured, made harmless. */
#include "internal.h"

#include <string.h>

static const unsigned long replacement = 0xFFFD;

/* Length of the sequence that a lead byte announces; 0 if it is none. */
static int announced(unsigned char lead, unsigned long *code) {
    if (lead < 0x80)
        return *code = lead, 1;
    if (lead >= 0xC2 && lead < 0xE0)
        return *code = lead & 0x1FU, 2;
    if (lead >= 0xE0 && lead < 0xF0)
        return *code = lead & 0x0FU, 3;
    if (lead >= 0xF0 && lead < 0xF5)
        return *code = lead & 0x07U, 4;
    return 0;
}

const char *report_next(const char *at, unsigned long *code) {
    static const unsigned long least[] = {0, 0, 0x80, 0x800, 0x10000};
    int length = announced((unsigned char)at[0], code);
    for (int i = 1; i < length; i++) {
        unsigned char byte = (unsigned char)at[i];
        if ((byte & 0xC0) != 0x80)
            length = 0; /* the terminating NUL ends here too */
        else
            *code = *code << 6 | (byte & 0x3FU);
    }
    if (length == 0 || *code < least[length] || *code > 0x10FFFF || (*code >= 0xD800 && *code < 0xE000)) {
        *code = replacement;
        return at + 1;
    }
    return at + length;
}

void report_encode(struct bw_text *out, unsigned long code) {
    char bytes[4];
    size_t length = code < 0x80 ? 1 : code < 0x800 ? 2 : code < 0x10000 ? 3 : 4;
    static const unsigned lead[] = {0, 0, 0xC0, 0xE0, 0xF0};
    for (size_t i = length; i-- > 1; code >>= 6)
        bytes[i] = (char)(unsigned char)(0x80 | (code & 0x3F));
    bytes[0] = (char)(unsigned char)(lead[length] | code);
    bw_text_add_bytes(out, bytes, length);
}

struct span {
    unsigned long from, to;
};

static bool is_within(const struct span *spans, size_t count, unsigned long code) {
    for (size_t i = 0; i < count; i++)
        if (code >= spans[i].from && code <= spans[i].to)
            return true;
    return false;
}

/* East Asian wide characters and emoji take two columns, marks that combine take none; where terminals differ, the
 * wider is taken. */
int report_columns(unsigned long code) {
    static const struct span wide[] = {
        {0x1100, 0x115F}, {0x231A, 0x231B}, {0x23E9, 0x23F3},   {0x25FD, 0x25FE},   {0x2600, 0x27BF},  {0x2B1B, 0x2B55},
        {0x2E80, 0xA4CF}, {0xA960, 0xA97F}, {0xAC00, 0xD7A3},   {0xF900, 0xFAFF},   {0xFE10, 0xFE19},  {0xFE30, 0xFE6F},
        {0xFF00, 0xFF60}, {0xFFE0, 0xFFE6}, {0x16FE0, 0x1B2FF}, {0x1F000, 0x1FAFF}, {0x20000, 0x3FFFD}};
    static const struct span joined[] = {{0x0300, 0x036F}, {0x200B, 0x200D}, {0x20D0, 0x20FF}, {0xFE00, 0xFE0F}};
    if (is_within(joined, sizeof joined / sizeof joined[0], code))
        return 0;
    return is_within(wide, sizeof wide / sizeof wide[0], code) ? 2 : 1;
}

size_t report_width(const char *string) {
    size_t width = 0;
    while (*string) {
        unsigned long code;
        string = report_next(string, &code);
        width += (size_t)report_columns(code);
    }
    return width;
}

/* Characters that move the cursor, or turn the direction of what follows. */
static bool is_harmful(unsigned long code) {
    static const struct span spans[] = {{0x00, 0x1F},     {0x7F, 0x9F},     {0x200E, 0x200F}, {0x2028, 0x202E},
                                        {0x2066, 0x2069}, {0xFEFF, 0xFEFF}, {0xFFFE, 0xFFFF}};
    return is_within(spans, sizeof spans / sizeof spans[0], code);
}

void report_clean(struct bw_text *out, const char *string) {
    while (*string) {
        unsigned long code;
        string = report_next(string, &code);
        report_encode(out, is_harmful(code) ? ' ' : code);
    }
}

void report_xml(struct bw_text *out, const char *string) {
    while (*string) {
        unsigned long code;
        string = report_next(string, &code);
        switch (code) {
        case '&':
            bw_text_add(out, "&amp;");
            break;
        case '<':
            bw_text_add(out, "&lt;");
            break;
        case '>':
            bw_text_add(out, "&gt;");
            break;
        case '"':
            bw_text_add(out, "&quot;");
            break;
        case '\'':
            bw_text_add(out, "&#39;");
            break;
        default:
            report_encode(out, is_harmful(code) ? ' ' : code);
        }
    }
}
