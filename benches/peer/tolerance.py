"""Tolerances of a level sheet lip with NumPy: the same formulas and the same answer as the service's, vectorised.

    python tolerance.py ADDRESS [TRIALS]

Five inputs vary (radius, turn, advancing angle, width, pour rate, all normal). The whole study is timed, as the service does
it: draws, margins, share below zero, mean and standard deviation, nine quantiles, a histogram, first-order and total Sobol'
indices with N = 16 384. Whole arrays on one thread, as one would write it first; and in pieces that stay in the cache, on as
many threads as there are cores (NumPy lets go of the interpreter's lock inside its loops). Results are checked against the
service's at ADDRESS (host:port) within the sampling error.
"""

import http.client
import json
import os
import statistics
import sys
import time
from concurrent.futures import ThreadPoolExecutor

import numpy as np

GRAVITY = 9.80665
DEGREE = np.pi / 180
# Coefficient set 1.
MOMENTUM, WETTING_EXPONENT, TURN_EXPONENT = 1.16, 1.1373, 2.4062
RADIUS = (0.1825, 2.2445, 1.1133)
FALL = (9.730, 103.06, 2.7944, 0.5569, 1.5033)
DENSITY, VISCOSITY, TENSION = 1030.0, 2.1e-3, 46e-3

FIELDS = [
    ("/lip/edge/rounded/radius_mm", 0.5, 0.04, 1e-3),
    ("/lip/edge/rounded/turn_deg", 125.0, 1.5, DEGREE),
    ("/surface/measured/advancing_deg", 84.0, 5.0, DEGREE),
    ("/lip/section/sheet/width_mm", 24.0, 0.3, 1e-3),
    ("/pour/flow_ml_s", 46.0, 8.0, 1e-6),
]
MEAN = np.array([f[1] for f in FIELDS])
SD = np.array([f[2] for f in FIELDS])
TO_SI = [f[3] for f in FIELDS]
PROBABILITIES = [0.001, 0.01, 0.025, 0.05, 0.5, 0.95, 0.975, 0.99, 0.999]
BASE_POINTS = 16_384


def request(trials):
    return {
        "base": {
            "lip": {
                "section": {"sheet": {"width_mm": 24}},
                "edge": {"rounded": {"radius_mm": 0.5, "turn_deg": 125}},
            },
            "surface": {"measured": {"advancing_deg": 84}},
            "liquid": {"measured": {"density_kg_m3": DENSITY, "viscosity_mpa_s": 2.1, "surface_tension_mn_m": 46}},
            "pour": {"flow_ml_s": 46},
        },
        "varying": [
            {"pointer": pointer, "spread": {"normal": {"mean": mean, "sd": sd}}} for pointer, mean, sd, _ in FIELDS
        ],
        "trials": trials,
    }


def margin(normal):
    """ln(safety factor) for rows of standard normal numbers, one row an input."""
    radius, turn, angle, width, flow = (
        (m + s * z) * si for m, s, z, si in zip(MEAN, SD, normal, TO_SI)
    )
    a, b, c = RADIUS
    d, e, f, g, k = FALL
    per_width = flow / width
    depth = np.cbrt(per_width * per_width / GRAVITY)
    speed = per_width / depth
    weber = DENSITY * speed * speed * depth / TENSION
    viscous = np.log(100 * VISCOSITY / (DENSITY * speed * depth))
    # Level: the Froude number is 1, and a power of it falls away.
    ratio = np.log(radius / depth)
    fall = np.exp(g * viscous)
    bracket = 1 + a * np.exp(b * ratio + c * viscous) + (d + e * np.exp(f * ratio)) * fall
    cling = (1 + np.cos(angle)) ** WETTING_EXPONENT * (1 - np.cos(turn)) ** -TURN_EXPONENT
    return np.log(weber) - np.log((1 + cling * bracket) / MOMENTUM)


def indices(rng):
    """Saltelli 2010 first order, Jansen total; N(d + 2) runs."""
    count = len(FIELDS)
    a = rng.standard_normal((count, BASE_POINTS))
    b = rng.standard_normal((count, BASE_POINTS))
    at_a, at_b = margin(a), margin(b)
    both = np.concatenate([at_a, at_b])
    mean, variance = both.mean(), both.var()
    first, total = [], []
    for i in range(count):
        mixed = a.copy()
        mixed[i] = b[i]
        at_mixed = margin(mixed)
        first.append(np.mean((at_b - mean) * (at_mixed - at_a)) / variance)
        total.append(0.5 * np.mean((at_a - at_mixed) ** 2) / variance)
    return first, total


def study(trials, margins, rng):
    m = margins(trials)
    return {
        "ppm": 1e6 * np.count_nonzero(m < 0) / trials,
        "mean": m.mean(),
        "sd": m.std(ddof=1),
        "quantiles": np.quantile(m, PROBABILITIES),
        "histogram": np.histogram(m, 60),
        "indices": indices(rng),
    }


def whole(trials):
    return margin(np.random.default_rng(1).standard_normal((len(FIELDS), trials)))


def pieces(pool, workers):
    piece = 16_384

    def run(trials):
        def share(worker):
            rng = np.random.default_rng([1, worker])
            own = trials // workers + (worker < trials % workers)
            return [
                margin(rng.standard_normal((len(FIELDS), min(piece, own - at)))) for at in range(0, own, piece)
            ]

        return np.concatenate(sum(pool.map(share, range(workers)), []))

    return run


def ask(connection, body):
    connection.request("POST", "/v1/tolerances", body, {"Content-Type": "application/json"})
    response = connection.getresponse()
    text = response.read()
    assert response.status == 200, text
    return text


def timed(name, run, repeats=7):
    run()
    times = []
    for _ in range(repeats):
        start = time.perf_counter()
        run()
        times.append(time.perf_counter() - start)
    print(f"{name:42} best {min(times):.3f} s, median {statistics.median(times):.3f} s")
    return min(times)


def main():
    address = sys.argv[1]
    trials = int(sys.argv[2]) if len(sys.argv) > 2 else 1_000_000
    connection = http.client.HTTPConnection(address, timeout=600)
    body = json.dumps(request(trials))
    theirs = json.loads(ask(connection, body))
    ours = study(trials, whole, np.random.default_rng(2))
    error = ours["sd"] / trials**0.5
    assert abs(ours["mean"] - theirs["margin"]["mean"]) < 6 * error, (ours["mean"], theirs["margin"]["mean"])
    assert abs(ours["sd"] / theirs["margin"]["standard_deviation"] - 1) < 6 / trials**0.5
    rate = theirs["dribble_ppm"]
    width = (1e6 * max(rate["value"], 1.0) / trials) ** 0.5
    assert abs(ours["ppm"] - rate["value"]) < 6 * width, (ours["ppm"], rate)
    for mine, driver in zip(ours["indices"][0], theirs["drivers"]):
        assert abs(mine - driver["first_order"]) < 0.06, (mine, driver)
    print(f"the same within the sampling error: {rate['value']:.1f} ppm, sd {ours['sd']:.4f}")
    workers = os.cpu_count()
    plain = timed("NumPy, whole arrays", lambda: study(trials, whole, np.random.default_rng(2)))
    with ThreadPoolExecutor(workers) as pool:
        run = pieces(pool, workers)
        cached = timed(f"NumPy, pieces on {workers} threads", lambda: study(trials, run, np.random.default_rng(2)))
    service = timed("the service, over HTTP", lambda: ask(connection, body))
    print(f"the service is {plain / service:.1f} times as fast as whole arrays, {cached / service:.1f} as pieces")


if __name__ == "__main__":
    main()
