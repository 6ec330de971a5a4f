/* Lasers and their emissions. */
#include "internal.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* Wide enough for any laser, narrow enough to catch a slipped unit; the same as in beam where they meet. */
static const struct range wavelengths_nm = {180., 1e6};
static const struct range powers_w = {1e-9, 1e6}, peaks_w = {1e-9, 1e15}, energies_j = {1e-15, 1e6};
static const struct range durations_s = {1e-13, 3e4}; /* what the published tables cover */
static const struct range rates_hz = {1e-6, 1e12};

static bool any_wrong(const enum presence *presences, size_t count) {
    for (size_t i = 0; i < count; i++)
        if (presences[i] == WRONG)
            return true;
    return false;
}

static void read_emission(struct reading *reading, const struct section *section, struct bw_emission *emission,
                          struct bw_tolerance *tolerance, struct bw_timing *timing) {
    struct bw_emission_input input = {.timing = timing};
    struct bw_error error = {0};
    enum presence presences[] = {
        value_number(reading, section, "wavelength", wavelengths_nm, &input.wavelength_nm),
        value_number(reading, section, "average_power", powers_w, &input.average_power_w),
        value_number(reading, section, "peak_power", peaks_w, &input.peak_power_w),
        value_number(reading, section, "pulse_energy", energies_j, &input.pulse_energy_j),
        value_number(reading, section, "pulse_duration", durations_s, &input.pulse_duration_s),
        value_number(reading, section, "repetition_rate", rates_hz, &input.repetition_rate_hz),
        read_timing(reading, section, timing),
    };
    if (presences[0] == ABSENT) {
        fault_missing(reading, section, "wavelength");
        input.wavelength_nm = wavelengths_nm.least; /* so that the rest can be judged; the case is refused anyway */
    } else if (presences[0] == WRONG) {
        input.wavelength_nm = wavelengths_nm.least;
    }
    size_t count = sizeof presences / sizeof *presences;
    if (any_wrong(presences + 1, count - 1) || section->lost_key)
        return; /* what is left would be judged wrongly */
    if (bw_emission_resolve(&input, emission, &error) != BW_OK)
        fault_section(reading, section, "%s", error.text);
    snprintf(emission->name, sizeof emission->name, "%s", section->names[1]);
    tolerance->given = input;
    read_emission_tolerance(reading, section, tolerance);
}

static void read_emissions(struct reading *reading, const struct section *of, struct bw_laser *laser) {
    size_t at = 0, count = sections_count(reading, SECTION_EMISSION, laser->name, NULL);
    laser->emissions = reading_allocate(reading, count, sizeof *laser->emissions);
    laser->tolerances = reading_allocate(reading, count, sizeof *laser->tolerances);
    laser->timings = reading_allocate(reading, count, sizeof *laser->timings);
    if (count == 0 && !reading->lost[SECTION_EMISSION])
        fault_section(reading, of, "has no emission; [emission %s NAME] with wavelength and power would be right",
                      laser->name);
    if (count > BW_EMISSIONS_MAX)
        fault_section(reading, of, "has %zu emissions; at most %d would be right", count, BW_EMISSIONS_MAX);
    for (struct section *section;
         laser->emissions && laser->tolerances && laser->timings &&
         (section = sections_next(reading, &at, SECTION_EMISSION, laser->name, NULL));) {
        section->index = laser->emission_count++;
        section->parent = of->index;
        section->made = true;
        read_emission(reading, section, &laser->emissions[section->index], &laser->tolerances[section->index],
                      &laser->timings[section->index]);
    }
}

static void read_laser(struct reading *reading, const struct section *section, struct bw_laser *laser) {
    static const char *const classes[] = {"1", "1M", "2", "2M", "3R", "3B", "4"};
    size_t index = 0;
    snprintf(laser->name, sizeof laser->name, "%s", section->names[0]);
    laser->line = section->head->line;
    value_text(reading, section, "title", laser->title, sizeof laser->title);
    if (value_choice(reading, section, "labelled_class", classes, sizeof classes / sizeof *classes, &index) == GIVEN)
        snprintf(laser->labelled_class, sizeof laser->labelled_class, "%s", classes[index]);
    read_emissions(reading, section, laser);
}

/* Emissions of lasers that are not there. */
static void check_owners(struct reading *reading) {
    size_t at = 0;
    for (struct section *section; (section = sections_next(reading, &at, SECTION_EMISSION, NULL, NULL));)
        if (!section->made)
            sections_refer(reading, section, SECTION_LASER, section->names[0], NULL);
}

void read_lasers(struct reading *reading) {
    struct bw_case *the_case = reading->the_case;
    size_t at = 0, count = sections_count(reading, SECTION_LASER, NULL, NULL);
    sections_lose_orphans(reading, SECTION_EMISSION, SECTION_LASER);
    sections_lose_orphans(reading, SECTION_HANDPIECE, SECTION_LASER);
    the_case->lasers = reading_allocate(reading, count, sizeof *the_case->lasers);
    if (count == 0 && !reading->lost[SECTION_LASER])
        bw_faults_add(reading->faults, 0, "", "",
                      "has no laser; [laser NAME] with its emissions and handpieces would be "
                      "right");
    for (struct section *section;
         the_case->lasers && (section = sections_next(reading, &at, SECTION_LASER, NULL, NULL));) {
        section->index = the_case->laser_count++;
        section->made = true;
        read_laser(reading, section, &the_case->lasers[section->index]);
    }
    check_owners(reading);
}
