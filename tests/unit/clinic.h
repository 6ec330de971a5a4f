/* A small clinic as text, for the tests of assess and report. */
#ifndef BEAMWARD_TESTS_CLINIC_H
#define BEAMWARD_TESTS_CLINIC_H

#include <beamward/assess.h>

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#define CLINIC_CASE "[case]\ntitle = Treatment room 2\nrules = iec-60825-1-2014\n"
#define CLINIC_LASER                                                                                                   \
    "[laser trident]\ntitle = three wavelengths\nlabelled_class = 4\n"                                                 \
    "[emission trident deep]\nwavelength_nm = 810\naverage_power_w = 8\n"                                              \
    "[emission trident pulsed]\nwavelength_nm = 905\npeak_power_w = 75\npulse_duration_s = 150e-9\n"                   \
    "repetition_rate_hz = 10000\n"                                                                                     \
    "[emission trident aiming]\nwavelength_nm = 650\naverage_power_w = 0.002\n"                                        \
    "[handpiece trident spot-30]\nbeam_diameter_mm = 30\ndivergence_mrad = 200\ndiameter_definition = d86\n"
#define CLINIC_ROOM                                                                                                    \
    "[room two]\noutline_m = 0 0, 5.2 0, 5.2 4.1, 0 4.1\nmaterial = painted-wall\ngrid_mm = 100\nbounces = 1\n"        \
    "[surface two mirror]\nfrom_m = 0 1\nto_m = 0 2.2\nmaterial = mirror\n"                                            \
    "[opening two door]\nfrom_m = 2 0\nto_m = 2.9 0\nkind = door\ncover = opaque\n"                                    \
    "[opening two window]\nfrom_m = 5.2 1\nto_m = 5.2 2\nkind = window\ncover = none\n"                                \
    "[treatment-area two couch]\noutline_m = 2 1.6, 3.2 1.6, 3.2 2.4, 2 2.4\naim_deg = 0 .. 360\n"
#define CLINIC_PERSON "[person two operator]\nat_m = 2.6 1.2\neyewear = wraps\n"
#define CLINIC_DRAWER                                                                                                  \
    "[eyewear wraps]\nod = 640-660 3, 800-820 6.2, 890-1070 5.5\n"                                                     \
    "[eyewear weak]\nod = 640-660 3, 800-820 2, 890-1070 5.5\n"
#define CLINIC_USE "[use two trident spot-30]\n"
#define CLINIC     CLINIC_CASE CLINIC_LASER CLINIC_ROOM CLINIC_PERSON CLINIC_DRAWER CLINIC_USE

/* Reads a case from text; a fault stops the test. */
static inline struct bw_case *clinic_read(const char *text) {
    struct bw_ini ini = {0};
    struct bw_faults faults = {0};
    struct bw_error error = {0};
    struct bw_case *the_case = NULL;
    if (bw_ini_read_bytes(text, strlen(text), &ini, &faults, &error) == BW_OK)
        bw_case_from_ini(&ini, &the_case, &faults, &error);
    for (size_t i = 0; i < faults.count; i++)
        fprintf(stderr, "clinic:%d: [%s] %s: %s\n", faults.items[i].line, faults.items[i].section, faults.items[i].key,
                faults.items[i].text);
    bw_faults_free(&faults);
    bw_ini_free(&ini);
    if (!the_case) {
        fprintf(stderr, "clinic: %s\n", error.text);
        abort();
    }
    return the_case;
}

/* The whole job. Freed by clinic_free. */
struct clinic {
    struct bw_case *the_case;
    struct bw_result *result;
    struct bw_error error;
    enum bw_status status;
};
static inline struct clinic clinic_assess_with(const char *text, const char *rules, struct bw_assess_options options) {
    struct clinic clinic = {.the_case = clinic_read(text)};
    const struct bw_table *table = bw_tables_find(rules ? rules : clinic.the_case->rules);
    clinic.status = bw_assess(clinic.the_case, table, &options, &clinic.result, &clinic.error);
    return clinic;
}
static inline struct clinic clinic_assess(const char *text) {
    return clinic_assess_with(text, NULL, (struct bw_assess_options){.parts = BW_PART_ALL, .working = true});
}
static inline void clinic_free(struct clinic *clinic) {
    bw_result_free(clinic->result);
    bw_case_free(clinic->the_case);
}

#endif
