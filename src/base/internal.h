/* What the files of base share among themselves. */
#ifndef BASE_INTERNAL_H
#define BASE_INTERNAL_H

#include <beamward/base.h>

#include <stdarg.h>

enum {
    INI_BYTES_MAX = 4 * 1024 * 1024,
    INI_LINE_MAX = 1000,   /* iniparser 4.1 refuses 1023 bytes */
    INI_KEYS_MAX = 20000,  /* iniparser looks keys up one by one: its time grows with the square */
    INI_FAULTS_MAX = 1000, /* enough to mend; a file that is no INI file has a fault in every line */
};

/* The text that a format makes, however long. Returns: NULL when memory is short. */
char *bw_print_copy(const char *format, va_list list) BW_PRINTF(1, 0);

/* Length of the UTF-8 sequence at the start, 0 if it is not one (RFC 3629). left must not be 0. */
size_t bw_utf8_length(const char *text, size_t left);
/* The longest beginning of at most `most` bytes that cuts no UTF-8 sequence. */
size_t bw_utf8_cut(const char *text, size_t length, size_t most);

/* Looks for bytes that iniparser would misread: NUL, other encodings, CR-only line ends, too many.
 * Returned: plain, the same text with `?` for each such byte, so that its lines can be judged all the same.
 * Returns:  false if they cannot. */
bool bw_ini_guard_bytes(const char *bytes, size_t length, struct bw_text *plain, struct bw_faults *faults);
/* Reads every line as iniparser would, and refuses what it would swallow or change. Appends to ini; sections keep
 * the blanks between their words as written, which is how iniparser knows them.
 * Returns: BW_OK, also with faults; BW_NO_MEMORY. */
enum bw_status bw_ini_guard_lines(const char *bytes, size_t length, struct bw_ini *ini, struct bw_faults *faults);
/* Overwrites the comments behind sections, in lines that the guard has accepted. */
void bw_ini_blank_section_comments(char *bytes, size_t length);
/* Refuses names that stand twice, after lower-casing, however many blanks stand between their words. */
enum bw_status bw_ini_guard_repeats(const struct bw_ini *ini, struct bw_faults *faults);
/* One blank between the words of a section. */
void bw_ini_collapse_sections(struct bw_ini *ini);
/* True when there are faults enough; says so once. */
bool bw_ini_enough_faults(struct bw_faults *faults, int line);

#endif
