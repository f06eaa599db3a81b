#!/usr/bin/env python3
"""Made-up data for every family with every link that is legal for it.

Needs only the standard library. The seed is fixed, so the same file comes out.

    python3 make_link_grid.py link-grid.json
    python3 oracle.py fit link-grid.json      # 80 digits, printed with 25

Each set has 26 rows: two numbers, a factor of three levels, an offset and a
weight. The models take a factor, a number in interaction with it, and a second
number; some have the offset, some the weight. Means are drawn well inside the
range, so that the maximum is.
"""
import json
import math
import random
import sys

N = 26
NORMAL = ["identity", "log", "inverse", "sqrt", "power:0.3", "power:-0.5",
          "logit", "probit", "cauchit", "cloglog", "loglog"]
LINKS = {
    "gaussian": NORMAL,
    "binomial": NORMAL,
    "poisson": ["identity", "log", "inverse", "sqrt", "power:0.3", "power:-0.5"],
    "gamma": ["identity", "log", "inverse", "sqrt", "power:0.3", "power:-0.5"],
}
SHARES = {"logit", "probit", "cauchit", "cloglog", "loglog"}
NORM = __import__("statistics").NormalDist()


def forward(name, mu):
    kind, _, a = name.partition(":")
    return {
        "identity": lambda: mu, "log": lambda: math.log(mu), "inverse": lambda: 1 / mu,
        "sqrt": lambda: math.sqrt(mu), "power": lambda: mu ** float(a or 1),
        "logit": lambda: math.log(mu / (1 - mu)), "probit": lambda: NORM.inv_cdf(mu),
        "cauchit": lambda: math.tan(math.pi * (mu - 0.5)),
        "cloglog": lambda: math.log(-math.log(1 - mu)), "loglog": lambda: -math.log(-math.log(mu)),
    }[kind]()


def backward(name, eta):
    kind, _, a = name.partition(":")
    return {
        "identity": lambda: eta, "log": lambda: math.exp(eta), "inverse": lambda: 1 / eta,
        "sqrt": lambda: eta * eta, "power": lambda: eta ** (1 / float(a or 1)),
        "logit": lambda: 1 / (1 + math.exp(-eta)), "probit": lambda: NORM.cdf(eta),
        "cauchit": lambda: math.atan(eta) / math.pi + 0.5,
        "cloglog": lambda: 1 - math.exp(-math.exp(eta)), "loglog": lambda: math.exp(-math.exp(-eta)),
    }[kind]()


def draw(rng, family, mu, m):
    if family == "gaussian":
        return f"{mu + rng.gauss(0, 0.04 * abs(mu) + 0.01):.4f}"
    if family == "gamma":
        return f"{mu * rng.gammavariate(8, 1 / 8):.4f}"
    if family == "binomial":
        return str(sum(rng.random() < mu for _ in range(m)))
    limit, k, p = math.exp(-mu), 0, rng.random()
    while p > limit:
        k, p = k + 1, p * rng.random()
    return str(k)


def make():
    sets = []
    seed = 20240
    for family, links in LINKS.items():
        for link in links:
            seed += 1
            rng = random.Random(seed)
            shares = family == "binomial" or link in SHARES
            low, high = (0.25, 0.7) if shares else (3.0, 9.0)
            # Ends of the linear predictor; a third of the way is left to each number.
            e0, e1 = forward(link, low), forward(link, high)
            data = {k: [] for k in ("f", "x", "z", "o", "w", "m", "y")}
            offset = seed % 3 == 0
            for i in range(N):
                f = "abc"[i % 3]
                x = round(rng.uniform(-1, 1) + (2 if f == "b" else 1), 3)
                z = round(rng.uniform(10, 14), 2)
                o = round(0.1 * (e1 - e0) * rng.uniform(-1, 1), 4)
                share = 0.15 + 0.2 * "abc".index(f) + 0.12 * x * (1 if f == "a" else 0.6) + 0.06 * (z - 12)
                share = min(0.95, max(0.05, share))
                m = rng.randint(8, 30)
                eta = e0 + (e1 - e0) * share
                mu = backward(link, eta)
                for k, v in zip("fxzowm", (f, str(x), str(z), str(o), str(rng.randint(1, 5) / 2), str(m))):
                    data[k].append(v)
                data["y"].append(draw(rng, family, mu, m))
            spec = {"name": link.partition(":")[0]}
            if ":" in link:
                spec["lambda"] = link.partition(":")[2]
            term = lambda level: ["is", "f", level]
            columns = [
                ("(intercept)", ["num", "1"]), ("f=b", term("b")), ("f=c", term("c")), ("x", ["var", "x"]),
                ("z", ["var", "z"]), ("f=b*x", ["mul", term("b"), ["var", "x"]]), ("f=c*x", ["mul", term("c"), ["var", "x"]]),
            ]
            model = {"id": "plain", "family": {"name": family}, "link": spec, "response": "y",
                     "columns": [{"name": n, "expr": e} for n, e in columns], "rows": False, "bounds": False}
            if family == "binomial":
                model["trials"] = "m"
            weighted = dict(model, id="weighted", weights="w")
            weighted["columns"] = model["columns"][:5]
            weighted["offset"] = ["var", "o"]
            sets.append({"id": f"{family}-{link.replace(':', '-')}", "title": "made up", "n": N, "data": data, "models": [model, weighted]})
    return {"about": "Made by make_link_grid.py (fixed seed); reference values by oracle.py at 80 digits.", "datasets": sets}


if __name__ == "__main__":
    with open(sys.argv[1], "w") as out:
        json.dump(make(), out, separators=(",", ":"))
