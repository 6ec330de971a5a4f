/* What can still be judged of a file that the INI guard has refused: all but the lines with a fault. So every fault of
 * a file is told at once, and none that only follows from another. */
#include "internal.h"

#include <stdlib.h>
#include <string.h>

static bool begins_section(const char *line, size_t length) {
    size_t blanks = 0;
    while (blanks < length && (line[blanks] == ' ' || line[blanks] == '\t'))
        blanks++;
    return blanks < length && line[blanks] == '[';
}

static bool lose(struct lost_lines *lost, int line) {
    if (lost->count == lost->capacity) {
        size_t capacity = lost->capacity * 2 + 16;
        int *lines = realloc(lost->lines, capacity * sizeof *lines);
        if (!lines) {
            lost->no_memory = true;
            return false;
        }
        lost->lines = lines;
        lost->capacity = capacity;
    }
    lost->lines[lost->count++] = line;
    return true;
}

/* Leaves out the lines with faults, and what follows a section's head that has one, up to the next. Line ends stay.
 * Given:    bytes   the file; faults  of the guard, by line
 * Returned: plain   what is left; lost  the lines left out
 * Returns:  false if there is nothing to judge: a fault of the file as a whole, or memory is short */
bool repair_lines(const struct bw_text *bytes, const struct bw_faults *faults, struct bw_text *plain,
                  struct lost_lines *lost) {
    size_t fault = 0;
    int number = 1;
    bool skipping = false, done = faults->count > 0 && faults->items[0].line > 0;
    for (size_t at = 0; at < bytes->length && done; number++) {
        const char *line = bytes->data + at, *end = memchr(line, '\n', bytes->length - at);
        size_t length = end ? (size_t)(end - line) : bytes->length - at;
        bool refused = false, head = begins_section(line, length);
        for (; fault < faults->count && faults->items[fault].line <= number; fault++) {
            refused = true;
            /* A head that names its section only repeats an earlier one, which is still there. */
            lost->sections = lost->sections || (head && faults->items[fault].section[0] == '\0');
        }
        skipping = head ? refused : skipping;
        if (refused || skipping)
            done = lose(lost, number);
        else
            bw_text_add_bytes(plain, line, length);
        bw_text_add_bytes(plain, "\n", 1);
        at += length + 1;
    }
    lost->no_memory = lost->no_memory || plain->failed;
    return done && !lost->no_memory;
}
