/* People: a numbered disc each, black where somebody is not protected. */
#include "plan.h"

#include <stdio.h>

enum { DISC = 10 };

bool plan_is_protected(const struct bw_person_result *person) {
    return !person->needs_eyewear || (person->has_verdict && person->verdict == BW_SUFFICIENT);
}

static void disc(struct plan *plan, struct bw_point at, size_t number, bool is_protected) {
    bw_text_add(&plan->over, "<circle class=\"%s\" cx=\"%.1f\" cy=\"%.1f\" r=\"%d\"/>",
                is_protected ? "badge" : "badge bad", at.x_m, at.y_m, DISC);
    bw_text_add(&plan->over, "<text class=\"%s\" x=\"%.1f\" y=\"%.1f\" text-anchor=\"middle\">%zu</text>\n",
                is_protected ? "on-badge" : "on-bad", at.x_m, at.y_m + 4.7, number);
}

static void label(struct plan *plan, const struct bw_person *person, const struct bw_person_result *found) {
    char name[120], text[120 + REPORT_QUANTITY_SIZE + 8], od[REPORT_QUANTITY_SIZE];
    plan_cut(name, sizeof name, person->name, 16);
    report_density(od, report_person_density(found));
    snprintf(text, sizeof text, "%s, OD %s", name, od);
    if (plan_label(plan, plan_at(plan, person->at), DISC, text))
        return;
    snprintf(text, sizeof text, "OD %s", od);
    plan_label(plan, plan_at(plan, person->at), DISC, text);
}

void plan_people(struct plan *plan) {
    for (size_t i = 0; i < plan->room->person_count; i++) {
        struct bw_point at = plan_at(plan, plan->room->persons[i].at);
        plan_take(plan, at.x_m, at.y_m, DISC + 1, DISC + 1);
        disc(plan, at, i + 1, plan_is_protected(&plan->found->persons[i]));
    }
    for (size_t i = 0; i < plan->room->person_count; i++)
        label(plan, &plan->room->persons[i], &plan->found->persons[i]);
}
