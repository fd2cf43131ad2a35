"""Writes quantiles.json: points at which a tail has a given size, for seeded random sizes down to 1e-300 and freedoms from .05 to 1e7, whole or not.

Run: python3 quantiles.py, with mpmath 1.2 and scipy 1.10 from Debian 12. scipy gives the starts alone; from there Newton steps on the logarithm of mpmath's own tail in 50 digits
(incomplete gamma and beta functions; Poisson mixtures of them) go on until 30 digits stand. Points below 1e-290 or above 1e290 are left out, and so
is what mpmath cannot settle.
"""

import json
import os
import random

import mpmath as m
from scipy import stats

m.mp.dps = 50
random.seed(10)
rows = []


def power(low, high):
    return float("%.6g" % 10 ** random.uniform(low, high))


def size():
    """A probability: near a half, in the tail, or far out."""
    return random.choice([lambda: float("%.6g" % random.uniform(0.01, 0.5)), lambda: power(-12, -1), lambda: power(-300, -12)])()


def gamma_tail(a, x, upper):
    if upper:
        return m.gammainc(a, x, m.inf, regularized=True)
    return m.gammainc(a, 0, x, regularized=True)


def beta_tail(a, b, x, upper):
    """x as a pair (x, 1 - x)."""
    value = m.betainc(b, a, 0, x[1], regularized=True) if upper else m.betainc(a, b, 0, x[0], regularized=True)
    return value.real if isinstance(value, m.mpc) else value


def solved(name, arguments, tail, target, start):
    """Newton steps on ln tail over ln x, the slope by a small step of its own."""
    if not (1e-290 < start < 1e290):
        return
    x = m.mpf(float(start))
    goal = m.log(m.mpf(target))
    step = m.mpf(10) ** -20
    try:
        for _ in range(60):
            here = m.log(tail(x))
            slope = (m.log(tail(x * m.exp(step))) - here) / step
            move = (goal - here) / slope
            move = max(min(move, m.mpf(2)), m.mpf(-2))
            x *= m.exp(move)
            if abs(move) < m.mpf(10) ** -27:
                break
        else:
            return
        if abs(tail(x) / target - 1) > abs(slope) * m.mpf(10) ** -25:
            return
    except (ValueError, ZeroDivisionError, m.libmp.NoConvergence, TypeError):
        return
    if m.mpf(10) ** -290 < x < m.mpf(10) ** 290:
        rows.append({"function": name, "arguments": arguments, "value": m.nstr(x, 22)})


for _ in range(60):
    p = size()
    solved("normalUpperQuantile", [p], lambda x: m.erfc(x / m.sqrt(2)) / 2, p, stats.norm.isf(p))
for _ in range(110):
    p, f = size(), random.choice([power(-1.3, 1), power(0, 3), power(3, 7), float(random.randint(1, 60))])
    mf = m.mpf(f) / 2
    solved("tUpperQuantile", [p, f],
           lambda x: beta_tail(mf, m.mpf(0.5), (f / (f + x * x), x * x / (f + x * x)), False) / 2, p, stats.t.isf(p, f))
    solved("chiSquareUpperQuantile", [p, f], lambda x: gamma_tail(mf, x / 2, True), p, stats.chi2.isf(p, f))
    solved("chiSquareQuantile", [p, f], lambda x: gamma_tail(mf, x / 2, False), p, stats.chi2.ppf(p, f))
    g = random.choice([power(-1, 1), power(0, 4), float(random.randint(1, 60))])
    mg = m.mpf(g) / 2
    point = lambda x: (f * x / (f * x + g), g / (f * x + g))
    solved("fUpperQuantile", [p, f, g], lambda x: beta_tail(mf, mg, point(x), True), p, stats.f.isf(p, f, g))
    solved("fQuantile", [p, f, g], lambda x: beta_tail(mf, mg, point(x), False), p, stats.f.ppf(p, f, g))


def mixture(mean, tail, shift=m.mpf(0)):
    weight = m.exp(shift * m.log(mean) - mean - m.loggamma(shift + 1))
    total = m.mpf(0)
    step = 0
    while True:
        total += weight * tail(step + shift)
        if step > mean and weight < total * m.mpf(10) ** -40:
            return total
        step += 1
        weight *= mean / (step + shift)


for _ in range(14):
    p, f, strength = random.choice([float("%.6g" % random.uniform(0.01, 0.9)), power(-30, -2)]), power(-0.3, 2), power(-1, 1.5)
    mf, mean = m.mpf(f) / 2, m.mpf(strength) / 2
    solved("noncentralChiSquareUpperQuantile", [p, f, strength],
           lambda x: mixture(mean, lambda j: gamma_tail(mf + j, x / 2, True)), p, stats.ncx2.isf(p, f, strength) or 1)
    g = power(0.3, 2.5)
    mg = m.mpf(g) / 2
    solved("noncentralFUpperQuantile", [p, f, g, strength],
           lambda x: mixture(mean, lambda j: beta_tail(mf + j, mg, (f * x / (f * x + g), g / (f * x + g)), True)),
           p, stats.f.isf(p, f, g) * (1 + strength / f))
    centre = power(-1, 0.7)
    half = m.mpf(centre) ** 2 / 2
    share = lambda x: (x * x / (g + x * x), g / (g + x * x))
    tail = lambda x: (mixture(half, lambda j: beta_tail(m.mpf(0.5) + j, mg, share(x), True))
                      + mixture(half, lambda j: beta_tail(m.mpf(0.5) + j, mg, share(x), True), m.mpf(0.5))) / 2
    if p < 0.45:
        solved("noncentralTUpperQuantile", [p, g, centre], tail, p, stats.t.isf(p, g) + centre)

rows.sort(key=lambda row: row["function"])
with open(os.path.join(os.path.dirname(os.path.abspath(__file__)), "quantiles.json"), "w") as file:
    json.dump(rows, file, indent=1)
    file.write("\n")
from collections import Counter
print(Counter(row["function"] for row in rows))
