/* Broken rule sets: each is the small good one of small_table.h with one thing wrong, and must be refused with the
 * exact line, section, key and text. */
#include <setjmp.h>
#include <stdarg.h>
#include <stddef.h>
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <cmocka.h>

#include <beamward/limits.h>

#include "unit/small_table.h"

struct bad_case {
    const char *name;
    const char *out, *in; /* the first is replaced by the second */
    int line;
    const char *section, *key, *text;
};
#define TEN     "xxxxxxxxxx"
#define LONG    TEN TEN TEN TEN TEN TEN TEN TEN TEN TEN TEN TEN TEN TEN TEN TEN TEN TEN TEN TEN
#define FACTORS "5" /* BW_FACTORS_MAX but for the one of (alpha/gamma)^2 */
static struct bad_case bad_cases[] = {
    /* the head */
    {"no id", "id = small\n", "", 0, "table", "id", "is missing; a rule set must name its id"},
    {"no title", "title = a small rule set\n", "", 0, "table", "title", "is missing; a rule set must name its title"},
    {"no source", "source = invented for this test\n", "", 0, "table", "source",
     "is missing; a rule set must name its source"},
    {"no edition", "edition = first\n", "", 0, "table", "edition", "is missing; a rule set must name its edition"},
    {"id not a name", "id = small", "id = my table", 0, "table", "id",
     "'my table' is not a name; wants a-z, 0-9 and hyphen"},
    {"unknown key in the head", "edition = first", "edition = first\nyear = 2014", 6, "table", "year",
     "unknown key; wants note_01 next"},
    {"unknown section", "[cone]", "[cones]", 46, "cones", "",
     "unknown section; wants table, factor NAME, source-size, eye EFFECT, skin, aperture, cone, repetition, train, "
     "additivity or exposure"},
    /* gaps and overlaps */
    {"gap in time", "1e-13 .. 1e-5 | H", "1e-13 .. 9e-6 | H", 19, "eye retina-thermal", "",
     "gap: no row covers 400 .. 700 nm at 9e-6 .. 1e-5 s"},
    {"gap in wavelength", "r03 = 700 .. 1400 | 1e-5", "r03 = 701 .. 1400 | 1e-5", 19, "eye retina-thermal", "",
     "gap: no row covers 700 .. 701 nm at 1e-5 .. 10 s"},
    {"gap at an edge", "r01 = 400 .. 600 | 10 .. 3e4 | G", "r01 = 400 .. <600 | 10 .. 3e4 | G", 33,
     "eye retina-photochemical", "", "gap: no row covers exactly 600 nm at 10 .. 3e4 s"},
    {"gap at the end", "r01 = 400 .. 600 | 10 .. 3e4 | G", "r01 = 400 .. 600 | 10 .. 2e4 | G", 33,
     "eye retina-photochemical", "", "gap: no row covers 400 .. 600 nm at 2e4 .. 3e4 s"},
    {"overlap in time", "1e-13 .. 1e-5 | H", "1e-13 .. 2e-5 | H", 21, "eye retina-thermal", "r02",
     "overlaps r01 at 400 .. 700 nm, 1e-5 .. 2e-5 s"},
    {"overlap in wavelength", "r02 = 400 .. 700 | 1e-5", "r02 = 400 .. 710 | 1e-5", 22, "eye retina-thermal", "r03",
     "overlaps r02 at 700 .. 710 nm, 1e-5 .. 10 s"},
    {"row beyond the cover", "r01 = 400 .. 1400 | 10 .. 3e4 | E | 10 |", "r01 = 400 .. 1400 | 9 .. 3e4 | E | 10 |", 26,
     "eye retina-thermal point", "r01", "reaches beyond what the section covers; wants it inside `covers`"},
    {"symbolic edges that do not meet", "10 .. t2 | H", "10 .. 100 | H", 31, "eye retina-thermal extended", "r02",
     "overlaps r01 at 400 .. 1400 nm, 10 .. 100 s"},
    {"no cover", "covers = 400 .. 600 | 10 .. 3e4\n", "", 32, "eye retina-photochemical", "covers",
     "is missing; wants wavelength nm | time s that the rows cover"},
    {"a section without rows", "r01 = 400 .. 600 | 10 .. 3e4 | G | 1e6 | 0 | - | B | memory\n", "", 32,
     "eye retina-photochemical", "", "has no rows"},
    {"sources left out", "subtense_mrad = 1.5 .. 1571", "subtense_mrad = 2 .. 1571", 23, "eye retina-thermal point",
     "subtense_mrad", "gap: the sections of this effect do not take in every source from 0 to 1571 mrad"},
    {"hole between sections", "covers = 400 .. 1400 | 1e-13 .. 10\n", "covers = 400 .. 1400 | 1e-13 .. 9\n", 21,
     "eye retina-thermal", "r02", "reaches beyond what the section covers; wants it inside `covers`"},
    {"aperture gap", "r01 = retina-thermal | 400 .. 1400 | 1e-13", "r01 = retina-thermal | 400 .. 1400 | 1e-12", 43,
     "aperture", "", "gap: no row covers 400 .. 1400 nm at 1e-13 .. 1e-12 s"},
    {"aperture missing", "r03 = skin | 400 .. 1400 | 1e-13 .. 3e4 | 3.5 | 0 | D | memory\n", "", 0, "aperture", "",
     "has no row for skin"},
    {"cone missing", "[cone]\nr01 = 400 .. 600 | 10 .. 3e4 | 11 | 0 | D | memory\n", "", 0, "cone", "",
     "has no row for retina-photochemical"},
    {"radiance without a cone", "| E | 2000 |", "| L | 2000 |", 0, "cone", "",
     "G and L need a measuring cone: only retina-photochemical has one"},
    {"alpha_max gap", "max_01 = 1e-13 .. 3e4", "max_01 = 1e-13 .. 1e4", 14, "source-size", "",
     "gap: no row covers 180 .. 1e6 nm at 1e4 .. 3e4 s"},
    {"train gap", ">amax .. 1571 | 1 ..", ">amax .. 1570 | 1 ..", 53, "train", "",
     "gap: no row covers a long pulse at 1570.5 mrad, N = 1, 0 s exposure"},
    {"train overlap", "0 .. amax", "0 .. 101", 55, "train", "r03", "overlaps r02"},
    {"train edge left out", "0 .. amax", "0 .. <amax", 53, "train", "",
     "gap: no row covers a long pulse at 100 mrad, N = 1, 0 s exposure"},
    /* factors */
    {"unknown factor", "0.75 | ca ce | B | memory\n[eye retina-thermal point]",
     "0.75 | cx ce | B | memory\n[eye retina-thermal point]", 22, "eye retina-thermal", "r03",
     "unknown factor 'cx'; wants ce, area or the NAME of a [factor NAME] section"},
    {"factor twice", "| ca ce | B | memory\nr02 = 400", "| ca ca | B | memory\nr02 = 400", 20, "eye retina-thermal",
     "r01", "factor 'ca' is given twice; wants it once"},
    {"exponent unreadable", "t2^-0.25", "t2^x", 31, "eye retina-thermal extended", "r02",
     "factor 't2^x' has no readable exponent; wants a number such as t2^-0.25"},
    {"factor too short", "r02 = 700 .. 1400 | 0 | 1", "r02 = 700 .. 1300 | 0 | 1", 20, "eye retina-thermal", "r01",
     "factor ca does not reach over the whole row"},
    {"factor gap", "r02 = 700 .. 1400 | 0 | 1", "r02 = 710 .. 1400 | 0 | 1", 8, "factor ca", "r02",
     "leaves a gap after r01; wants to begin at 700"},
    {"factor overlap", "r02 = 700 .. 1400 | 0 | 1", "r02 = 690 .. 1400 | 0 | 1", 8, "factor ca", "r02",
     "overlaps r01; wants to begin at 700"},
    {"factor of nothing", "r01 = 400 .. 700 | 1 | 0 | 0", "r01 = 400 .. 700 | 0 | 0 | 0", 7, "factor ca", "r01",
     "offset and scale are both 0; a factor must be above 0"},
    {"factor argument unknown", "argument = subtense_mrad", "argument = alpha", 10, "factor t2", "argument",
     "unknown argument 'alpha'; wants wavelength_nm or subtense_mrad"},
    {"factor with a built-in name", "[factor ca]", "[factor ce]", 6, "factor ce", "",
     "'ce' cannot name a factor; wants a-z and 0-9, and not ce, area or amax"},
    {"time edge unknown", "t2 .. 3e4", "t3 .. 3e4", 31, "eye retina-thermal extended", "r02",
     "time edge 't3' is neither a number nor a factor of this rule set"},
    {"counting factor unknown", "count = t2", "count = t9", 50, "repetition", "count",
     "unknown factor 't9'; wants all or the NAME of a [factor NAME] section"},
    /* slips that the lower limit, the cap of a correction or the order of the times would hide */
    {"slope without a scale", "r01 = 400 .. 700 | 1 | 0 | 0 |", "r01 = 400 .. 700 | 1 | 0 | 0.002 |", 7, "factor ca",
     "r01", "slope and origin change nothing here; wants 0 for both, or a scale and a slope"},
    {"origin without a slope", "r02 = 700 .. 1400 | 0 | 1 | 0.002 |", "r02 = 700 .. 1400 | 0 | 1 | 0 |", 8, "factor ca",
     "r02", "slope and origin change nothing here; wants 0 for both, or a scale and a slope"},
    {"correction above 1", "| 1 .. | 0 .. | 1 | 0 | 0 | E | memory\nr02",
     "| 1 .. | 0 .. | 1.2 | 0 | 0 | E | memory\nr02", 53, "train", "r01",
     "correction 1.2 would raise the limit of a pulse; wants at most 1"},
    {"floor below the correction", "| 1 .. | 0 .. | 1 | 0 | 0 | E | memory\nr02",
     "| 1 .. | 0 .. | 1 | 0 | 0.4 | E | memory\nr02", 53, "train", "r01",
     "floor 0.4 is never reached; wants 0, or one above the correction at the largest N"},
    {"hole between grouping times", "ti_01 = 400 .. 1400 | 5e-6 | E | memory\n",
     "ti_01 = 400 .. 1050 | 5e-6 | E | memory\nti_02 = 1060 .. 1400 | 1.3e-5 | E | memory\n", 50, "repetition", "ti_02",
     "leaves a gap after ti_01; wants to begin at 1050"},
    {"grouping times overlap", "ti_01 = 400 .. 1400 | 5e-6 | E | memory\n",
     "ti_01 = 400 .. 1050 | 5e-6 | E | memory\nti_02 = 1040 .. 1400 | 1.3e-5 | E | memory\n", 50, "repetition", "ti_02",
     "overlaps ti_01; wants to begin at 1050"},
    {"band of a sum", "r01 = 400 .. 1400 | 400 .. 1400 | eye skin", "r01 = 400 .. 1400 | 400 .. 1390 | eye skin", 57,
     "additivity", "r01", "band 400 .. 1390 overlaps 400 .. 1400 of r01; wants the same bands in all rows"},
    {"time beyond the working day", "r02 = glance | 400 .. 1400", "r02 = glance | 390 .. 1400", 60, "exposure", "r02",
     "reaches beyond the wavelengths of the working day"},
    {"time within the ultraviolet", "r06 = working-day | 400 .. 1400 | 3e4 | G | memory\n",
     "r06 = working-day | 400 .. 1400 | 3e4 | G | memory\nr07 = ultraviolet | 400 .. <410 | 3e4 | G | memory\n", 59,
     "exposure", "r01", "reaches into the ultraviolet, whose time goes first"},
    {"source edges that do not meet", "subtense_mrad = 1.5 .. 1571", "subtense_mrad = 1.4 .. 1571", 27,
     "eye retina-thermal extended", "subtense_mrad",
     "has an edge where no other section of this effect begins or ends"},
    /* cells */
    {"cell missing", "| H | 18 | 0.75 | ce | B | memory", "| H | 18 | 0.75 | ce | memory", 21, "eye retina-thermal",
     "r02",
     "has 7 columns; wants 8: wavelength nm | time s | quantity | value | time power | factors | clause | known"},
    {"cell too many", "| 2000 | 0 | ca", "| 2000 | 0 | 0 | ca", 37, "skin", "r01",
     "has 9 columns; wants 8: wavelength nm | time s | quantity | value | time power | factors | clause | known"},
    {"cell empty", "| 2000 | 0 | ca", "| 2000 |  | ca", 37, "skin", "r01",
     "column 5 is empty; wants 8: wavelength nm | time s | quantity | value | time power | factors | clause | known"},
    {"cells slipped", "| E | 2000 | 0 |", "| 2000 | E | 0 |", 37, "skin", "r01",
     "unknown quantity '2000'; wants H, E, G or L"},
    {"unknown quantity", "| E | 2000 |", "| W | 2000 |", 37, "skin", "r01", "unknown quantity 'W'; wants H, E, G or L"},
    {"value with a unit", "| 2000 | 0 | ca", "| 2000 W/m2 | 0 | ca", 37, "skin", "r01",
     "value '2000 W/m2' is not a number; wants a plain decimal number such as 5e-3"},
    {"decimal comma", "| 0.75 | ce | B", "| 0,75 | ce | B", 21, "eye retina-thermal", "r02",
     "time power '0,75' is not a number; wants a plain decimal number such as 5e-3"},
    {"value NaN", "| 2000 | 0 | ca", "| nan | 0 | ca", 37, "skin", "r01",
     "value 'nan' is not a number; wants a plain decimal number such as 5e-3"},
    {"value infinite", "| 2000 | 0 | ca", "| inf | 0 | ca", 37, "skin", "r01",
     "value 'inf' is not a number; wants a plain decimal number such as 5e-3"},
    {"value 0", "| 2000 | 0 | ca", "| 0 | 0 | ca", 37, "skin", "r01", "value 0 is out of range; wants 1e-12 to 1e16"},
    {"value negative", "| 2000 | 0 | ca", "| -2000 | 0 | ca", 37, "skin", "r01",
     "value -2000 is out of range; wants 1e-12 to 1e16"},
    {"quotient by 0", "1/98.5", "1/0", 12, "factor t2", "r02",
     "slope '1/0' is not a number; wants a plain decimal number such as 5e-3"},
    {"H falls with time", "| 0.75 | ce | B", "| -0.75 | ce | B", 21, "eye retina-thermal", "r02",
     "time power -0.75 makes the exposure fall with time; wants 0 to 1 with H and G, -1 to 0 with E and L"},
    {"E rises with time", "| 2000 | 0 | ca", "| 2000 | 0.25 | ca", 37, "skin", "r01",
     "time power 0.25 makes the irradiance rise with time; wants 0 to 1 with H and G, -1 to 0 with E and L"},
    {"known unknown", "| ca | C | read\n[skin", "| ca | C | seen\n[skin", 37, "skin", "r01",
     "unknown mark 'seen'; wants read or memory"},
    /* ranges */
    {"wavelength backwards", "r02 = 400 .. 700 | 1e-5", "r02 = 700 .. 400 | 1e-5", 21, "eye retina-thermal", "r02",
     "wavelength 700 .. 400 runs backwards; wants the lower edge first"},
    {"time backwards", "1e-13 .. 1e-5 | H", "1e-5 .. 1e-13 | H", 20, "eye retina-thermal", "r01",
     "time 1e-5 .. 1e-13 runs backwards; wants the earlier edge first"},
    {"not a range", "r02 = 400 .. 700 | 1e-5", "r02 = 400-700 | 1e-5", 21, "eye retina-thermal", "r02",
     "wavelength '400-700' is not a range; wants two values with .. between them"},
    {"wavelength in um", "r02 = 400 .. 700 | 1e-5", "r02 = 0.4 .. 700 | 1e-5", 21, "eye retina-thermal", "r02",
     "wavelength 0.4 is out of range; wants 180 to 1e6"},
    {"time out of range", "1e-13 .. 1e-5 | H", "1e-14 .. 1e-5 | H", 20, "eye retina-thermal", "r01",
     "time edge 1e-14 s is out of range; wants 1e-13 to 3e4 s"},
    {"open lower edge", "r02 = 400 .. 700 | 1e-5", "r02 = >400 .. 700 | 1e-5", 21, "eye retina-thermal", "r02",
     "wavelength '>400 .. 700' has an open edge; wants closed edges here"},
    {"open time", "1e-13 .. 1e-5 | H", "1e-13 .. <1e-5 | H", 20, "eye retina-thermal", "r01",
     "time '1e-13 .. <1e-5' has an open edge; wants closed edges here"},
    {"subtense backwards", "0 .. 1.5\nr01 = 400", "1.5 .. 0\nr01 = 400", 25, "eye retina-thermal point",
     "subtense_mrad", "subtense 1.5 .. 0 runs backwards; wants the lower edge first"},
    {"area for the eye", "subtense_mrad = 0 .. 1.5\n", "area_m2 = 0.1 .. 1\n", 25, "eye retina-thermal point",
     "area_m2", "is for the skin only; wants no area here"},
    {"train subtense unknown", "0 .. amax", "0 .. alpha_max", 54, "train", "r02",
     "subtense edge 'alpha_max' is neither amax nor a number from 0 to 1571 mrad"},
    /* order and repetition */
    {"row left out", "r02 = 400 .. 700 | 1e-5 .. 10 | H | 18 | 0.75 | ce | B | memory\n", "", 21, "eye retina-thermal",
     "r03", "is out of order; wants r02 next, numbered as on the page"},
    {"row given twice", "r03 = 700 .. 1400 | 1e-5", "r02 = 700 .. 1400 | 1e-5", 22, "eye retina-thermal", "r02",
     "*"}, /* the guard of the INI reader refuses it */
    {"row without number", "r03 = 700 .. 1400 | 1e-5", "row = 700 .. 1400 | 1e-5", 22, "eye retina-thermal", "row",
     "unknown key; wants r03 next"},
    {"section given twice", "[skin large-area]", "[skin]", 38, "skin", "", "*"},
    {"unknown effect", "[eye retina-photochemical]", "[eye blue-light]", 32, "eye blue-light", "",
     "unknown effect 'blue-light'; wants retina-thermal, retina-photochemical, ultraviolet or anterior"},
    {"unknown effect in a row", "= retina-photochemical |", "= retina-photochemica |", 44, "aperture", "r02",
     "unknown effect 'retina-photochemica'; did you mean retina-photochemical?"},
    /* missing parts */
    {"no source size",
     "[source-size]\nalpha_min = 1.5 | A | memory\nmax_01 = 1e-13 .. 3e4 | 100 | 0 | A | memory\n"
     "beyond = square | A | memory\n",
     "", 0, "source-size", "", "section is missing; ce and amax need it"},
    {"no alpha_min", "alpha_min = 1.5 | A | memory\n", "", 14, "source-size", "alpha_min", "is missing"},
    {"no law beyond", "beyond = square | A | memory\n", "", 14, "source-size", "beyond",
     "is missing; wants square or acceptance"},
    {"unknown law beyond", "beyond = square", "beyond = cubic", 17, "source-size", "beyond",
     "unknown law 'cubic'; wants square or acceptance"},
    {"no count", "count = t2 | E | memory\n", "", 48, "repetition", "count", "is missing; wants all or a time factor"},
    {"no additivity", "[additivity]\nr01 = 400 .. 1400 | 400 .. 1400 | eye skin | F | memory\n", "", 0, "additivity",
     "", "section is missing or empty"},
    {"no diffuse time", "r03 = diffuse | 400 .. 1400 | 600", "r03 = glance | 400 .. 1400 | 600", 0, "exposure", "",
     "has more than one row for glance"},
    {"unknown kind of time", "= diffuse |", "= difuse |", 61, "exposure", "r03",
     "unknown kind 'difuse'; did you mean diffuse?"},
    /* each reader's own refusals */
    {"long cell", "| ca | C | read\n[skin", "| ca | " LONG " | read\n[skin", 37, "skin", "r01",
     "column 7 is longer than 199 characters; shorten it"},
    {"dividend no number", "1/98.5", "x/98.5", 12, "factor t2", "r02",
     "slope 'x/98.5' is not a number; wants a plain decimal number such as 5e-3"},
    {"divisor no number", "1/98.5", "1/x", 12, "factor t2", "r02",
     "slope '1/x' is not a number; wants a plain decimal number such as 5e-3"},
    {"three dots", "r02 = 400 .. 700 | 1e-5", "r02 = 400 ... 700 | 1e-5", 21, "eye retina-thermal", "r02",
     "wavelength '400 ... 700' is not a range; wants two values with .. between them"},
    {"open upper edge of the source", "subtense_mrad = 1.5 .. 1571", "subtense_mrad = 1.5 .. <1571", 29,
     "eye retina-thermal extended", "subtense_mrad",
     "subtense '1.5 .. <1571' has an open edge; wants closed edges here"},
    {"no upper edge", "r02 = 400 .. 700 | 1e-5", "r02 = 400 .. | 1e-5", 21, "eye retina-thermal", "r02",
     "wavelength '' is not a number; wants a plain decimal number such as 5e-3"},
    {"short unknown word", "r01 = short |", "r01 = an |", 53, "train", "r01",
     "unknown pulse 'an'; wants any, short or long"},
    {"argument after the rows", "r02 = 700 .. 1400 | 0 | 1 | 0.002 | 700 | A | memory\n",
     "r02 = 700 .. 1400 | 0 | 1 | 0.002 | 700 | A | memory\nargument = wavelength_nm\n", 9, "factor ca", "argument",
     "stands after the rows; wants it before them"},
    {"factor without rows",
     "r01 = 400 .. 700 | 1 | 0 | 0 | 0 | A | memory\nr02 = 700 .. 1400 | 0 | 1 | 0.002 | 700 | A | memory\n", "", 6,
     "factor ca", "", "has no rows"},
    {"factor row out of order", "r03 = 100 .. 1571", "r04 = 100 .. 1571", 13, "factor t2", "r04",
     "is out of order; wants r03 next, numbered as on the page"},
    {"factor cell missing", "r03 = 100 .. 1571 | 100 |", "r03 = 100 .. 1571 |", 13, "factor t2", "r03",
     "has 6 columns; wants 7: argument | offset | scale | slope | origin | clause | known"},
    {"factor named area", "[factor ca]", "[factor area]", 6, "factor area", "",
     "'area' cannot name a factor; wants a-z and 0-9, and not ce, area or amax"},
    {"factor named amax", "[factor ca]", "[factor amax]", 6, "factor amax", "",
     "'amax' cannot name a factor; wants a-z and 0-9, and not ce, area or amax"},
    {"factor named c-a", "[factor ca]", "[factor c-a]", 6, "factor c-a", "",
     "'c-a' cannot name a factor; wants a-z and 0-9, and not ce, area or amax"},
    {"id too long", "id = small",
     "id = aaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaa", 0, "table", "id",
     "'aaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaaa' is not a name; wants a-z, 0-9 "
     "and hyphen"},
    {"an effect as long as a known one", "[eye retina-photochemical]", "[eye exterior]", 32, "eye exterior", "",
     "unknown effect 'exterior'; wants retina-thermal, retina-photochemical, ultraviolet or anterior"},
    {"times no range", "covers = 400 .. 600 | 10 .. 3e4", "covers = 400 .. 600 | 10 to 3e4", 33,
     "eye retina-photochemical", "covers", "time '10 to 3e4' is not a range; wants two values with .. between them"},
    {"open earlier edge", "1e-13 .. 1e-5 | H", ">1e-13 .. 1e-5 | H", 20, "eye retina-thermal", "r01",
     "time '>1e-13 .. 1e-5' has an open edge; wants closed edges here"},
    {"aperture time a name", "r02 = retina-photochemical | 400 .. 600 | 10 .. 3e4",
     "r02 = retina-photochemical | 400 .. 600 | t2 .. 3e4", 44, "aperture", "r02",
     "time edge 't2' is neither a number; wants seconds"},
    {"exponent 0", "t2^-0.25", "t2^0", 31, "eye retina-thermal extended", "r02",
     "factor 't2^0' has no readable exponent; wants a number such as t2^-0.25"},
    {"exponent too large", "t2^-0.25", "t2^4.5", 31, "eye retina-thermal extended", "r02",
     "factor 't2^4.5' has no readable exponent; wants a number such as t2^-0.25"},
    {"many factors", "| ca ce | B | memory\nr02 = 400", "| ca ce t2 ca ce t2 ca ce t2 ca ce t2 | B | memory\nr02 = 400",
     20, "eye retina-thermal", "r01", "has more than " FACTORS " factors; wants fewer"},
    {"subtense of two cells", "subtense_mrad = 1.5 .. 1571", "subtense_mrad = 1.5 .. 1571 | A", 29,
     "eye retina-thermal extended", "subtense_mrad", "has 2 columns; wants 1: subtense mrad"},
    {"area of two cells", "area_m2 = 0.1 ..", "area_m2 = 0.1 .. | C", 39, "skin large-area", "area_m2",
     "has 2 columns; wants 1: area m2"},
    {"covers of one cell", "covers = 400 .. 600 | 10 .. 3e4", "covers = 400 .. 600", 33, "eye retina-photochemical",
     "covers", "has 1 columns; wants 2: wavelength nm | time s"},
    {"aperture out of order", "r03 = skin | 400 .. 1400 | 1e-13", "r04 = skin | 400 .. 1400 | 1e-13", 45, "aperture",
     "r04", "is out of order; wants r03 next, numbered as on the page"},
    {"aperture cell missing", "r03 = skin | 400 .. 1400 | 1e-13", "r03 = 400 .. 1400 | 1e-13", 45, "aperture", "r03",
     "has 6 columns; wants 7: effect | wavelength nm | time s | mm | time power | clause | known"},
    {"cone out of order", "r01 = 400 .. 600 | 10 .. 3e4 | 11", "r02 = 400 .. 600 | 10 .. 3e4 | 11", 47, "cone", "r02",
     "is out of order; wants r01 next, numbered as on the page"},
    {"cone cell missing", "r01 = 400 .. 600 | 10 .. 3e4 | 11", "r01 = 10 .. 3e4 | 11", 47, "cone", "r01",
     "has 5 columns; wants 6: wavelength nm | time s | mrad | time power | clause | known"},
    {"alpha_max out of order", "max_01 = 1e-13 .. 3e4 | 100", "max_02 = 1e-13 .. 3e4 | 100", 16, "source-size",
     "max_02", "is out of order; wants max_01 next, numbered as on the page"},
    {"alpha_max cell missing", "max_01 = 1e-13 .. 3e4 | 100", "max_01 = 100", 16, "source-size", "max_01",
     "has 4 columns; wants 5: time s | mrad | time power | clause | known"},
    {"train out of order", "r03 = long | >amax .. 1571", "r04 = long | >amax .. 1571", 55, "train", "r04",
     "is out of order; wants r03 next, numbered as on the page"},
    {"train cell missing", "r03 = long | >amax .. 1571", "r03 = >amax .. 1571", 55, "train", "r03",
     "has 8 columns; wants 9: pulse | subtense mrad | pulses | exposure s | scale | power | floor | clause | known"},
    {"sum out of order", "r01 = 400 .. 1400 | 400 .. 1400 | eye skin", "r02 = 400 .. 1400 | 400 .. 1400 | eye skin", 57,
     "additivity", "r02", "is out of order; wants r01 next, numbered as on the page"},
    {"sum cell missing", "r01 = 400 .. 1400 | 400 .. 1400 | eye skin", "r01 = 400 .. 1400 | eye skin", 57, "additivity",
     "r01", "has 4 columns; wants 5: wavelength nm | wavelength nm | eye, skin or eye skin | clause | known"},
    {"time out of order", "r06 = working-day", "r07 = working-day", 64, "exposure", "r07",
     "is out of order; wants r06 next, numbered as on the page"},
    {"time cell missing", "r02 = glance | 400 .. 1400", "r02 = 400 .. 1400", 60, "exposure", "r02",
     "has 4 columns; wants 5: kind | wavelength nm | s | clause | known"},
    {"grouping out of order", "ti_01 = 400 .. 1400 | 5e-6", "ti_02 = 400 .. 1400 | 5e-6", 49, "repetition", "ti_02",
     "is out of order; wants ti_01 next, numbered as on the page"},
    {"grouping cell missing", "ti_01 = 400 .. 1400 | 5e-6", "ti_01 = 5e-6", 49, "repetition", "ti_01",
     "has 3 columns; wants 4: wavelength nm | s | clause | known"},
    {"applies out of order", "applies_01 = retina-thermal | 400 .. 1400", "applies_02 = retina-thermal | 400 .. 1400",
     51, "repetition", "applies_02", "is out of order; wants applies_01 next, numbered as on the page"},
    {"applies cell missing", "applies_01 = retina-thermal | 400 .. 1400", "applies_01 = 400 .. 1400", 51, "repetition",
     "applies_01", "has 3 columns; wants 4: effect | wavelength nm | clause | known"},
    {"alpha_min cell missing", "alpha_min = 1.5 | A | memory", "alpha_min = 1.5 | memory", 15, "source-size",
     "alpha_min", "has 2 columns; wants 3: mrad | clause | known"},
    {"beyond cell missing", "beyond = square | A | memory", "beyond = square | memory", 17, "source-size", "beyond",
     "has 2 columns; wants 3: square or acceptance | clause | known"},
    {"count cell missing", "count = t2 | E | memory", "count = t2 | memory", 50, "repetition", "count",
     "has 2 columns; wants 3: all or a time factor | clause | known"},
    {"longest pulse cell missing", "count = t2 | E | memory\n",
     "count = t2 | E | memory\nlongest_pulse_s = 0.25 | memory\n", 51, "repetition", "longest_pulse_s",
     "has 2 columns; wants 3: s | clause | known"},
    {"train source no range", "0 .. amax", "0 to amax", 54, "train", "r02",
     "subtense '0 to amax' is not a range; wants two values with .. between them"},
    {"train source backwards", "r01 = short | 0 .. 1571", "r01 = short | 1571 .. 0", 53, "train", "r01",
     "subtense 1571 .. 0 runs backwards; wants the lower edge first"},
    {"target unknown", "| eye skin |", "| ear |", 57, "additivity", "r01", "*"},
    {"no alpha_max", "max_01 = 1e-13 .. 3e4 | 100 | 0 | A | memory\n", "", 14, "source-size", "max_01",
     "is missing; wants alpha_max by time"},
    {"no working day", "r06 = working-day | 400 .. 1400 | 3e4 | G | memory\n", "", 0, "exposure", "",
     "has no row for working-day"},
    {"no apertures",
     "r01 = retina-thermal | 400 .. 1400 | 1e-13 .. 3e4 | 7 | 0 | D | memory\nr02 = retina-photochemical | 400 .. 600 "
     "| 10 .. 3e4 | 7 | 0 | D | memory\nr03 = skin | 400 .. 1400 | 1e-13 .. 3e4 | 3.5 | 0 | D | memory\n",
     "", 0, "aperture", "", "section is missing or empty"},
    {"no train",
     "[train]\nr01 = short | 0 .. 1571 | 1 .. | 0 .. | 1 | 0 | 0 | E | memory\nr02 = long | 0 .. amax | 1 .. | 0 .. | "
     "1 | -0.25 | 0.4 | E | memory\nr03 = long | >amax .. 1571 | 1 .. | 0 .. | 1 | 0 | 0 | E | memory\n",
     "", 0, "train", "", "section is missing or empty; the correction by N needs it"},
    {"no repetition",
     "[repetition]\nti_01 = 400 .. 1400 | 5e-6 | E | memory\ncount = t2 | E | memory\napplies_01 = retina-thermal | "
     "400 .. 1400 | E | memory\n",
     "", 0, "repetition", "", "section is missing"},
    {"no limits",
     "[eye retina-thermal]\ncovers = 400 .. 1400 | 1e-13 .. 10\nr01 = 400 .. 1400 | 1e-13 .. 1e-5 | H | 2e-3 | 0 | ca "
     "ce | B | memory\nr02 = 400 .. 700 | 1e-5 .. 10 | H | 18 | 0.75 | ce | B | memory\nr03 = 700 .. 1400 | 1e-5 .. 10 "
     "| H | 18 | 0.75 | ca ce | B | memory\n[eye retina-thermal point]\ncovers = 400 .. 1400 | 10 .. "
     "3e4\nsubtense_mrad = 0 .. 1.5\nr01 = 400 .. 1400 | 10 .. 3e4 | E | 10 | 0 | ca | B | memory\n[eye retina-thermal "
     "extended]\ncovers = 400 .. 1400 | 10 .. 3e4\nsubtense_mrad = 1.5 .. 1571\nr01 = 400 .. 1400 | 10 .. t2 | H | 18 "
     "| 0.75 | ca ce | B | memory\nr02 = 400 .. 1400 | t2 .. 3e4 | E | 18 | 0 | ca ce t2^-0.25 | B | memory\n[eye "
     "retina-photochemical]\ncovers = 400 .. 600 | 10 .. 3e4\nr01 = 400 .. 600 | 10 .. 3e4 | G | 1e6 | 0 | - | B | "
     "memory\n[skin]\ncovers = 400 .. 1400 | 1e-13 .. 3e4\nr01 = 400 .. 1400 | 1e-13 .. 3e4 | E | 2000 | 0 | ca | C | "
     "read\n[skin large-area]\narea_m2 = 0.1 ..\ncovers = 400 .. 1400 | 10 .. 3e4\nr01 = 400 .. 1400 | 10 .. 3e4 | E | "
     "10 | 0 | area^-1 | C | read\n",
     "", 0, "", "", "has no limits; wants [eye EFFECT] and [skin] sections"},
    {"a hole in time between sections",
     "covers = 400 .. 1400 | 1e-13 .. 10\nr01 = 400 .. 1400 | 1e-13 .. 1e-5 | H | 2e-3 | 0 | ca ce | B | memory\nr02 = "
     "400 .. 700 | 1e-5 .. 10 | H | 18 | 0.75 | ce | B | memory\nr03 = 700 .. 1400 | 1e-5 .. 10 | H | 18 | 0.75 | ca "
     "ce | B | memory\n",
     "covers = 400 .. 1400 | 1e-13 .. 5\nr01 = 400 .. 1400 | 1e-13 .. 1e-5 | H | 2e-3 | 0 | ca ce | B | memory\nr02 = "
     "400 .. 700 | 1e-5 .. 5 | H | 18 | 0.75 | ce | B | memory\nr03 = 700 .. 1400 | 1e-5 .. 5 | H | 18 | 0.75 | ca ce "
     "| B | memory\n",
     0, "eye", "", "gap: the sections leave a hole between 400 and 600 nm"},
    {"all times begin at a name",
     "covers = 400 .. 1400 | 1e-13 .. 3e4\nr01 = 400 .. 1400 | 1e-13 .. 3e4 | E | 2000 | 0 | ca | C | read\n[skin "
     "large-area]\narea_m2 = 0.1 ..\ncovers = 400 .. 1400 | 10 .. 3e4\nr01 = 400 .. 1400 | 10 .. 3e4 | E | 10 | 0 | "
     "area^-1 | C | read\n",
     "covers = 400 .. 1400 | t2 .. 3e4\nr01 = 400 .. 1400 | t2 .. 3e4 | E | 2000 | 0 | ca | C | read\n", 0, "skin", "",
     "gap: the sections leave a hole between 400 and 1400 nm"},
    {"a factor beyond all numbers", "r01 = 0 .. 1.5 | 10 | 0 | 0 | 0 |", "r01 = 0 .. 1.5 | 0 | 10 | -10 | 1e6 |", 11,
     "factor t2", "r01", "is beyond all numbers at an end of the row; wants a smaller slope"},
    {"a factor beyond all numbers at the end", "r03 = 100 .. 1571 | 100 | 0 | 0 | 0 |",
     "r03 = 100 .. 1571 | 0 | 100 | 10 | 100 |", 13, "factor t2", "r03",
     "is beyond all numbers at an end of the row; wants a smaller slope"},
    {"a factor open at its end", "r02 = 700 .. 1400 | 0 | 1", "r02 = 700 .. <1400 | 0 | 1", 20, "eye retina-thermal",
     "r01", "factor ca does not reach over the whole row"},
    {"a cover that its factor does not reach", "covers = 400 .. 1400 | 10 .. 3e4\nsubtense_mrad = 0 .. 1.5",
     "covers = 390 .. 1400 | 10 .. ca\nsubtense_mrad = 0 .. 1.5", 24, "eye retina-thermal point", "covers",
     "factor ca does not reach over the whole section"},
};

/* Loads the text. Returned: the first fault, if any (to be freed by the caller). */
static enum bw_status load(const char *text, struct bw_table **table, struct bw_faults *faults) {
    struct bw_ini ini = {0};
    struct bw_error error = {0};
    *table = NULL;
    enum bw_status status = bw_ini_read_bytes(text, strlen(text), &ini, faults, &error);
    if (status == BW_OK)
        status = bw_table_load(&ini, table, faults, &error);
    bw_ini_free(&ini);
    return status;
}

static char *replaced(const struct bad_case *c) {
    const char *at = strstr(small_table, c->out);
    if (at == NULL)
        fail_msg("the good table has no '%s'", c->out);
    size_t size = sizeof small_table + strlen(c->in);
    char *text = malloc(size);
    assert_non_null(text);
    snprintf(text, size, "%.*s%s%s", (int)(at - small_table), small_table, c->in, at + strlen(c->out));
    return text;
}

static void test_bad(void **state) {
    const struct bad_case *c = *state;
    char *text = replaced(c);
    struct bw_table *table;
    struct bw_faults faults = {0};
    enum bw_status status = load(text, &table, &faults);
    free(text);
    assert_int_equal(status, BW_INPUT);
    assert_null(table);
    assert_true(faults.count > 0);
    for (size_t i = 0; i < faults.count; i++) {
        const struct bw_fault *fault = &faults.items[i];
        if (fault->line == c->line && strcmp(fault->section, c->section) == 0 && strcmp(fault->key, c->key) == 0 &&
            (c->text[0] == '*' || strcmp(fault->text, c->text) == 0)) {
            bw_faults_free(&faults);
            return;
        }
    }
    for (size_t i = 0; i < faults.count; i++)
        print_error("%d [%s] %s: %s\n", faults.items[i].line, faults.items[i].section, faults.items[i].key,
                    faults.items[i].text);
    bw_faults_free(&faults);
    fail_msg("want %d [%s] %s: %s", c->line, c->section, c->key, c->text);
}

static void test_good(void **state) {
    struct bw_table *table;
    struct bw_faults faults = {0};
    const struct bw_exposure exposure = {500.0, 100.0, 0.0, 0.0}, wide = {500.0, 100.0, 0.022, 0.0};
    const struct bw_exposure patch = {1000.0, 100.0, 0.0, 0.5};
    struct bw_limit_set limits;
    (void)state;
    enum bw_status status = load(small_table, &table, &faults);
    for (size_t i = 0; i < faults.count; i++)
        print_error("%d [%s] %s: %s\n", faults.items[i].line, faults.items[i].section, faults.items[i].key,
                    faults.items[i].text);
    assert_int_equal(status, BW_OK);
    assert_int_equal(bw_limits_eye(table, &exposure, &limits, NULL, NULL), BW_OK);
    assert_int_equal(limits.count, 2);
    /* G = 1e6 within a cone of 11 mrad: 1e6 * pi/4 * 0.011^2 = 95.0332 J/m2 */
    assert_true(limits.limits[1].radiant_exposure_j_m2 > 95.0331 && limits.limits[1].radiant_exposure_j_m2 < 95.0332);
    assert_int_equal(bw_limits_eye(table, &wide, &limits, NULL, NULL), BW_OK); /* twice the cone: four times */
    assert_true(limits.limits[1].radiant_exposure_j_m2 > 380.132 && limits.limits[1].radiant_exposure_j_m2 < 380.133);
    assert_int_equal(bw_limits_skin(table, &patch, &limits, NULL, NULL), BW_OK); /* 10 / 0.5 W/m2 */
    assert_true(limits.limits[0].irradiance_w_m2 > 19.999 && limits.limits[0].irradiance_w_m2 < 20.001);
    assert_string_equal(limits.limits[0].source.section, "skin large-area");
    bw_table_free(table);
    bw_table_free(NULL);
    bw_faults_free(&faults);
}

/* All faults of a file are reported together, in the order of its lines. */
static void test_all_at_once(void **state) {
    struct bw_table *table;
    struct bw_faults faults = {0};
    (void)state;
    assert_int_equal(load("[table]\nid = A b\n[eye x]\n[skin]\ncovers = 1\nr01 = a | b\n[zebra]\n", &table, &faults),
                     BW_INPUT);
    assert_int_equal(faults.count, 8);
    for (size_t i = 1; i < faults.count; i++)
        assert_true(faults.items[i - 1].line <= faults.items[i].line);
    bw_faults_free(&faults);
}

static void test_empty(void **state) {
    struct bw_table *table;
    struct bw_ini ini = {0};
    struct bw_faults faults = {0};
    struct bw_error error = {0};
    (void)state;
    assert_int_equal(bw_table_load(&ini, &table, &faults, &error), BW_INPUT);
    assert_null(table);
    assert_int_equal(faults.count, 4);
    bw_faults_free(&faults);
}

enum { BAD = sizeof bad_cases / sizeof bad_cases[0] };

int main(void) {
    static struct CMUnitTest tests[BAD + 3];
    for (size_t i = 0; i < BAD; i++)
        tests[i] = (struct CMUnitTest){bad_cases[i].name, test_bad, NULL, NULL, &bad_cases[i]};
    tests[BAD] = (struct CMUnitTest){"the good table", test_good, NULL, NULL, NULL};
    tests[BAD + 1] = (struct CMUnitTest){"all faults at once", test_all_at_once, NULL, NULL, NULL};
    tests[BAD + 2] = (struct CMUnitTest){"empty", test_empty, NULL, NULL, NULL};
    return cmocka_run_group_tests_name("limits bad tables", tests, NULL, NULL) == 0 ? EXIT_SUCCESS : EXIT_FAILURE;
}
