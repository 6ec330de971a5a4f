/* Blocks of memory that live and die together: all that a loaded table owns. */
#include "internal.h"

#include <stdint.h>
#include <stdlib.h>
#include <string.h>

struct block {
    struct block *next;
    max_align_t bytes[];
};
struct memory {
    struct block *blocks;
};

struct memory *bw_limits_memory_new(void) {
    return calloc(1, sizeof(struct memory));
}

void *bw_limits_memory_take(struct memory *memory, size_t count, size_t size) {
    if (count > (SIZE_MAX - sizeof(struct block)) / size)
        return NULL;
    struct block *block = calloc(1, sizeof *block + count * size);
    if (block == NULL)
        return NULL;
    block->next = memory->blocks;
    memory->blocks = block;
    return block->bytes;
}

const char *bw_limits_memory_copy(struct memory *memory, const char *string) {
    size_t size = strlen(string) + 1;
    char *copy = bw_limits_memory_take(memory, size, 1);
    if (copy != NULL)
        memcpy(copy, string, size);
    return copy;
}

void bw_limits_memory_free(struct memory *memory) {
    if (memory == NULL)
        return;
    for (struct block *block = memory->blocks; block != NULL;) {
        struct block *next = block->next;
        free(block);
        block = next;
    }
    free(memory);
}
