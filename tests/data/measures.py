"""Writes measures.json: quantities of random stable matrices, and elasticities of small models, by numpy, scipy and mpmath.

Run from this folder:  pip install -r requirements.txt && python3 measures.py
It takes some minutes. With --check nothing is written: everything is computed again and compared with the file, to the
digits that the tests use. With --check K that is every K-th matrix, the first stiff one and all models, in seconds.

matrices: orders 2 to 12, rates and maps, well and badly scaled. For rates: reactivity by numpy.linalg.eigvalsh; the
largest norm of scipy.linalg.expm on a grid that is dense on a logarithmic and on a linear axis, the highest places of
which are then refined with scipy.optimize; the covariance by scipy.linalg.solve_continuous_lyapunov (maps:
solve_discrete_lyapunov); invariability from the whole Kronecker sum by numpy.linalg.inv; net effects by numpy.linalg.inv.
stiff: the same amplification by mpmath.expm at 60 digits, for matrices whose rates span seven orders of magnitude.
models: equilibria by Newton's method and elasticities by central differences, both in mpmath at 60 digits.
"""

import json
import sys
from pathlib import Path

import mpmath
import numpy as np
import scipy.linalg
import scipy.optimize
from mpmath import mp, mpf

OUT = Path(__file__).parent / "measures.json"
RNG = np.random.default_rng(20)
# What --check allows between two machines' libraries; the tests ask for 1e-8.
AGREE = 1e-9
mp.dps = 60


def norm(m):
    return np.linalg.norm(m, 2)


def peak(a):
    """Largest norm of exp(at), and when."""
    slowest = -max(np.linalg.eigvals(a).real)
    fastest = norm(a)
    times = np.unique(np.concatenate([
        [0.0], np.geomspace(1e-3 / fastest, 60 / slowest, 3000), np.linspace(0, 30 / slowest, 3000)]))
    sizes = np.array([norm(scipy.linalg.expm(a * t)) for t in times])
    best = (1.0, 0.0)
    for k in np.argsort(sizes)[::-1][:3]:
        if k == 0 or k == len(times) - 1:
            continue
        found = scipy.optimize.minimize_scalar(
            lambda t: -norm(scipy.linalg.expm(a * t)), bounds=(times[k - 1], times[k + 1]), method="bounded",
            options={"xatol": 1e-11 * times[k + 1]})
        if -found.fun > best[0] + 1e-10:
            best = (-found.fun, found.x)
    return best


def map_peak(a):
    power, best, k = np.eye(len(a)), (1.0, 0), 0
    while norm(power) > 1e-3:
        power, k = power @ a, k + 1
        if norm(power) > best[0] + 1e-10:
            best = (norm(power), k)
    return best


def rates(n, spread):
    a = RNG.normal(size=(n, n))
    a -= (max(np.linalg.eigvals(a).real) + RNG.uniform(0.05, 1)) * np.eye(n)
    units = np.exp(RNG.uniform(-spread, spread, size=n))
    return a * units[None, :] / units[:, None]


def maps(n, spread):
    a = RNG.normal(size=(n, n))
    a *= RNG.uniform(0.3, 0.97) / max(abs(np.linalg.eigvals(a)))
    units = np.exp(RNG.uniform(-spread, spread, size=n))
    return a * units[None, :] / units[:, None]


def measured(kind, n, a):
    if kind == "rates":
        factor, time = peak(a)
        reactivity = max(np.linalg.eigvalsh((a + a.T) / 2))
        covariance = scipy.linalg.solve_continuous_lyapunov(a, -np.eye(n))
        lifted = np.kron(a, np.eye(n)) + np.kron(np.eye(n), a)
        effects = np.linalg.inv(-a)
    else:
        factor, time = map_peak(a)
        reactivity = float(np.log(norm(a)))
        covariance = scipy.linalg.solve_discrete_lyapunov(a, np.eye(n))
        lifted = np.eye(n * n) - np.kron(a, a)
        effects = np.linalg.inv(np.eye(n) - a)
    return {
        "kind": kind, "n": n, "a": a.ravel().tolist(), "reactivity": float(reactivity), "factor": float(factor),
        "time": float(time), "covariance": covariance.ravel().tolist(),
        "invariability": float(0.5 / norm(np.linalg.inv(lifted))), "effects": effects.ravel().tolist(),
    }


def stiff(a):
    """By ternary search in mpmath between the grid's neighbours of the highest place."""
    exact = mpmath.matrix(a)
    values, vectors = mpmath.eig(exact)
    back = vectors ** -1

    def size(t):
        m = vectors * mpmath.diag([mpmath.exp(v * t) for v in values]) * back
        m = m.apply(mpmath.re)
        return mpmath.sqrt(max(mpmath.eigsy(m.T * m, eigvals_only=True)))

    grid = [mpf(10) ** (mpf(k) / 20) for k in range(-140, 100)]
    sizes = [size(t) for t in grid]
    k = max(range(1, len(grid) - 1), key=lambda k: sizes[k])
    low, high = grid[k - 1], grid[k + 1]
    golden = (mpmath.sqrt(5) - 1) / 2
    for _ in range(110):
        left, right = high - golden * (high - low), low + golden * (high - low)
        if size(left) < size(right):
            low = left
        else:
            high = right
    time = (low + high) / 2
    return {"n": len(a), "a": [float(x) for row in a for x in row], "factor": float(size(time)), "time": float(time)}


STIFF = [
    [[-1e4, 1e4], [0.0, -1.0]],
    [[-1e4, 3e5], [0.0, -1e-3]],
    [[-2e3, 5e3, 0.0], [0.0, -1.0, 40.0], [0.0, -0.25, -1e-2]],
    [[-1e-3, 0.02, 0.0, 0.0], [0.0, -2e-3, 5.0, 0.0], [0.0, 0.0, -1e4, 1e4], [0.0, -1e-6, 0.0, -30.0]],
]


# Rates (maps: next state less the present one), parameters, start; the same formulas stand in the test.
MODELS = {
    "predator and prey": (
        lambda x, p: [
            p["r"] * x[0] * (1 - x[0] / p["K"]) - p["a"] * x[0] * x[1] / (1 + p["a"] * p["h"] * x[0]) - p["q"] * x[0],
            p["e"] * p["a"] * x[0] * x[1] / (1 + p["a"] * p["h"] * x[0]) - p["m"] * x[1] ** p["z"]],
        {"r": 0.9, "K": 9.0, "a": 1.25, "h": 0.4, "e": 0.5, "m": 0.3, "q": 0.1, "z": 1.25}, [1.0, 1.0], False),
    "map with two hosts": (
        lambda x, p: [
            x[0] * (mpmath.exp(p["r"] * (1 - x[0] - p["c"] * x[1])) - p["u"]) - x[0],
            x[1] * mpmath.exp(p["s"] * (1 - p["d"] * x[0] - x[1])) - x[1]],
        {"r": 1.2, "c": 0.5, "u": 0.15, "s": 0.8, "d": 0.6}, [0.7, 0.6], True),
}


def solve(rows, p, x):
    x = mpmath.matrix(x)
    for _ in range(60):
        step = mpmath.lu_solve(slopes(rows, p, x), mpmath.matrix(rows(x, p)))
        x -= step
        if mpmath.norm(step) < mpf(10) ** -50:
            return x
    raise ArithmeticError("no equilibrium")


def slopes(rows, p, x):
    """The Jacobian by central differences, exact to some 40 digits."""
    n, h = len(x), mpf(10) ** -20
    j = mpmath.matrix(n, n)
    for k in range(n):
        up, down = x.copy(), x.copy()
        up[k] += h
        down[k] -= h
        for i, (a, b) in enumerate(zip(rows(up, p), rows(down, p))):
            j[i, k] = (a - b) / (2 * h)
    return j


def leading(rows, p, x, discrete):
    j = slopes(rows, p, x) + (mpmath.eye(len(x)) if discrete else mpmath.zeros(len(x)))
    values = mpmath.eig(j, left=False, right=False)
    return max(abs(v) for v in values) if discrete else max(mpmath.re(v) for v in values)


def model(name):
    rows, parameters, start, discrete = MODELS[name]
    p = {key: mpf(value) for key, value in parameters.items()}
    x = solve(rows, p, start)
    mu, h = leading(rows, p, x, discrete), mpf(10) ** -8
    out = {"state": [float(v) for v in x], "leading": float(mu), "elasticities": {}}
    for key in p:
        found = []
        for sign in (1, -1):
            moved = dict(p)
            moved[key] *= 1 + sign * h
            y = solve(rows, moved, x)
            found.append((y, leading(rows, moved, y, discrete)))
        (up, mu_up), (down, mu_down) = found
        state = [float((up[i] - down[i]) / (2 * h * x[i])) for i in range(len(x))]
        out["elasticities"][key] = {"state": state, "leading": float((mu_up - mu_down) / (2 * h * mu))}
    return out


def everything(every):
    makers = [(kind, n, spread) for kind in ("rates", "maps") for n in range(2, 13) for spread in (0.0, 3.0)]
    # All are drawn, for each takes its numbers from where the one before has left off.
    drawn = [(kind, n, rates(n, spread) if kind == "rates" else maps(n, spread)) for kind, n, spread in makers]
    cases = [measured(*case) for case in drawn[::every]]
    matrices = STIFF if every == 1 else STIFF[:1]
    return {"matrices": cases, "stiff": [stiff(a) for a in matrices], "models": {name: model(name) for name in MODELS}}


def differ(new, old, place=""):
    if isinstance(new, dict):
        return [d for key in new for d in differ(new[key], old[key], f"{place}/{key}")]
    if isinstance(new, list):
        return [d for k, (x, y) in enumerate(zip(new, old, strict=True)) for d in differ(x, y, f"{place}/{k}")]
    if isinstance(new, float):
        # When a flat top is reached is known to half the digits only.
        allowed = 1e-5 if place.endswith("time") else AGREE
        return [] if abs(new - old) <= allowed * max(abs(old), 1e-3) else [f"{place}: {new} {old}"]
    return [] if new == old else [f"{place}: {new} {old}"]


def check(every):
    """Compares what is asked for with the file; see the head."""
    old = json.loads(OUT.read_text())
    found = everything(every)
    old["matrices"] = old["matrices"][::every]
    if every > 1:
        old["stiff"] = old["stiff"][:len(found["stiff"])]
    wrong = differ(found, old)
    count = len(found["matrices"]) + len(found["stiff"]) + len(found["models"])
    print("\n".join(wrong) if wrong else f"{count} cases of measures.json agree")
    sys.exit(bool(wrong))


if "--check" in sys.argv:
    rest = sys.argv[sys.argv.index("--check") + 1:]
    check(int(rest[0]) if rest else 1)
found = everything(1)
lines = ",\n  ".join(json.dumps(case) for case in found["matrices"])
OUT.write_text(
    f'{{"matrices": [\n  {lines}],\n "stiff": {json.dumps(found["stiff"])},\n'
    f' "models": {json.dumps(found["models"])}}}\n')
