"""Writes interval_references.csv: hard arguments of every elementary function and quotient, with sharp bounds.

Run from this folder:  pip install -r requirements.txt && python3 interval_references.py
It takes some seconds, needs nothing else, and always writes the same bytes.

A line is  function,k,x,p,below,above : the largest f64 that is not above the exact value and the smallest that is not
below it; k is the derivative of a quotient, p the exponent of a power, both 0 where there is none. Numbers are written
so that they read back to the same f64. Values come from closed formulas at a precision that outlasts their cancellation
(quotients from the recursion u q_k = f^(k) - k q_(k-1)), not from the methods of the program.
"""

import csv
import random
from math import inf, isfinite, nextafter

from mpmath import cosh, exp, log, mp, mpf, power, tanh

# tanh(2^-1074) differs from 2^-1074 by one part in 2^2149: what is closer than this to an f64 is one.
EXACT = mpf(2) ** -2400


def bounds(value):
    """The pair of f64 around an mpf."""
    nearest = float(value) if abs(value) < mpf(2) ** 1024 else inf if value > 0 else -inf
    if not isfinite(nearest):
        return (1.7976931348623157e308, inf) if value > 0 else (-inf, -1.7976931348623157e308)
    difference = value - mpf(nearest)
    if abs(difference) <= abs(value) * EXACT:
        return nearest, nearest
    return (nearest, nextafter(nearest, inf)) if difference > 0 else (nextafter(nearest, -inf), nearest)


ELEMENTARY = {
    "exp": exp,
    "ln": log,
    "log10": lambda x: log(x) / log(mpf(10)),
    "expm1": lambda x: exp(x) - 1,
    "log1p": lambda x: log(1 + x),
    "tanh": tanh,
    "sqrt": mp.sqrt,
}


def derivatives(name, u, p):
    """f, f', f'', f''' at u."""
    if name == "expm1":
        e = exp(u)
        return [e - 1, e, e, e]
    if name == "log1p":
        return [log(1 + u), 1 / (1 + u), -1 / (1 + u) ** 2, 2 / (1 + u) ** 3]
    if name == "tanh":
        t, s = tanh(u), 1 / cosh(u) ** 2
        return [t, s, -2 * t * s, s * (6 * t * t - 2)]
    b = 1 + u
    return [power(b, p) - 1, p * power(b, p - 1), p * (p - 1) * power(b, p - 2), p * (p - 1) * (p - 2) * power(b, p - 3)]


def at_zero(name, k, p):
    """f^(k+1)(0)/(k + 1)."""
    falling = mpf(1)
    for j in range(k + 1):
        falling *= p - j
    value = {"expm1": mpf(1), "log1p": mpf([1, -1, 2, -6][k]), "tanh": mpf([1, 0, -2, 0][k]), "powm1": falling}[name]
    return value / (k + 1)


def quotient(name, k, u, p):
    if u == 0:
        return at_zero(name, k, p)
    q = mpf(0)
    for j, f in enumerate(derivatives(name, u, p)[: k + 1]):
        q = (f - j * q) / u
    return q


def around(centres, steps=2):
    for x in centres:
        for direction in (-inf, inf):
            y = x
            for _ in range(steps):
                y = nextafter(y, direction)
                yield y
        yield x


def hard_for_rounding(f, draw, rng, keep, tries):
    """Those of many arguments whose values lie nearest to an f64, or to the middle between two."""
    def closeness(x):
        mp.prec = 140
        value = f(mpf(x))
        if value == 0:
            return 1
        mantissa = abs(value) / mpf(2) ** (mp.floor(mp.log(abs(value), 2)) - 53)
        return abs(mantissa - mp.nint(mantissa))

    return sorted((draw(rng) for _ in range(tries)), key=closeness)[:keep]


def signed(xs):
    return [s * x for x in xs for s in (1.0, -1.0)]


def elementary_arguments(name, rng):
    positive = [10.0**e for e in (-300, -200, -100, -30, -17, -16, -15, -10, -5, -3, -2, -1, 0, 1, 2, 3, 10, 22, 23, 100, 300)]
    edges = [5e-324, 1e-323, 1e-310, 2.2250738585072014e-308, 1.7976931348623157e308, 0.5, 2.0, 3.0, 4.0, 0.7071067811865476]
    if name in ("exp", "expm1", "tanh"):
        special = signed(positive + edges) + [709.782712893384, 709.7827128933841, -745.1332191019411, -745.1332191019412]
        special += [-708.3964185322641, -708.5679120903493, -740.0, 36.7, -36.7, 37.5, -37.5, 18.7, 19.1, 22.0, 0.0]
        draw = lambda r: r.uniform(-3, 3) if r.random() < 0.7 else r.uniform(-740, 709)
    elif name == "log1p":
        special = signed(positive + edges) + list(around([-1.0], 3)) + [0.0]
        special = [x for x in special if x > -1]
        draw = lambda r: r.uniform(-0.99, 3)
    else:
        special = positive + edges + list(around([1.0, 10.0, 1000.0, 1e22]))
        draw = lambda r: r.uniform(0.01, 10) * 10.0 ** r.choice([0, 0, 0, r.randint(-300, 300)])
    return special + hard_for_rounding(ELEMENTARY[name], draw, rng, 40, 1500)


def power_arguments(rng):
    bases = [5e-324, 1e-310, 1e-200, 0.1, 0.5, nextafter(1.0, 0), 1.0, nextafter(1.0, 2), 1.5, 2.0, 3.0, 10.0, 1e10, 1e200]
    exponents = [-1e10, -30.0, -3.0, -2.0, -1.0, -0.5, -1e-10, 0.0, 1e-300, 0.1, 0.5, 1.0, 1.5, 2.0, 3.0, 7.0, 8.0, 9.0, 34.0, 1e6]
    yield from ((x, p) for x in bases for p in exponents)
    for _ in range(60):
        yield rng.uniform(0, 3), rng.uniform(-4, 4)


def quotient_arguments(name, rng):
    sizes = [5e-324, 1e-310, 1e-200, 1e-100, 1e-30, 1e-16, 1e-8, 1e-4, 0.01, 0.1, 0.2, 0.24, 0.25, 0.28, 0.3, 0.5, 0.6]
    sizes += [0.7, 0.7071, 0.7072, 0.75, 0.77, 0.9, 0.99]
    beyond = [1.0, 1.3, 1.5, 1.7, 2.0, 2.4, 2.51, 2.9, 3.0, 3.4, 3.49, 3.9, 4.0, 5.0, 8.0, 15.0, 40.0, 100.0, 300.0]
    if name in ("expm1", "tanh"):
        arguments = signed(sizes + beyond + [700.0, 709.0, 712.0]) + [0.0, 1e10, -1e10, -1e200] + [rng.uniform(-6, 6) for _ in range(30)]
    else:
        arguments = signed(sizes) + beyond + [0.0, nextafter(-1.0, 0), -0.999999, 1e5, 1e20, 1e100] + [rng.uniform(-1, 4) for _ in range(20)]
    if name != "powm1":
        return [(u, 0.0) for u in arguments]
    exponents = [-3.0, -1.0, -0.5, 1e-10, 0.5, 1.0, 1.0000000001, 2.0, 2.5, 2.999999999, 3.0, 4.0, 12.3]
    chosen = [(u, p) for i, u in enumerate(arguments) for p in exponents[i % 3 :: 3]]
    chosen += [(u, p) for u in (1e-3, -1e-3, 1e-5, 0.01, -0.01, 0.05) for p in (100.0, -100.0, 1000.5, -3000.0)]
    return chosen + [(rng.uniform(-1, 3), rng.uniform(-4, 6)) for _ in range(40)]


def rows():
    rng = random.Random(1)
    for name, f in ELEMENTARY.items():
        for x in elementary_arguments(name, rng):
            mp.prec = working_precision(x)
            yield name, 0, x, 0.0, f(mpf(x)) if abs(x) < 1e6 or name in ("ln", "log10", "log1p", "sqrt") else far(name, x)
    for x, p in power_arguments(rng):
        mp.prec = working_precision(x)
        yield "pow", 0, x, p, power(mpf(x), mpf(p))
    for name in ("expm1", "log1p", "tanh", "powm1"):
        for u, p in quotient_arguments(name, rng):
            for k in range(4):
                mp.prec = working_precision(u)
                yield name + "/u", k, u, p, quotient(name, k, mpf(u), mpf(p))


def working_precision(u):
    """Bits enough for EXACT after dividing rounding errors by u^4."""
    return 9000 if 0 < abs(u) < 1e-90 else 4000


def far(name, x):
    """A stand-in on the right side of every f64, where the value itself has too large an exponent."""
    edge = mpf(1) - mpf(2) ** -500
    if name == "tanh":
        return edge if x > 0 else -edge
    return mpf(2) ** 2000 if x > 0 else (mpf(2) ** -2000 if name == "exp" else -edge)


def main():
    with open("interval_references.csv", "w", newline="") as file:
        out = csv.writer(file, lineterminator="\n")
        out.writerow(["function", "k", "x", "p", "below", "above"])
        for name, k, x, p, value in rows():
            below, above = bounds(value)
            out.writerow([name, k, repr(x), repr(p), repr(below), repr(above)])


if __name__ == "__main__":
    main()
