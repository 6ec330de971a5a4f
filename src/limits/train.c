/* What a rule set says of pulse trains: grouping time, counting time, and the correction of rule 3. */
#include "internal.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

bool bw_limits_grouping_time(const struct bw_table *table, double wavelength_nm, double *ti_s,
                             struct bw_source_note *source) {
    const struct repetition *repetition = &table->repetition;
    bool found = false;
    *ti_s = 0.0;
    for (size_t i = 0; i < repetition->ti_count; i++) {
        const struct ti_row *row = &repetition->ti[i];
        /* Where two bands meet, the smaller: it belongs to the band with the lower limit. */
        if (!bw_limits_in_span(&row->wavelength_nm, wavelength_nm) || (found && !(row->ti_s < *ti_s)))
            continue;
        found = true;
        *ti_s = row->ti_s;
        if (source != NULL)
            *source =
                (struct bw_source_note){table->id, "repetition", row->note.key, row->note.clause, row->note.known};
    }
    return found;
}

double bw_limits_counting_time(const struct bw_table *table, const struct bw_exposure *exposure) {
    if (table->repetition.counting_factor == COUNT_ALL)
        return limits_infinity;
    return bw_limits_factor_at(table, table->repetition.counting_factor, exposure->wavelength_nm,
                               exposure->subtense_rad * 1e3);
}

bool bw_limits_train_applies(const struct bw_table *table, enum bw_effect effect, double wavelength_nm) {
    const struct repetition *repetition = &table->repetition;
    for (size_t i = 0; i < repetition->applies_count; i++)
        if (repetition->applies[i].effect == effect &&
            bw_limits_in_span(&repetition->applies[i].wavelength_nm, wavelength_nm))
            return true;
    return false;
}

double bw_limits_train_longest_pulse(const struct bw_table *table) {
    return table->repetition.longest_pulse_s;
}

static bool train_row_holds(const struct train_row *row, const struct bw_train_count *count, double pulses,
                            double alpha_max_mrad) {
    bool is_short = count->pulse_s <= count->ti_s * (1.0 + limits_edge_rounding);
    struct span subtense = row->subtense_mrad;
    if (row->pulse != PULSE_ANY && (row->pulse == PULSE_SHORT) != is_short)
        return false;
    if (row->low_is_alpha_max)
        subtense.low = alpha_max_mrad;
    if (row->high_is_alpha_max)
        subtense.high = alpha_max_mrad;
    return bw_limits_in_span(&subtense, count->subtense_rad * 1e3) && bw_limits_in_span(&row->pulses, pulses) &&
           bw_limits_in_span(&row->exposure_s, count->exposure_s);
}

void bw_limits_train_formula(char out[LIMITS_SOURCE_SIZE], const struct train_row *row, const char *pulses) {
    char scale[LIMITS_NUMBER_SIZE], power[LIMITS_NUMBER_SIZE], low[LIMITS_NUMBER_SIZE], product[LIMITS_SOURCE_SIZE];
    bw_limits_number(scale, row->scale);
    bw_limits_number(power, row->power.exponent);
    bool one = !(row->scale < 1.0) && !(row->scale > 1.0);
    const char *times = strcmp(pulses, "N") == 0 ? " " : " * ";
    if (row->power.law == POWER_0) {
        snprintf(out, LIMITS_SOURCE_SIZE, "%s", scale);
        return;
    }
    snprintf(product, sizeof product, "%s%s%s^%s", one ? "" : scale, one ? "" : times, pulses, power);
    if (row->floor > 0.0)
        snprintf(out, LIMITS_SOURCE_SIZE, "min(1, max(%s, %.120s))", bw_limits_number(low, row->floor), product);
    else
        snprintf(out, LIMITS_SOURCE_SIZE, one ? "%s" : "min(1, %.120s)", product);
}

/* plain: the correction is 1 whatever the row says, since one pulse is no train, or the pulse is too long for it. */
static void train_working(const struct bw_table *table, const struct train_row *row, double pulses, double lowest,
                          bool plain, struct bw_working *working) {
    char formula[LIMITS_SOURCE_SIZE], numbers[LIMITS_SOURCE_SIZE], source[LIMITS_SOURCE_SIZE];
    char number[LIMITS_NUMBER_SIZE];
    bw_limits_train_formula(formula, row, "N");
    bw_limits_train_formula(numbers, row, bw_limits_number(number, pulses));
    bw_working_step(working, "CP", lowest, "", bw_limits_source_text(source, table->id, "train", &row->note),
                    plain ? "1" : formula, "%s", plain ? "" : numbers);
    if (plain && pulses > 1.0)
        bw_working_note(working, "the rule holds for pulses of %g s at most", table->repetition.longest_pulse_s);
    else if (plain)
        bw_working_note(working, "one pulse is no train");
}

double bw_limits_train_correction(const struct bw_table *table, const struct bw_train_count *count,
                                  struct bw_source_note *source, struct bw_working *working) {
    const struct train_row *lowest_row = NULL;
    double lowest = limits_nan;
    if (isnan(count->pulse_s) || isnan(count->ti_s) || isnan(count->pulses))
        return limits_nan;
    double pulses = count->pulses < 1.0 ? 1.0 : count->pulses;
    double alpha_max_mrad = bw_limits_alpha_max_mrad(table, count->pulse_s);
    for (size_t i = 0; i < table->train_count; i++) {
        const struct train_row *row = &table->train[i];
        if (!train_row_holds(row, count, pulses, alpha_max_mrad))
            continue;
        double value = fmin(1.0, fmax(row->floor, row->scale * bw_limits_raise(pulses, &row->power)));
        if (!(value >= lowest)) {
            lowest = value;
            lowest_row = row;
        }
    }
    if (lowest_row == NULL)
        return limits_nan;
    bool plain = count->pulse_s > table->repetition.longest_pulse_s * (1.0 + limits_edge_rounding) || pulses <= 1.0;
    if (plain)
        lowest = 1.0; /* the rule does not hold for so long a pulse; one pulse is no train */
    if (source != NULL)
        *source = (struct bw_source_note){table->id, "train", lowest_row->note.key, lowest_row->note.clause,
                                          lowest_row->note.known};
    if (working != NULL)
        train_working(table, lowest_row, pulses, lowest, plain, working);
    return lowest;
}
