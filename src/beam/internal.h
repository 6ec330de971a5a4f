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

#endif
