"""Writes equilibria_references.csv: equilibria to 50 digits, as the two f64 around each coordinate.

Run from this folder:  pip install -r requirements.txt && python3 equilibria_references.py
It takes some seconds, needs nothing else, and always writes the same bytes.

Models: those of equilibria_models.json, which `WRITE_MODELS=1 cargo test --test equilibria_references` makes from the
families of tests/common, and one equilibrium with the most species present of each case and scenario in
../cases/published.json. Every number in a model is the f64 nearest to its decimals, taken as exact, as in the program.
Newton's method at 150 digits starts from the approximate root that comes with the model; a coordinate that is 0 there
stays 0, and its row has to vanish. Degenerate equilibria are left out.

A line is  model,scenario,root,species,below,above : the largest f64 that is not above the coordinate and the smallest
that is not below it, equal where it is an f64; roots of one model are numbered, and `below` serves as their name.
"""

import csv
import json
import re
from math import inf, nextafter
from pathlib import Path

import mpmath
from mpmath import mp, mpf

HERE = Path(__file__).parent
mp.dps = 150
# Newton's step has to end below this, relative to the coordinate.
CONVERGED = mpf(10) ** -100
# What is closer than this to an f64, relative to it, is one.
EXACT = mpf(10) ** -60
# For differences: their error, relative to the slope, is about as large.
NUDGE = mpf(10) ** -50
MOST_STEPS = 60

FUNCTIONS = {
    "exp": mpmath.exp, "ln": mpmath.log, "sqrt": mpmath.sqrt, "abs": abs, "min": min, "max": max,
    "ramp": lambda x, low, high: min(max((x - low) / (high - low), mpf(0)), mpf(1)),
}
TOKEN = re.compile(r"\s*(?:(?P<number>(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?)|(?P<name>\w+)|(?P<other>[-+*/^(),]))")


def nearest(text):
    return mpf(float(text))


def compiled(formula):
    """The formula as code of Python, whose operators bind the same way."""
    code, at = [], 0
    while at < len(formula.rstrip()):
        match = TOKEN.match(formula, at)
        if not match:
            raise SyntaxError(f"{formula!r} at {at}")
        at = match.end()
        if match["number"]:
            code.append(f"nearest('{match['number']}')")
        else:
            code.append(match["name"] or match["other"].replace("^", "**"))
    return compile("".join(code), formula, "eval")


class Model:
    def __init__(self, species, parameters, shorthand, rows, discrete):
        self.species, self.discrete = species, discrete
        self.fixed = FUNCTIONS | {"nearest": nearest, "__builtins__": {}} | {k: nearest(v) for k, v in parameters.items()}
        self.shorthand = [(name, compiled(formula)) for name, formula in shorthand]
        self.rows = [compiled(formula) for formula in rows]

    def at(self, x):
        """What vanishes at an equilibrium."""
        names = self.fixed | dict(zip(self.species, x))
        for name, code in self.shorthand:
            names[name] = eval(code, names)
        rows = [eval(code, names) for code in self.rows]
        return [f - y for f, y in zip(rows, x)] if self.discrete else rows

    def root(self, start):
        """The root near `start`, its zeros kept."""
        x = [mpf(value) for value in start]
        present = [i for i, value in enumerate(x) if value != 0]
        for _ in range(MOST_STEPS if present else 0):
            rows = self.at(x)
            slopes = mp.matrix(len(present))
            for column, j in enumerate(present):
                there = list(x)
                there[j] += NUDGE * abs(x[j])
                for line, (i, row) in enumerate((i, self.at(there)[i]) for i in present):
                    slopes[line, column] = (row - rows[i]) / (there[j] - x[j])
            step = mp.lu_solve(slopes, mp.matrix([rows[i] for i in present]))
            for line, i in enumerate(present):
                x[i] -= step[line]
            if all(abs(step[line]) <= CONVERGED * abs(x[i]) for line, i in enumerate(present)):
                break
        else:
            if present:
                raise ArithmeticError(f"no convergence from {start}")
        size = max([abs(value) for value in x] + [mpf(1)])
        if any(abs(row) > EXACT * size for row in self.at(x)):
            raise ArithmeticError(f"rows do not vanish at {[mp.nstr(value, 10) for value in x]}")
        if any(abs(value - mpf(s)) > mpf("1e-6") * abs(value) for value, s in zip(x, start)):
            raise ArithmeticError(f"{start} led away to {[mp.nstr(value, 10) for value in x]}")
        return x


def bounds(value):
    """The pair of f64 around an mpf."""
    near = float(value)
    difference = value - mpf(near)
    if abs(difference) <= EXACT * abs(value):
        return near, near
    return (near, nextafter(near, inf)) if difference > 0 else (nextafter(near, -inf), near)


def families():
    for model in json.loads((HERE / "equilibria_models.json").read_text(encoding="utf-8")):
        made = Model(model["species"], dict(model["parameters"]), model["shorthand"], model["rows"], model["discrete"])
        yield model["name"], "", made, model["starts"]


def richest(equilibria):
    """The non-degenerate equilibrium with the most species; none where there is none, or only the origin."""
    able = [e for e in equilibria if e["counts"][2] == 0 and any(float(x) for x in e["x"])]
    return [[float(x) for x in e["x"]] for e in sorted(able, key=lambda e: sum(float(x) > 0 for x in e["x"]))[-1:]]


def published():
    for case in json.loads((HERE / "../cases/published.json").read_text(encoding="utf-8"))["cases"]:
        plans = [{"name": "", "override": {}, "equilibria": case["equilibria"]}, *case.get("scenarios", [])]
        for plan in plans:
            parameters = case.get("parameters", {}) | plan["override"]
            made = Model(case["species"], parameters, [], case["equations"], case["time"] == "discrete")
            yield case["id"], plan["name"], made, richest(plan["equilibria"])


def main():
    with open(HERE / "equilibria_references.csv", "w", newline="", encoding="utf-8") as file:
        out = csv.writer(file, lineterminator="\n")
        out.writerow(["model", "scenario", "root", "species", "below", "above"])
        for name, scenario, model, starts in [*families(), *published()]:
            for number, start in enumerate(starts, 1):
                for symbol, value in zip(model.species, model.root(start)):
                    below, above = bounds(value)
                    out.writerow([name, scenario, number, symbol, repr(below), repr(above)])


if __name__ == "__main__":
    main()
