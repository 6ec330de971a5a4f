/* The plan and the record: well-formed, escaped, self-contained, labels that do not lie on one another. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdlib.h>
#include <string.h>
#include <cmocka.h>
#include <math.h>

#include <beamward/report.h>

#include "check_xml.h"
#include "clinic.h"

static const struct bw_provenance provenance = {
    .version = "1.2.3", .case_path = "some/where/clinic.ini", .case_sha256 = "00ff00ff"};

static void require_well_formed(const struct bw_text *text) {
    assert_false(text->failed);
    const char *fault = xml_fault(text->data);
    if (fault)
        fail_msg("not well-formed at: %.80s", fault);
}

/* ---- labels -------------------------------------------------------------------------------------- */

struct box {
    double left, top, right, bottom;
};
enum { BOXES_MAX = 200 };

/* The white boxes under the labels, read back from the drawing. */
static size_t label_boxes(const char *svg, struct box boxes[BOXES_MAX]) {
    size_t count = 0;
    for (const char *at = svg; (at = strstr(at, "<rect x=")) != NULL; at++) {
        double x, y, width, height;
        char class[16] = "";
        if (sscanf(at, "<rect x=\"%lf\" y=\"%lf\" width=\"%lf\" height=\"%lf\" class=\"%15[a-z]\"", &x, &y, &width,
                   &height, class) == 5 &&
            strcmp(class, "halo") == 0 && count < BOXES_MAX)
            boxes[count++] = (struct box){x, y, x + width, y + height};
    }
    return count;
}

static bool overlap(struct box a, struct box b) {
    const double rounding = 0.15; /* of the printed decimals */
    return a.left + rounding < b.right && b.left + rounding < a.right && a.top + rounding < b.bottom &&
           b.top + rounding < a.bottom;
}

#define CROWD                                                                                                          \
    "[person two nurse]\nat_m = 2.7 1.25\n[person two trainee]\nat_m = 2.75 1.2\n[person two owner]\nat_m = 2.8 1.3\n" \
    "[person two visitor]\nat_m = 2.65 1.3\n[person two a-person-with-a-very-long-name-indeed]\nat_m = 5.1 4.0\n"      \
    "[surface two trolley]\nfrom_m = 2.4 1.1\nto_m = 2.9 1.1\nmaterial = mirror\n"
#define NARROW_ROOM                                                                                                    \
    "[room two]\noutline_m = 0 0, 12 0, 12 1.2, 0 1.2\nmaterial = painted-wall\ngrid_mm = 100\nbounces = 0\n"          \
    "[opening two door]\nfrom_m = 0 0.2\nto_m = 0 1.0\nkind = gap\ncover = none\n"                                     \
    "[treatment-area two couch]\noutline_m = 5 0.3, 6 0.3, 6 0.9, 5 0.9\naim_deg = 80 .. 100\n[person two "            \
    "nurse]\nat_m = 5.5 0.6\n"
#define TALL_ROOM                                                                                                      \
    "[room two]\noutline_m = 0 0, 2 0, 2 9, 1 9, 1 4, 0 4\nmaterial = painted-wall\ngrid_mm = 100\nbounces = 1\n"      \
    "[opening two window]\nfrom_m = 1 9\nto_m = 2 9\nkind = window\ncover = none\n"                                    \
    "[treatment-area two couch]\noutline_m = 0.5 1, 1.5 1, 1.5 2, 0.5 2\naim_deg = 0 .. 20\n[person two nurse]\nat_m " \
    "= 1.5 8\n"

static struct plan_case {
    const char *name, *text;
    size_t least_labels;
} plan_cases[] = {
    {"clinic", CLINIC, 5},
    {"crowd", CLINIC CROWD, 10},
    {"narrow room", CLINIC_CASE CLINIC_LASER NARROW_ROOM CLINIC_DRAWER CLINIC_USE, 3},
    {"tall room that is not convex", CLINIC_CASE CLINIC_LASER TALL_ROOM CLINIC_DRAWER CLINIC_USE, 3},
    {"US units",
     "[case]\ntitle = feet\nrules = icnirp-2013\nunits = us\n" CLINIC_LASER CLINIC_ROOM CLINIC_PERSON CLINIC_DRAWER
         CLINIC_USE,
     5},
};

static void test_plan(void **state) {
    const struct plan_case *c = *state;
    struct clinic clinic = clinic_assess(c->text);
    if (clinic.status != BW_OK)
        fail_msg("%s", clinic.error.text);
    struct bw_text text = {0};
    bw_report_plan_svg(&text, clinic.result, 0, true);
    require_well_formed(&text);
    struct box boxes[BOXES_MAX];
    size_t count = label_boxes(text.data, boxes);
    if (count < c->least_labels)
        fail_msg("%zu labels, at least %zu expected", count, c->least_labels);
    for (size_t i = 0; i < count; i++) {
        assert_true(boxes[i].left >= 0 && boxes[i].right <= 640);
        for (size_t j = 0; j < i; j++)
            if (overlap(boxes[i], boxes[j]))
                fail_msg("labels %zu and %zu overlap", i, j);
    }
    assert_null(strstr(text.data, "nan"));
    assert_null(strstr(text.data, "inf"));
    bw_text_free(&text);
    clinic_free(&clinic);
}

static void test_plan_tells_who(void **state) {
    (void)state;
    struct clinic clinic = clinic_assess(CLINIC);
    struct bw_text text = {0};
    bw_report_plan_svg(&text, clinic.result, 0, true);
    static const char *const parts[] = {
        "operator, OD ",     "mirror", "couch", "door", "window", "5.20 m", "4.10 m", "bearing 0",
        "hazard zone (NHZ)", "1 m<"};
    for (size_t i = 0; i < sizeof parts / sizeof parts[0]; i++)
        if (!strstr(text.data, parts[i]))
            fail_msg("%s is missing", parts[i]);
    bw_text_free(&text);
    clinic_free(&clinic);
}

/* ---- the record ---------------------------------------------------------------------------------- */

static struct title_case {
    const char *name, *title, *want;
} title_cases[] = {
    {"plain", "Clinic 7", "<h1>Clinic 7</h1>"},
    {"markup", "<script>alert(1)</script>", "<h1>&lt;script&gt;alert(1)&lt;/script&gt;</h1>"},
    {"ampersand and quotes", "<&\">'", "<h1>&lt;&amp;&quot;&gt;&#39;</h1>"},
    {"control characters", "a\x01\x02z\x7f", "<h1>a  z </h1>"},
    {"no UTF-8", "a\xFFz", "<h1>a\xEF\xBF\xBDz</h1>"},
    {"turned around", "a\xE2\x80\xAEz", "<h1>a z</h1>"},
    {"accents", "caf\xC3\xA9", "<h1>caf\xC3\xA9</h1>"},
};

static void test_title(void **state) {
    const struct title_case *c = *state;
    struct clinic clinic = clinic_assess(CLINIC);
    snprintf(clinic.the_case->title, sizeof clinic.the_case->title, "%s", c->title);
    struct bw_text text = {0};
    bw_report_html(&text, clinic.result, &provenance);
    require_well_formed(&text);
    if (!strstr(text.data, c->want))
        fail_msg("%s is missing", c->want);
    assert_null(strstr(text.data, "<script"));
    bw_text_free(&text);
    clinic_free(&clinic);
}

static void test_contents(void **state) {
    (void)state;
    static const char *const order[] = {"class=\"verdict bad\"",
                                        "Not acceptable as described",
                                        "id=\"findings\"",
                                        "class=\"danger\"",
                                        "class=\"caution\"",
                                        "id=\"distances\"",
                                        "id=\"goggles\"",
                                        "too weak",
                                        "<svg",
                                        "id=\"assumptions\"",
                                        "id=\"cautions\"",
                                        "IEC TR 60825-8:2006",
                                        "id=\"converted\"",
                                        "id=\"given\"",
                                        "beam_diameter_mm",
                                        "id=\"working\"",
                                        "<details>",
                                        "id=\"sources\"",
                                        "from memory",
                                        "1.2.3",
                                        "clinic.ini",
                                        "00ff00ff",
                                        "Signature",
                                        "Next review by"};
    struct clinic clinic = clinic_assess(CLINIC_CASE CLINIC_LASER CLINIC_ROOM
                                         "[person two operator]\nat_m = 2.6 1.2\n" CLINIC_DRAWER CLINIC_USE);
    struct bw_text text = {0};
    bw_report_html(&text, clinic.result, &provenance);
    require_well_formed(&text);
    const char *at = text.data;
    for (size_t i = 0; i < sizeof order / sizeof order[0]; i++) {
        at = strstr(at, order[i]);
        if (!at)
            fail_msg("%s is missing or too early", order[i]);
    }
    assert_null(strstr(text.data, "some/where")); /* the record names the file, not the folder */
    bw_text_free(&text);
    clinic_free(&clinic);
}

/* Nothing is fetched: the only addresses are names of XML dialects. */
static void test_self_contained(void **state) {
    (void)state;
    static const char *const fetching[] = {"src=", "href=", "@import", "url(http", "<link", "<script", "<iframe"};
    struct clinic clinic = clinic_assess(CLINIC);
    struct bw_text text = {0};
    bw_report_html(&text, clinic.result, &provenance);
    for (size_t i = 0; i < sizeof fetching / sizeof fetching[0]; i++)
        if (strstr(text.data, fetching[i]))
            fail_msg("%s is there", fetching[i]);
    for (const char *at = text.data; (at = strstr(at, "http")) != NULL; at++)
        if (strncmp(at, "http://www.w3.org/2000/svg", 26) != 0)
            fail_msg("an address: %.60s", at);
    bw_text_free(&text);
    clinic_free(&clinic);
}

static void test_same_bytes(void **state) {
    (void)state;
    struct clinic first = clinic_assess(CLINIC), second = clinic_assess(CLINIC);
    struct bw_text one = {0}, two = {0};
    bw_report_html(&one, first.result, &provenance);
    bw_report_html(&two, second.result, &provenance);
    assert_string_equal(one.data, two.data);
    bw_text_free(&one);
    bw_text_free(&two);
    clinic_free(&first);
    clinic_free(&second);
}

static void test_checker(void **state) {
    (void)state;
    static const char *const wrong[] = {"<a>",   "<a></b>",       "</a>",           "<a b=c></a>", "<a b=\"<\"></a>",
                                        "a & b", "<a b=\"c></a>", "<a><b></a></b>", "<a b></a>",   "&nbsp;"};
    for (size_t i = 0; i < sizeof wrong / sizeof wrong[0]; i++)
        if (!xml_fault(wrong[i]))
            fail_msg("takes %s", wrong[i]);
    assert_null(xml_fault("<!DOCTYPE html><a b=\"c\"><style>d>e</style><meta f=\"g\">&lt;<h/></a>"));
}

enum { TESTS_MAX = 40 };
#define ADD_ROWS(rows, function)                                                                                       \
    for (size_t i = 0; i < sizeof rows / sizeof rows[0]; i++)                                                          \
        tests[count++] = (struct CMUnitTest) {                                                                         \
            rows[i].name, function, NULL, NULL, &rows[i]                                                               \
        }

int main(void) {
    struct CMUnitTest tests[TESTS_MAX] = {{0}};
    size_t count = 0;
    ADD_ROWS(plan_cases, test_plan);
    ADD_ROWS(title_cases, test_title);
    const struct CMUnitTest single[] = {cmocka_unit_test(test_plan_tells_who), cmocka_unit_test(test_contents),
                                        cmocka_unit_test(test_self_contained), cmocka_unit_test(test_same_bytes),
                                        cmocka_unit_test(test_checker)};
    for (size_t i = 0; i < sizeof single / sizeof single[0]; i++)
        tests[count++] = single[i];
    return cmocka_run_group_tests_name("report page", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
