/* A round beam from one point, for initializers. */
#ifndef TESTS_ROUND_BEAM_H
#define TESTS_ROUND_BEAM_H

#include <beamward/beam.h>

#define ROUND(profile_, spread_, diameter, divergence, waist, exit_diameter)                                           \
    {                                                                                                                  \
        .profile = (profile_), .spread = (spread_), .diameter_m = (diameter), .divergence_rad = (divergence),          \
        .waist_m = (waist), .exit_diameter_m = (exit_diameter)                                                         \
    }

#endif
