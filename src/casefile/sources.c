/* Where the light of a beam seems to come from: its apparent source, and the emitters of a head. */
#include "internal.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

static const struct range sources_m = {0., 1.}, behind_m = {0., 100.}, cores_m = {1e-6, 0.1};
static const double farthest_emitter_m = 0.5, agreement = 1e-3; /* shares may be rounded in the third digit */

/* ---- the apparent source ------------------------------------------------------------------------ */

/* The core of a multimode fibre: only if asked for, since a point is the safe side. */
static enum presence read_kind(struct reading *reading, const struct section *section, struct bw_beam *beam) {
    static const char *const words[] = {"point", "fibre-end"};
    size_t index = 0;
    double core_m;
    enum presence kind = value_choice(reading, section, "apparent_source_kind", words, 2, &index);
    if (kind != GIVEN)
        return kind;
    const struct bw_ini_entry *entry = value_entry(section, "apparent_source_kind", NULL);
    if (value_given(section, "apparent_source")) {
        fault_key(reading, entry, "does not go with a given diameter of the apparent source; remove one or the other");
        return WRONG;
    }
    if (index == 0)
        return GIVEN;
    const struct bw_ini_entry *core = value_entry(section, "fibre_core", NULL);
    if (!core) {
        fault_key(reading, entry, "fibre-end needs fibre_core_mm and fibre_na; `point` would be right without");
        return WRONG;
    }
    if (beam->diameter_m > 0.) { /* else the core's fault is told already */
        core_m = fmin(fmax(beam->diameter_m, cores_m.least), cores_m.most);
        beam->source_m = bw_fibre_source_m(core_m);
    }
    return GIVEN;
}

/* A source seen through the exit is no wider than what leaves it, unless it lies behind. */
static bool source_fits(struct reading *reading, const struct section *section, const struct bw_beam *beam) {
    double exit_m = beam->elliptical ? fmax(beam->exit_diameter_m, beam->exit_diameter_y_m) : beam->exit_diameter_m;
    if (beam->source_m <= exit_m * (1. + 1e-9) || beam->source_behind_m > 0.)
        return true;
    const struct bw_ini_entry *entry = value_entry(section, "apparent_source", NULL);
    fault_key(reading, entry,
              "%s is wider than the beam that leaves the exit; 0 (a point), the beam diameter at most, or "
              "apparent_source_behind_mm as well would be right",
              entry->value);
    return false;
}

static enum presence read_apparent(struct reading *reading, const struct section *section,
                                   enum bw_diameter_definition definition, bool whole, struct bw_beam *beam) {
    double source_m, distance_m;
    enum presence size = value_number(reading, section, "apparent_source", sources_m, &source_m);
    enum presence behind = value_number(reading, section, "apparent_source_behind", behind_m, &distance_m);
    if (size == GIVEN)
        beam->source_m = bw_diameter_to_d63(source_m, definition);
    if (behind == GIVEN)
        beam->source_behind_m = distance_m;
    enum presence kind = read_kind(reading, section, beam);
    bool fits = size != GIVEN || behind == WRONG || !whole || source_fits(reading, section, beam);
    return size == WRONG || behind == WRONG || kind == WRONG || !fits ? WRONG : GIVEN;
}

/* ---- emitters ----------------------------------------------------------------------------------- */

/* Copies the next number of a list. Returns: what follows it, or NULL after the last. */
static const char *take_number(const char *text, char number[64]) {
    size_t size = strcspn(text, ","), from = strspn(text, " \t");
    size_t length = size > from ? size - from : 0;
    while (length > 0 && strchr(" \t", text[from + length - 1]))
        length--;
    if (length >= 64)
        length = 63;
    memcpy(number, text + (size > from ? from : 0), length);
    number[length] = '\0';
    return text[size] == ',' ? text + size + 1 : NULL;
}

/* Shares that sum to 1, as many as emitters. */
static enum presence read_shares(struct reading *reading, const struct section *section, struct bw_cluster *cluster) {
    const struct bw_ini_entry *entry = value_entry(section, "emitter_power_share", NULL);
    char number[64];
    size_t count = 0;
    double sum = 0.;
    if (!entry)
        return ABSENT;
    for (const char *next = entry->value; next; count++) {
        double share;
        next = take_number(next, number);
        if (!bw_parse_number(number, &share)) {
            value_not_a_number(reading, entry, NULL, number);
            return WRONG;
        }
        if (!(share >= 0. && share <= 1.)) {
            fault_key(reading, entry, "%s is no share; 0 to 1 would be right", number);
            return WRONG;
        }
        if (count < BW_EMITTERS_MAX)
            cluster->share[count] = share;
        sum += share;
    }
    if (count != cluster->count) {
        fault_key(reading, entry, "has %zu share%s for %zu emitters; one for each would be right", count,
                  count == 1 ? "" : "s", cluster->count);
        return WRONG;
    }
    if (!(fabs(sum - 1.) <= agreement)) {
        fault_key(reading, entry, "sums to %.6g; shares that sum to 1 would be right", sum);
        return WRONG;
    }
    for (size_t i = 0; i < count; i++)
        cluster->share[i] /= sum;
    return GIVEN;
}

static bool emitters_fit(struct reading *reading, const struct section *section, const struct bw_polygon *points) {
    const struct bw_ini_entry *entry = value_entry(section, "emitter_at", NULL);
    if (points->count > BW_EMITTERS_MAX) {
        fault_key(reading, entry,
                  "has %zu emitters; at most %d would be right: describe neighbours as one, in their "
                  "middle, with the power of both",
                  points->count, BW_EMITTERS_MAX);
        return false;
    }
    for (size_t i = 0; i < points->count; i++)
        if (!(fabs(points->points[i].x_m) <= farthest_emitter_m && fabs(points->points[i].y_m) <= farthest_emitter_m)) {
            fault_key(reading, entry, "point %zu is more than %g m off the axis of the head; less would be right",
                      i + 1, farthest_emitter_m);
            return false;
        }
    return true;
}

static enum presence read_emitters(struct reading *reading, const struct section *section, struct bw_beam *beam) {
    struct bw_cluster *cluster = &beam->cluster;
    struct bw_polygon points;
    enum presence presence = value_points(reading, section, "emitter_at", 1, &points);
    if (presence == GIVEN && !emitters_fit(reading, section, &points))
        presence = WRONG;
    if (presence == GIVEN)
        cluster->count = points.count;
    for (size_t i = 0; i < cluster->count; i++) {
        cluster->at[i] = points.points[i];
        cluster->share[i] = 1. / (double)cluster->count;
    }
    free(points.points);
    const struct bw_ini_entry *shares = value_entry(section, "emitter_power_share", NULL);
    if (presence == ABSENT && shares) {
        fault_key(reading, shares, "shares the power among emitters; emitter_at_mm with their places would be right");
        return WRONG;
    }
    return presence == GIVEN && read_shares(reading, section, cluster) == WRONG ? WRONG : presence;
}

/* Given:    definition  by which diameters of this beam are stated; whole  beam holds its geometry
 * Returned: beam        its source and cluster */
enum presence read_source(struct reading *reading, const struct section *section,
                          enum bw_diameter_definition definition, bool whole, struct bw_beam *beam) {
    enum presence apparent = read_apparent(reading, section, definition, whole, beam);
    enum presence emitters = read_emitters(reading, section, beam);
    return apparent == WRONG || emitters == WRONG ? WRONG : GIVEN;
}
