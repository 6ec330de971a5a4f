/* The inputs of a handpiece as steps: what the case file gives, its unit, and what follows from it. The keys say which
 * of the laws the reader of the case went by; a value that they do not explain stands without a formula. */
#include "internal.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

typedef char number[BW_NUMBER_SIZE];

static const char *text(number out, double value) {
    return bw_working_number(out, value);
}

static bool agree(double a, double b) {
    return fabs(a - b) <= 1e-9 * fabs(b);
}

/* What may follow a key: nothing, or a unit. */
static bool is_unit(const char *rest) {
    return rest[0] == '\0' || (rest[0] == '_' && strchr(rest + 1, '_') == NULL && strcmp(rest, "_definition") != 0);
}

/* The key with any unit: "pulse_duration_ns" for "pulse_duration". */
static const struct bw_ini_entry *find_key(const struct bw_case *the_case, const char *section, const char *key) {
    size_t length = strlen(key);
    for (size_t i = 0; i < the_case->given.count; i++) {
        const struct bw_ini_entry *entry = &the_case->given.entries[i];
        if (strcmp(entry->section, section) == 0 && strncmp(entry->key, key, length) == 0 &&
            is_unit(entry->key + length))
            return entry;
    }
    return NULL;
}

/* What a unit makes of a number: a power of ten, inches, feet, degrees; twice that of a half angle. */
static bool is_conversion(double times) {
    static const double others[] = {0.0254, 0.3048, 3.14159265358979323846 / 180.};
    for (int twice = 1; twice <= 2; twice++) {
        double power = log10(times / twice);
        if (fabs(power - round(power)) <= 1e-9)
            return true;
        for (size_t i = 0; i < sizeof others / sizeof others[0]; i++)
            if (agree(times / twice, others[i]))
                return true;
    }
    return false;
}

/* The factor of a unit of time or rate, as it ends a key. */
static double unit_of(const char *ending) {
    static const struct {
        const char *ending;
        double factor;
    } units[] = {{"_s", 1.}, {"_ms", 1e-3}, {"_us", 1e-6}, {"_ns", 1e-9}, {"_hz", 1.}, {"_khz", 1e3}};
    for (size_t i = 0; i < sizeof units / sizeof units[0]; i++)
        if (strcmp(units[i].ending, ending) == 0)
            return units[i].factor;
    return 1.;
}

/* A quantity that stands in the file: the number there times its unit. */
static void given(const struct bw_ini_entry *entry, const char *symbol, double value, const char *unit,
                  struct bw_working *working) {
    char source[BW_REASON_SIZE];
    double printed;
    number first, factor;
    snprintf(source, sizeof source, "case file, line %d: %.40s = %.80s", entry->line, entry->key, entry->value);
    bool plain = bw_parse_number(entry->value, &printed) && printed > 0.;
    double times = plain ? value / printed : 1.;
    if (plain && is_conversion(times) && !agree(times, 1.)) {
        bw_working_step(working, symbol, value, unit, source, NULL, "%s * %s", text(first, printed),
                        text(factor, times));
        return;
    }
    bw_working_step(working, symbol, value, unit, source, NULL, NULL);
    if (plain && !is_conversion(times))
        bw_working_note(working,
                        "not what stands there alone: the whole of the pulses, bursts and gates makes it, and of "
                        "what contradicts itself within its tolerance the larger energy");
}

/* ---- emissions ---------------------------------------------------------------------------------- */

struct quantity {
    const char *key, *symbol, *unit;
    double value;
};
enum { POWER, PEAK, ENERGY, DURATION, RATE, QUANTITIES };

/* One quantity that was not given, from two others. */
static void derived(const struct quantity *what, const char *formula, const char *operator, double left, double right,
                    struct bw_working *working) {
    number a, b;
    double value = operator[0] == '*' ? left * right : left / right;
    if (agree(value, what->value))
        bw_working_step(working, what->symbol, what->value, what->unit, NULL, formula, "%s %s %s",
                        text(a, left), operator, text(b, right));
    else {
        bw_working_step(working, what->symbol, what->value, what->unit, NULL, NULL, NULL);
        bw_working_note(working, "as the pulses, bursts and gates make it");
    }
}

static void derive(const struct quantity all[QUANTITIES], size_t which, bool peak_and_duration,
                   struct bw_working *working) {
    switch (which) {
    case POWER:
        derived(&all[POWER], "Q f", "*", all[ENERGY].value, all[RATE].value, working);
        break;
    case PEAK:
        derived(&all[PEAK], "Q / d", "/", all[ENERGY].value, all[DURATION].value, working);
        break;
    case ENERGY:
        if (peak_and_duration)
            derived(&all[ENERGY], "Pp d", "*", all[PEAK].value, all[DURATION].value, working);
        else
            derived(&all[ENERGY], "P / f", "/", all[POWER].value, all[RATE].value, working);
        break;
    case DURATION:
        derived(&all[DURATION], "Q / Pp", "/", all[ENERGY].value, all[PEAK].value, working);
        break;
    default:
        derived(&all[RATE], "P / Q", "/", all[POWER].value, all[ENERGY].value, working);
        break;
    }
}

/* How the pulses follow each other, as given. */
static void timing(const struct bw_case *the_case, const char *section, struct bw_working *working) {
    static const struct {
        const char *key, *symbol, *unit;
        bool plain; /* no unit in the key */
    } keys[] = {{"pulse_count", "Np", "pulses", true}, {"burst_on", "tb", "s", false},
                {"burst_period", "Tb", "s", false},    {"burst_pulses", "nb", "pulses", true},
                {"burst_rate", "fb", "Hz", false},     {"gate_on", "tg", "s", false},
                {"gate_period", "Tg", "s", false}};
    for (size_t i = 0; i < sizeof keys / sizeof keys[0]; i++) {
        const struct bw_ini_entry *entry = find_key(the_case, section, keys[i].key);
        double value;
        if (entry == NULL || !bw_parse_number(entry->value, &value))
            continue;
        given(entry, keys[i].symbol, value * unit_of(entry->key + strlen(keys[i].key)), keys[i].unit, working);
    }
    const struct bw_ini_entry *list = find_key(the_case, section, "pulses");
    if (list == NULL)
        return;
    bw_working_heading(working, "The pulses are a list: %s", list->value);
}

static void emission(const struct assess_job *job, const struct bw_laser *laser, const struct bw_emission *emission,
                     struct bw_working *working) {
    const struct quantity all[QUANTITIES] = {{"average_power", "P", "W", emission->average_power_w},
                                             {"peak_power", "Pp", "W", emission->peak_power_w},
                                             {"pulse_energy", "Q", "J", emission->pulse_energy_j},
                                             {"pulse_duration", "d", "s", emission->pulse_duration_s},
                                             {"repetition_rate", "f", "Hz", emission->repetition_rate_hz}};
    char section[3 * BW_NAME_SIZE];
    const struct bw_ini_entry *entries[QUANTITIES], *wavelength;
    snprintf(section, sizeof section, "emission %s %s", laser->name, emission->name);
    bw_working_heading(working, "Emission %s", emission->name);
    wavelength = find_key(job->the_case, section, "wavelength");
    if (wavelength != NULL)
        given(wavelength, "w", emission->wavelength_nm, "nm", working);
    else
        bw_working_step(working, "w", emission->wavelength_nm, "nm", NULL, NULL, NULL);
    for (size_t i = 0; i < QUANTITIES; i++) {
        entries[i] = find_key(job->the_case, section, all[i].key);
        if (entries[i] != NULL && all[i].value > 0. && (!emission->continuous || i == POWER))
            given(entries[i], all[i].symbol, all[i].value, all[i].unit, working);
    }
    static const size_t order[QUANTITIES] = {ENERGY, POWER, PEAK, DURATION, RATE}; /* each by what stands before it */
    for (size_t i = 0; i < QUANTITIES && !emission->continuous; i++)
        if (entries[order[i]] == NULL && all[order[i]].value > 0.)
            derive(all, order[i], entries[PEAK] != NULL && entries[DURATION] != NULL, working);
    if (emission->continuous && entries[POWER] == NULL)
        bw_working_step(working, "P", emission->average_power_w, "W", NULL, NULL, NULL);
    if (emission->continuous)
        bw_working_note(working, "continuous");
    timing(job->the_case, section, working);
}

/* ---- beams -------------------------------------------------------------------------------------- */

struct stated { /* by the maker */
    const char *section;
    const struct bw_ini_entry *diameter, *divergence, *half, *focal, *aperture, *core, *field;
    const char *divisor, *words; /* of the definition, in numbers */
    double in_d63;
};

static void find_definition(const struct bw_case *the_case, const char *section, const char *general,
                            struct stated *stated) {
    const struct bw_ini_entry *entry = find_key(the_case, section, "diameter_definition");
    if (entry == NULL)
        entry = find_key(the_case, general, "diameter_definition");
    const char *word = entry != NULL ? entry->value : "d86";
    stated->divisor = "sqrt(2)";
    stated->in_d63 = sqrt(2.);
    stated->words = entry != NULL ? "stated as d86, at 1/e2 of the peak"
                                  : "no definition is stated: d86, of all the narrowest beam";
    if (strcmp(word, "fwhm") == 0) {
        stated->divisor = "sqrt(ln(2))";
        stated->in_d63 = sqrt(log(2.));
        stated->words = "stated as FWHM, at half the peak";
    } else if (strcmp(word, "d63") == 0 || strcmp(word, "top-hat") == 0) {
        stated->divisor = "1";
        stated->in_d63 = 1.;
        stated->words = word[0] == 'd' ? "stated as d63, at 1/e of the peak" : "a top hat: its edge";
    }
}

static struct stated find_stated(const struct bw_case *the_case, const char *section, const char *general) {
    struct stated stated = {.section = section};
    stated.diameter = find_key(the_case, section, "beam_diameter");
    stated.divergence = find_key(the_case, section, "divergence");
    stated.half = find_key(the_case, section, "divergence_definition");
    stated.focal = find_key(the_case, section, "lens_focal_length");
    stated.aperture = find_key(the_case, section, "fibre_na");
    stated.core = find_key(the_case, section, "fibre_core");
    stated.field = find_key(the_case, section, "fibre_mode_field");
    find_definition(the_case, section, general, &stated);
    return stated;
}

/* A stated length or angle and the same as d63. */
static void converted(const struct stated *stated, const struct bw_ini_entry *entry, const char *maker,
                      const char *symbol, double d63, const char *unit, struct bw_working *working) {
    number value;
    char formula[BW_NAME_SIZE];
    bool is_half = entry == stated->divergence && stated->half != NULL && strcmp(stated->half->value, "half") == 0;
    given(entry, maker, d63 * stated->in_d63, unit, working);
    bw_working_note(working, "%s%s", stated->words, is_half ? "; the half angle, twice" : "");
    snprintf(formula, sizeof formula, "%s / %s", maker, stated->divisor);
    bw_working_step(working, symbol, d63, unit, NULL, formula, "%s / %s", text(value, d63 * stated->in_d63),
                    stated->divisor);
    bw_working_note(working, "as d63");
}

static void plain(const struct bw_beam *beam, struct bw_working *working) {
    bw_working_step(working, "a", beam->diameter_m, "m", NULL, NULL, NULL);
    bw_working_note(working, "d63 at its narrowest, as the case gives it");
    if (beam->waist_m > 0.) {
        bw_working_step(working, "r0", beam->waist_m, "m", NULL, NULL, NULL);
        bw_working_note(working, "distance of the waist from the exit");
    }
    bw_working_step(working, "phi", beam->divergence_rad, "rad", NULL, NULL, NULL);
}

static bool fibre(const struct stated *stated, const struct bw_beam *beam, struct bw_working *working) {
    double aperture;
    number na;
    if (stated->aperture == NULL || stated->core == NULL || !bw_parse_number(stated->aperture->value, &aperture) ||
        !agree(2. * aperture / sqrt(log(20.)), beam->divergence_rad))
        return false;
    given(stated->core, "a", beam->diameter_m, "m", working);
    bw_working_note(working, "the core, taken as the d63 at the exit");
    given(stated->aperture, "NA", aperture, "", working);
    bw_working_step(working, "phi", beam->divergence_rad, "rad", NULL, "2 NA / sqrt(ln(20))", "2 * %s / sqrt(ln(20))",
                    text(na, aperture));
    bw_working_note(working, "full angle, as d63: NA holds at 5 %% of the peak");
    return true;
}

static bool single_mode(const struct stated *stated, const struct bw_beam *beam, double wavelength_nm,
                        struct bw_working *working) {
    double field_m = beam->diameter_m * sqrt(2.);
    number field, w;
    if (stated->field == NULL || !agree(2. * sqrt(2.) * wavelength_nm * 1e-9 / (bw_pi * field_m), beam->divergence_rad))
        return false;
    given(stated->field, "Dg", field_m, "m", working);
    bw_working_note(working, "mode field, at 1/e2 of the peak");
    text(field, field_m);
    bw_working_step(working, "a", beam->diameter_m, "m", NULL, "Dg / sqrt(2)", "%s / sqrt(2)", field);
    bw_working_note(working, "as d63");
    bw_working_step(working, "phi", beam->divergence_rad, "rad", NULL, "2 sqrt(2) w / 10^9 / (pi Dg)",
                    "2 * sqrt(2) * %s / 10^9 / (pi * %s)", text(w, wavelength_nm), field);
    bw_working_note(working, "diffraction of a Gaussian of this width; full angle, d63");
    return true;
}

static bool lens(const struct stated *stated, const struct bw_beam *beam, struct bw_working *working) {
    number f, b, phi;
    double incoming_rad = beam->diameter_m / beam->waist_m;
    if (stated->focal == NULL || stated->diameter == NULL || stated->divergence == NULL || !(beam->waist_m > 0.) ||
        !agree(beam->exit_diameter_m / beam->waist_m, beam->divergence_rad))
        return false;
    text(f, beam->waist_m);
    converted(stated, stated->diameter, "Dg", "b", beam->exit_diameter_m, "m", working);
    converted(stated, stated->divergence, "phig", "phi", incoming_rad, "rad", working);
    bw_working_note(working, "of the beam that arrives at the lens");
    given(stated->focal, "F", beam->waist_m, "m", working);
    bw_working_step(working, "r0", beam->waist_m, "m", NULL, "F", "%s", f);
    bw_working_note(working, "the waist lies in the focus");
    bw_working_step(working, "a", beam->diameter_m, "m", NULL, "F phi", "%s * %s", f, text(phi, incoming_rad));
    bw_working_note(working, "d63 of the waist");
    bw_working_step(working, "phi", beam->divergence_rad, "rad", NULL, "b / F", "%s / %s",
                    text(b, beam->exit_diameter_m), f);
    bw_working_note(working, "full angle behind the waist, d63");
    return true;
}

/* The second axis, an apparent source, several emitters: as the case reader understood them. */
static void shape(const struct bw_beam *beam, struct bw_working *working) {
    if (beam->elliptical) {
        bw_working_step(working, "ay", beam->diameter_y_m, "m", NULL, NULL, NULL);
        bw_working_note(working, "second axis, d63 at its narrowest, converted like the first");
        bw_working_step(working, "phiy", beam->divergence_y_rad, "rad", NULL, NULL, NULL);
        bw_working_note(working, "second axis, full angle, d63");
    }
    if (beam->source_m > 0.) {
        bw_working_step(working, "s", beam->source_m, "m", NULL, NULL, NULL);
        bw_working_note(working, "apparent source, %g m behind the exit", beam->source_behind_m);
    }
    for (size_t i = 0; i < beam->cluster.count && beam->cluster.count > 1; i++) {
        bw_working_step(working, "share", beam->cluster.share[i], "", NULL, NULL, NULL);
        bw_working_note(working, "of the power, of the emitter at %g %g mm across the head",
                        1e3 * beam->cluster.at[i].x_m, 1e3 * beam->cluster.at[i].y_m);
    }
}

static bool simple(const struct stated *stated, const struct bw_beam *beam, struct bw_working *working) {
    double diameter, divergence;
    if (stated->diameter == NULL || stated->divergence == NULL || beam->waist_m > 0. ||
        !bw_parse_number(stated->diameter->value, &diameter) ||
        !bw_parse_number(stated->divergence->value, &divergence))
        return false;
    converted(stated, stated->diameter, "Dg", "a", beam->diameter_m, "m", working);
    converted(stated, stated->divergence, "phig", "phi", beam->divergence_rad, "rad", working);
    return true;
}

static void beam(const struct assess_job *job, const struct bw_laser *laser, const struct bw_handpiece *handpiece,
                 size_t emission, struct bw_working *working) {
    char section[4 * BW_NAME_SIZE], general[3 * BW_NAME_SIZE];
    const struct bw_beam *beam = &handpiece->output.beams[emission];
    snprintf(general, sizeof general, "handpiece %s %s", laser->name, handpiece->name);
    snprintf(section, sizeof section, "beam %s %s %s", laser->name, handpiece->name,
             handpiece->output.emissions[emission].name);
    bool own = handpiece->emission_beam_given[emission];
    struct stated stated = find_stated(job->the_case, own ? section : general, general);
    if (own)
        bw_working_heading(working, "Beam of %s", handpiece->output.emissions[emission].name);
    else
        bw_working_heading(working, "Beam");
    double wavelength_nm = handpiece->output.emissions[emission].wavelength_nm;
    if (!fibre(&stated, beam, working) && !single_mode(&stated, beam, wavelength_nm, working) &&
        !lens(&stated, beam, working) && !simple(&stated, beam, working))
        plain(beam, working);
    bw_working_note(working, "%s, %s spread", beam->profile == BW_TOP_HAT ? "top hat" : "Gaussian profile",
                    beam->spread == BW_LINEAR ? "linear" : "hyperbolic");
    shape(beam, working);
}

/* All inputs of one handpiece. */
void assess_inputs_working(const struct assess_job *job, const struct bw_distance_result *distance,
                           struct bw_working *working) {
    const struct bw_laser *laser = assess_laser(job, distance);
    const struct bw_handpiece *handpiece = assess_handpiece(job, distance);
    const struct bw_beam *general = NULL; /* the last one that was written */
    if (working == NULL)
        return;
    for (size_t i = 0; i < handpiece->output.count; i++)
        emission(job, laser, &handpiece->output.emissions[i], working);
    for (size_t i = 0; i < handpiece->output.count; i++) {
        const struct bw_beam *here = &handpiece->output.beams[i];
        bool own = handpiece->emission_beam_given[i];
        if (!own && general != NULL && agree(general->divergence_rad, here->divergence_rad))
            continue;
        beam(job, laser, handpiece, i, working);
        general = own ? general : here;
    }
    if (handpiece->output.stand_off_m > 0.) {
        bw_working_step(working, "rs", handpiece->output.stand_off_m, "m", NULL, NULL, NULL);
        bw_working_note(working, "stand-off: a spacer keeps eye and skin at least this far from the exit");
    }
}

/* How long, and why. what: "an accidental glance". */
void assess_time_working(const struct bw_distance_result *distance, const struct bw_exposure_time *time,
                         const char *what, struct bw_working *working) {
    char source[BW_REASON_SIZE] = "";
    if (!distance->exposure_given && time->source.table != NULL)
        snprintf(source, sizeof source, "%s, %s %s, %s%s", time->source.table, time->source.section, time->source.row,
                 time->source.clause, time->source.known == BW_MEMORY ? ", from memory" : "");
    bw_working_step(working, "te", time->exposure_s, "s", source, NULL, NULL);
    if (distance->exposure_given)
        bw_working_note(working, "exposure time, given in the case file");
    else
        bw_working_note(working, "exposure time, customary for %s", what);
    if (time->aversion_response)
        bw_working_note(working, "it rests on the aversion response, which newer results do not bear out");
}
