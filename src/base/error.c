#include "internal.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum bw_status bw_error_set(struct bw_error *error, enum bw_status status, const char *format, ...) {
    if (error && error->status == BW_OK) {
        va_list list;
        va_start(list, format);
        char *text = bw_print_copy(format, list);
        va_end(list);
        const char *shown = text ? text : "out of memory";
        size_t length = bw_utf8_cut(shown, strlen(shown), sizeof error->text - 1);
        memcpy(error->text, shown, length);
        error->text[length] = '\0';
        error->status = status;
        free(text);
    }
    return status;
}
