/* Shared inside src/beam only. */
#ifndef BEAMWARD_BEAM_INTERNAL_H
#define BEAMWARD_BEAM_INTERNAL_H

#include <beamward/beam.h>

/* aperture.c: share of the power, 0 to 1, through a round aperture, of an elliptical Gaussian (widths d63) centred in
 * it, and of a round one beside its centre. */
double bw_beam_share_elliptical(double width_x_m, double width_y_m, double aperture_m);
double bw_beam_share_beside(double width_m, double aperture_m, double offset_m);
/* The same of evenly lit ellipses and discs. */
double bw_beam_overlap_elliptical(double width_x_m, double width_y_m, double aperture_m);
double bw_beam_overlap_beside(double width_m, double aperture_m, double offset_m);
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
