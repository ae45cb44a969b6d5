"""A sweep of radius by flow over a level sheet lip with NumPy: the same formulas as the service, vectorised.

    python sweep.py ADDRESS

Checks its numbers against the service's at ADDRESS (host:port) to 1e-9, then times a million points: whole arrays on one
thread, as one would write it first; and in pieces that stay in the cache, on as many threads as there are cores (NumPy lets
go of the interpreter's lock inside its loops). Both reuse what the grid repeats: the stream is computed once for each pour
rate, the powers of the radius once for each radius. It prints the best and the median of several runs, and the service's own
time for the same million points as an Arrow stream.
"""

import http.client
import json
import os
import statistics
import sys
import time
from concurrent.futures import ThreadPoolExecutor

import numpy as np
from scipy.special import ndtr

GRAVITY = 9.80665
DEGREE = np.pi / 180
# Coefficient set 1.
MOMENTUM, WETTING_EXPONENT, TURN_EXPONENT = 1.16, 1.1373, 2.4062
RADIUS = (0.1825, 2.2445, 1.1133)
FALL = (9.730, 103.06, 2.7944, 0.5569, 1.5033)
MODEL_UNCERTAINTY = 0.35
RATIO_LOW, RATIO_HIGH = 0.1, 3.0
REYNOLDS_LOW, REYNOLDS_HIGH = 25.0, 800.0
FROUDE_LOW = 2.2
PER_DOUBLING = 0.15

# The lip, the liquid and the surface of the sweep.
WIDTH, TURN = 24e-3, 110 * DEGREE
DENSITY, VISCOSITY, TENSION = 1030.0, 2.1e-3, 46e-3
ANGLE = 84 * DEGREE
# Standard uncertainties that the service takes where none are given.
U_DENSITY, U_VISCOSITY, U_TENSION = 0.001, 0.02, 0.01
U_ANGLE, U_TURN, U_SLOPE = 3 * DEGREE, 1 * DEGREE, 0.5 * DEGREE
U_WIDTH, U_FLOW, U_THICKNESS = 0.01, 0.03, 0.065
U_RADIUS, U_RADIUS_AT_LEAST = 0.05, 0.01e-3


def doublings(ratio):
    return np.maximum(np.log2(ratio), 0.0)


def edge():
    """Wetting and turn: what does not change in this sweep."""
    wetting = 1 + np.cos(ANGLE)
    bend = 1 - np.cos(TURN)
    cling = wetting**WETTING_EXPONENT * bend**-TURN_EXPONENT
    by_angle = -WETTING_EXPONENT * wetting ** (WETTING_EXPONENT - 1) * np.sin(ANGLE) * bend**-TURN_EXPONENT
    by_turn = -TURN_EXPONENT * cling * np.sin(TURN) / bend
    return cling, by_angle, by_turn


def stream(flow):
    """What follows from the pour rate alone: critical section of a level sheet."""
    a, b, c = RADIUS
    d, e, f, g, k = FALL
    per_width = flow / WIDTH
    depth = np.cbrt(per_width**2 / GRAVITY)
    speed = per_width / depth
    weber = DENSITY * speed**2 * depth / TENSION
    reynolds = DENSITY * speed * depth / VISCOSITY
    froude = speed**2 / (GRAVITY * depth)
    viscous = np.log(100 / reynolds)
    ln_depth = np.log(depth)
    fall = g * viscous - k * np.log(froude)
    return {
        "depth": depth,
        "weber": weber,
        "ln_weber": np.log(weber),
        "radius": a * np.exp(c * viscous - b * ln_depth),
        "fall": d * np.exp(fall),
        "blunt": e * np.exp(fall - f * ln_depth),
        "doubt": MODEL_UNCERTAINTY**2
        + (PER_DOUBLING * np.maximum(doublings(REYNOLDS_LOW / reynolds), doublings(reynolds / REYNOLDS_HIGH))) ** 2
        + (PER_DOUBLING * doublings(FROUDE_LOW / froude)) ** 2,
    }


def rim(radius):
    """What follows from the radius alone."""
    ln = np.log(radius)
    uncertainty = np.maximum(U_RADIUS * radius, U_RADIUS_AT_LEAST)
    return {
        "radius": radius,
        "power": np.exp(RADIUS[1] * ln),
        "fall_power": np.exp(FALL[2] * ln),
        "doubt": (uncertainty / radius) ** 2,
    }


def judge(s, r):
    """Safety factor and dribble probability where streams meet radii."""
    _, b, c = RADIUS
    _, _, f, g, k = FALL
    cling, by_angle, by_turn = edge()
    bluntness = s["radius"] * r["power"]
    blunt = s["blunt"] * r["fall_power"]
    gravity = s["fall"] + blunt
    bracket = 1 + bluntness + gravity
    total = 1 + cling * bracket
    share = cling / total
    critical = total / MOMENTUM
    margin = s["ln_weber"] - np.log(critical)
    by_ratio = share * (b * bluntness + f * blunt)
    by_reynolds = -share * (c * bluntness + g * gravity)
    by_froude = -share * k * gravity
    by_thickness = 1 - by_reynolds + by_froude + by_ratio
    by_speed = 2 - by_reynolds - 2 * by_froude
    by_flow = (2 * by_thickness + by_speed) / 3
    ratio = r["radius"] / s["depth"]
    offset = 0.2 * RATIO_LOW
    beyond = PER_DOUBLING * np.maximum(
        doublings((RATIO_LOW + offset) / (ratio + offset)), doublings(ratio / RATIO_HIGH)
    )
    variance = (
        ((1 - by_reynolds) * U_DENSITY) ** 2
        + (by_reynolds * U_VISCOSITY) ** 2
        + U_TENSION**2
        + (by_angle * bracket / total * U_ANGLE) ** 2
        + (by_turn * bracket / total * U_TURN) ** 2
        + by_ratio**2 * r["doubt"]
        + by_flow**2 * (U_FLOW**2 + U_WIDTH**2)
        + ((by_thickness - by_speed) * U_THICKNESS) ** 2
        + s["doubt"]
        + beyond**2
    )
    return s["weber"] / critical, ndtr(-margin / np.sqrt(variance))


def whole(radii, flows):
    s = {name: value[None, :] for name, value in stream(flows).items()}
    r = {name: value[:, None] for name, value in rim(radii).items()}
    return judge(s, r)


def in_pieces(radii, flows, pool, rows=8):
    s = {name: value[None, :] for name, value in stream(flows).items()}
    r = {name: value[:, None] for name, value in rim(radii).items()}
    factor = np.empty((radii.size, flows.size))
    probability = np.empty_like(factor)

    def piece(start):
        part = {name: value[start : start + rows] for name, value in r.items()}
        factor[start : start + rows], probability[start : start + rows] = judge(s, part)

    list(pool.map(piece, range(0, radii.size, rows)))
    return factor, probability


def request(side):
    return json.dumps(
        {
            "base": {
                "lip": {
                    "section": {"sheet": {"width_mm": 24}},
                    "edge": {"rounded": {"radius_mm": 0.8, "turn_deg": 110}},
                },
                "surface": {"measured": {"contact_angle_deg": 72, "advancing_deg": 84, "receding_deg": 41}},
                "liquid": {
                    "measured": {"density_kg_m3": 1030, "viscosity_mpa_s": 2.1, "surface_tension_mn_m": 46}
                },
                "pour": {"flow_ml_s": 25},
            },
            "axes": [
                {"pointer": "/lip/edge/rounded/radius_mm", "from": 0.1, "to": 3, "count": side},
                {"pointer": "/pour/flow_ml_s", "from": 5, "to": 100, "count": side},
            ],
            "outputs": ["safety_factor", "dribble_probability"],
        }
    )


def ask(address, side, accept):
    connection = http.client.HTTPConnection(address)
    connection.request(
        "POST", "/v1/sweeps", request(side), {"Content-Type": "application/json", "Accept": accept}
    )
    response = connection.getresponse()
    buffer = bytearray(1 << 18)
    parts = []
    while (count := response.readinto(buffer)) > 0:
        parts.append(bytes(buffer[:count]) if accept == "application/json" else count)
    assert response.status == 200, response.status
    connection.close()
    return b"".join(parts) if accept == "application/json" else sum(parts)


def timed(work, rounds=9):
    times = []
    for _ in range(rounds):
        begun = time.perf_counter()
        work()
        times.append(time.perf_counter() - begun)
    return statistics.median(times), min(times)


def main():
    address = sys.argv[1]
    columns = json.loads(ask(address, 300, "application/json"))["columns"]
    radii, flows = np.linspace(0.1, 3, 300) * 1e-3, np.linspace(5, 100, 300) * 1e-6
    worst = 0.0
    for mine, name in zip(whole(radii, flows), ("safety_factor", "dribble_probability")):
        theirs = np.array(columns[name]).reshape(300, 300)
        worst = max(worst, float(np.max(np.abs(mine - theirs) / np.abs(theirs))))
    print(f"peer: 90 000 points agree with the service to {worst:.1e}")
    if not worst < 1e-9:
        sys.exit("peer: they differ")

    radii, flows = np.linspace(0.1, 3, 1000) * 1e-3, np.linspace(5, 100, 1000) * 1e-6
    cores = len(os.sched_getaffinity(0))
    with ThreadPoolExecutor(cores) as pool:
        rows = [
            ("NumPy, whole arrays, one thread", lambda: whole(radii, flows)),
            (f"NumPy, in pieces, {cores} threads", lambda: in_pieces(radii, flows, pool)),
            (
                "service over HTTP as Arrow, read by this script",
                lambda: ask(address, 1000, "application/vnd.apache.arrow.stream"),
            ),
        ]
        for name, work in rows:
            median, best = timed(work)
            print(f"peer: {name}: median {median * 1e3:.0f} ms ({1 / median:.2f} M points/s), best {best * 1e3:.0f} ms")


main()
