"""Compare R718 with IAPWS-95 as Debian's package python3-iapws evaluates it.

usage: water.py DEWMARK

DEWMARK is the built binary. Its states are asked for in batches through `dewmark call`, over a grid of temperature and
pressure and along the saturation line. Every property must agree within TOLERANCE, relative; enthalpy and entropy, which
pass through zero at the datum, relative to at least R T and R.
"""

import json
import subprocess
import sys

from iapws import IAPWS95

TOLERANCE = 1e-6
R = 0.46151805  # kJ/(kg K), IAPWS R6-95(2018)
BATCH = 500
PROPERTIES = {  # ours: theirs
    "pressure": "P",
    "density": "rho",
    "enthalpy": "h",
    "entropy": "s",
    "isobaric_heat_capacity": "cp",
    "isochoric_heat_capacity": "cv",
    "speed_of_sound": "w",
}
SCALE = {"enthalpy": lambda T: R * T, "entropy": lambda T: R}


def grid():
    """Yield (T in K, p in MPa) over liquid, vapour and supercritical water, clear of the melting line of ice."""
    for T in [274, 280, 290, 300, 320, 350, 400, 450, 500, 550, 600, 630, 645, 650, 660, 700, 800, 900, 1000, 1150, 1273]:
        for p in [0.0006, 0.005, 0.02, 0.101325, 0.5, 1, 2, 5, 10, 15, 20, 22, 23, 25, 30, 40, 60, 100, 200, 400, 700, 1000]:
            if T < 360 and p > 400:  # ice VI and VII lie up there
                continue
            yield T, p


def saturation_temperatures():
    """Yield temperatures in K. The reference's own solver loses digits above 640 K."""
    T = 274.0
    while T <= 640:
        yield T
        T += 3


def ask(dewmark, points):
    """Return the states of dewmark for points."""
    states = []
    for start in range(0, len(points), BATCH):
        request = {
            "refrigerant": "R718",
            "datum": "triple_point",
            "units": {"system": "SI", "temperature": "K", "pressure": "MPa"},
            "points": points[start : start + BATCH],
        }
        answer = subprocess.run(
            [dewmark, "call", "POST", "/v1/states"], input=json.dumps(request), capture_output=True, text=True, check=False
        )
        if answer.returncode != 0:
            sys.exit(f"dewmark call: exit {answer.returncode}: {answer.stdout}{answer.stderr}")
        states += json.loads(answer.stdout)["states"]
    return states


def reference_at(T, p, density):
    """Return the reference's state at T and p.

    Its density solver ends beside the root at a few points of the grid. There the equation, which is explicit in T and
    density, is evaluated at our density instead, and the pressure must come out as p.
    """
    water = IAPWS95(T=T, P=p)
    there = IAPWS95(T=T, rho=water.rho).P if water.rho > 0 else float("nan")
    if abs(there - p) <= 1e-9 * (p + 1):  # 1 MPa: a liquid's density hardly feels a smaller one
        return water
    print(f"reference evaluated at our density at {T} K, {p} MPa")
    return IAPWS95(T=T, rho=density)


def main(dewmark):
    points = [{"temperature": T, "pressure": p} for T, p in grid()]
    points += [{"temperature": T, "quality": x} for T in saturation_temperatures() for x in (0, 1)]
    states = ask(dewmark, points)

    references, saturated = [], {}
    for point, state in zip(points, states, strict=True):
        T = point["temperature"]
        if "problem" in state:
            references.append(None)
            continue
        if "pressure" in point:
            references.append(reference_at(T, point["pressure"], state["density"]))
            continue
        if T not in saturated:
            saturated[T] = IAPWS95(T=T, x=0.5)
        side = [saturated[T].Liquid, saturated[T].Gas][point["quality"]]
        side.P = saturated[T].P
        references.append(side)

    worst, failures, compared = {}, 0, 0
    for point, state, reference in zip(points, states, references, strict=True):
        if "problem" in state:
            failures += 1
            print(f"{point}: {state['problem']['detail']}")
            continue
        for ours, theirs in PROPERTIES.items():
            want = getattr(reference, theirs)
            scale = max(abs(want), SCALE.get(ours, lambda T: 0)(point["temperature"]))
            off = abs(state[ours] - want) / scale
            compared += 1
            if off > worst.get(ours, (-1, None))[0]:
                worst[ours] = (off, point)
            if not off <= TOLERANCE:
                failures += 1
                print(f"{point}: {ours} {state[ours]!r}, IAPWS-95 {want!r}, off by {off:.1e}")
    for name, (off, point) in worst.items():
        print(f"{name}: worst {off:.1e} at {point}")
    print(f"{compared} values of {len(points)} states compared to {TOLERANCE:g}, {failures} failures")
    return failures == 0 and compared > 3000


if __name__ == "__main__":
    sys.exit(0 if main(sys.argv[1]) else 1)
