/* The whole job on a terminal: the verdict first, then what to do, then the figures. */
#include "internal.h"

void text_case_head(struct bw_text *out, const struct bw_result *result) {
    text_wrap(out, "", result->the_case->title[0] ? result->the_case->title : "(case without a title)");
    text_wrapf(out, "", "Judged by %s: %s", bw_table_id(result->table), bw_table_title(result->table));
}

static const char *label(enum bw_severity severity) {
    switch (severity) {
    case BW_DANGER:
        return "DANGER   ";
    case BW_ACTION:
        return "ACTION   ";
    case BW_CAUTION:
        return "caution  ";
    case BW_NOTE:
        return "note     ";
    }
    return "         ";
}

void text_findings(struct bw_text *out, const struct bw_result *result, enum bw_severity from, enum bw_severity to) {
    for (size_t i = 0; i < result->finding_count; i++) {
        const struct bw_finding *finding = &result->findings[i];
        if (finding->severity < from || finding->severity > to)
            continue;
        bw_text_add(out, "\n");
        text_wrap(out, label(finding->severity), finding->subject);
        text_wrap(out, "         ", finding->text);
    }
}

void text_distance_table(struct bw_text *out, const struct bw_result *result) {
    struct text_table table;
    bool us = result->the_case->us_units;
    text_heading(out, "How far the hazard reaches");
    table_begin(&table, "lrrrrr");
    static const char *const names[] = {"handpiece", "exposure", "eye (NOHD)", "skin", "diffuse", "OD at exit"};
    for (size_t i = 0; i < sizeof names / sizeof names[0]; i++)
        table_cell(&table, "%s", names[i]);
    for (size_t i = 0; i < result->distance_count; i++) {
        const struct bw_distance_result *distance = &result->distances[i];
        char words[REPORT_QUANTITY_SIZE];
        table_cell(&table, "%s %s", report_laser(result, distance->laser)->name,
                   report_handpiece(result, distance->laser, distance->handpiece)->name);
        table_cell(&table, "%s s", report_plain(words, distance->glance.exposure_s));
        table_quantity(&table, report_reach(words, &distance->nohd, us));
        table_quantity(&table, report_reach(words, &distance->skin, us));
        table_quantity(&table, report_reach(words, &distance->diffuse, us));
        table_cell(&table, "%s", report_density(words, report_largest_density(result, distance)));
    }
    table_print(&table, out, 2);
}

void bw_report_summary_text(struct bw_text *out, const struct bw_result *result) {
    struct bw_text verdict = {0};
    text_case_head(out, result);
    bw_text_add(out, "\n");
    report_verdict(&verdict, result);
    text_wrap(out, "", verdict.data ? verdict.data : "");
    out->failed = out->failed || verdict.failed;
    bw_text_free(&verdict);
    text_findings(out, result, BW_DANGER, BW_ACTION);
    text_distance_table(out, result);
    text_comparison(out, result);
    text_goggles_matrix(out, result);
    text_rooms(out, result, false);
    text_incidents(out, result);
    text_findings(out, result, BW_CAUTION, BW_NOTE);
}
