/* beam - what leaves a handpiece: emissions, pulse trains, propagation, power through an aperture.
 * Uses: base.  Used by: hazard, room, casefile, assess, report, cli.
 * Plain values, no state. */
#ifndef BEAMWARD_BEAM_H
#define BEAMWARD_BEAM_H

#include <beamward/base.h>

#ifdef __cplusplus
extern "C" {
#endif

/* ---- emissions and trains ------------------------------------------------------------------- */

/* One pulse of a measured or irregular train, rectangular. */
struct bw_pulse {
    double start_s, duration_s, energy_j;
};

/* How the pulses follow each other, beyond duration and rate; NAN where not given. A zeroed struct is not "nothing
 * given": start from bw_timing_none(). */
struct bw_timing {
    double pulse_count;                                             /* 1 = a single pulse, else so many and no more */
    double burst_on_s, burst_period_s, burst_pulses, burst_rate_hz; /* pulses inside a burst */
    double gate_on_s, gate_period_s;                                /* bursts, or pulses, inside a gate */
    const struct bw_pulse *pulses; /* a train as measured, kept by reference; NULL = none. Then nothing else is given */
    size_t pulses_given;
};
struct bw_timing bw_timing_none(void);

/* What a person knows of an emission; NAN where not given. Powers and rate are those of the innermost train, that is
 * while burst and gate are on: what a display shows, and the safe reading of a mean given for a gated emission. */
struct bw_emission_input {
    double wavelength_nm;
    double average_power_w, peak_power_w;
    double pulse_energy_j, pulse_duration_s, repetition_rate_hz;
    const struct bw_timing *timing; /* NULL = a train without end, or continuous */
};

/* What is inside goes on for on_s and starts anew every period_s: the pulses of a burst, the bursts of a gate. What
 * has begun while the level is on is finished. */
struct bw_level {
    double on_s, period_s;
    double holds; /* of the next level inward, or pulses; 2 or more */
};
enum { BW_LEVELS_MAX = 2 };

/* A train of rectangular pulses, or a continuous emission. All fields consistent. Of a zeroed struct the fields after
 * the rate say: a regular train without end.
 * Regular: pulses of one kind, at the rate, inside the levels if there are any; each level opens with what it holds.
 * Irregular: a list. pulse_energy_j and pulse_duration_s are those of the pulse with the most energy, peak_power_w the
 * largest of all; energies and powers may be scaled together, the list then stands for the scaled train. */
struct bw_emission {
    char name[BW_NAME_SIZE];
    double wavelength_nm;     /* 180 to 1e6 */
    bool continuous;
    double average_power_w;   /* without end: over whole periods of the outermost level; else from the first pulse's
                                 start to the last one's end (a single pulse: its peak power) */
    double peak_power_w;      /* continuous: the average power */
    double pulse_energy_j;    /* continuous: 0 */
    double pulse_duration_s;  /* continuous: 0 */
    double repetition_rate_hz;/* of the innermost train; continuous, single pulse, list: 0 */
    size_t level_count;       /* 0 to BW_LEVELS_MAX */
    struct bw_level levels[BW_LEVELS_MAX]; /* innermost first */
    size_t pulse_count;       /* pulses in all; 0 = without end */
    const struct bw_pulse *pulses; /* a list of pulse_count, ascending, memory of the caller; NULL = regular */
};

/* Completes any consistent set of power, energy, duration, rate and timing. Only average_power_w: continuous.
 * Returns: BW_OK; BW_ARGUMENT out of range; BW_INPUT if too little is given (says what is missing) or
 * if the set contradicts itself by more than 0.1 % (says by how much). */
enum bw_status bw_emission_resolve(const struct bw_emission_input *input, struct bw_emission *emission,
                                   struct bw_error *error);

/* How far what is known of an emission may be off, as shares (0.1 = 10 %), 0 or more. */
struct bw_tolerance {
    struct bw_emission_input given;
    double power;          /* of average power, peak power and pulse energy together */
    double duration, rate; /* of the pulses; below 1 */
};
/* What was given, with its powers and energy, pulse duration and rate so many times as large.
 * Returns: as bw_emission_resolve. */
enum bw_status bw_emission_varied(const struct bw_emission_input *given, double power, double duration, double rate,
                                  struct bw_emission *emission, struct bw_error *error);

enum { BW_PULSES_MAX = 1000000 }; /* of a list */
/* What is wrong with the pulse `index` of a list, after those before it; error may be NULL. */
enum bw_status bw_pulses_check(const struct bw_pulse *pulses, size_t index, struct bw_error *error);

/* Largest energy that the emission sends in any window of this length [J]. Closed form; of a list one pass. */
double bw_train_window_energy(const struct bw_emission *emission, double window_s);
/* Most pulses, whole or begun, in an exposure of this length (1 for continuous). */
double bw_train_pulse_count(const struct bw_emission *emission, double exposure_s);

/* The pulses of a regular train have numbers from 0. A window of so many pulses is shortest if it opens with pulse
 * first, for one of these `first` (src/beam/train.c has the proof); one alone unless bursts or gates follow each other
 * closer than what they hold. Returns: how many. */
enum { BW_STARTS_MAX = 4 };
size_t bw_train_starts(const struct bw_emission *emission, double first[BW_STARTS_MAX]);
/* Time from the start of pulse `first` to that of pulse first + next [s]. */
double bw_train_span_s(const struct bw_emission *emission, double first, double next);
/* Pulses, whole or begun, of a window that opens with pulse `first`; not more than pulse_count. */
double bw_train_pulses_from(const struct bw_emission *emission, double first, double window_s);

/* ---- geometry ------------------------------------------------------------------------------- */

enum bw_profile { BW_GAUSSIAN, BW_TOP_HAT };
enum bw_spread { BW_HYPERBOLIC, BW_LINEAR };
enum bw_diameter_definition { BW_D63, BW_D86, BW_FWHM, BW_D_TOP_HAT };

/* Several like emitters in one head: the eye sees one, some or all of them. */
enum { BW_EMITTERS_MAX = 16 };
struct bw_cluster {
    size_t count;                       /* 0 and 1: one emitter, in the middle of the head */
    struct bw_point at[BW_EMITTERS_MAX];/* across the head, from its axis */
    double share[BW_EMITTERS_MAX];      /* of the emission's power; they sum to 1 */
};

/* A beam, round or elliptical. Diameters d63 (1/e of the peak irradiance; for a top hat its edge). Zeroed members
 * from `elliptical` on: round, from one emitter, a point source. */
struct bw_beam {
    enum bw_profile profile;
    enum bw_spread spread;
    double diameter_m;     /* at the waist, 1e-9 to 10; x axis of an elliptical beam */
    double divergence_rad; /* full angle, d63, 0 (collimated) to pi; x axis */
    double waist_m;        /* distance of the waist in front of the exit; 0 = at the exit; of both axes */
    double exit_diameter_m;/* at the exit (equals diameter_m when waist_m is 0); x axis */
    bool elliptical;
    double diameter_y_m, divergence_y_rad, exit_diameter_y_m; /* y axis, only if elliptical */
    double source_m;        /* diameter of the apparent source; 0 = a point, the strict case */
    double source_behind_m; /* how far it lies behind the exit */
    struct bw_cluster cluster; /* of emitters, each with this beam, all axes parallel */
};

/* d63 of a Gaussian from another definition: d86 = d63 sqrt 2, fwhm = d63 sqrt(ln 2); a top hat's is its own.
 * Serves divergences too, which follow the definition of their diameter. */
double bw_diameter_to_d63(double diameter_m, enum bw_diameter_definition definition);
double bw_diameter_from_d63(double diameter_m, enum bw_diameter_definition definition);

/* Fibre end: numerical aperture at the 5 % points, d63 half-angle = NA / sqrt(ln 20). */
struct bw_beam bw_beam_from_fibre(double numerical_aperture, double core_m);
/* Single-mode fibre end: the mode field's 1/e^2 diameter and the diffraction of a Gaussian of that width. */
struct bw_beam bw_beam_from_single_mode_fibre(double mode_field_m, double wavelength_nm);
/* Apparent source of a multimode fibre end: the circle that holds 63 % of an evenly lit core. */
double bw_fibre_source_m(double core_m);
/* Lens: waist at the focal length, divergence beam/f behind it, waist diameter f x incoming divergence.
 * beam_m and divergence_rad are d63 at the lens. */
struct bw_beam bw_beam_from_lens(double focal_length_m, double beam_m, double divergence_rad, enum bw_profile profile);

/* The beam with the diameter and the divergence that were given so many times as large. */
struct bw_beam bw_beam_varied(const struct bw_beam *beam, double diameter, double divergence);

/* d63 at a distance from the exit: hyperbolic d^2 = a^2 + (phi r)^2, linear d = a + phi |r|, r from the waist.
 * Of an elliptical beam the smaller axis; widest: the larger. */
double bw_beam_diameter_m(const struct bw_beam *beam, double distance_m);
double bw_beam_widest_m(const struct bw_beam *beam, double distance_m);
/* The smallest at this distance or farther. */
double bw_beam_narrowest_m(const struct bw_beam *beam, double distance_m);
/* Farthest from the head's axis that the beams of all emitters leave it: half the wider exit, beyond the outermost. */
double bw_beam_exit_radius_m(const struct bw_beam *beam);
/* Farthest emitter from the head's axis. */
double bw_beam_outermost_m(const struct bw_beam *beam);
/* Share of the power of one emitter that goes through a centred round aperture:
 * Gaussian 1 - exp(-(D/d)^2); top hat min(1, (D/d)^2); elliptical by quadrature and in closed form. */
double bw_beam_fraction(const struct bw_beam *beam, double distance_m, double aperture_m);
/* Mean irradiance over the aperture at the beam's centre, per watt [1/m2]. aperture 0 = peak irradiance. Of a
 * cluster: as if all power left one emitter, which no place exceeds. */
double bw_beam_irradiance_per_w(const struct bw_beam *beam, double distance_m, double aperture_m);
/* The same two with a step each. */
double bw_beam_diameter_working(const struct bw_beam *beam, double distance_m, struct bw_working *working);
double bw_beam_irradiance_working(const struct bw_beam *beam, double distance_m, double aperture_m,
                                  struct bw_working *working);
/* Upper bound of the mean irradiance over an aperture whose centre is off the axis by offset_m, per watt;
 * equals bw_beam_irradiance_per_w at offset 0 and never rises with the offset. */
double bw_beam_irradiance_off_axis_per_w(const struct bw_beam *beam, double distance_m, double aperture_m,
                                         double offset_m);
/* The mean itself for round beams, an upper bound for elliptical ones. */
double bw_beam_irradiance_beside_per_w(const struct bw_beam *beam, double distance_m, double aperture_m,
                                       double offset_m);
/* Upper bound of the latter anywhere between two distances; exact where they are equal. */
double bw_beam_irradiance_between_per_w(const struct bw_beam *beam, double near_m, double far_m, double aperture_m,
                                        double offset_m);

#ifdef __cplusplus
}
#endif
#endif
