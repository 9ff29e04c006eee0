"""Speed and phase error of the kernel beside SciPy's LSODA, over the schedule of the kernel benchmark.

Usage: python lsoda.py FILE, where FILE holds the output of the kernel benchmark; lsoda.sh does it all.
Equations and numbers are those of src/physiology/parameters/, written anew here: nothing is shared with the Rust code.
Time in hours since midnight of day 0, light in lux, rates of the light process per minute.
"""

import platform
import re
import sys
import time

import numpy as np
import scipy
from scipy.integrate import solve_ivp
from scipy.optimize import brentq

DAYS = 80
TAU = 24.15
# One day from midnight: minutes, lux, asleep.
DAY = [
    (420, 0.0, True),
    (60, 40.0, False),
    (60, 1000.0, False),
    (240, 120.0, False),
    (60, 300.0, False),
    (180, 120.0, False),
    (60, 1000.0, False),
    (120, 120.0, False),
    (180, 40.0, False),
    (60, 0.0, True),
]
RUNS = 3
LSODA = {"method": "LSODA", "rtol": 1e-6, "atol": 1e-8}
# The longest step keeps the error of the dense output below that of the steps.
REFERENCE = {"method": "DOP853", "rtol": 1e-10, "atol": 1e-12, "max_step": 0.5}
SHORTEST_CYCLE = 12.0
# Grid on which a crossing is looked for, before it is pinned down.
GRID = 0.25

PI12 = np.pi / 12


# Right-hand sides: a = alpha of the light, sigma = 1 asleep, pace = what gives the period TAU.


def forger(t, y, a, sigma, pace):
    x, xc, n = y
    b = 19.875 * (1 - n) * a * (1 - 0.4 * x) * (1 - 0.4 * xc)
    return [
        PI12 * (xc + b),
        PI12 * (0.23 * (xc - 4 * xc**3 / 3) - x * (pace + 0.55 * b)),
        60 * (a * (1 - n) - 0.013 * n),
    ]


def jewett(t, y, a, sigma, pace):
    x, xc, n = y
    b = 19.875 * (1 - n) * a * (1 - 0.4 * x) * (1 - 0.4 * xc)
    return [
        PI12 * (xc + 0.13 * (x / 3 + 4 * x**3 / 3 - 256 * x**7 / 105) + b),
        PI12 * (b * xc / 3 - x * (pace + 0.55 * b)),
        60 * (a * (1 - n) - 0.013 * n),
    ]


def hilaire(t, y, a, sigma, pace):
    x, xc, n = y
    b = 37 * (1 - n) * a * (1 - 0.4 * x) * (1 - 0.4 * xc)
    ns = 0.032 * (1 / 3 - sigma) * (1 - np.tanh(10 * x))
    return [
        PI12 * (xc + 0.13 * (x / 3 + 4 * x**3 / 3 - 256 * x**7 / 105) + b + ns),
        PI12 * (b * xc / 3 - x * (pace + 0.55 * b)),
        60 * (a * (1 - n) - 0.007 * n),
    ]


K, GAMMA, BETA1 = 0.06358, 0.024, -0.09318
A1, A2, BL1, BL2, SIGMA = 0.3855, 0.1977, -0.0026, -0.957756, 0.0400692


def hannay(t, y, a, sigma, pace):
    r, psi, n = y
    b = 33.75 * (1 - n) * a
    light_r = A1 / 2 * b * (1 - r**4) * np.cos(psi + BL1) + A2 / 2 * b * r * (1 - r**8) * np.cos(2 * psi + BL2)
    light_psi = (
        SIGMA * b
        - A1 / 2 * b * (r**3 + 1 / r) * np.sin(psi + BL1)
        - A2 / 2 * b * (1 + r**8) * np.sin(2 * psi + BL2)
    )
    return [
        -GAMMA * r + K / 2 * np.cos(BETA1) * r * (1 - r**4) + light_r,
        pace + K / 2 * np.sin(BETA1) * (1 + r**4) + light_psi,
        60 * (a * (1 - n) - 0.0075 * n),
    ]


def hannay_pace():
    r4 = 1 - 2 * GAMMA / (K * np.cos(BETA1))
    return 2 * np.pi / TAU - K / 2 * np.sin(BETA1) * (1 + r4)


def alpha_1999(lux):
    return 0.16 * (lux / 9500) ** 0.6


def alpha_2007(lux):
    return 0.1 * (lux / 9500) ** 0.5 * lux / (lux + 100)


def alpha_hannay(lux):
    return 0.05 * lux**1.5 / (lux**1.5 + 9325)


def clockwise(y):
    return -np.arctan2(y[1], y[0])


def anticlockwise(y):
    return y[1]


START = [-0.5, -1.0, 0.3]
# Right-hand side, alpha, pace, start, rising angle, angle of the marker in degrees, offset of CBTmin in hours.
PACEMAKERS = {
    "hilaire2007": (hilaire, alpha_2007, (24 / (0.99729 * TAU)) ** 2, START, clockwise, 170.7, 0.97),
    "forger1999": (forger, alpha_1999, (24 / (0.99669 * TAU)) ** 2, START, clockwise, 180.0, 0.0),
    "jewett1999": (jewett, alpha_1999, (24 / (0.99729 * TAU)) ** 2, START, clockwise, 180.0, 0.41),
    "hannay2019": (hannay, alpha_hannay, hannay_pace(), [0.8, 1.8, 0.3], anticlockwise, 180.0, 0.0),
}


def spans():
    """Spans of constant light and sleep: from, to, lux, sigma. Midnight is no edge, so it does not part a span."""
    merged = []
    minute = 0
    for _ in range(DAYS):
        for minutes, lux, asleep in DAY:
            end = minute + minutes
            light = (lux, 1.0 if asleep else 0.0)
            if merged and merged[-1][2:] == light:
                merged[-1] = (merged[-1][0], end, *light)
            else:
                merged.append((minute, end, *light))
            minute = end
    return [(start / 60, end / 60, lux, sigma) for start, end, lux, sigma in merged]


SPANS = spans()


def integrate(name, solver, dense=False):
    """One solution per span, restarted at every edge."""
    rhs, alpha, pace, y = PACEMAKERS[name][:4]
    solutions = []
    for start, end, lux, sigma in SPANS:
        solution = solve_ivp(rhs, (start, end), y, args=(alpha(lux), sigma, pace), dense_output=dense, **solver)
        if not solution.success:
            sys.exit(f"lsoda.py: {name}, {solver['method']}: {solution.message}")
        y = solution.y[:, -1]
        solutions.append(solution)
    return solutions


def last_cbtmin(name, solver):
    """CBTmin of the last passing of the marker angle, at most one passing in 12 h."""
    angle, degrees, offset = PACEMAKERS[name][4:]
    marker = np.deg2rad(degrees)

    def past(y):
        """Signed angle past the marker, in [-pi, pi); it rises through 0 once a cycle."""
        return (angle(y) - marker + np.pi) % (2 * np.pi) - np.pi

    last = -np.inf
    for (start, end, _, _), solution in zip(SPANS, integrate(name, solver, dense=True)):
        at = np.linspace(start, end, int(np.ceil((end - start) / GRID)) + 1)
        angles = past(solution.sol(at))
        for i in range(len(at) - 1):
            if angles[i] < 0 <= angles[i + 1] and angles[i + 1] - angles[i] < 1:
                crossing = brentq(lambda t: past(solution.sol(t)), at[i], at[i + 1], xtol=1e-10)
                if crossing - last > SHORTEST_CYCLE:
                    last = crossing
    return last + offset


def lsoda_rate(name):
    """Days a second, the best of RUNS; without dense output, so the marker is not read in the time taken."""
    best = np.inf
    for _ in range(RUNS):
        start = time.perf_counter()
        integrate(name, LSODA)
        best = min(best, time.perf_counter() - start)
    return DAYS / best


LINE = re.compile(
    r"^\s*(?P<set>\S+)\s+(?P<name>" + "|".join(PACEMAKERS) + r")\s+(?P<rate>[\d.]+)\s+lane-days/s"
    r"\s+last\s+CBTmin\s+(?P<cbtmin>[\d.]+)\s+h\s*$"
)


def kernel_lines(path):
    """Pacemaker, instruction set, lane-days a second, last CBTmin."""
    with open(path, encoding="utf-8") as text:
        found = [match for match in map(LINE.match, text) if match]
    if not found:
        sys.exit(f"lsoda.py: no line of the pacemaker benchmark in {path}")
    return [(m["name"], m["set"], float(m["rate"]), float(m["cbtmin"])) for m in found]


def main():
    if len(sys.argv) != 2:
        sys.exit("usage: python lsoda.py FILE, with the output of the kernel benchmark")
    lines = kernel_lines(sys.argv[1])
    print(f"pacemaker alone, {DAYS} days, 10 blocks of light a day, tau {TAU} h, one core")
    print(
        f"LSODA: solve_ivp of scipy {scipy.__version__}, numpy {np.__version__}, Python {platform.python_version()};"
        f" rtol {LSODA['rtol']:g}, atol {LSODA['atol']:g}, restarted at every edge of light;"
    )
    print(f"       plain Python and numpy right-hand side, as a user would write it; best of {RUNS} runs, marker not read in them")
    print(
        f"phase error: last CBTmin less that of DOP853 (rtol {REFERENCE['rtol']:g}, atol {REFERENCE['atol']:g},"
        " restarted at every edge); + is later"
    )
    print()
    print(
        f"{'pacemaker':<12} {'instructions':<12} {'kernel':>12} {'LSODA':>12} {'ratio':>9} {'kernel error':>13} {'LSODA error':>12}"
    )
    print(f"{'':<12} {'':<12} {'lane-days/s':>12} {'lane-days/s':>12} {'':>9} {'min':>13} {'min':>12}")
    for name in PACEMAKERS:
        mine = [line for line in lines if line[0] == name]
        if not mine:
            print(f"{name:<12} not in the benchmark's output")
            continue
        rate = lsoda_rate(name)
        reference = last_cbtmin(name, REFERENCE)
        lsoda_error = (last_cbtmin(name, LSODA) - reference) * 60
        for _, instructions, kernel_rate, cbtmin in mine:
            kernel_error = (cbtmin - reference) * 60
            print(
                f"{name:<12} {instructions:<12} {kernel_rate:>12.0f} {rate:>12.1f} {kernel_rate / rate:>9.0f}"
                f" {kernel_error:>13.4f} {lsoda_error:>12.4f}"
            )
    print()
    print("The kernel rate is the sum over the sixteen lanes of one core; LSODA is one interpreted run on one core.")


if __name__ == "__main__":
    main()
