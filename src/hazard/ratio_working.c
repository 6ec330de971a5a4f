/* How a hazard ratio comes about, term by term, and how the allowance was shared. */
#include "internal.h"

#include <math.h>

typedef char number[BW_NUMBER_SIZE];

static const char *text(number out, double value) {
    return bw_working_number(out, value);
}

/* The aperture in metres: the printed one, or what stands for all windows of the train. */
static void write_aperture(const struct bw_train_limit *limit, struct bw_working *working) {
    number mm;
    bool printed = !(limit->aperture_m < limit->limit.aperture_m) && !(limit->aperture_m > limit->limit.aperture_m);
    text(mm, 1e3 * limit->aperture_m);
    bw_working_step(working, "D", limit->aperture_m, "m", NULL, "D / 1000", "%s / 1000", mm);
    bw_working_note(working, "%s",
                    printed ? "the limiting aperture, from mm" : "from mm; smaller than the printed one, as above");
}

static bool same(double a, double b) {
    return !(a < b) && !(a > b);
}

/* Is what falls into the aperture what the term before it says? Then its steps need not stand twice. */
static bool same_as_before(const struct bw_hazard *hazard, size_t term, double distance_m) {
    if (term == 0 || hazard->shaped)
        return false;
    const struct bw_term *before = &hazard->terms[term - 1], *here = &hazard->terms[term];
    const struct bw_beam *first = &hazard->output->beams[before->emission];
    const struct bw_beam *second = &hazard->output->beams[here->emission];
    double aperture_m = here->limit.aperture_m;
    return first->profile == second->profile && same(before->limit.aperture_m, aperture_m) &&
           same(bw_beam_diameter_m(first, distance_m), bw_beam_diameter_m(second, distance_m)) &&
           same(bw_beam_irradiance_per_w(first, distance_m, aperture_m),
                bw_beam_irradiance_per_w(second, distance_m, aperture_m));
}

/* The subtense that the limit is taken for. In numbers where it is that of one source, seen by the naked eye. */
static void write_angle(const struct bw_hazard *hazard, const struct bw_term *of, double distance_m, double seen_rad,
                        struct bw_working *working) {
    const struct bw_beam *beam = &hazard->output->beams[of->emission];
    double away_m = fmax(distance_m + beam->source_behind_m, nearest_view_m);
    double source_rad = 2. * atan(beam->source_m / 2. / away_m);
    number source, away;
    if (beam->cluster.count <= 1 && away_m < HUGE_VAL && fabs(source_rad - seen_rad) <= 1e-12 * seen_rad)
        bw_working_step(working, "alpha", 1e3 * seen_rad, "mrad", NULL, "1000 * 2 atan(s / 2 / r)",
                        "1000 * 2 * atan(%s / 2 / %s)", text(source, beam->source_m), text(away, away_m));
    else
        bw_working_step(working, "alpha", 1e3 * seen_rad, "mrad", NULL, NULL, NULL);
    bw_working_note(working, seen_rad > point_rad
                                 ? "of what the eye sees from here"
                                 : "of what the eye sees from here: a point, which counts as alpha_min");
    if (away_m > distance_m)
        bw_working_note(working, "r from the apparent source, no nearer than an eye can focus");
}

/* The limit for the subtense of what is seen, with all its steps. Returns: whether it is the one that was used. */
static bool write_limit_seen(const struct bw_hazard *hazard, size_t term, const struct bw_seen *seen,
                             struct bw_working *working) {
    const struct bw_term *of = &hazard->terms[term];
    struct bw_train_limit_set set;
    double counted_rad = fmin(fmax(seen->subtense_rad, point_rad), bw_pi / 2.);
    number alpha;
    bw_working_heading(working, "Limits for a source of %s mrad", text(alpha, 1e3 * counted_rad));
    if (bw_hazard_limits_at_eye(hazard, of->emission, counted_rad, &set, working, NULL) != BW_OK)
        return false;
    for (size_t i = 0; i < set.count; i++)
        if (set.limits[i].limit.effect == of->limit.limit.effect)
            return same(set.limits[i].irradiance_w_m2, seen->limit.irradiance_w_m2);
    return false;
}

/* A beam with an apparent source or several emitters: the limit is that of what is seen from this distance. */
static double shaped_working(const struct bw_hazard *hazard, size_t term, double distance_m,
                             struct bw_working *working) {
    const struct bw_term *of = &hazard->terms[term];
    const struct bw_emission *emission = &hazard->output->emissions[of->emission];
    const struct bw_beam *beam = &hazard->output->beams[of->emission];
    struct bw_seen seen;
    number p, g, e;
    if (bw_hazard_seen(hazard, term, distance_m, &seen, NULL) != BW_OK)
        return nan("");
    double per_w = bw_beam_irradiance_per_w(beam, distance_m, of->limit.aperture_m);
    if (working == NULL)
        return seen.ratio;
    write_angle(hazard, of, distance_m, seen.subtense_rad, working);
    bool at_point = same(seen.limit.irradiance_w_m2, of->limit.irradiance_w_m2);
    bool known = at_point || write_limit_seen(hazard, term, &seen, working);
    bw_beam_diameter_working(beam, distance_m, working);
    write_aperture(&of->limit, working);
    double used = seen.ratio * seen.limit.irradiance_w_m2 / emission->average_power_w;
    if (fabs(used - per_w) <= 1e-12 * per_w) {
        bw_beam_irradiance_working(beam, distance_m, of->limit.aperture_m, working);
    } else {
        bw_working_step(working, "g", used, "1/m2", NULL, NULL, NULL);
        bw_working_note(working,
                        "mean irradiance per watt over the aperture, of %zu of %zu emitters that are seen "
                        "together",
                        seen.emitters, beam->cluster.count > 1 ? beam->cluster.count : (size_t)1);
    }
    if (!known) {
        bw_working_step(working, "E_limit", seen.limit.irradiance_w_m2, "W/m2", NULL, NULL, NULL);
        bw_working_note(working, "the lowest limit of the subtenses that the group may have");
    }
    bw_working_step(working, "ratio", seen.ratio, "", NULL, "P g / E_limit", "%s * %s / %s",
                    text(p, emission->average_power_w), text(g, used), text(e, seen.limit.irradiance_w_m2));
    bw_working_note(working, "%s %g nm, %s", emission->name, emission->wavelength_nm,
                    bw_effect_name(of->limit.limit.effect));
    return seen.ratio;
}

double bw_hazard_term_working(const struct bw_hazard *hazard, size_t term, double distance_m,
                              struct bw_working *working) {
    const struct bw_term *the_term = &hazard->terms[term];
    const struct bw_emission *emission = &hazard->output->emissions[the_term->emission];
    const struct bw_beam *beam = &hazard->output->beams[the_term->emission];
    if (hazard->shaped)
        return shaped_working(hazard, term, distance_m, working);
    double per_w = bw_beam_irradiance_per_w(beam, distance_m, the_term->limit.aperture_m);
    double ratio = emission->average_power_w * per_w / the_term->limit.irradiance_w_m2;
    number p, g, e;
    if (working == NULL)
        return ratio;
    bw_beam_diameter_working(beam, distance_m, working);
    write_aperture(&the_term->limit, working);
    bw_beam_irradiance_working(beam, distance_m, the_term->limit.aperture_m, working);
    bw_working_step(working, "ratio", ratio, "", NULL, "P g / E_limit", "%s * %s / %s",
                    text(p, emission->average_power_w), text(g, per_w), text(e, the_term->limit.irradiance_w_m2));
    bw_working_note(working, "%s %g nm, %s", emission->name, emission->wavelength_nm,
                    bw_effect_name(the_term->limit.limit.effect));
    return ratio;
}

/* The row of the largest sum, of one emission or of all. */
static size_t largest_row(const struct bw_hazard *hazard, const double ratios[BW_TERMS_MAX], size_t only) {
    size_t row = 0;
    double largest = -1.;
    for (size_t i = 0; i < hazard->term_count; i++) {
        double sum = 0.;
        if (only != BW_EMISSIONS_MAX && hazard->terms[i].emission != only)
            continue;
        for (size_t j = 0; j < hazard->term_count; j++)
            if (hazard->adds[i][j] && (only == BW_EMISSIONS_MAX || hazard->terms[j].emission == only))
                sum += ratios[j];
        if (!(sum <= largest)) {
            largest = sum;
            row = i;
        }
    }
    return row;
}

double bw_hazard_sum_working(const struct bw_hazard *hazard, const double ratios[BW_TERMS_MAX], size_t only,
                             struct bw_working *working) {
    double sum = bw_hazard_largest_sum(hazard, ratios, only);
    struct bw_text numbers = {0};
    size_t row = largest_row(hazard, ratios, only), count = 0;
    number value;
    if (working == NULL)
        return sum;
    for (size_t j = 0; j < hazard->term_count; j++)
        if (hazard->adds[row][j] && (only == BW_EMISSIONS_MAX || hazard->terms[j].emission == only))
            bw_text_add(&numbers, "%s%s", count++ > 0 ? " + " : "", text(value, ratios[j]));
    bw_working_step(working, "sum", sum, "", NULL, count > 1 ? "sum of ratio" : "ratio", "%s",
                    numbers.data ? numbers.data : "");
    bool alone = only != BW_EMISSIONS_MAX && hazard->output->count > 1;
    bw_working_note(working, "%s%s", alone ? hazard->output->emissions[only].name : "",
                    alone ? " alone" : "the largest sum of ratios that add (same tissue, same effect)");
    working->failed = working->failed || numbers.failed;
    bw_text_free(&numbers);
    return sum;
}

/* Given: hazard, distance_m.  Returned: working (may be NULL), of each term the width of the beam, what falls into the
 * aperture and the ratio; and the sum. */
void bw_hazard_ratio_working(const struct bw_hazard *hazard, double distance_m, struct bw_working *working) {
    bw_hazard_alone_working(hazard, BW_EMISSIONS_MAX, distance_m, working);
}

double bw_hazard_alone_working(const struct bw_hazard *hazard, size_t only, double distance_m,
                               struct bw_working *working) {
    double ratios[BW_TERMS_MAX];
    bw_hazard_term_ratios(hazard, distance_m, ratios);
    for (size_t i = 0; i < hazard->term_count && working != NULL; i++) {
        number p, g, e;
        const struct bw_term *term = &hazard->terms[i];
        const struct bw_emission *emission = &hazard->output->emissions[term->emission];
        if (only != BW_EMISSIONS_MAX && only != term->emission)
            continue;
        if (only != BW_EMISSIONS_MAX || !same_as_before(hazard, i, distance_m)) {
            bw_hazard_term_working(hazard, i, distance_m, working);
            continue;
        }
        double per_w =
            bw_beam_irradiance_per_w(&hazard->output->beams[term->emission], distance_m, term->limit.aperture_m);
        bw_working_step(working, "ratio", ratios[i], "", NULL, "P g / E_limit", "%s * %s / %s",
                        text(p, emission->average_power_w), text(g, per_w), text(e, term->limit.irradiance_w_m2));
        bw_working_note(working, "%s %g nm, %s", emission->name, emission->wavelength_nm,
                        bw_effect_name(term->limit.limit.effect));
    }
    return bw_hazard_sum_working(hazard, ratios, only, working);
}
