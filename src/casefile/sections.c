/* Finds the sections of a case file and checks their names and keys. */
#include "internal.h"

#include <limits.h>
#include <stdlib.h>
#include <string.h>

void *reading_allocate(struct reading *reading, size_t count, size_t size) {
    void *memory = calloc(count > 0 ? count : 1, size);
    if (!memory)
        reading->no_memory = true;
    return memory;
}

static bool same(const char *a, const char *b) {
    return strcmp(a, b) == 0;
}

/* ---- names ---------------------------------------------------------------------------------- */

static bool is_plain_name(const char *name) {
    return name[strspn(name, "abcdefghijklmnopqrstuvwxyz0123456789-")] == '\0' && name[0] != '-';
}

static void check_name(struct reading *reading, const struct section *section, const char *name) {
    char proposed[BW_NAME_SIZE];
    if (is_plain_name(name))
        return;
    size_t i = 0;
    for (; name[i]; i++)
        proposed[i] = name[i] == '_' || name[i] == '.' ? '-' : name[i];
    proposed[i] = '\0';
    if (is_plain_name(proposed))
        fault_section(reading, section, "%s: names have a-z, 0-9 and hyphen; %s would be right", name, proposed);
    else
        fault_section(reading, section, "%s: names have a-z, 0-9 and hyphen, and begin with a letter or digit", name);
}

/* Takes the next word of a section's head. Returns: where the rest begins. */
static const char *take_word(const char *from, char word[BW_NAME_SIZE], bool *fits) {
    size_t length = strcspn(from, " ");
    *fits = length < BW_NAME_SIZE;
    size_t kept = *fits ? length : BW_NAME_SIZE - 1;
    memcpy(word, from, kept);
    word[kept] = '\0';
    return from[length] == ' ' ? from + length + 1 : from + length;
}

static bool find_kind(const char *word, enum section_kind *kind) {
    for (unsigned i = 0; i < SECTION_KINDS; i++)
        if (same(schema_section((enum section_kind)i)->word, word)) {
            *kind = (enum section_kind)i;
            return true;
        }
    return false;
}

/* A kind that is mistyped is taken for the nearest, so that its names are known and its keys are checked. */
static bool guess_kind(struct reading *reading, const struct section *section, const char *word,
                       enum section_kind *kind) {
    const char *words[SECTION_KINDS];
    for (unsigned i = 0; i < SECTION_KINDS; i++)
        words[i] = schema_section((enum section_kind)i)->word;
    const char *nearest = bw_nearest_name(word, words, SECTION_KINDS);
    if (nearest && find_kind(nearest, kind)) {
        fault_section(reading, section, "unknown section; did you mean [%s%s%s]?", nearest,
                      schema_section(*kind)->name_count > 0 ? " " : "", schema_section(*kind)->names);
        return true;
    }
    struct bw_text known = {0};
    schema_add_words(&known, words, SECTION_KINDS, " and ");
    fault_section(reading, section, "unknown section; known are %s", known.data ? known.data : "");
    reading->no_memory = reading->no_memory || known.failed;
    bw_text_free(&known);
    return false;
}

static void wrong_count(struct reading *reading, const struct section *section, size_t count) {
    const struct section_word *word = schema_section(section->kind);
    if (word->name_count == 0)
        fault_section(reading, section, "has a name too many; %s would be right", word->example);
    else
        fault_section(reading, section, "has %zu name%s; [%s %s] would be right, as in %s", count,
                      count == 1 ? "" : "s", word->word, word->names, word->example);
}

/* Reads kind and names from the head. Returns: false if the section cannot be used; the fault is there then. */
static bool read_head(struct reading *reading, struct section *section) {
    char word[BW_NAME_SIZE];
    bool fits = true;
    size_t count = 0;
    const char *rest = take_word(section->head->section, word, &fits);
    if (!find_kind(word, &section->kind) && !guess_kind(reading, section, word, &section->kind))
        return false;
    for (; *rest && fits; count++)
        rest = take_word(rest, count < SECTION_NAMES_MAX ? section->names[count] : word, &fits);
    if (!fits)
        fault_section(reading, section, "has a name of more than %d characters; a shorter one would be right",
                      BW_NAME_SIZE - 1);
    else if (count != schema_section(section->kind)->name_count)
        wrong_count(reading, section, count);
    else
        return true;
    reading->lost[section->kind] = true;
    return false;
}

/* ---- keys ----------------------------------------------------------------------------------- */

static void check_key(struct reading *reading, struct section *section, const struct bw_ini_entry *entry) {
    const struct unit_word *unit;
    const struct key_word *word = schema_key(section->kind, entry->key, &unit);
    if (!word) {
        section->lost_key = true;
        struct bw_text text = {0};
        schema_explain_key(&text, section->kind, entry->key);
        fault_key(reading, entry, "%s", text.data ? text.data : "");
        reading->no_memory = reading->no_memory || text.failed;
        bw_text_free(&text);
        return;
    }
    for (const struct bw_ini_entry *earlier = section->keys; earlier < entry; earlier++)
        if (schema_key(section->kind, earlier->key, &unit) == word) {
            fault_key(reading, entry, "given twice, as %s in line %d; keep one", earlier->key, earlier->line);
            return;
        }
}

/* ---- sections ------------------------------------------------------------------------------- */

/* Where the keys end that begin at i and belong to this section. */
static size_t keys_end(const struct bw_ini *ini, size_t i, const char *section) {
    while (i < ini->count && ini->entries[i].key[0] != '\0' && same(ini->entries[i].section, section))
        i++;
    return i;
}

static int compare_sections(const void *a, const void *b) {
    const struct section *const *first = a, *const *second = b;
    int order = strcmp((*first)->head->section, (*second)->head->section);
    return order != 0 ? order : ((*first) > (*second)) - ((*first) < (*second));
}

/* The INI reader refuses repeats; triples from elsewhere have not passed it. */
static void check_repeats(struct reading *reading) {
    struct section **sorted = reading_allocate(reading, reading->section_count, sizeof *sorted);
    if (!sorted)
        return;
    for (size_t i = 0; i < reading->section_count; i++)
        sorted[i] = &reading->sections[i];
    qsort(sorted, reading->section_count, sizeof *sorted, compare_sections);
    for (size_t i = 1; i < reading->section_count; i++)
        if (same(sorted[i - 1]->head->section, sorted[i]->head->section))
            fault_section(reading, sorted[i], "section given twice, before in line %d; give one another name",
                          sorted[i - 1]->head->line);
    free(sorted);
}

static void keep_section(struct reading *reading, struct section *section, size_t counts[SECTION_KINDS]) {
    if (!read_head(reading, section))
        return;
    const struct section_word *word = schema_section(section->kind);
    if (++counts[section->kind] > word->most) {
        reading->lost[section->kind] = true;
        if (counts[section->kind] == word->most + 1)
            fault_section(reading, section, "more than %zu [%s] sections; split the case over several files",
                          word->most, word->word);
        return;
    }
    for (size_t i = 0; i < word->name_count; i++)
        check_name(reading, section, section->names[i]);
    for (size_t i = 0; i < section->key_count; i++)
        check_key(reading, section, &section->keys[i]);
    reading->sections[reading->section_count++] = *section;
}

static bool lost_between(const struct lost_lines *lost, int first, int last) {
    for (size_t i = 0; lost && i < lost->count; i++)
        if (lost->lines[i] > first && lost->lines[i] < last)
            return true;
    return false;
}

void sections_read(struct reading *reading) {
    const struct bw_ini *ini = reading->ini;
    size_t counts[SECTION_KINDS] = {0};
    reading->sections = reading_allocate(reading, ini->count, sizeof *reading->sections);
    for (size_t i = 0; reading->sections && i < ini->count;) {
        const struct bw_ini_entry *head = &ini->entries[i];
        size_t first = head->key[0] == '\0' ? i + 1 : i;
        i = keys_end(ini, first, head->section);
        struct section section = {.head = head, .keys = ini->entries + first, .key_count = i - first};
        section.lost_key = section.refused_line =
            lost_between(reading->lost_lines, head->line, i < ini->count ? ini->entries[i].line : INT_MAX);
        keep_section(reading, &section, counts);
    }
    if (reading->sections)
        check_repeats(reading);
}

/* ---- finding them --------------------------------------------------------------------------- */

static bool named(const struct section *section, const char *first, const char *second) {
    return (!first || same(section->names[0], first)) && (!second || same(section->names[1], second));
}

struct section *sections_next(struct reading *reading, size_t *at, enum section_kind kind, const char *first,
                              const char *second) {
    while (*at < reading->section_count) {
        struct section *section = &reading->sections[(*at)++];
        if (section->kind == kind && named(section, first, second))
            return section;
    }
    return NULL;
}

size_t sections_count(struct reading *reading, enum section_kind kind, const char *first, const char *second) {
    size_t at = 0, count = 0;
    while (sections_next(reading, &at, kind, first, second))
        count++;
    return count;
}

void sections_lose_orphans(struct reading *reading, enum section_kind kind, enum section_kind owner) {
    size_t at = 0;
    for (struct section *section; (section = sections_next(reading, &at, kind, NULL, NULL));) {
        size_t from = 0;
        if (!sections_next(reading, &from, owner, section->names[0], NULL))
            reading->lost[kind] = true;
    }
}

/* The name nearest to the last of `first` and `second` among the sections that a reference could mean. */
static const char *nearest_name(struct reading *reading, enum section_kind kind, const char *first,
                                const char *second) {
    const char **names = reading_allocate(reading, reading->section_count, sizeof *names);
    const char *nearest = NULL;
    size_t at = 0, count = 0;
    for (struct section *section; names && (section = sections_next(reading, &at, kind, second ? first : NULL, NULL));)
        names[count++] = section->names[second ? 1 : 0];
    if (names)
        nearest = bw_nearest_name(second ? second : first, names, count);
    free(names);
    return nearest;
}

struct section *sections_refer(struct reading *reading, const struct section *from, enum section_kind kind,
                               const char *first, const char *second) {
    size_t at = 0;
    for (struct section *section; (section = sections_next(reading, &at, kind, first, second));)
        if (section->made)
            return section;
    at = 0;
    if (reading->lost[kind] || sections_next(reading, &at, kind, first, second))
        return NULL; /* it is there, with a fault of its own */
    const char *word = schema_section(kind)->word, *nearest = nearest_name(reading, kind, first, second);
    const char *blank = second ? " " : "", *last = second ? second : "";
    if (nearest)
        fault_section(reading, from, "there is no [%s %s%s%s]; did you mean %s?", word, first, blank, last, nearest);
    else
        fault_section(reading, from, "there is no [%s %s%s%s]; add it or name another", word, first, blank, last);
    return NULL;
}
