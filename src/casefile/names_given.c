/* Values that name something else of the case. */
#include "internal.h"

#include <stdlib.h>
#include <string.h>

/* names: `count` that can be meant, then `others` that can be written as well. */
static enum presence find_name(struct reading *reading, const struct bw_ini_entry *entry, enum section_kind kind,
                               const char *const *names, size_t count, size_t others, size_t *index) {
    const struct section_word *word = schema_section(kind);
    for (size_t i = 0; i < count; i++)
        if (strcmp(names[i], entry->value) == 0) {
            *index = i;
            return GIVEN;
        }
    const char *nearest = bw_nearest_name(entry->value, names, count + others);
    if (reading->lost[kind])
        return WRONG;
    if (nearest)
        fault_key(reading, entry, "%s: there is no such %s; did you mean %s?", entry->value, word->word, nearest);
    else
        fault_key(reading, entry, "%s: there is no such %s; add [%s %s%s], or %s", entry->value, word->word, word->word,
                  word->name_count > 1 ? "LASER " : "", entry->value, others > 0 ? "write none" : "name another");
    return WRONG;
}

enum presence value_name(struct reading *reading, const struct section *section, const char *key,
                         enum section_kind kind, const char *const *names, size_t count, size_t *index) {
    const struct bw_ini_entry *entry = value_entry(section, key, NULL);
    return entry ? find_name(reading, entry, kind, names, count, 0, index) : ABSENT;
}

/* What somebody wears or looks through; `none` stands for nothing, and is ABSENT too. */
static enum presence value_worn(struct reading *reading, const struct section *section, enum section_kind kind,
                                const char **names, size_t count, size_t *index) {
    const struct bw_ini_entry *entry = value_entry(section, schema_section(kind)->word, NULL);
    if (!entry || strcmp(entry->value, "none") == 0)
        return ABSENT;
    names[count] = "none";
    return find_name(reading, entry, kind, names, count, 1, index);
}

enum presence value_eyewear(struct reading *reading, const struct section *section, size_t *index) {
    const struct bw_case *the_case = reading->the_case;
    const char **names = reading_allocate(reading, the_case->eyewear_count + 1, sizeof *names);
    for (size_t i = 0; names && i < the_case->eyewear_count; i++)
        names[i] = the_case->eyewear[i].name;
    enum presence presence =
        names ? value_worn(reading, section, SECTION_EYEWEAR, names, the_case->eyewear_count, index) : WRONG;
    free(names);
    return presence;
}

enum presence value_aid(struct reading *reading, const struct section *section, size_t *index) {
    const struct bw_case *the_case = reading->the_case;
    const char **names = reading_allocate(reading, the_case->aid_count + 1, sizeof *names);
    for (size_t i = 0; names && i < the_case->aid_count; i++)
        names[i] = the_case->aids[i].name;
    enum presence presence =
        names ? value_worn(reading, section, SECTION_AID, names, the_case->aid_count, index) : WRONG;
    free(names);
    return presence;
}
