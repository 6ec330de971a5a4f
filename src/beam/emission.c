/* Completes what a person knows of an emission: Q = peak x d and P = Q x f, in any consistent set. */
#include "internal.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

enum quantity { AVERAGE, PEAK, ENERGY, DURATION, RATE, QUANTITIES };

static const double full_duty = 1e-9; /* duration x rate this close to 1 is a continuous emission */

/* Physical ranges wide enough for any laser and narrow enough to catch a slipped unit. */
static const struct {
    const char *name, *unit;
    double least, most;
} quantities[QUANTITIES] = {
    [AVERAGE] = {"average power", "W", 1e-12, 1e9}, [PEAK] = {"peak power", "W", 1e-12, 1e15},
    [ENERGY] = {"pulse energy", "J", 1e-18, 1e6},   [DURATION] = {"pulse duration", "s", 1e-15, 3e4},
    [RATE] = {"repetition rate", "Hz", 1e-6, 1e12},
};

/* whole = left x right; of a single pulse only the first */
static const struct law {
    enum quantity whole, left, right;
} laws[] = {{ENERGY, PEAK, DURATION}, {AVERAGE, ENERGY, RATE}};
enum { LAWS = 2, LAWS_OF_A_PULSE = 1 };
static const unsigned whole_train = (1u << QUANTITIES) - 1, whole_pulse = 1u << PEAK | 1u << ENERGY | 1u << DURATION;

struct phrase {
    char text[200];
};

static void add(struct phrase *phrase, const char *words) {
    size_t used = strlen(phrase->text);
    snprintf(phrase->text + used, sizeof phrase->text - used, "%s", words);
}

static void add_value(struct phrase *phrase, enum quantity which, double value) {
    static const struct {
        const char *unit;
        double per_s;
    } times[] = {{"s", 1.}, {"ms", 1e3}, {"us", 1e6}, {"ns", 1e9}, {"ps", 1e12}, {"fs", 1e15}};
    const char *unit = quantities[which].unit;
    if (which == DURATION)
        for (size_t i = 0; i < sizeof times / sizeof *times; i++)
            if (value * times[i].per_s >= 0.9999 || i + 1 == sizeof times / sizeof *times) {
                value *= times[i].per_s;
                unit = times[i].unit;
                break;
            }
    char number[48];
    snprintf(number, sizeof number, "%.6g %s", value, unit);
    add(phrase, number);
}

/* The names of a set of quantities, "a, b and c". */
static void add_names(struct phrase *phrase, unsigned set, const char *last_joint) {
    size_t left = 0;
    for (unsigned i = 0; i < QUANTITIES; i++)
        left += set >> i & 1u;
    for (unsigned i = 0; i < QUANTITIES; i++)
        if (set >> i & 1u) {
            add(phrase, quantities[i].name);
            left--;
            add(phrase, left == 0 ? "" : left == 1 ? last_joint : ", ");
        }
}

static unsigned known_set(const double value[QUANTITIES]) {
    unsigned set = 0;
    for (unsigned i = 0; i < QUANTITIES; i++)
        set |= isnan(value[i]) ? 0u : 1u << i;
    return set;
}

/* What follows from a set of known quantities by the laws. */
static unsigned closure(unsigned set, size_t law_count) {
    for (size_t round = 0; round < law_count; round++)
        for (size_t i = 0; i < law_count; i++) {
            unsigned law = 1u << laws[i].whole | 1u << laws[i].left | 1u << laws[i].right;
            unsigned missing = law & ~set;
            if ((missing & (missing - 1)) == 0)
                set |= missing;
        }
    return set;
}

static void complete(double value[QUANTITIES], size_t law_count) {
    for (size_t round = 0; round < law_count; round++)
        for (size_t i = 0; i < law_count; i++) {
            double *whole = &value[laws[i].whole], *left = &value[laws[i].left], *right = &value[laws[i].right];
            if (isnan(*whole))
                *whole = *left * *right;
            else if (isnan(*left))
                *left = *whole / *right;
            else if (isnan(*right))
                *right = *whole / *left;
        }
}

static enum bw_status too_little(unsigned given, struct bw_error *error) {
    struct phrase have = {""}, need = {""};
    unsigned enough = 0;
    for (unsigned i = 0; i < QUANTITIES; i++)
        if ((given >> i & 1u) == 0 && closure(given | 1u << i, LAWS) == whole_train)
            enough |= 1u << i;
    if (given == 0)
        return bw_error_set(error, BW_INPUT,
                            "no power or energy is given; give the average power of a continuous emission, or of a "
                            "pulsed one three of average power, peak power, pulse energy, pulse duration, repetition "
                            "rate");
    add_names(&have, given, " and ");
    if (enough == 0)
        return bw_error_set(error, BW_INPUT,
                            "%s alone does not describe the pulses; give three of average power, peak power, pulse "
                            "energy, pulse duration, repetition rate",
                            have.text);
    add_names(&need, enough, " or ");
    return bw_error_set(error, BW_INPUT, "%s do not describe the pulses; give the %s as well", have.text, need.text);
}

static enum bw_status check_range(const double value[QUANTITIES], unsigned given, struct bw_error *error) {
    for (unsigned i = 0; i < QUANTITIES; i++)
        if (!isnan(value[i]) && !(value[i] >= quantities[i].least && value[i] <= quantities[i].most))
            return bw_error_set(error, BW_ARGUMENT, "%s %s %g %s, outside %g to %g %s", quantities[i].name,
                                given >> i & 1u ? "is" : "works out as", value[i], quantities[i].unit,
                                quantities[i].least, quantities[i].most, quantities[i].unit);
    return BW_OK;
}

static enum bw_status contradiction(const struct law *law, const double value[QUANTITIES], unsigned given,
                                    struct bw_error *error) {
    struct phrase whole = {""}, parts = {""}, product = {""};
    double product_si = value[law->left] * value[law->right];
    add_value(&whole, law->whole, value[law->whole]);
    if (law->left == ENERGY && (given >> ENERGY & 1u) == 0) {
        add_value(&parts, PEAK, value[PEAK]);
        add(&parts, " x ");
        add_value(&parts, DURATION, value[DURATION]);
    } else {
        add_value(&parts, law->left, value[law->left]);
    }
    add(&parts, " x ");
    add_value(&parts, law->right, value[law->right]);
    add_value(&product, law->whole, product_si);
    return bw_error_set(error, BW_INPUT, "%s %s, but %s gives %s: %.3g %% off; leave one of them out or correct one",
                        quantities[law->whole].name, whole.text, parts.text, product.text,
                        100. * fabs(value[law->whole] / product_si - 1.));
}

static enum bw_status check_agreement(const double value[QUANTITIES], unsigned given, size_t law_count,
                                      struct bw_error *error) {
    for (size_t i = 0; i < law_count; i++) {
        double product = value[laws[i].left] * value[laws[i].right];
        if (!(fabs(value[laws[i].whole] - product) <= bw_beam_agreement * product))
            return contradiction(&laws[i], value, given, error);
    }
    return BW_OK;
}

/* Where more than needed were given, they differ within the tolerance: the largest energy that follows from them
 * holds. */
static void settle(double value[QUANTITIES], bool single) {
    value[ENERGY] = fmax(value[ENERGY], value[PEAK] * value[DURATION]);
    if (!single)
        value[ENERGY] = fmax(value[ENERGY], value[AVERAGE] / value[RATE]);
    value[PEAK] = value[ENERGY] / value[DURATION];
    if (!single)
        value[AVERAGE] = value[ENERGY] * value[RATE];
}

static size_t count_of(unsigned set) {
    size_t count = 0;
    for (; set != 0; set >>= 1)
        count += set & 1u;
    return count;
}

static enum bw_status too_little_of_a_pulse(unsigned given, struct bw_error *error) {
    struct phrase have = {""};
    add_names(&have, given, " and ");
    return bw_error_set(error, BW_INPUT, "%s%s; a single pulse needs two of peak power, pulse energy, pulse duration",
                        given == 0 ? "nothing is given of the pulse" : have.text,
                        given == 0 ? "" : " alone does not describe the pulse");
}

static enum bw_status resolve_pulses(double value[QUANTITIES], bool single, struct bw_error *error) {
    unsigned given = known_set(value), all = single ? whole_pulse : whole_train;
    size_t law_count = single ? LAWS_OF_A_PULSE : LAWS, needed = single ? 2 : 3;
    if (closure(given, law_count) != all)
        return single ? too_little_of_a_pulse(given, error) : too_little(given, error);
    complete(value, law_count);
    enum bw_status status = check_agreement(value, given, law_count, error);
    if (status == BW_OK)
        status = check_range(value, given, error);
    if (status != BW_OK)
        return status;
    if (count_of(given) > needed)
        settle(value, single);
    double duty = value[DURATION] * value[RATE];
    if (!single && !(duty <= 1. + full_duty))
        return bw_error_set(error, BW_INPUT,
                            "pulse duration %g s x repetition rate %g Hz is %.6g: the pulses overlap; it must be at "
                            "most 1",
                            value[DURATION], value[RATE], duty);
    return BW_OK;
}

static void continuous(struct bw_emission *emission, double average_power_w) {
    emission->continuous = true;
    emission->average_power_w = emission->peak_power_w = average_power_w;
    emission->pulse_energy_j = emission->pulse_duration_s = emission->repetition_rate_hz = 0.;
}

static struct bw_emission unknown(void) {
    return (struct bw_emission){.wavelength_nm = nan(""),
                                .average_power_w = nan(""),
                                .peak_power_w = nan(""),
                                .pulse_energy_j = nan(""),
                                .pulse_duration_s = nan(""),
                                .repetition_rate_hz = nan("")};
}

enum bw_status bw_beam_resolve_train(const struct bw_emission_input *input, bool single, struct bw_emission *emission,
                                     struct bw_error *error) {
    double value[QUANTITIES] = {
        [AVERAGE] = input->average_power_w,   [PEAK] = input->peak_power_w,       [ENERGY] = input->pulse_energy_j,
        [DURATION] = input->pulse_duration_s, [RATE] = input->repetition_rate_hz,
    };
    enum bw_status status = check_range(value, known_set(value), error);
    bool average_only = known_set(value) == 1u << AVERAGE;
    if (status == BW_OK && !average_only)
        status = resolve_pulses(value, single, error);
    if (status != BW_OK)
        return status;
    emission->wavelength_nm = input->wavelength_nm;
    if (average_only || value[DURATION] * value[RATE] >= 1. - full_duty) {
        continuous(emission, value[AVERAGE]);
        return BW_OK;
    }
    emission->average_power_w = single ? value[PEAK] : value[AVERAGE];
    emission->peak_power_w = value[PEAK];
    emission->pulse_energy_j = value[ENERGY];
    emission->pulse_duration_s = value[DURATION];
    emission->repetition_rate_hz = single ? 0. : value[RATE];
    return BW_OK;
}

/* Any consistent set of power, energy, duration, rate and timing made complete.
 * Given:    input     what is known; NAN where not given
 * Returned: emission  all fields consistent, the name empty; its quantities NAN on error (Notes 1, 2)
 * Returns:  BW_OK; BW_ARGUMENT out of range; BW_INPUT too little given, contradiction, pulses overlap
 * Notes:    1) Only the average power: continuous. So is a train without gaps (duration x rate = 1).
 *           2) More than the needed three within 0.1 %: the largest energy that follows from them holds. */
enum bw_status bw_emission_resolve(const struct bw_emission_input *input, struct bw_emission *emission,
                                   struct bw_error *error) {
    enum bw_status status = BW_OK;
    *emission = unknown();
    if (!(input->wavelength_nm >= 180. && input->wavelength_nm <= 1e6))
        return bw_error_set(error, BW_ARGUMENT, "wavelength is %g nm, outside 180 to 1e+06 nm", input->wavelength_nm);
    if (input->timing == NULL)
        status = bw_beam_resolve_train(input, false, emission, error);
    else if (input->timing->pulses != NULL)
        status = bw_beam_resolve_list(input, emission, error);
    else
        status = bw_beam_resolve_timed(input, emission, error);
    if (status != BW_OK)
        *emission = unknown();
    return status;
}
