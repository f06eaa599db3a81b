"""Writes elementary.json and densities.json: exact values for the tests of elementary.ts, families.ts and special.ts.

    python3 make_elementary.py

Needs mpmath. Every argument is a double, written so that it reads back as the same double; the value is computed from
that double at 80 digits and written to 30 digits. The points are drawn with a fixed seed, beside those chosen by hand."""

import json
import random
import struct

from mpmath import mp, mpf
import mpmath

mp.dps = 80
random.seed(20240229)


def any_double():
    while True:
        x = struct.unpack("<d", struct.pack("<Q", random.getrandbits(64)))[0]
        if x == x and abs(x) != float("inf"):
            return x


def uniform(count, low, high):
    return [random.uniform(low, high) for _ in range(count)]


def sized(count, low, high):
    return [10 ** random.uniform(low, high) * random.choice([1, -1]) for _ in range(count)]


def positive(points):
    return [x for x in points if x > 0]


def text(x):
    return mpmath.nstr(x, 30, min_fixed=0, max_fixed=0, strip_zeros=True)


edges = [0.5, 1.0, 2.0, 1e-300, 5e-324, 2.2250738585072014e-308, 1.7976931348623157e308]
quarters = [k * 1.5707963267948966 for k in (1, 2, 3, 4, 5, 11, 1000, 355, 636618, 636620, 1e9, 1e15)]
angles = uniform(30, -10, 10) + sized(30, -10, 6) + [any_double() for _ in range(30)] + quarters + [6381956970095103 * 2.0**797]

functions = {
    "exp": (uniform(60, -745.13, 709.78) + uniform(30, -1, 1) + [709.782712893384, -745.1332191019411, -708.5, -740.0, 1e-17, -1e-17], mpmath.exp),
    "expm1": (uniform(30, -40, 709) + uniform(60, -2, 2) + sized(30, -20, 0) + [0.34657359027997264, -0.34657359027997264, 1.0397207708399179, -1.0397207708399179, 709.7], mpmath.expm1),
    "log": ([abs(any_double()) for _ in range(40)] + uniform(40, 0.5, 2) + [1 + x for x in sized(30, -15, -1)] + edges, mpmath.log),
    "log1p": ([x for x in sized(60, -20, 1) if x > -1] + uniform(40, -0.9999, 3) + [-1 + 10 ** -x for x in (1, 5, 10, 15)] + [1e15, 1e16, 1e300, 5e-324], mpmath.log1p),
    "log10": ([abs(any_double()) for _ in range(40)] + uniform(40, 0.5, 2) + [1 + x for x in sized(30, -15, -1)] + edges + [10.0**k for k in range(23)], mpmath.log10),
    "log2": ([abs(any_double()) for _ in range(40)] + uniform(40, 0.5, 2) + [1 + x for x in sized(30, -15, -1)] + edges, lambda x: mpmath.log(x) / mpmath.log(2)),
    "sin": (angles, mpmath.sin),
    "cos": (angles, mpmath.cos),
    "tan": (angles, mpmath.tan),
    "asin": (uniform(60, -1, 1) + sized(20, -10, 0) + [0.5, -0.5, 0.975, 1.0, -1.0, 0.9999999999999999], mpmath.asin),
    "acos": (uniform(60, -1, 1) + sized(20, -10, 0) + [0.5, -0.5, -1.0, 0.9999999999999999], mpmath.acos),
    "atan": (uniform(60, -4, 4) + sized(40, -10, 22) + [0.4375, 0.6875, 1.1875, 2.4375], mpmath.atan),
    "sinh": (uniform(60, -4, 4) + sized(30, -10, 2.8) + [1.0, 22.0, 710.4, -710.4], mpmath.sinh),
    "cosh": (uniform(60, -4, 4) + sized(30, -10, 2.8) + [22.0, 710.4, -710.4], mpmath.cosh),
    "tanh": (uniform(60, -4, 4) + sized(30, -10, 1.3) + [1.0, 22.0, -30.0], mpmath.tanh),
}
powers = (
    [(abs(a), b) for a, b in zip(sized(60, -5, 5), uniform(60, -10, 10))]
    + [(abs(any_double()), b) for b in uniform(40, -1, 1)]
    + [(1 + a, b) for a, b in zip(sized(30, -12, -2), sized(30, 0, 4))]
    + [(1 + a, b) for a, b in zip(sized(10, -12, -11), sized(10, 9.5, 11))]
    + [(10.0, float(k)) for k in (-308, -300, -5, 5, 22, 23, 300, 308)]
    + [(2.0, -1074.0), (2.0, 1023.0), (-3.0, 5.0), (-3.0, -2.0), (0.1, 3.0)]
)

tables = {
    name: [[repr(x), text(f(mpf(x)))] for x in points if f(mpf(x)) == 0 or abs(f(mpf(x))) < mpf(1.7976931348623157e308)]
    for name, (points, f) in functions.items()
}
tables["pow"] = [[repr(a), repr(b), text(mpmath.power(mpf(a), mpf(b)))] for a, b in powers]
about = "Computed with mpmath at 80 digits by make_elementary.py; arguments are doubles, the value is that of the double."
with open("elementary.json", "w") as out:
    json.dump({"about": about, "tables": tables}, out, indent=0)
    out.write("\n")


def term(x, m):
    return m if x == 0 else x * mpmath.log(x / m) + m - x


def binomial(k, n, mu):
    c = mpmath.loggamma(n + 1) - mpmath.loggamma(k + 1) - mpmath.loggamma(n - k + 1)
    return c + (k * mpmath.log(mu) if k else 0) + ((n - k) * mpmath.log(1 - mu) if n - k else 0)


def binomial_deviance(y, mu):
    return 2 * (term(y, mu) + term(1 - y, 1 - mu))


rows = {"binomial": [], "poisson": [], "gamma": [], "normal": [], "devianceTerm": [], "stirlingError": []}
for k, n, mu in [
    (0, 1, 0.3), (1, 1, 0.3), (1, 1, 1e-12), (0, 1, 1 - 1e-12), (3, 10, 0.3), (3, 10, 0.25), (7, 9, 0.77777), (5, 200, 0.0251), (1, 8, 1e-9),
    (7, 8, 0.99999), (500, 1000, 0.5), (500000, 1000000, 0.5001), (999999, 1000000, 0.999), (2, 100000000, 3e-8), (40, 60, 0.01), (0, 5000, 1e-5),
    (5000, 5000, 0.9999), (123456789, 987654321, 0.125),
]:
    rows["binomial"].append([repr(float(k)), repr(float(n)), repr(mu), text(binomial(mpf(k), mpf(n), mpf(mu))), text(binomial_deviance(mpf(k) / n, mpf(mu)))])
for y, mu in [
    (0, 0.5), (0, 1e-200), (1, 1e-10), (1, 1.0000001), (3, 3.0), (3, 2.9), (17, 5.0), (17, 40.0), (120, 119.5), (5000, 5000.0), (5000, 4800.0),
    (1000000, 1000001.5), (1000000000, 1000000000.25), (2, 1e6),
]:
    rows["poisson"].append([repr(float(y)), repr(mu), text(mpf(y) * mpmath.log(mpf(mu)) - mpf(mu) - mpmath.loggamma(mpf(y) + 1)), text(2 * term(mpf(y), mpf(mu)))])
for y, mu, phi in [
    (1.0, 1.0, 1.0), (1.0, 1.0000001, 0.01), (0.3, 2.0, 0.5), (250.0, 40.0, 1.7), (1e-8, 1.0, 3.0), (12.5, 12.4, 1e-6), (42.0, 35.5, 0.0023), (3.0, 5.0, 0.1),
    (3.0, 5.0, 40.0), (1e5, 99990.0, 1e-9),
]:
    nu, r = 1 / mpf(phi), mpf(y) / mpf(mu)
    density = nu * mpmath.log(nu * r) - nu * r - mpmath.log(mpf(y)) - mpmath.loggamma(nu)
    rows["gamma"].append([repr(y), repr(mu), repr(phi), text(density), text(2 * (r - 1 - mpmath.log(r)))])
for y, mu, phi in [(1.0, 1.0, 1.0), (3.0, -2.0, 0.25), (1e6, 1e6 + 0.5, 9.0), (0.1, 0.3, 1e-8)]:
    d = mpf(y) - mpf(mu)
    rows["normal"].append([repr(y), repr(mu), repr(phi), text(-mpmath.log(2 * mpmath.pi * mpf(phi)) / 2 - d * d / (2 * mpf(phi))), text(d * d)])
for x, m in [(0.0, 2.0), (1.0, 1.0), (1.0, 1.0 + 1e-9), (5.0, 5.5), (5.0, 4.0), (5.0, 6.2), (5.0, 50.0), (5e5, 5.0001e5), (1e-300, 1.0), (3.0, 1e-300), (1e-310, 1e10), (1e10, 1e-310)]:
    rows["devianceTerm"].append([repr(x), repr(m), text(term(mpf(x), mpf(m)))])
for x in [0.001, 0.1, 0.5, 1.0, 1.5, 2.0, 3.25, 9.0, 9.5, 10.0, 15.0, 15.5, 100.0, 1e4, 1e9]:
    v = mpf(x)
    rows["stirlingError"].append([repr(x), text(mpmath.loggamma(v + 1) - (v + 0.5) * mpmath.log(v) + v - mpmath.log(2 * mpmath.pi) / 2)])
with open("densities.json", "w") as out:
    json.dump(
        {
            "about": about,
            "columns": {
                "binomial": ["successes", "trials", "mu", "log density", "unit deviance"],
                "poisson": ["y", "mu", "log density", "unit deviance"],
                "gamma": ["y", "mu", "phi", "log density", "unit deviance"],
                "normal": ["y", "mu", "phi", "log density", "unit deviance"],
                "devianceTerm": ["x", "m", "value"],
                "stirlingError": ["x", "value"],
            },
            "rows": rows,
        },
        out,
        indent=0,
    )
    out.write("\n")
