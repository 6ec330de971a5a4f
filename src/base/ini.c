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

/* iniparser prints to stderr unless it is given something else to call. It keeps the pointer for the whole process;
 * as nothing else here uses it and all set the same, that is no state that could differ. */
static int print_nothing(const char *format, ...) {
    (void)format;
    return 0;
}

static bool write_all(int file, const char *bytes, size_t length) {
    while (length > 0) {
        ssize_t part = write(file, bytes, length);
        if (part < 0 && errno == EINTR)
            continue;
        if (part <= 0)
            return false;
        bytes += part;
        length -= (size_t)part;
    }
    return true;
}

/* iniparser 4.1 takes only a file name: hand it the bytes that the guard saw, in a file without a name. */
static enum bw_status load_bytes(const char *bytes, size_t length, dictionary **read, struct bw_error *error) {
    char path[64];
    FILE *fallback = NULL; /* for kernels without memfd_create */
    int file = memfd_create("ini", MFD_CLOEXEC);
    if (file < 0 && (fallback = tmpfile()) != NULL)
        file = fileno(fallback);
    enum bw_status status = BW_OK;
    if (file < 0 || !write_all(file, bytes, length)) {
        status = bw_error_set(error, BW_SYSTEM, "no room for a copy in memory: %s", strerror(errno));
    } else {
        snprintf(path, sizeof path, "/proc/self/fd/%d", file);
        iniparser_set_error_callback(print_nothing);
        *read = iniparser_load(path);
        if (!*read)
            status = bw_error_set(error, BW_SYSTEM, "iniparser gives up: memory is short, or /proc is missing");
    }
    if (fallback)
        fclose(fallback);
    else if (file >= 0)
        close(file);
    return status;
}

/* Quoted values keep their outer blanks in iniparser; they are none of the value here. */
static bool same_value(const char *read, const char *value) {
    size_t length;
    read += strspn(read, " \t");
    for (length = strlen(read); length > 0 && (read[length - 1] == ' ' || read[length - 1] == '\t'); length--)
        ;
    return length == strlen(value) && memcmp(read, value, length) == 0;
}

/* A value that iniparser reads otherwise than the guard is not to be trusted, nor one that only it has seen. */
static void compare_readings(const dictionary *read, const struct bw_ini *ini, struct bw_faults *faults) {
    char name[2 * INI_LINE_MAX + 2];
    for (size_t i = 0; i < ini->count && !bw_ini_enough_faults(faults, ini->entries[i].line); i++) {
        const struct bw_ini_entry *entry = &ini->entries[i];
        bool agrees;
        if (entry->key[0] == '\0') {
            agrees = iniparser_find_entry(read, entry->section) == 1;
        } else {
            snprintf(name, sizeof name, "%s:%s", entry->section, entry->key);
            const char *value = iniparser_getstring(read, name, NULL);
            agrees = value && same_value(value, entry->value);
        }
        if (!agrees)
            bw_faults_add(faults, entry->line, entry->section, entry->key,
                          "could not be read reliably; write it more plainly, without quotes or special characters");
    }
    if (read->n < 0 || (size_t)read->n != ini->count)
        bw_faults_add(faults, 0, "", "", "could not be read reliably; %d keys and sections where there should be %zu",
                      read->n, ini->count);
}

static enum bw_status read_twice(const char *bytes, size_t length, struct bw_ini *ini, struct bw_faults *faults,
                                 struct bw_error *error) {
    dictionary *read = NULL;
    enum bw_status status = load_bytes(bytes, length, &read, error);
    if (status == BW_OK)
        compare_readings(read, ini, faults);
    iniparser_freedict(read);
    bw_ini_collapse_sections(ini);
    return status;
}

enum bw_status bw_ini_read_bytes(const char *bytes, size_t length, struct bw_ini *ini, struct bw_faults *faults,
                                 struct bw_error *error) {
    if (length >= 3 && memcmp(bytes, "\xef\xbb\xbf", 3) == 0) { /* a byte order mark says UTF-8, which it is */
        bytes += 3;
        length -= 3;
    }
    *ini = (struct bw_ini){0};
    struct bw_text plain = {0};
    enum bw_status status = BW_OK;
    if (bw_ini_guard_bytes(bytes, length, &plain, faults) && !plain.failed) {
        status = bw_ini_guard_lines(plain.data, plain.length, ini, faults);
        if (status == BW_OK)
            status = bw_ini_guard_repeats(ini, faults);
        if (status == BW_OK && faults->count == 0 && ini->count == 0)
            bw_faults_add(faults, 0, "", "", "empty: no section in it; the first line could be [case]");
    }
    if (status == BW_OK && faults->count == 0 && !faults->out_of_memory && !plain.failed) {
        bw_ini_blank_section_comments(plain.data, plain.length);
        status = read_twice(plain.data, plain.length, ini, faults, error);
    }
    bw_faults_sort(faults);
    if (status == BW_NO_MEMORY || plain.failed || faults->out_of_memory)
        status = bw_error_set(error, BW_NO_MEMORY, "out of memory");
    else if (status == BW_OK && faults->count > 0)
        status = bw_error_set(error, BW_INPUT, "%s", faults->items[0].text);
    bw_text_free(&plain);
    if (status != BW_OK)
        bw_ini_free(ini);
    return status;
}

/* The file's bytes, one more than the limit at most, so that the guard can say that there are too many. */
static enum bw_status read_file(const char *path, struct bw_text *bytes, struct bw_error *error) {
    FILE *file = fopen(path, "rb");
    struct stat status;
    if (!file) /* a name that leads nowhere was mistyped; the rest lies with the system */
        return bw_error_set(error, errno == ENOENT || errno == ENOTDIR ? BW_INPUT : BW_SYSTEM, "cannot be opened: %s",
                            strerror(errno));
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
