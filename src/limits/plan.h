/* Which rows hold at a wavelength and a time, looked up and not searched: the zones of the plan that table_plan.c laid
 * out. Shared by the evaluator of one exposure and that of many. */
#ifndef BEAMWARD_LIMITS_PLAN_H
#define BEAMWARD_LIMITS_PLAN_H

#include "internal.h"

#include <stdint.h>
#include <string.h>

/* The leading bits of a positive number rise with it. Negative numbers and NaN come after all others. */
static inline size_t leading_bits(double x, size_t shift) {
    uint64_t bits;
    memcpy(&bits, &x, sizeof bits);
    return (size_t)(bits >> shift);
}

/* Number of cuts at or below x. Numbers far beyond the last cut, negative ones and NaN land in the last zone, in
 * which no row holds, as none does in zone 0. */
static inline size_t zone_of(const struct cuts *cuts, double x) {
    size_t key = leading_bits(x, cuts->shift);
    key = key < cuts->lowest_key ? 0 : key - cuts->lowest_key;
    size_t zone = cuts->first[key < cuts->key_count ? key : cuts->key_count - 1];
    while (x >= cuts->at[zone])
        zone++;
    return zone;
}

static inline unsigned cell_at(const struct plan *plan, double wavelength_nm, double time_s) {
    return plan
        ->cell_of[zone_of(&plan->wavelengths, wavelength_nm) * (plan->times.count + 1) + zone_of(&plan->times, time_s)];
}

#endif
