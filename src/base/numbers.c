#include <beamward/base.h>

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static bool is_blank(char c) {
    return c == ' ' || c == '\t';
}

bool bw_parse_number(const char *string, double *value) {
    while (is_blank(*string))
        string++;
    /* strtod would take nan, inf and hexadecimal; a plain number has only these. */
    size_t length = strspn(string, "0123456789+-.eE");
    for (const char *rest = string + length; *rest; rest++)
        if (!is_blank(*rest))
            return false;
    char *end = NULL;
    double parsed = strtod(string, &end);
    if (length == 0 || end != string + length || !isfinite(parsed))
        return false;
    *value = parsed;
    return true;
}

/* A decimal number as it will be printed: digits x 10^exponent. */
struct decimal {
    bool negative;
    char digits[24]; /* without leading zeros, or "0" */
    int exponent;
};

enum { WIDE_DIGITS = 15, DIGITS_MAX = 15 };

static void add_one(char *digits, int count, int *exponent) {
    for (int i = count - 1; i >= 0; i--) {
        if (digits[i] != '9') {
            digits[i]++;
            return;
        }
        digits[i] = '0';
    }
    digits[0] = '1'; /* 999 -> 1000: the zeros are there, one place up */
    (*exponent)++;
}

/* Cuts to `count` digits in the wanted direction. The 15 digits of %.14e put a value that is a printed number to
 * within 1e-12 relative on it: the digits beyond the 12th decide only if they are not all noise. */
static void cut(struct decimal *d, int count, enum bw_rounding rounding) {
    int length = (int)strlen(d->digits);
    if (count >= length)
        return;
    bool up;
    if (rounding == BW_NEAREST) {
        up = d->digits[count] >= '5';
    } else {
        /* away from zero for a positive UP or a negative DOWN */
        bool away = (rounding == BW_UP) != d->negative;
        double rest = 0, unit = 1;
        for (int i = count; i < length; i++)
            rest += (d->digits[i] - '0') * (unit /= 10);
        double noise = 1e-12 * pow(10, count - 1); /* of the value, in units of the last digit kept */
        if (noise > 0.4)
            noise = 0.4;
        up = away ? rest > noise : rest >= 1 - noise;
    }
    d->exponent += length - count;
    d->digits[count] = '\0';
    if (up)
        add_one(d->digits, count, &d->exponent);
}

static struct decimal to_decimal(double value) {
    struct decimal d = {.negative = value < 0};
    char wide[40];
    snprintf(wide, sizeof wide, "%.*e", WIDE_DIGITS - 1, fabs(value));
    d.digits[0] = wide[0];
    memcpy(d.digits + 1, wide + 2, WIDE_DIGITS - 1);
    d.digits[WIDE_DIGITS] = '\0';
    d.exponent = (int)strtol(strchr(wide, 'e') + 1, NULL, 10) - (WIDE_DIGITS - 1);
    return d;
}

/* Writes digits x 10^exponent plainly. */
static void write_plain(char out[BW_NUMBER_SIZE], const struct decimal *d) {
    int length = (int)strlen(d->digits), point = length + d->exponent; /* digits before the point */
    char *at = out;
    if (d->negative)
        *at++ = '-';
    if (point <= 0) {
        *at++ = '0';
        *at++ = '.';
        for (int i = point; i < 0; i++)
            *at++ = '0';
        memcpy(at, d->digits, (size_t)length + 1);
        return;
    }
    for (int i = 0; i < length || i < point; i++) {
        if (i == point)
            *at++ = '.';
        *at++ = i < length ? d->digits[i] : '0';
    }
    *at = '\0';
}

static void write_exponent(char out[BW_NUMBER_SIZE], const struct decimal *d) {
    int length = (int)strlen(d->digits);
    snprintf(out, BW_NUMBER_SIZE, "%s%c%s%.*se%d", d->negative ? "-" : "", d->digits[0], length > 1 ? "." : "",
             length - 1, d->digits + 1, d->exponent + length - 1);
}

static const char *special(char out[BW_NUMBER_SIZE], double value) {
    const char *text = isnan(value) ? "n/a" : isinf(value) ? (value > 0 ? "unbounded" : "-unbounded") : "0";
    snprintf(out, BW_NUMBER_SIZE, "%s", text);
    return out;
}

const char *bw_format(char out[BW_NUMBER_SIZE], double value, int digits, enum bw_rounding rounding) {
    if (!isfinite(value) || !(fabs(value) > 0))
        return special(out, value);
    struct decimal d = to_decimal(value);
    cut(&d, digits < 1 ? 1 : digits > DIGITS_MAX ? DIGITS_MAX : digits, rounding);
    int first = (int)strlen(d.digits) + d.exponent - 1; /* power of ten of the first digit */
    if (first >= -3 && first < 6)
        write_plain(out, &d);
    else
        write_exponent(out, &d);
    return out;
}

const char *bw_format_fixed(char out[BW_NUMBER_SIZE], double value, int decimals, enum bw_rounding rounding) {
    if (!isfinite(value))
        return special(out, value);
    if (decimals < 0 || decimals > 9)
        decimals = decimals < 0 ? 0 : 9;
    struct decimal d = to_decimal(value);
    if (!(fabs(value) > 0)) {
        d = (struct decimal){.exponent = -decimals};
        memset(d.digits, '0', (size_t)decimals + 1);
    } else {
        int first = (int)strlen(d.digits) + d.exponent - 1, count = first + 1 + decimals;
        if (first >= 15)
            return bw_format(out, value, DIGITS_MAX, rounding);
        if (count >= 1) {
            cut(&d, count, rounding);
        } else { /* all digits lie beyond the last decimal */
            bool away = rounding != BW_NEAREST && (rounding == BW_UP) != d.negative;
            bool half = rounding == BW_NEAREST && count == 0 && d.digits[0] >= '5';
            memcpy(d.digits, away || half ? "1" : "0", 2);
            d.exponent = -decimals;
        }
        /* A plain integer part needs its leading zeros: digits x 10^-decimals. */
        int length = (int)strlen(d.digits);
        if (d.exponent > -decimals) { /* carried up, or all 15 digits stand before the last decimal */
            int more = d.exponent + decimals;
            if (length + more < (int)sizeof d.digits) {
                memset(d.digits + length, '0', (size_t)more);
                d.digits[length + more] = '\0';
                d.exponent = -decimals;
            }
        }
    }
    if (strspn(d.digits, "0") == strlen(d.digits))
        d.negative = false;
    write_plain(out, &d);
    return out;
}
