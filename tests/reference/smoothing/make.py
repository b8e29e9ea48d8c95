"""Makes reference.json: penalised quintic least squares by dense linear algebra. See SOURCE.md.

Run: python3 make.py > reference.json
"""

import json

import mpmath
import numpy as np
from scipy.interpolate import BSpline
from scipy.optimize import brentq, minimize_scalar

DEGREE = 5
SEED = 31


def open_knots(x):
    return np.concatenate([np.repeat(x[0], DEGREE), x, np.repeat(x[-1], DEGREE)])


def basis(knots, at, order):
    """Derivatives of all basis functions at points, a row each."""
    if order == 0:
        return BSpline.design_matrix(np.asarray(at), knots, DEGREE).toarray()
    eye = np.eye(len(knots) - DEGREE - 1)
    return BSpline(knots, eye, DEGREE).derivative(order)(at)


def penalty_root(x, knots):
    """R with RᵀR = ∫ B‴ B‴ᵀ: third derivatives at three Gauss points of each interval, exact to degree 5."""
    nodes, weights = np.polynomial.legendre.leggauss(3)
    half = np.diff(x) / 2
    at = ((x[1:] + x[:-1]) / 2)[:, None] + half[:, None] * nodes
    scale = np.sqrt(half[:, None] * weights)
    return basis(knots, at.ravel(), 3) * scale.ravel()[:, None]


class Dense:
    """Open splines, or periodic ones whose basis functions are folded over the period."""

    def __init__(self, x, weights, period=None):
        self.x, self.weights, self.period = x, weights, period
        if period is None:
            self.knots, self.ends = open_knots(x), x
        else:
            n = len(x)
            index = np.arange(-DEGREE, n + DEGREE + 1)
            self.knots = x[index % n] + (index // n) * period
            self.ends = np.append(x, x[0] + period)
        self.design = self.rows(x, 0)
        self.root = self.fold(penalty_root(self.ends, self.knots))
        gram = self.design.T @ (weights[:, None] * self.design)
        self.balanced = np.trace(gram) / np.trace(self.root.T @ self.root)

    def fold(self, rows):
        if self.period is None:
            return rows
        n = len(self.x)
        return sum(np.pad(rows[:, i : i + n], ((0, 0), (0, n - rows[:, i : i + n].shape[1]))) for i in (0, n))

    def rows(self, at, order):
        return self.fold(basis(self.knots, at, order))

    def solved(self, lam, y):
        """Coefficients and the root of the inverse of BᵀWB + λΩ, by QR: no normal equations are formed."""
        stacked = np.vstack([np.sqrt(self.weights)[:, None] * self.design, np.sqrt(lam) * self.root])
        right = np.vstack([np.sqrt(self.weights)[:, None] * y, np.zeros((len(self.root), y.shape[1]))])
        q, r = np.linalg.qr(stacked)
        return np.linalg.solve(r, q.T @ right), np.linalg.inv(r)

    def scores(self, lam, y):
        """Mean weighted squares of a coordinate, and n − tr H."""
        coefficients, inverse = self.solved(lam, y)
        residual = y - self.design @ coefficients
        squares = (self.weights[:, None] * residual**2).sum() / y.shape[1]
        hat = self.weights * ((self.design @ inverse) ** 2).sum(axis=1)
        return squares, len(y) - hat.sum()


def listed(array):
    return np.asarray(array).tolist()


def fit(dense, name, ln, y, at):
    lam = float(dense.balanced * np.exp(ln))
    coefficients, inverse = dense.solved(lam, y)
    variance = lambda order: ((dense.rows(at, order) @ inverse) ** 2).sum(axis=1)
    hat = dense.weights * ((dense.design @ inverse) ** 2).sum(axis=1)
    return {
        "name": name,
        "lambda": lam,
        "fitted": listed(dense.design @ coefficients),
        "curve": [listed(dense.rows(at, order) @ coefficients) for order in range(4)],
        "leverages": listed(hat),
        "variances": [listed(variance(order)) for order in range(4)],
    }


def kernel_fitted(x, weights, lam, y):
    """The same minimum without B-splines: parabolas and the kernel ∫ (x−u)²₊ (y−u)²₊ / 4 du (Wahba, Spline
    Models for Observational Data, 1990, sec. 1.3), solved in 60 digits."""
    mpmath.mp.dps = 60
    n, xs = len(x), [mpmath.mpf(float(v)) - mpmath.mpf(float(x[0])) for v in x]

    def kernel(a, b):
        low, gap = min(a, b), abs(a - b)
        # ∫₀^low t² (t + gap)² / 4 dt
        return (low**5 / 5 + gap * low**4 / 2 + gap**2 * low**3 / 3) / 4

    matrix, right = mpmath.zeros(n + 3), mpmath.zeros(n + 3, 1)
    for i in range(n):
        for j in range(n):
            matrix[i, j] = kernel(xs[i], xs[j])
        matrix[i, i] += mpmath.mpf(lam) / mpmath.mpf(float(weights[i]))
        for k in range(3):
            matrix[i, n + k] = matrix[n + k, i] = xs[i] ** k
        right[i] = mpmath.mpf(float(y[i]))
    solution = mpmath.lu_solve(matrix, right)
    own = lambda i: mpmath.mpf(lam) / mpmath.mpf(float(weights[i])) * solution[i]
    return [float(right[i] - own(i)) for i in range(n)]


def data(random, n, period=None):
    gaps = random.uniform(0.3, 0.7, n)
    x = np.cumsum(gaps) - gaps[0]
    if period is not None:
        x *= (period - 0.5) / x[-1]
    weights = random.uniform(0.3, 3.0, n)
    turn = 2 * np.pi / (period or 11.0)
    y = np.column_stack([3 * np.sin(turn * x), np.cos(2 * turn * x) + 0.5 * np.sin(3 * turn * x)])
    return x, weights, y + 0.02 * random.standard_normal(y.shape) / np.sqrt(weights)[:, None]


def opens(random):
    x, weights, y = data(random, 60)
    dense = Dense(x, weights)
    at = np.sort(np.concatenate([x[::3], (x[1:] + x[:-1]) / 2]))
    fits = [fit(dense, f"ln {ln}", ln, y, at) for ln in (-10, -6, -2, 4, 10)]
    for one in fits:
        one["kernel"] = kernel_fitted(x, weights, one["lambda"], y[:, 0])
    return {"x": listed(x), "weights": listed(weights), "y": listed(y), "at": listed(at), "fits": fits}


def closed(random):
    period = 24.0
    x, weights, y = data(random, 48, period)
    dense = Dense(x, weights, period)
    at = np.append((x[1:] + x[:-1]) / 2, x[-1] + 0.25)
    fits = [fit(dense, f"ln {ln}", ln, y, at) for ln in (-8, -4, -1, 2)]
    return {"x": listed(x), "weights": listed(weights), "y": listed(y), "at": listed(at), "period": period, "fits": fits}


def choices(random):
    """ln (λ over the balanced one) by cross-validation, least risk and matching, by dense minimisation."""
    found = []
    for n in (80, 150, 300):
        x, weights, y = data(random, n)
        dense, error = Dense(x, weights), 0.02
        trial = lambda ln: dense.scores(dense.balanced * np.exp(ln), y)
        score = lambda ln: (lambda s, f: s / (f / n) ** 2)(*trial(ln))
        risk = lambda ln: (lambda s, f: s - 2 * error**2 * f)(*trial(ln))
        excess = lambda ln: (lambda s, f: s - error**2 * f)(*trial(ln))
        grid = np.arange(-10, 12, 0.25)

        def least(of):
            start = grid[np.argmin([of(ln) for ln in grid])]
            return float(minimize_scalar(of, bounds=(start - 0.5, start + 0.5), method="bounded", options={"xatol": 1e-6}).x)

        validated, least_risk = least(score), least(risk)
        crossings = excess(least_risk) < 0
        matched = float(brentq(excess, least_risk, 20, xtol=1e-8)) if crossings else least_risk
        squares, freedom = trial(validated)
        found.append(
            {
                "x": listed(x), "weights": listed(weights), "y": listed(y), "error": error,
                "cross_validated_ln": validated, "found_error": float(np.sqrt(squares / freedom)),
                "least_risk_ln": least_risk, "matched_ln": matched,
            }
        )
    return found


random = np.random.default_rng(SEED)
print(json.dumps({"open": opens(random), "closed": closed(random), "choices": choices(random)}))
