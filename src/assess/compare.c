/* The distances of every handpiece by every rule set, and why they differ. */
#include "internal.h"

#include <stdio.h>
#include <stdlib.h>
#include <string.h>

const struct bw_rule_cell *bw_comparison_cell(const struct bw_comparison *comparison, size_t handpiece, size_t table) {
    return &comparison->cells[handpiece * comparison->table_count + table];
}

const struct bw_distance_result *bw_comparison_distance(const struct bw_comparison *comparison, size_t handpiece,
                                                        size_t table) {
    const struct bw_result *result = bw_comparison_cell(comparison, handpiece, table)->result;
    return result != NULL ? &result->distances[0] : NULL;
}

void assess_comparison_free(struct bw_comparison *comparison) {
    if (comparison == NULL)
        return;
    for (size_t i = 0; comparison->cells != NULL && i < comparison->handpiece_count * comparison->table_count; i++) {
        bw_result_free(comparison->cells[i].result);
        free(comparison->cells[i].reason);
    }
    for (size_t i = 0; comparison->sentences != NULL && i < comparison->handpiece_count; i++)
        free(comparison->sentences[i]);
    free(comparison->tables);
    free(comparison->cells);
    free(comparison->sentences);
    free(comparison);
}

static enum bw_status no_memory(const struct assess_job *job) {
    return bw_error_set(job->error, BW_NO_MEMORY, "out of memory");
}

/* The one that the case is judged by first; a rule set that was loaded stands for the built-in one of its name. */
static enum bw_status make(const struct assess_job *job, struct bw_comparison *comparison) {
    comparison->tables = calloc(bw_tables_count() + 1, sizeof *comparison->tables);
    if (comparison->tables == NULL)
        return no_memory(job);
    comparison->tables[comparison->table_count++] = job->table;
    for (size_t i = 0; i < bw_tables_count(); i++)
        if (strcmp(bw_table_id(bw_tables_at(i)), bw_table_id(job->table)) != 0)
            comparison->tables[comparison->table_count++] = bw_tables_at(i);
    comparison->handpiece_count = job->result->distance_count;
    size_t cells = comparison->handpiece_count * comparison->table_count + 1;
    comparison->cells = calloc(cells, sizeof *comparison->cells);
    comparison->sentences = calloc(comparison->handpiece_count + 1, sizeof *comparison->sentences);
    return comparison->cells != NULL && comparison->sentences != NULL ? BW_OK : no_memory(job);
}

static enum bw_status fill(const struct assess_job *job, const struct bw_distance_result *distance,
                           const struct bw_table *table, struct bw_rule_cell *cell) {
    struct bw_assess_options options = {.parts = BW_PART_DISTANCE,
                                        .laser = assess_laser(job, distance)->name,
                                        .handpiece = assess_handpiece(job, distance)->name};
    struct bw_error cause = {0};
    enum bw_status status = bw_assess(job->the_case, table, &options, &cell->result, &cause);
    if (status == BW_OK)
        return BW_OK;
    if (status != BW_OUT_OF_RANGE)
        return bw_error_set(job->error, status, "%s", cause.text);
    struct bw_text reason = {0};
    double low_nm, high_nm;
    bw_table_span(table, BW_EYE, &low_nm, &high_nm);
    bw_text_add(&reason, "%s", cause.text);
    if (strstr(cause.text, "covers") == NULL)
        bw_text_add(&reason, "; it covers %g to %g nm", low_nm, high_nm);
    if (reason.failed)
        bw_text_free(&reason);
    cell->reason = reason.data;
    return cell->reason != NULL ? BW_OK : no_memory(job);
}

/* One emission of a handpiece as every rule set limits it. */
static void fill_columns(const struct assess_job *job, const struct bw_comparison *comparison, size_t handpiece,
                         size_t emission, struct bw_column *columns) {
    for (size_t k = 0; k < comparison->table_count; k++) {
        const struct bw_distance_result *distance = bw_comparison_distance(comparison, handpiece, k);
        columns[k] = (struct bw_column){.table = comparison->tables[k], .out_of_range = distance == NULL};
        if (distance == NULL)
            continue;
        const struct bw_emission *which = &assess_handpiece(job, distance)->output.emissions[emission];
        columns[k].limit = distance->emissions[emission].limit;
        columns[k].figure = columns[k].limit.irradiance_w_m2;
        columns[k].exposure_s = distance->glance.exposure_s;
        columns[k].wavelength_nm = which->wavelength_nm;
        columns[k].has_train = !which->continuous;
    }
}

/* A sentence for each emission on which the rule sets differ. */
static void explain_emissions(const struct assess_job *job, const struct bw_comparison *comparison, size_t handpiece,
                              struct bw_column *columns, struct bw_text *words) {
    const struct bw_output *output = &assess_handpiece(job, &job->result->distances[handpiece])->output;
    char what[BW_NAME_SIZE + 40];
    size_t agreed = 0;
    for (size_t i = 0; i < output->count; i++) {
        fill_columns(job, comparison, handpiece, i, columns);
        if (!bw_columns_differ(columns, comparison->table_count)) {
            agreed++;
            continue;
        }
        snprintf(what, sizeof what, "eye limits of %s (%.6g nm)", output->emissions[i].name,
                 output->emissions[i].wavelength_nm);
        bw_text_add(words, "%s", words->length > 0 ? " " : "");
        bw_column_words(words, columns, comparison->table_count, what);
    }
    if (agreed == output->count)
        bw_column_words(words, columns, comparison->table_count, "eye limits");
    else if (agreed > 0)
        bw_text_add(words, " They agree on the other emission%s.", agreed == 1 ? "" : "s");
}

static enum bw_status explain(const struct assess_job *job, struct bw_comparison *comparison, size_t handpiece) {
    struct bw_column *columns = calloc(comparison->table_count, sizeof *columns);
    struct bw_text words = {0};
    if (columns == NULL)
        return no_memory(job);
    explain_emissions(job, comparison, handpiece, columns, &words);
    free(columns);
    if (words.failed || words.data == NULL) {
        bw_text_free(&words);
        return no_memory(job);
    }
    comparison->sentences[handpiece] = words.data;
    return BW_OK;
}

/* Returned: job->result->comparison
 * Returns:  BW_OK; BW_NO_MEMORY. A rule set without a row for a handpiece is a cell with its reason. */
enum bw_status assess_compare(const struct assess_job *job) {
    struct bw_comparison *comparison = calloc(1, sizeof *comparison);
    job->result->comparison = comparison;
    enum bw_status status = comparison != NULL ? make(job, comparison) : no_memory(job);
    for (size_t i = 0; status == BW_OK && i < comparison->handpiece_count; i++) {
        for (size_t k = 0; status == BW_OK && k < comparison->table_count; k++)
            status = fill(job, &job->result->distances[i], comparison->tables[k],
                          &comparison->cells[i * comparison->table_count + k]);
        if (status == BW_OK)
            status = explain(job, comparison, i);
    }
    return status;
}
