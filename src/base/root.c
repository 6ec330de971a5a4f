#include <beamward/base.h>

#include <float.h>
#include <math.h>

struct bracket {
    double a, b, c, fa, fb, fc; /* b the best so far, c on the other side of the root, a the one before b */
    double step, before;
};

static void order(struct bracket *s) {
    if ((s->fb > 0) == (s->fc > 0)) {
        s->c = s->a;
        s->fc = s->fa;
        s->step = s->before = s->b - s->a;
    }
    if (fabs(s->fc) < fabs(s->fb)) {
        s->a = s->b, s->b = s->c, s->c = s->a;
        s->fa = s->fb, s->fb = s->fc, s->fc = s->fa;
    }
}

/* Inverse quadratic interpolation (secant with two points) where it keeps well inside, else the middle. */
static void choose_step(struct bracket *s, double tolerance, double half) {
    if (!(fabs(s->before) >= tolerance && fabs(s->fa) > fabs(s->fb))) {
        s->step = s->before = half;
        return;
    }
    double ratio = s->fb / s->fa, p, q;
    if (s->a <= s->c && s->a >= s->c) {
        p = 2 * half * ratio;
        q = 1 - ratio;
    } else {
        double u = s->fa / s->fc, v = s->fb / s->fc;
        p = ratio * (2 * half * u * (u - v) - (s->b - s->a) * (v - 1));
        q = (u - 1) * (v - 1) * (ratio - 1);
    }
    if (p > 0)
        q = -q;
    else
        p = -p;
    if (2 * p < 3 * half * q - fabs(tolerance * q) && p < fabs(0.5 * s->before * q)) {
        s->before = s->step;
        s->step = p / q;
    } else {
        s->step = s->before = half;
    }
}

enum bw_status bw_root(bw_function *function, const void *context, double low, double high, double *root) {
    enum { STEPS_MAX = 10000 }; /* halving the whole range of a double down to its last unit takes some 2100 */
    struct bracket s = {.a = low, .b = high};
    *root = (double)NAN;
    s.fa = function(low, context);
    s.fb = function(high, context);
    if (!((s.fa <= 0 && s.fb >= 0) || (s.fa >= 0 && s.fb <= 0)))
        return BW_ARGUMENT;
    s.c = s.b;
    s.fc = s.fb;
    for (int i = 0; i < STEPS_MAX; i++) {
        order(&s);
        double tolerance = 2 * DBL_EPSILON * fabs(s.b), half = 0.5 * (s.c - s.b);
        if (fabs(half) <= tolerance || !(fabs(s.fb) > 0)) {
            *root = s.b;
            return BW_OK;
        }
        choose_step(&s, tolerance, half);
        s.a = s.b;
        s.fa = s.fb;
        s.b += fabs(s.step) > tolerance ? s.step : copysign(tolerance, half);
        s.fb = function(s.b, context);
        if (isnan(s.fb))
            return BW_ARGUMENT;
    }
    return BW_ARGUMENT; /* not reached by the bound above; never an unfinished root */
}
