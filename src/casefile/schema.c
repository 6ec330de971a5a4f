/* The vocabulary of a case file: every section, every key, every unit. */
#include "internal.h"

#include <stdio.h>
#include <string.h>

#define COUNT(array) (sizeof(array) / sizeof *(array))

/* ---- units ---------------------------------------------------------------------------------- */

/* The same as bw_length_unit and bw_angle_unit (tests/unit/test_casefile.c compares them). */
static const struct unit_word length_units[] = {
    {"mm", "mm", 1e-3}, {"cm", "cm", 1e-2}, {"m", "m", 1.}, {"in", "in", 0.0254}, {"ft", "ft", 0.3048},
};
static const struct unit_word place_units[] = {
    {"m", "m", 1.}, {"cm", "cm", 1e-2}, {"mm", "mm", 1e-3}, {"in", "in", 0.0254}, {"ft", "ft", 0.3048},
};
static const struct unit_word small_units[] = {{"um", "um", 1e-6}, {"mm", "mm", 1e-3}};
static const struct unit_word angle_units[] = {
    {"mrad", "mrad", 1e-3},
    {"deg", "deg", 3.14159265358979323846 / 180.},
};
static const struct unit_word wavelength_units[] = {{"nm", "nm", 1.}, {"um", "um", 1e3}}; /* kept in nm */
/* Keys know no capitals: _mw is milliwatt where nobody means a megawatt; a peak may well be one, so it has _kw only. */
static const struct unit_word average_units[] = {{"w", "W", 1.}, {"mw", "mW", 1e-3}};
static const struct unit_word peak_units[] = {{"w", "W", 1.}, {"kw", "kW", 1e3}};
static const struct unit_word energy_units[] = {{"j", "J", 1.}, {"mj", "mJ", 1e-3}, {"uj", "uJ", 1e-6}};
static const struct unit_word time_units[] = {
    {"s", "s", 1.}, {"ms", "ms", 1e-3}, {"us", "us", 1e-6}, {"ns", "ns", 1e-9}};
static const struct unit_word rate_units[] = {{"hz", "Hz", 1.}, {"khz", "kHz", 1e3}};
static const struct unit_word second_units[] = {{"s", "s", 1.}};
static const struct unit_word area_units[] = {{"cm2", "cm2", 1e-4}, {"m2", "m2", 1.}};
static const struct unit_word percent_units[] = {{"pct", "%", 1e-2}};

static const struct unit_family small = {small_units, COUNT(small_units)};
static const struct unit_family length = {length_units, COUNT(length_units)};
static const struct unit_family place = {place_units, COUNT(place_units)};
static const struct unit_family angle = {angle_units, COUNT(angle_units)};
static const struct unit_family wavelength = {wavelength_units, COUNT(wavelength_units)};
static const struct unit_family average = {average_units, COUNT(average_units)};
static const struct unit_family peak = {peak_units, COUNT(peak_units)};
static const struct unit_family energy = {energy_units, COUNT(energy_units)};
static const struct unit_family duration = {time_units, COUNT(time_units)};
static const struct unit_family rate = {rate_units, COUNT(rate_units)};
static const struct unit_family seconds = {second_units, COUNT(second_units)};
static const struct unit_family area = {area_units, COUNT(area_units)};
static const struct unit_family percent = {percent_units, COUNT(percent_units)};

/* ---- keys ----------------------------------------------------------------------------------- */

#define TITLE_KEY                                                                                                      \
    { "title", NULL, "title = what people call it" }
#define BEAM_KEYS                                                                                                      \
    {"beam_diameter", &length, "beam_diameter_mm = 30"}, {"divergence", &angle, "divergence_mrad = 200"},              \
        {"diameter_definition", NULL, "diameter_definition = d86"},                                                    \
        {"divergence_definition", NULL, "divergence_definition = full"}, {"spread", NULL, "spread = hyperbolic"},      \
        {"fibre_na", NULL, "fibre_na = 0.22"}, {"fibre_core", &length, "fibre_core_mm = 0.4"},                         \
        {"beam_diameter_y", &length, "beam_diameter_y_mm = 10"}, {"divergence_y", &angle, "divergence_y_mrad = 80"},   \
        {"fibre_mode", NULL, "fibre_mode = single"}, {"fibre_mode_field", &small, "fibre_mode_field_um = 6"},          \
        {"apparent_source", &length, "apparent_source_mm = 1"},                                                        \
        {"apparent_source_behind", &length, "apparent_source_behind_mm = 20"},                                         \
        {"apparent_source_kind", NULL, "apparent_source_kind = fibre-end"},                                            \
        {"emitter_at", &length, "emitter_at_mm = -4 0, 4 0"},                                                          \
        {"emitter_power_share", NULL, "emitter_power_share = 0.5, 0.5"},                                               \
        {"lens_focal_length", &length, "lens_focal_length_mm = 50"},                                                   \
        {"diameter_tolerance", &percent, "diameter_tolerance_pct = 10"}, {                                             \
        "divergence_tolerance", &percent, "divergence_tolerance_pct = 10"                                              \
    }

static const struct key_word case_keys[] = {
    {"title", NULL, "title = Treatment room 2, hand-held therapy laser"},
    {"rules", NULL, "rules = iec-60825-1-2014"},
    {"units", NULL, "units = si"},
};
static const struct key_word laser_keys[] = {TITLE_KEY, {"labelled_class", NULL, "labelled_class = 4"}};
static const struct key_word emission_keys[] = {
    {"wavelength", &wavelength, "wavelength_nm = 810"},
    {"average_power", &average, "average_power_w = 8"},
    {"peak_power", &peak, "peak_power_w = 75"},
    {"pulse_energy", &energy, "pulse_energy_uj = 11"},
    {"pulse_duration", &duration, "pulse_duration_ns = 150"},
    {"repetition_rate", &rate, "repetition_rate_hz = 10000"},
    {"tolerance", &percent, "tolerance_pct = 20"},
    {"power_tolerance", &percent, "power_tolerance_pct = 20"},
    {"average_power_tolerance", &percent, "average_power_tolerance_pct = 20"},
    {"peak_power_tolerance", &percent, "peak_power_tolerance_pct = 20"},
    {"pulse_energy_tolerance", &percent, "pulse_energy_tolerance_pct = 20"},
    {"pulse_duration_tolerance", &percent, "pulse_duration_tolerance_pct = 10"},
    {"repetition_rate_tolerance", &percent, "repetition_rate_tolerance_pct = 5"},
    {"pulse_count", NULL, "pulse_count = 1"},
    {"burst_on", &duration, "burst_on_ms = 10"},
    {"burst_period", &duration, "burst_period_ms = 50"},
    {"burst_pulses", NULL, "burst_pulses = 20"},
    {"burst_rate", &rate, "burst_rate_hz = 20"},
    {"gate_on", &duration, "gate_on_s = 0.5"},
    {"gate_period", &duration, "gate_period_s = 2"},
    {"pulses", NULL, "pulses = train.csv"},
};
static const struct key_word handpiece_keys[] = {TITLE_KEY,
                                                 BEAM_KEYS,
                                                 {"stand_off", &length, "stand_off_mm = 40"},
                                                 {"exposure", &seconds, "exposure_s = 10"},
                                                 {"exposed_skin", &area, "exposed_skin_cm2 = 50"}};
static const struct key_word beam_keys[] = {BEAM_KEYS};
static const struct key_word room_keys[] = {
    TITLE_KEY,
    {"outline", &place, "outline_m = 0 0, 5.2 0, 5.2 4.1, 0 4.1"},
    {"material", NULL, "material = painted-wall"},
    {"treated", NULL, "treated = skin"},
    {"grid", &length, "grid_mm = 20"},
    {"bounces", NULL, "bounces = 1"},
};
static const struct key_word surface_keys[] = {
    TITLE_KEY,
    {"from", &place, "from_m = 0 1"},
    {"to", &place, "to_m = 0 2.2"},
    {"material", NULL, "material = mirror"},
};
static const struct key_word opening_keys[] = {
    TITLE_KEY,
    {"from", &place, "from_m = 2 0"},
    {"to", &place, "to_m = 2.9 0"},
    {"kind", NULL, "kind = door"},
    {"cover", NULL, "cover = none"},
};
static const struct key_word area_keys[] = {
    TITLE_KEY,
    {"outline", &place, "outline_m = 2 1.6, 3.2 1.6, 3.2 2.4, 2 2.4"},
    {"aim_deg", NULL, "aim_deg = 0 .. 360"},
};
static const struct key_word person_keys[] = {
    TITLE_KEY,
    {"at", &place, "at_m = 2.6 1.2"},
    {"eyewear", NULL, "eyewear = none"},
    {"aid", NULL, "aid = none"},
};
static const struct key_word eyewear_keys[] = {
    TITLE_KEY,
    {"marking", NULL, "marking = 800-820 D LB6 + 890-1070 DIR LB5"},
    {"od", NULL, "od = 800-820 6.2, 890-1070 5.5"},
    {"luminous_transmittance", &percent, "luminous_transmittance_pct = 38"},
    {"inspected", NULL, "inspected = 2025-03-14"},
};
static const struct key_word aid_keys[] = {
    TITLE_KEY,
    {"magnification", NULL, "magnification = 2.5"},
    {"objective_diameter", &length, "objective_diameter_mm = 20"},
    {"transmittance_pct", NULL, "transmittance_pct = 400-700 90, 700-1400 70"},
};
static const struct key_word incident_keys[] = {
    TITLE_KEY,
    {"room", NULL, "room = two"},
    {"at", &place, "at_m = 2.6 1.2"},
    {"laser", NULL, "laser = trident"},
    {"handpiece", NULL, "handpiece = spot-30"},
    {"distance", &length, "distance_m = 0.4"},
    {"exposure", &seconds, "exposure_s = 2"},
    {"eyewear", NULL, "eyewear = none"},
    {"aid", NULL, "aid = none"},
};
static const struct key_word material_keys[] = {
    TITLE_KEY,
    {"finish", NULL, "finish = matt"},
    {"reflectance", &percent, "reflectance_pct = 60"},
    {"transmittance", &percent, "transmittance_pct = 0"},
    {"refractive_index", NULL, "refractive_index = 1.52"},
    {"matt_reflectance", &percent, "matt_reflectance_pct = 90"},
    {"source", NULL, "source = data sheet of the maker"},
};

/* ---- sections ------------------------------------------------------------------------------- */

/* Counts far above any clinic: the memory of a hostile file stays small, and so does its time. */
static const struct section_word section_words[SECTION_KINDS] = {
    [SECTION_CASE] = {"case", 0, "", "[case]", 1, case_keys, COUNT(case_keys)},
    [SECTION_LASER] = {"laser", 1, "NAME", "[laser trident]", 64, laser_keys, COUNT(laser_keys)},
    [SECTION_EMISSION] = {"emission", 2, "LASER NAME", "[emission trident deep]", 1000, emission_keys,
                          COUNT(emission_keys)},
    [SECTION_HANDPIECE] = {"handpiece", 2, "LASER NAME", "[handpiece trident spot-30]", 200, handpiece_keys,
                           COUNT(handpiece_keys)},
    [SECTION_BEAM] = {"beam", 3, "LASER HANDPIECE EMISSION", "[beam trident spot-30 aiming]", 1000, beam_keys,
                      COUNT(beam_keys)},
    [SECTION_ROOM] = {"room", 1, "NAME", "[room two]", 64, room_keys, COUNT(room_keys)},
    [SECTION_SURFACE] = {"surface", 2, "ROOM NAME", "[surface two mirror]", 1000, surface_keys, COUNT(surface_keys)},
    [SECTION_OPENING] = {"opening", 2, "ROOM NAME", "[opening two door]", 200, opening_keys, COUNT(opening_keys)},
    [SECTION_AREA] = {"treatment-area", 2, "ROOM NAME", "[treatment-area two couch]", 200, area_keys, COUNT(area_keys)},
    [SECTION_PERSON] = {"person", 2, "ROOM NAME", "[person two operator]", 500, person_keys, COUNT(person_keys)},
    [SECTION_EYEWEAR] = {"eyewear", 1, "NAME", "[eyewear wraps]", 200, eyewear_keys, COUNT(eyewear_keys)},
    [SECTION_USE] = {"use", 3, "ROOM LASER HANDPIECE", "[use two trident spot-30]", 500, NULL, 0},
    [SECTION_MATERIAL] = {"material", 1, "NAME", "[material tray]", 200, material_keys, COUNT(material_keys)},
    [SECTION_AID] = {"aid", 1, "NAME", "[aid loupes]", 100, aid_keys, COUNT(aid_keys)},
    [SECTION_INCIDENT] = {"incident", 1, "NAME", "[incident first]", 200, incident_keys, COUNT(incident_keys)},
};

const struct section_word *schema_section(enum section_kind kind) {
    return &section_words[kind];
}

/* ---- looking up ----------------------------------------------------------------------------- */

/* What follows `name_` in a key, or NULL if it does not begin so. */
static const char *suffix_after(const char *key, const char *name) {
    size_t size = strlen(name);
    return strncmp(key, name, size) == 0 && key[size] == '_' ? key + size + 1 : NULL;
}

static const struct unit_word *find_unit(const struct unit_family *family, const char *suffix) {
    for (size_t i = 0; suffix && i < family->count; i++)
        if (strcmp(family->units[i].suffix, suffix) == 0)
            return &family->units[i];
    return NULL;
}

const struct key_word *schema_key(enum section_kind kind, const char *key, const struct unit_word **unit) {
    const struct section_word *section = &section_words[kind];
    *unit = NULL;
    for (size_t i = 0; i < section->key_count; i++) {
        const struct key_word *word = &section->keys[i];
        if (word->family)
            *unit = find_unit(word->family, suffix_after(key, word->name));
        if (word->family ? *unit != NULL : strcmp(key, word->name) == 0)
            return word;
    }
    return NULL;
}

void schema_add_words(struct bw_text *text, const char *const *words, size_t count, const char *last_joint) {
    for (size_t i = 0; i < count; i++)
        bw_text_add(text, "%s%s", i == 0 ? "" : i + 1 == count ? last_joint : ", ", words[i]);
}

/* ---- explaining ----------------------------------------------------------------------------- */

/* What the case file will know one day: it must not be taken for a typing error, nor be passed over. */
static const struct {
    const char *begin; /* of the key */
    const char *text;
} not_built[] = {
    {"beam_diameter_x_", "is not known; beam_diameter_mm is the x axis, beam_diameter_y_mm the other"},
    {"divergence_x_", "is not known; divergence_mrad is the x axis, divergence_y_mrad the other"},
};

static const char *why_not_built(const char *key) {
    for (size_t i = 0; i < COUNT(not_built); i++)
        if (strncmp(key, not_built[i].begin, strlen(not_built[i].begin)) == 0)
            return not_built[i].text;
    return NULL;
}

static void add_units(struct bw_text *text, const struct key_word *word) {
    for (size_t i = 0; i < word->family->count; i++)
        bw_text_add(text, "%s%s_%s",
                    i == 0                         ? ""
                    : i + 1 == word->family->count ? " or "
                                                   : ", ",
                    word->name, word->family->units[i].suffix);
}

/* A key with its unit missing or unknown. Returns: false if it is none. */
static bool explain_unit(struct bw_text *text, enum section_kind kind, const char *key) {
    const struct section_word *section = &section_words[kind];
    for (size_t i = 0; i < section->key_count; i++) {
        const struct key_word *word = &section->keys[i];
        if (!word->family)
            continue;
        const char *suffix = suffix_after(key, word->name);
        bool bare = strcmp(key, word->name) == 0;
        if (!bare && (!suffix || strchr(suffix, '_') || strlen(suffix) > 4))
            continue;
        bw_text_add(text, bare ? "has no unit; " : "unit %s is not known here; ", suffix);
        add_units(text, word);
        bw_text_add(text, " would be right");
        return true;
    }
    return false;
}

static bool explain_other_section(struct bw_text *text, const char *key) {
    for (unsigned kind = 0; kind < SECTION_KINDS; kind++) {
        const struct unit_word *unit;
        if (!schema_key((enum section_kind)kind, key, &unit))
            continue;
        const struct section_word *section = &section_words[kind];
        bw_text_add(text, "does not belong here; it would be right in [%s%s%s]", section->word,
                    section->name_count > 0 ? " " : "", section->names);
        return true;
    }
    return false;
}

enum { NAMES_MAX = 64, NAME_SIZE = 40 };

const struct key_word *schema_nearest_key(enum section_kind kind, const char *key, char *full_name, size_t size) {
    const struct section_word *section = &section_words[kind];
    char names[NAMES_MAX][NAME_SIZE];
    const char *known[NAMES_MAX] = {NULL};
    const struct key_word *words[NAMES_MAX];
    size_t count = 0;
    for (size_t i = 0; i < section->key_count; i++) {
        const struct key_word *word = &section->keys[i];
        size_t units = word->family ? word->family->count : 1;
        for (size_t j = 0; j < units && count < NAMES_MAX; j++, count++) {
            snprintf(names[count], NAME_SIZE, "%s%s%s", word->name, word->family ? "_" : "",
                     word->family ? word->family->units[j].suffix : "");
            known[count] = names[count];
            words[count] = word;
        }
    }
    const char *nearest = bw_nearest_name(key, known, count);
    for (size_t i = 0; i < count; i++)
        if (known[i] == nearest) {
            snprintf(full_name, size, "%s", nearest);
            return words[i];
        }
    return NULL;
}

static void explain_nearest(struct bw_text *text, enum section_kind kind, const char *key) {
    const struct section_word *section = &section_words[kind];
    char nearest[NAME_SIZE];
    const char *words[NAMES_MAX];
    if (schema_nearest_key(kind, key, nearest, sizeof nearest)) {
        bw_text_add(text, "unknown key; did you mean %s?", nearest);
    } else {
        for (size_t i = 0; i < section->key_count; i++)
            words[i] = section->keys[i].name;
        bw_text_add(text, "unknown key; known here are ");
        schema_add_words(text, words, section->key_count, " and ");
    }
}

void schema_explain_key(struct bw_text *text, enum section_kind kind, const char *key) {
    const char *not_yet = why_not_built(key);
    if (not_yet)
        bw_text_add(text, "%s", not_yet);
    else if (section_words[kind].key_count == 0)
        bw_text_add(text, "unknown key; [%s %s] says all there is, it takes no keys", section_words[kind].word,
                    section_words[kind].names);
    else if (!explain_unit(text, kind, key) && !explain_other_section(text, key))
        explain_nearest(text, kind, key);
}
