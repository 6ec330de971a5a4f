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

/* Beam from the end of a single-mode fibre.
 * Given:    mode_field_m    1/e^2 diameter of the mode field [m]
 *           wavelength_nm
 * Returns:  Gaussian beam: d63 = field / sqrt 2, full d63 angle 2 sqrt 2 lambda / (pi field) (Notes)
 * Notes:    1) Diffraction of a Gaussian: 1/e^2 radius w(r) = lambda r / (pi w0), w0 = field / 2; as d63 the diameter
 *              is 2 sqrt 2 lambda r / (pi field).
 *           2) Nothing of this width spreads less. Where the fibre carries more modes than one (an aiming beam of
 * shorter wavelength), the true spot is larger: this one errs to the small, safe side. Source:   IEC 60825-2, hazard
 * distance of single-mode fibres (from memory); the Gaussian beam is textbook optics. */
struct bw_beam bw_beam_from_single_mode_fibre(double mode_field_m, double wavelength_nm) {
    double d63_m = mode_field_m / sqrt(2.);
    return (struct bw_beam){
        .profile = BW_GAUSSIAN,
        .spread = BW_HYPERBOLIC,
        .diameter_m = d63_m,
        .divergence_rad = 2. * sqrt(2.) * wavelength_nm * 1e-9 / (bw_pi * mode_field_m),
        .waist_m = 0.,
        .exit_diameter_m = d63_m,
    };
}

/* Apparent source of a multimode fibre end.
 * Given:    core_m
 * Returns:  core x sqrt(1 - 1/e): the circle that holds 63 % of an evenly lit core (Note)
 * Notes:    A core that is brighter in its middle (graded index) is held by a smaller circle; who knows that gives the
 *           source's diameter instead.  Source: the 63 % convention for apparent sources, common practice. */
double bw_fibre_source_m(double core_m) {
    return core_m * sqrt(-expm1(-1.));
}

/* Beam behind a focusing lens.
 * Given:    focal_length_m, beam_m (d63 at the lens), divergence_rad (d63, full, of the incoming beam), profile
 * Returns:  beam with its waist in the focus: diameter f x divergence, full angle beam / f beyond it
 * Notes:    1) Geometric optics. f x divergence is exact for the spot in the focal plane of an ideal lens, whatever
 * made the divergence; aberrations only widen it. 2) An elliptical beam passes the lens axis by axis: call it for each.
 */
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
