import type { Expression, Place, SignalDefinition } from '../spec/spec.js';
import type { BlockUse, Workshop } from './blocks/block.js';
import { blocks } from './blocks/index.js';
import type { Node } from './graph.js';
import { LoopError } from './loop.js';
import { lower, type Surroundings } from './lower.js';
import { placed } from './number_rules.js';
import type { Parts } from './parts.js';
import { rateLimited } from './rate_limiter.js';
import { slewed } from './slew.js';
import { startingWorkshop } from './starting_workshop.js';

const blockByKey = new Map(
  blocks.flatMap((block) =>
    block.description.rooms.map((room) => [`${room} ${block.description.key}`, block]),
  ),
);

/**
 * Expands one signal's block into equations and returns the signal's value, kept in its range.
 * @throws {LoopError} where the block cannot be made of what the spec and the build give.
 */
export function expandBlock(
  definition: SignalDefinition,
  around: Surroundings,
  workshop: Workshop,
  parts: Parts,
): Node {
  const { arithmetic } = around;
  const placedWorkshop: Workshop = {
    ...workshop,
    addMemory: (name, next, start) => workshop.addMemory(name, () => placed(definition.place, next), start),
  };
  return placed(definition.place, () =>
    arithmetic.keep(expanded(definition, around, startingWorkshop(definition, placedWorkshop, parts), parts)),
  );
}

function expanded(
  definition: SignalDefinition,
  around: Surroundings,
  workshop: Workshop,
  parts: Parts,
): Node {
  const block = blockByKey.get(`${workshop.room} ${definition.block}`)!;
  const use = blockUse(definition, around, parts);
  const bounded = (node: Node): Node => limited(node, definition.range, around);
  const value = block.expand(use, workshop);
  const node = block.keepsRange ? value : bounded(value);
  if (!definition.slew) return node;
  if (workshop.room === 'controller') {
    return slewed(definition.name, node, lower(definition.slew, around), bounded, workshop, parts);
  }
  return block.keepsSlew ? node : rateLimited(definition.name, node, () => use.slew()!, workshop, parts);
}

/** A value kept inside a range, where there is one. */
export function limited(value: Node, range: SignalDefinition['range'], around: Surroundings): Node {
  if (!range) return value;
  return around.arithmetic.apply('limit', value, lower(range.low, around), lower(range.high, around));
}

function blockUse(definition: SignalDefinition, around: Surroundings, parts: Parts): BlockUse {
  const { name, place, settings, range, pair } = definition;
  const expression = (of: Expression | undefined): Node | undefined => of && lower(of, around);
  const numbers = (of: { name: string; place: Place }): Node[] =>
    parts
      .numbersOf(of.name, of.place)
      .map((_, index) => parts.coefficient({ ...of, index }, around.arithmetic));
  const inDoublePrecision: Surroundings = {
    ...around,
    arithmetic: parts.plain,
    name: (use) =>
      use.role === 'coefficient'
        ? parts.graph.number(parts.numberOf(use.name, use.index, use.place))
        : around.name(use),
  };
  return {
    name,
    place,
    input: () => expression(definition.of)!,
    gain: () => expression(definition.gain) ?? around.arithmetic.number(1),
    setting: (key) => {
      const setting = settings[key];
      return setting?.kind === 'expression' ? expression(setting.expression) : undefined;
    },
    has: (key) => Object.hasOwn(settings, key),
    word: (key) => {
      const setting = settings[key];
      return setting?.kind === 'word' ? setting.word : undefined;
    },
    coefficients: (key) => {
      const setting = settings[key];
      return setting?.kind === 'coefficients' ? numbers(setting) : [];
    },
    design: (key) => {
      const setting = settings[key];
      return setting?.kind === 'expression' ? lower(setting.expression, inDoublePrecision) : undefined;
    },
    signals: (key) => {
      const setting = settings[key];
      return setting?.kind === 'rows' ? setting.rows.flat().map((one) => () => lower(one, around)) : [];
    },
    names: (key) => {
      const setting = settings[key];
      return setting?.kind === 'names' ? setting.names : [];
    },
    matrix: (key, columns) => {
      const setting = settings[key];
      if (setting?.kind === 'rows') return setting.rows.map((row) => row.map((one) => lower(one, around)));
      if (setting?.kind !== 'coefficients') return undefined;
      return rowsOf(key, numbers(setting), columns, setting.place);
    },
    pair: pair && {
      target: () => lower(pair.target, around),
      measurement: () => lower(pair.measurement, around),
    },
    slew: () => expression(definition.slew),
    range: range && { low: lower(range.low, around), high: lower(range.high, around) },
  };
}

function rowsOf(key: string, numbers: Node[], columns: number | undefined, place: Place): Node[][] {
  if (columns === undefined) return [numbers];
  if (numbers.length === 0 || numbers.length % columns !== 0) {
    throw new LoopError(
      `'${key}' got ${numbers.length} coefficients, expected whole rows of ${columns}`,
      place,
    );
  }
  return Array.from({ length: numbers.length / columns }, (_, row) =>
    numbers.slice(row * columns, (row + 1) * columns),
  );
}
