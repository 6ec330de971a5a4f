/* eyewear - what goggles give, and whether it is enough.
 * Uses: base, limits, hazard.  Used by: casefile, assess, report, cli.
 * Plain values, no state. */
#ifndef BEAMWARD_EYEWEAR_H
#define BEAMWARD_EYEWEAR_H

#include <beamward/hazard.h>

#ifdef __cplusplus
extern "C" {
#endif

enum { BW_RATINGS_MAX = 32 };

struct bw_rating { /* one range of wavelengths, both ends included */
    double low_nm, high_nm;
    double optical_density; /* 0 to 20 */
    int scale_number;       /* n of LBn; 0 if only an optical density is claimed */
    char modes[8];          /* "DIRM", a subset; empty if only an optical density is claimed */
};

struct bw_goggles {
    char name[BW_NAME_SIZE], title[BW_TITLE_SIZE];
    char marking[BW_TITLE_SIZE]; /* as printed on the frame; empty if only od ranges are given */
    size_t rating_count;
    struct bw_rating ratings[BW_RATINGS_MAX];
    double luminous_transmittance; /* 0 to 1; NAN if not given */
    char inspected[16];            /* day of the last inspection, YYYY-MM-DD; empty if not given */
};

/* Reads `800-820 6.2, 890-1070 5.5` (nm; a single wavelength stands for itself).
 * Returns: BW_OK; BW_INPUT with the place and what is expected. Ranges are appended to goggles. */
enum bw_status bw_eyewear_read_densities(const char *text, struct bw_goggles *goggles, struct bw_error *error);
/* Reads an EN 207 marking, `800-820 D LB6 + 890-1070 DIR LB5`: scale number n means a transmittance below 10^-n.
 * The mode letters may also stand before the wavelengths. */
enum bw_status bw_eyewear_read_marking(const char *text, struct bw_goggles *goggles, struct bw_error *error);

/* The optical density at a wavelength: the lowest of the ranges that hold it. Returns: NULL if there is none. */
const struct bw_rating *bw_eyewear_rating(const struct bw_goggles *goggles, double wavelength_nm);

enum bw_verdict { BW_SUFFICIENT, BW_INSUFFICIENT, BW_NO_RATING };
const char *bw_verdict_name(enum bw_verdict verdict); /* "sufficient", "insufficient", "no-rating" */

struct bw_emission_verdict {
    double od_required; /* unrounded */
    double od_given;    /* NAN if there is no rating */
    int scale_given;    /* 0 if none */
    enum bw_verdict verdict;
    char reason[BW_REASON_SIZE]; /* "no rating at 905 nm", "rated 5.0, needs 5.4" */
};
struct bw_pair_verdict {
    enum bw_verdict verdict; /* the worst of the emissions that need any density */
    size_t count;
    struct bw_emission_verdict emissions[BW_EMISSIONS_MAX];
};
/* Goggles against what each emission of an output needs (bw_hazard_optical_density). An emission that needs 0
 * is sufficient without a rating. A density of exactly the requirement passes. */
void bw_eyewear_judge(const struct bw_goggles *goggles, const struct bw_output *output,
                      const double od_required[BW_EMISSIONS_MAX], struct bw_pair_verdict *verdict);

/* The same, and what the equal shares would refuse passes if all that comes through these goggles together keeps the
 * limit: an aiming beam that they let through by design is no reason to refuse a pair that stops the rest.
 * term_ratios: at the place, without eyewear (bw_hazard_term_ratios). */
void bw_eyewear_judge_together(const struct bw_goggles *goggles, const struct bw_hazard *hazard,
                               const double term_ratios[BW_TERMS_MAX], const double od_required[BW_EMISSIONS_MAX],
                               struct bw_pair_verdict *verdict);

/* How the verdict on goggles came about: what each emission needs and gets, and what comes through all together. */
void bw_eyewear_working(const struct bw_goggles *goggles, const struct bw_hazard *hazard,
                        const double term_ratios[BW_TERMS_MAX], const struct bw_pair_verdict *verdict,
                        struct bw_working *working);

#ifdef __cplusplus
}
#endif
#endif
