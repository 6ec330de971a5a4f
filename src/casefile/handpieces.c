/* Handpieces: each takes all emissions of its laser, through its own beam or one of the emission's own. */
#include "internal.h"

#include <stdio.h>
#include <string.h>

static const struct range stand_offs_m = {0., 10.};
static const struct range exposures_s = {1e-13, 3e4}; /* what the published tables cover */
static const struct range skins_m2 = {1e-6, 2.};      /* nobody has more */

/* The beam of an emission that is not there is read all the same, for its faults. */
static const double any_wavelength_nm = 1000.;

static double wavelength_of(const struct bw_laser *laser, const struct section *emission) {
    bool there = emission && emission->index < laser->emission_count;
    return there ? laser->emissions[emission->index].wavelength_nm : any_wavelength_nm;
}

static void read_emission_beam(struct reading *reading, const struct section *of, struct section *section,
                               const struct bw_laser *laser, struct bw_handpiece *handpiece) {
    const struct section *emission = sections_refer(reading, section, SECTION_EMISSION, laser->name, section->names[2]);
    struct bw_beam beam = {0};
    enum presence presence = read_beam(reading, section, of, wavelength_of(laser, emission), &beam);
    handpiece->definition_assumed = handpiece->definition_assumed || beam_assumes_definition(section, of);
    if (presence == ABSENT && section->key_count == 0)
        fault_section(reading, section,
                      "has no beam; beam_diameter_mm and divergence_mrad would be right, or fibre_na "
                      "and fibre_core_mm");
    section->made = true;
    if (!emission || emission->index >= BW_EMISSIONS_MAX)
        return;
    handpiece->output.beams[emission->index] = beam;
    read_beam_tolerance(reading, section, of, &handpiece->diameter_tolerance[emission->index],
                        &handpiece->divergence_tolerance[emission->index]);
    handpiece->emission_beam_given[emission->index] = true;
}

static void read_emission_beams(struct reading *reading, const struct section *of, const struct bw_laser *laser,
                                struct bw_handpiece *handpiece) {
    size_t at = 0;
    for (struct section *section; (section = sections_next(reading, &at, SECTION_BEAM, laser->name, handpiece->name));)
        read_emission_beam(reading, of, section, laser, handpiece);
}

static bool all_have_beams(const struct bw_handpiece *handpiece) {
    for (size_t i = 0; i < handpiece->output.count; i++)
        if (!handpiece->emission_beam_given[i])
            return false;
    return handpiece->output.count > 0;
}

static bool any_tolerance(const struct bw_laser *laser, const struct bw_handpiece *handpiece) {
    for (size_t i = 0; i < handpiece->output.count; i++) {
        const struct bw_tolerance *emission = &laser->tolerances[i];
        if (emission->power > 0. || emission->duration > 0. || emission->rate > 0. ||
            handpiece->diameter_tolerance[i] > 0. || handpiece->divergence_tolerance[i] > 0.)
            return true;
    }
    return false;
}

/* The emissions that have no beam of their own take the handpiece's. */
static void share_beam(struct reading *reading, const struct section *section, const struct bw_beam *beam,
                       struct bw_handpiece *handpiece) {
    double diameter, divergence;
    read_beam_tolerance(reading, section, NULL, &diameter, &divergence);
    for (size_t i = 0; i < handpiece->output.count; i++)
        if (!handpiece->emission_beam_given[i]) {
            handpiece->output.beams[i] = *beam;
            beam_for_wavelength(section, handpiece->output.emissions[i].wavelength_nm, &handpiece->output.beams[i]);
            handpiece->diameter_tolerance[i] = diameter;
            handpiece->divergence_tolerance[i] = divergence;
        }
}

static void read_handpiece(struct reading *reading, const struct section *section, const struct bw_laser *laser,
                           struct bw_handpiece *handpiece) {
    struct bw_beam beam = {0};
    struct bw_output *output = &handpiece->output;
    snprintf(handpiece->name, sizeof handpiece->name, "%s", section->names[1]);
    handpiece->line = section->head->line;
    value_text(reading, section, "title", handpiece->title, sizeof handpiece->title);
    handpiece->has_exposure = value_number(reading, section, "exposure", exposures_s, &handpiece->exposure_s) == GIVEN;
    handpiece->has_exposed_skin =
        value_number(reading, section, "exposed_skin", skins_m2, &handpiece->exposed_skin_m2) == GIVEN;
    if (value_number(reading, section, "stand_off", stand_offs_m, &output->stand_off_m) != GIVEN)
        output->stand_off_m = 0.;
    output->count = laser->emission_count < BW_EMISSIONS_MAX ? laser->emission_count : BW_EMISSIONS_MAX;
    memcpy(output->emissions, laser->emissions, output->count * sizeof *output->emissions);
    read_emission_beams(reading, section, laser, handpiece);
    enum presence presence = read_beam(reading, section, NULL, any_wavelength_nm, &beam);
    handpiece->definition_assumed = handpiece->definition_assumed || beam_assumes_definition(section, NULL);
    if (presence == ABSENT && !all_have_beams(handpiece) && !section->lost_key && !reading->lost[SECTION_BEAM])
        fault_section(reading, section,
                      "has no beam; beam_diameter_mm and divergence_mrad would be right, or fibre_na "
                      "and fibre_core_mm");
    share_beam(reading, section, &beam, handpiece);
    handpiece->has_tolerance = any_tolerance(laser, handpiece);
}

static void read_handpieces_of(struct reading *reading, struct section *of) {
    struct bw_laser *laser = &reading->the_case->lasers[of->index];
    size_t at = 0, count = sections_count(reading, SECTION_HANDPIECE, laser->name, NULL);
    laser->handpieces = reading_allocate(reading, count, sizeof *laser->handpieces);
    if (count == 0 && !reading->lost[SECTION_HANDPIECE])
        fault_section(reading, of, "has no handpiece; [handpiece %s NAME] with its beam would be right", laser->name);
    for (struct section *section;
         laser->handpieces && (section = sections_next(reading, &at, SECTION_HANDPIECE, laser->name, NULL));) {
        section->index = laser->handpiece_count++;
        section->parent = of->index;
        section->made = true;
        read_handpiece(reading, section, laser, &laser->handpieces[section->index]);
    }
}

/* Handpieces of lasers that are not there, beams of handpieces that are not there. */
static void check_owners(struct reading *reading) {
    struct section *section;
    struct bw_beam beam;
    for (size_t at = 0; (section = sections_next(reading, &at, SECTION_HANDPIECE, NULL, NULL));)
        if (!section->made) {
            sections_refer(reading, section, SECTION_LASER, section->names[0], NULL);
            read_beam(reading, section, NULL, any_wavelength_nm, &beam);
        }
    for (size_t at = 0; (section = sections_next(reading, &at, SECTION_BEAM, NULL, NULL));)
        if (!section->made && sections_refer(reading, section, SECTION_LASER, section->names[0], NULL))
            sections_refer(reading, section, SECTION_HANDPIECE, section->names[0], section->names[1]);
}

void read_handpieces(struct reading *reading) {
    size_t at = 0;
    for (struct section *section; (section = sections_next(reading, &at, SECTION_LASER, NULL, NULL));)
        if (section->made)
            read_handpieces_of(reading, section);
    check_owners(reading);
}
