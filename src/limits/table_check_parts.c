/* Missing parts of a rule set: a factor that stops short, a section that is not there, a hole between sections; and
 * bands of the rules beside the limits that slipped. */
#include "check.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

/* A row that does not begin where the one before it ends. */
static void check_follows(const char *section, const struct row_note *before, const struct span *end,
                          const struct row_note *note, const struct span *begin, struct bw_faults *faults) {
    char number[LIMITS_NUMBER_SIZE];
    if (begin->low > end->high || begin->low < end->high)
        bw_faults_add(faults, note->line, section, note->key, "%s %s; wants to begin at %s",
                      begin->low > end->high ? "leaves a gap after" : "overlaps", before->key,
                      bw_limits_number(number, end->high));
}

/* ---- factors ---------------------------------------------------------------------------------- */

/* Rows of a factor follow each other without gap or overlap. */
static void check_factor_rows(const struct bw_table *table, const struct factor *factor, struct bw_faults *faults) {
    if (factor->count == 0)
        bw_faults_add(faults, factor->line, factor->section, "", "has no rows");
    for (size_t i = factor->first + 1; i < factor->first + factor->count; i++) {
        const struct factor_row *before = &table->factor_rows[i - 1], *row = &table->factor_rows[i];
        check_follows(factor->section, &before->note, &before->argument, &row->note, &row->argument, faults);
    }
    for (size_t i = factor->first; i < factor->first + factor->count; i++) { /* from end to end it rises or falls */
        const struct factor_row *row = &table->factor_rows[i];
        if (!isfinite(bw_limits_factor_row(row, row->argument.low)) ||
            !isfinite(bw_limits_factor_row(row, row->argument.high)))
            bw_faults_add(faults, row->note.line, factor->section, row->note.key,
                          "is beyond all numbers at an end of the row; wants a smaller slope");
    }
}

static bool factor_reaches(const struct bw_table *table, int index, const struct span *wavelength_nm) {
    const struct factor *factor = &table->factors[index];
    if (factor->count == 0)
        return true; /* reported */
    double low = table->factor_rows[factor->first].argument.low;
    const struct span *last = &table->factor_rows[factor->first + factor->count - 1].argument;
    if (factor->argument == BY_SUBTENSE_MRAD)
        return low <= 0.0 && last->high >= limits_subtense_high_mrad;
    bool stops_short = last->open_high && !wavelength_nm->open_high;
    return low <= wavelength_nm->low &&
           (stops_short ? last->high > wavelength_nm->high : last->high >= wavelength_nm->high);
}

static void check_use(const struct bw_table *table, int factor, const struct limit_row *row, struct bw_faults *faults) {
    if (factor >= 0 && !factor_reaches(table, factor, &row->wavelength_nm))
        bw_faults_add(faults, row->note.line, table->sections[row->section].name, row->note.key,
                      "factor %s does not reach over the whole row", table->factors[factor].name);
}

static void check_cover(const struct bw_table *table, int factor, const struct limit_section *section,
                        struct bw_faults *faults) {
    if (factor >= 0 && !factor_reaches(table, factor, &section->wavelength_nm))
        bw_faults_add(faults, section->covers_line, section->name, "covers",
                      "factor %s does not reach over the whole section", table->factors[factor].name);
}

void bw_check_factors(const struct bw_table *table, struct bw_faults *faults) {
    const struct span all = {limits_wavelength_low_nm, limits_wavelength_high_nm, false, false};
    for (size_t i = 0; i < table->factor_count; i++)
        check_factor_rows(table, &table->factors[i], faults);
    for (size_t i = 0; i < table->row_count; i++) {
        const struct limit_row *row = &table->rows[i];
        check_use(table, row->from.factor, row, faults);
        check_use(table, row->to.factor, row, faults);
        for (size_t j = 0; j < row->use_count; j++)
            check_use(table, row->uses[j].factor, row, faults);
    }
    for (size_t i = 0; i < table->section_count; i++)
        if (table->sections[i].covers_line != 0) {
            check_cover(table, table->sections[i].from.factor, &table->sections[i], faults);
            check_cover(table, table->sections[i].to.factor, &table->sections[i], faults);
        }
    int counting = table->repetition.counting_factor;
    if (counting >= 0 && !factor_reaches(table, counting, &all))
        bw_faults_add(faults, table->repetition.count_note.line, "repetition", "count",
                      "factor %s does not reach over all sources", table->factors[counting].name);
}

/* ---- sections --------------------------------------------------------------------------------- */

static bool uses_factor(const struct bw_table *table, int factor) {
    for (size_t i = 0; i < table->row_count; i++)
        for (size_t j = 0; j < table->rows[i].use_count; j++)
            if (table->rows[i].uses[j].factor == factor)
                return true;
    return false;
}

static bool has_radiance(const struct bw_table *table, bool photochemical) {
    for (size_t i = 0; i < table->row_count; i++) {
        const struct limit_row *row = &table->rows[i];
        bool here = table->sections[row->section].effect == BW_RETINA_PHOTOCHEMICAL;
        if ((row->quantity == QUANTITY_G || row->quantity == QUANTITY_L) && here == photochemical)
            return true;
    }
    return false;
}

static void check_source_size(const struct bw_table *table, struct bw_faults *faults) {
    const struct source_size *size = &table->source_size;
    bool needed = uses_factor(table, USE_CE);
    for (size_t i = 0; i < table->train_count; i++)
        needed = needed || table->train[i].low_is_alpha_max || table->train[i].high_is_alpha_max;
    if (!needed && size->line == 0)
        return;
    if (size->line == 0)
        bw_faults_add(faults, 0, "source-size", "", "section is missing; ce and amax need it");
    else if (size->alpha_min_note.key == NULL)
        bw_faults_add(faults, size->line, "source-size", "alpha_min", "is missing");
    else if (size->beyond == BEYOND_NONE)
        bw_faults_add(faults, size->line, "source-size", "beyond", "is missing; wants square or acceptance");
    else if (size->count == 0)
        bw_faults_add(faults, size->line, "source-size", "max_01", "is missing; wants alpha_max by time");
}

static void check_times(const struct bw_table *table, struct bw_faults *faults) {
    static const enum time_kind kinds[] = {TIME_VISIBLE,   TIME_GLANCE,      TIME_DIFFUSE,    TIME_SKIN,
                                           TIME_ALIGNMENT, TIME_WORKING_DAY, TIME_ULTRAVIOLET};
    double low_nm, high_nm;
    bw_table_span(table, BW_EYE, &low_nm, &high_nm);
    for (size_t i = 0; i < sizeof kinds / sizeof kinds[0]; i++) {
        size_t found = 0;
        for (size_t j = 0; j < table->time_count; j++)
            found += table->times[j].kind == kinds[i];
        bool needed = kinds[i] != TIME_ULTRAVIOLET || low_nm < 400.0;
        if (needed && found == 0)
            bw_faults_add(faults, 0, "exposure", "", "has no row for %s", bw_limits_time_kind_name(kinds[i]));
        if (found > 1)
            bw_faults_add(faults, 0, "exposure", "", "has more than one row for %s",
                          bw_limits_time_kind_name(kinds[i]));
    }
}

/* ---- bands of the rules beside the limits ------------------------------------------------------ */

static bool spans_overlap(const struct span *a, const struct span *b) {
    return a->low < b->high && b->low < a->high;
}

static bool spans_differ(const struct span *a, const struct span *b) {
    return a->low < b->low || a->low > b->low || a->high < b->high || a->high > b->high;
}

/* Where bands of grouping times overlapped or left a hole, pulses would be grouped by the wrong time. */
static void check_grouping(const struct bw_table *table, struct bw_faults *faults) {
    for (size_t i = 1; i < table->repetition.ti_count; i++) {
        const struct ti_row *before = &table->repetition.ti[i - 1], *row = &table->repetition.ti[i];
        check_follows("repetition", &before->note, &before->wavelength_nm, &row->note, &row->wavelength_nm, faults);
    }
}

/* All rows speak of the same bands: two bands are equal, or have no more than an edge in common. */
static void check_additivity(const struct bw_table *table, struct bw_faults *faults) {
    char text[LIMITS_SPAN_SIZE], other[LIMITS_SPAN_SIZE];
    for (size_t i = 0; i < 2 * table->additivity_count; i++) {
        const struct add_row *row = &table->additivity[i / 2];
        const struct span *band = i % 2 == 0 ? &row->first_nm : &row->second_nm;
        for (size_t j = 0; j < i; j++) {
            const struct add_row *before = &table->additivity[j / 2];
            const struct span *known = j % 2 == 0 ? &before->first_nm : &before->second_nm;
            if (!spans_overlap(band, known) || !spans_differ(band, known))
                continue;
            bw_faults_add(faults, row->note.line, "additivity", row->note.key,
                          "band %s overlaps %s of %s; wants the same bands in all rows", bw_limits_span(text, band),
                          bw_limits_span(other, known), before->note.key);
            break;
        }
    }
}

static const struct time_row *time_of(const struct bw_table *table, enum time_kind kind) {
    for (size_t i = 0; i < table->time_count; i++)
        if (table->times[i].kind == kind)
            return &table->times[i];
    return NULL;
}

/* A time beyond the working day is never taken, nor one within the ultraviolet, which goes first. */
static void check_time_bands(const struct bw_table *table, struct bw_faults *faults) {
    const struct time_row *day = time_of(table, TIME_WORKING_DAY), *ultraviolet = time_of(table, TIME_ULTRAVIOLET);
    for (size_t i = 0; i < table->time_count; i++) {
        const struct time_row *row = &table->times[i];
        if (day != NULL &&
            (row->wavelength_nm.low < day->wavelength_nm.low || row->wavelength_nm.high > day->wavelength_nm.high))
            bw_faults_add(faults, row->note.line, "exposure", row->note.key,
                          "reaches beyond the wavelengths of the working day");
        if (ultraviolet != NULL && row != ultraviolet && row != day &&
            spans_overlap(&row->wavelength_nm, &ultraviolet->wavelength_nm))
            bw_faults_add(faults, row->note.line, "exposure", row->note.key,
                          "reaches into the ultraviolet, whose time goes first");
    }
}

void bw_check_parts(const struct bw_table *table, struct bw_faults *faults) {
    if (table->section_count == 0)
        bw_faults_add(faults, 0, "", "", "has no limits; wants [eye EFFECT] and [skin] sections");
    if (table->aperture_count == 0)
        bw_faults_add(faults, 0, "aperture", "", "section is missing or empty");
    if (table->repetition.line == 0)
        bw_faults_add(faults, 0, "repetition", "", "section is missing");
    else if (table->repetition.count_note.key == NULL)
        bw_faults_add(faults, table->repetition.line, "repetition", "count", "is missing; wants all or a time factor");
    if (table->repetition.applies_count > 0 && table->train_count == 0)
        bw_faults_add(faults, 0, "train", "", "section is missing or empty; the correction by N needs it");
    if (table->additivity_count == 0)
        bw_faults_add(faults, 0, "additivity", "", "section is missing or empty");
    if (has_radiance(table, false))
        bw_faults_add(faults, 0, "cone", "", "G and L need a measuring cone: only retina-photochemical has one");
    check_source_size(table, faults);
    check_times(table, faults);
    check_grouping(table, faults);
    check_additivity(table, faults);
    check_time_bands(table, faults);
}

/* ---- holes between sections ------------------------------------------------------------------- */

/* The times that the target's sections cover at one wavelength follow each other without a hole. Edges that are
 * names stand between two numbers of the same section or of one beside it. */
static bool times_connect(const struct bw_table *table, enum bw_target target, double wavelength_nm) {
    double reached = -1.0, lowest = limits_infinity;
    for (size_t i = 0; i < table->section_count; i++)
        if (table->sections[i].target == target &&
            bw_limits_in_span(&table->sections[i].wavelength_nm, wavelength_nm) &&
            table->sections[i].from.factor == EDGE_IS_NUMBER)
            lowest = fmin(lowest, table->sections[i].from.value_s);
    for (reached = lowest; reached < limits_infinity;) {
        double next = reached, farthest = reached;
        for (size_t i = 0; i < table->section_count; i++) {
            const struct limit_section *section = &table->sections[i];
            if (section->target != target || !bw_limits_in_span(&section->wavelength_nm, wavelength_nm) ||
                section->from.factor != EDGE_IS_NUMBER || section->to.factor != EDGE_IS_NUMBER)
                continue;
            if (section->from.value_s <= reached)
                next = fmax(next, section->to.value_s);
            farthest = fmax(farthest, section->to.value_s);
        }
        if (!(next > reached))
            return !(farthest > reached);
        reached = next;
    }
    return false;
}

static void check_target(const struct bw_table *table, enum bw_target target, struct bw_faults *faults) {
    char low[LIMITS_NUMBER_SIZE], high[LIMITS_NUMBER_SIZE];
    const struct band_index *index = &table->index[target];
    for (size_t i = 0; i < index->count; i++) {
        double middle = 0.5 * (index->bands[i].low_nm + index->bands[i].high_nm);
        if (!times_connect(table, target, middle))
            bw_faults_add(
                faults, 0, target == BW_EYE ? "eye" : "skin", "", "gap: the sections leave a hole between %s and %s nm",
                bw_limits_number(low, index->bands[i].low_nm), bw_limits_number(high, index->bands[i].high_nm));
    }
}

/* The reach of the sections of the same effect that cover all that this one covers: does it take in every source? */
static bool sources_complete(const struct bw_table *table, const struct limit_section *section) {
    double reached = 0.0;
    for (bool more = true; more && reached < limits_subtense_high_mrad;) {
        more = false;
        for (size_t i = 0; i < table->section_count; i++) {
            const struct limit_section *other = &table->sections[i];
            bool contains = other->target == section->target && other->effect == section->effect &&
                            other->area_m2.low <= 0.0 && other->wavelength_nm.low <= section->wavelength_nm.low &&
                            other->wavelength_nm.high >= section->wavelength_nm.high &&
                            (section->from.factor != EDGE_IS_NUMBER || other->from.factor != EDGE_IS_NUMBER ||
                             other->from.value_s <= section->from.value_s) &&
                            (section->to.factor != EDGE_IS_NUMBER || other->to.factor != EDGE_IS_NUMBER ||
                             other->to.value_s >= section->to.value_s);
            if (contains && other->subtense_mrad.low <= reached && other->subtense_mrad.high > reached) {
                reached = other->subtense_mrad.high;
                more = true;
            }
        }
    }
    return reached >= limits_subtense_high_mrad;
}

/* An edge of a section's source sizes is the end of all sources, or another section of the effect ends or begins
 * there: the lower limit would hide an edge that slipped. */
static bool sources_meet(const struct bw_table *table, const struct limit_section *section) {
    bool low_meets = section->subtense_mrad.low <= 0.0;
    bool high_meets = section->subtense_mrad.high >= limits_subtense_high_mrad;
    for (size_t i = 0; i < table->section_count; i++) {
        const struct limit_section *other = &table->sections[i];
        if (other->target != section->target || other->effect != section->effect)
            continue;
        low_meets = low_meets || !(other->subtense_mrad.high < section->subtense_mrad.low ||
                                   other->subtense_mrad.high > section->subtense_mrad.low);
        high_meets = high_meets || !(other->subtense_mrad.low < section->subtense_mrad.high ||
                                     other->subtense_mrad.low > section->subtense_mrad.high);
    }
    return low_meets && high_meets;
}

void bw_check_whole(const struct bw_table *table, struct bw_faults *faults) {
    check_target(table, BW_EYE, faults);
    check_target(table, BW_SKIN, faults);
    for (size_t i = 0; i < table->section_count; i++) {
        const struct limit_section *section = &table->sections[i];
        if (!sources_complete(table, section))
            bw_faults_add(faults, section->line, section->name, "subtense_mrad",
                          "gap: the sections of this effect do not take in every source from 0 to 1571 mrad");
        if (!sources_meet(table, section))
            bw_faults_add(faults, section->line, section->name, "subtense_mrad",
                          "has an edge where no other section of this effect begins or ends");
    }
}
