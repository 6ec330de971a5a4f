/* What the files of eyewear share among themselves. */
#ifndef EYEWEAR_INTERNAL_H
#define EYEWEAR_INTERNAL_H

#include <beamward/eyewear.h>

enum { ITEM_SIZE = 80 };

/* A text read from left to right. */
struct scan {
    const char *at;
};
void scan_blanks(struct scan *scan);
bool scan_at_end(struct scan *scan);
/* A plain number without sign and exponent: in `800-820` the hyphen stands between two. */
bool scan_number(struct scan *scan, double *value);
/* `800-820`, blanks round the hyphen allowed, or `1064`, which stands for itself. Ends must be in order.
 * Returns: NULL, or what is wrong with it. */
const char *scan_range(struct scan *scan, struct bw_rating *rating);

/* Reads one item of a list into a rating. Returns: NULL, or what is wrong with it. */
typedef const char *item_reader(const char *item, struct bw_rating *rating);
/* Reads items between separators and appends them to the goggles: all of them or, with an error, none. `right` is what
 * would be right. */
enum bw_status read_items(const char *text, char separator, item_reader *reader, const char *right,
                          struct bw_goggles *goggles, struct bw_error *error);

#endif
