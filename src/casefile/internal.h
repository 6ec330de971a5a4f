/* What the files of casefile share among themselves: the vocabulary of a case file (schema.c), its sections while they
 * are read (sections.c), values with their faults (values.c, points.c), and the readers of each kind. */
#ifndef CASEFILE_INTERNAL_H
#define CASEFILE_INTERNAL_H

#include <beamward/casefile.h>

/* ---- vocabulary ----------------------------------------------------------------------------- */

enum section_kind {
    SECTION_CASE,
    SECTION_LASER,
    SECTION_EMISSION,
    SECTION_HANDPIECE,
    SECTION_BEAM,
    SECTION_ROOM,
    SECTION_SURFACE,
    SECTION_OPENING,
    SECTION_AREA,
    SECTION_PERSON,
    SECTION_EYEWEAR,
    SECTION_USE,
    SECTION_MATERIAL,
    SECTION_AID,
    SECTION_INCIDENT,
    SECTION_KINDS
};

struct unit_word {
    const char *suffix; /* "mw" */
    const char *shown;  /* "mW" */
    double to_si;
};
/* The units that a key's name may end in. */
struct unit_family {
    const struct unit_word *units;
    size_t count;
};

struct key_word {
    const char *name;                 /* without unit */
    const struct unit_family *family; /* NULL: no unit, or the only one is part of the name */
    const char *example;              /* "beam_diameter_mm = 30" */
};

struct section_word {
    const char *word;    /* "emission" */
    size_t name_count;   /* names after it */
    const char *names;   /* "LASER NAME" */
    const char *example; /* "[emission trident deep]" */
    size_t most;         /* sections of this kind in one file */
    const struct key_word *keys;
    size_t key_count;
};

const struct section_word *schema_section(enum section_kind kind);
/* A key's word and unit. Returns: NULL if the section has no such key, or not with this unit. */
const struct key_word *schema_key(enum section_kind kind, const char *key, const struct unit_word **unit);
/* The key that is nearest to an unknown one, and its full name. Returns: NULL if there is none. */
const struct key_word *schema_nearest_key(enum section_kind kind, const char *key, char *full_name, size_t size);
/* Why a key that the section lacks is wrong, and what would be right. */
void schema_explain_key(struct bw_text *text, enum section_kind kind, const char *key);
/* "a, b or c" */
void schema_add_words(struct bw_text *text, const char *const *words, size_t count, const char *last_joint);

/* ---- sections ------------------------------------------------------------------------------- */

enum { SECTION_NAMES_MAX = 3 };

struct section {
    enum section_kind kind;
    char names[SECTION_NAMES_MAX][BW_NAME_SIZE];
    const struct bw_ini_entry *head;
    const struct bw_ini_entry *keys; /* those that follow it */
    size_t key_count;
    size_t index;      /* of what was made from it: in the case, or in its laser or room */
    size_t parent;     /* index of that laser or room */
    bool made;         /* something was made from it, so that others may refer to it */
    bool refused_line; /* by the INI guard: which key it was is not known */
    bool lost_key;     /* a line or key of it was refused: do not complain that one of several keys is missing */
};

/* Lines that the INI guard refused, ascending. */
struct lost_lines {
    int *lines;
    size_t count, capacity;
    bool sections; /* among them the head of a section */
    bool no_memory;
};
bool repair_lines(const struct bw_text *bytes, const struct bw_faults *faults, struct bw_text *plain,
                  struct lost_lines *lost);

struct reading {
    const struct bw_ini *ini;
    struct bw_case *the_case;
    struct bw_faults *faults;
    struct section *sections; /* in the order of the file */
    size_t section_count;
    bool lost[SECTION_KINDS];            /* a section of this kind was refused: do not complain that one is missing */
    const struct lost_lines *lost_lines; /* may be NULL */
    bool no_memory;
    const char *path;   /* of the case file; NULL if it has none */
    size_t pulse_total; /* in the lists read so far */
    struct bw_material *materials; /* the case's own */
    size_t material_count;
};

/* Finds the sections and checks their names and keys. */
void sections_read(struct reading *reading);
/* The next section of a kind from *at on whose first names are these (NULL = any). Returns: NULL after the last. */
struct section *sections_next(struct reading *reading, size_t *at, enum section_kind kind, const char *first,
                              const char *second);
size_t sections_count(struct reading *reading, enum section_kind kind, const char *first, const char *second);
/* Sections of a kind whose owner is not there may belong to any other: then do not complain that it has none. */
void sections_lose_orphans(struct reading *reading, enum section_kind kind, enum section_kind owner);
/* The section of a kind with these names (NULL = does not count) from which something was made. On failure the fault is
 * there already, at the section that refers to it, with the nearest name. */
struct section *sections_refer(struct reading *reading, const struct section *from, enum section_kind kind,
                               const char *first, const char *second);
/* Zeroed memory for so many, or NULL with no_memory set. Zero counts ask for one. */
void *reading_allocate(struct reading *reading, size_t count, size_t size);

/* ---- faults and values ---------------------------------------------------------------------- */

void fault_key(struct reading *reading, const struct bw_ini_entry *entry, const char *format, ...) BW_PRINTF(3, 4);
void fault_section(struct reading *reading, const struct section *section, const char *format, ...) BW_PRINTF(3, 4);
/* A key that has to be there, at the section's line. */
void fault_missing(struct reading *reading, const struct section *section, const char *key);

enum presence { ABSENT, WRONG, GIVEN }; /* WRONG: its fault is there already */

/* The entry of a key, or NULL. unit (may be NULL) is NULL where the key has none. */
const struct bw_ini_entry *value_entry(const struct section *section, const char *key, const struct unit_word **unit);
bool value_given(const struct section *section, const char *key);

struct range {
    double least, most; /* SI */
};
/* A number in SI. *value is NAN unless GIVEN. */
enum presence value_number(struct reading *reading, const struct section *section, const char *key, struct range range,
                           double *value);
/* Says what is wrong with a text that is no plain number; what is the item, as in "point 2" (NULL: the whole value). */
void value_not_a_number(struct reading *reading, const struct bw_ini_entry *entry, const char *what, const char *text);
/* One of some words; *index is its place. */
enum presence value_choice(struct reading *reading, const struct section *section, const char *key,
                           const char *const *words, size_t count, size_t *index);
/* A text that fits into `size` bytes; empty unless GIVEN. */
enum presence value_text(struct reading *reading, const struct section *section, const char *key, char *text,
                         size_t size);
/* Points `x y, x y`, at least `least`, in metres. The caller frees the points. */
enum presence value_points(struct reading *reading, const struct section *section, const char *key, size_t least,
                           struct bw_polygon *points);
enum presence value_point(struct reading *reading, const struct section *section, const char *key,
                          struct bw_point *point);
/* Bearings `FROM .. TO`. */
enum presence value_aim(struct reading *reading, const struct section *section, double *from_deg, double *to_deg);
/* The name of one of some things; *index is its place. what: "eyewear", as in [eyewear NAME]. */
enum presence value_name(struct reading *reading, const struct section *section, const char *key,
                         enum section_kind kind, const char *const *names, size_t count, size_t *index);
enum presence value_eyewear(struct reading *reading, const struct section *section, size_t *index);
enum presence value_aid(struct reading *reading, const struct section *section, size_t *index);
/* The name of a material, the case's own or a published one. */
enum presence value_material(struct reading *reading, const struct section *section, const char *key,
                             struct bw_material *material);

/* ---- the readers ---------------------------------------------------------------------------- */

void read_materials(struct reading *reading);
void read_goggles(struct reading *reading);
void read_lasers(struct reading *reading);     /* with emissions */
/* Bursts, gates, counts and lists. ABSENT: none of them is given. */
enum presence read_timing(struct reading *reading, const struct section *section, struct bw_timing *timing);
void free_timings(struct bw_timing *timings, size_t count);
/* A list of at most so many pulses; shown: its name in messages, `FILE:LINE: ...`.
 * Returned: pulses  to be freed; NULL on error. Returns: BW_OK; BW_INPUT; BW_NO_MEMORY */
enum bw_status pulses_csv_read(const char *path, const char *shown, size_t most, struct bw_pulse **pulses,
                               size_t *count, struct bw_error *error);
void read_handpieces(struct reading *reading); /* with beams */
void read_rooms(struct reading *reading);      /* with what is in them */
void read_uses(struct reading *reading);
void read_aids(struct reading *reading);
void read_incidents(struct reading *reading);
/* How far what is given of an emission may be off; `tolerance` has what was given already. */
void read_emission_tolerance(struct reading *reading, const struct section *section, struct bw_tolerance *tolerance);
/* The same for a beam; from its handpiece (may be NULL) unless it has its own. */
void read_beam_tolerance(struct reading *reading, const struct section *section, const struct section *handpiece,
                         double *diameter, double *divergence);
/* Geometry of a handpiece or beam. A beam takes the definition of diameters from its handpiece (may be NULL), unless it
 * has one of its own. */
enum presence read_beam(struct reading *reading, const struct section *section, const struct section *handpiece,
                        double wavelength_nm, struct bw_beam *beam);
/* The same beam for another wavelength: of a single-mode fibre the divergence follows it. */
void beam_for_wavelength(const struct section *section, double wavelength_nm, struct bw_beam *beam);
/* Apparent source and emitters. */
enum presence read_source(struct reading *reading, const struct section *section,
                          enum bw_diameter_definition definition, bool whole, struct bw_beam *beam);
/* True if the beam has a diameter and nothing says how it is defined. */
bool beam_assumes_definition(const struct section *section, const struct section *handpiece);
/* Whether everything is where it can be. */
void check_room(struct reading *reading, const struct section *room);

/* ---- texts ---------------------------------------------------------------------------------- */

/* Written by embed.c: the starter, then the examples in order of name. */
struct case_text {
    const char *name, *text;
};
extern const struct case_text bw_case_texts[];
extern const size_t bw_case_texts_count;

#endif
