"""What scipy makes of filters, tables and observers. A line of input is
a list of questions, a line of output their answers."""
import json
import sys

import numpy as np
from scipy import interpolate, linalg, signal


def filtered(q):
    """The output of a ratio of polynomials in descending powers of z."""
    numerator, denominator = q['numerator'], q['denominator']
    padded = [0] * (len(denominator) - len(numerator)) + numerator
    return signal.lfilter(padded, denominator, q['input'])


def sections(q):
    rows = [[b0, b1, b2, 1, a1, a2] for b0, b1, b2, a1, a2 in q['sections']]
    return signal.sosfilt(rows, q['input'])


def discretised(q):
    """A ratio of polynomials in descending powers of s, sampled by a rule, and its output."""
    numerator, denominator, _ = signal.cont2discrete((q['numerator'], q['denominator']), q['period'], method=q['rule'])
    return signal.lfilter(numerator.ravel(), denominator, q['input'])


def response(q):
    numerator, denominator = q['numerator'], q['denominator']
    padded = [0] * (len(denominator) - len(numerator)) + numerator
    _, h = signal.freqz(padded, denominator, worN=q['angles'])
    return np.stack([h.real, h.imag], axis=1)


def notch(q):
    numerator, denominator = signal.iirnotch(q['frequency'], q['frequency'] / q['width'], fs=q['rate'])
    return signal.lfilter(numerator, denominator, q['input'])


def table(q):
    x = np.clip(q['input'], q['points'][0], q['points'][-1])
    if q['between'] == 'linear':
        return np.interp(x, q['points'], q['values'])
    return interpolate.PchipInterpolator(q['points'], q['values'])(x)


def surface(q):
    values = np.array(q['values'])
    if q['between'] == 'linear':
        at = np.stack([np.clip(q['input'], q['points'][0], q['points'][-1]),
                       np.clip(q['second'], q['second_points'][0], q['second_points'][-1])], axis=1)
        return interpolate.RegularGridInterpolator((q['points'], q['second_points']), values)(at)
    along = interpolate.PchipInterpolator(q['points'], values)
    return np.array([interpolate.PchipInterpolator(q['second_points'], along(x))(y) for x, y in
                     zip(q['input'], q['second'])])


def steady_gain(q):
    a, c, w, r = (np.array(q[k], dtype=float) for k in ('state', 'output', 'disturbed', 'noise'))
    p = linalg.solve_discrete_are(a.T, c.T, w, r)
    gain = p @ c.T @ np.linalg.inv(c @ p @ c.T + r)
    return gain if q['uses'] == 'this_sample' else a @ gain


def observed(q):
    """The output of an observer with state feedback, as one system from what is measured to what drives the plant."""
    a, b, c, gain = (np.array(q[k], dtype=float) for k in ('state', 'input', 'output', 'gain'))
    k = np.array([q['feedback']], dtype=float)
    if q['uses'] == 'this_sample':
        seen = np.eye(len(a)) - gain @ c
        system = ((a - b @ k) @ seen, (a - b @ k) @ gain, -k @ seen, -k @ gain, 1.0)
    else:
        system = (a - b @ k - gain @ c, gain, -k, np.zeros((1, 1)), 1.0)
    return signal.dlsim(system, np.array(q['input_signal']))[1].ravel()


questions = {f.__name__: f for f in (filtered, sections, discretised, response, notch, table, surface, steady_gain,
                                   observed)}
for line in sys.stdin:
    print(json.dumps([np.asarray(questions[q['ask']](q)).tolist() for q in json.loads(line)]), flush=True)
