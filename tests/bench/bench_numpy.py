"""The work of bw_hazard_many in numpy, vectorised: icnirp-2013, a point source, 400 to 1400 nm, Gaussian beams.

usage: bench_numpy.py PAIRS RESULTS TIMES
Reads the pairs of wavelength and time that bench_beamward wrote, does the same work, compares the answers, and adds
its times. Written for speed: square roots instead of powers, exp2, only the places where an effect exists, and in
blocks that stay in the cache."""
import sys
import time

import numpy as np

POWER_W, DIAMETER_M, DIVERGENCE_RAD = 5.0, 3e-3, 0.02
BLOCK = 40000
RUNS = 15


def power_of_ten(x):
    return np.exp2(3.321928094887362 * x)


def thermal(w, t):
    """Retina, thermal: irradiance over 7 mm [W/m2]."""
    infrared = w >= 1050
    ca = np.where(infrared, 5.0, power_of_ten(0.002 * np.clip(w - 700, 0, 350)))
    cc = np.where(infrared, power_of_ten(0.018 * np.clip(w - 1150, 0, 50)), 1.0)
    beyond = np.flatnonzero(w >= 1200)
    cc[beyond] = 8 + power_of_ten(0.04 * (w[beyond] - 1250))
    rising = np.where(infrared, 90 * cc, 18 * ca) / np.sqrt(np.sqrt(t))
    short = np.where(infrared, 2e-2 * cc, 2e-3 * ca) / t
    e = np.where(t < np.where(infrared, 1.3e-5, 5e-6), short, rising)
    return np.where(t >= 10, 10 * ca * cc, e)


def photochemical(w, t):
    """Retina, photochemical, 400 to 600 nm, from 10 s: irradiance over 7 mm."""
    cb = power_of_ten(0.02 * np.maximum(w - 450, 0))
    return np.where(t < 100, 100 * cb / t, cb)


def anterior(w, t):
    """The skin limit kept at the cornea, 1250 to 1400 nm: irradiance, and the aperture [m]."""
    root = np.sqrt(t)
    quarter = np.sqrt(root)
    e = np.where(t < 1e-7, 200 * 5 / t, 1.1e4 * 5 / (root * quarter))
    e = np.where(t >= 10, 2000 * 5, e)
    mm = np.where(t < 0.35, 1.0, np.where(t < 10, 1.5 * quarter * np.sqrt(quarter), 3.5))
    return e, mm * 1e-3


def hazard(e, aperture):
    """Square of the hazard distance, and the ratio at the exit, of a Gaussian beam."""
    q = e * (np.pi / 4 * aperture**2 / POWER_W)
    edge = aperture**2 / -np.log1p(-np.minimum(q, 1))
    ratio = -np.expm1(-((aperture / DIAMETER_M) ** 2)) / q
    return np.maximum(edge - DIAMETER_M**2, 0) / DIVERGENCE_RAD**2, ratio


def work(w, t):
    e = thermal(w, t)
    reach, ratio = hazard(e, 7e-3)
    blue = np.flatnonzero((w <= 600) & (t >= 10))
    front = np.flatnonzero(w >= 1250)
    for at, (other, aperture) in (
        (blue, (photochemical(w[blue], t[blue]), 7e-3)),
        (front, anterior(w[front], t[front])),
    ):
        other_reach, other_ratio = hazard(other, aperture)
        e[at] = np.minimum(e[at], other)
        reach[at] = np.maximum(reach[at], other_reach)
        ratio[at] = np.maximum(ratio[at], other_ratio)
    return e * t, np.sqrt(reach), np.log10(np.maximum(ratio, 1))


def all_work(w, t):
    out = np.empty((3, len(w)))
    for i in range(0, len(w), BLOCK):
        out[:, i : i + BLOCK] = work(w[i : i + BLOCK], t[i : i + BLOCK])
    return out


def main():
    w, t = np.fromfile(sys.argv[1]).reshape(2, -1)
    want = np.fromfile(sys.argv[2]).reshape(3, -1)
    times = []
    with np.errstate(divide="ignore"):
        for _ in range(RUNS):
            start = time.thread_time()
            got = all_work(w, t)
            times.append(time.thread_time() - start)
    with open(sys.argv[3], "a") as file:
        file.write(f"numpy {np.__version__};{min(times):.9g};{sorted(times)[RUNS // 2]:.9g}\n")
    off = [np.max(np.abs(g - o) / np.maximum(np.abs(o), 1)) for g, o in zip(got, want)]
    print(f"numpy differs by at most {off[0]:.1e} (limit), {off[1]:.1e} (distance), {off[2]:.1e} (density)")
    return 0 if max(off) <= 1e-9 else 1


sys.exit(main())
