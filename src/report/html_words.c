/* What the figures assume, and what no figure can replace. */
#include "html.h"

static void times(struct bw_text *out, const struct bw_result *result, const struct bw_distance_result *distance) {
    struct bw_text glance = {0}, skin = {0}, diffuse = {0};
    char seconds[3][REPORT_QUANTITY_SIZE];
    report_time_reason(&glance, distance, &distance->glance, "an accidental glance");
    report_time_reason(&skin, distance, &distance->skin_time, "skin");
    report_time_reason(&diffuse, distance, &distance->diffuse_time, "diffuse viewing");
    html_item(out, "Exposure times for %s %s: direct view %s s, %s; skin %s s, %s; diffuse light %s s, %s.%s",
              report_laser(result, distance->laser)->name,
              report_handpiece(result, distance->laser, distance->handpiece)->name,
              report_plain(seconds[0], distance->glance.exposure_s), glance.data ? glance.data : "",
              report_plain(seconds[1], distance->skin_time.exposure_s), skin.data ? skin.data : "",
              report_plain(seconds[2], distance->diffuse_time.exposure_s), diffuse.data ? diffuse.data : "",
              distance->glance.aversion_response
                  ? " The time for the direct view rests on the aversion response; the German radiation protection "
                    "commission (SSK, 15 March 2006) says that newer results do not bear this assumption out."
                  : "");
    out->failed = out->failed || glance.failed || skin.failed || diffuse.failed;
    bw_text_free(&glance);
    bw_text_free(&skin);
    bw_text_free(&diffuse);
}

void html_assumptions(struct bw_text *out, const struct bw_result *result) {
    html_heading(out, "assumptions", "What the figures assume");
    bw_text_add(out, "<ul>\n");
    for (size_t i = 0; i < result->distance_count; i++)
        times(out, result, &result->distances[i]);
    html_item(out, "The values of the case file are taken as they are, or at the worst corner of the tolerances it gives: the "
                   "highest power, the narrowest beam, and of pulse duration and rate whichever end is strictest. Without "
                   "tolerances, enter the highest output that was measured.");
    html_item(out, "Diameters are kept as d63, where the irradiance has fallen to 1/e of its peak: d86 (1/e\xC2\xB2) = "
                   "1.414 d63, FWHM = 0.833 d63; a top hat is as wide as its edge.");
    html_item(out, "A direct view, or a mirror image, is a point source: the strictest case. The exposure is the mean "
                   "over the limiting aperture at the centre of the beam, for the unaided eye.");
    html_item(out,
              "Diffuse light comes from the smallest spot that the beam has, on a surface that returns all of it; in "
              "a room, from the materials given. The spot is an extended source.");
    html_item(out, "Emissions that act on the same tissue in the same way are added. The optical densities share the "
                   "allowance equally among the emissions that need any.");
    html_item(out, "Optical aids: the eye gets what the aid gathers within the smaller of its objective and magnification "
                   "times the limiting aperture, times the transmittance; sources look magnified (common practice). Only from "
                   "302.5 to 4000 nm (from memory); beyond, glass is taken to pass nothing. Where no transmittance is given, "
                   "all passes. Nothing is less than for the naked eye, which may look past the aid.");
    html_item(out, "Times to a limit: the longest exposure of which, and of all shorter ones, the limit is kept; rounded down. "
                   "\"Never\" is 30 000 s, as far as the tables go. Goggles count with their optical density, or with nothing "
                   "where they have no rating.");
    html_item(out,
              "Pulses: each limit is the lowest of three rules: the single pulse, the average over the exposure, and "
              "the train rule of the rule set.");
    html_item(out, "The plan is flat: leaving out height only shortens paths. The map takes the worst position in the "
                   "treatment area, the worst allowed aim, the worst place in each cell, and the largest ratio at this "
                   "length of path or farther. Surfaces and openings reach from floor to ceiling.");
    html_item(out,
              "Outside a row of the published table there is an error, never an extrapolation; where two rows meet, "
              "the lower limit holds.");
    bw_text_add(out, "</ul>\n");
}

void html_cautions(struct bw_text *out) {
    static const char *const cautions[] = {
        "The laser safety officer decides and signs. Local law, licences and registration, the employer's rules and "
        "the manufacturer's instructions come first, and hold wherever they are stricter.",
        "Treatment of people or animals belongs to licensed practice. Nothing here says whether, where or how long to "
        "treat.",
        "Meter the beam. Class 4 medical output may differ from its setting by 20 % (IEC 60601-2-22, from memory); "
        "surveys found far more.",
        "Limits marked from memory have not been compared with a printed copy of the standard. Compare every governing "
        "row before you defend a figure with it.",
        "The tool does not know what is not in the case file: another laser, a picture frame, a watch, an open door, "
        "people who walk about, a broken fibre. Loupes and other instruments can make a hazard worse.",
        "Nobody looks into the beam or its mirror image, whatever the goggles. Everybody in the controlled area wears "
        "suitable goggles while the laser may emit. An animal's eyes are shielded as the staff's are.",
        "The red aiming beam is not the danger; the beam that nobody can see is. Cover or remove shiny surfaces, cover "
        "windows, close doors.",
        "An exposure that may have been above a limit: stop, keep the setting, see an eye doctor, tell the laser "
        "safety officer.",
        "Duties: laser safety officer, controlled area, windows and surfaces: IEC TR 60825-8:2006, 5.1, 7.1, 7.2, 7.3, "
        "Annex B. Adviser, local rules, signs at entrances, eyewear for staff and patient, training: UK practice "
        "guidance on the 2010 regulations; MHRA 2015, section 3. Assessment, signs and access, training, "
        "surveillance: Directive 2006/25/EC, Art. 4, 5, 6, 8 (from memory). Registration of class 3B and 4, "
        "veterinary ones included: some US states, for example 25 TAC 289.301.",
    };
    html_heading(out, "cautions", "Cautions and duties");
    bw_text_add(out, "<ul>\n");
    for (size_t i = 0; i < sizeof cautions / sizeof cautions[0]; i++)
        html_item(out, "%s", cautions[i]);
    bw_text_add(out, "</ul>\n");
}
