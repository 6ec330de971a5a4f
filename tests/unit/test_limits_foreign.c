/* Rule sets unlike the built-in ones: the small one with several things changed must load, print what it holds, and
 * give limits that follow by hand from its rows. And triples that no INI file can hold, handed over directly. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <cmocka.h>

#include <beamward/limits.h>

#include "calculator.h"

#include "../../src/limits/internal.h"
#include "unit/small_table.h"

enum { CHANGES_MAX = 12, TEXT_SIZE = 16384 };
struct change {
    const char *out, *in;
};

static void change(char text[TEXT_SIZE], const struct change *changes) {
    char changed[TEXT_SIZE];
    snprintf(text, TEXT_SIZE, "%s", small_table);
    for (; changes->out != NULL; changes++) {
        const char *at = strstr(text, changes->out);
        if (at == NULL)
            fail_msg("the small table has no '%s'", changes->out);
        snprintf(changed, sizeof changed, "%.*s%s%s", (int)(at - text), text, changes->in, at + strlen(changes->out));
        memcpy(text, changed, sizeof changed);
    }
}

static struct bw_table *load(const char *text) {
    struct bw_table *table = NULL;
    struct bw_ini ini = {0};
    struct bw_faults faults = {0};
    struct bw_error error = {0};
    enum bw_status status = bw_ini_read_bytes(text, strlen(text), &ini, &faults, &error);
    if (status == BW_OK)
        status = bw_table_load(&ini, &table, &faults, &error);
    for (size_t i = 0; i < faults.count; i++)
        print_error("%d [%s] %s: %s\n", faults.items[i].line, faults.items[i].section, faults.items[i].key,
                    faults.items[i].text);
    bw_ini_free(&ini);
    bw_faults_free(&faults);
    assert_int_equal(status, BW_OK);
    return table;
}

/* What to ask of the changed rule set: one exposure, by one evaluation and by many at once. */
struct ask {
    enum bw_target target;
    struct bw_exposure exposure;
    enum bw_effect effect;
    double h_j_m2;
};
struct variant {
    const char *name;
    struct change changes[CHANGES_MAX];
    const char *prints, *prints_not; /* NULL: nothing of interest */
    struct ask ask;
    const char *working; /* a formula in it; NULL: nothing of interest */
};

#define PHOTOCHEMICAL                                                                                                  \
    "[eye retina-photochemical]\ncovers = 400 .. 600 | 10 .. 3e4\n"                                                    \
    "r01 = 400 .. 600 | 10 .. 3e4 | G | 1e6 | 0 | - | B | memory\n"
#define SKIN_ROW "r01 = 400 .. 1400 | 1e-13 .. 3e4 | E | 2000 | 0 | ca | C | read\n"

static struct variant variants[] = {
    {"sections that meet at a name",
     {{"extended]\ncovers = 400 .. 1400 | 10 .. 3e4", "extended]\ncovers = 400 .. 1400 | 10 .. t2"},
      {"r02 = 400 .. 1400 | t2 .. 3e4 | E | 18",
       "[eye retina-thermal late]\ncovers = 400 .. 1400 | t2 .. 3e4\nsubtense_mrad = 1.5 .. 1571\n"
       "r01 = 400 .. 1400 | t2 .. 3e4 | E | 18"}},
     "eye retina-thermal late",
     NULL,
     /* alpha 150 mrad: T2 = 100 s, CE = 150^2/(1.5 100) = 150; E = 18 150 100^-0.25 = 853.815 W/m2, for 1000 s */
     {BW_EYE, {650.0, 1000.0, 0.15, 0.0}, BW_RETINA_THERMAL, 853814.9682},
     "18 CA CE T2^-0.25"},
    {"skin in two bands, the later one lower",
     {{"[skin]\ncovers = 400", "[skin]\ncovers = 700"},
      {"area_m2 = 0.1 ..\ncovers = 400", "area_m2 = 0.1 ..\ncovers = 700"},
      {"r01 = 400 .. 1400 | 10 .. 3e4 | E | 10 | 0 | area", "r01 = 700 .. 1400 | 10 .. 3e4 | E | 10 | 0 | area"},
      {SKIN_ROW,
       "r01 = 700 .. 1400 | 1e-13 .. 3e4 | E | 2000 | 0 | ca | C | read\n[skin low]\n"
       "covers = 400 .. <700 | 1e-13 .. 3e4\nr01 = 400 .. <700 | 1e-13 .. 3e4 | E | 1000 | 0 | - | C | read\n"}},
     "skin low",
     NULL,
     {BW_SKIN, {500.0, 2.0, 0.0, 0.0}, BW_SKIN_EFFECT, 2000.0},
     "1000"},
    {"skin open above, in both sections",
     {{"[skin]\ncovers = 400 .. 1400", "[skin]\ncovers = 400 .. <1400"},
      {"r01 = 400 .. 1400 | 1e-13 .. 3e4 | E | 2000", "r01 = 400 .. <1400 | 1e-13 .. 3e4 | E | 2000"},
      {"area_m2 = 0.1 ..\ncovers = 400 .. 1400", "area_m2 = 0.1 ..\ncovers = 400 .. <1400"},
      {"r01 = 400 .. 1400 | 10 .. 3e4 | E | 10 | 0 | area", "r01 = 400 .. <1400 | 10 .. 3e4 | E | 10 | 0 | area"},
      {"skin | 400 .. 1400 | 1e-13", "skin | 400 .. <1400 | 1e-13"},
      {"r02 = 700 .. 1400 | 0 | 1", "r02 = 700 .. 1400 | 0 | 1"}},
     "400 .. <1400 nm",
     NULL,
     {BW_SKIN, {500.0, 100.0, 0.0, 0.5}, BW_SKIN_EFFECT, 2000.0}, /* 10/0.5 W/m2 for 100 s */
     "10 A^-1"},
    {"skin open above, in one section",
     {{"[skin]\ncovers = 400 .. 1400", "[skin]\ncovers = 400 .. <1400"},
      {"r01 = 400 .. 1400 | 1e-13 .. 3e4 | E | 2000", "r01 = 400 .. <1400 | 1e-13 .. 3e4 | E | 2000"}},
     "400 .. <1400 nm",
     NULL,
     {BW_SKIN, {500.0, 3.0, 0.0, 0.0}, BW_SKIN_EFFECT, 6000.0},
     "2000 CA"},
    {"factors open above",
     {{"r02 = 700 .. 1400 | 0 | 1", "r02 = 700 .. <1400 | 0 | 1"},
      {"[eye retina-thermal]\ncovers = 400 .. 1400", "[eye retina-thermal]\ncovers = 400 .. <1400"},
      {"r01 = 400 .. 1400 | 1e-13 .. 1e-5", "r01 = 400 .. <1400 | 1e-13 .. 1e-5"},
      {"r03 = 700 .. 1400 | 1e-5", "r03 = 700 .. <1400 | 1e-5"},
      {"r01 = 400 .. 1400 | 10 .. 3e4 | E | 10 | 0 | ca |", "r01 = 400 .. 1400 | 10 .. 3e4 | E | 10 | 0 | - |"},
      {"10 .. t2 | H | 18 | 0.75 | ca ce", "10 .. t2 | H | 18 | 0.75 | ce"},
      {"E | 18 | 0 | ca ce t2", "E | 18 | 0 | ce t2"},
      {"E | 2000 | 0 | ca |", "E | 2000 | 0 | - |"}},
     "700 .. <1400",
     NULL,
     {BW_EYE, {800.0, 1e-6, 0.0, 0.0}, BW_RETINA_THERMAL, 3.1697863849222269e-3}, /* 2e-3 10^0.2 */
     "2e-3 CA CE"},
    {"no sizes of sources",
     {{"[source-size]\nalpha_min = 1.5 | A | memory\nmax_01 = 1e-13 .. 3e4 | 100 | 0 | A | memory\n"
       "beyond = square | A | memory\n",
       ""},
      {"2e-3 | 0 | ca ce", "2e-3 | 0 | ca"},
      {"18 | 0.75 | ce", "18 | 0.75 | -"},
      {"18 | 0.75 | ca ce", "18 | 0.75 | ca"},
      {"18 | 0.75 | ca ce", "18 | 0.75 | ca"},
      {"18 | 0 | ca ce t2", "18 | 0 | ca t2"},
      {"0 .. amax", "0 .. 100"},
      {">amax", ">100"}},
     "retina-thermal",
     "source size",
     {BW_EYE, {650.0, 1.0, 0.0, 0.0}, BW_RETINA_THERMAL, 18.0},
     "18 t^0.75"},
    {"no photochemical limit",
     {{PHOTOCHEMICAL, ""},
      {"r02 = retina-photochemical | 400 .. 600 | 10 .. 3e4 | 7 | 0 | D | memory\nr03", "r02"},
      {"[cone]\nr01 = 400 .. 600 | 10 .. 3e4 | 11 | 0 | D | memory\n", ""}},
     "retina-thermal",
     "measuring cone",
     {BW_EYE, {500.0, 1.0, 0.0, 0.0}, BW_RETINA_THERMAL, 18.0},
     NULL},
    {"no correction of trains",
     {{"applies_01 = retina-thermal | 400 .. 1400 | E | memory\n", ""},
      {"[train]\nr01 = short | 0 .. 1571 | 1 .. | 0 .. | 1 | 0 | 0 | E | memory\n"
       "r02 = long | 0 .. amax | 1 .. | 0 .. | 1 | -0.25 | 0.4 | E | memory\n"
       "r03 = long | >amax .. 1571 | 1 .. | 0 .. | 1 | 0 | 0 | E | memory\n",
       ""}},
     "additivity",
     "train correction",
     {BW_EYE, {500.0, 1.0, 0.0, 0.0}, BW_RETINA_THERMAL, 18.0},
     NULL},
    {"sums of the eye only",
     {{"| eye skin |", "| eye |"}},
     "400 .. 1400  nm  eye ",
     "eye and skin",
     {BW_EYE, {500.0, 1.0, 0.0, 0.0}, BW_RETINA_THERMAL, 18.0},
     NULL},
    {"sums of the skin only",
     {{"| eye skin |", "| skin |"}},
     "400 .. 1400  nm  skin ",
     "eye and skin",
     {BW_EYE, {500.0, 1.0, 0.0, 0.0}, BW_RETINA_THERMAL, 18.0},
     NULL},
    {"a limit of radiance",
     {{"| G | 1e6 |", "| L | 100 |"}},
     "L = 100 W/(m2 sr)",
     NULL,
     /* 100 pi/4 0.011^2 W/m2 for 100 s */
     {BW_EYE, {500.0, 100.0, 0.0, 0.0}, BW_RETINA_PHOTOCHEMICAL, 0.95033177771091248},
     "100 pi/4 (gamma / 1000)^2"},
    {"H that rises as t",
     {{"E | 2000 | 0 | ca", "H | 2000 | 1 | ca"}},
     "H = 2000 t CA J/m2",
     NULL,
     {BW_SKIN, {500.0, 3.0, 0.0, 0.0}, BW_SKIN_EFFECT, 6000.0},
     "2000 t^1 CA"},
    {"E that falls as 1/t",
     {{"E | 2000 | 0 | ca", "E | 2000 | -1 | ca"}},
     "E = 2000 t^-1 CA W/m2",
     NULL,
     {BW_SKIN, {500.0, 4.0, 0.0, 0.0}, BW_SKIN_EFFECT, 2000.0},
     "2000 t^-1 CA"},
    {"factors in a power",
     {{"E | 2000 | 0 | ca", "E | 2000 | 0 | ca^-1"}},
     "E = 2000 CA^-1 W/m2",
     NULL,
     {BW_SKIN, {800.0, 1.0, 0.0, 0.0}, BW_SKIN_EFFECT, 1261.9146889603865}, /* 2000 10^-0.2 */
     "2000 CA^-1"},
    {"a factor in a power of no common law",
     {{"E | 2000 | 0 | ca", "E | 2000 | 0 | ca^0.3"}},
     "E = 2000 CA^0.3 W/m2",
     NULL,
     {BW_SKIN, {800.0, 1.0, 0.0, 0.0}, BW_SKIN_EFFECT, 2296.3072429260428}, /* 2000 10^0.06 */
     "2000 CA^0.3"},
    {"an aperture in a power of no common law",
     {{"3.5 | 0 | D", "3.5 | -0.3 | D"}},
     "3.5 t^-0.3 mm",
     NULL,
     {BW_SKIN, {500.0, 3.0, 0.0, 0.0}, BW_SKIN_EFFECT, 6000.0},
     "3.5 t^-0.3"},
    {"a factor with a scale and a long name",
     {{"[factor t2]", "[factor anamethatislongerthananynumberofthetables]\n"
                      "r01 = 400 .. 1400 | 0 | 0.5 | 0.001 | 400 | A | memory\n[factor t2]"},
      {"E | 2000 | 0 | ca", "E | 2000 | 0 | anamethatislongerthananynumberofthetables"}},
     "0.5 * 10^(0.001 (w - 400))",
     NULL,
     {BW_SKIN, {500.0, 1.0, 0.0, 0.0}, BW_SKIN_EFFECT, 1258.9254117941673}, /* 1000 10^0.1 */
     "0.5 * 10^(0.001 (w - 400))"},
    {"a factor with a scale above 1",
     {{"0 | 1 | 0.002 | 700", "0 | 2 | 0.002 | 700"}},
     "2 * 10^(0.002 (w - 700))",
     NULL,
     {BW_SKIN, {800.0, 1.0, 0.0, 0.0}, BW_SKIN_EFFECT, 6339.5727698444538}, /* 4000 10^0.2 */
     "2 * 10^(0.002 (w - 700))"},
    {"sizes of sources of no use",
     {{"2e-3 | 0 | ca ce", "2e-3 | 0 | ca"},
      {"18 | 0.75 | ce", "18 | 0.75 | -"},
      {"18 | 0.75 | ca ce", "18 | 0.75 | ca"},
      {"18 | 0.75 | ca ce", "18 | 0.75 | ca"},
      {"18 | 0 | ca ce t2", "18 | 0 | ca t2"},
      {"0 .. amax", "0 .. 100"},
      {">amax", ">100"}},
     "source size",
     NULL,
     {BW_EYE, {650.0, 1.0, 0.0, 0.0}, BW_RETINA_THERMAL, 18.0},
     "18 t^0.75"},
    {"sizes of sources of use to trains only",
     {{"2e-3 | 0 | ca ce", "2e-3 | 0 | ca"},
      {"18 | 0.75 | ce", "18 | 0.75 | -"},
      {"18 | 0.75 | ca ce", "18 | 0.75 | ca"},
      {"18 | 0.75 | ca ce", "18 | 0.75 | ca"},
      {"18 | 0 | ca ce t2", "18 | 0 | ca t2"},
      {"r02 = long | 0 .. amax | 1 .. | 0 .. | 1 | -0.25 | 0.4",
       "r02 = long | >amax .. 1571 | 1 .. | 0 .. | 1 | 0 | 0"},
      {"r03 = long | >amax .. 1571 | 1 .. | 0 .. | 1 | 0 | 0",
       "r03 = long | 0 .. amax | 1 .. | 0 .. | 1 | -0.25 | 0.4"}},
     ">alpha_max .. 1571 mrad",
     NULL,
     {BW_EYE, {650.0, 1.0, 0.0, 0.0}, BW_RETINA_THERMAL, 18.0},
     "18 t^0.75"},
    {"a factor open beyond all rows",
     {{"r02 = 700 .. 1400 | 0 | 1", "r02 = 700 .. <1500 | 0 | 1"}},
     "700 .. <1500",
     NULL,
     {BW_SKIN, {800.0, 1.0, 0.0, 0.0}, BW_SKIN_EFFECT, 3169.7863849222269}, /* 2000 10^0.2 */
     "2000 CA"},
    {"the later section open above",
     {{"area_m2 = 0.1 ..\ncovers = 400 .. 1400", "area_m2 = 0.1 ..\ncovers = 400 .. <1400"},
      {"r01 = 400 .. 1400 | 10 .. 3e4 | E | 10 | 0 | area", "r01 = 400 .. <1400 | 10 .. 3e4 | E | 10 | 0 | area"}},
     "400 .. <1400",
     NULL,
     {BW_SKIN, {500.0, 100.0, 0.0, 0.5}, BW_SKIN_EFFECT, 2000.0},
     "10 A^-1"},
    {"skin in two bands, the later one higher",
     {{"[skin]\ncovers = 400 .. 1400", "[skin]\ncovers = 400 .. <700"},
      {"area_m2 = 0.1 ..\ncovers = 400 .. 1400", "area_m2 = 0.1 ..\ncovers = 400 .. <700"},
      {"r01 = 400 .. 1400 | 10 .. 3e4 | E | 10 | 0 | area", "r01 = 400 .. <700 | 10 .. 3e4 | E | 10 | 0 | area"},
      {SKIN_ROW,
       "r01 = 400 .. <700 | 1e-13 .. 3e4 | E | 1000 | 0 | - | C | read\n[skin high]\n"
       "covers = 700 .. 1400 | 1e-13 .. 3e4\nr01 = 700 .. 1400 | 1e-13 .. 3e4 | E | 2000 | 0 | - | C | read\n"}},
     "skin high",
     NULL,
     {BW_SKIN, {800.0, 2.0, 0.0, 0.0}, BW_SKIN_EFFECT, 4000.0},
     "2000"},
    {"a factor in the power 3/4",
     {{"E | 2000 | 0 | ca", "E | 2000 | 0 | ca^0.75"}},
     "E = 2000 CA^0.75 W/m2",
     NULL,
     {BW_SKIN, {800.0, 1.0, 0.0, 0.0}, BW_SKIN_EFFECT, 2825.0750892455089}, /* 2000 10^0.15 */
     "2000 CA^0.75"},
    {"a factor in the power 3/8",
     {{"E | 2000 | 0 | ca", "E | 2000 | 0 | ca^0.375"}},
     "E = 2000 CA^0.375 W/m2",
     NULL,
     {BW_SKIN, {800.0, 1.0, 0.0, 0.0}, BW_SKIN_EFFECT, 2377.004454874037}, /* 2000 10^0.075 */
     "2000 CA^0.375"},
    {"cones in two bands, two of them at one time",
     {{"r01 = 400 .. 600 | 10 .. 3e4 | 11 | 0 | D | memory",
       "r01 = 400 .. 500 | 10 .. 3e4 | 11 | 0 | D | memory\nr02 = 500 .. 600 | 10 .. 100 | 11 | 0 | D | memory\n"
       "r03 = 500 .. 600 | 100 .. 3e4 | 1.1 | 0.5 | D | memory"}},
     "1.1 t^0.5 mrad",
     NULL,
     /* 1.1 100^0.5 = 11 mrad too: 1e6 pi/4 0.011^2 */
     {BW_EYE, {550.0, 100.0, 0.0, 0.0}, BW_RETINA_PHOTOCHEMICAL, 95.033177771091248},
     "1e6 pi/4 (gamma / 1000)^2"},
    {"a clause as long as a line",
     {{"| ca | C | read\n[skin",
       "| ca | a clause that is as long as a whole line of the page, or longer than that, it seems | read\n[skin"}},
     "\n  a clause that is as long as a whole line of the page, or longer than that, it \n",
     NULL,
     {BW_SKIN, {500.0, 1.0, 0.0, 0.0}, BW_SKIN_EFFECT, 2000.0},
     NULL},
};

/* A pocket calculator finds the value of every step. */
static void check_numbers(const struct bw_working *working) {
    for (size_t i = 0; i < working->count; i++) {
        const struct bw_step *step = &working->steps[i];
        double got;
        if (!step->heading && step->numbers[0] != '\0' && !calculator_agrees(step->numbers, step->value, &got))
            fail_msg("%s = %.10g, but %s gives %.10g", step->symbol, step->value, step->numbers, got);
    }
}

static void ask_one(const struct variant *variant, const struct bw_table *table) {
    const struct ask *ask = &variant->ask;
    struct bw_limit_set limits;
    struct bw_working working = {0};
    bool found = false, told = variant->working == NULL;
    assert_int_equal(bw_limits(table, ask->target, &ask->exposure, &limits, &working, NULL), BW_OK);
    for (size_t i = 0; i < limits.count; i++) {
        if (limits.limits[i].effect != ask->effect)
            continue;
        found = true;
        double got = limits.limits[i].radiant_exposure_j_m2;
        if (!(fabs(got - ask->h_j_m2) <= 1e-9 * ask->h_j_m2))
            fail_msg("%.17g J/m2, want %.17g", got, ask->h_j_m2);
    }
    assert_true(found);
    check_numbers(&working);
    for (size_t i = 0; i < working.count; i++)
        told = told || strstr(working.steps[i].formula, variant->working) != NULL;
    for (size_t i = 0; !told && i < working.count; i++)
        print_error("%s\n", working.steps[i].formula);
    bw_working_free(&working);
    if (!told)
        fail_msg("the working does not show '%s'", variant->working);
}

/* Many at once give the same bits as one. */
static void ask_many(const struct ask *ask, const struct bw_table *table) {
    enum { MANY = 300 };
    double wavelengths_nm[MANY], times_s[MANY], h[MANY];
    struct bw_limit_set limits;
    for (size_t i = 0; i < MANY; i++) {
        wavelengths_nm[i] = ask->exposure.wavelength_nm;
        times_s[i] = ask->exposure.exposure_s;
    }
    const struct bw_exposures exposures = {MANY, wavelengths_nm, times_s, ask->exposure.subtense_rad,
                                           ask->exposure.area_m2};
    assert_int_equal(bw_limits(table, ask->target, &ask->exposure, &limits, NULL, NULL), BW_OK);
    assert_int_equal(bw_limits_many(table, ask->target, &exposures, h, NULL, NULL), 0);
    for (size_t i = 0; i < MANY; i++)
        assert_memory_equal(&h[i], &limits.limits[limits.governing].radiant_exposure_j_m2, sizeof h[i]);
}

static void test_variant(void **state) {
    const struct variant *variant = *state;
    char text[TEXT_SIZE];
    struct bw_text page = {0};
    change(text, variant->changes);
    struct bw_table *table = load(text);
    assert_int_equal(bw_table_print(table, &page), BW_OK);
    if (strstr(page.data, variant->prints) == NULL)
        fail_msg("does not print '%s':\n%s", variant->prints, page.data);
    if (variant->prints_not != NULL && strstr(page.data, variant->prints_not) != NULL)
        fail_msg("prints '%s':\n%s", variant->prints_not, page.data);
    bw_text_free(&page);
    ask_one(variant, table);
    ask_many(&variant->ask, table);
    bw_table_free(table);
}

/* ---- trains ----------------------------------------------------------------------------------- */

struct train_case {
    const char *name;
    struct change changes[CHANGES_MAX];
    struct bw_train_count count;
    double correction;   /* NAN: no answer */
    const char *formula; /* of the working */
    const char *printed; /* in the table */
};
static struct train_case train_cases[] = {
    {"as it stands", {{0}}, {1e-3, 5e-6, 16.0, 1.0, 0.0}, 0.5, "min(1, max(0.4, N^-0.25))", "N^-0.25, at least 0.4"},
    {"scale and floor",
     {{"| 1 | -0.25 | 0.4", "| 0.8 | -0.25 | 0.4"}},
     {1e-3, 5e-6, 4.0, 1.0, 0.0},
     0.56568542494923806, /* 0.8 4^-0.25 */
     "min(1, max(0.4, 0.8 N^-0.25))",
     "0.8 N^-0.25, at least 0.4"},
    {"scale alone",
     {{"| 1 | -0.25 | 0.4", "| 0.8 | -0.25 | 0"}},
     {1e-3, 5e-6, 16.0, 1.0, 0.0},
     0.4,
     "min(1, 0.8 N^-0.25)",
     "0.8 N^-0.25"},
    {"scale above 1",
     {{"| 1 | -0.25 | 0.4", "| 1.2 | -0.25 | 0"}},
     {1e-3, 5e-6, 16.0, 1.0, 0.0},
     0.6,
     "min(1, 1.2 N^-0.25)",
     "1.2 N^-0.25"},
    {"neither", {{"| 1 | -0.25 | 0.4", "| 1 | -0.25 | 0"}}, {1e-3, 5e-6, 16.0, 1.0, 0.0}, 0.5, "N^-0.25", "N^-0.25"},
    {"pulse not a number", {{0}}, {(double)NAN, 5e-6, 16.0, 1.0, 0.0}, (double)NAN, NULL, NULL},
    {"grouping time not a number", {{0}}, {1e-3, (double)NAN, 16.0, 1.0, 0.0}, (double)NAN, NULL, NULL},
    {"N not a number", {{0}}, {1e-3, 5e-6, (double)NAN, 1.0, 0.0}, (double)NAN, NULL, NULL},
    {"no such source", {{0}}, {1e-3, 5e-6, 16.0, 1.0, 2.0}, (double)NAN, NULL, NULL},
    /* at 0.1 s two rows hold: the lower, 0.5 of 1 and 0.5 */
    {"two rows, the lower one first",
     {{"r02 = long | 0 .. amax | 1 .. | 0 .. | 1 | -0.25 | 0.4 | E | memory\nr03",
       "r02 = long | 0 .. amax | 1 .. | 0 .. 0.1 | 1 | -0.25 | 0.4 | E | memory\n"
       "r03 = long | 0 .. amax | 1 .. | 0.1 .. | 1 | 0 | 0 | E | memory\nr04"}},
     {1e-3, 5e-6, 16.0, 0.1, 0.0},
     0.5,
     "min(1, max(0.4, N^-0.25))",
     "N^-0.25, at least 0.4"},
};

static void test_train(void **state) {
    const struct train_case *c = *state;
    char text[TEXT_SIZE];
    struct bw_working working = {0};
    change(text, c->changes);
    struct bw_table *table = load(text);
    struct bw_source_note source = {0};
    double got = bw_limits_train_correction(table, &c->count, &source, &working);
    if (isnan(c->correction) ? !isnan(got) : !(fabs(got - c->correction) <= 1e-12))
        fail_msg("%.17g, want %.17g", got, c->correction);
    if (c->formula != NULL) {
        assert_int_equal(working.count, 1);
        char quoted[BW_FORMULA_SIZE];
        assert_string_equal(working.steps[0].formula, c->formula);
        assert_string_equal(bw_limits_row_formula(table, &source, quoted), c->printed);
        check_numbers(&working);
        struct bw_text page = {0};
        assert_int_equal(bw_table_print(table, &page), BW_OK);
        if (strstr(page.data, c->printed) == NULL)
            fail_msg("does not print '%s':\n%s", c->printed, page.data);
        bw_text_free(&page);
    }
    bw_working_free(&working);
    bw_table_free(table);
}

/* Where two bands of grouping times meet the smaller counts, whichever is first. */
static void test_grouping(void **state) {
    static const char *const both[] = {"ti_01 = 400 .. 1050 | 5e-6 | E | memory\nti_02 = 1050 .. 1400 | 1.3e-5",
                                       "ti_01 = 400 .. 1050 | 1.3e-5 | E | memory\nti_02 = 1050 .. 1400 | 5e-6"};
    (void)state;
    for (size_t i = 0; i < 2; i++) {
        char text[TEXT_SIZE];
        double ti_s;
        const struct change changes[] = {{"ti_01 = 400 .. 1400 | 5e-6", both[i]}, {NULL, NULL}};
        change(text, changes);
        struct bw_table *table = load(text);
        assert_true(bw_limits_grouping_time(table, 1050.0, &ti_s, NULL));
        if (!(fabs(ti_s - 5e-6) <= 1e-18))
            fail_msg("%.17g s", ti_s);
        bw_table_free(table);
    }
}

/* ---- triples that no file holds ---------------------------------------------------------------- */

struct triple_case {
    const char *name;
    struct bw_ini_entry entries[6];
    size_t count;
    const char *section, *key, *text; /* of one of the faults */
};
#define S(text) ((char[]){text})
static struct triple_case triple_cases[] = {
    {"a key before all sections",
     {{S(""), S("id"), S("x"), 1}, {S("table"), S(""), S(""), 2}},
     2,
     "",
     "id",
     "stands before the first section; wants [table] first"},
    {"an empty title",
     {{S("table"), S(""), S(""), 1}, {S("table"), S("title"), S(""), 2}},
     2,
     "table",
     "title",
     "is missing; a rule set must name its title"},
    {"an id twice",
     {{S("table"), S(""), S(""), 1}, {S("table"), S("id"), S("a"), 2}, {S("table"), S("id"), S("b"), 3}},
     3,
     "table",
     "id",
     "is given twice; wants it once"},
    {"a section twice",
     {{S("cone"), S(""), S(""), 1}, {S("aperture"), S(""), S(""), 2}, {S("cone"), S(""), S(""), 3}},
     3,
     "cone",
     "",
     "section is given twice; wants it once"},
    {"the skin twice",
     {{S("skin"), S(""), S(""), 1}, {S("skin"), S(""), S(""), 2}},
     2,
     "skin",
     "",
     "section is given twice; wants it once"},
    {"a factor twice, on one line",
     {{S("factor a"), S(""), S(""), 1}, {S("factor b"), S(""), S(""), 1}, {S("factor a"), S(""), S(""), 1}},
     3,
     "factor a",
     "",
     "factor a is given twice; wants it once"},
    {"a factor without a name",
     {{S("factor "), S(""), S(""), 1}},
     1,
     "factor ",
     "",
     "'' cannot name a factor; wants a-z and 0-9, and not ce, area or amax"},
};

static void test_triples(void **state) {
    struct triple_case *c = *state;
    const struct bw_ini ini = {c->entries, c->count, c->count};
    struct bw_table *table;
    struct bw_faults faults = {0};
    struct bw_error error = {0};
    bool found = false;
    assert_int_equal(bw_table_load(&ini, &table, &faults, &error), BW_INPUT);
    assert_null(table);
    for (size_t i = 0; i < faults.count; i++)
        found = found || (strcmp(faults.items[i].section, c->section) == 0 &&
                          strcmp(faults.items[i].key, c->key) == 0 && strcmp(faults.items[i].text, c->text) == 0);
    bw_faults_free(&faults);
    if (!found)
        fail_msg("does not say [%s] %s: %s", c->section, c->key, c->text);
}

/* The reader of materials, which no file with doubled names reaches. */
static void test_material_triples(void **state) {
    struct bw_ini_entry entries[] = {{S("material a"), S(""), S(""), 1},
                                     {S("material a"), S("title"), S("x"), 2},
                                     {S("material a"), S("title"), S("y"), 3},
                                     {S("material a"), S(""), S(""), 4}};
    const struct bw_ini ini = {entries, 4, 4};
    struct bw_material *materials;
    size_t count, told = 0;
    struct bw_faults faults = {0};
    (void)state;
    assert_int_equal(bw_limits_materials_read(&ini, &materials, &count, &faults, NULL), BW_INPUT);
    assert_null(materials);
    for (size_t i = 0; i < faults.count; i++)
        told +=
            (faults.items[i].line == 3 && strcmp(faults.items[i].text, "is given twice; wants it once") == 0) ||
            (faults.items[i].line == 4 && strcmp(faults.items[i].text, "material is given twice; wants it once") == 0);
    bw_faults_free(&faults);
    assert_int_equal(told, 2);
}

/* ---- more rows than the plan can number --------------------------------------------------------- */

/* `count` rows of one section; %zu in the value is the number of the row. The rules beside it are missing, which is
 * found only later: the answer must come before anything is laid out by 16-bit numbers. */
struct flood {
    const char *name, *section, *prefix, *value;
    size_t count;
    double step; /* of the first number in the value, which begins at 1000 */
};
static struct flood floods[] = {
    {"65536 limits", "skin", "r", "1000 .. 2000 | 1 .. 2 | E | 1 | 0 | - | A | read", 65536, 0.0},
    {"65535 limits", "skin", "r", "1000 .. 2000 | 1 .. 2 | E | 1 | 0 | - | A | read", 65535, 0.0},
    {"65535 rows of a factor", "factor a", "r", "1000 .. 2000 | 1 | 0 | 0 | 0 | A | read", 65535, 0.0},
    {"65535 apertures", "aperture", "r", "skin | 1000 .. 2000 | 1 .. 2 | 1 | 0 | A | read", 65535, 0.0},
    {"65535 cones", "cone", "r", "1000 .. 2000 | 1 .. 2 | 1 | 0 | A | read", 65535, 0.0},
    {"65535 rows of alpha_max", "source-size", "max_", "1 .. 2 | 1 | 0 | A | read", 65535, 0.0},
    {"65534 wavelengths", "factor a", "r", "%.1f .. 20000 | 1 | 0 | 0 | 0 | A | read", 65534, 0.2},
    {"65534 times of apertures", "aperture", "r", "skin | 1000 .. 2000 | %.1f .. 20000 | 1 | 0 | A | read", 65534, 0.2},
};

static char *print_flood(const struct flood *flood, size_t row) {
    char *text = malloc(100);
    assert_non_null(text);
    const char *mark = strchr(flood->value, '%');
    if (mark == NULL)
        snprintf(text, 100, "%s", flood->value);
    else
        snprintf(text, 100, "%.*s%.1f%s", (int)(mark - flood->value), flood->value, 1000.0 + flood->step * (double)row,
                 mark + strlen("%.1f"));
    return text;
}

static void test_flood(void **state) {
    const struct flood *flood = *state;
    enum { HEAD = 6 };
    char section[40];
    snprintf(section, sizeof section, "%s", flood->section);
    struct bw_ini ini = {calloc(flood->count + HEAD, sizeof *ini.entries), flood->count + HEAD, flood->count + HEAD};
    assert_non_null(ini.entries);
    const struct bw_ini_entry head[HEAD] = {{S("table"), S(""), S(""), 1},         {S("table"), S("id"), S("x"), 2},
                                            {S("table"), S("title"), S("x"), 3},   {S("table"), S("source"), S("x"), 4},
                                            {S("table"), S("edition"), S("x"), 5}, {section, S(""), S(""), 6}};
    memcpy(ini.entries, head, sizeof head);
    for (size_t i = 0; i < flood->count; i++) {
        char *key = malloc(32);
        assert_non_null(key);
        snprintf(key, 32, "%s%02zu", flood->prefix, i + 1);
        ini.entries[HEAD + i] = (struct bw_ini_entry){section, key, print_flood(flood, i), (int)i + 7};
    }
    struct bw_table *table;
    struct bw_faults faults = {0};
    enum bw_status status = bw_table_load(&ini, &table, &faults, NULL);
    for (size_t i = 0; i < flood->count; i++) {
        free(ini.entries[HEAD + i].key);
        free(ini.entries[HEAD + i].value);
    }
    free(ini.entries);
    if (faults.count > 0)
        print_error("%s %s\n", faults.items[0].key, faults.items[0].text);
    bw_faults_free(&faults);
    assert_int_equal(status, BW_NO_MEMORY);
    assert_null(table);
}

/* ---- arguments --------------------------------------------------------------------------------- */

static void test_arguments(void **state) {
    const struct bw_exposure exposure = {500.0, 1.0, 0.0, 0.0};
    struct bw_limit_set limits;
    (void)state;
    assert_int_equal(bw_limits_eye(NULL, &exposure, &limits, NULL, NULL), BW_ARGUMENT);
    assert_int_equal(bw_limits_eye(bw_tables_at(0), NULL, &limits, NULL, NULL), BW_ARGUMENT);
    assert_string_equal(bw_effect_name((enum bw_effect)99), "unknown");
    assert_string_equal(bw_finish_name((enum bw_finish)99), "unknown");
}

/* A built-in rule set is nobody's to free. */
static void test_built_in_stays(void **state) {
    const struct bw_table *built_in = bw_tables_at(0);
    struct bw_table *table;
    char id[BW_NAME_SIZE];
    (void)state;
    snprintf(id, sizeof id, "%s", bw_table_id(built_in));
    memcpy(&table, &built_in, sizeof table);
    bw_table_free(table);
    assert_ptr_equal(bw_tables_find(id), built_in);
}

int main(void) {
    enum {
        VARIANTS = sizeof variants / sizeof variants[0],
        TRAINS = sizeof train_cases / sizeof train_cases[0],
        FLOODS = sizeof floods / sizeof floods[0],
        TRIPLES = sizeof triple_cases / sizeof triple_cases[0]
    };
    static struct CMUnitTest tests[VARIANTS + TRAINS + TRIPLES + FLOODS + 4];
    size_t n = 0;
    for (size_t i = 0; i < VARIANTS; i++)
        tests[n++] = (struct CMUnitTest){variants[i].name, test_variant, NULL, NULL, &variants[i]};
    for (size_t i = 0; i < TRAINS; i++)
        tests[n++] = (struct CMUnitTest){train_cases[i].name, test_train, NULL, NULL, &train_cases[i]};
    for (size_t i = 0; i < TRIPLES; i++)
        tests[n++] = (struct CMUnitTest){triple_cases[i].name, test_triples, NULL, NULL, &triple_cases[i]};
    for (size_t i = 0; i < FLOODS; i++)
        tests[n++] = (struct CMUnitTest){floods[i].name, test_flood, NULL, NULL, &floods[i]};
    tests[n++] = (struct CMUnitTest){"triples of materials", test_material_triples, NULL, NULL, NULL};
    tests[n++] = (struct CMUnitTest){"grouping times that meet", test_grouping, NULL, NULL, NULL};
    tests[n++] = (struct CMUnitTest){"arguments", test_arguments, NULL, NULL, NULL};
    tests[n++] = (struct CMUnitTest){"built in", test_built_in_stays, NULL, NULL, NULL};
    return cmocka_run_group_tests_name("limits of foreign rule sets", tests, NULL, NULL) == 0 ? EXIT_SUCCESS
                                                                                              : EXIT_FAILURE;
}
