/* How long the worst window of a list of pulses takes to find, from a thousand pulses to a million: about n log n.
 * Prints a table; judges nothing.   make build/tests/bench/bench_pulses && build/tests/bench/bench_pulses */
#include <beamward/hazard.h>

#include <math.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <time.h>

enum kind { REGULAR, JITTERED, ALL_SIZES, TOUCHING, BURSTS, THINNING, KINDS };
static const char *const names[KINDS] = {"regular", "jittered", "gaps of all sizes", "touching", "bursts", "thinning"};
static const double none = (double)NAN;

static double uniform(uint64_t *random) {
    *random = *random * 6364136223846793005u + 1442695040888963407u;
    return (double)(*random >> 11) / 9007199254740992.;
}

static void fill(enum kind kind, struct bw_pulse *pulses, size_t count) {
    uint64_t random = 3;
    double time_s = 0.;
    for (size_t i = 0; i < count; i++) {
        double duration_s = 1e-7, gap_s = 9.9e-6, energy_j = 1e-3, share = uniform(&random);
        if (kind == JITTERED) {
            gap_s *= .5 + share;
            energy_j *= .5 + uniform(&random);
        } else if (kind == ALL_SIZES) {
            gap_s = pow(10., -8. + 6. * share);
            duration_s = pow(10., -9. + 3. * uniform(&random));
            energy_j = pow(10., -6. + 3. * uniform(&random));
        } else if (kind == TOUCHING) {
            duration_s = 1e-5 * (.5 + share);
            gap_s = 0.;
            energy_j *= uniform(&random) + 1e-3;
        } else if (kind == BURSTS) {
            gap_s = share < .9 ? 1e-6 : share < .99 ? 1e-3 : 1e-2;
        } else if (kind == THINNING) { /* every pulse a corner of the hull */
            gap_s += 1e-11 * (double)i;
            energy_j *= pow(1. + (double)i, -.25);
        }
        pulses[i] = (struct bw_pulse){time_s, duration_s, energy_j};
        time_s += duration_s + gap_s;
    }
}

static double now_s(void) {
    struct timespec time;
    clock_gettime(CLOCK_MONOTONIC, &time);
    return (double)time.tv_sec + 1e-9 * (double)time.tv_nsec;
}

/* Returns: seconds for one evaluation; NAN on error. */
static double measure(const struct bw_pulse *pulses, size_t count, double wavelength_nm) {
    struct bw_timing timing = bw_timing_none();
    struct bw_emission_input input = {wavelength_nm, none, none, none, none, none, &timing};
    struct bw_viewing_case viewing = {BW_EYE, 100., 0., 0.};
    struct bw_train_limit_set limits;
    struct bw_emission emission;
    timing.pulses = pulses;
    timing.pulses_given = count;
    if (bw_emission_resolve(&input, &emission, NULL) != BW_OK)
        return none;
    double begin_s = now_s();
    enum bw_status status =
        bw_hazard_train_limits(bw_tables_find("icnirp-2013"), &emission, &viewing, &limits, NULL, NULL);
    return status == BW_OK ? now_s() - begin_s : none;
}

int main(void) {
    static const double wavelengths_nm[] = {810., 1500.};
    struct bw_pulse *pulses = malloc(BW_PULSES_MAX * sizeof *pulses);
    if (pulses == NULL)
        return EXIT_FAILURE;
    printf("%-18s %8s %12s %12s %22s\n", "list", "pulses", "810 nm [s]", "1500 nm [s]", "810 nm: ns/(n log2 n)");
    for (int kind = 0; kind < KINDS; kind++)
        for (size_t count = 1000; count <= BW_PULSES_MAX; count *= 10) {
            double seconds[2];
            fill((enum kind)kind, pulses, count);
            for (size_t i = 0; i < 2; i++)
                seconds[i] = measure(pulses, count, wavelengths_nm[i]);
            printf("%-18s %8zu %12.5f %12.5f %22.2f\n", names[kind], count, seconds[0], seconds[1],
                   1e9 * seconds[0] / ((double)count * log2((double)count)));
        }
    free(pulses);
    return EXIT_SUCCESS;
}
