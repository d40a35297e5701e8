import type { Expression, SignalDefinition } from '../spec/spec.js';
import type { BlockUse, Workshop } from './blocks/block.js';
import { blocks } from './blocks/index.js';
import type { Node } from './graph.js';
import { LoopError } from './loop.js';
import { lower, type Surroundings } from './lower.js';
import type { Parts } from './parts.js';

const blockByKey = new Map(
  blocks.flatMap((block) =>
    block.description.rooms.map((room) => [`${room} ${block.description.key}`, block]),
  ),
);

/** Expands one signal's block into equations and returns the signal's value, kept in its range. */
export function expandBlock(
  definition: SignalDefinition,
  around: Surroundings,
  workshop: Workshop,
  parts: Parts,
): Node {
  const block = blockByKey.get(`${workshop.room} ${definition.block}`)!;
  const use = blockUse(definition, around, parts);
  const node = block.expand(use, workshop);
  if (definition.slew) {
    throw new LoopError(`'slew' of '${definition.name}' is not available yet`, definition.place);
  }
  return block.keepsRange ? node : limited(node, definition.range, around);
}

/** A value kept inside a range, where there is one. */
export function limited(value: Node, range: SignalDefinition['range'], around: Surroundings): Node {
  if (!range) return value;
  return around.arithmetic.apply('limit', value, lower(range.low, around), lower(range.high, around));
}

function blockUse(definition: SignalDefinition, around: Surroundings, parts: Parts): BlockUse {
  const { name, place, settings, range } = definition;
  const expression = (of: Expression | undefined): Node | undefined => of && lower(of, around);
  return {
    name,
    place,
    input: () => expression(definition.of)!,
    gain: () => expression(definition.gain) ?? around.arithmetic.number(1),
    setting: (key) => {
      const setting = settings[key];
      return setting?.kind === 'expression' ? expression(setting.expression) : undefined;
    },
    word: (key) => {
      const setting = settings[key];
      return setting?.kind === 'word' ? setting.word : undefined;
    },
    coefficients: (key) => {
      const setting = settings[key];
      if (setting?.kind !== 'coefficients') return [];
      return parts.numbersOf(setting.name, setting.place).map((value) => around.arithmetic.number(value));
    },
    range: range && { low: lower(range.low, around), high: lower(range.high, around) },
  };
}
