/* casefile - a clinic as written down: validates (section, key, value, line) triples into plain structs.
 * Uses: base, limits, beam, hazard, eyewear, room.  Used by: assess, report, cli.
 * A case is const after reading and may be shared between threads. */
#ifndef BEAMWARD_CASEFILE_H
#define BEAMWARD_CASEFILE_H

#include <beamward/eyewear.h>
#include <beamward/room.h>

#ifdef __cplusplus
extern "C" {
#endif

struct bw_handpiece {
    char name[BW_NAME_SIZE], title[BW_TITLE_SIZE];
    struct bw_output output;  /* the laser's emissions, each with its beam from this handpiece */
    bool has_exposure;
    double exposure_s;        /* overrides the customary time */
    bool definition_assumed;  /* a diameter without its definition was taken as d86, the narrowest beam */
    bool emission_beam_given[BW_EMISSIONS_MAX]; /* [beam ...] section of its own */
    /* How far diameter and divergence of each beam may be off, as shares of what was given. */
    double diameter_tolerance[BW_EMISSIONS_MAX], divergence_tolerance[BW_EMISSIONS_MAX];
    bool has_tolerance;       /* any of its beams or emissions has one */
    bool has_exposed_skin;
    double exposed_skin_m2;   /* area of skin that the beam may light */
    int line;
};
struct bw_laser {
    char name[BW_NAME_SIZE], title[BW_TITLE_SIZE];
    char labelled_class[8]; /* "3B", "4"...; empty if not given */
    size_t emission_count, handpiece_count;
    struct bw_emission *emissions; /* in the order of the file */
    struct bw_tolerance *tolerances; /* of each: what was given, and how far it may be off */
    struct bw_timing *timings;     /* of each, as given; owns the lists of pulses that the emissions refer to */
    struct bw_handpiece *handpieces;
    int line;
};
struct bw_use {
    size_t room, laser, handpiece;
};
/* Somebody was, or may have been, in the beam: at a distance on the axis of a handpiece, or at a place in a room. */
struct bw_incident {
    char name[BW_NAME_SIZE], title[BW_TITLE_SIZE];
    bool in_room;
    size_t room;          /* with in_room */
    struct bw_point at;
    bool has_handpiece;   /* always, unless in_room: else any that is used there */
    size_t laser, handpiece;
    double distance_m;    /* unless in_room */
    double exposure_s;
    bool has_eyewear, has_aid;
    size_t eyewear, aid;
    int line;
};
struct bw_case {
    char title[BW_TITLE_SIZE];
    char rules[BW_NAME_SIZE]; /* id of the rule set; "iec-60825-1-2014" if not given */
    bool rules_given;
    bool us_units;
    size_t laser_count, room_count, eyewear_count, use_count, aid_count, incident_count;
    struct bw_laser *lasers;
    struct bw_room *rooms;
    struct bw_goggles *eyewear;
    struct bw_use *uses;
    struct bw_aid *aids;           /* optical: loupes, microscopes, binoculars */
    struct bw_incident *incidents;
    struct bw_ini given; /* the triples as they were written, for the record */
};

/* Validates triples. All faults of the file are collected, each with its line; the case is then NULL.
 * Returns: BW_OK; BW_INPUT with faults; BW_NO_MEMORY. */
enum bw_status bw_case_from_ini(const struct bw_ini *ini, struct bw_case **the_case, struct bw_faults *faults,
                                struct bw_error *error);
/* Reads a case file. `bytes` (may be NULL) receives the raw file, for its hash. */
enum bw_status bw_case_read(const char *path, struct bw_case **the_case, struct bw_text *bytes,
                            struct bw_faults *faults, struct bw_error *error);
void bw_case_free(struct bw_case *the_case);

/* A commented starter case file that runs as it is. */
const char *bw_case_starter(void);
/* The examples of examples/ that run as they are, in order of name: their text, or NULL for an unknown name. */
size_t bw_case_examples_count(void);
const char *bw_case_example_name(size_t index);
const char *bw_case_example(const char *name);

#ifdef __cplusplus
}
#endif
#endif
