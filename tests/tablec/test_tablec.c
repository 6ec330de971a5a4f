/* The host program that checks the tables and writes them out as C, from outside: command lines, files that it must
 * refuse with their line and reason, and outputs that cannot be written. Each row runs in a fresh folder, made ready
 * by a shell command; its stderr is compared whole. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <cmocka.h>
#include <sys/wait.h>
#include <unistd.h>

#include "unit/small_table.h"

enum { PATH_SIZE = 512, COMMAND_SIZE = 16384, TEXT_SIZE = 16384 };
static char tablec[PATH_SIZE], tables[PATH_SIZE]; /* whole paths: a row's folder is the current one */

#define HEAD "[materials]\ntitle = invented\n" /* a material begins on line 3 */
#define WALL                                                                                                           \
    "[material wall]\ntitle = a wall\nfinish = matt\nreflectance = 0.9\ntransmittance = 0\n"                           \
    "source = invented for this test\nknown = memory\n"
#define GLASS                                                                                                          \
    "[material pane]\ntitle = a pane\nfinish = glass\nrefractive_index = 1.5\nreflectance = 0.04\n"                    \
    "transmittance = 0.92\nsource = invented for this test\nknown = memory\n"
#define OF_A_WALL(keys) HEAD "[material wall]\n" keys "source = invented for this test\nknown = memory\n"
#define GOOD_KEYS       "title = a wall\nfinish = matt\nreflectance = 0.9\ntransmittance = 0\n"
#define COPY            "cp \"$TABLES\"/icnirp-2013.ini a.ini; "

struct row {
    const char *name;
    const char *text;  /* of in.ini; NULL: none */
    const char *ready; /* shell, or NULL */
    const char *words; /* of the command line */
    int code;
    const char *says; /* whole stderr */
};
static struct row rows[] = {
    /* command lines */
    {"nothing asked", NULL, NULL, "", 2, "usage: tablec --out FILE TABLE.ini ...\n"},
    {"no table", NULL, NULL, "--out out.c", 2, "usage: tablec --out FILE TABLE.ini ...\n"},
    {"another option", NULL, NULL, "--into out.c in.ini", 2, "usage: tablec --out FILE TABLE.ini ...\n"},
    /* files */
    {"no such file", NULL, NULL, "--out out.c in.ini", 2, "in.ini:0: cannot be opened: No such file or directory\n"},
    {"a link to itself", NULL, "ln -s in.ini in.ini", "--out out.c in.ini", 3,
     "in.ini:0: cannot be opened: Too many levels of symbolic links\n"},
    {"a refusal after a failure of the system", "[zebra]\n", "ln -s b.ini b.ini", "--out out.c b.ini in.ini", 3,
     "b.ini:0: cannot be opened: Too many levels of symbolic links\n"
     "in.ini:0: unknown kind of table [zebra]; wants [table] or one [materials] first\n"},
    {"empty", "", NULL, "--out out.c in.ini", 2, "in.ini:0: empty: no section in it; the first line could be [case]\n"},
    {"a key before all sections", "id = x\n[table]\n", NULL, "--out out.c in.ini", 2,
     "in.ini:1: id: key before any section; begin with [case] or [table]\n"},
    {"unknown kind", "[zebra]\n", NULL, "--out out.c in.ini", 2,
     "in.ini:0: unknown kind of table [zebra]; wants [table] or one [materials] first\n"},
    {"materials twice", HEAD WALL, "cp in.ini b.ini", "--out out.c in.ini b.ini", 2,
     "b.ini:0: unknown kind of table [materials]; wants [table] or one [materials] first\n"},
    {"a rule set twice", NULL, COPY "cp a.ini b.ini", "--out out.c a.ini b.ini", 2,
     "b.ini:0: id icnirp-2013 is taken by another rule set\n"},
    {"33 rule sets", NULL,
     COPY "i=10; while [ $i -le 42 ]; do sed \"s/^id .*/id = t$i/\" a.ini >t$i.ini; i=$((i + 1)); done",
     "--out out.c t*.ini", 2, "t42.ini:0: more than 32 rule sets\n"},
    {"a rule set with faults", "[table]\nid = A b\ntitle = t\nsource = s\n", NULL, "--out out.c in.ini", 2,
     "in.ini:0: [table] edition: is missing; a rule set must name its edition\n"
     "in.ini:0: [table] id: 'A b' is not a name; wants a-z, 0-9 and hyphen\n"},
    /* outputs */
    {"no such folder", HEAD WALL, NULL, "--out none/out.c in.ini", 3, "none/out.c.part: No such file or directory\n"},
    {"a full disk", HEAD WALL, COPY "ln -s /dev/full out.c.part", "--out out.c in.ini a.ini", 3,
     "out.c: No space left on device\n"},
    {"a full disk, seen at the end", HEAD WALL, "ln -s /dev/full out.c.part", "--out out.c in.ini", 3,
     "out.c: No space left on device\n"},
    {"the output is a folder", HEAD WALL, "mkdir -p out.c", "--out out.c in.ini", 3, "out.c: Is a directory\n"},
    /* materials: sections */
    {"material without a name", HEAD "[material -]\n[material a_b]\nfinish = shiny\n", NULL, "--out out.c in.ini", 2,
     "in.ini:3: [materials] title: is missing in [material -]\n"
     "in.ini:3: [materials] finish: is missing in [material -]\n"
     "in.ini:3: [materials] reflectance: is missing in [material -]\n"
     "in.ini:3: [materials] transmittance: is missing in [material -]\n"
     "in.ini:3: [materials] source: is missing in [material -]\n"
     "in.ini:3: [materials] known: is missing in [material -]\n"
     "in.ini:4: [material a_b] : unknown section; wants material NAME, with a-z, 0-9 and hyphen\n"},
    {"another section", HEAD WALL "[factor ca]\n", NULL, "--out out.c in.ini", 2,
     "in.ini:10: [factor ca] : unknown section; wants material NAME, with a-z, 0-9 and hyphen\n"},
    {"long name", HEAD WALL "[material a-name-that-is-so-long-that-no-report-has-a-column-that-would-take-it-in]\n",
     NULL, "--out out.c in.ini", 2,
     "in.ini:10: [material a-name-that-is-so-long-that-no-report-has-a-column-that-would-take-it-in] : unknown "
     "section; wants material NAME, with a-z, 0-9 and hyphen\n"},
    {"no materials", HEAD, NULL, "--out out.c in.ini", 2, "in.ini:0: the materials have 0 faults\n"},
    /* materials: keys */
    {"unknown key", HEAD WALL "colour = white\n", NULL, "--out out.c in.ini", 2,
     "in.ini:10: [material wall] colour: unknown key; wants title, finish, reflectance, matt_reflectance, "
     "transmittance, refractive_index, source or known\n"},
    {"unknown finish", OF_A_WALL("title = a wall\nfinish = shiny\nreflectance = 0.9\ntransmittance = 0\n"), NULL,
     "--out out.c in.ini", 2, "in.ini:5: [material wall] finish: unknown finish; wants matt, mirror, gloss or glass\n"},
    {"reflectance no number", OF_A_WALL("title = a wall\nfinish = matt\nreflectance = 90 %\ntransmittance = 0\n"), NULL,
     "--out out.c in.ini", 2, "in.ini:6: [material wall] reflectance: '90 %' is not a number from 0 to 1\n"},
    {"reflectance above 1", OF_A_WALL("title = a wall\nfinish = matt\nreflectance = 1.01\ntransmittance = 0\n"), NULL,
     "--out out.c in.ini", 2, "in.ini:6: [material wall] reflectance: '1.01' is not a number from 0 to 1\n"},
    {"transmittance below 0", OF_A_WALL("title = a wall\nfinish = matt\nreflectance = 0.9\ntransmittance = -0.1\n"),
     NULL, "--out out.c in.ini", 2, "in.ini:7: [material wall] transmittance: '-0.1' is not a number from 0 to 1\n"},
    {"known by hearsay", HEAD "[material wall]\n" GOOD_KEYS "source = invented for this test\nknown = hearsay\n", NULL,
     "--out out.c in.ini", 2, "in.ini:9: [material wall] known: unknown word; wants read or memory\n"},
    {"title empty", OF_A_WALL("title =\nfinish = matt\nreflectance = 0.9\ntransmittance = 0\n"), NULL,
     "--out out.c in.ini", 2, "in.ini:4: [material wall] title: has no value; write one or remove the key\n"},
    {"title of 200 bytes", NULL,
     "{ printf '[materials]\\ntitle = invented\\n[material wall]\\ntitle = %0200d\\n' 0; "
     "printf 'finish = matt\\nreflectance = 0.9\\ntransmittance = 0\\nsource = invented\\nknown = memory\\n'; } "
     ">in.ini",
     "--out out.c in.ini", 2, "in.ini:4: [material wall] title: is too long; wants at most 199 bytes\n"},
    {"key missing", OF_A_WALL("title = a wall\nfinish = matt\nreflectance = 0.9\n"), NULL, "--out out.c in.ini", 2,
     "in.ini:3: [materials] transmittance: is missing in [material wall]\n"},
    /* materials: what the finish asks for */
    {"glass without its index",
     HEAD "[material pane]\ntitle = a pane\nfinish = glass\nreflectance = 0.04\ntransmittance = 0.92\nsource = "
          "invented\nknown = read\n",
     NULL, "--out out.c in.ini", 2, "in.ini:3: [materials] refractive_index: is missing in [material pane]\n"},
    /* ((1.5 - 1)/(1.5 + 1))^2 = 0.04 */
    {"glass below Fresnel",
     HEAD "[material pane]\ntitle = a pane\nfinish = glass\nrefractive_index = 1.5\nreflectance = 0.039\n"
          "transmittance = 0.92\nsource = invented\nknown = read\n",
     NULL, "--out out.c in.ini", 2,
     "in.ini:3: [materials] reflectance: of [material pane] does not fit its refractive index; wants 0.04 or a little "
     "more\n"},
    {"glass far above Fresnel",
     HEAD "[material pane]\ntitle = a pane\nfinish = glass\nrefractive_index = 1.5\nreflectance = 0.045\n"
          "transmittance = 0.92\nsource = invented\nknown = read\n",
     NULL, "--out out.c in.ini", 2,
     "in.ini:3: [materials] reflectance: of [material pane] does not fit its refractive index; wants 0.04 or a little "
     "more\n"},
    {"gloss without its ground",
     HEAD "[material door]\ntitle = a door\nfinish = gloss\nrefractive_index = 1.5\nreflectance = 0.04\n"
          "transmittance = 0\nsource = invented\nknown = read\n",
     NULL, "--out out.c in.ini", 2, "in.ini:3: [materials] matt_reflectance: is missing in [material door]\n"},
    {"a ground under a matt wall", HEAD WALL "matt_reflectance = 0.9\n", NULL, "--out out.c in.ini", 2,
     "in.ini:3: [materials] matt_reflectance: of [material wall] is for gloss only\n"},
    {"an index of a matt wall", HEAD WALL "refractive_index = 1.5\n", NULL, "--out out.c in.ini", 2,
     "in.ini:3: [materials] refractive_index: of [material wall] is for gloss and glass only\n"},
    {"an index below 1", HEAD WALL "refractive_index = 0.9\n", NULL, "--out out.c in.ini", 2,
     "in.ini:3: [materials] refractive_index: of [material wall] is for gloss and glass only\n"
     "in.ini:10: [material wall] refractive_index: '0.9' is not a number from 1 to 4\n"},
};

/* Runs words in the folder. Returned: its stderr. Returns: its exit code. */
static int run(const char *folder, const char *words, char says[TEXT_SIZE]) {
    char command[COMMAND_SIZE];
    assert_true(snprintf(command, sizeof command, "cd %s && LC_ALL=C %s %s 2>&1 >/dev/null", folder, tablec, words) <
                (int)sizeof command);
    FILE *pipe = popen(command, "r");
    assert_non_null(pipe);
    says[fread(says, 1, TEXT_SIZE - 1, pipe)] = '\0';
    int status = pclose(pipe);
    assert_true(WIFEXITED(status));
    return WEXITSTATUS(status);
}

static void shell(const char *folder, const char *words) {
    char command[COMMAND_SIZE];
    snprintf(command, sizeof command, "cd %s && TABLES=%s && { %s\n}", folder, tables, words);
    assert_int_equal(system(command), 0);
}

static void write_input(const char *folder, const char *text) {
    char path[PATH_SIZE];
    snprintf(path, sizeof path, "%s/in.ini", folder);
    FILE *file = fopen(path, "w");
    assert_non_null(file);
    fputs(text, file);
    assert_int_equal(fclose(file), 0);
}

static void read_output(const char *folder, char *text, size_t size) {
    char path[PATH_SIZE];
    snprintf(path, sizeof path, "%s/out.c", folder);
    FILE *file = fopen(path, "r");
    assert_non_null(file);
    text[fread(text, 1, size - 1, file)] = '\0';
    fclose(file);
}

static void test_refused(void **state) {
    const struct row *row = *state;
    char folder[] = "/tmp/beamward-tablec-XXXXXX", says[TEXT_SIZE];
    assert_non_null(mkdtemp(folder));
    if (row->text != NULL)
        write_input(folder, row->text);
    if (row->ready != NULL)
        shell(folder, row->ready);
    int code = run(folder, row->words, says);
    if (code != row->code || strcmp(says, row->says) != 0)
        fail_msg("exit %d, want %d\n---- want\n%s---- got\n%s----", code, row->code, row->says, says);
    shell(folder, "[ ! -f out.c ] && { [ -L out.c.part ] || [ ! -e out.c.part ]; }"); /* no half table */
    char away[PATH_SIZE];
    snprintf(away, sizeof away, "rm -r %s", folder);
    shell("/tmp", away);
}

/* What C would read otherwise is escaped, and the materials stand by name. */
static void test_materials_written(void **state) {
    char folder[] = "/tmp/beamward-tablec-XXXXXX", says[TEXT_SIZE], away[PATH_SIZE];
    static char text[TEXT_SIZE];
    (void)state;
    assert_non_null(mkdtemp(folder));
    write_input(folder, HEAD WALL GLASS "[material a]\ntitle = a \"b\" c\\d \xc3\xa4 ?\?=\te\nfinish = matt\n"
                                        "reflectance = 0.5\ntransmittance = 0\nsource = invented\nknown = read\n");
    assert_int_equal(run(folder, "--out out.c in.ini", says), 0);
    assert_string_equal(says, "");
    read_output(folder, text, sizeof text);
    const char *a =
        strstr(text, "{\"a\", \"a \\\"b\\\" c\\\\d \\303\\244 \\077\\077=\\011e\", BW_MATT, 0.5, 0.5, 0, 0, "
                     "\"invented\", BW_READ},\n");
    const char *pane = strstr(text, "{\"pane\", \"a pane\", BW_GLASS, ");
    const char *wall = strstr(text, "{\"wall\", \"a wall\", BW_MATT, ");
    if (a == NULL || pane == NULL || wall == NULL)
        fail_msg("%s", text);
    assert_true(a < pane && pane < wall);
    snprintf(away, sizeof away, "rm -r %s", folder);
    shell("/tmp", away);
}

/* A rule set without cones, sums of one target each: C has no empty arrays. */
static void test_table_written(void **state) {
    char folder[] = "/tmp/beamward-tablec-XXXXXX", says[TEXT_SIZE], away[PATH_SIZE], text[TEXT_SIZE];
    static char out[1 << 20];
    static const char photochemical[] = "[eye retina-photochemical]", skin[] = "[skin]", second[] = "r02 = retina-ph",
                      third[] = "r03 = skin", cone[] = "[cone]", repetition[] = "[repetition]", eye[] = "| eye skin |";
    (void)state;
    assert_non_null(mkdtemp(folder));
    const char *at = small_table;
    const char *stops[] = {strstr(at, photochemical), strstr(at, skin),       strstr(at, second), strstr(at, third),
                           strstr(at, cone),          strstr(at, repetition), strstr(at, eye)};
    for (size_t i = 0; i < 7; i++)
        assert_non_null(stops[i]);
    snprintf(text, sizeof text, "%.*s%.*sr02%.*s%.*s| eye | F | memory\nr02 = 400 .. 1400 | 400 .. 1400 | skin |%s",
             (int)(stops[0] - at), at, (int)(stops[2] - stops[1]), stops[1], (int)(stops[4] - stops[3] - 3),
             stops[3] + 3, (int)(stops[6] - stops[5]), stops[5], stops[6] + strlen(eye));
    write_input(folder, text);
    int code = run(folder, "--out out.c in.ini", says);
    assert_string_equal(says, "");
    assert_int_equal(code, 0);
    read_output(folder, out, sizeof out);
    assert_non_null(strstr(out, "static const struct size_row t0_cones[1] = {\n    {0},\n};\n"));
    assert_non_null(strstr(out, ".cone_count = 0,"));
    assert_non_null(strstr(out, "}, true, false, {\"r01\"")); /* the sums: the eye, then the skin */
    assert_non_null(strstr(out, "}, false, true, {\"r02\""));
    snprintf(away, sizeof away, "rm -r %s", folder);
    shell("/tmp", away);
}

static void test_long_path(void **state) {
    char folder[] = "/tmp/beamward-tablec-XXXXXX", says[TEXT_SIZE], away[PATH_SIZE];
    static char words[8192], want[8192];
    (void)state;
    assert_non_null(mkdtemp(folder));
    write_input(folder, HEAD WALL);
    snprintf(words, sizeof words, "--out %04091d in.ini", 0); /* with .part and its end 4097 bytes */
    snprintf(want, sizeof want, "tablec: the path %04091d is too long\n", 0);
    assert_int_equal(run(folder, words, says), 3);
    assert_string_equal(says, want);
    snprintf(away, sizeof away, "rm -r %s", folder);
    shell("/tmp", away);
}

int main(void) {
    enum { ROWS = sizeof rows / sizeof rows[0] };
    static struct CMUnitTest tests[ROWS + 3];
    char here[PATH_SIZE / 2];
    if (getcwd(here, sizeof here) == NULL)
        return EXIT_FAILURE;
    snprintf(tablec, sizeof tablec, "%s%s%s", TEST_TABLEC[0] == '/' ? "" : here, TEST_TABLEC[0] == '/' ? "" : "/",
             TEST_TABLEC);
    snprintf(tables, sizeof tables, "%s/limits_tables", here);
    for (size_t i = 0; i < ROWS; i++)
        tests[i] = (struct CMUnitTest){rows[i].name, test_refused, NULL, NULL, &rows[i]};
    tests[ROWS] = (struct CMUnitTest){"materials written", test_materials_written, NULL, NULL, NULL};
    tests[ROWS + 1] = (struct CMUnitTest){"a path too long", test_long_path, NULL, NULL, NULL};
    tests[ROWS + 2] = (struct CMUnitTest){"a table written", test_table_written, NULL, NULL, NULL};
    return cmocka_run_group_tests_name("tablec", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
