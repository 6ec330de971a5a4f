/* Reads materials.ini: one section a material. */
#include "internal.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

struct material_reading {
    const struct bw_ini *ini;
    struct bw_faults *faults;
    struct bw_material *materials;
    size_t count;
    struct bw_material *material; /* being read; NULL in [materials] */
    int line;
    unsigned given; /* bit by key */
};

enum material_key {
    KEY_TITLE,
    KEY_FINISH,
    KEY_REFLECTANCE,
    KEY_MATT_REFLECTANCE,
    KEY_TRANSMITTANCE,
    KEY_REFRACTIVE_INDEX,
    KEY_SOURCE,
    KEY_KNOWN
};
static const char *const key_names[] = {"title",         "finish",           "reflectance", "matt_reflectance",
                                        "transmittance", "refractive_index", "source",      "known"};
enum { KEY_COUNT = 8 };

static void fault(struct material_reading *reading, const struct bw_ini_entry *entry, const char *text) {
    bw_faults_add(reading->faults, entry->line, entry->section, entry->key, "%s", text);
}

static double read_number(struct material_reading *reading, const struct bw_ini_entry *entry, double low, double high) {
    char text[120], low_text[LIMITS_NUMBER_SIZE], high_text[LIMITS_NUMBER_SIZE];
    double value;
    if (bw_parse_number(entry->value, &value) && value >= low && value <= high)
        return value;
    snprintf(text, sizeof text, "'%.40s' is not a number from %s to %s", entry->value, bw_limits_number(low_text, low),
             bw_limits_number(high_text, high));
    fault(reading, entry, text);
    return 0.0;
}

/* A key without a value does not read. */
static void read_text(struct material_reading *reading, const struct bw_ini_entry *entry, char out[BW_TITLE_SIZE]) {
    if (snprintf(out, BW_TITLE_SIZE, "%s", entry->value) >= BW_TITLE_SIZE)
        fault(reading, entry, "is too long; wants at most 199 bytes");
}

static void read_finish(struct material_reading *reading, const struct bw_ini_entry *entry) {
    static const enum bw_finish finishes[] = {BW_MATT, BW_MIRROR, BW_GLOSS, BW_GLASS};
    for (size_t i = 0; i < 4; i++)
        if (strcmp(entry->value, bw_finish_name(finishes[i])) == 0) {
            reading->material->finish = finishes[i];
            return;
        }
    fault(reading, entry, "unknown finish; wants matt, mirror, gloss or glass");
}

static void read_value(struct material_reading *reading, const struct bw_ini_entry *entry, enum material_key key) {
    struct bw_material *material = reading->material;
    switch (key) {
    case KEY_TITLE:
        read_text(reading, entry, material->title);
        break;
    case KEY_FINISH:
        read_finish(reading, entry);
        break;
    case KEY_REFLECTANCE:
        material->reflectance = read_number(reading, entry, 0.0, 1.0);
        break;
    case KEY_MATT_REFLECTANCE:
        material->matt_reflectance = read_number(reading, entry, 0.0, 1.0);
        break;
    case KEY_TRANSMITTANCE:
        material->transmittance = read_number(reading, entry, 0.0, 1.0);
        break;
    case KEY_REFRACTIVE_INDEX:
        material->refractive_index = read_number(reading, entry, 1.0, 4.0);
        break;
    case KEY_SOURCE:
        read_text(reading, entry, material->source);
        break;
    case KEY_KNOWN:
    default:
        material->known = strcmp(entry->value, "read") == 0 ? BW_READ : BW_MEMORY;
        if (strcmp(entry->value, "read") != 0 && strcmp(entry->value, "memory") != 0)
            fault(reading, entry, "unknown word; wants read or memory");
        break;
    }
}

static void read_entry(struct material_reading *reading, const struct bw_ini_entry *entry) {
    if (reading->material == NULL)
        return;
    for (unsigned i = 0; i < KEY_COUNT; i++)
        if (strcmp(entry->key, key_names[i]) == 0) {
            if (reading->given & (1u << i))
                fault(reading, entry, "is given twice; wants it once");
            reading->given |= 1u << i;
            read_value(reading, entry, (enum material_key)i);
            return;
        }
    fault(reading, entry,
          "unknown key; wants title, finish, reflectance, matt_reflectance, transmittance, "
          "refractive_index, source or known");
}

static void missing(struct material_reading *reading, enum material_key key) {
    if (!(reading->given & (1u << key)))
        bw_faults_add(reading->faults, reading->line, reading->ini->entries[0].section, key_names[key],
                      "is missing in [material %s]", reading->material->name);
}

/* What the finish asks for, once all keys of the section are read. */
static void end_material(struct material_reading *reading) {
    struct bw_material *material = reading->material;
    if (material == NULL)
        return;
    missing(reading, KEY_TITLE);
    missing(reading, KEY_FINISH);
    missing(reading, KEY_REFLECTANCE);
    missing(reading, KEY_TRANSMITTANCE);
    missing(reading, KEY_SOURCE);
    missing(reading, KEY_KNOWN);
    bool coated = material->finish == BW_GLOSS || material->finish == BW_GLASS;
    if (coated) {
        missing(reading, KEY_REFRACTIVE_INDEX);
        double n = material->refractive_index, fresnel = (n - 1.0) / (n + 1.0) * ((n - 1.0) / (n + 1.0));
        if (n >= 1.0 && !(material->reflectance >= fresnel * (1.0 - limits_edge_rounding) &&
                          material->reflectance <= fresnel * 1.1))
            bw_faults_add(reading->faults, reading->line, "materials", "reflectance",
                          "of [material %s] does not fit its refractive index; wants %.3g or a little more",
                          material->name, fresnel);
    } else if (reading->given & (1u << KEY_REFRACTIVE_INDEX))
        bw_faults_add(reading->faults, reading->line, "materials", "refractive_index",
                      "of [material %s] is for gloss and glass only", material->name);
    if (material->finish == BW_GLOSS)
        missing(reading, KEY_MATT_REFLECTANCE);
    else if (reading->given & (1u << KEY_MATT_REFLECTANCE))
        bw_faults_add(reading->faults, reading->line, "materials", "matt_reflectance",
                      "of [material %s] is for gloss only", material->name);
    if (material->finish == BW_MATT)
        material->matt_reflectance = material->reflectance;
}

static void begin_section(struct material_reading *reading, const struct bw_ini_entry *entry) {
    end_material(reading);
    reading->material = NULL;
    if (strcmp(entry->section, "materials") == 0)
        return;
    const char *name = strncmp(entry->section, "material ", 9) == 0 ? entry->section + 9 : "";
    if (name[0] == '\0' || strlen(name) >= BW_NAME_SIZE ||
        name[strspn(name, "abcdefghijklmnopqrstuvwxyz0123456789-")] != '\0') {
        fault(reading, entry, "unknown section; wants material NAME, with a-z, 0-9 and hyphen");
        return;
    }
    for (size_t i = 0; i < reading->count; i++)
        if (strcmp(reading->materials[i].name, name) == 0)
            fault(reading, entry, "material is given twice; wants it once");
    reading->material = &reading->materials[reading->count++];
    snprintf(reading->material->name, BW_NAME_SIZE, "%s", name);
    reading->line = entry->line;
    reading->given = 0;
}

static int compare_names(const void *a, const void *b) {
    const struct bw_material *first = a, *second = b;
    return strcmp(first->name, second->name);
}

enum bw_status bw_limits_materials_read(const struct bw_ini *ini, struct bw_material **materials, size_t *count,
                                        struct bw_faults *faults, struct bw_error *error) {
    size_t faults_before = faults->count;
    struct material_reading reading = {.ini = ini, .faults = faults};
    *materials = NULL;
    *count = 0;
    reading.materials = calloc(ini->count + 1, sizeof *reading.materials);
    if (reading.materials == NULL)
        return bw_error_set(error, BW_NO_MEMORY, "out of memory while reading materials");
    for (size_t i = 0; i < ini->count; i++)
        if (ini->entries[i].key[0] == '\0')
            begin_section(&reading, &ini->entries[i]);
        else
            read_entry(&reading, &ini->entries[i]);
    end_material(&reading);
    bw_faults_sort(faults);
    if (faults->count != faults_before || faults->out_of_memory || reading.count == 0) {
        free(reading.materials);
        if (faults->out_of_memory)
            return bw_error_set(error, BW_NO_MEMORY, "out of memory while reading materials");
        return bw_error_set(error, BW_INPUT, "the materials have %zu faults", faults->count - faults_before);
    }
    qsort(reading.materials, reading.count, sizeof *reading.materials, compare_names);
    *materials = reading.materials;
    *count = reading.count;
    return BW_OK;
}
