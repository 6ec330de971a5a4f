/* The words of the tables. */
#include "internal.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

const char *bw_effect_name(enum bw_effect effect) {
    switch (effect) {
    case BW_RETINA_THERMAL:
        return "retina-thermal";
    case BW_RETINA_PHOTOCHEMICAL:
        return "retina-photochemical";
    case BW_ULTRAVIOLET:
        return "ultraviolet";
    case BW_ANTERIOR:
        return "anterior";
    case BW_SKIN_EFFECT:
        return "skin";
    }
    return "unknown";
}

const char *bw_finish_name(enum bw_finish finish) {
    switch (finish) {
    case BW_MATT:
        return "matt";
    case BW_MIRROR:
        return "mirror";
    case BW_GLOSS:
        return "gloss";
    case BW_GLASS:
        return "glass";
    }
    return "unknown";
}

const char *bw_limits_time_kind_name(enum time_kind kind) {
    static const char *const names[TIME_KINDS] = {"visible",     "glance",    "diffuse",    "skin",
                                                  "ultraviolet", "alignment", "working-day"};
    return names[kind];
}

const char *bw_limits_quantity_name(enum quantity quantity) {
    static const char *const names[] = {"H", "E", "G", "L"};
    return names[quantity];
}

const char *bw_limits_quantity_unit(enum quantity quantity) {
    static const char *const units[] = {"J/m2", "W/m2", "J/(m2 sr)", "W/(m2 sr)"};
    return units[quantity];
}

const char *bw_limits_pulse_name(enum pulse_kind pulse) {
    static const char *const names[] = {"any", "short", "long"};
    return names[pulse];
}

const char *bw_limits_number(char out[LIMITS_NUMBER_SIZE], double value) {
    char text[LIMITS_NUMBER_SIZE] = "";
    int digits = 1;
    if (!isfinite(value)) {
        snprintf(out, LIMITS_NUMBER_SIZE, "%s", isnan(value) ? "n/a" : "unbounded");
        return out;
    }
    for (;; digits++) {
        snprintf(text, sizeof text, "%.*e", digits - 1, value);
        double back = strtod(text, NULL);
        if (digits == 17 || (!(back < value) && !(back > value)))
            break;
    }
    char *mark = strchr(text, 'e');
    int exponent = (int)strtol(mark + 1, NULL, 10);
    int decimals = digits - 1 - exponent;
    snprintf(out, LIMITS_NUMBER_SIZE, "%.*f", decimals > 0 ? decimals : 0, value);
    /* As the tables are printed: 1e4, 5e-3, 1e-13, but 1000, 0.25 and 400. */
    bool plain = exponent > -3 && exponent < 4;
    if (!plain) {
        char scientific[LIMITS_NUMBER_SIZE];
        *mark = '\0';
        snprintf(scientific, sizeof scientific, "%.24se%d", text, exponent);
        if (strlen(scientific) <= strlen(out) || exponent > 9)
            memcpy(out, scientific, sizeof scientific);
    }
    return out;
}

const char *bw_limits_span(char out[LIMITS_SPAN_SIZE], const struct span *span) {
    char low[LIMITS_NUMBER_SIZE], high[LIMITS_NUMBER_SIZE] = "";
    if (isfinite(span->high))
        bw_limits_number(high, span->high);
    snprintf(out, LIMITS_SPAN_SIZE, "%s%s ..%s%s%s", span->open_low ? ">" : "", bw_limits_number(low, span->low),
             high[0] == '\0' ? "" : " ", span->open_high ? "<" : "", high);
    return out;
}
