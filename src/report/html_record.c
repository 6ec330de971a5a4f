/* The working, where the figures come from, who signs. */
#include "html.h"

#include <string.h>

static void labelled(struct bw_text *out, const char *tag, const char *before, const char *text, const char *after) {
    bw_text_add(out, "<%s>%s", tag, before);
    report_xml(out, text);
    bw_text_add(out, "%s</%s>", after, tag);
}

static void step(struct bw_text *out, const struct bw_step *step) {
    struct bw_text line = {0};
    char value[BW_NUMBER_SIZE];
    bw_text_add(&line, "%s = %s%s%s", step->symbol, report_step_value(value, step), step->unit[0] ? " " : "",
                step->unit);
    bw_text_add(out, "<dl class=\"step\">");
    labelled(out, "dt", "", line.data ? line.data : "", "");
    if (!report_step_repeats(step, step->formula))
        labelled(out, "dd", "= ", step->formula, "");
    if (!report_step_repeats(step, step->numbers) && strcmp(step->numbers, step->formula) != 0)
        labelled(out, "dd", "= ", step->numbers, "");
    if (step->note[0])
        labelled(out, "dd", "(", step->note, ")");
    if (step->source[0])
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

static void fold(struct bw_text *out, const char *first, const char *second, const struct bw_working *working,
                 bool used[REPORT_SYMBOLS_MAX]) {
    if (working->count == 0)
        return;
    bw_text_add(out, "<details><summary>");
    report_xml(out, first);
    bw_text_add(out, " ");
    report_xml(out, second);
    bw_text_add(out, "</summary>\n");
    html_steps(out, working);
    bw_text_add(out, "</details>\n");
    report_symbol_mark(working, used);
}

static void legend(struct bw_text *out, const bool used[REPORT_SYMBOLS_MAX]) {
    static const char *const heads[] = {"Symbol", "Stands for"};
    size_t count;
    const struct report_symbol *symbols = report_symbols(&count);
    bw_text_add(out, "<details><summary>What the symbols stand for</summary>\n");
    html_table(out, "", heads, 2);
    for (size_t i = 0; i < count; i++) {
        if (!used[i])
            continue;
        html_row(out, NULL);
        html_cell(out, NULL, "%s", symbols[i].symbol);
        html_cell(out, NULL, "%s", symbols[i].meaning);
        html_row_end(out);
    }
    html_table_end(out);
    html_paragraph(out, "%s", report_legend_words);
    bw_text_add(out, "</details>\n");
}

static bool any_working(const struct bw_result *result) {
    for (size_t i = 0; i < result->distance_count; i++)
        if (result->distances[i].working.count > 0)
            return true;
    return false;
}

void html_working(struct bw_text *out, const struct bw_result *result) {
    bool used[REPORT_SYMBOLS_MAX] = {false};
    if (!any_working(result))
        return;
    html_heading(out, "working", "The working");
    html_paragraph(out,
                   "Each figure with its formula, its numbers and the row it comes from, as the evaluation used it: "
                   "not rounded to the safe side. Unfold before printing to have it on paper.");
    for (size_t i = 0; i < result->distance_count; i++)
        fold(out, report_laser(result, result->distances[i].laser)->name,
             report_handpiece(result, result->distances[i].laser, result->distances[i].handpiece)->name,
             &result->distances[i].working, used);
    fold(out, "Goggles", "", &result->eyewear_working, used);
    for (size_t i = 0; i < result->room_count; i++)
        fold(out, "Room", result->the_case->rooms[result->rooms[i].room].name, &result->rooms[i].working, used);
    for (size_t i = 0; i < result->incident_count; i++)
        fold(out, "incident", result->the_case->incidents[result->incidents[i].incident].name,
             &result->incidents[i].working, used);
    legend(out, used);
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
