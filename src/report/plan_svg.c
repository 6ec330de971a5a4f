/* The plan of one room: assembles its parts, lowest first. */
#include "plan.h"

#include <stdio.h>
#include <stdlib.h>

/* Neutral and readable in black and white: every difference is one of line, shape or filling. */
static const char style[] =
    "<style>.plan text{font:13px \"DejaVu Sans\",Verdana,Arial,sans-serif;fill:#111}"
    ".plan .title{font-size:17px;font-weight:bold}"
    ".plan .wall{fill:none;stroke:#222;stroke-width:7;stroke-linejoin:miter}"
    ".plan .hole{stroke:#fff;stroke-width:9}.plan .jamb{stroke:#222;stroke-width:2}"
    ".plan .pane{stroke:#222;stroke-width:1}.plan .leaf{stroke:#222;stroke-width:1;stroke-dasharray:5 3}"
    ".plan .cover{stroke:#222;stroke-width:4}.plan .thin{stroke-dasharray:6 2}"
    ".plan .surface{stroke:#fff;stroke-width:8}.plan .matt{stroke:#666;stroke-width:5}"
    ".plan .mirror{stroke:#111;stroke-width:6;stroke-dasharray:2 2}"
    ".plan .gloss{stroke:#111;stroke-width:5;stroke-dasharray:10 2}.plan .glass{stroke:#111;stroke-width:1.5}"
    ".plan .area{fill:#fff;fill-opacity:.6;stroke:#111;stroke-width:1.4;stroke-dasharray:6 3}"
    ".plan .aim{fill:none;stroke:#111;stroke-width:1.6}.plan .aim-tip{fill:#111}"
    ".plan .escape{stroke:#111;stroke-width:4}"
    ".plan .zone{stroke:none}.plan .contour{fill:none;stroke:#111}"
    ".plan .badge{fill:#fff;stroke:#111;stroke-width:1.5}.plan .bad{fill:#111}"
    ".plan text.on-bad{fill:#fff;font-weight:bold}.plan text.on-badge{fill:#111;font-weight:bold}"
    ".plan .halo{fill:#fff;fill-opacity:.88}.plan .leader{stroke:#111;stroke-width:.8}"
    ".plan .measure{fill:none;stroke:#111;stroke-width:1}.plan .frame{stroke:#111;stroke-width:1}</style>\n";

static void title(struct plan *plan) {
    char name[400];
    struct bw_text text = {0};
    const char *shown = plan->room->title[0] ? plan->room->title : plan->room->name;
    bw_text_add(&text, "Room %s%s%s", plan->room->name, plan->room->title[0] ? ": " : "",
                plan->room->title[0] ? shown : "");
    plan_cut(name, sizeof name, text.data ? text.data : "", 58);
    plan_free_text(plan, &text);
    bw_text_add(&plan->over, "<text class=\"title\" x=\"16\" y=\"26\">");
    report_xml(&plan->over, name);
    bw_text_add(&plan->over, "</text>\n");
    bw_text_add(&text, "Used here: ");
    for (size_t i = 0; i < plan->found->source_count; i++) {
        const struct bw_distance_result *distance = &plan->result->distances[plan->found->sources[i]];
        bw_text_add(&text, "%s%s %s", i > 0 ? ", " : "", report_laser(plan->result, distance->laser)->name,
                    report_handpiece(plan->result, distance->laser, distance->handpiece)->name);
    }
    plan_cut(name, sizeof name, text.data ? text.data : "", 76);
    plan_text(&plan->over, 16, 48, "start", name);
    plan_free_text(plan, &text);
}

static void open_svg(struct bw_text *out, const struct plan *plan, bool document) {
    if (document)
        bw_text_add(out, "<?xml version=\"1.0\" encoding=\"UTF-8\"?>\n");
    bw_text_add(out, "<svg xmlns=\"http://www.w3.org/2000/svg\" class=\"plan\" role=\"img\" viewBox=\"0 0 %d %.0f\"",
                PLAN_WIDTH, plan->bottom);
    if (document)
        bw_text_add(out, " width=\"%d\" height=\"%.0f\"", PLAN_WIDTH, plan->bottom);
    bw_text_add(out, ">\n<title>Plan of room ");
    report_xml(out, plan->room->name);
    bw_text_add(out, "</title>\n%s<defs>\n<clipPath id=\"room-%zu\"><path d=\"", style, plan->index);
    plan_path(out, plan, &plan->room->outline);
    bw_text_add(out,
                "\"/></clipPath>\n<pattern id=\"hatch-%zu\" width=\"9\" height=\"9\" "
                "patternUnits=\"userSpaceOnUse\"><path d=\"M0 9L9 0M-1 1L1 -1M8 10L10 8\" stroke=\"#999\" "
                "stroke-width=\"1\" fill=\"none\"/></pattern>\n</defs>\n",
                plan->index);
    bw_text_add(out, "<rect width=\"%d\" height=\"%.0f\" fill=\"#fff\"/>\n", PLAN_WIDTH, plan->bottom);
}

void bw_report_plan_svg(struct bw_text *out, const struct bw_result *result, size_t room, bool document) {
    struct plan plan = {.result = result,
                        .found = &result->rooms[room],
                        .index = room,
                        .room = &result->the_case->rooms[result->rooms[room].room]};
    plan_frame(&plan);
    title(&plan);
    plan_zone(&plan);
    plan_areas(&plan);
    plan_walls(&plan);
    plan_openings(&plan);
    plan_surfaces(&plan);
    plan_people(&plan);
    plan_place_labels(&plan);
    plan_contours(&plan);
    plan_dimensions(&plan);
    plan_legend(&plan);
    plan_key(&plan);
    open_svg(out, &plan, document);
    bw_text_add_bytes(out, plan.body.data ? plan.body.data : "", plan.body.length);
    bw_text_add_bytes(out, plan.over.data ? plan.over.data : "", plan.over.length);
    bw_text_add(out, "</svg>\n");
    out->failed = out->failed || plan.body.failed || plan.over.failed;
    bw_text_free(&plan.body);
    bw_text_free(&plan.over);
    free(plan.boxes);
    free(plan.lines);
}
