import { describe, expect, it } from 'vitest';
import { siUnit } from '../../src/report/si_unit.js';
import { units } from './sample_run.js';

/** Expected: the coherent unit of the same quantity, SI Brochure (9th edition, 2019). */
describe('siUnit', () => {
  it.each([
    [units.second, 's'],
    [units.millisecond, 's'],
    [units.percent, '1'],
    [units.plain, '1'],
    [units.decibel, '1'],
    [units.degree, 'rad'],
    [units.milliradian, 'rad'],
    [units.torque, 'N*m'],
    [units.friction, 'N*m*s/rad'],
    [{ ...units.torque, text: 'mN*m', scale: 1e-3 }, 'N*m'],
    [units.hertz, 'Hz'],
    [{ ...units.hertz, text: 'kHz', scale: 1e3 }, 'Hz'],
    [units.rpm, 'rad/s'],
    [{ ...units.rpm, text: 'deg/s', scale: Math.PI / 180 }, 'rad/s'],
    [{ ...units.second, text: 'mm/s', dimension: [1, 0, -1, 0, 0, 0, 0, 0], scale: 1e-3 }, 'm/s'],
    [{ ...units.second, text: 'g*cm^2', dimension: [2, 1, 0, 0, 0, 0, 0, 0], scale: 1e-7 }, 'kg*m^2'],
    [{ ...units.second, text: '1/ms', dimension: [0, 0, -1, 0, 0, 0, 0, 0], scale: 1e3 }, '1/s'],
  ])('of %o is %s', (unit, expected) => {
    expect(siUnit(unit)).toBe(expected);
  });
});
