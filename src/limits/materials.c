/* The built-in materials. */
#include "internal.h"

#include <string.h>

size_t bw_materials_count(void) {
    return bw_limits_built_in_material_count;
}

const struct bw_material *bw_materials_at(size_t index) {
    return index < bw_limits_built_in_material_count ? &bw_limits_built_in_materials[index] : NULL;
}

const struct bw_material *bw_materials_find(const char *name) {
    for (size_t i = 0; i < bw_limits_built_in_material_count; i++)
        if (strcmp(bw_limits_built_in_materials[i].name, name) == 0)
            return &bw_limits_built_in_materials[i];
    return NULL;
}
