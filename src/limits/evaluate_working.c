/* Writes down a limit as the evaluator computes it: it is handed the very values that are multiplied and computes
 * nothing itself. */
#include "evaluate.h"

#include <ctype.h>
#include <math.h>
#include <stdarg.h>
#include <stdio.h>
#include <string.h>

const char *bw_limits_source_text(char out[LIMITS_SOURCE_SIZE], const char *table, const char *section,
                                  const struct row_note *note) {
    snprintf(out, LIMITS_SOURCE_SIZE, "%s, %s %s, %s%s", table, section, note->key, note->clause,
             note->known == BW_MEMORY ? ", from memory" : "");
    return out;
}

/* Ten digits: what a step multiplies need not be printed to the last bit. */
static const char *digits(char out[LIMITS_NUMBER_SIZE], double value) {
    char number[BW_NUMBER_SIZE];
    snprintf(out, LIMITS_NUMBER_SIZE, "%.*s", LIMITS_NUMBER_SIZE - 1, bw_working_number(number, value));
    return out;
}

static void append(char text[PRODUCT_SIZE], const char *format, ...) BW_PRINTF(2, 3);
static void append(char text[PRODUCT_SIZE], const char *format, ...) {
    size_t length = strlen(text);
    va_list arguments;
    va_start(arguments, format);
    vsnprintf(text + length, PRODUCT_SIZE - length, format, arguments);
    va_end(arguments);
}

/* "t2^-0.25" -> "T2^-0.25", "ca" -> "CA": the trade writes factors in capitals. */
static void capitals(char out[LIMITS_NUMBER_SIZE], const char *label) {
    size_t i = 0;
    for (; label[i] != '\0' && i + 1 < LIMITS_NUMBER_SIZE; i++)
        out[i] = (char)toupper((unsigned char)label[i]);
    out[i] = '\0';
}

void bw_working_row(const struct query *query, const struct limit_row *row, struct product_text *text,
                    double gamma_mrad) {
    char value[LIMITS_NUMBER_SIZE], power[LIMITS_NUMBER_SIZE], time[LIMITS_NUMBER_SIZE], angle[LIMITS_NUMBER_SIZE];
    const struct limit_section *section = &query->table->sections[row->section];
    bw_working_heading(query->working, "Limit: %s, %s, row %s", query->table->id, section->name, row->note.key);
    bw_limits_number(value, row->value);
    snprintf(text->symbols, sizeof text->symbols, "%s", value);
    snprintf(text->numbers, sizeof text->numbers, "%s", value);
    if (!isnan(gamma_mrad)) {
        append(text->symbols, " pi/4 (gamma / 1000)^2");
        append(text->numbers, " * pi / 4 * (%s / 1000)^2", digits(angle, gamma_mrad));
    }
    if (row->time_power.law != POWER_0) {
        bw_limits_number(power, row->time_power.exponent);
        append(text->symbols, " t^%s", power);
        append(text->numbers, " * %s^%s", digits(time, query->time_s), power);
    }
}

static void factor_formula(char symbols[PRODUCT_SIZE], char numbers[PRODUCT_SIZE], const struct factor_row *row,
                           const char *argument, double x) {
    char offset[LIMITS_NUMBER_SIZE], scale[LIMITS_NUMBER_SIZE], origin[LIMITS_NUMBER_SIZE], at[LIMITS_NUMBER_SIZE];
    char slope[LIMITS_NUMBER_SIZE];
    symbols[0] = numbers[0] = '\0';
    if (row->constant) {
        append(symbols, "%s", bw_limits_number(offset, row->offset + row->scale));
        return;
    }
    if (row->offset > 0.0)
        append(symbols, "%s + ", bw_limits_number(offset, row->offset));
    if (row->scale < 1.0 || row->scale > 1.0)
        append(symbols, "%s * ", bw_limits_number(scale, row->scale));
    append(numbers, "%s", symbols);
    bw_limits_number(origin, row->origin);
    digits(slope, row->slope);
    append(symbols, "10^(%s (%s - %s))", slope, argument, origin);
    append(numbers, "10^(%s * (%s - %s))", slope, digits(at, x), origin);
}

void bw_working_factor(const struct query *query, const struct factor_use *use, const struct factor_row *row,
                       double value, struct product_text *text) {
    char symbol[LIMITS_NUMBER_SIZE], formula[PRODUCT_SIZE], numbers[PRODUCT_SIZE], source[LIMITS_SOURCE_SIZE];
    char number[LIMITS_NUMBER_SIZE];
    if (use->factor == USE_AREA)
        snprintf(symbol, sizeof symbol, "A^%s", bw_limits_number(number, use->power.exponent));
    else
        capitals(symbol, use->label);
    append(text->symbols, " %s", symbol);
    append(text->numbers, " * %s", digits(number, value));
    if (use->factor == USE_CE) /* its own step says more */
        return;
    if (use->factor == USE_AREA) {
        char power[LIMITS_NUMBER_SIZE];
        bw_limits_number(power, use->power.exponent);
        snprintf(formula, sizeof formula, "A^%s", power);
        bw_working_step(query->working, formula, value, "", "", formula, "%s^%s", digits(number, query->area_m2),
                        power);
        bw_working_note(query->working, "A: exposed area of skin in m2, as it was given");
        return;
    }
    if (row == NULL)
        return;
    const struct factor *factor = &query->table->factors[use->factor];
    bool by_subtense = factor->argument == BY_SUBTENSE_MRAD;
    factor_formula(formula, numbers, row, by_subtense ? "alpha" : "w",
                   by_subtense ? query->subtense_mrad : query->wavelength_nm);
    if (use->power.law != POWER_1 || use->power.inverse) {
        char inner[PRODUCT_SIZE], power[LIMITS_NUMBER_SIZE];
        bw_limits_number(power, use->power.exponent);
        snprintf(inner, sizeof inner, "(%.200s)^%s", formula, power);
        memcpy(formula, inner, sizeof inner);
        if (numbers[0] != '\0') {
            snprintf(inner, sizeof inner, "(%.200s)^%s", numbers, power);
            memcpy(numbers, inner, sizeof inner);
        }
    }
    bw_working_step(query->working, symbol, value, "",
                    bw_limits_source_text(source, query->table->id, factor->section, &row->note), formula, "%s",
                    numbers);
}

/* A printed length or angle, with its power of time. */
static void write_size(const struct query *query, const char *symbol, const char *section, const struct size_row *row,
                       double value) {
    char source[LIMITS_SOURCE_SIZE], factor[LIMITS_NUMBER_SIZE], power[LIMITS_NUMBER_SIZE], at[LIMITS_NUMBER_SIZE];
    char formula[PRODUCT_SIZE] = "", numbers[PRODUCT_SIZE] = "";
    append(formula, "%s", bw_limits_number(factor, row->value));
    if (row->time_power.law != POWER_0) {
        bw_limits_number(power, row->time_power.exponent);
        append(formula, " t^%s", power);
        append(numbers, "%s * %s^%s", factor, digits(at, query->time_s), power);
    }
    bw_working_step(query->working, symbol, value, symbol[0] == 'D' ? "mm" : "mrad",
                    bw_limits_source_text(source, query->table->id, section, &row->note), formula, "%s", numbers);
}

/* The row of alpha_max that holds at this time. */
static const struct size_row *alpha_max_row(const struct query *query) {
    const struct source_size *size = &query->table->source_size;
    for (size_t i = 0; i < size->count; i++) {
        struct span times = {size->rows[i].from.value_s, size->rows[i].to.value_s, false, false};
        if (bw_limits_in_span(&times, query->time_s))
            return &size->rows[i];
    }
    return NULL;
}

void bw_working_ce(const struct query *query, double value, double alpha_max_mrad) {
    const struct source_size *size = &query->table->source_size;
    char source[LIMITS_SOURCE_SIZE], low[LIMITS_NUMBER_SIZE], at[LIMITS_NUMBER_SIZE], high[LIMITS_NUMBER_SIZE];
    const struct size_row *row = alpha_max_row(query);
    bw_limits_number(low, size->alpha_min_mrad);
    digits(at, query->subtense_mrad);
    digits(high, alpha_max_mrad);
    if (row != NULL)
        write_size(query, "alpha_max", "source-size", row, alpha_max_mrad);
    bool small = query->subtense_mrad <= size->alpha_min_mrad, wide = query->subtense_mrad > alpha_max_mrad;
    bw_limits_source_text(source, query->table->id, "source-size", wide ? &size->beyond_note : &size->alpha_min_note);
    if (small) {
        bw_working_step(query->working, "CE", value, "", source, "1", "%s", "");
        bw_working_note(query->working, "alpha = %s mrad is no more than alpha_min = %s mrad: a point source%s", at,
                        low, query->subtense_mrad > 0.0 ? "" : ", the strictest case");
    } else if (!wide) {
        bw_working_step(query->working, "CE", value, "", source, "alpha / alpha_min", "%s / %s", at, low);
    } else if (size->beyond == BEYOND_ACCEPTANCE) {
        bw_working_step(query->working, "CE", value, "", source, "alpha_max / alpha_min", "%s / %s", high, low);
    } else {
        bw_working_step(query->working, "CE", value, "", source, "alpha^2 / (alpha_min alpha_max)", "%s^2 / (%s * %s)",
                        at, low, high);
    }
}

void bw_working_gamma(const struct query *query, const struct size_row *cone, double gamma_mrad) {
    write_size(query, "gamma", "cone", cone, gamma_mrad);
    bw_working_note(query->working, "the cone that the exposure is measured in");
}

void bw_working_cone(const struct query *query, const struct size_row *cone, double gamma_mrad, double value,
                     struct product_text *text) {
    char source[LIMITS_SOURCE_SIZE], at[LIMITS_NUMBER_SIZE], angle[LIMITS_NUMBER_SIZE], factor[LIMITS_NUMBER_SIZE];
    append(text->symbols, " (alpha/gamma)^2");
    append(text->numbers, " * %s", digits(factor, value));
    bw_working_step(query->working, "(alpha/gamma)^2", value, "",
                    bw_limits_source_text(source, query->table->id, "cone", &cone->note), "(alpha / gamma)^2",
                    "(%s / %s)^2", digits(at, query->subtense_mrad), digits(angle, gamma_mrad));
    bw_working_note(query->working, "a uniform source wider than the cone: the limit of the whole of it");
}

void bw_working_limit(const struct query *query, const struct limit_row *row, const struct bw_limit *limit,
                      const struct product_text *text) {
    char source[LIMITS_SOURCE_SIZE], time[LIMITS_NUMBER_SIZE], printed[LIMITS_NUMBER_SIZE];
    const struct limit_section *section = &query->table->sections[row->section];
    bw_limits_source_text(source, query->table->id, section->name, &row->note);
    digits(time, query->time_s);
    digits(printed, limit->printed_as_irradiance ? limit->irradiance_w_m2 : limit->radiant_exposure_j_m2);
    if (limit->printed_as_irradiance) {
        bw_working_step(query->working, "E", limit->irradiance_w_m2, "W/m2", source, text->symbols, "%s",
                        text->numbers);
        bw_working_step(query->working, "H", limit->radiant_exposure_j_m2, "J/m2", "", "E t", "%s * %s", printed, time);
    } else {
        bw_working_step(query->working, "H", limit->radiant_exposure_j_m2, "J/m2", source, text->symbols, "%s",
                        text->numbers);
        bw_working_step(query->working, "E", limit->irradiance_w_m2, "W/m2", "", "H / t", "%s / %s", printed, time);
    }
}

void bw_working_aperture(const struct query *query, const struct size_row *row, double aperture_mm) {
    if (row != NULL)
        write_size(query, "D", "aperture", row, aperture_mm);
}

void bw_working_acceptance(const struct query *query, double alpha_max_mrad) {
    char source[LIMITS_SOURCE_SIZE], angle[LIMITS_NUMBER_SIZE];
    bw_working_step(
        query->working, "acceptance", alpha_max_mrad, "mrad",
        bw_limits_source_text(source, query->table->id, "source-size", &query->table->source_size.beyond_note),
        "alpha_max", "%s", digits(angle, alpha_max_mrad));
    bw_working_note(query->working, "the exposure is measured within this angle");
}

void bw_working_lowest(const struct query *query, const struct bw_limit_set *limits) {
    char numbers[PRODUCT_SIZE] = "", names[PRODUCT_SIZE] = "", number[LIMITS_NUMBER_SIZE];
    const struct bw_limit *governing = &limits->limits[limits->governing];
    char source[LIMITS_SOURCE_SIZE];
    struct row_note note = {governing->source.row, governing->source.clause, governing->source.known, 0};
    for (size_t i = 0; i < limits->count; i++) {
        append(numbers, "%s%s", i == 0 ? limits->count > 1 ? "min(" : "" : ", ",
               digits(number, limits->limits[i].radiant_exposure_j_m2));
        append(names, "%s%s", i == 0 ? "" : ", ", bw_effect_name(limits->limits[i].effect));
    }
    append(numbers, "%s", limits->count > 1 ? ")" : "");
    bw_working_heading(query->working, "Lowest limit for the %s: %s", query->target == BW_EYE ? "eye" : "skin",
                       bw_effect_name(governing->effect));
    bw_working_step(query->working, "MPE", governing->radiant_exposure_j_m2, "J/m2",
                    bw_limits_source_text(source, query->table->id, governing->source.section, &note),
                    limits->count > 1 ? "min(H of each effect)" : "H", "%s", numbers);
    bw_working_note(query->working, "of %s%s; where printed rows meet, the lowest row holds", names,
                    limits->count > 1 ? ": the lowest" : "");
}

double bw_limits_counting_working(const struct bw_table *table, const struct bw_exposure *exposure,
                                  struct bw_working *working) {
    double longest_s = bw_limits_counting_time(table, exposure), subtense_mrad = exposure->subtense_rad * 1e3;
    if (working == NULL || table->repetition.counting_factor == COUNT_ALL)
        return longest_s;
    const struct factor *factor = &table->factors[table->repetition.counting_factor];
    const struct power first = bw_limits_power_of(1.0);
    const struct factor_row *row = NULL;
    char formula[PRODUCT_SIZE], numbers[PRODUCT_SIZE], symbol[LIMITS_NUMBER_SIZE], source[LIMITS_SOURCE_SIZE];
    bool by_subtense = factor->argument == BY_SUBTENSE_MRAD;
    double x = by_subtense ? subtense_mrad : exposure->wavelength_nm;
    bw_limits_factor(table, table->repetition.counting_factor, x, &first, &row);
    if (row == NULL)
        return longest_s;
    capitals(symbol, factor->name);
    factor_formula(formula, numbers, row, by_subtense ? "alpha" : "w", x);
    bw_working_step(working, symbol, longest_s, "s",
                    bw_limits_source_text(source, table->id, factor->section, &row->note), formula, "%s", numbers);
    bw_working_note(working, "pulses are counted in no more than this time");
    return longest_s;
}
