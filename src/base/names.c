#include <beamward/base.h>

#include <string.h>

static size_t least(size_t a, size_t b) {
    return a < b ? a : b;
}

/* Edit distance with swaps of neighbours (Damerau's, in its restricted form); words are cut at BW_NAME_SIZE. */
static size_t edit_distance(const char *a, const char *b) {
    size_t before[BW_NAME_SIZE], above[BW_NAME_SIZE], row[BW_NAME_SIZE];
    size_t rows = least(strlen(a), BW_NAME_SIZE - 1), columns = least(strlen(b), BW_NAME_SIZE - 1);
    for (size_t j = 0; j <= columns; j++)
        before[j] = above[j] = j;
    for (size_t i = 1; i <= rows; i++) {
        row[0] = i;
        for (size_t j = 1; j <= columns; j++) {
            size_t change = above[j - 1] + (a[i - 1] != b[j - 1]);
            row[j] = least(change, least(above[j], row[j - 1]) + 1);
            if (i > 1 && j > 1 && a[i - 1] == b[j - 2] && a[i - 2] == b[j - 1])
                row[j] = least(row[j], before[j - 2] + 1);
        }
        memcpy(before, above, sizeof above);
        memcpy(above, row, sizeof row);
    }
    return above[columns];
}

const char *bw_nearest_name(const char *word, const char *const *names, size_t count) {
    const char *nearest = NULL;
    size_t third = strlen(word) / 3, best = (third > 2 ? third : 2) + 1;
    for (size_t i = 0; i < count; i++) {
        size_t distance = edit_distance(word, names[i]);
        /* A name that has to be rewritten whole is no suggestion. */
        if (distance < best && distance < strlen(names[i])) {
            best = distance;
            nearest = names[i];
        }
    }
    return nearest;
}
