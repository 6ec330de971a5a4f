/* The case files that the library carries. */
#include "internal.h"

#include <string.h>

const char *bw_case_starter(void) {
    return bw_case_texts[0].text;
}

size_t bw_case_examples_count(void) {
    return bw_case_texts_count - 1;
}

const char *bw_case_example_name(size_t index) {
    return index < bw_case_examples_count() ? bw_case_texts[index + 1].name : NULL;
}

const char *bw_case_example(const char *name) {
    for (size_t i = 1; i < bw_case_texts_count; i++)
        if (strcmp(bw_case_texts[i].name, name) == 0)
            return bw_case_texts[i].text;
    return NULL;
}
