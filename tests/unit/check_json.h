/* A strict JSON checker (RFC 8259) that can find a value by its path. */
#ifndef BEAMWARD_TESTS_CHECK_JSON_H
#define BEAMWARD_TESTS_CHECK_JSON_H

#include <ctype.h>
#include <stdbool.h>
#include <stdlib.h>
#include <string.h>

static inline const char *json_space(const char *at) {
    return at + strspn(at, " \t\r\n");
}

/* Each returns what follows the value, NULL if it is not valid. */
static inline const char *json_skip_string(const char *at) {
    if (*at++ != '"')
        return NULL;
    for (; *at != '"'; at++) {
        if ((unsigned char)*at < 0x20)
            return NULL; /* the end of the text, or a raw control character */
        if (*at != '\\')
            continue;
        at++;
        if (*at == 'u') {
            for (int i = 0; i < 4; i++)
                if (!isxdigit((unsigned char)*++at))
                    return NULL;
        } else if (!*at || !strchr("\"\\/bfnrt", *at)) {
            return NULL;
        }
    }
    return at + 1;
}

static inline const char *json_skip_digits(const char *at) {
    if (!isdigit((unsigned char)*at))
        return NULL;
    while (isdigit((unsigned char)*at))
        at++;
    return at;
}

static inline const char *json_skip_number(const char *at) {
    if (*at == '-')
        at++;
    if (at[0] == '0' && isdigit((unsigned char)at[1]))
        return NULL;
    at = json_skip_digits(at);
    if (at && *at == '.')
        at = json_skip_digits(at + 1);
    if (at && (*at == 'e' || *at == 'E')) {
        at++;
        if (*at == '+' || *at == '-')
            at++;
        at = json_skip_digits(at);
    }
    return at;
}

static inline const char *json_skip(const char *at);

static inline const char *json_skip_items(const char *at, bool object) {
    char end = object ? '}' : ']';
    at = json_space(at + 1);
    if (*at == end)
        return at + 1;
    for (;;) {
        if (object) {
            at = json_skip_string(at);
            at = at ? json_space(at) : NULL;
            if (!at || *at != ':')
                return NULL;
            at = json_space(at + 1);
        }
        at = json_skip(at);
        at = at ? json_space(at) : NULL;
        if (!at || (*at != ',' && *at != end))
            return NULL;
        if (*at == end)
            return at + 1;
        at = json_space(at + 1);
    }
}

static inline const char *json_skip(const char *at) {
    static const char *const words[] = {"true", "false", "null"};
    for (size_t i = 0; i < 3; i++)
        if (strncmp(at, words[i], strlen(words[i])) == 0)
            return at + strlen(words[i]);
    if (*at == '{' || *at == '[')
        return json_skip_items(at, *at == '{');
    return *at == '"' ? json_skip_string(at) : json_skip_number(at);
}

static inline bool json_is_valid(const char *text) {
    const char *end = json_skip(json_space(text));
    return end && *json_space(end) == '\0';
}

/* Value of a member of an object, or NULL. */
static inline const char *json_member(const char *at, const char *name, size_t length) {
    if (*at != '{')
        return NULL;
    for (at = json_space(at + 1); *at == '"';) {
        const char *key = at + 1;
        const char *value = json_space(json_space(json_skip_string(at)) + 1);
        if (strncmp(key, name, length) == 0 && key[length] == '"')
            return value;
        at = json_space(json_skip(value));
        if (*at == ',')
            at = json_space(at + 1);
    }
    return NULL;
}

static inline const char *json_element(const char *at, long index) {
    if (*at != '[')
        return NULL;
    at = json_space(at + 1);
    for (; *at != ']'; index--) {
        if (index == 0)
            return at;
        at = json_space(json_skip(at));
        if (*at == ',')
            at = json_space(at + 1);
    }
    return NULL;
}

/* The value at a path such as "beams[0].governing.rule" in a valid text; NULL if there is none. */
static inline const char *json_find(const char *text, const char *path) {
    const char *at = json_space(text);
    while (at && *path) {
        if (*path == '[') {
            char *after;
            at = json_element(at, strtol(path + 1, &after, 10));
            path = after + 1;
        } else {
            path += *path == '.';
            size_t length = strcspn(path, ".[");
            at = json_member(at, path, length);
            path += length;
        }
    }
    return at;
}

#endif
