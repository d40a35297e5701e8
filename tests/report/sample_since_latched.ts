import type { ComparedResult, Comparison, FinishedRun, SpecRun } from '../../src/verdict/run.js';
import { kp, notch, plant, requirement, specRun, units, value } from './sample_run.js';

/** An angle as a measure gave it, with its headroom. */
export const degrees = (angle: number, headroom: number): ComparedResult => ({
  result: value((angle * Math.PI) / 180),
  headroom,
});

/** A phase margin that the firmware made worse and the spec better. */
export function comparison(changes: Partial<Comparison> = {}): Comparison {
  return {
    ...{ latched: degrees(52, 0.3), rerun: degrees(53, 0.325), today: degrees(44, 0.1) },
    ...{ lost: 0.225, maySlip: 0.05, fromSpec: ['the bounds of friction'] },
    attribution: [
      { name: 'kd', share: 0.92, lost: 0.207 },
      { name: 'notch', share: 0.11, lost: 0.02475 },
      { name: 'kp', share: -0.03, lost: -0.00675 },
    ],
    ...changes,
  };
}

/** A phase margin held against the reference. */
export const margin = (changes: Partial<Comparison> = {}, verdict: 'met' | 'slipped' = 'slipped') =>
  requirement({
    ...{ name: 'AZ-5', measure: 'phase_margin', signals: { at: 'duty' }, scenario: undefined },
    ...{ limit: { at_least: (40 * Math.PI) / 180 }, unit: units.degree },
    worst: plant(value((44 * Math.PI) / 180), 0.1, true),
    verdict:
      verdict === 'met'
        ? { kind: 'met', headroom: 0.1 }
        : { kind: 'slipped', headroom: 0.1, why: 'it lost too much' },
    comparison: comparison(changes),
  });

const place = { file: 'a.pawl.yaml', line: 1, column: 1 };
const kd = { ...kp, path: 'azimuth.gains.kd', declaredAt: { file: 'azimuth.c', line: 40 } };
/** Coefficients that were changed. */
export const coefficients: SpecRun['coefficients'] = [
  {
    name: 'kd',
    place,
    unit: units.second,
    coefficient: kd,
    source: { file: 'firmware/azimuth.c', line: 41 },
  },
  { name: 'notch', place, unit: undefined, coefficient: notch },
  { name: 'kp', place, unit: undefined, coefficient: kp },
];
/** A run of one requirement that slipped. */
export const run = (changes: Partial<SpecRun> = {}): SpecRun =>
  specRun({
    coefficients,
    sinceLatched: {
      ...{
        path: 'reference/latched/heliostat.json',
        reference: { reason: 'the first release', pawl: '0.1.0' },
      },
      coefficients: [
        { name: 'kd', latched: [Math.fround(0.3)], today: [Math.fround(0.21)], elements: [0] },
        { name: 'notch', latched: [1.25, -0.25], today: [1.25, -0.5], elements: [1] },
        { name: 'kp', latched: [Math.fround(2)], today: [Math.fround(2.5)], elements: [0] },
      ],
      ...{ spec: ['the bounds of friction'], law: [] },
    },
    requirements: [margin()],
    ...changes,
  });
/** The same, finished. */
export const finished = (changes: Partial<SpecRun> = {}): FinishedRun => ({
  version: '0.1.0',
  specs: [run(changes)],
});
