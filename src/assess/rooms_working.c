/* The working of a room: by which path the worst reaches each person and opening, and what it asks of goggles. */
#include "internal.h"

/* One handpiece seen through the aid of a person. The caller closes the view, also after a failure. */
static enum bw_status open_aided(const struct assess_job *job, const struct bw_room_result *room, size_t person,
                                 const struct bw_distance_result *distance, struct assess_view *view,
                                 struct bw_error *cause) {
    const struct bw_room *the_room = &job->the_case->rooms[room->room];
    const struct bw_person *who = &the_room->persons[person];
    double ratio;
    *view = (struct assess_view){
        .job = job, .target = BW_EYE, .room = the_room, .at = who->at, .aid = &job->the_case->aids[who->aid]};
    enum bw_status status = assess_view_open(view, &distance, 1, cause);
    return status == BW_OK ? assess_view_customary(view, &ratio, cause) : status;
}

/* The terms of one handpiece at a place, and the light that each comes from: naked, or through the aid if worse. */
struct terms {
    double ratios[BW_TERMS_MAX];
    struct bw_place places[BW_TERMS_MAX];
    const struct bw_room_source *sources[BW_TERMS_MAX];
};

static enum bw_status find_terms(const struct bw_room *room, struct bw_point at, const struct bw_room_source *source,
                                 const struct bw_room_source *aided, struct terms *terms, struct bw_error *cause) {
    double ratios[BW_TERMS_MAX];
    struct bw_place places[BW_TERMS_MAX];
    enum bw_status status = bw_room_term_places_at(room, source, at, terms->ratios, terms->places, cause);
    for (size_t t = 0; t < BW_TERMS_MAX; t++)
        terms->sources[t] = source;
    if (status != BW_OK || aided == NULL)
        return status;
    status = bw_room_term_places_at(room, aided, at, ratios, places, cause);
    for (size_t t = 0; status == BW_OK && t < source->direct->term_count; t++) {
        if (ratios[t] <= terms->ratios[t])
            continue;
        terms->ratios[t] = ratios[t];
        terms->places[t] = places[t];
        terms->sources[t] = aided;
    }
    return status;
}

static enum bw_status write_terms(const struct assess_job *job, const struct bw_person *who,
                                  const struct bw_distance_result *distance, struct terms *terms,
                                  struct bw_working *working, struct bw_error *cause) {
    char words[BW_TITLE_SIZE];
    enum bw_status status = BW_OK;
    assess_handpiece_words(job, distance, words);
    for (size_t t = 0; t < distance->direct->term_count && status == BW_OK; t++) {
        const struct bw_term *term = &distance->direct->terms[t];
        bw_working_heading(working, "%s: %s, %s, %s, over all paths", who->name, words,
                           distance->direct->output->emissions[term->emission].name,
                           bw_effect_name(term->limit.limit.effect));
        terms->places[t].ratio = terms->ratios[t];
        status = bw_room_place_working(terms->sources[t], &terms->places[t], t, working, cause);
        if (terms->sources[t]->direct != distance->direct)
            bw_working_note(working, "through %s", job->the_case->aids[who->aid].name);
    }
    return status;
}

/* What one handpiece asks of goggles at a place: each emission at its worst over all paths. */
static enum bw_status densities(const struct assess_job *job, const struct bw_room_result *room, size_t person,
                                const struct bw_room_source *source, const struct bw_distance_result *distance,
                                struct bw_working *working, struct bw_error *cause) {
    const struct bw_room *the_room = &job->the_case->rooms[room->room];
    const struct bw_person *who = &the_room->persons[person];
    struct terms terms;
    double od[BW_EMISSIONS_MAX];
    char words[BW_TITLE_SIZE];
    struct assess_view view = {0};
    enum bw_status status = who->has_aid ? open_aided(job, room, person, distance, &view, cause) : BW_OK;
    if (status == BW_OK)
        status = find_terms(the_room, who->at, source, who->has_aid ? &view.sources[0] : NULL, &terms, cause);
    if (status == BW_OK)
        status = write_terms(job, who, distance, &terms, working, cause);
    assess_view_close(&view);
    if (status != BW_OK)
        return status;
    assess_handpiece_words(job, distance, words);
    bw_working_heading(working, "%s: optical density against %s", who->name, words);
    bw_hazard_density_working(source->direct, terms.ratios, od, working);
    for (size_t i = 0; i < job->result->pair_count; i++) {
        const struct bw_pair_result *pair = &job->result->pairs[i];
        if (!pair->is_place || pair->room != room->room || pair->person != person || pair->laser != distance->laser ||
            pair->handpiece != distance->handpiece)
            continue;
        bw_working_heading(working, "%s: %s against %s: %s", who->name, job->the_case->eyewear[pair->eyewear].name,
                           words, bw_verdict_name(pair->verdict.verdict));
        bw_eyewear_working(&job->the_case->eyewear[pair->eyewear], source->direct, terms.ratios, &pair->verdict,
                           working);
    }
    return BW_OK;
}

static enum bw_status worst_path(const struct assess_job *job, struct bw_room_result *result,
                                 const struct bw_room_source *sources, size_t index, struct bw_error *cause) {
    const struct bw_person *who = &job->the_case->rooms[result->room].persons[index];
    const struct bw_place *place = &result->persons[index].place;
    size_t source = place->path == BW_PATH_NONE ? 0 : place->source;
    const struct bw_distance_result *distance = &job->result->distances[result->sources[source]];
    const struct bw_room_source *light = &sources[source];
    char words[BW_TITLE_SIZE];
    struct assess_view view = {0};
    bool aided = result->persons[index].through_aid;
    enum bw_status status = aided ? open_aided(job, result, index, distance, &view, cause) : BW_OK;
    assess_handpiece_words(job, distance, words);
    if (status == BW_OK)
        status = bw_room_place_working(aided ? &view.sources[0] : light, place, BW_TERMS_MAX, &result->working, cause);
    bw_working_note(&result->working, "%s%s%s", words, aided ? ", through " : "",
                    aided ? job->the_case->aids[who->aid].name : "");
    assess_view_close(&view);
    return status;
}

static void write_time(struct bw_working *working, const char *what, const struct bw_permitted_time *time) {
    bw_working_step(working, "te", time->exposure_s, "s", NULL, NULL, NULL);
    bw_working_note(working,
                    "%s: longest exposure at this place for which the sum over all paths is 1 or below; searched "
                    "between the times where a limit changes its law%s",
                    what, time->unbounded ? ", none within 30 000 s" : "");
}

static void skin_path(const struct assess_job *job, struct bw_room_result *result, size_t index) {
    const struct bw_person *who = &job->the_case->rooms[result->room].persons[index];
    if (!result->persons[index].has_times)
        return;
    bw_working_heading(&result->working, "%s: skin, and how long until the limits are reached", who->name);
    bw_working_step(&result->working, "ratio", result->persons[index].skin_ratio, "", NULL, NULL, NULL);
    bw_working_note(&result->working, "skin at the place, by the same paths with the skin limits of each handpiece, "
                                      "which its own working gives");
    write_time(&result->working, "eye", &result->persons[index].eye);
    if (who->has_eyewear)
        write_time(&result->working, "eye behind the goggles worn", &result->persons[index].worn);
    write_time(&result->working, "skin", &result->persons[index].skin);
}

static enum bw_status person(const struct assess_job *job, struct bw_room_result *result,
                             const struct bw_room_source *sources, size_t index, struct bw_error *cause) {
    const struct bw_person *who = &job->the_case->rooms[result->room].persons[index];
    bw_working_heading(&result->working, "%s, at %g %g m: the worst path", who->name, who->at.x_m, who->at.y_m);
    enum bw_status status = worst_path(job, result, sources, index, cause);
    for (size_t i = 0; i < result->source_count && status == BW_OK; i++)
        status = densities(job, result, index, &sources[i], &job->result->distances[result->sources[i]],
                           &result->working, cause);
    skin_path(job, result, index);
    return status;
}

static enum bw_status opening(const struct assess_job *job, struct bw_room_result *result,
                              const struct bw_room_source *sources, size_t index, struct bw_error *cause) {
    const struct bw_opening *the_opening = &job->the_case->rooms[result->room].openings[index];
    const struct bw_place *worst = &result->solution.openings[index].worst;
    bw_working_heading(&result->working, "%s: the worst just outside it", the_opening->name);
    size_t source = worst->path == BW_PATH_NONE ? 0 : worst->source;
    if (worst->cover_share > 0.)
        return bw_room_place_working(&sources[source], worst, BW_TERMS_MAX, &result->working, cause);
    bw_working_step(&result->working, "ratio", worst->ratio, "", NULL, NULL, NULL);
    bw_working_note(&result->working, "its cover lets nothing through");
    return BW_OK;
}

enum bw_status assess_room_working(const struct assess_job *job, struct bw_room_result *result,
                                   const struct bw_room_source *sources) {
    const struct bw_room *room = &job->the_case->rooms[result->room];
    struct bw_error cause = {0};
    enum bw_status status = BW_OK;
    for (size_t i = 0; i < room->person_count && status == BW_OK; i++)
        status = person(job, result, sources, i, &cause);
    for (size_t i = 0; i < room->opening_count && status == BW_OK && result->solved; i++)
        status = opening(job, result, sources, i, &cause);
    if (status == BW_OK && result->working.failed)
        status = BW_NO_MEMORY;
    if (status != BW_OK)
        bw_error_set(job->error, status, "room %s: %s", room->name, cause.text[0] ? cause.text : "out of memory");
    return status;
}
