/* Shared inside src/beam only. */
#ifndef BEAMWARD_BEAM_INTERNAL_H
#define BEAMWARD_BEAM_INTERNAL_H

#include <beamward/beam.h>

/* ---- emission.c: power, energy, duration and rate ---------------------------------------------- */

static const double bw_beam_agreement = 1e-3; /* an over-determined set may contradict itself by so much (0.1 %) */

/* The innermost train, without levels: continuous if only a power is given. A single pulse has no rate. */
enum bw_status bw_beam_resolve_train(const struct bw_emission_input *input, bool single, struct bw_emission *emission,
                                     struct bw_error *error);

/* ---- timing.c: bursts, gates, counts ----------------------------------------------------------- */

enum bw_status bw_beam_resolve_timed(const struct bw_emission_input *input, struct bw_emission *emission,
                                     struct bw_error *error);

/* ---- pulses.c: lists ---------------------------------------------------------------------------- */

enum bw_status bw_beam_resolve_list(const struct bw_emission_input *input, struct bw_emission *emission,
                                    struct bw_error *error);
double bw_beam_list_window_energy(const struct bw_emission *emission, double window_s);
double bw_beam_list_pulse_count(const struct bw_emission *emission, double exposure_s);

#endif
