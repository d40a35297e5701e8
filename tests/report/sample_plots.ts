import type {
  FrequencyCurve,
  GainPlot,
  HeadroomPlane,
  OpenLoopPlot,
  ReportPlots,
  TracePlot,
} from '../../src/report/plots.js';
import { units } from './sample_run.js';

const count = 801;
const times = Array.from({ length: count }, (_, at) => (4 * at) / (count - 1));
const step = 0.05;

/** The step response of ω²/(s² + 2ζωs + ω²), a textbook closed form for 0 < ζ < 1, from 0.2 s on. */
function response(damping: number, omega: number): number[] {
  const root = Math.sqrt(1 - damping ** 2);
  return times.map((time) => {
    const t = Math.max(0, time - 0.2);
    const angle = omega * root * t;
    const fading = Math.exp(-damping * omega * t);
    return step * (1 - fading * (Math.cos(angle) + (damping / root) * Math.sin(angle)));
  });
}

const family = [0.25, 0.35, 0.5, 0.7, 0.9].flatMap((damping) =>
  [3, 4, 5].map((omega) => response(damping, omega)),
);

export const tracePlot: TracePlot = {
  requirements: ['AZ-2', 'AZ-1'],
  signal: 'angle',
  scenario: 'slew',
  unit: units.milliradian,
  times,
  plants: family.length,
  low: times.map((_, at) => Math.min(...family.map((one) => one[at]))),
  high: times.map((_, at) => Math.max(...family.map((one) => one[at]))),
  nominal: response(0.7, 4),
  latched: response(0.9, 4),
  worst: response(0.25, 3),
  target: times.map((time) => (time < 0.2 ? 0 : step)),
  fences: [
    {
      requirement: 'AZ-1',
      from: { time: 0.2, value: 1.25 * step },
      to: { time: 4, value: 1.25 * step },
      forbidden: 'above',
    },
    {
      requirement: 'AZ-2',
      from: { time: 2.7, value: 1.05 * step },
      to: { time: 4, value: 1.05 * step },
      forbidden: 'above',
    },
    {
      requirement: 'AZ-2',
      from: { time: 2.7, value: 0.95 * step },
      to: { time: 4, value: 0.95 * step },
      forbidden: 'below',
    },
  ],
};

const frequencies = Array.from({ length: 400 }, (_, at) => 10 ** (-1 + (3 * at) / 399));

/** L(jω) = k e^(−jωT) / (jω (1 + jωτ)). */
function loopCurve(k: number, tau: number, delay: number): FrequencyCurve {
  return {
    magnitude: frequencies.map((omega) => k / (omega * Math.hypot(1, omega * tau))),
    phase: frequencies.map((omega) => -Math.PI / 2 - Math.atan(omega * tau) - omega * delay),
  };
}

export const openLoopPlot: OpenLoopPlot = {
  requirements: ['AZ-6', 'AZ-7'],
  at: 'duty',
  frequencies,
  nominal: loopCurve(4, 0.05, 0.03),
  worst: loopCurve(9, 0.07, 0.03),
  margins: [
    {
      requirement: 'AZ-6',
      kind: 'gain',
      curve: 'worst',
      frequency: 16.2,
      start: 0.366,
      text: '8.74 dB, headroom 25 %',
    },
    {
      requirement: 'AZ-7',
      kind: 'phase',
      curve: 'nominal',
      frequency: 3.92,
      start: -1.88,
      text: '72 deg, headroom 60 %',
    },
  ],
  modulus: {
    requirement: 'AZ-8',
    limit: 0.5,
    curve: 'worst',
    nearest: { real: -0.48, imaginary: -0.28 },
    text: '0.59, headroom 18 %',
  },
};

/** 1/(1 + L), from a magnitude and a phase. */
function sensitivity({ magnitude, phase }: FrequencyCurve): number[] {
  return magnitude.map(
    (size, at) => 1 / Math.hypot(1 + size * Math.cos(phase[at]), size * Math.sin(phase[at])),
  );
}

const [nominalSize, worstSize] = [openLoopPlot.nominal, openLoopPlot.worst].map(sensitivity);
const peak = Math.max(...worstSize);

export const gainPlot: GainPlot = {
  requirements: ['AZ-7', 'AZ-6'],
  ...{ response: 'sensitivity', at: 'duty', changes: 1, meaning: 'response', frequencies },
  plants: 12,
  low: nominalSize.map((size, at) => Math.min(size, worstSize[at]) * 0.9),
  high: nominalSize.map((size, at) => Math.max(size, worstSize[at]) * 1.1),
  nominal: nominalSize,
  latched: sensitivity(loopCurve(3, 0.05, 0.02)),
  worst: [
    { requirements: ['AZ-7'], values: worstSize },
    { requirements: ['AZ-6'], values: sensitivity(loopCurve(2, 0.09, 0.03)) },
  ],
  fences: [
    { requirement: 'AZ-7', from: 0, to: 100, value: 2, forbidden: 'above' },
    { requirement: 'AZ-6', from: 1, to: 1, value: 0.5, forbidden: 'above' },
  ],
  tightest: [
    {
      requirement: 'AZ-7',
      frequency: frequencies[worstSize.indexOf(peak)],
      value: peak,
      text: 'worst 5.1 dB, headroom 7 %',
    },
  ],
};

const grid = Array.from({ length: 24 }, (_, at) => at / 23);

export const plane: HeadroomPlane = {
  requirement: 'AZ-3',
  x: {
    parameter: 'friction',
    unit: units.friction,
    values: grid.map((share) => 10 + 80 * share),
    nominal: 30,
    worst: 10,
  },
  y: {
    parameter: 'drive_lag',
    unit: units.millisecond,
    values: grid.map((share) => 0.03 + 0.02 * share),
    nominal: 0.04,
    worst: 0.05,
  },
  headroom: grid.map((up) =>
    grid.map((right) => (up > 0.95 && right > 0.9 ? Number.NaN : 0.9 * right - 0.5 * up ** 2 + 0.1)),
  ),
};

export const samplePlots: ReportPlots = {
  specs: [
    {
      traces: [tracePlot],
      loops: [openLoopPlot],
      gains: [gainPlot],
      planes: [plane],
      undrawn: [{ requirements: ['AZ-7'], why: 'The loop opened at duty and mirror is a matrix.' }],
    },
  ],
};
