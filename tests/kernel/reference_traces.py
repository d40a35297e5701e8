"""Traces of sampled loops by other means: scipy's matrix exponential for linear plants, and an adaptive Runge-Kutta method of
order eight (Dormand and Prince) at a tolerance of 1e-12 for smooth nonlinear ones. One JSON in, one JSON out."""
import json
import sys

import numpy as np
from scipy.integrate import solve_ivp
from scipy.linalg import expm


def linear_move(a, b, duration, x, u):
    n = len(x)
    block = np.zeros((n + 1, n + 1))
    block[:n, :n] = a
    block[:n, n] = b * u
    return (expm(block * duration) @ np.append(x, 1.0))[:n]


def nonlinear_move(case, duration, x, u):
    p = case["plant"]

    def rates(_, y):
        speed, angle, lagged = y
        return [
            (p["drive"] * lagged - p["viscous"] * speed - p["coulomb"] * np.tanh(speed / p["smooth"]) - p["weight"] * np.sin(angle)) / p["inertia"],
            speed,
            (u - lagged) / p["lag"],
        ]

    result = solve_ivp(rates, (0, duration), x, method="DOP853", rtol=1e-12, atol=1e-14)
    return result.y[:, -1]


def trace(case):
    if case["kind"] == "linear":
        a, b, c = (np.array(case[name], dtype=float) for name in ("a", "b", "c"))
        move = lambda duration, x, u: linear_move(a, b, duration, x, u)
        output = lambda x: float(c @ x)
        x = np.zeros(len(b))
    else:
        move = lambda duration, x, u: nonlinear_move(case, duration, x, u)
        output = lambda x: float(x[1])
        x = np.zeros(3)
    period, delay = case["period"], case["delay"]
    whole, part = divmod(round(delay / period, 12), 1.0)
    whole, part = int(whole), part * period
    sent = [0.0] * (whole + 1)
    integral, held, outputs = 0.0, 0.0, []
    for _ in range(case["samples"]):
        y = output(x)
        outputs.append(y)
        error = case["target"] - y
        integral += case["ki"] * period * error
        sent.append(case["kp"] * error + integral)
        arriving = sent[-1 - whole]
        if part > 0:
            x = move(part, x, held)
            held = arriving
            x = move(period - part, x, held)
        else:
            held = arriving
            x = move(period, x, held)
    return outputs


print(json.dumps([trace(case) for case in json.load(sys.stdin)]))
