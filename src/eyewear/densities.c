/* Optical densities as ranges of wavelengths: `800-820 6.2, 890-1070 5.5`. */
#include "internal.h"

static const double density_max = 20.; /* no filter is measured beyond; catches a slipped comma */

static const char *read_density(const char *item, struct bw_rating *rating) {
    struct scan scan = {item};
    if (scan_number(&scan, &rating->low_nm) && scan_at_end(&scan)) /* `800-820 6,2` ends like that */
        return "a number alone (the comma parts one range from the next, decimals take a point)";
    scan.at = item;
    const char *wrong = scan_range(&scan, rating);
    if (wrong)
        return wrong;
    if (scan_at_end(&scan))
        return "no optical density";
    if (!scan_number(&scan, &rating->optical_density))
        return "the optical density is not a plain number";
    if (!(rating->optical_density >= 0. && rating->optical_density <= density_max))
        return "optical density outside 0 to 20";
    return scan_at_end(&scan) ? NULL : "text after the optical density";
}

/* Optical density ranges.
 * Given:    text      `800-820 6.2, 890-1070 5.5`: nm, both ends included; a single wavelength stands for itself
 * Returned: goggles   the ranges appended; unchanged on error
 * Returns:  BW_OK; BW_INPUT with the item, what is wrong with it, what would be right */
enum bw_status bw_eyewear_read_densities(const char *text, struct bw_goggles *goggles, struct bw_error *error) {
    return read_items(text, ',', read_density, "LOW-HIGH OD, as in 800-820 6.2, 890-1070 5.5,", goggles, error);
}
