/* How fast the evaluator is, on one core.
 *
 *     bench_beamward PAIRS RESULTS TIMES
 *
 * writes the pairs of wavelength and time and its answers, for the same work in other languages, and its times. It is
 * linked so that each allocation is counted. Exit code: 0; 1 if the evaluator allocated; 3 if a file cannot be written.
 */
#include "bench.h"

#include <beamward/hazard.h>

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* ---- allocations (linked with --wrap) ---------------------------------------------------------- */

static size_t allocations;
void *__real_malloc(size_t size);
void *__real_calloc(size_t count, size_t size);
void *__real_realloc(void *old, size_t size);
void *__wrap_malloc(size_t size);
void *__wrap_calloc(size_t count, size_t size);
void *__wrap_realloc(void *old, size_t size);
void *__wrap_malloc(size_t size) {
    allocations++;
    return __real_malloc(size);
}
void *__wrap_calloc(size_t count, size_t size) {
    allocations++;
    return __real_calloc(count, size);
}
void *__wrap_realloc(void *old, size_t size) {
    allocations++;
    return __real_realloc(old, size);
}

/* ---- work --------------------------------------------------------------------------------------- */

static const double power_w = 5, diameter_m = 3e-3, divergence_rad = 0.02; /* as in bench_numpy.py, bench_octave.m */

struct job {
    const struct bw_table *table;
    struct bench_pairs pairs;
    double powers_w[BENCH_PAIRS], diameters_m[BENCH_PAIRS], divergences_rad[BENCH_PAIRS];
    double answers[3][BENCH_PAIRS];
    double sum;   /* so that nothing is left out as unused */
    size_t block; /* hazards: this many pairs over and over */
    struct bw_output output;
};

static void single_limits(void *context) {
    struct job *job = context;
    for (size_t i = 0; i < BENCH_PAIRS; i++) {
        struct bw_exposure exposure = {job->pairs.wavelengths_nm[i], job->pairs.times_s[i], 0, 0};
        struct bw_limit_set limits;
        if (bw_limits_eye(job->table, &exposure, &limits, NULL, NULL) == BW_OK)
            job->sum += limits.limits[limits.governing].radiant_exposure_j_m2;
    }
}

static void look(void *context, const struct bw_limit_batch *batch) {
    double *sum = context;
    *sum += (double)batch->column_count;
}

/* Sorted and evaluated, every effect, but nothing put in its place. */
static void visit_limits(void *context) {
    struct job *job = context;
    struct bw_exposures exposures = {BENCH_PAIRS, job->pairs.wavelengths_nm, job->pairs.times_s, 0, 0};
    bw_limits_visit(job->table, BW_EYE, &exposures, look, &job->sum);
}

static void many_limits(void *context) {
    struct job *job = context;
    bw_limits_eye_many(job->table, BENCH_PAIRS, job->pairs.wavelengths_nm, job->pairs.times_s, job->answers[0],
                       job->answers[1]);
}

static void many_hazards(void *context) {
    struct job *job = context;
    struct bw_simple_beams beams = {job->block,
                                    job->pairs.wavelengths_nm,
                                    job->pairs.times_s,
                                    job->powers_w,
                                    job->diameters_m,
                                    job->divergences_rad,
                                    0};
    for (size_t done = 0; done < BENCH_PAIRS; done += job->block)
        bw_hazard_many(job->table, &beams, job->answers[0], job->answers[1], job->answers[2]);
}

enum { SOLVES = 2000 };
static void solve(void *context) {
    struct job *job = context;
    static const struct bw_viewing_case viewing = {BW_EYE, 10, 0, 0};
    for (size_t i = 0; i < SOLVES; i++) {
        struct bw_hazard hazard;
        struct bw_reach reach;
        job->output.emissions[0].average_power_w = 1 + (double)i * 1e-3; /* another answer each time */
        if (bw_hazard_prepare(job->table, &job->output, &viewing, &hazard, NULL, NULL) == BW_OK &&
            bw_hazard_reach(&hazard, BW_EMISSIONS_MAX, &reach, NULL, NULL) == BW_OK)
            job->sum += reach.distance_m;
    }
}

static void set_output(struct bw_output *output, size_t count, int pulsed) {
    static const double wavelengths_nm[] = {810, 650, 905, 980, 1064};
    memset(output, 0, sizeof *output);
    output->count = count;
    for (size_t i = 0; i < count; i++) {
        struct bw_emission_input input = {wavelengths_nm[i], (double)NAN, (double)NAN,
                                          (double)NAN,       (double)NAN, (double)NAN, NULL};
        input.average_power_w = 1 + (double)i;
        if (pulsed) {
            input.pulse_duration_s = 200e-9;
            input.repetition_rate_hz = 1e4;
        }
        bw_emission_resolve(&input, &output->emissions[i], NULL);
        output->beams[i] = (struct bw_beam){.profile = BW_GAUSSIAN, .spread = BW_HYPERBOLIC, .diameter_m = 3e-3,
                                            .divergence_rad = 0.1 + 0.01 * (double)i, .exit_diameter_m = 3e-3};
    }
}

/* ---- report ------------------------------------------------------------------------------------- */

static void report(const char *what, struct bench_times times, double count) {
    printf("  %-42s best %7.1f ns, median %7.1f ns, %8.3g a second\n", what, times.best_s / count * 1e9,
           times.median_s / count * 1e9, count / times.best_s);
}

static int compare_pairs(const void *a, const void *b) {
    const double *x = a, *y = b;
    int first = (floor(x[0] / 50) > floor(y[0] / 50)) - (floor(x[0] / 50) < floor(y[0] / 50));
    return first != 0 ? first : (x[1] > y[1]) - (x[1] < y[1]);
}

/* The same pairs in an order in which neighbours take the same branches. */
static void sort_pairs(struct bench_pairs *pairs) {
    double(*rows)[2] = __real_malloc(sizeof(double[BENCH_PAIRS][2]));
    if (rows == NULL)
        exit(3);
    for (size_t i = 0; i < BENCH_PAIRS; i++) {
        rows[i][0] = pairs->wavelengths_nm[i];
        rows[i][1] = pairs->times_s[i];
    }
    qsort(rows, BENCH_PAIRS, sizeof rows[0], compare_pairs);
    for (size_t i = 0; i < BENCH_PAIRS; i++) {
        pairs->wavelengths_nm[i] = rows[i][0];
        pairs->times_s[i] = rows[i][1];
    }
    free(rows);
}

static void bench_limits(struct job *job) {
    static const char *const ids[] = {"iec-60825-1-2014", "icnirp-2013", "eu-2006-25"};
    char what[80];
    struct bench_times random = {0, 0};
    puts("Limits of the eye, point source, 1 ns to 3e4 s, one call a limit (bw_limits_eye)");
    size_t before = allocations;
    for (size_t i = 0; i < sizeof ids / sizeof ids[0]; i++) {
        job->table = bw_tables_find(ids[i]);
        bench_fill(&job->pairs, 400, 1400, 0);
        snprintf(what, sizeof what, "%s, 400 to 1400 nm", ids[i]);
        struct bench_times times = bench_run(single_limits, job);
        random = i == 0 ? times : random;
        report(what, times, BENCH_PAIRS);
        bench_fill(&job->pairs, 180, 1e6, 1);
        snprintf(what, sizeof what, "%s, 180 to 1e6 nm", ids[i]);
        report(what, bench_run(single_limits, job), BENCH_PAIRS);
    }
    bench_fill(&job->pairs, 400, 1400, 0);
    sort_pairs(&job->pairs);
    job->table = bw_tables_find(ids[0]);
    struct bench_times sorted = bench_run(single_limits, job);
    report("iec-60825-1-2014, the same pairs sorted", sorted, BENCH_PAIRS);
    printf("  Bound by branches and by what a limit holds: on random pairs the processor guesses wrong which rows,\n"
           "  factors and effects come next (sorted, it takes %.0f %% of the time); the rest is some 400 instructions "
           "that\n"
           "  find a limit and fill in its source, factors and aperture. The arithmetic is a small part.\n",
           100 * sorted.best_s / random.best_s);
    puts("The same, many at once (bw_limits_eye_many)");
    for (size_t i = 0; i < sizeof ids / sizeof ids[0]; i++) {
        job->table = bw_tables_find(ids[i]);
        bench_fill(&job->pairs, 400, 1400, 0);
        snprintf(what, sizeof what, "%s, 400 to 1400 nm", ids[i]);
        report(what, bench_run(many_limits, job), BENCH_PAIRS);
    }
    printf("  allocations in all of these: %zu\n", allocations - before);
}

static void bench_solves(struct job *job) {
    static const struct {
        const char *what;
        size_t count;
        int pulsed;
    } cases[] = {{"one emission, continuous", 1, 0},
                 {"five emissions, continuous", 5, 0},
                 {"one emission, pulsed", 1, 1},
                 {"five emissions, pulsed", 5, 1}};
    puts("Hazard distances, limits included (bw_hazard_prepare and bw_hazard_reach)");
    job->table = bw_tables_find("iec-60825-1-2014");
    size_t before = allocations;
    for (size_t i = 0; i < sizeof cases / sizeof cases[0]; i++) {
        set_output(&job->output, cases[i].count, cases[i].pulsed);
        report(cases[i].what, bench_run(solve, job), SOLVES);
    }
    printf("  allocations in all of these: %zu\n", allocations - before);
    puts("  Bound by the search: some 60 halvings down to neighbouring numbers, an exponential a term in each.");
}

static void set_beams(struct job *job) {
    bench_fill(&job->pairs, 400, 1400, 0);
    for (size_t i = 0; i < BENCH_PAIRS; i++) {
        job->powers_w[i] = power_w;
        job->diameters_m[i] = diameter_m;
        job->divergences_rad[i] = divergence_rad;
    }
}

static int write_numbers(const char *path, const double *numbers, size_t count) {
    FILE *file = fopen(path, "wb");
    if (file == NULL || fwrite(numbers, sizeof *numbers, count, file) != count) {
        perror(path);
        return 3;
    }
    return fclose(file) == 0 ? 0 : 3;
}

static int bench_hazards(struct job *job, char **paths) {
    puts("Limit, hazard distance and density of 1e6 beams, icnirp-2013, 400 to 1400 nm (bw_hazard_many)");
    job->table = bw_tables_find("icnirp-2013");
    set_beams(job);
    size_t before = allocations;
    struct bench_times visits = bench_run(visit_limits, job);
    job->block = 5000;
    struct bench_times small = bench_run(many_hazards, job);
    job->block = BENCH_PAIRS;
    struct bench_times times = bench_run(many_hazards, job);
    report("1e6 beams", times, BENCH_PAIRS);
    report("5000 beams 200 times, all in the cache", small, BENCH_PAIRS);
    report("the limits of it alone (bw_limits_visit)", visits, BENCH_PAIRS);
    printf("  allocations in all of these: %zu\n", allocations - before);
    printf(
        "  Bound by moving: to sort the pairs by the rows that hold and evaluate the limits takes %.0f %% of the time, "
        "to\n"
        "  wait for the memory %.0f %% (40 bytes in and 24 out a beam, %.1f GB/s); the rest is to gather the beams, "
        "the\n"
        "  logarithms, exponentials, divisions and roots, several at a time, and to put the answers in their places.\n",
        100 * visits.best_s / times.best_s, 100 * (1 - small.best_s / times.best_s),
        64e-9 * BENCH_PAIRS / times.best_s);
    FILE *file = fopen(paths[2], "w");
    if (file == NULL || fprintf(file, "beamward;%.9g;%.9g\n", times.best_s, times.median_s) < 0 || fclose(file) != 0) {
        perror(paths[2]);
        return 3;
    }
    int code = write_numbers(paths[0], job->pairs.wavelengths_nm, 2 * (size_t)BENCH_PAIRS);
    return code != 0 ? code : write_numbers(paths[1], job->answers[0], 3 * (size_t)BENCH_PAIRS);
}

int main(int argc, char **argv) {
    if (argc != 4) {
        fputs("usage: bench_beamward PAIRS RESULTS TIMES\n", stderr);
        return 2;
    }
    struct job *job = __real_calloc(1, sizeof *job);
    if (job == NULL)
        return 3;
    bench_limits(job);
    bench_solves(job);
    int code = bench_hazards(job, argv + 1);
    free(job);
    return code != 0 ? code : allocations > 0 ? 1 : 0;
}
