/* Reflectance of glass and gloss by angle.
 * Source: Fresnel's equations, M. Born and E. Wolf, Principles of Optics, section 1.5.2. */
#include "internal.h"

#include <math.h>

/* One surface, light polarised across the plane of incidence (s), which reflects most at every angle.
 *     R = ((cos i - sqrt(n^2 - sin^2 i)) / (cos i + sqrt(n^2 - sin^2 i)))^2
 * Given:    index          n, above 1
 *           incidence_rad  i, from the normal, 0 to pi/2
 * Returns:  R, 0 to 1; it rises with i; 1 for a bad argument (the safe side) */
double bw_room_fresnel_s(double index, double incidence_rad) {
    if (!(index > 1. && incidence_rad >= 0. && incidence_rad < bw_pi / 2.))
        return 1.;
    double outside = cos(incidence_rad), sine = sin(incidence_rad), within = sqrt(index * index - sine * sine);
    double amplitude = (outside - within) / (outside + within);
    return fmin(1., amplitude * amplitude);
}

/* Both surfaces of a pane with all reflections between them, without interference and absorption: 2 R / (1 + R). */
double bw_room_pane(double surface) {
    return 2. * surface / (1. + surface);
}

/* R = ((n - 1) / (n + 1))^2 solved for n. */
double bw_room_index_of(double normal_reflectance) {
    double amplitude = sqrt(normal_reflectance);
    return (1. + amplitude) / (1. - amplitude);
}
