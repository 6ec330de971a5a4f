/* Places on the plan and bearings. */
#include "internal.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static const double farthest_m = 1000.; /* coordinate; a larger one has a slipped unit */

/* Copies text up to `separator`, without outer blanks. Returns: what follows it, or NULL. */
static const char *take_part(const char *text, char separator, char *part) {
    const char *end = strchr(text, separator), *next = end ? end + 1 : NULL;
    size_t size = end ? (size_t)(end - text) : strlen(text);
    while (size > 0 && strchr(" \t", *text)) {
        text++;
        size--;
    }
    while (size > 0 && strchr(" \t", text[size - 1]))
        size--;
    memcpy(part, text, size);
    part[size] = '\0';
    return next;
}

struct item { /* one point of a list */
    const struct bw_ini_entry *entry;
    const struct unit_word *unit;
    char name[32]; /* "point 2" */
    bool alone;    /* the only one of its key */
};

static bool read_coordinate(struct reading *reading, const struct item *item, const char *text, double *value_m) {
    double value;
    if (!bw_parse_number(text, &value)) {
        value_not_a_number(reading, item->entry, item->alone ? NULL : item->name, text);
        return false;
    }
    *value_m = value * item->unit->to_si;
    if (*value_m >= -farthest_m && *value_m <= farthest_m)
        return true;
    fault_key(reading, item->entry, "%s%s%s is off the plan; %.6g to %.6g %s would be right",
              item->alone ? "" : item->name, item->alone ? "" : ": ", text, -farthest_m / item->unit->to_si,
              farthest_m / item->unit->to_si, item->unit->shown);
    return false;
}

static bool read_point(struct reading *reading, const struct item *item, char *text, struct bw_point *point) {
    size_t length = strcspn(text, " \t");
    char *second = text + length;
    if (*second)
        *second++ = '\0';
    second += strspn(second, " \t");
    if (text[0] == '\0') {
        fault_key(reading, item->entry, "%s is empty; remove the comma, or write x and y, as in 5.2 4.1", item->name);
        return false;
    }
    if (second[0] == '\0' || second[strcspn(second, " \t")] != '\0') {
        fault_key(reading, item->entry,
                  "%s: `%s%s%s` is not x and y; `5.2 4.1` would be right (a comma parts one point from the next, "
                  "decimals take a point)",
                  item->name, text, second[0] ? " " : "", second);
        return false;
    }
    bool right = read_coordinate(reading, item, text, &point->x_m);
    return read_coordinate(reading, item, second, &point->y_m) && right;
}

enum presence value_points(struct reading *reading, const struct section *section, const char *key, size_t least,
                           struct bw_polygon *points) {
    struct item item = {0};
    item.entry = value_entry(section, key, &item.unit);
    *points = (struct bw_polygon){0};
    if (!item.entry)
        return ABSENT;
    size_t size = strlen(item.entry->value), most = 1;
    for (const char *at = item.entry->value; (at = strchr(at, ',')); at++)
        most++;
    char *part = reading_allocate(reading, size + 1, 1);
    points->points = reading_allocate(reading, most, sizeof *points->points);
    bool right = part && points->points;
    item.alone = most == 1;
    for (const char *next = right ? item.entry->value : NULL; next && right;) {
        next = take_part(next, ',', part);
        snprintf(item.name, sizeof item.name, "point %zu", points->count + 1);
        right = read_point(reading, &item, part, &points->points[points->count]);
        points->count += right;
    }
    free(part);
    if (right && points->count < least) {
        fault_key(reading, item.entry, "has %zu point%s; at least %zu would be right, as in %s", points->count,
                  points->count == 1 ? "" : "s", least, "0 0, 5.2 0, 5.2 4.1, 0 4.1");
        right = false;
    }
    if (right)
        return GIVEN;
    free(points->points);
    *points = (struct bw_polygon){0};
    return WRONG;
}

enum presence value_point(struct reading *reading, const struct section *section, const char *key,
                          struct bw_point *point) {
    struct bw_polygon points;
    enum presence presence = value_points(reading, section, key, 1, &points);
    *point = (struct bw_point){0};
    if (presence == GIVEN && points.count > 1) {
        fault_key(reading, value_entry(section, key, NULL), "has %zu points; one would be right, as in 2.6 1.2",
                  points.count);
        presence = WRONG;
    } else if (presence == GIVEN) {
        *point = points.points[0];
    }
    free(points.points);
    return presence;
}

static bool check_aim(struct reading *reading, const struct bw_ini_entry *entry, double from_deg, double to_deg) {
    if (!(from_deg >= -360. && from_deg <= 360. && to_deg >= -360. && to_deg <= 720.))
        fault_key(reading, entry,
                  "%s is out of range; a FROM of -360 to 360 and a TO of at most 360 more would be right",
                  entry->value);
    else if (!(from_deg <= to_deg))
        fault_key(reading, entry, "%.6g .. %.6g runs backwards; %.6g .. %.6g would be right", from_deg, to_deg,
                  from_deg >= 0. ? from_deg - 360. : from_deg, from_deg >= 0. ? to_deg : to_deg + 360.);
    else if (!(to_deg <= from_deg + 360.))
        fault_key(reading, entry, "%.6g .. %.6g goes round more than once; 0 .. 360 would be all bearings", from_deg,
                  to_deg);
    else
        return true;
    return false;
}

enum presence value_aim(struct reading *reading, const struct section *section, double *from_deg, double *to_deg) {
    const struct bw_ini_entry *entry = value_entry(section, "aim_deg", NULL);
    if (!entry)
        return ABSENT;
    const char *dots = strstr(entry->value, "..");
    char *from = reading_allocate(reading, strlen(entry->value) + 1, 1);
    enum presence presence = WRONG;
    if (dots && from) {
        memcpy(from, entry->value, (size_t)(dots - entry->value));
        if (bw_parse_number(from, from_deg) && bw_parse_number(dots + 2, to_deg))
            presence = check_aim(reading, entry, *from_deg, *to_deg) ? GIVEN : WRONG;
        else
            fault_key(reading, entry, "%s: not two numbers; FROM .. TO would be right, as in 0 .. 360", entry->value);
    } else if (from) {
        fault_key(reading, entry, "%s: not a span; FROM .. TO would be right, as in 0 .. 360", entry->value);
    }
    free(from);
    return presence;
}
