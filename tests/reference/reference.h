/* Independent expected values (generate_limits.py, generate_rules.py) and their comparison with a rule set: for the
 * reference tests, which ask the built-in ones, and for the mutation test, which asks spoilt ones. */
#ifndef BEAMWARD_TESTS_REFERENCE_H
#define BEAMWARD_TESTS_REFERENCE_H

#include <stdbool.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* The factors have no public entry; the test asks the module itself. */
#include "../../src/limits/internal.h"

enum { REFERENCE_NAME = 32, REFERENCE_WHY = 200 };

struct reference_want {
    enum bw_effect effect;
    double radiant_exposure_j_m2, aperture_mm;
    double acceptance_mrad; /* NAN: any */
};
struct reference_point { /* one exposure and all its limits */
    char rules[REFERENCE_NAME];
    enum bw_target target;
    struct bw_exposure exposure;
    size_t count; /* 0: the rule set has no row here */
    struct reference_want wants[BW_EFFECTS];
};
struct reference_points {
    struct reference_point *items;
    size_t count;
};

struct reference_rule { /* one statement beside the limits: see generate_rules.py for the columns */
    char what[REFERENCE_NAME], rules[REFERENCE_NAME], word[REFERENCE_NAME];
    double a, b, c, d, e, want; /* want NAN: none */
};
struct reference_rules {
    struct reference_rule *items;
    size_t count;
};

struct reference_materials {
    struct bw_material *items; /* without title, source and known */
    size_t count;
};

/* Opens a file of data behind its heading. NULL if there is none. */
static inline FILE *reference_open(const char *path) {
    FILE *file = fopen(path, "r");
    if (file != NULL && fscanf(file, "%*[^\n]\n") != 0) {
        fclose(file);
        return NULL;
    }
    return file;
}

/* Room for one more; the test ends where memory is short. */
static inline void *reference_grow(void *items, size_t count, size_t size) {
    if ((count & (count - 1)) == 0)
        items = realloc(items, (count == 0 ? 1 : 2 * count) * size);
    if (items == NULL)
        abort();
    return items;
}

static inline bool reference_effect(const char *name, enum bw_effect *effect) {
    static const enum bw_effect effects[] = {BW_RETINA_THERMAL, BW_RETINA_PHOTOCHEMICAL, BW_ULTRAVIOLET, BW_ANTERIOR,
                                             BW_SKIN_EFFECT};
    for (size_t i = 0; i < sizeof effects / sizeof effects[0]; i++)
        if (strcmp(bw_effect_name(effects[i]), name) == 0) {
            *effect = effects[i];
            return true;
        }
    return false;
}

static inline double reference_number(const char *text) {
    return strcmp(text, "none") == 0 || strcmp(text, "any") == 0 ? limits_nan : strtod(text, NULL);
}

static inline bool reference_same_place(const struct reference_point *a, const struct reference_point *b) {
    return memcmp(&a->exposure, &b->exposure, sizeof a->exposure) == 0 && a->target == b->target &&
           strcmp(a->rules, b->rules) == 0;
}

/* limits_edges.csv: consecutive lines of the same exposure make one point. */
static inline struct reference_points reference_read_points(const char *path) {
    struct reference_points points = {NULL, 0};
    struct reference_point point = {0};
    struct reference_want want = {0};
    char target[8], effect[REFERENCE_NAME], acceptance[REFERENCE_NAME];
    FILE *file = reference_open(path);
    while (file != NULL &&
           fscanf(file, "%31[^,],%7[^,],%lf,%lf,%lf,%lf,%31[^,],%lf,%lf,%31s\n", point.rules, target,
                  &point.exposure.wavelength_nm, &point.exposure.exposure_s, &point.exposure.subtense_rad,
                  &point.exposure.area_m2, effect, &want.radiant_exposure_j_m2, &want.aperture_mm, acceptance) == 10) {
        point.target = strcmp(target, "eye") == 0 ? BW_EYE : BW_SKIN;
        point.exposure.subtense_rad *= 1e-3;
        want.acceptance_mrad = reference_number(acceptance);
        if (points.count == 0 || !reference_same_place(&point, &points.items[points.count - 1])) {
            points.items = reference_grow(points.items, points.count, sizeof point);
            points.items[points.count++] = point;
        }
        struct reference_point *last = &points.items[points.count - 1];
        if (last->count < BW_EFFECTS && reference_effect(effect, &want.effect))
            last->wants[last->count++] = want;
    }
    if (file != NULL)
        fclose(file);
    return points;
}

/* limits_rules.csv */
static inline struct reference_rules reference_read_rules(const char *path) {
    struct reference_rules rules = {NULL, 0};
    struct reference_rule rule;
    char want[REFERENCE_NAME];
    FILE *file = reference_open(path);
    while (file != NULL && fscanf(file, "%31[^,],%31[^,],%31[^,],%lf,%lf,%lf,%lf,%lf,%31s\n", rule.what, rule.rules,
                                  rule.word, &rule.a, &rule.b, &rule.c, &rule.d, &rule.e, want) == 9) {
        rule.want = reference_number(want);
        rules.items = reference_grow(rules.items, rules.count, sizeof rule);
        rules.items[rules.count++] = rule;
    }
    if (file != NULL)
        fclose(file);
    return rules;
}

/* materials.csv */
static inline struct reference_materials reference_read_materials(const char *path) {
    static const enum bw_finish finishes[] = {BW_MATT, BW_MIRROR, BW_GLOSS, BW_GLASS};
    struct reference_materials materials = {NULL, 0};
    struct bw_material material = {0};
    char finish[REFERENCE_NAME];
    FILE *file = reference_open(path);
    while (file != NULL &&
           fscanf(file, "%63[^,],%31[^,],%lf,%lf,%lf,%lf\n", material.name, finish, &material.reflectance,
                  &material.matt_reflectance, &material.transmittance, &material.refractive_index) == 6) {
        for (size_t i = 0; i < sizeof finishes / sizeof finishes[0]; i++)
            if (strcmp(bw_finish_name(finishes[i]), finish) == 0)
                material.finish = finishes[i];
        materials.items = reference_grow(materials.items, materials.count, sizeof material);
        materials.items[materials.count++] = material;
    }
    if (file != NULL)
        fclose(file);
    return materials;
}

/* Equal to 1e-12 relative, an expected 0 or infinity exactly. NaN equals NaN only: `none`. */
static inline bool reference_equal(double got, double want) {
    if (isnan(want))
        return isnan(got);
    if (isinf(want))
        return isinf(got) && got > 0.0;
    return fabs(got - want) <= 1e-12 * fabs(want);
}

static inline bool reference_limit_holds(const struct bw_limit *got, const struct reference_want *want) {
    return got->effect == want->effect && reference_equal(got->radiant_exposure_j_m2, want->radiant_exposure_j_m2) &&
           reference_equal(got->aperture_m * 1e3, want->aperture_mm) &&
           (isnan(want->acceptance_mrad) || reference_equal(got->acceptance_rad * 1e3, want->acceptance_mrad));
}

/* The limit of an effect, if the set has it. */
static inline const struct bw_limit *reference_find(const struct bw_limit_set *limits, enum bw_effect effect) {
    for (size_t i = 0; i < limits->count; i++)
        if (limits->limits[i].effect == effect)
            return &limits->limits[i];
    return NULL;
}

/* Does the rule set give exactly these limits? why (may be NULL): the first difference. */
static inline bool reference_point_holds(const struct bw_table *table, const struct reference_point *point,
                                         char why[REFERENCE_WHY]) {
    struct bw_limit_set limits;
    enum bw_status status = bw_limits(table, point->target, &point->exposure, &limits, NULL, NULL);
    bool holds = status == (point->count > 0 ? BW_OK : BW_OUT_OF_RANGE) && limits.count == point->count;
    if (!holds && why != NULL)
        snprintf(why, REFERENCE_WHY, "%zu limits, want %zu", limits.count, point->count);
    for (size_t i = 0; i < point->count && holds; i++) {
        const struct reference_want *want = &point->wants[i];
        const struct bw_limit *got = reference_find(&limits, want->effect);
        holds = got != NULL && reference_limit_holds(got, want);
        if (!holds && why != NULL && got != NULL)
            snprintf(why, REFERENCE_WHY, "%s: %.15g J/m2, %.15g mm, %.15g mrad, want %.15g, %.15g, %.15g",
                     bw_effect_name(want->effect), got->radiant_exposure_j_m2, got->aperture_m * 1e3,
                     got->acceptance_rad * 1e3, want->radiant_exposure_j_m2, want->aperture_mm, want->acceptance_mrad);
        else if (!holds && why != NULL)
            snprintf(why, REFERENCE_WHY, "no limit for %s", bw_effect_name(want->effect));
    }
    return holds;
}

static inline double reference_factor(const struct bw_table *table, const char *name, double x) {
    for (size_t i = 0; i < table->factor_count; i++)
        if (strcmp(table->factors[i].name, name) == 0)
            return bw_limits_factor_at(table, (int)i, x, x);
    return limits_nan;
}

static inline double reference_time(const struct bw_table *table, const struct reference_rule *rule) {
    static const char *const names[] = {"glance", "diffuse", "skin", "alignment", "working-day"};
    static const enum bw_viewing viewings[] = {BW_GLANCE, BW_DIFFUSE, BW_SKIN_TIME, BW_ALIGNMENT, BW_WORKING_DAY};
    const double wavelengths_nm[] = {rule->a, rule->b};
    for (size_t i = 0; i < sizeof names / sizeof names[0]; i++) {
        struct bw_exposure_time time;
        if (strcmp(names[i], rule->word) != 0)
            continue;
        if (bw_limits_exposure_time(table, viewings[i], wavelengths_nm, rule->b > 0.0 ? 2 : 1, &time, NULL) != BW_OK)
            return limits_nan;
        return time.aversion_response == (rule->c > 0.0) ? time.exposure_s : -time.exposure_s;
    }
    return limits_nan;
}

static inline double reference_prints(const struct bw_table *table, const char *words) {
    struct bw_text text = {0};
    double found = bw_table_print(table, &text) == BW_OK && strstr(text.data, words) != NULL ? 1.0 : 0.0;
    bw_text_free(&text);
    return found;
}

/* What the rule set says; NAN if it has nothing there. */
static inline double reference_rule_value(const struct bw_table *table, const struct reference_rule *rule) {
    enum bw_effect effect;
    double ti_s;
    if (strcmp(rule->what, "factor") == 0)
        return reference_factor(table, rule->word, rule->a);
    if (strcmp(rule->what, "ti") == 0)
        return bw_limits_grouping_time(table, rule->a, &ti_s, NULL) ? ti_s : limits_nan;
    if (strcmp(rule->what, "applies") == 0)
        return reference_effect(rule->word, &effect) && bw_limits_train_applies(table, effect, rule->a) ? 1.0 : 0.0;
    if (strcmp(rule->what, "count") == 0)
        return bw_limits_counting_time(table, &(struct bw_exposure){550.0, 1.0, rule->a * 1e-3, 0.0});
    if (strcmp(rule->what, "longest") == 0)
        return bw_limits_train_longest_pulse(table);
    if (strcmp(rule->what, "train") == 0)
        return bw_limits_train_correction(
            table, &(struct bw_train_count){rule->a, rule->b, rule->c, rule->d, rule->e * 1e-3}, NULL, NULL);
    if (strcmp(rule->what, "adds") == 0)
        return bw_limits_add(table, strcmp(rule->word, "eye") == 0 ? BW_EYE : BW_SKIN, rule->a, rule->b) ? 1.0 : 0.0;
    if (strcmp(rule->what, "time") == 0)
        return reference_time(table, rule);
    if (strcmp(rule->what, "prints") == 0)
        return reference_prints(table, rule->word);
    return limits_infinity; /* an unknown word must not pass as `none` */
}

static inline bool reference_rule_holds(const struct bw_table *table, const struct reference_rule *rule) {
    return reference_equal(reference_rule_value(table, rule), rule->want);
}

static inline bool reference_material_holds(const struct bw_material *got, const struct bw_material *want) {
    return strcmp(got->name, want->name) == 0 && got->finish == want->finish &&
           reference_equal(got->reflectance, want->reflectance) &&
           reference_equal(got->matt_reflectance, want->matt_reflectance) &&
           reference_equal(got->transmittance, want->transmittance) &&
           reference_equal(got->refractive_index, want->refractive_index);
}

#endif
