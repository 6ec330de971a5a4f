/* The geometry of a beam, from what its maker states: diameter and divergence, round or elliptical, a fibre end, or a
 * lens; then where its light seems to come from (sources.c). */
#include "internal.h"

#include <math.h>
#include <string.h>

static const struct range diameters_m = {1e-6, 1.}, focal_lengths_m = {1e-3, 100.};
static const struct range apertures = {0.01, 1.}, cores_m = {1e-6, 0.1}, mode_fields_m = {1e-6, 1e-3};
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

static const char *const diameter_keys[] = {"beam_diameter",    "divergence",          "beam_diameter_y",
                                            "divergence_y",     "diameter_definition", "divergence_definition",
                                            "lens_focal_length"};
enum { DIAMETER_KEYS = sizeof diameter_keys / sizeof *diameter_keys };

static enum presence read_multimode(struct reading *reading, const struct section *section, struct bw_beam *beam) {
    static const char *const others[] = {"fibre_mode_field"};
    double aperture, core_m;
    enum presence numerical = value_number(reading, section, "fibre_na", apertures, &aperture);
    enum presence core = value_number(reading, section, "fibre_core", cores_m, &core_m);
    if (numerical == ABSENT)
        fault_missing(reading, section, "fibre_na");
    if (core == ABSENT)
        fault_missing(reading, section, "fibre_core");
    bool alone =
        refuse_with(reading, section, others, 1,
                    "goes with fibre_mode = single; the numerical aperture and the core say all of this fibre");
    alone = refuse_with(reading, section, diameter_keys, DIAMETER_KEYS,
                        "does not go with fibre_na and fibre_core; remove one or the other") &&
            alone;
    if (numerical != GIVEN || core != GIVEN || !alone)
        return WRONG;
    *beam = bw_beam_from_fibre(aperture, core_m);
    return GIVEN;
}

/* For the wavelength of one emission; diffraction decides. */
static enum presence read_single_mode(struct reading *reading, const struct section *section, double wavelength_nm,
                                      struct bw_beam *beam) {
    static const char *const others[] = {"fibre_na", "fibre_core"};
    double field_m;
    enum presence field = value_number(reading, section, "fibre_mode_field", mode_fields_m, &field_m);
    if (field == ABSENT)
        fault_missing(reading, section, "fibre_mode_field");
    bool alone = refuse_with(reading, section, others, 2,
                             "does not go with fibre_mode = single; fibre_mode_field_um says all of it");
    alone = refuse_with(reading, section, diameter_keys, DIAMETER_KEYS,
                        "does not go with fibre_mode_field_um; remove one or the other") &&
            alone;
    if (field != GIVEN || !alone)
        return WRONG;
    *beam = bw_beam_from_single_mode_fibre(field_m, wavelength_nm);
    beam->divergence_rad =
        fmin(beam->divergence_rad, bw_pi); /* a field narrower than the wavelength: no wider than all */
    return GIVEN;
}

/* A mode field says so without words. */
static bool is_single_mode(const struct section *section) {
    const struct bw_ini_entry *mode = value_entry(section, "fibre_mode", NULL);
    return mode ? strcmp(mode->value, "single") == 0 : value_given(section, "fibre_mode_field");
}

static bool is_fibre(const struct section *section) {
    return value_given(section, "fibre_na") || value_given(section, "fibre_core") ||
           value_given(section, "fibre_mode") || value_given(section, "fibre_mode_field");
}

static enum presence read_fibre(struct reading *reading, const struct section *section, double wavelength_nm,
                                struct bw_beam *beam) {
    static const char *const words[] = {"single", "multi"};
    size_t index;
    enum presence mode = value_choice(reading, section, "fibre_mode", words, 2, &index);
    if (mode == WRONG)
        return WRONG;
    return is_single_mode(section) ? read_single_mode(reading, section, wavelength_nm, beam)
                                   : read_multimode(reading, section, beam);
}

void beam_for_wavelength(const struct section *section, double wavelength_nm, struct bw_beam *beam) {
    if (is_single_mode(section) && beam->diameter_m > 0.)
        beam->divergence_rad =
            fmin(bw_beam_from_single_mode_fibre(beam->diameter_m * sqrt(2.), wavelength_nm).divergence_rad, bw_pi);
}

/* Full angles, by the definition of the diameter. */
static enum presence read_divergence(struct reading *reading, const struct section *section, double *full_rad,
                                     enum presence *y, double *full_y_rad) {
    static const char *const words[] = {"full", "half"};
    size_t index = 0;
    enum presence presence = value_choice(reading, section, "divergence_definition", words, 2, &index);
    double factor = presence == GIVEN && index == 1 ? 2. : 1.;
    struct range range = {0., bw_pi / factor};
    enum presence angle = value_number(reading, section, "divergence", range, full_rad);
    *y = value_number(reading, section, "divergence_y", range, full_y_rad);
    *full_rad *= factor;
    *full_y_rad *= factor;
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

/* Whether the lens makes a sound focus of one axis. */
static bool lens_suits(struct reading *reading, const struct section *section, double focal_m, double beam_m,
                       double divergence_rad, const char *divergence_key) {
    if (!(focal_m * divergence_rad >= waist_least_m)) {
        const struct bw_ini_entry *entry = value_entry(section, divergence_key, NULL);
        if (!entry)
            entry = value_entry(section, "divergence", NULL);
        fault_key(reading, entry,
                  "%s makes a focus without width; the divergence that arrives at the lens would be right",
                  entry->value);
        return false;
    }
    if (!(beam_m / focal_m <= bw_pi)) {
        const struct bw_ini_entry *entry = value_entry(section, "lens_focal_length", NULL);
        fault_key(reading, entry, "%s is too short for this beam diameter; at least a third of it would be right",
                  entry->value);
        return false;
    }
    return true;
}

/* Each axis passes the lens by itself. */
static enum presence through_lens(struct reading *reading, const struct section *section, struct bw_beam *beam) {
    double focal_m;
    enum presence presence = value_number(reading, section, "lens_focal_length", focal_lengths_m, &focal_m);
    if (presence != GIVEN)
        return presence;
    bool suits = lens_suits(reading, section, focal_m, beam->diameter_m, beam->divergence_rad, "divergence") &&
                 (!beam->elliptical ||
                  lens_suits(reading, section, focal_m, beam->diameter_y_m, beam->divergence_y_rad, "divergence_y"));
    if (!suits)
        return WRONG;
    struct bw_beam x = bw_beam_from_lens(focal_m, beam->diameter_m, beam->divergence_rad, beam->profile);
    if (beam->elliptical) {
        struct bw_beam y = bw_beam_from_lens(focal_m, beam->diameter_y_m, beam->divergence_y_rad, beam->profile);
        x.elliptical = true;
        x.diameter_y_m = y.diameter_m;
        x.divergence_y_rad = y.divergence_rad;
        x.exit_diameter_y_m = y.exit_diameter_m;
    }
    *beam = x;
    return GIVEN;
}

/* What is not given of the y axis is as on the x axis. */
static void set_y_axis(struct bw_beam *beam, enum bw_diameter_definition definition, double diameter_m,
                       double divergence_rad) {
    beam->elliptical = !isnan(diameter_m) || !isnan(divergence_rad);
    if (!beam->elliptical)
        return;
    beam->diameter_y_m = isnan(diameter_m) ? beam->diameter_m : bw_diameter_to_d63(diameter_m, definition);
    beam->divergence_y_rad =
        isnan(divergence_rad) ? beam->divergence_rad : bw_diameter_to_d63(divergence_rad, definition);
    beam->exit_diameter_y_m = beam->diameter_y_m;
}

static enum presence read_diameter(struct reading *reading, const struct section *section,
                                   const struct section *handpiece, enum bw_diameter_definition *definition,
                                   struct bw_beam *beam) {
    double diameter_m, diameter_y_m, divergence_rad, divergence_y_rad;
    enum presence diameter = value_number(reading, section, "beam_diameter", diameters_m, &diameter_m), y_angle;
    enum presence y_axis = value_number(reading, section, "beam_diameter_y", diameters_m, &diameter_y_m);
    if (diameter == ABSENT)
        fault_missing(reading, section, "beam_diameter");
    enum presence divergence = read_divergence(reading, section, &divergence_rad, &y_angle, &divergence_y_rad);
    enum presence defined = read_definition(reading, section, handpiece, definition);
    if (diameter != GIVEN || divergence != GIVEN || defined != GIVEN || y_axis == WRONG || y_angle == WRONG)
        return WRONG;
    double d63_m = bw_diameter_to_d63(diameter_m, *definition);
    *beam = (struct bw_beam){
        .profile = *definition == BW_D_TOP_HAT ? BW_TOP_HAT : BW_GAUSSIAN,
        .diameter_m = d63_m,
        .divergence_rad = bw_diameter_to_d63(divergence_rad, *definition),
        .exit_diameter_m = d63_m,
    };
    set_y_axis(beam, *definition, diameter_y_m, divergence_y_rad);
    return through_lens(reading, section, beam) == WRONG ? WRONG : GIVEN;
}

enum presence read_beam(struct reading *reading, const struct section *section, const struct section *handpiece,
                        double wavelength_nm, struct bw_beam *beam) {
    static const char *const words[] = {"hyperbolic", "linear"};
    static const enum bw_spread spreads[] = {BW_HYPERBOLIC, BW_LINEAR};
    static const char *const keys[] = {
        "spread",     "apparent_source",    "apparent_source_behind", "apparent_source_kind",
        "emitter_at", "emitter_power_share"};
    enum bw_diameter_definition definition = BW_D_TOP_HAT; /* of a fibre's core: its edge */
    bool any = is_fibre(section);
    for (size_t i = 0; i < DIAMETER_KEYS; i++)
        any = any || value_given(section, diameter_keys[i]);
    for (size_t i = 0; i < sizeof keys / sizeof *keys; i++)
        any = any || value_given(section, keys[i]);
    if (!any)
        return ABSENT;
    enum presence presence = is_fibre(section) ? read_fibre(reading, section, wavelength_nm, beam)
                                               : read_diameter(reading, section, handpiece, &definition, beam);
    size_t index = 0;
    enum presence spread = value_choice(reading, section, "spread", words, 2, &index);
    beam->spread = spreads[index];
    enum presence source = read_source(reading, section, definition, presence == GIVEN, beam);
    return spread == WRONG || source == WRONG ? WRONG : presence;
}
