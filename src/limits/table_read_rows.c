/* Readers of the printed rows: factors, limits, apertures, cones, source size. */
#include "read.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

static const double time_power_low = -1.0, time_power_high = 1.0;

/* ---- [factor NAME] ---------------------------------------------------------------------------- */

static void read_factor_argument(struct reading *reading, const struct bw_ini_entry *entry) {
    if (reading->factor->count > 0)
        bw_reading_fault(reading, entry, "stands after the rows; wants it before them");
    if (strcmp(entry->value, "subtense_mrad") == 0)
        reading->factor->argument = BY_SUBTENSE_MRAD;
    else if (strcmp(entry->value, "wavelength_nm") != 0)
        bw_reading_fault(reading, entry, "unknown argument '%s'; wants wavelength_nm or subtense_mrad", entry->value);
}

void bw_read_factor(struct reading *reading, const struct bw_ini_entry *entry) {
    struct cells cells;
    if (strcmp(entry->key, "argument") == 0) {
        read_factor_argument(reading, entry);
        return;
    }
    if (!bw_reading_row_number(reading, entry, "r", &reading->section_rows) ||
        !bw_cells_split(&cells, entry, reading->faults, "argument | offset | scale | slope | origin | clause | known"))
        return;
    struct factor_row row = {0};
    if (reading->factor->argument == BY_SUBTENSE_MRAD)
        row.argument = bw_cells_span(&cells, 0, "subtense", 0.0, limits_subtense_high_mrad, EDGES_CLOSED);
    else
        row.argument = bw_cells_wavelength(&cells, 0);
    row.offset = bw_cells_number(&cells, 1, "offset", 0.0, 1e12);
    row.scale = bw_cells_number(&cells, 2, "scale", 0.0, 1e12);
    row.slope = bw_cells_number(&cells, 3, "slope", -10.0, 10.0);
    row.origin = bw_cells_number(&cells, 4, "origin", 0.0, limits_wavelength_high_nm);
    row.constant = row.scale <= 0.0 || !(fabs(row.slope) > 0.0);
    if (cells.good && !(row.offset + row.scale > 0.0))
        bw_cells_fault(&cells, "offset and scale are both 0; a factor must be above 0");
    if (cells.good && row.constant && (fabs(row.slope) > 0.0 || row.origin > 0.0))
        bw_cells_fault(&cells, "slope and origin change nothing here; wants 0 for both, or a scale and a slope");
    row.note = bw_reading_note(reading, &cells);
    if (cells.good) {
        reading->factor_rows[reading->table->factor_row_count++] = row;
        reading->factor->count++;
    }
}

/* ---- [eye EFFECT], [skin] --------------------------------------------------------------------- */

/* "eye retina-thermal point": target, effect, and a word of its own for rows that stand beside. */
static bool parse_section_name(struct reading *reading, const struct bw_ini_entry *entry,
                               struct limit_section *section) {
    static const enum bw_effect effects[] = {BW_RETINA_THERMAL, BW_RETINA_PHOTOCHEMICAL, BW_ULTRAVIOLET, BW_ANTERIOR};
    section->target = BW_SKIN;
    section->effect = BW_SKIN_EFFECT;
    if (strncmp(entry->section, "skin", 4) == 0)
        return true;
    section->target = BW_EYE;
    const char *word = entry->section + 4;
    size_t length = strcspn(word, " ");
    for (size_t i = 0; i < sizeof effects / sizeof effects[0]; i++) {
        const char *name = bw_effect_name(effects[i]);
        if (strlen(name) == length && strncmp(word, name, length) == 0) {
            section->effect = effects[i];
            return true;
        }
    }
    bw_reading_fault(reading, entry,
                     "unknown effect '%s'; wants retina-thermal, retina-photochemical, ultraviolet or "
                     "anterior",
                     word);
    return false;
}

void bw_read_limits_section(struct reading *reading, const struct bw_ini_entry *entry) {
    struct bw_table *table = reading->table;
    struct limit_section section = {0};
    for (size_t i = 0; i < table->section_count; i++)
        if (strcmp(reading->sections[i].name, entry->section) == 0)
            bw_reading_fault(reading, entry, "section is given twice; wants it once");
    if (!parse_section_name(reading, entry, &section)) {
        reading->kind = SECTION_UNKNOWN; /* its keys would only repeat the fault */
        return;
    }
    section.name = bw_reading_copy(reading, entry->section);
    section.subtense_mrad = (struct span){0.0, limits_subtense_high_mrad, false, false};
    section.area_m2 = (struct span){0.0, limits_infinity, false, false};
    section.first = table->row_count;
    section.line = entry->line;
    if (section.name != NULL)
        reading->sections[table->section_count++] = section;
}

/* A time range whose edges are numbers, or names of factors. */
static void read_times(struct reading *reading, struct cells *cells, size_t column, bool names, struct edge *from,
                       struct edge *to) {
    char texts[2][CELL_SIZE];
    struct span open;
    struct edge edges[2] = {{limits_nan, EDGE_IS_NUMBER}, {limits_nan, EDGE_IS_NUMBER}};
    if (!bw_cells_span_texts(cells, column, "time", texts[0], texts[1], &open))
        return;
    if (open.open_low || open.open_high)
        bw_cells_fault(cells, "time '%s' has an open edge; wants closed edges here", cells->cell[column]);
    for (size_t i = 0; i < 2; i++) {
        double value;
        int factor = names ? bw_reading_factor(reading, texts[i]) : -1;
        if (factor >= 0)
            edges[i].factor = factor;
        else if (!bw_parse_number(texts[i], &value))
            bw_cells_fault(cells, "time edge '%s' is neither a number%s", texts[i],
                           names ? " nor a factor of this rule set" : "; wants seconds");
        else if (!(value >= limits_time_low_s && value <= limits_time_high_s))
            bw_cells_fault(cells, "time edge %s s is out of range; wants 1e-13 to 3e4 s", texts[i]);
        else
            edges[i].value_s = value;
    }
    if (edges[0].value_s >= edges[1].value_s)
        bw_cells_fault(cells, "time %s runs backwards; wants the earlier edge first", cells->cell[column]);
    *from = edges[0];
    *to = edges[1];
}

static void read_use(struct reading *reading, struct cells *cells, const char *token, struct factor_use *use) {
    char name[CELL_SIZE];
    double exponent = 1.0;
    size_t length = strcspn(token, "^");
    memcpy(name, token, length);
    name[length] = '\0';
    if (token[length] == '^' &&
        (!bw_parse_number(token + length + 1, &exponent) || !(fabs(exponent) > 0.0 && fabs(exponent) <= 4.0)))
        bw_cells_fault(cells, "factor '%s' has no readable exponent; wants a number such as t2^-0.25", token);
    use->power = bw_limits_power_of(exponent);
    use->label = bw_reading_copy(reading, token);
    if (strcmp(name, "ce") == 0)
        use->factor = USE_CE;
    else if (strcmp(name, "area") == 0)
        use->factor = USE_AREA;
    else {
        use->factor = bw_reading_factor(reading, name);
        if (use->factor < 0)
            bw_cells_fault(cells, "unknown factor '%s'; wants ce, area or the NAME of a [factor NAME] section", name);
    }
}

static void read_uses(struct reading *reading, struct cells *cells, size_t column, struct limit_row *row) {
    const char *text = cells->cell[column];
    char token[CELL_SIZE];
    if (strcmp(text, "-") == 0)
        return;
    for (text += strspn(text, " \t"); *text != '\0'; text += strspn(text, " \t")) {
        size_t length = strcspn(text, " \t");
        memcpy(token, text, length);
        token[length] = '\0';
        text += length;
        if (row->use_count == ROW_USES_MAX) {
            bw_cells_fault(cells, "has more than %d factors; wants fewer", ROW_USES_MAX);
            return;
        }
        read_use(reading, cells, token, &row->uses[row->use_count++]);
        for (size_t i = 0; i + 1 < row->use_count; i++)
            if (row->uses[i].factor == row->uses[row->use_count - 1].factor && cells->good)
                bw_cells_fault(cells, "factor '%s' is given twice; wants it once", token);
    }
}

static void read_limit_row(struct reading *reading, const struct bw_ini_entry *entry, struct limit_section *section) {
    static const char *const quantities[] = {"H", "E", "G", "L"};
    struct cells cells;
    if (!bw_cells_split(&cells, entry, reading->faults,
                        "wavelength nm | time s | quantity | value | time power | factors | clause | known"))
        return;
    struct limit_row row = {.section = reading->table->section_count - 1};
    row.wavelength_nm = bw_cells_wavelength(&cells, 0);
    read_times(reading, &cells, 1, true, &row.from, &row.to);
    size_t quantity = bw_cells_word(&cells, 2, "quantity", quantities, 4);
    row.quantity = quantity < 4 ? (enum quantity)quantity : QUANTITY_H;
    row.value = bw_cells_number(&cells, 3, "value", 1e-12, 1e16);
    double exponent = bw_cells_number(&cells, 4, "time power", time_power_low, time_power_high);
    bool energy = row.quantity == QUANTITY_H || row.quantity == QUANTITY_G;
    if (cells.good && (energy ? !(exponent >= 0.0) : !(exponent <= 0.0)))
        bw_cells_fault(&cells, "time power %s makes %s; wants 0 to 1 with H and G, -1 to 0 with E and L", cells.cell[4],
                       energy ? "the exposure fall with time" : "the irradiance rise with time");
    row.time_power = bw_limits_power_of(exponent);
    read_uses(reading, &cells, 5, &row);
    row.note = bw_reading_note(reading, &cells);
    if (cells.good) {
        reading->rows[reading->table->row_count++] = row;
        section->count++;
    }
}

void bw_read_limits(struct reading *reading, const struct bw_ini_entry *entry) {
    struct limit_section *section = &reading->sections[reading->table->section_count - 1];
    struct cells cells;
    if (strcmp(entry->key, "covers") == 0) {
        if (!bw_cells_split(&cells, entry, reading->faults, "wavelength nm | time s"))
            return;
        section->wavelength_nm = bw_cells_wavelength(&cells, 0);
        read_times(reading, &cells, 1, true, &section->from, &section->to);
        section->covers_line = entry->line;
    } else if (strcmp(entry->key, "subtense_mrad") == 0) {
        if (bw_cells_split(&cells, entry, reading->faults, "subtense mrad"))
            section->subtense_mrad = bw_cells_span(&cells, 0, "subtense", 0.0, limits_subtense_high_mrad, EDGES_CLOSED);
    } else if (strcmp(entry->key, "area_m2") == 0) {
        if (section->target != BW_SKIN)
            bw_reading_fault(reading, entry, "is for the skin only; wants no area here");
        if (bw_cells_split(&cells, entry, reading->faults, "area m2"))
            section->area_m2 = bw_cells_span(&cells, 0, "area", 1e-6, 100.0, EDGES_UNBOUNDED);
    } else if (bw_reading_row_number(reading, entry, "r", &reading->section_rows)) {
        read_limit_row(reading, entry, section);
    }
}

/* ---- [aperture], [cone], [source-size] -------------------------------------------------------- */

static void read_size(struct reading *reading, struct cells *cells, size_t column, const char *what,
                      struct size_row *row) {
    row->value = bw_cells_number(cells, column, what, 1e-6, 1e6);
    row->time_power =
        bw_limits_power_of(bw_cells_number(cells, column + 1, "time power", time_power_low, time_power_high));
    row->note = bw_reading_note(reading, cells);
}

void bw_read_aperture(struct reading *reading, const struct bw_ini_entry *entry) {
    struct cells cells;
    struct size_row row = {0};
    if (!bw_reading_row_number(reading, entry, "r", &reading->section_rows) ||
        !bw_cells_split(&cells, entry, reading->faults,
                        "effect | wavelength nm | time s | mm | time power | clause | known"))
        return;
    bw_cells_effect(&cells, 0, &row.effect);
    row.wavelength_nm = bw_cells_wavelength(&cells, 1);
    read_times(reading, &cells, 2, false, &row.from, &row.to);
    read_size(reading, &cells, 3, "aperture", &row);
    if (cells.good)
        reading->apertures[reading->table->aperture_count++] = row;
}

void bw_read_cone(struct reading *reading, const struct bw_ini_entry *entry) {
    struct cells cells;
    struct size_row row = {.effect = BW_RETINA_PHOTOCHEMICAL};
    if (!bw_reading_row_number(reading, entry, "r", &reading->section_rows) ||
        !bw_cells_split(&cells, entry, reading->faults, "wavelength nm | time s | mrad | time power | clause | known"))
        return;
    row.wavelength_nm = bw_cells_wavelength(&cells, 0);
    read_times(reading, &cells, 1, false, &row.from, &row.to);
    read_size(reading, &cells, 2, "cone", &row);
    if (cells.good)
        reading->cones[reading->table->cone_count++] = row;
}

static void read_alpha_max(struct reading *reading, const struct bw_ini_entry *entry) {
    struct cells cells;
    struct size_row row = {.wavelength_nm = {limits_wavelength_low_nm, limits_wavelength_high_nm, false, false}};
    if (!bw_cells_split(&cells, entry, reading->faults, "time s | mrad | time power | clause | known"))
        return;
    read_times(reading, &cells, 0, false, &row.from, &row.to);
    read_size(reading, &cells, 1, "alpha_max", &row);
    if (cells.good)
        reading->alpha_max[reading->table->source_size.count++] = row;
}

void bw_read_source_size(struct reading *reading, const struct bw_ini_entry *entry) {
    static const char *const words[] = {"square", "acceptance"};
    struct source_size *size = &reading->table->source_size;
    struct cells cells;
    if (strcmp(entry->key, "alpha_min") == 0) {
        if (!bw_cells_split(&cells, entry, reading->faults, "mrad | clause | known"))
            return;
        size->alpha_min_mrad = bw_cells_number(&cells, 0, "alpha_min", 1e-3, limits_subtense_high_mrad);
        size->alpha_min_note = bw_reading_note(reading, &cells);
    } else if (strcmp(entry->key, "beyond") == 0) {
        if (!bw_cells_split(&cells, entry, reading->faults, "square or acceptance | clause | known"))
            return;
        size->beyond = bw_cells_word(&cells, 0, "law", words, 2) == 1 ? BEYOND_ACCEPTANCE : BEYOND_SQUARE;
        size->beyond_note = bw_reading_note(reading, &cells);
    } else if (bw_reading_row_number(reading, entry, "max_", &reading->section_rows)) {
        read_alpha_max(reading, entry);
    }
}
