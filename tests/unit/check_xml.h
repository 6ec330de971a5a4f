/* A checker for what the report writes as SVG and HTML: elements nest and close, attributes are quoted, text is
 * escaped. Elements of HTML that have no end are known. */
#ifndef BEAMWARD_TESTS_CHECK_XML_H
#define BEAMWARD_TESTS_CHECK_XML_H

#include <stdbool.h>
#include <stdio.h>
#include <string.h>

enum { XML_DEPTH = 64, XML_NAME = 32 };

static inline bool xml_is_entity(const char *at) {
    static const char *const entities[] = {"&amp;", "&lt;", "&gt;", "&quot;", "&#39;"};
    for (size_t i = 0; i < sizeof entities / sizeof entities[0]; i++)
        if (strncmp(at, entities[i], strlen(entities[i])) == 0)
            return true;
    return false;
}

/* Attributes up to the end of the tag. Returns: the '>' or "/>", NULL if something is wrong. */
static inline const char *xml_attributes(const char *at) {
    for (;;) {
        at += strspn(at, " \n");
        if (*at == '>' || (at[0] == '/' && at[1] == '>'))
            return at;
        size_t name = strspn(at, "abcdefghijklmnopqrstuvwxyzABCDEFGHIJKLMNOPQRSTUVWXYZ0123456789-:");
        if (name == 0 || at[name] != '=' || at[name + 1] != '"')
            return NULL;
        for (at += name + 2; *at != '"'; at++)
            if (*at == '\0' || *at == '<' || (*at == '&' && !xml_is_entity(at)))
                return NULL;
        at++;
    }
}

static inline bool xml_is_void(const char *name) {
    return strcmp(name, "meta") == 0 || strcmp(name, "br") == 0 || strcmp(name, "hr") == 0;
}

/* Returns: NULL if all is well, else the place of the fault. */
static inline const char *xml_fault(const char *text) {
    char open[XML_DEPTH][XML_NAME];
    int depth = 0;
    for (const char *at = text; *at;) {
        if (*at == '&' && !xml_is_entity(at))
            return at;
        if (*at != '<') {
            at++;
            continue;
        }
        if (at[1] == '?' || at[1] == '!') {
            at = strchr(at, '>');
            if (!at)
                return text;
            at++;
            continue;
        }
        bool closing = at[1] == '/';
        const char *name_at = at + 1 + closing, *start = at;
        size_t length = strcspn(name_at, " >/\n");
        char name[XML_NAME];
        if (length == 0 || length >= XML_NAME)
            return at;
        memcpy(name, name_at, length);
        name[length] = '\0';
        at = xml_attributes(name_at + length);
        if (!at)
            return start;
        if (closing) {
            if (depth == 0 || strcmp(open[--depth], name) != 0)
                return start;
        } else if (*at == '>' && !xml_is_void(name)) {
            if (depth == XML_DEPTH)
                return start;
            memcpy(open[depth++], name, length + 1);
        }
        at += *at == '/' ? 2 : 1;
        if (!closing && strcmp(name, "style") == 0) /* its text is not markup */
            at = strstr(at, "</style>");
    }
    return depth == 0 ? NULL : "an element that is not closed";
}

#endif
