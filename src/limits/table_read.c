/* Builds a rule set from the triples of an INI file: sections to their readers, then the index and the checks.
 * Every fault of the file is collected, so that one run shows them all. */
#include "read.h"

#include <math.h>
#include <stdarg.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

const char *bw_reading_copy(struct reading *reading, const char *string) {
    const char *copy = bw_limits_memory_copy(reading->memory, string);
    if (copy == NULL)
        reading->no_memory = true;
    return copy;
}

void bw_reading_fault(struct reading *reading, const struct bw_ini_entry *entry, const char *format, ...) {
    char text[CELL_SIZE * 3];
    va_list arguments;
    va_start(arguments, format);
    vsnprintf(text, sizeof text, format, arguments);
    va_end(arguments);
    bw_faults_add(reading->faults, entry->line, entry->section, entry->key, "%s", text);
}

struct row_note bw_reading_note(struct reading *reading, struct cells *cells) {
    static const char *const words[] = {"read", "memory"};
    struct row_note note = {NULL, NULL, BW_MEMORY, cells->entry->line};
    note.key = bw_reading_copy(reading, cells->entry->key);
    note.clause = bw_reading_copy(reading, cells->cell[cells->count - 2]);
    if (bw_cells_word(cells, cells->count - 1, "mark", words, 2) == 0)
        note.known = BW_READ;
    return note;
}

bool bw_reading_row_number(struct reading *reading, const struct bw_ini_entry *entry, const char *prefix,
                           size_t *rows) {
    char want[32];
    snprintf(want, sizeof want, "%s%02zu", prefix, *rows + 1);
    if (strcmp(entry->key, want) == 0) {
        ++*rows;
        return true;
    }
    if (strncmp(entry->key, prefix, strlen(prefix)) == 0 &&
        strspn(entry->key + strlen(prefix), "0123456789") == strlen(entry->key + strlen(prefix)))
        bw_reading_fault(reading, entry, "is out of order; wants %s next, numbered as on the page", want);
    else
        bw_reading_fault(reading, entry, "unknown key; wants %s next", want);
    return false;
}

int bw_reading_factor(const struct reading *reading, const char *name) {
    for (size_t i = 0; i < reading->table->factor_count; i++)
        if (strcmp(reading->factors[i].name, name) == 0)
            return (int)i;
    return -1;
}

/* [table] id, title, source, edition, note_01 ... */
static void read_table(struct reading *reading, const struct bw_ini_entry *entry) {
    struct bw_table *table = reading->table;
    const struct {
        const char *key;
        const char **place;
    } keys[] = {{"id", &table->id}, {"title", &table->title}, {"source", &table->source}, {"edition", &table->edition}};
    for (size_t i = 0; i < sizeof keys / sizeof keys[0]; i++)
        if (strcmp(entry->key, keys[i].key) == 0) {
            if (*keys[i].place != NULL)
                bw_reading_fault(reading, entry, "is given twice; wants it once");
            *keys[i].place = bw_reading_copy(reading, entry->value);
            return;
        }
    if (bw_reading_row_number(reading, entry, "note_", &table->note_count))
        reading->notes[table->note_count - 1] = bw_reading_copy(reading, entry->value);
}

static void check_head(struct reading *reading) {
    const struct bw_table *table = reading->table;
    const struct {
        const char *key, *value;
    } keys[] = {{"id", table->id}, {"title", table->title}, {"source", table->source}, {"edition", table->edition}};
    for (size_t i = 0; i < sizeof keys / sizeof keys[0]; i++)
        if (keys[i].value == NULL || keys[i].value[0] == '\0')
            bw_faults_add(reading->faults, 0, "table", keys[i].key, "is missing; a rule set must name its %s",
                          keys[i].key);
    if (table->id != NULL && (table->id[strspn(table->id, "abcdefghijklmnopqrstuvwxyz0123456789-")] != '\0' ||
                              strlen(table->id) >= BW_NAME_SIZE))
        bw_faults_add(reading->faults, 0, "table", "id", "'%s' is not a name; wants a-z, 0-9 and hyphen", table->id);
}

/* Factor names first: a row may use a factor that stands farther down the page. */
static void register_factors(struct reading *reading) {
    for (size_t i = 0; i < reading->ini->count; i++) {
        const struct bw_ini_entry *entry = &reading->ini->entries[i];
        if (entry->key[0] != '\0' || strncmp(entry->section, "factor ", 7) != 0)
            continue;
        const char *name = entry->section + 7;
        if (name[0] == '\0' || name[strspn(name, "abcdefghijklmnopqrstuvwxyz0123456789")] != '\0' ||
            strcmp(name, "ce") == 0 || strcmp(name, "area") == 0 || strcmp(name, "amax") == 0) {
            bw_reading_fault(reading, entry, "'%s' cannot name a factor; wants a-z and 0-9, and not ce, area or amax",
                             name);
        }
        if (bw_reading_factor(reading, name) >= 0)
            bw_reading_fault(reading, entry, "factor %s is given twice; wants it once", name);
        struct factor *factor = &reading->factors[reading->table->factor_count];
        factor->section = bw_reading_copy(reading, entry->section);
        if (factor->section == NULL)
            return;
        factor->name = factor->section + 7;
        factor->line = entry->line;
        reading->table->factor_count++;
    }
}

static void begin_factor(struct reading *reading, const struct bw_ini_entry *entry) {
    for (size_t i = 0; i < reading->table->factor_count; i++) /* all are registered */
        if (reading->factors[i].line == entry->line && strcmp(reading->factors[i].section, entry->section) == 0)
            reading->factor = &reading->factors[i];
    reading->factor->first = reading->table->factor_row_count;
}

/* Sections that carry a name or an effect. */
static void begin_named_section(struct reading *reading, const struct bw_ini_entry *entry) {
    if (strncmp(entry->section, "factor ", 7) == 0) {
        reading->kind = SECTION_FACTOR;
        begin_factor(reading, entry);
    } else if (strncmp(entry->section, "eye ", 4) == 0 || strcmp(entry->section, "skin") == 0 ||
               strncmp(entry->section, "skin ", 5) == 0) {
        reading->kind = SECTION_LIMITS;
        bw_read_limits_section(reading, entry);
    } else if (reading->kind == SECTION_UNKNOWN) {
        bw_reading_fault(reading, entry,
                         "unknown section; wants table, factor NAME, source-size, eye EFFECT, skin, "
                         "aperture, cone, repetition, train, additivity or exposure");
    }
}

static void begin_section(struct reading *reading, const struct bw_ini_entry *entry) {
    static const struct {
        const char *name;
        enum section_kind kind;
    } kinds[] = {{"table", SECTION_TABLE},           {"source-size", SECTION_SOURCE_SIZE},
                 {"aperture", SECTION_APERTURE},     {"cone", SECTION_CONE},
                 {"repetition", SECTION_REPETITION}, {"train", SECTION_TRAIN},
                 {"additivity", SECTION_ADDITIVITY}, {"exposure", SECTION_EXPOSURE}};
    reading->section_rows = reading->applies_rows = 0;
    reading->kind = SECTION_UNKNOWN;
    for (size_t i = 0; i < sizeof kinds / sizeof kinds[0]; i++)
        if (strcmp(entry->section, kinds[i].name) == 0)
            reading->kind = kinds[i].kind;
    if (reading->kind != SECTION_UNKNOWN) {
        for (const struct bw_ini_entry *other = reading->ini->entries; other < entry; other++)
            if (other->key[0] == '\0' && strcmp(other->section, entry->section) == 0)
                bw_reading_fault(reading, entry, "section is given twice; wants it once");
    }
    if (reading->kind == SECTION_SOURCE_SIZE)
        reading->table->source_size.line = entry->line;
    if (reading->kind == SECTION_REPETITION)
        reading->table->repetition.line = entry->line;
    begin_named_section(reading, entry);
}

static void read_key(struct reading *reading, const struct bw_ini_entry *entry) {
    switch (reading->kind) {
    case SECTION_TABLE:
        read_table(reading, entry);
        break;
    case SECTION_FACTOR:
        bw_read_factor(reading, entry);
        break;
    case SECTION_SOURCE_SIZE:
        bw_read_source_size(reading, entry);
        break;
    case SECTION_LIMITS:
        bw_read_limits(reading, entry);
        break;
    case SECTION_APERTURE:
        bw_read_aperture(reading, entry);
        break;
    case SECTION_CONE:
        bw_read_cone(reading, entry);
        break;
    case SECTION_REPETITION:
        bw_read_repetition(reading, entry);
        break;
    case SECTION_TRAIN:
        bw_read_train(reading, entry);
        break;
    case SECTION_ADDITIVITY:
        bw_read_additivity(reading, entry);
        break;
    case SECTION_EXPOSURE:
        bw_read_exposure(reading, entry);
        break;
    case SECTION_NONE:
        bw_reading_fault(reading, entry, "stands before the first section; wants [table] first");
        break;
    case SECTION_UNKNOWN: /* reported at its head */
    default:
        break;
    }
}

static void *take_list(struct reading *reading, size_t size) {
    void *list = bw_limits_memory_take(reading->memory, reading->ini->count + 1, size);
    if (list == NULL)
        reading->no_memory = true;
    return list;
}

static void take_lists(struct reading *reading) {
    reading->notes = take_list(reading, sizeof *reading->notes);
    reading->factors = take_list(reading, sizeof *reading->factors);
    reading->factor_rows = take_list(reading, sizeof *reading->factor_rows);
    reading->sections = take_list(reading, sizeof *reading->sections);
    reading->rows = take_list(reading, sizeof *reading->rows);
    reading->apertures = take_list(reading, sizeof *reading->apertures);
    reading->cones = take_list(reading, sizeof *reading->cones);
    reading->alpha_max = take_list(reading, sizeof *reading->alpha_max);
    reading->ti = take_list(reading, sizeof *reading->ti);
    reading->applies = take_list(reading, sizeof *reading->applies);
    reading->train = take_list(reading, sizeof *reading->train);
    reading->additivity = take_list(reading, sizeof *reading->additivity);
    reading->times = take_list(reading, sizeof *reading->times);
    if (reading->no_memory)
        return;
    struct bw_table *table = reading->table;
    table->notes = reading->notes;
    table->factors = reading->factors;
    table->factor_rows = reading->factor_rows;
    table->sections = reading->sections;
    table->rows = reading->rows;
    table->apertures = reading->apertures;
    table->cones = reading->cones;
    table->source_size.rows = reading->alpha_max;
    table->repetition.ti = reading->ti;
    table->repetition.applies = reading->applies;
    table->train = reading->train;
    table->additivity = reading->additivity;
    table->times = reading->times;
    table->repetition.counting_factor = COUNT_ALL;
    table->repetition.longest_pulse_s = limits_infinity;
}

/* Reads all sections. Rows with a fault stay out, so the gap and overlap checks run only on a table that reads well. */
static void read_sections(struct reading *reading) {
    register_factors(reading);
    for (size_t i = 0; i < reading->ini->count && !reading->no_memory; i++) {
        const struct bw_ini_entry *entry = &reading->ini->entries[i];
        if (entry->key[0] == '\0')
            begin_section(reading, entry);
        else
            read_key(reading, entry);
    }
    check_head(reading);
}

static enum bw_status fill(struct reading *reading, struct bw_error *error) {
    size_t faults_before = reading->faults->count;
    take_lists(reading);
    if (!reading->no_memory)
        read_sections(reading);
    if (!reading->no_memory && reading->faults->count == faults_before)
        reading->no_memory = !(bw_limits_index(reading->table, reading->memory) &&
                               bw_limits_plan(reading->table, reading->memory));
    if (reading->no_memory || reading->faults->out_of_memory)
        return bw_error_set(error, BW_NO_MEMORY, "out of memory while reading a rule set");
    if (reading->faults->count == faults_before)
        bw_limits_check(reading->table, reading->faults);
    if (reading->faults->out_of_memory)
        return bw_error_set(error, BW_NO_MEMORY, "out of memory while reading a rule set");
    if (reading->faults->count == faults_before)
        return BW_OK;
    bw_faults_sort(reading->faults);
    return bw_error_set(error, BW_INPUT, "the rule set has %zu faults", reading->faults->count - faults_before);
}

enum bw_status bw_table_load(const struct bw_ini *ini, struct bw_table **table, struct bw_faults *faults,
                             struct bw_error *error) {
    *table = NULL;
    struct reading reading = {.ini = ini, .faults = faults, .kind = SECTION_NONE};
    reading.memory = bw_limits_memory_new();
    if (reading.memory != NULL)
        reading.table = bw_limits_memory_take(reading.memory, 1, sizeof *reading.table);
    enum bw_status status;
    if (reading.table == NULL)
        status = bw_error_set(error, BW_NO_MEMORY, "out of memory while reading a rule set");
    else
        status = fill(&reading, error);
    if (status != BW_OK) {
        bw_limits_memory_free(reading.memory);
        return status;
    }
    reading.table->memory = reading.memory;
    *table = reading.table;
    return BW_OK;
}

void bw_table_free(struct bw_table *table) {
    if (table != NULL && table->memory != NULL)
        bw_limits_memory_free(table->memory);
}
