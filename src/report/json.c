/* A small JSON writer: commas, nesting, strings, 12 significant digits. */
#include "internal.h"

#include <math.h>

static void new_line(struct json *json) {
    bw_text_add(json->out, "\n%*s", 2 * json->depth, "");
}

static void write_string(struct json *json, const char *string) {
    bw_text_add(json->out, "\"");
    while (*string) {
        unsigned long code;
        string = report_next(string, &code);
        if (code == '"' || code == '\\')
            bw_text_add(json->out, "\\%c", (char)code);
        else if (code < 0x20 || code == 0x7F)
            bw_text_add(json->out, "\\u%04lx", code);
        else
            report_encode(json->out, code);
    }
    bw_text_add(json->out, "\"");
}

/* What stands before a value: a comma, a new line, the key. */
static void before_value(struct json *json, const char *key) {
    if (json->depth > 0) {
        if (json->has_items[json->depth - 1])
            bw_text_add(json->out, ",");
        json->has_items[json->depth - 1] = true;
        new_line(json);
    }
    if (key) {
        write_string(json, key);
        bw_text_add(json->out, ": ");
    }
}

static void open(struct json *json, const char *key, char opener, char closer) {
    before_value(json, key);
    bw_text_add(json->out, "%c", opener);
    if (json->depth == JSON_DEPTH) { /* never reached: the deepest result is half as deep */
        json->out->failed = true;
        return;
    }
    json->closers[json->depth] = closer;
    json->has_items[json->depth++] = false;
}

void json_object(struct json *json, const char *key) {
    open(json, key, '{', '}');
}

void json_array(struct json *json, const char *key) {
    open(json, key, '[', ']');
}

void json_end(struct json *json) {
    if (json->depth == 0)
        return;
    json->depth--;
    if (json->has_items[json->depth])
        new_line(json);
    bw_text_add(json->out, "%c", json->closers[json->depth]);
    if (json->depth == 0)
        bw_text_add(json->out, "\n");
}

void json_string(struct json *json, const char *key, const char *value) {
    before_value(json, key);
    if (value)
        write_string(json, value);
    else
        bw_text_add(json->out, "null");
}

static void write_number(struct json *json, double value) {
    if (!isfinite(value))
        bw_text_add(json->out, "null");
    else
        bw_text_add(json->out, "%.12g", fabs(value) > 0. ? value : 0.); /* no minus zero */
}

void json_number(struct json *json, const char *key, double value) {
    before_value(json, key);
    write_number(json, value);
}

void json_integer(struct json *json, const char *key, long value) {
    before_value(json, key);
    bw_text_add(json->out, "%ld", value);
}

void json_bool(struct json *json, const char *key, bool value) {
    before_value(json, key);
    bw_text_add(json->out, value ? "true" : "false");
}

void json_null(struct json *json, const char *key) {
    before_value(json, key);
    bw_text_add(json->out, "null");
}

void json_point(struct json *json, const char *key, struct bw_point point) {
    before_value(json, key);
    bw_text_add(json->out, "[");
    write_number(json, point.x_m);
    bw_text_add(json->out, ", ");
    write_number(json, point.y_m);
    bw_text_add(json->out, "]");
}
