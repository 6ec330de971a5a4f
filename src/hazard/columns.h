/* The hazards of many beams, each step one loop over columns of numbers. */
#ifndef BEAMWARD_HAZARD_COLUMNS_H
#define BEAMWARD_HAZARD_COLUMNS_H

#include <beamward/hazard.h>

/* Beams, one a place: what is given, and what grows from effect to effect. */
enum { COLUMN_SIZE = BW_BATCH_MAX };
struct beam_columns {
    double power_w[COLUMN_SIZE], diameter_m[COLUMN_SIZE], divergence_rad[COLUMN_SIZE];
    double lowest_j_m2[COLUMN_SIZE]; /* limit */
    double widest_m2[COLUMN_SIZE];   /* square of the largest diameter at which the ratio is 1; 0: it never is above */
    double ratio[COLUMN_SIZE];       /* the largest at the distance */
};

/* Takes in the limits of one effect. */
void bw_column_hazard(size_t count, const struct bw_limit_column *limits, double distance_m,
                      struct beam_columns *beams);

struct answer_columns {
    double radiant_exposure_j_m2[COLUMN_SIZE], nohd_m[COLUMN_SIZE], density[COLUMN_SIZE];
};
/* Once all effects are in. NAN for what is no beam. Returns: the number of those. */
size_t bw_column_answers(size_t count, const struct beam_columns *beams, struct answer_columns *answers);

#endif
