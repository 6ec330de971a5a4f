/* How wide the beam is at a distance, and what of it goes through a round aperture. */
#include <beamward/beam.h>

#include <math.h>

/* Diameter d63 at a distance:   hyperbolic d^2 = a^2 + (phi z)^2,   linear d = a + phi |z|,   z from the waist
 * Given:    beam
 *           distance_m   from the exit [m], 0 or more, infinity allowed
 * Returns:  d [m]; NAN if the distance is NaN or negative
 * Notes:    1) phi z stands for 2 z tan(phi/2), which is larger: the spot errs to the small, safe side.
 *           2) On its way to a waist the beam is never wider than it left the exit. */
double bw_beam_diameter_m(const struct bw_beam *beam, double distance_m) {
    if (!(distance_m >= 0.))
        return nan("");
    if (!(beam->divergence_rad > 0. || beam->divergence_rad < 0. || isnan(beam->divergence_rad)))
        return beam->diameter_m; /* collimated, also at infinity */
    double growth_m = beam->divergence_rad * fabs(distance_m - beam->waist_m);
    double diameter_m = beam->spread == BW_LINEAR ? beam->diameter_m + growth_m : hypot(beam->diameter_m, growth_m);
    if (distance_m < beam->waist_m && beam->exit_diameter_m > 0. && beam->exit_diameter_m < diameter_m)
        return beam->exit_diameter_m;
    return diameter_m;
}

/* (D/d)^2 */
static double squared_ratio(double aperture_m, double diameter_m) {
    return (aperture_m / diameter_m) * (aperture_m / diameter_m);
}

static double disc_irradiance_per_w(double diameter_m) {
    return 4. / bw_pi / diameter_m / diameter_m; /* two divisions: d^2 may overflow */
}

/* Share of the power through a centred round aperture:   Gaussian 1 - exp(-(D/d)^2),   top hat min(1, (D/d)^2)
 * Given:    beam, distance_m; aperture_m  D  diameter [m], 0 or more
 * Returns:  share, 0 to 1; NAN if an argument is NaN or negative */
double bw_beam_fraction(const struct bw_beam *beam, double distance_m, double aperture_m) {
    double diameter_m = bw_beam_diameter_m(beam, distance_m);
    if (!(aperture_m >= 0.) || isnan(diameter_m))
        return nan("");
    if (!(aperture_m > 0.))
        return 0.;
    double x = squared_ratio(aperture_m, diameter_m);
    return beam->profile == BW_TOP_HAT ? fmin(1., x) : -expm1(-x);
}

/* Mean irradiance over a centred aperture, per watt.
 * Given:    beam, distance_m; aperture_m  D  [m]; 0 = peak irradiance 4 / (pi d^2)
 * Returns:  E/P [1/m2]; NAN if an argument is NaN or negative; infinite at the peak of a beam without width
 * Notes:    fraction / (pi D^2/4), arranged so that nothing cancels when the beam is far wider than D. */
double bw_beam_irradiance_per_w(const struct bw_beam *beam, double distance_m, double aperture_m) {
    double diameter_m = bw_beam_diameter_m(beam, distance_m);
    if (!(aperture_m >= 0.) || isnan(diameter_m))
        return nan("");
    if (beam->profile == BW_TOP_HAT)
        return disc_irradiance_per_w(aperture_m > diameter_m ? aperture_m : diameter_m);
    if (!(aperture_m > 0.))
        return disc_irradiance_per_w(diameter_m);
    double x = squared_ratio(aperture_m, diameter_m);
    if (x > 1.)
        return -expm1(-x) * disc_irradiance_per_w(aperture_m);
    return (x > 0. ? -expm1(-x) / x : 1.) * disc_irradiance_per_w(diameter_m);
}

/* Upper bound of the mean irradiance over an aperture off the axis, per watt.
 * Given:    beam, distance_m, aperture_m; offset_m  of the centre of the aperture from the axis [m], 0 or more
 * Returns:  bound [1/m2]; NAN if an argument is NaN or negative
 * Notes:    1) Gaussian: no point of the aperture is nearer to the axis than offset - D/2, so the mean is at most
 *              the peak profile there; nor is it more than on the axis (the overlap of two radially falling
 *              functions is largest when they are concentric). The smaller of the two falls with the offset.
 *           2) Top hat: the mean on the axis while beam and aperture overlap at all, then nothing. */
double bw_beam_irradiance_off_axis_per_w(const struct bw_beam *beam, double distance_m, double aperture_m,
                                         double offset_m) {
    double on_axis = bw_beam_irradiance_per_w(beam, distance_m, aperture_m);
    if (!(offset_m >= 0.) || isnan(on_axis))
        return nan("");
    double diameter_m = bw_beam_diameter_m(beam, distance_m);
    double nearest_m = offset_m - aperture_m / 2.;
    if (!(nearest_m > 0.))
        return on_axis;
    if (beam->profile == BW_TOP_HAT)
        return nearest_m > diameter_m / 2. ? 0. : on_axis;
    if (!(diameter_m > 0.))
        return 0.;
    if (!(diameter_m < HUGE_VAL))
        return on_axis;
    double reach = 2. * nearest_m / diameter_m;
    return fmin(on_axis, disc_irradiance_per_w(diameter_m) * exp(-reach * reach));
}
