/* What the LSO has to know, worst first, in plain words. */
#include "internal.h"

#include <stdarg.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

/* A failed addition is seen at the end: finding_count then counts an empty text. */
static void append(const struct assess_job *job, enum bw_severity severity, const char *subject, char *text) {
    struct bw_result *result = job->result;
    struct bw_finding *more = realloc(result->findings, (result->finding_count + 1) * sizeof *more);
    if (!more || !text) {
        free(text);
        if (more)
            result->findings = more;
        bw_error_set(job->error, BW_NO_MEMORY, "out of memory");
        return;
    }
    result->findings = more;
    struct bw_finding *finding = &more[result->finding_count++];
    *finding = (struct bw_finding){.severity = severity, .text = text};
    snprintf(finding->subject, sizeof finding->subject, "%s", subject);
}

void assess_finding(const struct assess_job *job, enum bw_severity severity, const char *subject, const char *format,
                    ...) {
    va_list arguments, again;
    va_start(arguments, format);
    va_copy(again, arguments);
    int length = vsnprintf(NULL, 0, format, arguments);
    va_end(arguments);
    char *text = length < 0 ? NULL : malloc((size_t)length + 1);
    if (text)
        vsnprintf(text, (size_t)length + 1, format, again);
    va_end(again);
    append(job, severity, subject, text);
}

void assess_finding_text(const struct assess_job *job, enum bw_severity severity, const char *subject,
                         struct bw_text *text) {
    if (text->failed) {
        bw_text_free(text);
        bw_error_set(job->error, BW_NO_MEMORY, "out of memory");
        return;
    }
    append(job, severity, subject, text->data);
    *text = (struct bw_text){0};
}

/* Insertion: stable, so that findings of one severity keep the order of the case. */
static void sort_by_severity(struct bw_finding *findings, size_t count) {
    for (size_t i = 1; i < count; i++) {
        struct bw_finding moving = findings[i];
        size_t j = i;
        for (; j > 0 && findings[j - 1].severity > moving.severity; j--)
            findings[j] = findings[j - 1];
        findings[j] = moving;
    }
}

/* All findings of the parts that were asked for.
 * Returned: job->result->findings, needs_action
 * Returns:  BW_OK; BW_NO_MEMORY */
enum bw_status assess_findings(const struct assess_job *job) {
    struct bw_error own = {0};
    struct assess_job inner = *job;
    inner.error = &own;
    assess_incident_findings(&inner);
    assess_people_findings(&inner);
    assess_opening_findings(&inner);
    assess_eyewear_findings(&inner);
    assess_beam_findings(&inner);
    assess_source_findings(&inner);
    if (own.status != BW_OK)
        return bw_error_set(job->error, own.status, "%s", own.text);
    struct bw_result *result = job->result;
    sort_by_severity(result->findings, result->finding_count);
    for (size_t i = 0; i < result->finding_count; i++)
        if (result->findings[i].severity == BW_DANGER || result->findings[i].severity == BW_ACTION)
            result->needs_action = true;
    return BW_OK;
}
