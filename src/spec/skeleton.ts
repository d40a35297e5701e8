import { z } from 'zod';
import { build, firmware } from './firmware_skeleton.js';
import { overflows, roundings } from './fixed_formats.js';
import { requirement } from './requirement_skeleton.js';
import { bound, mappingOf, named, text, unit } from './skeleton_slots.js';
import type {
  BlockDescription,
  Room,
  SettingDescription,
  ShapeDescription,
  Vocabulary,
} from './vocabulary.js';

const range = z
  .tuple([text('a lower bound'), text('an upper bound')])
  .describe('two bounds in brackets, such as [-1, 1]')
  .optional();
const expression = text('an expression').optional();

/** The shape of a spec and of a file that it includes. */
export interface Skeletons {
  spec: z.ZodType;
  part: z.ZodType;
}

/** Schemas are slow to make and quick to use; a vocabulary does not change. */
const made = new WeakMap<Vocabulary, Skeletons>();

/** The shapes: sections, keys and which are needed; what stands in the slots is read afterwards. */
export function skeletonsOf(vocabulary: Vocabulary): Skeletons {
  const skeletons = made.get(vocabulary) ?? newSkeletons(vocabulary);
  made.set(vocabulary, skeletons);
  return skeletons;
}

function newSkeletons(vocabulary: Vocabulary): Skeletons {
  const spec = newSkeleton(vocabulary);
  const { include, constants, parameters, inputs, plant, sensors, actuators } = spec.shape;
  const part = z
    .strictObject({ include, constants, parameters, inputs, plant, sensors, actuators })
    .describe('a mapping of sections, such as parameters and plant');
  return { spec, part };
}

function newSkeleton(vocabulary: Vocabulary) {
  return z
    .strictObject({
      pawl: text('the format version, 1'),
      loop: text('a title of the loop in plain words'),
      include: z
        .array(text('the path of a file, relative to this one'))
        .describe('a list of paths, such as [shared/motor.yaml]')
        .optional(),
      firmware: firmware.optional(),
      builds: named(build, 'builds'),
      constants: z
        .record(z.string(), text('a quantity such as 9.81 m/s^2'))
        .describe(mappingOf('constants'))
        .optional(),
      parameters: named(parameter, 'parameters'),
      inputs: named(input, 'inputs'),
      plant: named(signal(vocabulary, 'plant'), 'signals'),
      sensors: named(sensor, 'sensors'),
      controllers: named(controller(vocabulary), 'controllers'),
      actuators: named(actuator, 'actuators'),
      scenarios: named(scenario(vocabulary), 'scenarios'),
      requirements: z.array(requirement(vocabulary)).min(1).describe('a list of at least one requirement'),
      perturbation: perturbation.optional(),
      merge: merge.optional(),
    })
    .describe('a mapping of sections: pawl, loop, firmware, plant, controllers, requirements …');
}

const parameter = z
  .strictObject({
    nominal: text('a quantity such as 38 kg*m^2').optional(),
    spread: text('a share such as 20 %, or a quantity').optional(),
    from: text('the lower bound').optional(),
    to: text('the upper bound').optional(),
    values: z
      .array(text('a quantity'))
      .min(1)
      .describe('a list of the values that it can take, such as [2 mm, 3 mm]')
      .optional(),
    distribution: text('uniform, normal, triangular or log_uniform').optional(),
    deviation: text('the standard deviation of a normal distribution').optional(),
    value: text('an expression of other parameters that it follows from').optional(),
    unit,
  })
  .describe('{ nominal: …, spread: … } or { nominal: …, from: …, to: … }');

const input = z
  .strictObject({ unit, rest: text('the value before anything happens').optional() })
  .describe('{ unit: … }');

const lists = {
  signals: (meaning: string) => z.union([text(meaning), z.array(text('a signal')).min(1)]),
  estimates: (meaning: string) => z.union([text(meaning), z.array(text('the name of a signal')).min(1)]),
  matrix: (meaning: string) =>
    z.union([text(meaning), z.array(z.union([text('a number'), z.array(text('a number')).min(1)])).min(1)]),
};

function settingValue({ kind, meaning }: SettingDescription) {
  return kind in lists ? lists[kind as keyof typeof lists](meaning).describe(meaning) : text(meaning);
}

function blockValue(block: BlockDescription) {
  const whole = block.settings.find((setting) => setting.name === (block.main ?? block.key));
  const direct = whole === undefined ? text(`the settings of ${block.key}`) : settingValue(whole);
  if (whole !== undefined && block.settings.length === 1) return direct;
  const settings = Object.fromEntries(
    block.settings.map((setting) => {
      const slot = settingValue(setting);
      return [setting.name, setting.optional || setting === whole ? slot.optional() : slot];
    }),
  );
  const needed = block.settings.filter((setting) => !setting.optional).map((setting) => `${setting.name}: …`);
  const mapping = z
    .strictObject(settings)
    .describe(`a mapping of its settings, such as { ${needed.join(', ')} }`);
  return whole === undefined ? mapping : z.union([direct, mapping]).describe(whole.meaning);
}

const pair = z
  .strictObject({ target: text('the wanted value'), measurement: text('the measured value') })
  .describe('{ target: …, measurement: … }');

function signal(vocabulary: Vocabulary, room: Room) {
  const blocks = vocabulary.blocks.filter((block) => block.rooms.includes(room));
  const defining = Object.fromEntries(blocks.map((block) => [block.key, blockValue(block).optional()]));
  return z
    .strictObject({
      ...defining,
      of: z
        .union([expression.unwrap(), pair])
        .describe('an expression, or { target: …, measurement: … }')
        .optional(),
      unit,
      gain: expression,
      range,
      slew: expression,
      start: text('the state at the start').optional(),
    })
    .describe('a mapping with one defining key, such as { value: …, unit: … }');
}

const sensor = z
  .strictObject({
    of: text('what it measures, such as a plant signal'),
    unit,
    gain: expression,
    offset: expression,
    filter: text('a time constant or a corner frequency').optional(),
    drift: text('a rate at which the offset drifts').optional(),
    dead_time: text('a time').optional(),
    noise: z
      .union([
        text('a standard deviation'),
        z.strictObject({
          deviation: text('a standard deviation'),
          corner: text('a frequency above which it is weaker').optional(),
        }),
      ])
      .describe('a standard deviation, or { deviation: …, corner: … }')
      .optional(),
    range,
    quantum: text('the size of one step of the reading').optional(),
    drops: text('a share of lost samples such as 2 %').optional(),
    stuck: z
      .strictObject({ from: text('a time'), to: text('a time') })
      .describe('{ from: …, to: … }')
      .optional(),
  })
  .describe('{ of: …, unit: … }');

const arithmetic = z
  .union([
    text('float64, float32 or float32_fused'),
    z.strictObject({
      format: text('a format such as Q1.15 or int32'),
      rounding: text(roundings.join(', ')),
      overflow: text(overflows.join(' or ')),
      accumulator: text('a width such as 64 bit').optional(),
    }),
  ])
  .describe('float64, float32 or float32_fused, or { format: …, rounding: …, overflow: … }');

function controller(vocabulary: Vocabulary) {
  return z
    .strictObject({
      every: text('the sampling period, such as 1 ms or 1 kHz'),
      phase: text('a time').optional(),
      delay: text('a time').optional(),
      jitter: text('a time').optional(),
      arithmetic: arithmetic.optional(),
      signals: z.record(z.string(), signal(vocabulary, 'controller')).describe(mappingOf('signals')),
    })
    .describe('{ every: …, signals: … }');
}

const actuator = z
  .strictObject({
    of: text('a controller signal'),
    unit,
    resolution: expression,
    dead_band: text('half the width of the band').optional(),
    range,
    slew: expression,
    effect: text('a share of the effect that is left').optional(),
    update: text('start or middle').optional(),
    pwm: text('mean or ripple').optional(),
  })
  .describe('{ of: … }');

function shapeValue({ key, settings, meaning }: ShapeDescription) {
  const [first] = settings;
  if (settings.length === 1 && first.name === key)
    return first.kind === 'points' ? bound : text(first.meaning).describe(meaning);
  const slots = settings.map(({ name, optional, meaning: what }) => [
    name,
    optional ? text(what).optional() : text(what),
  ]);
  return z.strictObject(Object.fromEntries(slots)).describe(meaning);
}

function scenario(vocabulary: Vocabulary) {
  const shapes = Object.fromEntries(
    vocabulary.shapes.map((shape) => [shape.key, shapeValue(shape).optional()]),
  );
  const event = z
    .strictObject({
      ...shapes,
      at: text('a time such as 0.2 s'),
      for: text('a time such as 0.6 s').optional(),
    })
    .describe('an event such as { step: 1 V, at: 0.2 s }');
  return z
    .strictObject({
      lasts: text('a time such as 4 s'),
      inputs: z
        .record(
          z.string(),
          z.union([event, z.array(event)]).describe('an event such as { step: 1 V, at: 0.2 s }, or a list'),
        )
        .describe(mappingOf('events'))
        .optional(),
      start: z
        .union([text('rest or zero'), z.record(z.string(), text('a value'))])
        .describe('rest, zero, or states such as { speed: 3 rad/s }')
        .optional(),
    })
    .describe('{ lasts: …, inputs: … }');
}

const perturbation = z
  .strictObject({
    plants: text('a whole number').optional(),
    seed: text('a whole number').optional(),
    confidence: text('a share such as 95 %').optional(),
    search: text('a whole number').optional(),
    only_where: z
      .union([text('a condition on parameters'), z.array(text('a condition on parameters'))])
      .describe('a condition such as inertia > mass * (0.1 m^2), or a list of them')
      .optional(),
    correlations: z
      .array(
        z
          .strictObject({
            of: text('the name of a parameter'),
            with: text('the name of a parameter'),
            coefficient: text('a number between -1 and 1'),
          })
          .describe('{ of: …, with: …, coefficient: … }'),
      )
      .describe('a list of { of: …, with: …, coefficient: … }')
      .optional(),
  })
  .describe('{ plants: …, seed: …, confidence: … }');

const waiver = z
  .strictObject({
    requirement: text('the name of a requirement'),
    reason: text('plain words'),
    until: text('a date such as 2027-03-01'),
  })
  .describe('{ requirement: …, reason: …, until: 2027-03-01 }');

const merge = z
  .strictObject({
    reference: text('the path of the latched reference, relative to this file'),
    may_slip: text('a share such as 5 %'),
    waivers: z
      .array(waiver)
      .describe('a list of { requirement: …, reason: …, until: 2027-03-01 }')
      .optional(),
  })
  .describe('{ reference: …, may_slip: … }');
