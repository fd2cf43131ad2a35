"""Writes values.json: functions at seeded random points, computed with mpmath 1.3.0 in 60 digits or more, printed to 22;
values below 1e-300 are left out.

Run: python3 derive.py. Tails come from the power series of the incomplete gamma and beta functions, complements from 1 less them in
enough digits; noncentral ones from their Poisson mixtures, term by term.
"""

import json
import os
import random

import mpmath as m

m.mp.dps = 60
random.seed(20)
rows = []


def put(name, arguments, value):
    if abs(value) < 1e-300:
        return
    rows.append({"function": name, "arguments": arguments, "value": m.nstr(value, 22)})


def between(low, high):
    return float("%.6g" % random.uniform(low, high))


def power(low, high):
    return float("%.6g" % 10 ** random.uniform(low, high))


def lower_gamma(a, x):
    term = total = m.mpf(1) / a
    n = 0
    while term > total * m.mpf(10) ** -m.mp.dps:
        n += 1
        term *= x / (a + n)
        total += term
    return m.exp(a * m.log(x) - x - m.loggamma(a)) * total


def beta_series(a, b, x):
    term = total = m.mpf(1)
    n = 0
    while term > total * m.mpf(10) ** -m.mp.dps or (a + b + n) * x > a + 1 + n:
        term *= (a + b + n) * x / (a + 1 + n)
        total += term
        n += 1
    front = a * m.log(x) + b * m.log(1 - x) + m.loggamma(a + b) - m.loggamma(a + 1) - m.loggamma(b)
    return m.exp(front) * total


def lower_beta(a, b, x):
    return beta_series(a, b, x) if x <= 0.6 else 1 - beta_series(b, a, 1 - x)


def mixture(mean, tail, shift=m.mpf(0)):
    weight = m.exp(shift * m.log(mean) - mean - m.loggamma(shift + 1)) if mean else m.mpf(1)
    total = m.mpf(0)
    step = 0
    while True:
        total += weight * tail(step + shift)
        if step > mean and weight < total * m.mpf(10) ** -30:
            return total
        step += 1
        weight *= mean / (step + shift)


for _ in range(8):
    x = between(-700, 700)
    put("exp", [x], m.exp(m.mpf(x)))
    for x in (power(-300, 300), between(0.5, 2)):
        put("log", [x], m.log(m.mpf(x)))
        put("log10", [x], m.log10(m.mpf(x)))
    for x in (between(-0.9, 4), power(-12, -1)):
        put("log1p", [x], m.log1p(m.mpf(x)))
        put("expm1", [x], m.expm1(m.mpf(x)))
    for x in (between(-1, 1), power(-12, -1)):
        put("tanh", [x], m.tanh(m.mpf(x)))
        put("atanh", [x], m.atanh(m.mpf(x)))
        put("arcsin", [x], m.asin(m.mpf(x)))
    x, y = power(-5, 5), between(-60, 60)
    put("pow", [x, y], m.mpf(x) ** m.mpf(y))
    a = power(-2, 5)
    put("logGamma", [a], m.loggamma(m.mpf(a)))

m.mp.dps = 360
for _ in range(12):
    z = between(-3, 37)
    put("normalUpper", [z], m.erfc(m.mpf(z) / m.sqrt(2)) / 2)
    freedom = power(-0.3, 4)
    x = float("%.6g" % (freedom * m.e ** between(-1.5, 1.5)))
    below = lower_gamma(m.mpf(freedom) / 2, m.mpf(x) / 2)
    put("chiSquareUpper", [x, freedom], 1 - below)
    put("chiSquareLower", [x, freedom], below)
    t, freedom = power(-2, 1.3), power(-0.3, 5)
    put("tUpper", [t, freedom], lower_beta(m.mpf(freedom) / 2, m.mpf(0.5), freedom / (freedom + m.mpf(t) ** 2)) / 2)
    x, one, two = power(-1.5, 1.5), power(-0.3, 2.5), power(-0.3, 4)
    share = m.mpf(two) / (m.mpf(one) * x + two)
    put("fUpper", [x, one, two], lower_beta(m.mpf(two) / 2, m.mpf(one) / 2, share))
    put("fLower", [x, one, two], lower_beta(m.mpf(one) / 2, m.mpf(two) / 2, 1 - share))

m.mp.dps = 130
for _ in range(8):
    freedom, strength = power(-0.3, 2), power(-2, 2)
    x = float("%.6g" % ((freedom + strength) * m.e ** between(-1, 1.3)))
    mean = m.mpf(strength) / 2
    put("noncentralChiSquareUpper", [x, freedom, strength],
        mixture(mean, lambda j: 1 - lower_gamma(m.mpf(freedom) / 2 + j, m.mpf(x) / 2)))
    x, one, two = power(-1, 1.5), power(-0.3, 1.5), power(0, 3)
    share = m.mpf(two) / (m.mpf(one) * x + two)
    put("noncentralFUpper", [x, one, two, strength],
        mixture(mean, lambda j: lower_beta(m.mpf(two) / 2, m.mpf(one) / 2 + j, share)))
    t, freedom, centre = between(0, 9), power(0, 3), between(0.1, 6)
    share = m.mpf(freedom) / (freedom + m.mpf(t) ** 2)
    mean = m.mpf(centre) ** 2 / 2
    tail = lambda j: lower_beta(m.mpf(freedom) / 2, m.mpf(0.5) + j, share)
    put("noncentralTUpper", [t, freedom, centre], (mixture(mean, tail) + mixture(mean, tail, m.mpf(0.5))) / 2)

rows.sort(key=lambda row: row["function"])
with open(os.path.join(os.path.dirname(os.path.abspath(__file__)), "values.json"), "w") as file:
    json.dump(rows, file, indent=1)
    file.write("\n")
