#!/usr/bin/env python3
"""What the rule sets say beside their limits, in arbitrary precision: factors, grouping and counting times, pulse
trains, sums, customary times; and the materials.

Written from the printed statements, not from limits_tables/*.ini. Writes beside itself
  limits_rules.csv  test_reference_rules.c and tests/mutation compare it with the library
  materials.csv     the same for the materials

Sources: Directive 2006/25/EC Annex II, Tables 2.5 and 2.6 (read in two transpositions); ICNIRP, Health Physics
105(3):271-295, 2013, IEC 60825-1:2014 Annex A, ANSI Z136.1-2014 (from memory); additivity table (from memory);
customary times: TROS Laserstrahlung 2, 4.1 and IEC TR 60825-14 as AS/NZS (read), else from memory.

Columns: what, rules, word, a, b, c, d, e, want. `none`: the rule set has nothing there.
  factor   word = name; a = wavelength [nm] or subtense [mrad]
  ti       a = wavelength [nm]; the grouping time [s]
  applies  word = effect; a = wavelength [nm]; 1 if the correction by N holds for it
  count    a = subtense [mrad]; pulses are counted in this time [s]
  longest  longest pulse that the correction by N holds for [s]
  train    a = pulse [s], b = Ti [s], c = N, d = exposure [s], e = subtense [mrad]; the correction
  adds     word = target; a, b = wavelengths [nm]; 1 if their exposures add
  time     word = way of viewing; a, b = wavelengths [nm] (b = 0: one); c = 1 if it rests on the aversion response
  prints   word = words that the printed rule set must show; 1
"""
import itertools
import sys
from mpmath import mp, mpf, power

sys.dont_write_bytecode = True  # leaves no cache in the tree
from generate_limits import IDS, QUARTER, alpha_max, beside, ca, cb, cc, exp10, number, t2, write


def domain(rules):
    return (400, 1200) if rules == "ansi" else (180, 1000000)


# ---- factors -----------------------------------------------------------------------------------------------------
def factor_rows(rules):
    """CA and CC over the retinal region, 400 to 1400 nm; CB as printed to 700 nm; IEC's ultraviolet pair."""
    far = mpf(1200 if rules == "ansi" else 1400)
    uv = (mpf("302.5"), mpf(315))
    factors = [("ca", 400, far, ca), ("cb", 400, 700, cb), ("cc", 400, far, lambda w: cc(rules, w))]
    if rules == "iec":
        factors += [("cuv", *uv, lambda w: exp10(mpf("0.2") * (w - 295))),
                    ("t1", *uv, lambda w: mpf("1e-15") * exp10(mpf("0.8") * (w - 295)))]
    edges = [400, 450, 700, 1050, 1150, 1200, 1400, "302.5", 315]
    for name, low, high, formula in factors:
        for w in beside(edges) + ["425", "500", "600", "800", "1100", "1175", "1300", "308"]:
            inside = low <= mpf(w) <= high
            yield name, (w,), number(formula(mpf(w))) if inside else "none"
    for alpha in SOURCES:
        yield "t2", (alpha,), number(t2(mpf(alpha)))


# ---- trains ------------------------------------------------------------------------------------------------------
SOURCES = ["0", "1", "4", "50"] + beside(["1.5", "5", "100"]) + ["250", "1500"]


def grouping_time(rules, w):
    """Tmin of Table 2.6; Ti of the newer sets differs only from 400 to 1400 nm."""
    retina = ("1.8e-5", "5e-5") if rules == "eu" else ("5e-6", "1.3e-5")
    bands = [(315, 400, "1e-9"), (400, 1050, retina[0]), (1050, 1400, retina[1]), (1400, 1500, "1e-3"),
             (1500, 1800, "10"), (1800, 2600, "1e-3"), (2600, 1000000, "1e-7")]
    low, high = domain(rules)
    found = [time for first, last, time in bands if first <= w <= last and low <= w <= high]
    return found[0] if found else "none"


def applies(rules, effect, w):
    """Retinal thermal limits; in the Directive every thermal limit of the eye, for which Table 2.6 names a Tmin."""
    bands = {"retina-thermal": (400, 1200 if rules == "ansi" else 1400)}
    if rules == "eu":
        bands.update({"anterior": (1400, 1000000), "ultraviolet": (315, 400)})
    low, high = bands.get(effect, (1, 0))
    return "1" if low <= w <= high else "0"


def long_pulse_correction(rules, alpha, n, pulse):
    """CP of the newer sets, pulses longer than Ti."""
    if alpha <= 5 or alpha > 100:
        return mpf(1)
    if alpha <= alpha_max(rules, pulse):
        return power(n, -QUARTER) if n <= 40 else mpf("0.4")
    return power(n, -QUARTER) if n <= 625 else mpf("0.2")


def correction(rules, pulse, ti, n, exposure, alpha):
    if rules == "eu" or n == 1:
        return power(n, -QUARTER)
    if rules == "iec" and pulse > QUARTER:
        return mpf(1)
    if pulse > ti:
        return long_pulse_correction(rules, alpha, n, pulse)
    if rules != "iec" or exposure <= QUARTER or n <= 600:
        return mpf(1)
    return min(mpf(1), max(mpf("0.4"), 5 * power(n, -QUARTER)))


PULSES = "1e-7 5e-6 5.02e-6 1e-4 1e-3 0.01 0.1 0.249 0.251 1".split()
COUNTS = "1 2 5 39 40 40.2 41 599 600 600.5 601 624 626 10000 1000000000".split()
EXPOSURES = "0.1 0.249 0.251 10 100".split()
TRAIN_SOURCES = ["0"] + beside(["5", "100"]) + ["6", "25", "62", "64", "250"]


def train_rows(rules):
    for place in itertools.product(PULSES, ["5e-6"], COUNTS, EXPOSURES, TRAIN_SOURCES):
        # the exposure matters to IEC's short pulses only: one of it elsewhere
        if place[3] != "10" and (rules != "iec" or mpf(place[0]) > mpf("5e-6")):
            continue
        yield place, number(correction(rules, *map(mpf, place)))


# ---- sums and times ----------------------------------------------------------------------------------------------
BANDS = [(180, 315), (315, 400), (400, 1400), (1400, 1000000)]
ADDS = {(0, 0): "eye skin", (1, 1): "eye skin", (1, 2): "skin", (1, 3): "eye skin", (2, 2): "eye skin", (2, 3): "skin",
        (3, 3): "eye skin"}


def adds(rules, target, first, second):
    low, high = domain(rules)
    if not (low <= first <= high and low <= second <= high):
        return "0"
    pairs = [tuple(sorted((i, j))) for i, a in enumerate(BANDS) for j, b in enumerate(BANDS)
             if a[0] <= first <= a[1] and b[0] <= second <= b[1]]
    return "1" if any(target in ADDS.get(pair, "") for pair in pairs) else "0"


GLANCE_S = {"eu": "100", "iec": "100", "icnirp": "10", "ansi": "10"}


def exposure_time(rules, viewing, wavelengths):
    """(seconds, rests on the aversion response). Ultraviolet: a working day, whatever else is in the beam."""
    low, high = domain(rules)
    if not all(low <= w <= high for w in wavelengths):
        return "none", "0"
    if viewing == "working-day" or any(w < 400 for w in wavelengths):
        return "30000", "0"
    if viewing == "diffuse":
        return "600", "0"
    visible = all(w <= 700 for w in wavelengths)
    if visible and viewing == "glance":
        return "0.25", "1"
    if visible and viewing == "alignment":
        return "2", "0"
    return GLANCE_S[rules], "0"


def rules_rows(writer):
    writer.writerow("what rules word a b c d e want".split())

    def row(what, rules, word, place, want):
        place = tuple(place) + ("0",) * (5 - len(place))
        writer.writerow((what, IDS[rules], word) + place + (want,))

    wavelengths = beside([180, 315, 400, 700, 1050, 1200, 1400, 1500, 1800, 2600, 1000000], "180", "1e6")
    bands = beside([180, 315, 400, 1200, 1400, 1000000], "180", "1e6")
    pairs = [(a,) for a in wavelengths] + [(a, b) for a in ("350", "402", "650", "810") for b in wavelengths]
    for rules in IDS:
        for name, place, want in factor_rows(rules):
            row("factor", rules, name, place, want)
        for w in wavelengths:
            row("ti", rules, "-", (w,), grouping_time(rules, mpf(w)))
            for effect in ("retina-thermal", "retina-photochemical", "ultraviolet", "anterior", "skin"):
                row("applies", rules, effect, (w,), applies(rules, effect, mpf(w)))
        for alpha in SOURCES:
            row("count", rules, "-", (alpha,), "inf" if rules == "eu" else number(t2(mpf(alpha))))
        if rules == "icnirp":  # at 0.01 m2, 10/A is 1000 W/m2 as for less skin: only the page shows where it begins
            row("prints", rules, "0.01 .. 0.1 m2", (), "1")
            row("prints", rules, "0.1 .. m2", (), "1")
        row("longest", rules, "-", (), "0.25" if rules == "iec" else "inf")
        for place, want in train_rows(rules):
            row("train", rules, "-", place, want)
        for target in ("eye", "skin"):
            for first, second in itertools.combinations_with_replacement(bands, 2):
                row("adds", rules, target, (first, second), adds(rules, target, mpf(first), mpf(second)))
        for viewing in ("glance", "diffuse", "skin", "alignment", "working-day"):
            for place in pairs:
                want, aversion = exposure_time(rules, viewing, [mpf(w) for w in place])
                row("time", rules, viewing, (place + ("0",))[:2] + (aversion,), want)


# ---- materials ---------------------------------------------------------------------------------------------------
# Reflectance 700 to 1100 nm (from memory), the upper end of each printed range: light skin 0.4-0.65; white wall paint
# 0.8-0.9, matt; brushed stainless steel 0.5-0.65; silvered mirror 0.9-0.97; glass n = 1.52, whose Fresnel reflectance
# ((n - 1)/(n + 1))^2 = 0.04258 is printed to three digits, rounded up. What has no published value: 1.
FINISH = ("matt", "mirror", "gloss", "glass")
MATERIALS = [  # name, finish, reflectance, matt_reflectance, transmittance, refractive_index
    ("painted-wall", "matt", "0.9", "0.9", "0", "0"),
    ("gloss-paint", "gloss", "0.0426", "0.9", "0", "1.52"),
    ("skin", "matt", "0.65", "0.65", "0", "0"),
    ("brushed-steel", "mirror", "0.65", "0", "0", "0"),
    ("polished-steel", "mirror", "1", "0", "0", "0"),
    ("mirror", "mirror", "0.97", "0", "0", "0"),
    ("glass", "glass", "0.0426", "0", "1", "1.52"),
    ("wood", "matt", "1", "1", "0", "0"),
    ("fabric", "matt", "1", "1", "1", "0"),
    ("opaque-screen", "matt", "1", "1", "0", "0"),
    ("unknown", "mirror", "1", "0", "0", "0"),
]


def materials_rows(writer):
    writer.writerow("name finish reflectance matt_reflectance transmittance refractive_index".split())
    for material in MATERIALS:
        assert material[1] in FINISH
        if material[5] != "0":
            n = mpf(material[5])
            assert mpf(material[2]) == mp.ceil(((n - 1) / (n + 1)) ** 2 * 10000) / 10000
        writer.writerow(material)


if __name__ == "__main__":
    write("limits_rules.csv", rules_rows)
    write("materials.csv", materials_rows)
