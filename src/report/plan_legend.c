/* Around the plan: its size, a scale bar, what the marks mean, who and what they are. */
#include "plan.h"

#include <math.h>
#include <stdio.h>

enum { KEY_COLUMNS = 84, LEFT = 16, SAMPLE = 44 };

static void size_words(const struct plan *plan, double length_m, char out[BW_WORDS_SIZE]) {
    if (plan->result->the_case->us_units)
        snprintf(out, BW_WORDS_SIZE, "%.2f m (%.1f ft)", length_m, length_m / 0.3048);
    else
        snprintf(out, BW_WORDS_SIZE, "%.2f m", length_m);
}

/* Width below the plan, height beside it. */
void plan_dimensions(struct plan *plan) {
    char words[BW_WORDS_SIZE];
    double y = plan->page.bottom + 10, x = plan->field.left - 70;
    if (x < 18)
        x = 18;
    bw_text_add(&plan->over, "<path class=\"measure\" d=\"M%.1f %.1fV%.1fM%.1f %.1fV%.1fM%.1f %.1fH%.1f\"/>\n",
                plan->field.left, y - 5, y + 5, plan->field.right, y - 5, y + 5, plan->field.left, y,
                plan->field.right);
    size_words(plan, plan->high.x_m - plan->low.x_m, words);
    plan_text(&plan->over, (plan->field.left + plan->field.right) / 2, y + 16, "middle", words);
    bw_text_add(&plan->over, "<path class=\"measure\" d=\"M%.1f %.1fH%.1fM%.1f %.1fH%.1fM%.1f %.1fV%.1f\"/>\n", x - 5,
                plan->field.top, x + 5, x - 5, plan->field.bottom, x + 5, x, plan->field.top, plan->field.bottom);
    size_words(plan, plan->high.y_m - plan->low.y_m, words);
    double middle = (plan->field.top + plan->field.bottom) / 2;
    bw_text_add(&plan->over, "<g transform=\"rotate(-90 %.1f %.1f)\">", x - 6, middle);
    plan_text(&plan->over, x - 6, middle, "middle", words);
    bw_text_add(&plan->over, "</g>\n");
    plan->bottom = y + 22;
}

/* A round length that takes 70 to 180 units. */
static double bar_length_m(double scale) {
    static const double steps[] = {0.1, 0.2, 0.5, 1, 2, 5, 10, 20, 50, 100};
    for (size_t i = 0; i < sizeof steps / sizeof steps[0]; i++)
        if (steps[i] * scale >= 70)
            return steps[i];
    return 200;
}

static void scale_bar(struct plan *plan) {
    double length_m = bar_length_m(plan->scale), length = length_m * plan->scale, y = plan->bottom + 20, x = LEFT;
    char words[BW_WORDS_SIZE];
    bw_text_add(&plan->over, "<path class=\"measure\" d=\"M%.1f %.1fV%.1fH%.1fV%.1f\"/>", x, y - 6, y, x + length,
                y - 6);
    bw_text_add(&plan->over, "<rect x=\"%.1f\" y=\"%.1f\" width=\"%.1f\" height=\"4\"/>\n", x, y - 4, length / 2);
    snprintf(words, sizeof words, "%g m", length_m);
    plan_text(&plan->over, x + length + 8, y + 1, "start", words);
    double up = PLAN_WIDTH - 150;
    bw_text_add(&plan->over, "<path class=\"aim-tip\" d=\"M%.1f %.1fl-6 13h12z\"/>", up, y - 11.);
    plan_text(&plan->over, up + 12, y + 1, "start", "up: bearing 0\xC2\xB0");
    plan->bottom = y + 10;
}

/* ---- legend: two columns of samples ------------------------------------------------------------- */

struct legend {
    struct plan *plan;
    int count;
    double top;
};

/* Where the next sample begins. */
static struct bw_point next_entry(struct legend *legend, const char *text) {
    double x = LEFT + (legend->count % 2) * (PLAN_WIDTH / 2 - 6);
    double y = legend->top + (legend->count / 2) * 22.;
    legend->count++;
    plan_text(&legend->plan->over, x + SAMPLE, y + 4.7, "start", text);
    return (struct bw_point){x, y};
}

static void line_entry(struct legend *legend, const char *class, const char *text) {
    struct bw_point at = next_entry(legend, text);
    bw_text_add(&legend->plan->over, "<line class=\"%s\" x1=\"%.1f\" y1=\"%.1f\" x2=\"%.1f\" y2=\"%.1f\"/>\n", class,
                at.x_m, at.y_m, at.x_m + 34, at.y_m);
}

static void zone_entries(struct legend *legend) {
    static const char *const texts[BW_LEVELS] = {"edge of the zone: the eye limit", "OD 1: 10 times the eye limit",
                                                 "OD 3: 1000 times the eye limit", "OD 5: 1e5 times the eye limit"};
    struct bw_point at = next_entry(legend, "hazard zone (NHZ), eye");
    bw_text_add(&legend->plan->over,
                "<rect x=\"%.1f\" y=\"%.1f\" width=\"34\" height=\"15\" fill=\"url(#hatch-%zu)\" class=\"frame\"/>\n",
                at.x_m, at.y_m - 7.5, legend->plan->index);
    for (size_t i = 0; i < BW_LEVELS; i++) {
        if (!plan_has_contour(legend->plan, i))
            continue;
        at = next_entry(legend, texts[i]);
        bw_text_add(&legend->plan->over,
                    "<path class=\"contour\" stroke-width=\"%s\" stroke-dasharray=\"%s\" d=\"M%.1f %.1fh34\"/>\n",
                    i == 0 ? "2.6" : "1.6", plan_contour_dash(i), at.x_m, at.y_m);
    }
}

static void mark_entry(struct legend *legend, bool round, bool bad, const char *text) {
    struct bw_point at = next_entry(legend, text);
    if (round)
        bw_text_add(&legend->plan->over, "<circle class=\"badge%s\" cx=\"%.1f\" cy=\"%.1f\" r=\"9\"/>",
                    bad ? " bad" : "", at.x_m + 17, at.y_m);
    else
        bw_text_add(&legend->plan->over, "<rect class=\"badge%s\" x=\"%.1f\" y=\"%.1f\" width=\"17\" height=\"17\"/>",
                    bad ? " bad" : "", at.x_m + 8.5, at.y_m - 8.5);
    bw_text_add(&legend->plan->over, "<text class=\"%s\" x=\"%.1f\" y=\"%.1f\" text-anchor=\"middle\">%s</text>\n",
                bad ? "on-bad" : "on-badge", at.x_m + 17, at.y_m + 4.7, round ? "1" : "A");
}

static bool has_finish(const struct bw_room *room, enum bw_finish finish) {
    for (size_t i = 0; i < room->surface_count; i++)
        if (room->surfaces[i].material.finish == finish)
            return true;
    return false;
}

static void mark_entries(struct legend *legend) {
    const struct plan *plan = legend->plan;
    bool bad_person = false, good_person = false, bad_opening = false, good_opening = false;
    for (size_t i = 0; i < plan->room->person_count; i++) {
        bool is_protected = plan_is_protected(&plan->found->persons[i]);
        good_person = good_person || is_protected;
        bad_person = bad_person || !is_protected;
    }
    for (size_t i = 0; i < plan->room->opening_count; i++) {
        bad_opening = bad_opening || plan->found->solution.openings[i].leaves;
        good_opening = good_opening || !plan->found->solution.openings[i].leaves;
    }
    if (bad_person)
        mark_entry(legend, true, true, "person not protected");
    if (good_person)
        mark_entry(legend, true, false, "person protected or outside the zone");
    if (bad_opening)
        mark_entry(legend, false, true, "opening: the hazard leaves");
    if (good_opening)
        mark_entry(legend, false, false, "opening: below the eye limit");
}

static void surface_entries(struct legend *legend) {
    static const struct {
        enum bw_finish finish;
        const char *class, *text;
    } entries[] = {{BW_MIRROR, "mirror", "mirror-like surface"},
                   {BW_GLOSS, "gloss", "glossy surface"},
                   {BW_GLASS, "glass", "glass"},
                   {BW_MATT, "matt", "matt surface"}};
    line_entry(legend, "area", "treatment area; arrows: allowed aims");
    for (size_t i = 0; i < sizeof entries / sizeof entries[0]; i++)
        if (has_finish(legend->plan->room, entries[i].finish))
            line_entry(legend, entries[i].class, entries[i].text);
    bool cover = false;
    for (size_t i = 0; i < legend->plan->room->opening_count; i++)
        cover = cover || legend->plan->room->openings[i].cover != BW_COVER_NONE;
    if (cover)
        line_entry(legend, "cover", "cover of an opening");
}

void plan_legend(struct plan *plan) {
    scale_bar(plan);
    struct legend legend = {.plan = plan, .top = plan->bottom + 22};
    zone_entries(&legend);
    mark_entries(&legend);
    surface_entries(&legend);
    plan->bottom = legend.top + ((legend.count + 1) / 2) * 22. - 8;
}

/* ---- key: who and what the numbers and letters are ---------------------------------------------- */

static void key_text(struct plan *plan, const char *mark, const char *text) {
    struct bw_text clean = {0};
    report_clean(&clean, text);
    const char *rest = clean.data ? clean.data : "";
    plan->bottom += 4;
    for (bool first = true; *rest; first = false) {
        const char *line = rest;
        size_t length = text_wrap_line(&rest, KEY_COLUMNS - 4);
        char piece[4 * KEY_COLUMNS + 1];
        snprintf(piece, sizeof piece, "%.*s", (int)length, line);
        plan->bottom += PLAN_LINE;
        if (first)
            plan_text(&plan->over, LEFT, plan->bottom, "start", mark);
        plan_text(&plan->over, LEFT + 24, plan->bottom, "start", piece);
    }
    plan->over.failed = plan->over.failed || clean.failed;
    bw_text_free(&clean);
}

static void key_person(struct plan *plan, size_t index) {
    const struct bw_person *person = &plan->room->persons[index];
    const struct bw_person_result *found = &plan->found->persons[index];
    char mark[24], ratio[REPORT_QUANTITY_SIZE], od[REPORT_QUANTITY_SIZE];
    struct bw_text text = {0};
    snprintf(mark, sizeof mark, "%zu", index + 1);
    bw_text_add(&text, "%s: %s times the eye limit, OD %s needed; ", person->name,
                report_ratio(ratio, found->place.ratio), report_density(od, report_person_density(found)));
    if (!found->has_verdict)
        bw_text_add(&text, "wears no goggles");
    else
        bw_text_add(&text, "wears %s: %s", plan->result->the_case->eyewear[person->eyewear].name,
                    found->verdict == BW_SUFFICIENT     ? "sufficient"
                    : found->verdict == BW_INSUFFICIENT ? "too weak"
                                                        : "no rating");
    key_text(plan, mark, text.data ? text.data : "");
    plan_free_text(plan, &text);
}

static void key_opening(struct plan *plan, size_t index) {
    const struct bw_opening *opening = &plan->room->openings[index];
    const struct bw_opening_result *found = &plan->found->solution.openings[index];
    char mark[8], ratio[REPORT_QUANTITY_SIZE];
    struct bw_text text = {0};
    snprintf(mark, sizeof mark, "%c%s", (char)('A' + index % 26), index >= 26 ? "'" : "");
    bw_text_add(&text, "%s (%s): %s times the eye limit beyond it; needs %s", opening->name,
                report_opening_kind(opening->kind), report_ratio(ratio, found->ratio_beyond), found->needs);
    key_text(plan, mark, text.data ? text.data : "");
    plan_free_text(plan, &text);
}

void plan_key(struct plan *plan) {
    plan->bottom += 6;
    bw_text_add(&plan->over, "<path class=\"measure\" d=\"M%d %.1fH%d\"/>\n", LEFT, plan->bottom + 4,
                PLAN_WIDTH - LEFT);
    for (size_t i = 0; i < plan->room->person_count; i++)
        key_person(plan, i);
    for (size_t i = 0; i < plan->room->opening_count; i++)
        key_opening(plan, i);
    plan->bottom += 14;
}
