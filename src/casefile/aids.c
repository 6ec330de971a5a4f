/* Optical aids: loupes, operating microscopes, binoculars. */
#include "internal.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

static const struct range magnifications = {1., 200.}, objectives_m = {1e-3, 1.};
enum { ITEM_SIZE = 64 };

/* Copies the item up to the next comma, without outer blanks. Returns: what follows the comma, or NULL. */
static const char *take_item(const char *text, char item[ITEM_SIZE]) {
    const char *end = strchr(text, ','), *next = end ? end + 1 : NULL;
    text += strspn(text, " \t");
    size_t length = strcspn(text, ",");
    while (length > 0 && strchr(" \t", text[length - 1]))
        length--;
    snprintf(item, ITEM_SIZE, "%.*s", (int)(length < ITEM_SIZE ? length : ITEM_SIZE - 1), text);
    return next;
}

static bool read_percent(const char *text, double *share) {
    bool right = bw_parse_number(text, share);
    *share *= 1e-2;
    return right && *share >= 0. && *share <= 1.;
}

/* `400-700 90`. Returns: NULL, or what is wrong. */
static const char *read_band(char *item, struct bw_aid_band *band) {
    char *hyphen = strchr(item, '-'), *blank = strpbrk(item, " \t");
    if (!hyphen || !blank || blank < hyphen)
        return "not a range and a share";
    *hyphen = *blank = '\0';
    if (!bw_parse_number(item, &band->low_nm) || !bw_parse_number(hyphen + 1, &band->high_nm))
        return "the wavelengths are not two plain numbers";
    if (!(band->low_nm >= 180. && band->high_nm <= 1e6 && band->low_nm <= band->high_nm))
        return "wavelengths outside 180 to 1e6 nm, or the range runs backwards";
    return read_percent(blank + 1, &band->transmittance) ? NULL : "the share is not a number from 0 to 100";
}

static void read_transmittance(struct reading *reading, const struct section *section, struct bw_aid *aid) {
    const struct bw_ini_entry *entry = value_entry(section, "transmittance_pct", NULL);
    double all;
    if (!entry)
        return;
    if (read_percent(entry->value, &all)) {
        aid->band_count = 1;
        aid->bands[0] = (struct bw_aid_band){180., 1e6, all};
        return;
    }
    for (const char *next = entry->value; next;) {
        char item[ITEM_SIZE], shown[ITEM_SIZE];
        next = take_item(next, item);
        snprintf(shown, sizeof shown, "%s", item);
        const char *wrong = aid->band_count == BW_AID_BANDS_MAX ? "more bands than can be kept (16)"
                                                                : read_band(item, &aid->bands[aid->band_count]);
        if (wrong) {
            fault_key(reading, entry,
                      "`%s`: %s; LOW-HIGH PERCENT would be right, as in 400-700 90, 700-1400 70, or one number for all",
                      shown, wrong);
            return;
        }
        aid->band_count++;
    }
}

static void read_aid(struct reading *reading, const struct section *section, struct bw_aid *aid) {
    snprintf(aid->name, sizeof aid->name, "%s", section->names[0]);
    if (strcmp(aid->name, "none") == 0)
        fault_section(reading, section, "none stands for no aid; another name would be right");
    value_text(reading, section, "title", aid->title, sizeof aid->title);
    if (value_number(reading, section, "magnification", magnifications, &aid->magnification) == ABSENT)
        fault_missing(reading, section, "magnification");
    if (value_number(reading, section, "objective_diameter", objectives_m, &aid->objective_m) == ABSENT)
        fault_missing(reading, section, "objective_diameter");
    read_transmittance(reading, section, aid);
}

void read_aids(struct reading *reading) {
    struct bw_case *the_case = reading->the_case;
    size_t at = 0, count = sections_count(reading, SECTION_AID, NULL, NULL);
    the_case->aids = reading_allocate(reading, count, sizeof *the_case->aids);
    for (struct section *section; the_case->aids && (section = sections_next(reading, &at, SECTION_AID, NULL, NULL));) {
        section->index = the_case->aid_count++;
        section->made = true;
        read_aid(reading, section, &the_case->aids[section->index]);
    }
}
