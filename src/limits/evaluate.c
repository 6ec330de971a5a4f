/* The one evaluator: every row that holds at this wavelength, time and source, and the lowest of each effect.
 *
 * limit = value * t^power * factors. A row printed as H or G gives the radiant exposure, one printed as E or L the
 * irradiance. A radiance (G, L) counts as irradiance within the measuring cone gamma: H = G pi gamma^2 / 4.
 *
 * Photochemical rows are measured within the cone gamma. A uniform source wider than the cone may be that much
 * brighter in all, so its limit rises by (alpha/gamma)^2 and is compared with the whole irradiance; the acceptance
 * is then left open, or the cone would count twice.
 *
 * Source-size rows of IEC stop at CE = alpha_max/alpha_min, and the exposure is measured within alpha_max. */
#include "evaluate.h"

#include "plan.h"

#include <math.h>

/* The common laws all at once: two square roots cost less than a guess which one a row wants. */
static void raise_time(struct query *query) {
    double half = sqrt(query->time_s), quarter = sqrt(half);
    query->time_powers[POWER_0] = 1.0;
    query->time_powers[POWER_1_4] = quarter;
    query->time_powers[POWER_1_2] = half;
    query->time_powers[POWER_3_4] = half * quarter;
    query->time_powers[POWER_1] = query->time_s;
}

static double time_power(const struct query *query, const struct power *power) {
    if (power->law >= POWER_COMMON)
        return bw_limits_raise(query->time_s, power);
    double value = query->time_powers[power->law];
    return power->inverse ? 1.0 / value : value;
}

/* Nearly every factor stands in its first power. */
static inline double raise(double value, const struct power *power) {
    return power->law == POWER_1 && !power->inverse ? value : bw_limits_raise(value, power);
}

static double size_at(const struct query *query, const struct size_row *row) {
    return row->value * time_power(query, &row->time_power);
}

/* CE of this source and time (1 if not larger than alpha_min). */
static double source_size_factor(const struct query *query, const struct held_row *held, double *alpha_max_mrad) {
    const struct source_size *size = &query->table->source_size;
    double alpha = query->subtense_mrad, smallest = size->alpha_min_mrad;
    *alpha_max_mrad = held->alpha_max != NO_ROW ? size_at(query, &size->rows[held->alpha_max])
                                                : bw_limits_alpha_max_mrad(query->table, query->time_s);
    if (alpha <= smallest)
        return 1.0;
    if (alpha <= *alpha_max_mrad)
        return alpha / smallest;
    if (size->beyond == BEYOND_ACCEPTANCE)
        return *alpha_max_mrad / smallest;
    return alpha * alpha / (smallest * *alpha_max_mrad);
}

/* A factor that the table prints. held_row: the one row of it that holds here, or NO_ROW. */
static double printed_factor(const struct query *query, const struct factor_use *use, unsigned short held_row,
                             const struct factor_row **row) {
    if (held_row == NO_ROW) {
        bool by_subtense = query->table->factors[use->factor].argument == BY_SUBTENSE_MRAD;
        return bw_limits_factor(query->table, use->factor, by_subtense ? query->subtense_mrad : query->wavelength_nm,
                                &use->power, row);
    }
    *row = &query->table->factor_rows[held_row];
    return raise(bw_limits_factor_row(*row, query->wavelength_nm), &use->power);
}

/* One factor of a row, with its exponent applied. */
static double use_factor(const struct query *query, const struct held_row *held, size_t index, struct bw_limit *limit,
                         struct product_text *text) {
    const struct factor_use *use = &query->table->rows[held->row].uses[index];
    const struct factor_row *row = NULL;
    double value, alpha_max_mrad;
    if (use->factor == USE_CE) {
        value = raise(source_size_factor(query, held, &alpha_max_mrad), &use->power);
        if (query->table->source_size.beyond == BEYOND_ACCEPTANCE)
            limit->acceptance_rad = alpha_max_mrad * 1e-3;
        if (query->working != NULL)
            bw_working_ce(query, value, alpha_max_mrad);
    } else if (use->factor == USE_AREA) {
        value = raise(query->area_m2, &use->power);
    } else {
        value = printed_factor(query, use, held->factor_rows[index], &row);
    }
    if (query->working != NULL)
        bw_working_factor(query, use, row, value, text);
    limit->factors[limit->factor_count++] = (struct bw_factor_value){use->label, value};
    return value;
}

/* The measuring cone of the photochemical limit [mrad]; where rows meet, the larger, which gives the lower limit. */
static double cone_mrad(const struct query *query, const struct held_row *held, const struct size_row **row) {
    double gamma = 0.0;
    if (held->cone != NO_ROW) {
        *row = &query->table->cones[held->cone];
        return size_at(query, *row);
    }
    for (size_t i = 0; i < query->table->cone_count; i++) {
        const struct size_row *cone = &query->table->cones[i];
        struct span times = {cone->from.value_s, cone->to.value_s, false, false};
        if (!bw_limits_in_span(&cone->wavelength_nm, query->wavelength_nm) || !bw_limits_in_span(&times, query->time_s))
            continue;
        double angle = size_at(query, cone);
        if (angle > gamma) {
            gamma = angle;
            *row = cone;
        }
    }
    return gamma;
}

static double wide_source_factor(const struct query *query, const struct size_row *cone, double gamma_mrad,
                                 struct bw_limit *limit, struct product_text *text) {
    if (cone == NULL || !(query->subtense_mrad > gamma_mrad))
        return 1.0;
    double value = query->subtense_mrad / gamma_mrad * (query->subtense_mrad / gamma_mrad);
    if (query->working != NULL)
        bw_working_cone(query, cone, gamma_mrad, value, text);
    limit->factors[limit->factor_count++] = (struct bw_factor_value){"(alpha/gamma)^2", value};
    return value;
}

/* The smallest aperture of the effect's rows here. */
static const struct size_row *find_aperture(const struct query *query, enum bw_effect effect) {
    const struct size_row *smallest_row = NULL;
    double smallest_mm = limits_infinity;
    for (size_t i = 0; i < query->table->aperture_count; i++) {
        const struct size_row *row = &query->table->apertures[i];
        if (row->effect != effect || !bw_limits_in_span(&row->wavelength_nm, query->wavelength_nm))
            continue;
        struct span times = {row->from.value_s, row->to.value_s, false, false};
        if (!bw_limits_in_span(&times, query->time_s))
            continue;
        double mm = size_at(query, row);
        if (mm < smallest_mm) {
            smallest_mm = mm;
            smallest_row = row;
        }
    }
    return smallest_row;
}

static double aperture_m(const struct query *query, const struct held_row *held, enum bw_effect effect) {
    const struct size_row *row =
        held->aperture != NO_ROW ? &query->table->apertures[held->aperture] : find_aperture(query, effect);
    double mm = row != NULL ? size_at(query, row) : limits_infinity;
    if (query->working != NULL)
        bw_working_aperture(query, row, mm);
    return mm * 1e-3;
}

/* What the plan left open: the source, and edges that depend on the wavelength or the source. */
static inline bool holds(const struct query *query, const struct held_row *held) {
    const struct limit_row *row = &query->table->rows[held->row];
    const struct limit_section *section = &query->table->sections[row->section];
    if ((held->asks & ASKS_SOURCE) && !(bw_limits_in_span(&section->subtense_mrad, query->subtense_mrad) &&
                                        bw_limits_in_span(&section->area_m2, query->area_m2)))
        return false;
    if (!(held->asks & ASKS_EDGES))
        return true;
    struct span times = {bw_limits_edge_s(query->table, &row->from, query->wavelength_nm, query->subtense_mrad),
                         bw_limits_edge_s(query->table, &row->to, query->wavelength_nm, query->subtense_mrad), false,
                         false};
    return bw_limits_in_span(&times, query->time_s);
}

static void evaluate_row(const struct query *query, const struct held_row *held, struct bw_limit *limit) {
    const struct limit_row *row = &query->table->rows[held->row];
    const struct limit_section *section = &query->table->sections[row->section];
    struct product_text text;
    const struct size_row *cone = NULL;
    double gamma_mrad = section->effect == BW_RETINA_PHOTOCHEMICAL ? cone_mrad(query, held, &cone) : 0.0;
    bool radiance = row->quantity == QUANTITY_G || row->quantity == QUANTITY_L;
    limit->effect = section->effect;
    limit->source =
        (struct bw_source_note){query->table->id, section->name, row->note.key, row->note.clause, row->note.known};
    limit->factor_count = 0;
    limit->acceptance_rad = limits_infinity;
    limit->printed_as_irradiance = row->quantity == QUANTITY_E || row->quantity == QUANTITY_L;
    if (query->working != NULL)
        bw_working_row(query, row, &text, radiance ? gamma_mrad : limits_nan);
    if (query->working != NULL && cone != NULL && (radiance || query->subtense_mrad > gamma_mrad))
        bw_working_gamma(query, cone, gamma_mrad);
    double product = row->value;
    if (radiance)
        product *= bw_pi / 4.0 * (gamma_mrad * 1e-3) * (gamma_mrad * 1e-3);
    product *= time_power(query, &row->time_power);
    for (size_t i = 0; i < row->use_count; i++)
        product *= use_factor(query, held, i, limit, &text);
    product *= wide_source_factor(query, cone, gamma_mrad, limit, &text);
    limit->irradiance_w_m2 = limit->printed_as_irradiance ? product : product / query->time_s;
    limit->radiant_exposure_j_m2 = limit->printed_as_irradiance ? product * query->time_s : product;
    if (query->working != NULL)
        bw_working_limit(query, row, limit, &text);
    limit->aperture_m = aperture_m(query, held, section->effect);
    if (query->working != NULL && limit->acceptance_rad < limits_infinity)
        bw_working_acceptance(query, limit->acceptance_rad * 1e3);
}

/* Every row of the cell in its order, which is that of the effects: of each effect the lowest stays. */
static void evaluate_cell(const struct query *query, const struct plan *plan, const struct cell *cell,
                          struct bw_limit_set *limits) {
    struct bw_limit rival;
    for (size_t i = cell->first; i < cell->first + cell->count; i++) {
        const struct held_row *held = &plan->held[i];
        const struct limit_row *row = &query->table->rows[held->row];
        if (held->asks != ASKS_NOTHING && !holds(query, held))
            continue;
        struct bw_limit *last = limits->count > 0 ? &limits->limits[limits->count - 1] : NULL;
        if (last == NULL || last->effect != query->table->sections[row->section].effect) {
            evaluate_row(query, held, &limits->limits[limits->count++]);
            continue;
        }
        evaluate_row(query, held, &rival);
        if (!(last->radiant_exposure_j_m2 <= rival.radiant_exposure_j_m2))
            *last = rival;
    }
}

static enum bw_status check_arguments(const struct bw_table *table, const struct bw_exposure *exposure,
                                      struct bw_error *error) {
    if (table == NULL || exposure == NULL)
        return bw_error_set(error, BW_ARGUMENT, "no rule set or no exposure given");
    if (!(exposure->wavelength_nm >= 0.0))
        return bw_error_set(error, BW_ARGUMENT, "wavelength %g nm is not a wavelength; wants 180 to 1e6 nm",
                            exposure->wavelength_nm);
    if (!(exposure->exposure_s >= 0.0))
        return bw_error_set(error, BW_ARGUMENT, "exposure time %g s is not a time; wants 1e-13 to 3e4 s",
                            exposure->exposure_s);
    if (!(exposure->subtense_rad >= 0.0 && exposure->subtense_rad <= bw_pi / 2.0 * (1.0 + limits_edge_rounding)))
        return bw_error_set(error, BW_ARGUMENT, "angular subtense %g rad is out of range; wants 0 to pi/2 rad",
                            exposure->subtense_rad);
    if (!(exposure->area_m2 >= 0.0 && exposure->area_m2 < limits_infinity))
        return bw_error_set(error, BW_ARGUMENT, "exposed area %g m2 is not an area; wants 0 (small) or more",
                            exposure->area_m2);
    return BW_OK;
}

/* The times that some row covers at this wavelength. */
static struct span covered_times(const struct query *query) {
    struct span times = {limits_infinity, 0.0, false, false};
    for (size_t i = 0; i < query->table->row_count; i++) {
        const struct limit_row *row = &query->table->rows[i];
        if (query->table->sections[row->section].target != query->target ||
            !bw_limits_in_span(&row->wavelength_nm, query->wavelength_nm))
            continue;
        times.low = fmin(times.low, bw_limits_edge_s(query->table, &row->from, query->wavelength_nm, 0.0));
        times.high = fmax(times.high, bw_limits_edge_s(query->table, &row->to, query->wavelength_nm, 0.0));
    }
    return times;
}

static enum bw_status no_row(const struct query *query, struct bw_error *error) {
    char low[LIMITS_NUMBER_SIZE], high[LIMITS_NUMBER_SIZE], value[LIMITS_NUMBER_SIZE];
    double low_nm, high_nm;
    const char *target = query->target == BW_EYE ? "eye" : "skin";
    bw_table_span(query->table, query->target, &low_nm, &high_nm);
    struct span span = {low_nm, high_nm, false, false};
    if (!(low_nm < high_nm))
        return bw_error_set(error, BW_OUT_OF_RANGE, "%s has no rows for the %s", query->table->id, target);
    if (!bw_limits_in_span(&span, query->wavelength_nm))
        return bw_error_set(error, BW_OUT_OF_RANGE, "no row of %s covers %s nm; it covers %s to %s nm",
                            query->table->id, bw_limits_number(value, query->wavelength_nm),
                            bw_limits_number(low, low_nm), bw_limits_number(high, high_nm));
    struct span times = covered_times(query);
    return bw_error_set(error, BW_OUT_OF_RANGE, "no row of %s covers %s s; it covers %s to %s s", query->table->id,
                        bw_limits_number(value, query->time_s), bw_limits_number(low, times.low),
                        bw_limits_number(high, times.high));
}

/* Which of them is lower no processor can guess: chosen without a branch. */
static size_t find_lowest(const struct bw_limit_set *limits) {
    double lowest = limits->limits[0].radiant_exposure_j_m2;
    size_t at = 0;
    for (size_t i = 1; i < limits->count; i++) {
        double value = limits->limits[i].radiant_exposure_j_m2;
        bool keeps = lowest <= value;
        at = keeps ? at : i;
        lowest = keeps ? lowest : value;
    }
    return at;
}

enum bw_status bw_limits(const struct bw_table *table, enum bw_target target, const struct bw_exposure *exposure,
                         struct bw_limit_set *limits, struct bw_working *working, struct bw_error *error) {
    limits->count = limits->governing = 0;
    limits->limits[0].radiant_exposure_j_m2 = limits->limits[0].irradiance_w_m2 = limits_nan;
    enum bw_status status = check_arguments(table, exposure, error);
    if (status != BW_OK)
        return status;
    const struct plan *plan = &table->plan[target];
    struct query query = {.table = table,
                          .target = target,
                          .wavelength_nm = exposure->wavelength_nm,
                          .time_s = exposure->exposure_s,
                          .subtense_mrad = exposure->subtense_rad * 1e3,
                          .area_m2 = exposure->area_m2,
                          .working = working};
    raise_time(&query);
    evaluate_cell(&query, plan, &plan->cells[cell_at(plan, query.wavelength_nm, query.time_s)], limits);
    if (limits->count == 0)
        return no_row(&query, error);
    limits->governing = find_lowest(limits);
    if (working != NULL)
        bw_working_lowest(&query, limits);
    return BW_OK;
}

enum bw_status bw_limits_eye(const struct bw_table *table, const struct bw_exposure *exposure,
                             struct bw_limit_set *limits, struct bw_working *working, struct bw_error *error) {
    return bw_limits(table, BW_EYE, exposure, limits, working, error);
}

enum bw_status bw_limits_skin(const struct bw_table *table, const struct bw_exposure *exposure,
                              struct bw_limit_set *limits, struct bw_working *working, struct bw_error *error) {
    return bw_limits(table, BW_SKIN, exposure, limits, working, error);
}
