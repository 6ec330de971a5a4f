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
        append(text->symbols, " pi/4 gamma^2");
        append(text->numbers, " * pi/4 * (%s mrad)^2", bw_limits_number(angle, gamma_mrad));
    }
    if (row->time_power.law != POWER_0) {
        bw_limits_number(power, row->time_power.exponent);
        append(text->symbols, " t^%s", power);
        append(text->numbers, " * %s^%s", bw_limits_number(time, query->time_s), power);
    }
}

static void factor_formula(char symbols[PRODUCT_SIZE], char numbers[PRODUCT_SIZE], const struct factor_row *row,
                           const char *argument, double x) {
    char offset[LIMITS_NUMBER_SIZE], scale[LIMITS_NUMBER_SIZE], origin[LIMITS_NUMBER_SIZE], at[LIMITS_NUMBER_SIZE];
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
    append(symbols, "10^(%.6g (%s - %s))", row->slope, argument, origin);
    append(numbers, "10^(%.6g (%s - %s))", row->slope, bw_limits_number(at, x), origin);
}

void bw_working_factor(const struct query *query, const struct factor_use *use, const struct factor_row *row,
                       double value, struct product_text *text) {
    char symbol[LIMITS_NUMBER_SIZE], formula[PRODUCT_SIZE], numbers[PRODUCT_SIZE], source[LIMITS_SOURCE_SIZE];
    char number[LIMITS_NUMBER_SIZE];
    capitals(symbol, use->label);
    append(text->symbols, " %s", symbol);
    append(text->numbers, " * %.6g", value);
    if (use->factor == USE_CE) /* its own step says more */
        return;
    if (use->factor == USE_AREA) {
        bw_working_step(query->working, symbol, value, "", "", "A = exposed area in m2", "A = %s",
                        bw_limits_number(number, query->area_m2));
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
    char source[LIMITS_SOURCE_SIZE], low[LIMITS_NUMBER_SIZE], at[LIMITS_NUMBER_SIZE];
    const struct size_row *row = alpha_max_row(query);
    const char *formula = "alpha^2 / (alpha_min alpha_max)";
    bw_limits_number(low, size->alpha_min_mrad);
    bw_limits_number(at, query->subtense_mrad);
    if (row != NULL) {
        char factor[LIMITS_NUMBER_SIZE], power[LIMITS_NUMBER_SIZE], text[PRODUCT_SIZE] = "";
        append(text, "%s", bw_limits_number(factor, row->value));
        if (row->time_power.law != POWER_0)
            append(text, " t^%s", bw_limits_number(power, row->time_power.exponent));
        bw_working_step(query->working, "alpha_max", alpha_max_mrad, "mrad",
                        bw_limits_source_text(source, query->table->id, "source-size", &row->note), text, "%s", "");
    }
    if (query->subtense_mrad <= size->alpha_min_mrad) {
        bw_limits_source_text(source, query->table->id, "source-size", &size->alpha_min_note);
        bw_working_step(query->working, "CE", value, "", source, "1, alpha up to alpha_min", "%s mrad, up to %s mrad",
                        at, low);
    } else if (query->subtense_mrad <= alpha_max_mrad) {
        bw_limits_source_text(source, query->table->id, "source-size", &size->alpha_min_note);
        bw_working_step(query->working, "CE", value, "", source, "alpha / alpha_min", "%s / %s", at, low);
    } else if (size->beyond == BEYOND_ACCEPTANCE) {
        bw_limits_source_text(source, query->table->id, "source-size", &size->beyond_note);
        bw_working_step(query->working, "CE", value, "", source, "alpha_max / alpha_min", "%.6g / %s", alpha_max_mrad,
                        low);
    } else {
        bw_limits_source_text(source, query->table->id, "source-size", &size->beyond_note);
        bw_working_step(query->working, "CE", value, "", source, formula, "%s^2 / (%s * %.6g)", at, low,
                        alpha_max_mrad);
    }
}

void bw_working_cone(const struct query *query, const struct size_row *cone, double gamma_mrad, double value,
                     struct product_text *text) {
    char source[LIMITS_SOURCE_SIZE], at[LIMITS_NUMBER_SIZE];
    append(text->symbols, " (alpha/gamma)^2");
    append(text->numbers, " * %.6g", value);
    bw_working_step(query->working, "(alpha/gamma)^2", value, "",
                    bw_limits_source_text(source, query->table->id, "cone", &cone->note),
                    "a uniform source wider than the cone gamma", "(%s / %.6g)^2",
                    bw_limits_number(at, query->subtense_mrad), gamma_mrad);
}

void bw_working_limit(const struct query *query, const struct limit_row *row, const struct bw_limit *limit,
                      const struct product_text *text) {
    char source[LIMITS_SOURCE_SIZE], time[LIMITS_NUMBER_SIZE];
    const struct limit_section *section = &query->table->sections[row->section];
    bw_limits_source_text(source, query->table->id, section->name, &row->note);
    bw_limits_number(time, query->time_s);
    if (limit->printed_as_irradiance) {
        bw_working_step(query->working, "E", limit->irradiance_w_m2, "W/m2", source, text->symbols, "%s",
                        text->numbers);
        bw_working_step(query->working, "H", limit->radiant_exposure_j_m2, "J/m2", "", "E t", "%.6g * %s",
                        limit->irradiance_w_m2, time);
    } else {
        bw_working_step(query->working, "H", limit->radiant_exposure_j_m2, "J/m2", source, text->symbols, "%s",
                        text->numbers);
        bw_working_step(query->working, "E", limit->irradiance_w_m2, "W/m2", "", "H / t", "%.6g / %s",
                        limit->radiant_exposure_j_m2, time);
    }
}

void bw_working_aperture(const struct query *query, const struct size_row *row, double aperture_mm) {
    char source[LIMITS_SOURCE_SIZE], value[LIMITS_NUMBER_SIZE], power[LIMITS_NUMBER_SIZE], at[LIMITS_NUMBER_SIZE];
    char formula[PRODUCT_SIZE] = "", numbers[PRODUCT_SIZE] = "";
    if (row == NULL)
        return;
    append(formula, "%s", bw_limits_number(value, row->value));
    if (row->time_power.law != POWER_0) {
        bw_limits_number(power, row->time_power.exponent);
        append(formula, " t^%s", power);
        append(numbers, "%s * %s^%s", value, bw_limits_number(at, query->time_s), power);
    }
    bw_working_step(query->working, "D", aperture_mm, "mm",
                    bw_limits_source_text(source, query->table->id, "aperture", &row->note), formula, "%s", numbers);
}

void bw_working_acceptance(const struct query *query, double alpha_max_mrad) {
    char source[LIMITS_SOURCE_SIZE];
    bw_working_step(
        query->working, "acceptance", alpha_max_mrad, "mrad",
        bw_limits_source_text(source, query->table->id, "source-size", &query->table->source_size.beyond_note),
        "the exposure is measured within alpha_max", "%s", "");
}

void bw_working_lowest(const struct query *query, const struct bw_limit_set *limits) {
    char numbers[PRODUCT_SIZE] = "";
    const struct bw_limit *governing = &limits->limits[limits->governing];
    char source[LIMITS_SOURCE_SIZE];
    struct row_note note = {governing->source.row, governing->source.clause, governing->source.known, 0};
    for (size_t i = 0; i < limits->count; i++)
        append(numbers, "%s%s %.6g", i == 0 ? "" : ", ", bw_effect_name(limits->limits[i].effect),
               limits->limits[i].radiant_exposure_j_m2);
    bw_working_heading(query->working, "Lowest limit for the %s: %s", query->target == BW_EYE ? "eye" : "skin",
                       bw_effect_name(governing->effect));
    bw_working_step(query->working, "MPE", governing->radiant_exposure_j_m2, "J/m2",
                    bw_limits_source_text(source, query->table->id, governing->source.section, &note),
                    "the lowest of all effects; where rows meet, the lowest row", "%s", numbers);
}
