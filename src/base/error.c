#include <beamward/base.h>

#include <stdarg.h>
#include <stdio.h>

enum bw_status bw_error_set(struct bw_error *error, enum bw_status status, const char *format, ...) {
    if (error && error->status == BW_OK) {
        va_list list;
        error->status = status;
        va_start(list, format);
        vsnprintf(error->text, sizeof error->text, format, list);
        va_end(list);
    }
    return status;
}
