/* Shared by the benchmarks: the clock, the dice, the best and the median of several runs. */
#ifndef BEAMWARD_TESTS_BENCH_H
#define BEAMWARD_TESTS_BENCH_H

#include <stddef.h>
#include <stdint.h>

enum { BENCH_PAIRS = 1000000, BENCH_RUNS = 15 };

/* Wavelengths and times at random, the same in every run of the program. */
struct bench_pairs {
    double wavelengths_nm[BENCH_PAIRS], times_s[BENCH_PAIRS];
};
void bench_fill(struct bench_pairs *pairs, double low_nm, double high_nm, int logarithmic);

/* Seconds of this thread for one run of the work: the machine may be busy with others. */
struct bench_times {
    double best_s, median_s;
};
typedef void bench_work(void *context);
struct bench_times bench_run(bench_work *work, void *context);

#endif
