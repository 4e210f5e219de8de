"""Writes double_references.csv: elementary functions to 32 digits.

Run from this folder:  pip install -r requirements.txt && python3 double_references.py
It takes a second, needs nothing else, and always writes the same bytes.

A line is  function,x,p,high,low : the f64 nearest to the exact value at the f64 x (and exponent p, 0 where there is none),
and the f64 nearest to what that lacks. Numbers are written so that they read back to the same f64. Values come from
closed formulas at 400 bits.
"""

import csv
import random

from mpmath import exp, log, mp, mpf, power, tanh

mp.prec = 400

ELEMENTARY = {
    "exp": exp,
    "ln": log,
    "log10": lambda x: log(x) / log(mpf(10)),
    "expm1": lambda x: exp(x) - 1,
    "log1p": lambda x: log(1 + x),
    "tanh": tanh,
    "sqrt": mp.sqrt,
    "expm1/u": lambda x: (exp(x) - 1) / x,
    "log1p/u": lambda x: log(1 + x) / x,
    "tanh/u": lambda x: tanh(x) / x,
}
POWERS = {
    "pow": power,
    "powm1/u": lambda u, p: (power(1 + u, p) - 1) / u,
}
POSITIVE = ("ln", "log10", "sqrt", "pow")
NEAR_ZERO = ("expm1", "log1p", "tanh", "expm1/u", "log1p/u", "tanh/u", "powm1/u")
ABOVE_MINUS_ONE = ("log1p", "log1p/u", "powm1/u")


def arguments(name, source):
    """Some of every size; a few near the function's zero."""
    for _ in range(30):
        x = source.uniform(0.05, 12)
        yield x
        if name not in POSITIVE:
            yield -x if name not in ABOVE_MINUS_ONE else -x / 13
    for _ in range(10):
        small = source.uniform(1, 2) * 10.0 ** source.randint(-40, -2)
        if name in NEAR_ZERO:
            yield small
            yield -small
        elif name in POSITIVE:
            yield small
            yield 1 + source.uniform(-1, 1) * 10.0 ** source.randint(-14, -2)
            yield source.uniform(1, 2) * 10.0 ** source.randint(2, 40)


def row(name, x, p, value):
    high = float(value)
    return [name, repr(x), repr(p), repr(high), repr(float(value - mpf(high)))]


def main():
    source = random.Random(1)
    rows = [["function", "x", "p", "high", "low"]]
    for name, function in ELEMENTARY.items():
        for x in arguments(name, source):
            rows.append(row(name, x, 0.0, function(mpf(x))))
    for name, function in POWERS.items():
        for x in arguments(name, source):
            p = source.uniform(-3, 3)
            rows.append(row(name, x, p, function(mpf(x), mpf(p))))
    with open("double_references.csv", "w", newline="") as table:
        csv.writer(table, lineterminator="\n").writerows(rows)


main()
