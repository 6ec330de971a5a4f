/* How far what is given may be off. */
#include "internal.h"

#include <math.h>

static const struct range shares = {0., 0.9}, power_shares = {0., 10.}; /* a power may be far more, never 100 % less */

static double read_share(struct reading *reading, const struct section *section, const char *key, struct range range) {
    double share;
    return value_number(reading, section, key, range, &share) == GIVEN ? share : 0.;
}

/* A tolerance of what is not given would be passed over. */
static double share_of(struct reading *reading, const struct section *section, const char *quantity, const char *key) {
    const struct bw_ini_entry *entry = value_entry(section, key, NULL);
    if (entry && !section->lost_key && !value_given(section, quantity))
        fault_key(reading, entry, "%s is not given here, so nothing has this tolerance; give %s, or remove the line",
                  quantity, quantity);
    return read_share(reading, section, key, shares);
}

/* Powers and energy go up together: the largest of their tolerances holds for all. */
void read_emission_tolerance(struct reading *reading, const struct section *section, struct bw_tolerance *tolerance) {
    static const char *const keys[] = {"tolerance", "power_tolerance", "average_power_tolerance",
                                       "peak_power_tolerance", "pulse_energy_tolerance"};
    for (size_t i = 0; i < sizeof keys / sizeof *keys; i++)
        tolerance->power = fmax(tolerance->power, read_share(reading, section, keys[i], power_shares));
    tolerance->duration = share_of(reading, section, "pulse_duration", "pulse_duration_tolerance");
    tolerance->rate = share_of(reading, section, "repetition_rate", "repetition_rate_tolerance");
}

void read_beam_tolerance(struct reading *reading, const struct section *section, const struct section *handpiece,
                         double *diameter, double *divergence) {
    static const char *const keys[] = {"diameter_tolerance", "divergence_tolerance"};
    double *const values[] = {diameter, divergence};
    for (size_t i = 0; i < sizeof keys / sizeof *keys; i++) {
        struct bw_faults none = {0}, *faults = reading->faults;
        *values[i] = read_share(reading, section, keys[i], shares);
        if (!handpiece || value_given(section, keys[i]))
            continue;
        reading->faults = &none; /* told at the handpiece */
        *values[i] = read_share(reading, handpiece, keys[i], shares);
        reading->faults = faults;
        bw_faults_free(&none);
    }
}
