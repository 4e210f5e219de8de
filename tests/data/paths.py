"""Writes paths.csv: what paths of some models do, by SciPy's integrators at their tightest.

Run from this folder:  pip install -r requirements.txt && python3 paths.py
It takes two minutes. With --check it writes nothing, and fails where a number differs by more than its last digits from
the one in the file. With --check K only every K-th model of the file is followed.

Models with species run in logarithms of abundances (DOP853, relative error 1e-13); the stiff oscillator by Radau with its
exact Jacobian. A cycle is followed until two turns agree, then measured between two peaks of its first species.
A line is  model,quantity,value.
"""

import csv
import sys
from functools import partial
from pathlib import Path

import numpy as np
from scipy.integrate import solve_ivp
from scipy.optimize import brentq, minimize_scalar

HERE = Path(__file__).parent / "paths.csv"
TIGHT = 1e-13


def van_der_pol(mu):
    """Period of x'' = mu (1 - x^2) x' - x, between falls through 0."""
    def rates(_, y):
        return [y[1], mu * (1 - y[0] ** 2) * y[1] - y[0]]

    def slopes(_, y):
        return [[0, 1], [-2 * mu * y[0] * y[1] - 1, mu * (1 - y[0] ** 2)]]

    def falls(_, y):
        return y[0]

    falls.direction = -1
    options = {"method": "Radau", "jac": slopes} if mu > 10 else {"method": "DOP853"}
    tolerance = 1e-12 if mu > 10 else TIGHT
    end = 5 * max(7, 1.7 * mu)
    found = solve_ivp(rates, (0, end), [2, 0], events=falls, rtol=tolerance, atol=tolerance, **options)
    times = found.t_events[0]
    return {"period": times[-1] - times[-2]}


def rosenzweig(K, r=1.0, a=1.0, h=1.0, e=1.0, m=0.3):
    """Growth by the logarithm of prey and predator (Rosenzweig & MacArthur 1963)."""
    def rates(_, y):
        prey, predator = np.exp(y)
        busy = 1 + a * h * prey
        return [r * (1 - prey / K) - a * predator / busy, e * a * prey / busy - m]
    return rates


def chain(_, y):
    """A food chain of three (Hastings & Powell 1991), not in chaos."""
    x, y_, z = np.exp(y)
    first, second = 5.0 / (1 + 2.0 * x), 0.1 / (1 + 2.0 * y_)
    return [1 - x - first * y_, first * x - second * z - 0.4, second * y_ - 0.01]


def competition(_, y):
    """Three competitors in a ring (May & Leonard 1975)."""
    x = np.exp(y)
    return 1 - x - 0.8 * np.roll(x, -1) - 1.3 * np.roll(x, 1)


def cycle(rates, start, names, settle):
    """Period, lowest and highest of a cycle."""
    def peak(t, y):
        return rates(t, y)[0]

    peak.direction = -1
    found = solve_ivp(rates, (0, settle), start, method="DOP853", events=peak, rtol=TIGHT, atol=TIGHT)
    y = found.y_events[0][-1]
    turn = solve_ivp(rates, (0, 3 * (found.t_events[0][-1] - found.t_events[0][-2])), y, method="DOP853",
                     events=peak, dense_output=True, rtol=TIGHT, atol=TIGHT)
    times = [t for t in turn.t_events[0] if t > 1e-6]
    period = times[0]
    assert abs(times[1] - 2 * period) < 1e-8 * period, "not settled"
    out = {"period": period}
    grid = np.linspace(0, period, 20001)
    values = turn.sol(grid)
    for i, name in enumerate(names):
        for word, sign in (("lowest", 1), ("highest", -1)):
            k = int(np.argmin(sign * values[i]))
            around = (grid[max(k - 2, 0)], grid[min(k + 2, len(grid) - 1)])
            best = minimize_scalar(lambda t: sign * turn.sol(t)[i], bounds=around, method="bounded",
                                   options={"xatol": 1e-12})
            out[f"{word} {name}"] = float(np.exp(min(sign * values[i][k], best.fun) * sign))
    return out


def state(rates, start, end, names):
    """Abundances after a time."""
    found = solve_ivp(rates, (0, end), np.log(start), method="DOP853", rtol=TIGHT, atol=TIGHT)
    return {f"{name} at {end}": float(x) for name, x in zip(names, np.exp(found.y[:, -1]))}


def entry(rates, start, rest, end):
    """The last time at which all abundances come within 10 % of a state."""
    found = solve_ivp(rates, (0, end), np.log(start), method="DOP853", dense_output=True, rtol=TIGHT, atol=TIGHT)

    def outside(t):
        return float(np.max(np.abs(np.exp(found.sol(t)) / rest - 1)) - 0.1)

    grid = np.linspace(0, end, 200001)
    last = max(k for k, t in enumerate(grid) if outside(t) > 0)
    values = np.exp(found.sol(grid))
    return {"entry": brentq(outside, grid[last], grid[last + 1], xtol=1e-13),
            "lowest N": float(values[0].min()), "lowest P": float(values[1].min())}


def models():
    """Name, and what follows the paths of each model."""
    # K = 1.5: a stable spiral at N = 3/7.
    rest = np.array([3 / 7, (1 - 3 / 7 / 1.5) * (1 + 3 / 7)])
    turns = {K: 2500 if K == 2 else 1500 for K in (2, 4, 10, 30)}
    of_turns = [(f"prey and predator {K}", partial(cycle, rosenzweig(float(K)), np.log([0.5, 0.5]), "NP", settle))
                for K, settle in turns.items()]
    return [
        ("van der Pol 1", partial(van_der_pol, 1.0)),
        ("van der Pol 1000", partial(van_der_pol, 1000.0)),
        *of_turns,
        ("prey and predator 1.5", partial(entry, rosenzweig(1.5), [1.2, 0.3], rest, 400.0)),
        ("chain", partial(state, chain, [0.8, 0.2, 8.0], 100.0, "XYZ")),
        ("ring", partial(state, competition, [0.5, 0.3, 0.2], 60.0, "ABC")),
    ]


def check(every):
    with HERE.open() as file:
        old = [tuple(line) for line in csv.reader(file)]
    chosen = models()[::every]
    names = {name for name, _ in chosen}
    old = [line for line in old if line[0] in names]
    new = lines(chosen)
    same = [a[:2] == b[:2] and abs(float(a[2]) / float(b[2]) - 1) < 1e-7 for a, b in zip(new, old)]
    if len(new) != len(old) or not all(same):
        sys.exit("paths.csv is not what this script makes")
    print(f"{len(new)} numbers of {len(chosen)} models agree")


def lines(chosen):
    return [(model, name, f"{value:.10g}") for model, follow in chosen for name, value in follow().items()]


def main():
    if "--check" in sys.argv:
        rest = sys.argv[sys.argv.index("--check") + 1:]
        return check(int(rest[0]) if rest else 1)
    with HERE.open("w", newline="") as file:
        csv.writer(file, lineterminator="\n").writerows(lines(models()))


main()
