/* The answer to `beamward limit`. */
#include "internal.h"

static void head(struct bw_text *out, const struct bw_limit_query *query) {
    char wavelength[REPORT_QUANTITY_SIZE], time[REPORT_QUANTITY_SIZE], subtense[REPORT_QUANTITY_SIZE];
    text_wrapf(out, "", "Exposure limit (MPE) of the %s at %s nm, exposure %s s%s",
               query->target == BW_EYE ? "eye" : "skin", report_plain(wavelength, query->exposure.wavelength_nm),
               report_plain(time, query->exposure.exposure_s), query->has_train ? ", pulse train" : "");
    text_wrapf(out, "rule set  ", "%s: %s", bw_table_id(query->table), bw_table_title(query->table));
    if (query->exposure_reason)
        text_wrapf(out, "exposure  ", "the customary time of the rule set (%s)", query->exposure_reason);
    if (query->exposure.subtense_rad > 0.)
        text_wrapf(out, "source    ", "subtends %s mrad", report_plain(subtense, 1e3 * query->exposure.subtense_rad));
    if (query->has_train) {
        char duration[REPORT_QUANTITY_SIZE], rate[REPORT_QUANTITY_SIZE];
        size_t count = query->emission.pulse_count;
        report_plain(duration, query->emission.pulse_duration_s);
        report_plain(rate, query->emission.repetition_rate_hz);
        if (count == 1)
            text_wrapf(out, "pulses    ", "one, of %s s", duration);
        else if (count > 0)
            text_wrapf(out, "pulses    ", "%zu in all, %s s each, %s a second", count, duration, rate);
        else
            text_wrapf(out, "pulses    ", "%s s each, %s a second", duration, rate);
    }
    bw_text_add(out, "\n");
}

static void governing(struct bw_text *out, const struct bw_limit *limit) {
    char aperture[REPORT_QUANTITY_SIZE];
    text_wrapf(out, "  limiting aperture  ", "%s mm", report_plain(aperture, 1e3 * limit->aperture_m));
    text_wrapf(out, "  governed by        ", "%s: row %s, %s (%s)", bw_effect_name(limit->effect), limit->source.row,
               limit->source.clause, report_known_words(limit->source.known));
}

static void continuous(struct bw_text *out, const struct bw_limit_query *query) {
    char quantity[REPORT_QUANTITY_SIZE];
    const struct bw_limit *limit = &query->limits.limits[query->limits.governing];
    text_wrap(out, "  radiant exposure   ",
              report_radiant_exposure(quantity, limit->radiant_exposure_j_m2, query->us_units));
    text_wrap(out, "  irradiance         ", report_irradiance(quantity, limit->irradiance_w_m2, query->us_units));
    governing(out, limit);
    bw_text_add(out, "\nEvery effect that has a row; the lowest governs\n");
    struct text_table table;
    table_begin(&table, "lrrrlll");
    static const char *const names[] = {"effect", "J/m2", "W/m2", "mm", "row", "clause", "known"};
    for (size_t i = 0; i < sizeof names / sizeof names[0]; i++)
        table_cell(&table, "%s", names[i]);
    for (size_t i = 0; i < query->limits.count; i++) {
        const struct bw_limit *each = &query->limits.limits[i];
        char number[BW_NUMBER_SIZE], plain[REPORT_QUANTITY_SIZE];
        table_cell(&table, "%s", bw_effect_name(each->effect));
        table_cell(&table, "%s", bw_format(number, each->radiant_exposure_j_m2, 3, BW_DOWN));
        table_cell(&table, "%s", bw_format(number, each->irradiance_w_m2, 3, BW_DOWN));
        table_cell(&table, "%s", report_plain(plain, 1e3 * each->aperture_m));
        table_cell(&table, "%s", each->source.row);
        table_cell(&table, "%s", each->source.clause);
        table_cell(&table, "%s", report_known_words(each->source.known));
    }
    table_print(&table, out, 2);
}

static void rules(struct text_table *table, const struct bw_train_limit *limit) {
    char number[BW_NUMBER_SIZE];
    table_cell(table, "%s", bw_effect_name(limit->limit.effect));
    for (int i = 0; i < BW_RULES; i++)
        table_cell(table, "%s", bw_format(number, limit->rules_j_m2[i], 3, BW_DOWN));
    table_cell(table, "%s", bw_train_rule_name(limit->rule));
    table_cell(table, "%s, %s", limit->limit.source.row, limit->limit.source.clause);
    table_cell(table, "%s", report_known_words(limit->limit.source.known));
}

static void pulsed(struct bw_text *out, const struct bw_limit_query *query) {
    char quantity[REPORT_QUANTITY_SIZE], pulses[REPORT_QUANTITY_SIZE], correction[BW_NUMBER_SIZE];
    const struct bw_train_limit *limit = &query->train.limits[query->train.governing];
    text_wrap(out, "  per pulse          ", report_radiant_exposure(quantity, limit->per_pulse_j_m2, query->us_units));
    text_wrap(out, query->emission.pulse_count > 0 ? "  mean of the train  " : "  mean irradiance    ",
              report_irradiance(quantity, limit->irradiance_w_m2, query->us_units));
    text_wrapf(out, "  governing rule     ", "%s", bw_train_rule_name(limit->rule));
    if (limit->pulses > 0.)
        text_wrapf(out, "  rule of the train  ", "%s pulses counted, correction %s",
                   report_plain(pulses, limit->pulses), bw_format(correction, limit->correction, 3, BW_DOWN));
    if (limit->group_pulses > 1.)
        text_wrapf(out, "  grouped            ", "%s pulses count as one", report_plain(pulses, limit->group_pulses));
    governing(out, &limit->limit);
    bw_text_add(out, "\nThe three rules, J/m2 per pulse; the lowest governs\n");
    struct text_table table;
    table_begin(&table, "lrrrlll");
    static const char *const names[] = {"effect", "single", "average", "train", "governs", "row, clause", "known"};
    for (size_t i = 0; i < sizeof names / sizeof names[0]; i++)
        table_cell(&table, "%s", names[i]);
    for (size_t i = 0; i < query->train.count; i++)
        rules(&table, &query->train.limits[i]);
    table_print(&table, out, 2);
}

static bool from_memory(const struct bw_limit_query *query) {
    if (query->has_train)
        return query->train.limits[query->train.governing].limit.source.known == BW_MEMORY;
    return query->limits.limits[query->limits.governing].source.known == BW_MEMORY;
}

/* A customary time as short as this is that of the aversion response. */
static bool rests_on_blinking(const struct bw_limit_query *query) {
    return query->exposure_reason && query->exposure.exposure_s <= 0.25;
}

void bw_report_limit_text(struct bw_text *out, const struct bw_limit_query *query) {
    head(out, query);
    if (query->has_train)
        pulsed(out, query);
    else
        continuous(out, query);
    bw_text_add(out, "\n");
    text_wrapf(out, "", "Limits are rounded down.%s",
               from_memory(query) ? " The governing row comes from memory: compare it with a printed copy." : "");
    if (rests_on_blinking(query))
        text_wrap(out, "",
                  "The time of 0.25 s rests on the aversion response; the German radiation protection commission "
                  "(SSK, 15 March 2006) says that newer results do not bear this assumption out.");
    text_limit_sets(out, query);
}
