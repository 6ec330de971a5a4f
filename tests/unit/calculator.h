/* A pocket calculator: evaluates what stands in the numbers of a step. */
#ifndef BEAMWARD_TESTS_CALCULATOR_H
#define BEAMWARD_TESTS_CALCULATOR_H

#include <ctype.h>
#include <math.h>
#include <stdbool.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

struct calculator {
    const char *at;
    bool wrong;
};

static inline double calculator_sum(struct calculator *calculator);

static inline bool calculator_takes(struct calculator *calculator, const char *word) {
    while (*calculator->at == ' ')
        calculator->at++;
    size_t length = strlen(word);
    if (strncmp(calculator->at, word, length) != 0)
        return false;
    calculator->at += length;
    return true;
}

/* Whole numbers but for rounding in the last digits, as the legend says. */
static inline double calculator_ceil(double x) {
    return ceil(x - 1e-12 * fabs(x));
}
static inline double calculator_floor(double x) {
    return floor(x + 1e-12 * fabs(x));
}
static inline double calculator_smaller(double a, double b) {
    return a < b ? a : b;
}
static inline double calculator_larger(double a, double b) {
    return a > b ? a : b;
}

struct calculator_key {
    const char *name;
    double (*one)(double);
    double (*two)(double, double);
};

static inline bool calculator_function(struct calculator *calculator, double *value) {
    static const struct calculator_key keys[] = {
        {"sqrt(", sqrt, NULL},
        {"exp(", exp, NULL},
        {"ln(", log, NULL},
        {"log10(", log10, NULL},
        {"atan(", atan, NULL},
        {"floor(", calculator_floor, NULL},
        {"ceil(", calculator_ceil, NULL},
        {"min(", NULL, calculator_smaller},
        {"max(", NULL, calculator_larger},
    };
    for (size_t i = 0; i < sizeof keys / sizeof keys[0]; i++) {
        if (!calculator_takes(calculator, keys[i].name))
            continue;
        *value = calculator_sum(calculator);
        if (keys[i].one)
            *value = keys[i].one(*value);
        while (keys[i].two && calculator_takes(calculator, ","))
            *value = keys[i].two(*value, calculator_sum(calculator));
        calculator->wrong = calculator->wrong || !calculator_takes(calculator, ")");
        return true;
    }
    return false;
}

static inline double calculator_atom(struct calculator *calculator) {
    double value = nan("");
    if (calculator_takes(calculator, "(")) {
        value = calculator_sum(calculator);
        calculator->wrong = calculator->wrong || !calculator_takes(calculator, ")");
        return value;
    }
    if (calculator_takes(calculator, "pi"))
        return 3.14159265358979323846;
    if (calculator_function(calculator, &value))
        return value;
    char *end;
    value = strtod(calculator->at, &end);
    calculator->wrong = calculator->wrong || end == calculator->at || !isdigit((unsigned char)*calculator->at);
    calculator->at = end;
    return value;
}

static inline double calculator_power(struct calculator *calculator) {
    if (calculator_takes(calculator, "-"))
        return -calculator_power(calculator);
    double base = calculator_atom(calculator);
    return calculator_takes(calculator, "^") ? pow(base, calculator_power(calculator)) : base;
}

static inline double calculator_product(struct calculator *calculator) {
    double value = calculator_power(calculator);
    for (;;) {
        if (calculator_takes(calculator, "*"))
            value *= calculator_power(calculator);
        else if (calculator_takes(calculator, "/"))
            value /= calculator_power(calculator);
        else
            return value;
    }
}

static inline double calculator_sum(struct calculator *calculator) {
    double value = calculator_product(calculator);
    for (;;) {
        if (calculator_takes(calculator, "+"))
            value += calculator_product(calculator);
        else if (calculator_takes(calculator, "-"))
            value -= calculator_product(calculator);
        else
            return value;
    }
}

/* Returns: false if the text is no sum from end to end. */
static inline bool calculate(const char *text, double *value) {
    struct calculator calculator = {text, false};
    *value = calculator_sum(&calculator);
    while (*calculator.at == ' ')
        calculator.at++;
    return !calculator.wrong && *calculator.at == '\0';
}

/* The numbers of a step give its value to the seven digits that are printed, one unit of the last allowed. */
static inline bool calculator_agrees(const char *numbers, double value, double *got) {
    if (!calculate(numbers, got))
        return false;
    if (!(fabs(value) > 0.))
        return fabs(*got) <= 0.;
    double unit = pow(10., floor(log10(fabs(value))) - 6.);
    return fabs(*got - value) <= unit;
}

#endif
