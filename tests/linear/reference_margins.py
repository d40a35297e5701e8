"""Margins and peaks of sampled loops, by a method of its own: crossings are changes of sign on a dense grid in modal form
and eigenvalues of matrix pencils (LAPACK's QZ), polished with a direct solve at each angle; peaks are sought on the same
grid, polished likewise, and proved by a pencil. Reads a list of loops {a, b, c, d, period} from standard input, writes a
list of results to standard output."""
import json
import sys

import numpy as np
from scipy import linalg, optimize


def response(s, angle):
    a, b, c, d = s
    return (c @ np.linalg.solve(np.exp(1j * angle) * np.eye(len(a)) - a, b) + d)[0, 0]


def angles_on_circle(m, n):
    w = linalg.eigvals(m, n, homogeneous_eigvals=True)
    with np.errstate(divide='ignore', invalid='ignore'):
        z = w[0] / w[1]
    z = z[np.isfinite(z)]
    return np.abs(np.angle(z[np.abs(np.abs(z) - 1) < 1e-2]))


def pencil(s, inner):
    """The pencil of a loop of s and its mirror image; inner are the rows that tie their inputs and outputs."""
    a, b, c, _ = s
    n = len(a)
    k = inner.shape[1] - 2 * n
    m, q = np.zeros((2 * n + k, 2 * n + k)), np.zeros((2 * n + k, 2 * n + k))
    m[:n, :n], m[:n, 2 * n:2 * n + 1], q[:n, :n] = a, b, np.eye(n)
    m[n:2 * n, n:2 * n], q[n:2 * n, n:2 * n], q[n:2 * n, 2 * n + k - 1:] = np.eye(n), a.T, c.T
    m[2 * n:] = inner
    return m, q


def level_angles(s, level):
    """Angles at which the size of the response is the level."""
    a, b, c, d = s[0], s[1], s[2] / level, s[3] / level
    n = len(a)
    inner = np.zeros((2, 2 * n + 2))
    inner[0, :n], inner[0, 2 * n], inner[0, 2 * n + 1] = c[0], d[0, 0], -1
    inner[1, n:2 * n], inner[1, 2 * n], inner[1, 2 * n + 1] = b[:, 0], -1, d[0, 0]
    return angles_on_circle(*pencil((a, b, c, d), inner))


def real_angles(s):
    """Angles at which the response is real."""
    n = len(s[0])
    inner = np.zeros((1, 2 * n + 1))
    inner[0, :n], inner[0, n:2 * n] = s[2][0], -s[1][:, 0]
    return angles_on_circle(*pencil(s, inner))


def on_grid(s, others=()):
    """Angles from 0 to pi, dense near the poles of s and the given ones, and the response there from its modes."""
    values, basis = np.linalg.eig(s[0])
    left, right = s[2] @ basis, np.linalg.solve(basis, s[1])
    grid = [np.linspace(0, np.pi, 1501), np.geomspace(1e-7, np.pi, 1000)]
    for z in np.concatenate([values, others]):
        away = np.geomspace(1e-2, 30, 30) * max(1 - abs(z), 1e-9)
        grid += [abs(np.angle(z)) + away, abs(np.angle(z)) - away, [abs(np.angle(z))]]
    grid = np.concatenate(grid)
    grid = np.unique(grid[(grid >= 0) & (grid <= np.pi)])
    with np.errstate(divide='ignore', invalid='ignore'):
        return grid, (left * right.T / (np.exp(1j * grid)[:, None] - values)).sum(axis=1) + s[3][0, 0]


def zeros_of(f, grid, values, starts):
    """Zeros of f strictly between 0 and pi, each once: at changes of sign of its values on the grid, and near the starts."""
    found = []

    def add(x):
        if 1e-9 < x < np.pi - 1e-9 and all(abs(x - y) > 1e-8 * x for y in found):
            found.append(float(x))

    for i in np.where(values[1:] * values[:-1] < 0)[0]:
        try:
            add(optimize.brentq(f, grid[i], grid[i + 1], xtol=1e-16, rtol=1e-14))
        except (ValueError, np.linalg.LinAlgError):
            pass  # the modes were not exact enough for a sign: the direct solve decides
    for start in starts:
        if not 1e-9 < start < np.pi - 1e-9:
            continue
        try:
            x = optimize.newton(f, start, x1=start * (1 + 1e-7) + 1e-12, tol=1e-15, rtol=1e-15, maxiter=60)
        except (RuntimeError, np.linalg.LinAlgError):
            continue
        if abs(x - start) <= 1e-1 * start and abs(f(x)) < 1e-11:
            add(x)
    return sorted(found)


def peak(s):
    """Largest size of a stable response, and its angle."""
    grid, values = on_grid(s)
    sizes = np.abs(values)
    padded = np.concatenate([[0], sizes, [0]])
    candidates = np.where((sizes > 0.98 * sizes.max()) & (sizes >= padded[:-2]) & (sizes >= padded[2:]))[0]
    candidates = sorted(candidates, key=lambda i: -sizes[i])
    best = max((abs(response(s, x)), x) for x in (0.0, np.pi))
    for i in candidates[:20]:
        best = max(best, climbed(s, grid[max(i - 1, 0)], grid[min(i + 1, len(grid) - 1)]))
    for _ in range(20):
        ends = np.unique(np.concatenate([[0, np.pi], level_angles(s, best[0] * (1 + 1e-9))]))
        higher = [(abs(response(s, (x + y) / 2)), x, y) for x, y in zip(ends[1:], ends[:-1])]
        higher = [one for one in higher if one[0] > best[0] * (1 + 1e-9)]
        if not higher:
            return best
        best = max([best] + [max((size, (x + y) / 2), climbed(s, x, y)) for size, y, x in higher])
    raise RuntimeError('the peak was not proved')


def climbed(s, low, high):
    found = optimize.minimize_scalar(lambda x: -abs(response(s, x)), bounds=(low, high), method='bounded',
                                     options={'xatol': 1e-13})
    return -found.fun, found.x


def delay(above, gain, at_pi, period):
    """Smallest delay at a crossing, or at half the sampling frequency, where cos(pi*delay/period) is left of the turn."""
    found = [p % (2 * np.pi) / x * period for p, x in zip(above, gain)]
    if abs(at_pi) >= 1:
        found.append(np.arccos(-1 / at_pi) / np.pi * period)
    return min(found) if found else None


def margins(loop):
    a, b, c, d = (np.atleast_2d(np.array(loop[k], dtype=float)) for k in 'abcd')
    s = (a, b, c, d)
    period = loop['period']
    through = 1 / (1 + d[0, 0])
    closed = a - through * b @ c
    poles = np.linalg.eigvals(closed)
    if max(abs(poles)) >= 1:
        return {'stable': False}
    grid, values = on_grid(s, poles)
    grid, values = grid[np.isfinite(values)], values[np.isfinite(values)]
    gain = zeros_of(lambda x: np.log(abs(response(s, x))), grid, np.log(np.abs(values)), level_angles(s, 1))
    sine = lambda v: v.imag / np.abs(v)
    phase = zeros_of(lambda x: sine(response(s, x)), grid, sine(values), real_angles(s))
    real = [response(s, x).real for x in phase]
    for x in (0, np.pi):
        # At an integrator the response is infinite, and a solve gives rounding noise.
        if min(abs(np.linalg.eigvals(a) - np.exp(1j * x))) > 1e-6:
            real.append(response(s, x).real)
    factors = [-1 / v for v in real if -1e6 < v < -1e-6]
    above = [np.angle(-response(s, x)) for x in gain]
    up, down = [k for k in factors if k > 1], [k for k in factors if k <= 1]
    sensitivity = peak((closed, b * through, -c * through, np.array([[through]])))
    complementary = peak((closed, b * through, c * through, np.array([[d[0, 0] * through]])))
    return {
        'stable': True,
        'up': min(up) if up else None,
        'down': max(down) if down else 0,
        'phase': min(map(abs, above)) if above else None,
        'delay': delay(above, gain, response(s, np.pi).real, period),
        'crossovers': [x / period for x in gain],
        'sensitivity': sensitivity[0],
        'complementary': complementary[0],
    }


json.dump([margins(loop) for loop in json.load(sys.stdin)], sys.stdout)
