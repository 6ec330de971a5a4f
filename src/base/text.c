#include "internal.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* Room for so many more bytes and the NUL. */
static bool reserve(struct bw_text *text, size_t more) {
    if (text->failed)
        return false;
    if (text->capacity - text->length > more)
        return true;
    size_t capacity = text->capacity * 2 + more + 64;
    char *data = realloc(text->data, capacity);
    if (!data) {
        text->failed = true;
        return false;
    }
    text->data = data;
    text->capacity = capacity;
    return true;
}

void bw_text_add_bytes(struct bw_text *text, const char *bytes, size_t length) {
    if (!reserve(text, length))
        return;
    if (length > 0)
        memcpy(text->data + text->length, bytes, length);
    text->length += length;
    text->data[text->length] = '\0';
}

void bw_text_add(struct bw_text *text, const char *format, ...) {
    va_list list;
    va_start(list, format);
    int length = vsnprintf(NULL, 0, format, list);
    va_end(list);
    if (length < 0) {
        text->failed = true;
        return;
    }
    if (!reserve(text, (size_t)length))
        return;
    va_start(list, format);
    vsnprintf(text->data + text->length, (size_t)length + 1, format, list);
    va_end(list);
    text->length += (size_t)length;
}

void bw_text_free(struct bw_text *text) {
    free(text->data);
    *text = (struct bw_text){0};
}

char *bw_duplicate(const char *string) {
    size_t size = strlen(string) + 1;
    char *copy = malloc(size);
    if (copy)
        memcpy(copy, string, size);
    return copy;
}

char *bw_print_copy(const char *format, va_list list) {
    va_list again;
    va_copy(again, list);
    int length = vsnprintf(NULL, 0, format, again);
    va_end(again);
    char *copy = length < 0 ? NULL : malloc((size_t)length + 1);
    if (copy)
        vsnprintf(copy, (size_t)length + 1, format, list);
    return copy;
}
