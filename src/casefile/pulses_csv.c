/* A measured train of pulses: a CSV file, read strictly.
 *
 * The first line is `start_s,duration_s,energy_j`; every further line is one pulse, in order of time. Lines may end as on
 * Windows, and the file may begin with the mark of UTF-8, as spreadsheets write it. Nothing else is let pass: no other
 * column, no comment, no blank line inside, no other separator. */
#include "internal.h"

#include <errno.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static const char header[] = "start_s,duration_s,energy_j";
enum { COLUMNS = 3, LINE_SIZE = 256 };

struct csv {
    const char *path; /* as it is told */
    FILE *file;
    size_t line; /* number of the last one read */
    char text[LINE_SIZE];
    struct bw_pulse *pulses;
    size_t count, capacity;
    struct bw_error *error;
};

/* Returns: false at the end of the file, and on a fault, which is in the error then. */
static bool next_line(struct csv *csv) {
    if (fgets(csv->text, sizeof csv->text, csv->file) == NULL) {
        if (ferror(csv->file))
            bw_error_set(csv->error, BW_INPUT, "%s: cannot be read: %s", csv->path, strerror(errno));
        return false;
    }
    csv->line++;
    size_t length = strlen(csv->text);
    bool whole = length > 0 && csv->text[length - 1] == '\n';
    if (!whole && !(feof(csv->file) && length > 0 && length + 1 < sizeof csv->text)) {
        bw_error_set(csv->error, BW_INPUT,
                     "%s:%zu: the line is longer than %d bytes, or holds a zero byte; `START,DURATION,ENERGY` would be "
                     "right",
                     csv->path, csv->line, LINE_SIZE - 2);
        return false;
    }
    while (length > 0 && strchr(" \t\r\n", csv->text[length - 1]) != NULL)
        csv->text[--length] = '\0';
    return true;
}

/* Without blanks. */
static void squeeze(char *text) {
    char *to = text;
    for (const char *from = text; *from != '\0'; from++)
        if (*from != ' ' && *from != '\t')
            *to++ = *from;
    *to = '\0';
}

static enum bw_status read_header(struct csv *csv) {
    static const char mark[] = "\xef\xbb\xbf";
    char squeezed[LINE_SIZE] = "";
    if (next_line(csv))
        strcpy(squeezed, csv->text + (strncmp(csv->text, mark, 3) == 0 ? 3 : 0));
    else if (csv->error->status != BW_OK)
        return csv->error->status;
    squeeze(squeezed);
    if (strcmp(squeezed, header) != 0)
        return bw_error_set(csv->error, BW_INPUT, "%s:1: the first line is `%.60s`; `%s` would be right", csv->path,
                            csv->text, header);
    return BW_OK;
}

static enum bw_status read_pulse(struct csv *csv, struct bw_pulse *pulse) {
    double *const values[COLUMNS] = {&pulse->start_s, &pulse->duration_s, &pulse->energy_j};
    static const char *const names[COLUMNS] = {"start", "duration", "energy"};
    size_t commas = 0;
    char *field = csv->text;
    for (const char *c = csv->text; *c != '\0'; c++)
        commas += *c == ',' ? 1 : 0;
    if (commas != COLUMNS - 1)
        return bw_error_set(csv->error, BW_INPUT,
                            "%s:%zu: `%.60s` has %zu columns; three numbers with points, separated by commas, would be "
                            "right",
                            csv->path, csv->line, csv->text, commas + 1);
    for (size_t i = 0; i < COLUMNS; i++) {
        char *end = field + strcspn(field, ",");
        *end = '\0';
        if (!bw_parse_number(field, values[i]))
            return bw_error_set(csv->error, BW_INPUT, "%s:%zu: %s is `%.60s`, not a number; a plain one, as in 150e-9, "
                                "would be right", csv->path, csv->line, names[i], field);
        field = end + 1;
    }
    return BW_OK;
}

static enum bw_status make_room(struct csv *csv, size_t most) {
    if (csv->count == most)
        return bw_error_set(csv->error, BW_INPUT, "%s:%zu: more than %zu pulses; at most so many would be right",
                            csv->path, csv->line, most);
    if (csv->count < csv->capacity)
        return BW_OK;
    size_t capacity = csv->capacity == 0 ? 256 : 2 * csv->capacity;
    struct bw_pulse *larger = realloc(csv->pulses, capacity * sizeof *larger);
    if (larger == NULL)
        return bw_error_set(csv->error, BW_NO_MEMORY, "out of memory");
    csv->pulses = larger;
    csv->capacity = capacity;
    return BW_OK;
}

static enum bw_status read_pulses(struct csv *csv, size_t most) {
    size_t blank_line = 0;
    while (next_line(csv)) {
        struct bw_error reason = {.status = BW_OK};
        if (csv->text[0] == '\0') {
            blank_line = blank_line == 0 ? csv->line : blank_line;
            continue; /* at the end of the file */
        }
        if (blank_line > 0)
            return bw_error_set(csv->error, BW_INPUT, "%s:%zu: a blank line among the pulses", csv->path, blank_line);
        enum bw_status status = make_room(csv, most);
        if (status == BW_OK)
            status = read_pulse(csv, &csv->pulses[csv->count]);
        if (status != BW_OK)
            return status;
        if (bw_pulses_check(csv->pulses, csv->count, &reason) != BW_OK)
            return bw_error_set(csv->error, BW_INPUT, "%s:%zu: %s", csv->path, csv->line, reason.text);
        csv->count++;
    }
    if (csv->error->status == BW_OK && csv->count == 0)
        bw_error_set(csv->error, BW_INPUT, "%s: has no pulses below its first line", csv->path);
    return csv->error->status;
}

enum bw_status pulses_csv_read(const char *path, const char *shown, size_t most, struct bw_pulse **pulses,
                               size_t *count, struct bw_error *error) {
    struct csv csv = {.path = shown, .file = fopen(path, "r"), .error = error};
    *pulses = NULL;
    *count = 0;
    if (csv.file == NULL)
        return bw_error_set(error, BW_INPUT, "%s: cannot be opened: %s", shown, strerror(errno));
    enum bw_status status = read_header(&csv);
    if (status == BW_OK)
        status = read_pulses(&csv, most);
    fclose(csv.file);
    if (status != BW_OK) {
        free(csv.pulses);
        return status;
    }
    *pulses = csv.pulses;
    *count = csv.count;
    return BW_OK;
}
