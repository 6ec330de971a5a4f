/* What the symbols of the working stand for, and the units that its numbers are in. */
#include "internal.h"

#include <ctype.h>
#include <string.h>

static const struct report_symbol symbols[] = {
    {"A", "exposed area of skin, m2"},
    {"a", "d63 of the beam at its waist, m"},
    {"a0", "d63 of the beam at the exit, m"},
    {"acceptance", "angle that the exposure is measured in, mrad"},
    {"alpha", "angular subtense of the apparent source, mrad where nothing else is said"},
    {"alpha_max", "largest subtense that raises the limit, mrad"},
    {"alpha_min", "subtense up to which a source counts as a point, mrad"},
    {"ay", "d63 of the second axis at its narrowest, m"},
    {"b", "d63 of the beam at the lens, m"},
    {"c", "share of the allowance that each emission above it may keep behind goggles"},
    {"CA", "factor of the wavelength (C4)"},
    {"CB", "factor of the wavelength, photochemical (C3)"},
    {"CC", "factor of the wavelength (C7)"},
    {"CE", "factor of the source's size (C6)"},
    {"CP", "correction for a train of pulses (C5)"},
    {"D", "diameter of the limiting aperture, mm where it is printed, else m"},
    {"Da", "diameter that an optical aid gathers for the eye, m"},
    {"Do", "diameter of the objective of an optical aid, m"},
    {"Dg", "diameter as the maker states it, m"},
    {"d", "of a beam or a spot: d63, m; of a pulse: its duration, s"},
    {"E", "limit as irradiance, W/m2"},
    {"E_limit", "limit of the mean irradiance, W/m2"},
    {"env", "largest ratio at this distance or farther"},
    {"F", "focal length of the lens, m"},
    {"f", "pulses a second, Hz"},
    {"G", "share that glass and gloss reflect at their angle"},
    {"fb", "pulses a second inside a burst, Hz"},
    {"g", "mean irradiance over the aperture for each watt, 1/m2"},
    {"gamma", "cone that a photochemical limit is measured in, mrad"},
    {"H", "limit as radiant exposure, J/m2; H(t): for the time t"},
    {"H1", "limit per pulse by the rule of the single pulse, J/m2"},
    {"H2", "limit per pulse (continuous: of the exposure) by the rule of the average, J/m2"},
    {"H3", "limit per pulse by the rule of the train, J/m2"},
    {"HD2", "lowest limit x aperture squared of all windows, J"},
    {"k", "emissions above c"},
    {"L", "length of the path, m"},
    {"M", "magnification of an optical aid"},
    {"MPE", "the limit that holds: of a pulse, or over the exposure, J/m2"},
    {"N", "pulses counted for the rule of the train"},
    {"NA", "numerical aperture of the fibre, at 5 % of the peak"},
    {"n", "pulses in a window of time"},
    {"Np", "pulses of the whole train"},
    {"nb", "pulses of a burst"},
    {"OD", "optical density"},
    {"OD_given", "optical density that the goggles claim"},
    {"P", "average power, W"},
    {"Pc", "average power at a corner of the tolerances, W"},
    {"Pp", "peak power, W"},
    {"phi", "divergence, full angle, d63, rad"},
    {"phiy", "divergence of the second axis, full angle, d63, rad"},
    {"phig", "divergence as the maker states it, full angle, rad"},
    {"Q", "energy of a pulse, J"},
    {"R", "share that mirrors reflect"},
    {"r", "distance from the exit, or from the lit spot, m"},
    {"r0", "distance of the waist from the exit, m"},
    {"ratio", "exposure over the limit"},
    {"rs", "stand-off, m"},
    {"rho", "share that the lit surface sends out again"},
    {"S", "share of the light that reaches the place on this path"},
    {"s", "diameter of the apparent source, m"},
    {"share", "share of the power"},
    {"sum", "ratios that add; 1 keeps the limit"},
    {"T", "share that passes what is in the way"},
    {"Tb", "time from burst to burst, s"},
    {"Tg", "time from gate to gate, s"},
    {"Tc", "share that the cover of an opening passes"},
    {"T1", "time that the rule set gives by wavelength, s"},
    {"T2", "time that the rule set gives by subtense, s"},
    {"Ti", "pulses closer than this count as one, s"},
    {"t", "time that the limit is for, s"},
    {"tN", "time in which pulses are counted, s"},
    {"tb", "time that a burst lasts, s"},
    {"tg", "time that a gate is open, s"},
    {"tau", "share that goggles or an optical aid pass"},
    {"te", "exposure time, s"},
    {"tol", "tolerance as a share, 0.2 for 20 %"},
    {"w", "wavelength, nm"},
};

const struct report_symbol *report_symbols(size_t *count) {
    *count = sizeof symbols / sizeof symbols[0];
    return symbols;
}

static bool is_letter(char c) {
    return isalnum((unsigned char)c) || c == '_';
}

/* The symbol as a word of its own. */
static bool holds(const char *text, const char *symbol) {
    size_t length = strlen(symbol);
    for (const char *at = strstr(text, symbol); at != NULL; at = strstr(at + 1, symbol))
        if ((at == text || !is_letter(at[-1])) && !is_letter(at[length]))
            return true;
    return false;
}

bool report_symbol_used(const struct bw_working *working, const char *symbol) {
    for (size_t i = 0; i < working->count; i++)
        if (!working->steps[i].heading &&
            (holds(working->steps[i].symbol, symbol) || holds(working->steps[i].formula, symbol)))
            return true;
    return false;
}

void report_symbol_mark(const struct bw_working *working, bool used[REPORT_SYMBOLS_MAX]) {
    for (size_t i = 0; i < sizeof symbols / sizeof symbols[0]; i++)
        used[i] = used[i] || report_symbol_used(working, symbols[i].symbol);
}

const char report_legend_words[] =
    "The numbers stand in the units of this list. ceil and floor: the next whole number up and down, but for rounding "
    "in "
    "the last digits; pi = 3.14159265. 1 mm = 0.001 m, 1 mrad = 0.001 rad, 1 J/cm2 = 10000 J/m2, 1 mW/cm2 = 10 W/m2, "
    "1 ft = 0.3048 m. d63: where the irradiance has fallen to 1/e of its peak; d86 (1/e2) = sqrt(2) d63, FWHM = "
    "sqrt(ln(2)) d63. Numbers are shown to ten digits, results to seven; the evaluation keeps all of them, and nothing "
    "is rounded between steps.";
