"""Measures of lifted loops by methods of their own: direct solves on dense grids, polished, LAPACK's eigenvectors, and for the
delay Newton's method on the determinant from many places at once. Reads a list of loops {a, b, c, d, period} from standard
input, writes a list of results to standard output."""
import json
import sys

import numpy as np
from scipy import optimize


def sensitivity(loop):
    a, b, c, d = (np.atleast_2d(np.array(loop[k], dtype=float)) for k in 'abcd')
    closing = np.linalg.inv(np.eye(len(d)) + d)
    return a - b @ closing @ c, b @ closing, -closing @ c, closing


def response(s, z):
    """One matrix for each z."""
    a, b, c, d = s
    z = np.atleast_1d(z)
    inner = z[:, None, None] * np.eye(len(a)) - a
    return c @ np.linalg.solve(inner, np.broadcast_to(b, (len(z),) + b.shape)) + d


def sines(omega, changes):
    """One column of values for each angle a change."""
    return np.exp(1j * np.outer(np.atleast_1d(omega), np.arange(changes))) / np.sqrt(changes)


def seen(s, omega, changes):
    """What a sine makes: all of it, and the part of its own frequency."""
    v = sines(omega, changes)
    out = np.einsum('wij,wj->wi', response(s, np.exp(1j * np.atleast_1d(omega) * changes)), v)
    return out, np.einsum('wi,wi->w', v.conj(), out)


def grid_for(s, changes):
    """Angles a change from 0 to pi, dense near every place where a pole of the cycle may show."""
    grid = [np.linspace(1e-6, np.pi, 4001), np.geomspace(1e-6, np.pi, 1500)]
    for z in np.linalg.eigvals(s[0]):
        if abs(z) < 1e-3:
            continue
        away = np.geomspace(1e-2, 30, 40) * max(1 - abs(z), 1e-9) / changes
        for m in range(changes):
            at = (np.angle(z) + 2 * np.pi * m) / changes
            at = abs((at + np.pi) % (2 * np.pi) - np.pi)
            grid += [at + away, at - away]
    grid = np.concatenate(grid)
    return np.unique(grid[(grid > 0) & (grid < np.pi)])


def crossings(s, changes, grid):
    def excess(omega):
        same = seen(s, omega, changes)[1]
        return np.log(np.abs((1 - same) / same))
    values = excess(grid)
    return [optimize.brentq(lambda w: excess(w)[0], grid[i], grid[i + 1], xtol=1e-15, rtol=1e-14)
            for i in np.where(values[1:] * values[:-1] < 0)[0]]


def bandwidth(s, changes, grid):
    def size(omega):
        return np.abs(1 - seen(s, omega, changes)[1])
    bar = size(0.0)[0] / np.sqrt(2)
    below = np.where(size(grid) < bar)[0]
    if len(below) == 0:
        return None
    i = below[0]
    return optimize.brentq(lambda w: size(w)[0] - bar, grid[i - 1] if i else 0, grid[i], xtol=1e-15, rtol=1e-14)


def largest(s, changes, grid):
    def size(omega):
        return np.linalg.norm(seen(s, omega, changes)[0], axis=1)
    values = size(grid)
    best = max(values.max(), size(0.0)[0], size(np.pi)[0])
    for i in np.argsort(-values)[:5]:
        low, high = grid[max(i - 1, 0)], grid[min(i + 1, len(grid) - 1)]
        found = optimize.minimize_scalar(lambda w: -size(w)[0], bounds=(low, high), method='bounded', options={'xatol': 1e-13})
        best = max(best, -found.fun)
    return best


def damping(s, changes):
    least = 1.0
    values, vectors = np.linalg.eig(s[0])
    for z, x in zip(values, vectors.T):
        if abs(z) < 1e-9:
            continue
        turns = (np.angle(z) + 2 * np.pi * np.arange(changes)) / changes
        turns = (turns + np.pi) % (2 * np.pi) - np.pi
        exponents = np.log(abs(z)) / changes + 1j * turns
        strengths = np.abs(np.exp(-np.outer(exponents, np.arange(changes))) @ (s[2] @ x))
        own = exponents[np.argmax(strengths)]
        least = min(least, -own.real / abs(own))
    return least


def delay(s, changes, longest):
    """Delays, counted in changes, up to the longest at which the determinant of S + (I - S) X is zero."""
    orders = np.arange(changes) - changes // 2
    shifts = np.arange(changes)[:, None] - np.arange(changes)[None, :]

    def determinant(angle, tau):
        omega = angle[:, None] / changes + 2 * np.pi * orders / changes
        turn = np.exp(1j * omega[:, :, None, None] * (shifts - tau[:, None, None, None])).mean(axis=1)
        m = response(s, np.exp(1j * angle))
        return np.linalg.det(m + (np.eye(changes) - m) @ turn)

    near = np.abs(np.angle(np.linalg.eigvals(s[0])))
    angle, tau = (x.ravel() for x in np.meshgrid(
        np.concatenate([near, np.geomspace(1e-3, np.pi, 12), np.linspace(0.05, np.pi, 12)]), np.linspace(0, longest, 25)))
    for _ in range(14):
        h = 1e-7
        f = determinant(angle, tau)
        by_angle = (determinant(angle + h, tau) - determinant(angle - h, tau)) / (2 * h)
        by_tau = (determinant(angle, tau + h) - determinant(angle, tau - h)) / (2 * h)
        det = by_angle.real * by_tau.imag - by_angle.imag * by_tau.real
        with np.errstate(all='ignore'):
            step_angle = (f.real * by_tau.imag - f.imag * by_tau.real) / det
            step_tau = (by_angle.real * f.imag - by_angle.imag * f.real) / det
        ok = np.isfinite(step_angle) & np.isfinite(step_tau)
        angle, tau = angle[ok] - np.clip(step_angle[ok], -0.3, 0.3), tau[ok] - np.clip(step_tau[ok], -0.5, 0.5)
    f = np.abs(determinant(angle, tau))
    def real_determinant(at, late):
        # Half the sampling frequency is turned both ways, which leaves the real part.
        omega = at / changes + 2 * np.pi * orders / changes
        turn = np.exp(1j * omega[:, None, None] * (shifts - late)).mean(axis=0).real
        m = response(s, np.exp(1j * at))[0].real
        return np.linalg.det(m + (np.eye(changes) - m) @ turn)

    edges = []
    lates = np.linspace(0, longest, 24 * changes + 1)
    for at in (0.0, np.pi):
        values = np.array([real_determinant(at, late) for late in lates])
        edges += [optimize.brentq(lambda late: real_determinant(at, late), lates[i], lates[i + 1], xtol=1e-14)
                  for i in np.where(values[1:] * values[:-1] < 0)[0]]
    found = tau[(f < 1e-10) & (angle > 1e-4) & (angle < np.pi - 1e-4) & (tau > 1e-6) & (tau < longest)]
    found = np.concatenate([found, edges])
    return float(found.min()) if len(found) else None


def measures(loop):
    s = sensitivity(loop)
    changes = len(s[3])
    grid = grid_for(s, changes)
    return {
        'crossovers': crossings(s, changes, grid),
        'bandwidth': bandwidth(s, changes, grid),
        'sensitivity': largest(s, changes, grid),
        'damping': damping(s, changes),
        'delay': delay(s, changes, 3.0 * changes),
    }


json.dump([measures(loop) for loop in json.load(sys.stdin)], sys.stdout)
