#!/usr/bin/python3
"""Reference estimates of E, CE, AE and ACE on this folder's families, by scipy.

Run in this folder: /usr/bin/python3 make.py. The likelihood is one multivariate
normal density of all people, with no use made of the structure of families:
y ~ N(X b, A K + C R + E I), b and the total variance at their best for given
shares. K is 1 for identical twins, 1/2 with both parents in common, 1/4 with
one; R is 1 for all children of a family.
"""
import csv
import numpy as np
from scipy.optimize import brentq, minimize, minimize_scalar
from scipy.stats import chi2

people = list(csv.DictReader(open("people.csv")))
values = {r["person"]: r for r in csv.DictReader(open("dynamics.csv"))}
measures = [name for name in next(iter(values.values())) if name != "person"]
number = lambda text: float(text) if text else np.nan


def kinship(a, b):
    if a is b or a["twin_set"] and a["twin_set"] == b["twin_set"] and a["zygosity"] == "MZ":
        return 1.
    return .25 * sum(a[p] == b[p] for p in ("mother", "father"))


class Sample:
    def __init__(self, measure):
        rows = [p for p in people if not np.isnan(number(values[p["person"]][measure])) and p["motion"]]
        self.y = np.array([number(values[p["person"]][measure]) for p in rows])
        self.X = np.array([[1., number(p["age"]), p["sex"] == "M", number(p["motion"])] for p in rows])
        n = self.n = len(rows)
        self.K, self.R = np.eye(n), np.eye(n)
        for i in range(n):
            for j in range(i):
                if rows[i]["family"] == rows[j]["family"]:
                    self.K[i, j] = self.K[j, i] = kinship(rows[i], rows[j])
                    self.R[i, j] = self.R[j, i] = 1

    def solve(self, a, c):
        V = a * self.K + c * self.R + (1 - a - c) * np.eye(self.n)
        L = np.linalg.cholesky(V)
        y, X = np.linalg.solve(L, self.y), np.linalg.solve(L, self.X)
        b, *_ = np.linalg.lstsq(X, y, rcond=None)
        s2 = ((y - X @ b) ** 2).sum() / self.n
        return L, s2, b, np.linalg.inv(X.T @ X) * s2

    def deviance(self, a, c):
        try:
            L, s2, _, _ = self.solve(a, c)
        except np.linalg.LinAlgError:
            return np.inf
        return self.n * (np.log(2 * np.pi * s2) + 1) + 2 * np.log(np.diag(L)).sum()

    def best(self, free):
        """Least deviance over the free shares of (a, c), each 0 or more."""
        place = lambda x: tuple(dict(zip(free, x)).get(k, 0.) for k in range(2))
        if not free:
            return (0., 0.), self.deviance(0, 0)
        found = None
        for start in (.1, .4) if len(free) == 1 else (np.array([.3, .2]), np.array([.1, .1]), np.array([.1, .5])):
            o = minimize(lambda x: self.deviance(*place(x)), np.atleast_1d(start) + np.zeros(len(free)), method="Nelder-Mead",
                         options=dict(xatol=1e-10, fatol=1e-12, maxiter=4000, maxfev=4000))
            if found is None or o.fun < found.fun: found = o
        if (found.x < 0).any():          # then the optimum lies on an edge: the best smaller model
            return min((self.best([f for f in free if f != drop]) for drop in free), key=lambda r: r[1])
        return place(found.x), found.fun

    def signed(self):
        o = minimize(lambda x: self.deviance(*x), [.3, .2], method="Nelder-Mead",
                     options=dict(xatol=1e-10, fatol=1e-12, maxiter=4000, maxfev=4000))
        return tuple(o.x), o.fun

    def limits(self, a, c, least):
        def inner(f, high):
            grid = np.linspace(0, high, 9); at = int(np.argmin([f(t) for t in grid]))
            o = minimize_scalar(f, bounds=(grid[max(at - 1, 0)], grid[min(at + 1, 8)]), method="bounded", options=dict(xatol=1e-9))
            return min(o.fun, f(0.), f(high))
        crit = chi2.ppf(.95, 1)
        profiles = dict(a2=lambda t: inner(lambda x: self.deviance(t, x), 1 - t - 1e-9),
                        c2=lambda t: inner(lambda x: self.deviance(x, t), 1 - t - 1e-9),
                        e2=lambda t: inner(lambda x: self.deviance(x, 1 - t - x), 1 - t))
        out = {}
        for name, share in dict(a2=a, c2=c, e2=1 - a - c).items():
            g = lambda t: profiles[name](t) - least - crit
            first, last = (1e-6 if name == "e2" else 0.), 1 - 1e-6
            out[name + "_low"] = 0. if share <= first or g(first) < 0 else brentq(g, first, share, xtol=1e-12)
            out[name + "_high"] = 1. if g(last) < 0 else brentq(g, share, last, xtol=1e-12)
        return out


limit_names = [q + end for q in ("a2", "c2", "e2") for end in ("_low", "_high")]
terms = ["intercept", "age", "sex", "motion"]
with open("reference.csv", "w") as f:
    out = csv.DictWriter(f, ["measure", "model", "people", "A", "C", "E", "log_likelihood"] + terms + [t + "_se" for t in terms] + limit_names,
                         lineterminator="\n")
    out.writeheader()
    for measure in measures:
        s = Sample(measure)
        for model in ("ACE_signed", "E", "AE", "CE", "ACE"):
            if model == "ACE_signed":
                (a, c), dev = s.signed()
            else:
                (a, c), dev = s.best([k for k in range(2) if "AC"[k] in model])
            _, s2, b, cov = s.solve(a, c)
            row = dict(measure=measure, model=model, people=s.n, A=a * s2, C=c * s2, E=(1 - a - c) * s2, log_likelihood=-dev / 2)
            row.update(zip(terms, b)); row.update(zip([t + "_se" for t in terms], np.sqrt(np.diag(cov))))
            if model == "ACE":
                row.update(s.limits(a, c, dev))
            out.writerow({k: v if isinstance(v, (str, int)) else repr(float(v)) for k, v in row.items()})
        print(measure, flush=True)
