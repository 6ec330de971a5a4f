/* The angle from which a source counts as large. */
#include "internal.h"

/* alpha_max at a duration.
 * Given:    table, time_s
 * Returns:  [rad]; infinite if the rule set names none */
double bw_limits_largest_subtense(const struct bw_table *table, double time_s) {
    return bw_limits_alpha_max_mrad(table, time_s) * 1e-3;
}
