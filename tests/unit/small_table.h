/* A small good rule set, invented; tests change it. */
#ifndef BEAMWARD_TESTS_SMALL_TABLE_H
#define BEAMWARD_TESTS_SMALL_TABLE_H

/* Line numbers count from here: [table] is line 1. */
static const char small_table[] = "[table]\n"
                           "id = small\n"
                           "title = a small rule set\n"
                           "source = invented for this test\n"
                           "edition = first\n"
                           "[factor ca]\n"
                           "r01 = 400 .. 700 | 1 | 0 | 0 | 0 | A | memory\n"
                           "r02 = 700 .. 1400 | 0 | 1 | 0.002 | 700 | A | memory\n"
                           "[factor t2]\n"
                           "argument = subtense_mrad\n" /* 10 */
                           "r01 = 0 .. 1.5 | 10 | 0 | 0 | 0 | A | memory\n"
                           "r02 = 1.5 .. 100 | 0 | 10 | 1/98.5 | 1.5 | A | memory\n"
                           "r03 = 100 .. 1571 | 100 | 0 | 0 | 0 | A | memory\n"
                           "[source-size]\n"
                           "alpha_min = 1.5 | A | memory\n"
                           "max_01 = 1e-13 .. 3e4 | 100 | 0 | A | memory\n"
                           "beyond = square | A | memory\n"
                           "[eye retina-thermal]\n"
                           "covers = 400 .. 1400 | 1e-13 .. 10\n"
                           "r01 = 400 .. 1400 | 1e-13 .. 1e-5 | H | 2e-3 | 0 | ca ce | B | memory\n" /* 20 */
                           "r02 = 400 .. 700 | 1e-5 .. 10 | H | 18 | 0.75 | ce | B | memory\n"
                           "r03 = 700 .. 1400 | 1e-5 .. 10 | H | 18 | 0.75 | ca ce | B | memory\n"
                           "[eye retina-thermal point]\n"
                           "covers = 400 .. 1400 | 10 .. 3e4\n"
                           "subtense_mrad = 0 .. 1.5\n"
                           "r01 = 400 .. 1400 | 10 .. 3e4 | E | 10 | 0 | ca | B | memory\n"
                           "[eye retina-thermal extended]\n"
                           "covers = 400 .. 1400 | 10 .. 3e4\n"
                           "subtense_mrad = 1.5 .. 1571\n"
                           "r01 = 400 .. 1400 | 10 .. t2 | H | 18 | 0.75 | ca ce | B | memory\n" /* 30 */
                           "r02 = 400 .. 1400 | t2 .. 3e4 | E | 18 | 0 | ca ce t2^-0.25 | B | memory\n"
                           "[eye retina-photochemical]\n"
                           "covers = 400 .. 600 | 10 .. 3e4\n"
                           "r01 = 400 .. 600 | 10 .. 3e4 | G | 1e6 | 0 | - | B | memory\n"
                           "[skin]\n"
                           "covers = 400 .. 1400 | 1e-13 .. 3e4\n"
                           "r01 = 400 .. 1400 | 1e-13 .. 3e4 | E | 2000 | 0 | ca | C | read\n"
                           "[skin large-area]\n"
                           "area_m2 = 0.1 ..\n"
                           "covers = 400 .. 1400 | 10 .. 3e4\n" /* 40 */
                           "r01 = 400 .. 1400 | 10 .. 3e4 | E | 10 | 0 | area^-1 | C | read\n"
                           "[aperture]\n"
                           "r01 = retina-thermal | 400 .. 1400 | 1e-13 .. 3e4 | 7 | 0 | D | memory\n"
                           "r02 = retina-photochemical | 400 .. 600 | 10 .. 3e4 | 7 | 0 | D | memory\n"
                           "r03 = skin | 400 .. 1400 | 1e-13 .. 3e4 | 3.5 | 0 | D | memory\n"
                           "[cone]\n"
                           "r01 = 400 .. 600 | 10 .. 3e4 | 11 | 0 | D | memory\n"
                           "[repetition]\n"
                           "ti_01 = 400 .. 1400 | 5e-6 | E | memory\n"
                           "count = t2 | E | memory\n" /* 50 */
                           "applies_01 = retina-thermal | 400 .. 1400 | E | memory\n"
                           "[train]\n"
                           "r01 = short | 0 .. 1571 | 1 .. | 0 .. | 1 | 0 | 0 | E | memory\n"
                           "r02 = long | 0 .. amax | 1 .. | 0 .. | 1 | -0.25 | 0.4 | E | memory\n"
                           "r03 = long | >amax .. 1571 | 1 .. | 0 .. | 1 | 0 | 0 | E | memory\n"
                           "[additivity]\n"
                           "r01 = 400 .. 1400 | 400 .. 1400 | eye skin | F | memory\n"
                           "[exposure]\n"
                           "r01 = visible | 400 .. 700 | 0.25 | G | memory\n"
                           "r02 = glance | 400 .. 1400 | 100 | G | memory\n" /* 60 */
                           "r03 = diffuse | 400 .. 1400 | 600 | G | memory\n"
                           "r04 = skin | 400 .. 1400 | 100 | G | memory\n"
                           "r05 = alignment | 400 .. 700 | 2 | G | memory\n"
                           "r06 = working-day | 400 .. 1400 | 3e4 | G | memory\n";

#endif
