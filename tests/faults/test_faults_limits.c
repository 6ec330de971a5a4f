/* Memory that runs short: each allocation in turn fails, once, while a rule set or the materials are read and printed.
 * Each time the answer must be BW_NO_MEMORY, never a table or a page with a piece missing, and nothing may stay behind.
 * The linker puts the functions below in the place of the allocator's (see the Makefile). */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <cmocka.h>

#include "../../src/limits/internal.h"

void *__real_malloc(size_t size);
void *__real_calloc(size_t count, size_t size);
void *__real_realloc(void *old, size_t size);
void __real_free(void *block);
void *__wrap_malloc(size_t size);
void *__wrap_calloc(size_t count, size_t size);
void *__wrap_realloc(void *old, size_t size);
void __wrap_free(void *block);

static struct {
    size_t taken, fails_at; /* counted from 1; 0: none fails */
    long live;              /* blocks taken and not given back */
} memory;

static bool runs_short(void) {
    return ++memory.taken == memory.fails_at;
}
void *__wrap_malloc(size_t size) {
    void *block = runs_short() ? NULL : __real_malloc(size);
    memory.live += block != NULL;
    return block;
}
void *__wrap_calloc(size_t count, size_t size) {
    void *block = runs_short() ? NULL : __real_calloc(count, size);
    memory.live += block != NULL;
    return block;
}
void *__wrap_realloc(void *old, size_t size) {
    bool fresh = old == NULL;
    void *block = runs_short() ? NULL : __real_realloc(old, size);
    memory.live += fresh && block != NULL;
    return block;
}
void __wrap_free(void *block) {
    memory.live -= block != NULL;
    __real_free(block);
}

/* What is done to the triples of a file; whatever it takes it gives back. */
typedef enum bw_status work(const struct bw_ini *ini);

static enum bw_status load_table(const struct bw_ini *ini) {
    struct bw_table *table = NULL;
    struct bw_faults faults = {0};
    struct bw_error error = {0};
    enum bw_status status = bw_table_load(ini, &table, &faults, &error);
    if (status != BW_OK && table != NULL)
        fail_msg("a table in spite of status %d", (int)status);
    bw_table_free(table);
    bw_faults_free(&faults);
    return status;
}

static enum bw_status read_materials(const struct bw_ini *ini) {
    struct bw_material *materials = NULL;
    size_t count;
    struct bw_faults faults = {0};
    struct bw_error error = {0};
    enum bw_status status = bw_limits_materials_read(ini, &materials, &count, &faults, &error);
    if (status != BW_OK && materials != NULL)
        fail_msg("materials in spite of status %d", (int)status);
    free(materials);
    bw_faults_free(&faults);
    return status;
}

static enum bw_status print_table(const struct bw_ini *ini) {
    struct bw_text text = {0};
    (void)ini;
    enum bw_status status = bw_table_print(bw_tables_at(0), &text);
    bw_text_free(&text);
    return status;
}

static enum bw_status print_materials(const struct bw_ini *ini) {
    struct bw_text text = {0};
    (void)ini;
    enum bw_status status = bw_materials_print(&text);
    bw_text_free(&text);
    return status;
}

/* What has faults: these take memory too. */
static const char unreadable[] = "[table]\nid = A b\n[eye x]\n[skin]\ncovers = 1\nr01 = a | b\n[zebra]\n";
static const char bad_material[] = "[materials]\n[material a_b]\n[material wall]\nfinish = shiny\nreflectance = 2\n";

struct job {
    const char *name, *path, *text;
    work *work;
    enum bw_status otherwise; /* with memory enough */
};
static struct job jobs[] = {
    {"icnirp-2013", "limits_tables/icnirp-2013.ini", NULL, load_table, BW_OK},
    {"iec-60825-1-2014", "limits_tables/iec-60825-1-2014.ini", NULL, load_table, BW_OK},
    {"eu-2006-25", "limits_tables/eu-2006-25.ini", NULL, load_table, BW_OK},
    {"an unreadable rule set", NULL, unreadable, load_table, BW_INPUT},
    {"materials", "limits_tables/materials.ini", NULL, read_materials, BW_OK},
    {"bad materials", NULL, bad_material, read_materials, BW_INPUT},
    {"a table printed", NULL, unreadable, print_table, BW_OK},
    {"materials printed", NULL, bad_material, print_materials, BW_OK},
};

static void test_job(void **state) {
    const struct job *job = *state;
    struct bw_ini ini = {0};
    struct bw_faults faults = {0};
    struct bw_error error = {0};
    enum bw_status status = job->path != NULL ? bw_ini_read(job->path, &ini, NULL, &faults, &error)
                                              : bw_ini_read_bytes(job->text, strlen(job->text), &ini, &faults, &error);
    assert_int_equal(status, BW_OK);
    memory.taken = memory.fails_at = 0;
    long live = memory.live;
    assert_int_equal(job->work(&ini), job->otherwise);
    assert_int_equal(memory.live, live);
    size_t needed = memory.taken;
    assert_true(needed > 0);
    for (size_t i = 1; i <= needed; i++) {
        memory.taken = 0;
        memory.fails_at = i;
        status = job->work(&ini);
        memory.fails_at = 0;
        bool words_only = i == needed && job->otherwise != BW_OK && status == job->otherwise;
        if (status != BW_NO_MEMORY && !words_only) /* a refusal ends with its words: without them it still stands */
            fail_msg("status %d when allocation %zu of %zu fails", (int)status, i, needed);
        if (memory.live != live)
            fail_msg("%ld blocks stay behind when allocation %zu of %zu fails", memory.live - live, i, needed);
    }
    bw_ini_free(&ini);
    bw_faults_free(&faults);
}

/* More bytes than there are addresses. */
static void test_impossible(void **state) {
    (void)state;
    struct memory *few = bw_limits_memory_new();
    assert_non_null(few);
    assert_null(bw_limits_memory_take(few, SIZE_MAX / 4, 8));
    bw_limits_memory_free(few);
}

int main(void) {
    enum { JOBS = sizeof jobs / sizeof jobs[0] };
    struct CMUnitTest tests[JOBS + 1];
    for (size_t i = 0; i < JOBS; i++)
        tests[i] = (struct CMUnitTest){jobs[i].name, test_job, NULL, NULL, &jobs[i]};
    tests[JOBS] = (struct CMUnitTest){"an impossible size", test_impossible, NULL, NULL, NULL};
    return cmocka_run_group_tests_name("limits with memory short", tests, NULL, NULL) == 0 ? EXIT_SUCCESS
                                                                                           : EXIT_FAILURE;
}
