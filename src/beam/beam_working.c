/* The width of a beam and what of it falls into an aperture, with the steps that lead there. */
#include <beamward/beam.h>

#include <math.h>

typedef char number[BW_NUMBER_SIZE];

static const char *text(number out, double value) {
    return bw_working_number(out, value);
}

static bool agree(double a, double b) {
    return fabs(a - b) <= 1e-9 * fabs(b);
}

/* The formula in the header, that the steps print. */
static double closed_form_m(const struct bw_beam *beam, double distance_m) {
    double growth_m = beam->divergence_rad * fabs(distance_m - beam->waist_m);
    return beam->spread == BW_LINEAR ? beam->diameter_m + growth_m : hypot(beam->diameter_m, growth_m);
}

/* One axis of an elliptical beam as a round one. */
static struct bw_beam axis_of(const struct bw_beam *beam, bool second) {
    struct bw_beam axis = {.profile = beam->profile,
                           .spread = beam->spread,
                           .diameter_m = second ? beam->diameter_y_m : beam->diameter_m,
                           .divergence_rad = second ? beam->divergence_y_rad : beam->divergence_rad,
                           .waist_m = beam->waist_m,
                           .exit_diameter_m = second ? beam->exit_diameter_y_m : beam->exit_diameter_m};
    return axis;
}

static void write_spreading(const struct bw_beam *beam, double distance_m, double diameter_m,
                            struct bw_working *working) {
    number a, phi, r, r0;
    text(a, beam->diameter_m);
    text(phi, beam->divergence_rad);
    text(r, distance_m > beam->waist_m ? distance_m : beam->waist_m);
    text(r0, distance_m > beam->waist_m ? beam->waist_m : distance_m);
    bool before = distance_m < beam->waist_m;
    if (beam->spread == BW_LINEAR)
        bw_working_step(working, "d", diameter_m, "m", NULL, before ? "a + phi (r0 - r)" : "a + phi (r - r0)",
                        "%s + %s * (%s - %s)", a, phi, r, r0);
    else
        bw_working_step(working, "d", diameter_m, "m", NULL,
                        before ? "sqrt(a^2 + (phi (r0 - r))^2)" : "sqrt(a^2 + (phi (r - r0))^2)",
                        "sqrt(%s^2 + (%s * (%s - %s))^2)", a, phi, r, r0);
    bw_working_note(working, "d63, %s spread", beam->spread == BW_LINEAR ? "linear" : "hyperbolic");
}

double bw_beam_diameter_working(const struct bw_beam *beam, double distance_m, struct bw_working *working) {
    double diameter_m = bw_beam_diameter_m(beam, distance_m);
    number a;
    if (working == NULL)
        return diameter_m;
    if (beam->elliptical) {
        struct bw_beam first = axis_of(beam, false), second = axis_of(beam, true);
        bool is_second = bw_beam_diameter_m(&second, distance_m) < bw_beam_diameter_m(&first, distance_m);
        bw_beam_diameter_working(is_second ? &second : &first, distance_m, working);
        bw_working_note(working, "the narrower axis, %s",
                        is_second ? "the second: a and phi are ay and phiy" : "the first");
        return diameter_m;
    }
    if (!(beam->divergence_rad > 0.)) {
        bw_working_step(working, "d", diameter_m, "m", NULL, "a", "%s", text(a, beam->diameter_m));
        bw_working_note(working, "d63, collimated");
    } else if (!(distance_m < HUGE_VAL)) {
        bw_working_step(working, "d", diameter_m, "m", NULL, NULL, NULL);
        bw_working_note(working, "spreads without end");
    } else if (agree(closed_form_m(beam, distance_m), diameter_m)) {
        write_spreading(beam, distance_m, diameter_m, working);
    } else if (agree(beam->exit_diameter_m, diameter_m)) {
        bw_working_step(working, "d", diameter_m, "m", NULL, "a0", "%s", text(a, beam->exit_diameter_m));
        bw_working_note(working, "d63; before its waist a beam is never wider than it left the exit");
    } else {
        bw_working_step(working, "d", diameter_m, "m", NULL, NULL, NULL);
    }
    return diameter_m;
}

static void write_top_hat(double diameter_m, double aperture_m, double per_w, struct bw_working *working) {
    number d, D;
    bw_working_step(working, "g", per_w, "1/m2", NULL, "4 / (pi max(D, d)^2)", "4 / (pi * max(%s, %s)^2)",
                    text(D, aperture_m), text(d, diameter_m));
}

static void write_gaussian(double diameter_m, double aperture_m, double per_w, struct bw_working *working) {
    static const double tiny =
        1e-6; /* of (D/d)^2: below, 1 - exp(-x) would lose its digits, and x (1 - x/2) loses none */
    number d, D;
    text(d, diameter_m);
    text(D, aperture_m);
    double x = aperture_m / diameter_m * (aperture_m / diameter_m);
    if (x > tiny)
        bw_working_step(working, "g", per_w, "1/m2", NULL, "(1 - exp(-(D/d)^2)) / (pi D^2 / 4)",
                        "(1 - exp(-(%s / %s)^2)) / (pi * %s^2 / 4)", D, d, D);
    else
        bw_working_step(working, "g", per_w, "1/m2", NULL, "4 / (pi d^2) (1 - (D/d)^2 / 2)",
                        "4 / (pi * %s^2) * (1 - (%s / %s)^2 / 2)", d, D, d);
}

double bw_beam_irradiance_working(const struct bw_beam *beam, double distance_m, double aperture_m,
                                  struct bw_working *working) {
    static const char *const profiles[] = {"Gaussian profile", "top hat"};
    double diameter_m = bw_beam_diameter_m(beam, distance_m);
    double per_w = bw_beam_irradiance_per_w(beam, distance_m, aperture_m);
    struct bw_beam plain = {.profile = beam->profile, .diameter_m = diameter_m, .exit_diameter_m = diameter_m};
    if (working == NULL)
        return per_w;
    bool closed = diameter_m > 0. && diameter_m < HUGE_VAL && aperture_m > 0. &&
                  agree(bw_beam_irradiance_per_w(&plain, 0., aperture_m), per_w);
    if (!closed) {
        bw_working_step(working, "g", per_w, "1/m2", NULL, NULL, NULL);
        bw_working_note(working, "mean irradiance per watt over the aperture: %s",
                        !(diameter_m < HUGE_VAL) ? "nothing is left"
                        : beam->profile == BW_TOP_HAT
                            ? "the common area of ellipse and aperture over the product of their areas"
                            : "of the elliptical Gaussian, by quadrature");
        if (beam->elliptical && diameter_m < HUGE_VAL)
            bw_working_note(working, "axes %g m and %g m", diameter_m, bw_beam_widest_m(beam, distance_m));
        return per_w;
    }
    if (beam->profile == BW_TOP_HAT)
        write_top_hat(diameter_m, aperture_m, per_w, working);
    else
        write_gaussian(diameter_m, aperture_m, per_w, working);
    bw_working_note(working, "mean irradiance per watt over the aperture, at the centre of the beam; %s",
                    profiles[beam->profile == BW_TOP_HAT]);
    return per_w;
}
