#!/usr/bin/env python3
"""Nested ridge predictions of ridge_small by scikit-learn, split by split.

Run with numpy, scipy and scikit-learn (made with 1.24.2, 1.10.1, 1.2.1):

    python3 reference.py

writes arrangement.csv (once; it is read when it is there), predictions.csv,
penalties.csv, weights.csv and scores.csv beside itself.

In every training set: LinearRegression of measures and trait on age, sex and
motion; StandardScaler (divisor n) on the residuals of the measures; Ridge.
Inner error: mean over inner folds of the fold's mean squared error. Of the
penalties within 1e-12, relative, of the least error the largest is taken.
"rearranged" is the same on the residuals of the traits on the confounds over
all people, place i holding person arrangement[i].
"""
import csv
import os

import numpy as np
from scipy import stats
from sklearn.linear_model import LinearRegression, Ridge
from sklearn.preprocessing import StandardScaler

here = os.path.dirname(os.path.abspath(__file__))
PENALTIES = np.logspace(-1, 5, 20)


def rows(name):
    with open(os.path.join(here, name)) as f:
        return list(csv.DictReader(f))


def write(name, header, lines):
    with open(os.path.join(here, name), "w", newline="") as f:
        w = csv.writer(f, lineterminator="\n")
        w.writerow(header)
        w.writerows([[repr(float(v)) if isinstance(v, float) else v for v in line] for line in lines])


people, dynamics, questionnaires, folds = (rows(f) for f in ("people.csv", "dynamics.csv", "questionnaires.csv", "folds.csv"))
ids = [r["person"] for r in people]
assert ids == [r["person"] for r in dynamics] == [r["person"] for r in questionnaires] == [r["person"] for r in folds]
measures = [c for c in dynamics[0] if c != "person"]
traits = [c for c in questionnaires[0] if c != "person"]
X = np.array([[float(r[c]) for c in measures] for r in dynamics])
Y = np.array([[float(r[c]) for c in traits] for r in questionnaires])
C = np.array([[float(r["age"]), float(r["sex"] == "M"), float(r["motion"])] for r in people])
outer = np.array([int(r["outer"]) for r in folds])
inner = [np.array([int(r[f"inner_in_outer{o}"] or 0) for r in folds]) for o in range(1, outer.max() + 1)]
n = len(ids)


def split(y, train, held):
    """Standardised residuals of both sides, residual of y, what the confounds say of the held-out, deviations."""
    of_x, of_y = LinearRegression().fit(C[train], X[train]), LinearRegression().fit(C[train], y[train])
    scaler = StandardScaler().fit(X[train] - of_x.predict(C[train]))
    side = lambda who: scaler.transform(X[who] - of_x.predict(C[who]))
    return side(train), side(held), y[train] - of_y.predict(C[train]), of_y.predict(C[held]), scaler.scale_


def nested(y):
    baseline, target, predicted = np.empty(n), np.empty(n), np.empty(n)
    chosen, weights = [], []
    for o in range(1, outer.max() + 1):
        mse = np.zeros(len(PENALTIES))
        count = inner[o - 1].max()
        for i in range(1, count + 1):
            held = (outer != o) & (inner[o - 1] == i)
            train = (outer != o) & (inner[o - 1] != i)
            a, b, ya, base, _ = split(y, train, held)
            for l, penalty in enumerate(PENALTIES):
                mse[l] += np.mean((y[held] - base - Ridge(alpha=penalty).fit(a, ya).predict(b)) ** 2) / count
        best = np.flatnonzero(mse <= mse.min() * (1 + 1e-12)).max()
        held, train = outer == o, outer != o
        a, b, ya, base, scale = split(y, train, held)
        model = Ridge(alpha=PENALTIES[best]).fit(a, ya)
        baseline[held], target[held], predicted[held] = base, y[held] - base, model.predict(b)
        chosen.append((o, PENALTIES[best], mse[best]))
        fitted = model.predict(a)
        weights.append((model.coef_, (a * scale).T @ (fitted - fitted.mean()) / len(a), scale))
    return baseline, target, predicted, chosen, weights


def scores(t, p):
    """name -> value; means over folds but for r and rho."""
    by_fold = lambda f: float(np.mean([f(t[outer == o], p[outer == o]) for o in range(1, outer.max() + 1)]))
    return {
        "r": stats.pearsonr(t, p)[0],
        "rho": stats.spearmanr(t, p)[0],
        "r_by_fold": by_fold(lambda a, b: stats.pearsonr(a, b)[0]),
        "r2": by_fold(lambda a, b: 1 - ((a - b) ** 2).sum() / (a ** 2).sum()),
        "mae": by_fold(lambda a, b: np.abs(a - b).mean()),
        "rmse": by_fold(lambda a, b: np.sqrt(((a - b) ** 2).mean())),
        "calibration_slope": np.polyfit(p, t, 1)[0],
        "calibration_intercept": np.polyfit(p, t, 1)[1],
    }


if not os.path.exists(os.path.join(here, "arrangement.csv")):
    write("arrangement.csv", ["from"], [[int(i)] for i in np.random.default_rng(5).permutation(n)])
arrangement = np.array([int(r["from"]) for r in rows("arrangement.csv")])
residuals = Y - LinearRegression().fit(C, Y).predict(C)
predictions, penalties, coefficients, values = [], [], [], []
for kind, data in (("observed", Y), ("rearranged", residuals[arrangement])):
    for j, trait in enumerate(traits):
        baseline, target, predicted, chosen, weights = nested(data[:, j])
        predictions += [[kind, trait, ids[i], float(baseline[i]), float(target[i]), float(predicted[i])] for i in range(n)]
        penalties += [[kind, trait, o, float(penalty), float(mse)] for o, penalty, mse in chosen]
        coefficients += [[kind, trait, o + 1, m, float(w[k]), float(pattern[k]), float(sd[k])] for o, (w, pattern, sd) in enumerate(weights) for k, m in enumerate(measures)]
        values += [[kind, trait, name, float(v)] for name, v in scores(target, predicted).items()]
write("predictions.csv", ["kind", "trait", "person", "baseline", "target", "predicted"], predictions)
write("penalties.csv", ["kind", "trait", "outer", "penalty", "inner_mse"], penalties)
write("weights.csv", ["kind", "trait", "outer", "measure", "weight", "pattern", "sd"], coefficients)
write("scores.csv", ["kind", "trait", "metric", "value"], values)
