import type { MeasureGroup } from './example.js';

const of = (name: string, text: string, unit: string, formula: string, why?: string) => ({
  requirement: `{ name: ${name}, measure: ${text} }`,
  unit,
  formula,
  ...(why ? { why } : {}),
});

/** A gain, a table and a filter of a build. */
const drive: MeasureGroup = {
  title: 'numbers of a drive',
  shows: 'a gain, a calibration table and a filter',
  shown: `firmware:
  image: firmware/drive.elf
  coefficients:
    kp:   { at: drive.gains.kp, unit: A/rad }
    map:  { at: drive.map, unit: mV }
    taps: { at: drive.taps, format: Q2.14 }`,
  build: {
    kp: [1.25],
    map: [-2, 0.5, 1, 7],
    taps: { values: [0.25, -1.5, 1], format: 'Q2.14', fractionalBits: 14 },
  },
  latched: { kp: [1.2] },
  outcomes: [
    of('B-1', 'coefficient_value, of: kp, between: [1 A/rad, 2 A/rad]', 'A/rad', '1.25'),
    of('B-2', 'largest_entry, of: map, at_most: 10 mV', 'mV', '7'),
    of('B-3', 'smallest_entry, of: map, at_least: -5 mV', 'mV', '−2'),
    of(
      'B-4',
      'least_rise, of: map, at_least: 0 mV, scale: 1 mV',
      'mV',
      '1 − 0.5',
      'the table rises throughout',
    ),
    of('B-5', 'least_fall, of: map, at_least: 0 mV, scale: 1 mV', 'mV', '1 − 7', 'it does not fall'),
    of(
      'B-6',
      'stored_range_use, of: taps, at_most: 90 %',
      '%',
      '100·1.5/2',
      'Q2.14 goes from −2 to almost 2',
    ),
    of('B-7', 'change_since_latched, of: kp, at_most: 10 %', '%', '100·(1.25 − 1.2)/1.2'),
  ],
};

/** Measures of the build alone. */
export const buildMeasures: readonly MeasureGroup[] = [drive];
