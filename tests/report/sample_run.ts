import type { Coefficient } from '../../src/firmware/coefficient.js';
import type { MeasureResult } from '../../src/measure/measure.js';
import type { Unit } from '../../src/spec/spec.js';
import type {
  FinishedRun,
  JudgedPlant,
  ParameterValue,
  RequirementRun,
  SpecRun,
} from '../../src/verdict/run.js';

const plain = [0, 0, 0, 0, 0, 0, 0, 0];

/** Units as the spec reader gives them: text, SI scale, exponents of m, kg, s, A, K, mol, cd, cycle. */
export const units = {
  percent: { text: '%', dimension: plain, scale: 0.01 },
  plain: { text: '', dimension: plain, scale: 1 },
  decibel: { text: 'dB', dimension: plain, scale: 1 },
  degree: { text: 'deg', dimension: plain, scale: Math.PI / 180 },
  milliradian: { text: 'mrad', dimension: plain, scale: 1e-3 },
  second: { text: 's', dimension: [0, 0, 1, 0, 0, 0, 0, 0], scale: 1 },
  millisecond: { text: 'ms', dimension: [0, 0, 1, 0, 0, 0, 0, 0], scale: 1e-3 },
  torque: { text: 'N*m', dimension: [2, 1, -2, 0, 0, 0, 0, 0], scale: 1 },
  friction: { text: 'N*m*s/rad', dimension: [2, 1, -1, 0, 0, 0, 0, 0], scale: 1 },
  hertz: { text: 'Hz', dimension: [0, 0, -1, 0, 0, 0, 0, 1], scale: 1 },
  rpm: { text: 'rpm', dimension: [0, 0, -1, 0, 0, 0, 0, 0], scale: (2 * Math.PI) / 60 },
} as const satisfies Record<string, Unit>;

export const file = 'specs/heliostat/azimuth.pawl.yaml';

export function parameter(
  name: string,
  value: number,
  nominal: number,
  moved: number,
  unit: Unit,
): ParameterValue {
  return { name, value, nominal, moved, unit };
}

export const nominalParameters = [
  parameter('friction', 30, 30, 0, units.friction),
  parameter('drive', 180, 180, 0, units.torque),
  parameter('drive_lag', 0.04, 0.04, 0, units.millisecond),
];

export const movedParameters = [
  parameter('friction', 10, 30, -1, units.friction),
  parameter('drive', 191.34, 180, 0.63, units.torque),
  parameter('drive_lag', 0.04, 0.04, 0, units.millisecond),
];

export const value = (number: number): MeasureResult => ({ kind: 'value', value: number });

export function plant(result: MeasureResult, headroom: number | undefined, isMoved: boolean): JudgedPlant {
  return {
    origin: isMoved ? 'corner' : 'nominal',
    parameters: isMoved ? movedParameters : nominalParameters,
    result,
    headroom,
  };
}

const claim = 'in 1,000 independent plants none failed: with 95 % confidence fewer than 0.3 % do';

/** A requirement that is met: overshoot 12.1 % nominal, 19.6 % worst, at most 25 %. */
export function requirement(changes: Partial<RequirementRun> = {}): RequirementRun {
  return {
    name: 'AZ-1',
    place: { file, line: 58, column: 5 },
    measure: 'overshoot',
    signals: { of: 'angle', to: 'target' },
    scenario: 'slew',
    reason: 'The image must stay inside the receiver aperture while slewing.',
    limit: { at_most: 0.25 },
    unit: units.percent,
    inDecibels: false,
    holdsFor: 'all',
    verdict: { kind: 'met', headroom: 0.216 },
    evidence: { kind: 'tried', plants: 1108 },
    nominal: plant(value(0.121), 0.516, false),
    worst: plant(value(0.196), 0.216, true),
    counts: { tried: 1108, broken: 0, unjudged: 0 },
    claim,
    ...changes,
  };
}

const brokenBecause = { kind: 'broken', why: 'a plant within the bounds breaks it' } as const;

/** One requirement of every verdict and kind of result. */
export const requirements: RequirementRun[] = [
  requirement(),
  requirement({
    name: 'AZ-2',
    place: { file, line: 60, column: 5 },
    measure: 'settling_time',
    reason: undefined,
    limit: { at_most: 2.5 },
    unit: units.second,
    verdict: { ...brokenBecause, headroom: undefined },
    nominal: plant(value(1.73), 0.308, false),
    worst: plant(
      { kind: 'never', why: 'longer than 3.8 s: never stays in the band', left: 0.004 },
      undefined,
      true,
    ),
    counts: { tried: 1108, broken: 12, unjudged: 0 },
    claim: '9 of 1,000 independent plants failed: with 95 % confidence fewer than 1.6 % do',
  }),
  requirement({
    name: 'AZ-3',
    place: { file, line: 61, column: 5 },
    measure: 'peak_deviation',
    scenario: 'squall',
    reason: undefined,
    limit: { at_most: 0.03 },
    unit: units.milliradian,
    verdict: { ...brokenBecause, headroom: -0.0001 },
    nominal: plant(value(0.0212), 0.2933, false),
    worst: plant(value(0.030003), -0.0001, true),
    counts: { tried: 1108, broken: 3, unjudged: 0 },
  }),
  requirement({
    name: 'AZ-4',
    place: { file, line: 62, column: 5 },
    measure: 'saturated_share',
    signals: { of: 'duty' },
    reason: undefined,
    limit: { at_most: 0.15 },
    verdict: { kind: 'unjudged', why: 'the signal has no range' },
    nominal: plant({ kind: 'unformed', why: 'the signal has no range' }, undefined, false),
    worst: plant({ kind: 'unformed', why: 'the signal has no range' }, undefined, true),
    counts: { tried: 1108, broken: 0, unjudged: 1108 },
    claim: undefined,
  }),
  requirement({
    name: 'AZ-6',
    place: { file, line: 64, column: 5 },
    measure: 'gain_margin',
    signals: { at: 'duty' },
    scenario: undefined,
    reason: undefined,
    limit: { at_least: 10 ** (6 / 20) },
    unit: units.decibel,
    inDecibels: true,
    verdict: { kind: 'met', headroom: 0.25 },
    nominal: plant(value(Number.POSITIVE_INFINITY), 1, false),
    worst: plant(value(2.5), 0.253, true),
  }),
  requirement({
    name: 'AZ-7',
    place: { file, line: 65, column: 5 },
    measure: 'phase_margin',
    signals: { at: 'duty' },
    scenario: undefined,
    reason: undefined,
    limit: { between: [(40 * Math.PI) / 180, (80 * Math.PI) / 180] },
    unit: units.degree,
    holdsFor: 'nominal',
    evidence: { kind: 'nominal_only' },
    verdict: { kind: 'met', headroom: 0.4 },
    nominal: plant(value((52 * Math.PI) / 180), 0.6, false),
    worst: plant(value((52 * Math.PI) / 180), 0.6, false),
    claim: undefined,
  }),
];

/** A float32 in a nested struct. */
export const kp: Coefficient = {
  path: 'azimuth.gains.kp',
  elements: [{ value: Math.fround(0.3), stored: '0x3e99999a', address: 0x20000010 }],
  shape: [],
  type: 'float',
  format: { kind: 'float', bits: 32 },
  declaredAt: { file: 'firmware/azimuth.c', line: 41 },
};

/** A table of Q2.14 numbers. */
export const notch: Coefficient = {
  path: 'azimuth_notch',
  elements: [
    { value: 1.25, stored: '0x5000', address: 0x08001000 },
    { value: -0.5, stored: '0xe000', address: 0x08001002 },
  ],
  shape: [2],
  type: 'int16_t[2] as Q2.14',
  format: { kind: 'fixed', bits: 16, signed: true, fractionalBits: 14 },
  declaredAt: { file: 'firmware/azimuth.c', line: 47 },
};

export function specRun(changes: Partial<SpecRun> = {}): SpecRun {
  return {
    file,
    loop: 'Heliostat azimuth drive',
    seed: 11,
    confidence: 0.95,
    provenance: {
      image: 'firmware/azimuth.elf',
      bytes: 48_212,
      sha256: '9f3c2a17b04e5d6677889900aabbccddeeff00112233445566778899aabbccdd',
      buildId: '5d0c1f2e',
      compilers: ['GNU C11 12.2.1 -mcpu=cortex-m4 -O2'],
      build: { command: ['make', '-s', '-C', 'firmware'], seconds: 0.83, output: 'built azimuth.elf\n' },
      buildSkipped: false,
    },
    coefficients: [
      { name: 'kp', place: { file, line: 8, column: 5 }, unit: undefined, coefficient: kp },
      { name: 'notch', place: { file, line: 13, column: 5 }, unit: undefined, coefficient: notch },
    ],
    requirements,
    plants: { nominal: 1, single: 11, corner: 32, independent: 1000, edge_biased: 64 },
    scenarios: [
      { name: 'slew', lasts: 4 },
      { name: 'squall', lasts: 4 },
    ],
    halvings: 1,
    merge: 'latched reference ../../reference/latched/heliostat.json is not compared yet',
    seconds: 1.206,
    ...changes,
  };
}

/** One spec with requirements of every verdict. */
export function sampleRun(changes: Partial<SpecRun> = {}): FinishedRun {
  return { version: '0.1.0', specs: [specRun(changes)] };
}

/** The same, with every requirement met. */
export function metRun(): FinishedRun {
  return sampleRun({ requirements: requirements.filter(({ verdict }) => verdict.kind === 'met') });
}
