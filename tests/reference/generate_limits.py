#!/usr/bin/env python3
"""Limits in arbitrary precision, straight from the formulas in their published form.

Written from the printed formulas, not from limits_tables/*.ini, so that the two can disagree. Needs mpmath
(Debian: python3-mpmath). Writes beside itself
  limits.csv        limits over a dense grid; test_reference_limits.c compares it with the library
  limits_edges.csv  just beside every edge of wavelength, time, source size and skin area, with the limiting aperture
                    and the acceptance angle; test_reference_edges.c and tests/mutation use it

Sources: Directive 2006/25/EC Annex II, Tables 2.2 to 2.6 (read in transpositions; body of 2.3 from memory);
ICNIRP, Health Physics 105(3):271-295, 2013 (from memory); IEC 60825-1:2014 Annex A (from memory);
ANSI Z136.1-2014, 400 to 1200 nm (from memory).

Bands and times are closed: where two rows meet, both are taken and the lower holds. The Directive's ultraviolet
steps of 1 nm are the exception: from one printed nanometre up to, not including, the next.
"""
import csv
import os
import random
from mpmath import mp, mpf, sqrt, power

mp.dps = 40
TEN = mpf(10)


def exp10(x):
    return power(TEN, x)


# ---- factors, as printed ----------------------------------------------------------------------------------------
def ca(w):
    if w <= 700:
        return mpf(1)
    return exp10(mpf("0.002") * (w - 700)) if w < 1050 else mpf(5)


def cb(w):
    return mpf(1) if w <= 450 else exp10(mpf("0.02") * (w - 450))


def cc_values(rules, w):
    """Both values where two pieces meet."""
    values = []
    if w <= 1150:
        values.append(mpf(1))
    if 1150 <= w <= 1200:
        values.append(exp10(mpf("0.018") * (w - 1150)))
    if w >= 1200:
        values.append(mpf(8) if rules == "eu" else 8 + exp10(mpf("0.04") * (w - 1250)))
    return values


def cc(rules, w):
    return min(cc_values(rules, w))


def alpha_max(rules, t):
    if rules == "eu":
        return mpf(100)
    candidates = []
    if t <= mpf("625e-6"):
        candidates.append(mpf(5))
    if mpf("625e-6") <= t <= mpf("0.25"):
        candidates.append(200 * sqrt(t))
    if t >= mpf("0.25"):
        candidates.append(mpf(100))
    return candidates[0]  # the pieces agree where they meet


def ce(rules, alpha, t):
    low, high = mpf("1.5"), alpha_max(rules, t)
    if alpha <= low:
        return mpf(1)
    if alpha <= high:
        return alpha / low
    return high / low if rules == "iec" else alpha ** 2 / (low * high)


def t2(alpha):
    if alpha <= mpf("1.5"):
        return mpf(10)
    return mpf(100) if alpha >= 100 else 10 * exp10((alpha - mpf("1.5")) / mpf("98.5"))


# ---- rows: each returns a list of candidate radiant exposures ----------------------------------------------------
EU_STEPS = dict(zip(range(303, 315), (40, 60, 100, 160, 250, 400, 630, 1000, 1600, 2500, 4000, 6300)))
QUARTER, THREE_QUARTERS = mpf("0.25"), mpf("0.75")


def ultraviolet(rules, w, t):
    if not 180 <= w <= 400:
        return []
    found = []
    if t <= mpf("1e-9"):
        found.append(mpf("3e10") * t)
    if t < mpf("1e-9"):
        return found
    thermal = mpf("5.6e3") * power(t, QUARTER)
    if rules == "iec":
        if w <= mpf("302.5"):
            found.append(mpf(30))
        if mpf("302.5") <= w <= 315:
            t1 = mpf("1e-15") * exp10(mpf("0.8") * (w - 295))
            if t <= t1:
                found.append(thermal)
            if t >= t1:
                found.append(exp10(mpf("0.2") * (w - 295)))
        if w >= 315:
            if t <= 10:
                found.append(thermal)
            if 10 <= t <= 1000:
                found.append(mpf("1e4"))
            if t >= 1000:
                found.append(10 * t)
        return found
    if w < 303:
        found.append(mpf(30))
    elif w < 315:
        found.append(mpf(EU_STEPS[int(w)]))
        if t <= 10:
            found.append(thermal)  # "and never more than"
    else:
        if t <= 10:
            found.append(thermal)
        if t >= 10:
            found.append(mpf("1e4"))
    return found


def retina_short(rules, w, t):
    """Up to 10 s, without CE."""
    found = []
    c7 = cc(rules, w) if w >= 1050 else None
    visible, near, far = 400 <= w <= 700, 700 <= w <= 1050, 1050 <= w <= 1400

    def add(low, high, first, second, third):
        """value of 400-700, factor pattern of 700-1050, value of 1050-1400, each (value, power)."""
        if not low <= t <= high:
            return
        if visible:
            found.append(first[0] * power(t, first[1]))
        if near:
            found.append(second[0] * power(t, second[1]))
        if far:
            found.append(third[0] * power(t, third[1]))

    a = ca(w)
    if rules == "eu":
        rows = (
            ("1e-13", "1e-11", "1.5e-4", 0, "1e-11", "1.5e-3", 0),
            ("1e-11", "1e-9", "2.7e4", THREE_QUARTERS, None, "2.7e5", THREE_QUARTERS),
            ("1e-9", "1.8e-5", "5e-3", 0, None, "5e-2", 0),
            ("1.8e-5", "10", "18", THREE_QUARTERS, None, "90", THREE_QUARTERS),
        )
        for i, (low, high, v, p, _, _, _) in enumerate(rows):
            if mpf(low) <= t <= mpf(high):
                value = mpf(v) * power(t, p)
                if visible:
                    found.append(value)
                if near:
                    found.append(value * a)
        for low, high, v, p in (("1e-13", "1e-11", "1.5e-3", 0), ("1e-11", "1e-9", "2.7e5", THREE_QUARTERS),
                                ("1e-9", "5e-5", "5e-2", 0), ("5e-5", "10", "90", THREE_QUARTERS)):
            if far and mpf(low) <= t <= mpf(high):
                found.append(mpf(v) * power(t, p) * c7)
        return found
    if mpf("1e-13") <= t <= mpf("1e-11"):
        if visible or near:
            found.append(mpf("1e-3"))
        if far:
            found.append(mpf("1e-3") * c7)
    if mpf("1e-11") <= t <= mpf("5e-6"):
        if visible:
            found.append(mpf("2e-3"))
        if near:
            found.append(mpf("2e-3") * a)
    if mpf("5e-6") <= t <= 10:
        if visible:
            found.append(18 * power(t, THREE_QUARTERS))
        if near:
            found.append(18 * a * power(t, THREE_QUARTERS))
    if far and mpf("1e-11") <= t <= mpf("1.3e-5"):
        found.append(mpf("2e-2") * c7)
    if far and mpf("1.3e-5") <= t <= 10:
        found.append(90 * c7 * power(t, THREE_QUARTERS))
    return found


def retina_thermal(rules, w, t, alpha):
    if not 400 <= w <= (1200 if rules == "ansi" else 1400):
        return []
    found = [value * ce(rules, alpha, t) for value in retina_short(rules, w, t)]
    if t < 10:
        return found
    factor = (ca(w) if w >= 700 else mpf(1)) * (cc(rules, w) if w >= 700 else mpf(1))
    if alpha <= mpf("1.5"):
        found.append(10 * factor * t)
    if alpha >= mpf("1.5"):
        limit = t2(alpha)
        e = ce(rules, alpha, t)
        if t <= limit:
            found.append(18 * factor * e * power(t, THREE_QUARTERS))
        if t >= limit:
            found.append(18 * factor * e * power(limit, -QUARTER) * t)
            if rules == "eu" and w >= 700 and alpha > mpf("1.5"):
                found.append(1000 * t)
    return found


def photochemical(w, t, alpha):
    if not 400 <= w <= 600 or t < 10:
        return []
    if t <= 100:
        found, gamma = [100 * cb(w)], mpf(11)
    elif t <= 10000:
        found, gamma = [cb(w) * t], mpf("1.1") * sqrt(t)
    else:
        found, gamma = [cb(w) * t], mpf(110)
    if alpha > gamma:
        found = [value * (alpha / gamma) ** 2 for value in found]
    return found


def infrared(w, t):
    """Cornea, 1400 nm to 1 mm."""
    if w < 1400:
        return []
    found = []
    for low, high, kind in ((1400, 1500, "a"), (1500, 1800, "b"), (1800, 2600, "a"), (2600, 1000000, "c")):
        if not low <= w <= high:
            continue
        if kind == "a":
            rows = (("1e-13", "1e-9", mpf("1e12") * t), ("1e-9", "1e-3", mpf(1000)),
                    ("1e-3", "10", mpf(5600) * power(t, QUARTER)))
        elif kind == "b":
            rows = (("1e-13", "1e-9", mpf("1e13") * t), ("1e-9", "10", mpf("1e4")))
        else:
            rows = (("1e-13", "1e-9", mpf("1e11") * t), ("1e-9", "1e-7", mpf(100)),
                    ("1e-7", "10", mpf(5600) * power(t, QUARTER)))
        rows += (("10", "3e4", 1000 * t),)
        found += [value for first, last, value in rows if mpf(first) <= t <= mpf(last)]
    return found


def skin_visible(w, t):
    if not 400 <= w <= 1400:
        return []
    a = ca(w)
    rows = (("1e-13", "1e-9", mpf("2e11") * a * t), ("1e-9", "1e-7", 200 * a),
            ("1e-7", "10", mpf("1.1e4") * a * power(t, QUARTER)), ("10", "3e4", 2000 * a * t))
    return [value for first, last, value in rows if mpf(first) <= t <= mpf(last)]


def large_area(rules, w, t, area):
    """Skin beyond 1400 nm and 10 s, icnirp-2013 only: 1000 W/m2 to 0.01 m2, 10/A to 0.1 m2, 100 W/m2 above."""
    if rules != "icnirp" or w < 1400 or t < 10:
        return []
    found = []
    if mpf("0.01") <= area <= mpf("0.1"):
        found.append(10 / area * t)
    if area >= mpf("0.1"):
        found.append(100 * t)
    return found


def limits(rules, target, w, t, alpha, area=mpf(0)):
    """{effect: lowest H}."""
    if rules == "ansi" and not 400 <= w <= 1200:
        return {}
    if target == "skin":
        parts = skin_visible(w, t)
        if rules != "ansi":
            parts = parts + ultraviolet(rules, w, t) + infrared(w, t) + large_area(rules, w, t, area)
        return {"skin": min(parts)}
    found = {"retina-thermal": retina_thermal(rules, w, t, alpha), "retina-photochemical": photochemical(w, t, alpha)}
    if rules != "ansi":
        found["ultraviolet"] = ultraviolet(rules, w, t)
        found["anterior"] = infrared(w, t)
        if rules in ("iec", "icnirp") and 1250 <= w <= 1400:
            found["anterior"] = found["anterior"] + skin_visible(w, t)
    return {effect: min(values) for effect, values in found.items() if values}


# ---- how the exposure is measured --------------------------------------------------------------------------------
def growing_aperture(switch, t):
    """1 mm, then 1.5 t^0.375 mm to 10 s, then 3.5 mm; the smaller where they meet."""
    found = []
    if t <= switch:
        found.append(mpf(1))
    if switch <= t <= 10:
        found.append(mpf("1.5") * power(t, mpf("0.375")))
    if t >= 10:
        found.append(mpf("3.5"))
    return min(found)


def aperture(rules, effect, w, t):
    """Diameter of the limiting aperture [mm]. Directive Tables 2.2 (note: 1 mm to 0.3 s), 2.3, 2.4; 0.35 s since 2013;
    IEC 60825-1:2014: 1 mm at all times for the eye to 400 nm; skin 3.5 mm; 11 mm from 1e5 nm."""
    if effect.startswith("retina"):
        return mpf(7)
    far = [mpf(11)] if w >= 100000 else []
    if effect == "skin":
        return min(far + ([mpf("3.5")] if w <= 100000 else []))
    if effect == "ultraviolet" and rules == "iec":
        return mpf(1)
    near = [growing_aperture(mpf("0.3" if rules == "eu" else "0.35"), t)] if w <= 100000 else []
    return min(far + near)


def acceptance(rules, effect, t, alpha):
    """Cone that the exposure is measured in [mrad], as text: inf = open. IEC 60825-1:2014: beyond alpha_max C6 stays,
    and the exposure is taken within alpha_max; a source smaller than that is wholly inside, so it may be given or not:
    `any`."""
    if rules != "iec" or effect != "retina-thermal":
        return "inf"
    return number(alpha_max(rules, t)) if alpha > alpha_max(rules, t) else "any"


# ---- the grid ----------------------------------------------------------------------------------------------------
IDS = {"icnirp": "icnirp-2013", "iec": "iec-60825-1-2014", "eu": "eu-2006-25", "ansi": "ansi-z136-1-2014"}
EDGES_NM = ("180 250 302 302.25 302.5 302.75 303 303.5 304 305 306.5 307 308 309 310 311 312 312.5 313 314 314.5 315 "
            "350 400 440 450 500 550 600 650 700 780 810 904 980 1049.5 1050 1064 1100 1150 1175 1200 1225 1250 1300 1350 "
            "1400 1450 1500 1550 1800 2000 2600 10600 99999 100000 500000 1000000").split()
EDGES_S = ("1e-13 5e-12 1e-11 2e-10 1e-9 3e-8 1e-7 1.5e-6 5e-6 1e-5 1.3e-5 1.6e-5 1.8e-5 3e-5 5e-5 2e-4 6.25e-4 1e-3 "
           "0.02 0.1 0.25 0.3 0.35 1 5 10 20 60 100 500 1000 5000 10000 20000 30000").split()
SUBTENSES_MRAD = "0 1.5 4 11 40 100 250".split()


def points(rules, target):
    generator = random.Random(rules + target)
    for w in EDGES_NM:
        for t in EDGES_S:
            for alpha in (SUBTENSES_MRAD if target == "eye" and 400 <= float(w) <= 1400 else ("0",)):
                # every edge with a point source, the rest thinned out by a fixed draw
                if alpha == "0" or generator.random() < 0.25:
                    yield w, t, alpha
    for _ in range(600):
        yield ("%.4f" % 10 ** generator.uniform(2.2553, 6), "%.5e" % 10 ** generator.uniform(-13, 4.47), "0")
    for _ in range(600):
        yield ("%.4f" % generator.uniform(400, 1400), "%.5e" % 10 ** generator.uniform(-13, 4.47),
               "%.3f" % generator.uniform(0, 300) if target == "eye" else "0")


# Just beside every edge: the printed edges, and how far beside. An edge that moves by 1 % passes these.
STEPS_NM = [str(w) for w in range(303, 316)]
BESIDE_NM = "180 302.5 400 450 600 700 1050 1150 1200 1250 1400 1500 1800 2600 100000 1000000".split()
BESIDE_S = ("1e-13 1e-11 1e-9 1e-7 5e-6 1.3e-5 1.8e-5 5e-5 625e-6 1e-3 0.25 0.3 0.35 10 100 1000 1e4 3e4").split()
BESIDE_MRAD = "1.5 5 11 100 110".split()
BESIDE_M2 = "0.01 0.1".split()
MIDDLE_NM = ("250 303.5 304.5 305.5 306.5 307.5 308.5 309.5 310.5 311.5 312.5 313.5 314.5 350 425 500 650 800 1100 "
             "1175 1225 1300 1450 1650 2000 10000 500000").split()
MIDDLE_S = "5e-12 2e-10 3e-8 1.5e-6 9e-6 3e-5 2e-4 0.02 1 20 500 5000 20000".split()
SOURCE_NM = "425 550 650 800 1300".split()
SOURCE_S = "2e-10 1e-5 3e-3 0.1 20 50 500 20000".split()  # and beside BESIDE_SOURCE_S
BESIDE_SOURCE_S = "625e-6 0.25 10 100 1e4".split()
SOURCE_MRAD = "3 7 30 60 250 1565".split()
AREA_NM = "1394 1406 1450 10000 200000".split()
AREA_S = "5 9.96 10.04 1000 29000".split()


def beside(edges, low="-inf", high="inf"):
    """Each edge times 1 +- 0.004, within the domain of the rule sets."""
    found = [mp.nstr(mpf(edge) * (1 + side * mpf("0.004")), 10) for edge in edges for side in (-1, 1)]
    return [text for text in found if mpf(low) <= mpf(text) <= mpf(high)]


def edge_points(target):
    near_nm = beside(BESIDE_NM, "180", "1e6") + [mp.nstr(mpf(w) + side, 6) for w in STEPS_NM
                                                 for side in (mpf("-0.25"), mpf("0.25"))]
    for w in near_nm:
        for t in MIDDLE_S:
            yield w, t, "0", "0"
    for w in MIDDLE_NM:
        for t in beside(BESIDE_S, "1e-13", "3e4"):
            yield w, t, "0", "0"
    if target == "skin":
        for area in ["0.005", "0.05", "0.5"] + beside(BESIDE_M2):
            for w in AREA_NM:
                for t in AREA_S:
                    yield w, t, "0", area
        return
    for alpha in SOURCE_MRAD + beside(BESIDE_MRAD):
        for w in SOURCE_NM:
            for t in SOURCE_S + beside(BESIDE_SOURCE_S):
                yield w, t, alpha, "0"


def number(value):
    return mp.nstr(value, 18)


def write_grid(writer):
    writer.writerow(("rules", "target", "wavelength_nm", "exposure_s", "subtense_mrad", "effect",
                     "radiant_exposure_j_m2"))
    for rules, identifier in IDS.items():
        for target in ("eye", "skin"):
            for w, t, alpha in points(rules, target):
                for effect, value in limits(rules, target, mpf(w), mpf(t), mpf(alpha)).items():
                    writer.writerow((identifier, target, w, t, alpha, effect, number(value)))


def write_edges(writer):
    """Where a rule set has no row, one line with the effect `none`."""
    writer.writerow(("rules", "target", "wavelength_nm", "exposure_s", "subtense_mrad", "area_m2", "effect",
                     "radiant_exposure_j_m2", "aperture_mm", "acceptance_mrad"))
    for rules, identifier in IDS.items():
        for target in ("eye", "skin"):
            for place in edge_points(target):
                if rules == "ansi" and not 390 <= float(place[0]) <= 1260:
                    continue
                w, t, alpha, area = map(mpf, place)
                found = limits(rules, target, w, t, alpha, area)
                for effect, value in found.items():
                    writer.writerow((identifier, target) + place + (effect, number(value), number(aperture(
                        rules, effect, w, t)), acceptance(rules, effect, t, alpha)))
                if not found:
                    writer.writerow((identifier, target) + place + ("none", "0", "0", "inf"))


def write(name, rows):
    path = os.path.join(os.path.dirname(os.path.abspath(__file__)), name)
    with open(path, "w", newline="") as file:
        rows(csv.writer(file, lineterminator="\n"))


if __name__ == "__main__":
    write("limits.csv", write_grid)
    write("limits_edges.csv", write_edges)
