/* The goggles in the drawer. */
#include "internal.h"

#include <ctype.h>
#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* `2025-03-14`. */
static bool is_date(const char *text) {
    static const int days[] = {31, 29, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31};
    static const char form[] = "0000-00-00";
    if (strlen(text) != strlen(form))
        return false;
    for (size_t i = 0; form[i]; i++)
        if (form[i] == '-' ? text[i] != '-' : !isdigit((unsigned char)text[i]))
            return false;
    long month = strtol(text + 5, NULL, 10), day = strtol(text + 8, NULL, 10);
    return month >= 1 && month <= 12 && day >= 1 && day <= days[month - 1];
}

static void read_ratings(struct reading *reading, const struct section *section, struct bw_goggles *goggles) {
    const struct bw_ini_entry *densities = value_entry(section, "od", NULL);
    const struct bw_ini_entry *marking = value_entry(section, "marking", NULL);
    struct bw_error error = {0};
    if (densities && bw_eyewear_read_densities(densities->value, goggles, &error) != BW_OK)
        fault_key(reading, densities, "%s", error.text);
    error = (struct bw_error){0};
    if (marking && bw_eyewear_read_marking(marking->value, goggles, &error) != BW_OK)
        fault_key(reading, marking, "%s", error.text);
    if (!densities && !marking && !section->lost_key)
        fault_section(reading, section,
                      "has no rating; `od = 800-820 6.2` or `marking = 800-820 D LB6` would be right");
}

static void read_pair(struct reading *reading, const struct section *section, struct bw_goggles *goggles) {
    static const struct range share = {0., 1.};
    snprintf(goggles->name, sizeof goggles->name, "%s", section->names[0]);
    if (strcmp(goggles->name, "none") == 0)
        fault_section(reading, section, "none stands for no eyewear; another name would be right");
    value_text(reading, section, "title", goggles->title, sizeof goggles->title);
    value_text(reading, section, "marking", goggles->marking, sizeof goggles->marking);
    read_ratings(reading, section, goggles);
    value_number(reading, section, "luminous_transmittance", share, &goggles->luminous_transmittance);
    const struct bw_ini_entry *inspected = value_entry(section, "inspected", NULL);
    if (inspected && !is_date(inspected->value))
        fault_key(reading, inspected, "%s: not a day; YYYY-MM-DD would be right, as in 2025-03-14", inspected->value);
    else if (inspected)
        value_text(reading, section, "inspected", goggles->inspected, sizeof goggles->inspected);
}

void read_goggles(struct reading *reading) {
    struct bw_case *the_case = reading->the_case;
    size_t at = 0, count = sections_count(reading, SECTION_EYEWEAR, NULL, NULL);
    the_case->eyewear = reading_allocate(reading, count, sizeof *the_case->eyewear);
    for (struct section *section;
         the_case->eyewear && (section = sections_next(reading, &at, SECTION_EYEWEAR, NULL, NULL));) {
        section->index = the_case->eyewear_count++;
        section->made = true;
        read_pair(reading, section, &the_case->eyewear[section->index]);
    }
}
