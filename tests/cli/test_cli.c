/* The program from outside: each NAME.args here is a command line; its stdout, stderr and exit code are compared
 * whole with NAME.out, NAME.err and NAME.exit (a missing file stands for nothing, and 0). @TMP@ is a fresh folder.
 * With BEAMWARD_ACCEPT=1 in the environment the files are written instead, for a person to read and commit. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <cmocka.h>
#include <dirent.h>
#include <sys/wait.h>
#include <unistd.h>

static const char folder[] = "tests/cli";
static const char placeholder[] = "@TMP@";
enum { CASES_MAX = 400, PATH_SIZE = 512 };

static char *read_whole(const char *path) {
    FILE *file = fopen(path, "rb");
    char *text = calloc(1, 1 << 20);
    assert_non_null(text);
    if (file) {
        size_t length = fread(text, 1, (1 << 20) - 1, file);
        text[length] = '\0';
        fclose(file);
    }
    return text;
}

static void write_whole(const char *path, const char *text) {
    if (text[0] == '\0') {
        unlink(path);
        return;
    }
    FILE *file = fopen(path, "wb");
    assert_non_null(file);
    assert_int_equal(fwrite(text, 1, strlen(text), file), strlen(text));
    assert_int_equal(fclose(file), 0);
}

static char *replace_all(const char *text, const char *what, const char *by) {
    char *result = calloc(1, (1 << 20) + strlen(text));
    assert_non_null(result);
    for (const char *from = text; *from;) {
        if (strncmp(from, what, strlen(what)) == 0) {
            strcat(result, by);
            from += strlen(what);
        } else {
            strncat(result, from++, 1);
        }
    }
    return result;
}

static void compare(const char *name, const char *ending, const char *got) {
    char path[PATH_SIZE];
    snprintf(path, sizeof path, "%s/%s.%s", folder, name, ending);
    if (getenv("BEAMWARD_ACCEPT")) {
        write_whole(path, got);
        return;
    }
    char *want = read_whole(path);
    if (strcmp(want, got) != 0)
        fail_msg("%s differs:\n---- want\n%s---- got\n%s----", path, want, got);
    free(want);
}

static void compare_file(const char *name, const char *ending, const char *path, const char *temporary) {
    char *raw = read_whole(path);
    char *got = replace_all(raw, temporary, placeholder);
    compare(name, ending, got);
    free(got);
    free(raw);
}

static void test_case(void **state) {
    const char *name = *state;
    char temporary[] = "/tmp/beamward-cli-XXXXXX", path[PATH_SIZE], command[8192];
    assert_non_null(mkdtemp(temporary));
    snprintf(path, sizeof path, "%s/%s.args", folder, name);
    char *raw = read_whole(path);
    raw[strcspn(raw, "\n")] = '\0';
    char *words = replace_all(raw, placeholder, temporary);
    snprintf(command, sizeof command, "%s %s >%s.stdout 2>%s.stderr </dev/null", TEST_PROGRAM, words, temporary,
             temporary);
    int status = system(command);
    assert_true(WIFEXITED(status));
    char exit_text[16] = "";
    if (WEXITSTATUS(status) != 0)
        snprintf(exit_text, sizeof exit_text, "%d\n", WEXITSTATUS(status));
    snprintf(path, sizeof path, "%s.stderr", temporary);
    compare_file(name, "err", path, temporary);
    unlink(path);
    snprintf(path, sizeof path, "%s.stdout", temporary);
    compare_file(name, "out", path, temporary);
    unlink(path);
    compare(name, "exit", exit_text);
    snprintf(command, sizeof command, "rm -r %s", temporary);
    assert_int_equal(system(command), 0);
    free(words);
    free(raw);
}

static int is_case(const struct dirent *entry) {
    const char *dot = strrchr(entry->d_name, '.');
    return dot && strcmp(dot, ".args") == 0;
}

int main(void) {
    static struct CMUnitTest tests[CASES_MAX];
    struct dirent **entries = NULL;
    int count = scandir(folder, &entries, is_case, alphasort);
    if (count <= 0 || count > CASES_MAX) {
        fprintf(stderr, "%s: no cases, or too many; run from the top of the tree\n", folder);
        return EXIT_FAILURE;
    }
    for (int i = 0; i < count; i++) {
        *strrchr(entries[i]->d_name, '.') = '\0';
        tests[i] = (struct CMUnitTest){entries[i]->d_name, test_case, NULL, NULL, entries[i]->d_name};
    }
    int failed = _cmocka_run_group_tests("cli", tests, (size_t)count, NULL, NULL);
    for (int i = 0; i < count; i++)
        free(entries[i]);
    free(entries);
    return failed == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
