/* The geometry of a beam, from what its maker states: diameter and divergence, a fibre end, or a lens. */
#include "internal.h"

#include <math.h>
#include <string.h>

static const struct range diameters_m = {1e-6, 1.}, focal_lengths_m = {1e-3, 100.};
static const struct range apertures = {0.01, 1.}, cores_m = {1e-6, 0.1};
static const double waist_least_m = 1e-9; /* what beam takes */

static const char *const definition_words[] = {"d63", "d86", "fwhm", "top-hat"};
static const enum bw_diameter_definition definitions[] = {BW_D63, BW_D86, BW_FWHM, BW_D_TOP_HAT};

/* Refuses keys that do not go with another. Returns: true if there are none of them. */
static bool refuse_with(struct reading *reading, const struct section *section, const char *const *keys, size_t count,
                        const char *reason) {
    bool none = true;
    for (size_t i = 0; i < count; i++) {
        const struct bw_ini_entry *entry = value_entry(section, keys[i], NULL);
        if (entry)
            fault_key(reading, entry, "%s", reason);
        none = none && !entry;
    }
    return none;
}

static enum presence read_fibre(struct reading *reading, const struct section *section, struct bw_beam *beam) {
    static const char *const others[] = {"beam_diameter", "divergence", "diameter_definition", "divergence_definition",
                                         "lens_focal_length"};
    double aperture, core_m;
    enum presence numerical = value_number(reading, section, "fibre_na", apertures, &aperture);
    enum presence core = value_number(reading, section, "fibre_core", cores_m, &core_m);
    if (numerical == ABSENT)
        fault_missing(reading, section, "fibre_na");
    if (core == ABSENT)
        fault_missing(reading, section, "fibre_core");
    bool alone = refuse_with(reading, section, others, sizeof others / sizeof *others,
                             "does not go with fibre_na and fibre_core; remove one or the other");
    if (numerical != GIVEN || core != GIVEN || !alone)
        return WRONG;
    *beam = bw_beam_from_fibre(aperture, core_m);
    return GIVEN;
}

/* Full angle, by the definition of the diameter. */
static enum presence read_divergence(struct reading *reading, const struct section *section, double *full_rad) {
    static const char *const words[] = {"full", "half"};
    size_t index = 0;
    enum presence presence = value_choice(reading, section, "divergence_definition", words, 2, &index);
    double factor = presence == GIVEN && index == 1 ? 2. : 1.;
    enum presence angle = value_number(reading, section, "divergence", (struct range){0., bw_pi / factor}, full_rad);
    *full_rad *= factor;
    if (angle == ABSENT)
        fault_missing(reading, section, "divergence");
    return presence == WRONG ? WRONG : angle;
}

static enum presence read_definition(struct reading *reading, const struct section *section,
                                     const struct section *handpiece, enum bw_diameter_definition *definition) {
    enum { DEFINITIONS = sizeof definitions / sizeof *definitions };
    static const char key[] = "diameter_definition";
    size_t index = 0;
    enum presence presence = value_choice(reading, section, key, definition_words, DEFINITIONS, &index);
    const struct bw_ini_entry *general = handpiece ? value_entry(handpiece, key, NULL) : NULL;
    if (presence == ABSENT && general) {
        while (index < DEFINITIONS && strcmp(general->value, definition_words[index]) != 0)
            index++;
        if (index == DEFINITIONS)
            return WRONG; /* told at the handpiece */
        presence = GIVEN;
    }
    if (presence == ABSENT) { /* the safe side: of all definitions it makes the narrowest beam */
        *definition = BW_D86;
        return GIVEN;
    }
    *definition = definitions[index];
    return presence;
}

bool beam_assumes_definition(const struct section *section, const struct section *handpiece) {
    static const char key[] = "diameter_definition";
    return value_entry(section, "beam_diameter", NULL) && !value_entry(section, key, NULL) &&
           !(handpiece && value_entry(handpiece, key, NULL));
}

static enum presence through_lens(struct reading *reading, const struct section *section, double beam_m,
                                  double divergence_rad, struct bw_beam *beam) {
    double focal_m;
    enum presence presence = value_number(reading, section, "lens_focal_length", focal_lengths_m, &focal_m);
    if (presence != GIVEN)
        return presence;
    if (!(focal_m * divergence_rad >= waist_least_m)) {
        const struct bw_ini_entry *entry = value_entry(section, "divergence", NULL);
        fault_key(reading, entry,
                  "%s makes a focus without width; the divergence that arrives at the lens would be right",
                  entry->value);
        return WRONG;
    }
    if (!(beam_m / focal_m <= bw_pi)) {
        const struct bw_ini_entry *entry = value_entry(section, "lens_focal_length", NULL);
        fault_key(reading, entry, "%s is too short for this beam diameter; at least a third of it would be right",
                  entry->value);
        return WRONG;
    }
    *beam = bw_beam_from_lens(focal_m, beam_m, divergence_rad, beam->profile);
    return GIVEN;
}

static enum presence read_diameter(struct reading *reading, const struct section *section,
                                   const struct section *handpiece, struct bw_beam *beam) {
    double diameter_m, divergence_rad;
    enum bw_diameter_definition definition;
    enum presence diameter = value_number(reading, section, "beam_diameter", diameters_m, &diameter_m);
    if (diameter == ABSENT)
        fault_missing(reading, section, "beam_diameter");
    enum presence divergence = read_divergence(reading, section, &divergence_rad);
    enum presence defined = read_definition(reading, section, handpiece, &definition);
    if (diameter != GIVEN || divergence != GIVEN || defined != GIVEN)
        return WRONG;
    double d63_m = bw_diameter_to_d63(diameter_m, definition);
    *beam = (struct bw_beam){
        .profile = definition == BW_D_TOP_HAT ? BW_TOP_HAT : BW_GAUSSIAN,
        .diameter_m = d63_m,
        .divergence_rad = bw_diameter_to_d63(divergence_rad, definition),
        .exit_diameter_m = d63_m,
    };
    return through_lens(reading, section, d63_m, beam->divergence_rad, beam) == WRONG ? WRONG : GIVEN;
}

enum presence read_beam(struct reading *reading, const struct section *section, const struct section *handpiece,
                        struct bw_beam *beam) {
    static const char *const words[] = {"hyperbolic", "linear"};
    static const enum bw_spread spreads[] = {BW_HYPERBOLIC, BW_LINEAR};
    static const char *const keys[] = {"beam_diameter", "divergence", "diameter_definition", "divergence_definition",
                                       "fibre_na",      "fibre_core", "lens_focal_length",   "spread"};
    bool any = false;
    for (size_t i = 0; i < sizeof keys / sizeof *keys; i++)
        any = any || value_given(section, keys[i]);
    if (!any)
        return ABSENT;
    bool fibre = value_given(section, "fibre_na") || value_given(section, "fibre_core");
    enum presence presence =
        fibre ? read_fibre(reading, section, beam) : read_diameter(reading, section, handpiece, beam);
    size_t index = 0;
    enum presence spread = value_choice(reading, section, "spread", words, 2, &index);
    beam->spread = spreads[index];
    return spread == WRONG ? WRONG : presence;
}
