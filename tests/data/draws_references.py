"""Writes draws_references.csv: distributions, points and random numbers that draws of parameters rest on.

Run from this folder:  pip install -r requirements.txt && python3 draws_references.py
It takes half a minute, and writes the same bytes everywhere.

A line is a name, its arguments, and what is expected; numbers read back to the same f64 or to whole numbers.
philox: key and counter, each as whole numbers, then four whole numbers, by numpy's generator of that name.
sobol: number of a point and of a dimension from 0, then 64 binary digits as a whole number: the first 25 as
scipy.stats.qmc.Sobol gives them in the same order with 64 bits (it keeps 53 of them).
normal: z, ln of the share below it.  beta: a, b, x, ln of the shares below and above.  gamma: x, ln Γ(x).  All by
mpmath at 50 digits: erfc, and where its own incomplete beta function is slow a power series, or the integral of the density in panels.
student: freedom, t, the share above t, from mpmath's incomplete beta function.
"""

import csv

import mpmath
import numpy as np
from mpmath import mp, mpf
from scipy.stats import qmc

mp.dps = 50


def philox():
    rng = np.random.default_rng(7)
    cases = [([0, 0], [0, 0, 0, 0])]
    for _ in range(12):
        draw = rng.integers(0, 2**64, 6, dtype=np.uint64)
        cases.append(([int(x) for x in draw[:2]], [int(x) for x in draw[2:]]))
    for key, counter in cases:
        # numpy counts up before it answers.
        whole = sum(word << 64 * k for k, word in enumerate(counter))
        before = (whole - 1) % 2**256
        words = [before >> 64 * k & (2**64 - 1) for k in range(4)]
        generator = np.random.Philox(counter=np.array(words, dtype=np.uint64), key=np.array(key, dtype=np.uint64))
        yield ["philox", *key, *counter, *[int(x) for x in generator.random_raw(4)]]


def sobol():
    points = qmc.Sobol(512, scramble=False, bits=64).random(1 << 11)
    for number in [0, 1, 2, 3, 4, 5, 6, 7, 100, 511, 512, 1023, 1024, 1777, 2047]:
        for dimension in [0, 1, 2, 3, 4, 5, 9, 17, 40, 99, 200, 255, 256, 400, 511]:
            yield ["sobol", number, dimension, int(points[number, dimension] * 2**53) << 11]


def ln_share(z):
    return mpmath.log(mpmath.erfc(-z / mpmath.sqrt(2)) / 2)


def normal():
    for z in [-1e4, -300.5, -60.0, -38.5, -37.0, -20.0, -8.25, -5.5, -3.75, -3.0, -2.0, -1.5, -1.25, -1.0, -0.5, -1e-3, -1e-9]:
        yield ["normal", z, float(ln_share(mpf(z)))]


def beta_tails(a, b, x):
    """The share below x and that above."""
    a, b, x = mpf(a), mpf(b), mpf(x)
    if a + b < 3000:
        below = mpmath.betainc(a, b, 0, x, regularized=True)
        above = mpmath.betainc(b, a, 0, 1 - x, regularized=True)
        return below, above
    if a < 100:
        # The power series of the lower end; it alternates, and cancels some fifteen of the digits.
        total, term = mpf(0), mpf(1)
        for k in range(400):
            total += term / (a + k)
            term *= (k + 1 - b) / (k + 1) * x
        below = total * x**a / mpmath.beta(a, b)
        return below, 1 - below
    # Both shapes are large: a smooth integrand, negligible 30 standard deviations out.
    ln_function = mpmath.loggamma(a) + mpmath.loggamma(b) - mpmath.loggamma(a + b)
    density = lambda t: mpmath.exp((a - 1) * mpmath.log(t) + (b - 1) * mpmath.log(1 - t) - ln_function)
    sd = mpmath.sqrt(a * b / (a + b + 1)) / (a + b)
    low = [x - k * sd / 2 for k in range(60, -1, -1) if x - k * sd / 2 > 0]
    high = [x + k * sd / 2 for k in range(61) if x + k * sd / 2 < 1]
    low, high = ([mpf(0)] + low if len(low) < 61 else low), (high + [mpf(1)] if len(high) < 61 else high)
    return mpmath.quad(density, low), mpmath.quad(density, high)


SHAPES = [(1, 1), (2, 3), (0.5, 0.5), (0.01, 0.02), (1e-3, 1.0), (5, 0.1), (0.3, 40), (12, 9), (30, 500), (400, 350), (1e4, 2.5e4), (3e5, 2e5), (15, 2e4), (9.5, 3e4)]


def beta():
    for a, b in SHAPES:
        a, b = float(a), float(b)
        mean, sd = a / (a + b), (a * b / (a + b + 1)) ** 0.5 / (a + b)
        for x in [mean * 1e-6, mean * 0.3, mean - 3 * sd, mean - sd, mean, mean + sd, mean + 4 * sd, 1 - (1 - mean) * 0.2]:
            # Far out of a narrow distribution the integral above would not do.
            if 0 < x < 1 and (a + b < 3000 or abs(x - mean) < 5 * sd):
                below, above = beta_tails(a, b, x)
                yield ["beta", a, b, x, float(mpmath.log(below)), float(mpmath.log(above))]


def gamma():
    for x in [1e-300, 1e-3, 0.3, 0.999, 1.0, 1.5, 2.0, 2.001, 5.5, 9.99, 10.0, 33.3, 1e5, 1e12]:
        yield ["gamma", x, float(mpmath.loggamma(mpf(x)))]


def student():
    for freedom in [1.0, 2.0, 3.5, 7.0, 15.0, 31.0, 120.0, 1e4]:
        for t in [1e-3, 0.7, 2.0, 2.131, 12.7]:
            half, x = mpf(freedom) / 2, mpf(freedom) / (mpf(freedom) + mpf(t) ** 2)
            yield ["student", freedom, t, float(beta_tails(half, mpf(1) / 2, x)[0] / 2) if freedom < 3000 else float(wide(freedom, t))]


def wide(freedom, t):
    """The share above t of many degrees of freedom, from the density."""
    n = mpf(freedom)
    scale = mpmath.exp(mpmath.loggamma((n + 1) / 2) - mpmath.loggamma(n / 2)) / mpmath.sqrt(n * mpmath.pi)
    density = lambda s: scale * (1 + s * s / n) ** (-(n + 1) / 2)
    return mpmath.quad(density, [mpf(t) + k for k in range(41)] + [mpmath.inf])


with open("draws_references.csv", "w", newline="") as out:
    writer = csv.writer(out, lineterminator="\n")
    for rows in [philox, sobol, normal, beta, gamma, student]:
        writer.writerows(rows())
