/* A rule set as a person reads it beside the printed document: sections, rows, units, clauses, and what is only from
 * memory. At most 80 columns. */
#include "internal.h"

#include <ctype.h>
#include <math.h>
#include <stdarg.h>
#include <stdio.h>
#include <string.h>

enum { PAGE_WIDTH = 80, LINE_SIZE = 400 };

struct printer {
    const struct bw_table *table;
    struct bw_text *out;
};

static void append(char line[LINE_SIZE], const char *format, ...) BW_PRINTF(2, 3);
static void append(char line[LINE_SIZE], const char *format, ...) {
    size_t length = strlen(line);
    va_list arguments;
    va_start(arguments, format);
    vsnprintf(line + length, LINE_SIZE - length, format, arguments);
    va_end(arguments);
}

/* Text that may be long: broken between words. */
static void print_wrapped(const struct printer *printer, const char *label, const char *text) {
    size_t column = strlen(label), indent = column;
    bw_text_add(printer->out, "%s", label);
    while (*text != '\0') {
        size_t length = strcspn(text, " ");
        if (column > indent && column + 1 + length > PAGE_WIDTH) {
            bw_text_add(printer->out, "\n%*s", (int)indent, "");
            column = indent;
        }
        if (column > indent) {
            bw_text_add(printer->out, " ");
            column++;
        }
        bw_text_add_bytes(printer->out, text, length);
        column += length;
        text += length;
        text += strspn(text, " ");
    }
    bw_text_add(printer->out, "\n");
}

/* One row: what it says, and where that is printed; the place on a line of its own if it does not fit. */
static void print_row(const struct printer *printer, const char line[LINE_SIZE], const struct row_note *note) {
    char place[LINE_SIZE] = "";
    append(place, "%s%s", note->clause, note->known == BW_MEMORY ? " *" : "");
    bw_text_add(printer->out, "  %s", line);
    size_t used = 2 + strlen(line), width = strlen(note->clause) + 2; /* clauses end in one column, the marks after */
    if (used + 2 + width > PAGE_WIDTH) {
        bw_text_add(printer->out, "\n");
        used = 0;
    }
    if (width + used < PAGE_WIDTH)
        bw_text_add(printer->out, "%*s%s\n", (int)(PAGE_WIDTH - used - width), "", place);
    else
        bw_text_add(printer->out, "  %.78s\n", place);
}

static void print_heading(const struct printer *printer, const char *name, const char *columns) {
    bw_text_add(printer->out, "\n%s\n", name);
    if (columns[0] != '\0')
        bw_text_add(printer->out, "  (%s)\n", columns);
}

static void edge_text(const struct printer *printer, char out[LIMITS_NUMBER_SIZE], const struct edge *edge) {
    if (edge->factor == EDGE_IS_NUMBER) {
        bw_limits_number(out, edge->value_s);
        return;
    }
    snprintf(out, LIMITS_NUMBER_SIZE, "%.30s", printer->table->factors[edge->factor].name);
    for (char *c = out; *c != '\0'; c++)
        *c = (char)toupper((unsigned char)*c);
}

static void add_times(const struct printer *printer, char line[LINE_SIZE], const struct edge *from,
                      const struct edge *to) {
    char low[LIMITS_NUMBER_SIZE], high[LIMITS_NUMBER_SIZE], both[LIMITS_SPAN_SIZE];
    edge_text(printer, low, from);
    edge_text(printer, high, to);
    snprintf(both, sizeof both, "%s .. %s s", low, high);
    append(line, "%-18s ", both);
}

static void add_wavelength(char line[LINE_SIZE], const struct span *span) {
    char text[LIMITS_SPAN_SIZE + 3];
    bw_limits_span(text, span);
    append(line, "%-12s nm  ", text); /* 1050 .. 1400 */
}

static void add_power(char line[LINE_SIZE], const char *base, const struct power *power) {
    char text[LIMITS_NUMBER_SIZE];
    if (power->law == POWER_1 && !power->inverse)
        append(line, " %s", base);
    else if (power->law != POWER_0)
        append(line, " %s^%s", base, bw_limits_number(text, power->exponent));
}

/* ---- factors and source size ------------------------------------------------------------------ */

static void print_factor(const struct printer *printer, const struct factor *factor) {
    bool by_subtense = factor->argument == BY_SUBTENSE_MRAD;
    print_heading(printer, factor->section, by_subtense ? "alpha: angular subtense in mrad" : "w: wavelength in nm");
    for (size_t i = factor->first; i < factor->first + factor->count; i++) {
        const struct factor_row *row = &printer->table->factor_rows[i];
        char line[LINE_SIZE] = "", text[LIMITS_SPAN_SIZE], number[LIMITS_NUMBER_SIZE];
        append(line, "%-14s %-4s  ", bw_limits_span(text, &row->argument), by_subtense ? "mrad" : "nm");
        if (row->constant) {
            append(line, "%s", bw_limits_number(number, row->offset + row->scale));
        } else {
            if (row->offset > 0.0)
                append(line, "%s + ", bw_limits_number(number, row->offset));
            if (row->scale < 1.0 || row->scale > 1.0)
                append(line, "%s * ", bw_limits_number(number, row->scale));
            append(line, "10^(%.6g (%s - %s))", row->slope, by_subtense ? "alpha" : "w",
                   bw_limits_number(number, row->origin));
        }
        print_row(printer, line, &row->note);
    }
}

static void print_sizes(const struct printer *printer, const struct size_row *rows, size_t count, const char *unit,
                        bool effects, bool wavelengths) {
    for (size_t i = 0; i < count; i++) {
        char line[LINE_SIZE] = "", number[LIMITS_NUMBER_SIZE];
        if (effects)
            append(line, "%-21s", bw_effect_name(rows[i].effect));
        if (wavelengths)
            add_wavelength(line, &rows[i].wavelength_nm);
        add_times(printer, line, &rows[i].from, &rows[i].to);
        append(line, " %s", bw_limits_number(number, rows[i].value));
        add_power(line, "t", &rows[i].time_power);
        append(line, " %s", unit);
        print_row(printer, line, &rows[i].note);
    }
}

static void print_source_size(const struct printer *printer) {
    const struct source_size *size = &printer->table->source_size;
    char line[LINE_SIZE] = "", number[LIMITS_NUMBER_SIZE];
    if (size->line == 0)
        return;
    print_heading(printer, "source size, CE", "CE = 1 to alpha_min, alpha/alpha_min to alpha_max");
    append(line, "alpha_min = %s mrad", bw_limits_number(number, size->alpha_min_mrad));
    print_row(printer, line, &size->alpha_min_note);
    bw_text_add(printer->out, "  alpha_max by time:\n");
    print_sizes(printer, size->rows, size->count, "mrad", false, false);
    line[0] = '\0';
    append(line, "%s",
           size->beyond == BEYOND_SQUARE ? "beyond: alpha^2/(alpha_min alpha_max)"
                                         : "beyond: alpha_max/alpha_min, measured within alpha_max");
    print_row(printer, line, &size->beyond_note);
}

/* ---- limits ----------------------------------------------------------------------------------- */

static void print_limit_row(const struct printer *printer, const struct limit_row *row) {
    char line[LINE_SIZE] = "", number[LIMITS_NUMBER_SIZE], name[LIMITS_NUMBER_SIZE];
    add_wavelength(line, &row->wavelength_nm);
    add_times(printer, line, &row->from, &row->to);
    append(line, "%s =", bw_limits_quantity_name(row->quantity));
    if (row->use_count == 0 || row->time_power.law != POWER_0 || row->value < 1.0 || row->value > 1.0)
        append(line, " %s", bw_limits_number(number, row->value));
    add_power(line, "t", &row->time_power);
    for (size_t i = 0; i < row->use_count; i++) {
        snprintf(name, sizeof name, "%s", row->uses[i].label);
        for (char *c = name; *c != '\0'; c++)
            *c = (char)toupper((unsigned char)*c);
        append(line, " %s", name);
    }
    append(line, " %s", bw_limits_quantity_unit(row->quantity));
    print_row(printer, line, &row->note);
}

static void print_section(const struct printer *printer, const struct limit_section *section) {
    char condition[LINE_SIZE] = "", text[LIMITS_SPAN_SIZE];
    if (section->subtense_mrad.low > 0.0 || section->subtense_mrad.high < limits_subtense_high_mrad)
        append(condition, "source of %s mrad", bw_limits_span(text, &section->subtense_mrad));
    if (section->area_m2.low > 0.0)
        append(condition, "exposed skin of %s m2", bw_limits_span(text, &section->area_m2));
    print_heading(printer, section->name, condition);
    for (size_t i = section->first; i < section->first + section->count; i++)
        print_limit_row(printer, &printer->table->rows[i]);
}

/* ---- trains, sums, times ---------------------------------------------------------------------- */

static void print_repetition(const struct printer *printer) {
    const struct repetition *repetition = &printer->table->repetition;
    char line[LINE_SIZE], number[LIMITS_NUMBER_SIZE], text[LIMITS_SPAN_SIZE];
    print_heading(printer, "repetition", "pulses within Ti count as one");
    for (size_t i = 0; i < repetition->ti_count; i++) {
        line[0] = '\0';
        add_wavelength(line, &repetition->ti[i].wavelength_nm);
        append(line, "Ti = %s s", bw_limits_number(number, repetition->ti[i].ti_s));
        print_row(printer, line, &repetition->ti[i].note);
    }
    line[0] = '\0';
    if (repetition->counting_factor == COUNT_ALL)
        append(line, "N: all pulses of the exposure");
    else
        append(line, "N: the pulses within factor %s or the exposure",
               printer->table->factors[repetition->counting_factor].name);
    print_row(printer, line, &repetition->count_note);
    if (repetition->longest_note.key != NULL) {
        line[0] = '\0';
        append(line, "correction only for pulses up to %s s", bw_limits_number(number, repetition->longest_pulse_s));
        print_row(printer, line, &repetition->longest_note);
    }
    for (size_t i = 0; i < repetition->applies_count; i++) {
        line[0] = '\0';
        append(line, "correction holds for %s, %s nm", bw_effect_name(repetition->applies[i].effect),
               bw_limits_span(text, &repetition->applies[i].wavelength_nm));
        print_row(printer, line, &repetition->applies[i].note);
    }
}

static void add_subtense(char line[LINE_SIZE], const struct train_row *row) {
    char low[LIMITS_NUMBER_SIZE], high[LIMITS_NUMBER_SIZE], text[LIMITS_SPAN_SIZE + 32];
    bw_limits_number(low, row->subtense_mrad.low);
    bw_limits_number(high, row->subtense_mrad.high);
    snprintf(text, sizeof text, "%s%s .. %s mrad", row->subtense_mrad.open_low ? ">" : "",
             row->low_is_alpha_max ? "alpha_max" : low, row->high_is_alpha_max ? "alpha_max" : high);
    append(line, "%-21s ", text);
}

static void add_exposure(char line[LINE_SIZE], const struct span *span) {
    char text[LIMITS_SPAN_SIZE], low[LIMITS_NUMBER_SIZE];
    if (isfinite(span->high))
        append(line, "%s s  ", bw_limits_span(text, span));
    else if (span->low > 0.0)
        append(line, "beyond %s s  ", bw_limits_number(low, span->low));
    else
        append(line, "any time  ");
}

static void print_train(const struct printer *printer) {
    print_heading(printer, "train correction CP, at most 1", "pulse, source, N, exposure; short: not longer than Ti");
    for (size_t i = 0; i < printer->table->train_count; i++) {
        const struct train_row *row = &printer->table->train[i];
        char line[LINE_SIZE] = "", text[LIMITS_SPAN_SIZE], number[LIMITS_NUMBER_SIZE];
        append(line, "%-6s", bw_limits_pulse_name(row->pulse));
        add_subtense(line, row);
        append(line, "N %-8s ",
               row->pulses.low > 1.0 || isfinite(row->pulses.high) ? bw_limits_span(text, &row->pulses) : "any");
        add_exposure(line, &row->exposure_s);
        if (row->power.law == POWER_0 || row->scale < 1.0 || row->scale > 1.0)
            append(line, " %s", bw_limits_number(number, row->scale));
        add_power(line, "N", &row->power);
        if (row->floor > 0.0)
            append(line, ", at least %s", bw_limits_number(number, row->floor));
        print_row(printer, line, &row->note);
    }
}

static void print_additivity(const struct printer *printer) {
    print_heading(printer, "additivity", "exposures at these wavelengths add");
    for (size_t i = 0; i < printer->table->additivity_count; i++) {
        const struct add_row *row = &printer->table->additivity[i];
        char line[LINE_SIZE] = "";
        add_wavelength(line, &row->first_nm);
        add_wavelength(line, &row->second_nm);
        append(line, "%s", row->eye && row->skin ? "eye and skin" : row->eye ? "eye" : "skin");
        print_row(printer, line, &row->note);
    }
}

static void print_exposure_times(const struct printer *printer) {
    print_heading(printer, "customary exposure times", "");
    for (size_t i = 0; i < printer->table->time_count; i++) {
        const struct time_row *row = &printer->table->times[i];
        char line[LINE_SIZE] = "", number[LIMITS_NUMBER_SIZE];
        append(line, "%-12s", bw_limits_time_kind_name(row->kind));
        add_wavelength(line, &row->wavelength_nm);
        append(line, "%s s", bw_limits_number(number, row->exposure_s));
        print_row(printer, line, &row->note);
    }
}

static void print_head(const struct printer *printer) {
    const struct bw_table *table = printer->table;
    size_t rows, from_memory;
    bw_table_counts(table, &rows, &from_memory);
    print_wrapped(printer, "", table->id);
    print_wrapped(printer, "  title    ", table->title);
    print_wrapped(printer, "  source   ", table->source);
    print_wrapped(printer, "  edition  ", table->edition);
    for (size_t i = 0; i < table->note_count; i++)
        print_wrapped(printer, "  note     ", table->notes[i]);
    bw_text_add(printer->out, "  values   %zu printed rows, %zu of them from memory, marked *\n", rows, from_memory);
    print_wrapped(printer, "  units    ", "H in J/m2, E in W/m2, t in s; where rows meet, the lower limit holds");
}

enum bw_status bw_table_print(const struct bw_table *table, struct bw_text *text) {
    struct printer printer = {table, text};
    print_head(&printer);
    for (size_t i = 0; i < table->section_count; i++)
        print_section(&printer, &table->sections[i]);
    for (size_t i = 0; i < table->factor_count; i++)
        print_factor(&printer, &table->factors[i]);
    print_source_size(&printer);
    print_heading(&printer, "limiting aperture", "diameter; where rows meet, the smaller");
    print_sizes(&printer, table->apertures, table->aperture_count, "mm", true, true);
    if (table->cone_count > 0) {
        print_heading(&printer, "measuring cone gamma", "retina-photochemical; a wider source: (alpha/gamma)^2 times");
        print_sizes(&printer, table->cones, table->cone_count, "mrad", false, true);
    }
    print_repetition(&printer);
    if (table->train_count > 0)
        print_train(&printer);
    print_additivity(&printer);
    print_exposure_times(&printer);
    return text->failed ? BW_NO_MEMORY : BW_OK;
}

/* ---- materials -------------------------------------------------------------------------------- */

static void print_material(const struct printer *printer, const struct bw_material *material) {
    char line[LINE_SIZE] = "", number[LIMITS_NUMBER_SIZE];
    bw_text_add(printer->out, "\n%s\n", material->name);
    print_wrapped(printer, "  title          ", material->title);
    append(line, "%s, reflectance %s", bw_finish_name(material->finish),
           bw_limits_number(number, material->reflectance));
    if (material->finish == BW_GLOSS)
        append(line, " (coat), %s (ground)", bw_limits_number(number, material->matt_reflectance));
    append(line, ", transmittance %s", bw_limits_number(number, material->transmittance));
    if (material->refractive_index > 0.0)
        append(line, ", n = %s", bw_limits_number(number, material->refractive_index));
    print_wrapped(printer, "  finish         ", line);
    line[0] = '\0';
    append(line, "%s%s", material->source, material->known == BW_MEMORY ? " (from memory)" : "");
    print_wrapped(printer, "  source         ", line);
}

enum bw_status bw_materials_print(struct bw_text *text) {
    struct printer printer = {NULL, text};
    bw_text_add(text, "materials\n");
    print_wrapped(&printer, "  ",
                  "Reflectances at 700 to 1100 nm: the upper end of the published range, 1 where none is "
                  "published. For gloss and glass: one surface at normal incidence.");
    for (size_t i = 0; i < bw_materials_count(); i++)
        print_material(&printer, bw_materials_at(i));
    return text->failed ? BW_NO_MEMORY : BW_OK;
}
