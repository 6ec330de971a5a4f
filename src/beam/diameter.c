/* Diameter definitions, and the beams that a fibre end and a lens make. */
#include <beamward/beam.h>

#include <math.h>

/* Diameter (or divergence) of a definition, in units of d63. Gaussian exp(-4 r^2/d63^2): 1/e^2 at
 * sqrt 2, half at sqrt(ln 2). A top hat has one edge. */
static double in_d63(enum bw_diameter_definition definition) {
    switch (definition) {
    case BW_D63:
    case BW_D_TOP_HAT:
        return 1.;
    case BW_D86:
        return sqrt(2.);
    case BW_FWHM:
        return sqrt(log(2.));
    }
    return nan("");
}

/* Given: a diameter [m] or divergence [rad] and its definition.  Returns: the same as d63. */
double bw_diameter_to_d63(double diameter_m, enum bw_diameter_definition definition) {
    return diameter_m / in_d63(definition);
}

/* Given: a d63 [m] or [rad] and a definition.  Returns: the diameter by that definition. */
double bw_diameter_from_d63(double diameter_m, enum bw_diameter_definition definition) {
    return diameter_m * in_d63(definition);
}

/* Beam from a bare fibre end.
 * Given:    numerical_aperture  sine of the half-angle at the 5 % points, above 0 to 1
 *           core_m              core diameter [m]
 * Returns:  Gaussian beam, d63 full angle 2 NA / sqrt(ln 20) (Note)
 * Notes:    NA stands for the angle arcsin(NA), which is larger: the spot errs to the small, safe side. */
struct bw_beam bw_beam_from_fibre(double numerical_aperture, double core_m) {
    return (struct bw_beam){
        .profile = BW_GAUSSIAN,
        .spread = BW_HYPERBOLIC,
        .diameter_m = core_m,
        .divergence_rad = 2. * numerical_aperture / sqrt(log(20.)),
        .waist_m = 0.,
        .exit_diameter_m = core_m,
    };
}

/* Beam behind a focusing lens.
 * Given:    focal_length_m, beam_m (d63 at the lens), divergence_rad (d63, full, of the incoming beam), profile
 * Returns:  beam with its waist in the focus: diameter f x divergence, full angle beam / f beyond it */
struct bw_beam bw_beam_from_lens(double focal_length_m, double beam_m, double divergence_rad, enum bw_profile profile) {
    return (struct bw_beam){
        .profile = profile,
        .spread = BW_HYPERBOLIC,
        .diameter_m = focal_length_m * divergence_rad,
        .divergence_rad = beam_m / focal_length_m,
        .waist_m = focal_length_m,
        .exit_diameter_m = beam_m,
    };
}
