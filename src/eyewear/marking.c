/* The marking of EN 207 on frame and filter: `800-820 D LB6 + 890-1070 DIR LB5`. */
#include "internal.h"

#include <stdlib.h>
#include <string.h>

enum { SCALE_MAX = 10 }; /* LB1 to LB10 */

/* A word of the modes D, I, R, M, each once. */
static const char *read_modes(struct scan *scan, struct bw_rating *rating) {
    scan_blanks(scan);
    size_t length = strspn(scan->at, "DIRM");
    if (length == 0 || length > 4 || (scan->at[length] != ' ' && scan->at[length] != '\0'))
        return "no mode letters D, I, R, M";
    for (size_t i = 0; i < length; i++)
        if (strchr(rating->modes, scan->at[i]))
            return "a mode letter twice";
        else
            rating->modes[i] = scan->at[i];
    scan->at += length;
    return NULL;
}

/* `LB6`. A Y after it (not tested at a low repetition rate) says nothing of the density. */
static const char *read_scale(struct scan *scan, struct bw_rating *rating) {
    scan_blanks(scan);
    if (strncmp(scan->at, "LB", 2) != 0)
        return "no scale number LB1 to LB10";
    scan->at += 2;
    size_t length = strspn(scan->at, "0123456789");
    rating->scale_number = length > 0 && length <= 2 ? atoi(scan->at) : 0;
    if (rating->scale_number < 1 || rating->scale_number > SCALE_MAX)
        return "scale number outside LB1 to LB10";
    rating->optical_density = rating->scale_number; /* transmittance below 10^-n */
    scan->at += length;
    if (*scan->at == 'Y')
        scan->at++;
    return scan_at_end(scan) ? NULL : "text after the scale number (+ parts one range from the next)";
}

static const char *read_mark(const char *item, struct bw_rating *rating) {
    struct scan scan = {item};
    scan_blanks(&scan);
    bool modes_first = *scan.at >= 'A' && *scan.at <= 'Z'; /* both orders are printed on frames */
    const char *wrong = modes_first ? read_modes(&scan, rating) : scan_range(&scan, rating);
    if (!wrong)
        wrong = modes_first ? scan_range(&scan, rating) : read_modes(&scan, rating);
    return wrong ? wrong : read_scale(&scan, rating);
}

/* A marking as printed on the goggles.
 * Given:    text     `800-820 D LB6 + 890-1070 DIR LB5`; the modes may also stand before the wavelengths
 * Returned: goggles  a range a part, optical density n of LBn; unchanged on error
 * Returns:  BW_OK; BW_INPUT with the part, what is wrong with it, what would be right
 * Notes:    The scale number also says what the filter withstands; that is not judged here.
 * Source:   EN 207:2017, scale number n: transmittance below 10^-n (read). */
enum bw_status bw_eyewear_read_marking(const char *text, struct bw_goggles *goggles, struct bw_error *error) {
    return read_items(text, '+', read_mark, "WAVELENGTHS MODES LBn, as in 800-820 D LB6 + 890-1070 DIR LB5,", goggles,
                      error);
}
