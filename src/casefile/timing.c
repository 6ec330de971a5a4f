/* The timing of an emission: bursts, gates, counts, lists of pulses. */
#include "internal.h"

#include <stdlib.h>
#include <string.h>

enum { LIST_PATH_SIZE = 512, PULSES_IN_ALL = 4 * BW_PULSES_MAX };

/* A path beside the case file, unless it says from where it counts. Returns: NULL if memory is short. */
static char *path_beside(const char *case_path, const char *path) {
    struct bw_text text = {0};
    const char *slash = strrchr(case_path, '/');
    if (slash != NULL && path[0] != '/')
        bw_text_add_bytes(&text, case_path, (size_t)(slash - case_path) + 1);
    bw_text_add(&text, "%s", path);
    if (text.failed) {
        bw_text_free(&text);
        return NULL;
    }
    return text.data;
}

static enum presence read_list(struct reading *reading, const struct section *section, struct bw_timing *timing) {
    char name[LIST_PATH_SIZE];
    const struct bw_ini_entry *entry = value_entry(section, "pulses", NULL);
    enum presence presence = value_text(reading, section, "pulses", name, sizeof name);
    if (presence != GIVEN)
        return presence;
    if (reading->path == NULL) {
        fault_key(reading, entry, "a file of pulses is looked for beside the case file, and there is none here");
        return WRONG;
    }
    struct bw_error error = {.status = BW_OK};
    struct bw_pulse *pulses;
    size_t left = PULSES_IN_ALL - reading->pulse_total;
    char *path = path_beside(reading->path, name);
    enum bw_status status = path == NULL ? BW_NO_MEMORY
                                         : pulses_csv_read(path, name, left < BW_PULSES_MAX ? left : BW_PULSES_MAX,
                                                           &pulses, &timing->pulses_given, &error);
    free(path);
    if (status == BW_OK) {
        timing->pulses = pulses; /* freed with the case */
        reading->pulse_total += timing->pulses_given;
        return GIVEN;
    }
    if (status == BW_NO_MEMORY)
        reading->no_memory = true;
    else
        fault_key(reading, entry, "%s", error.text);
    return WRONG;
}

enum presence read_timing(struct reading *reading, const struct section *section, struct bw_timing *timing) {
    static const struct range on_s = {1e-13, 3e4}, periods_s = {1e-12, 1e6}, rates_hz = {1e-6, 1e12}, counts = {1., 1e9};
    *timing = bw_timing_none();
    const enum presence presences[] = {
        value_number(reading, section, "pulse_count", counts, &timing->pulse_count),
        value_number(reading, section, "burst_on", on_s, &timing->burst_on_s),
        value_number(reading, section, "burst_period", periods_s, &timing->burst_period_s),
        value_number(reading, section, "burst_pulses", counts, &timing->burst_pulses),
        value_number(reading, section, "burst_rate", rates_hz, &timing->burst_rate_hz),
        value_number(reading, section, "gate_on", on_s, &timing->gate_on_s),
        value_number(reading, section, "gate_period", periods_s, &timing->gate_period_s),
        read_list(reading, section, timing),
    };
    enum presence all = ABSENT;
    for (size_t i = 0; i < sizeof presences / sizeof *presences && all != WRONG; i++)
        all = presences[i] != ABSENT ? presences[i] : all;
    return all;
}

void free_timings(struct bw_timing *timings, size_t count) {
    for (size_t i = 0; timings != NULL && i < count; i++) {
        union {
            const struct bw_pulse *read;
            void *owned;
        } pulses = {timings[i].pulses};
        free(pulses.owned);
    }
    free(timings);
}
