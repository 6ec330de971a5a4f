/* Reading lists of wavelength ranges. */
#include "internal.h"

#include <string.h>

void scan_blanks(struct scan *scan) {
    scan->at += strspn(scan->at, " \t");
}

bool scan_at_end(struct scan *scan) {
    scan_blanks(scan);
    return *scan->at == '\0';
}

bool scan_number(struct scan *scan, double *value) {
    char digits[32];
    scan_blanks(scan);
    size_t length = strspn(scan->at, "0123456789.");
    if (length == 0 || length >= sizeof digits)
        return false;
    memcpy(digits, scan->at, length);
    digits[length] = '\0';
    if (!bw_parse_number(digits, value))
        return false;
    scan->at += length;
    return true;
}

const char *scan_range(struct scan *scan, struct bw_rating *rating) {
    if (!scan_number(scan, &rating->low_nm))
        return "no wavelength";
    rating->high_nm = rating->low_nm;
    struct scan ahead = *scan;
    scan_blanks(&ahead);
    if (strncmp(ahead.at, "\xe2\x80", 2) == 0) /* general punctuation in UTF-8: dashes of many lengths */
        return "a dash that is no hyphen";
    if (*ahead.at == '-') {
        ahead.at++;
        if (!scan_number(&ahead, &rating->high_nm))
            return "no wavelength after the hyphen";
        *scan = ahead;
    }
    if (!(rating->low_nm >= 180. && rating->high_nm <= 1e6 && rating->low_nm <= 1e6 && rating->high_nm >= 180.))
        return "wavelength outside 180 to 1000000 nm";
    if (!(rating->low_nm <= rating->high_nm))
        return "the range runs backwards";
    return NULL;
}

/* Copies the item that begins at text, without outer blanks. Returns: where the next one begins; NULL after the last.
 */
static const char *take_item(const char *text, char separator, char item[ITEM_SIZE]) {
    const char *end = strchr(text, separator), *next = end ? end + 1 : NULL;
    size_t length = end ? (size_t)(end - text) : strlen(text), blanks = strspn(text, " \t");
    blanks = blanks < length ? blanks : length;
    text += blanks;
    length -= blanks;
    while (length > 0 && (text[length - 1] == ' ' || text[length - 1] == '\t'))
        length--;
    length = length < ITEM_SIZE ? length : ITEM_SIZE - 1; /* such a long one is wrong all the same */
    memcpy(item, text, length);
    item[length] = '\0';
    return next;
}

enum bw_status read_items(const char *text, char separator, item_reader *reader, const char *right,
                          struct bw_goggles *goggles, struct bw_error *error) {
    size_t count = goggles->rating_count;
    char item[ITEM_SIZE];
    for (const char *next = text; next;) {
        next = take_item(next, separator, item);
        if (count == BW_RATINGS_MAX)
            return bw_error_set(error, BW_INPUT, "more than %d ranges; enter the goggles as two pairs", BW_RATINGS_MAX);
        goggles->ratings[count] = (struct bw_rating){0};
        const char *wrong = reader(item, &goggles->ratings[count]);
        if (wrong)
            return bw_error_set(error, BW_INPUT, "`%s`: %s; %s would be right", item, wrong, right);
        count++;
    }
    goggles->rating_count = count;
    return BW_OK;
}
