#include <beamward/base.h>

#include <string.h>

/* International yard and pound agreement, 1959: 1 in = 25.4 mm exactly. */
static const struct bw_unit length_units[] = {{"mm", 1e-3}, {"cm", 1e-2}, {"m", 1}, {"in", 0.0254}, {"ft", 0.3048}};
static const struct bw_unit angle_units[] = {{"mrad", 1e-3}, {"deg", 3.14159265358979323846 / 180}};

static const struct bw_unit *find(const struct bw_unit *units, size_t count, const char *suffix) {
    for (size_t i = 0; i < count; i++)
        if (strcmp(units[i].suffix, suffix) == 0)
            return &units[i];
    return NULL;
}

const struct bw_unit *bw_length_unit(const char *suffix) {
    return find(length_units, sizeof length_units / sizeof length_units[0], suffix);
}

const struct bw_unit *bw_angle_unit(const char *suffix) {
    return find(angle_units, sizeof angle_units / sizeof angle_units[0], suffix);
}
