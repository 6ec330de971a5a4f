/* Each NAME.ini here is a broken case file, and NAME.err every message about it, as printed. Read twice: through the
 * library, and by the built program, which must also say nothing else, return 2 and leave no file behind. */
#include <dirent.h>
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <sys/wait.h>
#include <unistd.h>

#include <cmocka.h>

#include <beamward/casefile.h>

#define FOLDER "tests/bad_cases"
enum { CASES_MAX = 600, CASES_LEAST = 100, PATH_SIZE = 512 };

static const char mistakes[] = "examples/mistakes.ini"; /* its messages are in examples-mistakes.err */

struct bad_case {
    char name[PATH_SIZE / 2], path[PATH_SIZE], error_path[PATH_SIZE];
};

static void read_whole(const char *path, struct bw_text *text) {
    char part[4096];
    size_t length;
    FILE *file = fopen(path, "rb");
    if (!file)
        fail_msg("%s: cannot be opened", path);
    bw_text_add(text, "%s", "");
    while ((length = fread(part, 1, sizeof part, file)) > 0)
        bw_text_add_bytes(text, part, length);
    fclose(file);
    assert_false(text->failed);
}

static void compare(const char *what, const struct bw_text *got, const struct bw_text *want) {
    if (strcmp(got->data ? got->data : "", want->data) != 0)
        fail_msg("%s:\n---- want\n%s---- got\n%s----", what, want->data, got->data ? got->data : "");
}

/* ---- through the library ---------------------------------------------------------------------- */

static void check_library(const struct bad_case *bad, const struct bw_text *want) {
    struct bw_case *the_case = NULL;
    struct bw_faults faults = {0};
    struct bw_error error = {0};
    struct bw_text got = {0};
    assert_int_equal(bw_case_read(bad->path, &the_case, NULL, &faults, &error), BW_INPUT);
    assert_null(the_case);
    assert_int_equal(error.status, BW_INPUT);
    assert_true(faults.count > 0);
    for (size_t i = 1; i < faults.count; i++)
        assert_true(faults.items[i - 1].line <= faults.items[i].line);
    bw_faults_print(&got, bad->path, &faults);
    compare("bw_case_read", &got, want);
    bw_text_free(&got);
    bw_faults_free(&faults);
}

/* ---- by the program --------------------------------------------------------------------------- */

static void check_program(const struct bad_case *bad, const struct bw_text *want) {
    char folder[] = "/tmp/beamward-bad-XXXXXX", path[PATH_SIZE], command[3 * PATH_SIZE];
    struct bw_text got = {0}, printed = {0};
    struct stat status;
    assert_non_null(mkdtemp(folder));
    snprintf(command, sizeof command, "%s assess %s --out %s/record >%s/stdout 2>%s/stderr </dev/null", TEST_PROGRAM,
             bad->path, folder, folder, folder);
    int ended = system(command);
    assert_true(WIFEXITED(ended));
    assert_int_equal(WEXITSTATUS(ended), 2);
    snprintf(path, sizeof path, "%s/stderr", folder);
    read_whole(path, &got);
    unlink(path);
    snprintf(path, sizeof path, "%s/stdout", folder);
    read_whole(path, &printed);
    unlink(path);
    snprintf(path, sizeof path, "%s/record", folder);
    assert_int_not_equal(stat(path, &status), 0);
    assert_int_equal(rmdir(folder), 0); /* nothing else is in it */
    compare(TEST_PROGRAM, &got, want);
    assert_int_equal(printed.length, 0);
    bw_text_free(&got);
    bw_text_free(&printed);
}

static void test_bad_case(void **state) {
    const struct bad_case *bad = *state;
    struct bw_text want = {0};
    read_whole(bad->error_path, &want);
    check_library(bad, &want);
    check_program(bad, &want);
    bw_text_free(&want);
}

/* ---- the list --------------------------------------------------------------------------------- */

static int ends_in(const char *name, const char *ending) {
    const char *dot = strrchr(name, '.');
    return dot && strcmp(dot, ending) == 0;
}

static int is_case(const struct dirent *entry) {
    return ends_in(entry->d_name, ".ini");
}

static int is_error(const struct dirent *entry) {
    return ends_in(entry->d_name, ".err");
}

/* A .err without its .ini tests nothing. */
static void test_every_error_has_its_case(void **state) {
    (void)state;
    struct dirent **entries = NULL;
    int count = scandir(FOLDER, &entries, is_error, alphasort);
    assert_true(count >= CASES_LEAST);
    for (int i = 0; i < count; i++) {
        char path[PATH_SIZE];
        snprintf(path, sizeof path, FOLDER "/%.*s.ini", (int)strlen(entries[i]->d_name) - 4, entries[i]->d_name);
        if (strcmp(entries[i]->d_name, "examples-mistakes.err") != 0 && access(path, R_OK) != 0)
            fail_msg("%s is missing", path);
        free(entries[i]);
    }
    free(entries);
}

static size_t list_cases(struct bad_case *cases) {
    struct dirent **entries = NULL;
    int count = scandir(FOLDER, &entries, is_case, alphasort);
    size_t kept = 0;
    for (int i = 0; i < count; i++) {
        if (kept < CASES_MAX) {
            struct bad_case *bad = &cases[kept++];
            snprintf(bad->name, sizeof bad->name, "%.*s", (int)strlen(entries[i]->d_name) - 4, entries[i]->d_name);
            snprintf(bad->path, sizeof bad->path, FOLDER "/%s.ini", bad->name);
            snprintf(bad->error_path, sizeof bad->error_path, FOLDER "/%s.err", bad->name);
        }
        free(entries[i]);
    }
    free(entries);
    return kept;
}

int main(void) {
    struct bad_case *cases = calloc(CASES_MAX + 1, sizeof *cases);
    struct CMUnitTest *tests = calloc(CASES_MAX + 2, sizeof *tests);
    if (!cases || !tests)
        return EXIT_FAILURE;
    size_t count = list_cases(cases);
    if (count < CASES_LEAST || count == CASES_MAX) {
        fprintf(stderr, FOLDER ": %zu cases; run from the top of the repository\n", count);
        return EXIT_FAILURE;
    }
    struct bad_case *example = &cases[count];
    snprintf(example->name, sizeof example->name, "%s", mistakes);
    snprintf(example->path, sizeof example->path, "%s", mistakes);
    snprintf(example->error_path, sizeof example->error_path, FOLDER "/examples-mistakes.err");
    for (size_t i = 0; i <= count; i++)
        tests[i] = (struct CMUnitTest){cases[i].name, test_bad_case, NULL, NULL, &cases[i]};
    tests[count + 1] = (struct CMUnitTest)cmocka_unit_test(test_every_error_has_its_case);
    /* The macro takes an array whose size it knows; these are as many as there are files. */
    int failed = _cmocka_run_group_tests("bad cases", tests, count + 2, NULL, NULL);
    free(tests);
    free(cases);
    return failed == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
