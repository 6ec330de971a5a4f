/* Readers of what a rule set says of pulse trains, of sums over wavelengths and of customary times. */
#include "read.h"

#include <math.h>
#include <string.h>

/* ---- [repetition] ----------------------------------------------------------------------------- */

static void read_ti(struct reading *reading, const struct bw_ini_entry *entry) {
    struct cells cells;
    struct ti_row row = {0};
    if (!bw_cells_split(&cells, entry, reading->faults, "wavelength nm | s | clause | known"))
        return;
    row.wavelength_nm = bw_cells_wavelength(&cells, 0);
    row.ti_s = bw_cells_number(&cells, 1, "grouping time", limits_time_low_s, limits_time_high_s);
    row.note = bw_reading_note(reading, &cells);
    if (cells.good)
        reading->ti[reading->table->repetition.ti_count++] = row;
}

static void read_applies(struct reading *reading, const struct bw_ini_entry *entry) {
    struct cells cells;
    struct applies_row row = {0};
    if (!bw_cells_split(&cells, entry, reading->faults, "effect | wavelength nm | clause | known"))
        return;
    bw_cells_effect(&cells, 0, &row.effect);
    row.wavelength_nm = bw_cells_wavelength(&cells, 1);
    row.note = bw_reading_note(reading, &cells);
    if (cells.good)
        reading->applies[reading->table->repetition.applies_count++] = row;
}

static void read_count(struct reading *reading, const struct bw_ini_entry *entry) {
    struct repetition *repetition = &reading->table->repetition;
    struct cells cells;
    if (!bw_cells_split(&cells, entry, reading->faults, "all or a time factor | clause | known"))
        return;
    if (strcmp(cells.cell[0], "all") == 0)
        repetition->counting_factor = COUNT_ALL;
    else {
        repetition->counting_factor = bw_reading_factor(reading, cells.cell[0]);
        if (repetition->counting_factor < 0)
            bw_cells_fault(&cells, "unknown factor '%s'; wants all or the NAME of a [factor NAME] section",
                           cells.cell[0]);
    }
    repetition->count_note = bw_reading_note(reading, &cells);
}

void bw_read_repetition(struct reading *reading, const struct bw_ini_entry *entry) {
    struct repetition *repetition = &reading->table->repetition;
    struct cells cells;
    if (strcmp(entry->key, "count") == 0) {
        read_count(reading, entry);
    } else if (strcmp(entry->key, "longest_pulse_s") == 0) {
        if (!bw_cells_split(&cells, entry, reading->faults, "s | clause | known"))
            return;
        repetition->longest_pulse_s =
            bw_cells_number(&cells, 0, "longest pulse", limits_time_low_s, limits_time_high_s);
        repetition->longest_note = bw_reading_note(reading, &cells);
    } else if (strncmp(entry->key, "applies_", 8) == 0) {
        if (bw_reading_row_number(reading, entry, "applies_", &reading->applies_rows))
            read_applies(reading, entry);
    } else if (bw_reading_row_number(reading, entry, "ti_", &reading->section_rows)) {
        read_ti(reading, entry);
    }
}

/* ---- [train] ---------------------------------------------------------------------------------- */

/* A range of subtense whose edges may be `amax`: alpha_max at the duration of the pulse. */
static void read_train_subtense(struct cells *cells, size_t column, struct train_row *row) {
    char texts[2][CELL_SIZE];
    double values[2] = {limits_nan, limits_nan};
    if (!bw_cells_span_texts(cells, column, "subtense", texts[0], texts[1], &row->subtense_mrad))
        return;
    row->low_is_alpha_max = strcmp(texts[0], "amax") == 0;
    row->high_is_alpha_max = strcmp(texts[1], "amax") == 0;
    for (size_t i = 0; i < 2; i++) {
        if (i == 0 ? row->low_is_alpha_max : row->high_is_alpha_max)
            continue;
        if (!bw_parse_number(texts[i], &values[i]) || !(values[i] >= 0.0 && values[i] <= limits_subtense_high_mrad))
            bw_cells_fault(cells, "subtense edge '%s' is neither amax nor a number from 0 to 1571 mrad", texts[i]);
    }
    if (values[0] >= values[1])
        bw_cells_fault(cells, "subtense %s runs backwards; wants the lower edge first", cells->cell[column]);
    row->subtense_mrad.low = values[0];
    row->subtense_mrad.high = values[1];
}

/* The evaluator caps the correction at 1 and lifts it to the floor: a scale or a floor that this hides is a slip. */
static void check_correction(struct cells *cells, const struct train_row *row) {
    double lowest = row->scale * bw_limits_raise(row->pulses.high, &row->power);
    if (row->power.law == POWER_0 && row->scale > 1.0)
        bw_cells_fault(cells, "correction %s would raise the limit of a pulse; wants at most 1", cells->cell[4]);
    if (row->floor > 0.0 && !(row->floor > lowest))
        bw_cells_fault(cells, "floor %s is never reached; wants 0, or one above the correction at the largest N",
                       cells->cell[6]);
}

void bw_read_train(struct reading *reading, const struct bw_ini_entry *entry) {
    static const char *const kinds[] = {"any", "short", "long"};
    static const enum pulse_kind pulses[] = {PULSE_ANY, PULSE_SHORT, PULSE_LONG, PULSE_ANY};
    const int open = EDGES_OPEN_LOW | EDGES_OPEN_HIGH | EDGES_UNBOUNDED;
    struct cells cells;
    struct train_row row = {0};
    if (!bw_reading_row_number(reading, entry, "r", &reading->section_rows) ||
        !bw_cells_split(&cells, entry, reading->faults,
                        "pulse | subtense mrad | pulses | exposure s | scale | power | floor | clause | known"))
        return;
    row.pulse = pulses[bw_cells_word(&cells, 0, "pulse", kinds, 3)];
    read_train_subtense(&cells, 1, &row);
    row.pulses = bw_cells_span(&cells, 2, "pulses", 1.0, 1e15, open);
    row.exposure_s = bw_cells_span(&cells, 3, "exposure", 0.0, limits_time_high_s, open);
    row.scale = bw_cells_number(&cells, 4, "scale", 1e-3, 1e3);
    row.power = bw_limits_power_of(bw_cells_number(&cells, 5, "power", -1.0, 0.0));
    row.floor = bw_cells_number(&cells, 6, "floor", 0.0, 1.0);
    if (cells.good)
        check_correction(&cells, &row);
    row.note = bw_reading_note(reading, &cells);
    if (cells.good)
        reading->train[reading->table->train_count++] = row;
}

/* ---- [additivity], [exposure] ----------------------------------------------------------------- */

void bw_read_additivity(struct reading *reading, const struct bw_ini_entry *entry) {
    static const char *const words[] = {"eye", "skin", "eye skin"};
    struct cells cells;
    struct add_row row = {0};
    if (!bw_reading_row_number(reading, entry, "r", &reading->section_rows) ||
        !bw_cells_split(&cells, entry, reading->faults,
                        "wavelength nm | wavelength nm | eye, skin or eye skin | clause | known"))
        return;
    row.first_nm = bw_cells_wavelength(&cells, 0);
    row.second_nm = bw_cells_wavelength(&cells, 1);
    size_t word = bw_cells_word(&cells, 2, "target", words, 3);
    row.eye = word == 0 || word == 2;
    row.skin = word == 1 || word == 2;
    row.note = bw_reading_note(reading, &cells);
    if (cells.good)
        reading->additivity[reading->table->additivity_count++] = row;
}

void bw_read_exposure(struct reading *reading, const struct bw_ini_entry *entry) {
    static const enum time_kind kinds[TIME_KINDS + 1] = {TIME_VISIBLE,     TIME_GLANCE,      TIME_DIFFUSE,
                                                         TIME_SKIN,        TIME_ULTRAVIOLET, TIME_ALIGNMENT,
                                                         TIME_WORKING_DAY, TIME_GLANCE};
    const char *names[TIME_KINDS];
    struct cells cells;
    struct time_row row = {0};
    for (size_t i = 0; i < TIME_KINDS; i++)
        names[i] = bw_limits_time_kind_name(kinds[i]);
    if (!bw_reading_row_number(reading, entry, "r", &reading->section_rows) ||
        !bw_cells_split(&cells, entry, reading->faults, "kind | wavelength nm | s | clause | known"))
        return;
    row.kind = kinds[bw_cells_word(&cells, 0, "kind", names, TIME_KINDS)];
    row.wavelength_nm = bw_cells_wavelength(&cells, 1);
    row.exposure_s = bw_cells_number(&cells, 2, "exposure time", limits_time_low_s, limits_time_high_s);
    row.note = bw_reading_note(reading, &cells);
    if (cells.good)
        reading->times[reading->table->time_count++] = row;
}
