/* Which exposures add: the same tissue and the same effect. */
#include "internal.h"

bool bw_limits_add(const struct bw_table *table, enum bw_target target, double first_nm, double second_nm) {
    for (size_t i = 0; i < table->additivity_count; i++) {
        const struct add_row *row = &table->additivity[i];
        if (!(target == BW_EYE ? row->eye : row->skin))
            continue;
        if ((bw_limits_in_span(&row->first_nm, first_nm) && bw_limits_in_span(&row->second_nm, second_nm)) ||
            (bw_limits_in_span(&row->first_nm, second_nm) && bw_limits_in_span(&row->second_nm, first_nm)))
            return true;
    }
    return false;
}
