import { describe, expect, it } from 'vitest';
import type { Requirement, Waiver } from '../../../src/spec/spec.js';
import { coefficientChanges, withLatched } from '../../../src/verdict/latched/coefficient_changes.js';
import { compilerChanges, lawChanges } from '../../../src/verdict/latched/law_changes.js';
import { mergeFault } from '../../../src/verdict/latched/merge_fault.js';
import type { LatchedRequirement, Reference } from '../../../src/verdict/latched/reference.js';
import { referencePlants } from '../../../src/verdict/latched/reference_plants.js';
import { settleVerdicts } from '../../../src/verdict/latched/settle.js';
import {
  askedOf,
  changesOfRequirements,
  partsOfSpec,
  requirementChanges,
  specChanges,
} from '../../../src/verdict/latched/spec_parts.js';
import { isInForce, waived } from '../../../src/verdict/latched/waive.js';
import type { Comparison, RequirementRun, SinceLatched, Verdict } from '../../../src/verdict/run.js';
import { requirement as requirementRun } from '../../report/sample_run.js';
import { quickSpec } from './demo_changes.js';

// Protects the small judgements about what changed: nothing that changed is passed over, nothing that did not is named.

const place = { file: 'a.pawl.yaml', line: 1, column: 1 };
const spec = quickSpec();

const coefficient = (values: number[], unit: string | null = null, format: string | null = 'float32') => ({
  ...{ at: 'a', type: 'float', unit, format, fractional_bits: null, shape: [], values, stored: ['0x0'] },
});

function latchedOf(run: Partial<LatchedRequirement> = {}): LatchedRequirement {
  const [first] = spec.requirements;
  return {
    ...{ measure: first.measure, asked: askedOf(first), limit: first.limit, unit: '%', holds_for: 'all' },
    ...{
      verdict: 'met',
      nominal: { value: 0, headroom: 1 },
      worst: { value: 0.1, headroom: 0.6 },
      plant: {},
    },
    ...run,
  };
}

function referenceWith(changes: Partial<Reference> = {}): Reference {
  return {
    ...{
      format: 1,
      pawl: '0.1.0',
      loop: spec.loop,
      reason: 'r',
      image: null,
      plants: {},
      seed: spec.perturbation.seed,
    },
    coefficients: {},
    parameters: Object.fromEntries(
      spec.parameters.map(({ name, nominal, low, high, unit }) => [
        name,
        { nominal, low, high, unit: unit.text },
      ]),
    ),
    parts: partsOfSpec(spec),
    law: {},
    requirements: { 'AZ-1': latchedOf() },
    ...changes,
  };
}

describe('changed coefficients', () => {
  const stored = (...values: number[]) => ({ values, format: 'float32', fractionalBits: undefined });
  const units = new Map([['t', 'us']]);

  it('are those with other numbers, and of an array the elements that differ', () => {
    const reference = referenceWith({
      coefficients: { a: coefficient([1]), b: coefficient([2]), taps: coefficient([1, 2, 3]) },
    });
    const today = new Map([
      ['a', stored(1)],
      ['b', stored(2.5)],
      ['taps', stored(1, 3, 2)],
    ]);
    const changes = coefficientChanges(reference, today, units);
    expect(changes).toEqual([
      { name: 'b', latched: [2], today: [2.5], elements: [0] },
      { name: 'taps', latched: [1, 2, 3], today: [1, 3, 2], elements: [1, 2] },
    ]);
    expect(withLatched(today, reference, changes)!.get('b')).toEqual(stored(2));
  });

  it('tell zero from minus zero, which a controller may', () => {
    const reference = referenceWith({ coefficients: { a: coefficient([0]) } });
    expect(coefficientChanges(reference, new Map([['a', stored(-0)]]), units)).toHaveLength(1);
  });

  it('are unlike where the latched numbers would mean something else today', () => {
    const reference = referenceWith({
      coefficients: { t: coefficient([2], 'ms'), taps: coefficient([1, 2]), old: coefficient([5]) },
    });
    const today = new Map([
      ['t', stored(2000)],
      ['taps', stored(1)],
      ['young', stored(7)],
    ]);
    const changes = coefficientChanges(reference, today, units);
    expect(changes.map(({ name, unlike }) => [name, unlike])).toEqual([
      ['t', 'its unit was ms and is us'],
      ['taps', 'it had 2 numbers and has 1'],
      ['young', 'it is new'],
      ['old', 'the spec no longer names it'],
    ]);
    expect(withLatched(today, reference, changes)).toBeUndefined();
  });

  it('are there where only the number format is another', () => {
    const reference = referenceWith({ coefficients: { a: coefficient([1], null, 'float64') } });
    expect(coefficientChanges(reference, new Map([['a', stored(1)]]), units)).toEqual([
      { name: 'a', latched: [1], today: [1], elements: [] },
    ]);
  });
});

describe('changes of the spec', () => {
  const changed = (from: string, to: string) => quickSpec((text) => text.replace(from, to));

  it('are none where nothing changed, wherever in the file it stands', () => {
    expect(specChanges(referenceWith(), spec)).toEqual([]);
    expect(
      specChanges(
        referenceWith(),
        quickSpec((text) => `# a line above\n${text}`),
      ),
    ).toEqual([]);
    expect(requirementChanges(referenceWith(), spec.requirements[0])).toEqual([]);
  });

  it.each([
    ['from: 10 N*m*s/rad', 'from: 9 N*m*s/rad', 'the bounds of friction'],
    ['nominal: 30 N*m*s/rad', 'nominal: 31 N*m*s/rad', 'the nominal value of friction'],
    ['stiction*tanh', '2*stiction*tanh', 'the plant signal speed'],
    ['noise: 0.03 mrad', 'noise: 0.04 mrad', 'the sensor encoder'],
    ['delay: 400 us', 'delay: 500 us', 'the controller azimuth'],
    ['resolution: 0.001', 'resolution: 0.002', 'the actuator duty'],
    ['pulse: 12 N*m', 'pulse: 13 N*m', 'the scenario squall'],
    ['seed: 11', 'seed: 12', 'the seed of the plants'],
  ])('%s → %s is told as %s', (from, to, words) => {
    expect(specChanges(referenceWith(), changed(from, to))).toEqual([words]);
  });

  it('name parameters that came and went', () => {
    const { friction: _, ...others } = referenceWith().parameters;
    expect(specChanges(referenceWith({ parameters: others }), spec)).toEqual([
      'the parameter friction, which is new',
    ]);
    const more = { ...referenceWith().parameters, backlash: { nominal: 0, low: 0, high: 1, unit: 'rad' } };
    expect(specChanges(referenceWith({ parameters: more }), spec)).toEqual([
      'the parameter backlash, which is gone',
    ]);
  });

  it('of a requirement are its limit, its plants and what it measures', () => {
    const [first] = spec.requirements;
    const of = (changes: Partial<Requirement>) =>
      requirementChanges(referenceWith(), { ...first, ...changes });
    expect(of({ limit: { at_most: 0.2 } })).toEqual(['its limit']);
    expect(of({ holdsFor: 0.99 })).toEqual(['the plants it holds for']);
    expect(of({ signals: { of: 'encoder', to: 'target' } })).toEqual(['what it measures']);
    expect(of({ name: 'new', limit: { at_most: 0.2 } })).toEqual([]);
  });

  it('are told where the loop is opened at other signals, whatever their order', () => {
    const margin = { ...spec.requirements[5], signals: {}, atSeveral: ['duty', 'encoder'] };
    const reference = referenceWith({
      requirements: {
        [margin.name]: {
          ...latchedOf(),
          limit: margin.limit,
          holds_for: margin.holdsFor,
          asked: askedOf(margin),
        },
      },
    });
    const of = (atSeveral: string[]) => requirementChanges(reference, { ...margin, atSeveral });
    expect(of(['encoder', 'duty'])).toEqual([]);
    expect(of(['duty', 'command'])).toEqual(['what it measures']);
  });
});

describe('changes of all requirements', () => {
  it('name those that are new, those that are gone, and what changed of the others', () => {
    const all = Object.fromEntries(spec.requirements.map(({ name }) => [name, latchedOf()]));
    const old = { ...latchedOf(), limit: { at_most: 0.3 } };
    const { 'AZ-3': _, ...others } = all;
    const reference = referenceWith({ requirements: { ...others, 'AZ-1': old, 'AZ-2': latchedOf() } });
    const changes = changesOfRequirements(reference, {
      ...spec,
      requirements: spec.requirements.slice(0, 2),
    });
    expect(changes).toEqual([
      'the requirement AZ-3, which is new',
      'the requirement AZ-5, which is gone',
      'the requirement AZ-6, which is gone',
      'the requirement AZ-7, which is gone',
      'the requirement AZ-2, which is gone',
      'AZ-1 (its limit)',
    ]);
  });
});

describe('plants of the reference', () => {
  const [low, high] = [spec.parameters[1].low, spec.parameters[1].high];
  const plant = (friction: number) => ({ inertia: 38, friction, stiction: 0.6, drive: 180, drive_lag: 0.04 });
  const plants = (...frictions: number[]) =>
    referencePlants(
      referenceWith({
        requirements: Object.fromEntries(
          frictions.map((one, at) => [`R${at}`, latchedOf({ plant: plant(one) })]),
        ),
      }),
      spec,
    ).map((values) => values[1]);

  it('are tried where they lie inside today’s bounds, each once; nominal and bounds are tried anyway', () => {
    expect(plants(20, 20, 30, low, high, low - 1, high + 1)).toEqual([20]);
  });

  it('are left out where the parameters are others', () => {
    const other = latchedOf({ plant: { friction: 20 } });
    expect(referencePlants(referenceWith({ requirements: { R: other } }), spec)).toEqual([]);
    expect(referencePlants(undefined, spec)).toEqual([]);
  });
});

describe('the law', () => {
  const code = (digest: string, size = 10) => ({ name: 'step', size, digest });

  it('is as it was, changed, or not known to the reference', () => {
    const reference = referenceWith({ law: { step: { size: 10, digest: 'a' } } });
    expect(lawChanges(reference, [code('a')])).toEqual([]);
    expect(lawChanges(reference, [code('b', 12)])).toEqual([
      'the machine code of step is not the latched one (10 → 12 bytes)',
    ]);
    expect(lawChanges(reference, [code('b')])[0]).toContain('(still 10 bytes)');
    expect(lawChanges(referenceWith(), [code('a')])).toEqual([
      'the latched reference knows no machine code of step',
    ]);
    const other = { name: 'init', size: 4, digest: 'c' };
    expect(lawChanges(reference, [code('b'), other, { ...other, name: 'act' }])).toEqual([
      'the machine code of step is not the latched one (still 10 bytes)',
      'the latched reference knows no machine code of init, act',
    ]);
    expect(lawChanges(undefined, [code('a')])).toHaveLength(1);
    expect(lawChanges(undefined, [])).toEqual([]);
  });

  it('comes with what changed in how the compilers were called', () => {
    expect(compilerChanges(['GNU C11 12.2.1 -Os -g'], ['GNU C11 13.1.0 -O2 -g'])).toBe(
      'gone 12.2.1 -Os, new 13.1.0 -O2',
    );
    expect(compilerChanges(['a'], ['a 1 2 3 4 5 6 7 8 9 10'])).toBe('new 1 2 3 4 5 6 7 8 and 2 more');
    expect(compilerChanges(['a -Os'], ['a -Os'])).toBe('');
  });

  it('needs a place where its digests are kept', () => {
    const withLaw = { ...spec, firmware: { ...spec.firmware!, law: [{ name: 'step', place }] } };
    expect(mergeFault(withLaw)).toBeUndefined();
    expect(mergeFault({ ...withLaw, merge: undefined })).toMatchObject({
      place,
      message: /needs a `merge:` section/,
    });
    expect(mergeFault({ ...spec, merge: undefined })).toBeUndefined();
  });
});

const since = (law: string[] = []): SinceLatched => ({
  ...{ path: 'r.json', reference: { reason: 'r', pawl: '0.1.0' }, coefficients: [], spec: [], law },
});
const value = (headroom: number) => ({ result: { kind: 'value', value: 1 } as const, headroom });
const compared = (before: number, after: number, maySlip = 0.05): Comparison => ({
  ...{ latched: value(before), rerun: value(before), today: value(after) },
  ...{ lost: before - after, maySlip, fromSpec: [], attribution: [] },
});
const never = { result: { kind: 'never', why: 'it never settles', left: 1 } as const, headroom: undefined };

function settled(verdict: Verdict, comparison: Comparison | undefined, law: string[] = []): Verdict {
  const task = { spec, reference: referenceWith(), since: since(law), compilers: '', today: '2026-12-01' };
  const comparisons = comparison ? [comparison] : [];
  const [one] = settleVerdicts([{ ...requirementRun(), verdict }] as RequirementRun[], {
    ...task,
    comparisons,
  });
  return one.verdict;
}

describe('the verdict against the reference', () => {
  const met: Verdict = { kind: 'met', headroom: 0.2 };
  const broken: Verdict = { kind: 'broken', headroom: -0.1, why: 'a plant breaks it' };

  it('has slipped where more was lost than a change may cost; just as much is allowed', () => {
    expect(settled(met, compared(0.75, 0.5, 0.25))).toEqual(met);
    expect(settled(met, compared(0.76, 0.5, 0.25))).toMatchObject({ kind: 'slipped', headroom: 0.2 });
    expect(settled(met, compared(0.1, 0.9))).toEqual(met);
  });

  it('tells the loss with as many digits as tell it from what is allowed', () => {
    const verdict = settled(met, compared(0.500001, 0.25, 0.25));
    expect(verdict.kind === 'slipped' && verdict.why).toContain('lost 25.0001 points');
  });

  it('has slipped where there is no number any more, and not where there was none before', () => {
    const lost = { ...compared(0.5, 0), today: never, lost: undefined };
    expect(settled(met, lost)).toMatchObject({ kind: 'slipped', why: /no number any more/ });
    expect(settled(met, { ...lost, rerun: never })).toEqual(met);
  });

  it('stays broken and stays unjudged', () => {
    expect(settled(broken, compared(0.9, -0.1))).toEqual(broken);
    expect(settled(broken, compared(0.9, -0.1), ['changed'])).toEqual(broken);
    const unjudged: Verdict = { kind: 'unjudged', why: 'no rest' };
    expect(settled(unjudged, undefined)).toEqual(unjudged);
  });

  it('is unjudged for another law, and where the latched numbers cannot be run', () => {
    expect(
      settled(met, compared(0.5, 0.5), ['the machine code of step is not the latched one']),
    ).toMatchObject({
      kind: 'unjudged',
      why: /machine code of step.*pawl latch/,
    });
    const cannot: Comparison = { ...compared(0.5, 0.5), rerun: undefined, why: 'a format does not fit' };
    expect(settled(met, cannot)).toMatchObject({ kind: 'unjudged', why: /a format does not fit/ });
  });

  it('stands by itself where there is no reference', () => {
    expect(settled(met, undefined)).toEqual(met);
  });
});

describe('a waiver', () => {
  const waiver: Waiver = { requirement: 'AZ-1', reason: 'new motor in March', until: '2027-03-01', place };
  const broken: Verdict = { kind: 'broken', headroom: -0.1, why: 'a plant breaks it' };
  const asBroken = latchedOf({ verdict: 'broken' });
  const of = (
    verdict: Verdict,
    latched = asBroken,
    comparison: Comparison | undefined = compared(-0.1, -0.1),
    today = '2026-12-01',
  ) => waived(waiver, verdict, latched, comparison, today);

  it('counts up to and with its last day', () => {
    expect(isInForce(waiver, '2027-02-28')).toBe(true);
    expect(isInForce(waiver, '2027-03-01')).toBe(true);
    expect(isInForce(waiver, '2027-03-02')).toBe(false);
    expect(of(broken, asBroken, compared(-0.1, -0.1), '2027-03-02')).toEqual({
      ...{ reason: waiver.reason, until: '2027-03-01', letsThrough: false, why: 'it expired on 2027-03-01' },
    });
  });

  it('lets through what was latched as broken, and got no worse than a change may cost', () => {
    expect(of(broken)).toEqual({ reason: waiver.reason, until: waiver.until, letsThrough: true });
    expect(of(broken, asBroken, compared(-0.1, -0.16)).why).toBe('it got worse than it was latched');
    expect(of(broken, asBroken, compared(-0.1, -0.14)).letsThrough).toBe(true);
    expect(of(broken, asBroken, { ...compared(0, 0), today: never, lost: undefined }).letsThrough).toBe(
      false,
    );
  });

  it('lets nothing else through', () => {
    expect(of(broken, latchedOf()).why).toBe('the latched reference does not hold it as broken');
    expect(waived(waiver, broken, undefined, undefined, '2026-12-01').letsThrough).toBe(false);
    expect(of(broken, asBroken, { ...compared(0, 0), rerun: undefined }).letsThrough).toBe(false);
    for (const kind of ['unjudged', 'slipped'] as const) {
      expect(of({ kind, headroom: 0, why: '' }).why).toMatch(`it is ${kind}`);
    }
  });
});
