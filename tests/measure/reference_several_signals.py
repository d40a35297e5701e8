"""Margins of sampled loops that are opened at all actuators at once, by methods of their own: the loop is discretised by
SciPy's matrix exponential, the factors and phases on all signals alike are sought as changes of sign of the spectral radius
less one, and peaks of singular values and eigenvalues of size one on a dense grid of frequencies, polished within its steps.
Reads a list of loops {a, b, k, period, delay, widths} from standard input: x' = a x + b u, u = -k x of the sampling instant,
from `delay` s after it on; `widths` are what counts as one of each u. Writes a list of results to standard output."""
import json
import sys

import numpy as np
from scipy import linalg, optimize


def discretised(a, b, seconds):
    n, m = b.shape
    moved = linalg.expm(np.block([[a, b], [np.zeros((m, n + m))]]) * seconds)
    return moved[:n, :n], moved[:n, n:]


def opened(loop):
    """State equations from u to what returns in its place, with the sign such that stability is about 1 + L."""
    a, b, k = (np.array(loop[name], dtype=float) for name in 'abk')
    n, m = b.shape
    first, old = discretised(a, b, loop['delay'])
    second, new = discretised(a, b, loop['period'] - loop['delay'])
    # The state, and the value that still stands from the instant before.
    phi = np.block([[second @ first, second @ old], [np.zeros((m, n + m))]])
    gamma = np.vstack([new, np.eye(m)])
    out = np.hstack([k, np.zeros((m, m))])
    return phi, gamma, out


def growth(system, factors):
    """Spectral radius less one for each factor on all signals."""
    phi, gamma, out = system
    closed = phi - np.multiply.outer(np.asarray(factors), gamma @ out)
    return np.max(np.abs(np.linalg.eigvals(closed)), axis=-1) - 1


def first_change(of, points):
    values = of(points)
    changes = np.nonzero(values[:-1] * values[1:] < 0)[0]
    if len(changes) == 0:
        return None
    at = changes[0]
    return optimize.brentq(lambda point: of(np.array(point)), points[at], points[at + 1], xtol=1e-14, rtol=1e-13)


def gain_margin(system):
    grid = np.linspace(0, np.log(1e4), 2000)
    up = first_change(lambda s: growth(system, np.exp(s)), grid)
    down = first_change(lambda s: growth(system, np.exp(-s)), grid)
    found = [s for s in (up, down) if s is not None]
    return float(np.exp(min(found))) if found else None


def phase_margin(system):
    return first_change(lambda turn: growth(system, np.exp(1j * turn)), np.linspace(0, np.pi, 1000))


# No point on the real axis, where an integrator has its pole.
GRID = np.concatenate([np.geomspace(1e-5, 0.05, 100), np.linspace(0.05, np.pi, 1000)])


def delay_margin(system, period):
    """The smallest angle ahead of -1 over the frequency, of eigenvalues of size one; they are joined from one to the next."""
    phi, gamma, out = system

    def values(angle):
        return linalg.eigvals(out @ linalg.solve(np.exp(1j * angle) * np.eye(len(phi)) - phi, gamma))

    angles = np.concatenate([GRID, [np.pi]])
    found = [np.inf]
    before = values(angles[0])
    for low, high in zip(angles, angles[1:]):
        after = values(high)
        _, matched = optimize.linear_sum_assignment(np.abs(before[:, None] - after[None, :]))
        for start, end in zip(before, after[matched]):
            if (abs(start) - 1) * (abs(end) - 1) >= 0:
                continue

            def nearest(angle):
                expected = start + (end - start) * (angle - low) / (high - low)
                here = values(angle)
                return here[np.argmin(np.abs(here - expected))]

            at = optimize.brentq(lambda angle: abs(nearest(angle)) - 1, low, high, xtol=1e-15, rtol=1e-14)
            found.append(np.angle(-nearest(at)) % (2 * np.pi) / at * period)
        before = after
    # At half the sampling frequency a sine is its own image, and the cosine of its turn is left.
    real = before[(np.abs(before.imag) < 1e-9 * np.abs(before)) & (np.abs(before) >= 1)].real
    best = min([*found, *(np.arccos(-1 / real) / np.pi * period)])
    return float(best) if np.isfinite(best) else None


def peak(system, widths, response):
    phi, gamma, out = system
    unit, weights = np.eye(len(phi)), np.divide.outer(1 / np.array(widths), 1 / np.array(widths))

    def gain(angles):
        turned = np.multiply.outer(np.exp(1j * np.asarray(angles)), unit) - phi
        loop = out @ np.linalg.solve(turned, np.broadcast_to(gamma, turned.shape[:-2] + gamma.shape))
        return np.linalg.svd(response(loop) * weights, compute_uv=False)[..., 0]

    values = gain(GRID)
    best = values.max()
    for at in np.argsort(values)[-3:]:
        bounds = GRID[max(at - 1, 0)], GRID[min(at + 1, len(GRID) - 1)]
        found = optimize.minimize_scalar(lambda x: -gain(x), bounds=bounds, method='bounded', options={'xatol': 1e-12})
        best = max(best, -found.fun)
    return float(best)


def results(loop):
    system = opened(loop)
    if growth(system, 1.0) >= 0:
        return {'stable': False}
    one = np.eye(len(loop['k']))
    sensitivity = lambda l: np.linalg.inv(one + l)
    widths = loop['widths']
    return {
        'stable': True,
        'gain': gain_margin(system),
        'phase': phase_margin(system),
        'delay': delay_margin(system, loop['period']),
        'sensitivity': peak(system, widths, sensitivity),
        'complementary': peak(system, widths, lambda l: np.linalg.solve(one + l, l)),
        'balanced': peak(system, widths, lambda l: sensitivity(l) - one / 2),
    }


json.dump([results(loop) for loop in json.load(sys.stdin)], sys.stdout)
