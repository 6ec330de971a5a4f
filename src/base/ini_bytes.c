/* The first part of the guard in front of iniparser: is this a text at all? */
#include "internal.h"

#include <string.h>

enum kind { SOUND, ENCODING, CONTROL, RETURN, KINDS };

static enum kind kind_at(const char *bytes, size_t left) {
    unsigned char byte = (unsigned char)bytes[0];
    if (byte == '\r')
        return left > 1 && bytes[1] == '\n' ? SOUND : RETURN;
    if ((byte < 0x20 && byte != '\n' && byte != '\t') || byte == 0x7f)
        return CONTROL;
    return bw_utf8_length(bytes, left) == 0 ? ENCODING : SOUND;
}

static void tell(enum kind kind, unsigned char byte, int line, struct bw_faults *faults) {
    switch (kind) {
    case ENCODING:
        bw_faults_add(faults, line, "", "", "not UTF-8 text; save the file as UTF-8");
        break;
    case CONTROL:
        bw_faults_add(faults, line, "", "", "control character 0x%02x; plain text would be right", byte);
        break;
    case RETURN:
        bw_faults_add(faults, line, "", "", "carriage return without a line feed; save with LF or CR LF line ends");
        break;
    case SOUND:
    case KINDS:
        break;
    }
}

bool bw_ini_guard_bytes(const char *bytes, size_t length, struct bw_text *plain, struct bw_faults *faults) {
    if (length > INI_BYTES_MAX) {
        bw_faults_add(faults, 0, "", "", "larger than 4 MiB; a file of this kind has a few kilobytes");
        return false;
    }
    if (length >= 2 && (memcmp(bytes, "\xff\xfe", 2) == 0 || memcmp(bytes, "\xfe\xff", 2) == 0)) {
        bw_faults_add(faults, 1, "", "", "UTF-16 text; save the file as UTF-8");
        return false;
    }
    bool told[KINDS] = {false}; /* the first of each kind is worth a message */
    int line = 1;
    bw_text_add_bytes(plain, bytes, length);
    for (size_t i = 0; i < length && !plain->failed;) {
        enum kind kind = kind_at(bytes + i, length - i);
        size_t step = bw_utf8_length(bytes + i, length - i);
        if (kind != SOUND) {
            if (!told[kind])
                tell(kind, (unsigned char)bytes[i], line, faults);
            told[kind] = true;
            plain->data[i] = '?';
        }
        line += bytes[i] == '\n';
        i += step > 0 ? step : 1;
    }
    return !told[RETURN]; /* without line ends there are no lines to judge */
}
