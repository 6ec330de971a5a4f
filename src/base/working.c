#include "internal.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static void free_step(struct bw_step *step) {
    free(step->symbol);
    free(step->formula);
    free(step->numbers);
    free(step->unit);
    free(step->source);
    free(step->note);
}

/* Takes over the strings of the step. */
static void append(struct bw_working *working, struct bw_step step) {
    bool complete =
        step.symbol && step.formula && step.numbers && step.unit && step.source && step.note && !working->failed;
    if (complete && working->count == working->capacity) {
        size_t capacity = working->capacity * 2 + 16;
        struct bw_step *steps = realloc(working->steps, capacity * sizeof *steps);
        complete = steps != NULL;
        if (steps) {
            working->steps = steps;
            working->capacity = capacity;
        }
    }
    if (complete) {
        working->steps[working->count++] = step;
    } else {
        free_step(&step);
        working->failed = true;
    }
}

void bw_working_heading(struct bw_working *working, const char *format, ...) {
    if (!working)
        return;
    va_list list;
    va_start(list, format);
    char *text = bw_print_copy(format, list);
    va_end(list);
    append(working, (struct bw_step){true, bw_duplicate(""), text, bw_duplicate(""), 0, bw_duplicate(""),
                                     bw_duplicate(""), bw_duplicate("")});
}

void bw_working_step(struct bw_working *working, const char *symbol, double value, const char *unit, const char *source,
                     const char *formula, const char *numbers, ...) {
    if (!working)
        return;
    char *filled = NULL;
    if (numbers) {
        va_list list;
        va_start(list, numbers);
        filled = bw_print_copy(numbers, list);
        va_end(list);
    }
    append(working, (struct bw_step){false, bw_duplicate(symbol), bw_duplicate(formula ? formula : ""),
                                     numbers ? filled : bw_duplicate(""), value, bw_duplicate(unit ? unit : ""),
                                     bw_duplicate(source ? source : ""), bw_duplicate("")});
}

void bw_working_note(struct bw_working *working, const char *format, ...) {
    if (!working || working->count == 0 || working->failed)
        return;
    struct bw_step *step = &working->steps[working->count - 1];
    struct bw_text text = {0};
    va_list list;
    va_start(list, format);
    char *words = bw_print_copy(format, list);
    va_end(list);
    bw_text_add(&text, "%s%s%s", step->note, step->note[0] ? "; " : "", words ? words : "");
    if (!words || text.failed || !text.data) {
        bw_text_free(&text);
        working->failed = true;
    } else {
        free(step->note);
        step->note = text.data;
    }
    free(words);
}

const char *bw_working_number(char out[BW_NUMBER_SIZE], double value) {
    snprintf(out, BW_NUMBER_SIZE, "%.10g", value);
    char *exponent = strchr(out, 'e');
    if (exponent) { /* 1e-7, not 1e-07 */
        long power = strtol(exponent + 1, NULL, 10);
        snprintf(exponent + 1, BW_NUMBER_SIZE - (size_t)(exponent + 1 - out), "%ld", power);
    }
    return out;
}

void bw_working_free(struct bw_working *working) {
    for (size_t i = 0; i < working->count; i++)
        free_step(&working->steps[i]);
    free(working->steps);
    *working = (struct bw_working){0};
}
