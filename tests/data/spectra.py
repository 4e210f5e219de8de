"""Writes spectra.json: matrices of order 2 to 50 that are hard in some way, with their eigenvalues from elsewhere.

Run from this folder:  pip install -r requirements.txt && python3 spectra.py
With --check it writes nothing, works all out again, and compares with the file: matrices exactly, values within what their
condition allows, since another BLAS rounds otherwise. Either takes some seconds.

A case is name, order, entries row by row, and groups of eigenvalues: [re, im] of each, the group's condition, and whether
they are one defective cluster. `size` is the norm of the balanced matrix. Values come from closed formulas or from mpmath's
QR iteration at 60 digits; from numpy (LAPACK) for orders above 12.
"""

import json
import random
import sys
import warnings
from pathlib import Path

import numpy
from mpmath import mp, mpc, mpf
from scipy.linalg import matrix_balance

mp.dps = 60
# scipy reads the scaling as a permutation too, before it throws that away.
warnings.filterwarnings("ignore", message="invalid value encountered in cast")
FILE = Path(__file__).with_name("spectra.json")
# What is closer than this, relative to the norm, is compared as a cluster.
TOGETHER = 1e-7


def product(a, b):
    """Of matrices of whole numbers or few bits: exact."""
    return [[sum(x * y for x, y in zip(row, column)) for column in zip(*b)] for row in a]


def unimodular(source, n):
    """A matrix of whole numbers with determinant 1, and its inverse."""
    forth = [[float(i == j) for j in range(n)] for i in range(n)]
    back = [row[:] for row in forth]
    for _ in range(2 * n):
        i, j, by = source.randrange(n), source.randrange(n), source.choice([-1, 1])
        if i != j:
            forth[i] = [x + by * y for x, y in zip(forth[i], forth[j])]
            for row in back:
                row[j] -= by * row[i]
    return forth, back


def dense(source, n, shift=0.0, keep=1.0):
    entry = lambda: source.uniform(-1, 1) if source.random() < keep else 0.0
    return [[entry() + (shift if i == j else 0.0) for j in range(n)] for i in range(n)]


def in_units(matrix, exponents, common=0):
    return [[x * 2.0 ** (exponents[i] - exponents[j] + common) for j, x in enumerate(row)] for i, row in enumerate(matrix)]


def reducible(source, n):
    """Block triangular with blocks of order one to three, in a random order of its indices."""
    part, k = [], 0
    while len(part) < n:
        part += [k] * source.randint(1, 3)
        k += 1
    part = part[:n]
    source.shuffle(part)
    return [[source.uniform(-1, 1) if part[i] <= part[j] else 0.0 for j in range(n)] for i in range(n)]


def ring(n, last, each):
    """Stage i + 1 comes from stage i, the first from the last."""
    return [[each if i == j + 1 else last if (i, j) == (0, n - 1) else 0.0 for j in range(n)] for i in range(n)]


def roots(n, power):
    """All λ with λ^n = power > 0."""
    size = mp.root(power, n)
    return [size * mp.expjpi(mpf(2 * k) / n) for k in range(n)]


def jordan(blocks):
    n = sum(m for m, _ in blocks)
    matrix = [[0.0] * n for _ in range(n)]
    k = 0
    for m, value in blocks:
        for i in range(m):
            matrix[k + i][k + i] = value
            if i + 1 < m:
                matrix[k + i][k + i + 1] = 1.0
        k += m
    return matrix


def leslie(source, n):
    matrix = [[0.0] * n for _ in range(n)]
    matrix[0] = [0.0] + [source.uniform(0, 3) for _ in range(n - 1)]
    for i in range(1, n):
        matrix[i][i - 1] = source.uniform(0.1, 0.9)
    return matrix


def frank(n):
    return [[float(n - max(i, j)) if j >= i - 1 else 0.0 for j in range(n)] for i in range(n)]


def cases():
    """Name, matrix, and its eigenvalues in groups with a condition where they are known; else None."""
    source = random.Random(1)
    for n in (2, 3, 4, 5, 6, 8, 10, 12, 20, 40):
        for shift, name in ((0.0, "mixed"), (-0.6 * n**0.5, "stable"), (0.6 * n**0.5, "unstable")):
            for k in range(3 if n <= 12 else 1):
                yield f"{name} {n}.{k}", dense(source, n, shift), None
    for n in (2, 3, 5, 8, 12):
        for reach in (10, 60, 250):
            units = [source.randint(-reach, reach) for _ in range(n)]
            yield f"units 2^{reach} {n}", in_units(dense(source, n, -0.5), units), None
        for common in (-900, 900):
            yield f"times 2^{common} {n}", in_units(dense(source, n), [0] * n, common), None
    for n in (4, 6, 9, 12, 30):
        yield f"reducible {n}", reducible(source, n), None
        yield f"sparse {n}", dense(source, n, 0.0, 0.3), None
    for n in range(3, 13):
        yield f"ages {n}", leslie(source, n), None
    for n in list(range(2, 25)) + [40]:
        yield f"cycle {n}", ring(n, 1.0, 1.0), simple(roots(n, mpf(1)))
        yield f"ring {n}", ring(n, 1.0, 0.9), simple(roots(n, mpf(0.9) ** (n - 1)))
    yield "roots of one 50", ring(50, 1.0, 1.0), simple(roots(50, mpf(1)))
    yield "frank 8", frank(8), None
    for m in (2, 3, 4, 5, 6):
        yield from hidden(source, f"defective {m}", jordan([(m, -1.5)]))
        yield from hidden(source, f"defective {m} and others", jordan([(m, 0.5), (1, -2.0), (2, 3.0)]))
    for e in (10, 20, 30, 45):
        matrix = jordan([(2, -1.0), (1, 2.0)])
        matrix[1][1] += 2.0**-e
        yield from hidden(source, f"nearly defective 2^-{e}", matrix)
        matrix[1][1], matrix[1][0] = -1.0, -(2.0**-e)
        yield f"nearly defective pair 2^-{e}", matrix, None


def simple(values):
    return [([value], None) for value in values]


def hidden(source, name, matrix):
    """A triangular matrix in coordinates that hide it: its diagonal is the spectrum."""
    n = len(matrix)
    forth, back = unimodular(source, n)
    condition = float(numpy.linalg.norm(forth, 2) * numpy.linalg.norm(back, 2))
    groups = {}
    for i in range(n):
        near = next((v for v in groups if abs(v - matrix[i][i]) < TOGETHER), matrix[i][i])
        groups.setdefault(near, []).append(mpf(matrix[i][i]))
    yield name, product(product(forth, matrix), back), [(group, condition if len(group) > 1 else None) for group in groups.values()]


def worked_out(name, matrix, groups):
    n = len(matrix)
    balanced = numpy.array(scaled_down(matrix))
    size = float(numpy.linalg.norm(balanced, 2))
    # The exponent that was taken out to keep LAPACK from overflow.
    unit = 2.0 ** exponent(matrix)
    values, vectors = numpy.linalg.eig(balanced)
    inverse = numpy.linalg.pinv(vectors)
    conditions = numpy.linalg.norm(vectors, axis=0) * numpy.linalg.norm(inverse, axis=1)
    if groups is None:
        # Balancing by powers of two is exact, and mpmath would need hundreds of digits without.
        exact = mp.eig(mp.matrix(balanced.tolist()), left=False, right=False) if n <= 12 else map(complex, values)
        groups = simple([mpc(z) * unit for z in exact])
    out = []
    for group, condition in groups:
        if condition is None:
            place = numpy.argmin([abs(complex(mpc(group[0]) / unit) - z) for z in values])
            condition = float(conditions[place])
        pairs = [[float(mpc(z).real), float(mpc(z).imag)] for z in group]
        out.append({"values": pairs, "condition": condition})
    entries = [x for row in matrix for x in row]
    return {"name": name, "n": n, "size": size * unit, "entries": entries, "groups": joined(out, size * unit)}


def exponent(matrix):
    largest = max(abs(x) for row in matrix_balance(numpy.array(matrix), permute=False)[0] for x in row)
    return int(numpy.floor(numpy.log2(largest)))


def scaled_down(matrix):
    return matrix_balance(numpy.array(matrix), permute=False)[0] * 2.0 ** -exponent(matrix)


def joined(groups, size):
    """Simple eigenvalues that are closer than a cluster are compared by their mean."""
    out = []
    for group in groups:
        z = complex(*group["values"][0])
        near = next((g for g in out if abs(complex(*g["values"][0]) - z) < TOGETHER * size), None)
        if near:
            near["values"] += group["values"]
            near["condition"] = max(near["condition"], group["condition"])
        else:
            out.append(group)
    return out


def compare(old, new):
    assert [case["name"] for case in old] == [case["name"] for case in new], "other cases"
    for a, b in zip(old, new):
        assert a["entries"] == b["entries"], a["name"]
        pairs = [(p, g) for g in a["groups"] for p in g["values"]]
        others = [complex(*p) for g in b["groups"] for p in g["values"]]
        for pair, group in pairs:
            z = complex(*pair)
            nearest = min(others, key=lambda other: abs(other - z))
            bound = 1e-12 * max(group["condition"], 1) * a["size"]
            assert abs(nearest - z) <= bound, (a["name"], z, nearest)
            others.remove(nearest)


def main():
    found = [worked_out(*case) for case in cases()]
    if "--check" in sys.argv[1:]:
        compare(json.loads(FILE.read_text()), found)
        print(f"{len(found)} spectra agree")
    else:
        FILE.write_text("[\n" + ",\n".join(json.dumps(case) for case in found) + "\n]\n")


if __name__ == "__main__":
    main()
