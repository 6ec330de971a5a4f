/* tablec - host program: reads the tables of limits_tables/, checks them and writes them out as const C arrays.
 *
 *     tablec --out FILE TABLE.ini ...
 *
 * The kind of a file shows in its first section: [table] is a rule set, [materials] holds materials. Same input, same
 * bytes out. Exit code: 0; 2 with the faults on stderr; 3 if the system failed. */
#include "internal.h"

#include <math.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

enum { TABLES_MAX = 32 };
struct inputs {
    struct bw_table *tables[TABLES_MAX];
    size_t table_count;
    struct bw_material *materials;
    size_t material_count;
};

/* ---- writing values --------------------------------------------------------------------------- */

static void put_string(FILE *out, const char *string) {
    if (string == NULL) {
        fputs("NULL", out);
        return;
    }
    fputc('"', out);
    for (const unsigned char *c = (const unsigned char *)string; *c != '\0'; c++)
        if (*c == '"' || *c == '\\')
            fprintf(out, "\\%c", *c);
        else if (*c < 32 || *c > 126 || *c == '?')
            fprintf(out, "\\%03o", *c);
        else
            fputc(*c, out);
    fputc('"', out);
}

static void put_number(FILE *out, double value) {
    if (isnan(value))
        fputs("(double)NAN", out);
    else if (isinf(value))
        fputs("HUGE_VAL", out);
    else
        fprintf(out, "%.17g", value);
}

static void put_bool(FILE *out, bool value) {
    fputs(value ? "true" : "false", out);
}

static void put_span(FILE *out, const struct span *span) {
    fputc('{', out);
    put_number(out, span->low);
    fputs(", ", out);
    put_number(out, span->high);
    fprintf(out, ", %s, %s}", span->open_low ? "true" : "false", span->open_high ? "true" : "false");
}

static void put_edge(FILE *out, const struct edge *edge) {
    fputc('{', out);
    put_number(out, edge->value_s);
    fprintf(out, ", %d}", edge->factor);
}

static void put_power(FILE *out, const struct power *power) {
    fputc('{', out);
    put_number(out, power->exponent);
    fprintf(out, ", (enum power_law)%d, %s}", (int)power->law, power->inverse ? "true" : "false");
}

static void put_note(FILE *out, const struct row_note *note) {
    fputc('{', out);
    put_string(out, note->key);
    fputs(", ", out);
    put_string(out, note->clause);
    fprintf(out, ", %s, %d}", note->known == BW_READ ? "BW_READ" : "BW_MEMORY", note->line);
}

/* The comma before each further member. */
static void comma(FILE *out) {
    fputs(", ", out);
}

/* ---- writing rows ----------------------------------------------------------------------------- */

static void begin_array(FILE *out, size_t table, const char *type, const char *name, size_t count) {
    fprintf(out, "static const %s t%zu_%s[%zu] = {\n", type, table, name, count == 0 ? (size_t)1 : count);
    if (count == 0) /* C has no empty arrays; its count keeps anyone from looking */
        fputs("    {0},\n", out);
}

static void end_array(FILE *out) {
    fputs("};\n", out);
}

static void write_factors(FILE *out, size_t n, const struct bw_table *table) {
    begin_array(out, n, "struct factor", "factors", table->factor_count);
    for (size_t i = 0; i < table->factor_count; i++) {
        const struct factor *factor = &table->factors[i];
        fputs("    {", out);
        put_string(out, factor->name);
        comma(out);
        put_string(out, factor->section);
        fprintf(out, ", (enum factor_argument)%d, %zu, %zu, %d},\n", (int)factor->argument, factor->first,
                factor->count, factor->line);
    }
    end_array(out);
    begin_array(out, n, "struct factor_row", "factor_rows", table->factor_row_count);
    for (size_t i = 0; i < table->factor_row_count; i++) {
        const struct factor_row *row = &table->factor_rows[i];
        const double numbers[] = {row->offset, row->scale, row->slope, row->origin};
        fputs("    {", out);
        put_span(out, &row->argument);
        for (size_t j = 0; j < 4; j++) {
            comma(out);
            put_number(out, numbers[j]);
        }
        comma(out);
        put_bool(out, row->constant);
        comma(out);
        put_note(out, &row->note);
        fputs("},\n", out);
    }
    end_array(out);
}

static void write_sections(FILE *out, size_t n, const struct bw_table *table) {
    begin_array(out, n, "struct limit_section", "sections", table->section_count);
    for (size_t i = 0; i < table->section_count; i++) {
        const struct limit_section *section = &table->sections[i];
        fputs("    {", out);
        put_string(out, section->name);
        fprintf(out, ", (enum bw_target)%d, (enum bw_effect)%d, ", (int)section->target, (int)section->effect);
        put_span(out, &section->subtense_mrad);
        comma(out);
        put_span(out, &section->area_m2);
        comma(out);
        put_span(out, &section->wavelength_nm);
        comma(out);
        put_edge(out, &section->from);
        comma(out);
        put_edge(out, &section->to);
        fprintf(out, ", %zu, %zu, %d, %d},\n", section->first, section->count, section->line, section->covers_line);
    }
    end_array(out);
}

static void write_limit_row(FILE *out, const struct limit_row *row) {
    fputs("    {", out);
    put_span(out, &row->wavelength_nm);
    comma(out);
    put_edge(out, &row->from);
    comma(out);
    put_edge(out, &row->to);
    fprintf(out, ", (enum quantity)%d, ", (int)row->quantity);
    put_number(out, row->value);
    comma(out);
    put_power(out, &row->time_power);
    fprintf(out, ", %zu, {", row->use_count);
    for (size_t i = 0; i < ROW_USES_MAX; i++) {
        fprintf(out, "%s{%d, ", i == 0 ? "" : ", ", row->uses[i].factor);
        put_string(out, row->uses[i].label);
        comma(out);
        put_power(out, &row->uses[i].power);
        fputc('}', out);
    }
    fprintf(out, "}, %zu, ", row->section);
    put_note(out, &row->note);
    fputs("},\n", out);
}

static void write_sizes(FILE *out, size_t n, const char *name, const struct size_row *rows, size_t count) {
    begin_array(out, n, "struct size_row", name, count);
    for (size_t i = 0; i < count; i++) {
        fprintf(out, "    {(enum bw_effect)%d, ", (int)rows[i].effect);
        put_span(out, &rows[i].wavelength_nm);
        comma(out);
        put_edge(out, &rows[i].from);
        comma(out);
        put_edge(out, &rows[i].to);
        comma(out);
        put_number(out, rows[i].value);
        comma(out);
        put_power(out, &rows[i].time_power);
        comma(out);
        put_note(out, &rows[i].note);
        fputs("},\n", out);
    }
    end_array(out);
}

static void write_repetition(FILE *out, size_t n, const struct repetition *repetition) {
    begin_array(out, n, "struct ti_row", "ti", repetition->ti_count);
    for (size_t i = 0; i < repetition->ti_count; i++) {
        fputs("    {", out);
        put_span(out, &repetition->ti[i].wavelength_nm);
        comma(out);
        put_number(out, repetition->ti[i].ti_s);
        comma(out);
        put_note(out, &repetition->ti[i].note);
        fputs("},\n", out);
    }
    end_array(out);
    begin_array(out, n, "struct applies_row", "applies", repetition->applies_count);
    for (size_t i = 0; i < repetition->applies_count; i++) {
        fprintf(out, "    {(enum bw_effect)%d, ", (int)repetition->applies[i].effect);
        put_span(out, &repetition->applies[i].wavelength_nm);
        comma(out);
        put_note(out, &repetition->applies[i].note);
        fputs("},\n", out);
    }
    end_array(out);
}

static void write_train(FILE *out, size_t n, const struct bw_table *table) {
    begin_array(out, n, "struct train_row", "train", table->train_count);
    for (size_t i = 0; i < table->train_count; i++) {
        const struct train_row *row = &table->train[i];
        fprintf(out, "    {(enum pulse_kind)%d, ", (int)row->pulse);
        put_span(out, &row->subtense_mrad);
        fprintf(out, ", %s, %s, ", row->low_is_alpha_max ? "true" : "false", row->high_is_alpha_max ? "true" : "false");
        put_span(out, &row->pulses);
        comma(out);
        put_span(out, &row->exposure_s);
        comma(out);
        put_number(out, row->scale);
        comma(out);
        put_power(out, &row->power);
        comma(out);
        put_number(out, row->floor);
        comma(out);
        put_note(out, &row->note);
        fputs("},\n", out);
    }
    end_array(out);
}

static void write_sums_and_times(FILE *out, size_t n, const struct bw_table *table) {
    begin_array(out, n, "struct add_row", "additivity", table->additivity_count);
    for (size_t i = 0; i < table->additivity_count; i++) {
        const struct add_row *row = &table->additivity[i];
        fputs("    {", out);
        put_span(out, &row->first_nm);
        comma(out);
        put_span(out, &row->second_nm);
        fprintf(out, ", %s, %s, ", row->eye ? "true" : "false", row->skin ? "true" : "false");
        put_note(out, &row->note);
        fputs("},\n", out);
    }
    end_array(out);
    begin_array(out, n, "struct time_row", "times", table->time_count);
    for (size_t i = 0; i < table->time_count; i++) {
        fprintf(out, "    {(enum time_kind)%d, ", (int)table->times[i].kind);
        put_span(out, &table->times[i].wavelength_nm);
        comma(out);
        put_number(out, table->times[i].exposure_s);
        comma(out);
        put_note(out, &table->times[i].note);
        fputs("},\n", out);
    }
    end_array(out);
}

static void write_index(FILE *out, size_t n, const char *bands, const char *rows, const struct band_index *index) {
    begin_array(out, n, "struct band", bands, index->count);
    for (size_t i = 0; i < index->count; i++) {
        fputs("    {", out);
        put_number(out, index->bands[i].low_nm);
        comma(out);
        put_number(out, index->bands[i].high_nm);
        fprintf(out, ", %zu, %zu},\n", index->bands[i].first, index->bands[i].count);
    }
    end_array(out);
    fprintf(out, "static const unsigned short t%zu_%s[%zu] = {", n, rows, index->rows_count + 1);
    for (size_t i = 0; i < index->rows_count; i++)
        fprintf(out, "%s%u,", i % 20 == 0 ? "\n    " : " ", (unsigned)index->rows[i]);
    fputs(" 0};\n", out);
}

static void write_cuts(FILE *out, size_t n, const char *target, const char *name, const struct cuts *cuts) {
    fprintf(out, "static const double t%zu_%s_%s[%zu] = {", n, target, name, cuts->count + 1);
    for (size_t i = 0; i < cuts->count; i++) {
        fputs(i % 4 == 0 ? "\n    " : " ", out);
        put_number(out, cuts->at[i]);
        fputc(',', out);
    }
    fprintf(out, " (double)NAN};\nstatic const unsigned short t%zu_%s_%s_first[%zu] = {", n, target, name,
            cuts->key_count);
    for (size_t i = 0; i < cuts->key_count; i++)
        fprintf(out, "%s%u,", i % 20 == 0 ? "\n    " : " ", (unsigned)cuts->first[i]);
    fputs("};\n", out);
}

static void write_held(FILE *out, size_t n, const char *target, const struct plan *plan) {
    fprintf(out, "static const struct held_row t%zu_%s_held[%zu] = {\n", n, target, plan->held_count + 1);
    for (size_t i = 0; i < plan->held_count; i++) {
        const struct held_row *held = &plan->held[i];
        fprintf(out, "    {%u, %u, %u, %u, {", held->row, held->aperture, held->cone, held->alpha_max);
        for (size_t j = 0; j < ROW_USES_MAX; j++)
            fprintf(out, "%s%u", j == 0 ? "" : ", ", held->factor_rows[j]);
        fprintf(out, "}, %u},\n", held->asks);
    }
    fputs("    {0}};\n", out);
}

static void write_plan(FILE *out, size_t n, const char *target, const struct plan *plan) {
    size_t zones = (plan->wavelengths.count + 1) * (plan->times.count + 1);
    write_cuts(out, n, target, "wavelengths", &plan->wavelengths);
    write_cuts(out, n, target, "times", &plan->times);
    fprintf(out, "static const unsigned t%zu_%s_cell_of[%zu] = {", n, target, zones);
    for (size_t i = 0; i < zones; i++)
        fprintf(out, "%s%u,", i % 20 == 0 ? "\n    " : " ", plan->cell_of[i]);
    fprintf(out, "};\nstatic const struct cell t%zu_%s_cells[%zu] = {", n, target, plan->cell_count);
    for (size_t i = 0; i < plan->cell_count; i++)
        fprintf(out, "%s{%u, %u},", i % 8 == 0 ? "\n    " : " ", plan->cells[i].first, plan->cells[i].count);
    fputs("};\n", out);
    write_held(out, n, target, plan);
}

static void write_plan_head(FILE *out, size_t n, const char *target, const struct plan *plan) {
    const struct {
        const char *name;
        const struct cuts *cuts;
    } both[] = {{"wavelengths", &plan->wavelengths}, {"times", &plan->times}};
    fputc('{', out);
    for (size_t i = 0; i < 2; i++)
        fprintf(out, "{t%zu_%s_%s, %zu, t%zu_%s_%s_first, %zu, %zu, %zu}, ", n, target, both[i].name,
                both[i].cuts->count, n, target, both[i].name, both[i].cuts->shift, both[i].cuts->lowest_key,
                both[i].cuts->key_count);
    fprintf(out, "t%zu_%s_cell_of, t%zu_%s_cells, %zu, t%zu_%s_held, %zu}", n, target, n, target, plan->cell_count, n,
            target, plan->held_count);
}

/* ---- writing a table -------------------------------------------------------------------------- */

static void write_arrays(FILE *out, size_t n, const struct bw_table *table) {
    fprintf(out, "static const char *const t%zu_notes[%zu] = {", n, table->note_count + 1);
    for (size_t i = 0; i < table->note_count; i++) {
        put_string(out, table->notes[i]);
        comma(out);
    }
    fputs("NULL};\n", out);
    write_factors(out, n, table);
    write_sections(out, n, table);
    begin_array(out, n, "struct limit_row", "rows", table->row_count);
    for (size_t i = 0; i < table->row_count; i++)
        write_limit_row(out, &table->rows[i]);
    end_array(out);
    write_sizes(out, n, "apertures", table->apertures, table->aperture_count);
    write_sizes(out, n, "cones", table->cones, table->cone_count);
    write_sizes(out, n, "alpha_max", table->source_size.rows, table->source_size.count);
    write_repetition(out, n, &table->repetition);
    write_train(out, n, table);
    write_sums_and_times(out, n, table);
    write_index(out, n, "eye_bands", "eye_rows", &table->index[BW_EYE]);
    write_index(out, n, "skin_bands", "skin_rows", &table->index[BW_SKIN]);
    write_plan(out, n, "eye", &table->plan[BW_EYE]);
    write_plan(out, n, "skin", &table->plan[BW_SKIN]);
}

static void write_source_size(FILE *out, size_t n, const struct source_size *size) {
    fprintf(out, "    .source_size = {%d, ", size->line);
    put_number(out, size->alpha_min_mrad);
    comma(out);
    put_note(out, &size->alpha_min_note);
    fprintf(out, ", (enum beyond)%d, ", (int)size->beyond);
    put_note(out, &size->beyond_note);
    fprintf(out, ", t%zu_alpha_max, %zu},\n", n, size->count);
}

static void write_repetition_head(FILE *out, size_t n, const struct repetition *repetition) {
    fprintf(out, "    .repetition = {%d, t%zu_ti, %zu, t%zu_applies, %zu, %d, ", repetition->line, n,
            repetition->ti_count, n, repetition->applies_count, repetition->counting_factor);
    put_note(out, &repetition->count_note);
    comma(out);
    put_number(out, repetition->longest_pulse_s);
    comma(out);
    put_note(out, &repetition->longest_note);
    fputs("},\n", out);
}

static void write_table(FILE *out, size_t n, const struct bw_table *table) {
    const struct {
        const char *member, *value;
    } texts[] = {{"id", table->id}, {"title", table->title}, {"source", table->source}, {"edition", table->edition}};
    const struct {
        const char *member, *count_member;
        size_t count;
    } lists[] = {{"notes", "note_count", table->note_count},
                 {"factors", "factor_count", table->factor_count},
                 {"factor_rows", "factor_row_count", table->factor_row_count},
                 {"sections", "section_count", table->section_count},
                 {"rows", "row_count", table->row_count},
                 {"apertures", "aperture_count", table->aperture_count},
                 {"cones", "cone_count", table->cone_count},
                 {"train", "train_count", table->train_count},
                 {"additivity", "additivity_count", table->additivity_count},
                 {"times", "time_count", table->time_count}};
    write_arrays(out, n, table);
    fprintf(out, "static const struct bw_table t%zu = {\n", n);
    for (size_t i = 0; i < sizeof texts / sizeof texts[0]; i++) {
        fprintf(out, "    .%s = ", texts[i].member);
        put_string(out, texts[i].value);
        fputs(",\n", out);
    }
    for (size_t i = 0; i < sizeof lists / sizeof lists[0]; i++)
        fprintf(out, "    .%s = t%zu_%s,\n    .%s = %zu,\n", lists[i].member, n, lists[i].member, lists[i].count_member,
                lists[i].count);
    write_source_size(out, n, &table->source_size);
    write_repetition_head(out, n, &table->repetition);
    fprintf(out,
            "    .index = {{t%zu_eye_bands, %zu, t%zu_eye_rows, %zu}, {t%zu_skin_bands, %zu, t%zu_skin_rows, %zu}},\n",
            n, table->index[BW_EYE].count, n, table->index[BW_EYE].rows_count, n, table->index[BW_SKIN].count, n,
            table->index[BW_SKIN].rows_count);
    fputs("    .plan = {", out);
    write_plan_head(out, n, "eye", &table->plan[BW_EYE]);
    comma(out);
    write_plan_head(out, n, "skin", &table->plan[BW_SKIN]);
    fputs("},\n", out);
    fputs("    .memory = NULL,\n};\n\n", out);
}

static void write_material(FILE *out, const struct bw_material *material) {
    static const char *const finishes[] = {"BW_MATT", "BW_MIRROR", "BW_GLOSS", "BW_GLASS"};
    const double numbers[] = {material->reflectance, material->matt_reflectance, material->transmittance,
                              material->refractive_index};
    fputs("    {", out);
    put_string(out, material->name);
    comma(out);
    put_string(out, material->title);
    fprintf(out, ", %s, ", finishes[material->finish]);
    for (size_t i = 0; i < 4; i++) {
        put_number(out, numbers[i]);
        comma(out);
    }
    put_string(out, material->source);
    fprintf(out, ", %s},\n", material->known == BW_READ ? "BW_READ" : "BW_MEMORY");
}

static void write_all(FILE *out, const struct inputs *inputs) {
    fputs("/* Written by tablec from limits_tables/. Change the tables there. */\n"
          "#include \"internal.h\"\n\n",
          out);
    for (size_t i = 0; i < inputs->table_count; i++)
        write_table(out, i, inputs->tables[i]);
    fputs("const struct bw_table *const bw_limits_built_in_tables[] = {", out);
    for (size_t i = 0; i < inputs->table_count; i++)
        fprintf(out, "&t%zu, ", i);
    fprintf(out, "NULL};\nconst size_t bw_limits_built_in_table_count = %zu;\n\n", inputs->table_count);
    fputs("const struct bw_material bw_limits_built_in_materials[] = {\n", out);
    for (size_t i = 0; i < inputs->material_count; i++)
        write_material(out, &inputs->materials[i]);
    fprintf(out,
            "    {\"\", \"\", BW_MIRROR, 0, 0, 0, 0, \"\", BW_MEMORY}};\n"
            "const size_t bw_limits_built_in_material_count = %zu;\n",
            inputs->material_count);
}

/* ---- reading and the program ------------------------------------------------------------------ */

static void print_faults(const char *path, const struct bw_faults *faults) {
    for (size_t i = 0; i < faults->count; i++) {
        const struct bw_fault *fault = &faults->items[i];
        fprintf(stderr, "%s:%d:", path, fault->line);
        if (fault->section[0] != '\0')
            fprintf(stderr, " [%s]", fault->section);
        fprintf(stderr, " %s%s%s\n", fault->key, fault->key[0] != '\0' || fault->section[0] != '\0' ? ": " : "",
                fault->text);
    }
}

static enum bw_status read_rule_set(struct inputs *inputs, const struct bw_ini *ini, struct bw_faults *faults,
                                    struct bw_error *error) {
    if (inputs->table_count == TABLES_MAX)
        return bw_error_set(error, BW_INPUT, "more than %d rule sets", TABLES_MAX);
    struct bw_table *table = NULL;
    enum bw_status status = bw_table_load(ini, &table, faults, error);
    if (status != BW_OK)
        return status;
    for (size_t i = 0; i < inputs->table_count; i++)
        if (strcmp(inputs->tables[i]->id, table->id) == 0) {
            status = bw_error_set(error, BW_INPUT, "id %s is taken by another rule set", table->id);
            bw_table_free(table);
            return status;
        }
    inputs->tables[inputs->table_count++] = table;
    return BW_OK;
}

static enum bw_status read_triples(struct inputs *inputs, const struct bw_ini *ini, struct bw_faults *faults,
                                   struct bw_error *error) {
    const char *first = ini->entries[0].section; /* a file without one does not read */
    if (strcmp(first, "table") == 0)
        return read_rule_set(inputs, ini, faults, error);
    if (strcmp(first, "materials") == 0 && inputs->materials == NULL)
        return bw_limits_materials_read(ini, &inputs->materials, &inputs->material_count, faults, error);
    return bw_error_set(error, BW_INPUT, "unknown kind of table [%s]; wants [table] or one [materials] first", first);
}

static int read_file(struct inputs *inputs, const char *path) {
    struct bw_ini ini = {0};
    struct bw_faults faults = {0};
    struct bw_error error = {0};
    enum bw_status status = bw_ini_read(path, &ini, NULL, &faults, &error);
    if (status == BW_OK)
        status = read_triples(inputs, &ini, &faults, &error);
    if (status != BW_OK) {
        print_faults(path, &faults);
        if (faults.count == 0)
            fprintf(stderr, "%s:0: %s\n", path, error.text);
    }
    bw_faults_free(&faults);
    bw_ini_free(&ini);
    return status == BW_OK ? 0 : status == BW_INPUT ? 2 : 3;
}

static int compare_ids(const void *a, const void *b) {
    const struct bw_table *const *first = a, *const *second = b;
    return strcmp((*first)->id, (*second)->id);
}

/* Writes beside the file and renames, so that a failure leaves no half table behind. */
static int write_file(const struct inputs *inputs, const char *path) {
    char beside[4096];
    if (snprintf(beside, sizeof beside, "%s.part", path) >= (int)sizeof beside) {
        fprintf(stderr, "tablec: the path %s is too long\n", path);
        return 3;
    }
    FILE *out = fopen(beside, "w");
    if (out == NULL) {
        perror(beside);
        return 3;
    }
    write_all(out, inputs);
    bool failed = ferror(out) != 0;
    failed |= fclose(out) != 0;
    if (failed || rename(beside, path) != 0) {
        perror(path);
        remove(beside);
        return 3;
    }
    return 0;
}

int main(int argc, char **argv) {
    struct inputs inputs = {0};
    int code = 0;
    if (argc < 4 || strcmp(argv[1], "--out") != 0) {
        fputs("usage: tablec --out FILE TABLE.ini ...\n", stderr);
        return 2;
    }
    for (int i = 3; i < argc; i++) {
        int one = read_file(&inputs, argv[i]);
        code = one > code ? one : code;
    }
    qsort(inputs.tables, inputs.table_count, sizeof inputs.tables[0], compare_ids);
    if (code == 0)
        code = write_file(&inputs, argv[2]);
    for (size_t i = 0; i < inputs.table_count; i++)
        bw_table_free(inputs.tables[i]);
    free(inputs.materials);
    return code;
}
