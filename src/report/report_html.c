/* The whole record: one self-contained page, in the order in which an LSO reads it. */
#include "html.h"

void html_top(struct bw_text *out, const struct bw_result *result, const struct bw_provenance *provenance) {
    struct bw_text verdict = {0};
    report_verdict(&verdict, result);
    bw_text_add(out, "<h1>");
    report_xml(out, result->the_case->title[0] ? result->the_case->title : "Laser hazard assessment");
    bw_text_add(out, "</h1>\n<p class=\"meta\">Laser hazard assessment for the laser safety officer. Judged by ");
    report_xml(out, bw_table_title(result->table));
    if (provenance->case_path) {
        bw_text_add(out, ". Case file ");
        report_xml(out, report_base_name(provenance->case_path));
    }
    if (provenance->date) {
        bw_text_add(out, ". ");
        report_xml(out, provenance->date);
    }
    bw_text_add(out, ".</p>\n<div class=\"verdict %s\"><p>", result->needs_action ? "bad" : "good");
    report_xml(out, verdict.data ? verdict.data : "");
    bw_text_add(out,
                "</p>\n<p class=\"small\">%zu danger, %zu action, %zu caution, %zu note. The laser safety officer "
                "decides; this record only computes.</p></div>\n",
                report_count_findings(result, BW_DANGER), report_count_findings(result, BW_ACTION),
                report_count_findings(result, BW_CAUTION), report_count_findings(result, BW_NOTE));
    out->failed = out->failed || verdict.failed;
    bw_text_free(&verdict);
}

void html_findings(struct bw_text *out, const struct bw_result *result) {
    html_heading(out, "findings", "What was found");
    if (result->finding_count == 0)
        html_paragraph(out, "Nothing.");
    bw_text_add(out, "<ul class=\"findings\">\n");
    for (size_t i = 0; i < result->finding_count; i++) {
        const struct bw_finding *finding = &result->findings[i];
        const char *severity = bw_severity_name(finding->severity);
        bw_text_add(out, "<li class=\"%s\"><span class=\"tag\">%s</span><b>", severity, severity);
        report_xml(out, finding->subject);
        bw_text_add(out, "</b><span>");
        report_xml(out, finding->text);
        bw_text_add(out, "</span></li>\n");
    }
    bw_text_add(out, "</ul>\n");
}

void bw_report_html(struct bw_text *out, const struct bw_result *result, const struct bw_provenance *provenance) {
    bw_text_add(out, "<!DOCTYPE html>\n<html lang=\"en\"><head><meta charset=\"utf-8\">\n<meta name=\"viewport\" "
                     "content=\"width=device-width, initial-scale=1\">\n<title>");
    report_xml(out, result->the_case->title[0] ? result->the_case->title : "Laser hazard assessment");
    bw_text_add(out, "</title>\n<style>\n");
    bw_text_add(out, "%s%s", html_style, html_style_print);
    bw_text_add(out, "</style></head><body><main>\n");
    html_top(out, result, provenance);
    html_findings(out, result);
    html_distances(out, result);
    html_comparison(out, result);
    html_eyewear(out, result);
    html_rooms(out, result);
    html_incidents(out, result);
    html_assumptions(out, result);
    html_cautions(out);
    html_inputs_converted(out, result);
    html_inputs_given(out, result);
    html_working(out, result);
    html_sources(out, result, provenance);
    html_signature(out, provenance);
    bw_text_add(out, "</main></body></html>\n");
}
