/* Reading INI files: the guard first, then iniparser, and both must agree. The only user of iniparser. */
#define _GNU_SOURCE /* memfd_create */
#include "internal.h"

#include <errno.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/mman.h>
#include <sys/stat.h>
#include <unistd.h>

#include <iniparser.h>

enum bw_status bw_ini_add(struct bw_ini *ini, const char *section, const char *key, const char *value, int line) {
    if (ini->count == ini->capacity) {
        size_t capacity = ini->capacity * 2 + 32;
        struct bw_ini_entry *entries = realloc(ini->entries, capacity * sizeof *entries);
        if (!entries)
            return BW_NO_MEMORY;
        ini->entries = entries;
        ini->capacity = capacity;
    }
    struct bw_ini_entry entry = {bw_duplicate(section), bw_duplicate(key), bw_duplicate(value), line};
    if (!entry.section || !entry.key || !entry.value) {
        free(entry.section);
        free(entry.key);
        free(entry.value);
        return BW_NO_MEMORY;
    }
    ini->entries[ini->count++] = entry;
    return BW_OK;
}

void bw_ini_free(struct bw_ini *ini) {
    for (size_t i = 0; i < ini->count; i++) {
        free(ini->entries[i].section);
        free(ini->entries[i].key);
        free(ini->entries[i].value);
    }
    free(ini->entries);
    *ini = (struct bw_ini){0};
}

/* iniparser 4.1 takes only a file name: hand it the very bytes that the guard saw, from memory. */
static dictionary *load_bytes(const char *bytes, size_t length) {
    int file = memfd_create("case", 0);
    if (file < 0)
        return NULL;
    dictionary *read = NULL;
    size_t written = 0;
    while (written < length) {
        ssize_t part = write(file, bytes + written, length - written);
        if (part <= 0)
            break;
        written += (size_t)part;
    }
    if (written == length) {
        char path[64];
        snprintf(path, sizeof path, "/proc/self/fd/%d", file);
        read = iniparser_load(path);
    }
    close(file);
    return read;
}

/* Takes each value from iniparser; a value that it reads otherwise than the guard is not to be trusted. */
static void take_values(const dictionary *read, struct bw_ini *ini, struct bw_faults *faults) {
    char name[2 * INI_LINE_MAX + 2];
    for (size_t i = 0; i < ini->count; i++) {
        const struct bw_ini_entry *entry = &ini->entries[i];
        bool agrees;
        if (entry->key[0] == '\0') {
            agrees = iniparser_find_entry(read, entry->section) == 1;
        } else {
            snprintf(name, sizeof name, "%s:%s", entry->section, entry->key);
            const char *value = iniparser_getstring(read, name, NULL);
            agrees = value && strcmp(value, entry->value) == 0;
        }
        if (!agrees)
            bw_faults_add(faults, entry->line, entry->section, entry->key,
                          "cannot be read reliably; write it more plainly, without quotes or special characters");
    }
}

enum bw_status bw_ini_read_bytes(const char *bytes, size_t length, struct bw_ini *ini, struct bw_faults *faults,
                                 struct bw_error *error) {
    if (length >= 3 && memcmp(bytes, "\xef\xbb\xbf", 3) == 0) { /* a byte order mark says UTF-8, which it is */
        bytes += 3;
        length -= 3;
    }
    *ini = (struct bw_ini){0};
    bw_ini_guard_bytes(bytes, length, faults);
    enum bw_status status = faults->count == 0 ? bw_ini_guard_lines(bytes, length, ini, faults) : BW_OK;
    if (status == BW_OK)
        status = bw_ini_guard_repeats(ini, faults);
    if (status == BW_OK && faults->count == 0 && ini->count == 0)
        bw_faults_add(faults, 0, "", "", "empty: no section in it");
    if (status == BW_OK && faults->count == 0) {
        dictionary *read = load_bytes(bytes, length);
        if (read)
            take_values(read, ini, faults);
        else
            status = BW_NO_MEMORY;
        iniparser_freedict(read);
    }
    if (status == BW_NO_MEMORY || faults->out_of_memory)
        status = bw_error_set(error, BW_NO_MEMORY, "out of memory");
    else if (faults->count > 0)
        status = bw_error_set(error, BW_INPUT, "%s", faults->items[0].text);
    if (status != BW_OK)
        bw_ini_free(ini);
    return status;
}

/* The file's bytes, one more than the limit at most, so that the guard can say that there are too many. */
static enum bw_status read_file(const char *path, struct bw_text *bytes, struct bw_error *error) {
    FILE *file = fopen(path, "rb");
    struct stat status;
    if (!file)
        return bw_error_set(error, errno == ENOENT ? BW_INPUT : BW_SYSTEM, "%s", strerror(errno));
    if (fstat(fileno(file), &status) == 0 && S_ISDIR(status.st_mode)) {
        fclose(file);
        return bw_error_set(error, BW_INPUT, "is a folder; name a file");
    }
    char part[4096];
    size_t length;
    while (bytes->length <= INI_BYTES_MAX && (length = fread(part, 1, sizeof part, file)) > 0)
        bw_text_add_bytes(bytes, part, length);
    bool failed = ferror(file) != 0;
    fclose(file);
    if (bytes->failed)
        return bw_error_set(error, BW_NO_MEMORY, "out of memory");
    return failed ? bw_error_set(error, BW_SYSTEM, "cannot be read: %s", strerror(errno)) : BW_OK;
}

enum bw_status bw_ini_read(const char *path, struct bw_ini *ini, struct bw_text *bytes, struct bw_faults *faults,
                           struct bw_error *error) {
    struct bw_text own = {0};
    struct bw_text *content = bytes ? bytes : &own;
    *ini = (struct bw_ini){0};
    enum bw_status status = read_file(path, content, error);
    if (status == BW_OK)
        status = bw_ini_read_bytes(content->data ? content->data : "", content->length, ini, faults, error);
    bw_text_free(&own);
    return status;
}
