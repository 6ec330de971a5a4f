/* The parts of the checker. Private to table_check*.c. */
#ifndef BEAMWARD_LIMITS_CHECK_H
#define BEAMWARD_LIMITS_CHECK_H

#include "internal.h"

enum { CHECK_SAMPLES = 128 };

/* Ascending, neighbours within 1e-9 merged. Returns: the number left. */
size_t bw_check_sort_edges(double *values, size_t count);

/* table_check_parts.c */
void bw_check_factors(const struct bw_table *table, struct bw_faults *faults); /* each row's factors reach as far */
void bw_check_parts(const struct bw_table *table, struct bw_faults *faults);   /* no section is missing */
/* The sections together leave no hole: in wavelength, in time, in source size. */
void bw_check_whole(const struct bw_table *table, struct bw_faults *faults);
/* table_check_train.c */
void bw_check_train(const struct bw_table *table, struct bw_faults *faults);

#endif
