/* hazard: nested and irregular trains against a brute force over all their windows. */
#include <math.h>
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdlib.h>
#include <string.h>
#include <stdio.h>

#include <cmocka.h>

#include "pulse_brute.h"

#define COUNT(array) (sizeof(array) / sizeof *(array))
#define NONE         ((double)NAN)

enum { LIST_MAX = 400, TRAINS = 2000 };

static char told[600]; /* what the train is, for a message */

/* ---- trains ----------------------------------------------------------------------------------- */

static struct bw_emission resolve(const struct bw_emission_input *input) {
    struct bw_emission emission;
    struct bw_error error = {.status = BW_OK};
    if (bw_emission_resolve(input, &emission, &error) != BW_OK)
        fail_msg("%s: %s", told, error.text);
    return emission;
}

static struct bw_emission of_list(double wavelength_nm, const struct bw_pulse *pulses, size_t count) {
    struct bw_timing timing = bw_timing_none();
    struct bw_emission_input input = {wavelength_nm, NONE, NONE, NONE, NONE, NONE, &timing};
    timing.pulses = pulses;
    timing.pulses_given = count;
    return resolve(&input);
}

static double wavelength(uint64_t *random, const char *rules) {
    if (strcmp(rules, "ansi-z136-1-2014") == 0)
        return between(random, 401., 1199.);
    double share = uniform(random);
    return share < .5 ? between(random, 401., 1399.) : share < .7 ? between(random, 316., 399.)
                                                                  : decades(random, 1401., 1e4);
}

enum list_kind { WILD, JITTERED, TOUCHING, ALIKE, CLUSTERED, LIST_KINDS };

/* Pulses of one kind of disorder. */
static size_t random_list(uint64_t *random, enum list_kind kind, size_t most, struct bw_pulse pulses[LIST_MAX]) {
    size_t count = 1 + (size_t)((double)most * uniform(random));
    double step_s = decades(random, 1e-8, 1.), time_s = step_s * between(random, -50., 50.);
    for (size_t i = 0; i < count; i++) {
        double gap_s = 0.;
        struct bw_pulse *pulse = &pulses[i];
        *pulse = (struct bw_pulse){time_s, step_s * between(random, .05, .4), 1e-3};
        if (kind == WILD) {
            *pulse = (struct bw_pulse){time_s, step_s * decades(random, 2e-5, 1.), decades(random, 1e-6, 1.)};
            gap_s = step_s * decades(random, 1e-4, 10.);
        } else if (kind == JITTERED) {
            gap_s = step_s * between(random, .5, .6);
            pulse->energy_j *= between(random, .9, 1.1);
        } else if (kind == TOUCHING) {
            pulse->energy_j = decades(random, 1e-5, 1e-3);
        } else if (kind == ALIKE) {
            pulse->start_s = (double)i * step_s;
            pulse->duration_s = step_s * .25;
        } else {
            pulse->energy_j = between(random, .5, 1.);
            gap_s = step_s * (uniform(random) < .8 ? .3 : decades(random, 1., 1e4));
        }
        time_s = pulse->start_s + pulse->duration_s + gap_s;
        if (i > 0 && bw_pulses_check(pulses, i, NULL) != BW_OK)
            return i; /* shorter than what a double can tell apart at that time */
    }
    return count;
}

struct nested {
    double period_s, duration_s, burst_period_s, gate_period_s; /* 0 = none */
    double pulses, bursts;
    double count; /* 0 = without end */
};

/* A period that holds so long a thing: often close to it, sometimes closer than what is inside. */
static double period_around(uint64_t *random, double lasts_s, double even_s) {
    double share = uniform(random);
    return share < .3 ? between(random, lasts_s, even_s) : share < .4 ? even_s : even_s * decades(random, 1., 100.);
}

static struct nested random_nested(uint64_t *random) {
    struct nested n = {decades(random, 1e-8, .1), 0., 0., 0., 1., 1., 0.};
    size_t levels = (size_t)(3. * uniform(random));
    n.duration_s = fmax(1e-11, n.period_s * decades(random, 1e-4, .95));
    double lasts_s = n.duration_s, even_s = n.period_s;
    if (levels > 0) {
        n.pulses = floor(between(random, 2., 8.));
        lasts_s += (n.pulses - 1.) * n.period_s;
        n.burst_period_s = even_s = period_around(random, lasts_s, n.pulses * n.period_s);
    }
    if (levels > 1) {
        n.bursts = floor(between(random, 2., 7.));
        lasts_s += (n.bursts - 1.) * n.burst_period_s;
        n.gate_period_s = period_around(random, lasts_s, n.bursts * even_s);
    }
    if (uniform(random) < .3)
        n.count = floor(between(random, 1., 60.));
    return n;
}

static double outermost_s(const struct nested *n) {
    return n->gate_period_s > 0. ? n->gate_period_s : n->burst_period_s > 0. ? n->burst_period_s : n->period_s;
}

/* Where the rule of the train is a bound, so is what is made of it: the limit may be lower and N higher. */
enum exactness { EXACT, TRAIN_BOUND, BOUND };

static bool closer_outside(const struct nested *n) {
    return (n->burst_period_s > 0. && n->burst_period_s < n->pulses * n->period_s * (1. - 1e-12)) ||
           (n->gate_period_s > 0. && n->gate_period_s < n->bursts * n->burst_period_s * (1. - 1e-12));
}

static enum exactness exactness_of(const struct nested *n) {
    if (n->count > 0. && closer_outside(n))
        return BOUND;
    return closer_outside(n) || (n->count > 0. && n->burst_period_s > 0.) ? TRAIN_BOUND : EXACT;
}

/* Its pulses one by one, those that begin before a time. */
static size_t expand(const struct nested *n, double until_s, struct bw_pulse pulses[LIST_MAX]) {
    for (size_t i = 0; i < LIST_MAX; i++) {
        size_t in_gate = (size_t)(n->pulses * n->bursts), gate = i / in_gate, rest = i % in_gate;
        double burst = (double)(rest / (size_t)n->pulses), pulse = (double)(rest % (size_t)n->pulses);
        double start_s = (double)gate * outermost_s(n) + burst * n->burst_period_s + pulse * n->period_s;
        if (!(start_s < until_s) || (n->count > 0. && !((double)i < n->count)))
            return i;
        pulses[i] = (struct bw_pulse){start_s, n->duration_s, 1e-3};
    }
    return LIST_MAX;
}

static struct bw_emission of_nested(double wavelength_nm, const struct nested *n, uint64_t *random) {
    struct bw_timing timing = bw_timing_none();
    struct bw_emission_input input = {wavelength_nm, NONE, NONE, 1e-3, n->duration_s, 1. / n->period_s, &timing};
    if (n->burst_period_s > 0.) {
        timing.burst_period_s = n->burst_period_s;
        timing.burst_pulses = n->pulses;
    }
    if (n->gate_period_s > 0.) { /* on until somewhere between the last burst and the one that does not come */
        double unit_s = n->burst_period_s;
        timing.gate_period_s = n->gate_period_s;
        timing.gate_on_s = fmin(n->gate_period_s, unit_s * (n->bursts - between(random, .01, .99)));
    }
    if (n->count > 0.)
        timing.pulse_count = n->count;
    return resolve(&input);
}

/* ---- comparing -------------------------------------------------------------------------------- */

static void same(double got, double want, double relative, const char *what, enum bw_effect effect) {
    if (!(fabs(got - want) <= relative * fabs(want)))
        fail_msg("%s: %s, %s: got %.15g, all windows %.15g", told, bw_effect_name(effect), what, got, want);
}

static void compare(const struct brute *b, const struct bw_train_limit_set *set, double relative,
                    enum exactness exactness) {
    for (size_t i = 0; i < set->count; i++) {
        const struct bw_train_limit *limit = &set->limits[i];
        enum bw_effect effect = limit->limit.effect;
        const double *want = b->lowest[effect];
        bool meets_two = want[BW_RULE_AVERAGE] < HUGE_VAL;
        for (size_t rule = 0; rule < BW_RULES; rule++) {
            double got = limit->rules_j_m2[rule];
            if (!(want[rule] < HUGE_VAL) && (rule == BW_RULE_AVERAGE || isnan(got)))
                continue; /* the exposure meets one pulse, or the rule does not hold */
            if (got < want[rule] && ((exactness == BOUND && rule == BW_RULE_AVERAGE) ||
                                     (exactness != EXACT && rule == BW_RULE_TRAIN)))
                continue;
            same(got, want[rule], relative, bw_train_rule_name((enum bw_train_rule)rule), effect);
        }
        if (!(fmin(limit->rules_j_m2[BW_RULE_SINGLE], limit->rules_j_m2[BW_RULE_AVERAGE]) <=
              b->any[effect] * (1. + relative)))
            fail_msg("%s: %s: a window is stricter, %.15g", told, bw_effect_name(effect), b->any[effect]);
        double narrow = limit->per_pulse_j_m2 * limit->aperture_m * limit->aperture_m;
        if (meets_two && exactness == EXACT)
            same(narrow, b->least[effect], 3. * relative, "H D^2", effect);
        if (limit->pulses > 0. && !(exactness != EXACT && limit->pulses > b->n))
            same(limit->pulses, b->n, 0., "N", effect);
        if (limit->pulses > 0. && b->group > 0. && exactness != BOUND)
            same(limit->group_pulses, fmax(1., b->group), relative, "group", effect);
    }
}

static void limits_of(struct brute *b, const struct bw_emission *emission, struct bw_train_limit_set *set) {
    struct bw_error error = {.status = BW_OK};
    if (bw_hazard_train_limits(b->table, emission, &b->viewing, set, NULL, &error) != BW_OK)
        fail_msg("%s: %s", told, error.text);
}

static struct bw_viewing_case random_viewing(uint64_t *random, double exposure_s) {
    struct bw_viewing_case viewing = {uniform(random) < .8 ? BW_EYE : BW_SKIN, exposure_s, 0., 0.};
    if (viewing.target == BW_EYE && uniform(random) < .3)
        viewing.subtense_rad = 1e-3 * decades(random, 1., 200.);
    return viewing;
}

/* The kinks of an extended source are known to 1e-8 (src/hazard/edges.c). Times of a train are known to the rounding of
 * its length, of which a window may cut off a part of the shortest pulse. */
static double tolerance(const struct brute *b) {
    double span_s = b->pulses[b->count - 1].start_s - b->pulses[0].start_s, shortest_s = HUGE_VAL;
    for (size_t i = 0; i < b->count; i++)
        shortest_s = fmin(shortest_s, b->pulses[i].duration_s);
    return b->viewing.subtense_rad > 0. ? 1e-8 : 1e-12 * fmax(1., 1e-3 * span_s / shortest_s);
}

/* ---- lists ------------------------------------------------------------------------------------ */

static void check_list(const char *rules, const struct bw_pulse *pulses, size_t count, uint64_t *random) {
    double span_s = pulses[count - 1].start_s - pulses[0].start_s + pulses[count - 1].duration_s;
    double exposure_s = fmin(3e4, fmax(2e-13, span_s * (uniform(random) < .3 ? 1. : decades(random, .01, 10.))));
    struct brute b = {.table = bw_tables_find(rules), .wavelength_nm = wavelength(random, rules),
                      .viewing = random_viewing(random, exposure_s), .pulses = pulses, .count = count,
                      .opens_before_s = HUGE_VAL};
    struct bw_train_limit_set set;
    struct bw_emission emission = of_list(b.wavelength_nm, pulses, count);
    int used = snprintf(told, sizeof told, "%zu pulses over %.9g s, %g nm, %.9g s, %g rad", count, span_s,
                        b.wavelength_nm, exposure_s, b.viewing.subtense_rad);
    for (size_t i = 0; i < count && i < 5; i++)
        used += snprintf(told + used, sizeof told - (size_t)used, "; %.17g %.9g %.9g", pulses[i].start_s,
                         pulses[i].duration_s, pulses[i].energy_j);
    brute_all(&b);
    limits_of(&b, &emission, &set);
    compare(&b, &set, tolerance(&b), EXACT);
}

static void test_lists(void **state) {
    uint64_t random = 5;
    struct bw_pulse pulses[LIST_MAX];
    for (int i = 0; i < TRAINS; i++) {
        size_t count = random_list(&random, (enum list_kind)(i % LIST_KINDS), i % 7 == 0 ? 12 : 40, pulses);
        check_list(*state, pulses, count, &random);
    }
    for (int i = 0; i < 2 * LIST_KINDS; i++) {
        size_t count = random_list(&random, (enum list_kind)(i % LIST_KINDS), LIST_MAX - 1, pulses);
        check_list(*state, pulses, count, &random);
    }
}

/* ---- regular trains, bursts and gates ----------------------------------------------------------- */

static void test_nested(void **state) {
    uint64_t random = 17;
    struct bw_pulse pulses[LIST_MAX];
    for (int i = 0; i < TRAINS; i++) {
        struct nested n = random_nested(&random);
        double exposure_s = outermost_s(&n) * decades(&random, .01, fmin(10., 150. / n.pulses / n.bursts));
        if (uniform(&random) < .1)
            exposure_s = n.duration_s * between(&random, .2, 2.);
        struct brute b = {.table = bw_tables_find(*state), .wavelength_nm = wavelength(&random, *state),
                          .viewing = random_viewing(&random, exposure_s), .pulses = pulses,
                          .opens_before_s = outermost_s(&n) * (1. - 1e-12)};
        snprintf(told, sizeof told, "%d: %g pulses of %.9g s every %.9g s, %g bursts every %.9g s, gate %.9g s, count "
                 "%g, %.9g nm, %.9g s, %g rad", i, n.pulses, n.duration_s, n.period_s, n.bursts, n.burst_period_s,
                 n.gate_period_s, n.count, b.wavelength_nm, exposure_s, b.viewing.subtense_rad);
        if (n.count > 0.)
            b.opens_before_s = HUGE_VAL;
        b.count = expand(&n, outermost_s(&n) + exposure_s, pulses);
        assert_true(b.count < LIST_MAX);
        struct bw_emission emission = of_nested(b.wavelength_nm, &n, &random);
        struct bw_train_limit_set set;
        brute_all(&b);
        limits_of(&b, &emission, &set);
        compare(&b, &set, tolerance(&b),
                exactness_of(&n));
        if (n.count > 0. && (double)b.count < n.count)
            continue; /* the list would end before the train does */
        if (n.count > 0.) {
            emission = of_list(b.wavelength_nm, pulses, b.count);
            limits_of(&b, &emission, &set);
            compare(&b, &set, tolerance(&b), EXACT);
        }
    }
}

/* ---- long lists --------------------------------------------------------------------------------- */

enum { MANY = 200000 };

/* Two pulses close together after very many others: their energy is the difference of two large sums. */
static void test_sums(void **state) {
    (void)state;
    struct bw_pulse *pulses = malloc(MANY * sizeof *pulses);
    assert_non_null(pulses);
    for (size_t i = 0; i < MANY; i++)
        pulses[i] = (struct bw_pulse){(double)i, 1e-9, .1 + 1e-7 * (double)(i % 7)};
    pulses[MANY - 2] = (struct bw_pulse){MANY - 2., 1e-9, .2};
    pulses[MANY - 1] = (struct bw_pulse){MANY - 2. + 1. / 65536., 1e-9, .3};
    struct bw_emission emission = of_list(1600., pulses, MANY);
    struct bw_viewing_case viewing = {BW_EYE, 1., 0., 0.};
    struct bw_exposure exposure = {1600., 1. / 65536. + 1e-9, 0., 0.};
    struct bw_train_limit_set set;
    struct bw_limit_set limits;
    snprintf(told, sizeof told, "a pair at the end");
    assert_int_equal(bw_hazard_train_limits(bw_tables_find("icnirp-2013"), &emission, &viewing, &set, NULL, NULL),
                     BW_OK);
    assert_int_equal(bw_limits(bw_tables_find("icnirp-2013"), BW_EYE, &exposure, &limits, NULL, NULL), BW_OK);
    same(set.limits[0].rules_j_m2[BW_RULE_AVERAGE], limits.limits[0].radiant_exposure_j_m2 * .3 / (.2 + .3), 1e-14,
         "two among many", BW_ANTERIOR);
    free(pulses);
}

/* A regular train with bursts in gates, as the closed form has it and as a list of all its pulses. */
static void test_long_lists(void **state) {
    uint64_t random = 23;
    struct bw_pulse *pulses = malloc(MANY * sizeof *pulses);
    assert_non_null(pulses);
    for (int i = 0; i < 6; i++) {
        double tick_s = ldexp(1., -24 - i % 3), wavelength_nm = wavelength(&random, *state);
        struct nested n = {64. * tick_s, between(&random, 1., 60.) * tick_s, 2048. * tick_s, 262144. * tick_s, 20., 90.,
                           50000. + 30000. * i};
        for (size_t k = 0; k < (size_t)n.count; k++)
            pulses[k] = (struct bw_pulse){(double)(k / 1800) * n.gate_period_s +
                                              (double)(k % 1800 / 20) * n.burst_period_s +
                                              (double)(k % 20) * n.period_s,
                                          n.duration_s, 1e-3};
        struct bw_viewing_case viewing = random_viewing(&random, decades(&random, 1e-4, 10.));
        struct bw_emission regular = of_nested(wavelength_nm, &n, &random);
        struct bw_emission list = of_list(wavelength_nm, pulses, (size_t)n.count);
        struct brute b = {.table = bw_tables_find(*state), .viewing = viewing};
        struct bw_train_limit_set want, got;
        snprintf(told, sizeof told, "long %d: %g nm, %g s, %g rad", i, wavelength_nm, viewing.exposure_s,
                 viewing.subtense_rad);
        limits_of(&b, &regular, &want);
        limits_of(&b, &list, &got);
        assert_int_equal(got.count, want.count);
        for (size_t k = 0; k < got.count; k++) {
            enum bw_effect effect = got.limits[k].limit.effect;
            for (size_t rule = 0; rule < BW_RULES - 1; rule++)
                same(got.limits[k].rules_j_m2[rule], want.limits[k].rules_j_m2[rule], 1e-11, "as a list", effect);
            same(got.limits[k].irradiance_w_m2 / list.average_power_w * list.pulse_energy_j,
                 got.limits[k].per_pulse_j_m2, 1e-14, "mean", effect);
            if (!(got.limits[k].pulses <= want.limits[k].pulses))
                fail_msg("%s: N %g in the list, %g in the train", told, got.limits[k].pulses, want.limits[k].pulses);
        }
    }
    free(pulses);
}

/* ---- the working -------------------------------------------------------------------------------- */

static void check_working(const struct bw_emission *emission, double exposure_s) {
    static const char *const wanted[] = {"H1", "H2", "H3", "MPE", "E_limit"};
    struct bw_viewing_case viewing = {BW_EYE, exposure_s, 0., 0.};
    struct bw_working working = {.steps = NULL};
    struct bw_train_limit_set set;
    assert_int_equal(
        bw_hazard_train_limits(bw_tables_find("icnirp-2013"), emission, &viewing, &set, &working, NULL), BW_OK);
    const struct bw_train_limit *limit = &set.limits[0];
    const double values[] = {limit->rules_j_m2[BW_RULE_SINGLE], limit->rules_j_m2[BW_RULE_AVERAGE],
                             limit->rules_j_m2[BW_RULE_TRAIN], limit->per_pulse_j_m2, limit->irradiance_w_m2};
    for (size_t i = 0; i < COUNT(wanted); i++) {
        bool found = false;
        for (size_t j = 0; j < working.count; j++)
            found = found || (!working.steps[j].heading && strcmp(working.steps[j].symbol, wanted[i]) == 0 &&
                              fabs(working.steps[j].value - values[i]) <= 1e-14 * values[i]);
        if (!found)
            fail_msg("no step %s of %g", wanted[i], values[i]);
    }
    same(limit->irradiance_w_m2, limit->per_pulse_j_m2 * emission->average_power_w / emission->pulse_energy_j, 1e-14,
         "E = H P / Q", BW_RETINA_THERMAL);
    bw_working_free(&working);
}

static void test_working(void **state) {
    (void)state;
    const struct bw_pulse pulses[] = {{0., 1e-6, 1e-3}, {4e-6, 1e-6, 3e-3}, {1., 1e-6, 2e-3}};
    struct nested n = {1e-3, 1e-6, .1, 2., 10., 5., 0.};
    uint64_t random = 1;
    struct bw_emission nested = of_nested(810., &n, &random), list = of_list(810., pulses, COUNT(pulses));
    n.count = 1.;
    struct bw_emission single = of_nested(810., &n, &random);
    check_working(&nested, 10.);
    check_working(&list, 10.);
    check_working(&single, 10.);
}

static char rule_sets[][32] = {"eu-2006-25", "iec-60825-1-2014", "icnirp-2013", "ansi-z136-1-2014"};
static struct CMUnitTest tests[3 * COUNT(rule_sets) + 2];

int main(void) {
    size_t count = 0;
    for (size_t i = 0; i < COUNT(rule_sets); i++) {
        tests[count++] = (struct CMUnitTest){"lists against all windows", test_lists, NULL, NULL, rule_sets[i]};
        tests[count++] = (struct CMUnitTest){"nested against all windows", test_nested, NULL, NULL, rule_sets[i]};
        tests[count++] = (struct CMUnitTest){"long lists", test_long_lists, NULL, NULL, rule_sets[i]};
    }
    tests[count++] = (struct CMUnitTest){"sums of a long list", test_sums, NULL, NULL, NULL};
    tests[count++] = (struct CMUnitTest){"the working", test_working, NULL, NULL, NULL};
    return cmocka_run_group_tests_name("hazard pulses", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
