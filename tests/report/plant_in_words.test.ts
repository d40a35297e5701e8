import { describe, expect, it } from 'vitest';
import { parameterRows } from '../../src/report/parameter_table.js';
import { moveInWords, plantInWords } from '../../src/report/plant_in_words.js';
import { movedParameters, nominalParameters, parameter, units } from './sample_run.js';

describe('plantInWords', () => {
  it('tells where the moved parameters stand, and that nothing else moved', () => {
    expect(plantInWords({ parameters: movedParameters })).toBe(
      'friction at its lower bound (10 N*m*s/rad), drive 63 % of the way to its upper bound (191.3 N*m); nothing else moved',
    );
  });

  it('names the nominal plant as such', () => {
    expect(plantInWords({ parameters: nominalParameters })).toBe('the nominal plant');
    expect(plantInWords({ parameters: [] })).toBe('the nominal plant');
  });

  it('says nothing of others where all have moved', () => {
    expect(plantInWords({ parameters: movedParameters.slice(0, 1) })).toBe(
      'friction at its lower bound (10 N*m*s/rad)',
    );
  });

  it('does not count parameters that follow from others: they move with them', () => {
    const follows = { ...parameter('flow', 3, 2, 0, units.torque), derived: true as const };
    const parameters = [...movedParameters.slice(0, 1), follows];
    expect(plantInWords({ parameters })).toBe('friction at its lower bound (10 N*m*s/rad)');
    expect(parameterRows({ parameters })[1][4]).toBe('follows from the others');
  });

  it('tells what moved most first and counts what it leaves out', () => {
    const many = Array.from({ length: 12 }, (_, i) => parameter(`p${i}`, i, 0, i / 12, units.torque));
    expect(plantInWords({ parameters: many }, 2)).toBe(
      'p11 92 % of the way to its upper bound (11 N*m), p10 83 % of the way to its upper bound (10 N*m); 9 more moved less',
    );
  });
});

describe('moveInWords', () => {
  it('never rounds a parameter onto its bound or back to nominal', () => {
    expect(moveInWords(1)).toBe('at its upper bound');
    expect(moveInWords(0.9999)).toBe('just short of its upper bound');
    expect(moveInWords(-0.9999)).toBe('just short of its lower bound');
    expect(moveInWords(1e-9)).toBe('less than 1 % of the way to its upper bound');
    expect(moveInWords(-0.5)).toBe('50 % of the way to its lower bound');
    expect(moveInWords(0)).toBe('nominal');
  });
});
