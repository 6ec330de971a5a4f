#include "internal.h"

#include <stdlib.h>

static void free_step(struct bw_step *step) {
    free(step->symbol);
    free(step->formula);
    free(step->numbers);
    free(step->unit);
    free(step->source);
}

/* Takes over the strings of the step. */
static void append(struct bw_working *working, struct bw_step step) {
    bool complete = step.symbol && step.formula && step.numbers && step.unit && step.source && !working->failed;
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
    append(working,
           (struct bw_step){true, bw_duplicate(""), text, bw_duplicate(""), 0, bw_duplicate(""), bw_duplicate("")});
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
                                     bw_duplicate(source ? source : "")});
}

void bw_working_free(struct bw_working *working) {
    for (size_t i = 0; i < working->count; i++)
        free_step(&working->steps[i]);
    free(working->steps);
    *working = (struct bw_working){0};
}
