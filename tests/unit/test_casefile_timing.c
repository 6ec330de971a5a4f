/* casefile: bursts, gates, counts and lists of pulses. What is refused: tests/bad_cases. */
#include <math.h>
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <unistd.h>

#include <cmocka.h>

#include <beamward/casefile.h>

#define HEAD "[case]\ntitle = Clinic\n[laser heron]\n[emission heron deep]\nwavelength_nm = 905\n"
#define TAIL                                                                                                           \
    "[handpiece heron spot]\nbeam_diameter_mm = 30\ndivergence_mrad = 200\ndiameter_definition = d86\n"

static void near(double got, double want, const char *what) {
    if (!(fabs(got - want) <= 1e-12 * fabs(want)))
        fail_msg("%s: got %.17g, want %.17g", what, got, want);
}

/* ---- files ------------------------------------------------------------------------------------- */

struct folder {
    char path[64], case_path[80], list_path[80];
};

static int make_folder(void **state) {
    struct folder *folder = calloc(1, sizeof *folder);
    strcpy(folder->path, "/tmp/beamward-timing-XXXXXX");
    if (folder == NULL || mkdtemp(folder->path) == NULL)
        return -1;
    snprintf(folder->case_path, sizeof folder->case_path, "%s/case.ini", folder->path);
    snprintf(folder->list_path, sizeof folder->list_path, "%s/train.csv", folder->path);
    *state = folder;
    return 0;
}

static int remove_folder(void **state) {
    struct folder *folder = *state;
    unlink(folder->case_path);
    unlink(folder->list_path);
    rmdir(folder->path);
    free(folder);
    return 0;
}

static void write_file(const char *path, const char *bytes) {
    FILE *file = fopen(path, "wb");
    assert_non_null(file);
    assert_int_equal(fwrite(bytes, 1, strlen(bytes), file), strlen(bytes));
    assert_int_equal(fclose(file), 0);
}

/* A case of one emission with these keys. */
static struct bw_case *read_keys(const struct folder *folder, const char *keys) {
    char text[1000];
    struct bw_case *the_case = NULL;
    struct bw_faults faults = {0};
    snprintf(text, sizeof text, "%s%s%s", HEAD, keys, TAIL);
    write_file(folder->case_path, text);
    if (bw_case_read(folder->case_path, &the_case, NULL, &faults, NULL) != BW_OK)
        fail_msg("%s", faults.count > 0 ? faults.items[0].text : "no fault");
    return the_case;
}

/* ---- keys -------------------------------------------------------------------------------------- */

static void test_levels(void **state) {
    struct bw_case *the_case = read_keys(*state, "pulse_energy_uj = 11\npulse_duration_ns = 150\n"
                                                 "repetition_rate_khz = 10\nburst_on_ms = 5\nburst_period_ms = 50\n"
                                                 "gate_on_s = 0.5\ngate_period_s = 2\n");
    const struct bw_emission *e = &the_case->lasers[0].emissions[0];
    assert_int_equal(e->level_count, 2);
    near(e->levels[0].holds, 50., "pulses a burst");
    near(e->levels[0].period_s, .05, "burst period");
    near(e->levels[1].holds, 10., "bursts a gate");
    near(e->levels[1].period_s, 2., "gate period");
    near(e->average_power_w, 11e-6 * 500. / 2., "average power");
    assert_ptr_equal(the_case->lasers[0].tolerances[0].given.timing, &the_case->lasers[0].timings[0]);
    assert_int_equal(the_case->lasers[0].handpieces[0].output.emissions[0].level_count, 2);
    bw_case_free(the_case);
}

static void test_burst_keys(void **state) {
    struct bw_case *the_case = read_keys(*state, "pulse_energy_uj = 11\npulse_duration_ns = 150\n"
                                                 "repetition_rate_khz = 10\nburst_pulses = 50\nburst_rate_hz = 20\n"
                                                 "pulse_count = 120\n");
    const struct bw_emission *e = &the_case->lasers[0].emissions[0];
    assert_int_equal(e->level_count, 1);
    assert_int_equal(e->pulse_count, 120);
    near(e->levels[0].holds, 50., "pulses a burst");
    near(e->levels[0].period_s, .05, "burst period");
    bw_case_free(the_case);
}

static void test_single(void **state) {
    struct bw_case *the_case = read_keys(*state, "pulse_energy_mj = 500\npulse_duration_ms = 1\npulse_count = 1\n");
    const struct bw_emission *e = &the_case->lasers[0].emissions[0];
    assert_int_equal(e->pulse_count, 1);
    near(e->peak_power_w, 500., "peak");
    near(e->average_power_w, 500., "mean of the pulse");
    bw_case_free(the_case);
}

/* ---- lists ------------------------------------------------------------------------------------- */

static void check_list(const struct folder *folder, const char *bytes) {
    write_file(folder->list_path, bytes);
    struct bw_case *the_case = read_keys(folder, "pulses = train.csv\n");
    const struct bw_emission *e = &the_case->lasers[0].emissions[0];
    assert_int_equal(e->pulse_count, 2);
    assert_ptr_equal(e->pulses, the_case->lasers[0].timings[0].pulses);
    near(e->pulses[0].start_s, -.5, "start");
    near(e->pulses[1].start_s, 2., "start");
    near(e->pulses[1].duration_s, 150e-9, "duration");
    near(e->pulses[1].energy_j, .25, "energy");
    bw_case_free(the_case);
}

static void test_list(void **state) {
    check_list(*state, "start_s,duration_s,energy_j\n-0.5,1e-6,1e-3\n2,150e-9,0.25\n");
    check_list(*state, "\xef\xbb\xbfstart_s, duration_s, energy_j\r\n-0.5, 1e-6, 1e-3\r\n2, 150e-9, 0.25\r\n\r\n");
    check_list(*state, "start_s,duration_s,energy_j\n-0.5,1e-6,1e-3\n2,150e-9,0.25");
}

static void test_absolute_path(void **state) {
    const struct folder *folder = *state;
    char keys[120];
    snprintf(keys, sizeof keys, "pulses = %s\n", folder->list_path);
    write_file(folder->list_path, "start_s,duration_s,energy_j\n0,1,1\n");
    struct bw_case *the_case = read_keys(folder, keys);
    assert_int_equal(the_case->lasers[0].emissions[0].pulse_count, 1);
    bw_case_free(the_case);
}

static enum bw_status read_count(const struct folder *folder, size_t count, struct bw_case **the_case,
                                 struct bw_faults *faults) {
    FILE *file = fopen(folder->list_path, "wb");
    assert_non_null(file);
    fprintf(file, "start_s,duration_s,energy_j\n");
    for (size_t i = 0; i < count; i++)
        fprintf(file, "%zu,0.5,1\n", i);
    assert_int_equal(fclose(file), 0);
    write_file(folder->case_path, HEAD "pulses = train.csv\n" TAIL);
    return bw_case_read(folder->case_path, the_case, NULL, faults, NULL);
}

static void test_most(void **state) {
    struct bw_case *the_case;
    struct bw_faults faults = {0};
    assert_int_equal(read_count(*state, BW_PULSES_MAX, &the_case, &faults), BW_OK);
    assert_int_equal(the_case->lasers[0].emissions[0].pulse_count, BW_PULSES_MAX);
    bw_case_free(the_case);
    assert_int_equal(read_count(*state, BW_PULSES_MAX + 1, &the_case, &faults), BW_INPUT);
    assert_int_equal(faults.count, 1);
    assert_string_equal(faults.items[0].text,
                        "train.csv:1000002: more than 1000000 pulses; at most so many would be right");
    bw_faults_free(&faults);
}

/* From triples alone there is no folder to look in. */
static void test_no_folder(void **state) {
    (void)state;
    static const char text[] = HEAD "pulses = train.csv\n" TAIL;
    struct bw_ini ini = {0};
    struct bw_case *the_case;
    struct bw_faults faults = {0};
    assert_int_equal(bw_ini_read_bytes(text, strlen(text), &ini, &faults, NULL), BW_OK);
    assert_int_equal(bw_case_from_ini(&ini, &the_case, &faults, NULL), BW_INPUT);
    assert_string_equal(faults.items[0].text,
                        "a file of pulses is looked for beside the case file, and there is none here");
    bw_faults_free(&faults);
    bw_ini_free(&ini);
}

#define IN_FOLDER(function) cmocka_unit_test_setup_teardown(function, make_folder, remove_folder)

int main(void) {
    const struct CMUnitTest tests[] = {
        IN_FOLDER(test_levels), IN_FOLDER(test_burst_keys),    IN_FOLDER(test_single), IN_FOLDER(test_list),
        IN_FOLDER(test_most),   IN_FOLDER(test_absolute_path), cmocka_unit_test(test_no_folder),
    };
    return cmocka_run_group_tests_name("casefile timing", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
