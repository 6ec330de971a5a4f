/* How wide the beam is at a distance, and what of it goes through a round aperture. */
#include "internal.h"

#include <math.h>

/* One axis of a beam: hyperbolic d^2 = a^2 + (phi z)^2, linear d = a + phi |z|, z from the waist. */
static double width_m(const struct bw_beam *beam, double waist_width_m, double divergence_rad, double exit_width_m,
                      double distance_m) {
    if (!(distance_m >= 0.))
        return nan("");
    if (!(divergence_rad > 0. || divergence_rad < 0. || isnan(divergence_rad)))
        return waist_width_m; /* collimated, also at infinity */
    double growth_m = divergence_rad * fabs(distance_m - beam->waist_m);
    double diameter_m = beam->spread == BW_LINEAR ? waist_width_m + growth_m : hypot(waist_width_m, growth_m);
    if (distance_m < beam->waist_m && exit_width_m > 0. && exit_width_m < diameter_m)
        return exit_width_m;
    return diameter_m;
}

static double width_x_m(const struct bw_beam *beam, double distance_m) {
    return width_m(beam, beam->diameter_m, beam->divergence_rad, beam->exit_diameter_m, distance_m);
}

static double width_y_m(const struct bw_beam *beam, double distance_m) {
    if (!beam->elliptical)
        return width_x_m(beam, distance_m);
    return width_m(beam, beam->diameter_y_m, beam->divergence_y_rad, beam->exit_diameter_y_m, distance_m);
}

/* Diameter d63 at a distance; of an elliptical beam its smaller axis.
 * Given:    beam
 *           distance_m   from the exit [m], 0 or more, infinity allowed
 * Returns:  d [m]; NAN if the distance is NaN or negative
 * Notes:    1) phi z stands for 2 z tan(phi/2), which is larger: the spot errs to the small, safe side.
 *           2) On its way to a waist the beam is never wider than it left the exit.
 *           3) A round spot of the smaller axis, all power in it, is stricter than the ellipse. */
double bw_beam_diameter_m(const struct bw_beam *beam, double distance_m) {
    double x_m = width_x_m(beam, distance_m), y_m = width_y_m(beam, distance_m);
    return x_m <= y_m || isnan(x_m) ? x_m : y_m;
}

/* The larger axis. */
double bw_beam_widest_m(const struct bw_beam *beam, double distance_m) {
    double x_m = width_x_m(beam, distance_m), y_m = width_y_m(beam, distance_m);
    return x_m >= y_m || isnan(x_m) ? x_m : y_m;
}

double bw_beam_outermost_m(const struct bw_beam *beam) {
    double farthest_m = 0.;
    for (size_t i = 0; i < beam->cluster.count && i < BW_EMITTERS_MAX; i++)
        farthest_m = fmax(farthest_m, hypot(beam->cluster.at[i].x_m, beam->cluster.at[i].y_m));
    return farthest_m;
}

double bw_beam_exit_radius_m(const struct bw_beam *beam) {
    double exit_m = beam->elliptical ? fmax(beam->exit_diameter_m, beam->exit_diameter_y_m) : beam->exit_diameter_m;
    return exit_m / 2. + bw_beam_outermost_m(beam);
}

/* The beam where a plane cuts it. */
struct cut {
    enum bw_profile profile;
    bool elliptical;
    double x_m, y_m; /* d63 */
};

static struct cut cut_at(const struct bw_beam *beam, double distance_m) {
    return (struct cut){beam->profile, beam->elliptical, width_x_m(beam, distance_m), width_y_m(beam, distance_m)};
}

/* (D/d)^2 */
static double squared_ratio(double aperture_m, double diameter_m) {
    return (aperture_m / diameter_m) * (aperture_m / diameter_m);
}

static double area_per_w(double x_m, double y_m) {
    return 4. / bw_pi / x_m / y_m; /* divisions: a product may overflow */
}

static double disc_irradiance_per_w(double diameter_m) {
    return area_per_w(diameter_m, diameter_m);
}

static double elliptical_share(const struct cut *cut, double aperture_m) {
    return cut->profile == BW_TOP_HAT ? bw_beam_overlap_elliptical(cut->x_m, cut->y_m, aperture_m)
                                      : bw_beam_share_elliptical(cut->x_m, cut->y_m, aperture_m);
}

/* Share of the power through a centred round aperture:   Gaussian 1 - exp(-(D/d)^2),   top hat min(1, (D/d)^2)
 * Given:    beam, distance_m; aperture_m  D  diameter [m], 0 or more
 * Returns:  share, 0 to 1; NAN if an argument is NaN or negative
 * Notes:    Elliptical beams: aperture.c. */
double bw_beam_fraction(const struct bw_beam *beam, double distance_m, double aperture_m) {
    struct cut cut = cut_at(beam, distance_m);
    if (!(aperture_m >= 0.) || isnan(cut.x_m) || isnan(cut.y_m))
        return nan("");
    if (!(aperture_m > 0.))
        return 0.;
    if (cut.elliptical)
        return elliptical_share(&cut, aperture_m);
    double x = squared_ratio(aperture_m, cut.x_m);
    return cut.profile == BW_TOP_HAT ? fmin(1., x) : -expm1(-x);
}

static double round_irradiance_per_w(const struct cut *cut, double aperture_m) {
    double diameter_m = cut->x_m;
    if (cut->profile == BW_TOP_HAT)
        return disc_irradiance_per_w(aperture_m > diameter_m ? aperture_m : diameter_m);
    if (!(aperture_m > 0.))
        return disc_irradiance_per_w(diameter_m);
    double x = squared_ratio(aperture_m, diameter_m);
    if (x > 1.)
        return -expm1(-x) * disc_irradiance_per_w(aperture_m);
    return (x > 0. ? -expm1(-x) / x : 1.) * disc_irradiance_per_w(diameter_m);
}

/* Where the aperture is so small that the beam is even across it, its peak: the quadrature would only underflow. */
static double elliptical_irradiance_per_w(const struct cut *cut, double aperture_m) {
    static const double even = 1e-9; /* then the mean is the peak to 1e-18 */
    if (aperture_m <= even * fmin(cut->x_m, cut->y_m) || !(aperture_m > 0.))
        return area_per_w(cut->x_m, cut->y_m);
    return elliptical_share(cut, aperture_m) * disc_irradiance_per_w(aperture_m);
}

static double on_axis_per_w(const struct cut *cut, double aperture_m) {
    if (!(aperture_m >= 0.) || isnan(cut->x_m) || isnan(cut->y_m))
        return nan("");
    return cut->elliptical ? elliptical_irradiance_per_w(cut, aperture_m) : round_irradiance_per_w(cut, aperture_m);
}

/* Mean irradiance over a centred aperture, per watt.
 * Given:    beam, distance_m; aperture_m  D  [m]; 0 = peak irradiance 4 / (pi dx dy)
 * Returns:  E/P [1/m2]; NAN if an argument is NaN or negative; infinite at the peak of a beam without width
 * Notes:    1) fraction / (pi D^2/4), arranged so that nothing cancels when the beam is far wider than D.
 *           2) The centre is the worst place: the beam falls off the same to opposite sides (T. W. Anderson, Proc.
 *              Amer. Math. Soc. 6, 1955). For the same reason the mean falls when either axis grows. */
double bw_beam_irradiance_per_w(const struct bw_beam *beam, double distance_m, double aperture_m) {
    struct cut cut = cut_at(beam, distance_m);
    return on_axis_per_w(&cut, aperture_m);
}

static double off_axis_per_w(const struct cut *cut, double aperture_m, double offset_m) {
    double on_axis = on_axis_per_w(cut, aperture_m), widest_m = fmax(cut->x_m, cut->y_m);
    if (!(offset_m >= 0.) || isnan(on_axis))
        return nan("");
    double nearest_m = offset_m - aperture_m / 2.;
    if (!(nearest_m > 0.))
        return on_axis;
    if (cut->profile == BW_TOP_HAT)
        return nearest_m > widest_m / 2. ? 0. : on_axis;
    if (!(widest_m > 0.))
        return 0.;
    if (!(widest_m < HUGE_VAL))
        return on_axis;
    double reach = 2. * nearest_m / widest_m;
    return fmin(on_axis, area_per_w(cut->x_m, cut->y_m) * exp(-reach * reach));
}

/* Upper bound of the mean irradiance over an aperture off the axis, per watt.
 * Given:    beam, distance_m, aperture_m; offset_m  of the centre of the aperture from the axis [m], 0 or more
 * Returns:  bound [1/m2]; NAN if an argument is NaN or negative
 * Notes:    1) Gaussian: no point of the aperture is nearer to the axis than offset - D/2, so the mean is at most
 *              the peak profile there; nor is it more than on the axis (the overlap of two radially falling
 *              functions is largest when they are concentric). The smaller of the two falls with the offset.
 *           2) Top hat: the mean on the axis while beam and aperture overlap at all, then nothing.
 *           3) Elliptical: which way the offset goes is not known, so it is taken along the larger axis. */
double bw_beam_irradiance_off_axis_per_w(const struct bw_beam *beam, double distance_m, double aperture_m,
                                         double offset_m) {
    struct cut cut = cut_at(beam, distance_m);
    return off_axis_per_w(&cut, aperture_m, offset_m);
}

static double beside_per_w(const struct cut *cut, double aperture_m, double offset_m) {
    double bound = off_axis_per_w(cut, aperture_m, offset_m);
    bool simple = cut->elliptical || !(aperture_m > 0.) || !(offset_m > 0.) || !(cut->x_m > 0.) ||
                  !(cut->x_m < HUGE_VAL) || isnan(bound);
    if (simple)
        return bound;
    double share = cut->profile == BW_TOP_HAT ? bw_beam_overlap_beside(cut->x_m, aperture_m, offset_m)
                                              : bw_beam_share_beside(cut->x_m, aperture_m, offset_m);
    return fmin(bound, share * disc_irradiance_per_w(aperture_m));
}

/* Mean irradiance over an aperture beside the axis, per watt.
 * Given:    as for off_axis
 * Returns:  of a round beam the mean itself (a narrow one: an upper bound), of an elliptical one the bound of off_axis;
 *           never more than either on the axis or that bound */
double bw_beam_irradiance_beside_per_w(const struct bw_beam *beam, double distance_m, double aperture_m,
                                       double offset_m) {
    struct cut cut = cut_at(beam, distance_m);
    return beside_per_w(&cut, aperture_m, offset_m);
}

/* The smallest width of each axis: at the waist or, if that is outside, at the end next to it; but a beam that left the
 * exit narrower than its own waist is held to be that narrow up to the waist. */
static struct cut narrowest_between(const struct bw_beam *beam, double near_m, double far_m) {
    struct cut near = cut_at(beam, near_m), cut = cut_at(beam, fmin(fmax(beam->waist_m, near_m), far_m));
    cut.x_m = near.x_m < cut.x_m || isnan(near.x_m) ? near.x_m : cut.x_m;
    cut.y_m = near.y_m < cut.y_m || isnan(near.y_m) ? near.y_m : cut.y_m;
    return cut;
}

/* Smallest d63 at a distance or farther: of the smaller axis.
 * Given:    beam; distance_m  0 or more
 * Returns:  d [m]; NAN if the distance is NaN or negative */
double bw_beam_narrowest_m(const struct bw_beam *beam, double distance_m) {
    struct cut cut = narrowest_between(beam, distance_m, fmax(distance_m, beam->waist_m));
    return cut.x_m <= cut.y_m || isnan(cut.x_m) ? cut.x_m : cut.y_m;
}

/* Upper bound of the mean irradiance beside the axis anywhere between two distances, per watt.
 * Given:    beam; near_m, far_m  0 or more, near no farther than far; aperture_m, offset_m
 * Returns:  bound [1/m2]; where both distances are equal, bw_beam_irradiance_beside_per_w
 * Notes:    With widths from d1 to d2, each point's irradiance is at most (d2x d2y / d1x d1y) times that at the widest
 *           (the same power, spread less, over a profile that is lower everywhere else); and no mean is more than the
 *           one on the axis where the beam is narrowest. */
double bw_beam_irradiance_between_per_w(const struct bw_beam *beam, double near_m, double far_m, double aperture_m,
                                        double offset_m) {
    struct cut near = cut_at(beam, near_m), far = cut_at(beam, far_m), widest = far;
    struct cut narrowest = narrowest_between(beam, near_m, far_m);
    double on_axis = on_axis_per_w(&narrowest, aperture_m);
    if (!(offset_m > 0.) || isnan(on_axis))
        return offset_m >= 0. ? on_axis : nan("");
    widest.x_m = fmax(near.x_m, far.x_m);
    widest.y_m = fmax(near.y_m, far.y_m);
    double growth = widest.x_m / narrowest.x_m * (widest.y_m / narrowest.y_m);
    return growth < HUGE_VAL ? fmin(on_axis, beside_per_w(&widest, aperture_m, offset_m) * growth) : on_axis;
}
