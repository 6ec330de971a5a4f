/* The built-in rule sets. */
#include "internal.h"

#include <string.h>

size_t bw_tables_count(void) {
    return bw_limits_built_in_table_count;
}

const struct bw_table *bw_tables_at(size_t index) {
    return index < bw_limits_built_in_table_count ? bw_limits_built_in_tables[index] : NULL;
}

const struct bw_table *bw_tables_find(const char *id) {
    for (size_t i = 0; i < bw_limits_built_in_table_count; i++)
        if (strcmp(bw_limits_built_in_tables[i]->id, id) == 0)
            return bw_limits_built_in_tables[i];
    return NULL;
}
