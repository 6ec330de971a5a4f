/* The case's own materials, and the finding of materials by name. */
#include "internal.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static const enum bw_finish finishes[] = {BW_MIRROR, BW_MATT, BW_GLOSS, BW_GLASS};
enum { FINISHES = 4 };

static enum presence read_finish(struct reading *reading, const struct section *section, enum bw_finish *finish) {
    const char *words[FINISHES];
    size_t index = 0;
    for (size_t i = 0; i < FINISHES; i++)
        words[i] = bw_finish_name(finishes[i]);
    enum presence presence = value_choice(reading, section, "finish", words, FINISHES, &index);
    *finish = finishes[index];
    if (presence == ABSENT)
        fault_missing(reading, section, "finish");
    return presence;
}

/* A key that only some finishes have. */
static void refuse(struct reading *reading, const struct section *section, const char *key,
                   const char *finishes_words) {
    const struct bw_ini_entry *entry = value_entry(section, key, NULL);
    if (entry)
        fault_key(reading, entry, "is only for %s; remove it or correct the finish", finishes_words);
}

/* Of a coat or pane: at normal incidence R = ((n - 1)/(n + 1))^2, so that a given reflectance must fit the index. */
static void check_fresnel(struct reading *reading, const struct section *section, struct bw_material *material) {
    static const double slack = 1.1; /* figures like "4 %" are rounded, but never down: less would hide a reflection */
    double n = material->refractive_index, fresnel = (n - 1.) / (n + 1.) * ((n - 1.) / (n + 1.));
    const struct bw_ini_entry *entry = value_entry(section, "reflectance", NULL);
    if (!entry)
        material->reflectance = fresnel;
    else if (!(material->reflectance >= fresnel && material->reflectance <= fresnel * slack))
        fault_key(
            reading, entry,
            "%s does not fit refractive_index %.6g, which gives %.4g %% at normal incidence; remove it or correct one",
            entry->value, n, ceil(fresnel * 1e4) / 1e2);
}

static void read_coat(struct reading *reading, const struct section *section, struct bw_material *material) {
    static const struct range index_range = {1., 4.}, share = {0., 1.};
    enum presence reflectance = value_number(reading, section, "reflectance", share, &material->reflectance);
    enum presence index = value_number(reading, section, "refractive_index", index_range, &material->refractive_index);
    if (index == ABSENT)
        fault_missing(reading, section, "refractive_index");
    else if (index == GIVEN && reflectance != WRONG)
        check_fresnel(reading, section, material);
    if (material->finish != BW_GLOSS) {
        refuse(reading, section, "matt_reflectance", "gloss");
        return;
    }
    if (value_number(reading, section, "matt_reflectance", share, &material->matt_reflectance) == ABSENT)
        fault_missing(reading, section, "matt_reflectance");
}

static void read_opaque(struct reading *reading, const struct section *section, struct bw_material *material) {
    static const struct range share = {0., 1.};
    if (value_number(reading, section, "reflectance", share, &material->reflectance) == ABSENT)
        fault_missing(reading, section, "reflectance");
    if (material->finish == BW_MATT)
        material->matt_reflectance = material->reflectance;
    refuse(reading, section, "refractive_index", "gloss and glass");
    refuse(reading, section, "matt_reflectance", "gloss");
}

static void read_material(struct reading *reading, struct section *section, struct bw_material *material) {
    static const struct range share = {0., 1.};
    snprintf(material->name, sizeof material->name, "%s", section->names[0]);
    value_text(reading, section, "title", material->title, sizeof material->title);
    if (value_text(reading, section, "source", material->source, sizeof material->source) == ABSENT)
        snprintf(material->source, sizeof material->source, "case file, line %d", section->head->line);
    material->known = BW_READ;
    if (bw_materials_find(material->name))
        fault_section(reading, section, "%s is a published material; another name would be right", material->name);
    enum presence finish = read_finish(reading, section, &material->finish);
    if (finish == GIVEN && (material->finish == BW_GLOSS || material->finish == BW_GLASS))
        read_coat(reading, section, material);
    else if (finish == GIVEN)
        read_opaque(reading, section, material);
    if (value_number(reading, section, "transmittance", share, &material->transmittance) == ABSENT)
        fault_missing(reading, section, "transmittance");
}

void read_materials(struct reading *reading) {
    size_t at = 0, count = sections_count(reading, SECTION_MATERIAL, NULL, NULL);
    reading->materials = reading_allocate(reading, count, sizeof *reading->materials);
    for (struct section *section;
         reading->materials && (section = sections_next(reading, &at, SECTION_MATERIAL, NULL, NULL));)
        read_material(reading, section, &reading->materials[reading->material_count++]);
}

/* ---- by name -------------------------------------------------------------------------------- */

static const struct bw_material *find_material(const struct reading *reading, const char *name) {
    for (size_t i = 0; i < reading->material_count; i++)
        if (strcmp(reading->materials[i].name, name) == 0)
            return &reading->materials[i];
    return bw_materials_find(name);
}

static void unknown_material(struct reading *reading, const struct bw_ini_entry *entry) {
    size_t most = reading->material_count + bw_materials_count(), count = 0;
    const char **names = reading_allocate(reading, most, sizeof *names);
    if (!names)
        return;
    for (size_t i = 0; i < reading->material_count; i++)
        names[count++] = reading->materials[i].name;
    for (size_t i = 0; i < bw_materials_count(); i++)
        names[count++] = bw_materials_at(i)->name;
    const char *nearest = bw_nearest_name(entry->value, names, count);
    if (nearest) {
        fault_key(reading, entry, "%s: no such material; did you mean %s?", entry->value, nearest);
    } else {
        struct bw_text known = {0};
        schema_add_words(&known, names, count, " and ");
        fault_key(reading, entry, "%s: no such material; describe it in [material NAME], or take one of %s",
                  entry->value, known.data ? known.data : "");
        reading->no_memory = reading->no_memory || known.failed;
        bw_text_free(&known);
    }
    free(names);
}

enum presence value_material(struct reading *reading, const struct section *section, const char *key,
                             struct bw_material *material) {
    const struct bw_ini_entry *entry = value_entry(section, key, NULL);
    if (!entry)
        return ABSENT;
    const struct bw_material *found = find_material(reading, entry->value);
    if (found) {
        *material = *found;
        return GIVEN;
    }
    if (!reading->lost[SECTION_MATERIAL])
        unknown_material(reading, entry);
    return WRONG;
}
