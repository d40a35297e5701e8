import fc from 'fast-check';
import type { MeasureResult } from '../../src/measure/measure.js';
import type { Limit, Unit } from '../../src/spec/spec.js';
import type {
  Comparison,
  FinishedRun,
  JudgedPlant,
  RequirementRun,
  SinceLatched,
  SpecRun,
  Verdict,
  WaivedRequirement,
} from '../../src/verdict/run.js';
import { specRun, units } from './sample_run.js';

const name = fc.string({ unit: 'binary', maxLength: 40 });
const number = fc.double({ noNaN: true });
const finite = fc.double({ noNaN: true, noDefaultInfinity: true });
const positive = fc.double({ min: 1e-9, max: 1e9, noNaN: true });
const count = fc.nat({ max: 100_000 });
const headroom = fc.option(fc.double({ max: 1, noNaN: true }), { nil: undefined });

const unit: fc.Arbitrary<Unit> = fc.oneof(
  fc.constantFrom(...Object.values(units)),
  fc.record({
    text: name,
    scale: positive,
    dimension: fc.array(fc.integer({ min: -3, max: 3 }), { minLength: 8, maxLength: 8 }),
  }),
);

const result: fc.Arbitrary<MeasureResult> = fc.oneof(
  fc.record(
    { kind: fc.constant('value' as const), value: number, note: name },
    { requiredKeys: ['kind', 'value'] },
  ),
  fc.record({ kind: fc.constant('never' as const), why: name, left: number }),
  fc.record({ kind: fc.constant('overflow' as const), why: name, time: finite }),
  fc.record({ kind: fc.constant('unformed' as const), why: name }),
);

const limit: fc.Arbitrary<Limit> = fc.oneof(
  fc.record({ at_most: finite }),
  fc.record({ at_least: finite }),
  fc.record({ between: fc.tuple(finite, finite) }),
);

const verdict: fc.Arbitrary<Verdict> = fc.oneof(
  fc.record({ kind: fc.constant('met' as const), headroom }),
  fc.record({ kind: fc.constant('broken' as const), headroom, why: name }),
  fc.record({ kind: fc.constant('slipped' as const), headroom, why: name }),
  fc.record({ kind: fc.constant('unjudged' as const), why: name }),
);

const compared = fc.record({ result, headroom });
const none = { nil: undefined };

const comparison: fc.Arbitrary<Comparison> = fc
  .record({
    latched: fc.option(compared, none),
    rerun: fc.option(compared, none),
    today: compared,
    lost: headroom,
    maySlip: fc.constant(0.05),
    fromSpec: fc.array(name, { maxLength: 4 }),
    attribution: fc.array(fc.record({ name, share: finite, lost: finite }), { maxLength: 3 }),
    why: name,
    orders: fc.option(fc.nat(64), none),
  })
  .map(({ why, orders, ...others }) => ({
    ...others,
    ...(others.rerun === undefined && { why }),
    ...(orders !== undefined && { sampledOrders: orders }),
  }));

const waiver: fc.Arbitrary<WaivedRequirement> = fc.record(
  { reason: name, until: fc.constant('2027-03-01'), letsThrough: fc.boolean(), why: name },
  { requiredKeys: ['reason', 'until', 'letsThrough'] },
);

const numbers = fc.array(finite, { minLength: 1, maxLength: 6 });

const sinceLatched: fc.Arbitrary<SinceLatched> = fc.record({
  path: name,
  reference: fc.option(fc.record({ reason: name, pawl: name }), none),
  coefficients: fc.array(
    fc.oneof(
      numbers.map((values) => ({
        ...{ name: 'kp', latched: values, today: values.map((value) => value + 1) },
        elements: [...values.keys()],
      })),
      fc.record({
        name,
        latched: fc.option(numbers, none),
        today: fc.option(numbers, none),
        elements: fc.constant([]),
        unlike: name,
      }),
    ),
    { maxLength: 3 },
  ),
  spec: fc.array(name, { maxLength: 3 }),
  law: fc.array(name, { maxLength: 2 }),
});

const parameter = fc.record({
  name,
  value: finite,
  nominal: finite,
  unit,
  moved: fc.oneof(fc.constantFrom(-1, 0, 1), fc.double({ min: -1, max: 1, noNaN: true })),
});

const plant: fc.Arbitrary<JudgedPlant> = fc.record({
  origin: fc.constantFrom('nominal' as const, 'corner' as const, 'independent' as const),
  parameters: fc.array(parameter, { maxLength: 12 }),
  result,
  headroom,
});

const place = fc.record({ file: name, line: fc.nat(), column: fc.nat() });

/** A requirement with whatever may stand in it, however little sense it makes. */
export const anyRequirement: fc.Arbitrary<RequirementRun> = fc.record({
  name,
  place,
  measure: name,
  signals: fc.dictionary(name, name, { maxKeys: 3 }),
  scenario: fc.option(name, { nil: undefined }),
  reason: fc.option(name, { nil: undefined }),
  limit,
  unit,
  inDecibels: fc.boolean(),
  holdsFor: fc.oneof(
    fc.constantFrom('nominal' as const, 'all' as const),
    fc.double({ min: 0.01, max: 0.99, noNaN: true }),
  ),
  verdict,
  evidence: fc.oneof(
    fc.constant({ kind: 'nominal_only' as const }),
    fc.record({ kind: fc.constant('tried' as const), plants: count }),
  ),
  nominal: plant,
  worst: plant,
  counts: fc.record({ tried: count, broken: count, unjudged: count }),
  claim: fc.option(name, { nil: undefined }),
  comparison: fc.option(comparison, none),
  waiver: fc.option(waiver, none),
});

const anySpec: fc.Arbitrary<SpecRun> = fc
  .record({
    file: name,
    loop: name,
    seed: fc.integer(),
    requirements: fc.array(anyRequirement, { maxLength: 5 }),
    merge: fc.option(name, { nil: undefined }),
    sinceLatched: fc.option(sinceLatched, none),
    seconds: fc.double({ min: 0, max: 1e6, noNaN: true }),
    hasImage: fc.boolean(),
  })
  .map(({ hasImage, ...changes }) =>
    specRun(hasImage ? changes : { ...changes, provenance: undefined, coefficients: [] }),
  );

/** A run of a few specs with whatever may stand in them. */
export const anyRun: fc.Arbitrary<FinishedRun> = fc.record({
  version: fc.constant('0.1.0'),
  specs: fc.array(anySpec, { maxLength: 3 }),
});

/** Specs that could not be run, with whatever messages. */
export const anyFaults = fc.array(fc.record({ specFile: name, messages: fc.array(name, { maxLength: 4 }) }), {
  maxLength: 3,
});
