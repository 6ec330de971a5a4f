/* base: the guarded INI reader. Each refusal with its line and its words; what is accepted, with every value. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>

#include <cmocka.h>

#include <beamward/base.h>

#define COUNT(array) (sizeof(array) / sizeof *(array))

/* The bytes of a string literal, NUL bytes in it included. */
#define BYTES(literal) literal, sizeof(literal) - 1

struct ini_case {
    const char *name, *bytes;
    size_t length;
    const char *want; /* accepted: a line an entry; refused: the faults as printed */
};

#define QUOTES "put the value in double quotes, or a blank before a comment\n"

static struct ini_case refused[] = {
    {"refused: empty file", BYTES(""), "F: empty: no section in it; the first line could be [case]\n"},
    {"refused: comments only", BYTES("; a\n# b\n\n"), "F: empty: no section in it; the first line could be [case]\n"},
    {"refused: byte order mark only", BYTES("\xef\xbb\xbf"), "F: empty: no section in it; the first line could be [case]\n"},
    {"refused: key twice", BYTES("[a]\nx = 1\ny = 2\nx = 1\n"),
     "F:4: [a] x: given twice, first in line 2; keep one\n"},
    {"refused: key twice in other letters", BYTES("[a]\nWave_nm = 1\nwave_NM = 2\n"),
     "F:3: [a] wave_nm: given twice, first in line 2; keep one\n"},
    {"refused: key three times", BYTES("[a]\nx = 1\nx = 2\nx = 3\n"),
     "F:3: [a] x: given twice, first in line 2; keep one\nF:4: [a] x: given twice, first in line 2; keep one\n"},
    {"refused: section twice", BYTES("[a]\nx = 1\n[b]\n[A]\ny = 2\n"),
     "F:4: [a]: section given twice, first in line 1; join them under one name or give it another\n"},
    {"refused: section twice, other blanks", BYTES("[laser  a]\nx = 1\n[ Laser a ]\n"),
     "F:3: [laser a]: section given twice, first in line 1; join them under one name or give it another\n"},
    {"refused: line continued", BYTES("[a]\nx = 1 \\\ny = 2\n"),
     "F:2: line ends in \\; a value ends with its line, remove the \\\n"},
    {"refused: comment continued", BYTES("[a]\n; c:\\\nx = 1\n"),
     "F:2: line ends in \\; a value ends with its line, remove the \\\n"},
    {"refused: continued, blanks behind", BYTES("[a]\nx = 1\\ \t\r\ny = 2\n"),
     "F:2: line ends in \\; a value ends with its line, remove the \\\n"},
    {"refused: text after a closing quote", BYTES("[a]\nx = \"1\" 2\n"),
     "F:2: [a] x: text after the closing quote; one pair of quotes round the whole value\n"},
    {"refused: text after a closing apostrophe", BYTES("[a]\nx = '1'2\n"),
     "F:2: [a] x: text after the closing quote; one pair of quotes round the whole value\n"},
    {"refused: quote not closed", BYTES("[a]\nx = \"1\n"), "F:2: [a] x: quote without its closing \"\n"},
    {"refused: apostrophe not closed", BYTES("[a]\nx = 's-Gravenhage\n"), "F:2: [a] x: quote without its closing '\n"},
    {"refused: key behind a section", BYTES("[a] ; x = 1\n"),
     "F:1: a key in the comment after a section; put it on its own line\n"},
    {"refused: text behind a section", BYTES("[a] x = 1\n"), "F:1: text after the ] of a section; begin a new line\n"},
    {"refused: two closing brackets", BYTES("[a]]\n"), "F:1: text after the ] of a section; begin a new line\n"},
    {"refused: two opening brackets", BYTES("[[a]\n"),
     "F:1: `[` in a section's name; letters, digits, - and blanks would be right\n"},
    {"refused: colon in a section", BYTES("[a]\n[a:b]\nx = 1\n"),
     "F:2: `:` in a section's name; letters, digits, - and blanks would be right\n"},
    {"refused: letter of another language in a section", BYTES("[gr\xc3\xb6\xc3\x9f" "e]\n"),
     "F:1: `\xc3\xb6` in a section's name; letters, digits, - and blanks would be right\n"},
    {"refused: tabulator in a section", BYTES("[a\tb]\n"), "F:1: tabulator in a section's name; one blank between its words\n"},
    {"refused: section not closed", BYTES("[a]\nx = 1\n[b\ny =\nz = 1\n[c]\nx = 1\n"),
     "F:3: section without its closing ]\nF:4: [b] y: has no value; write one or remove the key\n"},
    {"refused: empty section", BYTES("[]\nx = 1\n"), "F:1: section without a name; `[case]` would be right\n"},
    {"refused: blank section", BYTES("[  ]\n"), "F:1: section without a name; `[case]` would be right\n"},
    {"refused: opening bracket alone", BYTES("["), "F:1: section without its closing ]\n"},
    {"refused: text without =", BYTES("[a]\nx 1\n"),
     "F:2: [a]: `x 1` is neither a section nor a key; `key = value` would be right\n"},
    {"refused: one letter, the last byte", BYTES("[a]\nx"),
     "F:2: [a]: `x` is neither a section nor a key; `key = value` would be right\n"},
    {"refused: long text without =, cut between characters",
     BYTES("[a]\n123456789 123456789 123456789 123456789\xe2\x82\xac and more\n"),
     "F:2: [a]: `123456789 123456789 123456789 123456789` is neither a section nor a key; `key = value` would be right\n"},
    {"refused: keys before any section", BYTES("x = 1\ny = 2\n[a]\n"),
     "F:1: x: key before any section; begin with [case] or [table]\n"
     "F:2: y: key before any section; begin with [case] or [table]\n"},
    {"refused: no key", BYTES("[a]\n = 1\n"), "F:2: [a]: no key before the =; `key = value` would be right\n"},
    {"refused: colon in a key", BYTES("[a]\nx:y = 1\n"),
     "F:2: [a]: `x:y` is no name for a key; letters, digits, _ and - would be right\n"},
    {"refused: blank in a key", BYTES("[a]\nx y = 1\n"),
     "F:2: [a]: `x y` is no name for a key; letters, digits, _ and - would be right\n"},
    {"refused: comment sign in a key", BYTES("[a]\nx;y = 1\n"),
     "F:2: [a]: `x;y` is no name for a key; letters, digits, _ and - would be right\n"},
    {"refused: no value", BYTES("[a]\nx =\n"), "F:2: [a] x: has no value; write one or remove the key\n"},
    {"refused: blank value", BYTES("[a]\nx =  \t\n"), "F:2: [a] x: has no value; write one or remove the key\n"},
    {"refused: quoted nothing", BYTES("[a]\nx = \"\"\n"), "F:2: [a] x: has no value; write one or remove the key\n"},
    {"refused: quoted blanks", BYTES("[a]\nx = '  '\n"), "F:2: [a] x: has no value; write one or remove the key\n"},
    {"refused: comment for a value", BYTES("[a]\nx = ; later\n"),
     "F:2: [a] x: has no value; write one or remove the key\n"},
    {"refused: comment glued to =", BYTES("[a]\nx =#1\n"), "F:2: [a] x: has no value; write one or remove the key\n"},
    {"refused: ; inside a value", BYTES("[a]\nx = 1;2\n"), "F:2: [a] x: ; inside the value; " QUOTES},
    {"refused: # inside a value", BYTES("[a]\nx = room#2\n"), "F:2: [a] x: # inside the value; " QUOTES},
    {"refused: NUL", BYTES("[a]\nx = 1\n\0y = 2\nz = 3\n"),
     "F:3: control character 0x00; plain text would be right\n"
     "F:3: [a]: `?y` is no name for a key; letters, digits, _ and - would be right\n"},
    {"refused: escape in a comment", BYTES("[a]\n; \x1b[31m\nx = 1\n"),
     "F:2: control character 0x1b; plain text would be right\n"},
    {"refused: vertical tabulator", BYTES("[a]\nx = 1\v\n"), "F:2: control character 0x0b; plain text would be right\n"},
    {"refused: delete", BYTES("[a]\nx = 1\x7f\n"), "F:2: control character 0x7f; plain text would be right\n"},
    {"refused: UTF-16, little end first", BYTES("\xff\xfe[\0a\0]\0\n\0"), "F:1: UTF-16 text; save the file as UTF-8\n"},
    {"refused: UTF-16, big end first", BYTES("\xfe\xff\0[\0a\0]\0\n"), "F:1: UTF-16 text; save the file as UTF-8\n"},
    {"refused: Latin-1", BYTES("[a]\nx = 20 \xb0\n"), "F:2: not UTF-8 text; save the file as UTF-8\n"},
    {"refused: overlong UTF-8", BYTES("[a]\nx = \xc0\xaf\n"), "F:2: not UTF-8 text; save the file as UTF-8\n"},
    {"refused: overlong UTF-8 of three", BYTES("[a]\nx = \xe0\x80\xaf\n"), "F:2: not UTF-8 text; save the file as UTF-8\n"},
    {"refused: surrogate", BYTES("[a]\nx = \xed\xa0\x80\n"), "F:2: not UTF-8 text; save the file as UTF-8\n"},
    {"refused: above U+10FFFF", BYTES("[a]\nx = \xf4\x90\x80\x80\n"), "F:2: not UTF-8 text; save the file as UTF-8\n"},
    {"refused: UTF-8 cut by the end", BYTES("[a]\nx = \xe2\x82"), "F:2: not UTF-8 text; save the file as UTF-8\n"},
    {"refused: CR-only line ends", BYTES("[a]\rx = 1\ry = 2\r"),
     "F:1: carriage return without a line feed; save with LF or CR LF line ends\n"},
    {"refused: one CR inside a line", BYTES("[a]\nx = 1\ry = 2\n"),
     "F:2: carriage return without a line feed; save with LF or CR LF line ends\n"},
    {"refused: second byte order mark", BYTES("\xef\xbb\xbf\xef\xbb\xbf[a]\n"),
     "F:1: `\xef\xbb\xbf[a]` is neither a section nor a key; `key = value` would be right\n"},
    {"refused: all faults at once, by line",
     BYTES("k = 1\n[z]\ny = 1\nx =\ny = 2\nq = \"\n[a]\n; \xff\nx = 1\nx = 2\n[a]\n"),
     "F:1: k: key before any section; begin with [case] or [table]\n"
     "F:4: [z] x: has no value; write one or remove the key\n"
     "F:5: [z] y: given twice, first in line 3; keep one\n"
     "F:6: [z] q: quote without its closing \"\n"
     "F:8: not UTF-8 text; save the file as UTF-8\n"
     "F:10: [a] x: given twice, first in line 9; keep one\n"
     "F:11: [a]: section given twice, first in line 7; join them under one name or give it another\n"},
};

static struct ini_case accepted[] = {
    {"accepted: plain", BYTES("[case]\ntitle = Room 2\n"), "1 case||\n2 case|title|Room 2\n"},
    {"accepted: comment behind a section", BYTES("[a] ; why\r\nx = 1\n[b]# c\n"), "1 a||\n2 a|x|1\n3 b||\n"},
    {"accepted: comment behind a section that ends in ]", BYTES("[a] ; [b]\nx = 1\n"), "1 a||\n2 a|x|1\n"},
    {"accepted: no line feed at the end", BYTES("[a]\nx = 1"), "1 a||\n2 a|x|1\n"},
    {"accepted: section alone", BYTES("[a]"), "1 a||\n"},
    {"accepted: CR LF", BYTES("[a]\r\n\r\nx = 1\r\n; c\r\ny = 2\r\n"), "1 a||\n3 a|x|1\n5 a|y|2\n"},
    {"accepted: byte order mark", BYTES("\xef\xbb\xbf[a]\nx = 1\n"), "1 a||\n2 a|x|1\n"},
    {"accepted: no blanks round =", BYTES("[a]\nx=1\n"), "1 a||\n2 a|x|1\n"},
    {"accepted: many blanks", BYTES(" \t[ a ] \n\tx\t= \t1  2 \t\n"), "1 a||\n2 a|x|1  2\n"},
    {"accepted: blanks within a section", BYTES("[emission   Trident  deep]\nx = 1\n"),
     "1 emission trident deep||\n2 emission trident deep|x|1\n"},
    {"accepted: names in lower case, values as they are", BYTES("[A-B_2.c]\nX-Y_2.z = AbC\n"),
     "1 a-b_2.c||\n2 a-b_2.c|x-y_2.z|AbC\n"},
    {"accepted: comments", BYTES("; \xc3\xa9 = [x] \" ;\n# [y\n[a]\n  ; z = 1\nx = 1 ; two\ny = 2\t# three ; four\n"),
     "3 a||\n5 a|x|1\n6 a|y|2\n"},
    {"accepted: quotes", BYTES("[a]\nx = \"1; 2 # 3\"\ny = '\"q\"' ; c\nz = \"it's\"\n"),
     "1 a||\n2 a|x|1; 2 # 3\n3 a|y|\"q\"\n4 a|z|it's\n"},
    {"accepted: blanks within quotes are trimmed", BYTES("[a]\nx = \"  1  2\t\"\n"), "1 a||\n2 a|x|1  2\n"},
    {"accepted: quotes within a value", BYTES("[a]\nx = a 5\" lens, it's \"new\"\n"),
     "1 a||\n2 a|x|a 5\" lens, it's \"new\"\n"},
    {"accepted: = within a value", BYTES("[a]\nx = a = b\ny == c\n"), "1 a||\n2 a|x|a = b\n3 a|y|= c\n"},
    {"accepted: brackets within a value", BYTES("[a]\nx = [b]\n"), "1 a||\n2 a|x|[b]\n"},
    {"accepted: colon and per cent within a value", BYTES("[a]\nx = b:c %s %n 5%\n"), "1 a||\n2 a|x|b:c %s %n 5%\n"},
    {"accepted: backslash within a value", BYTES("[a]\nx = c:\\d\n"), "1 a||\n2 a|x|c:\\d\n"},
    {"accepted: UTF-8 values", BYTES("[a]\nx = \xe2\x89\xa4 5 \xc2\xb5m \xf0\x9f\x94\xac\n"),
     "1 a||\n2 a|x|\xe2\x89\xa4 5 \xc2\xb5m \xf0\x9f\x94\xac\n"},
    {"accepted: the same key in two sections", BYTES("[b]\nx = 1\n[a]\nx = 2\n[b c]\nx = 3\n"),
     "1 b||\n2 b|x|1\n3 a||\n4 a|x|2\n5 b c||\n6 b c|x|3\n"},
    {"accepted: a printed row", BYTES("[eye retina-thermal]\nr01 = 400 .. <700  | H | 1/98.5 | - | ca ce\n"),
     "1 eye retina-thermal||\n2 eye retina-thermal|r01|400 .. <700  | H | 1/98.5 | - | ca ce\n"},
};

static void check_faults(const struct bw_faults *faults, const char *want) {
    struct bw_text got = {0};
    bw_faults_print(&got, "F", faults);
    assert_string_equal(got.data ? got.data : "", want);
    bw_text_free(&got);
}

/* A copy of exactly this length, so that the sanitizers see every byte read beyond it. */
static enum bw_status read_copy(const char *bytes, size_t length, struct bw_ini *ini, struct bw_faults *faults,
                                struct bw_error *error) {
    char *copy = malloc(length > 0 ? length : 1);
    assert_non_null(copy);
    memcpy(copy, bytes, length);
    enum bw_status status = bw_ini_read_bytes(copy, length, ini, faults, error);
    free(copy);
    return status;
}

static void test_refused(void **state) {
    const struct ini_case *c = *state;
    struct bw_ini ini = {0};
    struct bw_faults faults = {0};
    struct bw_error error = {0};
    assert_int_equal(read_copy(c->bytes, c->length, &ini, &faults, &error), BW_INPUT);
    check_faults(&faults, c->want);
    assert_int_equal(error.status, BW_INPUT);
    assert_string_equal(error.text, faults.items[0].text);
    assert_int_equal(ini.count, 0);
    bw_faults_free(&faults);
    bw_ini_free(&ini);
}

static void test_accepted(void **state) {
    const struct ini_case *c = *state;
    struct bw_ini ini = {0};
    struct bw_faults faults = {0};
    struct bw_error error = {0};
    enum bw_status status = read_copy(c->bytes, c->length, &ini, &faults, &error);
    check_faults(&faults, "");
    assert_int_equal(status, BW_OK);
    struct bw_text got = {0};
    for (size_t i = 0; i < ini.count; i++)
        bw_text_add(&got, "%d %s|%s|%s\n", ini.entries[i].line, ini.entries[i].section, ini.entries[i].key,
                    ini.entries[i].value);
    assert_string_equal(got.data, c->want);
    bw_text_free(&got);
    bw_faults_free(&faults);
    bw_ini_free(&ini);
}

/* ---- limits of size --------------------------------------------------------------------------- */

static void check_size(const struct bw_text *bytes, enum bw_status want, const char *fault, size_t entries) {
    struct bw_ini ini = {0};
    struct bw_faults faults = {0};
    assert_false(bytes->failed);
    enum bw_status status = read_copy(bytes->data, bytes->length, &ini, &faults, NULL);
    check_faults(&faults, fault);
    assert_int_equal(status, want);
    assert_int_equal(ini.count, entries);
    bw_faults_free(&faults);
    bw_ini_free(&ini);
}

static void test_line_length(void **state) {
    (void)state;
    for (int length = 999; length <= 1001; length++) {
        struct bw_text bytes = {0};
        bw_text_add(&bytes, "[a]\nx = %0*d\r\n", length - 4, 1);
        check_size(&bytes, length > 1000 ? BW_INPUT : BW_OK,
                   length > 1000 ? "F:2: line of more than 1000 bytes; split it over several keys\n" : "",
                   length > 1000 ? 0 : 2);
        bw_text_free(&bytes);
    }
}

static void test_long_comment(void **state) {
    (void)state;
    struct bw_text bytes = {0};
    bw_text_add(&bytes, "[a]\n;%02000d\nx = 1\n", 0);
    check_size(&bytes, BW_INPUT, "F:2: line of more than 1000 bytes; split it over several keys\n", 0);
    bw_text_free(&bytes);
}

/* A full file: within the second that it may take, on a slow machine within ten. */
static void test_keys_cap(void **state) {
    (void)state;
    struct bw_text bytes = {0};
    bw_text_add(&bytes, "[a]\n");
    for (int i = 1; i < 20000; i++)
        bw_text_add(&bytes, "key_%d = %d\n", i, i);
    clock_t start = clock();
    check_size(&bytes, BW_OK, "", 20000);
    assert_true((double)(clock() - start) / CLOCKS_PER_SEC < 10);
    bw_text_add(&bytes, "one_more = 1\n");
    check_size(&bytes, BW_INPUT, "F:20001: more than 20000 keys and sections; split the file\n", 0);
    bw_text_free(&bytes);
}

static void test_bytes_cap(void **state) {
    (void)state;
    struct bw_text bytes = {0};
    bw_text_add(&bytes, "[a]\nx = 1\n");
    while (bytes.length < 4 * 1024 * 1024)
        bw_text_add(&bytes, ";%014d\n", 0);
    bytes.length = 4 * 1024 * 1024;
    check_size(&bytes, BW_OK, "", 2);
    bytes.length++;
    check_size(&bytes, BW_INPUT, "F: larger than 4 MiB; a file of this kind has a few kilobytes\n", 0);
    bw_text_free(&bytes);
}

/* Two million lines of rubbish must not need two million messages. */
static void test_faults_cap(void **state) {
    (void)state;
    struct bw_text bytes = {0};
    while (bytes.length < 4 * 1024 * 1024)
        bw_text_add(&bytes, "x\nx\nx\nx\nx\nx\nx\nx\n");
    struct bw_ini ini = {0};
    struct bw_faults faults = {0};
    assert_int_equal(bw_ini_read_bytes(bytes.data, bytes.length, &ini, &faults, NULL), BW_INPUT);
    assert_int_equal(faults.count, 1001);
    assert_int_equal(faults.items[1000].line, 1001);
    assert_string_equal(faults.items[1000].text, "too many faults; what follows is not listed");
    bw_faults_free(&faults);
    bw_text_free(&bytes);
}

/* ---- any bytes -------------------------------------------------------------------------------- */

/* xorshift64 (G. Marsaglia, Xorshift RNGs, 2003). */
static uint64_t next_random(uint64_t *random) {
    *random ^= *random << 13;
    *random ^= *random >> 7;
    *random ^= *random << 17;
    return *random;
}

/* Whatever is written: the guard either refuses it in its own words, or iniparser reads the same as the guard.
 * "could not be read reliably" would be a gap in the guard. */
static void test_guard_is_complete(void **state) {
    (void)state;
    static const char alphabet[] = "aB=[]\"';#\\ \t\n\n\n:%-_.1,|";
    uint64_t random = 88172645463325252u;
    int good = 0;
    for (int i = 0; i < 20000; i++) {
        char bytes[48] = "[s]\n";
        size_t start = i % 2 ? 4 : 0, length = start + 1 + next_random(&random) % 24;
        for (size_t j = start; j < length; j++)
            bytes[j] = alphabet[next_random(&random) % (sizeof alphabet - 1)];
        struct bw_ini ini = {0};
        struct bw_faults faults = {0};
        struct bw_error error = {0};
        enum bw_status status = bw_ini_read_bytes(bytes, length, &ini, &faults, &error);
        if (status != BW_OK && status != BW_INPUT)
            fail_msg("`%.*s`: %s", (int)length, bytes, error.text);
        for (size_t j = 0; j < faults.count; j++)
            if (strstr(faults.items[j].text, "reliably"))
                fail_msg("`%.*s`: %s", (int)length, bytes, faults.items[j].text);
        good += status == BW_OK && ini.count > 1;
        bw_faults_free(&faults);
        bw_ini_free(&ini);
    }
    assert_true(good > 20); /* else nothing was compared */
}

/* The same where most lines are keys: quotes, comment signs and blanks in every order. */
static void test_values_are_complete(void **state) {
    (void)state;
    static const char alphabet[] = "ab\"\"'';#\\ \t=[]%";
    uint64_t random = 362436069521288629u;
    int good = 0;
    for (int i = 0; i < 20000; i++) {
        char bytes[48] = "[s]\nk =";
        size_t length = 7 + next_random(&random) % 9;
        for (size_t j = 7; j < length; j++)
            bytes[j] = alphabet[next_random(&random) % (sizeof alphabet - 1)];
        struct bw_ini ini = {0};
        struct bw_faults faults = {0};
        enum bw_status status = bw_ini_read_bytes(bytes, length, &ini, &faults, NULL);
        if (status != BW_OK && (status != BW_INPUT || strstr(faults.items[0].text, "reliably")))
            fail_msg("`%.*s`: %s", (int)length, bytes, faults.count ? faults.items[0].text : "no fault");
        good += status == BW_OK;
        bw_faults_free(&faults);
        bw_ini_free(&ini);
    }
    assert_true(good > 2000);
}

/* ---- files ------------------------------------------------------------------------------------ */

static void test_file(void **state) {
    (void)state;
    static const char content[] = "\xef\xbb\xbf[a]\nx = 1\n";
    char path[64];
    FILE *file = tmpfile();
    assert_non_null(file);
    assert_int_equal(fwrite(content, 1, sizeof content - 1, file), sizeof content - 1);
    assert_int_equal(fflush(file), 0);
    snprintf(path, sizeof path, "/proc/self/fd/%d", fileno(file));
    struct bw_ini ini = {0};
    struct bw_text bytes = {0};
    struct bw_faults faults = {0};
    struct bw_error error = {0};
    enum bw_status status = bw_ini_read(path, &ini, &bytes, &faults, &error);
    fclose(file);
    assert_int_equal(status, BW_OK);
    assert_int_equal(ini.count, 2);
    assert_string_equal(ini.entries[1].value, "1");
    assert_int_equal(bytes.length, sizeof content - 1); /* raw: the mark included */
    assert_memory_equal(bytes.data, content, sizeof content - 1);
    bw_text_free(&bytes);
    bw_ini_free(&ini);
}

static struct path_case {
    const char *name, *path;
    enum bw_status want;
    const char *text;
} paths[] = {
    {"file: none of this name", "/nonexistent/case.ini", BW_INPUT, "cannot be opened: No such file or directory"},
    {"file: behind a file", "/dev/null/case.ini", BW_INPUT, "cannot be opened: Not a directory"},
    {"file: a folder", "/", BW_INPUT, "is a folder; name a file"},
    {"file: without an end", "/dev/zero", BW_INPUT, "larger than 4 MiB; a file of this kind has a few kilobytes"},
    {"file: empty", "/dev/null", BW_INPUT, "empty: no section in it; the first line could be [case]"},
};

static void test_path(void **state) {
    const struct path_case *c = *state;
    struct bw_ini ini = {0};
    struct bw_faults faults = {0};
    struct bw_error error = {0};
    assert_int_equal(bw_ini_read(c->path, &ini, NULL, &faults, &error), c->want);
    assert_string_equal(error.text, c->text);
    assert_int_equal(ini.count, 0);
    bw_faults_free(&faults);
}

static void test_add(void **state) {
    (void)state;
    struct bw_ini ini = {0};
    for (int i = 0; i < 100; i++) {
        char key[16];
        snprintf(key, sizeof key, "k%d", i);
        assert_int_equal(bw_ini_add(&ini, "s", key, "v", i), BW_OK);
    }
    assert_int_equal(ini.count, 100);
    assert_string_equal(ini.entries[99].key, "k99");
    assert_int_equal(ini.entries[99].line, 99);
    bw_ini_free(&ini);
    assert_true(ini.entries == NULL && ini.count == 0);
}

int main(void) {
    struct CMUnitTest tests[COUNT(refused) + COUNT(accepted) + COUNT(paths) + 9] = {
        cmocka_unit_test(test_line_length),         cmocka_unit_test(test_long_comment),
        cmocka_unit_test(test_keys_cap),            cmocka_unit_test(test_bytes_cap),
        cmocka_unit_test(test_faults_cap),          cmocka_unit_test(test_guard_is_complete),
        cmocka_unit_test(test_values_are_complete), cmocka_unit_test(test_file),
        cmocka_unit_test(test_add),
    };
    size_t count = 9;
    for (size_t i = 0; i < COUNT(refused); i++)
        tests[count++] = (struct CMUnitTest){refused[i].name, test_refused, NULL, NULL, &refused[i]};
    for (size_t i = 0; i < COUNT(accepted); i++)
        tests[count++] = (struct CMUnitTest){accepted[i].name, test_accepted, NULL, NULL, &accepted[i]};
    for (size_t i = 0; i < COUNT(paths); i++)
        tests[count++] = (struct CMUnitTest){paths[i].name, test_path, NULL, NULL, &paths[i]};
    return cmocka_run_group_tests_name("base ini", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
