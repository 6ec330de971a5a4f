#include "internal.h"

#include <stdlib.h>

static struct bw_fault *next_item(struct bw_faults *faults) {
    if (faults->out_of_memory)
        return NULL;
    if (faults->count == faults->capacity) {
        size_t capacity = faults->capacity * 2 + 8;
        struct bw_fault *items = realloc(faults->items, capacity * sizeof *items);
        if (!items) {
            faults->out_of_memory = true;
            return NULL;
        }
        faults->items = items;
        faults->capacity = capacity;
    }
    return &faults->items[faults->count];
}

static void free_item(struct bw_fault *item) {
    free(item->section);
    free(item->key);
    free(item->text);
}

void bw_faults_add(struct bw_faults *faults, int line, const char *section, const char *key, const char *format, ...) {
    struct bw_fault *item = next_item(faults);
    if (!item)
        return;
    va_list list;
    va_start(list, format);
    char *text = bw_print_copy(format, list);
    va_end(list);
    *item = (struct bw_fault){line, bw_duplicate(section ? section : ""), bw_duplicate(key ? key : ""), text};
    if (item->section && item->key && item->text) {
        faults->count++;
    } else {
        free_item(item);
        faults->out_of_memory = true;
    }
}

void bw_faults_sort(struct bw_faults *faults) {
    for (size_t i = 1; i < faults->count; i++) { /* insertion keeps equal lines in order; lists are short */
        struct bw_fault item = faults->items[i];
        size_t at = i;
        for (; at > 0 && faults->items[at - 1].line > item.line; at--)
            faults->items[at] = faults->items[at - 1];
        faults->items[at] = item;
    }
}

void bw_faults_print(struct bw_text *out, const char *path, const struct bw_faults *faults) {
    for (size_t i = 0; i < faults->count; i++) {
        const struct bw_fault *fault = &faults->items[i];
        bw_text_add(out, "%s:", path);
        if (fault->line > 0)
            bw_text_add(out, "%d:", fault->line);
        if (fault->section[0])
            bw_text_add(out, " [%s]", fault->section);
        if (fault->key[0])
            bw_text_add(out, " %s:", fault->key);
        else if (fault->section[0])
            bw_text_add(out, ":");
        bw_text_add(out, " %s\n", fault->text);
    }
}

void bw_faults_free(struct bw_faults *faults) {
    for (size_t i = 0; i < faults->count; i++)
        free_item(&faults->items[i]);
    free(faults->items);
    *faults = (struct bw_faults){0};
}
