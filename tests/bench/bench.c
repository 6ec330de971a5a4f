/* See bench.h. */
#include "bench.h"

#include <math.h>
#include <stdlib.h>
#include <time.h>

static double roll(uint64_t *state) {
    *state ^= *state << 13;
    *state ^= *state >> 7;
    *state ^= *state << 17;
    return (double)(*state >> 11) * 0x1p-53;
}

void bench_fill(struct bench_pairs *pairs, double low_nm, double high_nm, int logarithmic) {
    uint64_t state = 88172645463325252u;
    for (size_t i = 0; i < BENCH_PAIRS; i++) {
        double x = roll(&state);
        pairs->wavelengths_nm[i] = logarithmic ? low_nm * pow(high_nm / low_nm, x) : low_nm + (high_nm - low_nm) * x;
        pairs->times_s[i] = 1e-9 * pow(3e13, roll(&state));
    }
}

static double now_s(void) {
    struct timespec now;
    clock_gettime(CLOCK_THREAD_CPUTIME_ID, &now);
    return (double)now.tv_sec + 1e-9 * (double)now.tv_nsec;
}

static int compare(const void *a, const void *b) {
    const double *x = a, *y = b;
    return (*x > *y) - (*x < *y);
}

struct bench_times bench_run(bench_work *work, void *context) {
    double times_s[BENCH_RUNS];
    for (size_t run = 0; run < BENCH_RUNS; run++) {
        double start_s = now_s();
        work(context);
        times_s[run] = now_s() - start_s;
    }
    qsort(times_s, BENCH_RUNS, sizeof times_s[0], compare);
    return (struct bench_times){times_s[0], times_s[BENCH_RUNS / 2]};
}
