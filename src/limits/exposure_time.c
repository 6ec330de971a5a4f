/* Customary exposure times: how long a person is taken to stand in the beam when the case does not say. */
#include "internal.h"

#include <math.h>

static const struct time_row *find_time(const struct bw_table *table, enum time_kind kind, double wavelength_nm) {
    for (size_t i = 0; i < table->time_count; i++)
        if (table->times[i].kind == kind && bw_limits_in_span(&table->times[i].wavelength_nm, wavelength_nm))
            return &table->times[i];
    return NULL;
}

/* The row if the kind holds for every wavelength: the longest one, should there be several. */
static const struct time_row *for_all(const struct bw_table *table, enum time_kind kind, const double *wavelengths_nm,
                                      size_t count) {
    const struct time_row *longest = NULL;
    for (size_t i = 0; i < count; i++) {
        const struct time_row *row = find_time(table, kind, wavelengths_nm[i]);
        if (row == NULL)
            return NULL;
        if (longest == NULL || row->exposure_s > longest->exposure_s)
            longest = row;
    }
    return longest;
}

static const struct time_row *for_any(const struct bw_table *table, enum time_kind kind, const double *wavelengths_nm,
                                      size_t count) {
    for (size_t i = 0; i < count; i++) {
        const struct time_row *row = find_time(table, kind, wavelengths_nm[i]);
        if (row != NULL)
            return row;
    }
    return NULL;
}

/* The kinds that a way of viewing may take, the first that holds for all wavelengths. Not a visible beam: the blink
 * does not help, so an alignment beam counts as a glance. The skin never has the 0.25 s: no reflex protects it. */
static const struct time_row *choose(const struct bw_table *table, enum bw_viewing viewing,
                                     const double *wavelengths_nm, size_t count) {
    enum time_kind first = TIME_GLANCE, second = TIME_GLANCE;
    switch (viewing) {
    case BW_GLANCE:
        first = TIME_VISIBLE;
        break;
    case BW_DIFFUSE:
        first = second = TIME_DIFFUSE;
        break;
    case BW_SKIN_TIME:
        first = second = TIME_SKIN;
        break;
    case BW_ALIGNMENT:
        first = TIME_ALIGNMENT;
        break;
    case BW_WORKING_DAY:
    default: /* the longest is the safe side */
        return for_all(table, TIME_WORKING_DAY, wavelengths_nm, count);
    }
    const struct time_row *row = for_any(table, TIME_ULTRAVIOLET, wavelengths_nm, count);
    if (row == NULL)
        row = for_all(table, first, wavelengths_nm, count);
    if (row == NULL)
        row = for_all(table, second, wavelengths_nm, count);
    return row;
}

/* A wavelength without a row must not hide behind one that has one. */
static enum bw_status check_wavelengths(const struct bw_table *table, const double *wavelengths_nm, size_t count,
                                        struct bw_error *error) {
    if (count == 0)
        return bw_error_set(error, BW_ARGUMENT, "no wavelength given for the exposure time");
    for (size_t i = 0; i < count; i++) {
        char value[LIMITS_NUMBER_SIZE];
        if (!(wavelengths_nm[i] >= 0.0))
            return bw_error_set(error, BW_ARGUMENT, "wavelength %g nm is not a wavelength; wants 180 to 1e6 nm",
                                wavelengths_nm[i]);
        if (find_time(table, TIME_WORKING_DAY, wavelengths_nm[i]) == NULL)
            return bw_error_set(error, BW_OUT_OF_RANGE, "%s names no exposure time for %s nm", table->id,
                                bw_limits_number(value, wavelengths_nm[i]));
    }
    return BW_OK;
}

enum bw_status bw_limits_exposure_time(const struct bw_table *table, enum bw_viewing viewing,
                                       const double *wavelengths_nm, size_t count, struct bw_exposure_time *time,
                                       struct bw_error *error) {
    *time = (struct bw_exposure_time){.exposure_s = limits_nan};
    enum bw_status status = check_wavelengths(table, wavelengths_nm, count, error);
    if (status != BW_OK)
        return status;
    const struct time_row *row = choose(table, viewing, wavelengths_nm, count);
    if (row == NULL)
        return bw_error_set(error, BW_OUT_OF_RANGE, "%s names no exposure time for these wavelengths", table->id);
    time->exposure_s = row->exposure_s;
    time->source = (struct bw_source_note){table->id, "exposure", row->note.key, row->note.clause, row->note.known};
    time->aversion_response = row->kind == TIME_VISIBLE;
    return BW_OK;
}
