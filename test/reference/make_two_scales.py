"""Made-up designs fitted at 45 digits: estimates, and curves, bands, observed means and working responses on both scales.

    python3 make_two_scales.py two-scales.json

A program of its own, so that the fits of this project are compared with something that shares no code with them: Fisher scoring with
halving on dense matrices in multiple precision (mpmath), whatever the link. Links and variance functions are typed from McCullagh, P. and
Nelder, J. A. (1989), Generalized Linear Models, 2nd ed., tables 2.1 and section 4.3. Data are simulated with a fixed seed. All numbers are
decimal strings. Every case has its data as CSV and its cells as text.
"""

import json
import math
import random
import sys

from mpmath import (atan, betainc, digamma, erfc, erfinv, exp, findroot, inverse, log, loggamma, lu_solve, matrix, mp, mpf, nstr,
                    pi, sqrt, tan)

mp.dps = 45
HALF = mpf(1) / 2


def probability(e):
    return erfc(-e / sqrt(mpf(2))) / 2


LINKS = {  # mean(eta), slope(eta), eta(mean)
    "identity": (lambda e: e, lambda e: mpf(1), lambda m: m),
    "log": (exp, exp, log),
    "reciprocal": (lambda e: 1 / e, lambda e: -1 / e**2, lambda m: 1 / m),
    "square_root": (lambda e: e**2, lambda e: 2 * e, sqrt),
    "logit": (lambda e: 1 / (1 + exp(-e)), lambda e: exp(-e) / (1 + exp(-e)) ** 2, lambda m: log(m / (1 - m))),
    "probit": (probability, lambda e: exp(-e * e / 2) / sqrt(2 * pi), lambda m: sqrt(mpf(2)) * erfinv(2 * m - 1)),
    "cauchit": (lambda e: HALF + atan(e) / pi, lambda e: 1 / (pi * (1 + e * e)), lambda m: tan(pi * (m - HALF))),
    "cloglog": (lambda e: 1 - exp(-exp(e)), lambda e: exp(e - exp(e)), lambda m: log(-log(1 - m))),
    "loglog": (lambda e: exp(-exp(-e)), lambda e: exp(-e - exp(-e)), lambda m: -log(-log(m))),
}
LEGAL = {
    "binomial": ["logit", "probit", "cauchit", "cloglog", "loglog", "identity", "log"],
    "poisson": ["log", "identity", "square_root", "power(0.3)", "reciprocal"],
    "gamma": ["reciprocal", "log", "identity", "square_root", "power(-0.5)"],
    "normal": ["identity", "log", "square_root", "power(2)", "reciprocal"],
}
VARIANCE = {"normal": lambda m: mpf(1), "binomial": lambda m: m * (1 - m), "poisson": lambda m: m, "gamma": lambda m: m * m}
SPAN = {"binomial": (0.12, 0.8), "poisson": (2, 9), "gamma": (1, 6), "normal": (2, 6)}


def link_of(name):
    if not name.startswith("power"):
        return LINKS[name]
    a = mpf(name[6:-1])
    return (lambda e: e ** (1 / a), lambda e: e ** (1 / a - 1) / a, lambda m: m**a)


def unit_deviance(family, y, m):
    if family == "normal":
        return (y - m) ** 2
    if family == "poisson":
        return 2 * ((y * log(y / m) if y > 0 else 0) - (y - m))
    if family == "gamma":
        return 2 * (-log(y / m) + (y - m) / m)
    return 2 * ((y * log(y / m) if y > 0 else 0) + ((1 - y) * log((1 - y) / (1 - m)) if y < 1 else 0))


def possible(family, link, e, m):
    if mp.im(m) != 0 or ((link == "square_root" or link.startswith("power")) and not e > 0):
        return False
    return family == "normal" or (m > 0 and (family != "binomial" or m < 1))


def fitted(family, link, X, y, m, R, w, o, E):
    """Maximum likelihood by scoring; raises where no start or no step keeps every mean possible."""
    mean, slope, eta_of = link_of(link)
    n, p = len(y), len(X[0])
    a = [R[i] * w[i] * m[i] for i in range(n)]

    def at(e, i):
        if E is None:
            return mean(e), slope(e)
        if family == "binomial":
            return mean(e + log(E[i])), slope(e + log(E[i]))
        return E[i] * mean(e), E[i] * slope(e)

    def line(beta):
        return [sum(X[i][j] * beta[j] for j in range(p)) + o[i] for i in range(n)]

    def deviance(beta):
        total = mpf(0)
        for i, e in enumerate(line(beta)):
            mu, _ = at(e, i)
            if not possible(family, link, e, mu):
                return None
            total += a[i] * unit_deviance(family, y[i], mu)
        return total

    start = [(y[i] * m[i] + HALF) / (m[i] + 1) if family == "binomial" else (y[i] + HALF if family == "poisson" else y[i]) for i in range(n)]
    eta = [eta_of(start[i] / (E[i] if E and family != "binomial" else 1)) - (log(E[i]) if E and family == "binomial" else 0) for i in range(n)]
    beta = None
    for _ in range(400):
        A, b = matrix(p, p), matrix(p, 1)
        for i in range(n):
            mu, d = at(eta[i], i)
            W = a[i] * d * d / VARIANCE[family](mu)
            z = eta[i] - o[i] + ((y[i] - mu) / d if beta is not None else 0)
            for j in range(p):
                b[j] += W * X[i][j] * z
                for k in range(p):
                    A[j, k] += W * X[i][j] * X[i][k]
        new = lu_solve(A, b)
        change = mpf(1)
        if beta is None:
            if deviance(new) is None:
                raise RuntimeError("start")
        else:
            before, t = deviance(beta), mpf(1)
            while True:
                tried = beta + t * (new - beta)
                after = deviance(tried)
                if after is not None and after <= before + mpf(10) ** -30:
                    break
                t /= 2
                if t < mpf(10) ** -12:
                    raise RuntimeError("halving")
            new = tried
            change = max(abs(new[j] - beta[j]) / (abs(new[j]) + mpf(10) ** -10) for j in range(p))
        beta, eta = new, line(new)
        if change < mpf(10) ** -38:
            break
    else:
        raise RuntimeError("no end")
    information, pearson, D, mus, W, r = matrix(p, p), mpf(0), mpf(0), [], [], []
    for i in range(n):
        mu, d = at(eta[i], i)
        mus.append(mu)
        W.append(a[i] * d * d / VARIANCE[family](mu))
        r.append((y[i] - mu) / d)
        pearson += a[i] * (y[i] - mu) ** 2 / VARIANCE[family](mu)
        D += a[i] * unit_deviance(family, y[i], mu)
        for j in range(p):
            for k in range(p):
                information[j, k] += W[i] * X[i][j] * X[i][k]
    count = sum(R)
    df = count - p
    phi = mpf(1) if family in ("binomial", "poisson") else pearson / df
    return {"beta": beta, "covariance": inverse(information) * phi, "deviance": D, "pearson": pearson, "df": df, "weight": W, "residual": r,
            "log_likelihood": log_likelihood(family, y, m, R, w, mus, D, count)}


def log_likelihood(family, y, m, R, w, mu, D, count):
    n = range(len(y))
    if family == "binomial":
        return sum(R[i] * w[i] * (loggamma(m[i] + 1) - loggamma(y[i] * m[i] + 1) - loggamma(m[i] - y[i] * m[i] + 1)
                                  + (y[i] * m[i] * log(mu[i]) if y[i] > 0 else 0)
                                  + ((m[i] - y[i] * m[i]) * log(1 - mu[i]) if y[i] < 1 else 0)) for i in n)
    if family == "poisson":
        return sum(R[i] * w[i] * ((y[i] * log(mu[i]) if y[i] > 0 else 0) - mu[i] - loggamma(y[i] + 1)) for i in n)
    if family == "normal":
        s = D / count
        return sum(R[i] * (-log(2 * pi * s / w[i]) / 2 - w[i] * (y[i] - mu[i]) ** 2 / (2 * s)) for i in n)

    def score(v):
        return sum(R[i] * w[i] * (log(v * w[i]) + 1 + log(y[i] / mu[i]) - y[i] / mu[i] - digamma(v * w[i])) for i in n)

    v = findroot(score, count / D)
    return sum(R[i] * (v * w[i] * log(v * w[i] / mu[i]) - loggamma(v * w[i]) + (v * w[i] - 1) * log(y[i]) - v * w[i] * y[i] / mu[i]) for i in n)


def t_point(df):
    """Two-sided 5 % point of t."""
    return findroot(lambda t: betainc(df / 2, HALF, 0, df / (df + t * t), regularized=True) - mpf("0.05"), mpf(2) + 2 / df)


NORMAL_POINT = sqrt(mpf(2)) * erfinv(mpf("0.95"))


def said(x):
    return nstr(x, 25)


def poisson_draw(rnd, mean):
    t, k = 0.0, -1
    while t < mean:
        t -= math.log(rnd.random())
        k += 1
    return k


def case(rnd, family, link, variant):
    """One made-up design; None where its fit has no interior maximum."""
    mean, _, eta_of = link_of(link)
    n = rnd.choice([14, 20, 24])
    x = [str(round(rnd.uniform(0.2, 3.5), 2)) for _ in range(n)]
    g = [("a", "b", "c")[i % 3] if i < 9 else rnd.choice("abc") for i in range(n)]
    z = [str(round(rnd.gauss(0, 1), 3)) for _ in range(n)]
    predictor = ("x", "x + g", "x*g", "x + z")[variant]
    with_exposure = variant == 1 and (family in ("poisson", "gamma") or link == "cloglog")
    with_precision = variant == 3 and family in ("normal", "gamma")
    with_offset = variant == 3 and link in ("log", "logit", "probit", "cloglog", "identity")
    E = [mpf(str(round(rnd.uniform(0.5, 4), 2))) for _ in range(n)] if with_exposure else None
    R = [mpf(rnd.choice([1, 2, 3])) if variant == 2 else mpf(1) for _ in range(n)]
    w = [mpf(str(round(rnd.uniform(0.5, 3), 1))) if with_precision else mpf(1) for _ in range(n)]
    o = [mpf(str(round(rnd.uniform(0, 0.3), 2))) if with_offset else mpf(0) for _ in range(n)]
    low, high = (0.1, 0.6) if (family, link) == ("binomial", "log") else SPAN[family]
    slope = (eta_of(mpf(high)) - eta_of(mpf(low))) / mpf("3.3")
    constant = eta_of(mpf(low)) - slope * mpf("0.2")
    grouped = family == "binomial" and not (variant == 0 and link in ("logit", "cloglog"))
    m = [mpf(rnd.randint(8, 40)) if grouped else mpf(1) for _ in range(n)]
    text, y = [], []
    for i in range(n):
        mu = float(mean(constant + slope * mpf(x[i])))
        unit = float(E[i]) if E is not None else 1.0
        if family == "binomial":
            k = sum(rnd.random() < mu for _ in range(int(m[i])))
            text.append(str(k))
            y.append(mpf(k) / m[i])
            continue
        if family == "poisson":
            text.append(str(poisson_draw(rnd, mu * unit)))
        elif family == "gamma":
            text.append(str(round(mu * unit * rnd.gammavariate(8, 1 / 8) + 0.001, 3)))
        else:
            text.append(str(max(0.05, round(mu + rnd.gauss(0, 0.3), 3))))
        y.append(mpf(text[-1]))

    def design(at_x, level, at_z):
        row = [mpf(1), at_x]
        if "g" in predictor:
            row += [mpf(level == "b"), mpf(level == "c")]
        if "*" in predictor:
            row += [at_x * (level == "b"), at_x * (level == "c")]
        return row + ([at_z] if "z" in predictor else [])

    X = [design(mpf(x[i]), g[i], mpf(z[i])) for i in range(n)]
    try:
        fit = fitted(family, link, X, y, m, R, w, o, E)
    except (RuntimeError, ValueError, ZeroDivisionError):
        return None
    p, C = len(X[0]), fit["covariance"]
    weights = [R[i] * m[i] for i in range(n)]
    z_mean = sum(weights[i] * mpf(z[i]) for i in range(n)) / sum(weights)
    o_mean = sum(weights[i] * o[i] for i in range(n)) / sum(weights)
    c = NORMAL_POINT if family in ("binomial", "poisson") else t_point(fit["df"])

    def held(at_x):
        row = design(at_x, "a", z_mean)
        return (sum(row[j] * fit["beta"][j] for j in range(p)) + o_mean,
                sqrt(sum(row[j] * row[k] * C[j, k] for j in range(p) for k in range(p))))

    curve = []
    for at_x in (mpf("0.25"), mpf("1.75"), mpf("3.25")):
        e, error = held(at_x)
        ends = [e - c * error, e + c * error]
        # The band is cut at the ends of the possible means; past the reach of the link the end is where η has gone.
        bare = link in ("square_root", "reciprocal") or link.startswith("power")
        if not possible(family, link, e, mean(e)) or (bare and ends[0] <= 0):
            bounds = None
        else:
            least, greatest = (mpf("-inf") if family == "normal" else mpf(0)), (mpf(1) if family == "binomial" else mpf("inf"))
            bounds = sorted(min(greatest, max(least, mean(end))) for end in ends)
        curve.append({"x": said(at_x), "eta": said(e), "mu": said(mean(e)) if possible(family, link, e, mean(e)) else None, "bounds": None if bounds is None else [said(b) for b in bounds]})
    points = None
    if grouped or family != "binomial":
        points = []
        for i in sorted(range(n), key=lambda i: (float(x[i]), i)):
            observed = y[i] if E is None else (1 - (1 - y[i]) ** (1 / E[i]) if family == "binomial" else y[i] / E[i])
            points.append([said(mpf(x[i])), said(observed), said(held(mpf(x[i]))[0] + fit["residual"][i]), said(fit["weight"][i])])
    exposure = E if E is not None else [mpf(1)] * n
    rows = ["x,g,z,o,e,r,w,y,m"] + [
        ",".join([x[i], g[i], z[i], nstr(o[i], 5), nstr(exposure[i], 6), str(int(R[i])), nstr(w[i], 5), text[i], str(int(m[i]))]) for i in range(n)]
    name = f"{family} {link} {variant}"
    model = ["model k", "data d", f"response {'y out of m' if family == 'binomial' else 'y'}", f"family {family}", f"link {link}",
             f"predictor {predictor}", "interval wald"]
    model += ["exposure e"] if with_exposure else []
    model += ["repeat r"] if variant == 2 else []
    model += ["precision w"] if with_precision else []
    model += ["offset o"] if with_offset else []
    kind = "count" if family in ("binomial", "poisson") else "number"
    columns = ["column x number", "column g category", "column z number", "column o number", "column e number", "column r count",
               "column w number", f"column y {kind}", "column m count"]
    cells = ["\n  ".join(["data d", 'from "made.csv"', *columns]), "\n  ".join(model),
             "\n  ".join(["scales", "model k", "across x", "from 0.25 to 3.25", f"beside {link}"])]
    return {"name": name, "csv": "\n".join(rows) + "\n", "cells": cells, "coefficients": [said(b) for b in fit["beta"]],
            "standard_errors": [said(sqrt(C[j, j])) for j in range(p)], "covariance_10": said(C[1, 0]), "deviance": said(fit["deviance"]),
            "log_likelihood": said(fit["log_likelihood"]), "pearson": said(fit["pearson"]), "df": int(fit["df"]), "point": said(c),
            "curve": curve, "points": points}


def main(path, seed=1):
    rnd, cases = random.Random(seed), []
    for family, links in LEGAL.items():
        for link in links:
            for variant in range(4):
                made = next((c for c in (case(rnd, family, link, variant) for _ in range(6)) if c is not None), None)
                if made is None:
                    print("left out:", family, link, variant)
                else:
                    cases.append(made)
    with open(path, "w") as out:
        json.dump({"about": __doc__.split("\n\n")[0], "seed": seed, "cases": cases}, out, indent=1)
        out.write("\n")
    print(len(cases), "cases")


if __name__ == "__main__":
    main(sys.argv[1], *map(int, sys.argv[2:]))
