/* What the files of base share among themselves. */
#ifndef BASE_INTERNAL_H
#define BASE_INTERNAL_H

#include <beamward/base.h>

enum {
    INI_BYTES_MAX = 4 * 1024 * 1024,
    INI_LINE_MAX = 1000, /* iniparser 4.1 refuses 1023 bytes */
    INI_KEYS_MAX = 10000 /* iniparser looks keys up one by one: its time grows with the square */
};

/* Refuses a file whose bytes iniparser would misread: NUL, other encodings, CR-only line ends, size. */
void bw_ini_guard_bytes(const char *bytes, size_t length, struct bw_faults *faults);
/* Reads every line as iniparser would, and refuses what it would swallow or change. Appends to ini.
 * Returns: BW_OK, also with faults; BW_NO_MEMORY. */
enum bw_status bw_ini_guard_lines(const char *bytes, size_t length, struct bw_ini *ini, struct bw_faults *faults);
/* Names that stand twice, after lower-casing. */
enum bw_status bw_ini_guard_repeats(const struct bw_ini *ini, struct bw_faults *faults);

#endif
