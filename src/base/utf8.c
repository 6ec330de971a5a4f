#include "internal.h"

static bool continues(char c) {
    return ((unsigned char)c & 0xc0u) == 0x80u;
}

size_t bw_utf8_length(const char *text, size_t left) {
    /* By first byte: the range of the second, which excludes overlong forms, surrogates and what lies above U+10FFFF.
     */
    static const struct {
        unsigned char first, last, low, high;
        size_t length;
    } forms[] = {{0x00, 0x7f, 0x80, 0xbf, 1}, {0xc2, 0xdf, 0x80, 0xbf, 2}, {0xe0, 0xe0, 0xa0, 0xbf, 3},
                 {0xe1, 0xec, 0x80, 0xbf, 3}, {0xed, 0xed, 0x80, 0x9f, 3}, {0xee, 0xef, 0x80, 0xbf, 3},
                 {0xf0, 0xf0, 0x90, 0xbf, 4}, {0xf1, 0xf3, 0x80, 0xbf, 4}, {0xf4, 0xf4, 0x80, 0x8f, 4}};
    const unsigned char *at = (const unsigned char *)text;
    for (size_t i = 0; i < sizeof forms / sizeof forms[0]; i++) {
        if (at[0] < forms[i].first || at[0] > forms[i].last)
            continue;
        if (left < forms[i].length || (forms[i].length > 1 && (at[1] < forms[i].low || at[1] > forms[i].high)))
            return 0;
        for (size_t j = 2; j < forms[i].length; j++)
            if (!continues(text[j]))
                return 0;
        return forms[i].length;
    }
    return 0;
}

size_t bw_utf8_cut(const char *text, size_t length, size_t most) {
    if (length <= most)
        return length;
    size_t end = most;
    while (end > 0 && continues(text[end])) /* the byte after the cut must begin a sequence */
        end--;
    return end;
}
