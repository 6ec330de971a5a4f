/* The working, where the figures come from, who signs. */
#include "html.h"

static void labelled(struct bw_text *out, const char *tag, const char *before, const char *text, const char *after) {
    bw_text_add(out, "<%s>%s", tag, before);
    report_xml(out, text);
    bw_text_add(out, "%s</%s>", after, tag);
}

static void step(struct bw_text *out, const struct bw_step *step) {
    struct bw_text line = {0};
    bw_text_add(&line, "%s = %.9g%s%s", step->symbol, step->value, step->unit[0] ? " " : "", step->unit);
    bw_text_add(out, "<dl class=\"step\">");
    labelled(out, "dt", "", line.data ? line.data : "", "");
    if (step->formula && step->formula[0])
        labelled(out, "dd", "= ", step->formula, "");
    if (step->numbers && step->numbers[0])
        labelled(out, "dd", "= ", step->numbers, "");
    if (step->source && step->source[0])
        labelled(out, "dd", "[", step->source, "]");
    bw_text_add(out, "</dl>\n");
    out->failed = out->failed || line.failed;
    bw_text_free(&line);
}

void html_steps(struct bw_text *out, const struct bw_working *working) {
    for (size_t i = 0; i < working->count; i++) {
        if (working->steps[i].heading)
            labelled(out, "h3", "", working->steps[i].formula, "");
        else
            step(out, &working->steps[i]);
    }
}

void html_working(struct bw_text *out, const struct bw_result *result) {
    bool any = false;
    for (size_t i = 0; i < result->distance_count; i++)
        any = any || result->distances[i].working.count > 0;
    if (!any)
        return;
    html_heading(out, "working", "The working");
    html_paragraph(out,
                   "Each figure with its formula, its numbers and the row it comes from, as the evaluation used it: "
                   "not rounded to the safe side. Unfold before printing to have it on paper.");
    for (size_t i = 0; i < result->distance_count; i++) {
        const struct bw_distance_result *distance = &result->distances[i];
        bw_text_add(out, "<details><summary>");
        report_xml(out, report_laser(result, distance->laser)->name);
        bw_text_add(out, " ");
        report_xml(out, report_handpiece(result, distance->laser, distance->handpiece)->name);
        bw_text_add(out, "</summary>\n");
        html_steps(out, &distance->working);
        bw_text_add(out, "</details>\n");
    }
    for (size_t i = 0; i < result->incident_count; i++) {
        bw_text_add(out, "<details><summary>incident ");
        report_xml(out, result->the_case->incidents[result->incidents[i].incident].name);
        bw_text_add(out, "</summary>\n");
        html_steps(out, &result->incidents[i].working);
        bw_text_add(out, "</details>\n");
    }
}

static void pair(struct bw_text *out, const char *name, const char *value) {
    html_row(out, NULL);
    html_cell(out, NULL, "%s", name);
    html_cell(out, NULL, "%s", value && value[0] ? value : "not given");
    html_row_end(out);
}

void html_sources(struct bw_text *out, const struct bw_result *result, const struct bw_provenance *provenance) {
    static const char *const heads[] = {"What", "Which"};
    struct bw_text rows = {0};
    size_t count, from_memory;
    bw_table_counts(result->table, &count, &from_memory);
    bw_text_add(&rows, "%zu printed values, %zu of them from memory", count, from_memory);
    html_heading(out, "sources", "Where this comes from");
    html_table(out, "", heads, 2);
    pair(out, "Rule set", bw_table_id(result->table));
    pair(out, "Title", bw_table_title(result->table));
    pair(out, "Document", bw_table_source(result->table));
    pair(out, "Edition", bw_table_edition(result->table));
    pair(out, "How its values are known", rows.data);
    pair(out, "Program", provenance->version);
    pair(out, "Case file", provenance->case_path ? report_base_name(provenance->case_path) : NULL);
    pair(out, "SHA-256 of the case file", provenance->case_sha256);
    html_table_end(out);
    out->failed = out->failed || rows.failed;
    bw_text_free(&rows);
}

void html_signature(struct bw_text *out, const struct bw_provenance *provenance) {
    static const char *const lines[] = {"Laser safety officer (name)", "Date", "Signature", "Next review by"};
    html_heading(out, "signature", "Read, checked and accepted");
    if (provenance->date)
        html_paragraph(out, "Record made on %s.", provenance->date);
    bw_text_add(out, "<div class=\"sign\">\n");
    for (size_t i = 0; i < sizeof lines / sizeof lines[0]; i++)
        labelled(out, "div", "", lines[i], "");
    bw_text_add(out, "</div>\n");
}
