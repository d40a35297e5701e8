"""Time measures of step responses by other means: scipy's state equations of a transfer function and numpy's eigenvalues give
the response as a sum of exponentials; it is sampled densely, and scipy's brentq finds what lies between the samples. Integrals
are those of the exponentials between the changes of sign of the error. One JSON in, one JSON out; times from the step on."""
import json
import sys

import numpy as np
from scipy.optimize import brentq
from scipy.signal import tf2ss

SAMPLES = 40001


class Error:
    """y - 1 = constant + sum of r exp(p t), for a unit step."""

    def __init__(self, a, b, c):
        poles, vectors = np.linalg.eig(np.array(a, dtype=float))
        inner = np.linalg.solve(vectors, np.array(b, dtype=complex))
        residues = (np.array(c, dtype=complex) @ vectors) * inner / poles
        self.p = np.append(poles, 0.0)
        self.r = np.append(residues, -residues.sum() - 1.0)

    def at(self, t):
        return (self.r * np.exp(np.multiply.outer(t, self.p))).sum(axis=-1).real

    def slope(self, t):
        return (self.r * self.p * np.exp(np.multiply.outer(t, self.p))).sum(axis=-1).real

    def integral(self, left, right):
        return exponential_integral(self.r, self.p, left, right)

    def square_integral(self, left, right):
        products = np.multiply.outer(self.r, self.r).ravel()
        sums = np.add.outer(self.p, self.p).ravel()
        return exponential_integral(products, sums, left, right)


def exponential_integral(weights, rates, left, right):
    still = np.abs(rates) < 1e-12
    safe = np.where(still, 1.0, rates)
    parts = np.where(still, right - left, (np.exp(safe * right) - np.exp(safe * left)) / safe)
    return float((weights * parts).sum().real)


def crossings(f, times):
    """Every change of sign of f between two of the times."""
    values = f(times)
    found = np.flatnonzero(values[:-1] * values[1:] < 0)
    return [brentq(f, times[i], times[i + 1], xtol=1e-14, rtol=1e-14) for i in found]


def measures(case):
    if "numerator" in case:
        a, b, c, _ = tf2ss(case["numerator"], case["denominator"])
        b, c = b[:, 0], c[0]
    else:
        a, c = case["a"], case["c"]
        b = np.array(case["b"]) * case["gain"]
    error = Error(a, b, c)
    lasts = case["lasts"]
    times = np.linspace(0.0, lasts, SAMPLES)

    def first(level):
        return crossings(lambda t: error.at(t) + 1.0 - level, times)[0]

    def settled(band):
        entries = crossings(lambda t: error.at(t) - band, times) + crossings(lambda t: error.at(t) + band, times)
        return max(entries)

    turns = crossings(error.slope, times[1:])
    peak = max(turns, key=error.at) if turns else lasts
    changes = [0.0, *crossings(error.at, times[1:]), lasts]
    spans = list(zip(changes[:-1], changes[1:]))
    return {
        "overshoot": max(0.0, float(error.at(peak))),
        "rise": first(0.9) - first(0.1),
        "settled2": settled(0.02),
        "settled5": settled(0.05),
        "peak": peak,
        "absolute": sum(abs(error.integral(left, right)) for left, right in spans),
        "squared": error.square_integral(0.0, lasts),
    }


print(json.dumps([measures(case) for case in json.load(sys.stdin)]))
