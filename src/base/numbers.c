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
    /* A number too small for a double would be taken for none at all. */
    if (!(fabs(parsed) > 0) && strcspn(string, "123456789") < strcspn(string, "eE"))
        return false;
    *value = parsed;
    return true;
}

/* A decimal number as it will be printed: digits x 10^exponent. 15 digits of a double are exact enough: what they
 * change is 5e-15 of the value, far below the 1e-12 that counts as the printed number itself. */
enum { DIGITS_MAX = 15, DIGITS_SIZE = 32 };
struct decimal {
    bool negative;
    char digits[DIGITS_SIZE];
    int exponent;
};

static struct decimal to_decimal(double value) {
    struct decimal d = {.negative = value < 0};
    char wide[BW_NUMBER_SIZE];
    snprintf(wide, sizeof wide, "%.*e", DIGITS_MAX - 1, fabs(value));
    d.digits[0] = wide[0];
    memcpy(d.digits + 1, wide + 2, DIGITS_MAX - 1);
    d.digits[DIGITS_MAX] = '\0';
    d.exponent = (int)strtol(strchr(wide, 'e') + 1, NULL, 10) - (DIGITS_MAX - 1);
    return d;
}

/* Whether the number, cut to `count` digits, goes to the next one farther from zero. */
static bool rounds_away(const struct decimal *d, int count, enum bw_rounding rounding) {
    if (rounding == BW_NEAREST)
        return d->digits[count] >= '5';
    double kept = 0, rest = 0, place = 1; /* kept + rest, in units of the last digit kept */
    for (int i = 0; i < count; i++)
        kept = kept * 10 + (d->digits[i] - '0');
    for (const char *digit = d->digits + count; *digit; digit++)
        rest += (*digit - '0') * (place /= 10);
    bool away = (rounding == BW_UP) != d->negative;
    /* A value that is a printed number to within 1e-12 relative stays on it. */
    return away ? rest > fmin(1e-12 * kept, 0.4) : 1 - rest <= fmin(1e-12 * (kept + 1), 0.4);
}

static void cut(struct decimal *d, int count, enum bw_rounding rounding) {
    int length = (int)strlen(d->digits);
    if (count >= length)
        return;
    bool away = rounds_away(d, count, rounding);
    d->exponent += length - count;
    d->digits[count] = '\0';
    if (!away)
        return;
    int i = count - 1;
    for (; i >= 0 && d->digits[i] == '9'; i--)
        d->digits[i] = '0';
    if (i >= 0) {
        d->digits[i]++;
    } else { /* 999 -> 1000: the zeros are there, one place up */
        d->digits[0] = '1';
        d->exponent++;
    }
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
    cut(&d, digits < 1 ? 1 : digits, rounding);
    int first = (int)strlen(d.digits) + d.exponent - 1; /* power of ten of the first digit */
    if (first >= -3 && first < 6)
        write_plain(out, &d);
    else
        write_exponent(out, &d);
    return out;
}

/* Zeros in front, so that at least one digit stands before those beyond the last decimal. More zeros than a few say
 * nothing new: such a number is above zero and far below half of the last decimal. */
static void pad_front(struct decimal *d, int zeros) {
    zeros = zeros < 4 ? zeros : 4;
    memmove(d->digits + zeros, d->digits, strlen(d->digits) + 1);
    memset(d->digits, '0', (size_t)zeros);
}

static void pad_back(struct decimal *d, int zeros) {
    size_t length = strlen(d->digits);
    memset(d->digits + length, '0', (size_t)zeros);
    d->digits[length + (size_t)zeros] = '\0';
    d->exponent -= zeros;
}

const char *bw_format_fixed(char out[BW_NUMBER_SIZE], double value, int decimals, enum bw_rounding rounding) {
    enum { DECIMALS_MAX = 9 };
    if (!isfinite(value))
        return special(out, value);
    decimals = decimals < 0 ? 0 : decimals > DECIMALS_MAX ? DECIMALS_MAX : decimals;
    struct decimal d = to_decimal(value);
    if (!(fabs(value) > 0))
        d = (struct decimal){.digits = "0", .exponent = 0};
    int count = (int)strlen(d.digits) + d.exponent + decimals; /* digits up to the last decimal */
    if (count - decimals > DIGITS_MAX)
        return bw_format(out, value, DIGITS_MAX, rounding);
    if (count < 1) {
        pad_front(&d, 1 - count);
        cut(&d, 1, rounding);
        d.exponent = -decimals;
    } else {
        cut(&d, count, rounding);
    }
    if (d.exponent > -decimals)
        pad_back(&d, d.exponent + decimals);
    d.negative = d.negative && strspn(d.digits, "0") < strlen(d.digits);
    write_plain(out, &d);
    return out;
}
