/* What goes through a round aperture of radius R where that has no elementary form: an elliptical Gaussian in its
 * centre, a round one beside it; evenly lit ellipses and discs.
 *
 * Gaussians. Across the aperture in strips, y = R sin t, the strip's own integral is an error function:
 *   share = 2 R / (sqrt(pi) dy) x integral over t from -pi/2 to pi/2 of
 *           exp(-4 (offset + R sin t)^2 / dy^2) erf(2 R cos t / dx) cos t
 * (d63 widths, the offset along y). The integrand is entire and, continued, periodic with period 2 pi and even about
 * +-pi/2: the trapezoid rule converges faster than geometrically, with a number of points in proportion to R / dx.
 * Where the beam is far narrower than the aperture across and not along, the erf turns sharply at +-pi/2: there a
 * double exponential rule (Takahasi and Mori, 1974), which crowds its points towards the ends. */
#include "internal.h"

#include <math.h>

/* The integrand, with sin t and cos t. */
struct strips {
    double across; /* 2 R / dx */
    double along;  /* 2 R / dy */
    double offset; /* 2 offset / dy */
};

static double strip(const struct strips *s, double sine, double cosine) {
    double y = s->offset + s->along * sine;
    return exp(-y * y) * erf(s->across * cosine) * cosine;
}

/* Over -pi/2 to pi/2; both ends are 0. */
static double trapezoid(const struct strips *s, int count) {
    double sum = 0.;
    for (int i = 1; i < count; i++) {
        double t = bw_pi * ((double)i / count - 0.5);
        sum += strip(s, sin(t), cos(t));
    }
    return sum * bw_pi / count;
}

/* The same for an integrand that is even in t: twice 0 to pi/2. The angle to the far end is formed without
 * cancellation. */
static double double_exponential(const struct strips *s) {
    static const double step = 1. / 32., last = 3.4;
    double sum = 0.;
    for (double u = -last; u <= last; u += step) {
        double q = exp(-bw_pi * sinh(u)); /* t = (pi/2) / (1 + q) */
        double from_end = bw_pi / 2. * q / (1. + q), weight = bw_pi * cosh(u) * q / ((1. + q) * (1. + q));
        sum += strip(s, cos(from_end), sin(from_end)) * weight * bw_pi / 2.;
    }
    return 2. * sum * step;
}

/* A Gaussian so much narrower than the aperture both ways is inside to the last digit: exp(-(D/d)^2) < 1e-16. */
static const double all_inside = 6.2;
static const double narrow = 16.; /* D/d from which the trapezoid needs too many points */

/* Given:    width_x_m, width_y_m  d63; aperture_m  diameter, above 0
 * Returns:  share of the power, relative error about 1e-14.   Tests: test_beam_shapes.c, against GSL */
double bw_beam_share_elliptical(double width_x_m, double width_y_m, double aperture_m) {
    double across = aperture_m / fmin(width_x_m, width_y_m), along = aperture_m / fmax(width_x_m, width_y_m);
    struct strips strips = {across, along, 0.};
    if (along > all_inside)
        return 1.;
    double sum = across > narrow ? double_exponential(&strips) : trapezoid(&strips, 12 + (int)(6.5 * across));
    return fmin(1., along / sqrt(bw_pi) * sum);
}

/* Given:    width_m  d63; aperture_m; offset_m  between the centres
 * Returns:  share of the power; where the beam is much narrower than the aperture, an upper bound (the half plane) */
double bw_beam_share_beside(double width_m, double aperture_m, double offset_m) {
    double across = aperture_m / width_m, offset = 2. * offset_m / width_m;
    double outside = offset - across; /* of the aperture's nearest point, in units of d/2 */
    if (across > narrow)
        return erfc(outside) / 2.;
    if (outside > 26.)
        return 0.; /* exp(-26^2) is below every double */
    struct strips strips = {across, across, offset};
    int count = 16 + (int)(8. * across + 9. * sqrt(across * offset));
    return fmin(1., across / sqrt(bw_pi) * trapezoid(&strips, count));
}

/* Given:    width_x_m, width_y_m  edges of an evenly lit ellipse; aperture_m
 * Returns:  share of its area that lies in the centred disc
 * Notes:    The edges cross at x0 = a sqrt((R^2 - b^2) / (a^2 - b^2)), a > R > b; the common area is
 *           2 (a b asin(x0/a) + R^2 acos(x0/R)). */
double bw_beam_overlap_elliptical(double width_x_m, double width_y_m, double aperture_m) {
    double a = fmax(width_x_m, width_y_m) / aperture_m, b = fmin(width_x_m, width_y_m) / aperture_m; /* R = 1 */
    if (a <= 1.)
        return 1.;
    if (b >= 1.)
        return 1. / a / b;
    double span = (a - b) * (a + b);
    double x0 = a * sqrt((1. - b) * (1. + b) / span), y0 = b * sqrt((a - 1.) * (a + 1.) / span);
    if (!(b > 0.))
        return 2. / bw_pi * (asin(1. / a) + sqrt((a - 1.) * (a + 1.)) / a / a); /* a line of the ellipse's brightness */
    return fmin(1., 2. / bw_pi * (atan2(x0 / a, y0 / b) + atan2(y0, x0) / a / b));
}

/* Given:    width_m  edge of an evenly lit disc; aperture_m; offset_m  between the centres
 * Returns:  share of its area that lies in the aperture (two circles) */
double bw_beam_overlap_beside(double width_m, double aperture_m, double offset_m) {
    double r = width_m / 2., R = aperture_m / 2., s = offset_m;
    if (s >= r + R)
        return 0.;
    if (s <= fabs(R - r))
        return R >= r ? 1. : R / r * (R / r);
    double cos_r = (s * s + r * r - R * R) / (2. * s * r), cos_R = (s * s + R * R - r * r) / (2. * s * R);
    double kite = sqrt(fmax(0., (-s + r + R) * (s + r - R) * (s - r + R) * (s + r + R))) / 2.;
    double area = r * r * acos(fmin(1., fmax(-1., cos_r))) + R * R * acos(fmin(1., fmax(-1., cos_R))) - kite;
    return fmax(0., fmin(1., area / (bw_pi * r * r)));
}
