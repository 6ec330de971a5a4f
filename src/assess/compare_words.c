/* Why rule sets differ, in one sentence that is made of the rows that govern. */
#include "internal.h"

#include <ctype.h>
#include <math.h>
#include <string.h>

static bool same(double a, double b) {
    return (!(a < b) && !(a > b)) || fabs(a - b) <= 1e-9 * fmax(fabs(a), fabs(b));
}

/* Could this be why another figure is another: no column of this figure differs in it, and one of another does? */
typedef bool differs(const struct bw_column *a, const struct bw_column *b);
static bool any_differs(const struct bw_column *columns, size_t count, size_t at, differs *test) {
    bool any = false;
    for (size_t i = 0; i < count; i++) {
        if (columns[i].out_of_range || !test(&columns[at], &columns[i]))
            continue;
        if (same(columns[i].figure, columns[at].figure))
            return false;
        any = true;
    }
    return any;
}
static bool exposure_differs(const struct bw_column *a, const struct bw_column *b) {
    return !same(a->exposure_s, b->exposure_s);
}
static bool wavelength_differs(const struct bw_column *a, const struct bw_column *b) {
    return !same(a->wavelength_nm, b->wavelength_nm);
}
static bool effect_differs(const struct bw_column *a, const struct bw_column *b) {
    return a->limit.limit.effect != b->limit.limit.effect;
}

/* A factor that another rule set takes at another value. */
static bool factor_differs(const struct bw_column *columns, size_t count, const struct bw_factor_value *factor) {
    for (size_t i = 0; i < count; i++)
        for (size_t j = 0; j < columns[i].limit.limit.factor_count && !columns[i].out_of_range; j++) {
            const struct bw_factor_value *other = &columns[i].limit.limit.factors[j];
            if (strcmp(other->name, factor->name) == 0 && !same(other->value, factor->value))
                return true;
        }
    return false;
}

static void add_factors(struct bw_text *out, const struct bw_column *columns, size_t count, size_t at) {
    const struct bw_limit *limit = &columns[at].limit.limit;
    const char *before = " with";
    for (size_t j = 0; j < limit->factor_count; j++) {
        if (!factor_differs(columns, count, &limit->factors[j]))
            continue;
        bw_text_add(out, "%s ", before);
        for (const char *c = limit->factors[j].name; *c; c++)
            bw_text_add(out, "%c", toupper((unsigned char)*c));
        bw_text_add(out, " = %.3g", limit->factors[j].value);
        before = " and";
    }
}

/* "the average, E = 10 CA CC over 100 s" */
static void add_phrase(struct bw_text *out, const struct bw_column *columns, size_t count, size_t at) {
    const struct bw_column *column = &columns[at];
    char row[BW_FORMULA_SIZE], train[BW_FORMULA_SIZE];
    bw_limits_row_formula(column->table, &column->limit.limit.source, row);
    if (column->has_train && column->limit.rule == BW_RULE_TRAIN)
        bw_text_add(out, "%s (train), here %.3g, of %s",
                    bw_limits_row_formula(column->table, &column->limit.correction_source, train),
                    column->limit.correction, row);
    else if (column->has_train)
        bw_text_add(out, "the %s, %s", column->limit.rule == BW_RULE_AVERAGE ? "average" : "single pulse", row);
    else
        bw_text_add(out, "%s", row);
    add_factors(out, columns, count, at);
    if (any_differs(columns, count, at, effect_differs))
        bw_text_add(out, ", for %s", bw_effect_name(column->limit.limit.effect));
    if (any_differs(columns, count, at, wavelength_differs))
        bw_text_add(out, ", at %.6g nm", column->wavelength_nm);
    if (any_differs(columns, count, at, exposure_differs))
        bw_text_add(out, ", over %.6g s", column->exposure_s);
}

static bool first_of_its_figure(const struct bw_column *columns, size_t at) {
    for (size_t i = 0; i < at; i++)
        if (!columns[i].out_of_range && same(columns[i].figure, columns[at].figure))
            return false;
    return true;
}

static size_t count_figures(const struct bw_column *columns, size_t count, size_t *in_range) {
    size_t figures = 0;
    *in_range = 0;
    for (size_t i = 0; i < count; i++) {
        *in_range += !columns[i].out_of_range;
        figures += !columns[i].out_of_range && first_of_its_figure(columns, i);
    }
    return figures;
}

bool bw_columns_differ(const struct bw_column *columns, size_t count) {
    size_t in_range;
    return count_figures(columns, count, &in_range) > 1;
}

enum { COLUMNS_MAX = 16 };

static bool alike(const struct bw_column *columns, const struct bw_text *phrases, size_t a, size_t b) {
    return !columns[a].out_of_range && !columns[b].out_of_range && same(columns[a].figure, columns[b].figure) &&
           phrases[a].data != NULL && phrases[b].data != NULL && strcmp(phrases[a].data, phrases[b].data) == 0;
}

/* "eu-2006-25 and icnirp-2013 govern by ..." */
static void add_group(struct bw_text *out, const struct bw_column *columns, const struct bw_text *phrases, size_t count,
                      size_t at, bool first) {
    size_t of = 0, named = 0;
    for (size_t i = at; i < count; i++)
        of += alike(columns, phrases, at, i);
    for (size_t i = at; i < count; i++)
        if (alike(columns, phrases, at, i)) {
            bw_text_add(out, "%s%s", named == 0 ? "" : named + 1 < of ? ", " : " and ", bw_table_id(columns[i].table));
            named++;
        }
    bw_text_add(out, "%s by %s", !first ? "" : of > 1 ? " govern" : " governs", phrases[at].data);
}

static void add_groups(struct bw_text *out, const struct bw_column *columns, const struct bw_text *phrases,
                       size_t count) {
    bool first = true;
    for (size_t i = 0; i < count; i++) {
        bool named = columns[i].out_of_range;
        for (size_t j = 0; j < i; j++)
            named = named || alike(columns, phrases, j, i);
        if (named)
            continue;
        bw_text_add(out, "%s", first ? "" : "; ");
        add_group(out, columns, phrases, count, i, first);
        first = false;
    }
}

/* Why the figures differ, from the rows that govern them.
 * Given:    columns, count  one a rule set, at most 16; what  the figures, "limits"
 * Returned: out             one sentence is appended
 * Notes:    A factor, an exposure, an effect or a wavelength is named only where it may be the reason. */
void bw_column_words(struct bw_text *out, const struct bw_column *columns, size_t count, const char *what) {
    struct bw_text phrases[COLUMNS_MAX] = {{0}};
    size_t in_range, figures = count_figures(columns, count, &in_range);
    count = count < COLUMNS_MAX ? count : COLUMNS_MAX;
    for (size_t i = 0; i < count; i++)
        if (!columns[i].out_of_range)
            add_phrase(&phrases[i], columns, count, i);
    if (in_range == 0) {
        bw_text_add(out, "No rule set has a row here.");
    } else {
        if (in_range > 1)
            bw_text_add(out, "The %s %s: ", what, figures > 1 ? "differ" : "agree");
        else
            bw_text_add(out, "Only one rule set has a row: ");
        add_groups(out, columns, phrases, count);
        bw_text_add(out, ".");
    }
    for (size_t i = 0; i < count; i++) {
        out->failed = out->failed || phrases[i].failed;
        bw_text_free(&phrases[i]);
    }
}
